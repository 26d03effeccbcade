//! The dimension of every node.

use std::ops::Range;

use super::functions::{DimensionRule, Function};
use super::tree::{Binary, Binding, Expr, ExprKind};
use crate::quantity::{Dimension, Exponent};
use crate::text::Fault;

/// What names mean where a formula stands.
pub trait Scope {
    /// The dimension of a quantity, parameter or constant.
    fn dimension_of(&self, name: &str) -> Option<Dimension>;
    /// The dimensions of a curve: of its argument and of its value.
    fn curve(&self, name: &str) -> Option<(Dimension, Dimension)>;
    /// All names, for the nearest one in messages.
    fn names(&self) -> Vec<String>;
}

/// The dimension of the whole formula, `None` if it fits any, with every clash inside it.
pub(super) fn infer(
    root: &Expr,
    scope: &dyn Scope,
    broken: &[Range<usize>],
) -> (Option<Dimension>, Vec<Fault>) {
    let mut inference = Inference { scope, broken, faults: Vec::new() };
    let dimension = match inference.number(root) {
        Value::Of(dimension) => Some(dimension),
        Value::Any | Value::Unknown => None,
    };
    (dimension, inference.faults)
}

/// What a node is: a number, or true or false.
enum Sort {
    Number(Value),
    Truth,
    /// Something faulty that was reported.
    Unknown,
}

/// What is known of the dimension of a number.
#[derive(Clone, Copy, PartialEq)]
enum Value {
    Of(Dimension),
    /// 0, infinity and what is made of them fit every dimension.
    Any,
    /// Something faulty that was reported: it fits everything and makes no second fault.
    Unknown,
}

impl Value {
    /// The value of an operation on both dimensions; with what is unknown, or of any dimension, it is so too.
    fn with(self, other: Self, f: impl FnOnce(Dimension, Dimension) -> Self) -> Self {
        match (self, other) {
            (Self::Unknown, _) | (_, Self::Unknown) => Self::Unknown,
            (Self::Any, _) | (_, Self::Any) => Self::Any,
            (Self::Of(a), Self::Of(b)) => f(a, b),
        }
    }
}

struct Inference<'a> {
    scope: &'a dyn Scope,
    broken: &'a [Range<usize>],
    faults: Vec<Fault>,
}

