//! The areas of a project, and what runs onto what.

use std::collections::HashMap;
use std::ops::RangeInclusive;

use crate::device::Kind;
use crate::roof::demand::{self, Circle};
use crate::roof::{Catchment, Facts, Limits, Parapet, Passed, Receipt, Rise, Roof, Storm, Surface, Wall};
use crate::units::{Area, Dimension, Flow, Length, Money};

use super::Assumed;
use super::catalog::Offer;
use super::defaults::{SHARE, WALL_SHARE, default};
use super::facts;
use super::fault::{Fault, Span};
use super::flow;
use super::grid::{self, Least};
use super::height::Datum;
use super::ponding;
use super::section::{Cell, Keys, Section, any_of, near, optional};
use super::setting::{Names, Setting, is_named, limits_of, read_count, unique};

pub(super) static AREA: Keys = Keys {
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
        "channel",
        "low_point",
        "slope",
        "distance",
        "replace",
        "existing",
        "walls",
        "primary",
        "risk_category",
        "overflow_to",
    ],
};

static PARAPET: Keys = Keys { table: "`parapet`", known: &["height", "thickness"] };

static RECEIPT: Keys = Keys { table: "an entry of `receives`", known: &["from", "share", "what"] };

/// What one area receives, with the name of the other still to be found.
struct GivenReceipt<'a> {
    cell: Cell<'a>,
    from: String,
    share: f64,
    what: Passed,
}

/// An area as the file gives it: of what is at fault nothing.
#[derive(Default)]
struct Given<'a> {
    name: Option<String>,
    /// Kinds that may stand there, an inner none for any.
    kinds: Option<Option<Vec<Kind>>>,
    receives: Vec<GivenReceipt<'a>>,
    /// All of it but what it receives.
    area: Option<Catchment>,
}

/// The areas of a project.
pub(super) struct Areas {
    /// All of them, where none is at fault.
    pub(super) complete: Option<Vec<Catchment>>,
    /// Kinds that may stand in each area whose kinds can be read, none for any.
    pub(super) kinds: Vec<Option<Vec<Kind>>>,
    /// Every area for layouts to be read against: in the place of one at fault another of its name, in which any height stands.
    pub(super) standing: Vec<Catchment>,
    /// Whether every area has a name that can be read: only then is an area known not to be there.
    pub(super) all_named: bool,
}

pub(super) fn read_all(project: &Section<'_>, setting: &Setting<'_>, assumed: &mut Vec<Assumed>) -> Areas {
    if project.get("area").is_none() {
        project.missing("the project has no [[area]]", "give one [[area]] for each low point, with name and area");
    }
    let tables = project.sections("area", &AREA, "a list of areas, each under [[area]]").unwrap_or_default();
    let mut names = Names::default();
    let mut taken = Taken::default();
    let given: Vec<Given<'_>> = tables
        .iter()
        .map(|table| match table {
            Some(table) => read_area(table, setting, &mut names, &mut taken),
            None => Given::default(),
        })
        .collect();
    let counts_alone = |table: &Section<'_>| table.get("count").is_none() && table.get("existing").is_none();
    if tables.iter().flatten().any(counts_alone) {
        blocked_under_count(project, setting, setting.search.count.as_ref(), setting.search.count_at.as_ref(), None);
    }
    let all_named = !tables.is_empty() && tables.iter().all(|table| is_named(table.as_ref()));
    let receipts = find_receipts(&given, all_named);
    let standing = given.iter().map(standing).collect();
    let runs_one_way = report_circles(project, &given, &receipts);
    let kinds = given.iter().filter_map(|given| given.kinds.clone()).collect();
    let complete = given
        .into_iter()
        .zip(receipts)
        .map(|(given, receipts)| {
            Some(Catchment { receives: receipts.into_iter().collect::<Option<_>>()?, ..given.area? })
        })
        .collect::<Option<Vec<_>>>()
        .filter(|areas| runs_one_way && !areas.is_empty());
    taken.tell(assumed, tables.len());
    Areas { complete, kinds, standing, all_named }
}

