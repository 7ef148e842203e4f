//! Where does the observer stand?
//!
//! A site is WGS84; its place turns with the Earth by [`crate::frame::earth_rotation`]. Accuracy against astropy, 48
//! rows in 1973-2025: 14 m, most of it the polar motion that is left out, and 1 mm/s. UT1 taken as UTC costs up to
//! 0.42 km (2.8e-9 au) at the equator.

use super::ellipsoid::{Geodetic, terrestrial_m};
use super::{AU_KM, State};
use crate::error::{Error, Kind, Place};
use crate::frame::earth_rotation::TURNS_PER_UT1_DAY;
use nalgebra::{Matrix3, Vector3};
use serde::{Deserialize, Serialize};
use std::f64::consts::TAU;
use std::ops::RangeInclusive;

/// A place on the Earth, WGS84, as typed: degrees and metres.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Site {
    #[serde(default)]
    pub name: String,
    /// East positive, -180 to 360.
    pub longitude_deg: f64,
    /// Geodetic latitude, north positive, -90 to 90.
    pub latitude_deg: f64,
    /// Height above the ellipsoid, -10000 to 10000 m.
    #[serde(default)]
    pub height_m: f64,
}

/// Who looks: the centre of the Earth, or a site on it.
#[derive(Clone, Debug, PartialEq)]
pub enum Observer {
    Geocentre,
    Site(Site),
}

/// East longitudes, and those written west negative.
const LONGITUDES_DEG: RangeInclusive<f64> = -180.0..=360.0;
const LATITUDES_DEG: RangeInclusive<f64> = -90.0..=90.0;
/// Wider than any ground, since the height of an observatory whose published constants have three digits comes out
/// wrong by up to 10 km while its place is as good as those digits.
const HEIGHTS_M: RangeInclusive<f64> = -10_000.0..=10_000.0;

impl Site {
    /// # Errors
    /// [`Kind::Range`] for the first field outside its range or not a number; its place is `path`, a point and
    /// the field's name, such as `observer.longitude_deg`.
    pub fn validate(&self, path: &str) -> Result<(), Error> {
        let fields = [
            ("longitude_deg", self.longitude_deg, LONGITUDES_DEG),
            ("latitude_deg", self.latitude_deg, LATITUDES_DEG),
            ("height_m", self.height_m, HEIGHTS_M),
        ];
        for (name, value, range) in fields {
            if !range.contains(&value) {
                return Err(Error::new(
                    Kind::Range,
                    Place::Field(format!("{path}.{name}")),
                    format!("{value}"),
                    format!("a number from {} to {}", range.start(), range.end()),
                ));
            }
        }
        Ok(())
    }

    /// The site in radians.
    pub fn geodetic(&self) -> Geodetic {
        Geodetic {
            longitude_rad: self.longitude_deg.to_radians(),
            latitude_rad: self.latitude_deg.to_radians(),
            height_m: self.height_m,
        }
    }

    /// Place and velocity from the centre of the Earth, equatorial, given the rotation from celestial to terrestrial
    /// components at that moment. The velocity is that of the daily turn.
    pub fn geocentric(&self, celestial_to_terrestrial: &Matrix3<f64>) -> State {
        let fixed_au = terrestrial_m(&self.geodetic()) / (AU_KM * 1000.0);
        let turned_au_d = Vector3::new(-fixed_au.y, fixed_au.x, 0.0) * (TAU * TURNS_PER_UT1_DAY);
        let back = celestial_to_terrestrial.transpose();
        State { position_au: back * fixed_au, velocity_au_d: back * turned_au_d }
    }
}
