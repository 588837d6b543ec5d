//! `size`: rank the layouts that keep each area within its limits.

use std::process::ExitCode;

use crate::input::Project;
use crate::report::{self, Format, Fronted, Sized};
use crate::search::{self, Answer, Cures, Options, Outcome};

use super::{Failure, OfProject};

/// Rank the layouts that keep each area of a roof within its limits.
///
/// Every layout that the catalogs and the ranges of the project allow is tried, or excluded by a proven bound. Exit code 0:
/// every area has a layout; 1: an area has none, and the report says why; 2: the input cannot be used.
#[derive(Debug, clap::Args)]
#[expect(clippy::struct_excessive_bools, reason = "each is a flag of its own on the command line")]
pub(super) struct Args {
    #[command(flatten)]
    of: OfProject,
    /// How many layouts to list for each area, in place of the project's `keep`.
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u32).range(1..=10_000))]
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
    /// List the layouts that no other beats in all of cost, worst load, count and width; of plans those of the plan's sizes.
    #[arg(long)]
    front: bool,
}

pub(super) fn run(args: &Args) -> Result<ExitCode, Failure> {
    let (project, areas) = args.of.read()?;
    let mut options = project.options.clone();
    options.fold = !args.all;
    if let Some(keep) = args.keep {
        options.keep = keep as usize;
    }
    let answers = search::size(&project.roof, &options, &areas);
    let first = |answer: &Answer<'_>| match &answer.outcome {
        Outcome::Optimal(layouts) => search::under_every_law(&project.roof, answer.area, &layouts[0]),
        Outcome::Infeasible(_) => Vec::new(),
    };
    let laws: Vec<_> = if args.laws { answers.iter().map(first).collect() } else { Vec::new() };
    let cured = |answer: &Answer<'_>| match &answer.outcome {
        Outcome::Infeasible(_) => Some(search::cures(&project.roof, &options, answer.area)),
        Outcome::Optimal(_) => None,
    };
    let cures: Vec<_> = answers.iter().map(cured).collect();
    let opened: Vec<_> = cures.iter().map(|cures| cures.as_ref().map(Cures::open)).collect();
    let plans = project.plan.map(|asked| (asked, search::plan(&project.roof, &options, asked, &areas)));
    let fronts = if args.front { fronts(args, &project, &options, &areas) } else { Vec::new() };
    let unbeaten = plans.as_ref().filter(|_| args.front).and_then(|(asked, found)| {
        let cheapest = found.as_ref()?.plans.first()?;
        Some(search::plan_front(&project.roof, &options, *asked, &areas, cheapest))
    });
    let sized = Sized {
        roof: &project.roof,
        options: &options,
        assumed: &project.assumed,
        answers: &answers,
        work: args.work,
        laws: &laws,
        cures: &opened,
        fronts: &fronts,
        plans: plans.as_ref().map(|(asked, found)| report::Asked {
            asked: *asked,
            found: found.as_ref(),
            front: unbeaten.as_ref(),
        }),
    };
    args.of.deliver(|format, width| report::size(&sized, format, width))?;
    let infeasible = answers.iter().any(|answer| matches!(answer.outcome, Outcome::Infeasible(_)));
    let unplanned = plans.iter().any(|(_, found)| found.as_ref().is_none_or(|plans| plans.plans.is_empty()));
    Ok(if infeasible || unplanned { ExitCode::from(1) } else { ExitCode::SUCCESS })
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
