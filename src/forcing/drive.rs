//! Forcing for any year of a run: orbit, insolation table, carbon dioxide, land ice.
//!
//! The insolation table is renewed every few years with the orbit of the middle of that interval
//! (at eccentricity 0.05 ten years move the insolation by less than 0.1 W m-2 either way).
//! Intervals are counted from the start of the run, so a run that goes on from a saved state
//! meets the same tables.

use super::YearForcing;
use super::carbon_dioxide::{CarbonDioxide, CarbonDioxideError};
use super::land_ice::{LandIce, LandIceError};
use super::mask::Mask;
use super::months::{MonthBounds, Months};
use crate::orbit::elements::Elements;
use crate::orbit::insolation::{InsolationTable, TableError};
use crate::orbit::solution::{Orbit, OrbitError};

/// What is needed to force the model.
#[derive(Clone, Debug)]
pub struct Drive {
    sources: Sources,
    solar_constant_w_m2: f64,
    co2_reference_ppm: f64,
    co2_forcing_w_m2: f64,
    refresh_yr: f64,
    end_kyr: f64,
    table: InsolationTable,
    table_interval: Option<i64>,
    table_orbit: Option<Elements>,
    month_bounds: MonthBounds,
}

/// Where the forcing comes from.
#[derive(Clone, Debug)]
pub struct Sources {
    /// Orbit of the run.
    pub orbit: Orbit,
    /// Part of Earth and year that another orbit lights.
    pub mask: Option<Mask>,
    /// Carbon dioxide.
    pub carbon_dioxide: CarbonDioxide,
    /// Calendar.
    pub months: Months,
    /// Prescribed northern land ice.
    pub land_ice: Option<LandIce>,
}

/// Numbers of a [`Drive`] besides orbit and carbon dioxide.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct DriveNumbers {
    /// Solar constant, W m-2.
    pub solar_constant_w_m2: f64,
    /// Years between renewals of the insolation table.
    pub refresh_yr: f64,
    /// Carbon dioxide at which the longwave offset A holds, ppm.
    pub co2_reference_ppm: f64,
    /// k in k ln(C/C_ref), W m-2.
    pub co2_forcing_w_m2: f64,
    /// Youngest age of the run, kyr before 1950: no table looks beyond it.
    pub end_kyr: f64,
}

/// What is given against age besides the orbit, at one age.
#[derive(Clone, Copy, Debug)]
struct Given {
    co2_ppm: f64,
    land_ice_edge_deg: Option<f64>,
}

