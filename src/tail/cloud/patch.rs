//! Which few smooth patches stand for the map from release to the picture?
//!
//! The map: (universal anomaly of the comet at release, square root of beta) to the grain's place in camera
//! coordinates. In these two variables it is smooth, so a Chebyshev sum of 8 x 6 terms serves a large rectangle; a
//! rectangle whose last terms are not small is halved along the worse variable. What is fitted are the three
//! coordinates before the perspective division (X and Y in pixels times au, Z in au along the line of sight), so that
//! grains beside or behind the observer do no harm, and their nine slopes along the three axes of ejection, per unit of
//! the centre of the speeds. Rectangles that lie wholly outside the picture are dropped.
//! Source of the variables and of the accuracy to expect: measured on trial orbits; tests/cloud.rs measures it again.

use crate::body::{KM_S_PER_AU_D, State};
use crate::orbit::conic::{SUN_GM_AU3_D2, propagate_with_response};
use crate::order;
use crate::tail::cloud::{Raster, chebyshev};
use crate::tail::grain::Vista;
use crate::tail::weight::Weights;
use nalgebra::{Matrix3, Vector3};
use tailvane_lanes::respond::Response;
use tailvane_lanes::row::{self, FUNCTIONS, ROW, Row, S_TERMS, T_TERMS};
use tailvane_lanes::solve::{BLOCK, Block};

/// Error of a place that is let stand, pixels, and of the spread by ejection.
const PLACE_TOLERANCE_PX: f64 = 0.1;
const SPREAD_TOLERANCE_PX: f64 = 0.2;
/// Error of the release rate and of the light that is let stand, relative to their greatest value in the patch.
const RATE_TOLERANCE: f64 = 0.01;
/// Grains nearer to the observer than this, au, are not seen: pixels of their places would mean nothing.
pub const NEAREST_AU: f64 = 1e-3;
/// Halvings and patches at which refining stops, whatever the error.
const MOST_HALVINGS: u32 = 12;
const MOST_PATCHES: usize = 300;

/// One rectangle of the map.
#[derive(Clone, Debug)]
pub struct Patch {
    /// Universal anomaly of the comet at release, d/au, and square root of beta: middle and half width.
    pub anomaly: [f64; 2],
    pub root_beta: [f64; 2],
    /// The twelve functions: Chebyshev along anomaly, powers along root beta.
    pub map: [Row; S_TERMS],
    /// Release per unit of anomaly, Chebyshev; light per unit of root beta, powers.
    pub release: [f32; S_TERMS],
    pub light: [f32; T_TERMS],
    /// All that it releases times all its light.
    pub whole: f64,
}

impl Patch {
    /// Where a grain that left without more than the mean ejection falls, pixels right and down from the nucleus; None
    /// outside the patch, or behind the observer.
    pub fn place_px(&self, anomaly: f64, root_beta: f64) -> Option<[f64; 2]> {
        let s = (anomaly - self.anomaly[0]) / self.anomaly[1];
        let t = (root_beta - self.root_beta[0]) / self.root_beta[1];
        if s.abs() > 1.0 || t.abs() > 1.0 {
            return None;
        }
        let [x, y, z, ..] = row::functions_at(&row::row_at(&self.map, s as f32), t as f32).map(f64::from);
        (z > NEAREST_AU).then(|| [x / z, y / z])
    }

    /// Release per unit of anomaly, >= 0.
    pub fn release_at(&self, s: f32) -> f32 {
        let terms = row::chebyshev(s);
        self.release.iter().zip(terms).map(|(c, term)| c * term).sum::<f32>().max(0.0)
    }

    /// What leaves over a part of it: the release integrated along anomaly, by Gauss's rule of four places, which is
    /// exact for eight terms.
    pub fn released(&self, [middle, half]: [f32; 2]) -> f64 {
        const PLACES: [(f32, f64); 2] =
            [(0.339_981_04, 0.652_145_154_862_546_1), (0.861_136_3, 0.347_854_845_137_453_9)];
        let at = |place: f32| f64::from(self.release_at(middle + place * half));
        let mean: f64 = PLACES.iter().map(|(place, weight)| weight * (at(-place) + at(*place))).sum();
        self.anomaly[1] * f64::from(half) * mean
    }

