//! Parameters of the ocean column, as they stand in the configuration.
//!
//! Each field gives symbol, unit, allowed range and source; the equations are in the modules that use
//! them. Numbers themselves live in the reference configuration only.

use crate::physics::{RangeError, Ranges};
use serde::{Deserialize, Serialize};

/// Parameters of [`super::OceanColumn`].
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Params {
    /// Whether the column evolves. A choice of experiment.
    pub evolution: Evolution,
    /// Longest step of the column, yr, > 0; the time of one seasonal year is cut into equal steps
    /// not longer than this. Tuned here (5).
    pub longest_substep_yr: f64,
    /// The column holds the ocean equatorward of this latitude, degrees, 10-90. Tuned here (45).
    pub area_limit_deg: f64,
    /// Levels.
    pub levels: Levels,
    /// Profile at the start of a run.
    pub initial: Initial,
    /// Vertical mixing.
    pub mixing: Mixing,
    /// Exchange of the top level with the mixed layers above it.
    pub surface_exchange: SurfaceExchange,
    /// Where the water of the column comes up.
    pub upwelling: Upwelling,
    /// How much water sinks.
    pub sinking: Sinking,
}

/// Depths that a column may have, m: chosen here, from one that still holds a thermocline to one far
/// below any sea floor, as comparisons with an endless ocean need it.
const DEPTHS_M: std::ops::RangeInclusive<f64> = 100.0..=20_000.0;

/// Whether the column evolves.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Evolution {
    /// The column and the sinking rates follow their equations.
    Prognostic,
    /// The profile, the sinking rates and the heat given to the mixed layers stay as they are;
    /// heat received and given is booked in a reservoir without temperature.
    Frozen,
}

/// Levels of the column.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Levels {
    /// Number of levels, 5-400. Tuned here (40; 80 lift the 20 degC isotherm by 1.2 m).
    pub count: usize,
    /// Depth of the column, m, 100-20000. Mean ocean depth between 30 degrees north and south (ETOPO5).
    pub depth_m: f64,
    /// Thickness of the top level, m, > 0. Tuned here (15): its mean is the water the mixed layers meet, so
    /// it belongs to the calibration (half of it lifts the 20 degC isotherm by 0.6 m).
    pub first_m: f64,
}

/// Initial profile `T_b` + (`T_s` - `T_b`) e^{-z/d}.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Initial {
    /// `T_s`, degC, -2 to 60. Mean of 30S-30N at the surface in the Levitus climatology (25.8).
    pub surface_c: f64,
    /// `T_b`, degC, -2 to 60. Mean of 30S-30N at 4000 m in the Levitus climatology (1.6).
    pub bottom_c: f64,
    /// d, m, > 0. Near the scale kappa/w = 936 m of Munk 1966, reduced for the thermocline;
    /// tuned here (500).
    pub scale_m: f64,
}

/// Form of the vertical advection and mixing between two levels.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum AdvectionScheme {
    /// Water carries the temperature of the level it leaves: first order.
    Upwind,
    /// Exact between two levels for steady flow: second order, positive.
    ExponentialFit,
}

/// Vertical mixing: kappa = k0 + (k1 - k0) (1 + tanh((z - zk)/dk))/2 + ktop e^{-(z - zm)/ztop}.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Mixing {
    /// Numerical form. Tuned here.
    pub advection: AdvectionScheme,
    /// k0, m2 s-1, > 0. Tuned here.
    pub upper_m2_s: f64,
    /// k1, m2 s-1, > 0. Order of the deep value of Bryan & Lewis 1979; tuned here.
    pub deep_m2_s: f64,
    /// zk, m, >= 0. Shape of Bryan & Lewis 1979; tuned here.
    pub transition_depth_m: f64,
    /// dk, m, > 0. Shape of Bryan & Lewis 1979; tuned here.
    pub transition_width_m: f64,
    /// ktop, m2 s-1, >= 0. Tuned here.
    pub near_surface_m2_s: f64,
    /// zm, m, 0-300: depth from which the near-surface part decays. Tuned here.
    pub near_surface_from_m: f64,
    /// ztop, m, >= 10. Tuned here.
    pub near_surface_scale_m: f64,
    /// Added where colder water lies above warmer, m2 s-1, >= 0. Tuned here.
    pub convective_m2_s: f64,
}

/// Exchange of the top level with the mixed layers: velocity `w_ex`, weight 1 - s(|lat|; limit, width).
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct SurfaceExchange {
    /// `w_ex`, m s-1, >= 0. Tuned here.
    pub velocity_m_s: f64,
    /// Centre of the smooth edge, degrees, 5-60. Tuned here.
    pub limit_deg: f64,
    /// Width of the smooth edge, degrees, > 0. Tuned here.
    pub width_deg: f64,
}

