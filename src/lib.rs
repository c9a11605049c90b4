#![doc = include_str!("../README.md")]

pub mod numerics;
pub mod series;
pub mod units;
