//! Which part of the sky does a camera take in, and where on its chip do the tails lie?
//!
//! The plan's sections `camera` (the one in use) and `cameras` (others, kept by name). [`field`] lays the chip on the sky,
//! [`subject`] says what of the tails is to be held, [`fit`] finds the placement that holds it, [`turn`] follows the field
//! through a night on each kind of mount.
//!
//! Convention: the chip is a gnomonic picture about its middle. Pixels are counted from that middle, right and up as the
//! image is looked at. The position angle of image up is that of the image's upright at the middle, J2000.
//!
//! ```text
//!   as on the sky                 mirror-reversed
//!        N up                          N up
//!   E    +    W                   W    +    E
//! ```
//!
//! Left out: distortion of the optics, refraction, aberration (they move all of a field by 20 arcsec at most, alike).

pub mod field;
pub mod fit;
pub mod hull;
pub mod subject;
pub mod turn;

use crate::error::{Error, Kind, Place};
use crate::frame::earth_rotation::ARCSEC_RAD;
use serde::{Deserialize, Serialize};

/// How a camera is carried through the night.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Mount {
    /// Turns about the pole: the field keeps its position angle.
    #[default]
    Equatorial,
    /// Follows in altitude and azimuth: the field turns with the zenith.
    Altazimuth,
    /// Does not follow: the sky drifts through the field.
    FixedTripod,
}

/// A camera, as typed. The scale is given in exactly one way: by pixel size and focal length, or by itself.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Camera {
    #[serde(default)]
    pub name: String,
    pub pixels_wide: u32,
    pub pixels_high: u32,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub pixel_size_um: Option<f64>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub focal_length_mm: Option<f64>,
    /// At the middle of the chip.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub scale_arcsec_per_pixel: Option<f64>,
    /// Position angle of image up at the middle of the chip, J2000, for the plan's time.
    #[serde(default)]
    pub image_up_position_angle_deg: f64,
    /// Whether the image is mirror-reversed: with north up, east is to the right.
    #[serde(default)]
    pub mirrored: bool,
    /// The nucleus from the middle of the chip, pixels to the right and up in the image.
    #[serde(default)]
    pub nucleus_right_px: f64,
    #[serde(default)]
    pub nucleus_up_px: f64,
    #[serde(default)]
    pub mount: Mount,
    /// Reading of the rotator plus this is the position angle of image up.
    #[serde(default)]
    pub rotator_offset_deg: f64,
}

const MOST_PIXELS: u32 = 100_000;
const SCALES_ARCSEC: [f64; 2] = [0.001, 3600.0];
/// A chip takes in at most 120 degrees from corner to corner: beyond, no lens draws gnomonically.
const WIDEST_TAN: f64 = 1.732_050_807_568_877_2;
/// The nucleus stands at most 79 degrees from the middle.
const FARTHEST_TAN: f64 = 5.0;
const LONGEST_NAME: usize = 80;

impl Camera {
    /// # Errors
    /// [`Kind::Range`] for the first value outside its range, or a scale given in no way or in two; its place is `path`, a
    /// point and the field's name, such as `camera.pixels_wide`.
    pub fn validate(&self, path: &str) -> Result<(), Error> {
        let refuse = |key: &str, found: String, allowed: String| {
            Err(Error::new(Kind::Range, Place::Field(format!("{path}.{key}")), found, allowed))
        };
        if self.name.chars().count() > LONGEST_NAME || self.name.chars().any(char::is_control) {
            let found = format!("a name of {} characters", self.name.chars().count());
            return refuse("name", found, format!("at most {LONGEST_NAME} characters on one line"));
        }
        for (key, pixels) in [("pixels_wide", self.pixels_wide), ("pixels_high", self.pixels_high)] {
            if !(1..=MOST_PIXELS).contains(&pixels) {
                return refuse(key, format!("{pixels} pixels"), format!("a whole number from 1 to {MOST_PIXELS}"));
            }
        }
        if let Err((key, found)) = self.one_scale() {
            let allowed = "pixel_size_um with focal_length_mm, or scale_arcsec_per_pixel alone".to_owned();
            return refuse(key, found.to_owned(), allowed);
        }
        let numbers = [
            ("pixel_size_um", self.pixel_size_um.unwrap_or(1.0), [0.1, 1000.0]),
            ("focal_length_mm", self.focal_length_mm.unwrap_or(1.0), [1.0, 100_000.0]),
            ("scale_arcsec_per_pixel", self.scale_arcsec_per_pixel.unwrap_or(1.0), SCALES_ARCSEC),
            ("image_up_position_angle_deg", self.image_up_position_angle_deg, [-360.0, 360.0]),
            ("rotator_offset_deg", self.rotator_offset_deg, [-360.0, 360.0]),
            ("nucleus_right_px", self.nucleus_right_px, [-1e6, 1e6]),
            ("nucleus_up_px", self.nucleus_up_px, [-1e6, 1e6]),
        ];
        for (key, value, [least, greatest]) in numbers {
            if !(least..=greatest).contains(&value) {
                return refuse(key, value.to_string(), format!("a number from {least} to {greatest}"));
            }
        }
        let key = if self.scale_arcsec_per_pixel.is_some() { "scale_arcsec_per_pixel" } else { "focal_length_mm" };
        let arcsec = self.scale_tan() / ARCSEC_RAD;
        if !(SCALES_ARCSEC[0]..=SCALES_ARCSEC[1]).contains(&arcsec) {
            let [least, greatest] = SCALES_ARCSEC;
            return refuse(
                key,
                format!("{arcsec:.4} arcsec per pixel"),
                format!("{least} to {greatest} arcsec per pixel"),
            );
        }
        let half = self.half_px();
        let corner = libm::hypot(half[0], half[1]) * self.scale_tan();
        if corner > WIDEST_TAN {
            let found =
                format!("a field of {:.0} degrees from corner to corner", 2.0 * libm::atan(corner).to_degrees());
            return refuse(key, found, "a field of at most 120 degrees from corner to corner".to_owned());
        }
        let away = libm::hypot(self.nucleus_right_px, self.nucleus_up_px) * self.scale_tan();
        if away > FARTHEST_TAN {
            let found = format!("a nucleus {:.0} degrees from the middle", libm::atan(away).to_degrees());
            return refuse("nucleus_right_px", found, "a nucleus within 78 degrees of the middle".to_owned());
        }
        Ok(())
    }

