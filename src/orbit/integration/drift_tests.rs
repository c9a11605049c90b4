//! The Kepler drift against Kepler's equation.

use super::*;
use crate::orbit::integration::eight::PLANETS;
use crate::orbit::kepler::eccentric_anomaly_rad;

/// Position and velocity on an ellipse in a tilted plane at a mean anomaly.
fn on_ellipse(a: f64, e: f64, mu: f64, mean: f64) -> [[f64; 3]; 2] {
    let anomaly = eccentric_anomaly_rad(mean, e);
    let (sin, cos) = anomaly.sin_cos();
    let n = (mu / (a * a * a)).sqrt();
    let rate = n / (1.0 - e * cos);
    let b = a * (1.0 - e * e).sqrt();
    let tilted = |x: f64, y: f64| [x, 0.8 * y, 0.6 * y];
    [
        tilted(a * (cos - e), b * sin),
        tilted(-a * sin * rate, b * cos * rate),
    ]
}

fn vectors(bodies: &[[[f64; 3]; 2]; PLANETS], which: usize) -> Vectors {
    std::array::from_fn(|axis| Eight::from_array(&std::array::from_fn(|i| bodies[i][which][axis])))
}

/// Largest error, relative to the size of orbit and speed, of a drift of so many radians of mean
/// anomaly from eight places on an ellipse.
fn error(e: f64, radians: f64) -> f64 {
    let (a, mu) = (0.387, 2.96e-4);
    let n = f64::sqrt(mu / (a * a * a));
    let places: [f64; PLANETS] = std::array::from_fn(|i| -3.0 + 0.8 * i as f64);
    let start = places.map(|mean| on_ellipse(a, e, mu, mean));
    let end = places.map(|mean| on_ellipse(a, e, mu, mean + radians));
    let (mut r, mut v) = (vectors(&start, 0), vectors(&start, 1));
    let attraction = Attraction::new(Eight::splat(mu));
    drift(&attraction, &mut r, &mut v, radians / n);
    let apart = |got: Vectors, which: usize, size: f64| {
        let expected = vectors(&end, which);
        let mut largest = 0.0_f64;
        for (got, expected) in got.iter().zip(expected) {
            for difference in (*got - expected).to_array() {
                largest = largest.max(difference.abs() / size);
            }
        }
        largest
    };
    apart(r, 0, a).max(apart(v, 1, a * n))
}

#[test]
fn analytic_drift_follows_the_ellipse_both_ways() {
    // The longest stage of a step of 34 d moves Mercury by 0.83 rad of mean anomaly.
    for e in [0.0, 0.05, 0.21, 0.3, 0.35] {
        for radians in [1e-6, 1e-3, 0.03, 0.2, 0.5, 0.83] {
            for radians in [radians, -radians] {
                let error = error(e, radians);
                assert!(error < 1.5e-14, "e {e}, {radians} rad: {error:e}");
            }
        }
    }
}

#[test]
fn conserves_energy_and_angular_momentum_of_each_ellipse() {
    let mu = 2.96e-4;
    let places: [f64; PLANETS] = std::array::from_fn(|i| 0.7 * i as f64);
    let bodies = places.map(|mean| on_ellipse(0.387, 0.25, mu, mean));
    let (mut r, mut v) = (vectors(&bodies, 0), vectors(&bodies, 1));
    let attraction = Attraction::new(Eight::splat(mu));
    let energy = |r: &Vectors, v: &Vectors| {
        (dot(v, v) * 0.5 - Eight::splat(mu) / dot(r, r).sqrt()).to_array()
    };
    let momentum = |r: &Vectors, v: &Vectors| (r[0] * v[1] - r[1] * v[0]).to_array();
    let before = (energy(&r, &v), momentum(&r, &v));
    for _ in 0..10_000 {
        drift(&attraction, &mut r, &mut v, 10.0);
    }
    let after = (energy(&r, &v), momentum(&r, &v));
    for i in 0..PLANETS {
        assert!((after.0[i] / before.0[i] - 1.0).abs() < 1e-12, "{after:?}");
        assert!((after.1[i] / before.1[i] - 1.0).abs() < 1e-12, "{after:?}");
    }
}
