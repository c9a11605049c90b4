//! The coupled model: the only place that loops over time.
//!
//! A seasonal year runs the components in the order of their list; each reads what the others
//! left in the exchange and writes its own. Slow components (the ocean column) may advance M
//! years in one seasonal year; the forcing then moves on by M years as well. M = 1 is exact and
//! the default.

pub mod clock;
pub mod observer;
pub mod records;
pub mod steady;

use crate::forcing::drive::{Drive, DriveError};
use crate::numerics::sum::CompensatedSum;
use crate::physics::budget::{Ledger, Quantity};
use crate::physics::exchange::Exchange;
use crate::physics::{Component, PhysicsError};
use crate::units::YEAR_SECONDS;
use clock::{Plan, SpinUp};
use observer::{Observer, Restart};
use records::Records;

/// A run that could not go on. What was recorded before stays valid.
#[derive(Debug, thiserror::Error)]
pub enum RunError<E: std::error::Error + 'static> {
    /// Orbit or carbon dioxide do not cover the run.
    #[error(transparent)]
    Drive(#[from] DriveError),
    /// The physics broke down.
    #[error(
        "at {age_kyr:.3} kyr before 1950 ({}): {source}; look first at the change that led here and at grid.steps_per_year",
        when(*year)
    )]
    Physics {
        /// Age, kyr before 1950.
        age_kyr: f64,
        /// Years since the start of the run; none while the forcing is held (spin-up).
        year: Option<f64>,
        /// What broke.
        source: PhysicsError,
    },
    /// A saved state does not fit this model.
    #[error("the saved state does not fit: {what} is missing or has another size")]
    Restart {
        /// Part concerned.
        what: String,
    },
    /// There is no repeating cycle, or it was not found.
    #[error(transparent)]
    NotSteady(#[from] steady::NotSteady),
    /// The observer (file) failed.
    #[error(transparent)]
    Observer(E),
}

/// The coupled climate.
pub struct Model {
    components: Vec<Box<dyn Component>>,
    exchange: Exchange,
    drive: Drive,
    ledger: Ledger,
}

impl Model {
    /// Couples components that were built on this exchange.
    pub fn new(components: Vec<Box<dyn Component>>, exchange: Exchange, drive: Drive) -> Self {
        Self {
            components,
            exchange,
            drive,
            ledger: Ledger::new(Quantity::Energy),
        }
    }

    /// The components, in the order in which they are advanced.
    pub fn components(&self) -> &[Box<dyn Component>] {
        &self.components
    }

    /// What forces it.
    pub fn drive(&self) -> &Drive {
        &self.drive
    }

    /// Interface fields of the year just run.
    pub fn exchange(&self) -> &Exchange {
        &self.exchange
    }

    /// The heat ledger since the last [`Model::open_ledger`].
    pub fn ledger(&self) -> &Ledger {
        &self.ledger
    }

    /// Starts the heat ledger anew with the next year.
    pub fn open_ledger(&mut self) {
        self.ledger = Ledger::new(Quantity::Energy);
    }

    /// Runs one seasonal year with the forcing held at an age.
    ///
    /// # Errors
    /// When the forcing does not reach there or the physics breaks down.
    pub fn held_year<E: std::error::Error>(
        &mut self,
        age_kyr: f64,
        slow_years: f64,
    ) -> Result<(), RunError<E>> {
        let forcing = self.drive.held(age_kyr, slow_years)?;
        advance(
            &mut self.components,
            &mut self.exchange,
            &mut self.ledger,
            &forcing,
        )
        .map_err(|source| RunError::Physics {
            age_kyr,
            year: None,
            source,
        })
    }

    /// Brings the model near balance at the age where a run starts.
    ///
    /// # Errors
    /// When the forcing does not reach there, the physics breaks down, or the observer stops it.
    pub fn spin_up<O: Observer>(
        &mut self,
        age_kyr: f64,
        spin_up: SpinUp,
        observer: &mut O,
    ) -> Result<(), RunError<O::Error>> {
        let (fast, all) = (spin_up.seasonal_yr, spin_up.years());
        for year in 0..all {
            // Years with nothing accelerated let what was accelerated settle.
            let slow_years = if year < fast {
                spin_up.slow_years_per_seasonal_year
            } else {
                1.0
            };
            self.held_year(age_kyr, slow_years)?;
            let seen = observer.spun_up(year + 1, all);
            seen.map_err(RunError::Observer)?;
        }
        for component in &mut self.components {
            component.begin_run();
        }
        Ok(())
    }

