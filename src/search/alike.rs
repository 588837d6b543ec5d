//! Areas that differ in their demand and the length of their edge alone.
//!
//! What one of each size carries in an area depends on its limits, its walls and its set heights, but not on how much rain
//! runs onto it. On a roof of many areas few differ in more than that: what is asked of the sizes is asked once for all alike.

use rustc_hash::FxHashMap;

use std::cmp::Ordering;

use crate::roof::Roof;
use crate::rules::Restriction;
use crate::units::Length;

use super::Options;
use super::dive::{Keeps, not_outdone};
use super::problem::Problem;

/// The given areas in groups of areas alike, in the order of their first. Of two in one group one asks no less than the other
/// in every case.
pub(super) fn groups(roof: &Roof, options: &Options, areas: &[usize]) -> Vec<Vec<usize>> {
    let groups = alike_but_demand(roof, options, areas);
    if roof.bases.is_empty() {
        // All demands are as many times that of the design rain in every area.
        return groups;
    }
    groups.into_iter().flat_map(|group| rising(roof, group)).collect()
}

/// Areas in rows along which the demand rises in every case; rule sets may count one area higher and another lower.
fn rising(roof: &Roof, mut group: Vec<usize>) -> Vec<Vec<usize>> {
    let demands = |area: usize| -> Vec<f64> {
        roof.situations(area).iter().map(|situation| situation.demand.m3_per_s()).collect()
    };
    group.sort_by(|&a, &b| by_demand(&demands(a), &demands(b)));
    let mut rows: Vec<(Vec<f64>, Vec<usize>)> = Vec::new();
    for area in group {
        let asked = demands(area);
        match rows.iter_mut().find(|(last, _)| last.iter().zip(&asked).all(|(last, asked)| last <= asked)) {
            Some((last, row)) => {
                row.push(area);
                *last = asked;
            }
            None => rows.push((asked, vec![area])),
        }
    }
    rows.into_iter().map(|(_, row)| row).collect()
}

/// Demands case by case, the first that differs deciding.
pub(super) fn by_demand(a: &[f64], b: &[f64]) -> Ordering {
    let differs = a.iter().zip(b).map(|(a, b)| a.total_cmp(b)).find(|ordering| ordering.is_ne());
    differs.unwrap_or(Ordering::Equal)
}

fn alike_but_demand(roof: &Roof, options: &Options, areas: &[usize]) -> Vec<Vec<usize>> {
    let mut groups: Vec<Vec<usize>> = Vec::new();
    let mut known: FxHashMap<Vec<u64>, usize> = FxHashMap::default();
    for &area in areas {
        let group = *known.entry(signature(roof, options, area)).or_insert(groups.len());
        if group == groups.len() {
            groups.push(Vec::new());
        }
        groups[group].push(area);
    }
    groups
}

/// What areas alike have in common, all that decides about sizes but the demand and the edge.
fn signature(roof: &Roof, options: &Options, area: usize) -> Vec<u64> {
    let catchment = &roof.areas[area];
    let length = |length: Option<Length>| length.map_or(u64::MAX, |length| length.m().to_bits());
    let mut signature = vec![
        u64::from(*catchment.count.start()),
        u64::from(*catchment.count.end()),
        length(Some(catchment.gap)),
        length(Some(catchment.roof_at_wall)),
        length(catchment.parapet.height),
        length(catchment.parapet.thickness),
        // An edge of no length lets nothing stand, not even what takes none of it.
        u64::from(catchment.edge == Some(Length::ZERO)),
    ];
    let situations = roof.situations(area);
    signature.extend(situations.iter().map(|situation| length(Some(situation.allowable_level()))));
    // How many kinds stand before them, so that no two lists run together.
    signature.push(catchment.kinds.as_ref().map_or(u64::MAX, |kinds| kinds.len() as u64));
    signature.extend(catchment.kinds.iter().flatten().map(|&kind| kind as u64));
    signature.push(u64::from(catchment.set_heights.is_some()));
    signature.extend(catchment.set_heights.iter().flatten().map(|&height| length(Some(height))));
    let restriction = Restriction::new(&options.rules, &roof.bases, catchment, area);
    if !restriction.is_none() {
        signature.extend(restriction.least.map(|(least, _)| u64::from(least)));
        signature.push(restriction.at_edge.map_or(u64::MAX, |(least, _)| u64::from(least)));
        signature.push(u64::from(restriction.broken.is_some()));
        let primary = &catchment.facts.primary;
        signature.extend([primary.drain, primary.set_height, primary.depth].map(length));
    }
    for situation in situations.iter().filter(|situation| situation.case.basis.is_some()) {
        signature.push(length(situation.freeboard));
        signature.push(length(situation.limits.depth));
        signature.push(situation.limits.load.map_or(u64::MAX, |load| load.pa().to_bits()));
    }
    signature
}

/// The area of a group with the longest edge: what may stand in any of them may stand here.
pub(super) fn with_longest_edge(roof: &Roof, group: &[usize]) -> usize {
    let edge = |&area: &usize| roof.areas[area].edge.map_or(i64::MAX, Length::nm);
    group.iter().copied().max_by_key(edge).unwrap_or_default()
}

/// The sizes, by index, that need to be tried in a group of areas where so many layouts are kept.
pub(super) fn worth_trying(roof: &Roof, options: &Options, group: &[usize]) -> Vec<usize> {
    let (problem, _) = Problem::new(roof, with_longest_edge(roof, group), options);
    if problem.asks_freeboard() {
        // Under each lowest top the sizes carry something else; the search of each area sees to it.
        return problem.candidates.iter().map(|candidate| candidate.index).collect();
    }
    let table = problem.table(&problem.allowable_levels(None), |candidate| Some(candidate.lowest()));
    let keeps = Keeps { one: options.keep == 1, families: options.fold };
    let edge_limited = group.iter().any(|&area| roof.areas[area].edge.is_some());
    let left = not_outdone(&problem, problem.members(None), &table, keeps, edge_limited);
    left.into_iter().map(|index| problem.candidates[index].index).collect()
}
