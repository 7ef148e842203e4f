//! Where was the comet when the light left it?
//!
//! Solves t' = t - |r(t') - observer| / c by Newton's method on the light time, and a Taylor step over the last moment.
//! The comet's path is kept in pieces: polynomials through conic solutions, made when a time in them is first asked
//! for. Pieces halve a fixed grid until their last terms vanish, so they are long far from the Sun and short at
//! perihelion, and an answer has the same bits whatever was asked before. The velocity follows from the place, by the
//! hodograph.
//!
//! Accuracy: within 1e-14 of the distance from the Sun, or what the last bit of the date moves the comet, of the conic
//! solution itself (tests/geometry.rs). Where no piece is short enough, the conic answers.

use super::LIGHT_AU_D;
use super::viewpoint::Viewpoint;
use crate::body::State;
use crate::body::piece::{Fit, Piece};
use crate::orbit::conic::{Orbit, SUN_GM_AU3_D2};
use crate::order::Shelf;
use crate::time::Instant;

/// Light time of one au, days.
const DAYS_PER_AU: f64 = 1.0 / LIGHT_AU_D;

/// Length of the longest pieces, days.
const LONGEST_DAYS: f64 = 32.0;

/// Halvings after which the conic itself answers: pieces of three minutes.
const MOST_HALVINGS: u32 = 14;

/// A piece serves when its last Chebyshev term is below this share of the distance from the Sun. What is cut off is
/// some fifteen times less.
const LAST_TERM: f64 = 4e-15;

/// The last term but one may be larger by the rate at which terms fall.
const RATE: f64 = 15.0;

/// The pieces of one orbit, as far as they were needed.
#[derive(Clone, Debug, Default)]
pub struct Trail {
    fit: Fit,
    stretches: Vec<Stretch>,
    /// By number and halvings: where the stretch stands, or that it is too long for one piece.
    known: Shelf<Option<usize>>,
    /// The one used last, so that a run of near dates looks nothing up.
    last: usize,
}

/// A piece and its time.
#[derive(Clone, Debug)]
struct Stretch {
    start_days: f64,
    end_days: f64,
    /// x gained in a day.
    pace: f64,
    piece: Piece,
}

impl Stretch {
    fn holds(&self, days: f64) -> bool {
        self.start_days <= days && days < self.end_days
    }

    fn x(&self, days: f64) -> f64 {
        (days - self.start_days) * self.pace - 1.0
    }
}

impl Trail {
    /// The comet on `orbit` (always the same for one trail) when its light left it, and the light time, days.
    pub fn retarded(&mut self, orbit: &Orbit, viewpoint: &Viewpoint) -> (State, f64) {
        let now = viewpoint.time.tdb_days();
        let seen_from = viewpoint.observer.position_au;
        let near = match self.stretch(orbit, now) {
            Some(stretch) => stretch.piece.rough_place(stretch.x(now)),
            None => orbit.place_at(viewpoint.time).state.position_au,
        };
        let mut light_time_days = (near - seen_from).norm() * DAYS_PER_AU;
        loop {
            let left = now - light_time_days;
            let place = match self.stretch(orbit, left) {
                Some(stretch) => stretch.piece.place(stretch.x(left)),
                None => orbit.place_at(Instant::from_tdb_days(left)).state.position_au,
            };
            let square = place.norm_squared();
            let sun_distance = square.sqrt();
            let velocity = orbit.velocity_at(&place, sun_distance);
            let sight_line = place - seen_from;
            let distance = sight_line.norm();
            // Newton on light_time - distance / c, whose derivative is 1 + (line-of-sight speed) / c.
            let away = sight_line.dot(&velocity);
            let later = (light_time_days - distance * DAYS_PER_AU) * distance / (distance + away * DAYS_PER_AU);
            light_time_days -= later;
            // Relative to the time scale of the motion, r^1.5 / k, this leaves less than 1e-13 of the velocity:
            // later < 1e-5 r^1.5, in fourth powers to save roots.
            let later_square = later * later;
            if later_square * later_square < 1e-20 * square * square * square {
                // To second order under the Sun's pull.
                let pull = place * (-SUN_GM_AU3_D2 / (square * sun_distance));
                let state = State {
                    position_au: place + (velocity + pull * (0.5 * later)) * later,
                    velocity_au_d: velocity + pull * later,
                };
                return (state, light_time_days);
            }
        }
    }

    /// The stretch of a time; None where the shortest is too long.
    fn stretch(&mut self, orbit: &Orbit, days: f64) -> Option<&Stretch> {
        if !self.stretches.get(self.last).is_some_and(|stretch| stretch.holds(days)) {
            self.last = self.find(orbit, days)?;
        }
        self.stretches.get(self.last)
    }

    fn find(&mut self, orbit: &Orbit, days: f64) -> Option<usize> {
        let mut length_days = LONGEST_DAYS;
        for halvings in 0..=MOST_HALVINGS {
            let number = (days / length_days).floor();
            let key = number as i64 * (i64::from(MOST_HALVINGS) + 1) + i64::from(halvings);
            let known = *self.known.at_or(key, || {
                let made = stretch(&self.fit, orbit, number * length_days, length_days)?;
                self.stretches.push(made);
                Some(self.stretches.len() - 1)
            });
            if known.is_some() {
                return known;
            }
            length_days *= 0.5;
        }
        None
    }
}

/// The comet's path from a time, as one piece; None where it bends too much for one.
fn stretch(fit: &Fit, orbit: &Orbit, start_days: f64, length_days: f64) -> Option<Stretch> {
    let half_days = 0.5 * length_days;
    // Counted from perihelion, so that a node keeps the digits that a date has not.
    let middle = orbit.days_from_perihelion(Instant::from_tdb_days(start_days)) + half_days;
    let places = fit.nodes.map(|x| orbit.place_after(middle + half_days * x).state);
    let piece = fit.piece(&places.map(|place| place.position_au));
    let serves = places.iter().all(|place| {
        // What the last bit of the time moves the comet cannot be fitted.
        let noise = f64::EPSILON * middle.abs() * place.velocity_au_d.norm();
        let [before, last] = piece.last_terms();
        let allowed = LAST_TERM * place.position_au.norm() + noise;
        last < allowed && before < RATE * allowed
    });
    serves.then(|| Stretch { start_days, end_days: start_days + length_days, pace: 1.0 / half_days, piece })
}
