//! Rating tables: CSV files with a column of heads and one of flows, the unit in each column's head.

use std::path::Path;
use std::sync::Arc;

use crate::device::{Rating, RatingFault};
use crate::units::{Flow, Length};

use super::fault::{Fault, Log, Source, Span};
use super::file;
use super::section::{Cell, any_of, near, optional};
use super::sheet::{Entry, is_headless, records, whole};

const HEADS: [(&str, f64); 3] = [("head_in", 0.0254), ("head_mm", 0.001), ("head_m", 1.0)];
const WIDTHS: [(&str, f64); 3] = [("width_in", 0.0254), ("width_mm", 0.001), ("width_m", 1.0)];
const FLOWS: [(&str, f64); 3] =
    [("flow_gpm", 231.0 * 0.0254 * 0.0254 * 0.0254 / 60.0), ("flow_l_s", 0.001), ("flow_m3_s", 1.0)];

/// Most that a head or a flow may be, in SI units.
const MOST: f64 = 1e9;

/// Reads the rating that a catalog names.
pub(super) fn read(catalog: &Path, named: &Cell<'_>, log: &Log) -> Option<Ratings> {
    let name = named.text()?;
    let source = file::read(&file::beside(catalog, name), name, Some(named), log)?;
    parse(&source, log)
}

/// What a rating file holds.
#[derive(Clone, Debug)]
pub(super) enum Ratings {
    /// One table.
    One(Rating),
    /// A table for each width, widths rising: never fewer than one.
    ByWidth(Vec<(Length, Rating)>),
}

impl Ratings {
    /// The table of a width: its own, or on the straight line between its neighbours; none beyond the outermost.
    pub(super) fn at(&self, width: Length) -> Option<Rating> {
        let Self::ByWidth(tables) = self else { return None };
        let above = tables.partition_point(|(known, _)| known.nm() < width.nm());
        let (high, rating) = tables.get(above)?;
        if high.nm() == width.nm() {
            return Some(rating.clone());
        }
        let (low, less) = tables.get(above.checked_sub(1)?)?;
        Rating::between(less, rating, (width - *low) / (*high - *low)).ok()
    }
}

/// Where the columns of a table stand, with the size of their units in SI.
struct Columns {
    heads: (usize, f64),
    flows: (usize, f64),
    widths: Option<(usize, f64)>,
    count: usize,
}

/// A table that is being read, and where its faults go.
struct Table<'t> {
    source: &'t Arc<Source>,
    log: &'t Log,
}

fn parse(source: &Arc<Source>, log: &Log) -> Option<Ratings> {
    let table = Table { source, log };
    let mut records = records(source);
    let Some(head) = records.next() else {
        table.refuse(0..0, format!("`{}` is empty", source.path), "no row stands here", FORM);
        return None;
    };
    let (columns, mut sound) = table.columns(&head)?;
    let mut tables: Vec<Rows> = Vec::new();
    for row in records {
        match table.row(&row, &columns) {
            Some((width, values, places)) => {
                let place = tables.iter().position(|rows| rows.width.map(Length::nm) == width.map(Length::nm));
                let place = place.unwrap_or_else(|| {
                    tables.push(Rows { width, ..Rows::default() });
                    tables.len() - 1
                });
                tables[place].values.push(values);
                tables[place].places.push(places);
            }
            None => sound = false,
        }
    }
    if tables.is_empty() {
        tables.push(Rows::default());
    }
    let ratings: Vec<Option<(Option<Length>, Rating)>> = tables
        .iter()
        .map(|rows| match Rating::new(&rows.values) {
            Ok(rating) => Some((rows.width, rating)),
            Err(faults) => {
                for fault in faults {
                    // Where rows could not be read, an empty table is no news.
                    if sound || fault != RatingFault::Empty {
                        table.report(fault, &rows.values, &rows.places);
                    }
                }
                None
            }
        })
        .collect();
    let mut ratings: Vec<_> = ratings.into_iter().collect::<Option<_>>().filter(|_| sound)?;
    if columns.widths.is_none() {
        return ratings.pop().map(|(_, rating)| Ratings::One(rating));
    }
    let mut by_width: Vec<(Length, Rating)> =
        ratings.into_iter().filter_map(|(width, rating)| Some((width?, rating))).collect();
    by_width.sort_by_key(|(width, _)| width.nm());
    Some(Ratings::ByWidth(by_width))
}

/// The rows of one width, or of a table without widths.
#[derive(Default)]
struct Rows {
    width: Option<Length>,
    values: Vec<(Length, Flow)>,
    places: Vec<Places>,
}

const FORM: &str = "a table has one column of heads and one of flows, such as `head_in,flow_gpm`";

/// The places of a row's head and flow.
type Places = (Span, Span);

