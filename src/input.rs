//! Files into the model: project, catalogs, ratings. Every fault with its place, all of them in one run.

use std::path::Path;

use crate::device::Size;
use crate::review::Tolerances;
use crate::roof::{Catchment, Given, Roof};
use crate::rules::RuleSet;
use crate::search::{Options, PlanAsked, Structure};
use crate::units::Money;

mod area;
mod catalog;
mod defaults;
mod existing;
mod facts;
mod fault;
mod file;
mod flow;
mod grid;
mod height;
mod layout;
mod ponding;
mod project;
mod rainfall;
mod rating;
mod rules;
mod schedule;
mod section;
mod setting;
mod sheet;
mod shipped;
mod start;
mod storm;
mod structure;
mod tolerance;

pub use defaults::{DEFAULTS, Default};
pub use fault::{Fault, Faults, Place, Severity, Source, Span};
pub use start::{start, start_rules};

/// A project as its files give it.
#[derive(Clone, Debug)]
pub struct Project {
    /// The roof, ready to be computed.
    pub roof: Roof,
    /// What is asked of the search.
    pub options: Options,
    /// What is asked of the whole roof, where a plan is asked for.
    pub plan: Option<PlanAsked>,
    /// What a stronger roof costs, where the project says.
    pub structure: Option<Structure>,
    /// The layouts that the project gives, in the order of the files.
    pub layouts: Vec<Given>,
    /// What closing or removing one opening costs in each area; none where that is not given, which counts as nothing.
    pub replace: Vec<Option<Money>>,
    /// How far each input may be off, for the worse.
    pub tolerances: Tolerances,
    /// What was taken where the files say nothing.
    pub assumed: Vec<Assumed>,
    /// What in the files is probably not meant; they can be used all the same.
    pub warnings: Faults,
}

impl Project {
    /// What is taken for the price of closing openings in those of the areas that give none: nothing.
    pub fn assumed_of_closing(&self, concerned: impl Fn(&Catchment) -> bool) -> Option<Assumed> {
        let areas = self.replace.iter().zip(&self.roof.areas);
        let free = areas.filter(|(price, area)| price.is_none() && concerned(area));
        let areas: Vec<String> = free.map(|(_, area)| area.name.clone()).collect();
        let all = areas.len() == self.roof.areas.len();
        let default = defaults::default("area.replace");
        (!areas.is_empty()).then(|| Assumed { default, areas: if all { Vec::new() } else { areas } })
    }
}

/// A default that was taken.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Assumed {
    /// The default.
    pub default: &'static Default,
    /// Names of the areas for which it was taken; empty where it holds for the whole roof.
    pub areas: Vec<String>,
}

/// A catalog as its file gives it.
#[derive(Clone, Debug)]
pub struct Catalog {
    /// Its title, or its path where it has none.
    pub title: String,
    /// Every size of every device, in the order of the file.
    pub sizes: Vec<Size>,
}

/// Reads a catalog and the rating tables that it names.
///
/// # Errors
/// Every fault of the catalog and its tables, each with its place.
pub fn read_catalog(path: &Path) -> Result<Catalog, Faults> {
    let log = fault::Log::default();
    let catalog = catalog::read_alone(path, &log);
    let faults = log.into_faults();
    catalog.filter(|_| !faults.any_error()).ok_or(faults)
}

/// Reads rule sets, each by its path or by its name among those that come with the program, and what in them is probably not
/// meant.
///
/// # Errors
/// Every fault of every file, each with its place; two sets of one title are one.
pub fn read_rules(paths: &[&Path]) -> Result<(Vec<RuleSet>, Faults), Faults> {
    let log = fault::Log::default();
    let sets = rules::read_alone(paths, &log);
    let faults = log.into_faults();
    match sets {
        Some(sets) if !faults.any_error() => Ok((sets, faults)),
        _ => Err(faults),
    }
}

/// The rule sets that come with the program, each with the name that a project gives.
pub fn shipped_rules() -> Vec<(String, RuleSet)> {
    let read = |name: String| {
        let (sets, _) = read_rules(&[Path::new(&name)]).ok()?;
        Some(name).zip(sets.into_iter().next())
    };
    shipped::Sort::RuleSet.names().into_iter().filter_map(read).collect()
}

/// Reads a project and all files that it names.
///
/// # Errors
/// Every fault of every file, each with its place, what was found and what would pass.
pub fn read(path: &Path) -> Result<Project, Faults> {
    project::read(path)
}

/// The names of a list, for a message about one that is not among them: the nearest, where one is near.
pub fn nearest<'n>(typed: &str, names: impl IntoIterator<Item = &'n str>) -> Option<&'n str> {
    section::near(typed, names)
}
