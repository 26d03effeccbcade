//! Exponentials, logarithms and powers.

use super::{decades, same, uniform};
use crate::math::kernels::{
    atan, cbrt, cos, erf, exp, expm1, ln, ln1p, log10, normal_distribution, normal_quantile, pow, sin, tan,
    tanh,
};

/// Largest relative difference between `f` and `reference`, which is itself good to about 1.1e-16.
#[track_caller]
fn check_close(x: &[f64], allowed: f64, f: impl Fn(f64) -> f64, reference: impl Fn(f64) -> f64) {
    for &x in x {
        let (found, expected) = (f(x), reference(x));
        assert!(
            (found - expected).abs() <= allowed * expected.abs(),
            "{x:e}: {found:e}, expected {expected:e}"
        );
    }
}

#[test]
fn elementary_functions_agree_with_the_library() {
    check_close(&uniform("exp", -708.0, 709.7), 4e-16, exp, libm::exp);
    check_close(&uniform("exp near 0", -1.0, 1.0), 4e-16, exp, libm::exp);
    check_close(&uniform("expm1", -2.0, 2.0), 5e-16, expm1, libm::expm1);
    check_close(&decades("expm1 wide", -300.0, 2.84), 5e-16, expm1, libm::expm1);
    check_close(&decades("expm1 negative", -300.0, 2.84), 5e-16, |x| expm1(-x), |x| libm::expm1(-x));
    for x in [decades("ln", -307.0, 308.0), uniform("ln near 1", 0.3, 3.0)] {
        check_close(&x, 4e-16, ln, libm::log);
        // The library's own log10 is off by up to 2.3e-16.
        check_close(&x, 5e-16, log10, libm::log10);
    }
    check_close(&decades("ln1p", -300.0, 300.0), 4e-16, ln1p, libm::log1p);
    check_close(&decades("ln1p negative", -300.0, -1e-5), 4e-16, |x| ln1p(-x), |x| libm::log1p(-x));
}

#[test]
fn powers_agree_with_the_library_over_many_decades() {
    let bases = decades("pow base", -35.0, 35.0);
    for (base, exponent) in bases.iter().zip(uniform("pow exponent", -4.0, 4.0)) {
        let (found, expected) = (pow(*base, exponent), libm::pow(*base, exponent));
        assert!(
            (found - expected).abs() <= 4e-16 * expected,
            "{base}^{exponent}: {found}, expected {expected}"
        );
    }
    for (base, exponent) in
        uniform("pow base near 1", 0.5, 2.0).iter().zip(uniform("pow size", -700.0, 700.0))
    {
        let exponent = exponent / libm::log(*base);
        let (found, expected) = (pow(*base, exponent), libm::pow(*base, exponent));
        assert!(
            (found - expected).abs() <= 2e-14 * expected,
            "{base}^{exponent}: {found}, expected {expected}"
        );
    }
}

#[test]
fn subnormal_arguments_and_results_lose_at_most_one_last_place() {
    let least = f64::from_bits(1);
    for x in uniform("subnormal", -745.0, -708.0) {
        assert!((exp(x) - libm::exp(x)).abs() <= least + 4e-16 * libm::exp(x), "{x}");
        let expected = libm::pow(2.0, x * 1.44);
        assert!((pow(2.0, x * 1.44) - expected).abs() <= least + 4e-16 * expected, "{x}");
    }
    for x in decades("subnormal", -323.0, -308.0) {
        assert!((ln(x) - libm::log(x)).abs() <= 2e-13, "{x:e}");
        assert!((log10(x) - libm::log10(x)).abs() <= 1e-13, "{x:e}");
        assert!((pow(x, -0.25) - libm::pow(x, -0.25)).abs() <= 4e-16 * libm::pow(x, -0.25), "{x:e}");
    }
}

