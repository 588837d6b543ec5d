//! Files as text, and TOML files as tables; what cannot be read is a fault with the path as the user wrote it.

use std::fs;
use std::io::ErrorKind;
use std::path::{Path, PathBuf};
use std::sync::Arc;

use toml::Spanned;
use toml::de::DeTable;

use super::fault::{Fault, Log, Source, Span};
use super::section::{Cell, any_of, near};
use super::shipped::{self, Sort};

/// A file named in another, found from where that one lies.
pub(super) fn beside(holder: &Path, named: &str) -> PathBuf {
    shipped::path_of(named).unwrap_or_else(|| holder.parent().unwrap_or(Path::new("")).join(named))
}

/// Reads a file as text. `named_in` is the value that names it, none for a file named on the command line.
pub(super) fn read(path: &Path, as_written: &str, named_in: Option<&Cell<'_>>, log: &Log) -> Option<Arc<Source>> {
    read_of(Sort::Catalog, path, as_written, named_in, log)
}

/// Reads a file as text; one that comes with the program must be of the sort that is asked for there.
pub(super) fn read_of(
    sort: Sort,
    path: &Path,
    as_written: &str,
    named_in: Option<&Cell<'_>>,
    log: &Log,
) -> Option<Arc<Source>> {
    let refuse = |title: String, help: &str| {
        let fault = Fault::error(title).help(help);
        log.put(match named_in {
            Some(cell) => fault.at(cell.reader.source, cell.span(), "named here"),
            None => fault,
        });
        None
    };
    if shipped::is_shipped(path) {
        let Some(text) = shipped::text(path, sort) else {
            let names = sort.names();
            let names: Vec<&str> = names.iter().map(String::as_str).collect();
            let did_you =
                near_shipped(as_written, &names).map_or(String::new(), |near| format!("did you mean `{near}`? "));
            return refuse(
                format!("there is no {} `{as_written}`", sort.name()),
                &format!("{did_you}{} would pass{}", any_of(&names), sort.otherwise()),
            );
        };
        let source = Arc::new(Source { path: as_written.to_string(), text: text.to_string() });
        log.open(&source);
        return Some(source);
    }
    if path.is_dir() {
        return refuse(format!("`{as_written}` is a directory, not a file"), "name a file");
    }
    let bytes = match fs::read(path) {
        Ok(bytes) => bytes,
        Err(error) if error.kind() == ErrorKind::NotFound => {
            let help = match named_in {
                Some(_) => "the path counts from the file that names it",
                None => "check the path",
            };
            return refuse(format!("there is no file `{as_written}`"), help);
        }
        Err(error) => {
            return refuse(format!("`{as_written}` cannot be read: {error}"), "check the path and the rights");
        }
    };
    match String::from_utf8(bytes) {
        Ok(text) => {
            // Some editors mark a file as UTF-8 by a first character that nobody sees.
            let text = text.strip_prefix('\u{feff}').map(str::to_string).unwrap_or(text);
            let source = Arc::new(Source { path: as_written.to_string(), text });
            log.open(&source);
            Some(source)
        }
        Err(error) => {
            let sound = String::from_utf8_lossy(&error.as_bytes()[..error.utf8_error().valid_up_to()]);
            let (line, before) = (sound.matches('\n').count() + 1, sound.rsplit('\n').next().unwrap_or(""));
            let column = before.chars().count() + 1;
            refuse(format!("`{as_written}` is not UTF-8 text: line {line}, column {column}"), "save it as UTF-8")
        }
    }
}

/// The name of a file of the program that is spelt most like one that there is not, by its last part alone.
fn near_shipped<'n>(written: &str, names: &[&'n str]) -> Option<&'n str> {
    let last = |name: &'n str| name.rsplit(['/', ':']).next().unwrap_or(name);
    let written = written.rsplit(['/', ':']).next().unwrap_or(written);
    let near = near(written, names.iter().map(|name| last(name)))?;
    names.iter().copied().find(|name| last(name) == near)
}

