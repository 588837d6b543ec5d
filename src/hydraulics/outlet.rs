//! Outlets in the floor: the forms of EN 12056-3, risers, and the ring dam of an overflow drain.
//!
//! Heads are measured up from the rim the water runs over. A drain body with a dome and a bowl follows no general curve: take
//! its tested table, and what is here as an upper bound.

use crate::units::{Area, Flow, Length, METRES_PER_FOOT};

use super::powers::{three_halves, two_thirds};
use super::{Branch, FlowError, above_zero, lesser_of, limits, not_negative, orifice, positive};

/// Flow factor of a clear outlet. Source: EN 12056-3, from memory.
pub const CLEAR: f64 = 1.0;
/// Flow factor of an outlet behind a strainer or grating. Source: EN 12056-3, from memory.
pub const STRAINED: f64 = 0.5;

/// Weir coefficient of a riser's rim, m^0.5/s. Source: FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), Example 8-6.
pub const RISER_RIM: f64 = 1.84;

/// Weir coefficient of a thin ring, feet and cubic feet a second.
pub const THIN_RIM_US: f64 = 3.33;
/// Weir coefficient of a ring with domes and bolts about it, feet and cubic feet a second: the practical value for grates.
pub const PRACTICAL_RIM_US: f64 = 3.0;

/// Flow into a round outlet, Q = ko D h^1.5 / 7500, from h = D/2 on Q = ko D^2 h^0.5 / 15000.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | D | `diameter`, effective: of the mouth | mm | above 0 |
/// | h | `head` | mm | 0 or more |
/// | ko | `flow_factor` | | [`limits::EN_FLOW_FACTOR`]: [`STRAINED`] to [`CLEAR`] |
/// | Q | result | l/s | |
///
/// The two forms meet at h = D/2 exactly.
///
/// # Errors
/// [`FlowError::OutsideRange`] for another factor; [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// EN 12056-3, from memory.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::outlet, units::Length};
/// let (flow, _) = outlet::en_12056_circular(Length::mm(150.0), Length::mm(100.0), outlet::CLEAR)?;
/// assert_eq!(format!("{:.1}", flow.m3_per_s() * 1000.0), "15.0");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn en_12056_circular(diameter: Length, head: Length, flow_factor: f64) -> Result<(Flow, Branch), FlowError> {
    let (d, h) = (positive("diameter", diameter)? * 1000.0, not_negative("head", head)? * 1000.0);
    limits::EN_FLOW_FACTOR.check(above_zero("flow factor", flow_factor)?)?;
    let (litres, branch) = if h <= d / 2.0 {
        (d * three_halves(h) / 7500.0, Branch::Weir)
    } else {
        (d * d * h.sqrt() / 15_000.0, Branch::Orifice)
    };
    Ok((Flow::from_m3_per_s(flow_factor * litres / 1000.0), branch))
}

/// Flow into an outlet of any other shape, Q = ko L h^1.5 / 24000, from h = 2 A/L on Q = ko A h^0.5 / 12000.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | L | `weir_length`, the rim over which water runs in | mm | above 0 |
/// | A | `area` of the outlet | mm2 | above 0 |
/// | h | `head` | mm | 0 or more |
/// | ko | `flow_factor` | | [`limits::EN_FLOW_FACTOR`]: [`STRAINED`] to [`CLEAR`] |
/// | Q | result | l/s | |
///
/// The divisor 12000 makes the two forms meet at h = 2 A/L. The 20000 one also meets with would make the flow fall there.
///
/// # Errors
/// [`FlowError::OutsideRange`] for another factor; [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// EN 12056-3, from memory.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::outlet, units::{Area, Length}};
/// let (flow, _) =
///     outlet::en_12056_other(Length::mm(1000.0), Area::from_m2(0.06), Length::mm(30.0), outlet::CLEAR)?;
/// assert_eq!(format!("{:.3}", flow.m3_per_s() * 1000.0), "6.847");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn en_12056_other(
    weir_length: Length,
    area: Area,
    head: Length,
    flow_factor: f64,
) -> Result<(Flow, Branch), FlowError> {
    let weir = super::weir::en_12056(weir_length, head)?;
    let a = above_zero("area", area.m2())?;
    limits::EN_FLOW_FACTOR.check(above_zero("flow factor", flow_factor)?)?;
    // The lesser changes over at 2 A/L by itself. mm2 over mm^0.5 to litres, then to cubic metres.
    let full = Flow::from_m3_per_s(a * 1e6 * (head.m() * 1000.0).sqrt() / 12_000.0 / 1000.0);
    let (flow, branch) = lesser_of(weir, full);
    Ok((flow * flow_factor, branch))
}

