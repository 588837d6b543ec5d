//! The table `ponding` of an area: a fixed head, a flexibility, or the stiffness of its members.

use crate::roof::framing::{Framing, Member};
use crate::roof::{Ponding, UNIT_WEIGHT_LB_FT3};
use crate::units::{DeckInertia, Dimension, Flexibility, Inertia};

use super::section::{Cell, Keys, Section, optional};

static PONDING: Keys =
    Keys { table: "`ponding`", known: &["head", "flexibility", "primary", "secondary", "deck_inertia"] };

static PRIMARY: Keys = Keys { table: "`primary`", known: &["span", "inertia", "web"] };

static SECONDARY: Keys = Keys { table: "`secondary`", known: &["span", "spacing", "inertia", "web"] };

/// What deflection adds to the water; none where it is at fault. That it is unstable is a warning: the area is answered, with
/// no level that it allows.
pub(super) fn read(cell: &Cell<'_>) -> Option<Ponding> {
    let section = cell.section(&PONDING)?;
    let framed = ["primary", "secondary", "deck_inertia"];
    let given: Vec<Cell<'_>> = ["head", "flexibility"].iter().filter_map(|&key| section.get(key)).collect();
    let members: Option<Cell<'_>> = framed.iter().find_map(|&key| section.get(key));
    let ways: Vec<Cell<'_>> = given.iter().copied().chain(members).collect();
    if let [first, second, ..] = &ways[..] {
        second.at_fault(
            format!("`ponding` gives both `{}` and `{}`", first.key, second.key),
            "one of them is enough",
            "give a fixed head, or a flexibility from which it follows, or the members whose stiffness makes it",
        );
        return None;
    }
    let ponding = match ways.first().map(|way| (way.key, way)) {
        None => {
            section.missing(
                "`ponding` is empty",
                "give head = \"0.4 in\", flexibility = \"0.02 in/psf\", or the stiffness of its members under secondary",
            );
            return None;
        }
        Some(("head", head)) => Ponding::Head(head.length()?),
        Some(("flexibility", flexibility)) => {
            Ponding::Flexible(flexibility.zero_or_more(Dimension::Flexibility, Flexibility::m_per_pa)?)
        }
        Some(_) => Ponding::Framed(framing(&section)?),
    };
    if ponding.is_unstable() {
        unstable(cell, &ways, &ponding);
    }
    Some(ponding)
}

/// Tells that the roof would sag without end, with the product that must stay under one.
fn unstable(cell: &Cell<'_>, ways: &[Cell<'_>], ponding: &Ponding) {
    let ratio = ponding.sag_ratio();
    let product = match ponding {
        Ponding::Flexible(flexibility) if ways[0].as_text().is_some_and(|text| text.contains("in/psf")) => {
            let per_inch = UNIT_WEIGHT_LB_FT3 / 12.0;
            format!("{} in/psf x {per_inch} psf/in = {ratio:.3}", round(flexibility.to_inches_per_psf()))
        }
        Ponding::Flexible(flexibility) => {
            format!("{} mm/kPa x 0.0098023 kPa/mm = {ratio:.3}", round(flexibility.m_per_pa() * 1e6))
        }
        Ponding::Framed(Framing { primary: Some(_), .. }) => format!("1.15 Cp + Cs = {ratio:.3}"),
        Ponding::Framed(_) | Ponding::Head(_) => format!("k = {ratio:.3}"),
    };
    cell.reader.warn(
        cell.span(),
        format!("the roof is unstable under water: {product}, not under 1"),
        "water of any depth sinks it by as much or more",
        "no level is allowed here: stiffen the framing, or check the figure",
    );
}

/// To four digits behind the point, without zeros at its end.
fn round(value: f64) -> f64 {
    (value * 1e4).round() / 1e4
}

fn framing(section: &Section<'_>) -> Option<Framing> {
    let primary = section.section("primary", &PRIMARY).map(|primary| member(&primary));
    let secondary = section
        .need("secondary", "give the members under the deck: secondary = { span = \"40 ft\", spacing = \"5 ft\", inertia = \"300 in4\" }")
        .and_then(|cell| cell.section(&SECONDARY));
    let deck = section.get("deck_inertia").map(|cell| cell.positive(Dimension::DeckInertia, DeckInertia::m4_per_m));
    // A table at fault is told; it is no bay without primary members.
    let primary = match (section.get("primary"), primary) {
        (Some(_), None) => None,
        (_, primary) => optional(primary),
    };
    let secondary = secondary.map(|secondary| {
        let spacing = secondary.need("spacing", "give the distance between two of them: spacing = \"5 ft\"");
        (member(&secondary), spacing.and_then(|cell| cell.positive_length()))
    });
    let (deck, (secondary, spacing)) = (optional(deck)?, secondary?);
    Some(Framing { primary: primary?, secondary: secondary?, spacing: spacing?, deck })
}

fn member(section: &Section<'_>) -> Option<Member> {
    let span = section.need("span", "give the length from support to support: span = \"40 ft\"");
    let inertia = section.need("inertia", "give its moment of inertia: inertia = \"300 in4\"");
    let web = section.get("web").map_or(Some(false), |cell| cell.word(&[("solid", false), ("open", true)]));
    let span = span.and_then(|cell| cell.positive_length());
    let inertia = inertia.and_then(|cell| cell.positive(Dimension::Inertia, Inertia::m4));
    Some(Member { span: span?, inertia: inertia?, open_web: web? })
}
