//! The range of every equation, once: the check, the message and the manual's table read it here.

use std::fmt;

use crate::units::METRES_PER_INCH;

use super::FlowError;

/// The closed range in which a source states or tabulates an equation for one of its arguments.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Range {
    /// The equation.
    pub law: &'static str,
    /// The argument, or the ratio of arguments, that is limited.
    pub what: &'static str,
    /// The least value, in SI or as a ratio.
    pub low: f64,
    /// The greatest value, in SI or as a ratio.
    pub high: f64,
    /// The unit in which the source prints the range; empty for a ratio.
    pub unit: &'static str,
    /// The size of that unit in SI; 1 for a ratio.
    pub shown_per: f64,
    /// Where the range stands.
    pub source: &'static str,
}

impl Range {
    /// Whether a value in SI lies in the range; both ends belong to it.
    pub fn holds(&self, value: f64) -> bool {
        // A nanometre of slack, so that a typed end of the range belongs to it whatever its unit.
        (self.low - 1e-9..=self.high + 1e-9).contains(&value)
    }

    /// Refuses a value outside the range.
    ///
    /// # Errors
    /// [`FlowError::OutsideRange`] with the value and this range.
    pub fn check(&'static self, value: f64) -> Result<(), FlowError> {
        if self.holds(value) { Ok(()) } else { Err(FlowError::OutsideRange { found: value, range: self }) }
    }
}

impl fmt::Display for Range {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let shown = |value: f64| (value / self.shown_per * 1e4).round() / 1e4;
        write!(f, "{}: {} ", self.law, self.what)?;
        match (self.low > 0.0, self.high.is_finite()) {
            (true, true) => write!(f, "{} to {}", shown(self.low), shown(self.high))?,
            (false, _) => write!(f, "up to {}", shown(self.high))?,
            (true, false) => write!(f, "from {}", shown(self.low))?,
        }
        if self.unit.is_empty() { Ok(()) } else { write!(f, " {}", self.unit) }
    }
}

const ASCE_TABLE: &str = "range of the published scupper table: ASCE 7-16 commentary, Table C8.3-3, from memory";

/// Widths of the published table that the practice form reproduces.
pub static PRACTICE_WIDTH: Range = Range {
    law: "practice form",
    what: "width",
    low: 6.0 * METRES_PER_INCH,
    high: 24.0 * METRES_PER_INCH,
    unit: "in",
    shown_per: METRES_PER_INCH,
    source: ASCE_TABLE,
};

/// Heights of the closed openings in the published table: 4 in and 6 in.
pub static PRACTICE_HEIGHT: Range = Range {
    law: "practice form",
    what: "height",
    low: 4.0 * METRES_PER_INCH,
    high: 6.0 * METRES_PER_INCH,
    unit: "in",
    shown_per: METRES_PER_INCH,
    source: ASCE_TABLE,
};

/// Heads of the published table.
pub static PRACTICE_HEAD: Range = Range {
    law: "practice form",
    what: "head",
    low: 1.0 * METRES_PER_INCH,
    high: 8.0 * METRES_PER_INCH,
    unit: "in",
    shown_per: METRES_PER_INCH,
    source: ASCE_TABLE,
};

/// Every range of this module, for the manual.
pub static ALL: [&Range; 3] = [&PRACTICE_WIDTH, &PRACTICE_HEIGHT, &PRACTICE_HEAD];
