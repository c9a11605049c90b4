//! The repeating seasonal cycle under held forcing, ocean column included.
//!
//! What: the state that comes back to itself after a year. The year is a map of the saved state
//! (every level of the formula, the column, the exchange) into itself, with the column advanced
//! 1,000 years in one step; its fixed point does not depend on that number.
//! Equation: Anderson's acceleration of the map ([`crate::numerics::anderson`]); components say
//! what their numbers count in kelvin ([`crate::physics::Component::weights`]).
//! Numerics: never stops on a small change alone, since slow states change little: when the change
//! of a year is below a bound the state is kept, the iteration goes on until the change is thirty
//! times smaller, and the distance between the two states is the error of the first. Only when
//! that is below the tolerance the second is returned, with that distance, over thirty, times a
//! safety of ten, as its error. Corrections of more than 5 K are not taken. After 18 tries
//! without success the tries are discarded and the model runs physically for 10, 20, 40 ... years
//! before the next. The limit in years ends the search with an error; an unconverged state is
//! never returned.
//! Source: safeguards and bounds tuned here.

use super::observer::{Observer, Restart};
use super::{Model, RunError};
use crate::numerics::anderson::Anderson;

/// Years that the column advances in one step of the search.
const COLUMN_YR: f64 = 1000.0;
/// Differences that the acceleration looks back.
const DEPTH: usize = 8;
/// Accelerated years in one try.
const TRIES: u32 = 18;
/// Largest correction that is taken, K.
const LARGEST_CORRECTION_K: f64 = 5.0;
/// How much smaller the change must become to measure the error.
const CLOSER: f64 = 30.0;
/// Safety of the error estimate.
const SAFETY: f64 = 10.0;
/// Share of the tolerance that the change of a year must come below before the error is measured.
const FIRST_BOUND: f64 = 0.1;
/// Physical years before the first try, and after the first that failed.
const PHYSICAL_YR: [u32; 2] = [2, 10];

/// How near, and how long to search.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Search {
    /// Largest error of any temperature, K.
    pub tolerance_k: f64,
    /// Seasonal years after which the search gives up.
    pub most_years: u32,
}

/// A search that cannot be made.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
pub enum SearchError {
    /// The tolerance.
    #[error("a tolerance of {0} K: must lie between 1e-8 (rounding) and 1 K")]
    Tolerance(f64),
    /// The limit in years.
    #[error("{0} years: at least 50 are needed")]
    Years(u32),
}

impl Search {
    /// Checks the numbers.
    ///
    /// # Errors
    /// When one of them is out of range.
    pub fn new(tolerance_k: f64, most_years: u32) -> Result<Self, SearchError> {
        if !(1e-8..=1.0).contains(&tolerance_k) {
            return Err(SearchError::Tolerance(tolerance_k));
        }
        if most_years < 50 {
            return Err(SearchError::Years(most_years));
        }
        Ok(Self {
            tolerance_k,
            most_years,
        })
    }
}

/// What a search found.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Steady {
    /// Seasonal years that were computed.
    pub years: u32,
    /// Change in the last of them, K.
    pub change_k: f64,
    /// Estimated distance from the exact cycle, K.
    pub error_k: f64,
}

/// A search that found nothing.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
#[error(
    "no repeating cycle within {years} seasonal years: the last one still changed the state by \
     {change_k:.1e} K; there may be none (ice that grows for ever, an oscillation), or more \
     years are needed"
)]
pub struct NotSteady {
    /// Seasonal years that were computed.
    pub years: u32,
    /// Change in the last of them, K.
    pub change_k: f64,
}

/// A state of the model as one list of numbers.
struct Packed {
    names: Vec<(String, usize)>,
}

impl Packed {
    /// Parts that say where the model is; the ledger only remembers how it came there.
    fn of(state: &Restart) -> (Self, Vec<f64>) {
        let parts = state.0.iter().filter(|(name, _)| name != "ledger");
        let names = parts.clone().map(|(name, v)| (name.clone(), v.len()));
        let names = names.collect();
        (Self { names }, parts.flat_map(|(_, v)| v.clone()).collect())
    }

    /// The state with these numbers and the ledger of `state`.
    fn unpack(&self, values: &[f64], state: &Restart) -> Restart {
        let mut rest = values;
        let mut parts = Vec::with_capacity(state.0.len());
        for (name, length) in &self.names {
            let (own, others) = rest.split_at((*length).min(rest.len()));
            parts.push((name.clone(), own.to_vec()));
            rest = others;
        }
        parts.extend(state.0.iter().filter(|(name, _)| name == "ledger").cloned());
        Restart(parts)
    }
}

/// A state that repeats, with its error, K.
struct Found {
    state: Vec<f64>,
    error_k: f64,
}

