//! Vertical transport in the ocean column: upwelling, mixing, implicit convection.
//!
//! Ac dT/dt = -d(W T)/dz + d(Ac kappa dT/dz) + I(z) `T_in` - O(z) T (z upward in the derivative, flow W
//! positive upward), with W at an interface the sum of I - O below it. Units: m, s, m3 s-1, degC.
//!
//! Numerics: finite volumes. The upward heat flow (over rho c) through the interface between a
//! level and the one below it is b `T_below` - a `T_above` with a, b >= 0 and b - a = W:
//! - upwind: a = G + max(-W, 0), G = Ac kappa / distance: first order in the level thickness;
//! - exponential fit: a = G B(W/G), B(x) = x/(e^x - 1), from the exact solution of the steady equation
//!   with constant W and kappa between two level middles: exact at the middles for that profile,
//!   second order where kappa varies smoothly, and free of negative weights.
//!
//! Time: backward Euler. Every row of the matrix exceeds its off-diagonal terms by V/dt + I, so it
//! is an M-matrix: new temperatures lie between the old ones and those of the water that enters,
//! whatever the step. Rounding in the solution of the linear system would show in the heat budget,
//! so the temperatures are updated from the flows that belong to the solution, each of which
//! leaves one level and enters another. What an update loses below the last digit of a temperature
//! is carried to the next, or slow trends would stall.
//!
//! Interfaces with colder water above (density by temperature alone) get the convective
//! diffusivity for the step. Source of the balance: Munk 1966 (Deep-Sea Res. 13:707); of kappa(z):
//! the shape of Bryan & Lewis 1979 (J. Geophys. Res. 84:2503); both from memory.

use super::params::{AdvectionScheme, Mixing};
use crate::grid::column::ColumnLevels;
use crate::numerics::lanes::Lanes;
use crate::numerics::sum::{CompensatedSum, compensated};
use crate::numerics::tridiagonal;

/// x / (e^x - 1) for x >= 0.
fn bernoulli(x: f64) -> f64 {
    if x < 1e-2 {
        let square = x * x;
        1.0 - 0.5 * x + square / 12.0 * (1.0 - square / 60.0)
    } else {
        x / (Lanes::splat(x).exp().0[0] - 1.0)
    }
}

/// Weights of the upward flow `below` `T_below` - `above` `T_above` through an interface, m3 s-1.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Face {
    /// Weight of the temperature below the interface, not negative.
    pub below: f64,
    /// Weight of the temperature above the interface, not negative.
    pub above: f64,
}

impl Face {
    /// Weights for an upward flow of water and a conductance `G` = area x diffusivity / distance,
    /// both m3 s-1.
    pub fn new(scheme: AdvectionScheme, flow: f64, conductance: f64) -> Self {
        let smaller = match scheme {
            AdvectionScheme::ExponentialFit if conductance > 0.0 => {
                conductance * bernoulli(flow.abs() / conductance)
            }
            _ => conductance,
        };
        Self {
            below: smaller + flow.max(0.0),
            above: smaller + (-flow).max(0.0),
        }
    }

    /// The upward flow, written with the difference of temperatures so that strong mixing of
    /// equal temperatures leaves no rounding error behind.
    fn upward(&self, above_c: f64, below_c: f64) -> f64 {
        let flow = self.below - self.above;
        let upstream = if flow > 0.0 { below_c } else { above_c };
        self.below.min(self.above) * (below_c - above_c) + flow * upstream
    }
}

/// Diffusivity kappa(z) at depth `z_m`, m2 s-1.
pub fn diffusivity(params: &Mixing, z_m: f64) -> f64 {
    let step = 0.5 * (1.0 + ((z_m - params.transition_depth_m) / params.transition_width_m).tanh());
    let near_surface = params.near_surface_m2_s
        * (-(z_m - params.near_surface_from_m) / params.near_surface_scale_m).exp();
    params.upper_m2_s + (params.deep_m2_s - params.upper_m2_s) * step + near_surface
}

/// Water and heat that enter and leave the levels; heat is over rho c.
#[derive(Clone, Debug, PartialEq)]
pub struct Sources {
    /// Water that enters, m3 s-1, `[level]`.
    pub inflow: Vec<f64>,
    /// Its volume times temperature, m3 degC s-1, `[level]`.
    pub inflow_heat: Vec<f64>,
    /// Water that leaves at the temperature of the level, m3 s-1, `[level]`.
    pub outflow: Vec<f64>,
    /// Exchange of the top level with each mixed layer without net flow: rate, m3 s-1, and
    /// temperature of that mixed layer, degC.
    pub surface: Vec<(f64, f64)>,
}

impl Sources {
    /// No flow through a column of `levels` levels.
    pub fn none(levels: usize) -> Self {
        let zero = || vec![0.0; levels];
        Self {
            inflow: zero(),
            inflow_heat: zero(),
            outflow: zero(),
            surface: Vec::new(),
        }
    }
}

/// The vertical exchange of one column, with its work space.
#[derive(Clone, Debug)]
pub struct Column {
    scheme: AdvectionScheme,
    volume: Vec<f64>,
    conductance: Vec<f64>,
    convective: Vec<f64>,
    faces: Vec<Face>,
    remainder: Vec<f64>,
    lower: Vec<f64>,
    diagonal: Vec<f64>,
    upper: Vec<f64>,
    solution: Vec<f64>,
    scratch: Vec<f64>,
}

