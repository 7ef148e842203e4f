//! Where on the page does a place of the sky fall?
//!
//! Sky: gnomonic offsets from the nucleus, xi east and eta north, tangent values (radians near the
//! nucleus). Page: pixels, x right, y down. With north up, east is to the left, as one sees the sky; that
//! one reversal is made in [`Facing::leftward`] and nowhere else in the crate, and left out there for the picture of a
//! mirror-reversed camera.

use super::Point;
use crate::sky::Sky;

/// What points up on the page.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Up {
    /// Celestial north, J2000.
    North,
    /// The zenith of the observer's site; north where there is no site, or the comet stands in the zenith.
    Zenith,
    /// Image up of a camera, at this position angle at the nucleus; east to the right where the camera is mirror-reversed.
    Camera { position_angle_rad: f64, mirrored: bool },
}

/// What part of the sky is drawn, and how large.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SkyView {
    pub width_px: f64,
    pub height_px: f64,
    /// Radians per pixel at the nucleus, > 0.
    pub pixel_scale_rad: f64,
    /// Nucleus from the middle of the drawing, right and down.
    pub offset_px: [f64; 2],
    pub up: Up,
}

/// Finest scale a zoom reaches: one milliarcsecond a pixel.
pub const FINEST_SCALE_RAD: f64 = 4.85e-9;
/// Coarsest scale a zoom reaches; 1000 pixels then show 168 degrees, and the projection stretches beyond use.
pub const COARSEST_SCALE_RAD: f64 = 0.02;

/// A view turned for one sky: knows which position angle is up.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Facing {
    nucleus: Point,
    pixel_scale_rad: f64,
    /// Position angle that points up on the page.
    pub up_position_angle_rad: f64,
    sin_up: f64,
    cos_up: f64,
    mirrored: bool,
}

impl SkyView {
    /// The view a drawing opens with: nucleus in the middle, north up, 5 degrees across the smaller side.
    pub fn start(width_px: f64, height_px: f64) -> Self {
        let pixel_scale_rad = 5.0_f64.to_radians() / width_px.min(height_px).max(1.0);
        SkyView { width_px, height_px, pixel_scale_rad, offset_px: [0.0, 0.0], up: Up::North }
    }

    /// The view that a drawing with a camera opens with: a place `reach_tan` (tangent) from the nucleus is still on it. The
    /// usual five degrees serve a field that fits them and is not lost in them.
    pub fn around(width_px: f64, height_px: f64, reach_tan: f64) -> Self {
        let start = SkyView::start(width_px, height_px);
        let half_px = 0.5 * width_px.min(height_px).max(1.0);
        let share = reach_tan / (half_px * start.pixel_scale_rad);
        if (0.4..=1.0).contains(&share) {
            return start;
        }
        SkyView { pixel_scale_rad: (reach_tan / half_px).clamp(FINEST_SCALE_RAD, COARSEST_SCALE_RAD), ..start }
    }

    /// The view with everything `factor` times larger about a point of the page, which stays where it is.
    /// The scale stops at its limits.
    pub fn zoomed(&self, factor: f64, about: Point) -> Self {
        let pixel_scale_rad = (self.pixel_scale_rad / factor).clamp(FINEST_SCALE_RAD, COARSEST_SCALE_RAD);
        let grown = self.pixel_scale_rad / pixel_scale_rad;
        let nucleus = self.nucleus();
        let middle = self.middle();
        let moved = |axis: usize| about[axis] + (nucleus[axis] - about[axis]) * grown - middle[axis];
        SkyView { pixel_scale_rad, offset_px: [moved(0), moved(1)], ..*self }
    }

    /// The same part of the sky on a drawing of another size; where the shapes differ, more of it.
    pub fn sized(&self, width_px: f64, height_px: f64) -> Self {
        let factor = (width_px / self.width_px).min(height_px / self.height_px);
        let pixel_scale_rad = self.pixel_scale_rad / factor;
        SkyView { width_px, height_px, pixel_scale_rad, offset_px: self.offset_px.map(|px| px * factor), ..*self }
    }

    /// Middle of the drawing.
    pub fn middle(&self) -> Point {
        [self.width_px / 2.0, self.height_px / 2.0]
    }