    /// Runs a plan, handing every record and the state behind it to the observer.
    ///
    /// # Errors
    /// When the forcing does not cover the plan, the physics breaks down, or the observer fails.
    pub fn run<O: Observer>(
        &mut self,
        plan: &Plan,
        observer: &mut O,
    ) -> Result<(), RunError<O::Error>> {
        self.open_ledger();
        self.run_from(plan, 0, observer)
    }

    /// Goes on with a plan of which `done` seasonal years have been run, up to the end of a record,
    /// from the state after them; the ledger stays open.
    ///
    /// # Errors
    /// As [`Model::run`].
    pub fn run_from<O: Observer>(
        &mut self,
        plan: &Plan,
        done: u64,
        observer: &mut O,
    ) -> Result<(), RunError<O::Error>> {
        let mut records = Records::new(&self.components);
        for year in done..plan.seasonal_years() {
            let passed = plan.middle_yr(year);
            let forcing = self
                .drive
                .year(plan.start_kyr(), passed, plan.slow_years())?;
            let age_kyr = forcing.age_kyr;
            advance(
                &mut self.components,
                &mut self.exchange,
                &mut self.ledger,
                &forcing,
            )
            .map_err(|source| RunError::Physics {
                age_kyr,
                year: Some(passed),
                source,
            })?;
            records.add(&self.components);
            if plan.record_ends(year) {
                let record = records.close(plan, year, &self.drive, &self.ledger)?;
                observer
                    .record(&record, &|| self.restart())
                    .map_err(RunError::Observer)?;
            }
            observer
                .passed(plan.end_yr(year))
                .map_err(RunError::Observer)?;
        }
        Ok(())
    }

    /// Everything needed to go on bit for bit; components that keep nothing have no part.
    pub fn restart(&self) -> Restart {
        let parts = self
            .components
            .iter()
            .map(|c| (c.name().to_owned(), c.save()));
        let coupling = [
            ("exchange", self.exchange.save()),
            ("ledger", self.ledger.save()),
        ];
        let all = parts.chain(coupling.map(|(name, values)| (name.to_owned(), values)));
        Restart(all.filter(|(_, values)| !values.is_empty()).collect())
    }

    /// Restores what [`Model::restart`] gave into a model of the same configuration.
    ///
    /// # Errors
    /// When a part is missing or has another size.
    pub fn restore<E: std::error::Error>(&mut self, state: &Restart) -> Result<(), RunError<E>> {
        let part = |name: &str| {
            let found = state.0.iter().find(|(n, _)| n == name);
            found.map_or(&[][..], |(_, values)| values.as_slice())
        };
        for component in &mut self.components {
            let name = component.name();
            component.restore(part(name)).map_err(|_| missing(name))?;
        }
        self.exchange
            .restore(part("exchange"))
            .ok_or_else(|| missing("exchange"))?;
        self.ledger =
            Ledger::restored(Quantity::Energy, part("ledger")).ok_or_else(|| missing("ledger"))?;
        Ok(())
    }
}

fn when(year: Option<f64>) -> String {
    year.map_or_else(
        || "spin-up".to_owned(),
        |year| format!("year {year} of the run"),
    )
}

fn missing<E: std::error::Error>(what: &str) -> RunError<E> {
    RunError::Restart {
        what: what.to_owned(),
    }
}

/// One seasonal year of all components, and its entry in the ledger.
fn advance(
    components: &mut [Box<dyn Component>],
    exchange: &mut Exchange,
    ledger: &mut Ledger,
    forcing: &crate::forcing::YearForcing<'_>,
) -> Result<(), PhysicsError> {
    for component in components.iter_mut() {
        component.advance(forcing, exchange)?;
    }
    let accounts: Vec<_> = components.iter().flat_map(|c| c.accounts()).collect();
    // Heat the column was debited this year and the mixed layer receives next year.
    let mut in_transit = CompensatedSum::default();
    exchange
        .column_heat_w
        .iter()
        .for_each(|w| in_transit.add_product(*w, YEAR_SECONDS));
    ledger.post(&accounts, in_transit);
    Ok(())
}
