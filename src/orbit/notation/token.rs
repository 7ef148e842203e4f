//! Which words, numbers and signs stand in a line of labelled elements?
//!
//! A line falls into words, separators and plus-minus signs. Brackets are dropped; digits in brackets right after a
//! digit, as in `0.5200(12)`, are an uncertainty and dropped with them. A comma between digits stays in the word, so
//! that a decimal comma is seen and refused.

use crate::decimal;

/// What a token is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Sort {
    Word,
    /// `=`, or `:` after a word.
    Equals,
    /// `+/-`, `+-` or the sign.
    PlusMinus,
    /// `,` or `;`.
    Break,
}

/// A piece of a line.
#[derive(Clone, Copy, Debug)]
pub(super) struct Token<'a> {
    pub sort: Sort,
    pub text: &'a str,
    /// Counted in characters from 1.
    pub column: usize,
    /// Byte offset in the line.
    pub offset: usize,
}

/// The tokens of `line` from the byte `from` on.
pub(super) fn tokens(line: &str, from: usize) -> Vec<Token<'_>> {
    let mut tokens = Vec::new();
    let mut offset = from;
    let mut column = line[..from].chars().count() + 1;
    while let Some(c) = line[offset..].chars().next() {
        let rest = &line[offset..];
        let (sort, length) = match c {
            '=' => (Some(Sort::Equals), 1),
            ',' | ';' => (Some(Sort::Break), 1),
            '\u{b1}' => (Some(Sort::PlusMinus), c.len_utf8()),
            '\u{b0}' => (Some(Sort::Word), c.len_utf8()),
            '(' => (None, uncertainty(&line[..offset], rest)),
            ')' | '[' | ']' => (None, 1),
            c if c.is_whitespace() => (None, c.len_utf8()),
            ':' if ends_word(&rest[1..]) => (Some(Sort::Equals), 1),
            _ if rest.starts_with("+/-") => (Some(Sort::PlusMinus), 3),
            _ if rest.starts_with("+-") => (Some(Sort::PlusMinus), 2),
            _ => (Some(Sort::Word), word(rest)),
        };
        let text = &rest[..length];
        tokens.extend(sort.map(|sort| Token { sort, text, column, offset }));
        offset += length;
        column += text.chars().count();
    }
    tokens
}

fn ends_word(rest: &str) -> bool {
    rest.chars().next().is_none_or(char::is_whitespace)
}

/// Bytes of `(12)` right after a digit; else 1, the bracket alone.
fn uncertainty(before: &str, rest: &str) -> usize {
    let inner = rest[1..].bytes().take_while(|byte| byte.is_ascii_digit() || *byte == b'.').count();
    let closed = inner > 0 && rest.as_bytes().get(inner + 1) == Some(&b')');
    if closed && before.ends_with(|c: char| c.is_ascii_digit()) { inner + 2 } else { 1 }
}

/// Bytes of the word that `rest` begins with, at least one character.
fn word(rest: &str) -> usize {
    let mut previous = None;
    for (offset, c) in rest.char_indices() {
        let after = &rest[offset + c.len_utf8()..];
        let ends = match c {
            '=' | '(' | ')' | '[' | ']' | '\u{b1}' | '\u{b0}' => true,
            ':' => ends_word(after),
            ',' | ';' => {
                let between = |c: Option<char>| c.is_some_and(|c| c.is_ascii_digit());
                c == ';' || !(between(previous) && between(after.chars().next()))
            }
            '+' => offset > 0 && (after.starts_with("/-") || after.starts_with('-')),
            c => c.is_whitespace(),
        };
        if ends && offset > 0 {
            return offset;
        }
        previous = Some(c);
    }
    rest.len()
}

/// A printed number: its value and half a unit of its last place.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Number {
    pub value: f64,
    pub half_unit: f64,
}

/// The number that `text` is, if it is one: sign, digits with at most one point, at most one exponent.
pub(super) fn number(text: &str) -> Option<Number> {
    let plain = if text.is_ascii() { text.to_string() } else { text.replace(['\u{2212}', '\u{2013}'], "-") };
    let unsigned = plain.strip_prefix(['+', '-']).unwrap_or(&plain);
    let (mantissa, exponent) = match unsigned.split_once(['e', 'E']) {
        Some((mantissa, exponent)) => (mantissa, exponent.parse::<i32>().ok()?),
        None => (unsigned, 0),
    };
    let (whole, decimals) = mantissa.split_once('.').unwrap_or((mantissa, ""));
    let digits = |part: &str| part.bytes().all(|byte| byte.is_ascii_digit());
    if !digits(whole) || !digits(decimals) || whole.len() + decimals.len() == 0 {
        return None;
    }
    let value = decimal::read(&plain).filter(|value| value.is_finite())?;
    let places = exponent.saturating_sub(i32::try_from(decimals.len()).ok()?);
    let half_unit = decimal::read(&format!("5e{}", places.saturating_sub(1))).unwrap_or(0.0);
    Some(Number { value, half_unit })
}

/// Whether `text` begins like a number, so that something that is none there is a fault and not prose.
pub(super) fn starts_like_number(text: &str) -> bool {
    let rest = text.trim_start_matches(['+', '-', '\u{2212}', '\u{2013}', '.']);
    rest.starts_with(|c: char| c.is_ascii_digit())
}
