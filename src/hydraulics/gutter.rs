//! A gutter or valley that takes in water evenly along its length and lets it out at one end.
//!
//! The water at the dead end must push all that enters towards the outlet, so it stands deeper there: 1.73 critical depths
//! in a level gutter without friction, and 3 to 7 % more with it. The frictionless form is therefore not on the safe side.
//! Inflow enters at right angles and brings no momentum along the gutter. Rectangular sections only. Design rules that stand
//! for this calculation are in [`super::gutter_rules`].

use crate::units::{Flow, Length};

use super::critical::rectangle_depth;
use super::powers::{four_thirds, three_halves, two_thirds};
use super::{FlowError, GRAVITY, limits, not_negative, positive, solve, zero_or_more};

/// Steps along the profile. Depths agree with the closed form to six digits.
const STEPS: u32 = 32;

/// What the gutter empties into.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Outlet {
    /// A free fall: critical depth at the outlet.
    Free,
    /// A pond or box whose level stands at this depth over the floor of the outlet; below critical depth it is a free fall.
    Pond(Length),
}

/// A point of a water surface.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Station {
    /// Distance from the dead end.
    pub distance: Length,
    /// Depth of water.
    pub depth: Length,
}

/// A rectangular gutter with even inflow: the water surface by the momentum equation, from the outlet up.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | b | `width` | m | above 0 |
/// | L | `length` | m | above 0 |
/// | S0 | `slope` of the floor towards the outlet | | 0 or more; with a free outlet [`limits::GUTTER_FALL`] |
/// | n | `roughness`, Manning | s/m^(1/3) | 0 or more |
/// | Q | `flow` at the outlet, Q x/L at the distance x | m3/s | 0 or more |
///
/// dy/dx = (S0 - Sf - 2 Q q / (g A^2)) / (1 - Fr^2) with q = Q/L. Steps are even in the root of the distance from the outlet,
/// in which the surface starts straight from critical depth.
///
/// # Source
/// National Bureau of Standards, RP 644 (1934); Open-Channel Hydraulics (1959), chapter 12.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::gutter::{Gutter, Outlet}, units::{Flow, Length}};
/// let gutter = Gutter::new(Length::from_m(0.3), Length::from_m(10.0), 0.0, 0.011)?;
/// let depth = gutter.dead_end_depth(Flow::from_m3_per_s(0.02), Outlet::Free)?;
/// assert_eq!(format!("{:.4}", depth.m()), "0.1377"); // 0.1330 without friction
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Gutter {
    width: f64,
    length: f64,
    slope: f64,
    roughness: f64,
}

impl Gutter {
    /// A gutter of these dimensions.
    ///
    /// # Errors
    /// [`FlowError::Unusable`] for an argument outside its range.
    pub fn new(width: Length, length: Length, slope: f64, roughness: f64) -> Result<Self, FlowError> {
        Ok(Self {
            width: positive("width", width)?,
            length: positive("length", length)?,
            slope: zero_or_more("slope", slope)?,
            roughness: zero_or_more("roughness", roughness)?,
        })
    }

    /// Depth at the dead end.
    ///
    /// # Errors
    /// [`FlowError::OutsideRange`] where the flow turns supercritical: with [`limits::GUTTER_FALL`] when the floor is too
    /// steep for critical depth to stay at the outlet, with [`limits::GUTTER_FROUDE`] when it happens further up, above a
    /// pond. [`FlowError::Unusable`] for a flow or pond below zero.
    pub fn dead_end_depth(&self, flow: Flow, outlet: Outlet) -> Result<Length, FlowError> {
        Ok(Length::from_m(self.surface(flow, outlet, |_, _| {})?))
    }

    /// The water surface from the dead end to the outlet; stations stand closer towards the outlet.
    ///
    /// # Errors
    /// As [`Gutter::dead_end_depth`].
    pub fn profile(&self, flow: Flow, outlet: Outlet) -> Result<Vec<Station>, FlowError> {
        let mut stations = Vec::with_capacity(STEPS as usize + 1);
        self.surface(flow, outlet, |from_outlet, depth| {
            let distance = Length::from_m((self.length - from_outlet).max(0.0));
            stations.push(Station { distance, depth: Length::from_m(depth) });
        })?;
        stations.reverse();
        Ok(stations)
    }

