//! The report of `check`: the given layouts of each area side by side, what each leaves, and what fails.

use std::io::{self, Write};

use rayon::prelude::*;
use serde::{Serialize, Serializer};

use crate::input::Assumed;
use crate::review::{Checked, Effect, Failing, Input, Mend, Routed, Sensitivity, Storage, Tolerances};
use crate::roof::{Roof, Situation};
use crate::search::{Answer, Options, Ranked};
use crate::units::{Length, Load, Money};

use super::json;
use super::page::{self, Block, Table};
use super::words::{self, Words};
use super::{Format, beside, head, heights, marks, mend, notes, plain, ponding, rules, sensitivity, storage};

/// What a report of given layouts is made of.
#[derive(Clone, Copy, Debug)]
pub struct Checks<'a, 'r> {
    /// The roof.
    pub roof: &'r Roof,
    /// What was asked, besides the limits.
    pub options: &'a Options,
    /// The defaults that were taken.
    pub assumed: &'a [Assumed],
    /// The areas that are reported, in order.
    pub areas: &'a [usize],
    /// The layouts, those of one area in the order in which they are reported.
    pub checked: &'a [Checked<'r>],
    /// What a step of each input does to each layout, in the order of the layouts, and the steps; where that was asked for.
    pub sensitivities: Option<(&'a [Sensitivity], &'a Tolerances)>,
    /// The best layouts of the areas that a search finds, where that was asked for.
    pub best: Option<&'a [Answer<'r>]>,
    /// What the storage of the roof would do for the layouts, where that was asked for.
    pub storage: Option<&'a Storage>,
    /// What mends each layout, in the order of the layouts, where that was asked for.
    pub mends: Option<&'a [Vec<Mend>]>,
    /// The layouts so mended, each as it stands: what is said of devices and cautions is said of them too.
    pub mended: &'a [Checked<'r>],
}

impl<'a, 'r> Checks<'a, 'r> {
    /// The places of the layouts of each area of the roof, in order.
    fn places(&self) -> Vec<Vec<usize>> {
        let mut places = vec![Vec::new(); self.roof.areas.len()];
        for (place, checked) in self.checked.iter().enumerate() {
            places[checked.given.area].push(place);
        }
        places
    }

    /// The best that a search finds for an area.
    fn best_of(&self, area: usize) -> Option<&'a Ranked<'r>> {
        self.best?.iter().find(|answer| answer.area == area)?.outcome.layouts().first()
    }

    /// The storm through the storage of a layout, by its place; nothing where that was not asked for, or cannot be routed.
    fn routed(&self, place: usize) -> &'a [Option<Routed>] {
        self.storage.and_then(|storage| storage.layouts.get(place)).map_or(&[], Vec::as_slice)
    }

    fn told(&self) -> notes::Told<'a, 'r> {
        let all = self.checked.iter().chain(self.mended);
        let given = all.map(|checked| (checked.given.area, &checked.standing));
        let best = self.areas.iter().filter_map(|&area| Some((area, self.best_of(area)?)));
        notes::Told {
            roof: self.roof,
            options: self.options,
            assumed: self.assumed,
            areas: self.areas.to_vec(),
            layouts: given.chain(best).collect(),
            searched: self.best.is_some(),
            fronts: false,
            plan: false,
        }
    }
}

pub(super) fn write<W: Write>(checks: &Checks<'_, '_>, format: Format, width: usize, out: &mut W) -> io::Result<()> {
    match format {
        Format::Table => out.write_all(page::text(&blocks(checks), width).as_bytes())?,
        Format::Markdown => out.write_all(page::markdown(&blocks(checks)).as_bytes())?,
        Format::Json => document(checks, out)?,
        Format::Csv => rows(checks, out)?,
    }
    out.flush()
}

