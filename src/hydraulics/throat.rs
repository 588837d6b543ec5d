//! A short level channel through a thick wall, with a free fall at its outer end.
//!
//! Water loses something at the entrance, rides down a drawn-down surface over the length of the wall and leaves at critical
//! depth. Once it is critical inside, the length of the wall matters little and the entrance edge matters more. The opening
//! has no top here; a drowned top belongs to [`super::orifice`]. Open gutters with inflow along their length belong to
//! [`super::gutter`].

use crate::units::{Flow, Length};

use super::critical::rectangle_depth;
use super::powers::{four_thirds, three_halves};
use super::{FlowError, GRAVITY, not_negative, positive, solve, zero_or_more};

/// Entrance loss in velocity heads, square edge. Source: FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), Example 8-7.
pub const SQUARE_EDGE_LOSS: f64 = 0.5;
/// Entrance loss in velocity heads, rounded edge. From memory.
pub const ROUNDED_EDGE_LOSS: f64 = 0.2;
/// Entrance loss in velocity heads, thin sleeve projecting into the pond. From memory, 0.8 to 0.9.
pub const PROJECTING_LOSS: f64 = 0.9;

/// A rectangular throat: head from flow, and flow from head.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | b | `width`, clear opening | m | above 0 |
/// | L | `length` along the flow: the wall | m | 0 or more |
/// | n | `roughness`, Manning | s/m^(1/3) | 0 or more |
/// | ke | `entrance_loss` in velocity heads | | 0 or more |
/// | y1 | depth behind the entrance: where the profile dx = (1 - Fr^2) / Sf dy from yc has come to L | m | from yc |
/// | H | head of the pond over the floor, y1 + (1 + ke) V1^2 / 2g | m | 0 or more |
///
/// Without length and loss it is critical depth, Q = 1.7046 b H^1.5.
///
/// # Source
/// Energy and Manning friction along a level rectangle; loss factors as at [`SQUARE_EDGE_LOSS`] and its neighbours.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::throat::{self, Throat}, units::{Flow, Length}};
/// let wall = Throat::new(Length::inches(12.0), Length::inches(12.0), 0.012, throat::SQUARE_EDGE_LOSS)?;
/// let head = wall.head(Flow::gpm(180.0))?;
/// assert_eq!(format!("{:.2}", head.to_inches()), "3.52");
/// assert_eq!(format!("{:.3}", wall.flow(head)?.to_gpm()), "180.000");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Throat {
    width: f64,
    length: f64,
    roughness: f64,
    entrance_loss: f64,
}

impl Throat {
    /// A throat of these dimensions.
    ///
    /// # Errors
    /// [`FlowError::Unusable`] for an argument outside its range.
    pub fn new(width: Length, length: Length, roughness: f64, entrance_loss: f64) -> Result<Self, FlowError> {
        Ok(Self {
            width: positive("width", width)?,
            length: not_negative("length", length)?,
            roughness: zero_or_more("roughness", roughness)?,
            entrance_loss: zero_or_more("entrance loss", entrance_loss)?,
        })
    }

    /// Depth of water behind the entrance.
    ///
    /// # Errors
    /// [`FlowError::Unusable`] for a flow below zero.
    pub fn inlet_depth(&self, flow: Flow) -> Result<Length, FlowError> {
        let critical = self.critical_depth(flow)?;
        Ok(Length::from_m(critical * self.rise(|_| critical)))
    }

    /// Head of the pond over the floor of the throat.
    ///
    /// # Errors
    /// [`FlowError::Unusable`] for a flow below zero.
    pub fn head(&self, flow: Flow) -> Result<Length, FlowError> {
        let critical = self.critical_depth(flow)?;
        Ok(Length::from_m(critical * self.head_over_critical(self.rise(|_| critical))))
    }

    /// Flow under a head of the pond.
    ///
    /// # Errors
    /// [`FlowError::Unusable`] for a head below zero.
    pub fn flow(&self, head: Length) -> Result<Flow, FlowError> {
        let head = not_negative("head", head)?;
        // A rise over critical depth gives the critical depth that belongs to this head, hence one root, not two.
        let critical = |rise: f64| head / self.head_over_critical(rise);
        let depth = critical(self.rise(critical));
        Ok(Flow::from_m3_per_s(self.width * GRAVITY.sqrt() * three_halves(depth)))
    }

    fn critical_depth(&self, flow: Flow) -> Result<f64, FlowError> {
        Ok(rectangle_depth(zero_or_more("flow", flow.m3_per_s())? / self.width))
    }

    /// H / yc when the depth behind the entrance is `rise` critical depths.
    fn head_over_critical(&self, rise: f64) -> f64 {
        rise + (1.0 + self.entrance_loss) / (2.0 * rise * rise)
    }

    /// Depth behind the entrance in critical depths, where the critical depth may depend on it.
    fn rise(&self, critical: impl Fn(f64) -> f64) -> f64 {
        if self.length == 0.0 || self.roughness == 0.0 || critical(1.0) == 0.0 {
            return 1.0;
        }
        solve::bracketed_from(1.0, 2.0, |rise| self.length_to(rise, critical(rise)) - self.length)
    }

    /// Length over which the surface falls from `rise` critical depths to one.
    fn length_to(&self, rise: f64, critical: f64) -> f64 {
        // Sf = n^2 q^2 / (y^2 R^(4/3)) and q^2 = g yc^3, written in y / yc.
        let integral = solve::integral(1.0, rise, |depth| {
            let radius = depth / (1.0 + 2.0 * depth * critical / self.width);
            (1.0 - 1.0 / (depth * depth * depth)) * depth * depth * four_thirds(radius)
        });
        four_thirds(critical) * integral / (self.roughness * self.roughness * GRAVITY)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    fn throat(length: f64, entrance_loss: f64) -> Throat {
        Throat::new(Length::from_m(0.3), Length::from_m(length), 0.012, entrance_loss).unwrap()
    }

    #[test]
    fn flow_and_head_lead_back_to_each_other() {
        for length in [0.0, 0.01, 0.3, 3.0] {
            for head in [1e-6, 1e-3, 0.03, 0.2, 2.0] {
                let throat = throat(length, 0.5);
                let flow = throat.flow(Length::from_m(head)).unwrap();
                assert_relative_eq!(throat.head(flow).unwrap().m(), head, max_relative = 1e-9);
            }
        }
    }

    /// (1 + 1/2)^1.5 = 1.8371 and (1 + 0.75)^1.5 = 2.3150: 1.7046 x 1.8371 / 2.3150 = 1.3527, by hand.
    #[test]
    fn a_square_edge_alone_costs_a_fifth_of_the_flow() {
        let one_metre = throat(0.0, 0.5).flow(Length::from_m(1.0)).unwrap().m3_per_s() / 0.3;
        assert_relative_eq!(one_metre, 1.352_7, max_relative = 1e-4);
    }

    #[test]
    fn nothing_flows_without_head() {
        assert_eq!(throat(0.3, 0.5).flow(Length::ZERO), Ok(Flow::ZERO));
        assert_eq!(throat(0.3, 0.5).head(Flow::ZERO), Ok(Length::ZERO));
        assert!(throat(0.3, 0.5).flow(Length::from_m(f64::INFINITY)).is_err());
        assert!(Throat::new(Length::ZERO, Length::ZERO, 0.012, 0.5).is_err());
    }
}
