//! The search against trying everything: random small roofs, every layout, no bound, the same list to the last key.
//!
//! What is tried here is written from the rules of the search alone: which layouts fit, which hold every case, in which order
//! they rank. Capacities and levels are the library's, so that equal layouts have equal keys; the physics behind them is
//! checked by other means in `physics.rs`.

use std::cmp::Ordering;
use std::collections::HashSet;
use std::sync::Arc;

use brimline::device::{Choice, Device, Kind, Law, Place, Rating, Size};
use brimline::roof::channel::Channel;
use brimline::roof::layout::{self, Asked, Group, Liftable};
use brimline::roof::{Case, Catchment, GivenGroup, Limits, Parapet, Ponding, Roof, Situation, Storm};
use brimline::search::{self, Criterion, Least, Options, Outcome, PlanAsked, PlanFront, Relaxation, Watch, Why};
use brimline::units::{Area, Dimension, Flow, Intensity, Length, Load, Money, System};

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

    fn inches(&mut self, from: u64, to: u64) -> Length {
        Length::inches((from + self.upto(to - from)) as f64).max(Length::ZERO)
    }
}

fn on_grid(length: Length) -> Length {
    Length::from_nm(length.nm())
}

fn sizes(dice: &mut Dice) -> Vec<Size> {
    let tags: Vec<Arc<str>> = ["A", "B", "C"].into_iter().map(Arc::from).collect();
    let count = 2 + dice.upto(4);
    let mut sizes: Vec<Size> = (0..count)
        .map(|_| {
            let kind = dice.upto(3);
            let width = on_grid(dice.inches(4, 16));
            let (device, tag, place) = match kind {
                0 => (Device::Open { width }, 0, Place::Edge),
                1 | 2 => (Device::Closed { width, height: on_grid(dice.inches(2, 5)) }, 1, Place::Edge),
                _ => {
                    let first = 20.0 + dice.upto(40) as f64;
                    let rows: Vec<_> = (1..=3)
                        .map(|row| (on_grid(Length::inches(f64::from(row))), Flow::gpm(first * f64::from(row) * 1.4)))
                        .collect();
                    let rating = Arc::new(Rating::new(&rows).expect("rises"));
                    let width = dice.one_in(2).then_some(width);
                    let place = if dice.one_in(2) { Place::Edge } else { Place::Interior };
                    (Device::Rated { width, rating }, 2, place)
                }
            };
            let own = dice.one_in(4).then(|| {
                let mut heights = vec![on_grid(dice.inches(1, 3)), on_grid(dice.inches(2, 5))];
                heights.sort_by_key(|height| height.nm());
                heights.dedup();
                Arc::from(heights)
            });
            Size {
                tag: Arc::clone(&tags[tag]),
                place,
                price: Some(Money::nearest(100.0 * (1 + dice.upto(5)) as f64)),
                set_heights: own,
                ..Size::of(device)
            }
        })
        .collect();
    sizes.sort_by(|a, b| a.tag.cmp(&b.tag));
    sizes
}

fn cases(dice: &mut Dice) -> Vec<Case> {
    let count = 1 + dice.upto(2);
    (0..count)
        .map(|index| Case {
            name: format!("case {index}"),
            blocked: dice.pick(&[0, 0, 1, 2]),
            sill_error: on_grid(Length::inches(dice.pick(&[0.0, 0.0, 0.5]))),
            opening_loss: on_grid(Length::inches(dice.pick(&[0.0, 0.0, 0.25, 1.5]))),
            rain: dice.pick(&[1.0, 1.0, 1.3]),
            discharge: dice.pick(&[1.0, 1.0, 0.8]),
            law: None,
            storm: None,
            basis: None,
        })
        .collect()
}

/// None, a fixed head, a flexibility, now and then one under which the roof is unstable.
fn ponding(dice: &mut Dice) -> Option<Ponding> {
    match dice.upto(11) {
        0..=5 => None,
        6..=8 => Some(Ponding::Head(Length::inches(0.4))),
        _ => {
            let inches_per_psf = dice.pick(&[0.005, 0.01, 0.01, 0.02, 0.02, 0.02, 0.05, 0.2]);
            Some(Ponding::Flexible(format!("{inches_per_psf} in/psf").parse().expect("a flexibility")))
        }
    }
}

fn roof(dice: &mut Dice) -> Roof {
    let sizes = sizes(dice);
    let cases = cases(dice);
    let limits = cases
        .iter()
        .map(|_| Limits {
            load: (!dice.one_in(4)).then(|| Load::psf(14.0 + dice.upto(26) as f64)),
            depth: dice.one_in(3).then(|| Length::inches(3.0 + dice.upto(4) as f64)),
        })
        .map(
            |limits| {
                if limits == Limits::default() { Limits { load: Some(Load::psf(30.0)), depth: None } } else { limits }
            },
        )
        .collect();
    let least = 1 + dice.upto(1) as u32;
    let grid_start = 1 + dice.upto(2);
    let catchment = Catchment {
        name: "area".into(),
        area: Area::from_m2(20.0 + dice.upto(900) as f64),
        edge: dice.one_in(2).then(|| on_grid(dice.inches(0, 60))),
        gap: on_grid(dice.inches(0, 6)),
        parapet: Parapet {
            height: dice.one_in(2).then(|| on_grid(dice.inches(4, 10))),
            thickness: Some(Length::inches(8.0)),
        },
        roof_at_wall: on_grid(dice.inches(0, 2)),
        ponding: ponding(dice),
        kinds: dice.one_in(5).then(|| vec![Kind::ClosedScupper, Kind::Rated]),
        count: least..=least + dice.upto(3) as u32,
        set_heights: Some((0..=2).map(|step| on_grid(Length::inches((grid_start + step) as f64 * 0.75))).collect()),
        limits,
        channel: dice.one_in(12).then(|| Channel {
            width: on_grid(dice.inches(8, 40)),
            length: Length::from_m(5.0 + dice.upto(20) as f64),
            slope: dice.pick(&[0.0, 0.0, 0.001]),
            roughness: 0.013,
        }),
        ..Catchment::default()
    };
    let storm = Storm { intensity: Intensity::from_m_per_s(3e-5), ..Storm::default() };
    let demands = vec![storm.intensity * catchment.area];
    let mut choice = Choice::default();
    if dice.one_in(6) {
        choice.scupper =
            dice.pick(&[Law::Contracted, Law::KindsvaterCarter, Law::ShortCrest, Law::En12056, Law::Throat]);
    }
    Roof {
        title: String::new(),
        system: System::Us,
        storm,
        cases,
        areas: vec![catchment],
        sizes,
        choice,
        demands,
        bases: Vec::new(),
    }
}

fn options(dice: &mut Dice) -> Options {
    let mut rank_by = Criterion::ALL.to_vec();
    for place in 0..rank_by.len() {
        let other = place + dice.upto((rank_by.len() - 1 - place) as u64) as usize;
        rank_by.swap(place, other);
    }
    rank_by.truncate(1 + dice.upto(2) as usize);
    Options {
        rank_by,
        keep: 1 + dice.upto(6) as usize,
        mix: 1 + dice.upto(2) as usize,
        freeboard: dice.one_in(3).then(|| Length::inches(dice.pick(&[0.0, 0.5, 1.0]))),
        fold: !dice.one_in(3),
        watch: Watch::default(),
        rules: Arc::default(),
    }
}

/// The heights at which a size may stand and the highest it may be lifted to, by the words of the search's rules.
fn heights(size: &Size, area: &Catchment) -> (Vec<Length>, Length) {
    let grid = area.set_heights.as_ref().expect("given above");
    let (least, most) = (grid[0], grid[grid.len() - 1]);
    let mut heights: Vec<Length> = match &size.set_heights {
        Some(own) => own.iter().copied().filter(|&height| height >= least && height <= most).collect(),
        None => grid.clone(),
    };
    let mut highest = heights.last().copied().unwrap_or(Length::ZERO);
    if size.place == Place::Edge {
        heights.retain(|&height| height >= area.roof_at_wall);
        if let (Some(parapet), Some(opening)) = (area.parapet.height, size.device.height()) {
            heights.retain(|&height| (height + opening).nm() < parapet.nm());
            highest = highest.min(Length::from_nm(parapet.nm() - opening.nm() - 1));
        }
    }
    (heights, highest)
}

struct Tried {
    groups: Vec<(usize, u32)>,
    key: Vec<f64>,
    reported: Vec<Length>,
}

