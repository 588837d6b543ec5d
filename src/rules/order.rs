//! Rules against one another: which of two asks more, which two cannot stand in one set, and which ask nothing at all.
//!
//! # Which asks more
//!
//! Of two rules of one kind that count the same way, that whose number keeps the other's. A count that grows with the area asks
//! at least as much as another of an area of any size where its number is no less, its first part no greater and each further
//! part no greater; where one of the three is the other way round, which asks more hangs on the area, and they are not
//! compared. Nor are rules with other terms beside their number.
//!
//! # What cannot be kept together
//!
//! A sill that must stand higher than it may, from heights of which the lower one never stands over the other; and water that
//! may stand no deeper than the lowest sill, over which it has yet to run. What hangs on the area (a parapet, the fall of the
//! roof) is left to the verdicts.

use crate::units::{Area, Length};

use super::amount::Amount;
use super::kind::Role;
use super::kinds::never_under;
use super::set::{Bound, Rule};

/// Why two rules cannot stand in one set.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Clash {
    /// A set counts in one way, and they say different ones.
    CountedOnce,
    /// No sill stands as high as one asks and as low as the other.
    NoSill,
    /// The lowest sill that one lets stand is over the deepest water that the other lets stand.
    SillOverWater,
}

/// Whether a rule asks at least as much as another of its kind; none where they cannot be compared.
pub fn at_least_as_strict(rule: &Rule, other: &Rule) -> Option<bool> {
    let (bound, others) = (rule.bound?, other.bound?);
    if rule.kind != other.kind || std::mem::discriminant(&bound) != std::mem::discriminant(&others) {
        return None;
    }
    let by_number = others.holds(bound.amount());
    if matches!(rule.kind.role, Role::Count(_)) {
        let ((first, each), (others_first, others_each)) = (parts(rule), parts(other));
        return Some(by_number && first <= others_first && each <= others_each);
    }
    let beside = |rule: &Rule| rule.kind.terms.iter().any(|term| !term.parts && rule.term(term.key).is_some());
    (!beside(rule) && !beside(other)).then_some(by_number)
}

/// The first part of an area and each further one by which a count grows; one that does not grow has them without end.
fn parts(rule: &Rule) -> (Area, Area) {
    let without_end = Area::from_m2(f64::INFINITY);
    let area = |key| match rule.term(key) {
        Some(Amount::Area(area)) => Some(area),
        _ => None,
    };
    area("for_each").map_or((without_end, without_end), |each| (area("first").unwrap_or(each), each))
}

/// Why two rules of one set cannot both stand in it, where they cannot.
pub fn clash(one: &Rule, other: &Rule) -> Option<Clash> {
    match (one.kind.role, other.kind.role) {
        (Role::Walls, Role::Walls) | (Role::Credit, Role::Credit) => {
            (one.terms != other.terms).then_some(Clash::CountedOnce)
        }
        (Role::Sill(_), Role::Sill(_)) => (no_sill(one, other) || no_sill(other, one)).then_some(Clash::NoSill),
        (Role::Sill(_), Role::Depth(_)) => sill_over_water(one, other).then_some(Clash::SillOverWater),
        (Role::Depth(_), Role::Sill(_)) => sill_over_water(other, one).then_some(Clash::SillOverWater),
        _ => None,
    }
}

/// Whether no sill is as high as one rule asks and as low as another lets it be.
fn no_sill(low: &Rule, high: &Rule) -> bool {
    let (Some(least), Some(most)) = (at_least(low), at_most(high)) else { return false };
    let (Some(above), Some(under)) = (low.word("above"), high.word("above")) else { return false };
    let of_the_same = match (low.word("for"), high.word("for")) {
        (Some(one), Some(other)) => one == other,
        _ => true,
    };
    of_the_same && never_under(above, under) && least > most
}

/// Whether every sill stands higher than the water may.
fn sill_over_water(sill: &Rule, depth: &Rule) -> bool {
    // Drains have no roof at the wall, nor those devices a rule that is for others: they may stand lower.
    let of_all = sill.word("for").is_none() && sill.word("above") != Some("roof at wall");
    of_all && at_least(sill).zip(at_most(depth)).is_some_and(|(least, most)| least > most)
}

