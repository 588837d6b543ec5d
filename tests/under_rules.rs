//! Searches under binding rule sets against trying everything: what each rule forbids is worked out here once more, in other
//! words than the program's.

use std::collections::BTreeSet;
use std::sync::Arc;

use brimline::device::{Choice, Device, Place, RingDrain, Size};
use brimline::roof::layout::{self, Asked, Group};
use brimline::roof::{Case, Catchment, Facts, GivenGroup, Limits, Parapet, Primary, Roof, Situation, Storm, demand};
use brimline::rules::{
    self, Amount, Applied, Bound, KINDS, Kind as RuleKind, Known, Rule, RuleAt, RuleSet, Rulebook, Verdict,
};
use brimline::search::{self, Criterion, Options, Outcome, PlanAsked, Relaxation, Watch};
use brimline::units::{Area, Intensity, Length, Load, Money, System};

struct Dice(u64);

impl Dice {
    fn upto(&mut self, most: u64) -> u64 {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        self.0 % (most + 1)
    }

    fn one_in(&mut self, many: u64) -> bool {
        self.upto(many - 1) == 0
    }

    fn inches(&mut self, from: u64, to: u64) -> Length {
        grid((from + self.upto(to - from)) as f64)
    }
}

fn grid(inches: f64) -> Length {
    Length::from_nm(Length::inches(inches).nm())
}

/// What a random set asks, each where it asks it.
#[derive(Clone, Copy, Debug, Default)]
struct Asks {
    width: Option<Length>,
    height: Option<Length>,
    outlet: Option<f64>,
    sill_above_low_point: Option<Length>,
    sill_above_wall: Option<(Length, Length)>,
    count: Option<(u32, f64)>,
    spacing: Option<Length>,
    depth: Option<Length>,
    freeboard: Option<Length>,
    rain: Option<f64>,
    /// Whether walls count not at all, where the set says anything of them.
    no_walls: bool,
}

impl Asks {
    fn random(dice: &mut Dice) -> Self {
        Self {
            width: dice.one_in(3).then(|| dice.inches(5, 9)),
            height: dice.one_in(3).then(|| dice.inches(3, 6)),
            outlet: dice.one_in(5).then(|| 0.75 + dice.upto(2) as f64 * 0.25),
            sill_above_low_point: dice.one_in(3).then(|| dice.inches(1, 2)),
            sill_above_wall: dice.one_in(4).then(|| (dice.inches(0, 1), dice.inches(2, 3))),
            count: dice.one_in(4).then(|| (1 + dice.upto(1) as u32, 100.0 + dice.upto(300) as f64)),
            spacing: dice.one_in(3).then(|| dice.inches(40, 200)),
            depth: dice.one_in(4).then(|| dice.inches(4, 7)),
            freeboard: dice.one_in(4).then(|| grid(dice.upto(2) as f64 * 0.5)),
            rain: dice.one_in(2).then(|| 0.6 + dice.upto(8) as f64 / 10.0),
            no_walls: dice.one_in(3),
        }
    }

