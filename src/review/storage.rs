//! A storm through the storage of a roof, as a second opinion: no code gives credit for it, and no verdict heeds it.
//!
//! The storm of a case is one block: for its duration the whole demand of the case runs in, what other areas send arriving at
//! once. Water stands level, as a wedge on an even slope and else on a level roof; the room that a sagging roof makes is not
//! counted, nor the primary drains. Water runs in until it stands at the lowest sill that passes any; from there the layout's
//! capacity is followed to the end of the storm, and then down to where hardly any head is left.

use rayon::prelude::*;

use crate::hydraulics::level_pool::{LevelPool, Moment, RoutingError, when};
use crate::roof::layout::{self, Group};
use crate::roof::{Catchment, Given, Pool, Roof, Situation};
use crate::units::{Flow, Length, Time, Volume};

/// How far above the sill water counts as drained: a weir never comes quite down to its sill. A tenth of an inch.
pub const DRAINED: Length = Length::inches(0.1);

/// Error in level that a step may make, and nearness to the steady level that counts as having reached it: a
/// thousandth of a millimetre.
const ACCURACY: Length = Length::from_m(1e-6);

/// Head at which a sill that passes water does so.
const TRICKLE: Length = Length::from_m(1e-6);

/// Longest that a roof is watched draining: 30 days.
const LONGEST: Time = Time::from_s(30.0 * 86_400.0);

/// What the storage of the roof would do for given layouts.
#[derive(Clone, Debug, PartialEq)]
pub struct Storage {
    /// Each layout, in their order, in every case; none in a case whose storm has no duration.
    pub layouts: Vec<Vec<Option<Routed>>>,
}

/// The storm through the storage of one layout in one case.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Routed {
    /// How long the storm of the case lasts.
    pub duration: Time,
    /// The level at which water would stand were it to rain for ever; none where the layout is overwhelmed.
    pub steady: Option<Length>,
    /// The highest level, at the end of the storm.
    pub peak: Length,
    /// The lowest sill that passes water; none where none does.
    pub sill: Option<Length>,
    /// When water reaches that sill, if it rains long enough.
    pub fills: Option<Time>,
    /// From the end of the storm until water stands no more than [`DRAINED`] above that sill; none where the storm does not
    /// reach the sill, or where draining takes longer than a month.
    pub drains: Option<Time>,
}

/// Routes the storm through the storage of every given layout, in every case.
///
/// # Errors
/// [`RoutingError`] where a pond cannot be followed to the end of the storm.
pub fn storage(roof: &Roof, given: &[Given]) -> Result<Storage, RoutingError> {
    let of_layout = |given: &Given| {
        let (groups, area) = (given.groups(), &roof.areas[given.area]);
        let of_case = |situation: &Situation<'_>| {
            let duration = roof.duration_in(given.area, situation.case);
            duration.map(|duration| routed(&groups, area, situation, duration)).transpose()
        };
        roof.situations(given.area).iter().map(of_case).collect()
    };
    let layouts = given.par_iter().map(of_layout).collect::<Result<_, _>>()?;
    Ok(Storage { layouts })
}

