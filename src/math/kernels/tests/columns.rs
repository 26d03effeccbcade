//! Columns give the bits of single values.

use super::{SPECIAL, decades, same, uniform};
use crate::math::kernels::{
    abs_column, atan, atan_column, cbrt, cbrt_column, cos, cos_column, erf, erf_column, erfc, erfc_column,
    exp, exp_column, expm1, expm1_column, ln, ln_column, ln1p, ln1p_column, log10, log10_column,
    negate_column, normal_distribution, normal_distribution_column, normal_quantile, normal_quantile_column,
    pow, pow_column, pow_scalar_column, sin, sin_column, sqrt_column, tan, tan_column, tanh, tanh_column,
};

/// Compares a column with single values, at lengths around every register width, so that a value's place in the column
/// and what stands beside it play no part.
#[track_caller]
fn check_column(x: &[f64], column: impl Fn(&mut [f64], &[f64]), f: impl Fn(f64) -> f64) {
    for length in (0..40).chain([511, 512, 513, 1024, 4096, x.len()]) {
        for x in [&x[..length], &x[x.len() - length..]] {
            let mut out = vec![f64::NAN; length];
            column(&mut out, x);
            for (&out, &x) in out.iter().zip(x) {
                assert!(same(out, f(x)), "length {length}, {x:e}: column {out:e}, value {:e}", f(x));
            }
        }
    }
}

#[test]
fn columns_give_the_bits_of_single_values() {
    let mut wide = decades("columns", -320.0, 305.0);
    let mut ordinary = uniform("columns", -20.0, 20.0);
    let mut positive = uniform("columns", 1e-9, 40.0);
    for (place, &value) in SPECIAL.iter().enumerate() {
        wide[place] = value;
        ordinary[37 * place] = value;
        positive[97 * place] = value;
    }
    type Both = (fn(&mut [f64], &[f64]), fn(f64) -> f64);
    let functions: [Both; 14] = [
        (exp_column, exp),
        (expm1_column, expm1),
        (ln_column, ln),
        (log10_column, log10),
        (ln1p_column, ln1p),
        (normal_distribution_column, normal_distribution),
        (sin_column, sin),
        (cos_column, cos),
        (tan_column, tan),
        (atan_column, atan),
        (tanh_column, tanh),
        (erf_column, erf),
        (erfc_column, erfc),
        (cbrt_column, cbrt),
    ];
    for x in [&wide, &ordinary, &positive] {
        for (column, f) in functions {
            check_column(x, column, f);
        }
        check_column(x, sqrt_column, f64::sqrt);
        check_column(x, abs_column, f64::abs);
        check_column(x, negate_column, |x| -x);
        for exponent in SPECIAL.into_iter().chain([0.37, -2.25, 0.75, 3.0]) {
            check_column(&x[..5000], |out, x| pow_scalar_column(out, x, exponent), |x| pow(x, exponent));
        }
        for (a, b) in [(&wide, x), (x, &ordinary)] {
            let mut out = vec![f64::NAN; a.len()];
            pow_column(&mut out, a, b);
            assert!(out.iter().zip(a).zip(b).all(|((&out, &a), &b)| same(out, pow(a, b))));
        }
    }
    let mut probabilities = uniform("columns", 0.0, 1.0);
    probabilities[..12].copy_from_slice(&[
        0.0,
        1.0,
        -0.0,
        f64::NAN,
        2.0,
        -1.0,
        1e-12,
        1e-300,
        0.075,
        0.925,
        0.5,
        1e-320,
    ]);
    let quantile = |out: &mut [f64], p: &[f64]| {
        out.copy_from_slice(p);
        normal_quantile_column(out);
    };
    check_column(&probabilities, quantile, normal_quantile);
}

#[test]
#[should_panic(expected = "columns have equal length")]
fn columns_of_different_length_are_a_mistake() {
    exp_column(&mut [0.0; 3], &[0.0; 4]);
}
