//! The way from the far end of an area to its devices, where that is a gutter or a valley: the water stands deeper up it.
//!
//! The channel takes in the area's whole demand evenly along its length and ends at the devices, its floor there at the low
//! point. Their level is its tailwater; under critical depth the far end stands at its own level whatever the devices do.

use crate::hydraulics::gutter::{Gutter, Outlet};
use crate::hydraulics::{FlowError, critical};
use crate::root::crossing;
use crate::units::{Flow, Length};

/// A rectangular channel.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Channel {
    /// Its width.
    pub width: Length,
    /// Its length, far end to devices.
    pub length: Length,
    /// Fall of its floor towards the devices, as a ratio.
    pub slope: f64,
    /// Manning roughness.
    pub roughness: f64,
}

/// The water in a channel.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Reach {
    /// Level at the far end above the low point.
    pub far_level: Length,
    /// Greatest depth anywhere along it.
    pub deepest: Length,
}

impl Channel {
    /// The water under a flow, with the devices' level above the low point.
    ///
    /// # Errors
    /// [`FlowError::OutsideRange`] where the flow turns supercritical; [`FlowError::Unusable`] for dimensions without meaning.
    pub fn reach(&self, flow: Flow, level: Length) -> Result<Reach, FlowError> {
        let gutter = Gutter::new(self.width, self.length, self.slope, self.roughness)?;
        let free = level <= critical::rectangle(flow, self.width)?;
        let outlet = if free { Outlet::Free } else { Outlet::Pond(level) };
        let profile = gutter.profile(flow, outlet)?;
        let deepest = profile.iter().map(|station| station.depth).fold(level.max(Length::ZERO), Length::max);
        let far = profile.first().map_or(level, |station| station.depth);
        Ok(Reach { far_level: far + self.length * self.slope, deepest })
    }

    /// The highest level of the devices at which nothing along the channel stands deeper than `depth`, nor its far end
    /// above `top`; none where even a free outlet does.
    pub fn level_for(&self, flow: Flow, depth: Length, top: Length) -> Option<Length> {
        let over = |level: f64| match self.reach(flow, Length::from_m(level)) {
            Ok(reach) => (reach.deepest - depth).max(reach.far_level - top).m().min(GREAT),
            Err(_) => GREAT,
        };
        let highest = depth.min(top).m().min(GREAT);
        if highest < 0.0 || over(0.0) > 0.0 {
            return None;
        }
        if over(highest) <= 0.0 {
            return Some(Length::from_m(highest));
        }
        // The last level that passes; a free outlet that just passes leaves none above it.
        Some(crossing(over, 0.0, highest).map_or(Length::ZERO, |(passes, _)| Length::from_m(passes)))
    }
}

/// A depth, m, beyond any roof, in place of none.
const GREAT: f64 = 1e6;

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    fn channel(slope: f64) -> Channel {
        Channel { width: Length::from_m(0.3), length: Length::from_m(10.0), slope, roughness: 0.011 }
    }

    const FLOW: Flow = Flow::from_m3_per_s(0.02);

    /// 0.1377 m at the far end with a free outlet, 0.1512 m with a tailwater of 0.12 m: integration of the momentum
    /// equation by a separate program.
    #[test]
    fn the_far_end_stands_deeper() {
        let reach = |level: f64| channel(0.0).reach(FLOW, Length::from_m(level)).unwrap();
        assert_relative_eq!(reach(0.01).deepest.m(), 0.1377, max_relative = 5e-3);
        assert_eq!(reach(0.01), reach(0.05));
        assert_relative_eq!(reach(0.12).far_level.m(), 0.1512, max_relative = 5e-3);
    }

    #[test]
    fn the_level_for_a_depth_leads_back_to_it() {
        let none = Length::from_m(f64::INFINITY);
        let level = channel(0.0).level_for(FLOW, Length::from_m(0.16), none).unwrap();
        assert_relative_eq!(channel(0.0).reach(FLOW, level).unwrap().deepest.m(), 0.16, max_relative = 1e-9);
        assert_eq!(channel(0.0).level_for(FLOW, Length::from_m(0.13), none), None);
        let under = channel(0.002).level_for(FLOW, none, Length::from_m(0.17)).unwrap();
        assert_relative_eq!(channel(0.002).reach(FLOW, under).unwrap().far_level.m(), 0.17, max_relative = 1e-9);
    }

    #[test]
    fn a_steep_channel_is_refused() {
        assert!(matches!(channel(0.04).reach(FLOW, Length::ZERO), Err(FlowError::OutsideRange { .. })));
    }
}
