//! Plans against a solver of integer programs that knows nothing of layouts, pairs or bounds.
//!
//! The programs are written from the problem as an engineer states it, with flows from the practice form in inches and gallons
//! and demands from square feet and inches an hour; nothing of the library goes into them but the numbers that both are given.
//! One counts openings; it is the problem itself, and slow to solve. The other chooses among layouts, and solves larger roofs.

use std::sync::Arc;

use brimline::device::{Choice, Device, Size};
use brimline::roof::{Case, Catchment, Limits, Roof, Storm, demand};
use brimline::search::{self, Criterion, Options, PlanAsked, Watch};
use brimline::units::{Length, Load, Money, System};
use good_lp::{Constraint, Expression, ProblemVariables, Solution, SolverModel, Variable, microlp, variable};

/// A small generator of its own, so that a failing seed can be run again anywhere.
struct Dice(u64);

impl Dice {
    fn upto(&mut self, most: u32) -> u32 {
        self.0 = self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        ((self.0 >> 33) % u64::from(most + 1)) as u32
    }
}

/// A roof in the units of practice: inches, square feet, pounds a square foot.
struct Given {
    /// Width, height, price.
    sizes: Vec<(u32, u32, u32)>,
    areas: Vec<Ask>,
    most_devices: u32,
    most_sizes: u32,
    size_price: u32,
    gap: u32,
}

struct Ask {
    area_ft2: u32,
    /// As designed, and with one blocked.
    psf: [u32; 2],
    edge_in: Option<u32>,
}

const SET_HEIGHT: f64 = 2.0;
const RAIN: f64 = 6.3;

/// A roof of so many areas and sizes, or a few more.
fn given(dice: &mut Dice, areas: u32, sizes: u32) -> Given {
    let sizes = (0..sizes + dice.upto(sizes / 2))
        .map(|_| {
            let (width, height) = (6 + 2 * dice.upto(12), 3 + dice.upto(3));
            (width, height, 220 + 13 * width + 11 * height + dice.upto(70))
        })
        .collect();
    let mut psf = || {
        let designed = 22 + dice.upto(8);
        [designed, designed + dice.upto(7)]
    };
    let psf: Vec<[u32; 2]> = (0..6).map(|_| psf()).collect();
    let areas = (0..areas + dice.upto(areas / 2))
        .map(|_| Ask {
            area_ft2: 1500 + dice.upto(9000),
            psf: psf[dice.upto(5) as usize],
            edge_in: (dice.upto(2) == 0).then(|| 40 + dice.upto(180)),
        })
        .collect();
    let (most_devices, most_sizes) = (8, 2 + dice.upto(2));
    Given { sizes, areas, most_devices, most_sizes, size_price: 50 * dice.upto(8), gap: 6 * dice.upto(2) }
}

/// What one opening passes in gpm under a limit: 2.9 b H^1.5, or 4.3 b h sqrt(H - h/2) where that is less and it runs full.
fn flow(width: u32, height: u32, psf: u32) -> f64 {
    // 62.4 lb/ft3 is 5.2 psf an inch.
    let (width, height, head) = (f64::from(width), f64::from(height), f64::from(psf) / 5.2 - SET_HEIGHT);
    let weir = 2.9 * width * head * head.sqrt();
    if head <= height { weir } else { weir.min(4.3 * width * height * (head - height / 2.0).sqrt()) }
}

/// An inch an hour on a square foot is 144 / 231 gal in 60 min.
fn demand_gpm(area_ft2: u32) -> f64 {
    RAIN * f64::from(area_ft2) * 144.0 / 231.0 / 60.0
}

