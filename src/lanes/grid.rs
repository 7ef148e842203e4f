//! How do weighted points become a picture without grain?
//!
//! A pyramid of grids, each half as fine as the one before. Points go, shared out to the four nearest cells, into the
//! level whose cells are as wide as the points are sparse; at the end each level is spread smoothly onto the next
//! finer one (weights 3/4 and 1/4, in the limit a quadratic B-spline). The sum over a grid is the weight it was given.

use wide::f32x8;

/// Cells around the picture that catch what belongs partly to its edge.
pub const MARGIN: usize = 2;

/// One level: `width` x `height` cells inside a margin, row by row.
#[derive(Clone, Debug, Default)]
pub struct Grid {
    width: usize,
    height: usize,
    cells: Vec<f32>,
}

impl Grid {
    /// An empty grid of that size; what it held is gone, its memory is kept.
    pub fn clear(&mut self, width: usize, height: usize) {
        (self.width, self.height) = (width, height);
        self.cells.clear();
        self.cells.resize((width + 2 * MARGIN) * (height + 2 * MARGIN), 0.0);
    }

    pub fn width(&self) -> usize {
        self.width
    }

    pub fn height(&self) -> usize {
        self.height
    }

    fn stride(&self) -> usize {
        self.width + 2 * MARGIN
    }

    /// The cells of one line of the picture, its margin left out.
    pub fn line(&self, y: usize) -> &[f32] {
        let from = (y + MARGIN) * self.stride() + MARGIN;
        &self.cells[from..from + self.width]
    }

    /// Adds weights at points, in cells: 0 is the middle of the first cell. What falls outside, or is no number, is
    /// left out.
    #[inline(always)]
    pub fn add(&mut self, x: f32x8, y: f32x8, weight: f32x8) {
        let stride = self.stride();
        let margin = f32x8::splat(MARGIN as f32);
        let (x, y) = (x + margin, y + margin);
        let right = f32x8::splat((stride - 1) as f32);
        let low = f32x8::splat((self.height + 2 * MARGIN - 1) as f32);
        let inside = x.simd_ge(f32x8::ZERO) & x.simd_lt(right) & y.simd_ge(f32x8::ZERO) & y.simd_lt(low);
        // What is outside adds nothing to the first cell.
        let (x, y, weight) = (x & inside, y & inside, weight & inside);
        let (column, line) = (x.fast_trunc_int(), y.fast_trunc_int());
        let across = x - f32x8::from_i32x8(column);
        let down = y - f32x8::from_i32x8(line);
        let lower = weight * down;
        let upper = weight - lower;
        let (lower_right, upper_right) = (lower * across, upper * across);
        let (lower_left, upper_left) = ((lower - lower_right).to_array(), (upper - upper_right).to_array());
        let (lower_right, upper_right) = (lower_right.to_array(), upper_right.to_array());
        let (column, line) = (column.to_array(), line.to_array());
        for k in 0..8 {
            let at = line[k] as usize * stride + column[k] as usize;
            if let Some(four) = self.cells.get_mut(at..at + stride + 2) {
                four[0] += upper_left[k];
                four[1] += upper_right[k];
                four[stride] += lower_left[k];
                four[stride + 1] += lower_right[k];
            }
        }
    }

    /// Spreads the grid half as fine onto this one.
    pub fn add_coarser(&mut self, coarser: &Grid, wide: &mut Vec<f32>) {
        let (stride, lines) = (self.stride(), self.height + 2 * MARGIN);
        let coarse = coarser.stride();
        wide.resize(coarse, 0.0);
        for line in 0..lines {
            let (near, far) = halves(line, coarser.height + 2 * MARGIN);
            let (near, far) = (&coarser.cells[near * coarse..][..coarse], &coarser.cells[far * coarse..][..coarse]);
            // Down first, on the few coarse columns, then across; a quarter, since a coarse cell is four fine ones.
            for (sum, (near, far)) in wide.iter_mut().zip(near.iter().zip(far)) {
                *sum = 0.1875 * near + 0.0625 * far;
            }
            spread_across(&mut self.cells[line * stride..][..stride], wide);
        }
    }
}

/// The nearer and the farther of the two coarse cells whose middles hold the middle of a fine cell between them, both
/// counted with the margin.
fn halves(fine: usize, count: usize) -> (usize, usize) {
    let shifted = fine + MARGIN;
    let near = shifted / 2;
    let far = if shifted.is_multiple_of(2) { near.saturating_sub(1) } else { near + 1 };
    (near.min(count - 1), far.min(count - 1))
}

/// One line of coarse cells onto one of fine cells.
fn spread_across(out: &mut [f32], coarse: &[f32]) {
    // Fine cells come in pairs: of the pair over coarse cell c, the first leans to c - 1, the second to c + 1. With a
    // margin of two on both grids the pair number k lies over coarse cell k + 1.
    for (k, pair) in out.chunks_mut(2).enumerate() {
        let c = (k + 1).min(coarse.len() - 1);
        let (left, here, right) = (coarse[c - 1], coarse[c], coarse[(c + 1).min(coarse.len() - 1)]);
        pair[0] += 0.75 * here + 0.25 * left;
        if let Some(second) = pair.get_mut(1) {
            *second += 0.75 * here + 0.25 * right;
        }
    }
}
