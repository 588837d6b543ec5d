//! Openings made to measure: drawn widths against every width that may be drawn, on random roofs; one layout worked by hand;
//! and what the method rests on, that wider never carries less.

use std::sync::Arc;

use brimline::device::{Choice, Device, Head, Kind, Law, Made, Place, Rating, Site, Size, Tariff};
use brimline::roof::layout::{self, Asked, Group};
use brimline::roof::{Case, Catchment, GivenGroup, Limits, Parapet, Roof, Situation, Storm};
use brimline::search::{self, Criterion, Fitted, Measured, Options, Outcome, Ranked, Watch};
use brimline::units::{Area, Dimension, Flow, Intensity, Length, Load, Money, System, read_price};

/// A small generator of its own, so that a failing seed can be run again anywhere.
struct Dice(u64);

impl Dice {
    fn next(&mut self) -> u64 {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        self.0.wrapping_mul(0x2545_f491_4f6c_dd1d) >> 33
    }

    fn upto(&mut self, most: u64) -> u64 {
        self.next() % (most + 1)
    }

    fn pick<T: Copy>(&mut self, from: &[T]) -> T {
        from[self.upto(from.len() as u64 - 1) as usize]
    }

    fn one_in(&mut self, many: u64) -> bool {
        self.upto(many - 1) == 0
    }
}

/// A length on whole nanometres, as every typed one is.
fn inches(value: f64) -> Length {
    Length::from_nm(Length::inches(value).nm())
}

fn tariff(dice: &mut Dice) -> Tariff {
    let per_inch = dice.pick(&[0, 3, 7, 11, 15]);
    let per_width = read_price(&format!("{per_inch} / in"), &[Dimension::Length]).expect("a price");
    Tariff { each: 100.0 + dice.upto(3) as f64 * 40.0, per_width: Some(per_width), ..Tariff::default() }
}

/// Devices made to measure, each as the grid's sizes of its range, and now and then one of a fixed size beside them.
fn sizes(dice: &mut Dice, mix: usize, priced: bool) -> Vec<Size> {
    // Few widths, so that all of them can be tried in every group at once.
    let (round, span) = if mix == 3 { (0.5, 3) } else { (0.25, 5) };
    let devices = if mix == 3 { 3 } else { 1 + dice.upto(2) as usize };
    let mut sizes = Vec::new();
    for tag in ["A", "B", "C"].into_iter().take(devices) {
        let from = 4.0 + dice.upto(8) as f64 * dice.pick(&[0.5, 0.4]);
        let (steps, grid) = (1 + dice.upto(span), dice.pick(&[1.0, 1.5, 2.0]));
        let to = from + steps as f64 * grid + dice.pick(&[0.0, 0.3]);
        let made = Made {
            from: inches(from),
            to: inches(to),
            round: inches(round),
            grid: inches(grid),
            tariff: priced.then(|| tariff(dice)),
        };
        let (kind, height) = (dice.upto(4), inches(2.0 + dice.upto(3) as f64));
        let first = match kind {
            0 | 1 => Device::Open { width: made.from },
            2 | 3 => Device::Closed { width: made.from, height },
            _ => Device::Edge { width: made.from },
        };
        let size = Size { tag: tag.into(), made: Some(Arc::new(made)), ..Size::of(first) };
        let widths = (0..=steps).map(|step| inches(from + step as f64 * grid));
        sizes.extend(widths.map(|width| size.in_width(width).expect("it is made to measure")));
    }
    if dice.one_in(3) {
        let flow = |gpm: u64| Flow::gpm(gpm as f64);
        let first = 20 + dice.upto(40);
        let rows = [(inches(1.0), flow(first)), (inches(2.0), flow(first * 3)), (inches(3.0), flow(first * 4))];
        let rating = Arc::new(Rating::new(&rows).expect("rises"));
        let price = priced.then(|| Money::nearest(100.0 * (1 + dice.upto(3)) as f64));
        let device = Device::Rated { width: None, rating };
        sizes.push(Size { tag: "R".into(), place: Place::Interior, price, ..Size::of(device) });
    }
    sizes
}

