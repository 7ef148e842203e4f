//! How does a scene become canvas calls or SVG?
//!
//! [`paint`] walks a scene once, asks the theme for each role's look, and issues a handful of primitives to
//! a [`Painter`]. Painters translate and decide nothing, so every backend gives the same picture.

#[cfg(target_arch = "wasm32")]
pub mod canvas;
pub mod record;
pub mod svg;

use crate::scene::lettering::Text;
use crate::scene::theme::{Color, Look, Pen, Theme};
use crate::scene::{Point, Scene, Shape};

/// A line as it is drawn, in pixels. Ends and joins are round.
#[derive(Clone, Debug, PartialEq)]
pub struct Stroke {
    pub color: Color,
    pub width_px: f64,
    /// Dashes and gaps in turn; empty for a solid line.
    pub dashes_px: Vec<f64>,
}

/// What fills and what outlines a primitive; the fill comes first.
#[derive(Clone, Debug, PartialEq, Default)]
pub struct Ink {
    pub fill: Option<Color>,
    pub stroke: Option<Stroke>,
}

/// A surface that can draw the few primitives a scene needs.
pub trait Painter {
    /// A rectangle from the origin, the whole surface.
    fn surface(&mut self, width_px: f64, height_px: f64, fill: Color);
    /// One or more lines under one ink, each open or closed.
    fn lines(&mut self, lines: &[Vec<Point>], closed: bool, ink: &Ink);
    fn circle(&mut self, center: Point, radius_px: f64, ink: &Ink);
    /// A line of text; a stroke outlines the letters.
    fn text(&mut self, text: &Text, ink: &Ink);
}

/// Paints `scene` in the colours of `theme`.
pub fn paint(scene: &Scene, theme: Theme, painter: &mut dyn Painter) {
    for node in &scene.nodes {
        let look = theme.look(node.role);
        let ink = ink(&look, scene.unit_px);
        match &node.shape {
            Shape::Fill => {
                if let Some(color) = look.fill {
                    painter.surface(scene.width_px, scene.height_px, color);
                }
            }
            Shape::Polygon(points) => painter.lines(std::slice::from_ref(points), true, &ink),
            Shape::Polyline(points) => {
                let open = Ink { fill: None, ..ink };
                painter.lines(std::slice::from_ref(points), false, &open);
            }
            Shape::Circle { center, radius_px } => painter.circle(*center, *radius_px, &ink),
            Shape::Hatch { outline, gap_px } => painter.lines(&diagonals(outline, *gap_px), false, &ink),
            Shape::Text(text) => {
                if let Some(pen) = &look.halo {
                    painter.text(text, &Ink { fill: None, stroke: Some(stroke(pen, scene.unit_px)) });
                }
                painter.text(text, &ink);
            }
        }
    }
}

fn ink(look: &Look, unit_px: f64) -> Ink {
    Ink { fill: look.fill, stroke: look.pen.as_ref().map(|pen| stroke(pen, unit_px)) }
}

fn stroke(pen: &Pen, unit_px: f64) -> Stroke {
    Stroke {
        color: pen.color,
        width_px: pen.width * unit_px,
        dashes_px: pen.dashes.iter().map(|dash| dash * unit_px).collect(),
    }
}

/// Rising diagonals inside a convex outline, `gap_px` apart and fixed to the page, so that the hatch does
/// not swim when its outline turns.
fn diagonals(outline: &[Point], gap_px: f64) -> Vec<Vec<Point>> {
    // On a rising diagonal x + y is constant.
    let level = |p: Point| p[0] + p[1];
    let step = gap_px * std::f64::consts::SQRT_2;
    let lowest = outline.iter().copied().map(level).fold(f64::INFINITY, f64::min);
    let highest = outline.iter().copied().map(level).fold(f64::NEG_INFINITY, f64::max);
    let mut lines = Vec::new();
    let mut number = (lowest / step).floor() + 1.0;
    while number * step < highest {
        let at = number * step;
        let mut ends: Vec<Point> = Vec::new();
        for (i, &a) in outline.iter().enumerate() {
            let b = outline[(i + 1) % outline.len()];
            let (below, above) = (level(a) - at, level(b) - at);
            if (below < 0.0) != (above < 0.0) {
                let share = below / (below - above);
                ends.push([a[0] + (b[0] - a[0]) * share, a[1] + (b[1] - a[1]) * share]);
            }
        }
        if ends.len() == 2 {
            lines.push(ends);
        }
        number += 1.0;
    }
    lines
}
