//! What every reader of a report must know besides its numbers: the laws, the assumptions, the cautions of this very roof.

use std::borrow::Cow;

use crate::device::{Kind, Law, Place, Regime, Site, Size};
use crate::hydraulics::practice::Transition;
use crate::input::Assumed;
use crate::roof::layout::GroupState;
use crate::roof::{Case, Roof};
use crate::search::{Measured, Options, Ranked};
use crate::units::{Area, Intensity, Length, System};

use super::measure;
use super::page::Block;
use super::words::{self, Words, list, ranked_by, trimmed};
use super::{cascade, rules, storm};

/// Head under which surface tension, membrane edges and levels decide: 1 in. Common practice.
const LOW_HEAD: Length = Length::inches(1.0);
/// Set height under which an overflow runs in ordinary storms: 2 in, or 50 mm where metric. ASCE 7-22 and training notes of the
/// UPC, from memory.
const LOW_SILL: Length = Length::mm(50.0);

/// What a report tells of: its areas and every layout in it.
pub(super) struct Told<'a, 'r> {
    pub(super) roof: &'r Roof,
    pub(super) options: &'a Options,
    pub(super) assumed: &'a [Assumed],
    pub(super) areas: Vec<usize>,
    /// Each with the index of its area.
    pub(super) layouts: Vec<(usize, &'a Ranked<'r>)>,
    /// Whether they were searched for; else they were given.
    pub(super) searched: bool,
    /// Whether a plan of the whole roof was asked for.
    pub(super) plan: bool,
    /// Whether layouts that are not beaten are among them.
    pub(super) fronts: bool,
}

/// The listed layouts and those in widths of their own: what is cautioned of any.
fn every<'a>(told: &Told<'a, '_>) -> Vec<Cow<'a, Ranked<'a>>> {
    let both = |layout: &'a Ranked<'a>| {
        let fitted = match &layout.made {
            Some(Measured::Fitted(fitted)) => Some(Cow::Owned(fitted.layout())),
            _ => None,
        };
        std::iter::once(Cow::Borrowed(layout)).chain(fitted)
    };
    layouts(told).flat_map(both).collect()
}

fn layouts<'a, 'r>(told: &Told<'a, 'r>) -> impl Iterator<Item = &'a Ranked<'r>> {
    told.layouts.iter().map(|(_, layout)| *layout)
}

fn sizes<'r>(told: &Told<'_, 'r>) -> Vec<&'r Size> {
    let mut sizes: Vec<&Size> = Vec::new();
    for placed in layouts(told).flat_map(|layout| &layout.groups) {
        if !sizes.iter().any(|known| known.tag == placed.group.size.tag) {
            sizes.push(placed.group.size);
        }
    }
    sizes
}

/// The notes at the end of every report: devices, assumptions, cautions.
pub(super) fn blocks(told: &Told<'_, '_>, words: Words) -> Vec<Block> {
    let mut blocks = vec![Block::Heading("Devices".into()), Block::List(laws(told, words))];
    let besides = rules::besides(&told.options.rules);
    if !besides.is_empty() {
        blocks.extend([Block::Heading("What the rule sets say besides".into()), Block::List(besides)]);
    }
    blocks.extend([
        Block::Heading("Assumptions".into()),
        Block::List(assumptions(told)),
        Block::Heading("Cautions".into()),
        Block::List(cautions(told)),
    ]);
    blocks
}

