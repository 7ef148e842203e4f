//! How do the cells of the (beta, age) plane become grains on the sky?
//!
//! Each cell is sampled evenly; a sample is one grain at rest or several that are thrown, spread over the speeds and
//! directions of the ejection law by fixed sets: the same answer every time, without visible steps between samples.

use super::sheet::{Node, Sheet};
use super::sums::Light;
use crate::body::KM_S_PER_AU_D;
use crate::orbit::conic::SUN_GM_AU3_D2;
use crate::sky::Sky;
use crate::tail::weight::Weights;

/// Ejection velocities for each sample, and sets of them that take turns.
const THROWS: usize = 8;
const THROW_SETS: usize = 64;

/// A way to lay a sample on the sky, as one grain or several.
pub trait Lay {
    /// Grains for each sample.
    fn throws(&self) -> usize;
    fn places(&self, sample: &Sample, place: impl FnMut(&[f64; 3], f64));
}

/// Grains that leave with the nucleus velocity alone.
pub struct AtRest;

impl Lay for AtRest {
    fn throws(&self) -> usize {
        1
    }

    fn places(&self, sample: &Sample, mut place: impl FnMut(&[f64; 3], f64)) {
        place(&sample.node.place_au, sample.weight);
    }
}

/// Grains that leave by an ejection law.
pub struct Thrown {
    sets: Vec<[[f64; 3]; THROWS]>,
    /// Mean speed at 1 au by column, km/s, and the factor by row that the distance makes of it.
    by_beta: Vec<f64>,
    by_distance: Vec<f64>,
}

impl Thrown {
    pub fn of(sheet: &Sheet, weights: &Weights) -> Self {
        Thrown {
            sets: throws(weights),
            by_beta: sheet.betas.iter().map(|beta| weights.mean_speed_km_s(*beta, 1.0)).collect(),
            by_distance: sheet
                .release_au
                .iter()
                .map(|r| libm::pow(*r, -weights.laws().ejection_distance_exponent))
                .collect(),
        }
    }
}

impl Lay for Thrown {
    fn throws(&self) -> usize {
        THROWS
    }

    fn places(&self, sample: &Sample, mut place: impl FnMut(&[f64; 3], f64)) {
        let between =
            |values: &[f64], index: usize, part: f64| values[index] + (values[index + 1] - values[index]) * part;
        let speed = between(&self.by_beta, sample.column, sample.column_part)
            * between(&self.by_distance, sample.row, sample.row_part);
        for throw in &self.sets[sample.number % THROW_SETS] {
            place(&sample.node.thrown(&throw.map(|part| part * speed)), sample.weight / THROWS as f64);
        }
    }
}

/// One sample inside a cell.
pub struct Sample {
    /// Counted from 0.
    pub number: usize,
    pub column: usize,
    pub row: usize,
    /// How far into the cell, [0, 1].
    pub column_part: f64,
    pub row_part: f64,
    pub weight: f64,
    pub node: Node,
}

pub fn for_each_sample(sheet: &Sheet, light: &Light, subcells: usize, mut visit: impl FnMut(&Sample)) {
    let columns = sheet.betas.len() - 1;
    let mut number = 0;
    for row in 0..sheet.ages_days.len() - 1 {
        for row_step in 0..subcells {
            let row_part = (row_step as f64 + 0.5) / subcells as f64;
            let mut left = sheet.node(row, 0).toward(sheet.node(row + 1, 0), row_part);
            for column in 0..columns {
                let right = sheet.node(row, column + 1).toward(sheet.node(row + 1, column + 1), row_part);
                let weight = light.cells[row * columns + column] / (subcells * subcells) as f64;
                if weight > 0.0 {
                    for column_step in 0..subcells {
                        let column_part = (column_step as f64 + 0.5) / subcells as f64;
                        let node = left.toward(&right, column_part);
                        visit(&Sample { number, column, row, column_part, row_part, weight, node });
                        number += 1;
                    }
                }
                left = right;
            }
        }
    }
}

/// Sets of ejection velocities over the mean speed, spread over the law's speeds and directions.
fn throws(weights: &Weights) -> Vec<[[f64; 3]; THROWS]> {
    /// The golden section: azimuths that never repeat.
    const GOLDEN: f64 = 0.618_033_988_749_894_9;
    /// Prime to THROWS, so that speeds do not follow directions.
    const SHUFFLE: usize = 3;
    (0..THROW_SETS)
        .map(|set| {
            std::array::from_fn(|i| {
                let speed = ((i * SHUFFLE + set) % THROWS) as f64 + 0.5;
                let polar = i as f64 + (set as f64 + 0.5) / THROW_SETS as f64;
                let turn = GOLDEN * (set * THROWS + i) as f64;
                weights.ejection([speed / THROWS as f64, polar / THROWS as f64, turn - turn.floor()])
            })
        })
        .collect()
}

/// How far the fountain of ejected dust seems to reach to every side of the nucleus, radians: the greatest of v t - a t^2
/// sin(phase) / 2 over time and beta, which is d / sin(phase) with d = v^2 / 2a where the dust is old enough for it.
pub fn fountain_rad(sheet: &Sheet, sky: &Sky, weights: &Weights) -> f64 {
    let r = sky.sun_distance_au;
    let sine = libm::sin(sky.phase_angle_rad);
    let oldest = weights.laws().age_greatest_days;
    let fastest = weights.ejection([1.0 - 0.5 / THROWS as f64, 0.0, 0.0])[0].abs() / KM_S_PER_AU_D;
    let reach_au = |beta: &f64| {
        let speed = fastest * weights.mean_speed_km_s(*beta, r);
        let push = SUN_GM_AU3_D2 * beta / (r * r) * sine;
        let days = (speed / push).min(oldest);
        speed * days - 0.5 * push * days * days
    };
    let farthest = sheet.betas.iter().map(reach_au).fold(0.0_f64, f64::max);
    libm::atan(farthest / sky.observer_distance_au)
}
