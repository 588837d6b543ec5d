//! What the storage of a roof would do, beside the caution that nobody may count on it.

use serde::Serialize;

use crate::review::{Checked, DRAINED, Routed, Storage};
use crate::roof::{Catchment, Roof};
use crate::units::{Length, Time};

use super::page::{Block, Table};
use super::words::{self, Words, grouped, trimmed};

/// What a report says where the storm cannot be routed.
const MISSING: &str = "the duration of the storm: give [storm] duration = \"15 min\"";

/// The layouts of one area with what storage does for each, in every case.
pub(super) fn blocks(
    roof: &Roof,
    area: usize,
    routed: &[(&Checked<'_>, &[Option<Routed>])],
    storage: &Storage,
    words: Words,
) -> Vec<Block> {
    if !is_any_routed(storage) {
        return vec![Block::Text(format!("With storage on the roof: not routed, for want of {MISSING}."))];
    }
    let head = format!(
        "With storage on the roof, a second opinion that changes no verdict: the storm of each case as one block, {}.",
        held(&roof.areas[area], words)
    );
    let foot = format!(
        "Codes give no credit for storage: size by the steady level. A longer storm of less rain may stand higher than this \
         block, and a roof may be wet when it begins. Drained is {} above the lowest sill that passes water, counted from \
         the end of the storm.",
        words.size(DRAINED)
    );
    vec![Block::Text(head), Block::Table(table(roof, routed, words)), Block::Text(foot)]
}

/// Whether any case's storm has a duration.
fn is_any_routed(storage: &Storage) -> bool {
    storage.layouts.iter().flatten().any(Option::is_some)
}

/// How water is held on an area.
fn held(area: &Catchment, words: Words) -> String {
    match area.surface.rise.filter(|rise| rise.slope > 0.0) {
        Some(rise) => {
            format!("water held as a wedge on {}, {} up to the wall", words.area(area.area), words.size(rise.at_wall()))
        }
        None => format!("water held on {} as if level", words.area(area.area)),
    }
}

fn table(roof: &Roof, routed: &[(&Checked<'_>, &[Option<Routed>])], words: Words) -> Table {
    let rows = || {
        routed.iter().flat_map(|(checked, cases)| {
            cases.iter().enumerate().map(move |(case, routed)| (checked.given.name.as_str(), case, routed))
        })
    };
    let column = |tell: &dyn Fn(&Routed) -> String| {
        rows().map(|(_, _, routed)| routed.as_ref().map_or("not routed".into(), tell)).collect::<Vec<_>>()
    };
    let mut columns = vec![
        ("layout".to_string(), false, rows().map(|(name, _, _)| name.to_string()).collect::<Vec<_>>()),
        ("case".into(), false, rows().map(|(_, case, _)| roof.cases[case].name.clone()).collect()),
        ("rain for".into(), true, column(&|routed| words::duration(routed.duration))),
        (
            format!("steady {}", words.small_unit()),
            true,
            column(&|routed| routed.steady.map_or("overwhelmed".into(), |level| words.bare_depth(level))),
        ),
        (format!("peak {}", words.small_unit()), true, column(&|routed| words.bare_depth(routed.peak))),
        ("at the sill after".into(), false, column(&fills)),
        ("drained after".into(), false, column(&|routed| routed.drains.map_or("-".into(), time))),
    ];
    if roof.cases.len() == 1 {
        columns.retain(|(head, _, _)| head != "case");
    }
    Table::of(columns)
}

fn fills(routed: &Routed) -> String {
    match routed.fills {
        None => "no sill passes water".into(),
        Some(fills) if fills >= routed.duration => format!("{}: not in this storm", time(fills)),
        Some(fills) => time(fills),
    }
}

/// A time to the minute's tenth, in hours from two hours on.
fn time(time: Time) -> String {
    let minutes = time.s() / 60.0;
    if minutes < 120.0 { format!("{} min", grouped(minutes, 1)) } else { format!("{} h", trimmed(minutes / 60.0, 1)) }
}

/// What storage does for a layout.
#[derive(Serialize)]
pub(super) struct OfLayout<'a> {
    credit: &'static str,
    drained_above_sill_m: f64,
    #[serde(skip_serializing_if = "Option::is_none")]
    missing: Option<&'static str>,
    cases: Vec<OfCase<'a>>,
}

#[derive(Serialize)]
struct OfCase<'a> {
    name: &'a str,
    duration_s: f64,
    steady_level_m: Option<f64>,
    peak_level_m: f64,
    sill_m: Option<f64>,
    reaches_sill: bool,
    fills_to_sill_s: Option<f64>,
    drains_s: Option<f64>,
}

/// What storage does for a layout, for other programs.
pub(super) fn of_layout<'a>(roof: &'a Roof, storage: &Storage, routed: &[Option<Routed>]) -> OfLayout<'a> {
    let of_case = |(case, routed): (usize, &Routed)| OfCase {
        name: &roof.cases[case].name,
        duration_s: routed.duration.s(),
        steady_level_m: routed.steady.map(Length::m),
        peak_level_m: routed.peak.m(),
        sill_m: routed.sill.map(Length::m),
        reaches_sill: routed.drains.is_some() || routed.sill.is_some_and(|sill| routed.peak > sill),
        fills_to_sill_s: routed.fills.map(Time::s),
        drains_s: routed.drains.map(Time::s),
    };
    OfLayout {
        credit: "none: codes size by the steady level",
        drained_above_sill_m: DRAINED.m(),
        missing: (!is_any_routed(storage)).then_some(MISSING),
        cases: routed.iter().enumerate().filter_map(|(case, routed)| Some(of_case((case, routed.as_ref()?)))).collect(),
    }
}
