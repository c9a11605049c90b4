//! Sunlight against ice edge for diffusion with a sharp edge (North 1975): curve, folds and
//! stability (slow: 10 s in all). Equations, sets and tolerances: README.md.

use crate::csv::numbers;
use crate::energy_balance_set_up::{
    FEW_STEPS, at_latitude, largest, one_surface, planet, run, steady, sunlight,
};
use orbicline::grid::latitude::Spacing;
use orbicline::physics::Setting;
use orbicline::physics::energy_balance::EnergyBalance;
use orbicline::physics::energy_balance::params::{Albedo, IceEdge, Params, Transport};

/// Temperature of the edge, degC.
const EDGE_C: f64 = -10.0;
/// Albedo of ice.
const ICE: f64 = 0.62;
/// Sunlight at which the curve is run; the field is linear in it.
const RUN_W_M2: f64 = 340.0;

/// Numbers of one set.
#[derive(Clone, Copy)]
struct Set {
    offset: f64,
    slope: f64,
    diffusivity: f64,
    s2: f64,
    free: [f64; 2],
}

const fn set(offset: f64, slope: f64, diffusivity: f64, s2: f64, free: [f64; 2]) -> Set {
    Set {
        offset,
        slope,
        diffusivity,
        s2,
        free,
    }
}

/// S1 to S4: inputs of both sides; S1 after North & Coakley 1979, S3 after North 1975 (M), S2 and
/// S4 chosen.
const SETS: [Set; 4] = [
    set(203.3, 2.09, 0.649, -0.477, [0.30, 0.0]),
    set(210.0, 2.0, 0.60, -0.477, [0.30, 0.0]),
    set(201.4, 1.45, 0.4495, -0.482, [0.303, 0.0779]),
    set(210.0, 2.0, 0.30, -0.477, [0.30, 0.0]),
];

impl Set {
    fn params(&self, edge: IceEdge) -> Params {
        let mut p = one_surface();
        p.longwave.offset_w_m2 = self.offset;
        p.longwave.slope_w_m2_k = self.slope;
        p.transport = Transport::Diffusion {
            diffusivity_w_m2_k: self.diffusivity,
            second_legendre_share: 0.0,
            relative_humidity: 0.0,
        };
        p.albedo = Albedo::IceLine {
            free: self.free[0],
            free_second_legendre: self.free[1],
            ice: ICE,
            edge,
        };
        p
    }

    /// Sunlight that holds the edge at sin(latitude) x, and the field it holds there.
    fn balance(&self, setting: &Setting, x: f64) -> (f64, Vec<f64>) {
        let p = self.params(IceEdge::Prescribed { sine: x });
        let (mut air, _) = steady(&p, setting, RUN_W_M2, self.s2);
        let cold = self.offset / self.slope;
        let edge_c = at_latitude(&air, x.asin().to_degrees());
        let factor = (EDGE_C + cold) / (edge_c + cold);
        for t in &mut air {
            *t = (*t + cold) * factor - cold;
        }
        (RUN_W_M2 * factor, air)
    }

    fn sunlight_for(&self, setting: &Setting, x: f64) -> f64 {
        self.balance(setting, x).0
    }

    /// Edge after `years` under sunlight q when it starts in balance at x.
    fn edge_after(&self, setting: &Setting, q: f64, x: f64, years: usize) -> f64 {
        let (_, air) = self.balance(setting, x);
        let p = self.params(IceEdge::Temperature {
            threshold_c: EDGE_C,
        });
        let mut model = EnergyBalance::new(&p, setting).unwrap();
        model.set_air_temperature_c(&air);
        let light = sunlight(
            setting,
            &[0, 2],
            |n, _| if n == 0 { q } else { q * self.s2 },
        );
        run(&mut model, setting, &light, years);
        let [south, north] = model.ice_edge_sine().unwrap();
        assert!((south - north).abs() < 1e-9, "{south} {north}");
        north
    }

    /// Extremum of `sign` times the curve between two places: the best of a scan, then the summit
    /// of a quartic fitted to nine points about it.
    fn fold(&self, setting: &Setting, (low, high): (f64, f64), sign: f64) -> (f64, f64) {
        let curve = |low: f64, high: f64, count: u32| -> Vec<(f64, f64)> {
            (0..=count)
                .map(|k| low + (high - low) * f64::from(k) / f64::from(count))
                .map(|x| (x, sign * self.sunlight_for(setting, x)))
                .collect()
        };
        let top = |points: &[(f64, f64)]| {
            let best = points.iter().max_by(|a, b| a.1.total_cmp(&b.1));
            best.unwrap().0
        };
        let mut x = top(&curve(low, high, 16));
        x = top(&curve(x - 0.008, (x + 0.008).min(0.9995), 16));
        // The curve bends sharply near the pole; the error of the bands, rough in x, asks for room.
        let reach = 0.02 * (1.0 - x).sqrt();
        let points = curve(x - reach, x + reach, 8);
        let (mut low, mut high) = (x - reach, x + reach);
        while high - low > 1e-8 {
            let third = (high - low) / 3.0;
            if quartic_fit(&points, low + third) > quartic_fit(&points, high - third) {
                high -= third;
            } else {
                low += third;
            }
        }
        (low, sign * quartic_fit(&points, low))
    }
}