    fn set(&self, title: &str) -> RuleSet {
        let mut rules = Vec::new();
        let mut add = |name: &str, bound, terms: &[(&'static str, Amount)]| {
            let kind: &'static RuleKind = KINDS.into_iter().find(|kind| kind.name == name).expect("a kind");
            let text = || String::from("this test");
            let rule = Rule {
                kind,
                bound,
                terms: terms.to_vec(),
                clause: text(),
                source: text(),
                known: Known::Read,
                note: None,
            };
            rules.push(rule);
        };
        let least = |length| Some(Bound::AtLeast(Amount::Length(length)));
        let most = |length| Some(Bound::AtMost(Amount::Length(length)));
        if let Some(width) = self.width {
            add("opening-width", least(width), &[]);
        }
        if let Some(height) = self.height {
            add("opening-height", least(height), &[]);
        }
        if let Some(times) = self.outlet {
            add("outlet-by-drain", Some(Bound::AtLeast(Amount::Times(times))), &[]);
        }
        if let Some(sill) = self.sill_above_low_point {
            add("set-height", least(sill), &[("above", Amount::Word("low point"))]);
        }
        if let Some((from, to)) = self.sill_above_wall {
            let terms = [("above", Amount::Word("roof at wall")), ("for", Amount::Word("scuppers"))];
            add("set-height", least(from), &terms);
            add("set-height", most(to), &terms);
        }
        if let Some((first, each)) = self.count {
            let each = Amount::Area(Area::from_m2(each));
            add("count", Some(Bound::AtLeast(Amount::Count(first))), &[("for_each", each)]);
        }
        if let Some(spacing) = self.spacing {
            add("spacing", most(spacing), &[]);
        }
        if let Some(depth) = self.depth {
            add("depth", most(depth), &[]);
        }
        if let Some(freeboard) = self.freeboard {
            add("freeboard", least(freeboard), &[]);
        }
        if let Some(times) = self.rain {
            add("storm", None, &[("times", Amount::Times(times))]);
        }
        if self.no_walls {
            add("walls", None, &[("count", Amount::Word("none"))]);
        }
        if rules.is_empty() {
            return Self { rain: Some(1.0), ..*self }.set(title);
        }
        RuleSet { title: title.into(), standard: None, year: None, note: None, rules }
    }

    /// Whether a group may stand so, by what the set says of openings and sills.
    fn allows(&self, size: &Size, set_height: Length, area: &Catchment) -> bool {
        let (width, height) = match &size.device {
            Device::Open { width } => (Some(*width), None),
            Device::Closed { width, height } => (Some(*width), Some(*height)),
            _ => (None, None),
        };
        let no_less = |found: Option<Length>, asked: Option<Length>| match (found, asked) {
            (Some(found), Some(asked)) => found.nm() >= asked.nm(),
            _ => true,
        };
        let outlet = match (&size.device, self.outlet, area.facts.primary.drain) {
            (Device::Drain(drain), Some(times), Some(primary)) => drain.throat.m() >= primary.m() * times - 1e-9,
            _ => true,
        };
        let above_wall = self.sill_above_wall.is_none_or(|(from, to)| {
            let above = set_height.nm() - area.roof_at_wall.nm();
            size.place == Place::Interior || (from.nm() <= above && above <= to.nm())
        });
        no_less(width, self.width)
            && no_less(height, self.height)
            && outlet
            && no_less(Some(set_height), self.sill_above_low_point)
            && above_wall
    }

    /// Whether so many openings at the edge and elsewhere are enough.
    fn enough(&self, at_edge: u32, all: u32, area: &Catchment) -> bool {
        let needs = self.count.map_or(0, |(first, each)| {
            let more = (area.area.m2() - each) / each;
            first + if more > 0.0 { more.ceil() as u32 } else { 0 }
        });
        let near = match (self.spacing, area.edge) {
            (Some(spacing), Some(edge)) if at_edge > 0 => edge.m() / f64::from(at_edge) <= spacing.m() + 1e-9,
            _ => true,
        };
        all >= needs && near
    }
}

fn sizes(dice: &mut Dice) -> Vec<Size> {
    let many = 2 + dice.upto(2);
    (0..many)
        .map(|index| {
            let device = match dice.upto(4) {
                0 => Device::Open { width: dice.inches(4, 14) },
                1 => Device::Drain(RingDrain {
                    dam: dice.inches(8, 12),
                    dam_height: grid(2.0),
                    throat: dice.inches(3, 6),
                    free_area: None,
                }),
                _ => Device::Closed { width: dice.inches(4, 14), height: dice.inches(3, 8) },
            };
            let price = Some(Money::from_millionths(i64::try_from(200 + dice.upto(900)).expect("small") * 1_000_000));
            Size { tag: format!("{index}").into(), price, ..Size::of(device) }
        })
        .collect()
}

fn area(dice: &mut Dice, cases: usize) -> Catchment {
    let limits =
        Limits { load: Some(Load::psf(15.0 + dice.upto(18) as f64)), depth: dice.one_in(4).then(|| dice.inches(4, 8)) };
    let least = 1 + dice.upto(1) as u32;
    let start = 1 + dice.upto(1);
    Catchment {
        name: "area".into(),
        area: Area::from_m2(30.0 + dice.upto(700) as f64),
        wall: Area::from_m2(dice.upto(2) as f64 * 150.0),
        edge: (!dice.one_in(3)).then(|| dice.inches(100, 500)),
        gap: grid(6.0),
        parapet: Parapet { height: dice.one_in(2).then(|| dice.inches(8, 14)), thickness: None },
        roof_at_wall: dice.inches(0, 1),
        count: least..=least + 3,
        set_heights: Some((0..3).map(|step| grid((start + step) as f64)).collect()),
        limits: vec![limits; cases],
        facts: Facts {
            limits,
            primary: Primary { drain: (!dice.one_in(3)).then(|| dice.inches(3, 6)), ..Primary::default() },
            ..Facts::default()
        },
        ..Catchment::default()
    }
}

/// A roof under sets, and its options; the case of each set stands last, in their order.
fn roof(dice: &mut Dice, areas: usize, asks: &[Asks]) -> (Roof, Options) {
    let blocked = Case { name: "blocked".into(), blocked: 1, ..Case::as_designed() };
    let mut cases = vec![Case::as_designed()];
    if dice.one_in(2) {
        cases.push(blocked);
    }
    let storm = Storm { intensity: Intensity::from_m_per_s(3e-5), ..Storm::default() };
    let (sizes, own) = (sizes(dice), cases.len());
    let mut areas: Vec<Catchment> = (0..areas).map(|_| area(dice, own + asks.len())).collect();
    if areas.len() > 1 && !dice.one_in(3) {
        // Alike but for roof, wall and edge: searched together.
        let first = areas[0].clone();
        let count = *first.count.start()..=first.count.end() + 3;
        for area in &mut areas {
            let (roof, wall, edge) = (area.area, area.wall, area.edge);
            *area = Catchment { area: roof, wall, edge, count: count.clone(), ..first.clone() };
        }
    }
    let applied =
        |(index, asks): (usize, &Asks)| Applied { set: Arc::new(asks.set(&format!("set {index}"))), binding: true };
    let book = Rulebook { sets: asks.iter().enumerate().map(applied).collect() };
    let mut roof = Roof {
        title: String::new(),
        system: System::Us,
        demands: demand::flows(&storm, &areas).expect("no circle"),
        storm,
        cases,
        areas,
        sizes,
        choice: Choice::default(),
        bases: Vec::new(),
    };
    roof.bases = rules::bases(&book, &roof);
    roof.cases.extend(roof.bases.iter().map(|basis| basis.case.clone()));
    let options = Options {
        rank_by: vec![Criterion::Cost],
        keep: 10_000,
        mix: 2,
        freeboard: dice.one_in(4).then(|| grid(0.5)),
        fold: false,
        watch: Watch::default(),
        rules: Arc::new(book),
    };
    (roof, options)
}

type Groups = Vec<(usize, u32)>;

/// The lowest height at which a size may stand in an area under all sets.
fn lowest(roof: &Roof, area: &Catchment, asks: &[Asks], size: usize) -> Option<Length> {
    let size = &roof.sizes[size];
    let at_edge = size.place == Place::Edge;
    let too_long = |edge: Length| at_edge && size.clear_width().nm() > edge.nm();
    if area.edge.is_some_and(too_long) {
        return None;
    }
    let stands = |height: &Length| {
        let over_roof = !at_edge || height.nm() >= area.roof_at_wall.nm();
        let under = area.parapet.height.zip(size.device.height()).filter(|_| at_edge);
        let under_parapet = under.is_none_or(|(parapet, opening)| height.nm() + opening.nm() < parapet.nm());
        over_roof && under_parapet
    };
    let allowed = |height: &Length| asks.iter().all(|asks| asks.allows(size, *height, area));
    let heights = area.set_heights.as_ref().expect("given above");
    heights.iter().copied().find(|height| stands(height) && allowed(height))
}

/// Whether groups hold an area of the roof under all sets.
fn holds(roof: &Roof, options: &Options, index: usize, asks: &[Asks], groups: &Groups) -> bool {
    let area = &roof.areas[index];
    let mut stand = Vec::new();
    for &(size, count) in groups {
        let Some(set_height) = lowest(roof, area, asks, size) else { return false };
        stand.push(Group { size: &roof.sizes[size], count, set_height });
    }
    stand.extend(area.existing.iter().map(GivenGroup::group));
    let all: u32 = stand.iter().map(|group| group.count).sum();
    let at_edge = || stand.iter().filter(|group| group.size.place == Place::Edge);
    let openings: u32 = at_edge().map(|group| group.count).sum();
    let used: i64 = at_edge().map(|group| group.size.clear_width().nm() * i64::from(group.count)).sum();
    let gaps = area.gap.nm() * i64::from(openings.saturating_sub(1));
    let fits = openings == 0 || area.edge.is_none_or(|edge| used + gaps <= edge.nm());
    // What is there may be more than an area may have: then nothing is added.
    let many = all > *area.count.end() && !groups.is_empty();
    if all < *area.count.start() || many || !fits || !asks.iter().all(|asks| asks.enough(openings, all, area)) {
        return false;
    }
    let own = roof.cases.len() - asks.len();
    let of_project = (0..own)
        .all(|case| layout::holds(&stand, &roof.situation(index, case), Asked { freeboard: options.freeboard }));
    let of_sets = asks.iter().all(|asks| {
        // The set's case, from what it asks: as drawn, its rain, its cap, its freeboard.
        let designed = roof.situation(index, 0);
        let wall = if asks.no_walls { Area::ZERO } else { area.wall * 0.5 };
        let depth = [designed.limits.depth, asks.depth].into_iter().flatten().reduce(Length::min);
        let own = Situation {
            demand: roof.storm.intensity * asks.rain.unwrap_or(1.0) * (area.area + wall),
            limits: Limits { depth, ..designed.limits },
            ..designed
        };
        let freeboard = [options.freeboard, asks.freeboard].into_iter().flatten().reduce(Length::max);
        layout::holds(&stand, &own, Asked { freeboard })
    });
    of_project && of_sets
}

/// Every choice of one or two sizes with every count.
fn every(roof: &Roof, area: usize) -> Vec<Groups> {
    let most = *roof.areas[area].count.end();
    let mut all: Vec<Groups> = Vec::new();
    for first in 0..roof.sizes.len() {
        for count in 1..=most {
            all.push(vec![(first, count)]);
            for second in first + 1..roof.sizes.len() {
                all.extend((1..=most - count).map(|other| vec![(first, count), (second, other)]));
            }
        }
    }
    all
}

fn holding(roof: &Roof, options: &Options, area: usize, asks: &[Asks]) -> BTreeSet<Groups> {
    every(roof, area).into_iter().filter(|groups| holds(roof, options, area, asks, groups)).collect()
}

fn cost(roof: &Roof, groups: &Groups) -> i64 {
    groups.iter().map(|&(size, count)| roof.sizes[size].price.expect("priced").millionths() * i64::from(count)).sum()
}

fn asks(dice: &mut Dice) -> Vec<Asks> {
    (0..=dice.upto(2)).map(|_| Asks::random(dice)).collect()
}

fn dice(seed: u64) -> Dice {
    Dice(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15))
}

