//! The run's calendar of years: from an older to a younger age in whole records.

use crate::numerics::shown::Shown;
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

/// Farthest age from 1950, kyr: the Earth is not older (Patterson 1956, Geochim. Cosmochim. Acta
/// 10:230; memory), so a larger number is another unit.
const FARTHEST_KYR: f64 = 4.55e6;

/// Whether a number can be an age, kyr before 1950: not farther than the Earth is old.
pub fn is_age(kyr: f64) -> bool {
    (-FARTHEST_KYR..=FARTHEST_KYR).contains(&kyr)
}

/// Times that make no run.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum PlanError {
    /// Not an age.
    #[error("{key} = {} is out of range: must lie within 4550000 kyr of 1950", Shown(*value))]
    Age {
        /// The key.
        key: &'static str,
        /// Its value, kyr.
        value: f64,
    },
    /// Start not older than end.
    #[error("time.start_kyr = {start_kyr} must be older (larger) than time.end_kyr = {end_kyr}")]
    Backwards {
        /// Start, kyr.
        start_kyr: f64,
        /// End, kyr.
        end_kyr: f64,
    },
    /// A number of years that cannot be meant.
    #[error("{key} = {} is out of range: {limit}", Shown(*value))]
    Years {
        /// The key, or the sum of keys.
        key: &'static str,
        /// Its value.
        value: f64,
        /// What is allowed, in words.
        limit: &'static str,
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

impl PlanError {
    /// The keys that do not fit together, or the one that is wrong.
    pub fn keys(&self) -> Vec<&'static str> {
        let run = ["time.start_kyr", "time.end_kyr"];
        match self {
            Self::Age { key, .. } => vec![key],
            Self::Years { key, .. } => vec![key.split(' ').next().unwrap_or(key)],
            Self::Backwards { .. } => run.to_vec(),
            Self::Multiple { what, unit, .. } if what.starts_with("time.") => vec![what, unit],
            Self::Multiple { unit, .. } => [&run[..], &[unit]].concat(),
        }
    }
}

/// Lengths this close are the same, years: ages in kyr are rounded to some nanoyears.
const SAME_YR: f64 = 1e-3;

impl TimeSpec {
    fn check_ages(&self) -> Vec<PlanError> {
        let (start_kyr, end_kyr) = (self.start_kyr, self.end_kyr);
        let ages = [("time.start_kyr", start_kyr), ("time.end_kyr", end_kyr)];
        let wrong = ages.into_iter().filter(|(_, age)| !is_age(*age));
        let mut wrong: Vec<_> = wrong
            .map(|(key, value)| PlanError::Age { key, value })
            .collect();
        if wrong.is_empty() && start_kyr <= end_kyr {
            wrong.push(PlanError::Backwards { start_kyr, end_kyr });
        }
        wrong
    }

    fn check_years(&self) -> Vec<PlanError> {
        let spin_up = &self.spin_up;
        let one = "must be at least 1 year";
        let pace = "must lie between 1 and 1000 years";
        let all = [
            (
                "time.record_every_yr",
                f64::from(self.record_every_yr),
                f64::INFINITY,
                one,
            ),
            (
                "time.slow_years_per_seasonal_year",
                f64::from(self.slow_years_per_seasonal_year),
                f64::from(LARGEST_PACE_YR),
                pace,
            ),
            (
                "time.spin_up.seasonal_yr + settling_yr",
                f64::from(spin_up.seasonal_yr) + f64::from(spin_up.settling_yr),
                f64::INFINITY,
                one,
            ),
            (
                "time.spin_up.slow_years_per_seasonal_year",
                spin_up.slow_years_per_seasonal_year,
                f64::from(LARGEST_PACE_YR),
                pace,
            ),
        ];
        let wrong = all
            .into_iter()
            .filter(|(_, value, most, _)| !(1.0..=*most).contains(value));
        wrong
            .map(|(key, value, _, limit)| PlanError::Years { key, value, limit })
            .collect()
    }
}

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
        let mut wrong = spec.check_ages();
        wrong.extend(spec.check_years());
        if !wrong.is_empty() {
            return Err(wrong);
        }
        let start_kyr = spec.start_kyr;
        let (record, slow) = (spec.record_every_yr, spec.slow_years_per_seasonal_year);
        let years = (start_kyr - spec.end_kyr) * 1000.0;
        let records = (years / f64::from(record)).round();
        if (records * f64::from(record) - years).abs() > SAME_YR || records < 1.0 {
            wrong.push(PlanError::Multiple {
                what: "the run",
                // Rounded for the reader: ages in kyr have some rounding of their own.
                long: (years * 1000.0).round() / 1000.0,
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
            "{:.3} to {end_kyr:.3} kyr before 1950, {} {} of {:.0} years, {seasonal} seasonal years (M = {})",
            self.start_kyr,
            self.records,
            if self.records == 1 {
                "record"
            } else {
                "records"
            },
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
