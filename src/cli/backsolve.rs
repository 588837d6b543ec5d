//! `backsolve`: what a given layout could take, one unknown at a time.

use std::process::ExitCode;

use rayon::prelude::*;

use crate::report::{self, Backsolved};
use crate::review::{self, Unknown};

use super::given::Chosen;
use super::{Failure, OfProject};

/// Work backwards from given layouts: the one value at which each just holds every case, all else as given.
///
/// How much rain, how much roof, how high a sill, how narrow an opening, how few devices, how low a limit, how many blocked.
/// The layouts are those of the project, each a [[layout]] or rows of a `schedule`. Exit code 0: done; 2: the input cannot be
/// used.
#[derive(Debug, clap::Args)]
pub(super) struct Args {
    #[command(flatten)]
    of: OfProject,
    #[command(flatten)]
    given: Chosen,
    /// The unknown: rain, area, set-height, width, count, limit, blocked, or all of them, one after another.
    #[arg(long = "for", value_name = "UNKNOWN", value_parser = unknowns, default_value = "all")]
    unknowns: Unknowns,
}

/// Unknowns that are solved for.
#[derive(Clone, Debug)]
struct Unknowns(Vec<Unknown>);

fn unknowns(text: &str) -> Result<Unknowns, String> {
    if text == "all" {
        return Ok(Unknowns(Unknown::ALL.to_vec()));
    }
    let named = Unknown::ALL.into_iter().find(|unknown| unknown.name() == text);
    named.map(|unknown| Unknowns(vec![unknown])).ok_or_else(|| {
        let names = Unknown::ALL.map(Unknown::name).join(", ");
        format!("{names} or all would pass")
    })
}

pub(super) fn run(args: &Args) -> Result<ExitCode, Failure> {
    let (project, areas) = args.of.read()?;
    let given = args.given.of(&project, &areas)?;
    let checked = review::check(&project.roof, &project.options, &given);
    let layouts: Vec<_> = checked
        .into_par_iter()
        .map(|checked| {
            let one = |&unknown: &Unknown| review::backsolve(&project.roof, &project.options, checked.given, unknown);
            let solved = args.unknowns.0.iter().map(one).collect();
            (checked, solved)
        })
        .collect();
    let backsolved =
        Backsolved { roof: &project.roof, options: &project.options, assumed: &project.assumed, layouts: &layouts };
    args.of.deliver(|format, width| report::backsolve(&backsolved, format, width))?;
    Ok(ExitCode::SUCCESS)
}
