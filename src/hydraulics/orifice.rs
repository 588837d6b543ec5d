//! An opening that runs full, free or drowned.
//!
//! The head is the height of the pond over the centre of the opening where the jet falls free, the difference of the two
//! levels where its far side is under water. Inlets in a sag that change from weir to orifice belong to [`super::sag`].

use crate::units::{Area, Flow, Length};

use super::powers::three_halves;
use super::{FlowError, GRAVITY, above_zero, limits, not_negative, positive};

/// Coefficient of a square edge. Source: FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), eq. 8-17.
pub const SQUARE_EDGE: f64 = 0.60;
/// Coefficient of a ragged edge, such as a hole cut by torch. Source: as [`SQUARE_EDGE`].
pub const RAGGED_EDGE: f64 = 0.40;
/// The factor 0.60 (pi / 4) sqrt(2g) as the source of [`circular`] rounds it, m^0.5/s.
pub const CIRCULAR_FACTOR: f64 = 2.09;

/// Diameter under which a pipe in the source of [`circular`] is an orifice only well under water, m.
const SMALL_PIPE: f64 = 0.3;

/// Flow through an opening whose jet falls free, Q = C A sqrt(2 g Ho).
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | A | `area` | m2 | above 0 |
/// | Ho | `head` over the centre of the opening | m | 0 or more |
/// | C | `coefficient` | | [`limits::ORIFICE_COEFFICIENT`]: 0.4 to 0.6 |
///
/// It holds once the top of the opening is under water; nothing here knows the top.
///
/// # Errors
/// [`FlowError::OutsideRange`] for another coefficient; [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), eq. 8-17.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::orifice, units::{Area, Length}};
/// let throat = Area::from_m2(std::f64::consts::FRAC_PI_4 * Length::inches(4.026).m().powi(2));
/// let flow = orifice::free(throat, Length::inches(4.0), orifice::SQUARE_EDGE)?;
/// assert_eq!(format!("{:.1}", flow.to_gpm()), "110.3");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn free(area: Area, head: Length, coefficient: f64) -> Result<Flow, FlowError> {
    orifice(area, not_negative("head over the centre", head)?, coefficient)
}

/// Flow through an opening under water on both sides, Q = C A sqrt(2 g dz).
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | A | `area` | m2 | above 0 |
/// | dz | `upstream` less `downstream`, both over one datum | m | 0 or more |
/// | C | `coefficient` | | [`limits::ORIFICE_COEFFICIENT`]: 0.4 to 0.6 |
///
/// # Errors
/// As [`free`]; [`FlowError::Unusable`] also where the lower level stands higher.
///
/// # Source
/// FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), eq. 8-17 and the text below it.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::orifice, units::{Area, Length}};
/// let area = Area::from_m2(0.01);
/// let drowned = orifice::drowned(area, Length::from_m(0.5), Length::from_m(0.3), 0.6)?;
/// assert_eq!(drowned, orifice::free(area, Length::from_m(0.5) - Length::from_m(0.3), 0.6)?);
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn drowned(area: Area, upstream: Length, downstream: Length, coefficient: f64) -> Result<Flow, FlowError> {
    not_negative("upstream level", upstream)?;
    not_negative("downstream level", downstream)?;
    orifice(area, not_negative("fall between the levels", upstream - downstream)?, coefficient)
}

/// Flow through a round orifice with a square edge, Q = 2.09 D^2 sqrt(Ho).
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | D | `diameter` | m | above 0 |
/// | Ho | `head` over the centre | m | 0 or more; for D under 0.3 m [`limits::SMALL_PIPE_ORIFICE`]: Ho / D from 1.5 |
///
/// The rounded factor gives 0.1 % more than 0.60 does.
///
/// # Errors
/// [`FlowError::OutsideRange`] for a small pipe that is not deep enough; [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), eq. 8-18 and section 8.4.4.1.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::orifice, units::Length};
/// let flow = orifice::circular(Length::from_m(0.15), Length::from_m(1.0 - 0.075))?;
/// assert_eq!(format!("{:.3}", flow.m3_per_s()), "0.045"); // as printed in Example 8-5 of the source
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn circular(diameter: Length, head: Length) -> Result<Flow, FlowError> {
    let (d, head) = (positive("diameter", diameter)?, not_negative("head over the centre", head)?);
    if d < SMALL_PIPE {
        limits::SMALL_PIPE_ORIFICE.check(head / d)?;
    }
    Ok(Flow::from_m3_per_s(CIRCULAR_FACTOR * d * d * head.sqrt()))
}

/// Flow through a rectangular opening under a head near its top, by the integral over its height.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | b, h | `width`, `height` of the opening | m | above 0 |
/// | H | `head` over the sill | m | 0 or more |
/// | C | `coefficient` | | [`limits::ORIFICE_COEFFICIENT`]: 0.4 to 0.6 |
///
/// Q = (2/3) C sqrt(2g) b (H^1.5 - (H - h)^1.5); with H up to h the second term is left out and a weir remains, so the two
/// pass into one another. The head to the centre, as in [`free`], gives 6 % more at H = h and 0.2 % more at H = 3 h.
///
/// # Errors
/// As [`free`].
///
/// # Source
/// The integral of sqrt(2 g z) over the opening.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::orifice, units::Length};
/// let inches = Length::inches;
/// let tall = orifice::rectangular(inches(12.0), inches(4.0), inches(4.0), 0.6)?;
/// assert_eq!(format!("{:.0}", tall.to_gpm()), "277"); // 278 by the practice form of the weir
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn rectangular(width: Length, height: Length, head: Length, coefficient: f64) -> Result<Flow, FlowError> {
    let (b, h) = (positive("width", width)?, positive("height", height)?);
    let head = not_negative("head", head)?;
    limits::ORIFICE_COEFFICIENT.check(above_zero("coefficient", coefficient)?)?;
    let integral = three_halves(head) - three_halves((head - h).max(0.0));
    Ok(Flow::from_m3_per_s(2.0 / 3.0 * coefficient * (2.0 * GRAVITY).sqrt() * b * integral))
}

fn orifice(area: Area, head: f64, coefficient: f64) -> Result<Flow, FlowError> {
    let area = above_zero("area", area.m2())?;
    limits::ORIFICE_COEFFICIENT.check(above_zero("coefficient", coefficient)?)?;
    Ok(Flow::from_m3_per_s(coefficient * area * (2.0 * GRAVITY * head).sqrt()))
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    #[test]
    fn what_the_source_does_not_cover_is_refused() {
        let (area, head) = (Area::from_m2(0.01), Length::from_m(0.2));
        assert!(free(area, head, 0.61).is_err() && free(area, head, 0.39).is_err());
        assert!(free(Area::ZERO, head, 0.6).is_err());
        assert!(drowned(area, head, Length::from_m(0.3), 0.6).is_err());
        assert!(circular(Length::from_m(0.15), Length::from_m(0.2)).is_err());
        assert!(circular(Length::from_m(0.53), Length::from_m(0.2)).is_ok());
    }

    #[test]
    fn far_under_water_the_head_to_the_centre_is_the_whole_story() {
        let (b, h, head) = (Length::from_m(0.3), Length::from_m(0.1), Length::from_m(1.0));
        let centre = free(Area::from_m2(0.03), head - h * 0.5, 0.6).unwrap();
        assert_relative_eq!(rectangular(b, h, head, 0.6).unwrap(), centre, max_relative = 1e-3);
    }
}
