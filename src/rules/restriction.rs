//! What the binding rule sets leave of an area: which sizes may stand, how high, and how many there must be.

use crate::device::Size;
use crate::roof::{Basis, Catchment};
use crate::units::Length;

use super::amount::Amount;
use super::kind::{Open, Role};
use super::place::{Misfit, Stand};
use super::set::{Bound, Rule, RuleAt, Rulebook};

/// The binding rules over one area that restrict what may stand in it.
#[derive(Clone, Debug, Default)]
pub struct Restriction<'b> {
    /// Rules of openings and sills.
    of_sizes: Vec<(RuleAt, &'b Rule)>,
    /// Least number of devices, and the rule that asks for it.
    pub least: Option<(u32, RuleAt)>,
    /// Least number of openings at the edge where any stands there, and the rule that asks for it.
    pub at_edge: Option<(u32, RuleAt)>,
    /// A rule that the area breaks whatever stands in it.
    pub broken: Option<RuleAt>,
}

impl<'b> Restriction<'b> {
    /// What binding sets leave of an area; `index` is its place on the roof.
    pub fn new(book: &'b Rulebook, bases: &[Basis], area: &Catchment, index: usize) -> Self {
        let mut restriction = Self::default();
        for (at, rule) in book.binding() {
            match rule.kind.role {
                Role::Opening(_) | Role::Sill(_) => restriction.of_sizes.push((at, rule)),
                Role::Count(least) => raise(&mut restriction.least, least(rule, area), at),
                Role::AtEdge(least) => raise(&mut restriction.at_edge, least(rule, area), at),
                Role::Area(measure) => {
                    let measured = measure(rule, area, &bases[at.set].areas[index]);
                    let fails = measured.is_ok_and(|(found, required)| !kept(rule, found, required));
                    restriction.broken = restriction.broken.or(fails.then_some(at));
                }
                _ => {}
            }
        }
        restriction
    }

    /// What binding sets say of sizes and sills alone, whatever the area's count and the rest of it.
    pub fn of_sizes(book: &'b Rulebook) -> Self {
        let of_size = |(_, rule): &(RuleAt, &Rule)| matches!(rule.kind.role, Role::Opening(_) | Role::Sill(_));
        Self { of_sizes: book.binding().filter(of_size).collect(), ..Self::default() }
    }

    /// Whether a size may stand at a height by the rules.
    pub fn allows(&self, size: &Size, set_height: Length, area: &Catchment) -> bool {
        self.broken_by(size, set_height, area).is_none()
    }

    /// The rule that a size breaks where it stands, the first of several.
    pub fn broken_by(&self, size: &Size, set_height: Length, area: &Catchment) -> Option<RuleAt> {
        match self.on(Stand { heights: vec![set_height], highest: set_height }, size, area) {
            Err(Misfit::Rule(at)) => Some(at),
            _ => None,
        }
    }

    /// What the rules leave of the heights at which a size may stand.
    ///
    /// # Errors
    /// The rule that leaves none, as a misfit.
    pub fn on(&self, stand: Stand, size: &Size, area: &Catchment) -> Result<Stand, Misfit> {
        let mut stand = stand;
        for &(at, rule) in &self.of_sizes {
            match rule.kind.role {
                Role::Opening(measure)
                    if measure(rule, size, area).is_ok_and(|(found, required)| !kept(rule, found, required)) =>
                {
                    return Err(Misfit::Rule(at));
                }
                Role::Sill(datum) => {
                    let Ok(datum) = datum(rule, size, area) else { continue };
                    stand = sills_kept(stand, rule, datum.height).ok_or(Misfit::Rule(at))?;
                }
                _ => {}
            }
        }
        Ok(stand)
    }

    /// Least and greatest height above the low point that rules let the sills of a size stand at; without bound where they say
    /// nothing.
    pub fn sills(&self, size: &Size, area: &Catchment) -> (Length, Length) {
        let none = Length::from_m(f64::INFINITY);
        let ends = self.of_sizes.iter().filter_map(|(_, rule)| match rule.kind.role {
            Role::Sill(datum) => end_of(rule, datum(rule, size, area).ok()?.height),
            _ => None,
        });
        ends.fold((-none, none), |(low, high), end| match end {
            End::Low(end) => (low.max(end), high),
            End::High(end) => (low, high.min(end)),
        })
    }

    /// Whether any rule restricts the sizes or their number.
    pub fn is_none(&self) -> bool {
        self.of_sizes.is_empty() && self.least.is_none() && self.at_edge.is_none() && self.broken.is_none()
    }
}

fn raise(least: &mut Option<(u32, RuleAt)>, asked: Result<u32, Open>, at: RuleAt) {
    if let Ok(asked) = asked
        && least.is_none_or(|(known, _)| asked > known)
    {
        *least = Some((asked, at));
    }
}

/// Whether what was found keeps a rule that requires so much of it.
pub(super) fn kept(rule: &Rule, found: Amount, required: Amount) -> bool {
    rule.bound.map_or(found == required, |bound| bound.with(required).holds(found))
}

/// An end that a rule sets to the heights of sills.
enum End {
    Low(Length),
    High(Length),
}

/// The end that the number of a rule sets, counted from a height above the low point.
fn end_of(rule: &Rule, datum: Length) -> Option<End> {
    match rule.bound? {
        Bound::AtLeast(Amount::Length(number)) => Some(End::Low((datum + number).on_grid())),
        Bound::AtMost(Amount::Length(number)) => Some(End::High((datum + number).on_grid())),
        _ => None,
    }
}

/// The heights that a rule leaves, its number counted from a height above the low point.
fn sills_kept(mut stand: Stand, rule: &Rule, datum: Length) -> Option<Stand> {
    match end_of(rule, datum) {
        Some(End::Low(end)) => stand.heights.retain(|&height| height.nm() >= end.nm()),
        Some(End::High(end)) => {
            stand.heights.retain(|&height| height.nm() <= end.nm());
            stand.highest = stand.highest.min(end);
        }
        None => {}
    }
    (!stand.heights.is_empty()).then_some(stand)
}
