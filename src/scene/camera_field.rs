//! How does the camera's field look on the sky plane, and where is it taken hold of?
//!
//! A thin outline with strong corners, so that it is told from every ring and hand in any colour; a stem from the middle of
//! the upper edge to a small square says which way is image up, and is the handle that turns the field. The outline moves
//! it. Straight edges of the chip are great circles, hence straight on the page too.

use super::clip::{line_inside, line_outside};
use super::label::Room;
use super::lettering::{ABOVE, BELOW, Rect, Text, width_px};
use super::view::{Facing, SkyView, Up};
use super::{Point, Role, Scene, Shape, quantity};
use crate::camera::field::Field;
use crate::camera::{Camera, turn_deg};
use crate::frame::{Axes, tangent};
use crate::sky::Sky;

/// Length of the strong corners, of the stem, and half the side of the handle, in drawing units.
const CORNER: f64 = 16.0;
const STEM: f64 = 24.0;
const HANDLE: f64 = 5.0;
const LABEL_SIZE: f64 = 12.5;

/// What a pointer takes hold of.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Grip {
    /// The outline: the field is moved.
    Outline,
    /// The handle: the field is turned about its middle.
    Handle,
}

/// A field on the page.
#[derive(Clone, Debug, PartialEq)]
pub struct Frame {
    /// Upper left, upper right, lower right, lower left of the image.
    corners: [Point; 4],
    /// Middle of the upper edge, and the handle; None where that is off the page.
    stem: Option<[Point; 2]>,
    words: String,
}

impl Frame {
    /// The frame of a field; None where a corner lies 90 degrees or more from the nucleus.
    pub fn of(field: &Field, axes: &Axes, facing: &Facing, page: &Rect, unit_px: f64) -> Option<Frame> {
        let on_page = |direction| {
            let [xi, eta] = tangent::project(&direction, axes)?;
            Some(facing.to_page(xi, eta))
        };
        let [a, b, c, d] = field.corners().map(on_page);
        let corners = [a?, b?, c?, d?];
        let top = on_page(field.direction([0.0, field.half_px[1]]))?;
        let below = on_page(field.direction([0.0, 0.9 * field.half_px[1]]))?;
        let length = libm::hypot(top[0] - below[0], top[1] - below[1]).max(1e-9);
        let step = [(top[0] - below[0]) / length, (top[1] - below[1]) / length];
        let reachable = page.grown(-2.0 * HANDLE * unit_px);
        // Inside the frame where there is no room outside.
        let stem = [STEM, -STEM]
            .map(|along| [top[0] + step[0] * along * unit_px, top[1] + step[1] * along * unit_px])
            .into_iter()
            .find(|&end| reachable.holds(end))
            .map(|end| [top, end]);
        let words = format!("image up {}", quantity::position_angle(field.image_up_position_angle_rad()));
        Some(Frame { corners, stem, words })
    }

    /// The boxes of handle and corners, which no label covers.
    pub fn areas(&self, unit_px: f64) -> Vec<Rect> {
        let around = |center, half: f64| Rect::around(center, half * unit_px, half * unit_px);
        let handle = self.stem.map(|[_, end]| around(end, HANDLE + 2.0));
        self.corners.iter().map(|&corner| around(corner, 5.0)).chain(handle).collect()
    }

    /// What lies within `reach_px` of a point of the page; the handle first.
    pub fn grip(&self, at: Point, reach_px: f64) -> Option<Grip> {
        let near = |p: Point| libm::hypot(at[0] - p[0], at[1] - p[1]);
        if self.stem.is_some_and(|[_, end]| near(end) <= 1.5 * reach_px) {
            return Some(Grip::Handle);
        }
        let box_around = Rect::around(at, reach_px, reach_px);
        (0..4).any(|i| box_around.cuts(self.corners[i], self.corners[(i + 1) % 4])).then_some(Grip::Outline)
    }

    /// The label of the handle in a free place beside it, which is then taken.
    pub fn label(&self, room: &mut Room) -> Option<Text> {
        let [_, end] = self.stem?;
        let size_px = LABEL_SIZE * room.unit_px;
        let half = [width_px(&self.words, size_px, false) / 2.0, size_px * (ABOVE + BELOW) / 2.0];
        let gap = (HANDLE + 5.0) * room.unit_px;
        let sides =
            [[0.0, -1.0], [0.0, 1.0], [1.0, 0.0], [-1.0, 0.0], [0.8, -1.0], [-0.8, -1.0], [0.8, 1.0], [-0.8, 1.0]];
        let area = [1.0, 1.7, 2.6]
            .into_iter()
            .flat_map(|far| sides.map(|side| (far, side)))
            .map(|(far, [x, y])| {
                let center = [end[0] + x * (half[0] + gap * far), end[1] + y * (half[1] + gap * far)];
                Rect::around(center, half[0], half[1])
            })
            .find(|area| room.area.contains(area) && !room.taken.iter().any(|taken| taken.overlaps(area)))?;
        room.taken.push(area);
        Some(Text::centered(self.words.clone(), area.center(), size_px, false))
    }

