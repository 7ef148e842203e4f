//! What stands next in the text of a date?
//!
//! A reader that moves through one short text, counts columns in characters from 1, and can say what it met
//! instead of what it wanted.

use crate::error::{Error, Kind, Place};
use std::fmt;

/// Digits after a decimal point, as typed: `places` of them, none meaning no point at all.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Decimals {
    pub(super) digits: u64,
    pub(super) places: u32,
}

/// More decimals than any clock needs, and as many as 64 bits hold.
const MOST_DECIMALS: u32 = 18;

impl Decimals {
    pub(super) const NONE: Decimals = Decimals { digits: 0, places: 0 };

    pub(super) fn fraction(self) -> f64 {
        self.digits as f64 / 10_u64.pow(self.places) as f64
    }
}

impl fmt::Display for Decimals {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self.places {
            0 => Ok(()),
            places => write!(f, ".{:0width$}", self.digits, width = places as usize),
        }
    }
}

/// The place of a column of a one-line text.
pub(super) fn at(column: usize) -> Place {
    Place::Line { line: 1, column }
}

/// At most the first 24 characters, in quotes.
pub(super) fn quote(text: &str) -> String {
    let mut short: String = text.chars().take(24).collect();
    if short.len() < text.len() {
        short.push_str("...");
    }
    format!("`{short}`")
}

/// A place in a short text, counted in characters. Unicode minus signs read as `-`.
pub(super) struct Cursor<'a> {
    text: &'a str,
    column: usize,
}

impl<'a> Cursor<'a> {
    pub(super) fn new(text: &'a str) -> Self {
        Cursor { text, column: 1 }
    }

    pub(super) fn column(&self) -> usize {
        self.column
    }

    pub(super) fn peek(&self) -> Option<char> {
        self.text.chars().next().map(|c| if c == '\u{2212}' { '-' } else { c })
    }

    pub(super) fn at_end(&self) -> bool {
        self.text.is_empty()
    }

    /// The next character, if `wanted` says so.
    pub(super) fn take(&mut self, wanted: impl Fn(char) -> bool) -> Option<char> {
        let next = self.peek().filter(|&c| wanted(c))?;
        let mut rest = self.text.chars();
        rest.next();
        self.text = rest.as_str();
        self.column += 1;
        Some(next)
    }

    pub(super) fn blanks(&mut self) {
        while self.take(char::is_whitespace).is_some() {}
    }

    /// Takes `word`, in capitals or not, unless more letters or digits follow it.
    pub(super) fn word(&mut self, word: &str) -> bool {
        let Some(head) = self.text.get(..word.len()) else { return false };
        let rest = &self.text[word.len()..];
        let ends = !rest.starts_with(char::is_alphanumeric) || word == "JD";
        let found = ends && head.eq_ignore_ascii_case(word);
        if found {
            self.text = rest;
            self.column += word.len();
        }
        found
    }

    pub(super) fn unexpected(&self, allowed: &str) -> Error {
        let found = if self.at_end() { "the end of the date".into() } else { quote(self.text) };
        Error::new(Kind::Time, at(self.column), found, allowed)
    }

    pub(super) fn expect(&mut self, wanted: char, allowed: &str) -> Result<(), Error> {
        self.take(|c| c == wanted).map(drop).ok_or_else(|| self.unexpected(allowed))
    }

    pub(super) fn end(&self, allowed: &str) -> Result<(), Error> {
        if self.at_end() { Ok(()) } else { Err(self.unexpected(allowed)) }
    }

    /// Exactly `count` digits.
    pub(super) fn digits(&mut self, count: usize, allowed: &str) -> Result<u64, Error> {
        let start = self.column;
        let (number, found) = self.run_of_digits(count);
        if found != count || self.peek().is_some_and(|c| c.is_ascii_digit()) {
            return Err(self.unexpected(allowed).at(at(if found == count { start } else { self.column })));
        }
        Ok(number)
    }

    /// Two digits of a number below `limit`.
    pub(super) fn number_below(&mut self, limit: u32, allowed: &str) -> Result<u32, Error> {
        let column = self.column;
        let number = self.digits(2, allowed)? as u32;
        if number < limit {
            return Ok(number);
        }
        Err(Error::new(Kind::Time, at(column), format!("{number:02}"), allowed))
    }

    /// `least` to `most` digits, then decimals if a point follows.
    pub(super) fn decimal(&mut self, least: usize, most: usize, allowed: &str) -> Result<(u64, Decimals), Error> {
        let (number, found) = self.run_of_digits(most);
        if found < least || self.peek().is_some_and(|c| c.is_ascii_digit()) {
            return Err(self.unexpected(allowed));
        }
        Ok((number, self.decimals()?))
    }

    /// A point and its digits, or nothing at all.
    pub(super) fn decimals(&mut self) -> Result<Decimals, Error> {
        if self.take(|c| c == '.').is_none() {
            return Ok(Decimals::NONE);
        }
        let (digits, places) = self.run_of_digits(MOST_DECIMALS as usize);
        if places == 0 {
            return Err(self.unexpected("digits after the decimal point"));
        }
        if self.peek().is_some_and(|c| c.is_ascii_digit()) {
            return Err(self.unexpected(&format!("at most {MOST_DECIMALS} decimals")));
        }
        Ok(Decimals { digits, places: places as u32 })
    }

    /// Up to `most` digits (at most 19): their number and their count.
    fn run_of_digits(&mut self, most: usize) -> (u64, usize) {
        let (mut number, mut count) = (0_u64, 0);
        while count < most
            && let Some(digit) = self.take(|c| c.is_ascii_digit())
        {
            number = number * 10 + u64::from(digit.to_digit(10).unwrap_or(0));
            count += 1;
        }
        (number, count)
    }
}
