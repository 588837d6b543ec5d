//! What one device of each size carries under the depths of layouts that were kept.

use rustc_hash::FxHashMap;

use crate::units::Length;

use super::super::problem::{Problem, Table};

/// Tables by the depth, in nanometres, that the water must stay under.
#[derive(Default)]
pub(super) struct Screens {
    tables: FxHashMap<i64, Table>,
}

/// Tables that are held; when they are more all are forgotten, and made again as they are asked for.
const HELD: usize = 4096;

impl Screens {
    /// Whether groups may carry every case's demand with the water nowhere as deep as `depth` nanometres: never no where
    /// they do.
    pub(super) fn may_carry_under(&mut self, problem: &Problem<'_>, groups: &[(usize, u32)], depth: i64) -> bool {
        if self.tables.len() >= HELD && !self.tables.contains_key(&depth) {
            self.tables.clear();
        }
        let table = self.tables.entry(depth).or_insert_with(|| under(problem, depth));
        problem.carries(table, groups)
    }
}

/// What one of each candidate carries with the water just under a depth.
fn under(problem: &Problem<'_>, depth: i64) -> Table {
    // Depths round to the nearest nanometre: half of one less is the next; a quarter leaves room for the last bits.
    let depth = Length::from_m((depth as f64 - 0.25) / 1e9);
    let any = Length::from_m(f64::INFINITY);
    let levels: Vec<_> = problem.situations.iter().map(|here| here.level_for(depth, any)).collect();
    problem.table(&levels, |candidate| Some(candidate.lowest()))
}
