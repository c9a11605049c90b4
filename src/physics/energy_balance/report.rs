//! What a year amounted to: interface fields for the other components, the heat account, and the
//! values for the file.
//!
//! The 2 m air temperature is defined here and nowhere else:
//!   T_2m = w `T_s` + (1 - w) (`T_a` - Gamma z),
//! with the same weight w over land (surface `T_l`, elevation z) and ocean (water and ice surface
//! by cover, z = 0); a band's value is the mean by area.
//!
//! The ocean's meridional transport is that of the mixed layer (gyres, overturning) plus what
//! the column must carry sideways to give each band its heat; a change of heat stored in the
//! column is spread evenly over the column's area, so the transport vanishes at both poles.

use super::coefficients::Coefficients;
use super::means::{Means, Node};
use super::params::Params;
use super::state::State;
use crate::grid::calendar::Calendar;
use crate::numerics::sum::{CompensatedSum, compensated};
use crate::physics::budget::{Account, Flow, Quantity};
use crate::physics::exchange::{Exchange, Surface};
use crate::series::{Axis, Scale, Variable};
use crate::units::{PETAWATT_W, SEA_WATER_HEAT_CAPACITY_J_M3_K, YEAR_SECONDS};

/// Latitude that bounds the high latitudes in the summed ocean heat loss, degrees.
const HIGH_LATITUDE_DEG: f64 = 45.0;
/// Latitude that bounds the tropics in the summed ocean heat gain, degrees.
const TROPICS_DEG: f64 = 30.0;

/// Last year's results.
#[derive(Clone, Debug)]
pub(super) struct Report {
    surface_weight: f64,
    pub account: Account,
    values: Vec<f64>,
}

const BY_MONTH: &[Axis] = &[Axis::Month, Axis::Latitude];

macro_rules! variable {
    ($name:literal, $axes:expr, $units:literal, $long:literal, $standard:expr, $scale:ident) => {
        Variable {
            name: $name,
            axes: $axes,
            units: $units,
            long_name: $long,
            standard_name: $standard,
            scale: Scale::$scale,
        }
    };
}

/// The variables of [`Report::record`], in order.
pub(super) fn variables() -> Vec<Variable> {
    let mut list = monthly_variables();
    list.extend(annual_variables());
    list
}

fn monthly_variables() -> Vec<Variable> {
    vec![
        variable!(
            "insolation",
            BY_MONTH,
            "W m-2",
            "insolation at the top of the atmosphere",
            Some("toa_incoming_shortwave_flux"),
            Plain
        ),
        variable!(
            "air_temperature_sea_level",
            BY_MONTH,
            "degC",
            "temperature of the air column brought to sea level",
            None,
            Temperature
        ),
        variable!(
            "land_surface_temperature",
            BY_MONTH,
            "degC",
            "land surface temperature at the land's elevation",
            Some("surface_temperature"),
            Temperature
        ),
        variable!(
            "ocean_temperature",
            BY_MONTH,
            "degC",
            "temperature of the ocean mixed layer",
            Some("sea_surface_temperature"),
            Temperature
        ),
        variable!(
            "air_temperature_2m",
            BY_MONTH,
            "degC",
            "air temperature at 2 m",
            Some("air_temperature"),
            Temperature
        ),
        variable!(
            "land_air_temperature_2m",
            BY_MONTH,
            "degC",
            "air temperature at 2 m over land",
            Some("air_temperature"),
            Temperature
        ),
        variable!(
            "ocean_air_temperature_2m",
            BY_MONTH,
            "degC",
            "air temperature at 2 m over ocean and sea ice",
            Some("air_temperature"),
            Temperature
        ),
        variable!(
            "snow_cover",
            BY_MONTH,
            "1",
            "fraction of the land under snow or ice sheet",
            Some("surface_snow_area_fraction"),
            Plain
        ),
        variable!(
            "sea_ice_fraction",
            BY_MONTH,
            "1",
            "fraction of the ocean under sea ice",
            Some("sea_ice_area_fraction"),
            Plain
        ),
        variable!(
            "sea_ice_thickness",
            BY_MONTH,
            "m",
            "sea-ice volume per area of ocean",
            None,
            Plain
        ),
    ]
}

