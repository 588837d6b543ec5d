//! The whole roof at once: one layout for each area, few sizes on the whole roof, least cost.
//!
//! Areas whose devices that are there already hold by themselves cost nothing and need no size. Of the others, sizes that
//! another outdoes in every area are left out first (`field`): replacing such a size by the other never raises the
//! cost and adds no size. The runner-up plans are therefore of sizes that no other outdoes. An area's cheapest layout made of
//! two given sizes is one number, found from the table of what one of each carries (`pairs`, kept in `costs`); which sizes the
//! roof should have is then a question about those numbers alone (`sets`, with the proof). It is answered by good sets to begin
//! with (`first`), a bound (`bound`, from coarser `regrets`) and a walk through what the bound leaves (`walk`), which keeps the
//! best sets met (`kept`) and can be told to end (`ending`).

use rayon::prelude::*;

use crate::device::Size;
use crate::roof::Roof;
use crate::units::Money;

use super::problem::Problem;
use super::rank::Criterion;
use super::{Options, Ranked, Watch, best_of, best_of_each};

mod bound;
mod costs;
mod ending;
mod field;
mod first;
mod kept;
mod pairs;
mod regrets;
mod sets;
mod stiffened;
mod walk;

pub use stiffened::{StiffenedArea, StiffenedPlan, stiffened_plan};

use ending::Ending;
use field::Field;
use sets::{Search, SizeSet};

/// What is asked of a plan.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Asked {
    /// Most distinct sizes on the whole roof; none where it is not limited.
    pub sizes: Option<u32>,
    /// What each distinct size costs by itself.
    pub size_price: Money,
}

/// One layout for every area, of few sizes.
#[derive(Clone, Debug)]
pub struct Plan<'r> {
    /// Cost of all layouts and of the sizes.
    pub cost: Money,
    /// The sizes, in catalog order; of what is there already none.
    pub sizes: Vec<&'r Size>,
    /// The layout of each area, in the order in which the areas were given.
    pub layouts: Vec<Ranked<'r>>,
}

/// The plans of a roof.
#[derive(Clone, Debug)]
pub struct Plans<'r> {
    /// The best plans, which differ in their sets of sizes; empty where no set serves every area.
    pub plans: Vec<Plan<'r>>,
    /// Least cost with at most so many sizes, as far as that is proven, none where so few cannot serve every area; empty where
    /// sizes are neither limited nor priced, as each area then has its own.
    pub by_sizes: Vec<(u32, Option<Money>)>,
    /// Sum of what each area's cheapest layout costs by itself, whatever its sizes, without the price of sizes.
    pub alone: Option<Money>,
    /// No plan costs less; none where nothing is known of that, or there is no plan.
    pub bound: Option<Money>,
    /// Whether the search went to its end: the first plan is the cheapest, or there is none. Else the watch ended it.
    pub finished: bool,
}

/// Most sizes that the table of costs by sizes goes to where the number is not limited.
const TABLE_TO: u32 = 6;

