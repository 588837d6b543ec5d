//! The least load among points that are no worse in three sums.

/// Points met in the order of their first sum, asked for the least load of those that are no greater in the other two.
///
/// For every count a staircase holds the points that are not beaten in the last sum and the load: the last sum rises, the
/// load falls. A staircase serves a stretch of counts, as in a binary indexed tree (which counts from one), so that a question
/// looks at a few.
pub(super) struct Sieve {
    staircases: Vec<Vec<Step>>,
}

/// A point of a staircase.
#[derive(Clone, Copy)]
struct Step {
    rest: i64,
    load: i64,
}

impl Sieve {
    /// A sieve for counts up to `most`.
    pub(super) fn new(most: usize) -> Self {
        Self { staircases: vec![Vec::new(); most + 2] }
    }

    /// The least load of a point with at most this count and at most this last sum; none where there is no such point.
    pub(super) fn least(&self, count: usize, rest: i64) -> Option<i64> {
        let mut least = None;
        let mut at = count + 1;
        while at > 0 {
            let stairs = &self.staircases[at];
            if let Some(step) = stairs.partition_point(|step| step.rest <= rest).checked_sub(1) {
                let load = stairs[step].load;
                least = Some(least.map_or(load, |least: i64| least.min(load)));
            }
            at &= at - 1;
        }
        least
    }

    /// Takes a point in; its first sum is none less than that of any point before.
    pub(super) fn add(&mut self, count: usize, rest: i64, load: i64) {
        let mut at = count + 1;
        while at < self.staircases.len() {
            climb(&mut self.staircases[at], Step { rest, load });
            at += at & at.wrapping_neg();
        }
    }
}

/// Puts a step on a staircase, and takes off those that it beats.
fn climb(stairs: &mut Vec<Step>, step: Step) {
    let from = stairs.partition_point(|known| known.rest < step.rest);
    let beaten = |known: Option<&Step>| known.is_some_and(|known| known.rest <= step.rest && known.load <= step.load);
    if beaten(stairs.get(from)) || beaten(from.checked_sub(1).map(|before| &stairs[before])) {
        return;
    }
    let to = from + stairs[from..].partition_point(|known| known.load >= step.load);
    stairs.splice(from..to, [step]);
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Against going through all points, on points from a small generator.
    #[test]
    fn the_least_is_that_of_all_points() {
        let mut state = 7_u64;
        let mut upto = |most: u64| -> i64 {
            state = state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
            ((state >> 33) % (most + 1)).cast_signed()
        };
        for most in [1_u64, 5, 16, 31] {
            let (mut sieve, mut points) = (Sieve::new(most as usize), Vec::new());
            for _ in 0..400 {
                let (count, rest, load) = (1 + upto(most - 1) as usize, upto(40), upto(1000));
                sieve.add(count, rest, load);
                points.push((count, rest, load));
                let (count, rest) = (1 + upto(most - 1) as usize, upto(40));
                let under = points.iter().filter(|point| point.0 <= count && point.1 <= rest);
                assert_eq!(sieve.least(count, rest), under.map(|point| point.2).min());
            }
        }
    }
}
