//! Sums over a year: monthly means of the fields, annual means of the fluxes, sinking water.
//!
//! A monthly mean is the exact integral over the month of the piecewise-linear course between
//! the ends of the steps; fluxes count equally in each step, as the conserved heat does.

use super::coefficients::Coefficients;
use super::surfaces::Work;
use crate::numerics::lanes::Rows;

macro_rules! node_fields {
    ($($(#[$doc:meta])* $field:ident),* $(,)?) => {
        /// Fields at one instant, one value per band.
        #[derive(Clone, Debug)]
        pub(super) struct Node { $($(#[$doc])* pub $field: Rows),* }
        impl Node {
            pub(super) fn new(bands: usize) -> Self {
                Self { $($field: Rows::new(bands, 0.0)),* }
            }
            pub(super) fn fields(&self) -> [&Rows; FIELDS] { [$(&self.$field),*] }
            pub(super) fn fields_mut(&mut self) -> [&mut Rows; FIELDS] { [$(&mut self.$field),*] }
        }
    };
}

/// Number of fields in a [`Node`].
pub(super) const FIELDS: usize = 8;

node_fields! {
    /// Air temperature at sea level, degC.
    air,
    /// Land surface temperature, degC.
    land,
    /// Mixed-layer temperature, degC.
    water,
    /// Temperature of the ocean's surface, water and ice, degC.
    ocean_surface,
    /// Snow cover of land without ice sheet, 0-1.
    snow,
    /// Ice cover of the ocean, 0-1.
    ice_cover,
    /// Mean ice thickness over the ocean, m.
    ice_thickness,
    /// Insolation, W m-2.
    insolation,
}

/// Sums of one year.
#[derive(Clone, Debug)]
pub(super) struct Means {
    /// Fields at the last instant, carried over New Year.
    pub node: Node,
    /// Monthly means.
    pub monthly: Vec<Node>,
    /// Sums over the steps, W m-2 of band (ocean: of ocean).
    pub absorbed_air: Rows,
    pub absorbed_land: Rows,
    pub absorbed_ocean: Rows,
    pub emitted: Rows,
    pub air_input: Rows,
    pub ocean_gain: Rows,
    pub gross_loss: Rows,
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
    pub(super) fn new(bands: usize) -> Self {
        let zero = Rows::new(bands, 0.0);
        let twelve = || vec![zero.clone(); 12];
        Self {
            node: Node::new(bands),
            monthly: vec![Node::new(bands); 12],
            absorbed_air: zero.clone(),
            absorbed_land: zero.clone(),
            absorbed_ocean: zero.clone(),
            emitted: zero.clone(),
            air_input: zero.clone(),
            ocean_gain: zero.clone(),
            gross_loss: zero.clone(),
            air_flux_w: vec![0.0; bands + 1],
            ocean_flux_w: vec![0.0; bands + 1],
            sunk: twelve(),
            sunk_heat: twelve(),
            deep_heat: 0.0,
        }
    }

    /// Forgets last year, except the instant it ended with.
    pub(super) fn begin_year(&mut self, c: &Coefficients) {
        for node in &mut self.monthly {
            node.fields_mut()
                .into_iter()
                .for_each(|rows| rows.fill(0.0));
        }
        for rows in [
            &mut self.absorbed_air,
            &mut self.absorbed_land,
            &mut self.absorbed_ocean,
            &mut self.emitted,
            &mut self.air_input,
            &mut self.ocean_gain,
            &mut self.gross_loss,
        ] {
            rows.fill(0.0);
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
        for &(month, weight) in c.months.node(k) {
            let sums = self.monthly[month].fields_mut();
            for (sum, field) in sums.into_iter().zip(self.node.fields()) {
                for r in 0..field.rows() {
                    sum.add(r, field.at(r) * weight);
                }
            }
        }
    }

    /// Books the water that sank in step `k` and adds the edge fluxes of the step.
    #[inline(always)]
    pub(super) fn count_step(&mut self, c: &Coefficients, w: &Work, k: usize, edges: &EdgeFluxes) {
        let month = c.months.month_of_step(k);
        let (volume, heat) = (&mut self.sunk[month], &mut self.sunk_heat[month]);
        for r in 0..w.sinking.rows() {
            let sunk = w.sinking.at(r) * c.step_s;
            volume.add(r, sunk);
            heat.add(r, sunk * w.water_temperature.at(r));
        }
        add_all(&mut self.air_flux_w, &edges.air_w);
        add_all(&mut self.ocean_flux_w, &edges.ocean_w);
        self.deep_heat += edges.deep_heat;
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
