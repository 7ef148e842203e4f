//! How does the chip lie on the sky, and how does the sky lie on the chip?
//!
//! A [`Field`] is the camera's own three axes (image right, image up, line of sight) and a scale. A direction d falls on
//!
//! ```text
//!   right_px = (d . right) / (d . sight) / scale        up_px = (d . up) / (d . sight) / scale
//! ```
//!
//! (gnomonic, TAN of Calabretta & Greisen 2002, A&A 395, 1077). Great circles are straight on the chip, so a tail of fixed
//! position angle leaves the nucleus along a straight line. Against wcslib's TAN (tests/camera.rs): 1e-9 pixel.

use super::Camera;
use crate::frame::{self, Axes, position_angle_rad, separation_rad, tangent, turn};
use nalgebra::Vector3;
use std::f64::consts::PI;

/// A camera's field on the sky at one time.
#[derive(Clone, Debug, PartialEq)]
pub struct Field {
    /// Unit vectors, equatorial: toward image right and image up, and toward the middle of the chip.
    pub right: Vector3<f64>,
    pub up: Vector3<f64>,
    pub sight: Vector3<f64>,
    /// Tangent units per pixel.
    pub scale_tan: f64,
    pub half_px: [f64; 2],
    /// The nucleus: toward it, and its place on the chip.
    pub nucleus: Vector3<f64>,
    pub nucleus_px: [f64; 2],
}

/// How a direction at the nucleus lies on the chip.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Course {
    /// Clockwise from image up as the image is looked at, [0, 2 pi).
    pub clockwise_from_up_rad: f64,
    /// Where it leaves the chip; None where it never lies on it.
    pub exit: Option<Exit>,
}

/// Where a direction leaves the chip.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Exit {
    pub pixel: [f64; 2],
    /// From the nucleus, on the sky.
    pub distance_rad: f64,
    pub toward: &'static str,
}

impl Field {
    /// The field of a valid camera for a nucleus in the direction `nucleus`. None so near a celestial pole that no
    /// pointing has both this rotation at its middle and the nucleus at this place of the chip.
    pub fn of(camera: &Camera, nucleus: &Vector3<f64>) -> Option<Field> {
        let (sine, cosine) = libm::sincos(camera.image_up_position_angle_deg.to_radians());
        let across = if camera.mirrored { -1.0 } else { 1.0 };
        let scale_tan = camera.scale_tan();
        let (x, y) = (camera.nucleus_right_px * scale_tan, camera.nucleus_up_px * scale_tan);
        let xi = -across * cosine * x + sine * y;
        let eta = across * sine * x + cosine * y;
        let axes = Axes::at(&tangent::tangent_point(nucleus, xi, eta)?);
        Some(Field {
            right: (axes.north * sine - axes.east * cosine) * across,
            up: axes.north * cosine + axes.east * sine,
            sight: axes.sight,
            scale_tan,
            half_px: camera.half_px(),
            nucleus: nucleus.normalize(),
            nucleus_px: [camera.nucleus_right_px, camera.nucleus_up_px],
        })
    }

    /// This field carried by a rotation of the sky, for a nucleus elsewhere; None where that lies 90 degrees or more from
    /// the middle.
    pub fn carried(&self, turned: impl Fn(&Vector3<f64>) -> Vector3<f64>, nucleus: &Vector3<f64>) -> Option<Field> {
        let mut field = Field {
            right: turned(&self.right),
            up: turned(&self.up),
            sight: turned(&self.sight),
            nucleus: nucleus.normalize(),
            ..self.clone()
        };
        field.nucleus_px = field.pixel(nucleus)?;
        Some(field)
    }

    /// Where a direction falls, pixels right and up from the middle; None 90 degrees or more from it.
    pub fn pixel(&self, direction: &Vector3<f64>) -> Option<[f64; 2]> {
        let axes = Axes { sight: self.sight, east: self.right, north: self.up };
        let [x, y] = tangent::project(direction, &axes)?;
        Some([x / self.scale_tan, y / self.scale_tan])
    }

    /// Unit vector toward a pixel.
    pub fn direction(&self, pixel: [f64; 2]) -> Vector3<f64> {
        let [x, y] = pixel.map(|px| px * self.scale_tan);
        (self.sight + self.right * x + self.up * y).normalize()
    }

