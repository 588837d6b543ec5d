//! What more load on the roof saves in openings: the least cost of an area, and of a plan, against the load limit.
//!
//! The load limits of all cases are raised alike; everything else stays. Raising takes no layout away, so the least cost only
//! falls, in treads. The cheapest layout at one raise stays the cheapest down to where its own load reaches the limit, as
//! whatever is cheaper below would be cheaper above: one search gives a tread, and the walk goes on one step under its end.

use std::ops::RangeInclusive;

use rayon::prelude::*;

use crate::device::Size;
use crate::roof::{Catchment, Roof};
use crate::units::{Load, Money, System};

use super::cure::{Cure, Relaxation, alone, relaxed};
use super::plan::{Asked, plan};
use super::rank::Criterion;
use super::watch::{Stopped, Watch};
use super::{Options, size_area};

/// Raises of the load limit that are looked at: whole steps.
#[derive(Clone, Debug, PartialEq)]
pub struct Raises {
    /// One step.
    pub step: Load,
    /// The steps from the least to the greatest; those under zero lower the limit.
    pub steps: RangeInclusive<i32>,
}

impl Raises {
    /// The whole steps from `down` under the limit to `up` over it.
    pub fn between(step: Load, down: Load, up: Load) -> Self {
        // A whole number of steps is one, whatever the last bit of a quotient says.
        let steps = |of: Load| (of.pa() / step.pa() + 1e-9).floor() as i32;
        Self { step, steps: -steps(down)..=steps(up) }
    }

    /// The step to which treads are told: 0.01 psf, or 1 Pa.
    pub fn fine(system: System) -> Load {
        if system == System::Us { Load::psf(0.01) } else { Load::from_pa(1.0) }
    }

    /// The step by which a plan is followed where none is given: 1 psf, or 50 Pa.
    pub fn coarse(system: System) -> Load {
        if system == System::Us { Load::psf(1.0) } else { Load::from_pa(50.0) }
    }

    /// The raises, from the least on.
    pub(super) fn each(&self) -> impl Iterator<Item = Load> {
        self.steps.clone().map(|step| self.load(step))
    }

    fn load(&self, step: i32) -> Load {
        self.step * f64::from(step)
    }
}

/// The least cost of a plan with every load limit raised.
#[derive(Clone, Debug)]
pub struct PlanAt {
    /// The raise.
    pub raise: Load,
    /// Whether that was found out; else the watch ended the search before.
    pub finished: bool,
    /// The cost of the plan; none where there is none.
    pub cost: Option<Money>,
    /// Its sizes.
    pub sizes: Vec<Size>,
}

/// The treads of an area's least cost, each as the least raise that has it, rising; empty where even the greatest raise has no
/// layout, or a device has no price. The layout of each is the cheapest there, and of those the one with less load.
///
/// # Errors
/// [`Stopped`] where the watch ended the walk.
pub fn tradeoff(roof: &Roof, options: &Options, area: usize, raises: &Raises) -> Result<Vec<Cure>, Stopped> {
    let alone = alone(roof, area);
    let options = Options { rank_by: vec![Criterion::Cost, Criterion::Load], keep: 1, fold: true, ..options.clone() };
    let at = |step: i32| {
        let change = Relaxation::Load(raises.load(step));
        let (roof, options) = relaxed(&alone, &options, &change);
        Cure { change, roof, options }
    };
    // The least cost at a step, and the least step at which the limits hold the load of its layout.
    let least = |step: i32| {
        let changed = at(step);
        let outcome = size_area(&changed.roof, 0, &changed.options);
        if options.watch.is_due() {
            return Err(Stopped);
        }
        let Some(layout) = outcome.layouts().first() else { return Ok(None) };
        let loads = layout.states.iter().zip(&alone.areas[0].limits);
        let over = loads.filter_map(|(state, limits)| Some((state.water?.load - limits.load?).pa()));
        let steps = over.map(|over| (over / raises.step.pa() - 1e-9).ceil()).fold(f64::from(i32::MIN), f64::max);
        Ok(layout.cost.map(|cost| (cost, steps as i32)))
    };
    let (first, mut step) = (*raises.steps.start(), *raises.steps.end());
    let mut treads: Vec<(i32, Money)> = Vec::new();
    while let Some((cost, holds)) = least(step)? {
        let mut low = holds.clamp(first, step);
        // A level is kept on whole nanometres: the load may reach the limit a step higher.
        while low < step && least(low)?.is_none_or(|(there, _)| there != cost) {
            low += 1;
        }
        match treads.last_mut() {
            Some(last) if last.1 == cost => last.0 = low,
            _ => treads.push((low, cost)),
        }
        if low == first {
            break;
        }
        step = low - 1;
    }
    // Each was searched before the watch could end the walk: it may be again.
    let searched = |step| {
        let tread = at(step);
        Cure { options: Options { watch: Watch::default(), ..tread.options }, ..tread }
    };
    Ok(treads.iter().rev().map(|&(step, _)| searched(step)).collect())
}

/// The roof with every load limit raised.
pub(super) fn raised_by(roof: &Roof, raise: Load) -> Roof {
    let mut roof = roof.clone();
    for limits in roof.areas.iter_mut().flat_map(Catchment::every_limit) {
        limits.load = limits.load.map(|load| load + raise);
    }
    roof
}

/// The cheapest plan at every step; none where a device that may stand has no price.
pub fn plan_tradeoff(
    roof: &Roof,
    options: &Options,
    asked: Asked,
    areas: &[usize],
    raises: &Raises,
) -> Option<Vec<PlanAt>> {
    let options = Options { keep: 1, ..options.clone() };
    let steps: Vec<i32> = raises.steps.clone().collect();
    options.watch.expect(steps.len());
    let at = |&step: &i32| {
        let raise = raises.load(step);
        let roof = raised_by(roof, raise);
        let plans = plan(&roof, &options, asked, areas)?;
        options.watch.advance();
        let first = plans.plans.first();
        let sizes = first.map_or(Vec::new(), |plan| plan.sizes.iter().map(|&size| size.clone()).collect());
        let first = first.filter(|_| plans.finished);
        Some(PlanAt { raise, finished: plans.finished, cost: first.map(|plan| plan.cost), sizes })
    };
    steps.par_iter().map(at).collect()
}
