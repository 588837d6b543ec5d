//! The cheapest sets of sizes: of K sizes at most P, every area served by the cheapest layout that its set allows.
//!
//! Write d(a, i, j) for the cost of the cheapest layout of area a that is made of sizes i and j alone, i = j for one size; it is
//! never more than d(a, i, i) or d(a, j, j). A set S costs f(S) = sum over a of min over i, j in S of d(a, i, j), and a price
//! for each of its sizes.
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
//! other terms are not negative. A price for each size is taken off W(i). The bound is raised over t by a few subgradient
//! steps; any t is valid, so their number is a matter of speed alone.
//!
//! # The enumeration
//!
//! Depth first in a fixed order of sizes. With a prefix chosen, t may be lowered to what the prefix already costs in each area,
//! and a further size l saves at most what the cheapest layout of l with the prefix saves; two further sizes save at most their
//! W(i, j) more, half of which is put to the account of each. So with r places left, the r greatest of (saving with the prefix
//! + half of the r - 1 greatest W) bound what can still be saved. A branch is left where that cannot reach the last set kept.
//!
//! Costs are whole numbers held in floats, sums of them exact below 2^53: the order of adding does not matter, and the answer
//! does not depend on it.

/// The cost of every pair of sizes in every area.
#[derive(Clone, Debug)]
pub(super) struct Costs {
    sizes: usize,
    areas: usize,
    /// Areas innermost; pairs in triangular order, the lesser index first. Infinite where the pair has no layout.
    pairs: Vec<f64>,
}

/// A set of sizes, rising, and what it costs with the price of its sizes.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct SizeSet {
    pub(super) cost: f64,
    pub(super) sizes: Vec<usize>,
}

impl Costs {
    /// From a function of the lesser size, the greater size and the area.
    pub(super) fn new(sizes: usize, areas: usize, cost: impl Fn(usize, usize) -> Vec<f64>) -> Self {
        let mut pairs = Vec::with_capacity(sizes * (sizes + 1) / 2 * areas);
        for second in 0..sizes {
            for first in 0..=second {
                pairs.extend(cost(first, second));
            }
        }
        Self { sizes, areas, pairs }
    }

    fn of(&self, i: usize, j: usize) -> &[f64] {
        let (first, second) = if i < j { (i, j) } else { (j, i) };
        let at = (second * (second + 1) / 2 + first) * self.areas;
        &self.pairs[at..at + self.areas]
    }

    /// What a set costs in each area.
    pub(super) fn by_area(&self, set: &[usize]) -> Vec<f64> {
        let mut costs = vec![f64::INFINITY; self.areas];
        for (place, &i) in set.iter().enumerate() {
            for &j in &set[place..] {
                lower(&mut costs, self.of(i, j));
            }
        }
        costs
    }

    fn total(&self, set: &[usize], price: f64) -> f64 {
        sum(&self.by_area(set)) + price * set.len() as f64
    }
}

/// Lowers each number to that of another list.
fn lower(costs: &mut [f64], other: &[f64]) {
    for (cost, &other) in costs.iter_mut().zip(other) {
        *cost = cost.min(other);
    }
}

/// A sum in eight strands, which the compiler can run side by side; exact, so that their number changes nothing.
fn sum_of(length: usize, term: impl Fn(usize) -> f64) -> f64 {
    let mut strands = [0.0; 8];
    let whole = length - length % 8;
    for start in (0..whole).step_by(8) {
        for (lane, strand) in strands.iter_mut().enumerate() {
            *strand += term(start + lane);
        }
    }
    let rest: f64 = (whole..length).map(term).sum();
    strands.iter().sum::<f64>() + rest
}

fn sum(costs: &[f64]) -> f64 {
    sum_of(costs.len(), |area| costs[area])
}

/// Sum of what is saved against `from`.
fn saved(from: &[f64], costs: &[f64]) -> f64 {
    let (from, costs) = (&from[..costs.len()], costs);
    sum_of(costs.len(), |area| (from[area] - costs[area]).max(0.0))
}

/// The best sets kept so far, the cheapest first; of equal cost the one of fewer sizes, then of lesser indices.
struct Kept {
    keep: usize,
    sets: Vec<SizeSet>,
}

impl Kept {
    fn threshold(&self) -> f64 {
        self.sets.get(self.keep - 1).map_or(f64::INFINITY, |set| set.cost)
    }

