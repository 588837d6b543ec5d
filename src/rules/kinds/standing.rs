//! How high sills stand, how many devices there are, and how far apart.

use crate::device::Place;
use crate::rules::amount::Amount;
use crate::rules::kind::{Bounds, Datum, Kind, Number, Open, Role, Takes, Term};
use crate::rules::set::{Bound, Rule};
use crate::units::{Area, Length};

/// Heights that set heights count from.
const DATUMS: [&str; 4] = ["low point", "roof at wall", "primary drain", "primary water"];

const ROOF_AT_WALL: &str = "the roof at the wall: roof_at_wall = .., or slope = .. and distance = ..";

/// Whether one datum of set heights never stands under another: the low point is lowest, and what the primary drains need
/// stands over them.
pub(in crate::rules) fn never_under(datum: &str, other: &str) -> bool {
    datum == other || other == "low point" || (datum == "primary water" && other == "primary drain")
}

pub(super) static SET_HEIGHT: Kind = Kind {
    name: "set-height",
    says: "sill",
    bounds: Bounds::Either,
    number: Number::Height,
    terms: &[
        Term { key: "above", takes: Takes::Word(&DATUMS), needed: true, says: " above the {}", parts: true },
        Term { key: "for", takes: Takes::Word(&["scuppers", "drains"]), needed: false, says: ", of {}", parts: true },
    ],
    role: Role::Sill(|rule, size, area| {
        let at_edge = size.place == Place::Edge;
        match rule.word("for") {
            Some("scuppers") if !at_edge => return Err(Open::NotApplicable("not at the edge")),
            Some("drains") if at_edge => return Err(Open::NotApplicable("at the edge")),
            _ => {}
        }
        let primary = &area.facts.primary;
        let inlet = primary.set_height.unwrap_or(Length::ZERO);
        match rule.word("above") {
            Some("roof at wall") if !at_edge => Err(Open::NotApplicable("not at the wall")),
            Some("roof at wall") => Ok(Datum {
                height: area.roof_at_wall,
                missing: area.facts.roof_at_wall_assumed.then_some(ROOF_AT_WALL),
            }),
            Some("primary drain") => Ok(Datum::at(inlet)),
            Some("primary water") => {
                let depth = primary
                    .depth
                    .ok_or(Open::Missing("the water that the primary drains need: primary = { depth = .. }"));
                depth.map(|depth| Datum::at(inlet + depth))
            }
            _ => Ok(Datum::at(Length::ZERO)),
        }
    }),
};

pub(super) static COUNT: Kind = Kind {
    name: "count",
    says: "devices of an area",
    bounds: Bounds::Least,
    number: Number::Count,
    terms: &[
        Term { key: "first", takes: Takes::Area, needed: false, says: " of up to {}", parts: false },
        Term {
            key: "for_each",
            takes: Takes::Area,
            needed: false,
            says: ", and one more for each further {} begun",
            parts: false,
        },
        Term { key: "area_above", takes: Takes::Area, needed: false, says: ", of areas above {}", parts: true },
    ],
    role: Role::Count(|rule, area| {
        let m2 = |key: &str| match rule.term(key) {
            Some(Amount::Area(area)) => Some(area.m2()),
            _ => None,
        };
        let Some(Amount::Count(least)) = rule.bound.map(Bound::amount) else {
            return Err(Open::NotApplicable("the rule has no number"));
        };
        if m2("area_above").is_some_and(|above| area.area <= Area::from_m2(above)) {
            return Err(Open::NotApplicable("the area is smaller"));
        }
        let Some(each) = m2("for_each") else { return Ok(least) };
        let further = (area.area.m2() - m2("first").unwrap_or(each)) / each;
        Ok(least + begun(further))
    }),
};

pub(super) static SPACING: Kind = Kind {
    name: "spacing",
    says: "edge that each opening serves",
    bounds: Bounds::Most,
    number: Number::Length,
    terms: &[],
    role: Role::AtEdge(|rule, area| {
        let edge = area.edge.ok_or(Open::Missing("the length of the edge: edge = .."))?;
        match rule.bound.map(Bound::amount) {
            Some(Amount::Length(most)) => Ok(begun(edge / most).max(1)),
            _ => Err(Open::NotApplicable("the rule has no number")),
        }
    }),
};

/// How many whole parts are begun: none of nothing, and not one more for rounding.
fn begun(parts: f64) -> u32 {
    (parts - 1e-9).ceil().clamp(0.0, 1e6) as u32
}

/// The number of a rule, which is a length.
pub(super) fn length(rule: &Rule) -> Result<Length, Open> {
    match rule.bound.map(Bound::amount) {
        Some(Amount::Length(length)) => Ok(length),
        _ => Err(Open::NotApplicable("the rule has no number")),
    }
}
