//! Files as text, and TOML files as tables; what cannot be read is a fault with the path as the user wrote it.

use std::fs;
use std::io::ErrorKind;
use std::path::{Path, PathBuf};
use std::sync::Arc;

use toml::Spanned;
use toml::de::DeTable;

use super::fault::{Fault, Log, Source};
use super::section::Cell;

/// A file named in another, found from where that one lies.
pub(super) fn beside(holder: &Path, named: &str) -> PathBuf {
    holder.parent().unwrap_or(Path::new("")).join(named)
}

/// Reads a file as text. `named_in` is the value that names it, none for a file named on the command line.
pub(super) fn read(path: &Path, as_written: &str, named_in: Option<&Cell<'_>>, log: &Log) -> Option<Arc<Source>> {
    let refuse = |title: String, help: &str| {
        let fault = Fault::error(title).help(help);
        log.put(match named_in {
            Some(cell) => fault.at(cell.reader.source, cell.span(), "named here"),
            None => fault,
        });
        None
    };
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
        Ok(text) => Some(Arc::new(Source { path: as_written.to_string(), text })),
        Err(error) => {
            let at = error.utf8_error().valid_up_to();
            let line = error.as_bytes()[..at].split(|&byte| byte == b'\n').count();
            refuse(format!("`{as_written}` is not UTF-8 text: line {line}, byte {at}"), "save it as UTF-8")
        }
    }
}

/// Parses a TOML file; every fault of its form is logged, and what can be read all the same is given.
///
/// The flag tells whether the file could be read whole: of one that could not, nothing that is absent is to be believed.
pub(super) fn parse<'a>(source: &'a Arc<Source>, log: &Log) -> (Spanned<DeTable<'a>>, bool) {
    let (table, mut errors) = DeTable::parse_recoverable(&source.text);
    errors.sort_by_key(|error| error.span().map_or(0, |span| span.start));
    let mut line_before = None;
    for error in &errors {
        let span = error.span().unwrap_or(0..0);
        let line = source.text[..span.start.min(source.text.len())].matches('\n').count();
        // The parser goes on behind a fault and may stumble over its rest; one message a line is told.
        if line_before == Some(line) {
            continue;
        }
        line_before = Some(line);
        let title = format!("this is not TOML: {}", error.message().trim());
        let help = "a line is `key = value`; a quantity stands in quotes, such as \"6 in\"";
        log.put(Fault::error(title).at(source, span, "").help(help));
    }
    (table, errors.is_empty())
}
