//! Why there is no table of insolation.

use super::super::ages::AgeError;
use super::super::orbit_source::OrbitSourceError;
use crate::forcing::months::CalendarError;
use crate::numerics::shown::Shown;
use crate::orbit::solution::OrbitError;

/// A table of insolation that cannot be made.
#[derive(Debug, thiserror::Error)]
pub enum InsolationError {
    /// The ages.
    #[error(transparent)]
    Ages(#[from] AgeError),
    /// The orbit.
    #[error(transparent)]
    Source(#[from] OrbitSourceError),
    /// The orbit at an age.
    #[error(transparent)]
    Orbit(#[from] OrbitError),
    /// The date of the equinox.
    #[error("{0}")]
    Equinox(#[from] CalendarError),
    /// Nothing was asked for.
    #[error("no {name} was given: give at least one")]
    None {
        /// Of what.
        name: &'static str,
    },
    /// A number is out of range.
    #[error("{name} {}: must lie between {} and {}", Shown(*value), Shown(*low), Shown(*high))]
    OutOfRange {
        /// What it is.
        name: &'static str,
        /// Its value.
        value: f64,
        /// Smallest value allowed.
        low: f64,
        /// Largest value allowed.
        high: f64,
    },
    /// A value occurs twice.
    #[error("{name} {} is given twice: leave one out", Shown(*value))]
    Twice {
        /// What it is.
        name: &'static str,
        /// Its value.
        value: f64,
    },
    /// The configuration lights a part of the Earth by another orbit.
    #[error(
        "the configuration has an orbit_mask, and these tables know one orbit only: take a \
         configuration without it, or the variable `insolation` of a run"
    )]
    Mask,
}
