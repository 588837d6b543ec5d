//! Catalogs: devices with a value, a list or a range for each free dimension, and every size that these make.

use std::collections::HashMap;
use std::ops::Range;
use std::path::{Path, PathBuf};
use std::sync::Arc;

use crate::device::{Device, Following, Interpolation, Kind, Law, Made, Place, Rating, RingDrain, Size, Tariff};
use crate::units::{Area, Dimension, Length, System};

use super::Catalog;
use super::defaults;
use super::fault::{Fault, Log, Source, Span};
use super::grid::{self, Least};
use super::rating::{self, Ratings};
use super::section::{Cell, Keys, Reader, Section, optional};
use super::{file, flow};

static CATALOG: Keys = Keys { table: "a catalog", known: &["title", "note", "device"] };

static DEVICE: Keys = Keys {
    table: "a [[device]]",
    known: &[
        "tag",
        "kind",
        "width",
        "height",
        "diameter",
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
        "set_height",
        "price",
        "source",
        "note",
    ],
};

static PRICE: Keys = Keys { table: "`price`", known: &["each", "per_width", "per_height", "per_area"] };

/// Most that one device may cost: ten thousand of them are still an amount.
const MOST_AMOUNT: f64 = 9e8;

/// The dimensions that a kind has, those that it must have first, with how many they are.
fn dimensions(kind: Kind) -> (&'static [&'static str], usize) {
    match kind {
        Kind::OpenScupper | Kind::RoofEdge => (&["width"], 1),
        Kind::ClosedScupper => (&["width", "height"], 2),
        Kind::PipeScupper | Kind::Standpipe => (&["diameter"], 1),
        Kind::OverflowDrain => (&["diameter", "dam", "dam_height", "free_area"], 2),
        Kind::Rated => (&["rating", "place", "width", "interpolation"], 2),
    }
}

/// How a key that a kind must have is written.
fn example(key: &str) -> &'static str {
    match key {
        "width" => "give a value, a list or a range: width = { from = \"6 in\", to = \"24 in\", step = \"1 in\" }",
        "height" => "give a value, a list or a range: height = [\"4 in\", \"6 in\"]",
        "diameter" => "give a value, a list or a range of inside diameters: diameter = [\"4 in\", \"6 in\"]",
        "dam" => "give the diameter of the ring dam: dam = \"10 in\"",
        "rating" => "name a CSV file of heads and flows: rating = \"drain-4in.csv\"",
        _ => "say where it stands: place = \"edge\" or place = \"interior\"",
    }
}

/// Why a key does not belong to a kind, and what to do about it.
fn foreign(kind: Kind, key: &str) -> (&'static str, &'static str) {
    match (kind, key) {
        (Kind::OpenScupper, "height") => ("it is open at the top", "take it out, or make it a \"closed scupper\""),
        (Kind::Rated, "height") => ("its table says what it carries", "take it out"),
        (_, "rating") => ("its flow comes from a law", "take it out, or make the device \"rated\""),
        (_, "interpolation") => ("it has no rating table", "take it out"),
        _ => ("it has no such dimension", "take it out"),
    }
}

/// Where a device stands in its catalog, for messages about it.
#[derive(Clone, Debug)]
pub(super) struct Entry {
    pub(super) source: Arc<Source>,
    pub(super) span: Span,
}

/// Whether the widths of a device could be made to measure.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Offered {
    /// It has none, or single ones.
    Single,
    /// In a range with a step, where the project asks for it.
    Range,
    /// In a range without a step.
    Any,
}

/// What a device would offer if no value of it were at fault: other files are held against it all the same.
#[derive(Debug)]
pub(super) struct Offer {
    pub(super) kind: Kind,
    pub(super) has_set_heights: bool,
    pub(super) has_price: bool,
    /// The law that it follows whatever the project chooses.
    pub(super) law: Option<Law>,
    /// How its widths could be made to measure.
    pub(super) widths: Offered,
    /// Its tag, where it has one.
    pub(super) tag: Option<Arc<str>>,
    /// Its tag or its table.
    pub(super) at: Entry,
}

/// Sizes of a device that comes in a range of widths.
#[derive(Debug)]
struct Ranged {
    sizes: Range<usize>,
    widths: grid::Range,
    tariff: Option<Tariff>,
}

