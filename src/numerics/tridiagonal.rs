//! Tridiagonal linear systems by elimination without pivoting.
//!
//! lower_i x_{i-1} + diagonal_i x_i + upper_i x_{i+1} = rhs_i, i = 0..n-1. [`solve`] eliminates
//! from both ends at once (two independent chains that the processor overlaps) and meets in the
//! middle; [`Factored`] is the usual Thomas algorithm with the divisions done beforehand. Stable
//! for the diagonally dominant matrices of diffusion (Higham 2002, Accuracy and Stability, 9.5;
//! memory).

/// Solves one system; `rhs` becomes the solution and `scratch` (same length) is overwritten.
///
/// `lower[0]` and `upper[n-1]` are not used. The number of unknowns must be even.
///
/// # Panics
/// When a slice is shorter than `rhs`.
#[inline(always)]
pub fn solve(lower: &[f64], diagonal: &[f64], upper: &[f64], rhs: &mut [f64], scratch: &mut [f64]) {
    let n = rhs.len();
    let half = n / 2;
    debug_assert!(n == 2 * half, "an even number of unknowns");
    let (lower, diagonal, upper) = (&lower[..n], &diagonal[..n], &upper[..n]);
    let scratch = &mut scratch[..n];
    let (mut up, mut up_ratio) = (0.0, 0.0);
    let (mut down, mut down_ratio) = (0.0, 0.0);
    for i in 0..half {
        let k = n - 1 - i;
        let up_pivot = 1.0 / (diagonal[i] - lower[i] * up_ratio);
        let down_pivot = 1.0 / (diagonal[k] - upper[k] * down_ratio);
        up = (rhs[i] - lower[i] * up) * up_pivot;
        down = (rhs[k] - upper[k] * down) * down_pivot;
        up_ratio = upper[i] * up_pivot;
        down_ratio = lower[k] * down_pivot;
        rhs[i] = up;
        rhs[k] = down;
        scratch[i] = up_ratio;
        scratch[k] = down_ratio;
    }
    let middle = (down - down_ratio * up) / (1.0 - down_ratio * up_ratio);
    rhs[half] = middle;
    rhs[half - 1] = up - up_ratio * middle;
    for i in half + 1..n {
        let k = n - 1 - i;
        rhs[k] -= scratch[k] * rhs[k + 1];
        rhs[i] -= scratch[i] * rhs[i - 1];
    }
}

/// A tridiagonal matrix factored once and solved for many right-hand sides.
#[derive(Clone, Debug)]
pub struct Factored {
    lower: Vec<f64>,
    inverse_pivot: Vec<f64>,
    ratio: Vec<f64>,
}

impl Factored {
    /// Factors the matrix given by its three diagonals, all of the same length.
    ///
    /// # Panics
    /// When the lengths differ.
    pub fn new(lower: &[f64], diagonal: &[f64], upper: &[f64]) -> Self {
        let n = diagonal.len();
        assert!(
            lower.len() == n && upper.len() == n,
            "diagonals of one length"
        );
        let (mut inverse_pivot, mut ratio) = (vec![0.0; n], vec![0.0; n]);
        let mut above = 0.0;
        for i in 0..n {
            inverse_pivot[i] = 1.0 / (diagonal[i] - lower[i] * above);
            ratio[i] = upper[i] * inverse_pivot[i];
            above = ratio[i];
        }
        let mut lower = lower.to_vec();
        lower.iter_mut().take(1).for_each(|first| *first = 0.0);
        Self {
            lower,
            inverse_pivot,
            ratio,
        }
    }

    /// Replaces `rhs` by the solution.
    ///
    /// # Panics
    /// When `rhs` is shorter than the matrix.
    #[inline(always)]
    pub fn solve(&self, rhs: &mut [f64]) {
        let n = self.ratio.len();
        let rhs = &mut rhs[..n];
        let mut carried = 0.0;
        let factors = self.lower.iter().zip(&self.inverse_pivot);
        for (value, (lower, inverse_pivot)) in rhs.iter_mut().zip(factors) {
            carried = (*value - lower * carried) * inverse_pivot;
            *value = carried;
        }
        for i in (0..n.saturating_sub(1)).rev() {
            rhs[i] -= self.ratio[i] * rhs[i + 1];
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Diagonals, a solution, and its right-hand side.
    struct Example {
        diagonals: [Vec<f64>; 3],
        x: Vec<f64>,
        rhs: Vec<f64>,
    }

    fn example() -> Example {
        let n = 10;
        let lower: Vec<f64> = (0..n).map(|i| -1.0 - 0.1 * i as f64).collect();
        let upper: Vec<f64> = (0..n).map(|i| -1.0 + 0.05 * i as f64).collect();
        let diagonal: Vec<f64> = (0..n).map(|i| 3.0 + 0.2 * i as f64).collect();
        let x: Vec<f64> = (0..n).map(|i| (i as f64).sin()).collect();
        let rhs = (0..n)
            .map(|i| {
                let below = if i > 0 { lower[i] * x[i - 1] } else { 0.0 };
                let above = if i + 1 < n { upper[i] * x[i + 1] } else { 0.0 };
                below + diagonal[i] * x[i] + above
            })
            .collect();
        Example {
            diagonals: [lower, diagonal, upper],
            x,
            rhs,
        }
    }

    #[test]
    fn analytic_both_solvers_return_the_known_solution() {
        let Example {
            diagonals: [lower, diagonal, upper],
            x,
            rhs,
        } = example();
        let mut once = rhs.clone();
        solve(
            &lower,
            &diagonal,
            &upper,
            &mut once,
            &mut vec![0.0; x.len()],
        );
        let mut factored = rhs;
        Factored::new(&lower, &diagonal, &upper).solve(&mut factored);
        for i in 0..x.len() {
            assert!((once[i] - x[i]).abs() < 1e-14 && (factored[i] - x[i]).abs() < 1e-14);
        }
    }
}
