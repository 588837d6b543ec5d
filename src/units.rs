//! Quantities: a number with a unit is a type, SI inside.
//!
//! Units are read at the edge of the program (their `FromStr`) and shown at its edge (`report`); everything between computes in
//! metres, cubic metres a second and pascals. A length typed as `"6 in"` is kept on a whole number of nanometres, so that
//! `"6 in"`, `"152.4 mm"` and `"0.5 ft"` are the same [`Length`] to the last bit; widths are added and compared as whole
//! nanometres ([`Length::nm`]) and never as rounded sums.

use std::fmt;
use std::ops::{Add, Mul, Neg, Sub};

mod read;

pub use read::{Dimension, Fault, Priced, read_price, would_pass};

/// Metres in an inch: exact by definition.
pub const METRES_PER_INCH: f64 = 0.0254;
/// Metres in a foot: exact by definition.
pub const METRES_PER_FOOT: f64 = 12.0 * METRES_PER_INCH;
/// Cubic metres in a US gallon: 231 cubic inches, exact by definition.
pub const CUBIC_METRES_PER_GALLON: f64 = 231.0 * METRES_PER_INCH * METRES_PER_INCH * METRES_PER_INCH;
/// Newtons in a pound-force: 0.45359237 kg at 9.80665 m/s2, exact by definition.
pub const NEWTONS_PER_POUND: f64 = 0.453_592_37 * 9.806_65;

const PASCALS_PER_PSF: f64 = NEWTONS_PER_POUND / (METRES_PER_FOOT * METRES_PER_FOOT);
const M3_S_PER_GPM: f64 = CUBIC_METRES_PER_GALLON / 60.0;

/// The units a report speaks in, whatever units its input used.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum System {
    /// Inches, feet, gallons a minute, pounds a square foot.
    Us,
    /// Millimetres, metres, litres a second, kilopascals.
    Si,
}

