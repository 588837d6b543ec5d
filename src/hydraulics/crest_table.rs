//! Coefficients of broad crests as FHWA tabulates them, by head and by crest length along the flow.
//!
//! The table comes in two editions, metres and feet, that are not conversions of one another. The one in feet starts at the
//! lower head (0.2 ft) and is carried by a second public manual as well; the metric one has a row, 0.60 m, that dips to 1.31
//! where its neighbours read 1.48 and 1.44 and is probably a misprint. Most heads on a roof are near the lower edge of both.

use crate::units::{Flow, Length, METRES_PER_FOOT};

use super::powers::three_halves;
use super::{FlowError, limits, not_negative, positive, solve};

/// Which printing of the table is read.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Edition {
    /// Feet; also Table 6-3 of the EPA stormwater reference manual, vol. II.
    #[default]
    Us,
    /// Metres.
    Si,
}

/// Flow over a broad crest, Q = C b H^1.5 with C from the table, linear in head and in crest length.
///
/// | symbol | argument | unit | range |
/// |---|---|---|---|
/// | b | `width`, clear opening | m | above 0 |
/// | H | `head` over the crest | m | [`limits::CREST_TABLE_HEAD_US`], [`limits::CREST_TABLE_HEAD_SI`] |
/// | L | `crest_length` along the flow | m | [`limits::CREST_TABLE_LENGTH_US`], [`limits::CREST_TABLE_LENGTH_SI`] |
/// | | `edition` | | |
///
/// # Errors
/// [`FlowError::OutsideRange`] outside the table; [`FlowError::Unusable`] for what has no meaning.
///
/// # Source
/// FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), Table 8-1.
///
/// # Example
/// ```
/// # use brimline::{hydraulics::crest_table::{self, Edition}, units::Length};
/// let metres = Length::from_m;
/// let flow = crest_table::flow(metres(1.0), metres(1.0), metres(0.5), Edition::Si)?;
/// assert_eq!(format!("{:.2}", flow.m3_per_s()), "1.82"); // the row of 1.00 m, as printed
/// # Ok::<(), brimline::hydraulics::FlowError>(())
/// ```
pub fn flow(width: Length, head: Length, crest_length: Length, edition: Edition) -> Result<Flow, FlowError> {
    let b = positive("width", width)?;
    let coefficient = coefficient(head, crest_length, edition)?;
    Ok(Flow::from_m3_per_s(coefficient * b * three_halves(head.m())))
}

/// The tabulated coefficient, m^0.5/s; arguments, range, errors and source as in [`flow`].
///
/// # Errors
/// As [`flow`].
pub fn coefficient(head: Length, crest_length: Length, edition: Edition) -> Result<f64, FlowError> {
    let (head, length) = (not_negative("head", head)?, positive("crest length", crest_length)?);
    match edition {
        Edition::Us => {
            limits::CREST_TABLE_HEAD_US.check(head)?;
            limits::CREST_TABLE_LENGTH_US.check(length)?;
            let in_feet = read(&HEADS_US, &LENGTHS_US, &US, head / METRES_PER_FOOT, length / METRES_PER_FOOT);
            Ok(in_feet * METRES_PER_FOOT.sqrt())
        }
        Edition::Si => {
            limits::CREST_TABLE_HEAD_SI.check(head)?;
            limits::CREST_TABLE_LENGTH_SI.check(length)?;
            Ok(read(&HEADS_SI, &LENGTHS_SI, &SI, head, length))
        }
    }
}

fn read<const H: usize, const L: usize>(
    heads: &[f64; H],
    lengths: &[f64; L],
    table: &[[f64; L]; H],
    head: f64,
    length: f64,
) -> f64 {
    let ((row, down), (column, across)) = (solve::row(heads, head), solve::row(lengths, length));
    let along = |row: usize| table[row][column] + across * (table[row][column + 1] - table[row][column]);
    along(row) + down * (along(row + 1) - along(row))
}

