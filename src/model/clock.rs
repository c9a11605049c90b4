//! The run's calendar of years: from an older to a younger age in whole records.

use serde::{Deserialize, Serialize};
use std::fmt;

/// Times of a run in a configuration. Ages are kyr before 1950 CE.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct TimeSpec {
    /// Age at which the run starts, kyr (older).
    pub start_kyr: f64,
    /// Age at which it ends, kyr (younger; negative is after 1950).
    pub end_kyr: f64,
    /// Length of a record: everything in the file is a mean over it, years.
    pub record_every_yr: u32,
    /// M: years that orbit and ocean column advance in one seasonal year. 1 is exact.
    pub slow_years_per_seasonal_year: u32,
    /// How the model is brought near balance before the run.
    pub spin_up: SpinUp,
}

/// Most years that slow components may advance in one seasonal year; beyond some hundred the
/// coupling by annual means is wrong anyway.
pub const LARGEST_PACE_YR: u32 = 1000;

/// Years at the start with the forcing held; not part of the run.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct SpinUp {
    /// Seasonal years with an accelerated ocean column.
    pub seasonal_yr: u32,
    /// Years the column advances in each of them.
    pub slow_years_per_seasonal_year: f64,
    /// Years afterwards with nothing accelerated.
    pub settling_yr: u32,
}

impl SpinUp {
    /// Seasonal years altogether.
    pub fn years(self) -> u32 {
        self.seasonal_yr.saturating_add(self.settling_yr)
    }
}

/// Times that make no run.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum PlanError {
    /// Start not older than end.
    #[error("time.start_kyr = {start_kyr} must be older (larger) than time.end_kyr = {end_kyr}")]
    Backwards {
        /// Start, kyr.
        start_kyr: f64,
        /// End, kyr.
        end_kyr: f64,
    },
    /// A length of zero.
    #[error("{key} must be at least 1 year")]
    Zero {
        /// The key.
        key: &'static str,
    },
    /// A pace that cannot be meant.
    #[error("{key} = {value} is out of range: must lie between 1 and 1000 years")]
    Pace {
        /// The key.
        key: &'static str,
        /// Its value.
        value: f64,
    },
    /// Lengths that do not divide.
    #[error("{what} ({long} years) must be a multiple of {unit} ({short} years)")]
    Multiple {
        /// The longer interval.
        what: &'static str,
        /// Its length, years.
        long: f64,
        /// The shorter interval.
        unit: &'static str,
        /// Its length, years.
        short: f64,
    },
}

/// Lengths this close are the same, years: ages in kyr are rounded to some nanoyears.
const SAME_YR: f64 = 1e-3;

/// A checked plan.
#[derive(Clone, Debug, PartialEq)]
pub struct Plan {
    start_kyr: f64,
    slow_years: u32,
    seasonal_per_record: u64,
    records: u64,
}

