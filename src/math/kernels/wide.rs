//! Loops over columns, compiled for several register widths and chosen at run time.
//!
//! The functions handed in are plain additions, multiplications, divisions, square roots, comparisons and bit
//! operations on one value, without branches or calls, so that the compiler turns each loop into vector
//! instructions. It never fuses a multiplication and an addition by itself, hence every width gives the same bits.
//! Closures carry `#[inline(always)]`: one that is called instead of inlined is compiled for the narrowest registers.

use multiversion::multiversion;

/// What a kernel makes of a value, and whether that stands: kernels are made for ordinary arguments, and say which.
pub(super) type Attempt = (f64, bool);

/// `out[i] = f(x[i])`.
#[multiversion(targets = "simd")]
pub(super) fn each(out: &mut [f64], x: &[f64], f: impl Fn(f64) -> f64) {
    assert_eq!(out.len(), x.len(), "columns have equal length");
    for (out, &x) in out.iter_mut().zip(x) {
        *out = f(x);
    }
}

/// `values[i] = f(values[i])`.
#[multiversion(targets = "simd")]
pub(super) fn each_in_place(values: &mut [f64], f: impl Fn(f64) -> f64) {
    for value in values {
        *value = f(*value);
    }
}

/// `out[i] = f(a[i], b[i])`.
#[multiversion(targets = "simd")]
pub(super) fn each_pair(out: &mut [f64], a: &[f64], b: &[f64], f: impl Fn(f64, f64) -> f64) {
    assert_eq!(out.len(), a.len(), "columns have equal length");
    assert_eq!(out.len(), b.len(), "columns have equal length");
    for ((out, &a), &b) in out.iter_mut().zip(a).zip(b) {
        *out = f(a, b);
    }
}

/// `out[i] = f(a[i], b[i], c[i])`.
#[multiversion(targets = "simd")]
pub(super) fn each_triple(
    out: &mut [f64],
    a: &[f64],
    b: &[f64],
    c: &[f64],
    f: impl Fn(f64, f64, f64) -> f64,
) {
    assert_eq!(out.len(), a.len(), "columns have equal length");
    assert_eq!(out.len(), b.len(), "columns have equal length");
    assert_eq!(out.len(), c.len(), "columns have equal length");
    for (((out, &a), &b), &c) in out.iter_mut().zip(a).zip(b).zip(c) {
        *out = f(a, b, c);
    }
}

/// `out[i]` = what `attempt` makes of `x[i]` if it stands, else `otherwise(x[i])`.
#[multiversion(targets = "simd")]
pub(super) fn each_or(
    out: &mut [f64],
    x: &[f64],
    attempt: impl Fn(f64) -> Attempt,
    otherwise: impl Fn(f64) -> f64,
) {
    assert_eq!(out.len(), x.len(), "columns have equal length");
    let mut all_stand = true;
    for (out, &x) in out.iter_mut().zip(x) {
        let (value, stands) = attempt(x);
        *out = value;
        all_stand &= stands;
    }
    if !all_stand {
        for (out, &x) in out.iter_mut().zip(x) {
            if !attempt(x).1 {
                *out = otherwise(x);
            }
        }
    }
}

/// `out[i]` = what `attempt` makes of `a[i]` and `b[i]` if it stands, else `otherwise(a[i], b[i])`.
#[multiversion(targets = "simd")]
pub(super) fn each_pair_or(
    out: &mut [f64],
    a: &[f64],
    b: &[f64],
    attempt: impl Fn(f64, f64) -> Attempt,
    otherwise: impl Fn(f64, f64) -> f64,
) {
    assert_eq!(out.len(), a.len(), "columns have equal length");
    assert_eq!(out.len(), b.len(), "columns have equal length");
    let mut all_stand = true;
    for ((out, &a), &b) in out.iter_mut().zip(a).zip(b) {
        let (value, stands) = attempt(a, b);
        *out = value;
        all_stand &= stands;
    }
    if !all_stand {
        for ((out, &a), &b) in out.iter_mut().zip(a).zip(b) {
            if !attempt(a, b).1 {
                *out = otherwise(a, b);
            }
        }
    }
}
