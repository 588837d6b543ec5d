//! `rules`: what a rule set asks, and how sets compare.

use std::io::{self, Write};
use std::path::PathBuf;
use std::process::ExitCode;

use crate::input::{self, Faults};
use crate::report::{self, Format};
use crate::rules::RuleSet;

use super::{Failure, Form, Units, coloured_messages, deliver, width};

/// Read a rule set aloud: every rule in words with its number, clause, source and how it is known; or every fault in it.
///
/// A set that comes with the program is named as in a project, such as `builtin:rules/ipc`.
#[derive(Debug, clap::Args)]
pub(super) struct Args {
    /// The file of the set.
    #[arg(value_name = "FILE")]
    set: PathBuf,
    /// Put these sets beside it, row by row, the strictest number of each row marked; may be given several times.
    #[arg(long, value_name = "FILE")]
    against: Vec<PathBuf>,
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
    let paths: Vec<&PathBuf> = [&args.set].into_iter().chain(&args.against).collect();
    let read: Vec<Result<(RuleSet, Faults), Faults>> = paths.iter().map(|path| input::read_rules(path)).collect();
    // Every fault of every file in one run.
    let told: Vec<String> = read
        .iter()
        .map(|read| match read {
            Ok((_, found)) | Err(found) => found.render(coloured_messages()),
        })
        .filter(|told| !told.is_empty())
        .collect();
    if read.iter().any(Result::is_err) {
        return Err(Failure::Message(told.join("\n")));
    }
    if !told.is_empty() {
        let _ = writeln!(io::stderr(), "{}\n", told.join("\n"));
    }
    let sets: Vec<RuleSet> = read.into_iter().filter_map(|read| read.ok().map(|(set, _)| set)).collect();
    let text = report::rule_sets(&sets, args.units.into(), Format::from(args.format), width(args.output.as_ref()));
    deliver(&text, args.output.as_ref())?;
    Ok(ExitCode::SUCCESS)
}
