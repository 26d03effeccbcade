//! The exponential function and its relatives.
//!
//! e^x = 2^k e^r with k the integer nearest to x / ln 2, so that |r| <= ln(2)/2, ln 2 in two parts (Cody and Waite,
//! *Software Manual for the Elementary Functions*, 1980), e^r by a polynomial, 2^k put together from bits.

use super::wide::{Attempt, each_or};

/// 1.5 x 2^52: adding it rounds to the nearest integer, which then stands in the lowest bits of the sum.
const ROUNDER: f64 = 6_755_399_441_055_744.0;
/// ln 2 to 32 bits: its product with an integer of up to 21 bits is exact.
pub(super) const LN_2_HIGH: f64 = f64::from_bits(0x3fe6_2e42_fee0_0000);
/// The rest of ln 2.
pub(super) const LN_2_LOW: f64 = f64::from_bits(0x3dea_39ef_3579_3c76);

/// (e^r - 1 - r) / r^2, ascending powers of r: interpolated at the Chebyshev nodes of |r| <= ln(2)/2 in 60 digits;
/// r^2 times the polynomial is then off by less than 3e-19.
const REST: [f64; 11] = [
    0.5,
    0.166_666_666_666_666_7,
    0.041_666_666_666_666_67,
    0.008_333_333_333_326_141,
    0.001_388_888_888_888_375_2,
    0.000_198_412_698_748_006_94,
    2.480_158_732_553_351e-5,
    2.755_725_542_549_107e-6,
    2.755_727_366_116_628e-7,
    2.510_520_648_025_936_5e-8,
    2.091_467_945_249_519_3e-9,
];

/// e^x. Largest relative error 2e-16; in the subnormal range one last place.
#[must_use]
pub fn exp(x: f64) -> f64 {
    let (value, stands) = exp_core(x);
    if stands { value } else { libm::exp(x) }
}

/// e^x, value by value.
///
/// # Panics
/// When the lengths differ.
pub fn exp_column(out: &mut [f64], x: &[f64]) {
    each_or(
        out,
        x,
        #[inline(always)]
        |x| exp_core(x),
        libm::exp,
    );
}

/// e^x - 1, without loss near zero. Largest relative error 3e-16.
#[must_use]
pub fn expm1(x: f64) -> f64 {
    let (value, stands) = expm1_core(x);
    if stands { value } else { libm::expm1(x) }
}

/// e^x - 1, value by value.
///
/// # Panics
/// When the lengths differ.
pub fn expm1_column(out: &mut [f64], x: &[f64]) {
    each_or(
        out,
        x,
        #[inline(always)]
        |x| expm1_core(x),
        libm::expm1,
    );
}

/// For results that are normal numbers.
#[inline(always)]
fn exp_core(x: f64) -> Attempt {
    let k = Nearest::to(x * std::f64::consts::LOG2_E);
    let r = (x - k.value * LN_2_HIGH) - k.value * LN_2_LOW;
    (scale(1.0 + (r + exp_rest(r)), k), x.abs() < 708.0)
}

/// For results that are finite, not yet -1, and not -0.
#[inline(always)]
fn expm1_core(x: f64) -> Attempt {
    let k = Nearest::to(x * std::f64::consts::LOG2_E);
    let high = x - k.value * LN_2_HIGH;
    let low = k.value * LN_2_LOW;
    let r = high - low;
    let lost = (high - r) - low;
    // e^x - 1 = 2^k ((1 - 2^-k) + (e^r - 1)).
    let one = 1.0 - scale(1.0, Nearest::to(-k.value));
    (scale(one + (r + (lost + exp_rest(r))), k), x > -37.0 && x < 708.0 && x != 0.0)
}

/// e^r - 1 - r for |r| <= ln(2)/2.
#[inline(always)]
pub(super) fn exp_rest(r: f64) -> f64 {
    let c = &REST;
    let r2 = r * r;
    let r4 = r2 * r2;
    // Split so that the parts are independent of each other.
    let q0 = (c[0] + c[1] * r) + (c[2] + c[3] * r) * r2;
    let q1 = (c[4] + c[5] * r) + (c[6] + c[7] * r) * r2;
    let q2 = (c[8] + c[9] * r) + c[10] * r2;
    r2 * (q0 + r4 * (q1 + r4 * q2))
}

/// The integer nearest to a number below 2^51.
#[derive(Clone, Copy)]
pub(super) struct Nearest {
    /// The integer.
    pub(super) value: f64,
    /// The integer plus `ROUNDER`: its lowest bits hold the integer in two's complement.
    sum: f64,
}

impl Nearest {
    #[inline(always)]
    pub(super) fn to(x: f64) -> Self {
        let sum = x + ROUNDER;
        Self { value: sum - ROUNDER, sum }
    }
}

/// p 2^k, where p is zero or the result normal.
#[inline(always)]
pub(super) fn scale(p: f64, k: Nearest) -> f64 {
    // Adds k to the field of the exponent.
    f64::from_bits(p.to_bits().wrapping_add(k.sum.to_bits() << 52))
}