/// Why there is no forcing for an age.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum DriveError {
    /// The orbit does not reach there.
    #[error(transparent)]
    Orbit(#[from] OrbitError),
    /// Carbon dioxide does not reach there.
    #[error(transparent)]
    CarbonDioxide(#[from] CarbonDioxideError),
    /// Land ice is not given there.
    #[error(transparent)]
    LandIce(#[from] LandIceError),
}

impl Drive {
    /// Forcing on the bands with these edges (sines), at `steps` steps a year.
    ///
    /// # Errors
    /// When the edges or the steps make no table.
    pub fn new(
        sources: Sources,
        numbers: DriveNumbers,
        edge_sine: &[f64],
        steps: usize,
    ) -> Result<Self, TableError> {
        Ok(Self {
            sources,
            solar_constant_w_m2: numbers.solar_constant_w_m2,
            co2_reference_ppm: numbers.co2_reference_ppm,
            co2_forcing_w_m2: numbers.co2_forcing_w_m2,
            refresh_yr: numbers.refresh_yr,
            end_kyr: numbers.end_kyr,
            table: InsolationTable::new(edge_sine, steps)?,
            table_interval: None,
            table_orbit: None,
            month_bounds: [0.0; 13],
        })
    }

    /// Orbit at an age (kyr before 1950).
    ///
    /// # Errors
    /// When the orbital solution does not reach there.
    pub fn orbit_at(&self, age_kyr: f64) -> Result<Elements, OrbitError> {
        self.sources.orbit.at(age_kyr)
    }

    /// What makes up the forcing.
    pub fn sources(&self) -> &Sources {
        &self.sources
    }

    /// Carbon dioxide at an age, ppm.
    ///
    /// # Errors
    /// When it was not given there.
    pub fn co2_at(&self, age_kyr: f64) -> Result<f64, CarbonDioxideError> {
        self.sources.carbon_dioxide.at(age_kyr)
    }

    /// Radiative forcing of a concentration against the reference, W m-2.
    pub fn greenhouse_w_m2(&self, co2_ppm: f64) -> f64 {
        self.co2_forcing_w_m2 * (co2_ppm / self.co2_reference_ppm).ln()
    }

    /// Forcing of the seasonal year in the middle of which `years` have passed since
    /// `start_kyr`; slow components advance `slow_years` in it.
    ///
    /// # Errors
    /// When orbit, carbon dioxide or land ice do not reach there.
    pub fn year(
        &mut self,
        start_kyr: f64,
        years: f64,
        slow_years: f64,
    ) -> Result<YearForcing<'_>, DriveError> {
        let age_kyr = start_kyr - years / 1000.0;
        let given = self.given_at(age_kyr)?;
        #[expect(
            clippy::cast_possible_truncation,
            reason = "runs are far shorter than 2^63 intervals"
        )]
        let interval = (years / self.refresh_yr).floor() as i64;
        let orbit = match self.table_orbit {
            Some(orbit) if self.table_interval == Some(interval) => orbit,
            _ => {
                let middle_yr = (interval as f64 + 0.5) * self.refresh_yr;
                let middle_kyr = (start_kyr - middle_yr / 1000.0).max(self.end_kyr);
                let orbit = self.sources.orbit.at(middle_kyr)?;
                self.renew(orbit, middle_kyr)?;
                self.table_interval = Some(interval);
                orbit
            }
        };
        Ok(self.forcing(age_kyr, orbit, given, slow_years))
    }

    /// Forcing held at one age, for spin-up and steady states.
    ///
    /// # Errors
    /// When orbit, carbon dioxide or land ice do not reach there.
    pub fn held(&mut self, age_kyr: f64, slow_years: f64) -> Result<YearForcing<'_>, DriveError> {
        let given = self.given_at(age_kyr)?;
        let orbit = self.sources.orbit.at(age_kyr)?;
        // The orbit of the mask may move where the run's stands still.
        if self.table_orbit != Some(orbit) || self.sources.mask.is_some() {
            self.renew(orbit, age_kyr)?;
        }
        self.table_interval = None;
        Ok(self.forcing(age_kyr, orbit, given, slow_years))
    }

    fn given_at(&self, age_kyr: f64) -> Result<Given, DriveError> {
        let edge = self.sources.land_ice.as_ref();
        Ok(Given {
            co2_ppm: self.sources.carbon_dioxide.at(age_kyr)?,
            land_ice_edge_deg: edge.map(|ice| ice.edge_deg_at(age_kyr)).transpose()?,
        })
    }

    fn renew(&mut self, orbit: Elements, age_kyr: f64) -> Result<(), OrbitError> {
        let (sun, equinox) = (
            self.solar_constant_w_m2,
            self.sources.months.equinox_fraction(),
        );
        self.table.update(&orbit, sun, equinox);
        if let Some(mask) = &mut self.sources.mask {
            mask.apply(&mut self.table, &orbit, age_kyr, sun, equinox)?;
        }
        self.table_orbit = Some(orbit);
        self.month_bounds = self.sources.months.bounds(&orbit);
        Ok(())
    }

    fn forcing(
        &self,
        age_kyr: f64,
        orbit: Elements,
        given: Given,
        slow_years: f64,
    ) -> YearForcing<'_> {
        YearForcing {
            age_kyr,
            orbit,
            co2_ppm: given.co2_ppm,
            greenhouse_w_m2: self.greenhouse_w_m2(given.co2_ppm),
            land_ice_edge_deg: given.land_ice_edge_deg,
            insolation_w_m2: &self.table.daily_mean_w_m2,
            zenith_cosine: &self.table.zenith_cosine,
            month_bounds: self.month_bounds,
            slow_years,
        }
    }
}
