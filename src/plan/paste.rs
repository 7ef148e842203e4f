//! What did a person paste: a plan, several plans or comets as JSON, or elements in a published notation?
//!
//! JSON is an object, a list of objects, or one object after another (as `tailvane elements` prints them); an object is
//! a plan, or a comet with `name` and `elements`. Anything else is read by [`crate::orbit::notation`].
//! Good objects load beside bad ones.

use super::{Plan, json};
use crate::error::{Error, Kind, Place};
use crate::orbit::elements::Comet;
use crate::orbit::notation::{self, Entry, MOST_BYTES, Reading};
use std::ops::Range;

/// The comets that `text` holds, in any notation. Never panics.
///
/// Of a plan only the comet is given; whoever wants the rest of a lone plan asks [`Plan::parse`] first.
pub fn read(text: &str) -> Reading {
    let text = text.strip_prefix('\u{feff}').unwrap_or(text);
    if text.len() > MOST_BYTES || !text.trim_start().starts_with(['{', '[']) {
        return notation::read(text);
    }
    let mut reading = Reading::default();
    let (objects, rest) = objects(text);
    let mut place = Walk { text, offset: 0, line: 1, line_start: 0 };
    for object in objects {
        let (line, column) = place.to(object.start);
        match comet(&text[object]) {
            Ok(comet) => reading.comets.push(Entry { line, comet }),
            Err(error) => reading.refuse(moved(error, line, column)),
        }
    }
    let (rest, closed) = rest.map_or_else(|rest| (rest, false), |rest| (rest, true));
    if !closed || !text[rest..].trim().is_empty() {
        let (line, column) = place.to(rest);
        let next: String = text[rest..].trim_start().chars().take(24).collect();
        let found = if next.is_empty() { "the end of the text".into() } else { format!("`{next}`") };
        let allowed = if closed {
            "objects of JSON, or one list of them, and nothing after"
        } else {
            "`,` or `]` in a list of objects"
        };
        reading.refuse(Error::new(Kind::Plan, Place::Line { line, column }, found, allowed));
    } else if reading.comets.is_empty() && reading.errors.is_empty() {
        reading.refuse(Error::new(
            Kind::Plan,
            Place::Line { line: 1, column: 1 },
            "an empty list",
            notation::CAN_BE_PASTED,
        ));
    }
    reading.name_apart();
    reading
}

/// Where the objects of `text` lie, and where what follows them begins, or where their list breaks off.
fn objects(text: &str) -> (Vec<Range<usize>>, Result<usize, usize>) {
    let start = json::skip_blanks(text, 0);
    if text[start..].starts_with('[') {
        let objects: Vec<_> = json::children(text, start).into_iter().map(|(_, value)| value).collect();
        let end = json::skip_blanks(text, objects.last().map_or(start + 1, |last| last.end));
        return (objects, if text[end..].starts_with(']') { Ok(end + 1) } else { Err(end) });
    }
    let mut objects = Vec::new();
    let mut offset = start;
    while text[offset..].starts_with('{') {
        let end = json::end_of_value(text, offset);
        objects.push(offset..end);
        offset = json::skip_blanks(text, end);
    }
    (objects, Ok(offset))
}

fn comet(object: &str) -> Result<Comet, Error> {
    let has = |wanted: &str| {
        json::children(object, 0)
            .iter()
            .any(|(key, _)| key.clone().is_some_and(|key| object[key].trim_matches('"') == wanted))
    };
    if has("tailvane_plan") || !has("elements") {
        return Plan::parse(object).map(|plan| plan.comet);
    }
    let comet: Comet = json::read(object)?;
    comet.validate().map_err(|error| json::located(object, "comet.", error))?;
    Ok(comet)
}

/// An error inside an object that begins at `line` and `column`.
fn moved(error: Error, line: usize, column: usize) -> Error {
    let place = match error.place {
        Place::Line { line: 1, column: inside } => Place::Line { line, column: column + inside - 1 },
        Place::Line { line: inside, column } => Place::Line { line: line + inside - 1, column },
        _ => Place::Line { line, column },
    };
    error.at(place)
}

/// Lines and columns of growing offsets, counted once over the text.
struct Walk<'a> {
    text: &'a str,
    offset: usize,
    line: usize,
    line_start: usize,
}

impl Walk<'_> {
    /// Line and column of `offset`, which is not before the last one asked for.
    fn to(&mut self, offset: usize) -> (usize, usize) {
        for (index, _) in self.text[self.offset..offset].match_indices('\n') {
            self.line += 1;
            self.line_start = self.offset + index + 1;
        }
        self.offset = offset;
        (self.line, self.text[self.line_start..offset].chars().count() + 1)
    }
}
