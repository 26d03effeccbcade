//! A text with a name, and places in it.

use std::sync::Arc;

/// A text and the name it is reported under (a path, `-`, or `catalog:constraints/space.yaml`).
#[derive(Debug, PartialEq, Eq)]
pub struct Source {
    /// The name shown before line and column.
    pub name: String,
    /// The whole text.
    pub text: String,
}

/// A range of bytes in a source; always on character boundaries.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Span {
    /// First byte.
    pub start: usize,
    /// One past the last byte.
    pub end: usize,
}

/// A range of bytes in a known source.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Place {
    /// The text.
    pub source: Arc<Source>,
    /// Where in it.
    pub span: Span,
}