    /// Whether the scale is given in exactly one way; if not, where and what was found.
    fn one_scale(&self) -> Result<(), (&'static str, &'static str)> {
        match (self.pixel_size_um, self.focal_length_mm, self.scale_arcsec_per_pixel) {
            (Some(_), Some(_), None) | (None, None, Some(_)) => Ok(()),
            (None, None, None) => Err(("scale_arcsec_per_pixel", "no scale")),
            (Some(_), None, None) => Err(("focal_length_mm", "a pixel size without a focal length")),
            (None, Some(_), None) => Err(("pixel_size_um", "a focal length without a pixel size")),
            _ => Err(("scale_arcsec_per_pixel", "the scale given twice")),
        }
    }

    /// Tangent units (radians at the middle) per pixel, of a valid camera.
    pub fn scale_tan(&self) -> f64 {
        match (self.scale_arcsec_per_pixel, self.pixel_size_um, self.focal_length_mm) {
            (Some(arcsec), _, _) => arcsec * ARCSEC_RAD,
            (None, Some(size_um), Some(focal_mm)) => size_um / (1000.0 * focal_mm),
            _ => f64::NAN,
        }
    }

    /// From the middle to the right and to the upper edge, pixels.
    pub fn half_px(&self) -> [f64; 2] {
        [0.5 * f64::from(self.pixels_wide), 0.5 * f64::from(self.pixels_high)]
    }

    /// How far from the nucleus the field reaches, tangent units, as drawn about a nucleus not far from the chip.
    pub fn reach_tan(&self) -> f64 {
        let half = self.half_px();
        let diagonal = libm::hypot(half[0], half[1]);
        let away = libm::hypot(self.nucleus_right_px, self.nucleus_up_px);
        (diagonal + away.min(2.0 * diagonal)) * self.scale_tan()
    }

    pub fn shorter_side_px(&self) -> f64 {
        f64::from(self.pixels_wide.min(self.pixels_high))
    }

    /// What the rotator reads for this rotation, degrees, [0, 360).
    pub fn rotator_reading_deg(&self) -> f64 {
        turn_deg(self.image_up_position_angle_deg - self.rotator_offset_deg)
    }

    /// The same camera with the scale of another focal length, tangent units per pixel.
    pub fn rescaled(&self, scale_tan: f64) -> Camera {
        let mut camera = self.clone();
        match self.pixel_size_um {
            Some(size_um) => camera.focal_length_mm = Some(size_um / (1000.0 * scale_tan)),
            None => camera.scale_arcsec_per_pixel = Some(scale_tan / ARCSEC_RAD),
        }
        camera
    }
}

/// Degrees brought into [0, 360), digits as typed where they lie there already.
pub fn turn_deg(angle_deg: f64) -> f64 {
    let turned = angle_deg - 360.0 * (angle_deg / 360.0).floor();
    // A tiny negative number rounds to 360.
    if turned >= 360.0 { 0.0 } else { turned }
}