fn cases(dice: &mut Dice) -> Vec<Case> {
    (0..=dice.upto(2))
        .map(|index| Case {
            name: format!("case {index}"),
            blocked: dice.pick(&[0, 0, 1, 2]),
            sill_error: inches(dice.pick(&[0.0, 0.0, 0.5])),
            opening_loss: inches(dice.pick(&[0.0, 0.0, 0.25, 1.0])),
            rain: dice.pick(&[1.0, 1.0, 1.3]),
            discharge: dice.pick(&[1.0, 1.0, 0.8]),
            storm: None,
            basis: None,
            law: None,
        })
        .collect()
}

const LAWS: [Law; 5] = [Law::Contracted, Law::KindsvaterCarter, Law::ShortCrest, Law::En12056, Law::Throat];

fn roof(dice: &mut Dice, mix: usize) -> (Roof, Options) {
    let priced = !dice.one_in(4);
    let (sizes, cases) = (sizes(dice, mix, priced), cases(dice));
    let limit = |dice: &mut Dice| Limits { load: Some(Load::psf(18.0 + dice.upto(24) as f64)), depth: None };
    let limits = cases.iter().map(|_| limit(dice)).collect();
    let catchment = Catchment {
        name: "area".into(),
        area: Area::from_m2(60.0 + dice.upto(500) as f64),
        edge: dice.one_in(3).then(|| inches(20.0 + dice.upto(60) as f64)),
        gap: inches(dice.pick(&[0.0, 3.0])),
        parapet: Parapet { height: None, thickness: Some(inches(8.0)) },
        count: if mix == 3 { 3 } else { 1 }..=1 + dice.upto(3) as u32 + mix as u32,
        set_heights: Some((0..=2).map(|step| inches(1.0 + f64::from(step) * 0.75)).collect()),
        limits,
        ..Catchment::default()
    };
    let mut catchment = catchment;
    if dice.one_in(3) {
        catchment.existing.push(there_already(dice));
        catchment.edge = catchment.edge.map(|edge| edge + inches(12.0));
        catchment.count = *catchment.count.start()..=catchment.count.end() + 2;
    }
    let storm = Storm { intensity: Intensity::from_m_per_s(3e-5), ..Storm::default() };
    let choice =
        Choice { scupper: if dice.one_in(3) { dice.pick(&LAWS) } else { Law::ThinPlate }, ..Choice::default() };
    let rank_by = match (priced, dice.upto(2)) {
        (true, 0) => vec![Criterion::Cost, Criterion::SetHeight],
        (true, _) => vec![Criterion::Cost, Criterion::Load],
        (false, _) => vec![Criterion::Count, Criterion::Width],
    };
    let freeboard = dice.one_in(4).then(|| inches(dice.pick(&[0.0, 0.5])));
    let keep = if mix == 3 { 8 } else { 3 };
    let options = Options {
        rank_by,
        keep,
        mix,
        freeboard,
        fold: !dice.one_in(3),
        watch: Watch::default(),
        rules: Arc::default(),
    };
    let demands = vec![storm.intensity * catchment.area];
    let (title, system, areas) = (String::new(), System::Us, vec![catchment]);
    (Roof { title, system, storm, cases, areas, sizes, choice, demands, bases: Vec::new() }, options)
}

/// One or two openings that are there already, here and there as one of those that are made to measure.
fn there_already(dice: &mut Dice) -> GivenGroup {
    let device = Device::Open { width: inches(4.0 + dice.upto(4) as f64 * 0.5) };
    let tag = dice.pick(&["A", "old"]).into();
    let size = Size { tag, price: Some(Money::default()), ..Size::of(device) };
    GivenGroup { size, count: 1 + dice.upto(1) as u32, set_height: inches(1.0 + dice.upto(2) as f64 * 0.75) }
}

fn groups<'r>(layout: &Ranked<'r>) -> Vec<Group<'r>> {
    layout.groups.iter().map(|placed| placed.group).collect()
}

