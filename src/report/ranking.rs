//! The report of `size`: for each area its demand and its limit in words, then the ranked layouts, or why there are none.

use crate::device::{Kind, Law};
use crate::hydraulics::limits::Range;
use crate::roof::{Case, GivenGroup, Limits, Roof, demand};
use crate::search::{Answer, Outcome, Ranked, UnderLaw};
use crate::units::{Area, Length, Load, Money};

use super::page::{Block, Table};
use super::words::{self, Words, list, trimmed};
use super::{Sized, cascade, cures, front, heights, measure, notes, plan, ponding, reasons, rules, storm, work};

/// The mark behind a layout that leaves the published range of its law.
const BEYOND: &str = "\u{2020}";
/// The mark behind a layout whose flow rests on straight lines between rated rows.
const CHORD: &str = "\u{2021}";

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

/// The storm, the cases that a layout must withstand, and what runs onto what.
pub(super) fn situation(roof: &Roof, words: Words) -> Vec<Block> {
    let mut blocks = vec![Block::Text(storm::line(&roof.storm, words))];
    // A further storm is told once, not case by case.
    let given = roof.cases.iter().filter(|case| case.storm.is_none() && !rules::is_own_case(roof, case));
    let cases: Vec<_> = given.map(|case| case_in_words(case, roof, words)).collect();
    if roof.cases.len() > 1 || roof.cases[0] != Case::as_designed() {
        blocks.push(Block::Text("Cases that a layout must withstand:".into()));
        blocks.push(Block::List(cases));
    }
    blocks.extend(storm::further(roof, words));
    blocks.extend(cascade::blocks(roof, words));
    blocks
}

/// An area's name, demand and limit.
pub(super) fn area_head(roof: &Roof, area: usize, words: Words) -> [Block; 3] {
    [
        Block::Heading(roof.areas[area].name.clone()),
        Block::Text(demand_in_words(roof, area, words)),
        Block::Text(limit_in_words(roof, area, words)),
    ]
}

