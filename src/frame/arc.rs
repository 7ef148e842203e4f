//! Which angle do two legs make?
//!
//! The angle of the point (adjacent, opposite) from the first axis toward the second, [-pi, pi]: the arc tangent of two
//! arguments, without a branch, so that the angles of one sky go through the same arithmetic side by side. Legs are
//! finite; two zero legs make the angle zero.
//!
//! Method: the smaller leg over the larger, past an eighth of pi against the diagonal instead, so that one
//! polynomial in the square of the tangent below tan(pi/8) serves (least greatest error, 3e-18, by Remez exchange in 60
//! digits); then back by eighths of a turn. Accuracy: within 1.7e-16 rad times the angle where it is small, 4.5e-16 rad near
//! pi, against 40-digit arithmetic (tests/frames.rs). Plain arithmetic alone: the same bits natively and in wasm.

use std::f64::consts::{FRAC_PI_2, FRAC_PI_4, PI};

/// Tangent of an eighth of pi.
const TAN_EIGHTH: f64 = 0.414_213_562_373_095_05;

/// What the double nearest to a quarter of pi leaves out.
const QUARTER_PI_REST: f64 = 3.061_616_997_868_383e-17;

/// atan(t) = t + t z (c0 + c1 z + ...), z = t^2.
const TERMS: [f64; 11] = [
    -0.333_333_333_333_332,
    0.199_999_999_999_542_52,
    -0.142_857_142_802_667_15,
    0.111_111_107_870_929_52,
    -0.090_908_978_650_563_38,
    0.076_920_621_642_799_95,
    -0.066_631_265_659_890_37,
    0.058_480_551_724_848_93,
    -0.050_400_592_738_369_71,
    0.038_083_879_095_094_16,
    -0.017_928_497_154_546_794,
];

/// Angles that one pass takes.
pub const MOST: usize = 12;

/// The legs of an angle, of any common scale.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Legs {
    pub opposite: f64,
    pub adjacent: f64,
}

impl Legs {
    /// The angle, [-pi, pi]; negative where the opposite leg is.
    pub fn arc_rad(self) -> f64 {
        arc_rad(self.opposite, self.adjacent)
    }

    /// The angles of several, at most [`MOST`], side by side; the bits are those of [`Legs::arc_rad`].
    pub fn arcs_rad<const N: usize>(legs: [Legs; N]) -> [f64; N] {
        let (mut opposite, mut arcs) = ([0.0; MOST], [0.0; MOST]);
        for (n, legs) in legs.into_iter().enumerate() {
            (opposite[n], arcs[n]) = (legs.opposite, legs.adjacent);
        }
        fill(&opposite, &mut arcs);
        std::array::from_fn(|n| arcs[n])
    }
}

/// Replaces adjacent legs by angles. Groups of four are what the compiler lays out in vectors.
#[inline(never)]
fn fill(opposite: &[f64; MOST], adjacent: &mut [f64; MOST]) {
    for (y, x) in opposite.as_chunks::<4>().0.iter().zip(adjacent.as_chunks_mut::<4>().0) {
        *x = std::array::from_fn(|lane| arc_rad(y[lane], x[lane]));
    }
}

#[inline(always)]
fn arc_rad(opposite: f64, adjacent: f64) -> f64 {
    let (y, x) = (opposite.abs(), adjacent.abs());
    let steep = y > x;
    let (larger, smaller) = (if steep { y } else { x }, if steep { x } else { y });
    let diagonal = smaller > TAN_EIGHTH * larger;
    let over = smaller - if diagonal { larger } else { 0.0 };
    let under = larger + if diagonal { smaller } else { 0.0 };
    let t = over / if under > f64::MIN_POSITIVE { under } else { f64::MIN_POSITIVE };

    let z = t * t;
    let w = z * z;
    let [c0, c1, c2, c3, c4, c5, c6, c7, c8, c9, c10] = TERMS;
    let even = c0 + w * (c2 + w * (c4 + w * (c6 + w * (c8 + w * c10))));
    let odd = c1 + w * (c3 + w * (c5 + w * (c7 + w * c9)));
    let bend = t * (z * even + w * odd);
    // Each step adds what its part of pi leaves out: an eighth of a turn, the other leg, the other half plane.
    let (eighth, rest) = if diagonal { (FRAC_PI_4, QUARTER_PI_REST) } else { (0.0, 0.0) };
    let acute = eighth + (t + (bend + rest));
    let (quarter, rest) = if steep { (FRAC_PI_2, 2.0 * QUARTER_PI_REST) } else { (0.0, 0.0) };
    let upright = (quarter - (acute - rest)).abs();
    let (half, rest) = if adjacent < 0.0 { (PI, 4.0 * QUARTER_PI_REST) } else { (0.0, 0.0) };
    (half - (upright - rest)).abs().copysign(opposite)
}