/// Declares a quantity: its type, its SI accessor pair, its sums and scalings, and comparison within a tolerance.
macro_rules! quantity {
    ($(#[$doc:meta])* $name:ident, $from:ident, $get:ident, $unit:literal) => {
        $(#[$doc])*
        #[derive(Clone, Copy, Debug, Default, PartialEq, PartialOrd)]
        #[repr(transparent)]
        pub struct $name(f64);

        impl $name {
            /// None of it.
            pub const ZERO: Self = Self(0.0);

            #[doc = concat!("From a value in ", $unit, ".")]
            pub const fn $from(value: f64) -> Self {
                Self(value)
            }

            #[doc = concat!("The value in ", $unit, ".")]
            pub const fn $get(self) -> f64 {
                self.0
            }

            /// The lesser of two.
            #[must_use]
            pub const fn min(self, other: Self) -> Self {
                Self(self.0.min(other.0))
            }

            /// The greater of two.
            #[must_use]
            pub const fn max(self, other: Self) -> Self {
                Self(self.0.max(other.0))
            }
        }

        impl Add for $name {
            type Output = Self;
            fn add(self, other: Self) -> Self {
                Self(self.0 + other.0)
            }
        }

        impl Sub for $name {
            type Output = Self;
            fn sub(self, other: Self) -> Self {
                Self(self.0 - other.0)
            }
        }

        impl Neg for $name {
            type Output = Self;
            fn neg(self) -> Self {
                Self(-self.0)
            }
        }

        impl Mul<f64> for $name {
            type Output = Self;
            fn mul(self, factor: f64) -> Self {
                Self(self.0 * factor)
            }
        }

        impl Mul<$name> for f64 {
            type Output = $name;
            fn mul(self, quantity: $name) -> $name {
                quantity * self
            }
        }

        impl std::ops::Div for $name {
            type Output = f64;
            fn div(self, other: Self) -> f64 {
                self.0 / other.0
            }
        }

        impl std::iter::Sum for $name {
            fn sum<I: Iterator<Item = Self>>(parts: I) -> Self {
                Self(parts.map(|part| part.0).sum())
            }
        }

        impl approx::AbsDiffEq for $name {
            type Epsilon = f64;
            fn default_epsilon() -> f64 {
                f64::default_epsilon()
            }
            fn abs_diff_eq(&self, other: &Self, epsilon: f64) -> bool {
                self.0.abs_diff_eq(&other.0, epsilon)
            }
        }

        impl approx::RelativeEq for $name {
            fn default_max_relative() -> f64 {
                f64::default_max_relative()
            }
            fn relative_eq(&self, other: &Self, epsilon: f64, max_relative: f64) -> bool {
                self.0.relative_eq(&other.0, epsilon, max_relative)
            }
        }
    };
}

quantity! {
    /// A length, a depth or a height, in metres; a difference of two may be negative.
    Length, from_m, m, "metres"
}
quantity! {
    /// An area, in square metres.
    Area, from_m2, m2, "square metres"
}
quantity! {
    /// A volume flow, in cubic metres a second.
    Flow, from_m3_per_s, m3_per_s, "cubic metres a second"
}
quantity! {
    /// A rain intensity, in metres a second.
    Intensity, from_m_per_s, m_per_s, "metres a second"
}
quantity! {
    /// A load on a surface, in pascals.
    Load, from_pa, pa, "pascals"
}
quantity! {
    /// A span of time, in seconds.
    Time, from_s, s, "seconds"
}
quantity! {
    /// A return period, in years.
    ReturnPeriod, from_years, years, "years"
}
quantity! {
    /// A volume of water, in cubic metres.
    Volume, from_m3, m3, "cubic metres"
}
quantity! {
    /// How much a roof sags under a load, in metres a pascal.
    Flexibility, from_m_per_pa, m_per_pa, "metres a pascal"
}
quantity! {
    /// The second moment of area of a member, in metres to the fourth.
    Inertia, from_m4, m4, "metres to the fourth"
}
quantity! {
    /// The second moment of area of a deck for each unit of its width, in metres to the fourth a metre.
    DeckInertia, from_m4_per_m, m4_per_m, "metres to the fourth a metre"
}

impl Length {
    /// A length written in code, in inches.
    pub const fn inches(value: f64) -> Self {
        Self::from_m(value * METRES_PER_INCH)
    }

    /// A length written in code, in millimetres.
    pub const fn mm(value: f64) -> Self {
        Self::from_m(value / 1000.0)
    }

    /// The value in inches.
    pub const fn to_inches(self) -> f64 {
        self.m() / METRES_PER_INCH
    }

    /// The nearest whole number of nanometres; every length that can be typed is one.
    pub const fn nm(self) -> i64 {
        (self.m() * 1e9).round() as i64
    }

    /// From a whole number of nanometres; one division, so that equal counts give equal lengths.
    pub const fn from_nm(count: i64) -> Self {
        Self::from_m(count as f64 / 1e9)
    }

    /// This length on its nearest nanometre, where [`Length::nm`] can hold it.
    #[must_use]
    pub(crate) const fn on_grid(self) -> Self {
        if self.m().abs() < 1e9 { Self::from_nm(self.nm()) } else { self }
    }
}

impl Flow {
    /// A flow written in code, in US gallons a minute.
    pub const fn gpm(value: f64) -> Self {
        Self::from_m3_per_s(value * M3_S_PER_GPM)
    }

    /// The value in US gallons a minute.
    pub const fn to_gpm(self) -> f64 {
        self.m3_per_s() / M3_S_PER_GPM
    }
}

impl Load {
    /// A load written in code, in pounds a square foot.
    pub const fn psf(value: f64) -> Self {
        Self::from_pa(value * PASCALS_PER_PSF)
    }

    /// The value in pounds a square foot.
    pub const fn to_psf(self) -> f64 {
        self.pa() / PASCALS_PER_PSF
    }
}

impl Area {
    /// The value in square feet.
    pub const fn to_ft2(self) -> f64 {
        self.m2() / (METRES_PER_FOOT * METRES_PER_FOOT)
    }
}

impl Flexibility {
    /// The value in inches for each pound a square foot.
    pub const fn to_inches_per_psf(self) -> f64 {
        self.m_per_pa() * PASCALS_PER_PSF / METRES_PER_INCH
    }
}

impl Inertia {
    /// The value in inches to the fourth.
    pub const fn to_in4(self) -> f64 {
        self.m4() / (METRES_PER_INCH * METRES_PER_INCH * METRES_PER_INCH * METRES_PER_INCH)
    }
}

impl DeckInertia {
    /// The value in inches to the fourth for each foot.
    pub const fn to_in4_per_ft(self) -> f64 {
        Inertia::from_m4(self.m4_per_m() * METRES_PER_FOOT).to_in4()
    }
}

impl Intensity {
    /// The value in inches an hour.
    pub const fn to_inches_per_hour(self) -> f64 {
        self.m_per_s() * 3600.0 / METRES_PER_INCH
    }
}

impl Mul<Area> for Intensity {
    type Output = Flow;
    fn mul(self, area: Area) -> Flow {
        Flow::from_m3_per_s(self.m_per_s() * area.m2())
    }
}

/// An amount of money in whole millionths, so that sums are exact and equal costs compare equal.
///
/// It has no currency: a catalog's prices and a report's costs are in the same unstated one.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Money(i64);

impl Money {
    /// The nearest whole millionth to an amount.
    pub const fn nearest(amount: f64) -> Self {
        Self((amount * 1e6).round() as i64)
    }

    /// The amount as a number.
    pub const fn amount(self) -> f64 {
        self.0 as f64 / 1e6
    }

    /// From whole millionths.
    pub const fn from_millionths(count: i64) -> Self {
        Self(count)
    }

    /// The amount in whole millionths.
    pub const fn millionths(self) -> i64 {
        self.0
    }
}

impl Mul<u32> for Money {
    type Output = Self;
    fn mul(self, count: u32) -> Self {
        Self(self.0.saturating_mul(i64::from(count)))
    }
}

impl std::iter::Sum for Money {
    fn sum<I: Iterator<Item = Self>>(parts: I) -> Self {
        Self(parts.fold(0, |sum, part| sum.saturating_add(part.0)))
    }
}

impl fmt::Display for System {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Us => "us",
            Self::Si => "si",
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// Factors beside their published values. Source: NIST SP 811 (2008), appendix B.8, from memory.
    #[test]
    fn factors_agree_with_the_published_ones() {
        assert_relative_eq!(Flow::gpm(1.0).m3_per_s(), 6.309_020e-5, max_relative = 1e-6);
        assert_relative_eq!(Load::psf(1.0).pa(), 47.880_26, max_relative = 1e-6);
        assert_relative_eq!(NEWTONS_PER_POUND, 4.448_221_615_260_5, max_relative = 1e-14);
    }

    #[test]
    fn one_length_typed_three_ways_is_one_length() {
        let read = |text: &str| text.parse::<Length>().unwrap();
        assert_eq!(read("6 in"), read("152.4 mm"));
        assert_eq!(read("6 in"), read("0.5 ft"));
        assert_eq!(read("6 in").nm(), 152_400_000);
    }

    #[test]
    fn every_quarter_inch_survives_the_way_there_and_back() {
        for quarters in 0..4000_i64 {
            let length = Length::from_nm(quarters * 6_350_000);
            assert_eq!(length.nm(), quarters * 6_350_000);
            assert_relative_eq!(length.to_inches(), quarters as f64 / 4.0, max_relative = 1e-12);
        }
    }
}
