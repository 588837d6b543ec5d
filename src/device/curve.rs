//! A device under a law at its place: what it passes under a head.
//!
//! An equation refuses outside its range. A device must answer the search at any head, so it goes on: below the range with
//! the flow at its end times (H/H1)^1.5, above it with the flow at its end, held; the regime then says so. Dry at and below the
//! sill, continuous, never falling: this holds for every kind under every law, and a test walks them all.

use std::sync::Arc;

use crate::hydraulics::inlet::{self, Inlet};
use crate::hydraulics::limits::{self, Range};
use crate::hydraulics::throat::Throat;
use crate::hydraulics::{Branch, FlowError, circular, crest, orifice, outlet, practice, thin_plate, weir};
use crate::root::crossing;
use crate::units::{Area, Flow, Length};

use super::following::Following;
use super::{Device, Discharge, Head, Law, Rating, Regime, RingDrain, Site, published};

/// A device under a law, ready to be asked for flows.
#[derive(Clone, Debug)]
pub struct Curve {
    form: Form,
    law: Law,
    screen: f64,
    /// The most that what follows carries away.
    cap: Option<(Flow, Regime)>,
}

#[derive(Clone, Debug)]
enum Form {
    /// A loss has closed the opening, or it has no dimension that a law could use.
    Shut,
    /// The practice form; without a height, open at the top.
    Practice { width: Length, height: Option<Length>, transition: practice::Transition },
    /// A free-surface law over a sill, and an orifice where the opening has a top.
    Weir { weir: Weir, width: Length, height: Option<Length> },
    /// Inlet control of a box or a pipe.
    Inlet(Inlet),
    /// A pipe at critical depth.
    Pipe { diameter: Length },
    /// A round hole in a thin plate.
    RoundPlate { diameter: Length },
    /// The published table of round scuppers.
    RoundTable { diameter: Length },
    /// A drain with a ring dam.
    Ring(RingDrain),
    /// A standpipe.
    Riser { diameter: Length },
    /// A drain by EN 12056-3, strained, and no more than its rim and dome let in.
    Strained(RingDrain),
    /// An open outlet by EN 12056-3.
    Outlet { diameter: Length },
    /// A roof edge at critical depth, times a part of it.
    Spill { width: Length, part: f64 },
    /// A measured rating.
    Rated(Arc<Rating>),
}

/// A free-surface law over a rectangular sill.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Weir {
    Contracted,
    KindsvaterCarter { sill_height: Length },
    Throat(Throat),
    ShortCrest { length: Length },
    En12056,
}

impl Curve {
    /// A device as built, under a law, at its place, its sill so high above the low point.
    ///
    /// A law that needs the thickness of a parapet takes none as a thin edge; input refuses that before.
    pub(super) fn new(
        device: &Device,
        law: Law,
        site: &Site,
        sill: Length,
        screen: f64,
        following: &Following,
    ) -> Self {
        let form = if device.is_shut() { Form::Shut } else { form(device, law, site, sill).unwrap_or(Form::Shut) };
        Self { form, law, screen, cap: following.capacity() }
    }

    /// The law.
    pub fn law(&self) -> Law {
        self.law
    }

    /// Flow of one device under a head.
    pub fn discharge(&self, head: Head) -> Discharge {
        let own = self.own(head);
        match self.cap {
            Some((cap, regime)) if own.flow > cap => Discharge { flow: cap, regime },
            _ => own,
        }
    }

    /// Flow that the device itself passes, whatever follows it.
    pub fn own(&self, head: Head) -> Discharge {
        let head = head.length();
        if head <= Length::ZERO {
            return Discharge { flow: Flow::ZERO, regime: Regime::Dry };
        }
        // The forms refuse only what `form` has turned away already.
        let found = self.free(head).unwrap_or(Discharge { flow: Flow::ZERO, regime: Regime::Shut });
        Discharge { flow: found.flow * self.screen, ..found }
    }

