//! Snow on land, and what it does to the sunlight within one step.
//!
//! What: snow cover s(T) = 1/(1 + exp(2 (T - T_s)/w)) at the end of a step, and the end value that
//! stands for its whole course. Land follows its own balance within a day, so it is given the
//! cover at the end of the step. The slow air adds up what came in over the year; in spring the
//! cover passes from one to zero in two or three steps, and a sum of end values then depends on
//! where in the melting the steps fall. The sum is exact when the end value is taken from the means
//! m of s over the steps:
//!   s~ = (25 m_n - 23 m_(n-1) + 13 m_(n-2) - 3 m_(n-3))/12
//! (the value at the end of a cubic's primitive, weights adding up to one). It differs from s by
//! order h^4 where the course is smooth; the sunlight of the difference goes to the air.
//! Numerics: m by Simpson's rule, the temperature in the middle from the cubic through the last four
//! ends of steps and its cover from that at the end by a rational form (an exponential less).
//! Everything is linearised about a first guess of the new temperature.
//! Units: degC, pure numbers.
//! Source: own derivation; measured in validation/energy_balance (step error).

use super::coefficients::{BandRow, Coefficients};
use super::state::Level;
use crate::numerics::lanes::Lanes;

/// Means over past steps that the end value needs.
const PAST: usize = 3;

/// Snow cover in the past: at the end of the last step, and means over the last steps, newest first.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct SnowLevel {
    end: Lanes,
    means: [Lanes; PAST],
}

/// Numbers that the snow keeps per band.
pub(super) const SNOW_LEVELS: usize = 1 + PAST;

/// Snow cover of a step with its slopes against the land's new temperature.
pub(super) struct Snow {
    /// At the end of the step.
    pub cover: Lanes,
    pub slope: Lanes,
    /// Mean over the step.
    pub mean: Lanes,
    pub mean_slope: Lanes,
    /// End value from the means, s~.
    pub summed: Lanes,
    pub summed_slope: Lanes,
}

/// Snow cover where land of the given cover turns warmer by x = 2 dT/w, as the fraction
/// s/(s + (1 - s) exp(x)), exp(x) being the square of the Pade form (12 + 6 y + y^2)/(12 - 6 y + y^2)
/// at y = x/2: 7e-4 of it at x = 1.5, falling with the fifth power. Its peak lies at y = sqrt(12).
#[inline(always)]
fn warmed(cover: Lanes, x: Lanes) -> (Lanes, Lanes) {
    let peak = Lanes::splat(3.4);
    let y = (x * 0.5).min(peak).max(-peak);
    let (even, odd) = (y * y + 12.0, y * 6.0);
    let (rise, fall) = (even + odd, even - odd);
    let (rise, fall) = (rise * rise, fall * fall);
    (cover * fall, rise + cover * (fall - rise))
}

impl SnowLevel {
    /// No snow.
    pub(super) fn none() -> Self {
        let zero = Lanes::splat(0.0);
        Self {
            end: zero,
            means: [zero; PAST],
        }
    }

    /// First guess of the land's step beyond its extrapolation `ahead`: light (absorptance) - given =
    /// stiffness x step with the snow that belongs to it.
    #[inline(always)]
    pub(super) fn guess(
        &self,
        c: &Coefficients,
        land: &Level,
        ahead: Lanes,
        balance: &Balance,
    ) -> Lanes {
        // The cover is snowy/all; one division serves for it and for the step.
        let (snowy, all) = warmed(self.end, (ahead - land.now) * c.snow_steepness);
        let square = all * all;
        let reflected = balance.light * balance.brightening * snowy;
        let excess = balance.light * balance.bare - balance.given;
        let residual = excess * square - reflected * all;
        let gain = reflected * (all - snowy) * c.snow_steepness;
        let newton = balance.stiffness * square - gain;
        residual / newton.max(balance.least * square)
    }

