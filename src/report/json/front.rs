//! What is not beaten in all of cost, load, count and width, in JSON.

use serde::Serialize;

use crate::roof::layout;
use crate::search::{PlanFront, UnbeatenPlan};
use crate::units::Money;

use super::super::{Fronted, Sized};
use super::{Group, PlanSize, groups, plan_size};

/// A layout of an area.
#[derive(Serialize)]
pub(super) struct Row<'a> {
    cost: Option<f64>,
    worst_load_pa: f64,
    worst_case: &'a str,
    count: u32,
    width_m: f64,
    beyond_range: bool,
    groups: Vec<Group<'a>>,
}

/// The plans of the sizes of the cheapest; the list is absent where it was not finished.
#[derive(Serialize)]
pub(super) struct Plans<'a> {
    front_outcome: &'static str,
    #[serde(skip_serializing_if = "Option::is_none")]
    front: Option<Vec<PlanRow<'a>>>,
}

#[derive(Serialize)]
struct PlanRow<'a> {
    cost: f64,
    worst_load_pa: f64,
    worst_area: &'a str,
    worst_case: &'a str,
    count: u32,
    width_m: f64,
    layouts: Vec<PlanLayout<'a>>,
}

#[derive(Serialize)]
struct PlanLayout<'a> {
    area: &'a str,
    groups: Vec<PlanGroup<'a>>,
}

#[derive(Serialize)]
struct PlanGroup<'a> {
    #[serde(flatten)]
    size: PlanSize<'a>,
    count: u32,
    set_height_m: f64,
}

pub(super) fn rows<'a>(sized: &Sized<'a, '_>, fronted: &'a Fronted<'_>) -> Vec<Row<'a>> {
    let opened = fronted.front.rows.iter().zip(&fronted.opened);
    let row = |(row, ranked): (&crate::search::Unbeaten<'_>, &'a crate::search::Ranked<'_>)| Row {
        cost: row.cost.map(Money::amount),
        worst_load_pa: row.load.pa(),
        worst_case: &sized.roof.cases[row.case].name,
        count: row.count,
        width_m: row.width.m(),
        beyond_range: !ranked.beyond.is_empty(),
        groups: groups(sized.roof, fronted.front.area, ranked),
    };
    opened.map(row).collect()
}

pub(super) fn plans<'a>(sized: &Sized<'a, '_>, front: &'a PlanFront<'_>) -> Plans<'a> {
    let PlanFront::Finished(rows) = front else { return Plans { front_outcome: "not finished", front: None } };
    let row = |row: &'a UnbeatenPlan<'_>| PlanRow {
        cost: row.cost.amount(),
        worst_load_pa: row.load.pa(),
        worst_area: &sized.roof.areas[row.area].name,
        worst_case: &sized.roof.cases[row.case].name,
        count: row.count,
        width_m: row.width.m(),
        layouts: sized
            .answers
            .iter()
            .zip(&row.layouts)
            .map(|(answer, groups)| PlanLayout {
                area: &sized.roof.areas[answer.area].name,
                groups: groups.iter().map(plan_group).collect(),
            })
            .collect(),
    };
    Plans { front_outcome: "complete", front: Some(rows.iter().map(row).collect()) }
}

fn plan_group<'a>(group: &layout::Group<'a>) -> PlanGroup<'a> {
    PlanGroup { size: plan_size(group.size), count: group.count, set_height_m: group.set_height.m() }
}
