//! Margins and whether they hold.

use crate::math::kernels::{self, Arithmetic, Operand};

/// Whether available >= required, one bit a draw, by the same rules as [`margins`].
pub(super) fn holding(available: Operand<'_>, required: Operand<'_>, holds: &mut [u64], draws: usize) {
    // A loop for each shape: deciding inside the loop would keep it from becoming vectors.
    match (available, required) {
        (Operand::Column(has), Operand::Column(needs)) => bits(holds, draws, |at| has[at], |at| needs[at]),
        (Operand::Column(has), Operand::Scalar(needs)) => bits(holds, draws, |at| has[at], |_| needs),
        (Operand::Scalar(has), Operand::Column(needs)) => bits(holds, draws, |_| has, |at| needs[at]),
        (Operand::Scalar(has), Operand::Scalar(needs)) => bits(holds, draws, |_| has, |_| needs),
    }
}

#[inline(always)]
fn bits(holds: &mut [u64], draws: usize, has: impl Fn(usize) -> f64, needs: impl Fn(usize) -> f64) {
    for (word, holds) in holds.iter_mut().enumerate() {
        let first = word * 64;
        *holds = 0;
        for bit in 0..64.min(draws - first) {
            let (has, needs) = (has(first + bit), needs(first + bit));
            // Nothing that is not positive is enough, anything positive is enough for nothing, and infinite against
            // infinite is no answer.
            let enough = (has > 0.0)
                & ((has >= needs) | (needs <= 0.0))
                & ((has < f64::INFINITY) | (needs < f64::INFINITY));
            *holds |= u64::from(enough) << bit;
        }
    }
}

/// available / required, ordered as margins are: their order statistics are those of the margins before the logarithm.
pub(super) fn ratios(available: Operand<'_>, required: Operand<'_>, out: &mut [f64]) {
    kernels::binary_column(Arithmetic::Divide, out, available, required);
    for (at, ratio) in out.iter_mut().enumerate() {
        let (has, needs) = (available.at(at), required.at(at));
        if !(has > 0.0 && needs > 0.0) {
            *ratio = kernels::pow(10.0, special(has, needs));
        }
    }
}

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
    let draws = out.len();
    holding(available, required, holds, draws);
    kernels::binary_column(Arithmetic::Divide, scratch, available, required);
    kernels::log10_column(out, scratch);
    // The ratio of two positive finite numbers is mostly an ordinary number; what is not is settled one by one.
    let plain = |at: usize| available.at(at) > 0.0 && required.at(at) > 0.0 && scratch[at].is_normal();
    if (0..draws).fold(true, |all, at| all & plain(at)) {
        return;
    }
    for (at, margin) in out.iter_mut().enumerate() {
        if !plain(at) {
            *margin = special(available.at(at), required.at(at));
        }
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
