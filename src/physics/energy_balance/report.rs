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
use super::means::{Field, Means};
use super::params::Params;
use super::state::State;
use crate::numerics::lanes::Lanes;
use crate::numerics::sum::{CompensatedSum, compensated};
use crate::physics::budget::{Account, Flow, Quantity};
use crate::physics::exchange::{Exchange, Surface};
use crate::units::{PETAWATT_W, SEA_WATER_HEAT_CAPACITY_J_M3_K, YEAR_SECONDS};

/// Latitude that bounds the high latitudes in the summed ocean heat loss, degrees.
const HIGH_LATITUDE_DEG: f64 = 45.0;
/// Latitude that bounds the tropics in the summed ocean heat gain, degrees.
const TROPICS_DEG: f64 = 30.0;

/// Constants of each band as plain fields.
#[derive(Clone, Debug)]
struct Bands {
    land: Vec<f64>,
    ocean: Vec<f64>,
    ocean_area: Vec<f64>,
    elevation_k: Vec<f64>,
    sheet: Vec<f64>,
    deep_window: Vec<f64>,
}

/// Last year's results.
#[derive(Clone, Debug)]
pub(super) struct Report {
    surface_weight: f64,
    surface: Surface,
    bands: Bands,
    pub account: Account,
    values: Vec<f64>,
}

impl Report {
    pub(super) fn new(p: &Params, surface: &Surface, c: &Coefficients) -> Self {
        let field = |of: &dyn Fn(&super::coefficients::BandRow) -> Lanes| {
            c.rows
                .iter()
                .flat_map(|row| of(row).0)
                .collect::<Vec<f64>>()
        };
        let account = Account {
            component: "energy_balance",
            quantity: Quantity::Energy,
            stored: CompensatedSum::default(),
            from_outside: Vec::new(),
            from_components: Vec::new(),
        };
        Self {
            surface_weight: p.air_2m_surface_weight,
            surface: surface.clone(),
            bands: Bands {
                land: field(&|row| row.land),
                ocean: field(&|row| row.ocean),
                ocean_area: field(&|row| row.ocean_area_m2),
                elevation_k: field(&|row| row.elevation_k),
                sheet: field(&|row| row.sheet),
                deep_window: field(&|row| row.deep_window),
            },
            account,
            values: Vec::new(),
        }
    }

    /// Replaces the fraction of land under permanent ice, `[band]`.
    pub(super) fn set_sheet(&mut self, sheet: &[f64]) {
        self.bands.sheet.copy_from_slice(sheet);
    }

    pub(super) fn record(&self, values: &mut Vec<f64>) {
        values.extend_from_slice(&self.values);
    }

    /// Works out everything from the sums of the year.
    pub(super) fn close_year(
        &mut self,
        c: &Coefficients,
        m: &Means,
        s: &State,
        exchange: &mut Exchange,
    ) {
        self.account(c, m, s, exchange);
        self.tell(c, m, exchange);
        self.two_metre(m, exchange);
        self.values.clear();
        self.monthly(m, exchange);
        self.annual(c, m, exchange);
    }

    fn account(&mut self, c: &Coefficients, m: &Means, s: &State, exchange: &Exchange) {
        let flow = |name, amount| Flow { name, amount };
        self.account.stored = s.heat_j(c);
        self.account.from_outside = vec![
            flow(
                "sunlight absorbed by the air",
                m.amount_j(c, |row| row.absorbed_air),
            ),
            flow(
                "sunlight absorbed by land",
                m.amount_j(c, |row| row.absorbed_land),
            ),
            flow(
                "sunlight absorbed by the ocean",
                m.amount_j(c, |row| row.absorbed_ocean),
            ),
            flow(
                "radiation emitted to space",
                m.amount_j(c, |row| row.emitted).negated(),
            ),
        ];
        let mut given = CompensatedSum::default();
        exchange
            .column_heat_w
            .iter()
            .for_each(|w| given.add_product(*w, YEAR_SECONDS));
        let mut sunk = CompensatedSum::default();
        for heat in m
            .sunk_heat
            .iter()
            .flat_map(crate::numerics::lanes::Rows::flat)
        {
            sunk.add_product(*heat, -SEA_WATER_HEAT_CAPACITY_J_M3_K);
        }
        self.account.from_components = vec![
            flow("heat from the column", given),
            flow("sinking water", sunk),
        ];
    }

    /// Interface fields, except the 2 m temperatures.
    fn tell(&self, c: &Coefficients, m: &Means, exchange: &mut Exchange) {
        let n = c.bands;
        let per_step = 1.0 / c.steps as f64;
        exchange.mixed_layer_temperature_c = m.annual(c, Field::Water);
        for (i, told) in exchange.atmosphere_energy_input_w_m2.iter_mut().enumerate() {
            *told = m.sum(i, |row| row.air_input) * per_step;
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
            let window = self.bands.deep_window[i] * per_step;
            net[side] -= window * m.sum(i, |row| row.ocean_gain);
            gross[side] += window * m.sum(i, |row| row.gross_loss);
        }
        exchange.net_sinking_loss_w = net;
        exchange.gross_sinking_loss_w = gross;
    }

    /// 2 m temperatures by month into the exchange.
    fn two_metre(&self, m: &Means, exchange: &mut Exchange) {
        let w = self.surface_weight;
        let surfaces = m.monthly(Field::Land).zip(m.monthly(Field::OceanSurface));
        let told = exchange
            .land_air_2m_c
            .iter_mut()
            .zip(&mut exchange.ocean_air_2m_c);
        let lifts = self.bands.elevation_k.iter().cycle();
        let above = m.monthly(Field::Air).zip(lifts);
        for (((land, ocean), (air, lift)), (ground, water)) in told.zip(above).zip(surfaces) {
            *land = w * ground + (1.0 - w) * (air - lift);
            *ocean = w * water + (1.0 - w) * air;
        }
    }

