//! A rainfall table: intensity by duration and return period, read both ways.
//!
//! Between durations the logarithm of intensity runs straight against the logarithm of duration; between return periods
//! intensity runs straight against the logarithm of the return period. Durations are read first, column by column. Nothing is
//! extrapolated: outside the table there is no answer, and the ends are told. A climate factor belongs to
//! [`Storm`](super::Storm), not here: the table is as it was published.
//!
//! # Source
//! Common practice for tables of intensity, duration and frequency: a power law in duration (Sherman 1931, i = a / t^c) is a
//! straight line on logarithms, and a Gumbel variate nearly one in ln T from 5 years up.

use crate::units::{Intensity, ReturnPeriod, Time};

/// Part of a duration, return period or intensity that is taken for rounding, where it meets the end of a table.
const ROUNDING: f64 = 1e-9;

/// Intensities by duration (rows) and return period (columns): both rise, intensity never rises with duration and never
/// falls with the return period.
#[derive(Clone, Debug, PartialEq)]
pub struct Rainfall {
    name: String,
    durations: Vec<Time>,
    return_periods: Vec<ReturnPeriod>,
    rows: Vec<Vec<Intensity>>,
}

/// What is wrong with a table; rows and columns count from zero.
#[derive(Clone, Copy, Debug, PartialEq, Eq, thiserror::Error)]
#[non_exhaustive]
pub enum RainfallFault {
    /// It has no durations, or no return periods.
    #[error("the table has no intensities")]
    Empty,
    /// A row has not one intensity for each return period.
    #[error("a row has a hole")]
    Hole(usize),
    /// A duration, by its row, that is not above zero.
    #[error("a duration must be above zero")]
    NoDuration(usize),
    /// A return period, by its column, that is not above zero.
    #[error("a return period must be above zero")]
    NoReturnPeriod(usize),
    /// An intensity, by its row and column, that is not above zero.
    #[error("an intensity must be above zero")]
    NoRain(usize, usize),
    /// A duration no longer than the one before it.
    #[error("durations must rise down the table")]
    DurationNotRising(usize),
    /// A return period no longer than the one before it.
    #[error("return periods must rise across the table")]
    ReturnPeriodNotRising(usize),
    /// An intensity, by its row and column, above that of the next shorter duration.
    #[error("intensity rises with duration")]
    RisesWithDuration(usize, usize),
    /// An intensity, by its row and column, under that of the next shorter return period.
    #[error("intensity falls with the return period")]
    FallsWithReturnPeriod(usize, usize),
}

/// What lies outside a table, with the ends of the table.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Outside {
    /// The duration: shortest and longest of the table.
    Duration(Time, Time),
    /// The return period: shortest and longest of the table.
    ReturnPeriod(ReturnPeriod, ReturnPeriod),
}

/// An intensity as it was read.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Reading {
    /// The intensity.
    pub intensity: Intensity,
    /// The rows it was read between; twice the same where it stands in one.
    pub durations: (Time, Time),
    /// The columns it was read between; twice the same where it stands in one.
    pub return_periods: (ReturnPeriod, ReturnPeriod),
}

/// How often an intensity is met or passed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Recurrence {
    /// Once in so many years.
    Once(ReturnPeriod),
    /// More often than at the table's shortest return period, which is told.
    Oftener(ReturnPeriod),
    /// More seldom than at the table's longest return period, which is told.
    Rarer(ReturnPeriod),
}

/// Two neighbours in a rising list, and how far between them on logarithms: 0 at the first.
#[derive(Clone, Copy)]
struct Between {
    low: usize,
    high: usize,
    share: f64,
}

/// Where a value lies among rising ones; none outside their ends.
fn between(values: &[f64], value: f64) -> Option<Between> {
    let at = |index| Some(Between { low: index, high: index, share: 0.0 });
    let same = |known: f64| (known - value).abs() <= ROUNDING * known;
    if let Some(index) = values.iter().position(|&known| same(known)) {
        return at(index);
    }
    let high = values.partition_point(|&known| known < value);
    let low = high.checked_sub(1)?;
    let share = (value / values[low]).ln() / (values.get(high)? / values[low]).ln();
    Some(Between { low, high, share })
}

