//! One area as the search sees it: the sizes that may stand there, their heights, and what one of each can carry.
//!
//! In one area and one case the highest level allowed is one number, so what a single device can carry there is one number
//! too, whatever stands beside it: a table of candidates by cases, computed once. A layout holds a case exactly when the
//! table's entries, times their counts, less the blocked, reach the demand.
//!
//! Freeboard makes the level depend on the layout: water must stay under its lowest opening. Layouts are therefore searched
//! by classes of equal lowest top ([`Problem::classes`]), and within a class the level is one number again.

use std::sync::Arc;

use crate::device::{Place, Size};
use crate::roof::layout::{self, Asked, Group, Liftable};
use crate::roof::{Catchment, GivenGroup, MOST_GROUPS, MOST_OUTLETS, Roof, Situation, working_capacity};
use crate::rules::{self, Misfit, Restriction, RuleAt, Rulebook, Stand};
use crate::units::Length;

use super::Watch;
use super::closing::Closing;
use super::rank::{Criterion, Order};
use super::{Broken, Options};

/// A size that may stand in the area.
#[derive(Clone, Debug)]
pub(super) struct Candidate<'r> {
    pub(super) size: &'r Size,
    /// Its index among the roof's sizes.
    pub(super) index: usize,
    /// A number for its tag, the same for all its sizes.
    pub(super) tag: u32,
    /// Where it may stand, rising; never empty.
    pub(super) heights: Vec<Length>,
    /// The highest to which it may be lifted.
    pub(super) highest: Length,
    /// Price in millionths; zero where the catalog has none.
    pub(super) price: i64,
    /// Clear width in nanometres.
    pub(super) width: i64,
    /// Whether it uses up edge.
    pub(super) at_edge: bool,
    /// Top of its opening at its lowest set height, nanometres; none where it has no top.
    pub(super) top: Option<i64>,
}

impl Candidate<'_> {
    pub(super) fn lowest(&self) -> Length {
        self.heights[0]
    }
}

/// One area, the cases it is searched for, and what is asked of a layout.
#[derive(Clone, Debug)]
pub(super) struct Problem<'r> {
    pub(super) situations: Vec<Situation<'r>>,
    /// The highest level that each situation allows, to any layout.
    pub(super) allowed: Vec<Length>,
    pub(super) candidates: Vec<Candidate<'r>>,
    /// What is there already and stays, behind the groups of every layout.
    pub(super) fixed: Vec<Group<'r>>,
    /// What of what is there may be closed, and is; none where all of it stays.
    pub(super) closing: Option<Closing<'r>>,
    /// Least and most devices of a layout, those that stay among them.
    in_all: (u32, u32),
    /// Least and most devices that a layout adds to what is there; and the rule that asks for the least, where one does.
    pub(super) least: u32,
    pub(super) asked_for: Option<RuleAt>,
    /// Least openings at the edge of a layout with any there, those that are there already among them; and the rule that asks
    /// for them.
    pub(super) least_at_edge: u32,
    pub(super) asked_at_edge: Option<RuleAt>,
    /// A binding rule that the area or what stays breaks whatever is added; then no layout holds.
    pub(super) broken: Option<Broken>,
    pub(super) most: u32,
    pub(super) mix: usize,
    /// Edge in nanometres; none where it is not limited.
    pub(super) edge: Option<i64>,
    pub(super) gap: i64,
    pub(super) asked: Asked,
    pub(super) order: Order,
    pub(super) watch: Watch,
    /// The area, and the rule sets over it: for sizes that are not the catalog's.
    pub(super) catchment: &'r Catchment,
    pub(super) rules: Arc<Rulebook>,
}

/// Layouts whose lowest opening has its top at one height; none for those without any closed opening.
pub(super) type Class = Option<i64>;

/// What one device of each candidate carries in each case, m3/s, under given levels and at given heights.
#[derive(Clone, Debug)]
pub(super) struct Table {
    cases: usize,
    flows: Vec<f64>,
    /// What one device of each group that is there carries, case by case.
    fixed: Vec<f64>,
}

