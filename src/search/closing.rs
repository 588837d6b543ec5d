//! What is there already and may be closed: every way of closing is a problem of its own, and their answers are one list.
//!
//! Of each group that is there none, one or more up to all of its devices may be closed, each at one price. A way of closing
//! fixes what stays; beside it the search adds as it adds to what is there, and all that is proven there holds in each way. A
//! layout of the area is a way and what is added in it. It ranks by its criteria, the price of closing among its cost; count,
//! width, sizes and set height are those of what is added. What is still equal goes to the way that closes fewer, then to the
//! way that keeps more of the group that stands first, then by catalog order.
//!
//! # One list of many
//!
//! Where families are folded, a family is what is added, however much is closed. Each way is asked for its best layouts, as
//! many as are kept and folded as the whole list is. A layout of the whole list is the best of its family in every way, and
//! fewer than are kept stand before it in its own: so it is among them. A family whose best a way has dropped has, in that way,
//! as many families before it as are kept; each of these stands in the list no lower than there. So the lists put together,
//! sorted, each family taken once and cut to length, are the list.
//!
//! A way in which something stays that breaks a binding rule has no layout.
//!
//! # What is left out, and why it may be
//!
//! In one way the price of closing is one number. Where cost, count or width ranks first, a layout with more of it than the
//! last of a full list cannot rank: a way is searched under that ceiling, less what its closing costs. Ways are tried the
//! fewest closed first, so that the price of closing never falls: once it alone is above the ceiling, no further way can rank.
//! Nothing else is left out; closing more may make room on the edge, in the count and under the tops of openings.

use std::borrow::Cow;
use std::cmp::Ordering;

use rustc_hash::FxHashSet;

use crate::roof::layout::Group;
use crate::rules::RuleAt;
use crate::units::Money;

use super::best::{Best, Found};
use super::dive::{self, Aim, dive, lead};
use super::problem::Problem;
use super::rank::Criterion;
use super::watch::Stopped;
use super::{Broken, Least};

/// How many devices of each group that is there are closed, in the order of the groups.
pub(super) type Way = Vec<u32>;

/// What of what is there may be closed, and what is.
#[derive(Clone, Debug)]
pub(super) struct Closing<'r> {
    /// What is there before any of it is closed.
    pub(super) there: Vec<Group<'r>>,
    /// The binding rule that each breaks where it stands.
    pub(super) breaks: Vec<Option<RuleAt>>,
    /// What closing one device costs.
    pub(super) price: Money,
    /// How many of each are closed.
    pub(super) way: Way,
}

impl<'r> Closing<'r> {
    /// What a way closes.
    pub(super) fn closed_by(&self, way: &Way) -> Vec<Group<'r>> {
        let of_group = |(&group, &count): (&Group<'r>, &u32)| Group { count, ..group };
        self.there.iter().zip(way).map(of_group).filter(|group| group.count > 0).collect()
    }

    /// What stays.
    fn kept(&self) -> Vec<Group<'r>> {
        let of_group = |(&group, &closed): (&Group<'r>, &u32)| Group { count: group.count - closed, ..group };
        self.there.iter().zip(&self.way).map(of_group).filter(|group| group.count > 0).collect()
    }

    /// The first of what stays that breaks a binding rule.
    fn broken(&self) -> Option<Broken> {
        let stays = |place: usize| self.there[place].count > self.way[place];
        let breaks = |(place, rule): (usize, &Option<RuleAt>)| Some(Broken { rule: (*rule)?, there: Some(place) });
        self.breaks.iter().enumerate().filter(|(place, _)| stays(*place)).find_map(breaks)
    }

    /// What closing costs.
    fn cost(&self) -> Money {
        self.cost_of(&self.way)
    }

    /// What a way of closing costs.
    pub(super) fn cost_of(&self, way: &Way) -> Money {
        self.price * way.iter().sum::<u32>()
    }
}

impl<'r> Problem<'r> {
    /// Every way of closing as a problem of its own, in the order in which ties go; the problem itself where all stays.
    pub(super) fn ways(&self) -> impl Iterator<Item = Cow<'_, Problem<'r>>> {
        let itself = self.closing.is_none().then_some(Cow::Borrowed(self));
        let ways = self.closing.as_ref().map_or(Vec::new(), |closing| every_way(&closing.there));
        itself.into_iter().chain(ways.into_iter().map(|way| Cow::Owned(self.closed_by(way))))
    }

    /// This area with so many of each group that is there closed.
    pub(super) fn closed_by(&self, way: Way) -> Self {
        let mut problem = self.clone();
        if let Some(closing) = &mut problem.closing {
            closing.way = way;
            problem.fixed = closing.kept();
            problem.broken = problem.broken.filter(|broken| broken.there.is_none()).or(closing.broken());
            problem.count_what_is_added();
        }
        problem
    }

    /// This area with all that is there kept.
    pub(super) fn keeping_all(&self) -> Self {
        let none = self.closing.as_ref().map_or(Vec::new(), |closing| vec![0; closing.there.len()]);
        let mut problem = self.closed_by(none);
        problem.closing = None;
        problem
    }

    /// What closing adds to the criterion that is ranked by first.
    fn lead_of_closing(&self) -> i64 {
        let cost = self.closing.as_ref().filter(|_| self.order.criteria()[0] == Criterion::Cost);
        cost.map_or(0, |closing| closing.cost().millionths())
    }

    fn way(&self) -> Way {
        self.closing.as_ref().map_or(Vec::new(), |closing| closing.way.clone())
    }
}

