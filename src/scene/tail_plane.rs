//! How do the tails lie on the sky plane?
//!
//! Under the ring: the dust picture, isophotes, the shaded dust toward the Sun, synchrones, syndynes, the neck-line.
//! With the hands: the wedge of the ion tail. Lines end at the edge of the page and leave room for every text.

use super::clip::{line_inside, line_outside, outside_circle};
use super::layer::TailLayers;
use super::lettering::{Anchor, Rect, Text};
use super::sheet::TowardSun;
use super::spot::{self, PageCurve, Spot};
use super::view::Facing;
use super::{Family, Point, Role, Scene, Shape, Slope, quantity};
use crate::order;
use crate::tail::curve::{Curve, Held};
use crate::tail::size::Material;
use std::f64::consts::TAU;

/// Between the diagonals over dust toward the Sun, in drawing units.
const HATCH_GAP: f64 = 8.0;
/// A synchrone that comes away from another by less than this, in drawing units, is left out.
const DISTINCT: f64 = 11.0;
/// Neighbouring synchrones stand at least this far apart where they begin, in drawing units, unless that lies farther
/// out than this share of the ring's radius.
const LEAST_APART: f64 = 5.0;
const BUNDLED_SHARE: f64 = 0.45;
/// A release longer ago is dated with its year.
const LONG_AGO_DAYS: f64 = 300.0;
/// The arc of a wedge is drawn in steps of this, radians.
const ARC_STEP: f64 = 0.06;

/// The curves of the layers on a page.
pub fn curves(tails: &TailLayers, facing: &Facing, page: &Rect) -> Vec<PageCurve> {
    let mut found: Vec<PageCurve> =
        tails.curves.iter().map(|curve| on_page(curve, tails.material, facing, page)).collect();
    // The neck-line runs over the betas that have one; a gap breaks it.
    let mut pieces: Vec<Vec<Point>> = vec![Vec::new()];
    for knot in &tails.neck_line {
        match knot.as_ref().and_then(|knot| knot.offset) {
            Some([xi, eta]) => pieces.last_mut().expect("at least one piece").push(facing.to_page(xi, eta)),
            None => pieces.push(Vec::new()),
        }
    }
    let words = "neck-line".to_string();
    found.push(clipped(Family::NeckLine, &pieces, page, [words.clone(), words]));
    found.retain(|curve| !curve.pieces.is_empty());
    found
}

fn on_page(curve: &Curve, material: Option<Material>, facing: &Facing, page: &Rect) -> PageCurve {
    let pieces: Vec<Vec<Point>> = curve
        .pieces
        .iter()
        .map(|piece| piece.iter().map(|point| facing.to_page(point.offset[0], point.offset[1])).collect())
        .collect();
    match curve.held {
        Held::Beta(beta) => {
            let short = quantity::beta(beta);
            let full = material.map_or(short.clone(), |material| format!("{short} · {}", material.short(beta)));
            clipped(Family::Syndyne, &pieces, page, [full, short])
        }
        Held::Age { days, released } => {
            let short = quantity::age(days);
            let date = if days > LONG_AGO_DAYS { quantity::day_of_year(released) } else { quantity::day(released) };
            clipped(Family::Synchrone, &pieces, page, [format!("{short} · {date}"), short])
        }
    }
}

fn clipped(family: Family, pieces: &[Vec<Point>], page: &Rect, words: [String; 2]) -> PageCurve {
    let inside: Vec<Vec<Point>> = pieces.iter().flat_map(|piece| line_inside(piece, page)).collect();
    let ends = inside.last().and_then(|piece| piece.last()) == pieces.last().and_then(|piece| piece.last());
    PageCurve { family, pieces: inside, ends, words }
}

