//! Where sills stand, above everything that an area gives a height for: its low point, the roof at the wall, the project's
//! datum.

use crate::device::Place;
use crate::roof::layout::Group;
use crate::roof::{Catchment, Roof};
use crate::units::Length;

use super::beside::Named;
use super::page::Block;
use super::words::{Words, list};

/// Every sill of the layouts with all its heights; nothing where an area gives no height but those above its low point.
pub(super) fn blocks(roof: &Roof, area: usize, layouts: &[Named<'_, '_>], words: Words) -> Vec<Block> {
    let area = &roof.areas[area];
    if area.surface.low_point.is_none() && area.roof_at_wall <= Length::ZERO {
        return Vec::new();
    }
    // What several layouts have alike is said once, in the order of the first.
    let mut lines: Vec<(String, Vec<&str>)> = Vec::new();
    for (called, layout) in layouts {
        for placed in &layout.groups {
            let line = sill(area, &placed.group, words);
            match lines.iter_mut().find(|(known, _)| *known == line) {
                Some((_, names)) if names.contains(&called.as_str()) => {}
                Some((_, names)) => names.push(called),
                None => lines.push((line, vec![called])),
            }
        }
    }
    let lines = lines.iter().map(|(line, names)| format!("{}: {line}", list(names))).collect();
    vec![Block::Text("Where the sills stand:".into()), Block::List(lines)]
}

/// A sill with all its heights.
fn sill(area: &Catchment, group: &Group<'_>, words: Words) -> String {
    let mut parts = vec![format!("{} above the low point", words.size(group.set_height))];
    if let Some(elevation) = elevation(area, group.set_height) {
        parts.push(format!("elevation {}", words.elevation(elevation)));
    }
    if let Some(above) = above_roof_at_wall(area, group) {
        let (side, distance) = if above < Length::ZERO { ("under", -above) } else { ("above", above) };
        parts.push(format!("{} {side} the roof at the wall", words.size(distance)));
    }
    format!("{} at {}", words.name(group.size), list(&parts))
}

/// The elevation of a height above the low point, where the area gives that of its low point.
pub(super) fn elevation(area: &Catchment, height: Length) -> Option<Length> {
    area.surface.low_point.map(|low_point| (low_point + height).on_grid())
}

/// A sill at the edge above the roof there, below zero where it lies under it; none where that roof is as low as the low point.
pub(super) fn above_roof_at_wall(area: &Catchment, group: &Group<'_>) -> Option<Length> {
    let rises = area.roof_at_wall > Length::ZERO && group.size.place == Place::Edge;
    rises.then(|| (group.set_height - area.roof_at_wall).on_grid())
}
