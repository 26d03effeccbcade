//! Elementary functions and arithmetic, for one value and for columns, with the same bits either way.
//!
//! Shapes: `name(x)` for one value; `name_column(out, x)` for columns of equal length. A kernel is written once, in plain
//! multiplications and additions without branches, and compiled for several register widths (`wide`). It also says for
//! which arguments it is made, the ordinary ones; all others (zero, subnormal, infinite, NaN, and whatever overflows or
//! vanishes) go to the library `libm` one by one, which follows IEEE 754.

#![expect(
    clippy::redundant_closure,
    reason = "a closure can be made to inline always, a function handed on cannot"
)]

mod arithmetic;
mod exp;
mod library;
mod ln;
mod normal;
mod pow;
#[cfg(test)]
mod tests;
mod wide;

pub use arithmetic::{
    Arithmetic, Comparison, Operand, abs_column, binary_column, compare_column, negate_column, select_column,
    sqrt_column,
};
pub use exp::{exp, exp_column, expm1, expm1_column};
pub use library::{
    atan, atan_column, cbrt, cbrt_column, cos, cos_column, erf, erf_column, erfc, erfc_column, sin,
    sin_column, tan, tan_column, tanh, tanh_column,
};
pub use ln::{ln, ln_column, ln1p, ln1p_column, log10, log10_column};
pub use normal::{normal_distribution, normal_distribution_column, normal_quantile, normal_quantile_column};
pub use pow::{pow, pow_column, pow_scalar_column};