/// One search.
struct Seeker<'a, O> {
    model: &'a mut Model,
    age_kyr: f64,
    observer: &'a mut O,
    layout: Packed,
    ledger: Restart,
    years: u32,
    search: Search,
    change_k: f64,
}

impl<O: Observer> Seeker<'_, O> {
    /// g(x): the state one year after `x`.
    fn year_after(&mut self, x: &[f64]) -> Result<Vec<f64>, RunError<O::Error>> {
        let state = self.layout.unpack(x, &self.ledger);
        self.model.restore(&state)?;
        self.year()
    }

    /// The state one year on.
    fn year(&mut self) -> Result<Vec<f64>, RunError<O::Error>> {
        self.years += 1;
        self.model.held_year(self.age_kyr, COLUMN_YR)?;
        let seen = self.observer.spun_up(self.years, self.search.most_years);
        seen.map_err(RunError::Observer)?;
        Ok(Packed::of(&self.model.restart()).1)
    }

    fn is_over(&self) -> bool {
        self.years >= self.search.most_years
    }

    /// Accelerated years from `x`. The state found, with its error; or none.
    fn attempt(
        &mut self,
        anderson: &mut Anderson,
        mut x: Vec<f64>,
    ) -> Result<Option<Found>, RunError<O::Error>> {
        anderson.forget();
        let mut bound = FIRST_BOUND * self.search.tolerance_k;
        let mut near: Option<Vec<f64>> = None;
        let mut tries = TRIES;
        while tries > 0 && !self.is_over() {
            tries -= 1;
            let g = match self.year_after(&x) {
                Ok(g) => g,
                // A corrected state need not be one that the physics can go on from.
                Err(RunError::Physics { .. }) => return Ok(None),
                Err(other) => return Err(other),
            };
            let change = anderson.distance(&g, &x);
            self.change_k = change;
            if change <= bound {
                if let Some(first) = &near {
                    let apart = anderson.distance(first, &g);
                    if apart <= self.search.tolerance_k {
                        return Ok(Some(Found {
                            state: g,
                            error_k: SAFETY * apart / CLOSER,
                        }));
                    }
                }
                near = Some(g.clone());
                bound = change / CLOSER;
                tries = TRIES;
            }
            let next = anderson.next(&x, &g);
            x = if anderson.distance(&next, &g) <= LARGEST_CORRECTION_K {
                next
            } else {
                anderson.forget();
                g
            };
        }
        Ok(None)
    }
}

impl Model {
    /// Brings the model onto the repeating cycle of the forcing at an age, from where it is. The
    /// observer is told the years.
    ///
    /// # Errors
    /// When there is no such cycle within the limit, the forcing does not reach the age, the
    /// physics breaks down, or the observer stops the search.
    pub fn steady<O: Observer>(
        &mut self,
        age_kyr: f64,
        search: Search,
        observer: &mut O,
    ) -> Result<Steady, RunError<O::Error>> {
        let ledger = self.restart();
        let (layout, _) = Packed::of(&ledger);
        let mut seeker = Seeker {
            layout,
            ledger,
            years: 0,
            change_k: f64::INFINITY,
            model: self,
            age_kyr,
            observer,
            search,
        };
        let mut anderson = Anderson::new(DEPTH, seeker.model.weights());
        let mut physical = PHYSICAL_YR[0];
        loop {
            let mut x = Vec::new();
            for _ in 0..physical.min(search.most_years.saturating_sub(seeker.years)) {
                x = seeker.year()?;
            }
            if !x.is_empty()
                && let Some(Found { state, error_k }) = seeker.attempt(&mut anderson, x.clone())?
            {
                let state = seeker.layout.unpack(&state, &seeker.ledger);
                let (years, change_k) = (seeker.years, seeker.change_k);
                seeker.model.restore(&state)?;
                return Ok(Steady {
                    years,
                    change_k,
                    error_k,
                });
            }
            if seeker.is_over() {
                let (years, change_k) = (seeker.years, seeker.change_k);
                return Err(NotSteady { years, change_k }.into());
            }
            // What the corrections led to is discarded.
            let state = seeker.layout.unpack(&x, &seeker.ledger);
            seeker.model.restore(&state)?;
            physical = if physical < PHYSICAL_YR[1] {
                PHYSICAL_YR[1]
            } else {
                physical.saturating_mul(2)
            };
        }
    }

    /// What one unit of each number of the packed state counts, K.
    fn weights(&self) -> Vec<f64> {
        let of_components = self.components.iter().flat_map(|c| c.weights());
        let rest = self.exchange.save().len();
        of_components
            .chain(std::iter::repeat_n(0.0, rest))
            .collect()
    }
}
