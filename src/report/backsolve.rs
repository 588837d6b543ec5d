//! The report of `backsolve`: for each unknown the value at which a layout just holds, beside the value as given.
//!
//! What may be at most so much is rounded down, what must be at least so much is rounded up.

use serde::Serialize;

use crate::device::Device;
use crate::review::{self, Checked, Solved, WIDEST};
use crate::roof::{Recurrence, Roof};
use crate::search::Options;
use crate::units::{Area, Intensity, Length, Load, ReturnPeriod};

use super::page::{self, Block, Table};
use super::words::{self, Words, list, trimmed};
use super::{Format, check, head, json, marks, notes, rules, written};

/// What a report of values solved for is made of.
#[derive(Clone, Copy, Debug)]
pub struct Backsolved<'a, 'r> {
    /// The roof.
    pub roof: &'r Roof,
    /// What was asked, besides the limits.
    pub options: &'a Options,
    /// The defaults that were taken.
    pub assumed: &'a [crate::input::Assumed],
    /// Each layout as it stands, with what was solved for.
    pub layouts: &'a [(Checked<'r>, Vec<Solved>)],
}

pub(super) fn write(backsolved: &Backsolved<'_, '_>, format: Format, width: usize) -> String {
    match format {
        Format::Table => page::text(&blocks(backsolved), width),
        Format::Markdown => page::markdown(&blocks(backsolved)),
        Format::Json => document(backsolved),
        Format::Csv => csv(backsolved),
    }
}

fn told<'a, 'r>(backsolved: &Backsolved<'a, 'r>) -> notes::Told<'a, 'r> {
    let mut areas: Vec<usize> = backsolved.layouts.iter().map(|(checked, _)| checked.given.area).collect();
    areas.dedup();
    notes::Told {
        roof: backsolved.roof,
        options: backsolved.options,
        assumed: backsolved.assumed,
        areas,
        layouts: backsolved.layouts.iter().map(|(checked, _)| (checked.given.area, &checked.standing)).collect(),
        searched: false,
        fronts: false,
        plan: false,
    }
}

fn blocks(backsolved: &Backsolved<'_, '_>) -> Vec<Block> {
    let words = Words(backsolved.roof.system);
    let roof = backsolved.roof;
    let mut blocks = vec![Block::Title(format!("{}: what given layouts could take", roof.title))];
    blocks.extend(head::situation(roof, words));
    blocks.extend(rules::over(roof, backsolved.options, words));
    let mut area_before = None;
    for (checked, solved) in backsolved.layouts {
        if area_before.replace(checked.given.area) != Some(checked.given.area) {
            blocks.extend(head::area_head(roof, checked.given.area, words));
        }
        let passes = if checked.passes() { "passes" } else { "fails" };
        let layout = marks::marked(&checked.standing, words);
        blocks.push(Block::Text(format!("\"{}\", {layout}, {passes}.", checked.given.name)));
        if !checked.passes() {
            let failing = |failing| check::failing_in_words(roof, backsolved.options, checked, failing, words);
            blocks.push(Block::List(checked.failings.iter().map(failing).collect()));
        }
        let lines: Vec<Line> = solved.iter().flat_map(|solved| lines(roof, checked, solved, words)).collect();
        let column = |tell: fn(&Line) -> &String| lines.iter().map(|line| tell(line).clone()).collect();
        blocks.push(Block::Table(Table::of(vec![
            ("unknown".into(), false, column(|line| &line.unknown)),
            ("as given".into(), false, column(|line| &line.given)),
            ("just holds".into(), false, column(|line| &line.holds)),
            ("margin".into(), false, column(|line| &line.margin)),
        ])));
    }
    let told = told(backsolved);
    blocks.push(Block::Heading("How to read this".into()));
    let own_rain = if backsolved.options.rules.sets.is_empty() {
        ""
    } else {
        " The rain of rule sets rises and falls with the design rain, as many times as that; their other rules are not asked."
    };
    blocks.push(Block::Text(format!(
        "Each value stands alone: all else is as given, and in every case the layout just holds. Sills move and openings change \
         all together. Whether edge, parapet and code allow it is not asked.{own_rain}"
    )));
    blocks.extend(notes::blocks(&told, words));
    blocks
}

