//! Published equations: head in, flow out. One family a file.
//!
//! Nothing here knows a device, a roof or a file. Every function takes SI quantities, says its symbols, units, range and
//! source, and refuses outside that range where the source gives one; the ranges stand once, in [`limits`]. Heads are
//! measured up from the crest or the invert in the pond clear of the drawdown, three to four heads away from the opening.

use crate::units::{Flow, Length};

pub mod circular;
pub mod crest;
pub mod crest_table;
pub mod critical;
pub mod gutter;
pub mod gutter_rules;
pub mod inlet;
pub mod leader;
pub mod level_pool;
pub mod limits;
pub mod manning;
pub mod orifice;
pub mod outlet;
mod powers;
pub mod practice;
pub mod sag;
mod section;
mod solve;
pub mod submergence;
pub mod thin_plate;
pub mod throat;
pub mod weir;

/// Acceleration of gravity, m/s2: standard value, exact by definition.
pub const GRAVITY: f64 = 9.806_65;

/// Why an equation gives no flow.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum FlowError {
    /// An argument lies outside the range that the source of the equation states.
    #[error("{found:.4} is outside the range of {range}", found = .found / .range.shown_per)]
    OutsideRange {
        /// The argument, in SI.
        found: f64,
        /// The range it should lie in.
        range: &'static limits::Range,
    },
    /// An argument is not a finite number, or is negative where that has no meaning.
    #[error("{what} must be a finite number, {least}, not {found}", least = if *.zero_passes { "zero or more" } else { "above zero" })]
    Unusable {
        /// The argument's name.
        what: &'static str,
        /// Its value, in SI.
        found: f64,
        /// Whether zero would have passed.
        zero_passes: bool,
    },
}

/// Which part of an equation set carries the flow.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Branch {
    /// A free surface over the sill or the rim.
    Weir,
    /// On the way from the one to the other, where a set joins them by a line or a curve.
    Transition,
    /// The opening runs full.
    Orifice,
}

/// The lesser of a weir and an orifice at one head: what a device with both can pass.
pub(crate) fn lesser_of(weir: Flow, orifice: Flow) -> (Flow, Branch) {
    if orifice < weir { (orifice, Branch::Orifice) } else { (weir, Branch::Weir) }
}

/// Refuses a number that is not finite or not above zero.
pub(crate) fn above_zero(what: &'static str, found: f64) -> Result<f64, FlowError> {
    if found.is_finite() && found > 0.0 {
        Ok(found)
    } else {
        Err(FlowError::Unusable { what, found, zero_passes: false })
    }
}

/// Refuses a number that is not finite or below zero.
pub(crate) fn zero_or_more(what: &'static str, found: f64) -> Result<f64, FlowError> {
    if found.is_finite() && found >= 0.0 {
        Ok(found)
    } else {
        Err(FlowError::Unusable { what, found, zero_passes: true })
    }
}

/// Refuses a length that is not finite or not above zero.
pub(crate) fn positive(what: &'static str, length: Length) -> Result<f64, FlowError> {
    above_zero(what, length.m())
}

/// Refuses a length that is not finite or below zero.
pub(crate) fn not_negative(what: &'static str, length: Length) -> Result<f64, FlowError> {
    zero_or_more(what, length.m())
}
