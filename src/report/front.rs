//! What is not beaten in all of cost, load, count and width: layouts of an area, plans of the roof, each against the first.

use crate::device::Place;
use crate::roof::Roof;
use crate::roof::layout::Group;
use crate::search::{PlanFront, Ranked, Unbeaten, UnbeatenPlan};
use crate::units::{Length, Load, Money};

use super::page::{Block, Table};
use super::words::{self, Words, list};
use super::{Fronted, Sized, marks};

/// Rows that a table shows; JSON and CSV have all.
pub const FRONT_ROWS: usize = 20;

/// Said where the list would not be true.
const ENDED: &str =
    "The search was ended before it was known what is not beaten in all of cost, load, count and width.";

/// What a row is compared by.
#[derive(Clone, Copy)]
struct Compared {
    cost: Option<Money>,
    load: Load,
    count: u32,
    width: Length,
}

impl From<&Unbeaten<'_>> for Compared {
    fn from(row: &Unbeaten<'_>) -> Self {
        Self { cost: row.cost, load: row.load, count: row.count, width: row.width }
    }
}

impl From<&UnbeatenPlan<'_>> for Compared {
    fn from(row: &UnbeatenPlan<'_>) -> Self {
        Self { cost: Some(row.cost), load: row.load, count: row.count, width: row.width }
    }
}

/// The layouts of an area that are not beaten.
pub(super) fn area(sized: &Sized<'_, '_>, fronted: &Fronted<'_>, words: Words, blocks: &mut Vec<Block>) {
    if !fronted.front.finished {
        blocks.push(Block::Text(ENDED.into()));
        return;
    }
    let rows = &fronted.front.rows[..fronted.front.rows.len().min(FRONT_ROWS)];
    let shown = &fronted.opened[..fronted.opened.len().min(FRONT_ROWS)];
    let Some(first) = rows.first() else { return };
    let noun = noun(rows.iter().flat_map(|row| &row.groups));
    let place = |row: &Unbeaten<'_>| case(sized.roof, row.case);
    let said = |row: &Unbeaten<'_>| against(&first.into(), &row.into(), noun, &place(row), words);
    let shared = shared_height(rows);
    let layout = |(row, layout): (&Unbeaten<'_>, &Ranked<'_>)| {
        let text = if shared.is_some() { words.sizes(&row.groups) } else { words.groups(&row.groups) };
        text + &marks::marks_of(layout)
    };
    let mut columns = vec![("layout".into(), false, rows.iter().zip(shown).map(layout).collect())];
    columns.extend(figures(rows, words));
    columns.push((head(first.cost), false, told(rows, first.cost, &place, &said)));
    blocks.push(Block::Text(title(fronted.front.rows.len(), "layout", first.cost)));
    blocks.push(Block::Table(Table::of(columns)));
    let mut under: Vec<String> = Vec::new();
    under.extend(more(fronted.front.rows.len(), "CSV and JSON"));
    under.extend(shared.map(|height| format!("All of these stand at {}.", words.size(height))));
    under.extend(thick_walls(shown));
    if !under.is_empty() {
        blocks.push(Block::Text(under.join(" ")));
    }
    blocks.extend(marks::marks(&shown.iter().collect::<Vec<_>>(), words).into_iter().map(Block::Text));
}

/// The plans of the sizes of the cheapest that are not beaten.
pub(super) fn plans(sized: &Sized<'_, '_>, front: &PlanFront<'_>, sizes: &str, words: Words, blocks: &mut Vec<Block>) {
    if matches!(front, PlanFront::Stopped) {
        blocks.push(Block::Text(ENDED.into()));
        return;
    }
    let PlanFront::Finished(all) = front else {
        blocks.push(Block::Text(format!(
            "The plans that are not beaten in all of cost, load, count and width were not all found: more than {} have to be \
             kept, or its sizes make too many sets. Ask for fewer sizes, a lesser greatest count or fewer areas.",
            words::grouped(PlanFront::MOST as f64, 0)
        )));
        return;
    };
    let rows = &all[..all.len().min(FRONT_ROWS)];
    let Some(first) = rows.first() else { return };
    let noun = noun(rows.iter().flat_map(|row| row.layouts.iter().flatten()));
    let place = |row: &UnbeatenPlan<'_>| {
        format!(" in {}{}", sized.roof.areas[row.area].name, case(sized.roof, row.case).replace(" in ", ", "))
    };
    let said = |row: &UnbeatenPlan<'_>| against(&first.into(), &row.into(), noun, &place(row), words);
    let numbers = (1..=rows.len()).map(|row| row.to_string()).collect();
    let mut columns = vec![("plan".to_string(), true, numbers)];
    columns.extend(figures(rows, words));
    columns.push((head(Some(first.cost)), false, told(rows, Some(first.cost), &place, &said)));
    let title = title(all.len(), "plan", Some(first.cost));
    blocks.push(Block::Text(format!("{title} They are made of the sizes of the cheapest plan alone: {sizes}.")));
    blocks.push(Block::Table(Table::of(columns)));
    blocks.extend(more(all.len(), "JSON").map(Block::Text));
    if rows.len() > 1 {
        blocks.push(Block::Text("What differs from the cheapest plan:".into()));
        let line = |(index, row)| format!("{}: {}", index + 1, changed(sized, first, row, words));
        blocks.push(Block::List(rows.iter().enumerate().skip(1).map(line).collect()));
    }
}

