//! Measured ratings: a table of heads and flows, and how it is read between its rows and beyond them.
//!
//! The codes allow straight lines between rows. Below the first row the flow falls to zero like a weir's, (H/H1)^1.5; above
//! the last row nothing was measured, and its flow is held. A weir's curve bends up, so a straight line between two of its
//! points lies above it: the same table read on logarithms ([`Rating::log_log`]) tells by how much.

use crate::units::{Flow, Length};

use super::{Discharge, Regime};

/// How a table is read between two of its rows.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Interpolation {
    /// On a straight line, as the codes allow.
    #[default]
    Linear,
    /// On a straight line through logarithms of head and flow: exact where the device is a weir.
    LogLog,
}

/// A head-flow table: heads above zero and rising, flows above zero and never falling.
#[derive(Clone, Debug, PartialEq)]
pub struct Rating {
    rows: Vec<(Length, Flow)>,
    interpolation: Interpolation,
}

/// Why rows are no rating; the index is that of the offending row as given.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum RatingFault {
    /// No row has a head above zero.
    #[error("the table has no row with a head above zero")]
    Empty,
    /// A head or a flow is negative.
    #[error("a head or a flow is below zero")]
    Negative(usize),
    /// Flow at no head.
    #[error("there is flow at zero head")]
    FlowAtZeroHead(usize),
    /// A head with no flow: the device would be dry under water.
    #[error("there is no flow at a head above zero")]
    NoFlow(usize),
    /// A head that is not above the one before it.
    #[error("head does not rise")]
    HeadNotRising(usize),
    /// A flow less than the one before it.
    #[error("flow falls")]
    FlowFalls(usize),
}

impl Rating {
    /// A rating from rows of head and flow. A row of zero head and zero flow says nothing and is left out.
    ///
    /// # Errors
    /// Every [`RatingFault`] of the rows, in their order.
    pub fn new(given: &[(Length, Flow)]) -> Result<Self, Vec<RatingFault>> {
        let mut faults = Vec::new();
        let mut rows: Vec<(Length, Flow)> = Vec::with_capacity(given.len());
        for (index, &(head, flow)) in given.iter().enumerate() {
            if head < Length::ZERO || flow < Flow::ZERO {
                faults.push(RatingFault::Negative(index));
            } else if head == Length::ZERO && flow > Flow::ZERO {
                faults.push(RatingFault::FlowAtZeroHead(index));
            } else if head > Length::ZERO && flow == Flow::ZERO {
                faults.push(RatingFault::NoFlow(index));
            } else if head > Length::ZERO {
                if let Some(&(head_before, flow_before)) = rows.last() {
                    if head <= head_before {
                        faults.push(RatingFault::HeadNotRising(index));
                    } else if flow < flow_before {
                        faults.push(RatingFault::FlowFalls(index));
                    }
                }
                rows.push((head, flow));
            } else if index > 0 {
                faults.push(RatingFault::HeadNotRising(index));
            }
        }
        if rows.is_empty() && faults.is_empty() {
            faults.push(RatingFault::Empty);
        }
        if faults.is_empty() { Ok(Self { rows, interpolation: Interpolation::Linear }) } else { Err(faults) }
    }

    /// The rows, heads rising.
    pub fn rows(&self) -> &[(Length, Flow)] {
        &self.rows
    }

    /// Flow of the last row: the most that was measured.
    pub fn last_flow(&self) -> Flow {
        self.rows[self.rows.len() - 1].1
    }

    /// Head of the last row.
    pub fn last_head(&self) -> Length {
        self.rows[self.rows.len() - 1].0
    }

    /// The same table, read in another way between its rows.
    #[must_use]
    pub fn read_by(self, interpolation: Interpolation) -> Self {
        Self { interpolation, ..self }
    }

    /// How it is read between its rows.
    pub fn interpolation(&self) -> Interpolation {
        self.interpolation
    }

    /// The table of a width between two: where both have rows, the straight line between them in width.
    ///
    /// `share` is 0 at the first and 1 at the second. Between the rows of either table both are straight in head, so a row
    /// at each of their heads is all that is needed.
    ///
    /// # Errors
    /// The faults of the rows between; none where the tables share a range of heads.
    pub fn between(low: &Self, high: &Self, share: f64) -> Result<Self, Vec<RatingFault>> {
        let first = low.rows[0].0.max(high.rows[0].0);
        let last = low.last_head().min(high.last_head());
        let mut heads: Vec<Length> = low.rows.iter().chain(&high.rows).map(|&(head, _)| head).collect();
        heads.sort_by_key(|head| head.nm());
        heads.dedup_by_key(|head| head.nm());
        heads.retain(|&head| head >= first && head <= last);
        let flow = |head| low.linear(head) * (1.0 - share) + high.linear(head) * share;
        Self::new(&heads.into_iter().map(|head| (head, flow(head))).collect::<Vec<_>>())
    }

