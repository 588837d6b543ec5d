//! What would cure an area that has no layout: for each single relaxation the least change that makes one exist.
//!
//! A change is made in steps that can be built or asked for, each step tried by a search for any layout at all. More limit,
//! more devices, another group, a longer edge, less freeboard, less demand: each can only add layouts or add to what they
//! carry. Where such a change cures every greater one does, and the least is found by halving. Lower sills and wider or higher
//! openings carry more too, but may come to lie under the roof, fill the edge or leave the parapet: there steps are tried from
//! the least on, each a quarter greater than the one before, and the least is found by halving below the first that cures. A
//! step less does not cure; a window narrower than a quarter may be passed over. The roof so changed is handed back: searching
//! it shows the layouts that the change opens.
//!
//! Of an area that has layouts the same changes, of moderate size, tell what its cost binds on: the least cost at the whole
//! reach of a change is found first, then the least change that already has it.

use crate::device::{Device, Size};
use crate::roof::{Basis, Roof, load_of};
use crate::rules::{self, RuleAt};
use crate::units::{Length, Load, Money, System};

use super::closing::{self, any_under};
use super::dive::Aim;
use super::infeasible::any;
use super::problem::Problem;
use super::rank::Criterion;
use super::watch::Stopped;
use super::{Options, Ranked};

/// One thing that may be changed.
#[derive(Clone, Debug, PartialEq)]
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
    /// Rules of binding sets waived: one, or the fewest found that cure together where none does alone.
    Rules(Vec<RuleAt>),
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

/// The changes found for an area, and what by itself does nothing.
#[derive(Clone, Debug, Default)]
pub struct Cures {
    /// The changes, as they were tried.
    pub found: Vec<Cure>,
    /// Changes that were tried as far as they go without effect.
    pub useless: Vec<Relaxation>,
    /// Binding rules that no layout keeps together, whatever the others: without any one of them some layout keeps the rest of
    /// them. Empty where rules are not what stands in the way.
    pub conflict: Vec<RuleAt>,
    /// Whether the search was ended before everything was tried.
    pub stopped: bool,
    /// What the cheapest layout costs now, where changes are to save; none where they are to cure.
    pub now: Option<Money>,
}

/// A change with the first layout that it opens.
pub type Opening<'a> = (&'a Cure, Ranked<'a>);

/// Cures with the first layout that each opens.
#[derive(Clone, Debug)]
pub struct Opened<'a> {
    /// Each cure and its layout, by the cost of the layout where prices are given, else as they were tried.
    pub cures: Vec<Opening<'a>>,
    /// Changes that were tried as far as they go without effect.
    pub useless: &'a [Relaxation],
    /// Binding rules that no layout keeps together.
    pub conflict: &'a [RuleAt],
    /// Whether the search was ended before everything was tried.
    pub stopped: bool,
    /// What the cheapest layout costs now, where changes are to save; none where they are to cure.
    pub now: Option<Money>,
}

impl Cures {
    /// Searches every roof so changed for its first layout.
    pub fn open(&self) -> Opened<'_> {
        let mut cures = opened(&self.found);
        cures.sort_by_key(|(_, layout)| layout.cost.map_or(i64::MAX, Money::millionths));
        let (useless, conflict) = (&self.useless, &self.conflict);
        Opened { cures, useless, conflict, stopped: self.stopped, now: self.now }
    }
}

/// Changes with the first layout that each opens, in their order; those that open none are left out.
pub fn opened(changes: &[Cure]) -> Vec<Opening<'_>> {
    changes.iter().filter_map(|change| Some((change, change.layout()?))).collect()
}

impl Cure {
    /// The first layout that the change opens.
    pub fn layout(&self) -> Option<Ranked<'_>> {
        super::size_area(&self.roof, 0, &self.options).layouts().first().cloned()
    }
}

/// A relaxation on a scale of whole steps, from one step on.
struct Scale {
    steps: u32,
    /// Steps of a moderate change.
    moderate: u32,
    of: Box<dyn Fn(u32) -> Relaxation + Sync>,
}

impl Scale {
    /// Whether a greater step may do less: an opening may come to lie where it does not fit.
    fn may_close(&self) -> bool {
        matches!((self.of)(1), Relaxation::Sill(_) | Relaxation::Width(_) | Relaxation::Height(_))
    }

    /// The steps that are looked at before the halving, rising to the last: it alone where no greater step does less.
    fn looks(&self, last: u32) -> Vec<u32> {
        let first = if self.may_close() { 1 } else { last };
        std::iter::successors(Some(first), |&step| (step < last).then(|| (step + 1).max(step + step / 4).min(last)))
            .collect()
    }

    /// The least step up to the last that passes, if any does.
    fn least(
        &self,
        last: u32,
        passes: impl Fn(&Relaxation) -> Result<bool, Stopped>,
    ) -> Result<Option<Relaxation>, Stopped> {
        let mut fails = 0;
        for mut found in self.looks(last) {
            if !passes(&(self.of)(found))? {
                fails = found;
                continue;
            }
            while found - fails > 1 {
                let middle = fails + (found - fails) / 2;
                if passes(&(self.of)(middle))? { found = middle } else { fails = middle }
            }
            return Ok(Some((self.of)(found)));
        }
        Ok(None)
    }
}

