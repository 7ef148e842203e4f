//! Where does a label go so that it can be read and belongs to its mark?
//!
//! Each label tries places around its mark: outside the ring along its direction, then turned aside by
//! growing angles and pushed outward step by step, on one line or on two; if none is free, any free place
//! of the drawing. Labels of directions that fall together are stacked in the order in which their leaders
//! do not cross. A place is free when its box lies in the area and touches no other label, mark or note.
//! Of the free places the cheapest wins: near the mark, off the hands and the ring, with a leader that
//! crosses nothing. Same input, same places; labels placed earlier keep theirs.

use super::Point;
use super::lettering::Rect;
use crate::frame::norm;
use crate::order;

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
/// Further angles for stacks, which need room on one side.
const FAR_ASIDE_DEG: [f64; 6] = [90.0, -90.0, 115.0, -115.0, 145.0, -145.0];
/// Steps outward, in line heights.
const OUTWARD: [f64; 6] = [0.0, 0.6, 1.3, 2.2, 3.4, 5.0];
/// Labels whose leaders start nearer to each other than this are stacked, in line heights.
const TOGETHER: f64 = 1.6;
/// From one row of a stack to the next, in line heights.
const ROW: f64 = 1.12;
/// From the leaders' starts to a stack, in drawing units.
const STACK_GAP: f64 = 9.0;
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
const LINE_MEETS_BOX: f64 = 90.0;

/// Whether a leader may run through boxes, and a label cover a leader.
#[derive(Clone, Copy, PartialEq)]
enum Rules {
    Strict,
    /// Only where no other place is left.
    Crowded,
}

impl Room {
    pub fn new(area: Rect, ring_center: Point, ring_radius_px: f64, unit_px: f64) -> Self {
        Room { area, taken: Vec::new(), hands: Vec::new(), ring_center, ring_radius_px, unit_px, leaders: Vec::new() }
    }

    /// The places of labels, in the order of the wishes; None where the drawing is full.
    pub fn place(&mut self, wishes: &[Wish]) -> Vec<Option<Placed>> {
        let mut placed = vec![None; wishes.len()];
        for group in groups(wishes) {
            let stack = if group.len() > 1 { self.stacked(wishes, &group) } else { None };
            match stack {
                Some(stack) => {
                    for (index, place) in stack {
                        self.take(&place);
                        placed[index] = Some(place);
                    }
                }
                None => {
                    for index in group {
                        placed[index] = self.alone(&wishes[index]);
                    }
                }
            }
        }
        placed
    }

    /// Whether a leader runs through a box.
    pub fn meets_leader(&self, area: &Rect) -> bool {
        self.leaders.iter().any(|[a, b]| area.cuts(*a, *b))
    }

    fn alone(&mut self, wish: &Wish) -> Option<Placed> {
        let placed = self
            .cheapest(wish, self.around(wish), Rules::Strict)
            .or_else(|| self.cheapest(wish, self.anywhere(wish), Rules::Strict))
            .or_else(|| self.cheapest(wish, self.anywhere(wish), Rules::Crowded))?;
        self.take(&placed);
        Some(placed)
    }

    fn take(&mut self, placed: &Placed) {
        self.taken.push(placed.area);
        self.leaders.extend(placed.leader);
    }

    fn cheapest(&self, wish: &Wish, places: Vec<(Rect, usize)>, rules: Rules) -> Option<Placed> {
        let mut best: Option<(f64, Placed)> = None;
        for (area, lines) in places {
            let limit = best.map_or(f64::INFINITY, |(least, _)| least);
            if let Some(cheaper) = self.judged(wish, area, lines, rules, limit) {
                best = Some(cheaper);
            }
        }
        best.map(|(_, placed)| placed)
    }

