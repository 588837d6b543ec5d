//! Where a rising curve meets zero, steps along a water surface, and reading between the rows of a table.

use super::FlowError;

/// Enough halvings to bring any bracket of ordinary numbers down to its last digits.
const MOST_STEPS: usize = 120;

/// The argument between `low` and `high` at which a non-decreasing function passes zero, to its last digits.
///
/// Inverse quadratic steps where they are safe, halvings elsewhere (Chandrupatla's rule), so that a smooth curve takes about
/// ten evaluations and no curve takes more than [`MOST_STEPS`]. A function that is positive throughout gives `low`, one
/// that is negative throughout gives `high`.
pub(super) fn bracketed(low: f64, high: f64, function: impl Fn(f64) -> f64) -> f64 {
    let (mut a, mut b) = (high, low);
    let (mut at_a, mut at_b) = (function(a), function(b));
    if at_b >= 0.0 {
        return low;
    }
    if at_a <= 0.0 {
        return high;
    }
    let mut part = 0.5;
    for _ in 0..MOST_STEPS {
        let next = a + part * (b - a);
        let at_next = function(next);
        let (c, at_c);
        if (at_next > 0.0) == (at_a > 0.0) {
            (c, at_c) = (a, at_a);
        } else {
            (c, at_c) = (b, at_b);
            (b, at_b) = (a, at_a);
        }
        (a, at_a) = (next, at_next);

        let (best, at_best) = if at_a.abs() < at_b.abs() { (a, at_a) } else { (b, at_b) };
        let least_part = (2.0 * f64::EPSILON * best.abs() + f64::MIN_POSITIVE) / (b - a).abs();
        if at_best == 0.0 || least_part > 0.5 {
            return best;
        }
        let (xi, phi) = ((a - b) / (c - b), (at_a - at_b) / (at_c - at_b));
        let quadratic_is_safe = phi * phi < xi && (1.0 - phi) * (1.0 - phi) < 1.0 - xi;
        part = if quadratic_is_safe {
            at_a / (at_b - at_a) * at_c / (at_b - at_c)
                + (c - a) / (b - a) * at_a / (at_c - at_a) * at_b / (at_c - at_b)
        } else {
            0.5
        };
        part = part.max(least_part).min(1.0 - least_part);
    }
    a
}

/// As [`bracketed`], for a function without a known upper end: `first` is doubled until the function is positive.
pub(super) fn bracketed_from(low: f64, first: f64, function: impl Fn(f64) -> f64) -> f64 {
    let mut high = first;
    for _ in 0..f64::MAX_EXP {
        if function(high) > 0.0 || !high.is_finite() {
            break;
        }
        high *= 2.0;
    }
    bracketed(low, high, function)
}

/// The values of `value' = slope(at, value)` at the ends of equal steps between two places, by the classic fourth-order
/// rule.
pub(super) fn march(
    start: f64,
    (from, to): (f64, f64),
    steps: u32,
    slope: impl Fn(f64, f64) -> Result<f64, FlowError>,
    mut visit: impl FnMut(f64, f64),
) -> Result<f64, FlowError> {
    let step = (to - from) / f64::from(steps);
    let mut value = start;
    visit(from, value);
    for index in 0..steps {
        let at = from + f64::from(index) * step;
        let first = slope(at, value)?;
        let second = slope(at + step / 2.0, value + first * step / 2.0)?;
        let third = slope(at + step / 2.0, value + second * step / 2.0)?;
        let fourth = slope(at + step, value + third * step)?;
        value += step / 6.0 * (first + 2.0 * second + 2.0 * third + fourth);
        visit(at + step, value);
    }
    Ok(value)
}

/// The integral of a smooth function, by the eight-point rule of Gauss and Legendre.
pub(super) fn integral(low: f64, high: f64, function: impl Fn(f64) -> f64) -> f64 {
    const POINTS: [(f64, f64); 4] = [
        (0.183_434_642_495_649_8, 0.362_683_783_378_362),
        (0.525_532_409_916_329, 0.313_706_645_877_887_3),
        (0.796_666_477_413_626_7, 0.222_381_034_453_374_5),
        (0.960_289_856_497_536_3, 0.101_228_536_290_376_3),
    ];
    let (middle, half) = (f64::midpoint(low, high), (high - low) / 2.0);
    POINTS
        .iter()
        .map(|(at, weight)| weight * (function(middle - half * at) + function(middle + half * at)))
        .sum::<f64>()
        * half
}

/// The row at or below `at` in a rising column, and how far `at` stands on the way to the next row.
///
/// The first or last row answers for what lies beyond; callers refuse that beforehand by the range of their table.
pub(super) fn row(column: &[f64], at: f64) -> (usize, f64) {
    let below = column.partition_point(|&head| head <= at).clamp(1, column.len() - 1) - 1;
    let share = (at - column[below]) / (column[below + 1] - column[below]);
    (below, share.clamp(0.0, 1.0))
}

/// A straight line between the rows of a table of (argument, value).
pub(super) fn between<const N: usize>(table: &[(f64, f64); N], at: f64) -> f64 {
    let (below, share) = row(&table.map(|(argument, _)| argument), at);
    let (low, high) = (table[below].1, table[below + 1].1);
    low + share * (high - low)
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    #[test]
    fn a_root_is_found_whatever_the_shape_of_the_curve() {
        assert_relative_eq!(bracketed(0.0, 2.0, |x| x * x - 2.0), 2.0_f64.sqrt(), max_relative = 1e-15);
        assert_relative_eq!(bracketed(0.0, 1e6, |x| x * x * x - 1e-6), 0.01, max_relative = 1e-12);
        assert_relative_eq!(bracketed(0.0, 3.0, |x| if x < 1.0 { -1.0 } else { 1.0 }), 1.0, max_relative = 1e-12);
        assert_relative_eq!(bracketed_from(0.0, 1e-3, |x| x.sqrt() - 30.0), 900.0, max_relative = 1e-14);
    }

    #[test]
    fn a_curve_without_a_root_gives_the_nearer_end_and_a_broken_one_ends() {
        assert_relative_eq!(bracketed(1.0, 2.0, |x| x), 1.0);
        assert_relative_eq!(bracketed(1.0, 2.0, |x| -x), 2.0);
        let _ = bracketed(0.0, 1.0, |_| f64::NAN);
        let _ = bracketed_from(0.0, 1.0, |_| f64::NAN);
    }

    #[test]
    fn the_integral_is_exact_for_a_polynomial() {
        assert_relative_eq!(integral(1.0, 3.0, |x| x * x * x * x), 242.0 / 5.0, max_relative = 1e-14);
    }

    #[test]
    fn steps_follow_an_exponential() {
        let got = march(1.0, (0.0, 1.0), 20, |_, y| Ok(y), |_, _| {}).unwrap();
        assert_relative_eq!(got, std::f64::consts::E, max_relative = 1e-6);
    }

    #[test]
    fn a_table_is_straight_between_its_rows() {
        let table = [(1.0, 10.0), (2.0, 20.0), (4.0, 0.0)];
        assert_relative_eq!(between(&table, 1.0), 10.0);
        assert_relative_eq!(between(&table, 1.5), 15.0);
        assert_relative_eq!(between(&table, 3.0), 10.0);
        assert_relative_eq!(between(&table, 4.0), 0.0);
    }
}
