//! Flow laws by name: which a kind of device can follow, and what a report says of each.

use crate::units::System;

use super::Kind;

/// A published way from head to flow.
///
/// One name may stand for different equations on different kinds: a thin plate with a rectangular opening is not one with a
/// round one. [`Law::account`] tells which is meant.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Law {
    /// A sharp crest: the two-branch practice form for scuppers, Staus for pipes.
    ThinPlate,
    /// Francis with two end contractions.
    Contracted,
    /// Kindsvater and Carter in a wide approach.
    KindsvaterCarter,
    /// A short channel through the parapet.
    Throat,
    /// Hager and Schwalt.
    ShortCrest,
    /// FHWA HDS-5.
    InletControl,
    /// EN 12056-3.
    En12056,
    /// Critical depth at the inlet.
    CriticalDepth,
    /// A long crest with square edges.
    SquareEdged,
    /// The published table of round scuppers.
    Published,
    /// Rim, dome and throat of a drain, the least of them.
    RimAndThroat,
    /// The table of a rated device.
    RatingTable,
}

/// What a report says of a law on a kind of device.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Account {
    /// The equations as a reviewer checks them, in gal/min and inches where the source is.
    pub form_us: &'static str,
    /// The same in m3/s and metres.
    pub form_si: &'static str,
    /// Where they are published, and whether that was read.
    pub source: &'static str,
}

impl Account {
    /// The equations in the units of a system.
    pub fn form(&self, system: System) -> &'static str {
        if system == System::Us { self.form_us } else { self.form_si }
    }
}

impl Law {
    /// Every law.
    pub const ALL: [Self; 12] = [
        Self::ThinPlate,
        Self::Contracted,
        Self::KindsvaterCarter,
        Self::Throat,
        Self::ShortCrest,
        Self::InletControl,
        Self::En12056,
        Self::CriticalDepth,
        Self::SquareEdged,
        Self::Published,
        Self::RimAndThroat,
        Self::RatingTable,
    ];

