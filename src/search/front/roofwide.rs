//! The plans that are not beaten in all of cost, greatest load, count and width, made of the sizes of the cheapest plan.
//!
//! # How they are found, and why none is missed
//!
//! A plan pays for the sizes it uses. So every set of sizes out of those of the cheapest plan is gone through (where a size
//! costs nothing by itself, all of them at once), its price added at the end: a plan is met at least with the set that it
//! uses, and with a larger one it only costs more.
//!
//! With a set given, cost, count and width of a plan are sums over the areas and its load is the greatest of theirs. If an
//! area's layout is beaten, putting the better one in its place leaves the plan no worse in any of the four. So only layouts of
//! each area's front are combined, and of the plans of some areas only those that are not beaten: whatever the other areas
//! add, they add to both.
//!
//! No plan has less load than the greatest, over the areas, of the least load that an area can have. Loads under that are
//! raised to it before areas are combined: no plan's load changes, and of an area with load to spare few layouts are left.

use rayon::prelude::*;

use crate::device::Size;
use crate::roof::Roof;
use crate::roof::layout::Group;
use crate::units::{Length, Load, Money};

use super::super::plan::{Asked, Plan};
use super::super::problem::Problem;
use super::super::{Options, Watch, rank::Sums};
use super::sieve::Sieve;
use super::{Front, of_area, problem};

/// A plan that no other of its sizes beats in all of cost, load, count and width.
#[derive(Clone, Debug)]
pub struct UnbeatenPlan<'r> {
    /// Cost of all layouts and of the sizes it uses.
    pub cost: Money,
    /// The greatest load over the areas and their cases.
    pub load: Load,
    /// Index of the area in which that load stands, the first of equals in the order in which areas were given.
    pub area: usize,
    /// The case in which it stands there.
    pub case: usize,
    /// Devices, all areas together.
    pub count: u32,
    /// Total clear width.
    pub width: Length,
    /// The sizes it uses, in catalog order.
    pub sizes: Vec<&'r Size>,
    /// The layout of each area at its lowest set heights, in the order in which the areas were given; of an area with devices
    /// that are there already, what is added.
    pub layouts: Vec<Vec<Group<'r>>>,
}

/// The plans that are not beaten.
#[derive(Clone, Debug)]
pub enum PlanFront<'r> {
    /// All of them, by cost, then load, count and width. Of plans equal in all four one is listed, always the same.
    Finished(Vec<UnbeatenPlan<'r>>),
    /// There are more than [`PlanFront::MOST`], or some areas alone have as many, or the sizes make too many sets.
    TooMany,
    /// The watch ended the search.
    Stopped,
}

impl PlanFront<'_> {
    /// Most plans, of some areas or of all, that are kept.
    pub const MOST: usize = 50_000;
    /// Most sizes whose sets are gone through one by one.
    const MOST_SIZES: usize = 10;
}

/// The plans of the given areas that are not beaten among those of the sizes of one plan, which is the cheapest of all.
///
/// # Panics
/// For a mix of three, for which no plan is searched.
pub fn plan_front<'r>(
    roof: &'r Roof,
    options: &Options,
    asked: Asked,
    areas: &[usize],
    cheapest: &Plan<'r>,
) -> PlanFront<'r> {
    assert!(options.mix <= 2, "a plan is of layouts with one or two groups");
    let used = |size: &Size| cheapest.sizes.iter().any(|&used| std::ptr::eq(used, size));
    let sizes: Vec<usize> = (0..roof.sizes.len()).filter(|&index| used(&roof.sizes[index])).collect();
    if asked.size_price > Money::default() && sizes.len() > PlanFront::MOST_SIZES {
        return PlanFront::TooMany;
    }
    let problems: Vec<Problem<'r>> = areas.par_iter().map(|&area| problem(roof, options, area)).collect();
    let of_set = |set: &Vec<usize>| {
        let one = |(problem, &area): (&Problem<'r>, &usize)| of_area(area, &problem.with_sizes(set));
        problems.par_iter().zip(areas).map(one).collect::<Vec<Front<'r>>>()
    };
    let sets = sets(&sizes, asked.size_price);
    let fronts: Vec<_> = sets.iter().map(of_set).collect();
    let mut plans = Vec::new();
    for (place, (set, fronts)) in sets.iter().zip(&fronts).enumerate() {
        let price = (asked.size_price * u32::try_from(set.len()).unwrap_or(u32::MAX)).millionths();
        let found = match combined(fronts, &options.watch) {
            Ok(found) => found,
            Err(Unfinished::TooMany) => return PlanFront::TooMany,
            Err(Unfinished::Ended) => return PlanFront::Stopped,
        };
        plans.extend(found.into_iter().map(|plan| Whole { cost: plan.cost + price, set: place, ..plan }));
    }
    sift(&mut plans);
    if plans.len() > PlanFront::MOST {
        return PlanFront::TooMany;
    }
    plans.sort_by_key(|plan| (plan.cost, plan.load, plan.count, plan.width));
    PlanFront::Finished(plans.iter().map(|plan| unbeaten(roof, &fronts[plan.set], plan)).collect())
}

