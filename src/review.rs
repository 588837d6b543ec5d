//! Given layouts against the model: how each stands in every case, whether it passes, and what fails where it does not.
//!
//! A layout passes when it holds every limit in every case, keeps the freeboard asked for, and can be built where it is to
//! stand. A limit is held by the same question that the search asks: whether the layout carries the demand at the highest
//! level that the limit allows.

use rayon::prelude::*;

use crate::device::Place;
use crate::roof::layout::{self, Asked, Group, Liftable};
use crate::roof::{Given, Roof, Situation};
use crate::rules::{self, Family, Finding, Verdict};
use crate::search::{self, Options, Ranked};
use crate::units::Length;

mod backsolve;
mod mend;
mod sensitivity;
mod storage;

pub(crate) use backsolve::is_wide;
pub use backsolve::{Solved, Unknown, WIDEST, backsolve};
pub use mend::{Change, Mend, mends, worst_first};
pub use sensitivity::{Effect, Input, Sensitivity, Tolerances, sensitivity};
pub use storage::{DRAINED, Routed, Storage, storage};

/// A given layout and how it stands.
#[derive(Clone, Debug)]
pub struct Checked<'r> {
    /// The layout.
    pub given: &'r Given,
    /// All that is known of it; its window begins at its sills as given.
    pub standing: Ranked<'r>,
    /// What fails; empty where it passes.
    pub failings: Vec<Failing>,
}

/// One thing that keeps a layout from passing.
#[derive(Clone, Copy, Debug, PartialEq)]
#[non_exhaustive]
pub enum Failing {
    /// A limit is passed in a case, or the layout is overwhelmed there.
    Limit {
        /// Index of the case.
        case: usize,
    },
    /// Less freeboard is kept than was asked for.
    Freeboard {
        /// Index of the case.
        case: usize,
        /// What it keeps, negative where the water stands over the top.
        kept: Length,
        /// What was asked for.
        asked: Length,
    },
    /// The openings and the gaps between them are longer than the edge.
    Edge {
        /// Their length.
        used: Length,
        /// The edge.
        edge: Length,
    },
    /// An opening at the edge stands below the roof surface there.
    RoofAtWall {
        /// Index of its group.
        group: usize,
        /// The roof surface at the wall above the low point.
        roof: Length,
    },
    /// The top of an opening reaches the top of the parapet.
    Parapet {
        /// Index of its group.
        group: usize,
        /// The top of the opening above the low point.
        top: Length,
        /// The top of the parapet above the low point.
        parapet: Length,
    },
    /// A rule of a binding set is broken.
    Rule(Finding),
}

impl Checked<'_> {
    /// Whether nothing fails.
    pub fn passes(&self) -> bool {
        self.failings.is_empty()
    }
}

/// Holds given layouts against the model, in their order.
pub fn check<'r>(roof: &'r Roof, options: &Options, given: &'r [Given]) -> Vec<Checked<'r>> {
    let situations: Vec<Vec<Situation<'r>>> = (0..roof.areas.len()).map(|area| roof.situations(area)).collect();
    let allowed: Vec<Vec<Length>> =
        situations.iter().map(|of_area| of_area.iter().map(Situation::allowable_level).collect()).collect();
    let one = |given: &'r Given| checked(roof, options, given, &situations[given.area], &allowed[given.area]);
    given.par_iter().map(one).collect()
}

fn checked<'r>(
    roof: &'r Roof,
    options: &Options,
    given: &'r Given,
    situations: &[Situation<'r>],
    allowed: &[Length],
) -> Checked<'r> {
    let groups = given.groups();
    let asked = Asked { freeboard: options.freeboard };
    let liftable: Vec<Liftable<'r>> =
        groups.iter().map(|&group| Liftable { group, highest: highest(roof, given.area, group, allowed) }).collect();
    let standing = search::standing(&groups, &liftable, situations, allowed, asked);
    let mut failings = misfits(roof, given.area, &groups);
    let broken = situations.iter().zip(allowed).enumerate().filter_map(|(case, (situation, &allowed))| {
        // The level is the least at which the demand leaves: it is allowed exactly where the capacity there suffices.
        if standing.states[case].water.is_none_or(|water| water.level > allowed) {
            return Some(Failing::Limit { case });
        }
        let kept = standing.states[case].groups.iter().filter_map(|group| group.freeboard).reduce(Length::min)?;
        let wanted = layout::freeboard_asked(situation, asked)?;
        let holds = layout::holds_at(&groups, situation, allowed, asked);
        (!holds).then_some(Failing::Freeboard { case, kept, asked: wanted })
    });
    failings.extend(broken);
    failings.extend(broken_rules(roof, options, given.area, &groups));
    Checked { given, standing, failings }
}

/// The binding rules that groups break, of those that no case of the roof holds them to already.
fn broken_rules(roof: &Roof, options: &Options, area: usize, groups: &[Group<'_>]) -> Vec<Failing> {
    let book = &options.rules;
    if !book.sets.iter().any(|applied| applied.binding) {
        return Vec::new();
    }
    let breaks = |finding: &Finding| {
        let family = book.rule(finding.at).kind.role.family();
        let by_a_case = matches!(family, Family::Demand | Family::Water);
        book.sets[finding.at.set].binding && finding.verdict == Verdict::Fail && !by_a_case
    };
    rules::findings(book, roof, area, groups).into_iter().filter(breaks).map(Failing::Rule).collect()
}

/// How high a group may be lifted: under the top of the parapet, and no higher than any case lets water stand.
fn highest(roof: &Roof, area: usize, group: Group<'_>, allowed: &[Length]) -> Length {
    let parapet = roof.areas[area].parapet.height.filter(|_| group.size.place == Place::Edge);
    let under = parapet.zip(group.size.device.height());
    let under = under.map(|(parapet, opening)| Length::from_nm(parapet.nm() - opening.nm() - 1));
    let water = allowed.iter().copied().filter(|level| level.m().is_finite()).fold(Length::ZERO, Length::max);
    under.map_or(water, |under| under.min(water)).max(group.set_height)
}

/// Why a layout cannot be built as it is given.
fn misfits(roof: &Roof, area: usize, groups: &[Group<'_>]) -> Vec<Failing> {
    let catchment = &roof.areas[area];
    let mut misfits = Vec::new();
    let used = rules::edge_used(groups.iter().map(|group| (group.size, group.count)), catchment);
    if let Some(edge) = catchment.edge.filter(|edge| used > edge.nm()) {
        misfits.push(Failing::Edge { used: Length::from_nm(used), edge });
    }
    for (index, group) in groups.iter().enumerate().filter(|(_, group)| group.size.place == Place::Edge) {
        if group.set_height < catchment.roof_at_wall {
            misfits.push(Failing::RoofAtWall { group: index, roof: catchment.roof_at_wall });
        }
        let top = group.size.device.height().map(|opening| group.set_height + opening);
        if let (Some(top), Some(parapet)) = (top, catchment.parapet.height)
            && top.nm() >= parapet.nm()
        {
            misfits.push(Failing::Parapet { group: index, top, parapet });
        }
    }
    misfits
}
