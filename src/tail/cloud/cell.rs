//! Into which cells of moderate size on the picture are the patches cut?
//!
//! A cell is a part of a patch in both of its variables. Cells that lie wholly beside the picture are left out; one that
//! is large on the picture, or across which the smear by ejection changes much, is halved. What is measured of each
//! decides how many samples it gets and how finely they are laid down ([`super::sample`]).

use crate::tail::cloud::patch::{NEAREST_AU, Patch, Subject};
use tailvane_lanes::row::{self, Row};

/// Largest side of a cell on the picture, as a share of the picture's longer side.
const LARGEST_SIDE: f32 = 0.16;
/// Greatest ratio of the smear by ejection across a cell.
const SMEAR_RATIO: f32 = 2.5;
/// Halvings and cells at which cutting stops.
const MOST_HALVINGS: u32 = 9;
const MOST_CELLS: usize = 1500;

/// A part of a patch, with its measures on the picture, all in cells of the picture's grid.
#[derive(Clone, Copy, Debug)]
pub struct Cell {
    pub patch: usize,
    /// Middle and half width in the patch's own variables.
    pub s: [f32; 2],
    pub t: [f32; 2],
    /// Sides along anomaly and along root beta, without ejection.
    pub sides: [f32; 2],
    /// Area without and with ejection, at least a cell wide.
    pub area: f32,
    pub smeared_area: f32,
    /// Standard deviation of the smear along its narrow side, where it is narrowest.
    pub smear: f32,
    /// Release times light.
    pub weight: f64,
}

/// Cuts patches into cells.
pub fn cut(subject: &Subject, patches: &[Patch], cells: &mut Vec<Cell>) {
    let variances = subject.weights.ejection_variances().map(|variance| variance as f32);
    cells.clear();
    for (index, patch) in patches.iter().enumerate() {
        let mut open = vec![([0.0, 1.0], [0.0, 1.0], 0)];
        while let Some((s, t, halvings)) = open.pop() {
            let spots = spots(patch, s, t, variances);
            let full = halvings >= MOST_HALVINGS || cells.len() + open.len() >= MOST_CELLS;
            match look(subject, &spots, [s[1], t[1]]) {
                Look::Beside => {}
                Look::Large { along_anomaly } if !full => {
                    for side in [-0.5, 0.5] {
                        let (mut s, mut t) = (s, t);
                        let variable: &mut [f32; 2] = if along_anomaly { &mut s } else { &mut t };
                        *variable = [variable[0] + side * variable[1], 0.5 * variable[1]];
                        open.push((s, t, halvings + 1));
                    }
                }
                Look::Large { .. } | Look::Fine => {
                    let weight = patch.released(s) * patch.lit(subject.weights, t);
                    if weight > 0.0 {
                        cells.push(measured(&spots, index, s, t, weight));
                    }
                }
            }
        }
    }
}

/// A point of the map on the picture, relative to the nucleus.
#[derive(Clone, Copy, Debug, Default)]
struct Spot {
    x: f32,
    y: f32,
    /// Covariance of the smear: xx, xy, yy.
    smear: [f32; 3],
    seen: bool,
}

/// Three by three points of a part of a patch; the first index runs along anomaly.
type Spots = [[Spot; 3]; 3];

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
    for (axis, variance) in variances.into_iter().enumerate() {
        let across = (f[3 + axis] - x * f[9 + axis]) / f[2];
        let down = (f[6 + axis] - y * f[9 + axis]) / f[2];
        smear[0] += variance * across * across;
        smear[1] += variance * across * down;
        smear[2] += variance * down * down;
    }
    Spot { x, y, smear, seen: true }
}

/// Standard deviations along the narrow and the wide side.
fn narrow_and_wide([xx, xy, yy]: [f32; 3]) -> [f32; 2] {
    let (mean, half) = (0.5 * (xx + yy), 0.5 * (xx - yy));
    let apart = (half * half + xy * xy).sqrt();
    [(mean - apart).max(0.0).sqrt(), (mean + apart).sqrt()]
}

enum Look {
    Beside,
    Large { along_anomaly: bool },
    Fine,
}

