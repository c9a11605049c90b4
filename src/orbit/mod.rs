//! stub until the branch lands
pub mod elements;
