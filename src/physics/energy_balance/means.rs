//! Sums over a year: monthly means of the fields, annual means of the fluxes, sinking water.
//!
//! A monthly mean is the exact integral over the month of the piecewise-linear course between
//! the ends of the steps; fluxes count equally in each step, as the conserved heat does.

use super::coefficients::Coefficients;
use super::state::StateRow;
use super::work::Work;
use crate::numerics::lanes::{Lanes, Rows, WIDTH};
use crate::numerics::sum::CompensatedSum;
use crate::units::SEA_WATER_FREEZING_C;

/// Fields that are averaged over the months.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Field {
    /// Air temperature at sea level, degC.
    Air,
    /// Land surface temperature, degC.
    Land,
    /// Mixed-layer temperature, degC.
    Water,
    /// Temperature of the ocean's surface, water and ice, degC.
    OceanSurface,
    /// Snow cover of land without ice sheet, 0-1.
    Snow,
    /// Ice cover of the ocean, 0-1.
    IceCover,
    /// Mean ice thickness over the ocean, m.
    IceThickness,
    /// Insolation, W m-2.
    Insolation,
}

/// Number of [`Field`]s.
pub(super) const FIELDS: usize = 8;

/// A sum over the steps with its rounding error carried along.
#[derive(Clone, Copy, Debug)]
pub(super) struct LaneSum {
    sum: Lanes,
    lost: Lanes,
}

impl LaneSum {
    #[inline(always)]
    pub(super) fn add(&mut self, value: Lanes) {
        let after = self.sum + value;
        let added = after - self.sum;
        self.lost += (self.sum - (after - added)) + (value - added);
        self.sum = after;
    }
}

/// Sums of one year for four bands; fluxes in W m-2 of band (ocean's: of ocean).
#[derive(Clone, Copy, Debug)]
pub(super) struct MeanRow {
    /// Fields at the last instant, carried over New Year.
    node: [Lanes; FIELDS],
    pub absorbed_air: LaneSum,
    pub absorbed_land: LaneSum,
    pub absorbed_ocean: LaneSum,
    pub emitted: LaneSum,
    pub air_input: Lanes,
    pub ocean_gain: Lanes,
    pub gross_loss: Lanes,
    /// Coldest and warmest temperature of air and land in the year, degC.
    pub coldest: Lanes,
    pub warmest: Lanes,
    /// One where a Newton slope had to be limited in the year.
    pub strained: Lanes,
}

impl MeanRow {
    /// Fields of the start state, which has no ice and no snow.
    fn new(state: &StateRow) -> Self {
        let mut row = Self {
            node: [Lanes::splat(0.0); FIELDS],
            ..Self::empty()
        };
        row.set(Field::Air, state.air.now);
        row.set(Field::Land, state.land.now);
        row.set(Field::Water, state.sub.now);
        row.set(
            Field::OceanSurface,
            state.sub.now.max(Lanes::splat(SEA_WATER_FREEZING_C)),
        );
        row
    }

    fn empty() -> Self {
        let zero = Lanes::splat(0.0);
        let sum = LaneSum {
            sum: zero,
            lost: zero,
        };
        Self {
            node: [zero; FIELDS],
            absorbed_air: sum,
            absorbed_land: sum,
            absorbed_ocean: sum,
            emitted: sum,
            air_input: zero,
            ocean_gain: zero,
            gross_loss: zero,
            coldest: zero,
            warmest: zero,
            strained: zero,
        }
    }

    #[inline(always)]
    pub(super) fn set(&mut self, field: Field, value: Lanes) {
        self.node[field as usize] = value;
    }
}

/// Sums of one year.
#[derive(Clone, Debug)]
pub(super) struct Means {
    pub rows: Vec<MeanRow>,
    /// Monthly means, month after month.
    monthly: Vec<[Lanes; FIELDS]>,
    /// Flux through the edges summed over the steps, W.
    pub air_flux_w: Vec<f64>,
    pub ocean_flux_w: Vec<f64>,
    /// Sunk volume, m3, and volume times temperature, m3 degC, by month.
    pub sunk: Vec<Rows>,
    pub sunk_heat: Vec<Rows>,
    /// Temperature of deep sinking times its rate, summed over the steps, m3 s-1 degC.
    pub deep_heat: f64,
}

impl Means {
    pub(super) fn new(start: &[StateRow]) -> Self {
        let bands = start.len() * WIDTH;
        let twelve = || vec![Rows::new(bands, 0.0); 12];
        Self {
            rows: start.iter().map(MeanRow::new).collect(),
            monthly: vec![[Lanes::splat(0.0); FIELDS]; 12 * start.len()],
            air_flux_w: vec![0.0; bands + 1],
            ocean_flux_w: vec![0.0; bands + 1],
            sunk: twelve(),
            sunk_heat: twelve(),
            deep_heat: 0.0,
        }
    }

