//! What the cheapest layout of two sizes costs in every area, from the table of what one of each carries.
//!
//! A layout of a pair has m of one size and n of the other, one of each at least. For each m the areas that share a table are
//! gone through by rising demand, so the least n that holds every case only rises: it is carried on from area to area, and
//! where it no longer does, goes on from a bound on it. Fewer openings take less edge, so with m given the least n decides.
//!
//! # Where m ends
//!
//! Let m count the size that carries less in every case. If some k <= m of the greater cost no more than m of the less, carry
//! as much in every case and take no more edge, then m and all more of the less are left out: k of the greater take the place
//! of m of the less, no dearer. What carries most of a layout with both is one of the greater, before and after, so with one
//! blocked the same is gone. That is why no more than one may be blocked; and since fewer devices are left, at least two, no
//! more than two may be asked for. By how much k must carry more is far above what rounding could take away.
//!
//! Besides, m ends where m of the one and one of the other cost no less than the best known in every area.

use rayon::prelude::*;

use crate::search::dive::{SLACK, rounded_up};
use crate::search::problem::{Problem, Table};

use super::costs::Costs;
use super::ending::Ending;
use super::field::{Alike, Asking, Field};

/// The cost of every pair in every area; none where it was told to end before.
pub(super) fn costs(field: &Field<'_>, ending: &Ending<'_>) -> Option<Costs> {
    let (count, areas) = (field.sizes.len(), field.areas());
    let singles: Vec<Vec<f64>> = field.sizes.par_iter().map(|&size| singles(field, size)).collect();
    let pairs: Vec<(usize, usize)> = (0..count).flat_map(|j| (0..=j).map(move |i| (i, j))).collect();
    let mut rows = vec![f64::INFINITY; pairs.len() * areas];
    rows.par_chunks_mut(areas.max(1)).zip(&pairs).for_each(|(row, &(i, j))| {
        if ending.is_due() {
            return;
        }
        for ((cost, a), b) in row.iter_mut().zip(&singles[i]).zip(&singles[j]) {
            *cost = a.min(*b);
        }
        if i != j {
            lower_to_pairs(field, field.sizes[i], field.sizes[j], row);
        }
    });
    (!ending.was_due()).then(|| Costs::new(count, areas, rows))
}

/// The areas' costs of one size alone.
fn singles(field: &Field<'_>, size: usize) -> Vec<f64> {
    let mut row = vec![f64::INFINITY; field.areas()];
    let mut rest = &mut row[..];
    for alike in &field.alike {
        let (mine, others) = rest.split_at_mut(alike.areas.len());
        rest = others;
        let Some(index) = alike.candidate(size) else { continue };
        let price = alike.problem.candidates[index].price;
        let mut ladder = Ladder::new(alike, None, index);
        ladder.begin(0);
        for (cost, area) in mine.iter_mut().zip(&alike.areas) {
            let Some(count) = ladder.reach(area) else { break };
            if fits(&alike.problem, area.edge, &[(index, count)]) {
                *cost = (price * i64::from(count)) as f64;
            }
        }
    }
    row
}

/// Lowers the areas' costs to those of layouts with both sizes.
fn lower_to_pairs(field: &Field<'_>, first: usize, second: usize, row: &mut [f64]) {
    let mut rest = row;
    for alike in &field.alike {
        let (mine, others) = rest.split_at_mut(alike.areas.len());
        rest = others;
        let (Some(first), Some(second)) = (alike.candidate(first), alike.candidate(second)) else { continue };
        if alike.problem.mix > 1 {
            Pair::new(alike, first, second).lower(mine);
        }
    }
}

/// Two sizes in areas that share a table.
struct Pair<'f, 'r> {
    alike: &'f Alike<'r>,
    /// The size whose count is run through.
    less: usize,
    greater: usize,
    /// The count from which on the size is left out.
    end: u32,
}

impl<'f, 'r> Pair<'f, 'r> {
    fn new(alike: &'f Alike<'r>, first: usize, second: usize) -> Self {
        let problem = &alike.problem;
        let table = alike.table(&[first, second]);
        let (less, greater) = match (carries_more(table, first, second), carries_more(table, second, first)) {
            (false, true) => (first, second),
            (true, false) => (second, first),
            // Through the counts of the dearer: they are fewer, and the bound on their price ends them sooner.
            _ if problem.candidates[first].price >= problem.candidates[second].price => (first, second),
            _ => (second, first),
        };
        let mut pair = Self { alike, less, greater, end: problem.most };
        if carries_more(table, greater, less) && pair.may_change_places() {
            pair.end = pair.replaced_from(table).unwrap_or(problem.most);
        }
        pair
    }

    /// Whether some of the greater may take the place of as many or more of the less.
    fn may_change_places(&self) -> bool {
        let problem = &self.alike.problem;
        let blocked = problem.situations.iter().map(|situation| situation.case.blocked).max();
        problem.least <= 2 && problem.least_at_edge == 0 && blocked <= Some(1) && !problem.asks_freeboard()
    }

    /// The least count of the less for which some of the greater, no dearer, carry as much and take no more edge.
    fn replaced_from(&self, table: &Table) -> Option<u32> {
        let problem = &self.alike.problem;
        let (less, greater) = (&problem.candidates[self.less], &problem.candidates[self.greater]);
        // How many of the greater carry as much as one of the less.
        let flows = table.of(self.less).iter().zip(table.of(self.greater));
        let share = flows.map(|(less, greater)| less / greater).fold(0.0, f64::max) * (1.0 + SLACK);
        if share * greater.price as f64 * (1.0 - SLACK) > less.price as f64 {
            return None;
        }
        let edge = self.alike.is_edge_limited() && greater.at_edge;
        (1..problem.most).find(|&count| {
            let needed = rounded_up(f64::from(count) * share).max(1);
            let (needed, of_less) = (i64::from(needed), i64::from(count));
            let takes_no_more_edge = !edge || (less.at_edge && needed * greater.width <= of_less * less.width);
            needed <= of_less && needed * greater.price <= of_less * less.price && takes_no_more_edge
        })
    }

