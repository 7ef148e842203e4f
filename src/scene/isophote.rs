//! Along which lines is the dust equally bright?
//!
//! Marching squares on a grid of surface density: a line crosses each edge of a cell where the linear run between its
//! two ends meets the level; a saddle is split by the mean of its corners. Segments that meet are joined. Before that
//! the grid is brought down to blocks, means of several cells, and smoothed once, since lines drawn through single
//! samples would show their scatter and not the dust.
//!
//! Own code: libraries for this build rings and polygons with holes, which a drawing of lines does not need.
//! Source: the method is Lorensen & Cline 1987 (SIGGRAPH 21, 163) brought down to the plane.

use super::Point;
use super::lettering::Rect;
use crate::frame::norm;
use crate::order::Shelf;

/// Lines of equal brightness on the page, the brightest first.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Isophotes {
    pub lines: Vec<Vec<Point>>,
    /// From one to the next, magnitudes.
    pub step_mag: f64,
}

/// Blocks along the longer side of the page.
const BLOCKS: usize = 220;
/// Lines shorter than this are specks, in blocks.
const LEAST_LENGTH: f64 = 6.0;

/// A grid of numbers, row by row.
struct Field {
    width: usize,
    height: usize,
    values: Vec<f64>,
}

impl Isophotes {
    /// Isophotes down to `depth_mag` below the brightest block, `step_mag` apart, of a picture of `width` x `height`
    /// cells that fills `area`. `line` gives its rows, the uppermost first.
    pub fn of<'a>(
        [width, height]: [usize; 2],
        line: impl Fn(usize) -> &'a [f32],
        area: &Rect,
        [depth_mag, step_mag]: [f64; 2],
    ) -> Self {
        let block = width.max(height).div_ceil(BLOCKS).max(1);
        let field = blocks([width, height], line, block).smoothed();
        let brightest = field.values.iter().copied().fold(0.0, f64::max);
        let mut lines = Vec::new();
        if field.width > 1 && field.height > 1 && brightest > 0.0 && step_mag > 0.0 {
            // A block's value stands at its middle.
            let scale = [area.width() / width as f64 * block as f64, area.height() / height as f64 * block as f64];
            let to_page = |p: Point| [area.left + (p[0] + 0.5) * scale[0], area.top + (p[1] + 0.5) * scale[1]];
            let mut depth = step_mag;
            while depth <= depth_mag + 1e-9 {
                let level = brightest * libm::pow(10.0, -0.4 * depth);
                let long = field.lines_at(level).into_iter().filter(|line| length(line) >= LEAST_LENGTH);
                lines.extend(long.map(|line| line.into_iter().map(to_page).collect()));
                depth += step_mag;
            }
        }
        Isophotes { lines, step_mag }
    }
}

fn length(line: &[Point]) -> f64 {
    line.windows(2).map(|pair| norm([pair[1][0] - pair[0][0], pair[1][1] - pair[0][1]])).sum()
}

/// Means over blocks of cells; what does not fill a block is left out.
fn blocks<'a>([width, height]: [usize; 2], line: impl Fn(usize) -> &'a [f32], block: usize) -> Field {
    let (columns, rows) = (width / block, height / block);
    let mut values = vec![0.0; columns * rows];
    for row in 0..rows {
        for y in row * block..(row + 1) * block {
            let cells = line(y);
            for (column, value) in values[row * columns..(row + 1) * columns].iter_mut().enumerate() {
                *value += cells[column * block..(column + 1) * block].iter().map(|&cell| f64::from(cell)).sum::<f64>();
            }
        }
    }
    Field { width: columns, height: rows, values }
}

impl Field {
    fn at(&self, x: usize, y: usize) -> f64 {
        self.values[y * self.width + x]
    }

