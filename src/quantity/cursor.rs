//! A place in a short text that moves on as signs are taken.

use std::ops::Range;

/// A text and how far it has been read.
#[derive(Clone, Copy)]
pub(in crate::quantity) struct Cursor<'a> {
    pub(in crate::quantity) text: &'a str,
    /// The byte reached, on a character boundary.
    pub(in crate::quantity) at: usize,
}

impl<'a> Cursor<'a> {
    pub(in crate::quantity) const fn new(text: &'a str, at: usize) -> Self {
        Self { text, at }
    }

    /// What is left.
    pub(in crate::quantity) fn rest(&self) -> &'a str {
        &self.text[self.at..]
    }

    pub(in crate::quantity) fn peek(&self) -> Option<char> {
        self.rest().chars().next()
    }

    /// Takes the next character if it is wanted.
    pub(in crate::quantity) fn takes(&mut self, wanted: impl Fn(char) -> bool) -> bool {
        match self.peek() {
            Some(c) if wanted(c) => {
                self.at += c.len_utf8();
                true
            }
            _ => false,
        }
    }

    /// Takes the characters that are wanted and gives their bytes.
    pub(in crate::quantity) fn run(&mut self, wanted: impl Fn(char) -> bool) -> Range<usize> {
        let start = self.at;
        while self.takes(&wanted) {}
        start..self.at
    }

    /// Takes ASCII digits and gives their bytes.
    pub(in crate::quantity) fn digits(&mut self) -> Range<usize> {
        self.run(|c| c.is_ascii_digit())
    }

    pub(in crate::quantity) fn skip_blanks(&mut self) {
        self.run(char::is_whitespace);
    }

    /// The end of the next character.
    pub(in crate::quantity) fn end_of_sign(&self) -> usize {
        self.at + self.peek().map_or(0, char::len_utf8)
    }

    /// The last character before the place reached: what to point at when the text ends too early.
    pub(in crate::quantity) fn last_character(&self) -> Range<usize> {
        let last = self.text[..self.at].chars().next_back().map_or(0, char::len_utf8);
        self.at - last..self.at
    }
}

/// Hyphens, dashes and the minus sign: papers use all of them for a minus.
pub(in crate::quantity) fn is_minus(c: char) -> bool {
    matches!(c, '-' | '\u{2212}' | '\u{2010}' | '\u{2011}' | '\u{2012}' | '\u{2013}')
}

/// The slash, and the two signs that papers set for it.
pub(in crate::quantity) fn is_slash(c: char) -> bool {
    matches!(c, '/' | '\u{2215}' | '\u{2044}')
}

/// The plain character that a raised one stands for.
pub(in crate::quantity) fn superscript(c: char) -> Option<char> {
    Some(match c {
        '⁰' => '0',
        '¹' => '1',
        '²' => '2',
        '³' => '3',
        '⁴' => '4',
        '⁵' => '5',
        '⁶' => '6',
        '⁷' => '7',
        '⁸' => '8',
        '⁹' => '9',
        '⁻' => '-',
        '⁺' => '+',
        _ => return None,
    })
}
