//! The report of `catalog`: what a catalog holds, device by device.

use serde::Serialize;

use crate::device::{Device, Place, Size};
use crate::units::{Length, Money, System};

use super::page::{self, Block, Table};
use super::words::{self, Words};
use super::{Format, plain, written};

/// All sizes of one device.
struct Entry<'s> {
    sizes: Vec<&'s Size>,
}

fn entries(sizes: &[Size]) -> Vec<Entry<'_>> {
    let mut entries: Vec<Entry<'_>> = Vec::new();
    for size in sizes {
        match entries.iter_mut().find(|entry| entry.sizes[0].tag == size.tag) {
            Some(entry) => entry.sizes.push(size),
            None => entries.push(Entry { sizes: vec![size] }),
        }
    }
    entries
}

impl Entry<'_> {
    /// Least and greatest of a dimension, where the device has it.
    fn ends<T: Copy + PartialOrd>(&self, of: impl Fn(&Size) -> Option<T>) -> Option<(T, T)> {
        let mut values = self.sizes.iter().filter_map(|size| of(size));
        let first = values.next()?;
        Some(values.fold((first, first), |(low, high), value| {
            (if value < low { value } else { low }, if value > high { value } else { high })
        }))
    }
}

pub(super) fn write(sizes: &[Size], title: &str, system: System, format: Format, width: usize) -> String {
    match format {
        Format::Table => page::text(&blocks(sizes, title, Words(system)), width),
        Format::Markdown => page::markdown(&blocks(sizes, title, Words(system))),
        Format::Csv => csv(sizes, Words(system)),
        Format::Json => json(sizes, title),
    }
}

fn between<T: Copy + PartialEq>(ends: Option<(T, T)>, shown: impl Fn(T) -> String) -> String {
    match ends {
        None => "-".into(),
        Some((low, high)) if low == high => shown(low),
        Some((low, high)) => format!("{} to {}", shown(low), shown(high)),
    }
}

fn blocks(sizes: &[Size], title: &str, words: Words) -> Vec<Block> {
    let entries = entries(sizes);
    let cell = |tell: &dyn Fn(&Entry<'_>) -> String| entries.iter().map(tell).collect::<Vec<_>>();
    let length = |of: fn(&Device) -> Option<Length>| {
        cell(&|entry| between(entry.ends(|size| of(&size.device)), |length| words.bare_size(length)))
    };
    let place = |entry: &Entry<'_>| if entry.sizes[0].place == Place::Edge { "edge" } else { "interior" }.to_string();
    let unit = words.small_unit();
    let mut columns = vec![
        ("tag".to_string(), false, cell(&|entry| entry.sizes[0].tag.to_string())),
        ("kind".into(), false, cell(&|entry| entry.sizes[0].device.kind().to_string())),
        ("place".into(), false, cell(&place)),
        ("sizes".into(), true, cell(&|entry| entry.sizes.len().to_string())),
        (format!("width {unit}"), false, length(Device::width)),
        (format!("height {unit}"), false, length(Device::height)),
        (format!("diameter {unit}"), false, length(Device::diameter)),
        (format!("set height {unit}"), false, cell(&|entry| set_heights(entry.sizes[0], words))),
        ("price".into(), false, cell(&|entry| between(entry.ends(|size| size.price), words::money))),
        ("law".into(), false, cell(&|entry| law(entry.sizes[0]))),
    ];
    // A column that no device fills says nothing.
    columns.retain(|(_, _, cells)| cells.iter().any(|cell| cell != "-"));
    let mut lines: Vec<String> = Vec::new();
    for entry in &entries {
        let size = entry.sizes[0];
        if let Some(source) = &size.source {
            lines.push(format!("{}: source {source}.", size.tag));
        }
        lines.extend(fittings(size, words).into_iter().map(|fitting| format!("{}: {fitting}.", size.tag)));
        if let Device::Rated { rating, .. } = &size.device {
            let rows = rating.rows();
            let (first, last) = (rows[0], rows[rows.len() - 1]);
            lines.push(format!(
                "{}: rated at {} to {} of head, {} to {}{}.",
                words.name(size),
                words.bare_size(first.0),
                words.size(last.0),
                words.bare_flow(first.1),
                words.flow(last.1),
                if entry.sizes.len() > 1 { ", and so on for each width" } else { "" }
            ));
        }
    }
    if sizes.iter().any(|size| size.price.is_none()) {
        lines.push("Devices without a price cannot be ranked by cost.".into());
    }
    let mut blocks = vec![Block::Title(title.to_string()), Block::Table(Table::of(columns))];
    if !lines.is_empty() {
        blocks.push(Block::List(lines));
    }
    blocks
}

/// What is on a device, before it and behind it, the same for all its sizes.
fn fittings(size: &Size, words: Words) -> Vec<String> {
    let mut fittings: Vec<String> = super::measure::of_catalog(size, words).into_iter().collect();
    if let Device::Drain(drain) = &size.device {
        let dome =
            drain.free_area.map_or(String::new(), |area| format!(", under a dome of {} free", words.opening(area)));
        let (dam, height) = (words.size(drain.dam), words.size(drain.dam_height));
        fittings.push(format!("a ring dam of {dam}, {height} above the throat{dome}"));
    }
    if size.screen < 1.0 {
        fittings.push(format!("behind a guard that lets {} of the flow pass", words::trimmed(size.screen, 3)));
    }
    if let Some(leader) = size.following.leader {
        let (diameter, flow) = (words.size(leader.diameter), words.flow(leader.capacity()));
        fittings.push(format!("a leader of {diameter}, {} full, carries {flow}", leader.fill.name()));
    }
    if let Some(head) = size.following.conductor_head {
        fittings.push(format!(
            "a conductor head, its outlet of {} {} below its lip, the lip {} below the sill, its overflow {} wide",
            words.size(head.outlet),
            words.size(head.depth),
            words.size(head.lip),
            words.size(head.overflow_width)
        ));
    }
    fittings
}

fn set_heights(size: &Size, words: Words) -> String {
    let heights = size.set_heights.as_ref().map(|heights| (heights[0], heights[heights.len() - 1]));
    between(heights, |height| words.bare_size(height))
}

/// The law that it follows: its own, or that of the project.
fn law(size: &Size) -> String {
    let laws = size.device.kind().laws();
    match size.law {
        Some(law) => law.name().to_string(),
        None if laws.len() == 1 => laws[0].name().to_string(),
        None => format!("as the project says, else {}", laws[0].name()),
    }
}

fn csv(sizes: &[Size], words: Words) -> String {
    let unit = words.small_unit();
    let head = [
        "tag".to_string(),
        "kind".into(),
        format!("width_{unit}"),
        format!("height_{unit}"),
        format!("diameter_{unit}"),
        "price".into(),
    ];
    let mut rows = vec![head.to_vec()];
    let small = |length: Option<Length>| length.map_or(String::new(), |length| plain(words.small(length), 4));
    rows.extend(sizes.iter().map(|size| {
        vec![
            size.tag.to_string(),
            size.device.kind().to_string(),
            small(size.device.width()),
            small(size.device.height()),
            small(size.device.diameter()),
            size.price.map_or(String::new(), |price| plain(price.amount(), 2)),
        ]
    }));
    written(&rows)
}

#[derive(Serialize)]
struct Document<'a> {
    format: &'static str,
    title: &'a str,
    sizes: Vec<Listed<'a>>,
}

