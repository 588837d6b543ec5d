//! What would cure an area without a layout, each change with the first layout that it opens.

use crate::roof::load_of;
use crate::rules::Rulebook;
use crate::search::{Cure, Opened, Opening, Ranked, Relaxation};
use crate::units::{Length, Money};

use super::page::Block;
use super::rules;
use super::words::{self, Words, list, trimmed};

pub(super) fn blocks(opened: &Opened<'_>, book: &Rulebook, words: Words) -> Vec<Block> {
    let mut blocks = Vec::new();
    blocks.extend(rules::contradiction(book, opened.conflict, words).map(Block::Text));
    if let [(_, first), ..] = &opened.cures[..] {
        let order = if first.cost.is_some() { ", the cheapest openings first" } else { "" };
        blocks.push(Block::Text(format!("Any one of these would cure it, the least of each kind{order}:")));
        blocks.push(Block::List(opened.cures.iter().map(|(cure, layout)| line(cure, layout, book, words)).collect()));
    }
    if !opened.useless.is_empty() {
        blocks.push(Block::Text(format!("No cure was found in {} alone.", kinds(opened.useless))));
    }
    blocks.extend(stopped(opened));
    blocks
}

/// What the least cost binds on: the single changes that save, the greatest saving first.
pub(super) fn binding(opened: &Opened<'_>, book: &Rulebook, words: Words) -> Vec<Block> {
    let mut blocks = Vec::new();
    let saved = |layout: &Ranked<'_>| {
        let (now, then) = (opened.now?.millionths(), layout.cost?.millionths());
        Some(words::money(Money::from_millionths(now - then)))
    };
    let line = |(cure, layout): &Opening<'_>| {
        let saved = saved(layout).map_or(String::new(), |saved| format!("{saved} less with "));
        format!("{saved}{}: {}", change(cure, layout, book, words), priced_layout(cure, layout, words))
    };
    if !opened.cures.is_empty() {
        blocks
            .push(Block::Text("What binds: one change of moderate size at a time, the greatest saving first:".into()));
        blocks.push(Block::List(opened.cures.iter().map(line).collect()));
    }
    if !opened.useless.is_empty() {
        blocks.push(Block::Text(format!("Nothing is saved by {} alone.", kinds(opened.useless))));
    }
    blocks.extend(stopped(opened));
    blocks
}

fn stopped(opened: &Opened<'_>) -> Option<Block> {
    opened.stopped.then(|| Block::Text("The search was ended: other changes may help as well.".into()))
}

/// Kinds of change as alternatives.
fn kinds(changes: &[Relaxation]) -> String {
    let kinds: Vec<_> = changes.iter().map(|change| bare(change)).collect();
    kinds.split_last().map_or(String::new(), |(last, others)| match others {
        [] => (*last).to_string(),
        others => format!("{} or {last}", others.join(", ")),
    })
}

fn line(cure: &Cure, layout: &Ranked<'_>, book: &Rulebook, words: Words) -> String {
    format!("{}: {}", change(cure, layout, book, words), priced_layout(cure, layout, words))
}

fn priced_layout(cure: &Cure, layout: &Ranked<'_>, words: Words) -> String {
    let cost = layout.cost.map_or(String::new(), |cost| format!(", {}", priced(&cure.change, cost)));
    format!("{}{cost}", words.layout(layout))
}

/// A cost; of openings that no catalog has, what those they replace would cost.
fn priced(change: &Relaxation, cost: Money) -> String {
    match change {
        Relaxation::Width(_) | Relaxation::Height(_) => format!("at least {}", words::money(cost)),
        _ => words::money(cost),
    }
}

