//! How do the published notations of elements read?
//!
//! Pasted text may hold one comet or thousands, in these notations, also mixed:
//!
//! 1. the clearing house's one-line form for comets, fixed columns (`columns`);
//! 2. the block of printed circulars, `T`, `q`, `e`, `Peri.`, `Node`, `Incl.` (`labelled`);
//! 3. `name = value` lines with the trade's symbols or words (the same module; [`write`] prints them).
//!
//! JSON is read one layer up, by `plan::paste`. Nothing is repaired silently: whatever cannot be read with certainty is
//! an [`Error`] with line and column, good comets beside it still load, and what was read but deserves a word is a
//! [`Notice`]. A time of perihelion or an epoch without a scale is TT.
//!
//! Source of the columns and symbols: the clearing house's published description of its "ephemerides and orbital
//! elements" comet format; element blocks as printed in the circulars.

mod columns;
mod date;
mod designation;
mod draft;
mod label;
mod labelled;
mod token;
mod write;

pub use write::write;

use crate::error::{Error, Kind, Place};
use crate::orbit::elements::Comet;
use crate::order;
use std::collections::BTreeMap;

/// Longest text read, bytes: 90,000 one-line records; natively 0.05 us to the byte.
pub const MOST_BYTES: usize = 16_000_000;
/// Longest line read, bytes; no notation comes near.
pub const LONGEST_LINE: usize = 10_000;
/// Errors and notices beyond this many are only counted.
pub const MOST_ERRORS: usize = 1000;

/// What can be pasted, for messages.
pub const CAN_BE_PASTED: &str = "elements of one or more comets: the one-line form of the clearing house, a circular's block \
     (T, q, e, Peri., Node, Incl.), `name = value` lines, or a plan";

/// What pasted text holds.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Reading {
    /// The comets read, in the order of the text. No two share a name.
    pub comets: Vec<Entry>,
    /// What was refused, at most [`MOST_ERRORS`], in the order of the text.
    pub errors: Vec<Error>,
    /// What was read but deserves a word, at most [`MOST_ERRORS`].
    pub notices: Vec<Notice>,
    /// How many more errors there were.
    pub errors_left_out: usize,
}

/// A comet that was read.
#[derive(Clone, Debug, PartialEq)]
pub struct Entry {
    /// The line on which its elements begin, from 1.
    pub line: usize,
    pub comet: Comet,
}

/// A word on something that was read.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Notice {
    pub line: usize,
    /// A sentence.
    pub text: String,
}

impl std::fmt::Display for Notice {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "line {}: {}", self.line, self.text)
    }
}

impl Reading {
    /// Adds a refusal, or counts it if there are too many.
    pub fn refuse(&mut self, error: Error) {
        if self.errors.len() < MOST_ERRORS {
            self.errors.push(error);
        } else {
            self.errors_left_out += 1;
        }
    }

    fn notice(&mut self, line: usize, text: impl Into<String>) {
        if self.notices.len() < MOST_ERRORS {
            self.notices.push(Notice { line, text: text.into() });
        }
    }

    /// Gives comets that share a name names apart, such as `X (2)`, and says so.
    pub fn name_apart(&mut self) {
        let mut taken: BTreeMap<String, usize> = BTreeMap::new();
        let mut renamed = Vec::new();
        for Entry { line, comet } in &mut self.comets {
            let name = comet.name.clone();
            while let Some(count) = taken.get_mut(&comet.name) {
                *count += 1;
                comet.name = format!("{name} ({count})");
            }
            if comet.name != name {
                renamed.push((*line, format!("`{name}` stands more than once; this one is called `{}`.", comet.name)));
                // The next of that name starts counting here.
                let count = taken.get(&name).copied().unwrap_or(1);
                taken.insert(comet.name.clone(), count.max(1));
            } else {
                taken.insert(name, 1);
            }
        }
        for (line, text) in renamed {
            self.notice(line, text);
        }
    }
}

/// A refusal at a line and column.
fn refusal(line: usize, column: usize, found: impl Into<String>, allowed: impl Into<String>) -> Error {
    Error::new(Kind::Notation, Place::Line { line, column }, found, allowed)
}