/// The groups at their lowest heights, and the heights of each, where they fit the area.
fn fit<'r>(roof: &'r Roof, groups: &[(usize, u32)]) -> Option<(Vec<Liftable<'r>>, Vec<Vec<Length>>)> {
    let area = &roof.areas[0];
    let there = |at_edge: bool| area.existing.iter().filter(move |group| !at_edge || group.size.place == Place::Edge);
    let all = groups.iter().map(|&(_, count)| count).chain(there(false).map(|group| group.count)).sum::<u32>();
    // What is there may be more than an area may have: then nothing is added.
    if all < *area.count.start() || (all > *area.count.end() && !groups.is_empty()) {
        return None;
    }
    let mut openings: i64 = there(true).map(|group| i64::from(group.count)).sum();
    let mut edge: i64 = there(true).map(|group| group.size.clear_width().nm() * i64::from(group.count)).sum();
    let mut liftable = Vec::new();
    let mut stands = Vec::new();
    for &(index, count) in groups {
        let size = &roof.sizes[index];
        let (heights, highest) = heights(size, area);
        if !area.takes(size.device.kind()) || heights.is_empty() {
            return None;
        }
        if size.place == Place::Edge {
            openings += i64::from(count);
            edge += size.device.width().map_or(0, Length::nm) * i64::from(count);
        }
        let group = Group { size, count, set_height: heights[0] };
        liftable.push(Liftable { group, highest });
        stands.push(heights);
    }
    if let Some(most) = area.edge
        && openings > 0
        && (most == Length::ZERO || edge + area.gap.nm() * (openings - 1) > most.nm())
    {
        return None;
    }
    for group in &area.existing {
        liftable.push(Liftable { group: group.group(), highest: group.set_height });
        stands.push(vec![group.set_height]);
    }
    Some((liftable, stands))
}

fn at_lowest<'r>(liftable: &[Liftable<'r>]) -> Vec<Group<'r>> {
    liftable.iter().map(|liftable| liftable.group).collect()
}

/// The governing utilisation of a layout in its worst case.
fn utilisation(groups: &[Group<'_>], situations: &[Situation<'_>]) -> f64 {
    let used = |situation| layout::state(groups, situation).water.map_or(f64::INFINITY, |w| w.governing.utilisation);
    situations.iter().map(used).fold(f64::NEG_INFINITY, f64::max)
}

fn try_layout<'r>(
    roof: &'r Roof,
    options: &Options,
    situations: &[Situation<'r>],
    groups: &[(usize, u32)],
) -> Option<Tried> {
    let (liftable, stands) = fit(roof, groups)?;
    let count: u32 = groups.iter().map(|&(_, count)| count).sum();
    let lowest = at_lowest(&liftable);
    let asked = Asked { freeboard: options.freeboard };
    if !situations.iter().all(|situation| layout::holds(&lowest, situation, asked)) {
        return None;
    }
    let place = |wanted| options.rank_by.iter().position(|&criterion| criterion == wanted);
    let high = match (place(Criterion::SetHeight), place(Criterion::Load)) {
        (Some(set_height), Some(load)) => set_height < load,
        (Some(_), None) => true,
        (None, _) => false,
    };
    let reported: Vec<Group<'_>> = if high {
        let end = layout::highest_lift(&liftable, situations, asked).expect("holds at the lowest");
        let mut lifts: Vec<Length> = stands.iter().flat_map(|h| h.iter().map(move |&height| height - h[0])).collect();
        lifts.retain(|&lift| lift <= end);
        lifts.sort_by(|a, b| b.m().total_cmp(&a.m()));
        let standing = lifts.iter().map(|&lift| {
            let down = |(liftable, heights): (&Liftable<'r>, &Vec<Length>)| {
                let at = liftable.lifted(lift).set_height;
                let on_grid = heights.iter().copied().filter(|&height| height <= at);
                Group { set_height: on_grid.fold(heights[0], Length::max), ..liftable.group }
            };
            liftable.iter().zip(&stands).map(down).collect::<Vec<_>>()
        });
        let holds =
            |groups: &Vec<Group<'_>>| situations.iter().all(|situation| layout::holds(groups, situation, asked));
        let reported = standing.into_iter().find(holds).unwrap_or(lowest);
        if let Some(freeboard) = options.freeboard {
            for state in situations.iter().map(|situation| layout::state(&reported, situation)) {
                assert!(state.groups.iter().all(|g| g.freeboard.is_none_or(|kept| kept.m() >= freeboard.m() - 1e-12)));
            }
        }
        reported
    } else {
        lowest
    };
    let load = situations
        .iter()
        .map(|situation| {
            layout::state(&reported, situation).water.map_or(f64::INFINITY, |water| water.depth().nm() as f64)
        })
        .fold(f64::NEG_INFINITY, f64::max);
    let value = |criterion| match criterion {
        Criterion::Cost => layout::cost(&reported).expect("all priced").amount(),
        Criterion::Load => load,
        Criterion::Count => f64::from(count),
        Criterion::Width => groups
            .iter()
            .map(|&(index, count)| roof.sizes[index].device.width().map_or(0, Length::nm) * i64::from(count))
            .sum::<i64>() as f64,
        Criterion::Sizes => groups.len() as f64,
        Criterion::SetHeight => {
            -reported.iter().take(groups.len()).map(|group| group.set_height.m()).fold(f64::INFINITY, f64::min)
        }
        Criterion::Utilisation => unreachable!("no file asks for it"),
    };
    let rest = Criterion::ALL.into_iter().filter(|criterion| !options.rank_by.contains(criterion));
    let key = options.rank_by.iter().copied().chain(rest).map(value).collect();
    Some(Tried { groups: groups.to_vec(), key, reported: reported.iter().map(|group| group.set_height).collect() })
}

/// Every choice of sizes and counts, whether it fits or not.
fn every_choice(roof: &Roof, options: &Options) -> Vec<Vec<(usize, u32)>> {
    let most = *roof.areas[0].count.end();
    let mut all = Vec::new();
    let mut stack: Vec<Vec<(usize, u32)>> = vec![Vec::new()];
    while let Some(groups) = stack.pop() {
        if groups.len() < options.mix {
            let from = groups.last().map_or(0, |&(index, _)| index + 1);
            for index in from..roof.sizes.len() {
                for count in 1..=most {
                    let mut more = groups.clone();
                    more.push((index, count));
                    stack.push(more);
                }
            }
        }
        all.push(groups);
    }
    all.retain(|groups| !groups.is_empty() || !roof.areas[0].existing.is_empty());
    all
}

fn everything(roof: &Roof, options: &Options) -> Vec<Tried> {
    let situations = roof.situations(0);
    let choices = every_choice(roof, options);
    let mut tried: Vec<_> =
        choices.iter().filter_map(|groups| try_layout(roof, options, &situations, groups)).collect();
    let order = |a: &Tried, b: &Tried| {
        let keys = a.key.iter().zip(&b.key).map(|(a, b)| a.total_cmp(b)).find(|ordering| ordering.is_ne());
        keys.unwrap_or(Ordering::Equal).then_with(|| a.groups.cmp(&b.groups))
    };
    tried.sort_by(order);
    let mut families = HashSet::new();
    if options.fold {
        tried.retain(|tried| families.insert(family(roof, &tried.groups)));
    }
    tried.truncate(options.keep);
    tried
}

/// How many of each tag.
fn family(roof: &Roof, groups: &[(usize, u32)]) -> String {
    let mut family: Vec<(&str, u32)> = Vec::new();
    for &(index, count) in groups {
        let tag = &*roof.sizes[index].tag;
        match family.iter_mut().find(|(known, _)| *known == tag) {
            Some((_, total)) => *total += count,
            None => family.push((tag, count)),
        }
    }
    family.sort_unstable();
    format!("{family:?}")
}

#[test]
fn the_search_finds_what_trying_everything_finds() {
    let (mut feasible, mut infeasible) = (0, 0);
    for seed in 1..=2000_u64 {
        let mut dice = Dice(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15));
        let (roof, options) = (roof(&mut dice), options(&mut dice));
        let expected = everything(&roof, &options);
        let answer = search::size(&roof, &options, &[0]).remove(0);
        match answer.outcome {
            Outcome::Optimal(layouts) => {
                feasible += 1;
                let found: Vec<_> = layouts
                    .iter()
                    .map(|layout| {
                        let index =
                            |size: &Size| roof.sizes.iter().position(|known| std::ptr::eq(known, size)).unwrap();
                        let groups = layout.groups.iter();
                        groups
                            .map(|placed| (index(placed.group.size), placed.group.count, placed.group.set_height))
                            .collect::<Vec<_>>()
                    })
                    .collect();
                let wanted: Vec<_> = expected
                    .iter()
                    .map(|tried| {
                        let groups = tried.groups.iter().zip(&tried.reported);
                        groups.map(|(&(index, count), &height)| (index, count, height)).collect::<Vec<_>>()
                    })
                    .collect();
                assert_eq!(found, wanted, "seed {seed}, {options:?}");
            }
            Outcome::Stopped { .. } => unreachable!("nobody ends it"),
            Outcome::Infeasible(why) => {
                infeasible += 1;
                assert!(expected.is_empty(), "seed {seed}: the search found none of {}", expected.len());
                check_why(&roof, &options, &why, seed);
            }
        }
    }
    assert!(
        feasible > 300 && infeasible > 300,
        "{feasible} feasible, {infeasible} not: the roofs are not varied enough"
    );
}