    /// Marches up from the outlet, visits each distance from it with its depth, and gives the depth at the dead end.
    ///
    /// From critical depth the surface rises as the root of the distance, so it is marched over the root s. Above a pond that
    /// stands a little higher the surface is, near the outlet, a stretch of the same curve further along: s starts where that
    /// curve has the pond's depth, and no step ever divides by the nought of critical flow.
    fn surface(&self, flow: Flow, outlet: Outlet, mut visit: impl FnMut(f64, f64)) -> Result<f64, FlowError> {
        let flow = zero_or_more("flow", flow.m3_per_s())?;
        let critical = rectangle_depth(flow / self.width);
        let pond = match outlet {
            Outlet::Free => 0.0,
            Outlet::Pond(depth) => not_negative("pond depth", depth)?,
        };
        if flow == 0.0 {
            // A level pond, which a sloping floor may rise out of.
            let level = |from_outlet: f64| (pond - self.slope * from_outlet).max(0.0);
            (0..=STEPS).for_each(|step| {
                let from_outlet = self.length * f64::from(step) / f64::from(STEPS);
                visit(from_outlet, level(from_outlet));
            });
            return Ok(level(self.length));
        }
        if pond <= critical {
            let fall = self.slope - self.friction(flow, critical);
            limits::GUTTER_FALL.check((fall * self.length / (2.0 * critical)).max(0.0))?;
        }
        let excess = self.resistance(flow, critical) - self.slope;
        let first_slope = (excess.max(0.0) * critical * 2.0 / 3.0).sqrt();
        let above = (pond - critical).max(0.0);
        let ahead = if first_slope > 0.0 { (above / first_slope) * (above / first_slope) } else { 0.0 };
        let rise = |root: f64, depth: f64| {
            // So near critical depth the quotient below is rounding over rounding; this is its limit.
            if root == 0.0 || depth - critical < 1e-6 * critical && root * root <= ahead * (1.0 + 1e-9) {
                return Ok(if above > 0.0 && first_slope == 0.0 { 0.0 } else { first_slope });
            }
            let here = flow * (1.0 - (root * root - ahead) / self.length).clamp(0.0, 1.0);
            // Where the floor rises out of the water there is no depth left, however slow the flow.
            let froude = if depth > 0.0 { self.froude(here, depth) } else { f64::INFINITY };
            if froude >= 1.0 {
                return Err(FlowError::OutsideRange { found: froude, range: &limits::GUTTER_FROUDE });
            }
            // q of the resistance is that of the whole length, hence the flow at the outlet beside the one here.
            let resistance = self.friction(here, depth) + self.inflow_drag(here, flow, depth);
            Ok(2.0 * root * (resistance - self.slope) / (1.0 - froude * froude))
        };
        let roots = (ahead.sqrt(), (self.length + ahead).sqrt());
        let depth =
            solve::march(pond.max(critical), roots, STEPS, rise, |root, depth| visit(root * root - ahead, depth))?;
        if depth > 0.0 {
            Ok(depth)
        } else {
            Err(FlowError::OutsideRange { found: f64::INFINITY, range: &limits::GUTTER_FROUDE })
        }
    }

    /// Friction and drag of the inflow at the outlet.
    fn resistance(&self, flow: f64, depth: f64) -> f64 {
        self.friction(flow, depth) + self.inflow_drag(flow, flow, depth)
    }

    /// Sf by Manning.
    fn friction(&self, flow: f64, depth: f64) -> f64 {
        let radius = self.width * depth / (self.width + 2.0 * depth);
        let velocity = flow / (self.width * depth);
        let loss = self.roughness * velocity;
        loss * loss / four_thirds(radius)
    }

    /// 2 Q q / (g A^2): what it takes to carry the inflow along.
    fn inflow_drag(&self, here: f64, at_outlet: f64, depth: f64) -> f64 {
        let area = self.width * depth;
        2.0 * here * at_outlet / (self.length * GRAVITY * area * area)
    }

    fn froude(&self, flow: f64, depth: f64) -> f64 {
        flow / (self.width * depth * (GRAVITY * depth).sqrt())
    }
}

