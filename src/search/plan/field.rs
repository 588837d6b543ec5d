//! The sizes worth looking at, and the areas by what they have alike.
//!
//! Areas that differ in demand and edge alone share one table of what one of each size carries. An area with devices that are
//! there already has one of its own; where these hold by themselves it needs no size, and is left out.
//!
//! # Sizes that are left out
//!
//! A size goes if another is no dearer and, in every area where the first may stand, may stand too, carries at least as much
//! in every case, takes no more edge, and has its top no lower where freeboard is asked. Put the other in its place, device for
//! device: no layout costs more, carries less (in all, or less its most effective), takes more edge, or adds a size.

use rayon::prelude::*;

use crate::roof::Roof;
use crate::search::problem::{Candidate, Problem, Table, same_but_demand};
use crate::search::{Options, alike, alike::by_demand};
use crate::units::Length;

/// The sizes of a roof that no other outdoes, and its areas.
pub(super) struct Field<'r> {
    /// Indices into the roof's sizes, rising.
    pub(super) sizes: Vec<usize>,
    pub(super) alike: Vec<Alike<'r>>,
}

/// Areas that differ in their demand and the length of their edge alone.
pub(super) struct Alike<'r> {
    /// The area with the longest edge: what may stand anywhere may stand here.
    pub(super) problem: Problem<'r>,
    /// Where each size of the roof is among the candidates.
    candidates: Vec<Option<usize>>,
    /// What one of each candidate carries, class by class.
    tables: Vec<(Option<i64>, Table)>,
    /// The areas, by rising demand, which rises in every case.
    pub(super) areas: Vec<Asking>,
}

/// What an area asks of a layout.
pub(super) struct Asking {
    /// Index of the area among the roof's.
    area: usize,
    /// The demand in each case, m3/s.
    pub(super) demands: Vec<f64>,
    /// Edge in nanometres; none where it is not limited.
    pub(super) edge: Option<i64>,
}

impl<'r> Field<'r> {
    /// The sizes that may stand somewhere and that no other outdoes.
    pub(super) fn new(roof: &'r Roof, options: &Options, areas: &[usize]) -> Self {
        let (bare, built): (Vec<usize>, Vec<usize>) =
            areas.iter().partition(|&&area| roof.areas[area].existing.is_empty());
        let mut groups = alike::groups(roof, options, &bare);
        groups.extend(built.into_iter().map(|area| vec![area]));
        let alike: Vec<Alike<'r>> = groups.par_iter().map(|areas| Alike::new(roof, options, areas)).collect();
        let alike = alike.into_iter().filter(|alike| !alike.problem.is_served()).collect();
        let field = Self { sizes: Vec::new(), alike };
        let sizes = not_outdone_in_all(roof, std::slice::from_ref(&field));
        field.with_sizes(sizes)
    }

    fn stands(&self, size: usize) -> bool {
        self.alike.iter().any(|alike| alike.candidates[size].is_some())
    }

    /// How many areas need a size.
    pub(super) fn areas(&self) -> usize {
        self.alike.iter().map(|alike| alike.areas.len()).sum()
    }

    /// The areas, by index among the roof's, in the order in which costs are held.
    pub(super) fn order(&self) -> Vec<usize> {
        self.alike.iter().flat_map(|alike| &alike.areas).map(|asking| asking.area).collect()
    }

    /// The same areas with other sizes.
    pub(super) fn with_sizes(self, sizes: Vec<usize>) -> Self {
        Self { sizes, ..self }
    }

    /// Whether every size that may stand somewhere has a price.
    pub(super) fn is_priced(&self) -> bool {
        let candidates = self.alike.iter().flat_map(|alike| &alike.problem.candidates);
        candidates.into_iter().all(|candidate| candidate.size.price.is_some())
    }
}

