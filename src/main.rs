//! The command line of hypobiont: reads the arguments, runs one command, returns its exit status.

use std::process::ExitCode;

fn main() -> ExitCode {
    hypobiont::cli::run().into()
}
