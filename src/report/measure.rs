//! What the layouts of an area come to where their openings are made to measure: one line for each, under the ranking.

use crate::device::{Made, Size};
use crate::roof::Roof;
use crate::search::{Fitted, Measured, Ranked};
use crate::units::{Length, Money};

use super::page::Block;
use super::words::{self, Words, list};
use super::{Sized, beside, marks, work};

/// The lines of an area; none where nothing in its layouts is made to measure.
pub(super) fn blocks(sized: &Sized<'_, '_>, area: usize, layouts: &[Ranked<'_>], words: Words) -> Vec<Block> {
    let numbered = layouts.iter().enumerate().filter_map(|(index, layout)| Some((index + 1, layout.made.as_ref()?)));
    let (mut lines, mut kept) = (Vec::new(), Vec::new());
    for (rank, made) in numbered {
        match made {
            Measured::NoBetter => kept.push(rank.to_string()),
            Measured::Fitted(fitted) => lines.push(format!("{rank}: {}", in_words(sized, fitted, words))),
        }
    }
    if !kept.is_empty() {
        lines.push(format!("{}: no better than on the grid", list(&kept)));
    }
    let Some(made) = made_of(&sized.roof.sizes).next().filter(|_| !lines.is_empty()) else { return Vec::new() };
    let fitted: Vec<(usize, Ranked<'_>)> = fitted(layouts);
    let cheapest = cheapest(layouts).map_or(String::new(), |rank| format!("; the cheapest is now {rank}"));
    let title = format!("Made to measure, rounded up to {}{cheapest}:", words.size(made.1.round));
    let mut blocks = vec![Block::Text(title), Block::List(lines)];
    let all: Vec<&Ranked<'_>> = fitted.iter().map(|(_, layout)| layout).collect();
    blocks.extend(marks::marks(&all, words).into_iter().map(Block::Text));
    let named: Vec<_> = fitted.iter().map(|(rank, layout)| (rank.to_string(), layout)).collect();
    let thick = beside::thick_walls(sized.roof, area, &named, words);
    if !thick.is_empty() {
        blocks.push(Block::Text("Made to measure, under the laws of a thick wall:".into()));
        blocks.push(Block::List(thick));
    }
    blocks
}

/// The rank of the layout that costs least as measured, where that is another than the one that cost least on the grid.
fn cheapest(layouts: &[Ranked<'_>]) -> Option<usize> {
    let measured = |layout: &Ranked<'_>| match &layout.made {
        Some(Measured::Fitted(fitted)) => fitted.layout().cost,
        _ => layout.cost,
    };
    let least = |cost: &dyn Fn(&Ranked<'_>) -> Option<Money>| {
        let costs: Option<Vec<Money>> = layouts.iter().map(cost).collect();
        (1..).zip(costs?).min_by_key(|&(rank, cost)| (cost, rank)).map(|(rank, _)| rank)
    };
    let (now, before) = (least(&measured)?, least(&|layout| layout.cost)?);
    (now != before).then_some(now)
}

/// The arithmetic of a layout in widths of its own, where it has any.
pub(super) fn work(roof: &Roof, area: usize, layout: &Ranked<'_>, words: Words) -> Vec<Block> {
    let Some(Measured::Fitted(fitted)) = &layout.made else { return Vec::new() };
    let layout = fitted.layout();
    let title = format!("The same made to measure, {}:", words.layout(&layout));
    vec![Block::Text(title), Block::Lines(work::lines(roof, area, &layout, words))]
}

/// Layouts in widths of their own, with their ranks on the grid.
fn fitted<'a>(layouts: &'a [Ranked<'_>]) -> Vec<(usize, Ranked<'a>)> {
    let numbered = layouts.iter().enumerate();
    numbered
        .filter_map(|(index, layout)| match &layout.made {
            Some(Measured::Fitted(fitted)) => Some((index + 1, fitted.layout())),
            _ => None,
        })
        .collect()
}

/// A layout in widths of its own: what it saves, what it would be unrounded, and how near it comes to its limits.
fn in_words(sized: &Sized<'_, '_>, fitted: &Fitted, words: Words) -> String {
    let layout = fitted.layout();
    let better = match (layout.cost, fitted.saved) {
        (Some(cost), Some(saved)) => {
            format!(", {} ({} less than on the grid)", words::money(cost), words::money(saved))
        }
        _ => format!(" ({} narrower in all than on the grid)", words.size(fitted.narrower)),
    };
    let unrounded = match (&fitted.unrounded[..], fitted.unrounded_cost) {
        (&[width], _) => format!("; unrounded {} {}", words.width_up(width), words.small_unit()),
        (_, Some(cost)) => format!("; unrounded {}", words::money(cost)),
        (_, None) => String::new(),
    };
    format!(
        "{}{better}{unrounded}; {}set height {}",
        marks::marked(&layout, words),
        governing(sized, &layout, words),
        words.window(&layout.groups),
    )
}

/// The utilisation of the case that governs, with its water.
fn governing(sized: &Sized<'_, '_>, layout: &Ranked<'_>, words: Words) -> String {
    let (Some(governing), Some(water)) = (layout.governing, layout.states[layout.case].water) else {
        return String::new();
    };
    let (utilisation, case) = (governing.utilisation, &sized.roof.cases[layout.case].name);
    format!("util. {utilisation:.3} in \"{case}\" ({}, {}); ", words.depth(water.level), words.load(water.load))
}

/// What is made to measure: one size of each device, and how it is made.
fn made_of(sizes: &[Size]) -> impl Iterator<Item = (&Size, &Made)> {
    let mut told: Option<&Size> = None;
    sizes.iter().filter_map(move |size| {
        let new = told.is_none_or(|told| told.tag != size.tag);
        told = Some(size);
        Some((size, size.made.as_deref()?)).filter(|_| new)
    })
}

/// What is made to measure, in which widths, and the grid on which it is searched first.
pub(super) fn assumptions(roof: &Roof, plan: bool, words: Words) -> Vec<String> {
    let sizes = &roof.sizes;
    let mut lines: Vec<(String, Vec<&str>)> = Vec::new();
    for (size, made) in made_of(sizes) {
        let widths = any_width(made.from, made.to, words);
        let line =
            format!("made to measure, {widths}; layouts are searched over widths {} apart.", words.size(made.grid));
        match lines.iter_mut().find(|(known, _)| *known == line) {
            Some((_, tags)) => tags.push(&size.tag),
            None => lines.push((line, vec![&size.tag])),
        }
    }
    let plan = if plan { ", and so does the plan" } else { "" };
    let is = |tags: &[&str]| if tags.len() == 1 { "is" } else { "are" };
    let mut lines: Vec<String> =
        lines.iter().map(|(line, tags)| format!("{} {} {line}", list(tags), is(tags))).collect();
    if let Some((_, made)) = made_of(sizes).next() {
        lines.push(format!(
            "Each layout listed is then measured: counts, heights and other sizes stand, its widths are fitted to the cases and \
             rounded up to {}. The list keeps to the order of the grid{plan}; a layout that is not on it may come out cheaper still.",
            words.size(made.round)
        ));
    }
    lines
}

/// Devices that come in any width, for the list of a catalog.
pub(super) fn of_catalog(size: &Size, words: Words) -> Option<String> {
    let made = size.made.as_ref()?;
    Some(format!("made to measure, {}", any_width(made.from, made.to, words)))
}

fn any_width(from: Length, to: Length, words: Words) -> String {
    format!("any width from {} to {}", words.bare_size(from), words.size(to))
}
