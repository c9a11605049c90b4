//! Balance states of the model as named arrays, and the observed bands beside which they are put.

use crate::csv;
use crate::energy_balance_set_up::mean_legendre;
use orbicline::config::run::{Built, Experiment};
use orbicline::model::observer::Nobody;
use orbicline::series::Axis;
use std::collections::BTreeMap;
use std::convert::Infallible;
use std::path::Path;

/// Days of the months.
const DAYS: [f64; 12] = [
    31.0, 28.0, 31.0, 30.0, 31.0, 30.0, 31.0, 31.0, 30.0, 31.0, 30.0, 31.0,
];
/// Observed bands, 10 degrees each.
pub(crate) const BANDS: usize = 18;

/// What covers the surface in a mean.
#[derive(Clone, Copy)]
pub(crate) enum Over {
    All,
    Land,
    Ocean,
}

/// One year of the model in balance.
pub(crate) struct Climate {
    values: BTreeMap<&'static str, Vec<f64>>,
    area: Vec<f64>,
    land: Vec<f64>,
    depth_m: Vec<f64>,
    centre_deg: Vec<f64>,
}

/// The present day with some keys changed, brought into balance.
pub(crate) fn climate(edits: &[&str]) -> Climate {
    let file = Path::new(env!("CARGO_MANIFEST_DIR")).join("configs/present_day.toml");
    let edits: Vec<String> = edits.iter().map(ToString::to_string).collect();
    let experiment = Experiment::load(&file, &edits).unwrap();
    let mut built = experiment.build().unwrap();
    let time = &experiment.run.time;
    let model = &mut built.model;
    model
        .spin_up(time.start_kyr, time.spin_up, &mut Nobody)
        .unwrap();
    model.held_year::<Infallible>(time.start_kyr, 1.0).unwrap();
    Climate {
        values: named_values(&built),
        area: built.setting.surface.bands.area_m2().to_vec(),
        land: built.setting.surface.land_fraction.clone(),
        depth_m: built.model.exchange().column_depth_m.clone(),
        centre_deg: built.setting.surface.bands.centre_deg().to_vec(),
    }
}

fn named_values(built: &Built) -> BTreeMap<&'static str, Vec<f64>> {
    let bands = built.setting.surface.bands.len();
    let levels = built.model.exchange().column_depth_m.len();
    let mut named = BTreeMap::new();
    for component in built.model.components() {
        let mut record = Vec::new();
        component.record(&mut record);
        let mut rest = record.as_slice();
        for variable in component.variables() {
            let along = |axis: &Axis| match axis {
                Axis::Latitude => bands,
                Axis::LatitudeEdge => bands + 1,
                Axis::Month => 12,
                Axis::Depth => levels,
                Axis::Hemisphere => 2,
                // Coasts come last in their record.
                Axis::CoastalLatitude => rest.len(),
            };
            let length = variable.axes.iter().map(along).product();
            let (here, after) = rest.split_at(length);
            named.insert(variable.name, here.to_vec());
            rest = after;
        }
    }
    named
}

impl Climate {
    /// An array, as recorded.
    pub(crate) fn array(&self, name: &str) -> &[f64] {
        &self.values[name]
    }

    /// A number.
    pub(crate) fn number(&self, name: &str) -> f64 {
        self.values[name][0]
    }

    /// The sum of both hemispheres.
    pub(crate) fn both(&self, name: &str) -> f64 {
        self.values[name].iter().sum()
    }

