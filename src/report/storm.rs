//! The storms of a roof in words: the design rain, where it was read, and what is held beside it.

use serde::Serialize;

use crate::roof::{Case, Further, Rainfall, Reading, Recurrence, Roof, Storm};
use crate::units::{ReturnPeriod, Time};

use super::page::Block;
use super::words::{self, Words, list, trimmed};

/// The design rain, with where it was read.
pub(super) fn line(storm: &Storm, words: Words) -> String {
    let source = storm.source.as_ref().map_or(String::new(), |source| format!(" Source: {source}."));
    let told = Told {
        intensity: words.intensity(storm.intensity),
        when: when(storm.duration, storm.return_period),
        reading: storm.reading.as_ref(),
        bare: words.intensity(storm.intensity * (1.0 / storm.climate)),
        factors: factors(storm.climate, 1.0),
    };
    format!("Storm: {}.{source}", told.in_words(storm))
}

/// The storms that every case is held under as well.
pub(super) fn further(roof: &Roof, words: Words) -> Vec<Block> {
    let storm = &roof.storm;
    let Some(first) = roof.cases.iter().find(|case| case.storm.is_some()) else { return Vec::new() };
    let one = |further: &Further| {
        let factors = factors(storm.climate, further.factor);
        let told = Told {
            intensity: words.intensity(further.intensity),
            when: when(further.duration, further.return_period),
            reading: further.reading.as_ref(),
            bare: words.intensity(further.intensity * (1.0 / (storm.climate * further.factor))),
            factors,
        };
        let times = trimmed(further.intensity / storm.intensity, 3);
        format!("{}: {}; {times} times the rain above", further.name, told.in_words(storm))
    };
    let text = format!(
        "Each case is held under these storms as well, as \"{}\" and so on; demands are shown for the storm above:",
        first.name
    );
    vec![Block::Text(text), Block::List(storm.further.iter().map(one).collect())]
}

/// One storm with the words that it is told in.
struct Told<'s> {
    intensity: String,
    when: String,
    reading: Option<&'s Reading>,
    /// The intensity before its factors.
    bare: String,
    factors: String,
}

impl Told<'_> {
    fn in_words(&self, storm: &Storm) -> String {
        let read = self.reading.zip(storm.rainfall.as_ref());
        let read = read.map(|(reading, table)| read_in(reading, table));
        let multiplied = !self.factors.is_empty();
        let origin = match (read, multiplied) {
            (None, false) => String::new(),
            (None, true) => format!(": {} {}", self.bare, self.factors),
            (Some(read), false) => format!(", {read}"),
            (Some(read), true) => format!(": {}, {read}, {}", self.bare, self.factors),
        };
        format!("{}{}{origin}", self.intensity, self.when)
    }
}

fn factors(climate: f64, own: f64) -> String {
    let changed = |factor: f64| (factor - 1.0).abs() > 1e-12;
    let climate = changed(climate).then(|| format!("times {} for climate", trimmed(climate, 3)));
    let own = changed(own).then(|| format!("times {}", trimmed(own, 3)));
    list(&climate.into_iter().chain(own).collect::<Vec<_>>())
}

fn when(duration: Option<Time>, return_period: Option<ReturnPeriod>) -> String {
    let duration = duration.map(|duration| format!("for {}", words::duration(duration)));
    let period = return_period.map(|period| format!("once in {} years", trimmed(period.years(), 1)));
    let when: Vec<_> = duration.into_iter().chain(period).collect();
    if when.is_empty() { String::new() } else { format!(" ({})", when.join(", ")) }
}

/// Where in its table an intensity was read.
pub(super) fn read_in(reading: &Reading, table: &Rainfall) -> String {
    format!("read in {}{}", table.name(), place(reading))
}

/// Between which neighbours an intensity was read; nothing where it stands in the table.
fn place(reading: &Reading) -> String {
    let minutes = |time: Time| trimmed(time.s() / 60.0, 2);
    let years = |period: ReturnPeriod| trimmed(period.years(), 1);
    let (short, long) = reading.durations;
    let (often, seldom) = reading.return_periods;
    let mut parts = Vec::new();
    if short < long {
        parts.push(format!("between {} and {} min", minutes(short), minutes(long)));
    }
    if often < seldom {
        parts.push(format!("between {} and {} yr", years(often), years(seldom)));
    }
    if parts.is_empty() { String::new() } else { format!(" {}", list(&parts)) }
}

/// How often a case's rain is met, where it differs from the design rain and there is a table.
pub(super) fn recurrence(case: &Case, storm: &Storm) -> String {
    // Never said to be more seldom than it is.
    let years = |period: ReturnPeriod| {
        let scale = if period.years() < 10.0 { 10.0 } else { 1.0 };
        trimmed((period.years() * scale + 1e-6).floor() / scale, 1)
    };
    if case.basis.is_some() {
        return String::new();
    }
    match storm.recurrence(storm.intensity * case.rain) {
        Some(Recurrence::Once(period)) => format!(", once in {} years by the table", years(period)),
        Some(Recurrence::Oftener(period)) => format!(", more often than once in {} years", years(period)),
        Some(Recurrence::Rarer(period)) => format!(", more seldom than once in {} years", years(period)),
        None => String::new(),
    }
}

/// How tables are read, where an intensity of the roof was read between its figures.
pub(super) fn interpolated(storm: &Storm) -> Option<String> {
    let further = storm.further.iter().filter_map(|further| further.reading.as_ref());
    let mut readings = storm.reading.iter().chain(further);
    readings.any(|reading| !place(reading).is_empty()).then(|| {
        "Between the durations of the rainfall table the logarithm of intensity is taken as straight against that of \
         duration, between its return periods intensity against the logarithm of the return period (common practice); \
         nothing is extrapolated."
            .to_string()
    })
}

/// Where in its table an intensity was read, without climate and factor.
#[derive(Serialize)]
pub(super) struct Read<'a> {
    table: &'a str,
    intensity_m_s: f64,
    duration_from_s: f64,
    duration_to_s: f64,
    return_period_from_yr: f64,
    return_period_to_yr: f64,
}

/// A storm that every case is held under as well.
#[derive(Serialize)]
pub(super) struct Beside<'a> {
    name: &'a str,
    intensity_m_s: f64,
    duration_s: Option<f64>,
    return_period_yr: Option<f64>,
    factor: f64,
    rain_over_design_rain: f64,
    #[serde(skip_serializing_if = "Option::is_none")]
    read: Option<Read<'a>>,
}

pub(super) fn read<'a>(storm: &'a Storm, reading: Option<&Reading>) -> Option<Read<'a>> {
    let (reading, table) = reading.zip(storm.rainfall.as_ref())?;
    Some(Read {
        table: table.name(),
        intensity_m_s: reading.intensity.m_per_s(),
        duration_from_s: reading.durations.0.s(),
        duration_to_s: reading.durations.1.s(),
        return_period_from_yr: reading.return_periods.0.years(),
        return_period_to_yr: reading.return_periods.1.years(),
    })
}

pub(super) fn beside(storm: &Storm) -> Vec<Beside<'_>> {
    fn one<'a>(storm: &'a Storm, further: &'a Further) -> Beside<'a> {
        Beside {
            name: &further.name,
            intensity_m_s: further.intensity.m_per_s(),
            duration_s: further.duration.map(Time::s),
            return_period_yr: further.return_period.map(ReturnPeriod::years),
            factor: further.factor,
            rain_over_design_rain: further.intensity / storm.intensity,
            read: read(storm, further.reading.as_ref()),
        }
    }
    storm.further.iter().map(|further| one(storm, further)).collect()
}