const HEADS_US: [f64; 17] = [0.2, 0.4, 0.6, 0.8, 1.0, 1.2, 1.4, 1.6, 1.8, 2.0, 2.5, 3.0, 3.5, 4.0, 4.5, 5.0, 5.5];
const LENGTHS_US: [f64; 11] = [0.5, 0.75, 1.0, 1.5, 2.0, 2.5, 3.0, 4.0, 5.0, 10.0, 15.0];
/// C in ft^0.5/s; a row for each head, a column for each crest length.
#[expect(clippy::approx_constant, reason = "3.14 is a printed coefficient")]
#[rustfmt::skip]
const US: [[f64; 11]; 17] = [
    [2.80, 2.75, 2.69, 2.62, 2.54, 2.48, 2.44, 2.38, 2.34, 2.49, 2.68],
    [2.92, 2.80, 2.72, 2.64, 2.61, 2.60, 2.58, 2.54, 2.50, 2.56, 2.70],
    [3.08, 2.89, 2.75, 2.64, 2.61, 2.60, 2.68, 2.69, 2.70, 2.70, 2.70],
    [3.30, 3.04, 2.85, 2.68, 2.60, 2.60, 2.67, 2.68, 2.68, 2.69, 2.64],
    [3.32, 3.14, 2.98, 2.75, 2.66, 2.64, 2.65, 2.67, 2.68, 2.68, 2.63],
    [3.32, 3.20, 3.08, 2.86, 2.70, 2.65, 2.64, 2.67, 2.66, 2.69, 2.64],
    [3.32, 3.26, 3.20, 2.92, 2.77, 2.68, 2.64, 2.65, 2.65, 2.67, 2.64],
    [3.32, 3.29, 3.28, 3.07, 2.89, 2.75, 2.68, 2.66, 2.65, 2.64, 2.63],
    [3.32, 3.32, 3.31, 3.07, 2.88, 2.74, 2.68, 2.66, 2.65, 2.64, 2.63],
    [3.32, 3.31, 3.30, 3.03, 2.85, 2.76, 2.72, 2.68, 2.65, 2.64, 2.63],
    [3.32, 3.32, 3.31, 3.28, 3.07, 2.89, 2.81, 2.72, 2.67, 2.64, 2.63],
    [3.32, 3.32, 3.32, 3.32, 3.20, 3.05, 2.92, 2.73, 2.66, 2.64, 2.63],
    [3.32, 3.32, 3.32, 3.32, 3.32, 3.19, 2.97, 2.76, 2.68, 2.64, 2.63],
    [3.32, 3.32, 3.32, 3.32, 3.32, 3.32, 3.07, 2.79, 2.70, 2.64, 2.63],
    [3.32, 3.32, 3.32, 3.32, 3.32, 3.32, 3.32, 2.88, 2.74, 2.64, 2.63],
    [3.32, 3.32, 3.32, 3.32, 3.32, 3.32, 3.32, 3.07, 2.79, 2.64, 2.63],
    [3.32, 3.32, 3.32, 3.32, 3.32, 3.32, 3.32, 3.32, 2.88, 2.64, 2.63],
];

