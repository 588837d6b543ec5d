//! What runs onto what, in words: the tree of flows of a roof, and what one area receives.

use serde::Serialize;

use crate::roof::demand::{self, AtOnce};
use crate::roof::{Passed, Receipt, Roof};
use crate::units::Flow;

use super::page::Block;
use super::rules;
use super::words::{Words, trimmed};

/// The areas that receive and pass nothing on, each with those above it; nothing where no area receives.
pub(super) fn blocks(roof: &Roof, words: Words) -> Vec<Block> {
    let passes_on = |area: usize| roof.areas.iter().any(|below| below.receives.iter().any(|from| from.from == area));
    let lowest = (0..roof.areas.len()).filter(|&area| !roof.areas[area].receives.is_empty() && !passes_on(area));
    let mut lines = Vec::new();
    for area in lowest {
        let at_once = roof.at_once(area);
        let mut tree = Tree { roof, words, at_once: &at_once, lines: Vec::new(), told: vec![false; roof.areas.len()] };
        tree.lines.push((0, tree.head(area)));
        tree.above(area, 1);
        lines.append(&mut tree.lines);
    }
    if lines.is_empty() {
        return Vec::new();
    }
    vec![Block::Text(explained(roof)), Block::Tree(lines)]
}

/// What the flows of the tree are.
fn explained(roof: &Roof) -> String {
    let mut text = String::from(
        "What runs onto what: the most that can arrive at once, steady and at full flow. Shares belong to areas, so no layout \
         changes what another area receives.",
    );
    if roof.areas.iter().flat_map(|area| &area.receives).any(|receipt| receipt.what != Passed::All) {
        text += " Water leaves an area by its primary drains while they work and by its overflow when they are blocked: it is \
                 counted by the way that brings more here, never by both.";
    }
    text
}

/// What arrives at the foot of one tree.
struct Tree<'t> {
    roof: &'t Roof,
    words: Words,
    at_once: &'t AtOnce,
    lines: Vec<(usize, String)>,
    /// Whether what runs onto each area stands in it already.
    told: Vec<bool>,
}

impl Tree<'_> {
    fn head(&self, area: usize) -> String {
        let leaving = self.at_once.leaving(area);
        format!("{} {}{}", self.roof.areas[area].name, self.words.flow(leaving), self.own(area))
    }

    /// The rain on an area itself, where that is not all it passes.
    fn own(&self, area: usize) -> String {
        let catchment = &self.roof.areas[area];
        if catchment.receives.is_empty() {
            return String::new();
        }
        format!("; its own rain {}", self.words.flow(demand::own(&self.roof.storm, catchment)))
    }

    fn above(&mut self, area: usize, depth: usize) {
        self.told[area] = true;
        for receipt in &self.roof.areas[area].receives {
            let from = receipt.from;
            let arrives = self.at_once.arriving(receipt).is_some();
            let again = arrives && self.told[from] && !self.roof.areas[from].receives.is_empty();
            let line = self.line(receipt);
            self.lines.push((depth, if again { format!("{line}, as above") } else { line }));
            if arrives && !again {
                self.above(from, depth + 1);
            }
        }
    }

    fn line(&self, receipt: &Receipt) -> String {
        let words = self.words;
        let from = format!("{}{}", self.roof.areas[receipt.from].name, way(receipt.what));
        let share = trimmed(receipt.share, 3);
        let Some(arriving) = self.at_once.arriving(receipt) else {
            return format!("nothing from {from}, share {share}: not at the same time");
        };
        let leaving = self.at_once.leaving(receipt.from);
        let part =
            if whole(receipt.share) { "all of it".into() } else { format!("{share} of {}", words.flow(leaving)) };
        let own_worst = self.roof.demands[receipt.from];
        let more = if less(leaving, own_worst) {
            format!(" ({} at its own worst)", words.flow(own_worst))
        } else {
            String::new()
        };
        format!("{} from {from}, {part}{more}{}", words.flow(arriving), self.own(receipt.from))
    }
}

/// What is assumed of primary drains.
pub(super) fn primary_drains(roof: &Roof) -> &'static str {
    if rules::credits(roof) {
        return "The primary drains carry nothing, but where a rule set credits them.";
    }
    if roof.areas.iter().flat_map(|area| &area.receives).any(|receipt| receipt.what == Passed::Primary) {
        "The primary drains of an area carry nothing for it; those of an area above may bring all its flow."
    } else {
        "The primary drains carry nothing."
    }
}

/// Whether a flow is less than another by more than rounding.
fn less(flow: Flow, other: Flow) -> bool {
    flow < other * (1.0 - 1e-9)
}

fn whole(share: f64) -> bool {
    (share - 1.0).abs() < 1e-12
}

/// The way out of the other area that runs here, where it is not either.
fn way(what: Passed) -> &'static str {
    match what {
        Passed::All => "",
        Passed::Overflow => " by its overflow",
        Passed::Primary => " by its primary drains",
    }
}

/// What an area receives, behind its own rain: `, and 0.5 of the 300 gpm of north bay`.
pub(super) fn received(roof: &Roof, area: usize, words: Words) -> String {
    let at_once = roof.at_once(area);
    let mut text = String::new();
    for (receipt, leaving) in arriving(roof, area, &at_once) {
        let share = if whole(receipt.share) { String::new() } else { format!("{} of ", trimmed(receipt.share, 3)) };
        let (name, flow) = (&roof.areas[receipt.from].name, words.flow(leaving));
        let passed = match receipt.what {
            Passed::All => format!("{flow} of {name}"),
            Passed::Overflow => format!("{flow} that overflow from {name}"),
            Passed::Primary => format!("{flow} from the primary drains of {name}"),
        };
        let then = if less(leaving, roof.demands[receipt.from]) { " when the most arrives here" } else { "" };
        text += &format!(", and {share}the {passed}{then}");
    }
    text
}

/// Each receipt of an area that something arrives by when the most arrives at once, with what leaves the other area then.
pub(super) fn arriving<'r>(roof: &'r Roof, area: usize, at_once: &AtOnce) -> impl Iterator<Item = (&'r Receipt, Flow)> {
    let receipts = roof.areas[area].receives.iter().filter(|receipt| at_once.arriving(receipt).is_some());
    receipts.map(|receipt| (receipt, at_once.leaving(receipt.from)))
}

/// What an area receives of another.
#[derive(Serialize)]
pub(super) struct Received<'a> {
    from: &'a str,
    what: &'static str,
    share: f64,
    arrives_m3_s: f64,
}

pub(super) fn receives(roof: &Roof, area: usize) -> Vec<Received<'_>> {
    let at_once = roof.at_once(area);
    let one = |receipt: &Receipt| Received {
        from: &roof.areas[receipt.from].name,
        what: receipt.what.name(),
        share: receipt.share,
        arrives_m3_s: at_once.arriving(receipt).unwrap_or(Flow::ZERO).m3_per_s(),
    };
    roof.areas[area].receives.iter().map(one).collect()
}