impl Rainfall {
    /// A table under a name that reports call it by: a row of intensities for each duration, one for each return period.
    ///
    /// # Errors
    /// Everything that is wrong with it, by row and column.
    pub fn new(
        name: &str,
        durations: Vec<Time>,
        return_periods: Vec<ReturnPeriod>,
        rows: Vec<Vec<Intensity>>,
    ) -> Result<Self, Vec<RainfallFault>> {
        let faults = faults(&durations, &return_periods, &rows);
        if faults.is_empty() {
            Ok(Self { name: name.to_string(), durations, return_periods, rows })
        } else {
            Err(faults)
        }
    }

    /// Its name.
    pub fn name(&self) -> &str {
        &self.name
    }

    /// Whether a duration lies in the table.
    ///
    /// # Errors
    /// The ends of the table.
    pub fn holds_duration(&self, duration: Time) -> Result<(), Outside> {
        self.at_duration(duration).map(|_| ())
    }

    /// Whether a return period lies in the table.
    ///
    /// # Errors
    /// The ends of the table.
    pub fn holds_return_period(&self, return_period: ReturnPeriod) -> Result<(), Outside> {
        self.at_return_period(return_period).map(|_| ())
    }

    /// The intensity over a duration that is met or passed once in a return period.
    ///
    /// | quantity | between neighbours |
    /// |---|---|
    /// | duration t | ln i = ln i1 + (ln i2 - ln i1) ln(t / t1) / ln(t2 / t1) |
    /// | return period T | i = i1 + (i2 - i1) ln(T / T1) / ln(T2 / T1) |
    ///
    /// # Errors
    /// [`Outside`], where the table does not hold the duration or the return period.
    ///
    /// # Example
    /// ```
    /// # use brimline::{roof::Rainfall, units::{Intensity, ReturnPeriod, Time}};
    /// let intensity = |text: &str| text.parse::<Intensity>();
    /// let durations = vec!["10 min".parse()?, "15 min".parse()?];
    /// let rows = vec![vec![intensity("7.52 in/h")?], vec![intensity("6.34 in/h")?]];
    /// let table = Rainfall::new("one column", durations, vec!["100 yr".parse()?], rows).expect("sound");
    /// let read = table.intensity("12 min".parse()?, "100 yr".parse()?).expect("inside");
    /// assert_eq!(format!("{:.3}", read.intensity.to_inches_per_hour()), "6.964"); // worked by hand
    /// # Ok::<(), brimline::units::Fault>(())
    /// ```
    pub fn intensity(&self, duration: Time, return_period: ReturnPeriod) -> Result<Reading, Outside> {
        let (row, column) = (self.at_duration(duration)?, self.at_return_period(return_period)?);
        let (low, high) = (self.over(row, column.low), self.over(row, column.high));
        Ok(Reading {
            intensity: low + (high - low) * column.share,
            durations: (self.durations[row.low], self.durations[row.high]),
            return_periods: (self.return_periods[column.low], self.return_periods[column.high]),
        })
    }

    /// The return periods of the table, rising.
    pub fn return_periods(&self) -> &[ReturnPeriod] {
        &self.return_periods
    }

    /// How often an intensity over a duration is met or passed: [`Self::intensity`] read backwards. Where several return
    /// periods have the same intensity, the longest of them.
    ///
    /// # Errors
    /// [`Outside`], where the table does not hold the duration. An intensity outside the table is an answer: on which side.
    pub fn recurrence(&self, intensity: Intensity, duration: Time) -> Result<Recurrence, Outside> {
        let row = self.at_duration(duration)?;
        let column: Vec<Intensity> = (0..self.return_periods.len()).map(|column| self.over(row, column)).collect();
        let reached = |&known: &Intensity| known <= intensity * (1.0 + ROUNDING);
        let above = column.iter().take_while(|known| reached(known)).count();
        let last = self.return_periods.len() - 1;
        Ok(match above {
            0 => Recurrence::Oftener(self.return_periods[0]),
            all if all > last && intensity > column[last] * (1.0 + ROUNDING) => {
                Recurrence::Rarer(self.return_periods[last])
            }
            all if all > last => Recurrence::Once(self.return_periods[last]),
            high => {
                let low = high - 1;
                let share = ((intensity - column[low]) / (column[high] - column[low])).max(0.0);
                let (first, ratio) = (self.return_periods[low], self.return_periods[high] / self.return_periods[low]);
                Recurrence::Once(first * (share * ratio.ln()).exp())
            }
        })
    }