/// Sets with only those of their rules that are kept.
fn only(asks: &[Asks], keeps: impl Fn(&RuleAt) -> bool) -> Vec<Asks> {
    let of_set = |(set, one): (usize, &Asks)| {
        let all = (0..one.each_without().len()).rev().map(|rule| RuleAt { set, rule });
        all.filter(|at| !keeps(at)).fold(*one, |left, at| left.each_without().remove(at.rule))
    };
    asks.iter().enumerate().map(of_set).collect()
}

/// The rules said to stand against each other leave no layout, and leave one without any of them; several that are to be waived
/// together cure, and no longer do with one of them back. How many roofs say either, of two rules or more.
fn check_together(roof: &Roof, options: &Options, asks: &[Asks], cures: &search::Cures, seed: u64) -> usize {
    let holds = |asks: &[Asks]| !holding(roof, options, 0, asks).is_empty();
    let conflict = &cures.conflict;
    if !conflict.is_empty() {
        assert!(!holds(&only(asks, |at| conflict.contains(at))), "seed {seed}: {conflict:?} of {asks:?}");
        for out in conflict {
            assert!(holds(&only(asks, |at| conflict.contains(at) && at != out)), "seed {seed}: {out:?} of {asks:?}");
        }
    }
    let several = cures.found.iter().find_map(|cure| match &cure.change {
        Relaxation::Rules(waived) if waived.len() > 1 => Some(waived),
        _ => None,
    });
    if let Some(waived) = several {
        assert!(holds(&only(asks, |at| !waived.contains(at))), "seed {seed}: {waived:?} of {asks:?}");
        for back in waived {
            assert!(!holds(&only(asks, |at| !waived.contains(at) || at == back)), "seed {seed}: {back:?} of {asks:?}");
        }
    }
    usize::from(conflict.len() > 1 || several.is_some())
}

