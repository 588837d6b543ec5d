//! What can be put in a roof to let water out: each kind gives a flow for a head, under a flow law.
//!
//! A device knows its own dimensions and nothing of where it stands: its sill, its count, its neighbours and the level of the
//! pond belong to `roof`. Whatever the kind, a device is dry at and below its sill, its flow is continuous and never falls
//! as the head rises, and every flow says in which regime it was found.

use std::fmt;
use std::sync::Arc;

use crate::units::{Flow, Length, Money};

mod body;
mod curve;
mod following;
mod law;
mod made;
mod published;
mod rating;
mod site;

pub use body::{Device, Kind, RingDrain};
pub use curve::Curve;
pub use following::{ConductorHead, Following, Leader};
pub use law::{Account, Law};
pub use made::{Made, Tariff};
pub use rating::{Interpolation, Rating, RatingFault};
pub use site::{Choice, Site};

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
    /// Along a short channel, critical at its outer end.
    Channel,
    /// Outside the range of the law: its flow at the end, continued or held.
    BeyondRange,
    /// What the leader behind it carries.
    Leader,
    /// What the conductor head behind it carries with its water at the sill.
    ConductorHead,
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
            Self::Channel => "channel",
            Self::BeyondRange => "beyond range",
            Self::Leader => "leader",
            Self::ConductorHead => "conductor head",
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
    /// The flow law it follows whatever the project chooses, where the catalog says.
    pub law: Option<Law>,
    /// Factor on its flow for a guard in front of it; 1 without one.
    pub screen: f64,
    /// What follows it.
    pub following: Following,
    /// How it is made to measure, where it is.
    pub made: Option<Arc<Made>>,
}

impl Size {
    /// A device by itself: without tag or price, at any height, where its kind stands.
    pub fn of(device: Device) -> Self {
        let place = if device.kind().at_edge() == Some(false) { Place::Interior } else { Place::Edge };
        Self {
            tag: "".into(),
            device,
            place,
            price: None,
            set_heights: None,
            source: None,
            law: None,
            screen: 1.0,
            following: Following::default(),
            made: None,
        }
    }

    /// Width that it takes up, zero where it has none.
    pub fn clear_width(&self) -> Length {
        self.device.width().unwrap_or(Length::ZERO)
    }

    /// The law that it follows at a site.
    pub fn law_at(&self, site: &Site) -> Law {
        let kind = self.device.kind();
        let forced = site.forced.filter(|law| kind.laws().contains(law));
        forced.or(self.law).unwrap_or_else(|| site.choice.law(kind))
    }

    /// It as built at a site, `loss` taken off each side of its opening and its sill at a height above the low point before
    /// that; and how much the loss raises the sill.
    pub fn curve(&self, site: &Site, set_height: Length, loss: Length) -> (Curve, Length) {
        let (device, rise) = self.device.narrowed(loss);
        let curve = Curve::new(&device, self.law_at(site), site, set_height + rise, self.screen, &self.following);
        (curve, rise)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    fn closed(width: f64, height: f64) -> Size {
        Size::of(Device::Closed { width: Length::inches(width), height: Length::inches(height) })
    }

    fn curve(size: &Size, loss: f64) -> Curve {
        size.curve(&Site::default(), Length::inches(2.0), Length::inches(loss)).0
    }

    fn gpm(curve: &Curve, head: f64) -> f64 {
        curve.discharge(Head::of(Length::inches(head))).flow.to_gpm()
    }

    /// A loss of 1/4 in leaves 11.5 x 5.5 in of 12 x 6 in: 2.9 * 11.5 * 3^1.5 = 173.29 gpm. Worked by hand.
    #[test]
    fn a_loss_is_taken_off_all_four_sides() {
        let (narrowed, rise) = closed(12.0, 6.0).curve(&Site::default(), Length::inches(2.0), Length::inches(0.25));
        assert_eq!(rise, Length::inches(0.25));
        assert_relative_eq!(gpm(&narrowed, 3.0), 173.29, max_relative = 1e-4);
    }

    #[test]
    fn a_loss_can_shut_an_opening() {
        let shut = curve(&closed(4.0, 4.0), 2.0);
        let discharge = shut.discharge(Head::of(Length::inches(5.0)));
        assert_eq!(discharge, Discharge { flow: Flow::ZERO, regime: Regime::Shut });
        assert_eq!(shut.greatest_flow(), Some(Flow::ZERO));
    }

    #[test]
    fn the_published_range_is_6_to_24_by_4_to_6_at_1_to_8() {
        let beyond = |width, height, head: f64| {
            let ranges = curve(&closed(width, height), 0.0).beyond_range(Head::of(Length::inches(head)));
            let mut names = ranges.into_iter().map(|(range, _)| range.what).collect::<Vec<_>>();
            names.sort_unstable();
            names
        };
        assert!(beyond(6.0, 4.0, 1.0).is_empty() && beyond(24.0, 6.0, 8.0).is_empty());
        assert_eq!(beyond(30.0, 8.0, 0.5), ["head", "height", "width"]);
        assert_eq!(beyond(12.0, 6.0, 8.1), ["head"]);
    }

    /// Two openings of one width are alike while both tops stay dry, and pass the same flow to the last bit; not beyond.
    #[test]
    fn openings_of_one_width_are_alike_under_their_tops() {
        for law in [Law::ThinPlate, Law::Contracted, Law::KindsvaterCarter, Law::En12056] {
            let of = |height| curve(&Size { law: Some(law), ..closed(12.0, height) }, 0.25);
            let (low, high) = (of(4.5), of(6.5));
            let head = |inches| Head::of(Length::inches(inches));
            assert!(low.is_alike_up_to(&high, head(4.0)) && !low.is_alike_up_to(&high, head(4.01)), "{law:?}");
            for step in 0..=400 {
                let head = head(f64::from(step) / 100.0);
                assert_eq!(low.discharge(head).flow, high.discharge(head).flow, "{law:?}");
            }
            assert!(!low.is_alike_up_to(&curve(&closed(11.0, 4.5), 0.25), head(1.0)));
        }
    }

    /// A guard that passes 0.7, and a 4 in leader of 143.8 gpm behind: 2.9 * 12 * 3^1.5 * 0.7 = 126.58 gpm under 3 in, and
    /// the leader governs once 2.9 * 12 * H^1.5 * 0.7 passes 143.8: above 3.27 in. Worked by hand.
    #[test]
    fn a_guard_and_a_leader_take_their_part() {
        let fill = crate::hydraulics::leader::Fill::SevenTwentyFourths;
        let leader = Leader { diameter: Length::inches(4.0), fill };
        let following = Following { leader: Some(leader), conductor_head: None };
        let curve = curve(&Size { screen: 0.7, following, ..closed(12.0, 6.0) }, 0.0);
        assert_relative_eq!(gpm(&curve, 3.0), 126.58, max_relative = 1e-4);
        let at = |head| curve.discharge(Head::of(Length::inches(head)));
        assert_eq!(at(3.2).regime, Regime::Weir);
        assert_eq!(at(3.3).regime, Regime::Leader);
        assert_relative_eq!(at(5.0).flow.to_gpm(), 143.775, max_relative = 1e-4);
    }
}