/// Devices that are there already: their flow, edge, tops and blocking count, they cost nothing, and nothing need be added.
#[test]
fn what_is_added_to_what_is_there_is_what_trying_everything_adds() {
    let (mut nothing, mut added, mut infeasible) = (0, 0, 0);
    for seed in 1..=1500_u64 {
        let mut dice = Dice(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15) ^ 0x5555);
        let (mut roof, options) = (roof(&mut dice), options(&mut dice));
        there_already(&mut roof, 0, &mut dice);
        let expected = everything(&roof, &options);
        match search::size(&roof, &options, &[0]).remove(0).outcome {
            Outcome::Optimal(layouts) => {
                let index = |size: &Size| roof.sizes.iter().position(|known| std::ptr::eq(known, size)).unwrap();
                let of = |layout: &search::Ranked<'_>| {
                    let (new, there) = layout.groups.split_at(layout.groups.len() - layout.kept);
                    let as_given = there.iter().zip(&roof.areas[0].existing);
                    assert!(as_given.clone().count() == roof.areas[0].existing.len());
                    assert!(
                        as_given
                            .clone()
                            .all(|(placed, given)| placed.from == given.set_height && placed.to == placed.from)
                    );
                    let group = |placed: &search::Placed<'_>| {
                        (index(placed.group.size), placed.group.count, placed.group.set_height)
                    };
                    new.iter().map(group).collect::<Vec<_>>()
                };
                let found: Vec<_> = layouts.iter().map(of).collect();
                let wanted: Vec<_> = expected
                    .iter()
                    .map(|tried| {
                        let groups = tried.groups.iter().zip(&tried.reported);
                        groups.map(|(&(index, count), &height)| (index, count, height)).collect::<Vec<_>>()
                    })
                    .collect();
                assert_eq!(found, wanted, "seed {seed}, {options:?}");
                nothing += u32::from(found.iter().any(Vec::is_empty));
                added += u32::from(found.iter().all(|groups| !groups.is_empty()));
            }
            Outcome::Stopped { .. } => unreachable!("nobody ends it"),
            Outcome::Infeasible(why) => {
                infeasible += 1;
                assert!(expected.is_empty(), "seed {seed}: the search found none of {}", expected.len());
                check_why(&roof, &options, &why, seed);
            }
        }
    }
    let enough = nothing > 200 && added > 100 && infeasible > 200;
    assert!(enough, "nothing {nothing}, added {added}, none {infeasible}: the roofs are not varied enough");
}

/// Every way of closing some of what is there: how many of each group.
fn every_closing(existing: &[GivenGroup]) -> Vec<Vec<u32>> {
    let mut all = vec![Vec::new()];
    for group in existing {
        all = all.iter().flat_map(|way: &Vec<u32>| (0..=group.count).map(|n| [&way[..], &[n]].concat())).collect();
    }
    all
}

/// The roof after some of what is there is closed.
fn after_closing(roof: &Roof, way: &[u32]) -> Roof {
    let mut roof = roof.clone();
    let area = &mut roof.areas[0];
    area.replace = None;
    for (group, closed) in area.existing.iter_mut().zip(way) {
        group.count -= closed;
    }
    area.existing.retain(|group| group.count > 0);
    roof
}

/// What is closed and what is added by trying every closing with every choice: each with its key, the price of closing counted
/// in.
fn every_replacement(roof: &Roof, options: &Options) -> Vec<(Vec<u32>, Tried)> {
    let price = roof.areas[0].replace.expect("may be closed");
    let rest = Criterion::ALL.into_iter().filter(|criterion| !options.rank_by.contains(criterion));
    let criteria: Vec<Criterion> = options.rank_by.iter().copied().chain(rest).collect();
    let of_cost = criteria.iter().position(|&criterion| criterion == Criterion::Cost).expect("among them");
    let mut all = Vec::new();
    for way in every_closing(&roof.areas[0].existing) {
        let left = after_closing(roof, &way);
        let situations = left.situations(0);
        for groups in every_choice(&left, options) {
            if let Some(mut tried) = try_layout(&left, options, &situations, &groups) {
                tried.key[of_cost] += (price * way.iter().sum::<u32>()).amount();
                all.push((way.clone(), tried));
            }
        }
    }
    all.sort_by(|(way, a), (other, b)| {
        let keys = a.key.iter().zip(&b.key).map(|(a, b)| a.total_cmp(b)).find(|ordering| ordering.is_ne());
        let closed = |way: &[u32]| way.iter().sum::<u32>();
        let by_way = || closed(way).cmp(&closed(other)).then_with(|| way.cmp(other));
        keys.unwrap_or(Ordering::Equal).then_with(by_way).then_with(|| a.groups.cmp(&b.groups))
    });
    all
}

/// The best of each family of additions, as many as are kept.
fn best_replacements(roof: &Roof, options: &Options) -> Vec<(Vec<u32>, Tried)> {
    let mut all = every_replacement(roof, options);
    let mut families = HashSet::new();
    if options.fold {
        all.retain(|(_, tried)| families.insert(family(roof, &tried.groups)));
    }
    all.truncate(options.keep);
    all
}

/// A roof with something there that may be closed, for nothing or at a price.
fn roof_with_closing(dice: &mut Dice) -> (Roof, Options) {
    let (mut roof, options) = (roof(dice), options(dice));
    there_already(&mut roof, 0, dice);
    let area = &mut roof.areas[0];
    for group in &mut area.existing {
        group.count += dice.upto(1) as u32;
        // Often so high that they take edge and carry little.
        group.set_height = on_grid(group.set_height + Length::inches(dice.pick(&[0.0, 2.0])));
    }
    let at_edge = area.existing.iter().filter(|group| group.size.place == Place::Edge);
    let taken = brimline::rules::edge_used(at_edge.map(|group| (&group.size, group.count)), area);
    // Now and then an edge that is all taken; never none at all, where nothing could be there.
    let enough = Length::from_nm(taken).max(Length::inches(1.0));
    area.edge = area.edge.map(|edge| if dice.one_in(2) { enough } else { edge.max(enough) });
    area.replace = Some(Money::nearest(dice.pick(&[0.0, 0.0, 60.0, 250.0, 900.0])));
    (roof, options)
}

