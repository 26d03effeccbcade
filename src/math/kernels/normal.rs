//! The standard normal distribution and its inverse.
//!
//! Quantile: algorithm AS 241 (PPND16), M. J. Wichura, Appl. Stat. 37 (1988) 477-484: three rational functions, for the
//! centre, the tails and the far tails; about 1 part in 10^16 in exact arithmetic.

#![expect(clippy::excessive_precision, reason = "coefficients stand as published")]

use std::f64::consts::FRAC_2_SQRT_PI;

use super::exp::exp;
use super::ln::{ln, ln_core};
use super::pow::cut;
use super::wide::{each, each_in_place};

/// Half the width of the centre: |p - 1/2| up to here.
const CENTRE: f64 = 0.425;
/// e^-25: tail probabilities below it are far, where the root of -ln p exceeds 5.
const FAR: f64 = 1.388_794_386_496_402_1e-11;
/// Values of a column that are treated together; the tails among them, about 15 %, are gathered.
const BLOCK: usize = 512;

const A: [f64; 8] = [
    3.387_132_872_796_366_608,
    133.141_667_891_784_377_45,
    1_971.590_950_306_551_442_7,
    13_731.693_765_509_461_125,
    45_921.953_931_549_871_457,
    67_265.770_927_008_700_853,
    33_430.575_583_588_128_105,
    2_509.080_928_730_122_672_7,
];
const B: [f64; 8] = [
    1.0,
    42.313_330_701_600_911_252,
    687.187_007_492_057_908_3,
    5_394.196_021_424_751_107_7,
    21_213.794_301_586_595_867,
    39_307.895_800_092_710_61,
    28_729.085_735_721_942_674,
    5_226.495_278_852_854_561,
];
const C: [f64; 8] = [
    1.423_437_110_749_683_577_34,
    4.630_337_846_156_545_295_9,
    5.769_497_221_460_691_405_5,
    3.647_848_324_763_204_605_04,
    1.270_458_252_452_368_382_58,
    0.241_780_725_177_450_611_77,
    0.022_723_844_989_269_184_583_3,
    7.745_450_142_783_414_076_4e-4,
];
const D: [f64; 8] = [
    1.0,
    2.053_191_626_637_758_821_87,
    1.676_384_830_183_803_849_4,
    0.689_767_334_985_100_004_55,
    0.148_103_976_427_480_074_59,
    0.015_198_666_563_616_457_196_6,
    5.475_938_084_995_344_946e-4,
    1.050_750_071_644_416_843_24e-9,
];
const E: [f64; 8] = [
    6.657_904_643_501_103_777_2,
    5.463_784_911_164_114_369_9,
    1.784_826_539_917_291_335_8,
    0.296_560_571_828_504_891_23,
    0.026_532_189_526_576_123_093,
    0.001_242_660_947_388_078_438_6,
    2.711_555_568_743_487_578_15e-5,
    2.010_334_399_292_288_132_65e-7,
];
const F: [f64; 8] = [
    1.0,
    0.599_832_206_555_887_937_69,
    0.136_929_880_922_735_805_31,
    0.014_875_361_290_850_614_852_5,
    7.868_691_311_456_132_591e-4,
    1.846_318_317_510_054_681_8e-5,
    1.421_511_758_316_445_888_7e-7,
    2.044_263_103_389_939_785_64e-15,
];

/// The standard normal quantile: -infinity at 0, infinity at 1, NaN outside [0, 1].
#[must_use]
pub fn normal_quantile(p: f64) -> f64 {
    if in_centre(p) { centre(p) } else { outside_centre(p, tail(p)) }
}

/// The standard normal quantile, in place.
pub fn normal_quantile_column(values: &mut [f64]) {
    let mut tails = Tails { places: [0; BLOCK], probabilities: [0.0; BLOCK], quantiles: [0.0; BLOCK] };
    for block in values.chunks_mut(BLOCK) {
        tails.quantile_block(block);
    }
}