impl Plan {
    /// Checks the times; all violations are returned.
    ///
    /// # Errors
    /// When start and end, record and seasonal year do not fit together.
    pub fn new(spec: &TimeSpec) -> Result<Self, Vec<PlanError>> {
        let mut wrong = Vec::new();
        let (start_kyr, end_kyr) = (spec.start_kyr, spec.end_kyr);
        if !(start_kyr > end_kyr && start_kyr.is_finite() && end_kyr.is_finite()) {
            wrong.push(PlanError::Backwards { start_kyr, end_kyr });
        }
        let (record, slow) = (spec.record_every_yr, spec.slow_years_per_seasonal_year);
        for (key, value) in [
            ("time.record_every_yr", f64::from(record)),
            ("time.slow_years_per_seasonal_year", f64::from(slow)),
            (
                "time.spin_up.seasonal_yr + settling_yr",
                f64::from(spec.spin_up.seasonal_yr) + f64::from(spec.spin_up.settling_yr),
            ),
            (
                "time.spin_up.slow_years_per_seasonal_year",
                spec.spin_up.slow_years_per_seasonal_year,
            ),
        ] {
            if !(value >= 1.0 && value.is_finite()) {
                wrong.push(PlanError::Zero { key });
            }
        }
        for (key, value) in [
            ("time.slow_years_per_seasonal_year", f64::from(slow)),
            (
                "time.spin_up.slow_years_per_seasonal_year",
                spec.spin_up.slow_years_per_seasonal_year,
            ),
        ] {
            if value > f64::from(LARGEST_PACE_YR) {
                wrong.push(PlanError::Pace { key, value });
            }
        }
        if !wrong.is_empty() {
            return Err(wrong);
        }
        let years = (start_kyr - end_kyr) * 1000.0;
        let records = (years / f64::from(record)).round();
        if (records * f64::from(record) - years).abs() > SAME_YR || records < 1.0 {
            wrong.push(PlanError::Multiple {
                what: "the run",
                long: years,
                unit: "time.record_every_yr",
                short: f64::from(record),
            });
        }
        if record % slow != 0 {
            wrong.push(PlanError::Multiple {
                what: "time.record_every_yr",
                long: f64::from(record),
                unit: "time.slow_years_per_seasonal_year",
                short: f64::from(slow),
            });
        }
        if !wrong.is_empty() {
            return Err(wrong);
        }
        #[expect(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "at least one, checked above"
        )]
        let records = records as u64;
        Ok(Self {
            start_kyr,
            slow_years: slow,
            seasonal_per_record: u64::from(record / slow),
            records,
        })
    }

    /// Age at which the run starts, kyr before 1950.
    pub fn start_kyr(&self) -> f64 {
        self.start_kyr
    }

    /// M, years per seasonal year.
    pub fn slow_years(&self) -> f64 {
        f64::from(self.slow_years)
    }

    /// Number of records.
    pub fn records(&self) -> u64 {
        self.records
    }

    /// Number of seasonal years to run.
    pub fn seasonal_years(&self) -> u64 {
        self.records * self.seasonal_per_record
    }

    /// Seasonal years after which so many records are complete.
    pub fn years_of_records(&self, records: u64) -> u64 {
        records * self.seasonal_per_record
    }

    /// Length of the run, years.
    pub fn total_yr(&self) -> f64 {
        self.end_yr(self.seasonal_years() - 1)
    }

    /// Years passed in the middle of seasonal year `year`.
    pub fn middle_yr(&self, year: u64) -> f64 {
        (year as f64 + 0.5) * self.slow_years()
    }

    /// Years passed at the end of seasonal year `year`.
    pub fn end_yr(&self, year: u64) -> f64 {
        (year + 1) as f64 * self.slow_years()
    }

    /// Whether a record ends with seasonal year `year`.
    pub fn record_ends(&self, year: u64) -> bool {
        (year + 1).is_multiple_of(self.seasonal_per_record)
    }

    /// Older and younger end of the record that ends with seasonal year `year`, kyr before 1950.
    pub fn record_bounds_kyr(&self, year: u64) -> [f64; 2] {
        let length = self.seasonal_per_record as f64 * self.slow_years();
        let end = self.end_yr(year);
        [
            self.start_kyr - (end - length) / 1000.0,
            self.start_kyr - end / 1000.0,
        ]
    }
}

impl fmt::Display for Plan {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let seasonal = self.seasonal_years();
        let end_kyr = self.record_bounds_kyr(seasonal - 1)[1];
        write!(
            f,
            "{:.3} to {end_kyr:.3} kyr before 1950, {} records of {:.0} years, {seasonal} seasonal years (M = {})",
            self.start_kyr,
            self.records,
            self.total_yr() / self.records as f64,
            self.slow_years
        )
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn spec(start_kyr: f64, end_kyr: f64, record_every_yr: u32, slow: u32) -> TimeSpec {
        let spin_up = SpinUp {
            seasonal_yr: 1,
            slow_years_per_seasonal_year: 1.0,
            settling_yr: 0,
        };
        TimeSpec {
            start_kyr,
            end_kyr,
            record_every_yr,
            slow_years_per_seasonal_year: slow,
            spin_up,
        }
    }

    #[test]
    fn analytic_records_cover_the_run_without_gap() {
        let plan = Plan::new(&spec(2.0, -0.1, 100, 10)).unwrap();
        assert_eq!((plan.records(), plan.seasonal_years()), (21, 210));
        assert!(plan.record_ends(9) && !plan.record_ends(10));
        let bounds = [plan.record_bounds_kyr(9), plan.record_bounds_kyr(209)];
        assert!((bounds[0][0] - 2.0).abs() < 1e-12 && (bounds[0][1] - 1.9).abs() < 1e-12);
        assert!((bounds[1][1] + 0.1).abs() < 1e-12);
    }

    #[test]
    fn times_that_make_no_run_are_refused_together() {
        assert_eq!(Plan::new(&spec(0.0, 10.0, 0, 0)).unwrap_err().len(), 3);
        assert!(Plan::new(&spec(1.0, 0.0, 300, 1)).is_err());
        assert!(
            Plan::new(&spec(1000.0, 0.0, 333, 1)).is_err(),
            "one year short"
        );
        assert!(Plan::new(&spec(1.0, 0.0, 100, 3)).is_err());
    }
}