    /// Draws outline, corners, stem and handle, but for what texts cover.
    pub fn draw(&self, scene: &mut Scene, texts: &[Rect]) {
        let page = Rect { left: 0.0, top: 0.0, right: scene.width_px, bottom: scene.height_px };
        let free = |line: &[Point]| -> Vec<Vec<Point>> {
            line_inside(line, &page).iter().flat_map(|piece| line_outside(piece, texts)).collect()
        };
        let [a, b, c, d] = self.corners;
        let outline = free(&[a, b, c, d, a]);
        let strong: Vec<Vec<Point>> = (0..4)
            .flat_map(|i| {
                let [before, here, after] = [3, 0, 1].map(|step| self.corners[(i + step) % 4]);
                let arm = CORNER * scene.unit_px;
                free(&[toward(here, before, arm), here, toward(here, after, arm)])
            })
            .collect();
        for (role, lines) in [(Role::CameraFrame, outline), (Role::CameraCorner, strong)] {
            if !lines.is_empty() {
                scene.add(role, Shape::Lines(lines));
            }
        }
        if let Some([top, end]) = self.stem {
            scene.add(Role::CameraFrame, Shape::Polyline(vec![top, end]));
            let half = HANDLE * scene.unit_px;
            let [x, y] = end;
            let square = vec![[x - half, y - half], [x + half, y - half], [x + half, y + half], [x - half, y + half]];
            scene.add(Role::CameraHandle, Shape::Polygon(square));
        }
    }
}

/// A point of an edge at most `arm` from its corner, no farther than a third of the edge.
fn toward(from: Point, to: Point, arm: f64) -> Point {
    let length = libm::hypot(to[0] - from[0], to[1] - from[1]);
    let part = (arm / length.max(1e-9)).min(1.0 / 3.0);
    [from[0] + (to[0] - from[0]) * part, from[1] + (to[1] - from[1]) * part]
}

/// What a drawing says about the camera, a line.
pub fn legend(camera: &Camera, field: Option<&Field>) -> String {
    match field {
        Some(field) => {
            let [across, down] = field.size_rad().map(quantity::arc);
            let mirror = if camera.mirrored { ", mirrored" } else { "" };
            format!("frame: {across} × {down}{mirror}")
        }
        None => "no frame: too near the pole".to_owned(),
    }
}

/// Image up as what points up on the page.
pub fn up(field: &Field) -> Up {
    Up::Camera { position_angle_rad: field.image_up_at_nucleus_rad(), mirrored: field.is_mirrored() }
}

/// The field and its frame on the page of a view.
pub fn on_page(camera: &Camera, sky: &Sky, view: &SkyView) -> Option<(Field, Frame)> {
    let scene = Scene::new(view.width_px, view.height_px);
    let page = Rect { left: 0.0, top: 0.0, right: view.width_px, bottom: view.height_px };
    let field = Field::of(camera, &sky.axes.sight)?;
    let frame = Frame::of(&field, &sky.axes, &view.facing(sky), &page, scene.unit_px)?;
    Some((field, frame))
}

/// The camera moved so that what lies under `from` on the page comes under `to`; None where it cannot stand there.
pub fn moved(camera: &Camera, sky: &Sky, view: &SkyView, from: Point, to: Point) -> Option<Camera> {
    let field = Field::of(camera, &sky.axes.sight)?;
    let pixel = |[x, y]: Point| {
        let [xi, eta] = view.to_sky(sky, x, y);
        field.pixel(&tangent::unproject(xi, eta, &sky.axes))
    };
    let (from, to) = (pixel(from)?, pixel(to)?);
    standing(
        Camera {
            nucleus_right_px: tenth(camera.nucleus_right_px - to[0] + from[0]),
            nucleus_up_px: tenth(camera.nucleus_up_px - to[1] + from[1]),
            ..camera.clone()
        },
        sky,
    )
}

/// The camera turned about its middle so that its handle points toward a place of the page.
pub fn turned_toward(camera: &Camera, sky: &Sky, view: &SkyView, at: Point) -> Option<Camera> {
    let field = Field::of(camera, &sky.axes.sight)?;
    let [xi, eta] = view.to_sky(sky, at[0], at[1]);
    let there = tangent::unproject(xi, eta, &sky.axes);
    let angle = crate::frame::position_angle_rad(&there, &Axes::at(&field.sight))?;
    turned_to(camera, sky, angle.to_degrees())
}

/// The camera turned about its middle to a position angle, which is rounded to a tenth of a degree.
pub fn turned_to(camera: &Camera, sky: &Sky, image_up_deg: f64) -> Option<Camera> {
    let field = Field::of(camera, &sky.axes.sight)?;
    let turned = Camera { image_up_position_angle_deg: turn_deg(tenth(image_up_deg)), ..camera.clone() };
    // Where the nucleus falls once the chip is turned about its middle.
    let axes = Axes::at(&field.sight);
    let (sine, cosine) = libm::sincos(turned.image_up_position_angle_deg.to_radians());
    let across = if camera.mirrored { -1.0 } else { 1.0 };
    let straight = Field {
        right: (axes.north * sine - axes.east * cosine) * across,
        up: axes.north * cosine + axes.east * sine,
        ..field
    };
    let [right, up] = straight.pixel(&sky.axes.sight)?;
    standing(Camera { nucleus_right_px: tenth(right), nucleus_up_px: tenth(up), ..turned }, sky)
}

/// The camera, if it is valid and can stand so under that sky.
fn standing(camera: Camera, sky: &Sky) -> Option<Camera> {
    camera.validate("camera").ok()?;
    Field::of(&camera, &sky.axes.sight)?;
    Some(camera)
}

fn tenth(value: f64) -> f64 {
    (value * 10.0).round() / 10.0
}
