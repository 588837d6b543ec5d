//! Sizes the overflow drainage of low-slope roofs.
pub mod cli;
pub mod device;
pub mod hydraulics;
pub mod input;
pub mod report;
pub mod roof;
pub mod rules;
pub mod search;
pub mod units;