/// The layouts listed, all of them kept, are those that trying everything finds; each is said to keep every binding rule; where
/// there are none, every rule whose waiver is offered as a cure cures, and no other would.
#[test]
fn binding_sets_leave_what_trying_everything_leaves() {
    let (mut some, mut none, mut waived, mut with_rules_alone, mut together) = (0, 0, 0, 0, 0);
    for seed in 1..=1500_u64 {
        let mut dice = dice(seed);
        let asks = asks(&mut dice);
        let (roof, options) = roof(&mut dice, 1, &asks);
        let answer = search::size(&roof, &options, &[0]).remove(0);
        let tried = holding(&roof, &options, 0, &asks);
        let place = |size: &Size| roof.sizes.iter().position(|known| std::ptr::eq(known, size)).expect("one of them");
        let Outcome::Optimal(layouts) = &answer.outcome else {
            assert!(tried.is_empty(), "seed {seed}: {asks:?}");
            none += 1;
            let cures = search::cures(&roof, &options, 0);
            let offered: BTreeSet<(usize, usize)> = cures
                .found
                .iter()
                .filter_map(|cure| match &cure.change {
                    Relaxation::Rules(waived) if waived.len() == 1 => Some((waived[0].set, waived[0].rule)),
                    _ => None,
                })
                .collect();
            together += check_together(&roof, &options, &asks, &cures, seed);
            for (set, one) in asks.iter().enumerate() {
                for (rule, lesser) in one.each_without().into_iter().enumerate() {
                    let mut left = asks.clone();
                    left[set] = lesser;
                    let cures = !holding(&roof, &options, 0, &left).is_empty();
                    assert_eq!(offered.contains(&(set, rule)), cures, "seed {seed}: {set} {rule} of {asks:?}");
                    waived += usize::from(cures);
                }
            }
            continue;
        };
        let found: BTreeSet<Groups> = layouts
            .iter()
            .map(|layout| layout.groups.iter().map(|placed| (place(placed.group.size), placed.group.count)).collect())
            .collect();
        assert_eq!(found, tried, "seed {seed}: {asks:?}");
        some += 1;
        with_rules_alone += usize::from(tried != holding(&roof, &options, 0, &vec![Asks::default(); asks.len()]));
        for layout in layouts {
            let groups: Vec<Group<'_>> = layout.groups.iter().map(|placed| placed.group).collect();
            for finding in rules::findings(&options.rules, &roof, 0, &groups) {
                assert_ne!(finding.verdict, Verdict::Fail, "seed {seed}: {finding:?}");
            }
        }
    }
    assert!(some > 300 && none > 300, "{some} with layouts, {none} without");
    assert!(waived > 100 && with_rules_alone > 150, "{waived} rules waived, {with_rules_alone} where rules forbid");
    assert!(together > 50, "{together} roofs with rules against each other");
}

