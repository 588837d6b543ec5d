//! A layout as it stands in one case: all its devices in one pond, at one level.
//!
//! With k devices blocked, the k that carry most at the level in question carry nothing. What is left is the sum of the
//! n - k smallest flows; each of them rises with the level, so the sum does, and a level has one capacity, a demand one
//! least level.

use crate::device::{Curve, Discharge, Head};
use crate::root::{RootError, crossing};
use crate::units::{Flow, Length};

/// Devices of one group as built in a case.
#[derive(Clone, Debug)]
pub struct Outlet {
    /// The device as built, under its law.
    pub curve: Curve,
    /// Its sill above the low point, raised.
    pub sill: Length,
    /// How many.
    pub count: u32,
}

/// All outlets of an area in one case.
#[derive(Clone, Debug)]
pub struct Pool {
    /// The outlets, in the order of the layout's groups.
    pub outlets: Vec<Outlet>,
    /// How many of the most effective single devices carry nothing.
    pub blocked: u32,
    /// Factor on every flow.
    pub discharge: f64,
}

/// What one group carries at a level.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Share {
    /// Head over its sill.
    pub head: Head,
    /// Flow and regime of one device, the case's discharge factor in it.
    pub each: Discharge,
    /// Devices that carry it.
    pub working: u32,
}

impl Share {
    /// Flow of the group's working devices.
    pub fn flow(&self) -> Flow {
        self.each.flow * f64::from(self.working)
    }
}

/// How many of each group still work when the `blocked` most effective single devices do not.
///
/// `flows` holds a group's flow of one device and its count. Of groups that carry alike the first is blocked first.
pub fn working<const N: usize>(flows: &[(f64, u32); N], groups: usize, mut blocked: u32) -> [u32; N] {
    let mut left = flows.map(|(_, count)| count);
    while blocked > 0 {
        let mut most: Option<usize> = None;
        for group in 0..groups {
            if left[group] > 0 && most.is_none_or(|most| flows[group].0 > flows[most].0) {
                most = Some(group);
            }
        }
        let Some(most) = most else { break };
        let gone = left[most].min(blocked);
        left[most] -= gone;
        blocked -= gone;
    }
    left
}

/// Flow of all working devices, the groups added in their order: the one place where capacities are added up.
pub fn working_capacity<const N: usize>(flows: &[(f64, u32); N], groups: usize, blocked: u32) -> f64 {
    if blocked == 0 {
        return flows[..groups].iter().map(|&(flow, count)| flow * f64::from(count)).sum();
    }
    let left = working(flows, groups, blocked);
    let carried = |group: usize| if left[group] == 0 { 0.0 } else { flows[group].0 * f64::from(left[group]) };
    (0..groups).map(carried).sum()
}

/// Most groups of a layout that is searched for.
pub const MOST_GROUPS: usize = 3;

/// Most groups that any layout can have: one that someone gave is not bound by the search.
pub const MOST_OUTLETS: usize = 16;

impl Pool {
    fn flows<const N: usize>(&self, level: Length) -> [(f64, u32); N] {
        let mut flows = [(0.0, 0); N];
        for (slot, outlet) in flows.iter_mut().zip(&self.outlets) {
            *slot = (self.each(outlet, level).flow.m3_per_s(), outlet.count);
        }
        flows
    }

    fn each(&self, outlet: &Outlet, level: Length) -> Discharge {
        let found = outlet.curve.discharge(Head::above(outlet.sill, level));
        Discharge { flow: found.flow * self.discharge, ..found }
    }

    /// Flow that leaves at a level.
    pub fn capacity(&self, level: Length) -> Flow {
        // Nearly every layout has few groups, and this is asked more often than anything else.
        let (groups, blocked) = (self.outlets.len(), self.blocked);
        Flow::from_m3_per_s(match groups {
            0..=MOST_GROUPS => working_capacity(&self.flows::<MOST_GROUPS>(level), groups, blocked),
            _ => working_capacity(&self.flows::<MOST_OUTLETS>(level), groups, blocked),
        })
    }

    /// What each group carries at a level, in their order.
    pub fn shares(&self, level: Length) -> Vec<Share> {
        let left = working(&self.flows::<MOST_OUTLETS>(level), self.outlets.len(), self.blocked);
        let share = |(outlet, &working): (&Outlet, &u32)| Share {
            head: Head::above(outlet.sill, level),
            each: self.each(outlet, level),
            working,
        };
        self.outlets.iter().zip(&left).map(share).collect()
    }

    /// The most that leaves at any level; none where more depth always gives more flow.
    fn greatest(&self) -> Option<Flow> {
        let mut flows = [(0.0, 0); MOST_OUTLETS];
        for (slot, outlet) in flows.iter_mut().zip(&self.outlets) {
            *slot = (outlet.curve.greatest_flow()?.m3_per_s() * self.discharge, outlet.count);
        }
        Some(Flow::from_m3_per_s(working_capacity(&flows, self.outlets.len(), self.blocked)))
    }

