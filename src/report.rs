//! The model and its answers into reports: tables, Markdown, JSON, CSV, and the arithmetic behind them.
//!
//! Nothing here computes a level or a rank; it says what the model and the search hand over, in the units of the project
//! (JSON: SI, with the unit in each key), with the assumptions that were made and the cautions that apply to this very roof.

use std::io;

use crate::device::{Law, Site, Size};
use crate::input::Assumed;
use crate::roof::Roof;
use crate::rules::RuleSet;
use crate::search::{
    Answer, Front, Opened, Opening, Options, PlanAsked, PlanAt, PlanFront, Plans, Ranked, StiffenedPlan, Structure,
    UnderLaw,
};
use crate::units::{Flow, Length, Load, System};

mod backsolve;
mod beside;
mod cascade;
mod check;
mod codebook;
mod contents;
mod cures;
mod front;
mod head;
mod heights;
mod json;
mod kinds;
mod marks;
mod measure;
mod mend;
mod notes;
mod page;
mod plan;
mod ponding;
mod ranking;
mod rate;
mod reasons;
mod rules;
mod schedule;
mod sensitivity;
mod storage;
mod storm;
mod structure;
mod tradeoff;
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
    /// The answers, in the order of their areas on the roof, in which they are reported.
    pub answers: &'a [Answer<'r>],
    /// Whether the arithmetic of each area's first layout is written out.
    pub work: bool,
    /// Each answer's first layout under every law that it can follow; empty where that is not asked for.
    pub laws: &'a [Vec<UnderLaw>],
    /// In the order of the answers: what would cure one that has no layout; of one that has, what its cost binds on, where
    /// that was asked for.
    pub changes: &'a [Option<Opened<'a>>],
    /// The price of strength, where the project gives one, and in the order of the answers each area so strengthened: an
    /// inner none where no raise opens a layout, an error where the search was ended before that was known.
    pub structure: Option<(&'a Structure, &'a [Weighed<'a>])>,
    /// The layouts that are not beaten, area by area in the order of the answers; empty where that is not asked for.
    pub fronts: &'a [Fronted<'r>],
    /// The plans of the whole roof, where one was asked for.
    pub plans: Option<Asked<'a, 'r>>,
}

impl<'a, 'r> Sized<'a, 'r> {
    /// What the notes of a report are about.
    fn told(&self) -> notes::Told<'a, 'r> {
        let of_area = |answer: &'a Answer<'r>| answer.outcome.layouts().iter().map(|layout| (answer.area, layout));
        // Those that a table shows, in every form: what is said of a roof does not depend on the form.
        let shown = |fronted: &'a Fronted<'r>| {
            fronted.opened.iter().take(FRONT_ROWS).map(|layout| (fronted.front.area, layout))
        };
        let fronts = self.fronts.iter().flat_map(shown);
        notes::Told {
            roof: self.roof,
            options: self.options,
            assumed: self.assumed,
            areas: self.answers.iter().map(|answer| answer.area).collect(),
            layouts: self.answers.iter().flat_map(of_area).chain(fronts).collect(),
            searched: true,
            fronts: !self.fronts.is_empty(),
            plan: self.plans.is_some(),
        }
    }

    fn place(&self, area: usize) -> Option<usize> {
        self.answers.binary_search_by_key(&area, |answer| answer.area).ok()
    }

    /// The first layout of an area under every law; none where that was not asked for.
    fn laws_of(&self, area: usize) -> Option<&'a [UnderLaw]> {
        self.place(area).and_then(|place| self.laws.get(place)).map(Vec::as_slice)
    }

    /// The layouts of an area that are not beaten; none where that was not asked for.
    fn front_of(&self, area: usize) -> Option<&'a Fronted<'r>> {
        let place = self.fronts.binary_search_by_key(&area, |fronted| fronted.front.area).ok();
        place.map(|place| &self.fronts[place])
    }

    /// What would cure an area without a layout, or what the cost of another binds on.
    fn changes_of(&self, area: usize) -> Option<&'a Opened<'a>> {
        self.place(area).and_then(|place| self.changes.get(place)).and_then(Option::as_ref)
    }
}

/// What was asked of the whole roof, and what was found.
#[derive(Clone, Copy, Debug)]
pub struct Asked<'a, 'r> {
    /// What was asked.
    pub asked: PlanAsked,
    /// The plans; none where a device has no price.
    pub found: Option<&'a Plans<'r>>,
    /// The plans that are not beaten; none where that is not asked for, or there is no plan.
    pub front: Option<&'a PlanFront<'r>>,
    /// The cheapest plan where load limits may be raised; none where strength has no price, or none was found.
    pub stiffened: Option<&'a StiffenedPlan>,
}

/// The layouts of an area that are not beaten.
#[derive(Debug)]
pub struct Fronted<'r> {
    /// All of them.
    pub front: Front<'r>,
    /// All that is reported of them: of every one for JSON and CSV, of the first [`FRONT_ROWS`] for tables.
    pub opened: Vec<Ranked<'r>>,
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

