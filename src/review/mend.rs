//! What mends a given layout that fails: for each kind of change the cheapest that makes it pass.
//!
//! Four kinds of change are looked at, each by itself: openings of one size added, the openings of one group replaced by
//! larger ones of its kind where they stand, the sills of one group lowered, one group replaced by openings of another size. A
//! change must fit as a layout must: the kinds, the edge and its gaps, the parapet, the roof at the wall, binding rules.
//! Whatever is told was held against the model as every given layout is ([`super::check`]). A layout that has as many groups as
//! any may have is not added to.
//!
//! # What is left out, and why it may be
//!
//! Every size of every catalog is tried, a range of made widths on its grid. For each:
//!
//! 1. *Counts.* At the level that a case allows, the capacity is the sum of what single devices carry less the blocked ones,
//!    that is of the n - k weakest. One device more never lowers that sum, and takes no less edge. So the counts that hold
//!    are all from a least one on, found by halving, and only that one is cheapest.
//! 2. *Set heights.* A lower sill carries no less at a level, and no cost depends on it: of the heights at which a size fits
//!    the lowest is enough. Where freeboard is asked, a lower opening has a lower top, which may lower the level for all: then
//!    all heights are tried.
//! 3. *Sills.* Without freeboard the heights of a group's sills that hold a case end once, at a root. With freeboard they are
//!    one stretch in each case: under the height at which its tops bind, all others lose head with it and it gains none; over
//!    it, only its own head is lost. So the stretch is looked for from that height on, the highest sills are the least of the
//!    ends over the cases, rounded down to what can be built, and hold if any do; a stretch narrower than that rounding may be
//!    passed over.
//!
//! The best of a kind is the cheapest; of equals, and of those without a price, the one that touches the fewest openings, old
//! and new, then that with the least width of openings made new, then catalog order.

use std::cmp::Ordering;
use std::ops::RangeInclusive;

use rayon::prelude::*;

use crate::device::{Device, Law, Place, Size};
use crate::roof::layout::{self, Asked, Group, Water, highest_level, least_spare};
use crate::roof::{Catchment, Given, GivenGroup, Governing, MOST_OUTLETS, Roof, Situation, working_capacity};
use crate::rules::{self, Restriction};
use crate::search::Options;
use crate::units::{Length, Money, System};

use super::backsolve::greatest;
use super::{Checked, checked, misfits};

/// A change that makes a failing layout pass.
#[derive(Clone, Debug)]
pub struct Mend {
    /// The change.
    pub change: Change,
    /// The layout so changed, every group in its place, added ones last.
    pub given: Given,
    /// How low and how high the sills of each group may stand, all rising together from where they are.
    pub windows: Vec<(Length, Length)>,
    /// What it costs; none where a size has no price, or sills are moved.
    pub cost: Option<Money>,
    /// The part of the cost that is for closing or removing openings.
    pub closing: Money,
    /// The case that governs the layout so changed.
    pub case: usize,
    /// The limit that governs there.
    pub governing: Governing,
    /// The water in it.
    pub water: Water,
    /// Whether it leaves a published range of a law.
    pub beyond: bool,
    /// The most by which straight lines between rated rows raise its flow, as a part of the demand.
    pub chord: f64,
    /// The laws of a thick wall under which it breaks a limit, where the thickness of the parapet is given.
    pub breaks_under: Vec<Law>,
}

/// One thing that is changed in a layout.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Change {
    /// Openings of one size are added.
    Add,
    /// The openings of the group of this index become larger ones of the same kind, at the same height.
    Widen(usize),
    /// The sills of the group of this index come down.
    Lower(usize),
    /// The group of this index is closed, and openings of one size are made in its place.
    Replace(usize),
}

impl Change {
    /// The name of the kind, in files.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Add => "add",
            Self::Widen(_) => "widen",
            Self::Lower(_) => "lower",
            Self::Replace(_) => "replace",
        }
    }

    /// The names of all kinds, in the order in which they are looked at.
    pub const NAMES: [&'static str; 4] = ["add", "widen", "lower", "replace"];
}