/// Depth at the dead end of a level gutter without friction, y^2 = yL^2 + 2 yc^3 / yL; sqrt(3) yc with a free outlet.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | Q | `flow` at the outlet | m3/s | 0 or more |
/// | b | `width` | m | above 0 |
/// | yL | `outlet`: critical depth yc, or a pond above it | m | |
///
/// Friction adds 3 to 7 %: for a design use [`Gutter`].
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// The momentum equation of [`Gutter`] in closed form.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::gutter::{self, Outlet}, units::{Flow, Length}};
/// let depth = gutter::level_dead_end_depth(Flow::from_m3_per_s(0.02), Length::from_m(0.3), Outlet::Free)?;
/// assert_eq!(format!("{:.4}", depth.m()), "0.1330");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn level_dead_end_depth(flow: Flow, width: Length, outlet: Outlet) -> Result<Length, FlowError> {
    level_depth_at(flow, width, outlet, 0.0)
}

/// Depth along a level gutter without friction, at a share of its length from the dead end.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | x/L | `share` of the length from the dead end | | 0 to 1 |
/// | Q, b, yL | as [`level_dead_end_depth`] | | |
///
/// With a free outlet it is (x/L)^2 = 1.5 y/yc - 0.5 (y/yc)^3.
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning, a share above 1 included.
///
/// # Source
/// As [`level_dead_end_depth`].
///
/// # Example
/// ```
/// # use brimline::{hydraulics::gutter::{self, Outlet}, units::{Flow, Length}};
/// let half_way = gutter::level_depth_at(Flow::from_m3_per_s(0.02), Length::from_m(0.3), Outlet::Free, 0.5)?;
/// assert_eq!(format!("{:.4}", half_way.m()), "0.1261");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn level_depth_at(flow: Flow, width: Length, outlet: Outlet, share: f64) -> Result<Length, FlowError> {
    let flow = zero_or_more("flow", flow.m3_per_s())?;
    let critical = rectangle_depth(flow / positive("width", width)?);
    let at_outlet = match outlet {
        Outlet::Free => critical,
        Outlet::Pond(depth) => critical.max(not_negative("pond depth", depth)?),
    };
    let share = zero_or_more("share of the length", share)?;
    zero_or_more("share of the length left to the outlet", 1.0 - share)?;
    if at_outlet == 0.0 {
        return Ok(Length::ZERO);
    }
    let twice_cube = 2.0 * critical * critical * critical;
    let thrust = at_outlet * at_outlet + twice_cube / at_outlet;
    let dead_end = thrust.sqrt();
    if share == 0.0 {
        return Ok(Length::from_m(dead_end));
    }
    // Above the critical depth of the flow that has entered so far, the thrust grows with the depth.
    let least = critical * two_thirds(share);
    let depth = solve::bracketed(least, dead_end, |depth| {
        let momentum = if depth > 0.0 { twice_cube * share * share / depth } else { 0.0 };
        depth * depth + momentum - thrust
    });
    Ok(Length::from_m(depth))
}

