//! Where does a label go so that it can be read and belongs to its mark?
//!
//! Each label tries places around its mark: outside the ring along its direction, then turned aside by
//! growing angles and pushed outward step by step, on one line or on two; if none is free, any free place
//! of the drawing. A place is free when its box lies in the area and touches no other label, mark or note.
//! Of the free places the cheapest wins: near the mark, off the hands and the ring, with a leader that
//! crosses nothing. Same input, same places; labels placed earlier keep theirs.

use super::Point;
use super::lettering::Rect;

/// What is already on the page.
pub struct Room {
    /// Labels stay inside.
    pub area: Rect,
    /// Boxes that no label touches.
    pub taken: Vec<Rect>,
    /// Lines that a label had better not cover.
    pub hands: Vec<[Point; 2]>,
    /// The ring, which a label had better not cut.
    pub ring_center: Point,
    pub ring_radius_px: f64,
    pub unit_px: f64,
    leaders: Vec<[Point; 2]>,
}

/// A label looking for a place.
pub struct Wish {
    /// What the label belongs to: where a leader starts.
    pub from: Point,
    /// Unit step away from the nucleus.
    pub outward: Point,
    /// Width and height of the label on one line and on two.
    pub one_line: [f64; 2],
    pub two_lines: [f64; 2],
}

/// A place found.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Placed {
    pub area: Rect,
    pub lines: usize,
    /// From the mark to the label, where the label does not stand beside it.
    pub leader: Option<[Point; 2]>,
}

/// Angles by which a label may turn aside from its direction, degrees.
const ASIDE_DEG: [f64; 15] =
    [0.0, 6.0, -6.0, 12.0, -12.0, 19.0, -19.0, 27.0, -27.0, 37.0, -37.0, 50.0, -50.0, 68.0, -68.0];
/// Steps outward, in line heights.
const OUTWARD: [f64; 6] = [0.0, 0.6, 1.3, 2.2, 3.4, 5.0];
/// Clear space around a label, in drawing units: half of a letter's halo on each side.
const CLEAR: f64 = 2.5;
/// A leader shorter than this is left out, in drawing units.
const LEAST_LEADER: f64 = 9.0;

/// Costs in drawing units of distance.
const TWO_LINES: f64 = 14.0;
const COVERS_HAND: f64 = 45.0;
const CUTS_RING: f64 = 22.0;
const INSIDE_RING: f64 = 60.0;
const LEADER_CROSSES: f64 = 55.0;
const LEADER_MEETS_HAND: f64 = 25.0;

impl Room {
    pub fn new(area: Rect, ring_center: Point, ring_radius_px: f64, unit_px: f64) -> Self {
        Room { area, taken: Vec::new(), hands: Vec::new(), ring_center, ring_radius_px, unit_px, leaders: Vec::new() }
    }

    /// The place of a label, which is taken from then on; None when the drawing is full.
    pub fn place(&mut self, wish: &Wish) -> Option<Placed> {
        let near = self.cheapest(wish, self.around(wish));
        let placed = near.or_else(|| self.cheapest(wish, self.anywhere(wish)))?;
        self.taken.push(placed.area);
        self.leaders.extend(placed.leader);
        Some(placed)
    }

    fn cheapest(&self, wish: &Wish, places: Vec<(Rect, usize)>) -> Option<Placed> {
        let mut best: Option<(f64, Placed)> = None;
        for (area, lines) in places {
            let Some((cost, placed)) = self.judged(wish, area, lines) else { continue };
            if best.is_none_or(|(least, _)| cost < least) {
                best = Some((cost, placed));
            }
        }
        best.map(|(_, placed)| placed)
    }

    /// Places around the mark, the natural one first.
    fn around(&self, wish: &Wish) -> Vec<(Rect, usize)> {
        let mut places = Vec::with_capacity(2 * ASIDE_DEG.len() * OUTWARD.len());
        for (size, lines) in [(wish.one_line, 1), (wish.two_lines, 2)] {
            for aside in ASIDE_DEG {
                let (sine, cosine) = libm::sincos(aside.to_radians());
                let [x, y] = wish.outward;
                let step = [x * cosine - y * sine, x * sine + y * cosine];
                for outward in OUTWARD {
                    let gap = 4.0 * self.unit_px + outward * wish.one_line[1];
                    let center = beside(wish.from, step, size, gap);
                    let area = Rect::around(center, size[0] / 2.0, size[1] / 2.0);
                    places.push((area.kept_in(&self.area), lines));
                }
            }
        }
        places
    }

