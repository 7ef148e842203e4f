//! Where in the patches are samples taken, how many, and into which level of the pyramid do they go?
//!
//! Patches are cut into cells of moderate size on the picture; cells beside the picture are left out. A cell gets
//! samples by the square root of its weight times the picture it covers, in rows of equal anomaly, each row shifted
//! against the last by the golden section; the ejection runs through a three-dimensional Kronecker sequence. Samples
//! go into the finest level at which they lie close enough, or a coarser one where ejection smears more than its cells.

use crate::tail::cloud::patch::{NEAREST_AU, Patch, Subject};
use crate::tail::cloud::picture::{LEVELS, Picture};
use crate::tail::weight::Weights;
use tailvane_lanes::row::{self, Ejections, LANES, Row, Samples, T_TERMS};

/// Largest side of a cell on the picture, as a share of the picture's longer side.
const CELL_SIDE: f32 = 0.16;
/// Greatest ratio of the smear by ejection across a cell.
const SMEAR_RATIO: f32 = 2.5;
const MOST_HALVINGS: u32 = 9;
const MOST_CELLS: usize = 1500;
/// Fewest samples of a cell in the picture, and of a row.
const FEWEST: usize = 4 * LANES;
/// Samples that a cell of the grid shall get at least, where they lie in even rows.
const CLOSE_ENOUGH: f32 = 1.5;
/// Cells of the grid are at most this part of the standard deviation of the smear.
const SMEAR_SHARE: f32 = 0.5;
/// Length of the table of ejections.
const TABLE: usize = 1 << 15;

/// Cuts patches into cells and samples them.
#[derive(Clone, Debug, Default)]
pub struct Sampler {
    /// The spread and cone for which the table holds.
    law: Option<[f64; 2]>,
    ejections: Ejections,
    cells: Vec<Cell>,
}

/// A part of a patch.
#[derive(Clone, Copy, Debug)]
struct Cell {
    patch: usize,
    /// Middle and half width in the patch's own variables.
    s: [f32; 2],
    t: [f32; 2],
    /// Sides on the picture, along anomaly and along root beta, without ejection.
    sides: [f32; 2],
    /// Picture that it covers, ejection included, in cells of its smear level.
    covered: f32,
    /// Standard deviation of the smear along its narrow and its wide side.
    smear: [f32; 2],
    /// Area without ejection, and with it.
    area: [f32; 2],
    weight: f64,
}

/// A point of the map on the picture.
#[derive(Clone, Copy, Debug, Default)]
struct Spot {
    x: f32,
    y: f32,
    /// Covariance of the smear: xx, xy, yy.
    smear: [f32; 3],
    seen: bool,
}

impl Sampler {
    /// Samples the patches into the picture's pyramid.
    pub fn fill(&mut self, subject: &Subject, patches: &[Patch], samples: usize, picture: &mut Picture) {
        self.prepare(subject.weights);
        let variances = subject.weights.ejection_variances().map(|variance| variance as f32);
        self.cells.clear();
        for (index, patch) in patches.iter().enumerate() {
            let mut open = vec![([0.0_f32, 1.0], [0.0_f32, 1.0], 0)];
            while let Some((s, t, halvings)) = open.pop() {
                match cell(subject, patch, index, s, t, variances) {
                    Look::Outside => {}
                    Look::Large { along_anomaly } if halvings < MOST_HALVINGS && self.cells.len() < MOST_CELLS => {
                        for side in [-0.5, 0.5] {
                            let (mut s, mut t) = (s, t);
                            let variable = if along_anomaly { &mut s } else { &mut t };
                            *variable = [variable[0] + side * variable[1], 0.5 * variable[1]];
                            open.push((s, t, halvings + 1));
                        }
                    }
                    Look::Large { .. } | Look::Fine if halvings > 100 => {}
                    _ => {
                        if let Some(found) = measured(subject, patch, index, s, t, variances) {
                            self.cells.push(found);
                        }
                    }
                }
            }
        }
        picture.stats = (self.cells.len(), 0);
        let claims: f64 = self.cells.iter().map(Cell::claim).sum();
        let mut first = 0;
        for cell in &self.cells {
            let wanted = samples as f64 * cell.claim() / claims;
            first = sample(subject, &patches[cell.patch], cell, wanted as f32, first, &self.ejections, picture);
        }
    }

