//! The project file: one roof.

use std::path::Path;

use crate::device::{Choice, Kind, Law};
use crate::review::Tolerances;
use crate::roof::{Case, Limits, Roof, demand};
use crate::rules::{Rulebook, bases};
use crate::search::{Criterion, Options, PlanAsked, Watch};
use crate::units::{Length, Money, System};

use super::catalog::{Catalogs, Offer, Offered};
use super::defaults::{self, COUNT, KEEP, MIX, RANK_BY};
use super::fault::{Fault, Faults, Log, Span};
use super::grid::{self, Least};
use super::section::{Cell, Keys, Reader, Section, any_of, near, optional};
use super::setting::{Cases, GivenCase, MOST_DEVICES, Names, Search, Setting, is_named, limits_of, read_count, unique};
use super::{Assumed, Project, area, existing, facts, file, flow, layout, rules, storm, structure, tolerance};

static PROJECT: Keys = Keys {
    table: "the project",
    known: &[
        "title",
        "note",
        "units",
        "catalogs",
        "storm",
        "limit",
        "flow",
        "search",
        "structure",
        "tolerance",
        "case",
        "area",
        "layout",
        "schedule",
        "replace",
        "rules",
        "risk_category",
    ],
};

static SEARCH: Keys = Keys {
    table: "[search]",
    known: &[
        "rank_by",
        "keep",
        "mix",
        "set_height",
        "count",
        "freeboard",
        "laws",
        "sizes",
        "size_price",
        "made_to_measure",
        "round",
    ],
};

static CASE: Keys = Keys {
    table: "a [[case]]",
    known: &["name", "blocked", "sill_error", "opening_loss", "rain", "discharge", "limit", "rules"],
};

/// Most distinct sizes of a plan that a file may ask for.
const MOST_SIZES: u32 = 12;

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
    let mut mended = String::new();
    let table = file::parse(&source, &mut mended, log);
    let section = Section::open(Reader { source: &source, log }, &PROJECT, table.get_ref(), 0..0);
    read_sections(path, &section)
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
    let named = section.need("catalogs", "name at least one file: catalogs = [\"scuppers.toml\"]");
    let names = named.map_or(Vec::new(), |cell| cell.items());
    let mut catalogs = Catalogs::read(path, &names, system.unwrap_or(System::Us), log);
    if let Some(cell) = named.filter(|cell| cell.items().is_empty()) {
        cell.at_fault("`catalogs` is an empty list", "no catalog stands here", "name at least one file");
    }
    let storm = section.section("storm", &storm::STORM).and_then(|section| storm::read(path, &section));
    if section.get("storm").is_none() {
        section.missing("[storm] is missing in the project", "give [storm] with intensity = \"6.3 in/h\"");
    }
    let limits = section.get("limit").map_or(Some(Limits::default()), |cell| limits_of(&cell));
    let search = match section.get("search") {
        Some(cell) => cell.section(&SEARCH).map_or(Search::unknown(), |search| read_search(&search, &mut assumed)),
        None => Search::assumed(&mut assumed),
    };
    let choice = match section.get("flow") {
        Some(cell) => cell.section(&flow::FLOW).and_then(|section| flow::choice(&section)),
        None => Some(Choice::default()),
    };
    measure(section, &search, system, &mut catalogs, &mut assumed);
    laws_fit(section, choice, &search, &catalogs);
    // Faults are looked for whatever the units are; they only say what is usual.
    let usual = system.unwrap_or(System::Us);
    let structure = section
        .section("structure", &structure::STRUCTURE)
        .map(|section| structure::read(&section, usual, &mut assumed));
    let tolerances = section
        .section("tolerance", &tolerance::TOLERANCE)
        .map_or_else(|| Some(Tolerances::usual(usual)), |section| tolerance::read(&section, usual));
    // A fault above does not keep the areas from being read: whatever is at fault in any file is told in one run.
    let book = rules::read_all(path, section);
    let cases = read_cases(section, book.as_ref(), &mut assumed);
    let searched = section.get("layout").is_none() && section.get("schedule").is_none();
    let risk = optional(section.get("risk_category").map(|cell| facts::risk(&cell)));
    let setting = Setting { cases: &cases, limits, search: &search, choice, catalogs: &catalogs, risk, searched };
    set_named_as_case(section, &cases, book.as_ref());
    let areas = area::read_all(section, &setting, &mut assumed);
    prices(section, &search, &areas.kinds, &catalogs);
    let replace = area::replace_all(section);
    // An area at fault does not hide what is wrong with layouts.
    let layouts = layout::read_all(path, section, &areas, &catalogs);
    let beside = existing::Beside {
        plan: search.plan.is_some_and(|plan| plan.is_some()),
        measure: catalogs.sizes.iter().any(|size| size.made.is_some()),
    };
    let existing = areas
        .complete
        .as_deref()
        .zip(layouts.as_deref())
        .and_then(|(areas, layouts)| existing::read_all(path, section, areas, &catalogs, layouts, &beside));
    let (mut areas, storm) = (areas.complete?, storm?);
    let replace = replace?;
    for ((area, there), replace) in areas.iter_mut().zip(existing?).zip(&replace) {
        let closes = replace.allowed && !there.is_empty();
        area.replace = closes.then(|| replace.price.unwrap_or_default());
        area.existing = there;
    }
    let roof = Roof {
        title: title?,
        system: system?,
        demands: demand::flows(&storm, &areas).ok()?,
        storm,
        cases: if cases.complete { cases.given.into_iter().map(|given| given.case).collect() } else { return None },
        areas,
        sizes: catalogs.sizes,
        choice: choice?,
        bases: Vec::new(),
    };
    let book = book?;
    let roof = under_each_law(under_each_set(storm::under_each_storm(roof), &book), search.laws.as_deref()?);
    if !area::channels_flow(section, &roof) {
        return None;
    }
    let plan = search.plan?;
    let structure = optional(structure)?;
    Some(Project {
        roof,
        options: search.options(book)?,
        plan,
        structure,
        tolerances: tolerances?,
        layouts: layouts?,
        replace: replace.iter().map(|replace| replace.price).collect(),
        assumed,
        warnings: Faults::default(),
    })
}

