//! Through the layouts of an area by cost, pass by pass, keeping what is not beaten.

use crate::roof::MOST_GROUPS;

use super::super::dive::{SLACK, needed};
use super::super::problem::{Problem, Table};
use super::super::watch::Stopped;
use super::screens::Screens;
use super::sieve::Sieve;
use super::{Kept, Worst, is_priced, standing_groups, sums, worst};

/// The layouts that are not beaten, by cost, then load, count and width; where cost plays no part by width, count and load.
pub(super) fn walk(problem: &Problem<'_>) -> Result<Vec<Kept>, Stopped> {
    if problem.candidates.is_empty() && problem.fixed.is_empty() {
        return Ok(Vec::new());
    }
    let mut walk = Walk::new(problem);
    loop {
        walk.collect();
        let last = walk.high == i64::MAX;
        walk.judge();
        if walk.ended {
            return Err(Stopped);
        }
        if last {
            break;
        }
        walk.low = walk.high + 1;
    }
    let mut kept = walk.kept;
    let priced = is_priced(problem);
    kept.sort_by_key(|kept| {
        let (sums, depth) = (kept.sums, kept.worst.depth.nm());
        if priced { [sums.cost, depth, sums.count, sums.width] } else { [sums.width, sums.count, depth, 0] }
    });
    Ok(kept)
}

/// Layouts that a pass holds before the dearer half of them is left for later ones.
const ROOM: usize = 1 << 18;

/// What one device of a candidate adds to the sums. Where cost plays no part the width leads in its place.
#[derive(Clone, Copy)]
struct Piece {
    lead: i64,
    rest: i64,
    /// Width, where it uses up edge.
    edge: Option<i64>,
    /// Place of its top among all tops; the greatest number where it has none.
    top: usize,
}

/// A layout in the order in which layouts are gone through.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
struct Entry {
    lead: i64,
    count: u32,
    rest: i64,
    len: usize,
    groups: [(usize, u32); MOST_GROUPS],
}

/// What the chosen groups use up.
#[derive(Clone, Copy)]
struct Used {
    lead: i64,
    rest: i64,
    count: u32,
    openings: i64,
    edge: i64,
    top: usize,
}

impl Used {
    /// Of what is there, which takes edge and counts for nothing else.
    fn of_what_is_there(problem: &Problem<'_>) -> Self {
        let (edge, openings) = problem.edge_taken_there();
        Self { lead: 0, rest: 0, count: 0, openings, edge, top: usize::MAX }
    }

    fn with(mut self, piece: &Piece, count: u32) -> Self {
        let many = i64::from(count);
        self.count += count;
        self.lead = self.lead.saturating_add(piece.lead.saturating_mul(many));
        self.rest = self.rest.saturating_add(piece.rest.saturating_mul(many));
        if let Some(width) = piece.edge {
            self.openings += many;
            self.edge = self.edge.saturating_add(width.saturating_mul(many));
        }
        self.top = self.top.min(piece.top);
        self
    }
}

struct Walk<'p, 'r> {
    problem: &'p Problem<'r>,
    pieces: Vec<Piece>,
    /// What one of each carries at the levels allowed to each class of layouts: those without a top, then by rising tops.
    limits: Vec<Table>,
    /// The same at the levels allowed to any layout.
    most: Table,
    /// Greatest of these flows in each case, and greatest lead, over the candidates from an index on.
    greatest: Vec<f64>,
    greatest_lead: Vec<i64>,
    /// Total that a layout must have in each case.
    needed: Vec<f64>,
    screens: Screens,
    sieve: Sieve,
    /// The leads that the pass takes in.
    low: i64,
    high: i64,
    room: usize,
    pass: Vec<Entry>,
    kept: Vec<Kept>,
    chosen: [(usize, u32); MOST_GROUPS],
    /// Total flow of the groups chosen so far, one row of cases for each depth.
    totals: Vec<f64>,
    /// Whether the watch ended the walk: what is kept then may be beaten.
    ended: bool,
}

