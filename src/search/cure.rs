//! What would cure an area that has no layout: for each single relaxation the least change that makes one exist.
//!
//! A change is made in steps that can be built or asked for, each step tried by a search for any layout at all. More limit,
//! more devices, another group, a longer edge, less freeboard, less demand: each can only add layouts or add to what they
//! carry. Where such a change cures every greater one does, and the least is found by halving. Lower sills and wider or higher
//! openings carry more too, but may come to lie under the roof, fill the edge or leave the parapet: there steps are tried from
//! the least on, each a quarter greater than the one before, and the least is found by halving below the first that cures. A
//! step less does not cure; a window narrower than a quarter may be passed over. The roof so changed is handed back: searching
//! it shows the layouts that the change opens.

use crate::device::{Device, Size};
use crate::roof::{Roof, load_of};
use crate::units::{Length, Load, Money, System};

use super::infeasible::any;
use super::problem::Problem;
use super::{Options, Outcome, Ranked};

/// One thing that may be changed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Relaxation {
    /// The load limit raised by this much, in every case.
    Load(Load),
    /// The depth limit raised by this much, in every case.
    Depth(Length),
    /// Both limits raised by this much water, where neither alone cures.
    Limits(Length),
    /// Every set height lowered by this much.
    Sill(Length),
    /// The greatest count raised by this many.
    Devices(u32),
    /// The most groups in a layout raised by this many.
    Groups(u32),
    /// Every scupper this much wider, or of a greater diameter.
    Width(Length),
    /// Every closed opening this much higher.
    Height(Length),
    /// The edge this much longer.
    Edge(Length),
    /// The freeboard asked for lowered by this much.
    Freeboard(Length),
    /// The demand times this: less rain, or less roof that drains here.
    Demand(f64),
}

/// A change of an area, most often one that makes a layout exist.
#[derive(Clone, Debug)]
pub struct Cure {
    /// The change.
    pub change: Relaxation,
    /// The area by itself, so changed.
    pub roof: Roof,
    /// What is asked of the search there.
    pub options: Options,
}

/// The cures of an area, and what by itself cures nothing.
#[derive(Clone, Debug)]
pub struct Cures {
    /// The cures, as they were tried.
    pub found: Vec<Cure>,
    /// Changes that were tried as far as they go without effect.
    pub useless: Vec<Relaxation>,
}

/// Cures with the first layout that each opens.
#[derive(Clone, Debug)]
pub struct Opened<'a> {
    /// Each cure and its layout, by the cost of the layout where prices are given, else as they were tried.
    pub cures: Vec<(&'a Cure, Ranked<'a>)>,
    /// Changes that were tried as far as they go without effect.
    pub useless: &'a [Relaxation],
}

impl Cures {
    /// Searches every roof so changed for its first layout.
    pub fn open(&self) -> Opened<'_> {
        let mut cures = opened(&self.found);
        cures.sort_by_key(|(_, layout)| layout.cost.map_or(i64::MAX, Money::millionths));
        Opened { cures, useless: &self.useless }
    }
}

/// Changes with the first layout that each opens, in their order; those that open none are left out.
pub fn opened(changes: &[Cure]) -> Vec<(&Cure, Ranked<'_>)> {
    changes.iter().filter_map(|change| Some((change, change.layout()?))).collect()
}

impl Cure {
    /// The first layout that the change opens.
    pub fn layout(&self) -> Option<Ranked<'_>> {
        match super::size(&self.roof, &self.options, &[0]).pop()?.outcome {
            Outcome::Optimal(mut layouts) => (!layouts.is_empty()).then(|| layouts.swap_remove(0)),
            Outcome::Infeasible(_) => None,
        }
    }
}

/// A relaxation on a scale of whole steps, from one step on.
struct Scale {
    steps: u32,
    of: Box<dyn Fn(u32) -> Relaxation + Sync>,
}

