//! How many samples does a cell get, where, and into which level of the pyramid?
//!
//! By a power of its weight and one of the picture it covers: faint wide parts need more than their weight says, bright
//! ones less. They stand in rows of equal anomaly, evenly along root beta, each row shifted against the last by
//! the golden section; the ejection runs through a three-dimensional Kronecker sequence. They go into the finest level
//! at which they lie close enough, or into a coarser one whose cells are still small against the smear by ejection, so
//! that what is smooth on the sky is smooth in the picture.

use crate::tail::cloud::cell::{self, Cell};
use crate::tail::cloud::patch::{NEAREST_AU, Patch, Subject};
use crate::tail::cloud::picture::{LEVELS, Picture};
use crate::tail::weight::Weights;
use tailvane_lanes::row::{self, Ejections, LANES, Part, Samples};

/// Fewest samples of a cell in the picture.
const FEWEST: f32 = 32.0;
/// Samples that a cell of the grid shall get at least: of even rows, and of rows that ejection has mixed.
const EVEN_ENOUGH: f32 = 3.0;
const MIXED_ENOUGH: f32 = 40.0;
/// Width of the grid's cells over the smear's standard deviation: where there are samples enough, and at most.
const FINE_SHARE: f32 = 0.45;
const COARSE_SHARE: f32 = 1.5;
/// Samples go as this power of the weight, and the rest to 1 of the area. These five were tuned on the eight scenes of
/// benches/grains.rs for the least noise at both qualities.
const WEIGHT_POWER: f64 = 0.6;
/// Most a shortened polynomial may miss, in cells of the grid.
const CUT_TOLERANCE: f32 = 0.05;
/// Length of the table of ejections.
const TABLE: usize = 1 << 15;

/// Samples patches into a picture; keeps its tables for the next one.
#[derive(Clone, Debug, Default)]
pub struct Sampler {
    /// Spread and cone for which the table holds.
    law: Option<[f64; 2]>,
    ejections: Ejections,
    cells: Vec<Cell>,
}

impl Sampler {
    /// Samples the patches into the picture's pyramid.
    pub fn fill(&mut self, subject: &Subject, patches: &[Patch], samples: usize, picture: &mut Picture) {
        self.prepare(subject.weights);
        cell::cut(subject, patches, &mut self.cells);
        let claim = |cell: &Cell| {
            let grain = (FINE_SHARE * cell.smear).max(1.0);
            let covered = f64::from((cell.smeared_area / (grain * grain)).max(1.0));
            covered * libm::pow(cell.weight / covered, WEIGHT_POWER)
        };
        let claims: f64 = self.cells.iter().map(claim).sum();
        for cell in &self.cells {
            let wanted = (samples as f64 * claim(cell) / claims) as f32;
            self.sample(subject, &patches[cell.patch], cell, wanted, picture);
        }
    }

    /// Makes the table of ejections, less their mean, if the law is another one.
    fn prepare(&mut self, weights: &Weights) {
        let laws = weights.laws();
        let law = [laws.ejection_spread, laws.ejection_cone_deg];
        if self.law == Some(law) {
            return;
        }
        // Powers of the inverse of the root of g^4 = g + 1: an even Kronecker sequence in three dimensions.
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

    fn sample(&self, subject: &Subject, patch: &Patch, cell: &Cell, wanted: f32, picture: &mut Picture) {
        let layout = Layout::of(subject, patch, cell, wanted);
        let ejected = subject.weights.laws().ejection_speed_km_s > 0.0;
        let part = Part::of(&patch.map, cell.t, ejected, CUT_TOLERANCE * layout.nearest_z);
        let grid = picture.level(layout.level);
        for line in 0..layout.rows {
            let s = layout.row_place(line);
            // Even rows, each shifted by the golden section.
            let shift = (line as f32 + 0.5) * 0.618_034;
            let shift = shift - shift.floor();
            // A hop of its own for each row, so that neighbouring rows do not share a pattern.
            let mut next = (line * 20_251 + layout.columns * 77) % (TABLE - LANES);
            let mut done = 0;
            while done < layout.columns {
                if next + LANES > TABLE {
                    next = 0;
                }
                let count = (layout.columns - done).min((TABLE - next) / LANES * LANES);
                let samples = Samples {
                    first: (done as f32 + shift) * layout.step - 1.0,
                    step: layout.step,
                    count,
                    weight: patch.release_at(s) * layout.weight,
                    light: layout.light,
                    ejection: next,
                    scale: layout.scale,
                    offset: layout.offset,
                    nearest: NEAREST_AU as f32,
                };
                part.add_row(s, &samples, &self.ejections, grid);
                next += count;
                done += count;
            }
        }
    }
}

/// How the samples of one cell are laid out.
struct Layout {
    rows: usize,
    columns: usize,
    s: [f32; 2],
    /// From column to column, in the cell's own variable.
    step: f32,
    level: usize,
    scale: f32,
    offset: [f32; 2],
    /// Of a sample, over its row's release and its own light.
    weight: f32,
    light: [f32; row::T_TERMS],
    /// Least distance along the line of sight, au, at the cell's corners.
    nearest_z: f32,
}

impl Layout {
    fn of(subject: &Subject, patch: &Patch, cell: &Cell, wanted: f32) -> Self {
        let wanted = wanted.max(FEWEST);
        let [along_s, along_t] = cell.sides.map(|side| side + 1.0);
        let columns = ((wanted * along_t / along_s).sqrt() / LANES as f32).round().max(1.0) as usize * LANES;
        let rows = ((wanted / columns as f32).round() as usize).max(2);
        let count = (rows * columns) as f32;

        let even = (EVEN_ENOUGH * cell.area / count).sqrt();
        let mixed = (MIXED_ENOUGH * cell.smeared_area / count).sqrt();
        let width = even.max(FINE_SHARE * cell.smear).max(mixed.min(COARSE_SHARE * cell.smear));
        // The level whose cells come nearest to that width.
        let level = (1..LEVELS).take_while(|level| (1 << level) as f32 <= width * std::f32::consts::SQRT_2).count();
        let scale = 1.0 / (1 << level) as f32;

        let light = row::shifted(&patch.light, cell.t[0], cell.t[1]);
        // The mean of the light polynomial over the cell.
        let light_mean = light[0] + light[2] / 3.0 + light[4] / 5.0;
        let mut layout = Layout {
            rows,
            columns,
            s: cell.s,
            step: 2.0 / columns as f32,
            level,
            scale,
            offset: subject.raster.nucleus_px.map(|middle| middle as f32 * scale - 0.5),
            weight: 1.0,
            light,
            nearest_z: nearest_z(patch, cell),
        };
        let released: f64 = (0..rows).map(|line| f64::from(patch.release_at(layout.row_place(line)))).sum();
        let share = cell.weight / (released.max(f64::MIN_POSITIVE) * columns as f64);
        layout.weight = share as f32 / light_mean;
        layout
    }

    fn row_place(&self, line: usize) -> f32 {
        self.s[0] + self.s[1] * (2.0 * (line as f32 + 0.5) / self.rows as f32 - 1.0)
    }
}

fn nearest_z(patch: &Patch, cell: &Cell) -> f32 {
    let mut nearest = f32::INFINITY;
    for a in [-1.0, 1.0] {
        let row = row::row_at(&patch.map, cell.s[0] + a * cell.s[1]);
        for b in [-1.0, 1.0] {
            nearest = nearest.min(row::functions_at(&row, cell.t[0] + b * cell.t[1])[2]);
        }
    }
    nearest
}
