//! Where is the Earth-Moon barycentre?
//!
//! Heliocentric, ICRF/J2000 equatorial, au and au/day. Chebyshev pieces of 96 days and 10 terms fitted to
//! JPL DE440 (Park et al. 2021, AJ 161, 105); the fit is tests/truth/ephemeris/fit_tables.py, which also says
//! how barycentre.bin is laid out. Within 3.3e-9 au of DE440 over the whole table (41 points in every piece).

use super::State;
use nalgebra::Vector3;

static TABLE: &[u8] = include_bytes!("barycentre.bin");

/// Length of a piece. Piece number n covers n * 96 to (n + 1) * 96 days from J2000.0.
const PIECE_DAYS: f64 = 96.0;
const FIRST_PIECE: i64 = -381;
const PIECES: usize = 766;
const TERMS: usize = 10;
/// One count of the table, au.
const UNIT_AU: f64 = 5e-10;

/// State at `days` of TDB from J2000.0. The caller keeps to the table: -36576 to 36960 days.
pub(super) fn state(days: f64) -> State {
    Row::of(days).state(days)
}

/// A piece of the table, read once for several times in it.
pub(super) struct Row {
    start_days: f64,
    counts: [Vector3<f64>; TERMS],
}

impl Row {
    /// The piece that holds `days`; the caller keeps to the table.
    pub(super) fn of(days: f64) -> Row {
        let piece = (days / PIECE_DAYS).floor();
        let row = (piece as i64 - FIRST_PIECE) as usize;
        Row { start_days: piece * PIECE_DAYS, counts: std::array::from_fn(|term| coefficients(term, row)) }
    }

    /// State at a time within the piece.
    #[inline]
    pub(super) fn state(&self, days: f64) -> State {
        // Minus one at the start of the piece, plus one at its end.
        let x = 2.0 * (days - self.start_days) / PIECE_DAYS - 1.0;
        // Chebyshev polynomials of both kinds: T(n+1) = 2 x T(n) - T(n-1), dT(n)/dx = n U(n-1).
        let (mut t, mut t_before) = (1.0, x);
        let (mut u, mut u_before) = (0.0, -1.0);
        let (mut place, mut rate) = (Vector3::zeros(), Vector3::zeros());
        for (n, c) in self.counts.iter().enumerate() {
            place += c * t;
            rate += c * (n as f64 * u);
            (t, t_before) = (2.0 * x * t - t_before, t);
            (u, u_before) = (2.0 * x * u - u_before, u);
        }
        State { position_au: place * UNIT_AU, velocity_au_d: rate * (UNIT_AU * 2.0 / PIECE_DAYS) }
    }
}

/// The counts of one term of one piece, by axis.
fn coefficients(term: usize, row: usize) -> Vector3<f64> {
    Vector3::from_fn(|axis, _| {
        let at = (term * 3 + axis) * PIECES + row;
        let plane = |n: usize| TABLE[n * TERMS * 3 * PIECES + at];
        f64::from(i32::from_le_bytes([plane(0), plane(1), plane(2), plane(3)]))
    })
}