impl Table {
    pub(super) fn of(&self, candidate: usize) -> &[f64] {
        &self.flows[candidate * self.cases..(candidate + 1) * self.cases]
    }
}

impl<'r> Problem<'r> {
    /// The area with every size that may stand in it; beside it the sizes that may not, and why.
    pub(super) fn new(roof: &'r Roof, area: usize, options: &Options) -> (Self, Vec<(&'r Size, Misfit)>) {
        Self::among(roof, area, options, roof.sizes.iter().enumerate())
    }

    /// The area with only the sizes of these indices among the roof's, rising.
    pub(super) fn of_sizes(roof: &'r Roof, area: usize, options: &Options, sizes: &[usize]) -> Self {
        Self::among(roof, area, options, sizes.iter().map(|&size| (size, &roof.sizes[size]))).0
    }

    fn among(
        roof: &'r Roof,
        area: usize,
        options: &Options,
        sizes: impl Iterator<Item = (usize, &'r Size)>,
    ) -> (Self, Vec<(&'r Size, Misfit)>) {
        let catchment = &roof.areas[area];
        let restriction = Restriction::new(&options.rules, &roof.bases, catchment, area);
        let mut tags: Vec<&str> = Vec::new();
        let (mut candidates, mut misfits) = (Vec::new(), Vec::new());
        let fixed: Vec<Group<'r>> = catchment.existing.iter().map(GivenGroup::group).collect();
        let broken = broken(&restriction, &fixed, catchment);
        // Where what breaks a rule may be closed, other ways of closing have candidates.
        let tried = broken.is_none_or(|broken| broken.there.is_some() && catchment.replace.is_some());
        for (index, size) in sizes.filter(|_| tried) {
            // Sizes of one device follow one another, so its tag is nearly always the last.
            let tag = tags.iter().rposition(|&known| known == &*size.tag).unwrap_or_else(|| {
                tags.push(&size.tag);
                tags.len() - 1
            });
            let stand = rules::stands(size, catchment);
            match stand.and_then(|stand| restriction.on(stand, size, catchment)) {
                Ok(stand) => candidates.push(candidate(size, index, u32::try_from(tag).unwrap_or(u32::MAX), stand)),
                Err(misfit) => misfits.push((size, misfit)),
            }
        }
        let priced = candidates.iter().all(|candidate| candidate.size.price.is_some());
        let situations = roof.situations(area);
        let by_rule = restriction.least.filter(|(least, _)| least > catchment.count.start());
        let least = by_rule.map_or(*catchment.count.start(), |(least, _)| least);
        let closing = catchment.replace.filter(|_| !fixed.is_empty()).map(|price| {
            let breaks =
                fixed.iter().map(|group| restriction.broken_by(group.size, group.set_height, catchment)).collect();
            Closing { way: vec![0; fixed.len()], there: fixed.clone(), breaks, price }
        });
        let mut problem = Self {
            allowed: situations.iter().map(Situation::allowable_level).collect(),
            situations,
            candidates,
            closing,
            in_all: (least, *catchment.count.end()),
            least: 0,
            asked_for: by_rule.map(|(_, at)| at),
            least_at_edge: restriction.at_edge.map_or(0, |(least, _)| least),
            asked_at_edge: restriction.at_edge.map(|(_, at)| at),
            broken,
            most: 0,
            fixed,
            mix: options.mix,
            edge: limited_edge(catchment),
            gap: catchment.gap.nm(),
            asked: Asked { freeboard: options.freeboard },
            order: Order::new(&options.rank_by, priced),
            watch: options.watch.clone(),
            catchment,
            rules: Arc::clone(&options.rules),
        };
        problem.count_what_is_added();
        (problem, misfits)
    }

    /// Brings the least and the most that a layout adds to what stays.
    pub(super) fn count_what_is_added(&mut self) {
        let there = self.devices_there();
        self.least = self.in_all.0.saturating_sub(there);
        self.most = self.in_all.1.saturating_sub(there);
    }

    /// Whether any case asks for freeboard.
    pub(super) fn asks_freeboard(&self) -> bool {
        self.situations.iter().any(|situation| layout::freeboard_asked(situation, self.asked).is_some())
    }

    /// The classes of layouts: one for all where no freeboard is asked, else one for each height of an opening's top.
    pub(super) fn classes(&self) -> Vec<Class> {
        if !self.asks_freeboard() {
            return vec![None];
        }
        let mut tops: Vec<_> = self.candidates.iter().filter_map(|candidate| candidate.top).collect();
        tops.sort_unstable();
        tops.dedup();
        std::iter::once(None).chain(tops.into_iter().map(Some)).collect()
    }

    /// The candidates that a layout of a class may be made of, in catalog order.
    pub(super) fn members(&self, class: Class) -> Vec<usize> {
        let asked = self.asks_freeboard();
        let belongs = |candidate: &Candidate<'_>| match (class, candidate.top) {
            (_, None) => true,
            (None, Some(_)) => !asked,
            (Some(lowest), Some(top)) => !asked || top >= lowest,
        };
        (0..self.candidates.len()).filter(|&index| belongs(&self.candidates[index])).collect()
    }

    /// The highest level allowed in each case, to layouts of a class.
    pub(super) fn allowable_levels(&self, class: Class) -> Vec<Length> {
        let under_the_top = |situation: &Situation<'_>| {
            let case = situation.case;
            // A loss lowers the top by as much as it raises the sill.
            let top = Length::from_nm(class?) + case.sill_error - case.opening_loss;
            Some(top - layout::freeboard_asked(situation, self.asked)?)
        };
        let level = |(situation, &allowed): (&Situation<'_>, &Length)| {
            let allowed = layout::highest_level(&self.fixed, situation, allowed, self.asked);
            under_the_top(situation).map_or(allowed, |ceiling| ceiling.min(allowed))
        };
        self.situations.iter().zip(&self.allowed).map(level).collect()
    }

    /// What one of each candidate carries under one level a case, each at the set height that `height` gives; a candidate
    /// without a height cannot be part of the layout at all.
    pub(super) fn table(&self, levels: &[Length], height: impl Fn(&Candidate<'r>) -> Option<Length>) -> Table {
        let mut flows = Vec::with_capacity(self.candidates.len() * levels.len());
        for candidate in &self.candidates {
            let height = height(candidate);
            for (situation, &level) in self.situations.iter().zip(levels) {
                let one = |set_height| one_carries(candidate.size, set_height, situation, level);
                flows.push(height.map_or(f64::NEG_INFINITY, one));
            }
        }
        let of_case = |(situation, &level): (&Situation<'r>, &Length)| {
            self.fixed
                .iter()
                .map(|group| one_carries(group.size, group.set_height, situation, level))
                .collect::<Vec<_>>()
        };
        let fixed = self.situations.iter().zip(levels).flat_map(of_case).collect();
        Table { cases: levels.len(), flows, fixed }
    }

    /// What each group that is there carries in a case by a table, with its count.
    fn flows_there<'t>(&'t self, table: &'t Table, case: usize) -> impl Iterator<Item = (f64, u32)> + 't {
        let flows = &table.fixed[case * self.fixed.len()..(case + 1) * self.fixed.len()];
        flows.iter().zip(&self.fixed).map(|(&flow, group)| (flow, group.count))
    }

    /// What is there carries in a case by a table: all of it, and with so many of the most effective blocked.
    pub(super) fn carried_there(&self, table: &Table, case: usize, blocked: u32) -> (f64, f64) {
        let mut flows = [(0.0, 0); MOST_OUTLETS];
        for (slot, there) in flows.iter_mut().zip(self.flows_there(table, case)) {
            *slot = there;
        }
        let carried = |blocked| working_capacity(&flows, self.fixed.len(), blocked);
        (carried(0), carried(blocked))
    }

    /// How many openings a layout with so many at the edge lacks there by the rules, if one more group stands there too.
    pub(super) fn short_at_edge(&self, openings: i64) -> u32 {
        u32::try_from(i64::from(self.least_at_edge) - openings).unwrap_or(0)
    }

    /// Whether so many openings at the edge, if any, are fewer than the rules ask for.
    pub(super) fn is_short_at_edge(&self, openings: i64) -> bool {
        (1..i64::from(self.least_at_edge)).contains(&openings)
    }

    /// Whether what is there already holds every case, and nothing has to be added.
    pub(super) fn is_served(&self) -> bool {
        let enough = self.broken.is_none() && self.least == 0 && !self.is_short_at_edge(self.edge_taken_there().1);
        !self.fixed.is_empty() && enough && self.carries(&self.table(&self.allowable_levels(None), |_| None), &[])
    }

    /// How many devices are there already.
    pub(super) fn devices_there(&self) -> u32 {
        devices(&self.fixed)
    }

    /// Edge that the openings take up that are there already, nanometres, without gaps, and how many they are.
    pub(super) fn edge_taken_there(&self) -> (i64, i64) {
        let at_edge = self.fixed.iter().filter(|group| group.size.place == Place::Edge);
        at_edge.fold((0, 0), |(edge, openings), group| {
            let many = i64::from(group.count);
            (edge + group.size.clear_width().nm().saturating_mul(many), openings + many)
        })
    }

    /// Whether groups of candidates carry every case's demand by a table.
    pub(super) fn carries(&self, table: &Table, groups: &[(usize, u32)]) -> bool {
        let holds = |(case, situation): (usize, &Situation<'_>)| {
            self.capacity(table, case, groups) >= situation.demand.m3_per_s()
        };
        self.situations.iter().enumerate().all(holds)
    }

    /// What groups of candidates, with what is there behind them, carry in a case by a table.
    pub(super) fn capacity(&self, table: &Table, case: usize, groups: &[(usize, u32)]) -> f64 {
        let blocked = self.situations[case].case.blocked;
        let added = groups.iter().map(|&(candidate, count)| (table.of(candidate)[case], count));
        if self.fixed.is_empty() {
            let mut flows = [(0.0, 0); MOST_GROUPS];
            flows.iter_mut().zip(added).for_each(|(slot, group)| *slot = group);
            return working_capacity(&flows, groups.len(), blocked);
        }
        let mut flows = [(0.0, 0); MOST_OUTLETS];
        flows.iter_mut().zip(added.chain(self.flows_there(table, case))).for_each(|(slot, group)| *slot = group);
        working_capacity(&flows, groups.len() + self.fixed.len(), blocked)
    }

    /// The groups at the lowest of their heights, with the highest they may be lifted to; behind them what is there, which
    /// stays where it stands.
    pub(super) fn liftable(&self, groups: &[(usize, u32)]) -> Vec<Liftable<'r>> {
        let liftable = |&(index, count): &(usize, u32)| {
            let candidate = &self.candidates[index];
            let group = Group { size: candidate.size, count, set_height: candidate.lowest() };
            Liftable { group, highest: candidate.highest }
        };
        let stays = |&group: &Group<'r>| Liftable { group, highest: group.set_height };
        groups.iter().map(liftable).chain(self.fixed.iter().map(stays)).collect()
    }

    /// Edge that groups and the gaps between all openings of a layout leave free, nanometres, below zero where they want more
    /// than there is; none where it is not limited.
    pub(super) fn edge_left<'g>(&self, taking: impl Iterator<Item = &'g Group<'g>>, all: &[Group<'_>]) -> Option<i64> {
        let openings: i64 =
            all.iter().filter(|group| group.size.place == Place::Edge).map(|group| i64::from(group.count)).sum();
        let gaps = self.gap.saturating_mul((openings - 1).max(0));
        let at_edge = taking.filter(|group| group.size.place == Place::Edge);
        let taken = at_edge.fold(gaps, |taken, group| {
            taken.saturating_add(group.size.clear_width().nm().saturating_mul(i64::from(group.count)))
        });
        self.edge.map(|edge| edge - taken)
    }

    /// The cases that decide, where some are the same but for their demand: the greatest of each. Whoever holds it holds the
    /// others, at no higher level.
    pub(super) fn deciding(&self) -> Option<Problem<'r>> {
        let classes = same_but_demand(&self.situations);
        let greatest = |class: &Vec<usize>| {
            let demand = |&&case: &&usize| self.situations[case].demand.m3_per_s();
            class.iter().min_by(|a, b| demand(b).total_cmp(&demand(a))).copied()
        };
        let deciding: Vec<usize> = classes.iter().filter_map(greatest).collect();
        (deciding.len() < self.situations.len()).then(|| self.with_cases(&deciding))
    }

    /// This area, held to some of its cases only.
    pub(super) fn with_cases(&self, keep: &[usize]) -> Problem<'r> {
        Problem {
            situations: keep.iter().map(|&case| self.situations[case]).collect(),
            allowed: keep.iter().map(|&case| self.allowed[case]).collect(),
            ..self.clone()
        }
    }

    /// This area, with only the sizes of these indices among the roof's.
    pub(super) fn with_sizes(&self, keep: &[usize]) -> Problem<'r> {
        let mut problem = self.clone();
        problem.candidates.retain(|candidate| keep.contains(&candidate.index));
        problem
    }

    /// This area, ranked by how near a layout comes to its limits.
    pub(super) fn by_utilisation(mut self) -> Self {
        let priced = self.order.criteria().contains(&Criterion::Cost);
        self.order = Order::new(&[Criterion::Utilisation], priced);
        self.asked = Asked::default();
        self
    }
}