impl<'p, 'r> Walk<'p, 'r> {
    fn new(problem: &'p Problem<'r>) -> Self {
        let lowest = |levels: &[_]| problem.table(levels, |candidate| Some(candidate.lowest()));
        let classes = problem.classes();
        let limits = classes.iter().map(|&class| lowest(&problem.allowable_levels(class))).collect();
        let most = lowest(&problem.allowed);
        let needed = needed(problem, &most);
        let cases = problem.situations.len();
        let pieces = pieces(problem, &classes);
        let mut greatest = vec![0.0_f64; (pieces.len() + 1) * cases];
        let mut greatest_lead = vec![0; pieces.len() + 1];
        for index in (0..pieces.len()).rev() {
            greatest_lead[index] = pieces[index].lead.max(greatest_lead[index + 1]);
            for case in 0..cases {
                greatest[index * cases + case] = most.of(index)[case].max(greatest[(index + 1) * cases + case]);
            }
        }
        Self {
            problem,
            pieces,
            limits,
            most,
            greatest,
            greatest_lead,
            needed,
            screens: Screens::default(),
            sieve: Sieve::new(problem.most as usize),
            low: 0,
            high: i64::MAX,
            room: ROOM,
            pass: Vec::new(),
            kept: Vec::new(),
            chosen: [(0, 0); MOST_GROUPS],
            totals: vec![0.0; (MOST_GROUPS + 1) * cases],
            ended: false,
        }
    }

    /// Fills the pass with the layouts from `low` on that may stay, up to the `high` that leaves room for them.
    fn collect(&mut self) {
        (self.high, self.room) = (i64::MAX, ROOM);
        self.pass.clear();
        let there = Used::of_what_is_there(self.problem);
        if self.low == 0 && self.problem.is_served() {
            self.take(&[], there);
        }
        for groups in 1..=self.problem.mix {
            self.extend(groups, 0, 0, there);
        }
    }

    /// Extends the groups chosen so far to `groups` groups, by candidates from an index on.
    fn extend(&mut self, groups: usize, depth: usize, from: usize, used: Used) {
        self.ended |= self.problem.watch.is_due();
        if self.ended {
            return;
        }
        let to_come = u32::try_from(groups - depth - 1).unwrap_or(0);
        let Some(most) = self.problem.most.checked_sub(used.count + to_come).filter(|&most| most > 0) else { return };
        for index in from..self.pieces.len() {
            if !self.can_hold(depth, index, most + to_come) {
                return;
            }
            if to_come == 0 {
                self.close(depth, index, most, used);
                continue;
            }
            for count in 1..=most {
                let used = used.with(&self.pieces[index], count);
                if used.lead > self.high || !self.fits(&used) {
                    break;
                }
                let left = i64::from(self.problem.most - used.count);
                if used.lead.saturating_add(self.greatest_lead[index + 1].saturating_mul(left)) < self.low {
                    continue;
                }
                self.choose(depth, index, count);
                self.extend(groups, depth + 1, index + 1, used);
            }
        }
    }

    /// Closes the groups chosen so far with a last one, of every count that the pass takes in.
    fn close(&mut self, depth: usize, index: usize, most: u32, used: Used) {
        let piece = self.pieces[index];
        let class = used.top.min(piece.top);
        let class = if class == usize::MAX { 0 } else { class };
        let mut holds = false;
        for count in self.least_of_last(depth, index, used)..=most {
            let used = used.with(&piece, count);
            if used.lead > self.high || !self.fits(&used) {
                break;
            }
            self.chosen[depth] = (index, count);
            let chosen = self.chosen;
            let groups = &chosen[..=depth];
            // More of the last never carry less.
            holds = holds || self.problem.carries(&self.limits[class], groups);
            let short = self.problem.is_short_at_edge(used.openings);
            if holds && !short && used.lead >= self.low && self.may_stay(groups, used.count, used.rest) {
                self.take(groups, used);
            }
        }
    }

    /// Fewest of a last group that can hold every case, or that the pass takes in.
    fn least_of_last(&self, depth: usize, index: usize, used: Used) -> u32 {
        let cases = self.needed.len();
        let mut least = self.problem.least.saturating_sub(used.count).max(1);
        if self.pieces[index].edge.is_some() {
            least = least.max(self.problem.short_at_edge(used.openings));
        }
        for (case, needed) in self.needed.iter().enumerate() {
            let missing = needed - self.totals[depth * cases + case];
            if missing > 0.0 {
                let flow = self.most.of(index)[case];
                let wanted = if flow > 0.0 { (missing / flow * (1.0 - SLACK)).ceil() } else { f64::INFINITY };
                // A float above the greatest count ends the loop over counts before it begins.
                least = least.max(wanted.min(f64::from(u32::MAX)) as u32);
            }
        }
        let lead = self.pieces[index].lead;
        let short = self.low.saturating_sub(used.lead);
        if lead > 0 && short > 0 {
            // Rounded down: the loop over counts looks again.
            least = least.max(u32::try_from(short / lead).unwrap_or(u32::MAX));
        }
        least
    }

