//! A layout and all that is known of it: how it stands in every case, how high its sills may be built, the ranges it leaves,
//! and how it would stand under other laws.

use crate::device::{Law, Regime};
use crate::hydraulics::limits::Range;
use crate::roof::layout::{self, Asked, CaseState, Group, Liftable, Water, highest_lift};
use crate::roof::{Governing, Roof, Situation};
use crate::units::{Length, Money};

use super::measure::Measured;

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

/// What a layout closes of what is there.
#[derive(Clone, Debug)]
pub struct Closed<'r> {
    /// The devices that are closed, group by group in the order of the file; empty where all are kept.
    pub groups: Vec<Group<'r>>,
    /// What closing them costs.
    pub cost: Money,
}

/// A layout and all that is known of it.
#[derive(Clone, Debug)]
pub struct Ranked<'r> {
    /// Its groups, in catalog order.
    pub groups: Vec<Placed<'r>>,
    /// How many of the last groups are there already and are kept.
    pub kept: usize,
    /// What it closes of what is there; none where all of that has to stay.
    pub closed: Option<Closed<'r>>,
    /// Its cost, that of closing included; none where one of its devices has no price.
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

impl<'r> Ranked<'r> {
    /// The groups that are not there already.
    pub fn added(&self) -> &[Placed<'r>] {
        &self.groups[..self.groups.len() - self.kept]
    }
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

/// All that is known of groups in an area: `liftable` are they at the lowest of their heights with the highest, `allowed` the
/// highest level that each situation allows.
pub fn standing<'r>(
    groups: &[Group<'r>],
    liftable: &[Liftable<'r>],
    situations: &[Situation<'r>],
    allowed: &[Length],
    asked: Asked,
) -> Ranked<'r> {
    let lift = highest_lift(liftable, situations, asked).unwrap_or(Length::ZERO);
    let placed = groups.iter().zip(liftable).map(|(&group, liftable)| Placed {
        group,
        from: liftable.group.set_height,
        to: liftable.lifted(lift).set_height,
    });
    described(placed.collect(), situations, allowed)
}

/// All that is reported of groups with their windows.
pub(super) fn described<'g>(placed: Vec<Placed<'g>>, situations: &[Situation<'_>], allowed: &[Length]) -> Ranked<'g> {
    let groups: Vec<Group<'g>> = placed.iter().map(|placed| placed.group).collect();
    let states: Vec<_> = situations.iter().map(|situation| layout::state(&groups, situation)).collect();
    let (case, governing) = governing(&states);
    Ranked {
        kept: 0,
        closed: None,
        cost: layout::cost(&groups),
        case,
        governing,
        beyond: beyond(&groups, &states, situations),
        thick_wall: thick_wall(situations, allowed, &groups, case),
        chord: chord(&groups, &states, situations),
        groups: placed,
        states,
        allowed: allowed.to_vec(),
        made: None,
    }
}

/// The layout under the laws of a thick wall, where they differ from those it has.
fn thick_wall(situations: &[Situation<'_>], allowed: &[Length], groups: &[Group<'_>], case: usize) -> Vec<UnderLaw> {
    let site = &situations[case].site;
    if site.thickness.is_none() {
        return Vec::new();
    }
    let differs = |law: Law| {
        groups.iter().any(|group| group.size.device.kind().laws().contains(&law) && group.size.law_at(site) != law)
    };
    // Inlet control says more where the top of a closed opening is under water.
    let laws = [Law::Throat, Law::ShortCrest, Law::InletControl].into_iter().filter(|&law| differs(law));
    laws.map(|law| under_law(situations, allowed, groups, case, law)).collect()
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
