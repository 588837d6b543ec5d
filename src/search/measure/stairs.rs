//! Widths that may be drawn: the best of all of them, by tables and a stair.
//!
//! At the highest level that a case allows, what one device carries is one number for each width, as in the search. Wider
//! never carries less (a test asks it of every law), so for each width of one group the least that do of the next form a
//! stair that only falls: its treads are all that can be best. Of three groups there is one stair for each width of the
//! first.

use crate::roof::MOST_GROUPS;
use crate::units::Length;

use super::super::problem::one_carries;
use super::{Fit, Widths};

/// Widths that may be drawn, up to which all are tried, by the number of free widths less one: of more, so many around the
/// unrounded one. A single width is a root, so that few around it say all.
const MOST_DRAWN: [usize; MOST_GROUPS] = [64, 2048, 512];

/// The widths of one free group that are tried, from the least on.
struct Tread {
    /// Place of the first of them among all that may be drawn.
    first: usize,
    /// Width and cost of all devices of the group, whole nanometres and millionths.
    sums: Vec<(i64, i64)>,
    /// Width of one, nanometres.
    widths: Vec<i64>,
    /// What one carries in each case.
    flows: Vec<f64>,
}

/// All widths that are tried of all free groups.
pub(super) struct Stairs<'s, 'f, 'r> {
    fit: &'s Fit<'f, 'r>,
    treads: Vec<Tread>,
}

/// Widths as they rank: by cost, by width in all, by the widest, by their places.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
struct Choice {
    cost: i64,
    width: i64,
    widest: i64,
    places: [usize; MOST_GROUPS],
}

impl<'s, 'f, 'r> Stairs<'s, 'f, 'r> {
    pub(super) fn new(fit: &'s Fit<'f, 'r>, unrounded: Option<Widths>) -> Self {
        let most = MOST_DRAWN[fit.free.len() - 1];
        let treads = (0..fit.free.len()).map(|free| {
            let all = fit.free[free].made.widths();
            let near = unrounded.map_or(fit.free[free].group.size.clear_width(), |widths| Length::from_m(widths[free]));
            let first = fit.free[free].made.rounded_up(near).saturating_sub(most / 2).min(all.saturating_sub(most));
            tread(fit, free, first..all.min(first + most))
        });
        Self { fit, treads: treads.collect() }
    }

    /// The places of the best widths that hold every case and fit the edge; none where none do.
    pub(super) fn least(&self) -> Option<[usize; MOST_GROUPS]> {
        let mut best = None;
        self.walk(&mut [0; MOST_GROUPS], 0, &mut best);
        best.map(|best| {
            let mut places = best.places;
            places.iter_mut().zip(&self.treads).for_each(|(place, tread)| *place += tread.first);
            places
        })
    }

    /// Tries the widths of the free groups from one on, those before it chosen.
    fn walk(&self, chosen: &mut [usize; MOST_GROUPS], from: usize, best: &mut Option<Choice>) {
        let tries = self.treads[from].widths.len();
        let last = self.treads.len() - 1;
        if from == last {
            let held = (0..tries).find(|&place| {
                chosen[last] = place;
                self.holds(chosen)
            });
            if held.is_some() {
                self.offer(chosen, best);
            }
            return;
        }
        if from + 1 < last {
            for place in 0..tries {
                chosen[from] = place;
                if self.is_dearer(chosen, from, best.as_ref()) {
                    return;
                }
                self.walk(chosen, from + 1, best);
            }
            return;
        }
        // Down the stair: as one widens, the least of the other falls.
        chosen[last] = self.treads[last].widths.len() - 1;
        for place in 0..tries {
            chosen[from] = place;
            if self.is_dearer(chosen, from, best.as_ref()) {
                return;
            }
            if !self.holds(chosen) {
                continue;
            }
            while chosen[last] > 0 {
                chosen[last] -= 1;
                if !self.holds(chosen) {
                    chosen[last] += 1;
                    break;
                }
            }
            self.offer(chosen, best);
        }
    }

    /// Whether the widths chosen up to a group cost more than the best, the others at their narrowest; wider ones do then too.
    fn is_dearer(&self, chosen: &[usize; MOST_GROUPS], upto: usize, best: Option<&Choice>) -> bool {
        let cost = |(index, tread): (usize, &Tread)| tread.sums[if index > upto { 0 } else { chosen[index] }].1;
        let least = self.treads.iter().enumerate().map(cost).fold(0, i64::saturating_add);
        best.is_some_and(|best| least > best.cost)
    }

    fn holds(&self, chosen: &[usize; MOST_GROUPS]) -> bool {
        let cases = self.fit.levels.len();
        (0..cases).all(|case| self.fit.spare(case, |free| self.treads[free].flows[chosen[free] * cases + case]) >= 0.0)
    }

    /// Takes widths that hold as the best, where they are and fit the edge.
    fn offer(&self, chosen: &[usize; MOST_GROUPS], best: &mut Option<Choice>) {
        let mut choice = Choice { cost: 0, width: 0, widest: 0, places: *chosen };
        for (tread, &place) in self.treads.iter().zip(chosen) {
            let (width, cost) = tread.sums[place];
            choice.width = choice.width.saturating_add(width);
            choice.cost = choice.cost.saturating_add(cost);
            choice.widest = choice.widest.max(tread.widths[place]);
        }
        let fits = self.fit.edge.is_none_or(|edge| choice.width <= edge);
        if fits && best.is_none_or(|best| choice < best) {
            *best = Some(choice);
        }
    }
}

fn tread(fit: &Fit<'_, '_>, free: usize, places: std::ops::Range<usize>) -> Tread {
    let group = &fit.free[free];
    let mut tread = Tread { first: places.start, sums: Vec::new(), widths: Vec::new(), flows: Vec::new() };
    for place in places {
        let size = group.size(group.made.width(place));
        let width = size.clear_width().nm();
        let cost = size.price.filter(|_| fit.priced).map_or(0, |price| (price * group.group.count).millionths());
        tread.sums.push((width.saturating_mul(i64::from(group.group.count)), cost));
        tread.widths.push(width);
        for (situation, &level) in fit.problem.situations.iter().zip(&fit.levels) {
            tread.flows.push(one_carries(&size, group.group.set_height, situation, level));
        }
    }
    tread
}