const HEADS_SI: [f64; 17] = [0.1, 0.15, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 1.0, 1.1, 1.2, 1.3, 1.4, 1.5, 1.6];
const LENGTHS_SI: [f64; 15] = [0.15, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 1.0, 1.25, 1.5, 2.0, 3.0, 4.0];
/// C in m^0.5/s; a row for each head, a column for each crest length.
#[rustfmt::skip]
const SI: [[f64; 15]; 17] = [
    [1.59, 1.56, 1.50, 1.47, 1.45, 1.43, 1.42, 1.41, 1.40, 1.39, 1.37, 1.35, 1.36, 1.40, 1.45],
    [1.65, 1.60, 1.51, 1.48, 1.45, 1.44, 1.44, 1.44, 1.45, 1.45, 1.44, 1.43, 1.44, 1.45, 1.47],
    [1.73, 1.66, 1.54, 1.49, 1.46, 1.44, 1.44, 1.45, 1.47, 1.48, 1.48, 1.49, 1.49, 1.49, 1.48],
    [1.83, 1.77, 1.64, 1.56, 1.50, 1.47, 1.46, 1.46, 1.46, 1.47, 1.47, 1.48, 1.48, 1.48, 1.46],
    [1.83, 1.80, 1.74, 1.65, 1.57, 1.52, 1.49, 1.47, 1.46, 1.46, 1.47, 1.47, 1.47, 1.48, 1.47],
    [1.83, 1.82, 1.81, 1.74, 1.67, 1.60, 1.55, 1.51, 1.48, 1.48, 1.47, 1.46, 1.46, 1.46, 1.45],
    [1.83, 1.83, 1.82, 1.73, 1.65, 1.58, 1.54, 1.46, 1.31, 1.34, 1.48, 1.46, 1.46, 1.46, 1.45],
    [1.83, 1.83, 1.83, 1.78, 1.72, 1.65, 1.60, 1.53, 1.44, 1.45, 1.49, 1.47, 1.47, 1.46, 1.45],
    [1.83, 1.83, 1.83, 1.82, 1.79, 1.72, 1.66, 1.60, 1.57, 1.55, 1.50, 1.47, 1.47, 1.46, 1.45],
    [1.83, 1.83, 1.83, 1.83, 1.81, 1.76, 1.71, 1.66, 1.61, 1.58, 1.50, 1.47, 1.47, 1.46, 1.45],
    [1.83, 1.83, 1.83, 1.83, 1.82, 1.81, 1.76, 1.70, 1.64, 1.60, 1.51, 1.48, 1.47, 1.46, 1.45],
    [1.83, 1.83, 1.83, 1.83, 1.83, 1.83, 1.80, 1.75, 1.66, 1.62, 1.52, 1.49, 1.47, 1.46, 1.45],
    [1.83, 1.83, 1.83, 1.83, 1.83, 1.83, 1.83, 1.79, 1.70, 1.65, 1.53, 1.49, 1.48, 1.46, 1.45],
    [1.83, 1.83, 1.83, 1.83, 1.83, 1.83, 1.83, 1.82, 1.77, 1.71, 1.56, 1.51, 1.49, 1.46, 1.45],
    [1.83, 1.83, 1.83, 1.83, 1.83, 1.83, 1.83, 1.83, 1.83, 1.77, 1.60, 1.52, 1.50, 1.46, 1.45],
    [1.83, 1.83, 1.83, 1.83, 1.83, 1.83, 1.83, 1.83, 1.83, 1.79, 1.66, 1.55, 1.51, 1.46, 1.45],
    [1.83, 1.83, 1.83, 1.83, 1.83, 1.83, 1.83, 1.83, 1.83, 1.81, 1.74, 1.58, 1.53, 1.46, 1.45],
];

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// Half-way between four printed figures of the table in feet: (2.72 + 2.64 + 2.75 + 2.64) / 4, by hand.
    #[test]
    fn the_table_is_straight_between_its_figures() {
        let feet = |value: f64| Length::from_m(value * METRES_PER_FOOT);
        let got = coefficient(feet(0.5), feet(1.25), Edition::Us).unwrap() / METRES_PER_FOOT.sqrt();
        assert_relative_eq!(got, 2.6875, max_relative = 1e-12);
    }

    #[test]
    fn nothing_is_read_beyond_the_edges() {
        let at = |head: f64, length: f64| coefficient(Length::from_m(head), Length::from_m(length), Edition::Si);
        assert!(at(0.1, 0.15).is_ok() && at(1.6, 4.0).is_ok());
        assert!(at(0.09, 0.15).is_err() && at(1.7, 0.15).is_err());
        assert!(at(0.1, 0.14).is_err() && at(0.1, 4.1).is_err());
        assert!(at(f64::NAN, 0.2).is_err());
    }
}
