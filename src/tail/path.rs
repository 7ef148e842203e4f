//! What way has a grain come since it left?
//!
//! How far it has turned about the Sun, how often, and how near it has passed, in closed form from the state at
//! release. With u = 1/r along the angle, every orbit under mu (either sign) is u = mu / h^2 + A cos(angle from
//! perihelion), A >= 0, so that
//!
//! ```text
//! A h^2 cos f0 = h^2 / r0 - mu,   A h^2 sin f0 = h eta0 / r0,   perihelion = h^2 / (mu + A h^2)
//! tan(sweep / 2) = h G1(s/2) / (r0 G0(s/2) + eta0 G1(s/2))
//! ```
//!
//! with eta0 = r0 . v0, h the angular momentum and G the universal functions. Source: Battin, An Introduction to the
//! Mathematics and Methods of Astrodynamics, ch. 4; the rest is Binet's equation.

use crate::body::State;
use crate::orbit::universal::Start;
use std::f64::consts::TAU;

/// What a body has been through between a start and an end.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Path {
    /// Angle turned about the Sun, >= 0, whole revolutions included.
    pub sweep_rad: f64,
    /// Time over the period of revolution; 0 on an open orbit.
    pub revolutions: f64,
    /// Least distance from the Sun on the way, both ends included, au.
    pub least_distance_au: f64,
}

impl Path {
    /// The path of `days` >= 0 from a state under the acceleration -mu r / r^3.
    pub fn of(mu_au3_d2: f64, from: &State, days: f64) -> Self {
        let (start, h) = start_of(mu_au3_d2, from);
        let reached = start.after(days);
        let half = start.universal(0.5 * reached.s);
        let turned = 2.0 * libm::atan2(h * half[1], start.distance * half[0] + start.eta * half[1]);
        let sweep_rad = (turned + TAU * reached.revolutions).max(0.0);
        let ends = start.distance.min(start.distance_at(&reached.g));
        let before_perihelion = libm::atan2(-h * start.eta / start.distance, h * h / start.distance - mu_au3_d2);
        let to_perihelion = if before_perihelion >= 0.0 { before_perihelion } else { before_perihelion + TAU };
        let least_distance_au =
            if sweep_rad >= to_perihelion { ends.min(perihelion(mu_au3_d2, &start, h)) } else { ends };
        let revolutions = start.period_days().map_or(0.0, |period| days / period);
        Path { sweep_rad, revolutions, least_distance_au }
    }
}

/// Perihelion distance of the orbit through a state, au, passed or not.
pub fn perihelion_distance_au(mu_au3_d2: f64, state: &State) -> f64 {
    let (start, h) = start_of(mu_au3_d2, state);
    perihelion(mu_au3_d2, &start, h)
}

fn perihelion(mu: f64, start: &Start, h: f64) -> f64 {
    let (along, across) = (h * h / start.distance - mu, h * start.eta / start.distance);
    let below = mu + (along * along + across * across).sqrt();
    // No turning and no pull: the way leads straight in or out.
    if below > 0.0 { h * h / below } else { 0.0 }
}

fn start_of(mu: f64, from: &State) -> (Start, f64) {
    let distance = from.position_au.norm();
    let start = Start {
        mu,
        distance,
        eta: from.position_au.dot(&from.velocity_au_d),
        binding: 2.0 * mu / distance - from.velocity_au_d.norm_squared(),
    };
    (start, from.position_au.cross(&from.velocity_au_d).norm())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::orbit::conic::{SUN_GM_AU3_D2, propagate};
    use nalgebra::Vector3;

    const K: f64 = 0.017_202_098_95;

    #[test]
    fn the_least_distance_is_that_of_a_dense_walk_along_the_way() {
        let start =
            State { position_au: Vector3::new(0.9, 0.3, -0.2), velocity_au_d: Vector3::new(-0.014, 0.006, 0.004) };
        for beta in [0.0, 0.2, 0.7, 1.0, 1.6] {
            let mu = SUN_GM_AU3_D2 * (1.0 - beta);
            for days in [3.0, 40.0, 300.0, 900.0] {
                let walk = (0..=40_000)
                    .map(|step| propagate(mu, &start, days * f64::from(step) / 40_000.0).position_au.norm())
                    .fold(f64::INFINITY, f64::min);
                let path = Path::of(mu, &start, days);
                assert!((path.least_distance_au - walk).abs() < 2e-4 * walk, "{beta} {days}: {path:?} {walk}");
            }
        }
    }

    #[test]
    fn a_circle_turns_evenly_and_repulsion_never_turns_half() {
        let start = State { position_au: Vector3::x(), velocity_au_d: Vector3::new(0.0, K, 0.0) };
        for days in [1.0, 100.0, 182.0, 183.0, 364.0, 366.0, 1000.0] {
            let path = Path::of(SUN_GM_AU3_D2, &start, days);
            assert!((path.sweep_rad - K * days).abs() < 1e-10, "{path:?}");
            assert!((path.revolutions - K * days / TAU).abs() < 1e-12);
        }
        assert!(Path::of(-SUN_GM_AU3_D2, &start, 1e6).sweep_rad < 0.5 * TAU);
    }
}