/// Where the water of the column comes up.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Upwelling {
    /// Edge of the broad upwelling, degrees, 5-60. Tuned here.
    pub broad_limit_deg: f64,
    /// Width of that smooth edge, degrees, > 0. Tuned here.
    pub broad_width_deg: f64,
    /// Half-width of the equatorial upwelling (standard deviation), degrees, > 0. Tuned here.
    pub equatorial_width_deg: f64,
    /// Latitude of the Southern Ocean upwelling, degrees north, -75 to -30. Tuned here.
    pub southern_latitude_deg: f64,
    /// Its half-width (standard deviation), degrees, > 0. Tuned here.
    pub southern_width_deg: f64,
    /// `z_so`, m, > 0: depth from which it comes. Tuned here.
    pub southern_source_m: f64,
    /// `q_so0`, m3 s-1, >= 0: its rate for a pycnocline of no depth (winds without eddies). Tuned here.
    pub southern_wind_m3_s: f64,
    /// `D_so`, m, > 0: pycnocline depth at which eddies cancel the winds. Tuned here.
    pub southern_eddy_depth_m: f64,
}

/// How much water sinks, and the state it is compared with.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Sinking {
    /// What the deep sinking rate depends on. A choice of experiment: the size and the sign of the
    /// response of the thermocline to tilt depend on it.
    pub closure: Closure,
    /// `q_ref`, m3 s-1, > 0: deep sinking in the reference state. Tuned here.
    pub reference_m3_s: f64,
    /// `L_ref` for the gross winter loss, W, > 0. Reference state; tuned here.
    pub reference_gross_loss_w: f64,
    /// `L_ref` for the net annual loss, W, > 0. Reference state; tuned here.
    pub reference_net_loss_w: f64,
    /// `dT_ref`, K, > 0. Reference state; tuned here.
    pub reference_contrast_k: f64,
    /// `D_ref`, m, > 0. Reference state; tuned here.
    pub reference_depth_m: f64,
    /// Time of approach to the closure's rate, in seasonal years, > 0. Tuned here (2.8: 0.3 a year).
    pub relaxation_yr: f64,
    /// `q_stc`, m3 s-1, >= 0: sinking of the wind-driven shallow cell. Tuned here.
    pub subtropical_m3_s: f64,
}

/// Which heat loss of the sinking regions drives the sinking.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Loss {
    /// Only months of loss count.
    GrossWinter,
    /// Summer gains are subtracted.
    NetAnnual,
}

/// Ready exponents of the closure; see [`super::closure`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Preset {
    /// Density contrast times pycnocline depth squared (Gnanadesikan 1999): exponents 0, 1, 2.
    G,
    /// Gross winter loss times pycnocline depth: exponents 1, 0, 1.
    X,
    /// Gross winter loss over contrast (Walin 1982, normalised): exponents 1, -1, 0.
    W,
    /// Net annual loss alone: exponents 1, 0, 0.
    N,
}

/// What the deep sinking rate depends on.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum Closure {
    /// Always the reference rate.
    Fixed {},
    /// Ready exponents.
    Preset {
        /// Which.
        preset: Preset,
    },
    /// Free exponents.
    Custom {
        /// Which heat loss enters.
        loss: Loss,
        /// nL, dimensionless, 0 to 3; at most 1 with the net loss. User's choice.
        loss_exponent: f64,
        /// nT, dimensionless, -2 to 3. User's choice.
        temperature_exponent: f64,
        /// nD, dimensionless, -0.5 to 4. User's choice.
        depth_exponent: f64,
    },
}

impl Params {
    /// All parameters outside their ranges.
    ///
    /// # Errors
    /// When there is at least one.
    pub fn check(&self) -> Result<(), Vec<RangeError>> {
        let mut r = Ranges::default();
        let substep = self.longest_substep_yr;
        let limit = "must lie between 0.1 and 1000 years";
        r.require(
            "longest_substep_yr",
            substep,
            (0.1..=1000.0).contains(&substep),
            limit,
        );
        within(&mut r, "area_limit_deg", self.area_limit_deg, 10.0..=90.0);
        self.levels.check(&mut r);
        for (key, value) in [
            ("initial.surface_c", self.initial.surface_c),
            ("initial.bottom_c", self.initial.bottom_c),
        ] {
            let allowed = (-2.0..=60.0).contains(&value);
            r.require(key, value, allowed, "must lie between -2 and 60 degC");
        }
        r.positive("initial.scale_m", self.initial.scale_m);
        self.mixing.check(&mut r);
        let e = &self.surface_exchange;
        r.not_negative("surface_exchange.velocity_m_s", e.velocity_m_s);
        within(
            &mut r,
            "surface_exchange.limit_deg",
            e.limit_deg,
            5.0..=60.0,
        );
        r.positive("surface_exchange.width_deg", e.width_deg);
        self.upwelling.check(&mut r, self.levels.depth_m);
        self.sinking.check(&mut r);
        r.finish()
    }
}

