//! The report of `rules`: a rule set read aloud, or several side by side.

use serde::ser::SerializeMap;
use serde::{Serialize, Serializer};

use crate::rules::{Amount, Bound, Family, KINDS, Known, Role, Rule, RuleSet, Term, at_least_as_strict};
use crate::units::System;

use super::page::{self, Block, Table};
use super::words::{Words, list};
use super::{Format, rules, written};

/// The mark behind the strictest number of a row.
const STRICTEST: &str = " *";

pub(super) fn write(sets: &[RuleSet], system: System, format: Format, width: usize) -> String {
    let words = Words(system);
    let blocks = || match sets {
        [set] => aloud(set, words),
        _ => beside(sets, words),
    };
    match format {
        Format::Table => page::text(&blocks(), width),
        Format::Markdown => page::markdown(&blocks()),
        Format::Csv => csv(sets, words),
        Format::Json => json(sets, words),
    }
}

/// The heading of a family of rules.
fn heading(family: Family) -> &'static str {
    match family {
        Family::Demand => "The flow that is counted",
        Family::Openings => "The openings",
        Family::Standing => "How high, how many, how far apart",
        Family::Water => "The water",
        Family::Roof => "The roof and what follows",
    }
}

const FAMILIES: [Family; 5] = [Family::Demand, Family::Openings, Family::Standing, Family::Water, Family::Roof];

fn aloud(set: &RuleSet, words: Words) -> Vec<Block> {
    let mut blocks = vec![Block::Title(rules::titled(set))];
    blocks.extend(set.note.clone().map(Block::Text));
    for family in FAMILIES {
        let rules: Vec<&Rule> = set.rules.iter().filter(|rule| rule.kind.role.family() == family).collect();
        if rules.is_empty() {
            continue;
        }
        let column = |head: &str, cell: &dyn Fn(&Rule) -> String| {
            (head.to_string(), false, rules.iter().map(|rule| cell(rule)).collect::<Vec<_>>())
        };
        blocks.push(Block::Heading(heading(family).into()));
        blocks.push(Block::Table(Table::of(vec![
            column("clause", &|rule| rule.clause.clone()),
            column("asks", &|rule| rules::subject(rule, words)),
            column("number", &|rule| rule.bound.map_or("-".into(), |bound| rules::asked(bound, words))),
            column("known", &|rule| rule.known.name().into()),
            column("source", &|rule| rule.source.clone()),
        ])));
        let notes = rules.iter().filter_map(|rule| Some(format!("{}: {}", rule.clause, rule.note.as_ref()?)));
        let notes: Vec<String> = notes.collect();
        if !notes.is_empty() {
            blocks.push(Block::List(notes));
        }
    }
    blocks.push(Block::Heading("How far to trust it".into()));
    blocks.push(Block::List(trust(&[set])));
    blocks
}

fn trust(sets: &[&RuleSet]) -> Vec<String> {
    let all = || sets.iter().flat_map(|set| &set.rules);
    let recalled = all().filter(|rule| rule.known == Known::Recalled).count();
    let mut lines = vec![
        "This is a reading, not the code itself: the adopted text, its edition and local amendments decide."
            .to_string(),
        format!("{} rules, {recalled} of them recalled.", all().count()),
    ];
    if recalled > 0 {
        lines.push("What is recalled is from memory: confirm against the adopted text.".into());
    }
    lines
}

/// A row: a rule that stands for it, and the rules of each set in it.
type Beside<'s> = (&'s Rule, Vec<Option<Vec<&'s Rule>>>);

