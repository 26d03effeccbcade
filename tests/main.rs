//! Integration tests: one binary.
