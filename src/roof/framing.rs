//! Beams under the water that their own sag holds: the figures by which a framed bay is screened for ponding.
//!
//! A bay has secondary members at a spacing, each over its span, and primary members that carry them. All are steel. The
//! figures are those of a criterion and of an amplification: a bay that meets the criterion is stiff enough not to be
//! analysed, one that does not has to be. They say nothing of strength.

use std::f64::consts::PI;

use crate::units::{DeckInertia, Inertia, Length, METRES_PER_FOOT, METRES_PER_INCH, NEWTONS_PER_POUND};

use super::PASCALS_PER_METRE;

/// Constant of both flexibilities, 1/m: printed as 32 / 10^7 with lengths in ft and inertias in in4, where the exact figure
/// is 31.81. The metric print, 504, is 0.5 % less.
const PRINTED: f64 = 32e-7 * METRES_PER_INCH * METRES_PER_INCH * METRES_PER_INCH * METRES_PER_INCH
    / (METRES_PER_FOOT * METRES_PER_FOOT * METRES_PER_FOOT * METRES_PER_FOOT * METRES_PER_FOOT);

/// Modulus of elasticity of steel, Pa: 29,000,000 lb/in2.
const STEEL: f64 = 29e6 * NEWTONS_PER_POUND / (METRES_PER_INCH * METRES_PER_INCH);

/// What is left of the inertia of a truss or an open-web joist, whose web gives.
const OPEN_WEB: f64 = 0.85;

/// The most that Cp + 0.9 Cs may be.
pub const CRITERION: f64 = 0.25;

/// One kind of member.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Member {
    /// From support to support.
    pub span: Length,
    /// Second moment of area, as a table of sections gives it.
    pub inertia: Inertia,
    /// Whether it is a truss or an open-web joist.
    pub open_web: bool,
}

impl Member {
    /// The inertia that counts: of an open web 15 % less.
    pub fn effective(&self) -> Inertia {
        if self.open_web { self.inertia * OPEN_WEB } else { self.inertia }
    }

    fn span_to_the_fourth(&self) -> f64 {
        let square = self.span.m() * self.span.m();
        square * square
    }
}

/// A framed bay.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Framing {
    /// The members that carry the others; none where those stand on walls or other stiff supports.
    pub primary: Option<Member>,
    /// The members under the deck.
    pub secondary: Member,
    /// From one secondary member to the next.
    pub spacing: Length,
    /// Inertia of the deck between them, where given.
    pub deck: Option<DeckInertia>,
}

impl Framing {
    /// Flexibility of the primary members, Cp = 32 Ls Lp^4 / (10^7 Ip); zero on stiff supports.
    ///
    /// | symbol | meaning | unit |
    /// |---|---|---|
    /// | Ls | span of the secondary members | ft |
    /// | Lp | span of the primary members | ft |
    /// | Ip | inertia of the primary members, of an open web 15 % less | in4 |
    ///
    /// # Source
    /// AISC 360-05 to -16, appendix 2, from memory; it is not in 360-22.
    pub fn primary_flexibility(&self) -> f64 {
        self.primary.map_or(0.0, |primary| {
            PRINTED * self.secondary.span.m() * primary.span_to_the_fourth() / primary.effective().m4()
        })
    }

    /// Flexibility of the secondary members, Cs = 32 S Ls^4 / (10^7 Is); on stiff supports k = w S Ls^4 / (pi^4 E Is), which
    /// is the same with the exact constant.
    ///
    /// | symbol | meaning | unit |
    /// |---|---|---|
    /// | S | spacing of the secondary members | ft |
    /// | Ls | their span | ft |
    /// | Is | their inertia, of an open web 15 % less | in4 |
    /// | w | unit weight of water, 62.4 lb/ft3 | |
    /// | E | modulus of elasticity of steel, 29,000,000 lb/in2 | |
    ///
    /// # Source
    /// AISC 360-05 to -16, appendix 2, from memory; the one-way bay is a half sine under water of its own shape.
    pub fn secondary_flexibility(&self) -> f64 {
        let exact = PASCALS_PER_METRE / (PI * PI * PI * PI * STEEL);
        let constant = if self.primary.is_some() { PRINTED } else { exact };
        constant * self.spacing.m() * self.secondary.span_to_the_fourth() / self.secondary.effective().m4()
    }

    /// Cp + 0.9 Cs, which [`CRITERION`] bounds.
    ///
    /// # Source
    /// Limit: AISC LRFD commentary K2 (1999). Form: AISC 360-05 to -16, appendix 2, from memory.
    pub fn criterion(&self) -> f64 {
        self.primary_flexibility() + 0.9 * self.secondary_flexibility()
    }

    /// Sag in the middle of the bay for each unit of depth of all the water there: on stiff supports k, else 1.15 Cp + Cs. The
    /// amplification is 1 / (1 - this).
    ///
    /// # Source
    /// Bp of the ASCE 7-22 commentary, after research of 2019 on steel roofs, from memory; 1 / (1 - k) is 0.1 to 0.2 % under
    /// the exact beam.
    pub fn sag_ratio(&self) -> f64 {
        1.15 * self.primary_flexibility() + self.secondary_flexibility()
    }