    /// Share of the light of the betas in a part of it.
    pub fn lit(&self, weights: &Weights, [middle, half]: [f32; 2]) -> f64 {
        let root = |b: f32| self.root_beta[0] + self.root_beta[1] * f64::from(middle + b * half);
        let [low, high] = [root(-1.0), root(1.0)];
        weights.light_between(low * low, high * high)
    }
}

/// What the patches cost and left.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Effort {
    /// Orbits solved.
    pub solves: usize,
    /// Patches in the picture.
    pub patches: usize,
    /// Patches that were still rougher than wished for when refining stopped.
    pub rough: usize,
}

/// The fitting, with its constant tables.
#[derive(Clone, Debug)]
pub struct Fitter {
    s_nodes: [f64; S_TERMS],
    t_nodes: [f64; T_TERMS],
    /// Values at the nodes to Chebyshev coefficients.
    s_fit: [[f64; S_TERMS]; S_TERMS],
    t_fit: [[f64; T_TERMS]; T_TERMS],
    /// The grains of the nodes, and their response.
    block: Block,
    response: Response,
}

/// Nodes of a patch.
const NODES: usize = S_TERMS * T_TERMS;

impl Default for Fitter {
    fn default() -> Self {
        Fitter {
            s_nodes: chebyshev::nodes(),
            t_nodes: chebyshev::nodes(),
            s_fit: chebyshev::fit(),
            t_fit: chebyshev::fit(),
            block: Block::default(),
            response: [[[0.0; BLOCK]; 3]; 3],
        }
    }
}

/// What a fit is made for.
pub struct Subject<'a> {
    pub vista: &'a Vista<'a>,
    pub weights: &'a Weights,
    pub raster: &'a Raster,
}

type Values = [[[f64; T_TERMS]; S_TERMS]; FUNCTIONS];

impl Fitter {
    /// The patches of a release span (ages in days) that touch the picture, and the weight of all, seen or not.
    pub fn cover(&mut self, subject: &Subject, spans: &[[f64; 2]], patches: &mut Vec<Patch>) -> (f64, Effort) {
        let mut effort = Effort::default();
        let mut whole = 0.0;
        patches.clear();
        let mut open = first_rectangles(subject, spans);
        while let Some(rectangle) = open.pop() {
            let full = patches.len() + open.len() >= MOST_PATCHES;
            let fit = self.fit(subject, &rectangle);
            effort.solves += S_TERMS * T_TERMS;
            match fit.verdict {
                Verdict::Outside => whole += fit.patch.whole,
                Verdict::Rough { along_anomaly } if !full && rectangle.halvings < MOST_HALVINGS => {
                    open.extend(rectangle.halves(along_anomaly));
                }
                verdict => {
                    effort.rough += usize::from(verdict != Verdict::Smooth);
                    whole += fit.patch.whole;
                    patches.push(fit.patch);
                }
            }
        }
        effort.patches = patches.len();
        (whole, effort)
    }

