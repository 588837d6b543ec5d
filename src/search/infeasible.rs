//! Why an area has no layout: which limit in which case stands in the way, and how near the nearest layout comes.

use crate::units::Length;

use super::best::Best;
use super::dive::{Aim, dive};
use super::problem::Problem;
use super::{Why, ranked};

/// Why no layout of the problem holds; the search has found none.
pub(super) fn why(mut problem: Problem<'_>) -> Why<'_> {
    if let Some(asked) = problem.asked.freeboard {
        problem.asked.freeboard = None;
        if any(&problem) {
            return Why::Freeboard { asked, best: greatest_freeboard(problem, asked) };
        }
    }
    let least = problem.least;
    let cases: Vec<usize> = (0..problem.situations.len()).collect();
    let held = |cases: &[usize]| any(&problem.with_cases(cases));
    let alone: Vec<usize> = cases.iter().copied().filter(|&case| !held(&[case])).collect();
    let together = if alone.is_empty() { conflict(&cases, held) } else { Vec::new() };
    let nearest = problem.by_utilisation();
    let found = dive(&nearest, Aim::Reach, Best::new(1, false)).into_found();
    match found.first() {
        Some(best) => Why::Limits { best: Box::new(ranked(&nearest, best)), alone, together },
        None => Why::NothingFits { least },
    }
}

/// Whether any layout holds.
pub(super) fn any(problem: &Problem<'_>) -> bool {
    !dive(problem, Aim::Any, Best::new(1, false)).into_found().is_empty()
}

/// The first two cases that no layout holds together; all cases where every two can be.
fn conflict(cases: &[usize], held: impl Fn(&[usize]) -> bool) -> Vec<usize> {
    for (place, &first) in cases.iter().enumerate() {
        for &second in &cases[place + 1..] {
            if !held(&[first, second]) {
                return vec![first, second];
            }
        }
    }
    cases.to_vec()
}

/// The greatest freeboard with which a layout keeps the limits, to a hundredth of a millimetre, and that layout.
fn greatest_freeboard(mut problem: Problem<'_>, asked: Length) -> Option<(Length, Box<super::Ranked<'_>>)> {
    const WIDTH: f64 = 1e-5;
    // Under this the top of an opening drowns deeper than any level that a limit allows.
    let mut kept = -(1.0 + problem.situations.iter().map(|s| s.allowable_level().m()).fold(0.0, f64::max));
    let mut missed = asked.m();
    while missed - kept > WIDTH {
        let middle = f64::midpoint(kept, missed);
        problem.asked.freeboard = Some(Length::from_m(middle));
        if any(&problem) { kept = middle } else { missed = middle }
    }
    problem.asked.freeboard = Some(Length::from_m(kept));
    let found = dive(&problem, Aim::Rank, Best::new(1, false)).into_found();
    found.first().map(|best| (Length::from_m(kept), Box::new(ranked(&problem, best))))
}
