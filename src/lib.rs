//! Screens descriptions of hypothesised organisms against published budgets and scaling laws.
//!
//! The modules stand in the order in which data flows; a module uses only those above it.
//!
//! ```text
//! candidate.yaml ──┐
//!                  ├─ read ─ resolve ─ sample ─ evaluate ─ judge ─ report
//! catalogs/**.yaml ┘         (plan)    (blocks)  (margins)  (verdicts)
//! ```
//!
//! Everything that is science lives in `catalogs/` as data; everything here is machinery that knows no biology.

pub mod math;
pub mod text;
pub mod quantity;
pub mod formula;
pub mod catalog;
pub mod candidate;
pub mod plan;
pub mod run;
pub mod judge;
pub mod study;
pub mod report;
pub mod cli;