/// Every way of closing: the fewest first, of equals the one that closes fewer of the first group, then of the second.
fn every_way(there: &[Group<'_>]) -> Vec<Way> {
    let with_group = |ways: Vec<Way>, group: &Group<'_>| -> Vec<Way> {
        let longer = |way: &Way| (0..=group.count).map(|closed| [&way[..], &[closed]].concat()).collect::<Vec<_>>();
        ways.iter().flat_map(longer).collect()
    };
    let mut ways = there.iter().fold(vec![Vec::new()], with_group);
    ways.sort_by_key(|way| way.iter().sum::<u32>());
    ways
}

/// A layout of the area: a way of closing, and what is added in it.
pub(super) struct Chosen {
    pub(super) way: Way,
    pub(super) found: Found,
    /// Its criteria, the first first.
    key: Vec<i64>,
}

impl Chosen {
    fn new(problem: &Problem<'_>, found: Found) -> Self {
        let closing = problem.closing.as_ref().map_or(0, |closing| closing.cost().millionths());
        let value = |&criterion: &Criterion| {
            let of_closing = if criterion == Criterion::Cost { closing } else { 0 };
            found.value(criterion, problem).saturating_add(of_closing)
        };
        Self { key: problem.order.criteria().iter().map(value).collect(), way: problem.way(), found }
    }

    /// What it costs, millionths.
    pub(super) fn cost(&self, problem: &Problem<'_>) -> i64 {
        let closing = problem.closing.as_ref().map_or(Money::default(), |closing| closing.cost_of(&self.way));
        self.found.sums().cost + closing.millionths()
    }

    fn compare(&self, other: &Self) -> Ordering {
        let closed = |chosen: &Self| chosen.way.iter().sum::<u32>();
        let by_way = || closed(self).cmp(&closed(other)).then_with(|| self.way.cmp(&other.way));
        self.key.cmp(&other.key).then_with(by_way).then_with(|| self.found.groups.cmp(&other.found.groups))
    }
}

/// The best layouts of an area over every way of closing, and whether everything was tried.
pub(super) fn best(problem: &Problem<'_>, aim: Aim, keep: usize, fold: bool) -> (Vec<Chosen>, bool) {
    if problem.closing.is_none() {
        let dived = dive(problem, aim, Best::new(keep, fold));
        let alone = |found| Chosen { way: Vec::new(), found, key: Vec::new() };
        return (dived.found.into_iter().map(alone).collect(), dived.finished);
    }
    let mut list: Vec<Chosen> = Vec::new();
    for way in problem.ways() {
        let last = list.get(keep - 1).filter(|_| lead(problem).is_some());
        let ceiling = last.map_or(i64::MAX, |last| last.key[0] - way.lead_of_closing());
        if ceiling < 0 {
            break;
        }
        let dived = dive(&way, aim, Best::new(keep, fold).capped(ceiling));
        list.extend(dived.found.into_iter().map(|found| Chosen::new(&way, found)));
        list.sort_by(Chosen::compare);
        if fold {
            let mut known = FxHashSet::default();
            list.retain(|chosen| known.insert(chosen.found.family()));
        }
        list.truncate(keep);
        if !dived.finished {
            return (list, false);
        }
    }
    (list, true)
}

/// The same of a search that tried everything.
pub(super) fn complete(problem: &Problem<'_>, aim: Aim) -> Result<Option<Chosen>, Stopped> {
    match best(problem, aim, 1, false) {
        (list, true) => Ok(list.into_iter().next()),
        (_, false) => Err(Stopped),
    }
}

/// Whether any layout holds with at most so much of the leading criterion, in any way.
pub(super) fn any_under(problem: &Problem<'_>, ceiling: i64) -> Result<bool, Stopped> {
    for way in problem.ways() {
        let ceiling = ceiling.saturating_sub(way.lead_of_closing());
        if ceiling < 0 {
            break;
        }
        let dived = dive(&way, Aim::Any, Best::new(1, false).capped(ceiling));
        // One that is found holds, whatever was not tried.
        if !dived.found.is_empty() {
            return Ok(true);
        }
        dived.complete()?;
    }
    Ok(false)
}

/// What every layout has at least of the criterion that is ranked by first, whatever is closed.
pub(super) fn least(problem: &Problem<'_>) -> Option<Least> {
    let of_way = |way: Cow<'_, Problem<'_>>| {
        let least = dive::least(&way)?;
        Some(match least {
            Least::Cost(cost) => Least::Cost(Money::from_millionths(cost.millionths() + way.lead_of_closing())),
            other => other,
        })
    };
    let all: Vec<Least> = problem.ways().map(of_way).collect::<Option<_>>()?;
    let value = |least: &Least| match least {
        Least::Cost(cost) => cost.millionths(),
        Least::Count(count) => i64::from(*count),
        Least::Width(width) => width.nm(),
    };
    all.into_iter().min_by_key(value)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::device::{Device, Size};
    use crate::units::Length;

    #[test]
    fn fewest_are_closed_first_and_the_first_group_last() {
        let size = Size::of(Device::Open { width: Length::inches(8.0) });
        let group = |count| Group { size: &size, count, set_height: Length::ZERO };
        let ways = every_way(&[group(2), group(1)]);
        let wanted: Vec<Way> = vec![vec![0, 0], vec![0, 1], vec![1, 0], vec![1, 1], vec![2, 0], vec![2, 1]];
        assert_eq!(ways, wanted);
    }
}
