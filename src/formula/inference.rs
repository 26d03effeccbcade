//! The dimension of every node.

use crate::quantity::Dimension;

/// What names mean where a formula stands.
pub trait Scope {
    /// The dimension of a quantity, parameter or constant.
    fn dimension_of(&self, name: &str) -> Option<Dimension>;
    /// The dimensions of a curve: of its argument and of its value.
    fn curve(&self, name: &str) -> Option<(Dimension, Dimension)>;
    /// All names, for the nearest one in messages.
    fn names(&self) -> Vec<String>;
}
