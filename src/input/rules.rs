//! Rule sets: files of rules, each of a kind with its number, its clause and where that is known from; and which sets stand
//! over a project.

use std::path::Path;
use std::sync::Arc;

use crate::rules::{
    Amount, Applied, Bound, Bounds, Clash, KINDS, Kind, Known, Number, Rule, RuleSet, Rulebook, Takes, asks_nothing,
    clash,
};
use crate::units::{Area, Dimension, Intensity, ReturnPeriod, Time};

use super::fault::{Fault, Log, Source, Span};
use super::file;
use super::section::{Cell, Keys, Reader, Section, any_of};
use super::setting::MOST_DEVICES;
use super::shipped;

static SET: Keys = Keys { table: "a rule set", known: &["title", "standard", "year", "note", "rule"] };

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
};

/// Keys that a rule of any kind takes.
const COMMON: [&str; 5] = ["asks", "clause", "source", "known", "note"];

/// Keys that look a storm up, which an intensity needs not.
const LOOK_UP: [&str; 4] = ["duration", "return_period", "return_period_3", "return_period_4"];

/// Keys that say nothing without another.
const GO_WITH: [(&str, &str); 4] = [
    ("return_period", "duration"),
    ("return_period_3", "duration"),
    ("return_period_4", "duration"),
    ("first", "for_each"),
];

static APPLIED: Keys = Keys { table: "an entry of `rules`", known: &["file", "apply"] };

/// The sets that a project names; none over it where it names none.
pub(super) fn read_all(project: &Path, section: &Section<'_>) -> Option<Rulebook> {
    let Some(cell) = section.get("rules") else { return Some(Rulebook::default()) };
    if cell.items().is_empty() {
        cell.at_fault("`rules` is an empty list", "no rule set stands here", "name at least one, or take the key out");
        return None;
    }
    let mut titles = Titles::default();
    let sets: Vec<Option<Applied>> = cell.items().iter().map(|item| read_applied(project, item, &mut titles)).collect();
    sets.into_iter().collect::<Option<_>>().map(|sets| Rulebook { sets })
}

fn read_applied(project: &Path, item: &Cell<'_>, titles: &mut Titles) -> Option<Applied> {
    let (named, binding) = if item.is_table() {
        let entry = item.section(&APPLIED)?;
        let apply = entry.get("apply").map_or(Some(true), |cell| cell.word(&[("binding", true), ("advice", false)]));
        (entry.need("file", "name the file of the set: file = \"firm-rules.toml\"")?, apply)
    } else {
        (*item, Some(true))
    };
    let written = named.text()?;
    let (set, _) = read_file(&file::beside(project, written), written, Some(&named), item.reader.log)?;
    titles.take(&set.title, item.reader.source, named.span(), item.reader.log)?;
    Some(Applied { set: Arc::new(set), binding: binding? })
}

/// The titles of the sets of one report, and where each was given.
#[derive(Default)]
struct Titles(Vec<(String, Arc<Source>, Span)>);

impl Titles {
    /// Takes in a title; refuses one that another set has.
    fn take(&mut self, title: &str, source: &Arc<Source>, span: Span, log: &Log) -> Option<()> {
        if let Some((_, first_in, first)) = self.0.iter().find(|(known, _, _)| known == title) {
            let fault = Fault::error(format!("two rule sets have the title `{title}`"))
                .at(source, span, "again here")
                .at(first_in, first.clone(), "first here")
                .help("reports name a set by its title: give every set its own");
            log.put(fault);
            return None;
        }
        self.0.push((title.to_string(), Arc::clone(source), span));
        Some(())
    }
}

/// Rule sets by themselves, each title once.
pub(super) fn read_alone(paths: &[&Path], log: &Log) -> Option<Vec<RuleSet>> {
    let mut titles = Titles::default();
    let read = |path: &&Path| {
        let written = path.display().to_string();
        let (set, (source, span)) = read_file(&file::beside(Path::new(""), &written), &written, None, log)?;
        titles.take(&set.title, &source, span, log)?;
        Some(set)
    };
    let sets: Vec<Option<RuleSet>> = paths.iter().map(read).collect();
    sets.into_iter().collect()
}

/// A set, and where its title stands.
type Read = (RuleSet, (Arc<Source>, Span));

fn read_file(path: &Path, written: &str, named_in: Option<&Cell<'_>>, log: &Log) -> Option<Read> {
    let source = file::read_of(shipped::Sort::RuleSet, path, written, named_in, log)?;
    let mut mended = String::new();
    let table = file::parse(&source, &mut mended, log);
    let section = Section::open(Reader { source: &source, log }, &SET, table.get_ref(), 0..0);
    let text = |section: &Section<'_>, key| match section.get(key) {
        Some(cell) => cell.text().map(|text| Some(text.trim().to_string())),
        None => Some(None),
    };
    let title = section.need("title", "give the set a title: title = \"Plumbing code, as adopted\"");
    let title = title.and_then(|cell| Some((cell.text()?.to_string(), cell.span())));
    let (standard, note) = (text(&section, "standard"), text(&section, "note"));
    let year = section.get("year").map_or(Some(None), |cell| cell.whole(1800, 2200).map(Some));
    if section.get("rule").is_none() {
        section.missing("the set has no [[rule]]", "give at least one [[rule]] with asks, clause, source and known");
    }
    let tables = section.sections("rule", &RULE, "a list of rules, each under [[rule]]").unwrap_or_default();
    let rules: Vec<Option<Rule>> = tables.iter().map(|table| read_rule(table.as_ref()?)).collect();
    let together = stand_together(&tables, &rules);
    let rules = rules.into_iter().collect::<Option<Vec<_>>>().filter(|rules| together && !rules.is_empty());
    let (title, span) = title?;
    Some((RuleSet { title, standard: standard?, year: year?, note: note?, rules: rules? }, (source, span)))
}

