//! Scratch values of one time step.
//!
//! Everything that belongs to one band lies in a row of four bands, so that a pass over the rows
//! stays within the fastest memory; what a loop along the meridian needs lies in plain fields.

use crate::numerics::lanes::{Lanes, Rows};

macro_rules! work_row {
    ($($(#[$doc:meta])* $field:ident),* $(,)?) => {
        /// Values of four bands at the extrapolated state; see the fields.
        #[derive(Clone, Copy, Debug)]
        pub(super) struct WorkRow { $($(#[$doc])* pub $field: Lanes),* }
        impl WorkRow {
            fn new() -> Self {
                Self { $($field: Lanes::splat(0.0)),* }
            }
        }
    };
}

work_row! {
    /// Extrapolated air temperature, humidity at saturation there and its slope.
    air, air_humidity, air_humidity_slope,
    /// Extrapolation of the air minus the level of the formula, and sunlight it absorbs.
    air_lead, air_absorbed,
    /// Slope of that sunlight with the land's temperature, per area of land.
    air_absorbed_land,
    /// Land: flux to air F*, slopes F_s and F_a, emission to space, absorbed S* and S'.
    land_flux, land_flux_slope, land_flux_air, land_emission, land_absorbed, land_absorbed_slope,
    /// Land: residual and one over the Newton slope.
    land_residual, land_per_newton,
    /// First guess of the land's step from its extrapolation, about which its snow is linear.
    land_guess,
    /// Snow cover of the land at the end of the step, its mean over the step, and slopes.
    snow, snow_slope, snow_mean, snow_mean_slope,
    /// Ocean: flux to air X*, dX/dE, dX/dT_a.
    ocean_flux, ocean_flux_enthalpy, ocean_flux_air,
    /// Ocean: emission to space and slopes.
    ocean_emission, ocean_emission_enthalpy, ocean_emission_air,
    /// Ocean: absorbed sunlight and slope.
    ocean_absorbed, ocean_absorbed_enthalpy,
    /// Flux into the seasonal thermocline and slope.
    sub_flux, sub_flux_enthalpy,
    /// Ocean: residual and one over the Newton slope.
    ocean_residual, ocean_per_newton,
    /// One where the water is open, zero where there is ice.
    open_water,
    /// Mixed-layer temperature, ice cover, ice surface temperature.
    water_temperature, ice_cover, ice_surface,
    /// One where a Newton slope was limited.
    strained,
    /// Sinking: weight or rate (m3 s-1) of deep water.
    deep_sinking,
}

/// Values of one step.
#[derive(Clone, Debug)]
pub(super) struct Work {
    pub rows: Vec<WorkRow>,
    /// Mixed-layer temperature once more, degC.
    pub water_temperature: Rows,
    /// Sinking of the shallow cell (weights), then of all water (m3 s-1).
    pub sinking: Rows,
    /// Heat brought by currents: W per band, then W per m2 of ocean.
    pub brought: Rows,
    /// Right-hand side and solution of the implicit gyre correction.
    pub correction: Rows,
    /// Right-hand side, then solution of the air's system.
    pub air_increment: Rows,
    /// Convergence of the air's transport, W m-2.
    pub air_convergence: Rows,
    /// The air's system.
    pub lower: Rows,
    pub diagonal: Rows,
    pub upper: Rows,
    pub scratch: Rows,
    /// Moist static energy over the specific heat, K, and its slope with temperature.
    pub static_energy: Rows,
    pub static_energy_slope: Rows,
}

impl Work {
    pub(super) fn new(bands: usize) -> Self {
        let field = || Rows::new(bands, 0.0);
        Self {
            rows: vec![WorkRow::new(); bands / crate::numerics::lanes::WIDTH],
            water_temperature: field(),
            sinking: field(),
            brought: field(),
            correction: field(),
            air_increment: field(),
            air_convergence: field(),
            lower: field(),
            diagonal: field(),
            upper: field(),
            scratch: field(),
            static_energy: field(),
            static_energy_slope: field(),
        }
    }
}
