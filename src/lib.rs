#![doc = include_str!("../README.md")]

pub mod grid;
pub mod numerics;
pub mod orbit;
pub mod series;
pub mod units;
