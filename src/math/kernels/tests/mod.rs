//! Kernels against the library `libm`, against tables, and columns against single values.

mod arithmetic;
mod columns;
mod elementary;
mod normal;

use crate::math::streams::Stream;

/// Uniform numbers between `low` and `high`.
fn uniform(name: &str, low: f64, high: f64) -> Vec<f64> {
    let mut values = vec![0.0; 50_000];
    Stream::new(1, name).fill_open_unit(0, &mut values);
    values.iter().map(|u| low + (high - low) * u).collect()
}

/// Numbers whose logarithm is uniform between the powers of ten `low` and `high`.
fn decades(name: &str, low: f64, high: f64) -> Vec<f64> {
    uniform(name, low, high).into_iter().map(|decade| libm::pow(10.0, decade)).collect()
}

fn same(a: f64, b: f64) -> bool {
    a.to_bits() == b.to_bits() || a.is_nan() && b.is_nan()
}

/// Values at which functions change their behaviour.
const SPECIAL: [f64; 24] = [
    f64::NAN,
    f64::INFINITY,
    f64::NEG_INFINITY,
    0.0,
    -0.0,
    1.0,
    -1.0,
    0.5,
    -0.5,
    2.0,
    -3.0,
    1e-320,
    -1e-320,
    f64::MIN_POSITIVE,
    1e-200,
    -1e-17,
    1e300,
    f64::MAX,
    f64::MIN,
    709.8,
    -745.2,
    -1e9,
    1e9,
    4.0,
];
