//! What do the numbers mean, in words?

use crate::plan::Plan;
use crate::sky::Sky;

/// A sky in words.
pub struct Saying {
    /// One short line made from the numbers.
    pub headline: String,
    /// One or two plain sentences; also the text twin of the sky plane.
    pub sentence: String,
}

/// Says what `sky` means for the comet and observer of `plan`.
pub fn say(_plan: &Plan, _sky: &Sky) -> Saying {
    unimplemented!()
}
