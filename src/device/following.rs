//! What follows a device and may carry less than it: a leader, or a conductor head with its own outlet and overflow.
//!
//! One of them serves one device. Flow is credited only as far as what follows carries it away with the water no higher than
//! the device's sill: a drowned scupper is not computed, and what it would back up to is told instead.

use crate::hydraulics::leader::{self, Fill};
use crate::hydraulics::{orifice, practice};
use crate::root;
use crate::units::{Area, Flow, Length};

use super::Regime;

/// A vertical leader.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Leader {
    /// Inside diameter.
    pub diameter: Length,
    /// The part of its section that water fills.
    pub fill: Fill,
}

/// A conductor head: a box at the wall into which a scupper falls.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ConductorHead {
    /// Diameter of its outlet.
    pub outlet: Length,
    /// Depth of the outlet below the lip.
    pub depth: Length,
    /// Its lip below the device's sill.
    pub lip: Length,
    /// Width of its own overflow over the lip.
    pub overflow_width: Length,
}

/// What follows a device.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Following {
    /// A leader from the device, or from the outlet of the conductor head.
    pub leader: Option<Leader>,
    /// A conductor head.
    pub conductor_head: Option<ConductorHead>,
}

impl Leader {
    /// What it carries at its fill.
    pub fn capacity(&self) -> Flow {
        leader::wyly_eaton(self.diameter, self.fill).unwrap_or(Flow::ZERO)
    }
}

impl ConductorHead {
    /// What leaves the box with its water at a height above the device's sill, which may be negative.
    fn discharge(&self, above_sill: Length, leader: Option<&Leader>) -> Flow {
        let over_lip = (above_sill + self.lip).max(Length::ZERO);
        let over_outlet = (above_sill + self.lip + self.depth).max(Length::ZERO);
        let section = Area::from_m2(std::f64::consts::FRAC_PI_4 * self.outlet.m() * self.outlet.m());
        let out = orifice::free(section, over_outlet, orifice::SQUARE_EDGE).unwrap_or(Flow::ZERO);
        let out = leader.map_or(out, |leader| out.min(leader.capacity()));
        let over = practice::weir(self.overflow_width, over_lip).unwrap_or(Flow::ZERO);
        out + over
    }
}

impl Following {
    /// The most that is carried away with no water above the device's sill, and what sets it; none where nothing follows.
    pub fn capacity(&self) -> Option<(Flow, Regime)> {
        match (&self.conductor_head, &self.leader) {
            (Some(head), leader) => Some((head.discharge(Length::ZERO, leader.as_ref()), Regime::ConductorHead)),
            (None, Some(leader)) => Some((leader.capacity(), Regime::Leader)),
            (None, None) => None,
        }
    }

    /// Height above the device's sill to which a conductor head would back up under a flow; none where it keeps below.
    pub fn backs_up_to(&self, flow: Flow) -> Option<Length> {
        const HIGHEST: f64 = 10.0;
        let head = self.conductor_head?;
        let short = |above: f64| (head.discharge(Length::from_m(above), self.leader.as_ref()) - flow).m3_per_s();
        if short(0.0) >= 0.0 {
            return None;
        }
        let crossing = root::crossing(short, 0.0, HIGHEST);
        Some(crossing.map_or(Length::from_m(HIGHEST), |(_, above)| Length::from_m(above)))
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    const INCH: fn(f64) -> Length = Length::inches;

    /// 27.8 (7/24)^(5/3) 4^(8/3) = 143.8 gpm; the plumbing table prints 144.
    #[test]
    fn a_leader_carries_what_its_table_says() {
        let leader = Leader { diameter: INCH(4.0), fill: Fill::SevenTwentyFourths };
        assert_relative_eq!(leader.capacity().to_gpm(), 144.0, max_relative = 5e-3);
    }

    /// Outlet 4 in, 8 in under the lip, lip 1 in under the sill, overflow 12 in wide. With water at the sill:
    /// 0.6 * pi/4 * 4^2 in2 = 7.540 in2; sqrt(2 * 386.09 * 9) = 83.36 in/s; 628.5 in3/s = 163.2 gpm; overflow
    /// 2.9 * 12 * 1 = 34.8 gpm; in all 198.0. Worked by hand, g = 386.09 in/s2, 1 gpm = 3.85 in3/s.
    #[test]
    fn a_conductor_head_by_hand() {
        let head = ConductorHead { outlet: INCH(4.0), depth: INCH(8.0), lip: INCH(1.0), overflow_width: INCH(12.0) };
        let following = Following { leader: None, conductor_head: Some(head) };
        let (flow, regime) = following.capacity().unwrap();
        assert_relative_eq!(flow.to_gpm(), 198.0, max_relative = 1e-3);
        assert_eq!(regime, Regime::ConductorHead);
        assert_eq!(following.backs_up_to(flow), None);
        let backed = following.backs_up_to(Flow::gpm(300.0)).unwrap();
        assert_relative_eq!(head.discharge(backed, None).to_gpm(), 300.0, max_relative = 1e-9);
        assert!(backed.to_inches() > 1.0 && backed.to_inches() < 2.5, "{backed:?}");
    }
}
