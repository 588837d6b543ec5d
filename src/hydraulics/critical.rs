//! Critical depth: the depth at which a flow passes with the least energy, Q^2 T = g A^3.
//!
//! Water that leaves a level channel into the air passes through it, three to four critical depths ahead of the edge; at the
//! edge itself the surface has fallen to about 0.715 of it in a rectangle and 0.72 to 0.75 in a circle. Critical depth, not
//! the depth at the edge, is where a profile starts. [`brink_depth`] is there for comparison with a measurement.

use crate::units::{Flow, Length};

use super::powers::{three_halves, two_thirds};
use super::section::{critical_at_energy, critical_at_flow};
use super::{FlowError, GRAVITY, not_negative, positive, solve, zero_or_more};

/// Depth at a free edge over critical depth, level rectangular channel. Source: Rouse (1936), from memory.
pub const BRINK_OVER_CRITICAL: f64 = 0.715;

/// Critical depth in a rectangle, yc = (q^2 / g)^(1/3) with q = Q / b.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | Q | `flow` | m3/s | 0 or more |
/// | b | `width` | m | above 0 |
///
/// # Errors
/// [`FlowError::Unusable`] for a width that is not above zero or a flow below zero.
///
/// # Source
/// Least specific energy; the derivation is in any text on open channels.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::critical, units::{Flow, Length}};
/// let depth = critical::rectangle(Flow::from_m3_per_s(0.02), Length::from_m(1.0))?;
/// assert_eq!(format!("{:.5}", depth.m()), "0.03442");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn rectangle(flow: Flow, width: Length) -> Result<Length, FlowError> {
    let unit_flow = zero_or_more("flow", flow.m3_per_s())? / positive("width", width)?;
    Ok(Length::from_m(rectangle_depth(unit_flow)))
}

/// Depth and velocity head at critical depth in a rectangle, 1.5 yc.
///
/// Symbols, range, errors and source as in [`rectangle`].
///
/// # Errors
/// As [`rectangle`].
pub fn rectangle_energy(flow: Flow, width: Length) -> Result<Length, FlowError> {
    Ok(rectangle(flow, width)? * 1.5)
}

/// Flow that passes a rectangle at critical depth with the energy H, Q = (2/3)^1.5 sqrt(g) b H^1.5.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | b | `width` | m | above 0 |
/// | H | `energy`, depth and velocity head over the floor | m | 0 or more |
///
/// The coefficient is 1.7046 m^0.5/s.
///
/// # Errors
/// [`FlowError::Unusable`] for a width that is not above zero or an energy below zero.
///
/// # Source
/// Least specific energy, as [`rectangle`].
///
/// # Example
/// ```
/// # use brimline::{hydraulics::critical, units::Length};
/// let flow = critical::rectangle_flow(Length::from_m(1.0), Length::from_m(1.0))?;
/// assert_eq!(format!("{:.4}", flow.m3_per_s()), "1.7046");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn rectangle_flow(width: Length, energy: Length) -> Result<Flow, FlowError> {
    let (b, energy) = (positive("width", width)?, not_negative("energy", energy)?);
    Ok(Flow::from_m3_per_s(b * GRAVITY.sqrt() * three_halves(energy * 2.0 / 3.0)))
}

/// Critical depth in a trapezoid.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | Q | `flow` | m3/s | 0 or more |
/// | b | `bottom` width | m | above 0 |
/// | z | `side_slope`, run over rise of each side | | 0 or more |
///
/// # Errors
/// [`FlowError::Unusable`] for an argument outside its range.
///
/// # Source
/// Q^2 T = g A^3 solved for the depth.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::critical, units::{Flow, Length}};
/// let depth = critical::trapezoid(Flow::from_m3_per_s(1.0), Length::from_m(1.0), 1.0)?;
/// assert_eq!(format!("{:.4}", depth.m()), "0.4052");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn trapezoid(flow: Flow, bottom: Length, side_slope: f64) -> Result<Length, FlowError> {
    let (flow, b) = (zero_or_more("flow", flow.m3_per_s())?, positive("bottom width", bottom)?);
    let z = zero_or_more("side slope", side_slope)?;
    // The rectangle on the same bottom is the deeper one: the sides only add room.
    let deepest = rectangle_depth(flow / b);
    let depth = solve::bracketed(0.0, deepest, |depth| {
        let (area, surface) = ((b + z * depth) * depth, b + 2.0 * z * depth);
        two_thirds(area * area * area * GRAVITY / surface) - two_thirds(flow * flow)
    });
    Ok(Length::from_m(depth))
}

/// Depth and velocity head at critical depth in a trapezoid: half the mean depth A / T comes on top.
///
/// Symbols, range, errors and source as in [`trapezoid`].
///
/// # Errors
/// As [`trapezoid`].
pub fn trapezoid_energy(flow: Flow, bottom: Length, side_slope: f64) -> Result<Length, FlowError> {
    let depth = trapezoid(flow, bottom, side_slope)?.m();
    let (area, surface) = ((bottom.m() + side_slope * depth) * depth, bottom.m() + 2.0 * side_slope * depth);
    Ok(Length::from_m(depth + area / surface / 2.0))
}

