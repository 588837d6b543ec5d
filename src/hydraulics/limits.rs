//! The range of every equation, once: the check, the message and the manual's table read it here.

use std::fmt;

use crate::units::{METRES_PER_FOOT, METRES_PER_INCH};

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

/// A range of a ratio.
const fn ratio(law: &'static str, what: &'static str, low: f64, high: f64, source: &'static str) -> Range {
    Range { law, what, low, high, unit: "", shown_per: 1.0, source }
}

/// A range of a length that its source prints in metres.
const fn metres(law: &'static str, what: &'static str, low: f64, high: f64, source: &'static str) -> Range {
    Range { law, what, low, high, unit: "m", shown_per: 1.0, source }
}

/// A range of a length that its source prints in feet.
const fn feet(law: &'static str, what: &'static str, low: f64, high: f64, source: &'static str) -> Range {
    Range {
        law,
        what,
        low: low * METRES_PER_FOOT,
        high: high * METRES_PER_FOOT,
        unit: "ft",
        shown_per: METRES_PER_FOOT,
        source,
    }
}

const NO_END: f64 = f64::INFINITY;
const HEC22: &str = "FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009)";
const ISO_1438: &str = "ISO 1438 and ILRI publication 20 (3rd ed., 1989), from memory";
const ILRI_20: &str = "ILRI publication 20 (3rd ed., 1989), from memory";
const REHBOCK: &str = "limits carried by the general-purpose library fluids 1.3.1";
const EN_12056: &str = "EN 12056-3, from memory";

/// Francis weir: head / width.
///
/// Above this the drawdown from both ends meets.
pub static FRANCIS: Range =
    ratio("Francis weir", "head / width", 0.0, 1.0 / 3.0, "USBR Water Measurement Manual, chapter 7, from memory");

/// Full contraction of a weir: clearance / head.
///
/// Clear water beside and below the opening that lets the nappe contract in full.
pub static FULL_CONTRACTION: Range = ratio(
    "full contraction of a weir",
    "clearance / head",
    2.0,
    NO_END,
    "USBR Water Measurement Manual, chapter 7, from memory",
);

/// Kindsvater-Carter weir: head.
pub static KINDSVATER_HEAD: Range = metres("Kindsvater-Carter weir", "head", 0.03, NO_END, ISO_1438);

/// Kindsvater-Carter weir: width.
pub static KINDSVATER_WIDTH: Range = metres("Kindsvater-Carter weir", "width", 0.15, NO_END, ISO_1438);

/// Kindsvater-Carter weir: sill height.
pub static KINDSVATER_SILL: Range = metres("Kindsvater-Carter weir", "sill height", 0.10, NO_END, ISO_1438);

/// Kindsvater-Carter weir: head / sill height.
pub static KINDSVATER_HEAD_OVER_SILL: Range = ratio("Kindsvater-Carter weir", "head / sill height", 0.0, 2.0, ISO_1438);

/// Kindsvater-Carter weir: width / approach width.
pub static KINDSVATER_WIDTH_RATIO: Range =
    ratio("Kindsvater-Carter weir", "width / approach width", 0.0, 1.0, ISO_1438);

/// Rehbock weir: head.
pub static REHBOCK_HEAD: Range = metres("Rehbock weir", "head", 0.03, 0.75, REHBOCK);

/// Rehbock weir: width.
pub static REHBOCK_WIDTH: Range = metres("Rehbock weir", "width", 0.3, NO_END, REHBOCK);

/// Rehbock weir: sill height.
pub static REHBOCK_SILL: Range = metres("Rehbock weir", "sill height", 0.3, NO_END, REHBOCK);

/// Rehbock weir: head / sill height.
pub static REHBOCK_HEAD_OVER_SILL: Range = ratio("Rehbock weir", "head / sill height", 0.0, 1.0, REHBOCK);

/// Villemonte submergence: downstream head / upstream head.
///
/// At 1 the two levels are equal and nothing flows.
pub static VILLEMONTE: Range = ratio("Villemonte submergence", "downstream head / upstream head", 0.0, 1.0, HEC22);

/// Long square-edged crest: head / crest length.
///
/// Shorter, and the water still falls over the whole crest; longer, and friction counts.
pub static LONG_CREST: Range = ratio(
    "long square-edged crest",
    "head / crest length",
    0.1,
    0.33,
    "ISO 3846 and ILRI publication 20 (3rd ed., 1989), from memory",
);

