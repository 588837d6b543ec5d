//! The openings one by one: their clear dimensions, and these against the primary drain.

use std::f64::consts::PI;

use crate::device::{Device, Size};
use crate::roof::Catchment;
use crate::rules::amount::Amount;
use crate::rules::kind::{Bounds, Kind, Measure, Number, Open, Role, Takes, Term};
use crate::rules::set::{Bound, Rule};
use crate::units::{Area, Length};

/// A kind that measures each opening against a number of its own.
const fn of_opening(name: &'static str, says: &'static str, found: fn(&Rule, &Size, &Catchment) -> Measure) -> Kind {
    Kind { name, says, bounds: Bounds::Least, number: Number::Length, terms: &[], role: Role::Opening(found) }
}

pub(super) static WIDTH: Kind = of_opening("opening-width", "clear width of every scupper", |rule, size, _| {
    Ok((Amount::Length(width(size)?), length(rule)?))
});

pub(super) static HEIGHT: Kind =
    of_opening("opening-height", "clear height of every closed scupper", |rule, size, _| {
        Ok((Amount::Length(height(size)?), length(rule)?))
    });

pub(super) static DIAMETER: Kind =
    of_opening("opening-diameter", "clear diameter of every pipe scupper", |rule, size, _| match size.device {
        Device::Pipe { diameter } => Ok((Amount::Length(diameter), length(rule)?)),
        _ => Err(Open::NotApplicable("not a round opening")),
    });

pub(super) static WIDTH_BY_DRAIN: Kind = Kind {
    name: "width-by-drain",
    says: "clear width of every scupper over the primary drain's",
    bounds: Bounds::Least,
    number: Number::Times,
    terms: &[Term {
        key: "of",
        takes: Takes::Word(&["circumference", "diameter"]),
        needed: true,
        says: " {}",
        parts: true,
    }],
    role: Role::Opening(|rule, size, area| {
        let (width, drain) = (width(size)?, drain(area)?);
        let measure = if rule.word("of") == Some("circumference") { drain * PI } else { drain };
        Ok((Amount::Length(width), Amount::Length(measure * rule.times())))
    }),
};

pub(super) static AREA_BY_DRAIN: Kind = Kind {
    name: "area-by-drain",
    says: "clear area of every scupper over that of the primary drain",
    bounds: Bounds::Least,
    number: Number::Times,
    terms: &[],
    role: Role::Opening(|rule, size, area| {
        let clear = match size.device {
            Device::Pipe { diameter } => round(diameter.m()),
            _ => width(size)?.m() * height(size)?.m(),
        };
        let drain = drain(area)?.m();
        Ok((Amount::Area(Area::from_m2(clear)), Amount::Area(Area::from_m2(round(drain) * rule.times()))))
    }),
};

pub(super) static OUTLET_BY_DRAIN: Kind = Kind {
    name: "outlet-by-drain",
    says: "outlet of every overflow drain over that of the primary drain",
    bounds: Bounds::Least,
    number: Number::Times,
    terms: &[],
    role: Role::Opening(|rule, size, area| {
        let outlet = match size.device {
            Device::Drain(drain) => drain.throat,
            Device::Standpipe { diameter } => diameter,
            Device::Rated { .. } => return Err(Open::Missing("the outlet of a rated device")),
            _ => return Err(Open::NotApplicable("not a drain")),
        };
        Ok((Amount::Length(outlet), Amount::Length(drain(area)? * rule.times())))
    }),
};

/// Clear area of a circle, m2.
fn round(diameter: f64) -> f64 {
    PI / 4.0 * diameter * diameter
}

/// The number of a rule, which is a length.
fn length(rule: &Rule) -> Result<Amount, Open> {
    rule.bound.map(Bound::amount).ok_or(Open::NotApplicable("the rule has no number"))
}

fn drain(area: &Catchment) -> Result<Length, Open> {
    area.facts.primary.drain.ok_or(Open::Missing("the size of the primary drain: primary = { drain = .. }"))
}

fn width(size: &Size) -> Result<Length, Open> {
    match &size.device {
        Device::Open { width } | Device::Closed { width, .. } | Device::Rated { width: Some(width), .. } => Ok(*width),
        Device::Rated { width: None, .. } => Err(Open::Missing("the width of a rated device")),
        _ => Err(Open::NotApplicable("not a scupper with a width")),
    }
}

fn height(size: &Size) -> Result<Length, Open> {
    match &size.device {
        Device::Closed { height, .. } => Ok(*height),
        Device::Rated { .. } => Err(Open::Missing("the height of a rated device")),
        Device::Open { .. } => Err(Open::NotApplicable("open at the top")),
        _ => Err(Open::NotApplicable("not a scupper with a height")),
    }
}
