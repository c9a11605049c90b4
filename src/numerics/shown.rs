//! A number as a message shows it: in full where that is short, with a power of ten elsewhere.

use std::fmt;

/// Displays a number so that it can be read and typed again: `-0.00001`, `280`, `1e300`.
#[derive(Clone, Copy, Debug)]
pub struct Shown(pub f64);

impl fmt::Display for Shown {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let size = self.0.abs();
        if size.is_finite() && size > 0.0 && !(1e-6..1e15).contains(&size) {
            write!(f, "{:e}", self.0)
        } else {
            write!(f, "{}", self.0)
        }
    }
}

#[cfg(test)]
mod tests {
    use super::Shown;

    #[test]
    fn numbers_are_short_and_read_back() {
        for (value, text) in [
            (0.0, "0"),
            (-1e-5, "-0.00001"),
            (5e-324, "5e-324"),
            (-1e300, "-1e300"),
            (1e12, "1000000000000"),
            (f64::NAN, "NaN"),
            (f64::INFINITY, "inf"),
        ] {
            assert_eq!(Shown(value).to_string(), text);
        }
    }
}
