//! Verdicts: rule by rule, what was found, what is required, and whether that passes.

use crate::device::Place;
use crate::roof::layout::{self, CaseState, Group};
use crate::roof::{AreaBasis, Case, Catchment, LimitKind, Roof, Situation};
use crate::units::{Area, Flow, Intensity, Length};

use super::amount::Amount;
use super::basis::{NO_FLOW, counted_walls, is_credit, rain};
use super::kind::{Datum, Measure, Open, Role};
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
    index: usize,
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
            index: area,
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
                let one = |group: &Group<'_>| of(at, rule, measure(rule, group.size, self.area));
                of_worst(at, rule, self.groups.iter().map(one))
            }
            Role::Sill(datum) => {
                let one = |group: &Group<'_>| sill(at, rule, group, datum(rule, group.size, self.area));
                of_worst(at, rule, self.groups.iter().map(one))
            }
            Role::Count(least) => of(at, rule, least(rule, self.area).map(|least| self.counted(least, |_| true))),
            Role::AtEdge(least) => of(at, rule, self.spacing(rule, least(rule, self.area))),
            Role::Depth(depth) => {
                self.by_its_water(of(at, rule, depth(rule, self.area).map(|most| self.depth(rule, most))))
            }
            Role::Freeboard => self.by_its_water(of(at, rule, self.freeboard(rule))),
            Role::Limits => self.by_its_water(self.limits(at)),
            Role::Area(measure) => of(at, rule, measure(rule, self.area, self.basis)),
            Role::Rain => self.rain(at, rule),
            Role::Walls => judged(at, self.walls(rule), Amount::reaches, Bound::AtLeast),
            Role::Credit => self.credit(at, rule),
            Role::PrimaryFlow => {
                let flow = self.area.facts.primary.flow.ok_or(Open::Missing(NO_FLOW));
                of(at, rule, flow.map(|flow| (Amount::Flow(self.demand_held()), Amount::Flow(flow * rule.times()))))
            }
        }
    }

    /// A verdict that goes by the water of the set; where something stands in for the demand, only what holds all the same.
    fn by_its_water(&self, finding: Finding) -> Finding {
        let Some(stands_in) = self.basis.stands_in else { return finding };
        let open = match finding.verdict {
            Verdict::Pass => stands_in.may_be_more,
            Verdict::Fail => stands_in.may_be_less,
            Verdict::NotApplicable(_) | Verdict::CannotTell(_) => false,
        };
        if open { Finding { verdict: Verdict::CannotTell(stands_in.missing), ..finding } } else { finding }
    }

    /// How the sets count this area by which cases hold a layout to something; none for a case that counts as the project.
    fn cases_held(&self) -> impl Iterator<Item = (&Case, Option<&AreaBasis>)> {
        let counted = |case: &Case| case.basis.map(|basis| &self.roof.bases[basis].areas[self.index]);
        self.roof.cases.iter().map(move |case| (case, counted(case)))
    }

    /// The greatest demand that a layout of this area is held to in any case.
    fn demand_held(&self) -> Flow {
        let demands = self.roof.situations(self.index).into_iter().map(|situation| situation.demand);
        demands.fold(Flow::ZERO, Flow::max)
    }

    /// The greatest walls that a layout of this area is held to against those of the rule.
    fn walls(&self, rule: &Rule) -> Measure {
        if self.area.wall == Area::ZERO && self.area.facts.walls.is_empty() {
            return Err(Open::NotApplicable("no wall sheds on the area"));
        }
        let by_project = self.area.wall * self.area.wall_share;
        let walls = self.cases_held().map(|(_, basis)| basis.map_or(by_project, |basis| basis.wall));
        let held = walls.fold(Area::ZERO, Area::max);
        Ok((Amount::Area(held), Amount::Area(counted_walls(rule, self.area))))
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
        let of_case = |(case, basis): (&Case, Option<&AreaBasis>)| {
            basis.map_or(storm.intensity, |basis| basis.intensity) * case.rain
        };
        let held = self.cases_held().map(of_case).fold(Intensity::ZERO, Intensity::max);
        let required =
            rain(rule, storm, self.area).map(|rain| (Amount::Intensity(held), Amount::Intensity(rain.intensity)));
        judged(at, required, Amount::reaches, Bound::AtLeast)
    }

    /// Whether what a layout is held to counts the primary drains as the rule has it: it may leave a credit out that the rule
    /// gives, but not take one that the rule refuses, in every case.
    fn credit(&self, at: RuleAt, rule: &Rule) -> Finding {
        let gives = is_credit(rule);
        if gives && self.area.facts.primary.flow.is_none() {
            return open(at, Open::Missing(NO_FLOW));
        }
        let credited = |(_, basis): (&Case, Option<&AreaBasis>)| basis.map_or(Flow::ZERO, |basis| basis.credited);
        let taken = self.cases_held().map(credited).reduce(Flow::min).unwrap_or(Flow::ZERO);
        let takes = taken > Flow::ZERO;
        Finding {
            at,
            verdict: if takes && !gives { Verdict::Fail } else { Verdict::Pass },
            found: Some(if takes { Amount::Flow(taken) } else { Amount::Yes(false) }),
            required: Some(Required::Is(if gives { Amount::Word("allowed") } else { Amount::Yes(false) })),
        }
    }
}

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

/// The sills of a group against a rule: where the datum is not given, only what holds at any that it may be.
fn sill(at: RuleAt, rule: &Rule, group: &Group<'_>, datum: Result<Datum, Open>) -> Finding {
    let (datum, number) = match (datum, rule.bound.map(Bound::amount)) {
        (Err(why), _) => return open(at, why),
        (_, None) => return open(at, Open::NotApplicable("the rule has no number")),
        (Ok(datum), Some(number)) => (datum, number),
    };
    let above = Length::from_nm(group.set_height.nm() - datum.height.on_grid().nm());
    let finding = of(at, rule, Ok((Amount::Length(above), number)));
    let lower_decides = matches!(
        (finding.verdict, rule.bound),
        (Verdict::Pass, Some(Bound::AtLeast(_))) | (Verdict::Fail, Some(Bound::AtMost(_)))
    );
    match datum.missing {
        Some(missing) if lower_decides => open(at, Open::Missing(missing)),
        _ => finding,
    }
}

/// What a rule says of several openings: a failing one, else one that cannot be told, else the one that keeps it by least.
fn of_worst(at: RuleAt, rule: &Rule, of_each: impl Iterator<Item = Finding>) -> Finding {
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
    of_each.reduce(worse).unwrap_or(none)
}
