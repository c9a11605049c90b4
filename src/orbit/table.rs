//! Insolation of latitude bands through the year, with the Sun's height, for one orbit.
//!
//! What: for every time step of the year and every band, the daily mean insolation averaged over
//! the area of the band, and the insolation-weighted mean cosine of the zenith angle there.
//! Equations: with x = sin(latitude), s and c the sine and cosine of the declination,
//! R = sqrt(c^2 - x^2) and h the half-day arc (cos h = -x s / (c sqrt(1 - x^2)), limited to
//! [-1, 1]), the integrals over half a day of cos z and of cos^2 z have the primitives in x
//!   F = (asin(x/c) + x R - s (1 - x^2) h) / 2,
//!   G = (x c^2/2 + b x^3/3) h + sign(s) acos(|s| / sqrt(1 - x^2)) / 3 - b s R / 3 - s R^3 / 2,
//! b = s^2 - c^2/2, with R = 0 and the arcs limited beyond the day's terminator. A band mean is
//! (S0/pi) (a/r)^2 dF/dx; the cosine is dG/dF. Both are exact, polar circle included: there is no
//! quadrature in latitude, and the bands add up to the flux on the disc at every step.
//! Units: W m-2; cosines are pure numbers; time in fractions of the year.
//! Numerics: four edges side by side, three arcs of [`super::arc`] and one square root for each
//! edge, shared with its mirror image in the other hemisphere; no branch. Rounding is 1e-15 of the whole disc, 1e-10 W m-2 in a polar band of 5 degrees.
//! A band that gets less than 1e-9 of F has cosine 0: the ratio would be rounding there, and its
//! limit at the terminator is 0. The position on the orbit uses the system's sine and cosine.
//! Source: own integration of the daily mean of Berger 1978, J. Atmos. Sci. 35:2362, over x;
//! checked against quadrature in the tests.
#![expect(
    clippy::inline_always,
    reason = "the kernel's bodies must be compiled with its vector instructions"
)]

use std::f64::consts::{FRAC_PI_2, PI, TAU};

use thiserror::Error;

use super::arc::arc_cosine;
use super::elements::Elements;
use super::kepler::{eccentric_anomaly_rad, mean_anomaly_rad};
use crate::numerics::dispatch::{Kernel, widest};
use crate::numerics::lanes::{Lanes, WIDTH};

/// Below this difference of F (the globe has pi/2) a band counts as dark for the mean cosine.
const DARK: f64 = 1e-9;
/// Keeps the inverse of the declination's cosine finite for an axis lying in the orbit's plane.
const SMALLEST_COSINE: f64 = 1e-12;

/// Why a table cannot be laid out.
#[derive(Clone, Debug, Error, PartialEq)]
pub enum TableError {
    /// No band between the edges.
    #[error("{count} band edges leave no band; give at least 2")]
    TooFewEdges {
        /// Number of edges given.
        count: usize,
    },
    /// An edge is not the sine of a latitude, or not above the edge before it.
    #[error(
        "band edge {index} is sin(latitude) = {value}; edges must lie in [-1, 1] and rise \
         from south to north"
    )]
    BadEdge {
        /// Index of the edge, from 0.
        index: usize,
        /// The number given.
        value: f64,
    },
    /// The year has no steps.
    #[error("0 steps in the year; give at least 1")]
    NoSteps,
}

/// The Sun's position at one step, as the kernel needs it.
#[derive(Clone, Copy, Debug, Default)]
struct Season {
    /// (S0/pi) (a/r)^2, W m-2.
    flux_w_m2: f64,
    /// Sine of the declination.
    sine: f64,
    /// Cosine of the declination.
    cosine: f64,
}

/// What the kernel needs of four band edges.
#[derive(Clone, Copy, Debug)]
struct EdgeBlock {
    /// Sine of latitude.
    x: Lanes,
    /// Hemisphere: 1 north and on the equator, -1 south.
    side: Lanes,
    /// 1 - x^2.
    cos_square: Lanes,
    /// 1 / sqrt(1 - x^2); 0 at a pole, where it only multiplies R = 0.
    inverse_cos: Lanes,
}

/// The edges, in blocks of four from south to north.
#[derive(Clone, Debug)]
enum Edges {
    /// Each for itself.
    All(Vec<EdgeBlock>),
    /// Those of the northern hemisphere, the equator first; each has its mirror image in the
    /// south, bit for bit, and shares the arcs with it.
    Mirrored {
        /// The northern edges.
        northern: Vec<EdgeBlock>,
        /// Number of the equator among all edges.
        equator: usize,
    },
}

