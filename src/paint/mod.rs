//! How does a scene become canvas calls or SVG?
//!
//! [`paint`] walks a scene once, asks the theme for each role's look, and issues a handful of primitives to
//! a [`Painter`]. Painters translate and decide nothing, so every backend gives the same picture.

#[cfg(target_arch = "wasm32")]
pub mod canvas;
pub mod png;
pub mod record;
pub mod svg;

use crate::scene::image::Image;
use crate::scene::lettering::Text;
use crate::scene::theme::{Color, Look, Pen, Theme};
use crate::scene::{Point, Scene, Shape, Slope};

/// A line as it is drawn, in pixels. Ends and joins are round.
#[derive(Clone, Debug, PartialEq)]
pub struct Stroke {
    pub color: Color,
    pub width_px: f64,
    /// Dashes and gaps in turn; empty for a solid line.
    pub dashes_px: Vec<f64>,
}

/// What fills and what outlines a primitive; the fill comes first.
#[derive(Clone, Debug, PartialEq)]
pub struct Ink {
    pub fill: Option<Color>,
    /// How much the fill covers what lies under it, 0 to 1.
    pub fill_opacity: f64,
    pub stroke: Option<Stroke>,
}

/// A surface that can draw the few primitives a scene needs.
pub trait Painter {
    /// A rectangle from the origin, the whole surface.
    fn surface(&mut self, width_px: f64, height_px: f64, fill: Color);
    /// Pixels stretched over a rectangle.
    fn image(&mut self, image: &Image);
    /// One or more lines under one ink, each open or closed. Closed ones that turn the same way are filled as one.
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
            Shape::Lines(lines) if !lines.is_empty() => painter.lines(lines, false, &Ink { fill: None, ..ink }),
            Shape::Patches(figures) if !figures.is_empty() => painter.lines(figures, true, &ink),
            Shape::Lines(_) | Shape::Patches(_) => {}
            Shape::Image(image) => painter.image(image),
            Shape::Circle { center, radius_px } => painter.circle(*center, *radius_px, &ink),
            Shape::Hatch { outlines, gap_px, slope } => {
                let lines: Vec<_> = outlines.iter().flat_map(|one| diagonals(one, *gap_px, *slope)).collect();
                if !lines.is_empty() {
                    painter.lines(&lines, false, &ink);
                }
            }
            Shape::Text(text) => {
                if let Some(pen) = &look.halo {
                    painter
                        .text(text, &Ink { fill: None, fill_opacity: 1.0, stroke: Some(stroke(pen, scene.unit_px)) });
                }
                painter.text(text, &ink);
            }
        }
    }
}

fn ink(look: &Look, unit_px: f64) -> Ink {
    Ink { fill: look.fill, fill_opacity: look.fill_opacity, stroke: look.pen.as_ref().map(|pen| stroke(pen, unit_px)) }
}

fn stroke(pen: &Pen, unit_px: f64) -> Stroke {
    Stroke {
        color: pen.color,
        width_px: pen.width * unit_px,
        dashes_px: pen.dashes.iter().map(|dash| dash * unit_px).collect(),
    }
}

/// Diagonals inside a convex outline, `gap_px` apart and fixed to the page, so that the hatch does not swim when
/// its outline turns, and runs on from one outline to the next.
fn diagonals(outline: &[Point], gap_px: f64, slope: Slope) -> Vec<Vec<Point>> {
    // On a rising diagonal x + y is constant, on a falling one x - y.
    let sign = if slope == Slope::Rising { 1.0 } else { -1.0 };
    let level = |p: Point| p[0] + sign * p[1];
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
