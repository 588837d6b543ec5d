//! Openings made to measure: the widths with which a layout found on the grid costs least and still holds every case.
//!
//! The search is exact over a grid of widths. Here one of its layouts is taken with its counts, its set heights and its other
//! groups as they stand, and the widths of its groups that are made to measure are set free, each within its range.
//!
//! First the unrounded widths of least price are found (`unrounded`), by argmin. They say what rounding costs, and where to
//! look where more widths may be drawn than can all be tried. Then the best of the widths that may be drawn is found
//! (`stairs`), which are whole steps of the rounding and both ends of a range. As long as there are no more than two thousand
//! in a range (of three groups five hundred), all of them are in the game, and the outcome is exact: no other widths that may
//! be drawn are better. Beyond that a window around the unrounded ones is searched, and last a step is taken off each width in
//! turn for as long as all cases hold.
//!
//! **Why it holds.** Heights do not change, so neither do set heights, tops of openings, freeboard, and the levels allowed;
//! what does change is asked again of the layout as drawn: every case by what it carries at its level, as the search asks it,
//! and the edge.
//!
//! **Why it is never worse.** What is handed back costs less than the grid's layout (where a device has no price: is less wide
//! in all); else the grid's stays.

use crate::device::{Made, Size};
use crate::roof::layout::{self, Group, Liftable};
use crate::roof::{Catchment, MOST_GROUPS, MOST_OUTLETS, working_capacity};
use crate::rules::Restriction;
use crate::units::{Length, Money};

use super::problem::{Problem, one_carries};
use super::standing::{Placed, Ranked, described};

mod stairs;
mod unrounded;

use stairs::Stairs;

/// What became of a layout whose openings are made to measure.
#[derive(Clone, Debug)]
pub enum Measured {
    /// No widths that may be drawn are better than those of the grid, which stay.
    NoBetter,
    /// Better widths.
    Fitted(Fitted),
}

/// A layout in widths of its own.
#[derive(Clone, Debug)]
pub struct Fitted {
    groups: Vec<Built>,
    /// All that is told of it but its groups.
    rest: Box<Ranked<'static>>,
    /// What it costs less than the grid's; none where a device has no price.
    pub saved: Option<Money>,
    /// How much less wide all its openings are together.
    pub narrower: Length,
    /// The free widths before they were rounded up, in the order of the grid's groups.
    pub unrounded: Vec<Length>,
    /// What the layout would cost in those; none where a device has no price.
    pub unrounded_cost: Option<Money>,
}

/// A group with a size of its own.
#[derive(Clone, Debug)]
struct Built {
    size: Size,
    count: u32,
    set_height: Length,
    /// The highest set height of its window.
    to: Length,
}

impl Built {
    fn group(&self) -> Group<'_> {
        Group { size: &self.size, count: self.count, set_height: self.set_height }
    }

    fn placed(&self) -> Placed<'_> {
        Placed { group: self.group(), from: self.set_height, to: self.to }
    }
}

impl Fitted {
    /// The layout, told as one of the grid. Groups that came to be alike are one; windows begin where the layout stands.
    pub fn layout(&self) -> Ranked<'_> {
        Ranked { groups: self.groups.iter().map(Built::placed).collect(), ..(*self.rest).clone() }
    }
}

/// Measures a layout of the grid whose groups may be lifted so high; none where nothing in it is made to measure.
pub(super) fn measured(problem: &Problem<'_>, layout: &Ranked<'_>, highest: &[Length]) -> Option<Measured> {
    let groups: Vec<Group<'_>> = layout.groups.iter().map(|placed| placed.group).collect();
    let fit = Fit::new(problem, &groups);
    if fit.free.is_empty() {
        return None;
    }
    Some(fit.fitted(layout, highest).map_or(Measured::NoBetter, Measured::Fitted))
}

/// A group whose width is free.
struct Free<'f> {
    /// Its place among the groups.
    place: usize,
    group: Group<'f>,
    /// The widths that it may have by the catalog and by binding rules.
    made: Made,
}

impl Free<'_> {
    /// One of it in a width.
    fn size(&self, width: Length) -> Size {
        self.group.size.in_width(width).unwrap_or_else(|| self.group.size.clone())
    }

    fn ends(&self) -> (f64, f64) {
        (self.made.from.m(), self.made.to.m())
    }
}

