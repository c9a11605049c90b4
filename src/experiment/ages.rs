//! The ages of a table: from an older to a younger one in equal steps.
//!
//! Units: kyr before 1950 CE, positive into the past.
//! Numerics: age = from - n step, rounded to 1e-9 kyr (a few seconds), so that decimal steps give
//! decimal ages.

use crate::numerics::shown::Shown;

/// Most numbers that one table may hold; tuned here (a file of about 500 MB as text).
pub const MOST_VALUES: usize = 10_000_000;
/// Ages are rounded to this part of a kyr.
const PARTS_OF_KYR: f64 = 1e9;

/// Equally spaced ages, or one.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct AgeRange {
    /// Oldest age, kyr before 1950.
    pub from_kyr: f64,
    /// Youngest age, kyr before 1950; negative after 1950.
    pub to_kyr: f64,
    /// Distance between two ages, kyr.
    pub step_kyr: f64,
}

/// Ages that make no table.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
pub enum AgeError {
    /// One of the numbers is not finite.
    #[error("{name} = {}: give a finite number of kyr", Shown(*value))]
    NotFinite {
        /// What it is.
        name: &'static str,
        /// Its value.
        value: f64,
    },
    /// The ends are the wrong way round.
    #[error(
        "ages from {from_kyr} to {to_kyr} kyr before 1950: the first must be the older one, since ages \
         grow into the past; exchange them"
    )]
    Order {
        /// First age.
        from_kyr: f64,
        /// Last age.
        to_kyr: f64,
    },
    /// The step is not positive.
    #[error("a step of {} kyr: it must be above 0", Shown(*step_kyr))]
    Step {
        /// The step.
        step_kyr: f64,
    },
    /// Too many values.
    #[error(
        "{} values in the table, at most {MOST_VALUES} are written: take a longer step, a shorter \
         range or fewer columns",
        Shown(*values)
    )]
    TooMany {
        /// How many there would be.
        values: f64,
    },
}

impl AgeRange {
    /// One age.
    pub fn one(age_kyr: f64) -> Self {
        Self {
            from_kyr: age_kyr,
            to_kyr: age_kyr,
            step_kyr: 1.0,
        }
    }

    /// The ages, oldest first, of a table with so many values for each; the last is the youngest that
    /// is a whole number of steps from the first.
    ///
    /// # Errors
    /// When a number has no meaning, or the table would be too large.
    pub fn ages_kyr(&self, values_per_age: usize) -> Result<Vec<f64>, AgeError> {
        let Self {
            from_kyr,
            to_kyr,
            step_kyr,
        } = *self;
        let named = [
            ("the older age", from_kyr),
            ("the younger age", to_kyr),
            ("the step", step_kyr),
        ];
        for (name, value) in named {
            if !value.is_finite() {
                return Err(AgeError::NotFinite { name, value });
            }
        }
        if from_kyr < to_kyr {
            return Err(AgeError::Order { from_kyr, to_kyr });
        }
        if step_kyr <= 0.0 {
            return Err(AgeError::Step { step_kyr });
        }
        // A last age that is missed by rounding only is kept.
        let steps = ((from_kyr - to_kyr) / step_kyr + 1e-9).floor();
        let values = (steps + 1.0) * values_per_age as f64;
        if values > MOST_VALUES as f64 {
            return Err(AgeError::TooMany { values });
        }
        #[expect(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "between 0 and the largest number of values"
        )]
        let steps = steps as usize;
        let rounded = |age: f64| {
            let parts = age * PARTS_OF_KYR;
            // Beyond 2^53 parts there is nothing left to round; and no minus before a zero.
            let age = if parts.abs() < 9e15 {
                parts.round() / PARTS_OF_KYR
            } else {
                age
            };
            age + 0.0
        };
        Ok((0..=steps)
            .map(|n| rounded(from_kyr - step_kyr * n as f64))
            .collect())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn ages(from_kyr: f64, to_kyr: f64, step_kyr: f64) -> Result<Vec<f64>, AgeError> {
        AgeRange {
            from_kyr,
            to_kyr,
            step_kyr,
        }
        .ages_kyr(1)
    }

    #[test]
    fn analytic_decimal_steps_give_decimal_ages() {
        let tenths = ages(0.5, -0.2, 0.1).unwrap();
        let texts: Vec<_> = tenths.iter().map(ToString::to_string).collect();
        assert_eq!(
            texts,
            ["0.5", "0.4", "0.3", "0.2", "0.1", "0", "-0.1", "-0.2"]
        );
        assert_eq!(ages(10.0, 0.0, 4.0).unwrap(), [10.0, 6.0, 2.0]);
        assert_eq!(AgeRange::one(3.0).ages_kyr(1).unwrap(), [3.0]);
    }

    #[test]
    fn ages_without_meaning_are_refused_with_the_reason() {
        for (from, to, step, fragment) in [
            (0.0, 10.0, 1.0, "exchange"),
            (10.0, 0.0, 0.0, "above 0"),
            (10.0, 0.0, -1.0, "above 0"),
            (f64::NAN, 0.0, 1.0, "finite"),
            (10.0, 0.0, 1e-300, "at most 10000000"),
        ] {
            let message = ages(from, to, step).unwrap_err().to_string();
            assert!(message.contains(fragment), "{message}");
        }
    }
}
