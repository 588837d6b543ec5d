//! What mends layouts that fail, and the list of them, worst first.

use serde::Serialize;

use crate::review::{self, Change, Checked, Mend};
use crate::roof::layout::Group;
use crate::roof::{GivenGroup, LimitKind, Situation};
use crate::search::Placed;
use crate::units::{Length, Money};

use super::check::{Checks, utilisation};
use super::page::{Block, Table};
use super::words::{self, Words, list};
use super::{json, marks};

/// Sills lower than this are told to be low: less than codes ask for as a rule.
const LOW: Length = Length::mm(50.0);

/// What mends a layout, by its place; nothing where that was not asked for, or it passes.
pub(super) fn blocks(checks: &Checks<'_, '_>, place: usize, words: Words) -> Vec<Block> {
    let Some(mends) = checks.mends else { return Vec::new() };
    let (checked, mends) = (&checks.checked[place], &mends[place]);
    if checked.passes() {
        return Vec::new();
    }
    let name = &checked.given.name;
    if mends.is_empty() {
        return vec![Block::Text(format!(
            "Nothing mends \"{name}\" by itself: openings of one size added, one group made larger or set lower, one group \
             replaced by another size."
        ))];
    }
    let mut head = match mends.len() {
        1 => format!("One change mends \"{name}\", the least of its kind"),
        _ => format!("Any one of these mends \"{name}\", the least of each kind, the cheapest first"),
    };
    let lacking: Vec<&str> = Change::NAMES.into_iter().filter(|name| !has(mends, name)).map(in_words).collect();
    if !lacking.is_empty() {
        head += &format!("; {} alone {} not", list(&lacking), if lacking.len() == 1 { "does" } else { "do" });
    }
    let lines = mends.iter().map(|mend| format!("{}; {}", told(checked, mend, words), then(checks, mend, words)));
    vec![Block::Text(head + ":"), Block::List(lines.collect())]
}

fn has(mends: &[Mend], kind: &str) -> bool {
    mends.iter().any(|mend| mend.change.name() == kind)
}

/// A kind of change as what is done.
fn in_words(kind: &str) -> &'static str {
    match kind {
        "add" => "adding one size",
        "widen" => "a larger size in the place of one group",
        "lower" => "lowering one group",
        _ => "replacing one group",
    }
}

/// A change with its cost.
fn told(checked: &Checked<'_>, mend: &Mend, words: Words) -> String {
    format!("{}: {}", change(checked, mend, words), cost(mend))
}

/// The group of a mended layout that is not as it was.
fn changed(mend: &Mend) -> &GivenGroup {
    let last = mend.given.groups.len() - 1;
    match mend.change {
        Change::Add => &mend.given.groups[last],
        Change::Widen(place) | Change::Lower(place) | Change::Replace(place) => &mend.given.groups[place],
    }
}

/// A change in words.
fn change(checked: &Checked<'_>, mend: &Mend, words: Words) -> String {
    let new = changed(mend).group();
    let there = |place: usize| checked.given.groups[place].group();
    match mend.change {
        Change::Add => format!("add {}", words.group(&new)),
        Change::Widen(place) => format!("make {} into {}", words.group(&there(place)), words.name(new.size)),
        Change::Replace(place) => format!("replace {} by {}", words.group(&there(place)), words.group(&new)),
        Change::Lower(place) => {
            let caution = if new.set_height < LOW { ", low: check the least set height of the code" } else { "" };
            format!("lower {} to {}{caution}", words.group(&there(place)), words.size(new.set_height))
        }
    }
}

/// What a change costs; of sills that are moved nothing is known.
fn cost(mend: &Mend) -> String {
    match mend.cost {
        None if matches!(mend.change, Change::Lower(_)) => "cost not known, no catalog prices it".into(),
        None => "cost not known, the size has no price".into(),
        Some(cost) if mend.closing > Money::default() => {
            format!("{}, {} of it for closing", words::money(cost), words::money(mend.closing))
        }
        Some(cost) => words::money(cost),
    }
}