/// What each area receives, by the index of the other; none where there is no such area, which is told where all are named.
fn find_receipts(given: &[Given<'_>], all_named: bool) -> Vec<Vec<Option<Receipt>>> {
    let index: HashMap<&str, usize> =
        given.iter().enumerate().filter_map(|(index, given)| Some((given.name.as_deref()?, index))).collect();
    let mut sent: Vec<Sent<'_>> = (0..given.len()).map(|_| Sent::default()).collect();
    let mut receipts = Vec::with_capacity(given.len());
    for to in given {
        let mut found = Vec::with_capacity(to.receives.len());
        for GivenReceipt { cell, from, share, what } in &to.receives {
            let receipt = index.get(from.as_str()).map(|&from| Receipt { from, share: *share, what: *what });
            match &receipt {
                Some(receipt) => sent[receipt.from].add(receipt, cell),
                None if all_named => unknown_area(cell, from, index.keys().copied()),
                None => {}
            }
            found.push(receipt);
        }
        receipts.push(found);
    }
    for (given, sent) in given.iter().zip(&sent) {
        if let Some(name) = &given.name {
            sent.more_than_all(name);
        }
    }
    receipts
}

/// What other areas receive of one: the shares of what its overflow passes and of what its primary drains pass, each with the
/// last place that adds to it, and whether the two ways are told apart anywhere.
#[derive(Default)]
struct Sent<'c> {
    overflow: (f64, Option<&'c Cell<'c>>),
    primary: (f64, Option<&'c Cell<'c>>),
    told_apart: bool,
}

impl<'c> Sent<'c> {
    fn add(&mut self, receipt: &Receipt, cell: &'c Cell<'c>) {
        if receipt.what != Passed::Primary {
            self.overflow = (self.overflow.0 + receipt.share, Some(cell));
        }
        if receipt.what != Passed::Overflow {
            self.primary = (self.primary.0 + receipt.share, Some(cell));
        }
        self.told_apart |= receipt.what != Passed::All;
    }

