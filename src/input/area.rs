//! The areas of a project, and what runs onto what.

use std::collections::HashMap;

use crate::device::Kind;
use crate::roof::demand::Circle;
use crate::roof::{Catchment, Limits, Parapet, Receipt};
use crate::units::{Area, Dimension, Length};

use super::Assumed;
use super::defaults::{SHARE, WALL_SHARE, default};
use super::fault::{Fault, Span};
use super::grid::{self, Least};
use super::project::{Setting, limits_of, read_count, unique};
use super::section::{Cell, Keys, Section, any_of, near, optional};

static AREA: Keys = Keys {
    table: "an [[area]]",
    known: &[
        "name",
        "note",
        "area",
        "wall",
        "wall_share",
        "edge",
        "gap",
        "parapet",
        "roof_at_wall",
        "receives",
        "ponding",
        "limit",
        "limit_in",
        "kinds",
        "count",
        "set_height",
    ],
    unsupported: &[
        ("channel", "a gutter or valley between the far end and the device"),
        ("low_point", "elevations above a project datum"),
        ("slope", "the slope of the roof"),
        ("distance", "the distance from the low point to the parapet"),
        ("existing", "openings that are there already"),
        ("replace", "the price of closing an opening"),
    ],
};

static PARAPET: Keys = Keys { table: "`parapet`", known: &["height", "thickness"], unsupported: &[] };

static PONDING: Keys = Keys {
    table: "`ponding`",
    known: &["head"],
    unsupported: &[("flexibility", "a ponding head that grows with the load; give the head that belongs to the limit")],
};

static RECEIPT: Keys = Keys {
    table: "an entry of `receives`",
    known: &["from", "share"],
    unsupported: &[("what", "the choice between overflow and primary flow")],
};

/// An area as the file gives it, with the names of those it receives from still to be found.
struct Given<'a> {
    area: Catchment,
    receives: Vec<(Cell<'a>, String, f64)>,
}

pub(super) fn read_all(
    project: &Section<'_>,
    setting: &Setting<'_>,
    assumed: &mut Vec<Assumed>,
) -> Option<Vec<Catchment>> {
    let tables = project.sections("area", &AREA);
    if tables.is_empty() && project.get("area").is_none() {
        project.missing("the project has no [[area]]", "give one [[area]] for each low point, with name and area");
        return None;
    }
    let mut names: Vec<(String, Span)> = Vec::new();
    let mut taken = Taken::default();
    let given: Vec<_> = tables.iter().map(|table| read_area(table, setting, &mut names, &mut taken)).collect();
    let index: HashMap<&str, usize> =
        names.iter().enumerate().map(|(index, (name, _))| (name.as_str(), index)).collect();
    // A name that is nowhere given is told even where another area is at fault.
    let mut sound = true;
    let mut sent = vec![(0.0, None); names.len()];
    let mut areas = Vec::with_capacity(given.len());
    for given in given {
        let Some(mut given) = given else {
            sound = false;
            continue;
        };
        for (cell, from, share) in given.receives {
            if let Some(&from) = index.get(from.as_str()) {
                given.area.receives.push(Receipt { from, share });
                sent[from].0 += share;
                sent[from].1 = Some(cell);
            } else {
                unknown_area(&cell, &from, index.keys().copied());
                sound = false;
            }
        }
        areas.push(given.area);
    }
    for ((name, _), (share, last)) in names.iter().zip(&sent) {
        if let (true, Some(cell)) = (*share > 1.0 + 1e-9, last) {
            cell.reader.warn(
                cell.span(),
                format!("areas receive {share} of what leaves `{name}`, more than all of it"),
                "with this one",
                "shares of one area that add up to 1 pass on all of it",
            );
        }
    }
    taken.tell(assumed, areas.len());
    sound.then_some(areas)
}