fn title(count: usize, what: &str, cost: Option<Money>) -> String {
    let (four, left_out) = match cost {
        Some(_) => ("cost, load, count and width", ""),
        None => ("load, count and width", " Cost is left out: a device that may stand here has no price."),
    };
    let several = if count == 1 { "" } else { "s" };
    format!("Not beaten in all of {four}: {} {what}{several}.{left_out}", words::grouped(count as f64, 0))
}

fn head(cost: Option<Money>) -> String {
    if cost.is_some() { "against the cheapest".into() } else { "against the narrowest".into() }
}

fn more(count: usize, forms: &str) -> Option<String> {
    let left = count.checked_sub(FRONT_ROWS).filter(|&left| left > 0)?;
    let left = words::grouped(left as f64, 0);
    Some(format!("{left} more, in the same order, stand in {forms}."))
}

/// The set height of all groups of all rows, where it is one.
fn shared_height(rows: &[Unbeaten<'_>]) -> Option<Length> {
    let mut heights = rows.iter().flat_map(|row| &row.groups).map(|group| group.set_height);
    let first = heights.next()?;
    heights.all(|height| height.nm() == first.nm()).then_some(first)
}

/// How many rows break a limit under a law of a thick wall, where the thickness is given.
fn thick_walls(shown: &[Ranked<'_>]) -> Option<String> {
    let breaks = |layout: &&Ranked<'_>| layout.thick_wall.iter().any(|under| under.breaks.is_some());
    let broken = shown.iter().filter(breaks).count();
    let of = if broken == shown.len() { "All".into() } else { format!("{broken} of the {}", shown.len()) };
    (broken > 0).then(|| format!("{of} shown pass a limit under a law of a thick wall."))
}

/// Columns of what rows are compared by: cost where it counts, worst load, devices, width.
fn figures<R>(rows: &[R], words: Words) -> Vec<(String, bool, Vec<String>)>
where
    for<'a> &'a R: Into<Compared>,
{
    let cells = |cell: &dyn Fn(Compared) -> String| rows.iter().map(|row| cell(row.into())).collect::<Vec<_>>();
    let cost = cells(&|row| row.cost.map_or("-".into(), words::money));
    let mut columns = vec![
        (format!("worst {}", words.load_unit()), true, cells(&|row| words.bare_load(row.load))),
        ("count".into(), true, cells(&|row| row.count.to_string())),
        (format!("width {}", words.small_unit()), true, cells(&|row| words.bare_size(row.width))),
    ];
    if cost.iter().any(|cost| cost != "-") {
        columns.insert(0, ("cost".into(), true, cost));
    }
    columns
}

/// What each row gives and takes against the first; of the first where its worst load stands.
fn told<R>(rows: &[R], cost: Option<Money>, place: &dyn Fn(&R) -> String, said: &dyn Fn(&R) -> String) -> Vec<String> {
    let first = if cost.is_some() { "the cheapest" } else { "the narrowest" };
    let tell = |(index, row): (usize, &R)| match place(row) {
        _ if index > 0 => said(row),
        place if place.is_empty() => first.to_string(),
        place => format!("{first}, worst{place}"),
    };
    rows.iter().enumerate().map(tell).collect()
}

/// The case of a worst load, where there are several.
fn case(roof: &Roof, case: usize) -> String {
    if roof.cases.len() > 1 { format!(" in \"{}\"", roof.cases[case].name) } else { String::new() }
}

/// What devices are called.
#[derive(Clone, Copy)]
struct Noun {
    one: &'static str,
    many: &'static str,
}

/// Openings where all stand in the parapet, else devices.
fn noun<'a, 'r: 'a>(mut groups: impl Iterator<Item = &'a Group<'r>>) -> Noun {
    if groups.all(|group| group.size.place == Place::Edge) {
        Noun { one: "opening", many: "openings" }
    } else {
        Noun { one: "device", many: "devices" }
    }
}

/// What a row gives and takes against another, in words; `place` says where its worst load stands.
fn against(first: &Compared, row: &Compared, noun: Noun, place: &str, words: Words) -> String {
    let parts = [
        counted(first.count, row.count, noun),
        wider(first.width, row.width, words),
        loaded(first.load, row.load, place, words),
        dearer(first.cost, row.cost),
    ];
    parts.into_iter().flatten().collect::<Vec<_>>().join(", ")
}

fn counted(first: u32, row: u32, noun: Noun) -> Option<String> {
    let (many, way) = (row.abs_diff(first), if row > first { "more" } else { "fewer" });
    match many {
        0 => None,
        1 => Some(format!("one {way} {}", noun.one)),
        many => Some(format!("{many} {way} {}", noun.many)),
    }
}

fn wider(first: Length, row: Length, words: Words) -> Option<String> {
    let difference = row.nm() - first.nm();
    let way = if difference > 0 { "more" } else { "less" };
    (difference != 0).then(|| format!("{} {way} width", words.size(Length::from_nm(difference.abs()))))
}

/// A difference in load; one too small for the figures shown is said to be that.
fn loaded(first: Load, row: Load, place: &str, words: Words) -> Option<String> {
    let way = if row > first { "higher" } else { "lower" };
    // A nanometre of water weighs 1e-5 Pa; under half of that two loads are one.
    if (row.pa() - first.pa()).abs() < 5e-6 {
        return None;
    }
    // The difference of the figures that stand beside it.
    let decimals = words.load_decimals();
    let steps = |load: Load| words::grouped(words.in_load_unit(load), decimals).replace([',', '.'], "");
    let steps = |load: Load| steps(load).parse::<i64>().unwrap_or(0);
    let step = 0.1_f64.powi(i32::try_from(decimals).unwrap_or(0));
    let (under, many) = match (steps(row) - steps(first)).abs() {
        0 => ("under ", 1),
        many => ("", many),
    };
    let shown = words::grouped(many as f64 * step, decimals);
    Some(format!("{under}{shown} {} {way}{place}", words.load_unit()))
}

fn dearer(first: Option<Money>, row: Option<Money>) -> Option<String> {
    let more = row?.millionths() - first?.millionths();
    Some(if more == 0 {
        "at the same cost".into()
    } else {
        format!("{} more", words::money(Money::from_millionths(more)))
    })
}

/// The layouts of a plan that differ from those of the first, each with its areas.
fn changed(sized: &Sized<'_, '_>, first: &UnbeatenPlan<'_>, row: &UnbeatenPlan<'_>, words: Words) -> String {
    let mut layouts: Vec<(String, Vec<&str>)> = Vec::new();
    for (answer, (before, layout)) in sized.answers.iter().zip(first.layouts.iter().zip(&row.layouts)) {
        let (before, layout) = (words.groups(before), words.groups(layout));
        if before == layout {
            continue;
        }
        let name = sized.roof.areas[answer.area].name.as_str();
        match layouts.iter_mut().find(|(known, _)| *known == layout) {
            Some((_, areas)) => areas.push(name),
            None => layouts.push((layout, vec![name])),
        }
    }
    let told = |(layout, areas): &(String, Vec<&str>)| format!("{layout} on {}", list(areas));
    layouts.iter().map(told).collect::<Vec<_>>().join("; ")
}

/// The greatest load of a layout over the cases and the first case in which it stands; none where it is overwhelmed.
pub(super) fn worst(layout: &Ranked<'_>) -> Option<(Load, usize)> {
    let loads = layout.states.iter().map(|state| state.water.map(|water| water.load));
    let loads = loads.collect::<Option<Vec<_>>>()?;
    let most = loads.iter().copied().fold(Load::ZERO, Load::max);
    loads.iter().position(|&load| load == most).map(|case| (most, case))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::units::System;

    const OPENINGS: Noun = Noun { one: "opening", many: "openings" };

    fn row(cost: f64, psf: f64, count: u32, inches: f64) -> Compared {
        Compared { cost: Some(Money::nearest(cost)), load: Load::psf(psf), count, width: Length::inches(inches) }
    }

    #[test]
    fn gains_and_losses_in_words() {
        let us = Words(System::Us);
        let said = |other: &Compared| against(&row(2000.0, 30.0, 3, 48.0), other, OPENINGS, " in \"one blocked\"", us);
        assert_eq!(
            said(&row(2410.0, 27.9, 4, 60.0)),
            "one more opening, 12 in more width, 2.1 psf lower in \"one blocked\", 410 more"
        );
        assert_eq!(
            said(&row(2000.0, 31.0, 1, 40.5)),
            "2 fewer openings, 7.5 in less width, 1.0 psf higher in \"one blocked\", at the same cost"
        );
        assert_eq!(said(&row(2000.5, 29.97, 3, 48.0)), "under 0.1 psf lower in \"one blocked\", 0.50 more");
        let unpriced = |one: &Compared| Compared { cost: None, ..*one };
        let (first, other) = (unpriced(&row(1.0, 30.0, 2, 24.0)), unpriced(&row(1.0, 30.0, 1, 30.0)));
        assert_eq!(against(&first, &other, OPENINGS, "", Words(System::Si)), "one fewer opening, 152.4 mm more width");
    }
}
