//! The project file: one roof.

use std::ops::RangeInclusive;
use std::path::Path;
use std::sync::Arc;

use crate::device::Kind;
use crate::roof::{Case, Catchment, Limits, Roof, Storm, demand};
use crate::search::{Criterion, Options};
use crate::units::{Dimension, Intensity, Length, Load, ReturnPeriod, System, Time};

use super::catalog::{self, Catalogs};
use super::defaults::{self, COUNT, KEEP, MIX, RANK_BY};
use super::fault::{Fault, Faults, Log, Span};
use super::grid::{self, Least};
use super::section::{Cell, Keys, Reader, Section, optional};
use super::{Assumed, Project, area, file};

static PROJECT: Keys = Keys {
    table: "the project",
    known: &["title", "note", "units", "catalogs", "storm", "limit", "search", "case", "area"],
    unsupported: &[
        ("rules", "sets of code rules to hold every layout against"),
        ("flow", "the choice of flow law"),
        ("layout", "given layouts to be checked"),
        ("structure", "the price of a stronger roof"),
    ],
};

static STORM: Keys = Keys {
    table: "[storm]",
    known: &["intensity", "duration", "return_period", "source"],
    unsupported: &[("table", "a rainfall table to look the intensity up in"), ("storms", "a sweep of several storms")],
};

static LIMIT: Keys = Keys { table: "a limit", known: &["load", "depth"], unsupported: &[] };

static SEARCH: Keys = Keys {
    table: "[search]",
    known: &["rank_by", "keep", "mix", "set_height", "count", "freeboard"],
    unsupported: &[
        ("sizes", "the most distinct sizes on the whole roof"),
        ("size_price", "the price of one more distinct size"),
        ("laws", "holding every layout under several flow laws"),
        ("made_to_measure", "openings of any width"),
        ("round", "rounding of openings made to measure"),
    ],
};

static CASE: Keys = Keys {
    table: "a [[case]]",
    known: &["name", "blocked", "sill_error", "opening_loss", "rain", "discharge", "limit"],
    unsupported: &[],
};

static COUNT_RANGE: Keys = Keys { table: "`count`", known: &["from", "to"], unsupported: &[] };

/// Most devices of one area that a file may ask for.
const MOST_DEVICES: u32 = 10_000;

/// A case as the file gives it, with where its name and its blocking stand.
pub(super) struct GivenCase {
    pub(super) case: Case,
    pub(super) limits: Limits,
    pub(super) blocked_at: Option<Span>,
}

/// What of the project an area is read against.
pub(super) struct Setting<'s> {
    pub(super) cases: &'s [GivenCase],
    pub(super) limits: Limits,
    pub(super) count: RangeInclusive<u32>,
    pub(super) set_heights: Option<&'s [Length]>,
    pub(super) kinds_in_catalogs: &'s [Kind],
    /// Whether some device has no set height of its own, by kind.
    pub(super) needs_set_height: &'s dyn Fn(&Option<Vec<Kind>>) -> bool,
}

pub(super) fn read(path: &Path) -> Result<Project, Faults> {
    let log = Log::default();
    let project = read_logged(path, &log);
    let faults = log.into_faults();
    match project {
        Some(project) if !faults.any_error() => Ok(Project { warnings: faults, ..project }),
        _ => Err(faults),
    }
}

fn read_logged(path: &Path, log: &Log) -> Option<Project> {
    let as_written = path.display().to_string();
    let source = file::read(path, &as_written, None, log)?;
    let (table, whole) = file::parse(&source, log);
    // Of a file that could not be read whole, nothing is told as absent.
    let reading = Log::default();
    let reader = Reader { source: &source, log: &reading };
    let section = Section::open(reader, &PROJECT, table.get_ref(), 0..0);
    let project = read_sections(path, &section);
    for fault in reading.into_faults().0 {
        if whole || !fault.absence {
            log.put(fault);
        }
    }
    project
}

