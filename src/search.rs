//! The search: from an area's limits to the layouts that hold them, ranked.
//!
//! It is exact over the declared grid: every size of every catalog, every count, up to `mix` groups; a layout is left out
//! only by a bound that is proven where it is used (`dive`). Cost does not depend on the set height and the load rises with
//! it, so a layout is its sizes and counts, with a window of set heights that starts at the lowest. Openings that are made to
//! measure are searched on that grid too; the layouts kept are then fitted with widths of their own (`measure`). The answer
//! does not depend on the number of threads, and equal input gives equal answers to the last bit.
//!
//! Where freeboard is asked this is an answer for sills at the lowest of their set heights: a higher sill also has a higher
//! top, and where other devices pass most of the water, lifting one opening alone may win freeboard. Such layouts are not
//! looked for; what is found holds, and more may.

use std::sync::Arc;

use rayon::prelude::*;
use rustc_hash::FxHashMap;

use crate::device::Size;
use crate::roof::Roof;
use crate::rules::{Misfit, RuleAt, Rulebook};
use crate::units::{Length, Money};

mod alike;
mod best;
mod closing;
mod cure;
mod dive;
mod front;
mod infeasible;
mod measure;
mod plan;
mod problem;
mod rank;
mod standing;
mod structure;
mod tradeoff;
mod watch;

pub use cure::{Cure, Cures, Opened, Opening, Relaxation, binds, cures, opened, relaxed};
pub use front::{Front, PlanFront, Unbeaten, UnbeatenPlan, front, plan_front};
pub use measure::{Fitted, Measured};
pub use plan::{Asked as PlanAsked, Plan, Plans, StiffenedArea, StiffenedPlan, plan, stiffened_plan};
pub use rank::Criterion;
pub use standing::{Closed, Placed, Ranked, UnderLaw, standing, under_every_law};
pub use structure::{Stiffened, Structure, stiffened};
pub use tradeoff::{PlanAt, Raises, plan_tradeoff, tradeoff};
pub use watch::{Stopped, Watch};

use best::{Found, reported};
use closing::Chosen;
use dive::Aim;
use problem::Problem;

/// What is asked of the search.
#[derive(Clone, Debug)]
pub struct Options {
    /// Criteria in the order in which they decide.
    pub rank_by: Vec<Criterion>,
    /// How many layouts to keep for each area.
    pub keep: usize,
    /// Most groups in one layout, 1 to 3.
    pub mix: usize,
    /// Least distance from the water up to the top of every closed opening, in every case.
    pub freeboard: Option<Length>,
    /// Whether only the best layout of each family, the same tags and the same count of each, is listed.
    pub fold: bool,
    /// Who may end the search before everything was tried.
    pub watch: Watch,
    /// The rule sets over the roof, of which those that bind restrict what is searched.
    pub rules: Arc<Rulebook>,
}

/// How the search of one area ended.
#[derive(Clone, Debug)]
pub enum Outcome<'r> {
    /// The best layouts, in order: every other was tried or excluded by a bound.
    Optimal(Vec<Ranked<'r>>),
    /// The search was ended before everything was tried.
    Stopped {
        /// The best layouts found until then, in order; there may be none.
        layouts: Vec<Ranked<'r>>,
        /// What every layout has at least, found or not.
        bound: Option<Least>,
    },
    /// No layout holds, and this is why.
    Infeasible(Why<'r>),
}

impl<'r> Outcome<'r> {
    /// The layouts found, in order.
    pub fn layouts(&self) -> &[Ranked<'r>] {
        match self {
            Self::Optimal(layouts) | Self::Stopped { layouts, .. } => layouts,
            Self::Infeasible(_) => &[],
        }
    }
}

/// A proven least value of the criterion that layouts are ranked by first.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Least {
    /// Of the cost.
    Cost(Money),
    /// Of the number of devices.
    Count(u32),
    /// Of the total width.
    Width(Length),
}

