//! The year in months, and exact monthly means of a quantity known at time steps.
//!
//! What: month bounds as fractions of the year, the time of the March equinox, and the weights that
//! turn values at the nodes k/steps into monthly means.
//! Equations: a month's mean is the integral over the month of the broken line through the nodes,
//! divided by the month's length; the weight of a node is the integral of its hat function. Months
//! have the lengths of the 365-day calendar, stretched to a year of 365.2422 days; the equinox is
//! held on 21 March at noon, day 79.5 of 365 (date of the palaeoclimate intercomparisons:
//! Joussaume & Braconnot 1997, J. Geophys. Res. 102:1943; memory).
//! Units: fractions of the year unless the name says days.
//! Numerics: closed form; the weights of a month add up to 1 within rounding.
//! Source: Gregorian common year; definitions.

use thiserror::Error;

use crate::units::YEAR_DAYS;

/// Months in the year.
pub const MONTHS: usize = 12;
/// Day of the calendar year on which each month begins, and the length of the year.
const MONTH_BOUNDS_DAY: [f64; MONTHS + 1] = [
    0.0, 31.0, 59.0, 90.0, 120.0, 151.0, 181.0, 212.0, 243.0, 273.0, 304.0, 334.0, 365.0,
];
/// Days of the calendar year.
pub const CALENDAR_DAYS: f64 = 365.0;
/// 21 March, noon, in days since 1 January 0 h.
const EQUINOX_DAY: f64 = 79.5;

/// Why weights cannot be made.
#[derive(Clone, Copy, Debug, Error, PartialEq, Eq)]
pub enum CalendarError {
    /// The year has no steps.
    #[error("0 steps in the year; give at least 1")]
    NoSteps,
}

/// The year of [`YEAR_DAYS`] days in twelve months.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Calendar;

impl Calendar {
    /// Beginning of each month, and the end of the year, as fractions of the year.
    pub fn month_bounds_fraction(self) -> [f64; MONTHS + 1] {
        MONTH_BOUNDS_DAY.map(|day| day / CALENDAR_DAYS)
    }

    /// Length of each month, days of 86 400 s.
    pub fn month_lengths_days(self) -> [f64; MONTHS] {
        let bounds = MONTH_BOUNDS_DAY;
        std::array::from_fn(|m| (bounds[m + 1] - bounds[m]) * YEAR_DAYS / CALENDAR_DAYS)
    }

    /// Length of each month as a fraction of the year; the twelve sum to one.
    pub fn month_shares(self) -> [f64; MONTHS] {
        let bounds = self.month_bounds_fraction();
        std::array::from_fn(|m| bounds[m + 1] - bounds[m])
    }

    /// Time of the March equinox, as a fraction of the year.
    pub fn equinox_fraction(self) -> f64 {
        EQUINOX_DAY / CALENDAR_DAYS
    }
}

/// Month (1 to 12) and day of the month of a time in days since 1 January 0 h, in the 365-day
/// calendar; times outside the year are those of the nearest of its days.
pub fn month_and_day(day_of_year: f64) -> (usize, u32) {
    let day = day_of_year.clamp(0.0, CALENDAR_DAYS - 1.0).floor();
    let month = MONTH_BOUNDS_DAY[1..MONTHS].partition_point(|bound| *bound <= day);
    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "a whole number from 0 to 30"
    )]
    let within = (day - MONTH_BOUNDS_DAY[month]) as u32;
    (month + 1, within + 1)
}

/// Noon of a date in days since 1 January 0 h, in the 365-day calendar; `None` if the calendar has no
/// such month (1 to 12) or day.
pub fn noon_of_date(month: usize, day: u32) -> Option<f64> {
    let begin = *MONTH_BOUNDS_DAY.get(month.checked_sub(1)?)?;
    let end = *MONTH_BOUNDS_DAY.get(month)?;
    let noon = begin + f64::from(day) - 0.5;
    (day >= 1 && noon < end).then_some(noon)
}

