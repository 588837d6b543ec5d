//! `brimline tradeoff`: what more load on the roof saves in openings, area by area and for the plan.

use std::process::ExitCode;

use rayon::prelude::*;

use crate::report::{self, Traded};
use crate::search::{self, Options, Raises};
use crate::units::{Load, System};

use super::watching::Ending;
use super::{Failure, OfProject, quantity};

/// Least cost against the load limit: what a stronger or a weaker roof saves or costs in openings.
///
/// Each area's least cost is followed as its load limits are raised, every change of it found to 0.01 psf (or 1 Pa), or to the
/// step in which strength can be built; where the project asks for a plan, so is the plan, step by step. Exit code 1: an area
/// has no layout even at the greatest raise.
#[derive(Debug, clap::Args)]
pub(super) struct Args {
    #[command(flatten)]
    of: OfProject,
    /// The greatest raise of the load limits; 20 psf or 1 kPa where not given.
    #[arg(long, value_name = "LOAD", allow_hyphen_values = true)]
    up: Option<String>,
    /// How far under the given limits to look as well.
    #[arg(long, value_name = "LOAD", allow_hyphen_values = true)]
    down: Option<String>,
    /// Step of the plan; that of the structure, else 1 psf or 50 Pa, where not given.
    #[arg(long, value_name = "LOAD", allow_hyphen_values = true)]
    step: Option<String>,
    #[command(flatten)]
    ending: Ending,
}

/// Most steps of a range: one search each for the plan.
const MOST_STEPS: f64 = 1000.0;

pub(super) fn run(args: &Args) -> Result<ExitCode, Failure> {
    let (project, areas) = args.of.read()?;
    super::without_set_height(&project.roof, &areas).map_or(Ok(()), Err)?;
    if let Some(unpriced) = project.roof.sizes.iter().find(|size| size.price.is_none()) {
        let what = format!("a trade-off needs prices, and device `{}` has none", unpriced.tag);
        return Err(Failure::said(&what, "give it a price in its catalog: price = { each = 420 }"));
    }
    let us = project.roof.system == System::Us;
    let load = |flag, text: &Option<String>| quantity(flag, text.as_ref(), Load::pa);
    let up = load("--up", &args.up)?.unwrap_or(if us { Load::psf(20.0) } else { Load::from_pa(1000.0) });
    let down = load("--down", &args.down)?.unwrap_or(Load::from_pa(0.0));
    // Where strength comes in steps, no raise between them can be built.
    let built = project.structure.as_ref().and_then(|structure| structure.step);
    let step = load("--step", &args.step)?.or(built).unwrap_or(Raises::coarse(project.roof.system));
    if (up.pa() + down.pa()) / step.pa() > MOST_STEPS {
        return Err(Failure::said("--up, --down and --step ask for more than 1,000 steps", "give a greater --step"));
    }
    let limits = areas.iter().flat_map(|&area| &project.roof.areas[area].limits).filter_map(|limits| limits.load);
    if limits.map(Load::pa).any(|limit| limit <= down.pa()) {
        return Err(Failure::said("--down leaves no load limit", "go down by less than the least load limit"));
    }
    let raises = |step: Load| Raises::between(step, down, up);
    let fine = raises(built.unwrap_or(Raises::fine(project.roof.system)));
    let watched = args.ending.watch()?;
    let options = Options { watch: watched.watch.clone(), ..project.options.clone() };
    let treads = |&area: &usize| (area, search::tradeoff(&project.roof, &options, area, &fine));
    let treads: Vec<_> = areas.par_iter().map(treads).collect();
    let plan = |asked| search::plan_tradeoff(&project.roof, &options, asked, &areas, &raises(step));
    let lacking = treads.iter().any(|(_, treads)| treads.as_ref().map_or(true, Vec::is_empty));
    let traded = Traded {
        roof: &project.roof,
        lowest: Load::from_pa(-down.pa()),
        highest: up,
        areas: treads.iter().map(|(area, treads)| (*area, treads.as_deref().ok().map(search::opened))).collect(),
        plans: project.plan.map(plan),
        structure: project.structure.as_ref(),
    };
    drop(watched);
    args.of.deliver(|format, width| report::tradeoff(&traded, format, width))?;
    Ok(ExitCode::from(u8::from(lacking)))
}