/// Why an area has no layout.
#[derive(Clone, Debug)]
#[non_exhaustive]
pub enum Why<'r> {
    /// No size may stand in the area.
    NothingStands {
        /// Every size with the rule it breaks.
        misfits: Vec<(&'r Size, Misfit)>,
    },
    /// A binding rule is broken whatever is added.
    Breaks(Broken),
    /// Sizes may stand, but not as many as the area asks for.
    NothingFits {
        /// Least number of devices.
        least: u32,
        /// The binding rule that asks for so many, where one does.
        rule: Option<RuleAt>,
        /// Least number of openings at the edge, and the binding rule that asks for so many.
        at_edge: Option<(u32, RuleAt)>,
        /// Greatest number of devices.
        most: u32,
    },
    /// No layout keeps under the limits.
    Limits {
        /// The layout with the least governing utilisation.
        best: Box<Ranked<'r>>,
        /// Cases that no layout holds, whatever the other cases.
        alone: Vec<usize>,
        /// Cases that each can be held but not together; empty where one is impossible alone.
        together: Vec<usize>,
    },
    /// Layouts keep under the limits, but none with the freeboard asked for.
    Freeboard {
        /// The freeboard asked for.
        asked: Length,
        /// The most that a layout keeps, negative where the water stands over the top; and that layout.
        best: Option<(Length, Box<Ranked<'r>>)>,
    },
    /// No layout holds, but the search was ended before it knew why.
    Stopped,
}

/// A binding rule that no layout of an area keeps, by the area itself or by what is there already.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Broken {
    /// The rule.
    pub rule: RuleAt,
    /// Which group of what is there breaks it; none where the area does.
    pub there: Option<usize>,
}

/// The answer for one area.
#[derive(Clone, Debug)]
pub struct Answer<'r> {
    /// Index of the area.
    pub area: usize,
    /// How its search ended.
    pub outcome: Outcome<'r>,
    /// Where the first layout closes what is there: what a search finds that keeps all of it, its first layout alone, and none
    /// where nothing holds so.
    pub keeping: Option<Outcome<'r>>,
}

/// Ranks the layouts of the given areas, in their order.
///
/// # Example
/// ```
/// # use std::path::Path;
/// use brimline::{input, search};
/// let project = input::read(Path::new("examples/harbour-depot.toml")).expect("the example reads");
/// let answers = search::size(&project.roof, &project.options, &[0]);
/// assert!(matches!(&answers[0].outcome, search::Outcome::Optimal(layouts) if !layouts.is_empty()));
/// ```
pub fn size<'r>(roof: &'r Roof, options: &Options, areas: &[usize]) -> Vec<Answer<'r>> {
    if let &[area] = areas {
        options.watch.expect(1);
        let outcome = size_area(roof, area, options);
        options.watch.advance();
        return vec![answered(roof, options, area, outcome)];
    }
    let answer = |(&area, best): (&usize, Sought<'r>)| {
        let outcome = if best.finished && best.layouts.is_empty() {
            let (problem, misfits) = Problem::new(roof, area, options);
            none(problem, misfits)
        } else {
            best.outcome()
        };
        answered(roof, options, area, outcome)
    };
    areas.par_iter().zip(best_of_each(roof, options, areas)).map(answer).collect()
}

/// An answer, with what keeping all that is there comes to where the first layout does not.
fn answered<'r>(roof: &'r Roof, options: &Options, area: usize, outcome: Outcome<'r>) -> Answer<'r> {
    let closes = outcome.layouts().first().and_then(|layout| layout.closed.as_ref());
    let keeping = closes.filter(|closed| !closed.groups.is_empty()).map(|_| {
        let options = Options { keep: 1, ..options.clone() };
        best_of(&Problem::new(roof, area, &options).0.keeping_all(), &options).outcome()
    });
    Answer { area, outcome, keeping }
}

/// What a search of one area by itself finds.
fn size_area<'r>(roof: &'r Roof, area: usize, options: &Options) -> Outcome<'r> {
    let (problem, misfits) = Problem::new(roof, area, options);
    let best = best_of(&problem, options);
    if best.finished && best.layouts.is_empty() { none(problem, misfits) } else { best.outcome() }
}

/// The best layouts of an area, of those that were tried.
struct Sought<'r> {
    layouts: Vec<Ranked<'r>>,
    /// Whether all were tried; else what every layout has at least.
    finished: bool,
    bound: Option<Least>,
}