/// The areas for which each default was taken.
#[derive(Default)]
struct Taken(Vec<(&'static str, Vec<String>)>);

impl Taken {
    fn take(&mut self, key: &'static str, area: &str) {
        match self.0.iter_mut().find(|(known, _)| *known == key) {
            Some((_, areas)) => areas.push(area.to_string()),
            None => self.0.push((key, vec![area.to_string()])),
        }
    }

    /// Notes them, in the order of the table of defaults; one taken for every area holds for the roof.
    fn tell(self, assumed: &mut Vec<Assumed>, count: usize) {
        for entry in &super::DEFAULTS {
            if let Some((_, areas)) = self.0.iter().find(|(key, _)| *key == entry.key) {
                let areas = if areas.len() == count { Vec::new() } else { areas.clone() };
                assumed.push(Assumed { default: default(entry.key), areas });
            }
        }
    }
}

fn read_area<'a>(
    section: &Section<'a>,
    setting: &Setting<'_>,
    names: &mut Vec<(String, Span)>,
    taken: &mut Taken,
) -> Option<Given<'a>> {
    let name =
        section.need("name", "name the area: name = \"north bay\"").and_then(|cell| unique(&cell, names, "area"));
    let called = name.clone().unwrap_or_default();
    let _ = section.get("note").and_then(|cell| cell.text());
    let area = section
        .need("area", "give its horizontal projection: area = \"9600 ft2\"")
        .and_then(|cell| cell.positive(Dimension::Area, Area::m2));
    let mut otherwise = |key: &'static str, name: &'static str| {
        let cell = section.get(key);
        if cell.is_none() {
            taken.take(name, &called);
        }
        cell
    };
    let wall = otherwise("wall", "area.wall");
    let wall_share =
        if wall.is_some() { otherwise("wall_share", "area.wall_share") } else { section.get("wall_share") };
    let edge = otherwise("edge", "area.edge");
    let gap = otherwise("gap", "area.gap");
    let roof_at_wall = otherwise("roof_at_wall", "area.roof_at_wall");
    let wall = wall.map_or(Some(Area::ZERO), |cell| cell.zero_or_more(Dimension::Area, Area::m2));
    let wall_share = wall_share.map_or(Some(WALL_SHARE), |cell| {
        let share = cell.number_not_negative()?;
        if share > 1.0 {
            cell.at_fault("`wall_share` must be a part of one", "above 1", "0.5 counts half of the wall");
            return None;
        }
        Some(share)
    });
    let edge = edge.map(|cell| cell.length());
    let gap = gap.map_or(Some(Length::ZERO), |cell| cell.length());
    let parapet = section.section("parapet", &PARAPET).map(|parapet| {
        let length = |key| parapet.get(key).map(|cell| cell.positive_length());
        let (height, thickness) = (length("height"), length("thickness"));
        Some(Parapet { height: optional(height)?, thickness: optional(thickness)? })
    });
    let parapet = match (section.get("parapet"), parapet) {
        (Some(_), parapet) => parapet.flatten(),
        (None, _) => Some(Parapet::default()),
    };
    let roof_at_wall = roof_at_wall.map_or(Some(Length::ZERO), |cell| cell.length());
    let ponding_head = section.get("ponding").map_or(Some(None), |cell| {
        let ponding = cell.section(&PONDING)?;
        ponding.need("head", "give the extra depth: ponding = { head = \"0.4 in\" }")?.length().map(Some)
    });
    let kinds = section.get("kinds").map_or(Some(None), |cell| read_kinds(&cell, setting).map(Some));
    let count = section.get("count").map_or(Some(setting.count.clone()), |cell| read_count(&cell));
    let set_heights = section.get("set_height").map_or_else(
        || Some(setting.set_heights.map(<[Length]>::to_vec)),
        |cell| grid::lengths(&cell, Least::Zero).map(Some),
    );
    let limits = read_limits(section, setting, &called);
    let receives = read_receives(section, taken, &called);
    if let Some(count) = &count {
        blocked_under_count(section, setting, *count.end(), &called);
    }
    let (kinds, set_heights) = (kinds?, set_heights?);
    if set_heights.is_none() && (setting.needs_set_height)(&kinds) {
        section.missing(
            &format!("no set height is given for `{called}`"),
            "give [search] set_height = { from = \"2 in\", to = \"4 in\", step = \"0.25 in\" }, or set_height in the area",
        );
        return None;
    }
    Some(Given {
        area: Catchment {
            name: name?,
            area: area?,
            wall: wall?,
            wall_share: wall_share?,
            edge: optional(edge)?,
            gap: gap?,
            parapet: parapet?,
            roof_at_wall: roof_at_wall?,
            receives: Vec::new(),
            ponding_head: ponding_head?,
            kinds,
            count: count?,
            set_heights,
            limits: limits?,
        },
        receives: receives?,
    })
}

fn read_kinds(cell: &Cell<'_>, setting: &Setting<'_>) -> Option<Vec<Kind>> {
    let choices = Kind::ALL.map(|kind| (kind.name(), kind));
    let items = cell.items();
    if items.is_empty() {
        cell.at_fault("`kinds` is an empty list", "no kind stands here", "name at least one kind, or take the key out");
        return None;
    }
    let kinds: Vec<Option<Kind>> = items.iter().map(|item| item.word(&choices)).collect();
    let kinds: Vec<Kind> = kinds.into_iter().collect::<Option<_>>()?;
    if !setting.kinds_in_catalogs.is_empty() && !kinds.iter().any(|kind| setting.kinds_in_catalogs.contains(kind)) {
        let has: Vec<_> =
            Kind::ALL.iter().filter(|kind| setting.kinds_in_catalogs.contains(kind)).map(|kind| kind.name()).collect();
        cell.at_fault(
            "no catalog has a device of these kinds",
            "nothing could stand here",
            format!("the catalogs have {}", any_of(&has)),
        );
        return None;
    }
    Some(kinds)
}

