//! Timings of the plan of a whole roof; the proven optimum is checked against a search by exchange from many starts, which
//! must never find less.

use std::sync::Arc;

use brimline::device::{Choice, Device, Kind, Size};
use brimline::roof::{Case, Catchment, Limits, Roof, Storm, demand};
use brimline::search::{self, Answer, Criterion, Options, PlanAsked, Raises, Watch};
use brimline::units::{Area, Length, Load, Money, System};

fn main() {
    divan::main();
}

/// Closed scuppers by width and height: prices rise with the width, and a little unevenly, as price lists do.
fn sizes(widths: std::ops::RangeInclusive<u32>, heights: &[u32]) -> Vec<Size> {
    let tag: Arc<str> = "RS".into();
    let size = |width: u32, height: u32| Size {
        tag: Arc::clone(&tag),
        price: Some(Money::nearest(f64::from(250 + 14 * width + 9 * height + (width * 7 + height * 5) % 11))),
        ..Size::of(Device::Closed {
            width: Length::from_nm(i64::from(width) * 25_400_000),
            height: Length::from_nm(i64::from(height) * 25_400_000),
        })
    };
    widths.flat_map(|width| heights.iter().map(move |&height| size(width, height))).collect()
}

fn area(index: u32, unlike: bool) -> Catchment {
    let load =
        |psf: u32| Limits { load: Some(Load::psf(f64::from(if unlike { psf + index % 9 } else { psf }))), depth: None };
    Catchment {
        name: format!("area {index}"),
        area: Area::from_m2(150.0 + f64::from(index * 137 % 1201)),
        edge: unlike.then(|| Length::from_m(6.0 + f64::from(index % 13))),
        gap: Length::inches(if unlike { 12.0 } else { 0.0 }),
        kinds: (unlike && index.is_multiple_of(5)).then(|| vec![Kind::ClosedScupper]),
        count: 1..=30,
        set_heights: Some(vec![Length::inches(2.0)]),
        limits: vec![load(26), load(32)],
        ..Catchment::default()
    }
}

fn roof(areas: u32, sizes: Vec<Size>, unlike: bool) -> Roof {
    let areas: Vec<_> = (0..areas).map(|index| area(index, unlike)).collect();
    let storm = Storm { intensity: "6.3 in/h".parse().expect("an intensity"), ..Storm::default() };
    let designed = Case::as_designed();
    let cases = vec![designed.clone(), Case { name: "one blocked".into(), blocked: 1, ..designed }];
    let demands = demand::flows(&storm, &areas).expect("no circle");
    Roof {
        title: "bench".into(),
        system: System::Us,
        storm,
        cases,
        areas,
        sizes,
        choice: Choice::default(),
        demands,
        bases: Vec::new(),
    }
}

fn options(keep: usize) -> Options {
    Options {
        rank_by: vec![Criterion::Cost, Criterion::Load],
        keep,
        mix: 2,
        freeboard: None,
        fold: true,
        watch: Watch::default(),
        rules: Arc::default(),
    }
}

fn plan(bencher: divan::Bencher, roof: &Roof, most: u32, keep: usize) {
    let areas: Vec<usize> = (0..roof.areas.len()).collect();
    let asked = PlanAsked { sizes: Some(most), size_price: Money::nearest(300.0) };
    let options = options(keep);
    let cost = |most| {
        let asked = PlanAsked { sizes: Some(most), ..asked };
        search::plan(roof, &options, asked, &areas).and_then(|plans| plans.plans.first().map(|plan| plan.cost))
    };
    let (known, fewer) = (cost(most).expect("a plan"), cost(most - 1));
    assert!(fewer.is_none_or(|fewer| fewer >= known), "more sizes are never dearer");
    bencher.bench(|| {
        let plans = search::plan(roof, &options, asked, &areas).expect("all priced");
        assert_eq!(plans.plans[0].cost, known);
        plans.by_sizes.len()
    });
}

