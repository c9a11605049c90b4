//! Component `equatorial_pacific`: west-east contrast along the equator by wind, tilt and upwelling.
//!
//! A diagnostic: it reads the mixed layers and the column and moves no heat. With d = `T_w` - `T_e` (K) and
//! T(z) the column, top `T_1`:
//! - wind stress tau = min(tau0 + mu d, taumax) (dimensionless);
//! - entrainment depth in the east `z_e` = `z_ent` + sl tau (a tilted thermocline brings deeper water up);
//! - delta = `a_eq` max(0, `T_1` - T(`z_e`)); d = R(d) = c delta, c = `w_z` tau/(eps + `w_z` tau);
//! - `T_eq` = mean mixed layer of the belt + dTq; `T_w` = `T_eq` + f d; `T_e` = `T_eq` - (1 - f) d.
//!
//! Gain of the feedback: dR/dd at the solution; a solution is stable below 1 and the contrast runs away
//! above. Several stable solutions can exist; the one nearest last year's is kept (hysteresis).
//! When none lies in 0..`d_max` the value at the end towards which R pushes is returned.
//! Tilt index: depth of an isotherm in the west minus in the east, sl tau/(1 - f): the east rises
//! by sl tau and the mean (1 - f) west + f east stays.
//! Coastal upwelling: To(lat) - `a_c` max(0, `T_1` - T(`z_src`)); To between band middles by straight lines over
//! bands that hold ocean. It shares the column with the equator.
//!
//! Units: degC, K, m, s-1. Numerics: R is scanned in steps of 0.1 K and each stable crossing refined by
//! bisection to 1e-12 K; T(z) by straight lines. Two crossings within one step are missed.
//! Source: in the spirit of Bjerknes 1969 (Mon. Weather Rev. 97:163) and Jin 1997 (J. Atmos. Sci.
//! 54:811), from memory; the form is made here. Coast: drive of Ekman 1905, definition here.

pub mod params;

#[cfg(test)]
mod tests;

pub use params::Params;

use crate::forcing::YearForcing;
use crate::numerics::profile;
use crate::physics::budget::{Account, Quantity};
use crate::physics::exchange::{Exchange, Surface};
use crate::physics::{Build, Component, PhysicsError, RangeError, Setting};
use crate::series::{Axis, Scale, Statistic, Variable};

const NAME: &str = "equatorial_pacific";
/// Step of the scan for solutions, K. Tuned here.
const SCAN_STEP_K: f64 = 0.1;

/// The equatorial Pacific of one year.
#[derive(Clone, Debug, PartialEq)]
pub struct Equator {
    /// Western surface temperature, degC.
    pub west_c: f64,
    /// Eastern surface temperature, degC.
    pub east_c: f64,
    /// West minus east, K.
    pub contrast_k: f64,
    /// Gain of the feedback at this contrast, dimensionless; threshold 1.
    pub gain: f64,
    /// Isotherm depth west minus east, m.
    pub tilt_m: f64,
}

/// Column profile and parameters: all that the right-hand side R needs.
#[derive(Clone, Copy, Debug)]
struct Feedback<'a> {
    params: &'a Params,
    depth: &'a [f64],
    temperature: &'a [f64],
}

