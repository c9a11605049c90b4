//! Linear least squares of one series on several others.
//!
//! y = b0 + sum b_k x_k + residual, solved by singular-value decomposition (Golub & Van Loan 2013,
//! Matrix Computations, 5.5; memory), predictors first centred and scaled so that their units do
//! not matter for the condition. Reports the share of variance explained; it does not report
//! significance, since the residuals of slow systems are not independent.

use nalgebra::{DMatrix, DVector};

/// A fit.
#[derive(Clone, Debug, PartialEq)]
pub struct Fit {
    /// b0, the mean of y when the predictors are at their means.
    pub mean: f64,
    /// `b_k`, in units of y per unit of the predictor; zero for a predictor that does not vary.
    pub slopes: Vec<f64>,
    /// 1 - variance of the residual / variance of y, 0-1; NaN when y does not vary.
    pub explained: f64,
}

/// Why there is no fit.
#[derive(Clone, Copy, Debug, PartialEq, Eq, thiserror::Error)]
pub enum FitError {
    /// Series of different lengths.
    #[error("the series have {y} and {x} values: they must be equally long")]
    Lengths {
        /// Values of y.
        y: usize,
        /// Values of a predictor.
        x: usize,
    },
    /// Not enough values.
    #[error("{values} finite values cannot determine {unknowns} unknowns: take more")]
    TooFew {
        /// Values left.
        values: usize,
        /// Unknowns.
        unknowns: usize,
    },
    /// The decomposition gave no solution.
    #[error("the predictors cannot be told apart")]
    Singular,
}

/// Fits `y` on `predictors`, leaving out places where any of them is not finite.
///
/// # Errors
/// When lengths differ, too few values are left, or the predictors cannot be told apart.
pub fn fit(y: &[f64], predictors: &[&[f64]]) -> Result<Fit, FitError> {
    if let Some(x) = predictors.iter().find(|x| x.len() != y.len()) {
        return Err(FitError::Lengths {
            y: y.len(),
            x: x.len(),
        });
    }
    let usable: Vec<usize> = (0..y.len())
        .filter(|&i| y[i].is_finite() && predictors.iter().all(|x| x[i].is_finite()))
        .collect();
    let unknowns = predictors.len() + 1;
    if usable.len() <= unknowns {
        return Err(FitError::TooFew {
            values: usable.len(),
            unknowns,
        });
    }
    let picked = |x: &[f64]| DVector::from_iterator(usable.len(), usable.iter().map(|&i| x[i]));
    let target = picked(y);
    let mean = target.mean();
    let centred = target.add_scalar(-mean);
    let columns: Vec<(DVector<f64>, f64)> = predictors.iter().map(|x| scaled(&picked(x))).collect();
    let varying: Vec<usize> = (0..columns.len()).filter(|&k| columns[k].1 > 0.0).collect();
    let mut slopes = vec![0.0; predictors.len()];
    let mut residual = centred.clone();
    if !varying.is_empty() {
        let matrix = DMatrix::from_columns(
            &varying
                .iter()
                .map(|&k| columns[k].0.clone())
                .collect::<Vec<_>>(),
        );
        let solution = matrix
            .clone()
            .svd(true, true)
            .solve(&centred, 1e-12)
            .map_err(|_| FitError::Singular)?;
        residual -= matrix * &solution;
        for (place, &k) in varying.iter().enumerate() {
            slopes[k] = solution[place] / columns[k].1;
        }
    }
    let explained = 1.0 - residual.norm_squared() / centred.norm_squared();
    Ok(Fit {
        mean,
        slopes,
        explained,
    })
}

/// Centred and divided by its standard deviation, which is returned (zero when constant).
fn scaled(x: &DVector<f64>) -> (DVector<f64>, f64) {
    let centred = x.add_scalar(-x.mean());
    let spread = (centred.norm_squared() / x.len() as f64).sqrt();
    let level = x.amax().max(f64::MIN_POSITIVE);
    if spread > 1e-12 * level {
        (centred / spread, spread)
    } else {
        (centred, 0.0)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn analytic_a_linear_combination_is_recovered() {
        let a: Vec<f64> = (0..50).map(|i| (f64::from(i) * 0.3).sin()).collect();
        let b: Vec<f64> = (0..50).map(|i| 1e6 * (f64::from(i) * 0.7).cos()).collect();
        let constant = vec![5.0; 50];
        let y: Vec<f64> = a
            .iter()
            .zip(&b)
            .map(|(a, b)| 3.0 + 2.0 * a - 4e-6 * b)
            .collect();
        let fit = fit(&y, &[&a, &b, &constant]).unwrap();
        assert!((fit.slopes[0] - 2.0).abs() < 1e-12 && (fit.slopes[1] + 4e-6).abs() < 1e-17);
        assert!(fit.slopes[2] == 0.0 && (fit.explained - 1.0).abs() < 1e-12);
    }

    #[test]
    fn gaps_are_left_out_and_shortage_is_said() {
        let x = [0.0, 1.0, 2.0, 3.0, 4.0];
        let mut y = [1.0, 3.0, f64::NAN, 7.0, 9.0];
        let slope = fit(&y, &[&x]).unwrap().slopes[0];
        assert!((slope - 2.0).abs() < 1e-12);
        y[0] = f64::NAN;
        y[1] = f64::NAN;
        assert_eq!(
            fit(&y, &[&x]),
            Err(FitError::TooFew {
                values: 2,
                unknowns: 2
            })
        );
        assert_eq!(fit(&y[1..], &[&x]), Err(FitError::Lengths { y: 4, x: 5 }));
    }
}
