//! The best layouts found so far, one of each family, and what a layout must beat to be among them.

use std::cell::OnceCell;
use std::cmp::Ordering;

use crate::roof::MOST_GROUPS;
use crate::roof::layout::{self, Group};
use crate::units::Length;

use super::dive::Keeps;
use super::problem::{Class, Problem, Table};
use super::rank::{Criterion, Sums};

/// Groups of candidates in catalog order, with their counts.
pub(super) type Groups = Vec<(usize, u32)>;

/// A layout with what it is ranked by. What needs a water level is computed when first compared.
#[derive(Debug)]
pub(super) struct Found {
    pub(super) groups: Groups,
    sums: Sums,
    family: u128,
    set_height: OnceCell<i64>,
    levels: OnceCell<Levels>,
    screen: OnceCell<Option<Table>>,
    strict_screen: OnceCell<Option<Table>>,
}

/// What of a layout's rank is a water level.
#[derive(Debug)]
struct Levels {
    /// Greatest depth of all cases, along a channel the deepest, in whole nanometres; the greatest number where the layout is
    /// overwhelmed. Load follows it: the ponding head is one, or rises with it. Layouts that differ by the last bits of a
    /// solved level are equal, and what they cost decides.
    worst: i64,
    /// Governing utilisation of all cases in whole billionths; the greatest number where the layout is overwhelmed.
    utilisation: i64,
}

/// Parts of one in which utilisations are compared.
const BILLION: f64 = 1e9;

impl Found {
    pub(super) fn sums(&self) -> Sums {
        self.sums
    }

    pub(super) fn new(groups: Groups, sums: Sums, family: u128) -> Self {
        Self {
            groups,
            sums,
            family,
            set_height: OnceCell::new(),
            levels: OnceCell::new(),
            screen: OnceCell::new(),
            strict_screen: OnceCell::new(),
        }
    }

    /// Set height of the lowest sill as reported, nanometres.
    fn set_height(&self, problem: &Problem<'_>) -> i64 {
        // What is there moves no sill: it says nothing of how high a layout stands.
        let added = self.groups.len();
        let lowest = || reported(problem, &self.groups).iter().take(added).map(|group| group.set_height.nm()).min();
        *self.set_height.get_or_init(|| lowest().unwrap_or(i64::MAX))
    }

    fn levels(&self, problem: &Problem<'_>) -> &Levels {
        self.levels.get_or_init(|| {
            let groups = reported(problem, &self.groups);
            let mut levels = Levels { worst: i64::MIN, utilisation: i64::MIN };
            for situation in &problem.situations {
                let water = layout::state(&groups, situation).water;
                let utilisation = water.map(|water| (water.governing.utilisation * BILLION).round() as i64);
                levels.worst = levels.worst.max(water.map_or(i64::MAX, |water| water.depth().nm()));
                levels.utilisation = levels.utilisation.max(utilisation.unwrap_or(i64::MAX));
            }
            levels
        })
    }

    /// What it has of a criterion, the less the better.
    pub(super) fn value(&self, criterion: Criterion, problem: &Problem<'_>) -> i64 {
        match criterion {
            Criterion::Load => self.levels(problem).worst,
            Criterion::Utilisation => self.levels(problem).utilisation,
            Criterion::SetHeight => -self.set_height(problem),
            sum => self.sums.value(sum),
        }
    }

    /// How many of each tag, as one number; the same for all where families are not told apart.
    pub(super) fn family(&self) -> u128 {
        self.family
    }

    /// The order of two layouts by all criteria, then by catalog order.
    fn compare(&self, other: &Self, problem: &Problem<'_>) -> Ordering {
        let by = |&criterion: &Criterion| self.value(criterion, problem).cmp(&other.value(criterion, problem));
        let decided = problem.order.criteria().iter().map(by).find(|ordering| ordering.is_ne());
        decided.unwrap_or_else(|| self.groups.cmp(&other.groups))
    }

    /// What one of each candidate carries where a layout of equal sums must carry the demand to rank as high as this one:
    /// at this one's worst level, at its utilisation, or with no sill under its set height. None asks nothing.
    fn screen(&self, problem: &Problem<'_>, class: Class) -> Option<&Table> {
        let table = || match problem.order.first_level() {
            Criterion::Utilisation => {
                // Up to the middle between two steps all values are equal in rank.
                let used = self.levels(problem).utilisation;
                let most = (used as f64 + 0.5) / BILLION;
                let levels = || problem.situations.iter().map(|situation| situation.level_at(most)).collect::<Vec<_>>();
                (used < i64::MAX).then(|| problem.table(&levels(), |candidate| Some(candidate.lowest())))
            }
            Criterion::SetHeight => {
                let least = self.set_height(problem);
                Some(with_sills(problem, |height| height >= least))
            }
            _ => {
                // Up to the middle between two nanometres all depths are equal in rank.
                let worst = self.levels(problem).worst;
                let worst = Length::from_m((worst as f64 + 0.5) / 1e9);
                let levels: Vec<_> =
                    problem.allowable_levels(class).into_iter().map(|level| level.min(worst)).collect();
                Some(problem.table(&levels, |candidate| Some(candidate.lowest())))
            }
        };
        self.screen.get_or_init(table).as_ref()
    }

