//! How are the events and windows of a season found, slice by slice?
//!
//! First the geometry, cell by cell, then the sunward dust, date by date. Both lie on fixed grids, so what was found serves
//! for any other stretch of the same comet, and nothing depends on how the work was sliced.

use super::event::Event;
use super::geometry::{CELL_DAYS, Cell, Survey, moments};
use super::stretch::Stretch;
use super::sunward::{Strength, Window};
use super::tell::{self, Doubt};
use crate::body::observer::Observer;
use crate::orbit::conic::Orbit;
use crate::sky::watch::Watch;
use crate::tail::law::Tails;
use crate::time::Instant;
use std::collections::BTreeMap;

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
    survey: Survey,
    cells: BTreeMap<i64, Cell>,
}

impl Search {
    pub fn new(subject: Subject, stretch: Stretch) -> Self {
        let survey = Survey::new(Watch::new(subject.orbit.clone(), Observer::Geocentre));
        Search { subject, stretch, survey, cells: BTreeMap::new() }
    }

    /// Works on for about so many days of the season, and returns which part is done, [0, 1].
    pub fn advance(&mut self, days: f64) -> f64 {
        let mut left = days;
        for number in self.cell_numbers() {
            if left <= 0.0 {
                break;
            }
            if !self.cells.contains_key(&number) {
                let cell = self.survey.cell(number);
                self.cells.insert(number, cell);
                left -= CELL_DAYS;
            }
        }
        self.done()
    }

    /// A new subject or stretch: keeps what does not depend on what changed.
    pub fn renew(&mut self, subject: Subject, stretch: Stretch) {
        if subject.orbit != self.subject.orbit {
            *self = Search::new(subject, stretch);
            return;
        }
        (self.subject, self.stretch) = (subject, stretch);
    }

    /// Which part is done, [0, 1].
    pub fn done(&self) -> f64 {
        let numbers = self.cell_numbers();
        let all = numbers.clone().count();
        self.cells.range(numbers).count() as f64 / all as f64
    }

    /// What is found; complete once [`Search::done`] is 1.
    pub fn season(&mut self) -> Season {
        let doubt = Doubt { epoch: self.subject.epoch, has_site: self.subject.has_site };
        let mut events = Vec::new();
        for moment in moments(self.cells.range(self.cell_numbers()).map(|(_, cell)| cell)) {
            if self.stretch.holds(Instant::from_tdb_days(moment.days)) {
                events.extend(tell::event(&moment, &self.survey.sky(moment.days), &doubt));
            }
        }
        for time in self.perihelia() {
            let sky = self.survey.sky(time.tdb_days());
            events.push(tell::perihelion(&sky, self.subject.orbit.perihelion_distance_au(), &doubt));
        }
        events.sort_by(|a, b| a.time.tdb_days().total_cmp(&b.time.tdb_days()));
        Season { events, ..Season::default() }
    }

    fn cell_numbers(&self) -> std::ops::RangeInclusive<i64> {
        let number = |time: Instant| (time.tdb_days() / CELL_DAYS).floor() as i64;
        number(self.stretch.from())..=number(self.stretch.to())
    }

    /// Perihelion passages within the stretch.
    fn perihelia(&self) -> Vec<Instant> {
        let first = self.subject.orbit.perihelion_time();
        let Some(period) = self.subject.orbit.period_days() else {
            return Some(first).filter(|time| self.stretch.holds(*time)).into_iter().collect();
        };
        let turns = |time: Instant| (time.tdb_days() - first.tdb_days()) / period;
        let (from, to) = (turns(self.stretch.from()).ceil() as i64, turns(self.stretch.to()).floor() as i64);
        (from..=to).map(|turn| first.plus_days(turn as f64 * period)).collect()
    }
}
