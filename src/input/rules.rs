//! Rule sets: files of rules, each of a kind with its number, its clause and where that is known from; and which sets stand
//! over a project.

use std::path::Path;
use std::sync::Arc;

use crate::rules::{Amount, Applied, Bound, Bounds, KINDS, Kind, Known, Number, Rule, RuleSet, Rulebook, Takes};
use crate::units::{Area, Dimension, Intensity, ReturnPeriod, Time};

use super::fault::{Fault, Log, Span};
use super::file;
use super::section::{Cell, Keys, Reader, Section, any_of};
use super::setting::MOST_DEVICES;

static SET: Keys =
    Keys { table: "a rule set", known: &["title", "standard", "year", "note", "rule"], unsupported: &[] };

/// Keys of every kind; which of them a rule takes is asked of its kind.
static RULE: Keys = Keys {
    table: "a [[rule]]",
    known: &[
        "asks",
        "at_least",
        "at_most",
        "clause",
        "source",
        "known",
        "note",
        "above",
        "for",
        "of",
        "count",
        "credited",
        "duration",
        "return_period",
        "return_period_3",
        "return_period_4",
        "intensity",
        "times",
        "first",
        "for_each",
        "area_above",
    ],
    unsupported: &[],
};

/// Keys that a rule of any kind takes.
const COMMON: [&str; 5] = ["asks", "clause", "source", "known", "note"];

/// Keys that say nothing without another.
const GO_WITH: [(&str, &str); 5] = [
    ("duration", "return_period"),
    ("return_period", "duration"),
    ("return_period_3", "duration"),
    ("return_period_4", "duration"),
    ("first", "for_each"),
];

static APPLIED: Keys = Keys { table: "an entry of `rules`", known: &["file", "apply"], unsupported: &[] };

/// The sets that a project names; none over it where it names none.
pub(super) fn read_all(project: &Path, section: &Section<'_>) -> Option<Rulebook> {
    let Some(cell) = section.get("rules") else { return Some(Rulebook::default()) };
    if cell.items().is_empty() {
        cell.at_fault("`rules` is an empty list", "no rule set stands here", "name at least one, or take the key out");
        return None;
    }
    let mut titles: Vec<(String, Span)> = Vec::new();
    let sets: Vec<Option<Applied>> = cell.items().iter().map(|item| read_applied(project, item, &mut titles)).collect();
    sets.into_iter().collect::<Option<_>>().map(|sets| Rulebook { sets })
}

fn read_applied(project: &Path, item: &Cell<'_>, titles: &mut Vec<(String, Span)>) -> Option<Applied> {
    let (named, binding) = if item.is_table() {
        let entry = item.section(&APPLIED)?;
        let apply = entry.get("apply").map_or(Some(true), |cell| cell.word(&[("binding", true), ("advice", false)]));
        (entry.need("file", "name the file of the set: file = \"firm-rules.toml\"")?, apply)
    } else {
        (*item, Some(true))
    };
    let written = named.text()?;
    let set = read_file(&file::beside(project, written), written, Some(&named), item.reader.log)?;
    if let Some((_, first)) = titles.iter().find(|(title, _)| *title == set.title) {
        let fault = Fault::error(format!("two rule sets have the title `{}`", set.title))
            .at(item.reader.source, named.span(), "again here")
            .at(item.reader.source, first.clone(), "first here")
            .help("reports name a set by its title: give every set its own");
        item.reader.log.put(fault);
        return None;
    }
    titles.push((set.title.clone(), named.span()));
    Some(Applied { set: Arc::new(set), binding: binding? })
}

/// A rule set by itself.
pub(super) fn read_alone(path: &Path, log: &Log) -> Option<RuleSet> {
    let written = path.display().to_string();
    read_file(&file::beside(Path::new(""), &written), &written, None, log)
}

