//! A stronger roof against fewer openings: what raising an area's load limit costs, and whether it pays.
//!
//! The least cost of openings falls in treads as the limit is raised ([`super::tradeoff()`]), and strength is paid by the load:
//! so the least of both together is at the start of a tread, and every tread's start is looked at.

use crate::roof::Roof;
use crate::units::{Area, Load, Money, Priced, System};

use super::cure::Cure;
use super::tradeoff::{Raises, tradeoff};
use super::watch::Stopped;
use super::{Options, Relaxation};

/// What a stronger roof costs.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Structure {
    /// The price of a square metre of roof that carries a pascal more.
    pub stiffen: Priced,
    /// Raises come in whole steps of this; none where any raise can be built.
    pub step: Option<Load>,
    /// The greatest raise.
    pub most: Load,
}

impl Structure {
    /// What a raise costs on an area.
    pub fn cost(&self, area: Area, raise: Load) -> Money {
        Money::nearest(self.stiffen.for_si(area.m2() * raise.pa()))
    }

    /// The step by which a plan raises areas: its own, else 1 psf or 50 Pa.
    pub fn plan_step(&self, system: System) -> Load {
        self.step.unwrap_or(Raises::coarse(system))
    }

    /// The raises of one area: those that come in steps, or all by the finest that a trade-off goes by.
    pub fn raises(&self, system: System) -> Raises {
        Raises::between(self.step.unwrap_or(Raises::fine(system)), Load::ZERO, self.most)
    }
}

/// An area whose load limit is raised to where openings and strength together cost least.
#[derive(Clone, Debug)]
pub struct Stiffened {
    /// The raise; zero where none pays.
    pub raise: Load,
    /// What it costs.
    pub strength: Money,
    /// The least cost of openings at the limit as given; none where that has no layout.
    pub given: Option<Money>,
    /// The area so raised; its first layout is the cheapest.
    pub raised: Cure,
}

/// Where the openings of an area and the raise of its load limit together cost least, the least raise of equals; none where
/// even the greatest raise has no layout, or a device has no price.
///
/// # Errors
/// [`Stopped`] where the watch ended the search.
pub fn stiffened(
    roof: &Roof,
    options: &Options,
    structure: &Structure,
    area: usize,
) -> Result<Option<Stiffened>, Stopped> {
    let treads = tradeoff(roof, options, area, &structure.raises(roof.system))?;
    let mut best: Option<(i64, Stiffened)> = None;
    let mut given = None;
    for raised in treads {
        let (&Relaxation::Load(raise), Some(openings)) =
            (&raised.change, raised.layout().and_then(|layout| layout.cost))
        else {
            continue;
        };
        if raise == Load::ZERO {
            given = Some(openings);
        }
        let strength = structure.cost(roof.areas[area].area, raise);
        let total = openings.millionths().saturating_add(strength.millionths());
        if best.as_ref().is_none_or(|(least, _)| total < *least) {
            best = Some((total, Stiffened { raise, strength, given, raised }));
        }
    }
    Ok(best.map(|(_, stiffened)| stiffened))
}
