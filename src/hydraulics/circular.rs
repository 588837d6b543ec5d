//! Round openings: a thin plate with a circular hole, and a pipe through a thick wall.
//!
//! Heads are measured up from the invert. The round scuppers of the published North American tables agree with the pipe, not
//! with the thin plate, while the rectangular ones of the same tables agree with a thin plate: the two are not on one footing.

use crate::units::{Area, Flow, Length};

use super::powers::{fitted, five_halves};
use super::{Branch, FlowError, GRAVITY, critical, lesser_of, limits, not_negative, orifice, positive, zero_or_more};

/// Share of the critical-depth discharge that a pipe through a wall passes. Fitted to the published table of round scuppers,
/// ASCE 7-16 commentary, from memory: its entries are 0.85 to 0.99 of critical, 0.89 on the mean, from 2 in of head to D.
pub const THROUGH_WALL: f64 = 0.88;

/// Panels of the integral in [`thin_plate_phi`]: enough for seven digits at the worst place, a hole just full.
const PANELS: u32 = 48;

/// What passes a round hole without contraction, phi = Q / d^2.5 in m^0.5/s, for any fill.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | h/d | `fill`, head over the invert / diameter | | 0 or more |
/// | phi | sqrt(2g) times the integral of width x sqrt(depth) over the wetted hole, d = 1 | m^0.5/s | |
///
/// # Errors
/// [`FlowError::Unusable`] for a fill below zero.
///
/// # Source
/// The integral itself, evaluated here; tabulated with Staus's coefficient in ILRI publication 20 (3rd ed., 1989).
///
/// # Example
/// ```
/// # use brimline::hydraulics::circular;
/// assert_eq!(format!("{:.3}", circular::thin_plate_phi(1.0)?), "2.362");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn thin_plate_phi(fill: f64) -> Result<f64, FlowError> {
    Ok(phi(zero_or_more("head over diameter", fill)?))
}

/// Flow over the edge of a round hole in a thin plate, Q = (0.555 + 1 / (110 h/d) + 0.041 h/d) phi d^2.5.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | d | `diameter` | m | [`limits::STAUS_DIAMETER`]: from 0.2 |
/// | h | `head` over the invert | m | [`limits::STAUS_HEAD`]: from 0.03; [`limits::STAUS_FILL`]: h/d 0.1 to 0.9 |
/// | phi | [`thin_plate_phi`] | m^0.5/s | |
///
/// The plate should stand clear of bed and sides by a diameter.
///
/// # Errors
/// [`FlowError::OutsideRange`] for what lies outside the ranges above; [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// Staus, as in ILRI publication 20 (3rd ed., 1989), section 5.5, from memory.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::circular, units::Length};
/// let flow = circular::thin_plate(Length::mm(200.0), Length::mm(100.0))?;
/// assert_eq!(format!("{:.3}", flow.m3_per_s() * 1000.0), "7.969");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn thin_plate(diameter: Length, head: Length) -> Result<Flow, FlowError> {
    let flow = thin_plate_beyond(diameter, head)?;
    limits::STAUS_DIAMETER.check(diameter.m())?;
    limits::STAUS_HEAD.check(head.m())?;
    limits::STAUS_FILL.check(head / diameter)?;
    Ok(flow)
}

/// [`thin_plate`] at any head and diameter, for a caller that marks what lies beyond its ranges.
///
/// Above a full hole the integral covers the whole circle and the coefficient keeps its value of h/d = 1, 0.605: weir and
/// orifice pass into one another without a step.
///
/// # Errors
/// [`FlowError::Unusable`] for a diameter that is not above zero or a head below zero.
///
/// # Source
/// As [`thin_plate`].
pub fn thin_plate_beyond(diameter: Length, head: Length) -> Result<Flow, FlowError> {
    let (d, head) = (positive("diameter", diameter)?, not_negative("head", head)?);
    let fill = head / d;
    if fill == 0.0 {
        return Ok(Flow::ZERO);
    }
    let weir_fill = fill.min(1.0);
    let coefficient = 0.555 + 1.0 / (110.0 * weir_fill) + 0.041 * weir_fill;
    Ok(Flow::from_m3_per_s(coefficient * phi(fill) * five_halves(d)))
}

/// Flow over the edge of a round hole in a thin plate by a power law, Q = 1.518 d^0.693 h^1.807.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | d | `diameter` | m | above 0 |
/// | h | `head` over the invert | m | [`limits::GREVE_FILL`]: h/d at most 1 |
///
/// Within 3 % of [`thin_plate`] for a hole of 0.2 m a quarter to three quarters full.
///
/// # Errors
/// [`FlowError::OutsideRange`] for a hole that runs full; [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// Greve (1932), from memory.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::circular, units::Length};
/// let flow = circular::greve(Length::mm(200.0), Length::mm(100.0))?;
/// assert_eq!(format!("{:.1}", flow.m3_per_s() * 1000.0), "7.8"); // 7.97 by the integral
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn greve(diameter: Length, head: Length) -> Result<Flow, FlowError> {
    let (d, head) = (positive("diameter", diameter)?, not_negative("head", head)?);
    limits::GREVE_FILL.check(head / d)?;
    Ok(Flow::from_m3_per_s(1.518 * fitted(d, 0.693) * fitted(head, 1.807)))
}

