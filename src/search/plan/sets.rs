//! The cheapest sets of sizes: of K sizes at most P, every area served by the cheapest layout that its set allows.
//!
//! Write d(a, i, j) for the cost of the cheapest layout of area a that is made of sizes i and j alone, i = j for one size; it
//! is never more than d(a, i, i) or d(a, j, j). A set S costs f(S) = sum over a of min over i, j in S of d(a, i, j), and a
//! price for each of its sizes.
//!
//! # The bound
//!
//! Take any numbers t(a). Let
//!
//! - W(i) = sum over a of max(0, t - d(a, i, i)), and
//! - W(i, j) = sum over a of max(0, min(t, d(a, i, i), d(a, j, j)) - d(a, i, j)).
//!
//! Then f(S) >= sum of t - sum over i in S of W(i) - sum over pairs in S of W(i, j). For an area whose minimum is above t this
//! holds since nothing less than t was claimed. Else let the minimum be attained at (i, j): what it saves against t is the
//! saving of i (or j) alone, which is one term of W(i), and what the pair saves beyond that, which is one term of W(i, j); all
//! other terms are not negative. A price for each size is taken off W(i). Which t makes the bound high is sought in `bound`.
//!
//! It is computed from regrets (`regrets`): d less the least of the area, rounded down. They are costs of the same kind,
//! monotone as d is, and no set costs less than its regrets say.
//!
//! # The enumeration
//!
//! Depth first. With a prefix C chosen, t may be lowered to t', what C already costs where that is less, and a further size l
//! saves by itself at most g(l) = sum over a of max(0, t' - least of d(a, l, l) and d(a, l, c), c in C). Two further sizes l
//! and m save at most W(l, m) beyond that: min(t', what l and m cost with C) is no more than min(t, d(l, l), d(m, m)). So with
//! r places left each further size accounts for g(l) and half of its r - 1 greatest W, its score, and the r greatest scores
//! bound what can still be saved. Sizes are tried by falling score, each with those behind it alone, so a branch is bounded
//! by its size and the r - 1 behind it; the first that cannot reach the last set kept ends the row.
//!
//! Inside the branch of l, m saves by itself at most g(m) + W(l, m): where t' is lowered by l, what m saves with C is in g(m),
//! what it saves with l is t' - d(m, m) and d(m, m) - d(l, m) at the most. By this, which costs no sum over areas, most sizes
//! are left out of the branch before its own g is computed; and pairs that take the last two places are left out by
//! g(l) + g(m) + W(l, m).
//!
//! # When it ends early
//!
//! Every branch is entered with its bound. Where the search is told to end, branches are entered but not looked into, and the
//! least of their bounds is what no set unseen is cheaper than.

use super::bound;
use super::costs::Costs;
use super::ending::Ending;
use super::first::first_sets;
use super::kept::Kept;
use super::regrets::Regrets;
use super::walk::Walk;

pub(super) use super::costs::SizeSet;

/// The best sets found, and what is known of those that were not looked at.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Found {
    /// The cheapest first; none where no set serves all areas, or none was found.
    pub(super) sets: Vec<SizeSet>,
    /// No set costs less; infinite where there is none.
    pub(super) bound: f64,
    /// Whether the search went to its end: the sets are the best, and the bound is the cost of the first.
    pub(super) finished: bool,
}

/// A search for sets, which may be asked several times: what one search finds helps the next.
pub(super) struct Search<'c, 'd> {
    costs: &'c Costs,
    price: f64,
    ending: Ending<'d>,
    regrets: Option<Regrets>,
    /// The best set of the last search.
    last: Vec<usize>,
}

impl<'c, 'd> Search<'c, 'd> {
    pub(super) fn new(costs: &'c Costs, price: f64, due: &'d (dyn Fn() -> bool + Sync)) -> Self {
        Self { costs, price, ending: Ending::new(due), regrets: None, last: Vec::new() }
    }