fn read_sections(path: &Path, section: &Section<'_>) -> Option<Project> {
    let log = section.reader.log;
    let mut assumed = Vec::new();
    let _ = section.get("note").and_then(|cell| cell.text());
    let title = match section.get("title") {
        Some(cell) => cell.text().map(str::to_string),
        None => Some(path.file_stem().map_or(String::new(), |stem| stem.to_string_lossy().into_owned())),
    };
    let system = section
        .need("units", "write units = \"us\" for inches and psf, units = \"si\" for mm and kPa")
        .and_then(|cell| cell.word(&[("us", System::Us), ("si", System::Si)]));
    let mut catalogs = Catalogs::default();
    let named = section.need("catalogs", "name at least one file: catalogs = [\"scuppers.toml\"]");
    for cell in named.iter().flat_map(Cell::items) {
        catalog::read(path, &cell, log, &mut catalogs);
    }
    if let Some(cell) = named.filter(|cell| cell.items().is_empty()) {
        cell.at_fault("`catalogs` is an empty list", "no catalog stands here", "name at least one file");
    }
    let storm = match section.section("storm", &STORM) {
        Some(storm) => read_storm(&storm),
        None if section.get("storm").is_none() => {
            section.missing("[storm] is missing in the project", "give [storm] with intensity = \"6.3 in/h\"");
            None
        }
        None => None,
    };
    let limits = section.section("limit", &LIMIT).map_or(Some(Limits::default()), |limit| read_limits(&limit));
    let search = match section.get("search") {
        Some(cell) => read_search(&cell.section(&SEARCH)?, &mut assumed),
        None => Some(Search::assumed(&mut assumed)),
    };
    let cases = read_cases(section, &mut assumed);
    let (limits, search, cases) = (limits?, search?, cases?);
    let needs_set_height = |kinds: &Option<Vec<Kind>>| {
        let takes = |kind| kinds.as_ref().is_none_or(|kinds: &Vec<Kind>| kinds.contains(&kind));
        catalogs.sizes.iter().any(|size| size.set_heights.is_none() && takes(size.device.kind()))
    };
    let mut kinds: Vec<Kind> = catalogs.sizes.iter().map(|size| size.device.kind()).collect();
    kinds.dedup();
    let setting = Setting {
        cases: &cases,
        limits,
        count: search.count.clone(),
        set_heights: search.set_heights.as_deref(),
        kinds_in_catalogs: &kinds,
        needs_set_height: &needs_set_height,
    };
    let areas = area::read_all(section, &setting, &mut assumed)?;
    prices(section, &search, &areas, &catalogs);
    let storm = storm?;
    let demands = match demand::flows(&storm, &areas) {
        Ok(demands) => demands,
        Err(circle) => {
            area::report_circle(section, &areas, &circle);
            return None;
        }
    };
    let roof = Roof {
        title: title?,
        system: system?,
        storm,
        cases: cases.into_iter().map(|given| given.case).collect(),
        areas,
        sizes: catalogs.sizes,
        demands,
    };
    Some(Project { roof, options: search.options, assumed, warnings: Faults::default() })
}

fn read_storm(section: &Section<'_>) -> Option<Storm> {
    let intensity = section
        .need("intensity", "write intensity = \"6.3 in/h\" or intensity = \"160 mm/h\"")
        .and_then(|cell| cell.positive(Dimension::Intensity, Intensity::m_per_s));
    let duration = section.get("duration").map(|cell| cell.positive(Dimension::Time, Time::s));
    let return_period =
        section.get("return_period").map(|cell| cell.positive(Dimension::ReturnPeriod, ReturnPeriod::years));
    let source = section.get("source").map(|cell| cell.text().map(str::to_string));
    Some(Storm {
        intensity: intensity?,
        duration: optional(duration)?,
        return_period: optional(return_period)?,
        source: optional(source)?,
    })
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

struct Search {
    options: Options,
    count: RangeInclusive<u32>,
    set_heights: Option<Vec<Length>>,
    rank_by_at: Option<Span>,
}

impl Search {
    fn assumed(assumed: &mut Vec<Assumed>) -> Self {
        for key in ["search.rank_by", "search.keep", "search.mix", "search.count"] {
            assume(assumed, key);
        }
        let options =
            Options { rank_by: RANK_BY.to_vec(), keep: KEEP as usize, mix: MIX as usize, freeboard: None, fold: true };
        Self { options, count: COUNT, set_heights: None, rank_by_at: None }
    }
}

/// Notes a default that holds for the whole roof.
fn assume(assumed: &mut Vec<Assumed>, key: &str) {
    assumed.push(Assumed { default: defaults::default(key), areas: Vec::new() });
}

fn read_search(section: &Section<'_>, assumed: &mut Vec<Assumed>) -> Option<Search> {
    let rank_by = match section.get("rank_by") {
        Some(cell) => read_rank_by(&cell),
        None => {
            assume(assumed, "search.rank_by");
            Some(RANK_BY.to_vec())
        }
    };
    let mut whole = |key: &'static str, name, otherwise: u32, most| match section.get(key) {
        Some(cell) => cell.whole(1, most),
        None => {
            assume(assumed, name);
            Some(otherwise)
        }
    };
    let keep = whole("keep", "search.keep", KEEP, 10_000);
    let mix = whole("mix", "search.mix", MIX, 3);
    let count = match section.get("count") {
        Some(cell) => read_count(&cell),
        None => {
            assume(assumed, "search.count");
            Some(COUNT)
        }
    };
    let set_heights = section.get("set_height").map(|cell| grid::lengths(&cell, Least::Zero));
    let freeboard = section.get("freeboard").map(|cell| cell.length());
    Some(Search {
        options: Options {
            rank_by: rank_by?,
            keep: keep? as usize,
            mix: mix? as usize,
            freeboard: optional(freeboard)?,
            fold: true,
        },
        count: count?,
        set_heights: optional(set_heights)?,
        rank_by_at: section.get("rank_by").map(|cell| cell.span()),
    })
}

