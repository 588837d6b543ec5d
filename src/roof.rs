//! The roof: its storm, its areas and what runs onto what, the cases it must withstand, and the water on it.
//!
//! An area has one low point; all heights in it are above that point. For one area in one case a [`Situation`] holds all
//! that decides: the flow that must leave, the limits, what its sag adds. A [`Pool`] is a layout as it stands in a case: all
//! its devices see one level. Steady flow: no credit is taken for water stored on the roof, nor for the primary drains.

use std::ops::RangeInclusive;
use std::sync::Arc;

use crate::device::{Choice, Kind, Law, Site, Size};
use crate::units::{Area, Flow, Intensity, Length, Load, Money, ReturnPeriod, System, Time};

mod basis;
pub mod channel;
pub mod demand;
mod facts;
pub mod framing;
mod given;
pub mod layout;
pub mod ponding;
mod pool;
mod rainfall;
mod situation;
mod surface;

pub use basis::{AreaBasis, Basis, StandsIn};
pub use facts::{Facts, Primary, Risk, Separation, Side, Wall, WallRule};
pub use given::{Given, GivenGroup};
pub use ponding::Ponding;
pub use pool::{MOST_GROUPS, MOST_OUTLETS, Outlet, Pool, Share, working, working_capacity};
pub use rainfall::{Outside, Rainfall, RainfallFault, Reading, Recurrence};
pub use situation::{Governing, LimitKind, Limits, Situation};
pub use surface::{Rise, Surface};

/// Weight of water that loads are computed with: 62.4 lb/ft3, which is 5.2 psf for each inch of depth.
pub const UNIT_WEIGHT_LB_FT3: f64 = 62.4;

/// Pascals for each metre of water.
pub(crate) const PASCALS_PER_METRE: f64 = UNIT_WEIGHT_LB_FT3 * crate::units::NEWTONS_PER_POUND
    / (crate::units::METRES_PER_FOOT * crate::units::METRES_PER_FOOT * crate::units::METRES_PER_FOOT);

/// Load of a depth of water.
pub fn load_of(depth: Length) -> Load {
    Load::from_pa(PASCALS_PER_METRE * depth.m())
}

/// Depth of water that weighs a load.
pub fn depth_of(load: Load) -> Length {
    Length::from_m(load.pa() / PASCALS_PER_METRE)
}

/// The design rain.
#[derive(Clone, Debug, PartialEq)]
pub struct Storm {
    /// Intensity that every area is sized for, climate counted in.
    pub intensity: Intensity,
    /// Duration over which it is that intense, where stated.
    pub duration: Option<Time>,
    /// How often it is met or passed, where stated.
    pub return_period: Option<ReturnPeriod>,
    /// Where the figure comes from, where stated.
    pub source: Option<String>,
    /// Factor for climate that every intensity is multiplied by.
    pub climate: f64,
    /// The rainfall table, where there is one.
    pub rainfall: Option<Arc<Rainfall>>,
    /// Where in the table the intensity was read; without the climate.
    pub reading: Option<Reading>,
    /// Storms that every case is held under as well.
    pub further: Vec<Further>,
}

impl Default for Storm {
    /// No rain at all.
    fn default() -> Self {
        Self {
            intensity: Intensity::ZERO,
            duration: None,
            return_period: None,
            source: None,
            climate: 1.0,
            rainfall: None,
            reading: None,
            further: Vec::new(),
        }
    }
}

impl Storm {
    /// How long the storm lasts that a case is held under, where stated.
    pub fn duration_in(&self, case: &Case) -> Option<Time> {
        case.storm.and_then(|storm| self.further.get(storm)).map_or(self.duration, |further| further.duration)
    }

    /// How often an intensity, climate counted in, is met or passed over the duration of this storm; none without a table.
    pub fn recurrence(&self, intensity: Intensity) -> Option<Recurrence> {
        self.rainfall.as_ref()?.recurrence(intensity * (1.0 / self.climate), self.duration?).ok()
    }
}

/// A storm that every case is held under besides the design rain.
#[derive(Clone, Debug, PartialEq)]
pub struct Further {
    /// Its name.
    pub name: String,
    /// Its intensity, climate and its own factor counted in.
    pub intensity: Intensity,
    /// Duration over which it is that intense, where stated.
    pub duration: Option<Time>,
    /// How often it is met or passed, where stated.
    pub return_period: Option<ReturnPeriod>,
    /// Factor of its own on the intensity.
    pub factor: f64,
    /// Where in the table it was read; without climate and factor.
    pub reading: Option<Reading>,
}