/// Writes how given layouts stand; of JSON and CSV, which may be long, no more is held than is being written.
///
/// # Errors
/// Those of the writer.
pub fn check(checks: &Checks<'_, '_>, format: Format, width: usize, out: &mut dyn io::Write) -> io::Result<()> {
    check::write(checks, format, width, &mut io::BufWriter::with_capacity(BLOCK, out))
}

/// How much of a long report is handed on at once, bytes.
const BLOCK: usize = 1 << 16;

/// Writes what given layouts could take.
pub fn backsolve(backsolved: &Backsolved<'_, '_>, format: Format, width: usize) -> String {
    backsolve::write(backsolved, format, width)
}

/// What a report of one device's flows is made of.
#[derive(Clone, Debug)]
pub struct Rated<'a> {
    /// The device.
    pub size: &'a Size,
    /// Where it stands.
    pub site: Site,
    /// Its sill above the roof before it, for laws that ask.
    pub sill: Length,
    /// The laws, in the order in which they are shown.
    pub laws: Vec<Law>,
    /// Whether every law of its kind was asked for.
    pub all: bool,
    /// The heads at which flows are shown.
    pub heads: Vec<Length>,
    /// The flow for which heads are shown instead.
    pub flow: Option<Flow>,
    /// The units.
    pub system: System,
}

pub use backsolve::Backsolved;
pub use check::Checks;
pub use front::FRONT_ROWS;
pub use rate::head_for;
pub use structure::{Strengthened, Weighed};

/// Writes what a device passes under each law.
pub fn rate(rated: &Rated<'_>, format: Format, width: usize) -> String {
    rate::write(rated, format, width)
}

/// What a report of least cost against the load limit is made of.
#[derive(Clone, Debug)]
pub struct Traded<'a> {
    /// The roof as given.
    pub roof: &'a Roof,
    /// The least raise that was looked at.
    pub lowest: Load,
    /// The greatest.
    pub highest: Load,
    /// The treads of each area, by its index, each with its layout; none where the search was ended before.
    pub areas: Vec<(usize, Option<Vec<Opening<'a>>>)>,
    /// The price of strength, where the project gives one.
    pub structure: Option<&'a Structure>,
    /// The cheapest plan at each step, where a plan is asked for; an inner none where a device has no price.
    pub plans: Option<Option<Vec<PlanAt>>>,
}

/// Writes what more load on the roof saves.
pub fn tradeoff(traded: &Traded<'_>, format: Format, width: usize) -> String {
    tradeoff::write(traded, format, width)
}

/// Writes what is in a catalog.
pub fn contents(sizes: &[Size], title: &str, system: System, format: Format, width: usize) -> String {
    contents::write(sizes, title, system, format, width)
}

/// Writes what a rule set asks; of several, row by row beside one another.
pub fn rule_sets(sets: &[RuleSet], system: System, format: Format, width: usize) -> String {
    codebook::write(sets, system, format, width)
}

/// Writes what a rule can ask, and rule sets by the names that a project gives.
pub fn rule_kinds(sets: &[(String, RuleSet)], format: Format, width: usize) -> String {
    kinds::write(sets, format, width)
}

/// A number for another program: no separator of thousands, no zeros at its end.
fn plain(value: f64, decimals: usize) -> String {
    without_zeros(fixed(value, decimals))
}

/// A number without the zeros at the end of its decimals.
fn without_zeros(mut number: String) -> String {
    if number.contains('.') {
        number.truncate(number.trim_end_matches('0').trim_end_matches('.').len());
    }
    number
}

/// A number with so many decimals, rounded as `format!` rounds it, which takes its time over what is short: 2.5 with four.
fn fixed(value: f64, decimals: usize) -> String {
    let scale = 10_u32.pow(decimals.min(9) as u32);
    let scaled = value.abs() * f64::from(scale);
    let whole = scaled as u64;
    let part = scaled - whole as f64;
    // The product is off by far less than what stands between it and a tie: the last digit is known.
    let known = (1..=9).contains(&decimals) && scaled < 1e9 && (part - 0.5).abs() > 1e-6;
    if !known {
        return format!("{value:.decimals$}");
    }
    let (sign, units) = (if value.is_sign_negative() { "-" } else { "" }, whole + u64::from(part > 0.5));
    format!("{sign}{}.{:0decimals$}", units / u64::from(scale), units % u64::from(scale))
}

/// Rows as CSV.
fn written(rows: &[Vec<String>]) -> String {
    let mut writer = csv::Writer::from_writer(Vec::new());
    for row in rows {
        // Writing to memory does not fail.
        let _ = writer.write_record(row);
    }
    writer.into_inner().ok().and_then(|bytes| String::from_utf8(bytes).ok()).unwrap_or_default()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn decimals_are_those_of_the_standard_library() {
        let whole = (0..20_000).map(|step| f64::from(step) / 64.0);
        let others = (0..20_000).map(|step| f64::from(step * step) * 0.000_123_457 - 900.0);
        let odd = [-0.0, -1e-9, 0.5, 0.005, 0.015, 2.675, 1e8, 123_456.789_05, 1e300, f64::INFINITY, f64::NAN];
        for value in whole.chain(others).chain(odd) {
            for decimals in 0..=6 {
                assert_eq!(fixed(value, decimals), format!("{value:.decimals$}"), "{value:?}");
            }
        }
    }
}
