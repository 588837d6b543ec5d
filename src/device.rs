//! What can be put in a roof to let water out: each kind gives a flow for a head, under a flow law.
//!
//! A device knows its own dimensions and nothing of where it stands: its sill, its count, its neighbours and the level of the
//! pond belong to `roof`. Whatever the kind, a device is dry at and below its sill, its flow is continuous and never falls
//! as the head rises, and every flow says in which regime it was found.

use std::fmt;
use std::sync::Arc;

use crate::hydraulics::limits::{self, Range};
use crate::hydraulics::practice::{self, Branch};
use crate::units::{Flow, Length, Money};

mod rating;

pub use rating::{Rating, RatingFault};

/// Water over a sill or rim: level of the pond less the height of the sill, never below zero.
///
/// A depth above the low point is no head; the type keeps the two apart.
#[derive(Clone, Copy, Debug, PartialEq, PartialOrd)]
pub struct Head(Length);

impl Head {
    /// The head on a sill, both heights above the same datum; zero where the sill stands above the water.
    pub fn above(sill: Length, level: Length) -> Self {
        Self((level - sill).max(Length::ZERO))
    }

    /// A head given as such.
    pub fn of(head: Length) -> Self {
        Self(head.max(Length::ZERO))
    }

    /// The head as a length.
    pub fn length(self) -> Length {
        self.0
    }
}

/// What a device is, in the trade's words.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kind {
    /// A notch in the parapet, open at the top.
    OpenScupper,
    /// A hole through the parapet with four sides.
    ClosedScupper,
    /// Any device whose flow was measured: its table is its law.
    Rated,
}

impl Kind {
    /// Every kind, in the order that messages list them.
    pub const ALL: [Self; 3] = [Self::OpenScupper, Self::ClosedScupper, Self::Rated];

    /// The name in files and reports.
    pub const fn name(self) -> &'static str {
        match self {
            Self::OpenScupper => "open scupper",
            Self::ClosedScupper => "closed scupper",
            Self::Rated => "rated",
        }
    }
}

impl fmt::Display for Kind {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.name())
    }
}

/// Where a device stands.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Place {
    /// In the parapet: it uses up edge, and stands no lower than the roof does there.
    Edge,
    /// Inside the roof.
    Interior,
}

/// How a flow was found.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Regime {
    /// No water over the sill.
    Dry,
    /// An opening that a loss has narrowed to nothing.
    Shut,
    /// Free surface over the sill.
    Weir,
    /// Between free surface and full.
    Transition,
    /// The opening runs full.
    Orifice,
    /// Between two rows of the rating table.
    Table,
    /// Under the first row of the rating table: that row's flow times (H / H1)^1.5.
    BelowTable,
    /// Over the last row of the rating table: that row's flow, held.
    TableHeld,
}

impl Regime {
    /// The name in reports.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Dry => "dry",
            Self::Shut => "shut",
            Self::Weir => "weir",
            Self::Transition => "transition",
            Self::Orifice => "orifice",
            Self::Table => "table",
            Self::BelowTable => "below table",
            Self::TableHeld => "table held",
        }
    }
}

impl fmt::Display for Regime {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.name())
    }
}

/// A flow and how it was found.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Discharge {
    /// The flow of one device.
    pub flow: Flow,
    /// How it was found.
    pub regime: Regime,
}

/// A published law, as a report names it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Law {
    /// The name in files and reports.
    pub name: &'static str,
    /// The equations as a reviewer checks them, in gal/min and inches.
    pub form_us: &'static str,
    /// The same in m3/s and metres.
    pub form_si: &'static str,
    /// Where they are published.
    pub source: &'static str,
}

/// The thin-plate form of North American practice, the law of scuppers.
pub static THIN_PLATE: Law = Law {
    name: "thin-plate",
    form_us: "2.9 b H^1.5 gpm, and 4.3 b h sqrt(H - h/2) gpm if less once H > h (inches)",
    form_si: "1.7794 b H^1.5 m3/s, and 2.6384 b h sqrt(H - h/2) m3/s if less once H > h (metres)",
    source: "ASCE 7 commentary and insurance Data Sheet 1-54, from memory",
};

