//! How the surface of an area lies: the elevation of its low point, and its slope from there up to the wall.

use crate::units::{Area, Length, Volume};

/// The surface of an area.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Surface {
    /// Elevation of the low point above the project's datum, where given.
    pub low_point: Option<Length>,
    /// From the low point to the wall in plan, where given; with a slope or without one.
    pub to_wall: Option<Length>,
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

impl Surface {
    /// Water on an area under a level: a wedge on an even slope, else as if the roof were level.
    pub fn volume(&self, area: Area, level: Length) -> Volume {
        let level = level.max(Length::ZERO).m();
        let mean = match self.wall() {
            Some(wall) if level < wall => level * level / (2.0 * wall),
            Some(wall) => level - wall / 2.0,
            None => level,
        };
        Volume::from_m3(area.m2() * mean)
    }

    /// The level under which so much water stands on an area.
    pub fn level(&self, area: Area, stored: Volume) -> Length {
        let mean = (stored.m3() / area.m2()).max(0.0);
        Length::from_m(match self.wall() {
            Some(wall) if mean < wall / 2.0 => (2.0 * wall * mean).sqrt(),
            Some(wall) => mean + wall / 2.0,
            None => mean,
        })
    }

    /// Height of the surface at the wall, m; none where it is level or not given.
    fn wall(&self) -> Option<f64> {
        self.rise.map(|rise| rise.slope * rise.distance.m()).filter(|&wall| wall > 0.0)
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

    /// 100 m2 that rise 0.2 m to the wall: 0.1 m of level holds 100 x 0.1^2 / 0.4 = 2.5 m3, 0.3 m holds 100 x (0.3 - 0.1) = 20
    /// m3. By hand.
    #[test]
    fn a_wedge_holds_less_than_a_level_roof() {
        let rise = Rise { slope: 0.02, distance: Length::from_m(10.0) };
        let (wedge, area) = (Surface { rise: Some(rise), ..Surface::default() }, Area::from_m2(100.0));
        for (level, stored) in [(0.1, 2.5), (0.2, 10.0), (0.3, 20.0)] {
            assert_relative_eq!(wedge.volume(area, Length::from_m(level)).m3(), stored, max_relative = 1e-12);
            assert_relative_eq!(wedge.level(area, Volume::from_m3(stored)).m(), level, max_relative = 1e-12);
            assert_relative_eq!(Surface::default().volume(area, Length::from_m(level)).m3(), 100.0 * level);
        }
    }
}
