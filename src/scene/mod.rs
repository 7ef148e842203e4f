//! What is drawn, fully resolved?
//!
//! A scene is a list of nodes in painting order. Each node has a shape in page pixels (x right, y down,
//! origin at the upper left corner) and a role, which says what it means. What a role looks like is the
//! business of [`theme`]; where the sky falls on the page, of [`view`]; how a node becomes a call or a
//! line of SVG, of [`crate::paint`]. A scene holds no colour, and a theme moves nothing: the same scene
//! serves every theme. The one exception is a picture of dust, whose pixels were coloured on the way
//! ([`image`]).
//!
//! A drawing is made by one function per view: [`sky_plane::compose`], [`orbit_view::compose`],
//! [`sheet_map::compose`], [`ribbon::compose`]. New drawings need new roles, not new shapes.

pub mod camera_field;
pub mod camera_words;
pub mod card;
pub mod clip;
pub mod horizon;
pub mod image;
pub mod isophote;
pub mod label;
pub mod layer;
pub mod lettering;
pub mod mark;
pub mod night_strip;
pub mod note;
pub mod orbit_view;
pub mod panel;
pub mod pointer;
pub mod quantity;
pub mod ribbon;
pub mod sheet;
pub mod sheet_map;
pub mod sky_plane;
pub mod spot;
pub mod tail_plane;
pub mod theme;
pub mod vane;
pub mod view;

use crate::season::series::Curve;
use image::Image;
use lettering::{Rect, Text};

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
    /// Several open lines under one look.
    Lines(Vec<Vec<Point>>),
    /// Several closed figures, filled as one: where they overlap, no darker.
    Patches(Vec<Vec<Point>>),
    /// Parallel diagonals, `gap_px` apart and fixed to the page, inside convex outlines.
    Hatch {
        outlines: Vec<Vec<Point>>,
        gap_px: f64,
        slope: Slope,
    },
    Image(Image),
    Text(Text),
}

/// Which way a diagonal runs, read from left to right.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Slope {
    Rising,
    Falling,
}

/// A direction on the sky that has a hand or a mark of its own.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Direction {
    Antisolar,
    IonAxis,
    NegativeVelocity,
    SkyMotion,
    Zenith,
    Sunward,
}

/// A kind of curve along which dust lies.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Family {
    Syndyne,
    Synchrone,
    NeckLine,
}

/// A row of bands on the season ribbon.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Lane {
    SunwardDust,
    DarkHours,
    NearSun,
}

/// What stands over the horizon.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Body {
    Comet,
    Sun,
    Moon,
}

/// What a node means.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Role {
    /// The empty sky.
    Ground,
    /// Surface density of the dust, instead of the empty sky.
    DustPicture,
    Isophote,
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
    /// The range of directions in which the ion tail may lie, and its two edges.
    Wedge,
    WedgeEdge,
    Curve(Family),
    CurveLabel(Family),
    /// Dust of the sheet that lies in the anti-tail sector: where it is broad, where it is a thin line, and its hatch.
    TowardSun,
    TowardSunLine,
    TowardSunHatch,
    /// The comet's way about the Sun, and the arrow of its motion.
    OrbitPath,
    OrbitArrow,
    /// The orbit plane seen edge-on.
    PlaneLine,
    /// From the observer to the comet, and beyond.
    SightLine,
    /// What helps the eye from one place to another.
    Guide,
    /// The angle of the observer from the orbit plane.
    Angle,
    /// The dust sheet in the orbit plane: its area, its rim, and where it is seen edge-on.
    Sheet,
    SheetRim,
    SheetEdgeOn,
    /// The observer's place.
    Observer,
    /// Name of a place or line.
    PlaceLabel,
    /// The camera's field: outline, strong corners, the handle at image up, its label.
    CameraFrame,
    CameraCorner,
    CameraHandle,
    CameraLabel,
    /// Brightness of a cell, from 0 (none) to [`theme::TONES`] - 1.
    Tone(u8),
    /// Hatch over cells.
    MapHatch,
    /// Frame and ticks of a map.
    Axis,
    ScaleBar,
    /// A quantity over the season: its curve, from there to its name, its name, and numbers of its scale.
    SeasonCurve(Curve),
    CurveLeader(Curve),
    CurveName(Curve),
    CurveNumber(Curve),
    /// Head and foot of the plot of curves, and its middle where that is zero.
    TrackEdge,
    TrackZero,
    /// Ground line of a row of bands, its name, and its bands: area, outline, hatch.
    LaneRule,
    LaneName(Lane),
    Band(Lane),
    BandRim(Lane),
    BandHatch(Lane),
    /// An event: its mark, strokes (lighter marks, leaders), the line down the plot, and its name.
    EventMark,
    EventStroke,
    EventGuide,
    EventName,
    /// The present time on the ribbon: its line, and what one grips.
    Handle,
    HandleGrip,
    HandleRidge,
    /// How light the sky is while the Sun stands so high: 0 for night to [`theme::LIGHTS`] - 1 for day.
    SkyLight(u8),
    /// What lies below the horizon, and the horizon itself.
    BelowHorizon,
    Horizon,
    /// The altitude of a body through the night, and its name.
    Course(Body),
    CourseLabel(Body),
    /// Dark time with the comet up, and the best of it.
    DarkTime,
    BestTime,
    /// The chosen time.
    Now,
    /// Name of what is drawn.
    Title,
    /// Body text of a card, and a rule between its parts.
    CardText,
    CardRule,
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

    /// Writes those of the texts that fit on the page and keep clear of the ones written before, in this order.
    /// Returns the room they take.
    pub fn write_apart(&mut self, texts: Vec<(Role, Text)>) -> Vec<Rect> {
        let page = Rect { left: 0.0, top: 0.0, right: self.width_px, bottom: self.height_px };
        let mut taken: Vec<Rect> = Vec::new();
        for (role, text) in texts {
            let area = text.area();
            if page.contains(&area) && !taken.iter().any(|other| other.overlaps(&area.grown(3.0 * self.unit_px))) {
                taken.push(area);
                self.add(role, Shape::Text(text));
            }
        }
        taken
    }

    /// The texts of the scene with their roles, in painting order.
    pub fn texts(&self) -> impl Iterator<Item = (Role, &Text)> {
        self.nodes.iter().filter_map(|node| match &node.shape {
            Shape::Text(text) => Some((node.role, text)),
            _ => None,
        })
    }
}