impl Column {
    /// A column of `area_m2` with the diffusivity `kappa(z)`, m2 s-1, and `convective_m2_s` more
    /// where it is unstable.
    pub fn new(
        levels: &ColumnLevels,
        area_m2: f64,
        scheme: AdvectionScheme,
        kappa: impl Fn(f64) -> f64,
        convective_m2_s: f64,
    ) -> Self {
        let n = levels.len();
        let per_diffusivity = |k: usize| {
            let middle = levels.middle_m();
            area_m2 / (middle[k + 1] - middle[k])
        };
        let zero = || vec![0.0; n];
        Self {
            scheme,
            volume: levels.thickness_m().iter().map(|d| area_m2 * d).collect(),
            conductance: (0..n - 1)
                .map(|k| per_diffusivity(k) * kappa(levels.edge_m()[k + 1]))
                .collect(),
            convective: (0..n - 1)
                .map(|k| per_diffusivity(k) * convective_m2_s)
                .collect(),
            faces: Vec::with_capacity(n),
            remainder: zero(),
            lower: zero(),
            diagonal: zero(),
            upper: zero(),
            solution: zero(),
            scratch: zero(),
        }
    }

    /// Heat content over rho c, m3 degC.
    pub fn content(&self, temperature: &[f64]) -> f64 {
        let held = self.volume.iter().zip(temperature);
        let rest = self.volume.iter().zip(&self.remainder);
        compensated(held.chain(rest).map(|(v, t)| v * t))
    }

    /// What the temperatures still owe to rounding, K, `[level]`; part of the state.
    pub fn remainder(&self) -> &[f64] {
        &self.remainder
    }

    /// Sets what [`Self::remainder`] gave.
    ///
    /// # Panics
    /// When the length differs.
    pub fn set_remainder(&mut self, remainder: &[f64]) {
        self.remainder.copy_from_slice(remainder);
    }

    /// Weights of all interfaces for these flows and this stability.
    fn set_faces(&mut self, temperature: &[f64], sources: &Sources) {
        let n = self.volume.len();
        self.faces.clear();
        self.faces.resize(
            n - 1,
            Face {
                below: 0.0,
                above: 0.0,
            },
        );
        let mut flow = 0.0;
        for k in (0..n - 1).rev() {
            flow += sources.inflow[k + 1] - sources.outflow[k + 1];
            let unstable = temperature[k] < temperature[k + 1];
            let extra = if unstable { self.convective[k] } else { 0.0 };
            self.faces[k] = Face::new(self.scheme, flow, self.conductance[k] + extra);
        }
    }

    /// Temperatures after a step of `dt_s` (may be infinite: the steady state), from the linear
    /// system alone.
    pub fn solve(&mut self, temperature: &[f64], sources: &Sources, dt_s: f64) -> &[f64] {
        self.set_faces(temperature, sources);
        let n = self.volume.len();
        for (k, t) in temperature.iter().enumerate().take(n) {
            let inertia = self.volume[k] / dt_s;
            self.diagonal[k] = inertia + sources.outflow[k];
            self.solution[k] = inertia * t + sources.inflow_heat[k];
        }
        for (rate, mixed_layer) in &sources.surface {
            self.diagonal[0] += rate;
            self.solution[0] += rate * mixed_layer;
        }
        for (k, face) in self.faces.iter().enumerate() {
            self.diagonal[k] += face.above;
            self.upper[k] = -face.below;
            self.diagonal[k + 1] += face.below;
            self.lower[k + 1] = -face.above;
        }
        tridiagonal::solve(
            &self.lower,
            &self.diagonal,
            &self.upper,
            &mut self.solution,
            &mut self.scratch,
        );
        &self.solution
    }

    /// Advances `temperature` by one step in flux form and returns the implicit temperatures, at
    /// which water left the levels.
    pub fn step(&mut self, temperature: &mut [f64], sources: &Sources, dt_s: f64) -> &[f64] {
        self.solve(temperature, sources, dt_s);
        let t = &self.solution;
        let gain = &mut self.scratch;
        for k in 0..gain.len() {
            gain[k] = sources.inflow_heat[k] - sources.outflow[k] * t[k];
        }
        let top = t[0];
        gain[0] += compensated(sources.surface.iter().map(|(r, m)| r * (m - top)));
        for (k, face) in self.faces.iter().enumerate() {
            let upward = face.upward(t[k], t[k + 1]);
            gain[k] += upward;
            gain[k + 1] -= upward;
        }
        for (k, value) in temperature.iter_mut().enumerate() {
            let mut sum = CompensatedSum::from_parts([*value, self.remainder[k]]);
            sum.add(gain[k] * dt_s / self.volume[k]);
            *value = sum.value();
            let [high, low] = sum.parts();
            self.remainder[k] = (high - *value) + low;
        }
        &self.solution
    }
}

/// Steady profile of the same kernel for a uniform upwelling velocity, with the temperatures of
/// the top and bottom edges given: Munk's balance (1966) when `kappa` is constant.
pub fn steady_profile(
    levels: &ColumnLevels,
    scheme: AdvectionScheme,
    upwelling_m_s: f64,
    kappa: impl Fn(f64) -> f64,
    edge_temperature_c: [f64; 2],
) -> Vec<f64> {
    let n = levels.len();
    let half = |k: usize, z: f64| {
        let conductance = 2.0 * kappa(z) / levels.thickness_m()[k];
        Face::new(scheme, upwelling_m_s, conductance)
    };
    let top = half(0, 0.0);
    let bottom = half(n - 1, levels.edge_m()[n]);
    let mut sources = Sources::none(n);
    sources.outflow[0] = top.below;
    sources.inflow[0] = top.above;
    sources.inflow_heat[0] = top.above * edge_temperature_c[0];
    sources.outflow[n - 1] = bottom.above;
    sources.inflow[n - 1] = bottom.below;
    sources.inflow_heat[n - 1] = bottom.below * edge_temperature_c[1];
    let mut column = Column::new(levels, 1.0, scheme, kappa, 0.0);
    column
        .solve(&vec![0.0; n], &sources, f64::INFINITY)
        .to_vec()
}
