//! Uniform flow: roughness of surfaces, Manning and Chezy, normal depth, and the storm drain that runs full.
//!
//! Velocities are in m/s, roughness n in s/m^(1/3), Chezy's C in m^0.5/s; slopes are fall over run.

use crate::units::{Area, Flow, Length};

use super::powers::{eight_thirds, two_thirds};
use super::section::Segment;
use super::{FlowError, above_zero, limits, positive, solve, zero_or_more};

/// How rough a surface is, as Manning's n.
#[derive(Clone, Copy, Debug, PartialEq)]
#[non_exhaustive]
pub struct Roughness {
    /// The surface.
    pub surface: &'static str,
    /// The smoothest of its kind.
    pub least: f64,
    /// What is usually taken; the middle where a source gives the two ends only.
    pub usual: f64,
    /// The roughest of its kind.
    pub most: f64,
    /// Where the figures stand.
    pub source: &'static str,
}

const fn surface(surface: &'static str, least: f64, usual: f64, most: f64, source: &'static str) -> Roughness {
    Roughness { surface, least, usual, most, source }
}

const OPEN_CHANNEL: &str =
    "Open-Channel Hydraulics (1959), Table 5-6, as carried by the general-purpose library fluids";
const PRACTICE: &str = "common practice";

/// Surfaces water meets on and under a roof.
pub static SURFACES: [Roughness; 15] = [
    surface("brass or glass, smooth", 0.009, 0.010, 0.013, OPEN_CHANNEL),
    surface("acrylic", 0.008, 0.009, 0.010, OPEN_CHANNEL),
    surface("steel, welded", 0.010, 0.012, 0.014, OPEN_CHANNEL),
    surface("steel, smooth, painted", 0.012, 0.013, 0.017, OPEN_CHANNEL),
    surface("steel, smooth, unpainted", 0.011, 0.012, 0.014, OPEN_CHANNEL),
    surface("cast iron, coated", 0.010, 0.013, 0.014, OPEN_CHANNEL),
    surface("cast iron, uncoated", 0.011, 0.014, 0.016, OPEN_CHANNEL),
    surface("wrought iron, galvanized", 0.013, 0.016, 0.017, OPEN_CHANNEL),
    surface("corrugated metal storm drain", 0.021, 0.024, 0.030, OPEN_CHANNEL),
    surface("concrete, finished", 0.011, 0.012, 0.014, OPEN_CHANNEL),
    surface("asphalt", 0.013, 0.0145, 0.016, OPEN_CHANNEL),
    surface("PVC", 0.009, 0.010, 0.011, "from memory"),
    surface("sheet-metal gutter", 0.010, 0.0115, 0.013, PRACTICE),
    surface("single-ply membrane", 0.010, 0.0115, 0.013, PRACTICE),
    surface("gravel-surfaced roof", 0.017, 0.021, 0.025, PRACTICE),
];

/// Velocity of uniform flow, V = R^(2/3) S^(1/2) / n.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | R | `hydraulic_radius`, area / wetted perimeter | m | 0 or more |
/// | S | `slope` of the energy line | | 0 or more |
/// | n | `roughness` | s/m^(1/3) | above 0 |
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// Manning (1891); open-channel texts.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::manning, units::Length};
/// let velocity = manning::velocity(Length::from_m(0.2859), 0.005236, 0.03)?;
/// assert_eq!(format!("{velocity:.6}"), "1.046778"); // as the general-purpose library fluids 1.3.1 gives it
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn velocity(hydraulic_radius: Length, slope: f64, roughness: f64) -> Result<f64, FlowError> {
    let radius = zero_or_more("hydraulic radius", hydraulic_radius.m())?;
    let slope = zero_or_more("slope", slope)?;
    Ok(two_thirds(radius) * slope.sqrt() / above_zero("roughness", roughness)?)
}

