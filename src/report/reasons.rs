//! Why an area has no layout, or no proven one, in a few sentences.

use crate::roof::{LimitKind, Roof};
use crate::rules::{Misfit, Rulebook};
use crate::search::{Least, Ranked, Why};
use crate::units::{Length, Money};

use super::Sized;
use super::rules;
use super::words::{self, Words, list};

/// What is known of an area whose search was ended before everything was tried.
pub(super) fn stopped(first: Option<&Ranked<'_>>, bound: Option<Least>, words: Words) -> String {
    let bound = bound.map_or(String::new(), |bound| match bound {
        Least::Cost(cost) if cost <= Money::default() => String::new(),
        Least::Cost(cost) => format!(" Any layout costs at least {}.", words::money(cost)),
        Least::Count(count) => format!(" Any layout has at least {count} devices."),
        Least::Width(width) => format!(" Any layout is at least {} wide in all.", words.size(width)),
    });
    let found = match first {
        Some(_) => {
            "The search was ended before everything was tried: these are the best found, and better ones may exist."
        }
        None => "The search was ended before a layout was found: there may be some.",
    };
    format!("{found}{bound}")
}

/// Why there is no layout, in a few sentences.
pub(super) fn infeasible(sized: &Sized<'_, '_>, area: usize, why: &Why<'_>, words: Words) -> String {
    let roof = sized.roof;
    let name = &roof.areas[area].name;
    if let (Why::Limits { .. }, Some(unstable)) = (why, super::ponding::unstable(&roof.areas[area])) {
        return unstable;
    }
    match why {
        Why::NothingStands { misfits } => {
            let mut told: Vec<String> = Vec::new();
            let mut tags: Vec<&str> = Vec::new();
            for (size, misfit) in misfits {
                if !tags.contains(&&*size.tag) {
                    tags.push(&size.tag);
                    told.push(misfit_in_words(&words.name(size), misfit, &sized.options.rules, words));
                }
            }
            format!("Nothing in the catalogs can stand in {name}: {}.", told.join("; "))
        }
        Why::Breaks(broken) => {
            let rule = rules::named(&sized.options.rules, broken.rule, words);
            let there = broken.there.map(|place| words.group(&roof.areas[area].existing[place].group()));
            let broken = |there| format!("What is there already in {name}, {there}, breaks {rule}, whatever is added.");
            there.map_or(format!("{name} itself breaks {rule}, whatever stands in it."), broken)
        }
        Why::NothingFits { least, rule, at_edge, most } => {
            let by = |at| format!(" by {}", rules::named(&sized.options.rules, at, words));
            let devices = format!("at least {least} devices{}", rule.map_or(String::new(), by));
            let edge = roof.areas[area].edge.map_or("the area".into(), |edge| format!("{} of edge", words.long(edge)));
            match at_edge {
                _ if least > most => format!("{name} asks for {devices}, and its count goes to {most}."),
                Some((openings, at)) if openings > most => format!(
                    "{name} asks for at least {openings} openings at the edge{}, and its count goes to {most}.",
                    by(*at)
                ),
                Some((openings, at)) if openings > least => format!(
                    "{name} asks for at least {openings} openings at the edge{}, and no {openings} of the catalogs' sizes fit \
                     {edge}.",
                    by(*at)
                ),
                _ => format!("{name} asks for {devices}, and no {least} of the catalogs' sizes fit {edge}."),
            }
        }
        Why::Limits { best, alone, together } => {
            let text = limits_not_held(roof, area, best, alone, together, words);
            // The nearest to the limits is looked for without it.
            match sized.options.freeboard {
                Some(_) => format!("{text} The freeboard asked for is not even counted in this."),
                None => text,
            }
        }
        Why::Freeboard { asked, best } => {
            let least = |layout: &Ranked<'_>| {
                let of_case = |case: &usize| {
                    let freeboards = layout.states[*case].groups.iter().filter_map(|group| group.freeboard);
                    freeboards.map(Length::m).fold(f64::INFINITY, f64::min)
                };
                let cases: Vec<usize> = (0..layout.states.len()).collect();
                cases.into_iter().min_by(|a, b| of_case(a).total_cmp(&of_case(b))).unwrap_or(0)
            };
            let reached = best.as_ref().map_or(String::new(), |(kept, layout)| {
                let case = &roof.cases[least(layout)].name;
                format!(": the best keeps {} in \"{case}\" with {}", words.depth(*kept), words.layout(layout))
            });
            format!(
                "Layouts hold {name} under its limits, but none with {} of freeboard while every sill is at the lowest of its set \
                 heights{reached}. One opening lifted beside others that carry the water may keep it: `check` tells.",
                words.size(*asked)
            )
        }
        Why::Stopped => format!("Everything was tried for {name}, but the search for the reason was ended."),
    }
}

