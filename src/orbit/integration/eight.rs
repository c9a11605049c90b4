//! Eight numbers side by side, one for each planet, as two rows of four.
//!
//! What: element-wise arithmetic over the planets, and positions or velocities as three of them.
//! Numerics: the IEEE operations of [`Lanes`]; no fused operation, so the same bits on every
//! processor.
#![expect(
    clippy::inline_always,
    reason = "the caller's vector instructions must reach these bodies"
)]

use std::ops::{Add, Div, Mul, Neg, Sub};

use crate::numerics::lanes::{Lanes, WIDTH};

/// Number of planets.
pub(super) const PLANETS: usize = 2 * WIDTH;

/// One number for each planet: Mercury to Mars, Jupiter to Neptune.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Eight(pub(super) Lanes, pub(super) Lanes);

/// A vector for each planet: x, y, z.
pub(super) type Vectors = [Eight; 3];

macro_rules! elementwise {
    ($trait:ident, $method:ident) => {
        impl $trait for Eight {
            type Output = Self;
            #[inline(always)]
            fn $method(self, other: Self) -> Self {
                Self(self.0.$method(other.0), self.1.$method(other.1))
            }
        }
        impl $trait<f64> for Eight {
            type Output = Self;
            #[inline(always)]
            fn $method(self, other: f64) -> Self {
                Self(self.0.$method(other), self.1.$method(other))
            }
        }
    };
}
elementwise!(Add, add);
elementwise!(Sub, sub);
elementwise!(Mul, mul);
elementwise!(Div, div);

impl Neg for Eight {
    type Output = Self;
    #[inline(always)]
    fn neg(self) -> Self {
        Self(-self.0, -self.1)
    }
}

impl Eight {
    /// From an array in the order of the planets.
    #[inline(always)]
    pub(super) fn from_array(values: &[f64; PLANETS]) -> Self {
        Self(Lanes::load(values, 0), Lanes::load(values, WIDTH))
    }

    /// In the order of the planets.
    #[inline(always)]
    pub(super) fn to_array(self) -> [f64; PLANETS] {
        let (a, b) = (self.0.0, self.1.0);
        [a[0], a[1], a[2], a[3], b[0], b[1], b[2], b[3]]
    }

    /// The same number for every planet.
    #[inline(always)]
    pub(super) fn splat(value: f64) -> Self {
        Self(Lanes::splat(value), Lanes::splat(value))
    }

    /// Square root of each.
    #[inline(always)]
    pub(super) fn sqrt(self) -> Self {
        Self(self.0.sqrt(), self.1.sqrt())
    }

    /// Sum over the planets, always in the same order.
    #[inline(always)]
    pub(super) fn sum(self) -> f64 {
        self.0.sum() + self.1.sum()
    }
}

/// Scalar product of two vectors of each planet.
#[inline(always)]
pub(super) fn dot(a: &Vectors, b: &Vectors) -> Eight {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}

/// Applies `f` to the x, y and z of two sets of vectors.
#[inline(always)]
pub(super) fn combine(a: &Vectors, b: &Vectors, f: impl Fn(Eight, Eight) -> Eight) -> Vectors {
    [f(a[0], b[0]), f(a[1], b[1]), f(a[2], b[2])]
}