/// Refuses rules that cannot stand in one set, and warns of two that ask the same with the same terms, where only one of their
/// numbers can hold.
fn stand_together(tables: &[Option<Section<'_>>], rules: &[Option<Rule>]) -> bool {
    let known: Vec<_> =
        tables.iter().zip(rules).filter_map(|(table, rule)| table.as_ref().zip(rule.as_ref())).collect();
    let mut together = true;
    for (place, (table, rule)) in known.iter().enumerate() {
        let before = || known[..place].iter();
        let put = |fault: Fault, here: &str, first: &Section<'_>, there: &str| {
            let fault = fault.at(table.reader.source, table.span.clone(), here);
            table.reader.log.put(fault.at(first.reader.source, first.span.clone(), there));
        };
        if let Some((first, why)) = before().find_map(|(first, other)| Some((first, clash(rule, other)?))) {
            let (title, help) = in_words(why, rule.kind);
            put(Fault::error(title).help(help), "and this one", first, "this one");
            together = false;
            continue;
        }
        let way = |rule: &Rule| matches!(rule.bound, Some(Bound::AtLeast(_)));
        let same = |other: &Rule| other.kind == rule.kind && other.terms == rule.terms && way(other) == way(rule);
        if let Some((first, _)) = before().find(|(_, other)| same(other)) {
            let fault = Fault::warning(format!("two rules ask for `{}` in the same terms", rule.kind.name))
                .help("both are asked; take one out where one was meant");
            put(fault, "again here", first, "first here");
        }
    }
    together
}

/// Why two rules cannot stand in one set, and what would pass.
fn in_words(clash: Clash, kind: &Kind) -> (String, &'static str) {
    match clash {
        Clash::CountedOnce => (
            format!("two rules of one set ask for `{}`, each in its own way", kind.name),
            "a set counts in one way: take one out, or write a set for each reading",
        ),
        Clash::NoSill => (
            "no sill keeps both of these rules".into(),
            "the least height of a sill may not be over its greatest: change one of the numbers",
        ),
        Clash::SillOverWater => (
            "no layout keeps both of these rules: the lowest sill is over the deepest water".into(),
            "water runs out over a sill: let it stand deeper, or the sill lower",
        ),
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
    if own && together && asks_nothing(&rule) {
        let (label, help) = match rule.bound {
            Some(_) => ("every sill keeps it", "give a number above zero, or count it from another height"),
            None => ("the design rain as it is", "give a duration, an intensity or a factor"),
        };
        let title = format!("a rule that asks for `{}` asks nothing", kind.name);
        section.reader.fault(section.span.clone(), title, label, help);
        return None;
    }
    (own && together).then_some(rule)
}

/// Refuses the keys that a kind does not take.
fn only_its_keys(section: &Section<'_>, kind: &Kind) -> bool {
    let mut fits = true;
    let own: Vec<&str> = kind.bounds.keys().iter().copied().chain(kind.terms.iter().map(|term| term.key)).collect();
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
    let fixed = takes("intensity") && section.get("intensity").is_some();
    for key in LOOK_UP.into_iter().filter(|_| fixed) {
        if let Some(cell) = section.get(key) {
            let title = format!("`{key}` stands beside `intensity`");
            cell.at_fault(title, "an intensity needs none", "give the intensity, or the storm to look it up by");
            sound = false;
        }
    }
    for (key, with) in GO_WITH.into_iter().filter(|&(key, _)| takes(key) && !(fixed && LOOK_UP.contains(&key))) {
        if let Some(cell) = section.get(key)
            && section.get(with).is_none()
        {
            let title = format!("`{key}` stands without `{with}`");
            cell.at_fault(title, "not heeded by itself", format!("give `{with}` too"));
            sound = false;
        }
    }
    sound
}

fn read_bound(section: &Section<'_>, kind: &Kind) -> Option<Option<Bound>> {
    let (least, most) = (section.get("at_least"), section.get("at_most"));
    let number = |cell: Cell<'_>| match kind.number {
        Number::Length => cell.positive_length().map(Amount::Length),
        Number::Height => cell.length().map(Amount::Length),
        Number::Count => cell.whole(1, MOST_DEVICES).map(Amount::Count),
        Number::Times => cell.number_positive().map(Amount::Times),
        Number::Slope => cell.positive_slope().map(Amount::Slope),
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
            let example = kind.number.example();
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