/// The standard normal distribution function, without loss in the lower tail: 1/2 erfc(-z / sqrt 2). Largest relative
/// error 1e-15.
#[must_use]
pub fn normal_distribution(z: f64) -> f64 {
    let x = -z * std::f64::consts::FRAC_1_SQRT_2;
    let value = 0.5 * libm::erfc(x);
    // Rounding has shifted x; in the tail a shift counts 2 x^2-fold, so it is put right with the derivative.
    if x.abs() < 28.0 { value - lost_in_scaling(z, x) * (0.5 * FRAC_2_SQRT_PI) * exp(-x * x) } else { value }
}

/// -z / sqrt 2 - x, without loss.
fn lost_in_scaling(z: f64, x: f64) -> f64 {
    /// 1/sqrt 2 to 26 bits, and the rest.
    const ROOT_HIGH: f64 = f64::from_bits(0x3fe6_a09e_6000_0000);
    const ROOT_LOW: f64 = 1.210_161_710_447_897e-8;
    let z_high = cut(z);
    let z_low = z - z_high;
    -(((z_high * ROOT_HIGH + x) + z_low * ROOT_HIGH) + z * ROOT_LOW)
}

/// The standard normal distribution function, value by value.
///
/// # Panics
/// When the lengths differ.
pub fn normal_distribution_column(out: &mut [f64], z: &[f64]) {
    assert_eq!(out.len(), z.len(), "columns have equal length");
    for (out, &z) in out.iter_mut().zip(z) {
        *out = normal_distribution(z);
    }
}

/// The values of a block that are outside the centre.
struct Tails {
    places: [usize; BLOCK],
    probabilities: [f64; BLOCK],
    quantiles: [f64; BLOCK],
}

impl Tails {
    fn quantile_block(&mut self, block: &mut [f64]) {
        let mut count = 0;
        for (place, &p) in block.iter().enumerate() {
            // Written always, kept only if counted: no branch to mispredict.
            self.places[count] = place;
            count += usize::from(!in_centre(p));
        }
        let places = &self.places[..count];
        let probabilities = &mut self.probabilities[..count];
        let quantiles = &mut self.quantiles[..count];
        for (probability, &place) in probabilities.iter_mut().zip(places) {
            *probability = block[place];
        }
        each(
            quantiles,
            probabilities,
            #[inline(always)]
            |p| tail(p),
        );
        each_in_place(
            block,
            #[inline(always)]
            |p| centre(p),
        );
        for ((&place, &p), &quantile) in places.iter().zip(&*probabilities).zip(&*quantiles) {
            block[place] = outside_centre(p, quantile);
        }
    }
}

#[inline(always)]
fn in_centre(p: f64) -> bool {
    (p - 0.5).abs() <= CENTRE
}

#[inline(always)]
fn centre(p: f64) -> f64 {
    let q = p - 0.5;
    q * ratio(&A, &B, CENTRE * CENTRE - q * q)
}

/// For tail probabilities from `FAR` to 0.075.
#[inline(always)]
fn tail(p: f64) -> f64 {
    let r = (-ln_core(lesser(p)).0).sqrt();
    signed(p, ratio(&C, &D, r - 1.6))
}

/// The value of `tail`, or what holds where that does not reach.
#[inline(always)]
fn outside_centre(p: f64, tail: f64) -> f64 {
    if lesser(p) >= FAR { tail } else { far_tail(p) }
}

#[cold]
fn far_tail(p: f64) -> f64 {
    let probability = lesser(p);
    if probability > 0.0 {
        let r = (-ln(probability)).sqrt();
        signed(p, ratio(&E, &F, r - 5.0))
    } else if probability == 0.0 {
        signed(p, f64::INFINITY)
    } else {
        f64::NAN
    }
}

/// The smaller of p and 1 - p.
#[inline(always)]
fn lesser(p: f64) -> f64 {
    if p < 0.5 { p } else { 1.0 - p }
}

#[inline(always)]
fn signed(p: f64, size: f64) -> f64 {
    if p < 0.5 { -size } else { size }
}

#[inline(always)]
fn ratio(numerator: &[f64; 8], denominator: &[f64; 8], x: f64) -> f64 {
    polynomial(numerator, x) / polynomial(denominator, x)
}

/// Horner's rule, ascending coefficients.
#[inline(always)]
fn polynomial(c: &[f64; 8], x: f64) -> f64 {
    c[0] + x * (c[1] + x * (c[2] + x * (c[3] + x * (c[4] + x * (c[5] + x * (c[6] + x * c[7]))))))
}
