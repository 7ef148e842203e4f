//! Where do the grains of a whole (beta, age) plane lie, on a grid that can be interpolated?
//!
//! The columns are even in log beta. The rows follow the comet's own motion (time over r^1.5) and are closer for young
//! dust, so that neither a fast perihelion nor the inner tail is stepped over. Each node holds the exact place of
//! its grain and how that place answers to the ejection velocity, both in axes at the nucleus: along the sight
//! line, toward the Sun's opposite on the sky, and a quarter turn on in position angle. Inside a cell all of that is
//! interpolated between its corners, before any division by distance, so grains behind the observer do no harm.
//!
//! Accuracy: a cell spans a factor of 1.3 in beta and a few percent of the orbit; places inside are good to about
//! 1 percent of the distance from the nucleus.

use crate::body::KM_S_PER_AU_D;
use crate::orbit::conic::{SUN_GM_AU3_D2, propagate_with_response};
use crate::order;
use crate::tail::grain::Vista;
use crate::tail::law::Tails;
use nalgebra::Vector3;

/// Ratio of neighbouring betas, at most; number of columns, at least and at most.
const BETA_STEP: f64 = 1.33;
const COLUMNS: [usize; 2] = [6, 32];
/// Rows: one for so much of the measure of [`row_ages`], and how many at least and at most.
const ROW_STEP: f64 = 0.15;
const ROWS: [usize; 2] = [12, 44];
/// Below this age, days, rows stand evenly; above it, ever wider.
const YOUNG_DAYS: f64 = 3.0;
/// Steps in which the measure is summed.
const MEASURE_STEPS: usize = 160;

/// Unit vectors in which places are held.
#[derive(Clone, Copy, Debug)]
pub struct Frame {
    pub sight: Vector3<f64>,
    /// Antisolar on the sky (north where no antisolar direction exists).
    pub away: Vector3<f64>,
    /// A quarter turn further in position angle.
    pub aside: Vector3<f64>,
}

/// A grain that left without ejection velocity, and how its place answers to one.
#[derive(Clone, Copy, Debug)]
pub struct Node {
    /// From the observer: along the sight line, away, aside, au.
    pub place_au: [f64; 3],
    /// Change of each of these for 1 km/s of radial, transverse and normal ejection, au.
    pub answer_au: [[f64; 3]; 3],
}

/// The nodes of the (beta, age) plane, row by row of equal age.
#[derive(Clone, Debug)]
pub struct Sheet {
    pub betas: Vec<f64>,
    pub ages_days: Vec<f64>,
    /// Distance of the nucleus from the Sun at release, au, for each age.
    pub release_au: Vec<f64>,
    pub nodes: Vec<Node>,
}

impl Sheet {
    /// The sheet of a vista over the ranges of `tails`; one exact solve for each node.
    pub fn of(vista: &Vista, frame: &Frame, tails: &Tails) -> Self {
        let betas = columns(tails.beta_least, tails.beta_greatest);
        let ages_days = row_ages(vista, tails);
        let mut release_au = Vec::with_capacity(ages_days.len());
        let mut nodes = Vec::with_capacity(ages_days.len() * betas.len());
        for age in &ages_days {
            let start = vista.release(*age);
            release_au.push(start.position_au.norm());
            let out = start.position_au.normalize();
            let up = start.position_au.cross(&start.velocity_au_d).normalize();
            let along = up.cross(&out);
            for beta in &betas {
                let (end, response) = propagate_with_response(SUN_GM_AU3_D2 * (1.0 - beta), &start, *age);
                let answer = |axis: &Vector3<f64>| frame.split(&(response.position * axis / KM_S_PER_AU_D));
                nodes.push(Node {
                    place_au: frame.split(&(end.position_au - vista.observer_au)),
                    answer_au: [answer(&out), answer(&along), answer(&up)],
                });
            }
        }
        Sheet { betas, ages_days, release_au, nodes }
    }

    /// The node of a row and a column.
    pub fn node(&self, row: usize, column: usize) -> &Node {
        &self.nodes[row * self.betas.len() + column]
    }
}

