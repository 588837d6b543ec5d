//! Sizes the overflow drainage of low-slope roofs: from a limit on load or depth to ranked scuppers and overflow drains.
//!
//! # The model, on one page
//!
//! A roof is parted into areas, each with one low point above which all its heights count. With the primary drains blocked,
//! rain on an area, on the walls above it and from areas that run onto it must leave through the devices of its layout. All
//! of them see one level; the level is the least at which they carry the demand. Load is the weight of that depth, with the
//! ponding head. A layout holds when, in every case that the project names, the level stays under the load, the depth and
//! the parapet's top. The search finds the best layouts that do, exactly over what the catalogs and ranges declare.
//!
//! # Example
//!
//! ```
//! use brimline::{input, search};
//!
//! let project = input::read("examples/harbour-depot.toml".as_ref()).map_err(|faults| faults.render(false))?;
//! let all: Vec<usize> = (0..project.roof.areas.len()).collect();
//! for answer in search::size(&project.roof, &project.options, &all) {
//!     let search::Outcome::Optimal(layouts) = answer.outcome else { continue };
//!     let load = layouts[0].states[0].water.expect("not overwhelmed").load;
//!     assert!(load.to_psf() <= 30.0, "under the limit as designed");
//! }
//! # Ok::<(), String>(())
//! ```
//!
//! # The rooms
//!
//! Calls go one way, from the top of this list to its end.
//!
//! - [`cli`][mod@cli]: flags, streams, exit codes
//! - [`report`][mod@report]: answers into tables, Markdown, JSON and CSV
//! - [`review`][mod@review]: given layouts: whether they pass
//! - [`search`][mod@search]: ranked layouts, or why there are none
//! - [`input`][mod@input]: files into the model, every fault with its place
//! - [`rules`][mod@rules]: what fits an area
//! - [`roof`][mod@roof]: storm, areas, cases, limits, the level of a pond
//! - [`device`][mod@device]: what lets water out, and how much
//! - [`hydraulics`][mod@hydraulics]: published equations with their ranges and sources
//! - [`root`][mod@root]: where a function changes its sign, by argmin
//! - [`units`][mod@units]: quantities

pub mod cli;
pub mod device;
pub mod hydraulics;
pub mod input;
pub mod report;
pub mod review;
pub mod roof;
pub mod root;
pub mod rules;
pub mod search;
pub mod units;
