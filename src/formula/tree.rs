//! The tree of a formula.

use std::ops::Range;

use super::functions::Function;
use crate::quantity::{Exponent, Unit};

/// A node of the tree. Two nodes are equal when they are written alike, wherever they stand.
#[derive(Clone, Debug)]
pub struct Expr {
    /// Its bytes in the formula's text, parentheses around it included.
    pub span: Range<usize>,
    /// What it is.
    pub kind: ExprKind,
}

impl PartialEq for Expr {
    fn eq(&self, other: &Self) -> bool {
        self.kind == other.kind
    }
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
    /// `x^r` with an exponent made of literals: base, exact exponent, exponent as written.
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

/// How tightly a node binds, loosest first. The parser and the printer use the same order.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub(super) enum Binding {
    Or,
    And,
    Not,
    Comparison,
    Sum,
    Product,
    Negation,
    Power,
    Atom,
}

impl Binding {
    /// The next tighter one: what the right operand of a left-associative operator must have.
    pub(super) const fn tighter(self) -> Self {
        match self {
            Self::Or => Self::And,
            Self::And => Self::Not,
            Self::Not => Self::Comparison,
            Self::Comparison => Self::Sum,
            Self::Sum => Self::Product,
            Self::Product => Self::Negation,
            Self::Negation => Self::Power,
            Self::Power | Self::Atom => Self::Atom,
        }
    }
}

impl Binary {
    /// Its sign in formulas.
    #[must_use]
    pub const fn sign(self) -> &'static str {
        match self {
            Self::Add => "+",
            Self::Subtract => "-",
            Self::Multiply => "*",
            Self::Divide => "/",
            Self::Power => "^",
            Self::Less => "<",
            Self::LessOrEqual => "<=",
            Self::Greater => ">",
            Self::GreaterOrEqual => ">=",
            Self::Equal => "=",
            Self::And => "and",
            Self::Or => "or",
        }
    }

    pub(super) const fn binding(self) -> Binding {
        match self {
            Self::Add | Self::Subtract => Binding::Sum,
            Self::Multiply | Self::Divide => Binding::Product,
            Self::Power => Binding::Power,
            Self::Less | Self::LessOrEqual | Self::Greater | Self::GreaterOrEqual | Self::Equal => {
                Binding::Comparison
            }
            Self::And => Binding::And,
            Self::Or => Binding::Or,
        }
    }
}

impl Expr {
    /// Its direct parts, in the order written. The exponent of a power counts as one.
    #[must_use]
    pub fn children(&self) -> Vec<&Self> {
        match &self.kind {
            ExprKind::Number { .. } | ExprKind::Infinity | ExprKind::Name(_) => Vec::new(),
            ExprKind::Negate(inner) | ExprKind::Not(inner) | ExprKind::Curve(_, inner) => vec![inner],
            ExprKind::Binary(_, left, right) | ExprKind::Power(left, _, right) => vec![left, right],
            ExprKind::Call(_, arguments) => arguments.iter().collect(),
            ExprKind::Choose(condition, yes, no) => vec![condition, yes, no],
        }
    }

    /// How many levels the tree has, at least 1.
    #[must_use]
    pub fn levels(&self) -> usize {
        // Not by recursion: this is asked before anything may recurse.
        let (mut deepest, mut open) = (0, vec![(self, 1)]);
        while let Some((expr, level)) = open.pop() {
            deepest = deepest.max(level);
            open.extend(expr.children().into_iter().map(|child| (child, level + 1)));
        }
        deepest
    }

    pub(super) fn binding(&self) -> Binding {
        match &self.kind {
            ExprKind::Binary(operator, ..) => operator.binding(),
            ExprKind::Power(..) => Binding::Power,
            ExprKind::Negate(_) => Binding::Negation,
            ExprKind::Not(_) => Binding::Not,
            _ => Binding::Atom,
        }
    }

    /// Calls `f` with every node, parents before their parts, in the order written.
    pub fn visit<'a>(&'a self, f: &mut dyn FnMut(&'a Self)) {
        f(self);
        for child in self.children() {
            child.visit(f);
        }
    }
}
