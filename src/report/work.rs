//! The arithmetic of one layout, from rain to load, as one would write it by hand.

use crate::device::{Device, Interpolation, Law, Rating, Regime};
use crate::roof::layout::{GroupState, Water};
use crate::roof::{Roof, Situation, demand};
use crate::search::{Placed, Ranked};
use crate::units::{Area, Length, System};

use super::words::{Words, grouped, trimmed};
use super::{cascade, ponding};

/// Each step with its arithmetic.
pub(super) fn lines(roof: &Roof, area: usize, layout: &Ranked<'_>, words: Words) -> Vec<(String, String)> {
    let mut lines = vec![catching(roof, area, words)];
    if let Some(found) = roof.areas[area].ponding.and_then(|ponding| ponding::work(&ponding, words)) {
        lines.push(("ponding, k".into(), found));
    }
    for (case, state) in layout.states.iter().enumerate() {
        let situation = roof.situation(area, case);
        let name = &situation.case.name;
        match situation.case.basis {
            Some(basis) => {
                let counted = counted_by_set(roof, area, basis, words);
                lines.extend(counted.into_iter().map(|(what, by_hand)| (format!("{name}: {what}"), by_hand)));
            }
            None => lines.push((format!("{name}: demand"), flow_demanded(roof, area, &situation, words))),
        }
        lines.push((format!("{name}: level allowed"), level_allowed(&situation, words)));
        let Some(water) = state.water else {
            lines.push((format!("{name}: level"), "none: every table is at its end".into()));
            continue;
        };
        lines.push((
            format!("{name}: level"),
            format!(
                "{} above the low point, found so that the flows below add up to the demand",
                fine(words, water.level)
            ),
        ));
        for (placed, stands) in layout.groups.iter().zip(&state.groups) {
            lines.push((
                format!("{name}: {}", words.name(placed.group.size)),
                group(placed, stands, &situation, water.level, words),
            ));
        }
        let flows: Vec<_> =
            state.groups.iter().map(|stands| fine_flow(words, stands.share.flow().m3_per_s())).collect();
        let total: f64 = state.groups.iter().map(|stands| stands.share.flow().m3_per_s()).sum();
        lines.push((
            format!("{name}: sum"),
            format!("{} = {} {}", flows.join(" + "), fine_flow(words, total), words.flow_unit()),
        ));
        if let Some(reach) = water.reach {
            let deepest = format!("{} at its deepest", fine(words, reach.deepest));
            let far = format!("{} above the low point at its far end", fine(words, reach.far_level));
            lines
                .push((format!("{name}: channel"), format!("spatially varied flow from that level: {far}, {deepest}")));
        }
        if let Some(head) = ponding::head_by_hand(&situation, water.level, words) {
            lines.push((format!("{name}: ponding head"), head));
        }
        lines.push((format!("{name}: load"), load(&situation, water, words)));
    }
    lines
}

fn us(words: Words) -> bool {
    words.0 == System::Us
}

/// A flow with a digit more than a table shows, so that sums can be checked.
fn fine_flow(words: Words, m3_per_s: f64) -> String {
    let flow = crate::units::Flow::from_m3_per_s(m3_per_s);
    if us(words) { grouped(flow.to_gpm(), 1) } else { grouped(m3_per_s * 1000.0, 3) }
}

/// A depth with a digit more than a table shows.
fn fine(words: Words, depth: Length) -> String {
    format!("{} {}", words.fine_depth(depth), words.small_unit())
}

fn catching(roof: &Roof, area: usize, words: Words) -> (String, String) {
    let catchment = &roof.areas[area];
    let total = words.area(demand::catching(catchment));
    let text = if catchment.wall > Area::ZERO {
        format!(
            "A = {} + {} x {} = {total}",
            words.bare_area(catchment.area),
            trimmed(catchment.wall_share, 3),
            words.bare_area(catchment.wall)
        )
    } else {
        format!("A = {total}")
    };
    ("rain falls on".into(), text)
}

/// What a rule set counts of an area, from its rain to its demand.
fn counted_by_set(roof: &Roof, area: usize, basis: usize, words: Words) -> Vec<(String, String)> {
    let (catchment, counted) = (&roof.areas[area], &roof.bases[basis].areas[area]);
    let total = catchment.area + counted.wall;
    let mut sum = words.bare_area(catchment.area);
    if counted.wall > Area::ZERO {
        sum = format!("{sum} + {} of wall", words.bare_area(counted.wall));
    }
    let bare = words.bare_area(total);
    let mut flow = if us(words) {
        format!("0.0103896 x {bare} x {}", trimmed(counted.intensity.to_inches_per_hour(), 3))
    } else {
        format!("{bare} x {} / 3600", trimmed(counted.intensity.m_per_s() * 3.6e6, 2))
    };
    let fine = |flow: crate::units::Flow| fine_flow(words, flow.m3_per_s());
    let received = counted.flow - counted.intensity * total;
    if !catchment.receives.is_empty() {
        flow += &format!(" + {} received", fine(received));
    }
    if counted.credited > crate::units::Flow::ZERO {
        flow += &format!(" - {} of the primary drains", fine(counted.credited));
    }
    if counted.least > counted.flow - counted.credited {
        flow += &format!(" or, being more, {} as it asks of the primary flow", fine(counted.least));
    }
    vec![
        ("rain falls on".into(), format!("A = {sum} = {}", words.area(total))),
        ("demand".into(), format!("Q = {flow} = {} {}", fine(counted.demand()), words.flow_unit())),
    ]
}

