//! Lengths given as one value, a list, or a range with a step.
//!
//! A range is walked in whole steps counted in whole nanometres: no running sum, and the last value belongs to it when it
//! falls on the grid. A range without a step is one of which every value may be had: it is walked in a coarse step, its end
//! included.

use crate::units::Length;

use super::height::{self, Datum};
use super::section::{Cell, Keys};

/// Most values that one grid may have, and most sizes in all catalogs.
pub(super) const MOST: usize = 1_000_000;

static RANGE: Keys = Keys { table: "a range", known: &["from", "to", "step"] };

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

/// A range of lengths, and the step in which it is walked.
#[derive(Clone, Copy, Debug)]
pub(super) struct Range {
    pub(super) from: Length,
    pub(super) to: Length,
    pub(super) step: Length,
    /// Whether the file gives no step: every value of the range may be had.
    pub(super) any: bool,
}

/// What becomes of a range without a step.
#[derive(Clone, Copy)]
enum Stepless {
    /// It is walked in this step, its end included.
    Walked(Length),
    /// It is refused, with what would pass.
    Refused(&'static str),
}

/// The values of a grid, rising, each once; never empty.
pub(super) fn lengths(cell: &Cell<'_>, least: Least) -> Option<Vec<Length>> {
    let help = "write from, to and step: { from = \"6 in\", to = \"12 in\", step = \"1 in\" }";
    read(cell, least, Stepless::Refused(help)).map(|(values, _)| values)
}

/// A dimension of a device that is made in certain sizes only.
pub(super) fn dimensions(cell: &Cell<'_>) -> Option<Vec<Length>> {
    let help =
        "write from, to and step: only widths of open scuppers, closed scuppers and roof edges are made to measure";
    read(cell, Least::AboveZero, Stepless::Refused(help)).map(|(values, _)| values)
}

/// Widths of a device that may be made to measure: a range without a step is walked in steps of `coarse`. Beside them the
/// range, where they are one.
pub(super) fn widths(cell: &Cell<'_>, coarse: Length) -> Option<(Vec<Length>, Option<Range>)> {
    read(cell, Least::AboveZero, Stepless::Walked(coarse))
}

/// Whether a value is a range without a step.
pub(super) fn is_stepless(cell: &Cell<'_>) -> bool {
    cell.section(&RANGE).is_some_and(|range| range.get("step").is_none())
}

fn read(cell: &Cell<'_>, least: Least, stepless: Stepless) -> Option<(Vec<Length>, Option<Range>)> {
    let one = |cell: &Cell<'_>| match least {
        Least::Zero => cell.length(),
        Least::AboveZero => cell.positive_length(),
        Least::Height(datum) => height::of_cell(cell, &datum),
    };
    if cell.is_table() {
        return range(cell, one, stepless).map(|(values, range)| (values, Some(range)));
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
    Some((values, None))
}

fn range(
    cell: &Cell<'_>,
    one: impl Fn(&Cell<'_>) -> Option<Length>,
    stepless: Stepless,
) -> Option<(Vec<Length>, Range)> {
    let range = cell.section(&RANGE)?;
    let ends = match stepless {
        Stepless::Walked(_) => "write both ends: { from = \"6 in\", to = \"48 in\" }, with a step or without",
        Stepless::Refused(help) => help,
    };
    let (from_cell, to_cell) = (range.need("from", ends), range.need("to", ends));
    let step = match stepless {
        Stepless::Walked(coarse) if range.get("step").is_none() => Some((coarse, true)),
        _ => range.need("step", ends).and_then(|cell| cell.positive_length()).map(|step| (step, false)),
    };
    let (from, to) = (from_cell.and_then(|cell| one(&cell)), to_cell.and_then(|cell| one(&cell)));
    let (from_cell, from, to) = (from_cell?, from?, to?);
    if from.nm() > to.nm() {
        from_cell.at_fault(
            format!("`from` stands above `to` in `{}`", cell.key),
            "this is the greater",
            "give the lesser value as `from`",
        );
        return None;
    }
    let (step, any) = step?;
    let steps = (to.nm() - from.nm()) / step.nm();
    if steps.unsigned_abs() >= MOST as u64 {
        let title = format!("`{}` makes {} values; up to {MOST} would pass", cell.key, steps.unsigned_abs() + 1);
        too_many(cell, title);
        return None;
    }
    let mut values: Vec<Length> = (0..=steps).map(|index| Length::from_nm(from.nm() + index * step.nm())).collect();
    if any && values.last().is_none_or(|last| last.nm() < to.nm()) {
        values.push(to);
    }
    Some((values, Range { from, to, step, any }))
}

/// Logs a grid that is too fine.
pub(super) fn too_many(cell: &Cell<'_>, title: String) {
    cell.at_fault(title, "too fine, or too wide", "give a coarser step or a narrower range");
}
