//! What rule sets make of a layout, and their verdicts, in JSON.

use serde::Serialize;

use crate::roof::Roof;
use crate::rules::{self, Amount, Applied, Bound, Finding, Required, Role, Rule, RuleAt, Rulebook, Verdict};
use crate::search::Ranked;
use crate::units::{Length, Load, ReturnPeriod};

use super::super::storm;
use super::super::words::Words;
use super::says;
use super::standing::{governing, of_layout, under};

/// A verdict in a document.
#[derive(Serialize)]
pub(in crate::report) struct OfRule<'a> {
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
pub(in crate::report) struct OfAmount {
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
pub(in crate::report) fn of_bound(bound: Bound) -> OfAmount {
    match bound {
        Bound::AtLeast(least) => of_amount(Some("at least"), least),
        Bound::AtMost(most) => of_amount(Some("at most"), most),
    }
}

/// Every verdict on a layout; none where there are no rule sets.
pub(in crate::report) fn of_layout_in_document<'a>(
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
pub(in crate::report) struct OfSet<'a> {
    set: &'a str,
    binding: bool,
    governs: bool,
    /// What is not given, where something stands in for the demand of the set.
    #[serde(skip_serializing_if = "Option::is_none")]
    stands_in_for: Option<&'static str>,
    intensity_m_s: f64,
    walls_m2: f64,
    credited_m3_s: f64,
    demand_m3_s: f64,
    water_depth_m: Option<f64>,
    load_pa: Option<f64>,
    utilisation: Option<f64>,
}

/// What every set makes of a layout; none where there are no rule sets.
pub(in crate::report) fn of_sets<'a>(
    roof: &Roof,
    book: &'a Rulebook,
    area: usize,
    layout: &Ranked<'_>,
) -> Option<Vec<OfSet<'a>>> {
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
            governs: first == Some(set),
            stands_in_for: basis.stands_in.map(|stands_in| stands_in.missing),
            intensity_m_s: basis.intensity.m_per_s(),
            walls_m2: basis.wall.m2(),
            credited_m3_s: basis.credited.m3_per_s(),
            demand_m3_s: basis.demand().m3_per_s(),
            water_depth_m: stands[set].depth.map(Length::m),
            load_pa: stands[set].load.map(Load::pa),
            utilisation: stands[set].utilisation,
        }
    };
    Some(book.sets.iter().enumerate().map(one).collect())
}

/// A rule set over the roof, in a document.
#[derive(Serialize)]
pub(in crate::report) struct Over<'a> {
    title: &'a str,
    standard: Option<&'a str>,
    year: Option<u32>,
    binding: bool,
    note: Option<&'a str>,
    /// The rain that it asks for, where that can be found.
    #[serde(skip_serializing_if = "Option::is_none")]
    storm: Option<Asked<'a>>,
}

/// The rain of a set; of areas in unlike risk categories that of the first.
#[derive(Serialize)]
struct Asked<'a> {
    intensity_m_s: f64,
    #[serde(skip_serializing_if = "Option::is_none")]
    duration_s: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    return_period_yr: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    read: Option<storm::Read<'a>>,
}

/// The rule sets over a roof.
pub(in crate::report) fn over<'a>(roof: &'a Roof, book: &'a Rulebook) -> Vec<Over<'a>> {
    let asked = |rule: &Rule| {
        let found = rules::rain(rule, &roof.storm, &roof.areas[0]).ok()?;
        let duration_s = match rule.term("duration") {
            Some(Amount::Time(duration)) => Some(duration.s()),
            _ => None,
        };
        let period = rules::return_period(rule, &roof.areas[0]).ok().filter(|_| duration_s.is_some());
        Some(Asked {
            intensity_m_s: found.intensity.m_per_s(),
            duration_s,
            return_period_yr: period.map(ReturnPeriod::years),
            read: storm::read(&roof.storm, found.reading.as_ref()),
        })
    };
    let one = |applied: &'a Applied| Over {
        title: &applied.set.title,
        standard: applied.set.standard.as_deref(),
        year: applied.set.year,
        binding: applied.binding,
        note: applied.set.note.as_deref().map(str::trim),
        storm: applied.set.rules.iter().filter(|rule| matches!(rule.kind.role, Role::Rain)).find_map(asked),
    };
    book.sets.iter().map(one).collect()
}

/// A rule by its set and clause, in a document.
#[derive(Serialize)]
pub(in crate::report) struct NamedRule<'a> {
    set: &'a str,
    predicate: &'static str,
    clause: &'a str,
    required: Option<OfAmount>,
}

/// A rule as a document names it.
pub(in crate::report) fn named_rule(book: &Rulebook, at: RuleAt) -> NamedRule<'_> {
    let rule = book.rule(at);
    NamedRule {
        set: &book.sets[at.set].set.title,
        predicate: rule.kind.name,
        clause: &rule.clause,
        required: rule.bound.map(of_bound),
    }
}
