//! What the numbers of a run say. Works on series; needs no model.

pub mod regression;