fn blocks(checks: &Checks<'_, '_>) -> Vec<Block> {
    let words = Words(checks.roof.system);
    let mut blocks =
        vec![Block::Title(format!("{}: given layouts, {}", checks.roof.title, rules::drains_in_title(checks.roof)))];
    blocks.extend(head::situation(checks.roof, words));
    blocks.extend(rules::over(checks.roof, checks.options, words));
    let places = checks.places();
    for &area in checks.areas {
        area_blocks(checks, area, &places[area], words, &mut blocks);
    }
    blocks.extend(mend::survey(checks, words));
    let told = checks.told();
    blocks.extend(notes::blocks(&told, words));
    blocks
}

/// The blocks of an area, whose layouts stand at some places.
fn area_blocks(checks: &Checks<'_, '_>, area: usize, places: &[usize], words: Words, blocks: &mut Vec<Block>) {
    let roof = checks.roof;
    blocks.extend(head::area_head(roof, area, words));
    if checks.best_of(area).is_some() {
        blocks.extend(head::there_already(roof, area, words));
    }
    let checked: Vec<_> = places.iter().map(|&place| &checks.checked[place]).collect();
    if checked.is_empty() {
        blocks.push(Block::Text("No layout is given here.".into()));
        return;
    }
    blocks.push(Block::Table(table(checks, area, &checked, words)));
    let standings: Vec<&Ranked<'_>> = checked.iter().map(|checked| &checked.standing).collect();
    blocks.extend(marks::marks(&standings, words).into_iter().map(Block::Text));
    if checked.iter().any(|checked| checked.standing.cost.is_none()) {
        blocks
            .push(Block::Text("A layout with a device or a size that no catalog has a price for has no cost.".into()));
    }
    let named: Vec<_> = checked.iter().map(|checked| (checked.given.name.clone(), &checked.standing)).collect();
    blocks.extend(rules::blocks(roof, checks.options, area, &named, named.len(), words));
    let failing = |checked: &&Checked<'_>| !checked.passes();
    let lines: Vec<String> =
        checked.iter().copied().filter(failing).map(|checked| fails(checks, checked, words)).collect();
    if !lines.is_empty() {
        blocks.push(Block::List(lines));
    }
    blocks.extend(places.iter().flat_map(|&place| mend::blocks(checks, place, words)));
    blocks.extend(heights::blocks(roof, area, &named, words));
    let loads: Vec<String> = checked.iter().filter_map(|checked| up_the_slope(roof, checked, words)).collect();
    if !loads.is_empty() {
        blocks.push(Block::Text("Up the slope, in the governing case:".into()));
        blocks.push(Block::List(loads));
    }
    blocks.extend(beside::beside(roof, area, &named, words));
    blocks.extend(sensitivities(checks, places, words));
    if let Some(stored) = checks.storage {
        let routed: Vec<_> = places.iter().map(|&place| (&checks.checked[place], checks.routed(place))).collect();
        blocks.extend(storage::blocks(roof, area, &routed, stored, words));
    }
}

/// What a step of each input does to the layouts at some places.
fn sensitivities(checks: &Checks<'_, '_>, places: &[usize], words: Words) -> Vec<Block> {
    let Some((found, tolerances)) = checks.sensitivities else { return Vec::new() };
    let of_layout =
        |&place: &usize| sensitivity::blocks(checks.roof, &checks.checked[place], &found[place], tolerances, words);
    places.iter().flat_map(of_layout).collect()
}

