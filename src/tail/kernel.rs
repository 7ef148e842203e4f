//! Where do very many grains lie now, each moved exactly?
//!
//! The same motion as [`super::grain`], grains by the block ([`tailvane_lanes::solve`]). A grain whose fast solution does
//! not pass its own check (a perihelion grazed within its time, more than a revolution) is moved by the bracketed search
//! of [`crate::orbit::conic`], so that every result is good to a relative 1e-10 (tests/cloud.rs; mostly 1e-13).

use crate::body::State;
use crate::orbit::conic::{SUN_GM_AU3_D2, propagate_bracketed};
use crate::tail::grain::{Grain, Vista, ejection_au_d};
use nalgebra::Vector3;
use tailvane_lanes::solve::{BLOCK, Block, Sight};

/// A grain ready to be moved: as it left, and for how long it flies.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Flight {
    pub beta: f64,
    /// Heliocentric, equatorial, ejection included.
    pub start: State,
    /// Days, >= 0.
    pub days: f64,
    /// The nucleus's own change of universal anomaly in that time, d/au; infinite if unknown.
    pub guess: f64,
}

impl Flight {
    /// The flight of a grain up to the moment of the vista.
    pub fn of(vista: &Vista, grain: &Grain) -> Self {
        let released = vista.orbit.place_at(vista.seen.plus_days(-grain.age_days));
        let now = vista.orbit.place_at(vista.seen);
        let mut start = released.state;
        start.velocity_au_d += ejection_au_d(&start, grain.ejection_km_s);
        let guess = vista.orbit.whole_anomaly(&now.anomaly) - vista.orbit.whole_anomaly(&released.anomaly);
        Flight { beta: grain.beta, start, days: grain.age_days, guess }
    }
}

/// Moves grains; holds one block.
#[derive(Clone, Debug, Default)]
pub struct Kernel {
    block: Block,
    /// Grains that went to the slow solver, in all.
    pub slow: usize,
}

impl Kernel {
    pub fn new() -> Self {
        Kernel::default()
    }

    /// Hands each flight's end, heliocentric equatorial au, to `take`, in order.
    pub fn fly(&mut self, flights: &[Flight], mut take: impl FnMut(usize, Vector3<f64>)) {
        for (index, chunk) in flights.chunks(BLOCK).enumerate() {
            self.move_block(chunk);
            for k in 0..chunk.len() {
                take(index * BLOCK + k, self.end(k));
            }
        }
    }

    /// Hands each flight's gnomonic offset from the nucleus (xi east, eta north, tangent values) to `take`, in order;
    /// None 90 degrees or more away.
    pub fn see(&mut self, vista: &Vista, flights: &[Flight], mut take: impl FnMut(usize, Option<[f64; 2]>)) {
        for (index, chunk) in flights.chunks(BLOCK).enumerate() {
            self.move_block(chunk);
            for k in 0..chunk.len() {
                take(index * BLOCK + k, vista.offset(&self.end(k)));
            }
        }
    }

    fn end(&self, k: usize) -> Vector3<f64> {
        let end = &self.block.end;
        Vector3::new(end[0][k], end[1][k], end[2][k])
    }

    fn move_block(&mut self, flights: &[Flight]) {
        let block = &mut self.block;
        for (k, flight) in flights.iter().enumerate() {
            for axis in 0..3 {
                block.place[axis][k] = flight.start.position_au[axis];
                block.velocity[axis][k] = flight.start.velocity_au_d[axis];
            }
            block.mu[k] = SUN_GM_AU3_D2 * (1.0 - flight.beta);
            block.time[k] = flight.days;
            block.guess[k] = flight.guess;
        }
        block.solve();
        for (k, flight) in flights.iter().enumerate() {
            if block.doubtful[k / 64] >> (k % 64) & 1 == 1 {
                self.slow += 1;
                let mu = SUN_GM_AU3_D2 * (1.0 - flight.beta);
                let end = propagate_bracketed(mu, &flight.start, flight.days).position_au;
                for axis in 0..3 {
                    block.end[axis][k] = end[axis];
                }
            }
        }
    }
}

/// Where a vista looks from, for [`Block::project`].
pub fn sight(vista: &Vista) -> Sight {
    let axes = &vista.axes;
    Sight { observer: vista.observer_au.into(), axes: [axes.east, axes.north, axes.sight].map(Into::into) }
}