impl<'r> Sought<'r> {
    /// How the search ended, where it found layouts or was ended.
    fn outcome(self) -> Outcome<'r> {
        let Self { layouts, finished, bound } = self;
        if finished { Outcome::Optimal(layouts) } else { Outcome::Stopped { layouts, bound } }
    }
}

/// The best layouts of each area.
fn best_of_each<'r>(roof: &'r Roof, options: &Options, areas: &[usize]) -> Vec<Sought<'r>> {
    options.watch.expect(areas.len());
    let groups = alike::groups(roof, options, areas);
    let worth_trying: Vec<_> = groups.par_iter().map(|group| alike::worth_trying(roof, options, group)).collect();
    let of_group = |(group, sizes): (&Vec<usize>, _)| group.iter().map(|&area| (area, sizes)).collect::<Vec<_>>();
    let sizes_of: FxHashMap<usize, &Vec<usize>> = groups.iter().zip(&worth_trying).flat_map(of_group).collect();
    let best = |&area: &usize| {
        let best = best_of(&Problem::of_sizes(roof, area, options, sizes_of[&area]), options);
        options.watch.advance();
        best
    };
    areas.par_iter().map(best).collect()
}

/// The best layouts of an area.
fn best_of<'r>(problem: &Problem<'r>, options: &Options) -> Sought<'r> {
    let deciding = problem.deciding();
    let searched = deciding.as_ref().unwrap_or(problem);
    let (chosen, finished) = closing::best(searched, Aim::Rank, options.keep, options.fold);
    let layouts = measured(problem, chosen.iter().map(|chosen| (ranked(problem, chosen), &chosen.found)));
    let bound = if finished { None } else { closing::least(problem) };
    Sought { layouts, finished, bound }
}

/// Why an area has no layout.
fn none<'r>(problem: Problem<'r>, misfits: Vec<(&'r Size, Misfit)>) -> Outcome<'r> {
    // What may be closed breaks a rule only as long as it stays.
    if let Some(broken) = problem.broken.filter(|broken| broken.there.is_none() || problem.closing.is_none()) {
        return Outcome::Infeasible(Why::Breaks(broken));
    }
    let nothing_stands = problem.candidates.is_empty() && problem.fixed.is_empty();
    let why = || infeasible::why(problem).unwrap_or(Why::Stopped);
    Outcome::Infeasible(if nothing_stands { Why::NothingStands { misfits } } else { why() })
}

/// The layouts, each with what it comes to where openings are made to measure.
fn measured<'r, 'f>(problem: &Problem<'r>, layouts: impl Iterator<Item = (Ranked<'r>, &'f Found)>) -> Vec<Ranked<'r>> {
    // Beside what may be closed nothing is made to measure.
    if problem.closing.is_some() || problem.candidates.iter().all(|candidate| candidate.size.made.is_none()) {
        return layouts.map(|(layout, _)| layout).collect();
    }
    let highest = |found: &Found| problem.liftable(&found.groups).iter().map(|group| group.highest).collect::<Vec<_>>();
    let layouts: Vec<_> = layouts.map(|(layout, found)| (layout, highest(found))).collect();
    let one = |(layout, highest): (Ranked<'r>, Vec<Length>)| Ranked {
        made: measure::measured(problem, &layout, &highest),
        ..layout
    };
    layouts.into_par_iter().map(one).collect()
}

/// All that is reported of a layout on the grid.
fn ranked<'r>(problem: &Problem<'r>, chosen: &Chosen) -> Ranked<'r> {
    let Some(closing) = &problem.closing else { return of_found(problem, &chosen.found) };
    let way = problem.closed_by(chosen.way.clone());
    let closed = Closed { groups: closing.closed_by(&chosen.way), cost: closing.cost_of(&chosen.way) };
    let layout = of_found(&way, &chosen.found);
    let cost = layout.cost.map(|added| [added, closed.cost].into_iter().sum());
    Ranked { cost, closed: Some(closed), ..layout }
}

/// All that is reported of what is added to what stays.
fn of_found<'r>(problem: &Problem<'r>, found: &Found) -> Ranked<'r> {
    let liftable = problem.liftable(&found.groups);
    let groups = reported(problem, &found.groups);
    let standing = standing(&groups, &liftable, &problem.situations, &problem.allowed, problem.asked);
    Ranked { kept: problem.fixed.len(), ..standing }
}