/// How the layout so changed stands in the case that governs it.
fn then(checks: &Checks<'_, '_>, mend: &Mend, words: Words) -> String {
    let stands = match mend.governing.limit {
        LimitKind::Load => words.load(mend.water.load),
        LimitKind::Depth => format!("{} of water", words.depth(mend.water.depth())),
        LimitKind::Parapet => format!("water up to {}", words.depth(mend.water.level)),
    };
    let situation: Situation<'_> = checks.roof.situation(mend.given.area, mend.case);
    let limit = words.limit(mend.governing.limit, situation.limits, situation.parapet);
    format!("then {stands} of {limit} in \"{}\"{}", checks.roof.cases[mend.case].name, doubts(mend))
}

/// What the figures of a layout so changed rest on, where that is to be doubted.
fn doubts(mend: &Mend) -> String {
    let mut text = String::new();
    if mend.beyond {
        text += ", beyond the published range of its law";
    }
    if mend.chord > marks::CHORD_TOLD {
        text += ", by straight lines between rated rows";
    }
    if !mend.breaks_under.is_empty() {
        let laws: Vec<String> = mend.breaks_under.iter().map(|law| format!("`{}`", law.name())).collect();
        text += &format!(", but over a limit under {}", list(&laws));
    }
    text
}

/// The failing layouts, worst first, each with its cheapest mend; nothing where that was not asked for.
pub(super) fn survey(checks: &Checks<'_, '_>, words: Words) -> Vec<Block> {
    let Some(mends) = checks.mends else { return Vec::new() };
    let mut blocks = vec![Block::Heading("Worst first".into())];
    let failing = review::worst_first(checks.checked);
    if failing.is_empty() {
        blocks.push(Block::Text("Every layout passes.".into()));
        return blocks;
    }
    let layout = |place: usize| &checks.checked[place];
    let column = |cell: &dyn Fn(usize) -> String| failing.iter().map(|&place| cell(place)).collect::<Vec<_>>();
    let mut columns = vec![
        ("area".into(), false, column(&|place| checks.roof.areas[layout(place).given.area].name.clone())),
        ("layout".into(), false, column(&|place| layout(place).given.name.clone())),
        ("util.".into(), true, column(&|place| utilisation(&layout(place).standing))),
        ("case".into(), false, column(&|place| checks.roof.cases[layout(place).standing.case].name.clone())),
        (
            "cheapest mend".into(),
            false,
            column(&|place| {
                mends[place].first().map_or("none".into(), |mend| change(layout(place), mend, words) + &doubts(mend))
            }),
        ),
        (
            "cost".into(),
            true,
            column(&|place| mends[place].first().and_then(|mend| mend.cost).map_or("-".into(), words::money)),
        ),
    ];
    if checks.roof.cases.len() == 1 {
        columns.retain(|(head, _, _): &(String, bool, Vec<String>)| head != "case");
    }
    blocks.push(Block::Table(Table::of(columns)));
    blocks.push(Block::Text(sum(checks, mends, &failing)));
    blocks
}

/// How many fail, and what mending them costs, where no area has two that fail: of those one would be mended.
fn sum(checks: &Checks<'_, '_>, mends: &[Vec<Mend>], failing: &[usize]) -> String {
    let count = |number: usize| format!("{number} of {} layouts", checks.checked.len());
    let fail = if failing.len() == 1 { "fails" } else { "fail" };
    let mut areas: Vec<usize> = failing.iter().map(|&place| checks.checked[place].given.area).collect();
    areas.sort_unstable();
    if areas.windows(2).any(|pair| pair[0] == pair[1]) {
        return format!("{} {fail}.", count(failing.len()));
    }
    let costs: Vec<Money> =
        failing.iter().filter_map(|&place| mends[place].first().and_then(|mend| mend.cost)).collect();
    let without = failing.len() - costs.len();
    let rest = match without {
        0 => String::new(),
        1 => " Of one no mend has a price.".into(),
        more => format!(" Of {more} no mend has a price."),
    };
    let total: Money = costs.iter().copied().sum();
    let lowered = failing.iter().any(|&place| has(&mends[place], "lower"));
    let unknown = if lowered { " What lowering sills costs is not known: it is not among them." } else { "" };
    let total = words::money(total);
    format!("{} {fail}; the cheapest mends with a price come to {total} in all.{rest}{unknown}", count(failing.len()))
}

