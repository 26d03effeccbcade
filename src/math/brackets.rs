//! Roots inside a bracket.
