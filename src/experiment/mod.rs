//! From a configuration to results: what the commands do, without printing.

pub mod ages;
mod axes_of_figures;
pub mod background;
mod contents;
pub mod describe;
pub mod destination;
pub mod estimate;
pub mod follow;
pub mod insolation;
pub mod orbit;
pub mod orbit_source;
pub mod orbit_table;
pub mod resume;
pub mod single;
pub mod steady;
pub mod summary;
