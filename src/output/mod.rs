//! Run files: HDF5 that opens as NetCDF-4 and follows CF 1.11.
//!
//! [`claim`] takes an output for one run; [`schema`] is the one table of dimensions, coordinates and metadata; [`netcdf4`] makes HDF5
//! conform to the NetCDF-4 format; [`writer`] takes records and keeps a killed run's data in
//! segment files; [`reader`] reads it all back. [`table`] writes tables that are no runs.
//!
//! Sources: HDF5 Dimension Scale specification, NetCDF-4 format specification (NetCDF User's
//! Guide, appendix "File Format Specifications"), CF Conventions 1.11.

pub mod claim;
mod error;
pub mod journal;
mod layout;
pub mod netcdf4;
pub mod plain;
pub mod reader;
pub mod schema;
mod segments;
pub mod size;
pub mod table;
pub mod writer;

pub use claim::{Claim, Overwrite};
pub use error::{OutputError, Result};

/// Records in a full segment.
pub const RECORDS_PER_SEGMENT: u64 = layout::CHUNK as u64;
pub use reader::RunFile;
pub use schema::{AxisValues, Schema};
pub use writer::RunWriter;