fn at_least(rule: &Rule) -> Option<Length> {
    match rule.bound {
        Some(Bound::AtLeast(Amount::Length(least))) => Some(least),
        _ => None,
    }
}

fn at_most(rule: &Rule) -> Option<Length> {
    match rule.bound {
        Some(Bound::AtMost(Amount::Length(most))) => Some(most),
        _ => None,
    }
}

/// Whether a rule asks nothing: sills over the low point, where all stand, or the rain of the project as it is.
pub fn asks_nothing(rule: &Rule) -> bool {
    match rule.kind.role {
        Role::Sill(_) => rule.word("above") == Some("low point") && at_least(rule) == Some(Length::ZERO),
        Role::Rain => rule.terms.is_empty(),
        _ => false,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::rules::{KINDS, Known};

    fn count(least: u32, first: Option<f64>, each: Option<f64>) -> Rule {
        let kind = KINDS.into_iter().find(|kind| kind.name == "count").expect("a kind");
        let term = |key, m2: Option<f64>| m2.map(|m2| (key, Amount::Area(Area::from_m2(m2))));
        Rule {
            kind,
            bound: Some(Bound::AtLeast(Amount::Count(least))),
            terms: term("first", first).into_iter().chain(term("for_each", each)).collect(),
            clause: "1".into(),
            source: "by hand".into(),
            known: Known::Read,
            note: None,
        }
    }

    /// What a count asks of an area, counted part by part.
    fn asked(rule: (u32, Option<f64>, Option<f64>), area: f64) -> u32 {
        let (mut count, first, Some(each)) = rule else { return rule.0 };
        let mut covered = first.unwrap_or(each);
        while covered < area - 1e-6 {
            (count, covered) = (count + 1, covered + each);
        }
        count
    }

    /// Where one count is said to ask as much as another, it asks no fewer of an area of any size; and of two that grow by
    /// parts in the ratio of whole numbers, where it is said not to and the two differ only in one number, there is a size
    /// where it asks fewer.
    #[test]
    fn a_count_asks_as_much_as_another_of_any_area() {
        let counts: Vec<(u32, Option<f64>, Option<f64>)> = [1, 2, 3]
            .into_iter()
            .flat_map(|least| {
                let grown = [None, Some(300.0), Some(500.0), Some(900.0)].into_iter().flat_map(move |first| {
                    [200.0, 500.0, 900.0].into_iter().map(move |each| (least, first, Some(each)))
                });
                grown.chain([(least, None, None)])
            })
            .collect();
        let mut compared = 0;
        for &one in &counts {
            for &other in &counts {
                let strict = at_least_as_strict(&count(one.0, one.1, one.2), &count(other.0, other.1, other.2));
                let fewer =
                    (1..400).map(|step| 50.0 * f64::from(step)).find(|&area| asked(one, area) < asked(other, area));
                assert!(strict != Some(true) || fewer.is_none(), "{one:?} and {other:?} at {fewer:?} m2");
                let alike = [one.0 == other.0, one.1 == other.1, one.2 == other.2];
                // Of one that does not grow a first part says nothing.
                if alike.into_iter().filter(|&alike| !alike).count() == 1 && one.1.is_some() && other.1.is_some() {
                    compared += 1;
                    assert_eq!(strict, Some(fewer.is_none()), "{one:?} and {other:?}");
                }
            }
        }
        assert!(compared > 100, "{compared}");
    }

    /// Datums against one another, each as high as it may be over the low point: 0 or 3 in for each of the others, water at or
    /// over its drain. One is never under another just where that holds in all.
    #[test]
    fn datums_by_every_way_they_can_lie() {
        let mut never: Vec<(&str, &str)> = Vec::new();
        let names = ["low point", "roof at wall", "primary drain", "primary water"];
        for one in 0..4 {
            for other in 0..4 {
                let lies = (0..8).map(|way| {
                    let up = |bit: usize| f64::from((way >> bit) & 1) * 3.0;
                    [0.0, up(0), up(1), up(1) + up(2)]
                });
                if lies.into_iter().all(|at| at[one] >= at[other]) {
                    never.push((names[one], names[other]));
                }
            }
        }
        for one in names {
            for other in names {
                assert_eq!(never_under(one, other), never.contains(&(one, other)), "{one} under {other}");
            }
        }
    }
}