/// What is there already and may be closed, under binding sets: the sets restrict what stays and what is added; the layouts
/// listed are those of trying every closing with everything that may be added.
#[test]
fn what_may_be_closed_under_binding_sets_is_what_trying_everything_closes() {
    let (mut closing, mut closing_alone, mut none) = (0, 0, 0);
    for seed in 1..=600_u64 {
        let mut dice = dice(seed + 90_000);
        let asks = asks(&mut dice);
        let (mut roof, options) = roof(&mut dice, 1, &asks);
        let sizes = sizes(&mut dice);
        let area = &mut roof.areas[0];
        for size in sizes.into_iter().take(1 + usize::from(dice.one_in(2))) {
            let size = Size { price: Some(Money::default()), ..size };
            area.existing.push(GivenGroup { size, count: 1 + dice.upto(1) as u32, set_height: dice.inches(1, 4) });
        }
        let at_edge = area.existing.iter().filter(|group| group.size.place == Place::Edge);
        let taken = rules::edge_used(at_edge.map(|group| (&group.size, group.count)), area);
        area.edge = area.edge.map(|edge| Length::from_nm(edge.nm().max(taken)));
        let price = Money::from_millionths(i64::try_from(dice.upto(2)).expect("small") * 150_000_000);
        area.replace = Some(price);
        let existing = area.existing.clone();
        let mut tried: BTreeSet<(Vec<u32>, Groups, i64)> = BTreeSet::new();
        let ways = existing.iter().fold(vec![Vec::new()], |ways: Vec<Vec<u32>>, group| {
            ways.iter().flat_map(|way| (0..=group.count).map(|closed| [&way[..], &[closed]].concat())).collect()
        });
        for way in ways {
            let mut left = roof.clone();
            let there = existing.iter().zip(&way).map(|(group, closed)| {
                let count = group.count - closed;
                GivenGroup { count, ..group.clone() }
            });
            left.areas[0].existing = there.filter(|group| group.count > 0).collect();
            let choices = every(&left, 0).into_iter().chain([Vec::new()]);
            let closed: u32 = way.iter().sum();
            let kept = &left.areas[0].existing;
            let stays = |one: &Asks| kept.iter().all(|group| one.allows(&group.size, group.set_height, &left.areas[0]));
            if !asks.iter().all(stays) {
                continue;
            }
            let holding = choices.filter(|groups| holds(&left, &options, 0, &asks, groups));
            tried.extend(holding.map(|groups| {
                let cost = cost(&left, &groups) + (price * closed).millionths();
                (way.clone(), groups, cost)
            }));
        }
        let answer = search::size(&roof, &options, &[0]).remove(0);
        let place = |size: &Size| roof.sizes.iter().position(|known| std::ptr::eq(known, size)).expect("one of them");
        let told = |layout: &search::Ranked<'_>| {
            let closed = layout.closed.as_ref().expect("may be closed");
            let of = |given: &GivenGroup| {
                let mut groups = closed.groups.iter();
                let found = groups.find(|group| std::ptr::eq(group.size, &raw const given.size));
                found.map_or(0, |group| group.count)
            };
            // The roof's own, whose groups a layout points to.
            let way: Vec<u32> = roof.areas[0].existing.iter().map(of).collect();
            let added = &layout.groups[..layout.groups.len() - layout.kept];
            let added: Groups = added.iter().map(|placed| (place(placed.group.size), placed.group.count)).collect();
            (way, added, layout.cost.expect("priced").millionths())
        };
        let found: BTreeSet<_> = answer.outcome.layouts().iter().map(told).collect();
        assert_eq!(found, tried, "seed {seed}: {asks:?}");
        assert!(answer.outcome.layouts().is_sorted_by_key(|layout| layout.cost), "seed {seed}");
        closing += usize::from(tried.iter().any(|(way, _, _)| way.iter().any(|&closed| closed > 0)));
        closing_alone +=
            usize::from(tried.iter().any(|(way, added, _)| added.is_empty() && way.iter().any(|&n| n > 0)));
        none += usize::from(tried.is_empty());
    }
    assert!(closing > 150 && closing_alone > 20 && none > 80, "{closing} close, {closing_alone} alone, {none} without");
}