/// The roof with one more case for each rule set that binds: the layout as drawn, under what the set counts.
fn under_each_set(mut roof: Roof, book: &Rulebook) -> Roof {
    roof.bases = bases(book, &roof);
    for (basis, _) in roof.bases.iter().zip(&book.sets).filter(|(_, applied)| applied.binding) {
        roof.cases.push(basis.case.clone());
        for area in &mut roof.areas {
            area.limits.push(area.facts.limits);
        }
    }
    roof
}

/// Refuses a rule set that is called as a case is: its own case is named after it.
fn set_named_as_case(section: &Section<'_>, cases: &Cases, book: Option<&Rulebook>) {
    for applied in book.iter().flat_map(|book| &book.sets) {
        let title = &applied.set.title;
        if let (true, Some(cell)) = (cases.names.contains(title), section.get("rules")) {
            cell.at_fault(
                format!("a rule set and a case are both called `{title}`"),
                "the set makes a case of its own, named after it",
                "give the case another name",
            );
        }
    }
}

/// The roof with each case held under each law: as many cases as there are pairs, named after both.
fn under_each_law(mut roof: Roof, laws: &[Law]) -> Roof {
    if laws.is_empty() {
        return roof;
    }
    let under = |case: &Case, &law: &Law| Case {
        name: format!("{} ({})", case.name, law.name()),
        law: Some(law),
        ..case.clone()
    };
    roof.cases = roof.cases.iter().flat_map(|case| laws.iter().map(|law| under(case, law))).collect();
    for area in &mut roof.areas {
        area.limits = area.limits.iter().flat_map(|&limits| vec![limits; laws.len()]).collect();
    }
    roof
}

