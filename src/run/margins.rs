//! Margins and whether they hold.

use crate::math::kernels::{self, Operand};

/// The margins of one block: log10(available / required) in dex, and whether available >= required.
///
/// available <= 0 < required gives -infinity, required <= 0 < available +infinity, both <= 0 or anything not a number
/// gives not a number, which does not hold.
pub(super) fn margins(
    available: Operand<'_>,
    required: Operand<'_>,
    scratch: &mut [f64],
    out: &mut [f64],
    holds: &mut [u64],
) {
    let has = |at: usize| match available {
        Operand::Column(column) => column[at],
        Operand::Scalar(value) => value,
    };
    let needs = |at: usize| match required {
        Operand::Column(column) => column[at],
        Operand::Scalar(value) => value,
    };
    for (at, ratio) in scratch.iter_mut().enumerate() {
        *ratio = has(at) / needs(at);
    }
    kernels::log10_column(out, scratch);
    holds.fill(0);
    for (at, margin) in out.iter_mut().enumerate() {
        let (has, needs, ratio) = (has(at), needs(at), scratch[at]);
        // The ratio of two positive finite numbers may still overflow or vanish.
        if !(has > 0.0 && needs > 0.0 && ratio.is_normal()) {
            *margin = special(has, needs);
        }
        let holding = if has > 0.0 && needs > 0.0 { has >= needs } else { *margin == f64::INFINITY };
        holds[at / 64] |= u64::from(holding) << (at % 64);
    }
}

fn special(has: f64, needs: f64) -> f64 {
    if has.is_nan() || needs.is_nan() {
        f64::NAN
    } else if has > 0.0 && needs > 0.0 {
        kernels::log10(has) - kernels::log10(needs)
    } else if needs > 0.0 {
        f64::NEG_INFINITY
    } else if has > 0.0 {
        f64::INFINITY
    } else {
        f64::NAN
    }
}
