//! The two-branch form of North American practice: a thin-plate weir, and an orifice once the top is under water.
//!
//! It has no end contraction and no wall thickness; through a thick parapet a scupper carries about a fifth less. The
//! equations are defined for any head; the published table behind them spans [`limits::PRACTICE_WIDTH`],
//! [`limits::PRACTICE_HEIGHT`] and [`limits::PRACTICE_HEAD`], and a caller marks what lies beyond.
//!
//! [`limits::PRACTICE_WIDTH`]: super::limits::PRACTICE_WIDTH
//! [`limits::PRACTICE_HEIGHT`]: super::limits::PRACTICE_HEIGHT
//! [`limits::PRACTICE_HEAD`]: super::limits::PRACTICE_HEAD

use crate::units::{Flow, Length, METRES_PER_INCH};

use super::{FlowError, lesser_of, not_negative, positive};

pub use super::Branch;

/// Weir coefficient, gal/min and inches: Q = 2.9 b H^1.5.
pub const WEIR_GPM_IN: f64 = 2.9;
/// Orifice coefficient, gal/min and inches: Q = 4.3 b h sqrt(H - h/2).
pub const ORIFICE_GPM_IN: f64 = 4.3;

/// Flow in m3/s for a value of either form in gal/min, both arguments having been inches to the power 2.5 in all.
const SI_PER_GPM_IN: f64 =
    231.0 * METRES_PER_INCH * METRES_PER_INCH * METRES_PER_INCH / 60.0 / (METRES_PER_INCH * METRES_PER_INCH);

/// How a closed opening passes from weir to orifice.
///
/// The weir holds up to H = h and the orifice well above it; between, the sources differ. Changing over at H = h is not
/// offered: the flow would jump by 4.8 % there, and no head would belong to the flows in the gap.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Transition {
    /// The lesser of the two, which meet at H = 1.0916 h. Continuous without a further number; 1 to 2 % above the
    /// published entry next above h.
    #[default]
    LesserOf,
    /// A straight line from the weir at h to the orifice at 1.4 h, the band of FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009) for
    /// curb openings. The lowest of the three, up to 4.1 % under [`Transition::LesserOf`].
    Linear,
    /// A straight line from the weir at h to the orifice at 1.3 h: the end of the line is fitted, so that the entries of
    /// the published table next above h (5 in for 4 in of height, 7 in for 6 in) come out within 0.5 %. It is a law
    /// through the table, for every size; the entries themselves belong in a rating table.
    Table,
}

impl Transition {
    /// Where the straight line ends, as H / h.
    const fn line_ends_at(self) -> Option<f64> {
        match self {
            Self::LesserOf => None,
            Self::Linear => Some(1.4),
            Self::Table => Some(1.3),
        }
    }
}

/// Flow over the sill with a free surface, Q = 2.9 b H^1.5.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | b | `width`, clear opening | in | above 0; tabulated 6 to 24 |
/// | H | `head` over the sill | in | 0 or more; tabulated 1 to 8 |
/// | Q | result | gal/min | |
///
/// In SI the coefficient is 1.7794 m^0.5/s; it is converted exactly.
///
/// # Errors
/// [`FlowError::Unusable`] for a width that is not above zero or a head below zero.
///
/// # Source
/// insurance Data Sheet 1-54 and ASCE 7 commentary, from memory; one point of its table, a 6 in opening at 3 in of head
/// with 90 gal/min, read in a rain-load sheet that quotes it.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::practice, units::Length};
/// let flow = practice::weir(Length::inches(6.0), Length::inches(3.0))?;
/// assert_eq!(format!("{:.0}", flow.to_gpm()), "90"); // as printed
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn weir(width: Length, head: Length) -> Result<Flow, FlowError> {
    Ok(weir_flow(positive("width", width)?, not_negative("head", head)?))
}

/// Flow through an opening that runs full, Q = 4.3 b h sqrt(H - h/2).
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | b | `width`, clear opening | in | above 0; tabulated 6 to 24 |
/// | h | `height`, clear opening | in | above 0; tabulated 4 and 6 |
/// | H | `head` over the sill | in | at least h; tabulated up to 8 |
/// | Q | result | gal/min | |
///
/// The coefficient is 0.596 on sqrt(2 g).
///
/// # Errors
/// [`FlowError::Unusable`] for a dimension that is not above zero or a head below the top of the opening.
///
/// # Source
/// insurance Data Sheet 1-54 and ASCE 7 commentary, from memory.
pub fn orifice(width: Length, height: Length, head: Length) -> Result<Flow, FlowError> {
    let (b, h) = (positive("width", width)?, positive("height", height)?);
    if head < height {
        return Err(FlowError::Unusable {
            what: "head over the top of the opening",
            found: (head - height).m(),
            zero_passes: true,
        });
    }
    Ok(orifice_flow(b, h, not_negative("head", head)?))
}