    /// Warns where the shares of one way add up to more than all that takes it.
    fn more_than_all(&self, name: &str) {
        let ways: &[_] = if self.told_apart {
            &[(self.overflow, "the overflow of"), (self.primary, "what the primary drains pass of")]
        } else {
            &[(self.overflow, "what leaves")]
        };
        for ((share, last), way) in ways {
            if let (true, Some(cell)) = (*share > 1.0 + 1e-9, last) {
                cell.reader.warn(
                    cell.span(),
                    format!("areas receive {share} of {way} `{name}`, more than all of it"),
                    "with this one",
                    "shares of one area that add up to 1 pass on all of it",
                );
            }
        }
    }
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

fn read_area<'a>(section: &Section<'a>, setting: &Setting<'_>, names: &mut Names, taken: &mut Taken) -> Given<'a> {
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
    let walls = read_walls(section, &mut otherwise);
    let edge = otherwise("edge", "area.edge");
    let gap = otherwise("gap", "area.gap");
    let surface = read_surface(section);
    let sloped = section.get("slope").is_some();
    let roof_at_wall =
        if sloped { section.get("roof_at_wall") } else { otherwise("roof_at_wall", "area.roof_at_wall") };
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
    let roof_at_wall = match (roof_at_wall, surface) {
        (Some(cell), _) => cell.length(),
        (None, surface) => surface.map(|surface| surface.rise.map_or(Length::ZERO, |rise| rise.at_wall())),
    };
    let datum =
        surface.zip(roof_at_wall).map(|(surface, roof_at_wall)| Datum { low_point: surface.low_point, roof_at_wall });
    let ponding = section.get("ponding").map(|cell| ponding::read(&cell));
    let kinds = section.get("kinds").map_or(Some(None), |cell| read_kinds(&cell, setting).map(Some));
    let count = section.get("count").map_or(setting.search.count.clone(), |cell| read_count(&cell));
    let set_heights = section.get("set_height").map_or_else(
        || setting.search.set_heights.clone(),
        |cell| grid::lengths(&cell, Least::Height(datum?)).map(Some),
    );
    let channel = section.get("channel").map(|cell| flow::channel(&cell, |name| taken.take(name, &called)));
    if let (Some(kinds), Some(parapet)) = (&kinds, &parapet) {
        thickness_given(section, setting, kinds.as_ref(), parapet, &called);
    }
    let limits = read_limits(section, setting, &called);
    let facts = facts::read(
        section,
        setting.risk,
        walls.as_ref().map(|walls| walls.one_by_one.clone()),
        limits.as_ref().map(|limits| limits.general),
    );
    let roof_at_wall_assumed = section.get("roof_at_wall").is_none() && !sloped;
    let receives = read_receives(section, taken, &called).unwrap_or_default();
    // Of what is there already more may stand than the greatest count.
    if let Some(cell) = section.get("count").filter(|_| section.get("existing").is_none()) {
        blocked_under_count(section, setting, count.as_ref(), Some(&cell.span()), Some(&called));
    }
    if let (Some(kinds), Some(None), true) = (&kinds, &set_heights, setting.searched)
        && setting.catalogs.offers.iter().any(|offer| !offer.has_set_heights && takes(kinds.as_ref(), offer.kind))
    {
        section.missing(
            &format!("no set height is given for `{called}`"),
            "give [search] set_height = { from = \"2 in\", to = \"4 in\", step = \"0.25 in\" }, or set_height in the area",
        );
    }
    let whole = || {
        Some(Catchment {
            name: name.clone()?,
            area: area?,
            wall: walls.as_ref()?.sum,
            wall_share: walls.as_ref()?.share,
            edge: optional(edge)?,
            gap: gap?,
            parapet: parapet?,
            roof_at_wall: roof_at_wall?,
            surface: surface?,
            receives: Vec::new(),
            ponding: optional(ponding)?,
            kinds: kinds.clone()?,
            count: count?,
            set_heights: set_heights?,
            limits: limits?.in_case,
            existing: Vec::new(),
            replace: None,
            channel: optional(channel)?,
            facts: Facts { roof_at_wall_assumed, ..facts? },
        })
    };
    Given { area: whole(), name, kinds, receives }
}

/// The walls over an area.
struct Walls {
    /// Each with its side; empty where their sum is given.
    one_by_one: Vec<Wall>,
    sum: Area,
    /// The part of them that counts.
    share: f64,
}

/// The walls over an area; `otherwise` looks a key up and notes the default where it is absent.
fn read_walls<'a>(
    section: &Section<'a>,
    otherwise: &mut impl FnMut(&'static str, &'static str) -> Option<Cell<'a>>,
) -> Option<Walls> {
    let given = section.get("walls").is_some();
    let wall = if given { section.get("wall") } else { otherwise("wall", "area.wall") };
    let share =
        if given || wall.is_some() { otherwise("wall_share", "area.wall_share") } else { section.get("wall_share") };
    let one_by_one = facts::walls(section);
    let sum = match (wall, &one_by_one) {
        (Some(cell), _) => cell.zero_or_more(Dimension::Area, Area::m2),
        (None, walls) => walls.as_ref().map(|walls| walls.iter().map(|wall| wall.area).sum()),
    };
    let share = share.map_or(Some(WALL_SHARE), |cell| {
        let share = cell.number_not_negative()?;
        if share > 1.0 {
            cell.at_fault("`wall_share` must be a part of one", "above 1", "0.5 counts half of the wall");
            return None;
        }
        Some(share)
    });
    Some(Walls { one_by_one: one_by_one?, sum: sum?, share: share? })
}

/// How the surface of an area lies.
fn read_surface(section: &Section<'_>) -> Option<Surface> {
    let low_point = section.get("low_point").map(|cell| cell.length());
    let to_wall = section.get("distance").map(|cell| cell.positive_length());
    let rise = match section.get("slope") {
        None => Some(None),
        Some(cell) if to_wall.is_none() => {
            cell.at_fault(
                "`slope` stands without `distance`",
                "how high the roof stands at the wall is not known",
                "give distance = \"20 ft\" too, from the low point to the wall",
            );
            None
        }
        Some(slope) => {
            let fall = slope.slope();
            if let Some(cell) = section.get("roof_at_wall") {
                cell.at_fault(
                    "`roof_at_wall` stands beside `slope` and `distance`",
                    "they give it already",
                    "give either the height or the slope with its distance",
                );
                return None;
            }
            fall.zip(to_wall.flatten()).map(|(slope, distance)| Some(Rise { slope, distance }))
        }
    };
    Some(Surface { low_point: optional(low_point)?, to_wall: optional(to_wall)?, rise: rise? })
}