    /// The nucleus on the page.
    pub fn nucleus(&self) -> Point {
        let middle = self.middle();
        [middle[0] + self.offset_px[0], middle[1] + self.offset_px[1]]
    }

    /// The view turned for `sky`.
    pub fn facing(&self, sky: &Sky) -> Facing {
        let up_position_angle_rad = match self.up {
            Up::North => 0.0,
            Up::Zenith => sky.site.as_ref().and_then(|site| site.zenith_position_angle_rad).unwrap_or(0.0),
            Up::Camera { position_angle_rad, .. } => position_angle_rad,
        };
        let mirrored = matches!(self.up, Up::Camera { mirrored: true, .. });
        let (sin_up, cos_up) = libm::sincos(up_position_angle_rad);
        Facing {
            nucleus: self.nucleus(),
            pixel_scale_rad: self.pixel_scale_rad,
            up_position_angle_rad,
            sin_up,
            cos_up,
            mirrored,
        }
    }

    /// Where a tangent-plane offset falls on the page for `sky`.
    pub fn to_page(&self, sky: &Sky, xi_rad: f64, eta_rad: f64) -> Point {
        self.facing(sky).to_page(xi_rad, eta_rad)
    }

    /// The tangent-plane offset (xi east, eta north) of a point of the page for `sky`.
    pub fn to_sky(&self, sky: &Sky, x_px: f64, y_px: f64) -> [f64; 2] {
        self.facing(sky).to_sky(x_px, y_px)
    }

    /// True angle on the sky from the left to the right edge and from the upper to the lower edge, both
    /// through the middle of the drawing, [0, pi).
    pub fn field_rad(&self) -> [f64; 2] {
        let nucleus = self.nucleus();
        let middle = self.middle();
        let place = |x: f64, y: f64| [(x - nucleus[0]) * self.pixel_scale_rad, (y - nucleus[1]) * self.pixel_scale_rad];
        [
            angle_between(place(0.0, middle[1]), place(self.width_px, middle[1])),
            angle_between(place(middle[0], 0.0), place(middle[0], self.height_px)),
        ]
    }
}

/// Angle on the sphere between two places of the tangent plane.
fn angle_between(a: [f64; 2], b: [f64; 2]) -> f64 {
    let cross = [a[1] - b[1], b[0] - a[0], a[0] * b[1] - a[1] * b[0]];
    let sine = (cross[0] * cross[0] + cross[1] * cross[1] + cross[2] * cross[2]).sqrt();
    libm::atan2(sine, a[0] * b[0] + a[1] * b[1] + 1.0)
}

impl Facing {
    /// The nucleus on the page.
    pub fn nucleus(&self) -> Point {
        self.nucleus
    }

    /// An offset (east, north) turned so that up is up, with east to the left: page right and page up.
    /// Its own inverse but for the turn. The one place where the sky is seen from inside.
    fn leftward(&self, east: f64, north: f64) -> [f64; 2] {
        [if self.mirrored { east } else { -east }, north]
    }

    /// Where a tangent-plane offset (xi east, eta north) falls on the page.
    pub fn to_page(&self, xi_rad: f64, eta_rad: f64) -> Point {
        let step = self.step(xi_rad / self.pixel_scale_rad, eta_rad / self.pixel_scale_rad);
        [self.nucleus[0] + step[0], self.nucleus[1] + step[1]]
    }

    /// The tangent-plane offset (xi east, eta north) of a point of the page.
    pub fn to_sky(&self, x_px: f64, y_px: f64) -> [f64; 2] {
        let right = (x_px - self.nucleus[0]) * self.pixel_scale_rad;
        let above = (self.nucleus[1] - y_px) * self.pixel_scale_rad;
        let [east, north] = self.leftward(right, above);
        [east * self.cos_up + north * self.sin_up, north * self.cos_up - east * self.sin_up]
    }

    /// Unit step on the page along a position angle.
    pub fn direction(&self, position_angle_rad: f64) -> [f64; 2] {
        let (east, north) = libm::sincos(position_angle_rad);
        self.step(east, north)
    }

    fn step(&self, east: f64, north: f64) -> [f64; 2] {
        let turned_east = east * self.cos_up - north * self.sin_up;
        let turned_north = east * self.sin_up + north * self.cos_up;
        let [right, above] = self.leftward(turned_east, turned_north);
        [right, -above]
    }
}
