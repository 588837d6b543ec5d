//! The one door to argmin: where a function of one variable changes its sign, and where a function of one or two is least.
//!
//! argmin's Brent method finds the place to about twelve digits; what it leaves open is closed here. A bracket that is none,
//! and a value that is not finite, are refused before it starts, since it would report them as found. And its answer is
//! carried on to the last bit: two neighbouring numbers, the function below zero at the first and not at the second. So "the
//! level is at most Y" and "the capacity at Y is at least the demand" are one statement, with no tolerance between them, and
//! on a plateau at zero the answer is its beginning.
//!
//! Of a least value only a neighbourhood is promised, and only where the function falls and then rises: whoever asks tries
//! the ends of the ground as well, and checks what else must hold.

use argmin::core::{CostFunction, Error, Executor};
use argmin::solver::brent::BrentRoot;
use argmin::solver::goldensectionsearch::GoldenSectionSearch;
use argmin::solver::neldermead::NelderMead;
use argmin_math::{ArgminAdd, ArgminMul, ArgminSub};

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

/// A function of one variable, with its values at the ends of its ground, which are known already.
struct Scalar<F> {
    f: F,
    ends: [(f64, f64); 2],
}

impl<F: Fn(f64) -> f64> CostFunction for Scalar<F> {
    type Param = f64;
    type Output = f64;
    fn cost(&self, x: &f64) -> Result<f64, Error> {
        let known = self.ends.iter().find(|(end, _)| end == x);
        let value = known.map_or_else(|| (self.f)(*x), |&(_, value)| value);
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
    let ends = [(low, at_low), (high, at_high)];
    for (x, value) in ends {
        if !(x.is_finite() && value.is_finite()) {
            return Err(RootError::NotFinite(x));
        }
    }
    if !(low < high && at_low < 0.0 && at_high >= 0.0) {
        return Err(RootError::NoCrossing { low, at_low, high, at_high });
    }
    let near = Executor::new(Scalar { f: &f, ends }, BrentRoot::new(low, high, BRENT_WIDTH))
        .configure(|state| state.max_iters(MOST_STEPS))
        .ctrlc(false)
        .run()
        .map_err(|error| error.downcast::<RootError>().unwrap_or(RootError::NotFinite(f64::NAN)))?;
    let near = near.state().best_param.filter(|x| (low..=high).contains(x));
    Ok(settle(&f, low, high, near.unwrap_or(f64::midpoint(low, high))))
}

/// A place near which `f` is least on `[low, high]`: by golden sections to about `width`, or an end where that is no more.
///
/// # Errors
/// [`RootError::NotFinite`] for an end, a width or a value that is not finite; [`RootError::NoCrossing`] unless `low < high`.
pub fn least(f: impl Fn(f64) -> f64, low: f64, high: f64, width: f64) -> Result<f64, RootError> {
    let (at_low, at_high) = (f(low), f(high));
    let ends = [(low, at_low), (high, at_high)];
    for (x, value) in ends.into_iter().chain([(width, width)]) {
        if !(x.is_finite() && value.is_finite()) {
            return Err(RootError::NotFinite(x));
        }
    }
    let refused = RootError::NoCrossing { low, at_low, high, at_high };
    if low >= high {
        return Err(refused);
    }
    // argmin's tolerance is a part of the sum of two inner points: of less than twice the farther end.
    let part = (width / (2.0 * low.abs().max(high.abs()))).max(f64::EPSILON);
    let golden = GoldenSectionSearch::new(low, high).and_then(|search| search.with_tolerance(part));
    let near = Executor::new(Scalar { f: &f, ends }, golden.map_err(|_| refused)?)
        .configure(|state| state.param(low + (high - low) * GOLDEN).max_iters(MOST_STEPS))
        .ctrlc(false)
        .run()
        .map_err(|error| error.downcast::<RootError>().unwrap_or(RootError::NotFinite(f64::NAN)))?;
    let near = near.state().best_param.filter(|x| (low..=high).contains(x));
    let inner = near.map(|x| (x, f(x)));
    // Of equals an end, and the low one before the high: a place that can be named.
    let all = [Some((low, at_low)), Some((high, at_high)), inner];
    let best = all.into_iter().flatten().fold((low, at_low), |best, one| if one.1 < best.1 { one } else { best });
    Ok(best.0)
}

/// A place near which a function of two variables is least, by the method of Nelder and Mead from three places on.
///
/// It walks downhill and knows no bounds: `f` must answer everywhere, with a large number where it should not go. What is not
/// finite counts as the largest of all; a walk that meets nothing else is refused.
///
/// # Errors
/// [`RootError::NotFinite`] where no value met is finite, or for a start that is not.
pub fn least_in_plane(f: impl Fn([f64; 2]) -> f64, starts: [[f64; 2]; 3], spread: f64) -> Result<[f64; 2], RootError> {
    if let Some(&bad) = starts.iter().flatten().chain([&spread]).find(|x| !x.is_finite()) {
        return Err(RootError::NotFinite(bad));
    }
    let method = NelderMead::new(starts.map(Pair).to_vec()).with_sd_tolerance(spread);
    let found = Executor::new(Plane(&f), method.map_err(|_| RootError::NotFinite(spread))?)
        .configure(|state| state.max_iters(MOST_WALK))
        .ctrlc(false)
        .run()
        .map_err(|_| RootError::NotFinite(f64::NAN))?;
    let state = found.state();
    match &state.best_param {
        Some(Pair(place)) if state.best_cost < LARGEST && place.iter().all(|x| x.is_finite()) => Ok(*place),
        _ => Err(RootError::NotFinite(f64::NAN)),
    }
}

/// The lesser part of a stretch cut by the golden section, (3 - sqrt(5)) / 2: where the search begins.
const GOLDEN: f64 = 0.381_966_011_250_105;
/// Steps after which a walk in the plane ends wherever it is.
const MOST_WALK: u64 = 400;
/// What a value that is not finite counts as: the walk must be given a number, or it panics.
const LARGEST: f64 = 1e300;

/// A place in the plane.
#[derive(Clone, Copy, Debug)]
struct Pair([f64; 2]);

impl ArgminAdd<Pair, Pair> for Pair {
    fn add(&self, other: &Pair) -> Pair {
        Pair([self.0[0] + other.0[0], self.0[1] + other.0[1]])
    }
}

impl ArgminSub<Pair, Pair> for Pair {
    fn sub(&self, other: &Pair) -> Pair {
        Pair([self.0[0] - other.0[0], self.0[1] - other.0[1]])
    }
}

impl ArgminMul<f64, Pair> for Pair {
    fn mul(&self, factor: &f64) -> Pair {
        Pair(self.0.map(|x| x * factor))
    }
}

struct Plane<F>(F);

impl<F: Fn([f64; 2]) -> f64> CostFunction for Plane<F> {
    type Param = Pair;
    type Output = f64;
    fn cost(&self, place: &Pair) -> Result<f64, Error> {
        let value = (self.0)(place.0);
        Ok(if value.is_finite() { value } else { LARGEST })
    }
}

/// Closes the bracket around `near` to two neighbouring numbers.
///
/// Where `f` is smooth, `near` is nearly always right to a few last bits: that is tried before `BRENT_WIDTH`, which is
/// promised.
fn settle(f: &impl Fn(f64) -> f64, mut below: f64, mut reached: f64, near: f64) -> (f64, f64) {
    let mut reach = (near.abs() * f64::EPSILON * 4.0).max(BRENT_WIDTH * f64::EPSILON);
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

    /// (x - 1)^2 is least at 1; a line at its lower end; |x - 3| + |y + 2| at (3, -2).
    #[test]
    fn a_least_value_is_met_inside_or_at_an_end() {
        approx::assert_abs_diff_eq!(least(|x| (x - 1.0) * (x - 1.0), 0.0, 5.0, 1e-6).unwrap(), 1.0, epsilon = 1e-5);
        assert_eq!(least(|x| 2.0 * x, 1.0, 5.0, 1e-6).unwrap(), 1.0);
        assert_eq!(least(|x| -2.0 * x, 1.0, 5.0, 1e-6).unwrap(), 5.0);
        assert_eq!(least(|_| 7.0, 1.0, 5.0, 1e-6).unwrap(), 1.0);
        let starts = [[0.0, 0.0], [1.0, 0.0], [0.0, 1.0]];
        let [x, y] = least_in_plane(|[x, y]| (x - 3.0).abs() + (y + 2.0).abs(), starts, 1e-9).unwrap();
        approx::assert_abs_diff_eq!(x, 3.0, epsilon = 1e-4);
        approx::assert_abs_diff_eq!(y, -2.0, epsilon = 1e-4);
        // A wall of values that are none is walked round, not into.
        let walled = |[x, y]: [f64; 2]| if x < 2.0 { f64::NAN } else { x + y * y };
        let [x, _] = least_in_plane(walled, [[4.0, 0.0], [5.0, 0.0], [4.0, 1.0]], 1e-9).unwrap();
        approx::assert_abs_diff_eq!(x, 2.0, epsilon = 1e-2);
    }

    #[test]
    fn a_least_value_of_nothing_is_refused() {
        assert!(matches!(least(|_| f64::NAN, 0.0, 1.0, 1e-6), Err(RootError::NotFinite(_))));
        assert!(matches!(
            least(|x| if x == 0.0 || x == 1.0 { x } else { f64::NAN }, 0.0, 1.0, 1e-6),
            Err(RootError::NotFinite(_))
        ));
        assert!(matches!(least(|x| x, 1.0, 1.0, 1e-6), Err(RootError::NoCrossing { .. })));
        assert!(least(|x| x, 0.0, f64::INFINITY, 1e-6).is_err());
        let starts = [[0.0, 0.0], [1.0, 0.0], [0.0, 1.0]];
        assert!(least_in_plane(|_| f64::NAN, starts, 1e-9).is_err());
        assert!(least_in_plane(|[x, _]| x, [[f64::NAN, 0.0], [1.0, 0.0], [0.0, 1.0]], 1e-9).is_err());
    }

    #[test]
    fn what_is_no_bracket_is_refused() {
        assert!(matches!(crossing(|x| x + 1.0, 0.0, 1.0), Err(RootError::NoCrossing { .. })));
        assert!(matches!(crossing(|x| x - 5.0, 0.0, 1.0), Err(RootError::NoCrossing { .. })));
        assert!(matches!(crossing(|_| f64::NAN, 0.0, 1.0), Err(RootError::NotFinite(_))));
        assert!(matches!(crossing(|x| x, -1.0, f64::INFINITY), Err(RootError::NotFinite(_))));
    }
}
