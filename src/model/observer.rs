//! Whoever wants to see what a run produces: a file, a progress bar, a test.

use crate::series::Record;

/// Saved state: named parts of the model as plain numbers.
#[derive(Clone, Debug, PartialEq)]
pub struct Restart(pub Vec<(String, Vec<f64>)>);

/// Receives records while a run goes on.
pub trait Observer {
    /// What can go wrong on this side.
    type Error: std::error::Error + 'static;

    /// A record is complete; `restart` gives the state right after it, when asked.
    ///
    /// # Errors
    /// Whatever stops the run.
    fn record(&mut self, record: &Record, restart: &dyn Fn() -> Restart)
    -> Result<(), Self::Error>;

    /// So many of all seasonal years of the spin-up are done.
    ///
    /// # Errors
    /// Whatever stops the run.
    fn spun_up(&mut self, _years: u32, _of: u32) -> Result<(), Self::Error> {
        Ok(())
    }

    /// So many years of the run have passed.
    ///
    /// # Errors
    /// Whatever stops the run.
    fn passed(&mut self, _years: f64) -> Result<(), Self::Error> {
        Ok(())
    }
}

/// Looks at nothing.
#[derive(Clone, Copy, Debug, Default)]
pub struct Nobody;

impl Observer for Nobody {
    type Error = std::convert::Infallible;

    fn record(&mut self, _: &Record, _: &dyn Fn() -> Restart) -> Result<(), Self::Error> {
        Ok(())
    }
}

/// Keeps all records in memory.
#[derive(Debug, Default)]
pub struct Keep {
    /// The records so far.
    pub records: Vec<Record>,
}

impl Observer for Keep {
    type Error = std::convert::Infallible;

    fn record(&mut self, record: &Record, _: &dyn Fn() -> Restart) -> Result<(), Self::Error> {
        self.records.push(record.clone());
        Ok(())
    }
}
