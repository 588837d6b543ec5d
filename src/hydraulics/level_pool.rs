//! Level-pool routing: how a pond with a level surface fills and drains while water runs in and out.
//!
//! dS/dt = I(t) - O(S): what is stored grows by what runs in less what runs out, and what runs out hangs on what is stored. It
//! is followed by the pair of Bogacki and Shampine (1989), from memory: a step of third order, and one of second from the
//! same flows; where both differ by more than the accuracy asked for the step is halved, where by less than a
//! sixteenth of it the next one is doubled. So bends in a rating are met with short steps, and steps are whole
//! powers of two, the same everywhere. Storage against level belongs to the pond, outflow to its openings.

use crate::units::{Flow, Time, Volume};

use super::solve::bracketed;

/// A pond at one time.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Moment {
    /// When.
    pub at: Time,
    /// What is stored.
    pub stored: Volume,
    /// What runs in less what runs out.
    pub gain: Flow,
}

/// Why a pond could not be followed to its end.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum RoutingError {
    /// So many steps were not enough.
    #[error("not routed beyond {:.1} s in {MOST_STEPS} steps", .reached.s())]
    TooManySteps {
        /// How far it came.
        reached: Time,
    },
    /// A flow is not a number.
    #[error("a flow at {:.1} s is not a finite number", .at.s())]
    NotFinite {
        /// When.
        at: Time,
    },
}

/// Steps are few: a hundred for a storm, some more for a long recession.
const MOST_STEPS: usize = 100_000;
/// Parts of the whole time of which the first step is one.
const FIRST_STEP: f64 = 1.0 / 64.0;
/// A step whose two answers differ by less than this part of the accuracy may be doubled, which multiplies that by eight.
const SPARE: f64 = 1.0 / 16.0;

/// A pond with what runs into it at a time and out of it at a storage.
pub struct LevelPool<I, O> {
    /// Inflow.
    pub inflow: I,
    /// Outflow.
    pub outflow: O,
    /// Most by which the second-order answer of a step may differ from the third-order one, which is kept.
    pub accuracy: Volume,
}

impl<I: Fn(Time) -> Flow, O: Fn(Volume) -> Flow> LevelPool<I, O> {
    /// The pond at a time, with so much stored.
    pub fn moment(&self, at: Time, stored: Volume) -> Moment {
        Moment { at, stored, gain: (self.inflow)(at) - (self.outflow)(stored) }
    }

    /// Follows the pond from one moment to a time, or to the first step at whose end `ends` is true: every moment on the way,
    /// the first and the last among them.
    ///
    /// # Errors
    /// [`RoutingError`] where a flow is not finite, or steps become too many.
    ///
    /// # Source
    /// Equation: FHWA-NHI-10-009 (HEC-22, 3rd ed., 2009), section 8.6, whose storage-indicator method takes equal steps.
    /// Scheme: Bogacki and Shampine, "A 3(2) pair of Runge-Kutta formulas" (1989), from memory.
    pub fn route(
        &self,
        from: Moment,
        until: Time,
        ends: impl Fn(&Moment) -> bool,
    ) -> Result<Vec<Moment>, RoutingError> {
        let mut moments = vec![from];
        let mut here = from;
        let mut step = (until - from.at) * FIRST_STEP;
        while here.at < until && !ends(&here) {
            if moments.len() >= MOST_STEPS || here.at + step <= here.at {
                return Err(RoutingError::TooManySteps { reached: here.at });
            }
            let last = here.at + step >= until;
            let taken = if last { until - here.at } else { step };
            let (next, difference) = self.step(here, taken)?;
            if difference > self.accuracy {
                step = step * 0.5;
                continue;
            }
            if difference < self.accuracy * SPARE && !last {
                step = step * 2.0;
            }
            here = if last { Moment { at: until, ..next } } else { next };
            moments.push(here);
        }
        Ok(moments)
    }

    /// One step, and how far its two answers lie apart.
    fn step(&self, here: Moment, step: Time) -> Result<(Moment, Volume), RoutingError> {
        let over = |flow: Flow| Volume::from_m3(flow.m3_per_s() * step.s());
        let first = over(here.gain);
        let second = over(self.moment(here.at + step * 0.5, here.stored + first * 0.5).gain);
        let third = over(self.moment(here.at + step * 0.75, here.stored + second * 0.75).gain);
        let stored = here.stored + (first * 2.0 + second * 3.0 + third * 4.0) * (1.0 / 9.0);
        let next = self.moment(here.at + step, stored);
        if !next.gain.m3_per_s().is_finite() || !stored.m3().is_finite() {
            return Err(RoutingError::NotFinite { at: here.at });
        }
        let other = here.stored + (first * 7.0 + second * 6.0 + third * 8.0 + over(next.gain) * 3.0) * (1.0 / 24.0);
        let apart = stored - other;
        Ok((next, apart.max(-apart)))
    }
}

