//! The map and the axis against closed forms, conservation laws and published rates.

use super::attraction::EARTH;
use super::planets::{Block, Planets};
use super::*;
use crate::numerics::dispatch::Kernel;

const ARCSEC: f64 = 648_000.0 / std::f64::consts::PI;

fn constants() -> Constants {
    toml::from_str(include_str!("../../../configs/orbit_constants.toml")).unwrap()
}

/// One planet around the Sun in the place of the Earth, without masses elsewhere, Moon and
/// flattening.
fn alone(planet: usize) -> Constants {
    let mut constants = constants();
    constants.planet.swap(EARTH, planet);
    constants.planet.iter_mut().for_each(|p| p.gm_au3_d2 = 0.0);
    constants.moon.quadrupole_factor = 0.0;
    constants.sun.j2 = 0.0;
    constants
}

/// Advance of the perihelion between the first two blocks, arc seconds a century; the semi-major
/// axis, AU, and the eccentricity.
fn advance(constants: &Constants) -> [f64; 3] {
    let mut planets = Planets::new(constants, Direction::Future);
    let [before, after] = [planets.next_block(), planets.next_block()];
    let longitude = |[k, h, ..]: MeanElements| h.atan2(k);
    let start = &constants.planet[EARTH];
    let square = |v: &[f64; 3]| v.iter().map(|x| x * x).sum::<f64>();
    let gm = constants.sun.gm_au3_d2;
    let a = gm / (2.0 * gm / square(&start.position_au).sqrt() - square(&start.velocity_au_d));
    let e = before[0].hypot(before[1]);
    [(longitude(after) - longitude(before)) * ARCSEC, a, e]
}

#[test]
fn published_relativistic_advance_of_mercury() {
    // 42.98 arc seconds a century (general relativity, e.g. Will 1993; memory), and in closed form
    // 6 pi G M/(c^2 a (1 - e^2)) a turn.
    let constants = alone(0);
    let [advance, a, e] = advance(&constants);
    assert!((advance - 42.98).abs() < 0.01, "{advance}");
    let turns = 36_525.0 * (constants.sun.gm_au3_d2 / (a * a * a)).sqrt();
    let closed = turns * constants.relativity_au() / 2.0 / (a * (1.0 - e * e)) * ARCSEC;
    assert!((advance - closed).abs() < 0.002, "{advance} {closed}");
}

#[test]
fn analytic_advance_of_the_earth_by_the_moon() {
    // Potential -G M L/(3 r^3): advance n L/(a^2 (1 - e^2)^2).
    let mut constants = alone(EARTH);
    constants.moon.quadrupole_factor = self::constants().moon.quadrupole_factor;
    constants.units.light_speed_km_s = 1e12;
    let [advance, a, e] = advance(&constants);
    let turns = 36_525.0 * (constants.sun.gm_au3_d2 / (a * a * a)).sqrt();
    let circle = 1.0 - e * e;
    let closed = turns * constants.moon_quadrupole_au2() / (a * circle).powi(2) * ARCSEC;
    assert!((closed - 6.6).abs() < 0.1, "{closed}");
    assert!((advance - closed).abs() < 0.001, "{advance} {closed}");
}

#[test]
fn conserves_energy_and_angular_momentum() {
    // 3 kyr; the energy swings within the error of the step and does not drift.
    let mut planets = Planets::new(&constants(), Direction::Past);
    let (energy, momentum) = (planets.energy(), planets.angular_momentum());
    for _ in 0..30 {
        planets.next_block();
        assert!((planets.energy() / energy - 1.0).abs() < 3e-9);
        for (now, start) in planets.angular_momentum().iter().zip(momentum) {
            assert!((now - start).abs() < 1e-13 * momentum[2], "{now} {start}");
        }
    }
}

#[test]
fn analytic_the_way_back_leads_to_the_start() {
    let constants = constants();
    let mut planets = Planets::new(&constants, Direction::Past);
    planets.next_block();
    planets.turn_round();
    planets.next_block();
    planets.turn_round();
    let again = planets.distance_from(&Planets::new(&constants, Direction::Past));
    assert!(again < 1e-10, "{again:e} AU");
}