/// What may be closed is closed and added to as trying every closing with every choice finds, to the last key.
#[test]
fn what_is_replaced_is_what_trying_every_closing_replaces() {
    let (mut closing, mut closing_alone, mut opened, mut infeasible) = (0, 0, 0, 0);
    for seed in 1..=1200_u64 {
        let mut dice = Dice(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15) ^ 0x7777);
        let (roof, options) = roof_with_closing(&mut dice);
        let area = &roof.areas[0];
        let expected = best_replacements(&roof, &options);
        let kept_whole = Roof { areas: vec![Catchment { replace: None, ..area.clone() }], ..roof.clone() };
        let answer = search::size(&roof, &options, &[0]).remove(0);
        let layouts = answer.outcome.layouts();
        let index = |size: &Size| roof.sizes.iter().position(|known| std::ptr::eq(known, size)).unwrap();
        let told = |layout: &search::Ranked<'_>| {
            let (new, there) = layout.groups.split_at(layout.groups.len() - layout.kept);
            let closed = layout.closed.as_ref().expect("may be closed");
            let same = |group: &Group<'_>, given: &GivenGroup| std::ptr::eq(group.size, &raw const given.size);
            let of = |given: &GivenGroup| {
                closed.groups.iter().find(|group| same(group, given)).map_or(0, |group| group.count)
            };
            let way: Vec<u32> = area.existing.iter().map(of).collect();
            let stays: Vec<u32> = area.existing.iter().zip(&way).map(|(given, closed)| given.count - closed).collect();
            assert_eq!(there.iter().map(|placed| placed.group.count).sum::<u32>(), stays.iter().sum::<u32>());
            for placed in there {
                let given = area.existing.iter().position(|given| same(&placed.group, given)).expect("was there");
                assert!(placed.group.count == stays[given] && placed.from == placed.to, "seed {seed}");
            }
            let price = area.replace.expect("given") * way.iter().sum::<u32>();
            assert_eq!(closed.cost, price, "seed {seed}");
            let of_new: i64 =
                new.iter().map(|p| (p.group.size.price.expect("priced") * p.group.count).millionths()).sum();
            assert_eq!(layout.cost.expect("priced").millionths(), of_new + price.millionths(), "seed {seed}");
            let asked = Asked { freeboard: options.freeboard };
            let all: Vec<Group<'_>> = layout.groups.iter().map(|placed| placed.group).collect();
            assert!(roof.situations(0).iter().all(|situation| layout::holds(&all, situation, asked)), "seed {seed}");
            let added: Vec<_> = new.iter().map(|p| (index(p.group.size), p.group.count, p.group.set_height)).collect();
            (way, added)
        };
        let found: Vec<_> = layouts.iter().map(told).collect();
        let wanted: Vec<_> = expected
            .iter()
            .map(|(way, tried)| {
                let groups = tried.groups.iter().zip(&tried.reported);
                (way.clone(), groups.map(|(&(index, count), &height)| (index, count, height)).collect::<Vec<_>>())
            })
            .collect();
        assert_eq!(found, wanted, "seed {seed}, {options:?}");
        let closes = |way: &[u32]| way.iter().sum::<u32>() > 0;
        closing += u32::from(found.first().is_some_and(|(way, _)| closes(way)));
        closing_alone += u32::from(found.iter().any(|(way, added)| closes(way) && added.is_empty()));
        // What keeping everything comes to is told where the first closes.
        let keeping = best_of_kept(&kept_whole, &options);
        match &answer.keeping {
            Some(outcome) => {
                assert!(closes(&found[0].0), "seed {seed}");
                let first = outcome.layouts().first();
                let first = first.map(|layout| layout.groups.iter().take(layout.groups.len() - layout.kept));
                let first = first.map(|new| new.map(|p| (index_of(&roof, p.group.size), p.group.count)).collect());
                assert_eq!(first, keeping, "seed {seed}");
                opened += u32::from(keeping.is_none());
            }
            None => assert!(found.first().is_none_or(|(way, _)| !closes(way)), "seed {seed}"),
        }
        if let Outcome::Infeasible(why) = &answer.outcome {
            infeasible += 1;
            check_why_of_all(&roof, &options, why, seed);
        }
    }
    let enough = closing > 150 && closing_alone > 20 && opened > 30 && infeasible > 150;
    assert!(enough, "{closing} close, {closing_alone} alone, {opened} open, {infeasible} do not hold");
}

fn index_of(roof: &Roof, size: &Size) -> usize {
    roof.sizes.iter().position(|known| std::ptr::eq(known, size)).expect("of the roof")
}

/// The first layout where all that is there is kept.
fn best_of_kept(roof: &Roof, options: &Options) -> Option<Vec<(usize, u32)>> {
    everything(roof, options).first().map(|tried| tried.groups.clone())
}

/// Leave to close is never dearer than to keep, and a price above every saving is no leave at all.
#[test]
fn leave_to_close_never_costs() {
    let (mut cheaper, mut opened, mut dear) = (0, 0, 0);
    for seed in 1..=1500_u64 {
        let mut dice = Dice(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15) ^ 0x1212);
        let (roof, mut options) = roof_with_closing(&mut dice);
        options.rank_by = vec![Criterion::Cost];
        let at = |replace: Option<Money>| Roof {
            areas: vec![Catchment { replace, ..roof.areas[0].clone() }],
            ..roof.clone()
        };
        let told = |roof: &Roof| {
            let answer = search::size(roof, &options, &[0]).remove(0);
            let one = |layout: &search::Ranked<'_>| {
                let groups = layout.groups.iter();
                let groups = groups.map(|p| format!("{} {:?} {:?}", p.group.count, p.group.size, p.group.set_height));
                (layout.cost.expect("priced").millionths(), groups.collect::<Vec<_>>())
            };
            answer.outcome.layouts().iter().map(one).collect::<Vec<_>>()
        };
        let (kept, closed, dearest) = (told(&at(None)), told(&roof), told(&at(Some(Money::nearest(1e6)))));
        if let Some((cost, _)) = kept.first() {
            assert!(closed[0].0 <= *cost, "seed {seed}");
            cheaper += u32::from(closed[0].0 < *cost);
            // A saving is less than what every device of the roof costs.
            let cheap = dearest.iter().filter(|(cost, _)| *cost < Money::nearest(1e6).millionths());
            assert!(cheap.eq(&kept), "seed {seed}");
            dear += 1;
        } else {
            opened += u32::from(!closed.is_empty());
        }
    }
    assert!(cheaper > 5 && opened > 50 && dear > 100, "{cheaper} cheaper, {opened} open, {dear} in all");
}

/// Cures and what binds, where what is there may be closed: the least changes by trying every closing with every choice.
#[test]
fn cures_and_what_binds_heed_what_may_be_closed() {
    let (mut cured, mut binding) = (0, 0);
    for seed in 1..=260_u64 {
        let mut dice = Dice(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15) ^ 0x4242);
        let (roof, mut options) = roof_with_closing(&mut dice);
        options.mix = options.mix.min(2);
        options.rank_by = vec![Criterion::Cost];
        let least = |roof: &Roof, options: &Options| {
            let options = Options { keep: 1, fold: false, ..options.clone() };
            best_replacements(roof, &options).first().map(|(_, tried)| tried.key[0])
        };
        let changes = match least(&roof, &options) {
            Some(_) => search::binds(&roof, &options, 0).expect("all priced"),
            None => search::cures(&roof, &options, 0),
        };
        for change in changes.found {
            if matches!(change.change, Relaxation::Devices(more) if more > 2) {
                continue;
            }
            let told = change.layout().and_then(|layout| layout.cost).expect("opens a layout").amount();
            assert_eq!(
                least(&change.roof, &Options { rank_by: vec![Criterion::Cost], ..change.options.clone() }),
                Some(told),
                "seed {seed}: {:?}",
                change.change
            );
            let Some(less) = a_step_less(&change.change) else { continue };
            let (changed, options) = search::relaxed(&roof, &options, &less);
            match changes.now {
                Some(_) => {
                    assert!(least(&changed, &options) > Some(told), "seed {seed}: {less:?} saves as much");
                    binding += 1;
                }
                None => {
                    assert!(least(&changed, &options).is_none(), "seed {seed}: {less:?} cures too");
                    cured += 1;
                }
            }
        }
    }
    assert!(cured > 60 && binding > 60, "{cured} cures, {binding} bind");
}

/// Areas alike but for what is there are asked together which sizes are worth trying: the answers are those of each alone.
#[test]
fn what_is_there_does_not_change_the_answer_of_another_area() {
    for seed in 1..=300_u64 {
        let mut dice = Dice(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15) ^ 0x3333);
        let (mut roof, options) = (roof(&mut dice), options(&mut dice));
        let bare = roof.areas[0].clone();
        there_already(&mut roof, 0, &mut dice);
        roof.areas.push(Catchment { count: roof.areas[0].count.clone(), ..bare });
        roof.demands.push(roof.demands[0]);
        let told = |answer: &search::Answer<'_>| {
            let groups = |layout: &search::Ranked<'_>| format!("{:?} {:?}", layout.cost, layout.groups);
            answer.outcome.layouts().iter().map(groups).collect::<Vec<_>>()
        };
        for together in search::size(&roof, &options, &[0, 1]) {
            let area = together.area;
            let alone = search::size(&roof, &options, &[area]);
            assert_eq!(told(&together), told(&alone[0]), "seed {seed}, area {area}");
        }
    }
}

/// One group or two that are there already, and an edge that is long enough for them.
fn there_already(roof: &mut Roof, area: usize, dice: &mut Dice) {
    let offered = sizes(dice);
    let area = &mut roof.areas[area];
    for _ in 0..=dice.upto(1) {
        let size =
            Size { price: Some(Money::default()), ..offered[dice.upto(offered.len() as u64 - 1) as usize].clone() };
        let set_height = on_grid(Length::inches(dice.upto(12) as f64 * 0.25));
        area.existing.push(GivenGroup { size, count: 1 + dice.upto(1) as u32, set_height });
    }
    area.count = *area.count.start()..=area.count.end() + dice.upto(3) as u32;
    let at_edge = area.existing.iter().filter(|group| group.size.place == Place::Edge);
    let taken = brimline::rules::edge_used(at_edge.map(|group| (&group.size, group.count)), area);
    area.edge = area.edge.map(|edge| Length::from_nm(edge.nm() + taken));
}

