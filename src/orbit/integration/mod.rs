//! The Earth's orbit and axis over millions of years, from the motion of the planets.
//!
//! What: [`integrate`] moves the Sun and eight planets from J2000.0 into the past and the future,
//! takes the mean orbit of the Earth out of it, lets the axis precess along that orbit, and gives
//! an [`OrbitTable`] with one row for every kyr.
//! Equations: `attraction.rs` (forces), `drift.rs` and `planets.rs` (symplectic map),
//! `smoothing.rs` (mean elements), `spin.rs` (axis and tide). Constants: [`Constants`], read from
//! `configs/orbit_constants.toml`.
//! Units: AU and d for the planets, rad and years for the axis; ages in kyr before 1950 CE, which
//! is 50 years before J2000.0.
//! Numerics: the same bits on every machine: the map uses the four operations and square roots
//! only, the rest takes sine, cosine and arc tangent from the crate `libm`. A longer span does not
//! change the rows of a shorter one. Step error over 5 Myr: e 4e-6, obliquity 1e-4 degrees.
//! What is not known: see [`NOT_KNOWN`].
//! Source: own program after published equations, each named where it is used.

mod attraction;
mod constants;
mod drift;
mod eight;
mod limits;
mod planets;
mod smoothing;
mod spin;

pub use constants::Constants;
pub use limits::ConstantsError;
use planets::{Direction, MeanElements, Planets};
use smoothing::{BLOCK_YR, MARGIN, MeanOrbit};
use spin::{Attitude, Torques};
use thiserror::Error;

use super::solution::orbit_table::{OrbitRow, OrbitTable, READING_MARGIN_KYR};

/// What cannot be known from this solution, for whoever uses it.
pub const NOT_KNOWN: &str = "Not known: the tide of the past. If it was 10 % stronger or weaker than \
    assumed, obliquity and precession shift in time by 0.1 to 0.2 kyr at 2 Myr and by 0.6 to 1 kyr at \
    5 Myr, and obliquity changes by up to 0.2 degrees; eccentricity does not depend on it. Counting on \
    about 1 kyr at 5 Myr is prudent. Checked against a published solution only for the last 1.3 Myr.";

/// Farthest age from 1950 that is offered, kyr; tuned here. Beyond it the planets' chaos leaves
/// nothing of the phases.
pub const FARTHEST_KYR: f64 = 20_000.0;
/// Blocks in one kyr.
const BLOCKS_PER_KYR: usize = 10;
/// The year 1950, years from J2000.0.
const YEAR_1950: f64 = -50.0;

/// Ages that a table shall cover, kyr before 1950.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Span {
    oldest_kyr: i32,
    youngest_kyr: i32,
}

/// Why a span of ages cannot be integrated.
#[derive(Clone, Debug, Error, PartialEq)]
pub enum SpanError {
    /// The ages stand in the wrong order.
    #[error(
        "from {from_kyr} to {to_kyr} kyr: ages are kyr before 1950 (negative after it), and the \
         first must be the older; exchange them"
    )]
    Order {
        /// Older end given.
        from_kyr: f64,
        /// Younger end given.
        to_kyr: f64,
    },
    /// An age is too far, or no number.
    #[error("age {age_kyr} kyr: must lie within {FARTHEST_KYR} kyr of 1950; choose a nearer age")]
    TooFar {
        /// The age given.
        age_kyr: f64,
    },
}

impl Span {
    /// From the older to the younger age, widened to whole kyr.
    ///
    /// # Errors
    /// When the order is wrong, or an age is too far or not finite.
    pub fn new(from_kyr: f64, to_kyr: f64) -> Result<Self, SpanError> {
        for age_kyr in [from_kyr, to_kyr] {
            if age_kyr.is_nan() || age_kyr.abs() > FARTHEST_KYR {
                return Err(SpanError::TooFar { age_kyr });
            }
        }
        if from_kyr < to_kyr {
            return Err(SpanError::Order { from_kyr, to_kyr });
        }
        #[expect(
            clippy::cast_possible_truncation,
            reason = "whole numbers below the farthest age"
        )]
        let whole = |age_kyr: f64| age_kyr as i32;
        Ok(Self {
            oldest_kyr: whole(from_kyr.ceil()) + READING_MARGIN_KYR,
            youngest_kyr: whole(to_kyr.floor()) - READING_MARGIN_KYR,
        })
    }

    /// Blocks before and after J2000.0 whose centres the rows need; at least one each.
    fn blocks(self) -> [usize; 2] {
        let kyr = |whole: i32| usize::try_from(whole.max(0)).unwrap_or(0) * BLOCKS_PER_KYR;
        [kyr(self.oldest_kyr) + 1, kyr(-self.youngest_kyr).max(1)]
    }
}

