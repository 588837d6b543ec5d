//! What a roof's sag adds to its water, in words, in arithmetic and as JSON; and why its framing asks for an analysis.

use serde::Serialize;

use crate::roof::framing::{CRITERION, Framing};
use crate::roof::ponding::{Doubt, doubts};
use crate::roof::{Catchment, Ponding, Situation};
use crate::units::{DeckInertia, Flexibility, Inertia, Length, METRES_PER_FOOT};

use super::words::{Words, grouped, list, trimmed};

/// A sag ratio, with the digits that arithmetic behind it needs.
fn ratio(ponding: &Ponding) -> String {
    trimmed(ponding.sag_ratio(), 4)
}

fn amplification(ponding: &Ponding) -> String {
    ponding.amplification().map_or(String::new(), |amplification| trimmed(amplification, 3))
}

/// What counts beside the water of an area; none where nothing does.
pub(super) fn counted(area: &Catchment, words: Words) -> Option<String> {
    let ponding = area.ponding?;
    let sags = match ponding {
        Ponding::Head(head) if head == Length::ZERO => return None,
        Ponding::Head(head) => return Some(format!("a ponding head of {} counts in the load", words.size(head))),
        Ponding::Flexible(flexibility) => format!("the roof sags {}", given(flexibility, words)),
        Ponding::Framed(framing) => members(&framing),
    };
    if ponding.is_unstable() {
        return Some(format!(
            "{sags}: its sag ratio of {} is not under 1, so it is unstable under water and no level is allowed",
            ratio(&ponding)
        ));
    }
    Some(format!("{sags}: with its ponding head the water counts {} times in the load", amplification(&ponding)))
}

fn given(flexibility: Flexibility, words: Words) -> String {
    if words.us() {
        format!("{} in/psf", trimmed(flexibility.to_inches_per_psf(), 4))
    } else {
        format!("{} mm/kPa", trimmed(flexibility.m_per_pa() * 1e6, 2))
    }
}

/// The flexibilities of members, beside what the criterion allows.
fn members(framing: &Framing) -> String {
    let secondary = trimmed(framing.secondary_flexibility(), 3);
    let passed = framing.criterion() > CRITERION;
    let over = if passed { ", over it, so this screen does not answer for it" } else { "" };
    let sum = format!("{} of {CRITERION}{over}", trimmed(framing.criterion(), 3));
    match framing.primary {
        Some(_) => format!(
            "its framing has Cp = {}, Cs = {secondary} and Cp + 0.9 Cs = {sum}",
            trimmed(framing.primary_flexibility(), 3)
        ),
        None => format!("its framing on stiff supports has k = {secondary} and 0.9 k = {sum}"),
    }
}

/// What an unstable area is answered.
pub(super) fn unstable(area: &Catchment) -> Option<String> {
    let ponding = area.ponding.filter(Ponding::is_unstable)?;
    Some(format!(
        "{} is unstable under water: its sag ratio of {} is not under 1, so water of any depth sinks it by as much or more. \
         No opening cures that: its framing must be stiffer.",
        area.name,
        ratio(&ponding)
    ))
}

/// Why an area's framing asks for an analysis.
pub(super) fn reasons(area: &Catchment, words: Words) -> Vec<String> {
    doubts(area).iter().map(|doubt| reason(doubt, words)).collect()
}

fn reason(doubt: &Doubt, words: Words) -> String {
    let slope = |slope: f64| {
        if words.us() {
            format!("{} in/ft", trimmed(slope * 12.0, 3))
        } else {
            format!("{} %", trimmed(slope * 100.0, 2))
        }
    };
    match *doubt {
        Doubt::Unstable { sag_ratio } => format!("the sag ratio of {} is not under 1", trimmed(sag_ratio, 4)),
        Doubt::Criterion { sum } => format!("Cp + 0.9 Cs = {} is over {CRITERION}", trimmed(sum, 3)),
        Doubt::Flexible { sag_ratio } => format!(
            "the sag ratio of {} is over {:.3}, that of a bay which just meets the criterion of stiffness",
            trimmed(sag_ratio, 3),
            CRITERION / 0.9
        ),
        Doubt::Deck { has, needs } => {
            format!("the deck has {}, {} are asked", deck(has, words), deck(needs, words))
        }
        Doubt::LowSlope { slope: found } => format!("the slope of {} is under 1/4 in/ft (2 %)", slope(found)),
        Doubt::SlopeNotGiven => "no slope is given, so it counts as under 1/4 in/ft (2 %)".into(),
        Doubt::LowSlopeAlong { slope: found } => format!(
            "the slope of {} is under 1 in/ft, which counts where the secondary members run along the free edge",
            slope(found)
        ),
        Doubt::Slender { ratio } => format!(
            "the span of the secondary members is {} spacings, over 16, which counts where they run along the free edge",
            trimmed(ratio, 1)
        ),
        Doubt::Impounds => "water stands behind the sills when the primary drains are blocked".into(),
    }
}

