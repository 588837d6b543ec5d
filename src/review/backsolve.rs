//! Backwards from a given layout: the one value at which it just holds every case, all else as given.
//!
//! What holds is what the search asks: the layout carries the demand at the highest level allowed, in every case, with the
//! freeboard asked for. Less rain, less roof, lower sills, wider openings, more devices and less blocking can only help, so
//! each unknown has one value that parts what holds from what does not; it is found on the same model to the last bit, and both
//! sides of it are looked at. Whether the layout can be built so (the edge, the parapet, the roof at the wall) is not asked
//! here.

use crate::device::{Device, Size};
use crate::roof::layout::{Asked, Group, least_spare};
use crate::roof::{Given, Limits, Roof, Situation};
use crate::root::crossing;
use crate::search::Options;
use crate::units::{Area, Flow, Intensity, Length, Load};

/// What may be asked for.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Unknown {
    /// The most rain.
    Rain,
    /// The most roof.
    Area,
    /// The highest sills.
    SetHeight,
    /// The narrowest openings.
    Width,
    /// The fewest devices.
    Count,
    /// The lowest limits.
    Limit,
    /// The most devices blocked.
    Blocked,
}

impl Unknown {
    /// All of them, in the order in which they are told.
    pub const ALL: [Self; 7] =
        [Self::Rain, Self::Area, Self::SetHeight, Self::Width, Self::Count, Self::Limit, Self::Blocked];

    /// The name on the command line and in reports.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Rain => "rain",
            Self::Area => "area",
            Self::SetHeight => "set-height",
            Self::Width => "width",
            Self::Count => "count",
            Self::Limit => "limit",
            Self::Blocked => "blocked",
        }
    }
}

/// The value at which a layout just holds; the unknowns that no value makes hold give none.
#[derive(Clone, Debug, PartialEq)]
pub enum Solved {
    /// Most intensity; areas that run onto this one have the same.
    Rain(Option<Intensity>),
    /// Most roof of its own, what it receives as given.
    Area(Option<Area>),
    /// How far all sills may be moved together: up, or below zero down.
    SetHeight(Option<Length>),
    /// By how much all openings with a width may be changed together: below zero narrower. An inner none where even openings
    /// [`WIDEST`] wider do not hold; none where the layout has no such opening.
    Width(Option<Option<Length>>),
    /// Fewest of each group, the others as given; a group may not be needed at all.
    Count(Vec<Option<u32>>),
    /// By how much the limits of all cases may be moved together, loads and depths each with the others as given. None where
    /// no such limit is given; an inner none where no value holds, as another limit or the freeboard fails.
    Limit {
        /// Of loads: below zero lower.
        load: Option<Option<Load>>,
        /// Of depths.
        depth: Option<Option<Length>>,
    },
    /// How many more may be blocked in every case; none where the cases do not hold as given.
    Blocked(Option<u32>),
}

/// How much wider openings are tried at most.
pub const WIDEST: Length = Length::from_m(10.0);
/// Most devices of one group that are tried.
const MOST_DEVICES: u32 = 10_000;
/// Part of the demand below which a layout carries nothing worth telling.
const LEAST: f64 = 1e-6;

/// Solves for one unknown of a layout.
pub fn backsolve(roof: &Roof, options: &Options, given: &Given, unknown: Unknown) -> Solved {
    let back = Back {
        situations: roof.situations(given.area),
        groups: given.groups(),
        asked: Asked { freeboard: options.freeboard },
    };
    match unknown {
        Unknown::Rain => Solved::Rain(back.rain(roof, given.area).map(|factor| roof.storm.intensity * factor)),
        Unknown::Area => Solved::Area(back.area(roof, given.area)),
        Unknown::SetHeight => Solved::SetHeight(back.set_height()),
        Unknown::Width => Solved::Width(back.width()),
        Unknown::Count => Solved::Count((0..back.groups.len()).map(|group| back.count(group)).collect()),
        Unknown::Limit => back.limit(roof, given.area),
        Unknown::Blocked => Solved::Blocked(back.blocked()),
    }
}

