//! Which universal anomaly has a body reached after a given time?
//!
//! One form for every conic and both signs of the force (acceleration -mu r / r^3; mu > 0 pulls, mu = 0
//! leaves a straight line, mu < 0 pushes). With B = 2 mu / r0 - v0^2 and G_n(s) = s^n c_n(B s^2), the
//! universal anomaly s (dt/ds = r) solves
//!
//! ```text
//! t(s) = r0 G1 + eta0 G2 + mu G3,    eta0 = r0 . v0
//! ```
//!
//! which never decreases. Nothing divides by mu or by 1 - e. Two solvers: [`Start::after`] steps
//! from a guess, the last time to fourth order, and gives way, when a step does not settle, to [`Start::after_bracketed`],
//! a bracketed Newton search that cannot fail. They agree to 1e-13 of s or better wherever both answer
//! (tests/conic.rs). Times longer than half a revolution are first reduced by whole revolutions.
//! Sources: Battin, An Introduction to the Mathematics and Methods of Astrodynamics, ch. 4; Danby, ch. 6.

use super::stumpff::{c0_to_c3, c4_c5};
use std::f64::consts::{PI, TAU};

/// What the time equation needs of a starting state. Units: au, days.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Start {
    /// Strength of the force, au^3/d^2: k squared times (1 - beta).
    pub mu: f64,
    /// Distance, au, > 0.
    pub distance: f64,
    /// r0 . v0, au^2/d.
    pub eta: f64,
    /// 2 mu / r0 - v0^2, au^2/d^2: positive on an ellipse.
    pub binding: f64,
}

/// What a body has reached after a time.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Reached {
    /// Universal anomaly of the part that is less than a revolution, d/au.
    pub s: f64,
    /// Whole revolutions taken off (0 unless the orbit is an ellipse).
    pub revolutions: f64,
    /// The time that is left without them, days.
    pub rest_days: f64,
    /// G0 to G3 at `s`.
    pub g: Universal,
}

/// The G functions at one anomaly: G0 to G3.
pub type Universal = [f64; 4];

/// Steps before the bracketed search takes over.
const MOST_STEPS: u32 = 12;

impl Start {
    /// G0 to G3 at `s`.
    pub fn universal(&self, s: f64) -> Universal {
        let s2 = s * s;
        let [c0, c1, c2, c3] = c0_to_c3(self.binding * s2);
        [c0, s * c1, s2 * c2, s2 * s * c3]
    }

    /// G4 and G5 at `s`, given the lower ones.
    pub fn universal_high(&self, s: f64, g: &Universal) -> [f64; 2] {
        let s2 = s * s;
        let z = self.binding * s2;
        if z.abs() < 1.0 {
            let [c4, c5] = c4_c5(z, 0.0, 0.0);
            [s2 * s2 * c4, s2 * s2 * s * c5]
        } else {
            [(0.5 * s2 - g[2]) / self.binding, (s2 * s / 6.0 - g[3]) / self.binding]
        }
    }

    /// Time since the start, days, given the G functions.
    fn time(&self, g: &Universal) -> f64 {
        self.distance * g[1] + self.eta * g[2] + self.mu * g[3]
    }

    /// Distance from the centre, au, given the G functions.
    pub fn distance_at(&self, g: &Universal) -> f64 {
        self.distance * g[0] + self.eta * g[1] + self.mu * g[2]
    }

    /// The universal anomaly with its whole revolutions.
    pub fn whole_anomaly(&self, reached: &Reached) -> f64 {
        if reached.revolutions == 0.0 { reached.s } else { reached.s + reached.revolutions * TAU / self.binding.sqrt() }
    }

    /// Period of revolution, days; None unless the orbit is an ellipse.
    pub fn period_days(&self) -> Option<f64> {
        (self.binding > 0.0 && self.mu > 0.0).then(|| TAU * self.mu / (self.binding * self.binding.sqrt()))
    }

    /// Splits `days` into whole revolutions and a rest of at most half a revolution.
    fn reduce(&self, days: f64) -> (f64, f64) {
        match self.period_days() {
            Some(period) if days.abs() > 0.5 * period => {
                let revolutions = (days / period).round();
                (revolutions, days - revolutions * period)
            }
            _ => (0.0, days),
        }
    }

    /// What is reached after `days` (negative: before), by steps from a guess.
    pub fn after(&self, days: f64) -> Reached {
        let (revolutions, rest) = self.reduce(days);
        self.step_from(self.first_guess(rest), revolutions, rest)
    }

    /// The same by a bracketed search alone: slower, and it cannot fail.
    pub fn after_bracketed(&self, days: f64) -> Reached {
        let (revolutions, rest_days) = self.reduce(days);
        let s = self.bracketed(rest_days);
        Reached { s, revolutions, rest_days, g: self.universal(s) }
    }