fn annual_variables() -> Vec<Variable> {
    const EDGES: &[Axis] = &[Axis::LatitudeEdge];
    const BOTH: &[Axis] = &[Axis::Hemisphere];
    vec![
        variable!(
            "ocean_heat_transport",
            EDGES,
            "PW",
            "northward heat transport of the ocean",
            Some("northward_ocean_heat_transport"),
            Plain
        ),
        variable!(
            "atmosphere_heat_transport",
            EDGES,
            "PW",
            "northward heat transport of the atmosphere",
            Some("northward_atmosphere_heat_transport"),
            Plain
        ),
        variable!(
            "total_heat_transport",
            EDGES,
            "PW",
            "northward heat transport of ocean and atmosphere",
            None,
            Plain
        ),
        variable!(
            "ocean_surface_gain",
            &[Axis::Latitude],
            "W m-2",
            "net heat gain of the ocean through its surface, per area of ocean",
            Some("surface_downward_heat_flux_in_sea_water"),
            Plain
        ),
        variable!(
            "absorbed_solar",
            &[Axis::Latitude],
            "W m-2",
            "absorbed solar radiation",
            None,
            Plain
        ),
        variable!(
            "outgoing_longwave",
            &[Axis::Latitude],
            "W m-2",
            "outgoing longwave radiation",
            Some("toa_outgoing_longwave_flux"),
            Plain
        ),
        variable!(
            "sea_ice_area",
            BOTH,
            "m2",
            "sea-ice area",
            Some("sea_ice_area"),
            Plain
        ),
        variable!(
            "high_latitude_ocean_loss_net",
            BOTH,
            "PW",
            "net annual heat loss of the ocean poleward of 45 degrees",
            None,
            Plain
        ),
        variable!(
            "sinking_region_loss_net",
            BOTH,
            "PW",
            "net annual heat loss of the ocean in the deep-sinking regions",
            None,
            Plain
        ),
        variable!(
            "sinking_region_loss_gross",
            BOTH,
            "PW",
            "heat loss of the ocean in the deep-sinking regions, seasons of loss only",
            None,
            Plain
        ),
        variable!(
            "tropical_ocean_gain",
            &[],
            "PW",
            "net annual heat gain of the ocean within 30 degrees of the equator",
            None,
            Plain
        ),
        variable!(
            "global_air_temperature_2m",
            &[],
            "degC",
            "global annual mean air temperature at 2 m",
            Some("air_temperature"),
            Temperature
        ),
        variable!(
            "global_absorbed_solar",
            &[],
            "W m-2",
            "global mean absorbed solar radiation",
            None,
            Plain
        ),
        variable!(
            "global_outgoing_longwave",
            &[],
            "W m-2",
            "global mean outgoing longwave radiation",
            Some("toa_outgoing_longwave_flux"),
            Plain
        ),
        variable!(
            "planetary_albedo",
            &[],
            "1",
            "planetary albedo",
            Some("planetary_albedo"),
            Plain
        ),
    ]
}

impl Report {
    pub(super) fn new(p: &Params, bands: usize) -> Self {
        let account = Account {
            component: "energy_balance",
            quantity: Quantity::Energy,
            stored: CompensatedSum::default(),
            from_outside: Vec::new(),
            from_components: Vec::new(),
        };
        let length = 10 * 12 * bands + 3 * (bands + 1) + 3 * bands + 13;
        Self {
            surface_weight: p.air_2m_surface_weight,
            account,
            values: Vec::with_capacity(length),
        }
    }

    pub(super) fn record(&self, values: &mut Vec<f64>) {
        values.extend_from_slice(&self.values);
    }

    /// Works out everything from the sums of the year.
    pub(super) fn close_year(
        &mut self,
        c: &Coefficients,
        surface: &Surface,
        m: &Means,
        s: &State,
        exchange: &mut Exchange,
    ) {
        self.account(c, m, s, exchange);
        tell(c, m, exchange);
        self.two_metre(c, m, exchange);
        self.values.clear();
        self.monthly(c, m, exchange);
        self.annual(c, surface, m, exchange);
    }

    fn account(&mut self, c: &Coefficients, m: &Means, s: &State, exchange: &Exchange) {
        let area = c.area_m2.flat();
        let flow = |name, amount| Flow { name, amount };
        self.account.stored = s.heat_j(c);
        self.account.from_outside = vec![
            flow(
                "sunlight absorbed by the air",
                m.absorbed_air.weighted(area, c.step_s),
            ),
            flow(
                "sunlight absorbed by land",
                m.absorbed_land.weighted(area, c.step_s),
            ),
            flow(
                "sunlight absorbed by the ocean",
                m.absorbed_ocean.weighted(area, c.step_s),
            ),
            flow(
                "radiation emitted to space",
                m.emitted.weighted(area, c.step_s).negated(),
            ),
        ];
        let mut given = CompensatedSum::default();
        exchange
            .column_heat_w
            .iter()
            .for_each(|w| given.add_product(*w, YEAR_SECONDS));
        let mut sunk = CompensatedSum::default();
        for heat in m.sunk_heat.iter().flat_map(|rows| rows.flat()) {
            sunk.add_product(*heat, -SEA_WATER_HEAT_CAPACITY_J_M3_K);
        }
        self.account.from_components = vec![
            flow("heat from the column", given),
            flow("sinking water", sunk),
        ];
    }