/// The least cost by counts of every size in every area; none where the program has no solution.
fn by_counts(given: &Given) -> Option<f64> {
    let mut variables = ProblemVariables::new();
    let wanted: Vec<Variable> = given.sizes.iter().map(|_| variables.add(variable().binary())).collect();
    let most = f64::from(given.most_devices);
    let mut rows = Vec::new();
    let mut cost: Expression = wanted.iter().map(|&size| size * f64::from(given.size_price)).sum();
    for ask in &given.areas {
        let counts: Vec<Variable> =
            given.sizes.iter().map(|_| variables.add(variable().integer().min(0).max(most))).collect();
        let used: Vec<Variable> = given.sizes.iter().map(|_| variables.add(variable().binary())).collect();
        let total = |of: &dyn Fn(usize) -> f64| -> Expression {
            counts.iter().enumerate().map(|(size, &count)| count * of(size)).sum()
        };
        let carried = |size: usize, case: usize| flow(given.sizes[size].0, given.sizes[size].1, ask.psf[case]);
        let demand = demand_gpm(ask.area_ft2);
        rows.push(total(&|_| 1.0).leq(most));
        rows.push(used.iter().sum::<Expression>().leq(2.0));
        rows.push(total(&|size| carried(size, 0)).geq(demand));
        for size in 0..given.sizes.len() {
            rows.push((counts[size] - used[size] * most).leq(0.0));
            rows.push((used[size] - wanted[size]).leq(0.0));
            // Whichever of the sizes used is the one blocked, the others carry the demand.
            rows.push((total(&|other| carried(other, 1)) - used[size] * carried(size, 1)).geq(demand));
        }
        if let Some(edge) = ask.edge_in {
            let gap = f64::from(given.gap);
            rows.push(total(&|size| f64::from(given.sizes[size].0) + gap).leq(f64::from(edge) + gap));
        }
        cost += total(&|size| f64::from(given.sizes[size].2));
    }
    rows.push(wanted.iter().sum::<Expression>().leq(f64::from(given.most_sizes)));
    solved(variables, cost, rows)
}

fn solved(variables: ProblemVariables, cost: Expression, rows: Vec<Constraint>) -> Option<f64> {
    let mut model = variables.minimise(cost.clone()).using(microlp);
    for row in rows {
        model = model.with(row);
    }
    model.solve().ok().map(|solution| solution.eval(cost))
}

/// The cheapest layout of two sizes, one of each at least, or of one size; none where none holds and fits.
fn cheapest(given: &Given, ask: &Ask, first: usize, second: usize) -> Option<u32> {
    let flows = |size: usize| ask.psf.map(|psf| flow(given.sizes[size].0, given.sizes[size].1, psf));
    let (a, b) = (flows(first), flows(second));
    let demand = demand_gpm(ask.area_ft2);
    let mut costs = Vec::new();
    for n in 1..=given.most_devices {
        for m in u32::from(first != second)..=if first == second { 0 } else { given.most_devices - n } {
            let total = |case: usize| f64::from(n) * a[case] + f64::from(m) * b[case];
            let greatest = if m > 0 { a[1].max(b[1]) } else { a[1] };
            let width = n * given.sizes[first].0 + m * given.sizes[second].0 + (n + m - 1) * given.gap;
            let fits = ask.edge_in.is_none_or(|edge| width <= edge);
            if fits && total(0) >= demand && total(1) - greatest >= demand {
                costs.push(n * given.sizes[first].2 + m * given.sizes[second].2);
            }
        }
    }
    costs.into_iter().min()
}

/// The least cost by a choice among every area's layouts: a layout can be had as far as each of its sizes is wanted.
fn by_layouts(given: &Given) -> Option<f64> {
    let mut variables = ProblemVariables::new();
    let count = given.sizes.len();
    let wanted: Vec<Variable> = given.sizes.iter().map(|_| variables.add(variable().binary())).collect();
    let mut rows = vec![wanted.iter().sum::<Expression>().leq(f64::from(given.most_sizes))];
    let mut cost: Expression = wanted.iter().map(|&size| size * f64::from(given.size_price)).sum();
    for ask in &given.areas {
        let mut chosen = Expression::default();
        let mut with: Vec<Expression> = vec![Expression::default(); count];
        for first in 0..count {
            for second in first..count {
                let Some(price) = cheapest(given, ask, first, second) else { continue };
                // With the sizes decided, the cheapest layout is chosen whole.
                let share = variables.add(variable().min(0).max(1));
                chosen += share;
                cost += share * f64::from(price);
                with[first] += share;
                if first != second {
                    with[second] += share;
                }
            }
        }
        rows.push(chosen.eq(1.0));
        rows.extend(with.into_iter().zip(&wanted).map(|(with, &size)| (with - size).leq(0.0)));
    }
    solved(variables, cost, rows)
}