/// What one device carries in a case at a level, m3/s.
pub(super) fn one_carries(size: &Size, set_height: Length, situation: &Situation<'_>, level: Length) -> f64 {
    let mut pool = crate::roof::layout::pool(&[Group { size, count: 1, set_height }], situation);
    pool.blocked = 0;
    pool.capacity(level).m3_per_s()
}

fn candidate(size: &Size, index: usize, tag: u32, stand: Stand) -> Candidate<'_> {
    Candidate {
        index,
        tag,
        price: size.price.map_or(0, crate::units::Money::millionths),
        width: size.clear_width().nm(),
        at_edge: size.place == Place::Edge,
        top: size.device.height().map(|height| (stand.heights[0] + height).nm()),
        heights: stand.heights,
        highest: stand.highest,
        size,
    }
}

/// The binding rule that an area breaks by itself, or by what is there already.
fn broken(restriction: &Restriction<'_>, there: &[Group<'_>], area: &Catchment) -> Option<Broken> {
    let by_area = restriction.broken.map(|rule| Broken { rule, there: None });
    let breaks = |(place, group): (usize, &Group<'_>)| {
        let rule = restriction.broken_by(group.size, group.set_height, area)?;
        Some(Broken { rule, there: Some(place) })
    };
    by_area.or_else(|| there.iter().enumerate().find_map(breaks))
}

/// Cases in groups of those that differ in their demand alone, in the order of the first of each.
pub(super) fn same_but_demand(situations: &[Situation<'_>]) -> Vec<Vec<usize>> {
    let mut classes: Vec<Vec<usize>> = Vec::new();
    for (index, situation) in situations.iter().enumerate() {
        let same = |class: &&mut Vec<usize>| {
            let (a, b) = (&situations[class[0]], situation);
            let cases = a.case.blocked == b.case.blocked
                && a.case.sill_error == b.case.sill_error
                && a.case.opening_loss == b.case.opening_loss
                && a.case.law == b.case.law
                && a.case.discharge.to_bits() == b.case.discharge.to_bits();
            // Along a channel a greater demand also stands deeper.
            cases && a.limits == b.limits && a.freeboard == b.freeboard && a.channel.is_none()
        };
        match classes.iter_mut().find(same) {
            Some(class) => class.push(index),
            None => classes.push(vec![index]),
        }
    }
    classes
}

fn devices(groups: &[Group<'_>]) -> u32 {
    groups.iter().map(|group| group.count).sum()
}

fn limited_edge(area: &Catchment) -> Option<i64> {
    area.edge.map(Length::nm)
}