    /// Makes the table of ejections, if the law is another one.
    fn prepare(&mut self, weights: &Weights) {
        let laws = weights.laws();
        let law = [laws.ejection_spread, laws.ejection_cone_deg];
        if self.law == Some(law) {
            return;
        }
        // Powers of the inverse of the root of g^4 = g + 1: the most even Kronecker sequence in three dimensions.
        const G: f64 = 1.220_744_084_605_759_6;
        let steps = [1.0 / G, 1.0 / (G * G), 1.0 / (G * G * G)];
        let mean = weights.mean_radial_ejection();
        let mut axes = [const { Vec::new() }; 3];
        for k in 0..TABLE {
            let velocity = weights.ejection(steps.map(|step| {
                let place = 0.5 + step * k as f64;
                place - place.floor()
            }));
            axes[0].push((velocity[0] - mean) as f32);
            axes[1].push(velocity[1] as f32);
            axes[2].push(velocity[2] as f32);
        }
        self.ejections = Ejections { axes };
        self.law = Some(law);
    }
}

impl Cell {
    /// Its share of the samples.
    fn claim(&self) -> f64 {
        (self.weight * f64::from(self.covered)).sqrt()
    }
}

/// What is to be done with a part of a patch.
enum Look {
    Outside,
    Large { along_anomaly: bool },
    Fine,
}

type Spots = [[Spot; 3]; 3];

/// Three by three points of a part of a patch; the first index runs along anomaly.
fn spots(patch: &Patch, s: [f32; 2], t: [f32; 2], variances: [f32; 3]) -> Spots {
    [-1.0, 0.0, 1.0].map(|a| {
        let row = row::row_at(&patch.map, s[0] + a * s[1]);
        [-1.0, 0.0, 1.0].map(|b| spot(&row, t[0] + b * t[1], variances))
    })
}

fn spot(row: &Row, t: f32, variances: [f32; 3]) -> Spot {
    let f = row::functions_at(row, t);
    if f[2] < NEAREST_AU as f32 {
        return Spot::default();
    }
    let (x, y) = (f[0] / f[2], f[1] / f[2]);
    let mut smear = [0.0; 3];
    for axis in 0..3 {
        let dx = (f[3 + axis] - x * f[9 + axis]) / f[2];
        let dy = (f[6 + axis] - y * f[9 + axis]) / f[2];
        smear[0] += variances[axis] * dx * dx;
        smear[1] += variances[axis] * dx * dy;
        smear[2] += variances[axis] * dy * dy;
    }
    Spot { x, y, smear, seen: true }
}

/// Variances along the narrow and the wide side.
fn axes_of([xx, xy, yy]: [f32; 3]) -> [f32; 2] {
    let (mean, half) = (0.5 * (xx + yy), 0.5 * (xx - yy));
    let apart = (half * half + xy * xy).sqrt();
    [(mean - apart).max(0.0), mean + apart]
}

fn cell(subject: &Subject, patch: &Patch, _index: usize, s: [f32; 2], t: [f32; 2], variances: [f32; 3]) -> Look {
    let spots = spots(patch, s, t, variances);
    let seen = spots.iter().flatten().filter(|spot| spot.seen).count();
    if seen == 0 {
        return Look::Outside;
    }
    if seen < 9 {
        return Look::Large { along_anomaly: s[1] >= t[1] };
    }
    let raster = subject.raster;
    let widest = spots.iter().flatten().map(|spot| axes_of(spot.smear)[1]).fold(0.0, f32::max).sqrt();
    let margin = 3.5 * widest + 20.0;
    let [left, right, upper, lower] = raster.edges_px(f64::from(margin)).map(|edge| edge as f32);
    let all = |test: &dyn Fn(&Spot) -> bool| spots.iter().flatten().all(test);
    if all(&|spot| spot.x < left) || all(&|spot| spot.x > right) || all(&|spot| spot.y < upper) || all(&|spot| spot.y > lower) {
        return Look::Outside;
    }
    let longer = raster.width.max(raster.height) as f32;
    let most = CELL_SIDE * longer + widest;
    let [along_s, along_t] = sides(&spots);
    if along_s.max(along_t) > most {
        return Look::Large { along_anomaly: along_s >= along_t };
    }
    let smears: Spots2 = spots.map(|line| line.map(|spot| (axes_of(spot.smear)[0] + 1.0).sqrt()));
    let ratio_t = ratio(&smears, false);
    let ratio_s = ratio(&smears, true);
    if ratio_s.max(ratio_t) > SMEAR_RATIO && along_s.max(along_t) > 4.0 {
        return Look::Large { along_anomaly: ratio_s >= ratio_t };
    }
    Look::Fine
}