    /// Annual means over 10-degree bands: pairs of 5-degree bands weighted with the area under
    /// the field, so that the mean of what is carried stays what it was.
    pub(crate) fn annual_bands(&self, name: &str, over: Over) -> Vec<f64> {
        let monthly = self.array(name);
        let n = self.area.len();
        let annual = |i: usize| {
            let months = DAYS.iter().enumerate();
            months.map(|(m, d)| d * monthly[m * n + i]).sum::<f64>() / 365.0
        };
        let weight = |i: usize| match over {
            Over::All => self.area[i],
            Over::Land => self.area[i] * self.land[i],
            Over::Ocean => self.area[i] * (1.0 - self.land[i]),
        };
        let band = |b: usize| {
            let inside = (2 * b..2 * b + 2).filter(|i| weight(*i) > 0.0 && annual(*i).is_finite());
            let [heat, area] = inside.fold([0.0; 2], |[heat, area], i| {
                [heat + weight(i) * annual(i), area + weight(i)]
            });
            heat / area
        };
        (0..BANDS).map(band).collect()
    }

    /// Global mean of each month.
    pub(crate) fn global_months(&self, name: &str) -> Vec<f64> {
        let total: f64 = self.area.iter().sum();
        let monthly = self.array(name).chunks_exact(self.area.len());
        monthly
            .map(|field| {
                field
                    .iter()
                    .zip(&self.area)
                    .map(|(t, a)| t * a)
                    .sum::<f64>()
                    / total
            })
            .collect()
    }

    /// Sea-ice area poleward of 60 degrees in DJF, MAM, JJA, SON, 1e12 m2; side -1 south, 1 north.
    pub(crate) fn sea_ice(&self, side: f64) -> Vec<f64> {
        let monthly: Vec<f64> = self
            .array("sea_ice_fraction")
            .chunks_exact(self.area.len())
            .map(|field| {
                (0..field.len())
                    .filter(|i| self.centre_deg[*i] * side > 60.0 && field[*i].is_finite())
                    .map(|i| field[i] * self.area[i] * (1.0 - self.land[i]) * 1e-12)
                    .sum()
            })
            .collect();
        let season = |s: usize| (0..3).map(|m| monthly[(11 + 3 * s + m) % 12]).sum::<f64>() / 3.0;
        (0..4).map(season).collect()
    }

    /// Column temperature at a depth, degC.
    pub(crate) fn column_at(&self, depth_m: f64) -> f64 {
        let t = self.array("column_temperature");
        let z = &self.depth_m;
        let below = z.partition_point(|middle| *middle < depth_m);
        if below == 0 || below == z.len() {
            return t[below.min(z.len() - 1)];
        }
        let share = (depth_m - z[below - 1]) / (z[below] - z[below - 1]);
        t[below - 1] + share * (t[below] - t[below - 1])
    }
}

/// Annual means of an observed table, 10-degree bands from south to north.
pub(crate) fn observed_annual(table: &str) -> Vec<f64> {
    csv::numbers(table).iter().map(|row| row[14]).collect()
}

/// Area of a 10-degree band as a share of the sphere.
pub(crate) fn share(band: usize) -> f64 {
    let [south, north] = sines(band);
    0.5 * (north - south)
}

fn sines(band: usize) -> [f64; 2] {
    let sine = |k: usize| (10.0 * k as f64 - 90.0).to_radians().sin();
    [sine(band), sine(band + 1)]
}

/// Mean of P2(sin lat) over a 10-degree band.
pub(crate) fn second_legendre(band: usize) -> f64 {
    let [south, north] = sines(band);
    mean_legendre(2, south, north)
}

/// Bands between two latitudes, multiples of 10 degrees.
pub(crate) fn between(south_deg: i32, north_deg: i32) -> std::ops::Range<usize> {
    let band = |deg: i32| usize::try_from((deg + 90) / 10).unwrap();
    band(south_deg)..band(north_deg)
}

/// Root mean square difference over some bands, each weighted.
pub(crate) fn rms(
    model: &[f64],
    observed: &[f64],
    bands: std::ops::Range<usize>,
    weight: impl Fn(usize) -> f64,
) -> f64 {
    let total: f64 = bands.clone().map(&weight).sum();
    let squares: f64 = bands
        .map(|b| weight(b) * (model[b] - observed[b]).powi(2))
        .sum();
    (squares / total).sqrt()
}