    /// Flow under a head above zero, read in its own way between rows.
    pub(super) fn discharge(&self, head: Length) -> Discharge {
        match self.interpolation {
            Interpolation::Linear => self.read(head, straight(head)),
            Interpolation::LogLog => self.read(head, logarithmic(head)),
        }
    }

    /// Flow under a head above zero, straight lines between rows.
    pub fn linear(&self, head: Length) -> Flow {
        self.read(head, straight(head)).flow
    }

    /// Flow under a head above zero, read on logarithms of head and flow between rows.
    pub fn log_log(&self, head: Length) -> Flow {
        self.read(head, logarithmic(head)).flow
    }

    fn read(&self, head: Length, between: impl Fn(Row, Row) -> Flow) -> Discharge {
        let above = self.rows.partition_point(|&(row, _)| row < head);
        let (flow, regime) = match above {
            0 if head == self.rows[0].0 => (self.rows[0].1, Regime::Table),
            0 => {
                let (first, flow) = self.rows[0];
                let ratio = head / first;
                (flow * (ratio * ratio.sqrt()), Regime::BelowTable)
            }
            row if row == self.rows.len() => (self.last_flow(), Regime::TableHeld),
            // Rounding may carry a straight line past its end by a last bit; the flow must never fall.
            row => (between(self.rows[row - 1], self.rows[row]).min(self.rows[row].1), Regime::Table),
        };
        Discharge { flow, regime }
    }
}

type Row = (Length, Flow);

fn straight(head: Length) -> impl Fn(Row, Row) -> Flow {
    move |(head_a, flow_a), (head_b, flow_b)| flow_a + (flow_b - flow_a) * ((head - head_a) / (head_b - head_a))
}

fn logarithmic(head: Length) -> impl Fn(Row, Row) -> Flow {
    move |(head_a, flow_a), (head_b, flow_b)| {
        let share = (head / head_a).ln() / (head_b / head_a).ln();
        flow_a * (share * (flow_b / flow_a).ln()).exp()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    fn rating(rows: &[(f64, f64)]) -> Result<Rating, Vec<RatingFault>> {
        let rows: Vec<_> = rows.iter().map(|&(head, flow)| (Length::inches(head), Flow::gpm(flow))).collect();
        Rating::new(&rows)
    }

    /// 97.5 gpm on the 4 in drain of the published table lies at 1 + 17.5 / 90 = 1.1944 in. Source: ASCE 7-05 commentary,
    /// Table C8-1, from memory; interpolation by hand.
    #[test]
    fn straight_lines_between_rows() {
        let drain = rating(&[(1.0, 80.0), (2.0, 170.0), (2.5, 180.0)]).unwrap();
        let at = |head: f64| drain.discharge(Length::inches(head));
        assert_relative_eq!(at(1.194_444).flow.to_gpm(), 97.5, max_relative = 1e-6);
        assert_eq!(at(1.0).regime, Regime::Table);
        assert_eq!(at(2.5).regime, Regime::Table);
        assert_relative_eq!(at(0.25).flow.to_gpm(), 10.0, max_relative = 1e-12);
        assert_eq!(at(0.25).regime, Regime::BelowTable);
        assert_relative_eq!(at(9.0).flow.to_gpm(), 180.0, max_relative = 1e-12);
        assert_eq!(at(9.0).regime, Regime::TableHeld);
    }

    /// On a weir's own points the straight line is 4.6 % high at worst between 1 and 2 in; logarithms are exact.
    /// Source: H^1.5 at 1.42 in is 1.6921; the chord gives 1 + 0.42 * (2.8284 - 1) = 1.7679. Worked by hand.
    #[test]
    fn the_chord_lies_above_a_weir_and_logarithms_do_not() {
        let weir = rating(&[(1.0, 10.0), (2.0, 28.284_271)]).unwrap();
        let head = Length::inches(1.42);
        assert_relative_eq!(weir.discharge(head).flow.to_gpm(), 17.679, max_relative = 1e-3);
        assert_relative_eq!(weir.log_log(head).to_gpm(), 16.921, max_relative = 1e-3);
    }

    #[test]
    fn every_fault_of_a_table_is_named_with_its_row() {
        use RatingFault::{Empty, FlowAtZeroHead, FlowFalls, HeadNotRising, Negative, NoFlow};
        assert_eq!(rating(&[]).unwrap_err(), [Empty]);
        assert_eq!(rating(&[(0.0, 0.0)]).unwrap_err(), [Empty]);
        assert_eq!(rating(&[(0.0, 5.0)]).unwrap_err(), [FlowAtZeroHead(0)]);
        assert_eq!(rating(&[(1.0, 10.0), (1.0, 12.0)]).unwrap_err(), [HeadNotRising(1)]);
        assert_eq!(rating(&[(1.0, 10.0), (2.0, 9.0)]).unwrap_err(), [FlowFalls(1)]);
        assert_eq!(rating(&[(1.0, -1.0), (2.0, 0.0)]).unwrap_err(), [Negative(0), NoFlow(1)]);
        assert!(rating(&[(0.0, 0.0), (1.0, 10.0), (2.0, 10.0)]).is_ok());
    }
}
