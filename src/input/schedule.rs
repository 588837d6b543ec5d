//! A schedule of given layouts: a CSV with a row for each group, the unit of each number in the head of its column.
//!
//! Rows of one area and one layout belong together, wherever they stand; a row's sill is given above the low point or as an
//! elevation.

use std::collections::hash_map::Entry as Entered;
use std::path::Path;
use std::sync::Arc;

use rustc_hash::FxHashMap;

use crate::device::Size;
use crate::roof::{Given, GivenGroup, MOST_OUTLETS};
use crate::units::Length;

use super::fault::{Fault, Log, Place, Source, Span};
use super::file;
use super::layout::{Against, Wanted};
use super::section::{Cell, any_of, near};
use super::setting::MOST_DEVICES;
use super::sheet::{Entry, is_headless, records, whole};

/// A column of a schedule.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Column {
    Area,
    Layout,
    Device,
    Count,
    Width,
    Height,
    Diameter,
    SetHeight,
    Elevation,
}

/// Every column by its name, with its unit in metres.
const COLUMNS: [(&str, Column, f64); 17] = [
    ("area", Column::Area, 0.0),
    ("layout", Column::Layout, 0.0),
    ("device", Column::Device, 0.0),
    ("count", Column::Count, 1.0),
    ("width_in", Column::Width, 0.0254),
    ("width_mm", Column::Width, 0.001),
    ("height_in", Column::Height, 0.0254),
    ("height_mm", Column::Height, 0.001),
    ("diameter_in", Column::Diameter, 0.0254),
    ("diameter_mm", Column::Diameter, 0.001),
    ("set_height_in", Column::SetHeight, 0.0254),
    ("set_height_mm", Column::SetHeight, 0.001),
    ("set_height_m", Column::SetHeight, 1.0),
    ("sill_elevation_ft", Column::Elevation, 0.3048),
    ("sill_elevation_in", Column::Elevation, 0.0254),
    ("sill_elevation_m", Column::Elevation, 1.0),
    ("sill_elevation_mm", Column::Elevation, 0.001),
];

/// Most that a number of a schedule may be, m.
const MOST: f64 = 1e6;

/// A schedule that is being read.
struct Schedule<'s, 'l> {
    source: &'s Arc<Source>,
    log: &'l Log,
    /// Where each column stands, and its unit.
    columns: Vec<(Column, f64)>,
}

/// The sizes that rows were of, by device and dimensions: a long schedule names few of them, again and again.
type Known<'t> = FxHashMap<(&'t str, [Option<i64>; 3]), Size>;

/// Adds the layouts of the schedule that a project names.
pub(super) fn read(against: &Against<'_>, path: &Path, named: &Cell<'_>, layouts: &mut Vec<Given>) -> Option<()> {
    let name = named.text()?;
    let log = named.reader.log;
    let source = file::read(&file::beside(path, name), name, Some(named), log)?;
    let mut rows = records(&source);
    let refuse = |span: Span, title: &str, help: &str| {
        log.put(Fault::error(title).at(&source, span, "here").help(help));
    };
    let Some(head) = rows.next() else {
        refuse(0..0, &format!("`{name}` is empty"), FORM);
        return None;
    };
    if is_headless(&head, &source, log, FORM) {
        return None;
    }
    let schedule = Schedule { source: &source, log, columns: columns(&head, &source, log)? };
    // The layouts of this file by area and name; a name that stands in another place already is told once.
    let mut places: FxHashMap<(usize, &str), usize> = FxHashMap::default();
    let mut known = Known::default();
    let before = layouts.len();
    let mut sound = true;
    for row in rows {
        let Some((area, layout, group)) = schedule.row(against, &row, &mut known) else {
            sound = false;
            continue;
        };
        let place = *places.entry((area, layout)).or_insert_with(|| {
            layouts.push(Given { name: layout.to_string(), area, groups: Vec::new() });
            layouts.len() - 1
        });
        let (given, others) = (&mut layouts[place].groups, place);
        if given.len() == MOST_OUTLETS {
            let help = "put openings of one size and one height into one row";
            refuse(whole(&row), &format!("a layout has at most {MOST_OUTLETS} groups"), help);
            sound = false;
            continue;
        }
        given.push(group);
        if given_twice(&layouts[..before], &layouts[others]) {
            refuse(
                whole(&row),
                "a layout of this name is given elsewhere",
                "give each layout of an area a name of its own",
            );
            sound = false;
        }
    }
    sound.then_some(())
}

fn given_twice(before: &[Given], layout: &Given) -> bool {
    layout.groups.len() == 1 && before.iter().any(|known| known.area == layout.area && known.name == layout.name)
}

const FORM: &str = "a schedule has the columns area, layout, device, count and a set height, such as `set_height_in`";