/// What makes two rules ask the same: their kind, the terms that part it, and which way they count.
type Row = (&'static str, Vec<String>, bool);

fn row_of(rule: &Rule, words: Words) -> Row {
    let parting = rule.kind.terms.iter().filter(|term| term.parts);
    let terms = parting.filter_map(|term| Some(term.says.replace("{}", &rules::amount(rule.term(term.key)?, words))));
    (rule.kind.name, terms.collect(), matches!(rule.bound, Some(Bound::AtMost(_))))
}

/// A row in words.
fn row_in_words(rule: &Rule, words: Words) -> String {
    let (_, terms, _) = row_of(rule, words);
    format!("{}{}", rule.kind.says.trim_end_matches(':'), terms.concat())
}

/// What a rule says in its row: its number and the terms that do not part it.
fn cell(rule: &Rule, words: Words) -> String {
    let number = rule.bound.map(|bound| rules::asked(bound, words));
    let terms = rule.kind.terms.iter().filter(|term| !term.parts);
    let terms: String =
        terms.filter_map(|term| Some(term.says.replace("{}", &rules::amount(rule.term(term.key)?, words)))).collect();
    let text = format!("{}{terms}", number.unwrap_or_default());
    let text = text.trim_start_matches(", ").trim();
    if text.is_empty() { "asked".into() } else { text.into() }
}

/// The rules of a row that ask at least as much as every other in it; none where they cannot be compared, or all ask the same.
fn strictest<'s>(rules: &[Option<Vec<&'s Rule>>]) -> Vec<&'s Rule> {
    let each: Vec<&Rule> = rules.iter().flatten().flatten().copied().collect();
    let keeps = |rule: &&Rule| each.iter().all(|other| at_least_as_strict(rule, other) == Some(true));
    let strict: Vec<&Rule> = each.iter().copied().filter(keeps).collect();
    let all_the_same = strict.len() == each.len() && rules.iter().all(Option::is_some);
    if each.len() < 2 || all_the_same { Vec::new() } else { strict }
}

/// Every row that a set asks for, in the order of families, each with the rules of each set.
fn rows<'s>(sets: &'s [RuleSet], words: Words) -> Vec<Beside<'s>> {
    let mut keys: Vec<(Row, &Rule)> = Vec::new();
    for family in FAMILIES {
        let of_family = sets.iter().flat_map(|set| &set.rules).filter(|rule| rule.kind.role.family() == family);
        let mut mine: Vec<(Row, &Rule)> = Vec::new();
        for rule in of_family {
            let key = row_of(rule, words);
            if !mine.iter().any(|(known, _)| *known == key) {
                mine.push((key, rule));
            }
        }
        // Rows of one kind stand together, in the order in which the kinds first come.
        let kinds: Vec<&str> = mine.iter().map(|((kind, _, _), _)| *kind).collect();
        mine.sort_by_key(|((kind, _, _), _)| kinds.iter().position(|known| known == kind));
        keys.extend(mine);
    }
    let of_set = |key: &Row, set: &'s RuleSet| {
        let rules: Vec<&Rule> = set.rules.iter().filter(|rule| row_of(rule, words) == *key).collect();
        Some(rules).filter(|rules| !rules.is_empty())
    };
    keys.into_iter().map(|(key, rule)| (rule, sets.iter().map(|set| of_set(&key, set)).collect())).collect()
}

/// Most sets that stand in columns of their own: of more, columns would break words.
const MOST_COLUMNS: usize = 3;

fn beside(sets: &[RuleSet], words: Words) -> Vec<Block> {
    let titles: Vec<&str> = sets.iter().map(|set| set.title.as_str()).collect();
    let rows = rows(sets, words);
    let marks: Vec<Vec<&Rule>> = rows.iter().map(|(_, rules)| strictest(rules)).collect();
    let table = if sets.len() <= MOST_COLUMNS { in_columns } else { one_below_another };
    let mut blocks = vec![Block::Title(format!("Rule sets side by side: {}", list(&titles)))];
    blocks.push(Block::Table(table(sets, &rows, &marks, words)));
    let mut under = Vec::new();
    if marks.iter().any(|marks| !marks.is_empty()) {
        under.push("* the strictest of its row.".to_string());
    }
    under.push(
        "Storms and walls are not ranked: which asks most hangs on the rain and the walls of a roof, and `size` shows it."
            .into(),
    );
    let open = |(row, _): &Beside<'_>, marks: &Vec<&Rule>, several: bool| {
        several && marks.is_empty() && matches!(row.kind.role, Role::Count(_))
    };
    let several = |rules: &[Option<Vec<&Rule>>]| {
        let each: Vec<&Rule> = rules.iter().flatten().flatten().copied().collect();
        each.iter().any(|rule| each.iter().any(|other| at_least_as_strict(rule, other) != Some(true)))
    };
    if rows.iter().zip(&marks).any(|(row, marks)| open(row, marks, several(&row.1))) {
        under.push("A number of devices is not ranked where which asks more hangs on the size of the area.".into());
    }
    if sets.iter().flat_map(|set| &set.rules).any(|rule| rule.known == Known::Recalled) {
        under.push("\u{2021} recalled.".into());
    }
    blocks.push(Block::Text(under.join(" ")));
    blocks.push(Block::Heading("How far to trust them".into()));
    blocks.push(Block::List(trust(&sets.iter().collect::<Vec<_>>())));
    blocks
}

