//! The roof and what follows its overflow: no layout changes these.

use crate::roof::{Separation, depth_of};
use crate::rules::amount::Amount;
use crate::rules::kind::{Bounds, Kind, Number, Open, Role};
use crate::units::Length;

use super::standing::length;

pub(super) static DESIGNED_DEPTH: Kind = Kind {
    name: "designed-depth",
    says: "water that the structure is designed for",
    bounds: Bounds::Least,
    number: Number::Length,
    terms: &[],
    role: Role::Area(|rule, area, _| {
        let limits = &area.facts.limits;
        let depth = limits.load.map(depth_of).into_iter().chain(limits.depth).reduce(Length::min);
        let depth = depth.ok_or(Open::Missing("a limit that holds in every case"))?;
        Ok((Amount::Length(depth), Amount::Length(length(rule)?)))
    }),
};

pub(super) static SLOPE: Kind = Kind {
    name: "slope",
    says: "fall of the roof",
    bounds: Bounds::Least,
    number: Number::Slope,
    terms: &[],
    role: Role::Area(|rule, area, _| {
        let rise = area.surface.rise.ok_or(Open::Missing("the fall of the roof: slope = .. and distance = .."))?;
        let least = rule.bound.ok_or(Open::NotApplicable("the rule has no number"))?.amount();
        Ok((Amount::Slope(rise.slope), least))
    }),
};

pub(super) static DISTANCE: Kind = Kind {
    name: "distance",
    says: "low point to the wall",
    bounds: Bounds::Most,
    number: Number::Length,
    terms: &[],
    role: Role::Area(|rule, area, _| {
        let to_wall = area.surface.to_wall.ok_or(Open::Missing("the way to the wall: distance = .."))?;
        Ok((Amount::Length(to_wall), Amount::Length(length(rule)?)))
    }),
};

pub(super) static SEPARATE_DISCHARGE: Kind = Kind {
    name: "separate-discharge",
    says: "overflow to an end of its own",
    bounds: Bounds::None,
    number: Number::Times,
    terms: &[],
    role: Role::Area(|_, area, _| {
        let discharge = area.facts.discharge.ok_or(Open::Missing("where the overflow runs: overflow_to = .."))?;
        Ok((Amount::Yes(discharge == Separation::Separate), Amount::Yes(true)))
    }),
};

pub(super) static SHARED_PIPE: Kind = Kind {
    name: "shared-pipe",
    says: "capacity of a pipe that primary and overflow share, over the flow of the area",
    bounds: Bounds::Least,
    number: Number::Times,
    terms: &[],
    role: Role::Area(|rule, area, basis| {
        match area.facts.discharge {
            None => return Err(Open::Missing("where the overflow runs: overflow_to = ..")),
            Some(Separation::Separate) => return Err(Open::NotApplicable("the overflow runs apart")),
            Some(Separation::Shared) => {}
        }
        let pipe = area.facts.primary.shared_pipe;
        let pipe = pipe.ok_or(Open::Missing("what the shared pipe carries: primary = { shared_pipe = .. }"))?;
        match basis.stands_in {
            Some(stands_in) => Err(Open::Missing(stands_in.missing)),
            None => Ok((Amount::Flow(pipe), Amount::Flow(basis.flow * rule.times()))),
        }
    }),
};
