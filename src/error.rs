//! What was refused, where, what was found there, and what is allowed?
//!
//! One error type for the whole crate. An error is something a person can act on: it names the place,
//! quotes what stood there and says what would have been accepted. A result that was computed but is
//! doubtful is not an error; see [`crate::caution`].

use std::fmt;

/// Where the refused input stands.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Place {
    /// The input as a whole.
    Whole,
    /// A line and column of pasted or read text, both counted from 1 (columns in characters).
    Line { line: usize, column: usize },
    /// A named field of a plan, a form or a command, as a dotted path such as `comet.elements.eccentricity`.
    Field(String),
}

/// The area in which an input was refused.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kind {
    /// A published element notation that could not be read.
    Notation,
    /// A date or time that could not be read.
    Time,
    /// A value outside its allowed range.
    Range,
    /// A date outside the span of the ephemeris.
    Span,
    /// A plan file that could not be read.
    Plan,
    /// A command-line call that is not understood.
    Usage,
    /// A file that could not be read or written.
    File,
}

/// A refused input: its kind, its place, what was found and what is allowed.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Error {
    pub kind: Kind,
    pub place: Place,
    /// What stood there, quoted and shortened for people.
    pub found: String,
    /// What would have been accepted, as a noun phrase or a sentence without the final point.
    pub allowed: String,
}

impl Error {
    pub fn new(kind: Kind, place: Place, found: impl Into<String>, allowed: impl Into<String>) -> Self {
        Error { kind, place, found: found.into(), allowed: allowed.into() }
    }

    /// The same error at another place, for a caller that knows more about where its text stood.
    pub fn at(mut self, place: Place) -> Self {
        self.place = place;
        self
    }
}

impl fmt::Display for Place {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Place::Whole => Ok(()),
            Place::Line { line, column } => write!(f, "line {line}, column {column}: "),
            Place::Field(path) => write!(f, "{path}: "),
        }
    }
}

impl fmt::Display for Error {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}found {}; expected {}", self.place, self.found, self.allowed)
    }
}

impl std::error::Error for Error {}
