//! Characters to tokens. Signs of other notations are read as what they mean, with a fault that shows ours.

use std::ops::Range;

use super::tree::Binary;
use crate::text::Fault;

/// A piece of a formula and its bytes.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Token {
    pub(super) span: Range<usize>,
    pub(super) kind: TokenKind,
}

/// What a piece is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum TokenKind {
    /// A finite number, at least zero.
    Number(f64),
    /// Letters, digits and `_`: a name, a function or `infinity`.
    Word,
    /// `[...]` with its brackets: after a number its unit.
    Bracketed,
    /// An operator with two operands; `-` may also have one.
    Operator(Binary),
    /// `not`.
    Not,
    /// `(`
    Open,
    /// `)`
    Close,
    /// `,`
    Comma,
    /// Something that was reported; the parser says nothing more about it.
    Bad,
    /// The end of the text.
    End,
}

/// The text as tokens, the last one `End`, with every fault of its characters.
pub(super) fn tokens(text: &str) -> (Vec<Token>, Vec<Fault>) {
    let mut lexer = Lexer { text, at: 0, tokens: Vec::new(), faults: Vec::new() };
    while let Some(c) = lexer.rest().chars().next() {
        lexer.token(c);
    }
    lexer.push(text.len(), TokenKind::End);
    (lexer.tokens, lexer.faults)
}

/// A piece of the text for a message: short and without control characters.
pub(super) fn shown(text: &str) -> String {
    const LONGEST: usize = 40;
    let mut shown: String =
        text.chars().take(LONGEST).map(|c| if c.is_control() { ' ' } else { c }).collect();
    if text.chars().count() > LONGEST {
        shown.push('…');
    }
    shown
}

struct Lexer<'a> {
    text: &'a str,
    at: usize,
    tokens: Vec<Token>,
    faults: Vec<Fault>,
}

const NAMES: &str = "names of lower-case letters, digits and `_`, numbers, and the operators `+ - * / ^`";

/// Signs that mean an operator, the longest first; those with a text are refused and say how to write it.
const SIGNS: [(&str, TokenKind, Option<&str>); 43] = [
    ("===", TokenKind::Operator(Binary::Equal), Some("write `=`")),
    ("**", TokenKind::Operator(Binary::Power), Some("write `^`")),
    ("==", TokenKind::Operator(Binary::Equal), Some("write `=`")),
    ("!=", TokenKind::Operator(Binary::Equal), Some("write `not a = b`")),
    ("<>", TokenKind::Operator(Binary::Equal), Some("write `not a = b`")),
    ("<=", TokenKind::Operator(Binary::LessOrEqual), None),
    (">=", TokenKind::Operator(Binary::GreaterOrEqual), None),
    ("=<", TokenKind::Operator(Binary::LessOrEqual), Some("write `<=`")),
    ("=>", TokenKind::Operator(Binary::GreaterOrEqual), Some("write `>=`")),
    ("&&", TokenKind::Operator(Binary::And), Some("write `and`")),
    ("||", TokenKind::Operator(Binary::Or), Some("write `or`")),
    ("//", TokenKind::Operator(Binary::Divide), Some("write `/`")),
    ("+", TokenKind::Operator(Binary::Add), None),
    ("-", TokenKind::Operator(Binary::Subtract), None),
    ("\u{2212}", TokenKind::Operator(Binary::Subtract), None),
    ("*", TokenKind::Operator(Binary::Multiply), None),
    ("×", TokenKind::Operator(Binary::Multiply), None),
    ("·", TokenKind::Operator(Binary::Multiply), None),
    ("\u{22c5}", TokenKind::Operator(Binary::Multiply), None),
    ("/", TokenKind::Operator(Binary::Divide), None),
    ("^", TokenKind::Operator(Binary::Power), None),
    ("<", TokenKind::Operator(Binary::Less), None),
    (">", TokenKind::Operator(Binary::Greater), None),
    ("=", TokenKind::Operator(Binary::Equal), None),
    ("(", TokenKind::Open, None),
    (")", TokenKind::Close, None),
    (",", TokenKind::Comma, None),
    ("\u{2013}", TokenKind::Operator(Binary::Subtract), Some("write `-`")),
    ("\u{2014}", TokenKind::Operator(Binary::Subtract), Some("write `-`")),
    ("÷", TokenKind::Operator(Binary::Divide), Some("write `/`")),
    ("≤", TokenKind::Operator(Binary::LessOrEqual), Some("write `<=`")),
    ("≥", TokenKind::Operator(Binary::GreaterOrEqual), Some("write `>=`")),
    ("≠", TokenKind::Operator(Binary::Equal), Some("write `not a = b`")),
    ("&", TokenKind::Operator(Binary::And), Some("write `and`")),
    ("|", TokenKind::Operator(Binary::Or), Some("write `or`")),
    ("!", TokenKind::Not, Some("write `not`")),
    ("%", TokenKind::Bad, Some("write a share as a number, such as `0.2`")),
    ("∞", TokenKind::Bad, Some("write `infinity`")),
    ("√", TokenKind::Bad, Some("write `sqrt(x)`")),
    ("?", TokenKind::Bad, Some("write `choose(condition, a, b)`")),
    ("{", TokenKind::Bad, Some("write `(`")),
    ("}", TokenKind::Bad, Some("write `)`")),
    ("]", TokenKind::Bad, Some("a unit in brackets, such as `1 [kg]`")),
];

