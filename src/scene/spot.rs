//! Where on its curve does a label stand?
//!
//! Curves of dust leave the nucleus together and open like a fan, so a label belongs where its curve runs alone: on the
//! curve, which is broken for it, or beside it, or beyond its tip. A spot is free when its box lies on the page,
//! touches nothing that is taken, and neither a hand nor another curve of its kind runs through it; among the free ones
//! the cheapest wins: three quarters out along the curve, outside the ring, off curves of other kinds. A curve without a free spot has no label: a bundle
//! seen edge-on names its outermost curves and not each. The outer curves of a kind choose first, then those between.
//!
//! Spots are shares of the visible length, so a label slides with its curve while the date is scrubbed. Nothing is kept
//! from one drawing to the next: the same plan gives the same picture.
//! Which curve runs where is kept in a mesh of cells, so that a frame costs no search through segments.

use super::label::{Room, cross};
use super::lettering::{ABOVE, BELOW, Rect, width_px};
use super::{Family, Point};
use crate::frame::norm;

/// A curve as it lies on the page.
#[derive(Clone, Debug, PartialEq)]
pub struct PageCurve {
    pub family: Family,
    /// Inside the page, each from the nucleus outward.
    pub pieces: Vec<Vec<Point>>,
    /// Whether the far end of the last piece is the end of the curve, and not the edge of the page.
    pub ends: bool,
    /// What the label says, and in short.
    pub words: [String; 2],
}

/// A label placed: which of the words, and its box.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Spot {
    pub words: usize,
    pub area: Rect,
}

pub const LABEL_SIZE: f64 = 12.0;
/// Side of a cell of the mesh, in drawing units.
const CELL: f64 = 6.0;
/// Shares of the visible length at which a label may stand.
const SHARES: [f64; 12] = [0.74, 0.68, 0.80, 0.62, 0.86, 0.56, 0.92, 0.50, 0.44, 0.38, 0.96, 0.32];
const WISHED_SHARE: f64 = 0.74;
/// A curve shorter than this on the page has no label, in drawing units.
const LEAST_LENGTH: f64 = 46.0;
/// Clear space around a label, in drawing units.
const CLEAR: f64 = 3.0;

/// Costs, in the same unit: a share of the length away from the wished one costs 60 times that share.
const ASTRAY: f64 = 60.0;
const BESIDE: f64 = 9.0;
const BEYOND: f64 = 6.0;
const SHORT_WORDS: f64 = 28.0;
const MEETS_OTHER_KIND: f64 = 9.0;
const INSIDE_RING: f64 = 30.0;

/// A spot for each curve that has one; each takes its room.
pub fn find(room: &mut Room, curves: &[PageCurve]) -> Vec<Option<Spot>> {
    let mesh = Mesh::of(room, curves);
    let mut spots = vec![None; curves.len()];
    for family in [Family::NeckLine, Family::Syndyne, Family::Synchrone] {
        let members: Vec<usize> = (0..curves.len()).filter(|&i| curves[i].family == family).collect();
        for member in outer_first(members.len()) {
            let index = members[member];
            let spot = cheapest(room, &mesh, curves, index);
            room.taken.extend(spot.map(|spot: Spot| spot.area));
            spots[index] = spot;
        }
    }
    spots
}

/// 0 to `count` - 1: the two ends, then the middles of what lies between, ever finer.
pub fn outer_first(count: usize) -> Vec<usize> {
    let mut order: Vec<usize> = Vec::new();
    let mut parts = 1;
    while order.len() < count {
        for part in 0..=parts {
            let index = (count - 1) * part / parts;
            if !order.contains(&index) {
                order.push(index);
            }
        }
        parts *= 2;
    }
    order
}

fn cheapest(room: &Room, mesh: &Mesh, curves: &[PageCurve], index: usize) -> Option<Spot> {
    let curve = &curves[index];
    let unit = room.unit_px;
    let (piece, long) = curve.pieces.iter().map(|piece| (piece, length(piece))).max_by(|a, b| a.1.total_cmp(&b.1))?;
    if long < LEAST_LENGTH * unit {
        return None;
    }
    let places = SHARES.map(|share| place(piece, share * long));
    let tip = place(piece, long);
    let size_px = LABEL_SIZE * unit;
    let mut best: Option<(f64, Spot)> = None;
    for (words, text) in curve.words.iter().enumerate() {
        let half = [width_px(text, size_px, false) / 2.0, size_px * (ABOVE + BELOW) / 2.0];
        let mut consider = |from: Point, center: Point, cost: f64| {
            let area = Rect::around(center, half[0], half[1]);
            let cost = cost + SHORT_WORDS * words as f64;
            if best.is_some_and(|(least, _)| cost >= least) {
                return;
            }
            if let Some(more) = judged(room, mesh, index, from, &area)
                && best.is_none_or(|(least, _)| cost + more < least)
            {
                best = Some((cost + more, Spot { words, area }));
            }
        };
        for (share, (at, along)) in SHARES.into_iter().zip(places) {
            let cost = ASTRAY * (share - WISHED_SHARE).abs();
            consider(at, at, cost);
            let across = [-along[1], along[0]];
            let away = support(across, half) + 4.0 * unit;
            for side in [away, -away] {
                consider(at, [at[0] + across[0] * side, at[1] + across[1] * side], cost + BESIDE);
            }
        }
        if curve.ends {
            let (at, along) = tip;
            let away = support(along, half) + 5.0 * unit;
            consider(at, [at[0] + along[0] * away, at[1] + along[1] * away], BEYOND);
        }
    }
    best.map(|(_, spot)| spot)
}