/// Areas alike are asked together which sizes are worth trying: under sets, and the freeboard that one asks, each answers as it
/// does alone.
#[test]
fn areas_alike_under_binding_sets_answer_as_each_alone() {
    let mut freeboards = 0;
    for seed in 1..=500_u64 {
        let mut dice = dice(seed + 130_000);
        let mut asks = asks(&mut dice);
        asks[0].freeboard = Some(grid(2.0));
        let (roof, options) = roof(&mut dice, 2, &asks);
        let options = Options { keep: 3, fold: true, freeboard: None, ..options };
        let told = |answer: &search::Answer<'_>| {
            let layouts = answer.outcome.layouts().iter();
            layouts.map(|layout| format!("{:?} {:?}", layout.cost, layout.groups)).collect::<Vec<_>>()
        };
        for together in search::size(&roof, &options, &[0, 1]) {
            let alone = search::size(&roof, &options, &[together.area]);
            assert_eq!(told(&together), told(&alone[0]), "seed {seed}, area {}", together.area);
            freeboards += usize::from(!alone[0].outcome.layouts().is_empty());
        }
    }
    assert!(freeboards > 100, "{freeboards} areas with layouts");
}

impl Asks {
    /// It without each of its rules, in the order in which they stand in its set.
    fn each_without(&self) -> Vec<Self> {
        let mut all = Vec::new();
        let mut without = |given: bool, lesser: Self| {
            if given {
                all.push(lesser);
            }
        };
        without(self.width.is_some(), Self { width: None, ..*self });
        without(self.height.is_some(), Self { height: None, ..*self });
        without(self.outlet.is_some(), Self { outlet: None, ..*self });
        without(self.sill_above_low_point.is_some(), Self { sill_above_low_point: None, ..*self });
        if let Some((from, to)) = self.sill_above_wall {
            let (under, over) = (grid(-100.0), grid(100.0));
            without(true, Self { sill_above_wall: Some((under, to)), ..*self });
            without(true, Self { sill_above_wall: Some((from, over)), ..*self });
        }
        without(self.count.is_some(), Self { count: None, ..*self });
        without(self.spacing.is_some(), Self { spacing: None, ..*self });
        without(self.depth.is_some(), Self { depth: None, ..*self });
        without(self.freeboard.is_some(), Self { freeboard: None, ..*self });
        without(self.rain.is_some(), Self { rain: None, ..*self });
        without(self.no_walls, Self { no_walls: false, ..*self });
        all
    }
}

