//! A stronger roof against fewer openings, in words.

use crate::search::{Opening, Ranked, Relaxation, Stiffened, Stopped, Structure};
use crate::units::{Area, Load, METRES_PER_FOOT, Money};

use super::words::{self, Words};

/// An area whose load limit may be raised, and the layout that is cheapest there.
#[derive(Clone, Debug)]
pub struct Strengthened<'a> {
    /// What was found.
    pub stiffened: &'a Stiffened,
    /// The first layout of the area so raised.
    pub layout: Ranked<'a>,
}

/// Whether and how a raise of an area's limit pays: none where no raise opens a layout.
pub type Weighed<'a> = Result<Option<Strengthened<'a>>, Stopped>;

impl Strengthened<'_> {
    /// Openings and strength together; none where a device has no price.
    pub(super) fn total(&self) -> Option<Money> {
        Some([self.layout.cost?, self.stiffened.strength].into_iter().sum())
    }
}

/// Whether and how a raise of an area's load limit pays.
pub(super) fn told(weighed: &Weighed<'_>, structure: &Structure, words: Words) -> String {
    let price = price(structure, words);
    let most = words.given_load(structure.most);
    let Ok(strengthened) = weighed else {
        return "Stiffened: the search was ended before it was known whether a raise of the load limit pays.".into();
    };
    let Some(strengthened) = strengthened else {
        return format!("Stiffened: no layout was found, even with the load limit raised by {most}.");
    };
    let (found, layout) = (strengthened.stiffened, &strengthened.layout);
    let (Some(total), Some(openings)) = (strengthened.total(), layout.cost) else { return String::new() };
    if found.raise == Load::ZERO {
        return format!("Stiffened: no raise of the load limit by up to {most} pays at {price}.");
    }
    let against = match found.given.map(|given| given.millionths() - total.millionths()) {
        Some(saved) => format!("{} less than at the limit as given", words::money(Money::from_millionths(saved))),
        None => "while the limit as given has no layout".into(),
    };
    let limits = super::cures::loads(&found.raised, words);
    format!(
        "Stiffened: + {} of load limit, to {limits}, costs {} at {price}, and opens {} for {}: {} in all, {against}.",
        words.given_load(found.raise),
        words::money(found.strength),
        words.layout(layout),
        words::money(openings),
        words::money(total)
    )
}

/// The price of strength: `0.07 for each ft2 and psf`.
pub(super) fn price(structure: &Structure, words: Words) -> String {
    let (area, one) =
        if words.us() { ("ft2", METRES_PER_FOOT * METRES_PER_FOOT * Load::psf(1.0).pa()) } else { ("m2", 1000.0) };
    format!("{} for each {area} and {}", words::trimmed(structure.stiffen.for_si(one), 4), words.load_unit())
}

/// The tread of least openings and strength together, the first of equals.
pub(super) fn cheapest<'t>(
    treads: &'t [Opening<'t>],
    structure: &Structure,
    ground: Area,
) -> Option<(&'t Opening<'t>, Money)> {
    let total = |opening: &Opening<'_>| {
        let Relaxation::Load(raise) = opening.0.change else { return None };
        let strength = structure.cost(ground, raise);
        Some([opening.1.cost?, strength].into_iter().sum::<Money>())
    };
    let priced = treads.iter().filter_map(|opening| Some((opening, total(opening)?)));
    priced.min_by_key(|(_, total)| total.millionths())
}
