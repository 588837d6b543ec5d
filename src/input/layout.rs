//! Given layouts: each a `[[layout]]` of the project, or rows of a schedule that it names.
//!
//! A group is of a catalog's device, with the catalog's dimensions or with others, or of a device described in place.

use std::collections::HashMap;
use std::path::Path;
use std::sync::Arc;

use crate::device::{Device, Size};
use crate::roof::{Catchment, Given, GivenGroup, MOST_OUTLETS};
use crate::units::Length;

use super::area::Areas;
use super::catalog::{self, Catalogs};
use super::fault::{Fault, Span};
use super::height::{self, Datum};
use super::schedule;
use super::section::{Cell, Keys, Section, any_of, near};
use super::setting::MOST_DEVICES;

static LAYOUT: Keys = Keys { table: "a [[layout]]", known: &["name", "area", "groups", "note"] };

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
};

/// Dimensions that a group asks of a catalog's device; none where it does not say.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Wanted {
    pub(super) width: Option<Length>,
    pub(super) height: Option<Length>,
    pub(super) diameter: Option<Length>,
}

impl Wanted {
    /// Whole nanometres, which compare as the dimensions do.
    pub(super) fn nm(self) -> [Option<i64>; 3] {
        [self.width, self.height, self.diameter].map(|length| length.map(Length::nm))
    }
}

/// What a layout is read against.
pub(super) struct Against<'s> {
    pub(super) areas: &'s [Catchment],
    by_name: HashMap<&'s str, usize>,
    sizes: &'s [Size],
    by_tag: HashMap<&'s str, Vec<usize>>,
    /// Whether all catalogs were read: only then is a device known to be in none.
    complete: bool,
    /// Whether every area has a name that can be read: only then is an area known not to be there.
    all_named: bool,
}

/// A layout's area and name, and where the name stands.
type LayoutName = (usize, String, Span);

/// Every layout that the project gives; none where one is at fault.
pub(super) fn read_all(path: &Path, project: &Section<'_>, areas: &Areas, catalogs: &Catalogs) -> Option<Vec<Given>> {
    let against = Against { all_named: areas.all_named, ..Against::new(&areas.standing, catalogs) };
    let mut layouts = Vec::new();
    let mut names = Vec::new();
    let mut sound = true;
    if project.get("layout").is_some() {
        let tables = project.sections("layout", &LAYOUT, "a list of layouts, each under [[layout]]");
        sound &= tables.is_some();
        for table in tables.unwrap_or_default() {
            match table.and_then(|table| against.layout(path, &table, &mut names)) {
                Some(layout) => layouts.push(layout),
                None => sound = false,
            }
        }
    }
    for cell in project.get("schedule").map_or(Vec::new(), |cell| cell.items()) {
        sound &= schedule::read(&against, path, &cell, &mut layouts).is_some();
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
        Self { areas, by_name, sizes: &catalogs.sizes, by_tag, complete: catalogs.complete, all_named: true }
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

    fn layout(&self, path: &Path, table: &Section<'_>, names: &mut Vec<LayoutName>) -> Option<Given> {
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
        let area = area?;
        let name = name.and_then(|cell| self.own_name(&cell, area, names));
        let read = |group: &Option<Section<'_>>| self.group(path, group.as_ref()?, area);
        let groups: Vec<Option<GivenGroup>> = groups?.iter().map(read).collect();
        let (name, groups) = (name?, groups.into_iter().collect::<Option<Vec<_>>>()?);
        if let Some(cell) = table.get("groups").filter(|_| groups.len() > MOST_OUTLETS) {
            cell.at_fault(
                format!("a layout has at most {MOST_OUTLETS} groups"),
                format!("{} stand here", groups.len()),
                "put openings of one size and one height into one group",
            );
            return None;
        }
        Some(Given { name, area, groups })
    }

    /// The name of a layout, that no other of its area has.
    fn own_name(&self, cell: &Cell<'_>, area: usize, names: &mut Vec<LayoutName>) -> Option<String> {
        let name = cell.text()?;
        if let Some((_, _, first)) = names.iter().find(|(of, known, _)| *of == area && known == name) {
            let fault = Fault::error(format!("`{}` has two layouts named `{name}`", self.areas[area].name))
                .at(cell.reader.source, cell.span(), "again here")
                .at(cell.reader.source, first.clone(), "first here")
                .help("give each layout of an area a name of its own");
            cell.reader.log.put(fault);
            return None;
        }
        names.push((area, name.to_string(), cell.span()));
        Some(name.to_string())
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

    pub(super) fn area(&self, name: &str, refuse: impl FnOnce(Fault)) -> Option<usize> {
        let found = self.by_name.get(name).copied();
        if found.is_none() && self.all_named {
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
    pub(super) fn size(&self, tag: &str, wanted: Wanted) -> Result<Size, Fault> {
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
