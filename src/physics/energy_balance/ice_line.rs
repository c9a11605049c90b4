//! Albedo with one sharp edge per hemisphere, for comparison with closed forms.
//!
//! Poleward of the edge the albedo is that of ice, equatorward free + free2 P2(x). A band that
//! holds the edge takes the area-weighted mean of both, so the edge moves continuously within a
//! band. The edge is prescribed, or lies where the air temperature (linear in x between band
//! centres) first falls below a threshold on the way from the equator.

use super::coefficients::Coefficients;
use super::params::{Albedo, IceEdge};
use crate::grid::latitude::LatitudeBands;
use crate::numerics::lanes::WIDTH;

/// The edge rule with the grid it acts on.
#[derive(Clone, Debug)]
pub(super) struct IceLine {
    free: f64,
    free_second_legendre: f64,
    ice: f64,
    edge: IceEdge,
    edge_sine: Vec<f64>,
    centre_sine: Vec<f64>,
}

impl IceLine {
    /// The rule, when the albedo is of this kind.
    pub(super) fn new(albedo: &Albedo, bands: &LatitudeBands) -> Option<Self> {
        let Albedo::IceLine {
            free,
            free_second_legendre,
            ice,
            edge,
        } = albedo
        else {
            return None;
        };
        Some(Self {
            free: *free,
            free_second_legendre: *free_second_legendre,
            ice: *ice,
            edge: edge.clone(),
            edge_sine: bands.edge_sine().to_vec(),
            centre_sine: bands
                .centre_deg()
                .iter()
                .map(|d| d.to_radians().sin())
                .collect(),
        })
    }

    /// Renews the albedos in `c` for the air temperature `air_c`, degC.
    pub(super) fn renew(&self, air_c: &[f64], c: &mut Coefficients) {
        let [south, north] = self.edges(air_c);
        for (i, x) in self.edge_sine.windows(2).enumerate() {
            let (low, high) = (x[0].max(-south), x[1].min(north));
            let ice_free = (high - low).max(0.0);
            let share = ice_free / (x[1] - x[0]);
            let p2 = |x: f64| 0.5 * (x * x * x - x);
            let free = if ice_free > 0.0 {
                self.free + self.free_second_legendre * (p2(high) - p2(low)) / ice_free
            } else {
                self.ice
            };
            let albedo = share * free + (1.0 - share) * self.ice;
            let row = &mut c.rows[i / WIDTH];
            for lanes in [
                &mut row.water_albedo,
                &mut row.snow_albedo,
                &mut row.ice_albedo,
            ] {
                lanes.0[i % WIDTH] = albedo;
            }
        }
    }

    /// sin(latitude) of the edge in the southern and northern hemisphere, both positive; beyond
    /// one when there is no ice, and -1 when the ice reaches past the equator.
    pub(super) fn edges(&self, air_c: &[f64]) -> [f64; 2] {
        match self.edge {
            IceEdge::Prescribed { sine } => [sine; 2],
            IceEdge::Temperature { threshold_c } => {
                let half = air_c.len() / 2;
                let south: Vec<usize> = (0..half).rev().collect();
                let north: Vec<usize> = (half..air_c.len()).collect();
                [
                    self.crossing(air_c, &south, threshold_c),
                    self.crossing(air_c, &north, threshold_c),
                ]
            }
        }
    }

    fn crossing(&self, air_c: &[f64], outward: &[usize], threshold_c: f64) -> f64 {
        if air_c[outward[0]] < threshold_c {
            return 0.0;
        }
        for pair in outward.windows(2) {
            let (inner, outer) = (air_c[pair[0]], air_c[pair[1]]);
            if outer < threshold_c {
                let share = (inner - threshold_c) / (inner - outer);
                let (a, b) = (
                    self.centre_sine[pair[0]].abs(),
                    self.centre_sine[pair[1]].abs(),
                );
                return a + share * (b - a);
            }
        }
        // Still warm at the last centre: extrapolate with the last slope, so that the edge
        // reaches the pole continuously.
        let [.., before, last] = outward else {
            return 1.0;
        };
        let slope = air_c[*before] - air_c[*last];
        if slope <= 0.0 {
            return 1.0;
        }
        let (a, b) = (
            self.centre_sine[*before].abs(),
            self.centre_sine[*last].abs(),
        );
        (b + (b - a) * (air_c[*last] - threshold_c) / slope).min(1.0)
    }
}