    /// The screen that a layout must pass to rank above this one by the first level alone. Only set heights, which stand
    /// on a grid, tie so often that it tells more than [`Found::screen`].
    fn strict_screen(&self, problem: &Problem<'_>, class: Class) -> Option<&Table> {
        if problem.order.first_level() != Criterion::SetHeight {
            return self.screen(problem, class);
        }
        let least = self.set_height(problem);
        self.strict_screen.get_or_init(|| Some(with_sills(problem, |height| height > least))).as_ref()
    }
}

/// What one of each candidate carries at the lowest of its heights that pass; no layout has one for which none passes.
///
/// Every sill of the layout stands at least there, and lifting an opening lifts its top, so no freeboard binds: what the
/// layout carries at the levels allowed is no more than this.
fn with_sills(problem: &Problem<'_>, passes: impl Fn(i64) -> bool) -> Table {
    problem.table(&problem.allowed, |candidate| candidate.heights.iter().copied().find(|height| passes(height.nm())))
}

/// The groups at the set heights that are reported: the lowest, or the highest on the grid that the window reaches where
/// the set height is preferred to the load.
///
/// All groups are lifted by one amount, each then down to its own grid. Lowering a sill never hurts a limit, but it lowers the
/// top of its opening: where freeboard is asked, the layout is taken at the greatest lift at which it holds as it then stands.
pub(super) fn reported<'r>(problem: &Problem<'r>, groups: &[(usize, u32)]) -> Vec<Group<'r>> {
    let liftable = problem.liftable(groups);
    let lowest: Vec<Group<'r>> = liftable.iter().map(|group| group.group).collect();
    if !problem.order.prefers_high_sills() {
        return lowest;
    }
    let holds = |groups: &[Group<'r>]| {
        let mut situations = problem.situations.iter().zip(&problem.allowed);
        situations.all(|(situation, &allowed)| layout::holds_at(groups, situation, allowed, problem.asked))
    };
    let heights = |index: usize| &problem.candidates[index].heights;
    let mut lifts: Vec<Length> = groups
        .iter()
        .flat_map(|&(index, _)| heights(index).iter().map(move |&height| height - heights(index)[0]))
        .collect();
    lifts.sort_by(|a, b| a.m().total_cmp(&b.m()));
    let together = |lift: Length| liftable.iter().map(|group| group.lifted(lift)).collect::<Vec<_>>();
    // The lifts that pass are one stretch from the lowest heights on.
    let passing = lifts.partition_point(|&lift| lift == Length::ZERO || holds(&together(lift)));
    let on_grid = |lift: Length| {
        let down = |(group, &(index, _)): (Group<'r>, &(usize, u32))| {
            let heights = heights(index);
            let reached = heights.partition_point(|&height| height <= group.set_height).max(1);
            Group { set_height: heights[reached - 1], ..group }
        };
        let lifted = together(lift);
        let (added, there) = lifted.split_at(groups.len());
        added.iter().copied().zip(groups).map(down).chain(there.iter().copied()).collect::<Vec<_>>()
    };
    let standing = lifts[..passing].iter().rev().map(|&lift| on_grid(lift));
    standing.into_iter().find(|groups| !problem.asks_freeboard() || holds(groups)).unwrap_or(lowest)
}

/// At most `keep` layouts in order, each the best of its family.
///
/// A family that falls off the end is forgotten: its next layout would have to beat the last one kept, as a new family's
/// would.
pub(super) struct Best {
    keep: usize,
    fold: bool,
    /// The most of the leading criterion that any layout may have.
    ceiling: i64,
    found: Vec<Found>,
    changes: u64,
}

impl Best {
    pub(super) fn new(keep: usize, fold: bool) -> Self {
        // Of one layout alone the best of its family is the best of all.
        let fold = fold && keep > 1;
        Self { keep, fold, ceiling: i64::MAX, found: Vec::with_capacity(keep.min(1024) + 1), changes: 0 }
    }