fn flow_demanded(roof: &Roof, area: usize, situation: &Situation<'_>, words: Words) -> String {
    let catchment = &roof.areas[area];
    let bare = words.bare_area(demand::catching(catchment));
    let rain = roof.storm.intensity;
    let mut sum = if us(words) {
        format!("0.0103896 x {bare} x {}", trimmed(rain.to_inches_per_hour(), 3))
    } else {
        format!("{bare} x {} / 3600", trimmed(rain.m_per_s() * 3.6e6, 2))
    };
    for (receipt, leaving) in cascade::arriving(roof, area, &roof.at_once(area)) {
        let from = fine_flow(words, leaving.m3_per_s());
        sum += &format!(" + {} x {from}", trimmed(receipt.share, 3));
    }
    let factor = situation.case.rain;
    let sum = if (factor - 1.0).abs() > 1e-12 { format!("{} x ({sum})", trimmed(factor, 3)) } else { sum };
    let by_practice = if us(words) && catchment.receives.is_empty() {
        let flow = 0.0104 * demand::catching(catchment).to_ft2() * rain.to_inches_per_hour() * factor;
        format!(" (with 0.0104: {} gpm)", grouped(flow, 1))
    } else {
        String::new()
    };
    format!("Q = {sum} = {} {}{by_practice}", fine_flow(words, situation.demand.m3_per_s()), words.flow_unit())
}

/// Weight of a unit of depth, in the project's units.
fn weight(words: Words) -> &'static str {
    if us(words) { "5.2" } else { "0.0098023" }
}

fn level_allowed(situation: &Situation<'_>, words: Words) -> String {
    let mut parts = Vec::new();
    if let Some(load) = situation.limits.load {
        let given = trimmed(words.in_load_unit(load), 3);
        let less = ponding::less(&situation.ponding, words);
        let level = situation.ponding.depth_under(crate::roof::depth_of(load));
        parts.push(format!("{given} / {}{less} = {} by load", weight(words), fine(words, level)));
    }
    if let Some(depth) = situation.limits.depth {
        parts.push(format!("{} by depth", words.size(depth)));
    }
    if let Some(parapet) = situation.parapet {
        parts.push(format!("{} by the parapet's top", words.size(parapet)));
    }
    if situation.channel.is_some() {
        let allowed = situation.allowable_level();
        parts.push(if allowed > Length::ZERO {
            format!("at the devices {}, so that the water nowhere along the channel passes these", fine(words, allowed))
        } else {
            "nothing at the devices: the channel stands too deep whatever they do".into()
        });
    }
    parts.join("; ")
}

fn group(placed: &Placed<'_>, stands: &GroupState, situation: &Situation<'_>, level: Length, words: Words) -> String {
    let size = placed.group.size;
    let (device, _) = size.device.narrowed(situation.case.opening_loss);
    let law = size.law_at(&situation.site);
    let head = stands.share.head.length();
    let working = stands.share.working;
    let blocked = placed.group.count - working;
    let mut text = sill(placed, stands, words);
    text += &format!("H = {} - {} = {}", words.fine_depth(level), words.fine_depth(stands.sill), fine(words, head));
    let each = stands.share.each.flow.m3_per_s();
    let reduced = if (situation.case.discharge - 1.0).abs() > 1e-12 {
        format!(" x {}", trimmed(situation.case.discharge, 3))
    } else {
        String::new()
    };
    let form = form(&device, law, stands.share.each.regime, head, words);
    let guarded = if (size.screen - 1.0).abs() > 1e-12
        && !matches!(stands.share.each.regime, Regime::Leader | Regime::ConductorHead)
    {
        format!(" x {}", trimmed(size.screen, 3))
    } else {
        String::new()
    };
    text += &format!("; {form}{guarded}{reduced} = {} {}", fine_flow(words, each), words.flow_unit());
    let out = if blocked > 0 { format!(", {blocked} blocked") } else { String::new() };
    text += &format!("; x {working} working{out} = {}", fine_flow(words, stands.share.flow().m3_per_s()));
    if let Some(freeboard) = stands.freeboard {
        text += &format!("; top of the opening {} above the water", words.depth(freeboard));
    }
    text
}

