//! Numbers that know their dimension: dimensions, units, distributions, how they are written and shown.

pub mod dimension;
pub mod distribution;
pub mod shown;
pub mod unit;
pub mod written;

pub use dimension::{Dimension, Exponent};
pub use distribution::{Bounds, Distribution};
pub use unit::Unit;
