//! Builds the model that a configuration describes, or tells everything that is wrong with it.

use super::data;
use super::fault::{Fault, Faults};
use super::forcing::GivenAges;
use super::run::{Built, RunSpec};
use crate::forcing::drive::{Drive, DriveNumbers, Sources};
use crate::forcing::land_ice::{LandIce, LandIceSpec};
use crate::forcing::mask::Mask;
use crate::forcing::months::Months;
use crate::grid::calendar::MonthWeights;
use crate::grid::latitude::LatitudeBands;
use crate::model::Model;
use crate::model::clock::Plan;
use crate::orbit::solution::Orbit;
use crate::physics::energy_balance::params::Params;
use crate::physics::exchange::Exchange;
use crate::physics::{RangeError, Ranges, Setting};
use std::path::Path;

/// Fewest and most seasonal steps in a year. Below 24 the scheme was never measured; above 5000
/// nothing is gained.
const STEPS_LIMIT: (usize, usize) = (24, 5000);

/// Most latitude bands of a run: with 360, 72 steps a year break down in the narrow polar bands
/// (measured; 288 are fine).
const MOST_BANDS: usize = 288;

impl RunSpec {
    /// Builds the model; `folder` is where relative paths start.
    pub(super) fn build(&self, folder: &Path) -> Result<Built, Vec<Fault>> {
        let mut faults = Faults::default();
        let plan = faults.take_all(Plan::new(&self.time), Fault::Plan);
        faults.take_all(self.check_numbers(), Fault::Range);
        faults.add(self.check_needs());
        let setting = self.setting(&mut faults);
        let mut exchange = Exchange::new(setting.as_ref().map_or(0, |s| s.surface.bands.len()));
        let drive = self.drive(folder, setting.as_ref(), &mut faults);
        if setting.is_none() {
            faults.take_all(self.physics.check(), Fault::Range);
        }
        let components = setting
            .as_ref()
            .and_then(|s| faults.take_all(self.physics.build(s, &mut exchange), Fault::Range));
        match (plan, setting, components, drive) {
            (Some(plan), Some(setting), Some(components), Some(drive)) if faults.is_empty() => {
                Ok(Built {
                    model: Model::new(components, exchange, drive),
                    plan,
                    setting,
                })
            }
            _ => Err(faults.into_all()),
        }
    }

    /// The forcing, when everything about it is right.
    fn drive(&self, folder: &Path, on: Option<&Setting>, faults: &mut Faults) -> Option<Drive> {
        let orbit = data::orbit(&self.orbit, "orbit", folder, faults);
        let orbit = faults.take_all(Orbit::with_data(&self.orbit, &orbit), Fault::Orbit);
        let mask = self.orbit_mask.as_ref();
        let inside = mask.and_then(|mask| {
            let data = data::orbit(&mask.orbit, "orbit_mask.orbit", folder, faults);
            faults.take_all(mask.check(&data), Fault::Mask)
        });
        let co2 = self.carbon_dioxide(folder, faults);
        let ice_edge = self.ice_edge(folder, faults);
        let given = GivenAges {
            orbits: [orbit.as_ref(), inside.as_ref()],
            co2: co2.as_ref(),
            ice_edge: ice_edge.as_ref(),
        };
        self.check_ages(given, faults);
        let months = faults.take(Months::new(self.calendar), Fault::Calendar);
        let (orbit, carbon_dioxide, months) = (orbit?, co2?, months?);
        let (on, bands) = (on?, &on?.surface.bands);
        let (edges, steps) = (bands.edge_sine(), on.steps_per_year());
        let mask = match mask {
            Some(spec) => {
                let laid = Mask::new(spec, inside?, edges, steps);
                Some(faults.take(laid, |e| Fault::Grid(e.to_string()))?)
            }
            None => None,
        };
        let sources = Sources {
            orbit,
            mask,
            carbon_dioxide,
            months,
            land_ice: ice_edge.map(|edge| LandIce::new(edge, bands, &on.surface.land_fraction)),
        };
        let numbers = DriveNumbers {
            solar_constant_w_m2: self.insolation.solar_constant_w_m2,
            refresh_yr: self.insolation.refresh_every_yr,
            co2_reference_ppm: self.co2_forcing.co2_reference_ppm,
            co2_forcing_w_m2: self.co2_forcing.co2_forcing_w_m2,
            end_kyr: self.time.end_kyr,
        };
        let drive = Drive::new(sources, numbers, edges, steps);
        faults.take(drive, |e| Fault::Grid(e.to_string()))
    }

    fn check_numbers(&self) -> Result<(), Vec<RangeError>> {
        let mut r = Ranges::default();
        let sun = self.insolation.solar_constant_w_m2;
        let limit = "must lie between 500 and 3000 W m-2";
        r.require(
            "insolation.solar_constant_w_m2",
            sun,
            (500.0..=3000.0).contains(&sun),
            limit,
        );
        let refresh = self.insolation.refresh_every_yr;
        let limit = "must lie between 1 and 1000 years";
        r.require(
            "insolation.refresh_every_yr",
            refresh,
            (1.0..=1000.0).contains(&refresh),
            limit,
        );
        r.positive(
            "co2_forcing.co2_reference_ppm",
            self.co2_forcing.co2_reference_ppm,
        );
        r.not_negative(
            "co2_forcing.co2_forcing_w_m2",
            self.co2_forcing.co2_forcing_w_m2,
        );
        let bands = self.grid.bands;
        r.require(
            "grid.bands",
            bands as f64,
            bands <= MOST_BANDS && LatitudeBands::usable(bands),
            "must be a multiple of 4 from 12 to 288 (36 is 5 degrees; more than 288 need steps \
             shorter than a day near the poles)",
        );
        let steps = self.grid.steps_per_year;
        r.require(
            "grid.steps_per_year",
            steps as f64,
            self.steps_usable(),
            "must lie between 24 and 5000",
        );
        r.finish()
    }

    fn steps_usable(&self) -> bool {
        (STEPS_LIMIT.0..=STEPS_LIMIT.1).contains(&self.grid.steps_per_year)
    }

    fn check_needs(&self) -> Vec<Fault> {
        let p = &self.physics;
        let surfaces = p.energy_balance.as_ref().is_some_and(Params::has_surfaces);
        let wanted = [
            (
                "land_ice",
                "physics.energy_balance.albedo of kind \"surfaces\"",
                surfaces || self.land_ice == LandIceSpec::default(),
            ),
            (
                "physics",
                "physics.energy_balance",
                p.energy_balance.is_some(),
            ),
            (
                "physics.equatorial_pacific",
                "physics.ocean_column",
                p.equatorial_pacific.is_none() || p.ocean_column.is_some(),
            ),
        ];
        let missing = wanted.into_iter().filter(|(.., there)| !there);
        missing
            .map(|(key, needs, _)| Fault::Needs { key, needs })
            .collect()
    }

    fn setting(&self, faults: &mut Faults) -> Option<Setting> {
        // Unusable numbers were told already; a huge one must not take all memory either.
        if !self.steps_usable() {
            return None;
        }
        let bands = LatitudeBands::new(self.grid.bands, self.grid.spacing).ok()?;
        let surface = faults.take_all(self.surface.build(&bands), Fault::Range);
        let months = MonthWeights::new(self.grid.steps_per_year).ok();
        Some(Setting {
            surface: surface?,
            months: months?,
        })
    }
}