/// What a box costs that belongs to a point of its curve; None where it is not free, or a hand stands between.
fn judged(room: &Room, mesh: &Mesh, index: usize, from: Point, area: &Rect) -> Option<f64> {
    let clear = area.grown(CLEAR * room.unit_px);
    if !room.area.contains(area) || room.taken.iter().any(|taken| taken.overlaps(&clear)) || room.meets_leader(&clear) {
        return None;
    }
    let met = mesh.curves_in(&clear) & !mesh.own(index);
    if met & mesh.kind(index) != 0 {
        return None;
    }
    let center = area.center();
    if room.hands.iter().any(|hand| clear.cuts(hand[0], hand[1]) || cross(&[from, center], hand)) {
        return None;
    }
    let inside = norm([center[0] - room.ring_center[0], center[1] - room.ring_center[1]]) < room.ring_radius_px;
    Some(MEETS_OTHER_KIND * f64::from(met.count_ones()) + if inside { INSIDE_RING } else { 0.0 })
}

/// How far a box of these half sides reaches along a unit step.
fn support(step: Point, half: [f64; 2]) -> f64 {
    step[0].abs() * half[0] + step[1].abs() * half[1]
}

fn length(line: &[Point]) -> f64 {
    line.windows(2).map(|pair| norm([pair[1][0] - pair[0][0], pair[1][1] - pair[0][1]])).sum()
}

/// The point so far along a line, and the unit step along it there.
fn place(line: &[Point], mut left: f64) -> (Point, Point) {
    let mut found = (line[0], [1.0, 0.0]);
    for pair in line.windows(2) {
        let step = [pair[1][0] - pair[0][0], pair[1][1] - pair[0][1]];
        let long = norm(step);
        if long == 0.0 {
            continue;
        }
        let part = (left / long).min(1.0);
        found = ([pair[0][0] + step[0] * part, pair[0][1] + step[1] * part], [step[0] / long, step[1] / long]);
        if left <= long {
            break;
        }
        left -= long;
    }
    found
}

/// Which curves run through which cell of the page, as bits. Beyond 64 curves, two share a bit, and at worst one of
/// them finds no spot.
struct Mesh {
    cell_px: f64,
    columns: usize,
    rows: usize,
    cells: Vec<u64>,
    kinds: Vec<u64>,
}

const BITS: usize = 64;

impl Mesh {
    fn of(room: &Room, curves: &[PageCurve]) -> Self {
        let cell_px = CELL * room.unit_px;
        let count = |length: f64| (length / cell_px).ceil().max(1.0) as usize + 1;
        let (columns, rows) = (count(room.area.right), count(room.area.bottom));
        let kinds = curves
            .iter()
            .map(|one| {
                let same = curves.iter().enumerate().filter(|(_, other)| other.family == one.family);
                same.fold(0, |bits, (i, _)| bits | 1 << (i % BITS))
            })
            .collect();
        let mut mesh = Mesh { cell_px, columns, rows, cells: vec![0; columns * rows], kinds };
        for (index, curve) in curves.iter().enumerate() {
            for pair in curve.pieces.iter().flat_map(|piece| piece.windows(2)) {
                mesh.mark(pair[0], pair[1], 1 << (index % BITS));
            }
        }
        mesh
    }

    fn own(&self, index: usize) -> u64 {
        1 << (index % BITS)
    }

    fn kind(&self, index: usize) -> u64 {
        self.kinds[index]
    }

    /// Column or row of a coordinate, kept in the mesh.
    fn index(&self, at: f64, count: usize) -> usize {
        ((at / self.cell_px).max(0.0) as usize).min(count - 1)
    }

    fn mark(&mut self, a: Point, b: Point, bit: u64) {
        let long = norm([b[0] - a[0], b[1] - a[1]]);
        let steps = (long / (0.5 * self.cell_px)).ceil().max(1.0);
        let mut step = 0.0;
        while step <= steps {
            let part = step / steps;
            let column = self.index(a[0] + (b[0] - a[0]) * part, self.columns);
            let row = self.index(a[1] + (b[1] - a[1]) * part, self.rows);
            self.cells[row * self.columns + column] |= bit;
            step += 1.0;
        }
    }

    fn curves_in(&self, area: &Rect) -> u64 {
        let columns = self.index(area.left, self.columns)..=self.index(area.right, self.columns);
        let rows = self.index(area.top, self.rows)..=self.index(area.bottom, self.rows);
        rows.flat_map(|row| &self.cells[row * self.columns + columns.start()..=row * self.columns + columns.end()])
            .fold(0, |bits, cell| bits | cell)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_outer_curves_choose_first() {
        assert_eq!(outer_first(5), [0, 4, 2, 1, 3]);
        assert_eq!(outer_first(1), [0]);
        assert!(outer_first(0).is_empty());
    }
}