/// What stands behind a rule: that it is recalled, that it is the strictest.
fn mark(rule: &Rule, marks: &[&Rule]) -> String {
    let recalled = if rule.known == Known::Recalled { " \u{2021}" } else { "" };
    let strict = marks.iter().any(|marked| std::ptr::eq(*marked, rule));
    format!("{recalled}{}", if strict { STRICTEST } else { "" })
}

/// Sets side by side, each a column.
fn in_columns(sets: &[RuleSet], rows: &[Beside<'_>], marks: &[Vec<&Rule>], words: Words) -> Table {
    let asks = rows.iter().map(|(rule, _)| row_in_words(rule, words)).collect::<Vec<_>>();
    let mut columns = vec![("asks".to_string(), false, asks)];
    for (place, set) in sets.iter().enumerate() {
        let told = |((_, rules), marks): (&Beside<'_>, &Vec<&Rule>)| match &rules[place] {
            None => "-".to_string(),
            Some(rules) => {
                let one = |rule: &&Rule| format!("{} ({}){}", cell(rule, words), rule.clause, mark(rule, marks));
                // Of several storms the first that can be found counts; of all else each is asked.
                let joined = if matches!(rules[0].kind.role, Role::Rain) { "; or " } else { "; and " };
                rules.iter().map(one).collect::<Vec<_>>().join(joined)
            }
        };
        columns.push((set.title.clone(), false, rows.iter().zip(marks).map(told).collect()));
    }
    Table::of(columns)
}

/// Sets one below another, row by row: those that ask, then the others.
fn one_below_another(sets: &[RuleSet], rows: &[Beside<'_>], marks: &[Vec<&Rule>], words: Words) -> Table {
    let mut lines: Vec<[String; 4]> = Vec::new();
    for ((row, rules), marks) in rows.iter().zip(marks) {
        let mut asks = Some(row_in_words(row, words));
        let mut line = |set: &str, asked: String, clause: &str| {
            lines.push([asks.take().unwrap_or_default(), set.into(), asked, clause.into()]);
        };
        for (set, rules) in sets.iter().zip(rules) {
            for (nth, rule) in rules.iter().flatten().enumerate() {
                let or = match (nth, rule.kind.role) {
                    (0, _) => "",
                    (_, Role::Rain) => "or ",
                    _ => "and ",
                };
                line(&set.title, format!("{or}{}{}", cell(rule, words), mark(rule, marks)), &rule.clause);
            }
        }
        if rules.iter().any(Option::is_none) {
            line("the others", "-".into(), "-");
        }
    }
    let column = |head: &str, place: usize| {
        (head.to_string(), false, lines.iter().map(|line| line[place].clone()).collect::<Vec<_>>())
    };
    Table::of(vec![column("asks", 0), column("rule set", 1), column("number", 2), column("clause", 3)])
}

fn csv(sets: &[RuleSet], words: Words) -> String {
    let terms = every_term();
    let mut head = ["set", "predicate", "asks", "bound", "value", "unit"].map(str::to_string).to_vec();
    head.extend(terms.iter().map(|term| term.field()));
    head.extend(["clause", "source", "known"].map(str::to_string));
    let mut rows = vec![head];
    for set in sets {
        for rule in &set.rules {
            let number = rule.bound.map(|bound| (way(bound), bound.amount().si()));
            let (value, unit) = number.and_then(|(_, si)| si).unzip();
            let mut row = vec![
                set.title.clone(),
                rule.kind.name.into(),
                rules::subject(rule, words),
                number.map_or("", |(way, _)| way).into(),
                value.map_or(String::new(), |value: f64| value.to_string()),
                unit.unwrap_or_default().into(),
            ];
            row.extend(terms.iter().map(|term| match rule.term(term.key) {
                None => String::new(),
                Some(Amount::Yes(yes)) => yes.to_string(),
                Some(Amount::Word(word)) => word.into(),
                Some(amount) => amount.si().map_or(String::new(), |(value, _)| value.to_string()),
            }));
            row.extend([rule.clause.clone(), rule.source.clone(), rule.known.name().into()]);
            rows.push(row);
        }
    }
    written(&rows)
}

fn way(bound: Bound) -> &'static str {
    match bound {
        Bound::AtLeast(_) => "at least",
        Bound::AtMost(_) => "at most",
    }
}

/// Every term that a kind takes, once.
fn every_term() -> Vec<&'static Term> {
    let mut terms: Vec<&Term> = Vec::new();
    for term in KINDS.iter().flat_map(|kind| kind.terms) {
        if !terms.iter().any(|known| known.key == term.key) {
            terms.push(term);
        }
    }
    terms
}

