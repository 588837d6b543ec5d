//! Every layout of an area, or a proof that it cannot rank: depth first, one group after another, in catalog order.
//!
//! # What is left out, and why it may be
//!
//! A branch is a prefix of groups, with more groups to come from the sizes behind the last. Write c(s) for what one device
//! of size s carries in a case at the highest level allowed there, Q for the case's demand, N for the greatest count, and
//! k for the blocked devices.
//!
//! 1. *What must be installed.* With k of n devices blocked, the n - k weakest remain; they carry at most (n - k)/n of the
//!    total, which is at most (N - k)/N of it. So every layout that holds the case has a total of at least Q N/(N - k).
//!    Where devices are there already, E in all, N counts them too, and the rest has at least Q N/(N - k) - E. Blocking the k
//!    strongest of all leaves no more than blocking the k strongest of those that are there; these then carry E': so the rest
//!    has at least Q - E' as well.
//! 2. *Capacity.* If the prefix's total plus (devices left) x (greatest c(s) behind the prefix) is less, no layout in the
//!    branch holds the case.
//! 3. *Price of what is missing.* Where layouts rank by cost, count or width first, what the prefix lacks costs at least
//!    (missing flow) x (least price of a unit of flow behind the prefix). If the prefix and that are above the last layout
//!    kept, every layout in the branch ranks behind it.
//! 4. *Fewest of the last.* Of the last group fewer than (missing flow) / c(s) do not suffice.
//!
//! Where the water level comes first in the rank, c(s) is taken at the level of the last layout kept: whoever ranks as high
//! must carry the demand there, which is the same question at a lower level, and is asked anew whenever the list improves.
//! Totals found before such a change are too great by then, never too small, so every bound above stays one.
//!
//! 5. *Sizes outdone.* A size is not tried where another of the same tag is cheaper, carries at least as much in every case,
//!    takes no more edge, stands at the edge or not alike where a rule asks for a least number there, and cost ranks first: put
//!    in its place, device for device, it makes a cheaper layout of the same family that holds as well. Where one layout alone
//!    is kept, the other may be of any tag. (What holds to the last bit of a sum alone is not told apart here from what does
//!    not: the flows of both may be added in another order.)
//!
//! Nothing else is left out. Where devices are there already, adding nothing is tried first. Layouts of one group are tried
//! first, then of two, then of three: good layouts early make the bounds tight.

use crate::roof::{MOST_GROUPS, Situation};
use crate::units::{Length, Money};

use super::Least;
use super::best::{Best, Found};
use super::problem::{Candidate, Class, Problem, Table};
use super::rank::{Criterion, Sums};
use super::watch::Stopped;

/// How a search is run.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Aim {
    /// The best layouts that hold every case.
    Rank,
    /// The layout that comes nearest to its limits, whether it holds them or not.
    Reach,
    /// Any layout that holds every case.
    Any,
}

/// What a search found.
pub(super) struct Dived {
    /// The best layouts, in order.
    pub(super) found: Vec<Found>,
    /// Whether everything was tried; else the watch ended the search, and better ones may exist.
    pub(super) finished: bool,
}

impl Dived {
    /// What was found by a search that tried everything.
    pub(super) fn complete(self) -> Result<Vec<Found>, Stopped> {
        if self.finished { Ok(self.found) } else { Err(Stopped) }
    }
}