/// What is added to an area, and what is there.
fn with_what_is_there<'r>(roof: &'r Roof, area: usize, added: &[Group<'r>]) -> Vec<Group<'r>> {
    added.iter().copied().chain(roof.areas[area].existing.iter().map(GivenGroup::group)).collect()
}

/// The reasons that the search gives, against every layout that fits.
fn check_why(roof: &Roof, options: &Options, why: &Why<'_>, seed: u64) {
    check_why_of(roof, std::slice::from_ref(roof), options, why, seed);
}

/// The same where what is there may be closed: against every layout that fits after any closing.
fn check_why_of_all(roof: &Roof, options: &Options, why: &Why<'_>, seed: u64) {
    let closings = every_closing(&roof.areas[0].existing);
    let after: Vec<Roof> = closings.iter().map(|way| after_closing(roof, way)).collect();
    check_why_of(roof, &after, options, why, seed);
}

fn check_why_of(roof: &Roof, standing: &[Roof], options: &Options, why: &Why<'_>, seed: u64) {
    let situations = roof.situations(0);
    let of_one = |roof: &'_ Roof| -> Vec<Vec<(usize, u32)>> { every_choice(roof, options) };
    let fitting: Vec<Vec<Group<'_>>> = standing
        .iter()
        .flat_map(|roof| of_one(roof).into_iter().filter_map(move |groups| fit(roof, &groups)))
        .map(|(liftable, _)| at_lowest(&liftable))
        .collect();
    let held = |groups: &[Group<'_>], cases: &[usize]| {
        cases.iter().all(|&case| layout::holds(groups, &situations[case], Asked::default()))
    };
    match why {
        Why::NothingStands { .. } | Why::NothingFits { .. } => assert!(fitting.is_empty(), "seed {seed}: layouts fit"),
        Why::Limits { best, alone, together } => {
            let groups: Vec<_> = best.groups.iter().map(|placed| placed.group).collect();
            let least = fitting.iter().map(|groups| utilisation(groups, &situations)).fold(f64::INFINITY, f64::min);
            let reached = utilisation(&groups, &situations);
            assert!(reached == least || (reached - least).abs() < 1e-9, "seed {seed}: best {reached}, least {least}");
            for case in 0..situations.len() {
                let possible = fitting.iter().any(|groups| held(groups, &[case]));
                assert_eq!(possible, !alone.contains(&case), "seed {seed}, case {case}");
            }
            if !together.is_empty() {
                assert!(alone.is_empty() && !fitting.iter().any(|groups| held(groups, together)), "seed {seed}");
            }
        }
        Why::Freeboard { asked, best } => {
            let all: Vec<usize> = (0..situations.len()).collect();
            let freeboard = |groups: &[Group<'_>]| {
                let of_case = |situation| {
                    let state = layout::state(groups, situation);
                    state.groups.iter().filter_map(|group| group.freeboard).map(Length::m).fold(f64::INFINITY, f64::min)
                };
                situations.iter().map(of_case).fold(f64::INFINITY, f64::min)
            };
            let most = fitting.iter().filter(|g| held(g, &all)).map(|g| freeboard(g)).fold(f64::NEG_INFINITY, f64::max);
            let kept = best.as_ref().expect("layouts hold the limits").0;
            assert!(most < asked.m() && (most - kept.m()).abs() < 2e-5, "seed {seed}: most {most}, told {kept:?}");
        }
        _ => unreachable!("seed {seed}: a reason unknown to this test"),
    }
}

/// The cheapest plan of a few areas against trying every set of sizes with every layout of each area.
#[test]
fn the_plan_is_that_of_trying_everything() {
    let (mut found, mut none, mut beside) = (0, 0, 0);
    for seed in 1..=1200_u64 {
        let mut dice = Dice(seed.wrapping_mul(0xd134_2543_de82_ef95));
        let mut whole = roof(&mut dice);
        let mut options = options(&mut dice);
        options.mix = options.mix.min(2);
        options.keep = 1;
        for _ in 0..dice.upto(3) {
            let other = roof(&mut dice).areas.remove(0);
            let limits = whole.cases.iter().map(|_| other.limits[0]).collect();
            whole.areas.push(Catchment { limits, ..other });
        }
        whole.demands = whole.areas.iter().map(|area| whole.storm.intensity * area.area).collect();
        for area in 0..whole.areas.len() {
            if dice.one_in(2) {
                there_already(&mut whole, area, &mut dice);
            }
        }
        let asked = PlanAsked {
            sizes: dice.one_in(4).then_some(()).map_or(Some(1 + dice.upto(2) as u32), |()| None),
            size_price: Money::nearest(100.0 * dice.upto(3) as f64),
        };
        let areas: Vec<usize> = (0..whole.areas.len()).collect();
        // Every area's layouts by cost: what each costs and which sizes it needs.
        let layouts: Vec<Vec<(i64, u32)>> = areas
            .iter()
            .map(|&area| {
                let alone = Roof {
                    areas: vec![whole.areas[area].clone()],
                    demands: vec![whole.demands[area]],
                    ..whole.clone()
                };
                let situations = alone.situations(0);
                every_choice(&alone, &options)
                    .iter()
                    .filter_map(|groups| try_layout(&alone, &options, &situations, groups))
                    .map(|tried| {
                        let cost = tried.groups.iter().map(|&(size, count)| {
                            alone.sizes[size].price.expect("priced").millionths() * i64::from(count)
                        });
                        (cost.sum(), tried.groups.iter().fold(0, |mask, &(size, _)| mask | 1 << size))
                    })
                    .collect()
            })
            .collect();
        let most = asked.sizes.unwrap_or(u32::MAX);
        let least = (0_u32..1 << whole.sizes.len())
            .filter(|set| set.count_ones() <= most)
            .filter_map(|set| {
                let of_area = |layouts: &Vec<(i64, u32)>| {
                    layouts.iter().filter(|(_, needs)| needs & !set == 0).map(|&(cost, _)| cost).min()
                };
                let costs = layouts.iter().map(of_area).collect::<Option<Vec<i64>>>()?;
                Some(costs.iter().sum::<i64>() + asked.size_price.millionths() * i64::from(set.count_ones()))
            })
            .min();
        let plans = search::plan(&whole, &options, asked, &areas).expect("all priced");
        let best = plans.plans.first();
        assert_eq!(best.map(|plan| plan.cost.millionths()), least, "seed {seed}");
        let Some(plan) = best else {
            none += 1;
            continue;
        };
        found += 1;
        beside += usize::from(whole.areas.iter().any(|area| !area.existing.is_empty()));
        let of_layouts: i64 = plan.layouts.iter().map(|layout| layout.cost.expect("priced").millionths()).sum();
        let of_sizes = (asked.size_price * u32::try_from(plan.sizes.len()).expect("few")).millionths();
        assert_eq!(of_layouts + of_sizes, plan.cost.millionths(), "seed {seed}: the layouts cost what the plan says");
        assert!(plan.sizes.len() as u32 <= most);
        for (layout, &area) in plan.layouts.iter().zip(&areas) {
            let groups: Vec<_> = layout.groups.iter().map(|placed| placed.group).collect();
            let of_the_plan = |size: &Size| plan.sizes.iter().any(|known| std::ptr::eq(*known, size));
            assert!(layout.added().iter().all(|placed| of_the_plan(placed.group.size)));
            let asked = Asked { freeboard: options.freeboard };
            assert!(whole.situations(area).iter().all(|situation| layout::holds(&groups, situation, asked)));
        }
        let costs: Vec<_> = plans.by_sizes.iter().filter_map(|(_, cost)| *cost).collect();
        assert!(costs.is_sorted_by(|a, b| a >= b), "seed {seed}: more sizes allowed are never dearer");
    }
    assert!(found > 100 && none > 100, "{found} plans, {none} without: the roofs are not varied enough");
    assert!(beside > 100, "{beside} plans beside what is there");
}

/// The plan with a price of strength, against every set of sizes with every layout of each area at every raise.
#[test]
fn the_plan_with_stronger_areas_is_that_of_trying_everything() {
    let (mut raised, mut kept, mut none, mut bare) = (0, 0, 0, 0);
    for seed in 1..=700_u64 {
        let mut dice = Dice(seed.wrapping_mul(0xd134_2543_de82_ef95));
        let mut whole = roof(&mut dice);
        let mut options = options(&mut dice);
        options.mix = options.mix.min(2);
        for _ in 0..dice.upto(2) {
            let other = roof(&mut dice).areas.remove(0);
            let limits = whole.cases.iter().map(|_| other.limits[0]).collect();
            whole.areas.push(Catchment { limits, ..other });
        }
        whole.demands = whole.areas.iter().map(|area| whole.storm.intensity * area.area).collect();
        for area in 0..whole.areas.len() {
            if dice.one_in(2) {
                there_already(&mut whole, area, &mut dice);
            }
        }
        let asked =
            PlanAsked { sizes: Some(1 + dice.upto(1) as u32), size_price: Money::nearest(100.0 * dice.upto(2) as f64) };
        let rate = dice.pick(&["0.002 / ft2 / psf", "0.02 / ft2 / psf", "0.2 / ft2 / psf"]);
        let step = Load::psf(3.0);
        let structure = search::Structure {
            stiffen: brimline::units::read_price(rate, &[Dimension::Area, Dimension::Load]).expect("a price"),
            step: Some(step),
            most: step * 4.0,
        };
        let areas: Vec<usize> = (0..whole.areas.len()).collect();
        // Every area's layouts at every raise: what each costs with its strength, and which sizes it needs.
        let layouts: Vec<Vec<(i64, u32)>> = areas
            .iter()
            .map(|&area| {
                let here = alone(&whole, area);
                let at = |steps: u32| {
                    let raise = step * f64::from(steps);
                    let (roof, _) = search::relaxed(&here, &options, &Relaxation::Load(raise));
                    let strength = structure.cost(roof.areas[0].area, raise).millionths();
                    let cost = |groups: &Vec<(usize, u32)>| -> i64 {
                        let of_group = |&(size, count): &(usize, u32)| {
                            roof.sizes[size].price.expect("priced").millionths() * i64::from(count)
                        };
                        groups.iter().map(of_group).sum()
                    };
                    let used = |groups: &Vec<(usize, u32)>| groups.iter().fold(0, |mask, &(size, _)| mask | 1 << size);
                    let priced = |groups: Vec<(usize, u32)>| (cost(&groups) + strength, used(&groups));
                    holding(&roof, &options).into_iter().map(priced).collect::<Vec<_>>()
                };
                (0..=4).flat_map(at).collect()
            })
            .collect();
        let most = asked.sizes.expect("given");
        let least = (0_u32..1 << whole.sizes.len())
            .filter(|set| set.count_ones() <= most)
            .filter_map(|set| {
                let of_area = |layouts: &Vec<(i64, u32)>| {
                    layouts.iter().filter(|(_, needs)| needs & !set == 0).map(|&(cost, _)| cost).min()
                };
                let costs = layouts.iter().map(of_area).collect::<Option<Vec<i64>>>()?;
                Some(costs.iter().sum::<i64>() + asked.size_price.millionths() * i64::from(set.count_ones()))
            })
            .min();
        let found = search::stiffened_plan(&whole, &options, asked, &structure, &areas);
        assert_eq!(found.as_ref().map(|plan| plan.cost.millionths()), least, "seed {seed}");
        let Some(plan) = found else {
            none += 1;
            continue;
        };
        let parts = plan.areas.iter().map(|area| area.openings.millionths() + area.strength.millionths());
        let sizes = (asked.size_price * plan.sizes.len() as u32).millionths();
        assert_eq!(parts.sum::<i64>() + sizes, plan.cost.millionths(), "seed {seed}: the parts make the whole");
        for (area, &index) in plan.areas.iter().zip(&areas) {
            let (roof, _) = search::relaxed(&alone(&whole, index), &options, &Relaxation::Load(area.raise));
            let asked = Asked { freeboard: options.freeboard };
            let groups = with_what_is_there(&whole, index, &area.layout.groups());
            assert!(roof.situations(0).iter().all(|situation| layout::holds(&groups, situation, asked)), "seed {seed}");
        }
        bare += usize::from(plan.sizes.is_empty());
        if plan.areas.iter().any(|area| area.raise > Load::ZERO) { raised += 1 } else { kept += 1 }
    }
    assert!(raised > 25 && kept > 25 && none > 10, "{raised} raised, {kept} not, {none} without a plan");
    assert!(bare > 10, "{bare} plans that add nothing");
}

/// One step less of a change, in the steps of a US roof; none where that is no change at all.
fn a_step_less(change: &Relaxation) -> Option<Relaxation> {
    let inches = |length: Length, step: f64| {
        let less = Length::from_nm(length.nm() - Length::inches(step).nm());
        (less > Length::ZERO).then_some(less)
    };
    match *change {
        Relaxation::Load(more) => Some(more - Load::psf(0.1)).filter(|less| less.to_psf() > 1e-6).map(Relaxation::Load),
        Relaxation::Depth(more) => inches(more, 0.01).map(Relaxation::Depth),
        Relaxation::Limits(more) => inches(more, 0.01).map(Relaxation::Limits),
        Relaxation::Sill(less) => inches(less, 0.01).map(Relaxation::Sill),
        Relaxation::Devices(more) => (more > 1).then(|| Relaxation::Devices(more - 1)),
        Relaxation::Groups(more) => (more > 1).then(|| Relaxation::Groups(more - 1)),
        Relaxation::Width(more) => inches(more, 0.25).map(Relaxation::Width),
        Relaxation::Height(more) => inches(more, 0.25).map(Relaxation::Height),
        Relaxation::Freeboard(less) => inches(less, 0.01).map(Relaxation::Freeboard),
        Relaxation::Edge(more) => inches(more, 3.0).map(Relaxation::Edge),
        Relaxation::Demand(factor) => (factor < 0.9989).then_some(Relaxation::Demand(factor + 0.001)),
        Relaxation::Rules(_) => None,
    }
}

/// Every cure cures, and a step less of it does not: by trying everything on the roof so changed.
#[test]
fn cures_are_the_least_changes_that_cure() {
    let (mut cured, mut steps) = (0, 0);
    for seed in 1..=260_u64 {
        let mut dice = Dice(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15));
        let (roof, mut options) = (roof(&mut dice), options(&mut dice));
        options.mix = options.mix.min(2);
        let answer = search::size(&roof, &options, &[0]).remove(0);
        let Outcome::Infeasible(_) = answer.outcome else { continue };
        for cure in search::cures(&roof, &options, 0).found {
            if matches!(cure.change, Relaxation::Devices(more) if more > 6) {
                continue;
            }
            assert!(cure.layout().is_some(), "seed {seed}: {:?}", cure.change);
            assert!(!everything(&cure.roof, &cure.options).is_empty(), "seed {seed}: {:?}", cure.change);
            cured += 1;
            if let Some(less) = a_step_less(&cure.change) {
                let (roof, options) = search::relaxed(&roof, &options, &less);
                assert!(everything(&roof, &options).is_empty(), "seed {seed}: {less:?} cures too");
                steps += 1;
            }
        }
    }
    assert!(cured > 150 && steps > 100, "{cured} cures, {steps} with a step less");
}

