//! Ponding: a roof sags under water, the sag holds more water, and that adds to the load.
//!
//! What is computed is a screen and no analysis of the framing. The sag of the whole bay is one figure, that of its middle,
//! and counts at the low point; the framing stays elastic, without camber and without the sag under dead load. With a sag
//! ratio k, the sag under a depth of water for each unit of that depth, the ponding head p under a depth y of water is the
//! fixed point p = k (y + p), so p = k y / (1 - k) and all the water is y / (1 - k) deep. At k = 1 and above every
//! drop brings more than itself: the roof is unstable, and no level is allowed.

use crate::units::{DeckInertia, Flexibility, Length};

use super::framing::{CRITERION, Framing};
use super::{Catchment, PASCALS_PER_METRE};

/// What deflection adds to the water of an area.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Ponding {
    /// A fixed extra depth.
    Head(Length),
    /// A sag for each load.
    Flexible(Flexibility),
    /// The sag of members of known stiffness.
    Framed(Framing),
}

impl Default for Ponding {
    fn default() -> Self {
        Self::Head(Length::ZERO)
    }
}

impl Ponding {
    /// Sag under a depth of water for each unit of that depth; zero for a fixed head.
    pub fn sag_ratio(&self) -> f64 {
        match self {
            Self::Head(_) => 0.0,
            Self::Flexible(flexibility) => flexibility.m_per_pa() * PASCALS_PER_METRE,
            Self::Framed(framing) => framing.sag_ratio(),
        }
    }

    /// Whether it grows with the water, rather than being a fixed head.
    pub fn grows(&self) -> bool {
        !matches!(self, Self::Head(_))
    }

    /// Whether every load of water gathers more without end.
    pub fn is_unstable(&self) -> bool {
        self.sag_ratio() >= 1.0
    }

    /// All the water over the water on the undeflected roof, 1 / (1 - k); none where it is unstable.
    pub fn amplification(&self) -> Option<f64> {
        (!self.is_unstable()).then(|| 1.0 / (1.0 - self.sag_ratio()))
    }

    /// The depth that weighs on the roof under a depth on the undeflected roof: infinite where it is unstable.
    pub fn weighed(&self, depth: Length) -> Length {
        match self {
            Self::Head(head) => depth + *head,
            _ if self.is_unstable() => Length::from_m(f64::INFINITY),
            _ => Length::from_m(depth.m() / (1.0 - self.sag_ratio())),
        }
    }

    /// The depth on the undeflected roof under which so much weighs; under the low point where it is unstable, or where a
    /// fixed head alone is more.
    pub fn depth_under(&self, weighed: Length) -> Length {
        match self {
            Self::Head(head) => weighed - *head,
            _ if self.is_unstable() => Length::from_m(f64::NEG_INFINITY),
            _ => weighed * (1.0 - self.sag_ratio()),
        }
    }

    /// The ponding head under a depth on the undeflected roof.
    pub fn head(&self, depth: Length) -> Length {
        match self {
            Self::Head(head) => *head,
            _ => self.weighed(depth) - depth,
        }
    }
}

/// Slope under which a bay counts as one that may pond: 1/4 in/ft, which codes print as 2 % too, and that passes. IBC 2012 to
/// 2018; ASCE 7-10, from memory.
const LOW_SLOPE: f64 = 0.02;
/// Slope under which a bay counts where its secondary members run along the free edge: 1 in/ft. ASCE 7-16, from memory.
const LOW_SLOPE_ALONG: f64 = 1.0 / 12.0;
/// Span over spacing of the secondary members above which a bay counts whatever its slope. ASCE 7-16, from memory.
const SLENDER: f64 = 16.0;

/// Why a bay asks for an analysis of its framing.
#[derive(Clone, Copy, Debug, PartialEq)]
#[non_exhaustive]
pub enum Doubt {
    /// No level of water is stable.
    Unstable {
        /// The sag ratio.
        sag_ratio: f64,
    },
    /// Its members do not meet the criterion of stiffness.
    Criterion {
        /// Cp + 0.9 Cs, over [`CRITERION`].
        sum: f64,
    },
    /// Its sag ratio is greater than that of a bay that just meets the criterion.
    Flexible {
        /// The sag ratio.
        sag_ratio: f64,
    },
    /// Its deck is not as stiff as the criterion takes it.
    Deck {
        /// What it has.
        has: DeckInertia,
        /// What it needs.
        needs: DeckInertia,
    },
    /// Its slope is under 1/4 in/ft.
    LowSlope {
        /// The slope.
        slope: f64,
    },
    /// Its slope is not given, so it may be level.
    SlopeNotGiven,
    /// Its slope is under 1 in/ft, which counts where its secondary members run along the free edge.
    LowSlopeAlong {
        /// The slope.
        slope: f64,
    },
    /// Its secondary members are slender, which counts where they run along the free edge.
    Slender {
        /// Their span over their spacing.
        ratio: f64,
    },
    /// Water stands behind its sills when the primary drains are blocked.
    Impounds,
}

