//! What a rule set makes of the demand: its rain, its walls, the primary drains as it counts them.
//!
//! # How a demand is counted
//!
//! Rain on the roof and on the walls that the set counts, and what runs onto the area by the same rain and walls; from that
//! what the primary drains of the area carry, where the set credits it; and no less than the part of their flow that the set
//! asks for. Areas above pass on all they get: what their primary drains carry is not credited to the areas below.
//!
//! # Which rain
//!
//! Of the storms of a set the first that can be found counts: one of a fixed intensity; else one that stands in the rainfall
//! table; else one of the project whose duration and return period are stated the same. A storm that has a duration and no
//! return period is looked up at that of the project's. Where none can be found the design rain of the project stands in, and
//! verdicts that go by it say that they cannot tell.

use crate::roof::{AreaBasis, Basis, Case, Catchment, Reading, Risk, Roof, StandsIn, Storm, Wall, WallRule, demand};
use crate::units::{Area, Flow, Intensity, Length, ReturnPeriod, Time};

use super::amount::Amount;
use super::kind::{Open, Role};
use super::set::{Rule, RuleSet, Rulebook};

/// The rain of a rule.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Rain {
    /// Intensity, climate and the factor of the rule counted in.
    pub intensity: Intensity,
    /// Where it was read in the rainfall table; without climate and factor.
    pub reading: Option<Reading>,
}

/// The roof as each set counts it, in the order of the sets. Receiving areas that run in a circle get nothing of one another.
pub fn bases(book: &Rulebook, roof: &Roof) -> Vec<Basis> {
    let basis = |(index, set): (usize, &RuleSet)| Basis {
        case: Case { name: set.title.clone(), basis: Some(index), ..Case::as_designed() },
        areas: areas(set, roof),
    };
    book.sets.iter().map(|applied| &*applied.set).enumerate().map(basis).collect()
}

fn areas(set: &RuleSet, roof: &Roof) -> Vec<AreaBasis> {
    let counted: Vec<(Intensity, Area)> =
        roof.areas.iter().map(|area| (intensity(set, &roof.storm, area), walls(set, area))).collect();
    let own = |area: usize| {
        let (intensity, wall) = counted[area];
        intensity * (roof.areas[area].area + wall)
    };
    let flows = demand::flows_of(&roof.areas, own).unwrap_or_default();
    let rain: Vec<Option<StandsIn>> = roof.areas.iter().map(|area| rain_stands_in(set, &roof.storm, area)).collect();
    let stands_in = |area: usize| {
        let above = !roof.areas[area].receives.is_empty();
        let rain = rain[area].or_else(|| rain.iter().flatten().next().copied().filter(|_| above));
        rain.into_iter().chain(primary_stands_in(set, &roof.areas[area])).reduce(StandsIn::with)
    };
    let all = roof.areas.iter().enumerate().zip(counted).zip(flows);
    all.map(|(((index, area), (intensity, wall)), flow)| AreaBasis {
        intensity,
        duration: duration(set, &roof.storm, area),
        wall,
        flow,
        credited: credited(set, area).min(flow),
        least: asked_of_primary(set, area),
        depth: least_depth(set, area),
        freeboard: freeboard(set),
        stands_in: stands_in(index),
    })
    .collect()
}

fn of_role<'s>(set: &'s RuleSet, role: impl Fn(&Role) -> bool + 's) -> impl Iterator<Item = &'s Rule> {
    set.rules.iter().filter(move |rule| role(&rule.kind.role))
}

/// The rain that a set counts on an area; the design rain where it asks for none, or for none that can be found.
fn intensity(set: &RuleSet, storm: &Storm, area: &Catchment) -> Intensity {
    let mut found = of_role(set, |role| matches!(role, Role::Rain)).filter_map(|rule| rain(rule, storm, area).ok());
    found.next().map_or(storm.intensity, |rain| rain.intensity)
}

/// What of the rain of a set is not given: the design rain stands in, which may be more or less.
fn rain_stands_in(set: &RuleSet, storm: &Storm, area: &Catchment) -> Option<StandsIn> {
    let storms: Result<Vec<Rain>, Open> =
        of_role(set, |role| matches!(role, Role::Rain)).map(|rule| rain(rule, storm, area)).collect();
    let found = of_role(set, |role| matches!(role, Role::Rain)).any(|rule| rain(rule, storm, area).is_ok());
    match storms {
        Err(Open::Missing(missing)) if !found => Some(StandsIn { missing, may_be_more: true, may_be_less: true }),
        _ => None,
    }
}

/// What of the primary drains is not given that a set counts by: it asks for a part of their flow, or takes it off.
fn primary_stands_in(set: &RuleSet, area: &Catchment) -> Option<StandsIn> {
    let asks = of_role(set, |role| matches!(role, Role::PrimaryFlow)).next().is_some();
    let credits = of_role(set, |role| matches!(role, Role::Credit)).any(is_credit);
    let open = area.facts.primary.flow.is_none() && (asks || credits);
    open.then_some(StandsIn { missing: NO_FLOW, may_be_more: asks, may_be_less: credits })
}

/// What is missing where the flow of the primary drains is not given.
pub(super) const NO_FLOW: &str = "what the primary drains carry: primary = { flow = .. }";

/// How long the rain lasts that a set counts on an area, where that is stated.
fn duration(set: &RuleSet, storm: &Storm, area: &Catchment) -> Option<Time> {
    let mut found = of_role(set, |role| matches!(role, Role::Rain)).filter(|rule| rain(rule, storm, area).is_ok());
    found.next().map_or(storm.duration, |rule| match rule.term("duration") {
        Some(Amount::Time(duration)) => Some(duration),
        _ => storm.duration,
    })
}

