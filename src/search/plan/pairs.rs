//! What the cheapest layout of two sizes costs in an area, from the table of what one of each carries.
//!
//! For a pair, the count m of one size is run through and the least count n of the other that holds every case is found. A
//! layout with m of the first costs at least m times its price and one of the second, so m stops once that is no less than the
//! best known: the cheaper of either size alone, or a pair met before.
//!
//! # Sizes that are left out
//!
//! A size goes if another is no dearer and, in every area where the first may stand, may stand too, carries at least as much
//! in every case, takes no more edge, and has its top no lower where freeboard is asked. Put the other in its place, device for
//! device: no layout costs more, carries less (in all, or less its most effective), takes more edge, or adds a size.

use rayon::prelude::*;

use crate::roof::Roof;

use super::super::problem::{Problem, Table};
use super::sets::Costs;

/// The sizes of a roof that no other outdoes, and its areas.
pub(super) struct Field {
    /// Indices into the roof's sizes, rising.
    sizes: Vec<usize>,
    places: Vec<Place>,
}

/// One area: where each size of the roof is among its candidates, and what one of each carries, class by class.
struct Place {
    candidates: Vec<Option<usize>>,
    tables: Vec<(Option<i64>, Table)>,
}

impl Place {
    fn new(roof: &Roof, problem: &Problem<'_>) -> Self {
        let mut candidates = vec![None; roof.sizes.len()];
        for (index, candidate) in problem.candidates.iter().enumerate() {
            candidates[candidate.index] = Some(index);
        }
        let table =
            |class| (class, problem.table(&problem.allowable_levels(class), |candidate| Some(candidate.lowest())));
        Self { candidates, tables: problem.classes().into_iter().map(table).collect() }
    }

    /// The table that holds for a layout whose lowest top is that of these candidates.
    fn table(&self, problem: &Problem<'_>, candidates: &[usize]) -> &Table {
        let class = match problem.asked.freeboard {
            None => None,
            Some(_) => candidates.iter().filter_map(|&index| problem.candidates[index].top).min(),
        };
        let found = self.tables.iter().find(|(known, _)| *known == class);
        found.map_or(&self.tables[0].1, |(_, table)| table)
    }
}

