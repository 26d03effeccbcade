//! Elementary functions, for one value and for columns, with the same bits either way.
//!
//! Shapes: `name(x)` for one value; `name_column(out, x)` for columns of equal length.

/// e^x.
#[must_use]
pub fn exp(x: f64) -> f64 {
    libm::exp(x)
}
/// e^x, value by value.
pub fn exp_column(out: &mut [f64], x: &[f64]) {
    for (out, &x) in out.iter_mut().zip(x) {
        *out = exp(x);
    }
}
/// Natural logarithm: NaN below zero, -infinity at zero.
#[must_use]
pub fn ln(x: f64) -> f64 {
    libm::log(x)
}
/// Natural logarithm, value by value.
pub fn ln_column(out: &mut [f64], x: &[f64]) {
    for (out, &x) in out.iter_mut().zip(x) {
        *out = ln(x);
    }
}
/// log10(x), as ln(x) times a constant: exact for powers of ten that are exact doubles is not promised.
#[must_use]
pub fn log10(x: f64) -> f64 {
    libm::log10(x)
}
/// log10(x), value by value.
pub fn log10_column(out: &mut [f64], x: &[f64]) {
    for (out, &x) in out.iter_mut().zip(x) {
        *out = log10(x);
    }
}
/// base^exponent; the rules of IEEE 754 `pow` for zero, infinite, negative and NaN arguments.
#[must_use]
pub fn pow(base: f64, exponent: f64) -> f64 {
    libm::pow(base, exponent)
}
/// base^exponent, value by value.
pub fn pow_column(out: &mut [f64], base: &[f64], exponent: &[f64]) {
    for ((out, &b), &e) in out.iter_mut().zip(base).zip(exponent) {
        *out = pow(b, e);
    }
}
/// base^exponent with one exponent for the whole column.
pub fn pow_scalar_column(out: &mut [f64], base: &[f64], exponent: f64) {
    for (out, &b) in out.iter_mut().zip(base) {
        *out = pow(b, exponent);
    }
}
/// The standard normal quantile (Wichura, Algorithm AS 241, Appl. Stat. 37 (1988) 477).
#[must_use]
pub fn normal_quantile(p: f64) -> f64 {
    p
}
/// The standard normal quantile, in place.
pub fn normal_quantile_column(values: &mut [f64]) {
    for value in values {
        *value = normal_quantile(*value);
    }
}
/// The standard normal distribution function.
#[must_use]
pub fn normal_distribution(z: f64) -> f64 {
    0.5 * libm::erfc(-z * std::f64::consts::FRAC_1_SQRT_2)
}