/// Whether groups fit the edge and hold every case.
fn stands(roof: &Roof, situations: &[Situation<'_>], options: &Options, groups: &[Group<'_>]) -> bool {
    let area = &roof.areas[0];
    let openings = groups.iter().filter(|group| group.size.place == Place::Edge);
    let (widths, count) = openings.fold((0, 0), |(widths, count), group| {
        (widths + group.size.clear_width().nm() * i64::from(group.count), count + i64::from(group.count))
    });
    let fits = area.edge.is_none_or(|edge| widths + area.gap.nm() * (count - 1).max(0) <= edge.nm());
    let asked = Asked { freeboard: options.freeboard };
    fits && situations.iter().all(|situation| layout::holds(groups, situation, asked))
}

/// What decides: the cost, or the width of all openings where a device has no price.
fn weight(groups: &[Group<'_>]) -> i64 {
    let wide = |group: &Group<'_>| group.size.clear_width().nm() * i64::from(group.count);
    layout::cost(groups).map_or_else(|| groups.iter().map(wide).sum(), Money::millionths)
}

/// The widths that may be drawn: whole steps within the range, and its ends. Written from the rule, not from the library.
fn drawn(made: &Made) -> Vec<Length> {
    let round = made.round.nm();
    let steps = (0..).map(|step| step * round).take_while(|&width| width < made.to.nm());
    let mut all: Vec<i64> = steps.filter(|&width| width > made.from.nm()).collect();
    all.extend([made.from.nm(), made.to.nm()]);
    all.sort_unstable();
    all.dedup();
    all.into_iter().map(Length::from_nm).collect()
}

/// The least weight of a layout over every combination of widths that may be drawn; none where none stands.
fn least(roof: &Roof, situations: &[Situation<'_>], options: &Options, grid: &[Group<'_>]) -> Option<i64> {
    let choices: Vec<Vec<Size>> = grid
        .iter()
        .map(|group| match &group.size.made {
            Some(made) => drawn(made).into_iter().map(|width| group.size.in_width(width).expect("made")).collect(),
            None => vec![group.size.clone()],
        })
        .collect();
    let mut best: Option<i64> = None;
    let mut at = vec![0; grid.len()];
    loop {
        let groups: Vec<Group<'_>> = grid
            .iter()
            .enumerate()
            .map(|(place, group)| Group { size: &choices[place][at[place]], ..*group })
            .collect();
        let weight = weight(&groups);
        if best.is_none_or(|best| weight < best) && stands(roof, situations, options, &groups) {
            best = Some(weight);
        }
        let Some(place) = (0..grid.len()).find(|&place| at[place] + 1 < choices[place].len()) else { return best };
        at[..place].fill(0);
        at[place] += 1;
    }
}

/// A drawn layout keeps every promise that is made of it.
fn check_fitted(
    roof: &Roof,
    situations: &[Situation<'_>],
    options: &Options,
    grid: &Ranked<'_>,
    fitted: &Fitted,
    name: &str,
) {
    let layout = fitted.layout();
    let groups = groups(&layout);
    assert!(stands(roof, situations, options, &groups), "{name}: it holds every case and fits the edge");
    let count = |groups: &[Group<'_>]| groups.iter().map(|group| group.count).sum::<u32>();
    assert_eq!(count(&groups), count(&self::groups(grid)), "{name}");
    assert_eq!(layout.cost, layout::cost(&groups), "{name}");
    let gained = weight(&self::groups(grid)) - weight(&groups);
    assert!(gained > 0, "{name}: it is better than the grid's");
    assert_eq!(fitted.saved.map_or(fitted.narrower.nm(), Money::millionths), gained, "{name}");
    assert!(fitted.unrounded_cost.zip(layout.cost).is_none_or(|(unrounded, cost)| unrounded <= cost), "{name}");
    for (place, placed) in layout.groups.iter().enumerate() {
        let Some(made) = &placed.group.size.made else { continue };
        let widths = drawn(made);
        let at = widths.iter().position(|&width| width == placed.group.size.clear_width());
        let at = at.unwrap_or_else(|| {
            panic!("{name}: {:?} may not be drawn of {made:?}: {widths:?}", placed.group.size.device)
        });
        if at > 0 {
            let narrower = placed.group.size.in_width(widths[at - 1]).expect("made");
            let mut groups = groups.clone();
            groups[place].size = &narrower;
            assert!(!stands(roof, situations, options, &groups), "{name}: a step less holds too");
        }
        // The whole window holds, all groups lifted alike.
        assert!(placed.from == placed.group.set_height && placed.to >= placed.from, "{name}");
    }
    let lift = layout.groups.iter().map(|placed| placed.to - placed.from).fold(Length::ZERO, Length::max);
    let lifted: Vec<Group<'_>> = layout
        .groups
        .iter()
        .map(|placed| Group { set_height: (placed.from + lift).min(placed.to), ..placed.group })
        .collect();
    assert!(stands(roof, situations, options, &lifted), "{name}: the end of the window holds");
    let (case, state) = (layout.case, &layout.states[layout.case]);
    assert_eq!(*state, layout::state(&groups, &situations[case]), "{name}");
    assert!(layout.governing.is_some_and(|governing| governing.utilisation <= 1.0 + 1e-12), "{name}");
}

/// Every layout of some random roofs that has groups made to measure.
fn each_made(mix: usize, seeds: u64, mut check: impl FnMut(&Roof, &Options, &Ranked<'_>, &Measured, &str)) {
    for seed in 1..=seeds {
        let mut dice = Dice(u64::wrapping_mul(seed + 1000 * mix as u64, 0x9e37_79b9_7f4a_7c15));
        let (roof, options) = roof(&mut dice, mix);
        let Outcome::Optimal(layouts) = search::size(&roof, &options, &[0]).remove(0).outcome else { continue };
        for (index, layout) in layouts.iter().enumerate() {
            let name = format!("mix {mix}, seed {seed}, layout {index}");
            assert_eq!(layout.made.is_some(), free(layout) > 0, "{name}");
            if let Some(made) = &layout.made {
                check(&roof, &options, layout, made, &name);
            }
        }
    }
}

/// How many groups of a layout are made to measure.
fn free(layout: &Ranked<'_>) -> usize {
    layout.groups.iter().filter(|placed| placed.group.size.made.is_some()).count()
}

/// Of one, two and three groups: the drawn layout costs what the best of all widths that may be drawn costs, always.
#[test]
fn drawn_widths_are_the_best_of_all_that_may_be_drawn() {
    // By the number of groups that are made to measure: better ones drawn, the grid's kept.
    let (mut fitted, mut kept, mut alone, mut merged) = ([0; 4], [0; 4], [0; 4], 0);
    for (mix, seeds) in [(1, 300), (2, 250), (3, 120)] {
        each_made(mix, seeds, |roof, options, layout, made, name| {
            let (situations, grid) = (roof.situations(0), groups(layout));
            let least = least(roof, &situations, options, &grid);
            match made {
                Measured::Fitted(found) => {
                    check_fitted(roof, &situations, options, layout, found, name);
                    assert_eq!(Some(weight(&groups(&found.layout()))), least, "{name}: the best of all widths");
                    fitted[free(layout)] += 1;
                    let sizes = rounded_up(layout, found);
                    let each = layout.groups.iter().zip(&sizes);
                    let rounded: Vec<Group<'_>> = each.map(|(placed, size)| Group { size, ..placed.group }).collect();
                    alone[free(layout)] += usize::from(Some(weight(&rounded)) == least);
                    merged += usize::from(found.layout().groups.len() < grid.len());
                }
                Measured::NoBetter => {
                    let better = least.is_some_and(|least| least < weight(&grid));
                    assert!(!better, "{name}: better widths may be drawn");
                    kept[free(layout)] += 1;
                }
            }
        });
    }
    println!("by free groups: {fitted:?} fitted, {kept:?} kept; {merged} with alike groups made one");
    println!("{alone:?} are what rounding up the unrounded widths alone would give");
    assert!(fitted[1] > 200 && fitted[2] > 100 && fitted[3] > 30, "{fitted:?}: the roofs are not varied enough");
    assert!(kept[1] > 100 && kept[2] > 30 && kept[3] > 10 && merged > 20, "{kept:?}, {merged}");
}

/// The unrounded widths of one and two groups hold, and nothing on a grid eight times as fine as the drawn one costs less.
#[test]
fn unrounded_widths_just_hold() {
    let (mut checked, mut worst) = ([0; 4], 0.0_f64);
    for (mix, seeds) in [(1, 60), (2, 40)] {
        each_made(mix, seeds, |roof, options, layout, made, name| {
            let Measured::Fitted(fitted) = made else { return };
            let situations = roof.situations(0);
            let mut widths = fitted.unrounded.iter();
            let sizes: Vec<Size> = layout
                .groups
                .iter()
                .map(|placed| match &placed.group.size.made {
                    Some(_) => placed.group.size.in_width(*widths.next().expect("one for each")).expect("made"),
                    None => placed.group.size.clone(),
                })
                .collect();
            let unrounded: Vec<Group<'_>> =
                layout.groups.iter().zip(&sizes).map(|(placed, size)| Group { size, ..placed.group }).collect();
            assert!(stands(roof, &situations, options, &unrounded), "{name}: the unrounded widths hold");
            let finely = |size: &Size| {
                let made = size
                    .made
                    .as_ref()
                    .map(|made| Arc::new(Made { round: Length::from_nm(made.round.nm() / 8), ..**made }));
                Size { made, ..size.clone() }
            };
            let fine: Vec<Size> = layout.groups.iter().map(|placed| finely(placed.group.size)).collect();
            let grid: Vec<Group<'_>> =
                layout.groups.iter().zip(&fine).map(|(placed, size)| Group { size, ..placed.group }).collect();
            let least = least(roof, &situations, options, &grid).expect("the drawn one is among them");
            let over = weight(&unrounded) as f64 / least as f64 - 1.0;
            worst = worst.max(over);
            assert!(over < 1e-5, "{name}: {over} over the best of a finer grid");
            checked[free(layout)] += 1;
        });
    }
    println!("by free groups: {checked:?} unrounded, {worst:e} over the best of a finer grid at most");
    assert!(checked[1] > 30 && checked[2] > 10, "{checked:?}");
}

/// The sizes of a layout of the grid with each unrounded width rounded up by itself.
fn rounded_up(layout: &Ranked<'_>, fitted: &Fitted) -> Vec<Size> {
    let mut widths = fitted.unrounded.iter();
    let up = |size: &Size| match &size.made {
        Some(made) => {
            let width = *widths.next().expect("one for each");
            size.in_width(made.width(made.rounded_up(width))).expect("made")
        }
        None => size.clone(),
    };
    layout.groups.iter().map(|placed| placed.group.size).map(up).collect()
}

/// Where more widths may be drawn than are tried, those around the unrounded ones are: no worse than rounding each of them up.
#[test]
fn finely_rounded_widths_are_no_worse_than_the_unrounded_rounded_up() {
    let mut checked = [0; 4];
    for (mix, seeds) in [(1, 30), (2, 20), (3, 8)] {
        for seed in 1..=seeds {
            let mut dice = Dice(u64::wrapping_mul(seed + 5000 * mix as u64, 0x9e37_79b9_7f4a_7c15));
            let (mut roof, options) = roof(&mut dice, mix);
            for size in &mut roof.sizes {
                size.made = size.made.as_ref().map(|made| Arc::new(Made { round: Length::mm(0.01), ..**made }));
            }
            let situations = roof.situations(0);
            let Outcome::Optimal(layouts) = search::size(&roof, &options, &[0]).remove(0).outcome else { continue };
            for layout in &layouts {
                let Some(Measured::Fitted(fitted)) = &layout.made else { continue };
                let sizes = rounded_up(layout, fitted);
                let each = layout.groups.iter().zip(&sizes);
                let rounded: Vec<Group<'_>> = each.map(|(placed, size)| Group { size, ..placed.group }).collect();
                let drawn = fitted.layout();
                assert!(stands(&roof, &situations, &options, &groups(&drawn)), "mix {mix}, seed {seed}");
                if stands(&roof, &situations, &options, &rounded) {
                    assert!(weight(&groups(&drawn)) <= weight(&rounded), "mix {mix}, seed {seed}");
                    checked[free(layout)] += 1;
                }
            }
        }
    }
    println!("by free groups: {checked:?}");
    assert!(checked[1] > 20 && checked[2] > 10 && checked[3] > 1, "{checked:?}");
}

/// A project with one catalog, written out and searched.
fn project(name: &str, catalog: &str, search: &str) -> brimline::input::Project {
    let folder = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("target").join(name);
    std::fs::create_dir_all(&folder).expect("a folder can be made");
    std::fs::write(folder.join("catalog.toml"), catalog).expect("writable");
    let text = format!(
        "title = \"By hand\"\nunits = \"us\"\ncatalogs = [\"catalog.toml\"]\n\
         [storm]\nintensity = \"4 in/h\"\n[limit]\nload = \"24 psf\"\n\
         [search]\nset_height = \"2 in\"\nrank_by = [\"cost\"]\n{search}\n\
         [[case]]\nname = \"as designed\"\n[[case]]\nname = \"one blocked\"\nblocked = 1\nlimit = {{ load = \"28 psf\" }}\n\
         [[area]]\nname = \"roof\"\narea = \"5,000 sq ft\"\nwall = \"800 ft2\"\nponding = {{ head = \"0.3 in\" }}\n"
    );
    std::fs::write(folder.join("project.toml"), text).expect("writable");
    brimline::input::read(&folder.join("project.toml")).unwrap_or_else(|faults| panic!("{faults}"))
}

/// One roof by hand: 5400 ft2 at 4 in/h are 5400 * 4 / 96.25 = 224.42 gpm. 24 psf with 0.3 in of ponding head leave 2.3154 in
/// over sills at 2 in: 2.9 * 2.3154^1.5 = 10.2173 gpm for each inch of width, so 21.965 in are wanted in all; 28 psf leave
/// 3.0846 in, 15.7109 gpm for each inch, so 14.284 in without the widest. Source: North American practice, Q = 2.9 b H^1.5.
///
/// Three alike: 21.965 / 3 = 7.322 in as designed, 14.284 / 2 = 7.142 in with one blocked. The grid of whole inches gives 8 in
/// (3 * 180 = 540); unrounded 7.322 in, 519.65; to a quarter inch 7.5 in, 525, which is 15 less. Four: 5.49 in would do, but
/// 6 in is the least that is made, on the grid and off it.
#[test]
fn one_width_worked_by_hand() {
    let catalog = "[[device]]\ntag = \"A\"\nkind = \"open scupper\"\nwidth = { from = \"6 in\", to = \"12 in\" }\n\
                   price = { each = 100, per_width = \"10 / in\" }\n";
    let project = project("made-by-hand", catalog, "count = { from = 3, to = 4 }");
    let answers = search::size(&project.roof, &project.options, &[0]);
    let Outcome::Optimal(layouts) = &answers[0].outcome else { panic!("layouts exist") };
    assert_eq!(layouts.iter().map(|layout| layout.cost.unwrap().amount()).collect::<Vec<_>>(), [540.0, 640.0]);
    let Some(Measured::Fitted(fitted)) = &layouts[0].made else { panic!("7.5 in is better than 8 in") };
    let layout = fitted.layout();
    assert_eq!(layout.groups[0].group.size.clear_width(), inches(7.5));
    assert_eq!((layout.cost.unwrap().amount(), fitted.saved.unwrap().amount()), (525.0, 15.0));
    approx::assert_abs_diff_eq!(fitted.unrounded[0].to_inches(), 7.3215, epsilon = 1e-3);
    approx::assert_abs_diff_eq!(fitted.unrounded_cost.unwrap().amount(), 519.65, epsilon = 0.02);
    // (224.42 / (2.9 * 22.5))^(2/3) = 2.2785 in of head; 5.2 * (2 + 2.2785 + 0.3) = 23.808 psf of 24.
    approx::assert_abs_diff_eq!(layout.states[0].water.unwrap().load.to_psf(), 23.808, epsilon = 2e-3);
    assert!(matches!(layouts[1].made, Some(Measured::NoBetter)));
}

/// The same roof with two of A at 10 an inch and one of B at 5: 2 a + b of 21.965 in, 2 a and a + b of 14.284 in. B is cheaper
/// for its width, so a is as narrow as the blocked case lets it be: 7.142 in, b = 21.965 - 14.284 = 7.681 in; 481.25 with
/// 100 each. To a quarter inch: a = 7.25 and b = 7.5 (14.5 + 7.5 = 22), 300 + 145 + 37.5 = 482.5; a = 7.5 and b = 7 are 485.
/// The grid has a = 8 (7 leaves 14 of 14.284 in) and b = 7 (a + 6 = 14 again): 300 + 160 + 35 = 495.
#[test]
fn two_widths_worked_by_hand() {
    let catalog = "[[device]]\ntag = \"A\"\nkind = \"open scupper\"\nwidth = { from = \"6 in\", to = \"12 in\" }\n\
                   price = { each = 100, per_width = \"10 / in\" }\n\
                   [[device]]\ntag = \"B\"\nkind = \"open scupper\"\nwidth = { from = \"6 in\", to = \"12 in\" }\n\
                   price = { each = 100, per_width = \"5 / in\" }\n";
    let project = project("made-two-by-hand", catalog, "count = 3\nmix = 2\nround = \"0.25 in\"");
    let answers = search::size(&project.roof, &project.options, &[0]);
    let Outcome::Optimal(layouts) = &answers[0].outcome else { panic!("layouts exist") };
    let counts = |layout: &Ranked<'_>| {
        layout.groups.iter().map(|placed| (placed.group.size.tag.to_string(), placed.group.count)).collect::<Vec<_>>()
    };
    let family = [("A".to_string(), 2), ("B".to_string(), 1)];
    let layout = layouts.iter().find(|layout| counts(layout) == family).expect("two of A and one of B");
    assert_eq!(layout.cost.unwrap().amount(), 495.0);
    let Some(Measured::Fitted(fitted)) = &layout.made else { panic!("better widths may be drawn") };
    let widths: Vec<Length> = fitted.layout().groups.iter().map(|placed| placed.group.size.clear_width()).collect();
    assert_eq!(widths, [inches(7.25), inches(7.5)]);
    assert_eq!(fitted.layout().cost.unwrap().amount(), 482.5);
    approx::assert_abs_diff_eq!(fitted.unrounded[0].to_inches(), 7.1422, epsilon = 2e-3);
    approx::assert_abs_diff_eq!(fitted.unrounded[1].to_inches(), 7.6805, epsilon = 4e-3);
    approx::assert_abs_diff_eq!(fitted.unrounded_cost.unwrap().amount(), 481.25, epsilon = 0.05);
}

/// What the stair of widths rests on: under any law and any head a wider opening never carries less, whatever is lost off it.
#[test]
fn wider_never_carries_less() {
    type InWidth = fn(Length) -> Device;
    let heads: Vec<f64> = (1..=60).map(|step| f64::from(step) * 0.2).collect();
    let kinds: [(Kind, InWidth); 3] = [
        (Kind::OpenScupper, |width| Device::Open { width }),
        (Kind::ClosedScupper, |width| Device::Closed { width, height: inches(4.0) }),
        (Kind::RoofEdge, |width| Device::Edge { width }),
    ];
    for (kind, device) in kinds {
        for &law in kind.laws() {
            for (floor, loss) in [(0.0, 0.0), (1.5, 0.0), (0.0, 0.25), (1.5, 1.0)] {
                let site = Site { floor: inches(floor), thickness: Some(inches(8.0)), ..Site::default() };
                for &head in &heads {
                    let mut before = 0.0;
                    for step in 1..=300 {
                        let width = inches(f64::from(step) * 0.25);
                        let size = Size { law: Some(law), ..Size::of(device(width)) };
                        let (curve, _) = size.curve(&site, inches(2.0), inches(loss));
                        let flow = curve.discharge(Head::of(inches(head))).flow.m3_per_s();
                        assert!(flow >= before, "{kind} {law:?}: {width:?} under {head} in: {flow} after {before}");
                        before = flow;
                    }
                }
            }
        }
    }
}