impl Scale {
    /// The least step that cures, if any does.
    fn least(&self, cured: impl Fn(Relaxation) -> bool) -> Option<Relaxation> {
        let cured = |step: u32| cured((self.of)(step));
        let (mut fails, mut passes) = (0, self.steps);
        if let Relaxation::Sill(_) | Relaxation::Width(_) | Relaxation::Height(_) = (self.of)(1) {
            passes = 1;
            while !cured(passes) {
                if passes == self.steps {
                    return None;
                }
                fails = passes;
                passes = (passes + 1).max(passes + passes / 4).min(self.steps);
            }
        } else if !cured(passes) {
            return None;
        }
        while passes - fails > 1 {
            let middle = fails + (passes - fails) / 2;
            if cured(middle) { passes = middle } else { fails = middle }
        }
        Some((self.of)(passes))
    }
}

/// The least single changes that cure an area without a layout.
pub fn cures(roof: &Roof, options: &Options, area: usize) -> Cures {
    let alone = alone(roof, area);
    let options = Options { keep: 1, ..options.clone() };
    let mut cures = Cures { found: Vec::new(), useless: Vec::new() };
    for scale in scales(&alone, &options) {
        let limit_cures =
            cures.found.iter().any(|cure| matches!(cure.change, Relaxation::Load(_) | Relaxation::Depth(_)));
        if limit_cures && matches!((scale.of)(1), Relaxation::Limits(_)) {
            continue;
        }
        let least = scale.least(|change| {
            let (roof, options) = relaxed(&alone, &options, change);
            let (problem, _) = Problem::new(&roof, 0, &options);
            any(&problem)
        });
        let Some(change) = least else {
            cures.useless.push((scale.of)(scale.steps));
            continue;
        };
        let (roof, options) = relaxed(&alone, &options, change);
        cures.found.push(Cure { change, roof, options });
    }
    cures
}

/// One area by itself, with the demand that it has among the others.
pub(super) fn alone(roof: &Roof, area: usize) -> Roof {
    let mut one = roof.areas[area].clone();
    one.receives.clear();
    Roof { areas: vec![one], demands: vec![roof.demands[area]], ..roof.clone() }
}

/// What can be relaxed, on scales of steps that can be built or asked for.
fn scales(roof: &Roof, options: &Options) -> Vec<Scale> {
    let us = roof.system == System::Us;
    let area = &roof.areas[0];
    // A hundredth of an inch, or a tenth of a millimetre; a tenth of a pound, or five pascals.
    let fine = if us { Length::inches(0.01) } else { Length::mm(0.1) };
    let coarse = if us { Length::inches(0.25) } else { Length::mm(5.0) };
    let load = if us { Load::psf(0.1) } else { Load::from_pa(5.0) };
    let times = |step: Length| move |count: u32| Length::from_nm(step.nm() * i64::from(count));
    let mut scales = Vec::new();
    let mut add = |steps: u32, of: Box<dyn Fn(u32) -> Relaxation + Sync>| scales.push(Scale { steps, of });
    let loads = area.limits.iter().any(|limits| limits.load.is_some());
    let depths = area.limits.iter().any(|limits| limits.depth.is_some());
    if loads {
        add(4000, Box::new(move |count| Relaxation::Load(load * f64::from(count))));
    }
    if depths {
        add(4000, Box::new(move |count| Relaxation::Depth(times(fine)(count))));
    }
    if loads && depths {
        add(4000, Box::new(move |count| Relaxation::Limits(times(fine)(count))));
    }
    let of_sizes = roof.sizes.iter().filter_map(|size| size.set_heights.as_ref());
    let heights = area.set_heights.iter().flatten().chain(of_sizes.flat_map(|heights| heights.iter()));
    let highest = heights.map(|height| height.nm()).max().unwrap_or(0);
    if let steps @ 1.. = u32::try_from(highest / fine.nm()).unwrap_or(0) {
        add(steps, Box::new(move |count| Relaxation::Sill(times(fine)(count))));
    }
    add(64, Box::new(Relaxation::Devices));
    if options.mix < crate::roof::MOST_GROUPS {
        add(u32::try_from(crate::roof::MOST_GROUPS - options.mix).unwrap_or(1), Box::new(Relaxation::Groups));
    }
    if roof.sizes.iter().any(|size| size.device.kind().is_scupper()) {
        add(400, Box::new(move |count| Relaxation::Width(times(coarse)(count))));
    }
    if roof.sizes.iter().any(|size| matches!(size.device, Device::Closed { .. })) {
        add(100, Box::new(move |count| Relaxation::Height(times(coarse)(count))));
    }
    if area.edge.is_some() {
        let foot = if us { Length::inches(3.0) } else { Length::mm(50.0) };
        add(4000, Box::new(move |count| Relaxation::Edge(times(foot)(count))));
    }
    let asked = options.freeboard.map_or(0, |freeboard| freeboard.nm() / fine.nm());
    if let steps @ 1.. = u32::try_from(asked).unwrap_or(0) {
        add(steps, Box::new(move |count| Relaxation::Freeboard(times(fine)(count))));
    }
    // By tenths of a per cent, to a hundredth of the demand.
    add(990, Box::new(|count| Relaxation::Demand(f64::from(1000 - count) / 1000.0)));
    scales
}

