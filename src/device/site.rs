//! Where a device stands, as far as its flow depends on it: the laws chosen, the wall, the floor before it.

use crate::hydraulics::{practice, throat};
use crate::units::Length;

use super::{Kind, Law};

/// The flow law of each family of devices, and what those laws leave open.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Choice {
    /// Open and closed scuppers.
    pub scupper: Law,
    /// Pipe scuppers.
    pub pipe: Law,
    /// Overflow drains and standpipes.
    pub drain: Law,
    /// Roof edges.
    pub edge: Law,
    /// How the practice form passes from weir to orifice.
    pub transition: practice::Transition,
    /// Manning roughness of a throat.
    pub roughness: f64,
    /// Entrance loss of a throat in velocity heads.
    pub entrance_loss: f64,
}

impl Default for Choice {
    /// What US reviewers expect for scuppers, and the best supported for the rest.
    fn default() -> Self {
        Self {
            scupper: Law::ThinPlate,
            pipe: Law::CriticalDepth,
            drain: Law::RimAndThroat,
            edge: Law::SquareEdged,
            transition: practice::Transition::LesserOf,
            roughness: 0.012,
            entrance_loss: throat::SQUARE_EDGE_LOSS,
        }
    }
}

impl Choice {
    /// The law of a kind of device.
    pub fn law(&self, kind: Kind) -> Law {
        match kind {
            Kind::OpenScupper | Kind::ClosedScupper => self.scupper,
            Kind::PipeScupper => self.pipe,
            Kind::OverflowDrain | Kind::Standpipe => self.drain,
            Kind::RoofEdge => self.edge,
            Kind::Rated => Law::RatingTable,
        }
    }
}

/// What of an area the flow of a device depends on.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Site {
    /// The laws chosen.
    pub choice: Choice,
    /// Thickness of the parapet, which is the length of a scupper's throat, where given.
    pub thickness: Option<Length>,
    /// Roof surface before an edge device, above the low point.
    pub floor: Length,
    /// A law that every device follows that can, whatever is chosen for it: to be shown beside.
    pub forced: Option<Law>,
}
