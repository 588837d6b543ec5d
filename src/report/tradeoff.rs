//! The report of `tradeoff`: least cost against the load limit, tread by tread, and the price of strength at which it pays.

use serde::Serialize;

use crate::search::{Cure, Opening, PlanAt, Ranked, Relaxation, Structure};
use crate::units::{Load, Money};

use super::page::{self, Block, Table};
use super::words::{self, Words, list};
use super::{Format, Traded, plain, written};

/// A tread: its raise, what it costs, the change, and its first layout.
struct Tread<'a> {
    raise: Load,
    cost: Money,
    changed: &'a Cure,
    layout: &'a Ranked<'a>,
}

/// The treads whose layout has a price: all of them, as the walk asks for the least cost.
fn treads<'a>(opened: &'a [Opening<'a>]) -> Vec<Tread<'a>> {
    let tread = |(changed, layout): &'a Opening<'a>| match changed.change {
        Relaxation::Load(raise) => Some(Tread { raise, cost: layout.cost?, changed, layout }),
        _ => None,
    };
    opened.iter().filter_map(tread).collect()
}

pub(super) fn write(traded: &Traded<'_>, format: Format, width: usize) -> String {
    match format {
        Format::Table => page::text(&blocks(traded), width),
        Format::Markdown => page::markdown(&blocks(traded)),
        Format::Json => json(traded),
        Format::Csv => csv(traded),
    }
}

/// The cost at no raise: that of the last of rising raises that is not above zero.
fn as_given<C: Copy>(costs: impl Iterator<Item = (Load, C)>) -> Option<C> {
    costs.take_while(|(raise, _)| raise.pa() <= 1e-9).last().map(|(_, cost)| cost)
}

/// A cost beside the one as given: `- 410`, `+ 1,200`, `0`.
fn against(cost: Money, given: Option<Money>) -> String {
    let Some(given) = given else { return "-".into() };
    let more = cost.millionths() - given.millionths();
    let amount = words::money(Money::from_millionths(more.abs()));
    match more {
        0 => "0".into(),
        1.. => format!("+ {amount}"),
        _ => format!("- {amount}"),
    }
}

/// The price of strength under which a raise pays: what it saves for each unit of roof and of load.
fn pays_under(cost: Money, given: Option<Money>, raise: Load, ground: f64, words: Words) -> Option<f64> {
    let saved = given?.amount() - cost.amount();
    let pays = saved / (ground * words.in_load_unit(raise));
    (raise.pa() > 1e-9 && saved > 0.0).then_some(pays)
}

fn blocks(traded: &Traded<'_>) -> Vec<Block> {
    let words = Words(traded.roof.system);
    let step = traded.structure.and_then(|structure| structure.step);
    let steps = step.map_or(String::new(), |step| format!(", in the structure's steps of {},", words.given_load(step)));
    let mut blocks = vec![
        Block::Title(format!("{}: openings against strength", traded.roof.title)),
        Block::Text(format!(
            "The load limits of all cases are raised alike, from {} to {}; depth limits and all else stay. A row is the least \
             raise{steps} from which a layout so cheap exists; the first may reach lower. A raise pays where strength costs \
             less than the last column says.",
            signed(traded.lowest, words),
            signed(traded.highest, words)
        )),
    ];
    for (area, opened) in &traded.areas {
        area_blocks(traded, *area, opened.as_deref(), words, &mut blocks);
    }
    if let Some(plans) = &traded.plans {
        plan_blocks(traded, plans.as_deref(), words, &mut blocks);
    }
    blocks.push(Block::Heading("Cautions".into()));
    blocks.push(Block::List(vec![
        "A load limit is the structure's: only its engineer can say whether and at what price it may be raised.".into(),
        "Ponding on flexible framing and all assumptions of `brimline size` apply; read its report before a layout is chosen."
            .into(),
        "This supports, and does not replace, the adopted code with its local amendments and the review of a licensed \
         professional."
            .into(),
    ]));
    blocks
}

fn signed(raise: Load, words: Words) -> String {
    if raise.pa() < 0.0 {
        format!("- {}", words.given_load(Load::from_pa(-raise.pa())))
    } else if raise.pa() > 0.0 {
        format!("+ {}", words.given_load(raise))
    } else {
        words.given_load(raise)
    }
}

fn area_blocks(
    traded: &Traded<'_>,
    area: usize,
    opened: Option<&[Opening<'_>]>,
    words: Words,
    blocks: &mut Vec<Block>,
) {
    let catchment = &traded.roof.areas[area];
    blocks.push(Block::Heading(catchment.name.clone()));
    let loads = traded.roof.cases.iter().zip(&catchment.limits);
    let loads: Vec<_> = loads
        .filter_map(|(case, limits)| Some(format!("{} in \"{}\"", words.given_load(limits.load?), case.name)))
        .collect();
    if loads.is_empty() {
        blocks.push(Block::Text("No load limit is given here: nothing to raise.".into()));
        return;
    }
    blocks.push(Block::Text(format!("Load limit as given: {}.", list(&loads))));
    let Some(opened) = opened else {
        blocks.push(Block::Text("The search was ended before the least costs here were known.".into()));
        return;
    };
    let treads = treads(opened);
    if treads.is_empty() {
        let text = format!("No layout, even with {}.", signed(traded.highest, words));
        blocks.push(Block::Text(text));
        return;
    }
    let given = as_given(treads.iter().map(|tread| (tread.raise, tread.cost)));
    if given.is_none() {
        blocks.push(Block::Text("No layout holds the limit as given.".into()));
    }
    let ground = if words.us() { catchment.area.to_ft2() } else { catchment.area.m2() };
    let column = |tell: &dyn Fn(&Tread<'_>) -> String| treads.iter().map(tell).collect::<Vec<_>>();
    let pays = |tread: &Tread<'_>| pays_under(tread.cost, given, tread.raise, ground, words);
    let most = treads.iter().filter_map(|tread| Some((tread, pays(tread)?)));
    if let Some((tread, price)) = most.max_by(|a, b| a.1.total_cmp(&b.1)) {
        blocks.push(Block::Text(format!(
            "A raise buys most for its size at {}: it saves {}, and pays if strength costs less than {} for each {} and {}.",
            signed(tread.raise, words),
            against(tread.cost, given).trim_start_matches("- "),
            words::grouped(price, 4),
            ground_unit(words),
            words.load_unit()
        )));
    } else if given.is_some() {
        blocks.push(Block::Text(format!("No raise up to {} saves anything.", signed(traded.highest, words))));
    }
    let mut columns = vec![
        (format!("raise {}", words.load_unit()), true, column(&|tread| raise(tread.raise, words))),
        ("cost".into(), true, column(&|tread| words::money(tread.cost))),
    ];
    if let Some(structure) = traded.structure {
        let strength = |tread: &Tread<'_>| structure.cost(catchment.area, tread.raise);
        let total = |tread: &Tread<'_>| [tread.cost, strength(tread)].into_iter().sum();
        if let Some((tread, total)) = super::structure::cheapest(opened, structure, catchment.area) {
            blocks.push(Block::Text(best(tread, total, given, structure, words)));
        }
        columns.push(("strength".into(), true, column(&|tread| words::money(strength(tread)))));
        columns.push(("in all".into(), true, column(&|tread| words::money(total(tread)))));
    } else {
        columns.push(("against given".into(), true, column(&|tread| against(tread.cost, given))));
    }
    columns.push(("layout".into(), false, column(&|tread| words.layout(tread.layout))));
    columns.push((per(words), true, column(&|tread| pays(tread).map_or("-".into(), |price| words::grouped(price, 4)))));
    blocks.push(Block::Table(Table::of(columns)));
}

/// Where openings and strength together cost least.
fn best((changed, _): &Opening<'_>, total: Money, given: Option<Money>, structure: &Structure, words: Words) -> String {
    let Relaxation::Load(raise) = changed.change else { return String::new() };
    let price = super::structure::price(structure, words);
    if raise == Load::ZERO {
        return format!("At {price} no raise pays.");
    }
    let less = given.map_or(String::new(), |given| {
        let less = Money::from_millionths(given.millionths() - total.millionths());
        format!(", {} less than as given", words::money(less))
    });
    format!(
        "At {price} openings and strength together cost least at {}: {} in all{less}.",
        signed(raise, words),
        words::money(total)
    )
}

/// Head of the column of what strength may cost.
fn per(words: Words) -> String {
    format!("pays under, per {} and {}", ground_unit(words), words.load_unit())
}

fn ground_unit(words: Words) -> &'static str {
    if words.us() { "ft2" } else { "m2" }
}

fn raise(raise: Load, words: Words) -> String {
    // As fine as the steps of an area's treads.
    words::grouped(words.in_load_unit(raise), if words.us() { 2 } else { 3 })
}

fn plan_blocks(traded: &Traded<'_>, plans: Option<&[PlanAt]>, words: Words, blocks: &mut Vec<Block>) {
    blocks.push(Block::Heading("The whole roof".into()));
    let Some(plans) = plans else {
        blocks.push(Block::Text("No plan: a device that may stand on the roof has no price.".into()));
        return;
    };
    let given = as_given(plans.iter().map(|plan| (plan.raise, plan.cost))).flatten();
    let ground = traded.areas.iter().map(|(area, _)| traded.roof.areas[*area].area);
    let ground: f64 = ground.map(|area| if words.us() { area.to_ft2() } else { area.m2() }).sum();
    let column = |tell: &dyn Fn(&PlanAt) -> String| plans.iter().map(tell).collect::<Vec<_>>();
    let names = |plan: &PlanAt| match &plan.sizes[..] {
        [] if !plan.finished => "not known: the search was ended".into(),
        [] => "no plan".into(),
        sizes => list(&sizes.iter().map(|size| words.name(size)).collect::<Vec<_>>()),
    };
    let pays = |plan: &PlanAt| pays_under(plan.cost?, given, plan.raise, ground, words);
    blocks.push(Block::Text(
        "Every area's load limit raised alike, and the cheapest plan of few sizes at each step.".into(),
    ));
    blocks.push(Block::Table(Table::of(vec![
        (format!("raise {}", words.load_unit()), true, column(&|plan| raise(plan.raise, words))),
        ("cost".into(), true, column(&|plan| plan.cost.map_or("-".into(), words::money))),
        ("against given".into(), true, column(&|plan| plan.cost.map_or("-".into(), |cost| against(cost, given)))),
        ("sizes".into(), false, column(&names)),
        (per(words), true, column(&|plan| pays(plan).map_or("-".into(), |price| words::grouped(price, 4)))),
    ])));
}

fn csv(traded: &Traded<'_>) -> String {
    let words = Words(traded.roof.system);
    let unit = words.load_unit().to_lowercase();
    let mut rows = vec![vec!["area".to_string(), format!("raise_{unit}"), "cost".into(), "layout".into()]];
    let row = |area: &str, raise: Load, cost: Option<Money>, layout: String| {
        let cost = cost.map_or(String::new(), |cost| plain(cost.amount(), 2));
        vec![area.to_string(), plain(words.in_load_unit(raise), 4), cost, layout]
    };
    for (area, opened) in &traded.areas {
        let name = &traded.roof.areas[*area].name;
        rows.extend(
            treads(opened.as_deref().unwrap_or_default())
                .iter()
                .map(|tread| row(name, tread.raise, Some(tread.cost), words.layout(tread.layout))),
        );
    }
    for plan in traded.plans.iter().flatten().flatten() {
        let sizes: Vec<_> = plan.sizes.iter().map(|size| words.name(size)).collect();
        rows.push(row("whole roof", plan.raise, plan.cost, list(&sizes)));
    }
    written(&rows)
}

#[derive(Serialize)]
struct Document<'a> {
    format: &'static str,
    title: &'a str,
    areas: Vec<OfArea<'a>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    plan: Option<Vec<OfPlan>>,
}

#[derive(Serialize)]
struct OfArea<'a> {
    name: &'a str,
    outcome: &'static str,
    treads: Vec<OfTread>,
}

