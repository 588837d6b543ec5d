//! `check`: given layouts side by side, and whether they pass.

use std::process::ExitCode;

use crate::report::{self, Checks};
use crate::review::{self, Storage};
use crate::roof::{Given, Roof};
use crate::search;

use super::{Failure, OfProject};

/// Hold given layouts against the limits of their areas: levels, loads, what fails, and how much higher the sills could be.
///
/// The layouts are those of the project, each a [[layout]] or rows of a `schedule`. Exit code 0: every layout passes; 1: one
/// fails; 2: the input cannot be used.
#[derive(Debug, clap::Args)]
pub(super) struct Args {
    #[command(flatten)]
    of: OfProject,
    /// Only this layout; may be given several times.
    #[arg(long, value_name = "NAME")]
    layout: Vec<String>,
    /// Set the best layout that a search finds beside the given ones.
    #[arg(long)]
    beside_best: bool,
    /// Route the storm through the storage of the roof as a second opinion, which changes no verdict.
    #[arg(long)]
    storage: bool,
}

pub(super) fn run(args: &Args) -> Result<ExitCode, Failure> {
    let (project, areas) = args.of.read()?;
    let mut given = project.layouts.clone();
    if given.is_empty() {
        let help = "give a [[layout]] with name, area and groups, or name a schedule: schedule = \"survey.csv\"";
        return Err(Failure::said("the project gives no layout to be checked", help));
    }
    for wanted in &args.layout {
        if !given.iter().any(|layout| layout.name == *wanted) {
            let names = given.iter().map(|layout| layout.name.as_str());
            let near = crate::input::nearest(wanted, names.clone())
                .map_or(String::new(), |near| format!("; did you mean `{near}`?"));
            let mut names: Vec<&str> = names.collect();
            names.dedup();
            names.truncate(12);
            return Err(Failure::said(
                &format!("there is no layout `{wanted}`{near}"),
                &format!("layouts are {}", names.join(", ")),
            ));
        }
    }
    given.retain(|layout| {
        areas.contains(&layout.area) && (args.layout.is_empty() || args.layout.contains(&layout.name))
    });
    let best = if args.beside_best {
        let options = search::Options { keep: 1, ..project.options.clone() };
        super::without_set_height(&project.roof, &areas).map_or(Ok(()), Err)?;
        Some(search::size(&project.roof, &options, &areas))
    } else {
        None
    };
    let checked = review::check(&project.roof, &project.options, &given);
    let storage = if args.storage { Some(routed(&project.roof, &given)?) } else { None };
    let checks = Checks {
        roof: &project.roof,
        options: &project.options,
        assumed: &project.assumed,
        areas: &areas,
        checked: &checked,
        best: best.as_deref(),
        storage: storage.as_ref(),
    };
    args.of.deliver(|format, width| report::check(&checks, format, width))?;
    Ok(ExitCode::from(u8::from(checked.iter().any(|checked| !checked.passes()))))
}

fn routed(roof: &Roof, given: &[Given]) -> Result<Storage, Failure> {
    let help = "check the sizes and flows of the layouts, or leave --storage out";
    review::storage(roof, given).map_err(|error| Failure::said(&format!("storage: {error}"), help))
}
