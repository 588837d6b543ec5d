//! What is told of layouts beside their table: conductor heads that back up, and how they stand in a thick wall.

use crate::roof::Roof;
use crate::search::{Ranked, UnderLaw};

use super::page::Block;
use super::words::Words;

/// A layout with its rank or its name.
pub(super) type Named<'l, 'r> = (String, &'l Ranked<'r>);

/// What is told of layouts besides their ranking: conductor heads that back up, and how they stand in a thick wall.
pub(super) fn beside(roof: &Roof, area: usize, layouts: &[Named<'_, '_>], words: Words) -> Vec<Block> {
    let mut blocks = Vec::new();
    let backing = backing_up(roof, layouts, words);
    if !backing.is_empty() {
        blocks
            .push(Block::Text("Conductor heads that would back up, were all that the device passes credited:".into()));
        blocks.push(Block::List(backing));
    }
    let thick = thick_walls(roof, area, layouts, words);
    if !thick.is_empty() {
        blocks.push(Block::Text("Under the laws of a thick wall, in the governing case:".into()));
        blocks.push(Block::List(thick));
    }
    blocks
}

/// One line for each layout and group whose conductor head would back up over the sill, at its worst.
fn backing_up(roof: &Roof, layouts: &[Named<'_, '_>], words: Words) -> Vec<String> {
    let mut lines = Vec::new();
    for (called, layout) in layouts {
        for (place, placed) in layout.groups.iter().enumerate() {
            let risen = layout
                .states
                .iter()
                .enumerate()
                .filter_map(|(case, state)| Some((state.groups[place].backs_up?, case)));
            if let Some((rise, case)) = risen.max_by(|a, b| a.0.m().total_cmp(&b.0.m())) {
                let (name, case) = (words.name(placed.group.size), &roof.cases[case].name);
                lines.push(format!("{called}: {name} to {} above its sill in \"{case}\"", words.depth(rise)));
            }
        }
    }
    lines
}

/// One line for each layout: its level under the laws of a thick wall, and whether that breaks a limit.
pub(super) fn thick_walls(roof: &Roof, area: usize, layouts: &[Named<'_, '_>], words: Words) -> Vec<String> {
    let Some(thickness) = roof.areas[area].parapet.thickness else { return Vec::new() };
    if roof.areas[area].ponding.is_some_and(|ponding| ponding.is_unstable()) {
        return Vec::new();
    }
    let wall = format!(" ({} parapet)", words.size(thickness));
    let one = |(index, under): (usize, &UnderLaw)| {
        let (wall, is) = if index == 0 { (wall.as_str(), "the level is ") } else { ("", "") };
        format!("under `{}`{wall} {is}{}", under.law.name(), under_in_words(roof, area, under, words))
    };
    let told = layouts.iter().filter(|(_, layout)| !layout.thick_wall.is_empty());
    told.map(|(called, layout)| {
        format!("{called}: {}", layout.thick_wall.iter().enumerate().map(one).collect::<Vec<_>>().join("; "))
    })
    .collect()
}

/// The level under another law, beside what is allowed where it passes that.
fn under_in_words(roof: &Roof, area: usize, under: &UnderLaw, words: Words) -> String {
    let Some(water) = under.water else { return "without end: overwhelmed".into() };
    let mut level = words.depth(water.level);
    let limit = words.depth(roof.situation(area, under.case).allowable_level());
    if water.governing.utilisation > 1.0 && level == limit {
        // Over it by less than the last figure: never told to be at it.
        level = format!("{} {}", words.depth_up(water.level), words.small_unit());
        if level == limit {
            level = format!("a little over {limit}");
        }
    }
    let breaks = |case: usize| {
        let allowed = roof.situation(area, case).allowable_level();
        if case == under.case {
            format!(", over the {} limit", words.depth(allowed))
        } else {
            format!(", and \"{}\" passes its {}", roof.cases[case].name, words.depth(allowed))
        }
    };
    // The governing case is told first where it breaks, though another may stand before it.
    let own = water.governing.utilisation > 1.0;
    let broken = if own { Some(under.case) } else { under.breaks };
    level + &broken.map_or(String::new(), breaks)
}