/// HEC-22 Table 8-1 (SI): head.
pub static CREST_TABLE_HEAD_SI: Range = metres("HEC-22 Table 8-1 (SI)", "head", 0.1, 1.6, HEC22);

/// HEC-22 Table 8-1 (SI): crest length.
pub static CREST_TABLE_LENGTH_SI: Range = metres("HEC-22 Table 8-1 (SI)", "crest length", 0.15, 4.0, HEC22);

/// HEC-22 Table 8-1 (US): head.
pub static CREST_TABLE_HEAD_US: Range = feet("HEC-22 Table 8-1 (US)", "head", 0.2, 5.5, HEC22);

/// HEC-22 Table 8-1 (US): crest length.
pub static CREST_TABLE_LENGTH_US: Range = feet("HEC-22 Table 8-1 (US)", "crest length", 0.5, 15.0, HEC22);

/// Staus circular weir: head / diameter.
pub static STAUS_FILL: Range = ratio("Staus circular weir", "head / diameter", 0.1, 0.9, ILRI_20);

/// Staus circular weir: head.
pub static STAUS_HEAD: Range = metres("Staus circular weir", "head", 0.03, NO_END, ILRI_20);

/// Staus circular weir: diameter.
pub static STAUS_DIAMETER: Range = metres("Staus circular weir", "diameter", 0.2, NO_END, ILRI_20);

/// Greve circular weir: head / diameter.
///
/// The opening must not run full.
pub static GREVE_FILL: Range =
    ratio("Greve circular weir", "head / diameter", 0.0, 1.0, "free surface, by the form of the equation");

/// Critical depth in a pipe: head / diameter.
///
/// Beyond, the surface touches the top and critical depth loses its meaning.
pub static PIPE_CRITICAL: Range = ratio("critical depth in a pipe", "head / diameter", 0.0, 1.2, "common practice");

/// Orifice: coefficient.
pub static ORIFICE_COEFFICIENT: Range = ratio("orifice", "coefficient", 0.4, 0.6, HEC22);

/// Small pipe as an orifice: depth over the centre / diameter.
///
/// Holds for pipes under 0.3 m.
pub static SMALL_PIPE_ORIFICE: Range =
    ratio("small pipe as an orifice", "depth over the centre / diameter", 1.5, NO_END, HEC22);

/// Curb opening as a weir: depth / opening height.
pub static CURB_WEIR: Range = ratio("curb opening as a weir", "depth / opening height", 0.0, 1.0, HEC22);

/// Curb opening as an orifice: depth / opening height.
pub static CURB_ORIFICE: Range = ratio("curb opening as an orifice", "depth / opening height", 1.4, NO_END, HEC22);

/// Depressed curb opening as a weir: depth / (opening height + depression).
pub static DEPRESSED_CURB_WEIR: Range =
    ratio("depressed curb opening as a weir", "depth / (opening height + depression)", 0.0, 1.0, HEC22);

/// Depressed curb opening as a weir: length.
///
/// A longer opening follows the form without a depression.
pub static DEPRESSED_CURB_LENGTH: Range = metres("depressed curb opening as a weir", "length", 0.0, 3.6, HEC22);

/// Slotted inlet as a weir: depth.
pub static SLOT_WEIR: Range = feet("slotted inlet as a weir", "depth", 0.0, 0.2, HEC22);

/// Slotted inlet as an orifice: depth.
pub static SLOT_ORIFICE: Range = feet("slotted inlet as an orifice", "depth", 0.2, NO_END, HEC22);

/// EN 12056-3 outlet: flow factor.
///
/// 1 for a clear outlet, 0.5 behind a strainer or grating.
pub static EN_FLOW_FACTOR: Range = ratio("EN 12056-3 outlet", "flow factor", 0.5, 1.0, EN_12056);

/// EN 12056-3 downpipe: filling degree.
pub static EN_DOWNPIPE_FILL: Range = ratio("EN 12056-3 downpipe", "filling degree", 0.20, 0.33, EN_12056);

/// EN 12056-3 length factor: length / design depth.
pub static EN_GUTTER_LENGTH: Range = ratio("EN 12056-3 length factor", "length / design depth", 0.0, 500.0, EN_12056);

