//! Relaxation to the mean with a sharp ice edge (Budyko 1969) against its closed form.
//! Equations and tolerances: README.md.

use crate::energy_balance_set_up::{FEW_STEPS, one_surface, planet, steady};
use orbicline::grid::latitude::Spacing;
use orbicline::physics::Setting;
use orbicline::physics::energy_balance::params::{Albedo, IceEdge, Params, Transport};

/// Bands equal in area: edges of bands lie at all multiples of 1/900.
const BANDS: usize = 1800;

/// Numbers of one set-up.
struct Set {
    offset: f64,
    slope: f64,
    rate: f64,
    albedo: [f64; 2],
    threshold_c: f64,
}

/// Inputs of both sides, chosen.
const LISTED: Set = Set {
    offset: 203.3,
    slope: 2.09,
    rate: 3.81,
    albedo: [0.32, 0.62],
    threshold_c: -10.0,
};
/// Inputs of both sides, widely printed for Budyko 1969 (M).
const SET_M: Set = Set {
    offset: 202.0,
    slope: 1.9,
    rate: 3.04,
    albedo: [0.32, 0.62],
    threshold_c: -10.0,
};

/// Second Legendre coefficient of the sunlight.
const S2: f64 = -0.482;

/// What the kernel finds with the edge at the edge of a band.
struct Balance {
    edge: f64,
    edge_c: f64,
    mean_c: f64,
}

impl Set {
    fn params(&self, sine: f64) -> Params {
        let mut p = one_surface();
        p.longwave.offset_w_m2 = self.offset;
        p.longwave.slope_w_m2_k = self.slope;
        p.transport = Transport::MeanRelaxation {
            rate_w_m2_k: self.rate,
        };
        p.albedo = Albedo::IceLine {
            free: self.albedo[0],
            free_second_legendre: 0.0,
            ice: self.albedo[1],
            edge: IceEdge::Prescribed { sine },
        };
        p
    }

    /// Steady state with ice beyond edge `j` of the bands. The temperature jumps there; its value
    /// at the edge, which belongs to the mean of both albedos, is the mean of both limits. On
    /// either side the field is a parabola in x, so three band means give the limit exactly.
    fn balance(&self, setting: &Setting, q: f64, j: usize) -> Balance {
        let edge = setting.surface.bands.edge_sine()[j];
        let (air, _) = steady(&self.params(edge), setting, q, S2);
        let limit = |a: f64, b: f64, c: f64| (11.0 * a - 7.0 * b + 2.0 * c) / 6.0;
        let inner = limit(air[j - 1], air[j - 2], air[j - 3]);
        let outer = limit(air[j], air[j + 1], air[j + 2]);
        Balance {
            edge,
            edge_c: 0.5 * (inner + outer),
            mean_c: setting.surface.bands.mean(&air),
        }
    }

    /// Sunlight that puts the edge at the threshold; T + A/B is proportional to Q.
    fn sunlight_for(&self, setting: &Setting, j: usize) -> f64 {
        let cold = self.offset / self.slope;
        let q = 340.0;
        q * (self.threshold_c + cold) / (self.balance(setting, q, j).edge_c + cold)
    }
}

/// The edge of a band at a multiple of 1/900.
fn edge_number(x: f64) -> usize {
    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "a band number"
    )]
    let j = (900.0 * (1.0 + x)).round() as usize;
    j
}

/// Value at x of the polynomial through the points.
fn polynomial(points: &[(f64, f64)], x: f64) -> f64 {
    let term = |j: usize| {
        let others = (0..points.len()).filter(|&m| m != j);
        points[j].1
            * others
                .map(|m| (x - points[m].0) / (points[j].0 - points[m].0))
                .product::<f64>()
    };
    (0..points.len()).map(term).sum()
}

#[test]
fn analytic_sunlight_against_the_edge() {
    let setting = planet(BANDS, Spacing::EqualSine, FEW_STEPS, 0.0);
    // C.
    for (x, exact) in [(0.95, 335.143_973), (0.8, 325.750_361)] {
        let q = LISTED.sunlight_for(&setting, edge_number(x));
        assert!((q - exact).abs() < 1e-6, "Q({x}) = {q:.7}, exact {exact}");
    }
}

#[test]
fn analytic_fold_of_the_relaxation_model() {
    let setting = planet(BANDS, Spacing::EqualSine, FEW_STEPS, 0.0);
    let curve: Vec<(f64, f64)> = (585..=605)
        .step_by(2)
        .map(|k| {
            let x = f64::from(k) / 900.0;
            (x, LISTED.sunlight_for(&setting, edge_number(x)))
        })
        .collect();
    let least = (2..curve.len() - 2)
        .min_by(|&a, &b| curve[a].1.total_cmp(&curve[b].1))
        .unwrap();
    let points = &curve[least - 2..=least + 2];
    let (mut low, mut high) = (curve[least - 1].0, curve[least + 1].0);
    while high - low > 1e-9 {
        let third = (high - low) / 3.0;
        if polynomial(points, low + third) < polynomial(points, high - third) {
            high -= third;
        } else {
            low += third;
        }
    }
    let q = polynomial(points, low);
    // C: minimum of the closed form.
    assert!((low - 0.660_498_8).abs() < 1e-6, "fold at {low:.7}");
    assert!((q - 323.113_981_4).abs() < 1e-6, "fold at Q = {q:.7}");
}

#[test]
fn analytic_edge_temperatures_and_roots() {
    let setting = planet(BANDS, Spacing::EqualSine, FEW_STEPS, 0.0);
    let at = |j| SET_M.balance(&setting, 343.0, j);
    // C, as the roots below.
    let listed = [
        (0.25, -9.880_498),
        (0.5, -5.407_654),
        (0.75, -5.766_581),
        (0.9, -8.614_435),
        (0.95, -10.038_614),
    ];
    for (x, exact) in listed {
        let found = at(edge_number(x)).edge_c;
        assert!((found - exact).abs() < 1e-6, "T({x}) = {found:.7}");
    }
    // Rising through the threshold with the edge: unstable; falling: stable.
    for (exact, rising) in [(0.245_523_7, true), (0.948_749_4, false)] {
        let near = edge_number(exact);
        let states: Vec<Balance> = (near - 2..near + 2).map(at).collect();
        let inverse: Vec<(f64, f64)> = states.iter().map(|s| (s.edge_c, s.edge)).collect();
        let root = polynomial(&inverse, SET_M.threshold_c);
        assert!((root - exact).abs() < 1e-6, "root {root:.8}");
        assert_eq!(states[3].edge_c > states[0].edge_c, rising);
        if !rising {
            let means: Vec<(f64, f64)> = states.iter().map(|s| (s.edge, s.mean_c)).collect();
            let mean = polynomial(&means, root);
            let albedo = 1.0 - (SET_M.offset + SET_M.slope * mean) / 343.0;
            assert!((mean - 14.903_241).abs() < 1e-6, "mean {mean:.7}");
            assert!((albedo - 0.328_524).abs() < 1e-6, "albedo {albedo:.7}");
        }
    }
}
