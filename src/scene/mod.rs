//! What is drawn, fully resolved?
//!
//! A scene is a list of nodes in painting order. Each node has a shape in page pixels (x right, y down,
//! origin at the upper left corner) and a role, which says what it means. What a role looks like is the
//! business of [`theme`]; where the sky falls on the page, of [`view`]; how a node becomes a call or a
//! line of SVG, of [`crate::paint`]. A scene holds no colour, and a theme moves nothing: the same scene
//! serves every theme.
//!
//! A drawing is made by one function per view, such as [`sky_plane::compose`]. New drawings (a strip of a
//! season, an orbit seen from its pole) need new roles, not new shapes.

pub mod label;
pub mod lettering;
pub mod mark;
pub mod note;
pub mod pointer;
pub mod quantity;
pub mod sky_plane;
pub mod theme;
pub mod vane;
pub mod view;

use lettering::Text;

/// A place on the page: x to the right, y down, pixels.
pub type Point = [f64; 2];

/// A drawing of a given size, as nodes in painting order.
#[derive(Clone, Debug, PartialEq)]
pub struct Scene {
    pub width_px: f64,
    pub height_px: f64,
    /// Size of one drawing unit: line widths and dash lengths of a theme are multiples of it.
    pub unit_px: f64,
    pub nodes: Vec<Node>,
}

/// One thing to paint: what it means and where it lies.
#[derive(Clone, Debug, PartialEq)]
pub struct Node {
    pub role: Role,
    pub shape: Shape,
}

/// Where a node lies.
#[derive(Clone, Debug, PartialEq)]
pub enum Shape {
    /// The whole surface.
    Fill,
    /// A closed figure.
    Polygon(Vec<Point>),
    /// An open line through the points.
    Polyline(Vec<Point>),
    Circle {
        center: Point,
        radius_px: f64,
    },
    /// Parallel rising diagonals, `gap_px` apart, inside a convex outline.
    Hatch {
        outline: Vec<Point>,
        gap_px: f64,
    },
    Text(Text),
}

/// A direction on the sky that has a hand or a mark of its own.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Direction {
    Antisolar,
    NegativeVelocity,
    SkyMotion,
    Zenith,
    Sunward,
}

/// What a node means.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Role {
    /// The empty sky.
    Ground,
    /// The half of the sky within 90 degrees of the Sun's direction, and its straight edge.
    SunwardHalf,
    SunwardEdge,
    Nucleus,
    /// The ring of directions and its ticks.
    Ring,
    TickShort,
    TickLong,
    DialNumber,
    /// N, E, S and W.
    Cardinal,
    /// The line of a hand, in the pattern of its direction.
    Hand(Direction),
    /// Outline of an end mark, always solid.
    Mark(Direction),
    /// Filled part of an end mark.
    MarkFill(Direction),
    /// From an end mark to its label.
    Leader(Direction),
    Label(Direction),
    ScaleBar,
    /// Name of what is drawn.
    Title,
    /// Scale, field and orientation in words.
    Note,
    /// Something absent or doubtful, in words.
    Caution,
}

impl Scene {
    /// An empty drawing. Letters and lines grow gently with the smaller side.
    pub fn new(width_px: f64, height_px: f64) -> Self {
        let unit_px = (0.86 + 0.14 * width_px.min(height_px) / 800.0).clamp(0.9, 1.25);
        Scene { width_px, height_px, unit_px, nodes: vec![Node { role: Role::Ground, shape: Shape::Fill }] }
    }

    pub fn add(&mut self, role: Role, shape: Shape) {
        self.nodes.push(Node { role, shape });
    }

    /// The texts of the scene with their roles, in painting order.
    pub fn texts(&self) -> impl Iterator<Item = (Role, &Text)> {
        self.nodes.iter().filter_map(|node| match &node.shape {
            Shape::Text(text) => Some((node.role, text)),
            _ => None,
        })
    }
}
