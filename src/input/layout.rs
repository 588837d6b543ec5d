//! Given layouts: each a `[[layout]]` of the project, or rows of a schedule that it names.
//!
//! A group is of a catalog's device, with the catalog's dimensions or with others, or of a device described in place. A
//! schedule has a row for each group, the unit of each number in the head of its column; rows of one area and one layout
//! belong together.

use std::collections::HashMap;
use std::path::Path;
use std::sync::Arc;

use crate::device::{Device, Size};
use crate::roof::{Catchment, Given, GivenGroup, MOST_OUTLETS};
use crate::units::Length;

use super::catalog::{self, Catalogs};
use super::fault::{Fault, Log, Source, Span};
use super::file;
use super::height::{self, Datum};
use super::section::{Cell, Keys, Section, any_of, near};
use super::setting::MOST_DEVICES;
use super::sheet::{Entry, is_headless, records, whole};

static LAYOUT: Keys = Keys { table: "a [[layout]]", known: &["name", "area", "groups", "note"], unsupported: &[] };

static GROUP: Keys = Keys {
    table: "a group",
    known: &[
        "device",
        "count",
        "set_height",
        "width",
        "height",
        "diameter",
        "kind",
        "tag",
        "dam",
        "dam_height",
        "free_area",
        "place",
        "rating",
        "interpolation",
        "law",
        "screen",
        "leader",
        "conductor_head",
        "price",
        "source",
        "note",
    ],
    unsupported: &[],
};

/// Dimensions that a group asks of a catalog's device; none where it does not say.
#[derive(Clone, Copy, Debug, Default)]
struct Wanted {
    width: Option<Length>,
    height: Option<Length>,
    diameter: Option<Length>,
}

/// What a layout is read against.
pub(super) struct Against<'s> {
    areas: &'s [Catchment],
    by_name: HashMap<&'s str, usize>,
    sizes: &'s [Size],
    by_tag: HashMap<&'s str, Vec<usize>>,
    /// Whether all catalogs were read: only then is a device known to be in none.
    complete: bool,
}

/// Every layout that the project gives; none where one is at fault.
pub(super) fn read_all(
    path: &Path,
    project: &Section<'_>,
    areas: &[Catchment],
    catalogs: &Catalogs,
) -> Option<Vec<Given>> {
    let against = Against::new(areas, catalogs);
    let mut layouts = Vec::new();
    let mut sound = true;
    if project.get("layout").is_some() {
        let tables = project.sections("layout", &LAYOUT, "a list of layouts, each under [[layout]]");
        sound &= tables.is_some();
        for table in tables.unwrap_or_default() {
            match table.and_then(|table| against.layout(path, &table, &layouts)) {
                Some(layout) => layouts.push(layout),
                None => sound = false,
            }
        }
    }
    for cell in project.get("schedule").map_or(Vec::new(), |cell| cell.items()) {
        sound &= against.schedule(path, &cell, &mut layouts).is_some();
    }
    sound.then_some(layouts)
}

impl<'s> Against<'s> {
    pub(super) fn new(areas: &'s [Catchment], catalogs: &'s Catalogs) -> Self {
        let mut by_tag: HashMap<&str, Vec<usize>> = HashMap::new();
        for (index, size) in catalogs.sizes.iter().enumerate() {
            by_tag.entry(&size.tag).or_default().push(index);
        }
        let by_name = areas.iter().enumerate().map(|(index, area)| (area.name.as_str(), index)).collect();
        Self { areas, by_name, sizes: &catalogs.sizes, by_tag, complete: catalogs.complete }
    }
}

