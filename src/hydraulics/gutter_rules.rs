//! Design rules for gutters that stand for a calculation of the water surface: EN 12056-3 and the design width of Beij.
//!
//! Where the surface itself is wanted, [`super::gutter`] has it.

use crate::units::{Area, Flow, Intensity, Length, METRES_PER_FOOT};

use super::powers::{fitted, five_quarters};
use super::{FlowError, above_zero, limits, not_negative, positive, solve, zero_or_more};

/// Share of the nominal capacity that a design may use. Source: EN 12056-3, from memory.
pub const EN_12056_DESIGN_SHARE: f64 = 0.9;

/// A level gutter of EN 12056-3.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Shape {
    /// Half-round eaves gutter.
    HalfRoundEaves,
    /// Rectangular eaves gutter.
    RectangularEaves,
    /// Valley or parapet gutter.
    ValleyOrParapet,
}

impl Shape {
    /// The constant c of Q = c A^1.25, litres a second and square millimetres.
    const fn constant(self) -> f64 {
        match self {
            Self::HalfRoundEaves => 2.78e-5,
            Self::RectangularEaves => 3.48e-5,
            Self::ValleyOrParapet => 3.89e-5,
        }
    }
}

/// Length over design depth, and the factor on the capacity of a level gutter. Source: EN 12056-3, from memory, with less
/// confidence than its equations.
const LENGTH_FACTORS: [(f64, f64); 9] = [
    (50.0, 1.00),
    (75.0, 0.97),
    (100.0, 0.93),
    (150.0, 0.86),
    (200.0, 0.80),
    (250.0, 0.77),
    (300.0, 0.73),
    (400.0, 0.67),
    (500.0, 0.60),
];

/// Nominal capacity of a short level gutter with a free outlet, Q = c A^1.25.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | A | `area` of the gutter under its design depth | mm2 | 0 or more |
/// | c | `shape` | | 2.78e-5, 3.48e-5, 3.89e-5 |
/// | Q | result | l/s | |
///
/// Times [`EN_12056_DESIGN_SHARE`], [`en_12056_length_factor`] and factors for depth and shape that are not here. Both eaves
/// constants are 0.80 of what a frictionless level trough carries.
///
/// # Errors
/// [`FlowError::Unusable`] for an area below zero.
///
/// # Source
/// EN 12056-3, from memory.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::gutter_rules::{self, Shape}, units::Area};
/// let flow = gutter_rules::en_12056_nominal(Area::from_m2(0.01), Shape::HalfRoundEaves)?;
/// assert_eq!(format!("{:.2}", flow.m3_per_s() * 1000.0), "2.78");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn en_12056_nominal(area: Area, shape: Shape) -> Result<Flow, FlowError> {
    let square_mm = zero_or_more("area", area.m2())? * 1e6;
    Ok(Flow::from_m3_per_s(shape.constant() * five_quarters(square_mm) / 1000.0))
}

/// Factor on the capacity of a long level gutter, straight between the tabulated points; 1 up to 50 design depths.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | L | `length` from dead end to outlet | m | [`limits::EN_GUTTER_LENGTH`]: L / W at most 500 |
/// | W | `design_depth` | m | above 0 |
///
/// # Errors
/// [`FlowError::OutsideRange`] for a longer gutter; [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// EN 12056-3, from memory, with less confidence than its equations.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::gutter_rules, units::Length};
/// let factor = gutter_rules::en_12056_length_factor(Length::from_m(12.0), Length::from_m(0.1))?;
/// assert_eq!(format!("{factor:.3}"), "0.902"); // between 0.93 at 100 and 0.86 at 150
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn en_12056_length_factor(length: Length, design_depth: Length) -> Result<f64, FlowError> {
    let ratio = not_negative("length", length)? / positive("design depth", design_depth)?;
    limits::EN_GUTTER_LENGTH.check(ratio)?;
    Ok(solve::between(&LENGTH_FACTORS, ratio))
}

/// Width a level gutter needs, b = 0.0106 m^(-4/7) L^(3/28) (i A)^(5/14).
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | m | `depth_over_width` | | above 0 |
/// | L | `length` | ft | above 0 |
/// | i | `rain` | in/h | 0 or more |
/// | A | `area` that sheds on it | ft2 | 0 or more |
/// | b | result | ft | |
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// Beij, National Bureau of Standards, RP 644 (1934), from memory; its tests were not seen.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::gutter_rules, units::{Area, Intensity, Length, METRES_PER_FOOT, METRES_PER_INCH}};
/// let width = gutter_rules::beij_width(
///     0.75,
///     Length::from_m(50.0 * METRES_PER_FOOT),
///     Intensity::from_m_per_s(2.5 * METRES_PER_INCH / 3600.0),
///     Area::from_m2(2500.0 * METRES_PER_FOOT * METRES_PER_FOOT),
/// )?;
/// assert_eq!(format!("{:.3}", width.to_inches()), "5.171");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn beij_width(depth_over_width: f64, length: Length, rain: Intensity, area: Area) -> Result<Length, FlowError> {
    let shape = above_zero("depth over width", depth_over_width)?;
    let feet = positive("length", length)? / METRES_PER_FOOT;
    let rain = Intensity::from_m_per_s(zero_or_more("rain", rain.m_per_s())?).to_inches_per_hour();
    let area = Area::from_m2(zero_or_more("area", area.m2())?).to_ft2();
    let width = 0.0106 * fitted(shape, -4.0 / 7.0) * fitted(feet, 3.0 / 28.0) * fitted(rain * area, 5.0 / 14.0);
    Ok(Length::from_m(width * METRES_PER_FOOT))
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    #[test]
    fn the_length_factor_starts_at_one_and_ends_at_500() {
        let factor = |ratio: f64| en_12056_length_factor(Length::from_m(ratio), Length::from_m(1.0));
        assert_relative_eq!(factor(0.0).unwrap(), 1.0);
        assert_relative_eq!(factor(50.0).unwrap(), 1.0);
        assert_relative_eq!(factor(500.0).unwrap(), 0.60);
        assert!(factor(501.0).is_err());
    }

    #[test]
    fn a_valley_takes_more_than_an_eaves_gutter() {
        let flow = |shape| en_12056_nominal(Area::from_m2(0.02), shape).unwrap();
        assert!(flow(Shape::HalfRoundEaves) < flow(Shape::RectangularEaves));
        assert!(flow(Shape::RectangularEaves) < flow(Shape::ValleyOrParapet));
        assert!(en_12056_nominal(Area::from_m2(-1.0), Shape::HalfRoundEaves).is_err());
    }
}