fn look(subject: &Subject, spots: &Spots, halves: [f32; 2]) -> Look {
    let all = |test: &dyn Fn(&Spot) -> bool| spots.iter().flatten().all(test);
    if all(&|spot| !spot.seen) {
        return Look::Beside;
    }
    if !all(&|spot| spot.seen) {
        return Look::Large { along_anomaly: halves[0] >= halves[1] };
    }
    let raster = subject.raster;
    let widest = spots.iter().flatten().map(|spot| narrow_and_wide(spot.smear)[1]).fold(0.0, f32::max);
    // What ejection throws further than that is three parts in ten thousand; and the coarsest cells of the pyramid.
    let [left, right, upper, lower] = raster.edges_px(f64::from(3.5 * widest + 20.0)).map(|edge| edge as f32);
    if all(&|spot| spot.x < left)
        || all(&|spot| spot.x > right)
        || all(&|spot| spot.y < upper)
        || all(&|spot| spot.y > lower)
    {
        return Look::Beside;
    }
    let [along_s, along_t] = sides(spots);
    let longest = along_s.max(along_t);
    if longest > LARGEST_SIDE * raster.width.max(raster.height) as f32 + widest {
        return Look::Large { along_anomaly: along_s >= along_t };
    }
    let smears = spots.map(|line| line.map(|spot| narrow_and_wide(spot.smear)[0] + 1.0));
    let turned = [0, 1, 2].map(|k| [smears[0][k], smears[1][k], smears[2][k]]);
    let (ratio_s, ratio_t) = (greatest_ratio(&turned), greatest_ratio(&smears));
    if ratio_s.max(ratio_t) > SMEAR_RATIO && longest > 4.0 {
        return Look::Large { along_anomaly: ratio_s >= ratio_t };
    }
    Look::Fine
}

/// Greatest ratio within a line.
fn greatest_ratio(lines: &[[f32; 3]; 3]) -> f32 {
    let ratio =
        |line: &[f32; 3]| line.iter().copied().fold(0.0, f32::max) / line.iter().copied().fold(f32::INFINITY, f32::min);
    lines.iter().map(ratio).fold(1.0, f32::max)
}

/// Longest sides along anomaly and along root beta.
fn sides(spots: &Spots) -> [f32; 2] {
    let apart = |a: &Spot, b: &Spot| ((a.x - b.x) * (a.x - b.x) + (a.y - b.y) * (a.y - b.y)).sqrt();
    let length = |line: [&Spot; 3]| apart(line[0], line[1]) + apart(line[1], line[2]);
    let mut longest = [0.0_f32; 2];
    for (k, line) in spots.iter().enumerate() {
        longest[0] = longest[0].max(length([&spots[0][k], &spots[1][k], &spots[2][k]]));
        longest[1] = longest[1].max(length(line.each_ref()));
    }
    longest
}

fn measured(spots: &Spots, patch: usize, s: [f32; 2], t: [f32; 2], weight: f64) -> Cell {
    let side = |a: &Spot, b: &Spot| [a.x - b.x, a.y - b.y];
    let (ds, dt) = (side(&spots[2][1], &spots[0][1]), side(&spots[1][2], &spots[1][0]));
    // An even rectangle has a twelfth of its sides' squares as variance; one cell of the grid is added.
    let area = |smear: [f32; 3]| {
        let xx = (ds[0] * ds[0] + dt[0] * dt[0] + 1.0) / 12.0 + smear[0];
        let xy = (ds[0] * ds[1] + dt[0] * dt[1]) / 12.0 + smear[1];
        let yy = (ds[1] * ds[1] + dt[1] * dt[1] + 1.0) / 12.0 + smear[2];
        12.0 * (xx * yy - xy * xy).max(0.0).sqrt()
    };
    Cell {
        patch,
        s,
        t,
        sides: sides(spots),
        area: area([0.0; 3]),
        smeared_area: area(spots[1][1].smear),
        smear: spots.iter().flatten().map(|spot| narrow_and_wide(spot.smear)[0]).fold(f32::INFINITY, f32::min),
        weight,
    }
}
