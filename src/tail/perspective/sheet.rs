//! Where do the grains of a whole (beta, age) plane lie, on a grid that can be interpolated?
//!
//! The columns are even in log beta. The rows follow the comet's own motion (time over r^1.5) and are closer for young
//! dust, so that neither a fast perihelion nor the inner tail is stepped over. Each node holds the exact place of
//! its grain and how that place answers to the ejection velocity, both in axes at the nucleus: along the sight
//! line, toward the Sun's opposite on the sky, and a quarter turn on in position angle. Inside a cell all of that is
//! interpolated between its corners, before any division by distance, so grains behind the observer do no harm. The
//! nodes are solved by the block ([`tailvane_lanes::solve`]), as many whole rows as fit, and held in single precision.
//!
//! Accuracy: a cell spans a factor of 1.3 in beta and a few percent of the orbit; places inside are good to about
//! 1 percent of the distance from the nucleus.

use crate::body::{KM_S_PER_AU_D, State};
use crate::orbit::conic::{Place, SUN_GM_AU3_D2, propagate_with_response};
use crate::order;
use crate::tail::grain::Vista;
use crate::tail::law::Tails;
use nalgebra::Vector3;
use tailvane_lanes::solve::{BLOCK, Block, Sight};
use tailvane_lanes::strew::{NODE, Nodes};

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

/// The nodes of the (beta, age) plane, row by row of equal age.
#[derive(Clone, Debug)]
pub struct Sheet<'a> {
    pub betas: &'a [f64],
    pub ages_days: Vec<f64>,
    /// Distance of the nucleus from the Sun at release, au, for each age.
    pub release_au: Vec<f64>,
    /// Numbers of one function in a row: the betas, and what fills the lanes.
    stride: usize,
    /// Places, au: from the observer along the sight line, away, aside; then their changes for 1 km/s of radial, transverse
    /// and normal ejection.
    nodes: Vec<f32>,
}

impl<'a> Sheet<'a> {
    /// The sheet of a vista over some betas and the ages of `tails`; one exact solve for each node.
    pub fn of(vista: &Vista, frame: &Frame, betas: &'a [f64], tails: &Tails) -> Self {
        let mut block = Block::default();
        let mut response = [[[0.0; BLOCK]; 3]; 3];
        let ages_days = row_ages(vista, tails, &mut block);
        let stride = betas.len().next_multiple_of(4);
        let rows_at_once = BLOCK / stride;
        let sight = Sight {
            observer: vista.observer_au.into(),
            axes: [frame.away.into(), frame.aside.into(), frame.sight.into()],
        };
        let anomaly = |place: &Place| vista.orbit.whole_anomaly(&place.anomaly);
        let now = anomaly(&vista.orbit.place_at(vista.seen));
        let mut release_au = Vec::with_capacity(ages_days.len());
        let mut nodes = vec![0.0; ages_days.len() * stride * NODE];
        for (ages, lines) in ages_days.chunks(rows_at_once).zip(nodes.chunks_mut(rows_at_once * stride * NODE)) {
            let places: Vec<Place> = ages.iter().map(|age| vista.orbit.place_at(vista.released_at(*age))).collect();
            for (row, (place, age)) in places.iter().zip(ages).enumerate() {
                let guess = now - anomaly(place);
                for k in 0..stride {
                    // Lanes without a column of their own repeat the last.
                    let beta = betas[k.min(betas.len() - 1)];
                    set(&mut block, row * stride + k, &place.state, SUN_GM_AU3_D2 * (1.0 - beta), *age, guess);
                }
            }
            block.count = ages.len() * stride;
            block.solve();
            block.respond(&mut response);
            for node in 0..block.count {
                if !block.is_doubtful(node) {
                    continue;
                }
                let start = &places[node / stride].state;
                let (end, exact) = propagate_with_response(block.mu[node], start, block.time[node]);
                for (axis, answers) in response.iter_mut().enumerate() {
                    block.end[axis][node] = end.position_au[axis];
                    for (by, answer) in answers.iter_mut().enumerate() {
                        answer[node] = exact.position[(axis, by)];
                    }
                }
            }
            for (row, (place, line)) in places.iter().zip(lines.chunks_exact_mut(stride * NODE)).enumerate() {
                let state = &place.state;
                release_au.push(state.position_au.norm());
                let out = state.position_au.normalize();
                let up = state.position_au.cross(&state.velocity_au_d).normalize();
                let throws = [out, up.cross(&out), up].map(|axis| (axis / KM_S_PER_AU_D).into());
                block.lay(row * stride, &response, &sight, &throws, line);
            }
        }
        Sheet { betas, ages_days, release_au, stride, nodes }
    }

