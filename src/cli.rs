//! The command line: flags, streams and exit codes. Everything a command does, the library can do.

use std::io::{self, IsTerminal, Write};
use std::path::PathBuf;
use std::process::ExitCode;

use clap::{Parser, Subcommand, ValueEnum};

use crate::device::Size;
use crate::input::{self, Faults, Project};
use crate::report::Format;
use crate::roof::Roof;
use crate::units::System;

mod backsolve;
mod catalog;
mod check;
mod given;
mod rate;
mod rules;
mod size;
mod start;
mod tradeoff;
mod watching;

/// Exit code for input that cannot be used.
const UNUSABLE: u8 = 2;

/// Sizes the overflow drainage of low-slope roofs: from a limit on load or depth to ranked scuppers and overflow drains.
#[derive(Debug, Parser)]
#[command(
    version,
    about,
    disable_help_subcommand = true,
    after_help = "A project is a TOML file; README.md shows how to write one.\n\
                  Results support, and do not replace, the adopted code and a licensed professional's review."
)]
struct Cli {
    #[command(subcommand)]
    command: Command,
}

#[derive(Debug, Subcommand)]
enum Command {
    Size(size::Args),
    Check(check::Args),
    Backsolve(backsolve::Args),
    Rate(Box<rate::Args>),
    Catalog(catalog::Args),
    Rules(rules::Args),
    Start(start::Args),
    Tradeoff(tradeoff::Args),
}

/// The forms of a result.
#[derive(Clone, Copy, Debug, ValueEnum)]
enum Form {
    /// Tables for reading.
    Table,
    /// One JSON document, SI, for other programs.
    Json,
    /// Rows for a spreadsheet.
    Csv,
    /// Markdown.
    Md,
}

/// The units that a command is asked to speak.
#[derive(Clone, Copy, Debug, ValueEnum)]
enum Units {
    /// Inches, feet, gallons a minute, pounds a square foot.
    Us,
    /// Millimetres, metres, litres a second, kilopascals.
    Si,
}

impl From<Units> for System {
    fn from(units: Units) -> Self {
        match units {
            Units::Us => Self::Us,
            Units::Si => Self::Si,
        }
    }
}

impl From<Form> for Format {
    fn from(form: Form) -> Self {
        match form {
            Form::Table => Self::Table,
            Form::Json => Self::Json,
            Form::Csv => Self::Csv,
            Form::Md => Self::Markdown,
        }
    }
}

/// Why a command ends without a result.
#[derive(Debug)]
enum Failure {
    /// A message for the user; exit code 2.
    Message(String),
    /// The reader of our output went away: not our fault, and nobody is there to be told.
    PipeClosed,
}

impl Failure {
    /// A message about the command line, with what would pass.
    fn said(what: &str, help: &str) -> Self {
        Self::Message(format!("error: {what}\n  = help: {help}"))
    }
}

/// All faults of the files that were read.
fn faults(found: &Faults) -> Failure {
    Failure::Message(found.render(coloured_messages()))
}

impl From<io::Error> for Failure {
    fn from(error: io::Error) -> Self {
        match error.kind() {
            io::ErrorKind::BrokenPipe => Self::PipeClosed,
            _ => Self::Message(format!("error: cannot write: {error}")),
        }
    }
}

/// Runs the command that the arguments name.
///
/// Exit codes: 0 done, 1 an area has no layout or a layout fails, 2 the input or the flags cannot be used.
pub fn run() -> ExitCode {
    let cli = Cli::parse();
    let done = match &cli.command {
        Command::Size(args) => size::run(args),
        Command::Check(args) => check::run(args),
        Command::Backsolve(args) => backsolve::run(args),
        Command::Rate(args) => rate::run(args),
        Command::Catalog(args) => catalog::run(args),
        Command::Rules(args) => rules::run(args),
        Command::Start(args) => start::run(args),
        Command::Tradeoff(args) => tradeoff::run(args),
    };
    match done {
        Ok(code) => code,
        Err(Failure::PipeClosed) => ExitCode::SUCCESS,
        Err(Failure::Message(message)) => {
            let _ = writeln!(io::stderr(), "{message}");
            ExitCode::from(UNUSABLE)
        }
    }
}

/// What keeps a search from being made where no set height is given: only layouts that are given stand without one.
fn without_set_height(roof: &Roof, areas: &[usize]) -> Option<Failure> {
    let lacks = |&&area: &&usize| {
        let area = &roof.areas[area];
        let stands = |size: &Size| size.set_heights.is_none() && area.takes(size.device.kind());
        area.set_heights.is_none() && roof.sizes.iter().any(stands)
    };
    let area = areas.iter().find(lacks)?;
    Some(Failure::said(
        &format!("no set height is given for `{}`", roof.areas[*area].name),
        "a search needs one: [search] set_height = { from = \"2 in\", to = \"4 in\", step = \"0.25 in\" }",
    ))
}

/// Refuses what does not heed that devices that are there already may be closed.
fn closes_nothing(project: &Project, areas: &[usize], what: &str) -> Result<(), Failure> {
    let roof = &project.roof;
    match areas.iter().find(|&&area| roof.areas[area].replace.is_some()) {
        None => Ok(()),
        Some(&area) => Err(Failure::said(
            &format!(
                "{what} does not heed in this version that what is there may be closed, as in `{}`",
                roof.areas[area].name
            ),
            "leave the area out with --area, or take `replace` out of it",
        )),
    }
}

