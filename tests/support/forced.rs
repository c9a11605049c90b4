//! The forcing of an experiment, for models put together by hand.

use orbicline::config::run::Experiment;
use orbicline::forcing::carbon_dioxide::CarbonDioxide;
use orbicline::forcing::drive::{Drive, DriveNumbers, Sources};
use orbicline::forcing::months::Months;
use orbicline::orbit::solution::Orbit;
use orbicline::physics::Setting;

/// Its orbit and sunlight, with carbon dioxide held at 280 ppm.
pub(crate) fn drive(experiment: &Experiment, setting: &Setting) -> Drive {
    let run = &experiment.run;
    let numbers = DriveNumbers {
        end_kyr: run.time.end_kyr,
        solar_constant_w_m2: run.insolation.solar_constant_w_m2,
        refresh_yr: run.insolation.refresh_every_yr,
        co2_reference_ppm: run.co2_forcing.co2_reference_ppm,
        co2_forcing_w_m2: run.co2_forcing.co2_forcing_w_m2,
    };
    let orbit = Orbit::build(&run.orbit).expect("an orbit");
    let carbon_dioxide = CarbonDioxide::constant(280.0).expect("a concentration");
    let edges = setting.surface.bands.edge_sine();
    let steps = setting.steps_per_year();
    let months = Months::new(run.calendar).expect("a calendar");
    let sources = Sources {
        orbit,
        mask: None,
        carbon_dioxide,
        months,
        land_ice: None,
    };
    Drive::new(sources, numbers, edges, steps).expect("a forcing")
}