/// The rain of one rule on an area.
///
/// # Errors
/// What is not given that it needs.
pub fn rain(rule: &Rule, storm: &Storm, area: &Catchment) -> Result<Rain, Open> {
    let times = match rule.term("times") {
        Some(Amount::Times(times)) => times,
        _ => 1.0,
    };
    if let Some(Amount::Intensity(intensity)) = rule.term("intensity") {
        return Ok(Rain { intensity: intensity * (storm.climate * times), reading: None });
    }
    let Some(Amount::Time(duration)) = rule.term("duration") else {
        return Ok(Rain { intensity: storm.intensity * times, reading: None });
    };
    // A rule that says how long and not how often leaves that to the project.
    let often = ["return_period", "return_period_3", "return_period_4"].iter().any(|key| rule.term(key).is_some());
    let period = if often { Some(return_period(rule, area)?) } else { storm.return_period };
    let in_table =
        storm.rainfall.as_ref().zip(period).and_then(|(table, period)| table.intensity(duration, period).ok());
    if let Some(reading) = in_table {
        return Ok(Rain { intensity: reading.intensity * (storm.climate * times), reading: Some(reading) });
    }
    let same = |stated: Option<Time>, stated_period: Option<ReturnPeriod>| {
        let near = |a: f64, b: f64| (a - b).abs() <= 1e-9 * b;
        stated.is_some_and(|stated| near(stated.s(), duration.s()))
            && match (stated_period, period) {
                (Some(stated), Some(period)) => near(stated.years(), period.years()),
                (stated, period) => stated.is_none() && period.is_none(),
            }
    };
    let main = same(storm.duration, storm.return_period).then_some(storm.intensity);
    let further = storm.further.iter().find(|further| same(further.duration, further.return_period));
    let found = main.or(further.map(|further| further.intensity * (1.0 / further.factor)));
    let missing = Open::Missing(if !often {
        "its rain: a rainfall table that has this duration, or a storm of the project with it"
    } else if storm.rainfall.is_some() {
        "its rain: the rainfall table does not reach so far, and no storm of the project is the same"
    } else {
        "its rain: a rainfall table, or a storm of the project with this duration and return period"
    });
    found.map(|intensity| Rain { intensity: intensity * times, reading: None }).ok_or(missing)
}

/// How often the storm of a rule may be met, by the risk category of the building where the rule tells them apart.
///
/// # Errors
/// What is not given that it needs.
pub fn return_period(rule: &Rule, area: &Catchment) -> Result<ReturnPeriod, Open> {
    let period = |key| match rule.term(key) {
        Some(Amount::ReturnPeriod(period)) => Some(period),
        _ => None,
    };
    let (usual, third, fourth) = (period("return_period"), period("return_period_3"), period("return_period_4"));
    let missing = Open::Missing("the return period of the storm");
    if third.is_none() && fourth.is_none() {
        return usual.ok_or(missing);
    }
    let own = match area.facts.risk.ok_or(Open::Missing("the risk category of the building: risk_category = .."))? {
        Risk::I | Risk::II => None,
        Risk::III => third,
        Risk::IV => fourth.or(third),
    };
    own.or(usual).ok_or(missing)
}

/// The walls that a set counts, in full; those of the project where it says nothing.
fn walls(set: &RuleSet, area: &Catchment) -> Area {
    let rule = of_role(set, |role| matches!(role, Role::Walls)).next();
    let by_project = || area.wall * area.wall_share;
    rule.map_or_else(by_project, |rule| counted_walls(rule, area))
}

/// The walls of an area by a rule; where only their sum is known, as one wall: no rule counts that as less than as much in
/// several.
pub(super) fn counted_walls(rule: &Rule, area: &Catchment) -> Area {
    let word = rule.word("count");
    let how = WallRule::NAMED.iter().find(|(name, _)| Some(*name) == word).map_or(WallRule::None, |&(_, how)| how);
    if area.facts.walls.is_empty() {
        how.counted(&[Wall { area: area.wall, side: crate::roof::Side::North }])
    } else {
        how.counted(&area.facts.walls)
    }
}

/// What the primary drains take off the demand by a set; nothing where their flow is not given.
fn credited(set: &RuleSet, area: &Catchment) -> Flow {
    let credits = of_role(set, |role| matches!(role, Role::Credit)).any(is_credit);
    if credits { area.facts.primary.flow.unwrap_or(Flow::ZERO) } else { Flow::ZERO }
}

/// Whether a rule of the primary credit gives it.
pub(super) fn is_credit(rule: &Rule) -> bool {
    rule.term("credited") == Some(Amount::Yes(true))
}

fn asked_of_primary(set: &RuleSet, area: &Catchment) -> Flow {
    let flow = area.facts.primary.flow.unwrap_or(Flow::ZERO);
    of_role(set, |role| matches!(role, Role::PrimaryFlow)).map(|rule| flow * rule.times()).fold(Flow::ZERO, Flow::max)
}

fn least_depth(set: &RuleSet, area: &Catchment) -> Option<Length> {
    let depth = |rule: &Rule| match rule.kind.role {
        Role::Depth(depth) => depth(rule, area).ok(),
        _ => None,
    };
    set.rules.iter().filter_map(depth).reduce(Length::min)
}

fn freeboard(set: &RuleSet) -> Option<Length> {
    let asked = |rule: &Rule| match rule.bound?.amount() {
        Amount::Length(length) => Some(length),
        _ => None,
    };
    of_role(set, |role| matches!(role, Role::Freeboard)).filter_map(asked).reduce(Length::max)
}