    fn fit(&mut self, subject: &Subject, rectangle: &Rectangle) -> Fit {
        let Subject { vista, weights, raster } = subject;
        let laws = weights.laws();
        let [s_middle, s_half] = rectangle.anomaly;
        let [u_middle, u_half] = rectangle.root_beta;
        let seen_days = vista.orbit.days_from_perihelion(vista.seen);
        let camera = raster.camera(vista);
        let mean = weights.mean_radial_ejection();
        let speed_by_beta = self.t_nodes.map(|t| {
            let u = u_middle + u_half * t;
            libm::pow(u * u, laws.ejection_beta_exponent) * laws.ejection_speed_km_s / KM_S_PER_AU_D
        });

        let mut release = [0.0; S_TERMS];
        let mut thrown = [[State { position_au: Vector3::zeros(), velocity_au_d: Vector3::zeros() }; T_TERMS]; S_TERMS];
        let mut axes = [Matrix3::zeros(); S_TERMS];
        let now = vista.orbit.whole_anomaly(&vista.orbit.place_at(vista.seen).anomaly);
        for (k, s) in self.s_nodes.iter().enumerate() {
            let anomaly = s_middle + s_half * s;
            let (start, days) = vista.orbit.at_anomaly(anomaly);
            let distance = start.position_au.norm();
            release[k] = weights.release_rate(distance, days) * distance;
            let slowing = libm::pow(distance, -laws.ejection_distance_exponent);
            let out = start.position_au / distance;
            let up = start.position_au.cross(&start.velocity_au_d).normalize();
            axes[k] = Matrix3::from_columns(&[out, up.cross(&out), up]) * slowing;
            for (j, t) in self.t_nodes.iter().enumerate() {
                let u = u_middle + u_half * t;
                let velocity = start.velocity_au_d + out * (mean * speed_by_beta[j] * slowing);
                thrown[k][j] = State { position_au: start.position_au, velocity_au_d: velocity };
                let node = k * T_TERMS + j;
                for axis in 0..3 {
                    self.block.place[axis][node] = start.position_au[axis];
                    self.block.velocity[axis][node] = velocity[axis];
                }
                self.block.mu[node] = SUN_GM_AU3_D2 * (1.0 - u * u);
                self.block.time[node] = seen_days - days;
                self.block.guess[node] = now - anomaly;
            }
        }
        self.block.count = NODES;
        self.block.solve();
        self.block.respond(&mut self.response);

        let mut values: Values = [[[0.0; T_TERMS]; S_TERMS]; FUNCTIONS];
        for k in 0..S_TERMS {
            for j in 0..T_TERMS {
                let (end, response) = self.reached(k * T_TERMS + j, &thrown[k][j]);
                let place = camera.turn * (end - vista.nucleus.position_au);
                let slopes = camera.turn * response * axes[k] * speed_by_beta[j];
                values[0][k][j] = place.x;
                values[1][k][j] = place.y;
                values[2][k][j] = place.z + camera.distance_au;
                for row in 0..3 {
                    for axis in 0..3 {
                        values[3 + 3 * row + axis][k][j] = slopes[(row, axis)];
                    }
                }
            }
        }
        let light = self.t_nodes.map(|t| {
            let u = u_middle + u_half * t;
            2.0 * u * weights.light_per_beta((u * u).clamp(laws.beta_least, laws.beta_greatest))
        });
        self.finish(subject, rectangle, &values, &release, &light)
    }

    /// Where the grain of a node is, and how that answers to its start velocity; by the slow solver where the fast one
    /// doubts itself.
    fn reached(&self, node: usize, start: &State) -> (Vector3<f64>, Matrix3<f64>) {
        let block = &self.block;
        if block.doubtful[node / 64] >> (node % 64) & 1 == 1 {
            let (end, response) = propagate_with_response(block.mu[node], start, block.time[node]);
            return (end.position_au, response.position);
        }
        let end = Vector3::from_fn(|axis, _| block.end[axis][node]);
        (end, Matrix3::from_fn(|row, column| self.response[row][column][node]))
    }

