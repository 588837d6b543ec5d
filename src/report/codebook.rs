//! The report of `rules`: a rule set read aloud, or several side by side.

use serde::Serialize;

use crate::rules::{Amount, Bound, Family, Known, Rule, RuleSet};
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
    let mut blocks = vec![Block::Title(titled(set))];
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

fn titled(set: &RuleSet) -> String {
    let standard = set.standard.as_ref().filter(|standard| !set.title.contains(standard.as_str()));
    let year = set.year.map(|year| year.to_string()).filter(|year| !set.title.contains(year));
    let known: Vec<String> = standard.cloned().into_iter().chain(year).collect();
    if known.is_empty() { set.title.clone() } else { format!("{} ({})", set.title, known.join(", ")) }
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

/// Which of the rules of a row is the strictest, by their number; all of the strictest where they are equal, none where they
/// cannot be compared or are all equal.
fn strictest(rules: &[Option<Vec<&Rule>>]) -> Vec<bool> {
    let none = vec![false; rules.len()];
    let each: Vec<&Rule> = rules.iter().flatten().flatten().copied().collect();
    let beside = |rule: &Rule| rule.kind.terms.iter().any(|term| !term.parts && rule.term(term.key).is_some());
    let bounds: Option<Vec<Bound>> = each.iter().map(|rule| rule.bound.filter(|_| !beside(rule))).collect();
    let Some(bounds) = bounds.filter(|bounds| bounds.len() > 1) else { return none };
    // The strictest keeps what every other asks.
    let keeps_all = |amount: Amount| bounds.iter().all(|bound| bound.holds(amount));
    let strict = |rules: &Option<Vec<&Rule>>| {
        rules.iter().flatten().any(|rule| rule.bound.is_some_and(|bound| keeps_all(bound.amount())))
    };
    let marks: Vec<bool> = rules.iter().map(strict).collect();
    let all_asked = rules.iter().zip(&marks).all(|(rules, mark)| rules.is_none() || *mark);
    if all_asked && rules.iter().all(Option::is_some) { none } else { marks }
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

fn beside(sets: &[RuleSet], words: Words) -> Vec<Block> {
    let titles: Vec<&str> = sets.iter().map(|set| set.title.as_str()).collect();
    let rows = rows(sets, words);
    let mut columns =
        vec![("asks".to_string(), false, rows.iter().map(|(rule, _)| row_in_words(rule, words)).collect::<Vec<_>>())];
    let marks: Vec<Vec<bool>> = rows.iter().map(|(_, rules)| strictest(rules)).collect();
    for (place, set) in sets.iter().enumerate() {
        let told = |(row, (_, rules)): (usize, &Beside<'_>)| match &rules[place] {
            None => "-".to_string(),
            Some(rules) => {
                let one = |rule: &&Rule| {
                    let recalled = if rule.known == Known::Recalled { " \u{2021}" } else { "" };
                    format!("{} ({}){recalled}", cell(rule, words), rule.clause)
                };
                let mark = if marks[row][place] { STRICTEST } else { "" };
                format!("{}{mark}", rules.iter().map(one).collect::<Vec<_>>().join("; or "))
            }
        };
        columns.push((set.title.clone(), false, rows.iter().enumerate().map(told).collect()));
    }
    let mut blocks = vec![Block::Title(format!("Rule sets side by side: {}", list(&titles)))];
    blocks.push(Block::Table(Table::of(columns)));
    let mut under = Vec::new();
    if marks.iter().flatten().any(|&mark| mark) {
        under.push("* the strictest of its row.".to_string());
    }
    under.push(
        "Storms and walls are not ranked: which asks most hangs on the rain and the walls of a roof, and `size` shows it."
            .into(),
    );
    if sets.iter().flat_map(|set| &set.rules).any(|rule| rule.known == Known::Recalled) {
        under.push("\u{2021} recalled.".into());
    }
    blocks.push(Block::Text(under.join(" ")));
    blocks.push(Block::Heading("How far to trust them".into()));
    blocks.push(Block::List(trust(&sets.iter().collect::<Vec<_>>())));
    blocks
}

fn csv(sets: &[RuleSet], words: Words) -> String {
    let mut rows =
        vec![["set", "predicate", "asks", "number", "clause", "source", "known"].map(str::to_string).to_vec()];
    for set in sets {
        for rule in &set.rules {
            rows.push(vec![
                set.title.clone(),
                rule.kind.name.into(),
                rules::subject(rule, words),
                rule.bound.map_or(String::new(), |bound| rules::asked(bound, words)),
                rule.clause.clone(),
                rule.source.clone(),
                rule.known.name().into(),
            ]);
        }
    }
    written(&rows)
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
    strictest: bool,
    clause: &'a str,
    source: &'a str,
    known: &'static str,
}

fn json(sets: &[RuleSet], words: Words) -> String {
    let rows = rows(sets, words);
    let marks: Vec<Vec<bool>> = rows.iter().map(|(_, rules)| strictest(rules)).collect();
    let marked = |place: usize, rule: &Rule| {
        let has = |(_, rules): &Beside<'_>| rules[place].iter().flatten().any(|known| std::ptr::eq(*known, rule));
        rows.iter().zip(&marks).any(|(row, marks)| marks[place] && has(row))
    };
    let of_set = |(place, set): (usize, &'_ RuleSet)| OfSet {
        title: &sets[place].title,
        standard: sets[place].standard.as_deref(),
        year: set.year,
        note: sets[place].note.as_deref(),
        rules: sets[place]
            .rules
            .iter()
            .map(|rule| OfRule {
                predicate: rule.kind.name,
                asks: rules::says(rule, words),
                required: rule.bound.map(rules::of_bound),
                strictest: marked(place, rule),
                clause: &rule.clause,
                source: &rule.source,
                known: rule.known.name(),
            })
            .collect(),
    };
    let document = Document {
        format: "brimline rules 1",
        sets: sets.iter().enumerate().map(of_set).collect(),
        cautions: trust(&sets.iter().collect::<Vec<_>>()),
    };
    let mut text = serde_json::to_string_pretty(&document).unwrap_or_default();
    text.push('\n');
    text
}