/// The best layouts of an area.
pub(super) fn dive(problem: &Problem<'_>, aim: Aim, best: Best) -> Dived {
    let mut best = best;
    let mut ended = problem.watch.is_due();
    for class in problem.classes() {
        if ended || problem.broken.is_some() {
            break;
        }
        best.change_class();
        let limits = (aim != Aim::Reach)
            .then(|| problem.table(&problem.allowable_levels(class), |candidate| Some(candidate.lowest())));
        let mut members = problem.members(class);
        if let Some(table) = &limits {
            members = not_outdone(problem, members, table, best.keeps(), problem.edge.is_some());
        }
        let mut dive = Dive {
            problem,
            aim,
            class,
            members,
            bounds: Bounds::default(),
            limits,
            best,
            chosen: [(0, 0); MOST_GROUPS],
            totals: vec![0.0; (MOST_GROUPS + 1) * problem.situations.len()],
            gate: Gate { lead: lead(problem), allowances: vec![i64::MAX; problem.most as usize + 1], stands_for: None },
            done: false,
            ended: false,
            looks: 0,
        };
        dive.tighten();
        let there = Used::of_what_is_there(problem);
        if class.is_none() && !problem.fixed.is_empty() {
            dive.offer(0, there);
        }
        for groups in 1..=problem.mix {
            dive.extend(groups, 0, 0, there);
        }
        ended = dive.ended;
        best = dive.best;
    }
    Dived { found: best.into_found(), finished: !ended }
}

/// What every layout has at least of the criterion that is ranked by first, by bounds 1 and 3 over all sizes; none where that
/// criterion needs a water level.
pub(super) fn least(problem: &Problem<'_>) -> Option<Least> {
    let lead = lead(problem)?;
    // No class of layouts may stand higher than this.
    let table = problem.table(&problem.allowed, |candidate| Some(candidate.lowest()));
    let of_one = |index: usize| of_one(&problem.candidates[index], Some(lead));
    let everyone = || 0..problem.candidates.len();
    let mut least = everyone().map(of_one).min()? as f64 * f64::from(problem.least);
    for (case, needed) in needed(problem, &table).into_iter().enumerate() {
        let dearest = everyone().map(|index| price_of_flow(of_one(index), table.of(index)[case]));
        least = least.max(needed * dearest.fold(f64::INFINITY, f64::min));
    }
    // Rounding never makes a bound of what is none.
    let whole = (least * (1.0 - SLACK)).floor().clamp(0.0, i64::MAX as f64) as i64;
    Some(match lead {
        Criterion::Count => Least::Count(u32::try_from(whole).unwrap_or(u32::MAX)),
        Criterion::Width => Least::Width(Length::from_nm(whole)),
        _ => Least::Cost(Money::from_millionths(whole)),
    })
}

/// The total that a layout must have in each case, beside what is there: bound 1.
pub(super) fn needed(problem: &Problem<'_>, table: &Table) -> Vec<f64> {
    let most = f64::from(problem.most.saturating_add(problem.devices_there()));
    let of_case = |(case, situation): (usize, &Situation<'_>)| {
        let left = most - f64::from(situation.case.blocked);
        let share = if left > 0.0 { most / left } else { f64::INFINITY };
        // A little less, so that rounding never makes a bound of what is none.
        let needed = situation.demand.m3_per_s() * share * (1.0 - SLACK);
        if problem.fixed.is_empty() {
            return needed;
        }
        let (all, unblocked) = problem.carried_there(table, case, situation.case.blocked);
        let beside = situation.demand.m3_per_s() * (1.0 - SLACK) - unblocked * (1.0 + SLACK);
        (needed - all * (1.0 + SLACK)).max(beside)
    };
    problem.situations.iter().enumerate().map(of_case).collect()
}

/// What one device has of the leading criterion.
fn of_one(candidate: &Candidate<'_>, lead: Option<Criterion>) -> i64 {
    match lead {
        Some(Criterion::Cost) => candidate.price,
        Some(Criterion::Count) => 1,
        Some(Criterion::Width) => candidate.width,
        _ => 0,
    }
}

/// What a unit of flow takes of the leading criterion.
fn price_of_flow(lead: i64, flow: f64) -> f64 {
    if flow > 0.0 { lead as f64 / flow } else { f64::INFINITY }
}

/// Which layouts a list keeps.
#[derive(Clone, Copy)]
pub(super) struct Keeps {
    /// The best alone.
    pub(super) one: bool,
    /// The best of each family alone.
    pub(super) families: bool,
}