/// The widths that a group may have where it stands: rules ask for wide openings, so they cut off the narrowest. The width of
/// the grid is among them.
fn allowed_widths(group: &Group<'_>, made: &Made, restriction: &Restriction<'_>, area: &Catchment) -> Made {
    let allows = |width: Length| {
        let size = group.size.in_width(width);
        size.is_none_or(|size| restriction.allows(&size, group.set_height, area))
    };
    let (mut under, mut least) = (0, made.widths() - 1);
    while under < least {
        let middle = usize::midpoint(under, least);
        if allows(made.width(middle)) { least = middle } else { under = middle + 1 }
    }
    Made { from: made.width(least).min(group.size.clear_width()), ..*made }
}

/// A layout with the widths of some of its groups free.
struct Fit<'f, 'r> {
    problem: &'f Problem<'r>,
    groups: &'f [Group<'r>],
    free: Vec<Free<'f>>,
    /// The highest level that each case allows the layout, whatever its widths.
    levels: Vec<Length>,
    /// What one of each group carries in each case at that level, on the grid, and their counts.
    flows: Vec<[(f64, u32); MOST_OUTLETS]>,
    /// Edge that the free groups may take up in all, nanometres; none where it is not limited.
    edge: Option<i64>,
    priced: bool,
}

/// Free widths, in metres; those of free groups that there are not are zero.
type Widths = [f64; MOST_GROUPS];

impl<'f, 'r> Fit<'f, 'r> {
    fn new(problem: &'f Problem<'r>, groups: &'f [Group<'r>]) -> Self {
        let restriction = Restriction::of_sizes(&problem.rules);
        let free = |(place, group): (usize, &Group<'f>)| {
            let made = allowed_widths(group, group.size.made.as_deref()?, &restriction, problem.catchment);
            Some(Free { place, group: *group, made })
        };
        let free: Vec<Free<'f>> = groups.iter().enumerate().filter_map(free).collect();
        let situations = problem.situations.iter().zip(&problem.allowed);
        let levels: Vec<Length> = situations
            .map(|(situation, &allowed)| layout::highest_level(groups, situation, allowed, problem.asked))
            .collect();
        let flows = problem.situations.iter().zip(&levels).map(|(situation, &level)| {
            let mut flows = [(0.0, 0); MOST_OUTLETS];
            for (slot, group) in flows.iter_mut().zip(groups) {
                *slot = (one_carries(group.size, group.set_height, situation, level), group.count);
            }
            flows
        });
        Self {
            flows: flows.collect(),
            edge: problem.edge_left(groups.iter().filter(|group| group.size.made.is_none()), groups),
            priced: groups.iter().all(|group| group.size.price.is_some()),
            problem,
            groups,
            free,
            levels,
        }
    }

    /// What one of a free group carries in a case, in a width.
    fn one(&self, free: usize, width: f64, case: usize) -> f64 {
        let free = &self.free[free];
        let size = free.size(Length::from_m(width));
        one_carries(&size, free.group.set_height, &self.problem.situations[case], self.levels[case])
    }

    /// What the layout carries in a case beyond its demand, one of each free group carrying so much.
    fn spare(&self, case: usize, of_free: impl Fn(usize) -> f64) -> f64 {
        let situation = &self.problem.situations[case];
        let mut flows = self.flows[case];
        for (index, free) in self.free.iter().enumerate() {
            flows[free.place].0 = of_free(index);
        }
        working_capacity(&flows, self.groups.len(), situation.case.blocked) - situation.demand.m3_per_s()
    }

    /// The layout in the best widths that may be drawn; none where they are no better than those of the grid.
    fn fitted(&self, layout: &Ranked<'_>, highest: &[Length]) -> Option<Fitted> {
        let unrounded = self.unrounded();
        let stairs = Stairs::new(self, unrounded);
        let places = self.steps_off(stairs.least()?);
        let drawn: Vec<Length> = self.free.iter().zip(places).map(|(free, place)| free.made.width(place)).collect();
        let groups = self.built(&drawn, highest)?;
        let rest = told(self.problem, &groups);
        let narrower =
            self.groups.iter().map(wide).sum::<i64>() - groups.iter().map(|built| wide(&built.group())).sum::<i64>();
        let saved = rest.cost.zip(layout.cost).map(|(new, old)| old.millionths() - new.millionths());
        if saved.unwrap_or(narrower) <= 0 {
            return None;
        }
        let mut as_drawn = [0.0; MOST_GROUPS];
        for (width, drawn) in as_drawn.iter_mut().zip(&drawn) {
            *width = drawn.m();
        }
        // What may be drawn need not be rounded: a walk that ended short of it is not told.
        let unrounded = unrounded.filter(|widths| self.price(widths) <= self.price(&as_drawn)).unwrap_or(as_drawn);
        Some(Fitted {
            saved: saved.map(Money::from_millionths),
            narrower: Length::from_nm(narrower),
            unrounded: unrounded[..self.free.len()].iter().map(|&width| Length::from_m(width)).collect(),
            unrounded_cost: self.cost(&unrounded),
            groups,
            rest,
        })
    }

    /// What the layout costs in some widths; none where a device has no price.
    fn cost(&self, widths: &Widths) -> Option<Money> {
        let fixed = self.groups.iter().filter(|group| group.size.made.is_none());
        let fixed: Option<Money> = fixed.map(|group| group.size.price.map(|price| price * group.count)).sum();
        let free = self.priced.then(|| Money::nearest(self.bare_price(widths)));
        fixed.zip(free).map(|(fixed, free)| [fixed, free].into_iter().sum())
    }

    /// Takes a step off each width in turn for as long as every case holds.
    fn steps_off(&self, mut places: [usize; MOST_GROUPS]) -> [usize; MOST_GROUPS] {
        let holds = |places: &[usize; MOST_GROUPS]| {
            (0..self.levels.len()).all(|case| {
                self.spare(case, |free| self.one(free, self.free[free].made.width(places[free]).m(), case)) >= 0.0
            })
        };
        let mut free = 0;
        while free < self.free.len() {
            let mut narrower = places;
            narrower[free] = places[free].saturating_sub(1);
            if narrower != places && holds(&narrower) {
                (places, free) = (narrower, 0);
            } else {
                free += 1;
            }
        }
        places
    }

    /// The groups in the free widths as drawn, with their windows; none where they do not hold every case and fit the edge.
    fn built(&self, drawn: &[Length], highest: &[Length]) -> Option<Vec<Built>> {
        let mut sizes: Vec<Size> = self.groups.iter().map(|group| group.size.clone()).collect();
        for (free, &width) in self.free.iter().zip(drawn) {
            sizes[free.place] = free.size(width);
        }
        let apart: Vec<Built> = sizes
            .into_iter()
            .zip(self.groups)
            .zip(highest)
            .map(|((size, group), &to)| Built { size, count: group.count, set_height: group.set_height, to })
            .collect();
        // Adding alike groups up may change a last bit: then they stay apart.
        [merged(&apart, self.problem.fixed.len()), apart].into_iter().find(|groups| self.stands(groups)).map(
            |mut groups| {
                let liftable: Vec<Liftable<'_>> =
                    groups.iter().map(|built| Liftable { group: built.group(), highest: built.to }).collect();
                let lift = layout::highest_lift(&liftable, &self.problem.situations, self.problem.asked);
                let lift = lift.unwrap_or(Length::ZERO);
                let tops: Vec<Length> = liftable.iter().map(|group| group.lifted(lift).set_height).collect();
                groups.iter_mut().zip(tops).for_each(|(built, to)| built.to = to);
                groups
            },
        )
    }

    /// Whether groups hold every case and fit the edge, asked as the search asks it.
    fn stands(&self, built: &[Built]) -> bool {
        let groups: Vec<Group<'_>> = built.iter().map(Built::group).collect();
        let mut situations = self.problem.situations.iter().zip(&self.problem.allowed);
        self.problem.edge_left(groups.iter(), &groups).is_none_or(|left| left >= 0)
            && situations.all(|(situation, &allowed)| layout::holds_at(&groups, situation, allowed, self.problem.asked))
    }
}