impl Field {
    /// The sizes that may stand somewhere and that no other outdoes.
    pub(super) fn new(roof: &Roof, problems: &[Problem<'_>]) -> Self {
        let places: Vec<Place> = problems.par_iter().map(|problem| Place::new(roof, problem)).collect();
        let stands = |size: usize| places.iter().any(|place| place.candidates[size].is_some());
        let standing: Vec<usize> = (0..roof.sizes.len()).filter(|&size| stands(size)).collect();
        let outdone = |size: usize| {
            standing.iter().any(|&other| {
                // Of two alike the first stays.
                other != size
                    && outdoes(problems, &places, other, size)
                    && (other < size || !outdoes(problems, &places, size, other))
            })
        };
        let sizes = standing.iter().copied().filter(|&size| !outdone(size)).collect();
        Self { sizes, places }
    }

    pub(super) fn sizes(&self) -> usize {
        self.sizes.len()
    }

    /// Index into the roof's sizes.
    pub(super) fn size(&self, of: usize) -> usize {
        self.sizes[of]
    }

    /// The cost of every pair in every area.
    pub(super) fn costs(&self, problems: &[Problem<'_>]) -> Costs {
        let count = self.sizes.len();
        // Area by area, then turned round: areas innermost.
        let columns: Vec<Vec<f64>> =
            problems.par_iter().zip(&self.places).map(|(problem, place)| self.column(problem, place)).collect();
        Costs::new(count, problems.len(), |i, j| {
            let at = j * (j + 1) / 2 + i;
            columns.iter().map(|column| column[at]).collect()
        })
    }

    /// The cost of every pair in one area, pairs in triangular order.
    fn column(&self, problem: &Problem<'_>, place: &Place) -> Vec<f64> {
        let mine: Vec<Option<usize>> = self.sizes.iter().map(|&size| place.candidates[size]).collect();
        let alone = |&index: &Option<usize>| index.map_or(f64::INFINITY, |index| single(problem, place, index));
        let singles: Vec<f64> = mine.iter().map(alone).collect();
        let mut column = Vec::with_capacity(mine.len() * (mine.len() + 1) / 2);
        for j in 0..mine.len() {
            for i in 0..=j {
                let alone = singles[i].min(singles[j]);
                column.push(match (mine[i], mine[j]) {
                    _ if i == j => singles[i],
                    (Some(first), Some(second)) if problem.mix > 1 => pair(problem, place, first, second, alone),
                    _ => alone,
                });
            }
        }
        column
    }
}

/// Whether one size can stand in for another wherever that may stand.
fn outdoes(problems: &[Problem<'_>], places: &[Place], better: usize, worse: usize) -> bool {
    problems.iter().zip(places).all(|(problem, place)| {
        let (Some(worse), better) = (place.candidates[worse], place.candidates[better]) else { return true };
        let Some(better) = better else { return false };
        let (a, b) = (&problem.candidates[better], &problem.candidates[worse]);
        let edge =
            |candidate: &crate::search::problem::Candidate<'_>| if candidate.at_edge { candidate.width } else { 0 };
        let fits = problem.edge.is_none() || ((!a.at_edge || b.at_edge) && edge(a) <= edge(b));
        let tops = problem.asked.freeboard.is_none() || a.top.is_none_or(|a| b.top.is_some_and(|b| a >= b));
        let carries =
            || place.tables.iter().all(|(_, table)| table.of(better).iter().zip(table.of(worse)).all(|(a, b)| a >= b));
        a.price <= b.price && fits && tops && carries()
    })
}

fn fits(problem: &Problem<'_>, groups: &[(usize, u32)]) -> bool {
    let Some(edge) = problem.edge else { return true };
    let (mut widths, mut openings) = (0_i64, 0_i64);
    for &(index, count) in groups {
        let candidate = &problem.candidates[index];
        if candidate.at_edge {
            widths += candidate.width.saturating_mul(i64::from(count));
            openings += i64::from(count);
        }
    }
    openings == 0 || widths.saturating_add(problem.gap.saturating_mul(openings - 1)) <= edge
}

/// Cost of the fewest of one size that hold every case and fit; infinite where none do.
fn single(problem: &Problem<'_>, place: &Place, index: usize) -> f64 {
    let table = place.table(problem, &[index]);
    let least = least_beside(problem, table, None, index).max(problem.least);
    let held = (least..=problem.most).find(|&count| problem.carries(table, &[(index, count)]));
    match held {
        Some(count) if fits(problem, &[(index, count)]) => (problem.candidates[index].price * i64::from(count)) as f64,
        _ => f64::INFINITY,
    }
}

/// Fewest of a size that can hold every case beside so many of another, were nothing blocked; at least one.
fn least_beside(problem: &Problem<'_>, table: &Table, beside: Option<(usize, u32)>, index: usize) -> u32 {
    let mut least = 1.0_f64;
    for (case, situation) in problem.situations.iter().enumerate() {
        let there = beside.map_or(0.0, |(other, count)| table.of(other)[case] * f64::from(count));
        let missing = situation.demand.m3_per_s() - there;
        if missing > 0.0 {
            // A little less, so that rounding never makes a bound of what is none.
            least = least.max((missing / table.of(index)[case] * (1.0 - 1e-9)).ceil());
        }
    }
    if least < f64::from(u32::MAX) { least as u32 } else { u32::MAX }
}

/// Cost of the cheapest layout of two sizes, one of each at least, where it is below that of either alone; else that.
fn pair(problem: &Problem<'_>, place: &Place, first: usize, second: usize, alone: f64) -> f64 {
    let table = place.table(problem, &[first, second]);
    // Through the counts of the dearer: they are fewer, and the bound on them bites sooner.
    let price = |index: usize| problem.candidates[index].price;
    let (many, few) = if price(first) >= price(second) { (second, first) } else { (first, second) };
    let ordered = |few_count, many_count| {
        let mut groups = [(few, few_count), (many, many_count)];
        groups.sort_unstable();
        groups
    };
    let mut best = alone;
    for count in 1..problem.most {
        if (price(few) * i64::from(count) + price(many)) as f64 >= best {
            break;
        }
        let least =
            least_beside(problem, table, Some((few, count)), many).max(problem.least.saturating_sub(count)).max(1);
        let held = (least..=problem.most - count).find(|&other| problem.carries(table, &ordered(count, other)));
        if let Some(other) = held {
            let cost = (price(few) * i64::from(count) + price(many) * i64::from(other)) as f64;
            if cost < best && fits(problem, &ordered(count, other)) {
                best = cost;
            }
        }
    }
    best
}
