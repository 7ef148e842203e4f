//! How is each curve named where it ends?
//!
//! Beside a wide ribbon: a piece of the curve's pattern with its end mark, the name and the ends of its scale, joined to
//! the end of the curve; names that would meet are spread. On a narrow ribbon the same stand in rows below the dates.

use super::super::{Direction, Point, Role, Shape, mark};
use super::frame::{self, SAMPLE};
use super::scale::Scale;
use super::{Ribbon, Series};
use crate::season::series::Curve;

/// From the plot to a label's piece of line, in drawing units.
const GAP: f64 = 10.0;
/// The piece of line beside a curve's end, in drawing units.
const PIECE: f64 = 18.0;

/// Names the curves of a ribbon.
pub fn draw(ribbon: &mut Ribbon, series: &Series) {
    if ribbon.frame.beside {
        beside(ribbon, series);
    } else {
        below(ribbon);
    }
}

fn beside(ribbon: &mut Ribbon, series: &Series) {
    let frame = ribbon.frame;
    let unit = ribbon.scene.unit_px;
    let plot = frame.plot;
    let row = frame::ROW * frame.size_px;
    // Top to bottom in the order in which the curves end.
    let mut ends: Vec<(Curve, Scale, f64, f64)> = Vec::new();
    for &(curve, scale) in &ribbon.scales {
        let column = series.columns.iter().find(|column| column.curve == curve);
        let last = column.and_then(|column| column.values.iter().rev().copied().find(|value| value.is_finite()));
        let share = last.map_or(0.0, |value| scale.share(curve, value));
        let y = plot.bottom - share * plot.height();
        ends.push((curve, scale, y, y));
    }
    crate::order::by_number(&mut ends, |end| end.2);
    let room = libm::floor((frame.foot - plot.top) / row) as usize;
    ends.truncate(room.max(1));
    spread(&mut ends, plot.top + 0.5 * row, frame.foot - 0.5 * row, row);
    for (curve, scale, from, y) in ends {
        let start = plot.right + GAP * unit;
        let x = start + PIECE * unit;
        if scale.has_values() {
            let leader = vec![[plot.right + 1.5 * unit, from], [start, y]];
            ribbon.scene.add(Role::CurveLeader(curve), Shape::Polyline(leader));
            sample(ribbon, curve, [start, y], x);
        }
        let left = x + frame::SAMPLE_GAP * unit;
        let words = frame::label(curve, &scale, frame.size_px, ribbon.scene.width_px - left);
        let text = frame::from_left(words, [left, y], frame.size_px);
        ribbon.scene.add(Role::CurveName(curve), Shape::Text(text));
    }
}

/// Moves the labels (the last of each) apart to at least `row`, within top and bottom, as little as a pass down and a
/// pass up can.
fn spread(ends: &mut [(Curve, Scale, f64, f64)], top: f64, bottom: f64, row: f64) {
    let count = ends.len();
    let mut least = top;
    for end in ends.iter_mut() {
        end.3 = end.3.max(least);
        least = end.3 + row;
    }
    for (number, end) in ends.iter_mut().enumerate().rev() {
        let most = bottom - row * (count - 1 - number) as f64;
        end.3 = end.3.min(most);
    }
}

fn below(ribbon: &mut Ribbon) {
    let frame = ribbon.frame;
    if frame.legend_rows == 0 {
        return;
    }
    let unit = ribbon.scene.unit_px;
    let side = 10.0 * unit;
    let room = ribbon.scene.width_px - 2.0 * side;
    let row = frame::ROW * frame.size_px;
    let (mut x, mut y) = (side, frame.foot + frame.dates_px + 0.5 * row);
    for (curve, scale) in ribbon.scales.clone() {
        let width = frame::entry_px(curve, &scale, frame.size_px, unit, room);
        if x > side && x - side + width > room {
            (x, y) = (side, y + row);
        }
        sample(ribbon, curve, [x, y], x + SAMPLE * unit);
        let before = (SAMPLE + frame::SAMPLE_GAP) * unit;
        let words = frame::label(curve, &scale, frame.size_px, room - before);
        let text = frame::from_left(words, [x + before, y], frame.size_px);
        ribbon.scene.add(Role::CurveName(curve), Shape::Text(text));
        x += width;
    }
}

/// A level piece of a curve's pattern, with the end mark of its direction.
fn sample(ribbon: &mut Ribbon, curve: Curve, from: Point, to_x: f64) {
    let to = [to_x, from[1]];
    ribbon.scene.add(Role::SeasonCurve(curve), Shape::Polyline(vec![from, to]));
    let direction = match curve {
        Curve::Antisolar => Direction::Antisolar,
        Curve::NegativeVelocity => Direction::NegativeVelocity,
        _ => return,
    };
    mark::draw(&mut ribbon.scene, direction, to, [1.0, 0.0]);
}
