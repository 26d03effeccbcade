//! Parsing, by precedence.