/// The sill as the case leaves it, where that differs from the drawing.
fn sill(placed: &Placed<'_>, stands: &GroupState, words: Words) -> String {
    let rise = stands.sill - placed.group.set_height;
    if rise.nm() == 0 {
        return String::new();
    }
    format!(
        "sill {} + {} = {}; ",
        words.bare_size(placed.group.set_height),
        words.bare_size(rise),
        words.size(stands.sill)
    )
}

/// The equation with its numbers; for a law that no line of arithmetic holds, its name.
fn form(device: &Device, law: Law, regime: Regime, head: Length, words: Words) -> String {
    let shown = |length: Length| if us(words) { words.fine_depth(length) } else { grouped(length.m(), 4) };
    let size = |length: Length| if us(words) { words.bare_size(length) } else { trimmed(length.m(), 4) };
    let coefficient = |us_value: &'static str, si: &'static str| if us(words) { us_value } else { si };
    let width = device.width().unwrap_or(Length::ZERO);
    let over = |coefficient: &str| format!("q = {coefficient} x {} x {}^1.5", size(width), shown(head));
    match (device, law, regime) {
        (_, _, Regime::Dry) => "dry, q".into(),
        (_, _, Regime::Shut) => "shut by the loss, q".into(),
        (_, _, Regime::Leader | Regime::ConductorHead) => format!("the {regime} governs, q"),
        (Device::Closed { height, .. }, Law::ThinPlate, Regime::Orifice) => format!(
            "runs full, q = {} x {} x {} x sqrt({} - {}/2)",
            coefficient("4.3", "2638.4"),
            size(width),
            size(*height),
            shown(head),
            size(*height)
        ),
        (Device::Closed { height, .. }, Law::ThinPlate, Regime::Weir) if head > *height => format!(
            "{}, less than running full, {} x {} x {} x sqrt({} - {}/2)",
            over(coefficient("2.9", "1779.4")),
            coefficient("4.3", "2638.4"),
            size(width),
            size(*height),
            shown(head),
            size(*height)
        ),
        (Device::Open { .. } | Device::Closed { .. } | Device::Edge { .. }, Law::ThinPlate, Regime::Weir) => {
            over(coefficient("2.9", "1779.4"))
        }
        (Device::Open { .. } | Device::Closed { .. }, Law::Contracted, Regime::Weir) => format!(
            "q = {} x ({} - 0.2 x {}) x {}^1.5",
            coefficient("2.996", "1838.5"),
            size(width),
            shown(head),
            shown(head)
        ),
        (Device::Edge { .. }, Law::CriticalDepth, _) => over(coefficient("2.778", "1704.6")),
        (Device::Rated { rating, .. }, _, _) => rated(rating, regime, head, words),
        _ => format!("law {}, {regime}, q", law.name()),
    }
}

fn rated(rating: &Rating, regime: Regime, head: Length, words: Words) -> String {
    let rows = rating.rows();
    let flow = |flow: crate::units::Flow| fine_flow(words, flow.m3_per_s());
    let at = rows.partition_point(|&(row, _)| row < head);
    match regime {
        Regime::BelowTable => {
            let (first, least) = rows[0];
            format!(
                "below the table, q = {} x ({} / {})^1.5",
                flow(least),
                words.fine_depth(head),
                words.bare_size(first)
            )
        }
        Regime::TableHeld => {
            format!("above the table's last row at {}, its flow held, q", words.size(rows[rows.len() - 1].0))
        }
        _ if at == 0 || at == rows.len() => "at a row of the table, q".into(),
        _ if rating.interpolation() == Interpolation::LogLog => format!(
            "on logarithms between {} at {} and {} at {}, q",
            flow(rows[at - 1].1),
            words.size(rows[at - 1].0),
            flow(rows[at].1),
            words.size(rows[at].0)
        ),
        _ => {
            let ((low, less), (high, more)) = (rows[at - 1], rows[at]);
            format!(
                "between rows, q = {} + ({} - {}) / ({} - {}) x ({} - {})",
                flow(less),
                words.fine_depth(head),
                words.bare_size(low),
                words.bare_size(high),
                words.bare_size(low),
                flow(more),
                flow(less)
            )
        }
    }
}

fn load(situation: &Situation<'_>, water: Water, words: Words) -> String {
    let depth = words.fine_depth(water.depth());
    let weighed = ponding::weighed(&situation.ponding, &depth, words);
    let governing = water.governing;
    let limit = words.limit(governing.limit, situation.limits, situation.parapet);
    format!(
        "R = {} x {weighed} = {}; {} governs: {:.3} of {limit}",
        weight(words),
        words.load(water.load),
        governing.limit.name(),
        governing.utilisation
    )
}
