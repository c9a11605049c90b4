//! Speed of the coupled model on one core: model years per second, and where the time goes.
//!
//! Every figure is the fastest of several stretches, so that other work on the machine counts
//! as little as possible; compare figures of one run with one another, not between machines.

use orbicline::config::run::{Built, Experiment};
use orbicline::forcing::YearForcing;
use orbicline::grid::calendar::Calendar;
use orbicline::grid::latitude::{LatitudeBands, Spacing};
use orbicline::model::clock::{Plan, SpinUp, TimeSpec};
use orbicline::model::observer::{Keep, Nobody};
use orbicline::orbit::elements::{Elements, PerihelionLongitude};
use orbicline::orbit::insolation::InsolationTable;
use orbicline::physics::exchange::Exchange;
use std::error::Error;
use std::io::Write;
use std::path::Path;
use std::time::Instant;

/// Stretches of which the fastest counts.
const STRETCHES: usize = 7;
/// Insolation tables of which the fastest counts.
const TABLES: u32 = 200;
/// Years in a stretch.
const YEARS: u32 = 400;

fn main() -> Result<(), Box<dyn Error>> {
    let mut out = std::io::stdout().lock();
    writeln!(
        out,
        "coupled years per second, one core, M = 1, insolation every 10 years, records kept"
    )?;
    writeln!(out, "{:>6} {:>10} {:>12}", "bands", "steps/yr", "years/s")?;
    for bands in [36, 72] {
        for steps in [48, 72] {
            let rate = years_per_second(&experiment(bands, steps)?)?;
            writeln!(out, "{bands:>6} {steps:>10} {rate:>12.0}")?;
        }
    }
    writeln!(
        out,
        "\ninsolation tables of a year: ns a value (a daily mean or a zenith cosine)"
    )?;
    for (bands, steps) in [(36, 48), (36, 72), (72, 72), (180, 365)] {
        let time = ns_per_value(bands, steps)?;
        writeln!(out, "{bands:>6} {steps:>10} {time:>12.2}")?;
    }
    writeln!(out, "\nshare of a year by component, 36 bands, 72 steps")?;
    for (name, share) in shares(&experiment(36, 72)?)? {
        writeln!(out, "{name:>32} {:>6.1} %", 100.0 * share)?;
    }
    Ok(())
}

fn experiment(bands: usize, steps: usize) -> Result<Experiment, Box<dyn Error>> {
    let file = Path::new(env!("CARGO_MANIFEST_DIR")).join("configs/reference.toml");
    let edits = [
        format!("grid.bands={bands}"),
        format!("grid.steps_per_year={steps}"),
    ];
    Ok(Experiment::load(&file, &edits)?)
}

/// The run loop as it is used, records included.
fn years_per_second(experiment: &Experiment) -> Result<f64, Box<dyn Error>> {
    let Built { mut model, .. } = experiment.build()?;
    let spin_up = SpinUp {
        seasonal_yr: 100,
        slow_years_per_seasonal_year: 60.0,
        settling_yr: 10,
    };
    model.spin_up(0.0, spin_up, &mut Nobody)?;
    let length_kyr = f64::from(YEARS) / 1000.0;
    let plan = Plan::new(&TimeSpec {
        start_kyr: length_kyr,
        end_kyr: 0.0,
        record_every_yr: 100,
        slow_years_per_seasonal_year: 1,
        spin_up,
    })
    .map_err(|faults| format!("{faults:?}"))?;
    let mut best = f64::INFINITY;
    for _ in 0..STRETCHES {
        let start = Instant::now();
        model.run(&plan, &mut Keep::default())?;
        best = best.min(start.elapsed().as_secs_f64());
    }
    Ok(f64::from(YEARS) / best)
}

/// Time for one value of an insolation table, the Sun's places included, ns.
fn ns_per_value(bands: u32, steps: usize) -> Result<f64, Box<dyn Error>> {
    let latitudes = LatitudeBands::new(bands as usize, Spacing::EqualLatitude)?;
    let mut table = InsolationTable::new(latitudes.edge_sine(), steps)?;
    let mut best = f64::INFINITY;
    for stretch in 0..TABLES {
        let start = Instant::now();
        // Another orbit each time, as in a run.
        table.update(&orbit_of(f64::from(stretch)), 1361.0, 0.2178);
        best = best.min(start.elapsed().as_secs_f64());
    }
    Ok(best * 1e9 / (2.0 * f64::from(bands) * steps as f64))
}

/// An orbit like today's, with another perihelion.
fn orbit_of(turn_deg: f64) -> Elements {
    Elements {
        eccentricity: 0.0167,
        obliquity_deg: 23.44,
        perihelion: PerihelionLongitude::from_heliocentric_deg(102.9 + turn_deg),
    }
}

/// Time of each component, of making the insolation table (a tenth of it a year), as shares.
fn shares(experiment: &Experiment) -> Result<Vec<(String, f64)>, Box<dyn Error>> {
    let Built { setting, .. } = experiment.build()?;
    let mut exchange = Exchange::new(setting.surface.bands.len());
    let mut components = experiment
        .run
        .physics
        .build(&setting, &mut exchange)
        .map_err(|faults| format!("{faults:?}"))?;
    let mut table =
        InsolationTable::new(setting.surface.bands.edge_sine(), setting.steps_per_year())?;
    let orbit = orbit_of(0.0);
    let mut best = vec![f64::INFINITY; components.len() + 1];
    for _ in 0..STRETCHES {
        let mut times = vec![0.0; components.len() + 1];
        for year in 0..YEARS {
            if year % 10 == 0 {
                let start = Instant::now();
                table.update(&orbit, 1361.0, 0.2178);
                times[components.len()] += start.elapsed().as_secs_f64();
            }
            let forcing = YearForcing {
                age_kyr: 0.0,
                orbit,
                co2_ppm: 280.0,
                greenhouse_w_m2: 0.0,
                land_ice_edge_deg: None,
                insolation_w_m2: &table.daily_mean_w_m2,
                zenith_cosine: &table.zenith_cosine,
                month_bounds: Calendar.month_bounds_fraction(),
                slow_years: 1.0,
            };
            for (component, time) in components.iter_mut().zip(&mut times) {
                let start = Instant::now();
                component.advance(&forcing, &mut exchange)?;
                *time += start.elapsed().as_secs_f64();
            }
        }
        for (best, time) in best.iter_mut().zip(times) {
            *best = best.min(time);
        }
    }
    let total: f64 = best.iter().sum();
    let names = components
        .iter()
        .map(|c| c.name().to_owned())
        .chain(["insolation".to_owned()]);
    Ok(names
        .zip(best)
        .map(|(name, time)| (name, time / total))
        .collect())
}
