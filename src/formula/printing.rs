//! Trees as text, with no more parentheses than needed; reading it gives the tree again.

use std::fmt;

use super::tree::{Binary, Binding, Expr, ExprKind};

impl fmt::Display for Expr {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match &self.kind {
            ExprKind::Number { value, unit, .. } => {
                write!(f, "{}", Plain(*value))?;
                unit.as_ref().map_or(Ok(()), |unit| write!(f, " [{}]", unit.text()))
            }
            ExprKind::Infinity => f.write_str("infinity"),
            ExprKind::Name(name) => f.write_str(name),
            ExprKind::Negate(inner) => write!(f, "-{}", Within(inner, Binding::Negation)),
            ExprKind::Not(inner) => write!(f, "not {}", Within(inner, Binding::Not)),
            ExprKind::Power(base, _, exponent) | ExprKind::Binary(Binary::Power, base, exponent) => {
                // Without parentheses `2 [m]^2` would look like a unit's power.
                let with_unit = matches!(base.kind, ExprKind::Number { unit: Some(_), .. });
                let exponent = Within(exponent, Binding::Negation);
                if with_unit {
                    write!(f, "({base})^{exponent}")
                } else {
                    write!(f, "{}^{exponent}", Within(base, Binding::Atom))
                }
            }
            ExprKind::Binary(operator, left, right) => {
                // Comparisons do not chain, so both of their operands must bind more tightly.
                let binding = operator.binding();
                let least = if binding == Binding::Comparison { binding.tighter() } else { binding };
                write!(f, "{} {} {}", Within(left, least), operator.sign(), Within(right, binding.tighter()))
            }
            ExprKind::Call(function, arguments) => {
                call(f, function.name(), &arguments.iter().collect::<Vec<_>>())
            }
            ExprKind::Choose(condition, yes, no) => call(f, "choose", &[condition, yes, no]),
            ExprKind::Curve(name, argument) => call(f, name, &[argument]),
        }
    }
}

fn call(f: &mut fmt::Formatter<'_>, name: &str, arguments: &[&Expr]) -> fmt::Result {
    write!(f, "{name}(")?;
    for (index, argument) in arguments.iter().enumerate() {
        write!(f, "{}{argument}", if index == 0 { "" } else { ", " })?;
    }
    f.write_str(")")
}

/// An expression, in parentheses if it binds less tightly than its place asks.
struct Within<'a>(&'a Expr, Binding);

impl fmt::Display for Within<'_> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        if self.0.binding() < self.1 { write!(f, "({})", self.0) } else { write!(f, "{}", self.0) }
    }
}

/// A number that reads as the same double, in the shorter of the usual ways.
pub(super) struct Plain(pub(super) f64);

impl fmt::Display for Plain {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let size = self.0.abs();
        if size == 0.0 || (1e-4..1e7).contains(&size) {
            write!(f, "{}", self.0)
        } else {
            write!(f, "{:e}", self.0)
        }
    }
}
