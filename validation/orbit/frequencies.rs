//! Frequencies of the strongest lines in a complex series, as celestial mechanics measures them.
//!
//! Each line is sought near where it is expected, at the maximum of the windowed transform (window
//! (1 + cos)^2 over the series), and taken away before the next one; several rounds, in which each
//! is put back and sought again without the others. Source: Laskar 1990, Icarus 88:266 (memory),
//! simplified.

use std::f64::consts::{PI, TAU};

/// Arc seconds a year in one turn in 1000 years.
const ARCSEC_YR_KYR: f64 = 1296.0;
/// Rounds over all lines.
const ROUNDS: usize = 20;
/// Half of the range in which a line is sought, arc seconds a year.
const REACH: f64 = 0.3;

/// A published line.
#[derive(Clone, Debug)]
pub(crate) struct Line {
    name: &'static str,
    arcsec_yr: f64,
    tolerance: f64,
}

impl Line {
    pub(crate) fn new(name: &'static str, arcsec_yr: f64, tolerance: f64) -> Self {
        Self {
            name,
            arcsec_yr,
            tolerance,
        }
    }
}

/// Asserts that the published lines are found near their frequencies, and tells all.
pub(crate) fn check(values: &[(i32, [f64; 2])], published: &[Line]) {
    let found = lines(values, published);
    let told: Vec<_> = published
        .iter()
        .zip(&found)
        .map(|(line, found)| {
            let Line {
                name,
                arcsec_yr,
                tolerance,
            } = line;
            format!("{name}: {found:.4}, published {arcsec_yr} +- {tolerance}")
        })
        .collect();
    for (line, found) in published.iter().zip(&found) {
        let apart = (found - line.arcsec_yr).abs();
        assert!(apart < line.tolerance, "{}: {told:#?}", line.name);
    }
}

/// A term found: frequency, arc seconds a year, and complex amplitude.
#[derive(Clone, Copy, Default)]
struct Term {
    arcsec_yr: f64,
    amplitude: [f64; 2],
}

/// Times in kyr, values, weights.
struct Series {
    times_kyr: Vec<f64>,
    weights: Vec<f64>,
    rest: Vec<[f64; 2]>,
}

/// Frequencies near the expected ones, arc seconds a year, of values at ages in kyr.
fn lines(values: &[(i32, [f64; 2])], expected: &[Line]) -> Vec<f64> {
    let ages = values.iter().map(|(age, _)| f64::from(*age));
    let (oldest, youngest) = ages
        .clone()
        .fold((f64::MIN, f64::MAX), |(old, young), age| {
            (age.max(old), age.min(young))
        });
    let middle = 0.5 * (oldest + youngest);
    let times_kyr: Vec<_> = ages.map(|age| middle - age).collect();
    let window = |t: &f64| (1.0 + (TAU * t / (oldest - youngest)).cos()).powi(2);
    let mut series = Series {
        weights: times_kyr.iter().map(window).collect(),
        times_kyr,
        rest: values.iter().map(|(_, value)| *value).collect(),
    };
    let mut terms = vec![Term::default(); expected.len()];
    for _ in 0..ROUNDS {
        for (term, line) in terms.iter_mut().zip(expected) {
            series.add(*term, 1.0);
            *term = series.strongest_near(line.arcsec_yr);
            series.add(*term, -1.0);
        }
    }
    terms.iter().map(|term| term.arcsec_yr).collect()
}

impl Series {
    fn add(&mut self, term: Term, sign: f64) {
        let [re, im] = term.amplitude;
        for (t, value) in self.times_kyr.iter().zip(&mut self.rest) {
            let (sin, cos) = (TAU * term.arcsec_yr / ARCSEC_YR_KYR * t).sin_cos();
            value[0] += sign * (re * cos - im * sin);
            value[1] += sign * (re * sin + im * cos);
        }
    }

    /// Complex amplitude at a frequency.
    fn amplitude(&self, arcsec_yr: f64) -> [f64; 2] {
        let (mut sum, mut total) = ([0.0; 2], 0.0);
        for ((t, weight), [re, im]) in self.times_kyr.iter().zip(&self.weights).zip(&self.rest) {
            let (sin, cos) = (TAU * arcsec_yr / ARCSEC_YR_KYR * t).sin_cos();
            sum[0] += weight * (re * cos + im * sin);
            sum[1] += weight * (im * cos - re * sin);
            total += weight;
        }
        sum.map(|x| x / total)
    }

    /// The largest amplitude near a frequency: a grid, then the golden section.
    fn strongest_near(&self, centre: f64) -> Term {
        let size = |f: f64| self.amplitude(f).iter().map(|x| x * x).sum::<f64>();
        let step = REACH / 6.0;
        let grid = (-6..=6).map(|i| centre + f64::from(i) * step);
        let best = grid.max_by(|a, b| size(*a).total_cmp(&size(*b))).unwrap();
        let golden = 0.5 * (f64::sqrt(5.0) - 1.0);
        let (mut low, mut high) = (best - step, best + step);
        while high - low > 1e-6 {
            let (a, b) = (high - golden * (high - low), low + golden * (high - low));
            if size(a) > size(b) {
                high = b;
            } else {
                low = a;
            }
        }
        let arcsec_yr = 0.5 * (low + high);
        Term {
            arcsec_yr,
            amplitude: self.amplitude(arcsec_yr),
        }
    }
}

#[test]
fn analytic_lines_of_a_made_up_series_are_found() {
    let made = [
        (4.2574, 0.019, 0.3),
        (17.951, 0.012, 2.0),
        (17.314, 0.0096, -1.0),
    ];
    let values: Vec<_> = (0..=5500)
        .map(|age| {
            let mut value = [0.0; 2];
            for (f, amplitude, phase) in made {
                let angle = -f64::from(age) / ARCSEC_YR_KYR * TAU * f + phase * PI;
                value[0] += amplitude * angle.cos();
                value[1] += amplitude * angle.sin();
            }
            (age, value)
        })
        .collect();
    let near = made.map(|(f, ..)| Line::new("made up", f + 0.05, 0.0));
    for (found, (f, ..)) in lines(&values, &near).iter().zip(made) {
        assert!((found - f).abs() < 1e-4, "{found} {f}");
    }
}
