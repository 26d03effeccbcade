//! Operations of the program over columns: each picks the kernel that computes it.

use crate::formula::Function;
use crate::math::kernels::{self, Comparison, Operand};
use crate::plan::Arithmetic;

/// Copies an operand.
pub(super) fn copy(out: &mut [f64], operand: Operand<'_>) {
    match operand {
        Operand::Column(column) => out.copy_from_slice(column),
        Operand::Scalar(value) => out.fill(value),
    }
}

/// A function of one number, value by value.
pub(super) fn unary(function: Function, out: &mut [f64], x: Operand<'_>) {
    let column = match x {
        Operand::Column(column) => column,
        Operand::Scalar(value) => return out.fill(function.value(&[value])),
    };
    match function {
        Function::Sqrt => kernels::sqrt_column(out, column),
        Function::Cbrt => kernels::cbrt_column(out, column),
        Function::Exp => kernels::exp_column(out, column),
        Function::Expm1 => kernels::expm1_column(out, column),
        Function::Ln => kernels::ln_column(out, column),
        Function::Ln1p => kernels::ln1p_column(out, column),
        Function::Log10 => kernels::log10_column(out, column),
        Function::Sin => kernels::sin_column(out, column),
        Function::Cos => kernels::cos_column(out, column),
        Function::Tan => kernels::tan_column(out, column),
        Function::Atan => kernels::atan_column(out, column),
        Function::Tanh => kernels::tanh_column(out, column),
        Function::Erf => kernels::erf_column(out, column),
        Function::Erfc => kernels::erfc_column(out, column),
        Function::Abs => kernels::abs_column(out, column),
        // Of one number, the smallest and the largest are that number.
        Function::Min | Function::Max => out.copy_from_slice(column),
    }
}

/// An operation on two numbers, row by row.
pub(super) fn binary(operation: Arithmetic, out: &mut [f64], a: Operand<'_>, b: Operand<'_>) {
    use kernels::Arithmetic as Kernel;
    match operation {
        Arithmetic::Add => kernels::binary_column(Kernel::Add, out, a, b),
        Arithmetic::Subtract => kernels::binary_column(Kernel::Subtract, out, a, b),
        Arithmetic::Multiply => kernels::binary_column(Kernel::Multiply, out, a, b),
        Arithmetic::Divide => kernels::binary_column(Kernel::Divide, out, a, b),
        Arithmetic::Min => kernels::binary_column(Kernel::Min, out, a, b),
        Arithmetic::Max => kernels::binary_column(Kernel::Max, out, a, b),
        Arithmetic::Less => kernels::compare_column(Comparison::Less, out, a, b),
        Arithmetic::LessOrEqual => kernels::compare_column(Comparison::LessOrEqual, out, a, b),
        Arithmetic::Equal => kernels::compare_column(Comparison::Equal, out, a, b),
        Arithmetic::Power => power(out, a, b),
        Arithmetic::And => logic(out, a, b, |a, b| a && b),
        Arithmetic::Or => logic(out, a, b, |a, b| a || b),
    }
}

fn power(out: &mut [f64], base: Operand<'_>, exponent: Operand<'_>) {
    match (base, exponent) {
        (Operand::Column(base), Operand::Column(exponent)) => kernels::pow_column(out, base, exponent),
        (Operand::Column(base), Operand::Scalar(exponent)) => kernels::pow_scalar_column(out, base, exponent),
        (Operand::Scalar(base), _) => {
            for (at, out) in out.iter_mut().enumerate() {
                *out = kernels::pow(base, exponent.at(at));
            }
        }
    }
}

fn logic(out: &mut [f64], a: Operand<'_>, b: Operand<'_>, f: impl Fn(bool, bool) -> bool) {
    for (at, out) in out.iter_mut().enumerate() {
        *out = if f(a.at(at) != 0.0, b.at(at) != 0.0) { 1.0 } else { 0.0 };
    }
}

/// The second where the first is not 0, else the third.
pub(super) fn choose(out: &mut [f64], condition: Operand<'_>, a: Operand<'_>, b: Operand<'_>) {
    match condition {
        Operand::Column(condition) => kernels::select_column(out, condition, a, b),
        Operand::Scalar(0.0) => copy(out, b),
        Operand::Scalar(_) => copy(out, a),
    }
}
