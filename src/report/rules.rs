//! Rule sets in words: what each makes of an area, and rule by rule what is found, what is required, and the verdict.

use serde::Serialize;

use crate::roof::layout::{self, Group};
use crate::roof::{Basis, Case, Roof, Situation};
use crate::rules::{
    self, Amount, Applied, Bound, Finding, Known, Open, Required, Role, Rule, RuleAt, Rulebook, Verdict,
};
use crate::search::{Cure, Opening, Options, Placed, Ranked, Relaxation};
use crate::units::{Area, Flow, Length};

use super::page::{Block, Table};
use super::words::{self, Words, list, trimmed};

/// A layout under the name by which a report calls it.
pub(super) type Named<'a, 'r> = (String, &'a Ranked<'r>);

/// From this length on, lengths are told in feet or metres.
const LONG: Length = Length::from_m(3.0);

/// A rule with its clause and its set, for a sentence: `"opening-height" (1502.3 of ...)`.
pub(super) fn named(book: &Rulebook, at: RuleAt) -> String {
    let rule = book.rule(at);
    format!("\"{}\" ({}, {})", rule.kind.name, book.sets[at.set].set.title, rule.clause)
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

/// What the rule sets say of an area and of its layouts, the first `beside` of them side by side; nothing where there are no
/// sets.
pub(super) fn blocks(
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
        let failing: Vec<_> = failing.map(|finding| named(book, finding.at)).collect();
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

/// The groups of a layout as they stand.
fn of_layout<'g>(layout: &Ranked<'g>) -> Vec<Group<'g>> {
    layout.groups.iter().map(|placed: &Placed<'g>| placed.group).collect()
}

/// Each set side by side: its rain, its demand, and how a layout stands under it.
fn bases(roof: &Roof, book: &Rulebook, area: usize, layout: &Named<'_, '_>, words: Words) -> Vec<Block> {
    let stands: Vec<_> = (0..book.sets.len()).map(|set| under(roof, area, set, layout.1)).collect();
    let column = |head: &str, numbers: bool, cell: &dyn Fn(usize) -> String| {
        (head.to_string(), numbers, (0..book.sets.len()).map(cell).collect::<Vec<_>>())
    };
    let basis = |set: usize| &roof.bases[set].areas[area];
    let own = basis_is_projects(roof, book, area);
    let walls = roof.areas[area].wall > Area::ZERO;
    let credited = (0..book.sets.len()).any(|set| basis(set).credited > Flow::ZERO);
    let mut columns = vec![
        column("rule set", false, &|set| book.sets[set].set.title.clone()),
        column("acts", false, &|set| if book.sets[set].binding { "binding".into() } else { "advice".into() }),
        column("rain", true, &|set| {
            format!("{}{}", words.intensity(basis(set).intensity), if own[set] { " *" } else { "" })
        }),
    ];
    if walls {
        columns.push(column("walls", true, &|set| words.area(basis(set).wall)));
    }
    if credited {
        columns.push(column("credited", true, &|set| words.flow(basis(set).credited)));
    }
    columns.extend([
        column("demand", true, &|set| words.flow(basis(set).demand())),
        column("depth", true, &|set| stands[set].depth.map_or("overwhelmed".into(), |depth| words.depth(depth))),
        column("load", true, &|set| stands[set].load.map_or("-".into(), |load| words.load(load))),
        column("util.", true, &|set| trimmed_utilisation(&stands[set])),
    ]);
    let mut blocks =
        vec![Block::Text(format!("What each rule set makes of it, {}:", layout.0)), Block::Table(Table::of(columns))];
    let mut under = Vec::new();
    if own.iter().any(|&own| own) {
        under.push(
            "* The set asks for no rain of its own, or for one that cannot be found: the design rain stands in."
                .to_string(),
        );
    }
    under.push(governs(book, &stands));
    let passed = |set: &usize| stands[*set].utilisation.is_none_or(|used| used > 1.0 + 1e-9);
    let passed: Vec<_> = (0..stands.len()).filter(passed).map(|set| book.sets[set].set.title.as_str()).collect();
    if !passed.is_empty() {
        under.push(format!("Under {} it does not hold its limits.", list(&passed)));
    }
    blocks.push(Block::Text(under.join(" ")));
    blocks
}

/// Whether the rain of each set is the project's, for want of another.
fn basis_is_projects(roof: &Roof, book: &Rulebook, area: usize) -> Vec<bool> {
    let own = |applied: &Applied| {
        let found = |rule: &Rule| {
            matches!(rule.kind.role, Role::Rain) && rules::rain(rule, &roof.storm, &roof.areas[area]).is_ok()
        };
        !applied.set.rules.iter().any(found)
    };
    book.sets.iter().map(own).collect()
}

fn trimmed_utilisation(stands: &Stands) -> String {
    stands.utilisation.map_or("-".into(), |utilisation| format!("{utilisation:.3}"))
}

/// How a layout stands as a set counts it.
struct Stands {
    demand: Flow,
    depth: Option<Length>,
    load: Option<crate::units::Load>,
    utilisation: Option<f64>,
}

fn under(roof: &Roof, area: usize, set: usize, layout: &Ranked<'_>) -> Stands {
    let situation: Situation<'_> = roof.situation_under(area, set);
    let state = layout::state(&of_layout(layout), &situation);
    let utilisation = state.water.map(|water| water.governing.utilisation);
    Stands {
        demand: situation.demand,
        depth: state.water.map(|water| water.depth()),
        load: state.water.map(|water| water.load),
        utilisation: utilisation.filter(|utilisation| utilisation.is_finite()),
    }
}

/// The set under which the most of the limits is used, the first of equals.
fn governing(stands: &[Stands]) -> usize {
    let used = |set: usize| match (stands[set].depth, stands[set].utilisation) {
        (None, _) => f64::INFINITY,
        (_, utilisation) => utilisation.unwrap_or(f64::NEG_INFINITY),
    };
    let worse = |most: usize, set: usize| if used(set) > used(most) + 1e-9 { set } else { most };
    (0..stands.len()).fold(0, worse)
}

fn governs(book: &Rulebook, stands: &[Stands]) -> String {
    let first = governing(stands);
    let same = |set: &usize| {
        (stands[*set].demand.m3_per_s() - stands[first].demand.m3_per_s()).abs()
            <= 1e-9 * stands[first].demand.m3_per_s()
            && stands[*set].utilisation == stands[first].utilisation
    };
    let all: Vec<_> = (0..stands.len()).filter(same).map(|set| book.sets[set].set.title.as_str()).collect();
    match all.len() {
        1 if !book.sets[first].binding => format!("{} asks most, as advice.", all[0]),
        1 => format!("{} governs.", all[0]),
        _ => format!("{} ask alike, and most.", list(&all)),
    }
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
            silent.push(format!("{}: {why}", named(book, finding.at)));
        }
    }
    if !silent.is_empty() {
        blocks.push(Block::Text(format!("Not applicable: {}.", silent.join("; "))));
    }
    let mut open: Vec<String> = Vec::new();
    for finding in of_each.iter().flatten() {
        if let Verdict::CannotTell(what) = finding.verdict {
            let line = format!("{}: not given: {what}.", named(book, finding.at));
            if !open.contains(&line) {
                open.push(line);
            }
        }
    }
    if !open.is_empty() {
        blocks.push(Block::Text("What cannot be told, and what is missing:".into()));
        blocks.push(Block::List(open));
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

/// The mark behind a rule that is known from memory.
const RECALLED: &str = "\u{2021}";

fn mark(rule: &Rule) -> String {
    if rule.known == Known::Recalled { format!(" {RECALLED}") } else { String::new() }
}

fn required(finding: &Finding, words: Words) -> String {
    match finding.required {
        Some(Required::Bound(bound)) => asked(bound, words),
        Some(Required::Is(is)) => amount(is, words),
        None => "-".into(),
    }
}

/// What was found, rounded so that it never seems to keep what it does not.
fn found(finding: &Finding, words: Words) -> String {
    match (finding.found, finding.required) {
        (Some(Amount::Length(length)), Some(Required::Bound(bound))) if length < LONG && length.m().is_finite() => {
            let rounded = match bound {
                Bound::AtLeast(_) => words.depth_down(length),
                Bound::AtMost(_) => words.depth_up(length),
            };
            format!("{rounded} {}", words.small_unit())
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

/// A rule that is broken, with both its numbers.
pub(super) fn broken(book: &Rulebook, finding: &Finding, words: Words) -> String {
    format!("{}: {}, {} required", named(book, finding.at), found(finding, words), required(finding, words))
}

/// What no layout of an area can keep together, where two rules or more stand against each other: any one waived, it has one.
pub(super) fn contradiction(book: &Rulebook, cures: &[Opening<'_>]) -> Option<String> {
    let waived = |(cure, _): &Opening<'_>| waived(cure);
    let rules: Vec<String> = cures.iter().filter_map(waived).map(|at| named(book, at)).collect();
    match &rules[..] {
        [] => None,
        [one] => Some(format!("The rule {one} stands in the way: without it there is a layout.")),
        all => Some(format!("No layout here keeps {} together: without any one of them there is one.", list(all))),
    }
}

fn waived(cure: &Cure) -> Option<RuleAt> {
    match cure.change {
        Relaxation::Rule(at) => Some(at),
        _ => None,
    }
}

/// A verdict in a document.
#[derive(Serialize)]
pub(super) struct OfRule<'a> {
    set: &'a str,
    binding: bool,
    predicate: &'static str,
    asks: String,
    verdict: &'static str,
    /// Why it does not apply, or what is missing.
    #[serde(skip_serializing_if = "Option::is_none")]
    because: Option<&'static str>,
    found: Option<OfAmount>,
    required: Option<OfAmount>,
    clause: &'a str,
    source: &'a str,
    known: &'static str,
}

/// A number with its unit, a word, or yes and no.
#[derive(Serialize)]
pub(super) struct OfAmount {
    #[serde(skip_serializing_if = "Option::is_none")]
    bound: Option<&'static str>,
    value: Value,
    #[serde(skip_serializing_if = "Option::is_none")]
    unit: Option<&'static str>,
}

#[derive(Serialize)]
#[serde(untagged)]
enum Value {
    Number(Option<f64>),
    Yes(bool),
    Word(&'static str),
}

fn of_amount(bound: Option<&'static str>, amount: Amount) -> OfAmount {
    let (value, unit) = match (amount, amount.si()) {
        (Amount::Yes(yes), _) => (Value::Yes(yes), None),
        (Amount::Word(word), _) => (Value::Word(word), None),
        (_, Some((number, unit))) => (Value::Number(Some(number).filter(|number| number.is_finite())), Some(unit)),
        _ => (Value::Number(None), None),
    };
    OfAmount { bound, value, unit }
}

/// A number with the way it counts.
pub(super) fn of_bound(bound: Bound) -> OfAmount {
    match bound {
        Bound::AtLeast(least) => of_amount(Some("at least"), least),
        Bound::AtMost(most) => of_amount(Some("at most"), most),
    }
}

/// Every verdict on a layout; none where there are no rule sets.
pub(super) fn of_layout_in_document<'a>(
    roof: &Roof,
    book: &'a Rulebook,
    area: usize,
    layout: &Ranked<'_>,
) -> Option<Vec<OfRule<'a>>> {
    if book.sets.is_empty() {
        return None;
    }
    let words = Words(roof.system);
    let one = |finding: &Finding| {
        let rule = book.rule(finding.at);
        let applied = &book.sets[finding.at.set];
        let required = finding.required.map(|required| match required {
            Required::Bound(bound) => of_bound(bound),
            Required::Is(is) => of_amount(None, is),
        });
        OfRule {
            set: &applied.set.title,
            binding: applied.binding,
            predicate: rule.kind.name,
            asks: says(rule, words),
            verdict: finding.verdict.name(),
            because: match finding.verdict {
                Verdict::NotApplicable(why) | Verdict::CannotTell(why) => Some(why),
                Verdict::Pass | Verdict::Fail => None,
            },
            found: finding.found.map(|found| of_amount(None, found)),
            required,
            clause: &rule.clause,
            source: &rule.source,
            known: rule.known.name(),
        }
    };
    Some(rules::findings(book, roof, area, &of_layout(layout)).iter().map(one).collect())
}

/// What a set makes of a layout, in a document.
#[derive(Serialize)]
pub(super) struct OfSet<'a> {
    set: &'a str,
    binding: bool,
    governs: bool,
    intensity_m_s: f64,
    walls_m2: f64,
    credited_m3_s: f64,
    demand_m3_s: f64,
    water_depth_m: Option<f64>,
    load_pa: Option<f64>,
    utilisation: Option<f64>,
}

/// What every set makes of a layout; none where there are no rule sets.
pub(super) fn of_sets<'a>(roof: &Roof, book: &'a Rulebook, area: usize, layout: &Ranked<'_>) -> Option<Vec<OfSet<'a>>> {
    if book.sets.is_empty() {
        return None;
    }
    let stands: Vec<_> = (0..book.sets.len()).map(|set| under(roof, area, set, layout)).collect();
    let first = governing(&stands);
    let one = |(set, applied): (usize, &'a Applied)| {
        let basis = &roof.bases[set].areas[area];
        OfSet {
            set: &applied.set.title,
            binding: applied.binding,
            governs: set == first,
            intensity_m_s: basis.intensity.m_per_s(),
            walls_m2: basis.wall.m2(),
            credited_m3_s: basis.credited.m3_per_s(),
            demand_m3_s: basis.demand().m3_per_s(),
            water_depth_m: stands[set].depth.map(Length::m),
            load_pa: stands[set].load.map(crate::units::Load::pa),
            utilisation: stands[set].utilisation,
        }
    };
    Some(book.sets.iter().enumerate().map(one).collect())
}

/// Whether a case is the one that a rule set makes of its own.
pub(super) fn is_own_case(roof: &Roof, case: &Case) -> bool {
    let own = |basis: usize| roof.bases[basis].case.name.as_str();
    case.basis.is_some_and(|basis| case.name == own(basis) || (case.law.is_some() && case.name.starts_with(own(basis))))
}

/// The rule sets over a roof, with the rain that each was found to ask for.
pub(super) fn over(roof: &Roof, options: &Options, words: Words) -> Vec<Block> {
    let book = &options.rules;
    if book.sets.is_empty() {
        return Vec::new();
    }
    let one = |(set, applied): (usize, &Applied)| {
        let acts = if applied.binding { "binding" } else { "advice" };
        format!("{} ({acts}): {}", titled(applied), storms(roof, set, applied, words))
    };
    vec![
        Block::Text("Rule sets over this roof; a binding one restricts the search and makes a case of its own:".into()),
        Block::List(book.sets.iter().enumerate().map(one).collect()),
    ]
}

fn titled(applied: &Applied) -> String {
    let set = &applied.set;
    let standard = set.standard.as_ref().filter(|standard| !set.title.contains(standard.as_str()));
    let year = set.year.filter(|year| !set.title.contains(&year.to_string()));
    let known: Vec<_> = standard.cloned().into_iter().chain(year.map(|year| year.to_string())).collect();
    if known.is_empty() { set.title.clone() } else { format!("{}, {}", set.title, known.join(" ")) }
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
            let table = found.reading.and(roof.storm.rainfall.as_ref());
            let read = table.map_or(String::new(), |table| format!(", read in {}", table.name()));
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
            format!("{} cannot be found, {missing}; the design rain {rain} stands in", says(asks[0], words))
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
pub(super) fn credits(roof: &Roof) -> bool {
    !crediting(roof).is_empty()
}

/// What is assumed of the primary drains, behind the title of a report.
pub(super) fn drains_in_title(roof: &Roof) -> &'static str {
    if credits(roof) { "primary drains credited where a rule set says so" } else { "primary drains blocked" }
}

/// What every reader of a report under rule sets must know.
pub(super) fn cautions(roof: &Roof, options: &Options) -> Vec<String> {
    let book = &options.rules;
    if book.sets.is_empty() {
        return Vec::new();
    }
    let titles: Vec<_> = book.sets.iter().map(|applied| applied.set.title.as_str()).collect();
    let recalled = book.sets.iter().flat_map(|applied| &applied.set.rules).any(|rule| rule.known == Known::Recalled);
    let crediting = crediting(roof);
    let confirm = if recalled { "; rules marked as recalled are from memory" } else { "" };
    let mut lines = vec![format!(
        "{} stand here as files read them, not as the codes themselves: the adopted text and local amendments decide{confirm}.",
        list(&titles)
    )];
    if !crediting.is_empty() {
        lines.push(format!(
            "{} counts the primary drains as working, at the flow given for them: with them blocked the water stands deeper, \
             and a case without that rule set shows how deep.",
            list(&crediting)
        ));
    }
    lines
}
