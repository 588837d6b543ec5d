//! Rule sets in words: a rule with its number, what each set makes of an area, and rule by rule the verdict.

use crate::rules::{Amount, Bound, Finding, Rule, RuleAt, RuleSet, Rulebook};
use crate::units::{Area, Length};

use super::words::{self, Words, list, trimmed};

mod document;
mod over;
mod standing;
mod verdicts;

pub(super) use document::over as over_in_document;
pub(super) use document::{
    NamedRule, OfAmount, OfRule, OfSet, Over, named_rule, of_bound, of_layout_in_document, of_sets,
};
pub(super) use over::{ask_freeboard, besides, cautions, credits, drains_in_title, is_own_case, over};
pub(super) use verdicts::blocks;

/// From this length on, lengths are told in feet or metres.
const LONG: Length = Length::from_m(3.0);

/// A rule with its number, its set and its clause, for a sentence: `"set-height" at least 2 in (FM 1-54, 2.5.2)`.
pub(super) fn named(book: &Rulebook, at: RuleAt, words: Words) -> String {
    let (rule, title) = (book.rule(at), &book.sets[at.set].set.title);
    let number = rule.bound.map_or(String::new(), |bound| format!(" {}", asked(bound, words)));
    format!("\"{}\"{number} ({title}, {})", rule.kind.name, rule.clause)
}

/// What a rule asks, in words.
pub(super) fn says(rule: &Rule, words: Words) -> String {
    let bound = rule.bound.map_or(String::new(), |bound| format!(": {}", asked(bound, words)));
    subject(rule, words) + &bound
}

/// What the number of a rule is of.
pub(super) fn subject(rule: &Rule, words: Words) -> String {
    let mut text = rule.kind.says.to_string();
    for term in rule.kind.terms {
        if let Some(value) = rule.term(term.key) {
            text += &term.says.replace("{}", &amount(value, words));
        }
    }
    text
}

/// A number with the way it counts.
pub(super) fn asked(bound: Bound, words: Words) -> String {
    match bound {
        Bound::AtLeast(least) => format!("at least {}", amount(least, words)),
        Bound::AtMost(most) => format!("at most {}", amount(most, words)),
    }
}

/// A number of a rule.
pub(super) fn amount(amount: Amount, words: Words) -> String {
    match amount {
        Amount::Length(length) if length.m().is_infinite() => "without bound".into(),
        Amount::Length(length) if length >= LONG => words.long(length),
        Amount::Length(length) => words.size(length),
        Amount::Area(area) if area < Area::from_m2(1.0) => words.opening(area),
        Amount::Area(area) => words.area(area),
        Amount::Flow(flow) => words.flow(flow),
        Amount::Intensity(intensity) => words.intensity(intensity),
        Amount::Load(load) => words.load(load),
        Amount::Time(time) => words::duration(time),
        Amount::ReturnPeriod(period) => format!("{} years", trimmed(period.years(), 1)),
        Amount::Count(count) => count.to_string(),
        Amount::Times(factor) => format!("{} times", trimmed(factor, 3)),
        Amount::Slope(slope) if words.us() => format!("{} in/ft", trimmed(slope * 12.0, 4)),
        Amount::Slope(slope) => format!("{} %", trimmed(slope * 100.0, 2)),
        Amount::Yes(true) => "yes".into(),
        Amount::Yes(false) => "no".into(),
        Amount::Word(word) => word.into(),
    }
}

/// A rule that is broken, with both its numbers.
pub(super) fn broken(book: &Rulebook, finding: &Finding, words: Words) -> String {
    let (found, required) = (verdicts::found(finding, words), verdicts::required(finding, words));
    let (rule, title) = (book.rule(finding.at), &book.sets[finding.at.set].set.title);
    format!("\"{}\" ({title}, {}): {found}, {required} required", rule.kind.name, rule.clause)
}

/// What no layout of an area keeps together, where rules stand against each other.
pub(super) fn contradiction(book: &Rulebook, conflict: &[RuleAt], words: Words) -> Option<String> {
    let rules: Vec<String> = conflict.iter().map(|&at| named(book, at, words)).collect();
    match &rules[..] {
        [] => None,
        [one] => Some(format!("The rule {one} by itself leaves no layout here.")),
        all => Some(format!("No layout here keeps {} together.", list(all))),
    }
}

/// A set with its standard and year, where its title does not say them.
pub(super) fn titled(set: &RuleSet) -> String {
    let standard = set.standard.as_ref().filter(|standard| !set.title.contains(standard.as_str()));
    let year = set.year.map(|year| year.to_string()).filter(|year| !set.title.contains(year));
    let known: Vec<String> = standard.cloned().into_iter().chain(year).collect();
    if known.is_empty() { set.title.clone() } else { format!("{}, {}", set.title, known.join(" ")) }
}
