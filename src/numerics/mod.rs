//! General numerical methods, with no physics in them.
//!
//! Everything here works on plain numbers and slices; units are the caller's business.

pub mod anderson;
pub mod dispatch;
pub mod lagrange;
pub mod lanes;
pub mod profile;
pub mod quadrature;
pub mod shown;
pub mod sum;
pub mod tridiagonal;
