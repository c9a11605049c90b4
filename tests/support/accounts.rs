//! Accounts of a model and their flows.

use orbicline::model::Model;
use orbicline::physics::budget::{Account, Flow};

/// All accounts of the year just run.
pub(crate) fn accounts(model: &Model) -> Vec<Account> {
    let components = model.components().iter();
    components.flat_map(|c| c.accounts()).collect()
}

/// All flows of an account.
pub(crate) fn flows(account: &Account) -> impl Iterator<Item = &Flow> {
    account.from_outside.iter().chain(&account.from_components)
}