/// The devices that the layouts are made of, with their laws and sources; devices of one law in one line.
fn laws(told: &Told<'_, '_>, words: Words) -> Vec<String> {
    let mut lines: Vec<(String, Vec<String>)> = Vec::new();
    let area = told.areas.first().copied().unwrap_or(0);
    for size in sizes(told) {
        let kind = size.device.kind();
        let mut laws: Vec<Law> =
            told.roof.cases.iter().map(|case| size.law_at(&told.roof.site(area, case.law))).collect();
        laws.sort_unstable();
        laws.dedup();
        for law in laws {
            let account = law.account(kind);
            let place = if size.place == Place::Interior { "inside the roof" } else { "in the parapet" };
            let source = match &size.source {
                Some(source) if kind == Kind::Rated => source.to_string(),
                None if kind == Kind::Rated => "not stated in the catalog".to_string(),
                _ => account.source.to_string(),
            };
            let line = format!("{place}. Law {}: {}. Source: {source}.", law.name(), account.form(words.0));
            let device = format!("{} ({kind})", size.tag);
            match lines.iter_mut().find(|(known, _)| *known == line) {
                Some((_, devices)) => devices.push(device),
                None => lines.push((line, vec![device])),
            }
        }
    }
    if lines.is_empty() {
        return vec!["No layout is listed.".into()];
    }
    let mut lines: Vec<_> = lines.into_iter().map(|(line, devices)| format!("{}, {line}", list(&devices))).collect();
    let laws: Vec<Law> = sizes(told)
        .iter()
        .flat_map(|size| told.roof.cases.iter().map(|case| size.law_at(&told.roof.site(area, case.law))))
        .collect();
    let mut sites: Vec<Site> = told.areas.iter().map(|&area| told.roof.site(area, None)).collect();
    sites.dedup_by_key(|site| site.thickness);
    if laws.contains(&Law::Throat) || layouts(told).any(|layout| !layout.thick_wall.is_empty()) {
        let thick = sites.iter().filter(|site| site.thickness.is_some());
        lines.extend(thick.map(|site| format!("The law {}", throat(site, words))));
    }
    if laws.contains(&Law::ThinPlate) {
        lines.extend(sites.first().and_then(transition));
    }
    lines.extend(following(told, words));
    lines
}

/// The values that the law of a throat is computed with.
pub(super) fn throat(site: &Site, words: Words) -> String {
    let wall = site.thickness.map_or(String::new(), |thickness| format!("wall {}, ", words.size(thickness)));
    let (roughness, loss) = (trimmed(site.choice.roughness, 4), trimmed(site.choice.entrance_loss, 3));
    format!("throat is computed with {wall}roughness n = {roughness} and an entrance loss of {loss} velocity heads.")
}

/// How the practice form passes from weir to orifice, where it is not the lesser of both.
fn transition(site: &Site) -> Option<String> {
    let to = match site.choice.transition {
        Transition::LesserOf => return None,
        Transition::Linear => "1.4",
        Transition::Table => "1.3",
    };
    Some(format!("Between H = h and H = {to} h the thin-plate law is a straight line from the weir to the orifice."))
}

/// What guards and follows the devices, and from which head it governs.
fn following(told: &Told<'_, '_>, words: Words) -> Vec<String> {
    let mut lines: Vec<String> = Vec::new();
    for (area, layout) in &told.layouts {
        let site = told.roof.site(*area, None);
        for placed in &layout.groups {
            let size = placed.group.size;
            let mut parts = Vec::new();
            if (size.screen - 1.0).abs() > 1e-12 {
                parts.push(format!("a guard lets {} of its flow pass", trimmed(size.screen, 3)));
            }
            let (curve, _) = size.curve(&site, placed.group.set_height, Length::ZERO);
            if let Some((head, regime)) = curve.governed_from() {
                parts.push(format!("the {regime} governs above {} of head", words.depth(head)));
            } else if size.following.capacity().is_some() {
                parts.push("what follows it carries all that it passes".into());
            }
            if parts.is_empty() {
                continue;
            }
            let line = format!("{}: {}.", words.name(size), list(&parts));
            if !lines.contains(&line) {
                lines.push(line);
            }
        }
    }
    lines
}

