//! Where and when another orbit acts: a part of the Earth and of the year gets the sunlight of an
//! orbit of its own.
//!
//! What: the run's orbit lights everything; inside the mask the insolation is that of the mask's
//! orbit instead. A mask is a range of latitude, a range of the Sun's longitude, or both.
//! Equations: Q = Q_run + w (Q_mask - Q_run), w = w_latitude w_longitude; each w falls from 1 to 0
//! across `edge_deg` by the smooth ramp u^2 (3 - 2 u), centred on the bound. The zenith cosine is
//! the mean of both, weighted by their insolation. The weight of a band is the mean over its area.
//! What this adds to or takes from the Earth's sunlight, as a global annual mean, is reported:
//! masked experiments do not conserve it, and a reader must know by how much.
//! Units: degrees, W m-2.
//! Numerics: weights by the midpoint rule in sin(latitude), 64 points a band. The Sun's longitude
//! at a step is that of the run's orbit.
//! Source: own definition; insolation as in [`crate::orbit::insolation`].

use serde::{Deserialize, Serialize};

use crate::numerics::shown::Shown;
use crate::orbit::elements::Elements;
use crate::orbit::insolation::{InsolationTable, TableError};
use crate::orbit::kepler;
use crate::orbit::solution::{Orbit, OrbitError, OrbitSpec};

/// Points of the midpoint rule in a band.
const POINTS: usize = 64;

/// A mask in a configuration.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct MaskSpec {
    /// Orbit inside the mask.
    pub orbit: OrbitSpec,
    /// Latitudes inside, degrees north; all when not given.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub latitude: Option<RangeSpec>,
    /// The Sun's longitudes inside, degrees from the March equinox, in the order of the year (from
    /// 270 to 90 is December to June); the whole year when not given.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub sun_longitude: Option<RangeSpec>,
}

/// A range with soft edges.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct RangeSpec {
    /// Where it begins, degrees.
    pub from_deg: f64,
    /// Where it ends, degrees.
    pub to_deg: f64,
    /// Width over which each edge falls from 1 to 0, degrees, centred on the bound; 0 is sharp.
    pub edge_deg: f64,
}

/// Why a mask cannot be used.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum MaskError {
    /// Its orbit is wrong.
    #[error("orbit_mask.{0}")]
    Orbit(OrbitError),
    /// A bound is out of range.
    #[error("orbit_mask.{key} = {}: {limit}", Shown(*value))]
    Value {
        /// The key.
        key: &'static str,
        /// Its value.
        value: f64,
        /// The limit, and what to do.
        limit: &'static str,
    },
    /// It would cover everything.
    #[error(
        "orbit_mask needs a latitude or a sun_longitude range: without either its orbit would \
         replace the run's everywhere; change `orbit` instead"
    )]
    Everywhere,
}

/// A checked mask on a grid.
#[derive(Clone, Debug)]
pub struct Mask {
    orbit: Orbit,
    sun_longitude: Option<RangeSpec>,
    table: InsolationTable,
    /// Weight of each band.
    latitude: Vec<f64>,
    /// Share of each band in the Earth's area.
    area_share: Vec<f64>,
    change_w_m2: f64,
}

impl MaskSpec {
    /// Checks all numbers.
    ///
    /// # Errors
    /// Everything that is wrong.
    pub fn check(&self) -> Result<Orbit, Vec<MaskError>> {
        let mut wrong = Vec::new();
        let mut value = |key, value: f64, allowed: bool, limit| {
            if !allowed {
                wrong.push(MaskError::Value { key, value, limit });
            }
        };
        if let Some(r) = self.latitude {
            let limit = "must lie between -90 and 90 degrees north";
            let inside = |v: f64| (-90.0..=90.0).contains(&v);
            value("latitude.from_deg", r.from_deg, inside(r.from_deg), limit);
            let limit = "must lie between latitude.from_deg and 90 degrees north";
            let after = inside(r.to_deg) && (r.to_deg > r.from_deg || !inside(r.from_deg));
            value("latitude.to_deg", r.to_deg, after, limit);
            let limit = "must lie between 0 and the width of the range, or the mask never opens";
            let usable = (0.0..=r.to_deg - r.from_deg).contains(&r.edge_deg);
            value("latitude.edge_deg", r.edge_deg, usable, limit);
        }
        if let Some(r) = self.sun_longitude {
            let limit = "must lie between 0 and 360 degrees from the March equinox";
            let inside = |v: f64| (0.0..=360.0).contains(&v);
            value(
                "sun_longitude.from_deg",
                r.from_deg,
                inside(r.from_deg),
                limit,
            );
            value("sun_longitude.to_deg", r.to_deg, inside(r.to_deg), limit);
            let limit = "must lie between 0 and the width of the range, or the mask never opens";
            let width = (r.to_deg - r.from_deg).rem_euclid(360.0);
            let width = if width > 0.0 { width } else { 360.0 };
            let usable = (0.0..=width).contains(&r.edge_deg);
            value("sun_longitude.edge_deg", r.edge_deg, usable, limit);
        }
        let whole_year = |r: RangeSpec| r.from_deg <= 0.0 && r.to_deg >= 360.0;
        let whole_earth = |r: RangeSpec| r.from_deg <= -90.0 && r.to_deg >= 90.0;
        if self.latitude.is_none_or(whole_earth) && self.sun_longitude.is_none_or(whole_year) {
            wrong.push(MaskError::Everywhere);
        }
        let orbit = match Orbit::build(&self.orbit) {
            Ok(orbit) if wrong.is_empty() => return Ok(orbit),
            Ok(_) => Vec::new(),
            Err(errors) => errors,
        };
        wrong.extend(orbit.into_iter().map(MaskError::Orbit));
        Err(wrong)
    }
}

