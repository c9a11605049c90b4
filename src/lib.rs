#![doc = include_str!("../README.md")]

pub mod numerics;
#[cfg(feature = "netcdf")]
pub mod output;
pub mod series;
pub mod units;
