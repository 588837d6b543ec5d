//! What rule sets ask about an area beside what decides about its water: walls one by one, primary drains, the building.

use crate::units::{Area, Flow, Length};

use super::Limits;

/// What is known of an area for the rules over it; whatever is not given stays open, and rules that need it cannot tell.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Facts {
    /// What holds in every case that says nothing else.
    pub limits: Limits,
    /// The walls that shed on it, one by one; empty where only their sum is known.
    pub walls: Vec<Wall>,
    /// Its primary drains.
    pub primary: Primary,
    /// The risk category of the building.
    pub risk: Option<Risk>,
    /// Where its overflow runs.
    pub discharge: Option<Separation>,
    /// Whether the height of the roof at the wall was not given and is taken as that of the low point.
    pub roof_at_wall_assumed: bool,
}

/// The primary drains of an area.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Primary {
    /// Size of the drain that serves the area, which is the diameter of its outlet.
    pub drain: Option<Length>,
    /// Its inlet above the low point.
    pub set_height: Option<Length>,
    /// What all of them carry by their design.
    pub flow: Option<Flow>,
    /// Water that stands over the low point while they carry it.
    pub depth: Option<Length>,
    /// What the pipe carries into which both the primary drains and the overflow run.
    pub shared_pipe: Option<Flow>,
}

/// Risk category of a building, by the danger that its failure is to people.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Risk {
    /// Low.
    I,
    /// That of most buildings.
    II,
    /// Many people, or great harm.
    III,
    /// Needed in an emergency.
    IV,
}

impl Risk {
    /// Every category with its name in files and reports.
    pub const NAMED: [(&'static str, Self); 4] =
        [("I", Self::I), ("II", Self::II), ("III", Self::III), ("IV", Self::IV)];

    /// Its name.
    pub fn name(self) -> &'static str {
        Self::NAMED[self as usize].0
    }
}

/// Where the overflow of an area runs.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Separation {
    /// To an end of its own, apart from the primary drains.
    Separate,
    /// Into the pipe of the primary drains.
    Shared,
}

impl Separation {
    /// Both with their names in files.
    pub const NAMED: [(&'static str, Self); 2] = [("separate", Self::Separate), ("with the primary", Self::Shared)];
}

/// A side of an area that a wall stands on.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Side {
    /// North, by whatever the drawing calls so.
    North,
    /// East.
    East,
    /// South, opposite of north.
    South,
    /// West, opposite of east.
    West,
}

impl Side {
    /// Every side with its name in files.
    pub const NAMED: [(&'static str, Self); 4] =
        [("north", Self::North), ("east", Self::East), ("south", Self::South), ("west", Self::West)];
}

/// A wall that rises over an area and sheds on it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Wall {
    /// Its area in elevation.
    pub area: Area,
    /// The side on which it stands.
    pub side: Side,
}

/// How much of the walls over an area is counted as catching rain.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum WallRule {
    /// None of them.
    None,
    /// Half of every wall.
    HalfOfEach,
    /// Half of the largest wall.
    HalfOfLargest,
    /// By how many there are and how they stand: half of one; 0.35 of the sum of two at a corner; of two that face each other
    /// half of what the greater has more; of three and four, each facing pair counted by its difference first, the greater of
    /// half of the larger and 0.35 of the sum of what is left.
    ByCorner,
    /// Half of the greatest elevation of all walls together, seen from any direction.
    GreatestElevation,
    /// Half of what rain driven by the wind meets, less what the walls behind shelter, from the worst direction.
    WindDriven,
}

impl WallRule {
    /// Every rule with its name in files.
    pub const NAMED: [(&'static str, Self); 6] = [
        ("none", Self::None),
        ("half of each", Self::HalfOfEach),
        ("half of the largest", Self::HalfOfLargest),
        ("by corner", Self::ByCorner),
        ("greatest elevation", Self::GreatestElevation),
        ("wind driven", Self::WindDriven),
    ];

    /// Its name.
    pub fn name(self) -> &'static str {
        Self::NAMED[self as usize].0
    }