    fn monthly(&mut self, m: &Means, exchange: &Exchange) {
        let b = &self.bands;
        let values = &mut self.values;
        let (land, ocean) = (|| b.land.iter().cycle(), || b.ocean.iter().cycle());
        let over = |(value, share): (f64, &f64)| if *share > 0.0 { value } else { f64::NAN };
        let air_over = (&exchange.land_air_2m_c, &exchange.ocean_air_2m_c);
        values.extend(m.monthly(Field::Insolation));
        values.extend(m.monthly(Field::Air));
        values.extend(m.monthly(Field::Land).zip(land()).map(over));
        values.extend(m.monthly(Field::Water).zip(ocean()).map(over));
        let both = air_over
            .0
            .iter()
            .zip(land())
            .zip(air_over.1.iter().zip(ocean()));
        values.extend(both.map(|((land, f), (ocean, g))| f * land + g * ocean));
        values.extend(air_over.0.iter().copied().zip(land()).map(over));
        values.extend(air_over.1.iter().copied().zip(ocean()).map(over));
        let covered = m.monthly(Field::Snow).zip(b.sheet.iter().cycle());
        let covered = covered.map(|(snow, sheet)| sheet + (1.0 - sheet) * snow);
        values.extend(covered.zip(land()).map(over));
        values.extend(m.monthly(Field::IceCover).zip(ocean()).map(over));
        values.extend(m.monthly(Field::IceThickness).zip(ocean()).map(over));
    }

    fn annual(&mut self, c: &Coefficients, m: &Means, exchange: &Exchange) {
        let per_step = 1.0 / c.steps as f64;
        let n = c.bands;
        let column = column_transport(m, exchange);
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
        let gain: Vec<f64> = (0..n)
            .map(|i| m.sum(i, |row| row.ocean_gain) * per_step)
            .collect();
        let has_ocean = |i: usize| self.bands.ocean_area[i] > 0.0;
        self.values
            .extend((0..n).map(|i| if has_ocean(i) { gain[i] } else { f64::NAN }));
        let absorbed: Vec<f64> = (0..n)
            .map(|i| {
                let parts = m.exact_sum(i, |row| row.absorbed_air)
                    + m.exact_sum(i, |row| row.absorbed_land)
                    + m.exact_sum(i, |row| row.absorbed_ocean);
                parts * per_step
            })
            .collect();
        let emitted: Vec<f64> = (0..n)
            .map(|i| m.exact_sum(i, |row| row.emitted) * per_step)
            .collect();
        self.values.extend_from_slice(&absorbed);
        self.values.extend_from_slice(&emitted);
        self.sums(c, m, &gain, exchange);
        self.global(c, m, &absorbed, &emitted);
    }

    fn sums(&mut self, c: &Coefficients, m: &Means, gain: &[f64], exchange: &Exchange) {
        let latitude = self.surface.bands.centre_deg();
        let area = &self.bands.ocean_area;
        let cover = m.annual(c, Field::IceCover);
        let (mut ice, mut loss) = ([0.0; 2], [0.0; 2]);
        let mut tropics = 0.0;
        for i in 0..area.len() {
            let side = usize::from(latitude[i] > 0.0);
            ice[side] += area[i] * cover[i];
            let beyond = poleward_share(&self.surface, i, HIGH_LATITUDE_DEG);
            loss[side] -= beyond * area[i] * gain[i];
            tropics += (1.0 - poleward_share(&self.surface, i, TROPICS_DEG)) * area[i] * gain[i];
        }
        self.values.extend_from_slice(&ice);
        self.values.extend(loss.map(|v| v / PETAWATT_W));
        self.values
            .extend(exchange.net_sinking_loss_w.map(|v| v / PETAWATT_W));
        self.values
            .extend(exchange.gross_sinking_loss_w.map(|v| v / PETAWATT_W));
        self.values.push(tropics / PETAWATT_W);
    }

    fn global(&mut self, c: &Coefficients, m: &Means, absorbed: &[f64], emitted: &[f64]) {
        let bands = &self.surface.bands;
        let n = bands.len();
        let two_metre = &self.values[4 * 12 * n..5 * 12 * n];
        let temperature: f64 = two_metre
            .chunks(n)
            .zip(c.months.shares())
            .map(|(month, share)| share * bands.mean(month))
            .sum();
        let incoming = m.annual(c, Field::Insolation);
        let (taken, given) = (bands.mean(absorbed), bands.mean(emitted));
        let albedo = 1.0 - taken / bands.mean(&incoming);
        self.values.extend([temperature, taken, given, albedo]);
    }
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
fn column_transport(m: &Means, exchange: &Exchange) -> Vec<f64> {
    let n = exchange.column_heat_w.len();
    let given: Vec<f64> = (0..n)
        .map(|i| {
            let sunk: f64 = m.sunk_heat.iter().map(|rows| rows.flat()[i]).sum();
            exchange.column_heat_w[i] - SEA_WATER_HEAT_CAPACITY_J_M3_K * sunk / YEAR_SECONDS
        })
        .collect();
    let total = compensated(given.iter().copied());
    let mut edges = vec![0.0; n + 1];
    for i in 0..n {
        edges[i + 1] = edges[i] - (given[i] - total * exchange.column_area_share[i]);
    }
    edges
}