impl Edges {
    fn of(sines: &[f64]) -> Self {
        let equator = sines.len() / 2;
        let opposite = sines.iter().zip(sines.iter().rev());
        // Adding the two says more than comparing: it is exactly zero only for mirror images.
        let mirrored =
            sines.len() % 2 == 1 && opposite.map(|(a, b)| (a + b).abs()).sum::<f64>() <= 0.0;
        if mirrored {
            let northern = sines[equator..].chunks(WIDTH).map(edge_block).collect();
            Self::Mirrored { northern, equator }
        } else {
            Self::All(sines.chunks(WIDTH).map(edge_block).collect())
        }
    }
}

/// Insolation and mean zenith cosine of latitude bands at equally spaced times of the year.
///
/// Both tables are flat, one row of bands for each step: index `step * bands + band`. Step k stands
/// for the time (k + 1) / steps of the year, counted from 1 January 0 h.
#[derive(Clone, Debug)]
pub struct InsolationTable {
    edges: Edges,
    inverse_width: Vec<f64>,
    seasons: Vec<Season>,
    scratch: Vec<f64>,
    /// Daily mean insolation, averaged over the area of the band.
    pub daily_mean_w_m2: Vec<f64>,
    /// Insolation-weighted mean cosine of the zenith angle over day and band; 0 in polar night.
    pub zenith_cosine: Vec<f64>,
}

impl InsolationTable {
    /// Lays out a table, filled with zeros, for bands between `sin_edges` (sines of latitude, south
    /// to north) and `steps` times of the year.
    ///
    /// # Errors
    /// When there is no band or no step, or the edges do not rise within [-1, 1].
    pub fn new(sin_edges: &[f64], steps: usize) -> Result<Self, TableError> {
        check(sin_edges, steps)?;
        let bands = sin_edges.len() - 1;
        let inverse_width = sin_edges.windows(2).map(|e| 1.0 / (e[1] - e[0])).collect();
        Ok(Self {
            scratch: vec![0.0; 2 * (sin_edges.len() + 2 * WIDTH)],
            edges: Edges::of(sin_edges),
            inverse_width,
            seasons: vec![Season::default(); steps],
            daily_mean_w_m2: vec![0.0; steps * bands],
            zenith_cosine: vec![0.0; steps * bands],
        })
    }

    /// Number of latitude bands.
    pub fn bands(&self) -> usize {
        self.inverse_width.len()
    }

    /// Number of time steps in the year.
    pub fn steps(&self) -> usize {
        self.seasons.len()
    }

    /// Fills the table for an orbit.
    ///
    /// `solar_constant_w_m2` is the flux at a distance of one semi-major axis; `equinox_fraction`
    /// is the time of the March equinox as a fraction of the year.
    pub fn update(&mut self, elements: &Elements, solar_constant_w_m2: f64, equinox_fraction: f64) {
        self.place_sun(elements, solar_constant_w_m2, equinox_fraction);
        widest(Fill { table: self });
    }

    /// Mean of each band over the steps of the year, W m-2.
    pub fn annual_mean_w_m2(&self) -> Vec<f64> {
        let mut mean = vec![0.0; self.bands()];
        for row in self.daily_mean_w_m2.chunks_exact(self.bands()) {
            for (sum, value) in mean.iter_mut().zip(row) {
                *sum += value;
            }
        }
        let share = 1.0 / self.steps() as f64;
        for sum in &mut mean {
            *sum *= share;
        }
        mean
    }

