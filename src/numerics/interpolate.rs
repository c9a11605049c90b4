//! Interpolation in tables.

/// Piecewise-linear interpolation in a table of increasing `x`; constant beyond its ends.
///
/// Returns NaN for an empty table.
pub fn linear(x: &[f64], y: &[f64], at: f64) -> f64 {
    let above = x.partition_point(|v| *v < at);
    match (above.checked_sub(1), x.get(above)) {
        (None, _) => y.first().copied().unwrap_or(f64::NAN),
        (Some(last), None) => y[last],
        (Some(below), Some(upper)) => {
            let share = (at - x[below]) / (upper - x[below]);
            y[below] + share * (y[above] - y[below])
        }
    }
}

#[cfg(test)]
mod tests {
    use super::linear;

    #[test]
    fn analytic_linear_functions_are_exact_and_ends_are_held() {
        let (x, y) = ([-1.0, 0.0, 4.0], [2.0, 3.0, 7.0]);
        for at in [-1.0, -0.3, 0.0, 2.5, 4.0] {
            assert!((linear(&x, &y, at) - (at + 3.0)).abs() < 1e-14);
        }
        assert_eq!((linear(&x, &y, -9.0), linear(&x, &y, 9.0)), (2.0, 7.0));
        assert!(linear(&[], &[], 0.0).is_nan());
    }
}
