//! Tabulated profiles taken as straight lines between their points.
//!
//! y(x) = `y_k` + (`y_{k+1}` - `y_k`) (x - `x_k`)/(`x_{k+1}` - `x_k`), constant outside the table. Second-order
//! accurate for smooth profiles. `x` must increase; units are the caller's. Elementary.

/// Value and slope of the profile (`x`, `y`) at `at`. NaN when the table is empty.
///
/// # Panics
/// When `y` is shorter than `x`.
pub fn value_and_slope(x: &[f64], y: &[f64], at: f64) -> [f64; 2] {
    let above = x.partition_point(|v| *v <= at);
    match (above, x.len()) {
        (_, 0) => [f64::NAN; 2],
        (0, _) => [y[0], 0.0],
        (k, n) if k == n => [y[n - 1], 0.0],
        (k, _) => {
            let slope = (y[k] - y[k - 1]) / (x[k] - x[k - 1]);
            [y[k - 1] + slope * (at - x[k - 1]), slope]
        }
    }
}

/// Value of the profile (`x`, `y`) at `at`. NaN when the table is empty.
///
/// # Panics
/// When `y` is shorter than `x`.
pub fn value(x: &[f64], y: &[f64], at: f64) -> f64 {
    value_and_slope(x, y, at)[0]
}

/// First `x` at which the profile passes from at least `level` to below it; NaN when it never does.
pub fn first_fall_through(x: &[f64], y: &[f64], level: f64) -> f64 {
    for (xs, ys) in x.windows(2).zip(y.windows(2)) {
        if ys[0] >= level && ys[1] < level {
            return xs[0] + (xs[1] - xs[0]) * (ys[0] - level) / (ys[0] - ys[1]);
        }
    }
    f64::NAN
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn analytic_straight_lines_are_exact() {
        let x = [1.0, 2.0, 4.0];
        let y = [5.0, 3.0, -1.0];
        for (at, expected) in [(3.0, [1.0, -2.0]), (0.0, [5.0, 0.0]), (9.0, [-1.0, 0.0])] {
            let found = value_and_slope(&x, &y, at);
            assert!((found[0] - expected[0]).abs() + (found[1] - expected[1]).abs() < 1e-15);
        }
        assert!((first_fall_through(&x, &y, 1.0) - 3.0).abs() < 1e-15);
        assert!(first_fall_through(&x, &y, 6.0).is_nan());
        assert!(first_fall_through(&x, &y, -2.0).is_nan());
        assert!(value(&[], &[], 1.0).is_nan());
    }
}
