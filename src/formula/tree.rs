//! The tree of a formula; printing it is the inverse of parsing.

use std::ops::Range;

use super::functions::Function;
use crate::quantity::{Exponent, Unit};

/// A node of the tree.
#[derive(Clone, Debug, PartialEq)]
pub struct Expr {
    /// Its bytes in the formula's text.
    pub span: Range<usize>,
    /// What it is.
    pub kind: ExprKind,
}

/// What a node is.
#[derive(Clone, Debug, PartialEq)]
pub enum ExprKind {
    /// A number, perhaps with its unit: `1 [kg]`. `si` is what is computed with.
    Number {
        /// The number as written.
        value: f64,
        /// The unit in brackets.
        unit: Option<Unit>,
        /// The SI value.
        si: f64,
    },
    /// `infinity`, of any dimension.
    Infinity,
    /// A quantity, parameter or constant.
    Name(String),
    /// `-x`.
    Negate(Box<Expr>),
    /// `not c`.
    Not(Box<Expr>),
    /// Two operands.
    Binary(Binary, Box<Expr>, Box<Expr>),
    /// `x^r` with an exponent made of literals: exact.
    Power(Box<Expr>, Exponent, Box<Expr>),
    /// A built-in function.
    Call(Function, Vec<Expr>),
    /// `choose(condition, a, b)`.
    Choose(Box<Expr>, Box<Expr>, Box<Expr>),
    /// A curve of the entry: `name(argument)`.
    Curve(String, Box<Expr>),
}

/// Operators with two operands.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Binary {
    /// `+`
    Add,
    /// `-`
    Subtract,
    /// `*`
    Multiply,
    /// `/`
    Divide,
    /// `^` with an exponent that is not made of literals.
    Power,
    /// `<`
    Less,
    /// `<=`
    LessOrEqual,
    /// `>`
    Greater,
    /// `>=`
    GreaterOrEqual,
    /// `=`
    Equal,
    /// `and`
    And,
    /// `or`
    Or,
}
