//! What a rule can ask: its name, its words, its number and terms, and what it measures.

use crate::device::Size;
use crate::roof::{AreaBasis, Catchment};
use crate::units::Length;

use super::amount::Amount;
use super::set::Rule;

/// One kind of rule.
#[derive(Debug)]
pub struct Kind {
    /// Its name in files.
    pub name: &'static str,
    /// What its number is of, in words that the number follows: `clear width of every opening`.
    pub says: &'static str,
    /// Which way its number may count.
    pub bounds: Bounds,
    /// What its number is.
    pub number: Number,
    /// What else it takes.
    pub terms: &'static [Term],
    /// What it does.
    pub role: Role,
}

impl PartialEq for Kind {
    fn eq(&self, other: &Self) -> bool {
        self.name == other.name
    }
}

/// Which way the number of a kind may count.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Bounds {
    /// It has no number.
    None,
    /// `at_least` alone.
    Least,
    /// `at_most` alone.
    Most,
    /// Either.
    Either,
}

impl Bounds {
    /// The keys under which the number may stand.
    pub fn keys(self) -> &'static [&'static str] {
        match self {
            Self::None => &[],
            Self::Least => &["at_least"],
            Self::Most => &["at_most"],
            Self::Either => &["at_least", "at_most"],
        }
    }
}

/// What the number of a kind is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Number {
    /// A length above zero: one of zero would ask nothing, or what no roof has.
    Length,
    /// A height, of which zero asks something too: to stand no lower, or to leave nothing free.
    Height,
    /// How many.
    Count,
    /// A factor.
    Times,
    /// A fall.
    Slope,
}

impl Number {
    /// Its name in documents.
    pub fn name(self) -> &'static str {
        match self {
            Self::Length | Self::Height => "length",
            Self::Count => "count",
            Self::Times => "factor",
            Self::Slope => "slope",
        }
    }

    /// One as a file gives it.
    pub fn example(self) -> &'static str {
        match self {
            Self::Length | Self::Height => "\"4 in\"",
            Self::Count => "2",
            Self::Times => "1.0",
            Self::Slope => "\"0.25 in/ft\"",
        }
    }
}

/// A key of a rule besides its number.
#[derive(Debug)]
pub struct Term {
    /// The key.
    pub key: &'static str,
    /// What stands under it.
    pub takes: Takes,
    /// Whether the rule says nothing without it.
    pub needed: bool,
    /// It in words, its value where the braces stand.
    pub says: &'static str,
    /// Whether rules that differ in it ask different things, so that their numbers are not compared.
    pub parts: bool,
}

/// What stands under a key.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Takes {
    /// An area.
    Area,
    /// A duration.
    Time,
    /// A return period.
    ReturnPeriod,
    /// An intensity.
    Intensity,
    /// A factor above zero.
    Times,
    /// True or false.
    Yes,
    /// One of these words.
    Word(&'static [&'static str]),
}

impl Takes {
    /// The unit of its number in documents; none of what is no number, or has no unit.
    pub fn unit(self) -> Option<&'static str> {
        match self {
            Self::Area => Some("m2"),
            Self::Time => Some("s"),
            Self::ReturnPeriod => Some("yr"),
            Self::Intensity => Some("m_s"),
            Self::Times | Self::Yes | Self::Word(_) => None,
        }
    }

    /// Its name in documents.
    pub fn name(self) -> &'static str {
        match self {
            Self::Area => "area",
            Self::Time => "duration",
            Self::ReturnPeriod => "return period",
            Self::Intensity => "intensity",
            Self::Times => "factor",
            Self::Yes => "true or false",
            Self::Word(_) => "word",
        }
    }

    /// What may stand there, as a file gives it.
    pub fn examples(self) -> Vec<String> {
        let words: &[&str] = match self {
            Self::Area => &["\"5000 ft2\""],
            Self::Time => &["\"15 min\""],
            Self::ReturnPeriod => &["\"100 yr\""],
            Self::Intensity => &["\"5 in/h\""],
            Self::Times => &["2.0"],
            Self::Yes => &["true", "false"],
            Self::Word(words) => return words.iter().map(|word| format!("\"{word}\"")).collect(),
        };
        words.iter().map(ToString::to_string).collect()
    }
}

impl Term {
    /// Its key in documents, its unit behind it.
    pub fn field(&self) -> String {
        self.takes.unit().map_or(self.key.into(), |unit| format!("{}_{unit}", self.key))
    }
}

/// Why something cannot be measured.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Open {
    /// The rule does not speak of it, and why.
    NotApplicable(&'static str),
    /// Something is not given.
    Missing(&'static str),
}

/// What was found and what is required of it.
pub type Measure = Result<(Amount, Amount), Open>;

/// A height above the low point that the number of a rule counts from.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Datum {
    /// The height; where it is not given the least that it can be.
    pub height: Length,
    /// What would give it, where it is not given.
    pub missing: Option<&'static str>,
}

impl Datum {
    /// A datum at a known height.
    pub fn at(height: Length) -> Self {
        Self { height, missing: None }
    }
}

/// What a kind of rule does.
#[derive(Clone, Copy, Debug)]
pub enum Role {
    /// Measures one opening: a binding set lets no size stand that fails.
    Opening(fn(&Rule, &Size, &Catchment) -> Measure),
    /// Says from which height above the low point the number counts for a size: sills keep it.
    Sill(fn(&Rule, &Size, &Catchment) -> Result<Datum, Open>),
    /// Says how many devices an area needs at least.
    Count(fn(&Rule, &Catchment) -> Result<u32, Open>),
    /// Says how many openings an edge needs at least, where any stands at it.
    AtEdge(fn(&Rule, &Catchment) -> Result<u32, Open>),
    /// Says how deep the water may stand, by what the set counts.
    Depth(fn(&Rule, &Catchment) -> Result<Length, Open>),
    /// Asks for its number from the water up to the top of every closed opening, by what the set counts.
    Freeboard,
    /// Asks that the limits hold by what the set counts.
    Limits,
    /// Measures the area itself: no layout changes it.
    Area(fn(&Rule, &Catchment, &AreaBasis) -> Measure),
    /// Says which rain the set counts; of several the first that can be found.
    Rain,
    /// Says which walls the set counts.
    Walls,
    /// Says whether the primary drains are counted.
    Credit,
    /// Asks for a part or a multiple of what the primary drains carry.
    PrimaryFlow,
}

/// What rules are about, for telling them in an order that reads.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Family {
    /// The flow that is counted.
    Demand,
    /// The openings.
    Openings,
    /// How high, how many, how far apart.
    Standing,
    /// The water.
    Water,
    /// The roof and what follows.
    Roof,
}

impl Role {
    /// What rules of it are about.
    pub fn family(&self) -> Family {
        match self {
            Self::Rain | Self::Walls | Self::Credit | Self::PrimaryFlow => Family::Demand,
            Self::Opening(_) => Family::Openings,
            Self::Sill(_) | Self::Count(_) | Self::AtEdge(_) => Family::Standing,
            Self::Depth(_) | Self::Freeboard | Self::Limits => Family::Water,
            Self::Area(_) => Family::Roof,
        }
    }
}