/// Bound 5: the members that no other outdoes, in catalog order.
pub(super) fn not_outdone(
    problem: &Problem<'_>,
    mut members: Vec<usize>,
    table: &Table,
    keeps: Keeps,
    edge_limited: bool,
) -> Vec<usize> {
    if lead(problem) != Some(Criterion::Cost) || !(keeps.one || keeps.families) {
        return members;
    }
    let outdoes = |better: usize, worse: usize| {
        let (a, b) = (&problem.candidates[better], &problem.candidates[worse]);
        let fits = !edge_limited || !a.at_edge || (b.at_edge && a.width <= b.width);
        let fits = fits && (problem.least_at_edge == 0 || a.at_edge == b.at_edge);
        let carries = || table.of(better).iter().zip(table.of(worse)).all(|(a, b)| a >= b);
        a.price < b.price && (a.tag == b.tag || keeps.one) && fits && carries()
    };
    // Whoever is outdone is outdone by one that is not, and that is cheaper.
    members.sort_by_key(|&member| problem.candidates[member].price);
    let mut left: Vec<usize> = Vec::with_capacity(members.len());
    for member in members {
        if !left.iter().any(|&other| outdoes(other, member)) {
            left.push(member);
        }
    }
    left.sort_unstable();
    left
}

/// What the chosen groups use up.
#[derive(Clone, Copy, Default)]
struct Used {
    sums: Sums,
    devices: u32,
    openings: i64,
    edge: i64,
    has_lowest_top: bool,
}

/// What bounds are computed with; from the limits, or from what the last layout kept asks.
#[derive(Default)]
struct Bounds {
    /// Flow of one member in each case, members in order.
    flows: Vec<f64>,
    /// Greatest flow of one device in each case, over the members from an index on.
    greatest: Vec<f64>,
    /// Least of the leading criterion for a unit of flow, over the members from an index on.
    dearest: Vec<f64>,
    /// Total that a layout must have in each case.
    needed: Vec<f64>,
}

impl Used {
    /// Of what is there, which takes edge and counts for nothing else.
    fn of_what_is_there(problem: &Problem<'_>) -> Self {
        let (edge, openings) = problem.edge_taken_there();
        Self { openings, edge, ..Self::default() }
    }

    /// With one more group.
    fn with(mut self, candidate: &Candidate<'_>, count: u32, class: Class) -> Self {
        let many = i64::from(count);
        self.devices += count;
        self.sums.count += many;
        self.sums.cost += candidate.price.saturating_mul(many);
        self.sums.width += candidate.width.saturating_mul(many);
        self.sums.sizes += 1;
        if candidate.at_edge {
            self.openings += many;
            self.edge += candidate.width.saturating_mul(many);
        }
        self.has_lowest_top |= candidate.top == class;
        self
    }
}

struct Dive<'p, 'r> {
    problem: &'p Problem<'r>,
    aim: Aim,
    class: Class,
    /// Candidates in the game, in catalog order.
    members: Vec<usize>,
    bounds: Bounds,
    limits: Option<Table>,
    best: Best,
    chosen: [(usize, u32); MOST_GROUPS],
    /// Total flow of the groups chosen so far, one row of cases for each depth.
    totals: Vec<f64>,
    gate: Gate,
    /// Whether nothing more is to be tried: what was aimed at is found, or the watch ends the search.
    done: bool,
    ended: bool,
    /// Members looked at: the watch is asked now and then.
    looks: u32,
}

/// Members that are looked at before the watch is asked again.
const LOOKS: u32 = 64;

/// What a last group may bring of the leading criterion, by its count.
struct Gate {
    /// The first criterion, where it is a sum that every further device raises.
    lead: Option<Criterion>,
    allowances: Vec<i64>,
    /// Changes of the list and tag of the last group for which the allowances stand.
    stands_for: Option<(u64, u32)>,
}

/// The first criterion of a problem, where it is a sum that every further device raises.
pub(super) fn lead(problem: &Problem<'_>) -> Option<Criterion> {
    let first = problem.order.criteria()[0];
    matches!(first, Criterion::Cost | Criterion::Count | Criterion::Width).then_some(first)
}