/// Normal depth in a pipe: flow / full-bore flow.
///
/// Just under full a pipe carries more than full, and one flow has two depths.
pub static PIPE_FLOW: Range =
    ratio("normal depth in a pipe", "flow / full-bore flow", 0.0, 1.0, "uniqueness of the depth");

/// Gutter with a free outlet: (fall - friction) / twice the critical depth at the outlet.
///
/// Steeper, and the flow passes critical depth inside the gutter, not at its outlet.
pub static GUTTER_FALL: Range = ratio(
    "gutter with a free outlet",
    "(fall - friction) / twice the critical depth at the outlet",
    0.0,
    1.0,
    "singular point of the momentum equation",
);

/// Gutter with lateral inflow: Froude number.
pub static GUTTER_FROUDE: Range = ratio(
    "gutter with lateral inflow",
    "Froude number",
    0.0,
    1.0,
    "the equation is integrated upstream, which holds for subcritical flow only",
);

const ROUND_TABLE: &str = "ASCE 7-16 commentary, Table C8.3-5, from memory";

/// Table of round scuppers: diameter.
pub static ROUND_TABLE_DIAMETER: Range = Range {
    law: "table of round scuppers",
    what: "diameter",
    low: 5.0 * METRES_PER_INCH,
    high: 16.0 * METRES_PER_INCH,
    unit: "in",
    shown_per: METRES_PER_INCH,
    source: ROUND_TABLE,
};

/// Table of round scuppers: head.
pub static ROUND_TABLE_HEAD: Range = Range {
    law: "table of round scuppers",
    what: "head",
    low: METRES_PER_INCH,
    high: 8.0 * METRES_PER_INCH,
    unit: "in",
    shown_per: METRES_PER_INCH,
    source: ROUND_TABLE,
};

/// Every range of this module, for the manual.
pub static ALL: [&Range; 41] = [
    &ROUND_TABLE_DIAMETER,
    &ROUND_TABLE_HEAD,
    &PRACTICE_WIDTH,
    &PRACTICE_HEIGHT,
    &PRACTICE_HEAD,
    &FRANCIS,
    &FULL_CONTRACTION,
    &KINDSVATER_HEAD,
    &KINDSVATER_WIDTH,
    &KINDSVATER_SILL,
    &KINDSVATER_HEAD_OVER_SILL,
    &KINDSVATER_WIDTH_RATIO,
    &REHBOCK_HEAD,
    &REHBOCK_WIDTH,
    &REHBOCK_SILL,
    &REHBOCK_HEAD_OVER_SILL,
    &VILLEMONTE,
    &LONG_CREST,
    &CREST_TABLE_HEAD_SI,
    &CREST_TABLE_LENGTH_SI,
    &CREST_TABLE_HEAD_US,
    &CREST_TABLE_LENGTH_US,
    &STAUS_FILL,
    &STAUS_HEAD,
    &STAUS_DIAMETER,
    &GREVE_FILL,
    &PIPE_CRITICAL,
    &ORIFICE_COEFFICIENT,
    &SMALL_PIPE_ORIFICE,
    &CURB_WEIR,
    &CURB_ORIFICE,
    &DEPRESSED_CURB_WEIR,
    &DEPRESSED_CURB_LENGTH,
    &SLOT_WEIR,
    &SLOT_ORIFICE,
    &EN_FLOW_FACTOR,
    &EN_DOWNPIPE_FILL,
    &EN_GUTTER_LENGTH,
    &PIPE_FLOW,
    &GUTTER_FALL,
    &GUTTER_FROUDE,
];

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_range_is_one_and_says_where_it_stands() {
        for range in ALL {
            assert!(range.low < range.high && !range.source.is_empty(), "{range}");
            assert!(range.holds(range.low) && range.shown_per > 0.0, "{range}");
        }
    }

    #[test]
    fn a_range_reads_as_its_source_prints_it() {
        assert_eq!(FRANCIS.to_string(), "Francis weir: head / width up to 0.3333");
        assert_eq!(KINDSVATER_HEAD.to_string(), "Kindsvater-Carter weir: head from 0.03 m");
        assert_eq!(CREST_TABLE_HEAD_US.to_string(), "HEC-22 Table 8-1 (US): head 0.2 to 5.5 ft");
        assert_eq!(PRACTICE_HEAD.to_string(), "practice form: head 1 to 8 in");
    }
}
