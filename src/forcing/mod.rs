//! What drives the climate from outside during one seasonal year.
//!
//! A value, computed once and passed by reference; no component keeps it.

pub mod carbon_dioxide;
pub mod drive;
pub mod land_ice;
pub mod mask;
pub mod months;

use crate::orbit::elements::Elements;

/// Forcing of one seasonal year.
#[derive(Clone, Copy, Debug)]
pub struct YearForcing<'a> {
    /// Age in the middle of the year, kyr before 1950 CE.
    pub age_kyr: f64,
    /// Orbit of the year.
    pub orbit: Elements,
    /// Carbon dioxide, ppm by volume.
    pub co2_ppm: f64,
    /// Radiative forcing of that carbon dioxide against the reference, W m-2.
    pub greenhouse_w_m2: f64,
    /// Southern edge of the prescribed northern land ice, degrees north; none without such ice.
    pub land_ice_edge_deg: Option<f64>,
    /// Daily-mean insolation at the end of each step, W m-2, `[step][band]`.
    pub insolation_w_m2: &'a [f64],
    /// Insolation-weighted daily-mean cosine of the zenith angle, `[step][band]`.
    pub zenith_cosine: &'a [f64],
    /// Bounds of the months, fractions of the year; see [`months`].
    pub month_bounds: months::MonthBounds,
    /// Years that slow components advance in this one seasonal year (1: synchronous).
    pub slow_years: f64,
}
