//! Integration tests: one binary. Each file is a subject; `run` starts the program as a user would.

// Helpers may unwrap like the tests that they serve.
#[cfg(test)]
mod run;
#[cfg(test)]
mod snapshot;

#[cfg(test)]
mod cells;
#[cfg(test)]
mod engine;
#[cfg(test)]
mod golden;
#[cfg(test)]
mod hostile;
#[cfg(test)]
mod layering;
#[cfg(test)]
mod readme;
#[cfg(test)]
mod report;
#[cfg(test)]
mod reproducible;
#[cfg(test)]
mod standards;
#[cfg(test)]
mod wrong_input;
