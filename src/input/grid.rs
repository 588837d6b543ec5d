//! Lengths given as one value, a list, or a range with a step.
//!
//! A range is walked in whole steps counted in whole nanometres: no running sum, and the last value belongs to it when it
//! falls on the grid.

use crate::units::Length;

use super::height::{self, Datum};
use super::section::{Cell, Keys};

/// Most values that one grid may have, and most sizes in all catalogs.
pub(super) const MOST: usize = 1_000_000;

static RANGE: Keys = Keys { table: "a range", known: &["from", "to", "step"], unsupported: &[] };

/// What values a grid may have.
#[derive(Clone, Copy)]
pub(super) enum Least {
    /// Zero and more.
    Zero,
    /// Above zero only.
    AboveZero,
    /// Heights in an area, zero and more above its low point, from wherever they count.
    Height(Datum),
}

/// The values of a grid, rising, each once; never empty.
pub(super) fn lengths(cell: &Cell<'_>, least: Least) -> Option<Vec<Length>> {
    let one = |cell: &Cell<'_>| match least {
        Least::Zero => cell.length(),
        Least::AboveZero => cell.positive_length(),
        Least::Height(datum) => height::of_cell(cell, &datum),
    };
    if cell.is_table() {
        let range = cell.section(&RANGE)?;
        let part =
            |key| range.need(key, "write from, to and step: { from = \"6 in\", to = \"12 in\", step = \"1 in\" }");
        let (from_cell, to_cell, step_cell) = (part("from"), part("to"), part("step"));
        let (from, to) = (from_cell.and_then(|cell| one(&cell)), to_cell.and_then(|cell| one(&cell)));
        let step = step_cell.and_then(|cell| cell.positive_length());
        let (from_cell, from, to) = (from_cell?, from?.nm(), to?.nm());
        if from > to {
            from_cell.at_fault(
                format!("`from` stands above `to` in `{}`", cell.key),
                "this is the greater",
                "give the lesser value as `from`",
            );
            return None;
        }
        let step = step?.nm();
        let steps = (to - from) / step;
        if steps.unsigned_abs() >= MOST as u64 {
            let title = format!("`{}` makes {} values; up to {MOST} would pass", cell.key, steps.unsigned_abs() + 1);
            too_many(cell, title);
            return None;
        }
        return Some((0..=steps).map(|index| Length::from_nm(from + index * step)).collect());
    }
    let items = cell.items();
    if items.is_empty() {
        cell.at_fault(format!("`{}` is an empty list", cell.key), "no value stands here", "give at least one value");
        return None;
    }
    let values: Vec<Option<Length>> = items.iter().map(one).collect();
    let mut values: Vec<Length> = values.into_iter().collect::<Option<_>>()?;
    values.sort_by_key(|length| length.nm());
    values.dedup();
    Some(values)
}

/// Logs a grid that is too fine.
pub(super) fn too_many(cell: &Cell<'_>, title: String) {
    cell.at_fault(title, "too fine, or too wide", "give a coarser step or a narrower range");
}
