//! Where is the Earth-Moon barycentre?
//!
//! Heliocentric, ICRF/J2000 equatorial, au and au/day. Chebyshev pieces of 96 days and 10 terms fitted to
//! JPL DE440 (Park et al. 2021, AJ 161, 105); the fit is tests/truth/ephemeris/fit_tables.py, which also says
//! how barycentre.bin is laid out: most of each number is foretold from its neighbours, so that the table weighs little
//! in the page; it is unfolded when first asked for, in a millisecond. Within 3.3e-9 au of DE440 over the whole table (41 points in every piece).

use super::State;
use nalgebra::Vector3;
use std::array::from_fn;
use std::sync::LazyLock;

/// The coefficients of each piece, in counts.
static TABLE: LazyLock<Vec<Piece>> = LazyLock::new(|| unfolded(include_bytes!("barycentre.bin")));

/// Chebyshev coefficients, the lowest term first.
type Piece = [Vector3<f64>; TERMS];

/// Length of a piece. Piece number n covers n * 96 to (n + 1) * 96 days from J2000.0.
const PIECE_DAYS: f64 = 96.0;
const FIRST_PIECE: i64 = -381;
const PIECES: usize = 766;
const TERMS: usize = 10;
/// One count of the table, au.
const UNIT_AU: f64 = 5e-10;
/// So many pieces before one help to foretell it; the first ones are written as they are.
const LAGS: usize = 2;
/// A weight for each higher term of the same piece and for each term of the pieces before.
const WEIGHTS: usize = TERMS * (TERMS - 1) / 2 + TERMS * TERMS * LAGS;

/// State at `days` of TDB from J2000.0. The caller keeps to the table: -36576 to 36960 days.
pub(super) fn state(days: f64) -> State {
    Row::of(days).state(days)
}

/// A piece of the table, read once for several times in it.
pub(super) struct Row {
    start_days: f64,
    counts: &'static Piece,
}

impl Row {
    /// The piece that holds `days`; the caller keeps to the table.
    pub(super) fn of(days: f64) -> Row {
        let piece = (days / PIECE_DAYS).floor();
        let row = (piece as i64 - FIRST_PIECE) as usize;
        Row { start_days: piece * PIECE_DAYS, counts: &TABLE[row] }
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

/// The table that these bytes hold. Every sum runs in the order in which the table was made, so that it rounds alike.
fn unfolded(bytes: &[u8]) -> Vec<Piece> {
    let (rules, left) = bytes.split_at(6 * WEIGHTS);
    let weights: Vec<f64> = (0..WEIGHTS)
        .map(|n| f64::from_le_bytes(from_fn(|byte| if byte < 2 { 0 } else { rules[(byte - 2) * WEIGHTS + n] })))
        .collect();
    let unforetold = |term: usize, axis: usize, piece: usize| {
        let at = ((TERMS - 1 - term) * 3 + axis) * PIECES + piece;
        let code = u32::from_le_bytes(from_fn(|byte| left[byte * 3 * TERMS * PIECES + at]));
        // 0, 1, 2, 3 ... stand for 0, -1, 1, -2 ...
        if code % 2 == 0 { f64::from(code / 2) } else { -f64::from(code / 2) - 1.0 }
    };
    let mut pieces: Vec<Piece> = Vec::with_capacity(PIECES);
    for piece in 0..PIECES {
        let mut here = [Vector3::zeros(); TERMS];
        let mut weight = weights.iter();
        for term in (0..TERMS).rev() {
            let before = || pieces.iter().rev().take(LAGS).flatten();
            let mut guess = Vector3::zeros();
            if piece >= LAGS {
                for (known, weight) in here[term + 1..].iter().chain(before()).zip(&mut weight) {
                    guess += known * *weight;
                }
            }
            here[term] = Vector3::from_fn(|axis, _| unforetold(term, axis, piece) + (guess[axis] + 0.5).floor());
        }
        pieces.push(here);
    }
    pieces
}
