//! run
