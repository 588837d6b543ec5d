//! The answers as one JSON document: SI, with the unit in each key, all digits, versioned.

use std::ops::Not;

use serde::Serialize;

use crate::device::{Kind, Size};
use crate::roof::Roof;
use crate::roof::layout::CaseState;
use crate::rules::{RuleAt, Rulebook};
use crate::search::{Answer, Fitted, Least, Measured, Opened, Opening, Outcome, Placed, Ranked, Relaxation, UnderLaw};
use crate::units::{Length, Money};

use super::words::{self, Words};
use super::{Asked, Sized, cascade, heights, marks, notes, ponding, reasons, rules, storm};

mod front;

#[derive(Serialize)]
struct Document<'a> {
    format: &'static str,
    title: &'a str,
    storm: Storm<'a>,
    #[serde(skip_serializing_if = "Vec::is_empty")]
    rule_sets: Vec<rules::Over<'a>>,
    areas: Vec<Area<'a>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    plan: Option<Plan<'a>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    plans: Option<Vec<Plan<'a>>>,
    assumptions: Vec<String>,
    cautions: Vec<String>,
}

#[derive(Serialize)]
struct Storm<'a> {
    intensity_m_s: f64,
    duration_s: Option<f64>,
    return_period_yr: Option<f64>,
    source: Option<&'a str>,
    climate_factor: f64,
    #[serde(skip_serializing_if = "Option::is_none")]
    read: Option<storm::Read<'a>>,
    #[serde(skip_serializing_if = "Vec::is_empty")]
    storms: Vec<storm::Beside<'a>>,
}

#[derive(Serialize)]
struct Area<'a> {
    name: &'a str,
    demand_m3_s: f64,
    #[serde(skip_serializing_if = "Vec::is_empty")]
    receives: Vec<cascade::Received<'a>>,
    outcome: &'static str,
    #[serde(skip_serializing_if = "Option::is_none")]
    why: Option<String>,
    #[serde(skip_serializing_if = "Option::is_none")]
    bound: Option<AtLeast>,
    #[serde(skip_serializing_if = "Option::is_none")]
    cures: Option<Vec<CureFound<'a>>>,
    /// Rules that no layout keeps together.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    contradiction: Vec<rules::NamedRule<'a>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    binds: Option<Vec<CureFound<'a>>>,
    #[serde(skip_serializing_if = "Vec::is_empty")]
    cures_nothing: Vec<&'static str>,
    #[serde(skip_serializing_if = "Option::is_none")]
    stiffened: Option<Stiffened<'a>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    stiffened_outcome: Option<&'static str>,
    #[serde(skip_serializing_if = "Option::is_none")]
    ponding: Option<ponding::OfArea>,
    framing_analysis: Vec<String>,
    layouts: Vec<Layout<'a>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    front: Option<Vec<front::Row<'a>>>,
    /// What keeping all that is there comes to, where the first layout closes some of it.
    #[serde(skip_serializing_if = "Option::is_none")]
    with_nothing_closed: Option<WithNothingClosed<'a>>,
}

#[derive(Serialize)]
struct WithNothingClosed<'a> {
    outcome: &'static str,
    cost: Option<f64>,
    groups: Vec<Group<'a>>,
}

/// What a layout closes of what is there.
#[derive(Serialize)]
pub(super) struct Closing<'a> {
    cost: f64,
    groups: Vec<Group<'a>>,
}

/// The area with its load limit raised to where openings and strength together cost least.
#[derive(Serialize)]
struct Stiffened<'a> {
    load_limit_more_pa: f64,
    strength_cost: f64,
    cost: Option<f64>,
    groups: Vec<Group<'a>>,
}

/// A proven least value of what layouts are ranked by first.
#[derive(Serialize)]
struct AtLeast {
    of: &'static str,
    at_least: f64,
}

#[derive(Serialize)]
struct CureFound<'a> {
    change: &'static str,
    amount: f64,
    cost: Option<f64>,
    groups: Vec<Group<'a>>,
    /// The rules waived.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    rules: Vec<rules::NamedRule<'a>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    closed: Option<Closing<'a>>,
}

