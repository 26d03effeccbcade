//! catalog