/// The table of a rated device.
pub static RATING_TABLE: Law = Law {
    name: "rating table",
    form_us: "straight lines between rows; below the first row Q1 (H/H1)^1.5; above the last row its flow, held",
    form_si: "straight lines between rows; below the first row Q1 (H/H1)^1.5; above the last row its flow, held",
    source: "the table named in the catalog",
};

/// One device, its clear dimensions fixed.
#[derive(Clone, Debug, PartialEq)]
pub enum Device {
    /// An open scupper of a clear width.
    Open {
        /// Clear width.
        width: Length,
    },
    /// A closed scupper of a clear width and height.
    Closed {
        /// Clear width.
        width: Length,
        /// Clear height, sill to top.
        height: Length,
    },
    /// A device with a measured rating.
    Rated {
        /// Width it takes up, where it has one.
        width: Option<Length>,
        /// Its table.
        rating: Arc<Rating>,
    },
}

impl Device {
    /// What it is.
    pub fn kind(&self) -> Kind {
        match self {
            Self::Open { .. } => Kind::OpenScupper,
            Self::Closed { .. } => Kind::ClosedScupper,
            Self::Rated { .. } => Kind::Rated,
        }
    }

    /// Clear width, where it has one.
    pub fn width(&self) -> Option<Length> {
        match *self {
            Self::Open { width } | Self::Closed { width, .. } => Some(width),
            Self::Rated { width, .. } => width,
        }
    }

    /// Clear height from sill to top, where it has a top.
    pub fn height(&self) -> Option<Length> {
        match *self {
            Self::Closed { height, .. } => Some(height),
            Self::Open { .. } | Self::Rated { .. } => None,
        }
    }

    /// The law that gives its flow.
    pub fn law(&self) -> &'static Law {
        match self {
            Self::Open { .. } | Self::Closed { .. } => &THIN_PLATE,
            Self::Rated { .. } => &RATING_TABLE,
        }
    }

    /// The device as built, `loss` taken off each side of the opening; how much its sill rises by that.
    ///
    /// A membrane turned into the opening, flashing or a sleeve take it off all round: width and height lose twice the
    /// loss, the sill rises by it. A rated device was measured as built, and keeps its table and its rim.
    #[must_use]
    pub fn narrowed(&self, loss: Length) -> (Self, Length) {
        let less = |clear: Length| (clear - 2.0 * loss).max(Length::ZERO);
        match self {
            Self::Open { width } => (Self::Open { width: less(*width) }, loss),
            Self::Closed { width, height } => (Self::Closed { width: less(*width), height: less(*height) }, loss),
            Self::Rated { .. } => (self.clone(), Length::ZERO),
        }
    }

    /// Flow of one device under a head.
    pub fn discharge(&self, head: Head) -> Discharge {
        let head = head.length();
        if head <= Length::ZERO {
            return Discharge { flow: Flow::ZERO, regime: Regime::Dry };
        }
        let free = |flow| Discharge { flow, regime: Regime::Weir };
        let found = match self {
            Self::Open { width } => practice::weir(*width, head).map(free),
            Self::Closed { width, height } => practice::closed(*width, *height, head).map(|(flow, branch)| {
                let regime = match branch {
                    Branch::Weir => Regime::Weir,
                    Branch::Transition => Regime::Transition,
                    Branch::Orifice => Regime::Orifice,
                };
                Discharge { flow, regime }
            }),
            Self::Rated { rating, .. } => return rating.discharge(head),
        };
        // The form refuses only an opening of no width or height: one that a loss has closed.
        found.unwrap_or(Discharge { flow: Flow::ZERO, regime: Regime::Shut })
    }

    /// The most it can pass at any head; none where more head always gives more flow.
    pub fn greatest_flow(&self) -> Option<Flow> {
        let shut = |clear: Length| clear <= Length::ZERO;
        match self {
            Self::Open { width } => shut(*width).then_some(Flow::ZERO),
            Self::Closed { width, height } => (shut(*width) || shut(*height)).then_some(Flow::ZERO),
            Self::Rated { rating, .. } => Some(rating.last_flow()),
        }
    }

    /// How much more a straight line between rated rows gives than one on logarithms; none for a device without rows.
    pub fn chord_excess(&self, head: Head) -> Flow {
        match self {
            Self::Rated { rating, .. } if head.length() > Length::ZERO => {
                rating.discharge(head.length()).flow - rating.log_log(head.length())
            }
            _ => Flow::ZERO,
        }
    }

    /// The published ranges that the device leaves under a head, each with the value in SI that lies outside.
    pub fn beyond_range(&self, head: Head) -> Vec<(&'static Range, f64)> {
        if head.length() <= Length::ZERO {
            return Vec::new();
        }
        let checks: [(&'static Range, Option<Length>); 3] = match self {
            Self::Open { .. } | Self::Closed { .. } => [
                (&limits::PRACTICE_WIDTH, self.width()),
                (&limits::PRACTICE_HEIGHT, self.height()),
                (&limits::PRACTICE_HEAD, Some(head.length())),
            ],
            Self::Rated { .. } => return Vec::new(),
        };
        let outside = |(range, value): (&'static Range, Option<Length>)| {
            value.map(Length::m).filter(|&value| !range.holds(value)).map(|value| (range, value))
        };
        checks.into_iter().filter_map(outside).collect()
    }
}