    /// The same of layouts with at most so much of the leading criterion.
    pub(super) fn capped(self, ceiling: i64) -> Self {
        Self { ceiling, ..self }
    }

    /// The layout that every new family must beat; none while there is room.
    fn last(&self) -> Option<&Found> {
        self.found.get(self.keep - 1)
    }

    /// The most of a criterion that any layout may have to rank.
    pub(super) fn allowance(&self, lead: Criterion) -> i64 {
        self.last().map_or(self.ceiling, |last| last.sums.value(lead))
    }

    /// Which layouts are kept.
    pub(super) fn keeps(&self) -> Keeps {
        Keeps { one: self.keep == 1, families: self.fold }
    }

    pub(super) fn into_found(self) -> Vec<Found> {
        self.found
    }

    /// Forgets the screens, which belong to a class of layouts.
    pub(super) fn change_class(&mut self) {
        for found in &mut self.found {
            found.screen = OnceCell::new();
            found.strict_screen = OnceCell::new();
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
        let family = self.family(problem, groups);
        let own = self.own(family);
        let to_beat = own.map(|own| &self.found[own]).or_else(|| self.last());
        let against = to_beat.map(|found| (found, sums.compare(&found.sums, problem.order.sums())));
        let tied = match against {
            Some((_, Ordering::Greater)) => return false,
            Some((found, Ordering::Equal)) => Some(found),
            _ => None,
        };
        if let Some(found) = tied {
            let later = sums.compare(&found.sums, problem.order.sums_behind_level());
            let screen = if later.is_gt() { found.strict_screen(problem, class) } else { found.screen(problem, class) };
            if screen.is_some_and(|screen| !problem.carries(screen, groups)) {
                return false;
            }
        }
        if limits.is_some_and(|limits| !problem.carries(limits, groups)) {
            return false;
        }
        let new = Found::new(groups.to_vec(), sums, family);
        if tied.is_some_and(|found| new.compare(found, problem).is_ge()) {
            return false;
        }
        if let Some(own) = own {
            self.found.remove(own);
        }
        let place = self.found.partition_point(|found| found.compare(&new, problem).is_lt());
        self.found.insert(place, new);
        self.found.truncate(self.keep);
        self.changes += 1;
        true
    }

    fn own(&self, family: u128) -> Option<usize> {
        if self.fold { self.found.iter().position(|found| found.family == family) } else { None }
    }

    /// How often the list has changed.
    pub(super) fn changes(&self) -> u64 {
        self.changes
    }

    /// The most of a criterion that a layout may have to rank, for each count of one more group of a tag: that of its
    /// family's best, or of the last layout kept.
    pub(super) fn allowances(
        &self,
        problem: &Problem<'_>,
        groups: &[(usize, u32)],
        tag: u32,
        lead: Criterion,
        into: &mut [i64],
    ) {
        into.fill(self.allowance(lead));
        if !self.fold {
            return;
        }
        let there: i64 = groups.iter().map(|&(_, count)| i64::from(count)).sum();
        for found in &self.found {
            // Of the same family only with as many devices as this one has more.
            let Ok(count) = u32::try_from(found.sums.count - there) else { continue };
            if let Some(allowance) = into.get_mut(count as usize)
                && family_of(problem, groups, Some((tag, count))) == found.family
            {
                *allowance = found.sums.value(lead);
            }
        }
    }

    /// What the last layout kept asks of every other, where that is known before any sum.
    pub(super) fn last_screen(&self, problem: &Problem<'_>, class: Class) -> Option<&Table> {
        self.last().and_then(|last| last.screen(problem, class))
    }

    /// The family of a layout; unfolded, no two layouts are of one family.
    fn family(&self, problem: &Problem<'_>, groups: &[(usize, u32)]) -> u128 {
        if self.fold { family_of(problem, groups, None) } else { 0 }
    }
}

/// How many of each tag, as one number: twenty-one bits for a tag and as many for a count, more than input allows.
fn family_of(problem: &Problem<'_>, groups: &[(usize, u32)], more: Option<(u32, u32)>) -> u128 {
    let mut tags = [(u32::MAX, 0_u32); MOST_GROUPS];
    let mut used = 0;
    let of_tags = groups.iter().map(|&(candidate, count)| (problem.candidates[candidate].tag, count));
    for (tag, count) in of_tags.chain(more) {
        match tags[..used].iter_mut().find(|(known, _)| *known == tag) {
            Some((_, total)) => *total += count,
            None => {
                tags[used] = (tag, count);
                used += 1;
            }
        }
    }
    tags[..used].sort_unstable();
    tags[..used].iter().fold(0, |family, &(tag, count)| (family << 42) | (u128::from(tag) << 21) | u128::from(count))
}
