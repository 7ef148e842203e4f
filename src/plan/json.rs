//! Where in a JSON text does a refused value stand?
//!
//! serde reads the values; this module turns its refusals into [`Error`]s with line, column and path, and finds the
//! place of a path for refusals that come later, such as a value out of range. Columns count characters from 1.

use crate::error::{Error, Kind, Place};
use serde::de::DeserializeOwned;
use std::ops::Range;

/// The value that `text` holds.
///
/// # Errors
/// [`Kind::Plan`], with line, column and path.
pub(super) fn read<T: DeserializeOwned>(text: &str) -> Result<T, Error> {
    let mut deserializer = serde_json::Deserializer::from_str(text);
    let value = T::deserialize(&mut deserializer).map_err(|error| refusal(text, &error))?;
    deserializer.end().map_err(|error| refusal(text, &error))?;
    Ok(value)
}

/// serde's refusal in our words.
fn refusal(text: &str, error: &serde_json::Error) -> Error {
    let message = error.to_string();
    let message = message.rsplit_once(" at line ").map_or(message.as_str(), |(head, _)| head);
    let (mut found, allowed) = if let Some(key) = message.strip_prefix("missing field ") {
        (format!("no {key}"), key.to_string())
    } else if let Some(key) = message.strip_prefix("duplicate field ") {
        (format!("{key} twice"), "each key once".into())
    } else if error.is_data() {
        match message.split_once(", expected ") {
            Some((found, allowed)) => {
                (found.to_string(), allowed.replace("f64", "a number").replace("u32", "a whole number"))
            }
            None => (message.to_string(), "a valid value".into()),
        }
    } else {
        (format!("JSON that cannot be read ({message})"), "complete and valid JSON".into())
    };
    for (technical, plain) in [("unknown field ", "unknown key "), ("invalid type: ", ""), ("invalid value: ", "")] {
        if let Some(rest) = found.strip_prefix(technical) {
            found = format!("{plain}{rest}");
        }
    }
    let line = error.line().max(1);
    let bytes = error.column();
    let start: usize = text.split_inclusive('\n').take(line - 1).map(str::len).sum();
    let content = text[start..].split('\n').next().unwrap_or("");
    let column = content.char_indices().take_while(|&(start, _)| start < bytes).count().max(1);
    if error.is_data() {
        // What is refused for what it lacks is refused once its last bracket is read.
        let whole = message.starts_with("missing field ") || message.starts_with("invalid length ");
        let mut path = path_to(text, start + bytes, whole);
        // For an unknown key the path ends in that key itself, for one that came before in the object.
        if message.starts_with("duplicate field ") {
            path.truncate(path.rfind('.').unwrap_or(0));
        }
        if !path.is_empty() {
            found = format!("{found} at {path}");
        }
    }
    Error::new(Kind::Plan, Place::Line { line, column }, found, allowed)
}

/// The path of the value that serde was reading when it had read this many bytes of valid JSON; empty for the whole.
/// Where these end with a list or object, it is that one if `whole`, else the last one in it.
fn path_to(text: &str, read: usize, whole: bool) -> String {
    let mut path = String::new();
    let mut start = skip_blanks(text, 0);
    while read < end_of_value(text, start) + usize::from(!whole) {
        let begun = |child: &(usize, (Option<Range<usize>>, Range<usize>))| {
            let (key, value) = &child.1;
            key.as_ref().unwrap_or(value).start <= read
        };
        let Some((index, (key, value))) = children(text, start).into_iter().enumerate().take_while(begun).last() else {
            break;
        };
        match key {
            Some(key) => {
                let key = &text[key];
                let dot = if path.is_empty() { "" } else { "." };
                path.push_str(dot);
                path.push_str(&serde_json::from_str(key).unwrap_or_else(|_| key.to_owned()));
            }
            None => path.push_str(&format!("[{index}]")),
        }
        if read <= value.start {
            break;
        }
        start = value.start;
    }
    path
}

