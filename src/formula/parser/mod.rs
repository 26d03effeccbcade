//! Tokens to a tree, by precedence; names are looked up on the way.
//!
//! After a fault the parser goes on with what was most likely meant. A node that stands for something faulty is
//! listed in `broken`: only its parts are checked for dimensions, so that one mistake is told once.

mod operands;
mod recovery;

use std::ops::Range;

use super::MOST_LEVELS;
use super::functions::Function;
use super::inference::Scope;
use super::powers::{ExponentFault, exact_exponent};
use super::tokens::{Token, TokenKind, shown, tokens};
use super::tree::{Binary, Binding, Expr, ExprKind};
use crate::quantity::Exponent;
use crate::text::Fault;

/// How deep parentheses, calls, signs and exponents may nest.
const DEEPEST: usize = 64;

/// What the parser makes of a text. The tree means something only when there are no faults.
pub(super) struct Parsed {
    pub(super) root: Expr,
    pub(super) broken: Vec<Range<usize>>,
    pub(super) faults: Vec<Fault>,
}

/// Reads a whole formula.
pub(super) fn parse(text: &str, scope: &dyn Scope) -> Parsed {
    let (tokens, faults) = tokens(text);
    let mut parser =
        Parser { text, tokens, at: 0, scope, faults, broken: Vec::new(), depth: 0, too_deep: false };
    let root = parser.whole();
    Parsed { root, broken: parser.broken, faults: parser.faults }
}

struct Parser<'a> {
    text: &'a str,
    tokens: Vec<Token>,
    at: usize,
    scope: &'a dyn Scope,
    faults: Vec<Fault>,
    broken: Vec<Range<usize>>,
    depth: usize,
    /// The formula nests too deeply: reported, the rest is not read.
    too_deep: bool,
}

impl<'a> Parser<'a> {
    fn kind(&self) -> TokenKind {
        self.tokens[self.at].kind
    }

    fn span(&self) -> Range<usize> {
        self.tokens[self.at].span.clone()
    }

    /// The token before this one.
    fn previous(&self) -> Option<&Token> {
        self.at.checked_sub(1).map(|at| &self.tokens[at])
    }

    /// Where the last token read ends.
    fn end(&self) -> usize {
        self.previous().map_or(0, |token| token.span.end)
    }

    /// The bytes from `start` to the last token read.
    fn since(&self, start: usize) -> Range<usize> {
        start..self.end().max(start)
    }

    fn advance(&mut self) {
        // The last token is the end, which is never passed.
        self.at = (self.at + 1).min(self.tokens.len() - 1);
    }

    fn fault(&mut self, fault: Fault) {
        if !self.too_deep {
            self.faults.push(fault);
        }
    }

    /// A node that stands for something faulty. Its parts are kept, to be checked for themselves.
    fn broken(&mut self, span: Range<usize>, mut parts: Vec<Expr>) -> Expr {
        self.broken.push(span.clone());
        let kind = match parts.len() {
            0 => ExprKind::Infinity,
            1 => ExprKind::Negate(Box::new(parts.remove(0))),
            _ => ExprKind::Call(Function::Max, parts),
        };
        Expr { span, kind }
    }

    fn whole(&mut self) -> Expr {
        if self.kind() == TokenKind::End {
            self.fault(Fault::new(0..self.text.len(), "the formula is empty").expected("an expression"));
            return self.broken(0..0, Vec::new());
        }
        let mut root = self.expression(Binding::Or);
        loop {
            match self.kind() {
                TokenKind::Comma => root = self.misplaced_comma(root, "an operator, or the end"),
                TokenKind::Close => {
                    self.fault(
                        Fault::new(self.span(), "`)` closes nothing").expected("an operator, or the end"),
                    );
                    self.advance();
                    root = self.operators(root, Binding::Or);
                }
                // `operators` stops at nothing else.
                _ => return root,
            }
        }
    }

    /// An expression whose operators bind at least this tightly.
    fn expression(&mut self, least: Binding) -> Expr {
        let left = self.operand();
        self.operators(left, least)
    }

    /// Goes one level down, unless that is too deep.
    fn nested(&mut self, read: impl FnOnce(&mut Self) -> Expr) -> Expr {
        if self.depth == DEEPEST {
            self.fault(
                Fault::new(self.span(), format!("the formula nests more than {DEEPEST} levels deep"))
                    .expected("parts of it as relations of their own"),
            );
            self.too_deep = true;
            self.at = self.tokens.len() - 1;
            return self.broken(self.span(), Vec::new());
        }
        self.depth += 1;
        let expr = read(self);
        self.depth -= 1;
        expr
    }

    /// Operators after `left` that bind at least as tightly as `least`.
    fn operators(&mut self, mut left: Expr, least: Binding) -> Expr {
        let mut compared = false;
        loop {
            left = match self.kind() {
                TokenKind::Operator(operator) if operator.binding() >= least => {
                    if operator.binding() == Binding::Comparison && std::mem::replace(&mut compared, true) {
                        self.chained(left)
                    } else {
                        self.advance();
                        self.binary(operator, left)
                    }
                }
                TokenKind::Number(_) | TokenKind::Word | TokenKind::Open if Binding::Product >= least => {
                    self.side_by_side(left)
                }
                TokenKind::Not if Binding::Comparison >= least => self.misplaced_not(left),
                TokenKind::Bracketed => self.misplaced_unit(left),
                TokenKind::Bad if Binding::Product >= least => self.past_bad(left),
                _ => return left,
            };
        }
    }

    fn binary(&mut self, operator: Binary, left: Expr) -> Expr {
        if operator == Binary::Power {
            return self.power(left);
        }
        let right = self.expression(operator.binding().tighter());
        let span = left.span.start..right.span.end.max(left.span.end);
        Expr { span, kind: ExprKind::Binary(operator, Box::new(left), Box::new(right)) }
    }

    /// Refuses by `None` what the whole formula is refused for anyway: too long a row of operators.
    fn exact(exponent: &Expr) -> Result<Option<Exponent>, ExponentFault> {
        if exponent.levels() > MOST_LEVELS { Ok(None) } else { exact_exponent(exponent) }
    }

    fn power(&mut self, base: Expr) -> Expr {
        let exponent = self.nested(|parser| parser.expression(Binding::Negation));
        let span = base.span.start..exponent.span.end.max(base.span.end);
        let fault = match Self::exact(&exponent) {
            Ok(Some(exact)) => {
                return Expr { span, kind: ExprKind::Power(Box::new(base), exact, Box::new(exponent)) };
            }
            Ok(None) => {
                let kind = ExprKind::Binary(Binary::Power, Box::new(base), Box::new(exponent));
                return Expr { span, kind };
            }
            Err(ExponentFault::DivisionByZero) => {
                Fault::new(exponent.span, "the exponent divides by zero").expected("a ratio of whole numbers")
            }
            Err(ExponentFault::TooLarge) => {
                let written = shown(&self.text[exponent.span.clone()]);
                Fault::new(
                    exponent.span,
                    format!("the exponent `{written}` is too large or has too many decimals"),
                )
                .expected("a ratio of whole numbers below 2147483648")
            }
        };
        self.fault(fault);
        self.broken(span, vec![base])
    }
}
