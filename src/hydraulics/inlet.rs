//! Inlet control of boxes and pipes, after FHWA HDS-5: what the entrance lets in, whatever the barrel behind could carry.
//!
//! The flow enters as x = Q / (A sqrt(D)) in feet and cubic feet a second, A and D being the full area and height. Up to
//! x = 3.5 the entrance works as a weir, from x = 4 as an orifice; between, the source has a tangent curve drawn by hand.
//! A barrel through a wall is level, so the slope term of the source is zero and left out. Headwater is measured up from
//! the invert.
//!
//! Two forms of the weir part are published. Form 1 adds the critical energy: HW/D = Hc/D + K x^M. Form 2 leaves it out:
//! HW/D = K x^M. The orifice part is HW/D = c x^2 + Y.

use crate::units::{Flow, Length, METRES_PER_FOOT};

use super::powers::{fitted, two_thirds};
use super::section::{FULL, Segment};
use super::{FlowError, GRAVITY, not_negative, positive, solve, zero_or_more};

/// Greatest x of the weir part. Source: FHWA-NHI-01-020 (HDS-5, 2nd ed., 2001), from memory.
pub const WEIR_TO: f64 = 3.5;
/// Least x of the orifice part. Source: as [`WEIR_TO`].
pub const ORIFICE_FROM: f64 = 4.0;

/// Which form the weir part of an edge has.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Form {
    /// HW/D = Hc/D + K x^M.
    One,
    /// HW/D = K x^M.
    Two,
}

/// A kind of entrance and its constants.
#[derive(Clone, Copy, Debug, PartialEq)]
#[non_exhaustive]
pub struct Edge {
    /// The entrance, in the words of the source.
    pub name: &'static str,
    /// The form of its weir part.
    pub form: Form,
    /// Factor of the weir part.
    pub k: f64,
    /// Exponent of the weir part.
    pub m: f64,
    /// Factor of the orifice part.
    pub c: f64,
    /// Constant of the orifice part.
    pub y: f64,
}

const fn edge(name: &'static str, form: Form, k: f64, m: f64, c: f64, y: f64) -> Edge {
    Edge { name, form, k, m, c, y }
}

/// Entrance of a pipe.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct PipeEdge(Edge);

/// Entrance of a box.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct BoxEdge(Edge);

impl PipeEdge {
    /// Its name and constants.
    pub const fn constants(&self) -> &Edge {
        &self.0
    }
}

impl BoxEdge {
    /// Its name and constants.
    pub const fn constants(&self) -> &Edge {
        &self.0
    }
}

/// A hole cut square through a wall and lined with a smooth sleeve: the usual pipe scupper.
pub static PIPE_SQUARE: PipeEdge = PIPE_EDGES[0];
/// A thin sleeve that sticks out of the wall on the roof side.
pub static PIPE_PROJECTING: PipeEdge = PIPE_EDGES[5];
/// A rectangular hole cut square through a wall: the usual scupper.
pub static BOX_SQUARE: BoxEdge = BOX_EDGES[1];

/// Entrances of pipes. Source: FHWA-NHI-01-020 (HDS-5, 2nd ed., 2001), appendix A, Table 9.
pub const PIPE_EDGES: [PipeEdge; 8] = [
    PipeEdge(edge("concrete, square edge with headwall", Form::One, 0.0098, 2.0, 0.0398, 0.67)),
    PipeEdge(edge("concrete, groove end with headwall", Form::One, 0.0018, 2.0, 0.0292, 0.74)),
    PipeEdge(edge("concrete, groove end projecting", Form::One, 0.0045, 2.0, 0.0317, 0.69)),
    PipeEdge(edge("corrugated metal, headwall", Form::One, 0.0078, 2.0, 0.0379, 0.69)),
    PipeEdge(edge("corrugated metal, mitered to slope", Form::One, 0.0210, 1.33, 0.0463, 0.75)),
    PipeEdge(edge("corrugated metal, projecting", Form::One, 0.0340, 1.50, 0.0553, 0.54)),
    PipeEdge(edge("beveled ring, 45 deg", Form::One, 0.0018, 2.50, 0.0300, 0.74)),
    PipeEdge(edge("beveled ring, 33.7 deg", Form::One, 0.0018, 2.50, 0.0243, 0.83)),
];

