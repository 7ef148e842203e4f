//! What does a finished picture hold, and how does it become colours and lines?

use crate::tail::cloud::patch::Effort;
use tailvane_lanes::grid::Grid;

/// Levels of the pyramid: cells of 1 to 64 cells of the picture.
pub const LEVELS: usize = 7;

/// Surface density on a grid, relative: what falls on a cell over all that the laws release.
#[derive(Clone, Debug, Default)]
pub struct Picture {
    levels: Vec<Grid>,
    /// Pixels along the side of a cell.
    cell_px: usize,
    whole: f64,
    effort: Effort,
    spare: Vec<f32>,
}

/// How density turns into brightness.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Stretch {
    /// Linear in the faintest part, logarithmic above.
    Asinh,
    /// Logarithmic; what is fainter than the depth is dark.
    Log,
}

impl Picture {
    /// Empties the pyramid for a picture of that size, in cells.
    pub(super) fn begin(&mut self, width: usize, height: usize, cell_px: usize, whole: f64, effort: Effort) {
        self.levels.resize_with(LEVELS, Grid::default);
        for (k, level) in self.levels.iter_mut().enumerate() {
            level.clear(width.div_ceil(1 << k), height.div_ceil(1 << k));
        }
        (self.cell_px, self.whole, self.effort) = (cell_px, whole, effort);
    }

    pub(super) fn level(&mut self, level: usize) -> &mut Grid {
        &mut self.levels[level]
    }

    /// Brings the pyramid down to its finest level.
    pub(super) fn finish(&mut self) {
        for k in (1..LEVELS).rev() {
            let (finer, coarser) = self.levels.split_at_mut(k);
            finer[k - 1].add_coarser(&coarser[0], &mut self.spare);
        }
    }

    pub fn width(&self) -> usize {
        self.levels.first().map_or(0, Grid::width)
    }

    pub fn height(&self) -> usize {
        self.levels.first().map_or(0, Grid::height)
    }

    /// Pixels along the side of a cell: the picture is to be drawn so many times larger.
    pub fn cell_px(&self) -> usize {
        self.cell_px
    }

    /// Weight that fell on each cell of a line; add them up for the weight in a region.
    pub fn line(&self, y: usize) -> &[f32] {
        self.levels[0].line(y)
    }

    /// Weight of all dust that the laws release in the chosen ranges, in the picture or not.
    pub fn whole(&self) -> f64 {
        self.whole
    }

    pub fn effort(&self) -> Effort {
        self.effort
    }
}