/// All sizes of all catalogs, and where each tag was given.
#[derive(Debug)]
pub(super) struct Catalogs {
    pub(super) sizes: Vec<Size>,
    ranged: Vec<Ranged>,
    /// Step of the grid on which widths that may be any are searched.
    coarse: Length,
    pub(super) offers: Vec<Offer>,
    /// Whether every catalog was read, and the kind of every device in it.
    pub(super) complete: bool,
    entries: HashMap<Arc<str>, Entry>,
}

impl Catalogs {
    fn empty(system: System) -> Self {
        Self {
            sizes: Vec::new(),
            ranged: Vec::new(),
            coarse: defaults::coarse_widths(system),
            offers: Vec::new(),
            complete: true,
            entries: HashMap::new(),
        }
    }

    /// Those that a project names.
    pub(super) fn read(project: &Path, named: &[Cell<'_>], system: System, log: &Log) -> Self {
        let mut into = Self { complete: !named.is_empty(), ..Self::empty(system) };
        let mut names: Vec<(PathBuf, Span)> = Vec::new();
        for cell in named {
            let Some(name) = cell.text() else {
                into.complete = false;
                continue;
            };
            let path = file::beside(project, name);
            let same_file = path.canonicalize().unwrap_or_else(|_| path.clone());
            if let Some((_, first)) = names.iter().find(|(known, _)| *known == same_file) {
                let fault = Fault::error(format!("the catalog `{name}` is named twice"))
                    .at(cell.reader.source, cell.span(), "again here")
                    .at(cell.reader.source, first.clone(), "first here")
                    .help("name each catalog once");
                log.put(fault);
                continue;
            }
            names.push((same_file, cell.span()));
            into.complete &= read(&path, name, cell, log, &mut into).is_some();
        }
        into
    }

    /// Marks as made to measure what comes in any width, and all that comes in a range of widths where `all` are; whether
    /// anything is.
    pub(super) fn measure(&mut self, all: bool, round: Length) -> bool {
        for ranged in self.ranged.iter().filter(|ranged| all || ranged.widths.any) {
            let grid::Range { from, to, step, .. } = ranged.widths;
            let made = Arc::new(Made { from, to, round, grid: step, tariff: ranged.tariff });
            for size in &mut self.sizes[ranged.sizes.clone()] {
                size.made = Some(Arc::clone(&made));
            }
        }
        self.sizes.iter().any(|size| size.made.is_some())
    }
}

/// A catalog by itself.
pub(super) fn read_alone(path: &Path, log: &Log) -> Option<Catalog> {
    let as_written = path.display().to_string();
    let path = file::beside(Path::new(""), &as_written);
    let source = file::read(&path, &as_written, None, log)?;
    let mut into = Catalogs::empty(System::Us);
    let title = read_source(&path, &as_written, &source, log, &mut into).0;
    into.measure(false, defaults::round(System::Us));
    Some(Catalog { title: title.unwrap_or(as_written), sizes: into.sizes })
}

/// Reads a catalog; none where it cannot be told what all its devices are.
fn read(path: &Path, name: &str, named: &Cell<'_>, log: &Log, into: &mut Catalogs) -> Option<()> {
    let source = file::read(path, name, Some(named), log)?;
    read_source(path, name, &source, log, into).1
}

/// The title of a catalog, and whether it can be told what all its devices are.
fn read_source(
    path: &Path,
    name: &str,
    source: &Arc<Source>,
    log: &Log,
    into: &mut Catalogs,
) -> (Option<String>, Option<()>) {
    let mut mended = String::new();
    let table = file::parse(source, &mut mended, log);
    let reader = Reader { source, log };
    let catalog = Section::open(reader, &CATALOG, table.get_ref(), 0..0);
    let text = |key| catalog.get(key).and_then(|cell| cell.text()).map(str::to_string);
    let (title, _) = (text("title"), text("note"));
    let devices = catalog.sections("device", &DEVICE, "a list of devices, each under [[device]]");
    if catalog.get("device").is_none() {
        let help = "a catalog is a list of [[device]] tables, each with a tag and a kind";
        catalog.missing(&format!("`{name}` has no [[device]]"), help);
    }
    let Some(devices) = devices else { return (title, None) };
    let kinds_known: Vec<Option<()>> =
        devices.iter().map(|device| read_device(path, device.as_ref()?, log, into)).collect();
    (title, kinds_known.into_iter().collect::<Option<()>>().filter(|()| log.is_whole(source)))
}

/// A device as its table gives it. Of each optional key: none where it is absent, and an inner none where its value is at
/// fault.
struct Given {
    widths: Option<Option<Vec<Length>>>,
    range: Option<grid::Range>,
    heights: Option<Option<Vec<Length>>>,
    diameters: Option<Option<Vec<Length>>>,
    dam: Option<Option<Length>>,
    dam_height: Option<Option<Length>>,
    free_area: Option<Option<Area>>,
    set_heights: Option<Option<Vec<Length>>>,
    place: Option<Option<Place>>,
    rating: Option<Option<Ratings>>,
    interpolation: Option<Option<Interpolation>>,
    screen: Option<Option<f64>>,
    following: Option<Following>,
    price: Option<Option<Tariff>>,
    source: Option<Arc<str>>,
}

/// Reads a device and adds its sizes; none where its kind cannot be told.
fn read_device(catalog: &Path, section: &Section<'_>, log: &Log, into: &mut Catalogs) -> Option<()> {
    let tag_cell = section.get("tag");
    let tag = section
        .need("tag", "a tag is a short name, such as tag = \"RS\"")
        .and_then(|cell| read_tag(&cell, section, log, into));
    let kind = read_kind(section);
    let _ = section.get("note").and_then(|cell| cell.text());
    let set_heights = section.get("set_height").map(|cell| grid::lengths(&cell, Least::Zero));
    let given = Given { set_heights, ..Given::read(catalog, section, kind, into.coarse, log) };
    let kind = kind?;
    let law = section.get("law").map(|cell| flow::law(&cell, kind));
    into.offers.push(Offer {
        kind,
        law: law.flatten(),
        has_set_heights: given.set_heights.is_some(),
        has_price: section.get("price").is_some(),
        widths: match section.get("width").filter(|cell| kind.in_any_width() && cell.is_table()) {
            Some(cell) if grid::is_stepless(&cell) => Offered::Any,
            Some(_) => Offered::Range,
            None => Offered::Single,
        },
        tag: tag_cell.and_then(|cell| cell.text()).map(Arc::from),
        at: Entry {
            source: Arc::clone(section.reader.source),
            span: tag_cell.map_or(section.span.clone(), |cell| cell.span()),
        },
    });
    let belongs = given.belongs_to(kind, section);
    let complete = Given::completes(kind, section);
    if let (Some(tag), true, true) = (tag, belongs, complete) {
        given.make(kind, law, &tag, section, into);
    }
    Some(())
}

/// A device described in place of a catalog's, of one size; where it stands is not its own.
pub(super) fn described(holder: &Path, section: &Section<'_>, log: &Log) -> Option<Size> {
    let kind = read_kind(section);
    let mut into = Catalogs::empty(System::Us);
    let given = Given::read(holder, section, kind, into.coarse, log);
    let kind = kind?;
    let tag: Arc<str> = match section.get("tag") {
        Some(cell) => cell.text()?.into(),
        None => kind.name().into(),
    };
    let law = section.get("law").map(|cell| flow::law(&cell, kind));
    let (belongs, complete) = (given.belongs_to(kind, section), Given::completes(kind, section));
    if belongs && complete {
        given.make(kind, law, &tag, section, &mut into);
    }
    if into.sizes.len() > 1 {
        section.reader.fault(
            section.span.clone(),
            "a group is of one size",
            format!("{} are described here", into.sizes.len()),
            "give one value for each dimension, and a group for each size",
        );
        return None;
    }
    into.sizes.pop()
}

fn read_kind(section: &Section<'_>) -> Option<Kind> {
    section
        .need("kind", "a kind is what the device is, such as kind = \"closed scupper\"")
        .and_then(|cell| cell.word(&Kind::ALL.map(|kind| (kind.name(), kind))))
}

/// The widths of a device, and their range where they are one; those of a kind that is not known yet are not refused.
fn read_widths(
    section: &Section<'_>,
    kind: Option<Kind>,
    coarse: Length,
) -> (Option<Option<Vec<Length>>>, Option<grid::Range>) {
    let Some(cell) = section.get("width") else { return (None, None) };
    if kind.is_some_and(|kind| !kind.in_any_width()) {
        return (Some(grid::dimensions(&cell)), None);
    }
    match grid::widths(&cell, coarse) {
        Some((widths, range)) => (Some(Some(widths)), range),
        None => (Some(None), None),
    }
}

/// The part of its flow that a guard lets pass.
fn read_screen(cell: &Cell<'_>) -> Option<f64> {
    let screen = cell.number_positive()?;
    if screen > 1.0 {
        cell.at_fault("`screen` must be a part of one", "above 1", "0.7 lets seven tenths of the flow pass");
        return None;
    }
    Some(screen)
}

fn read_tag(cell: &Cell<'_>, section: &Section<'_>, log: &Log, into: &mut Catalogs) -> Option<Arc<str>> {
    let tag: Arc<str> = cell.text()?.into();
    let here = Entry { source: Arc::clone(section.reader.source), span: cell.span() };
    if let Some(first) = into.entries.get(&tag) {
        let fault = Fault::error(format!("two devices have the tag `{tag}`"))
            .at(&here.source, here.span, "again here")
            .at(&first.source, first.span.clone(), "first here")
            .help("every device of all catalogs has a tag of its own");
        log.put(fault);
        return None;
    }
    into.entries.insert(Arc::clone(&tag), here);
    Some(tag)
}

impl Given {
    /// All but the set heights.
    fn read(holder: &Path, section: &Section<'_>, kind: Option<Kind>, coarse: Length, log: &Log) -> Self {
        let dimensions = |key| section.get(key).map(|cell| grid::dimensions(&cell));
        let (widths, range) = read_widths(section, kind, coarse);
        Self {
            widths,
            range,
            heights: dimensions("height"),
            diameters: dimensions("diameter"),
            dam: section.get("dam").map(|cell| cell.positive_length()),
            dam_height: section.get("dam_height").map(|cell| cell.length()),
            free_area: section.get("free_area").map(|cell| cell.positive(Dimension::Area, Area::m2)),
            set_heights: None,
            place: section.get("place").map(|cell| cell.word(&[("edge", Place::Edge), ("interior", Place::Interior)])),
            rating: section.get("rating").map(|cell| rating::read(holder, &cell, log)),
            interpolation: section
                .get("interpolation")
                .map(|cell| cell.word(&[("linear", Interpolation::Linear), ("log-log", Interpolation::LogLog)])),
            screen: section.get("screen").map(|cell| read_screen(&cell)),
            following: flow::following(section),
            price: section.section("price", &PRICE).map(|price| read_tariff(&price)),
            source: section.get("source").and_then(|cell| cell.text()).map(Arc::from),
        }
    }