    /// Whether the candidates from an index on can bring what the groups chosen so far lack.
    fn can_hold(&self, depth: usize, from: usize, devices_left: u32) -> bool {
        let cases = self.needed.len();
        self.needed.iter().enumerate().all(|(case, needed)| {
            needed - self.totals[depth * cases + case] <= f64::from(devices_left) * self.greatest[from * cases + case]
        })
    }

    fn choose(&mut self, depth: usize, index: usize, count: u32) {
        self.chosen[depth] = (index, count);
        let cases = self.needed.len();
        for case in 0..cases {
            let flow = self.most.of(index)[case] * f64::from(count);
            self.totals[(depth + 1) * cases + case] = self.totals[depth * cases + case] + flow;
        }
    }

    /// Whether the openings and the gaps between them fit the edge.
    fn fits(&self, used: &Used) -> bool {
        let gaps = self.problem.gap.saturating_mul((used.openings - 1).max(0));
        self.problem.edge.is_none_or(|edge| used.edge.saturating_add(gaps) <= edge)
    }

    /// Whether a layout may have less load than all that were kept and are no greater in its sums.
    fn may_stay(&mut self, groups: &[(usize, u32)], count: u32, rest: i64) -> bool {
        let least = self.sieve.least(count as usize, rest);
        least.is_none_or(|least| self.screens.may_carry_under(self.problem, groups, least))
    }

    /// Takes the chosen groups into the pass; where that is full, leaves the dearer half of it for later ones.
    fn take(&mut self, chosen: &[(usize, u32)], used: Used) {
        let mut groups = [(0, 0); MOST_GROUPS];
        groups[..chosen.len()].copy_from_slice(chosen);
        self.pass.push(Entry { lead: used.lead, count: used.count, rest: used.rest, len: chosen.len(), groups });
        if self.pass.len() >= self.room {
            let middle = self.pass.len() / 2;
            self.high = self.pass.select_nth_unstable_by_key(middle, |entry| entry.lead).1.lead;
            self.pass.retain(|entry| entry.lead <= self.high);
            // Where nearly all lead alike they stay together.
            self.room = ROOM.max(2 * self.pass.len());
        }
    }

    /// Goes through the pass in order and keeps what no layout kept before beats.
    fn judge(&mut self) {
        let mut pass = std::mem::take(&mut self.pass);
        pass.sort_unstable();
        let mut before: Option<(i64, u32, i64)> = None;
        for entry in &pass {
            let groups = &entry.groups[..entry.len];
            self.ended |= self.problem.watch.is_due();
            if self.ended {
                break;
            }
            if !self.may_stay(groups, entry.count, entry.rest) {
                continue;
            }
            let least = self.sieve.least(entry.count as usize, entry.rest);
            let Some(worst) = worst(self.problem, &standing_groups(self.problem, groups)) else { continue };
            if least.is_some_and(|least| worst.depth.nm() >= least) {
                continue;
            }
            let same = (entry.lead, entry.count, entry.rest);
            if before.replace(same) == Some(same) {
                // Equal sums and less load: it beats the layout kept last.
                self.kept.pop();
            }
            self.keep(entry, worst);
        }
        self.pass = pass;
    }

    fn keep(&mut self, entry: &Entry, worst: Worst) {
        self.sieve.add(entry.count as usize, entry.rest, worst.depth.nm());
        let groups = entry.groups[..entry.len].to_vec();
        self.kept.push(Kept { sums: sums(self.problem, &groups), groups, worst });
    }
}

fn pieces(problem: &Problem<'_>, classes: &[Option<i64>]) -> Vec<Piece> {
    let priced = is_priced(problem);
    let asked = problem.asks_freeboard();
    let piece = |candidate: &super::super::problem::Candidate<'_>| {
        let place = |top| classes.iter().position(|&class| class == Some(top));
        Piece {
            lead: if priced { candidate.price } else { candidate.width },
            rest: if priced { candidate.width } else { 0 },
            edge: candidate.at_edge.then_some(candidate.width),
            top: candidate.top.filter(|_| asked).and_then(place).unwrap_or(usize::MAX),
        }
    };
    problem.candidates.iter().map(piece).collect()
}