#[derive(Serialize)]
struct OfTread {
    load_limit_more_pa: f64,
    load_limits_pa: Vec<Option<f64>>,
    cost: f64,
    #[serde(skip_serializing_if = "Option::is_none")]
    strength_cost: Option<f64>,
    layout: String,
}

#[derive(Serialize)]
struct OfPlan {
    load_limit_more_pa: f64,
    cost: Option<f64>,
    sizes: Vec<String>,
}

fn json<'a>(traded: &'a Traded<'_>) -> String {
    let words = Words(traded.roof.system);
    let tread = |area: usize, tread: &Tread<'_>| OfTread {
        strength_cost: traded
            .structure
            .map(|structure| structure.cost(traded.roof.areas[area].area, tread.raise).amount()),
        load_limit_more_pa: tread.raise.pa(),
        load_limits_pa: tread.changed.roof.areas[0].limits.iter().map(|limits| limits.load.map(Load::pa)).collect(),
        cost: tread.cost.amount(),
        layout: words.layout(tread.layout),
    };
    let area = |(area, opened): &'a (usize, Option<Vec<Opening<'_>>>)| OfArea {
        name: &traded.roof.areas[*area].name,
        outcome: if opened.is_some() { "optimal" } else { "stopped" },
        treads: treads(opened.as_deref().unwrap_or_default()).iter().map(|one| tread(*area, one)).collect(),
    };
    let plan = |plan: &PlanAt| OfPlan {
        load_limit_more_pa: plan.raise.pa(),
        cost: plan.cost.map(Money::amount),
        sizes: plan.sizes.iter().map(|size| words.name(size)).collect(),
    };
    let document = Document {
        format: "brimline tradeoff 1",
        title: &traded.roof.title,
        areas: traded.areas.iter().map(area).collect(),
        plan: traded.plans.as_ref().map(|plans| plans.iter().flatten().map(plan).collect()),
    };
    let mut text = serde_json::to_string_pretty(&document).unwrap_or_default();
    text.push('\n');
    text
}