#[derive(Serialize)]
struct Plan<'a> {
    outcome: &'static str,
    cost: Option<f64>,
    bound: Option<f64>,
    sizes: Vec<PlanSize<'a>>,
    layouts: Vec<PlanLayout<'a>>,
    #[serde(skip_serializing_if = "Vec::is_empty")]
    by_sizes: Vec<BySizes>,
    #[serde(skip_serializing_if = "Option::is_none")]
    stiffened: Option<StiffenedPlan<'a>>,
    #[serde(flatten)]
    front: Option<front::Plans<'a>>,
}

/// The plan of least cost where load limits may be raised and paid for.
#[derive(Serialize)]
struct StiffenedPlan<'a> {
    cost: f64,
    strength_cost: f64,
    sizes: Vec<PlanSize<'a>>,
    layouts: Vec<StiffenedArea<'a>>,
}

#[derive(Serialize)]
struct StiffenedArea<'a> {
    area: &'a str,
    load_limit_more_pa: f64,
    strength_cost: f64,
    cost: f64,
    groups: Vec<StiffenedGroup<'a>>,
}

#[derive(Serialize)]
struct StiffenedGroup<'a> {
    #[serde(flatten)]
    size: PlanSize<'a>,
    count: u32,
    set_height_m: f64,
}

#[derive(Serialize)]
struct PlanSize<'a> {
    device: &'a str,
    width_m: Option<f64>,
    height_m: Option<f64>,
    diameter_m: Option<f64>,
}

#[derive(Serialize)]
struct PlanLayout<'a> {
    area: &'a str,
    cost: Option<f64>,
    groups: Vec<Group<'a>>,
    cases: Vec<Case<'a>>,
}

#[derive(Serialize)]
struct BySizes {
    sizes: u32,
    cost: Option<f64>,
}

#[derive(Serialize)]
struct Layout<'a> {
    rank: usize,
    cost: Option<f64>,
    groups: Vec<Group<'a>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    closed: Option<Closing<'a>>,
    governing: Governing<'a>,
    cases: Vec<Case<'a>>,
    beyond_range: bool,
    straight_line_excess: f64,
    under_other_laws: Vec<Under<'a>>,
    notes: Vec<String>,
    #[serde(skip_serializing_if = "Option::is_none")]
    rule_sets: Option<Vec<rules::OfSet<'a>>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    rules: Option<Vec<rules::OfRule<'a>>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    made_to_measure: Option<Made<'a>>,
}

#[derive(Serialize)]
struct Made<'a> {
    rounded_up_to_m: Option<f64>,
    better_than_grid: bool,
    #[serde(flatten)]
    fitted: Option<MadeLayout<'a>>,
}

#[derive(Serialize)]
struct MadeLayout<'a> {
    cost: Option<f64>,
    saved: Option<f64>,
    narrower_m: f64,
    unrounded_widths_m: Vec<f64>,
    unrounded_cost: Option<f64>,
    groups: Vec<Group<'a>>,
    governing: Governing<'a>,
    cases: Vec<Case<'a>>,
    beyond_range: bool,
    under_other_laws: Vec<Under<'a>>,
}

#[derive(Serialize)]
pub(super) struct Group<'a> {
    device: &'a str,
    kind: &'static str,
    width_m: Option<f64>,
    height_m: Option<f64>,
    diameter_m: Option<f64>,
    count: u32,
    set_height_m: f64,
    set_height_from_m: f64,
    set_height_to_m: f64,
    #[serde(skip_serializing_if = "Option::is_none")]
    elevation_m: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    above_roof_at_wall_m: Option<f64>,
    law: &'static str,
    law_source: &'static str,
    /// Whether it is there already.
    #[serde(skip_serializing_if = "Not::not")]
    existing: bool,
}

#[derive(Serialize)]
pub(super) struct Governing<'a> {
    case: &'a str,
    limit: Option<&'static str>,
    utilisation: Option<f64>,
}

#[derive(Serialize)]
pub(super) struct Case<'a> {
    name: &'a str,
    demand_m3_s: f64,
    load_limit_pa: Option<f64>,
    depth_limit_m: Option<f64>,
    parapet_m: Option<f64>,
    allowable_level_m: Option<f64>,
    water_depth_m: Option<f64>,
    far_end_level_m: Option<f64>,
    deepest_m: Option<f64>,
    ponding_head_m: Option<f64>,
    load_pa: Option<f64>,
    utilisation: Option<f64>,
    groups: Vec<GroupState>,
}