/// One row of the table.
struct Line {
    unknown: String,
    given: String,
    holds: String,
    margin: String,
}

const NONE: &str = "no value holds";

fn lines(roof: &Roof, checked: &Checked<'_>, solved: &Solved, words: Words) -> Vec<Line> {
    let given = checked.given;
    let area = &roof.areas[given.area];
    let line = |unknown: &str, given: String, holds: String, margin: String| Line {
        unknown: unknown.into(),
        given,
        holds,
        margin,
    };
    match solved {
        Solved::Rain(most) => {
            let now = roof.storm.intensity;
            let holds = most.map_or(NONE.into(), |most| format!("at most {}", words.intensity_down(most)));
            let margin = most.map_or("-".into(), |most| percent(most.m_per_s() / now.m_per_s() - 1.0));
            let mut lines = vec![line("rain", words.intensity(now), holds, margin)];
            lines.extend(most.and_then(|most| return_period(roof, most)));
            lines
        }
        Solved::Area(most) => {
            let holds = most.map_or(NONE.into(), |most| format!("at most {}", words.area_down(most)));
            let margin = most.map_or("-".into(), |most| percent(most.m2() / area.area.m2() - 1.0));
            vec![line("area", words.area(area.area), holds, margin)]
        }
        Solved::SetHeight(lift) => {
            let heights: Vec<_> = given.groups.iter().map(|group| words.size(group.set_height)).collect();
            let reached = |lift: Length| {
                let at = given
                    .groups
                    .iter()
                    .map(|group| format!("{} {}", words.depth_down(group.set_height + lift), words.small_unit()));
                format!("at most {}", alike(at.collect()))
            };
            let margin = lift.map_or("-".into(), |lift| format!("{} {}", signed_down(lift, words), words.small_unit()));
            vec![line("set height", alike(heights), lift.map_or(NONE.into(), reached), margin)]
        }
        Solved::Width(None) => vec![line("width", "-".into(), "no opening has a width to change".into(), "-".into())],
        Solved::Width(Some(change)) => {
            // A pipe has a diameter: it stays as it is.
            let devices = given.groups.iter().map(|group| &group.size.device);
            let widths = || devices.clone().filter(|device| review::is_wide(device)).filter_map(Device::width);
            let now: Vec<_> = widths().map(|width| words.size(width)).collect();
            let holds = change.map_or_else(
                || format!("no width up to {} more holds", words.long(WIDEST)),
                |change| {
                    let at = widths().map(|width| format!("{} {}", words.depth_up(width + change), words.small_unit()));
                    format!("at least {}", alike(at.collect()))
                },
            );
            let margin =
                change.map_or("-".into(), |change| format!("{} {}", signed_up(change, words), words.small_unit()));
            vec![line("width", alike(now), holds, margin)]
        }
        Solved::Count(least) => {
            let of_group = |(group, least): (&crate::roof::GivenGroup, &Option<u32>)| {
                let holds = least.map_or(NONE.into(), |least| format!("at least {least}"));
                let margin = least.map_or("-".into(), |least| change(i64::from(least) - i64::from(group.count)));
                line(&format!("count of {}", words.name(&group.size)), group.count.to_string(), holds, margin)
            };
            given.groups.iter().zip(least).map(of_group).collect()
        }
        Solved::Limit { load, depth } => limits(roof, checked, *load, *depth, words),
        Solved::Blocked(more) => {
            let now: Vec<_> = roof.cases.iter().map(|case| case.blocked.to_string()).collect();
            let one = now.iter().all(|blocked| *blocked == now[0]);
            let now = if one { now[0].clone() } else { format!("{} by case", now.join(", ")) };
            let holds = match more {
                None => "fails as it is".into(),
                Some(0) => "no more in any case".into(),
                Some(more) => format!("at most {more} more in each case"),
            };
            vec![line("blocked", now, holds, more.map_or("-".into(), |more| change(i64::from(more))))]
        }
    }
}

