//! What did a person set up?

use crate::body::observer::{Observer, Site};
use crate::orbit::elements::Comet;
use crate::time::Stamp;

/// The version this program writes and reads.
pub const VERSION: u32 = 1;

/// Everything a person set up; one JSON file.
#[derive(Clone, Debug, PartialEq)]
pub struct Plan {
    pub comet: Comet,
    pub observer: Observer,
    /// More observers the person keeps.
    pub sites: Vec<Site>,
    pub time: Option<Stamp>,
}
