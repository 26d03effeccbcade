use std::sync::Arc;

use proptest::prelude::{Just, Strategy, prop_oneof, proptest};
use proptest::{prop_assert, prop_assert_eq};
use statrs::distribution::{ContinuousCDF, LogNormal, Normal, Triangular, Uniform};

use super::{Bounds, Distribution, FreeRange};
use crate::math::kernels;
use crate::quantity::unit::Unit;

fn close(found: f64, expected: f64, relative: f64) {
    assert!((found - expected).abs() <= relative * expected.abs(), "{found} instead of {expected}");
}

/// Mean and standard deviation from the quantiles of the midpoints of a million equal parts.
#[allow(clippy::cast_precision_loss)]
fn moments(distribution: &Distribution) -> (f64, f64) {
    let n = 1_000_000;
    let mut values: Vec<f64> = (0..n).map(|k| (f64::from(k) + 0.5) / f64::from(n)).collect();
    distribution.quantile_column(&mut values);
    let mean = values.iter().sum::<f64>() / values.len() as f64;
    let variance =
        values.iter().map(|value| (value - mean) * (value - mean)).sum::<f64>() / values.len() as f64;
    (mean, variance.sqrt())
}

// The numbers of the next four tests were computed with mpmath 1.3 (40 digits) and scipy 1.17.1, which agree to 2e-14.

#[test]
fn lognormal_probabilities_are_those_of_the_table() {
    let standard = Distribution::Lognormal { median: 1.0, factor: kernels::exp(0.5) };
    close(standard.quantile(0.025), 0.375_317_857_413, 1e-11);
    close(standard.quantile(0.95), 2.276_016_608_51, 1e-11);
    close(standard.quantile(0.975), 2.664_408_261_55, 1e-11);
    close(standard.cdf(2.0), 0.917_171_480_998, 1e-11);
    close(standard.survival(5.0), 6.434_710_129_14e-4, 1e-11);
    close(moments(&standard).0, 1.133_148_453_07, 1e-5);
    let sizes = Distribution::Lognormal { median: 3e-6, factor: 1.6 };
    close(sizes.quantile(0.975), 7.536_836_070_01e-6, 1e-11);
}

#[test]
fn a_normal_kept_within_bounds_is_that_of_the_table() {
    let (kept, cut) = Distribution::Normal { mean: 1.0, sd: 1.0 }.conditioned(Bounds { low: 0.0, high: 3.0 });
    close(kept.median(), 1.171_163_918_02, 1e-11);
    close(kept.quantile(0.975), 2.714_537_835_07, 1e-11);
    let (mean, sd) = moments(&kept);
    close(mean, 1.229_637_179_09, 1e-6);
    close(sd, 0.720_945_586_859, 1e-6);
    // Φ(-1) + Φ(-2), from the normal table of any handbook.
    close(cut, 0.158_655_253_931 + 0.022_750_131_948, 1e-10);
}

#[test]
fn the_upper_tail_of_a_normal_keeps_its_digits() {
    let normal = Distribution::Normal { mean: 0.0, sd: 1.0 };
    close(normal.survival(5.0), 2.866_515_718_79e-7, 1e-11);
    close(kernels::ln(normal.survival(38.0)), -726.557_216_019, 1e-9);
    let far = Bounds { low: 8.0, high: f64::INFINITY };
    let (upper, cut) = normal.clone().conditioned(far);
    assert!(cut > 0.999_999);
    for p in [1e-9, 0.1, 0.5, 0.9, 1.0 - 1e-9] {
        let x = upper.quantile(p);
        close(normal.survival(x), (1.0 - p) * normal.survival(8.0), 1e-9);
        let (lower, _) = normal.clone().conditioned(Bounds { low: f64::NEG_INFINITY, high: -8.0 });
        close(lower.quantile(1.0 - p), -x, 1e-12);
    }
}

#[test]
fn triangular_and_log_uniform_are_those_of_the_table() {
    let triangular = Distribution::Triangular { min: 1.0, mode: 2.0, max: 5.0 };
    close(triangular.quantile(0.9), 3.904_554_884_99, 1e-11);
    let log_uniform = Distribution::LogUniform { min: 1e-7, max: 1e-3 };
    close(moments(&log_uniform).0, 1.085_627_631_14e-4, 1e-9);
}

#[test]
fn the_statistics_library_gives_the_same_quantiles_and_probabilities() {
    fn compare(ours: &Distribution, library: &impl ContinuousCDF<f64, f64>) {
        for step in 1..200 {
            let p = f64::from(step) / 200.0;
            let x = ours.quantile(p);
            close(x, library.inverse_cdf(p), 1e-9);
            close(ours.cdf(x), library.cdf(x), 1e-9);
            close(ours.survival(x), library.sf(x), 1e-9);
        }
    }
    compare(&Distribution::Normal { mean: 210.0, sd: 30.0 }, &Normal::new(210.0, 30.0).unwrap());
    let (median, factor) = (17.0, 1.3);
    compare(
        &Distribution::Lognormal { median, factor },
        &LogNormal::new(kernels::ln(median), kernels::ln(factor)).unwrap(),
    );
    compare(&Distribution::Uniform { min: 180.0, max: 240.0 }, &Uniform::new(180.0, 240.0).unwrap());
    compare(
        &Distribution::Triangular { min: 1.0, mode: 2.0, max: 5.0 },
        &Triangular::new(1.0, 5.0, 2.0).unwrap(),
    );
}

