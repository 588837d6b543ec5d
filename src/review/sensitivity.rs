//! How much a given layout's load hangs on each input: a stated step of one input at a time, and all of them at once.
//!
//! In every input the model is monotone: more rain, more roof, narrower openings, higher sills, less discharge and more
//! blocking never lower the water. So the worst of all combinations of tolerances is their corner, every one at its bad end,
//! and the step at which a limit breaks is the one place where what holds ends.

use crate::device::{Law, Size};
use crate::roof::layout::{self, Asked, Group, least_spare};
use crate::roof::{Case, Given, Roof, Situation};
use crate::search::Options;
use crate::units::{Length, Load, System};

use super::backsolve::{greatest, is_wide, widened};

/// A step of each input, for the worse.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Tolerances {
    /// More rain, as a part of the intensity.
    pub rain: f64,
    /// More roof, as a part of the area's own.
    pub area: f64,
    /// Less clear width of every opening that has one.
    pub width: Length,
    /// Higher sills.
    pub sill: Length,
    /// Less discharge of every device, as a part of it; below 1.
    pub discharge: f64,
}

impl Tolerances {
    /// A tenth of rain, of roof and of discharge, half an inch or 10 mm of width and of sill. Common practice.
    pub fn usual(system: System) -> Self {
        let length = if system == System::Us { Length::inches(0.5) } else { Length::mm(10.0) };
        Self { rain: 0.1, area: 0.1, width: length, sill: length, discharge: 0.1 }
    }
}

/// One input that is stepped.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Input {
    /// The intensity.
    Rain,
    /// The roof.
    Area,
    /// The clear widths.
    Width,
    /// The sills.
    Sill,
    /// The discharge.
    Discharge,
    /// So many more devices blocked.
    Blocked(u32),
    /// Another flow law of the scuppers.
    Law(Law),
}

/// What a step does.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Effect {
    /// The input; none for all tolerances at once.
    pub input: Option<Input>,
    /// The load after the step, in the case that governs before it; none where the layout is overwhelmed.
    pub load: Option<Load>,
    /// The greatest load of all cases after the step and its case; none where the layout is overwhelmed in one.
    pub worst: Option<(Load, usize)>,
    /// The first case that no longer holds.
    pub breaks: Option<usize>,
    /// How many such steps just hold every case; none where the layout fails as it is, or the step is of no amount.
    pub holds: Option<f64>,
}

/// The effects of all steps on a layout, the greatest load first.
#[derive(Clone, Debug)]
pub struct Sensitivity {
    /// The case that governs as given.
    pub case: usize,
    /// The load there; none where the layout is overwhelmed.
    pub load: Option<Load>,
    /// One input at a time.
    pub effects: Vec<Effect>,
    /// All tolerances at once, blocking and law as given.
    pub corner: Effect,
}

/// So many steps of some inputs.
#[derive(Clone, Copy, Debug, Default)]
struct Steps {
    rain: f64,
    area: f64,
    width: f64,
    sill: f64,
    discharge: f64,
    blocked: u32,
    law: Option<Law>,
}

/// Steps of everything that is tried at most.
const MOST_STEPS: f64 = 1000.0;

/// What a step of each input does to the load of a layout in the case that governs it.
pub fn sensitivity(roof: &Roof, options: &Options, given: &Given, tolerances: &Tolerances, case: usize) -> Sensitivity {
    let groups = given.groups();
    let stepped = Stepped { roof, options, given, groups: &groups, tolerances, case };
    let all = Steps { rain: 1.0, area: 1.0, width: 1.0, sill: 1.0, discharge: 1.0, ..Steps::default() };
    let zero = Steps::default();
    let mut effects: Vec<Effect> = [
        (Input::Rain, Steps { rain: 1.0, ..zero }),
        (Input::Area, Steps { area: 1.0, ..zero }),
        (Input::Width, Steps { width: 1.0, ..zero }),
        (Input::Sill, Steps { sill: 1.0, ..zero }),
        (Input::Discharge, Steps { discharge: 1.0, ..zero }),
        (Input::Blocked(1), Steps { blocked: 1, ..zero }),
        (Input::Blocked(2), Steps { blocked: 2, ..zero }),
    ]
    .into_iter()
    .filter(|(input, _)| *input != Input::Width || groups.iter().any(|group| is_wide(&group.size.device)))
    .chain(stepped.laws().into_iter().map(|law| (Input::Law(law), Steps { law: Some(law), ..zero })))
    .map(|(input, steps)| stepped.effect(Some(input), steps))
    .collect();
    let load = |effect: &Effect| effect.load.map_or(f64::INFINITY, Load::pa);
    effects.sort_by(|a, b| load(b).total_cmp(&load(a)));
    let as_given = stepped.effect(None, zero);
    Sensitivity { case, load: as_given.load, effects, corner: stepped.effect(None, all) }
}

