//! v
mod energy_balance { pub mod set_up; mod case; }
