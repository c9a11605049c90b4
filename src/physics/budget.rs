//! The ledger: nothing may appear or vanish.
//!
//! Each year every component posts one [`Account`] per conserved quantity: what it stores now,
//! what came from outside the planet, and what came from other components, item by item.
//! Conservation means, for each component,
//! stored(now) - stored(before) = from_outside + from_components,
//! and for the planet, with what is on its way between components (told in one year and handed
//! over in the next),
//! sum stored + in transit = start + sum from_outside.
//! Sums over the years are compensated, so that the residual shows the model's rounding and not
//! the ledger's.

use crate::numerics::sum::CompensatedSum;

/// A conserved quantity.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Quantity {
    /// Heat, J.
    Energy,
    /// Water, kg.
    Water,
    /// Carbon, kg.
    Carbon,
}

/// A named flow into a component over one seasonal year (negative when out of it), in units of
/// the quantity.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Flow {
    /// What flows, in words.
    pub name: &'static str,
    /// How much in the year, without rounding: in a steady climate every year rounds alike, and
    /// a thousand equal roundings would show as a leak.
    pub amount: CompensatedSum,
}

/// One component's account of one quantity for one seasonal year.
#[derive(Clone, Debug, PartialEq)]
pub struct Account {
    /// The component.
    pub component: &'static str,
    /// The quantity.
    pub quantity: Quantity,
    /// Stored at the end of the year. A component that runs M years in one seasonal year counts
    /// its store divided by M: that is the quantity conserved then.
    pub stored: CompensatedSum,
    /// Flows from outside the planet (space).
    pub from_outside: Vec<Flow>,
    /// Flows from other components, on the same footing as `stored`.
    pub from_components: Vec<Flow>,
}

/// Running balance of one quantity over the planet.
#[derive(Clone, Debug, PartialEq)]
pub struct Ledger {
    quantity: Quantity,
    start: Option<CompensatedSum>,
    outside: CompensatedSum,
    throughput: CompensatedSum,
    held: CompensatedSum,
}

impl Ledger {
    /// An empty ledger; the first posting sets the start.
    pub fn new(quantity: Quantity) -> Self {
        Self {
            quantity,
            start: None,
            outside: CompensatedSum::default(),
            throughput: CompensatedSum::default(),
            held: CompensatedSum::default(),
        }
    }

    /// Books one year: the accounts of all components and what is in transit between them.
    pub fn post(&mut self, accounts: &[Account], in_transit: CompensatedSum) {
        let mine = || accounts.iter().filter(|a| a.quantity == self.quantity);
        let mut held = in_transit;
        mine().for_each(|account| held.add_sum(account.stored));
        if self.start.is_none() {
            self.start = Some(held);
        } else {
            let flows: Vec<CompensatedSum> = mine()
                .flat_map(|a| a.from_outside.iter().map(|f| f.amount))
                .collect();
            for flow in &flows {
                self.outside.add_sum(*flow);
            }
            self.throughput
                .add(flows.iter().map(|f| f.value().max(0.0)).sum());
        }
        self.held = held;
    }

    /// What the planet holds beyond what it held at the start and received since.
    pub fn residual(&self) -> f64 {
        let mut sum = self.held;
        sum.add_sum(self.start.unwrap_or(self.held).negated());
        sum.add_sum(self.outside.negated());
        sum.value()
    }

    /// Change of what the planet holds since the start.
    pub fn net_change(&self) -> f64 {
        self.held.value() - self.start.unwrap_or(self.held).value()
    }

    /// Everything that came in since the start.
    pub fn throughput(&self) -> f64 {
        self.throughput.value()
    }

    /// Residual over throughput; zero before the second posting.
    pub fn relative_residual(&self) -> f64 {
        let through = self.throughput();
        if through > 0.0 {
            self.residual() / through
        } else {
            0.0
        }
    }

    /// The ledger as numbers, for restart files.
    pub fn save(&self) -> Vec<f64> {
        let start = self.start.map_or([f64::NAN; 2], |s| s.parts());
        let [a, b] = self.outside.parts();
        let [c, d] = self.throughput.parts();
        let [e, f] = self.held.parts();
        vec![start[0], start[1], a, b, c, d, e, f]
    }

    /// Rebuilds a ledger from [`Ledger::save`]; `None` when the length does not fit.
    pub fn restored(quantity: Quantity, state: &[f64]) -> Option<Self> {
        let &[s0, s1, a, b, c, d, e, f] = state else {
            return None;
        };
        Some(Self {
            quantity,
            start: (!s0.is_nan()).then(|| CompensatedSum::from_parts([s0, s1])),
            outside: CompensatedSum::from_parts([a, b]),
            throughput: CompensatedSum::from_parts([c, d]),
            held: CompensatedSum::from_parts([e, f]),
        })
    }
}
