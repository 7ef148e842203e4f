//! Where is the centre of the Earth?
//!
//! Heliocentric, ICRF/J2000 equatorial, au and au/day, geometric. The Earth-Moon barycentre comes from a
//! table fitted to JPL DE440, the Earth's distance from it (4330 to 4942 km) from the leading terms of the lunar
//! series.
//!
//! Span: [`super::SPAN`]. Against DE440 there, at 60000 evenly spaced times: within 7.7e-9 au (1.1 km; 2.1e-9 au rms)
//! and 5e-9 au/day (9 mm/s). At a joint of the table, every 96 days, the place steps by up to 7e-9 au.
//! Left out: the Sun's motion about the barycentre of the solar system during a light time (0.009 arcsec).

use super::moon::{Detail, series_au};
use super::piece::{Fit, Piece};
use super::{SPAN, State, barycentre};
use crate::error::Error;
use crate::time::Instant;
use nalgebra::Vector3;

/// Share of the geocentric place of the Moon by which the barycentre lies off the Earth's centre: 1 / (1 + the
/// mass of the Earth in Moons), 81.300 568 22 in DE440.
const BARYCENTRE_SHARE: f64 = 1.0 / 82.300_568_22;

/// Half the step over which the Moon's share of the velocity is differenced, days; the error of the central
/// difference is 1e-11 au/day.
const HALF_STEP_DAYS: f64 = 0.01;

/// State of the centre of the Earth.
///
/// # Errors
/// A time outside [`SPAN`].
pub fn earth(time: Instant) -> Result<State, Error> {
    SPAN.check(time)?;
    let days = time.tdb_days();
    let State { position_au, velocity_au_d } = barycentre::state(days);
    let swing = from_barycentre_au(days + HALF_STEP_DAYS) - from_barycentre_au(days - HALF_STEP_DAYS);
    Ok(State {
        position_au: position_au + from_barycentre_au(days),
        velocity_au_d: velocity_au_d + swing / (2.0 * HALF_STEP_DAYS),
    })
}

/// State of the barycentre of Earth and Moon.
///
/// # Errors
/// A time outside [`SPAN`].
pub fn earth_moon_barycentre(time: Instant) -> Result<State, Error> {
    SPAN.check(time)?;
    Ok(barycentre::state(time.tdb_days()))
}

/// From the barycentre to the centre of the Earth.
fn from_barycentre_au(days: f64) -> Vector3<f64> {
    series_au(days, Detail::Leading) * -BARYCENTRE_SHARE
}

/// Pieces of a track are this long; a piece of the barycentre's table holds a whole number of them, so that no
/// fit runs across a joint of the table.
const PIECE_DAYS: f64 = 16.0;
/// The path of the Earth for many times: the same states as [`earth`], from polynomials of 16 days and 12 terms, each
/// fitted when a time in it is first asked for.
///
/// Its pieces lie on a fixed grid, so an answer does not depend on what was asked before. Within 2.1e-10 au and
/// 2.7e-9 au/day of [`earth`] at 60000 evenly spaced times.
#[derive(Clone, Debug)]
pub struct Track {
    fit: Fit,
    first_piece: i64,
    pieces: Vec<Option<Box<Piece>>>,
}

impl Default for Track {
    fn default() -> Self {
        Track::new()
    }
}

impl Track {
    /// A track with no piece fitted yet.
    pub fn new() -> Track {
        let piece_of = |time: Instant| (time.tdb_days() / PIECE_DAYS).floor() as i64;
        let first_piece = piece_of(SPAN.first);
        let count = piece_of(SPAN.last) - first_piece + 1;
        Track { fit: Fit::new(), first_piece, pieces: (0..count).map(|_| None).collect() }
    }

    /// State of the centre of the Earth.
    ///
    /// # Errors
    /// A time outside [`SPAN`].
    pub fn state(&mut self, time: Instant) -> Result<State, Error> {
        SPAN.check(time)?;
        let number = (time.tdb_days() / PIECE_DAYS).floor();
        let start_days = number * PIECE_DAYS;
        let index = (number as i64 - self.first_piece) as usize;
        let piece = self.pieces[index].get_or_insert_with(|| Box::new(piece(&self.fit, start_days)));
        let x = (time.tdb_days() - start_days) / (0.5 * PIECE_DAYS) - 1.0;
        let (position_au, rate) = piece.place_and_rate(x);
        Ok(State { position_au, velocity_au_d: rate / (0.5 * PIECE_DAYS) })
    }
}

/// The Earth's path from a time, as one piece.
fn piece(fit: &Fit, start_days: f64) -> Piece {
    let row = barycentre::Row::of(start_days);
    fit.piece(&fit.nodes.map(|x| {
        let days = start_days + 0.5 * PIECE_DAYS * (x + 1.0);
        row.state(days).position_au + from_barycentre_au(days)
    }))
}
