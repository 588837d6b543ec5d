//! What a step of each input does to the load of a given layout, the greatest first.

use crate::review::{Checked, Effect, Input, Sensitivity, Tolerances};
use crate::roof::Roof;
use crate::units::{Length, Load};

use super::page::{Block, Table};
use super::words::{Words, trimmed};

pub(super) fn blocks(
    roof: &Roof,
    checked: &Checked<'_>,
    found: &Sensitivity,
    tolerances: &Tolerances,
    words: Words,
) -> Vec<Block> {
    let name = &checked.given.name;
    let case = &roof.cases[found.case].name;
    let Some(base) = found.load.filter(|load| load.pa().is_finite()) else {
        let how = if found.load.is_some() { "unstable under water" } else { "overwhelmed" };
        return vec![Block::Text(format!("\"{name}\" is {how} in \"{case}\" as it is: no step says more."))];
    };
    let column = |tell: &dyn Fn(&Effect) -> String| found.effects.iter().map(tell).collect::<Vec<_>>();
    let table = Table::of(vec![
        ("input".into(), false, column(&|effect| input(effect))),
        ("step".into(), false, column(&|effect| step(effect, 1.0, tolerances, words))),
        (
            format!("load {}", words.load_unit()),
            true,
            column(&|effect| effect.load.map_or("overwhelmed".into(), |load| words.bare_load(load))),
        ),
        ("change".into(), true, column(&|effect| effect.load.map_or("-".into(), |load| change(load - base, words)))),
        ("every case".into(), false, column(&|effect| holds(roof, effect))),
        (
            "a limit breaks past".into(),
            false,
            column(&|effect| effect.holds.map_or("-".into(), |many| step(effect, many, tolerances, words))),
        ),
    ]);
    let corner = match found.corner.worst {
        Some((load, case)) => format!("{} in \"{}\"", words.load(load), roof.cases[case].name),
        None => "overwhelmed".into(),
    };
    let broken = holds(roof, &found.corner);
    let corner = format!(
        "All of rain, area, width, sill and discharge at once, the worst that these tolerances can do: {corner}; every case: {broken}.",
    );
    vec![
        Block::Text(format!("\"{name}\", {} in \"{case}\", one step for the worse at a time:", words.load(base))),
        Block::Table(table),
        Block::Text(corner),
    ]
}

/// The input in one or two words.
pub(super) fn input(effect: &Effect) -> String {
    match effect.input {
        None => "all at once".into(),
        Some(Input::Rain) => "rain".into(),
        Some(Input::Area) => "area".into(),
        Some(Input::Width) => "clear width".into(),
        Some(Input::Sill) => "sills".into(),
        Some(Input::Discharge) => "discharge".into(),
        Some(Input::Blocked(_)) => "blocked".into(),
        Some(Input::Law(_)) => "flow law".into(),
    }
}

/// So many steps of an input.
fn step(effect: &Effect, many: f64, tolerances: &Tolerances, words: Words) -> String {
    let percent = |part: f64| trimmed((part * many * 1000.0).floor() / 10.0, 1);
    let length = |length: Length| format!("{} {}", words.depth_down(length * many), words.small_unit());
    match effect.input {
        None => "-".into(),
        Some(Input::Rain) => format!("+ {} %", percent(tolerances.rain)),
        Some(Input::Area) => format!("+ {} %", percent(tolerances.area)),
        Some(Input::Width) => format!("- {}", length(tolerances.width)),
        Some(Input::Sill) => format!("+ {}", length(tolerances.sill)),
        Some(Input::Discharge) => format!("- {} %", percent(tolerances.discharge)),
        Some(Input::Blocked(more)) => format!("{more} more"),
        Some(Input::Law(law)) => law.name().into(),
    }
}

fn change(by: Load, words: Words) -> String {
    let value = words.in_load_unit(by);
    let decimals = if words.us() { 1 } else { 2 };
    format!("{value:+.decimals$}")
}

fn holds(roof: &Roof, effect: &Effect) -> String {
    effect.breaks.map_or("holds".into(), |case| format!("breaks in \"{}\"", roof.cases[case].name))
}