/// Refuses an area whose parapet has no thickness where a scupper would follow a law that needs it.
fn thickness_given(
    section: &Section<'_>,
    setting: &Setting<'_>,
    kinds: Option<&Vec<Kind>>,
    parapet: &Parapet,
    called: &str,
) {
    let (Some(choice), None) = (setting.choice, parapet.thickness) else { return };
    let laws = setting.search.laws.iter().flatten().copied();
    for law in laws.chain([choice.scupper]).chain(setting.catalogs.offers.iter().filter_map(|offer| offer.law)) {
        let follows = |offer: &Offer| {
            let chosen = offer.law.is_none_or(|own| own == law);
            chosen && offer.kind.laws().contains(&law) && takes(kinds, offer.kind)
        };
        if law.needs_thickness() && setting.catalogs.offers.iter().any(follows) {
            section.missing(
                &format!("the law `{}` needs the thickness of the parapet of `{called}`", law.name()),
                "give parapet = { thickness = \"10 in\" }",
            );
            return;
        }
    }
}

/// What an area says of closing its openings.
#[derive(Clone, Copy)]
pub(super) struct Replace {
    /// What closing or removing one opening costs: its own price, else the project's; none where neither is given.
    pub(super) price: Option<Money>,
    /// Whether the area itself says so, which lets a search close what is there.
    pub(super) allowed: bool,
}

/// What each area says of closing its openings, in their order; none where one is at fault.
pub(super) fn replace_all(project: &Section<'_>) -> Option<Vec<Replace>> {
    let price = |cell: &Cell<'_>| cell.number_not_negative().map(Money::nearest);
    let of_project = optional(project.get("replace").map(|cell| price(&cell)));
    let tables = project.sections("area", &AREA, "a list of areas, each under [[area]]").unwrap_or_default();
    let of_area = |table: &Section<'_>| {
        let Some(cell) = table.get("replace") else { return Some((None, false)) };
        match cell.as_yes_or_no() {
            None if cell.is_number() => Some((Some(price(&cell)?), true)),
            None => {
                cell.refuse("a bare number, or true");
                None
            }
            Some(true) if table.get("existing").is_some() => Some((None, true)),
            Some(true) => {
                cell.at_fault(
                    "`replace = true` lets a search close what is there, and the area has no `existing`",
                    "nothing to be closed",
                    "say what is there: existing = \"as found\", or give a price, which `check --mend` reckons with",
                );
                None
            }
            Some(false) => {
                cell.at_fault(
                    "`replace` is a price, or true",
                    "what is there stays where the key is absent",
                    "take it out, or give what closing one opening costs: replace = 250",
                );
                None
            }
        }
    };
    let own: Vec<_> = tables.iter().flatten().map(of_area).collect();
    let of_project = of_project?;
    let with_project = |(own, allowed): (Option<Money>, bool)| Replace { price: own.or(of_project), allowed };
    own.into_iter().map(|own| own.map(with_project)).collect()
}

/// Whether the flow in every channel stays subcritical, in every case; where it does not, that is told with its numbers.
pub(super) fn channels_flow(project: &Section<'_>, roof: &Roof) -> bool {
    let tables = project.sections("area", &AREA, "a list of areas, each under [[area]]").unwrap_or_default();
    let mut flows = true;
    for (index, area) in roof.areas.iter().enumerate() {
        let cell = tables.get(index).and_then(Option::as_ref).and_then(|table| table.get("channel"));
        let (Some(channel), Some(cell)) = (area.channel, cell) else { continue };
        let demand = roof.cases.iter().map(|case| roof.demands[index] * case.rain).fold(Flow::ZERO, Flow::max);
        if let Err(error) = channel.reach(demand, Length::ZERO) {
            cell.at_fault(
                format!(
                    "the channel of `{}` turns supercritical under {:.4} m3/s: {error}",
                    area.name,
                    demand.m3_per_s()
                ),
                "water runs faster here than a level can follow",
                "give a gentler slope or a wider channel, or take it out and hold the limit at the devices",
            );
            flows = false;
        }
    }
    flows
}

