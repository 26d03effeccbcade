#![no_main]

#[path = "../../hostile/bodies.rs"]
#[allow(dead_code)] // A target calls one of them.
mod bodies;

libfuzzer_sys::fuzz_target!(|bytes: &[u8]| bodies::quantity(bytes));