impl Table<'_> {
    fn refuse(&self, span: Span, title: impl Into<String>, label: impl Into<String>, help: impl Into<String>) {
        self.log.put(Fault::error(title).at(self.source, span, label).help(help));
    }

    /// Where heads and flows stand, and whether no other column is at fault.
    fn columns(&self, head: &[Entry<'_>]) -> Option<(Columns, bool)> {
        if is_headless(head, self.source, self.log, FORM) {
            return None;
        }
        let find = |names: &[(&'static str, f64)]| {
            head.iter()
                .enumerate()
                .find_map(|(at, entry)| names.iter().find(|(name, _)| *name == entry.text).map(|&(_, size)| (at, size)))
        };
        let (heads, flows, widths) = (find(&HEADS), find(&FLOWS), find(&WIDTHS));
        let known: Vec<&str> = HEADS.iter().chain(&FLOWS).chain(&WIDTHS).map(|&(name, _)| name).collect();
        let mut sound = true;
        for (at, entry) in head.iter().enumerate() {
            if [heads, flows, widths].iter().flatten().any(|&(column, _)| column == at) {
                continue;
            }
            sound = false;
            if let Some(name) = known.iter().find(|name| **name == entry.text) {
                let sort =
                    ["heads", "flows", "widths"].into_iter().find(|sort| name[..4] == sort[..4]).unwrap_or("these");
                let title = format!("`{name}` is a second column of {sort}");
                self.refuse(entry.span.clone(), title, "one is wanted", FORM);
                continue;
            }
            // "head" is near to several: it lacks its unit, and which is not guessed.
            let without_unit = known.iter().any(|name| name.split('_').next() == Some(entry.text));
            let did_you = match near(entry.text, known.iter().copied()) {
                Some(_) if without_unit => "a column's head has the unit: ".to_string(),
                Some(near) => format!("did you mean `{near}`? "),
                None => String::new(),
            };
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
        }
        if sound && (heads.is_none() || flows.is_none()) {
            let missing = if heads.is_none() { "heads" } else { "flows" };
            self.refuse(whole(head), format!("the table has no column of {missing}"), "these columns are given", FORM);
        }
        Some((Columns { heads: heads?, flows: flows?, widths, count: head.len() }, sound))
    }

    fn row(&self, row: &[Entry<'_>], columns: &Columns) -> Option<(Option<Length>, (Length, Flow), Places)> {
        if row.len() != columns.count {
            let cells = if row.len() == 1 { "1 cell".to_string() } else { format!("{} cells", row.len()) };
            let title = format!("this row has {cells}; the head has {}", columns.count);
            let help = "a comma parts cells: write decimals with a point, thousands without a comma";
            self.refuse(whole(row), title, "this row", help);
            return None;
        }
        let number = |(at, size): (usize, f64)| {
            let value = row[at].text.parse::<f64>().ok().filter(|value| (value * size).abs() <= MOST);
            if value.is_none() {
                let title = match row[at].text {
                    "" => "a cell is empty".to_string(),
                    text if text.parse::<f64>().is_ok_and(f64::is_finite) => format!("`{text}` is too great"),
                    text => format!("`{text}` is not a number"),
                };
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
        let width = columns.widths.map(|column| {
            let width = number(column).map(|width| Length::from_m(width).on_grid());
            if width.is_some_and(|width| width <= Length::ZERO) {
                self.refuse(
                    row[column.0].span.clone(),
                    "a width must be above zero",
                    "not above zero",
                    "write a width above zero",
                );
            }
            width.filter(|&width| width > Length::ZERO)
        });
        let places = (row[columns.heads.0].span.clone(), row[columns.flows.0].span.clone());
        Some((optional(width)?, (Length::from_m(head?).on_grid(), Flow::from_m3_per_s(flow?)), places))
    }

    fn report(&self, fault: RatingFault, rows: &[(Length, Flow)], places: &[Places]) {
        let text = |span: &Span| self.source.text[span.clone()].to_string();
        let head = |row: usize| places[row].0.clone();
        let flow = |row: usize| places[row].1.clone();
        // A row with a fault of its own is no measure for the next.
        let before = |row: usize| (0..row).rev().find(|&row| rows[row].0 > Length::ZERO && rows[row].1 > Flow::ZERO);
        let (span, label, help) = match fault {
            RatingFault::Empty => {
                let end = self.source.text.trim_end().len();
                let start = self.source.text[..end].rfind('\n').map_or(0, |at| at + 1);
                (start..end, "nothing but this".into(), "give at least one row with a head and a flow")
            }
            RatingFault::Negative(row) => {
                let span = if rows[row].0 < Length::ZERO { head(row) } else { flow(row) };
                (span, "below zero".into(), "heads and flows are zero or more")
            }
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
                format!("{} after {}", text(&head(row)), before(row).map_or("0".into(), |row| text(&head(row)))),
                "sort the rows by head, each head once",
            ),
            RatingFault::FlowFalls(row) => (
                flow(row),
                format!("{} after {}", text(&flow(row)), before(row).map_or("0".into(), |row| text(&flow(row)))),
                "more head never gives less flow: check this row",
            ),
        };
        self.refuse(span, fault.to_string(), label, help);
    }
}
