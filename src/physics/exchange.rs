//! What the components tell each other, once a seasonal year, in annual means.
//!
//! Coupling by annual means is deliberate: advancing a slow component inside the season at an
//! accelerated pace gives it a false response to precession. Every field says who writes it;
//! everybody may read everything.

use crate::grid::latitude::LatitudeBands;

/// The planet's surface in latitude bands. Fixed during a run.
#[derive(Clone, Debug, PartialEq)]
pub struct Surface {
    /// The bands.
    pub bands: LatitudeBands,
    /// Land fraction of each band, 0-1 (ice shelves count as land).
    pub land_fraction: Vec<f64>,
    /// Mean elevation of the land of each band, m.
    pub land_elevation_m: Vec<f64>,
    /// Fraction of the land under permanent ice, 0-1.
    pub ice_sheet_fraction: Vec<f64>,
    /// Ocean area of each band, m2; exactly zero where the band is all land.
    pub ocean_area_m2: Vec<f64>,
}

/// Interface fields between components.
#[derive(Clone, Debug, PartialEq)]
pub struct Exchange {
    /// Mixed-layer temperature, annual mean, degC, `[band]`. Written by `energy_balance`.
    pub mixed_layer_temperature_c: Vec<f64>,
    /// Volume of water that sank out of the mixed layer in the year, m3, `[month][band]`.
    /// Written by `energy_balance`.
    pub sinking_volume_m3: Vec<f64>,
    /// Volume times temperature of that water, m3 degC, `[month][band]`. Written by
    /// `energy_balance`; exactly what its mixed layer lost.
    pub sinking_heat_m3_c: Vec<f64>,
    /// Volume-weighted temperature of the water that sank in high latitudes, degC. Written by
    /// `energy_balance`.
    pub deep_sinking_temperature_c: f64,
    /// Heat lost by the ocean surface in the sinking regions, counting only months of loss
    /// ("gross winter loss"), annual mean, W, `[south, north]`. Written by `energy_balance`.
    pub gross_sinking_loss_w: [f64; 2],
    /// The same with summer gains subtracted ("net annual loss"), W, `[south, north]`. Written by
    /// `energy_balance`.
    pub net_sinking_loss_w: [f64; 2],
    /// Northward heat transport of the atmosphere at band edges, annual mean, W. Written by
    /// `energy_balance`.
    pub atmosphere_transport_w: Vec<f64>,
    /// Net energy input to the atmosphere (top of the atmosphere minus surface), annual mean,
    /// W m-2, `[band]`. Written by `energy_balance`.
    pub atmosphere_energy_input_w_m2: Vec<f64>,
    /// 2 m air temperature over land, degC, `[month][band]`. Written by `energy_balance`.
    pub land_air_2m_c: Vec<f64>,
    /// 2 m air temperature over ocean, degC, `[month][band]`. Written by `energy_balance`.
    pub ocean_air_2m_c: Vec<f64>,

    /// Heat the column gives to the mixed layer of each band, W; held during the next year.
    /// Written by `ocean_column`.
    pub column_heat_w: Vec<f64>,
    /// Water that upwells into each band, m3 s-1; held during the next year. Written by
    /// `ocean_column`. Its sum equals the two sinking rates below.
    pub upwelling_m3_s: Vec<f64>,
    /// Sinking in high latitudes, m3 s-1; held during the next year. Written by `ocean_column`.
    pub deep_sinking_m3_s: f64,
    /// Sinking in the subtropics (wind-driven shallow cell), m3 s-1. Written by `ocean_column`.
    pub subtropical_sinking_m3_s: f64,
    /// Share of the column's area in each band, sum 1. Written by `ocean_column`.
    pub column_area_share: Vec<f64>,
    /// Middle of the column's levels, m. Written by `ocean_column`.
    pub column_depth_m: Vec<f64>,
    /// Column temperature, degC, `[level]`. Written by `ocean_column`.
    pub column_temperature_c: Vec<f64>,
}

impl Exchange {
    /// No flow, no heat, nothing told yet.
    pub fn new(bands: usize) -> Self {
        let zero = || vec![0.0; bands];
        Self {
            mixed_layer_temperature_c: zero(),
            sinking_volume_m3: vec![0.0; 12 * bands],
            sinking_heat_m3_c: vec![0.0; 12 * bands],
            deep_sinking_temperature_c: 0.0,
            gross_sinking_loss_w: [0.0; 2],
            net_sinking_loss_w: [0.0; 2],
            atmosphere_transport_w: vec![0.0; bands + 1],
            atmosphere_energy_input_w_m2: zero(),
            land_air_2m_c: vec![0.0; 12 * bands],
            ocean_air_2m_c: vec![0.0; 12 * bands],
            column_heat_w: zero(),
            upwelling_m3_s: zero(),
            deep_sinking_m3_s: 0.0,
            subtropical_sinking_m3_s: 0.0,
            column_area_share: zero(),
            column_depth_m: Vec::new(),
            column_temperature_c: Vec::new(),
        }
    }

    /// All fields one after another, for restart files.
    pub fn save(&self) -> Vec<f64> {
        let mut all = self.clone();
        let mut values = Vec::new();
        all.fields(&mut |field| values.extend_from_slice(field));
        values
    }

    /// Restores what [`Exchange::save`] gave into an exchange of the same shape; `None` when the
    /// number of values does not fit.
    pub fn restore(&mut self, mut values: &[f64]) -> Option<()> {
        let mut needed = 0;
        self.fields(&mut |field| needed += field.len());
        if needed != values.len() {
            return None;
        }
        self.fields(&mut |field| {
            let (mine, rest) = values.split_at(field.len());
            field.copy_from_slice(mine);
            values = rest;
        });
        Some(())
    }

    fn fields(&mut self, visit: &mut dyn FnMut(&mut [f64])) {
        let Self {
            mixed_layer_temperature_c,
            sinking_volume_m3,
            sinking_heat_m3_c,
            deep_sinking_temperature_c,
            gross_sinking_loss_w,
            net_sinking_loss_w,
            atmosphere_transport_w,
            atmosphere_energy_input_w_m2,
            land_air_2m_c,
            ocean_air_2m_c,
            column_heat_w,
            upwelling_m3_s,
            deep_sinking_m3_s,
            subtropical_sinking_m3_s,
            column_area_share,
            column_depth_m,
            column_temperature_c,
        } = self;
        for field in [
            mixed_layer_temperature_c,
            sinking_volume_m3,
            sinking_heat_m3_c,
            atmosphere_transport_w,
            atmosphere_energy_input_w_m2,
            land_air_2m_c,
            ocean_air_2m_c,
            column_heat_w,
            upwelling_m3_s,
            column_area_share,
            column_depth_m,
            column_temperature_c,
        ] {
            visit(field);
        }
        visit(gross_sinking_loss_w);
        visit(net_sinking_loss_w);
        for number in [
            deep_sinking_temperature_c,
            deep_sinking_m3_s,
            subtropical_sinking_m3_s,
        ] {
            visit(std::slice::from_mut(number));
        }
    }
}
