//! The energy-balance kernel against closed forms; see the README of this folder.

use crate::energy_balance_set_up::{legendre, mean_legendre, one_surface, planet, run, sunlight};
use orbicline::grid::latitude::Spacing;
use orbicline::physics::Setting;
use orbicline::physics::energy_balance::EnergyBalance;
use orbicline::physics::energy_balance::params::{Albedo, IceEdge, Params};

/// Steady state under constant sunlight Q (1 + s2 P2).
fn steady(p: &Params, setting: &Setting, q: f64, s2: f64) -> Vec<f64> {
    let mut model = EnergyBalance::new(p, setting).unwrap();
    let light = sunlight(setting, &[0, 2], |n, _| if n == 0 { q } else { q * s2 });
    run(&mut model, setting, &light, 400);
    model.air_temperature_c().clone()
}

#[test]
fn analytic_two_mode_solution_is_exact_on_bands_equal_in_area() {
    let p = one_surface();
    for bands in [20, 36, 96] {
        let setting = planet(bands, Spacing::EqualSine, 24, 0.0);
        let air = steady(&p, &setting, 340.25, -0.477);
        let (t0, t2) = (16.198_205_741_6, -18.904_174_005_7);
        for (x, t) in setting.surface.bands.edge_sine().windows(2).zip(&air) {
            let exact = t0 + t2 * mean_legendre(2, x[0], x[1]);
            assert!(
                (t - exact).abs() < 1e-9,
                "{bands} bands: {t} against {exact}"
            );
        }
    }
}

#[test]
fn converges_second_order_in_latitude_bands() {
    let mut p = one_surface();
    p.albedo = Albedo::IceLine {
        free: 0.303,
        free_second_legendre: 0.0779,
        ice: 0.62,
        edge: IceEdge::Prescribed { sine: 1.0 },
    };
    let exact =
        |x: f64| 17.408_072_88 - 22.729_902_18 * legendre(2, x) + 0.431_464_61 * legendre(4, x);
    let errors: Vec<f64> = [36, 72, 144, 288]
        .iter()
        .map(|&bands| {
            let setting = planet(bands, Spacing::EqualLatitude, 24, 0.0);
            let air = steady(&p, &setting, 340.25, -0.477);
            let centre = setting.surface.bands.centre_deg();
            air.iter()
                .zip(centre)
                .map(|(t, lat)| (t - exact(lat.to_radians().sin())).abs())
                .fold(0.0, f64::max)
        })
        .collect();
    println!("errors {errors:?}");
}
