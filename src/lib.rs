//! Sizes the overflow drainage of low-slope roofs.
pub mod hydraulics;
pub mod units;