/// How seldom the storm is that a layout just holds, where a rainfall table says.
fn return_period(roof: &Roof, most: Intensity) -> Option<Line> {
    let storm = &roof.storm;
    let longest = storm.rainfall.as_ref()?.return_periods().last().copied()?;
    // Never said to be more seldom than it is.
    let years = |period: ReturnPeriod| format!("{} years", trimmed((period.years() * 10.0 + 1e-6).floor() / 10.0, 1));
    let holds = match storm.recurrence(most)? {
        Recurrence::Once(period) => format!("up to once in {}; listed to {}", years(period), years(longest)),
        Recurrence::Oftener(period) => format!("not even once in {}, the least listed", years(period)),
        Recurrence::Rarer(period) => format!("once in {} and more seldom storms, the most listed", years(period)),
    };
    let given = storm.return_period.map_or("-".into(), |period| format!("once in {}", years(period)));
    Some(Line { unknown: "return period".into(), given, holds, margin: "-".into() })
}

fn limits(
    roof: &Roof,
    checked: &Checked<'_>,
    load: Option<Option<Load>>,
    depth: Option<Option<Length>>,
    words: Words,
) -> Vec<Line> {
    let limits = &roof.areas[checked.given.area].limits;
    let once = |mut texts: Vec<String>| {
        texts.dedup();
        list(&texts)
    };
    let line = |unknown: &str, now: Vec<String>, least: Option<Vec<String>>, margin: Option<String>| Line {
        unknown: unknown.into(),
        given: once(now),
        holds: least.map_or("no value holds: something else fails".into(), |least| format!("at least {}", once(least))),
        margin: margin.unwrap_or("-".into()),
    };
    let mut lines = Vec::new();
    if let Some(by) = load {
        let loads = || limits.iter().filter_map(|limits| limits.load);
        lines.push(line(
            "load limit",
            loads().map(|load| words.given_load(load)).collect(),
            by.map(|by| loads().map(|load| words.load_up(load + by)).collect()),
            by.map(|by| format!("{} {}", signed_load_up(by, words), words.load_unit())),
        ));
    }
    if let Some(by) = depth {
        let depths = || limits.iter().filter_map(|limits| limits.depth);
        let up = |depth: Length| format!("{} {}", words.depth_up(depth), words.small_unit());
        lines.push(line(
            "depth limit",
            depths().map(|depth| words.size(depth)).collect(),
            by.map(|by| depths().map(|depth| up(depth + by)).collect()),
            by.map(|by| format!("{} {}", signed_up(by, words), words.small_unit())),
        ));
    }
    lines
}

fn signed_load_up(load: Load, words: Words) -> String {
    let (scale, decimals) = if words.us() { (10.0, 1) } else { (100.0, 2) };
    let value = (words.in_load_unit(load) * scale - 1e-6).ceil() / scale;
    format!("{}{}", if value < 0.0 { "" } else { "+" }, words::grouped(value, decimals))
}

/// A change of a count.
fn change(by: i64) -> String {
    if by == 0 { "0".into() } else { format!("{by:+}") }
}

/// Texts of groups, or the one that all have.
fn alike(texts: Vec<String>) -> String {
    if texts.iter().all(|text| *text == texts[0]) { texts.into_iter().next().unwrap_or_default() } else { list(&texts) }
}

fn percent(part: f64) -> String {
    format!("{:+.1} %", (part * 1000.0).floor() / 10.0)
}

fn signed_down(length: Length, words: Words) -> String {
    let scale = if words.us() { 100.0 } else { 1.0 };
    let value = (words.small(length) * scale + 1e-6).floor() / scale;
    format!("{}{}", if value < 0.0 { "" } else { "+" }, trimmed(value, 2))
}