/// Flow of uniform flow through a section, Q = A R^(2/3) S^(1/2) / n.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | A | `area` of the water | m2 | 0 or more |
/// | R, S, n | as [`velocity`] | | |
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// As [`velocity`].
pub fn flow(area: Area, hydraulic_radius: Length, slope: f64, roughness: f64) -> Result<Flow, FlowError> {
    let area = zero_or_more("area", area.m2())?;
    Ok(Flow::from_m3_per_s(area * velocity(hydraulic_radius, slope, roughness)?))
}

/// Velocity of uniform flow, V = C sqrt(R S).
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | R | `hydraulic_radius` | m | 0 or more |
/// | S | `slope` of the energy line | | 0 or more |
/// | C | `chezy` | m^0.5/s | above 0 |
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// Chezy; open-channel texts.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::manning, units::Length};
/// let velocity = manning::chezy_velocity(Length::from_m(0.0254), 0.01, 60.0)?;
/// assert_eq!(format!("{velocity:.6}"), "0.956243"); // as the general-purpose library fluids 1.3.1 gives it
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn chezy_velocity(hydraulic_radius: Length, slope: f64, chezy: f64) -> Result<f64, FlowError> {
    let radius = zero_or_more("hydraulic radius", hydraulic_radius.m())?;
    Ok(above_zero("Chezy coefficient", chezy)? * (radius * zero_or_more("slope", slope)?).sqrt())
}

/// Chezy's coefficient for a roughness, C = R^(1/6) / n; with C for n it gives n back.
///
/// # Errors
/// [`FlowError::Unusable`] for an argument that is not above zero.
///
/// # Source
/// Both velocities set equal.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::manning, units::Length};
/// let chezy = manning::chezy_from_roughness(Length::from_m(5.0), 0.05)?;
/// assert_eq!(format!("{chezy:.4}"), "26.1532"); // as the general-purpose library fluids 1.3.1 gives it
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn chezy_from_roughness(hydraulic_radius: Length, roughness: f64) -> Result<f64, FlowError> {
    let radius = positive("hydraulic radius", hydraulic_radius)?;
    Ok(radius.sqrt().cbrt() / above_zero("roughness", roughness)?)
}

/// Depth of uniform flow in a rectangle.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | Q | `flow` | m3/s | 0 or more |
/// | b | `width` | m | above 0 |
/// | S | `slope` of the floor | | above 0 |
/// | n | `roughness` | s/m^(1/3) | above 0 |
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// Manning's equation solved for the depth.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::manning, units::{Flow, Length}};
/// let depth = manning::normal_depth_rectangle(Flow::from_m3_per_s(0.02), Length::from_m(0.3), 0.01, 0.012)?;
/// assert_eq!(format!("{:.5}", depth.m()), "0.06357");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn normal_depth_rectangle(flow: Flow, width: Length, slope: f64, roughness: f64) -> Result<Length, FlowError> {
    let (flow, b) = (zero_or_more("flow", flow.m3_per_s())?, positive("width", width)?);
    let conveyance = flow * above_zero("roughness", roughness)? / above_zero("slope", slope)?.sqrt();
    let depth =
        solve::bracketed_from(0.0, b, |depth| b * depth * two_thirds(b * depth / (b + 2.0 * depth)) - conveyance);
    Ok(Length::from_m(depth))
}

