//! The parts of the climate: each a [`Component`] that knows its own equations and nothing of
//! the others.
//!
//! Components meet only in [`exchange::Exchange`], in annual means, and book what they conserve
//! in [`budget::Ledger`].

pub mod budget;
pub mod energy_balance;
pub mod equatorial_pacific;
pub mod exchange;
#[cfg(test)]
mod fixtures;
pub mod ocean_column;
pub mod rain_belt;
pub mod saturation;
pub mod surface;

use crate::forcing::YearForcing;
use crate::grid::calendar::MonthWeights;
use crate::numerics::shown::Shown;
use crate::series::Variable;
use budget::{Account, Quantity};
use exchange::Exchange;
use serde::de::DeserializeOwned;
use serde::{Deserialize, Serialize};

/// A parameter outside the range in which the equations hold.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
#[error("{key} = {} is out of range: {limit}", Shown(*value))]
pub struct RangeError {
    /// Key path below the component's table, such as `sea_ice.conductivity_w_m_k`.
    pub key: String,
    /// The value found.
    pub value: f64,
    /// What is allowed, in words.
    pub limit: &'static str,
}

/// Something went wrong while the model ran.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum PhysicsError {
    /// A state left the range of finite numbers.
    #[error("{component}: {variable} is not finite at {place}")]
    NotFinite {
        /// Component that noticed.
        component: &'static str,
        /// Variable that broke.
        variable: &'static str,
        /// Band or level.
        place: String,
    },
    /// A state left the range in which the equations mean something.
    #[error(
        "{component}: {variable} reaches {} at {place}; the equations hold from {low} to {high}",
        Shown(round_if_small(*value))
    )]
    OutOfBounds {
        /// Component that noticed.
        component: &'static str,
        /// Variable concerned.
        variable: &'static str,
        /// Its value.
        value: f64,
        /// Lower limit.
        low: f64,
        /// Upper limit.
        high: f64,
        /// Band or level.
        place: String,
    },
    /// A step is too long for the feedbacks at work.
    #[error("{component}: {steps} steps a year are too few at {place}: melting outruns a step")]
    StepTooLong {
        /// Component that noticed.
        component: &'static str,
        /// Steps in a year.
        steps: usize,
        /// Where.
        place: String,
    },
    /// A restart state does not fit this component.
    #[error(
        "{component}: the restart state has {found} numbers, this configuration needs {needed}"
    )]
    RestartLength {
        /// Component concerned.
        component: &'static str,
        /// Numbers found.
        found: usize,
        /// Numbers needed.
        needed: usize,
    },
}

/// A number to one decimal, where that is short.
fn round_if_small(value: f64) -> f64 {
    if value.abs() < 1e6 {
        (value * 10.0).round() / 10.0
    } else {
        value
    }
}

/// What every component is built on.
#[derive(Clone, Debug, PartialEq)]
pub struct Setting {
    /// The planet's surface in bands.
    pub surface: exchange::Surface,
    /// Weights of the seasonal steps in the months.
    pub months: MonthWeights,
}

impl Setting {
    /// Seasonal steps in a year.
    pub fn steps_per_year(&self) -> usize {
        self.months.steps()
    }
}

/// A component that can be built from its table in the configuration.
pub trait Build: Component + Sized + 'static {
    /// The table.
    type Params: Clone + PartialEq + std::fmt::Debug + Serialize + DeserializeOwned;

    /// Checks every parameter that can be checked without a grid.
    ///
    /// # Errors
    /// Every parameter out of range, with keys below the component's own table.
    fn check(params: &Self::Params) -> Result<(), Vec<RangeError>>;

    /// Builds the component and writes into `exchange` what the others need in the first year.
    ///
    /// # Errors
    /// Every parameter out of range, with keys below the component's own table.
    fn build(
        params: &Self::Params,
        setting: &Setting,
        exchange: &mut Exchange,
    ) -> Result<Self, Vec<RangeError>>;
}