#[divan::bench(args = [3, 4, 5], sample_count = 20)]
fn fifty_areas_alike(bencher: divan::Bencher, most: u32) {
    plan(bencher, &roof(50, sizes(6..=36, &[4, 6, 8, 10]), false), most, 1);
}

#[divan::bench(args = [3, 4, 5], sample_count = 20)]
fn fifty_areas_unlike(bencher: divan::Bencher, most: u32) {
    plan(bencher, &roof(50, sizes(6..=36, &[4, 6, 8, 10]), true), most, 1);
}

/// Widths 6 to 55 in, heights 3 to 12 in.
fn five_hundred_sizes() -> Vec<Size> {
    sizes(6..=55, &[3, 4, 5, 6, 7, 8, 9, 10, 11, 12])
}

#[divan::bench(sample_count = 5)]
fn five_hundred_areas_alike(bencher: divan::Bencher) {
    plan(bencher, &roof(500, five_hundred_sizes(), false), 4, 1);
}

#[divan::bench(sample_count = 3)]
fn five_hundred_areas_unlike(bencher: divan::Bencher) {
    plan(bencher, &roof(500, five_hundred_sizes(), true), 4, 1);
}

/// The list of every area, one layout in each, where nothing ties the areas together; checked against areas alone.
fn lists(bencher: divan::Bencher, unlike: bool) {
    let roof = roof(10_000, sizes(6..=36, &[4, 6, 8, 10]), unlike);
    let areas: Vec<usize> = (0..roof.areas.len()).collect();
    let cost = |answer: &Answer<'_>| answer.outcome.layouts().first().and_then(|layout| layout.cost);
    let alone = |&area: &usize| (area, cost(&search::size(&roof, &options(1), &[area])[0]));
    let known: Vec<(usize, Option<Money>)> = areas.iter().step_by(251).map(alone).collect();
    bencher.bench(|| {
        let answers = search::size(&roof, &options(1), &areas);
        assert!(known.iter().all(|&(area, known)| cost(&answers[area]) == known));
        answers.len()
    });
}

#[divan::bench(sample_count = 3)]
fn ten_thousand_areas_alike(bencher: divan::Bencher) {
    lists(bencher, false);
}

#[divan::bench(sample_count = 3)]
fn ten_thousand_areas_unlike(bencher: divan::Bencher) {
    lists(bencher, true);
}

#[divan::bench(args = [3, 4], sample_count = 10)]
fn fifty_areas_eight_plans(bencher: divan::Bencher, most: u32) {
    plan(bencher, &roof(50, sizes(6..=36, &[4, 6, 8, 10]), true), most, 8);
}

/// The plan of three sizes at forty-one limits, and the treads of one area.
#[divan::bench(sample_count = 5)]
fn fifty_areas_forty_raises(bencher: divan::Bencher) {
    let roof = roof(50, sizes(6..=36, &[4, 6, 8, 10]), true);
    let areas: Vec<usize> = (0..50).collect();
    let asked = PlanAsked { sizes: Some(3), size_price: Money::nearest(300.0) };
    let raises = Raises { step: Load::psf(1.0), steps: -6..=34 };
    bencher.bench(|| {
        let plans = search::plan_tradeoff(&roof, &options(1), asked, &areas, &raises).expect("all priced");
        assert!(plans.windows(2).all(|pair| pair[1].cost <= pair[0].cost || pair[0].cost.is_none()), "never dearer");
        plans.len()
    });
}

#[divan::bench(sample_count = 10)]
fn treads_of_an_area(bencher: divan::Bencher) {
    // The largest of the first ten.
    let (roof, area) = (roof(10, sizes(6..=36, &[4, 6, 8, 10]), false), 8);
    let raises = Raises { step: Load::psf(0.01), steps: 0..=2000 };
    bencher.bench(|| {
        let treads = search::tradeoff(&roof, &options(1), area, &raises).expect("nobody ends it");
        assert!(treads.len() > 5, "a limit 20 psf higher saves more than once");
        treads.len()
    });
}