#[derive(Serialize)]
struct GroupState {
    head_m: Option<f64>,
    flow_m3_s: f64,
    working: u32,
    regime: &'static str,
    freeboard_m: Option<f64>,
    backs_up_above_sill_m: Option<f64>,
}

#[derive(Serialize)]
struct Under<'a> {
    law: &'static str,
    case: &'a str,
    water_depth_m: Option<f64>,
    load_pa: Option<f64>,
    utilisation: Option<f64>,
    breaks_in: Option<&'a str>,
}

pub(super) fn document(sized: &Sized<'_, '_>) -> String {
    let storm = &sized.roof.storm;
    let told = sized.told();
    let mut plans = sized.plans.map_or(Vec::new(), |asked| self::plans(sized, &asked));
    let document = Document {
        format: "brimline size 1",
        title: &sized.roof.title,
        rule_sets: rules::over_in_document(sized.roof, &sized.options.rules),
        storm: Storm {
            intensity_m_s: storm.intensity.m_per_s(),
            duration_s: storm.duration.map(crate::units::Time::s),
            return_period_yr: storm.return_period.map(crate::units::ReturnPeriod::years),
            source: storm.source.as_deref(),
            climate_factor: storm.climate,
            read: storm::read(storm, storm.reading.as_ref()),
            storms: storm::beside(storm),
        },
        areas: sized.answers.iter().map(|answer| area(sized, answer)).collect(),
        plan: plans.is_empty().not().then(|| plans.remove(0)),
        plans: (!plans.is_empty()).then_some(plans),
        assumptions: notes::assumptions(&told),
        cautions: notes::cautions(&told),
    };
    // Only text, finite numbers and lists are in it: nothing that JSON cannot hold.
    let mut text = serde_json::to_string_pretty(&document).unwrap_or_default();
    text.push('\n');
    text
}

/// The plan and its runners-up; one that is infeasible where there is none.
fn plans<'a>(sized: &Sized<'a, '_>, asked: &Asked<'a, '_>) -> Vec<Plan<'a>> {
    let Some(found) = asked.found else { return Vec::new() };
    let amount = |cost: Money| cost.amount();
    let by_sizes = || found.by_sizes.iter().map(|&(sizes, cost)| BySizes { sizes, cost: cost.map(amount) }).collect();
    if found.plans.is_empty() {
        let (sizes, layouts) = (Vec::new(), Vec::new());
        let by_sizes = by_sizes();
        let outcome = if found.finished { "infeasible" } else { "stopped" };
        let stiffened = asked.stiffened.map(|found| stiffened(sized, found));
        return vec![Plan { outcome, cost: None, bound: None, sizes, layouts, by_sizes, stiffened, front: None }];
    }
    let plan = |(index, plan): (usize, &'a crate::search::Plan<'_>)| Plan {
        outcome: if found.finished { "optimal" } else { "stopped" },
        cost: Some(plan.cost.amount()),
        bound: if found.finished {
            found.plans.first().map(|first| first.cost.amount())
        } else {
            found.bound.map(amount)
        },
        sizes: plan.sizes.iter().map(|size| plan_size(size)).collect(),
        layouts: sized
            .answers
            .iter()
            .zip(&plan.layouts)
            .map(|(answer, ranked)| {
                let layout = layout(sized, answer.area, 1, ranked);
                PlanLayout {
                    area: &sized.roof.areas[answer.area].name,
                    cost: layout.cost,
                    groups: layout.groups,
                    cases: layout.cases,
                }
            })
            .collect(),
        by_sizes: if index == 0 { by_sizes() } else { Vec::new() },
        stiffened: asked.stiffened.filter(|_| index == 0).map(|found| stiffened(sized, found)),
        front: asked.front.filter(|_| index == 0).map(|found| front::plans(sized, found)),
    };
    found.plans.iter().enumerate().map(plan).collect()
}

fn stiffened<'a>(sized: &Sized<'a, '_>, found: &'a crate::search::StiffenedPlan) -> StiffenedPlan<'a> {
    let group = |group: &'a crate::roof::GivenGroup| StiffenedGroup {
        size: plan_size(&group.size),
        count: group.count,
        set_height_m: group.set_height.m(),
    };
    let area = |area: &'a crate::search::StiffenedArea| StiffenedArea {
        area: &sized.roof.areas[area.layout.area].name,
        load_limit_more_pa: area.raise.pa(),
        strength_cost: area.strength.amount(),
        cost: area.openings.amount(),
        groups: area.layout.groups.iter().map(group).collect(),
    };
    StiffenedPlan {
        cost: found.cost.amount(),
        strength_cost: found.strength.amount(),
        sizes: found.sizes.iter().map(plan_size).collect(),
        layouts: found.areas.iter().map(area).collect(),
    }
}