/// One entry of a catalog with every dimension fixed: what a layout is made of.
#[derive(Clone, Debug)]
pub struct Size {
    /// The catalog's tag for the device, shared by all its sizes.
    pub tag: Arc<str>,
    /// The device.
    pub device: Device,
    /// Where it stands.
    pub place: Place,
    /// What one costs, where the catalog says.
    pub price: Option<Money>,
    /// The heights above the low point at which the catalog lets it stand, rising; none where any will do.
    pub set_heights: Option<Arc<[Length]>>,
    /// Where its figures come from, where the catalog says.
    pub source: Option<Arc<str>>,
}

impl Size {
    /// Width that it takes up, zero where the catalog gives none.
    pub fn clear_width(&self) -> Length {
        self.device.width().unwrap_or(Length::ZERO)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    fn closed(width: f64, height: f64) -> Device {
        Device::Closed { width: Length::inches(width), height: Length::inches(height) }
    }

    fn gpm(device: &Device, head: f64) -> f64 {
        device.discharge(Head::of(Length::inches(head))).flow.to_gpm()
    }

    /// A loss of 1/4 in leaves 11.5 x 5.5 in of 12 x 6 in: 2.9 * 11.5 * 3^1.5 = 173.29 gpm. Worked by hand.
    #[test]
    fn a_loss_is_taken_off_all_four_sides() {
        let (narrowed, rise) = closed(12.0, 6.0).narrowed(Length::inches(0.25));
        assert_eq!(rise, Length::inches(0.25));
        assert_relative_eq!(gpm(&narrowed, 3.0), 173.29, max_relative = 1e-4);
        assert_relative_eq!(narrowed.height().unwrap().to_inches(), 5.5, max_relative = 1e-12);
    }

    #[test]
    fn a_loss_can_shut_an_opening() {
        let (narrowed, _) = closed(4.0, 4.0).narrowed(Length::inches(2.0));
        let discharge = narrowed.discharge(Head::of(Length::inches(5.0)));
        assert_eq!(discharge, Discharge { flow: Flow::ZERO, regime: Regime::Shut });
        assert_eq!(narrowed.greatest_flow(), Some(Flow::ZERO));
    }

    #[test]
    fn the_published_range_is_6_to_24_by_4_to_6_at_1_to_8() {
        let beyond = |width, height, head: f64| {
            let ranges = closed(width, height).beyond_range(Head::of(Length::inches(head)));
            ranges.into_iter().map(|(range, _)| range.what).collect::<Vec<_>>()
        };
        assert!(beyond(6.0, 4.0, 1.0).is_empty() && beyond(24.0, 6.0, 8.0).is_empty());
        assert_eq!(beyond(30.0, 8.0, 0.5), ["width", "height", "head"]);
        assert_eq!(beyond(12.0, 6.0, 8.1), ["head"]);
    }
}