/// The change in words, with what it leads to.
fn change(cure: &Cure, layout: &Ranked<'_>, book: &Rulebook, words: Words) -> String {
    let limits = &cure.roof.areas[0].limits;
    let depths = || listed(limits.iter().filter_map(|limits| limits.depth).map(|depth| words.size(depth)));
    match cure.change {
        Relaxation::Load(more) => format!("load limit + {}, to {}", words.given_load(more), loads(cure, words)),
        Relaxation::Depth(more) => format!("depth limit + {}, to {}", words.size(more), depths()),
        Relaxation::Limits(more) => {
            format!("both limits + {} of water ({})", words.size(more), words.load(load_of(more)))
        }
        Relaxation::Sill(less) => {
            let low = layout.groups.iter().any(|placed| placed.from < Length::mm(50.0));
            let caution = if low { ", low: check the least set height of the code" } else { "" };
            format!("sills - {}{caution}", words.size(less))
        }
        Relaxation::Devices(more) => format!("{more} more {}", if more == 1 { "device" } else { "devices" }),
        Relaxation::Groups(more) => {
            format!("{more} more {} of size in a layout", if more == 1 { "kind" } else { "kinds" })
        }
        Relaxation::Width(more) => format!("openings {} wider than the catalogs have", words.size(more)),
        Relaxation::Height(more) => format!("openings {} higher than the catalogs have", words.size(more)),
        Relaxation::Edge(more) => format!("edge + {}", words.long(more)),
        Relaxation::Freeboard(less) => format!("freeboard - {}", words.size(less)),
        Relaxation::Demand(factor) => {
            format!("demand - {} %, to {}", trimmed((1.0 - factor) * 100.0, 1), words.flow(cure.roof.demands[0]))
        }
        Relaxation::Rules(ref waived) => {
            let waived: Vec<String> = waived.iter().map(|&at| rules::named(book, at, words)).collect();
            format!("without {}", list(&waived))
        }
    }
}

/// The load limits of an area so changed.
pub(super) fn loads(cure: &Cure, words: Words) -> String {
    let limits = &cure.roof.areas[0].limits;
    listed(limits.iter().filter_map(|limits| limits.load).map(|load| words.given_load(load)))
}

/// Each text once, in the order of the first.
fn listed(texts: impl Iterator<Item = String>) -> String {
    let mut unlike = Vec::new();
    for text in texts {
        if !unlike.contains(&text) {
            unlike.push(text);
        }
    }
    list(&unlike)
}

/// What a change is of, without its amount.
pub(super) fn bare(change: &Relaxation) -> &'static str {
    match change {
        Relaxation::Load(_) => "a greater load limit",
        Relaxation::Depth(_) => "a greater depth limit",
        Relaxation::Limits(_) => "both limits greater together",
        Relaxation::Sill(_) => "lower sills",
        Relaxation::Devices(_) => "more devices",
        Relaxation::Groups(_) => "more kinds of size in a layout",
        Relaxation::Width(_) => "wider openings",
        Relaxation::Height(_) => "higher openings",
        Relaxation::Edge(_) => "a longer edge",
        Relaxation::Freeboard(_) => "less freeboard",
        Relaxation::Demand(_) => "less demand",
        Relaxation::Rules(_) => "a rule less",
    }
}

/// The amount of a change in SI, with the key that JSON gives it.
pub(super) fn amount(change: &Relaxation) -> (&'static str, f64) {
    match *change {
        Relaxation::Load(more) => ("load_limit_more_pa", more.pa()),
        Relaxation::Depth(more) => ("depth_limit_more_m", more.m()),
        Relaxation::Limits(more) => ("limits_more_m", more.m()),
        Relaxation::Sill(less) => ("sill_less_m", less.m()),
        Relaxation::Devices(more) => ("devices_more", f64::from(more)),
        Relaxation::Groups(more) => ("groups_more", f64::from(more)),
        Relaxation::Width(more) => ("width_more_m", more.m()),
        Relaxation::Height(more) => ("height_more_m", more.m()),
        Relaxation::Edge(more) => ("edge_more_m", more.m()),
        Relaxation::Freeboard(less) => ("freeboard_less_m", less.m()),
        Relaxation::Demand(factor) => ("demand_factor", factor),
        Relaxation::Rules(ref waived) => ("rules_waived", waived.len() as f64),
    }
}
