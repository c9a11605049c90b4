//! Error of the reference model in the number of seasonal steps. See README.md.

use crate::csv::orbit;
use crate::energy_balance_set_up::{reference, run_with};
use orbicline::grid::calendar::Calendar;
use orbicline::orbit::insolation::InsolationTable;
use orbicline::physics::energy_balance::EnergyBalance;
use orbicline::physics::exchange::Exchange;

/// Phases of the year at which fields are compared.
const PHASES: usize = 12;

/// Air and land temperature at 12 phases of the year, `[phase][band]`, 40 years after the orbit
/// jumped. A phase is reached by starting the model's year later in the season.
struct Course {
    air: Vec<Vec<f64>>,
    land: Vec<Vec<f64>>,
    area: Vec<f64>,
    latitude: Vec<f64>,
    has_land: Vec<bool>,
}

fn course(steps: usize) -> Course {
    let experiment = reference(&[format!("grid.steps_per_year={steps}")]);
    let setting = experiment.build().unwrap().setting;
    let greenhouse = 5.35 * (280.0_f64 / 353.0).ln();
    let p = experiment.run.physics.energy_balance.unwrap();
    let surface = &setting.surface;
    let mut table = InsolationTable::new(surface.bands.edge_sine(), steps).unwrap();
    let (mut air, mut land) = (Vec::new(), Vec::new());
    for phase in 0..PHASES {
        let equinox = Calendar.equinox_fraction() - phase as f64 / PHASES as f64;
        let mut model = EnergyBalance::new(&p, &setting).unwrap();
        let mut exchange = Exchange::new(surface.bands.len());
        let orbits = [orbit(0.0167, 23.45, 102.0), orbit(0.045, 24.3, 270.0)];
        for (elements, years) in orbits.iter().zip([20, 40]) {
            table.update(elements, 1361.0, equinox);
            let light = (
                table.daily_mean_w_m2.as_slice(),
                table.zenith_cosine.as_slice(),
            );
            run_with(&mut model, &mut exchange, light, greenhouse, years);
        }
        air.push(model.air_temperature_c().to_vec());
        land.push(model.land_temperature_c().to_vec());
    }
    Course {
        air,
        land,
        area: surface.bands.area_m2().to_vec(),
        latitude: surface.bands.centre_deg().to_vec(),
        has_land: surface.land_fraction.iter().map(|f| *f > 0.0).collect(),
    }
}

/// Largest error of the air and of the land, area-weighted rms of the air, largest error of the
/// annual mean of the air, all in K.
fn errors(coarse: &Course, fine: &Course) -> [f64; 4] {
    let total: f64 = fine.area.iter().sum();
    let mut mean = vec![0.0; fine.area.len()];
    let [mut air, mut land, mut squares] = [0.0_f64; 3];
    let mut place = (0, 0.0);
    for phase in 0..PHASES {
        for (i, sum) in mean.iter_mut().enumerate() {
            let d = coarse.air[phase][i] - fine.air[phase][i];
            air = air.max(d.abs());
            squares += d * d * fine.area[i] / total;
            *sum += d / PHASES as f64;
            let l = (coarse.land[phase][i] - fine.land[phase][i]).abs();
            if fine.has_land[i] && l > land {
                land = l;
                place = (phase, fine.latitude[i]);
            }
        }
    }
    eprintln!("land max at {place:?}");
    let annual = mean.iter().fold(0.0_f64, |m, v| m.max(v.abs()));
    [air, land, (squares / PHASES as f64).sqrt(), annual]
}

#[test]
fn converges_in_steps_for_the_reference_model() {
    let fine = course(1152);
    for steps in [48, 72, 96, 144] {
        let e = errors(&course(steps), &fine);
        eprintln!("{steps} {e:.5?}");
    }
}