/// What mends a layout, for a spreadsheet: the change and its cost; no cells where that was not asked for.
pub(super) fn cells(checks: &Checks<'_, '_>, place: usize, words: Words) -> Vec<String> {
    let Some(mends) = checks.mends else { return Vec::new() };
    let first = mends[place].first();
    let cost = first.and_then(|mend| mend.cost);
    vec![
        first.map_or(String::new(), |mend| change(&checks.checked[place], mend, words) + &doubts(mend)),
        cost.map_or(String::new(), |cost| super::plain(cost.amount(), 2)),
    ]
}

/// A change that makes a layout pass.
#[derive(Serialize)]
pub(super) struct OfMend<'a> {
    kind: &'static str,
    /// Which group it is about; none where openings are added.
    group: Option<usize>,
    cost: Option<f64>,
    closing: f64,
    case: &'a str,
    utilisation: f64,
    load_pa: f64,
    beyond_range: bool,
    /// Laws of a thick wall under which it passes a limit.
    breaks_under: Vec<&'static str>,
    groups: Vec<json::Group<'a>>,
}

/// A failing layout in the list of all.
#[derive(Serialize)]
pub(super) struct OfFailing<'a> {
    area: &'a str,
    layout: &'a str,
    case: &'a str,
    utilisation: Option<f64>,
    mend: Option<OfMend<'a>>,
}

/// What mends a layout; none where that was not asked for.
pub(super) fn of_layout<'a>(checks: &Checks<'a, '_>, place: usize) -> Option<Vec<OfMend<'a>>> {
    let mends = checks.mends?;
    Some(mends[place].iter().map(|mend| of_mend(checks, mend)).collect())
}

fn of_mend<'a>(checks: &Checks<'a, '_>, mend: &'a Mend) -> OfMend<'a> {
    let placed = |(given, &(from, to)): (&'a GivenGroup, &(Length, Length))| {
        let group: Group<'a> = given.group();
        json::group(&Placed { group, from, to }, checks.roof, mend.given.area)
    };
    OfMend {
        kind: mend.change.name(),
        group: match mend.change {
            Change::Add => None,
            Change::Widen(place) | Change::Lower(place) | Change::Replace(place) => Some(place),
        },
        cost: mend.cost.map(Money::amount),
        closing: mend.closing.amount(),
        case: &checks.roof.cases[mend.case].name,
        utilisation: mend.governing.utilisation,
        load_pa: mend.water.load.pa(),
        beyond_range: mend.beyond,
        breaks_under: mend.breaks_under.iter().map(|law| law.name()).collect(),
        groups: mend.given.groups.iter().zip(&mend.windows).map(placed).collect(),
    }
}

/// The failing layouts, worst first; none where that was not asked for.
pub(super) fn worst_first<'a>(checks: &Checks<'a, '_>) -> Option<Vec<OfFailing<'a>>> {
    let mends = checks.mends?;
    let one = |place: usize| {
        let checked = &checks.checked[place];
        let of_governing = checked.standing.governing.map(|governing| governing.utilisation);
        OfFailing {
            area: &checks.roof.areas[checked.given.area].name,
            layout: &checked.given.name,
            case: &checks.roof.cases[checked.standing.case].name,
            utilisation: of_governing.filter(|utilisation| utilisation.is_finite()),
            mend: mends[place].first().map(|mend| of_mend(checks, mend)),
        }
    };
    Some(review::worst_first(checks.checked).into_iter().map(one).collect())
}