/// The sets of sizes that plans are looked for with: every one where a size has a price, else all at once.
fn sets(sizes: &[usize], price: Money) -> Vec<Vec<usize>> {
    if price == Money::default() {
        return vec![sizes.to_vec()];
    }
    let chosen = |mask: u32| (0..sizes.len()).filter(|&bit| mask >> bit & 1 == 1).map(|bit| sizes[bit]).collect();
    // None at all is enough where what is there already holds every area.
    (0..1_u32 << sizes.len()).map(chosen).collect()
}

/// What plans are compared by, the first of equals known by what follows.
trait Compared {
    fn sums(&self) -> (i64, i64, i64);
    fn load(&self) -> i64;
}

/// A plan of some areas.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
struct Part {
    cost: i64,
    count: i64,
    width: i64,
    load: i64,
    /// The plan of the areas before.
    before: u32,
    /// The layout of the last area, by its place in the front.
    layout: u32,
}

/// A plan of all areas.
#[derive(Clone, PartialEq, Eq, PartialOrd, Ord)]
struct Whole {
    cost: i64,
    count: i64,
    width: i64,
    load: i64,
    /// Place of its set of sizes.
    set: usize,
    /// The layout of each area, by its place in the front.
    layouts: Vec<u32>,
}

impl Compared for Part {
    fn sums(&self) -> (i64, i64, i64) {
        (self.cost, self.count, self.width)
    }
    fn load(&self) -> i64 {
        self.load
    }
}

impl Compared for Whole {
    fn sums(&self) -> (i64, i64, i64) {
        (self.cost, self.count, self.width)
    }
    fn load(&self) -> i64 {
        self.load
    }
}

/// Sorts plans and leaves those that are not beaten, of equals the first.
fn sift<P: Compared + Ord>(plans: &mut Vec<P>) {
    plans.sort_unstable();
    let most = plans.iter().map(|plan| plan.sums().1).max().unwrap_or(0);
    let mut sieve = Sieve::new(usize::try_from(most).unwrap_or(0));
    plans.retain(|plan| {
        let (_, count, width) = plan.sums();
        let count = usize::try_from(count).unwrap_or(0);
        let stays = sieve.least(count, width).is_none_or(|least| plan.load() < least);
        if stays {
            sieve.add(count, width, plan.load());
        }
        stays
    });
}

/// A layout of an area as a part of plans.
struct Choice {
    sums: Sums,
    load: i64,
    place: u32,
}

/// The water of an area's layout, ponding head included, in its worst case, nanometres: its load, comparable between areas.
fn load(front: &Front<'_>, place: usize) -> i64 {
    front.problem.situations[0].ponding.weighed(front.kept[place].worst.depth.on_grid()).nm()
}

/// The layouts of an area that are not beaten once loads under `floor` are raised to it.
fn choices(front: &Front<'_>, floor: i64) -> Vec<Choice> {
    let part = |place: usize| {
        let sums = front.kept[place].sums;
        Part {
            cost: sums.cost,
            count: sums.count,
            width: sums.width,
            load: load(front, place).max(floor),
            before: 0,
            layout: u32::try_from(place).unwrap_or(u32::MAX),
        }
    };
    let mut parts: Vec<Part> = (0..front.kept.len()).map(part).collect();
    sift(&mut parts);
    let choice =
        |part: Part| Choice { sums: front.kept[part.layout as usize].sums, load: part.load, place: part.layout };
    parts.into_iter().map(choice).collect()
}