/// Whether a kind is among those that may stand somewhere; none for any.
fn takes(kinds: Option<&Vec<Kind>>, kind: Kind) -> bool {
    kinds.is_none_or(|kinds| kinds.contains(&kind))
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
    let offered = |kind: Kind| setting.catalogs.offers.iter().any(|offer| offer.kind == kind);
    if setting.catalogs.complete && !kinds.iter().any(|&kind| offered(kind)) {
        let has: Vec<_> = Kind::ALL.into_iter().filter(|&kind| offered(kind)).map(Kind::name).collect();
        let fault = Fault::error("no catalog has a device of these kinds")
            .at(cell.reader.source, cell.span(), "nothing could stand here")
            .help(format!("the catalogs have {}", any_of(&has)));
        cell.reader.log.put(fault.absent());
        return None;
    }
    Some(kinds)
}

/// The limits of an area.
struct AreaLimits {
    /// What holds in each case.
    in_case: Vec<Limits>,
    /// What holds in every case that says nothing else; where that is nowhere given, what holds in the first.
    general: Limits,
}

/// What holds in each case: key by key the area's own limit for the case, its own, the case's, the roof's.
fn read_limits(section: &Section<'_>, setting: &Setting<'_>, called: &str) -> Option<AreaLimits> {
    let own = section.get("limit").map_or(Some(Limits::default()), |cell| limits_of(&cell));
    let cases = &setting.cases.given;
    let mut in_case = vec![Limits::default(); cases.len()];
    let mut sound = true;
    if let Some(cell) = section.get("limit_in") {
        let entries = cell.entries("a table of cases, such as { \"one blocked\" = { load = \"36 psf\" } }");
        sound = entries.is_some();
        for (entry, key) in entries.unwrap_or_default() {
            let limits = limits_of(&entry);
            sound &= limits.is_some();
            match cases.iter().position(|given| given.case.name == entry.key) {
                Some(case) => in_case[case] = limits.unwrap_or_default(),
                None if setting.cases.names.iter().any(|name| name == entry.key) => {}
                None => {
                    sound = false;
                    if setting.cases.names_complete {
                        unknown_case(&entry, key, &setting.cases.names);
                    }
                }
            }
        }
    }
    let (own, roof) = (own?, setting.limits?);
    let pick = |given: &[Limits]| Limits {
        load: given.iter().find_map(|limits| limits.load),
        depth: given.iter().find_map(|limits| limits.depth),
    };
    let limits: Vec<Limits> =
        cases.iter().zip(&in_case).map(|(given, in_case)| pick(&[*in_case, own, given.limits, roof])).collect();
    for (given, limits) in cases.iter().zip(&limits) {
        if limits.load.is_none() && limits.depth.is_none() && sound {
            section.missing(
                &format!("`{called}` has no limit in the case `{}`", given.case.name),
                "give [limit] load or depth for the roof, or a limit for the area or the case",
            );
            return None;
        }
    }
    let general = Some(pick(&[own, roof])).filter(|limits| limits.load.is_some() || limits.depth.is_some());
    let general = general.or(limits.first().copied())?;
    sound.then_some(AreaLimits { in_case: limits, general })
}

fn unknown_case(entry: &Cell<'_>, key: Span, names: &[String]) {
    let names: Vec<&str> = names.iter().map(String::as_str).collect();
    let did_you =
        near(entry.key, names.iter().copied()).map_or(String::new(), |near| format!("did you mean \"{near}\"? "));
    let fault = Fault::error(format!("there is no case `{}`", entry.key))
        .at(entry.reader.source, key, "not a case of this project")
        .help(format!("{did_you}the cases are {}", any_of(&names)));
    entry.reader.log.put(fault.absent());
}

fn unknown_area<'n>(cell: &Cell<'_>, from: &str, names: impl Iterator<Item = &'n str>) {
    let mut names: Vec<&str> = names.collect();
    names.sort_unstable();
    let did_you = near(from, names.iter().copied()).map_or(String::new(), |near| format!("did you mean \"{near}\"? "));
    names.truncate(12);
    let fault = Fault::error(format!("there is no area `{from}`"))
        .at(cell.reader.source, cell.span(), "not an area of this project")
        .help(format!("{did_you}areas are {}", any_of(&names)));
    cell.reader.log.put(fault.absent());
}