    /// The least inertia of the deck, Id = 25 S^4 / 10^6 in4/ft with S in ft.
    ///
    /// # Source
    /// AISC 360-05 to -16, appendix 2, from memory; the metric print is 3940 S^4 mm4/m.
    pub fn deck_needed(&self) -> DeckInertia {
        let feet = self.spacing.m() / METRES_PER_FOOT;
        let in4 = METRES_PER_INCH * METRES_PER_INCH * METRES_PER_INCH * METRES_PER_INCH;
        DeckInertia::from_m4_per_m(25e-6 * feet * feet * feet * feet * in4 / METRES_PER_FOOT)
    }

    /// The deck's inertia where it is less than it must be.
    pub fn deck_too_slack(&self) -> Option<DeckInertia> {
        self.deck.filter(|&deck| deck < self.deck_needed() * (1.0 - 1e-9))
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    fn member(span: &str, inertia: &str) -> Member {
        Member { span: span.parse().unwrap(), inertia: inertia.parse().unwrap(), open_web: false }
    }

    fn bay() -> Framing {
        Framing {
            primary: Some(member("30 ft", "1500 in4")),
            secondary: member("40 ft", "300 in4"),
            spacing: "5 ft".parse().unwrap(),
            deck: None,
        }
    }

    /// A girder of 30 ft and 1500 in4 under joists of 40 ft and 300 in4 at 5 ft: 32 x 40 x 810,000 / 1.5e10 = 0.06912 and
    /// 32 x 5 x 2,560,000 / 3e9 = 0.13653; together 0.192, amplification 1 / (1 - 0.0795 - 0.1365) = 1.2755. Deck
    /// 25 x 625 / 10^6 in4/ft. By hand.
    #[test]
    fn a_two_way_bay() {
        let bay = bay();
        assert_relative_eq!(bay.primary_flexibility(), 0.069_12, max_relative = 1e-9);
        assert_relative_eq!(bay.secondary_flexibility(), 0.136_533, max_relative = 1e-5);
        assert_relative_eq!(bay.criterion(), 0.192, max_relative = 1e-9);
        assert_relative_eq!(1.0 / (1.0 - bay.sag_ratio()), 1.275_54, max_relative = 1e-5);
        assert_relative_eq!(bay.deck_needed().to_in4_per_ft(), 0.015_625, max_relative = 1e-9);
    }

    /// Exact constants of the flexibilities: 31.81 / 10^7 in ft and in4, 503.5 in m and mm4 with E = 200,000 N/mm2; both prints
    /// are rounded. Source: unit weight / (pi^4 E).
    #[test]
    fn the_printed_constant_is_the_exact_one_rounded_up() {
        let exact = PASCALS_PER_METRE / (PI * PI * PI * PI * STEEL);
        assert_relative_eq!(32.0 * exact / PRINTED, 31.809, max_relative = 1e-4);
        assert_relative_eq!(exact * 1e12, 503.546, max_relative = 1e-3);
    }

    /// A one-way bay of 12 m at 2 m against the exact beam on its own water, w = (h/2) (1/cosh u + 1/cos u) - h in mid-span
    /// with u = (w S / E I)^(1/4) L/2: amplification of the first sag 2.0958 and 1.3544, by 1 / (1 - k) 2.0916 and 1.3531.
    #[test]
    fn a_one_way_bay_comes_near_the_exact_beam() {
        for (inertia, k, exact) in [("4e-5 m4", 0.521_90, 2.095_8), ("8e-5 m4", 0.260_95, 1.354_4)] {
            let bay = Framing {
                primary: None,
                secondary: member("12 m", inertia),
                spacing: "2 m".parse().unwrap(),
                deck: None,
            };
            assert_relative_eq!(bay.sag_ratio(), k, max_relative = 1e-3);
            let by_hand = beam_on_its_own_water(12.0, 2.0, bay.secondary.inertia.m4());
            assert_relative_eq!(by_hand, exact, max_relative = 1e-3);
            assert_relative_eq!(1.0 / (1.0 - bay.sag_ratio()), by_hand, max_relative = 3e-3);
        }
    }

    /// Sag in mid-span over the sag under the first, even water alone, 5 w S h L^4 / (384 E I).
    fn beam_on_its_own_water(span: f64, spacing: f64, inertia: f64) -> f64 {
        let stiffness = PASCALS_PER_METRE * spacing / (STEEL * inertia);
        let u = stiffness.sqrt().sqrt() * span / 2.0;
        let sag = f64::midpoint(1.0 / u.cosh(), 1.0 / u.cos()) - 1.0;
        sag / (5.0 / 384.0 * stiffness * span * span * span * span)
    }

    #[test]
    fn an_open_web_counts_less() {
        let mut bay = bay();
        bay.secondary.open_web = true;
        assert_relative_eq!(bay.secondary_flexibility(), 0.136_533 / 0.85, max_relative = 1e-5);
    }
}
