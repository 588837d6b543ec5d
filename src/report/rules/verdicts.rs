//! Rule sets side by side over a layout, and rule by rule what is required, what is found, and the verdict.

use crate::roof::Roof;
use crate::rules::{self, Amount, Applied, Bound, Finding, Known, Required, Role, Rule, Rulebook, Verdict};
use crate::search::{Options, Ranked};
use crate::units::{Area, Flow};

use super::super::page::{Block, Table};
use super::super::words::{Words, list};
use super::standing::{Stands, governing, of_layout, under};
use super::{LONG, amount, asked, named, subject};

/// A layout under the name by which a report calls it.
pub(in crate::report) type Named<'a, 'r> = (String, &'a Ranked<'r>);

/// The mark behind a rule that is known from memory.
const RECALLED: &str = "\u{2021}";

/// What the rule sets say of an area and of its layouts, the first `beside` of them side by side; nothing where there are no
/// sets.
pub(in crate::report) fn blocks(
    roof: &Roof,
    options: &Options,
    area: usize,
    layouts: &[Named<'_, '_>],
    beside: usize,
    words: Words,
) -> Vec<Block> {
    let book = &options.rules;
    if book.sets.is_empty() || layouts.is_empty() {
        return Vec::new();
    }
    let shown = &layouts[..layouts.len().min(beside)];
    let mut blocks = Vec::new();
    for layout in shown {
        blocks.extend(bases(roof, book, area, layout, words));
    }
    blocks.extend(verdicts(roof, book, area, shown, words));
    let others = &layouts[shown.len()..];
    let breaks = |(name, layout): &Named<'_, '_>| {
        let findings = rules::findings(book, roof, area, &of_layout(layout));
        let failing = findings.iter().filter(|finding| finding.verdict == Verdict::Fail);
        let failing: Vec<_> = failing.map(|finding| named(book, finding.at, words)).collect();
        (!failing.is_empty()).then(|| format!("{name} breaks {}", list(&failing)))
    };
    let breaking: Vec<String> = others.iter().filter_map(breaks).collect();
    if breaking.is_empty() && !others.is_empty() {
        blocks.push(Block::Text("The other layouts break no rule.".into()));
    } else if !breaking.is_empty() {
        blocks.push(Block::Text("Of the other layouts:".into()));
        blocks.push(Block::List(breaking));
    }
    blocks
}

/// Each set side by side: its rain, its demand, and how a layout stands under it.
fn bases(roof: &Roof, book: &Rulebook, area: usize, layout: &Named<'_, '_>, words: Words) -> Vec<Block> {
    let stands: Vec<_> = (0..book.sets.len()).map(|set| under(roof, area, set, layout.1)).collect();
    let column = |head: &str, numbers: bool, cell: &dyn Fn(usize) -> String| {
        (head.to_string(), numbers, (0..book.sets.len()).map(cell).collect::<Vec<_>>())
    };
    let basis = |set: usize| &roof.bases[set].areas[area];
    let rain: Vec<&str> = book.sets.iter().map(|applied| mark_of_rain(roof, area, applied)).collect();
    let doubt = |set: usize| if stands[set].unknown.is_some() { " ?" } else { "" };
    let walls = roof.areas[area].wall > Area::ZERO;
    let credited = (0..book.sets.len()).any(|set| basis(set).credited > Flow::ZERO);
    let mut columns = vec![
        column("rule set", false, &|set| book.sets[set].set.title.clone()),
        column("acts", false, &|set| if book.sets[set].binding { "binding".into() } else { "advice".into() }),
        column("rain", true, &|set| format!("{}{}", words.intensity(basis(set).intensity), rain[set])),
    ];
    if walls {
        columns.push(column("walls", true, &|set| words.area(basis(set).wall)));
    }
    if credited {
        columns.push(column("credited", true, &|set| words.flow(basis(set).credited)));
    }
    columns.extend([
        column("demand", true, &|set| format!("{}{}", words.flow(basis(set).demand()), doubt(set))),
        column("depth", true, &|set| stands[set].depth.map_or("overwhelmed".into(), |depth| words.depth(depth))),
        column("load", true, &|set| stands[set].load.map_or("-".into(), |load| words.load(load))),
        column("util.", true, &|set| trimmed_utilisation(&stands[set])),
    ]);
    let mut blocks =
        vec![Block::Text(format!("What each rule set makes of it, {}:", layout.0)), Block::Table(Table::of(columns))];
    let mut under = Vec::new();
    if rain.contains(&" *") {
        under.push("* The set asks for no rain of its own: the design rain counts.".to_string());
    }
    if stands.iter().any(|stands| stands.unknown.is_some()) {
        under.push("? Not known, for want of what stands below: something else stands in.".into());
    }
    under.push(governs(book, &stands));
    let passed =
        |set: &usize| stands[*set].unknown.is_none() && stands[*set].utilisation.is_none_or(|used| used > 1.0 + 1e-9);
    let passed: Vec<_> = (0..stands.len()).filter(passed).map(|set| book.sets[set].set.title.as_str()).collect();
    if !passed.is_empty() {
        under.push(format!("Under {} it does not hold its limits.", list(&passed)));
    }
    blocks.push(Block::Text(under.join(" ")));
    blocks
}

