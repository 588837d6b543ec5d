//! The best sets met so far.

use super::costs::{Costs, SizeSet};

/// The best sets kept so far, the cheapest first; of equal cost the one of fewer sizes, then of lesser indices.
pub(super) struct Kept<'c> {
    costs: &'c Costs,
    price: f64,
    keep: usize,
    sets: Vec<SizeSet>,
    /// Dearer sets are of no use, however few are kept.
    limit: f64,
}

impl<'c> Kept<'c> {
    pub(super) fn new(costs: &'c Costs, price: f64, keep: usize, limit: f64) -> Self {
        Self { costs, price, keep, sets: Vec::new(), limit }
    }

    /// The cost above which no set ranks.
    pub(super) fn threshold(&self) -> f64 {
        self.sets.get(self.keep - 1).map_or(self.limit, |set| set.cost.min(self.limit))
    }

    /// Up to which cost sets are told apart: the threshold, or where fewer are kept yet, well above those.
    pub(super) fn reach(&self) -> f64 {
        let threshold = self.threshold();
        let dearest = self.sets.last().map_or(0.0, |set| set.cost);
        if threshold.is_finite() { threshold } else { 2.0 * dearest }
    }

    pub(super) fn sets(&self) -> &[SizeSet] {
        &self.sets
    }

    pub(super) fn into_sets(self) -> Vec<SizeSet> {
        self.sets
    }

    /// Takes a set in if it ranks and needs each of its sizes: one that is as good without is another set.
    pub(super) fn offer(&mut self, set: &[usize]) {
        let cost = self.costs.total(set, self.price);
        if !cost.is_finite() || cost > self.threshold() {
            return;
        }
        let mut sizes = set.to_vec();
        sizes.sort_unstable();
        let order = |other: &SizeSet| {
            other.cost.total_cmp(&cost).then(other.sizes.len().cmp(&sizes.len())).then_with(|| other.sizes.cmp(&sizes))
        };
        let place = self.sets.partition_point(|other| order(other).is_lt());
        let known = self.sets.get(place).is_some_and(|other| other.sizes == sizes);
        if known || place >= self.keep {
            return;
        }
        let without = |gone: usize| {
            let rest: Vec<usize> = sizes.iter().copied().filter(|&size| size != gone).collect();
            !rest.is_empty() && self.costs.total(&rest, self.price) <= cost
        };
        if sizes.iter().any(|&size| without(size)) {
            return;
        }
        self.sets.insert(place, SizeSet { cost, sizes });
        self.sets.truncate(self.keep);
    }
}
