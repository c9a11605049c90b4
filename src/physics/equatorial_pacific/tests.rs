//! Tests of the equatorial feedback with prescribed columns.

use super::*;
use crate::physics::fixtures::{reference, surface, year};

fn params() -> Params {
    reference("equatorial_pacific")
}

/// Exchange with a mixed layer of 27.4 degC everywhere and a column 2 + 25 e^{-z/scale}.
fn exchange(scale_m: f64) -> Exchange {
    let mut e = Exchange::new(36);
    e.mixed_layer_temperature_c.fill(27.4);
    e.column_depth_m = (0..200).map(|k| 5.0 * f64::from(k) + 2.5).collect();
    let profile = |z: &f64| 2.0 + 25.0 * (-z / scale_m).exp();
    e.column_temperature_c = e.column_depth_m.iter().map(profile).collect();
    e
}

fn run(p: &Params, scale_m: f64) -> EquatorialPacific {
    let mut c = EquatorialPacific::new(p, &surface(36)).unwrap();
    c.advance(&year(1.0), &mut exchange(scale_m)).unwrap();
    c
}

#[test]
fn analytic_solution_of_a_linear_column_with_saturated_wind() {
    // tau = taumax: z_e = z_ent + sl taumax, d = c a_eq gamma (z_e - z_1) for T = 27 - gamma z.
    let mut p = params();
    p.stress_base = p.stress_limit;
    let mut e = exchange(400.0);
    let line = |z: &f64| 27.0 - 0.03 * z;
    e.column_temperature_c = e.column_depth_m.iter().map(line).collect();
    let mut c = EquatorialPacific::new(&p, &surface(36)).unwrap();
    c.advance(&year(1.0), &mut e).unwrap();
    let rate = p.upwelling_rate_s * p.stress_limit;
    let depth = p.entrainment_depth_m + p.tilt_m * p.stress_limit - 2.5;
    let expected = p.entrainment_efficiency * rate / (rate + p.damping_rate_s) * 0.03 * depth;
    let found = c.equator();
    assert!(
        (found.contrast_k - expected).abs() < 1e-10,
        "{found:?} {expected}"
    );
    assert!(found.gain.abs() < 1e-15);
    let mean = (1.0 - p.east_share) * found.west_c + p.east_share * found.east_c;
    assert!((mean - 27.4 - p.offset_k).abs() < 1e-10);
}

#[test]
fn analytic_gain_is_the_slope_of_the_right_hand_side() {
    let (p, e) = (params(), exchange(250.0));
    let feedback = Feedback {
        params: &p,
        depth: &e.column_depth_m,
        temperature: &e.column_temperature_c,
    };
    for d in [0.31, 2.17, 5.03, 8.9] {
        let h = 1e-6;
        let slope = (feedback.response(d + h)[0] - feedback.response(d - h)[0]) / (2.0 * h);
        assert!((feedback.response(d)[1] - slope).abs() < 1e-6);
    }
}

#[test]
fn analytic_kept_solutions_are_stable_and_solve_the_equation() {
    for scale in [80.0, 150.0, 250.0, 400.0, 800.0, 3000.0] {
        let c = run(&params(), scale);
        let (found, e) = (c.equator().clone(), exchange(scale));
        let feedback = Feedback {
            params: &c.params,
            depth: &e.column_depth_m,
            temperature: &e.column_temperature_c,
        };
        if found.contrast_k > 0.0 && found.contrast_k < 18.0 {
            assert!(feedback.excess(found.contrast_k).abs() < 1e-9, "{scale}");
            assert!(found.gain < 1.0, "{scale} {found:?}");
        }
    }
}

#[test]
fn regress_a_shallower_thermocline_strengthens_the_contrast_and_cools_every_coast() {
    let (shallow, deep) = (run(&params(), 900.0), run(&params(), 1500.0));
    assert!(shallow.equator().contrast_k > deep.equator().contrast_k + 0.5);
    assert!(shallow.equator().tilt_m > deep.equator().tilt_m);
    for (a, b) in shallow.coast_c().iter().zip(deep.coast_c()) {
        assert!(a < b);
    }
}

#[test]
fn analytic_with_two_stable_solutions_the_nearer_one_is_kept() {
    // A step in the column: no contrast felt above 100 m, all of it below.
    let mut p = params();
    (p.stress_base, p.stress_per_k, p.tilt_m) = (0.1, 0.2, 40.0);
    p.entrainment_efficiency = 1.0;
    let step = |z: &f64| 27.0 - 20.0 * ((z - 100.0) / 10.0).clamp(0.0, 1.0);
    let mut found = Vec::new();
    for first in [0.5, 17.0] {
        p.initial_contrast_k = first;
        let mut e = exchange(300.0);
        e.column_temperature_c = e.column_depth_m.iter().map(step).collect();
        let mut c = EquatorialPacific::new(&p, &surface(36)).unwrap();
        c.advance(&year(1.0), &mut e).unwrap();
        found.push(c.equator().contrast_k);
    }
    assert!(found[0] < 0.1 && found[1] > 10.0, "{found:?}");
}

#[test]
fn regress_absurd_columns_give_the_ends_of_the_range_and_missing_ones_no_number() {
    let mut p = params();
    p.entrainment_efficiency = 50.0;
    let c = run(&p, 100.0);
    assert!((c.equator().contrast_k - p.largest_contrast_k).abs() < 1e-12);
    let mut c = EquatorialPacific::new(&p, &surface(36)).unwrap();
    let mut e = exchange(100.0);
    e.column_temperature_c.reverse();
    c.advance(&year(1.0), &mut e).unwrap();
    assert!(c.equator().contrast_k.abs() < 1e-12 && c.equator().gain.abs() < 1e-12);
    c.advance(&year(1.0), &mut Exchange::new(36)).unwrap();
    assert!(c.equator().contrast_k.is_nan() && c.coast_c().iter().all(|t| t.is_nan()));
    e.column_temperature_c[3] = f64::NAN;
    assert!(c.advance(&year(1.0), &mut e).is_err());
}

#[test]
fn regress_record_restart_and_ranges() {
    let c = run(&params(), 300.0);
    let mut values = Vec::new();
    c.record(&mut values);
    assert_eq!(values.len(), 5 + 4);
    assert!(values.iter().all(|v| v.is_finite()) && c.variables().len() == 6);
    let mut other = EquatorialPacific::new(&params(), &surface(36)).unwrap();
    other.restore(&c.save()).unwrap();
    assert_eq!(other.save(), c.save());
    assert!(other.restore(&[]).is_err());
    let mut p = params();
    p.stress_limit = 0.0;
    p.coast.coastal_latitudes_deg.push(88.0);
    assert_eq!(p.check().unwrap_err().len(), 2);
    let mut land = surface(36);
    land.ocean_area_m2.fill(0.0);
    assert!(EquatorialPacific::new(&params(), &land).is_err());
}
