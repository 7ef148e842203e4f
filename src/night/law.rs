//! What counts as dark, as up, as sharp?
//!
//! The plan's `night` section. Every key may be left out.

use crate::error::{Error, Kind, Place};
use crate::sky::dark::{self, Limits};
use serde::{Deserialize, Serialize};

/// A star may smear over this many pixels unless the plan says otherwise.
const TRAIL_PX: f64 = 1.0;

/// The plan's `night` section.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct NightLaw {
    /// Dark time: the Sun below this altitude, degrees.
    pub sun_below_deg: f64,
    /// Dark time: the comet above this altitude, degrees.
    pub comet_above_deg: f64,
    /// Scale of the pictures, arcsec per pixel, if known.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub pixel_scale_arcsec: Option<f64>,
    /// How far the comet may move among the stars in one exposure, pixels.
    pub longest_trail_px: f64,
}

impl Default for NightLaw {
    fn default() -> Self {
        NightLaw {
            sun_below_deg: dark::SUN_BELOW_DEG,
            comet_above_deg: dark::COMET_ABOVE_DEG,
            pixel_scale_arcsec: None,
            longest_trail_px: TRAIL_PX,
        }
    }
}

impl NightLaw {
    /// Whether nothing was changed, so that a plan need not say it.
    pub fn is_default(&self) -> bool {
        *self == NightLaw::default()
    }

    pub fn limits(&self) -> Limits {
        Limits { sun_below_deg: self.sun_below_deg, comet_above_deg: self.comet_above_deg }
    }

    /// # Errors
    /// The first key outside its range, at its path below `night`.
    pub fn validate(&self) -> Result<(), Error> {
        let check = |key: &str, value: f64, least: f64, greatest: f64| {
            if (least..=greatest).contains(&value) {
                return Ok(());
            }
            let place = Place::Field(format!("night.{key}"));
            Err(Error::new(Kind::Range, place, value.to_string(), format!("a number from {least} to {greatest}")))
        };
        check("sun_below_deg", self.sun_below_deg, -90.0, 0.0)?;
        check("comet_above_deg", self.comet_above_deg, 0.0, 89.0)?;
        if let Some(scale) = self.pixel_scale_arcsec {
            check("pixel_scale_arcsec", scale, 0.001, 10_000.0)?;
        }
        check("longest_trail_px", self.longest_trail_px, 0.01, 1000.0)
    }

    /// The longest exposure that follows the stars and smears the comet by no more than the law allows, or follows the comet
    /// and smears the stars so, seconds; None without a scale, or for a comet that stands still.
    pub fn longest_exposure_s(&self, motion_rad_d: f64) -> Option<f64> {
        let arcsec_s = motion_rad_d.to_degrees() * 3600.0 / 86_400.0;
        let seconds = self.longest_trail_px * self.pixel_scale_arcsec? / arcsec_s;
        seconds.is_finite().then_some(seconds)
    }
}
