//! The layouts of an area that are not beaten in all of cost, load, count and width.
//!
//! A layout is beaten when another is no worse in all four and better in at least one: costs no more, keeps the water no
//! deeper in its worst case (in whole nanometres, as [`Criterion::Load`] ranks), has no more devices and no more clear width in
//! all. Of layouts equal in all four the one with the fewest sizes is listed, then the first in catalog order. Every layout
//! stands at its lowest set heights, where its load is least. Where a device that may stand has no price, cost is left out
//! of the comparison.
//!
//! # What is left out, and why it may be
//!
//! 1. *Sizes that another stands in for* (`stand_in`). A size that costs no less and is no narrower than another, and passes
//!    exactly what that one does up to the highest level allowed, is put in its place device for device: the sums are no
//!    greater, the level is the same in every case, there are no more groups, and of equals the layout so made comes first.
//! 2. *What must be installed, and capacity*: bounds 1 and 2 of `dive`.
//! 3. *What its cheapers carry.* Layouts are gone through by cost, of equals by count, width, sizes and catalog order. None
//!    can then be beaten by a later one, unless that is equal in all sums; and to stay it must have less load than every
//!    layout kept that is no greater in count and width, for all of those cost no more. With w for the least of their loads,
//!    it must carry the demand of every case at a depth under w, as its level is the least at which it does: a table of what
//!    one device of each size carries there tells. A level is solved only for what passes.
//!
//! Nothing else is left out. Going by cost needs no more memory than a pass: of a pass with too many layouts the dearer
//! half is left for later ones, so the answer does not depend on where passes end.

use rayon::prelude::*;

use crate::roof::layout::{Group, pool};
use crate::roof::{Roof, Situation, load_of};
use crate::units::{Length, Load, Money};

use super::best::{Found, Groups};
use super::problem::{Candidate, Problem};
use super::rank::{Criterion, Sums};
use super::{Options, Ranked, of_found};

mod roofwide;
mod screens;
mod sieve;
mod walk;

pub use roofwide::{PlanFront, UnbeatenPlan, plan_front};

/// A layout that no other beats in all of cost, load, count and width.
#[derive(Clone, Debug)]
pub struct Unbeaten<'r> {
    /// Its groups at their lowest set heights, in catalog order; what is there already stands beside them and counts for
    /// nothing.
    pub groups: Vec<Group<'r>>,
    /// Its cost; none where a device that may stand in the area has no price.
    pub cost: Option<Money>,
    /// The greatest load over the cases.
    pub load: Load,
    /// The case in which that load stands, the first of equals.
    pub case: usize,
    /// Devices, all groups together.
    pub count: u32,
    /// Total clear width.
    pub width: Length,
}

/// The layouts of an area that are not beaten.
#[derive(Debug)]
pub struct Front<'r> {
    /// Index of the area.
    pub area: usize,
    /// The layouts by cost, then load, count and width, where cost plays no part by width, count and load; empty where the
    /// area has no layout, or the search was ended.
    pub rows: Vec<Unbeaten<'r>>,
    /// Whether everything was tried; else the watch ended the search, and nothing is listed.
    pub finished: bool,
    problem: Problem<'r>,
    kept: Vec<Kept>,
}

impl<'r> Front<'r> {
    /// All that is reported of the first rows, at most so many, as [`super::size`] tells it.
    pub fn opened(&self, most: usize) -> Vec<Ranked<'r>> {
        let open = |kept: &Kept| of_found(&self.problem, &Found::new(kept.groups.clone(), kept.sums, 0));
        self.kept[..self.kept.len().min(most)].par_iter().map(open).collect()
    }
}

/// The layouts of the given areas that are not beaten, area by area in their order.
///
/// Of the options those on mix and freeboard count; what layouts are ranked by, how many are kept and whether families are
/// folded do not.
///
/// # Example
/// ```
/// # use std::path::Path;
/// use brimline::{input, search};
/// let project = input::read(Path::new("examples/harbour-depot.toml")).expect("the example reads");
/// let fronts = search::front(&project.roof, &project.options, &[2]);
/// let (cheapest, next) = (&fronts[0].rows[0], &fronts[0].rows[1]);
/// assert!(next.cost >= cheapest.cost && next.load < cheapest.load);
/// ```
pub fn front<'r>(roof: &'r Roof, options: &Options, areas: &[usize]) -> Vec<Front<'r>> {
    let one = |&area: &usize| of_area(area, &problem(roof, options, area));
    if areas.len() < 2 { areas.iter().map(one).collect() } else { areas.par_iter().map(one).collect() }
}

/// The problem of an area, its layouts at their lowest set heights whatever they are ranked by.
fn problem<'r>(roof: &'r Roof, options: &Options, area: usize) -> Problem<'r> {
    let options = Options { rank_by: vec![Criterion::Load], ..options.clone() };
    Problem::new(roof, area, &options).0
}

fn of_area<'r>(area: usize, problem: &Problem<'r>) -> Front<'r> {
    let problem = without_stood_in(problem);
    let walked = walk::walk(&problem);
    let finished = walked.is_ok();
    let kept = walked.unwrap_or_default();
    let rows = kept.iter().map(|kept| unbeaten(&problem, kept)).collect();
    Front { area, rows, finished, problem, kept }
}