type Spots2 = [[f32; 3]; 3];

/// Greatest ratio of neighbouring-end values along one variable.
fn ratio(values: &Spots2, along_anomaly: bool) -> f32 {
    (0..3)
        .map(|k| {
            let line: [f32; 3] = if along_anomaly { [values[0][k], values[1][k], values[2][k]] } else { values[k] };
            let most = line.iter().copied().fold(0.0, f32::max);
            most / line.iter().copied().fold(f32::INFINITY, f32::min)
        })
        .fold(1.0, f32::max)
}

/// Longest sides along anomaly and along root beta.
fn sides(spots: &Spots) -> [f32; 2] {
    let apart = |a: &Spot, b: &Spot| ((a.x - b.x) * (a.x - b.x) + (a.y - b.y) * (a.y - b.y)).sqrt();
    let along = |k: usize| [
        apart(&spots[0][k], &spots[1][k]) + apart(&spots[1][k], &spots[2][k]),
        apart(&spots[k][0], &spots[k][1]) + apart(&spots[k][1], &spots[k][2]),
    ];
    [0, 1, 2].map(along).into_iter().fold([0.0, 0.0], |most, sides| [most[0].max(sides[0]), most[1].max(sides[1])])
}

/// The cell with its measures; None where nothing leaves.
fn measured(subject: &Subject, patch: &Patch, index: usize, s: [f32; 2], t: [f32; 2], variances: [f32; 3]) -> Option<Cell> {
    let spots = spots(patch, s, t, variances);
    let weight = released(patch, s) * light(subject.weights, patch, t);
    if weight <= 0.0 {
        return None;
    }
    let middle = spots[1][1];
    let (ds, dt) = (difference(&spots[2][1], &spots[0][1]), difference(&spots[1][2], &spots[1][0]));
    let base = [
        (ds[0] * ds[0] + dt[0] * dt[0]) / 12.0,
        (ds[0] * ds[1] + dt[0] * dt[1]) / 12.0,
        (ds[1] * ds[1] + dt[1] * dt[1]) / 12.0,
    ];
    let area = |smear: [f32; 3]| {
        let [xx, xy, yy] = [base[0] + smear[0] + 1.0 / 12.0, base[1] + smear[1], base[2] + smear[2] + 1.0 / 12.0];
        12.0 * (xx * yy - xy * xy).max(0.0).sqrt()
    };
    let narrow = spots.iter().flatten().map(|spot| axes_of(spot.smear)[0]).fold(f32::INFINITY, f32::min).sqrt();
    let wide = axes_of(middle.smear)[1].sqrt();
    let area = [area([0.0; 3]), area(middle.smear)];
    let grain = (SMEAR_SHARE * narrow).max(1.0);
    Some(Cell {
        patch: index,
        s,
        t,
        sides: sides(&spots),
        covered: (area[1] / (grain * grain)).max(1.0),
        smear: [narrow, wide],
        area,
        weight,
    })
}

fn difference(a: &Spot, b: &Spot) -> [f32; 2] {
    [a.x - b.x, a.y - b.y]
}

