//! The part of a circle that is under water, by the angle its surface spans at the centre, for a diameter of 1.

use super::GRAVITY;
use super::powers::five_halves;
use super::solve;

/// The angle of a full circle.
pub(super) const FULL: f64 = std::f64::consts::TAU;

/// Below this angle the area is taken from its series: the angle less its sine would lose most of its digits.
const SMALL_ANGLE: f64 = 1e-2;

/// Water in the bottom of a circle of diameter 1.
pub(super) struct Segment {
    pub(super) depth: f64,
    pub(super) area: f64,
    pub(super) surface: f64,
    pub(super) wetted: f64,
}

impl Segment {
    pub(super) fn at(angle: f64) -> Self {
        let quarter = (angle / 4.0).sin();
        let less_sine = if angle < SMALL_ANGLE {
            let square = angle * angle;
            angle * square / 6.0 * (1.0 - square / 20.0 * (1.0 - square / 42.0))
        } else {
            angle - angle.sin()
        };
        Self {
            // (1 - cos(angle/2)) / 2, written so that a shallow depth keeps its digits.
            depth: quarter * quarter,
            area: less_sine / 8.0,
            surface: (angle / 2.0).sin().max(0.0),
            wetted: angle / 2.0,
        }
    }

    /// Q / sqrt(g D^5) at which this depth is critical; none of it at no depth, no end to it at a full circle.
    pub(super) fn critical_flow(&self) -> f64 {
        if self.area > 0.0 { self.area * self.mean_depth().sqrt() } else { 0.0 }
    }

    /// Depth and velocity head, over D, when this depth is critical.
    pub(super) fn critical_energy(&self) -> f64 {
        if self.area > 0.0 { self.depth + self.mean_depth() / 2.0 } else { 0.0 }
    }

    /// Area over surface width.
    fn mean_depth(&self) -> f64 {
        self.area / self.surface.max(f64::MIN_POSITIVE)
    }
}

/// The critical section for a flow.
pub(super) fn critical_at_flow(flow: f64, diameter: f64) -> Segment {
    let scaled = flow / (GRAVITY.sqrt() * five_halves(diameter));
    Segment::at(solve::bracketed(0.0, FULL, |angle| Segment::at(angle).critical_flow() - scaled))
}

/// The critical section whose energy is `head`.
pub(super) fn critical_at_energy(head: f64, diameter: f64) -> Segment {
    let scaled = head / diameter;
    Segment::at(solve::bracketed(0.0, FULL, |angle| Segment::at(angle).critical_energy() - scaled))
}