    /// Forgets last year, except the instant it ended with.
    pub(super) fn begin_year(&mut self, c: &Coefficients) {
        self.monthly.fill([Lanes::splat(0.0); FIELDS]);
        for row in &mut self.rows {
            *row = MeanRow {
                node: row.node,
                ..MeanRow::empty()
            };
        }
        self.sunk
            .iter_mut()
            .chain(&mut self.sunk_heat)
            .for_each(|rows| rows.fill(0.0));
        self.air_flux_w.fill(0.0);
        self.ocean_flux_w.fill(0.0);
        self.deep_heat = 0.0;
        self.count_node(c, 0);
    }

    /// Adds the fields of the present instant, node `k` of the year, to the months it touches.
    #[inline(always)]
    pub(super) fn count_node(&mut self, c: &Coefficients, k: usize) {
        let length = self.rows.len();
        for &(month, weight) in c.months.node(k) {
            let sums = &mut self.monthly[month * length..(month + 1) * length];
            for (sum, row) in sums.iter_mut().zip(&self.rows) {
                for (sum, value) in sum.iter_mut().zip(&row.node) {
                    *sum += *value * weight;
                }
            }
        }
    }

    /// Books the water that sank in step `k` and adds the edge fluxes of the step.
    #[inline(always)]
    pub(super) fn count_step(&mut self, c: &Coefficients, w: &Work, k: usize, edges: &EdgeFluxes) {
        let month = c.months.month_of_step(k);
        let booked = self.sunk[month]
            .rows_mut()
            .zip(self.sunk_heat[month].rows_mut());
        let sinking = w.sinking.rows().zip(w.water_temperature.rows());
        for ((volume, heat), (rate, temperature)) in booked.zip(sinking) {
            let sunk = rate * c.step_s;
            *volume = (Lanes(*volume) + sunk).0;
            *heat = (Lanes(*heat) + sunk * temperature).0;
        }
        add_all(&mut self.air_flux_w, &edges.air_w);
        add_all(&mut self.ocean_flux_w, &edges.ocean_w);
        self.deep_heat += edges.deep_heat;
    }

    /// Monthly means of a field, `[month][band]`.
    pub(super) fn monthly(&self, field: Field) -> impl Iterator<Item = f64> {
        self.monthly
            .iter()
            .flat_map(move |row| row[field as usize].0)
    }

    /// Annual means of a field, one per band, each month counting by its length.
    pub(super) fn annual(&self, c: &Coefficients, field: Field) -> Vec<f64> {
        let mut mean = vec![0.0; self.rows.len() * WIDTH];
        let months = self.monthly.chunks_exact(self.rows.len());
        for (rows, share) in months.zip(c.months.shares()) {
            for (mean, row) in mean.chunks_exact_mut(WIDTH).zip(rows) {
                (Lanes::load(mean, 0) + row[field as usize] * share).store(mean, 0);
            }
        }
        mean
    }

    /// Annual sum of a flux in band `i`.
    pub(super) fn sum(&self, i: usize, of: impl Fn(&MeanRow) -> Lanes) -> f64 {
        of(&self.rows[i / WIDTH]).0[i % WIDTH]
    }

    /// Annual sum of a carried sum in band `i`.
    pub(super) fn exact_sum(&self, i: usize, of: impl Fn(&MeanRow) -> LaneSum) -> f64 {
        let sum = of(&self.rows[i / WIDTH]);
        sum.sum.0[i % WIDTH] + sum.lost.0[i % WIDTH]
    }

    /// Sum over all bands by area, times the length of a step: the year's amount, J.
    pub(super) fn amount_j(
        &self,
        c: &Coefficients,
        of: impl Fn(&MeanRow) -> LaneSum,
    ) -> CompensatedSum {
        let mut total = CompensatedSum::default();
        for (row, b) in self.rows.iter().zip(&c.rows) {
            let sum = of(row);
            for k in 0..WIDTH {
                let scaled = c.step_s * b.area_m2.0[k];
                total.add_product(scaled, sum.sum.0[k]);
                total.add_product(scaled, sum.lost.0[k]);
            }
        }
        total
    }

    /// Fields at the last instant, for restart files.
    pub(super) fn save(&self, into: &mut Vec<f64>) {
        into.extend(
            self.rows
                .iter()
                .flat_map(|row| row.node)
                .flat_map(|lanes| lanes.0),
        );
    }

    /// Takes what [`Means::save`] gave.
    pub(super) fn restore(&mut self, from: &[f64]) {
        let nodes = self.rows.iter_mut().flat_map(|row| &mut row.node);
        for (lanes, values) in nodes.zip(from.chunks_exact(WIDTH)) {
            *lanes = Lanes::load(values, 0);
        }
    }
}

#[inline(always)]
fn add_all(sums: &mut [f64], values: &[f64]) {
    for (sum, value) in sums.iter_mut().zip(values) {
        *sum += value;
    }
}

/// Northward fluxes through the edges in one step, W.
#[derive(Clone, Debug)]
pub(super) struct EdgeFluxes {
    pub air_w: Vec<f64>,
    pub ocean_w: Vec<f64>,
    /// Deep sinking rate times temperature, m3 s-1 degC.
    pub deep_heat: f64,
}

impl EdgeFluxes {
    pub(super) fn new(bands: usize) -> Self {
        Self {
            air_w: vec![0.0; bands + 1],
            ocean_w: vec![0.0; bands + 1],
            deep_heat: 0.0,
        }
    }
}