/// Value at x of the quartic that fits the points best.
fn quartic_fit(points: &[(f64, f64)], x: f64) -> f64 {
    let middle = points[points.len() / 2].0;
    let half = points[points.len() - 1].0 - middle;
    let power = |x: f64, k: usize| {
        let k = i32::try_from(k).unwrap();
        ((x - middle) / half).powi(k)
    };
    let matrix = nalgebra::DMatrix::from_fn(points.len(), 5, |i, k| power(points[i].0, k));
    let values = nalgebra::DVector::from_fn(points.len(), |i, _| points[i].1);
    let normal = matrix.transpose() * &matrix;
    let fit = normal.lu().solve(&(matrix.transpose() * values)).unwrap();
    (0..5).map(|k| fit[k] * power(x, k)).sum()
}

fn grid(bands: usize) -> Setting {
    planet(bands, Spacing::EqualLatitude, FEW_STEPS, 0.0)
}

/// Largest difference from the exact curve for each set, W m-2.
fn curve_errors(bands: usize) -> [f64; 4] {
    let setting = grid(bands);
    let table = numbers(include_str!("ice_line.csv"));
    [0, 1, 2, 3].map(|s| {
        largest(
            table
                .iter()
                .map(|row| SETS[s].sunlight_for(&setting, row[0]) - row[1 + s]),
        )
    })
}

#[test]
fn analytic_ice_edge_against_sunlight() {
    let bands = [36, 144, 600, 1800];
    let errors = bands.map(curve_errors);
    for (limits, s) in [[0.25, 0.015, 6e-4, 1.5e-4]; 3]
        .into_iter()
        .chain([[0.45, 0.028, 1.1e-3, 3e-4]])
        .zip(0..)
    {
        for (r, limit) in limits.into_iter().enumerate() {
            let error = errors[r][s];
            assert!(
                error < limit,
                "S{}, {} bands: {error:e} W m-2",
                s + 1,
                bands[r]
            );
        }
        let order = (errors[0][s] / errors[2][s]).ln() / (600.0_f64 / 36.0).ln();
        assert!(order > 1.9, "S{}: order {order}", s + 1);
    }
}

#[test]
fn analytic_folds_of_the_curve() {
    let setting = grid(1800);
    // Exact folds (C).
    let large = [
        (0.621_07, 310.0762),
        (0.608_15, 323.2346),
        (0.571_60, 310.3663),
        (0.430_53, 320.9977),
    ];
    let small = [
        (0.944_78, 317.8408),
        (0.946_95, 332.6288),
        (0.981_80, 331.7778),
        (0.966_86, 371.1175),
    ];
    for (s, set) in SETS.iter().enumerate() {
        let cases = [(large[s], (0.3, 0.8), -1.0), (small[s], (0.9, 0.995), 1.0)];
        for ((x_exact, q_exact), range, sign) in cases {
            let (x, q) = set.fold(&setting, range, sign);
            assert!((x - x_exact).abs() < 2e-5, "S{}: fold at {x:.6}", s + 1);
            assert!((q - q_exact).abs() < 2e-4, "S{}: fold at {q:.5}", s + 1);
        }
    }
}

#[test]
fn analytic_edge_returns_where_the_curve_rises_and_departs_where_it_falls() {
    let setting = grid(180);
    // Sunlight, stable and unstable edge (C).
    let cases = [
        (SETS[0], 313.958_527, 0.810_840, 0.462_354),
        (SETS[3], 340.0, 0.725_513, 0.203_001),
    ];
    for (set, q, stable, unstable) in cases {
        for side in [-0.01, 0.01] {
            let after = |start: f64, years| set.edge_after(&setting, q, start + side, years);
            let returned = after(stable, 300);
            assert!((returned - stable).abs() < 5e-4, "{q}: {returned}");
            let departed = after(unstable, 10) - unstable;
            assert!(departed / side > 1.2, "{q}: {departed}");
            let end = if side > 0.0 { stable } else { 0.0 };
            let departed = after(unstable, 300);
            assert!((departed - end).abs() < 5e-4, "{q}: {departed}");
        }
    }
}

#[test]
fn analytic_hysteresis_ends_at_the_folds() {
    // Set S1, 0.4 W m-2 (0.1 %) to either side of each fold.
    let setting = grid(180);
    let after = |x, q| SETS[0].edge_after(&setting, q, x, 400);
    assert!(after(0.66, 310.0762 + 0.4) > 0.621);
    assert!(after(0.66, 310.0762 - 0.4) <= 0.0);
    assert!(after(0.93, 317.8408 - 0.4) < 0.945);
    assert!(after(0.93, 317.8408 + 0.4) >= 1.0);
}
