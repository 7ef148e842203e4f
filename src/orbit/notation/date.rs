//! Which date stands here, as circulars and lists print it?
//!
//! `2031 Mar. 4.51732 TT`, `2031 03 04.51732`, `2031-03-04.51732 TT`, `2031-Mar-04.5`, ISO ending in `Z`,
//! `20310304.51732`, `JD 2462930.01732 TT` (also `JDT`, or a bare number of that size), `MJD 62929.5`. The scale is TT
//! where none is named; `ET`, `TDT` are older names of TT, `UT` is UTC. A `= JDT ...` after the date must agree.

use super::token::{Sort, Token, number, starts_like_number};
use super::{quote, refusal};
use crate::error::{Error, Place};
use crate::time::{Scale, Stamp};

const FORMS: &str = "a date such as `2031 Mar. 4.51732 TT`, `2031-03-04.51732 TT` or `JD 2462930.0 TT`";
const MONTHS: [&str; 12] = [
    "january",
    "february",
    "march",
    "april",
    "may",
    "june",
    "july",
    "august",
    "september",
    "october",
    "november",
    "december",
];

/// The date that begins at `tokens[start]`, and the index of the token after it.
///
/// # Errors
/// Whatever is no date; a Julian date after it that names another one.
pub(super) fn read(line: usize, tokens: &[Token], start: usize) -> Result<(Stamp, usize), Error> {
    let (stamp, mut next) = read_one(line, tokens, start)?;
    if word(tokens, next).is_none() && tokens.get(next).is_some_and(|token| token.sort == Sort::PlusMinus) {
        next += 1 + usize::from(word(tokens, next + 1).is_some_and(starts_like_number));
        next += usize::from(word(tokens, next).is_some_and(|unit| matches!(unit, "d" | "days" | "day")));
    }
    let same = tokens.get(next).is_some_and(|token| token.sort == Sort::Equals);
    if same && word(tokens, next + 1).is_some_and(|word| julian(word).is_some()) {
        let (again, after) = read_one(line, tokens, next + 1)?;
        let difference_days = (again.instant().tdb_days() - stamp.instant().tdb_days()).abs();
        // One of them may be printed to a tenth of a day only.
        if difference_days > 0.06 {
            let allowed = format!("the date before it, {stamp}, again");
            return Err(refusal(line, tokens[next + 1].column, again.to_string(), allowed));
        }
        next = after;
    }
    Ok((stamp, next))
}

fn word<'a>(tokens: &[Token<'a>], index: usize) -> Option<&'a str> {
    tokens.get(index).filter(|token| token.sort == Sort::Word).map(|token| token.text)
}

/// Whether `word` announces a Julian date (false) or a modified one (true).
fn julian(word: &str) -> Option<bool> {
    match word.to_ascii_uppercase().trim_end_matches('.') {
        "JD" | "JDT" | "JDE" => Some(false),
        "MJD" => Some(true),
        _ => None,
    }
}

fn scale(word: &str) -> Option<Scale> {
    match word.to_ascii_uppercase().trim_end_matches('.') {
        "TT" | "TDT" | "ET" => Some(Scale::Tt),
        "TDB" => Some(Scale::Tdb),
        "UT" | "UTC" | "UT1" => Some(Scale::Utc),
        _ => None,
    }
}

/// The scale at `index`, or TT, and the index after it.
fn scale_at(tokens: &[Token], index: usize) -> (Scale, usize) {
    word(tokens, index).and_then(scale).map_or((Scale::Tt, index), |scale| (scale, index + 1))
}

/// 1 to 12 from a name of at least three letters, with or without a point.
fn month_by_name(word: &str) -> Option<u32> {
    let short = word.trim_end_matches('.').to_ascii_lowercase();
    if short.len() < 3 {
        return None;
    }
    MONTHS.iter().position(|month| month.starts_with(&short)).map(|index| index as u32 + 1)
}

fn month_by_number(word: &str) -> Option<u32> {
    (word.len() <= 2 && word.bytes().all(|byte| byte.is_ascii_digit())).then(|| word.parse().ok()).flatten()
}

/// The year that `word` is, one to four digits after an optional minus sign.
fn year(word: &str) -> Option<i32> {
    let digits = word.strip_prefix('-').unwrap_or(word);
    let plain = (1..=4).contains(&digits.len()) && digits.bytes().all(|byte| byte.is_ascii_digit());
    if plain { word.parse().ok() } else { None }
}

