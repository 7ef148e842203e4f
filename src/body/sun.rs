//! How does the Sun's own globe lie?

use super::AU_KM;
use crate::frame::arc::Legs;
use crate::frame::latitude;
use nalgebra::Vector3;

/// Nominal solar radius, au: 695 700 km (IAU 2015 resolution B3).
pub const RADIUS_AU: f64 = 695_700.0 / AU_KM;

/// The Sun's north pole of rotation, equatorial: right ascension 286.13 deg, declination 63.87 deg (Archinal et al.
/// 2018, report of the IAU working group on cartographic coordinates and rotational elements 2015).
const POLE: Vector3<f64> = Vector3::new(0.122_353_493_472_327_8, -0.423_072_083_647_643_2, 0.897_797_101_060_790_2);

/// Legs of the latitude over the Sun's equator of a heliocentric equatorial place, [-pi/2, pi/2].
pub fn heliographic_latitude(position: &Vector3<f64>) -> Legs {
    latitude(position, &POLE)
}

/// That latitude, [-pi/2, pi/2].
pub fn heliographic_latitude_rad(position: &Vector3<f64>) -> f64 {
    heliographic_latitude(position).arc_rad()
}
