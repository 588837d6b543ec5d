//! Numbers t that make the bound on sets of sizes high, and the weights that belong to them (the proof stands in `sets`).
//!
//! Any numbers are valid; those found here are a matter of speed alone. A few steps along the slope are taken with the sizes
//! that weigh most, then fewer with all. The set that weighs most is sought by adding and exchanging sizes: were a heavier one
//! overlooked, the step would only be a worse one.

use super::costs::SizeSet;
use super::regrets::{Regrets, sum};

/// Numbers t, and the weights of pairs.
pub(super) struct Bound {
    pub(super) t: Vec<i32>,
    /// W(i, j) of every two sizes.
    pub(super) pairs: Vec<i32>,
}

/// Sizes with which the first steps are taken.
const CORE: usize = 40;
/// Steps with those, and with all.
const STEPS: (usize, usize) = (16, 4);

/// The bound, raised from where the best set known stands.
pub(super) fn raised(regrets: &Regrets, price: f64, most: usize, best: &SizeSet) -> Bound {
    let all: Vec<usize> = (0..regrets.sizes()).collect();
    let mut raise = Raise {
        regrets,
        price,
        most,
        target: best.cost,
        t: between_two_cheapest(regrets, &best.sizes),
        heavy: best.sizes.clone(),
    };
    let mut pairs = raise.weights(&all).pairs;
    if regrets.sizes() > CORE {
        let core = core(&raise, &all, &pairs);
        raise.steps(&core, STEPS.0);
        raise.steps(&all, STEPS.1);
    } else {
        raise.steps(&all, STEPS.0);
    }
    pairs.clear();
    let pairs = raise.weights(&all).pairs;
    Bound { t: raise.t, pairs }
}

/// In each area the middle between the two cheapest layouts of a set.
fn between_two_cheapest(regrets: &Regrets, set: &[usize]) -> Vec<i32> {
    let mut two = vec![(regrets.most(), regrets.most()); regrets.areas()];
    for (place, &i) in set.iter().enumerate() {
        for &j in &set[place..] {
            for ((first, second), &regret) in two.iter_mut().zip(regrets.of(i, j)) {
                *second = (*second).min(regret.max(*first));
                *first = (*first).min(regret);
            }
        }
    }
    two.into_iter().map(|(first, second)| first.midpoint(second)).collect()
}

/// The sizes that weigh most, alone and with half of their best companions; and those of the best set.
fn core(raise: &Raise<'_>, all: &[usize], pairs: &[i32]) -> Vec<usize> {
    let count = all.len();
    let singles = raise.weights_alone(all);
    let score = |size: usize| {
        let mut greatest = pairs[size * count..(size + 1) * count].to_vec();
        greatest.sort_unstable_by(|a, b| b.cmp(a));
        let companions: f64 = greatest.iter().take(raise.most - 1).map(|&weight| raise.regrets.money(weight)).sum();
        singles[size] + companions / 2.0
    };
    let mut scored: Vec<(f64, usize)> = all.iter().map(|&size| (score(size), size)).collect();
    scored.sort_by(|a, b| b.0.total_cmp(&a.0).then(a.1.cmp(&b.1)));
    let mut core: Vec<usize> = scored.into_iter().map(|(_, size)| size).take(CORE).collect();
    for &size in &raise.heavy {
        if !core.contains(&size) {
            core.push(size);
        }
    }
    core
}

struct Raise<'r> {
    regrets: &'r Regrets,
    price: f64,
    most: usize,
    /// Cost of the best set known, which no bound passes.
    target: f64,
    t: Vec<i32>,
    /// The last heavy set.
    heavy: Vec<usize>,
}

/// Weights of some sizes: W(i) less the price, and W(i, j).
struct Weights {
    singles: Vec<f64>,
    pairs: Vec<i32>,
}