impl Against<'_> {
    /// The groups under a key of a table; none where one is at fault.
    pub(super) fn groups(
        &self,
        path: &Path,
        table: &Section<'_>,
        key: &'static str,
        wanted: &str,
        area: usize,
    ) -> Option<Vec<GivenGroup>> {
        let groups = table.sections(key, &GROUP, wanted)?;
        let read = |group: &Option<Section<'_>>| self.group(path, group.as_ref()?, area);
        // All are read, so that every fault is told.
        let groups: Vec<Option<GivenGroup>> = groups.iter().map(read).collect();
        groups.into_iter().collect()
    }

    fn layout(&self, path: &Path, table: &Section<'_>, before: &[Given]) -> Option<Given> {
        let _ = table.get("note").and_then(|cell| cell.text());
        let name = table.need("name", "name the layout: name = \"as drawn\"");
        let area = table
            .need("area", "name the area that it drains: area = \"north bay\"")
            .and_then(|cell| self.area(cell.text()?, |fault| put(&cell, fault)));
        let wanted = "a list, such as [{ device = \"RS\", width = \"12 in\", height = \"4 in\", count = 2, set_height = \"2 in\" }]";
        if table.get("groups").is_none() {
            table.missing(
                "`groups` is missing in a [[layout]]",
                &format!("give groups = {}", &wanted["a list, such as ".len()..]),
            );
        }
        let groups = table.sections("groups", &GROUP, wanted);
        let (name_cell, area) = (name, area?);
        let name = name_cell.and_then(|cell| cell.text());
        let read = |group: &Option<Section<'_>>| self.group(path, group.as_ref()?, area);
        let groups: Vec<Option<GivenGroup>> = groups?.iter().map(read).collect();
        let (name, groups) = (name?, groups.into_iter().collect::<Option<Vec<_>>>()?);
        let cell = name_cell?;
        if before.iter().any(|known| known.area == area && known.name == name) {
            put(
                &cell,
                Fault::error(format!("`{}` has two layouts named `{name}`", self.areas[area].name))
                    .help("give each layout of an area a name of its own"),
            );
            return None;
        }
        if let Some(cell) = table.get("groups").filter(|_| groups.len() > MOST_OUTLETS) {
            cell.at_fault(
                format!("a layout has at most {MOST_OUTLETS} groups"),
                format!("{} stand here", groups.len()),
                "put openings of one size and one height into one group",
            );
            return None;
        }
        Some(Given { name: name.to_string(), area, groups })
    }

    fn group(&self, path: &Path, group: &Section<'_>, area: usize) -> Option<GivenGroup> {
        let size = match (group.get("device"), group.get("kind")) {
            (Some(_), Some(cell)) => {
                cell.at_fault(
                    "a group has both `device` and `kind`",
                    "`device` names one of a catalog",
                    "take one out: `device` for a catalog's, `kind` for one described here",
                );
                None
            }
            (Some(cell), None) => self.of_catalog(group, &cell),
            (None, Some(_)) => catalog::described(path, group, group.reader.log),
            (None, None) => {
                group.missing(
                    "a group has neither `device` nor `kind`",
                    "name a catalog's device, or describe one: kind = \"closed scupper\"",
                );
                None
            }
        };
        let count = group.need("count", "say how many: count = 2").and_then(|cell| cell.whole(1, MOST_DEVICES));
        let set_height = group
            .need("set_height", "say how high its sill stands: set_height = \"2 in\"")
            .and_then(|cell| height::of_cell(&cell, &self.datum(area)));
        Some(GivenGroup { size: size?, count: count?, set_height: set_height? })
    }

    fn datum(&self, area: usize) -> Datum {
        let area = &self.areas[area];
        Datum { low_point: area.surface.low_point, roof_at_wall: area.roof_at_wall }
    }

    fn area(&self, name: &str, refuse: impl FnOnce(Fault)) -> Option<usize> {
        let found = self.by_name.get(name).copied();
        if found.is_none() {
            let names: Vec<&str> = self.areas.iter().map(|area| area.name.as_str()).collect();
            let did_you =
                near(name, names.iter().copied()).map_or(String::new(), |near| format!("did you mean \"{near}\"? "));
            let listed: Vec<&str> = names.into_iter().take(12).collect();
            refuse(
                Fault::error(format!("there is no area `{name}`"))
                    .help(format!("{did_you}areas are {}", any_of(&listed))),
            );
        }
        found
    }

    /// The size that a group of a catalog's device is of.
    fn of_catalog(&self, group: &Section<'_>, device: &Cell<'_>) -> Option<Size> {
        let tag = device.text()?;
        let foreign = ["dam", "dam_height", "free_area", "place", "rating", "interpolation", "law", "screen", "leader"];
        let foreign = foreign.into_iter().chain(["conductor_head", "price", "tag", "source"]);
        let mut sound = true;
        for key in foreign {
            if let Some(cell) = group.get(key) {
                cell.at_fault(
                    format!("`{key}` is the catalog's to give for `{tag}`"),
                    "not here",
                    "take it out, or describe the device here with `kind`",
                );
                sound = false;
            }
        }
        let mut length = |key| match group.get(key).map(|cell| cell.positive_length()) {
            None => None,
            Some(None) => {
                sound = false;
                None
            }
            Some(length) => length,
        };
        let wanted = Wanted { width: length("width"), height: length("height"), diameter: length("diameter") };
        if !sound {
            return None;
        }
        match self.size(tag, wanted) {
            Ok(size) => Some(size),
            Err(fault) => {
                if self.complete || self.by_tag.contains_key(tag) {
                    put(device, fault);
                }
                None
            }
        }
    }

    /// The catalogs' size of a device with the dimensions wanted; one of other dimensions where its kind allows any.
    fn size(&self, tag: &str, wanted: Wanted) -> Result<Size, Fault> {
        let Some(of_tag) = self.by_tag.get(tag) else {
            let mut tags: Vec<&str> = self.by_tag.keys().copied().collect();
            tags.sort_unstable();
            let did_you =
                near(tag, tags.iter().copied()).map_or(String::new(), |near| format!("did you mean \"{near}\"? "));
            return Err(Fault::error(format!("no catalog has a device `{tag}`"))
                .help(format!("{did_you}the catalogs have {}", any_of(&tags))));
        };
        let same = |wanted: Option<Length>, has: Option<Length>| {
            wanted.is_none_or(|wanted| has.is_some_and(|has| has.nm() == wanted.nm()))
        };
        let fits = |size: &&Size| {
            let device = &size.device;
            let width = device.width().filter(|_| !matches!(device, Device::Pipe { .. }));
            same(wanted.width, width)
                && same(wanted.height, own_height(device))
                && same(wanted.diameter, device.diameter())
        };
        let mut fitting = of_tag.iter().map(|&index| &self.sizes[index]).filter(fits);
        match (fitting.next(), fitting.next()) {
            (Some(size), None) => Ok(size.clone()),
            (Some(_), Some(_)) => Err(Fault::error(format!("`{tag}` comes in more than one size"))
                .help(format!("say which: {}", any_of(dimensions(&self.sizes[of_tag[0]].device))))),
            (None, _) => self.of_other_dimensions(tag, of_tag, wanted),
        }
    }

    /// A device with dimensions that no catalog has: without a price.
    fn of_other_dimensions(&self, tag: &str, of_tag: &[usize], wanted: Wanted) -> Result<Size, Fault> {
        let first = &self.sizes[of_tag[0]];
        let all = |of: fn(&Device) -> Option<Length>| {
            let mut lengths: Vec<i64> =
                of_tag.iter().filter_map(|&i| of(&self.sizes[i].device)).map(Length::nm).collect();
            lengths.sort_unstable();
            lengths.dedup();
            lengths
        };
        // A dimension that is not given is the catalog's, where that has but one.
        let given = |wanted: Option<Length>, of: fn(&Device) -> Option<Length>, key: &'static str| {
            let only = || match all(of)[..] {
                [one] => Some(Length::from_nm(one)),
                _ => None,
            };
            wanted.or_else(only).ok_or_else(|| {
                Fault::error(format!("`{tag}` comes in more than one {key}")).help(format!("say which: {key}"))
            })
        };
        let device = match first.device {
            Device::Open { .. } if wanted.height.is_none() && wanted.diameter.is_none() => {
                Device::Open { width: given(wanted.width, Device::width, "width")? }
            }
            Device::Edge { .. } if wanted.height.is_none() && wanted.diameter.is_none() => {
                Device::Edge { width: given(wanted.width, Device::width, "width")? }
            }
            Device::Closed { .. } if wanted.diameter.is_none() => Device::Closed {
                width: given(wanted.width, Device::width, "width")?,
                height: given(wanted.height, Device::height, "height")?,
            },
            Device::Pipe { .. } if wanted.width.is_none() && wanted.height.is_none() => {
                Device::Pipe { diameter: given(wanted.diameter, Device::diameter, "diameter")? }
            }
            Device::Standpipe { .. } if wanted.width.is_none() && wanted.height.is_none() => {
                Device::Standpipe { diameter: given(wanted.diameter, Device::diameter, "diameter")? }
            }
            _ => {
                let kind = first.device.kind();
                let has = dimensions(&first.device);
                let help = if has.is_empty() {
                    "take the dimensions out".to_string()
                } else {
                    format!("it has {}; other sizes than the catalog's are not known to pass anything", any_of(has))
                };
                return Err(Fault::error(format!("`{tag}`, of kind \"{kind}\", does not come with these dimensions"))
                    .help(help));
            }
        };
        Ok(Size { device, price: None, ..first.clone() })
    }
}

