//! Margins to verdicts, verdicts to an assessment.

pub mod assessment;

pub use assessment::Assessment;