fn routed(
    groups: &[Group<'_>],
    area: &Catchment,
    situation: &Situation<'_>,
    duration: Time,
) -> Result<Routed, RoutingError> {
    let pool = layout::pool(groups, situation);
    let steady = layout::state(groups, situation).water.map(|water| water.level);
    let sill = lowest_sill(&pool);
    let demand = situation.demand;
    let volume = |level| area.surface.volume(area.area, level);
    let fills = sill.map(|sill| time_of(volume(sill), demand));
    let Some((sill, fills)) = sill.zip(fills.filter(|&fills| fills < duration)) else {
        let peak = area.surface.level(area.area, Volume::from_m3(demand.m3_per_s() * duration.s()));
        return Ok(Routed { duration, steady, peak, sill, fills, drains: None });
    };
    let outflow = |stored| pool.capacity(area.surface.level(area.area, stored));
    let accuracy = Volume::from_m3(area.area.m2() * ACCURACY.m());
    let rain = LevelPool { inflow: |_: Time| demand, outflow, accuracy };
    // What is as good as the steady storage stays so: water only comes nearer to it.
    let full = steady.map(|steady| volume(steady - ACCURACY));
    let from = rain.moment(fills, volume(sill));
    let storm = rain.route(from, duration, |here| full.is_some_and(|full| here.stored >= full))?;
    let crest = storm[storm.len() - 1].stored;
    let peak = area.surface.level(area.area, crest);
    let dry = LevelPool { inflow: |_: Time| Flow::ZERO, outflow, accuracy };
    let drains = drained(&dry, crest, volume(sill + DRAINED))?;
    Ok(Routed { duration, steady, peak, sill: Some(sill), fills: Some(fills), drains })
}

/// How long so much water takes to run in.
fn time_of(volume: Volume, inflow: Flow) -> Time {
    Time::from_s(volume.m3() / inflow.m3_per_s())
}

/// The lowest sill at which any device that still works passes water.
fn lowest_sill(pool: &Pool) -> Option<Length> {
    let passes = |sill: &Length| pool.capacity(*sill + TRICKLE) > Flow::ZERO;
    pool.outlets.iter().map(|outlet| outlet.sill).filter(passes).reduce(Length::min)
}

/// How long a pond takes to drain down to a storage; none where that is longer than anyone watches.
fn drained<I: Fn(Time) -> Flow, O: Fn(Volume) -> Flow>(
    pond: &LevelPool<I, O>,
    from: Volume,
    to: Volume,
) -> Result<Option<Time>, RoutingError> {
    if from <= to {
        return Ok(Some(Time::ZERO));
    }
    let start = pond.moment(Time::ZERO, from);
    let moments = pond.route(start, LONGEST, |here: &Moment| here.stored <= to)?;
    Ok(match &moments[..] {
        [.., before, after] if after.stored <= to => Some(when(before, after, to)),
        _ => None,
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::device::{Device, Site, Size};
    use crate::roof::{Case, Limits, Ponding, Rise, Surface};
    use crate::units::{Area, Intensity};
    use approx::assert_relative_eq;

    fn catchment(m2: f64, rise: Option<Rise>) -> Catchment {
        Catchment {
            name: "roof".into(),
            area: Area::from_m2(m2),
            surface: Surface { rise, ..Surface::default() },
            ..Catchment::default()
        }
    }

    fn situation(case: &Case, demand: Flow) -> Situation<'_> {
        Situation {
            case,
            demand,
            limits: Limits::default(),
            ponding: Ponding::default(),
            parapet: None,
            site: Site::default(),
            freeboard: None,
            channel: None,
        }
    }

    fn minutes(area: &Catchment, rain: &str, sill: Length, minutes: f64) -> Routed {
        let size = Size::of(Device::Open { width: Length::inches(12.0) });
        let groups = [Group { size: &size, count: 2, set_height: sill }];
        let case = Case::as_designed();
        let demand = rain.parse::<Intensity>().unwrap() * area.area;
        routed(&groups, area, &situation(&case, demand), Time::from_s(60.0 * minutes)).unwrap()
    }

    /// 2 in of water at 8 in/h take 15 min on a level roof: a storm of 14 min does not reach a sill 2 in up, and leaves
    /// 8 x 14 / 60 = 1.867 in. By hand.
    #[test]
    fn a_short_storm_only_fills_the_roof() {
        let short = minutes(&catchment(400.0, None), "8 in/h", Length::inches(2.0), 14.0);
        assert_relative_eq!(short.fills.unwrap().s(), 900.0, max_relative = 1e-9);
        assert_relative_eq!(short.peak.to_inches(), 8.0 * 14.0 / 60.0, max_relative = 1e-9);
        assert_eq!(short.drains, None);
    }

    /// On a wedge of 1/4 in/ft over 20 ft, 5 in at the wall, 2 in of level hold 2 x 2 / 10 = 0.4 in of rain: 3 min at 8 in/h.
    /// By hand.
    #[test]
    fn a_wedge_fills_sooner() {
        let rise = Rise { slope: 0.25 / 12.0, distance: Length::inches(240.0) };
        let routed = minutes(&catchment(400.0, Some(rise)), "8 in/h", Length::inches(2.0), 15.0);
        assert_relative_eq!(routed.fills.unwrap().s(), 180.0, max_relative = 1e-9);
    }

    /// The level rises over the sill as the closed form of a weir in a pond with vertical sides says, and a storm without end
    /// comes to the steady level.
    #[test]
    fn the_peak_follows_the_closed_form_and_comes_to_the_steady_level() {
        let area = catchment(400.0, None);
        let routed = minutes(&area, "8 in/h", Length::ZERO, 10.0);
        let steady = routed.steady.unwrap();
        let x = routed.peak / steady;
        let (u, root3) = (x.sqrt(), 3.0_f64.sqrt());
        let tau = ((1.0 + u + x) / ((1.0 - u) * (1.0 - u))).ln() / 3.0
            - 2.0 / root3 * (((2.0 * u + 1.0) / root3).atan() - std::f64::consts::PI / 6.0);
        let rain = "8 in/h".parse::<Intensity>().unwrap().m_per_s();
        assert_relative_eq!(tau * steady.m() / rain, 600.0, max_relative = 1e-3);
        let long = minutes(&area, "8 in/h", Length::ZERO, 6000.0);
        assert!(long.peak <= long.steady.unwrap());
        assert_relative_eq!(long.peak.m(), steady.m(), epsilon = 2.0 * ACCURACY.m());
    }

    /// One square metre that 50 l/s run onto stands at the steady level within seconds, and is followed in a few steps.
    #[test]
    fn a_small_pond_under_much_water_comes_to_its_level_at_once() {
        let area = catchment(1.0, None);
        let size = Size::of(Device::Open { width: Length::inches(12.0) });
        let groups = [Group { size: &size, count: 2, set_height: Length::inches(2.0) }];
        let case = Case::as_designed();
        let situation = situation(&case, Flow::from_m3_per_s(0.05));
        let routed = routed(&groups, &area, &situation, Time::from_s(86_400.0)).unwrap();
        assert_relative_eq!(routed.peak.m(), routed.steady.unwrap().m(), epsilon = 2.0 * ACCURACY.m());
        assert!(routed.drains.unwrap() < Time::from_s(60.0));
    }

    /// With the only device of the lower sill blocked, water leaves at the other one.
    #[test]
    fn a_blocked_sill_passes_nothing() {
        let size = Size::of(Device::Open { width: Length::inches(12.0) });
        let group = |inches| Group { size: &size, count: 1, set_height: Length::inches(inches) };
        let case = Case { blocked: 1, ..Case::as_designed() };
        let sills = |groups: &[Group<'_>]| lowest_sill(&layout::pool(groups, &situation(&case, Flow::gpm(100.0))));
        assert_eq!(sills(&[group(2.0), group(3.0)]), Some(Length::inches(3.0)));
        assert_eq!(sills(&[group(2.0)]), None);
    }
}