/// At most the first 32 characters of what stood there, in quotes.
fn quote(text: &str) -> String {
    let mut end = text.char_indices().nth(32).map_or(text.len(), |(offset, _)| offset);
    if end < text.len() {
        end = text[..end].trim_end().len();
        return format!("`{}...`", &text[..end]);
    }
    format!("`{}`", text.trim_end())
}

/// Reads whatever elements `text` holds; JSON and nothing at all are refused. Never panics.
pub fn read(text: &str) -> Reading {
    let mut reading = Reading::default();
    let text = text.strip_prefix('\u{feff}').unwrap_or(text);
    if let Err(error) = check_text(text) {
        reading.refuse(error);
        return reading;
    }
    let mut block = Vec::new();
    let mut strays = Vec::new();
    let mut has_columns = false;
    for (number, line) in lines(text) {
        if line.len() > LONGEST_LINE {
            let found = format!("a line of {} bytes, {}", line.len(), quote(line.trim_start()));
            reading.refuse(refusal(number, 1, found, format!("lines of at most {LONGEST_LINE} bytes")));
        } else if columns::looks_like(line) {
            has_columns = true;
            strays.extend(labelled::read(&block, &mut reading));
            block.clear();
            match columns::read(line, number) {
                Ok((comet, notices)) => {
                    notices.into_iter().for_each(|notice| reading.notice(number, notice));
                    reading.comets.push(Entry { line: number, comet });
                }
                Err(error) => reading.refuse(error),
            }
        } else {
            block.push((number, line));
        }
    }
    strays.extend(labelled::read(&block, &mut reading));
    if has_columns {
        // Among one-line records a line that is none is a damaged record, not prose, if it has figures.
        for (number, line) in strays {
            if line.contains(|c: char| c.is_ascii_digit()) && !line.trim_start().starts_with('#') {
                let column = line.chars().take_while(|c| c.is_whitespace()).count() + 1;
                let allowed = "a line of the one-line form for comets, or a line that starts with `#`";
                reading.refuse(refusal(number, column, quote(line.trim_start()), allowed));
            }
        }
        order::by_rank(&mut reading.errors, |error| match error.place {
            Place::Line { line, column } => (line as u64) << 32 | column as u64,
            _ => 0,
        });
    }
    if reading.comets.is_empty() && reading.errors.is_empty() {
        reading.refuse(refusal(1, 1, format!("text without elements, {}", quote(text.trim_start())), CAN_BE_PASTED));
    }
    reading.name_apart();
    reading
}

/// The lines of `text` with their numbers from 1; ends may be LF, CR LF or CR.
fn lines(text: &str) -> impl Iterator<Item = (usize, &str)> {
    let lines = text.split('\n').flat_map(|line| line.strip_suffix('\r').unwrap_or(line).split('\r'));
    lines.enumerate().map(|(index, line)| (index + 1, line))
}

/// # Errors
/// An empty text, one that is too long, binary content, JSON.
fn check_text(text: &str) -> Result<(), Error> {
    if text.len() > MOST_BYTES {
        let found = format!("a text of {:.1} million bytes", text.len() as f64 / 1e6);
        return Err(refusal(1, 1, found, format!("at most {} million bytes", MOST_BYTES / 1_000_000)));
    }
    let is_binary = |c: char| c.is_control() && !matches!(c, '\t' | '\n' | '\r' | '\u{c}');
    let mut first = text.find(is_binary);
    // A few replaced characters are an accent lost in a name; many are not text.
    if first.is_none() {
        let replaced = text.matches('\u{fffd}').count();
        if replaced >= 10 && replaced * 100 > text.chars().count() {
            first = text.find('\u{fffd}');
        }
    }
    if let Some(offset) = first {
        let code = text[offset..].chars().next().map_or(0, u32::from);
        let (line, before) = lines(&text[..offset]).last().unwrap_or((1, ""));
        let found = format!("binary content (character U+{code:04X})");
        return Err(refusal(line, before.chars().count() + 1, found, CAN_BE_PASTED));
    }
    match text.trim_start().chars().next() {
        None => Err(refusal(1, 1, "nothing", CAN_BE_PASTED)),
        Some('{' | '[') => Err(refusal(1, 1, "JSON", "text; a plan or a list of plans is read as a plan")),
        Some(_) => Ok(()),
    }
}