/// Flow into an upright pipe: the lesser of its rim, 1.84 pi D H^1.5, and its mouth, 2.09 D^2 sqrt(H).
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | D | `diameter`, inside | m | above 0 |
/// | H | `head` over the rim | m | 0 or more |
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), section 8.4.4 and Example 8-6.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::outlet, units::Length};
/// let (flow, _) = outlet::riser(Length::from_m(0.53), Length::from_m(0.4))?;
/// assert_eq!(format!("{:.2}", flow.m3_per_s()), "0.37"); // as printed in Example 8-6
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn riser(diameter: Length, head: Length) -> Result<(Flow, Branch), FlowError> {
    let (d, head) = (positive("diameter", diameter)?, not_negative("head", head)?);
    let rim = RISER_RIM * std::f64::consts::PI * d * three_halves(head);
    let mouth = orifice::CIRCULAR_FACTOR * d * d * head.sqrt();
    Ok(lesser_of(Flow::from_m3_per_s(rim), Flow::from_m3_per_s(mouth)))
}

/// Head at which the mouth of a [`riser`] takes over from its rim, 2.09 D / (1.84 pi).
///
/// # Errors
/// [`FlowError::Unusable`] for a diameter that is not above zero.
///
/// # Source
/// As [`riser`].
///
/// # Example
/// ```
/// # use brimline::{hydraulics::outlet, units::Length};
/// assert_eq!(format!("{:.4}", outlet::riser_switch(Length::from_m(0.53))?.m()), "0.1916");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn riser_switch(diameter: Length) -> Result<Length, FlowError> {
    let d = positive("diameter", diameter)?;
    Ok(Length::from_m(orifice::CIRCULAR_FACTOR * d / (RISER_RIM * std::f64::consts::PI)))
}

/// Flow over a ring dam, Q = C pi D H^1.5.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | D | `diameter` of the ring | ft | above 0 |
/// | H | `head` over its rim | ft | 0 or more |
/// | C | `coefficient_us`, [`THIN_RIM_US`] or [`PRACTICAL_RIM_US`] | ft^0.5/s | above 0 |
/// | Q | result | ft3/s | |
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// A weir on the perimeter; coefficients of Francis (1883) and of grates in FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009).
///
/// # Example
/// ```
/// # use brimline::{hydraulics::outlet, units::Length};
/// let flow = outlet::ring_dam(Length::inches(8.0), Length::inches(1.0), outlet::THIN_RIM_US)?;
/// assert_eq!(format!("{:.1}", flow.to_gpm()), "75.3");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn ring_dam(diameter: Length, head: Length, coefficient_us: f64) -> Result<Flow, FlowError> {
    let (d, head) = (positive("ring diameter", diameter)?, not_negative("head", head)?);
    let coefficient = above_zero("coefficient", coefficient_us)? * METRES_PER_FOOT.sqrt();
    Ok(Flow::from_m3_per_s(coefficient * std::f64::consts::PI * d * three_halves(head)))
}

/// Flow through the throat of a drain, Q = 0.6 A sqrt(2 g z).
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | A | (pi / 4) `throat`^2, inside | m2 | above 0 |
/// | z | `depth` of water over the throat: head over the rim and the rim's height over the throat | m | 0 or more |
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// As [`orifice::free`]; that a drain's throat follows it is common practice.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::outlet, units::Length};
/// let flow = outlet::throat(Length::inches(4.026), Length::inches(4.0))?;
/// assert_eq!(format!("{:.1}", flow.to_gpm()), "110.3");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn throat(throat: Length, depth: Length) -> Result<Flow, FlowError> {
    let d = positive("throat diameter", throat)?;
    orifice::free(Area::from_m2(std::f64::consts::FRAC_PI_4 * d * d), depth, orifice::SQUARE_EDGE)
}

