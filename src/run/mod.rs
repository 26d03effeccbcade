//! Sample and evaluate: blocks of draws over the program of a plan, in rounds, with free numbers chosen first.
//!
//! Each unknown number has a stream keyed by (seed, its name) and positioned by the draw's number, so the same input and
//! seed give the same bits whatever the number of threads, the size of blocks or the order of entries.

mod case;
mod columns;
mod free;
mod machine;
mod margins;
mod record;
mod rounds;
#[cfg(test)]
mod tests;

pub use case::{Case, Setting};
pub use free::{Decisive, choose};
pub use machine::{BLOCK, streams};
pub use record::Record;
pub use rounds::{CAP, FIRST_ROUND, Outcome, Settings, Statistics, chance_error, interval_ranks, run};