    fn free(&self, head: Length) -> Result<Discharge, FlowError> {
        let branch = |(flow, branch): (Flow, Branch)| Discharge { flow, regime: of_branch(branch) };
        Ok(match &self.form {
            Form::Shut => Discharge { flow: Flow::ZERO, regime: Regime::Shut },
            Form::Practice { width, height: None, .. } => {
                Discharge { flow: practice::weir(*width, head)?, regime: Regime::Weir }
            }
            Form::Practice { width, height: Some(height), transition } => {
                branch(practice::closed_by(*width, *height, head, *transition)?)
            }
            Form::Weir { weir, width, height } => {
                let over = weir.discharge(*width, head)?;
                // Up to the top the integral over the opening is that of a free surface, so that the lesser of the two is
                // continuous there; a thin wall's weir coefficient may stand a few per cent above it.
                match height {
                    Some(height) => {
                        let through = orifice::rectangular(*width, *height, head, orifice::SQUARE_EDGE)?;
                        let regime = if head > *height { Regime::Orifice } else { over.regime };
                        if through < over.flow { Discharge { flow: through, regime } } else { over }
                    }
                    None => over,
                }
            }
            Form::Inlet(inlet) => {
                let flow = inlet.flow(head)?;
                let regime = match inlet.unit_ratio(flow) {
                    ratio if ratio <= inlet::WEIR_TO => Regime::Weir,
                    ratio if ratio < inlet::ORIFICE_FROM => Regime::Transition,
                    _ => Regime::Orifice,
                };
                Discharge { flow, regime }
            }
            Form::Pipe { diameter } => branch(circular::pipe(*diameter, head)?),
            Form::RoundPlate { diameter } => {
                let range = (diameter.m() * limits::STAUS_FILL.low).max(limits::STAUS_HEAD.low)
                    ..=diameter.m() * limits::STAUS_FILL.high;
                bounded(head, *range.start(), *range.end(), |head| circular::thin_plate_beyond(*diameter, head))?
            }
            Form::RoundTable { diameter } => published::round(*diameter, head),
            Form::Ring(drain) => ring(drain, head)?,
            Form::Riser { diameter } => branch(outlet::riser(*diameter, head)?),
            Form::Strained(drain) => {
                // A dome stands over the drain: the standard halves the flow behind a strainer.
                let strained = branch(outlet::en_12056_circular(drain.throat, head, outlet::STRAINED)?);
                let parts = ring(drain, head)?;
                if parts.flow < strained.flow { parts } else { strained }
            }
            Form::Outlet { diameter } => branch(outlet::en_12056_circular(*diameter, head, outlet::CLEAR)?),
            Form::Spill { width, part } => {
                Discharge { flow: crest::without_loss(*width, head)? * *part, regime: Regime::Weir }
            }
            Form::Rated(rating) => rating.discharge(head),
        })
    }

    /// Whether it is known to pass, to the last bit, what another does at every head up to one: two openings of one width
    /// under one law whose tops stay dry, or two devices of one table. Where it is not known, no.
    pub fn is_alike_up_to(&self, other: &Self, head: Head) -> bool {
        let head = head.length();
        let dry = |top: &Option<Length>| top.is_none_or(|top| head <= top);
        let forms = match (&self.form, &other.form) {
            (Form::Shut, Form::Shut) => true,
            (Form::Practice { width, height, .. }, Form::Practice { width: other, height: top, .. }) => {
                width == other && dry(height) && dry(top)
            }
            // Where there is a top the orifice may govern even under it, by an integral in which the top plays no part yet.
            (Form::Weir { weir, width, height }, Form::Weir { weir: law, width: other, height: top }) => {
                (weir, width, height.is_some()) == (law, other, top.is_some()) && dry(height) && dry(top)
            }
            (Form::Rated(rating), Form::Rated(other)) => Arc::ptr_eq(rating, other),
            _ => false,
        };
        let cap = |curve: &Self| curve.cap.map(|(cap, _)| cap);
        forms && self.screen == other.screen && cap(self) == cap(other)
    }

    /// The most it can pass at any head; none where more head always gives more flow.
    pub fn greatest_flow(&self) -> Option<Flow> {
        let own = match &self.form {
            Form::Shut => Some(Flow::ZERO),
            Form::Rated(rating) => Some(rating.last_flow() * self.screen),
            _ => None,
        };
        match (own, self.cap) {
            (Some(own), Some((cap, _))) => Some(own.min(cap)),
            (own, cap) => own.or(cap.map(|(cap, _)| cap)),
        }
    }