fn deck(inertia: DeckInertia, words: Words) -> String {
    if words.us() {
        format!("{} in4/ft", trimmed(inertia.to_in4_per_ft(), 4))
    } else {
        format!("{} mm4/m", grouped(inertia.m4_per_m() * 1e12, 0))
    }
}

/// Cautions on ponding: what the figures are, and which areas ask for an analysis.
pub(super) fn cautions(areas: &[&Catchment], words: Words) -> Vec<String> {
    let mut lines = Vec::new();
    let named = |wanted: &dyn Fn(&Catchment) -> bool| -> Vec<&str> {
        areas.iter().filter(|area| wanted(area)).map(|area| area.name.as_str()).collect()
    };
    let loaded = |area: &Catchment| area.limits.iter().any(|limits| limits.load.is_some());
    let without = named(&|area| area.ponding.is_none() && loaded(area));
    if !without.is_empty() {
        lines.push(format!(
            "No ponding head is given for {}: a roof that sags under water gathers more.",
            list(&without)
        ));
    }
    let fixed = named(&|area| area.ponding.is_some_and(|ponding| !ponding.grows()));
    if !fixed.is_empty() {
        lines.push(format!(
            "The ponding head of {} is a fixed figure: it holds only up to the load it was found for.",
            list(&fixed)
        ));
    }
    let grows = named(&|area| area.ponding.is_some_and(|ponding| ponding.grows()));
    if !grows.is_empty() {
        lines.push(format!(
            "The ponding head of {} is a screen and no analysis of the framing: one elastic sag for the whole bay, that of its \
             middle, counted at the low point; without sag under dead load, camber, or bays that act on one another.",
            list(&grows)
        ));
    }
    let framed = named(&|area| matches!(area.ponding, Some(Ponding::Framed(_))));
    if !framed.is_empty() {
        lines.push(format!(
            "The criterion of stiffness for {} is that of AISC 360-05 to -16, appendix 2, and the amplification that of ASCE 7-22, \
             both from memory, for steel alone; they say nothing of strength. Confirm them against the adopted text.",
            list(&framed)
        ));
    }
    lines.extend(analysis_asked(areas.iter().copied().filter(|area| area.ponding.is_some() || loaded(area)), words));
    lines
}

/// One line for all areas with the same reasons.
fn analysis_asked<'a>(areas: impl Iterator<Item = &'a Catchment>, words: Words) -> Vec<String> {
    let mut asked: Vec<(String, Vec<&str>)> = Vec::new();
    for area in areas {
        let why = reasons(area, words).join("; ");
        match asked.iter_mut().find(|(known, _)| *known == why) {
            Some((_, names)) => names.push(&area.name),
            None => asked.push((why, vec![&area.name])),
        }
    }
    let line = |(why, names): (String, Vec<&str>)| {
        format!("The framing of {} asks for an analysis of ponding: {why}.", list(&names))
    };
    asked.into_iter().map(line).collect()
}

/// The arithmetic of the sag ratio; none where the head is fixed.
pub(super) fn work(ponding: &Ponding, words: Words) -> Option<String> {
    let (weight, unit) = if words.us() { ("5.2", "in/in") } else { ("0.0098023", "mm/mm") };
    let found = match ponding {
        Ponding::Head(_) => return None,
        Ponding::Flexible(flexibility) => {
            format!("k = {} x {weight} = {} {unit}", given(*flexibility, words), ratio(ponding))
        }
        Ponding::Framed(framing) => format!("{} {unit}", framing_by_hand(framing, ponding, words)),
    };
    Some(match ponding.amplification() {
        Some(amplification) => format!("{found}; all the water = {} x the water level", trimmed(amplification, 4)),
        None => format!("{found}, not under 1: unstable"),
    })
}

