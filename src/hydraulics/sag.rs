//! Street inlets in a sag, after HEC-22: grates, curb openings and slots, as weirs and as orifices.
//!
//! A roof meets them as dome grates, openings in a curb and slot channels. The coefficients are the metric ones of the
//! source; its US ones are rounded separately and differ by up to 4 %. Depths are those of the pond at the inlet. Half of a
//! grate clogged along its side halves its area but not its perimeter: 2 x 4 ft against a curb, blocked to 1 ft of width,
//! keeps 6 of 8 ft.

use crate::units::{Area, Flow, Length};

use super::powers::{three_halves, two_thirds};
use super::{Branch, FlowError, GRAVITY, above_zero, lesser_of, limits, not_negative, positive, zero_or_more};

/// Weir coefficient on the perimeter of a grate, m^0.5/s.
pub const GRATE_WEIR: f64 = 1.66;
/// Weir coefficient of a curb opening without a depression, m^0.5/s.
pub const CURB_WEIR: f64 = 1.60;
/// Weir coefficient of a depressed curb opening, m^0.5/s.
pub const DEPRESSED_CURB_WEIR: f64 = 1.25;
/// How much of the depression's width counts as weir, on both sides together.
const DEPRESSION_SHARE: f64 = 1.8;
/// Weir coefficient of a slot, m^0.5/s.
pub const SLOT_WEIR: f64 = 1.40;
/// Orifice coefficient of grates and curb openings.
pub const INLET_ORIFICE: f64 = 0.67;
/// Orifice coefficient of a slot.
pub const SLOT_ORIFICE: f64 = 0.80;

/// Flow over the rim of a grate, Q = 1.66 P d^1.5.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | P | `perimeter`, a side against a curb left out | m | above 0 |
/// | d | `depth`, mean across the grate | m | 0 or more |
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), section 4.4.5.1.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::sag, units::{Flow, Length}};
/// let flow = sag::grate_weir(Length::from_m(2.31), Length::from_m(0.135))?;
/// assert_eq!(format!("{:.2}", flow.m3_per_s()), "0.19"); // as in Example 4-11 of the source
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn grate_weir(perimeter: Length, depth: Length) -> Result<Flow, FlowError> {
    weir(GRATE_WEIR, positive("perimeter", perimeter)?, depth)
}

/// Depth at which a flow enters over the rim of a grate: [`grate_weir`] turned round.
///
/// The source raises to 0.67 instead of 2/3, which gives up to 1 % less.
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// As [`grate_weir`].
pub fn grate_weir_depth(perimeter: Length, flow: Flow) -> Result<Length, FlowError> {
    let (perimeter, flow) = (positive("perimeter", perimeter)?, zero_or_more("flow", flow.m3_per_s())?);
    Ok(Length::from_m(two_thirds(flow / (GRATE_WEIR * perimeter))))
}

/// Perimeter that a flow needs at a depth: [`grate_weir`] turned round.
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning, a depth of zero included.
///
/// # Source
/// As [`grate_weir`].
///
/// # Example
/// ```
/// # use brimline::{hydraulics::sag, units::{Flow, Length}};
/// let perimeter = sag::grate_weir_perimeter(Flow::from_m3_per_s(0.19), Length::from_m(0.135))?;
/// assert_eq!(format!("{:.2}", perimeter.m()), "2.31"); // as printed in Example 4-11
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn grate_weir_perimeter(flow: Flow, depth: Length) -> Result<Length, FlowError> {
    let (flow, depth) = (zero_or_more("flow", flow.m3_per_s())?, positive("depth", depth)?);
    Ok(Length::from_m(flow / (GRATE_WEIR * three_halves(depth))))
}

/// Flow through a grate under water, Q = 0.67 A sqrt(2 g d).
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | A | `clear_area` between the bars | m2 | above 0 |
/// | d | `depth`, mean across the grate | m | 0 or more |
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), section 4.4.5.1.
pub fn grate_orifice(clear_area: Area, depth: Length) -> Result<Flow, FlowError> {
    let area = above_zero("clear area", clear_area.m2())?;
    Ok(Flow::from_m3_per_s(INLET_ORIFICE * area * fall_velocity(not_negative("depth", depth)?)))
}

/// Flow into a grate at any depth: the lesser of its rim and its clear area.
///
/// The source sketches a curve below both where they meet and gives no numbers for it.
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// As [`grate_weir`] and [`grate_orifice`].
pub fn grate(perimeter: Length, clear_area: Area, depth: Length) -> Result<(Flow, Branch), FlowError> {
    Ok(lesser_of(grate_weir(perimeter, depth)?, grate_orifice(clear_area, depth)?))
}