/// How the rain of a set is marked: that it is the project's, for the set asks for none, or stands in for one not known.
fn mark_of_rain(roof: &Roof, area: usize, applied: &Applied) -> &'static str {
    let mut asked = applied.set.rules.iter().filter(|rule| matches!(rule.kind.role, Role::Rain)).peekable();
    if asked.peek().is_none() {
        return " *";
    }
    if asked.any(|rule| rules::rain(rule, &roof.storm, &roof.areas[area]).is_ok()) { "" } else { " ?" }
}

fn trimmed_utilisation(stands: &Stands) -> String {
    stands.utilisation.map_or("-".into(), |utilisation| format!("{utilisation:.3}"))
}

/// Which set asks most; of those whose demand is not known, that it cannot be told.
fn governs(book: &Rulebook, stands: &[Stands]) -> String {
    let title = |set: usize| book.sets[set].set.title.as_str();
    let unknown = |set: &usize| stands[*set].unknown.is_some();
    let unknown: Vec<_> = (0..stands.len()).filter(unknown).map(title).collect();
    let unknown =
        if unknown.is_empty() { String::new() } else { format!("What {} makes of it cannot be told.", list(&unknown)) };
    let Some(first) = governing(stands) else { return unknown };
    let same = |set: &usize| {
        (stands[*set].demand.m3_per_s() - stands[first].demand.m3_per_s()).abs()
            <= 1e-9 * stands[first].demand.m3_per_s()
            && stands[*set].utilisation == stands[first].utilisation
    };
    let known = |set: &usize| stands[*set].unknown.is_none();
    let all: Vec<_> = (0..stands.len()).filter(known).filter(same).map(title).collect();
    let most = match all.len() {
        1 if !book.sets[first].binding => format!("{} asks most, as advice.", all[0]),
        1 => format!("{} governs.", all[0]),
        _ => format!("{} ask alike, and most.", list(&all)),
    };
    format!("{most} {unknown}").trim_end().to_string()
}

