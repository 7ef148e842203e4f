//! How high and in which direction does something stand for a site?
//!
//! Airless: no refraction. Azimuth runs north through east.

use super::turn;
use nalgebra::{Matrix3, Vector3};

/// The axes of a site's horizon, as unit vectors in celestial (equatorial) components.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Horizon {
    pub east: Vector3<f64>,
    pub north: Vector3<f64>,
    /// Along the ellipsoid's outward normal.
    pub up: Vector3<f64>,
}

impl Horizon {
    /// The horizon of a geodetic longitude (east positive) and latitude, given the rotation from
    /// celestial to terrestrial components at that moment.
    pub fn at(longitude_rad: f64, latitude_rad: f64, celestial_to_terrestrial: &Matrix3<f64>) -> Self {
        let (sin_lon, cos_lon) = libm::sincos(longitude_rad);
        let (sin_lat, cos_lat) = libm::sincos(latitude_rad);
        let back = celestial_to_terrestrial.transpose();
        Horizon {
            east: back * Vector3::new(-sin_lon, cos_lon, 0.0),
            north: back * Vector3::new(-sin_lat * cos_lon, -sin_lat * sin_lon, cos_lat),
            up: back * Vector3::new(cos_lat * cos_lon, cos_lat * sin_lon, sin_lat),
        }
    }

    /// Altitude of a celestial direction of any length, [-pi/2, pi/2].
    pub fn altitude_rad(&self, direction: &Vector3<f64>) -> f64 {
        let level = libm::hypot(direction.dot(&self.east), direction.dot(&self.north));
        libm::atan2(direction.dot(&self.up), level)
    }

    /// Azimuth of a celestial direction of any length, [0, 2 pi); None within 1e-8 rad of zenith or nadir.
    pub fn azimuth_rad(&self, direction: &Vector3<f64>) -> Option<f64> {
        let (east, north) = (direction.dot(&self.east), direction.dot(&self.north));
        if libm::hypot(east, north) < 1e-8 * direction.norm() {
            return None;
        }
        Some(turn(libm::atan2(east, north)))
    }
}