    pub fn nodes(&self) -> Nodes<'_> {
        Nodes { numbers: &self.nodes, stride: self.stride }
    }

    pub fn columns(&self) -> usize {
        self.betas.len() - 1
    }

    pub fn rows(&self) -> usize {
        self.ages_days.len() - 1
    }

    /// Where the middle of a cell lies, without ejection: along, away, aside, au.
    pub fn middle(&self, row: usize, column: usize) -> [f64; 3] {
        std::array::from_fn(|axis| {
            let at = |row: usize| {
                let node = &self.nodes[(row * NODE + axis) * self.stride + column..];
                0.5 * (f64::from(node[0]) + f64::from(node[1]))
            };
            0.5 * (at(row) + at(row + 1))
        })
    }
}

fn set(block: &mut Block, node: usize, start: &State, mu: f64, days: f64, guess: f64) {
    for axis in 0..3 {
        block.place[axis][node] = start.position_au[axis];
        block.velocity[axis][node] = start.velocity_au_d[axis];
    }
    block.mu[node] = mu;
    block.time[node] = days;
    block.guess[node] = guess;
}

/// The betas between which the columns lie.
pub fn beta_edges(least: f64, greatest: f64) -> Vec<f64> {
    let span = libm::log(greatest / least);
    let cells = ((span / libm::log(BETA_STEP)).ceil() as usize).clamp(COLUMNS[0], COLUMNS[1]);
    (0..=cells).map(|i| least * libm::exp(span * i as f64 / cells as f64)).collect()
}

/// Ages of the rows, youngest first: even in the sum of k dt / r^1.5 (the comet's motion) and dt / (t + 3 d) (the
/// growth of the inner tail).
fn row_ages(vista: &Vista, tails: &Tails, block: &mut Block) -> Vec<f64> {
    let (youngest, oldest) = (tails.age_least_days, tails.age_greatest_days);
    let gm_root = SUN_GM_AU3_D2.sqrt();
    let (from, to) = (youngest.sqrt(), oldest.sqrt());
    let step_age = |i: usize| {
        let root = from + (to - from) * i as f64 / MEASURE_STEPS as f64;
        root * root
    };
    let middle = |i: usize| 0.5 * (step_age(i) + if i == 1 { youngest } else { step_age(i - 1) });
    // Back in time is forward with the velocity turned round.
    let back = State { position_au: vista.nucleus.position_au, velocity_au_d: -vista.nucleus.velocity_au_d };
    for i in 1..=MEASURE_STEPS {
        set(block, i - 1, &back, SUN_GM_AU3_D2, middle(i), f64::INFINITY);
    }
    block.count = MEASURE_STEPS;
    block.solve();
    let distance = |i: usize| {
        if block.is_doubtful(i - 1) {
            return vista.release(middle(i)).position_au.norm();
        }
        let [x, y, z] = block.end.each_ref().map(|numbers| numbers[i - 1]);
        (x * x + y * y + z * z).sqrt()
    };
    let mut fine = Vec::with_capacity(MEASURE_STEPS + 1);
    let mut sum = 0.0;
    let mut last_age = youngest;
    fine.push((youngest, 0.0));
    for i in 1..=MEASURE_STEPS {
        let (age, middle, r) = (step_age(i), middle(i), distance(i));
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
