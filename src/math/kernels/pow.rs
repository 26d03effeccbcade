//! Powers.
//!
//! b^y = 2^(y log2 b), the logarithm and its product with y in two parts each, so that the error does not grow with the
//! number of decades: products are exact where both factors are cut to 26 bits (Dekker, Numer. Math. 18 (1971) 224).

use super::exp::{Nearest, exp_rest, scale};
use super::ln::{is_ordinary, reduce, series};
use super::wide::{Attempt, each_or, each_pair_or};

/// log2 e to 26 bits, and the rest.
const LOG2_E_HIGH: f64 = f64::from_bits(0x3ff7_1547_6000_0000);
const LOG2_E_LOW: f64 = 1.925_962_991_126_617_5e-8;

/// base^exponent; the rules of IEEE 754 `pow` for zero, infinite, negative and NaN arguments. Relative error below
/// 3e-16 for |exponent| up to about 4, however many decades the base covers; 2e-14 at worst, for exponents in the
/// thousands.
#[must_use]
pub fn pow(base: f64, exponent: f64) -> f64 {
    let (value, stands) = pow_core(base, exponent);
    if stands { value } else { libm::pow(base, exponent) }
}

/// base^exponent, value by value.
///
/// # Panics
/// When the lengths differ.
pub fn pow_column(out: &mut [f64], base: &[f64], exponent: &[f64]) {
    each_pair_or(
        out,
        base,
        exponent,
        #[inline(always)]
        |b, e| pow_core(b, e),
        libm::pow,
    );
}

/// base^exponent with one exponent for the whole column.
///
/// # Panics
/// When the lengths differ.
pub fn pow_scalar_column(out: &mut [f64], base: &[f64], exponent: f64) {
    each_or(
        out,
        base,
        #[inline(always)]
        |b| pow_core(b, exponent),
        |b| libm::pow(b, exponent),
    );
}

/// For normal bases above zero and normal results.
#[inline(always)]
fn pow_core(base: f64, y: f64) -> Attempt {
    let (e, f) = reduce(base);
    // ln(1 + f) = f - f^2/2 + ..., the first two terms without loss.
    let f_high = cut(f);
    let f_low = f - f_high;
    let square_high = 0.5 * f_high * f_high;
    let square_low = 0.5 * f_low * (f + f_high);
    let first = f_high - square_high;
    let lost = (f_high - first) - square_high;
    let rest = lost + ((f_low - square_low) + series(f, square_high + square_low));
    let ln_high = cut(first + rest);
    let ln_low = (first - ln_high) + rest;
    // log2(1 + f).
    let product = ln_high * LOG2_E_HIGH;
    let product_rest = ln_high * LOG2_E_LOW + ln_low * std::f64::consts::LOG2_E;
    let log_high = cut(product + product_rest);
    let log_low = (product - log_high) + product_rest;
    // y (e + log2(1 + f)) = n + fraction.
    let y_high = cut(y);
    let y_low = y - y_high;
    let log = e + log_high;
    let n = Nearest::to(y * log);
    let fraction = ((y_high * e - n.value) + y_high * log_high) + (y_low * log + y * log_low);
    let r = fraction * std::f64::consts::LN_2;
    (scale(1.0 + (r + exp_rest(r)), n), is_ordinary(base) && (y * log).abs() < 1020.0)
}

/// x cut to 26 bits.
#[inline(always)]
pub(super) fn cut(x: f64) -> f64 {
    f64::from_bits(x.to_bits() & 0xffff_ffff_f800_0000)
}
