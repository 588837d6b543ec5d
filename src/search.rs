//! The search: from an area's limits to the layouts that hold them, ranked.
//!
//! It is exact over the declared grid: every size of every catalog, every count, up to `mix` groups; a layout is left out
//! only by a bound that is proven where it is used (`dive`). Cost does not depend on the set height and the load rises with
//! it, so a layout is its sizes and counts, with a window of set heights that starts at the lowest. Openings that are made to
//! measure are searched on that grid too; the layouts kept are then fitted with widths of their own (`measure`). The answer does not
//! depend on the number of threads, and equal input gives equal answers to the last bit.

use rayon::prelude::*;

use crate::device::{Law, Regime, Size};
use crate::hydraulics::limits::Range;
use crate::roof::layout::{self, CaseState, Group, Water, highest_lift};
use crate::roof::{Governing, Roof, Situation};
use crate::rules::Misfit;
use crate::units::{Length, Money};

mod best;
mod cure;
mod dive;
mod infeasible;
mod measure;
mod plan;
mod problem;
mod rank;
mod tradeoff;

pub use cure::{Cure, Cures, Opened, Relaxation, cures, opened, relaxed};
pub use measure::{Fitted, Measured};
pub use plan::{Asked as PlanAsked, Plan, Plans, plan};
pub use rank::Criterion;
pub use tradeoff::{PlanAt, Raises, plan_tradeoff, tradeoff};

use best::{Best, Found, reported};
use dive::{Aim, dive};
use problem::Problem;

/// What is asked of the search.
#[derive(Clone, Debug, PartialEq)]
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
}

/// A group of a ranked layout with its window.
#[derive(Clone, Copy, Debug)]
pub struct Placed<'r> {
    /// The group at its reported set height.
    pub group: Group<'r>,
    /// The lowest set height of its window.
    pub from: Length,
    /// The highest set height at which, all groups lifted alike, every case still holds.
    pub to: Length,
}

/// A layout and all that is known of it.
#[derive(Clone, Debug)]
pub struct Ranked<'r> {
    /// Its groups, in catalog order.
    pub groups: Vec<Placed<'r>>,
    /// Its cost; none where one of its devices has no price.
    pub cost: Option<Money>,
    /// How it stands in each case, in the order of the cases.
    pub states: Vec<CaseState>,
    /// The highest level that each case allows.
    pub allowed: Vec<Length>,
    /// The case that governs.
    pub case: usize,
    /// The limit that governs there; none where the layout is overwhelmed.
    pub governing: Option<Governing>,
    /// Published ranges that it leaves in some case, each once with the value farthest out.
    pub beyond: Vec<(&'static Range, f64)>,
    /// The same layout under the laws of a thick wall, where the thickness of the parapet is given and it has scuppers that
    /// follow a thinner one.
    pub thick_wall: Vec<UnderLaw>,
    /// The most by which straight lines between rated rows raise its flow over logarithmic ones, as a part of the demand.
    pub chord: f64,
    /// What became of it where openings are made to measure; none where none of it is.
    pub made: Option<Measured>,
}

/// A layout under another flow law.
#[derive(Clone, Copy, Debug)]
pub struct UnderLaw {
    /// The law, followed by every device that can.
    pub law: Law,
    /// The case that governs the layout under the project's law.
    pub case: usize,
    /// The water in it; none where the layout is overwhelmed.
    pub water: Option<Water>,
    /// The first case in which the layout no longer holds.
    pub breaks: Option<usize>,
}

/// How the search of one area ended.
#[derive(Clone, Debug)]
pub enum Outcome<'r> {
    /// The best layouts, in order: every other was tried or excluded by a bound.
    Optimal(Vec<Ranked<'r>>),
    /// No layout holds, and this is why.
    Infeasible(Why<'r>),
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
    /// Sizes may stand, but not as many as the area asks for.
    NothingFits {
        /// Least number of devices.
        least: u32,
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
}

/// The answer for one area.
#[derive(Clone, Debug)]
pub struct Answer<'r> {
    /// Index of the area.
    pub area: usize,
    /// How its search ended.
    pub outcome: Outcome<'r>,
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
    let answer = |&area: &usize| Answer { area, outcome: size_area(roof, area, options) };
    if areas.len() < 2 { areas.iter().map(answer).collect() } else { areas.par_iter().map(answer).collect() }
}

fn size_area<'r>(roof: &'r Roof, area: usize, options: &Options) -> Outcome<'r> {
    let (problem, misfits) = Problem::new(roof, area, options);
    if problem.candidates.is_empty() {
        return Outcome::Infeasible(Why::NothingStands { misfits });
    }
    let found = dive(&problem, Aim::Rank, Best::new(options.keep, options.fold)).into_found();
    if found.is_empty() {
        return Outcome::Infeasible(infeasible::why(problem));
    }
    let highest = |found: &Found| problem.liftable(&found.groups).iter().map(|group| group.highest).collect::<Vec<_>>();
    let layouts: Vec<_> = found.iter().map(|found| (ranked(&problem, found), highest(found))).collect();
    let measured = |(layout, highest): (Ranked<'r>, Vec<Length>)| {
        let made = measure::measured(&problem, &layout, &highest);
        Ranked { made, ..layout }
    };
    Outcome::Optimal(layouts.into_par_iter().map(measured).collect())
}

/// All that is reported of a layout on the grid.
fn ranked<'r>(problem: &Problem<'r>, found: &Found) -> Ranked<'r> {
    let groups = reported(problem, &found.groups);
    let liftable = problem.liftable(&found.groups);
    let lift = highest_lift(&liftable, &problem.situations, problem.asked).unwrap_or(Length::ZERO);
    let placed = groups.iter().zip(&liftable).map(|(&group, liftable)| Placed {
        group,
        from: liftable.group.set_height,
        to: liftable.lifted(lift).set_height,
    });
    described(problem, placed.collect())
}

