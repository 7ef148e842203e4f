//! With which velocities does dust leave, as a fixed set, and how much light does each size send?
//!
//! What depends on the laws of the plan alone is made once and serves every date. A sample of a cell that is thrown
//! is spread over the speeds and directions of the ejection law by fixed sets: the same answer every time, without
//! visible steps between samples.

use super::sheet::beta_edges;
use crate::body::KM_S_PER_AU_D;
use crate::orbit::conic::SUN_GM_AU3_D2;
use crate::sky::Sky;
use crate::tail::law::Tails;
use crate::tail::weight::Weights;
use tailvane_lanes::strew::{THROW_SETS, THROWS};

/// The laws of a plan, made ready to be laid on the sky of any date.
#[derive(Clone, Debug)]
pub struct Recipe {
    pub(super) weights: Weights,
    pub(super) betas: Vec<f64>,
    /// Share of the light between neighbouring betas.
    pub(super) lights: Vec<f64>,
    /// Centre of the speeds at 1 au, km/s, by beta.
    pub(super) speeds_km_s: Vec<f64>,
    /// Sets of ejection velocities over the mean speed, spread over the law's speeds and directions; axis by axis.
    pub(super) throws: Vec<[[f32; THROWS]; 3]>,
}

impl Recipe {
    /// The recipe of valid laws (see [`Tails::validate`]).
    pub fn of(tails: &Tails) -> Self {
        let weights = Weights::of(tails);
        let betas = beta_edges(tails.beta_least, tails.beta_greatest);
        Recipe {
            lights: betas.windows(2).map(|pair| weights.light_between(pair[0], pair[1])).collect(),
            speeds_km_s: betas.iter().map(|beta| weights.mean_speed_km_s(*beta, 1.0)).collect(),
            throws: throws(&weights),
            weights,
            betas,
        }
    }
}

fn throws(weights: &Weights) -> Vec<[[f32; THROWS]; 3]> {
    /// The golden section: azimuths that never repeat.
    const GOLDEN: f64 = 0.618_033_988_749_894_9;
    /// Prime to THROWS, so that speeds do not follow directions.
    const SHUFFLE: usize = 3;
    (0..THROW_SETS)
        .map(|set| {
            let mut axes = [[0.0; THROWS]; 3];
            for i in 0..THROWS {
                let speed = ((i * SHUFFLE + set) % THROWS) as f64 + 0.5;
                let polar = i as f64 + (set as f64 + 0.5) / THROW_SETS as f64;
                let turn = GOLDEN * (set * THROWS + i) as f64;
                let velocity = weights.ejection([speed / THROWS as f64, polar / THROWS as f64, turn - turn.floor()]);
                for (axis, part) in axes.iter_mut().zip(velocity) {
                    axis[i] = part as f32;
                }
            }
            axes
        })
        .collect()
}

/// How far the fountain of ejected dust seems to reach to every side of the nucleus, radians: the greatest of v t - a t^2
/// sin(phase) / 2 over time and beta, which is d / sin(phase) with d = v^2 / 2a where the dust is old enough for it.
pub fn fountain_rad(recipe: &Recipe, sky: &Sky) -> f64 {
    let weights = &recipe.weights;
    let r = sky.sun_distance_au;
    let sine = libm::sin(sky.phase_angle_rad);
    let oldest = weights.laws().age_greatest_days;
    let fastest = weights.ejection([1.0 - 0.5 / THROWS as f64, 0.0, 0.0])[0].abs() / KM_S_PER_AU_D;
    let by_distance = weights.slowing(r);
    let reach_au = |(beta, speed): (&f64, &f64)| {
        let speed = fastest * by_distance * speed;
        let push = SUN_GM_AU3_D2 * beta / (r * r) * sine;
        let days = (speed / push).min(oldest);
        speed * days - 0.5 * push * days * days
    };
    let farthest = recipe.betas.iter().zip(&recipe.speeds_km_s).map(reach_au).fold(0.0_f64, f64::max);
    libm::atan(farthest / sky.observer_distance_au)
}
