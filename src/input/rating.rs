//! Rating tables: CSV files with a column of heads and one of flows, the unit in each column's head.

use std::path::Path;

use crate::device::{Rating, RatingFault};
use crate::units::{Flow, Length};

use super::fault::{Fault, Log, Source, Span};
use super::file;
use super::section::{Cell, any_of, near};
use std::sync::Arc;

const HEADS: [(&str, f64); 3] = [("head_in", 0.0254), ("head_mm", 0.001), ("head_m", 1.0)];
const FLOWS: [(&str, f64); 3] =
    [("flow_gpm", 231.0 * 0.0254 * 0.0254 * 0.0254 / 60.0), ("flow_l_s", 0.001), ("flow_m3_s", 1.0)];

/// Reads the rating that a catalog names.
pub(super) fn read(catalog: &Path, named: &Cell<'_>, log: &Log) -> Option<Rating> {
    let name = named.text()?;
    let source = file::read(&file::beside(catalog, name), name, Some(named), log)?;
    parse(&source, log)
}

/// A cell of the table: its text and where it stands.
struct Entry<'t> {
    text: &'t str,
    span: Span,
}

/// Where the columns of a table stand, with the size of their units in SI.
struct Columns {
    heads: (usize, f64),
    flows: (usize, f64),
    count: usize,
}

/// A table that is being read, and where its faults go.
struct Table<'t> {
    source: &'t Arc<Source>,
    log: &'t Log,
}

fn parse(source: &Arc<Source>, log: &Log) -> Option<Rating> {
    let table = Table { source, log };
    let mut records = table.records()?.into_iter();
    let Some(head) = records.next() else {
        table.refuse(0..0, format!("`{}` is empty", source.path), "no row stands here", FORM);
        return None;
    };
    let columns = table.columns(&head)?;
    let mut rows = Vec::new();
    let mut spans = Vec::new();
    let mut sound = true;
    for row in records {
        match table.row(&row, &columns) {
            Some((values, places)) => {
                rows.push(values);
                spans.push(places);
            }
            None => sound = false,
        }
    }
    match Rating::new(&rows) {
        Ok(rating) => sound.then_some(rating),
        Err(faults) => {
            for fault in faults {
                // Where rows could not be read, an empty table is no news.
                if sound || fault != RatingFault::Empty {
                    table.report(fault, &spans);
                }
            }
            None
        }
    }
}

const FORM: &str = "a table has one column of heads and one of flows, such as `head_in,flow_gpm`";

/// The places of a row's head and flow.
type Places = (Span, Span);

impl<'t> Table<'t> {
    fn refuse(&self, span: Span, title: impl Into<String>, label: impl Into<String>, help: impl Into<String>) {
        self.log.put(Fault::error(title).at(self.source, span, label).help(help));
    }