/// Flow through a pipe in a thick wall with a free surface: critical depth at the energy H, times a coefficient.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | D | `diameter`, inside | m | above 0 |
/// | H | `head` over the invert | m | [`limits::PIPE_CRITICAL`]: H / D at most 1.2 |
/// | | `coefficient` on the critical-depth discharge | | above 0; [`THROUGH_WALL`] = 0.88 |
///
/// # Errors
/// [`FlowError::OutsideRange`] for a head at which the pipe has lost its free surface; [`FlowError::Unusable`] for what has
/// no meaning.
///
/// # Source
/// Critical depth in a circle; the coefficient is fitted, see [`THROUGH_WALL`].
///
/// # Example
/// ```
/// # use brimline::{hydraulics::circular, units::Length};
/// let flow = circular::through_wall(Length::inches(8.0), Length::inches(5.0), circular::THROUGH_WALL)?;
/// assert_eq!(format!("{:.0}", flow.to_gpm()), "165"); // as in the table of round scuppers, from memory
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn through_wall(diameter: Length, head: Length, coefficient: f64) -> Result<Flow, FlowError> {
    let critical = critical::circle_flow(diameter, head)?;
    limits::PIPE_CRITICAL.check(head / diameter)?;
    Ok(critical * super::above_zero("coefficient", coefficient)?)
}

/// Flow through a pipe in a thick wall at any head: critical depth up to the top, above that the lesser of it and an orifice.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | D | `diameter`, inside | m | above 0 |
/// | H | `head` over the invert | m | 0 or more |
///
/// The free branch is [`through_wall`] with [`THROUGH_WALL`], the full one [`orifice::free`] with [`orifice::SQUARE_EDGE`]
/// and the head to the centre. They meet at H = 1.305 D, a little above [`limits::PIPE_CRITICAL`]; changing over at that limit
/// would make the flow jump by 5 %. Above it the result stays under the published table, by 9 % at H = 1.6 D.
///
/// # Errors
/// [`FlowError::Unusable`] for a diameter that is not above zero or a head below zero.
///
/// # Source
/// As the two branches; the lesser of them is common practice.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::circular, units::Length};
/// let (flow, _) = circular::pipe(Length::inches(6.0), Length::inches(4.0))?;
/// assert_eq!(format!("{:.0}", flow.to_gpm()), "90"); // as in the table of round scuppers, from memory
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn pipe(diameter: Length, head: Length) -> Result<(Flow, Branch), FlowError> {
    let free = critical::circle_flow(diameter, head)? * THROUGH_WALL;
    if head <= diameter {
        return Ok((free, Branch::Weir));
    }
    let full = Area::from_m2(std::f64::consts::FRAC_PI_4 * diameter.m() * diameter.m());
    Ok(lesser_of(free, orifice::free(full, head - diameter * 0.5, orifice::SQUARE_EDGE)?))
}

/// phi by the integral over the hole, depth = sin^2 of an angle of which equal steps converge fast.
///
/// Part full, depths are counted in h; full, in d: in both cases the same integral of the lesser of h/d and d/h is left.
fn phi(fill: f64) -> f64 {
    let squeeze = fill.min(1.0 / fill.max(1.0));
    let step = std::f64::consts::FRAC_PI_2 / f64::from(PANELS);
    let integral: f64 = (1..PANELS)
        .map(|panel| {
            let (sine, cosine) = (f64::from(panel) * step).sin_cos();
            let both = 2.0 * sine * cosine;
            both * both * (1.0 - squeeze * sine * sine).sqrt()
        })
        .sum();
    (2.0 * GRAVITY).sqrt() * integral * step * if fill <= 1.0 { fill * fill } else { fill.sqrt() }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// A full hole under a high head is an orifice: phi tends to (pi / 4) sqrt(2 g h/d).
    #[test]
    fn the_integral_of_a_deep_hole_is_that_of_an_orifice() {
        let deep = thin_plate_phi(400.5).unwrap();
        assert_relative_eq!(deep, std::f64::consts::FRAC_PI_4 * (2.0 * GRAVITY * 400.0).sqrt(), max_relative = 1e-6);
    }

    #[test]
    fn the_hole_fills_without_a_step() {
        assert_relative_eq!(
            thin_plate_phi(1.0 - 1e-9).unwrap(),
            thin_plate_phi(1.0 + 1e-9).unwrap(),
            max_relative = 1e-7
        );
        let flow = |head: f64| pipe(Length::from_m(0.2), Length::from_m(head)).unwrap();
        assert_eq!(flow(0.2).1, Branch::Weir);
        assert_eq!(flow(0.26).1, Branch::Weir);
        assert_eq!(flow(0.262).1, Branch::Orifice);
        assert_relative_eq!(flow(0.2).0, flow(0.200_000_001).0, max_relative = 1e-6);
    }

    #[test]
    fn each_law_refuses_what_it_was_not_made_for() {
        let mm = Length::mm;
        assert!(thin_plate(mm(150.0), mm(75.0)).is_err());
        assert!(thin_plate(mm(400.0), mm(25.0)).is_err());
        assert!(thin_plate(mm(400.0), mm(380.0)).is_err());
        assert!(greve(mm(200.0), mm(201.0)).is_err());
        assert!(through_wall(mm(200.0), mm(241.0), THROUGH_WALL).is_err());
        assert!(through_wall(mm(200.0), mm(100.0), 0.0).is_err());
    }
}