impl Frame {
    fn split(&self, v: &Vector3<f64>) -> [f64; 3] {
        [v.dot(&self.sight), v.dot(&self.away), v.dot(&self.aside)]
    }
}

impl Node {
    /// Between this node (at 0) and `other` (at 1).
    pub fn toward(&self, other: &Node, part: f64) -> Node {
        let mix = |a: &[f64; 3], b: &[f64; 3]| {
            [a[0] + (b[0] - a[0]) * part, a[1] + (b[1] - a[1]) * part, a[2] + (b[2] - a[2]) * part]
        };
        Node {
            place_au: mix(&self.place_au, &other.place_au),
            answer_au: [
                mix(&self.answer_au[0], &other.answer_au[0]),
                mix(&self.answer_au[1], &other.answer_au[1]),
                mix(&self.answer_au[2], &other.answer_au[2]),
            ],
        }
    }

    /// Where a grain with this ejection velocity (radial, transverse, normal) lies, to first order.
    pub fn thrown(&self, velocity_km_s: &[f64; 3]) -> [f64; 3] {
        let mut place = self.place_au;
        for (answer, speed) in self.answer_au.iter().zip(velocity_km_s) {
            for (coordinate, change) in place.iter_mut().zip(answer) {
                *coordinate += change * speed;
            }
        }
        place
    }
}

fn columns(least: f64, greatest: f64) -> Vec<f64> {
    let span = libm::log(greatest / least);
    let cells = ((span / libm::log(BETA_STEP)).ceil() as usize).clamp(COLUMNS[0], COLUMNS[1]);
    (0..=cells).map(|i| least * libm::exp(span * i as f64 / cells as f64)).collect()
}

/// Ages of the rows, youngest first: even in the sum of k dt / r^1.5 (the comet's motion) and dt / (t + 3 d) (the
/// growth of the inner tail).
fn row_ages(vista: &Vista, tails: &Tails) -> Vec<f64> {
    let (youngest, oldest) = (tails.age_least_days, tails.age_greatest_days);
    let gm_root = SUN_GM_AU3_D2.sqrt();
    let (from, to) = (youngest.sqrt(), oldest.sqrt());
    let mut fine = Vec::with_capacity(MEASURE_STEPS + 1);
    let mut sum = 0.0;
    let mut last_age = youngest;
    fine.push((youngest, 0.0));
    for i in 1..=MEASURE_STEPS {
        let root = from + (to - from) * i as f64 / MEASURE_STEPS as f64;
        let age = root * root;
        let middle = 0.5 * (age + last_age);
        let r = vista.release(middle).position_au.norm();
        sum += (age - last_age) * (gm_root / (r * r.sqrt()) + 0.4 / (middle + YOUNG_DAYS));
        fine.push((age, sum));
        last_age = age;
    }
    let rows = ((sum / ROW_STEP).ceil() as usize).clamp(ROWS[0], ROWS[1]);
    let mut ages = vec![youngest];
    let mut at = 0;
    for i in 1..rows {
        let wanted = sum * i as f64 / rows as f64;
        while fine[at + 1].1 < wanted {
            at += 1;
        }
        let ((age_0, sum_0), (age_1, sum_1)) = (fine[at], fine[at + 1]);
        ages.push(age_0 + (age_1 - age_0) * (wanted - sum_0) / (sum_1 - sum_0));
    }
    ages.push(oldest);
    let now = vista.orbit.days_from_perihelion(vista.seen);
    ages.extend(breaks_days(tails).into_iter().map(|days| now - days).filter(|age| youngest < *age && *age < oldest));
    order::by_number(&mut ages, |age| *age);
    ages.dedup();
    ages
}

/// Days from perihelion at which the activity breaks off or swings too fast for the rows.
fn breaks_days(tails: &Tails) -> Vec<f64> {
    let mut days: Vec<f64> = tails.activity_start_days.into_iter().collect();
    if let Some(outburst) = &tails.outburst {
        days.extend(
            [-1.5, -0.75, -0.25, 0.25, 0.75, 1.5].map(|step| outburst.middle_days + step * outburst.width_days),
        );
    }
    days
}
