//! Every kind of rule, by family.

use super::kind::Kind;

mod demand;
mod opening;
mod roof;
mod standing;
mod water;

pub(super) use standing::never_under;

/// Every kind, in the order that messages list them.
pub static KINDS: [&Kind; 22] = [
    &demand::RAIN,
    &demand::WALLS,
    &demand::PRIMARY_CREDIT,
    &demand::PRIMARY_FLOW,
    &opening::WIDTH,
    &opening::HEIGHT,
    &opening::DIAMETER,
    &opening::WIDTH_BY_DRAIN,
    &opening::AREA_BY_DRAIN,
    &opening::OUTLET_BY_DRAIN,
    &standing::SET_HEIGHT,
    &standing::COUNT,
    &standing::SPACING,
    &water::LIMITS,
    &water::DEPTH,
    &water::PARAPET_FREEBOARD,
    &water::FREEBOARD,
    &roof::DESIGNED_DEPTH,
    &roof::SLOPE,
    &roof::DISTANCE,
    &roof::SEPARATE_DISCHARGE,
    &roof::SHARED_PIPE,
];
