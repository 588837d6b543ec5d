//! Verdicts: rule by rule, what was found, what is required, and whether that passes.

use crate::device::Place;
use crate::roof::layout::{self, CaseState, Group};
use crate::roof::{AreaBasis, Catchment, LimitKind, Roof, Situation};
use crate::units::Length;

use super::amount::Amount;
use super::basis::{counted_walls, is_credit, rain};
use super::kind::{Measure, Open, Role};
use super::restriction::kept;
use super::set::{Applied, Bound, Rule, RuleAt, Rulebook};

/// What is said of a layout by one rule.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Finding {
    /// The rule.
    pub at: RuleAt,
    /// Whether it is kept.
    pub verdict: Verdict,
    /// What was found; of several openings that of the one that says most: one that fails, else one that keeps it by least.
    pub found: Option<Amount>,
    /// What is required of it.
    pub required: Option<Required>,
}

/// What a rule requires of a number.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Required {
    /// No less, or no more.
    Bound(Bound),
    /// Just that.
    Is(Amount),
}

/// Whether a rule is kept.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Verdict {
    /// It is.
    Pass,
    /// It is not.
    Fail,
    /// It does not speak of this layout, and why.
    NotApplicable(&'static str),
    /// Something is not given, which is told.
    CannotTell(&'static str),
}

impl Verdict {
    /// Its name in reports.
    pub fn name(self) -> &'static str {
        match self {
            Self::Pass => "pass",
            Self::Fail => "fail",
            Self::NotApplicable(_) => "not applicable",
            Self::CannotTell(_) => "cannot tell",
        }
    }
}

/// A layout in an area as a rule set counts it.
struct Under<'a> {
    roof: &'a Roof,
    area: &'a Catchment,
    basis: &'a AreaBasis,
    groups: &'a [Group<'a>],
    situation: Situation<'a>,
    state: CaseState,
    applied: &'a Applied,
}

