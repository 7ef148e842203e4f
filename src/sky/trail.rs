//! Where was the comet when the light left it?
//!
//! Solves t' = t - |r(t') - observer| / c: a conic solution at a time near t', Newton's method on the light time,
//! and a Taylor step over the last moment. The first guess comes from an anchor, the comet at the nearest time
//! of a fixed grid, solved when a time near it is first asked for. So a run of dates costs about one conic
//! solution each, and an answer has the same bits whatever was asked before.

use super::LIGHT_AU_D;
use super::viewpoint::Viewpoint;
use crate::body::State;
use crate::orbit::conic::{Anomaly, Orbit, SUN_GM_AU3_D2};
use crate::time::Instant;
use nalgebra::Vector3;
use std::collections::BTreeMap;

/// Light time of one au, days.
const DAYS_PER_AU: f64 = 1.0 / LIGHT_AU_D;

/// Anchors stand this far apart, days.
const ANCHOR_DAYS: f64 = 2.0;

/// The anchors of one orbit, as far as they were needed.
#[derive(Clone, Debug, Default)]
pub struct Trail {
    anchors: BTreeMap<i64, Anchor>,
    /// The one used last, so that a run of near dates looks nothing up.
    last: Option<(i64, Anchor)>,
}

impl Trail {
    /// The comet on `orbit` (always the same for one trail) when its light left it, and the light time, days.
    pub fn retarded(&mut self, orbit: &Orbit, viewpoint: &Viewpoint) -> (State, f64) {
        let anchor = self.anchor(orbit, viewpoint.time);
        let seen_from = viewpoint.observer.position_au;
        let mut light_time_days = 0.0;
        for _ in 0..2 {
            let near = anchor.position_near(viewpoint.time.plus_days(-light_time_days));
            light_time_days = (near - seen_from).norm() * DAYS_PER_AU;
        }
        let mut left = viewpoint.time.plus_days(-light_time_days);
        let mut place = orbit.place_near(left, &anchor.anomaly_near(left));
        loop {
            let sight_line = place.state.position_au - seen_from;
            let distance = sight_line.norm();
            // Newton on light_time - distance / c, whose derivative is 1 + (line-of-sight speed) / c.
            let speed = sight_line.dot(&place.state.velocity_au_d) / distance;
            let later = (light_time_days - distance * DAYS_PER_AU) / (1.0 + speed * DAYS_PER_AU);
            light_time_days -= later;
            let square = place.state.position_au.norm_squared();
            // Relative to the time scale of the motion, r^1.5 / k, this leaves less than 1e-13 of the velocity:
            // later < 1e-5 r^1.5, in fourth powers to save roots.
            let later_square = later * later;
            if later_square * later_square < 1e-20 * square * square * square {
                shift(&mut place.state, later);
                return (place.state, light_time_days);
            }
            place.anomaly.s += later / square.sqrt();
            left = viewpoint.time.plus_days(-light_time_days);
            place = orbit.place_near(left, &place.anomaly);
        }
    }

    fn anchor(&mut self, orbit: &Orbit, time: Instant) -> Anchor {
        let number = (time.tdb_days() / ANCHOR_DAYS).round() as i64;
        match self.last {
            Some((last, anchor)) if last == number => anchor,
            _ => {
                let grid_time = Instant::from_tdb_days(number as f64 * ANCHOR_DAYS);
                let anchor = *self.anchors.entry(number).or_insert_with(|| Anchor::at(orbit, grid_time));
                self.last = Some((number, anchor));
                anchor
            }
        }
    }
}

/// The comet at a grid time, with what carries it over to a near one.
#[derive(Clone, Copy, Debug)]
struct Anchor {
    time: Instant,
    state: State,
    /// Acceleration, au/d^2.
    pull: Vector3<f64>,
    anomaly: Anomaly,
    /// First, second and third derivative of the universal anomaly with time, over 1, 2 and 6.
    rates: [f64; 3],
}

impl Anchor {
    /// With s' = 1/r, s'' = -eta / r^3 and s''' = 3 eta^2 / r^5 - eta' / r^3, where eta = r . v and
    /// eta' = v^2 - mu / r.
    fn at(orbit: &Orbit, time: Instant) -> Self {
        let place = orbit.place_at(time);
        let State { position_au, velocity_au_d } = place.state;
        let r = position_au.norm();
        let eta = position_au.dot(&velocity_au_d);
        let eta_rate = velocity_au_d.norm_squared() - SUN_GM_AU3_D2 / r;
        let cube = r * r * r;
        let third = 3.0 * eta * eta / (cube * r * r) - eta_rate / cube;
        Anchor {
            time,
            state: place.state,
            pull: pull(&position_au),
            anomaly: place.anomaly,
            rates: [1.0 / r, -0.5 * eta / cube, third / 6.0],
        }
    }

    /// A guess of the universal anomaly at a near time.
    fn anomaly_near(&self, time: Instant) -> Anomaly {
        let days = time.tdb_days() - self.time.tdb_days();
        let [first, second, third] = self.rates;
        Anomaly { s: self.anomaly.s + days * (first + days * (second + days * third)), ..self.anomaly }
    }

    /// A guess of the place at a near time.
    fn position_near(&self, time: Instant) -> Vector3<f64> {
        let days = time.tdb_days() - self.time.tdb_days();
        self.state.position_au + (self.state.velocity_au_d + self.pull * (0.5 * days)) * days
    }
}

/// Acceleration by the Sun at a heliocentric place, au/d^2.
fn pull(position_au: &Vector3<f64>) -> Vector3<f64> {
    let square = position_au.norm_squared();
    position_au * (-SUN_GM_AU3_D2 / (square * square.sqrt()))
}

/// Moves a state by a short time under the Sun's pull, to second order.
fn shift(state: &mut State, days: f64) {
    let pull = pull(&state.position_au);
    state.position_au += (state.velocity_au_d + pull * (0.5 * days)) * days;
    state.velocity_au_d += pull * days;
}