/// A layout whose one value is looked for.
struct Back<'r> {
    situations: Vec<Situation<'r>>,
    groups: Vec<Group<'r>>,
    asked: Asked,
}

impl Back<'_> {
    /// The greatest factor on every rain that holds in every case.
    fn rain(&self, roof: &Roof, area: usize) -> Option<f64> {
        self.greatest_demand(LEAST, |situation, factor| roof.demand_with(area, situation.case, Area::ZERO, factor))
    }

    /// The most roof of an area's own that holds in every case; none where what it receives is more already.
    fn area(&self, roof: &Roof, area: usize) -> Option<Area> {
        let own = roof.areas[area].area;
        let part = self
            .greatest_demand(LEAST, |situation, part| roof.demand_with(area, situation.case, own * (part - 1.0), 1.0));
        part.map(|part| own * part)
    }

    /// The greatest value of what a demand rises with that holds in every case, from a least one on; 1 is as it is.
    fn greatest_demand(&self, least: f64, demand: impl Fn(&Situation<'_>, f64) -> Flow) -> Option<f64> {
        let spare = |value: f64| {
            let mut situations = self.situations.clone();
            for situation in &mut situations {
                situation.demand = demand(situation, value);
            }
            least_spare(&self.groups, &situations, self.asked)
        };
        let mut high = 1.0;
        while spare(high) >= 0.0 && high < 1.0 / LEAST {
            high *= 2.0;
        }
        greatest(spare, least, high)
    }

    /// The greatest lift of all sills that holds, below zero where they must come down; none where sills at the low point do
    /// not hold.
    fn set_height(&self) -> Option<Length> {
        let lowest = self.groups.iter().map(|group| group.set_height).fold(WIDEST, Length::min);
        let highest =
            self.situations.iter().map(|situation| situation.allowable_level().m()).filter(|level| level.is_finite());
        let high = highest.fold(0.0, f64::max) + 1.0;
        let spare = |lift: f64| {
            let lifted: Vec<Group<'_>> = self
                .groups
                .iter()
                .map(|group| Group { set_height: group.set_height + Length::from_m(lift), ..*group })
                .collect();
            least_spare(&lifted, &self.situations, self.asked)
        };
        greatest(spare, -lowest.m(), high).map(Length::from_m)
    }

    /// The least change of all widths that holds.
    fn width(&self) -> Option<Option<Length>> {
        let widths =
            self.groups.iter().filter_map(|group| group.size.device.width().filter(|_| is_wide(&group.size.device)));
        let narrowest = widths.reduce(Length::min)?;
        let spare = |narrower: f64| {
            let sizes: Vec<Size> =
                self.groups.iter().map(|group| widened(group.size, Length::from_m(-narrower))).collect();
            let changed: Vec<Group<'_>> =
                self.groups.iter().zip(&sizes).map(|(group, size)| Group { size, ..*group }).collect();
            least_spare(&changed, &self.situations, self.asked)
        };
        // Down to where the narrowest is a thousandth of what it was.
        Some(greatest(spare, -WIDEST.m(), narrowest.m() * 0.999).map(|narrower| Length::from_m(-narrower)))
    }

    /// The fewest of one group that hold beside the others; none where none do.
    fn count(&self, group: usize) -> Option<u32> {
        let holds = |count: u32| {
            let mut groups = self.groups.clone();
            groups[group].count = count;
            least_spare(&groups, &self.situations, self.asked) >= 0.0
        };
        let (mut fails, mut passes) = (0, MOST_DEVICES);
        if holds(0) {
            return Some(0);
        }
        if !holds(passes) {
            return None;
        }
        while passes - fails > 1 {
            let middle = u32::midpoint(fails, passes);
            if holds(middle) { passes = middle } else { fails = middle }
        }
        Some(passes)
    }

    /// By how much the limits of the area may be moved: by the case that is nearest to its limit, or farthest over. The depth
    /// that a rule set caps stays.
    fn limit(&self, roof: &Roof, area: usize) -> Solved {
        let own = &roof.areas[area].limits;
        let waters: Option<Vec<_>> =
            self.situations.iter().map(|situation| crate::roof::layout::state(&self.groups, situation).water).collect();
        let waters = waters.unwrap_or_default();
        let pairs = || waters.iter().zip(&self.situations);
        let loads = pairs().filter_map(|(water, situation)| Some((water.load - situation.limits.load?).pa()));
        let depths = waters.iter().zip(own).filter_map(|(water, own)| Some((water.depth() - own.depth?).m()));
        let finite = |value: &f64| value.is_finite();
        let load = loads.reduce(f64::max).filter(finite).map(Load::from_pa);
        let depth = depths.reduce(f64::max).filter(finite).map(Length::from_m);
        let given = |has: fn(&Limits) -> bool| own.iter().any(has);
        let cap = |situation: &Situation<'_>| roof.bases[situation.case.basis?].areas[area].depth;
        // Far beyond any roof, so that the others alone decide.
        let without_loads =
            || self.holds_with(|here| Limits { load: here.limits.load.map(|_| Load::from_pa(1e8)), ..here.limits });
        let without_depths =
            || self.holds_with(|here| Limits { depth: cap(here).or(Some(Length::from_m(1e4))), ..here.limits });
        Solved::Limit {
            load: given(|limits| limits.load.is_some()).then(|| load.filter(|_| without_loads())),
            depth: given(|limits| limits.depth.is_some()).then(|| depth.filter(|_| without_depths())),
        }
    }

    /// Whether every case holds under other limits.
    fn holds_with(&self, limits: impl Fn(&Situation<'_>) -> Limits) -> bool {
        let mut situations = self.situations.clone();
        for situation in &mut situations {
            situation.limits = limits(situation);
        }
        least_spare(&self.groups, &situations, self.asked) >= 0.0
    }

    /// How many more devices may be blocked in every case.
    fn blocked(&self) -> Option<u32> {
        let total: u32 = self.groups.iter().map(|group| group.count).sum();
        let holds = |more: u32| {
            let cases: Vec<_> = self
                .situations
                .iter()
                .map(|situation| crate::roof::Case { blocked: situation.case.blocked + more, ..situation.case.clone() })
                .collect();
            let situations: Vec<_> =
                self.situations.iter().zip(&cases).map(|(situation, case)| Situation { case, ..*situation }).collect();
            least_spare(&self.groups, &situations, self.asked) >= 0.0
        };
        (0..=total).take_while(|&more| holds(more)).last()
    }
}

/// The greatest value from `low` on at which there is something to spare; none where there is nothing even at `low`. `spare`
/// falls as the value rises.
pub(super) fn greatest(spare: impl Fn(f64) -> f64, low: f64, high: f64) -> Option<f64> {
    if spare(high) >= 0.0 {
        return Some(high);
    }
    if spare(low) <= 0.0 {
        return (spare(low) == 0.0).then_some(low);
    }
    crossing(|value| -spare(value), low, high).ok().map(|(holds, _)| holds)
}

/// Whether a device has a width that may be made otherwise: that of an opening, not of a tested body or a pipe.
pub(crate) fn is_wide(device: &Device) -> bool {
    matches!(device, Device::Open { .. } | Device::Closed { .. } | Device::Edge { .. })
}

/// The size with its opening so much wider, below zero narrower.
pub(super) fn widened(size: &Size, by: Length) -> Size {
    let mut size = size.clone();
    if let Device::Open { width } | Device::Closed { width, .. } | Device::Edge { width } = &mut size.device {
        *width = *width + by;
    }
    size
}