fn read_file(path: &Path, written: &str, named_in: Option<&Cell<'_>>, log: &Log) -> Option<RuleSet> {
    let source = file::read(path, written, named_in, log)?;
    let mut mended = String::new();
    let table = file::parse(&source, &mut mended, log);
    let section = Section::open(Reader { source: &source, log }, &SET, table.get_ref(), 0..0);
    let text = |section: &Section<'_>, key| match section.get(key) {
        Some(cell) => cell.text().map(|text| Some(text.trim().to_string())),
        None => Some(None),
    };
    let title = section.need("title", "give the set a title: title = \"Plumbing code, as adopted\"");
    let title = title.and_then(|cell| cell.text()).map(str::to_string);
    let (standard, note) = (text(&section, "standard"), text(&section, "note"));
    let year = section.get("year").map_or(Some(None), |cell| cell.whole(1800, 2200).map(Some));
    if section.get("rule").is_none() {
        section.missing("the set has no [[rule]]", "give at least one [[rule]] with asks, clause, source and known");
    }
    let tables = section.sections("rule", &RULE, "a list of rules, each under [[rule]]").unwrap_or_default();
    let rules: Vec<Option<Rule>> = tables.iter().map(|table| read_rule(table.as_ref()?)).collect();
    same_twice(&tables, &rules);
    let rules = rules.into_iter().collect::<Option<Vec<_>>>().filter(|rules| !rules.is_empty());
    Some(RuleSet { title: title?, standard: standard?, year: year?, note: note?, rules: rules? })
}

/// Warns of two rules that ask the same with the same terms, where only one of their numbers can hold.
fn same_twice(tables: &[Option<Section<'_>>], rules: &[Option<Rule>]) {
    let known: Vec<_> =
        tables.iter().zip(rules).filter_map(|(table, rule)| table.as_ref().zip(rule.as_ref())).collect();
    for (place, (table, rule)) in known.iter().enumerate() {
        let way = |rule: &Rule| matches!(rule.bound, Some(Bound::AtLeast(_)));
        let same = |other: &Rule| other.kind == rule.kind && other.terms == rule.terms && way(other) == way(rule);
        if let Some((first, _)) = known[..place].iter().find(|(_, other)| same(other)) {
            let fault = Fault::warning(format!("two rules ask for `{}` in the same terms", rule.kind.name))
                .at(table.reader.source, table.span.clone(), "again here")
                .at(table.reader.source, first.span.clone(), "first here")
                .help("both are asked; take one out where one was meant");
            table.reader.log.put(fault);
        }
    }
}

fn read_rule(section: &Section<'_>) -> Option<Rule> {
    let text =
        |key, example| section.need(key, example).and_then(|cell| cell.text()).map(|text| text.trim().to_string());
    let kinds = KINDS.map(|kind| (kind.name, kind));
    let asks = section.need("asks", "say what the rule asks: asks = \"opening-width\"");
    let kind = asks.and_then(|cell| cell.word(&kinds));
    let clause = text("clause", "say where it stands: clause = \"1106.4\"");
    let source = text("source", "say where it is known from: source = \"read in the adopted text\"");
    let known = section
        .need("known", "write known = \"read\" or known = \"recalled\"")
        .and_then(|cell| cell.word(&Known::NAMED));
    let note = match section.get("note") {
        Some(cell) => cell.text().map(|text| Some(text.to_string())),
        None => Some(None),
    };
    let kind = kind?;
    let (own, together) = (only_its_keys(section, kind), keys_go_together(section, kind));
    let (bound, terms) = (read_bound(section, kind), read_terms(section, kind));
    let rule =
        Rule { kind, bound: bound?, terms: terms?, clause: clause?, source: source?, known: known?, note: note? };
    (own && together).then_some(rule)
}

/// Refuses the keys that a kind does not take.
fn only_its_keys(section: &Section<'_>, kind: &Kind) -> bool {
    let mut fits = true;
    let bounds: &[&str] = match kind.bounds {
        Bounds::None => &[],
        Bounds::Least => &["at_least"],
        Bounds::Most => &["at_most"],
        Bounds::Either => &["at_least", "at_most"],
    };
    let own: Vec<&str> = bounds.iter().copied().chain(kind.terms.iter().map(|term| term.key)).collect();
    for &key in RULE.known.iter().filter(|key| !COMMON.contains(key) && !own.contains(key)) {
        if let Some(cell) = section.get(key) {
            let takes = if own.is_empty() { "nothing else".to_string() } else { any_of(&own) };
            cell.at_fault(
                format!("`{key}` does not belong to a rule that asks for `{}`", kind.name),
                "not one of its keys",
                format!("it takes {takes}"),
            );
            fits = false;
        }
    }
    fits
}

/// Refuses keys that would not be heeded, for another is missing or stands in their way.
fn keys_go_together(section: &Section<'_>, kind: &Kind) -> bool {
    let takes = |key: &str| kind.terms.iter().any(|term| term.key == key);
    let mut sound = true;
    for (key, with) in GO_WITH.into_iter().filter(|&(key, _)| takes(key)) {
        let Some(cell) = section.get(key) else { continue };
        if takes("intensity") && section.get("intensity").is_some() {
            let title = format!("`{key}` stands beside `intensity`");
            cell.at_fault(title, "an intensity needs none", "give the intensity, or the storm to look it up by");
        } else if section.get(with).is_none() {
            cell.at_fault(
                format!("`{key}` stands without `{with}`"),
                "not heeded by itself",
                format!("give `{with}` too"),
            );
        } else {
            continue;
        }
        sound = false;
    }
    sound
}

fn read_bound(section: &Section<'_>, kind: &Kind) -> Option<Option<Bound>> {
    let (least, most) = (section.get("at_least"), section.get("at_most"));
    let number = |cell: Cell<'_>| match kind.number {
        Number::Length => cell.length().map(Amount::Length),
        Number::Count => cell.whole(1, MOST_DEVICES).map(Amount::Count),
        Number::Times => cell.number_positive().map(Amount::Times),
        Number::Slope => cell.slope().map(Amount::Slope),
    };
    match (kind.bounds, least, most) {
        (Bounds::None, _, _) => Some(None),
        (Bounds::Either, Some(_), Some(cell)) => {
            cell.at_fault(
                "a rule has `at_least` and `at_most`",
                "each rule has one number",
                "give two rules, each with its clause",
            );
            None
        }
        (Bounds::Least | Bounds::Either, Some(cell), _) => number(cell).map(|amount| Some(Bound::AtLeast(amount))),
        (Bounds::Most | Bounds::Either, _, Some(cell)) => number(cell).map(|amount| Some(Bound::AtMost(amount))),
        // A number the wrong way is told as a key that does not belong there.
        (_, Some(_), _) | (_, _, Some(_)) => None,
        _ => {
            let (key, or) = match kind.bounds {
                Bounds::Most => ("at_most", ""),
                Bounds::Either => ("at_least", " or `at_most`"),
                _ => ("at_least", ""),
            };
            let example = match kind.number {
                Number::Length => "\"4 in\"",
                Number::Count => "2",
                Number::Times => "1.0",
                Number::Slope => "\"0.25 in/ft\"",
            };
            section.missing(
                &format!("a rule that asks for `{}` has no number", kind.name),
                &format!("give `{key}`{or}, such as {key} = {example}"),
            );
            None
        }
    }
}

