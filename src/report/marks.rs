//! The marks behind layouts: that one leaves the published range of its law, or rests on straight lines between rated rows.

use crate::hydraulics::limits::Range;
use crate::search::Ranked;
use crate::units::Length;

use super::words::{Words, list, trimmed};

/// The mark behind a layout that leaves the published range of its law.
const BEYOND: &str = "\u{2020}";
/// The mark behind a layout whose flow rests on straight lines between rated rows.
const CHORD: &str = "\u{2021}";

/// Excess of straight lines over logarithmic ones, as a part of the demand, from which it is told.
pub(super) const CHORD_TOLD: f64 = 0.02;

/// A layout in words, with its marks.
pub(super) fn marked(layout: &Ranked<'_>, words: Words) -> String {
    words.layout(layout) + &marks_of(layout)
}

/// The marks that stand behind a layout.
pub(super) fn marks_of(layout: &Ranked<'_>) -> String {
    let mut text = String::new();
    if !layout.beyond.is_empty() {
        text += &format!(" {BEYOND}");
    }
    if layout.chord > CHORD_TOLD {
        text += &format!(" {CHORD}");
    }
    text
}

/// What the marks behind some layouts say, each once.
pub(super) fn marks(layouts: &[&Ranked<'_>], words: Words) -> Vec<String> {
    let mut texts = Vec::new();
    let mut beyond: Vec<(&Range, f64)> = Vec::new();
    for &(range, value) in layouts.iter().flat_map(|layout| &layout.beyond) {
        let low = value < range.low;
        match beyond.iter_mut().find(|(known, other)| std::ptr::eq(*known, range) && (*other < range.low) == low) {
            Some((_, known)) => *known = if low { known.min(value) } else { known.max(value) },
            None => beyond.push((range, value)),
        }
    }
    if !beyond.is_empty() {
        let parts: Vec<_> = beyond.iter().map(|&(range, value)| out_of_range(range, value, words)).collect();
        texts.push(format!("{BEYOND} beyond the published range of its law, as far as {}.", list(&parts)));
    }
    let most = layouts.iter().map(|layout| layout.chord).fold(0.0, f64::max);
    if most > CHORD_TOLD {
        texts.push(format!(
            "{CHORD} straight lines and logarithms between rated rows differ by up to {} % of the flow.",
            trimmed(most * 100.0, 1)
        ));
    }
    texts
}

/// A value that lies outside a range, and the end that it passes.
pub(super) fn out_of_range(range: &Range, value: f64, words: Words) -> String {
    let shown = |value: f64| if range.unit.is_empty() { trimmed(value, 3) } else { words.depth(Length::from_m(value)) };
    let end = |value: f64| if range.unit.is_empty() { trimmed(value, 3) } else { words.size(Length::from_m(value)) };
    let (side, limit) = if value < range.low { ("under", range.low) } else { ("over", range.high) };
    format!("{} {} {side} {} ({})", range.what, shown(value), end(limit), range.law)
}