/// Why a bay asks for an analysis of its framing; empty where nothing that is known of it does.
pub fn doubts(area: &Catchment) -> Vec<Doubt> {
    let mut doubts: Vec<Doubt> = area.ponding.map_or(Vec::new(), |ponding| of_stiffness(&ponding));
    let framing = area.ponding.and_then(|ponding| match ponding {
        Ponding::Framed(framing) => Some(framing),
        Ponding::Head(_) | Ponding::Flexible(_) => None,
    });
    match area.surface.rise.map(|rise| rise.slope) {
        None => doubts.push(Doubt::SlopeNotGiven),
        Some(slope) if slope < LOW_SLOPE * (1.0 - 1e-9) => doubts.push(Doubt::LowSlope { slope }),
        Some(slope) if framing.is_some() && slope < LOW_SLOPE_ALONG * (1.0 - 1e-9) => {
            doubts.push(Doubt::LowSlopeAlong { slope });
        }
        Some(_) => {}
    }
    let ratio = framing.map(|framing| framing.secondary.span / framing.spacing);
    doubts.extend(ratio.filter(|&ratio| ratio > SLENDER).map(|ratio| Doubt::Slender { ratio }));
    doubts.push(Doubt::Impounds);
    doubts
}

fn of_stiffness(ponding: &Ponding) -> Vec<Doubt> {
    let sag_ratio = ponding.sag_ratio();
    if ponding.is_unstable() {
        return vec![Doubt::Unstable { sag_ratio }];
    }
    match ponding {
        Ponding::Framed(framing) => {
            let sum = framing.criterion();
            let stiffness = (sum > CRITERION).then_some(Doubt::Criterion { sum });
            let deck = framing.deck_too_slack().map(|has| Doubt::Deck { has, needs: framing.deck_needed() });
            stiffness.into_iter().chain(deck).collect()
        }
        // A bay on stiff supports just meets the criterion where 0.9 Cs is all of it.
        Ponding::Flexible(_) if sag_ratio > CRITERION / 0.9 => vec![Doubt::Flexible { sag_ratio }],
        Ponding::Head(_) | Ponding::Flexible(_) => Vec::new(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    fn flexible(text: &str) -> Ponding {
        Ponding::Flexible(text.parse().unwrap())
    }

    /// 0.02 in/psf x 5.2 psf/in = 0.104: 5 in of water sag 0.104 / 0.896 x 5 = 0.58036 in, and 5.58036 in weigh. By hand; and
    /// the sag under what weighs is that head again, 0.104 x 5.58036.
    #[test]
    fn the_ponding_head_is_the_fixed_point() {
        let ponding = flexible("0.02 in/psf");
        assert_relative_eq!(ponding.sag_ratio(), 0.104, max_relative = 1e-9);
        let depth = Length::inches(5.0);
        assert_relative_eq!(ponding.head(depth).to_inches(), 0.580_357, max_relative = 1e-6);
        assert_relative_eq!(0.104 * ponding.weighed(depth).to_inches(), 0.580_357, max_relative = 1e-6);
        assert_relative_eq!(ponding.depth_under(ponding.weighed(depth)).to_inches(), 5.0, max_relative = 1e-12);
        assert_relative_eq!(ponding.amplification().unwrap(), 1.116_071, max_relative = 1e-6);
    }

    /// By iteration from no sag at all, each round the sag under the water of the round before.
    #[test]
    fn rounds_of_sag_come_to_the_same() {
        let ponding = flexible("0.09 in/psf");
        let mut head = 0.0;
        for _ in 0..200 {
            head = 0.09 * 5.2 * (4.0 + head);
        }
        assert_relative_eq!(ponding.head(Length::inches(4.0)).to_inches(), head, max_relative = 1e-9);
    }

    /// 0.2 in/psf x 5.2 = 1.04: each inch of water sinks the roof by more than an inch.
    #[test]
    fn an_unstable_roof_allows_no_level() {
        let ponding = flexible("0.2 in/psf");
        assert!(ponding.is_unstable() && ponding.amplification().is_none());
        assert!(ponding.depth_under(Length::inches(100.0)) < Length::ZERO);
        assert!(!ponding.weighed(Length::ZERO).m().is_finite());
    }

    #[test]
    fn a_fixed_head_is_added_whatever_the_depth() {
        let ponding = Ponding::Head(Length::inches(0.4));
        assert_relative_eq!(ponding.weighed(Length::inches(5.0)).to_inches(), 5.4, max_relative = 1e-12);
        assert_relative_eq!(ponding.depth_under(Length::inches(5.4)).to_inches(), 5.0, max_relative = 1e-12);
        assert!(!ponding.grows());
    }
}