    /// Whether every key that is given has a meaning for the kind.
    fn belongs_to(&self, kind: Kind, section: &Section<'_>) -> bool {
        let (own, _) = dimensions(kind);
        let all = ["width", "height", "diameter", "dam", "dam_height", "free_area", "rating", "interpolation"];
        let mut belongs = true;
        for key in all.into_iter().filter(|key| !own.contains(key)) {
            if let Some(cell) = section.get(key) {
                let (why, help) = foreign(kind, key);
                cell.at_fault(format!("`{key}` does not belong to a device of kind \"{kind}\""), why, help);
                belongs = false;
            }
        }
        if let (Some(at_edge), Some(Some(place)), Some(cell)) = (kind.at_edge(), self.place, section.get("place"))
            && at_edge != (place == Place::Edge)
        {
            let (title, label, right) = if at_edge {
                ("stands in the parapet", "not inside the roof", "edge")
            } else {
                ("stands inside the roof", "not in the parapet", "interior")
            };
            let named = match kind {
                Kind::OverflowDrain => "an overflow drain",
                Kind::Standpipe => "a standpipe",
                Kind::RoofEdge => "a roof edge",
                _ => "a scupper",
            };
            cell.at_fault(format!("{named} {title}"), label, format!("write \"{right}\", or take the key out"));
            belongs = false;
        }
        let several = self.widths.iter().flatten().any(|widths| widths.len() > 1);
        let one_table = matches!(self.rating, Some(Some(Ratings::One(_))));
        if let (true, true, Some(cell)) = (one_table, several, section.get("width")) {
            cell.at_fault(
                "a rated device has one width: that of its table",
                "several are given",
                "give one width, or none",
            );
            belongs = false;
        }
        if let (Some(Some(dam)), Some(Some(throats)), Some(cell)) = (self.dam, &self.diameters, section.get("dam"))
            && throats.iter().any(|throat| throat.nm() > dam.nm())
        {
            cell.at_fault(
                "the ring dam is narrower than the throat",
                "less than `diameter`",
                "give the diameter of its rim",
            );
            belongs = false;
        }
        if let (Some(false), Some(cell)) = (kind.at_edge(), section.get("conductor_head")) {
            cell.at_fault(
                format!("a device of kind \"{kind}\" has no conductor head"),
                "it stands inside the roof",
                "give it a leader, or take the key out",
            );
            belongs = false;
        }
        let (has_width, has_height) = match kind {
            Kind::OpenScupper | Kind::RoofEdge => (true, false),
            Kind::ClosedScupper | Kind::PipeScupper => (true, true),
            Kind::OverflowDrain | Kind::Standpipe => (false, false),
            // A table that cannot be read may be one by width.
            Kind::Rated => (self.widths.is_some() || !matches!(self.rating, None | Some(Some(Ratings::One(_)))), false),
        };
        let priced = [
            ("per_width", has_width, "width"),
            ("per_height", has_height, "height"),
            ("per_area", has_width && has_height, "width and height"),
        ];
        let price = section.section("price", &PRICE);
        for (key, _, dimension) in priced.into_iter().filter(|&(_, has_it, _)| !has_it) {
            if let Some(cell) = price.as_ref().and_then(|price| price.get(key)) {
                let title = format!("`{key}` needs a device with {dimension}");
                cell.at_fault(title, "this device has none", "price it with `each`");
                belongs = false;
            }
        }
        belongs
    }

