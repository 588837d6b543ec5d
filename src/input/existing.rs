//! What is there already in an area: groups of its own, or a layout of the project by its name.
//!
//! It is read as a given layout is, and costs nothing. Whether it could be built so is not asked: it stands. Where the area has
//! `replace` of its own a search may close it, device by device.

use std::path::Path;

use crate::roof::{Catchment, Given, GivenGroup, MOST_GROUPS, MOST_OUTLETS};
use crate::rules;
use crate::units::Money;

use super::area::AREA;
use super::catalog::Catalogs;
use super::layout::Against;
use super::section::{Cell, Section, any_of, near};

/// Most groups that are there already: a layout of the search fits beside them.
const MOST: usize = MOST_OUTLETS - MOST_GROUPS;

/// Most ways of closing what is there that a search tries: of each group none of it, or one more, up to all.
const MOST_WAYS: u64 = 10_000;

/// What belongs under the key.
const WANTED: &str = "the name of a layout, or a list, such as [{ device = \"RS\", width = \"12 in\", height = \"4 in\", count = 2, set_height = \"2 in\" }]";

/// What of the project does not go together with leave to close what is there, in the words of its keys.
pub(super) struct Beside {
    /// Few sizes on the whole roof.
    pub(super) plan: bool,
    /// Openings made to measure.
    pub(super) measure: bool,
}

/// What is there in each area, in their order; none where that of one is at fault.
pub(super) fn read_all(
    path: &Path,
    project: &Section<'_>,
    areas: &[Catchment],
    catalogs: &Catalogs,
    layouts: &[Given],
    beside: &Beside,
) -> Option<Vec<Vec<GivenGroup>>> {
    let tables = project.sections("area", &AREA, "a list of areas, each under [[area]]").unwrap_or_default();
    let against = Against::new(areas, catalogs);
    let of_area = |(area, table): (usize, &Option<Section<'_>>)| {
        let Some(cell) = table.as_ref().and_then(|table| table.get("existing")) else { return Some(Vec::new()) };
        let groups = match cell.as_text() {
            Some(name) => named(&cell, name, &areas[area], area, layouts),
            None => against.groups(path, table.as_ref()?, "existing", WANTED, area),
        }?;
        let closing = table.as_ref().and_then(|table| table.get("replace"));
        let few = closing.as_ref().is_none_or(|closing| few_ways(closing, &groups));
        let heeded = closing.is_none() || goes_together(&cell, beside);
        (fits(&cell, &areas[area], &groups) && few && heeded).then(|| groups.into_iter().map(free).collect())
    };
    let all: Vec<Option<Vec<GivenGroup>>> = tables.iter().enumerate().map(of_area).collect();
    all.into_iter().collect()
}

/// It costs nothing, and is as wide as it is.
fn free(mut group: GivenGroup) -> GivenGroup {
    group.size.price = Some(Money::default());
    group.size.made = None;
    group
}

/// The groups of a layout of the area.
fn named(cell: &Cell<'_>, name: &str, area: &Catchment, index: usize, layouts: &[Given]) -> Option<Vec<GivenGroup>> {
    let here = || layouts.iter().filter(|layout| layout.area == index);
    let found = here().find(|layout| layout.name == name).map(|layout| layout.groups.clone());
    if found.is_none() {
        let names: Vec<&str> = here().map(|layout| layout.name.as_str()).take(12).collect();
        let did_you =
            near(name, names.iter().copied()).map_or(String::new(), |near| format!("did you mean \"{near}\"? "));
        let help = if names.is_empty() {
            "give a [[layout]] of this name and area, or the groups themselves".to_string()
        } else {
            format!("{did_you}layouts of the area are {}", any_of(&names))
        };
        cell.at_fault(format!("`{}` has no layout `{name}`", area.name), "not a layout of this area", help);
    }
    found
}

/// Whether the search can work with it: not too many groups, and no more openings than the edge has room for.
fn fits(cell: &Cell<'_>, area: &Catchment, groups: &[GivenGroup]) -> bool {
    if groups.len() > MOST {
        let label = format!("{} stand here", groups.len());
        let help = "put openings of one size and one height into one group";
        cell.at_fault(format!("at most {MOST} groups are there already"), label, help);
        return false;
    }
    let used = rules::edge_used(groups.iter().map(|group| (&group.size, group.count)), area);
    let over = area.edge.is_some_and(|edge| used > edge.nm());
    if over {
        cell.at_fault(
            format!("what is there in `{}` takes more edge than it has", area.name),
            "with the gaps between openings",
            "give the length of parapet that these openings stand in as well, or a lesser gap",
        );
    }
    !over
}

/// Whether the ways of closing some of it are few enough to be tried.
fn few_ways(closing: &Cell<'_>, groups: &[GivenGroup]) -> bool {
    let ways = groups.iter().fold(1_u64, |ways, group| ways.saturating_mul(u64::from(group.count) + 1));
    if ways > MOST_WAYS {
        closing.at_fault(
            format!("what is there may be closed in more than {MOST_WAYS} ways"),
            "each is tried",
            "put openings of one size and one height into one group, or take `replace` out of the area",
        );
    }
    ways <= MOST_WAYS
}

/// Whether nothing is asked for that does not heed leave to close what is there.
fn goes_together(cell: &Cell<'_>, beside: &Beside) -> bool {
    let asked = [
        (beside.plan, "a plan of few sizes", "take `sizes` and `size_price` out"),
        (
            beside.measure,
            "openings made to measure",
            "take `made_to_measure` out and give every range of widths a step",
        ),
    ];
    let refused = |&(asked, what, help): &(bool, &str, &str)| {
        if asked {
            let title = format!("{what} and leave to close what is there do not go together in this version");
            cell.at_fault(title, "may be closed by `replace`", format!("{help}, or take `replace` out of the area"));
        }
        asked
    };
    asked.iter().filter(|&asked| refused(asked)).count() == 0
}
