//! When, around this time, does the comet stand up in a dark sky?
//!
//! Dark means the Sun below -9 degrees and the comet above 5 degrees unless [`Limits`] say otherwise: this project's
//! default, chosen because nights with a sunward tail often fall in twilight. Windows are found on a five-minute grid and their ends
//! by bisection to a second; one shorter than five minutes may be missed. Airless.

use crate::frame::earth_rotation::TURNS_PER_UT1_DAY;
use crate::time::Instant;
use nalgebra::Vector3;
use std::f64::consts::TAU;

/// The Sun must be below this, degrees.
pub const SUN_BELOW_DEG: f64 = -9.0;
/// The comet must be above this, degrees.
pub const COMET_ABOVE_DEG: f64 = 5.0;

/// What counts as dark, and as up.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Limits {
    /// The Sun's centre is below this altitude, degrees.
    pub sun_below_deg: f64,
    /// The comet is above this altitude, degrees.
    pub comet_above_deg: f64,
}

impl Default for Limits {
    fn default() -> Self {
        Limits { sun_below_deg: SUN_BELOW_DEG, comet_above_deg: COMET_ABOVE_DEG }
    }
}

impl Limits {
    /// Whether altitudes of comet and Sun are those of a comet up in a dark sky.
    pub fn hold(&self, [comet_deg, sun_deg]: [f64; 2]) -> bool {
        comet_deg > self.comet_above_deg && sun_deg < self.sun_below_deg
    }
}

/// Step of the search, days: five minutes.
const STEP: f64 = 5.0 / 1440.0;
/// The search runs this far to each side, days.
const REACH: f64 = 0.5;
/// Ends are found to this, days: a second.
const SECOND: f64 = 1.0 / 86_400.0;

/// Nodes of a day, in steps of a quarter from half a day before its middle.
pub const NODES: usize = 5;
/// Days from one node to the next.
pub const NODE_DAYS: f64 = 0.25;

/// Altitudes of comet and Sun over a day, from few exact places: the directions run through five nodes as
/// polynomials, and the horizon turns about the pole at the Earth's rate. Within 0.01 degrees of the exact
/// altitudes beyond 0.05 au (tests/invariants.rs).
#[derive(Clone, Copy, Debug)]
pub struct Day {
    pub middle: Instant,
    /// Unit vectors from the site to comet and Sun at the nodes, equatorial.
    pub comet: [Vector3<f64>; NODES],
    pub sun: [Vector3<f64>; NODES],
    /// Zenith at the middle, and the pole about which it turns, equatorial unit vectors.
    pub zenith: Vector3<f64>,
    pub pole: Vector3<f64>,
}

impl Day {
    /// Altitudes of comet and Sun, degrees, within half a day of the middle.
    pub fn altitudes_deg(&self, time: Instant) -> [f64; 2] {
        let days = time.tdb_days() - self.middle.tdb_days();
        let (sine, cosine) = libm::sincos(TAU * TURNS_PER_UT1_DAY * days);
        // Rodrigues' formula.
        let zenith = self.zenith * cosine
            + self.pole.cross(&self.zenith) * sine
            + self.pole * (self.pole.dot(&self.zenith) * (1.0 - cosine));
        [&self.comet, &self.sun].map(|nodes| {
            let direction = through(nodes, days / NODE_DAYS + 2.0);
            libm::asin((zenith.dot(&direction) / direction.norm()).clamp(-1.0, 1.0)).to_degrees()
        })
    }
}

/// The polynomial through values at 0, 1, 2, 3, 4 (Lagrange's form), at `x`.
fn through(values: &[Vector3<f64>; NODES], x: f64) -> Vector3<f64> {
    let mut sum = Vector3::zeros();
    for (i, value) in values.iter().enumerate() {
        let weight: f64 = (0..NODES).filter(|&j| j != i).map(|j| (x - j as f64) / (i as f64 - j as f64)).product();
        sum += value * weight;
    }
    sum
}

/// A stretch of time with the comet up in a dark sky. An end that lies beyond half a day is cut there.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Window {
    pub begin: Instant,
    pub end: Instant,
    /// Highest altitude of the comet on the grid, degrees, and when.
    pub highest_deg: f64,
    pub highest_at: Instant,
}

/// Windows that touch the half day before or after `middle`, in order. `altitudes_deg` gives comet and Sun
/// at a time; None where the ephemeris ends.
pub fn windows(
    middle: Instant,
    limits: &Limits,
    mut altitudes_deg: impl FnMut(Instant) -> Option<[f64; 2]>,
) -> Vec<Window> {
    let mut dark = |time: Instant| altitudes_deg(time).filter(|&both| limits.hold(both)).map(|both| both[0]);
    let count = (2.0 * REACH / STEP).round() as i32;
    let mut found: Vec<Window> = Vec::new();
    let mut inside = false;
    for k in 0..=count {
        let time = middle.plus_days(f64::from(k) * STEP - REACH);
        let altitude = dark(time);
        match (altitude, inside) {
            (Some(altitude_deg), false) => {
                let begin = if k == 0 { time } else { edge(time, time.plus_days(-STEP), &mut dark) };
                found.push(Window { begin, end: time, highest_deg: altitude_deg, highest_at: time });
            }
            (Some(altitude_deg), true) => {
                if let Some(window) = found.last_mut() {
                    window.end = time;
                    if altitude_deg > window.highest_deg {
                        (window.highest_deg, window.highest_at) = (altitude_deg, time);
                    }
                }
            }
            (None, true) => {
                if let Some(window) = found.last_mut() {
                    window.end = edge(window.end, time, &mut dark);
                }
            }
            (None, false) => {}
        }
        inside = altitude.is_some();
    }
    found
}

/// The time between a dark one and another that is not at which darkness ends, to a second.
fn edge(mut within: Instant, mut without: Instant, dark: &mut impl FnMut(Instant) -> Option<f64>) -> Instant {
    while (within.tdb_days() - without.tdb_days()).abs() > SECOND {
        let middle = Instant::from_tdb_days(0.5 * (within.tdb_days() + without.tdb_days()));
        if dark(middle).is_some() {
            within = middle;
        } else {
            without = middle;
        }
    }
    within
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ends_are_found_to_a_second_and_a_cut_window_ends_at_the_reach() {
        let middle = Instant::from_tdb_days(0.0);
        // A comet that stays up; the Sun is low from -0.1 d to 0.2 d, and again from 0.4 d on.
        let altitudes = |time: Instant| {
            let t = time.tdb_days();
            let low = (t > -0.1 && t < 0.2) || t > 0.4;
            Some([30.0 - 90.0 * t * t, if low { -20.0 } else { 20.0 }])
        };
        let found = windows(middle, &Limits::default(), altitudes);
        assert_eq!(found.len(), 2);
        assert!((found[0].begin.tdb_days() + 0.1).abs() <= SECOND, "{found:?}");
        assert!((found[0].end.tdb_days() - 0.2).abs() <= SECOND, "{found:?}");
        assert!(found[0].highest_at.tdb_days().abs() < STEP);
        assert!((found[1].end.tdb_days() - REACH).abs() < 1e-9);
    }
}