/// What is there already, where anything is: what a search adds to.
pub(super) fn there_already(roof: &Roof, area: usize, words: Words) -> Option<Block> {
    let there: Vec<_> = roof.areas[area].existing.iter().map(GivenGroup::group).collect();
    let heeded = match roof.areas[area].replace {
        None => {
            "All of it is kept at no cost, moves no sill and may be what is blocked; layouts say what is added.".into()
        }
        Some(price) => format!(
            "Any of it may be closed, each opening {}; what is kept costs nothing, moves no sill and may be what is blocked. \
             Layouts say what is added, what is closed and what is kept.",
            if price > Money::default() { format!("for {}", words::money(price)) } else { "at no cost".into() }
        ),
    };
    let text = format!("There already: {}. {heeded}", words.groups(&there));
    (!there.is_empty()).then_some(Block::Text(text))
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

/// What a case does to the design.
fn case_in_words(case: &Case, roof: &Roof, words: Words) -> String {
    let mut parts = Vec::new();
    match case.blocked {
        0 => {}
        1 => parts.push("the device that carries most carries nothing".to_string()),
        many => parts.push(format!("the {many} devices that carry most carry nothing")),
    }
    if case.sill_error > Length::ZERO {
        parts.push(format!("every sill stands {} higher", words.size(case.sill_error)));
    }
    if case.opening_loss > Length::ZERO {
        parts.push(format!("{} is lost on each side of every scupper", words.size(case.opening_loss)));
    }
    let changed = |factor: f64| (factor - 1.0).abs() > 1e-12;
    if changed(case.rain) {
        parts.push(format!("rain times {}{}", trimmed(case.rain, 3), storm::recurrence(case, &roof.storm)));
    }
    if changed(case.discharge) {
        parts.push(format!("flow of every device times {}", trimmed(case.discharge, 3)));
    }
    if let Some(basis) = case.basis {
        parts.push(format!("counted by {}", roof.bases[basis].case.name));
    }
    if parts.is_empty() {
        parts.push("as drawn, under the storm as given".into());
    }
    format!("{}: {}", case.name, list(&parts))
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

/// What the area must pass, and the same by the constant that practice writes.
fn demand_in_words(roof: &Roof, area: usize, words: Words) -> String {
    let catchment = &roof.areas[area];
    let catching = demand::catching(catchment);
    let mut parts = vec![format!("{} of roof", words.area(catchment.area))];
    if catchment.wall > Area::ZERO {
        let share = trimmed(catchment.wall_share, 3);
        parts.push(format!("{share} of {} of wall", words.area(catchment.wall)));
    }
    let mut text = format!(
        "Demand {}: {} on {}",
        words.flow(roof.demands[area]),
        words.intensity(roof.storm.intensity),
        list(&parts)
    );
    text += &cascade::received(roof, area, words);
    if roof.system == crate::units::System::Us {
        let by_hand = 0.0104 * catching.to_ft2() * roof.storm.intensity.to_inches_per_hour();
        text += &format!(
            ". By hand 0.0104 x {} x {} = {} gpm{}",
            words.bare_area(catching),
            trimmed(roof.storm.intensity.to_inches_per_hour(), 3),
            words::gpm_by_hand(by_hand),
            if catchment.receives.is_empty() { "" } else { " for its own rain" }
        );
    }
    text + "."
}

/// The limits in effect, case by case where they differ.
fn limit_in_words(roof: &Roof, area: usize, words: Words) -> String {
    let catchment = &roof.areas[area];
    let water = |limits: Limits| {
        let level = roof.situation(area, 0);
        let level = crate::roof::Situation { limits, ..level };
        let allowed = level.allowable_level();
        if allowed > Length::ZERO {
            return format!(
                "{}, water up to {} {}",
                words.limits(limits),
                words.depth_down(allowed),
                words.small_unit()
            );
        }
        let free = level.reach(Length::ZERO).map_or(String::new(), |reach| {
            format!(": with a free outlet its channel already stands {} deep", words.depth(reach.deepest))
        });
        format!("{}, which leaves no level at the devices{free}", words.limits(limits))
    };
    let mut text = String::from("Limit: ");
    let first = catchment.limits[0];
    text += &water(first);
    // Under every storm a case has the same limits.
    let of_main = |case: &usize| roof.cases[*case].storm.is_none();
    for (case, limits) in catchment.limits.iter().enumerate().skip(1).filter(|(case, _)| of_main(case)) {
        let before = catchment.limits[..case].iter().position(|known| known == limits);
        if before.is_none() {
            let alike: Vec<_> = (case..catchment.limits.len())
                .filter(|other| of_main(other) && catchment.limits[*other] == *limits)
                .map(|other| format!("\"{}\"", roof.cases[other].name))
                .collect();
            text += &format!("; in {}: {}", list(&alike), water(*limits));
        }
    }
    if let Some(counted) = ponding::counted(catchment, words) {
        text += &format!("; {counted}");
    }
    if let Some(height) = catchment.parapet.height {
        text += &format!("; the parapet's top at {}", words.size(height));
    }
    if let Some(edge) = catchment.edge {
        text += &format!("; {} of edge for openings", words.long(edge));
    }
    if let Some(channel) = catchment.channel {
        text += &format!(
            "; held along a channel {} wide and {} long, whose tailwater is the level at the devices",
            words.long(channel.width),
            words.long(channel.length)
        );
    }
    text + "."
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
                constants.push(format!("{} {}{unit}", column.constant, column.cells[0]));
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

/// A layout with its rank or its name.
pub(super) type Named<'l, 'r> = (String, &'l Ranked<'r>);

/// What is told of layouts besides their ranking: conductor heads that back up, and how they stand in a thick wall.
pub(super) fn beside(roof: &Roof, area: usize, layouts: &[Named<'_, '_>], words: Words) -> Vec<Block> {
    let mut blocks = Vec::new();
    let backing = backing_up(roof, layouts, words);
    if !backing.is_empty() {
        blocks
            .push(Block::Text("Conductor heads that would back up, were all that the device passes credited:".into()));
        blocks.push(Block::List(backing));
    }
    let thick = thick_walls(roof, area, layouts, words);
    if !thick.is_empty() {
        blocks.push(Block::Text("Under the laws of a thick wall, in the governing case:".into()));
        blocks.push(Block::List(thick));
    }
    blocks
}

/// One line for each layout and group whose conductor head would back up over the sill, at its worst.
fn backing_up(roof: &Roof, layouts: &[Named<'_, '_>], words: Words) -> Vec<String> {
    let mut lines = Vec::new();
    for (called, layout) in layouts {
        for (place, placed) in layout.groups.iter().enumerate() {
            let risen = layout
                .states
                .iter()
                .enumerate()
                .filter_map(|(case, state)| Some((state.groups[place].backs_up?, case)));
            if let Some((rise, case)) = risen.max_by(|a, b| a.0.m().total_cmp(&b.0.m())) {
                let (name, case) = (words.name(placed.group.size), &roof.cases[case].name);
                lines.push(format!("{called}: {name} to {} above its sill in \"{case}\"", words.depth(rise)));
            }
        }
    }
    lines
}

/// One line for each layout: its level under the laws of a thick wall, and whether that breaks a limit.
pub(super) fn thick_walls(roof: &Roof, area: usize, layouts: &[Named<'_, '_>], words: Words) -> Vec<String> {
    let Some(thickness) = roof.areas[area].parapet.thickness else { return Vec::new() };
    if roof.areas[area].ponding.is_some_and(|ponding| ponding.is_unstable()) {
        return Vec::new();
    }
    let wall = format!(" ({} parapet)", words.size(thickness));
    let one = |(index, under): (usize, &UnderLaw)| {
        let (wall, is) = if index == 0 { (wall.as_str(), "the level is ") } else { ("", "") };
        format!("under `{}`{wall} {is}{}", under.law.name(), under_in_words(roof, area, under, words))
    };
    let told = layouts.iter().filter(|(_, layout)| !layout.thick_wall.is_empty());
    told.map(|(called, layout)| {
        format!("{called}: {}", layout.thick_wall.iter().enumerate().map(one).collect::<Vec<_>>().join("; "))
    })
    .collect()
}

/// The level under another law, beside what is allowed where it passes that.
fn under_in_words(roof: &Roof, area: usize, under: &UnderLaw, words: Words) -> String {
    let Some(water) = under.water else { return "without end: overwhelmed".into() };
    let level = words.depth(water.level);
    let breaks = |case: usize| {
        let allowed = roof.situation(area, case).allowable_level();
        if case == under.case {
            format!(", over the {} limit", words.depth(allowed))
        } else {
            format!(", and \"{}\" passes its {}", roof.cases[case].name, words.depth(allowed))
        }
    };
    // The governing case is told first where it breaks, though another may stand before it.
    let own = water.governing.utilisation > 1.0;
    let broken = if own { Some(under.case) } else { under.breaks };
    level + &broken.map_or(String::new(), breaks)
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

pub(super) fn marked(layout: &Ranked<'_>, words: Words) -> String {
    words.layout(layout) + &marks_of(layout)
}

/// The marks that stand behind a layout.
pub(super) fn marks_of(layout: &Ranked<'_>) -> String {
    let mut text = String::new();
    if !layout.beyond.is_empty() {
        text += &format!(" {BEYOND}");
    }
    if layout.chord > notes::CHORD_TOLD {
        text += &format!(" {CHORD}");
    }
    text
}

pub(super) fn marks(layouts: &[&Ranked<'_>], words: Words) -> Vec<String> {
    let mut texts = Vec::new();
    let mut beyond: Vec<(&Range, f64)> = Vec::new();
    for &(range, value) in layouts.iter().flat_map(|layout| &layout.beyond) {
        let low = value < range.low;
        match beyond.iter_mut().find(|(known, other)| std::ptr::eq(*known, range) && (*other < range.low) == low) {
            Some((_, known)) => *known = if low { known.min(value) } else { known.max(value) },
            None => beyond.push((range, value)),
        }
    }
    if !beyond.is_empty() {
        let parts: Vec<_> = beyond.iter().map(|&(range, value)| out_of_range(range, value, words)).collect();
        texts.push(format!("{BEYOND} beyond the published range of its law, as far as {}.", list(&parts)));
    }
    let most = layouts.iter().map(|layout| layout.chord).fold(0.0, f64::max);
    if most > notes::CHORD_TOLD {
        texts.push(format!(
            "{CHORD} straight lines and logarithms between rated rows differ by up to {} % of the flow.",
            trimmed(most * 100.0, 1)
        ));
    }
    texts
}

/// A value that lies outside a range, and the end that it passes.
pub(super) fn out_of_range(range: &Range, value: f64, words: Words) -> String {
    let shown = |value: f64| if range.unit.is_empty() { trimmed(value, 3) } else { words.depth(Length::from_m(value)) };
    let end = |value: f64| if range.unit.is_empty() { trimmed(value, 3) } else { words.size(Length::from_m(value)) };
    let (side, limit) = if value < range.low { ("under", range.low) } else { ("over", range.high) };
    format!("{} {} {side} {} ({})", range.what, shown(value), end(limit), range.law)
}