/// The sizes that may stand somewhere and that no other outdoes in all of some fields of one roof.
pub(super) fn not_outdone_in_all(roof: &Roof, fields: &[Field<'_>]) -> Vec<usize> {
    let stands = |size: &usize| fields.iter().any(|field| field.stands(*size));
    let standing = (0..roof.sizes.len()).filter(stands).collect();
    let alike = || fields.iter().flat_map(|field| &field.alike);
    let outdoes = |better, worse| alike().all(|alike| alike.outdoes(better, worse));
    not_outdone(standing, |size| roof.sizes[size].price, outdoes)
}

/// The sizes that no other outdoes, of two alike the first; rising.
fn not_outdone<P: Ord>(
    mut sizes: Vec<usize>,
    price: impl Fn(usize) -> P,
    outdoes: impl Fn(usize, usize) -> bool,
) -> Vec<usize> {
    let goes_for =
        |size: usize, other: usize| other != size && outdoes(other, size) && (other < size || !outdoes(size, other));
    // Whoever is outdone is outdone by one that is not, and that is no dearer.
    sizes.sort_by_key(|&size| price(size));
    let mut left: Vec<usize> = Vec::new();
    for equal in sizes.chunk_by(|&a, &b| price(a) == price(b)) {
        let cheaper = left.len();
        for &size in equal {
            if !left[..cheaper].iter().chain(equal).any(|&other| goes_for(size, other)) {
                left.push(size);
            }
        }
    }
    left.sort_unstable();
    left
}

impl<'r> Alike<'r> {
    fn new(roof: &'r Roof, options: &Options, areas: &[usize]) -> Self {
        let edge = |area: usize| roof.areas[area].edge.map(Length::nm);
        let (problem, _) = Problem::new(roof, alike::with_longest_edge(roof, areas), options);
        let classes = same_but_demand(&problem.situations);
        let first: Vec<usize> = classes.iter().map(|class| class[0]).collect();
        let problem = if first.len() < problem.situations.len() { problem.with_cases(&first) } else { problem };
        let mut candidates = vec![None; roof.sizes.len()];
        for (index, candidate) in problem.candidates.iter().enumerate() {
            candidates[candidate.index] = Some(index);
        }
        let table =
            |class| (class, problem.table(&problem.allowable_levels(class), |candidate| Some(candidate.lowest())));
        let tables = problem.classes().into_iter().map(table).collect();
        let demands = |area: usize| {
            let demand = |&case: &usize| roof.situation(area, case).demand.m3_per_s();
            classes.iter().map(|class| class.iter().map(demand).fold(0.0, f64::max)).collect()
        };
        let mut asking: Vec<Asking> =
            areas.iter().map(|&area| Asking { area, demands: demands(area), edge: edge(area) }).collect();
        asking.sort_by(|a, b| by_demand(&a.demands, &b.demands));
        Self { problem, candidates, tables, areas: asking }
    }

    /// A size of the roof among the candidates.
    pub(super) fn candidate(&self, size: usize) -> Option<usize> {
        self.candidates[size]
    }

    /// The table that holds for a layout whose lowest top is that of these candidates.
    pub(super) fn table(&self, candidates: &[usize]) -> &Table {
        let top = |&index: &usize| self.problem.candidates[index].top;
        let class = if self.problem.asks_freeboard() { candidates.iter().filter_map(top).min() } else { None };
        let found = self.tables.iter().find(|(known, _)| *known == class);
        found.map_or(&self.tables[0].1, |(_, table)| table)
    }

    /// Whether the edge of some area is limited.
    pub(super) fn is_edge_limited(&self) -> bool {
        self.areas.iter().any(|area| area.edge.is_some())
    }

    /// Whether one size can stand in for another wherever that may stand.
    fn outdoes(&self, better: usize, worse: usize) -> bool {
        let (Some(worse), better) = (self.candidates[worse], self.candidates[better]) else { return true };
        let Some(better) = better else { return false };
        let (a, b) = (&self.problem.candidates[better], &self.problem.candidates[worse]);
        let edge = |candidate: &Candidate<'_>| if candidate.at_edge { candidate.width } else { 0 };
        let fits = !self.is_edge_limited() || ((!a.at_edge || b.at_edge) && edge(a) <= edge(b));
        let fits = fits && (self.problem.least_at_edge == 0 || a.at_edge == b.at_edge);
        let tops = !self.problem.asks_freeboard() || a.top.is_none_or(|a| b.top.is_some_and(|b| a >= b));
        let carries =
            || self.tables.iter().all(|(_, table)| table.of(better).iter().zip(table.of(worse)).all(|(a, b)| a >= b));
        a.price <= b.price && fits && tops && carries()
    }
}
