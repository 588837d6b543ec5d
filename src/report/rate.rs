//! The report of `rate`: what one device passes under a law, head by head, or the head that it needs for a flow.

use serde::Serialize;

use crate::device::{Curve, Head, Law, Regime, Site, Size};
use crate::root::crossing;
use crate::units::{Flow, Length, System};

use super::marks::out_of_range;
use super::page::{self, Block, Table};
use super::words::{Words, list};
use super::{Format, Rated};

/// Head, m, up to which the head for a flow is looked for.
const HIGHEST: f64 = 10.0;

fn curve(size: &Size, site: &Site, sill: Length, law: Law) -> Curve {
    Size { law: Some(law), ..size.clone() }.curve(site, sill, Length::ZERO).0
}

/// The least head under which a device passes a flow; none where it never does.
pub fn head_for(curve: &Curve, flow: Flow) -> Option<Length> {
    let short = |head: f64| (curve.discharge(Head::of(Length::from_m(head))).flow - flow).m3_per_s();
    crossing(short, 0.0, HIGHEST).ok().map(|(_, head)| Length::from_m(head))
}

pub(super) fn write(rated: &Rated<'_>, format: Format, width: usize) -> String {
    match format {
        Format::Table => page::text(&blocks(rated), width),
        Format::Markdown => page::markdown(&blocks(rated)),
        Format::Json => json(rated),
        Format::Csv => csv(rated),
    }
}

fn curves(rated: &Rated<'_>) -> Vec<(Law, Curve)> {
    rated.laws.iter().map(|&law| (law, curve(rated.size, &rated.site, rated.sill, law))).collect()
}

/// A law, its curve, and the head that it needs for a flow.
type Needed<'c> = (Law, &'c Curve, Option<Length>);

/// Heads that are asked for, or those that the flow needs under each law.
fn blocks(rated: &Rated<'_>) -> Vec<Block> {
    let words = Words(rated.system);
    let curves = curves(rated);
    let mut blocks = vec![Block::Title(title(rated, words))];
    if let Some(flow) = rated.flow {
        let mut found: Vec<_> = curves.iter().map(|(law, curve)| (*law, curve, head_for(curve, flow))).collect();
        found.sort_by(|a, b| a.2.map_or(f64::INFINITY, Length::m).total_cmp(&b.2.map_or(f64::INFINITY, Length::m)));
        let cell = |tell: &dyn Fn(&Needed<'_>) -> String| found.iter().map(tell).collect::<Vec<_>>();
        let regime = |(_, curve, head): &Needed<'_>| {
            head.map_or("never".into(), |head| curve.discharge(Head::of(head)).regime.to_string())
        };
        blocks.push(Block::Text(format!("Head for {}:", words.flow(flow))));
        blocks.push(Block::Table(Table::of(vec![
            ("law".into(), false, cell(&|(law, ..)| law.name().into())),
            (
                format!("head {}", words.small_unit()),
                true,
                cell(&|(.., head)| head.map_or("-".into(), |head| words.fine_depth(head))),
            ),
            ("regime".into(), false, cell(&regime)),
        ])));
    } else {
        let at = |curve: &Curve, head: Length| curve.discharge(Head::of(head));
        let heads = rated.heads.iter().map(|&head| words.bare_size(head)).collect();
        let mut columns = vec![(format!("head {}", words.small_unit()), true, heads)];
        for (law, curve) in &curves {
            let flows = rated.heads.iter().map(|&head| words.bare_flow(at(curve, head).flow)).collect();
            columns.push((law.name().into(), true, flows));
            if let [_] = curves[..] {
                let regimes = rated.heads.iter().map(|&head| at(curve, head).regime.to_string()).collect();
                columns.push(("regime".into(), false, regimes));
            }
        }
        blocks.push(Block::Text(format!("Flow in {}:", words.flow_unit())));
        blocks.push(Block::Table(Table::of(columns)));
        if curves.len() > 1 {
            let runs =
                |(law, curve): &(Law, Curve)| format!("{}: {}.", law.name(), regimes(curve, &rated.heads, words));
            blocks.push(Block::Text("Regimes:".into()));
            blocks.push(Block::List(curves.iter().map(runs).collect()));
            blocks.push(Block::Text("Laws:".into()));
        }
    }
    let beyond = beyond(rated, words);
    if !beyond.is_empty() {
        blocks.push(Block::List(beyond));
    }
    blocks.push(Block::List(sources(rated, words)));
    blocks
}

/// The regimes over rising heads: `weir to 6 in, orifice from 7 in`.
fn regimes(curve: &Curve, heads: &[Length], words: Words) -> String {
    let mut runs: Vec<(Regime, Length, Length)> = Vec::new();
    for &head in heads {
        let regime = curve.discharge(Head::of(head)).regime;
        match runs.last_mut() {
            Some((last, _, to)) if *last == regime => *to = head,
            _ => runs.push((regime, head, head)),
        }
    }
    if let [(regime, ..)] = runs[..] {
        return regime.to_string();
    }
    let run = |(index, (regime, from, to)): (usize, &(Regime, Length, Length))| match index {
        0 => format!("{regime} to {}", words.size(*to)),
        _ => format!("{regime} from {}", words.size(*from)),
    };
    runs.iter().enumerate().map(run).collect::<Vec<_>>().join(", ")
}

