//! Where on the Earth's ellipsoid does a place lie?
//!
//! WGS84. Terrestrial components: x toward longitude 0 on the equator, z toward the north pole, metres.

use nalgebra::Vector3;

/// Equatorial radius of WGS84, m.
const RADIUS_M: f64 = 6_378_137.0;
/// Flattening of WGS84.
const FLATTENING: f64 = 1.0 / 298.257_223_563;
/// Square of the eccentricity of a meridian.
const ECCENTRICITY_2: f64 = FLATTENING * (2.0 - FLATTENING);

/// A place on or near the ellipsoid.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Geodetic {
    /// East positive.
    pub longitude_rad: f64,
    /// Of the ellipsoid's normal, north positive, [-pi/2, pi/2].
    pub latitude_rad: f64,
    /// Along that normal.
    pub height_m: f64,
}

/// Terrestrial place of a geodetic one.
pub fn terrestrial_m(place: &Geodetic) -> Vector3<f64> {
    let (sin_lon, cos_lon) = libm::sincos(place.longitude_rad);
    let (sin_lat, cos_lat) = libm::sincos(place.latitude_rad);
    let normal = RADIUS_M / (1.0 - ECCENTRICITY_2 * sin_lat * sin_lat).sqrt();
    let from_axis = (normal + place.height_m) * cos_lat;
    Vector3::new(from_axis * cos_lon, from_axis * sin_lon, (normal * (1.0 - ECCENTRICITY_2) + place.height_m) * sin_lat)
}

/// Geodetic place of a terrestrial one, by Bowring's formula (1985, Survey Review 28, 202): within 1e-10 rad and
/// 1 mm for heights of -100 to 100 km. The poles have longitude 0.
pub fn geodetic(place: &Vector3<f64>) -> Geodetic {
    let from_axis = libm::hypot(place.x, place.y);
    let from_centre = libm::hypot(from_axis, place.z);
    let polar_m = RADIUS_M * (1.0 - FLATTENING);
    let second_eccentricity_2 = ECCENTRICITY_2 / (1.0 - ECCENTRICITY_2);
    // Reduced latitude of the point below, and from it the latitude of the normal.
    let reduced =
        libm::atan2(polar_m * place.z * (1.0 + second_eccentricity_2 * polar_m / from_centre), RADIUS_M * from_axis);
    let (sin_u, cos_u) = libm::sincos(reduced);
    let latitude_rad = libm::atan2(
        place.z + second_eccentricity_2 * polar_m * sin_u * sin_u * sin_u,
        from_axis - ECCENTRICITY_2 * RADIUS_M * cos_u * cos_u * cos_u,
    );
    let (sin_lat, cos_lat) = libm::sincos(latitude_rad);
    let height_m =
        from_axis * cos_lat + place.z * sin_lat - RADIUS_M * (1.0 - ECCENTRICITY_2 * sin_lat * sin_lat).sqrt();
    let longitude_rad = if from_axis == 0.0 { 0.0 } else { libm::atan2(place.y, place.x) };
    Geodetic { longitude_rad, latitude_rad, height_m }
}

/// Geodetic place from an observatory's published constants: its east longitude, and rho cos phi' and rho sin phi',
/// the distances from the Earth's axis and from the equator's plane in radii of 6378.137 km.
pub fn from_parallax_constants(longitude_rad: f64, rho_cos: f64, rho_sin: f64) -> Geodetic {
    let in_plane = geodetic(&Vector3::new(rho_cos * RADIUS_M, 0.0, rho_sin * RADIUS_M));
    Geodetic { longitude_rad, ..in_plane }
}
