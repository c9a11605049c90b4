//! An orbital element between the rows of a user's table.
//!
//! What: eccentricity, obliquity or longitude of perihelion at any age within the table.
//! Numerics: where the rows are evenly spaced, the cubic through the two rows before and the two
//! after (at the ends, through the four nearest); where they are not, or are fewer than four,
//! straight lines, since a polynomial through uneven rows makes the rounding of printed digits larger.
//! The longitude of perihelion passes from 360 to 0 degrees: its cosine and sine are interpolated,
//! after the mean turning of the table has been taken out, which leaves a slow course. Errors against
//! the series of Berger (1978) from rows of 1 kyr over 900 kyr: cubic e 1.0e-6, obliquity 2.6e-5
//! degrees, e sin(perihelion) 2.4e-6; straight lines 3.4e-5, 0.0043 degrees, 2.7e-5.
//! Where e nearly vanishes (below 0.001) it has a cusp in time, and a column of e loses more: 4e-4 at the
//! most in the 5.6 million years of the integrated orbit, which is itself read from other columns.
//! Units: kyr before 1950 CE, degrees.
//! Source: own choice.

use crate::numerics::lagrange::{weighted, weights};

/// Rows of the cubic.
const NEIGHBOURS: usize = 4;
/// Spacings that differ by less than this share are even: rounding of printed ages.
const EVEN: f64 = 1e-6;
/// Slack at the ends for rounding of ages, kyr: a millionth of a year.
const SLACK_KYR: f64 = 1e-9;

/// Rows of numbers at increasing ages.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Nodes<const K: usize> {
    age_kyr: Vec<f64>,
    rows: Vec<[f64; K]>,
    /// The spacing, kyr, where it is even and a cubic has enough rows.
    even_kyr: Option<f64>,
}

impl<const K: usize> Nodes<K> {
    /// From at least two ages, kyr before 1950, increasing, and as many rows.
    pub(super) fn new(age_kyr: &[f64], rows: Vec<[f64; K]>) -> Self {
        let mean = (age_kyr[age_kyr.len() - 1] - age_kyr[0]) / (age_kyr.len() - 1) as f64;
        let is_even = |pair: &[f64]| (pair[1] - pair[0] - mean).abs() <= EVEN * mean;
        let even = age_kyr.len() >= NEIGHBOURS && age_kyr.windows(2).all(is_even);
        Self {
            age_kyr: age_kyr.to_vec(),
            rows,
            even_kyr: even.then_some(mean),
        }
    }

    /// Oldest and youngest age, kyr before 1950.
    pub(super) fn range_kyr(&self) -> [f64; 2] {
        [self.age_kyr[self.age_kyr.len() - 1], self.age_kyr[0]]
    }

    /// The row at an age, kyr before 1950; `None` outside the table.
    pub(super) fn at(&self, age_kyr: f64) -> Option<[f64; K]> {
        let [oldest, youngest] = self.range_kyr();
        if !(youngest - SLACK_KYR..=oldest + SLACK_KYR).contains(&age_kyr) {
            return None;
        }
        let age = age_kyr.clamp(youngest, oldest);
        let above = self.age_kyr.partition_point(|node| *node <= age);
        let above = above.clamp(1, self.rows.len() - 1);
        Some(if let Some(step) = self.even_kyr {
            let first = above.saturating_sub(2).min(self.rows.len() - NEIGHBOURS);
            let place = (age - self.age_kyr[first]) / step;
            let neighbours = &self.rows[first..first + NEIGHBOURS];
            weighted(&weights::<NEIGHBOURS>(place), neighbours)
        } else {
            let [before, after] = [self.age_kyr[above - 1], self.age_kyr[above]];
            let share = (age - before) / (after - before);
            weighted(&[1.0 - share, share], &self.rows[above - 1..=above])
        })
    }
}

/// Longitudes of perihelion at increasing ages.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct PerihelionNodes {
    /// Cosine and sine of the longitude without the mean turning.
    unit: Nodes<2>,
    /// Mean turning, degrees per kyr towards the past.
    turning_deg_kyr: f64,
}

impl PerihelionNodes {
    /// From at least two ages, kyr before 1950, increasing, and heliocentric longitudes, degrees.
    pub(super) fn new(age_kyr: &[f64], heliocentric_deg: &[f64]) -> Self {
        let turned: f64 = heliocentric_deg
            .windows(2)
            .map(|pair| shortest_deg(pair[1] - pair[0]))
            .sum();
        let turning_deg_kyr = turned / (age_kyr[age_kyr.len() - 1] - age_kyr[0]);
        let rows = age_kyr.iter().zip(heliocentric_deg).map(|(age, angle)| {
            let (sine, cosine) = libm::sincos((angle - turning_deg_kyr * age).to_radians());
            [cosine, sine]
        });
        Self {
            unit: Nodes::new(age_kyr, rows.collect()),
            turning_deg_kyr,
        }
    }