impl Mask {
    /// Lays a checked mask, with its orbit, on bands between `edge_sine` and `steps` of the year.
    ///
    /// # Errors
    /// When the edges or the steps make no table.
    pub fn new(
        spec: &MaskSpec,
        orbit: Orbit,
        edge_sine: &[f64],
        steps: usize,
    ) -> Result<Self, TableError> {
        let bands = edge_sine.windows(2);
        Ok(Self {
            orbit,
            sun_longitude: spec.sun_longitude,
            table: InsolationTable::new(edge_sine, steps)?,
            latitude: bands
                .clone()
                .map(|e| spec.latitude.map_or(1.0, |range| band_weight(&range, e)))
                .collect(),
            area_share: bands.map(|e| 0.5 * (e[1] - e[0])).collect(),
            change_w_m2: 0.0,
        })
    }

    /// Orbit inside the mask at an age, kyr before 1950.
    ///
    /// # Errors
    /// When its source does not reach there.
    pub fn orbit_at(&self, age_kyr: f64) -> Result<Elements, OrbitError> {
        self.orbit.at(age_kyr)
    }

    /// Weight of each latitude band, before the season's.
    pub fn latitude_weight(&self) -> &[f64] {
        &self.latitude
    }

    /// Global annual mean of what the mask added to the table it was last applied to, W m-2.
    pub fn change_w_m2(&self) -> f64 {
        self.change_w_m2
    }

    /// Puts the sunlight of the mask's orbit at `age_kyr` into `table`, which holds that of `run`.
    ///
    /// # Errors
    /// When the source of the mask's orbit does not reach that age.
    pub fn apply(
        &mut self,
        table: &mut InsolationTable,
        run: &Elements,
        age_kyr: f64,
        solar_constant_w_m2: f64,
        equinox_fraction: f64,
    ) -> Result<(), OrbitError> {
        let inside = self.orbit.at(age_kyr)?;
        self.table
            .update(&inside, solar_constant_w_m2, equinox_fraction);
        let (bands, steps) = (table.bands(), table.steps());
        let mut change = 0.0;
        for k in 0..steps {
            let time = (k + 1) as f64 / steps as f64 - equinox_fraction;
            let season = self.sun_longitude.map_or(1.0, |range| {
                longitude_weight(&range, kepler::sun_longitude_deg(run, time))
            });
            for i in 0..bands {
                let (at, w) = (k * bands + i, season * self.latitude[i]);
                let (q, z) = (table.daily_mean_w_m2[at], table.zenith_cosine[at]);
                let (q_in, z_in) = (self.table.daily_mean_w_m2[at], self.table.zenith_cosine[at]);
                let mixed = q + w * (q_in - q);
                let weighted = (1.0 - w) * q * z + w * q_in * z_in;
                table.daily_mean_w_m2[at] = mixed;
                table.zenith_cosine[at] = if mixed > 0.0 { weighted / mixed } else { 0.0 };
                change += self.area_share[i] * (mixed - q);
            }
        }
        self.change_w_m2 = change / steps as f64;
        Ok(())
    }
}

/// Smooth ramp from 0 at -1/2 to 1 at 1/2.
fn ramp(u: f64) -> f64 {
    let u = (u + 0.5).clamp(0.0, 1.0);
    u * u * (3.0 - 2.0 * u)
}

/// 1 at a `distance` well inside an edge of some width, 0 well outside.
fn edge(distance_deg: f64, width_deg: f64) -> f64 {
    if width_deg > 0.0 {
        ramp(distance_deg / width_deg)
    } else if distance_deg >= 0.0 {
        1.0
    } else {
        0.0
    }
}

/// Mean weight over the area of the band between two sines of latitude. A bound at a pole is none.
fn band_weight(range: &RangeSpec, edges: &[f64]) -> f64 {
    let at = |latitude_deg: f64| {
        let south = if range.from_deg <= -90.0 {
            1.0
        } else {
            edge(latitude_deg - range.from_deg, range.edge_deg)
        };
        let north = if range.to_deg >= 90.0 {
            1.0
        } else {
            edge(range.to_deg - latitude_deg, range.edge_deg)
        };
        south * north
    };
    let sum: f64 = (0..POINTS)
        .map(|p| {
            let x = edges[0] + (edges[1] - edges[0]) * (p as f64 + 0.5) / POINTS as f64;
            at(x.asin().to_degrees())
        })
        .sum();
    sum / POINTS as f64
}

