//! Timings of the search, each with its answer checked against a list that was found without any bound.

use std::sync::Arc;

use brimline::device::{Choice, Device, Size};
use brimline::roof::layout::{self, Group};
use brimline::roof::{Case, Catchment, Limits, Parapet, Roof, Situation, Storm, demand, working_capacity};
use brimline::search::{self, Answer, Criterion, Options, Outcome, Watch};
use brimline::units::{Area, Length, Load, Money, System};

fn main() {
    divan::main();
}

/// Closed scuppers 6 to 36 in wide by 1 in, 4, 6, 8 and 10 in high: 124 sizes, priced by width and height.
fn sizes() -> Vec<Size> {
    let tag: Arc<str> = "RS".into();
    let size = |width: u32, height: u32| Size {
        tag: Arc::clone(&tag),
        price: Some(Money::nearest(250.0 + 14.0 * f64::from(width) + 9.0 * f64::from(height))),
        ..Size::of(Device::Closed {
            width: Length::from_nm(i64::from(width) * 25_400_000),
            height: Length::from_nm(i64::from(height) * 25_400_000),
        })
    };
    (6..=36).flat_map(|width| [4, 6, 8, 10].map(|height| size(width, height))).collect()
}

fn cases() -> Vec<Case> {
    let designed = Case::as_designed();
    vec![
        designed.clone(),
        Case { name: "one blocked".into(), blocked: 1, ..designed.clone() },
        Case {
            name: "as built".into(),
            sill_error: Length::inches(0.5),
            opening_loss: Length::inches(0.25),
            ..designed
        },
    ]
}

fn area(index: u32) -> Catchment {
    let load = |psf: u32| Limits { load: Some(Load::psf(f64::from(psf + index % 7))), depth: None };
    Catchment {
        name: format!("area {index}"),
        area: Area::from_m2(700.0 + f64::from(index * 37 % 401)),
        edge: Some(Length::from_m(30.0)),
        gap: Length::inches(24.0),
        parapet: Parapet { height: Some(Length::inches(24.0)), thickness: None },
        count: 1..=12,
        set_heights: Some((8..=16).map(|quarter| Length::from_nm(quarter * 6_350_000)).collect()),
        limits: vec![load(28), load(34), load(30)],
        ..Catchment::default()
    }
}

fn roof(areas: u32) -> Roof {
    let areas: Vec<_> = (0..areas).map(area).collect();
    let storm = Storm { intensity: "6.3 in/h".parse().expect("an intensity"), ..Storm::default() };
    let demands = demand::flows(&storm, &areas).expect("no circle");
    Roof {
        title: "bench".into(),
        system: System::Us,
        storm,
        cases: cases(),
        areas,
        sizes: sizes(),
        choice: Choice::default(),
        bases: Vec::new(),
        demands,
    }
}

fn options(rank_by: &[Criterion], mix: usize) -> Options {
    Options {
        rank_by: rank_by.to_vec(),
        keep: 8,
        mix,
        freeboard: None,
        fold: true,
        watch: Watch::default(),
        rules: Arc::default(),
    }
}

/// The least cost of an area's layouts, by trying every count of every two sizes without any bound.
fn least_cost(roof: &Roof, area: usize) -> i64 {
    let situations = roof.situations(area);
    let most = *roof.areas[area].count.end();
    let set_height = roof.areas[area].set_heights.as_ref().expect("given")[0];
    let one = |size| Group { size, count: 1, set_height };
    let flows: Vec<Vec<f64>> = roof
        .sizes
        .iter()
        .map(|size| {
            let flow = |situation: &Situation<'_>| {
                let mut pool = layout::pool(&[one(size)], situation);
                pool.blocked = 0;
                pool.capacity(situation.allowable_level()).m3_per_s()
            };
            situations.iter().map(flow).collect()
        })
        .collect();
    let edge = roof.areas[area].edge.expect("given").nm();
    let gap = roof.areas[area].gap.nm();
    let price = |size: usize| roof.sizes[size].price.expect("priced").millionths();
    let width = |size: usize| roof.sizes[size].clear_width().nm();
    let mut least = i64::MAX;
    for first in 0..flows.len() {
        for second in first..flows.len() {
            for a in 1..=most {
                for b in 0..=most - a {
                    let (many, more) = (i64::from(a), i64::from(b));
                    let fits = width(first) * many + width(second) * more + gap * (many + more - 1) <= edge;
                    let cost = price(first) * many + price(second) * more;
                    if cost >= least || !fits {
                        continue;
                    }
                    let holds = situations.iter().enumerate().all(|(case, situation)| {
                        let groups = [(flows[first][case], a), (flows[second][case], b), (0.0, 0)];
                        working_capacity(&groups, 2, situation.case.blocked) >= situation.demand.m3_per_s()
                    });
                    if holds {
                        least = cost;
                    }
                }
            }
        }
    }
    least
}

/// The cost of an answer's first layout.
fn cost(answer: &Answer<'_>) -> i64 {
    let Outcome::Optimal(layouts) = &answer.outcome else { panic!("the bench's areas have layouts") };
    layouts[0].cost.expect("priced").millionths()
}

