//! Reads an experiment: TOML files laid over one another, edited from the command line, typed.
//!
//! Numbers live once, in `configs/reference.toml`. An experiment file says `extends` and gives
//! only what differs; `--set a.b=value` changes one key of the result. Every message about a key
//! names the file and line that the key came from. This module knows no physics: which keys exist
//! is said by the type that is read, which values are allowed is checked where the part is built.

mod build;
mod data;
pub mod difference;
pub mod error;
pub mod fault;
mod forcing;
pub mod identity;
pub mod orbit_constants;
mod origin;
pub mod provenance;
pub mod read;
mod repair;
pub mod run;
mod set;
mod typed;

pub use error::{ConfigError, Place};
pub use identity::Identity;
pub use provenance::{InputFile, Provenance};
pub use read::{Tree, read_text};