/// The cheapest plan under rules costs what the best of every set of sizes costs.
#[test]
fn plans_under_binding_sets_are_those_of_trying_everything() {
    let (mut planned, mut none) = (0, 0);
    for seed in 1..=900_u64 {
        let mut dice = dice(seed + 10_000);
        let asks = asks(&mut dice);
        let many = 2 + dice.upto(1) as usize;
        let (roof, options) = roof(&mut dice, many, &asks);
        let options = Options { keep: 1, fold: true, ..options };
        let asked = PlanAsked { sizes: Some(1 + dice.upto(1) as u32), size_price: Money::from_millionths(100_000_000) };
        let areas: Vec<usize> = (0..many).collect();
        let of_each: Vec<Vec<Groups>> =
            areas.iter().map(|&area| holding(&roof, &options, area, &asks).into_iter().collect()).collect();
        let least = (1_u32..1 << roof.sizes.len())
            .filter(|set| set.count_ones() <= asked.sizes.expect("given"))
            .filter_map(|set| {
                let of_area = |layouts: &Vec<Groups>| {
                    let made_of_it =
                        layouts.iter().filter(|groups| groups.iter().all(|&(size, _)| set & 1 << size != 0));
                    made_of_it.map(|groups| cost(&roof, groups)).min()
                };
                let costs = of_each.iter().map(of_area).collect::<Option<Vec<i64>>>()?;
                Some(costs.iter().sum::<i64>() + asked.size_price.millionths() * i64::from(set.count_ones()))
            })
            .min();
        let found = search::plan(&roof, &options, asked, &areas).expect("all priced");
        let found = found.plans.first().map(|plan| plan.cost.millionths());
        assert_eq!(found, least, "seed {seed}: {asks:?}");
        if found.is_some() { planned += 1 } else { none += 1 }
    }
    assert!(planned > 100 && none > 100, "{planned} planned, {none} without");
}

/// The layouts that are not beaten are found among those that keep every rule.
#[test]
fn fronts_under_binding_sets_keep_every_rule() {
    let mut rows = 0;
    for seed in 1..=300_u64 {
        let mut dice = dice(seed + 50_000);
        let asks = asks(&mut dice);
        let (roof, options) = roof(&mut dice, 1, &asks);
        let tried = holding(&roof, &options, 0, &asks);
        let front = search::front(&roof, &options, &[0]).remove(0);
        let least = tried.iter().map(|groups| cost(&roof, groups)).min();
        let opened = front.opened(usize::MAX);
        assert_eq!(opened.first().and_then(|layout| layout.cost).map(Money::millionths), least, "seed {seed}");
        for layout in &opened {
            let place = |size: &Size| roof.sizes.iter().position(|known| std::ptr::eq(known, size)).expect("one");
            let groups: Groups =
                layout.groups.iter().map(|placed| (place(placed.group.size), placed.group.count)).collect();
            assert!(tried.contains(&groups), "seed {seed}: {groups:?} under {asks:?}");
            rows += 1;
        }
    }
    assert!(rows > 150, "{rows}");
}