/// What leaves over a part of a patch: the release integrated along anomaly by Simpson's rule.
fn released(patch: &Patch, s: [f32; 2]) -> f64 {
    let at = |a: f32| f64::from(release_at(patch, s[0] + a * s[1]));
    patch.anomaly[1] * f64::from(s[1]) * (at(-1.0) + 4.0 * at(0.0) + at(1.0)) / 3.0
}

fn release_at(patch: &Patch, s: f32) -> f32 {
    let terms = row::chebyshev(s);
    patch.release.iter().zip(terms).map(|(c, term)| c * term).sum::<f32>().max(0.0)
}

fn light(weights: &Weights, patch: &Patch, t: [f32; 2]) -> f64 {
    let root = |b: f32| patch.root_beta[0] + patch.root_beta[1] * f64::from(t[0] + b * t[1]);
    let [low, high] = [root(-1.0), root(1.0)];
    weights.light_between(low * low, high * high)
}

/// Samples one cell; returns where in the table of ejections the next one goes on.
fn sample(
    subject: &Subject,
    patch: &Patch,
    cell: &Cell,
    wanted: f32,
    first: usize,
    ejections: &Ejections,
    picture: &mut Picture,
) -> usize {
    let wanted = wanted.max(FEWEST as f32);
    let [along_s, along_t] = cell.sides.map(|side| side + 1.0);
    let columns = (wanted * along_t / along_s).sqrt();
    let columns = ((columns / LANES as f32 + 0.5) as usize).max(1) * LANES;
    let rows = ((wanted / columns as f32 + 0.5) as usize).max(2);
    let count = (rows * columns) as f32;

    // The level whose cells are as wide as even rows are sparse, or as the smear allows.
    let sparse = (CLOSE_ENOUGH * cell.area[0].min(cell.area[1]) / count).sqrt();
    let wide = sparse.max(SMEAR_SHARE * cell.smear[0]);
    let level = (0..LEVELS - 1).take_while(|&level| (1 << (level + 1)) as f32 <= wide * 1.2).count();
    let shrink = 1.0 / (1 << level) as f32;
    let offset = subject.raster.nucleus_px.map(|middle| middle as f32 * shrink - 0.5);

    let light_whole = light(subject.weights, patch, cell.t);
    // The mean of the light polynomial over the cell, by Simpson's rule, brings it to its share.
    let light_at = |b: f32| patch.light.iter().rev().fold(0.0, |sum, power| sum * (cell.t[0] + b * cell.t[1]) + power);
    let light_mean = (light_at(-1.0) + 4.0 * light_at(0.0) + light_at(1.0)) / 6.0;
    let scale = cell.weight / released_by_rows(patch, cell, rows);

    let step = 2.0 * cell.t[1] / columns as f32;
    let mut next = first;
    for line in 0..rows {
        let s = row_place(cell, rows, line);
        let released = f64::from(release_at(patch, s)) * scale;
        let weight = (released / columns as f64) as f32 / light_mean;
        let _ = light_whole;
        let shift = (line as f32 + 0.5) * 0.618_034;
        let shift = shift - shift.floor();
        if next + columns > TABLE {
            next = (next + columns) % LANES.max(1) * 7 % 64;
        }
        let samples = Samples {
            first: cell.t[0] - cell.t[1] + shift * step,
            step,
            count: columns.min(TABLE),
            weight,
            light: patch.light,
            ejection: next,
            scale: shrink,
            offset,
            nearest: NEAREST_AU as f32,
        };
        let row = row::row_at(&patch.map, s);
        row::add_row(&row, &samples, ejections, picture.level(level));
        next += columns;
        picture.stats.1 += columns;
    }
    let _ = T_TERMS;
    next
}

fn row_place(cell: &Cell, rows: usize, line: usize) -> f32 {
    cell.s[0] + cell.s[1] * (2.0 * (line as f32 + 0.5) / rows as f32 - 1.0)
}

/// Sum of the release rates at the rows.
fn released_by_rows(patch: &Patch, cell: &Cell, rows: usize) -> f64 {
    (0..rows).map(|line| f64::from(release_at(patch, row_place(cell, rows, line)))).sum::<f64>().max(f64::MIN_POSITIVE)
}