fn framing_by_hand(framing: &Framing, ponding: &Ponding, words: Words) -> String {
    let long = |length: Length| trimmed(if words.us() { length.m() / METRES_PER_FOOT } else { length.m() }, 3);
    let inertia = |inertia: Inertia| trimmed(if words.us() { inertia.to_in4() } else { inertia.m4() * 1e12 }, 1);
    let (secondary, spacing) = (framing.secondary, long(framing.spacing));
    let (is, ls) = (inertia(secondary.effective()), long(secondary.span));
    let cs = trimmed(framing.secondary_flexibility(), 4);
    let Some(primary) = framing.primary else {
        let constant = if words.us() { "31.81 / 10^7" } else { "503.4" };
        return format!("k = {constant} x {spacing} x {ls}^4 / {is} = {cs}");
    };
    // 32 / 10^7 with ft and in4 is 506.3 with m and mm4; the metric print is 504.
    let constant = if words.us() { "32 / 10^7" } else { "506.3" };
    let (ip, lp) = (inertia(primary.effective()), long(primary.span));
    let cp = trimmed(framing.primary_flexibility(), 4);
    let sum = trimmed(framing.criterion(), 4);
    format!(
        "Cp = {constant} x {ls} x {lp}^4 / {ip} = {cp}; Cs = {constant} x {spacing} x {ls}^4 / {is} = {cs}; \
         Cp + 0.9 Cs = {sum} of {CRITERION}; k = 1.15 Cp + Cs = {}",
        ratio(ponding)
    )
}

/// The ponding head at a level, by hand; none where the head is fixed, or where there is none.
pub(super) fn head_by_hand(situation: &Situation<'_>, level: Length, words: Words) -> Option<String> {
    let ponding = &situation.ponding;
    if !ponding.grows() || ponding.is_unstable() {
        return None;
    }
    let (ratio, depth) = (ratio(ponding), words.fine_depth(situation.depth(level)));
    let head = words.fine_depth(situation.ponding_head(level));
    Some(format!("p = {ratio} x {depth} / (1 - {ratio}) = {head} {}", words.small_unit()))
}

/// What the load's depth is divided into or lessened by to find the level that it allows.
pub(super) fn less(ponding: &Ponding, words: Words) -> String {
    match ponding {
        Ponding::Head(head) if *head > Length::ZERO => format!(" - {}", words.bare_size(*head)),
        Ponding::Head(_) => String::new(),
        _ => format!(" x (1 - {})", ratio(ponding)),
    }
}

/// The depth that weighs, as the arithmetic of a load writes it.
pub(super) fn weighed(ponding: &Ponding, depth: &str, words: Words) -> String {
    match ponding {
        Ponding::Head(head) if *head > Length::ZERO => format!("({depth} + {})", words.bare_size(*head)),
        Ponding::Head(_) => depth.to_string(),
        _ => format!("{depth} / (1 - {})", ratio(ponding)),
    }
}

/// What deflection adds to the water of an area.
#[derive(Serialize)]
pub(super) struct OfArea {
    sag_ratio: f64,
    stable: bool,
    amplification: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    head_m: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    flexibility_m_pa: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    framing: Option<OfFraming>,
}

#[derive(Serialize)]
struct OfFraming {
    primary_flexibility: f64,
    secondary_flexibility: f64,
    criterion: f64,
    criterion_limit: f64,
    deck_inertia_needed_m4_m: f64,
}

/// An area's ponding for other programs; none where nothing is given.
pub(super) fn of_area(area: &Catchment) -> Option<OfArea> {
    let ponding = area.ponding?;
    let mut told = OfArea {
        sag_ratio: ponding.sag_ratio(),
        stable: !ponding.is_unstable(),
        amplification: ponding.amplification(),
        head_m: None,
        flexibility_m_pa: None,
        framing: None,
    };
    match ponding {
        Ponding::Head(head) => told.head_m = Some(head.m()),
        Ponding::Flexible(flexibility) => told.flexibility_m_pa = Some(flexibility.m_per_pa()),
        Ponding::Framed(framing) => {
            told.framing = Some(OfFraming {
                primary_flexibility: framing.primary_flexibility(),
                secondary_flexibility: framing.secondary_flexibility(),
                criterion: framing.criterion(),
                criterion_limit: CRITERION,
                deck_inertia_needed_m4_m: framing.deck_needed().m4_per_m(),
            });
        }
    }
    Some(told)
}
