//! The balance of one account over years.

use crate::accounts::flows;
use orbicline::physics::budget::Account;

/// Stored at the end, minus stored before, minus the flows of the years between except the one
/// named; over all that flowed in or out.
pub(crate) fn imbalance(years: &[&Account], dropped: Option<&str>) -> f64 {
    let [before, after @ ..] = years else {
        return 0.0;
    };
    let mut left = before.stored.negated();
    let mut moved = 0.0;
    for account in after {
        for flow in flows(account) {
            moved += flow.amount.value().abs();
            if dropped != Some(flow.name) {
                left.add_sum(flow.amount.negated());
            }
        }
    }
    left.add_sum(after.last().unwrap_or(before).stored);
    left.value() / moved
}
