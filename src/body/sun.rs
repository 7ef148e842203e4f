//! How does the Sun's own globe lie?

use nalgebra::Vector3;

/// Latitude over the Sun's equator of a heliocentric equatorial place, [-pi/2, pi/2].
pub fn heliographic_latitude_rad(position: &Vector3<f64>) -> f64 {
    let pole = Vector3::new(0.122, -0.423, 0.898).normalize();
    libm::asin(position.dot(&pole) / position.norm())
}