/// Marks the devices that are made to measure, with the step that their widths are rounded up to.
fn measure(
    section: &Section<'_>,
    search: &Search,
    system: Option<System>,
    catalogs: &mut Catalogs,
    assumed: &mut Vec<Assumed>,
) {
    let (Some(all), Some(round), Some(system)) = (search.made_to_measure, search.round, system) else { return };
    let any = catalogs.measure(all, round.unwrap_or(defaults::round(system)));
    if any && round.is_none() {
        assume(assumed, "search.round");
    }
    let given = |key| section.get("search").and_then(|cell| cell.section(&SEARCH)).and_then(|search| search.get(key));
    let offered = |has: fn(&Offer) -> bool| !catalogs.complete || catalogs.offers.iter().any(has);
    if let (true, false, Some(cell)) = (all, offered(|offer| offer.widths != Offered::Single), given("made_to_measure"))
    {
        cell.at_fault(
            "nothing in the catalogs can be made to measure",
            "no device has a range of widths",
            "give an open scupper, a closed scupper or a roof edge a range: width = { from = \"6 in\", to = \"48 in\" }",
        );
    } else if let (false, false, Some(cell)) = (all, offered(|offer| offer.widths == Offered::Any), given("round")) {
        cell.reader.warn(
            cell.span(),
            "nothing is made to measure: `round` rounds no width",
            "not heeded",
            "write made_to_measure = true, or leave the step out of a range of widths",
        );
    }
}