    /// Oldest and youngest age, kyr before 1950.
    pub(super) fn range_kyr(&self) -> [f64; 2] {
        self.unit.range_kyr()
    }

    /// Heliocentric longitude at an age, degrees (not wrapped); `None` outside the table.
    pub(super) fn heliocentric_deg(&self, age_kyr: f64) -> Option<f64> {
        let [cosine, sine] = self.unit.at(age_kyr)?;
        Some(libm::atan2(sine, cosine).to_degrees() + self.turning_deg_kyr * age_kyr)
    }
}

/// The same turn by the shorter way, degrees in [-180, 180).
fn shortest_deg(turn_deg: f64) -> f64 {
    (turn_deg + 180.0).rem_euclid(360.0) - 180.0
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::orbit::solution::{Orbit, OrbitSpec};

    /// Largest errors in e, obliquity and e sin(perihelion) of rows at these ages, read at others.
    fn errors(ages: &[f64]) -> [f64; 3] {
        let series = Orbit::build(&OrbitSpec::berger1978()).unwrap();
        let exact: Vec<_> = ages.iter().map(|age| series.at(*age).unwrap()).collect();
        let column = |of: &dyn Fn(usize) -> f64| (0..ages.len()).map(|i| [of(i)]).collect();
        let eccentricity = Nodes::new(ages, column(&|i| exact[i].eccentricity));
        let obliquity = Nodes::new(ages, column(&|i| exact[i].obliquity_deg));
        let longitudes: Vec<_> = exact
            .iter()
            .map(|e| e.perihelion.heliocentric_deg())
            .collect();
        let perihelion = PerihelionNodes::new(ages, &longitudes);
        let mut largest = [0.0_f64; 3];
        let (first, last) = (ages[0], ages[ages.len() - 1]);
        for i in 0..=20_000 {
            let age = first + (last - first) * f64::from(i) / 20_000.0;
            let exact = series.at(age).unwrap();
            let [e] = eccentricity.at(age).unwrap();
            let [tilt] = obliquity.at(age).unwrap();
            let angle = perihelion.heliocentric_deg(age).unwrap().to_radians();
            let found = [
                e - exact.eccentricity,
                tilt - exact.obliquity_deg,
                exact.eccentricity * angle.sin() - exact.climatic_precession(),
            ];
            for (largest, found) in largest.iter_mut().zip(found) {
                *largest = largest.max(found.abs());
            }
        }
        largest
    }

    #[test]
    fn converges_to_the_series_that_the_rows_were_taken_from() {
        let every = |step: f64| (0..=900).map(|i| f64::from(i) * step).collect::<Vec<_>>();
        let [coarse, fine] = [1.0, 0.5].map(|step| errors(&every(step)));
        let mut uneven = every(1.0);
        uneven[1] += 0.1;
        let lines = errors(&uneven);
        for (found, limit) in coarse.iter().zip([1.1e-6, 2.7e-5, 2.6e-6]) {
            assert!(*found < limit, "cubic: {coarse:?}");
        }
        for (coarse, fine) in coarse.iter().zip(fine) {
            let order = (coarse / fine).log2();
            assert!(order > 3.8, "{coarse:e} {fine:e}");
        }
        for (found, limit) in lines.iter().zip([3.7e-5, 0.0047, 3.0e-5]) {
            assert!(*found < limit, "straight lines: {lines:?}");
        }
    }

    #[test]
    fn analytic_rows_are_met_and_ages_outside_refused() {
        let ages = [0.0, 1.0, 2.0, 3.0, 4.0];
        let nodes = Nodes::new(&ages, vec![[0.1], [0.2], [0.4], [0.3], [0.1]]);
        for (age, row) in ages.iter().zip(&nodes.rows) {
            assert!((nodes.at(*age).unwrap()[0] - row[0]).abs() < 1e-15, "{age}");
        }
        for age in [-0.001, 4.001, f64::NAN] {
            assert_eq!(nodes.at(age), None);
        }
        assert!(nodes.at(4.0 + 1e-10).is_some());
        let two = Nodes::new(&[0.0, 2.0], vec![[1.0], [2.0]]);
        assert!((two.at(0.5).unwrap()[0] - 1.25).abs() < 1e-15);
    }

    #[test]
    fn analytic_a_perihelion_that_turns_steadily_is_exact_through_the_full_circle() {
        let ages: Vec<_> = (0..60).map(f64::from).collect();
        let longitudes: Vec<_> = ages
            .iter()
            .map(|a| (102.0 - 17.2 * a).rem_euclid(360.0))
            .collect();
        let nodes = PerihelionNodes::new(&ages, &longitudes);
        for i in 0..590 {
            let age = f64::from(i) * 0.1;
            let off = shortest_deg(nodes.heliocentric_deg(age).unwrap() - (102.0 - 17.2 * age));
            assert!(off.abs() < 1e-9, "{age}: {off}");
        }
    }
}