fn plan_size(size: &Size) -> PlanSize<'_> {
    PlanSize {
        device: &size.tag,
        width_m: size.device.width().map(Length::m),
        height_m: size.device.height().map(Length::m),
        diameter_m: size.device.diameter().map(Length::m),
    }
}

fn area<'a>(sized: &Sized<'a, '_>, answer: &'a Answer<'_>) -> Area<'a> {
    let words = Words(sized.roof.system);
    let (why, bound) = match &answer.outcome {
        Outcome::Optimal(_) => (None, None),
        Outcome::Stopped { bound, .. } => (None, *bound),
        Outcome::Infeasible(why) => (Some(reasons::infeasible(sized, answer.area, why, words)), None),
    };
    let opened = sized.changes_of(answer.area);
    let found = answer.outcome.layouts();
    let cures = opened.filter(|_| found.is_empty());
    let layouts = found.iter().enumerate().map(|(index, ranked)| layout(sized, answer.area, index + 1, ranked));
    let strengthened = sized.structure.and_then(|(_, found)| {
        let weighed = sized.place(answer.area).and_then(|place| found.get(place))?;
        let found = weighed.as_ref().ok()?.as_ref()?;
        let raised = &found.stiffened.raised.roof;
        Some(Stiffened {
            load_limit_more_pa: found.stiffened.raise.pa(),
            strength_cost: found.stiffened.strength.amount(),
            cost: found.layout.cost.map(Money::amount),
            groups: found.layout.groups.iter().map(|placed| group(placed, raised, 0)).collect(),
        })
    });
    let book = &*sized.options.rules;
    let named = |rules: &[RuleAt]| rules.iter().map(|&at| rules::named_rule(book, at)).collect::<Vec<_>>();
    let weighed = sized.structure.and_then(|(_, found)| found.get(sized.place(answer.area)?));
    let stiffened_outcome = weighed.map(|weighed| match weighed {
        Ok(Some(_)) => "optimal",
        Ok(None) => "infeasible",
        Err(_) => "stopped",
    });
    Area {
        stiffened_outcome,
        stiffened: strengthened,
        name: &sized.roof.areas[answer.area].name,
        demand_m3_s: sized.roof.demands[answer.area].m3_per_s(),
        receives: cascade::receives(sized.roof, answer.area),
        outcome: words::outcome(&answer.outcome),
        why,
        bound: bound.map(bound_of),
        cures: cures.map(|opened| found_cures(opened, book)),
        contradiction: cures.map_or(Vec::new(), |opened| named(opened.conflict)),
        binds: opened.filter(|_| !found.is_empty()).map(|opened| found_cures(opened, book)),
        cures_nothing: cures
            .map_or(Vec::new(), |opened| opened.useless.iter().map(|change| super::cures::amount(change).0).collect()),
        ponding: ponding::of_area(&sized.roof.areas[answer.area]),
        framing_analysis: ponding::reasons(&sized.roof.areas[answer.area], words),
        layouts: layouts.collect(),
        front: sized
            .front_of(answer.area)
            .filter(|fronted| fronted.front.finished)
            .map(|fronted| front::rows(sized, fronted)),
        with_nothing_closed: with_nothing_closed(sized.roof, answer),
    }
}

fn bound_of(bound: Least) -> AtLeast {
    match bound {
        Least::Cost(cost) => AtLeast { of: "cost", at_least: cost.amount() },
        Least::Count(count) => AtLeast { of: "count", at_least: f64::from(count) },
        Least::Width(width) => AtLeast { of: "width_m", at_least: width.m() },
    }
}