    fn at_duration(&self, duration: Time) -> Result<Between, Outside> {
        let seconds: Vec<f64> = self.durations.iter().map(|known| known.s()).collect();
        let (first, last) = (self.durations[0], self.durations[self.durations.len() - 1]);
        between(&seconds, duration.s()).ok_or(Outside::Duration(first, last))
    }

    fn at_return_period(&self, return_period: ReturnPeriod) -> Result<Between, Outside> {
        let years: Vec<f64> = self.return_periods.iter().map(|known| known.years()).collect();
        let (first, last) = (self.return_periods[0], self.return_periods[self.return_periods.len() - 1]);
        between(&years, return_period.years()).ok_or(Outside::ReturnPeriod(first, last))
    }

    /// The intensity of one column over a duration.
    fn over(&self, row: Between, column: usize) -> Intensity {
        let (low, high) = (self.rows[row.low][column], self.rows[row.high][column]);
        if row.share == 0.0 { low } else { low * (row.share * (high / low).ln()).exp() }
    }
}

fn faults(durations: &[Time], return_periods: &[ReturnPeriod], rows: &[Vec<Intensity>]) -> Vec<RainfallFault> {
    if durations.is_empty() || return_periods.is_empty() {
        return vec![RainfallFault::Empty];
    }
    let mut faults = Vec::new();
    for (index, &duration) in durations.iter().enumerate() {
        if duration <= Time::ZERO {
            faults.push(RainfallFault::NoDuration(index));
        } else if index > 0 && duration <= durations[index - 1] {
            faults.push(RainfallFault::DurationNotRising(index));
        }
        if rows.get(index).is_none_or(|row| row.len() != return_periods.len()) {
            faults.push(RainfallFault::Hole(index));
        }
    }
    for (index, &period) in return_periods.iter().enumerate() {
        if period <= ReturnPeriod::ZERO {
            faults.push(RainfallFault::NoReturnPeriod(index));
        } else if index > 0 && period <= return_periods[index - 1] {
            faults.push(RainfallFault::ReturnPeriodNotRising(index));
        }
    }
    // Where rows or columns are out of order, every neighbour would be told as well.
    if faults.is_empty() {
        faults.extend(rows.iter().enumerate().flat_map(|(row, _)| faults_of_row(rows, row)));
    }
    faults
}