/// Depth of uniform flow in a pipe that runs part full.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | Q | `flow` | m3/s | [`limits::PIPE_FLOW`]: at most that of the full bore |
/// | D | `diameter`, inside | m | above 0 |
/// | S | `slope` | | above 0 |
/// | n | `roughness` | s/m^(1/3) | above 0 |
///
/// # Errors
/// [`FlowError::OutsideRange`] for a flow above that of the full bore; [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// Manning's equation solved for the angle of the surface.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::manning, units::{Flow, Length}};
/// let depth = manning::normal_depth_circle(Flow::from_m3_per_s(0.005), Length::from_m(0.15), 0.01, 0.010)?;
/// assert_eq!(format!("{:.5}", depth.m()), "0.05139");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn normal_depth_circle(flow: Flow, diameter: Length, slope: f64, roughness: f64) -> Result<Length, FlowError> {
    /// Where a pipe carries most, just under full.
    const FULLEST: f64 = 5.27;
    let full = storm_drain(diameter, slope, roughness)?;
    let carried = zero_or_more("flow", flow.m3_per_s())? / full.m3_per_s();
    limits::PIPE_FLOW.check(carried)?;
    let share = |angle: f64| {
        let section = Segment::at(angle);
        let radius = if section.wetted > 0.0 { section.area / section.wetted } else { 0.0 };
        section.area * two_thirds(radius) / (std::f64::consts::FRAC_PI_4 * two_thirds(0.25))
    };
    let angle = solve::bracketed(0.0, FULLEST, |angle| share(angle) - carried);
    Ok(Length::from_m(Segment::at(angle).depth * diameter.m()))
}

/// What a pipe carries with its bore just full and its slope as the only fall.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | D | `diameter`, inside | m | above 0 |
/// | S | `slope` | | above 0 |
/// | n | `roughness` | s/m^(1/3) | above 0 |
///
/// The horizontal columns of the International Plumbing Code 2018 imply n near 0.010 on the nominal size; tables before it
/// imply about 0.015, a third less flow. Its entries for 2, 5 and 15 in follow no n: take those from the table.
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// Manning's equation; the n above are inferred from the tables.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::manning, units::Length};
/// let flow = manning::storm_drain(Length::inches(4.0), 0.125 / 12.0, 0.010)?;
/// assert_eq!(format!("{:.0}", flow.to_gpm()), "113"); // 115 in the 2018 table
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn storm_drain(diameter: Length, slope: f64, roughness: f64) -> Result<Flow, FlowError> {
    let d = positive("diameter", diameter)?;
    let per_diameter = std::f64::consts::FRAC_PI_4 * two_thirds(0.25);
    let root = above_zero("slope", slope)?.sqrt();
    Ok(Flow::from_m3_per_s(per_diameter * eight_thirds(d) * root / above_zero("roughness", roughness)?))
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    #[test]
    fn every_surface_stands_between_its_ends() {
        assert!(SURFACES.iter().all(|it| 0.0 < it.least && it.least <= it.usual && it.usual <= it.most));
    }

    #[test]
    fn normal_depth_leads_back_to_the_flow() {
        let (b, depth) = (0.3, normal_depth_rectangle(Flow::from_m3_per_s(0.02), Length::from_m(0.3), 0.01, 0.012));
        let depth = depth.unwrap().m();
        let radius = Length::from_m(b * depth / (b + 2.0 * depth));
        assert_relative_eq!(
            flow(Area::from_m2(b * depth), radius, 0.01, 0.012).unwrap().m3_per_s(),
            0.02,
            max_relative = 1e-12
        );
    }

    /// A pipe half full carries half of what it carries full: the hydraulic radius is the same.
    #[test]
    fn half_full_is_half_the_flow() {
        let d = Length::from_m(0.2);
        let half = storm_drain(d, 0.01, 0.012).unwrap() * 0.5;
        assert_relative_eq!(normal_depth_circle(half, d, 0.01, 0.012).unwrap().m(), 0.1, max_relative = 1e-12);
    }

    #[test]
    fn more_than_a_full_bore_has_no_depth() {
        let d = Length::from_m(0.2);
        let full = storm_drain(d, 0.01, 0.012).unwrap();
        assert!(normal_depth_circle(full * 1.01, d, 0.01, 0.012).is_err());
        assert!(normal_depth_circle(full, d, 0.0, 0.012).is_err());
        assert_eq!(normal_depth_circle(Flow::ZERO, d, 0.01, 0.012), Ok(Length::ZERO));
    }
}