/// The least single changes that cure an area without a layout.
pub fn cures(roof: &Roof, options: &Options, area: usize) -> Cures {
    if roof.areas[area].ponding.is_some_and(|ponding| ponding.is_unstable()) {
        // No level is allowed whatever is let out.
        return Cures::default();
    }
    let asked = Changed { roof: alone(roof, area), options: Options { keep: 1, ..options.clone() } };
    let scales = scales(&asked.roof, &asked.options);
    let mut cures = asked.tried(scales, |scale| scale.least(scale.steps, |change| asked.with(change, any)));
    cures.stopped |= waived(roof, &asked.options, area, &mut cures).is_err();
    cures
}

/// Adds every binding rule without which the area has a layout, and where rules stand against each other, which; where none
/// is enough alone, several that are together.
///
/// The rules against each other are found by leaving out one after another for as long as what is left has no layout; those to
/// waive by taking one after another up again for as long as what is kept has one. Both depend on the order of the rules.
fn waived(roof: &Roof, options: &Options, area: usize, cures: &mut Cures) -> Result<(), Stopped> {
    let without = |rules: Vec<RuleAt>| {
        let change = Relaxation::Rules(rules);
        let (whole, options) = relaxed(roof, options, &change);
        Cure { change, roof: alone(&whole, area), options }
    };
    let cures_it = |rules: &[RuleAt]| {
        let cure = without(rules.to_vec());
        any(&Problem::new(&cure.roof, 0, &cure.options).0)
    };
    let all: Vec<RuleAt> = options.rules.binding().map(|(at, _)| at).collect();
    if all.is_empty() || !cures_it(&all)? {
        return Ok(());
    }
    let mut alone_enough = false;
    for &at in &all {
        if cures_it(&[at])? {
            cures.found.push(without(vec![at]));
            alone_enough = true;
        }
    }
    let mut left_out = Vec::new();
    for &at in &all {
        left_out.push(at);
        if cures_it(&left_out)? {
            left_out.pop();
        }
    }
    cures.conflict = all.iter().copied().filter(|at| !left_out.contains(at)).collect();
    if !alone_enough {
        let mut waived = all.clone();
        for at in all {
            let place = waived.iter().position(|waived| *waived == at).unwrap_or_default();
            waived.remove(place);
            if !cures_it(&waived)? {
                waived.insert(place, at);
            }
        }
        cures.found.push(without(waived));
    }
    Ok(())
}

/// The single changes of moderate size that make a cheaper layout exist than the cheapest now, each the least that saves as
/// much as its whole reach; none where the area has no layout, or a size that may stand has no price.
///
/// An opening larger than the catalogs have has no price there, so it is not among them.
pub fn binds(roof: &Roof, options: &Options, area: usize) -> Option<Cures> {
    let options = Options { rank_by: vec![Criterion::Cost, Criterion::Load], keep: 1, ..options.clone() };
    let asked = Changed { roof: alone(roof, area), options };
    let (now, _) = Problem::new(&asked.roof, 0, &asked.options);
    if now.candidates.iter().any(|candidate| candidate.size.price.is_none()) {
        return None;
    }
    let Ok(now) = cheapest(&now) else {
        return Some(Cures { stopped: true, ..Cures::default() });
    };
    let now = now?;
    let mut scales = scales(&asked.roof, &asked.options);
    scales.retain(|scale| !matches!((scale.of)(1), Relaxation::Width(_) | Relaxation::Height(_)));
    let cures = asked.tried(scales, |scale| {
        let last = scale.moderate.min(scale.steps);
        let mut least = now;
        for step in scale.looks(last) {
            least = least.min(asked.with(&(scale.of)(step), cheapest)?.unwrap_or(now));
        }
        let as_cheap = |change: &Relaxation| asked.with(change, |problem| any_under(problem, least));
        if least < now { scale.least(last, as_cheap) } else { Ok(None) }
    });
    Some(Cures { now: Some(Money::from_millionths(now)), ..cures })
}

/// Least cost of any layout, millionths; none where there is none.
fn cheapest(problem: &Problem<'_>) -> Result<Option<i64>, Stopped> {
    Ok(closing::complete(problem, Aim::Rank)?.map(|chosen| chosen.cost(problem)))
}

/// An area by itself and what is asked of the search there, to be changed.
struct Changed {
    roof: Roof,
    options: Options,
}

impl Changed {
    fn by(&self, change: Relaxation) -> Cure {
        let (roof, options) = relaxed(&self.roof, &self.options, &change);
        Cure { change, roof, options }
    }

