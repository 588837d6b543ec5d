//! How the surface of an area lies: the elevation of its low point, and its slope from there up to the wall.

use crate::units::Length;

/// The surface of an area.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Surface {
    /// Elevation of the low point above the project's datum, where given.
    pub low_point: Option<Length>,
    /// The even slope from the low point up to the wall, where given.
    pub rise: Option<Rise>,
}

/// An even slope over a distance.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Rise {
    /// Height for each unit of distance.
    pub slope: f64,
    /// From the low point to the wall, in plan.
    pub distance: Length,
}

impl Rise {
    /// The roof surface at the wall above the low point.
    pub fn at_wall(&self) -> Length {
        (self.distance * self.slope).on_grid()
    }

    /// Depth of water at a distance from the low point; zero where the roof stands dry.
    pub fn depth(&self, level: Length, from_low_point: Length) -> Length {
        (level - from_low_point * self.slope).max(Length::ZERO)
    }

    /// How far from the low point water stands at a level, at most to the wall.
    pub fn extent(&self, level: Length) -> Length {
        if self.slope > 0.0 { (level * (1.0 / self.slope)).min(self.distance) } else { self.distance }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// 1/4 in/ft over 20 ft rises 5 in; under a level of 4 in water reaches 16 ft, and 8 ft up it is 2 in deep. By hand.
    #[test]
    fn water_thins_out_up_the_slope() {
        let rise = Rise { slope: 0.25 / 12.0, distance: Length::inches(240.0) };
        assert_eq!(rise.at_wall(), Length::inches(5.0).on_grid());
        let level = Length::inches(4.0);
        assert_relative_eq!(rise.extent(level).to_inches(), 192.0, max_relative = 1e-12);
        assert_relative_eq!(rise.depth(level, Length::inches(96.0)).to_inches(), 2.0, max_relative = 1e-12);
        assert_eq!(rise.depth(level, Length::inches(200.0)), Length::ZERO);
        assert_eq!(rise.extent(Length::inches(9.0)), rise.distance);
    }
}
