//! What every pair of sizes costs in every area, to the last unit.
//!
//! Costs are whole numbers held in floats, sums of them exact below 2^53: the order of adding does not matter, and no answer
//! depends on it.

/// The cost of every pair of sizes in every area.
#[derive(Clone, Debug)]
pub(super) struct Costs {
    sizes: usize,
    areas: usize,
    /// Areas innermost; pairs in triangular order, the lesser index first. Infinite where the pair has no layout.
    pairs: Vec<f64>,
    /// Of each area, over all pairs.
    least: Vec<f64>,
}

/// A set of sizes, rising, and what it costs with the price of its sizes.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct SizeSet {
    pub(super) cost: f64,
    pub(super) sizes: Vec<usize>,
}

/// Place of a pair in triangular order.
pub(super) fn place(i: usize, j: usize) -> usize {
    let (first, second) = if i < j { (i, j) } else { (j, i) };
    second * (second + 1) / 2 + first
}

impl Costs {
    /// From rows of areas, one for each pair in triangular order.
    pub(super) fn new(sizes: usize, areas: usize, pairs: Vec<f64>) -> Self {
        let mut least = vec![f64::INFINITY; areas];
        for row in pairs.chunks_exact(areas.max(1)) {
            lower(&mut least, row);
        }
        Self { sizes, areas, pairs, least }
    }

    pub(super) fn sizes(&self) -> usize {
        self.sizes
    }

    /// Lowers every cost to that of other costs, with so much more in each area; `places` says where each area stands there,
    /// none where nothing is needed for it.
    pub(super) fn lower_to(&mut self, other: &Self, places: &[Option<usize>], more: &[f64]) {
        let lower_row = |row: &mut [f64], theirs: &[f64]| {
            for ((cost, place), more) in row.iter_mut().zip(places).zip(more) {
                *cost = cost.min(place.map_or(0.0, |place| theirs[place]) + more);
            }
        };
        let none = vec![0.0; other.areas];
        let theirs = other.pairs.chunks(other.areas.max(1)).chain(std::iter::repeat(&none[..]));
        for (row, theirs) in self.pairs.chunks_mut(self.areas.max(1)).zip(theirs) {
            lower_row(row, theirs);
        }
        lower_row(&mut self.least, &other.least);
    }

    pub(super) fn areas(&self) -> usize {
        self.areas
    }

    /// What two sizes cost in each area; of one size where they are the same.
    pub(super) fn of(&self, i: usize, j: usize) -> &[f64] {
        let at = place(i, j) * self.areas;
        &self.pairs[at..at + self.areas]
    }

    /// All rows, in triangular order.
    pub(super) fn rows(&self) -> impl Iterator<Item = &[f64]> {
        self.pairs.chunks_exact(self.areas.max(1))
    }

    /// What each area costs at least, whatever its sizes.
    pub(super) fn least(&self) -> &[f64] {
        &self.least
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

    /// What a set costs, with the price of its sizes.
    pub(super) fn total(&self, set: &[usize], price: f64) -> f64 {
        sum(&self.by_area(set)) + price * set.len() as f64
    }

    /// The same question asked of service alone: one where a pair has no layout, else nothing.
    pub(super) fn unserved(&self) -> Self {
        let pairs = self.pairs.iter().map(|cost| f64::from(u8::from(cost.is_infinite()))).collect();
        Self::new(self.sizes, self.areas, pairs)
    }
}

/// Lowers each number to that of another list.
pub(super) fn lower(costs: &mut [f64], other: &[f64]) {
    for (cost, &other) in costs.iter_mut().zip(other) {
        *cost = cost.min(other);
    }
}

/// A sum in eight strands, which the compiler can run side by side; exact, so that their number changes nothing.
pub(super) fn sum(costs: &[f64]) -> f64 {
    let mut strands = [0.0; 8];
    let mut eights = costs.chunks_exact(8);
    for eight in &mut eights {
        for (strand, cost) in strands.iter_mut().zip(eight) {
            *strand += cost;
        }
    }
    strands.iter().sum::<f64>() + eights.remainder().iter().sum::<f64>()
}