    fn records(&self) -> Option<Vec<Vec<Entry<'t>>>> {
        let mut reader = csv::ReaderBuilder::new()
            .has_headers(false)
            .flexible(true)
            .comment(Some(b'#'))
            .trim(csv::Trim::All)
            .from_reader(self.source.text.as_bytes());
        let mut records = Vec::new();
        for record in reader.records() {
            match record {
                Ok(record) => records.push(entries(self.source, &record)),
                Err(error) => {
                    self.refuse(0..0, format!("this is not CSV: {error}"), "", "write two columns parted by commas");
                    return None;
                }
            }
        }
        Some(records)
    }

    fn columns(&self, head: &[Entry<'_>]) -> Option<Columns> {
        if let [only] = head
            && only.text.contains(';')
        {
            let help = "part columns by commas, and write decimals with a point";
            self.refuse(
                only.span.clone(),
                "the columns are parted by semicolons",
                "one column only is seen here",
                help,
            );
            return None;
        }
        let find = |names: &[(&'static str, f64)]| {
            head.iter()
                .enumerate()
                .find_map(|(at, entry)| names.iter().find(|(name, _)| *name == entry.text).map(|&(_, size)| (at, size)))
        };
        let (heads, flows) = (find(&HEADS), find(&FLOWS));
        let known: Vec<&str> = HEADS.iter().chain(&FLOWS).map(|&(name, _)| name).collect();
        let mut sound = true;
        for (at, entry) in head.iter().enumerate() {
            if [heads, flows].iter().flatten().any(|&(column, _)| column == at) {
                continue;
            }
            let near = near(entry.text, known.iter().copied());
            let did_you = near.map_or(String::new(), |near| format!("did you mean `{near}`? "));
            let title = match entry.text {
                "" => "a column has no name".to_string(),
                name => format!("unknown column `{name}`"),
            };
            self.refuse(
                entry.span.clone(),
                title,
                "not a column of a rating",
                format!("{did_you}{} would pass", any_of(&known)),
            );
            sound = false;
        }
        if sound && (heads.is_none() || flows.is_none()) {
            let missing = if heads.is_none() { "heads" } else { "flows" };
            self.refuse(whole(head), format!("the table has no column of {missing}"), "these columns are given", FORM);
        }
        if sound { Some(Columns { heads: heads?, flows: flows?, count: head.len() }) } else { None }
    }

    fn row(&self, row: &[Entry<'_>], columns: &Columns) -> Option<((Length, Flow), Places)> {
        if row.len() != columns.count {
            let title = format!("this row has {} cells; the head has {}", row.len(), columns.count);
            let help = "a comma parts cells: write decimals with a point, thousands without a comma";
            self.refuse(whole(row), title, "this row", help);
            return None;
        }
        let number = |(at, size): (usize, f64)| {
            let value = row[at].text.parse::<f64>().ok().filter(|value| value.is_finite());
            if value.is_none() {
                let title = format!("`{}` is not a number", row[at].text);
                self.refuse(
                    row[at].span.clone(),
                    title,
                    "a bare number belongs here",
                    "the unit stands in the column's head",
                );
            }
            value.map(|value| value * size)
        };
        let (head, flow) = (number(columns.heads), number(columns.flows));
        let places = (row[columns.heads.0].span.clone(), row[columns.flows.0].span.clone());
        Some(((Length::from_m(head?).on_grid(), Flow::from_m3_per_s(flow?)), places))
    }

    fn report(&self, fault: RatingFault, places: &[Places]) {
        let text = |span: &Span| self.source.text[span.clone()].to_string();
        let head = |row: usize| places[row].0.clone();
        let flow = |row: usize| places[row].1.clone();
        let (span, label, help) = match fault {
            RatingFault::Empty => {
                let end = self.source.text.trim_end().len();
                let start = self.source.text[..end].rfind('\n').map_or(0, |at| at + 1);
                (start..end, "nothing but this".into(), "give at least one row with a head and a flow")
            }
            RatingFault::Negative(row) => (
                head(row),
                format!("{} and {}", text(&head(row)), text(&flow(row))),
                "heads and flows are zero or more",
            ),
            RatingFault::FlowAtZeroHead(row) => {
                (flow(row), "flow without head".into(), "head is above the rim: a row 0, 0 or none at all")
            }
            RatingFault::NoFlow(row) => (
                flow(row),
                format!("nothing flows at {}", text(&head(row))),
                "begin the table with the first head that gives a flow",
            ),
            RatingFault::HeadNotRising(row) => (
                head(row),
                format!("{} after {}", text(&head(row)), text(&head(row.saturating_sub(1)))),
                "sort the rows by head, each head once",
            ),
            RatingFault::FlowFalls(row) => (
                flow(row),
                format!("{} after {}", text(&flow(row)), text(&flow(row.saturating_sub(1)))),
                "more head never gives less flow: check this row",
            ),
        };
        self.refuse(span, fault.to_string(), label, help);
    }
}

/// From the first cell of a row to its last.
fn whole(row: &[Entry<'_>]) -> Span {
    row.first().map_or(0, |entry| entry.span.start)..row.last().map_or(0, |entry| entry.span.end)
}

/// The cells of a record with their places. A record lies on one line: no cell of numbers is quoted.
fn entries<'t>(source: &'t Arc<Source>, record: &csv::StringRecord) -> Vec<Entry<'t>> {
    let text = &source.text;
    let start = record.position().map_or(0, |position| position.byte() as usize).min(text.len());
    // The position may be that of empty or commented lines before the record.
    let mut line_start = start;
    let mut line = "";
    for candidate in text[start..].split_inclusive('\n') {
        line = candidate.trim_end_matches(['\n', '\r']);
        if !line.trim().is_empty() && !line.starts_with('#') {
            break;
        }
        line_start += candidate.len();
    }
    let mut entries = Vec::new();
    let mut at = line_start;
    for cell in line.split(',') {
        let lead = cell.len() - cell.trim_start_matches(['\u{feff}', ' ', '\t']).len();
        let bare = cell.trim_matches(['\u{feff}', ' ', '\t', '"']);
        let from = at + lead;
        entries.push(Entry { text: bare, span: from..from + bare.len() });
        at += cell.len() + 1;
    }
    entries
}