fn within(r: &mut Ranges, key: &str, value: f64, range: std::ops::RangeInclusive<f64>) {
    let allowed = range.contains(&value);
    r.require(
        key,
        value,
        allowed,
        "is a latitude outside the range this key allows",
    );
}

impl Levels {
    fn check(&self, r: &mut Ranges) {
        let count = self.count as f64;
        let usable = (5..=400).contains(&self.count);
        r.require("levels.count", count, usable, "must be 5 to 400 levels");
        // The first level is held against a depth and a number that are themselves fine.
        let deep = DEPTHS_M.contains(&self.depth_m);
        let limit = "must lie between 100 and 20000 m";
        r.require("levels.depth_m", self.depth_m, deep, limit);
        r.require(
            "levels.first_m",
            self.first_m,
            self.first_m > 0.0
                && self.first_m.is_finite()
                && (!usable || !deep || self.first_m * count < self.depth_m),
            "must be positive and less than the depth over the number of levels",
        );
    }
}

impl Mixing {
    fn check(&self, r: &mut Ranges) {
        r.positive("mixing.upper_m2_s", self.upper_m2_s);
        r.positive("mixing.deep_m2_s", self.deep_m2_s);
        r.not_negative("mixing.transition_depth_m", self.transition_depth_m);
        r.positive("mixing.transition_width_m", self.transition_width_m);
        r.not_negative("mixing.near_surface_m2_s", self.near_surface_m2_s);
        r.require(
            "mixing.near_surface_from_m",
            self.near_surface_from_m,
            (0.0..=300.0).contains(&self.near_surface_from_m),
            "must lie between 0 and 300 m",
        );
        r.require(
            "mixing.near_surface_scale_m",
            self.near_surface_scale_m,
            self.near_surface_scale_m >= 10.0 && self.near_surface_scale_m.is_finite(),
            "must be at least 10 m",
        );
        r.not_negative("mixing.convective_m2_s", self.convective_m2_s);
    }
}

impl Upwelling {
    fn check(&self, r: &mut Ranges, bottom_m: f64) {
        let (limit, south) = (self.broad_limit_deg, self.southern_latitude_deg);
        let has_bottom = DEPTHS_M.contains(&bottom_m); // Otherwise the depth is told to be wrong, not the source.
        within(r, "upwelling.broad_limit_deg", limit, 5.0..=60.0);
        r.positive("upwelling.broad_width_deg", self.broad_width_deg);
        r.positive("upwelling.equatorial_width_deg", self.equatorial_width_deg);
        within(r, "upwelling.southern_latitude_deg", south, -75.0..=-30.0);
        r.positive("upwelling.southern_width_deg", self.southern_width_deg);
        r.require(
            "upwelling.southern_source_m",
            self.southern_source_m,
            self.southern_source_m > 0.0
                && self.southern_source_m.is_finite()
                && (!has_bottom || self.southern_source_m < bottom_m),
            "must be positive and above the bottom of the column",
        );
        r.not_negative("upwelling.southern_wind_m3_s", self.southern_wind_m3_s);
        r.positive(
            "upwelling.southern_eddy_depth_m",
            self.southern_eddy_depth_m,
        );
    }
}

impl Sinking {
    fn check(&self, r: &mut Ranges) {
        r.positive("sinking.reference_m3_s", self.reference_m3_s);
        r.positive(
            "sinking.reference_gross_loss_w",
            self.reference_gross_loss_w,
        );
        r.positive("sinking.reference_net_loss_w", self.reference_net_loss_w);
        r.positive("sinking.reference_contrast_k", self.reference_contrast_k);
        r.positive("sinking.reference_depth_m", self.reference_depth_m);
        r.positive("sinking.relaxation_yr", self.relaxation_yr);
        r.not_negative("sinking.subtropical_m3_s", self.subtropical_m3_s);
        if let Closure::Custom {
            loss,
            loss_exponent,
            temperature_exponent,
            depth_exponent,
        } = self.closure
        {
            let (most, limit) = match loss {
                Loss::GrossWinter => (3.0, "must lie between 0 and 3"),
                Loss::NetAnnual => (
                    1.0,
                    "must lie between 0 and 1 with the net loss (loop gain 0.5 per unit)",
                ),
            };
            r.require(
                "sinking.closure.loss_exponent",
                loss_exponent,
                (0.0..=most).contains(&loss_exponent),
                limit,
            );
            r.require(
                "sinking.closure.temperature_exponent",
                temperature_exponent,
                (-2.0..=3.0).contains(&temperature_exponent),
                "must lie between -2 and 3",
            );
            r.require(
                "sinking.closure.depth_exponent",
                depth_exponent,
                (-0.5..=4.0).contains(&depth_exponent),
                "must lie between -0.5 and 4",
            );
        }
    }
}
