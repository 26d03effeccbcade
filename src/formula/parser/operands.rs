//! What an operator joins: numbers with their units, names, calls, parentheses, signs.

use std::ops::Range;

use super::Parser;
use crate::formula::functions::is_reserved;
use crate::formula::naming::{resolve, unknown_name, without_parentheses};
use crate::formula::printing::Plain;
use crate::formula::tokens::{TokenKind, shown};
use crate::formula::tree::{Binary, Binding, Expr, ExprKind};
use crate::quantity::Unit;
use crate::text::Fault;

impl<'a> Parser<'a> {
    pub(super) fn operand(&mut self) -> Expr {
        let span = self.span();
        match self.kind() {
            TokenKind::Number(value) => {
                self.advance();
                self.number(value, span)
            }
            TokenKind::Word => self.word(),
            TokenKind::Open => self.parenthesised(),
            TokenKind::Operator(Binary::Subtract) => {
                self.advance();
                let inner = self.nested(|parser| parser.expression(Binding::Negation));
                Expr { span: span.start..inner.span.end, kind: ExprKind::Negate(Box::new(inner)) }
            }
            TokenKind::Not => {
                self.advance();
                let inner = self.nested(|parser| parser.expression(Binding::Comparison));
                Expr { span: span.start..inner.span.end, kind: ExprKind::Not(Box::new(inner)) }
            }
            TokenKind::Bracketed => {
                self.advance();
                self.fault(
                    Fault::new(span.clone(), "a unit stands after a number only").expected("write `1 [kg]`"),
                );
                self.broken(span, Vec::new())
            }
            TokenKind::Bad => {
                while self.kind() == TokenKind::Bad {
                    self.advance();
                }
                let parts = if self.operand_begins() { vec![self.operand()] } else { Vec::new() };
                self.broken(self.since(span.start), parts)
            }
            TokenKind::Operator(_) | TokenKind::Close | TokenKind::Comma | TokenKind::End => self.missing(),
        }
    }

    fn parenthesised(&mut self) -> Expr {
        let open = self.span();
        self.advance();
        let mut inner = self.nested(|parser| parser.expression(Binding::Or));
        while self.kind() == TokenKind::Comma {
            inner = self.misplaced_comma(inner, "an operator, or `)`");
        }
        self.close(open.clone());
        let span = self.since(open.start);
        if self.broken.contains(&inner.span) {
            self.broken.push(span.clone());
        }
        Expr { span, kind: inner.kind }
    }

    fn close(&mut self, open: Range<usize>) {
        if self.kind() == TokenKind::Close {
            self.advance();
        } else {
            self.fault(Fault::new(open, "`(` is never closed").expected("`)`"));
        }
    }

    fn number(&mut self, value: f64, span: Range<usize>) -> Expr {
        if self.kind() != TokenKind::Bracketed {
            return Expr { span, kind: ExprKind::Number { value, unit: None, si: value } };
        }
        let bracketed = self.span();
        self.advance();
        let whole = span.start..bracketed.end;
        let inner = &self.text[bracketed.start + 1..bracketed.end - 1];
        match unit_of(value, inner, bracketed.start + 1) {
            Ok((unit, si)) => Expr { span: whole, kind: ExprKind::Number { value, unit: Some(unit), si } },
            Err(fault) => {
                self.fault(fault);
                self.broken(whole, Vec::new())
            }
        }
    }

    fn word(&mut self) -> Expr {
        let span = self.span();
        let name = &self.text[span.clone()];
        self.advance();
        match self.kind() {
            TokenKind::Open => self.call(name, span),
            TokenKind::Bracketed => {
                let bracketed = self.span();
                self.advance();
                self.fault(
                    Fault::new(bracketed, "indexed names are not known here")
                        .expected("a name alone; a unit stands after a number only"),
                );
                if self.scope.dimension_of(name).is_none() {
                    let fault = unknown_name(name, span.clone(), self.scope);
                    self.fault(fault);
                }
                self.broken(self.since(span.start), Vec::new())
            }
            _ if name == "infinity" => Expr { span, kind: ExprKind::Infinity },
            _ if is_reserved(name) => self.function_alone(name, span),
            _ if self.scope.dimension_of(name).is_some() => {
                Expr { span, kind: ExprKind::Name(name.to_owned()) }
            }
            _ => {
                let fault = unknown_name(name, span.clone(), self.scope);
                self.fault(fault);
                self.broken(span, Vec::new())
            }
        }
    }

    /// A function's name without parentheses; an operand right after it is taken as its argument.
    fn function_alone(&mut self, name: &str, span: Range<usize>) -> Expr {
        self.fault(without_parentheses(name, span.clone()));
        let parts = if self.operand_begins() { vec![self.nested(Self::operand)] } else { Vec::new() };
        self.broken(self.since(span.start), parts)
    }

    fn call(&mut self, name: &'a str, span: Range<usize>) -> Expr {
        let open = self.span();
        let first = self.at;
        self.advance();
        let mut arguments = Vec::new();
        if self.kind() != TokenKind::Close {
            loop {
                arguments.push(self.nested(|parser| parser.expression(Binding::Or)));
                if self.kind() != TokenKind::Comma {
                    break;
                }
                self.advance();
            }
        }
        self.close(open);
        let whole = self.since(span.start);
        // What could not be read inside may have been a comma.
        let unreadable = self.tokens[first..self.at].iter().any(|token| token.kind == TokenKind::Bad);
        match resolve(name, span, whole.clone(), arguments, self.scope) {
            Ok(kind) => Expr { span: whole, kind },
            Err((fault, arguments)) => {
                if fault.span != whole || !unreadable {
                    self.fault(*fault);
                }
                self.broken(whole, arguments)
            }
        }
    }
}

/// The unit in brackets that starts at byte `start`, and the SI value of `value` in it.
fn unit_of(value: f64, text: &str, start: usize) -> Result<(Unit, f64), Fault> {
    let span = start..start + text.len();
    if text.trim().is_empty() {
        return Err(Fault::new(start - 1..span.end + 1, "the brackets hold no unit")
            .expected("a unit such as `[kg]`, or the number alone"));
    }
    let unit = Unit::read(text).map_err(|mut fault| {
        fault.span = start + fault.span.start..start + fault.span.end;
        fault
    })?;
    let si = unit.to_si(value);
    if unit.offset() != 0.0 {
        return Err(Fault::new(
            span,
            format!("`{}` has a zero of its own and stands in no formula", unit.text()),
        )
        .expected(format!("write `{} [K]`, or `K` for a difference", (si * 1e6).round() / 1e6)));
    }
    let size = if si.is_finite() { "small" } else { "large" };
    if !si.is_finite() || (si == 0.0 && value != 0.0) {
        let written = format!("`{} [{}]` is too {size} for a number", Plain(value), shown(text));
        return Err(Fault::new(span, written).expected("another unit"));
    }
    Ok((unit, si))
}