    fn step_from(&self, guess: f64, revolutions: f64, rest_days: f64) -> Reached {
        let mut s = guess;
        for _ in 0..MOST_STEPS {
            let g = self.universal(s);
            let step = self.step(&g, rest_days, s);
            s += step;
            // The error left behind is of the order of (step / s)^4 s, times at most some 1e5 where the
            // time span holds a grazing perihelion: below rounding.
            if step.abs() <= 1e-5 * s.abs() {
                return Reached { s, revolutions, rest_days, g: self.shifted(&g, step) };
            }
        }
        let s = self.bracketed(rest_days);
        Reached { s, revolutions, rest_days, g: self.universal(s) }
    }

    /// G0 to G3 a small step further, by the addition theorem with the first terms of the step's own series.
    fn shifted(&self, g: &Universal, step: f64) -> Universal {
        let square = step * step;
        let bend = self.binding * square;
        let (h0, h1) = (1.0 - bend / 2.0, step * (1.0 - bend / 6.0));
        let (h2, h3) = (square / 2.0, square * step / 6.0);
        [
            g[0] * h0 - self.binding * g[1] * h1,
            g[1] * h0 + g[0] * h1,
            g[2] + g[1] * h1 + g[0] * h2,
            g[3] + g[2] * h1 + g[1] * h2 + g[0] * h3,
        ]
    }

    /// A guess of s: the real root of the cubic days = r0 s + eta0 s^2 / 2 + (r0 v0^2 - mu) s^3 / 6, the
    /// first terms of t(s). Where that cubic turns back, one substitution into its linear term.
    fn first_guess(&self, days: f64) -> f64 {
        let linear = days / self.distance;
        let a = (self.mu - self.binding * self.distance) / 6.0;
        let b = 0.5 * self.eta;
        let bend = linear * (b + linear * a) / self.distance;
        if a <= 0.0 || bend.abs() < 0.3 {
            return linear / (1.0 + bend).max(0.5);
        }
        // s = x - shift gives x^3 + p x + q = 0.
        let shift = b / (3.0 * a);
        let p = self.distance / a - 3.0 * shift * shift;
        let q = shift * (2.0 * shift * shift - self.distance / a) - days / a;
        let discriminant = 0.25 * q * q + p * p * p / 27.0;
        if discriminant < 0.0 {
            return linear / (1.0 + bend).max(0.5);
        }
        let root = discriminant.sqrt();
        let u = libm::cbrt(if q > 0.0 { -0.5 * q - root } else { -0.5 * q + root });
        if u == 0.0 { -shift } else { u - p / (3.0 * u) - shift }
    }

    /// Correction to s: Laguerre's, which comes home from far, until Newton's is a hundredth of s; then of
    /// fourth order (Danby's nested form of Householder's method).
    fn step(&self, g: &Universal, days: f64, s: f64) -> f64 {
        let miss = self.time(g) - days;
        let r = self.distance_at(g);
        let eta = self.eta * g[0] + (self.mu - self.binding * self.distance) * g[1];
        let newton = -miss / r;
        if newton.abs() > 1e-2 * s.abs() {
            return -5.0 * miss / (r + (16.0 * r * r - 20.0 * miss * eta).abs().sqrt());
        }
        let third = self.mu - self.binding * r;
        let fourth = -self.binding * eta;
        let d2 = -miss / (r + newton * eta / 2.0);
        let d3 = -miss / (r + d2 * (eta / 2.0 + d2 * third / 6.0));
        -miss / (r + d3 * (eta / 2.0 + d3 * (third / 6.0 + d3 * fourth / 24.0)))
    }

    /// Newton steps kept inside a bracket that always holds the root.
    fn bracketed(&self, days: f64) -> f64 {
        if days == 0.0 {
            return 0.0;
        }
        let (mut low, mut high) = self.bracket(days);
        let mut s = 0.5 * (low + high);
        let mut last_step = high - low;
        for _ in 0..200 {
            let g = self.universal(s);
            let miss = self.time(&g) - days;
            // An overflow lies beyond the root on the side of `s`.
            let beyond = if miss.is_finite() { miss > 0.0 } else { s > 0.0 };
            if beyond {
                high = s;
            } else {
                low = s;
            }
            // Newton where it stays inside and at least halves the step; the middle otherwise.
            let newton = s - miss / self.distance_at(&g);
            let trusted = newton > low && newton < high && (newton - s).abs() < 0.5 * last_step.abs();
            let next = if trusted { newton } else { 0.5 * (low + high) };
            last_step = next - s;
            s = next;
            if last_step.abs() <= 2e-16 * s.abs() {
                break;
            }
        }
        s
    }

    /// Two anomalies between which t(s) passes `days`.
    fn bracket(&self, days: f64) -> (f64, f64) {
        if self.period_days().is_some() {
            // At most half a revolution from the start: |s| <= pi / sqrt(B), and a little for rounding.
            // An off-centre start may need up to a whole revolution of s on one side.
            let whole = 2.0 * PI / self.binding.sqrt() * (1.0 + 1e-12);
            return if days > 0.0 { (0.0, whole) } else { (-whole, 0.0) };
        }
        let mut reach = (days / self.distance).abs();
        loop {
            let s = reach.copysign(days);
            let time = self.time(&self.universal(s));
            if !time.is_finite() || time.abs() >= days.abs() {
                return if days > 0.0 { (0.0, s) } else { (s, 0.0) };
            }
            reach *= 2.0;
        }
    }
}
