//! Catalogs: devices with a value, a list or a range for each free dimension, and every size that these make.

use std::collections::HashMap;
use std::path::Path;
use std::sync::Arc;

use crate::device::{Device, Kind, Place, Rating, Size};
use crate::units::{Dimension, Length, Money, Priced, read_price};

use super::fault::{Fault, Log, Source, Span};
use super::grid::{self, Least};
use super::section::{Cell, Keys, Reader, Section, optional};
use super::{file, rating};

static CATALOG: Keys = Keys { table: "a catalog", known: &["title", "note", "device"], unsupported: &[] };

static DEVICE: Keys = Keys {
    table: "a [[device]]",
    known: &["tag", "kind", "width", "height", "place", "rating", "set_height", "price", "source", "note"],
    unsupported: &[
        ("law", "a flow law of its own"),
        ("diameter", "round openings"),
        ("dam", "ring dams"),
        ("leader", "what follows the device: a leader"),
        ("conductor_head", "what follows the device: a conductor head"),
        ("screen", "a guard in front of the opening"),
        ("interpolation", "other ways of reading a rating table between its rows"),
    ],
};

static PRICE: Keys =
    Keys { table: "`price`", known: &["each", "per_width", "per_height", "per_area"], unsupported: &[] };

const KINDS: [(&str, Kind); 3] = [
    (Kind::OpenScupper.name(), Kind::OpenScupper),
    (Kind::ClosedScupper.name(), Kind::ClosedScupper),
    (Kind::Rated.name(), Kind::Rated),
];

/// Where a device stands in its catalog, for messages about it.
#[derive(Clone, Debug)]
pub(super) struct Entry {
    pub(super) source: Arc<Source>,
    pub(super) span: Span,
}

/// All sizes of all catalogs, and where each tag was given.
#[derive(Debug, Default)]
pub(super) struct Catalogs {
    pub(super) sizes: Vec<Size>,
    pub(super) entries: HashMap<Arc<str>, Entry>,
}

/// Reads a catalog that a project names.
pub(super) fn read(project: &Path, named: &Cell<'_>, log: &Log, into: &mut Catalogs) {
    let Some(name) = named.text() else { return };
    let path = file::beside(project, name);
    let Some(source) = file::read(&path, name, Some(named), log) else { return };
    let (table, whole) = file::parse(&source, log);
    let reader = Reader { source: &source, log };
    let catalog = Section::open(reader, &CATALOG, table.get_ref(), 0..0);
    let devices = catalog.sections("device", &DEVICE);
    if devices.is_empty() && whole && catalog.get("device").is_none() {
        log.put(
            Fault::error(format!("`{name}` has no [[device]]"))
                .at(&source, 0..0, "this file")
                .help("a catalog is a list of [[device]] tables, each with a tag and a kind"),
        );
    }
    for text in ["title", "note"] {
        let _ = catalog.get(text).and_then(|cell| cell.text());
    }
    for device in devices {
        read_device(&path, &device, log, into);
    }
}

/// A device as its table gives it. Of each optional key: none where it is absent, and an inner none where its value is at
/// fault.
struct Given {
    widths: Option<Option<Vec<Length>>>,
    heights: Option<Option<Vec<Length>>>,
    set_heights: Option<Option<Vec<Length>>>,
    place: Option<Option<Place>>,
    rating: Option<Option<Rating>>,
    price: Option<Option<Price>>,
    source: Option<Arc<str>>,
}

