//! Vertical leaders: water runs down their wall as a ring and fills a share of the bore.

use crate::units::{Flow, Length, METRES_PER_FOOT, METRES_PER_INCH};

use super::powers::{eight_thirds, fitted, five_thirds};
use super::{FlowError, above_zero, limits, positive, zero_or_more};

/// Constant of the annular flow, gal/min and inches: Q = 27.8 r^(5/3) d^(8/3).
pub const WYLY_EATON_GPM_IN: f64 = 27.8;

/// Wall roughness that goes with [`en_12056`], mm. Source: EN 12056-3, from memory.
pub const EN_12056_ROUGHNESS_MM: f64 = 0.25;

/// Share of the bore that the ring of water may fill.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Fill {
    /// 7/24: the table of the National Standard Plumbing Code 2006.
    SevenTwentyFourths,
    /// 1/3: the vertical column of the International Plumbing Code 2018, within 5 %.
    OneThird,
}

impl Fill {
    /// The share as a number.
    pub const fn ratio(self) -> f64 {
        match self {
            Self::SevenTwentyFourths => 7.0 / 24.0,
            Self::OneThird => 1.0 / 3.0,
        }
    }

    /// The share as files write it.
    pub const fn name(self) -> &'static str {
        match self {
            Self::SevenTwentyFourths => "7/24",
            Self::OneThird => "1/3",
        }
    }
}

/// What a vertical leader carries at a fill, Q = 27.8 r^(5/3) d^(8/3).
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | d | `diameter`, inside | in | above 0 |
/// | r | `fill` | | 7/24 or 1/3 |
/// | Q | result | gal/min | |
///
/// In SI the constant is 31.46. Nominal size taken for the inside diameter explains most of what tables differ by.
///
/// # Errors
/// [`FlowError::Unusable`] for a diameter that is not above zero.
///
/// # Source
/// National Bureau of Standards, BMS 132 and Monograph 31; fill of the National Standard Plumbing Code 2006, Table 13.6.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::leader::{self, Fill}, units::Length};
/// let flow = leader::wyly_eaton(Length::inches(4.0), Fill::SevenTwentyFourths)?;
/// assert_eq!(format!("{:.0}", flow.to_gpm()), "144"); // as printed in that table
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn wyly_eaton(diameter: Length, fill: Fill) -> Result<Flow, FlowError> {
    let inches = positive("diameter", diameter)? / METRES_PER_INCH;
    Ok(Flow::gpm(WYLY_EATON_GPM_IN * five_thirds(fill.ratio()) * eight_thirds(inches)))
}

/// What a vertical leader carries by EN 12056-3, Q = 2.5e-4 kb^-0.167 d^2.667 f^1.667.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | d | `diameter`, inside | mm | above 0 |
/// | f | `fill` | | [`limits::EN_DOWNPIPE_FILL`]: 0.20 to 0.33 |
/// | kb | [`EN_12056_ROUGHNESS_MM`] = 0.25 | mm | |
/// | Q | result | l/s | |
///
/// The exponents are used as printed, to three decimals.
///
/// # Errors
/// [`FlowError::OutsideRange`] for another fill; [`FlowError::Unusable`] for a diameter that is not above zero.
///
/// # Source
/// EN 12056-3, from memory.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::leader, units::Length};
/// let flow = leader::en_12056(Length::mm(100.0), 0.33)?;
/// assert_eq!(format!("{:.1}", flow.m3_per_s() * 1000.0), "10.7");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn en_12056(diameter: Length, fill: f64) -> Result<Flow, FlowError> {
    let mm = positive("diameter", diameter)? * 1000.0;
    limits::EN_DOWNPIPE_FILL.check(above_zero("filling degree", fill)?)?;
    let litres = 2.5e-4 * fitted(EN_12056_ROUGHNESS_MM, -0.167) * fitted(mm, 2.667) * fitted(fill, 1.667);
    Ok(Flow::from_m3_per_s(litres / 1000.0))
}

/// Velocity in m/s at which the falling ring no longer speeds up, V = 3.0 (q/d)^0.4.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | q | `flow` | gal/min | 0 or more |
/// | d | `diameter`, inside | in | above 0 |
/// | V | result; in m/s here | ft/s | |
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// National Bureau of Standards, Monograph 31, from memory.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::leader, units::{Flow, Length, METRES_PER_FOOT}};
/// let velocity = leader::terminal_velocity(Flow::gpm(144.0), Length::inches(4.0))?;
/// assert_eq!(format!("{:.2}", velocity / METRES_PER_FOOT), "12.58");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn terminal_velocity(flow: Flow, diameter: Length) -> Result<f64, FlowError> {
    let gpm = Flow::from_m3_per_s(zero_or_more("flow", flow.m3_per_s())?).to_gpm();
    let inches = positive("diameter", diameter)? / METRES_PER_INCH;
    Ok(3.0 * fitted(gpm / inches, 0.4) * METRES_PER_FOOT)
}

/// Fall over which the ring reaches [`terminal_velocity`], 0.052 V^2 in feet and feet a second.
///
/// # Errors
/// As [`terminal_velocity`].
///
/// # Source
/// As [`terminal_velocity`].
///
/// # Example
/// ```
/// # use brimline::{hydraulics::leader, units::{Flow, Length, METRES_PER_FOOT}};
/// let fall = leader::terminal_length(Flow::gpm(144.0), Length::inches(4.0))?;
/// assert_eq!(format!("{:.2}", fall.m() / METRES_PER_FOOT), "8.23");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn terminal_length(flow: Flow, diameter: Length) -> Result<Length, FlowError> {
    let feet_per_second = terminal_velocity(flow, diameter)? / METRES_PER_FOOT;
    Ok(Length::from_m(0.052 * feet_per_second * feet_per_second * METRES_PER_FOOT))
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// The two forms side by side: within 1.5 % for a pipe of 100 mm a third full.
    #[test]
    fn europe_and_north_america_agree_on_a_leader() {
        let us = wyly_eaton(Length::mm(100.0), Fill::OneThird).unwrap();
        assert_relative_eq!(us, en_12056(Length::mm(100.0), 0.33).unwrap(), max_relative = 0.015);
    }

    #[test]
    fn what_has_no_meaning_is_refused() {
        assert!(wyly_eaton(Length::ZERO, Fill::OneThird).is_err());
        assert!(en_12056(Length::mm(100.0), 0.4).is_err() && en_12056(Length::mm(100.0), f64::NAN).is_err());
        assert!(terminal_velocity(Flow::from_m3_per_s(-1.0), Length::mm(100.0)).is_err());
    }
}
