//! The flow that each area must pass: its own rain, half of the walls above it, and what runs onto it.
//!
//! Receiving is a graph without loops: an area's demand is known once those it receives from are. Flows are steady and a
//! share belongs to an area, so no layout of one area changes the demand of another.

use crate::units::{Area, Flow};

use super::{Catchment, Storm};

/// Areas that receive from one another in a circle, each from the next, as indices; the first stands again at the end.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Circle(pub Vec<usize>);

/// Area that rain is counted on: the roof and the counted part of its walls.
pub fn catching(area: &Catchment) -> Area {
    area.area + area.wall * area.wall_share
}

/// Flow that each area must pass under the storm, Q = i (A + share of wall) + shares of what it receives.
///
/// # Errors
/// The [`Circle`] of areas where receiving has no beginning.
///
/// # Source
/// Q = A i, exact; practice writes 0.0104 A i in gal/min, ft2 and in/h, 0.10 % more. ASCE 7-05 commentary eq. C8-1.
pub fn flows(storm: &Storm, areas: &[Catchment]) -> Result<Vec<Flow>, Circle> {
    let mut known: Vec<Option<Flow>> = vec![None; areas.len()];
    for start in 0..areas.len() {
        let mut path = vec![start];
        while let Some(&here) = path.last() {
            let unknown = areas[here].receives.iter().map(|receipt| receipt.from).find(|&from| known[from].is_none());
            match unknown {
                Some(from) => {
                    if let Some(at) = path.iter().position(|&passed| passed == from) {
                        path.push(from);
                        return Err(Circle(path.split_off(at)));
                    }
                    path.push(from);
                }
                None => {
                    known[here] = Some(own(storm, areas, here, &known));
                    path.pop();
                }
            }
        }
    }
    Ok(known.into_iter().flatten().collect())
}

fn own(storm: &Storm, areas: &[Catchment], here: usize, known: &[Option<Flow>]) -> Flow {
    let received = areas[here].receives.iter().map(|receipt| known[receipt.from].unwrap_or(Flow::ZERO) * receipt.share);
    storm.intensity * catching(&areas[here]) + received.sum()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::roof::{Parapet, Receipt, Surface};
    use crate::units::{Intensity, Length};
    use approx::assert_relative_eq;

    fn storm(inches_per_hour: &str) -> Storm {
        let intensity: Intensity = format!("{inches_per_hour} in/h").parse().unwrap();
        Storm { intensity, ..Storm::default() }
    }

    fn area(roof_ft2: u32, wall_ft2: u32, receives: &[(usize, f64)]) -> Catchment {
        Catchment {
            name: String::new(),
            area: format!("{roof_ft2} ft2").parse().unwrap(),
            wall: format!("{wall_ft2} ft2").parse().unwrap(),
            wall_share: 0.5,
            edge: None,
            gap: Length::ZERO,
            parapet: Parapet::default(),
            roof_at_wall: Length::ZERO,
            surface: Surface::default(),
            receives: receives.iter().map(|&(from, share)| Receipt { from, share }).collect(),
            ponding_head: None,
            kinds: None,
            count: 1..=8,
            set_heights: None,
            limits: Vec::new(),
            channel: None,
        }
    }

    /// 11 500 ft2 at 1.5 in/h: 179 gpm as printed in a rain-load sheet; exact 179.22. Then 97.5 gpm from 2500 ft2 at
    /// 3.75 in/h by the rounded constant, 0.1 % high. Source: ASCE 7 commentary examples as quoted there.
    #[test]
    fn published_demands() {
        let gpm = |rain: &str, roof| flows(&storm(rain), &[area(roof, 0, &[])]).unwrap()[0].to_gpm();
        assert_relative_eq!(gpm("1.5", 11_500), 179.221, max_relative = 1e-5);
        assert_relative_eq!(gpm("3.75", 2500), 97.5, max_relative = 1.1e-3);
    }

    /// 38 mm/h on 1068.4 m2: 0.0113 m3/s as printed; 38 * 1068.4 / 3.6e6 by hand.
    #[test]
    fn published_demand_in_si() {
        let mut one = area(0, 0, &[]);
        one.area = Area::from_m2(1068.4);
        let storm = Storm { intensity: "38 mm/h".parse().unwrap(), ..storm("1") };
        assert_relative_eq!(flows(&storm, &[one]).unwrap()[0].m3_per_s(), 0.011_277_6, max_relative = 1e-5);
    }

    /// 10 000 ft2 and half of 100 x 20 ft of wall at 4 in/h: 457.6 gpm by the rounded constant. Worked by hand.
    #[test]
    fn half_of_a_wall_counts() {
        let flow = flows(&storm("4"), &[area(10_000, 2000, &[])]).unwrap()[0];
        assert_relative_eq!(flow.to_gpm(), 457.6, max_relative = 1.1e-3);
    }

    #[test]
    fn what_runs_down_adds_up() {
        let areas = [area(1000, 0, &[(1, 0.5), (2, 1.0)]), area(2000, 0, &[(2, 0.25)]), area(4000, 0, &[])];
        let flows = flows(&storm("2"), &areas).unwrap();
        // 4000; 2000 + 1000; 1000 + 1500 + 4000
        assert_relative_eq!(flows[0] / flows[2], 6500.0 / 4000.0, max_relative = 1e-12);
        assert_relative_eq!(flows[1] / flows[2], 3000.0 / 4000.0, max_relative = 1e-12);
    }

    #[test]
    fn a_circle_is_named() {
        let areas = [area(1000, 0, &[]), area(1000, 0, &[(2, 1.0)]), area(1000, 0, &[(1, 1.0)])];
        assert_eq!(flows(&storm("2"), &areas), Err(Circle(vec![1, 2, 1])));
        assert_eq!(flows(&storm("2"), &[area(1000, 0, &[(0, 1.0)])]), Err(Circle(vec![0, 0])));
    }
}
