//! How a layout stands as each rule set counts it.

use crate::roof::layout::{self, Group};
use crate::roof::{Roof, Situation, StandsIn};
use crate::search::{Placed, Ranked};
use crate::units::{Flow, Length, Load};

/// The groups of a layout as they stand.
pub(super) fn of_layout<'g>(layout: &Ranked<'g>) -> Vec<Group<'g>> {
    layout.groups.iter().map(|placed: &Placed<'g>| placed.group).collect()
}

/// How a layout stands as a set counts it.
pub(super) struct Stands {
    pub(super) demand: Flow,
    /// None where it is overwhelmed.
    pub(super) depth: Option<Length>,
    pub(super) load: Option<Load>,
    pub(super) utilisation: Option<f64>,
    /// What of the demand is not known.
    pub(super) unknown: Option<StandsIn>,
}

/// A layout under a set.
pub(super) fn under(roof: &Roof, area: usize, set: usize, layout: &Ranked<'_>) -> Stands {
    let situation: Situation<'_> = roof.situation_under(area, set);
    let state = layout::state(&of_layout(layout), &situation);
    let utilisation = state.water.map(|water| water.governing.utilisation);
    Stands {
        demand: situation.demand,
        depth: state.water.map(|water| water.depth()),
        load: state.water.map(|water| water.load),
        utilisation: utilisation.filter(|utilisation| utilisation.is_finite()),
        unknown: roof.bases[set].areas[area].stands_in,
    }
}

/// The set under which the most of the limits is used, the first of equals, among those whose demand is known; none where none
/// is.
pub(super) fn governing(stands: &[Stands]) -> Option<usize> {
    let used = |set: usize| match (stands[set].depth, stands[set].utilisation) {
        (None, _) => f64::INFINITY,
        (_, utilisation) => utilisation.unwrap_or(f64::NEG_INFINITY),
    };
    let worse = |most: usize, set: usize| if used(set) > used(most) + 1e-9 { set } else { most };
    (0..stands.len()).filter(|&set| stands[set].unknown.is_none()).reduce(worse)
}