/// A layout that was kept, with what it is compared by.
#[derive(Debug)]
struct Kept {
    groups: Groups,
    sums: Sums,
    worst: Worst,
}

/// The deepest water over the cases.
#[derive(Clone, Copy, Debug)]
struct Worst {
    depth: Length,
    case: usize,
}

/// The sums that layouts are compared by; cost is zero where it plays no part.
fn sums(problem: &Problem<'_>, groups: &[(usize, u32)]) -> Sums {
    let priced = is_priced(problem);
    groups.iter().fold(Sums::default(), |sums, &(index, count)| {
        let (candidate, many) = (&problem.candidates[index], i64::from(count));
        Sums {
            cost: sums.cost + if priced { candidate.price.saturating_mul(many) } else { 0 },
            count: sums.count + many,
            width: sums.width.saturating_add(candidate.width.saturating_mul(many)),
            sizes: sums.sizes + 1,
        }
    })
}

/// Whether cost takes part: every device that may stand has a price.
fn is_priced(problem: &Problem<'_>) -> bool {
    problem.order.criteria().contains(&Criterion::Cost)
}

fn unbeaten<'r>(problem: &Problem<'r>, kept: &Kept) -> Unbeaten<'r> {
    Unbeaten {
        groups: standing_groups(problem, &kept.groups)[..kept.groups.len()].to_vec(),
        cost: is_priced(problem).then(|| Money::from_millionths(kept.sums.cost)),
        load: load_of(problem.situations[kept.worst.case].ponding.weighed(kept.worst.depth)),
        case: kept.worst.case,
        count: u32::try_from(kept.sums.count).unwrap_or(u32::MAX),
        width: Length::from_nm(kept.sums.width),
    }
}

/// What stands of a layout: its groups at their lowest set heights, and what is there already.
fn standing_groups<'r>(problem: &Problem<'r>, groups: &[(usize, u32)]) -> Vec<Group<'r>> {
    problem.liftable(groups).iter().map(|liftable| liftable.group).collect()
}

/// The deepest water of all cases, the first of equals; none where a case overwhelms the layout.
fn worst(problem: &Problem<'_>, groups: &[Group<'_>]) -> Option<Worst> {
    let mut worst: Option<Worst> = None;
    for (case, situation) in problem.situations.iter().enumerate() {
        let pool = pool(groups, situation);
        // What carries the demand at a level stands no higher; along a channel the level is not the depth.
        let lower = |worst: &Worst| situation.channel.is_none() && pool.capacity(worst.depth) >= situation.demand;
        if worst.as_ref().is_some_and(lower) {
            continue;
        }
        // Device flows are finite at every finite level, so the solver has no reason to refuse.
        let depth = situation.depth(pool.level(situation.demand).unwrap_or(None)?);
        if worst.is_none_or(|worst| depth.nm() > worst.depth.nm()) {
            worst = Some(Worst { depth, case });
        }
    }
    worst
}

/// The problem without the sizes that another stands in for.
fn without_stood_in<'r>(problem: &Problem<'r>) -> Problem<'r> {
    let candidates = &problem.candidates;
    let stood_in = |size: &Candidate<'_>| candidates.iter().any(|other| stands_in(problem, other, size));
    let keep: Vec<usize> = candidates.iter().filter(|size| !stood_in(size)).map(|size| size.index).collect();
    problem.with_sizes(&keep)
}

/// Whether one size can be put in the place of another, device for device, and the layout so made comes first.
fn stands_in(problem: &Problem<'_>, one: &Candidate<'_>, other: &Candidate<'_>) -> bool {
    let priced = is_priced(problem);
    let price = |candidate: &Candidate<'_>| if priced { candidate.price } else { 0 };
    let no_more = price(one) <= price(other) && one.width <= other.width;
    let less = price(one) < price(other) || one.width < other.width;
    let edge = problem.edge.is_none() || !one.at_edge || other.at_edge;
    let edge = edge && (problem.least_at_edge == 0 || one.at_edge == other.at_edge);
    let tops = !problem.asks_freeboard() || one.top.is_none_or(|top| other.top.is_some_and(|other| top >= other));
    no_more && (less || one.index < other.index) && edge && tops && is_alike(problem, one, other)
}

/// Whether two sizes pass the same at every level up to the highest allowed, in every case.
fn is_alike(problem: &Problem<'_>, one: &Candidate<'_>, other: &Candidate<'_>) -> bool {
    let alike = |(situation, &allowed): (&Situation<'_>, &Length)| {
        let built = |candidate: &Candidate<'_>| {
            let raised = candidate.lowest() + situation.case.sill_error;
            let (curve, rise) = candidate.size.curve(&situation.site, raised, situation.case.opening_loss);
            (curve, raised + rise)
        };
        let ((curve, sill), (other, beside)) = (built(one), built(other));
        sill == beside && curve.is_alike_up_to(&other, crate::device::Head::above(sill, allowed))
    };
    problem.situations.iter().zip(&problem.allowed).all(alike)
}