/// All that is reported of groups with their windows.
fn described<'g>(problem: &Problem<'_>, placed: Vec<Placed<'g>>) -> Ranked<'g> {
    let groups: Vec<Group<'g>> = placed.iter().map(|placed| placed.group).collect();
    let states: Vec<_> = problem.situations.iter().map(|situation| layout::state(&groups, situation)).collect();
    let (case, governing) = governing(&states);
    Ranked {
        cost: layout::cost(&groups),
        case,
        governing,
        beyond: beyond(&groups, &states, &problem.situations),
        thick_wall: thick_wall(problem, &groups, case),
        chord: chord(&groups, &states, &problem.situations),
        groups: placed,
        states,
        allowed: problem.allowed.clone(),
        made: None,
    }
}

/// The layout under the laws of a thick wall, where they differ from those it has.
fn thick_wall(problem: &Problem<'_>, groups: &[Group<'_>], case: usize) -> Vec<UnderLaw> {
    let site = &problem.situations[case].site;
    if site.thickness.is_none() {
        return Vec::new();
    }
    let differs = |law: Law| {
        groups.iter().any(|group| group.size.device.kind().laws().contains(&law) && group.size.law_at(site) != law)
    };
    // Inlet control says more where the top of a closed opening is under water.
    let laws = [Law::Throat, Law::ShortCrest, Law::InletControl].into_iter().filter(|&law| differs(law));
    laws.map(|law| under_law(&problem.situations, &problem.allowed, groups, case, law)).collect()
}

/// An answer's layout under every law that one of its devices can follow.
pub fn under_every_law(roof: &Roof, area: usize, layout: &Ranked<'_>) -> Vec<UnderLaw> {
    let situations = roof.situations(area);
    let allowed: Vec<_> = situations.iter().map(Situation::allowable_level).collect();
    let groups: Vec<_> = layout.groups.iter().map(|placed| placed.group).collect();
    let thick = roof.areas[area].parapet.thickness.is_some();
    let can = |law: &Law| {
        let follows = |group: &Group<'_>| {
            let laws = group.size.device.kind().laws();
            laws.len() > 1 && laws.contains(law)
        };
        (thick || !law.needs_thickness()) && groups.iter().any(follows)
    };
    let laws = Law::ALL.into_iter().filter(can);
    laws.map(|law| under_law(&situations, &allowed, &groups, layout.case, law)).collect()
}

fn under_law(
    situations: &[Situation<'_>],
    allowed: &[Length],
    groups: &[Group<'_>],
    case: usize,
    law: Law,
) -> UnderLaw {
    let mut situations = situations.to_vec();
    for situation in &mut situations {
        situation.site.forced = Some(law);
    }
    let holds = |(situation, &allowed): (&Situation<'_>, &Length)| {
        layout::pool(groups, situation).capacity(allowed) >= situation.demand
    };
    let breaks = situations.iter().zip(allowed).position(|pair| !holds(pair));
    UnderLaw { law, case, water: layout::state(groups, &situations[case]).water, breaks }
}

/// The case with the highest utilisation, the first of equals; an overwhelmed case governs over all.
fn governing(states: &[CaseState]) -> (usize, Option<Governing>) {
    let used = |state: &CaseState| state.water.map_or(f64::INFINITY, |water| water.governing.utilisation);
    let mut most = 0;
    for (case, state) in states.iter().enumerate() {
        // A last bit does not make one case govern over another.
        if used(state) > used(&states[most]) + 1e-9 {
            most = case;
        }
    }
    (most, states[most].water.map(|water| water.governing))
}

/// The published ranges that the drawn openings leave, or that their heads leave in some case; of an opening whose flow a law
/// had to be continued for, also those that it leaves as built.
fn beyond(groups: &[Group<'_>], states: &[CaseState], situations: &[Situation<'_>]) -> Vec<(&'static Range, f64)> {
    let mut all: Vec<(&'static Range, f64)> = Vec::new();
    for (state, situation) in states.iter().zip(situations) {
        for (group, stands) in groups.iter().zip(&state.groups).filter(|(_, stands)| stands.share.working > 0) {
            let left = |loss| {
                let (curve, _) = group.size.curve(&situation.site, group.set_height, loss);
                curve.beyond_range(stands.share.head)
            };
            let continued = stands.share.each.regime == Regime::BeyondRange;
            let as_built = if continued { left(situation.case.opening_loss) } else { Vec::new() };
            for (range, value) in left(Length::ZERO).into_iter().chain(as_built) {
                let out = |value: f64| (range.low - value).max(value - range.high);
                match all.iter_mut().find(|(known, _)| std::ptr::eq(*known, range)) {
                    Some((_, known)) if out(value) > out(*known) => *known = value,
                    Some(_) => {}
                    None => all.push((range, value)),
                }
            }
        }
    }
    all
}

fn chord(groups: &[Group<'_>], states: &[CaseState], situations: &[Situation<'_>]) -> f64 {
    let of_case = |(state, situation): (&CaseState, &Situation<'_>)| {
        let excess: f64 = groups
            .iter()
            .zip(&state.groups)
            .map(|(group, stands)| {
                let (curve, _) = group.size.curve(&situation.site, group.set_height, situation.case.opening_loss);
                let each = curve.chord_excess(stands.share.head).m3_per_s() * situation.case.discharge;
                each * f64::from(stands.share.working)
            })
            .sum();
        excess / state.demand.m3_per_s()
    };
    states.iter().zip(situations).map(of_case).fold(0.0, f64::max)
}
