//! Rainfall tables: CSV files with durations down and return periods across, the units in the columns' heads.
//!
//! A column `10_yr_in_h` holds intensities; one `10_yr_in` depths over the duration of the row, which are made intensities.

use std::path::Path;
use std::sync::Arc;

use crate::roof::{Rainfall, RainfallFault};
use crate::units::{Intensity, METRES_PER_INCH, ReturnPeriod, Time};

use super::fault::{Fault, Log, Source, Span};
use super::file;
use super::section::{Cell, any_of, near};
use super::sheet::{Entry, is_headless, records, whole};

/// Heads of the column of durations, with the size of their units in seconds.
const DURATIONS: [(&str, f64); 2] = [("duration_min", 60.0), ("duration_h", 3600.0)];

/// What stands behind the return period in the head of a column.
const VALUES: [(&str, Value); 4] = [
    ("yr_in_h", Value { size: METRES_PER_INCH / 3600.0, depth: false, unit: "in/h" }),
    ("yr_mm_h", Value { size: 0.001 / 3600.0, depth: false, unit: "mm/h" }),
    ("yr_in", Value { size: METRES_PER_INCH, depth: true, unit: "in/h" }),
    ("yr_mm", Value { size: 0.001, depth: true, unit: "mm/h" }),
];

/// Most that a number of a table may be.
const MOST: f64 = 1e6;

const FORM: &str = "durations stand in `duration_min` or `duration_h`, intensities in columns such as `10_yr_in_h` or `10_yr_mm_h`, \
     depths in `10_yr_in` or `10_yr_mm`";

/// What the cells of a column are.
#[derive(Clone, Copy)]
struct Value {
    /// Size of the unit: m/s, or m where they are depths.
    size: f64,
    /// Whether they are depths over the duration of the row.
    depth: bool,
    /// The unit of intensities that messages show.
    unit: &'static str,
}

/// What stands in a column.
#[derive(Clone, Copy)]
enum Column {
    /// Durations, with the size of their unit in seconds.
    Durations(f64),
    /// Intensities or depths of one return period.
    Rain(ReturnPeriod, Value),
}

/// Reads the table that a storm names.
pub(super) fn read(project: &Path, named: &Cell<'_>) -> Option<Arc<Rainfall>> {
    let name = named.text()?;
    let log = named.reader.log;
    let source = file::read(&file::beside(project, name), name, Some(named), log)?;
    parse(&source, log).map(Arc::new)
}

/// A table that is being read, and where its faults go.
struct Table<'t> {
    source: &'t Arc<Source>,
    log: &'t Log,
    columns: Vec<Column>,
    heads: Vec<Span>,
}

/// A row as it was read: its duration, its intensities, and where each cell stands, the duration's first.
struct Row {
    duration: Time,
    rain: Vec<Intensity>,
    places: Vec<Span>,
}

fn parse(source: &Arc<Source>, log: &Log) -> Option<Rainfall> {
    let mut records = records(source);
    let mut table = Table { source, log, columns: Vec::new(), heads: Vec::new() };
    let Some(head) = records.next() else {
        table.refuse(0..0, format!("`{}` is empty", source.path), "no row stands here", FORM);
        return None;
    };
    let mut sound = table.read_head(&head)?;
    let mut rows = Vec::new();
    for record in records {
        match table.row(&record) {
            Some(row) => rows.push(row),
            None => sound = false,
        }
    }
    let periods = table.rain().map(|(_, period, _)| period).collect();
    let durations = rows.iter().map(|row| row.duration).collect();
    let rain = rows.iter().map(|row| row.rain.clone()).collect();
    match Rainfall::new(&source.path, durations, periods, rain) {
        Ok(rainfall) => sound.then_some(rainfall),
        Err(faults) => {
            // Where rows could not be read, an empty table is no news.
            for fault in faults.into_iter().filter(|fault| sound || *fault != RainfallFault::Empty) {
                table.report(fault, &rows, whole(&head));
            }
            None
        }
    }
}

