//! Four `f64` side by side, so that loops over latitude bands use the machine's vector unit.
//!
//! What: element-wise arithmetic, comparison by value selection, and the exponential, written so
//! that the compiler turns them into vector instructions under whatever instruction set the
//! caller was compiled for (see [`crate::numerics::dispatch`]).
//! Numerics: every operation is the IEEE operation of each element; multiplications and additions
//! are never fused, so results are bit-identical whatever the instruction set.
//! `exp`: 2^n by exponent bits times the Taylor polynomial of degree 13 on |r| <= ln 2 / 2
//! (remainder below 5e-18 relative); no call into the system's maths library, whose last digits
//! differ between machines.

use std::ops::{Add, AddAssign, Div, Mul, Neg, Sub};

/// Number of elements in one [`Lanes`].
pub const WIDTH: usize = 4;

/// Four numbers processed together.
#[derive(Clone, Copy, Debug, PartialEq)]
#[repr(align(32))]
pub struct Lanes(pub [f64; WIDTH]);

macro_rules! elementwise {
    ($trait:ident, $method:ident, $op:tt) => {
        impl $trait for Lanes {
            type Output = Self;
            #[inline(always)]
            fn $method(self, other: Self) -> Self {
                let (a, b) = (self.0, other.0);
                Self([a[0] $op b[0], a[1] $op b[1], a[2] $op b[2], a[3] $op b[3]])
            }
        }
        impl $trait<f64> for Lanes {
            type Output = Self;
            #[inline(always)]
            fn $method(self, other: f64) -> Self {
                self.$method(Self::splat(other))
            }
        }
    };
}
elementwise!(Add, add, +);
elementwise!(Sub, sub, -);
elementwise!(Mul, mul, *);
elementwise!(Div, div, /);

impl AddAssign for Lanes {
    #[inline(always)]
    fn add_assign(&mut self, other: Self) {
        *self = *self + other;
    }
}

impl Neg for Lanes {
    type Output = Self;
    #[inline(always)]
    fn neg(self) -> Self {
        let a = self.0;
        Self([-a[0], -a[1], -a[2], -a[3]])
    }
}

/// Outcome of comparing two [`Lanes`], element by element.
#[derive(Clone, Copy, Debug)]
pub struct Mask([u64; WIDTH]);

impl Mask {
    /// `yes` where the comparison held, `no` elsewhere.
    #[inline(always)]
    pub fn select(self, yes: Lanes, no: Lanes) -> Lanes {
        // Bits, not branches: this is the form the compiler turns into a vector blend.
        let m = self.0;
        let pick =
            |i: usize| f64::from_bits((yes.0[i].to_bits() & m[i]) | (no.0[i].to_bits() & !m[i]));
        Lanes([pick(0), pick(1), pick(2), pick(3)])
    }
}

impl Lanes {
    /// The same number in every element.
    #[inline(always)]
    pub fn splat(value: f64) -> Self {
        Self([value; WIDTH])
    }

    /// Elements `at..at + 4` of `values`.
    ///
    /// # Panics
    /// When the slice ends before `at + 4`.
    #[inline(always)]
    pub fn load(values: &[f64], at: usize) -> Self {
        let v = &values[at..at + WIDTH];
        Self([v[0], v[1], v[2], v[3]])
    }

    /// Writes the four elements to `values[at..at + 4]`.
    ///
    /// # Panics
    /// When the slice ends before `at + 4`.
    #[inline(always)]
    pub fn store(self, values: &mut [f64], at: usize) {
        values[at..at + WIDTH].copy_from_slice(&self.0);
    }

    /// Element-wise `self >= other`.
    #[inline(always)]
    pub fn at_least(self, other: Self) -> Mask {
        let (a, b) = (self.0, other.0);
        let all = |held: bool| if held { u64::MAX } else { 0 };
        Mask([
            all(a[0] >= b[0]),
            all(a[1] >= b[1]),
            all(a[2] >= b[2]),
            all(a[3] >= b[3]),
        ])
    }

    /// The larger of two elements. A NaN in `self` stays, so that a broken state is seen.
    #[must_use]
    #[inline(always)]
    pub fn max(self, other: Self) -> Self {
        other.at_least(self).select(other, self)
    }

    /// The smaller of two elements. A NaN in `self` stays, so that a broken state is seen.
    #[must_use]
    #[inline(always)]
    pub fn min(self, other: Self) -> Self {
        self.at_least(other).select(other, self)
    }

    /// Square root of each element.
    #[must_use]
    #[inline(always)]
    pub fn sqrt(self) -> Self {
        let a = self.0;
        Self([a[0].sqrt(), a[1].sqrt(), a[2].sqrt(), a[3].sqrt()])
    }