impl Inference<'_> {
    fn fault(&mut self, at: &Expr, message: String, expected: impl Into<String>) -> Value {
        self.faults.push(Fault::new(at.span.clone(), message).expected(expected));
        Value::Unknown
    }

    /// Checks a node that must be a number.
    fn number(&mut self, expr: &Expr) -> Value {
        match self.sort(expr) {
            Sort::Number(value) => value,
            Sort::Unknown => Value::Unknown,
            Sort::Truth => self.fault(
                expr,
                "a condition stands where a number is needed".to_owned(),
                "a number; conditions stand first in `choose(condition, a, b)`",
            ),
        }
    }

    /// Checks a node that must be true or false.
    fn condition(&mut self, expr: &Expr) {
        if let Sort::Number(_) = self.sort(expr) {
            self.fault(
                expr,
                "a number stands where a condition is needed".to_owned(),
                "a comparison such as `a < b`",
            );
        }
    }

    /// Checks a node that must be a pure number; whether it is, or may be.
    fn pure(&mut self, expr: &Expr, message: impl FnOnce(Dimension) -> String) -> Value {
        match self.number(expr) {
            Value::Of(dimension) if !dimension.is_none() => {
                self.fault(expr, message(dimension), "a pure number, such as a ratio")
            }
            Value::Unknown => Value::Unknown,
            Value::Of(_) | Value::Any => Value::Of(Dimension::NONE),
        }
    }

    fn sort(&mut self, expr: &Expr) -> Sort {
        if self.broken.contains(&expr.span) {
            for child in expr.children() {
                self.sort(child);
            }
            return Sort::Unknown;
        }
        Sort::Number(match &expr.kind {
            ExprKind::Number { value, unit: None, .. } if *value == 0.0 => Value::Any,
            ExprKind::Number { unit, .. } => {
                Value::Of(unit.as_ref().map_or(Dimension::NONE, crate::quantity::Unit::dimension))
            }
            ExprKind::Infinity => Value::Any,
            ExprKind::Name(name) => self.scope.dimension_of(name).map_or(Value::Unknown, Value::Of),
            ExprKind::Negate(inner) => self.number(inner),
            ExprKind::Not(inner) => {
                self.condition(inner);
                return Sort::Truth;
            }
            ExprKind::Binary(operator, left, right) => return self.binary(*operator, left, right),
            ExprKind::Power(base, exponent, written) => self.power(base, *exponent, written),
            ExprKind::Call(function, arguments) => self.call(*function, arguments),
            ExprKind::Choose(condition, yes, no) => {
                self.condition(condition);
                let (yes, other) = (self.number(yes), self.number(no));
                self.same(yes, other, no, |yes, no| format!("`choose` gives {yes} or {no}"))
            }
            ExprKind::Curve(name, argument) => self.curve(name, argument),
        })
    }

    /// Two values that must have one dimension; the fault points at the second.
    fn same(
        &mut self,
        first: Value,
        second: Value,
        at: &Expr,
        message: impl FnOnce(Dimension, Dimension) -> String,
    ) -> Value {
        match (first, second) {
            (Value::Of(a), Value::Of(b)) if a != b => self.fault(at, message(a, b), a.to_string()),
            (Value::Unknown, _) | (_, Value::Unknown) => Value::Unknown,
            (Value::Any, known) | (known, _) => known,
        }
    }

    fn binary(&mut self, operator: Binary, left: &Expr, right: &Expr) -> Sort {
        match operator.binding() {
            Binding::And | Binding::Or => {
                self.condition(left);
                self.condition(right);
                Sort::Truth
            }
            Binding::Comparison => {
                let (first, second) = (self.number(left), self.number(right));
                self.same(first, second, right, |a, b| format!("cannot compare {a} with {b}"));
                Sort::Truth
            }
            _ => Sort::Number(self.arithmetic(operator, left, right)),
        }
    }

    fn arithmetic(&mut self, operator: Binary, left: &Expr, right: &Expr) -> Value {
        if operator == Binary::Power {
            return self.general_power(left, right);
        }
        let (first, second) = (self.number(left), self.number(right));
        match operator {
            Binary::Add => self.same(first, second, right, |a, b| format!("cannot add {b} to {a}")),
            Binary::Subtract => {
                self.same(first, second, right, |a, b| format!("cannot subtract {b} from {a}"))
            }
            Binary::Multiply => self.product(first, second, right, Dimension::times),
            _ => self.product(first, second, right, Dimension::over),
        }
    }

    fn product(
        &mut self,
        first: Value,
        second: Value,
        at: &Expr,
        f: impl FnOnce(Dimension, Dimension) -> Option<Dimension>,
    ) -> Value {
        first.with(second, |a, b| f(a, b).map_or_else(|| self.too_large(at), Value::Of))
    }

    fn too_large(&mut self, at: &Expr) -> Value {
        self.fault(at, "the exponents of its dimension grow too large".to_owned(), "smaller powers")
    }

    fn power(&mut self, base: &Expr, exponent: Exponent, written: &Expr) -> Value {
        match self.number(base) {
            Value::Of(dimension) => {
                dimension.power(exponent).map_or_else(|| self.too_large(written), Value::Of)
            }
            // 0^0 and infinity^0 are 1, a pure number; other powers of them fit what they fit.
            Value::Any if exponent == Exponent::ZERO => Value::Of(Dimension::NONE),
            other => other,
        }
    }

    fn general_power(&mut self, base: &Expr, exponent: &Expr) -> Value {
        let power = self.pure(exponent, |dimension| format!("an exponent cannot be {dimension}"));
        if power == Value::Unknown {
            // It may have been meant as a literal, which leaves the base free.
            self.number(base);
            return Value::Unknown;
        }
        self.pure(base, |dimension| {
            format!("cannot raise {dimension} to a power that is not made of literals")
        })
    }

    fn call(&mut self, function: Function, arguments: &[Expr]) -> Value {
        match function.dimension_rule() {
            DimensionRule::Pure => {
                let mut result = Value::Of(Dimension::NONE);
                for argument in arguments {
                    let name = function.name();
                    let value = self.pure(argument, |dimension| format!("`{name}` cannot take {dimension}"));
                    result = if value == Value::Unknown { value } else { result };
                }
                result
            }
            DimensionRule::Root(n) => {
                let [argument] = arguments else { return Value::Unknown };
                let value = self.number(argument);
                let root = Exponent::new(1, i64::from(n));
                match value {
                    Value::Of(dimension) => root
                        .and_then(|root| dimension.power(root))
                        .map_or_else(|| self.too_large(argument), Value::Of),
                    other => other,
                }
            }
            DimensionRule::Keeps => {
                let mut all = Value::Any;
                for argument in arguments {
                    let value = self.number(argument);
                    let name = function.name();
                    all = self.same(all, value, argument, |a, b| format!("`{name}` cannot take {a} and {b}"));
                }
                all
            }
        }
    }

    fn curve(&mut self, name: &str, argument: &Expr) -> Value {
        let Some((takes, gives)) = self.scope.curve(name) else { return Value::Unknown };
        let value = self.number(argument);
        self.same(Value::Of(takes), value, argument, |takes, found| {
            format!("the curve `{name}` takes {takes}, not {found}")
        });
        Value::Of(gives)
    }
}