/// What was taken as given, and every default that was taken.
pub(super) fn assumptions(told: &Told<'_, '_>) -> Vec<String> {
    let words = Words(told.roof.system);
    let weight = match told.roof.system {
        System::Us => "Water weighs 62.4 lb/ft3: 5.2 psf for each inch of depth",
        System::Si => "Water weighs 9.802 kN/m3 (62.4 lb/ft3): 0.0098 kPa for each mm of depth",
    };
    let mut lines = vec![
        cascade::primary_drains(told.roof).to_string(),
        format!("{weight}. Load = unit weight x (water depth + ponding head)."),
        "Depths and set heights are above the low point of each area, where the primary inlet sits; water ponds level."
            .into(),
        "Flow is steady: no credit for water stored on the roof.".into(),
        match told.roof.system {
            System::Us => {
                "Rain runs off entirely, Q = i A; the practice constant 0.0104 (gpm, ft2, in/h) is 0.10 % higher."
            }
            System::Si => "Rain runs off entirely: Q = i A.",
        }
        .into(),
        "Widths and heights are clear openings, after flashing and membrane.".into(),
    ];
    if told.searched {
        lines.push(format!(
            "Layouts are ranked by {}; ties go by cost, load, count, width, sizes, set-height, then catalog order.{}",
            ranked_by(&told.options.rank_by),
            if told.options.fold { " Of layouts with the same number of each device the best is listed." } else { "" }
        ));
    }
    let closing = told.areas.iter().any(|&area| told.roof.areas[area].replace.is_some());
    if told.searched && closing {
        let families = if told.options.fold {
            " With the same number of each device added the best closing is listed."
        } else {
            ""
        };
        lines.push(format!(
            "Where what is there may be closed, the price of that counts in the cost; count, width, sizes and set height are those \
             of what is added. Of equals the layout that closes fewest openings stands first, then the one that keeps most of what \
             is given first.{families}"
        ));
    }
    lines.extend(storm::interpolated(&told.roof.storm));
    lines.push("In a window all groups rise together, each stopping at the top of its own range.".into());
    if told.fronts {
        lines.push(
            "Layouts and plans that are not beaten stand at their lowest set heights, where the load is least. Load is the \
             greatest over the cases; of layouts equal in all that is compared the one with fewest sizes is listed, then the \
             first in catalog order."
                .into(),
        );
    }
    // What is asked of a search says nothing of layouts that were given.
    let concerns = |assumed: &&Assumed| told.searched || !assumed.default.key.starts_with("search.");
    for assumed in told.assumed.iter().filter(concerns) {
        let default = assumed.default;
        let whom = if assumed.areas.is_empty() { String::new() } else { format!(" in {}", list(&assumed.areas)) };
        lines.push(format!("Not given: `{}`{whom}. Taken: {}; {}.", default.key, default.value, default.meaning));
    }
    if told.searched {
        lines.extend(measure::assumptions(told.roof, told.plan, words));
    }
    if let Some(freeboard) = told.options.freeboard {
        let lowest = if told.searched { ", looked for with every sill at the lowest of its set heights" } else { "" };
        lines.push(format!(
            "At least {} is kept between the water and the top of every closed opening{lowest}.",
            words.size(freeboard)
        ));
    } else if told.searched && rules::ask_freeboard(told.roof) {
        lines.push(
            "Freeboard that a rule set asks for is looked for with every sill at the lowest of its set heights.".into(),
        );
    }
    lines
}

/// The cautions that apply to this roof and these layouts.
pub(super) fn cautions(told: &Told<'_, '_>) -> Vec<String> {
    let mut lines = vec![
        "This supports, and does not replace, the adopted code with its local amendments and the review of a licensed \
         professional."
            .to_string(),
        "The limit is for rain alone: take dead load, equipment and ballast off the roof's capacity before it is given."
            .to_string(),
    ];
    lines.extend(rules::cautions(told.roof, told.options));
    rain(told, &mut lines);
    structure(told, &mut lines);
    openings(told, &mut lines);
    cases(told, &mut lines);
    if layouts(told).any(|layout| matches!(layout.made, Some(Measured::Fitted(_)))) {
        lines.push(
            "Openings made to measure use their limit up: what may be built narrower or higher than it is drawn must stand in a \
             case."
                .into(),
        );
    }
    lines.push(
        "Ice, snow, hail and leaves before an opening, and water driven along a parapet by wind, are in none of the formulas."
            .into(),
    );
    if sizes(told).iter().any(|size| size.following.capacity().is_none()) {
        lines.push(
            "What follows a device is checked only where the catalog gives it: a leader, conductor head or pipe that backs up raises the water. \
         Overflow must discharge apart from the primary, where it is seen."
                .into(),
        );
    }
    lines
}

