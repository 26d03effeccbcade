//! The normal distribution and its inverse.

use statrs::distribution::{ContinuousCDF, Normal};

use super::{decades, uniform};
use crate::math::kernels::{erf, erfc, exp, ln, normal_distribution, normal_quantile};

#[test]
fn the_normal_quantile_meets_its_published_checks() {
    // p = 0.25, 0.001 and 1e-20 are the checks that Wichura gives (values here from mpmath, 30 digits).
    for (p, expected) in [
        (0.25, -0.674_489_750_196_081_7),
        (0.001, -3.090_232_306_167_813_6),
        (1e-20, -9.262_340_089_798_407),
        (0.5, 0.0),
        (0.975, 1.959_963_984_540_053_8),
    ] {
        let found = normal_quantile(p);
        assert!((found - expected).abs() <= 1e-15 * expected.abs(), "{p}: {found:e}");
    }
    // Lognormal quantiles from scipy 1.17.1, confirmed with mpmath to 40 digits: median 1, sigma 0.5; and median 3 um,
    // geometric standard deviation 1.6.
    for (p, median, sigma, expected) in [
        (0.025, 1.0, 0.5, 0.375_317_857_413),
        (0.95, 1.0, 0.5, 2.276_016_608_51),
        (0.975, 1.0, 0.5, 2.664_408_261_55),
        (0.975, 3.0, ln(1.6), 7.536_836_070_01),
    ] {
        let found = median * exp(sigma * normal_quantile(p));
        assert!((found / expected - 1.0).abs() < 2e-12, "{found}");
    }
}

#[test]
fn the_normal_quantile_inverts_the_distribution() {
    let normal = Normal::standard();
    for p in uniform("quantile", 0.0, 1.0).into_iter().chain(decades("quantile", -300.0, -1.0)) {
        let z = normal_quantile(p);
        // A relative error of 1e-15 in z shifts ln p by about z^2 times as much.
        let allowed = 1e-15 * (3.0 + z * z);
        assert!((normal_distribution(z) / p - 1.0).abs() < allowed, "{p:e}");
        // The other library's own inverse is good to about 1e-10.
        if p > 1e-12 {
            assert!((normal.inverse_cdf(p) - z).abs() < 1e-9, "{p:e}");
        }
        assert!((normal.cdf(z) - p).abs() < 1e-10);
    }
}

#[test]
fn the_normal_distribution_is_right_far_into_the_tail() {
    // scipy 1.17.1, confirmed with mpmath to 40 digits: lognormal distribution and upper tail, normal tails at 5 and 38.
    let close = |found: f64, expected: f64| assert!((found / expected - 1.0).abs() < 3e-12, "{found:e}");
    close(normal_distribution(ln(2.0) / 0.5), 0.917_171_480_998);
    close(normal_distribution(-ln(5.0) / 0.5), 6.434_710_129_14e-4);
    close(normal_distribution(-5.0), 2.866_515_718_79e-7);
    close(erf(0.5), 0.520_499_877_813);
    close(erfc(6.0), 2.151_973_671_25e-17);
    assert!(
        (ln(normal_distribution(-38.0)) + 726.557_216_019).abs() < 1e-6,
        "a subnormal number of few digits"
    );
    // mpmath 1.3.0, 40 digits.
    for (z, expected) in [
        (3.3, 0.999_516_575_857_616_2),
        (-1.0, 0.158_655_253_931_457_05),
        (-2.5, 0.006_209_665_325_776_135),
        (-6.0, 9.865_876_450_376_98e-10),
        (-13.75, 2.546_476_315_973_957e-43),
        (-20.3, 6.429_244_467_698_346e-92),
        (-30.1, 2.422_667_217_985_758_6e-199),
        (-37.0, 5.725_571_222_524_577e-300),
    ] {
        let found = normal_distribution(z);
        assert!((found / expected - 1.0).abs() < 5e-16, "{z}: {found:e}");
    }
    assert_eq!(normal_distribution(0.0), 0.5);
    assert_eq!(normal_distribution(f64::NEG_INFINITY), 0.0);
    assert_eq!(normal_distribution(f64::INFINITY), 1.0);
}