/// What holds in each case: key by key the area's own limit for the case, its own, the case's, the roof's.
fn read_limits(section: &Section<'_>, setting: &Setting<'_>, called: &str) -> Option<Vec<Limits>> {
    let own = section.get("limit").map_or(Some(Limits::default()), |cell| limits_of(&cell));
    let mut in_case = vec![Limits::default(); setting.cases.len()];
    let mut sound = true;
    if let Some(cell) = section.get("limit_in") {
        for (entry, key) in cell.entries("a table of cases: limit_in = { \"one blocked\" = { load = \"36 psf\" } }") {
            match setting.cases.iter().position(|given| given.case.name == entry.key) {
                Some(case) => match limits_of(&entry) {
                    Some(limits) => in_case[case] = limits,
                    None => sound = false,
                },
                None => {
                    unknown_case(&entry, key, setting);
                    sound = false;
                }
            }
        }
    }
    let own = own?;
    let pick = |given: &[Limits; 4]| Limits {
        load: given.iter().find_map(|limits| limits.load),
        depth: given.iter().find_map(|limits| limits.depth),
    };
    let limits: Vec<Limits> = setting
        .cases
        .iter()
        .zip(&in_case)
        .map(|(given, in_case)| pick(&[*in_case, own, given.limits, setting.limits]))
        .collect();
    for (given, limits) in setting.cases.iter().zip(&limits) {
        if limits.load.is_none() && limits.depth.is_none() && sound {
            section.missing(
                &format!("`{called}` has no limit in the case `{}`", given.case.name),
                "give [limit] load or depth for the roof, or a limit for the area or the case",
            );
            return None;
        }
    }
    sound.then_some(limits)
}

fn unknown_case(entry: &Cell<'_>, key: Span, setting: &Setting<'_>) {
    let names: Vec<&str> = setting.cases.iter().map(|given| given.case.name.as_str()).collect();
    let did_you =
        near(entry.key, names.iter().copied()).map_or(String::new(), |near| format!("did you mean \"{near}\"? "));
    entry.reader.fault(
        key,
        format!("there is no case `{}`", entry.key),
        "not a case of this project",
        format!("{did_you}the cases are {}", any_of(&names)),
    );
}

fn unknown_area<'n>(cell: &Cell<'_>, from: &str, names: impl Iterator<Item = &'n str>) {
    let mut names: Vec<&str> = names.collect();
    names.sort_unstable();
    let did_you = near(from, names.iter().copied()).map_or(String::new(), |near| format!("did you mean \"{near}\"? "));
    names.truncate(12);
    cell.at_fault(
        format!("there is no area `{from}`"),
        "not an area of this project",
        format!("{did_you}areas are {}", any_of(&names)),
    );
}

fn read_receives<'a>(section: &Section<'a>, taken: &mut Taken, called: &str) -> Option<Vec<(Cell<'a>, String, f64)>> {
    let entries = section.sections("receives", &RECEIPT);
    let mut receives = Vec::new();
    for entry in &entries {
        let from = entry.need("from", "name the area it comes from: from = \"north bay\"");
        let share = match entry.get("share") {
            Some(cell) => cell.number_positive().filter(|&share| {
                if share > 1.0 {
                    cell.at_fault("`share` must be a part of one", "above 1", "1.0 passes on all of it");
                }
                share <= 1.0
            }),
            None => {
                taken.take("receives.share", called);
                Some(SHARE)
            }
        };
        let from = from?;
        receives.push((from, from.text()?.to_string(), share?));
    }
    Some(receives)
}

/// Refuses a case that blocks every device an area may have.
fn blocked_under_count(section: &Section<'_>, setting: &Setting<'_>, most: u32, called: &str) {
    for given in setting.cases {
        let (Some(at), true) = (&given.blocked_at, given.case.blocked >= most) else { continue };
        let mut fault = Fault::error(format!(
            "the case `{}` blocks {} of at most {most} devices in `{called}`: none would be left",
            given.case.name, given.case.blocked
        ))
        .at(section.reader.source, at.clone(), "not less than the greatest count");
        if let Some(cell) = section.get("count") {
            fault = fault.at(section.reader.source, cell.span(), "the greatest count here");
        }
        section.reader.log.put(fault.help("block fewer devices, or raise the greatest count"));
    }
}

/// Names the areas that receive from one another in a circle.
pub(super) fn report_circle(project: &Section<'_>, areas: &[Catchment], circle: &Circle) {
    let names: Vec<_> = circle.0.iter().map(|&area| format!("`{}`", areas[area].name)).collect();
    let tables = project.sections("area", &AREA);
    let title = match &circle.0[..] {
        [one, _] => format!("`{}` receives from itself", areas[*one].name),
        _ => format!("areas receive from one another in a circle: {} from {}", names[0], names[1..].join(" from ")),
    };
    let mut fault = Fault::error(title);
    for pair in circle.0.windows(2) {
        if let Some(cell) = tables.get(pair[0]).and_then(|table| table.get("receives")) {
            fault = fault.at(project.reader.source, cell.span(), format!("from {}", areas[pair[1]].name));
        }
    }
    project.reader.log.put(fault.help("water runs one way: take one of these out"));
}