/// The dimensions by which a group says which size of a device it is of.
fn dimensions(device: &Device) -> &'static [&'static str] {
    match device {
        Device::Open { .. } | Device::Edge { .. } | Device::Rated { width: Some(_), .. } => &["width"],
        Device::Closed { .. } => &["width", "height"],
        Device::Pipe { .. } | Device::Standpipe { .. } | Device::Drain(_) => &["diameter"],
        Device::Rated { width: None, .. } => &[],
    }
}

/// The height of an opening that is not round.
fn own_height(device: &Device) -> Option<Length> {
    device.height().filter(|_| !matches!(device, Device::Pipe { .. }))
}

fn put(cell: &Cell<'_>, mut fault: Fault) {
    let place = super::fault::Place { source: Arc::clone(cell.reader.source), span: cell.span(), label: "here".into() };
    fault.places.insert(0, place);
    cell.reader.log.put(fault.absent());
}

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

impl Against<'_> {
    fn schedule(&self, path: &Path, named: &Cell<'_>, layouts: &mut Vec<Given>) -> Option<()> {
        let name = named.text()?;
        let log = named.reader.log;
        let source = file::read(&file::beside(path, name), name, Some(named), log)?;
        let mut rows = records(&source).into_iter();
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
        let mut places: HashMap<(usize, String), usize> = HashMap::new();
        let before = layouts.len();
        let mut sound = true;
        for row in rows {
            let Some((area, layout, group)) = schedule.row(self, &row) else {
                sound = false;
                continue;
            };
            let place = *places.entry((area, layout)).or_insert_with_key(|(area, layout)| {
                layouts.push(Given { name: layout.clone(), area: *area, groups: Vec::new() });
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
        let place = super::fault::Place { source: Arc::clone(self.source), span, label: "here".into() };
        let mut fault = fault;
        fault.places.insert(0, place);
        self.log.put(fault);
    }

    /// One row: its area, the name of its layout, and its group.
    fn row(&self, against: &Against<'_>, row: &[Entry<'_>]) -> Option<(usize, String, GivenGroup)> {
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
        let size = match against.size(device.text, wanted) {
            Ok(size) => size,
            Err(fault) => {
                self.refuse(device.span.clone(), fault);
                return None;
            }
        };
        let count = needed(Column::Count)?.0;
        let Some(whole) = count.text.parse::<u32>().ok().filter(|count| (1..=MOST_DEVICES).contains(count)) else {
            let fault = Fault::error(format!("`{}` is not a whole number from 1 to {MOST_DEVICES}", count.text));
            self.refuse(count.span.clone(), fault.help("say how many of them there are"));
            return None;
        };
        let set_height =
            self.set_height(against, row, area, cell(Column::SetHeight), cell(Column::Elevation), number)?;
        Some((area, layout.text.to_string(), GivenGroup { size, count: whole, set_height }))
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
