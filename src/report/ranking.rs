//! The report of `size`: for each area its demand and its limit in words, then the ranked layouts, or why there are none.

use crate::device::{Kind, Law};
use crate::roof::Roof;
use crate::search::{Answer, Outcome, Ranked, UnderLaw};
use crate::units::Load;

use super::beside::beside;
use super::head::{area_head, situation, there_already};
use super::marks::{marked, marks};
use super::page::{Block, Table};
use super::words::{self, Words};
use super::{Sized, cures, front, heights, measure, notes, plan, reasons, rules, work};

pub(super) fn page(sized: &Sized<'_, '_>) -> Vec<Block> {
    let words = Words(sized.roof.system);
    let mut blocks =
        vec![Block::Title(format!("{}: overflow drainage, {}", sized.roof.title, rules::drains_in_title(sized.roof)))];
    blocks.extend(situation(sized.roof, words));
    blocks.extend(rules::over(sized.roof, sized.options, words));
    for answer in sized.answers {
        area(sized, answer, words, &mut blocks);
    }
    if let Some(asked) = &sized.plans {
        plan::blocks(sized, asked, words, &mut blocks);
    }
    let told = sized.told();
    blocks.extend(notes::blocks(&told, words));
    blocks
}

/// What the layouts come to that close nothing, where the first does close.
fn keeping_all(answer: &Answer<'_>, words: Words) -> Option<Block> {
    let text = match (answer.keeping.as_ref()?.layouts().first(), &answer.keeping) {
        (Some(layout), _) => {
            let cost = layout.cost.map_or(String::new(), |cost| format!(", {}", words::money(cost)));
            format!("With nothing closed the first would be {}{cost}.", words.layout(layout))
        }
        (None, Some(Outcome::Stopped { .. })) => {
            "The search was ended before it was known what keeping all of it comes to.".into()
        }
        (None, _) => "With nothing closed no layout holds.".into(),
    };
    Some(Block::Text(text))
}

fn area(sized: &Sized<'_, '_>, answer: &Answer<'_>, words: Words, blocks: &mut Vec<Block>) {
    let roof = sized.roof;
    blocks.extend(area_head(roof, answer.area, words));
    blocks.extend(there_already(roof, answer.area, words));
    let holds_as_is = |layout: &Ranked<'_>| {
        layout.added().is_empty() && layout.closed.as_ref().is_none_or(|closed| closed.groups.is_empty())
    };
    if answer.outcome.layouts().iter().any(holds_as_is) {
        blocks.push(Block::Text("What is there holds: nothing need be added.".into()));
    }
    match &answer.outcome {
        Outcome::Optimal(_) => {}
        Outcome::Stopped { layouts, bound } => {
            blocks.push(Block::Text(reasons::stopped(layouts.first(), *bound, words)));
        }
        Outcome::Infeasible(why) => {
            let why = reasons::infeasible(sized, answer.area, why, words);
            blocks.push(Block::Text(format!("No layout. {why}")));
        }
    }
    match answer.outcome.layouts() {
        [] => {
            if let Some(opened) = sized.changes_of(answer.area) {
                blocks.extend(cures::blocks(opened, &sized.options.rules, words));
            }
            let catchment = &roof.areas[answer.area];
            if !catchment.existing.is_empty() && catchment.replace.is_none() {
                let text = "All that is there was kept: with `replace` in the area some of it may be closed.";
                blocks.push(Block::Text(text.into()));
            }
        }
        layouts => {
            ranking(sized, answer.area, layouts, words, blocks);
            blocks.extend(keeping_all(answer, words));
            let named: Vec<_> = (1..).map(|rank: usize| rank.to_string()).zip(layouts).collect();
            blocks.extend(heights::blocks(roof, answer.area, &named, words));
            blocks.extend(beside(roof, answer.area, &named, words));
            blocks.extend(measure::blocks(sized, answer.area, layouts, words));
            let named: Vec<_> = (1..).map(|rank: usize| format!("layout {rank}")).zip(layouts).collect();
            blocks.extend(rules::blocks(roof, sized.options, answer.area, &named, 1, words));
            if let Some(fronted) = sized.front_of(answer.area) {
                front::area(sized, fronted, words, blocks);
            }
            if let Some(laws) = sized.laws_of(answer.area).filter(|laws| !laws.is_empty()) {
                every_law(roof, answer.area, &layouts[0], laws, words, blocks);
            }
            if sized.work {
                blocks.push(Block::Text(format!("The first layout by hand, {}:", words.layout(&layouts[0]))));
                blocks.push(Block::Lines(work::lines(roof, answer.area, &layouts[0], words)));
                blocks.extend(measure::work(roof, answer.area, &layouts[0], words));
            }
            if let Some(opened) = sized.changes_of(answer.area) {
                blocks.extend(cures::binding(opened, &sized.options.rules, words));
            }
        }
    }
    strengthened(sized, answer, words, blocks);
}

