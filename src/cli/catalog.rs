//! `catalog`: what is in a catalog, and what is wrong with it.

use std::path::PathBuf;
use std::process::ExitCode;

use crate::input;
use crate::report::{self, Format};

use super::{Failure, Form, Units, deliver, faults, width};

/// List what is in a catalog: devices, sizes, ranges, prices and sources; or every fault in it.
#[derive(Debug, clap::Args)]
pub(super) struct Args {
    /// The catalog file.
    catalog: PathBuf,
    /// Form of the result.
    #[arg(long, value_enum, default_value_t = Form::Table)]
    format: Form,
    /// Units of the result.
    #[arg(long, value_enum, default_value_t = Units::Us)]
    units: Units,
    /// Write the result to a file instead of stdout.
    #[arg(long, value_name = "FILE")]
    output: Option<PathBuf>,
}

pub(super) fn run(args: &Args) -> Result<ExitCode, Failure> {
    let catalog = input::read_catalog(&args.catalog).map_err(|found| faults(&found))?;
    let text = report::contents(
        &catalog.sizes,
        &catalog.title,
        args.units.into(),
        Format::from(args.format),
        width(args.output.as_ref()),
    );
    deliver(&text, args.output.as_ref())?;
    Ok(ExitCode::SUCCESS)
}