    /// The head from which what follows the device governs its flow, and what that is; none where it never does.
    pub fn governed_from(&self) -> Option<(Length, Regime)> {
        const HIGHEST: f64 = 3.0;
        let (cap, regime) = self.cap?;
        let over = |head: f64| (self.own(Head::of(Length::from_m(head))).flow - cap).m3_per_s();
        crossing(over, 0.0, HIGHEST).ok().map(|(_, head)| (Length::from_m(head), regime))
    }

    /// How much more a straight line between rated rows gives than one on logarithms; none for a device without rows.
    pub fn chord_excess(&self, head: Head) -> Flow {
        match &self.form {
            Form::Rated(rating) if head.length() > Length::ZERO => {
                let capped = |flow: Flow| self.cap.map_or(flow, |(cap, _)| flow.min(cap));
                capped(rating.linear(head.length()) * self.screen) - capped(rating.log_log(head.length()) * self.screen)
            }
            _ => Flow::ZERO,
        }
    }

    /// The published ranges that the device leaves under a head, each with the value in SI that lies outside.
    pub fn beyond_range(&self, head: Head) -> Vec<(&'static Range, f64)> {
        let head = head.length();
        if head <= Length::ZERO {
            return Vec::new();
        }
        let checks: Vec<(&'static Range, f64)> = match &self.form {
            Form::Practice { width, height, .. } => {
                let height = height.map(|height| (&limits::PRACTICE_HEIGHT, height.m()));
                let rest = [(&limits::PRACTICE_WIDTH, width.m()), (&limits::PRACTICE_HEAD, head.m())];
                rest.into_iter().chain(height).collect()
            }
            Form::Weir { weir: Weir::Contracted, width, .. } => vec![(&limits::FRANCIS, head / *width)],
            Form::Weir { weir: Weir::KindsvaterCarter { sill_height }, width, .. } => vec![
                (&limits::KINDSVATER_WIDTH, width.m()),
                (&limits::KINDSVATER_SILL, sill_height.m()),
                (&limits::KINDSVATER_HEAD, head.m()),
                (&limits::KINDSVATER_HEAD_OVER_SILL, head / kindsvater_sill(*sill_height)),
            ],
            Form::RoundPlate { diameter } => vec![
                (&limits::STAUS_DIAMETER, diameter.m()),
                (&limits::STAUS_HEAD, head.m()),
                (&limits::STAUS_FILL, head / *diameter),
            ],
            // The orifice beyond has no such range.
            Form::Pipe { diameter }
                if circular::pipe(*diameter, head).is_ok_and(|(_, branch)| branch == Branch::Weir) =>
            {
                vec![(&limits::PIPE_CRITICAL, head / *diameter)]
            }
            Form::RoundTable { diameter } => {
                vec![(&limits::ROUND_TABLE_DIAMETER, diameter.m()), (&limits::ROUND_TABLE_HEAD, head.m())]
            }
            _ => Vec::new(),
        };
        checks.into_iter().filter(|(range, value)| !range.holds(*value)).collect()
    }
}

fn of_branch(branch: Branch) -> Regime {
    match branch {
        Branch::Weir => Regime::Weir,
        Branch::Transition => Regime::Transition,
        Branch::Orifice => Regime::Orifice,
    }
}

