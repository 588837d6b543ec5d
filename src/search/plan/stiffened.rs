//! The whole roof with a price of strength: in each area the load limit may be raised, and is paid for.
//!
//! What the cheapest layout of two sizes costs in an area is then the least, over the raises, of the openings at that limit and
//! the strength that it takes: one number as before, so the sets of sizes are searched as before. A size goes only where one
//! other outdoes it at every raise: areas may be raised unlike, and none may need another size for it.
//!
//! Raised enough, what is there already may hold an area by itself; where it does so in all of them, nothing is added at all,
//! and that is weighed against the best set of sizes.

use rayon::prelude::*;

use crate::device::Size;
use crate::roof::{Given, GivenGroup, Roof};
use crate::search::structure::Structure;
use crate::search::tradeoff::{Raises, raised_by};
use crate::search::{Options, best_of};
use crate::units::{Load, Money};

use super::costs::{Costs, SizeSet};
use super::ending::Ending;
use super::field::{Field, not_outdone_in_all};
use super::sets::Search;
use super::{Asked, by_cost, pairs};
use crate::search::problem::Problem;

/// The plan of least cost where load limits may be raised area by area.
#[derive(Clone, Debug)]
pub struct StiffenedPlan {
    /// Openings, sizes and strength together.
    pub cost: Money,
    /// Of it, the strength.
    pub strength: Money,
    /// The sizes, in catalog order; of what is there already none.
    pub sizes: Vec<Size>,
    /// Each area's raise and layout, in the order in which the areas were given.
    pub areas: Vec<StiffenedArea>,
}

/// An area of a stiffened plan.
#[derive(Clone, Debug)]
pub struct StiffenedArea {
    /// How much its load limit is raised, in every case.
    pub raise: Load,
    /// What that costs.
    pub strength: Money,
    /// What its openings cost.
    pub openings: Money,
    /// Its layout, under the name of the area; where devices are there already, what is added.
    pub layout: Given,
}

/// The cheapest plan of the given areas where strength has a price; raises go by the structure's step, else by 1 psf or 50 Pa.
/// None where a device that may stand has no price, where no plan serves every area at any raise, or where the watch ended the
/// search.
///
/// # Panics
/// For a mix of three, for which no plan is searched: input refuses it.
pub fn stiffened_plan(
    roof: &Roof,
    options: &Options,
    asked: Asked,
    structure: &Structure,
    areas: &[usize],
) -> Option<StiffenedPlan> {
    assert!(options.mix <= 2, "a plan is of layouts with one or two groups");
    let raises = Raises::between(structure.plan_step(roof.system), Load::ZERO, structure.most);
    let raised: Vec<(Load, Roof)> = raises.each().map(|raise| (raise, raised_by(roof, raise))).collect();
    let fields: Vec<Field<'_>> = raised.par_iter().map(|(_, roof)| Field::new(roof, options, areas)).collect();
    if !fields.first()?.is_priced() {
        return None;
    }
    let sizes = not_outdone_in_all(roof, &fields);
    let fields: Vec<Field<'_>> = fields.into_iter().map(|field| field.with_sizes(sizes.clone())).collect();
    let due = || options.watch.is_due();
    let costs = costs(roof, structure, &raised, &fields, &Ending::new(&due))?;
    let price = asked.size_price.millionths() as f64;
    let most = asked.sizes.map_or(sizes.len(), |sizes| sizes as usize);
    let found = Search::new(&costs, price, &due).best(most, 1);
    if !found.finished {
        return None;
    }
    let bare = nothing_added(roof, structure, &raised, &fields, areas).map(|cost| SizeSet { cost, sizes: Vec::new() });
    let set = bare.into_iter().chain(found.sets).min_by(|a, b| a.cost.total_cmp(&b.cost))?;
    let indices: Vec<usize> = set.sizes.iter().map(|&size| sizes[size]).collect();
    let by_cost = Options { watch: crate::search::Watch::default(), ..by_cost(options) };
    let one = |&area: &usize| cheapest(structure, &raised, &by_cost, &indices, area);
    let areas: Vec<StiffenedArea> = areas.par_iter().map(one).collect::<Option<_>>()?;
    Some(StiffenedPlan {
        cost: Money::from_millionths(set.cost as i64),
        strength: areas.iter().map(|area| area.strength).sum(),
        sizes: indices.iter().map(|&index| roof.sizes[index].clone()).collect(),
        areas,
    })
}

/// The least cost of every pair in every area over all raises, strength included; none where it was told to end before.
fn costs(
    roof: &Roof,
    structure: &Structure,
    raised: &[(Load, Roof)],
    fields: &[Field<'_>],
    ending: &Ending<'_>,
) -> Option<Costs> {
    let order = fields.first()?.order();
    let mut least: Option<Costs> = None;
    for ((raise, _), field) in raised.iter().zip(fields) {
        let own = field.order();
        let place = |area: &usize| own.iter().position(|other| other == area);
        let places: Vec<Option<usize>> = order.iter().map(place).collect();
        let strength = |&area: &usize| structure.cost(roof.areas[area].area, *raise).millionths() as f64;
        let strength: Vec<f64> = order.iter().map(strength).collect();
        let costs = pairs::costs(field, ending)?;
        match &mut least {
            Some(least) => least.lower_to(&costs, &places, &strength),
            None => least = Some(costs),
        }
    }
    least
}

/// The strength with which what is there already holds every area by itself; none where no raise is enough for one of them.
fn nothing_added(
    roof: &Roof,
    structure: &Structure,
    raised: &[(Load, Roof)],
    fields: &[Field<'_>],
    areas: &[usize],
) -> Option<f64> {
    let needs: Vec<Vec<usize>> = fields.iter().map(Field::order).collect();
    let strength = |&area: &usize| {
        let served = raised.iter().zip(&needs).filter(|(_, needs)| !needs.contains(&area));
        served.map(|((raise, _), _)| structure.cost(roof.areas[area].area, *raise).millionths()).min()
    };
    areas.iter().map(strength).sum::<Option<i64>>().map(|cost| cost as f64)
}

/// The cheapest layout of some sizes in an area over all raises, strength included, the least raise of equals.
fn cheapest(
    structure: &Structure,
    raised: &[(Load, Roof)],
    by_cost: &Options,
    sizes: &[usize],
    area: usize,
) -> Option<StiffenedArea> {
    let at = |(raise, roof): &(Load, Roof)| {
        let layouts = best_of(&Problem::of_sizes(roof, area, by_cost, sizes), by_cost).layouts;
        let layout = layouts.first()?;
        let group = |group: &crate::search::Placed<'_>| GivenGroup {
            size: group.group.size.clone(),
            count: group.group.count,
            set_height: group.group.set_height,
        };
        Some(StiffenedArea {
            raise: *raise,
            strength: structure.cost(roof.areas[area].area, *raise),
            openings: layout.cost?,
            layout: Given {
                name: roof.areas[area].name.clone(),
                area,
                groups: layout.added().iter().map(group).collect(),
            },
        })
    };
    let total = |area: &StiffenedArea| area.strength.millionths().saturating_add(area.openings.millionths());
    raised.iter().filter_map(at).min_by_key(total)
}
