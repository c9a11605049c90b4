//! The divisions of space and time that a run is made on.

pub mod calendar;
