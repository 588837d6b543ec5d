//! A layout in an area: its groups, how it stands in a case, and how high its sills may be built.

use std::cell::RefCell;

use crate::device::{Law, Size};
use crate::root::crossing;
use crate::units::{Flow, Length, Load, Money};

use super::channel::Reach;
use super::pool::{GREATEST_HEAD, MOST_OUTLETS, Outlet, Pool, Share};

use super::situation::{Governing, Situation};

/// So many of one size at one set height.
#[derive(Clone, Copy, Debug)]
pub struct Group<'r> {
    /// The size.
    pub size: &'r Size,
    /// How many.
    pub count: u32,
    /// Sill or rim above the low point.
    pub set_height: Length,
}

/// What one group does in a case.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct GroupState {
    /// Head, flow and regime.
    pub share: Share,
    /// Sill as it stands in the case, above the low point.
    pub sill: Length,
    /// Top of the opening as it stands in the case less the level; none for a device without a top.
    pub freeboard: Option<Length>,
    /// How far above the sill the conductor head behind would back up under what the device itself passes; none where it
    /// keeps below. That flow is not credited.
    pub backs_up: Option<Length>,
}

/// A layout in one case.
#[derive(Clone, Debug, PartialEq)]
pub struct CaseState {
    /// Flow that must leave.
    pub demand: Flow,
    /// The level, the load and the limit it uses most; none where the layout is overwhelmed.
    pub water: Option<Water>,
    /// Its groups, in order; overwhelmed groups at the most they carry.
    pub groups: Vec<GroupState>,
}

/// The water that a layout leaves on an area.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Water {
    /// Level above the low point.
    pub level: Length,
    /// Rain load, ponding head included.
    pub load: Load,
    /// The limit that governs.
    pub governing: Governing,
    /// The water along the channel to the devices, where there is one.
    pub reach: Option<Reach>,
}

impl Water {
    /// The depth that limits are held against: the level, or the deepest along a channel.
    pub fn depth(&self) -> Length {
        self.reach.map_or(self.level, |reach| reach.deepest)
    }
}

/// The groups as they stand in a case: sills raised, openings narrowed, the most effective blocked.
///
/// # Panics
/// For more than [`MOST_OUTLETS`] groups, which no layout has.
pub fn pool(groups: &[Group<'_>], situation: &Situation<'_>) -> Pool {
    assert!(groups.len() <= MOST_OUTLETS, "a layout has at most {MOST_OUTLETS} groups");
    let case = situation.case;
    let outlet = |group: &Group<'_>| {
        let raised = group.set_height + case.sill_error;
        let (curve, rise) = group.size.curve(&situation.site, raised, case.opening_loss);
        Outlet { curve, sill: raised + rise, count: group.count }
    };
    Pool { outlets: groups.iter().map(outlet).collect(), blocked: case.blocked, discharge: case.discharge }
}

/// Top of a group's opening as it stands in a case, above the low point; none where it has no top.
///
/// A loss beyond half the height leaves the top under the sill: a shut opening of negative height.
pub fn top(group: &Group<'_>, situation: &Situation<'_>) -> Option<Length> {
    let case = situation.case;
    group.size.device.height().map(|height| (group.set_height + height) + case.sill_error - case.opening_loss)
}