    /// Takes a set of a known cost in if it ranks and needs each of its sizes: one that is as good without is another set.
    fn offer(&mut self, costs: &Costs, price: f64, set: &[usize], cost: f64) {
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
            !rest.is_empty() && costs.total(&rest, price) <= cost
        };
        if sizes.iter().any(|&size| without(size)) {
            return;
        }
        self.sets.insert(place, SizeSet { cost, sizes });
        self.sets.truncate(self.keep);
    }
}

/// The `keep` cheapest sets of at most `most` sizes, each of which needs all its sizes; empty where no set serves all areas.
pub(super) fn best(costs: &Costs, price: f64, most: usize, keep: usize) -> Vec<SizeSet> {
    let most = most.min(costs.sizes);
    let mut kept = Kept { keep, sets: Vec::new() };
    if most == 0 {
        return Vec::new();
    }
    first_sets(costs, price, most, &mut kept);
    let bound = Bound::raised(costs, price, most, &kept);
    let mut walk = Walk { costs, price, most, bound, kept, chosen: Vec::new() };
    let near: Vec<Vec<f64>> = (0..costs.sizes).map(|size| costs.of(size, size).to_vec()).collect();
    walk.extend(0, &vec![f64::INFINITY; costs.areas], &near);
    walk.kept.sets
}

/// Good sets to begin with: sizes added one by one, each where it helps most, then exchanged while that helps.
fn first_sets(costs: &Costs, price: f64, most: usize, kept: &mut Kept) {
    let rank = |set: &[usize]| {
        let by_area = costs.by_area(set);
        let served = by_area.iter().filter(|cost| cost.is_finite());
        let unserved = costs.areas - served.clone().count();
        (unserved, served.sum::<f64>() + price * set.len() as f64)
    };
    let less = |a: &(usize, f64), b: &(usize, f64)| a.0.cmp(&b.0).then(a.1.total_cmp(&b.1)).is_lt();
    let mut set: Vec<usize> = Vec::new();
    for _ in 0..most {
        let mut best: Option<((usize, f64), usize)> = None;
        for size in 0..costs.sizes {
            if set.contains(&size) {
                continue;
            }
            set.push(size);
            let ranked = rank(&set);
            if ranked.0 == 0 {
                kept.offer(costs, price, &set, ranked.1);
            }
            if best.as_ref().is_none_or(|(known, _)| less(&ranked, known)) {
                best = Some((ranked, size));
            }
            set.pop();
        }
        let Some((_, size)) = best else { break };
        set.push(size);
        exchange(costs, price, &mut set, kept, &rank, &less);
    }
}

fn exchange(
    costs: &Costs,
    price: f64,
    set: &mut [usize],
    kept: &mut Kept,
    rank: &impl Fn(&[usize]) -> (usize, f64),
    less: &impl Fn(&(usize, f64), &(usize, f64)) -> bool,
) {
    let mut best = rank(set);
    loop {
        let mut better = false;
        for place in 0..set.len() {
            for size in 0..costs.sizes {
                if set.contains(&size) {
                    continue;
                }
                let before = std::mem::replace(&mut set[place], size);
                let ranked = rank(set);
                if ranked.0 == 0 {
                    kept.offer(costs, price, set, ranked.1);
                }
                if less(&ranked, &best) {
                    best = ranked;
                    better = true;
                } else {
                    set[place] = before;
                }
            }
        }
        if !better {
            return;
        }
    }
}

/// Numbers t, and what they make of the bound.
struct Bound {
    t: Vec<f64>,
    /// Half of the greatest W(i, .) of a size with so many others, by their number.
    halves: Vec<Vec<f64>>,
    /// Sizes in the order in which they are tried, the heaviest first.
    order: Vec<usize>,
}

/// Subgradient steps on the bound; a few do, since enumeration closes what they leave faster.
const STEPS: usize = 16;