fn limits_not_held(
    roof: &Roof,
    area: usize,
    best: &Ranked<'_>,
    alone: &[usize],
    together: &[usize],
    words: Words,
) -> String {
    let name = &roof.areas[area].name;
    let situation = roof.situation(area, best.case);
    let case = |case: usize| format!("\"{}\"", roof.cases[case].name);
    let all = |cases: &[usize]| list(&cases.iter().map(|&one| case(one)).collect::<Vec<_>>());
    let Some(governing) = best.governing else {
        return format!(
            "Nothing here carries the {} of {name} in {}: every layout is overwhelmed, its tables at their end \
             or its openings shut or blocked, as is {}.",
            words.flow(situation.demand),
            case(best.case),
            words.layout(best)
        );
    };
    let water = best.states[best.case].water;
    let reached = water.map_or(String::new(), |water| match governing.limit {
        LimitKind::Load => words.load(water.load),
        LimitKind::Depth => words.depth(water.depth()),
        LimitKind::Parapet => words.depth(water.reach.map_or(water.level, |reach| reach.far_level)),
    });
    let limit = words.limit(governing.limit, situation.limits, situation.parapet);
    let layout = words.layout(best);
    let mut text = if alone.contains(&best.case) {
        let others: Vec<usize> = alone.iter().copied().filter(|&other| other != best.case).collect();
        let nor =
            if others.is_empty() { String::new() } else { format!(" Nor can {} be held, even alone.", all(&others)) };
        format!(
            "Nothing here holds {name} under {limit} in {}: the best reaches {reached} with {layout}.{nor}",
            case(best.case)
        )
    } else if alone.is_empty() {
        format!(
            "Each case can be held alone, but nothing here holds {name} in {} together: the nearest is {layout}, which \
             reaches {reached} of {limit} in {}.",
            all(together),
            case(best.case)
        )
    } else {
        format!(
            "Nothing here holds {name} in {}, even alone. The nearest in all cases is {layout}, which reaches {reached} of \
             {limit} in {}.",
            all(alone),
            case(best.case)
        )
    };
    let sills = best.groups.iter().map(|placed| placed.from).fold(Length::from_m(f64::INFINITY), Length::min);
    let allowed = situation.allowable_level();
    if allowed <= sills && allowed > Length::ZERO {
        text += &format!(" The limit allows water up to {}, which is not above the lowest sill.", words.depth(allowed));
    } else if allowed <= Length::ZERO {
        text += " The limit leaves no level at the devices at all.";
    }
    text
}

fn misfit_in_words(size: &str, misfit: &Misfit, book: &Rulebook, words: Words) -> String {
    let between = |(low, high): (Length, Length)| {
        if low == high { words.size(low) } else { format!("{} to {}", words.bare_size(low), words.size(high)) }
    };
    match misfit {
        Misfit::Rule(at) => format!("{size} breaks {}", rules::named(book, *at, words)),
        Misfit::Kind { found } => format!("{size} is a {found}, which the area does not take"),
        Misfit::SetHeight { own, area } => {
            format!("{size} stands at {} only, the area asks for {}", between(*own), between(*area))
        }
        Misfit::RoofAtWall { highest, roof } => format!(
            "{size} would stand at {} at most, below the roof at the parapet at {}",
            words.size(*highest),
            words.size(*roof)
        ),
        Misfit::Parapet { top, parapet } => format!(
            "the top of {size} at its lowest, {}, is not below the parapet's top at {}",
            words.size(*top),
            words.size(*parapet)
        ),
        Misfit::Edge { edge, .. } if *edge == Length::ZERO => format!("{size} needs edge, and there is none"),
        Misfit::Edge { width, edge } => {
            format!("{size} is {} wide, the edge {}", words.size(*width), words.size(*edge))
        }
    }
}
