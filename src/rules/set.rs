//! A rule set, as its file gives it, and the sets that stand over one roof.

use std::sync::Arc;

use super::amount::Amount;
use super::kind::Kind;

/// Rules of one standard, code or firm.
#[derive(Clone, Debug, PartialEq)]
pub struct RuleSet {
    /// What reports call it.
    pub title: String,
    /// The standard that it speaks for, by its number.
    pub standard: Option<String>,
    /// The year of its edition.
    pub year: Option<u32>,
    /// What a reader must know of it.
    pub note: Option<String>,
    /// Its rules, in the order of the file.
    pub rules: Vec<Rule>,
}

/// One rule of a set.
#[derive(Clone, Debug, PartialEq)]
pub struct Rule {
    /// What it asks.
    pub kind: &'static Kind,
    /// Its number; none where its kind takes none.
    pub bound: Option<Bound>,
    /// The terms that its kind takes, as far as they are given.
    pub terms: Vec<(&'static str, Amount)>,
    /// Where in the standard it stands.
    pub clause: String,
    /// Where its text or number comes from.
    pub source: String,
    /// How it is known.
    pub known: Known,
    /// What a reader must know of it.
    pub note: Option<String>,
}

/// The number of a rule, and which way it counts.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Bound {
    /// No less.
    AtLeast(Amount),
    /// No more.
    AtMost(Amount),
}

impl Bound {
    /// The number.
    pub fn amount(self) -> Amount {
        match self {
            Self::AtLeast(amount) | Self::AtMost(amount) => amount,
        }
    }

    /// The same way with another number.
    #[must_use]
    pub fn with(self, amount: Amount) -> Self {
        match self {
            Self::AtLeast(_) => Self::AtLeast(amount),
            Self::AtMost(_) => Self::AtMost(amount),
        }
    }

    /// Whether a number keeps it.
    pub fn holds(self, found: Amount) -> bool {
        match self {
            Self::AtLeast(least) => found.reaches(least),
            Self::AtMost(most) => most.reaches(found),
        }
    }
}

/// How the number of a rule is known.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Known {
    /// Read in the standard, or quoted from it in print.
    Read,
    /// From memory: to be confirmed against the adopted text.
    Recalled,
}

impl Known {
    /// Both with their names in files.
    pub const NAMED: [(&'static str, Self); 2] = [("read", Self::Read), ("recalled", Self::Recalled)];

    /// Its name.
    pub fn name(self) -> &'static str {
        Self::NAMED[self as usize].0
    }
}

impl Rule {
    /// A term, where it is given.
    pub fn term(&self, key: &str) -> Option<Amount> {
        self.terms.iter().find(|(known, _)| *known == key).map(|&(_, amount)| amount)
    }

    /// A term that is a word, where it is given.
    pub fn word(&self, key: &str) -> Option<&'static str> {
        match self.term(key)? {
            Amount::Word(word) => Some(word),
            _ => None,
        }
    }

    /// Its number as a factor; 1 where it has none.
    pub fn times(&self) -> f64 {
        match self.bound.map(Bound::amount) {
            Some(Amount::Times(times)) => times,
            _ => 1.0,
        }
    }
}

/// The place of a rule among those over a roof: of its set, and within it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct RuleAt {
    /// Its set, in the order of the project.
    pub set: usize,
    /// The rule, in the order of its file.
    pub rule: usize,
}

/// A rule set over a roof.
#[derive(Clone, Debug, PartialEq)]
pub struct Applied {
    /// The set.
    pub set: Arc<RuleSet>,
    /// Whether it restricts the search; else it is reported alone.
    pub binding: bool,
}

/// The rule sets over a roof, in the order of the project.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Rulebook {
    /// Each set.
    pub sets: Vec<Applied>,
}

impl Rulebook {
    /// A rule by its place.
    ///
    /// # Panics
    /// For a place that no set has.
    pub fn rule(&self, at: RuleAt) -> &Rule {
        &self.sets[at.set].set.rules[at.rule]
    }

    /// Every rule of the sets that bind, with its place.
    pub fn binding(&self) -> impl Iterator<Item = (RuleAt, &Rule)> {
        let of_set =
            |(set, applied): (usize, &'_ Applied)| (0..applied.set.rules.len()).map(move |rule| RuleAt { set, rule });
        let bind = self.sets.iter().enumerate().filter(|(_, applied)| applied.binding);
        bind.flat_map(of_set).map(|at| (at, self.rule(at)))
    }

    /// The sets without some of their rules.
    #[must_use]
    pub fn without(&self, rules: &[RuleAt]) -> Self {
        let mut left = self.clone();
        for (set, applied) in left.sets.iter_mut().enumerate().filter(|(set, _)| rules.iter().any(|at| at.set == *set))
        {
            let mut kept = (*applied.set).clone();
            let mut rule = 0..;
            kept.rules.retain(|_| !rules.contains(&RuleAt { set, rule: rule.next().unwrap_or_default() }));
            applied.set = Arc::new(kept);
        }
        left
    }
}