/// The cheapest plans of the given areas, of layouts with one or two groups; none where a device that may stand has no price.
///
/// # Panics
/// For a mix of three, for which no plan is searched: input refuses it.
pub fn plan<'r>(roof: &'r Roof, options: &Options, asked: Asked, areas: &[usize]) -> Option<Plans<'r>> {
    assert!(options.mix <= 2, "a plan is of layouts with one or two groups");
    let field = Field::new(roof, options, areas);
    if !field.is_priced() {
        return None;
    }
    let free = asked.sizes.is_none() && asked.size_price == Money::default();
    if free || field.areas() == 0 {
        return Some(each_alone(roof, &by_cost(options), areas));
    }
    let due = || options.watch.is_due();
    let Some(costs) = pairs::costs(&field, &Ending::new(&due)) else {
        return Some(Plans { plans: Vec::new(), by_sizes: Vec::new(), alone: None, bound: None, finished: false });
    };
    let price = asked.size_price.millionths() as f64;
    let mut search = Search::new(&costs, price, &due);
    let money = |cost: f64| Money::from_millionths(cost as i64);
    let (mut by_sizes, mut plans) = (Vec::new(), None);
    let table_to =
        asked.sizes.map_or(TABLE_TO, |sizes| sizes + 1).min(u32::try_from(field.sizes.len()).unwrap_or(u32::MAX));
    for most in 1..=table_to {
        // The plan itself is the row of as many sizes as were asked for.
        let own = asked.sizes == Some(most);
        let found = search.best(most as usize, if own { options.keep } else { 1 });
        if found.finished {
            by_sizes.push((most, found.sets.first().map(|set| money(set.cost))));
        }
        if own {
            plans = Some(found);
        }
    }
    let most = asked.sizes.map_or(field.sizes.len(), |sizes| sizes as usize);
    let found = plans.unwrap_or_else(|| search.best(most, options.keep));
    let by_cost = by_cost(options);
    let realised = |set: &SizeSet| {
        let sizes: Vec<usize> = set.sizes.iter().map(|&size| field.sizes[size]).collect();
        realised(roof, &by_cost, areas, &sizes, money(set.cost))
    };
    let plans = found.sets.iter().filter_map(realised).collect();
    let alone = costs.least().iter().sum::<f64>();
    let bound = found.bound.is_finite().then(|| money(found.bound));
    Some(Plans { plans, by_sizes, alone: alone.is_finite().then(|| money(alone)), bound, finished: found.finished })
}

/// The plan where sizes are neither limited nor priced, or none is needed: each area as if it were alone.
fn each_alone<'r>(roof: &'r Roof, by_cost: &Options, areas: &[usize]) -> Plans<'r> {
    let best = best_of_each(roof, by_cost, areas);
    let finished = best.iter().all(|best| best.finished);
    let firsts = best.into_iter().map(|best| best.layouts.into_iter().next());
    let Some(layouts) = firsts.collect::<Option<Vec<Ranked<'r>>>>() else {
        return Plans { plans: Vec::new(), by_sizes: Vec::new(), alone: None, bound: None, finished };
    };
    let cost: Money = layouts.iter().filter_map(|layout| layout.cost).sum();
    let stands = |size: &&Size| {
        let mut groups = layouts.iter().flat_map(|layout| &layout.groups);
        groups.any(|placed| std::ptr::eq(placed.group.size, *size))
    };
    let sizes = roof.sizes.iter().filter(stands).collect();
    let (bound, alone) = (finished.then_some(cost), finished.then_some(cost));
    Plans { plans: vec![Plan { cost, sizes, layouts }], by_sizes: Vec::new(), alone, bound, finished }
}

/// What is asked for with one layout of each area, ranked by cost first, then as asked.
fn by_cost(options: &Options) -> Options {
    let mut rank_by = vec![Criterion::Cost];
    rank_by.extend(options.rank_by.iter().filter(|&&criterion| criterion != Criterion::Cost));
    Options { rank_by, keep: 1, ..options.clone() }
}

/// The plan of a set of sizes: in each area the first layout of those sizes by cost, then by the rank asked for.
fn realised<'r>(roof: &'r Roof, by_cost: &Options, areas: &[usize], sizes: &[usize], cost: Money) -> Option<Plan<'r>> {
    // What a plan is made of is known by now; its layouts are few sizes' and found at once, whatever the watch says.
    let by_cost = Options { watch: Watch::default(), ..by_cost.clone() };
    let layout = |&area: &usize| {
        let best = best_of(&Problem::of_sizes(roof, area, &by_cost, sizes), &by_cost);
        best.layouts.into_iter().next()
    };
    Some(Plan {
        cost,
        sizes: sizes.iter().map(|&size| &roof.sizes[size]).collect(),
        layouts: areas.par_iter().map(layout).collect::<Option<_>>()?,
    })
}