/// Groups of which those that are alike are one, but for the last, which are there already.
fn merged(groups: &[Built], there: usize) -> Vec<Built> {
    let (added, there) = groups.split_at(groups.len() - there);
    let mut all: Vec<Built> = Vec::new();
    for built in added {
        let alike = |other: &&mut Built| {
            other.size.tag == built.size.tag
                && other.size.device == built.size.device
                && other.set_height == built.set_height
        };
        match all.iter_mut().find(alike) {
            Some(known) => known.count += built.count,
            None => all.push(built.clone()),
        }
    }
    all.extend_from_slice(there);
    all
}

/// How wide all openings of a group are together, in nanometres.
fn wide(group: &Group<'_>) -> i64 {
    group.size.clear_width().nm() * i64::from(group.count)
}

/// All that is told of groups but the groups.
fn told(problem: &Problem<'_>, groups: &[Built]) -> Box<Ranked<'static>> {
    let told = described(groups.iter().map(Built::placed).collect(), &problem.situations, &problem.allowed);
    Box::new(Ranked {
        groups: Vec::new(),
        kept: problem.fixed.len(),
        closed: None,
        cost: told.cost,
        states: told.states,
        allowed: told.allowed,
        case: told.case,
        governing: told.governing,
        beyond: told.beyond,
        thick_wall: told.thick_wall,
        chord: told.chord,
        made: None,
    })
}
