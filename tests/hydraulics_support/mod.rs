//! What the reference tests share: reading a table, and the head at which a law reaches a flow.

#![allow(dead_code, reason = "each test binary uses its own part")]

use brimline::hydraulics::FlowError;
use brimline::units::{Area, Flow, Length, METRES_PER_FOOT};

/// A published table of `tests/data`: its column heads and its rows.
pub(crate) struct Table {
    heads: Vec<String>,
    rows: Vec<Vec<String>>,
}

/// One row of it.
#[derive(Clone, Copy)]
pub(crate) struct Row<'a> {
    heads: &'a [String],
    cells: &'a [String],
}

impl Table {
    pub(crate) fn read(name: &str) -> Self {
        let path = format!("{}/tests/data/{name}", env!("CARGO_MANIFEST_DIR"));
        let mut reader = csv::ReaderBuilder::new().comment(Some(b'#')).from_path(&path).unwrap();
        let heads = reader.headers().unwrap().iter().map(str::to_owned).collect();
        let rows = reader.records().map(|row| row.unwrap().iter().map(str::to_owned).collect()).collect();
        Self { heads, rows }
    }

    pub(crate) fn heads(&self) -> &[String] {
        &self.heads
    }

    pub(crate) fn rows(&self) -> impl Iterator<Item = Row<'_>> {
        self.rows.iter().map(|cells| Row { heads: &self.heads, cells })
    }
}

impl<'a> Row<'a> {
    pub(crate) fn text(&self, column: &str) -> &'a str {
        let index = self.heads.iter().position(|head| head == column);
        &self.cells[index.unwrap_or_else(|| panic!("no column {column}"))]
    }

    /// The number in a cell; none in an empty one.
    pub(crate) fn number(&self, column: &str) -> Option<f64> {
        let text = self.text(column);
        (!text.is_empty()).then(|| text.parse().unwrap_or_else(|_| panic!("{column}: {text}")))
    }

    pub(crate) fn value(&self, column: &str) -> f64 {
        self.number(column).unwrap_or_else(|| panic!("an empty cell in {column}"))
    }

    pub(crate) fn cells(&self) -> &'a [String] {
        self.cells
    }
}

pub(crate) fn m(value: f64) -> Length {
    Length::from_m(value)
}

pub(crate) fn mm(value: f64) -> Length {
    Length::mm(value)
}

pub(crate) fn inches(value: f64) -> Length {
    Length::inches(value)
}

pub(crate) fn feet(value: f64) -> Length {
    Length::from_m(value * METRES_PER_FOOT)
}

pub(crate) fn m2(value: f64) -> Area {
    Area::from_m2(value)
}

pub(crate) fn m3_s(value: f64) -> Flow {
    Flow::from_m3_per_s(value)
}

pub(crate) fn cfs(value: f64) -> Flow {
    Flow::from_m3_per_s(value * METRES_PER_FOOT * METRES_PER_FOOT * METRES_PER_FOOT)
}

pub(crate) fn to_cfs(flow: Flow) -> f64 {
    flow / cfs(1.0)
}

pub(crate) fn to_litres(flow: Flow) -> f64 {
    flow.m3_per_s() * 1000.0
}

pub(crate) fn to_feet(length: Length) -> f64 {
    length / feet(1.0)
}

/// The head under 1 m at which a law reaches a flow, by halving.
pub(crate) fn head_for(flow: Flow, law: impl Fn(Length) -> Result<Flow, FlowError>) -> Length {
    let (mut low, mut high) = (0.0, 1.0);
    for _ in 0..60 {
        let middle = f64::midpoint(low, high);
        if law(m(middle)).unwrap() < flow {
            low = middle;
        } else {
            high = middle;
        }
    }
    m(high)
}
