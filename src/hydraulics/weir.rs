//! Free flow over a thin sill: the forms of Francis and of HEC-22, and the rectangular weir of EN 12056-3.
//!
//! A thin-plate coefficient on a thick parapet overstates the flow by about a fifth; thick walls belong to [`super::crest`]
//! and [`super::throat`]. Heads are measured up from the sill. A sill drowned from outside belongs to
//! [`super::submergence`].

use crate::units::{Flow, Length, METRES_PER_FOOT};

use super::powers::three_halves;
use super::{FlowError, GRAVITY, above_zero, limits, not_negative, positive, solve};

/// Coefficient of Francis, feet and cubic feet a second: Q = 3.33 (L - 0.1 n H) H^1.5.
pub const FRANCIS_US: f64 = 3.33;

/// Divisor of the rectangular weir of EN 12056-3, millimetres and litres a second: Q = L h^1.5 / 24000.
pub const EN_12056_DIVISOR: f64 = 24_000.0;

/// How much of the effective width one end takes away, in heads. Source: Francis (1883).
const LOST_PER_END: f64 = 0.1;

/// Ends of the opening that stand clear of the channel's sides, each of which draws the nappe in.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum EndContractions {
    /// The opening takes the whole width.
    None,
    /// One end is flush with a side.
    One,
    /// An opening in a wall: the usual scupper.
    Two,
}

impl EndContractions {
    /// How many ends draw the nappe in.
    pub const fn count(self) -> u8 {
        match self {
            Self::None => 0,
            Self::One => 1,
            Self::Two => 2,
        }
    }
}

/// The channel that leads to a weir, where its velocity is not negligible.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Approach {
    /// Its width, at least that of the weir.
    pub width: Length,
    /// Height of the sill above its floor.
    pub sill_height: Length,
}

/// Flow over a thin sill with or without end contractions, Q = 3.33 (L - 0.1 n H) H^1.5.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | L | `width`, clear opening | ft | above 0 |
/// | H | `head` over the sill | ft | [`limits::FRANCIS`]: H / L at most 1/3 |
/// | n | `contractions` | | 0, 1 or 2 |
/// | Q | result | ft3/s | |
///
/// In SI the coefficient is 1.8385 m^0.5/s, often rounded to 1.84. A full contraction also needs two heads of clear water
/// beside and below the opening ([`fully_contracted`]); a roof scupper seldom has it below its sill, and the published
/// scupper table of that form does not ask for it, so that check is the caller's.
///
/// # Errors
/// [`FlowError::OutsideRange`] for a head above a third of the width; [`FlowError::Unusable`] for a width that is not above
/// zero or a head below zero.
///
/// # Source
/// Francis (1883); EPA stormwater reference manual, vol. II, eqs. 6-18 and 6-22; the range from memory.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::weir::{self, EndContractions}, units::Length};
/// let flow = weir::francis(Length::inches(12.0), Length::inches(3.0), EndContractions::Two)?;
/// assert_eq!(format!("{:.0}", flow.to_gpm()), "177"); // plumbing code table of rectangular scuppers, from memory
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn francis(width: Length, head: Length, contractions: EndContractions) -> Result<Flow, FlowError> {
    let flow = francis_beyond(width, head, contractions)?;
    limits::FRANCIS.check(head / width)?;
    Ok(flow)
}

/// [`francis`] at any head, for a caller that marks what lies beyond [`limits::FRANCIS`].
///
/// The contractions are taken off as if the head were still a third of the width: beyond H = 6 L / n the equation
/// itself would let the flow fall, and at 10 L / n vanish.
///
/// # Errors
/// [`FlowError::Unusable`] for a width that is not above zero or a head below zero.
///
/// # Source
/// As [`francis`].
///
/// # Example
/// ```
/// # use brimline::{hydraulics::weir::{self, EndContractions}, units::Length};
/// let flow = weir::francis_beyond(Length::inches(12.0), Length::inches(3.0293), EndContractions::Two)?;
/// assert_eq!(format!("{:.0}", flow.to_gpm()), "180");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn francis_beyond(width: Length, head: Length, contractions: EndContractions) -> Result<Flow, FlowError> {
    let (width, head) = (positive("width", width)?, not_negative("head", head)?);
    Ok(Flow::from_m3_per_s(francis_si() * francis_width(width, head, contractions) * three_halves(head)))
}

/// [`francis`] with the velocity of approach: H^1.5 becomes (H + hv)^1.5 - hv^1.5, hv = v^2 / 2g.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | L, H, n | as [`francis`] | | |
/// | B | `approach.width` | m | at least L |
/// | P | `approach.sill_height` | m | above 0 |
/// | v | Q / (B (P + H)), found with the flow | m/s | |
///
/// # Errors
/// As [`francis`]; [`FlowError::Unusable`] for a channel narrower than the weir.
///
/// # Source
/// Francis (1883), the correction from memory.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::weir::{self, Approach, EndContractions}, units::{Length, METRES_PER_FOOT}};
/// let feet = |value: f64| Length::from_m(value * METRES_PER_FOOT);
/// let channel = Approach { width: feet(4.0), sill_height: feet(1.0) };
/// let flow = weir::francis_with_approach(feet(2.0), feet(0.5), EndContractions::Two, channel)?;
/// assert_eq!(format!("{:.3}", flow.m3_per_s() / METRES_PER_FOOT.powi(3)), "2.251"); // 0.6 % above a still approach
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn francis_with_approach(
    width: Length,
    head: Length,
    contractions: EndContractions,
    approach: Approach,
) -> Result<Flow, FlowError> {
    let still = francis(width, head, contractions)?.m3_per_s();
    let sill = positive("sill height", approach.sill_height)?;
    above_zero("approach width", approach.width.m())?;
    if approach.width < width {
        let found = (approach.width - width).m();
        return Err(FlowError::Unusable { what: "approach width beyond the weir's", found, zero_passes: true });
    }
    if head == Length::ZERO {
        return Ok(Flow::ZERO);
    }
    let (width, head, wet_area) = (width.m(), head.m(), approach.width.m() * (sill + head.m()));
    let coefficient = francis_si() * francis_width(width, head, contractions);
    // The flow that the correction gives exceeds the still one and grows slower than the flow it is computed from.
    let excess = |flow: f64| {
        let velocity_head = (flow / wet_area) * (flow / wet_area) / (2.0 * GRAVITY);
        flow - coefficient * (three_halves(head + velocity_head) - three_halves(velocity_head))
    };
    Ok(Flow::from_m3_per_s(solve::bracketed_from(still, 1.1 * still, excess)))
}