/// Whether a stronger roof pays, where strength has a price.
fn strengthened(sized: &Sized<'_, '_>, answer: &Answer<'_>, words: Words, blocks: &mut Vec<Block>) {
    let Some((structure, found)) = sized.structure else { return };
    if sized.roof.areas[answer.area].limits.iter().all(|limits| limits.load.is_none()) {
        blocks.push(Block::Text("Stiffened: no load limit is given here, so there is none to raise.".into()));
        return;
    }
    let weighed = sized.place(answer.area).and_then(|place| found.get(place));
    blocks.extend(weighed.map(|weighed| Block::Text(super::structure::told(weighed, structure, words))));
}

/// One column of the ranking: its head, whether it is of numbers, its cells, and how a constant one is said.
struct Column {
    head: String,
    numbers: bool,
    cells: Vec<String>,
    constant: &'static str,
}

fn ranking(sized: &Sized<'_, '_>, area: usize, layouts: &[Ranked<'_>], words: Words, blocks: &mut Vec<Block>) {
    let water = |layout: &Ranked<'_>| layout.states[layout.case].water;
    let column = |head: String, numbers, constant, cell: &dyn Fn(&Ranked<'_>) -> String| Column {
        head,
        numbers,
        cells: layouts.iter().map(cell).collect(),
        constant,
    };
    let load_of = |layout: &Ranked<'_>, case: usize| layout.states[case].water.map(|water| water.load.pa());
    // Where another case bears more load than the governing one, layouts rank by that, and it is shown beside.
    let unlike = layouts
        .iter()
        .any(|layout| (0..layout.states.len()).any(|case| load_of(layout, case) > load_of(layout, layout.case)));
    let worst = |layout: &Ranked<'_>| {
        let loads = layout.states.iter().map(|state| state.water.map(|water| water.load));
        match loads.collect::<Option<Vec<_>>>() {
            Some(loads) if unlike => words.bare_load(loads.into_iter().fold(Load::ZERO, Load::max)),
            _ => "-".into(),
        }
    };
    let governing_limit =
        |layout: &Ranked<'_>| layout.governing.map_or("overwhelmed", |governing| governing.limit.name());
    let columns = [
        column("cost".into(), true, "cost", &|layout| layout.cost.map_or("-".into(), words::money)),
        column("closing".into(), true, "of the cost for closing", &|layout| {
            let closed = layout.closed.as_ref().filter(|closed| !closed.groups.is_empty());
            closed.map_or("-".into(), |closed| words::money(closed.cost))
        }),
        column(format!("depth {}", words.small_unit()), true, "water depth", &|layout| {
            water(layout).map_or("-".into(), |water| words.bare_depth(water.level))
        }),
        column(format!("far end {}", words.small_unit()), true, "level at the far end", &|layout| {
            water(layout).and_then(|water| water.reach).map_or("-".into(), |reach| words.bare_depth(reach.far_level))
        }),
        column(format!("pond. {}", words.small_unit()), true, "ponding head", &|layout| {
            let situation = sized.roof.situation(area, layout.case);
            let grows = water(layout).filter(|_| situation.ponding.grows());
            grows.map_or("-".into(), |water| words.bare_depth(situation.ponding_head(water.level)))
        }),
        column(format!("load {}", words.load_unit()), true, "load", &|layout| {
            water(layout).map_or("-".into(), |water| words.bare_load(water.load))
        }),
        column(format!("worst {}", words.load_unit()), true, "greatest load of all cases", &worst),
        column("util.".into(), true, "utilisation", &|layout| {
            layout.governing.map_or("-".into(), |governing| format!("{:.3}", governing.utilisation))
        }),
        column("case".into(), false, "governing case", &|layout| sized.roof.cases[layout.case].name.clone()),
        column("limit".into(), false, "governing limit", &|layout| governing_limit(layout).to_string()),
        column(format!("set height {}", words.small_unit()), false, "set height may run", &|layout| {
            if layout.added().is_empty() { "-".into() } else { words.window(layout.added()) }
        }),
    ];
    let mut kept = vec![
        ("rank".to_string(), true, (1..=layouts.len()).map(|rank| rank.to_string()).collect()),
        ("layout".to_string(), false, layouts.iter().map(|layout| marked(layout, words)).collect()),
    ];
    let mut constants = Vec::new();
    for column in columns {
        let same = column.cells.iter().all(|cell| *cell == column.cells[0]);
        let without = column.cells[0] == "-";
        if same && (layouts.len() > 1 || without) {
            let unit = column.head.strip_prefix(column.head.trim_end_matches(|c: char| c != ' ')).unwrap_or("");
            let unit = if [words.small_unit(), words.load_unit()].contains(&unit) {
                format!(" {unit}")
            } else {
                String::new()
            };
            if !without {
                let cell = &column.cells[0];
                constants.push(match cell.strip_suffix(" only") {
                    Some(one) => format!("{} {one}{unit} only", column.constant),
                    None => format!("{} {cell}{unit}", column.constant),
                });
            }
        } else {
            kept.push((column.head, column.numbers, column.cells));
        }
    }
    blocks.push(Block::Table(Table::of(kept)));
    let several = sized.roof.cases.len() > 1;
    let mut under = Vec::new();
    if !constants.is_empty() {
        under.push(format!("The same in every row: {}.", constants.join("; ")));
    }
    if several && area == sized.answers[0].area {
        under.push("Depth and load are those of the governing case, the one that uses most of its limit.".into());
    }
    if !under.is_empty() {
        blocks.push(Block::Text(under.join(" ")));
    }
    for text in marks(&layouts.iter().collect::<Vec<_>>(), words) {
        blocks.push(Block::Text(text));
    }
}

