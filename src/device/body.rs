//! What a device is made of: its kind and its clear dimensions.

use std::fmt;
use std::sync::Arc;

use crate::units::{Area, Length};

use super::{Law, Rating};

/// What a device is, in the trade's words.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kind {
    /// A notch in the parapet, open at the top.
    OpenScupper,
    /// A hole through the parapet with four sides.
    ClosedScupper,
    /// A round sleeve through the parapet.
    PipeScupper,
    /// A drain inside the roof whose rim is a ring dam.
    OverflowDrain,
    /// An upright pipe with an open top.
    Standpipe,
    /// A long level edge that water spills over.
    RoofEdge,
    /// Any device whose flow was measured: its table is its law.
    Rated,
}

impl Kind {
    /// Every kind, in the order that messages list them.
    pub const ALL: [Self; 7] = [
        Self::OpenScupper,
        Self::ClosedScupper,
        Self::PipeScupper,
        Self::OverflowDrain,
        Self::Standpipe,
        Self::RoofEdge,
        Self::Rated,
    ];

    /// The name in files and reports.
    pub const fn name(self) -> &'static str {
        match self {
            Self::OpenScupper => "open scupper",
            Self::ClosedScupper => "closed scupper",
            Self::PipeScupper => "pipe scupper",
            Self::OverflowDrain => "overflow drain",
            Self::Standpipe => "standpipe",
            Self::RoofEdge => "roof edge",
            Self::Rated => "rated",
        }
    }

    /// The laws that it can follow, the one taken where none is chosen first.
    pub const fn laws(self) -> &'static [Law] {
        match self {
            Self::OpenScupper => {
                &[Law::ThinPlate, Law::Contracted, Law::KindsvaterCarter, Law::Throat, Law::ShortCrest, Law::En12056]
            }
            Self::ClosedScupper => &[
                Law::ThinPlate,
                Law::Contracted,
                Law::KindsvaterCarter,
                Law::Throat,
                Law::ShortCrest,
                Law::InletControl,
                Law::En12056,
            ],
            Self::PipeScupper => &[Law::CriticalDepth, Law::ThinPlate, Law::InletControl, Law::Published],
            Self::OverflowDrain | Self::Standpipe => &[Law::RimAndThroat, Law::En12056],
            Self::RoofEdge => &[Law::SquareEdged, Law::CriticalDepth, Law::ThinPlate],
            Self::Rated => &[Law::RatingTable],
        }
    }

    /// Whether it stands in the parapet; none where the catalog must say.
    pub const fn at_edge(self) -> Option<bool> {
        match self {
            Self::OpenScupper | Self::ClosedScupper | Self::PipeScupper | Self::RoofEdge => Some(true),
            Self::OverflowDrain | Self::Standpipe => Some(false),
            Self::Rated => None,
        }
    }

    /// Whether it can be made to any width: what has a width and a law for it.
    pub const fn in_any_width(self) -> bool {
        matches!(self, Self::OpenScupper | Self::ClosedScupper | Self::RoofEdge)
    }

    /// Whether an opening through the parapet, which loses on all its sides.
    pub const fn is_scupper(self) -> bool {
        matches!(self, Self::OpenScupper | Self::ClosedScupper | Self::PipeScupper)
    }
}

impl fmt::Display for Kind {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.name())
    }
}

/// One device, its clear dimensions fixed.
#[derive(Clone, Debug, PartialEq)]
pub enum Device {
    /// An open scupper.
    Open {
        /// Clear width.
        width: Length,
    },
    /// A closed scupper.
    Closed {
        /// Clear width.
        width: Length,
        /// Clear height, sill to top.
        height: Length,
    },
    /// A pipe scupper.
    Pipe {
        /// Inside diameter.
        diameter: Length,
    },
    /// An overflow drain with a ring dam.
    Drain(RingDrain),
    /// A standpipe.
    Standpipe {
        /// Inside diameter.
        diameter: Length,
    },
    /// A roof edge.
    Edge {
        /// Length of the level edge.
        width: Length,
    },
    /// A device with a measured rating.
    Rated {
        /// Width it takes up, where it has one.
        width: Option<Length>,
        /// Its table.
        rating: Arc<Rating>,
    },
}

/// The dimensions of an overflow drain.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct RingDrain {
    /// Diameter of the ring dam, whose rim is the sill.
    pub dam: Length,
    /// Height of the dam above the throat.
    pub dam_height: Length,
    /// Diameter of the throat.
    pub throat: Length,
    /// Free area of the dome or grate, where given.
    pub free_area: Option<Area>,
}

impl Device {
    /// What it is.
    pub fn kind(&self) -> Kind {
        match self {
            Self::Open { .. } => Kind::OpenScupper,
            Self::Closed { .. } => Kind::ClosedScupper,
            Self::Pipe { .. } => Kind::PipeScupper,
            Self::Drain(_) => Kind::OverflowDrain,
            Self::Standpipe { .. } => Kind::Standpipe,
            Self::Edge { .. } => Kind::RoofEdge,
            Self::Rated { .. } => Kind::Rated,
        }
    }

    /// Width along the parapet, where it takes up any: of a pipe its diameter.
    pub fn width(&self) -> Option<Length> {
        match *self {
            Self::Open { width } | Self::Closed { width, .. } | Self::Edge { width } => Some(width),
            Self::Pipe { diameter } => Some(diameter),
            Self::Rated { width, .. } => width,
            Self::Drain(_) | Self::Standpipe { .. } => None,
        }
    }

    /// Clear height from sill to top, where it has a top.
    pub fn height(&self) -> Option<Length> {
        match *self {
            Self::Closed { height, .. } => Some(height),
            Self::Pipe { diameter } => Some(diameter),
            _ => None,
        }
    }

    /// Inside diameter of what is round: a pipe, a standpipe, the throat of a drain.
    pub fn diameter(&self) -> Option<Length> {
        match *self {
            Self::Pipe { diameter } | Self::Standpipe { diameter } => Some(diameter),
            Self::Drain(drain) => Some(drain.throat),
            _ => None,
        }
    }

    /// The device as built, `loss` taken off each side of the opening; how much its sill rises by that.
    ///
    /// A membrane turned into the opening, flashing or a sleeve take it off all round: width, height and diameter lose twice
    /// the loss, the sill rises by it. Only scuppers lose; a rated device was measured as built.
    #[must_use]
    pub fn narrowed(&self, loss: Length) -> (Self, Length) {
        let less = |clear: Length| (clear - 2.0 * loss).max(Length::ZERO);
        match self {
            Self::Open { width } => (Self::Open { width: less(*width) }, loss),
            Self::Closed { width, height } => (Self::Closed { width: less(*width), height: less(*height) }, loss),
            Self::Pipe { diameter } => (Self::Pipe { diameter: less(*diameter) }, loss),
            other => (other.clone(), Length::ZERO),
        }
    }

    /// Whether a loss has closed it.
    pub(super) fn is_shut(&self) -> bool {
        let shut = |clear: Option<Length>| clear.is_some_and(|clear| clear <= Length::ZERO);
        shut(self.width()) || shut(self.height())
    }
}
