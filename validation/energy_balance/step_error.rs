//! Error of the reference model in the number of seasonal steps (slow: 6 s). See README.md.

use crate::csv::orbit;
use crate::energy_balance_set_up::{reference, run_with};
use orbicline::grid::calendar::{Calendar, MONTHS};
use orbicline::model::observer::Nobody;
use orbicline::orbit::insolation::InsolationTable;
use orbicline::physics::energy_balance::EnergyBalance;
use orbicline::physics::exchange::Exchange;
use orbicline::physics::{Component, Setting};

/// Phases of the year at which fields are compared.
const PHASES: usize = 12;
/// Steps of the run that counts as exact.
const FINE_STEPS: usize = 1152;
/// Years on the first orbit and on the second.
const YEARS: [usize; 2] = [20, 40];

/// Limits, K, for air, land, rms of air and annual mean of air: the earlier errors of README.md, twice
/// for land and the annual mean at 48 steps and the annual mean at 72 and 144.
const LIMITS: [(usize, [f64; 4]); 4] = [
    (48, [0.19, 1.12, 0.0138, 0.024]),
    (72, [0.104, 0.25, 0.0062, 0.0050]),
    (96, [0.070, 0.20, 0.0040, 0.0053]),
    (144, [0.034, 0.109, 0.0015, 0.0008]),
];

/// Temperatures 40 years after the orbit jumped, degC: air and land at 12 phases of the year,
/// `[phase][band]`, and the annual mean of the air. A phase is reached by starting the model's
/// year later in the season.
struct Course {
    air: Vec<Vec<f64>>,
    land: Vec<Vec<f64>>,
    annual_air: Vec<f64>,
    setting: Setting,
}

fn course(steps: usize, column: &Exchange) -> Course {
    let experiment = reference(&[format!("grid.steps_per_year={steps}")]);
    let setting = experiment.build().unwrap().setting;
    let greenhouse = 5.35 * (280.0_f64 / 353.0).ln();
    let p = experiment.run.physics.energy_balance.unwrap();
    let bands = &setting.surface.bands;
    let mut table = InsolationTable::new(bands.edge_sine(), steps).unwrap();
    let (mut air, mut land, mut annual_air) = (Vec::new(), Vec::new(), Vec::new());
    for phase in 0..PHASES {
        let equinox = Calendar.equinox_fraction() - phase as f64 / PHASES as f64;
        let mut model = EnergyBalance::new(&p, &setting).unwrap();
        let mut exchange = column.clone();
        let orbits = [orbit(0.0167, 23.45, 102.0), orbit(0.045, 24.3, 270.0)];
        for (elements, years) in orbits.iter().zip(YEARS) {
            table.update(elements, 1361.0, equinox);
            let (sun, zenith) = (&table.daily_mean_w_m2, &table.zenith_cosine);
            run_with(&mut model, &mut exchange, (sun, zenith), greenhouse, years);
        }
        air.push(model.air_temperature_c());
        land.push(model.land_temperature_c());
        annual_air = annual_mean_air(&model, bands.len());
    }
    Course {
        air,
        land,
        annual_air,
        setting,
    }
}

/// What a balanced ocean column tells the mixed layer; held during the comparison.
fn frozen_column() -> Exchange {
    let experiment = reference(&[]);
    let mut model = experiment.build().unwrap().model;
    let spin_up = experiment.run.time.spin_up;
    model.spin_up(0.0, spin_up, &mut Nobody).unwrap();
    model.exchange().clone()
}

/// Mean over all steps of the last year, from the monthly means.
fn annual_mean_air(model: &EnergyBalance, bands: usize) -> Vec<f64> {
    assert_eq!(model.variables()[1].name, "air_temperature_sea_level");
    let mut values = Vec::new();
    model.record(&mut values);
    let monthly = &values[MONTHS * bands..2 * MONTHS * bands];
    let months = monthly.chunks(bands).zip(Calendar.month_shares());
    months.fold(vec![0.0; bands], |mut sum, (month, share)| {
        sum.iter_mut().zip(month).for_each(|(s, v)| *s += share * v);
        sum
    })
}

/// The largest error, with its phase and latitude.
#[derive(Clone, Copy, Default)]
struct Worst(f64, usize, f64);

impl Worst {
    fn meet(&mut self, error: f64, phase: usize, latitude: f64) {
        if error.abs() > self.0 {
            *self = Self(error.abs(), phase, latitude);
        }
    }
}

/// Largest error of the air and of the land, area-weighted rms of the air, largest error of the
/// annual mean of the air, all in K.
fn errors(coarse: &Course, fine: &Course) -> [Worst; 4] {
    let surface = &fine.setting.surface;
    let (area, latitude) = (surface.bands.area_m2(), surface.bands.centre_deg());
    let total: f64 = area.iter().sum::<f64>() * PHASES as f64;
    let [mut air, mut land, mut annual] = [Worst::default(); 3];
    let mut squares = 0.0;
    for i in 0..area.len() {
        for phase in 0..PHASES {
            let d = coarse.air[phase][i] - fine.air[phase][i];
            squares += d * d * area[i] / total;
            air.meet(d, phase, latitude[i]);
            if surface.land_fraction[i] > 0.0 {
                let d = coarse.land[phase][i] - fine.land[phase][i];
                land.meet(d, phase, latitude[i]);
            }
        }
        annual.meet(coarse.annual_air[i] - fine.annual_air[i], 0, latitude[i]);
    }
    [air, land, Worst(squares.sqrt(), 0, 0.0), annual]
}

#[test]
#[expect(clippy::print_stdout, reason = "a table to read with --nocapture")]
fn converges_in_steps_for_the_reference_model() {
    let column = frozen_column();
    let fine = course(FINE_STEPS, &column);
    println!(
        "steps: max air, max land (phase/12, latitude), rms air, annual mean air (latitude); K"
    );
    let mut failures = Vec::new();
    for (steps, limits) in LIMITS {
        let [air, land, rms, annual] = errors(&course(steps, &column), &fine);
        println!(
            "{steps}: {:.4} ({}, {:.1}) {:.4} ({}, {:.1}) {:.5} {:.5} ({:.1})",
            air.0, air.1, air.2, land.0, land.1, land.2, rms.0, annual.0, annual.2
        );
        let found = [air.0, land.0, rms.0, annual.0];
        let beyond = found.into_iter().zip(limits).filter(|(f, l)| f > l);
        failures.extend(beyond.map(|(f, l)| (steps, f, l)));
    }
    assert!(failures.is_empty(), "steps, error, limit: {failures:?}");
}
