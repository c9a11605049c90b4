//! Insolation of parts of the year: means between two longitudes of the Sun, and the caloric
//! half-years.
//!
//! What: duration, energy and mean of the daily insolation at a latitude while the Sun moves between
//! two longitudes; mean of the half of the year with the larger daily insolation (the summer caloric
//! half-year) and of the other half.
//! Equations: with the mean C of the zenith cosine over the day, dt/Y = (r/a)^2 / (2 pi
//! sqrt(1 - e^2)) d(longitude), so the integral of Q dt/Y is S0 / (2 pi sqrt(1 - e^2)) times that
//! of C d(longitude): energy between two longitudes does not depend on the perihelion. Times by
//! Kepler's equation. The summer half H is the set Q > L that fills half of the year; its mean is
//! 2 (integral of Q over Q > L + L (1/2 - share of the year with Q > L)), which at the right L does not
//! change to first order when L or the bounds of the set do.
//! Units: W m-2, degrees, fractions of the year.
//! Numerics: double-exponential quadrature between the longitudes at which polar night or polar day
//! begins or ends (kinks of C): error about 1e-13 of the annual mean. L by false position on 360 arcs
//! with the crossings refined; error of the mean below 1e-9 W m-2 (tests).
//! Source: Milankovitch 1941, Kanon der Erdbestrahlung (caloric half-years; memory); Berger 1978,
//! J. Atmos. Sci. 35:2362; Kepler's second law.

use std::f64::consts::{PI, TAU};

use super::elements::Elements;
use super::insolation::{annual_mean_w_m2, daily_mean_cosine, daily_mean_w_m2};
use super::kepler::years_since_equinox;
use crate::numerics::quadrature::double_exponential;
use crate::units::YEAR_DAYS;

/// Arcs of the Sun's longitude in which the daily insolation is looked up for the half-years.
const ARCS: usize = 360;
/// Most levels that are tried; about ten are needed.
const MOST_LEVELS: usize = 100;
/// Difference from half of the year, and relative width of the level, that count as none.
const EQUAL_HALVES: f64 = 1e-11;

/// A part of the year, between two longitudes of the Sun.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Part {
    /// Its share of the year.
    pub share: f64,
    /// Energy in it divided by the length of the year, W m-2.
    pub energy_per_year_w_m2: f64,
}

impl Part {
    /// Mean insolation, weighted by time, W m-2; NaN for a part without length.
    pub fn mean_w_m2(&self) -> f64 {
        self.energy_per_year_w_m2 / self.share
    }

    /// Length, days of 86 400 s.
    pub fn length_days(&self) -> f64 {
        self.share * YEAR_DAYS
    }
}

/// The halves of the year with the larger and the smaller daily insolation.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CaloricHalves {
    /// Mean of the half with the larger insolation, W m-2.
    pub summer_w_m2: f64,
    /// Mean of the other half, W m-2.
    pub winter_w_m2: f64,
    /// Longitudes of the Sun, degrees, between which the summer half lies, in the order of the year;
    /// none where it is in several parts (near the equator), or where more than half of the year is
    /// night (near a pole).
    pub summer_deg: Option<[f64; 2]>,
}

/// Degrees from one longitude of the Sun to another in the order of the year, above 0 and up to 360.
fn span_deg(from_deg: f64, to_deg: f64) -> f64 {
    let span = (to_deg - from_deg).rem_euclid(360.0);
    if span > 0.0 { span } else { 360.0 }
}

/// The part of the year in which the Sun moves from one longitude to another, at a latitude; equal
/// longitudes (or 0 and 360) mean the whole year.
///
/// `solar_constant_w_m2` is the flux at a distance of one semi-major axis.
pub fn part_between(
    elements: &Elements,
    solar_constant_w_m2: f64,
    latitude_deg: f64,
    from_deg: f64,
    to_deg: f64,
) -> Part {
    let end_deg = from_deg + span_deg(from_deg, to_deg);
    let share = years_since_equinox(elements, end_deg) - years_since_equinox(elements, from_deg);
    let e = elements.eccentricity;
    let cosine = cosine_integral(elements.obliquity_deg, latitude_deg, from_deg, end_deg);
    Part {
        share,
        energy_per_year_w_m2: solar_constant_w_m2 * cosine / (TAU * (1.0 - e * e).sqrt()),
    }
}

/// Integral of the daily mean zenith cosine over the Sun's longitude (in radians), with
/// `from_deg <= to_deg`.
fn cosine_integral(obliquity_deg: f64, latitude_deg: f64, from_deg: f64, to_deg: f64) -> f64 {
    let sin_obliquity = obliquity_deg.to_radians().sin();
    let cosine = |longitude: f64| daily_mean_cosine(latitude_deg, sin_obliquity * longitude.sin());
    let (from, to) = (from_deg.to_radians(), to_deg.to_radians());
    let mut bounds = vec![from];
    bounds.extend(kinks(latitude_deg, sin_obliquity, from, to));
    bounds.sort_by(f64::total_cmp);
    bounds.push(to);
    let pieces = bounds.windows(2);
    pieces.map(|b| double_exponential(b[0], b[1], cosine)).sum()
}

