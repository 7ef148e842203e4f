//! How does the ring of directions around the nucleus look?
//!
//! Position angle runs around the ring, north through east; with north up that is counter-clockwise. Ticks
//! every 10 degrees, longer every 30, stand outside the ring, so that hands and marks inside never lie on
//! a number. Numbers and letters are written last: a number gives way to anything, a letter to notes only.

use super::lettering::{Rect, Text};
use super::view::Facing;
use super::{Point, Role, Scene, Shape};

/// The ring on the page.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Vane {
    pub center: Point,
    pub radius_px: f64,
}

/// Lengths of the ticks, in drawing units.
const SHORT: f64 = 4.0;
const LONG: f64 = 9.0;
/// From the ring to the middle of a letter or number, in drawing units.
const TO_LETTER: f64 = 21.0;
const LETTER_SIZE: f64 = 14.0;
const NUMBER_SIZE: f64 = 11.5;

/// The letters around the dial and the position angle of each, in degrees.
const LETTERS: [(&str, u32); 4] = [("N", 0), ("E", 90), ("S", 180), ("W", 270)];

impl Vane {
    /// The ring about the nucleus: about two thirds of the smaller side across, which leaves room for labels.
    pub fn of(scene: &Scene, facing: &Facing) -> Self {
        let smaller = scene.width_px.min(scene.height_px);
        let share = if scene.width_px < 640.0 { 0.31 } else { 0.345 };
        Vane { center: facing.nucleus(), radius_px: (share * smaller).min(430.0) }
    }

    /// The point at a share of the radius along a step of length one.
    pub fn point(&self, step: Point, share: f64) -> Point {
        [self.center[0] + step[0] * self.radius_px * share, self.center[1] + step[1] * self.radius_px * share]
    }

    /// The point outside the ticks along a step of length one.
    pub fn outside(&self, step: Point, unit_px: f64) -> Point {
        self.point(step, 1.0 + (LONG + 2.0) * unit_px / self.radius_px)
    }

    /// True when any part of the ring may be seen.
    pub fn is_in_sight(&self, scene: &Scene) -> bool {
        let reach = self.radius_px + 40.0;
        Rect { left: 0.0, top: 0.0, right: scene.width_px, bottom: scene.height_px }.grown(reach).holds(self.center)
    }

    /// Draws the ring and its ticks.
    pub fn draw(&self, scene: &mut Scene, facing: &Facing) {
        scene.add(Role::Ring, Shape::Circle { center: self.center, radius_px: self.radius_px });
        for degrees in (0..360).step_by(10) {
            let (role, length) = if degrees % 30 == 0 { (Role::TickLong, LONG) } else { (Role::TickShort, SHORT) };
            let step = facing.direction(f64::from(degrees).to_radians());
            let outer = 1.0 + length * scene.unit_px / self.radius_px;
            scene.add(role, Shape::Polyline(vec![self.point(step, 1.0), self.point(step, outer)]));
        }
    }

    /// The four letters, where they are wanted.
    pub fn letters(&self, scene: &Scene, facing: &Facing) -> Vec<Text> {
        LETTERS.iter().map(|&(letter, degrees)| self.text(scene, facing, letter, degrees, LETTER_SIZE, true)).collect()
    }

    /// The numbers every 30 degrees between the letters, where they are wanted.
    pub fn numbers(&self, scene: &Scene, facing: &Facing) -> Vec<Text> {
        (0..360)
            .step_by(30)
            .filter(|degrees| degrees % 90 != 0)
            .map(|degrees| self.text(scene, facing, &degrees.to_string(), degrees, NUMBER_SIZE, false))
            .collect()
    }

    fn text(&self, scene: &Scene, facing: &Facing, words: &str, degrees: u32, size: f64, strong: bool) -> Text {
        let step = facing.direction(f64::from(degrees).to_radians());
        let share = 1.0 + TO_LETTER * scene.unit_px / self.radius_px;
        Text::centered(words, self.point(step, share), size * scene.unit_px, strong)
    }
}
