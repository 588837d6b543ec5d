//! The whole roof at once: one layout for each area, few sizes on the whole roof, least cost.
//!
//! An area's cheapest layout made of two given sizes is one number, found from the table of what one of each carries
//! (`pairs`); which sizes the roof should have is then a question about those numbers alone (`sets`). Sizes that another
//! outdoes in every area are left out before: replacing such a size by the other never raises the cost and adds no size. The
//! runner-up plans are therefore of sizes that no other outdoes.

use rayon::prelude::*;

use crate::device::Size;
use crate::roof::Roof;
use crate::units::Money;

use super::best::Best;
use super::dive::{Aim, dive};
use super::problem::Problem;
use super::rank::{Criterion, Order};
use super::{Options, Ranked, ranked};

mod pairs;
mod sets;

use pairs::Field;

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
    /// The sizes, in catalog order.
    pub sizes: Vec<&'r Size>,
    /// The layout of each area, in the order in which the areas were given.
    pub layouts: Vec<Ranked<'r>>,
}

/// The plans of a roof.
#[derive(Clone, Debug)]
pub struct Plans<'r> {
    /// The best plans, which differ in their sets of sizes; empty where no set serves every area.
    pub plans: Vec<Plan<'r>>,
    /// Least cost with at most so many sizes; none where so few cannot serve every area.
    pub by_sizes: Vec<(u32, Option<Money>)>,
    /// Sum of what each area's cheapest layout costs by itself, whatever its sizes, without the price of sizes.
    pub alone: Option<Money>,
}

/// Most sizes that the table of costs by sizes goes to where the number is not limited.
const TABLE_TO: u32 = 6;

/// The cheapest plans of the given areas, of layouts with one or two groups; none where a device that may stand has no price.
///
/// # Panics
/// For a mix of three, for which no plan is searched: input refuses it.
pub fn plan<'r>(roof: &'r Roof, options: &Options, asked: Asked, areas: &[usize]) -> Option<Plans<'r>> {
    assert!(options.mix <= 2, "a plan is of layouts with one or two groups");
    let problems: Vec<Problem<'r>> =
        areas.par_iter().map(|&area| by_cost(Problem::new(roof, area, options).0)).collect();
    let priced =
        problems.iter().flat_map(|problem| &problem.candidates).all(|candidate| candidate.size.price.is_some());
    if !priced {
        return None;
    }
    let field = Field::new(roof, &problems);
    let costs = field.costs(&problems);
    let price = asked.size_price.millionths() as f64;
    let most = asked.sizes.map_or(field.sizes(), |sizes| sizes as usize);
    let sets = sets::best(&costs, price, most, options.keep);
    let plans = sets.iter().filter_map(|set| realised(roof, &problems, &field, set)).collect();
    let table_to =
        asked.sizes.map_or(TABLE_TO, |sizes| sizes + 1).min(u32::try_from(field.sizes()).unwrap_or(u32::MAX));
    let by_sizes = (1..=table_to)
        .map(|most| {
            // The plan itself is the row of as many sizes as were asked for.
            let own = asked.sizes == Some(most);
            let best = if own { sets.first().cloned() } else { sets::best(&costs, price, most as usize, 1).pop() };
            (most, best.map(|set| Money::from_millionths(set.cost as i64)))
        })
        .collect();
    let everyone: Vec<usize> = (0..field.sizes()).collect();
    let alone = costs.by_area(&everyone).iter().sum::<f64>();
    let alone = alone.is_finite().then(|| Money::from_millionths(alone as i64));
    Some(Plans { plans, by_sizes, alone })
}

/// The problem with its layouts ranked by cost first, then as asked.
fn by_cost(mut problem: Problem<'_>) -> Problem<'_> {
    let mut criteria = vec![Criterion::Cost];
    criteria.extend(problem.order.criteria().iter().filter(|&&criterion| criterion != Criterion::Cost));
    problem.order = Order::new(&criteria, true);
    problem
}

/// The plan of a set of sizes: in each area the first layout of those sizes by cost, then by the rank asked for.
fn realised<'r>(roof: &'r Roof, problems: &[Problem<'r>], field: &Field, set: &sets::SizeSet) -> Option<Plan<'r>> {
    let indices: Vec<usize> = set.sizes.iter().map(|&size| field.size(size)).collect();
    let layout = |problem: &Problem<'r>| {
        let restricted = problem.with_sizes(&indices);
        let found = dive(&restricted, Aim::Rank, Best::new(1, false)).found;
        found.first().map(|found| ranked(&restricted, found))
    };
    Some(Plan {
        cost: Money::from_millionths(set.cost as i64),
        sizes: indices.iter().map(|&index| &roof.sizes[index]).collect(),
        layouts: problems.par_iter().map(layout).collect::<Option<_>>()?,
    })
}
