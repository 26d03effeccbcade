//! Numerics: elementary functions with the same bits on every machine, random streams, order statistics.
//!
//! Plain IEEE operations only: nothing fused, nothing from the platform's mathematical library.

pub mod brackets;
pub mod kernels;
pub mod quantiles;
pub mod streams;
