//! From the shape of the orbit to the sunshine of a latitude band.
//!
//! [`solution`] gives the orbital elements at an age, [`kepler`] the season at a time of the year,
//! [`insolation`] the energy. Ages are in kyr before 1950 CE, positive into the past.

mod arc;
pub mod elements;
pub mod insolation;
pub mod integration;
pub mod kepler;
pub mod season;
pub mod solution;
mod table;