/// Weights of the nodes k/steps, k = 0..=steps, in the monthly means.
#[derive(Clone, Debug, PartialEq)]
pub struct MonthWeights {
    /// Bounds of the months, fractions of the year.
    bounds: [f64; MONTHS + 1],
    /// Month and weight of all nodes, one node after another.
    entries: Vec<(usize, f64)>,
    /// Where each node's entries begin, and the end.
    starts: Vec<usize>,
    /// Month that holds the middle of each step.
    step_months: Vec<usize>,
}

impl MonthWeights {
    /// Weights for a year of `steps` equal steps, with the months of the [`Calendar`].
    ///
    /// # Errors
    /// When there is no step.
    pub fn new(steps: usize) -> Result<Self, CalendarError> {
        if steps == 0 {
            return Err(CalendarError::NoSteps);
        }
        let bounds = Calendar.month_bounds_fraction();
        let month_at = |time: f64| bounds[1..MONTHS].partition_point(|b| *b <= time);
        let middle = |step: usize| (step as f64 + 0.5) / steps as f64;
        let mut weights = Self {
            bounds,
            entries: Vec::new(),
            starts: Vec::new(),
            step_months: (0..steps).map(|step| month_at(middle(step))).collect(),
        };
        weights.weigh();
        Ok(weights)
    }

    /// Takes other months, bounded by fractions of the year; what lies before its beginning or
    /// beyond its end is taken from the other end of the same year. The months that physics
    /// happens in ([`Self::month_of_step`]) stay those of the [`Calendar`].
    pub fn set_bounds(&mut self, bounds: &[f64; MONTHS + 1]) {
        let same = |(a, b): (&f64, &f64)| a.to_bits() == b.to_bits();
        if !self.bounds.iter().zip(bounds).all(same) {
            self.bounds = *bounds;
            self.weigh();
        }
    }

    /// Length of each month as a fraction of the year.
    pub fn shares(&self) -> [f64; MONTHS] {
        std::array::from_fn(|m| self.bounds[m + 1] - self.bounds[m])
    }

    fn weigh(&mut self) {
        let (bounds, steps) = (self.bounds, self.steps());
        let (mut entries, mut starts) = (Vec::new(), vec![0]);
        for node in 0..=steps {
            for month in 0..MONTHS {
                let share = share_of(node, steps, [bounds[month], bounds[month + 1]]);
                if share > 0.0 {
                    entries.push((month, share / (bounds[month + 1] - bounds[month])));
                }
            }
            starts.push(entries.len());
        }
        (self.entries, self.starts) = (entries, starts);
    }

    /// Number of steps in the year.
    pub fn steps(&self) -> usize {
        self.step_months.len()
    }

    /// The months that node k, at time k/steps, counts in, with its weights; at most three months
    /// when the year has 14 steps or more. Empty for nodes that do not exist.
    pub fn node(&self, k: usize) -> &[(usize, f64)] {
        match (self.starts.get(k), self.starts.get(k + 1)) {
            (Some(&from), Some(&to)) => &self.entries[from..to],
            _ => &[],
        }
    }

    /// Month that holds the middle of step k, from k/steps to (k + 1)/steps; steps beyond the year
    /// count on from its beginning.
    pub fn month_of_step(&self, k: usize) -> usize {
        self.step_months[k % self.step_months.len()]
    }
}

/// Integral of the hat function of a node over an interval, which may reach into the years beside.
fn share_of(node: usize, steps: usize, interval: [f64; 2]) -> f64 {
    let within = |shift: f64| {
        let [from, to] = interval.map(|time| hat_integral(node, steps, (time + shift).max(0.0)));
        to - from
    };
    within(0.0) + within(1.0) + within(-1.0)
}

/// Integral from the beginning of the year to `time` of the hat function of a node, limited to the
/// year.
fn hat_integral(node: usize, steps: usize, time: f64) -> f64 {
    let n = steps as f64;
    // Distance from the node in steps; the hat is 1 - |distance|.
    let primitive = |distance: f64| {
        let d = distance.clamp(-1.0, 1.0);
        d - 0.5 * d * d.abs()
    };
    let from_start = primitive(-(node as f64));
    (primitive(time.min(1.0) * n - node as f64) - from_start) / n
}

#[cfg(test)]
mod tests {
    use super::*;

