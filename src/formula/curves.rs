//! Interpolating functions of an entry.
