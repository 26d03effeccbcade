//! What a name means where it stands, and what to say when it means nothing.

use std::ops::Range;

use super::functions::{Arity, Function, is_reserved};
use super::inference::Scope;
use super::tokens::shown;
use super::tree::{Expr, ExprKind};
use crate::text::Fault;

/// Functions of other notations, and what is written here.
const ELSEWHERE: [(&str, &str); 9] = [
    ("log", "write `ln(x)` or `log10(x)`"),
    ("log2", "write `ln(x) / ln(2)`"),
    ("pow", "write `x^y`"),
    ("if", "write `choose(condition, a, b)`"),
    ("arctan", "write `atan(x)`"),
    ("minimum", "write `min(a, b)`"),
    ("maximum", "write `max(a, b)`"),
    ("exp10", "write `10^x`"),
    ("square", "write `x^2`"),
];

const NAME: &str = "lower-case letters, digits and `_`, not a digit first";

/// What a call is.
///
/// # Errors
/// The fault, at the name or at the whole call, and the arguments.
pub(super) fn resolve(
    name: &str,
    span: Range<usize>,
    whole: Range<usize>,
    arguments: Vec<Expr>,
    scope: &dyn Scope,
) -> Result<ExprKind, (Box<Fault>, Vec<Expr>)> {
    let count = arguments.len();
    let miscounted = |takes: &str| {
        let name = shown(name);
        Box::new(
            Fault::new(whole.clone(), format!("`{name}` takes {takes}, not {}", counted(count)))
                .expected(format!("`{}`", example(&name))),
        )
    };
    if name == "choose" {
        return match <[Expr; 3]>::try_from(arguments) {
            Ok([condition, yes, no]) => Ok(ExprKind::Choose(condition.into(), yes.into(), no.into())),
            Err(arguments) => Err((miscounted("a condition and two values"), arguments)),
        };
    }
    if let Some(function) = Function::from_name(name) {
        return match (function.arity(), count) {
            (Arity::One, 1) | (Arity::TwoOrMore, 2..) => Ok(ExprKind::Call(function, arguments)),
            (Arity::One, _) => Err((miscounted("one argument"), arguments)),
            (Arity::TwoOrMore, _) => Err((miscounted("two arguments or more"), arguments)),
        };
    }
    if scope.curve(name).is_some() {
        return match <[Expr; 1]>::try_from(arguments) {
            Ok([argument]) => Ok(ExprKind::Curve(name.to_owned(), argument.into())),
            Err(arguments) => Err((miscounted("one argument"), arguments)),
        };
    }
    if scope.dimension_of(name).is_some() || name == "infinity" {
        let fault = Fault::new(span, format!("`{name}` is not a function"))
            .expected(format!("an operator after it, such as `{name} * (`"));
        return Err((Box::new(fault), arguments));
    }
    Err((Box::new(unknown_function(name, span, scope)), arguments))
}

/// A name that is not in scope, or is no name at all.
pub(super) fn unknown_name(name: &str, span: Range<usize>, scope: &dyn Scope) -> Fault {
    let names = scope.names();
    let known = names.iter().map(String::as_str).filter(|name| scope.dimension_of(name).is_some());
    let known = known.chain(["infinity"]);
    let meant = if name == "inf" { Some("infinity".to_owned()) } else { nearest(name, known) };
    if scope.curve(name).is_some() {
        return Fault::new(span, format!("`{name}` is a curve and needs its argument"))
            .expected(format!("`{name}(x)`"));
    }
    if !is_name(name) {
        return Fault::new(span, format!("`{}` is not a name", shown(name))).expected(NAME).nearest(meant);
    }
    Fault::new(span, format!("unknown name `{}`", shown(name)))
        .expected("a quantity, parameter or constant")
        .nearest(meant)
}

fn unknown_function(name: &str, span: Range<usize>, scope: &dyn Scope) -> Fault {
    let fault = Fault::new(span, format!("unknown function `{}`", shown(name)));
    if let Some((_, repair)) = ELSEWHERE.iter().find(|(other, _)| *other == name) {
        return fault.expected(*repair);
    }
    let names = scope.names();
    let curves = names.iter().map(String::as_str).filter(|name| scope.curve(name).is_some());
    let known: Vec<&str> = Function::ALL.into_iter().map(Function::name).chain(["choose"]).collect();
    let meant = nearest(name, known.into_iter().chain(curves));
    fault.expected("a built-in function or a curve of the entry").nearest(meant)
}

/// The nearest known name, if `name` is of a length that names have; capitals do not count.
fn nearest<'a>(name: &str, known: impl IntoIterator<Item = &'a str>) -> Option<String> {
    const LONGEST: usize = 64;
    if name.len() <= LONGEST { crate::text::nearest(&name.to_lowercase(), known) } else { None }
}

/// A function's name, or a word kept for one, without parentheses.
pub(super) fn without_parentheses(name: &str, span: Range<usize>) -> Fault {
    if Function::from_name(name).is_some() || name == "choose" {
        Fault::new(span, format!("`{name}` is a function and needs parentheses"))
            .expected(format!("`{}`", example(name)))
    } else {
        Fault::new(span, format!("`{name}` is a word of the formula language and cannot be a name"))
            .expected("a quantity, parameter or constant")
    }
}

/// Whether this can be the name of a quantity, parameter, constant or curve: `[a-z_][a-z0-9_]*`, not reserved.
#[must_use]
pub fn can_be_name(name: &str) -> bool {
    is_name(name) && !is_reserved(name)
}

fn is_name(name: &str) -> bool {
    let letter = |c: char| c.is_ascii_lowercase() || c == '_';
    name.starts_with(letter) && name.chars().all(|c| letter(c) || c.is_ascii_digit())
}

/// How a call of this function looks.
fn example(name: &str) -> String {
    match (name, Function::from_name(name).map(Function::arity)) {
        ("choose", _) => "choose(condition, a, b)".to_owned(),
        (_, Some(Arity::TwoOrMore)) => format!("{name}(a, b)"),
        _ => format!("{name}(x)"),
    }
}

fn counted(count: usize) -> String {
    match count {
        0 => "none".to_owned(),
        1 => "one".to_owned(),
        2 => "two".to_owned(),
        3 => "three".to_owned(),
        _ => count.to_string(),
    }
}