/// Parses a TOML file; every fault of its form is logged, and what can be read all the same is given. What is read borrows
/// from the source, or from `mended`: the text with blanks in place of lines that the parser cannot get past.
pub(super) fn parse<'a>(source: &'a Arc<Source>, mended: &'a mut String, log: &Log) -> Spanned<DeTable<'a>> {
    let (table, errors) = DeTable::parse_recoverable(&source.text);
    if errors.is_empty() {
        return table;
    }
    mended.clone_from(&source.text);
    let mut errors = take_out_dead_ends(mended);
    let (table, more) = DeTable::parse_recoverable(mended);
    errors.extend(more);
    report(source, errors, log);
    table
}

/// Blanks out lines that hide all below them, and gives the errors that stand there.
fn take_out_dead_ends(text: &mut String) -> Vec<toml::de::Error> {
    let mut errors = Vec::new();
    // A key without `=` takes all behind it along: with its line gone, the rest is read. A file that is something else than
    // TOML is not taken apart line by line.
    for _ in 0..MOST_MENDED {
        let found = DeTable::parse_recoverable(text).1.into_iter().find(|error| error.message() == NO_VALUE);
        let Some(error) = found else { break };
        let line = line_of(text, error.span().map_or(0, |span| span.start));
        text.replace_range(line.clone(), &" ".repeat(line.len()));
        errors.push(error);
    }
    errors
}

/// Logs the faults of a file's form, one a line: the parser may stumble over the rest of a line once more.
fn report(source: &Arc<Source>, mut errors: Vec<toml::de::Error>, log: &Log) {
    errors.sort_by_key(|error| error.span().map_or(0, |span| span.start));
    let text = &source.text;
    let (mut faults, mut stumbled) = (Vec::new(), Vec::<Span>::new());
    let mut line_before = None;
    let mut complete = true;
    for error in &errors {
        let span = error.span().unwrap_or(0..0);
        let line = line_of(text, span.start);
        // What stands twice because its table does is told with the table.
        let follows = error.message() == DUPLICATE && stumbled.last().is_some_and(|last| last.contains(&span.start));
        if line_before.replace(line.start) == Some(line.start) || follows {
            continue;
        }
        let is_head = text[line.clone()].trim_start().starts_with('[');
        // The head of a table that is lost takes all with it that stands below, up to the next head.
        let next_head = || text[line.end..].find("\n[").map_or(text.len(), |length| line.end + length);
        stumbled.push(line.start..if is_head { next_head() } else { line.end } + 1);
        complete &= error.message() == DUPLICATE && !is_head;
        faults.push(form(error.message().trim(), text, &span).at(source, span, ""));
    }
    log.broken(source, faults, stumbled, complete);
}

/// Most lines that are left out so that the rest can be read.
const MOST_MENDED: usize = 20;

// What the parser says of slips that it cannot get past, or that are told in better words here.
const NO_VALUE: &str = "key with no value, expected `=`";
const DUPLICATE: &str = "duplicate key";
const NO_QUOTES: &str = "string values must be quoted, expected literal string";

/// A fault of the form of a file, in the words of the parser where there are no better ones.
fn form(message: &str, text: &str, span: &Span) -> Fault {
    let found = text.get(span.clone()).unwrap_or("").trim();
    match message {
        DUPLICATE => {
            Fault::error(format!("`{found}` stands twice in one table")).help("give each key and each table once")
        }
        NO_QUOTES if !found.is_empty() => Fault::error(format!("`{found}` stands without quotes"))
            .help("only numbers, true and false stand without: write \"6 in\", not 6 in"),
        _ => Fault::error(format!("this is not TOML: {message}"))
            .help("a line is `key = value`; a quantity stands in quotes, such as \"6 in\""),
    }
}

/// The line that a place stands in, without its end.
fn line_of(text: &str, at: usize) -> Span {
    let start = text[..at].rfind('\n').map_or(0, |before| before + 1);
    start..text[at..].find('\n').map_or(text.len(), |length| at + length)
}