impl Table<'_> {
    fn refuse(&self, span: Span, title: impl Into<String>, label: impl Into<String>, help: impl Into<String>) {
        self.log.put(Fault::error(title).at(self.source, span, label).help(help));
    }

    /// The columns of rain: where each stands, its return period, and what its cells are.
    fn rain(&self) -> impl Iterator<Item = (usize, ReturnPeriod, Value)> {
        self.columns.iter().enumerate().filter_map(|(at, column)| match *column {
            Column::Rain(period, value) => Some((at, period, value)),
            Column::Durations(_) => None,
        })
    }

    /// Reads what stands in each column; no answer where one is unknown, and whether all is well besides.
    fn read_head(&mut self, head: &[Entry<'_>]) -> Option<bool> {
        if is_headless(head, self.source, self.log, FORM) {
            return None;
        }
        let columns: Vec<Option<Column>> = head.iter().map(|entry| self.column(entry)).collect();
        self.columns = columns.into_iter().collect::<Option<_>>()?;
        self.heads = head.iter().map(|entry| entry.span.clone()).collect();
        let durations: Vec<_> =
            (0..head.len()).filter(|&at| matches!(self.columns[at], Column::Durations(_))).collect();
        match durations[..] {
            [_] => {}
            [] => self.refuse(whole(head), "the table has no column of durations", "these columns are given", FORM),
            [_, again, ..] => {
                let title = format!("`{}` is a second column of durations", head[again].text);
                self.refuse(self.heads[again].clone(), title, "one is wanted", FORM);
            }
        }
        let any_rain = self.rain().next().is_some();
        if !any_rain {
            self.refuse(whole(head), "the table has no column of intensities", "these columns are given", FORM);
        }
        (durations.len() == 1 && any_rain).then_some(true)
    }

    fn column(&self, entry: &Entry<'_>) -> Option<Column> {
        if let Some(&(_, size)) = DURATIONS.iter().find(|(name, _)| *name == entry.text) {
            return Some(Column::Durations(size));
        }
        let (years, rest) = entry.text.split_once('_').unwrap_or((entry.text, ""));
        let period = years.parse::<f64>().ok().filter(|years| years.is_finite() && years.abs() <= MOST);
        let value = VALUES.iter().find(|(name, _)| *name == rest).map(|&(_, value)| value);
        if let (Some(years), Some(value)) = (period, value) {
            return Some(Column::Rain(ReturnPeriod::from_years(years), value));
        }
        let title = match entry.text {
            "" => "a column has no name".to_string(),
            name => format!("unknown column `{name}`"),
        };
        let help = match period {
            // Which unit is meant is not guessed.
            Some(_) => {
                let names: Vec<String> = VALUES.iter().map(|(name, _)| format!("{years}_{name}")).collect();
                let names: Vec<&str> = names.iter().map(String::as_str).collect();
                format!("a column's head has the unit: {} would pass", any_of(&names))
            }
            None if entry.text == "duration" => {
                "a column's head has the unit: duration_min or duration_h would pass".to_string()
            }
            None => match near(entry.text, DURATIONS.iter().map(|&(name, _)| name)) {
                Some(near) => format!("did you mean `{near}`? {FORM}"),
                None => FORM.to_string(),
            },
        };
        self.refuse(entry.span.clone(), title, "not a column of a rainfall table", help);
        None
    }

    fn row(&self, row: &[Entry<'_>]) -> Option<Row> {
        if row.len() != self.columns.len() {
            let cells = if row.len() == 1 { "1 cell".to_string() } else { format!("{} cells", row.len()) };
            let title = format!("this row has {cells}; the head has {}", self.columns.len());
            let help = "a comma parts cells: write decimals with a point, and leave no cell out";
            self.refuse(whole(row), title, "this row", help);
            return None;
        }
        let numbers: Vec<Option<f64>> = row.iter().map(|entry| self.number(entry)).collect();
        let numbers: Vec<f64> = numbers.into_iter().collect::<Option<_>>()?;
        let (at, duration) = self.columns.iter().zip(&numbers).enumerate().find_map(|(at, (column, number))| {
            let Column::Durations(size) = column else { return None };
            Some((at, Time::from_s(number * size)))
        })?;
        let rain = self.rain().map(|(at, _, value)| {
            let over = if value.depth { duration.s() } else { 1.0 };
            Intensity::from_m_per_s(numbers[at] * value.size / over)
        });
        let places = [at].into_iter().chain(self.rain().map(|(at, ..)| at)).map(|at| row[at].span.clone());
        Some(Row { duration, rain: rain.collect(), places: places.collect() })
    }

    fn number(&self, entry: &Entry<'_>) -> Option<f64> {
        let refuse = |title: String, label: &str, help: &str| {
            self.refuse(entry.span.clone(), title, label, help);
            None
        };
        match entry.text.parse::<f64>() {
            Ok(value) if value > 0.0 && value <= MOST => Some(value),
            Ok(value) if value.is_finite() && value > 0.0 => {
                refuse(format!("`{}` is too great", entry.text), "too great", "the unit stands in the column's head")
            }
            Ok(value) if value <= 0.0 => refuse(
                format!("`{}` is not above zero", entry.text),
                "a number above zero belongs here",
                "durations and intensities are above zero",
            ),
            _ if entry.text.is_empty() => refuse(
                "a cell is empty".into(),
                "a hole in the table",
                "give every intensity, or leave out the whole row or column: holes are not filled",
            ),
            _ => refuse(
                format!("`{}` is not a number", entry.text),
                "a bare number belongs here",
                "the unit stands in the column's head",
            ),
        }
    }

    fn report(&self, fault: RainfallFault, rows: &[Row], head: Span) {
        let text = |span: &Span| self.source.text[span.clone()].to_string();
        let columns: Vec<_> = self.rain().collect();
        let duration = |row: usize| rows[row].places[0].clone();
        let cell = |row: usize, column: usize| rows[row].places[column + 1].clone();
        // As the column has it; depths, which rise with duration, as the intensities that they make.
        let shown = |row: usize, column: usize| match columns[column].2 {
            Value { depth: false, .. } => text(&cell(row, column)),
            Value { unit, .. } => {
                let intensity = rows[row].rain[column];
                let value = if unit == "in/h" { intensity.to_inches_per_hour() } else { intensity.m_per_s() * 3.6e6 };
                format!("{value:.3} {unit}")
            }
        };
        let over = |row: usize| format!("over {} min", (rows[row].duration.s() / 60.0 * 1e4).round() / 1e4);
        let above_zero = |span: Span| (span, "not above zero".to_string(), "write a number above zero");
        let (span, label, help) = match fault {
            RainfallFault::Empty => {
                (head, "nothing but this".into(), "give a row for each duration, such as `15, 4.1, 6.3`")
            }
            RainfallFault::Hole(row) | RainfallFault::NoDuration(row) => above_zero(duration(row)),
            RainfallFault::NoRain(row, column) => above_zero(cell(row, column)),
            RainfallFault::NoReturnPeriod(column) => above_zero(self.heads[columns[column].0].clone()),
            RainfallFault::DurationNotRising(row) => (
                duration(row),
                format!("{} after {}", text(&duration(row)), text(&duration(row - 1))),
                "sort the rows by duration, each duration once",
            ),
            RainfallFault::ReturnPeriodNotRising(column) => {
                let head = |column: usize| self.heads[columns[column].0].clone();
                let label = format!("{} after {}", text(&head(column)), text(&head(column - 1)));
                (head(column), label, "sort the columns by return period, each once")
            }
            RainfallFault::RisesWithDuration(row, column) => (
                cell(row, column),
                format!("{} {} after {} {}", shown(row, column), over(row), shown(row - 1, column), over(row - 1)),
                "over a longer duration it never rains harder: check this cell, and whether the column's head says what stands in it",
            ),
            RainfallFault::FallsWithReturnPeriod(row, column) => (
                cell(row, column),
                format!("{} after {}", shown(row, column), shown(row, column - 1)),
                "what is met more seldom is never less: check this cell",
            ),
        };
        self.refuse(span, fault.to_string(), label, help);
    }
}