    /// Absolute value of each element.
    #[must_use]
    #[inline(always)]
    pub fn abs(self) -> Self {
        let a = self.0;
        Self([a[0].abs(), a[1].abs(), a[2].abs(), a[3].abs()])
    }

    /// Sum of the four elements, always in the same order.
    #[inline(always)]
    pub fn sum(self) -> f64 {
        let a = self.0;
        (a[0] + a[1]) + (a[2] + a[3])
    }

    /// Exponential of each element; arguments are limited to [-700, 700].
    #[must_use]
    #[inline(always)]
    pub fn exp(self) -> Self {
        // 1.5 * 2^52: adding it rounds to the nearest whole number, held in the low bits.
        const ROUND: f64 = 6_755_399_441_055_744.0;
        const LN2_HIGH: f64 = 6.931_471_803_691_238e-1;
        const LN2_LOW: f64 = 1.908_214_929_270_587_7e-10;
        let x = self.max(Self::splat(-700.0)).min(Self::splat(700.0));
        let shifted = x * std::f64::consts::LOG2_E + ROUND;
        let n = shifted - ROUND;
        let r = x - n * LN2_HIGH - n * LN2_LOW;
        let series = polynomial(r, &EXP_TAYLOR);
        let bits = |i: usize| {
            f64::from_bits(
                series.0[i]
                    .to_bits()
                    .wrapping_add(shifted.0[i].to_bits().wrapping_shl(52)),
            )
        };
        Self([bits(0), bits(1), bits(2), bits(3)])
    }
}

/// A field over latitude bands, held in rows of four for [`Lanes`] and readable as a plain slice.
#[derive(Clone, Debug, PartialEq)]
pub struct Rows(Vec<[f64; WIDTH]>);

impl Rows {
    /// A field of `len` equal values; `len` is rounded down to a multiple of four.
    pub fn new(len: usize, value: f64) -> Self {
        Self(vec![[value; WIDTH]; len / WIDTH])
    }

    /// A field holding `values`, whose number is rounded down to a multiple of four.
    pub fn from_slice(values: &[f64]) -> Self {
        let mut rows = Self::new(values.len(), 0.0);
        rows.flat_mut()
            .iter_mut()
            .zip(values)
            .for_each(|(to, from)| *to = *from);
        rows
    }

    /// The rows, south to north.
    #[inline(always)]
    pub fn rows(&self) -> impl Iterator<Item = Lanes> {
        self.0.iter().map(|row| Lanes(*row))
    }

    /// The rows as arrays of four, to be changed.
    #[inline(always)]
    pub fn rows_mut(&mut self) -> std::slice::IterMut<'_, [f64; WIDTH]> {
        self.0.iter_mut()
    }

    /// All values in order.
    #[inline(always)]
    pub fn flat(&self) -> &[f64] {
        self.0.as_flattened()
    }

    /// All values in order, to be changed.
    #[inline(always)]
    pub fn flat_mut(&mut self) -> &mut [f64] {
        self.0.as_flattened_mut()
    }

    /// Sets every value.
    pub fn fill(&mut self, value: f64) {
        self.flat_mut().fill(value);
    }
}

/// 1/k! for k = 0..=13.
const EXP_TAYLOR: [f64; 14] = [
    1.0,
    1.0,
    1.0 / 2.0,
    1.0 / 6.0,
    1.0 / 24.0,
    1.0 / 120.0,
    1.0 / 720.0,
    1.0 / 5_040.0,
    1.0 / 40_320.0,
    1.0 / 362_880.0,
    1.0 / 3_628_800.0,
    1.0 / 39_916_800.0,
    1.0 / 479_001_600.0,
    1.0 / 6_227_020_800.0,
];

/// Polynomial with `coefficients[k]` for the k-th power, by Horner's rule.
#[inline(always)]
pub fn polynomial<const K: usize>(x: Lanes, coefficients: &[f64; K]) -> Lanes {
    let mut value = Lanes::splat(coefficients[K - 1]);
    for &c in coefficients.iter().rev().skip(1) {
        value = value * x + c;
    }
    value
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn analytic_exponential_agrees_with_the_standard_library() {
        for i in -7000..=7000_i32 {
            let x = f64::from(i) * 0.0999;
            let got = Lanes::splat(x).exp().0[2];
            assert!(
                (got / x.exp() - 1.0).abs() < 4e-16 * x.abs().max(2.0),
                "{x}"
            );
        }
    }

    #[test]
    fn analytic_comparisons_act_on_each_element() {
        let a = Lanes([1.0, -2.0, 3.0, f64::NAN]);
        let b = Lanes::splat(0.5);
        assert_eq!(a.max(b).0[..3], [1.0, 0.5, 3.0]);
        assert_eq!(a.min(b).0[..3], [0.5, -2.0, 0.5]);
        assert!(a.max(b).0[3].is_nan() && a.min(b).0[3].is_nan());
    }
}