/// Critical depth in a circle.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | Q | `flow` | m3/s | 0 or more |
/// | D | `diameter` | m | above 0 |
///
/// It approaches D and never reaches it; towards D the free surface is lost and the number with it.
///
/// # Errors
/// [`FlowError::Unusable`] for a diameter that is not above zero or a flow below zero.
///
/// # Source
/// Q^2 T = g A^3 solved for the angle of the surface.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::critical, units::{Flow, Length}};
/// let depth = critical::circle(Flow::from_m3_per_s(0.01), Length::mm(200.0))?;
/// assert_eq!(format!("{:.5}", depth.m()), "0.08455");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn circle(flow: Flow, diameter: Length) -> Result<Length, FlowError> {
    let (flow, d) = (zero_or_more("flow", flow.m3_per_s())?, positive("diameter", diameter)?);
    Ok(Length::from_m(critical_at_flow(flow, d).depth * d))
}

/// Depth and velocity head at critical depth in a circle.
///
/// Symbols, range, errors and source as in [`circle`].
///
/// # Errors
/// As [`circle`].
///
/// # Example
/// ```
/// # use brimline::{hydraulics::critical, units::{Flow, Length}};
/// let energy = critical::circle_energy(Flow::from_m3_per_s(0.01), Length::mm(200.0))?;
/// assert_eq!(format!("{:.4}", energy.m()), "0.1165");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn circle_energy(flow: Flow, diameter: Length) -> Result<Length, FlowError> {
    let (flow, d) = (zero_or_more("flow", flow.m3_per_s())?, positive("diameter", diameter)?);
    Ok(Length::from_m(critical_at_flow(flow, d).critical_energy() * d))
}

/// Flow that passes a circle at critical depth with the energy H.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | D | `diameter` | m | above 0 |
/// | H | `energy`, depth and velocity head over the invert | m | 0 or more |
///
/// The equation alone; where it stops to mean a flow is for [`super::circular::through_wall`] to say.
///
/// # Errors
/// [`FlowError::Unusable`] for a diameter that is not above zero or an energy below zero.
///
/// # Source
/// As [`circle`].
///
/// # Example
/// ```
/// # use brimline::{hydraulics::critical, units::Length};
/// let flow = critical::circle_flow(Length::mm(200.0), Length::mm(116.511))?;
/// assert_eq!(format!("{:.4}", flow.m3_per_s()), "0.0100");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn circle_flow(diameter: Length, energy: Length) -> Result<Flow, FlowError> {
    let (d, energy) = (positive("diameter", diameter)?, not_negative("energy", energy)?);
    let scaled = critical_at_energy(energy, d).critical_flow();
    Ok(Flow::from_m3_per_s(scaled * GRAVITY.sqrt() * super::powers::five_halves(d)))
}

/// Depth at the free edge of a level rectangular channel.
///
/// # Errors
/// [`FlowError::Unusable`] for a depth below zero.
///
/// # Source
/// Rouse (1936), from memory.
pub fn brink_depth(critical_depth: Length) -> Result<Length, FlowError> {
    not_negative("critical depth", critical_depth)?;
    Ok(critical_depth * BRINK_OVER_CRITICAL)
}

/// Critical depth for a flow per width, both in SI.
pub(super) fn rectangle_depth(unit_flow: f64) -> f64 {
    two_thirds(unit_flow) / GRAVITY.cbrt()
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    #[test]
    fn a_trapezoid_without_slope_is_a_rectangle() {
        let (flow, width) = (Flow::from_m3_per_s(0.05), Length::from_m(0.3));
        assert_relative_eq!(
            trapezoid(flow, width, 0.0).unwrap(),
            rectangle(flow, width).unwrap(),
            max_relative = 1e-12
        );
        assert_relative_eq!(
            trapezoid_energy(flow, width, 0.0).unwrap(),
            rectangle_energy(flow, width).unwrap(),
            max_relative = 1e-12
        );
    }

    #[test]
    fn energy_leads_back_to_the_flow() {
        for gpm in [0.1, 25.0, 180.0, 900.0] {
            let (flow, size) = (Flow::gpm(gpm), Length::inches(12.0));
            let rectangle = rectangle_flow(size, rectangle_energy(flow, size).unwrap()).unwrap();
            assert_relative_eq!(rectangle, flow, max_relative = 1e-12);
            let circle = circle_flow(size, circle_energy(flow, size).unwrap()).unwrap();
            assert_relative_eq!(circle, flow, max_relative = 1e-9);
        }
    }

    #[test]
    fn no_flow_has_no_depth() {
        let size = Length::from_m(0.2);
        assert_eq!(rectangle(Flow::ZERO, size), Ok(Length::ZERO));
        assert_eq!(trapezoid(Flow::ZERO, size, 1.0), Ok(Length::ZERO));
        assert_eq!(circle(Flow::ZERO, size), Ok(Length::ZERO));
        assert_eq!(circle_flow(size, Length::ZERO), Ok(Flow::ZERO));
        assert!(circle(Flow::from_m3_per_s(-1.0), size).is_err());
    }
}
