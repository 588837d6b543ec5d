//! `check`: given layouts side by side, and whether they pass.

use std::process::ExitCode;

use rayon::prelude::*;

use crate::input::{Assumed, Project};
use crate::report::{self, Checks};
use crate::review::{self, Checked, Mend, Storage};
use crate::roof::{Given, Roof};
use crate::search;
use crate::units::Money;

use super::given::Chosen;
use super::{Failure, OfProject};

/// Hold given layouts against the limits of their areas: levels, loads, what fails, and how much higher the sills could be.
///
/// The layouts are those of the project, each a [[layout]] or rows of a `schedule`. Exit code 0: every layout passes; 1: one
/// fails; 2: the input cannot be used.
#[derive(Debug, clap::Args)]
#[expect(clippy::struct_excessive_bools, reason = "each is a flag")]
pub(super) struct Args {
    #[command(flatten)]
    of: OfProject,
    #[command(flatten)]
    given: Chosen,
    /// Set the best layout that a search finds beside the given ones.
    #[arg(long)]
    beside_best: bool,
    /// Show what a step of each input does to each layout's load, the greatest first, and all of them at once; the steps are
    /// those of [tolerance].
    #[arg(long)]
    sensitivity: bool,
    /// Route the storm through the storage of the roof as a second opinion, which changes no verdict.
    #[arg(long)]
    storage: bool,
    /// Find what mends each layout that fails: the cheapest added, larger, lower or other openings that make it pass; and list
    /// the failing ones, worst first.
    #[arg(long)]
    mend: bool,
}

pub(super) fn run(args: &Args) -> Result<ExitCode, Failure> {
    args.of.has_rows_for(&[
        (args.beside_best, "--beside-best"),
        (args.sensitivity, "--sensitivity"),
        (args.storage, "--storage"),
    ])?;
    let (project, areas) = args.of.read()?;
    let given = args.given.of(&project, &areas)?;
    let best = if args.beside_best {
        let options = search::Options { keep: 1, ..project.options.clone() };
        super::without_set_height(&project.roof, &areas).map_or(Ok(()), Err)?;
        Some(search::size(&project.roof, &options, &areas))
    } else {
        None
    };
    let checked = review::check(&project.roof, &project.options, &given);
    let sensitivities: Option<Vec<_>> = args.sensitivity.then(|| {
        let one = |checked: &review::Checked<'_>| {
            let case = checked.standing.case;
            review::sensitivity(&project.roof, &project.options, checked.given, &project.tolerances, case)
        };
        checked.par_iter().map(one).collect()
    });
    let storage = if args.storage { Some(routed(&project.roof, &given)?) } else { None };
    let mends = if args.mend { Some(mends(&project, &areas, &checked)?) } else { None };
    // A mend may close openings of any area, a search only where the area says so.
    let closing = match (&mends, &best) {
        (Some(_), _) => project.assumed_of_closing(|_| true),
        (None, Some(_)) => project.assumed_of_closing(|area| area.replace.is_some()),
        (None, None) => None,
    };
    let assumed: Vec<Assumed> = project.assumed.iter().cloned().chain(closing).collect();
    let mended: Vec<Given> = mends.iter().flatten().flatten().map(|mend| mend.given.clone()).collect();
    let mended = review::check(&project.roof, &project.options, &mended);
    let checks = Checks {
        sensitivities: sensitivities.as_deref().map(|found| (found, &project.tolerances)),
        roof: &project.roof,
        options: &project.options,
        assumed: &assumed,
        areas: &areas,
        checked: &checked,
        best: best.as_deref(),
        storage: storage.as_ref(),
        mends: mends.as_deref(),
        mended: &mended,
    };
    args.of.deliver_written(|format, width, out| report::check(&checks, format, width, out))?;
    Ok(ExitCode::from(u8::from(checked.iter().any(|checked| !checked.passes()))))
}

/// What mends each layout, where a search has set heights to try.
fn mends(project: &Project, areas: &[usize], checked: &[Checked<'_>]) -> Result<Vec<Vec<Mend>>, Failure> {
    super::without_set_height(&project.roof, areas).map_or(Ok(()), Err)?;
    let replace: Vec<Money> = project.replace.iter().map(|price| price.unwrap_or_default()).collect();
    Ok(review::mends(&project.roof, &project.options, &replace, checked))
}

fn routed(roof: &Roof, given: &[Given]) -> Result<Storage, Failure> {
    let help = "check the sizes and flows of the layouts, or leave --storage out";
    review::storage(roof, given).map_err(|error| Failure::said(&format!("storage: {error}"), help))
}