/// When so much is stored between two moments of which one has more and one less: on the cubic through both, with their gains.
pub fn when(before: &Moment, after: &Moment, stored: Volume) -> Time {
    let step = (after.at - before.at).s();
    let (low, high) = (before.stored.m3(), after.stored.m3());
    let (rate_low, rate_high) = (before.gain.m3_per_s() * step, after.gain.m3_per_s() * step);
    let cubic = |part: f64| {
        let rest = 1.0 - part;
        let straight = low * rest + high * part;
        straight + part * rest * (rest * (rate_low - (high - low)) - part * (rate_high - (high - low)))
    };
    let sign = if high >= low { 1.0 } else { -1.0 };
    let part = bracketed(0.0, 1.0, |part| sign * (cubic(part) - stored.m3()));
    before.at + Time::from_s(part * step)
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::{assert_abs_diff_eq, assert_relative_eq};

    /// A pond of 500 m2 with vertical sides: storage of a head over the sill, and the way back.
    const SURFACE: f64 = 500.0;
    /// C b of the weir, 1.705 x 0.6.
    const WEIR: f64 = 1.705 * 0.6;

    fn weir(stored: Volume) -> Flow {
        let head = (stored.m3() / SURFACE).max(0.0);
        Flow::from_m3_per_s(WEIR * head * head.sqrt())
    }

    fn pond<O: Fn(Volume) -> Flow>(inflow: f64, outflow: O) -> LevelPool<impl Fn(Time) -> Flow, O> {
        LevelPool {
            inflow: move |_: Time| Flow::from_m3_per_s(inflow),
            outflow,
            accuracy: Volume::from_m3(SURFACE * 1e-7),
        }
    }

    fn head_after<O: Fn(Volume) -> Flow>(pond: &LevelPool<impl Fn(Time) -> Flow, O>, seconds: f64) -> f64 {
        let from = pond.moment(Time::ZERO, Volume::ZERO);
        let moments = pond.route(from, Time::from_s(seconds), |_| false).unwrap();
        moments.last().unwrap().stored.m3() / SURFACE
    }

    /// Constant inflow Q over a weir into a pond with vertical sides, from a dry sill, x = h / heq, u = sqrt(x):
    /// t Q / (A heq) = (1/3) ln((1 + u + x) / (1 - u)^2) - (2 / sqrt 3) (atan((2 u + 1) / sqrt 3) - pi / 6).
    fn filling_time(x: f64) -> f64 {
        let (u, root3) = (x.sqrt(), 3.0_f64.sqrt());
        ((1.0 + u + x) / ((1.0 - u) * (1.0 - u))).ln() / 3.0
            - 2.0 / root3 * (((2.0 * u + 1.0) / root3).atan() - std::f64::consts::PI / 6.0)
    }

    /// Q = 0.02 m3/s, C b = 1.705 x 0.6, A = 500 m2: heq = 0.07257 m; 0.011685, 0.031557, 0.051372 and 0.067489 m after 300,
    /// 900, 1800 and 3600 s, and 0.9 heq after 3160.0 s. Closed form by hand; its own values 0.26357 to 3.29215.
    #[test]
    fn filling_over_a_weir_follows_the_closed_form() {
        let pond = pond(0.02, weir);
        for (seconds, head) in
            [(300.0, 0.011_685_2), (900.0, 0.031_556_7), (1800.0, 0.051_372_3), (3600.0, 0.067_488_5)]
        {
            assert_relative_eq!(head_after(&pond, seconds), head, max_relative = 1e-5);
        }
        for (x, tau) in [(0.25, 0.263_57), (0.5, 0.591_94), (0.75, 1.103_86), (0.9, 1.741_73), (0.99, 3.292_15)] {
            assert_abs_diff_eq!(filling_time(x), tau, epsilon = 1e-5);
            let level = 0.072_572_1 * x;
            let seconds = filling_time(x) * SURFACE * 0.072_572_1 / 0.02;
            assert_relative_eq!(head_after(&pond, seconds), level, max_relative = 1e-5);
        }
    }

    /// Draining over that weir from 0.15 to 0.05 m: t = 2 A / (C b) (h2^-0.5 - h1^-0.5) = 1847.65 s; through an orifice,
    /// 2 A / (C a sqrt(2 g)) (sqrt h1 - sqrt h2) with C = 0.6, a = 0.01 m2: 6160.3 s. Closed forms by hand.
    #[test]
    fn draining_follows_the_closed_forms() {
        let orifice = |stored: Volume| {
            Flow::from_m3_per_s(
                0.6 * 0.01 * (2.0 * crate::hydraulics::GRAVITY * (stored.m3() / SURFACE).max(0.0)).sqrt(),
            )
        };
        for (seconds, outflow) in [(1847.65, &weir as &dyn Fn(Volume) -> Flow), (6160.27, &orifice)] {
            let pond = pond(0.0, outflow);
            let target = Volume::from_m3(0.05 * SURFACE);
            let from = pond.moment(Time::ZERO, Volume::from_m3(0.15 * SURFACE));
            let moments = pond.route(from, Time::from_s(1e5), |here| here.stored <= target).unwrap();
            let [.., before, after] = &moments[..] else { panic!("two moments") };
            assert_relative_eq!(when(before, after, target).s(), seconds, max_relative = 1e-4);
            assert!(moments.len() < 100, "{}", moments.len());
        }
    }

    /// Outflow 0.3 m2/s x h: h = (Q / k) (1 - exp(-k t / A)), 0.027817 m after 900 s. Closed form by hand.
    #[test]
    fn a_linear_outflow_follows_the_closed_form() {
        let pond = pond(0.02, |stored: Volume| Flow::from_m3_per_s(0.3 * stored.m3() / SURFACE));
        assert_relative_eq!(head_after(&pond, 900.0), 0.027_816_8, max_relative = 1e-5);
    }

    /// Stage m, outflow m3/s, storage m3.
    const BASIN: [(f64, f64, f64); 21] = [
        (10.0, 0.0, 0.0),
        (10.1, 0.006, 35.0),
        (10.2, 0.011, 72.0),
        (10.3, 0.018, 109.0),
        (10.4, 0.024, 155.0),
        (10.5, 0.028, 199.0),
        (10.6, 0.032, 248.0),
        (10.7, 0.035, 299.0),
        (10.8, 0.038, 353.0),
        (10.9, 0.171, 414.0),
        (11.0, 0.303, 470.0),
        (11.1, 0.378, 540.0),
        (11.2, 0.418, 600.0),
        (11.3, 0.464, 672.0),
        (11.4, 0.503, 744.0),
        (11.5, 0.53, 824.0),
        (11.6, 0.587, 902.0),
        (11.7, 1.15, 986.0),
        (11.8, 1.771, 1075.0),
        (11.9, 2.069, 1160.0),
        (12.0, 2.284, 1264.0),
    ];

    /// Inflow m3/s every 0.057 h.
    const HYDROGRAPH: [f64; 26] = [
        0.00, 0.04, 0.07, 0.12, 0.18, 0.33, 0.49, 0.67, 0.81, 0.88, 0.86, 0.79, 0.69, 0.57, 0.48, 0.39, 0.32, 0.26,
        0.22, 0.18, 0.15, 0.11, 0.09, 0.05, 0.03, 0.00,
    ];

    fn at(rows: &[(f64, f64)], x: f64) -> f64 {
        let above = rows.windows(2).find(|pair| x <= pair[1].0);
        let ends =
            |pair: &[(f64, f64)]| pair[0].1 + (pair[1].1 - pair[0].1) * (x - pair[0].0) / (pair[1].0 - pair[0].0);
        above.map_or(rows[rows.len() - 1].1, ends)
    }

    /// A detention basin under a design storm, routed by hand with the storage-indicator method at 0.057 h: peak outflow
    /// printed
    /// 0.52 m3/s at stage 11.46 m, with 794 m3; the tables give 0.518 at 11.454 m and 787 m3. Source: FHWA-NHI-10-009 (HEC-22,
    /// 3rd ed., 2009), Example 8-9.
    #[test]
    fn hec22_example_8_9() {
        let interval = 0.057 * 3600.0;
        let inflow: Vec<_> =
            HYDROGRAPH.iter().enumerate().map(|(index, &flow)| (index as f64 * interval, flow)).collect();
        let outflow: Vec<_> = BASIN.iter().map(|&(_, flow, stored)| (stored, flow)).collect();
        let stage: Vec<_> = BASIN.iter().map(|&(stage, _, stored)| (stored, stage)).collect();
        let basin = LevelPool {
            inflow: |time: Time| Flow::from_m3_per_s(at(&inflow, time.s())),
            outflow: |stored: Volume| Flow::from_m3_per_s(at(&outflow, stored.m3().max(0.0))),
            accuracy: Volume::from_m3(1e-3),
        };
        let from = basin.moment(Time::ZERO, Volume::ZERO);
        let moments = basin.route(from, Time::from_s(2.34 * 3600.0), |_| false).unwrap();
        let most = moments.iter().map(|moment| moment.stored.m3()).fold(0.0, f64::max);
        assert_abs_diff_eq!(at(&outflow, most), 0.52, epsilon = 0.01);
        assert_abs_diff_eq!(at(&stage, most), 11.46, epsilon = 0.02);
        assert_relative_eq!(most, 787.0, max_relative = 0.01);
    }

    #[test]
    fn what_cannot_be_followed_is_refused() {
        let nothing = pond(0.02, |_: Volume| Flow::from_m3_per_s(f64::NAN));
        let from = Moment { at: Time::ZERO, stored: Volume::ZERO, gain: Flow::ZERO };
        assert!(matches!(nothing.route(from, Time::from_s(60.0), |_| false), Err(RoutingError::NotFinite { .. })));
    }
}
