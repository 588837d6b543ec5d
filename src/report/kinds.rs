//! The report of `rules` without a file: what a rule can ask, in which words, and the sets that come with the program.

use serde::Serialize;

use crate::rules::{KINDS, Kind, Known, RuleSet, Takes, Term};

use super::page::{self, Block, Table};
use super::{Format, written};

/// Sets by the names that a project gives.
type Sets = [(String, RuleSet)];

pub(super) fn write(sets: &Sets, format: Format, width: usize) -> String {
    match format {
        Format::Table => page::text(&blocks(sets), width),
        Format::Markdown => page::markdown(&blocks(sets)),
        Format::Csv => csv(sets),
        Format::Json => json(sets),
    }
}

fn blocks(sets: &Sets) -> Vec<Block> {
    let of_kinds = |head: &str, cell: fn(&Kind) -> String| {
        (head.to_string(), false, KINDS.iter().map(|kind| cell(kind)).collect::<Vec<_>>())
    };
    let of_sets = |head: &str, numbers: bool, cell: &dyn Fn(&str, &RuleSet) -> String| {
        (head.to_string(), numbers, sets.iter().map(|(name, set)| cell(name, set)).collect::<Vec<_>>())
    };
    vec![
        Block::Title("Rules".into()),
        Block::Text("What a rule can ask; what stands in brackets may be left out:".into()),
        Block::Table(Table::of(vec![
            of_kinds("asks", |kind| kind.name.into()),
            of_kinds("in words", in_words),
            of_kinds("number", |kind| number(kind).unwrap_or_else(|| "-".into())),
            of_kinds("also takes", |kind| {
                if kind.terms.is_empty() { "-".into() } else { each(kind.terms, bracketed).join("; ") }
            }),
        ])),
        Block::Text(
            "Every rule has a `clause`, a `source` and `known`, which is \"read\" or \"recalled\"; it may have a `note`. \
             `brimline start FILE --rules` writes a set with all of them to fill in."
                .into(),
        ),
        Block::Text("Sets that come with the program; `brimline rules NAME` reads one aloud:".into()),
        Block::Table(Table::of(vec![
            of_sets("name", false, &|name, _| name.into()),
            of_sets("title", false, &|_, set| set.title.clone()),
            of_sets("standard", false, &|_, set| set.standard.clone().unwrap_or_else(|| "-".into())),
            of_sets("year", true, &|_, set| set.year.map_or("-".into(), |year| year.to_string())),
            of_sets("rules", true, &|_, set| set.rules.len().to_string()),
            of_sets("recalled", true, &|_, set| recalled(set).to_string()),
        ])),
        Block::Text("What is recalled is from memory: confirm against the adopted text.".into()),
    ]
}

/// What a kind asks, in words, with what it must be told.
fn in_words(kind: &Kind) -> String {
    let needed = kind.terms.iter().filter(|term| term.needed && matches!(term.takes, Takes::Word(_)));
    let told: String = needed.map(|term| term.says.replace("{}", "..")).collect();
    if told.is_empty() { kind.says.trim_end_matches(':').into() } else { format!("{}{told}", kind.says) }
}

/// Which way the number of a kind counts, and what it is.
fn number(kind: &Kind) -> Option<String> {
    let keys = kind.bounds.keys();
    (!keys.is_empty()).then(|| format!("{}: a {}", keys.join(" or "), kind.number.name()))
}

fn each(terms: &[Term], told: impl Fn(&Term) -> String) -> Vec<String> {
    terms.iter().map(told).collect()
}

/// A term with what may stand under it.
fn told(term: &Term) -> String {
    let may = term.takes.examples();
    match &may[..] {
        [rest @ .., last] if !rest.is_empty() => format!("{} = {} or {last}", term.key, rest.join(", ")),
        _ => format!("{} = {}", term.key, may.concat()),
    }
}

fn bracketed(term: &Term) -> String {
    if term.needed { told(term) } else { format!("[{}]", told(term)) }
}

fn recalled(set: &RuleSet) -> usize {
    set.rules.iter().filter(|rule| rule.known == Known::Recalled).count()
}

fn csv(sets: &Sets) -> String {
    let head = ["what", "name", "asks", "number", "takes", "title", "standard", "year", "rules", "recalled"];
    let none = String::new;
    let mut rows = vec![head.map(str::to_string).to_vec()];
    for kind in KINDS {
        let takes = each(kind.terms, bracketed).join("; ");
        let own = ["kind".into(), kind.name.into(), in_words(kind), number(kind).unwrap_or_default(), takes];
        rows.push(own.into_iter().chain([none(), none(), none(), none(), none()]).collect());
    }
    for (name, set) in sets {
        rows.push(vec![
            "set".into(),
            name.clone(),
            none(),
            none(),
            none(),
            set.title.clone(),
            set.standard.clone().unwrap_or_default(),
            set.year.map_or(none(), |year| year.to_string()),
            set.rules.len().to_string(),
            recalled(set).to_string(),
        ]);
    }
    written(&rows)
}

#[derive(Serialize)]
struct Document<'a> {
    format: &'static str,
    kinds: Vec<OfKind>,
    sets: Vec<OfSet<'a>>,
}

#[derive(Serialize)]
struct OfKind {
    predicate: &'static str,
    asks: String,
    bounds: &'static [&'static str],
    #[serde(skip_serializing_if = "Option::is_none")]
    number: Option<&'static str>,
    takes: Vec<OfTerm>,
}

#[derive(Serialize)]
struct OfTerm {
    key: &'static str,
    /// Its key in documents about a set.
    field: String,
    needed: bool,
    takes: &'static str,
    #[serde(skip_serializing_if = "Option::is_none")]
    words: Option<&'static [&'static str]>,
}

#[derive(Serialize)]
struct OfSet<'a> {
    name: &'a str,
    title: &'a str,
    standard: Option<&'a str>,
    year: Option<u32>,
    rules: usize,
    recalled: usize,
}

fn json(sets: &Sets) -> String {
    let of_kind = |kind: &&'static Kind| OfKind {
        predicate: kind.name,
        asks: in_words(kind),
        bounds: kind.bounds.keys(),
        number: (!kind.bounds.keys().is_empty()).then(|| kind.number.name()),
        takes: kind
            .terms
            .iter()
            .map(|term| OfTerm {
                key: term.key,
                field: term.field(),
                needed: term.needed,
                takes: term.takes.name(),
                words: match term.takes {
                    Takes::Word(words) => Some(words),
                    _ => None,
                },
            })
            .collect(),
    };
    let sets = sets.iter().map(|(name, set)| OfSet {
        name,
        title: &set.title,
        standard: set.standard.as_deref(),
        year: set.year,
        rules: set.rules.len(),
        recalled: recalled(set),
    });
    let document =
        Document { format: "brimline rule kinds 1", kinds: KINDS.iter().map(of_kind).collect(), sets: sets.collect() };
    let mut text = serde_json::to_string_pretty(&document).unwrap_or_default();
    text.push('\n');
    text
}