/// Keeps synchrones from running together into a smear: leaves out those that lie on another, or nearly, for all of their
/// visible length (as all do in the orbit plane), the outer ones staying, and cuts off the inner ends of the rest where they
/// crowd around the nucleus.
pub fn part(curves: &mut Vec<PageCurve>, nucleus: Point, ring_radius_px: f64, unit_px: f64) {
    let synchrones: Vec<usize> = (0..curves.len()).filter(|&i| curves[i].family == Family::Synchrone).collect();
    let mut kept: Vec<usize> = Vec::new();
    for member in spot::outer_first(synchrones.len()) {
        let index = synchrones[member];
        let apart = |other: &usize| come_apart(&curves[index], &curves[*other], DISTINCT * unit_px);
        if kept.iter().all(apart) {
            kept.push(index);
        }
    }
    let from = inner_px(&kept, curves, nucleus, unit_px).min(BUNDLED_SHARE * ring_radius_px);
    for &index in &kept {
        let outside = curves[index].pieces.iter().flat_map(|piece| outside_circle(piece, nucleus, from)).collect();
        curves[index].pieces = outside;
    }
    let mut index = 0;
    curves.retain(|curve| {
        index += 1;
        curve.family != Family::Synchrone || kept.contains(&(index - 1)) && !curve.pieces.is_empty()
    });
}

/// Whether a curve anywhere lies farther than `by_px` from all of another. Looks from the far end, where curves part.
fn come_apart(one: &PageCurve, other: &PageCurve, by_px: f64) -> bool {
    let away = |p: &Point| {
        let mut segments = other.pieces.iter().flat_map(|piece| piece.windows(2));
        segments.all(|pair| distance_squared(*p, pair[0], pair[1]) > by_px * by_px)
    };
    one.pieces.iter().flatten().rev().any(away)
}

/// Square of the distance of a point from a segment.
fn distance_squared(p: Point, a: Point, b: Point) -> f64 {
    let (step, to) = ([b[0] - a[0], b[1] - a[1]], [p[0] - a[0], p[1] - a[1]]);
    let square = step[0] * step[0] + step[1] * step[1];
    let part = if square > 0.0 { ((to[0] * step[0] + to[1] * step[1]) / square).clamp(0.0, 1.0) } else { 0.0 };
    let across = [to[0] - step[0] * part, to[1] - step[1] * part];
    across[0] * across[0] + across[1] * across[1]
}

/// The distance from the nucleus at which these curves stand apart: their number over the angle that they fill.
fn inner_px(members: &[usize], curves: &[PageCurve], nucleus: Point, unit_px: f64) -> f64 {
    let end = |&index: &usize| curves[index].pieces.last()?.last().copied();
    let mut angles: Vec<f64> =
        members.iter().filter_map(end).map(|[x, y]| libm::atan2(y - nucleus[1], x - nucleus[0])).collect();
    order::by_number(&mut angles, |angle| *angle);
    let Some(&first) = angles.first() else { return 0.0 };
    // The circle less its widest gap between neighbours is what the curves fill.
    let next = angles.iter().copied().skip(1).chain([first + TAU]);
    let gap = angles.iter().zip(next).map(|(a, b)| b - a).fold(0.0, f64::max);
    LEAST_APART * unit_px * (angles.len() as f64 - 1.0) / (TAU - gap).max(1e-9)
}

/// What the drawing says about its layers, a line each.
pub fn legend(tails: &TailLayers, toward_sun: &TowardSun) -> Vec<String> {
    let mut lines = Vec::new();
    if !toward_sun.is_empty() {
        lines.push("crossed: dust there".to_string());
    }
    if tails.picture.is_some() {
        lines.push("dust: model, relative".to_string());
    }
    if let Some(isophotes) = &tails.isophotes
        && !isophotes.lines.is_empty()
    {
        lines.push(format!("isophotes: {}\u{a0}mag apart", quantity::figures(isophotes.step_mag)));
    }
    lines
}

