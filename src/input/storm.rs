//! The table `[storm]`: the design rain, given or read in a rainfall table, and the storms that are held beside it.

use std::path::Path;

use crate::roof::{Case, Further, Outside, Rainfall, Reading, Roof, Storm};
use crate::units::{Dimension, Intensity, ReturnPeriod, Time};

use super::fault::Fault;
use super::rainfall;
use super::section::{Cell, Keys, Section, optional};
use super::setting::{Names, unique};

pub(super) static STORM: Keys = Keys {
    table: "[storm]",
    known: &["intensity", "table", "duration", "return_period", "climate", "storms", "source"],
};

static FURTHER: Keys =
    Keys { table: "an entry of `storms`", known: &["name", "intensity", "duration", "return_period", "factor"] };

/// Factors for climate that are likely meant; others are warned about.
const CLIMATES: std::ops::RangeInclusive<f64> = 1.0..=2.0;

/// How long it rains and how often that is met, where each is given.
#[derive(Clone, Copy)]
struct When {
    duration: Option<Time>,
    return_period: Option<ReturnPeriod>,
}

/// An intensity, without climate and factor, with where it was read in the table.
type Found = (Intensity, Option<Reading>);

pub(super) fn read(project: &Path, section: &Section<'_>) -> Option<Storm> {
    let climate = section.get("climate").map_or(Some(1.0), |cell| climate(&cell));
    let table = section.get("table").map(|cell| rainfall::read(project, &cell));
    let given = section.get("intensity").map(|cell| cell.positive(Dimension::Intensity, Intensity::m_per_s));
    let when = when(section);
    let source = section.get("source").map(|cell| cell.text().map(str::to_string));
    let found = match (given, &table) {
        (Some(_), Some(_)) => {
            both_given(section);
            None
        }
        (Some(intensity), None) => intensity.map(|intensity| (intensity, None)),
        (None, Some(table)) => read_main(section, table.as_deref(), when),
        (None, None) => {
            section.need(
                "intensity",
                "write intensity = \"6.3 in/h\" or intensity = \"160 mm/h\", or name a table = \"rainfall.csv\"",
            );
            None
        }
    };
    let rainfall = optional(table);
    let main = Main { when, found, rainfall: rainfall.as_ref().map(Option::as_deref), climate };
    let further = read_further(section, &main);
    let (when, (intensity, reading)) = (when?, found?);
    Some(Storm {
        intensity: intensity * climate?,
        duration: when.duration,
        return_period: when.return_period,
        source: optional(source)?,
        climate: climate?,
        rainfall: rainfall?,
        reading,
        further: further?,
    })
}

fn climate(cell: &Cell<'_>) -> Option<f64> {
    let climate = cell.number_positive()?;
    if !CLIMATES.contains(&climate) {
        cell.reader.warn(
            cell.span(),
            format!("`climate` multiplies every intensity by {climate}"),
            if climate < 1.0 { "less rain than without it" } else { "more than twice the rain" },
            "a tenth more rain is climate = 1.1",
        );
    }
    Some(climate)
}

fn when(section: &Section<'_>) -> Option<When> {
    let duration = section.get("duration").map(|cell| cell.positive(Dimension::Time, Time::s));
    let return_period =
        section.get("return_period").map(|cell| cell.positive(Dimension::ReturnPeriod, ReturnPeriod::years));
    let (duration, return_period) = (optional(duration), optional(return_period));
    Some(When { duration: duration?, return_period: return_period? })
}

fn both_given(section: &Section<'_>) {
    if let (Some(table), Some(intensity)) = (section.get("table"), section.get("intensity")) {
        let fault = Fault::error("`table` stands beside `intensity` in [storm]")
            .at(table.reader.source, table.span(), "the intensity is looked up here")
            .at(table.reader.source, intensity.span(), "and given here")
            .help("give one of the two");
        table.reader.log.put(fault);
    }
}

/// The design rain in its table, which is read at a duration and a return period; the table is none where it is at fault.
fn read_main(section: &Section<'_>, table: Option<&Rainfall>, when: Option<When>) -> Option<Found> {
    let duration = section.need("duration", "a table is read at a duration: duration = \"15 min\"");
    let period = section.need("return_period", "a table is read at a return period: return_period = \"100 yr\"");
    let (duration, period) = (duration?, period?);
    let (table, when) = (table?, when?);
    let inside = inside(table, when, Some(&duration), Some(&period));
    look_up(table, when).filter(|_| inside)
}

fn look_up(table: &Rainfall, when: When) -> Option<Found> {
    let reading = table.intensity(when.duration?, when.return_period?).ok()?;
    Some((reading.intensity, Some(reading)))
}

/// Whether a duration and a return period lie in the table; each that does not is told where it stands. One that stands
/// nowhere is another's, and told there.
fn inside(table: &Rainfall, when: When, duration: Option<&Cell<'_>>, return_period: Option<&Cell<'_>>) -> bool {
    let duration_is_in = when.duration.map_or(Ok(()), |duration| table.holds_duration(duration));
    let period_is_in = when.return_period.map_or(Ok(()), |period| table.holds_return_period(period));
    for (found, cell) in [(duration_is_in, duration), (period_is_in, return_period)] {
        if let (Err(outside), Some(cell)) = (found, cell) {
            let under = match outside {
                Outside::Duration(shortest, _) => when.duration.is_some_and(|duration| duration < shortest),
                Outside::ReturnPeriod(shortest, _) => when.return_period.is_some_and(|period| period < shortest),
            };
            cell.at_fault(
                format!("`{}` lies outside `{}`", cell.key, table.name()),
                if under { "shorter than any in the table" } else { "longer than any in the table" },
                format!("the table runs {}; nothing is extrapolated", ends(&outside)),
            );
        }
    }
    duration_is_in.is_ok() && period_is_in.is_ok()
}

