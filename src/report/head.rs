//! What stands over the layouts of a report: the storm and the cases, and of each area its demand, its limit and what is there.

use crate::roof::{Case, GivenGroup, Limits, Roof, demand};
use crate::units::{Area, Length, Money};

use super::page::Block;
use super::words::{self, Words, list, trimmed};
use super::{cascade, ponding, rules, storm};

/// The storm, the cases that a layout must withstand, and what runs onto what.
pub(super) fn situation(roof: &Roof, words: Words) -> Vec<Block> {
    let mut blocks = vec![Block::Text(storm::line(&roof.storm, words))];
    // A further storm is told once, not case by case.
    let given = roof.cases.iter().filter(|case| case.storm.is_none() && !rules::is_own_case(roof, case));
    let cases: Vec<_> = given.map(|case| case_in_words(case, roof, words)).collect();
    if roof.cases.len() > 1 || roof.cases[0] != Case::as_designed() {
        blocks.push(Block::Text("Cases that a layout must withstand:".into()));
        blocks.push(Block::List(cases));
    }
    blocks.extend(storm::further(roof, words));
    blocks.extend(cascade::blocks(roof, words));
    blocks
}

/// An area's name, demand and limit.
pub(super) fn area_head(roof: &Roof, area: usize, words: Words) -> [Block; 3] {
    [
        Block::Heading(roof.areas[area].name.clone()),
        Block::Text(demand_in_words(roof, area, words)),
        Block::Text(limit_in_words(roof, area, words)),
    ]
}

/// What is there already, where anything is: what a search adds to.
pub(super) fn there_already(roof: &Roof, area: usize, words: Words) -> Option<Block> {
    let there: Vec<_> = roof.areas[area].existing.iter().map(GivenGroup::group).collect();
    let heeded = match roof.areas[area].replace {
        None => {
            "All of it is kept at no cost, moves no sill and may be what is blocked; layouts say what is added.".into()
        }
        Some(price) => format!(
            "Any of it may be closed, each opening {}; what is kept costs nothing, moves no sill and may be what is blocked. \
             Layouts say what is added, what is closed and what is kept.",
            if price > Money::default() { format!("for {}", words::money(price)) } else { "at no cost".into() }
        ),
    };
    let text = format!("There already: {}. {heeded}", words.groups(&there));
    (!there.is_empty()).then_some(Block::Text(text))
}

/// What a case does to the design.
fn case_in_words(case: &Case, roof: &Roof, words: Words) -> String {
    let mut parts = Vec::new();
    match case.blocked {
        0 => {}
        1 => parts.push("the device that carries most carries nothing".to_string()),
        many => parts.push(format!("the {many} devices that carry most carry nothing")),
    }
    if case.sill_error > Length::ZERO {
        parts.push(format!("every sill stands {} higher", words.size(case.sill_error)));
    }
    if case.opening_loss > Length::ZERO {
        parts.push(format!(
            "{} is lost on each side of every scupper, and its sill rises by as much",
            words.size(case.opening_loss)
        ));
    }
    let changed = |factor: f64| (factor - 1.0).abs() > 1e-12;
    if changed(case.rain) {
        parts.push(format!("rain times {}{}", trimmed(case.rain, 3), storm::recurrence(case, &roof.storm)));
    }
    if changed(case.discharge) {
        parts.push(format!("flow of every device times {}", trimmed(case.discharge, 3)));
    }
    if let Some(basis) = case.basis {
        parts.push(format!("counted by {}", roof.bases[basis].case.name));
    }
    if parts.is_empty() {
        parts.push("as drawn, under the storm as given".into());
    }
    format!("{}: {}", case.name, list(&parts))
}

/// What the area must pass, and the same by the constant that practice writes.
fn demand_in_words(roof: &Roof, area: usize, words: Words) -> String {
    let catchment = &roof.areas[area];
    let catching = demand::catching(catchment);
    let mut parts = vec![format!("{} of roof", words.area(catchment.area))];
    if catchment.wall > Area::ZERO {
        let share = trimmed(catchment.wall_share, 3);
        parts.push(format!("{share} of {} of wall", words.area(catchment.wall)));
    }
    let mut text = format!(
        "Demand {}: {} on {}",
        words.flow(roof.demands[area]),
        words.intensity(roof.storm.intensity),
        list(&parts)
    );
    text += &cascade::received(roof, area, words);
    if roof.system == crate::units::System::Us {
        let by_hand = 0.0104 * catching.to_ft2() * roof.storm.intensity.to_inches_per_hour();
        text += &format!(
            ". By hand 0.0104 x {} x {} = {} gpm{}",
            words.bare_area(catching),
            trimmed(roof.storm.intensity.to_inches_per_hour(), 3),
            words::gpm_by_hand(by_hand),
            if catchment.receives.is_empty() { "" } else { " for its own rain" }
        );
    }
    text + "."
}

/// The limits in effect, case by case where they differ.
fn limit_in_words(roof: &Roof, area: usize, words: Words) -> String {
    let catchment = &roof.areas[area];
    let water = |limits: Limits| {
        let level = roof.situation(area, 0);
        let level = crate::roof::Situation { limits, ..level };
        let allowed = level.allowable_level();
        if allowed > Length::ZERO {
            return format!("{}, water up to {}", words.limits(limits), words.depth(allowed));
        }
        let free = level.reach(Length::ZERO).map_or(String::new(), |reach| {
            format!(": with a free outlet its channel already stands {} deep", words.depth(reach.deepest))
        });
        format!("{}, which leaves no level at the devices{free}", words.limits(limits))
    };
    let mut text = String::from("Limit: ");
    let first = catchment.limits[0];
    text += &water(first);
    // Under every storm a case has the same limits.
    let of_main = |case: &usize| roof.cases[*case].storm.is_none();
    for (case, limits) in catchment.limits.iter().enumerate().skip(1).filter(|(case, _)| of_main(case)) {
        let before = catchment.limits[..case].iter().position(|known| known == limits);
        if before.is_none() {
            let alike: Vec<_> = (case..catchment.limits.len())
                .filter(|other| of_main(other) && catchment.limits[*other] == *limits)
                .map(|other| format!("\"{}\"", roof.cases[other].name))
                .collect();
            text += &format!("; in {}: {}", list(&alike), water(*limits));
        }
    }
    if let Some(counted) = ponding::counted(catchment, words) {
        text += &format!("; {counted}");
    }
    if let Some(height) = catchment.parapet.height {
        text += &format!("; the parapet's top at {}", words.size(height));
    }
    if let Some(edge) = catchment.edge {
        text += &format!("; {} of edge for openings", words.long(edge));
    }
    if let Some(channel) = catchment.channel {
        text += &format!(
            "; held along a channel {} wide and {} long, whose tailwater is the level at the devices",
            words.long(channel.width),
            words.long(channel.length)
        );
    }
    text + "."
}
