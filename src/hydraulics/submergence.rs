//! A weir whose lower side stands under water too.

use super::powers::{fitted, three_halves};
use super::{FlowError, limits, not_negative, positive};
use crate::units::Length;

/// What remains of the free flow over a drowned weir, (1 - (H2/H1)^1.5)^0.385.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | H1 | `upstream` head over the sill | m | above 0 |
/// | H2 | `downstream` head over the sill | m | 0 or more; [`limits::VILLEMONTE`]: H2 / H1 at most 1 |
///
/// It multiplies the flow of the same weir when free, whichever form gives that.
///
/// # Errors
/// [`FlowError::OutsideRange`] where the lower level stands higher; [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// Villemonte (1947), as in FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), eq. 8-21, and EPA stormwater reference manual, vol. II,
/// eq. 6-26.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::submergence, units::Length};
/// let left = submergence::villemonte(Length::mm(100.0), Length::mm(50.0))?;
/// assert_eq!(format!("{left:.4}"), "0.8454");
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn villemonte(upstream: Length, downstream: Length) -> Result<f64, FlowError> {
    let ratio = not_negative("downstream head", downstream)? / positive("upstream head", upstream)?;
    limits::VILLEMONTE.check(ratio)?;
    Ok(fitted((1.0 - three_halves(ratio)).max(0.0), 0.385))
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    #[test]
    fn free_flow_is_whole_and_equal_levels_carry_nothing() {
        let left = |downstream: f64| villemonte(Length::from_m(0.1), Length::from_m(downstream)).unwrap();
        assert_relative_eq!(left(0.0), 1.0);
        assert_relative_eq!(left(0.1), 0.0);
        assert!(left(0.03) > left(0.06));
        assert!(villemonte(Length::from_m(0.1), Length::from_m(0.11)).is_err());
    }
}
