//! The published table of round scuppers, read between its rows and its diameters.
//!
//! Flows in gal/min for heads of 1 to 8 in above the invert. From memory, rounded to about 5 gal/min in its source. Between
//! heads it is read on logarithms. A diameter between two columns is read on the straight line between them; one outside is
//! scaled from the nearest column by the same head over diameter and Q ~ D^2.5, and marked.

use crate::hydraulics::limits;
use crate::units::{Flow, Length};

use super::{Discharge, Regime};

/// ASCE 7-16 commentary, Table C8.3-5, from memory: diameter in inches, flows at 1 to 8 in of head.
const ROWS: [(f64, [f64; 8]); 7] = [
    (5.0, [6.0, 25.0, 50.0, 80.0, 115.0, 155.0, 190.0, 220.0]),
    (6.0, [7.0, 25.0, 55.0, 90.0, 135.0, 185.0, 230.0, 275.0]),
    (8.0, [8.0, 30.0, 65.0, 110.0, 165.0, 230.0, 300.0, 375.0]),
    (10.0, [8.0, 35.0, 75.0, 130.0, 190.0, 270.0, 350.0, 445.0]),
    (12.0, [9.0, 40.0, 80.0, 140.0, 220.0, 300.0, 410.0, 510.0]),
    (14.0, [10.0, 40.0, 90.0, 155.0, 240.0, 325.0, 440.0, 570.0]),
    (16.0, [10.0, 45.0, 95.0, 160.0, 260.0, 360.0, 480.0, 610.0]),
];

/// Flow through a round scupper under a head above zero.
pub(super) fn round(diameter: Length, head: Length) -> Discharge {
    let (d, h) = (diameter.to_inches(), head.to_inches());
    let (least, greatest) = (ROWS[0].0, ROWS[ROWS.len() - 1].0);
    let nearest = d.clamp(least, greatest);
    if !limits::ROUND_TABLE_DIAMETER.holds(diameter.m()) {
        let scale = d / nearest;
        let scaled = column(nearest, h / scale).0 * scale * scale * scale.sqrt();
        return Discharge { flow: Flow::gpm(scaled), regime: Regime::BeyondRange };
    }
    let (gpm, regime) = column(nearest, h);
    Discharge { flow: Flow::gpm(gpm), regime }
}

/// The table at a diameter within it.
fn column(diameter: f64, head: f64) -> (f64, Regime) {
    let above = ROWS.partition_point(|&(row, _)| row < diameter).clamp(1, ROWS.len() - 1);
    let ((low, less), (high, more)) = (&ROWS[above - 1], &ROWS[above]);
    let share = (diameter - low) / (high - low);
    let at = |row: usize| less[row] + (more[row] - less[row]) * share;
    if head < 1.0 {
        return (at(0) * head * head.sqrt(), Regime::BelowTable);
    }
    if head > 8.0 {
        return (at(7), Regime::TableHeld);
    }
    let row = (head.floor() as usize - 1).min(6);
    // On logarithms, which a weir's points lie on: a straight line would give up to a tenth more.
    let share = (head / (row + 1) as f64).ln() / ((row + 2) as f64 / (row + 1) as f64).ln();
    (at(row) * (share * (at(row + 1) / at(row)).ln()).exp(), Regime::Table)
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    fn gpm(diameter: f64, head: f64) -> f64 {
        round(Length::inches(diameter), Length::inches(head)).flow.to_gpm()
    }

    #[test]
    fn rows_are_met_and_read_between() {
        assert_relative_eq!(gpm(8.0, 5.0), 165.0, max_relative = 1e-9);
        assert_relative_eq!(gpm(5.0, 1.0), 6.0, max_relative = 1e-9);
        assert_relative_eq!(gpm(16.0, 8.0), 610.0, max_relative = 1e-9);
        // Half way between 8 and 10 in: 120 at 4 in and 177.5 at 5 in; at 4.5 in, 120 (177.5 / 120)^(ln 1.125 / ln 1.25) =
        // 147.54. By hand.
        assert_relative_eq!(gpm(9.0, 4.5), 147.54, max_relative = 1e-4);
        assert_relative_eq!(gpm(8.0, 0.25), 1.0, max_relative = 1e-9);
        assert_relative_eq!(gpm(8.0, 12.0), 375.0, max_relative = 1e-9);
    }

    #[test]
    fn a_diameter_outside_is_scaled_and_marked() {
        // 4 in at 4 in of head is 5 in at 5 in, times 0.8^2.5. By hand: 115 * 0.572433 = 65.83.
        assert_relative_eq!(gpm(4.0, 4.0), 65.83, max_relative = 1e-4);
        let outside = round(Length::inches(4.0), Length::inches(4.0));
        assert_eq!(outside.regime, Regime::BeyondRange);
    }
}
