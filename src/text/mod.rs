//! Text and how to point at it: sources, problems reported all at once, YAML read behind a guard.

pub mod node;
pub mod problems;
pub mod source;
pub mod yaml;

pub use node::{Fields, Kind, Node, Scalar};
pub use problems::{Fault, Problem, Problems, nearest};
pub use source::{Place, Source, Span};
