//! What does a finished picture hold, and how does it become colours and lines?

use crate::tail::cloud::patch::Effort;
use tailvane_lanes::grid::Grid;
pub use tailvane_lanes::tone::Stretch;
use tailvane_lanes::tone::{self, Scale};

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

/// How density turns into brightness: from dark to the first stop of the colours at zero, the last at the brightest
/// part of the picture (the mean of 4 x 4 cells there, so that one cell does not dim the rest).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Tone {
    pub stretch: Stretch,
    /// How far below the brightest part something is still seen, decades, > 0.
    pub depth_decades: f64,
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

    /// The brightest part: greatest mean of 4 x 4 cells.
    pub fn peak(&self) -> f32 {
        const SIDE: usize = 4;
        let mut peak = 0.0_f32;
        let mut sums = vec![0.0; self.width().div_ceil(SIDE)];
        for y in 0..self.height() {
            tone::add_blocks(self.line(y), SIDE, &mut sums);
            if y % SIDE == SIDE - 1 || y + 1 == self.height() {
                peak = sums.iter().copied().fold(peak, f32::max);
                sums.fill(0.0);
            }
        }
        peak / (SIDE * SIDE) as f32
    }

    /// The picture as colours: red, green, blue and alpha of each cell, line by line, into `rgba` (its memory is kept).
    /// The stops stand evenly between dark and bright; none gives an empty picture.
    pub fn tone(&self, stops: &[[u8; 4]], tone: Tone, rgba: &mut Vec<u8>) {
        rgba.clear();
        rgba.resize(4 * self.width() * self.height(), 0);
        let peak = self.peak();
        if stops.is_empty() || peak <= 0.0 || self.width() == 0 {
            return;
        }
        let table = tone::table(stops);
        let span = libm::pow(10.0, tone.depth_decades.clamp(0.1, 12.0));
        let scale = Scale { stretch: tone.stretch, faintest: peak / span as f32, span: span as f32 };
        for (y, line) in rgba.chunks_exact_mut(4 * self.width()).enumerate() {
            tone::colour(self.line(y), &scale, &table, line);
        }
    }

    pub fn effort(&self) -> Effort {
        self.effort
    }
}