impl Dive<'_, '_> {
    fn lead_of_one(&self, member: usize) -> i64 {
        of_one(&self.problem.candidates[self.members[member]], self.gate.lead)
    }

    /// The leading criterion of the last layout kept: no layout above it can rank.
    fn lead_allowed(&self) -> i64 {
        self.gate.lead.map_or(i64::MAX, |lead| self.best.allowance(lead))
    }

    /// Computes the bounds from the strictest table that every layout worth finding must pass.
    fn tighten(&mut self) {
        let problem = self.problem;
        let asked = if problem.order.sums().is_empty() { self.best.last_screen(problem, self.class) } else { None };
        let Some(table) = asked.or(self.limits.as_ref()) else {
            self.bounds = Bounds::default();
            return;
        };
        let cases = problem.situations.len();
        let count = self.members.len();
        let mut bounds = Bounds {
            flows: Vec::with_capacity(count * cases),
            greatest: vec![0.0; (count + 1) * cases],
            dearest: vec![f64::INFINITY; (count + 1) * cases],
            needed: needed(problem, table),
        };
        for &member in &self.members {
            bounds.flows.extend_from_slice(table.of(member));
        }
        for member in (0..count).rev() {
            let lead = self.lead_of_one(member);
            for case in 0..cases {
                let (here, behind) = (member * cases + case, (member + 1) * cases + case);
                let flow = bounds.flows[here];
                bounds.greatest[here] = flow.max(bounds.greatest[behind]);
                bounds.dearest[here] = price_of_flow(lead, flow).min(bounds.dearest[behind]);
            }
        }
        self.bounds = bounds;
    }

    /// Extends the groups chosen so far to `groups` groups, by members from an index on.
    fn extend(&mut self, groups: usize, depth: usize, from: usize, used: Used) {
        let to_come = u32::try_from(groups - depth - 1).unwrap_or(0);
        let Some(most) = self.problem.most.checked_sub(used.devices + to_come).filter(|&most| most > 0) else { return };
        self.gate.stands_for = None;
        for member in from..self.members.len() {
            self.look();
            if self.done || !self.can_rank(depth, member, most + to_come, used) {
                return;
            }
            if to_come == 0 {
                self.close(depth, member, most, used);
            } else {
                for count in 1..=most {
                    let Some(used) = self.choose(depth, member, count, used) else { break };
                    self.extend(groups, depth + 1, member + 1, used);
                }
            }
        }
    }

    /// Asks the watch now and then.
    fn look(&mut self) {
        self.looks += 1;
        if self.looks.is_multiple_of(LOOKS) && self.problem.watch.is_due() {
            self.ended = true;
            self.done = true;
        }
    }

    /// Closes the groups chosen so far with a last one, of every count that can rank.
    fn close(&mut self, depth: usize, member: usize, most: u32, used: Used) {
        let index = self.members[member];
        let candidate = &self.problem.candidates[index];
        let lead_of_one = self.lead_of_one(member);
        let lead_used = self.gate.lead.map_or(0, |lead| used.sums.value(lead));
        for count in self.least_of_last(depth, member, used)..=most {
            self.look_up(depth, candidate.tag);
            let lead = lead_used.saturating_add(lead_of_one.saturating_mul(i64::from(count)));
            if lead > self.gate.allowances[count as usize] {
                if lead > self.lead_allowed() {
                    break;
                }
                continue;
            }
            let used = used.with(candidate, count, self.class);
            if !self.fits(&used) {
                break;
            }
            self.chosen[depth] = (index, count);
            self.offer(depth + 1, used);
            if self.done {
                return;
            }
        }
    }

    /// Brings the allowances up to date for the groups chosen so far and a last one of a tag.
    fn look_up(&mut self, depth: usize, tag: u32) {
        let wanted = Some((self.best.changes(), tag));
        if let (Some(lead), true) = (self.gate.lead, self.gate.stands_for != wanted) {
            self.best.allowances(self.problem, &self.chosen[..depth], tag, lead, &mut self.gate.allowances);
            self.gate.stands_for = wanted;
        }
    }