/// Flow over the lip of a curb opening, Q = 1.60 L d^1.5.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | L | `length` of the opening | m | above 0 |
/// | h | `height` of the opening | m | above 0 |
/// | d | `depth` at the lip | m | [`limits::CURB_WEIR`]: d / h at most 1 |
///
/// # Errors
/// [`FlowError::OutsideRange`] for a depth above the opening; [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), section 4.4.5.2.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::sag, units::Length};
/// let flow = sag::curb_weir(Length::from_m(2.5), Length::from_m(0.13), Length::from_m(0.05))?;
/// assert_eq!(format!("{:.3}", flow.m3_per_s()), "0.045"); // as printed in Example 4-12
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn curb_weir(length: Length, height: Length, depth: Length) -> Result<Flow, FlowError> {
    let flow = weir(CURB_WEIR, positive("length", length)?, depth)?;
    limits::CURB_WEIR.check(depth.m() / positive("height", height)?)?;
    Ok(flow)
}

/// Flow over the lip of a depressed curb opening, Q = 1.25 (L + 1.8 W) d^1.5.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | L | `length` of the opening | m | [`limits::DEPRESSED_CURB_LENGTH`]: at most 3.6 |
/// | W | `depressed_width`, across the flow | m | 0 or more |
/// | h | `height` of the opening | m | above 0 |
/// | a | `depression` | m | 0 or more |
/// | d | `depth` at the curb, over the slope carried on | m | [`limits::DEPRESSED_CURB_WEIR`]: d / (h + a) at most 1 |
///
/// # Errors
/// [`FlowError::OutsideRange`] for what lies outside the ranges above; [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), section 4.4.5.2. Its Example 4-12 prints 4 % less than its equation in metres.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::sag, units::Length};
/// let m = Length::from_m;
/// let flow = sag::depressed_curb_weir(m(2.5), m(0.6), m(0.13), m(0.025), m(0.05))?;
/// assert_eq!(format!("{:.3}", flow.m3_per_s()), "0.050"); // Example 4-12 prints 0.048
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn depressed_curb_weir(
    length: Length,
    depressed_width: Length,
    height: Length,
    depression: Length,
    depth: Length,
) -> Result<Flow, FlowError> {
    let long = positive("length", length)? + DEPRESSION_SHARE * not_negative("depressed width", depressed_width)?;
    let flow = weir(DEPRESSED_CURB_WEIR, long, depth)?;
    limits::DEPRESSED_CURB_LENGTH.check(length.m())?;
    let top = positive("height", height)? + not_negative("depression", depression)?;
    limits::DEPRESSED_CURB_WEIR.check(depth.m() / top)?;
    Ok(flow)
}

/// Flow through a curb opening under water, Q = 0.67 h L sqrt(2 g (d - h/2)).
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | L | `length` of the opening | m | above 0 |
/// | h | `height` of the opening | m | above 0 |
/// | d | `depth` at the lip | m | [`limits::CURB_ORIFICE`]: d / h from 1.4 |
///
/// # Errors
/// [`FlowError::OutsideRange`] for a lower depth; [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), section 4.4.5.2.
pub fn curb_orifice(length: Length, height: Length, depth: Length) -> Result<Flow, FlowError> {
    let (l, h) = (positive("length", length)?, positive("height", height)?);
    limits::CURB_ORIFICE.check(not_negative("depth", depth)? / h)?;
    Ok(Flow::from_m3_per_s(curb_orifice_flow(l, h, depth.m())))
}

/// Depth at which a flow enters a curb opening under water: [`curb_orifice`] turned round.
///
/// # Errors
/// As [`curb_orifice`].
///
/// # Source
/// As [`curb_orifice`].
///
/// # Example
/// ```
/// # use brimline::{hydraulics::sag, units::{Flow, Length, METRES_PER_FOOT}};
/// let feet = |value: f64| Length::from_m(value * METRES_PER_FOOT);
/// let flow = Flow::from_m3_per_s(5.3 * METRES_PER_FOOT.powi(3));
/// let depth = sag::curb_orifice_depth(feet(4.0), feet(0.325), flow)?;
/// assert_eq!(format!("{:.2}", depth.m() / METRES_PER_FOOT), "0.74"); // as printed in Example 4-14
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn curb_orifice_depth(length: Length, height: Length, flow: Flow) -> Result<Length, FlowError> {
    let (l, h) = (positive("length", length)?, positive("height", height)?);
    let velocity = zero_or_more("flow", flow.m3_per_s())? / (INLET_ORIFICE * h * l);
    let depth = velocity * velocity / (2.0 * GRAVITY) + h / 2.0;
    limits::CURB_ORIFICE.check(depth / h)?;
    Ok(Length::from_m(depth))
}