/// Longitudes within an interval, rad, where the daily mean is not smooth: where polar night or day
/// begins or ends; and near the polar circle the solstices, where that happens or almost happens.
fn kinks(latitude_deg: f64, sin_obliquity: f64, from: f64, to: f64) -> Vec<f64> {
    let sine = latitude_deg.to_radians().cos() / sin_obliquity;
    let mut within = Vec::new();
    if sine.is_finite() && sine < 1.0 {
        within.extend([sine.asin(), PI - sine.asin()]);
    }
    if (0.8..1.25).contains(&sine) {
        within.push(0.5 * PI);
    }
    // The same in every half of a turn.
    let mut places = Vec::new();
    let mut half_turn = (from / PI).floor() * PI;
    while half_turn < to {
        places.extend(within.iter().map(|place| half_turn + place));
        half_turn += PI;
    }
    places.retain(|place| from < *place && *place < to);
    places
}

/// The caloric half-years at a latitude.
///
/// `solar_constant_w_m2` is the flux at a distance of one semi-major axis.
pub fn caloric_halves(
    elements: &Elements,
    solar_constant_w_m2: f64,
    latitude_deg: f64,
) -> CaloricHalves {
    let daily = |longitude_deg: f64| {
        daily_mean_w_m2(elements, solar_constant_w_m2, latitude_deg, longitude_deg)
    };
    let nodes: Vec<f64> = (0..ARCS).map(|k| daily(k as f64)).collect();
    let share = |[from, to]: [f64; 2]| {
        years_since_equinox(elements, to) - years_since_equinox(elements, from)
    };
    let filled = |arcs: &[[f64; 2]]| arcs.iter().map(|arc| share(*arc)).sum::<f64>();
    let level = dividing_level(&nodes, |level| filled(&above(level, &nodes, &daily)) - 0.5);
    let arcs = above(level, &nodes, &daily);
    let energy: f64 = arcs
        .iter()
        .map(|[from, to]| {
            let part = part_between(elements, solar_constant_w_m2, latitude_deg, *from, *to);
            part.energy_per_year_w_m2
        })
        .sum();
    let rest = 0.5 - filled(&arcs);
    let summer_w_m2 = 2.0 * (energy + level * rest);
    let annual = annual_mean_w_m2(elements, solar_constant_w_m2, latitude_deg);
    let summer_deg = match arcs[..] {
        [[from, to]] if rest.abs() < 1e-6 => Some([from, to.rem_euclid(360.0)]),
        _ => None,
    };
    CaloricHalves {
        summer_w_m2,
        winter_w_m2: (2.0 * annual - summer_w_m2).max(0.0),
        summer_deg,
    }
}

/// The level above which `excess`, the share of the year less one half, is 0; the smallest value where
/// it is never positive. False position with the weights of the Illinois rule (Dowell & Jarratt 1971,
/// BIT 11:168; memory).
fn dividing_level(nodes: &[f64], excess: impl Fn(f64) -> f64) -> f64 {
    let (mut low, mut high) = (f64::INFINITY, f64::NEG_INFINITY);
    for value in nodes {
        (low, high) = (low.min(*value), high.max(*value));
    }
    let (mut at_low, mut at_high) = (excess(low), -0.5);
    if at_low <= 0.0 {
        return low;
    }
    let mut before = 0.0;
    for _ in 0..MOST_LEVELS {
        let level = (low * at_high - high * at_low) / (at_high - at_low);
        let here = excess(level);
        if here.abs() < EQUAL_HALVES || high - low < EQUAL_HALVES * high {
            return level;
        }
        // The end that stays twice is given less weight, or it would stay for ever.
        let same_side = here * before > 0.0;
        if here > 0.0 {
            (low, at_low) = (level, here);
            at_high *= if same_side { 0.5 } else { 1.0 };
        } else {
            (high, at_high) = (level, here);
            at_low *= if same_side { 0.5 } else { 1.0 };
        }
        before = here;
    }
    high
}

/// Arcs of longitude, degrees, on which the daily insolation is above a level; each from below 360
/// to at most a turn later.
fn above(level: f64, nodes: &[f64], daily: &impl Fn(f64) -> f64) -> Vec<[f64; 2]> {
    let next = |k: usize| nodes[(k + 1) % nodes.len()];
    let crossing = |k: usize| {
        let (mut a, mut b) = (k as f64, k as f64 + 1.0);
        let up = next(k) > level;
        // Regula falsi would be faster; halving needs no care at the kinks of polar night.
        for _ in 0..CROSSING_HALVINGS {
            let middle = 0.5 * (a + b);
            if (daily(middle) > level) == up {
                b = middle;
            } else {
                a = middle;
            }
        }
        0.5 * (a + b)
    };
    let ups: Vec<f64> = (0..nodes.len())
        .filter(|&k| nodes[k] <= level && next(k) > level)
        .map(crossing)
        .collect();
    let downs: Vec<f64> = (0..nodes.len())
        .filter(|&k| nodes[k] > level && next(k) <= level)
        .map(crossing)
        .collect();
    match (ups.first(), downs.first()) {
        (Some(first_up), Some(first_down)) => {
            // Each arc ends at the first way down after its way up, maybe in the next year.
            let turn = usize::from(first_down < first_up);
            let end = |i: usize| match downs.get(i + turn) {
                Some(down) => *down,
                None => downs[0] + 360.0,
            };
            ups.iter()
                .enumerate()
                .map(|(i, up)| [*up, end(i)])
                .collect()
        }
        _ if nodes.iter().all(|value| *value > level) => vec![[0.0, 360.0]],
        _ => Vec::new(),
    }
}

/// Halvings of an arc of one degree; the mean of a half-year depends on the square of what is left.
const CROSSING_HALVINGS: usize = 24;

#[cfg(test)]
#[path = "season_tests.rs"]
mod tests;