/// What mends each of the layouts, in their order: the best change of each kind that has one, the cheapest first; nothing of
/// one that passes. `replace` is what closing or removing one opening costs in each area.
///
/// The areas must have set heights wherever a size without its own may stand.
pub fn mends(roof: &Roof, options: &Options, replace: &[Money], layouts: &[Checked<'_>]) -> Vec<Vec<Mend>> {
    let one = |checked: &Checked<'_>| {
        if checked.passes() {
            return Vec::new();
        }
        Mending::new(roof, options, checked.given, replace[checked.given.area]).all()
    };
    layouts.par_iter().map(one).collect()
}

/// Places of the layouts that fail, the worst first: those that are overwhelmed, the one that carries the least part of its
/// demand before all; then by how far the governing utilisation is over one.
pub fn worst_first(layouts: &[Checked<'_>]) -> Vec<usize> {
    let mut failing: Vec<usize> = (0..layouts.len()).filter(|&place| !layouts[place].passes()).collect();
    failing.sort_by(|&a, &b| worse(&layouts[a], &layouts[b]));
    failing
}

fn worse(a: &Checked<'_>, b: &Checked<'_>) -> Ordering {
    match (a.standing.governing, b.standing.governing) {
        (None, None) => carried(a).total_cmp(&carried(b)),
        (None, Some(_)) => Ordering::Less,
        (Some(_), None) => Ordering::Greater,
        (Some(a), Some(b)) => b.utilisation.total_cmp(&a.utilisation),
    }
}

/// The part of the demand that a layout carries in its governing case, where it is overwhelmed.
fn carried(checked: &Checked<'_>) -> f64 {
    let state = &checked.standing.states[checked.standing.case];
    state.groups.iter().map(|group| group.share.flow().m3_per_s()).sum::<f64>() / state.demand.m3_per_s()
}

/// More devices than this are put in the place of a group only where the area's greatest count is more.
const MORE_THAN_THERE: u32 = 4;

/// A failing layout that is to be mended.
struct Mending<'r> {
    roof: &'r Roof,
    options: &'r Options,
    area: &'r Catchment,
    given: &'r Given,
    groups: Vec<Group<'r>>,
    situations: Vec<Situation<'r>>,
    allowed: Vec<Length>,
    asked: Asked,
    /// What binding rule sets leave of the area.
    restriction: Restriction<'r>,
    /// What closing or removing one opening costs.
    replace: Money,
}

/// A change that carries the demand of every case, not yet held against everything.
#[derive(Clone, Copy)]
struct Candidate<'r> {
    change: Change,
    /// The openings that are new, or whose sills are moved.
    group: Group<'r>,
    cost: Option<Money>,
    closing: Money,
    /// What it ranks by after the cost: openings touched, their width, then catalog order.
    then: (u32, i64, usize, i64),
}

impl Candidate<'_> {
    fn key(&self) -> (bool, i64, (u32, i64, usize, i64)) {
        (self.cost.is_none(), self.cost.map_or(0, Money::millionths), self.then)
    }
}

impl<'r> Mending<'r> {
    fn new(roof: &'r Roof, options: &'r Options, given: &'r Given, replace: Money) -> Self {
        let situations = roof.situations(given.area);
        Self {
            allowed: situations.iter().map(Situation::allowable_level).collect(),
            asked: Asked { freeboard: options.freeboard },
            area: &roof.areas[given.area],
            restriction: Restriction::new(&options.rules, &roof.bases, &roof.areas[given.area], given.area),
            groups: given.groups(),
            roof,
            options,
            given,
            situations,
            replace,
        }
    }

    /// The best of each kind, the cheapest first.
    fn all(&self) -> Vec<Mend> {
        let of_groups = |one: &dyn Fn(usize) -> Vec<Candidate<'r>>| (0..self.groups.len()).flat_map(one).collect();
        let kinds: [Vec<Candidate<'r>>; 4] = [
            self.added(),
            of_groups(&|group| self.widened(group)),
            of_groups(&|group| self.lowered(group).into_iter().collect()),
            of_groups(&|group| self.replaced(group)),
        ];
        let mut best: Vec<_> = kinds.into_iter().filter_map(|candidates| self.best(candidates)).collect();
        best.sort_by_key(|(candidate, _)| candidate.key());
        best.into_iter().map(|(_, mend)| mend).collect()
    }

    /// The first candidate by rank that passes.
    fn best(&self, mut candidates: Vec<Candidate<'r>>) -> Option<(Candidate<'r>, Mend)> {
        candidates.sort_by_key(Candidate::key);
        candidates.into_iter().find_map(|candidate| Some((candidate, self.mend(&candidate)?)))
    }

