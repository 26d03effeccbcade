//! Time of each kernel, in nanoseconds a value, beside the library `libm` and the standard library.
//!
//! `cargo bench --bench kernels`. Nothing here passes or fails.

#![expect(
    clippy::disallowed_methods,
    reason = "the standard library's functions are timed here for comparison"
)]

use std::hint::black_box;
use std::time::Instant;

use hypobiont::math::kernels::{
    Arithmetic, Operand, binary_column, exp_column, expm1_column, ln_column, ln1p_column, log10_column,
    normal_distribution_column, normal_quantile_column, pow_column, pow_scalar_column, select_column,
    sqrt_column,
};
use hypobiont::math::quantiles::{
    order_statistics_f32, order_statistics_f64, rank_high, rank_low, rank_median,
};
use hypobiont::math::streams::Stream;
use statrs::distribution::{ContinuousCDF, Normal};

/// Values in a column, as in a run.
const COLUMN: usize = 4096;
/// Values that quantiles are taken of.
const MANY: usize = 1 << 20;

type Column<'a> = &'a dyn Fn(&mut [f64], &[f64]);

fn main() {
    println!(
        "{:<28} {:>8} {:>8} {:>8} {:>12} {:>12}",
        "ns a value", "ours", "libm", "std", "libm / ours", "std / ours"
    );
    let each = |f: fn(f64) -> f64| {
        move |out: &mut [f64], x: &[f64]| {
            for (out, &x) in out.iter_mut().zip(x) {
                *out = f(x);
            }
        }
    };
    let wide = uniform(COLUMN, -50.0, 50.0);
    let positive = uniform(COLUMN, 1e-9, 50.0);
    let unit = uniform(COLUMN, 0.0, 1.0);
    row("exp", &wide, &exp_column, Some(&each(libm::exp)), Some(&each(f64::exp)));
    row("expm1", &wide, &expm1_column, Some(&each(libm::expm1)), Some(&each(f64::exp_m1)));
    row("ln", &positive, &ln_column, Some(&each(libm::log)), Some(&each(f64::ln)));
    row("log10", &positive, &log10_column, Some(&each(libm::log10)), Some(&each(f64::log10)));
    row("ln1p", &positive, &ln1p_column, Some(&each(libm::log1p)), Some(&each(f64::ln_1p)));
    row(
        "x^0.37",
        &positive,
        &|out, x| pow_scalar_column(out, x, 0.37),
        Some(&each(|x| libm::pow(x, 0.37))),
        Some(&each(|x| x.powf(0.37))),
    );
    row(
        "x^x",
        &positive,
        &|out, x| pow_column(out, x, x),
        Some(&each(|x| libm::pow(x, x))),
        Some(&each(|x| x.powf(x))),
    );
    row("sqrt", &positive, &sqrt_column, Some(&each(libm::sqrt)), Some(&each(f64::sqrt)));
    row("normal distribution", &wide, &normal_distribution_column, None, None);
    let quantile = |out: &mut [f64], p: &[f64]| {
        out.copy_from_slice(p);
        normal_quantile_column(out);
    };
    row("normal quantile", &unit, &quantile, None, None);
    let normal = Normal::standard();
    let theirs = |out: &mut [f64], p: &[f64]| {
        for (out, &p) in out.iter_mut().zip(p) {
            *out = normal.inverse_cdf(p);
        }
    };
    row("normal quantile, statrs", &unit, &theirs, None, None);
    let stream = Stream::new(1, "bench");
    row("stream", &unit, &|out, _| stream.fill_open_unit(1 << 20, out), None, None);
    for op in [Arithmetic::Add, Arithmetic::Multiply, Arithmetic::Divide, Arithmetic::Min] {
        let apply =
            |out: &mut [f64], x: &[f64]| binary_column(op, out, Operand::Column(x), Operand::Column(&unit));
        row(&format!("{op:?}, two columns"), &wide, &apply, None, None);
        let apply =
            |out: &mut [f64], x: &[f64]| binary_column(op, out, Operand::Column(x), Operand::Scalar(0.3));
        row(&format!("{op:?}, column and scalar"), &wide, &apply, None, None);
    }
    let choose =
        |out: &mut [f64], x: &[f64]| select_column(out, x, Operand::Column(&unit), Operand::Scalar(0.3));
    row("select", &wide, &choose, None, None);
    quantiles();
}

/// Prints one line of the table.
fn row(name: &str, x: &[f64], ours: Column, library: Option<Column>, standard: Option<Column>) {
    let time = |column: Column| {
        let mut out = vec![0.0; x.len()];
        best(x.len(), 50, || column(black_box(&mut out), black_box(x)))
    };
    let ours = time(ours);
    let [library, standard] = [library, standard].map(|column| column.map(time));
    let figure = |value: Option<f64>| value.map_or(String::new(), |value| format!("{value:.2}"));
    println!(
        "{name:<28} {ours:>8.2} {:>8} {:>8} {:>12} {:>12}",
        figure(library),
        figure(standard),
        figure(library.map(|time| time / ours)),
        figure(standard.map(|time| time / ours)),
    );
}

/// Times three quantiles of a million values, against selection by the standard library.
fn quantiles() {
    let mut values = uniform(MANY, 0.0, 1.0);
    normal_quantile_column(&mut values);
    let narrow: Vec<f32> = values.iter().map(|&value| value as f32).collect();
    let ranks = [rank_low(MANY, 0.05), rank_median(MANY), rank_high(MANY, 0.05)];
    let counted = best(MANY, 1, || {
        black_box(order_statistics_f32(black_box(&narrow), ranks));
    });
    let selected = best(MANY, 1, || {
        let mut copy = narrow.clone();
        for rank in ranks {
            black_box(copy.select_nth_unstable_by(rank, f32::total_cmp));
        }
    });
    let wide = best(MANY, 1, || {
        black_box(order_statistics_f64(&mut values.clone(), ranks));
    });
    println!("three quantiles of {MANY}: f32 {counted:.2} (standard selection {selected:.2}), f64 {wide:.2}");
}

/// The best time of 40 rounds, in nanoseconds a value.
fn best(values: usize, repeats: usize, mut f: impl FnMut()) -> f64 {
    let round = |_| {
        let start = Instant::now();
        for _ in 0..repeats {
            f();
        }
        start.elapsed().as_secs_f64() * 1e9 / (repeats * values) as f64
    };
    (0..40).map(round).fold(f64::INFINITY, f64::min)
}

fn uniform(count: usize, low: f64, high: f64) -> Vec<f64> {
    let mut values = vec![0.0; count];
    Stream::new(1, "uniform").fill_open_unit(0, &mut values);
    values.iter().map(|u| low + (high - low) * u).collect()
}