/// The least cost of any layout on a roof so changed, by trying everything.
fn least_cost(roof: &Roof, options: &Options) -> Option<Money> {
    let by_cost = Options { rank_by: vec![Criterion::Cost], keep: 1, fold: false, ..options.clone() };
    let cost = |tried: &Tried| {
        let of_group = |&(size, count): &(usize, u32)| roof.sizes[size].price.expect("priced") * count;
        tried
            .groups
            .iter()
            .map(of_group)
            .fold(Money::default(), |sum, cost| Money::from_millionths(sum.millionths() + cost.millionths()))
    };
    everything(roof, &by_cost).first().map(cost)
}

/// Openings and strength together cost what the best of every single step costs.
#[test]
fn a_stronger_roof_is_weighed_at_every_step() {
    let (mut raised, mut kept, mut none) = (0, 0, 0);
    for seed in 1..=380_u64 {
        let mut dice = Dice(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15));
        let (mut roof, options) = (roof(&mut dice), options(&mut dice));
        if dice.one_in(3) {
            there_already(&mut roof, 0, &mut dice);
        }
        // From next to nothing to more than the openings.
        let rate = dice.pick(&["0.002 / ft2 / psf", "0.05 / ft2 / psf", "1 / ft2 / psf"]);
        let structure = search::Structure {
            stiffen: brimline::units::read_price(rate, &[Dimension::Area, Dimension::Load]).expect("a price"),
            step: Some(Load::psf(0.5)),
            most: Load::psf(12.0),
        };
        let total = |step: i32| {
            let raise = structure.step.expect("given") * f64::from(step);
            let (roof, options) = search::relaxed(&roof, &options, &Relaxation::Load(raise));
            let cost = least_cost(&roof, &options)?.millionths();
            Some(cost + structure.cost(roof.areas[0].area, raise).millionths())
        };
        let least = (0..=24).filter_map(|step| Some((total(step)?, step))).min();
        let found = search::stiffened(&roof, &options, &structure, 0).expect("nobody ends it");
        let told = found.as_ref().map(|found| {
            let openings = found.raised.layout().and_then(|layout| layout.cost).expect("opens a layout");
            (openings.millionths() + found.strength.millionths(), (found.raise.to_psf() / 0.5).round() as i32)
        });
        assert_eq!(told, least, "seed {seed}");
        match least {
            Some((_, 0)) => kept += 1,
            Some(_) => raised += 1,
            None => none += 1,
        }
    }
    assert!(raised > 30 && kept > 30 && none > 30, "{raised} raised, {kept} not, {none} without a layout");
}

