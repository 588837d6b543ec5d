//! Widths before they are rounded: the least price at which the tightest case just holds.
//!
//! One width is a root. Of two, one is solved out so, and the other found by golden sections between the least and the greatest
//! that it can be, both ends tried. Of three, the last is solved out and the first two are walked downhill from the grid's
//! widths; each pair with the third at an end of its range is tried as well. Flow is near-linear in width, so the least often
//! lies at an end, or where one case takes over from another. The edge counts as a price that rises with what is wanting.

use crate::roof::MOST_GROUPS;
use crate::root::{crossing, least, least_in_plane};
use crate::units::Length;

use super::{Fit, Widths};

/// Part of the rounding step to which a width is found by golden sections.
const FINE: f64 = 0.05;
/// Spread of prices at which a walk in the plane ends, as a part of the greatest.
const SPREAD: f64 = 1e-7;

impl Fit<'_, '_> {
    /// The least width of one free group with which the others just hold every case; none where its greatest does not do.
    fn solved_out(&self, widths: &Widths, solved: usize) -> Option<f64> {
        let others: Vec<Widths> = (0..self.levels.len())
            .map(|case| {
                std::array::from_fn(|free| {
                    if free < self.free.len() && free != solved { self.one(free, widths[free], case) } else { 0.0 }
                })
            })
            .collect();
        let tightest = |width: f64| {
            let of_case = |(case, others): (usize, &Widths)| {
                let own = self.one(solved, width, case);
                self.spare(case, |free| if free == solved { own } else { others[free] })
            };
            others.iter().enumerate().map(of_case).fold(f64::INFINITY, f64::min)
        };
        let (from, to) = self.free[solved].ends();
        if tightest(from) >= 0.0 {
            return Some(from);
        }
        crossing(tightest, from, to).ok().map(|(_, reached)| reached)
    }

    /// What the free groups cost in some widths, or how wide they are in all where a device has no price; where they want
    /// more edge than there is, more than any that do not.
    pub(super) fn price(&self, widths: &Widths) -> f64 {
        let metres = self.total(|free| widths[free]);
        let excess = self.edge.map_or(0.0, |edge| metres - edge as f64 / 1e9);
        let penalty = if excess > 0.0 { self.dearest() * (1.0 + excess / metres) } else { 0.0 };
        self.bare_price(widths) + penalty
    }

    pub(super) fn bare_price(&self, widths: &Widths) -> f64 {
        let amount = |free: usize| {
            let group = &self.free[free];
            let device = group.group.size.device.with_width(Length::from_m(widths[free]));
            device.zip(group.made.tariff).map_or(0.0, |(device, tariff)| tariff.amount(&device))
        };
        if self.priced { self.total(amount) } else { self.total(|free| widths[free]) }
    }

    /// What all free groups have of something that one of each has so much of.
    fn total(&self, of_one: impl Fn(usize) -> f64) -> f64 {
        self.free.iter().enumerate().map(|(index, free)| of_one(index) * f64::from(free.group.count)).sum()
    }

    /// More than any widths within their ranges cost.
    fn dearest(&self) -> f64 {
        let mut widths = [0.0; MOST_GROUPS];
        for (width, free) in widths.iter_mut().zip(&self.free) {
            *width = free.made.to.m();
        }
        self.bare_price(&widths) + 1.0
    }

    /// The unrounded widths of least price; none where none was found within the edge.
    pub(super) fn unrounded(&self) -> Option<Widths> {
        let mut start = [0.0; MOST_GROUPS];
        for (width, free) in start.iter_mut().zip(&self.free) {
            *width = free.group.size.clear_width().m();
        }
        let found = match self.free.len() {
            1 => self.solved_out(&start, 0).map(|width| [width, 0.0, 0.0]),
            2 => self.of_two(start, 0, 1),
            _ => self.of_three(start),
        };
        found.filter(|widths| self.price(widths) < self.dearest())
    }

    /// The least price over the widths of two free groups, any third as it is.
    fn of_two(&self, mut widths: Widths, first: usize, second: usize) -> Option<Widths> {
        let with = |second_width: f64, widths: &mut Widths| {
            widths[second] = second_width;
            self.solved_out(widths, first)
        };
        let (second_from, second_to) = self.free[second].ends();
        let low = with(second_to, &mut widths)?;
        let high = with(second_from, &mut widths).unwrap_or(self.free[first].ends().1);
        let solved = |first_width: f64| {
            let mut widths = widths;
            widths[first] = first_width;
            widths[second] = self.solved_out(&widths, second)?;
            Some(widths)
        };
        let priced = |first_width: f64| solved(first_width).map_or(3.0 * self.dearest(), |widths| self.price(&widths));
        let fine = FINE * self.free[first].made.round.m().min(high - low);
        solved(least(priced, low, high, fine).unwrap_or(low))
    }

    /// The least price over the widths of three free groups.
    fn of_three(&self, start: Widths) -> Option<Widths> {
        let clipped = |place: [f64; 2]| {
            let within = |free: usize| place[free].clamp(self.free[free].made.from.m(), self.free[free].made.to.m());
            [within(0), within(1), 0.0]
        };
        let solved = |place: [f64; 2]| {
            let mut widths = clipped(place);
            widths[2] = self.solved_out(&widths, 2)?;
            Some(widths)
        };
        let short = |place: [f64; 2]| {
            let [first, second, _] = clipped(place);
            self.dearest() * (4.0 - first / self.free[0].made.to.m() - second / self.free[1].made.to.m())
        };
        let priced = |place: [f64; 2]| solved(place).map_or_else(|| short(place), |widths| self.price(&widths));
        let step = |free: usize| (self.free[free].made.to.m() - self.free[free].made.from.m()) / 8.0;
        let starts = [[start[0], start[1]], [start[0] + step(0), start[1]], [start[0], start[1] + step(1)]];
        let walked = least_in_plane(priced, starts, SPREAD * self.dearest()).ok().and_then(solved);
        let at_an_end = |third: usize, width: f64| {
            let mut widths = start;
            widths[third] = width;
            self.of_two(widths, (third + 1) % 3, (third + 2) % 3)
        };
        let ends = (0..3).flat_map(|third| {
            let (from, to) = self.free[third].ends();
            [at_an_end(third, from), at_an_end(third, to)]
        });
        let all = std::iter::once(walked).chain(ends).flatten();
        all.min_by(|a, b| self.price(a).total_cmp(&self.price(b)))
    }
}