fn signed_up(length: Length, words: Words) -> String {
    let scale = if words.us() { 100.0 } else { 1.0 };
    let value = (words.small(length) * scale - 1e-6).ceil() / scale;
    format!("{}{}", if value < 0.0 { "" } else { "+" }, trimmed(value, 2))
}

fn csv(backsolved: &Backsolved<'_, '_>) -> String {
    let words = Words(backsolved.roof.system);
    let mut rows = vec![["area", "layout", "unknown", "as_given", "just_holds", "margin"].map(String::from).to_vec()];
    for (checked, solved) in backsolved.layouts {
        for line in solved.iter().flat_map(|solved| lines(backsolved.roof, checked, solved, words)) {
            let area = backsolved.roof.areas[checked.given.area].name.clone();
            rows.push(vec![area, checked.given.name.clone(), line.unknown, line.given, line.holds, line.margin]);
        }
    }
    written(&rows)
}

#[derive(Serialize)]
struct Document<'a> {
    format: &'static str,
    title: &'a str,
    layouts: Vec<OfLayout<'a>>,
    cautions: Vec<String>,
}

#[derive(Default, Serialize)]
struct OfLayout<'a> {
    area: &'a str,
    name: &'a str,
    passes: bool,
    groups: Vec<json::Group<'a>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    intensity_most_m_s: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    return_period_yr: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    area_most_m2: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    set_heights_up_m: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    widths_change_m: Option<f64>,
    #[serde(skip_serializing_if = "Vec::is_empty")]
    counts_least: Vec<Option<u32>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    load_limits_change_pa: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    depth_limits_change_m: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    blocked_more: Option<u32>,
    no_value_holds: Vec<&'static str>,
}

fn document(backsolved: &Backsolved<'_, '_>) -> String {
    let roof = backsolved.roof;
    let document = Document {
        format: "brimline backsolve 1",
        title: &roof.title,
        layouts: backsolved.layouts.iter().map(|(checked, solved)| of_layout(roof, checked, solved)).collect(),
        cautions: notes::cautions(&told(backsolved)),
    };
    let mut text = serde_json::to_string_pretty(&document).unwrap_or_default();
    text.push('\n');
    text
}

fn of_layout<'a>(roof: &'a Roof, checked: &'a Checked<'_>, solved: &[Solved]) -> OfLayout<'a> {
    let mut told = OfLayout {
        area: &roof.areas[checked.given.area].name,
        name: &checked.given.name,
        passes: checked.passes(),
        groups: json::groups(roof, checked.given.area, &checked.standing),
        ..OfLayout::default()
    };
    for solved in solved {
        tell(&mut told, solved);
        if let Solved::Rain(Some(most)) = solved
            && let Some(Recurrence::Once(period)) = roof.storm.recurrence(*most)
        {
            told.return_period_yr = Some(period.years());
        }
    }
    told
}

fn tell(told: &mut OfLayout<'_>, solved: &Solved) {
    let mut none = |name| told.no_value_holds.push(name);
    match solved {
        Solved::Rain(most) => {
            told.intensity_most_m_s = most.map(Intensity::m_per_s);
            most.is_none().then(|| none("rain"));
        }
        Solved::Area(most) => {
            told.area_most_m2 = most.map(Area::m2);
            most.is_none().then(|| none("area"));
        }
        Solved::SetHeight(up) => {
            told.set_heights_up_m = up.map(Length::m);
            up.is_none().then(|| none("set-height"));
        }
        Solved::Width(change) => {
            told.widths_change_m = change.flatten().map(Length::m);
            matches!(change, Some(None)).then(|| none("width"));
        }
        Solved::Count(least) => told.counts_least.clone_from(least),
        Solved::Limit { load, depth } => {
            told.load_limits_change_pa = load.flatten().map(Load::pa);
            told.depth_limits_change_m = depth.flatten().map(Length::m);
            matches!(load, Some(None)).then(|| none("load limit"));
            matches!(depth, Some(None)).then(|| none("depth limit"));
        }
        Solved::Blocked(more) => {
            told.blocked_more = *more;
            more.is_none().then(|| none("blocked"));
        }
    }
}