impl Bound {
    /// The bound, raised from the first sets' costs.
    fn raised(costs: &Costs, price: f64, most: usize, kept: &Kept) -> Self {
        let start = kept.sets.first().map(|set| costs.by_area(&set.sizes));
        // Where no set is known that serves all, twice the dearest layout stands for none.
        let dearest = costs.pairs.iter().copied().filter(|cost| cost.is_finite()).fold(0.0, f64::max);
        let mut t = start.unwrap_or_else(|| vec![2.0 * dearest; costs.areas]);
        let target = kept.sets.first().map_or(f64::INFINITY, |set| set.cost);
        let mut best: Option<(f64, Vec<f64>)> = None;
        let mut pace = 0.8;
        for _ in 0..STEPS {
            let (singles, pairs) = weights(costs, &t, price);
            let set = heaviest(&singles, &pairs, costs.sizes, most);
            let value = sum(&t) - weight(&singles, &pairs, costs.sizes, &set);
            if best.as_ref().is_none_or(|(known, _)| value > *known) {
                best = Some((value, t.clone()));
            } else {
                pace *= 0.7;
            }
            if !target.is_finite() || value >= target {
                break;
            }
            let slope: Vec<f64> = (0..costs.areas).map(|area| slope(costs, &t, &set, area)).collect();
            let length = sum_of(slope.len(), |area| slope[area] * slope[area]);
            if length == 0.0 {
                break;
            }
            let step = pace * (target - value) / length;
            for (t, slope) in t.iter_mut().zip(&slope) {
                *t = (*t + step * slope).round().max(0.0);
            }
        }
        let t = best.map_or(t, |(_, t)| t);
        let (singles, pairs) = weights(costs, &t, price);
        let mut order: Vec<usize> = (0..costs.sizes).collect();
        order.sort_by(|&a, &b| singles[b].total_cmp(&singles[a]).then(a.cmp(&b)));
        let halves =
            (0..costs.sizes).map(|size| halves(&pairs[size * costs.sizes..(size + 1) * costs.sizes], most)).collect();
        Self { t, halves, order }
    }
}

/// Half of the sum of the greatest weights, by how many they are: none, one, and so on.
fn halves(weights: &[f64], most: usize) -> Vec<f64> {
    let mut greatest = weights.to_vec();
    greatest.sort_by(|a, b| b.total_cmp(a));
    let mut sums = vec![0.0];
    for weight in greatest.iter().take(most) {
        sums.push(sums[sums.len() - 1] + weight / 2.0);
    }
    sums.resize(most + 1, sums[sums.len() - 1]);
    sums
}

/// How the bound changes with t(a): one less the savings that grow with it.
fn slope(costs: &Costs, t: &[f64], set: &[usize], area: usize) -> f64 {
    let t = t[area];
    let mut slope = 1.0;
    for (place, &i) in set.iter().enumerate() {
        let own = costs.of(i, i)[area];
        slope -= f64::from(u8::from(own < t));
        for &j in &set[place + 1..] {
            let alone = own.min(costs.of(j, j)[area]);
            slope -= f64::from(u8::from(t <= alone && costs.of(i, j)[area] < t));
        }
    }
    slope
}

/// W(i) less the price, and W(i, j).
fn weights(costs: &Costs, t: &[f64], price: f64) -> (Vec<f64>, Vec<f64>) {
    let sizes = costs.sizes;
    let singles = (0..sizes).map(|size| saved(t, costs.of(size, size)) - price).collect();
    let mut pairs = vec![0.0; sizes * sizes];
    for i in 0..sizes {
        for j in i + 1..sizes {
            let (a, b, both) = (costs.of(i, i), costs.of(j, j), costs.of(i, j));
            let (a, b, t) = (&a[..both.len()], &b[..both.len()], &t[..both.len()]);
            let weight = sum_of(both.len(), |area| (t[area].min(a[area]).min(b[area]) - both[area]).max(0.0));
            pairs[i * sizes + j] = weight;
            pairs[j * sizes + i] = weight;
        }
    }
    (singles, pairs)
}

fn weight(singles: &[f64], pairs: &[f64], sizes: usize, set: &[usize]) -> f64 {
    let mut total = 0.0;
    for (place, &i) in set.iter().enumerate() {
        total += singles[i];
        total += set[place + 1..].iter().map(|&j| pairs[i * sizes + j]).sum::<f64>();
    }
    total
}