    /// The `keep` cheapest sets of at most `most` sizes, each of which needs all its sizes.
    pub(super) fn best(&mut self, most: usize, keep: usize) -> Found {
        let most = most.min(self.costs.sizes());
        let least: f64 = self.costs.least().iter().sum();
        if most == 0 || !least.is_finite() {
            return Found { sets: Vec::new(), bound: f64::INFINITY, finished: true };
        }
        let mut kept = Kept::new(self.costs, self.price, keep, f64::INFINITY);
        let from = if self.last.len() < most { std::mem::take(&mut self.last) } else { Vec::new() };
        first_sets(self.costs, self.price, most, &from, &mut kept, &self.ending);
        if kept.sets().is_empty() && !self.offer_any(most, &mut kept) {
            let bound = if self.ending.was_due() { least + self.price } else { f64::INFINITY };
            return Found { sets: Vec::new(), bound, finished: !self.ending.was_due() };
        }
        // Of single sizes each was tried as a first set.
        let all_tried = most == 1 && !self.ending.was_due();
        let unseen = if all_tried { f64::INFINITY } else { self.walk(most, &mut kept, least) };
        let cost = kept.sets().first().map_or(f64::INFINITY, |set| set.cost);
        self.last = kept.sets().first().map_or(Vec::new(), |set| set.sizes.clone());
        Found { sets: kept.into_sets(), bound: unseen.min(cost), finished: !self.ending.was_due() }
    }

    /// Looks for a set that serves every area, at any cost; whether there is one.
    fn offer_any(&self, most: usize, kept: &mut Kept<'_>) -> bool {
        let unserved = self.costs.unserved();
        // Less than one area without a layout.
        let mut serving = Kept::new(&unserved, 0.0, 1, 0.5);
        let regrets = Regrets::new(&unserved, 1.0);
        let all: Vec<usize> = (0..self.costs.sizes()).collect();
        let dearest = SizeSet { cost: 1.0, sizes: all[..most].to_vec() };
        let bound = bound::raised(&regrets, 0.0, most, &dearest);
        let (kept_any, ending) = (&mut serving, &self.ending);
        Walk { regrets: &regrets, price: 0.0, most, bound: &bound, kept: kept_any, ending, any: true }.run();
        let Some(set) = serving.sets().first() else { return false };
        kept.offer(&set.sizes);
        true
    }

    /// Goes through all sets that may rank; what no set left unseen is cheaper than.
    fn walk(&mut self, most: usize, kept: &mut Kept<'_>, least: f64) -> f64 {
        let reach = (kept.reach() - least).max(1.0);
        let regrets = match self.regrets.take() {
            Some(known) if known.suit(reach) => known,
            _ => Regrets::new(self.costs, reach),
        };
        let best = kept.sets()[0].clone();
        let bound = bound::raised(&regrets, self.price, most, &best);
        let (price, ending) = (self.price, &self.ending);
        let unseen = Walk { regrets: &regrets, price, most, bound: &bound, kept, ending, any: false }.run();
        self.regrets = Some(regrets);
        unseen
    }
}

#[cfg(test)]
mod tests {
    use std::sync::atomic::{AtomicU64, Ordering};

    use super::*;

    struct Dice(u64);

    impl Dice {
        fn upto(&mut self, most: u64) -> u64 {
            self.0 = self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
            (self.0 >> 33) % (most + 1)
        }
    }