    /// Whether every key that the kind needs is given.
    fn completes(kind: Kind, section: &Section<'_>) -> bool {
        let (own, needed) = dimensions(kind);
        let missing: Vec<_> = own[..needed].iter().filter(|&&key| section.get(key).is_none()).collect();
        for key in &missing {
            section.missing(&format!("`{key}` is missing in a device of kind \"{kind}\""), example(key));
        }
        missing.is_empty()
    }

    /// Every device that the dimensions make; none where one of them is at fault.
    fn devices(&mut self, kind: Kind, section: &Section<'_>) -> Option<Vec<Device>> {
        let widths = optional(self.widths.take())?;
        let diameters = optional(self.diameters.take())?;
        Some(match kind {
            Kind::OpenScupper => widths?.into_iter().map(|width| Device::Open { width }).collect(),
            Kind::RoofEdge => widths?.into_iter().map(|width| Device::Edge { width }).collect(),
            Kind::ClosedScupper => closed(section, &widths?, &self.heights.take()??)?,
            Kind::PipeScupper => diameters?.into_iter().map(|diameter| Device::Pipe { diameter }).collect(),
            Kind::Standpipe => diameters?.into_iter().map(|diameter| Device::Standpipe { diameter }).collect(),
            Kind::OverflowDrain => {
                let (dam, free_area) = (self.dam??, optional(self.free_area)?);
                let dam_height = optional(self.dam_height)?.unwrap_or(Length::ZERO);
                let drain = |throat| Device::Drain(RingDrain { dam, dam_height, throat, free_area });
                diameters?.into_iter().map(drain).collect()
            }
            Kind::Rated => {
                let by = optional(self.interpolation)?.unwrap_or_default();
                rated(section, &self.rating.take()??, widths, by)?
            }
        })
    }