fn rain(told: &Told<'_, '_>, lines: &mut Vec<String>) {
    let storm = &told.roof.storm;
    match storm.duration {
        None => lines.push(
            "The duration of the storm is not stated: a 1 h rate in place of the 15 min rate that load standards ask for \
             halves the flow."
                .into(),
        ),
        Some(duration) if duration.s() > 15.0 * 60.0 => lines.push(format!(
            "The storm lasts {}; load standards ask for the 15 min rate, which is about twice the 1 h rate.",
            words::duration(duration)
        )),
        Some(_) => {}
    }
    match storm.return_period {
        None => lines.push("The return period of the storm is not stated.".into()),
        Some(period) if period.years() < 100.0 => lines.push(format!(
            "The storm is met or passed once in {} years; load standards ask for 100 years or more.",
            trimmed(period.years(), 1)
        )),
        Some(_) => {}
    }
    if storm.source.is_none() {
        lines.push("The source of the intensity is not stated.".into());
    }
}

fn names<'a>(told: &Told<'a, '_>, wanted: impl Fn(&crate::roof::Catchment) -> bool) -> Vec<&'a str> {
    let areas: Vec<_> = told.areas.iter().map(|&area| &told.roof.areas[area]).collect();
    areas.into_iter().filter(|area| wanted(area)).map(|area| area.name.as_str()).collect()
}

fn structure(told: &Told<'_, '_>, lines: &mut Vec<String>) {
    let areas: Vec<_> = told.areas.iter().map(|&area| &told.roof.areas[area]).collect();
    lines.extend(super::ponding::cautions(&areas, Words(told.roof.system)));
    let walls = names(told, |area| area.wall == Area::ZERO);
    if !walls.is_empty() {
        lines.push(format!(
            "No wall is counted for {}: walls and higher roofs that shed on an area count only where they are given.",
            list(&walls)
        ));
    }
    let depths = names(told, |area| area.limits.iter().any(|limits| limits.depth.is_some()));
    if !depths.is_empty() {
        lines.push(format!(
            "A depth limit is held at the low point of {}: state it above that, not above the sill, the drain's rim or the \
             roof at the wall.",
            list(&depths)
        ));
    }
    let level = names(told, |area| area.channel.is_none());
    if !level.is_empty() {
        lines.push(format!(
            "Water is taken as level over {}: where it must run along a valley, a cricket or a gutter to the opening, the far \
             end stands deeper.",
            list(&level)
        ));
    }
}

fn openings(told: &Told<'_, '_>, lines: &mut Vec<String>) {
    let site = told.roof.site(told.areas.first().copied().unwrap_or(0), None);
    let thin = |law: Law| matches!(law, Law::ThinPlate | Law::Contracted | Law::KindsvaterCarter);
    if sizes(told).iter().any(|size| size.device.kind().is_scupper() && thin(size.law_at(&site))) {
        let thick: Vec<_> = told
            .areas
            .iter()
            .filter_map(|&area| {
                let area = &told.roof.areas[area];
                area.parapet
                    .thickness
                    .map(|thickness| format!("{} in {}", Words(told.roof.system).size(thickness), area.name))
            })
            .collect();
        let given = if thick.is_empty() { String::new() } else { format!(" (parapet {})", list(&thick)) };
        lines.push(format!(
            "A thin-plate law has no wall thickness, and the practice form no end contraction: through a thick parapet{given} \
             a scupper carries 13 to 20 % less, and a narrow one less still."
        ));
    }
    regimes(told, lines);
    heights(told, lines);
}