/// One situation that every layout must withstand. A case changes the design, never the area: all zero and one is "as
/// designed".
#[derive(Clone, Debug, PartialEq)]
pub struct Case {
    /// Its name.
    pub name: String,
    /// How many of the most effective single devices carry nothing.
    pub blocked: u32,
    /// How much higher every sill is built.
    pub sill_error: Length,
    /// What is lost off each side of a scupper's opening.
    pub opening_loss: Length,
    /// Factor on the intensity of the design rain; under a further storm, that of the storm counted in.
    pub rain: f64,
    /// Factor on every device's flow.
    pub discharge: f64,
    /// The flow law of scuppers, in place of the project's choice.
    pub law: Option<Law>,
    /// The further storm it is held under, by its place in [`Storm::further`]; none for the design rain.
    pub storm: Option<usize>,
    /// The rule set by whose basis the demand is counted, its cap on the depth and its freeboard kept, by its place in
    /// [`Roof::bases`]; none for the project's own.
    pub basis: Option<usize>,
}

impl Case {
    /// The layout as drawn, the storm as given.
    pub fn as_designed() -> Self {
        Self {
            name: "as designed".into(),
            blocked: 0,
            sill_error: Length::ZERO,
            opening_loss: Length::ZERO,
            rain: 1.0,
            discharge: 1.0,
            law: None,
            storm: None,
            basis: None,
        }
    }
}

/// The parapet of an area.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Parapet {
    /// Height of its top above the low point; the level may not pass it.
    pub height: Option<Length>,
    /// Thickness, which is the length of a scupper's throat.
    pub thickness: Option<Length>,
}

/// What of another area an area receives.
///
/// All flow leaves an area by its primary drains, or, with these blocked, by its overflow; the same water never by both.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Passed {
    /// Whatever leaves it, by either way.
    #[default]
    All,
    /// What its overflow passes, with its primary drains blocked: then all its flow, else nothing. Its primary drains
    /// discharge elsewhere.
    Overflow,
    /// What its primary drains pass while they work: at most all its flow. Its overflow discharges elsewhere.
    Primary,
}

impl Passed {
    /// Every value.
    pub const EVERY: [Self; 3] = [Self::All, Self::Overflow, Self::Primary];

    /// Its name in files.
    pub fn name(self) -> &'static str {
        match self {
            Self::All => "all",
            Self::Overflow => "overflow",
            Self::Primary => "primary",
        }
    }
}

/// What an area receives from another.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Receipt {
    /// Index of the other area.
    pub from: usize,
    /// The part of what is passed that runs here.
    pub share: f64,
    /// Which of its ways out run here.
    pub what: Passed,
}

/// A part of the roof with one low point, where water ponds at one level.
#[derive(Clone, Debug)]
pub struct Catchment {
    /// Its name.
    pub name: String,
    /// Horizontal projection.
    pub area: Area,
    /// Wall that sheds on it.
    pub wall: Area,
    /// The part of that wall that counts.
    pub wall_share: f64,
    /// Length of parapet that scuppers may use; none where it is not limited.
    pub edge: Option<Length>,
    /// Least clear distance between openings.
    pub gap: Length,
    /// Its parapet.
    pub parapet: Parapet,
    /// Roof surface at the parapet above the low point; edge devices stand no lower.
    pub roof_at_wall: Length,
    /// How its surface lies, as far as that is given.
    pub surface: Surface,
    /// What runs onto it from other areas.
    pub receives: Vec<Receipt>,
    /// What its deflection adds to the water, where given.
    pub ponding: Option<Ponding>,
    /// Kinds of device that may stand here; none where any may.
    pub kinds: Option<Vec<Kind>>,
    /// Least and most devices, all groups together.
    pub count: RangeInclusive<u32>,
    /// Set heights above the low point at which devices may stand, rising; none where only a device's own count.
    pub set_heights: Option<Vec<Length>>,
    /// What holds in each case of the roof, in their order.
    pub limits: Vec<Limits>,
    /// What is there already: it costs nothing, stands where it stands, and counts for none of the sizes of a plan.
    pub existing: Vec<GivenGroup>,
    /// What closing one device of what is there costs, where a search may close any of it; none where all of it stays.
    pub replace: Option<Money>,
    /// The gutter or valley between its far end and its devices, where there is one.
    pub channel: Option<channel::Channel>,
    /// What rule sets ask about it.
    pub facts: Facts,
}

/// An area of no size without anything on it or at its edge: one device to eight may stand in it, half of a wall counts.
impl Default for Catchment {
    fn default() -> Self {
        Self {
            name: String::new(),
            area: Area::ZERO,
            wall: Area::ZERO,
            wall_share: 0.5,
            edge: None,
            gap: Length::ZERO,
            parapet: Parapet::default(),
            roof_at_wall: Length::ZERO,
            surface: Surface::default(),
            receives: Vec::new(),
            ponding: None,
            kinds: None,
            count: 1..=8,
            set_heights: None,
            limits: Vec::new(),
            existing: Vec::new(),
            replace: None,
            channel: None,
            facts: Facts::default(),
        }
    }
}

