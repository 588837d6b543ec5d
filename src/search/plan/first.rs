//! Good sets to begin with: sizes added one by one, each where it helps most, then exchanged while that helps.
//!
//! Nothing here is proven; the better the sets, the less the enumeration has to look at.

use super::costs::{Costs, lower, sum};
use super::ending::Ending;
use super::kept::Kept;

/// How good a set is: areas without a layout, then what the others cost. Less is better.
type Worth = (usize, f64);

fn less(a: Worth, b: Worth) -> bool {
    a.0.cmp(&b.0).then(a.1.total_cmp(&b.1)).is_lt()
}

/// Offers good sets of at most `most` sizes, beginning from a set of fewer.
pub(super) fn first_sets<'c>(
    costs: &'c Costs,
    price: f64,
    most: usize,
    from: &[usize],
    kept: &mut Kept<'c>,
    ending: &Ending<'_>,
) {
    let mut first = First { costs, price, set: from.to_vec(), worth: (usize::MAX, f64::INFINITY), kept };
    while first.set.len() < most && !ending.is_due() {
        if !first.add() {
            return;
        }
        while first.exchange() && !ending.is_due() {}
    }
}

struct First<'f, 'c> {
    costs: &'c Costs,
    price: f64,
    set: Vec<usize>,
    worth: Worth,
    kept: &'f mut Kept<'c>,
}

impl First<'_, '_> {
    /// The best size beside some others, and what the set is worth with it.
    fn best_beside(&mut self, others: &[usize]) -> Option<(Worth, usize)> {
        let rest = self.costs.by_area(others);
        let mut best: Option<(Worth, usize)> = None;
        let mut with = Vec::with_capacity(others.len() + 1);
        let mut areas = rest.clone();
        for size in (0..self.costs.sizes()).filter(|size| !others.contains(size)) {
            areas.copy_from_slice(&rest);
            for &other in others.iter().chain([&size]) {
                lower(&mut areas, self.costs.of(size, other));
            }
            let worth = self.worth(&areas, others.len() + 1);
            if worth.0 == 0 && worth.1 <= self.kept.threshold() {
                with.clear();
                with.extend_from_slice(others);
                with.push(size);
                self.kept.offer(&with);
            }
            if best.is_none_or(|(known, _)| less(worth, known)) {
                best = Some((worth, size));
            }
        }
        best
    }

    fn worth(&self, areas: &[f64], sizes: usize) -> Worth {
        let all = sum(areas);
        let of_sizes = self.price * sizes as f64;
        if all.is_finite() {
            return (0, all + of_sizes);
        }
        let served: Vec<f64> = areas.iter().copied().filter(|cost| cost.is_finite()).collect();
        (areas.len() - served.len(), sum(&served) + of_sizes)
    }

    /// Adds the size that helps most; false where none does.
    fn add(&mut self) -> bool {
        let others = self.set.clone();
        let Some((worth, size)) = self.best_beside(&others) else { return false };
        if self.worth.0 == 0 && !less(worth, self.worth) {
            return false;
        }
        self.set.push(size);
        self.worth = worth;
        true
    }

    /// Puts the best size in each place; whether that made the set better.
    fn exchange(&mut self) -> bool {
        let before = self.worth;
        for place in 0..self.set.len() {
            let mut others = self.set.clone();
            others.remove(place);
            if let Some((worth, size)) = self.best_beside(&others)
                && less(worth, self.worth)
            {
                self.set[place] = size;
                self.worth = worth;
            }
        }
        less(self.worth, before)
    }
}
