//! candidate
