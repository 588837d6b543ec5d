//! The plan of the whole roof: its cost, its sizes, each area's layout, and what one size fewer or more would cost.

use crate::device::Size;
use crate::search::{Criterion, Outcome, Plan, Plans, StiffenedArea};
use crate::units::Money;

use super::page::{Block, Table};
use super::words::{self, Words, list};
use super::{Asked, Sized, front};

pub(super) fn blocks(sized: &Sized<'_, '_>, asked: &Asked<'_, '_>, words: Words, blocks: &mut Vec<Block>) {
    let whole = sized.answers.len() == sized.roof.areas.len();
    blocks.push(Block::Heading(if whole { "The whole roof" } else { "The areas asked for together" }.into()));
    let Some(found) = asked.found else {
        blocks.push(Block::Text("No plan: a device that may stand on the roof has no price.".into()));
        return;
    };
    let Some((first, others)) = found.plans.split_first() else {
        blocks.push(Block::Text(none(sized, asked, found)));
        blocks.extend(by_sizes(found));
        blocks.extend(stronger(sized, asked, None, words));
        return;
    };
    blocks.push(Block::Text(told(asked, found, first, words)));
    blocks.push(Block::Table(areas(sized, first, words)));
    blocks.extend(by_sizes(found));
    if !others.is_empty() {
        blocks.push(Block::Text("The next plans, each with other sizes:".into()));
        let line = |plan: &Plan<'_>| {
            let more = Money::from_millionths(plan.cost.millionths() - first.cost.millionths());
            format!("{} ({} more): {}", words::money(plan.cost), words::money(more), sizes(plan, words))
        };
        blocks.push(Block::List(others.iter().map(line).collect()));
    }
    blocks.extend(stronger(sized, asked, Some(first), words));
    if let Some(front) = asked.front {
        front::plans(sized, front, &sizes(first, words), words, blocks);
    }
}

/// The plan where load limits may be raised and paid for, against the one at the limits as given.
fn stronger(sized: &Sized<'_, '_>, asked: &Asked<'_, '_>, given: Option<&Plan<'_>>, words: Words) -> Vec<Block> {
    let (Some(stiffened), Some((structure, _))) = (asked.stiffened, sized.structure) else { return Vec::new() };
    let price = super::structure::price(structure, words);
    let steps = words.given_load(structure.plan_step(sized.roof.system));
    if given.is_some_and(|given| stiffened.cost >= given.cost) {
        let text = format!("No raise of load limits in whole steps of {steps} makes the plan cheaper at {price}.");
        return vec![Block::Text(text)];
    }
    let against = given.map_or("the limits as given have no plan".into(), |given| {
        let less = Money::from_millionths(given.cost.millionths() - stiffened.cost.millionths());
        format!("{} less than at the limits as given", words::money(less))
    });
    let rows = || stiffened.areas.iter();
    let layout = |area: &StiffenedArea| {
        let groups = area.layout.groups();
        words.groups(&groups)
    };
    vec![
        Block::Text(format!(
            "With load limits raised where that pays, in whole steps of {steps} at {price}, the cheapest plan costs {}, {} of it strength ({against}): {}.",
            words::money(stiffened.cost),
            words::money(stiffened.strength),
            names(stiffened.sizes.iter(), words)
        )),
        Block::Table(Table::of(vec![
            ("area".into(), false, rows().map(|area| sized.roof.areas[area.layout.area].name.clone()).collect()),
            (
                format!("raise {}", words.load_unit()),
                true,
                rows().map(|area| words.bare_given_load(area.raise)).collect(),
            ),
            ("strength".into(), true, rows().map(|area| words::money(area.strength)).collect()),
            ("layout".into(), false, rows().map(layout).collect()),
            ("cost".into(), true, rows().map(|area| words::money(area.openings)).collect()),
        ])),
    ]
}

/// Why there is no plan: an area without any layout, or too few sizes for all areas together.
fn none(sized: &Sized<'_, '_>, asked: &Asked<'_, '_>, found: &Plans<'_>) -> String {
    if !found.finished {
        return "The search was ended before a plan was found: there may be some.".into();
    }
    let infeasible = sized.answers.iter().filter(|answer| matches!(answer.outcome, Outcome::Infeasible(_)));
    let without: Vec<&str> = infeasible.map(|answer| sized.roof.areas[answer.area].name.as_str()).collect();
    if without.is_empty() {
        let most = asked.asked.sizes.map_or(String::new(), |sizes| sizes.to_string());
        format!("No plan: each area has layouts, but no {most} sizes serve all of them.")
    } else {
        format!("No plan: {} without a layout.", list(&without))
    }
}

