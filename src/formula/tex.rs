//! Trees as TeX, for reports.

use super::functions::Function;
use super::printing::Plain;
use super::tree::{Binary, Binding, Expr, ExprKind};
use crate::quantity::Unit;

/// The formula in TeX's mathematics; `symbol` gives the symbol of a name, else the name is set upright.
pub(super) fn tex(expr: &Expr, symbol: &dyn Fn(&str) -> Option<String>) -> String {
    let part = |expr: &Expr| tex(expr, symbol);
    let within = |expr: &Expr, least: Binding| {
        let bare = tex(expr, symbol);
        if binding(expr) < least { parenthesised(&bare) } else { bare }
    };
    match &expr.kind {
        ExprKind::Number { value, unit, .. } => number(*value, unit.as_ref()),
        ExprKind::Infinity => r"\infty".to_owned(),
        ExprKind::Name(name) => symbol(name).unwrap_or_else(|| upright(name)),
        ExprKind::Negate(inner) => format!("-{}", within(inner, Binding::Negation)),
        ExprKind::Not(inner) => format!(r"\lnot {}", within(inner, Binding::Sum)),
        ExprKind::Power(base, _, exponent) | ExprKind::Binary(Binary::Power, base, exponent) => {
            format!("{}^{{{}}}", within(base, Binding::Atom), part(exponent))
        }
        ExprKind::Binary(Binary::Divide, above, below) => {
            format!(r"\frac{{{}}}{{{}}}", part(above), part(below))
        }
        ExprKind::Binary(operator, left, right) => {
            let binding = operator.binding();
            // A negative second operand of + - · is set in parentheses, as is usual in print.
            let right = match operator {
                Binary::Add | Binary::Subtract | Binary::Multiply if negative(right) => {
                    parenthesised(&part(right))
                }
                _ => within(right, binding.tighter()),
            };
            let least = if binding == Binding::Comparison { binding.tighter() } else { binding };
            format!("{} {} {right}", within(left, least), sign(*operator))
        }
        ExprKind::Call(Function::Sqrt, arguments) => format!(r"\sqrt{{{}}}", list(arguments, &part)),
        ExprKind::Call(Function::Cbrt, arguments) => format!(r"\sqrt[3]{{{}}}", list(arguments, &part)),
        ExprKind::Call(Function::Abs, arguments) => format!(r"\left|{}\right|", list(arguments, &part)),
        ExprKind::Call(function, arguments) => {
            format!("{}{}", function_name(*function), parenthesised(&list(arguments, &part)))
        }
        ExprKind::Choose(condition, yes, no) => format!(
            r"\begin{{cases}} {} & \text{{if }} {} \\ {} & \text{{otherwise}} \end{{cases}}",
            part(yes),
            part(condition),
            part(no)
        ),
        ExprKind::Curve(name, argument) => {
            format!("{}{}", symbol(name).unwrap_or_else(|| upright(name)), parenthesised(&part(argument)))
        }
    }
}

/// As in plain text, but a fraction is one block, and a number with a unit or a power of ten is a product.
fn binding(expr: &Expr) -> Binding {
    match &expr.kind {
        ExprKind::Number { unit: Some(_), .. } => Binding::Product,
        ExprKind::Number { value, .. } if format!("{}", Plain(*value)).contains('e') => Binding::Product,
        ExprKind::Binary(Binary::Divide, ..) => Binding::Negation,
        _ => expr.binding(),
    }
}

fn negative(expr: &Expr) -> bool {
    match &expr.kind {
        ExprKind::Negate(_) => true,
        ExprKind::Binary(Binary::Multiply, left, _) => negative(left),
        _ => false,
    }
}

fn parenthesised(text: &str) -> String {
    format!(r"\left({text}\right)")
}

fn list(arguments: &[Expr], part: &dyn Fn(&Expr) -> String) -> String {
    arguments.iter().map(part).collect::<Vec<_>>().join(", ")
}

fn upright(name: &str) -> String {
    format!(r"\mathrm{{{}}}", name.replace('_', r"\_"))
}

const fn sign(operator: Binary) -> &'static str {
    match operator {
        Binary::Multiply => r"\cdot",
        Binary::LessOrEqual => r"\le",
        Binary::GreaterOrEqual => r"\ge",
        Binary::And => r"\land",
        Binary::Or => r"\lor",
        _ => operator.sign(),
    }
}

fn function_name(function: Function) -> String {
    match function {
        Function::Exp | Function::Ln | Function::Sin | Function::Cos | Function::Tan | Function::Tanh => {
            format!(r"\{}", function.name())
        }
        Function::Min | Function::Max => format!(r"\{}", function.name()),
        Function::Log10 => r"\log_{10}".to_owned(),
        Function::Atan => r"\arctan".to_owned(),
        _ => format!(r"\operatorname{{{}}}", function.name()),
    }
}

fn number(value: f64, unit: Option<&Unit>) -> String {
    let text = format!("{}", Plain(value));
    let number = match text.split_once('e') {
        None => text,
        Some(("1", exponent)) => format!("10^{{{exponent}}}"),
        Some((mantissa, exponent)) => format!(r"{mantissa} \cdot 10^{{{exponent}}}"),
    };
    unit.map_or(number.clone(), |unit| format!(r"{number}\,{}", unit_text(unit.text())))
}

/// A unit upright, with its powers raised and its products set apart.
fn unit_text(text: &str) -> String {
    let mut tex = String::from(r"\mathrm{");
    let mut rest = text.chars().peekable();
    while let Some(c) = rest.next() {
        match c {
            '^' => {
                tex.push_str("^{");
                let bracketed = rest.next_if_eq(&'(').is_some();
                while let Some(c) =
                    rest.next_if(|&c| c.is_ascii_digit() || "+-.".contains(c) || (bracketed && c == '/'))
                {
                    tex.push(c);
                }
                if bracketed {
                    let _ = rest.next_if_eq(&')');
                }
                tex.push('}');
            }
            ' ' | '·' | '*' => tex.push_str(r"\,"),
            '%' => tex.push_str(r"\%"),
            '°' => tex.push_str(r"{}^{\circ}"),
            'µ' | 'μ' => tex.push_str(r"\text{µ}"),
            'Å' => tex.push_str(r"\text{Å}"),
            'Ω' => tex.push_str(r"\Omega "),
            c => tex.push(c),
        }
    }
    tex.push('}');
    tex
}
