//! Carbon dioxide against age, and its radiative forcing.
//!
//! Forcing G = k ln(C/C_ref), k = 5.35 W m-2 (Myhre et al. 1998, Geophys. Res. Lett. 25:2715;
//! memory). C is constant, linear in time, or a table of age and concentration interpolated
//! linearly. Ages outside what was given are an error, never extrapolated.

use crate::numerics::profile;
use crate::numerics::shown::Shown;
use crate::tables::declared::declared_table;
use crate::tables::more;
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
    /// A text file of which everything is declared; values in ppm.
    DeclaredTable(CarbonDioxideTable),
    /// A text file with the columns `age_kyr` (kyr before 1950) and `co2_ppm`, comma-separated,
    /// lines beginning with # ignored; its path is relative to the configuration that names it.
    Table {
        /// Path of the file.
        path: String,
    },
}

declared_table! {
    /// Carbon dioxide against age from a text file, ppm by volume; linear between its rows.
    CarbonDioxideTable {}
}

/// Why carbon dioxide cannot be used.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum CarbonDioxideError {
    /// A number that is no concentration.
    #[error("{key} = {} is out of range: must lie between 1 and 100000 ppm{}", Shown(*value), more(*others))]
    Concentration {
        /// Key or column.
        key: &'static str,
        /// The value.
        value: f64,
        /// Row of a table, from 0.
        row: usize,
        /// How many rows below are out of range too.
        others: usize,
    },
    /// Two ages in the wrong order.
    #[error("co2.from_kyr = {from_kyr} must be older (larger) than co2.to_kyr = {to_kyr}")]
    Backwards {
        /// Where the concentration begins to change, kyr.
        from_kyr: f64,
        /// Where it ends, kyr.
        to_kyr: f64,
    },
    /// Ages of a table out of order.
    #[error("age_kyr = {second} follows {first}: ages must increase down the table{}", more(*others))]
    Order {
        /// One age, kyr.
        first: f64,
        /// The next, kyr.
        second: f64,
        /// Row of the second, from 0.
        row: usize,
        /// How many rows below are out of order too.
        others: usize,
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
    /// When it is out of range.
    pub fn constant(co2_ppm: f64) -> Result<Self, CarbonDioxideError> {
        match concentration("co2.co2_ppm", &[co2_ppm]) {
            Some(error) => Err(error),
            None => Ok(Self {
                age_kyr: Vec::new(),
                co2_ppm: vec![co2_ppm],
            }),
        }
    }

    /// Linear in time from an older age, kyr, and its concentration, ppm, to a younger one.
    ///
    /// # Errors
    /// All that is wrong: concentrations out of range, ages in the wrong order.
    pub fn linear(
        [from_kyr, from_ppm]: [f64; 2],
        [to_kyr, to_ppm]: [f64; 2],
    ) -> Result<Self, Vec<CarbonDioxideError>> {
        let mut wrong = Vec::new();
        if !(from_kyr > to_kyr && from_kyr.is_finite() && to_kyr.is_finite()) {
            wrong.push(CarbonDioxideError::Backwards { from_kyr, to_kyr });
        }
        wrong.extend(concentration("co2.from_ppm", &[from_ppm]));
        wrong.extend(concentration("co2.to_ppm", &[to_ppm]));
        if wrong.is_empty() {
            let (age_kyr, co2_ppm) = (vec![to_kyr, from_kyr], vec![to_ppm, from_ppm]);
            return Ok(Self { age_kyr, co2_ppm });
        }
        Err(wrong)
    }

    /// Linear interpolation between ages, which must increase (older last).
    ///
    /// # Errors
    /// All that is wrong: the first concentration out of range, the first age out of order, each
    /// with the number of those below.
    pub fn table(age_kyr: Vec<f64>, co2_ppm: Vec<f64>) -> Result<Self, Vec<CarbonDioxideError>> {
        let mut wrong: Vec<_> = concentration("co2_ppm", &co2_ppm).into_iter().collect();
        let rising = |pair: &[f64]| pair[0] < pair[1];
        let mut falls = (1..age_kyr.len()).filter(|row| !rising(&age_kyr[row - 1..=*row]));
        if let Some(row) = falls.next() {
            wrong.push(CarbonDioxideError::Order {
                first: age_kyr[row - 1],
                second: age_kyr[row],
                row,
                others: falls.count(),
            });
        }
        if wrong.is_empty() {
            return Ok(Self { age_kyr, co2_ppm });
        }
        Err(wrong)
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

/// The first value that is no concentration.
fn concentration(key: &'static str, values: &[f64]) -> Option<CarbonDioxideError> {
    let mut wrong = values
        .iter()
        .enumerate()
        .filter(|(_, ppm)| !CONCENTRATIONS_PPM.contains(ppm));
    let (row, &value) = wrong.next()?;
    Some(CarbonDioxideError::Concentration {
        key,
        value,
        row,
        others: wrong.count(),
    })
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
        let all = CarbonDioxide::table(vec![0.0, 9.0, 5.0, f64::NAN], vec![280.0, 0.0, 1.0, -1.0]);
        let all: Vec<_> = all.unwrap_err().iter().map(ToString::to_string).collect();
        assert!(all[0].starts_with("co2_ppm = 0 is out of range") && all[0].contains("one row"));
        assert!(all[1].starts_with("age_kyr = 5 follows 9") && all.len() == 2);
        assert_eq!(
            CarbonDioxide::linear([1.0, 0.0], [2.0, 1e6])
                .unwrap_err()
                .len(),
            3
        );
    }
}
