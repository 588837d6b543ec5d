//! The flow that each area must pass: its own rain, half of the walls above it, and what runs onto it.
//!
//! Receiving is a graph without loops: an area's demand is known once those it receives from are. Flows are steady and a
//! share belongs to an area, so no layout of one area changes the demand of another.
//!
//! What leaves an area leaves by its overflow, all of it, when its primary drains are blocked; else by its primary drains, at
//! most all of it. Which of the two it is on a higher area is open, so an area is sized for the worse: the most that can
//! arrive at once ([`at_once`]). The same water never arrives by both.

use std::collections::{BTreeMap, BTreeSet};

use crate::units::{Area, Flow};

use super::{Catchment, Passed, Receipt, Storm};

/// Areas that receive from one another in a circle, each from the next, as indices; the first stands again at the end.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Circle(pub Vec<usize>);

/// Area that rain is counted on: the roof and the counted part of its walls.
pub fn catching(area: &Catchment) -> Area {
    area.area + area.wall * area.wall_share
}

/// Flow of the rain on an area itself, Q = i (A + share of wall).
///
/// # Source
/// Q = A i, exact; practice writes 0.0104 A i in gal/min, ft2 and in/h, 0.10 % more. ASCE 7-05 commentary eq. C8-1.
pub fn own(storm: &Storm, area: &Catchment) -> Flow {
    storm.intensity * catching(area)
}

/// Flow that each area must pass under the storm: its own, and the most that it can receive at once.
///
/// # Errors
/// The [`Circle`] of areas where receiving has no beginning.
pub fn flows(storm: &Storm, areas: &[Catchment]) -> Result<Vec<Flow>, Circle> {
    flows_of(areas, |area| own(storm, &areas[area]))
}

/// The same with what falls on each area itself given by its index.
///
/// # Errors
/// The [`Circle`] of areas where receiving has no beginning.
pub fn flows_of(areas: &[Catchment], own: impl Fn(usize) -> Flow) -> Result<Vec<Flow>, Circle> {
    downstream(areas, 0..areas.len())?;
    Ok((0..areas.len()).map(|area| worst(areas, &own, area).leaving(area)).collect())
}

/// What runs when the most that is possible at once arrives at one area.
#[derive(Clone, Debug, PartialEq)]
pub struct AtOnce {
    /// The area and those that anything arrives from, by their indices.
    leaving: BTreeMap<usize, Leaving>,
}

/// What leaves an area.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Leaving {
    flow: Flow,
    by_primary: bool,
}

impl AtOnce {
    /// What leaves an area then; zero for one that nothing arrives from.
    pub fn leaving(&self, area: usize) -> Flow {
        self.leaving.get(&area).map_or(Flow::ZERO, |leaving| leaving.flow)
    }

    /// What arrives then by one way; none where the water of the other area takes its other way out.
    pub fn arriving(&self, receipt: &Receipt) -> Option<Flow> {
        let leaving = self.leaving.get(&receipt.from)?;
        let open = match receipt.what {
            Passed::All => true,
            Passed::Overflow => !leaving.by_primary,
            Passed::Primary => leaving.by_primary,
        };
        open.then(|| leaving.flow * receipt.share)
    }
}

/// What runs when the most that is possible at once arrives at an area; nothing where areas receive in a circle.
///
/// Each area above lets its water out by its primary drains or by its overflow. What of its water arrives here by either is
/// known once the areas below it are, and the greater of the two is taken: as flows add up, the greatest of each is the
/// greatest of all. Only the areas above are visited, however many the roof has.
pub fn at_once(storm: &Storm, areas: &[Catchment], area: usize) -> AtOnce {
    worst(areas, |area| own(storm, &areas[area]), area)
}

fn worst(areas: &[Catchment], own: impl Fn(usize) -> Flow, area: usize) -> AtOnce {
    let order = downstream(areas, [area]).unwrap_or_default();
    // The part of what leaves each area that arrives here: by its primary drains, and by its overflow.
    let mut part: BTreeMap<_, _> = order.iter().map(|&above| (above, (0.0_f64, 0.0_f64))).collect();
    part.insert(area, (0.0, 1.0));
    for &below in order.iter().rev() {
        let arrives = part[&below].0.max(part[&below].1);
        for receipt in &areas[below].receives {
            let (primary, overflow) = part.entry(receipt.from).or_default();
            if receipt.what != Passed::Overflow {
                *primary += receipt.share * arrives;
            }
            if receipt.what != Passed::Primary {
                *overflow += receipt.share * arrives;
            }
        }
    }
    let mut at_once = AtOnce { leaving: BTreeMap::new() };
    for &here in &order {
        let received = areas[here].receives.iter().filter_map(|receipt| at_once.arriving(receipt)).sum();
        let (primary, overflow) = part[&here];
        let leaving = Leaving { flow: own(here) + received, by_primary: primary > overflow };
        at_once.leaving.insert(here, leaving);
    }
    at_once
}

/// The areas given and all that run onto them, each behind those that it receives from.
fn downstream(areas: &[Catchment], lowest: impl IntoIterator<Item = usize>) -> Result<Vec<usize>, Circle> {
    let mut order = Vec::new();
    let mut known = BTreeSet::new();
    for start in lowest {
        let mut path = if known.contains(&start) { Vec::new() } else { vec![start] };
        while let Some(&here) = path.last() {
            let unknown = areas[here].receives.iter().map(|receipt| receipt.from).find(|from| !known.contains(from));
            match unknown {
                Some(from) => {
                    if let Some(at) = path.iter().position(|&passed| passed == from) {
                        path.push(from);
                        return Err(Circle(path.split_off(at)));
                    }
                    path.push(from);
                }
                None => {
                    known.insert(here);
                    order.push(here);
                    path.pop();
                }
            }
        }
    }
    Ok(order)
}

