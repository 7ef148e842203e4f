//! Which part of a line or a figure lies inside?
//!
//! Lines are clipped to a rectangle or cut where rectangles lie on them; figures are clipped by straight edges. Points
//! may lie far off the page; nothing here loses them to infinity, and points that are not numbers end a line.

use super::Point;
use super::lettering::Rect;
use crate::order;

/// The parts of an open line inside a rectangle.
pub fn line_inside(line: &[Point], area: &Rect) -> Vec<Vec<Point>> {
    let mut pieces = Pieces::default();
    for pair in line.windows(2) {
        match shares(area, pair[0], pair[1]) {
            Some([first, last]) => pieces.add(between(pair[0], pair[1], first), between(pair[0], pair[1], last)),
            None => pieces.end(),
        }
    }
    pieces.done
}

/// The parts of an open line outside all of the rectangles.
pub fn line_outside(line: &[Point], areas: &[Rect]) -> Vec<Vec<Point>> {
    let mut pieces = Pieces::default();
    for pair in line.windows(2) {
        let (a, b) = (pair[0], pair[1]);
        let mut covered: Vec<[f64; 2]> = areas.iter().filter_map(|area| shares(area, a, b)).collect();
        order::by_number(&mut covered, |share| share[0]);
        let mut from = 0.0;
        for [first, last] in covered {
            if first > from {
                pieces.add(between(a, b, from), between(a, b, first));
            }
            from = last.max(from);
        }
        if from < 1.0 {
            pieces.add(between(a, b, from), b);
        }
    }
    pieces.done
}

/// The parts of an open line outside a circle.
pub fn outside_circle(line: &[Point], center: Point, radius: f64) -> Vec<Vec<Point>> {
    let mut pieces = Pieces::default();
    for pair in line.windows(2) {
        let (a, b) = (pair[0], pair[1]);
        // |a + t (b - a) - center|^2 = radius^2, a t^2 + 2 h t + c = 0.
        let ([px, py], [dx, dy]) = ([a[0] - center[0], a[1] - center[1]], [b[0] - a[0], b[1] - a[1]]);
        let (square, half, rest) = (dx * dx + dy * dy, px * dx + py * dy, px * px + py * py - radius * radius);
        let under = half * half - square * rest;
        let (first, last) = if square > 0.0 && under > 0.0 {
            let root = under.sqrt();
            ((-half - root) / square, (-half + root) / square)
        } else {
            (2.0, 2.0)
        };
        if first > 0.0 {
            pieces.add(a, between(a, b, first));
        }
        if last < 1.0 {
            pieces.add(between(a, b, last), b);
        }
    }
    pieces.done
}

/// First and last share of a segment inside a rectangle, edges included; None where it passes by.
fn shares(area: &Rect, a: Point, b: Point) -> Option<[f64; 2]> {
    // Most segments lie wholly to one side.
    if a[0].max(b[0]) < area.left
        || a[0].min(b[0]) > area.right
        || a[1].max(b[1]) < area.top
        || a[1].min(b[1]) > area.bottom
    {
        return None;
    }
    let (mut first, mut last) = (0.0_f64, 1.0_f64);
    for (start, step, low, high) in
        [(a[0], b[0] - a[0], area.left, area.right), (a[1], b[1] - a[1], area.top, area.bottom)]
    {
        if !step.is_finite() {
            return None;
        }
        if step == 0.0 {
            if start < low || start > high {
                return None;
            }
            continue;
        }
        let (one, two) = ((low - start) / step, (high - start) / step);
        first = first.max(one.min(two));
        last = last.min(one.max(two));
    }
    (first < last).then_some([first, last])
}

fn between(a: Point, b: Point, share: f64) -> Point {
    if share <= 0.0 {
        a
    } else if share >= 1.0 {
        b
    } else {
        [a[0] + (b[0] - a[0]) * share, a[1] + (b[1] - a[1]) * share]
    }
}

/// Joins segments that follow on each other.
#[derive(Default)]
struct Pieces {
    done: Vec<Vec<Point>>,
    broken: bool,
}

impl Pieces {
    fn add(&mut self, a: Point, b: Point) {
        match self.done.last_mut() {
            Some(piece) if !self.broken && piece.last() == Some(&a) => piece.push(b),
            _ => self.done.push(vec![a, b]),
        }
        self.broken = false;
    }

    fn end(&mut self) {
        self.broken = true;
    }
}