#[test]
fn a_discrete_distribution_takes_each_value_by_its_weight() {
    let discrete =
        Distribution::Discrete { values: [1.0, 2.0, 4.0].into(), cumulated: [0.25, 0.25, 1.0].into() };
    let mut column = [0.1, 0.25, 0.26, 0.99];
    discrete.quantile_column(&mut column);
    // The second value has no weight.
    assert_eq!(column, [1.0, 1.0, 4.0, 4.0]);
    assert_eq!(
        (discrete.cdf(0.5), discrete.cdf(1.0), discrete.cdf(3.0), discrete.cdf(4.0)),
        (0.0, 0.25, 0.25, 1.0)
    );
    let (kept, cut) = discrete.clone().conditioned(Bounds { low: 0.0, high: 3.0 });
    assert_eq!(cut, 0.75);
    assert_eq!(kept.support(), Bounds { low: 1.0, high: 2.0 });
    assert_eq!(kept.quantile(0.999), 1.0);
    assert_eq!(discrete.clone().conditioned(Bounds { low: 5.0, high: 9.0 }), (discrete, 1.0));
}

#[test]
fn a_sample_gives_whole_rows() {
    let values: Arc<[f64]> = [3.0, 1.0, 2.0, -1.0].into();
    let sample = Distribution::Sample { file: "sizes.csv".into(), column: "width".into(), values };
    let mut column = [0.01, 0.26, 0.74, 0.999_999];
    sample.quantile_column(&mut column);
    assert_eq!(column, [3.0, 1.0, 2.0, -1.0]);
    assert_eq!((sample.quantile(0.25), sample.median(), sample.quantile(0.76)), (-1.0, 1.0, 3.0));
    assert_eq!(sample.cdf(1.5), 0.5);
    let (kept, cut) = sample.conditioned(Bounds { low: 0.0, high: f64::INFINITY });
    assert_eq!((cut, kept.support().low), (0.25, 1.0));
}

#[test]
fn conditioning_twice_is_conditioning_on_both() {
    let normal = Distribution::Normal { mean: 1.0, sd: 1.0 };
    let (once, first) = normal.clone().conditioned(Bounds { low: 0.0, high: f64::INFINITY });
    let (twice, second) = once.clone().conditioned(Bounds { low: -5.0, high: 3.0 });
    let (both, cut) = normal.conditioned(Bounds { low: 0.0, high: 3.0 });
    assert_eq!(twice, both);
    close((1.0 - first) * (1.0 - second), 1.0 - cut, 1e-12);
    assert_eq!(once.clone().conditioned(Bounds { low: -5.0, high: f64::INFINITY }), (once, 0.0));
}

#[test]
fn uniforms_are_narrowed_and_exact_values_are_in_or_out() {
    let (kept, cut) =
        Distribution::Uniform { min: 0.0, max: 4.0 }.conditioned(Bounds { low: 1.0, high: 2.0 });
    assert_eq!((kept, cut), (Distribution::Uniform { min: 1.0, max: 2.0 }, 0.75));
    let (kept, cut) =
        Distribution::LogUniform { min: 1.0, max: 1e4 }.conditioned(Bounds { low: 0.0, high: 1e3 });
    assert_eq!(kept, Distribution::LogUniform { min: 1.0, max: 1e3 });
    close(cut, 0.25, 1e-12);
    let bounds = Bounds { low: 0.0, high: 1.0 };
    assert_eq!(Distribution::Exact(0.5).conditioned(bounds).1, 0.0);
    assert_eq!(Distribution::Exact(1.5).conditioned(bounds).1, 1.0);
    let outside = Distribution::Uniform { min: 2.0, max: 3.0 };
    assert_eq!(outside.clone().conditioned(bounds), (outside, 1.0));
}

#[test]
fn a_column_has_the_bits_of_single_values_whatever_its_length() {
    let bounds = Bounds { low: 0.0, high: 300.0 };
    for distribution in [
        Distribution::Lognormal { median: 17.0, factor: 1.3 },
        Distribution::LogUniform { min: 1.0, max: 100.0 },
        Distribution::Normal { mean: 210.0, sd: 30.0 }.conditioned(bounds).0,
    ] {
        let points: Vec<f64> = (0..1000).map(|k| (f64::from(k) + 0.5) / 1000.0).collect();
        let mut column = points.clone();
        distribution.quantile_column(&mut column);
        for (p, value) in points.iter().zip(column) {
            assert_eq!(distribution.quantile(*p).to_bits(), value.to_bits());
        }
    }
}