    /// Adds every size that the device makes, unless one of its values is at fault.
    fn make(
        mut self,
        kind: Kind,
        law: Option<Option<Law>>,
        tag: &Arc<str>,
        section: &Section<'_>,
        into: &mut Catalogs,
    ) {
        let source = self.source.clone();
        let mut made = || {
            let devices = self.devices(kind, section)?;
            let place = match kind.at_edge() {
                Some(true) => Place::Edge,
                Some(false) => Place::Interior,
                None => self.place??,
            };
            let price = optional(self.price.take())?;
            let set_heights: Option<Arc<[Length]>> = optional(self.set_heights.take())?.map(Arc::from);
            if price.as_ref().is_some_and(|price| !can_be_held(price, tag, section, &devices)) {
                return None;
            }
            let (law, screen) = (optional(law)?, optional(self.screen)?.unwrap_or(1.0));
            Some((devices, place, price, set_heights, law, screen, self.following?))
        };
        let Some((devices, place, price, set_heights, law, screen, following)) = made() else { return };
        if into.sizes.len() + devices.len() > grid::MOST {
            section.reader.fault(
                section.span.clone(),
                format!("the catalogs make more than {} sizes", grid::MOST),
                "too many with this device",
                "give coarser steps or narrower ranges",
            );
            return;
        }
        if let Some(widths) = self.range {
            let sizes = into.sizes.len()..into.sizes.len() + devices.len();
            into.ranged.push(Ranged { sizes, widths, tariff: price });
        }
        into.sizes.extend(devices.into_iter().map(|device| Size {
            tag: Arc::clone(tag),
            price: price.as_ref().map(|price| price.of(&device)),
            device,
            place,
            set_heights: set_heights.clone(),
            source: source.clone(),
            law,
            screen,
            following,
            made: None,
        }));
    }
}

fn closed(section: &Section<'_>, widths: &[Length], heights: &[Length]) -> Option<Vec<Device>> {
    let count = widths.len().saturating_mul(heights.len());
    if count > grid::MOST {
        if let Some(cell) = section.get("width") {
            let (wide, high) = (widths.len(), heights.len());
            let title = format!("{wide} widths and {high} heights make {count} sizes; up to {} would pass", grid::MOST);
            grid::too_many(&cell, title);
        }
        return None;
    }
    let of_width = |&width: &Length| heights.iter().map(move |&height| Device::Closed { width, height });
    Some(widths.iter().flat_map(of_width).collect())
}

/// The sizes of a rated device: one, or one for each width that is asked for of a table by width.
fn rated(
    section: &Section<'_>,
    ratings: &Ratings,
    widths: Option<Vec<Length>>,
    by: Interpolation,
) -> Option<Vec<Device>> {
    let one = |width, rating: Rating| Device::Rated { width, rating: Arc::new(rating.read_by(by)) };
    let tables = match ratings {
        Ratings::One(rating) => {
            return Some(vec![one(widths.and_then(|widths| widths.first().copied()), rating.clone())]);
        }
        Ratings::ByWidth(tables) => tables,
    };
    let (least, greatest) = (tables.first()?.0, tables.last()?.0);
    let widths = widths.unwrap_or_else(|| tables.iter().map(|&(width, _)| width).collect());
    let outside = widths.iter().any(|width| width.nm() < least.nm() || width.nm() > greatest.nm());
    if let (true, Some(cell)) = (outside, section.get("width")) {
        let inches = |length: Length| (length.to_inches() * 1000.0).round() / 1000.0;
        cell.at_fault(
            "a width lies outside its rating table",
            "nothing was measured there",
            format!("the table runs from {} in to {} in", inches(least), inches(greatest)),
        );
        return None;
    }
    let made: Option<Vec<Device>> =
        widths.into_iter().map(|width| Some(one(Some(width), ratings.at(width)?))).collect();
    if let (None, Some(cell)) = (&made, section.get("width")) {
        cell.at_fault(
            "a width lies between two tables that share no heads, or whose flows do not rise together",
            "nothing can be read between them",
            "give both tables rows over one range of heads, or name only widths that have a table",
        );
    }
    made
}

fn read_tariff(section: &Section<'_>) -> Option<Tariff> {
    let each = section.get("each").map(|cell| cell.number_not_negative());
    let per = |key, dimension| section.get(key).map(|cell| cell.price(&[dimension]));
    let (width, height) = (per("per_width", Dimension::Length), per("per_height", Dimension::Length));
    let area = per("per_area", Dimension::Area);
    if each.is_none() && width.is_none() && height.is_none() && area.is_none() {
        section.missing("`price` is empty", "give each, per_width, per_height or per_area");
        return None;
    }
    Some(Tariff {
        each: each.unwrap_or(Some(0.0))?,
        per_width: optional(width)?,
        per_height: optional(height)?,
        per_area: optional(area)?,
    })
}

/// Whether sums of the devices' prices stay within what an amount can hold.
fn can_be_held(tariff: &Tariff, tag: &str, section: &Section<'_>, devices: &[Device]) -> bool {
    let dearest = devices.iter().map(|device| tariff.of(device).amount()).fold(0.0, f64::max);
    if let (true, Some(cell)) = (dearest > MOST_AMOUNT, section.get("price")) {
        cell.at_fault(
            format!("the price of `{tag}` is too great"),
            "makes an amount of more than 900 million",
            "give all prices in thousands, or check this one",
        );
    }
    dearest <= MOST_AMOUNT
}
