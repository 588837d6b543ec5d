//! The flow that a set counts: its rain, its walls, the primary drains.

use crate::rules::kind::{Bounds, Kind, Number, Role, Takes, Term};

pub(super) static RAIN: Kind = Kind {
    name: "storm",
    says: "rain",
    bounds: Bounds::None,
    number: Number::Times,
    terms: &[
        Term { key: "intensity", takes: Takes::Intensity, needed: false, says: " at {}", parts: false },
        Term { key: "duration", takes: Takes::Time, needed: false, says: " of {}", parts: true },
        Term { key: "return_period", takes: Takes::ReturnPeriod, needed: false, says: " once in {}", parts: false },
        Term {
            key: "return_period_3",
            takes: Takes::ReturnPeriod,
            needed: false,
            says: ", in risk category III once in {}",
            parts: false,
        },
        Term {
            key: "return_period_4",
            takes: Takes::ReturnPeriod,
            needed: false,
            says: ", in risk category IV once in {}",
            parts: false,
        },
        Term { key: "times", takes: Takes::Times, needed: false, says: ", {}", parts: false },
    ],
    role: Role::Rain,
};

/// The words of [`crate::roof::WallRule`].
const WALL_RULES: [&str; 6] =
    ["none", "half of each", "half of the largest", "by corner", "greatest elevation", "wind driven"];

pub(super) static WALLS: Kind = Kind {
    name: "walls",
    says: "walls counted:",
    bounds: Bounds::None,
    number: Number::Times,
    terms: &[Term { key: "count", takes: Takes::Word(&WALL_RULES), needed: true, says: " {}", parts: false }],
    role: Role::Walls,
};

pub(super) static PRIMARY_CREDIT: Kind = Kind {
    name: "primary-credit",
    says: "flow of the primary drains taken off the demand:",
    bounds: Bounds::None,
    number: Number::Times,
    terms: &[Term { key: "credited", takes: Takes::Yes, needed: true, says: " {}", parts: false }],
    role: Role::Credit,
};

pub(super) static PRIMARY_FLOW: Kind = Kind {
    name: "primary-flow",
    says: "flow of the overflow over that of the primary drains",
    bounds: Bounds::Least,
    number: Number::Times,
    terms: &[],
    role: Role::PrimaryFlow,
};

#[cfg(test)]
mod tests {
    use super::*;
    use crate::roof::WallRule;

    #[test]
    fn every_wall_rule_has_its_word() {
        assert_eq!(WALL_RULES, WallRule::NAMED.map(|(name, _)| name));
    }
}
