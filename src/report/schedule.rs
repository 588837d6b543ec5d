//! The ranked layouts as a schedule: CSV, one row for each group of each layout, in the units of the project.

use crate::search::{Outcome, Placed, Ranked};
use crate::units::Length;

use super::words::Words;
use super::{Sized, ranking};

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
                    let groups = layout.groups.iter();
                    rows.extend(groups.map(|placed| row(sized, area, index + 1, layout, placed, words)));
                }
            }
            Outcome::Infeasible(why) => {
                let mut row = vec![String::new(); head.len()];
                row[0].clone_from(area);
                row[1] = "infeasible".into();
                row[head.len() - 1] = ranking::infeasible(sized.roof, answer.area, why, words);
                rows.push(row);
            }
        }
    }
    written(&rows)
}

fn row(
    sized: &Sized<'_, '_>,
    area: &str,
    rank: usize,
    layout: &Ranked<'_>,
    placed: &Placed<'_>,
    words: Words,
) -> Vec<String> {
    let device = &placed.group.size.device;
    let small = |length: Length| plain(words.small(length), 4);
    let optional = |length: Option<Length>| length.map_or(String::new(), small);
    let water = layout.states[layout.case].water;
    vec![
        area.to_string(),
        "optimal".into(),
        rank.to_string(),
        layout.cost.map_or(String::new(), |cost| plain(cost.amount(), 2)),
        placed.group.size.tag.to_string(),
        device.kind().to_string(),
        optional(device.width()),
        optional(device.height()),
        placed.group.count.to_string(),
        small(placed.group.set_height),
        small(placed.from),
        words.depth_down(placed.to).replace(',', ""),
        device.law().name.to_string(),
        sized.roof.cases[layout.case].name.clone(),
        layout.governing.map_or("overwhelmed".into(), |governing| governing.limit.name().to_string()),
        optional(water.map(|water| water.level)),
        water.map_or(String::new(), |water| plain(words.in_load_unit(water.load), 4)),
        layout.governing.map_or(String::new(), |governing| plain(governing.utilisation, 4)),
        if layout.beyond.is_empty() { "no" } else { "yes" }.to_string(),
        String::new(),
    ]
}

/// A number for another program: no separator of thousands, no zeros at its end.
fn plain(value: f64, decimals: usize) -> String {
    let text = format!("{value:.decimals$}");
    if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.').to_string() } else { text }
}

fn written(rows: &[Vec<String>]) -> String {
    let mut writer = csv::Writer::from_writer(Vec::new());
    for row in rows {
        // Writing to memory does not fail.
        let _ = writer.write_record(row);
    }
    writer.into_inner().ok().and_then(|bytes| String::from_utf8(bytes).ok()).unwrap_or_default()
}
