//! The one door to the root finder: where a function of one variable changes its sign.
//!
//! argmin's Brent method finds the place to about twelve digits; what it leaves open is closed here. A bracket that is none,
//! and a value that is not finite, are refused before it starts, since it would report them as found. And its answer is
//! carried on to the last bit: two neighbouring numbers, the function below zero at the first and not at the second. So "the
//! level is at most Y" and "the capacity at Y is at least the demand" are one statement, with no tolerance between them, and
//! on a plateau at zero the answer is its beginning.

use argmin::core::{CostFunction, Error, Executor};
use argmin::solver::brent::BrentRoot;

/// Absolute width, in the variable's unit, to which Brent's method is asked to go before the last bits are settled.
const BRENT_WIDTH: f64 = 1e-13;
/// Brent's method takes about ten steps here; the last bits are settled by bisection in any event.
const MOST_STEPS: u64 = 100;

/// Why there is no crossing.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
pub enum RootError {
    /// The function is not finite somewhere in the bracket.
    #[error("not finite at {0}")]
    NotFinite(f64),
    /// The function is not below zero at the low end and at least zero at the high end.
    #[error("no crossing between {low} (value {at_low}) and {high} (value {at_high})")]
    NoCrossing {
        /// Low end.
        low: f64,
        /// Value there.
        at_low: f64,
        /// High end.
        high: f64,
        /// Value there.
        at_high: f64,
    },
}

struct Scalar<F>(F);

impl<F: Fn(f64) -> f64> CostFunction for Scalar<F> {
    type Param = f64;
    type Output = f64;
    fn cost(&self, x: &f64) -> Result<f64, Error> {
        let value = (self.0)(*x);
        if value.is_finite() { Ok(value) } else { Err(RootError::NotFinite(*x).into()) }
    }
}

/// Two neighbouring numbers between which `f` first ceases to be negative: `f(first) < 0 <= f(second)`.
///
/// Only the sign of `f` is trusted: once at or above zero it must stay there, on `[low, high]`. It need not rise evenly.
///
/// # Errors
/// [`RootError::NoCrossing`] unless `f(low) < 0 <= f(high)`; [`RootError::NotFinite`] for a value that is not.
pub fn crossing(f: impl Fn(f64) -> f64, low: f64, high: f64) -> Result<(f64, f64), RootError> {
    let (at_low, at_high) = (f(low), f(high));
    for (x, value) in [(low, at_low), (high, at_high)] {
        if !(x.is_finite() && value.is_finite()) {
            return Err(RootError::NotFinite(x));
        }
    }
    if !(low < high && at_low < 0.0 && at_high >= 0.0) {
        return Err(RootError::NoCrossing { low, at_low, high, at_high });
    }
    let near = Executor::new(Scalar(&f), BrentRoot::new(low, high, BRENT_WIDTH))
        .configure(|state| state.max_iters(MOST_STEPS))
        .ctrlc(false)
        .run()
        .map_err(|error| error.downcast::<RootError>().unwrap_or(RootError::NotFinite(f64::NAN)))?;
    let near = near.state().best_param.filter(|x| (low..=high).contains(x));
    Ok(settle(&f, low, high, near.unwrap_or(f64::midpoint(low, high))))
}

/// Closes the bracket around `near` to two neighbouring numbers.
fn settle(f: &impl Fn(f64) -> f64, mut below: f64, mut reached: f64, near: f64) -> (f64, f64) {
    let mut reach = near.abs() * f64::EPSILON * 4.0 + BRENT_WIDTH;
    loop {
        let (left, right) = (near - reach, near + reach);
        if left > below && left < reached {
            if f(left) < 0.0 { below = left } else { reached = left }
        }
        if right < reached && right > below {
            if f(right) < 0.0 { below = right } else { reached = right }
        }
        let held = below >= left && reached <= right;
        if held || (left <= below && right >= reached) {
            break;
        }
        reach *= 16.0;
    }
    loop {
        let middle = f64::midpoint(below, reached);
        if middle <= below || middle >= reached {
            return (below, reached);
        }
        if f(middle) < 0.0 { below = middle } else { reached = middle }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_answer_is_the_first_number_at_which_the_sign_has_changed() {
        let square = |x: f64| x * x - 2.0;
        let (below, reached) = crossing(square, 0.0, 2.0).unwrap();
        assert!(square(below) < 0.0 && square(reached) >= 0.0);
        assert_eq!(below.next_up(), reached);
    }

    #[test]
    fn a_plateau_is_met_at_its_beginning() {
        let plateau = |x: f64| {
            if x < 1.0 {
                x - 1.0
            } else if x < 3.0 {
                0.0
            } else {
                x - 3.0
            }
        };
        assert_eq!(crossing(plateau, 0.0, 10.0).unwrap().1, 1.0);
        let jump = |x: f64| if x < 1.0 { -1.0 } else { 5.0 };
        assert_eq!(crossing(jump, 0.0, 10.0).unwrap().1, 1.0);
    }

    #[test]
    fn what_is_no_bracket_is_refused() {
        assert!(matches!(crossing(|x| x + 1.0, 0.0, 1.0), Err(RootError::NoCrossing { .. })));
        assert!(matches!(crossing(|x| x - 5.0, 0.0, 1.0), Err(RootError::NoCrossing { .. })));
        assert!(matches!(crossing(|_| f64::NAN, 0.0, 1.0), Err(RootError::NotFinite(_))));
        assert!(matches!(crossing(|x| x, -1.0, f64::INFINITY), Err(RootError::NotFinite(_))));
    }
}