/// What a level gutter without friction carries to a free outlet, Q = sqrt(g) 3^(-3/4) b W^1.5.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | b | `width` | m | above 0 |
/// | W | `depth` at the dead end | m | 0 or more |
///
/// The coefficient is 1.3738 m^0.5/s.
///
/// # Errors
/// [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// [`level_dead_end_depth`] turned round.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::gutter, units::Length};
/// let flow = gutter::level_capacity(Length::from_m(1.0), Length::from_m(1.0))?;
/// assert_eq!(format!("{:.4}", flow.m3_per_s()), "1.3738");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn level_capacity(width: Length, depth: Length) -> Result<Flow, FlowError> {
    let (b, depth) = (positive("width", width)?, not_negative("depth", depth)?);
    Ok(Flow::from_m3_per_s(b * GRAVITY.sqrt() * three_halves(depth / 3.0_f64.sqrt())))
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    fn gutter(length: f64, slope: f64, roughness: f64) -> Gutter {
        Gutter::new(Length::from_m(0.3), Length::from_m(length), slope, roughness).unwrap()
    }

    const FLOW: Flow = Flow::from_m3_per_s(0.02);

    #[test]
    fn without_friction_the_steps_reach_the_closed_form() {
        for outlet in [Outlet::Free, Outlet::Pond(Length::from_m(0.12)), Outlet::Pond(Length::from_m(0.01))] {
            let closed = level_dead_end_depth(FLOW, Length::from_m(0.3), outlet).unwrap();
            let stepped = gutter(10.0, 0.0, 0.0).dead_end_depth(FLOW, outlet).unwrap();
            assert_relative_eq!(stepped, closed, max_relative = 1e-6);
            for Station { distance, depth } in gutter(10.0, 0.0, 0.0).profile(FLOW, outlet).unwrap() {
                let there = level_depth_at(FLOW, Length::from_m(0.3), outlet, distance.m() / 10.0).unwrap();
                assert_relative_eq!(depth, there, max_relative = 1e-5);
            }
        }
    }

    /// A pond a hair above critical depth is no other case than one at it: the dead end never falls as the pond rises, and
    /// without friction meets the closed form.
    #[test]
    fn the_dead_end_rises_evenly_with_the_pond_through_critical_depth() {
        let critical = rectangle_depth(0.02 / 0.3);
        for roughness in [0.0, 0.011] {
            let mut before = 0.0;
            for step in 0..2000 {
                let ratio = 0.9 + 0.3 * f64::from(step) / 2000.0;
                let ratios = [ratio, 1.0 + f64::from(step) * 1e-9, 1.0 + f64::from(step) * 1e-6];
                for (place, ratio) in ratios.into_iter().enumerate() {
                    let outlet = Outlet::Pond(Length::from_m(critical * ratio));
                    let depth = gutter(10.0, 0.0, roughness).dead_end_depth(FLOW, outlet).unwrap();
                    if roughness == 0.0 {
                        let closed = level_dead_end_depth(FLOW, Length::from_m(0.3), outlet).unwrap();
                        assert_relative_eq!(depth, closed, max_relative = 1e-4);
                    }
                    if place == 0 {
                        assert!(depth.m() >= before * (1.0 - 1e-6), "{ratio}: {} after {before}", depth.m());
                        before = depth.m();
                    }
                }
            }
        }
    }

    #[test]
    fn a_profile_runs_from_the_dead_end_to_the_outlet() {
        let profile = gutter(10.0, 0.0, 0.011).profile(FLOW, Outlet::Free).unwrap();
        let (first, last) = (profile[0], profile[profile.len() - 1]);
        assert_relative_eq!(first.distance.m(), 0.0, epsilon = 1e-12);
        assert_relative_eq!(last.distance.m(), 10.0);
        assert_eq!(first.depth, gutter(10.0, 0.0, 0.011).dead_end_depth(FLOW, Outlet::Free).unwrap());
        assert!(profile.windows(2).all(|pair| pair[0].distance < pair[1].distance && pair[0].depth > pair[1].depth));
    }

    /// yc = 0.0768 m; 2 yc / L = 0.0154, and friction adds about 0.007, by hand.
    #[test]
    fn a_steep_floor_is_refused_with_its_number() {
        let Err(FlowError::OutsideRange { found, range }) =
            gutter(10.0, 0.04, 0.011).dead_end_depth(FLOW, Outlet::Free)
        else {
            panic!("a floor at 0.04 is steep");
        };
        assert_eq!(range, &limits::GUTTER_FALL);
        assert!(found > 1.5 && found < 2.6, "{found}");
        assert!(gutter(10.0, 0.01, 0.011).dead_end_depth(FLOW, Outlet::Free).is_ok());
        let drowned = gutter(10.0, 0.04, 0.011).dead_end_depth(FLOW, Outlet::Pond(Length::from_m(0.1)));
        assert!(matches!(drowned, Err(FlowError::OutsideRange { range, .. }) if range == &limits::GUTTER_FROUDE));
    }

    #[test]
    fn a_gutter_at_rest_is_level() {
        let pond = Outlet::Pond(Length::from_m(0.1));
        let profile = gutter(10.0, 0.02, 0.011).profile(Flow::ZERO, pond).unwrap();
        assert!(profile.iter().all(|it| {
            approx::relative_eq!(it.depth.m(), (0.1 - 0.02 * (10.0 - it.distance.m())).max(0.0), epsilon = 1e-12)
        }));
        assert_eq!(gutter(10.0, 0.02, 0.011).dead_end_depth(Flow::ZERO, pond), Ok(Length::ZERO));
        assert_eq!(gutter(10.0, 0.0, 0.011).dead_end_depth(Flow::ZERO, Outlet::Free), Ok(Length::ZERO));
        assert_eq!(level_dead_end_depth(Flow::ZERO, Length::from_m(0.3), Outlet::Free), Ok(Length::ZERO));
    }
}
