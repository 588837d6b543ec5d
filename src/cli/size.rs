//! `size`: rank the layouts that keep each area within its limits.

use std::process::ExitCode;

use rayon::prelude::*;

use crate::input::{Assumed, Project};
use crate::report::{self, Format, Fronted, Sized, Strengthened, Weighed};
use crate::search::{self, Answer, Cures, Options, Outcome, Stiffened, Stopped};

use super::watching::Ending;
use super::{Failure, OfProject};

/// Rank the layouts that keep each area of a roof within its limits.
///
/// Every layout that the catalogs and the ranges of the project allow is tried, or excluded by a proven bound. Exit code 0:
/// every area has a layout; 1: an area has none, or none was found in time, and the report says why; 2: the input cannot be
/// used.
#[derive(Debug, clap::Args)]
#[expect(clippy::struct_excessive_bools, reason = "each is a flag")]
pub(super) struct Args {
    #[command(flatten)]
    of: OfProject,
    /// How many layouts to list for each area, in place of the project's `keep`.
    #[arg(long, value_name = "N", allow_hyphen_values = true, value_parser = clap::value_parser!(u32).range(1..=10_000))]
    keep: Option<u32>,
    /// List every layout, not only the best with the same number of each device.
    #[arg(long)]
    all: bool,
    /// Write out the arithmetic of each area's first layout, as by hand.
    #[arg(long)]
    work: bool,
    /// Show each area's first layout under every flow law that its devices can follow.
    #[arg(long)]
    laws: bool,
    /// Say of each area with layouts which single change would save most: more load, lower sills, one device more.
    #[arg(long)]
    binds: bool,
    /// List the layouts that no other beats in all of cost, worst load, count and width; of plans those of the plan's sizes.
    #[arg(long)]
    front: bool,
    #[command(flatten)]
    ending: Ending,
}

/// An area with a raised limit and its first layout there.
fn strengthened(found: &Result<Option<Stiffened>, Stopped>) -> Weighed<'_> {
    Ok(match found.as_ref().map_err(|&stopped| stopped)? {
        Some(stiffened) => stiffened.raised.layout().map(|layout| Strengthened { stiffened, layout }),
        None => None,
    })
}

pub(super) fn run(args: &Args) -> Result<ExitCode, Failure> {
    args.of.has_rows_for(&[(args.work, "--work"), (args.laws, "--laws"), (args.binds, "--binds")])?;
    let (project, areas) = args.of.read()?;
    super::without_set_height(&project.roof, &areas).map_or(Ok(()), Err)?;
    if args.front {
        super::closes_nothing(&project, &areas, "--front")?;
    }
    let watched = args.ending.watch()?;
    let mut options = project.options.clone();
    options.watch = watched.watch.clone();
    options.fold = !args.all;
    if let Some(keep) = args.keep {
        options.keep = keep as usize;
    }
    let answers = search::size(&project.roof, &options, &areas);
    let first = |answer: &Answer<'_>| match answer.outcome.layouts() {
        [first, ..] => search::under_every_law(&project.roof, answer.area, first),
        [] => Vec::new(),
    };
    let laws: Vec<_> = if args.laws { answers.iter().map(first).collect() } else { Vec::new() };
    let changes = |answer: &Answer<'_>| match &answer.outcome {
        Outcome::Infeasible(_) => Some(search::cures(&project.roof, &options, answer.area)),
        Outcome::Optimal(_) if args.binds => search::binds(&project.roof, &options, answer.area),
        Outcome::Optimal(_) | Outcome::Stopped { .. } => None,
    };
    let changes: Vec<_> = answers.par_iter().map(changes).collect();
    let opened: Vec<_> = changes.par_iter().map(|changes| changes.as_ref().map(Cures::open)).collect();
    let plans = project.plan.map(|asked| (asked, search::plan(&project.roof, &options, asked, &areas)));
    let price = project.structure.as_ref();
    let stiffened = |structure| {
        let of_area = |answer: &Answer<'_>| search::stiffened(&project.roof, &options, structure, answer.area);
        answers.par_iter().map(of_area).collect::<Vec<_>>()
    };
    let stiffened = price.map_or(Vec::new(), stiffened);
    let stronger = project
        .plan
        .zip(price)
        .and_then(|(asked, price)| search::stiffened_plan(&project.roof, &options, asked, price, &areas));
    let strengthened: Vec<_> = stiffened.iter().map(strengthened).collect();
    let fronts = if args.front { fronts(args, &project, &options, &areas) } else { Vec::new() };
    let unbeaten = plans.as_ref().filter(|_| args.front).and_then(|(asked, found)| {
        let cheapest = found.as_ref()?.plans.first()?;
        Some(search::plan_front(&project.roof, &options, *asked, &areas, cheapest))
    });
    drop(watched);
    let closing = project.assumed_of_closing(|area| area.replace.is_some());
    let assumed: Vec<Assumed> = project.assumed.iter().cloned().chain(closing).collect();
    let sized = Sized {
        roof: &project.roof,
        options: &options,
        assumed: &assumed,
        answers: &answers,
        work: args.work,
        laws: &laws,
        changes: &opened,
        structure: price.map(|price| (price, &strengthened[..])),
        fronts: &fronts,
        plans: plans.as_ref().map(|(asked, found)| report::Asked {
            asked: *asked,
            found: found.as_ref(),
            front: unbeaten.as_ref(),
            stiffened: stronger.as_ref(),
        }),
    };
    args.of.deliver(|format, width| report::size(&sized, format, width))?;
    let without = answers.iter().any(|answer| answer.outcome.layouts().is_empty());
    let unplanned = plans.iter().any(|(_, found)| found.as_ref().is_none_or(|plans| plans.plans.is_empty()));
    Ok(if without || unplanned { ExitCode::from(1) } else { ExitCode::SUCCESS })
}

/// The layouts that are not beaten, with all that the form asked for says of them.
fn fronts<'r>(args: &Args, project: &'r Project, options: &Options, areas: &[usize]) -> Vec<Fronted<'r>> {
    let most = match Format::from(args.of.format) {
        Format::Table | Format::Markdown => report::FRONT_ROWS,
        Format::Json | Format::Csv => usize::MAX,
    };
    let fronts = search::front(&project.roof, options, areas);
    fronts.into_iter().map(|front| Fronted { opened: front.opened(most), front }).collect()
}
