//! `rules`: which kinds of rule and which sets there are, what a set asks, and how sets compare.

use std::io::{self, Write};
use std::path::{Path, PathBuf};
use std::process::ExitCode;

use crate::input;
use crate::report::{self, Format};
use crate::units::System;

use super::{Failure, Form, Units, coloured_messages, deliver, faults, width};

/// Read a rule set aloud: every rule in words with its number, clause, source and how it is known; or every fault in it.
///
/// Without a file: what a rule can ask, in which words, and the sets that come with the program. Such a set is named as in a
/// project, `builtin:rules/ipc`.
#[derive(Debug, clap::Args)]
pub(super) struct Args {
    /// The file of the set; without it, what a rule can ask and which sets come with the program.
    #[arg(value_name = "FILE")]
    set: Option<PathBuf>,
    /// Put these sets beside it, row by row, the strictest number of each row marked; may be given several times.
    #[arg(long, value_name = "FILE", requires = "set")]
    against: Vec<PathBuf>,
    /// Form of the result.
    #[arg(long, value_enum, default_value_t = Form::Table)]
    format: Form,
    /// Units of the words; numbers of JSON and CSV are SI whatever they are [default: us, si in JSON and CSV].
    #[arg(long, value_enum)]
    units: Option<Units>,
    /// Write the result to a file instead of stdout.
    #[arg(long, value_name = "FILE")]
    output: Option<PathBuf>,
}

pub(super) fn run(args: &Args) -> Result<ExitCode, Failure> {
    let (format, width) = (Format::from(args.format), width(args.output.as_ref()));
    let for_programs = matches!(args.format, Form::Json | Form::Csv);
    let system = args.units.map_or(if for_programs { System::Si } else { System::Us }, System::from);
    let paths: Vec<&Path> = args.set.iter().chain(&args.against).map(PathBuf::as_path).collect();
    let text = if paths.is_empty() {
        report::rule_kinds(&input::shipped_rules(), format, width)
    } else {
        let (sets, doubtful) = input::read_rules(&paths).map_err(|found| faults(&found))?;
        if !doubtful.0.is_empty() {
            let _ = writeln!(io::stderr(), "{}\n", doubtful.render(coloured_messages()));
        }
        report::rule_sets(&sets, system, format, width)
    };
    deliver(&text, args.output.as_ref())?;
    Ok(ExitCode::SUCCESS)
}