    fn lower(&self, row: &mut [f64]) {
        let problem = &self.alike.problem;
        let (less, greater) = (problem.candidates[self.less].price, problem.candidates[self.greater].price);
        let mut ladder = Ladder::new(self.alike, Some(self.less), self.greater);
        for count in 1..self.end {
            let least = (less * i64::from(count) + greater) as f64;
            if row.iter().all(|&cost| cost <= least) {
                break;
            }
            ladder.begin(count);
            for (cost, area) in row.iter_mut().zip(&self.alike.areas) {
                if *cost <= least {
                    continue;
                }
                let Some(other) = ladder.reach(area) else { break };
                let total = (less * i64::from(count) + greater * i64::from(other)) as f64;
                if total < *cost && fits(problem, area.edge, &[(self.less, count), (self.greater, other)]) {
                    *cost = total;
                }
            }
        }
    }
}

/// Whether one size carries at least as much as another in every case.
fn carries_more(table: &Table, size: usize, other: usize) -> bool {
    table.of(size).iter().zip(table.of(other)).all(|(size, other)| size >= other)
}

/// Whether the openings of some groups and those that are there, with the gaps between all, fit an edge.
fn fits(problem: &Problem<'_>, edge: Option<i64>, groups: &[(usize, u32)]) -> bool {
    let Some(edge) = edge else { return true };
    let (mut widths, mut openings) = problem.edge_taken_there();
    for &(index, count) in groups {
        let candidate = &problem.candidates[index];
        if candidate.at_edge {
            widths = widths.saturating_add(candidate.width.saturating_mul(i64::from(count)));
            openings += i64::from(count);
        }
    }
    openings == 0 || widths.saturating_add(problem.gap.saturating_mul(openings - 1)) <= edge
}

/// The least count of a size that holds every case beside so many of another, area after area by rising demand.
struct Ladder<'f, 'r> {
    problem: &'f Problem<'r>,
    table: &'f Table,
    /// The other size and its count; where there is none, the size itself and nothing.
    beside: (usize, u32),
    index: usize,
    count: u32,
    most: u32,
    /// What so many carry in each case.
    capacities: Vec<f64>,
}

impl<'f, 'r> Ladder<'f, 'r> {
    fn new(alike: &'f Alike<'r>, beside: Option<usize>, index: usize) -> Self {
        let (problem, other) = (&alike.problem, beside.unwrap_or(index));
        let table = alike.table(&[other, index]);
        Self { problem, table, beside: (other, 0), index, count: 0, most: 0, capacities: Vec::new() }
    }

    /// Begins from the bottom, beside so many of the other.
    fn begin(&mut self, there: u32) {
        self.beside.1 = there;
        self.count = self.problem.least.saturating_sub(there).max(1);
        self.most = self.problem.most.saturating_sub(there);
        let candidates = &self.problem.candidates;
        let beside = if candidates[self.beside.0].at_edge { i64::from(there) } else { 0 };
        let openings = self.problem.edge_taken_there().1 + beside;
        if candidates[self.index].at_edge {
            self.count = self.count.max(self.problem.short_at_edge(openings));
        } else if self.problem.is_short_at_edge(openings) {
            self.most = 0;
        }
        self.add_up();
    }

    /// The least count that holds every case of an area; none where that is more than may stand.
    fn reach(&mut self, area: &Asking) -> Option<u32> {
        while self.count <= self.most {
            if self.capacities.iter().zip(&area.demands).all(|(capacity, demand)| capacity >= demand) {
                return Some(self.count);
            }
            self.count = self.least_for(area).max(self.count + 1);
            self.add_up();
        }
        None
    }

    fn add_up(&mut self) {
        let mut groups = [self.beside, (self.index, self.count)];
        groups.sort_unstable();
        self.capacities.clear();
        let cases = 0..self.problem.situations.len();
        self.capacities.extend(cases.map(|case| self.problem.capacity(self.table, case, &groups)));
    }

    /// A count that the least is not under: the blocked devices are the one that carries most and others. Beside what is there
    /// they need not be of these sizes, but the first of them carries no less than one of these.
    fn least_for(&self, area: &Asking) -> u32 {
        let (other, there) = self.beside;
        let mut least = 1;
        for (case, (situation, &demand)) in self.problem.situations.iter().zip(&area.demands).enumerate() {
            let (one, beside) = (self.table.of(self.index)[case], self.table.of(other)[case]);
            let any_there = !self.problem.fixed.is_empty();
            let carried_there = if any_there { self.problem.carried_there(self.table, case, 0).0 } else { 0.0 };
            let gone = match situation.case.blocked {
                0 => 0.0,
                _ if any_there => one.max(beside),
                blocked => one.max(beside) + f64::from(blocked - 1) * one.min(beside),
            };
            let missing = demand + gone - beside * f64::from(there) - carried_there;
            if demand > 0.0 && missing > 0.0 {
                // A little less, so that rounding never makes a bound of what is none.
                least = least.max(rounded_up(missing / one * (1.0 - SLACK)));
            }
        }
        least
    }
}