    /// The name in files and reports.
    pub const fn name(self) -> &'static str {
        match self {
            Self::ThinPlate => "thin-plate",
            Self::Contracted => "contracted",
            Self::KindsvaterCarter => "kindsvater-carter",
            Self::Throat => "throat",
            Self::ShortCrest => "short-crest",
            Self::InletControl => "inlet-control",
            Self::En12056 => "en-12056",
            Self::CriticalDepth => "critical-depth",
            Self::SquareEdged => "square-edged",
            Self::Published => "table",
            Self::RimAndThroat => "rim-and-throat",
            Self::RatingTable => "rating table",
        }
    }

    /// Whether it needs the thickness of the parapet.
    pub const fn needs_thickness(self) -> bool {
        matches!(self, Self::Throat | Self::ShortCrest)
    }

    /// What the law is on a kind of device.
    pub fn account(self, kind: Kind) -> Account {
        let same = |form: &'static str, source: &'static str| Account { form_us: form, form_si: form, source };
        match (self, kind) {
            (Self::ThinPlate, Kind::PipeScupper) => {
                same("Ce phi(H/D) D^2.5, a round thin plate", "Staus as given in ISO and ILRI manuals, from memory")
            }
            (Self::ThinPlate, Kind::RoofEdge) => Account {
                form_us: "2.9 b H^1.5 gpm (inches)",
                form_si: "1.7794 b H^1.5 m3/s (metres)",
                source: PRACTICE,
            },
            (Self::ThinPlate, _) => Account {
                form_us: "2.9 b H^1.5 gpm, and 4.3 b h sqrt(H - h/2) gpm if less once H > h (inches)",
                form_si: "1.7794 b H^1.5 m3/s, and 2.6384 b h sqrt(H - h/2) m3/s if less once H > h (metres)",
                source: PRACTICE,
            },
            (Self::Contracted, _) => Account {
                form_us: "Francis, 2.996 (b - 0.2 H) H^1.5 gpm (inches), an orifice of 0.6 if less once H > h",
                form_si: "Francis, 1.8385 (b - 0.2 H) H^1.5 m3/s (metres), an orifice of 0.6 if less once H > h",
                source: "Francis 1883, as in EPA stormwater manual Vol. II eq. 6-18, full contraction (a sill of 2 H) taken; orifice HEC-22 eq. 8-17",
            },
            (Self::KindsvaterCarter, _) => same(
                "Ce 2/3 sqrt(2g) (b + kb)(H + kh)^1.5, b/B = 0, an orifice of 0.6 if less once H > h",
                "Kindsvater and Carter 1957, coefficients from memory; orifice HEC-22 eq. 8-17",
            ),
            (Self::Throat, _) => same(
                "entrance loss and gradually varied flow through the wall to critical depth, an orifice of 0.6 if less once H > h",
                "energy and Manning friction; entrance loss HEC-22 Example 8-7; orifice HEC-22 eq. 8-17",
            ),
            (Self::ShortCrest, _) => same(
                "C(H/L) b H^1.5, C from 1.44 on a long crest to 1.86 on a thin one, an orifice of 0.6 if less once H > h",
                "Hager and Schwalt 1994, from memory; orifice HEC-22 eq. 8-17",
            ),
            (Self::InletControl, _) => same(
                "HW/D = Hc/D + K x^M, submerged c x^2 + Y, a smooth curve between",
                "FHWA HDS-5, 2nd ed. 2001, Table 9; the forms from memory",
            ),
            (Self::En12056, Kind::OverflowDrain | Kind::Standpipe) => {
                same("ko D h^1.5/7500 l/s to h = D/2, ko D^2 h^0.5/15000 above (mm)", "EN 12056-3, from memory")
            }
            (Self::En12056, _) => {
                same("b H^1.5/24000 l/s (mm), an orifice of 0.6 if less once H > h", "EN 12056-3, from memory")
            }
            (Self::CriticalDepth, Kind::RoofEdge) => Account {
                form_us: "critical depth on the edge, 2.778 b H^1.5 gpm (inches)",
                form_si: "critical depth on the edge, 1.7046 b H^1.5 m3/s (metres)",
                source: "least specific energy; HEC-22 section 8.4.4.2 rounds it",
            },
            (Self::SquareEdged, _) => Account {
                form_us: "0.848 of critical depth on the edge, 2.356 b H^1.5 gpm (inches)",
                form_si: "0.848 of critical depth on the edge, 1.4455 b H^1.5 m3/s (metres)",
                source: "ISO 3846, from memory; HEC-22 section 8.4.4.2 gives 1.44 for a sharp corner",
            },
            (Self::CriticalDepth, _) => same(
                "0.88 of critical depth at the energy H, an orifice of 0.6 if less once H > D",
                "critical depth in a circle; 0.88 fitted to the published table; orifice HEC-22 eq. 8-17",
            ),
            (Self::Published, _) => same(
                "rows of the table, logarithms between heads, straight lines between diameters",
                "ASCE 7-16 commentary, Table C8.3-5, from memory",
            ),
            (Self::RimAndThroat, Kind::Standpipe) => same(
                "the lesser of 1.84 pi D H^1.5 and 2.09 D^2 H^0.5 (m3/s, m)",
                "FHWA HEC-22, 3rd ed. 2009, Example 8-6",
            ),
            (Self::RimAndThroat, _) => same(
                "the least of rim 3.0 pi D H^1.5 (ft), dome 0.6 A sqrt(2gH) and throat 0.6 A sqrt(2g (H + dam))",
                "weir and orifice as in HEC-22 sections 4.4.5 and 8.4.4; an upper bound: a measured table is better",
            ),
            (Self::RatingTable, _) => same(
                "rows of its table, lines between; below the first row Q1 (H/H1)^1.5; above the last row its flow, held",
                "the table named in the catalog",
            ),
        }
    }
}

const PRACTICE: &str = "ASCE 7 commentary and insurance Data Sheet 1-54, recalled: confirm against print";
