//! The command line of hypobiont; no command is there yet.

fn main() {}
