//! Carbon dioxide against age, and its radiative forcing.
//!
//! Forcing G = k ln(C/C_ref), k = 5.35 W m-2 (Myhre et al. 1998, Geophys. Res. Lett. 25:2715;
//! memory). C is constant, linear in time, or a table of age and concentration interpolated
//! linearly. Ages outside what was given are an error, never extrapolated.

use crate::numerics::profile;
use serde::{Deserialize, Serialize};

/// Concentrations that can be meant, ppm (chosen here): below are fractions given by mistake, above is no
/// atmosphere that a logarithmic forcing describes.
const CONCENTRATIONS_PPM: std::ops::RangeInclusive<f64> = 1.0..=1.0e5;

/// Carbon dioxide in a configuration.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum CarbonDioxideSpec {
    /// The same at all times.
    Constant {
        /// Concentration, ppm by volume, > 0.
        co2_ppm: f64,
    },
    /// Linear in time between two ages.
    Linear {
        /// Older age, kyr before 1950.
        from_kyr: f64,
        /// Concentration there, ppm.
        from_ppm: f64,
        /// Younger age, kyr before 1950.
        to_kyr: f64,
        /// Concentration there, ppm.
        to_ppm: f64,
    },
    /// A text file with the columns `age_kyr` (kyr before 1950) and `co2_ppm`, comma-separated,
    /// lines beginning with # ignored; its path is relative to the configuration that names it.
    Table {
        /// Path of the file.
        path: String,
    },
}

/// Why carbon dioxide cannot be used.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum CarbonDioxideError {
    /// A concentration that is not positive.
    #[error("co2: {value} ppm{} is not a concentration in ppm: it must lie between 1 and 100000", at(*age_kyr))]
    NotPositive {
        /// The value.
        value: f64,
        /// Its age, kyr, in a table.
        age_kyr: Option<f64>,
    },
    /// Ages out of order.
    #[error(
        "co2: ages must differ and increase down the table; {first} kyr is followed by {second} kyr"
    )]
    Order {
        /// One age, kyr.
        first: f64,
        /// The next, kyr.
        second: f64,
    },
    /// An age that was not given.
    #[error(
        "co2: {age_kyr} kyr lies outside the ages given, {youngest} to {oldest} kyr: extend them or shorten the run"
    )]
    OutOfRange {
        /// The age asked for, kyr.
        age_kyr: f64,
        /// Youngest age given, kyr.
        youngest: f64,
        /// Oldest age given, kyr.
        oldest: f64,
    },
}

/// Concentration against age, ready for use.
#[derive(Clone, Debug, PartialEq)]
pub struct CarbonDioxide {
    age_kyr: Vec<f64>,
    co2_ppm: Vec<f64>,
}

impl CarbonDioxide {
    /// The same concentration at all ages.
    ///
    /// # Errors
    /// When it is not positive.
    pub fn constant(co2_ppm: f64) -> Result<Self, CarbonDioxideError> {
        check(None, co2_ppm)?;
        Ok(Self {
            age_kyr: Vec::new(),
            co2_ppm: vec![co2_ppm],
        })
    }

    /// Linear interpolation between ages, which must increase (older last).
    ///
    /// # Errors
    /// When ages do not increase or a concentration is not positive.
    pub fn table(age_kyr: Vec<f64>, co2_ppm: Vec<f64>) -> Result<Self, CarbonDioxideError> {
        for (age, ppm) in age_kyr.iter().zip(&co2_ppm) {
            check(Some(*age), *ppm)?;
        }
        for pair in age_kyr.windows(2) {
            if pair[0].partial_cmp(&pair[1]) != Some(std::cmp::Ordering::Less) {
                return Err(CarbonDioxideError::Order {
                    first: pair[0],
                    second: pair[1],
                });
            }
        }
        Ok(Self { age_kyr, co2_ppm })
    }

    /// Concentration at an age, ppm.
    ///
    /// # Errors
    /// When the age was not given.
    pub fn at(&self, age_kyr: f64) -> Result<f64, CarbonDioxideError> {
        let (Some(&youngest), Some(&oldest)) = (self.age_kyr.first(), self.age_kyr.last()) else {
            return Ok(self.co2_ppm[0]);
        };
        // A millionth of a year of slack for rounding at the ends.
        if !(youngest - 1e-9..=oldest + 1e-9).contains(&age_kyr) {
            return Err(CarbonDioxideError::OutOfRange {
                age_kyr,
                youngest,
                oldest,
            });
        }
        Ok(profile::value(&self.age_kyr, &self.co2_ppm, age_kyr))
    }
}

fn check(age_kyr: Option<f64>, value: f64) -> Result<(), CarbonDioxideError> {
    if CONCENTRATIONS_PPM.contains(&value) {
        return Ok(());
    }
    Err(CarbonDioxideError::NotPositive { value, age_kyr })
}

fn at(age_kyr: Option<f64>) -> String {
    age_kyr
        .map(|age| format!(" at {age} kyr"))
        .unwrap_or_default()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn analytic_between_ages_the_table_is_linear_and_beyond_them_an_error() {
        let c = CarbonDioxide::table(vec![0.0, 100.0], vec![280.0, 180.0]).unwrap();
        assert!((c.at(25.0).unwrap() - 255.0).abs() < 1e-12);
        let beyond = CarbonDioxideError::OutOfRange {
            age_kyr: 101.0,
            youngest: 0.0,
            oldest: 100.0,
        };
        assert_eq!(c.at(101.0), Err(beyond));
    }

    #[test]
    fn impossible_concentrations_and_orders_are_refused() {
        assert!(CarbonDioxide::constant(0.0).is_err());
        assert!(CarbonDioxide::constant(f64::NAN).is_err());
        assert!(CarbonDioxide::table(vec![5.0, 5.0], vec![280.0, 280.0]).is_err());
    }
}
