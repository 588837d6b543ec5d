//! The table `[structure]`: what a stronger roof costs.

use crate::search::{Raises, Structure};
use crate::units::{Dimension, Load, System};

use super::Assumed;
use super::defaults::{self, MOST_RAISE_SI, MOST_RAISE_US};
use super::section::{Keys, Section, optional};

pub(super) static STRUCTURE: Keys = Keys { table: "[structure]", known: &["stiffen", "step", "most"] };

/// Most steps up to the greatest raise: a plan is searched at each.
const MOST_STEPS: f64 = 1000.0;

/// The structure; none where it is at fault.
pub(super) fn read(section: &Section<'_>, system: System, assumed: &mut Vec<Assumed>) -> Option<Structure> {
    let stiffen = section
        .need("stiffen", "give the price of a square foot that carries a psf more: stiffen = \"0.07 / ft2 / psf\"")
        .and_then(|cell| cell.price(&[Dimension::Area, Dimension::Load]));
    let load = |key| section.get(key).map(|cell| cell.positive(Dimension::Load, Load::pa));
    let (step, most) = (optional(load("step")), load("most"));
    let most = most.unwrap_or_else(|| {
        assumed.push(Assumed { default: defaults::default("structure.most"), areas: Vec::new() });
        Some(if system == System::Us { MOST_RAISE_US } else { MOST_RAISE_SI })
    });
    let structure = Structure { stiffen: stiffen?, step: step?, most: most? };
    let steps = structure.most.pa() / structure.step.unwrap_or(Raises::coarse(system)).pa();
    let cell = section.get("step").or(section.get("most"));
    if let Some(cell) = cell.filter(|_| !(1.0 - 1e-9..=MOST_STEPS).contains(&steps)) {
        let few = steps < 1.0;
        cell.at_fault(
            "`step` and `most` do not go together",
            if few {
                "not one step up to the greatest raise"
            } else {
                "more than 1,000 steps up to the greatest raise"
            },
            if few { "give a lesser step or a greater `most`" } else { "give a greater step or a lesser `most`" },
        );
        return None;
    }
    Some(structure)
}
