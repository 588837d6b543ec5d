//! What pairs of sizes cost above the least of each area, in coarse whole units: what the bounds are computed from.
//!
//! A regret is rounded down, so a bound made of regrets stays one; the exact costs decide about every set that is left. The
//! unit is a power of two, so that rounding is exact, and so fine that the sum over all areas just fits 32 bits: small numbers
//! lie close together, and the compiler adds several at once. A pair without a layout, or dearer than any set that still
//! ranks could afford, has the greatest regret: one such area shuts a set out.

use super::costs::{Costs, place};

/// Regrets of every pair of sizes in every area.
pub(super) struct Regrets {
    sizes: usize,
    areas: usize,
    unit: f64,
    /// Sum of what each area costs at least.
    least: f64,
    /// Areas innermost; pairs in triangular order.
    pairs: Vec<i32>,
    /// The regret of what no set can afford.
    most: i32,
}

impl Regrets {
    /// For sets whose regrets add up to `most` at the most; every area must have a layout.
    pub(super) fn new(costs: &Costs, most: f64) -> Self {
        let unit = unit(costs.areas(), most);
        let per_unit = unit.recip();
        let shut_out = (most * per_unit).floor() + 1.0;
        let mut pairs = Vec::with_capacity(place(0, costs.sizes()) * costs.areas());
        for row in costs.rows() {
            pairs.extend(
                row.iter().zip(costs.least()).map(|(cost, least)| ((cost - least) * per_unit).min(shut_out) as i32),
            );
        }
        let least = costs.least().iter().sum();
        Self { sizes: costs.sizes(), areas: costs.areas(), unit, least, pairs, most: shut_out as i32 }
    }

    /// Whether they are fine enough, and reach far enough, for sets of such regrets.
    pub(super) fn suit(&self, most: f64) -> bool {
        unit(self.areas, most) >= self.unit / 4.0 && f64::from(self.most) * self.unit > most
    }

    pub(super) fn sizes(&self) -> usize {
        self.sizes
    }

    pub(super) fn areas(&self) -> usize {
        self.areas
    }

    /// The regret of what no set can afford.
    pub(super) fn most(&self) -> i32 {
        self.most
    }

    /// The least cost of what has such regrets in all.
    pub(super) fn cost(&self, regrets: i32) -> f64 {
        self.least + self.money(regrets)
    }

    /// A sum of regrets in the unit of costs.
    pub(super) fn money(&self, regrets: i32) -> f64 {
        self.unit * f64::from(regrets)
    }

    /// What two sizes regret in each area; one size where they are the same.
    pub(super) fn of(&self, i: usize, j: usize) -> &[i32] {
        let at = place(i, j) * self.areas;
        &self.pairs[at..at + self.areas]
    }
}

/// The least power of two in which regrets up to `most` can be added over all areas, twice over.
fn unit(areas: usize, most: f64) -> f64 {
    let levels = f64::from(i32::MAX / 2) / areas.max(1) as f64 - 2.0;
    let mut unit = 1.0;
    while most / unit > levels {
        unit *= 2.0;
    }
    unit
}

pub(super) fn sum(regrets: &[i32]) -> i32 {
    regrets.iter().sum()
}

/// Sum of what is saved against `from`.
pub(super) fn saved(from: &[i32], regrets: &[i32]) -> i32 {
    from.iter().zip(regrets).map(|(from, regret)| (from - regret).max(0)).sum()
}

/// Writes the lesser of two lists, number by number.
pub(super) fn lesser_into(into: &mut Vec<i32>, a: &[i32], b: &[i32]) {
    into.extend(a.iter().zip(b).map(|(a, b)| a.min(b)));
}