fn read_receives<'a>(section: &Section<'a>, taken: &mut Taken, called: &str) -> Option<Vec<GivenReceipt<'a>>> {
    let wanted = "a list, such as [{ from = \"north bay\", share = 0.5 }]";
    if section.get("receives").is_none() {
        return Some(Vec::new());
    }
    let mut receives = Vec::new();
    for entry in section.sections("receives", &RECEIPT, wanted)?.into_iter().flatten() {
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
        let what = match entry.get("what") {
            Some(cell) => cell.word(&Passed::EVERY.map(|what| (what.name(), what))),
            None => {
                taken.take("receives.what", called);
                Some(Passed::All)
            }
        };
        // A share at fault is told; where the water comes from is looked at all the same.
        if let Some((cell, from)) = from.and_then(|cell| Some((cell, cell.text()?.to_string()))) {
            receives.push(GivenReceipt { cell, from, share: share.unwrap_or(0.0), what: what.unwrap_or_default() });
        }
    }
    Some(receives)
}

/// Refuses a case that blocks every device an area may have: an area with a count of its own, or all that have none.
fn blocked_under_count(
    section: &Section<'_>,
    setting: &Setting<'_>,
    count: Option<&RangeInclusive<u32>>,
    count_at: Option<&Span>,
    called: Option<&str>,
) {
    let Some(most) = count.map(|count| *count.end()) else { return };
    for given in &setting.cases.given {
        let (Some(at), true) = (&given.blocked_at, given.case.blocked >= most) else { continue };
        let place = called.map_or(String::new(), |called| format!(" in `{called}`"));
        let mut fault = Fault::error(format!(
            "the case `{}` blocks {} of at most {most} devices{place}: none would be left",
            given.case.name, given.case.blocked
        ))
        .at(section.reader.source, at.clone(), "not less than the greatest count");
        if let Some(at) = count_at {
            fault = fault.at(section.reader.source, at.clone(), "the greatest count");
        }
        section.reader.log.put(fault.help("block fewer devices, or raise the greatest count"));
    }
}

/// Names areas that receive from one another in a circle, circle by circle; tells whether there are none.
fn report_circles(project: &Section<'_>, given: &[Given<'_>], receipts: &[Vec<Option<Receipt>>]) -> bool {
    // Circles are looked for among areas that have nothing else: faults of other values do not hide them.
    let dry = Storm::default();
    let mut areas: Vec<Catchment> =
        receipts.iter().map(|receives| without_size(receives.iter().flatten().copied().collect())).collect();
    let mut runs_one_way = true;
    while let Err(Circle(circle)) = demand::flows(&dry, &areas) {
        runs_one_way = false;
        let name = |area: usize| given[area].name.as_deref().unwrap_or_default();
        let title = match &circle[..] {
            [one, _] => format!("`{}` receives from itself", name(*one)),
            _ => {
                let names: Vec<_> = circle.iter().map(|&area| format!("`{}`", name(area))).collect();
                format!("areas receive from one another in a circle: {}", names.join(" from "))
            }
        };
        let mut fault = Fault::error(title);
        for pair in circle.windows(2) {
            if let Some(receipt) = given[pair[0]].receives.iter().find(|receipt| receipt.from == name(pair[1])) {
                fault = fault.at(project.reader.source, receipt.cell.span(), format!("runs to `{}`", name(pair[0])));
            }
        }
        project.reader.log.put(fault.help("water runs one way: take one of these out"));
        // The circle is cut where it closes, so that the next one is seen.
        if let [.., before, last] = circle[..] {
            areas[before].receives.retain(|receipt| receipt.from != last);
        }
    }
    runs_one_way
}

/// An area for layouts to be read against.
fn standing(given: &Given<'_>) -> Catchment {
    given.area.clone().unwrap_or_else(|| {
        // Far under every sill, so that no height is told to be wrong where the datum is.
        let surface = Surface { low_point: Some(Length::from_m(-1e5)), ..Surface::default() };
        Catchment { name: given.name.clone().unwrap_or_default(), surface, ..without_size(Vec::new()) }
    })
}

/// An area that only passes on what it receives.
fn without_size(receives: Vec<Receipt>) -> Catchment {
    Catchment { receives, ..Catchment::default() }
}