/// Flow into a drain with a ring dam: the lesser of its rim and its throat.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | | `ring` diameter and `coefficient_us` as in [`ring_dam`] | | |
/// | | `throat` diameter, `ring_height` of the rim over the throat | m | above 0; 0 or more |
/// | H | `head` over the rim | m | 0 or more |
///
/// The dome's clear area and the leader below can be less than either; that comparison is the caller's.
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// As [`ring_dam`] and [`throat`]; lesser-of as for the [`riser`].
///
/// # Example
/// ```
/// # use brimline::{hydraulics::{Branch, outlet}, units::Length};
/// let inches = Length::inches;
/// let (flow, branch) =
///     outlet::ring_dam_drain(inches(8.0), outlet::THIN_RIM_US, inches(4.026), inches(2.0), inches(2.0))?;
/// assert_eq!((format!("{:.1}", flow.to_gpm()).as_str(), branch), ("110.3", Branch::Orifice));
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn ring_dam_drain(
    ring: Length,
    coefficient_us: f64,
    throat: Length,
    ring_height: Length,
    head: Length,
) -> Result<(Flow, Branch), FlowError> {
    let rim = ring_dam(ring, head, coefficient_us)?;
    not_negative("ring height", ring_height)?;
    Ok(lesser_of(rim, self::throat(throat, head + ring_height)?))
}

/// Head over another ring at the same flow, H2 = (D1 / D2)^(2/3) H1.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | H1 | `head` over the ring that was tested | m | 0 or more |
/// | D1 | `tested` ring diameter | m | above 0 |
/// | D2 | `other` ring diameter | m | above 0 |
///
/// Weir flow on both perimeters; once a throat or a leader rules, it does not hold.
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// ASCE 7-16 commentary, eq. C8.3-3, from memory; it rounds the power 2/3 to 0.67.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::outlet, units::Length};
/// let inches = Length::inches;
/// let head = outlet::scaled_head(inches(2.0), inches(8.0), inches(12.75))?;
/// assert_eq!(format!("{:.3}", head.to_inches()), "1.466");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn scaled_head(head: Length, tested: Length, other: Length) -> Result<Length, FlowError> {
    not_negative("head", head)?;
    Ok(head * two_thirds(positive("tested diameter", tested)? / positive("other diameter", other)?))
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    #[test]
    fn both_forms_of_the_standard_meet_where_they_switch() {
        let round = |mm: f64| en_12056_circular(Length::mm(100.0), Length::mm(mm), CLEAR).unwrap();
        assert_eq!((round(50.0).1, round(50.001).1), (Branch::Weir, Branch::Orifice));
        assert_relative_eq!(round(50.0).0, round(50.000_001).0, max_relative = 1e-6);
        let other = |mm: f64| en_12056_other(Length::mm(400.0), Area::from_m2(0.01), Length::mm(mm), STRAINED).unwrap();
        assert_eq!((other(49.999).1, other(50.001).1), (Branch::Weir, Branch::Orifice));
        assert_relative_eq!(other(50.0).0, other(50.000_001).0, max_relative = 1e-6);
    }

    #[test]
    fn a_strainer_halves_the_flow_and_other_factors_are_refused() {
        let flow = |factor: f64| en_12056_circular(Length::mm(100.0), Length::mm(30.0), factor);
        assert_relative_eq!(flow(STRAINED).unwrap().0 * 2.0, flow(CLEAR).unwrap().0);
        assert!(flow(0.4).is_err() && flow(1.1).is_err() && flow(f64::NAN).is_err());
    }

    /// A throat of 4.026 in under a dam 2 in high and 8 in wide: at 1.2 in the rim gives 75.3 x 1.2^1.5 = 99.0 gal/min, the
    /// throat 110.3 sqrt(3.2 / 4) = 98.6, by hand.
    #[test]
    fn the_throat_takes_over_near_1_2_in() {
        let branch = |head: f64| {
            let inches = Length::inches;
            ring_dam_drain(inches(8.0), THIN_RIM_US, inches(4.026), inches(2.0), inches(head)).unwrap().1
        };
        assert_eq!(branch(1.1), Branch::Weir);
        assert_eq!(branch(1.3), Branch::Orifice);
    }
}