#[test]
fn special_values_follow_the_standard() {
    let infinity = f64::INFINITY;
    // IEEE 754-2019, clause 9.2.1.
    type Row = (fn(f64) -> f64, f64, f64);
    let table: [Row; 34] = [
        (exp, infinity, infinity),
        (exp, -infinity, 0.0),
        (exp, 0.0, 1.0),
        (exp, -0.0, 1.0),
        (exp, 709.9, infinity),
        (exp, -746.0, 0.0),
        (exp, 1e300, infinity),
        (exp, f64::MIN, 0.0),
        (expm1, infinity, infinity),
        (expm1, -infinity, -1.0),
        (expm1, -1e9, -1.0),
        (expm1, 0.0, 0.0),
        (expm1, -0.0, -0.0),
        (expm1, 1e-320, 1e-320),
        (ln, infinity, infinity),
        (ln, 1.0, 0.0),
        (ln, 0.0, -infinity),
        (ln, -0.0, -infinity),
        (ln, -1.0, f64::NAN),
        (ln, -infinity, f64::NAN),
        (log10, infinity, infinity),
        (log10, 1.0, 0.0),
        (log10, 0.0, -infinity),
        (log10, -2.0, f64::NAN),
        (ln1p, infinity, infinity),
        (ln1p, 0.0, 0.0),
        (ln1p, -0.0, -0.0),
        (ln1p, -1.0, -infinity),
        (ln1p, -1.5, f64::NAN),
        (ln1p, 1e-320, 1e-320),
        (normal_quantile, 0.0, -infinity),
        (normal_quantile, 1.0, infinity),
        (normal_quantile, -0.1, f64::NAN),
        (normal_quantile, 1.1, f64::NAN),
    ];
    for (number, (f, x, expected)) in table.into_iter().enumerate() {
        assert!(same(f(x), expected), "row {number}: {x} gave {}, expected {expected}", f(x));
    }
    for f in [
        exp,
        expm1,
        ln,
        log10,
        ln1p,
        normal_quantile,
        normal_distribution,
        sin,
        cos,
        tan,
        atan,
        tanh,
        erf,
        cbrt,
    ] {
        assert!(f(f64::NAN).is_nan());
    }
}

#[test]
fn special_powers_follow_the_standard() {
    let infinity = f64::INFINITY;
    // IEEE 754-2019, clause 9.2.1.
    for (base, exponent, expected) in [
        (f64::NAN, 0.0, 1.0),
        (1.0, f64::NAN, 1.0),
        (1.0, infinity, 1.0),
        (-1.0, infinity, 1.0),
        (0.0, -1.0, infinity),
        (-0.0, -1.0, -infinity),
        (-0.0, -2.0, infinity),
        (0.0, 0.37, 0.0),
        (-0.0, 3.0, -0.0),
        (0.0, 0.0, 1.0),
        (infinity, 0.5, infinity),
        (infinity, -0.5, 0.0),
        (-infinity, 3.0, -infinity),
        (2.0, infinity, infinity),
        (0.5, infinity, 0.0),
        (0.5, -infinity, infinity),
        (-8.0, 1.0 / 3.0, f64::NAN),
        (-2.0, 3.0, -8.0),
        (-2.0, -2.0, 0.25),
        (2.0, 1023.0, 8.988_465_674_311_58e307),
        (2.0, 1024.0, infinity),
        (2.0, -1074.0, f64::from_bits(1)),
        (10.0, 400.0, infinity),
        (10.0, -400.0, 0.0),
        (1.0 + f64::EPSILON, 1e300, infinity),
        (1.0, 1e300, 1.0),
        (1e-320, 0.0, 1.0),
        (f64::NAN, 1.0, f64::NAN),
        (2.0, f64::NAN, f64::NAN),
    ] {
        assert!(same(pow(base, exponent), expected), "{base}^{exponent}: {}", pow(base, exponent));
    }
}

#[test]
fn logarithms_of_exact_powers_of_ten_are_exact() {
    let mut power = 1.0;
    for decade in 0..=22 {
        assert_eq!(log10(power), f64::from(decade));
        power *= 10.0;
    }
    for decade in -307..=308 {
        let found = log10(format!("1e{decade}").parse().unwrap());
        assert!(
            (found - f64::from(decade)).abs() <= f64::EPSILON / 2.0 * f64::from(decade).abs(),
            "{decade}: {found}"
        );
    }
}

#[test]
fn exact_powers_are_exact() {
    for (base, exponent, expected) in
        [(4.0, 0.5, 2.0), (2.0, 10.0, 1024.0), (10.0, 3.0, 1000.0), (10.0, -2.0, 0.01)]
    {
        assert_eq!(pow(base, exponent), expected, "{base}^{exponent}");
    }
}