fn form(device: &Device, law: Law, site: &Site, sill: Length) -> Result<Form, FlowError> {
    let weir = |weir, width, height| Form::Weir { weir, width, height };
    let rectangular = |width: Length, height: Option<Length>| -> Result<Form, FlowError> {
        let thickness = site.thickness.unwrap_or(Length::ZERO);
        Ok(match (law, height) {
            (Law::Contracted, _) => weir(Weir::Contracted, width, height),
            (Law::KindsvaterCarter, _) => {
                weir(Weir::KindsvaterCarter { sill_height: sill - site.floor }, width, height)
            }
            (Law::Throat, _) => {
                let Site { choice, .. } = site;
                weir(
                    Weir::Throat(Throat::new(width, thickness, choice.roughness, choice.entrance_loss)?),
                    width,
                    height,
                )
            }
            (Law::ShortCrest, _) if thickness > Length::ZERO => {
                weir(Weir::ShortCrest { length: thickness }, width, height)
            }
            (Law::InletControl, Some(height)) => {
                Form::Inlet(Inlet::of_box(width, height, &inlet::BOX_SQUARE, inlet::Transition::Curve)?)
            }
            (Law::En12056, _) => weir(Weir::En12056, width, height),
            _ => Form::Practice { width, height, transition: site.choice.transition },
        })
    };
    Ok(match device {
        Device::Open { width } => rectangular(*width, None)?,
        Device::Closed { width, height } => rectangular(*width, Some(*height))?,
        &Device::Pipe { diameter } => match law {
            Law::ThinPlate => Form::RoundPlate { diameter },
            Law::InletControl => Form::Inlet(Inlet::of_pipe(diameter, &inlet::PIPE_SQUARE, inlet::Transition::Curve)?),
            Law::Published => Form::RoundTable { diameter },
            _ => Form::Pipe { diameter },
        },
        Device::Drain(drain) if law == Law::En12056 => Form::Strained(*drain),
        Device::Drain(drain) => Form::Ring(*drain),
        &Device::Standpipe { diameter } if law == Law::En12056 => Form::Outlet { diameter },
        &Device::Standpipe { diameter } => Form::Riser { diameter },
        &Device::Edge { width } if law == Law::ThinPlate => {
            Form::Practice { width, height: None, transition: site.choice.transition }
        }
        &Device::Edge { width } if law == Law::SquareEdged => Form::Spill { width, part: crest::SQUARE_EDGE },
        &Device::Edge { width } => Form::Spill { width, part: 1.0 },
        Device::Rated { rating, .. } => Form::Rated(Arc::clone(rating)),
    })
}

/// An equation continued past both ends of its range of heads, m.
fn bounded(
    head: Length,
    low: f64,
    high: f64,
    equation: impl Fn(Length) -> Result<Flow, FlowError>,
) -> Result<Discharge, FlowError> {
    let beyond = |flow| Discharge { flow, regime: Regime::BeyondRange };
    if head.m() > high {
        return Ok(beyond(equation(Length::from_m(high))?));
    }
    if head.m() < low {
        let ratio = head.m() / low;
        // A range whose low end lies above its high end has no place: a hole too small for the law.
        return Ok(beyond(equation(Length::from_m(low.min(high)))? * (ratio * ratio.sqrt())));
    }
    Ok(Discharge { flow: equation(head)?, regime: Regime::Weir })
}

/// Sill height that Kindsvater and Carter's law is read with: none under its range.
fn kindsvater_sill(sill: Length) -> Length {
    sill.max(Length::from_m(limits::KINDSVATER_SILL.low))
}

impl Weir {
    fn discharge(self, width: Length, head: Length) -> Result<Discharge, FlowError> {
        match self {
            Self::Contracted => bounded(head, 0.0, width.m() * limits::FRANCIS.high, |head| {
                weir::francis_beyond(width, head, weir::EndContractions::Two)
            }),
            Self::KindsvaterCarter { sill_height } => {
                let sill = kindsvater_sill(sill_height);
                let high = sill.m() * limits::KINDSVATER_HEAD_OVER_SILL.high;
                bounded(head, limits::KINDSVATER_HEAD.low, high, |head| {
                    thin_plate::kindsvater_carter_beyond(width, WIDE_APPROACH, head, sill)
                })
            }
            Self::Throat(throat) => Ok(Discharge { flow: throat.flow(head)?, regime: Regime::Channel }),
            Self::ShortCrest { length } => {
                Ok(Discharge { flow: crest::short_crest(width, head, length)?, regime: Regime::Weir })
            }
            Self::En12056 => Ok(Discharge { flow: weir::en_12056(width, head)?, regime: Regime::Weir }),
        }
    }
}

/// Width of an opening over that of the roof before it: nothing, for a scupper in a long parapet.
const WIDE_APPROACH: f64 = 0.0;

/// The least of rim, dome and throat.
fn ring(drain: &RingDrain, head: Length) -> Result<Discharge, FlowError> {
    let rim = outlet::ring_dam(drain.dam, head, outlet::PRACTICAL_RIM_US)?;
    let throat = outlet::throat(drain.throat, head + drain.dam_height)?;
    let dome = match drain.free_area {
        Some(area) if area > Area::ZERO => Some(orifice::free(area, head, orifice::SQUARE_EDGE)?),
        _ => None,
    };
    let full = dome.map_or(throat, |dome| dome.min(throat));
    Ok(if full < rim {
        Discharge { flow: full, regime: Regime::Orifice }
    } else {
        Discharge { flow: rim, regime: Regime::Weir }
    })
}