impl<'a> Lexer<'a> {
    fn rest(&self) -> &'a str {
        &self.text[self.at..]
    }

    /// Adds a token that ends at `end` and goes on from there.
    fn push(&mut self, end: usize, kind: TokenKind) {
        self.tokens.push(Token { span: self.at..end, kind });
        self.at = end;
    }

    /// Reads one token or blank that starts with `c`.
    fn token(&mut self, c: char) {
        if c.is_whitespace() {
            self.at += c.len_utf8();
        } else if c.is_ascii_digit()
            || (c == '.' && self.rest()[1..].starts_with(|c: char| c.is_ascii_digit()))
        {
            self.number();
        } else if c.is_alphabetic() || c == '_' {
            self.word();
        } else if c == '[' {
            self.bracketed();
        } else if power_digit(c) {
            self.raised_or_lowered();
        } else if let Some((sign, kind, repair)) =
            SIGNS.iter().find(|(sign, ..)| self.rest().starts_with(sign))
        {
            if let Some(repair) = repair {
                let span = self.at..self.at + sign.len();
                let message = match kind {
                    TokenKind::Bad => format!("`{sign}` cannot stand in a formula"),
                    _ => format!("`{sign}` is no sign of the formula language"),
                };
                self.faults.push(Fault::new(span, message).expected(*repair));
            }
            self.push(self.at + sign.len(), *kind);
        } else {
            self.stray(c);
        }
    }

    fn number(&mut self) {
        let rest = self.rest();
        let length = number_length(rest);
        let (written, after) = rest.split_at(length);
        let tail =
            after.len() - after.trim_start_matches(|c: char| c.is_ascii_digit() || "._".contains(c)).len();
        let grouped = after.starts_with('_') && after[1..].starts_with(|c: char| c.is_ascii_digit());
        let end = self.at + length;
        let found = |end: usize| shown(&self.text[self.at..end]);
        let fault = if grouped {
            let digits = rest[..length + tail].replace('_', "");
            Some((
                end + tail,
                format!("`{}` groups its digits", found(end + tail)),
                format!("write `{}`", shown(&digits)),
            ))
        } else if written.starts_with('.') {
            Some((
                end,
                format!("`{}` has no digit before its point", found(end)),
                format!("write `0{}`", found(end)),
            ))
        } else if after.starts_with('.') {
            let repair = match tail {
                1 => format!("write `{}` or `{0}.0`", shown(written)),
                _ => "a number has one point at most".to_owned(),
            };
            Some((end + tail, format!("`{}` is not a number", found(end + tail)), repair))
        } else {
            None
        };
        if let Some((end, message, expected)) = fault {
            self.faults.push(Fault::new(self.at..end, message).expected(expected));
            self.push(end, TokenKind::Bad);
            return;
        }
        let value: f64 =
            written.parse().expect("digits, a point between digits and an exponent make a number");
        let mantissa = written.split(['e', 'E']).next().unwrap_or(written);
        let vanishes = value == 0.0 && mantissa.contains(|c: char| c.is_ascii_digit() && c != '0');
        if value.is_finite() && !vanishes {
            self.push(end, TokenKind::Number(value));
        } else {
            let size = if vanishes { "small" } else { "large" };
            self.faults.push(
                Fault::new(self.at..end, format!("`{}` is too {size} for a number", found(end)))
                    .expected("a size between 1e-307 and 1e308"),
            );
            self.push(end, TokenKind::Bad);
        }
    }

    fn word(&mut self) {
        let rest = self.rest();
        let length = rest.len()
            - rest.trim_start_matches(|c: char| c.is_alphabetic() || c.is_ascii_digit() || c == '_').len();
        let kind = match &rest[..length] {
            "and" => TokenKind::Operator(Binary::And),
            "or" => TokenKind::Operator(Binary::Or),
            "not" => TokenKind::Not,
            _ => TokenKind::Word,
        };
        self.push(self.at + length, kind);
    }

    fn bracketed(&mut self) {
        if let Some(length) = self.rest().find(']') {
            self.push(self.at + length + 1, TokenKind::Bracketed);
        } else {
            self.faults
                .push(Fault::new(self.at..self.at + 1, "`[` is never closed").expected("`]` after the unit"));
            self.push(self.text.len(), TokenKind::Bad);
        }
    }

    /// `²` and the like: one fault for the whole run.
    fn raised_or_lowered(&mut self) {
        let rest = self.rest();
        let length = rest.len() - rest.trim_start_matches(power_digit).len();
        let plain: String = rest[..length].chars().filter_map(plain_digit).collect();
        let raised = plain.len() == rest[..length].chars().count() && !plain.is_empty();
        let expected = if raised { format!("write `^{}`", shown(&plain)) } else { NAMES.to_owned() };
        self.faults.push(
            Fault::new(
                self.at..self.at + length,
                format!("`{}` cannot stand in a formula", shown(&rest[..length])),
            )
            .expected(expected),
        );
        self.push(self.at + length, TokenKind::Bad);
    }

    fn stray(&mut self, c: char) {
        let found = if c.is_ascii_graphic() || (!c.is_ascii() && c.is_alphanumeric()) || visible(c) {
            format!("`{c}`")
        } else {
            format!("the character U+{:04X}", u32::from(c))
        };
        self.faults.push(
            Fault::new(self.at..self.at + c.len_utf8(), format!("{found} cannot stand in a formula"))
                .expected(NAMES),
        );
        self.push(self.at + c.len_utf8(), TokenKind::Bad);
    }
}