/// A roof of one area and its options, with one thing changed.
pub fn relaxed(roof: &Roof, options: &Options, change: Relaxation) -> (Roof, Options) {
    let (mut roof, mut options) = (roof.clone(), options.clone());
    let area = &mut roof.areas[0];
    match change {
        Relaxation::Load(more) => {
            area.limits.iter_mut().for_each(|limits| limits.load = limits.load.map(|load| load + more));
        }
        Relaxation::Depth(more) => {
            area.limits.iter_mut().for_each(|limits| limits.depth = limits.depth.map(|depth| depth + more));
        }
        Relaxation::Limits(more) => {
            for limits in &mut area.limits {
                limits.load = limits.load.map(|load| load + load_of(more));
                limits.depth = limits.depth.map(|depth| depth + more);
            }
        }
        Relaxation::Sill(less) => {
            let lower = |height: Length| Length::from_nm((height.nm() - less.nm()).max(0));
            for height in area.set_heights.iter_mut().flatten() {
                *height = lower(*height);
            }
            for size in &mut roof.sizes {
                size.set_heights = size.set_heights.as_ref().map(|heights| heights.iter().map(|&h| lower(h)).collect());
            }
        }
        Relaxation::Devices(more) => area.count = *area.count.start()..=area.count.end() + more,
        Relaxation::Groups(more) => options.mix += more as usize,
        Relaxation::Width(more) => roof.sizes.iter_mut().for_each(|size| widen(size, more)),
        Relaxation::Height(more) => roof.sizes.iter_mut().for_each(|size| heighten(size, more)),
        Relaxation::Edge(more) => area.edge = area.edge.map(|edge| edge + more),
        Relaxation::Freeboard(less) => options.freeboard = options.freeboard.map(|asked| asked - less),
        Relaxation::Demand(factor) => roof.demands[0] = roof.demands[0] * factor,
    }
    (roof, options)
}

/// A wider opening has no price in the catalog but that of the one it replaces: a lower bound on its cost. Nor is it measured.
fn widen(size: &mut Size, more: Length) {
    size.made = None;
    match &mut size.device {
        Device::Open { width } | Device::Closed { width, .. } => *width = *width + more,
        Device::Pipe { diameter } => *diameter = *diameter + more,
        _ => {}
    }
}

fn heighten(size: &mut Size, more: Length) {
    size.made = None;
    if let Device::Closed { height, .. } = &mut size.device {
        *height = *height + more;
    }
}
