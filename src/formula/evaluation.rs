//! A plain walk over the tree for one draw: what a formula means, against which compiled programs are tested.

use super::curves::Curve;
use super::functions::Function;
use super::powers::power_steps;
use super::tree::{Binary, Expr, ExprKind};
use crate::math::kernels;

/// Values of names and curves, by name.
pub(super) struct Walk<'a, 'c> {
    pub(super) lookup: &'a dyn Fn(&str) -> f64,
    pub(super) curves: &'a dyn Fn(&str) -> &'c Curve,
}

impl Walk<'_, '_> {
    /// The SI value of a number; a condition is NaN (inference lets none stand where a number is needed).
    pub(super) fn value(&self, expr: &Expr) -> f64 {
        match &expr.kind {
            ExprKind::Number { si, .. } => *si,
            ExprKind::Infinity => f64::INFINITY,
            ExprKind::Name(name) => (self.lookup)(name),
            ExprKind::Negate(inner) => -self.value(inner),
            ExprKind::Power(base, exponent, _) => power_steps(*exponent).value(self.value(base)),
            ExprKind::Binary(operator, left, right) => {
                arithmetic(*operator, self.value(left), self.value(right))
            }
            ExprKind::Call(function, arguments) => self.call(*function, arguments),
            ExprKind::Choose(condition, yes, no) => {
                if self.holds(condition) {
                    self.value(yes)
                } else {
                    self.value(no)
                }
            }
            ExprKind::Curve(name, argument) => (self.curves)(name).value(self.value(argument)),
            ExprKind::Not(_) => f64::NAN,
        }
    }

    fn call(&self, function: Function, arguments: &[Expr]) -> f64 {
        let values: Vec<f64> = arguments.iter().map(|argument| self.value(argument)).collect();
        function.value(&values)
    }

    /// Whether a condition holds. A comparison with NaN does not.
    fn holds(&self, expr: &Expr) -> bool {
        match &expr.kind {
            ExprKind::Not(inner) => !self.holds(inner),
            ExprKind::Binary(Binary::And, left, right) => self.holds(left) && self.holds(right),
            ExprKind::Binary(Binary::Or, left, right) => self.holds(left) || self.holds(right),
            ExprKind::Binary(operator, left, right) => {
                compares(*operator, self.value(left), self.value(right))
            }
            _ => false,
        }
    }
}

fn arithmetic(operator: Binary, left: f64, right: f64) -> f64 {
    match operator {
        Binary::Add => left + right,
        Binary::Subtract => left - right,
        Binary::Multiply => left * right,
        Binary::Divide => left / right,
        Binary::Power => kernels::pow(left, right),
        _ => f64::NAN,
    }
}

fn compares(operator: Binary, left: f64, right: f64) -> bool {
    match operator {
        Binary::Less => left < right,
        Binary::LessOrEqual => left <= right,
        Binary::Greater => left > right,
        Binary::GreaterOrEqual => left >= right,
        Binary::Equal => left == right,
        _ => false,
    }
}
