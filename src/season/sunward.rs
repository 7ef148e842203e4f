//! When can dust lie sunward, and how well would it show?

use crate::tail::perspective::Grade;
use crate::time::Instant;

/// What brings dust to the sunward side.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Origin {
    /// Perspective alone: dust that left without speed lies there.
    Perspective,
    /// Only dust that was thrown out gets there.
    Ejection,
}

/// How sunward dust stands at one date, by [`crate::tail::perspective`] with the plan's tails.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Strength {
    pub time: Instant,
    /// None where the dust reaches no grade.
    pub origin: Option<Origin>,
    pub grade: Grade,
    /// Share of the light in the anti-tail sector, with the chosen ejection, and without ejection speed.
    pub share: f64,
    pub share_at_rest: f64,
}

/// A stretch of time with sunward dust of one origin.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Window {
    pub origin: Origin,
    pub begin: Instant,
    pub end: Instant,
    /// Whether it begins before the season, or ends after it: then that end is the season's.
    pub cut: [bool; 2],
    /// Its best date of those looked at: of the highest grade, and there of the greatest share.
    pub best: Strength,
}
