#![doc = include_str!("../README.md")]

pub mod config;
pub mod forcing;
pub mod grid;
pub mod model;
pub mod numerics;
pub mod orbit;
#[cfg(feature = "netcdf")]
pub mod output;
pub mod physics;
pub mod series;
pub mod tables;
pub mod units;
