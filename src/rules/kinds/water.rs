//! The water, by what the set counts: limits, depth, and what stays free above it.

use crate::rules::kind::{Bounds, Kind, Number, Open, Role};

use super::standing::length;

pub(super) static LIMITS: Kind = Kind {
    name: "limits",
    says: "water under the limits of the area",
    bounds: Bounds::None,
    number: Number::Length,
    terms: &[],
    role: Role::Limits,
};

pub(super) static DEPTH: Kind = Kind {
    name: "depth",
    says: "water over the low point",
    bounds: Bounds::Most,
    number: Number::Length,
    terms: &[],
    role: Role::Depth(|rule, _| length(rule)),
};

pub(super) static PARAPET_FREEBOARD: Kind = Kind {
    name: "parapet-freeboard",
    says: "water to the top of the parapet",
    bounds: Bounds::Least,
    number: Number::Height,
    terms: &[],
    role: Role::Depth(|rule, area| {
        let top = area.parapet.height.ok_or(Open::Missing("the height of the parapet: parapet = { height = .. }"))?;
        Ok(top - length(rule)?)
    }),
};

pub(super) static FREEBOARD: Kind = Kind {
    name: "freeboard",
    says: "water to the top of every closed opening",
    bounds: Bounds::Least,
    number: Number::Height,
    terms: &[],
    role: Role::Freeboard,
};
