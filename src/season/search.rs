//! How are the events and windows of a season found, slice by slice?
//!
//! First the geometry, cell by cell, then the sunward dust, date by date. Both lie on fixed grids, so what was found serves
//! for any other stretch of the same comet, and nothing depends on how the work was sliced.

use super::event::{Event, EventKind};
use super::geometry::{CELL_DAYS, Cell, Quantity, Survey, moments};
use super::looks::Looks;
use super::stretch::Stretch;
use super::sunward::{self, Strength, Window};
use super::tell::{self, Doubt};
use crate::orbit::conic::Orbit;
use crate::order::Shelf;
use crate::sky::avoidance::NEAR_SUN_DEG;
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
    survey: Survey,
    cells: Shelf<Cell>,
    looks: Looks,
}

/// What a cell's geometry and its sunward dust cost, in days of a budget; together the length of a cell.
const GEOMETRY_DAYS: f64 = 2.0;
const SUNWARD_DAYS: f64 = CELL_DAYS - GEOMETRY_DAYS;

impl Search {
    pub fn new(subject: Subject, stretch: Stretch) -> Self {
        let survey = Survey::new(subject.orbit.clone());
        Search { subject, stretch, survey, cells: Shelf::default(), looks: Looks::default() }
    }

    /// Works on for about so many days of the season, at least one step, and returns which part is done, [0, 1]. All
    /// of the geometry comes first.
    pub fn advance(&mut self, days: f64) -> f64 {
        let mut left = days;
        for number in self.cell_numbers() {
            if left <= 0.0 {
                return self.done();
            }
            if self.cells.at(number).is_none() {
                self.cells.at_or(number, || self.survey.cell(number));
                left -= GEOMETRY_DAYS;
            }
        }
        for number in self.cell_numbers() {
            if left <= 0.0 {
                break;
            }
            if !self.looks.is_done(number) {
                let near = number - 1..=number + 1;
                let crossings: Vec<f64> = moments(self.cells.between(near).map(|(_, cell)| cell))
                    .iter()
                    .filter(|moment| moment.quantity == Quantity::Plane)
                    .map(|moment| moment.days)
                    .collect();
                self.looks.cell(&mut self.survey, &self.subject.tails, number, &crossings);
                left -= SUNWARD_DAYS;
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
        if subject.tails != self.subject.tails {
            self.looks = Looks::default();
        }
        (self.subject, self.stretch) = (subject, stretch);
    }

    /// Which part is done, [0, 1].
    pub fn done(&self) -> f64 {
        let (mut done, mut all) = (0.0, 0.0);
        for number in self.cell_numbers() {
            all += CELL_DAYS;
            done += if self.cells.at(number).is_some() { GEOMETRY_DAYS } else { 0.0 };
            done += if self.looks.is_done(number) { SUNWARD_DAYS } else { 0.0 };
        }
        done / all
    }

    /// What is found; complete once [`Search::done`] is 1.
    pub fn season(&mut self) -> Season {
        let doubt = Doubt { epoch: self.subject.epoch, has_site: self.subject.has_site };
        let numbers = self.cell_numbers();
        let mut events = Vec::new();
        for moment in moments(self.cells.between(numbers.clone()).map(|(_, cell)| cell)) {
            if self.stretch.holds(Instant::from_tdb_days(moment.days)) {
                events.extend(tell::event(&moment, &self.survey.sky(moment.days), &doubt));
            }
        }
        for time in self.perihelia() {
            let sky = self.survey.sky(time.tdb_days());
            events.push(tell::perihelion(&sky, self.subject.orbit.perihelion_distance_au(), &doubt));
        }
        let sunward = sunward::windows(self.looks.between(*numbers.start(), *numbers.end()), &self.stretch);
        events.extend(sunward::events(&sunward));
        crate::order::by_number(&mut events, |event| event.time.tdb_days());
        let near_sun = near_sun(&events, &self.stretch, self.survey.sky(self.stretch.from().tdb_days()).elongation_rad);
        let strengths = self.looks.between(*numbers.start(), *numbers.end()).map(|look| look.strength).collect();
        Season { events, sunward, strengths, near_sun }
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

/// The stretches within the solar-avoidance zone, from the elongation at the start and the entries and exits.
fn near_sun(events: &[Event], stretch: &Stretch, elongation_rad: f64) -> Vec<[Instant; 2]> {
    let mut open = (elongation_rad < NEAR_SUN_DEG.to_radians()).then_some(stretch.from());
    let mut found = Vec::new();
    for event in events {
        match event.kind {
            EventKind::NearSunBegins => open = Some(event.time),
            EventKind::NearSunEnds => found.extend(open.take().map(|begin| [begin, event.time])),
            _ => {}
        }
    }
    found.extend(open.map(|begin| [begin, stretch.to()]));
    found
}