/// The published ranges that a law is read beyond at some of the heads.
fn beyond(rated: &Rated<'_>, words: Words) -> Vec<String> {
    let mut lines = Vec::new();
    for (law, curve) in curves(rated) {
        let mut told: Vec<&str> = Vec::new();
        let needed = rated.flow.and_then(|flow| head_for(&curve, flow));
        let heads = if rated.flow.is_some() { needed.into_iter().collect() } else { rated.heads.clone() };
        let mut parts = Vec::new();
        for (range, value) in heads.iter().flat_map(|&head| curve.beyond_range(Head::of(head))) {
            if !told.contains(&range.what) {
                told.push(range.what);
                parts.push(out_of_range(range, value, words));
            }
        }
        if !parts.is_empty() {
            lines.push(format!("{}, beyond its published range: {}.", law.name(), list(&parts)));
        }
    }
    lines
}

fn title(rated: &Rated<'_>, words: Words) -> String {
    let name = words.name(rated.size).trim().to_string();
    let kind = rated.size.device.kind().to_string();
    let mut kind = kind.chars();
    let kind: String =
        kind.next().map(|first| first.to_uppercase().collect::<String>()).unwrap_or_default() + kind.as_str();
    match rated.site.thickness {
        Some(thickness) if rated.size.device.kind().is_scupper() => {
            format!("{kind} {name}, wall {}", words.size(thickness))
        }
        _ => format!("{kind} {name}"),
    }
}

fn sources(rated: &Rated<'_>, words: Words) -> Vec<String> {
    let kind = rated.size.device.kind();
    let mut lines: Vec<String> = rated
        .laws
        .iter()
        .map(|law| {
            let account = law.account(kind);
            format!("{}: {}. Source: {}.", law.name(), account.form(words.0), account.source)
        })
        .collect();
    if rated.laws.contains(&Law::Throat) {
        lines.push(super::notes::throat(&rated.site, words));
    }
    for law in kind.laws().iter().filter(|law| !rated.laws.contains(law) && rated.all) {
        lines.push(format!("{}: left out, it needs the thickness of the wall (--thickness).", law.name()));
    }
    lines.push("Heads are above the sill or rim, in the pond three to four heads away from the device.".into());
    lines
}

#[derive(Serialize)]
struct Document<'a> {
    format: &'static str,
    device: &'a str,
    kind: &'static str,
    laws: Vec<UnderLaw>,
}

#[derive(Serialize)]
struct UnderLaw {
    law: &'static str,
    source: &'static str,
    rows: Vec<Row>,
}

#[derive(Serialize)]
struct Row {
    head_m: Option<f64>,
    flow_m3_s: f64,
    regime: Option<&'static str>,
}

/// The rows of one law: at each head asked for, or at the head that the flow needs.
fn rows(rated: &Rated<'_>, curve: &Curve) -> Vec<Row> {
    let row = |head: Length| {
        let found = curve.discharge(Head::of(head));
        Row { head_m: Some(head.m()), flow_m3_s: found.flow.m3_per_s(), regime: Some(found.regime.name()) }
    };
    match rated.flow {
        None => rated.heads.iter().map(|&head| row(head)).collect(),
        Some(flow) => {
            vec![head_for(curve, flow).map_or(Row { head_m: None, flow_m3_s: flow.m3_per_s(), regime: None }, row)]
        }
    }
}

fn json(rated: &Rated<'_>) -> String {
    let kind = rated.size.device.kind();
    let laws = curves(rated).into_iter().map(|(law, curve)| UnderLaw {
        law: law.name(),
        source: law.account(kind).source,
        rows: rows(rated, &curve),
    });
    let document =
        Document { format: "brimline rate 1", device: &rated.size.tag, kind: kind.name(), laws: laws.collect() };
    let mut text = serde_json::to_string_pretty(&document).unwrap_or_default();
    text.push('\n');
    text
}

/// Head, flow, law and regime, in the units of the system: the form of a rating table, with two columns more.
fn csv(rated: &Rated<'_>) -> String {
    let words = Words(rated.system);
    let (head, flow) = if rated.system == System::Us { ("head_in", "flow_gpm") } else { ("head_mm", "flow_l_s") };
    let mut lines = vec![vec![head.to_string(), flow.into(), "law".into(), "regime".into()]];
    for (law, curve) in curves(rated) {
        lines.extend(rows(rated, &curve).into_iter().map(|row| {
            vec![
                row.head_m.map_or(String::new(), |head| super::plain(words.small(Length::from_m(head)), 4)),
                super::plain(words.in_flow_unit(Flow::from_m3_per_s(row.flow_m3_s)), 4),
                law.name().to_string(),
                row.regime.unwrap_or("never").to_string(),
            ]
        }));
    }
    super::written(&lines)
}