fn regimes(told: &Told<'_, '_>, lines: &mut Vec<String>) {
    let all = every(told);
    let states = || {
        all.iter().flat_map(|layout| {
            layout.states.iter().flat_map(move |state| {
                layout.groups.iter().zip(&state.groups).filter(|(_, stands)| stands.share.working > 0)
            })
        })
    };
    let met = |regime| states().any(|(_, stands)| stands.share.each.regime == regime);
    let full = |stands: &GroupState| {
        matches!(stands.share.each.regime, Regime::Orifice | Regime::Transition)
            || stands.freeboard.is_some_and(|freeboard| freeboard < Length::ZERO)
    };
    if states().any(|(_, stands)| full(stands)) {
        lines.push(
            "Water stands over the top of some openings in some case: their flow then rises slowly with depth, and debris \
             catches at the top."
                .into(),
        );
    }
    if met(Regime::TableHeld) {
        lines.push("Some rated devices are read above the last row of their table, where its flow is held: nothing was measured there.".into());
    }
    if met(Regime::BelowTable) {
        lines.push(
            "Some rated devices are read below the first row of their table, where a weir's curve is taken.".into(),
        );
    }
    if all.iter().any(|layout| !layout.beyond.is_empty()) {
        lines.push(
            "Layouts marked as beyond range rest on a law outside the range in which it is published; how far is told under \
             each list."
                .into(),
        );
    }
    if states().any(|(_, stands)| {
        let head = stands.share.head.length();
        head > Length::ZERO && head < LOW_HEAD
    }) {
        lines.push(
            "Some devices run under less than 1 in (25 mm) of head, where surface tension, the membrane's edge and the level \
             of the sill decide: their flow there is uncertain."
                .into(),
        );
    }
    if met(Regime::BeyondRange) {
        lines.push("Some flows are continued past the range in which their law is published: they are marked.".into());
    }
    if sizes(told).iter().any(|size| matches!(size.device.kind(), Kind::OverflowDrain | Kind::Standpipe)) {
        lines.push(
            "The computed flow of an overflow drain or standpipe is an upper bound: vortex, dome and bowl take their part. A \
             measured rating of the very body is better."
                .into(),
        );
    }
    if states().any(|(_, stands)| stands.backs_up.is_some()) {
        lines.push(
            "A conductor head would back up above the sill under what its scupper passes: only what it carries with water at \
             the sill is credited. Enlarge its outlet or its overflow, or lower its lip."
                .into(),
        );
    }
}

/// Cautions on where devices stand.
fn heights(told: &Told<'_, '_>, lines: &mut Vec<String>) {
    if layouts(told).flat_map(|layout| &layout.groups).any(|placed| placed.group.set_height.nm() < LOW_SILL.nm()) {
        lines.push(
            "Some sills stand less than 2 in (50 mm) above the low point: they run in ordinary storms, and a blocked primary \
             goes unnoticed."
                .into(),
        );
    }
    for size in sizes(told) {
        if let (Some(heights), true) = (&size.set_heights, size.place == Place::Interior) {
            let words = Words(told.roof.system);
            let heights: Vec<_> = heights.iter().take(8).map(|&height| words.bare_size(height)).collect();
            lines.push(format!(
                "{} comes at set heights of {} {} only: of its window only these can be built.",
                size.tag,
                list(&heights),
                words.small_unit()
            ));
        }
    }
    if sizes(told).iter().any(|size| size.device.kind() == Kind::Rated) {
        lines.push("A rating holds for the body, dome and dam that were tested, and for no other.".into());
    }
}

fn cases(told: &Told<'_, '_>, lines: &mut Vec<String>) {
    let cases = &told.roof.cases;
    if cases.iter().all(|case| case.blocked == 0) {
        lines.push("No case blocks a device: a blocked overflow is not covered.".into());
    }
    if cases.iter().all(|case| case.sill_error == Length::ZERO && case.opening_loss == Length::ZERO) {
        lines.push("No case covers sills built high or openings built narrow: each half inch of sill is 2.6 psf (13 mm: 0.12 kPa).".into());
    }
    let storm = told.roof.storm.intensity;
    let of_set =
        |basis: usize| told.roof.bases[basis].areas.iter().map(|area| area.intensity).fold(storm, Intensity::max);
    let more = |case: &Case| case.basis.map_or(storm, of_set) * case.rain > storm;
    if !cases.iter().any(more) {
        lines.push("No case has more rain than the design storm.".into());
    }
}
