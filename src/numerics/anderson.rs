//! Anderson's acceleration of a fixed-point iteration x <- g(x).
//!
//! What: from the last few pairs (x, g(x)) the next x.
//! Equation: with f = g(x) - x, the combination of the last m differences that makes
//! |f_k - dF gamma| smallest, x_{k+1} = g(x_k) - dG gamma (type II). The measure counts each
//! number with a weight of its own; numbers of weight 0 are carried along by the same combination.
//! Numerics: least squares by singular values; directions below 1e-10 of the largest are left out.
//! Numbers that never change keep their bits.
//! Source: Anderson 1965, J. ACM 12:547; Walker & Ni 2011, SIAM J. Numer. Anal. 49:1715 (memory).

use nalgebra::{DMatrix, DVector};
use std::collections::VecDeque;

/// Singular values below this share of the largest are noise.
const SMALLEST: f64 = 1e-10;

/// The last differences of an iteration.
#[derive(Clone, Debug)]
pub struct Anderson {
    depth: usize,
    weights: Vec<f64>,
    counted: Vec<usize>,
    last: Option<(Vec<f64>, Vec<f64>)>,
    /// Differences of f (weighted, counted numbers only) and of g.
    differences: VecDeque<(Vec<f64>, Vec<f64>)>,
}

impl Anderson {
    /// An acceleration that looks back `depth` differences; the measure counts number i with
    /// `weights[i]`, which must not be negative.
    pub fn new(depth: usize, weights: Vec<f64>) -> Self {
        let counted = (0..weights.len()).filter(|i| weights[*i] > 0.0).collect();
        Self {
            depth,
            counted,
            weights,
            last: None,
            differences: VecDeque::new(),
        }
    }

    /// Forgets everything, as after a jump.
    pub fn forget(&mut self) {
        self.last = None;
        self.differences.clear();
    }

    /// Largest weighted difference of two states.
    pub fn distance(&self, a: &[f64], b: &[f64]) -> f64 {
        let apart = |i: &usize| (self.weights[*i] * (a[*i] - b[*i])).abs();
        // Written so that NaN is the largest.
        self.counted.iter().map(apart).fold(
            0.0,
            |most, d| {
                if d > most || d.is_nan() { d } else { most }
            },
        )
    }

    /// The next x, from x and g(x); g(x) itself as long as nothing is known.
    pub fn next(&mut self, x: &[f64], g: &[f64]) -> Vec<f64> {
        let weigh = |i: &usize| self.weights[*i] * (g[*i] - x[*i]);
        let f: Vec<f64> = self.counted.iter().map(weigh).collect();
        if let Some((last_f, last_g)) = self.last.take() {
            let less = |a: &[f64], b: &[f64]| a.iter().zip(b).map(|(a, b)| a - b).collect();
            self.differences
                .push_back((less(&f, &last_f), less(g, &last_g)));
            if self.differences.len() > self.depth {
                self.differences.pop_front();
            }
        }
        let mut next = g.to_vec();
        for (gamma, (_, change)) in self.combination(&f).iter().zip(&self.differences) {
            for (value, change) in next.iter_mut().zip(change) {
                *value -= gamma * change;
            }
        }
        self.last = Some((f, g.to_vec()));
        next
    }

    /// The combination of differences that comes nearest to `f`.
    fn combination(&self, f: &[f64]) -> Vec<f64> {
        if self.differences.is_empty() {
            return Vec::new();
        }
        let columns: Vec<DVector<f64>> = self
            .differences
            .iter()
            .map(|(df, _)| DVector::from_column_slice(df))
            .collect();
        let matrix = DMatrix::from_columns(&columns);
        let svd = matrix.svd(true, true);
        let smallest = SMALLEST * svd.singular_values.max();
        // Fails only without the vectors, which were asked for.
        svd.solve(&DVector::from_column_slice(f), smallest)
            .map(|gamma| gamma.as_slice().to_vec())
            .unwrap_or_default()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// A linear map with known fixed point: g(x) = c + A (x - c).
    fn map(x: &[f64]) -> Vec<f64> {
        let rate = [0.99, 0.9, -0.5, 0.3];
        let fixed = [1.0, -2.0, 3.0, 0.5];
        (0..4)
            .map(|i| fixed[i] + rate[i] * (x[i] - fixed[i]))
            .chain([7.0])
            .collect()
    }

    #[test]
    fn analytic_a_linear_map_of_four_dimensions_is_solved_in_five_steps() {
        let mut anderson = Anderson::new(8, vec![1.0, 1.0, 1.0, 1.0, 0.0]);
        let mut x = vec![0.0, 0.0, 0.0, 0.0, 7.0];
        for _ in 0..6 {
            let g = map(&x);
            x = anderson.next(&x, &g);
        }
        for (x, fixed) in x.iter().zip([1.0, -2.0, 3.0, 0.5]) {
            assert!((x - fixed).abs() < 1e-8, "{x} {fixed}");
        }
        assert_eq!(x[4].to_bits(), 7.0_f64.to_bits());
    }

    #[test]
    fn nan_is_the_largest_distance() {
        let anderson = Anderson::new(2, vec![2.0, 0.0]);
        assert!((anderson.distance(&[1.0, 9.0], &[0.5, 0.0]) - 1.0).abs() < 1e-15);
        assert!(anderson.distance(&[f64::NAN, 0.0], &[0.0, 0.0]).is_nan());
    }
}