/// The bytes of the number that `text` starts with: digits, a point between digits, an exponent with digits.
fn number_length(text: &str) -> usize {
    let digits = |from: usize| text[from..].bytes().take_while(u8::is_ascii_digit).count();
    let mut end = digits(0);
    if text[end..].starts_with('.') && digits(end + 1) > 0 {
        end += 1 + digits(end + 1);
    }
    if text[end..].starts_with(['e', 'E']) {
        let sign = usize::from(text[end + 1..].starts_with(['+', '-']));
        let exponent = digits(end + 1 + sign);
        if exponent > 0 {
            end += 1 + sign + exponent;
        }
    }
    end
}

/// Digits and signs above or below the line.
fn power_digit(c: char) -> bool {
    plain_digit(c).is_some() || ('\u{2080}'..='\u{208e}').contains(&c)
}

/// The plain digit or sign that is meant by one above the line.
fn plain_digit(c: char) -> Option<char> {
    match c {
        '¹' => Some('1'),
        '²' => Some('2'),
        '³' => Some('3'),
        '\u{207b}' => Some('-'),
        '\u{2070}' | '\u{2074}'..='\u{2079}' => char::from_digit(u32::from(c) - 0x2070, 10),
        _ => None,
    }
}

/// Whether a character shows on paper as a sign of its own: Latin-1 signs, punctuation, arrows, operators.
fn visible(c: char) -> bool {
    matches!(c, '\u{a1}'..='\u{ac}' | '\u{ae}'..='\u{bf}' | '\u{2010}'..='\u{2027}' | '\u{2030}'..='\u{205e}'
        | '\u{2190}'..='\u{23ff}')
}

#[cfg(test)]
mod tests {
    use super::{TokenKind, number_length, shown, tokens};
    use crate::formula::Binary;

    #[test]
    fn signs_of_papers_are_read_as_operators() {
        let (found, faults) = tokens("a × b · c − 2");
        assert!(faults.is_empty());
        let operators: Vec<_> = found
            .iter()
            .filter_map(|token| match token.kind {
                TokenKind::Operator(operator) => Some(operator),
                _ => None,
            })
            .collect();
        assert_eq!(operators, [Binary::Multiply, Binary::Multiply, Binary::Subtract]);
    }

    #[test]
    fn every_token_knows_its_bytes() {
        let (found, _) = tokens("1e-3 [kg] <= µ");
        let spans: Vec<_> = found.iter().map(|token| (token.span.clone(), token.kind)).collect();
        assert_eq!(
            spans,
            [
                (0..4, TokenKind::Number(1e-3)),
                (5..9, TokenKind::Bracketed),
                (10..12, TokenKind::Operator(Binary::LessOrEqual)),
                (13..15, TokenKind::Word),
                (15..15, TokenKind::End),
            ]
        );
    }

    #[test]
    fn a_number_ends_where_its_exponent_has_no_digits() {
        for (text, length) in
            [("1", 1), ("2.5", 3), ("1e-3x", 4), ("1E+3", 4), ("2e", 1), ("2e+", 1), ("3.", 1)]
        {
            assert_eq!(number_length(text), length, "{text}");
        }
    }

    #[test]
    fn long_or_invisible_text_is_cut_for_messages() {
        assert_eq!(shown("a\tb"), "a b");
        assert_eq!(shown(&"x".repeat(50)).chars().count(), 41);
    }
}