    /// The area of walls that counts, in full, as roof does.
    ///
    /// # Source
    /// Half of a wall: ASCE 7-16 chapter 8, symbols; IPC 1106.4. By corner: the uniform plumbing code family, of which 50 and
    /// 35 % are as quoted in training notes and the rest from memory. Half of the largest: Ontario 7.4.10.4 as quoted.
    /// Elevations: EN 12056-3 and AS/NZS 3500.3, from memory.
    pub fn counted(self, walls: &[Wall]) -> Area {
        let on = |side: Side| walls.iter().filter(|wall| wall.side == side).map(|wall| wall.area.m2()).sum::<f64>();
        let (north, east, south, west) = (on(Side::North), on(Side::East), on(Side::South), on(Side::West));
        let (along, across) = ((north - south).abs(), (east - west).abs());
        let sides = [north, east, south, west].into_iter().filter(|&side| side > 0.0).count();
        let counted = match self {
            Self::None => 0.0,
            Self::HalfOfEach => 0.5 * (north + east + south + west),
            Self::HalfOfLargest => 0.5 * walls.iter().map(|wall| wall.area.m2()).fold(0.0, f64::max),
            Self::ByCorner if sides == 2 && along > 0.0 && across > 0.0 => 0.35 * (along + across),
            Self::ByCorner => (0.5 * along.max(across)).max(0.35 * (along + across)),
            Self::GreatestElevation => 0.5 * north.max(south).hypot(east.max(west)),
            Self::WindDriven => 0.5 * along.hypot(across),
        };
        // The sum of no walls at all is minus zero.
        Area::from_m2(counted.max(0.0))
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    fn counted(rule: WallRule, walls: &[(f64, Side)]) -> f64 {
        let walls: Vec<_> = walls.iter().map(|&(m2, side)| Wall { area: Area::from_m2(m2), side }).collect();
        rule.counted(&walls).m2()
    }

    /// One wall 50 %, two at a corner 35 % of the sum, two of one height facing each other nothing, else half of the part
    /// above the lower. Source: the uniform plumbing code family; 50 and 35 % as quoted in a training note, the rest from
    /// memory.
    #[test]
    fn walls_by_corner() {
        let rule = WallRule::ByCorner;
        assert_relative_eq!(counted(rule, &[(100.0, Side::North)]), 50.0);
        assert_relative_eq!(counted(rule, &[(100.0, Side::North), (60.0, Side::East)]), 56.0);
        assert_relative_eq!(counted(rule, &[(100.0, Side::North), (100.0, Side::South)]), 0.0);
        assert_relative_eq!(counted(rule, &[(100.0, Side::North), (60.0, Side::South)]), 20.0);
        assert_relative_eq!(counted(rule, &[(80.0, Side::North), (80.0, Side::South), (50.0, Side::West)]), 25.0);
        // A wall that is a little larger never makes it less.
        assert_relative_eq!(counted(rule, &[(81.0, Side::North), (80.0, Side::South), (50.0, Side::West)]), 25.0);
    }

    /// Half of 300 and 400 m2 at a corner seen across it: 250 m2 of 500. By hand.
    #[test]
    fn walls_by_elevation() {
        let corner = [(300.0, Side::North), (400.0, Side::East)];
        assert_relative_eq!(counted(WallRule::GreatestElevation, &corner), 250.0);
        assert_relative_eq!(counted(WallRule::WindDriven, &corner), 250.0);
        let facing = [(300.0, Side::North), (300.0, Side::South)];
        assert_relative_eq!(counted(WallRule::GreatestElevation, &facing), 150.0);
        assert_relative_eq!(counted(WallRule::WindDriven, &facing), 0.0);
        assert_relative_eq!(counted(WallRule::HalfOfEach, &facing), 300.0);
        assert_relative_eq!(counted(WallRule::HalfOfLargest, &[(300.0, Side::North), (90.0, Side::East)]), 150.0);
        assert_relative_eq!(counted(WallRule::None, &facing), 0.0);
    }

    #[test]
    fn names_stand_in_the_order_of_the_rules() {
        for (name, rule) in WallRule::NAMED {
            assert_eq!(rule.name(), name);
        }
        for (name, risk) in Risk::NAMED {
            assert_eq!(risk.name(), name);
        }
    }
}