    /// 2 m temperatures by month into the exchange.
    fn two_metre(&self, c: &Coefficients, m: &Means, exchange: &mut Exchange) {
        let (w, n) = (self.surface_weight, c.bands);
        let lifts = c.elevation_k.flat();
        for (month, node) in m.monthly.iter().enumerate() {
            let row = month * n..(month + 1) * n;
            let (land, ocean) = (
                &mut exchange.land_air_2m_c[row.clone()],
                &mut exchange.ocean_air_2m_c[row],
            );
            let fields = (node.air.flat(), node.land.flat(), node.ocean_surface.flat());
            for i in 0..n {
                land[i] = w * fields.1[i] + (1.0 - w) * (fields.0[i] - lifts[i]);
                ocean[i] = w * fields.2[i] + (1.0 - w) * fields.0[i];
            }
        }
    }

    fn monthly(&mut self, c: &Coefficients, m: &Means, exchange: &Exchange) {
        let n = c.bands;
        let (land, ocean) = (c.land.flat(), c.ocean.flat());
        let over = |share: f64, value: f64| if share > 0.0 { value } else { f64::NAN };
        let values = &mut self.values;
        let mut put = |value: &dyn Fn(&Node, usize, usize) -> f64| {
            for (month, node) in m.monthly.iter().enumerate() {
                values.extend((0..n).map(|i| value(node, month * n + i, i)));
            }
        };
        put(&|node, _, i| node.insolation.flat()[i]);
        put(&|node, _, i| node.air.flat()[i]);
        put(&|node, _, i| over(land[i], node.land.flat()[i]));
        put(&|node, _, i| over(ocean[i], node.water.flat()[i]));
        put(&|_, k, i| land[i] * exchange.land_air_2m_c[k] + ocean[i] * exchange.ocean_air_2m_c[k]);
        put(&|_, k, i| over(land[i], exchange.land_air_2m_c[k]));
        put(&|_, k, i| over(ocean[i], exchange.ocean_air_2m_c[k]));
        let sheet = c.sheet.flat();
        put(&|node, _, i| over(land[i], sheet[i] + (1.0 - sheet[i]) * node.snow.flat()[i]));
        put(&|node, _, i| over(ocean[i], node.ice_cover.flat()[i]));
        put(&|node, _, i| over(ocean[i], node.ice_thickness.flat()[i]));
    }

    fn annual(&mut self, c: &Coefficients, surface: &Surface, m: &Means, exchange: &Exchange) {
        let per_step = 1.0 / c.steps as f64;
        let column = column_transport(c, m, exchange);
        let ocean: Vec<f64> = m
            .ocean_flux_w
            .iter()
            .zip(&column)
            .map(|(s, below)| s * per_step + below)
            .collect();
        let air = &exchange.atmosphere_transport_w;
        self.values.extend(ocean.iter().map(|v| v / PETAWATT_W));
        self.values.extend(air.iter().map(|v| v / PETAWATT_W));
        self.values
            .extend(ocean.iter().zip(air).map(|(o, a)| (o + a) / PETAWATT_W));
        let has_ocean = c.has_ocean.flat();
        let gain: Vec<f64> = m.ocean_gain.flat().iter().map(|v| v * per_step).collect();
        self.values.extend((0..c.bands).map(|i| {
            if has_ocean[i] > 0.0 {
                gain[i]
            } else {
                f64::NAN
            }
        }));
        let absorbed: Vec<f64> = (0..c.bands)
            .map(|i| {
                let parts = [&m.absorbed_air, &m.absorbed_land, &m.absorbed_ocean];
                parts.iter().map(|sums| sums.band(i)).sum::<f64>() * per_step
            })
            .collect();
        let emitted: Vec<f64> = (0..c.bands).map(|i| m.emitted.band(i) * per_step).collect();
        self.values.extend_from_slice(&absorbed);
        self.values.extend_from_slice(&emitted);
        self.sums(c, surface, m, &gain, exchange);
        self.global(surface, m, &absorbed, &emitted);
    }

