//! The Earth's orbit without its fluctuations shorter than about two thousand years.
//!
//! What: k, h, q, p of the Earth's mean orbit as smooth functions of time, from their means over
//! blocks of 100 years.
//! Equations: kernel 2H - H*H with the Hann window H_j = (1 + cos(2 pi j/21))/21, |j| <= 10, and
//! H*H its convolution with itself. Its transform is 1 - (1 - H^)^2, so the curvature of slow
//! changes is kept: a sinusoid of 19 kyr loses 1e-4 of its amplitude, where H alone loses 1e-2.
//! Units: years from J2000.0; block c covers 100 c to 100 (c+1).
//! Numerics: 41 weights; between blocks the polynomial through six neighbours. Cosine by `libm`.
//! Source: the kernel is "twicing" of a smoother (Tukey 1977, Exploratory Data Analysis; memory).

use std::f64::consts::TAU;

use super::planets::MeanElements;
use crate::numerics::lagrange::{weighted, weights};

/// Length of a block, years.
pub(super) const BLOCK_YR: f64 = 100.0;
/// Half width of the Hann window, blocks.
const HANN: usize = 10;
/// Half width of the kernel, blocks.
const REACH: usize = 2 * HANN;
/// Values for interpolation.
const NEIGHBOURS: usize = 6;
/// Blocks needed on either side of a time at which the orbit is asked for.
pub(super) const MARGIN: usize = REACH + NEIGHBOURS / 2;

/// Mean orbit of the Earth around J2000.0.
#[derive(Clone, Debug)]
pub(super) struct MeanOrbit {
    /// Number of blocks before J2000.0 that are left after smoothing.
    past: usize,
    /// Smoothed elements, oldest first.
    smooth: Vec<MeanElements>,
}

impl MeanOrbit {
    /// From blocks before and after J2000.0, each list beginning at J2000.0 and longer than
    /// [`MARGIN`].
    pub(super) fn new(past: &[MeanElements], future: &[MeanElements]) -> Self {
        let blocks: Vec<_> = past.iter().rev().chain(future).copied().collect();
        let kernel = kernel();
        let smooth = blocks.windows(kernel.len()).map(|w| weighted(&kernel, w));
        Self {
            past: past.len() - REACH,
            smooth: smooth.collect(),
        }
    }

    /// Elements at a time, years from J2000.0, within the blocks less [`MARGIN`].
    pub(super) fn at(&self, years: f64) -> MeanElements {
        let place = years / BLOCK_YR - 0.5;
        let base = place.floor();
        #[expect(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "within the blocks, whose number is far below 2^31"
        )]
        let first = (base + self.past as f64) as usize + 1 - NEIGHBOURS / 2;
        let fraction = place - base + (NEIGHBOURS / 2 - 1) as f64;
        let rows = &self.smooth[first..first + NEIGHBOURS];
        weighted(&weights::<NEIGHBOURS>(fraction), rows)
    }
}

/// 2H - H*H, centred.
fn kernel() -> [f64; 2 * REACH + 1] {
    let length = (2 * HANN + 1) as f64;
    let hann: [f64; 2 * HANN + 1] = std::array::from_fn(|j| {
        let from_centre = j as f64 - HANN as f64;
        (1.0 + libm::cos(TAU * from_centre / length)) / length
    });
    let mut kernel = [0.0; 2 * REACH + 1];
    for (i, left) in hann.iter().enumerate() {
        kernel[i + HANN] += 2.0 * left;
        for (j, right) in hann.iter().enumerate() {
            kernel[i + j] -= left * right;
        }
    }
    kernel
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Blocks of a sinusoid of this period, mean over each block, from -100 to 100 blocks.
    fn blocks(period_yr: f64) -> (Vec<MeanElements>, Vec<MeanElements>) {
        let phase = |years: f64| TAU * years / period_yr;
        let mean = |c: i32| {
            let [a, b] = [c, c + 1].map(|edge| phase(f64::from(edge) * BLOCK_YR).sin());
            let value = (b - a) / (TAU * BLOCK_YR / period_yr);
            [value, 2.0 * value, 1.0, 0.0]
        };
        (
            (1..=100).map(|c| mean(-c)).collect(),
            (0..100).map(mean).collect(),
        )
    }

    #[test]
    fn analytic_slow_change_is_kept_and_fast_change_taken_away() {
        for (period_yr, amplitude, tolerance) in
            [(46e3, 1.0, 1.2e-5), (19e3, 1.0, 1.2e-4), (700.0, 0.0, 3e-3)]
        {
            let (past, future) = blocks(period_yr);
            let orbit = MeanOrbit::new(&past, &future);
            for years in [-4000.0, -75.0, 0.0, 25.0, 50.0, 6000.0] {
                let [k, h, q, p] = orbit.at(years);
                let expected = amplitude * (TAU * years / period_yr).cos();
                assert!((k - expected).abs() < tolerance, "{period_yr} {years}: {k}");
                assert!((h - 2.0 * k).abs() < 1e-14);
                assert!((q - 1.0).abs() < 1e-14 && p.abs() < 1e-14);
            }
        }
    }

    #[test]
    fn analytic_the_margin_is_enough_and_not_too_much() {
        let (past, future) = blocks(1e4);
        let orbit = MeanOrbit::new(&past, &future[..=MARGIN]);
        // 50 years is the centre of block 0, the last with MARGIN blocks after it.
        assert!(orbit.at(50.0)[0].is_finite());
        assert_eq!(orbit.smooth.len(), past.len() + MARGIN + 1 - 2 * REACH);
    }
}
