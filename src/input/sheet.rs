//! CSV files as rows of cells, each with its place.

use std::sync::Arc;

use super::fault::{Fault, Log, Source, Span};

/// A cell: its text and where it stands.
#[derive(Clone, Debug)]
pub(super) struct Entry<'t> {
    pub(super) text: &'t str,
    pub(super) span: Span,
}

/// From the first cell of a row to its last.
pub(super) fn whole(row: &[Entry<'_>]) -> Span {
    row.first().map_or(0, |entry| entry.span.start)..row.last().map_or(0, |entry| entry.span.end)
}

/// Whether a first row cannot be the head of a table, which is then logged: its columns are not parted by commas, or have no
/// names. `form` says how a table looks.
pub(super) fn is_headless(head: &[Entry<'_>], source: &Arc<Source>, log: &Log, form: &str) -> bool {
    let refuse = |span: Span, title: String, label: &str, help: &str| {
        log.put(Fault::error(title).at(source, span, label).help(help));
        true
    };
    if let [only] = head
        && let Some(mark) = only.text.chars().find(|mark| ";\t".contains(*mark))
    {
        let mark = if mark == ';' { "semicolons" } else { "tabs" };
        let help = "part columns by commas, and write decimals with a point";
        let title = format!("the columns are parted by {mark}");
        return refuse(only.span.clone(), title, "one column only is seen here", help);
    }
    let numbers = head.iter().all(|entry| entry.text.parse::<f64>().is_ok());
    numbers && refuse(whole(head), "the columns have no names".into(), "the first row is one of numbers", form)
}

/// The rows of a table that are neither empty nor a comment.
///
/// No cell of numbers runs over the end of a line, so a row is a line: a quote that is not closed spoils its own row, and
/// does not swallow those below.
pub(super) fn records(source: &Source) -> impl Iterator<Item = Vec<Entry<'_>>> {
    let mut at = 0;
    let lines = source.text.split_inclusive(['\n', '\r']).map(move |line| {
        at += line.len();
        (at - line.len(), line)
    });
    let told = lines.filter(|(_, line)| !line.trim().is_empty() && !line.trim_start().starts_with('#'));
    told.map(|(start, line)| entries(line.trim_end_matches(['\n', '\r']), start))
}

/// The cells of a line with their places; blanks and a pair of quotes around a cell are left out, and a comma between quotes
/// parts nothing.
fn entries(line: &str, line_start: usize) -> Vec<Entry<'_>> {
    let mut at = line_start;
    cells(line)
        .into_iter()
        .map(|cell| {
            let bare = cell.trim();
            let text = bare.strip_prefix('"').and_then(|rest| rest.strip_suffix('"')).map_or(bare, str::trim);
            let from = at + cell.find(text).unwrap_or(0);
            at += cell.len() + 1;
            Entry { text, span: from..from + text.len() }
        })
        .collect()
}

/// A line parted at its commas; where a quote is not closed, at all of them.
fn cells(line: &str) -> Vec<&str> {
    let mut quoted = false;
    let parts = |mark: char| {
        quoted ^= mark == '"';
        mark == ',' && !quoted
    };
    let cells: Vec<&str> = line.split(parts).collect();
    if line.matches('"').count().is_multiple_of(2) { cells } else { line.split(',').collect() }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_comma_between_quotes_parts_nothing() {
        let texts = |line| entries(line, 10).into_iter().map(|entry| (entry.text, entry.span)).collect::<Vec<_>>();
        assert_eq!(texts("\"shed 1, north\", 6"), [("shed 1, north", 11..24), ("6", 27..28)]);
        assert_eq!(texts("12\", 6"), [("12\"", 10..13), ("6", 15..16)]);
    }
}