/// Who follows an integration.
pub trait Progress {
    /// So many years of so many are done.
    fn passed(&mut self, years: f64, of_years: f64);
}

/// Mean plane of the Earth's orbit at an age, against the ecliptic of J2000.0.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct OrbitPlane {
    /// Age, kyr before 1950.
    pub age_kyr: i32,
    /// tan(i/2) cos(Omega), i the inclination, Omega the longitude of the node.
    pub q: f64,
    /// tan(i/2) sin(Omega).
    pub p: f64,
}

/// What came out of an integration.
#[derive(Clone, Debug)]
pub struct Integrated {
    /// The rows.
    pub table: OrbitTable,
    /// Planes of the Earth's orbit at the same ages, youngest first.
    pub planes: Vec<OrbitPlane>,
    /// Largest relative change of the energy of the planets over the run, looked at every century.
    pub energy_error: f64,
}

/// Integrates over a span of ages; constants must have passed [`Constants::check`].
///
/// # Errors
/// All constants that have no meaning, together.
pub fn integrate(
    constants: &Constants,
    span: Span,
    progress: &mut dyn Progress,
) -> Result<Integrated, Vec<ConstantsError>> {
    constants.check()?;
    let needed = span.blocks();
    let total: usize = needed.iter().map(|blocks| blocks + MARGIN).sum();
    let mut watch = Watch {
        progress,
        done: 0,
        total,
        energy_error: 0.0,
    };
    let future = watch.blocks(constants, Direction::Future, needed[1] + MARGIN);
    let past = watch.blocks(constants, Direction::Past, needed[0] + MARGIN);
    let energy_error = watch.energy_error;
    let orbit = MeanOrbit::new(&past, &future);
    let torques = Torques::new(constants);
    let before = torques.follow(&orbit, Direction::Past, needed[0]);
    let after = torques.follow(&orbit, Direction::Future, needed[1]);
    let ages = span.youngest_kyr..=span.oldest_kyr;
    let rows: Vec<_> = ages
        .clone()
        .map(|age| row(&orbit, age, &before, &after))
        .collect();
    Ok(Integrated {
        table: OrbitTable::new(span.youngest_kyr, &rows),
        planes: ages.map(|age| plane(&orbit, age)).collect(),
        energy_error,
    })
}

/// The row of an age, whose time is the centre of a block.
fn row(orbit: &MeanOrbit, age_kyr: i32, before: &[Attitude], after: &[Attitude]) -> OrbitRow {
    let blocks = usize::try_from(age_kyr.abs()).unwrap_or(0) * BLOCKS_PER_KYR;
    let attitude = if age_kyr >= 0 {
        before[blocks]
    } else {
        after[blocks - 1]
    };
    let [k, h, ..] = orbit.at(years(age_kyr));
    OrbitRow {
        k,
        h,
        obliquity_rad: attitude.obliquity_rad,
        precession_rad: attitude.precession_rad,
    }
}

fn plane(orbit: &MeanOrbit, age_kyr: i32) -> OrbitPlane {
    let [_, _, q, p] = orbit.at(years(age_kyr));
    OrbitPlane { age_kyr, q, p }
}

/// Time of an age, years from J2000.0.
fn years(age_kyr: i32) -> f64 {
    YEAR_1950 - 1000.0 * f64::from(age_kyr)
}

/// Blocks of both directions, with progress and energy.
struct Watch<'a> {
    progress: &'a mut dyn Progress,
    done: usize,
    total: usize,
    energy_error: f64,
}

impl Watch<'_> {
    fn blocks(
        &mut self,
        constants: &Constants,
        direction: Direction,
        count: usize,
    ) -> Vec<MeanElements> {
        let mut planets = Planets::new(constants, direction);
        let start = planets.energy();
        let mut blocks = Vec::with_capacity(count);
        for _ in 0..count {
            blocks.push(planets.next_block());
            self.done += 1;
            self.energy_error = self
                .energy_error
                .max((planets.energy() / start - 1.0).abs());
            self.progress
                .passed(self.done as f64 * BLOCK_YR, self.total as f64 * BLOCK_YR);
        }
        blocks
    }
}

#[cfg(test)]
mod tests;