fn read_device(catalog: &Path, section: &Section<'_>, log: &Log, into: &mut Catalogs) {
    let tag = section
        .need("tag", "a tag is a short name, such as tag = \"RS\"")
        .and_then(|cell| read_tag(&cell, section, log, into));
    let kind = section
        .need("kind", "a kind is \"open scupper\", \"closed scupper\" or \"rated\"")
        .and_then(|cell| cell.word(&KINDS));
    let _ = section.get("note").and_then(|cell| cell.text());
    let lengths = |key, least| section.get(key).map(|cell| grid::lengths(&cell, least));
    let given = Given {
        widths: lengths("width", Least::AboveZero),
        heights: lengths("height", Least::AboveZero),
        set_heights: lengths("set_height", Least::Zero),
        place: section.get("place").map(|cell| cell.word(&[("edge", Place::Edge), ("interior", Place::Interior)])),
        rating: section.get("rating").map(|cell| rating::read(catalog, &cell, log)),
        price: section.section("price", &PRICE).map(|price| Price::read(&price)),
        source: section.get("source").and_then(|cell| cell.text()).map(Arc::from),
    };
    let Some(kind) = kind else { return };
    let belongs = given.belongs_to(kind, section);
    let complete = given.completes(kind, section);
    if let (Some(tag), true, true) = (tag, belongs, complete) {
        given.make(kind, &tag, section, into);
    }
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
    /// Whether every key that is given has a meaning for the kind.
    fn belongs_to(&self, kind: Kind, section: &Section<'_>) -> bool {
        let refuse = |key: &'static str, why: &str, help: &str| match section.get(key) {
            Some(cell) => {
                cell.at_fault(format!("`{key}` does not belong to a device of kind \"{kind}\""), why, help);
                false
            }
            None => true,
        };
        let scupper = kind != Kind::Rated;
        let mut belongs = match kind {
            Kind::OpenScupper => {
                refuse("height", "it is open at the top", "take it out, or make it a \"closed scupper\"")
            }
            Kind::ClosedScupper => true,
            Kind::Rated => refuse("height", "its table says what it carries", "take it out"),
        };
        belongs &=
            !scupper || refuse("rating", "its flow comes from a law", "take it out, or make the device \"rated\"");
        if let (true, Some(Some(Place::Interior)), Some(cell)) = (scupper, self.place, section.get("place")) {
            cell.at_fault(
                "a scupper stands in the parapet",
                "not inside the roof",
                "write \"edge\", or take the key out",
            );
            belongs = false;
        }
        let several = self.widths.iter().flatten().any(|widths| widths.len() > 1);
        if let (false, true, Some(cell)) = (scupper, several, section.get("width")) {
            cell.at_fault(
                "a rated device has one width: that of its table",
                "several are given",
                "give one width, or none",
            );
            belongs = false;
        }
        belongs
    }

    /// Whether every key that the kind needs is given.
    fn completes(&self, kind: Kind, section: &Section<'_>) -> bool {
        let needed: &[(bool, &str, &str)] = match kind {
            Kind::OpenScupper | Kind::ClosedScupper => &[
                (
                    self.widths.is_some(),
                    "width",
                    "give a value, a list or a range: width = { from = \"6 in\", to = \"24 in\", step = \"1 in\" }",
                ),
                (
                    self.heights.is_some() || kind == Kind::OpenScupper,
                    "height",
                    "give a value, a list or a range: height = [\"4 in\", \"6 in\"]",
                ),
            ],
            Kind::Rated => &[
                (self.rating.is_some(), "rating", "name a CSV file of heads and flows: rating = \"drain-4in.csv\""),
                (self.place.is_some(), "place", "say where it stands: place = \"edge\" or place = \"interior\""),
            ],
        };
        for (_, key, help) in needed.iter().filter(|(given, ..)| !given) {
            section.missing(&format!("`{key}` is missing in a device of kind \"{kind}\""), help);
        }
        needed.iter().all(|&(given, ..)| given)
    }

    /// Adds every size that the device makes, unless one of its values is at fault.
    fn make(self, kind: Kind, tag: &Arc<str>, section: &Section<'_>, into: &mut Catalogs) {
        let made = || {
            let widths = optional(self.widths)?;
            let devices = match kind {
                Kind::OpenScupper => widths?.into_iter().map(|width| Device::Open { width }).collect(),
                Kind::ClosedScupper => closed(section, &widths?, &self.heights??)?,
                Kind::Rated => {
                    let rating = Arc::new(self.rating??);
                    vec![Device::Rated { width: widths.and_then(|widths| widths.first().copied()), rating }]
                }
            };
            let place = if kind == Kind::Rated { self.place?? } else { Place::Edge };
            let price = optional(self.price)?;
            let set_heights: Option<Arc<[Length]>> = optional(self.set_heights)?.map(Arc::from);
            let suits = price.as_ref().is_none_or(|price| price.suits(section, &devices[0]));
            suits.then_some((devices, place, price, set_heights))
        };
        let Some((devices, place, price, set_heights)) = made() else { return };
        if into.sizes.len() + devices.len() > grid::MOST {
            section.reader.fault(
                section.span.clone(),
                format!("the catalogs make more than {} sizes", grid::MOST),
                "too many with this device",
                "give coarser steps or narrower ranges",
            );
            return;
        }
        into.sizes.extend(devices.into_iter().map(|device| Size {
            tag: Arc::clone(tag),
            price: price.as_ref().map(|price| price.of(&device)),
            device,
            place,
            set_heights: set_heights.clone(),
            source: self.source.clone(),
        }));
    }
}