    fn sums(
        &mut self,
        c: &Coefficients,
        surface: &Surface,
        m: &Means,
        gain: &[f64],
        exchange: &Exchange,
    ) {
        let latitude = surface.bands.centre_deg();
        let area = c.ocean_area_m2.flat();
        let mut ice = [0.0; 2];
        let mut loss = [0.0; 2];
        let mut tropics = 0.0;
        for i in 0..c.bands {
            let side = usize::from(latitude[i] > 0.0);
            ice[side] += area[i] * annual(m, |node| node.ice_cover.flat()[i]);
            let beyond = poleward_share(surface, i, HIGH_LATITUDE_DEG);
            loss[side] -= beyond * area[i] * gain[i];
            tropics += (1.0 - poleward_share(surface, i, TROPICS_DEG)) * area[i] * gain[i];
        }
        self.values.extend_from_slice(&ice);
        self.values.extend(loss.map(|v| v / PETAWATT_W));
        self.values
            .extend(exchange.net_sinking_loss_w.map(|v| v / PETAWATT_W));
        self.values
            .extend(exchange.gross_sinking_loss_w.map(|v| v / PETAWATT_W));
        self.values.push(tropics / PETAWATT_W);
    }

    fn global(&mut self, surface: &Surface, m: &Means, absorbed: &[f64], emitted: &[f64]) {
        let n = surface.bands.len();
        let two_metre = &self.values[4 * 12 * n..5 * 12 * n];
        let lengths = Calendar.month_shares();
        let monthly: f64 = two_metre
            .chunks(n)
            .zip(lengths)
            .map(|(month, share)| share * surface.bands.mean(month))
            .sum();
        let incoming: Vec<f64> = (0..n)
            .map(|i| annual(m, |node| node.insolation.flat()[i]))
            .collect();
        let (taken, given) = (surface.bands.mean(absorbed), surface.bands.mean(emitted));
        let albedo = 1.0 - taken / surface.bands.mean(&incoming);
        self.values.extend([monthly, taken, given, albedo]);
    }
}

/// Annual mean of a monthly quantity.
fn annual(m: &Means, value: impl Fn(&Node) -> f64) -> f64 {
    m.monthly
        .iter()
        .zip(Calendar.month_shares())
        .map(|(node, share)| share * value(node))
        .sum()
}

/// Share of band `i`'s area poleward of `latitude_deg` in its hemisphere.
fn poleward_share(surface: &Surface, i: usize, latitude_deg: f64) -> f64 {
    let edges = surface.bands.edge_sine();
    let (a, b) = (
        edges[i].abs().min(edges[i + 1].abs()),
        edges[i].abs().max(edges[i + 1].abs()),
    );
    ((b - latitude_deg.to_radians().sin().max(a)) / (b - a)).clamp(0.0, 1.0)
}

/// Northward transport through the edges that the column must carry, W.
fn column_transport(c: &Coefficients, m: &Means, exchange: &Exchange) -> Vec<f64> {
    let given: Vec<f64> = (0..c.bands)
        .map(|i| {
            let sunk: f64 = m.sunk_heat.iter().map(|rows| rows.flat()[i]).sum();
            exchange.column_heat_w[i] - SEA_WATER_HEAT_CAPACITY_J_M3_K * sunk / YEAR_SECONDS
        })
        .collect();
    let total = compensated(given.iter().copied());
    let mut edges = vec![0.0; c.bands + 1];
    for i in 0..c.bands {
        edges[i + 1] = edges[i] - (given[i] - total * exchange.column_area_share[i]);
    }
    edges
}

/// Writes the interface fields, except the 2 m temperatures.
fn tell(c: &Coefficients, m: &Means, exchange: &mut Exchange) {
    let n = c.bands;
    let per_step = 1.0 / c.steps as f64;
    for i in 0..n {
        exchange.mixed_layer_temperature_c[i] = annual(m, |node| node.water.flat()[i]);
        exchange.atmosphere_energy_input_w_m2[i] = m.air_input.flat()[i] * per_step;
    }
    for month in 0..12 {
        let row = month * n..(month + 1) * n;
        exchange.sinking_volume_m3[row.clone()].copy_from_slice(m.sunk[month].flat());
        exchange.sinking_heat_m3_c[row].copy_from_slice(m.sunk_heat[month].flat());
    }
    for (told, sum) in exchange
        .atmosphere_transport_w
        .iter_mut()
        .zip(&m.air_flux_w)
    {
        *told = sum * per_step;
    }
    let deep = exchange.deep_sinking_m3_s;
    if deep > 0.0 {
        exchange.deep_sinking_temperature_c = m.deep_heat * per_step / deep;
    }
    let (mut net, mut gross) = ([0.0; 2], [0.0; 2]);
    for i in 0..n {
        let side = usize::from(2 * i >= n);
        net[side] -= c.deep_window.flat()[i] * m.ocean_gain.flat()[i] * per_step;
        gross[side] += c.deep_window.flat()[i] * m.gross_loss.flat()[i] * per_step;
    }
    exchange.net_sinking_loss_w = net;
    exchange.gross_sinking_loss_w = gross;
}
