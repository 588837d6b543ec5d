//! The ranked layouts as a schedule: CSV, one row for each group of each layout, in the units of the project: what is added,
//! what is there and stays, what is closed. A layout in widths made to measure follows the one of the grid, with its rank.

use crate::device::Kind;
use crate::search::{Answer, Measured, Outcome, Placed, Ranked};
use crate::units::Length;

use super::words::{self, Words};
use super::{Sized, front, plain, reasons, written};

pub(super) fn rows(sized: &Sized<'_, '_>) -> String {
    let words = Words(sized.roof.system);
    let (small, load) = (words.small_unit(), words.load_unit().to_lowercase());
    let head = [
        "area".to_string(),
        "outcome".into(),
        "rank".into(),
        "cost".into(),
        "device".into(),
        "kind".into(),
        format!("width_{small}"),
        format!("height_{small}"),
        format!("diameter_{small}"),
        "count".into(),
        format!("set_height_{small}"),
        format!("set_height_from_{small}"),
        format!("set_height_to_{small}"),
        "law".into(),
        "governing_case".into(),
        "governing_limit".into(),
        format!("water_depth_{small}"),
        format!("load_{load}"),
        "utilisation".into(),
        "beyond_range".into(),
        "why".into(),
    ];
    let compared = || format!("worst_load_{load},worst_case,devices,total_width_{small},list");
    let mut head = head.to_vec();
    if !sized.fronts.is_empty() {
        head.extend(compared().split(',').map(str::to_string));
    }
    let mut rows = vec![head.clone()];
    for answer in sized.answers {
        let area = &sized.roof.areas[answer.area].name;
        rows.extend(listed(sized, answer, answer.outcome.layouts(), "ranked", words));
        if let Some(fronted) = sized.front_of(answer.area) {
            rows.extend(listed(sized, answer, &fronted.opened, "front", words));
        }
        if answer.outcome.layouts().is_empty() {
            let mut row = vec![String::new(); head.len()];
            row[0].clone_from(area);
            row[1] = words::outcome(&answer.outcome).into();
            row[WHY] = match &answer.outcome {
                Outcome::Infeasible(why) => reasons::infeasible(sized, answer.area, why, words),
                Outcome::Optimal(_) | Outcome::Stopped { .. } => reasons::stopped(None, None, words),
            };
            rows.push(row);
        }
    }
    rows.extend(plan(sized, head.len(), words));
    written(&rows)
}

/// The cheapest plan behind the lists of the areas: each area's layout in it, in rows of that outcome.
fn plan(sized: &Sized<'_, '_>, columns: usize, words: Words) -> Vec<Vec<String>> {
    let plan = sized.plans.and_then(|asked| asked.found).and_then(|found| found.plans.first());
    let mut rows = Vec::new();
    for (answer, layout) in sized.answers.iter().zip(plan.iter().flat_map(|plan| &plan.layouts)) {
        for (place, placed) in layout.groups.iter().enumerate() {
            let outcome = if place < layout.added().len() { "plan" } else { "existing" };
            let mut row = row(sized, answer.area, outcome, 1, layout, placed, words);
            row.resize(columns, String::new());
            rows.push(row);
        }
    }
    rows
}

/// Place of the column that says why there is no layout.
const WHY: usize = 20;

/// The rows of a list of layouts; where layouts that are not beaten are listed too, with what those are compared by.
fn listed(
    sized: &Sized<'_, '_>,
    answer: &Answer<'_>,
    layouts: &[Ranked<'_>],
    list: &str,
    words: Words,
) -> Vec<Vec<String>> {
    let mut rows = Vec::new();
    for (index, layout) in layouts.iter().enumerate() {
        let mut add = |outcome: &str, layout: &Ranked<'_>| {
            let compared = if sized.fronts.is_empty() { Vec::new() } else { compared(sized, layout, list, words) };
            let stands = layout.groups.iter().enumerate().map(|(place, &placed)| {
                let outcome = if place < layout.added().len() { outcome } else { "existing" };
                (outcome, placed)
            });
            let closed = layout.closed.iter().flat_map(|closed| &closed.groups);
            let closed =
                closed.map(|&group| ("closed", Placed { group, from: group.set_height, to: group.set_height }));
            for (outcome, placed) in stands.chain(closed) {
                let row = row(sized, answer.area, outcome, index + 1, layout, &placed, words);
                rows.push(row.into_iter().chain(compared.iter().cloned()).collect());
            }
        };
        add(words::outcome(&answer.outcome), layout);
        if let Some(Measured::Fitted(fitted)) = &layout.made {
            add("made to measure", &fitted.layout());
        }
    }
    rows
}

/// Worst load and its case, devices and clear width of all that a layout adds, and the list it stands in.
fn compared(sized: &Sized<'_, '_>, layout: &Ranked<'_>, list: &str, words: Words) -> Vec<String> {
    let groups = || layout.added().iter().map(|placed| placed.group);
    let width = groups().map(|group| group.size.clear_width().nm() * i64::from(group.count)).sum();
    let worst = front::worst(layout);
    vec![
        worst.map_or(String::new(), |(load, _)| plain(words.in_load_unit(load), 4)),
        worst.map_or(String::new(), |(_, case)| sized.roof.cases[case].name.clone()),
        groups().map(|group| group.count).sum::<u32>().to_string(),
        plain(words.small(Length::from_nm(width)), 4),
        list.to_string(),
    ]
}

fn row(
    sized: &Sized<'_, '_>,
    area: usize,
    outcome: &str,
    rank: usize,
    layout: &Ranked<'_>,
    placed: &Placed<'_>,
    words: Words,
) -> Vec<String> {
    let device = &placed.group.size.device;
    let round = device.kind() == Kind::PipeScupper;
    let small = |length: Length| plain(words.small(length), 4);
    let optional = |length: Option<Length>| length.map_or(String::new(), small);
    let water = layout.states[layout.case].water;
    vec![
        sized.roof.areas[area].name.clone(),
        outcome.into(),
        rank.to_string(),
        layout.cost.map_or(String::new(), |cost| plain(cost.amount(), 2)),
        placed.group.size.tag.to_string(),
        device.kind().to_string(),
        optional(device.width().filter(|_| !round)),
        optional(device.height().filter(|_| !round)),
        optional(device.diameter()),
        placed.group.count.to_string(),
        small(placed.group.set_height),
        small(placed.from),
        words.depth_down(placed.to).replace(',', ""),
        placed.group.size.law_at(&sized.roof.site(area, None)).name().to_string(),
        sized.roof.cases[layout.case].name.clone(),
        layout.governing.map_or("overwhelmed".into(), |governing| governing.limit.name().to_string()),
        optional(water.map(|water| water.level)),
        water.map_or(String::new(), |water| plain(words.in_load_unit(water.load), 4)),
        layout.governing.map_or(String::new(), |governing| plain(governing.utilisation, 4)),
        if layout.beyond.is_empty() { "no" } else { "yes" }.to_string(),
        String::new(),
    ]
}