/// Entrances of boxes. Source: as [`PIPE_EDGES`].
pub const BOX_EDGES: [BoxEdge; 11] = [
    BoxEdge(edge("30 to 75 deg wingwall flares", Form::One, 0.026, 1.0, 0.0347, 0.81)),
    BoxEdge(edge("90 deg headwall or 15 deg wingwall flares, square edge", Form::One, 0.061, 0.75, 0.0400, 0.80)),
    BoxEdge(edge("0 deg wingwall flares, sides extended", Form::One, 0.061, 0.75, 0.0423, 0.82)),
    BoxEdge(edge("45 deg wingwall flare, top bevel 0.043 D", Form::Two, 0.510, 0.667, 0.0309, 0.80)),
    BoxEdge(edge("18 to 33.7 deg wingwall flare, top bevel 0.083 D", Form::Two, 0.486, 0.667, 0.0249, 0.83)),
    BoxEdge(edge("90 deg headwall with 3/4 in chamfers", Form::Two, 0.515, 0.667, 0.0375, 0.79)),
    BoxEdge(edge("90 deg headwall with 45 deg bevels", Form::Two, 0.495, 0.667, 0.0314, 0.82)),
    BoxEdge(edge("90 deg headwall with 33.7 deg bevels", Form::Two, 0.486, 0.667, 0.0252, 0.865)),
    BoxEdge(edge("corrugated metal, 90 deg headwall", Form::One, 0.0083, 2.0, 0.0379, 0.69)),
    BoxEdge(edge("corrugated metal, thick wall projecting", Form::One, 0.0145, 1.75, 0.0419, 0.64)),
    BoxEdge(edge("corrugated metal, thin wall projecting", Form::One, 0.0340, 1.50, 0.0496, 0.57)),
];

/// How the gap between x = 3.5 and x = 4 is closed.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Transition {
    /// A curve tangent to both parts, as the source draws it.
    #[default]
    Curve,
    /// A straight line.
    Line,
}

#[derive(Clone, Copy, Debug, PartialEq)]
enum Shape {
    Pipe,
    Box,
}

/// An entrance with its dimensions: headwater from flow, and flow from headwater.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | D | `height` or `diameter`, full | m | above 0 |
/// | A | full area, from `width` and `height` or `diameter` | m2 | above 0 |
/// | K, M, c, Y | `edge` | | [`PIPE_EDGES`], [`BOX_EDGES`] |
/// | | `transition` | | |
/// | Q | `flow` | m3/s | 0 or more |
/// | HW | `headwater` over the invert | m | 0 or more |
///
/// Both ways are continuous and never fall.
///
/// # Source
/// FHWA-NHI-01-020 (HDS-5, 2nd ed., 2001), Table 9 for the constants; the equations from memory.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::inlet::{self, Inlet, Transition}, units::{Flow, Length}};
/// let scupper = Inlet::of_box(Length::inches(12.0), Length::inches(6.0), &inlet::BOX_SQUARE, Transition::Curve)?;
/// let headwater = scupper.headwater(Flow::gpm(180.0))?;
/// assert_eq!(format!("{:.2}", headwater.to_inches()), "3.48");
/// assert_eq!(format!("{:.3}", scupper.flow(headwater)?.to_gpm()), "180.000");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Inlet {
    shape: Shape,
    height: f64,
    /// The flow at x = 1, m3/s.
    unit_flow: f64,
    edge: Edge,
    transition: Transition,
}

impl Inlet {
    /// The entrance of a box.
    ///
    /// # Errors
    /// [`FlowError::Unusable`] for a dimension that is not above zero.
    pub fn of_box(width: Length, height: Length, edge: &BoxEdge, transition: Transition) -> Result<Self, FlowError> {
        let (b, d) = (positive("width", width)?, positive("height", height)?);
        Ok(Self { shape: Shape::Box, height: d, unit_flow: unit_flow(b * d, d), edge: edge.0, transition })
    }

    /// The entrance of a pipe.
    ///
    /// # Errors
    /// [`FlowError::Unusable`] for a diameter that is not above zero.
    pub fn of_pipe(diameter: Length, edge: &PipeEdge, transition: Transition) -> Result<Self, FlowError> {
        let d = positive("diameter", diameter)?;
        let area = std::f64::consts::FRAC_PI_4 * d * d;
        Ok(Self { shape: Shape::Pipe, height: d, unit_flow: unit_flow(area, d), edge: edge.0, transition })
    }

