//! How do the published notations of elements read?

use super::elements::Comet;
use crate::error::Error;

/// A comet that was read.
pub struct Entry {
    pub comet: Comet,
}

/// What a text held.
#[derive(Default)]
pub struct Reading {
    pub comets: Vec<Entry>,
    pub errors: Vec<Error>,
    pub notices: Vec<String>,
}

/// Reads nothing yet.
pub fn read(_text: &str) -> Reading {
    Reading::default()
}