fn closed(section: &Section<'_>, widths: &[Length], heights: &[Length]) -> Option<Vec<Device>> {
    let count = widths.len().saturating_mul(heights.len());
    if count > grid::MOST {
        if let Some(cell) = section.get("height") {
            grid::too_many(&cell, count);
        }
        return None;
    }
    let of_width = |&width: &Length| heights.iter().map(move |&height| Device::Closed { width, height });
    Some(widths.iter().flat_map(of_width).collect())
}

/// What a device costs: so much each, and so much for its dimensions.
#[derive(Debug, Default)]
struct Price {
    each: f64,
    per_width: Option<Priced>,
    per_height: Option<Priced>,
    per_area: Option<Priced>,
}

impl Price {
    fn read(section: &Section<'_>) -> Option<Self> {
        let each = section.get("each").map(|cell| cell.number_not_negative());
        let per = |key, dimension| section.get(key).map(|cell| price_per(&cell, dimension));
        let (width, height) = (per("per_width", Dimension::Length), per("per_height", Dimension::Length));
        let area = per("per_area", Dimension::Area);
        if each.is_none() && width.is_none() && height.is_none() && area.is_none() {
            section.missing("`price` is empty", "give each, per_width, per_height or per_area");
            return None;
        }
        Some(Self {
            each: each.unwrap_or(Some(0.0))?,
            per_width: optional(width)?,
            per_height: optional(height)?,
            per_area: optional(area)?,
        })
    }

    /// Whether the device has every dimension that the price counts.
    fn suits(&self, section: &Section<'_>, device: &Device) -> bool {
        let lacks = |priced: bool, dimension: Option<Length>| priced && dimension.is_none();
        let (width, height) = (device.width(), device.height());
        let lacking = [
            (lacks(self.per_width.is_some(), width), "per_width", "width"),
            (lacks(self.per_height.is_some(), height), "per_height", "height"),
            (lacks(self.per_area.is_some(), width.and(height)), "per_area", "width and height"),
        ];
        let mut suits = true;
        for (_, key, dimension) in lacking.into_iter().filter(|&(lacking, ..)| lacking) {
            suits = false;
            let price = section.section("price", &PRICE);
            if let Some(cell) = price.and_then(|price| price.get(key)) {
                cell.at_fault(
                    format!("`{key}` needs a device with {dimension}"),
                    "this device has none",
                    "price it with `each`",
                );
            }
        }
        suits
    }

    fn of(&self, device: &Device) -> Money {
        let (width, height) = (device.width().map_or(0.0, Length::m), device.height().map_or(0.0, Length::m));
        let per = |price: Option<Priced>, size: f64| price.map_or(0.0, |price| price.for_si(size));
        Money::nearest(
            self.each + per(self.per_width, width) + per(self.per_height, height) + per(self.per_area, width * height),
        )
    }
}

fn price_per(cell: &Cell<'_>, per: Dimension) -> Option<Priced> {
    let text = cell.text()?;
    match read_price(text, per) {
        Ok(price) if price.per_si() < 0.0 => {
            cell.at_fault(format!("`{}` must not be negative", cell.key), "below zero", "write zero or more");
            None
        }
        Ok(price) => Some(price),
        Err(fault) => {
            cell.at_fault(format!("`{}`: {fault}", cell.key), "a price for each unit belongs here", fault.help());
            None
        }
    }
}