/// The ends of a table, as a file writes them.
fn ends(outside: &Outside) -> String {
    match outside {
        Outside::Duration(shortest, longest) => {
            let minutes = |time: &Time| round(time.s() / 60.0);
            format!("from {} min to {} min", minutes(shortest), minutes(longest))
        }
        Outside::ReturnPeriod(shortest, longest) => {
            format!("from {} yr to {} yr", round(shortest.years()), round(longest.years()))
        }
    }
}

fn round(value: f64) -> f64 {
    (value * 1e4).round() / 1e4
}

/// What a further storm is read against; none of what is at fault.
struct Main<'m> {
    when: Option<When>,
    found: Option<Found>,
    /// An inner none where no table is named.
    rainfall: Option<Option<&'m Rainfall>>,
    climate: Option<f64>,
}

fn read_further(section: &Section<'_>, main: &Main<'_>) -> Option<Vec<Further>> {
    if section.get("storms").is_none() {
        return Some(Vec::new());
    }
    let wanted = "a list, such as [{ name = \"cloudburst\", duration = \"5 min\" }]";
    let mut names = Names::default();
    let entries = section.sections("storms", &FURTHER, wanted)?;
    let storms: Vec<_> = entries.iter().map(|entry| read_one(entry.as_ref()?, main, &mut names)).collect();
    storms.into_iter().collect()
}

/// A further storm. What it does not say is the main one's; an intensity of its own stands for itself.
fn read_one(entry: &Section<'_>, main: &Main<'_>, names: &mut Names) -> Option<Further> {
    let name =
        entry.need("name", "name the storm: name = \"cloudburst\"").and_then(|cell| unique(&cell, names, "storm"));
    let factor = entry.get("factor").map_or(Some(1.0), |cell| cell.number_positive());
    let given = entry.get("intensity").map(|cell| cell.positive(Dimension::Intensity, Intensity::m_per_s));
    let own = when(entry);
    let (when, found) = match given {
        Some(intensity) => (own, intensity.map(|intensity| (intensity, None))),
        None => {
            let when = own.and_then(|own| or_main(own, main));
            (when, of_main(entry, main, own, when))
        }
    };
    let (when, (intensity, reading)) = (when?, found?);
    let factor = factor?;
    Some(Further {
        name: name?,
        intensity: intensity * main.climate? * factor,
        duration: when.duration,
        return_period: when.return_period,
        factor,
        reading,
    })
}

fn or_main(own: When, main: &Main<'_>) -> Option<When> {
    let main = main.when?;
    Some(When { duration: own.duration.or(main.duration), return_period: own.return_period.or(main.return_period) })
}

/// The intensity of a storm that gives none: from the table, or, with a factor alone, the main storm's.
fn of_main(entry: &Section<'_>, main: &Main<'_>, own: Option<When>, when: Option<When>) -> Option<Found> {
    let (duration, period) = (entry.get("duration"), entry.get("return_period"));
    match (duration.or(period), entry.get("factor"), main.rainfall?) {
        (None, None, _) => {
            entry.missing(
                "a further storm is the same as the main one",
                "give it a duration, a return_period, a factor or an intensity of its own",
            );
            None
        }
        (None, Some(_), _) => main.found,
        (Some(_), _, Some(table)) => {
            let inside = inside(table, own?, duration.as_ref(), period.as_ref());
            look_up(table, when?).filter(|_| inside)
        }
        (Some(cell), _, None) => {
            cell.at_fault(
                format!("`{}` of a further storm is looked up in a table, and [storm] names none", cell.key),
                "nowhere to look it up",
                "give the storm its own intensity, or [storm] a table in place of `intensity`",
            );
            None
        }
    }
}

/// The roof with each case held under each further storm as well, and named after both.
pub(super) fn under_each_storm(mut roof: Roof) -> Roof {
    let storms = &roof.storm;
    let under = |case: &Case, (index, further): (usize, &Further)| Case {
        name: format!("{} ({})", case.name, further.name),
        rain: case.rain * (further.intensity / storms.intensity),
        storm: Some(index),
        ..case.clone()
    };
    // A case that a rule set counts has the rain of the set.
    let further = |case: &Case| if case.basis.is_some() { &[][..] } else { &storms.further[..] };
    let of_case = |case: &Case| {
        let further = further(case).iter().enumerate().map(|further| under(case, further)).collect::<Vec<_>>();
        [case.clone()].into_iter().chain(further)
    };
    let counts: Vec<usize> = roof.cases.iter().map(|case| 1 + further(case).len()).collect();
    let cases = roof.cases.iter().flat_map(of_case).collect();
    for area in &mut roof.areas {
        let of_each = area.limits.iter().zip(&counts);
        area.limits = of_each.flat_map(|(&limits, &count)| vec![limits; count]).collect();
    }
    Roof { cases, ..roof }
}
