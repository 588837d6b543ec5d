//! The numbers that rules speak of.

use crate::units::{Area, Flow, Intensity, Length, Load, ReturnPeriod, Time};

/// A quantity, a count, a factor or a word.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Amount {
    /// A length.
    Length(Length),
    /// An area.
    Area(Area),
    /// A flow.
    Flow(Flow),
    /// An intensity of rain.
    Intensity(Intensity),
    /// A load.
    Load(Load),
    /// A duration.
    Time(Time),
    /// How often a storm is met or passed.
    ReturnPeriod(ReturnPeriod),
    /// How many.
    Count(u32),
    /// A factor.
    Times(f64),
    /// A fall, as a ratio.
    Slope(f64),
    /// Yes or no.
    Yes(bool),
    /// One of a few words.
    Word(&'static str),
}

/// Part of a value that is taken for rounding.
const ROUNDING: f64 = 1e-9;

impl Amount {
    /// It in SI with its unit; none for a word.
    pub fn si(self) -> Option<(f64, &'static str)> {
        Some(match self {
            Self::Length(length) => (length.m(), "m"),
            Self::Area(area) => (area.m2(), "m2"),
            Self::Flow(flow) => (flow.m3_per_s(), "m3/s"),
            Self::Intensity(intensity) => (intensity.m_per_s(), "m/s"),
            Self::Load(load) => (load.pa(), "Pa"),
            Self::Time(time) => (time.s(), "s"),
            Self::ReturnPeriod(period) => (period.years(), "yr"),
            Self::Count(count) => (f64::from(count), "1"),
            Self::Times(factor) | Self::Slope(factor) => (factor, "1"),
            Self::Yes(_) | Self::Word(_) => return None,
        })
    }

    /// Whether it is at least another, to rounding; of what cannot be compared it is not.
    pub fn reaches(self, other: Self) -> bool {
        match (self.si(), other.si()) {
            (Some((here, unit)), Some((there, other))) => unit == other && here >= there - there.abs() * ROUNDING,
            _ => false,
        }
    }
}
