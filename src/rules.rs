//! What a layout must keep besides its limits: the rules of the place, and rule sets as data, each clause with its verdict.
//!
//! # Rule sets
//!
//! A [`RuleSet`] is read from a file: a code, a load standard, an insurer's data sheet, a firm's own list. Each of its
//! [`Rule`]s is of one [`Kind`], with a number, a clause, a source and how it is known. A set acts in three ways:
//!
//! - it counts the demand in its own way (rain, walls, primary drains), caps the depth and asks for freeboard: [`bases`];
//! - where it binds, it restricts what may stand, how high, and how many: [`Restriction`], which the search asks;
//! - of any layout it says rule by rule whether it is kept: [`findings`].
//!
//! Restriction and verdict ask the same function of the kind, so that what the search leaves standing passes.
//!
//! # A new kind of rule
//!
//! One [`Kind`] in the file of its family under `kinds`, and one line in [`KINDS`]: its name, what it says in words, the
//! number and the terms it takes, and its [`Role`] with the function that measures it. Reading files, restricting the search,
//! verdicts, reading aloud and comparing sets are the same for all.

mod amount;
mod basis;
mod finding;
mod kind;
mod kinds;
mod order;
mod place;
mod restriction;
mod set;

pub use amount::Amount;
pub use basis::{Rain, bases, rain, return_period};
pub use finding::{Finding, Required, Verdict, findings};
pub use kind::{Bounds, Datum, Family, Kind, Measure, Number, Open, Role, Takes, Term};
pub use kinds::KINDS;
pub use order::{Clash, asks_nothing, at_least_as_strict, clash};
pub use place::{Misfit, Stand, edge_used, stands};
pub use restriction::Restriction;
pub use set::{Applied, Bound, Known, Rule, RuleAt, RuleSet, Rulebook};
