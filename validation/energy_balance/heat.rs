//! The heat account of the energy balance closes every year, and none of its flows can be left
//! out. See README.md.

use crate::csv::orbit;
use crate::energy_balance_set_up::{one_surface, planet, reference, run_with, sunlight};
use orbicline::grid::calendar::Calendar;
use orbicline::grid::latitude::Spacing;
use orbicline::orbit::insolation::InsolationTable;
use orbicline::physics::energy_balance::EnergyBalance;
use orbicline::physics::energy_balance::params::{Emitter, Params};
use orbicline::physics::exchange::Exchange;
use orbicline::physics::{Component, Setting};
use orbicline::units::{EARTH_RADIUS_M, YEAR_SECONDS};
use std::collections::BTreeSet;
use std::f64::consts::PI;

/// A set-up that has run some years, with the forcing of a year.
struct Running {
    model: EnergyBalance,
    exchange: Exchange,
    light: Vec<f64>,
    zenith: Vec<f64>,
}

impl Running {
    fn new(p: &Params, setting: &Setting, light: Vec<f64>, zenith: Vec<f64>) -> Self {
        Self {
            model: EnergyBalance::new(p, setting).unwrap(),
            exchange: Exchange::new(setting.surface.bands.len()),
            light,
            zenith,
        }
    }

    fn linear(p: &Params, land: f64) -> Self {
        let setting = planet(36, Spacing::EqualLatitude, 72, land);
        let light = sunlight(&setting, &[0, 1, 2], |n, t| match n {
            0 => 340.0,
            1 => -260.0 * (2.0 * PI * t).cos(),
            _ => -160.0,
        });
        let zenith = vec![0.65; light.len()];
        Self::new(p, &setting, light, zenith)
    }

    /// The reference set-up with heat, upwelling and sinking as an ocean column would ask.
    fn full() -> Self {
        let experiment = reference(&[]);
        let setting = experiment.build().unwrap().setting;
        let p = experiment.run.physics.energy_balance.unwrap();
        let surface = &setting.surface;
        let mut table =
            InsolationTable::new(surface.bands.edge_sine(), setting.steps_per_year()).unwrap();
        table.update(
            &orbit(0.04, 24.0, 200.0),
            1361.0,
            Calendar.equinox_fraction(),
        );
        let mut all = Self::new(&p, &setting, table.daily_mean_w_m2, table.zenith_cosine);
        let ocean: f64 = surface.ocean_area_m2.iter().sum();
        let e = &mut all.exchange;
        e.deep_sinking_m3_s = 2.0e7;
        e.subtropical_sinking_m3_s = 3.0e7;
        for (i, area) in surface.ocean_area_m2.iter().enumerate() {
            e.upwelling_m3_s[i] = 5.0e7 * area / ocean;
            e.column_heat_w[i] = 3.0 * area * (i as f64 / 7.0).sin() + 4.0 * area;
        }
        all
    }

    fn year(&mut self) {
        let forcing = (self.light.as_slice(), self.zenith.as_slice());
        run_with(&mut self.model, &mut self.exchange, forcing, -1.2, 1);
    }
}

fn two_surfaces() -> Params {
    let mut p = one_surface();
    p.air_shortwave_share = 0.0;
    p.air_heat_capacity_j_m2_k = 0.0;
    p.longwave.emitter = Emitter::Surface;
    p.surface_exchange.sensible_w_m2_k = 12.0;
    p
}

/// Largest imbalance of a year, W m-2 of the globe, when nothing is left out, and the smallest
/// that leaving out one flow makes. Names of the flows met are added to `met`.
fn imbalance(mut running: Running, met: &mut BTreeSet<&'static str>) -> (f64, f64) {
    let sphere = 4.0 * PI * EARTH_RADIUS_M * EARTH_RADIUS_M;
    let (mut closed, mut broken) = (0.0_f64, f64::INFINITY);
    running.year();
    let mut before = running.model.accounts().remove(0).stored;
    for _ in 0..30 {
        running.year();
        let account = running.model.accounts().remove(0);
        let flows: Vec<_> = account
            .from_outside
            .iter()
            .chain(&account.from_components)
            .collect();
        let per = 1.0 / (sphere * YEAR_SECONDS);
        let residual = |left_out: Option<usize>| {
            let mut rest = account.stored;
            rest.add_sum(before.negated());
            let kept = flows.iter().enumerate();
            for (_, flow) in kept.filter(|(i, _)| Some(*i) != left_out) {
                rest.add_sum(flow.amount.negated());
            }
            (rest.value() * per).abs()
        };
        closed = closed.max(residual(None));
        for (i, flow) in flows.iter().enumerate() {
            if flow.amount.value().abs() > 0.0 {
                met.insert(flow.name);
                broken = broken.min(residual(Some(i)));
            }
        }
        before = account.stored;
    }
    (closed, broken)
}

#[test]
fn conserves_heat_of_every_year_and_needs_every_flow() {
    let set_ups = [
        ("one surface", Running::linear(&one_surface(), 0.0)),
        ("two surfaces", Running::linear(&two_surfaces(), 0.4)),
        ("full", Running::full()),
    ];
    let mut met = BTreeSet::new();
    for (name, running) in set_ups {
        let (closed, broken) = imbalance(running, &mut met);
        assert!(closed < 1e-12, "{name}: {closed:e} W m-2");
        assert!(broken > 1.0, "{name}: a flow of {broken:e} W m-2 only");
    }
    assert_eq!(met.len(), 6, "flows met: {met:?}");
}