fn read_one(line: usize, tokens: &[Token], start: usize) -> Result<(Stamp, usize), Error> {
    let column = |index: usize| {
        tokens.get(index).map_or_else(
            || tokens.last().map_or(1, |token| token.column + token.text.chars().count()),
            |token| token.column,
        )
    };
    let Some(first) = word(tokens, start) else {
        return Err(refusal(line, column(start), "no date", FORMS));
    };
    let first = first.replace(['\u{2212}', '\u{2013}'], "-");
    let first = first.as_str();
    // An error inside a text that began at the token `index`.
    let placed = |error: Error, index: usize| {
        let inside = match error.place {
            Place::Line { column, .. } => column - 1,
            _ => 0,
        };
        error.at(Place::Line { line, column: column(index) + inside })
    };
    if let Some(modified) = julian(first) {
        let Some(figure) = word(tokens, start + 1) else {
            return Err(refusal(line, column(start + 1), "no number", "a number after `JD` or `MJD`"));
        };
        let (scale, next) = scale_at(tokens, start + 2);
        return stamp_of_number(figure, scale, modified)
            .map(|stamp| (stamp, next))
            .map_err(|error| placed(error, start + 1));
    }
    // Three words: year, month, day.
    if let (Some(year), Some(month_word)) = (year(first), word(tokens, start + 1)) {
        let month = month_by_name(month_word).or_else(|| month_by_number(month_word));
        if let Some(month) = month {
            let Some(day) = word(tokens, start + 2) else {
                return Err(refusal(
                    line,
                    column(start + 2),
                    "no day",
                    "the day after year and month, such as `4.51732`",
                ));
            };
            let (scale, next) = scale_at(tokens, start + 3);
            let stamp = Stamp::from_parts(year, month, day, scale).map_err(|error| {
                let index = if error.place == Place::Whole { start + 1 } else { start + 2 };
                placed(error, index)
            })?;
            return Ok((stamp, next));
        }
        if starts_like_number(month_word) || month_word.chars().all(|c| c.is_ascii_alphabetic() || c == '.') {
            return Err(refusal(line, column(start + 1), quote(month_word), "a month, by number or English name"));
        }
    }
    let whole_digits = first.bytes().take_while(u8::is_ascii_digit).count();
    let plain = number(first).is_some() && first.bytes().all(|byte| byte.is_ascii_digit() || byte == b'.');
    let (scale, mut next) = scale_at(tokens, start + 1);
    let stamp = match whole_digits {
        7 if plain => stamp_of_number(first, scale, false),
        8 if plain => {
            let (year, month) = (first[..4].parse().unwrap_or(0), first[4..6].parse().unwrap_or(0));
            Stamp::from_parts(year, month, &first[6..], scale)
        }
        5 if plain && word(tokens, start + 1).and_then(julian) == Some(true) => {
            next = start + 2;
            stamp_of_number(first, Scale::Tt, true)
        }
        _ if first.ends_with(['Z', 'z']) => {
            next = start + 1;
            first.parse()
        }
        _ => {
            // One word with separators: 2031-03-04.5, 2031-Mar-04.5, 2031/03/04.5.
            let separator = if first.contains('/') { '/' } else { '-' };
            let unsigned = first.strip_prefix('-').unwrap_or(first);
            let mut parts = unsigned.splitn(3, separator);
            let (year_word, month_word, day) = (parts.next().unwrap_or(""), parts.next(), parts.next());
            match (year(year_word), month_word, day) {
                // An ISO date without its `Z`: the reader of typed dates says what is missing.
                (Some(_), Some(_), Some(day)) if day.contains(['T', ':']) => first.parse(),
                (Some(year), Some(month_word), Some(day)) => {
                    let Some(month) = month_by_name(month_word).or_else(|| month_by_number(month_word)) else {
                        return Err(refusal(
                            line,
                            column(start),
                            quote(month_word),
                            "a month, by number or English name",
                        ));
                    };
                    let year = if unsigned.len() < first.len() { -year } else { year };
                    Stamp::from_parts(year, month, day, scale)
                }
                _ => return Err(refusal(line, column(start), quote(first), FORMS)),
            }
        }
    };
    stamp.map(|stamp| (stamp, next)).map_err(|error| {
        let found = format!("{} in {}", error.found, quote(first));
        refusal(line, column(start), found, error.allowed)
    })
}

fn stamp_of_number(figure: &str, scale: Scale, modified: bool) -> Result<Stamp, Error> {
    if modified {
        Stamp::from_modified_julian(figure, scale)
    } else {
        format!("JD {figure} {scale}").parse::<Stamp>().map_err(|error| error.at(Place::Whole))
    }
}
