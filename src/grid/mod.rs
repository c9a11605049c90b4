//! The divisions of space and time that a run is made on.

pub mod calendar;
pub mod column;
pub mod latitude;