impl Feedback<'_> {
    fn stress(&self, contrast: f64) -> f64 {
        let p = self.params;
        (p.stress_base + p.stress_per_k * contrast).min(p.stress_limit)
    }

    /// R(d) and dR/dd.
    fn response(&self, contrast: f64) -> [f64; 2] {
        let p = self.params;
        let tau = self.stress(contrast);
        let z = p.entrainment_depth_m + p.tilt_m * tau;
        let [below, slope] = profile::value_and_slope(self.depth, self.temperature, z);
        let difference = self.temperature[0] - below;
        if difference <= 0.0 {
            return [0.0; 2];
        }
        let (rate, damping) = (p.upwelling_rate_s * tau, p.damping_rate_s);
        let share = rate / (damping + rate);
        let growth = if tau < p.stress_limit {
            p.stress_per_k
        } else {
            0.0
        };
        let share_slope = p.upwelling_rate_s * damping / (damping + rate).powi(2);
        let per_stress = share_slope * difference - share * slope * p.tilt_m;
        let a = p.entrainment_efficiency;
        [a * share * difference, a * growth * per_stress]
    }

    /// R(d) - d: positive where the contrast grows.
    fn excess(&self, contrast: f64) -> f64 {
        self.response(contrast)[0] - contrast
    }

    /// The stable solution nearest `last`, K.
    fn solution(&self, last: f64) -> f64 {
        let most = self.params.largest_contrast_k;
        let steps = (most / SCAN_STEP_K).ceil();
        let mut best = f64::NAN;
        let mut offer = |root: f64| {
            if best.is_nan() || (root - last).abs() < (best - last).abs() {
                best = root;
            }
        };
        let (mut low, mut before) = (0.0, self.excess(0.0));
        let mut step = 1.0;
        while step <= steps {
            let high = most * step / steps;
            let after = self.excess(high);
            if before > 0.0 && after <= 0.0 {
                offer(self.bisected(low, high));
            } else if step < 1.5 && before <= 0.0 && after < 0.0 {
                offer(0.0);
            }
            (low, before) = (high, after);
            step += 1.0;
        }
        if before > 0.0 && best.is_nan() {
            return most;
        }
        if best.is_nan() { 0.0 } else { best }
    }

    fn bisected(&self, mut low: f64, mut high: f64) -> f64 {
        for _ in 0..60 {
            let middle = 0.5 * (low + high);
            if self.excess(middle) > 0.0 {
                low = middle;
            } else {
                high = middle;
            }
        }
        0.5 * (low + high)
    }
}

/// The equatorial feedback and the upwelling coasts.
#[derive(Clone, Debug)]
pub struct EquatorialPacific {
    params: Params,
    /// Weight of each band in the belt's mean, sum 1.
    belt: Vec<f64>,
    /// Bands that hold ocean, and the latitudes of their middles.
    ocean: (Vec<usize>, Vec<f64>),
    last_contrast: f64,
    equator: Equator,
    coast_c: Vec<f64>,
}

impl EquatorialPacific {
    /// Builds the component.
    ///
    /// # Errors
    /// All parameters out of range, or a belt without ocean.
    pub fn new(params: &Params, surface: &Surface) -> Result<Self, Vec<RangeError>> {
        params.check()?;
        let width = params.half_width_deg;
        let share = surface.bands.share_between(-width, width);
        let pairs = share.iter().zip(&surface.ocean_area_m2);
        let mut belt: Vec<f64> = pairs.map(|(s, a)| s * a).collect();
        let total: f64 = belt.iter().sum();
        if total <= 0.0 || total.is_nan() {
            return Err(vec![RangeError {
                key: "half_width_deg".to_owned(),
                value: width,
                limit: "leaves no ocean on the equator",
            }]);
        }
        for w in &mut belt {
            *w /= total;
        }
        let ocean: Vec<usize> = (0..belt.len())
            .filter(|i| surface.ocean_area_m2[*i] > 0.0)
            .collect();
        let latitudes = ocean
            .iter()
            .map(|i| surface.bands.centre_deg()[*i])
            .collect();
        Ok(Self {
            belt,
            ocean: (ocean, latitudes),
            last_contrast: params.initial_contrast_k,
            equator: nothing(),
            coast_c: vec![f64::NAN; params.coast.coastal_latitudes_deg.len()],
            params: params.clone(),
        })
    }

    /// The year just advanced; NaN before the first one and without an ocean column.
    pub fn equator(&self) -> &Equator {
        &self.equator
    }

    /// Coastal upwelling temperatures of the year just advanced, degC.
    pub fn coast_c(&self) -> &[f64] {
        &self.coast_c
    }

    fn solve_equator(&mut self, mixed_layer: &[f64], depth: &[f64], temperature: &[f64]) {
        let pairs = self.belt.iter().zip(mixed_layer);
        let mean: f64 = pairs.filter(|(w, _)| **w > 0.0).map(|(w, t)| w * t).sum();
        let p = &self.params;
        let feedback = Feedback {
            params: p,
            depth,
            temperature,
        };
        let contrast = feedback.solution(self.last_contrast);
        let reference = mean + p.offset_k;
        self.equator = Equator {
            west_c: reference + p.east_share * contrast,
            east_c: reference - (1.0 - p.east_share) * contrast,
            contrast_k: contrast,
            gain: feedback.response(contrast)[1],
            tilt_m: p.tilt_m * feedback.stress(contrast) / (1.0 - p.east_share),
        };
        self.last_contrast = contrast;
    }

