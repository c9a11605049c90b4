//! Arc cosine of four numbers at once, for arguments whose sine is known as well.
//!
//! What: acos(u) for u in [0, 1] from u and sqrt(1 - u^2).
//! Equation: acos(u) = sqrt(1 - u^2) P(2u - 1); the quotient acos(u) / sqrt(1 - u^2) has no
//! singularity nearer than u = -1, so P converges by a factor of 5.8 per degree. Taking the sine
//! from the caller keeps full accuracy near u = 1, where 1 - u^2 would cancel.
//! Numerics: degree 19, split into even and odd powers for two independent chains; no branch and no
//! library call, so the same bits on every machine. Error of P below 4e-16, of the arc below 1e-15.
//! Source: own fit. Chebyshev projection of acos(u) / sqrt(1 - u^2) on [0, 1] from 200 Chebyshev
//! nodes in 60-digit arithmetic, turned into powers of t = 2u - 1 and rounded to f64.
#![expect(
    clippy::inline_always,
    reason = "the caller's vector instructions must reach these bodies"
)]

use crate::numerics::lanes::{Lanes, polynomial};

/// Coefficients of even powers of t = 2u - 1.
const EVEN: [f64; 10] = [
    1.209_199_576_156_145,
    0.069_733_192_052_092_27,
    0.005_861_628_973_460_798,
    0.000_544_774_007_289_116_6,
    5.307_357_869_748_438e-05,
    5.314_752_111_592_245e-06,
    5.408_015_542_538_521e-07,
    5.724_365_736_098_916e-08,
    4.769_831_417_487_883_5e-09,
    1.062_608_763_205_072_3e-09,
];

/// Coefficients of odd powers of t = 2u - 1.
const ODD: [f64; 10] = [
    -0.263_600_141_281_284_2,
    -0.019_837_146_922_537_297,
    -0.001_772_928_459_845_891_4,
    -0.000_169_309_959_910_656_4,
    -1.674_907_508_264_597_4e-05,
    -1.693_862_205_113_952e-06,
    -1.734_278_812_324_460_4e-07,
    -1.855_750_185_293_783e-08,
    -1.495_978_611_795_642e-09,
    -3.552_208_220_738_258_3e-10,
];

/// Arc cosine, rad, of `cosine` in [0, 1], whose sine is `sine`.
#[inline(always)]
pub(super) fn arc_cosine(cosine: Lanes, sine: Lanes) -> Lanes {
    let t = cosine + cosine - 1.0;
    let square = t * t;
    sine * (polynomial(square, &EVEN) + t * polynomial(square, &ODD))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn analytic_arc_cosine_agrees_with_the_standard_library() {
        for i in 0..=20_000 {
            let angle = f64::from(i) / 20_000.0 * std::f64::consts::FRAC_PI_2;
            let got = arc_cosine(Lanes::splat(angle.cos()), Lanes::splat(angle.sin())).0[1];
            assert!((got - angle).abs() < 1e-15, "{angle}: {:e}", got - angle);
        }
    }
}