impl Catchment {
    /// Its limits in every case, and those that rule sets hold it to, to be changed alike.
    pub(crate) fn every_limit(&mut self) -> impl Iterator<Item = &mut Limits> {
        self.limits.iter_mut().chain([&mut self.facts.limits])
    }

    /// Whether a kind of device may stand here.
    pub fn takes(&self, kind: Kind) -> bool {
        self.kinds.as_ref().is_none_or(|kinds| kinds.contains(&kind))
    }
}

/// The whole roof, ready to be computed.
#[derive(Clone, Debug)]
pub struct Roof {
    /// Its title.
    pub title: String,
    /// The units a report speaks in.
    pub system: System,
    /// The design rain.
    pub storm: Storm,
    /// The cases, in the order of the file; never empty.
    pub cases: Vec<Case>,
    /// The areas, in the order of the file.
    pub areas: Vec<Catchment>,
    /// Every size of every catalog, in the order of the files.
    pub sizes: Vec<Size>,
    /// The flow laws chosen.
    pub choice: Choice,
    /// Flow that each area must pass under the storm, in the order of the areas; from [`demand::flows`].
    pub demands: Vec<Flow>,
    /// The roof as each rule set counts it, in the order of the sets.
    pub bases: Vec<Basis>,
}

impl Roof {
    /// What the flow of an area's devices depends on besides their dimensions, scuppers under another law where one is given.
    pub fn site(&self, area: usize, law: Option<Law>) -> Site {
        let catchment = &self.areas[area];
        Site {
            choice: Choice { scupper: law.unwrap_or(self.choice.scupper), ..self.choice },
            forced: None,
            thickness: catchment.parapet.thickness,
            floor: catchment.roof_at_wall,
        }
    }

    /// Everything that decides about one area in one case.
    pub fn situation(&self, area: usize, case: usize) -> Situation<'_> {
        self.in_case(area, &self.cases[case], self.areas[area].limits[case])
    }

    /// Everything that decides about one area as a rule set counts it, whether or not that is one of the cases.
    pub fn situation_under(&self, area: usize, basis: usize) -> Situation<'_> {
        self.in_case(area, &self.bases[basis].case, self.areas[area].facts.limits)
    }

    fn in_case<'r>(&'r self, area: usize, case: &'r Case, limits: Limits) -> Situation<'r> {
        let catchment = &self.areas[area];
        let basis = case.basis.map(|basis| &self.bases[basis].areas[area]);
        let depth = limits.depth.into_iter().chain(basis.and_then(|basis| basis.depth)).reduce(Length::min);
        Situation {
            case,
            demand: self.demand_with(area, case, Area::ZERO, 1.0),
            limits: Limits { depth, ..limits },
            freeboard: basis.and_then(|basis| basis.freeboard),
            ponding: catchment.ponding.unwrap_or_default(),
            parapet: catchment.parapet.height,
            site: self.site(area, case.law),
            channel: catchment.channel,
        }
    }

    /// Flow that an area must pass in a case with so much more roof of its own and so many times the rain.
    pub fn demand_with(&self, area: usize, case: &Case, more: Area, times: f64) -> Flow {
        match case.basis {
            Some(basis) => {
                let basis = &self.bases[basis].areas[area];
                basis.demand_with(basis.intensity * more, case.rain * times)
            }
            None => (self.demands[area] + self.storm.intensity * more) * case.rain * times,
        }
    }

    /// How long the storm lasts that an area is held under in a case, where stated.
    pub fn duration_in(&self, area: usize, case: &Case) -> Option<Time> {
        match case.basis {
            Some(basis) => self.bases[basis].areas[area].duration,
            None => self.storm.duration_in(case),
        }
    }

    /// What runs when the most that is possible at once arrives at an area.
    pub fn at_once(&self, area: usize) -> demand::AtOnce {
        demand::at_once(&self.storm, &self.areas, area)
    }

    /// One area in every case, in the order of the cases.
    pub fn situations(&self, area: usize) -> Vec<Situation<'_>> {
        (0..self.cases.len()).map(|case| self.situation(area, case)).collect()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// 62.4 / 12 = 5.2 psf for an inch; 9.80 kPa for a metre. Source: IBC 2021 eq. 16-19 as adopted, R = 5.2 (ds + dh).
    #[test]
    fn an_inch_of_water_weighs_5_2_psf() {
        assert_relative_eq!(load_of(Length::inches(5.0)).to_psf(), 26.0, max_relative = 1e-12);
        assert_relative_eq!(load_of(Length::mm(1.0)).pa(), 9.80, max_relative = 3e-4);
        assert_relative_eq!(depth_of(Load::psf(26.0)).to_inches(), 5.0, max_relative = 1e-12);
    }
}