    /// Every set of at most `most` sizes that needs all its sizes, by trying all.
    fn everything(costs: &Costs, price: f64, most: usize, keep: usize) -> Vec<SizeSet> {
        let mut all: Vec<SizeSet> = (1_u32..1 << costs.sizes())
            .filter(|mask| mask.count_ones() as usize <= most)
            .map(|mask| {
                let sizes: Vec<usize> = (0..costs.sizes()).filter(|size| mask >> size & 1 == 1).collect();
                SizeSet { cost: costs.total(&sizes, price), sizes }
            })
            .filter(|set| set.cost.is_finite())
            .collect();
        let needed = |set: &SizeSet| {
            set.sizes.len() == 1
                || set.sizes.iter().all(|gone| {
                    let rest: Vec<usize> = set.sizes.iter().copied().filter(|size| size != gone).collect();
                    costs.total(&rest, price) > set.cost
                })
        };
        all.retain(needed);
        all.sort_by(|a, b| {
            a.cost.total_cmp(&b.cost).then(a.sizes.len().cmp(&b.sizes.len())).then(a.sizes.cmp(&b.sizes))
        });
        all.truncate(keep);
        all
    }

    /// A table of small whole costs, so that ties are many, some pairs without a layout.
    fn table(dice: &mut Dice) -> Costs {
        let (sizes, areas) = (1 + dice.upto(7) as usize, 1 + dice.upto(9) as usize);
        let holes = dice.upto(3);
        let mut draw = |alone: f64| {
            if holes > 0 && dice.upto(4) < holes { alone } else { alone.min(4.0 + dice.upto(30) as f64) }
        };
        let single: Vec<Vec<f64>> = (0..sizes).map(|_| (0..areas).map(|_| draw(f64::INFINITY)).collect()).collect();
        let mut rows = Vec::new();
        for j in 0..sizes {
            for i in 0..j {
                rows.extend((0..areas).map(|area| draw(single[i][area].min(single[j][area]))));
            }
            rows.extend(&single[j]);
        }
        Costs::new(sizes, areas, rows)
    }

    /// Against trying everything, each number of sizes by itself and after those before it.
    #[test]
    fn the_best_sets_are_those_of_trying_everything() {
        for seed in 0..3000_u64 {
            let mut dice = Dice(seed.wrapping_mul(0x9e37_79b9) + 1);
            let costs = table(&mut dice);
            let (price, most, keep) = (dice.upto(12) as f64, 1 + dice.upto(4) as usize, 1 + dice.upto(5) as usize);
            let mut search = Search::new(&costs, price, &|| false);
            for most in if dice.upto(1) == 0 { most..=most } else { 1..=most } {
                let found = search.best(most, keep);
                assert_eq!(found.sets, everything(&costs, price, most, keep), "seed {seed}");
                let cost = found.sets.first().map_or(f64::INFINITY, |set| set.cost);
                assert!(found.finished && found.bound == cost, "seed {seed}");
            }
        }
    }

    /// Told to end after any number of questions, what was found is no better than the best, and the bound no higher.
    #[test]
    fn a_search_that_ends_early_says_what_it_may_have_missed() {
        let (mut ended, mut told_more) = (0, 0);
        for seed in 0..2000_u64 {
            let mut dice = Dice(seed.wrapping_mul(0x9e37_79b9) + 7);
            let costs = table(&mut dice);
            let (price, most) = (dice.upto(12) as f64, 2 + dice.upto(3) as usize);
            let questions = dice.upto(12);
            let asked = AtomicU64::new(0);
            let due = || asked.fetch_add(1, Ordering::Relaxed) >= questions;
            let found = Search::new(&costs, price, &due).best(most, 1);
            let best = everything(&costs, price, most, 1).first().map_or(f64::INFINITY, |set| set.cost);
            let cost = found.sets.first().map_or(f64::INFINITY, |set| set.cost);
            assert!(found.bound <= best && best <= cost, "seed {seed}: {} <= {best} <= {cost}", found.bound);
            assert!(!found.finished || (found.bound == best && best == cost), "seed {seed}");
            let least: f64 = costs.least().iter().sum();
            ended += usize::from(!found.finished);
            told_more += usize::from(!found.finished && found.bound > least + price);
        }
        assert!(ended > 300 && told_more > 50, "{ended} ended early, {told_more} with a bound worth telling");
    }
}
