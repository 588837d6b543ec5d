//! The best layouts found so far, one of each family, and what a layout must beat to be among them.

use std::cell::OnceCell;
use std::cmp::Ordering;

use crate::roof::MOST_GROUPS;
use crate::roof::layout::{self, Group, highest_lift};
use crate::units::Length;

use super::problem::{Class, Problem, Table};
use super::rank::{Criterion, Sums};

/// Groups of candidates in catalog order, with their counts.
pub(super) type Groups = Vec<(usize, u32)>;

/// A layout with what it is ranked by. What needs a water level is computed when first compared.
#[derive(Debug)]
pub(super) struct Found {
    pub(super) groups: Groups,
    pub(super) sums: Sums,
    family: u128,
    levels: OnceCell<Levels>,
    screen: OnceCell<Option<Table>>,
}

/// What of a layout's rank needs a water level.
#[derive(Debug)]
struct Levels {
    /// Worst level of all cases, m; infinite where the layout is overwhelmed. Load follows it, the ponding head being one.
    worst: f64,
    /// Governing utilisation of all cases; infinite where the layout is overwhelmed.
    utilisation: f64,
    /// Set height of the lowest sill as reported, nanometres.
    set_height: i64,
}

impl Found {
    pub(super) fn new(groups: Groups, sums: Sums, family: u128) -> Self {
        Self { groups, sums, family, levels: OnceCell::new(), screen: OnceCell::new() }
    }

    fn levels(&self, problem: &Problem<'_>) -> &Levels {
        self.levels.get_or_init(|| {
            let groups = reported(problem, &self.groups);
            let mut levels = Levels { worst: f64::NEG_INFINITY, utilisation: f64::NEG_INFINITY, set_height: i64::MAX };
            for situation in &problem.situations {
                let water = layout::state(&groups, situation).water;
                levels.worst = levels.worst.max(water.map_or(f64::INFINITY, |water| water.level.m()));
                let utilisation = water.map_or(f64::INFINITY, |water| water.governing.utilisation);
                levels.utilisation = levels.utilisation.max(utilisation);
            }
            for group in &groups {
                levels.set_height = levels.set_height.min(group.set_height.nm());
            }
            levels
        })
    }

    /// The order of two layouts by all criteria, then by catalog order.
    fn compare(&self, other: &Self, problem: &Problem<'_>) -> Ordering {
        let by = |criterion: Criterion| match criterion {
            Criterion::Load => self.levels(problem).worst.total_cmp(&other.levels(problem).worst),
            Criterion::Utilisation => self.levels(problem).utilisation.total_cmp(&other.levels(problem).utilisation),
            Criterion::SetHeight => other.levels(problem).set_height.cmp(&self.levels(problem).set_height),
            sum => self.sums.value(sum).cmp(&other.sums.value(sum)),
        };
        let decided = problem.order.criteria().iter().map(|&criterion| by(criterion)).find(|ordering| ordering.is_ne());
        decided.unwrap_or_else(|| self.groups.cmp(&other.groups))
    }

    /// What one of each candidate carries where a layout of equal sums must carry the demand to rank as high as this one:
    /// at this one's worst level, at its utilisation, or with no sill under its set height. None asks nothing.
    fn screen(&self, problem: &Problem<'_>, class: Class) -> Option<&Table> {
        let table = || {
            let levels = self.levels(problem);
            let allowed = problem.allowable_levels(class);
            match problem.order.first_level() {
                Criterion::Utilisation if levels.utilisation.is_finite() => {
                    let levels: Vec<_> =
                        problem.situations.iter().map(|situation| situation.level_at(levels.utilisation)).collect();
                    Some(problem.table(&levels, |candidate| Some(candidate.lowest())))
                }
                Criterion::Utilisation => None,
                Criterion::SetHeight => {
                    // Lifting an opening lifts its top, so the class's ceiling does not bind here.
                    let allowed: Vec<_> =
                        problem.situations.iter().map(crate::roof::Situation::allowable_level).collect();
                    let least = Length::from_nm(levels.set_height);
                    let stands = |highest: Length| highest.nm() >= levels.set_height;
                    let height = |low: Length, highest| stands(highest).then_some(low.max(least));
                    Some(problem.table(&allowed, |candidate| height(candidate.lowest(), candidate.highest())))
                }
                _ => {
                    let worst = Length::from_m(levels.worst);
                    let levels: Vec<_> = allowed.into_iter().map(|level| level.min(worst)).collect();
                    Some(problem.table(&levels, |candidate| Some(candidate.lowest())))
                }
            }
        };
        self.screen.get_or_init(table).as_ref()
    }
}