/// Draws isophotes, shading and curves; `texts` are the boxes that lines leave free.
pub fn draw(scene: &mut Scene, tails: &TailLayers, toward_sun: TowardSun, curves: &[PageCurve], texts: &[Rect]) {
    if !toward_sun.is_empty() {
        let gap_px = HATCH_GAP * scene.unit_px;
        scene.add(Role::TowardSun, Shape::Patches(toward_sun.broad.clone()));
        scene.add(Role::TowardSunHatch, Shape::Hatch { outlines: toward_sun.broad, gap_px, slope: Slope::Falling });
        scene.add(Role::TowardSunLine, Shape::Lines(toward_sun.thin));
    }
    let free = |lines: &mut dyn Iterator<Item = &Vec<Point>>| -> Vec<Vec<Point>> {
        lines.flat_map(|line| line_outside(line, texts)).collect()
    };
    if let Some(isophotes) = &tails.isophotes {
        scene.add(Role::Isophote, Shape::Lines(free(&mut isophotes.lines.iter())));
    }
    for family in [Family::Synchrone, Family::Syndyne, Family::NeckLine] {
        for curve in curves.iter().filter(|curve| curve.family == family) {
            let lines = free(&mut curve.pieces.iter());
            if !lines.is_empty() {
                scene.add(Role::Curve(family), Shape::Lines(lines));
            }
        }
    }
}

/// The labels of the curves that found a spot.
pub fn labels(curves: &[PageCurve], spots: &[Option<Spot>], unit_px: f64) -> Vec<(Role, Text)> {
    let size_px = spot::LABEL_SIZE * unit_px;
    let label = |(curve, spot): (&PageCurve, &Option<Spot>)| {
        let spot = spot.as_ref()?;
        let text = Text::centered(curve.words[spot.words].clone(), spot.area.center(), size_px, false);
        Some((Role::CurveLabel(curve.family), Text { anchor: Anchor::Middle, ..text }))
    };
    curves.iter().zip(spots).filter_map(label).collect()
}

/// Draws the wedge of the ion tail, `radius_px` long.
pub fn draw_wedge(scene: &mut Scene, tails: &TailLayers, facing: &Facing, center: Point, radius_px: f64) {
    let Some((axis_rad, [first, last])) = wedge_rad(tails) else { return };
    let at = |position_angle_rad: f64| {
        let step = facing.direction(position_angle_rad);
        [center[0] + step[0] * radius_px, center[1] + step[1] * radius_px]
    };
    let steps = ((last - first) / ARC_STEP).ceil().max(1.0) as usize;
    let mut outline = vec![center];
    outline.extend((0..=steps).map(|i| at(axis_rad + first + (last - first) * i as f64 / steps as f64)));
    let ends = wedge_ends(tails, facing, center, radius_px);
    let edges = ends.into_iter().map(|end| vec![center, end]).collect();
    scene.add(Role::Wedge, Shape::Polygon(outline));
    scene.add(Role::WedgeEdge, Shape::Lines(edges));
}

/// Where the two edges of the wedge end.
pub fn wedge_ends(tails: &TailLayers, facing: &Facing, center: Point, radius_px: f64) -> Vec<Point> {
    let Some((axis_rad, reach)) = wedge_rad(tails) else { return Vec::new() };
    let end = |aside: f64| {
        let step = facing.direction(axis_rad + aside);
        [center[0] + step[0] * radius_px, center[1] + step[1] * radius_px]
    };
    reach.map(end).to_vec()
}

/// The wedge's axis and its reach to either side, where the axis has a position angle.
pub fn wedge_rad(tails: &TailLayers) -> Option<(f64, [f64; 2])> {
    let wedge = tails.wedge.as_ref()?;
    Some((wedge.axis.position_angle_rad?, wedge.reach_rad?))
}

/// The range of the wedge in whole degrees: `238–247°`.
pub fn wedge_range(axis_rad: f64, [first, last]: [f64; 2]) -> String {
    let first = quantity::whole_position_angle(axis_rad + first);
    format!("{}–{}", first.trim_end_matches('°'), quantity::whole_position_angle(axis_rad + last))
}