    /// Places all over the drawing.
    fn anywhere(&self, wish: &Wish) -> Vec<(Rect, usize)> {
        let mut places = Vec::new();
        for (size, lines) in [(wish.one_line, 1), (wish.two_lines, 2)] {
            let (across, down) = (wish.one_line[1], wish.one_line[1] / 2.0);
            let columns = ((self.area.width() - size[0]) / across).floor();
            let rows = ((self.area.height() - size[1]) / down).floor();
            let mut row = 0.0;
            while row <= rows {
                let mut column = 0.0;
                while column <= columns {
                    let left = self.area.left + column * across;
                    let top = self.area.top + row * down;
                    places.push((Rect { left, top, right: left + size[0], bottom: top + size[1] }, lines));
                    column += 1.0;
                }
                row += 1.0;
            }
        }
        places
    }

    /// The cost of a place and the leader it needs; None when it is not free.
    fn judged(&self, wish: &Wish, area: Rect, lines: usize) -> Option<(f64, Placed)> {
        let clear = area.grown(CLEAR * self.unit_px);
        if !self.area.contains(&area) || self.taken.iter().any(|taken| taken.overlaps(&clear)) {
            return None;
        }
        if self.leaders.iter().any(|[a, b]| clear.cuts(*a, *b)) {
            return None;
        }
        let end = area.nearest(wish.from);
        let distance = libm::hypot(end[0] - wish.from[0], end[1] - wish.from[1]);
        let leader = (distance > LEAST_LEADER * self.unit_px).then_some([wish.from, end]);
        let mut cost = distance / self.unit_px;
        if let Some([a, b]) = leader {
            if self.taken.iter().any(|taken| !taken.holds(a) && taken.cuts(a, b)) {
                return None;
            }
            cost += LEADER_CROSSES * self.leaders.iter().filter(|other| cross(&[a, b], other)).count() as f64;
            cost += LEADER_MEETS_HAND * self.hands.iter().filter(|hand| cross(&[a, b], hand)).count() as f64;
        }
        cost += COVERS_HAND * self.hands.iter().filter(|[a, b]| clear.cuts(*a, *b)).count() as f64;
        cost += self.ring_cost(&clear);
        if lines == 2 {
            cost += TWO_LINES;
        }
        Some((cost, Placed { area, lines, leader }))
    }

    fn ring_cost(&self, area: &Rect) -> f64 {
        let away = |point: Point| libm::hypot(point[0] - self.ring_center[0], point[1] - self.ring_center[1]);
        let nearest = away(area.nearest(self.ring_center));
        let corners = [[area.left, area.top], [area.right, area.top], [area.left, area.bottom], [area.right, area.bottom]];
        let farthest = corners.into_iter().map(away).fold(0.0, f64::max);
        if nearest > self.ring_radius_px {
            0.0
        } else if farthest > self.ring_radius_px {
            CUTS_RING
        } else {
            INSIDE_RING
        }
    }
}

/// Centre of a box of `size` that stands `gap` away from `from` along `step`: centred on the step where it
/// runs level or upright, hung by its corner in between, so that a round ring beside it stays uncut.
fn beside(from: Point, step: Point, size: [f64; 2], gap: f64) -> Point {
    let along = |axis: usize| from[axis] + (1.6 * step[axis]).clamp(-1.0, 1.0) * size[axis] / 2.0 + step[axis] * gap;
    [along(0), along(1)]
}

/// True when two segments cross inside both.
fn cross(one: &[Point; 2], other: &[Point; 2]) -> bool {
    let side = |a: Point, b: Point, p: Point| (b[0] - a[0]) * (p[1] - a[1]) - (b[1] - a[1]) * (p[0] - a[0]);
    let [a, b] = *one;
    let [c, d] = *other;
    side(a, b, c) * side(a, b, d) < 0.0 && side(c, d, a) * side(c, d, b) < 0.0
}