    /// Places around the mark, the natural one first.
    fn around(&self, wish: &Wish) -> Vec<(Rect, usize)> {
        let mut places = Vec::with_capacity(2 * ASIDE_DEG.len() * OUTWARD.len());
        for (size, lines) in [(wish.one_line, 1), (wish.two_lines, 2)] {
            for aside in ASIDE_DEG {
                let step = turned(wish.outward, aside);
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

    /// The cost of a place and the leader it needs; None when it is not free, or costs `limit` or more.
    fn judged(&self, wish: &Wish, area: Rect, lines: usize, rules: Rules, limit: f64) -> Option<(f64, Placed)> {
        let end = area.nearest(wish.from);
        let distance = norm([end[0] - wish.from[0], end[1] - wish.from[1]]);
        let clear = area.grown(CLEAR * self.unit_px);
        // The distance alone, first of the costs, rules most places out.
        if distance / self.unit_px >= limit
            || !self.area.contains(&area)
            || self.taken.iter().any(|taken| taken.overlaps(&clear))
        {
            return None;
        }
        let leader = (distance > LEAST_LEADER * self.unit_px).then_some([wish.from, end]);
        let mut meetings = self.leaders.iter().filter(|[a, b]| clear.cuts(*a, *b)).count();
        meetings += leader.map_or(0, |leader| self.boxes_met(&leader));
        if meetings > 0 && rules == Rules::Strict {
            return None;
        }
        let mut cost = distance / self.unit_px + LINE_MEETS_BOX * meetings as f64;
        cost += leader.map_or(0.0, |leader| self.leader_cost(&leader, &self.leaders));
        cost += COVERS_HAND * self.hands.iter().filter(|[a, b]| clear.cuts(*a, *b)).count() as f64;
        cost += self.ring_cost(&clear);
        if lines == 2 {
            cost += TWO_LINES;
        }
        (cost < limit).then_some((cost, Placed { area, lines, leader }))
    }

    /// How many boxes a leader runs through, other than the one it starts in.
    fn boxes_met(&self, leader: &[Point; 2]) -> usize {
        self.taken.iter().filter(|taken| !taken.holds(leader[0]) && taken.cuts(leader[0], leader[1])).count()
    }

    /// The cost of a leader's crossings with other leaders and with hands.
    fn leader_cost(&self, leader: &[Point; 2], others: &[[Point; 2]]) -> f64 {
        let crossings = others.iter().filter(|other| cross(leader, other)).count();
        let over_hands = self.hands.iter().filter(|hand| cross(leader, hand)).count();
        LEADER_CROSSES * crossings as f64 + LEADER_MEETS_HAND * over_hands as f64
    }

    /// The cheapest stack for labels whose marks lie together, with the wish that each place answers.
    fn stacked(&self, wishes: &[Wish], group: &[usize]) -> Option<Vec<(usize, Placed)>> {
        let row = ROW * wishes[group[0]].one_line[1];
        let width = group.iter().map(|&i| wishes[i].one_line[0]).fold(0.0, f64::max);
        let size = [width, row * group.len() as f64];
        let share = 1.0 / group.len() as f64;
        let mean = |axis: usize| group.iter().map(|&i| wishes[i].from[axis] * share).sum::<f64>();
        let from = [mean(0), mean(1)];
        let mut best: Option<(f64, Vec<(usize, Placed)>)> = None;
        for aside in ASIDE_DEG.into_iter().chain(FAR_ASIDE_DEG) {
            let step = turned(wishes[group[0]].outward, aside);
            for outward in OUTWARD {
                let gap = STACK_GAP * self.unit_px + outward * row;
                let block = Rect::around(beside(from, step, size, gap), size[0] / 2.0, size[1] / 2.0);
                for order in orders(wishes, group) {
                    let Some((cost, places)) = self.judged_stack(wishes, &order, &block) else { continue };
                    if best.as_ref().is_none_or(|(least, _)| cost < *least) {
                        best = Some((cost, places));
                    }
                }
            }
        }
        best.map(|(_, places)| places)
    }

    /// The cost of a stack that fills `block` from top to bottom in `order`; None when it is not free, or
    /// stands neither to the right nor to the left of every leader's start.
    fn judged_stack(&self, wishes: &[Wish], order: &[usize], block: &Rect) -> Option<(f64, Vec<(usize, Placed)>)> {
        let gap = STACK_GAP * self.unit_px;
        let to_right = order.iter().all(|&i| wishes[i].from[0] + gap <= block.left);
        let to_left = order.iter().all(|&i| wishes[i].from[0] - gap >= block.right);
        let clear = block.grown(CLEAR * self.unit_px);
        let blocked = self.taken.iter().any(|taken| taken.overlaps(&clear))
            || self.leaders.iter().any(|[a, b]| clear.cuts(*a, *b));
        if !(to_right || to_left) || !self.area.contains(block) || blocked {
            return None;
        }
        let row = block.height() / order.len() as f64;
        let mut cost = COVERS_HAND * self.hands.iter().filter(|[a, b]| clear.cuts(*a, *b)).count() as f64;
        cost += self.ring_cost(&clear);
        let mut leaders: Vec<[Point; 2]> = Vec::new();
        let mut places = Vec::new();
        for (number, &index) in order.iter().enumerate() {
            let wish = &wishes[index];
            let middle = block.top + row * (number as f64 + 0.5);
            let half = [wish.one_line[0] / 2.0, wish.one_line[1] / 2.0];
            let center = if to_right { block.left + half[0] } else { block.right - half[0] };
            let area = Rect::around([center, middle], half[0], half[1]);
            let edge = if to_right { area.left - 2.0 * self.unit_px } else { area.right + 2.0 * self.unit_px };
            let leader = [wish.from, [edge, middle]];
            if self.boxes_met(&leader) > 0 {
                return None;
            }
            let [a, b] = leader;
            cost += self.leader_cost(&leader, &self.leaders) + self.leader_cost(&leader, &leaders);
            cost += norm([b[0] - a[0], b[1] - a[1]]) / self.unit_px / order.len() as f64;
            leaders.push(leader);
            places.push((index, Placed { area, lines: 1, leader: Some(leader) }));
        }
        Some((cost, places))
    }

    fn ring_cost(&self, area: &Rect) -> f64 {
        let away = |point: Point| norm([point[0] - self.ring_center[0], point[1] - self.ring_center[1]]);
        let nearest = away(area.nearest(self.ring_center));
        let corners =
            [[area.left, area.top], [area.right, area.top], [area.left, area.bottom], [area.right, area.bottom]];
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

/// Wishes whose leaders start together, in the order of their first members.
fn groups(wishes: &[Wish]) -> Vec<Vec<usize>> {
    let together = |a: usize, b: usize| {
        let (one, other) = (wishes[a].from, wishes[b].from);
        norm([one[0] - other[0], one[1] - other[1]]) < TOGETHER * wishes[a].one_line[1]
    };
    let mut groups: Vec<Vec<usize>> = Vec::new();
    for index in 0..wishes.len() {
        let (near, far): (Vec<_>, Vec<_>) =
            groups.into_iter().partition(|group| group.iter().any(|&member| together(member, index)));
        let mut joined: Vec<usize> = near.into_iter().flatten().chain([index]).collect();
        order::by_rank(&mut joined, |&index| index as u64);
        groups = far;
        groups.push(joined);
        // No two groups share a member.
        order::by_rank(&mut groups, |group| group[0] as u64);
    }
    groups
}

/// The orders in which the leaders of a stack may run side by side: downward, and across either way.
fn orders(wishes: &[Wish], group: &[usize]) -> [Vec<usize>; 3] {
    let sorted = |axis: usize, sign: f64| {
        let mut order = group.to_vec();
        order::by_number(&mut order, |&index| sign * wishes[index].from[axis]);
        order
    };
    [sorted(1, 1.0), sorted(0, 1.0), sorted(0, -1.0)]
}

/// A step turned by an angle.
fn turned(step: Point, by_deg: f64) -> Point {
    let (sine, cosine) = libm::sincos(by_deg.to_radians());
    [step[0] * cosine - step[1] * sine, step[0] * sine + step[1] * cosine]
}

/// Centre of a box of `size` that stands `gap` away from `from` along `step`: centred on the step where it
/// runs level or upright, hung by its corner in between, so that a round ring beside it stays uncut.
fn beside(from: Point, step: Point, size: [f64; 2], gap: f64) -> Point {
    let along = |axis: usize| from[axis] + (1.6 * step[axis]).clamp(-1.0, 1.0) * size[axis] / 2.0 + step[axis] * gap;
    [along(0), along(1)]
}

/// True when two segments cross inside both.
pub fn cross(one: &[Point; 2], other: &[Point; 2]) -> bool {
    let side = |a: Point, b: Point, p: Point| (b[0] - a[0]) * (p[1] - a[1]) - (b[1] - a[1]) * (p[0] - a[0]);
    let [a, b] = *one;
    let [c, d] = *other;
    side(a, b, c) * side(a, b, d) < 0.0 && side(c, d, a) * side(c, d, b) < 0.0
}