const BY_COST: [Criterion; 2] = [Criterion::Cost, Criterion::Load];

/// One area, 124 sizes, counts to 12, two groups, three cases.
#[divan::bench(args = [1, 2, 3])]
fn one_area(bencher: divan::Bencher, mix: usize) {
    let roof = roof(1);
    let options = options(&BY_COST, mix);
    let known = least_cost(&roof, 0);
    bencher.bench(|| {
        let answers = search::size(&roof, &options, &[0]);
        assert!(if mix == 2 { cost(&answers[0]) == known } else { mix == 1 || cost(&answers[0]) <= known });
        answers
    });
}

/// The same, ranked by other things first.
#[divan::bench(args = ["load", "count", "width", "sizes", "set-height"])]
fn one_area_by(bencher: divan::Bencher, first: &str) {
    let roof = roof(1);
    let lead = Criterion::ALL.into_iter().find(|criterion| criterion.name() == first).expect("a criterion");
    let options = options(&[lead, Criterion::Cost], 2);
    let known = least_cost(&roof, 0);
    bencher.bench(|| {
        let answers = search::size(&roof, &options, &[0]);
        assert!(cost(&answers[0]) >= known);
        answers
    });
}

/// A thousand areas of that kind, with unlike limits and demands.
#[divan::bench(sample_count = 3)]
fn thousand_areas(bencher: divan::Bencher) {
    let roof = roof(1000);
    let options = options(&BY_COST, 2);
    let all: Vec<usize> = (0..roof.areas.len()).collect();
    let known: Vec<(usize, i64)> = [0, 499, 999].map(|area| (area, least_cost(&roof, area))).to_vec();
    bencher.bench(|| {
        let answers = search::size(&roof, &options, &all);
        assert!(known.iter().all(|&(area, least)| cost(&answers[area]) == least));
        answers
    });
}

/// What layouts on a front are compared by: cost in millionths, deepest water, devices and width in nanometres.
fn compared(groups: &[Group<'_>], situations: &[Situation<'_>]) -> [i64; 4] {
    let depth =
        |situation: &Situation<'_>| layout::state(groups, situation).water.map_or(i64::MAX, |water| water.depth().nm());
    let width = groups.iter().map(|group| group.size.clear_width().nm() * i64::from(group.count)).sum();
    let count = groups.iter().map(|group| i64::from(group.count)).sum();
    let cost = layout::cost(groups).expect("priced").millionths();
    [cost, situations.iter().map(depth).max().expect("cases"), count, width]
}

/// Some layouts of an area, evenly out of all of two sizes, none of which a complete front lets stand unbeaten.
fn some_layouts(roof: &Roof, area: usize) -> Vec<[i64; 4]> {
    let catchment = &roof.areas[area];
    let situations = roof.situations(area);
    let (most, sizes) = (u64::from(*catchment.count.end()), roof.sizes.len() as u64);
    let mut layouts = Vec::new();
    let mut step = 1_u64;
    while layouts.len() < 500 {
        step = step.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        let (first, second) = ((step >> 20) % sizes, (step >> 30) % sizes);
        let (a, b) = (1 + (step >> 40) % most, 1 + (step >> 50) % most);
        let set_height = catchment.set_heights.as_ref().expect("given")[0];
        let group = |size: u64, count: u64| Group { size: &roof.sizes[size as usize], count: count as u32, set_height };
        let groups = [group(first, a), group(second, b)];
        let [_, depth, count, width] = compared(&groups, &situations);
        let edge = width + catchment.gap.nm() * (count - 1);
        let fits = first != second && a + b <= most && edge <= catchment.edge.expect("given").nm();
        let holds = |situation: &Situation<'_>| layout::holds(&groups, situation, layout::Asked::default());
        if fits && depth < i64::MAX && situations.iter().all(holds) {
            layouts.push(compared(&groups, &situations));
        }
    }
    layouts
}

/// The layouts of one area that are not beaten in cost, load, count and width: 124 sizes, counts to 12 and to 30.
#[divan::bench(args = [12, 30], sample_count = 10)]
fn front_of_an_area(bencher: divan::Bencher, most: u32) {
    let mut roof = roof(1);
    roof.areas[0].count = 1..=most;
    let options = options(&BY_COST, 2);
    let situations = roof.situations(0);
    let fronts = search::front(&roof, &options, &[0]);
    let known: Vec<[i64; 4]> = fronts[0].rows.iter().map(|row| compared(&row.groups, &situations)).collect();
    assert_eq!(known[0][0], least_cost(&roof, 0));
    let under = |one: &[i64; 4], other: &[i64; 4]| one.iter().zip(other).all(|(one, other)| one <= other);
    for (place, row) in known.iter().enumerate() {
        assert!(!known[..place].iter().any(|other| under(other, row)), "no row is beaten by one that costs no more");
    }
    for layout in some_layouts(&roof, 0) {
        assert!(known.iter().any(|row| under(row, &layout)), "a row is no worse than {layout:?}");
    }
    bencher.bench(|| {
        let fronts = search::front(&roof, &options, &[0]);
        assert_eq!(fronts[0].rows.len(), known.len());
        fronts[0].rows.len()
    });
}
