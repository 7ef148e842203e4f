//! Along which lines is the picture equally bright?
//!
//! Marching squares on means of 4 x 4 cells, with straight interpolation of the logarithm's base (the density) along
//! the sides of each square; the pieces are joined into lines. Lines end at the edge of the picture.

use crate::tail::cloud::Picture;
use std::collections::BTreeMap;
use tailvane_lanes::tone;

/// Cells of the picture along the side of a square.
const SIDE: usize = 4;

/// A side of a square: its number, twice the number of its first corner, plus one if it runs down.
type Side = usize;

impl Picture {
    /// Lines of the density `level`, in pixels right and down from the upper left corner. A closed line repeats its
    /// first point.
    pub fn isophotes(&self, level: f32) -> Vec<Vec<[f32; 2]>> {
        let (width, height) = (self.width() / SIDE, self.height() / SIDE);
        if width < 2 || height < 2 || level <= 0.0 {
            return Vec::new();
        }
        let mut means = vec![0.0; width * height];
        for y in 0..height * SIDE {
            let line = &self.line(y)[..width * SIDE];
            tone::add_blocks(line, SIDE, &mut means[y / SIDE * width..][..width]);
        }
        means.iter_mut().for_each(|mean| *mean /= (SIDE * SIDE) as f32);
        let cell = (SIDE * self.cell_px()) as f32;
        joined(&pieces(&means, width, level))
            .into_iter()
            .map(|line| {
                line.into_iter().map(|side| point(&means, width, level, side).map(|x| (x + 0.5) * cell)).collect()
            })
            .collect()
    }
}

/// Where the level crosses a side, in squares.
fn point(means: &[f32], width: usize, level: f32, side: Side) -> [f32; 2] {
    let (corner, down) = (side / 2, side % 2 == 1);
    let other = if down { corner + width } else { corner + 1 };
    let part = (level - means[corner]) / (means[other] - means[corner]);
    let (x, y) = ((corner % width) as f32, (corner / width) as f32);
    if down { [x, y + part] } else { [x + part, y] }
}

/// The pieces of line within squares, each from side to side, the brighter part on its left.
fn pieces(means: &[f32], width: usize, level: f32) -> Vec<[Side; 2]> {
    let mut found = Vec::new();
    for corner in (0..means.len() - width).filter(|corner| corner % width + 1 < width) {
        let corners = [corner, corner + 1, corner + width + 1, corner + width];
        let bright = corners.map(|at| means[at] >= level);
        let count = bright.iter().filter(|&&bright| bright).count();
        if count == 0 || count == 4 {
            continue;
        }
        // Upper, right, lower, left: side k joins corners k and k + 1.
        let sides = [2 * corner, 2 * (corner + 1) + 1, 2 * (corner + width), 2 * corner + 1];
        // Going round, the line enters where dark follows bright and leaves at the next change: at a saddle the bright
        // corners stay apart.
        for k in 0..4 {
            if bright[k] && !bright[(k + 1) % 4] {
                let back = (0..4).map(|step| (k + 4 - step) % 4).find(|&at| bright[at] && !bright[(at + 3) % 4]);
                if let Some(first) = back {
                    found.push([sides[k], sides[(first + 3) % 4]]);
                }
            }
        }
    }
    found
}

/// Pieces joined end to end.
fn joined(pieces: &[[Side; 2]]) -> Vec<Vec<Side>> {
    let mut onward: BTreeMap<Side, Side> = pieces.iter().map(|[from, to]| (*from, *to)).collect();
    let ends: std::collections::BTreeSet<Side> = pieces.iter().map(|[_, to]| *to).collect();
    // Open lines first, from the sides that nothing leads to; what is left is closed.
    let mut starts: Vec<Side> = onward.keys().copied().filter(|from| !ends.contains(from)).collect();
    let mut lines = Vec::new();
    loop {
        let Some(start) = starts.pop().or_else(|| onward.keys().next().copied()) else { return lines };
        let mut line = vec![start];
        let mut at = start;
        while let Some(next) = onward.remove(&at) {
            line.push(next);
            at = next;
        }
        lines.push(line);
    }
}
