//! Going on after a fault with what was most likely meant.

use super::Parser;
use crate::formula::tokens::{Token, TokenKind, shown};
use crate::formula::tree::{Binary, Binding, Expr};
use crate::quantity::Unit;
use crate::text::Fault;

impl Parser<'_> {
    pub(super) fn operand_begins(&self) -> bool {
        matches!(self.kind(), TokenKind::Number(_) | TokenKind::Word | TokenKind::Open | TokenKind::Not)
    }

    /// An operand that is not there. What stands there instead is left to the caller.
    pub(super) fn missing(&mut self) -> Expr {
        let here = self.span();
        let (span, side) = match self.previous() {
            Some(token) if token.kind == TokenKind::Bad => {
                return self.broken(here.start..here.start, Vec::new());
            }
            Some(token) => (token.span.clone(), "after"),
            None => (here.clone(), "before"),
        };
        let found = shown(&self.text[span.clone()]);
        self.fault(
            Fault::new(span, format!("a value is missing {side} `{found}`"))
                .expected("a number, a name, a function or `(`"),
        );
        self.broken(here.start..here.start, Vec::new())
    }

    /// Two operands with nothing between them: a unit without brackets, or a product without its sign.
    pub(super) fn side_by_side(&mut self, left: Expr) -> Expr {
        let here = self.span();
        let before = self.tokens[self.at.saturating_sub(1)].clone();
        let written = shown(&self.text[before.span.clone()]);
        if matches!(before.kind, TokenKind::Number(_))
            && let Some(tokens) = self.bare_unit()
        {
            let unit = here.start..self.tokens[self.at + tokens - 1].span.end;
            let repair = format!("write `{written} [{}]`", shown(&self.text[unit.clone()]));
            self.fault(Fault::new(unit, "the unit of a number stands in brackets").expected(repair));
            self.at += tokens;
            return self.broken(self.since(left.span.start), vec![left]);
        }
        let next = shown(&self.text[here.clone()]);
        let simple = |kind| matches!(kind, TokenKind::Number(_) | TokenKind::Word);
        let repair = if simple(before.kind) && simple(self.kind()) {
            format!("write `{written} * {next}`")
        } else {
            "write `*` there".to_owned()
        };
        self.fault(
            Fault::new(
                before.span.start..here.end,
                format!("an operator is missing between `{written}` and `{next}`"),
            )
            .expected(repair),
        );
        self.binary(Binary::Multiply, left)
    }

    /// How many tokens from here on make a unit, at most; none if the first is a known name.
    fn bare_unit(&self) -> Option<usize> {
        const LONGEST: usize = 12;
        let start = self.span().start;
        let known = |token: &Token| {
            token.kind == TokenKind::Word && self.scope.dimension_of(&self.text[token.span.clone()]).is_some()
        };
        let tokens = self.tokens[self.at..].iter().take(LONGEST).take_while(|token| !known(token)).count();
        let reads = |end: usize| {
            let token = &self.tokens[self.at + end - 1];
            token.kind != TokenKind::End && Unit::read(&self.text[start..token.span.end]).is_ok()
        };
        (self.kind() == TokenKind::Word).then(|| (1..=tokens).rev().find(|&end| reads(end)))?
    }

    /// A comma outside a call, perhaps meant as a decimal point; what follows it is read for itself.
    pub(super) fn misplaced_comma(&mut self, left: Expr, instead: &str) -> Expr {
        let expected = self.decimal_comma().unwrap_or_else(|| instead.to_owned());
        self.fault(
            Fault::new(self.span(), "`,` stands between the arguments of a function only").expected(expected),
        );
        self.advance();
        let next = self.expression(Binding::Or);
        self.broken(self.since(left.span.start), vec![left, next])
    }

    /// How to write `2,5`, if the comma stands between digits.
    fn decimal_comma(&self) -> Option<String> {
        let [.., before, _, after] = self.tokens.get(..self.at + 2)? else { return None };
        let both = matches!((before.kind, after.kind), (TokenKind::Number(_), TokenKind::Number(_)));
        let touching = before.span.end == self.span().start && after.span.start == self.span().end;
        (both && touching).then(|| {
            let (whole, decimals) = (&self.text[before.span.clone()], &self.text[after.span.clone()]);
            format!("write `{}.{}`", shown(whole), shown(decimals))
        })
    }

    /// A comparison of a comparison.
    pub(super) fn chained(&mut self, left: Expr) -> Expr {
        self.fault(
            Fault::new(self.span(), "comparisons cannot be chained").expected("write `a < b and b < c`"),
        );
        self.advance();
        let right = self.expression(Binding::Sum);
        self.broken(left.span.start..right.span.end, vec![left, right])
    }

    /// `not` where an operator is needed.
    pub(super) fn misplaced_not(&mut self, left: Expr) -> Expr {
        self.fault(Fault::new(self.span(), "an operator is missing before `not`").expected("`and` or `or`"));
        let right = self.operand();
        self.broken(left.span.start..right.span.end, vec![left, right])
    }

    /// `[kg]` after something that is neither a number nor a name.
    pub(super) fn misplaced_unit(&mut self, left: Expr) -> Expr {
        self.fault(Fault::new(self.span(), "a unit stands after a number only").expected("an operator"));
        self.advance();
        self.broken(self.since(left.span.start), vec![left])
    }

    /// Something unreadable, reported before; it may have been an operator.
    pub(super) fn past_bad(&mut self, left: Expr) -> Expr {
        self.advance();
        let mut parts = vec![left];
        if self.operand_begins() {
            parts.push(self.expression(Binding::Negation));
        }
        self.broken(self.since(parts[0].span.start), parts)
    }
}