/// The part of a convex or concave figure on the side of a straight edge where `inside` is positive. `inside` is
/// linear in the place. Empty where nothing is left.
pub fn figure_beside(figure: &[Point], inside: impl Fn(Point) -> f64) -> Vec<Point> {
    let mut kept = Vec::with_capacity(figure.len() + 2);
    for (i, &here) in figure.iter().enumerate() {
        let next = figure[(i + 1) % figure.len()];
        let (a, b) = (inside(here), inside(next));
        if a >= 0.0 {
            kept.push(here);
        }
        if (a >= 0.0) != (b >= 0.0) {
            kept.push(between(here, next, a / (a - b)));
        }
    }
    if kept.len() < 3 { Vec::new() } else { kept }
}

/// The part of a figure inside a rectangle.
pub fn figure_inside(figure: &[Point], area: &Rect) -> Vec<Point> {
    let mut kept = figure_beside(figure, |p| p[0] - area.left);
    kept = figure_beside(&kept, |p| area.right - p[0]);
    kept = figure_beside(&kept, |p| p[1] - area.top);
    figure_beside(&kept, |p| area.bottom - p[1])
}

/// Twice the signed area of a figure, positive when it runs clockwise on the page.
pub fn twice_area(figure: &[Point]) -> f64 {
    figure
        .iter()
        .enumerate()
        .map(|(i, a)| {
            let b = figure[(i + 1) % figure.len()];
            a[0] * b[1] - b[0] * a[1]
        })
        .sum()
}

#[cfg(test)]
mod tests {
    use super::*;

    const SQUARE: Rect = Rect { left: 0.0, top: 0.0, right: 10.0, bottom: 10.0 };

    #[test]
    fn a_line_is_cut_at_the_edge_and_goes_on_where_it_comes_back() {
        let line = [[-5.0, 5.0], [5.0, 5.0], [15.0, 5.0], [15.0, 8.0], [5.0, 8.0]];
        let inside = line_inside(&line, &SQUARE);
        assert_eq!(inside, [vec![[0.0, 5.0], [5.0, 5.0], [10.0, 5.0]], vec![[10.0, 8.0], [5.0, 8.0]]]);
        let outside = line_outside(&line, &[SQUARE]);
        assert_eq!(outside.len(), 2);
        assert_eq!(outside[0], [[-5.0, 5.0], [0.0, 5.0]]);
        assert_eq!(outside[1].first(), Some(&[10.0, 5.0]));
        assert_eq!(outside[1].last(), Some(&[10.0, 8.0]));
    }

    #[test]
    fn a_circle_is_cut_out_of_a_line() {
        let outside = outside_circle(&[[-10.0, 0.0], [10.0, 0.0], [10.0, 3.0]], [0.0, 0.0], 5.0);
        assert_eq!(outside, [vec![[-10.0, 0.0], [-5.0, 0.0]], vec![[5.0, 0.0], [10.0, 0.0], [10.0, 3.0]]]);
        assert!(outside_circle(&[[-1.0, 0.0], [1.0, 2.0]], [0.0, 0.0], 5.0).is_empty());
        assert_eq!(outside_circle(&[[9.0, 0.0], [9.0, 9.0]], [0.0, 0.0], 5.0), [vec![[9.0, 0.0], [9.0, 9.0]]]);
    }

    #[test]
    fn overlapping_rectangles_cut_once() {
        let other = SQUARE.moved(5.0, 0.0);
        let outside = line_outside(&[[-2.0, 5.0], [20.0, 5.0]], &[other, SQUARE]);
        assert_eq!(outside, [vec![[-2.0, 5.0], [0.0, 5.0]], vec![[15.0, 5.0], [20.0, 5.0]]]);
    }

    #[test]
    fn what_is_not_a_number_ends_a_line() {
        assert!(line_inside(&[[1.0, 1.0], [f64::NAN, 2.0], [3.0, 3.0]], &SQUARE).is_empty());
        assert!(line_inside(&[[1.0, 1.0], [f64::INFINITY, 2.0]], &SQUARE).is_empty());
    }

    #[test]
    fn a_figure_clipped_to_a_rectangle_keeps_the_common_area() {
        let triangle = [[-10.0, 5.0], [5.0, -10.0], [5.0, 20.0]];
        let kept = figure_inside(&triangle, &SQUARE);
        assert!((twice_area(&kept).abs() - 2.0 * 50.0).abs() < 1e-9, "{kept:?}");
        assert!(figure_inside(&triangle.map(|p| [p[0] + 40.0, p[1]]), &SQUARE).is_empty());
    }
}