/// Refuses clear water, beside or below the opening, that is too little for a full contraction.
///
/// # Errors
/// [`FlowError::OutsideRange`] with [`limits::FULL_CONTRACTION`] where the clearance is under two heads;
/// [`FlowError::Unusable`] for a head that is not above zero or a clearance below zero.
///
/// # Source
/// USBR Water Measurement Manual, chapter 7, from memory.
pub fn fully_contracted(clearance: Length, head: Length) -> Result<(), FlowError> {
    limits::FULL_CONTRACTION.check(not_negative("clearance", clearance)? / positive("head", head)?)
}

/// Flow over a sharp crest without end contractions, Q = (1.81 + 0.22 H / Hc) L H^1.5.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | L | `width`, clear opening | m | above 0 |
/// | H | `head` over the crest, velocity head left out | m | 0 or more |
/// | Hc | `crest_height` above the approach floor | m | above 0 |
///
/// Under H / Hc = 0.3 the source allows the constant 1.84 as well.
///
/// # Errors
/// [`FlowError::Unusable`] for an argument outside its range.
///
/// # Source
/// FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), eqs. 8-19 and 8-20.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::weir, units::Length};
/// let flow = weir::sharp_crested(Length::from_m(1.67), Length::from_m(0.1), Length::from_m(0.8))?;
/// assert_eq!(format!("{:.2}", flow.m3_per_s()), "0.10"); // as printed in Example 8-6 of the source
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn sharp_crested(width: Length, head: Length, crest_height: Length) -> Result<Flow, FlowError> {
    let (width, head) = (positive("width", width)?, not_negative("head", head)?);
    let coefficient = 1.81 + 0.22 * head / positive("crest height", crest_height)?;
    Ok(Flow::from_m3_per_s(coefficient * width * three_halves(head)))
}

/// Flow over a rectangular weir as EN 12056-3 has it, Q = L h^1.5 / 24000.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | L | `width` of the weir | mm | above 0 |
/// | h | `head` over it | mm | 0 or more |
/// | Q | result | l/s | |
///
/// In SI the coefficient is 1.318 m^0.5/s, 72 % of a thin plate: a design value with its reserve in it. Strainers and
/// openings that run full belong to [`super::outlet::en_12056_other`].
///
/// # Errors
/// [`FlowError::Unusable`] for a width that is not above zero or a head below zero.
///
/// # Source
/// EN 12056-3, from memory.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::weir, units::Length};
/// let flow = weir::en_12056(Length::mm(1000.0), Length::mm(30.0))?;
/// assert_eq!(format!("{:.3}", flow.m3_per_s() * 1000.0), "6.847");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn en_12056(width: Length, head: Length) -> Result<Flow, FlowError> {
    let (width, head) = (positive("width", width)? * 1000.0, not_negative("head", head)? * 1000.0);
    Ok(Flow::from_m3_per_s(width * three_halves(head) / EN_12056_DIVISOR / 1000.0))
}

/// The coefficient of Francis in m^0.5/s.
fn francis_si() -> f64 {
    FRANCIS_US * METRES_PER_FOOT.sqrt()
}

/// The width that is left of an opening by its end contractions.
fn francis_width(width: f64, head: f64, contractions: EndContractions) -> f64 {
    width - LOST_PER_END * f64::from(contractions.count()) * head.min(width * limits::FRANCIS.high)
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    #[test]
    fn a_head_above_a_third_of_the_width_is_refused_with_the_ratio() {
        let refused = francis(Length::inches(6.0), Length::inches(3.0), EndContractions::Two);
        assert_eq!(refused, Err(FlowError::OutsideRange { found: 0.5, range: &limits::FRANCIS }));
        assert!(fully_contracted(Length::inches(2.0), Length::inches(3.0)).is_err());
        assert!(fully_contracted(Length::inches(6.0), Length::inches(3.0)).is_ok());
    }

    #[test]
    fn beyond_the_range_the_flow_still_rises() {
        let flow =
            |inches: f64| francis_beyond(Length::inches(6.0), Length::inches(inches), EndContractions::Two).unwrap();
        assert!((1..400).all(|step| flow(f64::from(step) / 4.0) > flow(f64::from(step - 1) / 4.0)));
    }

    #[test]
    fn a_wide_deep_approach_adds_nothing_and_a_narrow_one_is_refused() {
        let (width, head) = (Length::from_m(0.6), Length::from_m(0.15));
        let still = francis(width, head, EndContractions::Two).unwrap();
        let approach = |metres: f64| Approach { width: Length::from_m(metres), sill_height: Length::from_m(1.0) };
        let moving = |metres: f64| francis_with_approach(width, head, EndContractions::Two, approach(metres));
        assert_relative_eq!(moving(1000.0).unwrap(), still, max_relative = 1e-6);
        assert!(moving(0.6).unwrap() > still);
        assert!(moving(0.5).is_err());
    }
}