    /// Headwater by the weir part alone; it holds up to x = [`WEIR_TO`].
    ///
    /// # Errors
    /// [`FlowError::Unusable`] for a flow below zero.
    pub fn unsubmerged(&self, flow: Flow) -> Result<Length, FlowError> {
        Ok(Length::from_m(self.weir_part(self.x(flow)?).0 * self.height))
    }

    /// Headwater by the orifice part alone; it holds from x = [`ORIFICE_FROM`].
    ///
    /// # Errors
    /// [`FlowError::Unusable`] for a flow below zero.
    pub fn submerged(&self, flow: Flow) -> Result<Length, FlowError> {
        Ok(Length::from_m(self.orifice_part(self.x(flow)?) * self.height))
    }

    /// Headwater for a flow.
    ///
    /// # Errors
    /// [`FlowError::Unusable`] for a flow below zero.
    pub fn headwater(&self, flow: Flow) -> Result<Length, FlowError> {
        let x = self.x(flow)?;
        let ratio = if x <= WEIR_TO {
            self.weir_part(x).0
        } else if x < ORIFICE_FROM {
            self.gap().at(x)
        } else {
            self.orifice_part(x)
        };
        Ok(Length::from_m(ratio * self.height))
    }

    /// Flow under a headwater.
    ///
    /// # Errors
    /// [`FlowError::Unusable`] for a headwater below zero.
    pub fn flow(&self, headwater: Length) -> Result<Flow, FlowError> {
        let ratio = not_negative("headwater", headwater)? / self.height;
        let gap = self.gap();
        let x = if ratio <= gap.low {
            self.weir_part_inverse(ratio)
        } else if ratio < gap.high {
            solve::bracketed(WEIR_TO, ORIFICE_FROM, |x| gap.at(x) - ratio)
        } else {
            ((ratio - self.edge.y) / self.edge.c).sqrt()
        };
        Ok(Flow::from_m3_per_s(x * self.unit_flow))
    }

    /// The x of a flow, Ku Q / (A D^0.5), by which the parts of the form are told apart.
    pub fn unit_ratio(&self, flow: Flow) -> f64 {
        flow.m3_per_s() / self.unit_flow
    }

    fn x(&self, flow: Flow) -> Result<f64, FlowError> {
        Ok(zero_or_more("flow", flow.m3_per_s())? / self.unit_flow)
    }

    /// HW/D of the weir part and its slope over x. Along critical depth, energy grows with the flow by Q / (g A^2).
    fn weir_part(&self, x: f64) -> (f64, f64) {
        let Edge { form, k, m, .. } = self.edge;
        let (loss, loss_slope) = (k * fitted(x, m), k * m * fitted(x, m - 1.0));
        let (energy, energy_slope) = match (form, self.shape) {
            (Form::Two, _) => (0.0, 0.0),
            (Form::One, Shape::Box) => {
                let energy = 1.5 * two_thirds(x) * (METRES_PER_FOOT / GRAVITY).cbrt();
                (energy, 2.0 / 3.0 * energy / x)
            }
            (Form::One, Shape::Pipe) => {
                let scaled = x * scaled_flow_at_one();
                let section =
                    Segment::at(solve::bracketed(0.0, FULL, |angle| Segment::at(angle).critical_flow() - scaled));
                (section.critical_energy(), scaled / (section.area * section.area) * scaled_flow_at_one())
            }
        };
        (energy + loss, energy_slope + loss_slope)
    }

    /// The x at which the weir part gives a ratio HW/D.
    fn weir_part_inverse(&self, ratio: f64) -> f64 {
        let Edge { form, k, m, .. } = self.edge;
        match (form, self.shape) {
            (Form::Two, _) => fitted(ratio / k, 1.0 / m),
            (Form::One, Shape::Box) => solve::bracketed(0.0, WEIR_TO, |x| self.weir_part(x).0 - ratio),
            (Form::One, Shape::Pipe) => {
                // By the angle of the critical section, from which x follows without another root.
                let x = |angle: f64| Segment::at(angle).critical_flow() / scaled_flow_at_one();
                let angle = solve::bracketed(0.0, FULL, |angle| {
                    Segment::at(angle).critical_energy() + k * fitted(x(angle), m) - ratio
                });
                x(angle)
            }
        }
    }