/// A heavy set: sizes added where they weigh most. It need not be the heaviest, since the bound holds whatever it is.
fn heaviest(singles: &[f64], pairs: &[f64], sizes: usize, most: usize) -> Vec<usize> {
    let mut set: Vec<usize> = Vec::new();
    while set.len() < most {
        let gain = |size: usize| singles[size] + set.iter().map(|&other| pairs[size * sizes + other]).sum::<f64>();
        let next = (0..sizes).filter(|size| !set.contains(size)).max_by(|&a, &b| gain(a).total_cmp(&gain(b)));
        match next {
            Some(next) if gain(next) > 0.0 => set.push(next),
            _ => break,
        }
    }
    set
}

struct Walk<'c> {
    costs: &'c Costs,
    price: f64,
    most: usize,
    bound: Bound,
    kept: Kept,
    chosen: Vec<usize>,
}

impl Walk<'_> {
    /// Extends the sets that begin with the sizes chosen, by sizes from a place of the order on.
    ///
    /// `cost` is what the chosen cost in each area, `near` what each size costs there with the chosen beside it.
    fn extend(&mut self, from: usize, cost: &[f64], near: &[Vec<f64>]) {
        let left = self.most - self.chosen.len();
        // What the chosen cost already is a valid t, and a better one.
        let t: Vec<f64> = self.bound.t.iter().zip(cost).map(|(t, cost)| t.min(*cost)).collect();
        let base = sum(&t) + self.price * self.chosen.len() as f64;
        let rest = &self.bound.order[from..];
        let gains: Vec<f64> =
            rest.iter().map(|&size| saved(&t, &near[size]) - self.price + self.bound.halves[size][left - 1]).collect();
        let mut greatest: Vec<f64> = gains.clone();
        greatest.sort_by(|a, b| b.total_cmp(a));
        // The greatest that may join one size: of the left - 1 others.
        let others: f64 = greatest.iter().take(left - 1).map(|gain| gain.max(0.0)).sum();
        let rest = rest.to_vec();
        for (place, &size) in rest.iter().enumerate() {
            if base - gains[place] - others > self.kept.threshold() {
                continue;
            }
            self.chosen.push(size);
            let total = sum_of(cost.len(), |area| cost[area].min(near[size][area]));
            let total = total + self.price * self.chosen.len() as f64;
            self.kept.offer(self.costs, self.price, &self.chosen, total);
            if left > 1 {
                let mut cost = cost.to_vec();
                lower(&mut cost, &near[size]);
                let mut nearer = near.to_vec();
                for &other in &rest[place + 1..] {
                    lower(&mut nearer[other], self.costs.of(size, other));
                }
                self.extend(from + place + 1, &cost, &nearer);
            }
            self.chosen.pop();
        }
    }
}

#[cfg(test)]
mod tests {
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
        let mut all: Vec<SizeSet> = (1_u32..1 << costs.sizes)
            .filter(|mask| mask.count_ones() as usize <= most)
            .map(|mask| {
                let sizes: Vec<usize> = (0..costs.sizes).filter(|size| mask >> size & 1 == 1).collect();
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

    /// Random tables of small whole costs, so that ties are many, some pairs without a layout: against trying everything.
    #[test]
    fn the_best_sets_are_those_of_trying_everything() {
        for seed in 0..3000_u64 {
            let mut dice = Dice(seed.wrapping_mul(0x9e37_79b9) + 1);
            let (sizes, areas) = (1 + dice.upto(7) as usize, 1 + dice.upto(9) as usize);
            let (price, most, keep) = (dice.upto(12) as f64, 1 + dice.upto(4) as usize, 1 + dice.upto(5) as usize);
            let holes = dice.upto(3);
            let mut draw = |alone: f64| {
                if holes > 0 && dice.upto(4) < holes { alone } else { alone.min(4.0 + dice.upto(30) as f64) }
            };
            let single: Vec<Vec<f64>> = (0..sizes).map(|_| (0..areas).map(|_| draw(f64::INFINITY)).collect()).collect();
            let mut pair = std::collections::HashMap::new();
            for j in 0..sizes {
                for i in 0..j {
                    let both: Vec<f64> = (0..areas).map(|a| draw(single[i][a].min(single[j][a]))).collect();
                    pair.insert((i, j), both);
                }
            }
            let costs = Costs::new(sizes, areas, |i, j| if i == j { single[i].clone() } else { pair[&(i, j)].clone() });
            assert_eq!(best(&costs, price, most, keep), everything(&costs, price, most, keep), "seed {seed}");
        }
    }
}