    /// Weights 1, 2, 1 along both axes; the edge counts twice.
    fn smoothed(&self) -> Field {
        let near = |i: usize, count: usize| [i.saturating_sub(1), i, (i + 1).min(count - 1)];
        let mut values = Vec::with_capacity(self.values.len());
        for y in 0..self.height {
            for x in 0..self.width {
                let mut sum = 0.0;
                for (j, wy) in near(y, self.height).into_iter().zip([1.0, 2.0, 1.0]) {
                    for (i, wx) in near(x, self.width).into_iter().zip([1.0, 2.0, 1.0]) {
                        sum += wx * wy * self.at(i, j);
                    }
                }
                values.push(sum / 16.0);
            }
        }
        Field { values, ..*self }
    }

    /// The lines at a level, joined.
    fn lines_at(&self, level: f64) -> Vec<Vec<Point>> {
        let mut chains = Chains::default();
        for y in 0..self.height - 1 {
            for x in 0..self.width - 1 {
                self.segments(level, x, y, &mut chains);
            }
        }
        chains.joined()
    }

    /// The one or two segments of a cell, each from one of its edges to another.
    fn segments(&self, level: f64, x: usize, y: usize, chains: &mut Chains) {
        let corners = [self.at(x, y), self.at(x + 1, y), self.at(x + 1, y + 1), self.at(x, y + 1)];
        let above = corners.map(|value| value >= level);
        let share = |a: usize, b: usize| (level - corners[a]) / (corners[b] - corners[a]);
        let (left, top) = (x as f64, y as f64);
        // Edges: upper, right, lower, left. The number tells the edge's upper or left end, and whether it stands upright.
        let number = |x: usize, y: usize, upright: bool| ((x as Edge) << 32) | ((y as Edge) << 1) | Edge::from(upright);
        let edge = |side: usize| match side {
            0 => (number(x, y, false), [left + share(0, 1), top]),
            1 => (number(x + 1, y, true), [left + 1.0, top + share(1, 2)]),
            2 => (number(x, y + 1, false), [left + share(3, 2), top + 1.0]),
            _ => (number(x, y, true), [left, top + share(0, 3)]),
        };
        let crossed: Vec<usize> = (0..4).filter(|&side| above[side] != above[(side + 1) % 4]).collect();
        match crossed[..] {
            [a, b] => chains.add(edge(a), edge(b)),
            [_, _, _, _] => {
                let middle = corners.iter().sum::<f64>() / 4.0 >= level;
                // With a high middle the two lines cut off the low corners.
                let (one, other) = if middle == above[0] { ((0, 1), (2, 3)) } else { ((3, 0), (1, 2)) };
                chains.add(edge(one.0), edge(one.1));
                chains.add(edge(other.0), edge(other.1));
            }
            _ => {}
        }
    }
}

/// An edge of the grid, by its number.
type Edge = i64;

/// Where a line crosses an edge, and the edges it goes on to.
struct Crossing {
    at: Point,
    neighbours: Vec<Edge>,
}

/// Segments by the edges at which they end.
#[derive(Default)]
struct Chains(Shelf<Crossing>);

impl Chains {
    fn add(&mut self, (a, at_a): (Edge, Point), (b, at_b): (Edge, Point)) {
        for (edge, at, other) in [(a, at_a, b), (b, at_b, a)] {
            self.0.at_or(edge, || Crossing { at, neighbours: Vec::new() }).neighbours.push(other);
        }
    }

    /// Lines from end to end, then rings.
    fn joined(mut self) -> Vec<Vec<Point>> {
        let all: Vec<(Edge, bool)> =
            self.0.between(0..=Edge::MAX).map(|(edge, crossing)| (edge, crossing.neighbours.len() == 1)).collect();
        let ends = all.iter().filter(|(_, is_end)| *is_end);
        let mut lines = Vec::new();
        for &(start, _) in ends.chain(&all) {
            let mut line = Vec::new();
            let mut here = start;
            while let Some(crossing) = self.0.at_mut(here) {
                line.push(crossing.at);
                let Some(next) = crossing.neighbours.pop() else { break };
                if let Some(crossing) = self.0.at_mut(next) {
                    crossing.neighbours.retain(|edge| *edge != here);
                }
                here = next;
            }
            if line.len() > 1 {
                lines.push(line);
            }
        }
        lines
    }
}