fn read_rank_by(cell: &Cell<'_>) -> Option<Vec<Criterion>> {
    let choices: Vec<_> = Criterion::ALL.iter().map(|&criterion| (criterion.name(), criterion)).collect();
    let items = cell.items();
    if items.is_empty() {
        cell.at_fault("`rank_by` is an empty list", "no criterion stands here", "write rank_by = [\"cost\", \"load\"]");
        return None;
    }
    let mut criteria: Vec<Criterion> = Vec::new();
    let mut sound = true;
    for item in &items {
        match item.word(&choices) {
            Some(criterion) if criteria.contains(&criterion) => {
                item.at_fault(
                    format!("\"{}\" stands twice in `rank_by`", criterion.name()),
                    "again",
                    "name each criterion once",
                );
                sound = false;
            }
            Some(criterion) => criteria.push(criterion),
            None => sound = false,
        }
    }
    sound.then_some(criteria)
}

/// A count: one whole number, or a range.
pub(super) fn read_count(cell: &Cell<'_>) -> Option<RangeInclusive<u32>> {
    if !cell.is_table() {
        return cell.whole(1, MOST_DEVICES).map(|exactly| exactly..=exactly);
    }
    let range = cell.section(&COUNT_RANGE)?;
    let end = |key, otherwise: u32| range.get(key).map_or(Some(otherwise), |cell| cell.whole(1, MOST_DEVICES));
    let (from, to) = (end("from", *COUNT.start()), end("to", *COUNT.end()));
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

fn read_cases(section: &Section<'_>, assumed: &mut Vec<Assumed>) -> Option<Vec<GivenCase>> {
    let tables = section.sections("case", &CASE);
    if tables.is_empty() {
        if section.get("case").is_some() {
            return None;
        }
        assume(assumed, "case");
        return Some(vec![GivenCase { case: Case::as_designed(), limits: Limits::default(), blocked_at: None }]);
    }
    let mut names: Vec<(String, Span)> = Vec::new();
    let cases: Vec<Option<GivenCase>> = tables.iter().map(|table| read_case(table, &mut names)).collect();
    cases.into_iter().collect()
}

fn read_case(section: &Section<'_>, names: &mut Vec<(String, Span)>) -> Option<GivenCase> {
    let name =
        section.need("name", "name the case: name = \"one blocked\"").and_then(|cell| unique(&cell, names, "case"));
    let blocked = section.get("blocked").map_or(Some(0), |cell| cell.whole(0, MOST_DEVICES));
    let length = |key| section.get(key).map_or(Some(Length::ZERO), |cell| cell.length());
    let (sill_error, opening_loss) = (length("sill_error"), length("opening_loss"));
    let factor = |key| section.get(key).map_or(Some(1.0), |cell| cell.number_positive());
    let (rain, discharge) = (factor("rain"), factor("discharge"));
    let limits = section.get("limit").map_or(Some(Limits::default()), |cell| limits_of(&cell));
    Some(GivenCase {
        case: Case {
            name: name?,
            blocked: blocked?,
            sill_error: sill_error?,
            opening_loss: opening_loss?,
            rain: rain?,
            discharge: discharge?,
        },
        limits: limits?,
        blocked_at: section.get("blocked").map(|cell| cell.span()),
    })
}

/// A name that nothing else of its sort has.
pub(super) fn unique(cell: &Cell<'_>, names: &mut Vec<(String, Span)>, sort: &str) -> Option<String> {
    let name = cell.text()?;
    if let Some((_, first)) = names.iter().find(|(known, _)| known == name) {
        let fault = Fault::error(format!("two {sort}s have the name `{name}`"))
            .at(cell.reader.source, cell.span(), "again here")
            .at(cell.reader.source, first.clone(), "first here")
            .help(format!("give every {sort} a name of its own"));
        cell.reader.log.put(fault);
        return None;
    }
    names.push((name.to_string(), cell.span()));
    Some(name.to_string())
}

/// Refuses to rank by cost where a device that may stand somewhere has no price.
fn prices(section: &Section<'_>, search: &Search, areas: &[Catchment], catalogs: &Catalogs) {
    if !search.options.rank_by.contains(&Criterion::Cost) {
        return;
    }
    let mut told: Vec<&Arc<str>> = Vec::new();
    for size in catalogs.sizes.iter().filter(|size| size.price.is_none()) {
        let in_play = areas.iter().any(|area| area.takes(size.device.kind()));
        if !in_play || told.contains(&&size.tag) {
            continue;
        }
        told.push(&size.tag);
        let Some(entry) = catalogs.entries.get(&size.tag) else { continue };
        let mut fault = Fault::error(format!("`{}` has no price, and layouts are ranked by cost", size.tag))
            .at(&entry.source, entry.span.clone(), "nothing is free by omission")
            .help("give the device a price, or leave \"cost\" out of `rank_by`: [\"count\", \"load\"] would pass");
        if let Some(at) = &search.rank_by_at {
            fault = fault.at(section.reader.source, at.clone(), "ranked by cost here");
        }
        section.reader.log.put(fault);
    }
}