    /// Snow of the step in which the land goes on to `new`.
    #[inline(always)]
    pub(super) fn step(&self, c: &Coefficients, land: &Level, new: Lanes) -> Snow {
        let k = c.snow_steepness;
        let one = Lanes::splat(1.0);
        let cover = one / (((new - c.snow_temperature) * k).exp() + 1.0);
        let (snowy, all) = warmed(cover, land.back_to_middle(new) * k);
        let middle = snowy / all;
        let slope = cover * (cover - one) * k;
        let middle_slope = middle * (middle - one) * (k * 4.0 * Level::MIDDLE_SHARE);
        let mean = (cover + middle * 4.0 + self.end) * (1.0 / 6.0);
        let mean_slope = (slope + middle_slope) * (1.0 / 6.0);
        let [last, before, third] = self.means;
        let past = before * (13.0 / 12.0) - last * (23.0 / 12.0) - third * 0.25;
        Snow {
            cover,
            slope,
            mean,
            mean_slope,
            summed: mean * (25.0 / 12.0) + past,
            summed_slope: mean_slope * (25.0 / 12.0),
        }
    }

    /// Takes the cover at the end of a step and the mean over it.
    #[inline(always)]
    pub(super) fn push(&mut self, end: Lanes, mean: Lanes) {
        let [last, before, _] = self.means;
        self.end = end.max(Lanes::splat(0.0)).min(Lanes::splat(1.0));
        self.means = [mean, last, before];
    }

    pub(super) fn lanes(&self) -> [Lanes; SNOW_LEVELS] {
        let [last, before, third] = self.means;
        [self.end, last, before, third]
    }

    pub(super) fn lanes_mut(&mut self) -> [&mut Lanes; SNOW_LEVELS] {
        let [last, before, third] = &mut self.means;
        [&mut self.end, last, before, third]
    }
}

/// The land's balance at its extrapolated temperature, before the snow is known.
pub(super) struct Balance {
    /// Absorptance of the bare ground and what full snow takes off it.
    pub bare: Lanes,
    pub brightening: Lanes,
    /// Sunlight that reaches the ground, and heat given away and stored, W m-2.
    pub light: Lanes,
    pub given: Lanes,
    /// Slope of `given` with temperature and the least slope of the whole balance, W m-2 K-1.
    pub stiffness: Lanes,
    pub least: Lanes,
}

/// Absorptance of bare land beside water of the given albedo, and what full snow takes off it.
#[inline(always)]
pub(super) fn ground(c: &Coefficients, b: &BandRow, water_albedo: Lanes) -> (Lanes, Lanes) {
    let one = Lanes::splat(1.0);
    let albedo = water_albedo + c.land_excess;
    let free = one - b.sheet;
    let bare = one - (albedo * free + b.sheet * c.sheet_albedo);
    (bare, (b.snow_albedo - albedo) * free)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::grid::calendar::MonthWeights;
    use crate::physics::Setting;
    use crate::physics::fixtures::{reference, surface};

    fn coefficients() -> Coefficients {
        let setting = Setting {
            surface: surface(36),
            months: MonthWeights::new(72).unwrap(),
        };
        Coefficients::new(&reference("energy_balance"), &setting)
    }

    /// Snow cover and s~ at 0 degC of land that warms by `rate` K a step, curving a little.
    fn melting(c: &Coefficients, rate: f64) -> (f64, f64) {
        let course = |k: f64| Lanes::splat(rate * k + 0.02 * (rate * k).powi(2));
        let mut land = Level::new(course(-40.0));
        let mut level = SnowLevel::none();
        for k in -39..=0_i32 {
            let new = course(f64::from(k));
            let snow = level.step(c, &land, new);
            if k == 0 {
                return (snow.cover.0[0], snow.summed.0[0]);
            }
            level.push(snow.cover, snow.mean);
            land.push(new - land.now);
        }
        unreachable!("the course ends at zero")
    }

    #[test]
    fn analytic_steady_snow_is_its_own_mean() {
        let c = coefficients();
        let (cover, summed) = melting(&c, 0.0);
        assert!((cover - 0.5).abs() < 1e-15 && (summed - cover).abs() < 1e-15);
    }

    #[test]
    fn converges_end_value_from_means() {
        let c = coefficients();
        let error = |rate| {
            let (cover, summed) = melting(&c, rate);
            (summed - cover).abs()
        };
        let order = (error(0.5) / error(0.25)).log2();
        assert!(order > 3.5, "{order} {}", error(0.5));
    }

    #[test]
    fn analytic_warmed_cover_follows_the_exponential() {
        for step in -15..=15_i32 {
            let x = f64::from(step) * 0.1;
            let (snowy, all) = warmed(Lanes::splat(0.3), Lanes::splat(x));
            let exact = 0.3 / (0.3 + 0.7 * x.exp());
            assert!((snowy.0[0] / all.0[0] - exact).abs() < 2e-4, "{x}");
        }
    }
}
