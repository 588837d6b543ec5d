//! Why an area has no layout: which limit in which case stands in the way, and how near the nearest layout comes.

use crate::units::Length;

use super::closing::{self, any_under};
use super::dive::Aim;
use super::problem::Problem;
use super::watch::Stopped;
use super::{Why, ranked};

/// Why no layout of the problem holds; the search has found none.
pub(super) fn why(mut problem: Problem<'_>) -> Result<Why<'_>, Stopped> {
    if let Some(asked) = problem.asked.freeboard {
        problem.asked.freeboard = None;
        if any(&problem)? {
            return Ok(Why::Freeboard { asked, best: greatest_freeboard(problem, asked)? });
        }
    }
    let there = problem.devices_there();
    let nothing_fits = Why::NothingFits {
        least: problem.least.saturating_add(there),
        rule: problem.asked_for,
        at_edge: problem.asked_at_edge.map(|at| (problem.least_at_edge, at)),
        most: problem.most.saturating_add(there),
    };
    let cases: Vec<usize> = (0..problem.situations.len()).collect();
    let held = |cases: &[usize]| any(&problem.with_cases(cases));
    let mut alone = Vec::new();
    for &case in &cases {
        if !held(&[case])? {
            alone.push(case);
        }
    }
    let together = if alone.is_empty() { conflict(&cases, held)? } else { Vec::new() };
    let nearest = problem.by_utilisation();
    Ok(match closing::complete(&nearest, Aim::Reach)? {
        Some(best) => Why::Limits { best: Box::new(ranked(&nearest, &best)), alone, together },
        None => nothing_fits,
    })
}

/// Whether any layout holds.
pub(super) fn any(problem: &Problem<'_>) -> Result<bool, Stopped> {
    any_under(problem, i64::MAX)
}

/// The first two cases that no layout holds together; all cases where every two can be.
fn conflict(cases: &[usize], held: impl Fn(&[usize]) -> Result<bool, Stopped>) -> Result<Vec<usize>, Stopped> {
    for (place, &first) in cases.iter().enumerate() {
        for &second in &cases[place + 1..] {
            if !held(&[first, second])? {
                return Ok(vec![first, second]);
            }
        }
    }
    Ok(cases.to_vec())
}

/// A freeboard and the layout that keeps it.
type Kept<'r> = (Length, Box<super::Ranked<'r>>);

/// The greatest freeboard with which a layout keeps the limits, to a hundredth of a millimetre, and that layout.
fn greatest_freeboard(mut problem: Problem<'_>, asked: Length) -> Result<Option<Kept<'_>>, Stopped> {
    const WIDTH: f64 = 1e-5;
    // Under this the top of an opening drowns deeper than any level that a limit allows.
    let mut kept = -(1.0 + problem.situations.iter().map(|s| s.allowable_level().m()).fold(0.0, f64::max));
    let mut missed = asked.m();
    while missed - kept > WIDTH {
        let middle = f64::midpoint(kept, missed);
        problem.asked.freeboard = Some(Length::from_m(middle));
        if any(&problem)? { kept = middle } else { missed = middle }
    }
    problem.asked.freeboard = Some(Length::from_m(kept));
    let found = closing::complete(&problem, Aim::Rank)?;
    Ok(found.map(|best| (Length::from_m(kept), Box::new(ranked(&problem, &best)))))
}
