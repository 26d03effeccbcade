//! Logarithms.
//!
//! x = 2^e (1 + f) with 1 + f between the square roots of 1/2 and 2, exponent and mantissa taken from the bits;
//! ln(1 + f) = f - f^2/2 + s (f^2/2 + R(s^2)) with s = f / (2 + f): the series of the inverse hyperbolic tangent,
//! ln(1 + f) = 2 artanh s = 2 s + s R(s^2), arranged so that the largest term, f, is exact (the arrangement of the
//! freely distributed mathematical library of Sun Microsystems, 1993).

use super::exp::{LN_2_HIGH, LN_2_LOW};
use super::wide::{Attempt, each_or};

/// (2 artanh(s)/s - 2) / s^2, ascending powers of s^2: interpolated at the Chebyshev nodes of
/// 0 <= s^2 <= (3 - sqrt(8))^2 in 60 digits; s^3 times the polynomial is then off by less than 2e-18.
const SERIES: [f64; 7] = [
    0.666_666_666_666_667,
    0.399_999_999_998_995_05,
    0.285_714_286_259_757_64,
    0.222_222_111_347_497_34,
    0.181_828_891_285_655_08,
    0.153_317_214_907_386_42,
    0.146_164_510_424_341_67,
];

/// log10 2 to 41 bits: its product with an exponent is exact.
const LOG10_2_HIGH: f64 = f64::from_bits(0x3fd3_4413_509f_6000);
const LOG10_2_LOW: f64 = f64::from_bits(0x3d59_fef3_11f1_2b36);
/// log10 e to 32 bits: its product with a number of 21 bits is exact.
const LOG10_E_HIGH: f64 = f64::from_bits(0x3fdb_cb7b_1520_0000);
const LOG10_E_LOW: f64 = f64::from_bits(0x3dbb_9438_ca9a_add5);

/// Bits of the square root of 1/2.
const SQRT_HALF: u64 = 0x3fe6_a09e_667f_3bcd;
const ONE: u64 = 0x3ff0_0000_0000_0000;
const MANTISSA: u64 = 0x000f_ffff_ffff_ffff;
/// 2^52: an integer below it, put into its lowest bits, is added to it.
const TWO_52: f64 = 4_503_599_627_370_496.0;

/// Natural logarithm: NaN below zero, -infinity at zero. Largest relative error 2e-16.
#[must_use]
pub fn ln(x: f64) -> f64 {
    let (value, stands) = ln_core(x);
    if stands { value } else { libm::log(x) }
}

/// Natural logarithm, value by value.
///
/// # Panics
/// When the lengths differ.
pub fn ln_column(out: &mut [f64], x: &[f64]) {
    each_or(
        out,
        x,
        #[inline(always)]
        |x| ln_core(x),
        libm::log,
    );
}

/// Logarithm to base ten: NaN below zero, -infinity at zero. Largest relative error 2e-16; exact for the powers of
/// ten that are exact (10^0 to 10^22).
#[must_use]
pub fn log10(x: f64) -> f64 {
    let (value, stands) = log10_core(x);
    if stands { value } else { libm::log10(x) }
}

/// Logarithm to base ten, value by value.
///
/// # Panics
/// When the lengths differ.
pub fn log10_column(out: &mut [f64], x: &[f64]) {
    each_or(
        out,
        x,
        #[inline(always)]
        |x| log10_core(x),
        libm::log10,
    );
}

/// ln(1 + x), without loss near zero: NaN below -1, -infinity at -1. Largest relative error 3e-16.
#[must_use]
pub fn ln1p(x: f64) -> f64 {
    let (value, stands) = ln1p_core(x);
    if stands { value } else { libm::log1p(x) }
}

/// ln(1 + x), value by value.
///
/// # Panics
/// When the lengths differ.
pub fn ln1p_column(out: &mut [f64], x: &[f64]) {
    each_or(
        out,
        x,
        #[inline(always)]
        |x| ln1p_core(x),
        libm::log1p,
    );
}

#[inline(always)]
pub(super) fn ln_core(x: f64) -> Attempt {
    let (e, f) = reduce(x);
    (sum(e, f, e * LN_2_LOW), is_ordinary(x))
}

#[inline(always)]
fn ln1p_core(x: f64) -> Attempt {
    // 1 + x = rounded + lost, exactly (Knuth's two-sum).
    let rounded = 1.0 + x;
    let added = rounded - 1.0;
    let lost = (1.0 - (rounded - added)) + (x - added);
    let (e, f) = reduce(rounded);
    (sum(e, f, e * LN_2_LOW + lost / rounded), is_ordinary(rounded) && x != 0.0)
}

/// e ln 2 + ln(1 + f), where `low` is the part of e ln 2 that `LN_2_HIGH` lacks, and whatever else is as small.
#[inline(always)]
fn sum(e: f64, f: f64, low: f64) -> f64 {
    let half_square = 0.5 * f * f;
    e * LN_2_HIGH + (f - (half_square - (series(f, half_square) + low)))
}

#[inline(always)]
fn log10_core(x: f64) -> Attempt {
    let (e, f) = reduce(x);
    let half_square = 0.5 * f * f;
    // ln(1 + f) in two parts, the first of 21 bits.
    let high = f64::from_bits((f - half_square).to_bits() & 0xffff_ffff_0000_0000);
    let low = (f - high) - half_square + series(f, half_square);
    // Times log10 e, plus e log10 2, largest parts added without loss.
    let mantissa = high * LOG10_E_HIGH;
    let exponent = e * LOG10_2_HIGH;
    let sum = exponent + mantissa;
    let lost = (exponent - sum) + mantissa;
    let rest = e * LOG10_2_LOW + (low + high) * LOG10_E_LOW + low * LOG10_E_HIGH;
    (sum + (lost + rest), is_ordinary(x))
}

/// Normal and above zero: what `reduce` is for.
#[inline(always)]
pub(super) fn is_ordinary(x: f64) -> bool {
    (f64::MIN_POSITIVE..f64::INFINITY).contains(&x)
}

/// e and f of x = 2^e (1 + f).
#[inline(always)]
pub(super) fn reduce(x: f64) -> (f64, f64) {
    // Shifted so that the exponent's field steps at the square root of 1/2 instead of at 1.
    let shifted = x.to_bits().wrapping_add(ONE - SQRT_HALF);
    let e = f64::from_bits((shifted >> 52) | TWO_52.to_bits()) - (TWO_52 + 1023.0);
    let f = f64::from_bits((shifted & MANTISSA) + SQRT_HALF) - 1.0;
    (e, f)
}

/// s (f^2/2 + R(s^2)), which is ln(1 + f) - f + f^2/2.
#[inline(always)]
pub(super) fn series(f: f64, half_square: f64) -> f64 {
    let c = &SERIES;
    let s = f / (2.0 + f);
    let z = s * s;
    let z2 = z * z;
    let p0 = (c[0] + c[1] * z) + (c[2] + c[3] * z) * z2;
    let p1 = (c[4] + c[5] * z) + c[6] * z2;
    s * (half_square + z * (p0 + (z2 * z2) * p1))
}
