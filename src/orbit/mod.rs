//! What do published elements say, and where does the comet move?

pub mod conic;
pub mod elements;
pub mod notation;
mod stumpff;
pub mod universal;