    /// Distance and declination of the Sun at every step.
    fn place_sun(&mut self, elements: &Elements, solar_constant_w_m2: f64, equinox_fraction: f64) {
        let e = elements.eccentricity;
        let perihelion_rad = elements.perihelion.sun_longitude_deg().to_radians();
        let (sin_perihelion, cos_perihelion) = perihelion_rad.sin_cos();
        let sin_obliquity = elements.obliquity_deg.to_radians().sin();
        let minor_axis = (1.0 - e * e).sqrt();
        let at_equinox = mean_anomaly_rad(-perihelion_rad, e);
        let steps = self.seasons.len() as f64;
        for (k, season) in self.seasons.iter_mut().enumerate() {
            let years = (k + 1) as f64 / steps - equinox_fraction;
            let eccentric = eccentric_anomaly_rad(at_equinox + TAU * years, e);
            let (sin, cos) = eccentric.sin_cos();
            let inverse_distance = 1.0 / (1.0 - e * cos);
            let sin_anomaly = minor_axis * sin * inverse_distance;
            let cos_anomaly = (cos - e) * inverse_distance;
            let sin_longitude = sin_anomaly * cos_perihelion + cos_anomaly * sin_perihelion;
            let sine = sin_obliquity * sin_longitude;
            *season = Season {
                flux_w_m2: solar_constant_w_m2 / PI * inverse_distance * inverse_distance,
                sine,
                cosine: ((1.0 - sine) * (1.0 + sine)).max(0.0).sqrt(),
            };
        }
    }
}

/// Refuses layouts that have no meaning.
fn check(sin_edges: &[f64], steps: usize) -> Result<(), TableError> {
    if sin_edges.len() < 2 {
        return Err(TableError::TooFewEdges {
            count: sin_edges.len(),
        });
    }
    let mut below = f64::NEG_INFINITY;
    for (index, &value) in sin_edges.iter().enumerate() {
        if !((-1.0..=1.0).contains(&value) && value > below) {
            return Err(TableError::BadEdge { index, value });
        }
        below = value;
    }
    if steps == 0 {
        return Err(TableError::NoSteps);
    }
    Ok(())
}

/// Up to four edges; missing ones repeat the last.
fn edge_block(edges: &[f64]) -> EdgeBlock {
    let mut x = [edges[edges.len() - 1]; WIDTH];
    x[..edges.len()].copy_from_slice(edges);
    let cos_square = x.map(|x| (1.0 - x) * (1.0 + x));
    let inverse = |square: f64| {
        if square > 0.0 {
            1.0 / square.sqrt()
        } else {
            0.0
        }
    };
    EdgeBlock {
        x: Lanes(x),
        side: Lanes(x.map(|x| if x < 0.0 { -1.0 } else { 1.0 })),
        cos_square: Lanes(cos_square),
        inverse_cos: Lanes(cos_square.map(inverse)),
    }
}

/// What an edge shares with its mirror image in the other hemisphere.
#[derive(Clone, Copy)]
struct Shared {
    root: Lanes,
    root_square: Lanes,
    /// Quarter of a turn less the arcs of x / c and of the half day.
    arc: Lanes,
    half_day: Lanes,
    turn: Lanes,
}

/// Arcs and roots at four edges, for |x|.
#[inline(always)]
fn shared(edge: &EdgeBlock, season: Season, inverse_cosine: f64) -> Shared {
    let (zero, one) = (Lanes::splat(0.0), Lanes::splat(1.0));
    let (s, c) = (season.sine, season.cosine);
    let size = edge.x.abs();
    // R^2 as a product: exact where it cancels, and the same for all three arcs.
    let root_square = ((Lanes::splat(c) - size) * (size + c)).max(zero);
    let root = root_square.sqrt();
    let along = size * inverse_cosine;
    let tilt = edge.inverse_cos * s.abs();
    let sine = root * edge.inverse_cos;
    let quarter = Lanes::splat(FRAC_PI_2);
    let polar = arc_cosine(along.min(one), root * inverse_cosine);
    let day = arc_cosine((along * tilt).min(one), sine * inverse_cosine);
    Shared {
        root,
        root_square,
        arc: quarter - polar,
        half_day: quarter - day,
        turn: arc_cosine(tilt.min(one), sine),
    }
}

/// Both primitives at four edges x in the hemispheres `side`.
#[inline(always)]
fn primitives(
    (x, side): (Lanes, Lanes),
    cos_square: Lanes,
    season: Season,
    shared: Shared,
) -> (Lanes, Lanes) {
    let (s, c) = (season.sine, season.cosine);
    let sign_s = 1.0_f64.copysign(s);
    let Shared {
        root,
        root_square,
        turn,
        ..
    } = shared;
    // Arcs for the hemisphere of the edge and of the Sun: signs instead of branches.
    let arc = side * shared.arc;
    let half_day = Lanes::splat(FRAC_PI_2) + side * sign_s * shared.half_day;
    let first = (arc + x * root - cos_square * half_day * s) * 0.5;
    let half_c2 = 0.5 * c * c;
    let third_b = (s * s - half_c2) / 3.0;
    let second = x * (x * x * third_b + half_c2) * half_day + turn * (sign_s / 3.0)
        - root * (root_square * 0.5 + third_b) * s;
    (first, second)
}