fn faults_of_row(rows: &[Vec<Intensity>], row: usize) -> Vec<RainfallFault> {
    let mut faults = Vec::new();
    for (column, &here) in rows[row].iter().enumerate() {
        if here <= Intensity::ZERO {
            faults.push(RainfallFault::NoRain(row, column));
        } else if row > 0 && here > rows[row - 1][column] * (1.0 + ROUNDING) {
            faults.push(RainfallFault::RisesWithDuration(row, column));
        } else if column > 0 && here < rows[row][column - 1] * (1.0 - ROUNDING) {
            faults.push(RainfallFault::FallsWithReturnPeriod(row, column));
        }
    }
    faults
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;
    use proptest::prelude::*;

    fn minutes(value: f64) -> Time {
        Time::from_s(value * 60.0)
    }

    fn years(value: f64) -> ReturnPeriod {
        ReturnPeriod::from_years(value)
    }

    fn inches(value: f64) -> Intensity {
        Intensity::from_m_per_s(value * 0.0254 / 3600.0)
    }

    fn table(durations: &[f64], periods: &[f64], rows: &[&[f64]]) -> Result<Rainfall, Vec<RainfallFault>> {
        Rainfall::new(
            "test",
            durations.iter().map(|&value| minutes(value)).collect(),
            periods.iter().map(|&value| years(value)).collect(),
            rows.iter().map(|row| row.iter().map(|&value| inches(value)).collect()).collect(),
        )
    }

    /// The 100-yr row of a public point-rainfall table, in/h.
    fn published() -> Rainfall {
        table(&[5.0, 10.0, 15.0, 30.0, 60.0, 120.0], &[100.0], &[&[9.47], &[7.52], &[6.34], &[4.85], &[3.34], &[2.07]])
            .unwrap()
    }

    /// By hand: 12 min, 7.52 (6.34 / 7.52)^(ln 1.2 / ln 1.5) = 6.964; 20 min, 6.34 (4.85 / 6.34)^(ln(4/3) / ln 2) = 5.673;
    /// 45 min, 4.85 (3.34 / 4.85)^(ln 1.5 / ln 2) = 3.899. Straight lines would give 7.048 at 12 min, 1.2 % more.
    #[test]
    fn durations_are_read_on_logarithms() {
        for (at, by_hand) in [(12.0, 6.964), (20.0, 5.673), (45.0, 3.899)] {
            let read = published().intensity(minutes(at), years(100.0)).unwrap();
            assert!((read.intensity.to_inches_per_hour() - by_hand).abs() <= 0.0005, "{at} min: {read:?}");
        }
    }

    /// 15 min of the same table, 5.82 in/h at 50 yr and 6.34 at 100 yr. By hand at 75 yr: 5.82 + 0.52 ln 1.5 / ln 2 = 6.1242.
    #[test]
    fn return_periods_are_read_on_their_logarithm() {
        let table = table(&[15.0], &[50.0, 100.0], &[&[5.82, 6.34]]).unwrap();
        let read = table.intensity(minutes(15.0), years(75.0)).unwrap();
        assert!((read.intensity.to_inches_per_hour() - 6.1242).abs() <= 0.000_05, "{read:?}");
        assert_eq!(read.return_periods, (years(50.0), years(100.0)));
        assert_eq!(read.durations, (minutes(15.0), minutes(15.0)));
    }

    /// Sherman's relation without its offset, i = a / t^c, is a straight line on logarithms: a table of it at 5, 20 and
    /// 120 min gives it back everywhere. Source: Sherman 1931, from memory; a = 60, c = 0.75, minutes and in/h.
    #[test]
    fn a_power_law_is_read_exactly() {
        // t^0.75 is the square root of t times that of its square root.
        let sherman = |t: f64| 60.0 / (t * t * t).sqrt().sqrt();
        let rows = [5.0, 20.0, 120.0].map(|t| [sherman(t)]);
        let table = table(&[5.0, 20.0, 120.0], &[100.0], &rows.each_ref().map(|row| &row[..])).unwrap();
        for t in [5.0, 6.5, 15.0, 20.0, 47.0, 120.0] {
            let read = table.intensity(minutes(t), years(100.0)).unwrap();
            assert_relative_eq!(read.intensity.to_inches_per_hour(), sherman(t), max_relative = 1e-12);
        }
    }

    #[test]
    fn what_stands_in_the_table_is_read_to_the_last_bit() {
        let table = published();
        for (row, t) in [5.0, 10.0, 15.0, 30.0, 60.0, 120.0].into_iter().enumerate() {
            assert_eq!(table.intensity(minutes(t), years(100.0)).unwrap().intensity, table.rows[row][0]);
        }
    }

    #[test]
    fn nothing_is_extrapolated() {
        let table = table(&[5.0, 15.0], &[10.0, 100.0], &[&[6.0, 9.0], &[4.0, 6.0]]).unwrap();
        let durations = Err(Outside::Duration(minutes(5.0), minutes(15.0)));
        let periods = Err(Outside::ReturnPeriod(years(10.0), years(100.0)));
        assert_eq!(table.intensity(minutes(4.99), years(10.0)), durations);
        assert_eq!(table.intensity(minutes(15.01), years(10.0)), durations);
        assert_eq!(table.intensity(minutes(5.0), years(9.9)), periods);
        assert_eq!(table.intensity(minutes(5.0), years(101.0)), periods);
        assert_eq!(table.recurrence(inches(5.0), minutes(16.0)), Err(Outside::Duration(minutes(5.0), minutes(15.0))));
        let side = |value: f64| table.recurrence(inches(value), minutes(15.0)).unwrap();
        assert_eq!(side(3.9), Recurrence::Oftener(years(10.0)));
        assert_eq!(side(6.1), Recurrence::Rarer(years(100.0)));
        assert_eq!(side(4.0), Recurrence::Once(years(10.0)));
        assert_eq!(side(6.0), Recurrence::Once(years(100.0)));
    }

    /// Half way from 4 to 6 in/h between 10 and 100 yr is half way on the logarithm: sqrt(1000) = 31.62 yr. By hand.
    #[test]
    fn the_way_back() {
        let table = table(&[15.0], &[10.0, 100.0], &[&[4.0, 6.0]]).unwrap();
        let Recurrence::Once(period) = table.recurrence(inches(5.0), minutes(15.0)).unwrap() else { panic!("inside") };
        assert_relative_eq!(period.years(), 31.622_776, max_relative = 1e-6);
    }

    #[test]
    fn of_equal_intensities_the_longest_return_period_is_meant() {
        let table = table(&[15.0], &[10.0, 25.0, 50.0, 100.0], &[&[4.0, 5.0, 5.0, 6.0]]).unwrap();
        assert_eq!(table.recurrence(inches(5.0), minutes(15.0)), Ok(Recurrence::Once(years(50.0))));
    }

    #[test]
    fn faults_by_row_and_column() {
        use RainfallFault as F;
        let faults = |durations: &[f64], periods: &[f64], rows: &[&[f64]]| table(durations, periods, rows).unwrap_err();
        assert_eq!(faults(&[], &[10.0], &[]), [F::Empty]);
        assert_eq!(faults(&[5.0, 5.0], &[10.0], &[&[4.0], &[3.0]]), [F::DurationNotRising(1)]);
        assert_eq!(faults(&[5.0], &[100.0, 10.0], &[&[4.0, 3.0]]), [F::ReturnPeriodNotRising(1)]);
        assert_eq!(faults(&[5.0], &[10.0, 100.0], &[&[4.0]]), [F::Hole(0)]);
        assert_eq!(faults(&[0.0], &[-1.0], &[&[4.0]]), [F::NoDuration(0), F::NoReturnPeriod(0)]);
        assert_eq!(
            faults(&[5.0, 10.0], &[10.0, 100.0], &[&[4.0, 3.0], &[5.0, 0.0]]),
            [F::FallsWithReturnPeriod(0, 1), F::RisesWithDuration(1, 0), F::NoRain(1, 1)]
        );
    }

    proptest! {
        /// There and back, and the laws of a table: never more rain for longer, never less for rarer.
        #[test]
        fn there_and_back(t in 5.0..60.0_f64, period in 2.0..100.0_f64, longer in 0.0..1.0_f64, rarer in 0.0..1.0_f64) {
            let table = table(
                &[5.0, 15.0, 60.0],
                &[2.0, 10.0, 100.0],
                &[&[5.0, 7.0, 9.5], &[3.5, 4.8, 6.3], &[1.6, 2.3, 3.3]],
            ).unwrap();
            let at = |t, period| table.intensity(minutes(t), years(period)).unwrap().intensity;
            let intensity = at(t, period);
            match table.recurrence(intensity, minutes(t)).unwrap() {
                Recurrence::Once(back) => prop_assert!((back.years() / period - 1.0).abs() < 1e-9, "{back:?}"),
                other => prop_assert!(false, "{other:?}"),
            }
            prop_assert!(at(t + (60.0 - t) * longer, period) <= intensity * (1.0 + 1e-12));
            prop_assert!(at(t, period + (100.0 - period) * rarer) >= intensity * (1.0 - 1e-12));
        }
    }
}