    fn solve_coast(&mut self, mixed_layer: &[f64], depth: &[f64], temperature: &[f64]) {
        let coast = &self.params.coast;
        let source = profile::value(depth, temperature, coast.source_depth_m);
        let cooling = coast.efficiency * (temperature[0] - source).max(0.0);
        let (bands, latitudes) = &self.ocean;
        let surface: Vec<f64> = bands.iter().map(|i| mixed_layer[*i]).collect();
        for (value, latitude) in self.coast_c.iter_mut().zip(&coast.coastal_latitudes_deg) {
            *value = profile::value(latitudes, &surface, *latitude) - cooling;
        }
    }
}

fn nothing() -> Equator {
    Equator {
        west_c: f64::NAN,
        east_c: f64::NAN,
        contrast_k: f64::NAN,
        gain: f64::NAN,
        tilt_m: f64::NAN,
    }
}

impl Build for EquatorialPacific {
    type Params = Params;

    fn check(params: &Params) -> Result<(), Vec<RangeError>> {
        params.check()
    }

    fn build(
        params: &Params,
        setting: &Setting,
        _: &mut Exchange,
    ) -> Result<Self, Vec<RangeError>> {
        Self::new(params, &setting.surface)
    }
}

impl Component for EquatorialPacific {
    fn name(&self) -> &'static str {
        NAME
    }

    fn advance(
        &mut self,
        _forcing: &YearForcing<'_>,
        exchange: &mut Exchange,
    ) -> Result<(), PhysicsError> {
        let (z, t) = (&exchange.column_depth_m, &exchange.column_temperature_c);
        if z.is_empty() || z.len() != t.len() {
            self.equator = nothing();
            self.coast_c.fill(f64::NAN);
            return Ok(());
        }
        if let Some(k) = t.iter().position(|v| !v.is_finite()) {
            return Err(PhysicsError::NotFinite {
                component: NAME,
                variable: "column temperature",
                place: format!("level {k} from the top"),
            });
        }
        self.solve_equator(&exchange.mixed_layer_temperature_c, z, t);
        self.solve_coast(&exchange.mixed_layer_temperature_c, z, t);
        Ok(())
    }

    fn conserves(&self) -> &'static [Quantity] {
        &[]
    }

    fn accounts(&self) -> Vec<Account> {
        Vec::new()
    }

    fn variables(&self) -> Vec<Variable> {
        let one = |name, units, long_name, scale| Variable {
            name,
            axes: &[],
            units,
            long_name,
            standard_name: None,
            scale,
            statistic: Statistic::Mean,
        };
        let temperature = |name, words| one(name, "degC", words, Scale::Temperature);
        vec![
            temperature(
                "west_pacific_temperature",
                "surface temperature of the western equatorial Pacific",
            ),
            temperature(
                "east_pacific_temperature",
                "surface temperature of the eastern equatorial Pacific",
            ),
            one(
                "west_east_contrast",
                "K",
                "surface temperature along the equator, west minus east",
                Scale::TemperatureDifference,
            ),
            one(
                "equatorial_gain",
                "1",
                "gain of the equatorial feedback; runaway above 1",
                Scale::Plain,
            ),
            one(
                "thermocline_tilt",
                "m",
                "isotherm depth along the equator, west minus east",
                Scale::Plain,
            ),
            Variable {
                axes: &[Axis::CoastalLatitude],
                ..temperature(
                    "coastal_upwelling_temperature",
                    "surface temperature at upwelling coasts",
                )
            },
        ]
    }

    fn record(&self, values: &mut Vec<f64>) {
        let e = &self.equator;
        values.extend([e.west_c, e.east_c, e.contrast_k, e.gain, e.tilt_m]);
        values.extend_from_slice(&self.coast_c);
    }

    fn save(&self) -> Vec<f64> {
        vec![self.last_contrast]
    }

    fn weights(&self) -> Vec<f64> {
        vec![1.0]
    }

    fn restore(&mut self, state: &[f64]) -> Result<(), PhysicsError> {
        let &[last] = state else {
            return Err(PhysicsError::RestartLength {
                component: NAME,
                found: state.len(),
                needed: 1,
            });
        };
        self.last_contrast = last;
        Ok(())
    }
}