    /// Toward the corners: upper left, upper right, lower right, lower left.
    pub fn corners(&self) -> [Vector3<f64>; 4] {
        let [w, h] = self.half_px;
        [[-w, h], [w, h], [w, -h], [-w, -h]].map(|corner| self.direction(corner))
    }

    /// Angles on the sky across the middle: width and height.
    pub fn size_rad(&self) -> [f64; 2] {
        self.half_px.map(|half| 2.0 * libm::atan(half * self.scale_tan))
    }

    /// Position angle of image up at the middle, [0, 2 pi).
    pub fn image_up_position_angle_rad(&self) -> f64 {
        position_angle_rad(&self.up, &Axes::at(&self.sight)).unwrap_or(0.0)
    }

    /// Position angle of image up at the nucleus. Away from the middle it differs, as the meridians converge.
    pub fn image_up_at_nucleus_rad(&self) -> f64 {
        position_angle_rad(&self.up, &Axes::at(&self.nucleus)).unwrap_or(0.0)
    }

    /// Position angle of the longer side at the middle, [0, pi): a side has no head. That of the width where both are equal.
    pub fn long_side_position_angle_rad(&self) -> f64 {
        let [w, h] = self.half_px;
        let side = if w >= h { self.right } else { self.up };
        let angle = position_angle_rad(&side, &Axes::at(&self.sight)).unwrap_or(0.0);
        if angle >= PI { angle - PI } else { angle }
    }

    pub fn is_mirrored(&self) -> bool {
        self.right.cross(&self.up).dot(&self.sight) > 0.0
    }

    pub fn holds(&self, pixel: [f64; 2]) -> bool {
        pixel[0].abs() <= self.half_px[0] && pixel[1].abs() <= self.half_px[1]
    }

    /// How the direction of a position angle at the nucleus lies on the chip.
    pub fn course(&self, position_angle_rad: f64) -> Course {
        let axes = Axes::at(&self.nucleus);
        let (sine, cosine) = libm::sincos(position_angle_rad);
        let away = axes.north * cosine + axes.east * sine;
        let [x, y] = self.nucleus_px.map(|px| px * self.scale_tan);
        let depth = self.nucleus.dot(&self.sight);
        // Derivative of the picture of the nucleus along `away`.
        let step = [
            (away.dot(&self.right) - x * away.dot(&self.sight)) / depth,
            (away.dot(&self.up) - y * away.dot(&self.sight)) / depth,
        ];
        Course { clockwise_from_up_rad: turn(libm::atan2(step[0], step[1])), exit: self.exit(step) }
    }

    fn exit(&self, step: [f64; 2]) -> Option<Exit> {
        let (mut first, mut last) = (0.0_f64, f64::INFINITY);
        for (step, (at, half)) in step.into_iter().zip(self.nucleus_px.into_iter().zip(self.half_px)) {
            if step == 0.0 {
                if at.abs() > half {
                    return None;
                }
                continue;
            }
            let (one, two) = ((-half - at) / step, (half - at) / step);
            first = first.max(one.min(two));
            last = last.min(one.max(two));
        }
        if !(first < last && last.is_finite()) {
            return None;
        }
        let pixel = [self.nucleus_px[0] + last * step[0], self.nucleus_px[1] + last * step[1]];
        let distance_rad = separation_rad(&self.direction(pixel), &self.nucleus);
        Some(Exit { pixel, distance_rad, toward: self.edge(pixel) })
    }

    /// The edge on which a pixel lies, or the corner where it is within a sixth of the side.
    fn edge(&self, pixel: [f64; 2]) -> &'static str {
        const NAMES: [[&str; 3]; 3] = [
            ["lower left corner", "lower edge", "lower right corner"],
            ["left edge", "middle", "right edge"],
            ["upper left corner", "upper edge", "upper right corner"],
        ];
        let third = |axis: usize| match pixel[axis] / self.half_px[axis] {
            part if part < -2.0 / 3.0 => 0,
            part if part > 2.0 / 3.0 => 2,
            _ => 1,
        };
        NAMES[third(1)][third(0)]
    }

    /// Right ascension and declination of the middle.
    pub fn middle_rad(&self) -> [f64; 2] {
        [frame::right_ascension_rad(&self.sight), frame::declination_rad(&self.sight)]
    }
}