    /// Coefficients from values at the nodes, and whether they are good enough.
    fn finish(
        &self,
        subject: &Subject,
        rectangle: &Rectangle,
        values: &Values,
        release: &[f64; S_TERMS],
        light: &[f64; T_TERMS],
    ) -> Fit {
        let weights = subject.weights;
        let release = chebyshev::transform(&self.s_fit, release);
        let light_terms = chebyshev::transform(&self.t_fit, light);
        let [low, high] = [-1.0, 1.0].map(|t| rectangle.root_beta[0] + t * rectangle.root_beta[1]);
        let released = chebyshev::integral(&release) * rectangle.anomaly[1];
        let mut patch = Patch {
            anomaly: rectangle.anomaly,
            root_beta: rectangle.root_beta,
            map: [[0.0; ROW]; S_TERMS],
            release: release.map(|term| term as f32),
            light: chebyshev::powers(&light_terms).map(|term| term as f32),
            whole: released.max(0.0) * weights.light_between(low * low, high * high),
        };
        if patch.whole <= 0.0 || subject.raster.misses(values, weights.greatest_speed_factor()) {
            return Fit { patch, verdict: Verdict::Outside };
        }

        // The size of the last terms along each variable, function by function.
        let (mut s_last, mut t_last) = ([0.0; FUNCTIONS], [0.0; FUNCTIONS]);
        for function in 0..FUNCTIONS {
            let along_t = values[function].map(|line| chebyshev::transform(&self.t_fit, &line));
            let terms: [[f64; T_TERMS]; S_TERMS] = std::array::from_fn(|k| {
                std::array::from_fn(|j| (0..S_TERMS).map(|n| self.s_fit[k][n] * along_t[n][j]).sum())
            });
            s_last[function] = chebyshev::last(&terms.map(|line| line.iter().map(|term| term.abs()).sum()));
            let columns: [f64; T_TERMS] = std::array::from_fn(|j| terms.iter().map(|line| line[j].abs()).sum());
            t_last[function] = chebyshev::last(&columns);
            for (row, line) in patch.map.iter_mut().zip(&terms) {
                for (out, power) in row[function * T_TERMS..].iter_mut().zip(chebyshev::powers(line)) {
                    *out = power as f32;
                }
            }
        }
        let nearest = values[2].iter().flatten().copied().filter(|&z| z > 0.0).fold(f64::INFINITY, f64::min);
        let scale = 1.0 / nearest.max(20.0 * NEAREST_AU);
        let reach = subject.raster.reach_px();
        let factor = weights.greatest_speed_factor();
        let excess = |last: &[f64; FUNCTIONS]| {
            let place = (last[0] + last[1] + reach * last[2]) * scale / PLACE_TOLERANCE_PX;
            let slopes = last[3..9].iter().sum::<f64>() + reach * last[9..].iter().sum::<f64>();
            place.max(factor * slopes * scale / SPREAD_TOLERANCE_PX)
        };
        let rate = |terms: &[f64]| {
            chebyshev::last(terms) / terms.iter().fold(0.0_f64, |sum, term| sum.max(term.abs())) / RATE_TOLERANCE
        };
        let s_excess = excess(&s_last).max(rate(&release));
        let t_excess = excess(&t_last).max(rate(&light_terms));
        let verdict = if s_excess <= 1.0 && t_excess <= 1.0 {
            Verdict::Smooth
        } else {
            Verdict::Rough { along_anomaly: s_excess >= t_excess }
        };
        Fit { patch, verdict }
    }
}

struct Fit {
    patch: Patch,
    verdict: Verdict,
}

#[derive(Clone, Copy, Debug, PartialEq)]
enum Verdict {
    Smooth,
    Rough { along_anomaly: bool },
    Outside,
}

#[derive(Clone, Copy, Debug)]
struct Rectangle {
    anomaly: [f64; 2],
    root_beta: [f64; 2],
    halvings: u32,
}

impl Rectangle {
    fn halves(&self, along_anomaly: bool) -> [Rectangle; 2] {
        [-0.5, 0.5].map(|side| {
            let mut half = Rectangle { halvings: self.halvings + 1, ..*self };
            let variable = if along_anomaly { &mut half.anomaly } else { &mut half.root_beta };
            *variable = [variable[0] + side * variable[1], 0.5 * variable[1]];
            half
        })
    }
}

/// One rectangle for each span, cut at the flanks of an outburst.
fn first_rectangles(subject: &Subject, spans: &[[f64; 2]]) -> Vec<Rectangle> {
    let laws = subject.weights.laws();
    let vista = subject.vista;
    let anomaly = |age: f64| {
        let place = vista.orbit.place_at(vista.seen.plus_days(-age));
        vista.orbit.whole_anomaly(&place.anomaly)
    };
    let now = vista.orbit.days_from_perihelion(vista.seen);
    let roots = [laws.beta_least.sqrt(), laws.beta_greatest.sqrt()];
    let mut found = Vec::new();
    for &[young, old] in spans {
        let mut ages = vec![young, old];
        if let Some(burst) = &laws.outburst {
            let flanks = [-2.0, -0.7, 0.0, 0.7, 2.0].map(|widths| now - burst.middle_days + widths * burst.width_days);
            ages.extend(flanks.into_iter().filter(|age| (young..old).contains(age)));
        }
        order::by_number(&mut ages, |age| *age);
        let edges: Vec<f64> = ages.into_iter().map(anomaly).collect();
        for pair in edges.windows(2) {
            found.push(Rectangle {
                anomaly: middle_and_half(pair[1], pair[0]),
                root_beta: middle_and_half(roots[0], roots[1]),
                halvings: 0,
            });
        }
    }
    found
}

fn middle_and_half(low: f64, high: f64) -> [f64; 2] {
    [0.5 * (low + high), 0.5 * (high - low)]
}
