#![doc = include_str!("../README.md")]

pub mod config;
pub mod forcing;
pub mod grid;
pub mod model;
pub mod numerics;
pub mod orbit;
pub mod physics;
pub mod series;
pub mod tables;
pub mod units;