    /// The layout with a change, held against everything; none where it does not pass.
    fn mend(&self, candidate: &Candidate<'r>) -> Option<Mend> {
        let mut given = self.given.clone();
        let Group { size, count, set_height } = candidate.group;
        let group = GivenGroup { size: size.clone(), count, set_height };
        match candidate.change {
            Change::Add => given.groups.push(group),
            Change::Widen(place) | Change::Lower(place) | Change::Replace(place) => given.groups[place] = group,
        }
        let checked = checked(self.roof, self.options, &given, &self.situations, &self.allowed);
        let standing = checked.passes().then_some(&checked.standing)?;
        let windows = standing.groups.iter().map(|placed| (placed.from, placed.to)).collect();
        let broken = standing.thick_wall.iter().filter(|under| under.breaks.is_some());
        Some(Mend {
            change: candidate.change,
            windows,
            cost: candidate.cost,
            closing: candidate.closing,
            case: standing.case,
            governing: standing.governing?,
            water: standing.states[standing.case].water?,
            beyond: !standing.beyond.is_empty(),
            chord: standing.chord,
            breaks_under: broken.map(|under| under.law).collect(),
            given: given.clone(),
        })
    }

    /// The fewest of each size that mend beside what is there.
    fn added(&self) -> Vec<Candidate<'r>> {
        if self.groups.len() >= MOST_OUTLETS {
            return Vec::new();
        }
        let kept = self.beside(None);
        let counts = 1..=*self.area.count.end();
        let new = |(index, group)| {
            let count = self.fewest(&kept, group, counts.clone())?;
            Some(self.candidate(Change::Add, Group { count, ..group }, index))
        };
        self.standing_sizes().filter_map(new).collect()
    }

    /// The fewest of each size that mend in the place of a group.
    fn replaced(&self, place: usize) -> Vec<Candidate<'r>> {
        let kept = self.beside(Some(place));
        let there = self.groups[place];
        let counts = 1..=(there.count + MORE_THAN_THERE).max(*self.area.count.end());
        let new = |(index, group): (usize, Group<'r>)| {
            if same_opening(&group, &there) {
                return None;
            }
            let count = self.fewest(&kept, group, counts.clone())?;
            Some(self.candidate(Change::Replace(place), Group { count, ..group }, index))
        };
        self.standing_sizes().filter_map(new).collect()
    }

    /// The larger sizes of its kind that mend in the place of a group, as many and as high.
    fn widened(&self, place: usize) -> Vec<Candidate<'r>> {
        let kept = self.beside(Some(place));
        let there = self.groups[place];
        let new = |(index, size): (usize, &'r Size)| {
            let stands = size.set_heights.as_ref().is_none_or(|own| holds_height(own, there.set_height));
            if !stands || !self.area.takes(size.device.kind()) || !is_larger(size, there.size) {
                return None;
            }
            if !self.restriction.allows(size, there.set_height, self.area) {
                return None;
            }
            let group = Group { size, ..there };
            self.fewest(&kept, group, there.count..=there.count)?;
            Some(self.candidate(Change::Widen(place), group, index))
        };
        self.roof.sizes.iter().enumerate().filter_map(new).collect()
    }

    /// A group with its sills at the highest height under theirs that holds every case.
    fn lowered(&self, place: usize) -> Option<Candidate<'r>> {
        let there = self.groups[place];
        let at_edge = there.size.place == Place::Edge;
        let low = if at_edge { self.area.roof_at_wall } else { Length::ZERO };
        let under = self.area.parapet.height.zip(there.size.device.height()).filter(|_| at_edge);
        let under = under.map(|(top, opening)| Length::from_nm(top.nm() - opening.nm() - 1));
        let high = under.map_or(there.set_height, |under| under.min(there.set_height));
        let (least, most) = self.restriction.sills(there.size, self.area);
        let (low, high) = (low.max(least), high.min(most));
        if low >= high {
            return None;
        }
        let beside = self.beside(Some(place));
        let ends = (0..self.situations.len()).map(|case| self.highest_sill(place, &beside, case, low, high));
        let highest = ends.collect::<Option<Vec<_>>>()?.into_iter().fold(high, Length::min);
        let set_height = match &there.size.set_heights {
            Some(own) => own.iter().copied().rfind(|&height| height >= low && height <= highest)?,
            None => rounded_down(highest, self.roof.system).max(low),
        };
        let group = Group { set_height, ..there };
        (set_height.nm() < there.set_height.nm()).then(|| Candidate {
            cost: None,
            closing: Money::default(),
            ..self.candidate(Change::Lower(place), group, 0)
        })
    }

    /// The highest sill of a group between two heights that holds a case; none where none does.
    fn highest_sill(
        &self,
        place: usize,
        beside: &Beside<'r>,
        case: usize,
        low: Length,
        high: Length,
    ) -> Option<Length> {
        let situation = std::slice::from_ref(&self.situations[case]);
        let spare = |height: f64| {
            let mut groups = self.groups.clone();
            groups[place].set_height = Length::from_m(height);
            least_spare(&groups, situation, self.asked)
        };
        // Where its top meets the level that all else allows: lower only lowers that level.
        let top = layout::top(&Group { set_height: Length::ZERO, ..self.groups[place] }, &self.situations[case]);
        let freeboard = layout::freeboard_asked(&self.situations[case], self.asked);
        let met = freeboard.zip(top).map(|(freeboard, top)| beside.levels[case] + freeboard - top);
        let from = met.filter(|met| met.m().is_finite()).map_or(low, |met| met.max(low).min(high));
        greatest(spare, from.m(), high.m()).map(Length::from_m)
    }

    fn candidate(&self, change: Change, group: Group<'r>, index: usize) -> Candidate<'r> {
        let price = group.size.price.map(|price| price * group.count);
        let closed = match change {
            Change::Widen(place) | Change::Replace(place) => self.groups[place].count,
            Change::Add | Change::Lower(_) => 0,
        };
        let closing = self.replace * closed;
        let touched = group.count + if matches!(change, Change::Replace(_)) { closed } else { 0 };
        let width = group.size.clear_width().nm().saturating_mul(i64::from(group.count));
        let cost = price.map(|price| [price, closing].into_iter().sum());
        Candidate { change, group, cost, closing, then: (touched, width, index, group.set_height.nm()) }
    }

    /// Every size at the heights that are to be tried of those at which it may stand, one of it.
    fn standing_sizes(&self) -> impl Iterator<Item = (usize, Group<'r>)> + '_ {
        self.roof.sizes.iter().enumerate().flat_map(|(index, size)| {
            let stand = rules::stands(size, self.area).and_then(|stand| self.restriction.on(stand, size, self.area));
            let mut heights = stand.map_or(Vec::new(), |stand| stand.heights);
            let asked = |situation| layout::freeboard_asked(situation, self.asked).is_some();
            if !self.situations.iter().any(asked) || size.device.height().is_none() {
                heights.truncate(1);
            }
            heights.into_iter().map(move |set_height| (index, Group { size, count: 1, set_height }))
        })
    }

    /// The fewest of one more group, within a range, that hold every case and can be built; none where none do.
    fn fewest(&self, kept: &Beside<'r>, new: Group<'r>, counts: RangeInclusive<u32>) -> Option<u32> {
        let sums: Vec<Sum> = (0..self.situations.len()).map(|case| self.sum(kept, new, case)).collect();
        let holds = |count: u32| sums.iter().all(|sum| sum.holds(kept.place, count));
        let (mut least, mut most) = (self.fewest_by_rules(kept, new).max(*counts.start()), *counts.end());
        if least > most || !holds(most) {
            return None;
        }
        while least < most {
            let middle = u32::midpoint(least, most);
            if holds(middle) { most = middle } else { least = middle + 1 }
        }
        let mut groups = kept.groups.clone();
        groups.insert(kept.place, Group { count: least, ..new });
        misfits(self.roof, self.given.area, &groups).is_empty().then_some(least)
    }

    /// The fewest of one more group that the rules let stand beside what is kept.
    fn fewest_by_rules(&self, kept: &Beside<'r>, new: Group<'r>) -> u32 {
        let count = |at_edge: bool| {
            let counts = kept.groups.iter().filter(|group| !at_edge || group.size.place == Place::Edge);
            counts.map(|group| group.count).sum::<u32>()
        };
        let in_all = self.restriction.least.map_or(0, |(least, _)| least.saturating_sub(count(false)));
        let at_edge = self.restriction.at_edge.filter(|_| new.size.place == Place::Edge);
        in_all.max(at_edge.map_or(0, |(least, _)| least.saturating_sub(count(true))))
    }

    /// What stays where a group goes, or all of it; a new group takes its place, or the last.
    fn beside(&self, gone: Option<usize>) -> Beside<'r> {
        let mut groups = self.groups.clone();
        let place = gone.unwrap_or(groups.len());
        if gone.is_some() {
            groups.remove(place);
        }
        let highest = |(situation, &allowed)| highest_level(&groups, situation, allowed, self.asked);
        let levels: Vec<Length> = self.situations.iter().zip(&self.allowed).map(highest).collect();
        let carried = |(situation, &level): (&Situation<'r>, &Length)| {
            groups.iter().map(|group| one_carries(group, situation, level)).collect()
        };
        Beside { flows: self.situations.iter().zip(&levels).map(carried).collect(), levels, groups, place }
    }

    /// What one device of each group carries in a case with one more group, at the highest level allowed.
    fn sum(&self, kept: &Beside<'r>, new: Group<'r>, case: usize) -> Sum {
        let situation = &self.situations[case];
        let level = highest_level(&[new], situation, kept.levels[case], self.asked);
        let same = level == kept.levels[case];
        let of_kept = |(place, group): (usize, &Group<'r>)| {
            let flow = if same { kept.flows[case][place] } else { one_carries(group, situation, level) };
            (flow, group.count)
        };
        let mut of_groups: Vec<(f64, u32)> = kept.groups.iter().enumerate().map(of_kept).collect();
        of_groups.insert(kept.place, (one_carries(&new, situation, level), new.count));
        let mut flows = [(0.0, 0); MOST_OUTLETS];
        flows[..of_groups.len()].copy_from_slice(&of_groups);
        Sum { flows, groups: of_groups.len(), blocked: situation.case.blocked, demand: situation.demand.m3_per_s() }
    }
}

