//! Steady states without an ice edge against closed forms. Equations and tolerances: README.md.

use crate::energy_balance_set_up::{
    FEW_STEPS, amplitude, at_latitude, largest, legendre, mode, one_surface, planet, run, steady,
    sunlight,
};
use orbicline::grid::latitude::Spacing;
use orbicline::physics::energy_balance::EnergyBalance;
use orbicline::physics::energy_balance::params::{Albedo, IceEdge, Params};

/// Q, W m-2, and second Legendre coefficient of the sunlight of the first two cases.
const LIGHT: (f64, f64) = (340.25, -0.477);

/// The one-surface model without ice.
fn ice_free(free: f64, free_second_legendre: f64) -> Params {
    Params {
        albedo: Albedo::IceLine {
            free,
            free_second_legendre,
            ice: 0.62,
            edge: IceEdge::Prescribed { sine: 1.0 },
        },
        ..one_surface()
    }
}

#[test]
fn analytic_two_mode_solution_is_exact_on_bands_equal_in_area() {
    let p = ice_free(0.303, 0.0);
    let (q, s2) = LIGHT;
    let t0 = (q * 0.697 - 203.3) / 2.09;
    let t2 = q * 0.697 * s2 / (2.09 + 6.0 * 0.649);
    assert!((t0 - 16.198_205_741_6).abs() < 1e-10 && (t2 + 18.904_174_005_7).abs() < 1e-10);
    for bands in [20, 36, 96] {
        let setting = planet(bands, Spacing::EqualSine, FEW_STEPS, 0.0);
        let (air, _) = steady(&p, &setting, q, s2);
        let exact = mode(&setting, 2).into_iter().map(|p2| t0 + t2 * p2);
        let error = largest(air.iter().zip(exact).map(|(t, e)| t - e));
        assert!(error < 1e-10, "{bands} bands: {error:e} K");
    }
}

#[test]
fn analytic_steady_state_does_not_depend_on_the_heat_capacity() {
    // 60 m of water need 200 years to reach what air without capacity has at once.
    let p = ice_free(0.303, 0.0779);
    let setting = planet(36, Spacing::EqualLatitude, FEW_STEPS, 0.0);
    let (q, s2) = LIGHT;
    let (at_once, _) = steady(&p, &setting, q, s2);
    let mut model = EnergyBalance::new(&p, &setting).unwrap();
    let light = sunlight(&setting, &[0, 2], |n, _| if n == 0 { q } else { q * s2 });
    run(&mut model, &setting, &light, 200);
    let air = model.air_temperature_c();
    let apart = air.iter().zip(&at_once);
    let error = largest(apart.map(|(a, b)| a - b));
    assert!(error < 1e-9, "{error:e} K");
}

#[test]
fn converges_second_order_in_latitude_bands() {
    let p = ice_free(0.303, 0.0779);
    let exact =
        |x: f64| 17.408_072_88 - 22.729_902_18 * legendre(2, x) + 0.431_464_61 * legendre(4, x);
    let errors = [36, 72, 144, 288].map(|bands| {
        let setting = planet(bands, Spacing::EqualLatitude, FEW_STEPS, 0.0);
        let (air, _) = steady(&p, &setting, LIGHT.0, LIGHT.1);
        let centre = setting.surface.bands.centre_deg();
        largest(
            air.iter()
                .zip(centre)
                .map(|(t, lat)| t - exact(lat.to_radians().sin())),
        )
    });
    for pair in errors.windows(2) {
        let order = (pair[0] / pair[1]).log2();
        assert!(
            (1.9..=2.1).contains(&order),
            "order {order:.3} from errors {errors:?} K"
        );
    }
}

#[test]
fn analytic_three_mode_solution_and_its_transport() {
    let p = ice_free(0.319, 0.202);
    let setting = planet(576, Spacing::EqualLatitude, FEW_STEPS, 0.0);
    let (air, exchange) = steady(&p, &setting, 340.0, -0.477);
    // All listed numbers: C.
    for (n, exact) in [(0, 16.646_92), (2, -28.369_73), (4, 1.118_00)] {
        let t = amplitude(&setting, &air, n);
        assert!((t - exact).abs() < 1e-3, "T{n} = {t:.5}, exact {exact}");
    }
    let places = [(0.0, 31.251_04), (30.0, 19.869_97), (90.0, -10.604_81)];
    for (latitude, exact) in places.into_iter().chain([(-90.0, -10.604_81)]) {
        let t = at_latitude(&air, latitude);
        assert!((t - exact).abs() < 1e-3, "T({latitude}) = {t:.5}");
    }
    let edges = setting.surface.bands.edge_deg();
    let (latitude, peak) = summit(edges, &exchange.atmosphere_transport_w);
    assert!((peak / 1e15 - 5.560_72).abs() < 1e-3, "peak {peak:e} W");
    assert!((latitude - 33.332_4).abs() < 1e-3, "peak at {latitude} deg");
}

#[test]
fn analytic_transport_of_the_second_mode_alone_peaks_at_35_deg() {
    let mut p = ice_free(0.319, 0.202);
    let setting = planet(288, Spacing::EqualSine, FEW_STEPS, 0.0);
    // -28.36973 P2 alone: constant co-albedo, sunlight scaled to give that amplitude.
    p.albedo = ice_free(0.303, 0.0).albedo;
    let q = 28.369_73 * (2.09 + 6.0 * 0.649) / (0.697 * 0.477);
    let (_, exchange) = steady(&p, &setting, q, -0.477);
    let edges = setting.surface.bands.edge_sine();
    let (sine, peak) = summit(edges, &exchange.atmosphere_transport_w);
    assert!((peak / 1e15 - 5.422_06).abs() < 1e-4, "peak {peak:e} W");
    let exact = (1.0_f64 / 3.0).sqrt();
    assert!((sine - exact).abs() < 1e-4, "peak at sin {sine}");
}

#[test]
fn analytic_sensitivity_is_the_forcing_over_the_slope() {
    let setting = planet(36, Spacing::EqualLatitude, FEW_STEPS, 0.0);
    let mut p = ice_free(0.319, 0.202);
    let (before, _) = steady(&p, &setting, 340.0, -0.477);
    p.longwave.offset_w_m2 -= 3.7;
    let (after, _) = steady(&p, &setting, 340.0, -0.477);
    let error = largest(after.iter().zip(&before).map(|(a, b)| a - b - 3.7 / 2.09));
    assert!(error < 1e-10, "{error:e} K");
}

/// Place and height of the maximum of a field given at even places: parabola through the largest
/// value and its neighbours.
fn summit(places: &[f64], values: &[f64]) -> (f64, f64) {
    let top = (1..values.len() - 1)
        .max_by(|&a, &b| values[a].total_cmp(&values[b]))
        .unwrap();
    let [a, b, c] = [values[top - 1], values[top], values[top + 1]];
    let shift = 0.5 * (a - c) / (a - 2.0 * b + c);
    let width = places[top + 1] - places[top];
    (places[top] + shift * width, b - 0.25 * (a - c) * shift)
}
