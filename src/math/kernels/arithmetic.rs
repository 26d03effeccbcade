//! Arithmetic, comparisons and choices over columns and scalars.

use super::wide::{each, each_pair, each_triple};

/// A column, or one number for every row.
#[derive(Clone, Copy, Debug)]
pub enum Operand<'a> {
    /// One number a row.
    Column(&'a [f64]),
    /// The same number in every row.
    Scalar(f64),
}

impl Operand<'_> {
    /// The number of one row.
    #[must_use]
    #[inline(always)]
    pub fn at(self, row: usize) -> f64 {
        match self {
            Self::Column(column) => column[row],
            Self::Scalar(value) => value,
        }
    }
}

/// Operations of two numbers.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Arithmetic {
    /// a + b.
    Add,
    /// a - b.
    Subtract,
    /// a b.
    Multiply,
    /// a / b.
    Divide,
    /// The smaller of both, the first of equal ones (0 and -0 are equal); NaN if either is NaN.
    Min,
    /// The larger of both, the first of equal ones; NaN if either is NaN.
    Max,
}

/// Comparisons of two numbers, as IEEE 754 has them: with NaN all but `NotEqual` are false.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Comparison {
    /// a < b.
    Less,
    /// a <= b.
    LessOrEqual,
    /// a > b.
    Greater,
    /// a >= b.
    GreaterOrEqual,
    /// a = b.
    Equal,
    /// a != b.
    NotEqual,
}

impl Arithmetic {
    /// The operation on two numbers, with the bits that columns give.
    #[must_use]
    #[inline(always)]
    pub fn of(self, a: f64, b: f64) -> f64 {
        match self {
            Self::Add => a + b,
            Self::Subtract => a - b,
            Self::Multiply => a * b,
            Self::Divide => a / b,
            Self::Min => smaller(a, b),
            Self::Max => larger(a, b),
        }
    }
}

impl Comparison {
    /// Whether it holds of two numbers.
    #[must_use]
    #[inline(always)]
    pub fn holds(self, a: f64, b: f64) -> bool {
        match self {
            Self::Less => a < b,
            Self::LessOrEqual => a <= b,
            Self::Greater => a > b,
            Self::GreaterOrEqual => a >= b,
            Self::Equal => a == b,
            Self::NotEqual => a != b,
        }
    }
}

/// `out = a op b`, row by row.
///
/// # Panics
/// When the lengths differ.
pub fn binary_column(op: Arithmetic, out: &mut [f64], a: Operand, b: Operand) {
    // One loop an operation: deciding inside the loop would keep it from becoming vectors.
    match op {
        Arithmetic::Add => spread(
            out,
            a,
            b,
            #[inline(always)]
            |a, b| Arithmetic::Add.of(a, b),
        ),
        Arithmetic::Subtract => spread(
            out,
            a,
            b,
            #[inline(always)]
            |a, b| Arithmetic::Subtract.of(a, b),
        ),
        Arithmetic::Multiply => spread(
            out,
            a,
            b,
            #[inline(always)]
            |a, b| Arithmetic::Multiply.of(a, b),
        ),
        Arithmetic::Divide => spread(
            out,
            a,
            b,
            #[inline(always)]
            |a, b| Arithmetic::Divide.of(a, b),
        ),
        Arithmetic::Min => spread(
            out,
            a,
            b,
            #[inline(always)]
            |a, b| Arithmetic::Min.of(a, b),
        ),
        Arithmetic::Max => spread(
            out,
            a,
            b,
            #[inline(always)]
            |a, b| Arithmetic::Max.of(a, b),
        ),
    }
}

/// `out` = 1 where the comparison of `a` with `b` holds, else 0.
///
/// # Panics
/// When the lengths differ.
pub fn compare_column(comparison: Comparison, out: &mut [f64], a: Operand, b: Operand) {
    match comparison {
        Comparison::Less => spread(
            out,
            a,
            b,
            #[inline(always)]
            |a, b| truth(Comparison::Less.holds(a, b)),
        ),
        Comparison::LessOrEqual => spread(
            out,
            a,
            b,
            #[inline(always)]
            |a, b| truth(Comparison::LessOrEqual.holds(a, b)),
        ),
        Comparison::Greater => spread(
            out,
            a,
            b,
            #[inline(always)]
            |a, b| truth(Comparison::Greater.holds(a, b)),
        ),
        Comparison::GreaterOrEqual => spread(
            out,
            a,
            b,
            #[inline(always)]
            |a, b| truth(Comparison::GreaterOrEqual.holds(a, b)),
        ),
        Comparison::Equal => spread(
            out,
            a,
            b,
            #[inline(always)]
            |a, b| truth(Comparison::Equal.holds(a, b)),
        ),
        Comparison::NotEqual => spread(
            out,
            a,
            b,
            #[inline(always)]
            |a, b| truth(Comparison::NotEqual.holds(a, b)),
        ),
    }
}

/// `out` = `a` where `condition` is not 0, else `b`; nothing of the branch that is not taken, NaN included.
///
/// # Panics
/// When the lengths differ.
pub fn select_column(out: &mut [f64], condition: &[f64], a: Operand, b: Operand) {
    match (a, b) {
        (Operand::Column(a), Operand::Column(b)) => each_triple(out, condition, a, b, select),
        (Operand::Column(a), Operand::Scalar(b)) => each_pair(out, condition, a, |c, a| select(c, a, b)),
        (Operand::Scalar(a), Operand::Column(b)) => each_pair(out, condition, b, |c, b| select(c, a, b)),
        (Operand::Scalar(a), Operand::Scalar(b)) => each(out, condition, |c| select(c, a, b)),
    }
}

/// `out = -x`.
///
/// # Panics
/// When the lengths differ.
pub fn negate_column(out: &mut [f64], x: &[f64]) {
    each(out, x, |x| -x);
}

/// `out = |x|`.
///
/// # Panics
/// When the lengths differ.
pub fn abs_column(out: &mut [f64], x: &[f64]) {
    each(out, x, f64::abs);
}

/// The square root, correctly rounded; NaN below zero.
///
/// # Panics
/// When the lengths differ.
pub fn sqrt_column(out: &mut [f64], x: &[f64]) {
    each(out, x, f64::sqrt);
}

#[inline(always)]
fn spread(out: &mut [f64], a: Operand, b: Operand, f: impl Fn(f64, f64) -> f64) {
    match (a, b) {
        (Operand::Column(a), Operand::Column(b)) => each_pair(out, a, b, f),
        (Operand::Column(a), Operand::Scalar(b)) => each(
            out,
            a,
            #[inline(always)]
            |a| f(a, b),
        ),
        (Operand::Scalar(a), Operand::Column(b)) => each(
            out,
            b,
            #[inline(always)]
            |b| f(a, b),
        ),
        (Operand::Scalar(a), Operand::Scalar(b)) => out.fill(f(a, b)),
    }
}

#[inline(always)]
fn smaller(a: f64, b: f64) -> f64 {
    // A NaN in `a` fails both tests and stays.
    if b < a || b.is_nan() { b } else { a }
}

#[inline(always)]
fn larger(a: f64, b: f64) -> f64 {
    if b > a || b.is_nan() { b } else { a }
}

#[inline(always)]
fn truth(holds: bool) -> f64 {
    if holds { 1.0 } else { 0.0 }
}

#[inline(always)]
fn select(condition: f64, a: f64, b: f64) -> f64 {
    if condition != 0.0 { a } else { b }
}
