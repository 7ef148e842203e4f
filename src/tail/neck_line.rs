//! Where does dust that left in all directions gather to a line?
//!
//! Grains that left together with small speeds out of the orbit plane cross that plane again when they have turned 180
//! degrees about the Sun; the shell they form is then flat. For each beta one age meets this at the moment seen; the
//! places of all betas make the neck-line. Seen near the orbit plane it is a narrow ray, and a short real spike on the
//! other side of the nucleus.
//!
//! The age is the youngest at which [`Path::sweep_rad`] reaches pi, found by walking back along the comet's orbit in
//! steps of 3 degrees of its motion and closing in; a beta at which that never happens has none (beta >= 1 never turns
//! half round). Source: Kimura & Liu 1977; used as in Pansecchi & Scardia 2005, A&A 430, 1129, whose table is the test.

use crate::body::State;
use crate::tail::grain::{Vista, pull_au3_d2};
use crate::tail::path::Path;
use crate::time::Instant;
use nalgebra::Vector3;
use std::f64::consts::PI;

/// The grain of one beta on the neck-line.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Knot {
    pub beta: f64,
    pub age_days: f64,
    pub released: Instant,
    /// Heliocentric equatorial, au.
    pub position_au: Vector3<f64>,
    /// Tangent offset from the nucleus, xi east, eta north; None 90 degrees or more away.
    pub offset: Option<[f64; 2]>,
}

/// The neck-line's grain for each of `betas`, in their order, as old as `oldest_days` at most; None where no grain
/// of that beta has turned half round, or where it has met the Sun.
pub fn neck_line(vista: &Vista, betas: &[f64], oldest_days: f64) -> Vec<Option<Knot>> {
    let walk = walk(vista, oldest_days);
    let mut last = (f64::INFINITY, 0);
    betas
        .iter()
        .map(|&beta| {
            // Of grains that left together the one with the weaker pull is always farther out and has turned less, so
            // that its first half turn cannot come earlier on the walk.
            let from = if beta >= last.0 { last.1 } else { 0 };
            let at = half_turned(&walk, beta, from);
            last = (beta, at.unwrap_or(walk.len()));
            knot(vista, &walk, beta, at?)
        })
        .collect()
}

/// The neck-line's grain of one beta.
pub fn knot_of(vista: &Vista, beta: f64, oldest_days: f64) -> Option<Knot> {
    neck_line(vista, &[beta], oldest_days).pop().flatten()
}

/// An age and the nucleus at release.
pub(super) type Left = (f64, State);

/// The comet's way back from the moment seen, a step every 3 degrees of its motion about the Sun or sooner.
pub(super) fn walk(vista: &Vista, oldest_days: f64) -> Vec<Left> {
    const STEP_RAD: f64 = 3.0 * PI / 180.0;
    let mut ways = vec![(0.0, vista.nucleus)];
    let mut age_days: f64 = 0.0;
    let mut state = vista.nucleus;
    while age_days < oldest_days {
        let turning = state.position_au.cross(&state.velocity_au_d).norm() / state.position_au.norm_squared();
        // Going in, the comet soon turns faster: no longer a step than that to a tenth of its distance.
        let falling = 0.1 * state.position_au.norm() / state.velocity_au_d.norm();
        let step = (STEP_RAD / turning).min(falling.max(1e-4));
        age_days = (age_days + step).min(oldest_days);
        state = vista.release(age_days);
        ways.push((age_days, state));
    }
    ways
}

/// How much more than half a turn a grain has made since it left.
fn beyond(beta: f64, (age_days, start): &Left) -> f64 {
    Path::of(pull_au3_d2(beta), start, *age_days).sweep_rad - PI
}

/// The first place of the walk, from the given one on, whose grain has turned half round.
fn half_turned(walk: &[Left], beta: f64, from: usize) -> Option<usize> {
    if beta >= 1.0 {
        return None;
    }
    (from..walk.len()).find(|&at| beyond(beta, &walk[at]) >= 0.0)
}

fn knot(vista: &Vista, walk: &[Left], beta: f64, at: usize) -> Option<Knot> {
    // No grain has turned at age zero, where the walk begins.
    let bracket = [walk[at.checked_sub(1)?].0, walk[at].0];
    let age_days = close_in(bracket, |age_days| beyond(beta, &(age_days, vista.release(age_days))));
    let position_au = vista.survivor(beta, &vista.release(age_days), age_days)?;
    Some(Knot {
        beta,
        age_days,
        released: vista.released_at(age_days),
        position_au,
        offset: vista.offset(&position_au),
    })
}

/// The root of a function between two places at which its signs differ (regula falsi, Illinois form, never worse than
/// halving in the end), to 1e-13 of it.
pub(super) fn close_in([mut a, mut b]: [f64; 2], f: impl Fn(f64) -> f64) -> f64 {
    let (mut fa, mut fb) = (f(a), f(b));
    let mut same_side = 0;
    for round in 0..120 {
        if fb == 0.0 || (b - a).abs() <= 1e-13 * b.abs().max(a.abs()) {
            break;
        }
        let secant = b - fb * (b - a) / (fb - fa);
        let between = secant > a.min(b) && secant < a.max(b);
        let x = if between && round % 3 != 2 { secant } else { 0.5 * (a + b) };
        let fx = f(x);
        if (fx > 0.0) == (fb > 0.0) {
            (b, fb) = (x, fx);
            same_side += 1;
            if same_side > 1 {
                fa *= 0.5;
            }
        } else {
            (a, fa) = (b, fb);
            (b, fb) = (x, fx);
            same_side = 0;
        }
    }
    b
}
