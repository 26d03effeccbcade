//! Margins to verdicts, verdicts to an assessment.

mod assess;
pub mod assessment;
mod quantities;
mod verdict;

pub use assess::{Asked, assess, contradictions};
pub use assessment::Assessment;