    /// Bounds 2 and 3: whether the members from an index on can make a layout worth having of the groups chosen so far.
    fn can_rank(&self, depth: usize, from: usize, devices_left: u32, used: Used) -> bool {
        let cases = self.problem.situations.len();
        let lead = self.gate.lead;
        let allowed = self.lead_allowed();
        self.bounds.needed.iter().enumerate().all(|(case, needed)| {
            let missing = needed - self.totals[depth * cases + case];
            if missing <= 0.0 {
                return true;
            }
            let at = from * cases + case;
            if missing > f64::from(devices_left) * self.bounds.greatest[at] {
                return false;
            }
            let so_far = lead.map_or(0, |lead| used.sums.value(lead)) as f64;
            lead.is_none() || (so_far + missing * self.bounds.dearest[at]) * (1.0 - SLACK) <= allowed as f64
        })
    }

    /// Bound 4: fewest of a last group that can suffice.
    fn least_of_last(&self, depth: usize, member: usize, used: Used) -> u32 {
        let cases = self.problem.situations.len();
        let mut least = self.problem.least.saturating_sub(used.devices).max(1);
        if self.problem.candidates[self.members[member]].at_edge {
            least = least.max(self.problem.short_at_edge(used.openings));
        }
        for (case, needed) in self.bounds.needed.iter().enumerate() {
            let missing = needed - self.totals[depth * cases + case];
            if missing > 0.0 {
                let flow = self.bounds.flows[member * cases + case];
                let wanted = if flow > 0.0 { missing / flow * (1.0 - SLACK) } else { f64::INFINITY };
                // A float above the greatest count ends the loop over counts before it begins.
                least = least.max(rounded_up(wanted));
            }
        }
        least
    }

    /// Adds a group that is not the last; none where it does not fit, or already ranks behind the last layout kept.
    fn choose(&mut self, depth: usize, member: usize, count: u32, used: Used) -> Option<Used> {
        let index = self.members[member];
        let used = used.with(&self.problem.candidates[index], count, self.class);
        if !self.fits(&used) || self.gate.lead.is_some_and(|lead| used.sums.value(lead) > self.lead_allowed()) {
            return None;
        }
        self.chosen[depth] = (index, count);
        let cases = self.problem.situations.len();
        if !self.bounds.flows.is_empty() {
            for case in 0..cases {
                let flow = self.bounds.flows[member * cases + case];
                self.totals[(depth + 1) * cases + case] = self.totals[depth * cases + case] + flow * f64::from(count);
            }
        }
        Some(used)
    }

    /// Whether the openings and the gaps between them fit the edge.
    fn fits(&self, used: &Used) -> bool {
        let gaps = self.problem.gap.saturating_mul((used.openings - 1).max(0));
        self.problem.edge.is_none_or(|edge| used.edge.saturating_add(gaps) <= edge)
    }

    fn offer(&mut self, groups: usize, used: Used) {
        let too_few = used.devices < self.problem.least || self.problem.is_short_at_edge(used.openings);
        if too_few || (self.class.is_some() && !used.has_lowest_top) {
            return;
        }
        let chosen = &self.chosen[..groups];
        let changed = self.best.offer(self.problem, self.class, self.limits.as_ref(), chosen, used.sums);
        if changed && self.aim == Aim::Any {
            self.done = true;
        } else if changed && self.problem.order.sums().is_empty() {
            self.tighten();
        }
    }
}

/// The least whole number that is not less; the greatest where that is beyond it.
pub(super) fn rounded_up(number: f64) -> u32 {
    // Not `ceil`, a call into the system's library on processors that are not told to be recent ones.
    let whole = number as u32;
    whole.saturating_add(u32::from(f64::from(whole) < number))
}

/// Relative slack by which every bound is loosened; rounding in a sum of a few flows is far below it.
pub(super) const SLACK: f64 = 1e-9;