    fn orifice_part(&self, x: f64) -> f64 {
        self.edge.c * x * x + self.edge.y
    }

    fn gap(&self) -> Gap {
        let (low, low_slope) = self.weir_part(WEIR_TO);
        let high = self.orifice_part(ORIFICE_FROM);
        let high_slope = 2.0 * self.edge.c * ORIFICE_FROM;
        let chord = (high - low) / (ORIFICE_FROM - WEIR_TO);
        match self.transition {
            Transition::Line => Gap { low, high, low_slope: chord, high_slope: chord },
            Transition::Curve => {
                // A cubic turns back unless its end slopes, over the chord, stay in a circle of radius 3 (Fritsch and
                // Carlson, 1980). Thin projecting walls need that: their two parts nearly meet.
                let steepness = (low_slope * low_slope + high_slope * high_slope).sqrt() / chord;
                let tamed = (3.0 / steepness).min(1.0);
                Gap { low, high, low_slope: low_slope * tamed, high_slope: high_slope * tamed }
            }
        }
    }
}

/// The cubic between the two parts: its ends and its slopes there.
struct Gap {
    low: f64,
    high: f64,
    low_slope: f64,
    high_slope: f64,
}

impl Gap {
    fn at(&self, x: f64) -> f64 {
        let width = ORIFICE_FROM - WEIR_TO;
        let t = (x - WEIR_TO) / width;
        let rest = 1.0 - t;
        self.low * rest * rest * (1.0 + 2.0 * t)
            + self.high * t * t * (3.0 - 2.0 * t)
            + width * t * rest * (self.low_slope * rest - self.high_slope * t)
    }
}

/// The flow at x = 1 in m3/s: A sqrt(D) with the root of a foot, which x takes from its unit.
fn unit_flow(area: f64, height: f64) -> f64 {
    area * height.sqrt() * METRES_PER_FOOT.sqrt()
}

/// Q / sqrt(g D^5) of a pipe at x = 1.
fn scaled_flow_at_one() -> f64 {
    std::f64::consts::FRAC_PI_4 * (METRES_PER_FOOT / GRAVITY).sqrt()
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    fn every_inlet() -> impl Iterator<Item = Inlet> {
        [Transition::Curve, Transition::Line].into_iter().flat_map(|transition| {
            let boxes = BOX_EDGES
                .iter()
                .map(move |edge| Inlet::of_box(Length::inches(24.0), Length::inches(6.0), edge, transition).unwrap());
            let pipes =
                PIPE_EDGES.iter().map(move |edge| Inlet::of_pipe(Length::inches(8.0), edge, transition).unwrap());
            boxes.chain(pipes)
        })
    }

    #[test]
    fn every_edge_rises_throughout_and_leads_back() {
        for inlet in every_inlet() {
            let mut last = Length::ZERO;
            for step in 0..=120 {
                let flow = Flow::from_m3_per_s(inlet.unit_flow * f64::from(step) / 20.0);
                let headwater = inlet.headwater(flow).unwrap();
                assert!(step == 0 || headwater > last, "{inlet:?} at step {step}");
                assert_relative_eq!(inlet.flow(headwater).unwrap(), flow, max_relative = 1e-9);
                last = headwater;
            }
        }
    }

    #[test]
    fn the_slope_of_the_weir_part_is_its_slope() {
        for inlet in every_inlet() {
            let rise = inlet.weir_part(WEIR_TO + 1e-4).0 - inlet.weir_part(WEIR_TO - 1e-4).0;
            assert_relative_eq!(inlet.weir_part(WEIR_TO).1, rise / 2e-4, max_relative = 1e-5);
        }
    }

    #[test]
    fn no_headwater_lets_nothing_in() {
        for inlet in every_inlet() {
            assert_eq!(inlet.flow(Length::ZERO), Ok(Flow::ZERO));
            assert_eq!(inlet.headwater(Flow::ZERO), Ok(Length::ZERO));
            assert!(inlet.flow(Length::from_m(-0.1)).is_err());
        }
    }
}