/// What binds: the change saves what is told, a step less of it saves less, and what is told to save nothing does not.
#[test]
fn what_binds_is_the_least_change_that_saves_as_much() {
    let (mut binding, mut idle) = (0, 0);
    for seed in 1..=600_u64 {
        let mut dice = Dice(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15));
        let (roof, mut options) = (roof(&mut dice), options(&mut dice));
        options.mix = options.mix.min(2);
        let Some(now) = least_cost(&roof, &options) else {
            assert!(search::binds(&roof, &options, 0).is_none(), "seed {seed}: nothing binds where nothing holds");
            continue;
        };
        let binds = search::binds(&roof, &options, 0).expect("all priced");
        assert!(!binds.stopped);
        for bound in &binds.found {
            let told = bound.layout().and_then(|layout| layout.cost).expect("opens a layout");
            assert!(told < now, "seed {seed}: {:?}", bound.change);
            assert_eq!(least_cost(&bound.roof, &bound.options), Some(told), "seed {seed}: {:?}", bound.change);
            binding += 1;
            if let Some(less) = a_step_less(&bound.change) {
                let (roof, options) = search::relaxed(&roof, &options, &less);
                assert!(least_cost(&roof, &options) > Some(told), "seed {seed}: {less:?} saves as much");
            }
        }
        // Half a moderate change is within what was tried.
        for useless in &binds.useless {
            let half = match useless {
                Relaxation::Load(_) => Relaxation::Load(Load::psf(2.5)),
                Relaxation::Edge(_) => Relaxation::Edge(Length::inches(60.0)),
                Relaxation::Demand(_) => Relaxation::Demand(0.95),
                Relaxation::Devices(_) => Relaxation::Devices(1),
                _ => continue,
            };
            let (roof, options) = search::relaxed(&roof, &options, &half);
            assert_eq!(least_cost(&roof, &options), Some(now), "seed {seed}: {half:?} saves");
            idle += 1;
        }
    }
    assert!(binding > 100 && idle > 100, "{binding} changes bind, {idle} do not");
}

/// A search that is ended at once has found nothing, and what it proves of the rest is true of the best layout.
#[test]
fn what_is_proven_of_an_ended_search_is_true() {
    let mut bounds = 0;
    for seed in 1..=600_u64 {
        let mut dice = Dice(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15));
        let (roof, options) = (roof(&mut dice), options(&mut dice));
        let ended = Options { watch: Watch::default(), ..options.clone() };
        ended.watch.end();
        let best = search::size(&roof, &options, &[0]).remove(0).outcome;
        match search::size(&roof, &ended, &[0]).remove(0).outcome {
            Outcome::Stopped { layouts, bound } => {
                assert!(layouts.is_empty());
                let (Some(bound), Some(best)) = (bound, best.layouts().first()) else { continue };
                let width = |width: i64| width.max(0);
                let total: i64 = best
                    .groups
                    .iter()
                    .map(|placed| width(placed.group.size.clear_width().nm()) * i64::from(placed.group.count))
                    .sum();
                match bound {
                    Least::Cost(least) => assert!(least <= best.cost.expect("priced"), "seed {seed}"),
                    Least::Width(least) => assert!(least.nm() <= total, "seed {seed}"),
                    Least::Count(least) => {
                        assert!(least <= best.groups.iter().map(|placed| placed.group.count).sum(), "seed {seed}");
                    }
                }
                bounds += 1;
            }
            // Nothing to try: that needs no search.
            Outcome::Infeasible(Why::NothingStands { .. }) => {}
            other => panic!("seed {seed}: {other:?}"),
        }
    }
    assert!(bounds > 50, "{bounds} bounds");
}

/// The treads of least cost are what a search at every single step finds.
#[test]
fn treads_are_the_least_costs_at_every_step() {
    let (mut roofs, mut risers) = (0, 0);
    for seed in 1..=400_u64 {
        let mut dice = Dice(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15));
        let (mut roof, options) = (roof(&mut dice), options(&mut dice));
        if dice.one_in(3) {
            there_already(&mut roof, 0, &mut dice);
            roof.areas[0].replace = dice.one_in(2).then(|| Money::nearest(50.0 * dice.upto(6) as f64));
        }
        if roof.sizes.iter().any(|size| size.price.is_none()) {
            continue;
        }
        let raises = search::Raises { step: Load::psf(0.5), steps: -12..=24 };
        let treads = search::tradeoff(&roof, &options, 0, &raises).expect("nobody ends it");
        let by_cost = Options { rank_by: vec![search::Criterion::Cost], keep: 1, ..options };
        let cost = |roof: &Roof, options: &Options| {
            search::size(roof, options, &[0]).remove(0).outcome.layouts().first().and_then(|layout| layout.cost)
        };
        let mut reached = treads.iter().peekable();
        let mut told = None;
        for step in raises.steps.clone() {
            let raise = raises.step * f64::from(step);
            if let Some(tread) = reached.next_if(|tread| tread.change == Relaxation::Load(raise)) {
                let before = told;
                told = tread.layout().and_then(|layout| layout.cost);
                assert!(told.is_some() && told != before, "seed {seed}: {:?} is a riser", tread.change);
                risers += usize::from(before.is_some());
            }
            let (roof, options) = search::relaxed(&roof, &by_cost, &Relaxation::Load(raise));
            assert_eq!(told, cost(&roof, &options), "seed {seed}: raised by {step} steps");
        }
        assert!(reached.next().is_none(), "seed {seed}: every tread is at a step");
        roofs += 1;
    }
    assert!(roofs > 100 && risers > 100, "{roofs} roofs, {risers} risers");
}

/// A roof whose sizes resemble one another more often than chance would have it, some of them without a price.
fn roof_of_alike_sizes(dice: &mut Dice) -> Roof {
    let mut roof = roof(dice);
    for index in 1..roof.sizes.len() {
        let (before, after) = roof.sizes.split_at_mut(index);
        let (known, size) = (&before[index - 1], &mut after[0]);
        match (&known.device, &mut size.device) {
            (Device::Closed { width: wide, .. }, Device::Closed { width, height }) if dice.one_in(2) => {
                *width = *wide;
                // High enough, often, that both tops stay dry.
                *height = *height + Length::inches(dice.pick(&[0.0, 2.0, 4.0]));
            }
            (Device::Rated { width: wide, rating: known }, Device::Rated { width, rating }) if dice.one_in(2) => {
                (*width, *rating) = (*wide, Arc::clone(known));
            }
            _ => {}
        }
        if dice.one_in(3) {
            size.price = known.price;
        }
        if dice.one_in(3) {
            size.set_heights.clone_from(&known.set_heights);
        }
    }
    if dice.one_in(6) {
        let index = dice.upto(roof.sizes.len() as u64 - 1) as usize;
        roof.sizes[index].price = None;
    }
    roof
}

/// A layout as the front compares it: cost in millionths where it counts, deepest water in nanometres, count, width.
type Compared = [i64; 4];

