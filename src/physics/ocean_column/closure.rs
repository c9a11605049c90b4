//! Closure of the sinking rate: how much water sinks in high latitudes.
//!
//! q = `q_ref` (L/`L_ref`)^nL (dT/`dT_ref`)^nT (D/`D_ref`)^nD, with L the heat loss of the sinking
//! regions (W; gross winter or net annual), dT = `T_low` - `T_sink` (K), D the pycnocline scale (m);
//! generalises Bryan 1987 (J. Phys. Oceanogr. 17:970) and Gnanadesikan 1999 (Science 283:2077), and Walin 1982
//! (Tellus 34:187) for the loss; titles from memory.
//!
//! All presets are normalised by one reference state and so share it; away from it they differ
//! in size *and sign*, which is why the choice is the user's.
//!
//! Loop gains. More sinking thins the pycnocline, so nD > 0 damps: D ~ (L^nL dT^nT)^(-1/(1+nD)). The *net* loss
//! itself grows with the overturning that feeds it: its elasticity to q, measured with the full model at 0.7 and
//! 1.3 of the reference rate, is 0.40 and 0.59, so the loop has a gain of about 0.5 nL: nL = 1 amplifies
//! 1/(1 - 0.5) = 2 times, nL >= 2 runs
//! away. Exponents above 1 are therefore refused with the net loss, and q always stays within
//! 0.2-3 `q_ref`.
//!
//! The rate approaches its target by the factor 1 - exp(-1/`relaxation_yr`) once each *seasonal* year,
//! whatever number of years the column advances in it: its task is to damp the exchange between
//! two models that meet once a year. Steady states do not depend on it.
//!
//! A year in which no deep water formed (its temperature does not exist) leaves the rate as it is.
//!
//! Southern Ocean: `q_so` = `q_so0` (1 - D/`D_so`), winds minus eddies (Gnanadesikan 1999), 0 to 0.9 q.

use super::params::{Closure, Loss, Preset, Sinking, Upwelling};

/// Smallest contrast the closure sees, K: keeps powers finite. Tuned here.
pub const SMALLEST_CONTRAST_K: f64 = 0.5;
/// Smallest pycnocline depth the closure sees, m. Tuned here.
pub const SMALLEST_DEPTH_M: f64 = 20.0;
/// Smallest heat loss the closure sees, W. Tuned here.
pub const SMALLEST_LOSS_W: f64 = 0.05e15;
/// Bounds of q / `q_ref`. Tuned here.
pub const RATE_BOUNDS: [f64; 2] = [0.2, 3.0];
/// Largest share of the deep sinking that may return through the Southern Ocean. Tuned here.
pub const LARGEST_SOUTHERN_SHARE: f64 = 0.9;

/// Exponents of the closure and the loss it uses.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Exponents {
    /// Which loss.
    pub loss: Loss,
    /// nL.
    pub n_loss: f64,
    /// nT.
    pub n_contrast: f64,
    /// nD.
    pub n_depth: f64,
}

impl Closure {
    /// The exponents meant by this choice.
    pub fn exponents(&self) -> Exponents {
        let make = |loss, [n_loss, n_contrast, n_depth]: [f64; 3]| Exponents {
            loss,
            n_loss,
            n_contrast,
            n_depth,
        };
        match *self {
            Self::Fixed {} => make(Loss::GrossWinter, [0.0; 3]),
            Self::Preset { preset } => match preset {
                Preset::G => make(Loss::GrossWinter, [0.0, 1.0, 2.0]),
                Preset::X => make(Loss::GrossWinter, [1.0, 0.0, 1.0]),
                Preset::W => make(Loss::GrossWinter, [1.0, -1.0, 0.0]),
                Preset::N => make(Loss::NetAnnual, [1.0, 0.0, 0.0]),
            },
            Self::Custom {
                loss,
                loss_exponent,
                temperature_exponent,
                depth_exponent,
            } => make(loss, [loss_exponent, temperature_exponent, depth_exponent]),
        }
    }
}

/// State on which the closure acts.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Drivers {
    /// Gross winter loss of the sinking regions, both hemispheres, W.
    pub gross_loss_w: f64,
    /// Net annual loss of the sinking regions, both hemispheres, W.
    pub net_loss_w: f64,
    /// `T_low` - `T_sink`, K.
    pub contrast_k: f64,
    /// Pycnocline scale D, m.
    pub depth_m: f64,
}

/// The larger of two numbers; a NaN stays, so that a broken state is seen.
fn at_least(value: f64, least: f64) -> f64 {
    if value < least { least } else { value }
}

/// The rate at which water would sink in this state, m3 s-1.
pub fn target(params: &Sinking, drivers: &Drivers) -> f64 {
    let e = params.closure.exponents();
    let (loss, reference) = match e.loss {
        Loss::GrossWinter => (drivers.gross_loss_w, params.reference_gross_loss_w),
        Loss::NetAnnual => (drivers.net_loss_w, params.reference_net_loss_w),
    };
    let loss = at_least(loss, SMALLEST_LOSS_W) / reference;
    let contrast = at_least(drivers.contrast_k, SMALLEST_CONTRAST_K) / params.reference_contrast_k;
    let depth = at_least(drivers.depth_m, SMALLEST_DEPTH_M) / params.reference_depth_m;
    let ratio = loss.powf(e.n_loss) * contrast.powf(e.n_contrast) * depth.powf(e.n_depth);
    params.reference_m3_s * ratio.clamp(RATE_BOUNDS[0], RATE_BOUNDS[1])
}

/// The rate after one seasonal year of approach to `target`, m3 s-1.
pub fn relaxed(params: &Sinking, rate: f64, target: f64) -> f64 {
    rate - (target - rate) * (-1.0 / params.relaxation_yr).exp_m1()
}

/// Water that returns through the Southern Ocean, m3 s-1.
pub fn southern(params: &Upwelling, depth_m: f64, deep_sinking: f64) -> f64 {
    let rate = params.southern_wind_m3_s * (1.0 - depth_m / params.southern_eddy_depth_m);
    rate.min(LARGEST_SOUTHERN_SHARE * deep_sinking).max(0.0)
}
