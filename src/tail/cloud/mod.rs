//! What does the dust look like on the sky, as surface density?
//!
//! ```text
//! let weights = Weights::of(&plan.tails);              // once for each change of the laws
//! let mut cloud = Cloud::new();                        // holds the buffers
//! let picture = cloud.render(&vista, &weights, &raster, Quality::DRAGGING)?;
//! picture.tone(&stops, Tone { .. }, &mut rgba);
//! ```
//!
//! Smooth patches ([`patch`]) stand for the exact motion; cells of them ([`cell`]) are sampled by an even sequence over
//! release, size, and direction and speed of ejection, each sample with its weight; the samples fall into a pyramid of
//! grids. The place answers linearly to the ejection velocity about its mean: shells keep their folds (the neck-line)
//! and lose their slight curvature (tests/cloud.rs measures that against grains moved one by one).
//! Surface density of cross section only: illumination and phase at the grain's own place are left out.

mod cell;
mod chebyshev;
pub mod patch;
mod picture;
mod sample;

pub use picture::{Picture, Stretch, Tone};

use crate::error::Error;
use crate::tail::grain::Vista;
use crate::tail::weight::Weights;
use nalgebra::Matrix3;
use patch::{Fitter, Patch, Subject};
use sample::Sampler;
use tailvane_lanes::row::{FUNCTIONS, S_TERMS, T_TERMS};

/// The picture's frame: how a gnomonic offset from the nucleus (xi east, eta north, tangent values) falls on it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Raster {
    /// Pixels.
    pub width: usize,
    pub height: usize,
    /// Pixels right and down for a unit of xi (first column) and of eta (second column).
    pub turn_px: [[f64; 2]; 2],
    /// The nucleus, pixels right and down from the upper left corner of the picture.
    pub nucleus_px: [f64; 2],
}

/// How fine a picture is made.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Quality {
    /// Samples in the picture, about.
    pub samples: usize,
    /// Pixels along the side of a cell of its grid.
    pub cell_px: usize,
}

impl Quality {
    /// While something is dragged.
    pub const DRAGGING: Quality = Quality { samples: 200_000, cell_px: 2 };
    /// When all is still.
    pub const STILL: Quality = Quality { samples: 1_000_000, cell_px: 1 };
}

/// Makes pictures; holds what one picture can hand on to the next.
#[derive(Clone, Debug, Default)]
pub struct Cloud {
    fitter: Fitter,
    patches: Vec<Patch>,
    sampler: Sampler,
    picture: Picture,
}

impl Cloud {
    pub fn new() -> Self {
        Cloud::default()
    }

    /// The dust as seen in `vista`, under valid laws.
    ///
    /// # Errors
    /// The laws release nothing in the chosen ages.
    pub fn render(
        &mut self,
        vista: &Vista,
        weights: &Weights,
        raster: &Raster,
        quality: Quality,
    ) -> Result<&Picture, Error> {
        let spans = weights.release_spans(vista)?;
        let raster = raster.coarser(quality.cell_px);
        let subject = Subject { vista, weights, raster: &raster };
        let (whole, effort) = self.fitter.cover(&subject, &spans, &mut self.patches);
        self.picture.begin(raster.width, raster.height, quality.cell_px, whole, effort);
        self.sampler.fill(&subject, &self.patches, quality.samples, &mut self.picture);
        self.picture.finish();
        Ok(&self.picture)
    }

    /// The picture made last.
    pub fn picture(&self) -> &Picture {
        &self.picture
    }

    /// The patches of the picture made last.
    pub fn patches(&self) -> &[Patch] {
        &self.patches
    }
}

/// From heliocentric places, relative to the nucleus, to camera coordinates.
pub struct Camera {
    /// X and Y in pixels times au, Z in au.
    pub turn: Matrix3<f64>,
    /// The nucleus, au along the line of sight.
    pub distance_au: f64,
}

impl Raster {
    fn camera(&self, vista: &Vista) -> Camera {
        let [[a, b], [c, d]] = self.turn_px;
        let axes = &vista.axes;
        Camera {
            turn: Matrix3::from_rows(&[
                (axes.east * a + axes.north * b).transpose(),
                (axes.east * c + axes.north * d).transpose(),
                axes.sight.transpose(),
            ]),
            distance_au: (vista.nucleus.position_au - vista.observer_au).dot(&axes.sight),
        }
    }

    /// The same picture in cells of `cell_px` by `cell_px` pixels.
    fn coarser(&self, cell_px: usize) -> Raster {
        let cell = cell_px as f64;
        Raster {
            width: self.width.div_ceil(cell_px).max(1),
            height: self.height.div_ceil(cell_px).max(1),
            turn_px: self.turn_px.map(|row| row.map(|number| number / cell)),
            nucleus_px: self.nucleus_px.map(|number| number / cell),
        }
    }

    /// Greatest distance of a place of the picture from the nucleus along one axis, pixels.
    fn reach_px(&self) -> f64 {
        let [x, y] = self.nucleus_px;
        let [w, h] = [self.width as f64, self.height as f64];
        [x, w - x, y, h - y].into_iter().fold(0.0, |most, side| f64::max(most, side.abs()))
    }

    /// Edges of the picture about the nucleus, with what is needed around them: left, right, upper, lower.
    fn edges_px(&self, margin_px: f64) -> [f64; 4] {
        let [x, y] = self.nucleus_px;
        [-x - margin_px, self.width as f64 - x + margin_px, -y - margin_px, self.height as f64 - y + margin_px]
    }

    /// Whether every one of the places lies beyond one same edge of the picture (or behind the observer), with all
    /// ejection up to `factor` of the slopes, and with a tenth of the picture to spare for what lies between nodes.
    fn misses(&self, values: &[[[f64; T_TERMS]; S_TERMS]; FUNCTIONS], factor: f64) -> bool {
        let margin = 0.1 * (self.width + self.height) as f64;
        let [left, right, upper, lower] = self.edges_px(margin);
        // Beyond an edge in homogeneous coordinates: side (X - edge Z) > 0, which also holds behind the observer where
        // the ray backwards meets the other side.
        let beyond = |row: usize, edge: f64, side: f64| {
            (0..S_TERMS).all(|k| {
                (0..T_TERMS).all(|j| {
                    let place = values[row][k][j] - edge * values[2][k][j];
                    let slopes: f64 = (0..3)
                        .map(|axis| {
                            let slope = values[3 + 3 * row + axis][k][j] - edge * values[9 + axis][k][j];
                            slope * slope
                        })
                        .sum();
                    side * place > factor * slopes.sqrt()
                })
            })
        };
        let behind = values[2].iter().flatten().all(|&z| z < patch::NEAREST_AU);
        behind || beyond(0, left, -1.0) || beyond(0, right, 1.0) || beyond(1, upper, -1.0) || beyond(1, lower, 1.0)
    }
}