fn read_terms(section: &Section<'_>, kind: &Kind) -> Option<Vec<(&'static str, Amount)>> {
    let mut terms = Vec::new();
    let mut sound = true;
    for term in kind.terms {
        let Some(cell) = section.get(term.key) else {
            if term.needed {
                let would_pass = match term.takes {
                    Takes::Word(words) => any_of(words),
                    Takes::Yes => "true or false".into(),
                    _ => "a value".into(),
                };
                section.missing(
                    &format!("a rule that asks for `{}` has no `{}`", kind.name, term.key),
                    &format!("{would_pass} would pass"),
                );
                sound = false;
            }
            continue;
        };
        match read_term(&cell, term.takes) {
            Some(amount) => terms.push((term.key, amount)),
            None => sound = false,
        }
    }
    sound.then_some(terms)
}

fn read_term(cell: &Cell<'_>, takes: Takes) -> Option<Amount> {
    Some(match takes {
        Takes::Area => Amount::Area(cell.positive(Dimension::Area, Area::m2)?),
        Takes::Time => Amount::Time(cell.positive(Dimension::Time, Time::s)?),
        Takes::ReturnPeriod => Amount::ReturnPeriod(cell.positive(Dimension::ReturnPeriod, ReturnPeriod::years)?),
        Takes::Intensity => Amount::Intensity(cell.positive(Dimension::Intensity, Intensity::m_per_s)?),
        Takes::Times => Amount::Times(cell.number_positive()?),
        Takes::Yes => Amount::Yes(cell.yes_or_no()?),
        Takes::Word(words) => {
            let choices: Vec<_> = words.iter().map(|&word| (word, word)).collect();
            Amount::Word(cell.word(&choices)?)
        }
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_term_of_every_kind_is_a_key() {
        for kind in KINDS {
            for term in kind.terms {
                assert!(RULE.known.contains(&term.key), "{} of {}", term.key, kind.name);
            }
        }
    }
}
