//! The table `[tolerance]`: how far each input may be off, for the worse.

use crate::review::Tolerances;
use crate::units::System;

use super::section::{Cell, Keys, Section};

pub(super) static TOLERANCE: Keys =
    Keys { table: "[tolerance]", known: &["rain", "area", "width", "sill", "discharge"] };

/// The tolerances, those that are not given as usual; none where one is at fault.
pub(super) fn read(section: &Section<'_>, system: System) -> Option<Tolerances> {
    let usual = Tolerances::usual(system);
    let part = |key, usual: f64, most: f64| section.get(key).map_or(Some(usual), |cell| part(&cell, most));
    let length = |key, usual| section.get(key).map_or(Some(usual), |cell| cell.length());
    let (rain, area, discharge) =
        (part("rain", usual.rain, 10.0), part("area", usual.area, 10.0), part("discharge", usual.discharge, 0.99));
    let (width, sill) = (length("width", usual.width), length("sill", usual.sill));
    Some(Tolerances { rain: rain?, area: area?, width: width?, sill: sill?, discharge: discharge? })
}

fn part(cell: &Cell<'_>, most: f64) -> Option<f64> {
    let part = cell.number_not_negative()?;
    if part > most {
        cell.at_fault(format!("`{}` must be a part: at most {most}", cell.key), "too great", "0.1 is a tenth");
        return None;
    }
    Some(part)
}