/// Rule by rule, layouts side by side.
fn verdicts(roof: &Roof, book: &Rulebook, area: usize, layouts: &[Named<'_, '_>], words: Words) -> Vec<Block> {
    let of_each: Vec<Vec<Finding>> =
        layouts.iter().map(|(_, layout)| rules::findings(book, roof, area, &of_layout(layout))).collect();
    let speaks =
        |row: &usize| of_each.iter().any(|findings| !matches!(findings[*row].verdict, Verdict::NotApplicable(_)));
    let (rows, silent): (Vec<usize>, Vec<usize>) = (0..of_each[0].len()).partition(speaks);
    let of_each: Vec<Vec<Finding>> =
        of_each.iter().map(|findings| rows.iter().chain(&silent).map(|&row| findings[row]).collect()).collect();
    let all = &of_each[0][..rows.len()];
    let column = |head: &str, cell: &dyn Fn(usize) -> String| {
        (head.to_string(), false, (0..all.len()).map(cell).collect::<Vec<_>>())
    };
    let rule = |row: usize| book.rule(all[row].at);
    let first_of_set = |row: usize| row == 0 || all[row - 1].at.set != all[row].at.set;
    let of = |row: usize, cell: &dyn Fn(&Finding) -> String| {
        let cells: Vec<String> = of_each.iter().map(|findings| cell(&findings[row])).collect();
        if cells.iter().all(|cell| *cell == cells[0]) { cells[0].clone() } else { cells.join(" / ") }
    };
    let columns = vec![
        column("rule set", &|row| {
            if first_of_set(row) { book.sets[all[row].at.set].set.title.clone() } else { String::new() }
        }),
        column("clause", &|row| rule(row).clause.clone()),
        column("rule", &|row| format!("{}{}", on_area(roof, area, rule(row), words), mark(rule(row)))),
        column("required", &|row| of(row, &|finding| required(finding, words))),
        column("found", &|row| of(row, &|finding| found(finding, words))),
        column("verdict", &|row| of(row, &verdict)),
    ];
    let names: Vec<&str> = layouts.iter().map(|(name, _)| name.as_str()).collect();
    let several = if names.len() > 1 { ", in this order where they differ" } else { "" };
    let mut blocks =
        vec![Block::Text(format!("Rule by rule, {}{several}:", list(&names))), Block::Table(Table::of(columns))];
    let mut silent: Vec<String> = Vec::new();
    for finding in &of_each[0][rows.len()..] {
        if let Verdict::NotApplicable(why) = finding.verdict {
            silent.push(format!("{}: {why}", named(book, finding.at, words)));
        }
    }
    if !silent.is_empty() {
        blocks.push(Block::Text(format!("Not applicable: {}.", silent.join("; "))));
    }
    let mut open: Vec<(&str, Vec<String>)> = Vec::new();
    let mut binds = false;
    for finding in of_each.iter().flatten() {
        let Verdict::CannotTell(what) = finding.verdict else { continue };
        binds |= book.sets[finding.at.set].binding;
        let rule = named(book, finding.at, words);
        match open.iter_mut().find(|(known, _)| *known == what) {
            Some((_, rules)) if rules.contains(&rule) => {}
            Some((_, rules)) => rules.push(rule),
            None => open.push((what, vec![rule])),
        }
    }
    if !open.is_empty() {
        let until = if binds { " Until it is given no layout is shown to keep every binding rule." } else { "" };
        blocks.push(Block::Text(format!("What is missing, and what cannot be told for want of it.{until}")));
        let wants = |rules: &[String]| if rules.len() == 1 { "wants" } else { "want" };
        let line = |(what, rules): &(&str, Vec<String>)| format!("{} {} {what}.", list(rules), wants(rules));
        blocks.push(Block::List(open.iter().map(line).collect()));
    }
    if of_each[0].iter().any(|finding| book.rule(finding.at).known == Known::Recalled) {
        blocks.push(Block::Text(format!("{RECALLED} recalled: confirm against the adopted text.")));
    }
    blocks
}

/// What a rule asks of an area: of its storms only that of its risk category.
fn on_area(roof: &Roof, area: usize, rule: &Rule, words: Words) -> String {
    let period = rules::return_period(rule, &roof.areas[area]);
    match (rule.kind.role, period) {
        (Role::Rain, Ok(period)) if rule.term("duration").is_some() => {
            let asked = rule.term("duration").map_or(String::new(), |duration| amount(duration, words));
            let times = rule.term("times").map_or(String::new(), |times| format!(", {}", amount(times, words)));
            format!("rain of {asked} once in {}{times}", amount(Amount::ReturnPeriod(period), words))
        }
        _ => subject(rule, words),
    }
}

fn mark(rule: &Rule) -> String {
    if rule.known == Known::Recalled { format!(" {RECALLED}") } else { String::new() }
}

pub(super) fn required(finding: &Finding, words: Words) -> String {
    match finding.required {
        Some(Required::Bound(bound)) => asked(bound, words),
        Some(Required::Is(is)) => amount(is, words),
        None => "-".into(),
    }
}

/// What was found, rounded so that it never seems to keep what it does not.
pub(super) fn found(finding: &Finding, words: Words) -> String {
    match (finding.found, finding.required) {
        (Some(Amount::Length(length)), Some(Required::Bound(bound))) if length < LONG && length.m().is_finite() => {
            // The nearest figure, as elsewhere on the page, unless that lies on the other side of the number.
            let away = match bound {
                Bound::AtLeast(_) => words.depth_down(length),
                Bound::AtMost(_) => words.depth_up(length),
            };
            let required = match bound.amount() {
                Amount::Length(required) => words.depth_near(required),
                _ => String::new(),
            };
            let nearest = words.depth_near(length);
            let figure = if nearest == required { away } else { nearest };
            format!("{figure} {}", words.small_unit())
        }
        (Some(found), _) => amount(found, words),
        (None, _) => "-".into(),
    }
}

fn verdict(finding: &Finding) -> String {
    match finding.verdict {
        Verdict::Pass => "pass".into(),
        Verdict::Fail => "FAIL".into(),
        Verdict::NotApplicable(why) => format!("n/a: {why}"),
        Verdict::CannotTell(_) => "cannot tell".into(),
    }
}
