//! Means over the years of a record.
//!
//! Orbit, carbon dioxide and land ice are those of the middle of the record; the ledger's numbers are those
//! at its end; everything else is the mean over its years.

use super::clock::Plan;
use crate::forcing::drive::{Drive, DriveError, Sources};
use crate::orbit::elements::Elements;
use crate::physics::Component;
use crate::physics::budget::Ledger;
use crate::series::{Axis, Record, Scale, Statistic, Variable};
use crate::units::YEAR_DAYS;

/// Variables that the model itself adds (orbit and carbon dioxide of the middle of the record, the
/// ledger at its end) in front of those of the components.
///
/// Months of fixed angle, a mask and land ice have variables of their own.
pub fn model_variables(sources: &Sources) -> Vec<Variable> {
    let mut variables = of_every_run().to_vec();
    if sources.mask.is_some() {
        variables.extend(of_mask());
    }
    if sources.land_ice.is_some() {
        variables.extend(of_land_ice());
    }
    if sources.months.move_with_the_orbit() {
        variables.extend(of_moving_months());
    }
    variables
}

/// A number of one instant.
fn scalar(
    name: &'static str,
    units: &'static str,
    long_name: &'static str,
    standard_name: Option<&'static str>,
) -> Variable {
    Variable {
        name,
        axes: &[],
        units,
        long_name,
        standard_name,
        scale: Scale::Plain,
        statistic: Statistic::Point,
    }
}

fn of_every_run() -> [Variable; 9] {
    [
        scalar("eccentricity", "1", "eccentricity of the orbit", None),
        scalar("obliquity", "degree", "obliquity of the ecliptic", None),
        scalar(
            "perihelion_longitude",
            "degree",
            "heliocentric longitude of perihelion from the moving equinox (102.9 today)",
            None,
        ),
        scalar(
            "climatic_precession",
            "1",
            "climatic precession e sin(perihelion)",
            None,
        ),
        scalar(
            "co2",
            "1e-6",
            "mole fraction of carbon dioxide in dry air",
            Some("mole_fraction_of_carbon_dioxide_in_air"),
        ),
        scalar(
            "co2_forcing",
            "W m-2",
            "radiative forcing of carbon dioxide against co2_forcing.co2_reference_ppm of the configuration",
            None,
        ),
        scalar(
            "heat_residual",
            "J",
            "heat unaccounted for since the end of the first year",
            None,
        ),
        scalar(
            "heat_residual_over_throughput",
            "1",
            "heat unaccounted for over all sunlight absorbed since then",
            None,
        ),
        scalar(
            "heat_change",
            "J",
            "change of the heat on the planet since the end of the first year",
            None,
        ),
    ]
}

fn of_mask() -> [Variable; 4] {
    [
        scalar(
            "mask_eccentricity",
            "1",
            "eccentricity of the orbit inside the mask",
            None,
        ),
        scalar(
            "mask_obliquity",
            "degree",
            "obliquity inside the mask",
            None,
        ),
        scalar(
            "mask_perihelion_longitude",
            "degree",
            "heliocentric longitude of perihelion inside the mask, from the moving equinox",
            None,
        ),
        scalar(
            "mask_insolation_change",
            "W m-2",
            "global annual mean insolation added by the mask, at the end of the record",
            None,
        ),
    ]
}

fn of_land_ice() -> [Variable; 2] {
    [
        scalar(
            "northern_ice_sheet_edge",
            "degrees_north",
            "southern edge of the prescribed northern ice sheet",
            None,
        ),
        scalar(
            "northern_ice_sheet_area",
            "m2",
            "area of land under the prescribed northern ice sheet",
            None,
        ),
    ]
}

fn of_moving_months() -> [Variable; 2] {
    let by_month = |name, units, long_name| Variable {
        axes: &[Axis::Month],
        ..scalar(name, units, long_name, None)
    };
    [
        by_month(
            "month_begin",
            "1",
            "beginning of the month, fraction of the year since 1 January 0 h; may be negative",
        ),
        by_month("month_length", "day", "length of the month"),
    ]
}

/// Values of the variables that a mask, land ice and moving months add.
fn of_sources(drive: &Drive, orbit: &Elements, age_kyr: f64) -> Result<Vec<f64>, DriveError> {
    let (sources, mut values) = (drive.sources(), Vec::new());
    if let Some(mask) = &sources.mask {
        let inside = mask.orbit_at(age_kyr)?;
        values.extend([
            inside.eccentricity,
            inside.obliquity_deg,
            inside.perihelion.heliocentric_deg(),
            mask.change_w_m2(),
        ]);
    }
    if let Some(ice) = &sources.land_ice {
        let edge_deg = ice.edge_deg_at(age_kyr)?;
        values.extend([edge_deg, ice.area_m2(edge_deg)]);
    }
    if sources.months.move_with_the_orbit() {
        let bounds = sources.months.bounds(orbit);
        values.extend(&bounds[..12]);
        values.extend(bounds.windows(2).map(|b| (b[1] - b[0]) * YEAR_DAYS));
    }
    Ok(values)
}

/// Running sums.
pub(super) struct Records {
    sums: Vec<f64>,
    year: Vec<f64>,
    count: u64,
}

impl Records {
    pub(super) fn new(components: &[Box<dyn Component>]) -> Self {
        let mut year = Vec::new();
        for component in components {
            component.record(&mut year);
        }
        Self {
            sums: vec![0.0; year.len()],
            year,
            count: 0,
        }
    }

    /// Adds the year just run.
    pub(super) fn add(&mut self, components: &[Box<dyn Component>]) {
        self.year.clear();
        for component in components {
            component.record(&mut self.year);
        }
        if self.sums.len() != self.year.len() {
            self.sums.resize(self.year.len(), 0.0);
        }
        for (sum, value) in self.sums.iter_mut().zip(&self.year) {
            *sum += value;
        }
        self.count += 1;
    }

    /// Closes the record that ends with seasonal year `year`.
    pub(super) fn close(
        &mut self,
        plan: &Plan,
        year: u64,
        drive: &Drive,
        ledger: &Ledger,
    ) -> Result<Record, DriveError> {
        let age_bounds_kyr = plan.record_bounds_kyr(year);
        let age_kyr = 0.5 * (age_bounds_kyr[0] + age_bounds_kyr[1]);
        let orbit = drive.orbit_at(age_kyr)?;
        let co2_ppm = drive.co2_at(age_kyr)?;
        let mut values = vec![
            orbit.eccentricity,
            orbit.obliquity_deg,
            orbit.perihelion.heliocentric_deg(),
            orbit.climatic_precession(),
            co2_ppm,
            drive.greenhouse_w_m2(co2_ppm),
            ledger.residual(),
            ledger.relative_residual(),
            ledger.net_change(),
        ];
        values.extend(of_sources(drive, &orbit, age_kyr)?);
        let share = 1.0 / self.count as f64;
        values.extend(self.sums.iter().map(|sum| sum * share));
        self.sums.fill(0.0);
        self.count = 0;
        Ok(Record {
            age_kyr,
            age_bounds_kyr,
            values,
        })
    }
}