/// Flow through a closed opening at any head: the weir up to its top, above that the lesser of weir and orifice.
///
/// The two meet at H = 1.0916 h. Changing over at H = h would make the flow jump by 4.8 %, and no head would belong to the
/// flows in the gap; the lesser of the two is continuous and never falls.
///
/// # Errors
/// [`FlowError::Unusable`] for a dimension that is not above zero or a head below zero.
///
/// # Source
/// As [`weir`] and [`orifice`]; lesser-of as in FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), section 8.4.4 for risers.
pub fn closed(width: Length, height: Length, head: Length) -> Result<(Flow, Branch), FlowError> {
    let (b, h) = (positive("width", width)?, positive("height", height)?);
    Ok(closed_flow(b, h, not_negative("head", head)?, Transition::LesserOf))
}

/// Flow through a closed opening at any head, with the transition of one's choice.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | b | `width`, clear opening | in | above 0; tabulated 6 to 24 |
/// | h | `height`, clear opening | in | above 0; tabulated 4 and 6 |
/// | H | `head` over the sill | in | 0 or more; tabulated 1 to 8 |
/// | | `transition` | | |
///
/// # Errors
/// [`FlowError::Unusable`] for a dimension that is not above zero or a head below zero.
///
/// # Source
/// As [`weir`] and [`orifice`]; the band 1.0 to 1.4 h is in FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), section 4.4.5.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::practice::{self, Transition}, units::Length};
/// let flow = |transition| {
///     practice::closed_by(Length::inches(12.0), Length::inches(4.0), Length::inches(5.0), transition)
/// };
/// assert_eq!(format!("{:.1}", flow(Transition::Linear)?.0.to_gpm()), "349.2");
/// assert_eq!(format!("{:.0}", flow(Transition::Table)?.0.to_gpm()), "354"); // as printed in the table
/// assert_eq!(format!("{:.1}", flow(Transition::LesserOf)?.0.to_gpm()), "357.5");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn closed_by(
    width: Length,
    height: Length,
    head: Length,
    transition: Transition,
) -> Result<(Flow, Branch), FlowError> {
    let (b, h) = (positive("width", width)?, positive("height", height)?);
    Ok(closed_flow(b, h, not_negative("head", head)?, transition))
}

fn weir_flow(b: f64, head: f64) -> Flow {
    // H sqrt(H), not a power: both steps round exactly, so the answer is the same on every platform.
    Flow::from_m3_per_s(WEIR_GPM_IN * SI_PER_GPM_IN * per_root_inch(b * head * head.sqrt()))
}

fn orifice_flow(b: f64, h: f64, head: f64) -> Flow {
    Flow::from_m3_per_s(ORIFICE_GPM_IN * SI_PER_GPM_IN * per_root_inch(b * h * (head - h / 2.0).sqrt()))
}

fn closed_flow(b: f64, h: f64, head: f64, transition: Transition) -> (Flow, Branch) {
    let weir = weir_flow(b, head);
    if head <= h {
        return (weir, Branch::Weir);
    }
    match transition.line_ends_at().map(|ratio| ratio * h) {
        None => lesser_of(weir, orifice_flow(b, h, head)),
        Some(end) if head < end => {
            let (low, high) = (weir_flow(b, h), orifice_flow(b, h, end));
            (low + (high - low) * ((head - h) / (end - h)), Branch::Transition)
        }
        Some(_) => (orifice_flow(b, h, head), Branch::Orifice),
    }
}

/// Metres to the power 2.5 as square metres times root inches.
fn per_root_inch(metres: f64) -> f64 {
    metres / METRES_PER_INCH.sqrt()
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    fn inches(value: f64) -> Length {
        Length::inches(value)
    }

    /// Coefficients of both forms in SI and in feet. Source: conversion by hand.
    #[test]
    fn coefficients_convert_exactly() {
        let one = weir(Length::from_m(1.0), Length::from_m(1.0)).unwrap().m3_per_s();
        assert_relative_eq!(one, 1.779_41, max_relative = 1e-5);
        let submerged = orifice(Length::from_m(1.0), Length::from_m(1.0), Length::from_m(1.5)).unwrap().m3_per_s();
        assert_relative_eq!(submerged / (2.0 * 9.806_65_f64).sqrt(), 0.595_76, max_relative = 1e-4);
    }

    /// Where the two branches meet, from 2.9 x^1.5 = 4.3 sqrt(x - 1/2) with x = H / h: 8.41 x^3 = 18.49 (x - 0.5).
    #[test]
    fn the_branches_meet_at_1_0916() {
        let x: f64 = 1.091_55;
        assert_relative_eq!(8.41 * x * x * x, 18.49 * (x - 0.5), max_relative = 1e-4);
        let branch = |ratio: f64| closed(inches(12.0), inches(4.0), inches(4.0 * ratio)).unwrap().1;
        assert_eq!(branch(1.0910), Branch::Weir);
        assert_eq!(branch(1.0920), Branch::Orifice);
    }

    #[test]
    fn what_has_no_meaning_is_refused() {
        assert!(weir(Length::ZERO, inches(1.0)).is_err());
        assert!(weir(inches(6.0), inches(-1.0)).is_err());
        assert!(weir(inches(6.0), Length::from_m(f64::NAN)).is_err());
        assert!(orifice(inches(6.0), inches(4.0), inches(3.0)).is_err());
        assert_eq!(closed(inches(6.0), inches(4.0), Length::ZERO).unwrap().0, Flow::ZERO);
    }
}
