//! From a configuration to results: what the commands do, without printing.

pub mod background;
mod contents;
pub mod describe;
pub mod estimate;
pub mod follow;
pub mod orbit;
pub mod resume;
pub mod single;
pub mod steady;
pub mod summary;