/// The groups at the set heights that are reported: the lowest, or the highest on the grid that the window reaches where
/// the set height is preferred to the load.
pub(super) fn reported<'r>(problem: &Problem<'r>, groups: &[(usize, u32)]) -> Vec<Group<'r>> {
    let liftable = problem.liftable(groups);
    let lowest = || liftable.iter().map(|group| group.group).collect();
    if !problem.order.prefers_high_sills() {
        return lowest();
    }
    let Some(lift) = highest_lift(&liftable, &problem.situations, problem.asked) else { return lowest() };
    let on_grid = |(liftable, &(index, _)): (&layout::Liftable<'r>, &(usize, u32))| {
        let end = liftable.lifted(lift).set_height;
        let heights = &problem.candidates[index].heights;
        let highest = heights.iter().rev().copied().find(|&height| height <= end);
        Group { set_height: highest.unwrap_or(liftable.group.set_height), ..liftable.group }
    };
    liftable.iter().zip(groups).map(on_grid).collect()
}

/// At most `keep` layouts in order, each the best of its family.
///
/// A family that falls off the end is forgotten: its next layout would have to beat the last one kept, as a new family's
/// would.
pub(super) struct Best {
    keep: usize,
    fold: bool,
    found: Vec<Found>,
}

impl Best {
    pub(super) fn new(keep: usize, fold: bool) -> Self {
        Self { keep, fold, found: Vec::with_capacity(keep.min(1024) + 1) }
    }

    /// The layout that every new family must beat; none while there is room.
    pub(super) fn last(&self) -> Option<&Found> {
        self.found.get(self.keep - 1)
    }

    pub(super) fn into_found(self) -> Vec<Found> {
        self.found
    }

    /// Forgets the screens, which belong to a class of layouts.
    pub(super) fn change_class(&mut self) {
        for found in &mut self.found {
            found.screen = OnceCell::new();
        }
    }

    /// Takes a layout in if it holds every case by `limits` and ranks among the best; whether the list changed.
    ///
    /// A layout is turned away before any water level is computed where its sums already rank behind the layout it must
    /// beat, or where they are equal and it cannot carry the demand at that one's level.
    pub(super) fn offer(
        &mut self,
        problem: &Problem<'_>,
        class: Class,
        limits: Option<&Table>,
        groups: &[(usize, u32)],
        sums: Sums,
    ) -> bool {
        let by = problem.order.sums();
        if self.last().is_some_and(|last| sums.compare(&last.sums, by).is_gt()) {
            return false;
        }
        let family = self.family(problem, groups);
        let own = if self.fold { self.found.iter().position(|found| found.family == family) } else { None };
        let to_beat = own.map(|own| &self.found[own]).or_else(|| self.last());
        let against = to_beat.map(|found| (found, sums.compare(&found.sums, by)));
        if against.is_some_and(|(_, ordering)| ordering.is_gt()) {
            return false;
        }
        if limits.is_some_and(|limits| !problem.carries(limits, groups)) {
            return false;
        }
        let new = Found::new(groups.to_vec(), sums, family);
        if let Some((found, ordering)) = against {
            let tied = ordering.is_eq();
            if tied && found.screen(problem, class).is_some_and(|screen| !problem.carries(screen, groups)) {
                return false;
            }
            if tied && new.compare(found, problem).is_ge() {
                return false;
            }
        }
        if let Some(own) = own {
            self.found.remove(own);
        }
        let place = self.found.partition_point(|found| found.compare(&new, problem).is_lt());
        self.found.insert(place, new);
        self.found.truncate(self.keep);
        true
    }

    /// What the last layout kept asks of every other, where that is known before any sum.
    pub(super) fn last_screen(&self, problem: &Problem<'_>, class: Class) -> Option<&Table> {
        self.last().and_then(|last| last.screen(problem, class))
    }

    /// The family: how many of each tag. Unfolded, no two layouts are of one family.
    fn family(&self, problem: &Problem<'_>, groups: &[(usize, u32)]) -> u128 {
        if !self.fold {
            return 0;
        }
        let mut tags = [(u32::MAX, 0_u32); MOST_GROUPS];
        let mut used = 0;
        for &(candidate, count) in groups {
            let tag = problem.candidates[candidate].tag;
            match tags[..used].iter_mut().find(|(known, _)| *known == tag) {
                Some((_, total)) => *total += count,
                None => {
                    tags[used] = (tag, count);
                    used += 1;
                }
            }
        }
        tags[..used].sort_unstable();
        // Twenty-one bits for a tag and as many for a count: input allows no more of either.
        tags[..used]
            .iter()
            .fold(0, |family, &(tag, count)| (family << 42) | (u128::from(tag) << 21) | u128::from(count))
    }
}
