//! Numbers that know their dimension: dimensions, units, distributions, how they are written and shown.

mod cursor;
mod digits;
pub mod dimension;
pub mod distribution;
pub mod shown;
pub mod unit;
pub mod written;

pub use dimension::{Dimension, Exponent};
pub use distribution::{Bounds, Distribution, FreeRange};
pub use unit::Unit;
