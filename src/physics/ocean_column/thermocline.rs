//! How deep the thermocline lies: several answers, because they can differ in sign.
//!
//! - depth of an isotherm: the profile is taken as straight lines between level middles; first passage
//!   from the top down; NaN where it does not exist. The 20 degC isotherm also moves when the
//!   whole column warms; the isotherm `T_1` - 5 K does not.
//! - pycnocline scale D = int (T - `T_b`) dz / (`T_1` - `T_b`), with `T_1`, `T_b` the top and bottom levels
//!   (Gnanadesikan 1999, Science 283:2077; memory); NaN in a column not warmer above than below.
//! - half depth: T = (`T_1` + `T_b`)/2.
//! - warm-water heat: rho c int (T - 20) dz above the 20 degC isotherm, J m-2 (the diabatic part of the
//!   tropical heat content; definition here); 0 where no water is warmer.
//!
//! Units: m, degC, J m-2. Errors are second order in the level thickness.

use crate::grid::column::ColumnLevels;
use crate::numerics::profile::first_fall_through;
use crate::units::SEA_WATER_HEAT_CAPACITY_J_M3_K;

/// Temperature of the isotherm that stands for the tropical thermocline, degC (common practice).
pub const ISOTHERM_C: f64 = 20.0;
/// Distance of the relative isotherm from the surface temperature, K (definition here).
pub const RELATIVE_ISOTHERM_K: f64 = 5.0;

/// Depths of the thermocline.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Thermocline {
    /// Depth of the 20 degC isotherm, m.
    pub isotherm_20c_m: f64,
    /// Depth of the isotherm 5 K colder than the top, m.
    pub relative_isotherm_m: f64,
    /// Pycnocline scale D, m.
    pub pycnocline_m: f64,
    /// Depth where the temperature is half-way from top to bottom, m.
    pub half_depth_m: f64,
    /// Heat above the 20 degC isotherm, J m-2.
    pub warm_water_heat_j_m2: f64,
}

impl Thermocline {
    /// Measures a profile.
    pub fn of(levels: &ColumnLevels, temperature_c: &[f64]) -> Self {
        let z = levels.middle_m();
        let (top, bottom) = ends(temperature_c);
        let isotherm = first_fall_through(z, temperature_c, ISOTHERM_C);
        Self {
            isotherm_20c_m: isotherm,
            relative_isotherm_m: first_fall_through(z, temperature_c, top - RELATIVE_ISOTHERM_K),
            pycnocline_m: pycnocline_scale(levels, temperature_c),
            half_depth_m: first_fall_through(z, temperature_c, 0.5 * (top + bottom)),
            warm_water_heat_j_m2: SEA_WATER_HEAT_CAPACITY_J_M3_K
                * warm_water(levels, temperature_c, isotherm),
        }
    }
}

fn ends(temperature_c: &[f64]) -> (f64, f64) {
    let end = |t: Option<&f64>| t.copied().unwrap_or(f64::NAN);
    (end(temperature_c.first()), end(temperature_c.last()))
}

/// Pycnocline scale D, m; NaN in a column not warmer above than below.
pub fn pycnocline_scale(levels: &ColumnLevels, temperature_c: &[f64]) -> f64 {
    let (top, bottom) = ends(temperature_c);
    let excess: f64 = levels
        .thickness_m()
        .iter()
        .zip(temperature_c)
        .map(|(d, t)| d * (t - bottom))
        .sum();
    if top > bottom {
        excess / (top - bottom)
    } else {
        f64::NAN
    }
}

/// D for the closure: within the column and always a number. A column without contrast
/// counts as mixed to the bottom.
pub fn bounded_pycnocline_scale(levels: &ColumnLevels, temperature_c: &[f64]) -> f64 {
    let bottom = levels.thickness_m().iter().sum::<f64>();
    let scale = pycnocline_scale(levels, temperature_c);
    if scale.is_finite() {
        scale.clamp(0.0, bottom)
    } else {
        bottom
    }
}

/// int (T - 20) dz from the surface to the isotherm, m K.
fn warm_water(levels: &ColumnLevels, temperature_c: &[f64], isotherm_m: f64) -> f64 {
    let (top, bottom) = ends(temperature_c);
    let excess = |t: f64| t - ISOTHERM_C;
    if isotherm_m.is_nan() {
        let all = levels.thickness_m().iter().zip(temperature_c);
        let sum = all.map(|(d, t)| d * excess(*t)).sum();
        return if bottom >= ISOTHERM_C { sum } else { 0.0 };
    }
    let z = levels.middle_m();
    let mut sum = z[0] * excess(top);
    for (zs, ts) in z.windows(2).zip(temperature_c.windows(2)) {
        if zs[1] <= isotherm_m {
            sum += 0.5 * (zs[1] - zs[0]) * (excess(ts[0]) + excess(ts[1]));
        } else {
            sum += 0.5 * (isotherm_m - zs[0]) * excess(ts[0]);
            break;
        }
    }
    sum
}

#[cfg(test)]
mod tests {
    use super::*;

    fn exponential(levels: &ColumnLevels) -> Vec<f64> {
        let profile = |z: &f64| 2.0 + 24.0 * (-z / 200.0).exp();
        levels.middle_m().iter().map(profile).collect()
    }

    #[test]
    fn converges_depths_of_an_exponential_profile() {
        // Closed forms: T(z) = z0 ln(24/(T - 2)), z0 = 200 m; the top level stands at its middle.
        let levels = ColumnLevels::new(400, 4000.0, 1.0).unwrap();
        let t = exponential(&levels);
        let found = Thermocline::of(&levels, &t);
        let depth = |c: f64| 200.0 * (24.0 / (c - 2.0)).ln();
        assert!((found.isotherm_20c_m - depth(20.0)).abs() < 1e-3);
        assert!((found.relative_isotherm_m - depth(t[0] - 5.0)).abs() < 1e-3);
        assert!((found.half_depth_m - depth(0.5 * (t[0] + t[399]))).abs() < 1e-2);
        assert!((found.pycnocline_m - 200.0 * 24.0 / (t[0] - 2.0)).abs() < 0.05);
        let z20 = depth(20.0);
        let heat = 24.0 * 200.0 * (1.0 - (-z20 / 200.0).exp()) - 18.0 * z20;
        let heat = heat * SEA_WATER_HEAT_CAPACITY_J_M3_K;
        assert!((found.warm_water_heat_j_m2 / heat - 1.0).abs() < 1e-3);
    }

    #[test]
    fn analytic_missing_isotherms_are_not_numbers() {
        let levels = ColumnLevels::new(40, 4000.0, 15.0).unwrap();
        let cold = Thermocline::of(&levels, &[5.0; 40]);
        assert!(cold.isotherm_20c_m.is_nan() && cold.relative_isotherm_m.is_nan());
        assert!(cold.pycnocline_m.is_nan() && cold.warm_water_heat_j_m2.abs() < 1e-15);
        assert!((bounded_pycnocline_scale(&levels, &[5.0; 40]) - 4000.0).abs() < 1e-6);
        let warm = Thermocline::of(&levels, &[21.0; 40]);
        let heat = 4000.0 * SEA_WATER_HEAT_CAPACITY_J_M3_K;
        assert!((warm.warm_water_heat_j_m2 / heat - 1.0).abs() < 1e-12);
    }
}