fn table(checks: &Checks<'_, '_>, area: usize, checked: &[&Checked<'_>], words: Words) -> Table {
    let best = checks.best_of(area);
    let rows = || {
        let given =
            checked.iter().map(|checked| (checked.given.name.clone(), Some(checked.passes()), &checked.standing));
        given.chain(best.map(|best| ("best found".to_string(), None, best)))
    };
    let column =
        |tell: &dyn Fn(&Ranked<'_>) -> String| rows().map(|(_, _, standing)| tell(standing)).collect::<Vec<_>>();
    let water = |standing: &Ranked<'_>| standing.states[standing.case].water;
    let verdict = |(_, passes, _): (String, Option<bool>, &Ranked<'_>)| match passes {
        Some(false) => "fails".to_string(),
        Some(true) | None => "passes".to_string(),
    };
    let mut columns = vec![
        ("layout".into(), false, rows().map(|(name, _, _)| name).collect::<Vec<_>>()),
        ("groups".into(), false, column(&|standing| marks::marked(standing, words))),
        ("verdict".into(), false, rows().map(verdict).collect()),
        ("cost".into(), true, column(&|standing| standing.cost.map_or("-".into(), words::money))),
        (
            format!("depth {}", words.small_unit()),
            true,
            column(&|standing| water(standing).map_or("-".into(), |water| words.bare_depth(water.depth()))),
        ),
        (
            format!("pond. {}", words.small_unit()),
            true,
            column(&|standing| ponding_head(checks, area, standing, words)),
        ),
        (
            format!("load {}", words.load_unit()),
            true,
            column(&|standing| water(standing).map_or("-".into(), |water| words.bare_load(water.load))),
        ),
        ("util.".into(), true, column(&|standing| utilisation(standing))),
        ("case".into(), false, column(&|standing| checks.roof.cases[standing.case].name.clone())),
        (
            format!("may rise {}", words.small_unit()),
            true,
            rows()
                .map(
                    |(_, passes, standing)| {
                        if passes == Some(false) { "-".into() } else { words.depth_down(window_left(standing)) }
                    },
                )
                .collect(),
        ),
    ];
    if checks.roof.cases.len() == 1 {
        columns.retain(|(head, _, _)| head != "case");
    }
    if !checks.roof.situation(area, 0).ponding.grows() {
        columns.retain(|(head, _, _)| !head.starts_with("pond."));
    }
    if rows().all(|(_, _, standing)| standing.cost.is_none()) {
        columns.retain(|(head, _, _)| head != "cost");
    }
    Table::of(columns)
}

/// The ponding head of a layout in its governing case.
fn ponding_head(checks: &Checks<'_, '_>, area: usize, standing: &Ranked<'_>, words: Words) -> String {
    let situation = checks.roof.situation(area, standing.case);
    let water = standing.states[standing.case].water.filter(|_| !situation.ponding.is_unstable());
    water.map_or("-".into(), |water| words.bare_depth(situation.ponding_head(water.level)))
}

/// How much of its limit a layout uses in its governing case.
pub(super) fn utilisation(standing: &Ranked<'_>) -> String {
    match standing.governing {
        None => "overwhelmed".into(),
        Some(governing) if governing.utilisation.is_infinite() => "unstable".into(),
        Some(governing) => format!("{:.3}", governing.utilisation),
    }
}

/// How much higher the sills could be, all of them together.
fn window_left(standing: &Ranked<'_>) -> Length {
    standing.groups.iter().map(|placed| placed.to - placed.from).fold(Length::ZERO, Length::max)
}

/// What fails in a layout.
fn fails(checks: &Checks<'_, '_>, checked: &Checked<'_>, words: Words) -> String {
    let failings: Vec<String> = checked
        .failings
        .iter()
        .map(|failing| failing_in_words(checks.roof, checks.options, checked, failing, words))
        .collect();
    format!("\"{}\" fails: {}.", checked.given.name, failings.join("; "))
}

pub(super) fn failing_in_words(
    roof: &Roof,
    options: &Options,
    checked: &Checked<'_>,
    failing: &Failing,
    words: Words,
) -> String {
    let area = checked.given.area;
    let case_named = |case: usize| format!("\"{}\"", roof.cases[case].name);
    let group = |index: usize| words.name(&checked.given.groups[index].size);
    match *failing {
        Failing::Limit { case } => {
            let situation = roof.situation(area, case);
            match checked.standing.states[case].water {
                Some(_) if situation.ponding.is_unstable() => format!("the roof is unstable in {}", case_named(case)),
                None => format!(
                    "it does not carry {} in {}: its tables are at their end, or what is left of it is shut or blocked",
                    words.flow(situation.demand),
                    case_named(case)
                ),
                Some(water) => limit_passed(&situation, &water, &case_named(case), words),
            }
        }
        Failing::Freeboard { case, kept, asked } => {
            format!("{} of freeboard in {}, {} asked", words.depth(kept), case_named(case), words.size(asked))
        }
        Failing::Edge { used, edge } => {
            format!("its openings and gaps take {} of edge, there are {}", words.long(used), words.long(edge))
        }
        Failing::RoofAtWall { group: index, roof: at_wall } => {
            let sill = checked.given.groups[index].set_height;
            format!(
                "{} at {} above the low point lies {} under the roof at the wall, which stands {} above it; {} above that roof \
                 would be {} above the low point",
                group(index),
                words.size(sill),
                words.size(at_wall - sill),
                words.size(at_wall),
                words.size(sill),
                words.size(at_wall + sill)
            )
        }
        Failing::Rule(finding) => rules::broken(&options.rules, &finding, words),
        Failing::Parapet { group: index, top, parapet } => format!(
            "the top of {} at {} is not below the parapet's top at {}",
            group(index),
            words.size(top),
            words.size(parapet)
        ),
    }
}

fn limit_passed(situation: &Situation<'_>, water: &crate::roof::layout::Water, case: &str, words: Words) -> String {
    use crate::roof::LimitKind;
    let limit = words.limit(water.governing.limit, situation.limits, situation.parapet);
    match water.governing.limit {
        LimitKind::Load => format!("load {} in {case}, the limit is {limit}", words.load(water.load)),
        LimitKind::Depth => format!("depth {} in {case}, the limit is {limit}", words.depth(water.depth())),
        LimitKind::Parapet => format!("water up to {} in {case}, {limit}", words.depth(water.level)),
    }
}

/// How the load falls off up the slope, and how far water stands.
fn up_the_slope(roof: &Roof, checked: &Checked<'_>, words: Words) -> Option<String> {
    let area = &roof.areas[checked.given.area];
    let rise = area.surface.rise?;
    let water = checked.standing.states[checked.standing.case].water?;
    let situation = roof.situation(checked.given.area, checked.standing.case);
    let ponding = Some(situation.ponding_head(water.level)).filter(|_| !situation.ponding.is_unstable())?;
    let load = |at: Length| {
        let depth = rise.depth(water.level, at);
        words.load(if depth > Length::ZERO { crate::roof::load_of(depth + ponding) } else { Load::ZERO })
    };
    let reach = rise.extent(water.level);
    let far = if reach < rise.distance {
        format!(
            "water stands up to {} from it, the rest of {} to the wall is dry",
            words.long(reach),
            words.long(rise.distance)
        )
    } else {
        format!("{} at the wall, {} from it", load(rise.distance), words.long(rise.distance))
    };
    Some(format!(
        "{}: {} at the low point, {} half way to where the water ends; {far}",
        checked.given.name,
        load(Length::ZERO),
        load(reach * 0.5)
    ))
}

/// Layouts whose rows are made at once, side by side.
const AT_ONCE: usize = 4096;

fn rows(checks: &Checks<'_, '_>, out: &mut impl Write) -> io::Result<()> {
    let words = Words(checks.roof.system);
    let (small, load) = (words.small_unit(), words.load_unit().to_lowercase());
    let head = [
        "area".to_string(),
        "layout".into(),
        "passes".into(),
        "cost".into(),
        "device".into(),
        "kind".into(),
        format!("width_{small}"),
        format!("height_{small}"),
        format!("diameter_{small}"),
        "count".into(),
        format!("set_height_{small}"),
        format!("set_height_to_{small}"),
        "governing_case".into(),
        format!("water_depth_{small}"),
        format!("load_{load}"),
        "utilisation".into(),
        "why".into(),
    ];
    let mut head = head.to_vec();
    if checks.mends.is_some() {
        head.extend(["mend", "mend_cost"].map(String::from));
    }
    let mut writer = csv::Writer::from_writer(out);
    writer.write_record(&head).map_err(of_writer)?;
    let length = |length: Option<Length>| length.map_or(String::new(), |length| plain(words.small(length), 4));
    let of_layout = |place: usize| {
        let checked = &checks.checked[place];
        let mut rows = Vec::with_capacity(checked.given.groups.len());
        let standing = &checked.standing;
        let water = standing.states[standing.case].water;
        let why: Vec<String> = checked
            .failings
            .iter()
            .map(|failing| failing_in_words(checks.roof, checks.options, checked, failing, words))
            .collect();
        for placed in &standing.groups {
            let device = &placed.group.size.device;
            let round = device.kind() == crate::device::Kind::PipeScupper;
            let mut row = vec![
                checks.roof.areas[checked.given.area].name.clone(),
                checked.given.name.clone(),
                if checked.passes() { "yes" } else { "no" }.into(),
                standing.cost.map_or(String::new(), |cost| plain(cost.amount(), 2)),
                placed.group.size.tag.to_string(),
                device.kind().to_string(),
                length(device.width().filter(|_| !round)),
                length(device.height().filter(|_| !round)),
                length(device.diameter()),
                placed.group.count.to_string(),
                length(Some(placed.group.set_height)),
                words.depth_down(placed.to).replace(',', ""),
                checks.roof.cases[standing.case].name.clone(),
                length(water.map(|water| water.depth())),
                water
                    .filter(|water| water.load.pa().is_finite())
                    .map_or(String::new(), |water| plain(words.in_load_unit(water.load), 4)),
                standing
                    .governing
                    .filter(|governing| governing.utilisation.is_finite())
                    .map_or_else(|| utilisation(standing), |governing| plain(governing.utilisation, 4)),
                why.join("; "),
            ];
            row.extend(mend::cells(checks, place, words));
            rows.push(row);
        }
        rows
    };
    let places: Vec<usize> = (0..checks.checked.len()).collect();
    for some in places.chunks(AT_ONCE) {
        for row in some.par_iter().copied().flat_map_iter(of_layout).collect::<Vec<_>>() {
            writer.write_record(&row).map_err(of_writer)?;
        }
    }
    writer.flush()
}

/// What went wrong beneath: a reader that went away must be told from all else.
fn of_writer(error: csv::Error) -> io::Error {
    match error.into_kind() {
        csv::ErrorKind::Io(error) => error,
        other => io::Error::other(format!("{other:?}")),
    }
}

/// A list of a document that is made item by item, as it is written.
struct Listed<F>(F);

impl<F: Fn() -> I, I: Iterator<Item: Serialize>> Serialize for Listed<F> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_seq((self.0)())
    }
}