/// Declares the components: their table in the configuration, and the order in which they are
/// advanced within a year.
macro_rules! components {
    ($($(#[$doc:meta])* $name:ident: $type:ty),* $(,)?) => {
        /// The tables below `physics` in a configuration; a component without one is left out.
        #[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
        #[serde(deny_unknown_fields)]
        pub struct PhysicsSpec {
            $($(#[$doc])* pub $name: Option<<$type as Build>::Params>),*
        }

        impl PhysicsSpec {
            /// Checks every table as far as it can be without a grid.
            ///
            /// # Errors
            /// Every parameter out of range in any of them, keys starting at `physics`.
            pub fn check(&self) -> Result<(), Vec<RangeError>> {
                let mut violations = Vec::new();
                $(if let Some(Err(found)) = self.$name.as_ref().map(<$type>::check) {
                    violations.extend(below(stringify!($name), found));
                })*
                if violations.is_empty() { Ok(()) } else { Err(violations) }
            }

            /// Builds all components that have a table, in the order of the list.
            ///
            /// # Errors
            /// Every parameter out of range in any of them, keys starting at `physics`.
            pub fn build(
                &self, setting: &Setting, exchange: &mut Exchange,
            ) -> Result<Vec<Box<dyn Component>>, Vec<RangeError>> {
                let mut built: Vec<Box<dyn Component>> = Vec::new();
                let mut violations = Vec::new();
                $(if let Some(params) = &self.$name {
                    match <$type>::build(params, setting, exchange) {
                        Ok(component) => built.push(Box::new(component)),
                        Err(found) => violations.extend(below(stringify!($name), found)),
                    }
                })*
                if violations.is_empty() { Ok(built) } else { Err(violations) }
            }
        }
    };
}

/// Puts the keys of violations below the table of their component.
fn below(component: &str, violations: Vec<RangeError>) -> impl Iterator<Item = RangeError> {
    violations.into_iter().map(move |mut violation| {
        violation.key = format!("physics.{component}.{}", violation.key);
        violation
    })
}

components! {
    /// Air, land, ocean mixed layer and sea ice over the seasons.
    energy_balance: energy_balance::EnergyBalance,
    /// Tropical ocean column.
    ocean_column: ocean_column::OceanColumn,
    /// West and east of the equatorial Pacific, and coastal upwelling.
    equatorial_pacific: equatorial_pacific::EquatorialPacific,
    /// Drive of the tropical rain belt.
    rain_belt: rain_belt::RainBelt,
}

/// One part of the climate, advanced one seasonal year at a time.
pub trait Component: Send {
    /// Name, as in the configuration and in the files.
    fn name(&self) -> &'static str;

    /// Advances one seasonal year. Reads what the others left in `exchange`, writes its own
    /// fields there.
    ///
    /// # Errors
    /// When the state is no longer finite; the state is then not to be used.
    fn advance(
        &mut self,
        forcing: &YearForcing<'_>,
        exchange: &mut Exchange,
    ) -> Result<(), PhysicsError>;

    /// The spin-up is over and the run begins. Most components need not know.
    fn begin_run(&mut self) {}

    /// What this component conserves; one [`Account`] is expected for each.
    fn conserves(&self) -> &'static [Quantity];

    /// The accounts of the year just advanced, one for each quantity in [`Component::conserves`].
    fn accounts(&self) -> Vec<Account>;

    /// Variables this component contributes to a record.
    fn variables(&self) -> Vec<Variable>;

    /// Appends this year's values of those variables, in the same order, row-major in their axes.
    fn record(&self, values: &mut Vec<f64>);

    /// Everything needed to go on bit for bit.
    fn save(&self) -> Vec<f64>;

    /// What one unit of each number of [`Component::save`] counts when two states are compared,
    /// K; 0 for numbers that follow from others or are only carried along.
    fn weights(&self) -> Vec<f64>;

    /// Restores what [`Component::save`] gave.
    ///
    /// # Errors
    /// When the length does not fit.
    fn restore(&mut self, state: &[f64]) -> Result<(), PhysicsError>;
}

/// Collects range violations so that all are reported at once.
#[derive(Debug, Default)]
pub struct Ranges {
    violations: Vec<RangeError>,
}

impl Ranges {
    /// Notes a violation unless `allowed` holds. NaN never holds.
    pub fn require(&mut self, key: &str, value: f64, allowed: bool, limit: &'static str) {
        if !allowed {
            self.violations.push(RangeError {
                key: key.to_owned(),
                value,
                limit,
            });
        }
    }

    /// Requires a positive finite number.
    pub fn positive(&mut self, key: &str, value: f64) {
        self.require(
            key,
            value,
            value > 0.0 && value.is_finite(),
            "must be positive",
        );
    }

    /// Requires zero or a positive finite number.
    pub fn not_negative(&mut self, key: &str, value: f64) {
        self.require(
            key,
            value,
            value >= 0.0 && value.is_finite(),
            "must not be negative",
        );
    }

    /// Requires a number from 0 to 1.
    pub fn fraction(&mut self, key: &str, value: f64) {
        self.require(
            key,
            value,
            (0.0..=1.0).contains(&value),
            "must lie between 0 and 1",
        );
    }

    /// Requires a finite number.
    pub fn finite(&mut self, key: &str, value: f64) {
        self.require(key, value, value.is_finite(), "must be finite");
    }

    /// All violations, or none.
    ///
    /// # Errors
    /// When at least one requirement did not hold.
    pub fn finish(self) -> Result<(), Vec<RangeError>> {
        if self.violations.is_empty() {
            Ok(())
        } else {
            Err(self.violations)
        }
    }
}

/// Smooth step from 0 to 1 around `centre`: (1 + tanh((y - centre) / width)) / 2.
pub fn smooth_step(y: f64, centre: f64, width: f64) -> f64 {
    0.5 * (1.0 + ((y - centre) / width).tanh())
}