impl Raise<'_> {
    fn weights_alone(&self, sizes: &[usize]) -> Vec<f64> {
        let weight = |&size: &usize| {
            let alone = self.regrets.of(size, size);
            self.regrets.money(super::regrets::saved(&self.t, alone)) - self.price
        };
        sizes.iter().map(weight).collect()
    }

    fn weights(&self, sizes: &[usize]) -> Weights {
        let count = sizes.len();
        let mut pairs = vec![0; count * count];
        // min(t, d(i, i)) of every size.
        let mut under: Vec<i32> = Vec::with_capacity(count * self.t.len());
        for &size in sizes {
            super::regrets::lesser_into(&mut under, &self.t, self.regrets.of(size, size));
        }
        let under = |place: usize| &under[place * self.t.len()..(place + 1) * self.t.len()];
        for i in 0..count {
            for j in i + 1..count {
                let both = self.regrets.of(sizes[i], sizes[j]);
                let saved = under(i).iter().zip(under(j)).zip(both);
                let weight = saved.map(|((a, b), both)| (a.min(b) - both).max(0)).sum();
                pairs[i * count + j] = weight;
                pairs[j * count + i] = weight;
            }
        }
        Weights { singles: self.weights_alone(sizes), pairs }
    }

    /// Steps along the slope, as long as they are of use; the best t met is kept.
    fn steps(&mut self, sizes: &[usize], steps: usize) {
        let mut best = (f64::NEG_INFINITY, self.t.clone());
        let mut pace = 0.8;
        for _ in 0..steps {
            let weights = self.weights(sizes);
            let set = self.heaviest(sizes, &weights);
            let value = self.regrets.cost(sum(&self.t)) - self.weight(&weights, &set);
            self.heavy = set.iter().map(|&place| sizes[place]).collect();
            if value > best.0 {
                best = (value, self.t.clone());
            } else {
                pace *= 0.7;
            }
            if value >= self.target || !self.step(pace * (self.target - value)) {
                break;
            }
        }
        self.t = best.1;
    }

    /// One step towards a bound that much higher; false where the slope is level.
    fn step(&mut self, missing: f64) -> bool {
        let slopes = self.slopes();
        let length: f64 = slopes.iter().map(|&slope| f64::from(slope) * f64::from(slope)).sum();
        if length == 0.0 {
            return false;
        }
        let step = missing / (self.regrets.money(1) * length);
        for (t, slope) in self.t.iter_mut().zip(slopes) {
            *t = (f64::from(*t) + step * f64::from(slope)).clamp(0.0, f64::from(self.regrets.most())) as i32;
        }
        true
    }

    /// How the bound changes with t: one less the savings of the heavy set that grow with it.
    fn slopes(&self) -> Vec<i32> {
        let mut slopes = vec![1; self.t.len()];
        for (place, &i) in self.heavy.iter().enumerate() {
            let own = self.regrets.of(i, i);
            for ((slope, t), own) in slopes.iter_mut().zip(&self.t).zip(own) {
                *slope -= i32::from(own < t);
            }
            for &j in &self.heavy[place + 1..] {
                let rows = own.iter().zip(self.regrets.of(j, j)).zip(self.regrets.of(i, j));
                for ((slope, t), ((a, b), both)) in slopes.iter_mut().zip(&self.t).zip(rows) {
                    *slope -= i32::from(t <= a && t <= b && both < t);
                }
            }
        }
        slopes
    }

    fn weight(&self, weights: &Weights, set: &[usize]) -> f64 {
        set.iter().enumerate().map(|(place, &i)| self.gain(weights, &set[..place], i)).sum()
    }

    /// What a size adds to the weight of a set.
    fn gain(&self, weights: &Weights, set: &[usize], size: usize) -> f64 {
        let row = &weights.pairs[size * weights.singles.len()..];
        weights.singles[size] + set.iter().map(|&other| self.regrets.money(row[other])).sum::<f64>()
    }

    /// A heavy set, as places among the sizes: the heavier of two, one grown from nothing, one from the last.
    fn heaviest(&self, sizes: &[usize], weights: &Weights) -> Vec<usize> {
        let place = |size: &usize| sizes.iter().position(|known| known == size);
        let last: Vec<usize> = self.heavy.iter().filter_map(place).collect();
        let (grown, changed) = (self.improved(weights, Vec::new()), self.improved(weights, last));
        if self.weight(weights, &grown) >= self.weight(weights, &changed) { grown } else { changed }
    }

    /// A set with sizes added where they weigh most, then exchanged while that makes it heavier.
    fn improved(&self, weights: &Weights, mut set: Vec<usize>) -> Vec<usize> {
        let heaviest_beside = |others: &[usize]| {
            let beside = (0..weights.singles.len()).filter(|size| !others.contains(size));
            beside.map(|size| (self.gain(weights, others, size), size)).max_by(|a, b| a.0.total_cmp(&b.0))
        };
        while set.len() < self.most {
            match heaviest_beside(&set) {
                Some((gain, size)) if gain > 0.0 => set.push(size),
                _ => break,
            }
        }
        loop {
            let mut better = false;
            for place in 0..set.len() {
                let mut others = set.clone();
                let own = others.remove(place);
                match heaviest_beside(&others) {
                    Some((gain, size)) if gain > self.gain(weights, &others, own) => {
                        set[place] = size;
                        better = true;
                    }
                    _ => {}
                }
            }
            if !better {
                return set;
            }
        }
    }
}