#[derive(Serialize)]
struct Listed<'a> {
    device: &'a str,
    kind: &'static str,
    place: &'static str,
    width_m: Option<f64>,
    height_m: Option<f64>,
    diameter_m: Option<f64>,
    price: Option<f64>,
    law: Option<&'static str>,
    screen: f64,
    dam_m: Option<f64>,
    dam_height_m: Option<f64>,
    leader_diameter_m: Option<f64>,
    leader_fill: Option<&'static str>,
    leader_m3_s: Option<f64>,
    conductor_head_outlet_m: Option<f64>,
    source: Option<&'a str>,
    #[serde(skip_serializing_if = "Option::is_none")]
    made_from_m: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    made_to_m: Option<f64>,
}

fn json(sizes: &[Size], title: &str) -> String {
    let drain = |size: &Size| match size.device {
        Device::Drain(drain) => Some(drain),
        _ => None,
    };
    let listed = sizes.iter().map(|size| Listed {
        dam_m: drain(size).map(|drain| drain.dam.m()),
        dam_height_m: drain(size).map(|drain| drain.dam_height.m()),
        leader_diameter_m: size.following.leader.map(|leader| leader.diameter.m()),
        leader_fill: size.following.leader.map(|leader| leader.fill.name()),
        leader_m3_s: size.following.leader.map(|leader| leader.capacity().m3_per_s()),
        conductor_head_outlet_m: size.following.conductor_head.map(|head| head.outlet.m()),
        device: &size.tag,
        kind: size.device.kind().name(),
        place: if size.place == Place::Edge { "edge" } else { "interior" },
        width_m: size.device.width().map(Length::m),
        height_m: size.device.height().map(Length::m),
        diameter_m: size.device.diameter().map(Length::m),
        price: size.price.map(Money::amount),
        law: size.law.map(crate::device::Law::name),
        screen: size.screen,
        source: size.source.as_deref(),
        made_from_m: size.made.as_ref().map(|made| made.from.m()),
        made_to_m: size.made.as_ref().map(|made| made.to.m()),
    });
    let document = Document { format: "brimline catalog 1", title, sizes: listed.collect() };
    let mut text = serde_json::to_string_pretty(&document).unwrap_or_default();
    text.push('\n');
    text
}
