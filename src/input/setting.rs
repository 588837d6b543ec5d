//! What an area is read against: the cases, the search and the laws of its project; and what both are made of.

use std::ops::RangeInclusive;

use rustc_hash::FxHashMap;

use crate::device::Choice;
use crate::device::Law;
use crate::roof::{Case, Limits, Risk};
use crate::search::{Criterion, PlanAsked};
use crate::units::{Dimension, Length, Load};

use super::catalog::Catalogs;
use super::fault::{Fault, Span};
use super::section::{Cell, Keys, Section, optional};

static LIMIT: Keys = Keys { table: "a limit", known: &["load", "depth"] };

static COUNT_RANGE: Keys = Keys { table: "`count`", known: &["from", "to"] };

/// Most devices of one area that a file may ask for.
pub(super) const MOST_DEVICES: u32 = 10_000;

/// A case as the file gives it, with where its name and its blocking stand.
pub(super) struct GivenCase {
    pub(super) case: Case,
    pub(super) limits: Limits,
    pub(super) blocked_at: Option<Span>,
}

/// The cases that can be read, and the names of all.
pub(super) struct Cases {
    pub(super) given: Vec<GivenCase>,
    pub(super) names: Vec<String>,
    /// Whether the name of every case is known, and whether every case can be read.
    pub(super) names_complete: bool,
    pub(super) complete: bool,
}

/// What of the project an area is read against; none where it is at fault, which is told where it stands.
pub(super) struct Setting<'s> {
    pub(super) cases: &'s Cases,
    pub(super) limits: Option<Limits>,
    pub(super) search: &'s Search,
    /// The flow laws chosen; none where they are at fault.
    pub(super) choice: Option<Choice>,
    pub(super) catalogs: &'s Catalogs,
    /// Risk category of areas that give none.
    pub(super) risk: Option<Option<Risk>>,
    /// Whether layouts can only be searched for: the project gives none.
    pub(super) searched: bool,
}

/// What is asked of the search; none where a value is at fault.
pub(super) struct Search {
    pub(super) rank_by: Option<Vec<Criterion>>,
    pub(super) keep: Option<u32>,
    pub(super) mix: Option<u32>,
    pub(super) freeboard: Option<Option<Length>>,
    /// What is asked of the whole roof, where that is asked for.
    pub(super) plan: Option<Option<PlanAsked>>,
    /// Laws under each of which every case is held; none for that of the project alone.
    pub(super) laws: Option<Vec<Law>>,
    pub(super) count: Option<RangeInclusive<u32>>,
    /// Whether all that comes in a range of widths is made to measure.
    pub(super) made_to_measure: Option<bool>,
    /// Step that made widths are rounded up to; an inner none where none is given.
    pub(super) round: Option<Option<Length>>,
    /// An inner none where no set heights are given for the roof.
    pub(super) set_heights: Option<Option<Vec<Length>>>,
    pub(super) rank_by_at: Option<Span>,
    pub(super) count_at: Option<Span>,
}

/// The limits of a table under a key that is a limit.
pub(super) fn limits_of(cell: &Cell<'_>) -> Option<Limits> {
    read_limits(&cell.section(&LIMIT)?)
}

fn read_limits(section: &Section<'_>) -> Option<Limits> {
    let load = section.get("load").map(|cell| cell.positive(Dimension::Load, Load::pa));
    let depth = section.get("depth").map(|cell| cell.positive_length());
    if load.is_none() && depth.is_none() {
        section.missing("a limit is empty", "give load = \"30 psf\", depth = \"5.5 in\", or both");
        return None;
    }
    Some(Limits { load: optional(load)?, depth: optional(depth)? })
}

/// A count: one whole number, or a range with both its ends.
pub(super) fn read_count(cell: &Cell<'_>) -> Option<RangeInclusive<u32>> {
    if !cell.is_table() {
        return cell.whole(1, MOST_DEVICES).map(|exactly| exactly..=exactly);
    }
    let range = cell.section(&COUNT_RANGE)?;
    let end = |key| {
        range.need(key, "write both ends: count = { from = 2, to = 8 }").and_then(|cell| cell.whole(1, MOST_DEVICES))
    };
    let (from, to) = (end("from"), end("to"));
    let (from, to) = (from?, to?);
    if from > to {
        let at = range.get("from").or(range.get("to")).unwrap_or(*cell);
        at.at_fault(
            format!("`count` runs from {from} to {to}"),
            "the least is above the greatest",
            "give the lesser number as `from`",
        );
        return None;
    }
    Some(from..=to)
}

/// Whether a table of a list has a name, be it one that another has too.
pub(super) fn is_named(table: Option<&Section<'_>>) -> bool {
    table.and_then(|table| table.get("name")).and_then(|cell| cell.text()).is_some()
}

/// Names met so far, with where each stands first.
pub(super) type Names = FxHashMap<String, Span>;

/// A name that nothing else of its sort has.
pub(super) fn unique(cell: &Cell<'_>, names: &mut Names, sort: &str) -> Option<String> {
    let name = cell.text()?;
    if let Some(first) = names.get(name) {
        let fault = Fault::error(format!("two {sort}s have the name `{name}`"))
            .at(cell.reader.source, cell.span(), "again here")
            .at(cell.reader.source, first.clone(), "first here")
            .help(format!("give every {sort} a name of its own"));
        cell.reader.log.put(fault);
        return None;
    }
    names.insert(name.to_string(), cell.span());
    Some(name.to_string())
}