fn layout<'a>(sized: &Sized<'a, '_>, area: usize, rank: usize, ranked: &'a Ranked<'_>) -> Layout<'a> {
    let words = Words(sized.roof.system);
    let mut remarks: Vec<String> =
        ranked.beyond.iter().map(|&(range, value)| marks::out_of_range(range, value, words)).collect();
    if ranked.chord > marks::CHORD_TOLD {
        remarks.push("straight lines between rated rows decide by more than 2 % of flow".into());
    }
    // The first layout under every law where that is asked for; else each under the laws of a thick wall.
    let asked = sized.laws_of(area);
    let others: &[UnderLaw] = asked.filter(|_| rank == 1).map_or(&ranked.thick_wall, |laws| laws);
    Layout {
        rank,
        cost: ranked.cost.map(crate::units::Money::amount),
        groups: groups(sized.roof, area, ranked),
        closed: closed(sized.roof, area, ranked),
        governing: governing(sized.roof, ranked),
        cases: cases(sized.roof, area, ranked),
        beyond_range: !ranked.beyond.is_empty(),
        straight_line_excess: ranked.chord,
        under_other_laws: others.iter().map(|under| under_law(sized, under)).collect(),
        notes: remarks,
        rule_sets: rules::of_sets(sized.roof, &sized.options.rules, area, ranked),
        rules: rules::of_layout_in_document(sized.roof, &sized.options.rules, area, ranked),
        made_to_measure: ranked.made.as_ref().map(|made| self::made(sized, area, ranked, made)),
    }
}

fn made<'a>(sized: &Sized<'a, '_>, area: usize, ranked: &Ranked<'_>, made: &'a Measured) -> Made<'a> {
    let fitted = match made {
        Measured::NoBetter => None,
        Measured::Fitted(fitted) => Some(made_layout(sized, area, fitted)),
    };
    let mut of_groups = ranked.groups.iter().filter_map(|placed| placed.group.size.made.as_ref());
    Made { rounded_up_to_m: of_groups.next().map(|made| made.round.m()), better_than_grid: fitted.is_some(), fitted }
}

/// A layout in widths of its own.
fn made_layout<'a>(sized: &Sized<'a, '_>, area: usize, fitted: &'a Fitted) -> MadeLayout<'a> {
    let layout = fitted.layout();
    MadeLayout {
        cost: layout.cost.map(Money::amount),
        saved: fitted.saved.map(Money::amount),
        narrower_m: fitted.narrower.m(),
        unrounded_widths_m: fitted.unrounded.iter().map(|width| width.m()).collect(),
        unrounded_cost: fitted.unrounded_cost.map(Money::amount),
        groups: layout.groups.iter().map(|placed| group(placed, sized.roof, area)).collect(),
        governing: governing(sized.roof, &layout),
        cases: cases(sized.roof, area, &layout),
        beyond_range: !layout.beyond.is_empty(),
        under_other_laws: layout.thick_wall.iter().map(|under| under_law(sized, under)).collect(),
    }
}

/// The groups of a layout, those that are there already marked.
pub(super) fn groups<'a>(roof: &Roof, area: usize, ranked: &Ranked<'a>) -> Vec<Group<'a>> {
    let added = ranked.added().len();
    let one = |(place, placed): (usize, &Placed<'a>)| Group { existing: place >= added, ..group(placed, roof, area) };
    ranked.groups.iter().enumerate().map(one).collect()
}

/// What a layout closes of what is there; none where all of that has to stay.
pub(super) fn closed<'a>(roof: &Roof, area: usize, ranked: &Ranked<'a>) -> Option<Closing<'a>> {
    let closed = ranked.closed.as_ref()?;
    let one = |&there: &crate::roof::layout::Group<'a>| {
        let placed = Placed { group: there, from: there.set_height, to: there.set_height };
        Group { existing: true, ..group(&placed, roof, area) }
    };
    Some(Closing { cost: closed.cost.amount(), groups: closed.groups.iter().map(one).collect() })
}

/// What keeping all that is there comes to, where the first layout closes some of it.
fn with_nothing_closed<'a>(roof: &'a Roof, answer: &'a Answer<'_>) -> Option<WithNothingClosed<'a>> {
    let keeping = answer.keeping.as_ref()?;
    let first = keeping.layouts().first();
    let outcome = match keeping {
        Outcome::Optimal(layouts) if layouts.is_empty() => "infeasible",
        keeping => words::outcome(keeping),
    };
    let groups = first.map_or(Vec::new(), |layout| groups(roof, answer.area, layout));
    Some(WithNothingClosed { outcome, cost: first.and_then(|layout| layout.cost).map(Money::amount), groups })
}

