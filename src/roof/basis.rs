//! A roof as one rule set counts it: its own rain, its own share of the walls, with or without the primary drains.

use crate::units::{Area, Flow, Intensity, Length, Time};

use super::Case;

/// The areas of a roof as a rule set counts them.
#[derive(Clone, Debug, PartialEq)]
pub struct Basis {
    /// The case of the set: the layout as drawn, under what the set counts.
    pub case: Case,
    /// Each area, in their order.
    pub areas: Vec<AreaBasis>,
}

/// What a set counts by and is not given, so that something else stands in for it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct StandsIn {
    /// What is not given.
    pub missing: &'static str,
    /// Whether the demand may be more than what is counted.
    pub may_be_more: bool,
    /// Whether it may be less.
    pub may_be_less: bool,
}

impl StandsIn {
    /// Both, the first of them told.
    #[must_use]
    pub fn with(self, other: Self) -> Self {
        Self {
            missing: self.missing,
            may_be_more: self.may_be_more || other.may_be_more,
            may_be_less: self.may_be_less || other.may_be_less,
        }
    }
}

/// An area as a rule set counts it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct AreaBasis {
    /// Intensity of the rain, climate counted in.
    pub intensity: Intensity,
    /// How long it rains so hard, where that is stated.
    pub duration: Option<Time>,
    /// Wall that counts in full.
    pub wall: Area,
    /// The rain on roof and walls and what runs onto it.
    pub flow: Flow,
    /// What the primary drains take off that flow.
    pub credited: Flow,
    /// What the overflow must pass at least, however little is left.
    pub least: Flow,
    /// Greatest water depth that the set allows; none where it says nothing.
    pub depth: Option<Length>,
    /// Distance that it asks for from the water up to the top of every closed opening.
    pub freeboard: Option<Length>,
    /// What of its demand is not known.
    pub stands_in: Option<StandsIn>,
}

impl AreaBasis {
    /// Flow that the overflow must pass: what comes, less what is credited, no less than the set asks for.
    pub fn demand(&self) -> Flow {
        self.demand_with(Flow::ZERO, 1.0)
    }

    /// The same with more flow from the area itself, and so many times the rain.
    pub fn demand_with(&self, more: Flow, times: f64) -> Flow {
        ((self.flow + more) * times - self.credited).max(self.least)
    }
}