    /// The least level at which the demand leaves, the low point where there is none; none where it never does: every table at
    /// its end.
    ///
    /// It is the least number `y` with `capacity(y) >= demand`, to the last bit.
    ///
    /// # Errors
    /// [`RootError`] where a capacity is not finite, which no device gives.
    pub fn level(&self, demand: Flow) -> Result<Option<Length>, RootError> {
        let lowest = self.outlets.iter().map(|outlet| outlet.sill).fold(Length::from_m(f64::INFINITY), Length::min);
        if demand <= Flow::ZERO {
            return Ok(Some(Length::ZERO));
        }
        if self.greatest().is_some_and(|most| most < demand) {
            return Ok(None);
        }
        let mut low = lowest.m();
        let short = |level: f64| (self.capacity(Length::from_m(level)) - demand).m3_per_s();
        let mut high = low + FIRST_HEAD;
        while short(high) < 0.0 {
            if high - lowest.m() > GREATEST_HEAD.m() {
                return Ok(None);
            }
            low = high;
            high = lowest.m() + 2.0 * (high - lowest.m());
        }
        crossing(short, low, high).map(|(_, reached)| Some(Length::from_m(reached)))
    }
}

/// Head at which the search for a bracket of the level starts, m: that of a middling overflow.
const FIRST_HEAD: f64 = 0.1;
/// Head beyond which a pool that still does not carry its demand is taken as overwhelmed. No roof holds it.
pub(super) const GREATEST_HEAD: Length = Length::from_m(1e4);

#[cfg(test)]
mod tests {
    use super::*;
    use crate::device::{Device, Rating, Site, Size};
    use crate::units::METRES_PER_INCH;
    use approx::assert_relative_eq;
    use std::sync::Arc;

    fn open(width: f64, sill: f64, count: u32) -> Outlet {
        outlet(Device::Open { width: Length::inches(width) }, sill, count)
    }

    fn outlet(device: Device, sill: f64, count: u32) -> Outlet {
        let size = Size::of(device);
        let sill = Length::inches(sill);
        Outlet { curve: size.curve(&Site::default(), sill, Length::ZERO).0, sill, count }
    }

    fn pool(outlets: Vec<Outlet>, blocked: u32) -> Pool {
        Pool { outlets, blocked, discharge: 1.0 }
    }

    /// Half of 179.4 gpm through 6 in of open scupper at 2 in: the table's 90 gpm row, 3 in of head; level 5 in.
    /// Source: worked example of the ASCE 7 commentary as a rain-load sheet quotes it; 2.9 * 6 * 3^1.5 = 90.41.
    #[test]
    fn published_example_of_a_channel_scupper() {
        let level = pool(vec![open(6.0, 2.0, 1)], 0).level(Flow::gpm(90.413)).unwrap().unwrap();
        assert_relative_eq!(level.to_inches(), 5.0, max_relative = 1e-5);
    }

    /// Two scuppers at unlike heights see one level: 12 in wide at 2 in and 24 in wide at 3 in, level 4 in:
    /// 2.9 * (12 * 2^1.5 + 24 * 1) = 168.03 gpm. Worked by hand.
    #[test]
    fn devices_at_unlike_heights_share_one_level() {
        let level = pool(vec![open(12.0, 2.0, 1), open(24.0, 3.0, 1)], 0).level(Flow::gpm(168.030)).unwrap().unwrap();
        assert_relative_eq!(level.to_inches(), 4.0, max_relative = 1e-5);
    }

    /// Of two 6 in and one 12 in scupper the wide one is blocked first, then a narrow one.
    #[test]
    fn the_most_effective_are_blocked_first() {
        let gpm =
            |blocked| pool(vec![open(6.0, 2.0, 2), open(12.0, 2.0, 1)], blocked).capacity(Length::inches(3.0)).to_gpm();
        assert_relative_eq!(gpm(0), 69.6, max_relative = 1e-9);
        assert_relative_eq!(gpm(1), 34.8, max_relative = 1e-9);
        assert_relative_eq!(gpm(2), 17.4, max_relative = 1e-9);
        assert_eq!(gpm(3), 0.0);
        assert_eq!(gpm(9), 0.0);
    }

    /// One of N alike blocked multiplies the head by (N/(N-1))^(2/3): 1.59 for 2, 1.31 for 3. Source: Q ~ H^1.5, by hand.
    #[test]
    fn one_of_n_blocked_raises_the_head_as_the_power_two_thirds() {
        for (count, factor) in [(2, 1.587_40), (3, 1.310_37), (4, 1.211_41)] {
            let level = |blocked| pool(vec![open(12.0, 0.0, count)], blocked).level(Flow::gpm(300.0)).unwrap().unwrap();
            assert_relative_eq!(level(1) / level(0), factor, max_relative = 1e-5);
        }
    }

    #[test]
    fn a_table_at_its_end_is_overwhelmed() {
        let rating =
            Rating::new(&[(Length::inches(1.0), Flow::gpm(80.0)), (Length::inches(2.0), Flow::gpm(170.0))]).unwrap();
        let drain = |count| {
            let device = Device::Rated { width: None, rating: Arc::new(rating.clone()) };
            pool(vec![outlet(device, 2.0, count)], 0)
        };
        assert_eq!(drain(1).level(Flow::gpm(171.0)).unwrap(), None);
        // Exactly the last row's flow is reached at the last row, though every higher level carries it too.
        let level = drain(1).level(Flow::gpm(170.0)).unwrap().unwrap();
        assert_relative_eq!(level.m(), 4.0 * METRES_PER_INCH, max_relative = 1e-12);
    }
}