struct Stepped<'s, 'r> {
    roof: &'r Roof,
    options: &'s Options,
    given: &'s Given,
    groups: &'s [Group<'s>],
    tolerances: &'s Tolerances,
    case: usize,
}

impl Stepped<'_, '_> {
    /// Laws that a scupper of the layout can follow and does not.
    fn laws(&self) -> Vec<Law> {
        let site = self.roof.site(self.given.area, None);
        let can = |law: &Law| {
            let differs = |group: &Group<'_>| {
                let laws = group.size.device.kind().laws();
                laws.len() > 1 && laws.contains(law) && group.size.law_at(&site) != *law
            };
            (site.thickness.is_some() || !law.needs_thickness()) && self.groups.iter().any(differs)
        };
        Law::ALL.into_iter().filter(can).collect()
    }

    fn effect(&self, input: Option<Input>, steps: Steps) -> Effect {
        let asked = Asked { freeboard: self.options.freeboard };
        let (load, worst, breaks) = self.with(steps, |groups, situations| {
            let loads: Option<Vec<Load>> = situations
                .iter()
                .map(|situation| layout::state(groups, situation).water.map(|water| water.load))
                .collect();
            let load = layout::state(groups, &situations[self.case]).water.map(|water| water.load);
            // The first of equals.
            let greater = |most: (Load, usize), next: (Load, usize)| if next.0 > most.0 { next } else { most };
            let worst = loads.and_then(|loads| (0..).zip(loads).map(|(case, load)| (load, case)).reduce(greater));
            let fails = |situation: &Situation<'_>| least_spare(groups, std::slice::from_ref(situation), asked) < 0.0;
            (load, worst, situations.iter().position(fails))
        });
        let counted = steps.blocked > 0 || steps.law.is_some();
        let holds = (!counted).then(|| self.steps_that_hold(steps)).flatten();
        Effect { input, load, worst, breaks, holds }
    }

    /// How many of the steps just hold every case.
    fn steps_that_hold(&self, steps: Steps) -> Option<f64> {
        let asked = Asked { freeboard: self.options.freeboard };
        let spare = |many: f64| {
            let scaled = Steps {
                rain: steps.rain * many,
                area: steps.area * many,
                width: steps.width * many,
                sill: steps.sill * many,
                discharge: steps.discharge * many,
                ..steps
            };
            self.with(scaled, |groups, situations| least_spare(groups, situations, asked))
        };
        // No more than what leaves something of every opening and of every flow.
        let narrowest =
            self.groups.iter().filter(|group| is_wide(&group.size.device)).filter_map(|g| g.size.device.width());
        let narrowest = narrowest.reduce(Length::min).filter(|_| steps.width > 0.0);
        let of_width = narrowest.map_or(MOST_STEPS, |width| 0.999 * (width / self.tolerances.width));
        let of_discharge = if steps.discharge > 0.0 { 0.999 / self.tolerances.discharge } else { MOST_STEPS };
        let most = MOST_STEPS.min(of_width).min(of_discharge);
        if spare(0.0) < 0.0 {
            return None;
        }
        greatest(spare, 0.0, most).filter(|&many| many < most)
    }

    /// What is found on the layout and its situations so stepped.
    fn with<T>(&self, steps: Steps, find: impl FnOnce(&[Group<'_>], &[Situation<'_>]) -> T) -> T {
        let (roof, area, tolerances) = (self.roof, self.given.area, self.tolerances);
        let cases: Vec<Case> = roof
            .cases
            .iter()
            .map(|case| Case {
                blocked: case.blocked + steps.blocked,
                discharge: case.discharge * (1.0 - tolerances.discharge * steps.discharge),
                law: steps.law.or(case.law),
                ..case.clone()
            })
            .collect();
        let situations: Vec<Situation<'_>> = roof
            .situations(area)
            .into_iter()
            .zip(&cases)
            .map(|(situation, case)| {
                let mut site = situation.site;
                site.forced = steps.law;
                let more = roof.areas[area].area * (tolerances.area * steps.area);
                let demand = roof.demand_with(area, situation.case, more, 1.0 + tolerances.rain * steps.rain);
                Situation { case, demand, site, ..situation }
            })
            .collect();
        let sizes: Vec<Size> =
            self.groups.iter().map(|group| widened(group.size, tolerances.width * -steps.width)).collect();
        let groups: Vec<Group<'_>> = self
            .groups
            .iter()
            .zip(&sizes)
            .map(|(group, size)| Group { size, set_height: group.set_height + tolerances.sill * steps.sill, ..*group })
            .collect();
        find(&groups, &situations)
    }
}
