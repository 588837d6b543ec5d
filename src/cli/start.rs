//! `start`: write a first project with its catalogs beside it, or a first rule set.

use std::io;
use std::path::{Path, PathBuf};
use std::process::ExitCode;

use crate::input;

use super::{Failure, Units, deliver};

/// Write a commented project that runs as it is, with catalogs beside it; never over a file that is there.
#[derive(Debug, clap::Args)]
pub(super) struct Args {
    /// The project file to write, or the rule set.
    file: PathBuf,
    /// Units of the project.
    #[arg(long, value_enum, default_value_t = Units::Us)]
    units: Units,
    /// Write a rule set to fill in instead: every kind of rule with every key, commented.
    #[arg(long, conflicts_with = "units")]
    rules: bool,
}

pub(super) fn run(args: &Args) -> Result<ExitCode, Failure> {
    let text = if args.rules {
        input::start_rules(&args.file).map_err(|error| not_written(&args.file, &error))?;
        let file = args.file.display();
        format!("wrote {file}\nFill it in, then run: brimline rules {file}\n")
    } else {
        let written =
            input::start(&args.file, args.units.into()).map_err(|(path, error)| not_written(&path, &error))?;
        let wrote: String = written.iter().map(|path| format!("wrote {}\n", path.display())).collect();
        format!("{wrote}Now run: brimline size {}\n", args.file.display())
    };
    deliver(&text, None)?;
    Ok(ExitCode::SUCCESS)
}

fn not_written(path: &Path, error: &io::Error) -> Failure {
    let path = path.display();
    match error.kind() {
        io::ErrorKind::AlreadyExists => {
            Failure::said(&format!("`{path}` is there already"), "give another name or folder: nothing is overwritten")
        }
        _ => Failure::said(&format!("cannot write `{path}`: {error}"), "check the path and the rights"),
    }
}