fn sizes(plan: &Plan<'_>, words: Words) -> String {
    names(plan.sizes.iter().copied(), words)
}

/// Sizes by their names; none where nothing is added to what is there already.
fn names<'s>(sizes: impl Iterator<Item = &'s Size>, words: Words) -> String {
    let names: Vec<_> = sizes.map(|size| words.name(size)).collect();
    if names.is_empty() { "nothing is added".into() } else { list(&names) }
}

fn told(asked: &Asked<'_, '_>, found: &Plans<'_>, plan: &Plan<'_>, words: Words) -> String {
    let price = asked.asked.size_price;
    let most = asked.asked.sizes.map_or("any number of sizes".into(), |sizes| format!("at most {sizes} sizes"));
    let count = plan.sizes.len();
    let priced = if price > Money::default() && count > 0 {
        format!(
            ", {} of it for {count} distinct {} at {}",
            words::money(price * u32::try_from(count).unwrap_or(0)),
            if count == 1 { "size" } else { "sizes" },
            words::money(price)
        )
    } else {
        String::new()
    };
    let alone = found.alone.map_or(String::new(), |alone| {
        format!(" Each area by itself, whatever its sizes, would cost {} in all.", words::money(alone))
    });
    let proven = match found.bound {
        _ if found.finished => " Proven: no other set of sizes costs less.".into(),
        Some(bound) => {
            format!(" The search was ended before that was proven: no plan costs less than {}.", words::money(bound))
        }
        None => " The search was ended before that was proven.".into(),
    };
    let which = if found.finished { "The cheapest plan" } else { "The best plan found" };
    format!("{which} with {most} costs {}{priced}: {}.{alone}{proven}", words::money(plan.cost), sizes(plan, words))
}

/// Each area with its layout in the plan and what the cheapest listed for it alone would cost.
fn areas(sized: &Sized<'_, '_>, plan: &Plan<'_>, words: Words) -> Table {
    let roof = sized.roof;
    let rows = || sized.answers.iter().zip(&plan.layouts);
    let alone = |outcome: &Outcome<'_>| outcome.layouts().iter().filter_map(|layout| layout.cost).min();
    let mut columns = vec![
        ("area".into(), false, rows().map(|(answer, _)| roof.areas[answer.area].name.clone()).collect()),
        ("layout".into(), false, rows().map(|(_, layout)| words.layout(layout)).collect()),
        ("cost".into(), true, rows().map(|(_, layout)| layout.cost.map_or("-".into(), words::money)).collect()),
        (
            "alone".into(),
            true,
            rows().map(|(answer, _)| alone(&answer.outcome).map_or("-".into(), words::money)).collect(),
        ),
        (
            "util.".into(),
            true,
            rows()
                .map(|(_, layout)| layout.governing.map_or("-".into(), |g| format!("{:.3}", g.utilisation)))
                .collect(),
        ),
        ("case".into(), false, rows().map(|(_, layout)| roof.cases[layout.case].name.clone()).collect()),
    ];
    // Another first criterion lists other layouts: the cheapest of the list is not the cheapest of all.
    if sized.options.rank_by.first() != Some(&Criterion::Cost) {
        columns.retain(|(head, _, _)| head != "alone");
    }
    Table::of(columns)
}

/// Least cost by the number of sizes allowed.
fn by_sizes(found: &Plans<'_>) -> Vec<Block> {
    if found.by_sizes.is_empty() {
        return Vec::new();
    }
    let cost = |cost: Option<Money>| cost.map_or("no plan".into(), words::money);
    let saved = |index: usize| match (
        index.checked_sub(1).and_then(|before| found.by_sizes[before].1),
        found.by_sizes[index].1,
    ) {
        (Some(before), Some(now)) => words::money(Money::from_millionths(before.millionths() - now.millionths())),
        _ => "-".into(),
    };
    let rows = || 0..found.by_sizes.len();
    vec![
        Block::Text("Least cost by the number of sizes allowed, the price of sizes included:".into()),
        Block::Table(Table::of(vec![
            ("sizes".into(), true, rows().map(|row| found.by_sizes[row].0.to_string()).collect()),
            ("cost".into(), true, rows().map(|row| cost(found.by_sizes[row].1)).collect()),
            ("less than the row above".into(), true, rows().map(saved).collect()),
        ])),
    ]
}
