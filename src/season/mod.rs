//! When does what happen in a season: curves over dates, events, windows?
//!
//! Everything here is geocentric, whatever the plan's observer. A site sees the same events within its parallax, which
//! goes into each event's uncertainty; searched for from a turning site, an extreme of the distance or an almost
//! tangent crossing would fall apart into one small wiggle a day. Curves are those of the observer they are given.
//!
//! - [`stretch`]: the stretch of time, checked and bounded.
//! - [`event`]: what is found, with its uncertainty.
//! - [`sunward`]: when dust can lie sunward, and how well.
//! - [`search`]: finds both in slices, so that a page can show progress, stop, and redo only what changed.
//! - [`series`]: curves over dates.

pub mod event;
mod fit;
mod geometry;
mod looks;
pub mod search;
pub mod series;
pub mod stretch;
pub mod sunward;
mod tell;