    fn means(weights: &MonthWeights, value: impl Fn(f64) -> f64) -> [f64; MONTHS] {
        let mut means = [0.0; MONTHS];
        for k in 0..=weights.steps() {
            for &(month, weight) in weights.node(k) {
                means[month] += weight * value(k as f64 / weights.steps() as f64);
            }
        }
        means
    }

    #[test]
    fn analytic_constants_and_straight_lines_are_exact() {
        let bounds = Calendar.month_bounds_fraction();
        for steps in [1, 2, 12, 24, 48, 72, 73, 365, 1000] {
            let weights = MonthWeights::new(steps).unwrap();
            let ones = means(&weights, |_| 1.0);
            let line = means(&weights, |t| 3.0 - 5.0 * t);
            for month in 0..MONTHS {
                let middle = 0.5 * (bounds[month] + bounds[month + 1]);
                assert!((ones[month] - 1.0).abs() < 1e-12, "{steps} {month}");
                let expected = 3.0 - 5.0 * middle;
                assert!((line[month] - expected).abs() < 1e-12, "{steps} {month}");
            }
        }
    }

    #[test]
    fn conserves_the_annual_mean() {
        let weights = MonthWeights::new(72).unwrap();
        let value = |t: f64| (std::f64::consts::TAU * t).sin() + 0.3 * t;
        let lengths = Calendar.month_lengths_days();
        let months = means(&weights, value);
        let annual: f64 = (0..MONTHS)
            .map(|m| months[m] * lengths[m] / YEAR_DAYS)
            .sum();
        let trapezium: f64 = (0..72).map(|k| value((f64::from(k)) / 72.0)).sum::<f64>() / 72.0
            + 0.5 * (value(1.0) - value(0.0)) / 72.0;
        assert!((annual - trapezium).abs() < 1e-14);
    }

    #[test]
    fn converges_with_the_square_of_the_step() {
        let error = |steps| {
            let tau = std::f64::consts::TAU;
            let july = means(&MonthWeights::new(steps).unwrap(), |t| (tau * t).cos())[6];
            let [from, to] = [181.0 / 365.0, 212.0 / 365.0];
            (july - ((tau * to).sin() - (tau * from).sin()) / (tau * (to - from))).abs()
        };
        let ratio = error(73) / error(730);
        assert!((60.0..160.0).contains(&ratio), "{ratio}");
    }

    #[test]
    fn analytic_lengths_equinox_and_months_of_steps() {
        let lengths = Calendar.month_lengths_days();
        assert!((lengths.iter().sum::<f64>() - YEAR_DAYS).abs() < 1e-10);
        assert!((lengths[1] - 28.0 * YEAR_DAYS / 365.0).abs() < 1e-12);
        assert!((Calendar.equinox_fraction() - 79.5 / 365.0).abs() < 1e-15);
        let days = MonthWeights::new(365).unwrap();
        let expected = [
            (0, 0),
            (30, 0),
            (31, 1),
            (58, 1),
            (59, 2),
            (333, 10),
            (334, 11),
            (364, 11),
        ];
        for (day, month) in expected {
            assert_eq!(days.month_of_step(day), month, "day {day}");
        }
    }

    #[test]
    fn analytic_dates_and_days_of_the_year_belong_together() {
        let known = [(1, 1, 0.5), (3, 21, 79.5), (6, 21, 171.5), (12, 31, 364.5)];
        for (month, day, noon) in known {
            assert_eq!(noon_of_date(month, day), Some(noon));
            assert_eq!(month_and_day(noon), (month, day));
        }
        for (month, day) in [(0, 1), (13, 1), (2, 29), (4, 31), (5, 0)] {
            assert_eq!(noon_of_date(month, day), None, "{month}-{day}");
        }
    }

    #[test]
    fn analytic_nodes_touch_few_months() {
        for steps in [14, 24, 72, 365] {
            let weights = MonthWeights::new(steps).unwrap();
            assert!((0..=steps).all(|k| (1..=3).contains(&weights.node(k).len())));
            assert!(weights.node(steps + 1).is_empty());
        }
        assert_eq!(MonthWeights::new(0), Err(CalendarError::NoSteps));
    }
}