/// Refuses a law that a device in the catalogs cannot follow: inlet control has no form for an opening without a top.
fn laws_fit(section: &Section<'_>, choice: Option<Choice>, search: &Search, catalogs: &Catalogs) {
    let mut chosen: Vec<(Law, Option<Cell<'_>>)> = Vec::new();
    if let (Some(choice), Some(flow)) = (choice, section.get("flow").and_then(|cell| cell.section(&flow::FLOW))) {
        chosen.push((choice.scupper, flow.get("scupper")));
    }
    if let Some(search_section) = section.get("search").and_then(|cell| cell.section(&SEARCH)) {
        chosen.extend(search.laws.iter().flatten().map(|&law| (law, search_section.get("laws"))));
    }
    for (law, cell) in chosen {
        let cannot = |offer: &&Offer| {
            offer.kind == Kind::OpenScupper && offer.law.is_none() && !offer.kind.laws().contains(&law)
        };
        if let (Some(offer), Some(cell)) = (catalogs.offers.iter().find(cannot), cell) {
            let tag = offer.tag.as_deref().unwrap_or("a device");
            let fault = Fault::error(format!("`{tag}` is an {}: it has no law `{}`", offer.kind, law.name()))
                .at(cell.reader.source, cell.span(), "chosen here")
                .at(&offer.at.source, offer.at.span.clone(), "without a law of its own")
                .help("choose another law, or give the device a `law` of its own");
            cell.reader.log.put(fault);
        }
    }
}

impl Search {
    /// One of which nothing is known.
    fn unknown() -> Self {
        Self {
            rank_by: None,
            keep: None,
            mix: None,
            freeboard: None,
            plan: None,
            laws: None,
            made_to_measure: None,
            round: None,
            count: None,
            set_heights: None,
            rank_by_at: None,
            count_at: None,
        }
    }

    fn assumed(assumed: &mut Vec<Assumed>) -> Self {
        for key in ["search.rank_by", "search.keep", "search.mix", "search.count"] {
            assume(assumed, key);
        }
        Self {
            rank_by: Some(RANK_BY.to_vec()),
            keep: Some(KEEP),
            mix: Some(MIX),
            freeboard: Some(None),
            plan: Some(None),
            laws: Some(Vec::new()),
            made_to_measure: Some(false),
            round: Some(None),
            count: Some(COUNT),
            set_heights: Some(None),
            ..Self::unknown()
        }
    }

    fn options(self, book: Rulebook) -> Option<Options> {
        Some(Options {
            rank_by: self.rank_by?,
            keep: self.keep? as usize,
            mix: self.mix? as usize,
            freeboard: self.freeboard?,
            fold: true,
            watch: Watch::default(),
            rules: book.into(),
        })
    }
}

/// Notes a default that holds for the whole roof.
fn assume(assumed: &mut Vec<Assumed>, key: &str) {
    assumed.push(Assumed { default: defaults::default(key), areas: Vec::new() });
}

fn read_search(section: &Section<'_>, assumed: &mut Vec<Assumed>) -> Search {
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
    let at = |key| section.get(key).map(|cell| cell.span());
    Search {
        rank_by,
        keep,
        mix,
        freeboard: optional(freeboard),
        plan: read_plan(section, mix),
        laws: section.get("laws").map_or(Some(Vec::new()), |cell| read_laws(&cell)),
        made_to_measure: section.get("made_to_measure").map_or(Some(false), |cell| cell.yes_or_no()),
        round: optional(section.get("round").map(|cell| cell.positive_length())),
        count,
        set_heights: optional(set_heights),
        rank_by_at: at("rank_by"),
        count_at: at("count"),
    }
}

/// The most sizes on the whole roof and the price of one more, where either is given.
fn read_plan(section: &Section<'_>, mix: Option<u32>) -> Option<Option<PlanAsked>> {
    let (sizes, size_price) = (section.get("sizes"), section.get("size_price"));
    let Some(cell) = sizes.or(size_price) else { return Some(None) };
    if mix == Some(3) {
        cell.at_fault(
            "a plan of the whole roof is of layouts with one or two groups",
            "with mix = 3",
            "write mix = 2, or take `sizes` and `size_price` out",
        );
        return None;
    }
    let most = sizes.map(|cell| cell.whole(1, MOST_SIZES));
    let price = size_price.map_or(Some(0.0), |cell| cell.number_not_negative());
    let sizes = optional(most);
    Some(Some(PlanAsked { sizes: sizes?, size_price: Money::nearest(price?) }))
}

/// Laws of scuppers, each once.
fn read_laws(cell: &Cell<'_>) -> Option<Vec<Law>> {
    let items = cell.items();
    let laws: Vec<Option<Law>> = items.iter().map(|item| flow::law(item, Kind::ClosedScupper)).collect();
    let mut laws: Vec<Law> = laws.into_iter().collect::<Option<_>>()?;
    laws.sort_unstable();
    laws.dedup();
    if laws.len() < items.len() || laws.is_empty() {
        cell.at_fault(
            "`laws` must name each law once",
            "none, or one twice",
            "write laws = [\"thin-plate\", \"throat\"]",
        );
        return None;
    }
    Some(laws)
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

fn read_cases(section: &Section<'_>, book: Option<&Rulebook>, assumed: &mut Vec<Assumed>) -> Cases {
    if section.get("case").is_none() {
        assume(assumed, "case");
        let as_designed = GivenCase { case: Case::as_designed(), limits: Limits::default(), blocked_at: None };
        let names = vec![as_designed.case.name.clone()];
        return Cases { given: vec![as_designed], names, names_complete: true, complete: true };
    }
    let mut names = Names::default();
    let tables = section.sections("case", &CASE, "a list of cases, each under [[case]]").unwrap_or_default();
    let cases: Vec<Option<GivenCase>> =
        tables.iter().map(|table| read_case(table.as_ref()?, book, &mut names)).collect();
    Cases {
        names_complete: !tables.is_empty() && tables.iter().all(|table| is_named(table.as_ref())),
        complete: !cases.is_empty() && cases.iter().all(Option::is_some),
        given: cases.into_iter().flatten().collect(),
        names: in_order(names),
    }
}

/// The rule set that counts a case, by its place among those of the project.
fn counted_by(cell: &Cell<'_>, book: &Rulebook) -> Option<usize> {
    let title = cell.text()?;
    let titles: Vec<&str> = book.sets.iter().map(|applied| applied.set.title.as_str()).collect();
    let found = titles.iter().position(|known| *known == title);
    if found.is_none() {
        let help = match (near(title, titles.iter().copied()), &titles[..]) {
            (_, []) => "name the set in the project first: rules = [\"firm-rules.toml\"]".to_string(),
            (Some(near), _) => format!("did you mean `{near}`?"),
            (None, titles) => format!("the sets are {}", any_of(titles)),
        };
        cell.at_fault(format!("no rule set of this project has the title `{title}`"), "not one of them", help);
    }
    found
}

/// Names in the order of the file.
fn in_order(names: Names) -> Vec<String> {
    let mut names: Vec<(String, Span)> = names.into_iter().collect();
    names.sort_by_key(|(_, span)| span.start);
    names.into_iter().map(|(name, _)| name).collect()
}

fn read_case(section: &Section<'_>, book: Option<&Rulebook>, names: &mut Names) -> Option<GivenCase> {
    let name =
        section.need("name", "name the case: name = \"one blocked\"").and_then(|cell| unique(&cell, names, "case"));
    let blocked = section.get("blocked").map_or(Some(0), |cell| cell.whole(0, MOST_DEVICES));
    let length = |key| section.get(key).map_or(Some(Length::ZERO), |cell| cell.length());
    let (sill_error, opening_loss) = (length("sill_error"), length("opening_loss"));
    let factor = |key| section.get(key).map_or(Some(1.0), |cell| cell.number_positive());
    let (rain, discharge) = (factor("rain"), factor("discharge"));
    let basis = section.get("rules").map_or(Some(None), |cell| counted_by(&cell, book?).map(Some));
    let limits = section.get("limit").map_or(Some(Limits::default()), |cell| limits_of(&cell));
    Some(GivenCase {
        case: Case {
            name: name?,
            blocked: blocked?,
            sill_error: sill_error?,
            opening_loss: opening_loss?,
            rain: rain?,
            discharge: discharge?,
            law: None,
            storm: None,
            basis: basis?,
        },
        limits: limits?,
        blocked_at: section.get("blocked").map(|cell| cell.span()),
    })
}

/// Refuses to rank by cost, or to weigh openings against strength, where a device that may stand somewhere has no price. Of
/// each area, the kinds that may stand in it are given, an inner none for any.
fn prices(section: &Section<'_>, search: &Search, kinds: &[Option<Vec<Kind>>], catalogs: &Catalogs) {
    let reader = section.reader;
    let by_cost = search.rank_by.as_ref().is_some_and(|rank_by| rank_by.contains(&Criterion::Cost));
    // What a broken file seems not to say is no default.
    let search_section = || section.get("search").and_then(|cell| cell.section(&SEARCH));
    let planned = || search_section().and_then(|search| search.get("sizes").or(search.get("size_price")));
    let weighed = section.get("structure").map(|cell| (cell.span(), "strength is weighed against it"));
    let weighed = weighed.or_else(|| planned().map(|cell| (cell.span(), "a plan of the whole roof is of least cost")));
    if weighed.is_none() && (!by_cost || (search.rank_by_at.is_none() && !reader.log.is_whole(reader.source))) {
        return;
    }
    for offer in catalogs.offers.iter().filter(|offer| !offer.has_price) {
        if !kinds.iter().any(|kinds| kinds.as_ref().is_none_or(|kinds| kinds.contains(&offer.kind))) {
            continue;
        }
        let named = offer.tag.as_ref().map_or("a device".to_string(), |tag| format!("`{tag}`"));
        let (why, help) = if by_cost {
            ("layouts are ranked by cost", "leave \"cost\" out of `rank_by`: [\"count\", \"load\"] would pass")
        } else {
            let why = weighed.as_ref().map_or("it is asked for", |(_, why)| why);
            (why, "take what asks for it out")
        };
        let mut fault = Fault::error(format!("{named} has no price, and {why}"))
            .at(&offer.at.source, offer.at.span.clone(), "nothing is free by omission")
            .help(format!("give the device a price, or {help}"));
        if let (Some(at), true) = (&search.rank_by_at, by_cost) {
            fault = fault.at(reader.source, at.clone(), "ranked by cost here");
        }
        if let (Some((at, _)), false) = (&weighed, by_cost) {
            fault = fault.at(reader.source, at.clone(), "asked for here");
        }
        reader.log.put(fault.absent());
    }
}
