//! tmp
mod error;
pub mod netcdf4;
pub use error::{OutputError, Result};
