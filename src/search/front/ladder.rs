//! What layouts carry at a depth: first at the next of a few rungs above it, by a table, then at the depth itself.

use std::cell::OnceCell;

use crate::roof::layout::{Group, pool};
use crate::units::Length;

use super::super::problem::{Problem, Table};

/// Rungs of depths from the lowest sill to the deepest water that a limit allows, each with its table once it is asked for.
pub(super) struct Ladder {
    bottom: f64,
    step: f64,
    rungs: Vec<OnceCell<Table>>,
}

/// Rungs between the lowest sill and the deepest water: on most roofs a fifth of a millimetre apart.
const RUNGS: usize = 512;

impl Ladder {
    pub(super) fn new(problem: &Problem<'_>) -> Self {
        let sills = problem.candidates.iter().map(|candidate| candidate.lowest().m());
        let bottom = sills.fold(f64::INFINITY, f64::min);
        let deepest = problem.situations.iter().zip(&problem.allowed).map(|(here, &level)| here.depth(level).m());
        let step = (deepest.fold(f64::NEG_INFINITY, f64::max) - bottom) / RUNGS as f64;
        // Without any limit there is no deepest water, and where none passes a sill no layout.
        let rungs = if step.is_finite() && step > 0.0 { RUNGS + 1 } else { 0 };
        Self { bottom, step, rungs: vec![OnceCell::new(); rungs] }
    }

    /// Whether groups may carry every case's demand with the water nowhere as deep as `depth` nanometres: never no
    /// where they do.
    pub(super) fn may_carry_under(&self, problem: &Problem<'_>, groups: &[(usize, u32)], depth: i64) -> bool {
        // Depths round to the nearest nanometre: half of one less is the next; a quarter leaves room for the last bits.
        let under = (depth as f64 - 0.25) / 1e9;
        self.rung(problem, under).is_none_or(|table| problem.carries(table, groups)) && carry_at(problem, groups, under)
    }

    /// The table of the first rung not under a depth.
    fn rung(&self, problem: &Problem<'_>, depth: f64) -> Option<&Table> {
        let place = ((depth - self.bottom) / self.step).ceil().max(0.0);
        let at = |place: f64| self.bottom + self.step * place;
        let place = if at(place) < depth { place + 1.0 } else { place };
        if !place.is_finite() || place >= self.rungs.len() as f64 {
            return None;
        }
        let table = || {
            let depth = Length::from_m(at(place));
            let levels: Vec<_> = problem.situations.iter().map(|here| here.level_for(depth, NONE)).collect();
            problem.table(&levels, |candidate| Some(candidate.lowest()))
        };
        Some(self.rungs[place as usize].get_or_init(table))
    }
}

/// Whether groups carry every case's demand at a depth; along a channel, where that takes as long as solving for it, yes.
fn carry_at(problem: &Problem<'_>, groups: &[(usize, u32)], depth: f64) -> bool {
    let mut stand: [Option<Group<'_>>; crate::roof::MOST_GROUPS] = Default::default();
    for (slot, &(index, count)) in stand.iter_mut().zip(groups) {
        let candidate = &problem.candidates[index];
        *slot = Some(Group { size: candidate.size, count, set_height: candidate.lowest() });
    }
    let stand: Vec<_> = stand.into_iter().flatten().collect();
    problem.situations.iter().all(|situation| {
        situation.channel.is_some() || pool(&stand, situation).capacity(Length::from_m(depth)) >= situation.demand
    })
}

/// No height at all.
const NONE: Length = Length::from_m(f64::INFINITY);
