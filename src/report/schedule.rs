//! The ranked layouts as a schedule: CSV, one row for each group of each layout, in the units of the project. A layout in widths
//! made to measure follows the one of the grid, with its rank.

use crate::device::Kind;
use crate::search::{Measured, Outcome, Placed, Ranked};
use crate::units::Length;

use super::words::Words;
use super::{Sized, plain, ranking, written};

pub(super) fn rows(sized: &Sized<'_, '_>) -> String {
    let words = Words(sized.roof.system);
    let (small, load) = (words.small_unit(), words.load_unit().to_lowercase());
    let head = [
        "area".to_string(),
        "outcome".into(),
        "rank".into(),
        "cost".into(),
        "device".into(),
        "kind".into(),
        format!("width_{small}"),
        format!("height_{small}"),
        format!("diameter_{small}"),
        "count".into(),
        format!("set_height_{small}"),
        format!("set_height_from_{small}"),
        format!("set_height_to_{small}"),
        "law".into(),
        "governing_case".into(),
        "governing_limit".into(),
        format!("water_depth_{small}"),
        format!("load_{load}"),
        "utilisation".into(),
        "beyond_range".into(),
        "why".into(),
    ];
    let mut rows = vec![head.to_vec()];
    for answer in sized.answers {
        let area = &sized.roof.areas[answer.area].name;
        match &answer.outcome {
            Outcome::Optimal(layouts) => {
                for (index, layout) in layouts.iter().enumerate() {
                    let mut add = |outcome, layout: &Ranked<'_>| {
                        let of_group = |placed| row(sized, answer.area, outcome, index + 1, layout, placed, words);
                        rows.extend(layout.groups.iter().map(of_group));
                    };
                    add("optimal", layout);
                    if let Some(Measured::Fitted(fitted)) = &layout.made {
                        add("made to measure", &fitted.layout());
                    }
                }
            }
            Outcome::Infeasible(why) => {
                let mut row = vec![String::new(); head.len()];
                row[0].clone_from(area);
                row[1] = "infeasible".into();
                row[head.len() - 1] = ranking::infeasible(sized, answer.area, why, words);
                rows.push(row);
            }
        }
    }
    written(&rows)
}

fn row(
    sized: &Sized<'_, '_>,
    area: usize,
    outcome: &str,
    rank: usize,
    layout: &Ranked<'_>,
    placed: &Placed<'_>,
    words: Words,
) -> Vec<String> {
    let device = &placed.group.size.device;
    let round = device.kind() == Kind::PipeScupper;
    let small = |length: Length| plain(words.small(length), 4);
    let optional = |length: Option<Length>| length.map_or(String::new(), small);
    let water = layout.states[layout.case].water;
    vec![
        sized.roof.areas[area].name.clone(),
        outcome.into(),
        rank.to_string(),
        layout.cost.map_or(String::new(), |cost| plain(cost.amount(), 2)),
        placed.group.size.tag.to_string(),
        device.kind().to_string(),
        optional(device.width().filter(|_| !round)),
        optional(device.height().filter(|_| !round)),
        optional(device.diameter()),
        placed.group.count.to_string(),
        small(placed.group.set_height),
        small(placed.from),
        words.depth_down(placed.to).replace(',', ""),
        placed.group.size.law_at(&sized.roof.site(area, None)).name().to_string(),
        sized.roof.cases[layout.case].name.clone(),
        layout.governing.map_or("overwhelmed".into(), |governing| governing.limit.name().to_string()),
        optional(water.map(|water| water.level)),
        water.map_or(String::new(), |water| plain(words.in_load_unit(water.load), 4)),
        layout.governing.map_or(String::new(), |governing| plain(governing.utilisation, 4)),
        if layout.beyond.is_empty() { "no" } else { "yes" }.to_string(),
        String::new(),
    ]
}