/// Flow into a curb opening at any depth: weir to the top of the opening, a straight line to 1.4 of its height, orifice above.
///
/// Arguments as in [`curb_orifice`], at any depth.
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), section 4.4.5.2 for the ends of the band; the line between them as in the
/// public-domain source code that goes with the EPA stormwater reference manual.
pub fn curb_opening(length: Length, height: Length, depth: Length) -> Result<(Flow, Branch), FlowError> {
    let (l, h) = (positive("length", length)?, positive("height", height)?);
    let d = not_negative("depth", depth)?;
    let line_end = limits::CURB_ORIFICE.low * h;
    let (flow, branch) = if d <= h {
        (CURB_WEIR * l * three_halves(d), Branch::Weir)
    } else if d < line_end {
        let (low, high) = (CURB_WEIR * l * three_halves(h), curb_orifice_flow(l, h, line_end));
        (low + (high - low) * (d - h) / (line_end - h), Branch::Transition)
    } else {
        (curb_orifice_flow(l, h, d), Branch::Orifice)
    };
    Ok((Flow::from_m3_per_s(flow), branch))
}

/// Flow over the edge of a slot, Q = 1.40 L d^1.5.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | L | `length` of the slot | m | above 0 |
/// | d | `depth` | m | [`limits::SLOT_WEIR`]: to 0.2 ft |
///
/// Against [`slot_orifice`] at 0.2 ft there is a step; the source joins the two nowhere.
///
/// # Errors
/// [`FlowError::OutsideRange`] for a greater depth; [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), section 4.4.5.3.
pub fn slot_weir(length: Length, depth: Length) -> Result<Flow, FlowError> {
    let flow = weir(SLOT_WEIR, positive("length", length)?, depth)?;
    limits::SLOT_WEIR.check(depth.m())?;
    Ok(flow)
}

/// Flow through a slot under water, Q = 0.8 L W sqrt(2 g d).
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | L, W | `length`, `width` of the slot | m | above 0 |
/// | d | `depth` | m | [`limits::SLOT_ORIFICE`]: from 0.2 ft; surely an orifice from 0.4 ft |
///
/// # Errors
/// [`FlowError::OutsideRange`] for a lower depth; [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), section 4.4.5.3; it uses the orifice between 0.2 and 0.4 ft too.
pub fn slot_orifice(length: Length, width: Length, depth: Length) -> Result<Flow, FlowError> {
    let area = positive("length", length)? * positive("width", width)?;
    limits::SLOT_ORIFICE.check(not_negative("depth", depth)?)?;
    Ok(Flow::from_m3_per_s(SLOT_ORIFICE * area * fall_velocity(depth.m())))
}

fn weir(coefficient: f64, length: f64, depth: Length) -> Result<Flow, FlowError> {
    Ok(Flow::from_m3_per_s(coefficient * length * three_halves(not_negative("depth", depth)?)))
}

fn curb_orifice_flow(length: f64, height: f64, depth: f64) -> f64 {
    INLET_ORIFICE * height * length * fall_velocity(depth - height / 2.0)
}

fn fall_velocity(depth: f64) -> f64 {
    (2.0 * GRAVITY * depth).sqrt()
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    #[test]
    fn a_curb_opening_fills_without_a_step() {
        let (l, h) = (Length::from_m(1.2), Length::from_m(0.1));
        let flow = |depth: f64| curb_opening(l, h, Length::from_m(depth)).unwrap();
        assert_eq!(flow(0.1).0, curb_weir(l, h, h).unwrap());
        assert_relative_eq!(flow(0.1).0, flow(0.100_000_001).0, max_relative = 1e-6);
        assert_relative_eq!(flow(0.139_999_999).0, flow(0.14).0, max_relative = 1e-6);
        assert_eq!(flow(0.12).1, Branch::Transition);
        assert!((1..300).all(|mm| flow(f64::from(mm) / 1e3).0 > flow(f64::from(mm - 1) / 1e3).0));
    }

    #[test]
    fn each_form_keeps_to_its_depths() {
        let m = Length::from_m;
        assert!(curb_weir(m(1.2), m(0.1), m(0.11)).is_err());
        assert!(curb_orifice(m(1.2), m(0.1), m(0.13)).is_err());
        assert!(curb_orifice_depth(m(1.2), m(0.1), Flow::from_m3_per_s(0.01)).is_err());
        assert!(depressed_curb_weir(m(3.7), m(0.6), m(0.1), m(0.0), m(0.05)).is_err());
        assert!(slot_weir(m(1.0), m(0.07)).is_err());
        assert!(slot_orifice(m(1.0), m(0.045), m(0.05)).is_err());
    }

    #[test]
    fn a_grate_turns_round() {
        let flow = grate_weir(Length::from_m(2.4), Length::from_m(0.13)).unwrap();
        assert_relative_eq!(grate_weir_depth(Length::from_m(2.4), flow).unwrap().m(), 0.13, max_relative = 1e-12);
        let deep = grate(Length::from_m(2.4), Area::from_m2(0.1), Length::from_m(1.0)).unwrap();
        assert_eq!(deep.1, Branch::Orifice);
    }
}
