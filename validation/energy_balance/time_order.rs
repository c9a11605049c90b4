//! Order in time of air, land, water and seasonal thermocline coupled by moist diffusion and bulk
//! fluxes, without ice or snow. See README.md.

use crate::energy_balance_set_up::{planet, reference, run, sunlight};
use orbicline::grid::latitude::Spacing;
use orbicline::physics::energy_balance::EnergyBalance;
use orbicline::physics::energy_balance::params::{Albedo, Params, SeasonalThermocline};
use std::f64::consts::PI;

/// The reference set-up with one albedo for bare and snow-covered land, warm enough that no water
/// freezes, and shallow enough to forget its start in some decades.
fn smooth() -> Params {
    let mut p = reference(&[]).run.physics.energy_balance.unwrap();
    p.albedo = Albedo::Surfaces {
        water: 0.30,
        water_sine: 0.0,
        water_second_legendre: 0.0,
        water_zenith: 0.0,
        land_excess: 0.01,
        snow: 0.31,
        sea_ice: 0.58,
        ice_sheet: 0.68,
        snow_temperature_c: 0.0,
        snow_width_k: 3.0,
    };
    p.longwave.offset_w_m2 = 190.0;
    p.mixed_layer.depth_m.iter_mut().for_each(|d| *d *= 0.5);
    p.seasonal_thermocline = Some(SeasonalThermocline {
        thickness_m: 20.0,
        exchange_w_m2_k: 25.0,
    });
    p
}

/// Air, land (degC) and water (enthalpy over 1e8 J m-2 K-1) at the end of the year, for four
/// phases of the sunlight.
fn fields(steps: usize) -> [Vec<f64>; 3] {
    let setting = planet(12, Spacing::EqualLatitude, steps, 0.3);
    let mut all = [const { Vec::new() }; 3];
    for phase in [0.0, 0.25, 0.5, 0.75] {
        let mut model = EnergyBalance::new(&smooth(), &setting).unwrap();
        let light = sunlight(&setting, &[0, 1, 2], |n, t| match n {
            0 => 340.0,
            1 => -240.0 * (2.0 * PI * (t + phase)).cos(),
            _ => -140.0 + 40.0 * (4.0 * PI * (t + phase)).cos(),
        });
        run(&mut model, &setting, &light, 60);
        assert!(model.ocean_enthalpy_j_m2().iter().all(|e| *e > 0.0));
        let [air, land, water] = &mut all;
        air.extend(model.air_temperature_c());
        land.extend(model.land_temperature_c());
        water.extend(model.ocean_enthalpy_j_m2().iter().map(|e| e / 1e8));
    }
    all
}

fn rms(a: &[f64], b: &[f64]) -> f64 {
    let squares: f64 = a.iter().zip(b).map(|(x, y)| (x - y) * (x - y)).sum();
    (squares / a.len() as f64).sqrt()
}

#[test]
fn converges_third_order_in_steps_for_the_smooth_coupled_model() {
    let fine = fields(4608);
    let errors = [96, 192, 288, 576].map(|steps| {
        let coarse = fields(steps);
        [0, 1, 2].map(|f| rms(&coarse[f], &fine[f]))
    });
    for (name, f) in [("air", 0), ("land", 1), ("water", 2)] {
        for (a, b) in [(0, 1), (2, 3)] {
            let order = (errors[a][f] / errors[b][f]).log2();
            assert!(order >= 2.9, "{name}: order {order:.3}, errors {errors:?}");
        }
    }
}