/// `error` moved from its path, read below `prefix`, to its line and column in `text`; the path joins what was found.
pub(super) fn located(text: &str, prefix: &str, error: Error) -> Error {
    let Place::Field(path) = &error.place else { return error };
    let place = place(text, path.strip_prefix(prefix).unwrap_or(path));
    let found = format!("{} at {path}", error.found);
    Error { found, place, ..error }
}

/// The text of a value of the object that is this valid JSON, by its key.
pub(super) fn member<'a>(text: &'a str, key: &str) -> Option<&'a str> {
    let named = |of: &Range<usize>| text[of.clone()].trim_matches('"') == key;
    let (_, value) = children(text, skip_blanks(text, 0)).into_iter().find(|(of, _)| of.as_ref().is_some_and(named))?;
    Some(&text[value])
}

/// Line and column of the value at `path` (as `sites[0].height_m`) in valid JSON; of the innermost part that exists.
pub(super) fn place(text: &str, path: &str) -> Place {
    let mut offset = skip_blanks(text, 0);
    for part in path.split(['.', '[']).map(|part| part.trim_end_matches(']')).filter(|part| !part.is_empty()) {
        let found = children(text, offset).into_iter().enumerate().find(|(index, (key, _))| match key {
            Some(key) => text[key.clone()].trim_matches('"') == part,
            None => part.parse() == Ok(*index),
        });
        let Some((_, (_, value))) = found else { break };
        offset = value.start;
    }
    at(text, offset)
}

/// Line and column of a byte offset, which lies on a character.
pub(super) fn at(text: &str, offset: usize) -> Place {
    let before = &text[..offset];
    let line_start = before.rfind('\n').map_or(0, |newline| newline + 1);
    Place::Line { line: before.matches('\n').count() + 1, column: before[line_start..].chars().count() + 1 }
}

/// The values of the list or object that begins at `start`, with their keys if it is an object.
pub(super) fn children(text: &str, start: usize) -> Vec<(Option<Range<usize>>, Range<usize>)> {
    let bytes = text.as_bytes();
    let mut children = Vec::new();
    if !matches!(bytes.get(start), Some(b'[' | b'{')) {
        return children;
    }
    let mut offset = skip_blanks(text, start + 1);
    while offset < bytes.len() && !matches!(bytes[offset], b']' | b'}') {
        let mut key = None;
        let mut value = offset..end_of_value(text, offset);
        offset = skip_blanks(text, value.end);
        if bytes.get(offset) == Some(&b':') {
            key = Some(value);
            offset = skip_blanks(text, offset + 1);
            value = offset..end_of_value(text, offset);
            offset = skip_blanks(text, value.end);
        }
        children.push((key, value));
        if bytes.get(offset) == Some(&b',') {
            offset = skip_blanks(text, offset + 1);
        } else if !matches!(bytes.get(offset), Some(b']' | b'}')) {
            break; // not JSON: the reader that is asked next says so
        }
    }
    children
}

/// The offset of the first character from `start` on that is not blank.
pub(super) fn skip_blanks(text: &str, start: usize) -> usize {
    start + text.as_bytes()[start..].iter().take_while(|byte| byte.is_ascii_whitespace()).count()
}

/// Where the value that begins at `start` ends: brackets matched, strings passed over. At least one character on,
/// unless at the end of the text.
pub(super) fn end_of_value(text: &str, start: usize) -> usize {
    let bytes = text.as_bytes();
    let (mut depth, mut in_string, mut escaped) = (0_usize, false, false);
    for (offset, &byte) in bytes.iter().enumerate().skip(start) {
        if in_string {
            match byte {
                _ if escaped => escaped = false,
                b'\\' => escaped = true,
                b'"' => in_string = false,
                _ => continue,
            }
            if !in_string && depth == 0 {
                return offset + 1;
            }
            continue;
        }
        match byte {
            b'"' => in_string = true,
            b'[' | b'{' => depth += 1,
            b']' | b'}' if depth <= 1 => return if depth == 0 { offset.max(start) } else { offset + 1 },
            b']' | b'}' => depth -= 1,
            b',' | b':' if depth == 0 => return offset,
            _ if depth == 0 && byte.is_ascii_whitespace() => return offset,
            _ => {}
        }
    }
    bytes.len()
}
