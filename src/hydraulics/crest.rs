//! Free flow over a thick crest: a parapet that the water crosses as a short channel.
//!
//! Three views of the same wall, from the simplest to the one that follows its thickness: critical depth without loss, a
//! constant for a long crest with square edges, and the short-crest form that passes over into a thin plate. The tabulated
//! coefficients of HEC-22 are in [`super::crest_table`]. Heads are energy heads; in a pond the difference is nothing.

use crate::units::{Flow, Length};

use super::powers::three_halves;
use super::{FlowError, GRAVITY, critical, limits, not_negative, positive, zero_or_more};

/// Discharge of a long square-edged crest over that of critical depth. Source: ISO 3846, from memory.
pub const SQUARE_EDGE: f64 = 0.848;

/// Flow over a broad crest without loss, Q = 1.7046 b H^1.5: critical depth on the crest.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | b | `width`, clear opening | m | above 0 |
/// | H | `head`, energy above the crest | m | 0 or more |
///
/// # Errors
/// [`FlowError::Unusable`] for a width that is not above zero or a head below zero.
///
/// # Source
/// Least specific energy. FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), section 8.4.4.2, rounds it to 1.70 for a rounded crest.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::crest, units::Length};
/// let flow = crest::without_loss(Length::from_m(1.0), Length::from_m(1.0))?;
/// assert_eq!(format!("{:.2}", flow.m3_per_s()), "1.70"); // as printed
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn without_loss(width: Length, head: Length) -> Result<Flow, FlowError> {
    critical::rectangle_flow(width, head)
}

/// Flow over a long crest with square edges, 0.848 times that of critical depth.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | b | `width`, clear opening | m | above 0 |
/// | H | `head`, energy above the crest | m | [`limits::LONG_CREST`]: H / L from 0.1 to 0.33 |
/// | L | `crest_length` along the flow | m | above 0 |
///
/// # Errors
/// [`FlowError::OutsideRange`] for H / L outside its range; [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// ISO 3846 and ILRI publication 20 (3rd ed., 1989), from memory.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::crest, units::Length};
/// let inches = Length::inches;
/// let flow = crest::long_square_edged(inches(12.0), inches(3.435), inches(12.0))?;
/// assert_eq!(format!("{:.0}", flow.to_gpm()), "180");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn long_square_edged(width: Length, head: Length, crest_length: Length) -> Result<Flow, FlowError> {
    let flow = without_loss(width, head)?;
    limits::LONG_CREST.check(head.m() / positive("crest length", crest_length)?)?;
    Ok(flow * SQUARE_EDGE)
}

/// Coefficient of a square-edged crest of any length, C = 0.326 sqrt(2g) (1 + (9/7) x^4) / (1 + x^4), m^0.5/s.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | x | `head_over_length`, H / L | | 0 or more: 1.444 at 0, towards 1.856 |
///
/// # Errors
/// [`FlowError::Unusable`] for a ratio below zero or not finite.
///
/// # Source
/// Hager and Schwalt (1994), from memory. FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), Table 8-1, is within 2 % of it where both
/// hold, within 6 % at its lowest heads.
///
/// # Example
/// ```
/// # use brimline::hydraulics::crest;
/// assert_eq!(format!("{:.2}", crest::short_coefficient(1.0)?), "1.65");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn short_coefficient(head_over_length: f64) -> Result<f64, FlowError> {
    Ok(short(zero_or_more("head over crest length", head_over_length)?))
}

/// Flow over a square-edged crest of any length, by [`short_coefficient`].
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | b | `width`, clear opening | m | above 0 |
/// | H | `head`, energy above the crest | m | 0 or more |
/// | L | `crest_length` along the flow | m | above 0 |
///
/// # Errors
/// [`FlowError::Unusable`] for a dimension that is not above zero or a head below zero.
///
/// # Source
/// Hager and Schwalt (1994), from memory.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::crest, units::Length};
/// let inches = Length::inches;
/// let through_six_inches = crest::short_crest(inches(12.0), inches(3.379), inches(6.0))?;
/// assert_eq!(format!("{:.0}", through_six_inches.to_gpm()), "180");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn short_crest(width: Length, head: Length, crest_length: Length) -> Result<Flow, FlowError> {
    let (b, head) = (positive("width", width)?, not_negative("head", head)?);
    let coefficient = short(head / positive("crest length", crest_length)?);
    Ok(Flow::from_m3_per_s(coefficient * b * three_halves(head)))
}

fn short(head_over_length: f64) -> f64 {
    // 9/7 less what is left of 2/7: the same as the printed form, and no infinity over infinity at a large ratio.
    let fourth = head_over_length * head_over_length * head_over_length * head_over_length;
    (2.0 * GRAVITY).sqrt() * 0.326 * (9.0 / 7.0 - 2.0 / 7.0 / (1.0 + fourth))
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// The two ends of the form. Source: 0.326 sqrt(2g) and 9/7 of it, by hand.
    #[test]
    fn the_short_crest_passes_from_a_long_one_to_a_thin_plate() {
        assert_relative_eq!(short_coefficient(0.0).unwrap(), 1.443_8, max_relative = 1e-4);
        assert_relative_eq!(short_coefficient(1e200).unwrap(), 1.856_3, max_relative = 1e-4);
        assert!(short_coefficient(f64::NAN).is_err());
    }

    #[test]
    fn a_long_crest_is_refused_outside_its_range() {
        let flow = |head: f64| long_square_edged(Length::from_m(0.3), Length::from_m(head), Length::from_m(0.3));
        assert!(flow(0.03).is_ok() && flow(0.099).is_ok());
        assert!(flow(0.029).is_err() && flow(0.1).is_err());
    }
}