#[test]
fn distributions_are_described_as_read() {
    let unit = |text| Unit::read(text).expect("a unit");
    let nanometre = unit("nm");
    let normal = Distribution::Normal { mean: 210e-9, sd: 30e-9 };
    let expected = "normal, standard uncertainty 30 nm, 90 % within 161 to 259 nm";
    assert_eq!(normal.describe(&nanometre), expected);
    // The cut at zero is seven standard deviations away.
    let sizes = Bounds { low: 0.0, high: 1.0 };
    assert_eq!(normal.conditioned(sizes).0.describe(&nanometre), expected);
    assert_eq!(Distribution::Exact(1.0).describe(&nanometre), "exact");
    assert_eq!(
        Distribution::Lognormal { median: 17.0, factor: 1.3 }.describe(&unit("aa/s")),
        "lognormal, factor 1.3, 90 % within 11 to 26.2 aa/s"
    );
    assert_eq!(
        Distribution::Normal { mean: 328.15, sd: 10.0 }.describe(&unit("°C")),
        "normal, standard uncertainty 10 °C, 90 % within 39 to 71 °C"
    );
    assert_eq!(
        Distribution::Uniform { min: 180e-9, max: 240e-9 }.describe(&nanometre),
        "uniform, 180 to 240 nm"
    );
    assert_eq!(
        Distribution::Triangular { min: 0.1, mode: 0.2, max: 0.5 }.describe(&unit("%")),
        "triangular, most often 20 %, 10 to 50 %"
    );
    let kept = Distribution::Normal { mean: 1.0, sd: 1.0 }.conditioned(sizes).0;
    assert_eq!(
        kept.describe(&unit("")),
        "normal, standard uncertainty 1, kept within 0 to 1, 90 % within 0.068 to 0.96"
    );
    let range = FreeRange { low: 6e-9, high: 20e-9, typical: 10e-9, logarithmic: false };
    assert_eq!(range.describe(&nanometre), "anywhere in 6 nm to 20 nm (free)");
}

#[test]
fn nothing_overflows_on_the_way_across_the_widest_range() {
    let widest = Distribution::Uniform { min: -f64::MAX, max: f64::MAX };
    assert_eq!(widest.median(), 0.0);
    assert_eq!(widest.cdf(0.0), 0.5);
    close(FreeRange::middle(1e-300, 1e300, true), 1.0, 1e-12);
    assert_eq!(FreeRange::middle(-f64::MAX, f64::MAX, false), 0.0);
}

fn any_distribution() -> impl Strategy<Value = Distribution> {
    let mean_and_sd = (-1e3..1e3, 1e-3..1e3);
    let continuous = prop_oneof![
        mean_and_sd.prop_map(|(mean, sd)| Distribution::Normal { mean, sd }),
        (1e-9..1e9, 1.01..10.0).prop_map(|(median, factor)| Distribution::Lognormal { median, factor }),
        (-1e3..1e3, 1e-3..1e3).prop_map(|(min, width)| Distribution::Uniform { min, max: min + width }),
        (1e-6..1e3, 1.1..1e6).prop_map(|(min, ratio)| Distribution::LogUniform { min, max: min * ratio }),
        (-1e3..1e3, 0.0..1e3, 1e-3..1e3).prop_map(|(min, rise, fall)| Distribution::Triangular {
            min,
            mode: min + rise,
            max: min + rise + fall
        }),
    ];
    (continuous, prop_oneof![Just(None), (0.0..0.9, 0.05..1.0).prop_map(Some)]).prop_map(|(whole, part)| {
        match part {
            None => whole,
            Some((from, share)) => {
                let to = f64::min(from + share, 0.99);
                let bounds = Bounds { low: whole.quantile(f64::max(from, 0.01)), high: whole.quantile(to) };
                whole.conditioned(bounds).0
            }
        }
    })
}

proptest! {
    #[test]
    fn quantiles_rise_with_the_probability_and_stay_in_the_support(
        distribution in any_distribution(), a in 1e-12..1.0, b in 1e-12..1.0,
    ) {
        let (a, b): (f64, f64) = (f64::min(a, b), f64::max(a, b));
        let (x, y) = (distribution.quantile(a), distribution.quantile(b));
        prop_assert!(x <= y, "{x} {y}");
        let support = distribution.support();
        prop_assert!(support.contains(x) && support.contains(y));
    }

    #[test]
    fn the_distribution_function_undoes_the_quantile(distribution in any_distribution(), p in 1e-9..1.0) {
        let x = distribution.quantile(p);
        prop_assert!((distribution.cdf(x) - p).abs() < 1e-7, "{} at {}", distribution.cdf(x), x);
        prop_assert!((distribution.cdf(x) + distribution.survival(x) - 1.0).abs() < 1e-12);
    }

    #[test]
    fn what_is_cut_and_what_is_kept_make_the_whole(distribution in any_distribution(), p in 0.01..0.9, q in 0.05..1.0) {
        let bounds = Bounds { low: distribution.quantile(p), high: distribution.quantile(f64::min(p + q, 0.99)) };
        let (kept, cut) = distribution.clone().conditioned(bounds);
        prop_assert!((1.0 - cut - (f64::min(p + q, 0.99) - p)).abs() < 1e-7, "cut {}", cut);
        prop_assert_eq!(kept.quantile(1e-15).max(bounds.low), kept.quantile(1e-15));
        prop_assert!(bounds.contains(kept.median()));
    }
}