#[derive(Serialize)]
struct Document<'a, Areas: Serialize> {
    format: &'static str,
    title: &'a str,
    #[serde(skip_serializing_if = "Vec::is_empty")]
    rule_sets: Vec<rules::Over<'a>>,
    areas: Areas,
    #[serde(skip_serializing_if = "Option::is_none")]
    worst_first: Option<Vec<mend::OfFailing<'a>>>,
    assumptions: Vec<String>,
    cautions: Vec<String>,
}

#[derive(Serialize)]
struct OfArea<'a, Layouts: Serialize> {
    name: &'a str,
    demand_m3_s: f64,
    #[serde(skip_serializing_if = "Option::is_none")]
    ponding: Option<ponding::OfArea>,
    framing_analysis: Vec<String>,
    layouts: Layouts,
    #[serde(skip_serializing_if = "Option::is_none")]
    best: Option<OfBest<'a>>,
}

#[derive(Serialize)]
struct OfLayout<'a> {
    name: &'a str,
    passes: bool,
    cost: Option<f64>,
    groups: Vec<json::Group<'a>>,
    governing: json::Governing<'a>,
    cases: Vec<json::Case<'a>>,
    sills_could_rise_m: Option<f64>,
    fails: Vec<String>,
    #[serde(skip_serializing_if = "Option::is_none")]
    rule_sets: Option<Vec<rules::OfSet<'a>>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    rules: Option<Vec<rules::OfRule<'a>>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    sensitivity: Option<OfSensitivity<'a>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    storage: Option<storage::OfLayout<'a>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    mends: Option<Vec<mend::OfMend<'a>>>,
}