/// What every rule over a roof says of a layout of an area, set by set in the order of their files.
pub fn findings(book: &Rulebook, roof: &Roof, area: usize, groups: &[Group<'_>]) -> Vec<Finding> {
    let of_set = |(set, applied): (usize, &Applied)| {
        let situation = roof.situation_under(area, set);
        let under = Under {
            roof,
            area: &roof.areas[area],
            basis: &roof.bases[set].areas[area],
            groups,
            situation,
            state: layout::state(groups, &situation),
            applied,
        };
        let rules = applied.set.rules.iter().enumerate();
        rules.map(|(rule, given)| under.finding(RuleAt { set, rule }, given)).collect::<Vec<_>>()
    };
    book.sets.iter().enumerate().flat_map(of_set).collect()
}

impl Under<'_> {
    fn finding(&self, at: RuleAt, rule: &Rule) -> Finding {
        match rule.kind.role {
            Role::Opening(measure) => {
                of_worst(at, rule, self.groups.iter().map(|group| measure(rule, group.size, self.area)))
            }
            Role::Sill(datum) => of_worst(at, rule, self.groups.iter().map(|group| self.sill(rule, group, datum))),
            Role::Count(least) => of(at, rule, least(rule, self.area).map(|least| self.counted(least, |_| true))),
            Role::AtEdge(least) => of(at, rule, self.spacing(rule, least(rule, self.area))),
            Role::Depth(depth) => of(at, rule, depth(rule, self.area).map(|most| self.depth(rule, most))),
            Role::Freeboard => of(at, rule, self.freeboard(rule)),
            Role::Limits => self.limits(at),
            Role::Area(measure) => of(at, rule, measure(rule, self.area, self.basis)),
            Role::Rain => self.rain(at, rule),
            Role::Walls => {
                let by_project = self.area.wall * self.area.wall_share;
                let (counted, required) =
                    (if self.applied.binding { self.basis.wall } else { by_project }, counted_walls(rule, self.area));
                let none = self.area.wall == crate::units::Area::ZERO && self.area.facts.walls.is_empty();
                let measured = (Amount::Area(counted), Amount::Area(required));
                let measured = if none { Err(Open::NotApplicable("no wall sheds on the area")) } else { Ok(measured) };
                judged(at, measured, Amount::reaches, Bound::AtLeast)
            }
            Role::Credit => self.credit(at, rule),
            Role::PrimaryFlow => {
                let flow = self.area.facts.primary.flow.ok_or(NO_FLOW);
                let demand = if self.applied.binding { self.basis.demand() } else { self.demand_held() };
                of(at, rule, flow.map(|flow| (Amount::Flow(demand), Amount::Flow(flow * rule.times()))))
            }
        }
    }

    /// The greatest demand that a layout of this area is held to in any case.
    fn demand_held(&self) -> crate::units::Flow {
        let area = self.roof.areas.iter().position(|area| std::ptr::eq(area, self.area)).unwrap_or_default();
        let demands = self.roof.situations(area).into_iter().map(|situation| situation.demand);
        demands.fold(crate::units::Flow::ZERO, crate::units::Flow::max)
    }

    fn sill(
        &self,
        rule: &Rule,
        group: &Group<'_>,
        datum: fn(&Rule, &crate::device::Size, &Catchment) -> Result<Length, Open>,
    ) -> Measure {
        let datum = datum(rule, group.size, self.area)?;
        let above = Length::from_nm(group.set_height.nm() - datum.on_grid().nm());
        let number = rule.bound.ok_or(Open::NotApplicable("the rule has no number"))?.amount();
        Ok((Amount::Length(above), number))
    }

    fn counted(&self, required: u32, counts: impl Fn(&Group<'_>) -> bool) -> (Amount, Amount) {
        let counted = self.groups.iter().filter(|group| counts(group)).map(|group| group.count).sum();
        (Amount::Count(counted), Amount::Count(required))
    }

    /// The edge that each opening serves, where they stand evenly along it.
    fn spacing(&self, rule: &Rule, least: Result<u32, Open>) -> Measure {
        let at_edge = |group: &&Group<'_>| group.size.place == Place::Edge;
        let openings: u32 = self.groups.iter().filter(at_edge).map(|group| group.count).sum();
        if openings == 0 {
            return Err(Open::NotApplicable("no opening at the edge"));
        }
        least?;
        let edge = self.area.edge.ok_or(Open::NotApplicable("no edge"))?;
        let most = rule.bound.ok_or(Open::NotApplicable("the rule has no number"))?.amount();
        Ok((Amount::Length(edge * (1.0 / f64::from(openings))), most))
    }

    /// The depth under what the set counts, without bound where the layout is overwhelmed; of a rule that asks for so much
    /// above the water, what is left there.
    fn depth(&self, rule: &Rule, most: Length) -> (Amount, Amount) {
        let depth = self.state.water.map_or(Length::from_m(f64::INFINITY), |water| water.depth());
        match rule.bound {
            Some(Bound::AtLeast(Amount::Length(least))) => {
                (Amount::Length(most + least - depth), Amount::Length(least))
            }
            _ => (Amount::Length(depth), Amount::Length(most)),
        }
    }

    fn freeboard(&self, rule: &Rule) -> Measure {
        let number = rule.bound.ok_or(Open::NotApplicable("the rule has no number"))?.amount();
        if self.state.water.is_none() {
            return Ok((Amount::Length(Length::from_m(f64::NEG_INFINITY)), number));
        }
        let free = self.state.groups.iter().filter_map(|group| group.freeboard).reduce(Length::min);
        let free = free.ok_or(Open::NotApplicable("no closed opening"))?;
        Ok((Amount::Length(free), number))
    }

    /// The limits of the area under what the set counts: that which governs.
    fn limits(&self, at: RuleAt) -> Finding {
        let asked = layout::Asked::default();
        let given = self.area.facts.limits;
        if given.load.is_none() && given.depth.is_none() && self.area.parapet.height.is_none() {
            return open(at, Open::Missing("a limit that holds in every case"));
        }
        let own = Situation { limits: given, freeboard: None, ..self.situation };
        let holds = layout::holds(self.groups, &own, asked);
        let verdict = if holds { Verdict::Pass } else { Verdict::Fail };
        let most = |amount| Some(Required::Bound(Bound::AtMost(amount)));
        let Some(water) = self.state.water else {
            let required = given.load.map(Amount::Load).or(given.depth.map(Amount::Length)).and_then(most);
            return Finding { at, verdict, found: None, required };
        };
        let (found, required) = match own.governing(water.level).limit {
            LimitKind::Load => (Amount::Load(water.load), given.load.map(Amount::Load)),
            LimitKind::Depth => (Amount::Length(water.depth()), given.depth.map(Amount::Length)),
            LimitKind::Parapet => (Amount::Length(water.depth()), self.area.parapet.height.map(Amount::Length)),
        };
        Finding { at, verdict, found: Some(found), required: required.and_then(most) }
    }

    /// The rain that the layout is held to against that of the rule.
    fn rain(&self, at: RuleAt, rule: &Rule) -> Finding {
        let storm = &self.roof.storm;
        let counts = |rule: &&Rule| matches!(rule.kind.role, Role::Rain) && rain(rule, storm, self.area).is_ok();
        let first = self.applied.set.rules.iter().find(counts);
        if first.is_some_and(|first| !std::ptr::eq(first, rule)) {
            return open(at, Open::NotApplicable("another storm of the set counts"));
        }
        let held = if self.applied.binding { self.basis.intensity } else { storm.intensity };
        let required =
            rain(rule, storm, self.area).map(|rain| (Amount::Intensity(held), Amount::Intensity(rain.intensity)));
        judged(at, required, Amount::reaches, Bound::AtLeast)
    }

    fn credit(&self, at: RuleAt, rule: &Rule) -> Finding {
        if !is_credit(rule) {
            return Finding {
                at,
                verdict: Verdict::Pass,
                found: None,
                required: Some(Required::Is(Amount::Yes(false))),
            };
        }
        match self.area.facts.primary.flow {
            None => open(at, NO_FLOW),
            Some(_) => Finding {
                at,
                verdict: Verdict::Pass,
                found: Some(Amount::Flow(self.basis.credited)),
                required: Some(Required::Is(Amount::Yes(true))),
            },
        }
    }
}

const NO_FLOW: Open = Open::Missing("what the primary drains carry: primary = { flow = .. }");

fn open(at: RuleAt, open: Open) -> Finding {
    let verdict = match open {
        Open::NotApplicable(why) => Verdict::NotApplicable(why),
        Open::Missing(what) => Verdict::CannotTell(what),
    };
    Finding { at, verdict, found: None, required: None }
}

fn judged(
    at: RuleAt,
    measured: Measure,
    keeps: impl Fn(Amount, Amount) -> bool,
    asks: impl Fn(Amount) -> Bound,
) -> Finding {
    match measured {
        Err(why) => open(at, why),
        Ok((found, required)) => Finding {
            at,
            verdict: if keeps(found, required) { Verdict::Pass } else { Verdict::Fail },
            found: Some(found),
            required: Some(Required::Bound(asks(required))),
        },
    }
}

fn of(at: RuleAt, rule: &Rule, measured: Measure) -> Finding {
    match (measured, rule.bound) {
        (Err(why), _) => open(at, why),
        (Ok((found, required)), bound) => Finding {
            at,
            verdict: if kept(rule, found, required) { Verdict::Pass } else { Verdict::Fail },
            found: Some(found),
            required: Some(bound.map_or(Required::Is(required), |bound| Required::Bound(bound.with(required)))),
        },
    }
}

/// What a rule says of several openings: a failing one, else one that cannot be told, else the one that keeps it by least.
fn of_worst(at: RuleAt, rule: &Rule, measured: impl Iterator<Item = Measure>) -> Finding {
    let rank = |finding: &Finding| match finding.verdict {
        Verdict::Fail => 0,
        Verdict::CannotTell(_) => 1,
        Verdict::Pass => 2,
        Verdict::NotApplicable(_) => 3,
    };
    let worse = |one: Finding, other: Finding| match rank(&one).cmp(&rank(&other)) {
        std::cmp::Ordering::Less => one,
        std::cmp::Ordering::Greater => other,
        std::cmp::Ordering::Equal => match (rule.bound, one.found, other.found) {
            (Some(bound), Some(first), Some(second)) if !bound.with(first).holds(second) => other,
            _ => one,
        },
    };
    let none = open(at, Open::NotApplicable("no device"));
    measured.map(|measured| of(at, rule, measured)).reduce(worse).unwrap_or(none)
}
