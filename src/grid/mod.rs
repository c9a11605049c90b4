//! Where things are: latitude bands, levels of the ocean column, the calendar.

pub mod calendar;
pub mod column;
pub mod latitude;