#[test]
fn converges_with_a_high_power_of_the_step() {
    // Largest change of the energy in 5 centuries. Theory: order 8 as long as the term with the
    // square of the planets' masses is small; measured 7.3, and 3.9 near the rounding.
    let constants = constants();
    let error = |factor: u32| {
        let mut refined = constants.clone();
        refined.map.steps_per_century *= factor;
        refined.map.steps_per_sample *= factor;
        let mut planets = Planets::new(&refined, Direction::Future);
        let start = planets.energy();
        let mut largest = 0.0_f64;
        for _ in 0..5 {
            planets.next_block();
            largest = largest.max((planets.energy() / start - 1.0).abs());
        }
        largest
    };
    let [whole, half, quarter] = [1, 2, 4].map(error);
    assert!(
        (6.5..8.5).contains(&(whole / half).log2()),
        "{whole:e} {half:e}"
    );
    assert!(quarter < 1e-12, "{quarter:e}");
}

#[test]
fn analytic_both_instruction_sets_give_the_same_bits() {
    let constants = constants();
    for direction in [Direction::Past, Direction::Future] {
        let mut widest = Planets::new(&constants, direction);
        let mut base = widest.clone();
        for _ in 0..3 {
            let bits = |elements: MeanElements| elements.map(f64::to_bits);
            assert_eq!(bits(widest.next_block()), bits(Block(&mut base).run()));
        }
        assert_eq!(widest.energy().to_bits(), base.energy().to_bits());
    }
}

#[test]
fn published_constants_of_the_precession() {
    // Rates of Laskar et al. 2004 (memory): 0.3105 and 0.6148 per Gyr; Sun's part 17.38 arc
    // seconds a year (textbooks, memory); drift of the obliquity by the tide: own arithmetic.
    let constants = constants();
    let near = |value: f64, expected: f64, tolerance: f64| {
        assert!((value - expected).abs() < tolerance, "{value} {expected}");
    };
    near(constants.rotation_rate_1_yr() * 1e9, -0.3105, 1e-4);
    near(constants.lunar_torque_rate_1_yr() * 1e9, -0.6148, 1e-4);
    near(constants.solar_precession_rad_yr() * ARCSEC, 17.38, 0.01);
    near(constants.lunar_precession_rad_yr() * ARCSEC, 37.55, 0.01);
    let drift_deg_myr = constants.obliquity_drift_rad_yr().to_degrees() * 1e6;
    near(drift_deg_myr, 0.0034, 5e-5);
}

#[test]
fn regress_spans_are_widened_and_wrong_ones_refused() {
    let span = Span::new(2.5, -0.5).unwrap();
    assert_eq!((span.oldest_kyr, span.youngest_kyr), (4, -2));
    assert_eq!(span.blocks(), [41, 20]);
    assert_eq!(Span::new(-2.0, -3.0).unwrap().blocks(), [1, 40]);
    let message = |from, to| Span::new(from, to).unwrap_err().to_string();
    assert!(message(-3.0, 5.0).contains("exchange them"));
    for age in [f64::NAN, f64::INFINITY, 20_001.0] {
        assert!(message(age, 0.0).contains("within 20000 kyr"), "{age}");
    }
}

/// Counts calls.
struct Counter(usize, f64);

impl Progress for Counter {
    fn passed(&mut self, years: f64, of_years: f64) {
        self.0 += 1;
        self.1 = years / of_years;
    }
}

#[test]
fn regress_rows_do_not_depend_on_the_span() {
    let constants = constants();
    let rows = |from, to| {
        let mut counter = Counter(0, 0.0);
        let span = Span::new(from, to).unwrap();
        let integrated = integrate(&constants, span, &mut counter).unwrap();
        assert!(counter.0 > 50 && (counter.1 - 1.0).abs() < 1e-12);
        let rows: Vec<_> = integrated.table.rows().collect();
        rows
    };
    let long = rows(3.0, -4.0);
    for (from, to, count) in [(2.0, -1.0, 4), (3.0, 2.0, 2), (-2.0, -4.0, 3)] {
        let short = rows(from, to);
        assert_eq!(short.len(), count);
        for row in short {
            assert!(long.contains(&row), "{from} {to}: {row:?}");
        }
    }
}

#[test]
fn regress_constants_without_meaning_are_refused_together() {
    let mut constants = constants();
    constants.tide.scale = f64::NAN;
    constants.planet.swap(3, 4);
    constants.planet[7].velocity_au_d[0] = 1.0;
    let errors = constants.check().unwrap_err();
    let keys: Vec<_> = errors.iter().map(|e| e.key.as_str()).collect();
    let expected = [
        "tide.scale",
        "planet[4].position_au",
        "planet[7].velocity_au_d",
    ];
    assert_eq!(keys, expected);
}