/// Weight at a longitude of the Sun; the range runs with the year from `from_deg` to `to_deg`.
fn longitude_weight(range: &RangeSpec, longitude_deg: f64) -> f64 {
    let half = 0.5 * (range.to_deg - range.from_deg).rem_euclid(360.0);
    let half = if half > 0.0 { half } else { 180.0 };
    if half >= 180.0 {
        return 1.0;
    }
    let off = (longitude_deg - range.from_deg - half).rem_euclid(360.0);
    edge(half - off.min(360.0 - off), range.edge_deg)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn spec(text: &str) -> MaskSpec {
        toml::from_str(&format!(
            "orbit = {{ eccentricity = {{ kind = 'constant', eccentricity = 0.0 }}, \
             obliquity = {{ kind = 'constant', obliquity_deg = 24.5 }}, \
             perihelion = {{ kind = 'constant_heliocentric', heliocentric_deg = 0.0 }} }}\n{text}"
        ))
        .unwrap()
    }

    fn orbit(obliquity_deg: f64) -> Elements {
        let constant = format!(
            "eccentricity = {{ kind = 'constant', eccentricity = 0.0 }}\n\
             obliquity = {{ kind = 'constant', obliquity_deg = {obliquity_deg} }}\n\
             perihelion = {{ kind = 'constant_heliocentric', heliocentric_deg = 0.0 }}"
        );
        Orbit::build(&toml::from_str(&constant).unwrap())
            .unwrap()
            .at(0.0)
            .unwrap()
    }

    fn edges() -> Vec<f64> {
        (0..=36)
            .map(|j| f64::to_radians(-90.0 + 5.0 * f64::from(j)).sin())
            .collect()
    }

    fn masked(spec: &MaskSpec, run: &Elements) -> (InsolationTable, f64) {
        let mut mask = Mask::new(spec, spec.check().unwrap(), &edges(), 360).unwrap();
        let mut table = InsolationTable::new(&edges(), 360).unwrap();
        table.update(run, 1361.0, 0.2178);
        mask.apply(&mut table, run, 0.0, 1361.0, 0.2178).unwrap();
        (table, mask.change_w_m2())
    }

    #[test]
    fn analytic_a_mask_of_the_tropics_changes_nothing_elsewhere() {
        let spec = spec("latitude = { from_deg = -30, to_deg = 30, edge_deg = 0 }");
        let (table, change) = masked(&spec, &orbit(22.0));
        let [mut low, mut high] = [22.0, 24.5].map(|o| {
            let mut t = InsolationTable::new(&edges(), 360).unwrap();
            t.update(&orbit(o), 1361.0, 0.2178);
            t.annual_mean_w_m2()
        });
        let mean = table.annual_mean_w_m2();
        for i in 0..36 {
            let expected = if (12..24).contains(&i) {
                high[i]
            } else {
                low[i]
            };
            assert!((mean[i] - expected).abs() < 1e-9, "band {i}");
        }
        // What is added: the area mean of the difference between the two orbits in the mask.
        let shares: Vec<f64> = edges().windows(2).map(|e| 0.5 * (e[1] - e[0])).collect();
        high.iter_mut().zip(&low).for_each(|(h, l)| *h -= l);
        low.clone_from(&high);
        let expected: f64 = (12..24).map(|i| shares[i] * low[i]).sum();
        assert!(
            (change - expected).abs() < 1e-9 && change < -1.0,
            "{change}"
        );
    }

    #[test]
    fn analytic_masks_of_two_halves_of_the_year_add_up() {
        let run = orbit(22.0);
        let half = |from, to| {
            let text =
                format!("sun_longitude = {{ from_deg = {from}, to_deg = {to}, edge_deg = 20 }}");
            masked(&spec(&text), &run).0.annual_mean_w_m2()
        };
        let (summer, winter) = (half(0, 180), half(180, 360));
        let whole = masked(
            &spec("latitude = { from_deg = -90, to_deg = 89.999999, edge_deg = 0 }"),
            &run,
        );
        let mut base = InsolationTable::new(&edges(), 360).unwrap();
        base.update(&run, 1361.0, 0.2178);
        let (whole, base) = (whole.0.annual_mean_w_m2(), base.annual_mean_w_m2());
        for i in 0..36 {
            let parts = (summer[i] - base[i]) + (winter[i] - base[i]);
            assert!((parts - (whole[i] - base[i])).abs() < 1e-9, "band {i}");
        }
    }

    #[test]
    fn everything_wrong_is_told_at_once() {
        let wrong = spec(
            "latitude = { from_deg = 80, to_deg = 70, edge_deg = -1 }\n\
             sun_longitude = { from_deg = -5, to_deg = 400, edge_deg = 5 }",
        );
        assert_eq!(wrong.check().unwrap_err().len(), 4);
        let narrow = "latitude = { from_deg = 45, to_deg = 90, edge_deg = 60 }";
        assert_eq!(spec(narrow).check().unwrap_err().len(), 1);
        assert_eq!(spec("").check().unwrap_err(), [MaskError::Everywhere]);
    }
}