/// Both primitives at all edges, behind `WIDTH` numbers that mean nothing.
#[inline(always)]
fn at_edges(edges: &Edges, season: Season, first: &mut [f64], second: &mut [f64]) {
    let inverse_cosine = 1.0 / season.cosine.max(SMALLEST_COSINE);
    match edges {
        Edges::All(blocks) => {
            for (i, edge) in blocks.iter().enumerate() {
                let shared = shared(edge, season, inverse_cosine);
                let place = (edge.x, edge.side);
                let (f, g) = primitives(place, edge.cos_square, season, shared);
                f.store(first, WIDTH * (i + 1));
                g.store(second, WIDTH * (i + 1));
            }
        }
        Edges::Mirrored { northern, equator } => {
            let one = Lanes::splat(1.0);
            for (i, edge) in northern.iter().enumerate() {
                let shared = shared(edge, season, inverse_cosine);
                let south = (-edge.x, -one);
                let (f, g) = primitives(south, edge.cos_square, season, shared);
                // From the equator southwards; the northern equator is stored over it.
                let at = WIDTH + equator + 1 - WIDTH * (i + 1);
                reversed(f).store(first, at);
                reversed(g).store(second, at);
                let north = (edge.x, one);
                let (f, g) = primitives(north, edge.cos_square, season, shared);
                f.store(first, WIDTH * (i + 1) + equator);
                g.store(second, WIDTH * (i + 1) + equator);
            }
        }
    }
}

#[inline(always)]
fn reversed(lanes: Lanes) -> Lanes {
    let [a, b, c, d] = lanes.0;
    Lanes([d, c, b, a])
}

/// Fills the rows of a table whose seasons are known.
struct Fill<'a> {
    table: &'a mut InsolationTable,
}

impl Kernel for Fill<'_> {
    type Output = ();

    #[inline(always)]
    fn run(self) {
        let table = self.table;
        let bands = table.inverse_width.len();
        let (first, second) = table.scratch.split_at_mut(bands + 1 + 2 * WIDTH);
        let rows = table
            .daily_mean_w_m2
            .chunks_exact_mut(bands)
            .zip(table.zenith_cosine.chunks_exact_mut(bands));
        for (season, (daily, zenith)) in table.seasons.iter().zip(rows) {
            at_edges(&table.edges, *season, first, second);
            let whole = bands - bands % WIDTH;
            for at in (0..whole).step_by(WIDTH) {
                let widths = Lanes::load(&table.inverse_width, at);
                let (mean, cosine) = band_means([first, second], at, widths * season.flux_w_m2);
                mean.store(daily, at);
                cosine.store(zenith, at);
            }
            // Bands beyond the last four: the lanes too many are left where they are.
            let mut widths = [0.0; WIDTH];
            let rest = &table.inverse_width[whole..];
            widths[..rest.len()].copy_from_slice(rest);
            if !rest.is_empty() {
                let widths = Lanes(widths) * season.flux_w_m2;
                let (mean, cosine) = band_means([first, second], whole, widths);
                daily[whole..].copy_from_slice(&mean.0[..rest.len()]);
                zenith[whole..].copy_from_slice(&cosine.0[..rest.len()]);
            }
        }
    }
}

/// Daily mean and zenith cosine of four bands from `at` on, from the primitives at their edges;
/// `scale` is the flux over the width.
#[inline(always)]
fn band_means([first, second]: [&[f64]; 2], at: usize, scale: Lanes) -> (Lanes, Lanes) {
    let (zero, one, dark) = (Lanes::splat(0.0), Lanes::splat(1.0), Lanes::splat(DARK));
    let between = |v: &[f64]| {
        let [south, north] = [WIDTH + at, WIDTH + at + 1].map(|edge| Lanes::load(v, edge));
        (north - south).max(zero)
    };
    let (sunlight, squares) = (between(first), between(second));
    let cosine = (squares / sunlight.max(dark)).min(one);
    let in_dark = dark.at_least(sunlight);
    (scale * sunlight, in_dark.select(zero, cosine))
}

#[cfg(test)]
#[path = "table_tests.rs"]
mod tests;
