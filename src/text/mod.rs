//! Text and how to point at it: sources, problems reported all at once, YAML read behind a guard.

mod alignment;
mod fields;
pub mod node;
pub mod problems;
mod reading;
mod rendering;
pub mod source;
pub mod yaml;

pub use fields::Fields;
pub use node::{Kind, Node, Scalar};
pub use problems::{Fault, Problem, Problems, nearest};
pub use reading::{MOST_BYTES, neighbour};
pub use rendering::{one_line, shortened, visible};
pub use source::{Place, Source, Span};
