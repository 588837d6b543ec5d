//! `start`: write a first project with its catalogs beside it.

use std::io;
use std::path::PathBuf;
use std::process::ExitCode;

use crate::input;

use super::{Failure, Units, deliver};

/// Write a commented project that runs as it is, with catalogs beside it; never over a file that is there.
#[derive(Debug, clap::Args)]
pub(super) struct Args {
    /// The project file to write.
    project: PathBuf,
    /// Units of the project.
    #[arg(long, value_enum, default_value_t = Units::Us)]
    units: Units,
}

pub(super) fn run(args: &Args) -> Result<ExitCode, Failure> {
    let written = input::start(&args.project, args.units.into()).map_err(|(path, error)| {
        let path = path.display();
        match error.kind() {
            io::ErrorKind::AlreadyExists => Failure::said(
                &format!("`{path}` is there already"),
                "give another name or folder: nothing is overwritten",
            ),
            _ => Failure::said(&format!("cannot write `{path}`: {error}"), "check the path and the rights"),
        }
    })?;
    let mut text: String = written.iter().map(|path| format!("wrote {}\n", path.display())).collect();
    text += &format!("Now run: brimline size {}\n", args.project.display());
    deliver(&text, None)?;
    Ok(ExitCode::SUCCESS)
}