#[derive(Serialize)]
struct OfSensitivity<'a> {
    case: &'a str,
    load_pa: Option<f64>,
    steps: Vec<OfStep<'a>>,
    all_at_once: OfStep<'a>,
}

#[derive(Serialize)]
struct OfStep<'a> {
    input: String,
    load_pa: Option<f64>,
    worst_load_pa: Option<f64>,
    worst_case: Option<&'a str>,
    breaks_in: Option<&'a str>,
    steps_that_hold: Option<f64>,
}

#[derive(Serialize)]
struct OfBest<'a> {
    cost: Option<f64>,
    groups: Vec<json::Group<'a>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    closed: Option<json::Closing<'a>>,
    governing: json::Governing<'a>,
    cases: Vec<json::Case<'a>>,
}

fn document<'a>(checks: &Checks<'a, '_>, out: &mut impl Write) -> io::Result<()> {
    let words = Words(checks.roof.system);
    let roof = checks.roof;
    let layout = |&place: &usize| {
        let checked = &checks.checked[place];
        let (area, standing) = (checked.given.area, &checked.standing);
        let failing = |failing| failing_in_words(roof, checks.options, checked, failing, words);
        OfLayout {
            name: &checked.given.name,
            passes: checked.passes(),
            cost: standing.cost.map(Money::amount),
            groups: json::groups(roof, area, standing),
            governing: json::governing(roof, standing),
            cases: json::cases(roof, area, standing),
            sills_could_rise_m: checked.passes().then(|| window_left(standing).m()),
            fails: checked.failings.iter().map(failing).collect(),
            rule_sets: rules::of_sets(roof, &checks.options.rules, area, standing),
            rules: rules::of_layout_in_document(roof, &checks.options.rules, area, standing),
            sensitivity: checks.sensitivities.map(|(found, _)| of_sensitivity(roof, &found[place])),
            storage: checks.storage.map(|stored| storage::of_layout(roof, stored, checks.routed(place))),
            mends: mend::of_layout(checks, place),
        }
    };
    let best = |area: usize, best: &'a Ranked<'_>| OfBest {
        cost: best.cost.map(Money::amount),
        groups: json::groups(roof, area, best),
        closed: json::closed(roof, area, best),
        governing: json::governing(roof, best),
        cases: json::cases(roof, area, best),
    };
    let told = checks.told();
    let places = checks.places();
    let area = |&area: &usize| OfArea {
        name: &roof.areas[area].name,
        demand_m3_s: roof.demands[area].m3_per_s(),
        ponding: ponding::of_area(&roof.areas[area]),
        framing_analysis: ponding::reasons(&roof.areas[area], words),
        layouts: Listed({
            let (places, layout) = (&places[area], &layout);
            move || places.iter().map(layout)
        }),
        best: checks.best_of(area).map(|found| best(area, found)),
    };
    let document = Document {
        format: "brimline check 1",
        title: &roof.title,
        rule_sets: rules::over_in_document(checks.roof, &checks.options.rules),
        areas: Listed(|| checks.areas.iter().map(&area)),
        worst_first: mend::worst_first(checks),
        assumptions: notes::assumptions(&told),
        cautions: notes::cautions(&told),
    };
    serde_json::to_writer_pretty(&mut *out, &document)?;
    out.write_all(b"\n")
}

fn of_sensitivity<'a>(roof: &'a Roof, found: &Sensitivity) -> OfSensitivity<'a> {
    let step = |effect: &Effect| OfStep {
        input: match effect.input {
            Some(Input::Blocked(more)) => format!("blocked + {more}"),
            Some(Input::Law(law)) => law.name().into(),
            _ => sensitivity::input(effect),
        },
        load_pa: effect.load.map(Load::pa).filter(|load| load.is_finite()),
        worst_load_pa: effect.worst.map(|(load, _)| load.pa()).filter(|load| load.is_finite()),
        worst_case: effect.worst.map(|(_, case)| roof.cases[case].name.as_str()),
        breaks_in: effect.breaks.map(|case| roof.cases[case].name.as_str()),
        steps_that_hold: effect.holds,
    };
    OfSensitivity {
        case: &roof.cases[found.case].name,
        load_pa: found.load.map(Load::pa),
        steps: found.effects.iter().map(step).collect(),
        all_at_once: step(&found.corner),
    }
}
