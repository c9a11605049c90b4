//! Checks of the model against numbers from outside: published tables, closed forms, observations.
//!
//! One folder for each case, with its data, its tests and a README that says which equation is
//! checked against what, how far the source can be trusted, and why the tolerance is what it is.
//! Marks: R read at the source, M from memory, C computed from a published closed form with a
//! general library.

#[cfg(test)]
mod csv;
#[cfg(test)]
#[path = "energy_balance/balance.rs"]
mod energy_balance_balance;
#[cfg(test)]
#[path = "energy_balance/heat.rs"]
mod energy_balance_heat;
#[cfg(test)]
#[path = "energy_balance/ice_line.rs"]
mod energy_balance_ice_line;
#[cfg(test)]
#[path = "energy_balance/melting.rs"]
mod energy_balance_melting;
#[cfg(test)]
#[path = "energy_balance/relaxation.rs"]
mod energy_balance_relaxation;
#[cfg(test)]
#[path = "energy_balance/season.rs"]
mod energy_balance_season;
#[cfg(test)]
#[path = "energy_balance/set_up.rs"]
mod energy_balance_set_up;
#[cfg(test)]
#[path = "energy_balance/steady.rs"]
mod energy_balance_steady;
#[cfg(test)]
#[path = "energy_balance/step_error.rs"]
mod energy_balance_step_error;
#[cfg(test)]
#[path = "energy_balance/time_order.rs"]
mod energy_balance_time_order;
#[cfg(test)]
#[path = "energy_balance/two_surfaces.rs"]
mod energy_balance_two_surfaces;
#[cfg(test)]
#[path = "insolation/closed_forms.rs"]
mod insolation_closed_forms;
#[cfg(test)]
#[path = "insolation/case.rs"]
mod insolation_tables;
#[cfg(test)]
#[path = "orbit/case.rs"]
mod orbit;
#[cfg(test)]
#[path = "orbit/frequencies.rs"]
mod orbit_frequencies;
#[cfg(test)]
#[path = "orbit/integrated.rs"]
mod orbit_integrated;
#[cfg(test)]
#[path = "present_day/case.rs"]
mod present_day;
#[cfg(test)]
#[path = "present_day/climate.rs"]
mod present_day_climate;
