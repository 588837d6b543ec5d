//! The choice of flow laws, what follows a device, and the channel that leads to it.

use crate::device::{Choice, ConductorHead, Following, Kind, Law, Leader};
use crate::hydraulics::leader::Fill;
use crate::hydraulics::practice::Transition;
use crate::roof::channel::Channel;

use super::defaults::{CHANNEL_ROUGHNESS, CHANNEL_SLOPE};
use super::section::{Cell, Keys, Section, optional};

pub(super) static FLOW: Keys =
    Keys { table: "[flow]", known: &["scupper", "pipe", "drain", "edge", "transition", "roughness", "entrance_loss"] };

static LEADER: Keys = Keys { table: "`leader`", known: &["diameter", "fill", "serves"] };

static CONDUCTOR_HEAD: Keys = Keys { table: "`conductor_head`", known: &["outlet", "depth", "lip", "overflow_width"] };

static CHANNEL: Keys = Keys { table: "`channel`", known: &["width", "length", "slope", "roughness"] };

const TRANSITIONS: [(&str, Transition); 3] =
    [("lesser-of", Transition::LesserOf), ("linear", Transition::Linear), ("table", Transition::Table)];

const FILLS: [(&str, Fill); 2] =
    [(Fill::SevenTwentyFourths.name(), Fill::SevenTwentyFourths), (Fill::OneThird.name(), Fill::OneThird)];

/// The laws that a project chooses; those it leaves out are the default's.
pub(super) fn choice(section: &Section<'_>) -> Option<Choice> {
    let default = Choice::default();
    // A closed scupper can follow every law that an open one can.
    let law = |key, kind: Kind, otherwise| section.get(key).map_or(Some(otherwise), |cell| self::law(&cell, kind));
    let scupper = law("scupper", Kind::ClosedScupper, default.scupper);
    let pipe = law("pipe", Kind::PipeScupper, default.pipe);
    let drain = law("drain", Kind::OverflowDrain, default.drain);
    let edge = law("edge", Kind::RoofEdge, default.edge);
    let transition = section.get("transition").map_or(Some(default.transition), |cell| cell.word(&TRANSITIONS));
    let number = |key, otherwise| section.get(key).map_or(Some(otherwise), |cell| cell.number_not_negative());
    let (roughness, entrance_loss) =
        (number("roughness", default.roughness), number("entrance_loss", default.entrance_loss));
    Some(Choice {
        scupper: scupper?,
        pipe: pipe?,
        drain: drain?,
        edge: edge?,
        transition: transition?,
        roughness: roughness?,
        entrance_loss: entrance_loss?,
    })
}

/// A law that a kind of device can follow.
pub(super) fn law(cell: &Cell<'_>, kind: Kind) -> Option<Law> {
    let choices: Vec<_> = kind.laws().iter().map(|&law| (law.name(), law)).collect();
    cell.word(&choices)
}

/// The leader and the conductor head behind a device.
pub(super) fn following(section: &Section<'_>) -> Option<Following> {
    let leader = section.get("leader").map(|cell| leader(&cell.section(&LEADER)?));
    let conductor_head = section.get("conductor_head").map(|cell| conductor_head(&cell.section(&CONDUCTOR_HEAD)?));
    Some(Following { leader: optional(leader)?, conductor_head: optional(conductor_head)? })
}

fn leader(section: &Section<'_>) -> Option<Leader> {
    let diameter = section.need("diameter", "give its inside diameter: leader = { diameter = \"4 in\" }");
    let diameter = diameter.and_then(|cell| cell.positive_length());
    let fill = section.need("fill", "say how full it may run: fill = \"7/24\", the lesser, or \"1/3\"");
    let fill = fill.and_then(|cell| cell.word(&FILLS));
    if let Some(cell) = section.get("serves")
        && cell.whole(1, 1000)? > 1
    {
        cell.at_fault(
            "a leader shared by several devices is not computed",
            "shared",
            "give each device a leader of its own, or rate them together with a table",
        );
        return None;
    }
    Some(Leader { diameter: diameter?, fill: fill? })
}

fn conductor_head(section: &Section<'_>) -> Option<ConductorHead> {
    let example =
        "conductor_head = { outlet = \"4 in\", depth = \"8 in\", lip = \"1 in\", overflow_width = \"12 in\" }";
    let length = |key| section.need(key, example).and_then(|cell| cell.positive_length());
    let (outlet, depth, overflow_width) = (length("outlet"), length("depth"), length("overflow_width"));
    let lip = section.need("lip", example).and_then(|cell| cell.length());
    Some(ConductorHead { outlet: outlet?, depth: depth?, lip: lip?, overflow_width: overflow_width? })
}

/// The gutter or valley of an area; `taken` hears of each default.
pub(super) fn channel(cell: &Cell<'_>, mut taken: impl FnMut(&'static str)) -> Option<Channel> {
    let section = cell.section(&CHANNEL)?;
    let example = "channel = { width = \"3 ft\", length = \"40 ft\", slope = \"0 in/ft\" }";
    let length = |key| section.need(key, example).and_then(|cell| cell.positive_length());
    let (width, length) = (length("width"), length("length"));
    let mut otherwise = |key: &'static str, name| {
        let cell = section.get(key);
        if cell.is_none() {
            taken(name);
        }
        cell
    };
    let slope = otherwise("slope", "channel.slope").map_or(Some(CHANNEL_SLOPE), |cell| cell.slope());
    let roughness = otherwise("roughness", "channel.roughness");
    let roughness = roughness.map_or(Some(CHANNEL_ROUGHNESS), |cell| cell.number_not_negative());
    Some(Channel { width: width?, length: length?, slope: slope?, roughness: roughness? })
}
