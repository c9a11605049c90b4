//! Components with a planted fault.

use orbicline::forcing::YearForcing;
use orbicline::physics::budget::{Account, Quantity};
use orbicline::physics::exchange::Exchange;
use orbicline::physics::{Component, PhysicsError};
use orbicline::series::Variable;

/// What is wrong with a component.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Fault {
    None,
    DropsFlowFromOutside,
    DropsFlowFromComponents,
    LeaksATrillionth,
    BooksNothing,
    BooksUndeclared,
    BooksForAnother,
    RecordsLess,
    RecordsMore,
    RepeatsName,
    TakesNameOfModel,
    NoUnits,
    NoWords,
    ForgetsState,
    TakesAnyState,
}

impl Fault {
    pub(crate) const PLANTED: [Self; 14] = [
        Self::DropsFlowFromOutside,
        Self::DropsFlowFromComponents,
        Self::LeaksATrillionth,
        Self::BooksNothing,
        Self::BooksUndeclared,
        Self::BooksForAnother,
        Self::RecordsLess,
        Self::RecordsMore,
        Self::RepeatsName,
        Self::TakesNameOfModel,
        Self::NoUnits,
        Self::NoWords,
        Self::ForgetsState,
        Self::TakesAnyState,
    ];

    /// Part of the message that must come, and of no other.
    pub(crate) fn message(self) -> &'static str {
        match self {
            Self::None => "nothing",
            Self::DropsFlowFromOutside | Self::DropsFlowFromComponents | Self::LeaksATrillionth => {
                "the store changes by"
            }
            Self::BooksNothing | Self::BooksUndeclared => "books [",
            Self::BooksForAnother => "account of",
            Self::RecordsLess | Self::RecordsMore => "values, declares",
            Self::RepeatsName | Self::TakesNameOfModel => "the name is taken",
            Self::NoUnits => "no units",
            Self::NoWords => "no long name",
            Self::ForgetsState => "the state comes out changed",
            Self::TakesAnyState => "a state of another size",
        }
    }
}

/// A component and its fault.
pub(crate) struct Spoiled {
    inner: Box<dyn Component>,
    fault: Fault,
    years: f64,
}

impl Spoiled {
    pub(crate) fn all(
        components: Vec<Box<dyn Component>>,
        fault: Fault,
    ) -> Vec<Box<dyn Component>> {
        if fault == Fault::None {
            return components;
        }
        let spoil = |inner| {
            Box::new(Self {
                inner,
                fault,
                years: 0.0,
            }) as Box<dyn Component>
        };
        components.into_iter().map(spoil).collect()
    }

    fn spoil_account(&self, account: &mut Account) {
        match self.fault {
            Fault::DropsFlowFromOutside => drop(account.from_outside.pop()),
            Fault::DropsFlowFromComponents => drop(account.from_components.pop()),
            Fault::LeaksATrillionth => {
                let flows = super::accounts::flows(account);
                let moved: f64 = flows.map(|f| f.amount.value().abs()).sum();
                account.stored.add(1e-12 * moved * self.years);
            }
            Fault::BooksForAnother => account.component = "another",
            _ => {}
        }
    }
}

impl Component for Spoiled {
    fn name(&self) -> &'static str {
        self.inner.name()
    }

    fn advance(
        &mut self,
        forcing: &YearForcing<'_>,
        exchange: &mut Exchange,
    ) -> Result<(), PhysicsError> {
        self.years += 1.0;
        self.inner.advance(forcing, exchange)
    }

    fn conserves(&self) -> &'static [Quantity] {
        self.inner.conserves()
    }

    fn accounts(&self) -> Vec<Account> {
        let mut accounts = self.inner.accounts();
        for account in &mut accounts {
            self.spoil_account(account);
        }
        match (self.fault, accounts.first().cloned()) {
            (Fault::BooksNothing, _) => accounts.clear(),
            (Fault::BooksUndeclared, Some(mut account)) => {
                account.quantity = Quantity::Water;
                accounts.push(account);
            }
            _ => {}
        }
        accounts
    }

    fn variables(&self) -> Vec<Variable> {
        let mut all = self.inner.variables();
        let first = all[0].clone();
        if let Some(last) = all.last_mut() {
            match self.fault {
                Fault::RepeatsName => last.name = first.name,
                Fault::TakesNameOfModel => last.name = "obliquity",
                Fault::NoUnits => last.units = "",
                Fault::NoWords => last.long_name = "",
                _ => {}
            }
        }
        all
    }

    fn record(&self, values: &mut Vec<f64>) {
        self.inner.record(values);
        match self.fault {
            Fault::RecordsLess => drop(values.pop()),
            Fault::RecordsMore => values.push(0.0),
            _ => {}
        }
    }

    fn save(&self) -> Vec<f64> {
        self.inner.save()
    }

    fn weights(&self) -> Vec<f64> {
        self.inner.weights()
    }

    fn restore(&mut self, state: &[f64]) -> Result<(), PhysicsError> {
        match self.fault {
            Fault::ForgetsState => {
                let before = self.inner.save();
                self.inner.restore(state)?;
                self.inner.restore(&before)
            }
            Fault::TakesAnyState => {
                let needed = self.inner.save().len();
                let mut fitted = state.to_vec();
                fitted.resize(needed, 0.0);
                self.inner.restore(&fitted)
            }
            _ => self.inner.restore(state),
        }
    }
}