/// Why there is no list.
enum Unfinished {
    TooMany,
    Ended,
}

/// The plans of all areas that are not beaten, costs without the price of sizes. No plan where an area has no layout.
fn combined(fronts: &[Front<'_>], watch: &Watch) -> Result<Vec<Whole>, Unfinished> {
    if fronts.iter().any(|front| !front.finished) {
        return Err(Unfinished::Ended);
    }
    let least = |front: &Front<'_>| (0..front.kept.len()).map(|place| load(front, place)).min();
    let Some(least) = fronts.iter().map(least).collect::<Option<Vec<i64>>>() else { return Ok(Vec::new()) };
    let floor = least.into_iter().max().unwrap_or(0);
    let choices: Vec<Vec<Choice>> = fronts.iter().map(|front| choices(front, floor)).collect();
    // Areas with few layouts first: the lists stay short as long as they can.
    let mut order: Vec<usize> = (0..fronts.len()).collect();
    order.sort_by_key(|&area| choices[area].len());
    let nothing = Part { cost: 0, count: 0, width: 0, load: floor, before: 0, layout: 0 };
    let mut stages = vec![vec![nothing]];
    for &area in &order {
        stages.push(joined(&stages[stages.len() - 1], &choices[area], watch)?);
    }
    let whole = |last: usize| {
        let mut layouts = vec![0; fronts.len()];
        let mut at = last;
        for (stage, &area) in order.iter().enumerate().rev() {
            let part = &stages[stage + 1][at];
            layouts[area] = part.layout;
            at = part.before as usize;
        }
        let part = &stages[order.len()][last];
        Whole { cost: part.cost, count: part.count, width: part.width, load: part.load, set: 0, layouts }
    };
    Ok((0..stages[order.len()].len()).map(whole).collect())
}

/// Plans that wait to be sifted at once.
const HEAP: usize = 1 << 20;

/// Plans of some areas with every layout of one more, not beaten.
fn joined(before: &[Part], choices: &[Choice], watch: &Watch) -> Result<Vec<Part>, Unfinished> {
    let mut next = Vec::new();
    for choice in choices {
        if watch.is_due() {
            return Err(Unfinished::Ended);
        }
        let with = |(place, part): (usize, &Part)| Part {
            cost: part.cost + choice.sums.cost,
            count: part.count + choice.sums.count,
            width: part.width + choice.sums.width,
            load: part.load.max(choice.load),
            before: u32::try_from(place).unwrap_or(u32::MAX),
            layout: choice.place,
        };
        next.extend(before.iter().enumerate().map(with));
        if next.len() > HEAP {
            sift(&mut next);
            if next.len() > PlanFront::MOST {
                return Err(Unfinished::TooMany);
            }
        }
    }
    sift(&mut next);
    if next.len() <= PlanFront::MOST { Ok(next) } else { Err(Unfinished::TooMany) }
}

fn unbeaten<'r>(roof: &'r Roof, fronts: &[Front<'r>], plan: &Whole) -> UnbeatenPlan<'r> {
    let rows = || fronts.iter().zip(&plan.layouts).map(|(front, &place)| (front, place as usize));
    let loads: Vec<i64> = rows().map(|(front, place)| load(front, place)).collect();
    let most = loads.iter().copied().max().unwrap_or(0);
    let worst = loads.iter().position(|&load| load == most).unwrap_or(0);
    let (front, row) = (&fronts[worst], &fronts[worst].rows[plan.layouts[worst] as usize]);
    let layouts: Vec<Vec<Group<'r>>> = rows().map(|(front, place)| front.rows[place].groups.clone()).collect();
    let used = |size: &&Size| layouts.iter().flatten().any(|group| std::ptr::eq(group.size, *size));
    UnbeatenPlan {
        cost: Money::from_millionths(plan.cost),
        load: row.load,
        area: front.area,
        case: row.case,
        count: u32::try_from(plan.count).unwrap_or(u32::MAX),
        width: Length::from_nm(plan.width),
        sizes: roof.sizes.iter().filter(used).collect(),
        layouts,
    }
}
