//! Compensated summation, for budgets that must close to round-off over millions of years.
//!
//! Neumaier's variant of Kahan summation (Neumaier 1974, Z. Angew. Math. Mech. 54:39; memory):
//! the error is of the order of one rounding of the result, whatever the number of terms.

/// A running sum with its rounding error carried along.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct CompensatedSum {
    sum: f64,
    compensation: f64,
}

impl CompensatedSum {
    /// A sum that starts from `value`.
    pub fn new(value: f64) -> Self {
        Self {
            sum: value,
            compensation: 0.0,
        }
    }

    /// Adds one term.
    pub fn add(&mut self, term: f64) {
        let total = self.sum + term;
        self.compensation += if self.sum.abs() >= term.abs() {
            (self.sum - total) + term
        } else {
            (term - total) + self.sum
        };
        self.sum = total;
    }

    /// Adds a product without rounding it first.
    pub fn add_product(&mut self, a: f64, b: f64) {
        let product = a * b;
        self.add(product);
        self.add(a.mul_add(b, -product));
    }

    /// Adds another sum.
    pub fn add_sum(&mut self, other: Self) {
        self.add(other.sum);
        self.add(other.compensation);
    }

    /// The same sum with the opposite sign.
    #[must_use]
    pub fn negated(self) -> Self {
        Self {
            sum: -self.sum,
            compensation: -self.compensation,
        }
    }

    /// The sum so far.
    pub fn value(&self) -> f64 {
        self.sum + self.compensation
    }

    /// The two numbers that hold the sum, for restart files.
    pub fn parts(&self) -> [f64; 2] {
        [self.sum, self.compensation]
    }

    /// Rebuilds a sum from [`CompensatedSum::parts`].
    pub fn from_parts(parts: [f64; 2]) -> Self {
        Self {
            sum: parts[0],
            compensation: parts[1],
        }
    }
}

impl Extend<f64> for CompensatedSum {
    fn extend<T: IntoIterator<Item = f64>>(&mut self, terms: T) {
        for term in terms {
            self.add(term);
        }
    }
}

/// Compensated sum of a sequence.
pub fn compensated<T: IntoIterator<Item = f64>>(terms: T) -> f64 {
    let mut sum = CompensatedSum::default();
    sum.extend(terms);
    sum.value()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn analytic_cancelling_terms_leave_the_small_one() {
        assert!((compensated([1.0, 1e100, 1.0, -1e100]) - 2.0).abs() < f64::EPSILON);
    }
}