/// What stays of a layout, with what it allows and carries in each case.
struct Beside<'r> {
    groups: Vec<Group<'r>>,
    /// Where among the groups a new one is put.
    place: usize,
    levels: Vec<Length>,
    flows: Vec<Vec<f64>>,
}

/// What devices carry in one case, in the order of the groups.
struct Sum {
    flows: [(f64, u32); MOST_OUTLETS],
    groups: usize,
    blocked: u32,
    demand: f64,
}

impl Sum {
    /// Whether the demand is carried with so many of the group at a place.
    fn holds(&self, place: usize, count: u32) -> bool {
        let mut flows = self.flows;
        flows[place].1 = count;
        working_capacity(&flows, self.groups, self.blocked) >= self.demand
    }
}

/// What one device of a group carries at a level, m3/s.
fn one_carries(group: &Group<'_>, situation: &Situation<'_>, level: Length) -> f64 {
    let mut pool = layout::pool(&[Group { count: 1, ..*group }], situation);
    pool.blocked = 0;
    pool.capacity(level).m3_per_s()
}

/// A height rounded down to what is built: hundredths of an inch, or tenths of a millimetre.
fn rounded_down(height: Length, system: System) -> Length {
    let step = match system {
        System::Us => Length::inches(0.01),
        System::Si => Length::mm(0.1),
    };
    Length::from_nm(height.nm().div_euclid(step.nm()) * step.nm())
}

fn holds_height(heights: &[Length], height: Length) -> bool {
    heights.iter().any(|known| known.nm() == height.nm())
}

/// Whether one size is of the kind of another and nowhere smaller, and somewhere larger.
fn is_larger(size: &Size, than: &Size) -> bool {
    let (new, old) = (&size.device, &than.device);
    if new.kind() != old.kind() || size.place != than.place {
        return false;
    }
    let dimensions = |device: &Device| [device.width(), device.height(), device.diameter()];
    let pairs = || dimensions(new).into_iter().zip(dimensions(old)).filter_map(|(new, old)| new.zip(old));
    pairs().all(|(new, old)| new.nm() >= old.nm()) && pairs().any(|(new, old)| new.nm() > old.nm())
}

/// Whether two groups are of the same openings at the same height.
fn same_opening(a: &Group<'_>, b: &Group<'_>) -> bool {
    let dimensions = |device: &Device| [device.width(), device.height(), device.diameter()].map(|x| x.map(Length::nm));
    a.size.tag == b.size.tag
        && dimensions(&a.size.device) == dimensions(&b.size.device)
        && a.set_height.nm() == b.set_height.nm()
}
