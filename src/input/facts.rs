//! What an area says for the rules over it: walls one by one, primary drains, the building.

use crate::roof::{Facts, Limits, Primary, Risk, Separation, Side, Wall};
use crate::units::{Area, Dimension, Flow};

use super::section::{Cell, Keys, Section, optional};

static WALL: Keys = Keys { table: "an entry of `walls`", known: &["area", "side"] };

static PRIMARY: Keys = Keys { table: "`primary`", known: &["drain", "set_height", "flow", "depth", "shared_pipe"] };

/// What an area says for its rules, its walls read already; `limits` hold in every case that says nothing else.
pub(super) fn read(
    section: &Section<'_>,
    project_risk: Option<Option<Risk>>,
    walls: Option<Vec<Wall>>,
    limits: Option<Limits>,
) -> Option<Facts> {
    let primary = match section.get("primary") {
        Some(cell) => cell.section(&PRIMARY).and_then(|section| read_primary(&section)),
        None => Some(Primary::default()),
    };
    let own = section.get("risk_category").map(|cell| risk(&cell));
    let discharge = section.get("overflow_to").map(|cell| cell.word(&Separation::NAMED));
    Some(Facts {
        limits: limits?,
        walls: walls?,
        primary: primary?,
        risk: match own {
            Some(own) => Some(own?),
            None => project_risk?,
        },
        discharge: optional(discharge)?,
        roof_at_wall_assumed: false,
    })
}

/// A risk category.
pub(super) fn risk(cell: &Cell<'_>) -> Option<Risk> {
    cell.word(&Risk::NAMED)
}

/// The walls of an area, one by one; none of them where it gives none.
pub(super) fn walls(section: &Section<'_>) -> Option<Vec<Wall>> {
    let Some(cell) = section.get("walls") else { return Some(Vec::new()) };
    if section.get("wall").is_some() {
        cell.at_fault("`walls` stands beside `wall`", "the walls one by one", "give the sum or the walls, not both");
        return None;
    }
    let wanted = "a list, such as [{ area = \"1200 ft2\", side = \"north\" }]";
    let walls = section.sections("walls", &WALL, wanted)?;
    let one = |wall: &Section<'_>| {
        let area = wall
            .need("area", "give its area in elevation: area = \"1200 ft2\"")
            .and_then(|cell| cell.positive(Dimension::Area, Area::m2));
        let side = wall.need("side", "say where it stands: side = \"north\"").and_then(|cell| cell.word(&Side::NAMED));
        Some(Wall { area: area?, side: side? })
    };
    let walls: Vec<Option<Wall>> = walls.iter().map(|wall| one(wall.as_ref()?)).collect();
    walls.into_iter().collect()
}

fn read_primary(section: &Section<'_>) -> Option<Primary> {
    let flow = |key| section.get(key).map(|cell| cell.positive(Dimension::Flow, Flow::m3_per_s));
    let (carries, pipe) = (flow("flow"), flow("shared_pipe"));
    let drain = section.get("drain").map(|cell| cell.positive_length());
    let set_height = section.get("set_height").map(|cell| cell.length());
    let depth = section.get("depth").map(|cell| cell.length());
    Some(Primary {
        drain: optional(drain)?,
        set_height: optional(set_height)?,
        flow: optional(carries)?,
        depth: optional(depth)?,
        shared_pipe: optional(pipe)?,
    })
}