/// The first layout of an area under every law that it can follow.
fn every_law(roof: &Roof, area: usize, first: &Ranked<'_>, laws: &[UnderLaw], words: Words, blocks: &mut Vec<Block>) {
    let kind = |law: Law| {
        let kinds = first.groups.iter().map(|placed| placed.group.size.device.kind());
        kinds.into_iter().find(|kind| kind.laws().contains(&law)).unwrap_or(Kind::Rated)
    };
    let cell = |tell: &dyn Fn(&UnderLaw) -> String| laws.iter().map(tell).collect::<Vec<_>>();
    blocks.push(Block::Text(format!(
        "The first layout under every law, in the case \"{}\" (water up to {}):",
        roof.cases[first.case].name,
        words.depth(roof.situation(area, first.case).allowable_level())
    )));
    let water = |tell: &dyn Fn(&crate::roof::layout::Water) -> String| {
        cell(&|under| under.water.as_ref().map_or("-".into(), tell))
    };
    let holds = |under: &UnderLaw| match under.breaks {
        None => "yes".to_string(),
        Some(case) => format!("no, {}", roof.cases[case].name),
    };
    blocks.push(Block::Table(Table::of(vec![
        ("law".into(), false, cell(&|under| under.law.name().into())),
        (format!("depth {}", words.small_unit()), true, water(&|water| words.bare_depth(water.level))),
        (format!("load {}", words.load_unit()), true, water(&|water| words.bare_load(water.load))),
        ("util.".into(), true, water(&|water| format!("{:.3}", water.governing.utilisation))),
        ("holds".into(), false, cell(&holds)),
        ("source".into(), false, cell(&|under| under.law.account(kind(under.law)).source.into())),
    ])));
}
