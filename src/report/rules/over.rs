//! What is said once of all rule sets over a roof: which they are, the rain that each asks for, what they say besides.

use crate::roof::{Basis, Case, Roof};
use crate::rules::{self, Applied, Known, Open, Role, Rule, RuleSet, Rulebook};
use crate::search::Options;
use crate::units::Flow;

use super::super::page::Block;
use super::super::storm;
use super::super::words::{Words, list, trimmed};
use super::{says, titled};

/// Whether a case is the one that a rule set makes of its own.
pub(in crate::report) fn is_own_case(roof: &Roof, case: &Case) -> bool {
    let own = |basis: usize| roof.bases[basis].case.name.as_str();
    case.basis.is_some_and(|basis| case.name == own(basis) || (case.law.is_some() && case.name.starts_with(own(basis))))
}

/// The rule sets over a roof, with the rain that each was found to ask for.
pub(in crate::report) fn over(roof: &Roof, options: &Options, words: Words) -> Vec<Block> {
    let book = &options.rules;
    if book.sets.is_empty() {
        return Vec::new();
    }
    let one = |(set, applied): (usize, &Applied)| {
        let acts = if applied.binding { "binding" } else { "advice" };
        format!("{} ({acts}): {}", titled(&applied.set), storms(roof, set, applied, words))
    };
    vec![
        Block::Text("Rule sets over this roof; a binding one restricts the search and makes a case of its own:".into()),
        Block::List(book.sets.iter().enumerate().map(one).collect()),
    ]
}

/// What the sets say besides: of themselves, of their rules, and where each rule is from.
pub(in crate::report) fn besides(book: &Rulebook) -> Vec<String> {
    book.sets.iter().flat_map(|applied| of_set(&applied.set)).collect()
}

fn of_set(set: &RuleSet) -> Vec<String> {
    let mut sources: Vec<(&str, Vec<String>)> = Vec::new();
    for rule in &set.rules {
        let name = format!("\"{}\"", rule.kind.name);
        match sources.iter_mut().find(|(source, _)| *source == rule.source) {
            Some((_, names)) if names.contains(&name) => {}
            Some((_, names)) => names.push(name),
            None => sources.push((&rule.source, vec![name])),
        }
    }
    let sources: Vec<String> = sources.iter().map(|(source, names)| format!("{}: {source}", list(names))).collect();
    let noted = |rule: &Rule| Some(format!("\"{}\" ({}): {}", rule.kind.name, rule.clause, rule.note.as_ref()?));
    let notes: Vec<String> = set.rules.iter().filter_map(noted).collect();
    let told = |text: String| format!("{}: {text}", set.title);
    let own = set.note.as_ref().map(|note| note.trim().to_string());
    let notes = (!notes.is_empty()).then(|| notes.join(" "));
    let sources = (!sources.is_empty()).then(|| format!("sources of its rules: {}.", sources.join("; ")));
    [own, notes, sources].into_iter().flatten().map(told).collect()
}

/// The rain that a set counts, where it is the same on every area, and where it was found.
fn storms(roof: &Roof, set: usize, applied: &Applied, words: Words) -> String {
    let basis = &roof.bases[set].areas;
    let (mut least, mut most) = (basis[0].intensity, basis[0].intensity);
    for area in basis {
        (least, most) = (least.min(area.intensity), most.max(area.intensity));
    }
    let rain = if least < most {
        format!("{} to {}", words.intensity(least), words.intensity(most))
    } else {
        words.intensity(most)
    };
    let asks = applied.set.rules.iter().filter(|rule| matches!(rule.kind.role, Role::Rain));
    let asks: Vec<&Rule> = asks.collect();
    if asks.is_empty() {
        return format!("no storm of its own, the design rain {rain}");
    }
    let found = |rule: &&Rule| rules::rain(rule, &roof.storm, &roof.areas[0]);
    let counted = asks.iter().find_map(|rule| found(rule).ok().map(|rain| (rule, rain)));
    match counted {
        Some((rule, found)) => {
            let read = found.reading.as_ref().zip(roof.storm.rainfall.as_ref());
            let read = read.map_or(String::new(), |(reading, table)| format!(", {}", storm::read_in(reading, table)));
            let climate = if (roof.storm.climate - 1.0).abs() > 1e-12 && found.reading.is_some() {
                format!(", times {} for climate", trimmed(roof.storm.climate, 3))
            } else {
                String::new()
            };
            format!("{}: {rain}{read}{climate}", says(rule, words))
        }
        None => {
            let missing = found(&asks[0]).err().map_or("", |open| match open {
                Open::Missing(what) | Open::NotApplicable(what) => what,
            });
            format!(
                "{}, which wants {missing}; the design rain {rain} stands in, and what the set says of water cannot be told",
                says(asks[0], words)
            )
        }
    }
}

/// The sets by which a case of the roof counts primary drains as working.
fn crediting(roof: &Roof) -> Vec<&str> {
    let counts = |(basis, given): &(usize, &Basis)| {
        let credits = given.areas.iter().any(|area| area.credited > Flow::ZERO);
        credits && roof.cases.iter().any(|case| case.basis == Some(*basis))
    };
    roof.bases.iter().enumerate().filter(counts).map(|(_, basis)| basis.case.name.as_str()).collect()
}

/// Whether a case counts primary drains as working.
pub(in crate::report) fn credits(roof: &Roof) -> bool {
    !crediting(roof).is_empty()
}

/// Whether a case asks for freeboard by a rule set.
pub(in crate::report) fn ask_freeboard(roof: &Roof) -> bool {
    let asks = |basis: usize| roof.bases[basis].areas.iter().any(|area| area.freeboard.is_some());
    roof.cases.iter().filter_map(|case| case.basis).any(asks)
}

/// What is assumed of the primary drains, behind the title of a report.
pub(in crate::report) fn drains_in_title(roof: &Roof) -> &'static str {
    if credits(roof) { "primary drains credited where a rule set says so" } else { "primary drains blocked" }
}

/// What every reader of a report under rule sets must know.
pub(in crate::report) fn cautions(roof: &Roof, options: &Options) -> Vec<String> {
    let book = &options.rules;
    if book.sets.is_empty() {
        return Vec::new();
    }
    let titles: Vec<_> = book.sets.iter().map(|applied| applied.set.title.as_str()).collect();
    let recalled = book.sets.iter().flat_map(|applied| &applied.set.rules).any(|rule| rule.known == Known::Recalled);
    let crediting = crediting(roof);
    let confirm = if recalled { "; rules marked as recalled are from memory" } else { "" };
    let mut lines = vec![format!(
        "{} {} here as a file reads it, not as the code itself: the adopted text and local amendments decide{confirm}.",
        list(&titles),
        if titles.len() == 1 { "stands" } else { "each stand" }
    )];
    let unknown = |set: &usize| roof.bases[*set].areas.iter().any(|area| area.stands_in.is_some());
    let unknown: Vec<_> = (0..book.sets.len()).filter(unknown).map(|set| book.sets[set].set.title.as_str()).collect();
    if !unknown.is_empty() {
        lines.push(format!(
            "The demand by {} is not known everywhere, and something else stands in for it: that a layout holds there proves \
             nothing. Give what the verdicts say is missing.",
            list(&unknown)
        ));
    }
    if !crediting.is_empty() {
        lines.push(format!(
            "{} counts the primary drains as working, at the flow given for them: with them blocked the water stands deeper, \
             and a case without that rule set shows how deep.",
            list(&crediting)
        ));
    }
    lines
}