/// The groups in a case: level, load, and what each group carries.
pub fn state(groups: &[Group<'_>], situation: &Situation<'_>) -> CaseState {
    let pool = pool(groups, situation);
    // Device flows are finite at every finite level, so the solver has no reason to refuse.
    let level = pool.level(situation.demand).unwrap_or(None);
    let shares = pool.shares(level.unwrap_or(GREATEST_HEAD));
    let group = |((outlet, group), share): ((&Outlet, &Group<'_>), Share)| GroupState {
        share,
        sill: outlet.sill,
        freeboard: level.and_then(|level| top(group, situation).map(|top| top - level)),
        backs_up: group.size.following.backs_up_to(outlet.curve.own(share.head).flow * situation.case.discharge),
    };
    let water = |level| Water {
        level,
        load: situation.load(level),
        governing: situation.governing(level),
        reach: situation.reach(level),
    };
    CaseState {
        demand: situation.demand,
        water: level.map(water),
        groups: pool.outlets.iter().zip(groups).zip(shares).map(group).collect(),
    }
}

/// Cost of all groups; none where one of them has no price.
pub fn cost(groups: &[Group<'_>]) -> Option<Money> {
    groups.iter().map(|group| group.size.price.map(|price| price * group.count)).sum()
}

/// A group and the heights within which it may be lifted.
#[derive(Clone, Copy, Debug)]
pub struct Liftable<'r> {
    /// The group at the lowest of its heights.
    pub group: Group<'r>,
    /// The highest of them.
    pub highest: Length,
}

impl<'r> Liftable<'r> {
    /// The group lifted, or at the top of its range where that is lower.
    pub fn lifted(&self, lift: Length) -> Group<'r> {
        // The whole of its range leads to its end, whatever a rounded sum says.
        let whole = lift >= self.highest - self.group.set_height;
        let set_height = if whole { self.highest } else { (self.group.set_height + lift).min(self.highest) };
        Group { set_height, ..self.group }
    }
}

/// What is asked of every lift in a window, besides the limits.
#[derive(Clone, Copy, Debug, Default)]
pub struct Asked {
    /// Least distance from the level up to the top of every closed opening.
    pub freeboard: Option<Length>,
}

/// Whether the groups hold a situation, decided by what they carry at the highest level allowed.
pub fn holds(groups: &[Group<'_>], situation: &Situation<'_>, asked: Asked) -> bool {
    holds_at(groups, situation, situation.allowable_level(), asked)
}

/// Whether the groups hold a situation whose highest level allowed is known already.
pub(crate) fn holds_at(groups: &[Group<'_>], situation: &Situation<'_>, allowed: Length, asked: Asked) -> bool {
    spare(groups, situation, allowed, asked) >= 0.0
}

/// What must stay free from the water up to the top of every closed opening: what is asked everywhere, or more in this case.
pub(crate) fn freeboard_asked(situation: &Situation<'_>, asked: Asked) -> Option<Length> {
    asked.freeboard.into_iter().chain(situation.freeboard).reduce(Length::max)
}

/// The highest level that a situation allows the groups: under its limits, and under their lowest top by the freeboard.
pub(crate) fn highest_level(groups: &[Group<'_>], situation: &Situation<'_>, allowed: Length, asked: Asked) -> Length {
    let tops = groups.iter().filter_map(|group| top(group, situation));
    let ceiling =
        freeboard_asked(situation, asked).and_then(|freeboard| tops.map(|top| top - freeboard).reduce(Length::min));
    ceiling.map_or(allowed, |ceiling| ceiling.min(allowed))
}

/// What the groups can carry at the highest level allowed, less the demand, m3/s.
fn spare(groups: &[Group<'_>], situation: &Situation<'_>, allowed: Length, asked: Asked) -> f64 {
    spare_of(&pool(groups, situation), groups, situation, allowed, asked)
}

/// The same of groups as they stand in a pool already.
fn spare_of(pool: &Pool, groups: &[Group<'_>], situation: &Situation<'_>, allowed: Length, asked: Asked) -> f64 {
    let level = highest_level(groups, situation, allowed, asked);
    (pool.capacity(level) - situation.demand).m3_per_s()
}

/// What the groups can carry in the case that leaves least to spare, each at the highest level that its situation allows,
/// less the demand, m3/s: zero or more where every case holds.
pub(crate) fn least_spare(groups: &[Group<'_>], situations: &[Situation<'_>], asked: Asked) -> f64 {
    let spare = |situation: &Situation<'_>| spare(groups, situation, situation.allowable_level(), asked);
    situations.iter().map(spare).fold(f64::INFINITY, f64::min)
}

/// Groups in one situation, stood again and again at other heights.
struct Lift<'s, 'r> {
    situation: &'s Situation<'r>,
    allowed: Length,
    pool: Pool,
    /// How much a loss raises each sill; it does not hang on the height.
    rises: Vec<Length>,
    /// Whether a flow hangs on how high the sill stands, so that curves are made anew.
    hangs_on_sill: bool,
}

impl<'s, 'r> Lift<'s, 'r> {
    fn new(groups: &[Group<'_>], situation: &'s Situation<'r>) -> Self {
        let rise = |group: &Group<'_>| group.size.device.narrowed(situation.case.opening_loss).1;
        let hangs = |group: &Group<'_>| group.size.law_at(&situation.site) == Law::KindsvaterCarter;
        Self {
            situation,
            allowed: situation.allowable_level(),
            pool: pool(groups, situation),
            rises: groups.iter().map(rise).collect(),
            hangs_on_sill: groups.iter().any(hangs),
        }
    }

    fn stand(&mut self, groups: &[Group<'_>]) {
        if self.hangs_on_sill {
            self.pool = pool(groups, self.situation);
            return;
        }
        for ((outlet, group), rise) in self.pool.outlets.iter_mut().zip(groups).zip(&self.rises) {
            outlet.sill = (group.set_height + self.situation.case.sill_error) + *rise;
        }
    }
}

/// The highest common lift at which every case still meets every limit; none where the lowest heights already do not.
///
/// All groups are lifted by the same amount, each stopping at the top of its own range. Lifting sills raises the level by
/// at most the lift, so limits that hold at one lift hold at every lower one. Freeboard grows while its opening is lifted
/// and falls once it has stopped, so it too, held at the lowest heights, ends once: the lifts that pass are one stretch.
pub fn highest_lift(groups: &[Liftable<'_>], situations: &[Situation<'_>], asked: Asked) -> Option<Length> {
    let lowest: Vec<Group<'_>> = groups.iter().map(|group| group.group).collect();
    let lifts: Vec<_> = situations.iter().map(|situation| Lift::new(&lowest, situation)).collect();
    let standing = RefCell::new((lowest, lifts));
    let least_spare = |lift: f64| {
        let (lifted, lifts) = &mut *standing.borrow_mut();
        for (lifted, group) in lifted.iter_mut().zip(groups) {
            *lifted = group.lifted(Length::from_m(lift));
        }
        let spares = lifts.iter_mut().map(|lift| {
            lift.stand(lifted);
            spare_of(&lift.pool, lifted, lift.situation, lift.allowed, asked)
        });
        spares.fold(f64::INFINITY, f64::min)
    };
    let most = groups.iter().map(|group| group.highest - group.group.set_height).fold(Length::ZERO, Length::max).m();
    if least_spare(0.0) < 0.0 {
        return None;
    }
    if least_spare(most) >= 0.0 {
        return Some(Length::from_m(most));
    }
    // The first lift that fails has a neighbour that passes; where even the second number fails, nothing may be lifted.
    crossing(|lift| -least_spare(lift), 0.0, most)
        .map_or(Some(Length::ZERO), |(passes, _)| Some(Length::from_m(passes)))
}