/// The same roof as the library sees it.
fn roof(given: &Given) -> Roof {
    let inches = |count: u32| Length::from_nm(i64::from(count) * 25_400_000);
    let tag: Arc<str> = "RS".into();
    let size = |&(width, height, price): &(u32, u32, u32)| Size {
        tag: Arc::clone(&tag),
        price: Some(Money::nearest(f64::from(price))),
        ..Size::of(Device::Closed { width: inches(width), height: inches(height) })
    };
    let area = |ask: &Ask| Catchment {
        name: "area".into(),
        area: format!("{} ft2", ask.area_ft2).parse().expect("an area"),
        edge: ask.edge_in.map(inches),
        gap: inches(given.gap),
        count: 1..=given.most_devices,
        set_heights: Some(vec![Length::inches(SET_HEIGHT)]),
        limits: ask.psf.map(|psf| Limits { load: Some(Load::psf(f64::from(psf))), depth: None }).to_vec(),
        ..Catchment::default()
    };
    let areas: Vec<Catchment> = given.areas.iter().map(area).collect();
    let storm = Storm { intensity: format!("{RAIN} in/h").parse().expect("an intensity"), ..Storm::default() };
    let designed = Case::as_designed();
    Roof {
        title: "solver".into(),
        system: System::Us,
        demands: demand::flows(&storm, &areas).expect("no circle"),
        storm,
        cases: vec![designed.clone(), Case { name: "one blocked".into(), blocked: 1, ..designed }],
        areas,
        sizes: given.sizes.iter().map(size).collect(),
        choice: Choice::default(),
        bases: Vec::new(),
    }
}

/// The plans of random roofs against a program's; how many have one, and how many none.
fn compare(
    seeds: std::ops::RangeInclusive<u64>,
    areas: u32,
    sizes: u32,
    solve: impl Fn(&Given) -> Option<f64>,
) -> [u32; 2] {
    let (mut found, mut none) = (0, 0);
    for seed in seeds {
        let given = given(&mut Dice(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15)), areas, sizes);
        let roof = roof(&given);
        let options = Options {
            rank_by: vec![Criterion::Cost, Criterion::Load],
            keep: 1,
            mix: 2,
            freeboard: None,
            fold: true,
            watch: Watch::default(),
            rules: Arc::default(),
        };
        let size_price = Money::nearest(f64::from(given.size_price));
        let asked = PlanAsked { sizes: Some(given.most_sizes), size_price };
        let areas: Vec<usize> = (0..roof.areas.len()).collect();
        let plans = search::plan(&roof, &options, asked, &areas).expect("all priced");
        let ours = plans.plans.first().map(|plan| plan.cost.millionths() as f64 / 1e6);
        let theirs = solve(&given);
        match (ours, theirs) {
            (Some(ours), Some(theirs)) => {
                assert!((ours - theirs).abs() < 1e-3, "seed {seed}: planned {ours}, solved {theirs}");
                found += 1;
            }
            (ours, theirs) => {
                assert!(ours.is_none() && theirs.is_none(), "seed {seed}: planned {ours:?}, solved {theirs:?}");
                none += 1;
            }
        }
    }
    [found, none]
}

#[test]
fn a_plan_costs_what_a_program_of_counts_finds() {
    let [found, none] = compare(1..=80, 2, 3, by_counts);
    assert!(found >= 60, "{found} plans, {none} without: the roofs are not varied enough");
}

#[test]
fn a_plan_costs_what_a_program_of_layouts_finds() {
    let [found, none] = compare(1..=300, 8, 10, by_layouts);
    assert!(found >= 100 && none >= 50, "{found} plans, {none} without: the roofs are not varied enough");
}
