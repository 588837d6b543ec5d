//! The model and its answers into reports: tables, Markdown, JSON, CSV, and the arithmetic behind them.
//!
//! Nothing here computes a level or a rank; it says what the model and the search hand over, in the units of the project
//! (JSON: SI, with the unit in each key), with the assumptions that were made and the cautions that apply to this very roof.

use crate::input::Assumed;
use crate::roof::Roof;
use crate::search::{Answer, Options};

mod json;
mod notes;
mod page;
mod ranking;
mod schedule;
mod words;
mod work;

/// The forms in which a report is written.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Format {
    /// Tables for a terminal.
    Table,
    /// One JSON document, SI.
    Json,
    /// One row for each group of each layout.
    Csv,
    /// Markdown.
    Markdown,
}

/// What a report of sized areas is made of.
#[derive(Clone, Copy, Debug)]
pub struct Sized<'a, 'r> {
    /// The roof.
    pub roof: &'r Roof,
    /// What was asked of the search.
    pub options: &'a Options,
    /// The defaults that were taken.
    pub assumed: &'a [Assumed],
    /// The answers, in the order in which they are reported.
    pub answers: &'a [Answer<'r>],
    /// Whether the arithmetic of each area's first layout is written out.
    pub work: bool,
}

/// Writes a report of sized areas; `width` is that of the terminal, in characters.
pub fn size(sized: &Sized<'_, '_>, format: Format, width: usize) -> String {
    match format {
        Format::Table => page::text(&ranking::page(sized), width),
        Format::Markdown => page::markdown(&ranking::page(sized)),
        Format::Json => json::document(sized),
        Format::Csv => schedule::rows(sized),
    }
}