/// Whether messages on stderr take colour: on a terminal, unless `NO_COLOR` is set.
fn coloured_messages() -> bool {
    io::stderr().is_terminal() && std::env::var_os("NO_COLOR").is_none_or(|value| value.is_empty())
}

/// Width of the reader's terminal in characters; that of a printed page where there is none, or the result goes to a file.
fn width(file: Option<&PathBuf>) -> usize {
    const PAGE: usize = 120;
    const NARROWEST: usize = 60;
    if file.is_some() {
        return PAGE;
    }
    comfy_table::Table::new().width().map_or(PAGE, |width| usize::from(width).clamp(NARROWEST, PAGE))
}

/// Writes a result to a file, or to stdout.
fn deliver(text: &str, file: Option<&PathBuf>) -> Result<(), Failure> {
    written(file, |out| out.write_all(text.as_bytes()))
}

/// Lets a result be written to a file, or to stdout.
fn written(file: Option<&PathBuf>, write: impl FnOnce(&mut dyn Write) -> io::Result<()>) -> Result<(), Failure> {
    match file {
        Some(path) => std::fs::File::create(path)
            .and_then(|mut out| write(&mut out))
            .map_err(|error| Failure::Message(format!("error: cannot write `{}`: {error}", path.display()))),
        None => {
            let mut out = io::stdout().lock();
            write(&mut out)?;
            Ok(out.flush()?)
        }
    }
}

/// A quantity above zero that a flag gives.
fn quantity<T>(flag: &str, text: Option<&String>, value: impl Fn(T) -> f64) -> Result<Option<T>, Failure>
where
    T: std::str::FromStr<Err = crate::units::Fault> + Copy,
{
    let Some(text) = text else { return Ok(None) };
    match text.parse::<T>() {
        Ok(found) if value(found) > 0.0 => Ok(Some(found)),
        Ok(_) => Err(Failure::said(&format!("{flag}: `{text}` is not above zero"), "give a value above zero")),
        Err(fault) => Err(Failure::said(&format!("{flag}: {fault}"), &fault.help())),
    }
}

/// A command about a project: its file, which areas, and where the result goes.
#[derive(Debug, clap::Args)]
struct OfProject {
    /// The project file.
    roof: PathBuf,
    /// Form of the result.
    #[arg(long, value_enum, default_value_t = Form::Table)]
    format: Form,
    /// Write the result to a file instead of stdout.
    #[arg(long, value_name = "FILE")]
    output: Option<PathBuf>,
    /// Only this area; may be given several times.
    #[arg(long, value_name = "NAME")]
    area: Vec<String>,
}

impl OfProject {
    /// The project, and the areas asked for; what is doubtful in the files is told on stderr.
    fn read(&self) -> Result<(Project, Vec<usize>), Failure> {
        let project = input::read(&self.roof).map_err(|found| faults(&found))?;
        for warning in &project.warnings.0 {
            let _ = writeln!(io::stderr(), "{}\n", warning.render(coloured_messages()));
        }
        let areas = self.wanted(&project)?;
        Ok((project, areas))
    }

    /// Refuses flags whose results are no rows of a table, where the form is CSV.
    fn has_rows_for(&self, flags: &[(bool, &str)]) -> Result<(), Failure> {
        let lost: Vec<&str> = flags.iter().filter(|(given, _)| *given).map(|(_, flag)| *flag).collect();
        if lost.is_empty() || !matches!(self.format, Form::Csv) {
            return Ok(());
        }
        let what = format!("CSV has no rows for {}", lost.join(", "));
        Err(Failure::said(&what, "take --format json, md or table, or leave it out"))
    }

    /// Writes a report in the form asked for to where it is asked for.
    fn deliver(&self, report: impl FnOnce(Format, usize) -> String) -> Result<(), Failure> {
        let output = self.output.as_ref();
        deliver(&report(Format::from(self.format), width(output)), output)
    }

    /// The same of a report that is too long to be held: it writes itself.
    fn deliver_written(
        &self,
        report: impl FnOnce(Format, usize, &mut dyn Write) -> io::Result<()>,
    ) -> Result<(), Failure> {
        let output = self.output.as_ref();
        written(output, |out| report(Format::from(self.format), width(output), out))
    }

    /// Indices of the areas asked for, in the order of the file; all of them where none is named.
    fn wanted(&self, project: &Project) -> Result<Vec<usize>, Failure> {
        let names = || project.roof.areas.iter().map(|area| area.name.as_str());
        for wanted in &self.area {
            if !names().any(|name| name == wanted) {
                let near =
                    input::nearest(wanted, names()).map_or(String::new(), |near| format!("; did you mean `{near}`?"));
                let all: Vec<_> = names().take(12).collect();
                return Err(Failure::Message(format!(
                    "error: there is no area `{wanted}` in {}{near}\n  = help: areas are {}",
                    self.roof.display(),
                    all.join(", ")
                )));
            }
        }
        let chosen = |name: &str| self.area.is_empty() || self.area.iter().any(|wanted| wanted == name);
        Ok(names().enumerate().filter(|(_, name)| chosen(name)).map(|(index, _)| index).collect())
    }
}