fn compared(roof: &Roof, situations: &[Situation<'_>], priced: bool, groups: &[(usize, u32)]) -> Compared {
    let (liftable, _) = fit(roof, groups).expect("fits");
    let lowest = at_lowest(&liftable);
    let depth = |situation| layout::state(&lowest, situation).water.map_or(i64::MAX, |water| water.depth().nm());
    let sum = |value: &dyn Fn(&Size) -> i64| -> i64 {
        groups.iter().map(|&(index, count)| value(&roof.sizes[index]) * i64::from(count)).sum()
    };
    let cost = if priced { sum(&|size| size.price.expect("priced").millionths()) } else { 0 };
    [cost, situations.iter().map(depth).max().expect("cases"), sum(&|_| 1), sum(&|size| size.clear_width().nm())]
}

fn no_worse(one: &Compared, other: &Compared) -> bool {
    one.iter().zip(other).all(|(one, other)| one <= other)
}

/// All layouts of a roof's first area that hold it.
fn holding(roof: &Roof, options: &Options) -> Vec<Vec<(usize, u32)>> {
    let situations = roof.situations(0);
    let asked = Asked { freeboard: options.freeboard };
    let holds = |groups: &Vec<(usize, u32)>| {
        fit(roof, groups).is_some_and(|(liftable, _)| {
            situations.iter().all(|situation| layout::holds(&at_lowest(&liftable), situation, asked))
        })
    };
    every_choice(roof, options).into_iter().filter(holds).collect()
}

/// The front by trying everything: every layout against every other.
fn front_of_everything(roof: &Roof, options: &Options) -> Vec<(Compared, Vec<(usize, u32)>)> {
    let area = &roof.areas[0];
    let stands = |size: &Size| {
        let alone =
            area.edge.is_none_or(|edge| size.place != Place::Edge || size.clear_width() <= edge && edge > Length::ZERO);
        area.takes(size.device.kind()) && !heights(size, area).0.is_empty() && alone
    };
    let priced = roof.sizes.iter().filter(|size| stands(size)).all(|size| size.price.is_some());
    let situations = roof.situations(0);
    let mut all: Vec<_> = holding(roof, options)
        .into_iter()
        .map(|groups| (compared(roof, &situations, priced, &groups), groups))
        .collect();
    all.sort_by(|(a, one), (b, other)| a.cmp(b).then(one.len().cmp(&other.len())).then_with(|| one.cmp(other)));
    let keys: Vec<Compared> = all.iter().map(|(key, _)| *key).collect();
    let mut place = 0;
    all.retain(|(key, _)| {
        let beaten = keys.iter().any(|other| other != key && no_worse(other, key));
        let first = keys[..place].iter().all(|other| other != key);
        place += 1;
        !beaten && first
    });
    if !priced {
        all.sort_by_key(|([_, depth, count, width], _)| (*width, *count, *depth));
    }
    all
}

/// The layouts that are not beaten, each with its groups, are those of trying everything.
#[test]
fn the_front_is_that_of_trying_everything() {
    let (mut fronts, mut rows, mut unpriced) = (0, 0, 0);
    for seed in 1..=2000_u64 {
        let mut dice = Dice(seed.wrapping_mul(0xa076_1d64_78bd_642f));
        let (mut roof, mut options) = (roof_of_alike_sizes(&mut dice), options(&mut dice));
        if dice.one_in(3) {
            there_already(&mut roof, 0, &mut dice);
        }
        if dice.one_in(3) {
            // So much that of two openings alike under every limit only the higher one keeps it.
            options.freeboard = Some(Length::inches(dice.pick(&[2.0, 3.0])));
        }
        let expected = front_of_everything(&roof, &options);
        let front = search::front(&roof, &options, &[0]).remove(0);
        let index = |size: &Size| roof.sizes.iter().position(|known| std::ptr::eq(known, size)).expect("of the roof");
        let found: Vec<Vec<(usize, u32)>> = front
            .rows
            .iter()
            .map(|row| row.groups.iter().map(|group| (index(group.size), group.count)).collect())
            .collect();
        let wanted: Vec<_> = expected.iter().map(|(_, groups)| groups.clone()).collect();
        assert_eq!(found, wanted, "seed {seed}, {options:?}");
        for ((key, _), row) in expected.iter().zip(&front.rows) {
            assert_eq!((i64::from(row.count), row.width.nm()), (key[2], key[3]), "seed {seed}");
            assert_eq!(row.cost.map_or(0, Money::millionths), key[0], "seed {seed}");
            let situation = roof.situation(0, row.case);
            let water = layout::state(&with_what_is_there(&roof, 0, &row.groups), &situation).water.expect("holds");
            assert_eq!((water.depth().nm(), water.load), (key[1], row.load), "seed {seed}");
        }
        for (row, layout) in front.rows.iter().zip(front.opened(3)) {
            assert_eq!(layout.states[row.case].water.map(|water| water.load), Some(row.load), "seed {seed}");
        }
        fronts += usize::from(!found.is_empty());
        rows += found.len();
        unpriced += usize::from(front.rows.iter().any(|row| row.cost.is_none()));
    }
    assert!(fronts > 400 && rows > 3 * fronts && unpriced > 30, "{fronts} fronts, {rows} rows, {unpriced} unpriced");
}

/// One area of a roof as a roof of its own.
fn alone(whole: &Roof, area: usize) -> Roof {
    Roof { areas: vec![whole.areas[area].clone()], demands: vec![whole.demands[area]], ..whole.clone() }
}

/// Every combination of the areas' layouts of some sizes: cost with the price of the sizes used, load, count, width.
fn every_plan(whole: &Roof, options: &Options, asked: PlanAsked, sizes: u32) -> Vec<Compared> {
    let mut plans: Vec<(Compared, u32)> = vec![([0, 0, 0, 0], 0)];
    for area in 0..whole.areas.len() {
        let roof = alone(whole, area);
        let situations = roof.situations(0);
        let used = |groups: &[(usize, u32)]| groups.iter().fold(0_u32, |mask, &(size, _)| mask | 1 << size);
        let weighed = |depth: i64| situations[0].ponding.weighed(Length::from_nm(depth)).nm();
        let layouts: Vec<(Compared, u32)> = holding(&roof, options)
            .into_iter()
            .filter(|groups| used(groups) & !sizes == 0)
            .map(|groups| {
                let [cost, depth, count, width] = compared(&roof, &situations, true, &groups);
                ([cost, weighed(depth), count, width], used(&groups))
            })
            .collect();
        let with = |(plan, mask): &(Compared, u32)| {
            let (plan, mask) = (*plan, *mask);
            let join = move |(layout, more): &(Compared, u32)| {
                let load = plan[1].max(layout[1]);
                ([plan[0] + layout[0], load, plan[2] + layout[2], plan[3] + layout[3]], mask | more)
            };
            layouts.iter().map(join).collect::<Vec<_>>()
        };
        plans = plans.iter().flat_map(with).collect();
        plans.sort_unstable();
        plans.dedup();
    }
    let price = asked.size_price.millionths();
    plans
        .iter()
        .map(|(plan, mask)| [plan[0] + price * i64::from(mask.count_ones()), plan[1], plan[2], plan[3]])
        .collect()
}

/// The plans that are not beaten, of the sizes of the cheapest, against every combination of layouts.
#[test]
fn the_front_of_plans_is_that_of_trying_everything() {
    let (mut fronts, mut rows) = (0, 0);
    for seed in 1..=1500_u64 {
        let mut dice = Dice(seed.wrapping_mul(0xe703_7ed1_a0b4_28db));
        let (mut whole, mut options) = (roof(&mut dice), options(&mut dice));
        options.mix = options.mix.min(2);
        options.keep = 1;
        for _ in 0..dice.upto(2) {
            let other = roof(&mut dice).areas.remove(0);
            let limits = whole.cases.iter().map(|_| other.limits[0]).collect();
            whole.areas.push(Catchment { limits, ..other });
        }
        for area in &mut whole.areas {
            area.count = *area.count.start()..=*area.count.end() + 2;
        }
        whole.demands = whole.areas.iter().map(|area| whole.storm.intensity * area.area).collect();
        for area in 0..whole.areas.len() {
            if dice.one_in(3) {
                there_already(&mut whole, area, &mut dice);
            }
        }
        let asked =
            PlanAsked { sizes: Some(1 + dice.upto(2) as u32), size_price: Money::nearest(100.0 * dice.upto(3) as f64) };
        let areas: Vec<usize> = (0..whole.areas.len()).collect();
        let plans = search::plan(&whole, &options, asked, &areas).expect("all priced");
        let Some(cheapest) = plans.plans.first() else { continue };
        let index = |size: &Size| whole.sizes.iter().position(|known| std::ptr::eq(known, size)).expect("of the roof");
        let sizes = cheapest.sizes.iter().fold(0_u32, |mask, &size| mask | 1 << index(size));
        let every = every_plan(&whole, &options, asked, sizes);
        let mut wanted: Vec<Compared> = every
            .iter()
            .filter(|key| !every.iter().any(|other| other != *key && no_worse(other, key)))
            .copied()
            .collect();
        wanted.sort_unstable();
        wanted.dedup();
        let PlanFront::Finished(found) = search::plan_front(&whole, &options, asked, &areas, cheapest) else {
            panic!("seed {seed}: a small roof")
        };
        assert_eq!(found[0].cost, cheapest.cost, "seed {seed}");
        let keys: Vec<Compared> = found
            .iter()
            .map(|plan| {
                let worst = |(layout, &area): (&Vec<Group<'_>>, &usize)| {
                    let situations = whole.situations(area);
                    let groups = with_what_is_there(&whole, area, layout);
                    let depths =
                        situations.iter().map(|here| layout::state(&groups, here).water.expect("holds").depth().nm());
                    situations[0].ponding.weighed(Length::from_nm(depths.max().expect("cases"))).nm()
                };
                let load = plan.layouts.iter().zip(&areas).map(worst).max().expect("areas");
                let groups = plan.layouts.iter().flatten();
                let cost: i64 =
                    groups.map(|group| (group.size.price.expect("priced") * group.count).millionths()).sum();
                let sizes = i64::try_from(plan.sizes.len()).expect("few");
                assert_eq!(plan.cost.millionths(), cost + asked.size_price.millionths() * sizes, "seed {seed}");
                [plan.cost.millionths(), load, i64::from(plan.count), plan.width.nm()]
            })
            .collect();
        assert_eq!(keys, wanted, "seed {seed}");
        fronts += 1;
        rows += keys.len();
    }
    assert!(fronts > 100 && rows > 3 * fronts, "{fronts} fronts, {rows} rows: the roofs are not varied enough");
}