    /// What a question about the area so changed is answered.
    fn with<T>(&self, change: &Relaxation, question: impl FnOnce(&Problem<'_>) -> T) -> T {
        let (roof, options) = relaxed(&self.roof, &self.options, change);
        question(&Problem::new(&roof, 0, &options).0)
    }

    /// What `found` makes of every scale.
    fn tried(&self, scales: Vec<Scale>, found: impl Fn(&Scale) -> Result<Option<Relaxation>, Stopped>) -> Cures {
        let mut cures = Cures::default();
        for scale in scales {
            let of_limits =
                cures.found.iter().any(|cure| matches!(cure.change, Relaxation::Load(_) | Relaxation::Depth(_)));
            if of_limits && matches!((scale.of)(1), Relaxation::Limits(_)) {
                continue;
            }
            match found(&scale) {
                Ok(Some(change)) => cures.found.push(self.by(change)),
                Ok(None) => cures.useless.push((scale.of)(scale.steps)),
                Err(Stopped) => cures.stopped = true,
            }
        }
        cures
    }
}

/// One area by itself, with the demand that it has among the others.
pub(super) fn alone(roof: &Roof, area: usize) -> Roof {
    let mut one = roof.areas[area].clone();
    one.receives.clear();
    let of_area = |basis: &Basis| Basis { case: basis.case.clone(), areas: vec![basis.areas[area]] };
    let bases = roof.bases.iter().map(of_area).collect();
    Roof { areas: vec![one], demands: vec![roof.demands[area]], bases, ..roof.clone() }
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
    // Moderate: 5 psf or 250 Pa, an inch or 25 mm of water, half of that of sill, 10 ft or 3 m of edge, a tenth of the demand.
    let (inch, either) = (if us { 100 } else { 250 }, |in_us, in_si| if us { in_us } else { in_si });
    let mut add = |steps: u32, moderate: u32, of: Box<dyn Fn(u32) -> Relaxation + Sync>| {
        scales.push(Scale { steps, moderate, of });
    };
    let loads = area.limits.iter().any(|limits| limits.load.is_some());
    let depths = area.limits.iter().any(|limits| limits.depth.is_some());
    if loads {
        add(4000, 50, Box::new(move |count| Relaxation::Load(load * f64::from(count))));
    }
    if depths {
        add(4000, inch, Box::new(move |count| Relaxation::Depth(times(fine)(count))));
    }
    if loads && depths {
        add(4000, inch, Box::new(move |count| Relaxation::Limits(times(fine)(count))));
    }
    let of_sizes = roof.sizes.iter().filter_map(|size| size.set_heights.as_ref());
    let heights = area.set_heights.iter().flatten().chain(of_sizes.flat_map(|heights| heights.iter()));
    let highest = heights.map(|height| height.nm()).max().unwrap_or(0);
    if let steps @ 1.. = u32::try_from(highest / fine.nm()).unwrap_or(0) {
        add(steps, inch / 2, Box::new(move |count| Relaxation::Sill(times(fine)(count))));
    }
    add(64, 2, Box::new(Relaxation::Devices));
    if options.mix < crate::roof::MOST_GROUPS {
        let more = u32::try_from(crate::roof::MOST_GROUPS - options.mix).unwrap_or(1);
        add(more, more, Box::new(Relaxation::Groups));
    }
    if roof.sizes.iter().any(|size| size.device.kind().is_scupper()) {
        add(400, either(24, 30), Box::new(move |count| Relaxation::Width(times(coarse)(count))));
    }
    if roof.sizes.iter().any(|size| matches!(size.device, Device::Closed { .. })) {
        add(100, either(8, 10), Box::new(move |count| Relaxation::Height(times(coarse)(count))));
    }
    if area.edge.is_some() {
        let foot = if us { Length::inches(3.0) } else { Length::mm(50.0) };
        add(4000, either(40, 60), Box::new(move |count| Relaxation::Edge(times(foot)(count))));
    }
    let asked = options.freeboard.map_or(0, |freeboard| freeboard.nm() / fine.nm());
    if let steps @ 1.. = u32::try_from(asked).unwrap_or(0) {
        add(steps, inch, Box::new(move |count| Relaxation::Freeboard(times(fine)(count))));
    }
    // By tenths of a per cent, to a hundredth of the demand.
    add(990, 100, Box::new(|count| Relaxation::Demand(f64::from(1000 - count) / 1000.0)));
    scales
}

/// A roof of one area and its options, with one thing changed; of a rule, a whole roof without it.
pub fn relaxed(roof: &Roof, options: &Options, change: &Relaxation) -> (Roof, Options) {
    let (mut roof, mut options) = (roof.clone(), options.clone());
    let area = &mut roof.areas[0];
    match *change {
        Relaxation::Load(more) => {
            area.every_limit().for_each(|limits| limits.load = limits.load.map(|load| load + more));
        }
        Relaxation::Depth(more) => {
            area.every_limit().for_each(|limits| limits.depth = limits.depth.map(|depth| depth + more));
        }
        Relaxation::Limits(more) => {
            for limits in area.every_limit() {
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
        Relaxation::Demand(factor) => {
            roof.demands[0] = roof.demands[0] * factor;
            for basis in &mut roof.bases {
                let area = &mut basis.areas[0];
                (area.flow, area.credited, area.least) =
                    (area.flow * factor, area.credited * factor, area.least * factor);
            }
        }
        Relaxation::Rules(ref waived) => {
            let book = options.rules.without(waived);
            roof.bases = rules::bases(&book, &roof);
            options.rules = book.into();
        }
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