/// What governs a layout.
pub(super) fn governing<'a>(roof: &'a Roof, ranked: &Ranked<'_>) -> Governing<'a> {
    Governing {
        case: &roof.cases[ranked.case].name,
        limit: ranked.governing.map(|governing| governing.limit.name()),
        utilisation: ranked.governing.map(|governing| governing.utilisation),
    }
}

/// A layout in every case.
pub(super) fn cases<'a>(roof: &'a Roof, area: usize, ranked: &Ranked<'_>) -> Vec<Case<'a>> {
    let of_case = |(index, state): (usize, &CaseState)| {
        let limits = roof.situation(area, index).limits;
        Case {
            name: &roof.cases[index].name,
            demand_m3_s: state.demand.m3_per_s(),
            load_limit_pa: limits.load.map(crate::units::Load::pa),
            depth_limit_m: limits.depth.map(Length::m),
            parapet_m: roof.areas[area].parapet.height.map(Length::m),
            allowable_level_m: Some(ranked.allowed[index].m()).filter(|level| level.is_finite()),
            water_depth_m: state.water.map(|water| water.level.m()),
            far_end_level_m: state.water.and_then(|water| water.reach).map(|reach| reach.far_level.m()),
            deepest_m: state.water.map(|water| water.depth().m()),
            ponding_head_m: state.water.map(|water| roof.situation(area, index).ponding_head(water.level).m()),
            load_pa: state.water.map(|water| water.load.pa()),
            utilisation: state.water.map(|water| water.governing.utilisation),
            groups: state
                .groups
                .iter()
                .map(|stands| GroupState {
                    head_m: state.water.map(|_| stands.share.head.length().m()),
                    flow_m3_s: stands.share.flow().m3_per_s(),
                    working: stands.share.working,
                    regime: stands.share.each.regime.name(),
                    freeboard_m: stands.freeboard.map(Length::m),
                    backs_up_above_sill_m: stands.backs_up.map(Length::m),
                })
                .collect(),
        }
    };
    ranked.states.iter().enumerate().map(of_case).collect()
}

fn found_cures<'a>(opened: &'a Opened<'_>, book: &'a Rulebook) -> Vec<CureFound<'a>> {
    let found = |(cure, layout): &'a Opening<'_>| {
        let (change, amount) = super::cures::amount(&cure.change);
        let (groups, closed) = (groups(&cure.roof, 0, layout), closed(&cure.roof, 0, layout));
        let rules = match &cure.change {
            Relaxation::Rules(waived) => waived.iter().map(|&at| rules::named_rule(book, at)).collect(),
            _ => Vec::new(),
        };
        CureFound { change, amount, cost: layout.cost.map(Money::amount), groups, rules, closed }
    };
    opened.cures.iter().map(found).collect()
}

fn under_law<'a>(sized: &Sized<'a, '_>, under: &UnderLaw) -> Under<'a> {
    let case = |case: usize| sized.roof.cases[case].name.as_str();
    Under {
        law: under.law.name(),
        case: case(under.case),
        water_depth_m: under.water.map(|water| water.level.m()),
        load_pa: under.water.map(|water| water.load.pa()),
        utilisation: under.water.map(|water| water.governing.utilisation),
        breaks_in: under.breaks.map(case),
    }
}

pub(super) fn group<'a>(placed: &Placed<'a>, roof: &Roof, area: usize) -> Group<'a> {
    let (size, catchment) = (placed.group.size, &roof.areas[area]);
    let law = size.law_at(&roof.site(area, None));
    let round = size.device.kind() == Kind::PipeScupper;
    Group {
        device: &size.tag,
        kind: size.device.kind().name(),
        width_m: size.device.width().filter(|_| !round).map(Length::m),
        height_m: size.device.height().filter(|_| !round).map(Length::m),
        diameter_m: size.device.diameter().map(Length::m),
        count: placed.group.count,
        set_height_m: placed.group.set_height.m(),
        set_height_from_m: placed.from.m(),
        set_height_to_m: placed.to.m(),
        elevation_m: heights::elevation(catchment, placed.group.set_height).map(Length::m),
        above_roof_at_wall_m: heights::above_roof_at_wall(catchment, &placed.group).map(Length::m),
        law: law.name(),
        law_source: law.account(size.device.kind()).source,
        existing: false,
    }
}