/// The terms of a rule in a document, each under its key with its unit.
struct Terms<'a>(&'a Rule);

impl Serialize for Terms<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut map = serializer.serialize_map(None)?;
        for term in self.0.kind.terms {
            let Some(amount) = self.0.term(term.key) else { continue };
            match (amount, amount.si()) {
                (Amount::Yes(yes), _) => map.serialize_entry(&term.field(), &yes)?,
                (Amount::Word(word), _) => map.serialize_entry(&term.field(), word)?,
                (_, si) => map.serialize_entry(&term.field(), &si.map(|(value, _)| value))?,
            }
        }
        map.end()
    }
}

#[derive(Serialize)]
struct Document<'a> {
    format: &'static str,
    sets: Vec<OfSet<'a>>,
    cautions: Vec<String>,
}

#[derive(Serialize)]
struct OfSet<'a> {
    title: &'a str,
    standard: Option<&'a str>,
    year: Option<u32>,
    note: Option<&'a str>,
    rules: Vec<OfRule<'a>>,
}

#[derive(Serialize)]
struct OfRule<'a> {
    predicate: &'static str,
    asks: String,
    required: Option<rules::OfAmount>,
    terms: Terms<'a>,
    strictest: bool,
    clause: &'a str,
    source: &'a str,
    known: &'static str,
}

fn json(sets: &[RuleSet], words: Words) -> String {
    let rows = rows(sets, words);
    let marks: Vec<&Rule> = rows.iter().flat_map(|(_, rules)| strictest(rules)).collect();
    let of_set = sets.iter().map(|set| OfSet {
        title: &set.title,
        standard: set.standard.as_deref(),
        year: set.year,
        note: set.note.as_deref(),
        rules: set
            .rules
            .iter()
            .map(|rule| OfRule {
                predicate: rule.kind.name,
                asks: rules::says(rule, words),
                required: rule.bound.map(rules::of_bound),
                terms: Terms(rule),
                strictest: marks.iter().any(|marked| std::ptr::eq(*marked, rule)),
                clause: &rule.clause,
                source: &rule.source,
                known: rule.known.name(),
            })
            .collect(),
    });
    let document = Document {
        format: "brimline rules 1",
        sets: of_set.collect(),
        cautions: trust(&sets.iter().collect::<Vec<_>>()),
    };
    let mut text = serde_json::to_string_pretty(&document).unwrap_or_default();
    text.push('\n');
    text
}