fn columns(head: &[Entry<'_>], source: &Arc<Source>, log: &Log) -> Option<Vec<(Column, f64)>> {
    let refuse =
        |span: Span, title: String, help: String| log.put(Fault::error(title).at(source, span, "here").help(help));
    let mut columns: Vec<(Column, f64)> = Vec::new();
    let mut sound = true;
    for entry in head {
        let Some(&(name, column, unit)) = COLUMNS.iter().find(|(name, _, _)| *name == entry.text) else {
            let names: Vec<&str> = COLUMNS.iter().map(|(name, _, _)| *name).collect();
            // "width" lacks its unit, and which is not guessed.
            let without_unit =
                names.iter().any(|name| name.strip_prefix(entry.text).is_some_and(|rest| rest.starts_with('_')));
            let did_you = match near(entry.text, names.iter().copied()) {
                _ if without_unit => "a column's head has the unit: ".to_string(),
                Some(near) => format!("did you mean `{near}`? "),
                None => String::new(),
            };
            refuse(
                entry.span.clone(),
                format!("unknown column `{}`", entry.text),
                format!("{did_you}{} would pass", any_of(&names)),
            );
            sound = false;
            continue;
        };
        let heights = |column| matches!(column, Column::SetHeight | Column::Elevation);
        if columns.iter().any(|&(known, _)| known == column || (heights(known) && heights(column))) {
            refuse(
                entry.span.clone(),
                format!("`{name}` says again what another column says"),
                "give each once".into(),
            );
            sound = false;
        }
        columns.push((column, unit));
    }
    let has = |column| columns.iter().any(|&(known, _)| known == column);
    let complete = has(Column::Area)
        && has(Column::Layout)
        && has(Column::Device)
        && has(Column::Count)
        && (has(Column::SetHeight) || has(Column::Elevation));
    if sound && !complete {
        refuse(whole(head), "a column is missing".into(), FORM.into());
    }
    (sound && complete).then_some(columns)
}

impl Schedule<'_, '_> {
    fn refuse(&self, span: Span, fault: Fault) {
        let place = Place { source: Arc::clone(self.source), span, label: "here".into() };
        let mut fault = fault;
        fault.places.insert(0, place);
        self.log.put(fault);
    }

    /// One row: its area, the name of its layout, and its group.
    fn row<'t>(
        &self,
        against: &Against<'_>,
        row: &[Entry<'t>],
        known: &mut Known<'t>,
    ) -> Option<(usize, &'t str, GivenGroup)> {
        if row.len() != self.columns.len() {
            let title = format!("this row has {} cells; the head has {}", row.len(), self.columns.len());
            self.refuse(whole(row), Fault::error(title).help("a comma parts cells: put names with a comma in quotes"));
            return None;
        }
        let cell = |wanted: Column| {
            let at = self.columns.iter().position(|&(column, _)| column == wanted);
            at.map(|at| (&row[at], self.columns[at].1)).filter(|(entry, _)| !entry.text.is_empty())
        };
        let needed = |wanted: Column| {
            let found = cell(wanted);
            if found.is_none() {
                self.refuse(whole(row), Fault::error("a cell is empty that every row needs").help(FORM));
            }
            found
        };
        let number = |(entry, unit): (&Entry<'_>, f64), above_zero: bool| {
            let value = entry.text.parse::<f64>().ok().map(|value| value * unit).filter(|value| value.abs() <= MOST);
            let fits = value.filter(|&value| if above_zero { value > 0.0 } else { true });
            if fits.is_none() {
                let wanted = if above_zero { "a number above zero belongs here" } else { "a number belongs here" };
                let fault = Fault::error(format!("`{}`: {wanted}", entry.text));
                self.refuse(entry.span.clone(), fault.help("the unit stands in the column's head"));
            }
            fits.map(|metres| Length::from_m(metres).on_grid())
        };
        let dimension = |wanted: Column| match cell(wanted) {
            None => Some(None),
            Some(found) => number(found, true).map(Some),
        };
        let (area, layout, device) = (needed(Column::Area)?.0, needed(Column::Layout)?.0, needed(Column::Device)?.0);
        let area = against.area(area.text, |fault| self.refuse(area.span.clone(), fault))?;
        let wanted = Wanted {
            width: dimension(Column::Width)?,
            height: dimension(Column::Height)?,
            diameter: dimension(Column::Diameter)?,
        };
        let size = match known.entry((device.text, wanted.nm())) {
            Entered::Occupied(known) => known.get().clone(),
            Entered::Vacant(unknown) => match against.size(device.text, wanted) {
                Ok(size) => unknown.insert(size).clone(),
                Err(fault) => {
                    self.refuse(device.span.clone(), fault);
                    return None;
                }
            },
        };
        let count = needed(Column::Count)?.0;
        let Some(whole) = count.text.parse::<u32>().ok().filter(|count| (1..=MOST_DEVICES).contains(count)) else {
            let fault = Fault::error(format!("`{}` is not a whole number from 1 to {MOST_DEVICES}", count.text));
            self.refuse(count.span.clone(), fault.help("say how many of them there are"));
            return None;
        };
        let set_height =
            self.set_height(against, row, area, cell(Column::SetHeight), cell(Column::Elevation), number)?;
        Some((area, layout.text, GivenGroup { size, count: whole, set_height }))
    }

    /// The height of a row's sill above the low point.
    fn set_height<'e>(
        &self,
        against: &Against<'_>,
        row: &[Entry<'_>],
        area: usize,
        height: Option<(&'e Entry<'e>, f64)>,
        elevation: Option<(&'e Entry<'e>, f64)>,
        number: impl Fn((&Entry<'_>, f64), bool) -> Option<Length>,
    ) -> Option<Length> {
        let (entry, above_low_point) = match (height, elevation) {
            (Some(found), _) => (found.0, number(found, false)?),
            (None, Some(found)) => {
                let Some(low_point) = against.areas[area].surface.low_point else {
                    let fault =
                        Fault::error(format!("`{}` has no elevation of its low point", against.areas[area].name));
                    self.refuse(found.0.span.clone(), fault.help("give the area low_point = \"102.40 ft\""));
                    return None;
                };
                (found.0, (number(found, false)? - low_point).on_grid())
            }
            (None, None) => {
                self.refuse(whole(row), Fault::error("a row has no set height").help(FORM));
                return None;
            }
        };
        if above_low_point < Length::ZERO {
            let fault = Fault::error("a sill lies under the low point");
            self.refuse(entry.span.clone(), fault.help("heights are zero or more above the low point"));
            return None;
        }
        Some(above_low_point)
    }
}
