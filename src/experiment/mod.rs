//! From a configuration to results: what the commands do, without printing.

pub mod background;
pub mod orbit;
pub mod single;
pub mod summary;