#[cfg(test)]
mod tests {
    use super::*;

    use crate::units::Intensity;
    use approx::assert_relative_eq;

    fn storm(inches_per_hour: &str) -> Storm {
        let intensity: Intensity = format!("{inches_per_hour} in/h").parse().unwrap();
        Storm { intensity, ..Storm::default() }
    }

    fn area(roof_ft2: u32, wall_ft2: u32, receives: &[(usize, f64)]) -> Catchment {
        Catchment {
            area: format!("{roof_ft2} ft2").parse().unwrap(),
            wall: format!("{wall_ft2} ft2").parse().unwrap(),
            receives: receives.iter().map(|&(from, share)| Receipt { from, share, what: Passed::All }).collect(),
            ..Catchment::default()
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

    /// What one area receives: from which, its share, and of what.
    type Receipts<'a> = &'a [(usize, f64, Passed)];

    /// Areas of so many square feet with what each receives; under a rain of 96.25 in/h a square foot gives 1 gal/min.
    fn cascade(areas: &[(u32, Receipts<'_>)]) -> Vec<Catchment> {
        let receipts = |receives: Receipts<'_>| {
            receives.iter().map(|&(from, share, what)| Receipt { from, share, what }).collect()
        };
        areas.iter().map(|&(ft2, receives)| Catchment { receives: receipts(receives), ..area(ft2, 0, &[]) }).collect()
    }

    fn gpm(areas: &[Catchment]) -> Vec<f64> {
        flows(&storm("96.25"), areas).unwrap().iter().map(|flow| (flow.to_gpm() * 1e4).round() / 1e4).collect()
    }

    /// A way by itself brings its share of all, whichever it is: a steady overflow is all that the area gets, and so at most is
    /// what its primary drains pass.
    #[test]
    fn each_way_by_itself_brings_its_share_of_all() {
        for what in Passed::EVERY {
            assert_eq!(gpm(&cascade(&[(1000, &[]), (500, &[(0, 0.5, what)])])), [1000.0, 1000.0], "{what:?}");
        }
    }

    /// Both ways run here: 0.8 by the primary drains, 0.5 by the overflow. The same water comes once: 500 + 800.
    #[test]
    fn the_same_water_comes_once() {
        let both: Receipts<'_> = &[(0, 0.5, Passed::Overflow), (0, 0.8, Passed::Primary)];
        let areas = cascade(&[(1000, &[]), (500, both)]);
        assert_eq!(gpm(&areas), [1000.0, 1300.0]);
        let most = at_once(&storm("96.25"), &areas, 1);
        assert_eq!(most.arriving(&areas[1].receives[0]), None);
        assert_relative_eq!(most.arriving(&areas[1].receives[1]).unwrap().to_gpm(), 800.0, max_relative = 1e-12);
    }

    /// A penthouse of 1000 lets its primary drains out on one terrace and its overflow on another; both run down to a court.
    /// Each terrace must pass the 1000, the court gets them once: 100 + 300 + 400 + 1000, not 2800.
    #[test]
    fn water_that_takes_one_of_two_ways_arrives_once() {
        let areas = cascade(&[
            (1000, &[]),
            (300, &[(0, 1.0, Passed::Primary)]),
            (400, &[(0, 1.0, Passed::Overflow)]),
            (100, &[(1, 1.0, Passed::All), (2, 1.0, Passed::All)]),
        ]);
        assert_eq!(gpm(&areas), [1000.0, 1300.0, 1400.0, 1800.0]);
    }

    /// Every way of every area tried, on random cascades of six: the most of them is what is counted.
    #[test]
    fn the_most_at_once_is_the_most_of_all_ways() {
        let mut state = 7_u64;
        let mut dice = |sides: u64| {
            state = state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
            (state >> 33) % sides
        };
        for _ in 0..300 {
            let mut areas = cascade(&[(100, &[] as Receipts<'_>); 6]);
            for (here, area) in areas.iter_mut().enumerate().skip(1) {
                area.area = area.area * (1 + dice(9)) as f64;
                for _ in 0..dice(4) {
                    let what = Passed::EVERY[dice(3) as usize];
                    let share = (1 + dice(4)) as f64 / 4.0;
                    area.receives.push(Receipt { from: dice(here as u64) as usize, share, what });
                }
            }
            let storm = storm("2");
            let counted = flows(&storm, &areas).unwrap();
            let mut most = vec![Flow::ZERO; 6];
            for ways in 0..64_usize {
                let mut leaving = [Flow::ZERO; 6];
                for here in 0..6 {
                    let open = |receipt: &&Receipt| match receipt.what {
                        Passed::All => true,
                        Passed::Primary => ways >> receipt.from & 1 == 1,
                        Passed::Overflow => ways >> receipt.from & 1 == 0,
                    };
                    let receives = areas[here].receives.iter().filter(open);
                    let received: Flow = receives.map(|receipt| leaving[receipt.from] * receipt.share).sum();
                    leaving[here] = storm.intensity * areas[here].area + received;
                    most[here] = most[here].max(leaving[here]);
                }
            }
            for (counted, most) in counted.iter().zip(&most) {
                assert_relative_eq!(counted, most, max_relative = 1e-12);
            }
        }
    }
}
