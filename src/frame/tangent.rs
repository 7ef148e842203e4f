//! Where does a direction fall on the plane that touches the sky at a place?
//!
//! Gnomonic (TAN) projection: xi east, eta north, tangent values (radians near the centre). The position
//! angle from the tangent point is atan2(xi, eta) exactly and the radius is the tangent of the separation.
//! A direction 90 degrees or more away has no image. Source: Calabretta & Greisen 2002 (A&A 395, 1077).

use super::Axes;
use nalgebra::Vector3;

/// Tangent-plane offset (xi east, eta north) of an equatorial direction of any length; None 90 degrees
/// or more from the tangent point.
pub fn project(direction: &Vector3<f64>, axes: &Axes) -> Option<[f64; 2]> {
    let along = direction.dot(&axes.sight);
    // Within rounding of 90 degrees the quotient is noise.
    if along <= 1e-12 * direction.norm() {
        return None;
    }
    Some([direction.dot(&axes.east) / along, direction.dot(&axes.north) / along])
}

/// Unit vector toward a tangent-plane offset (xi east, eta north).
pub fn unproject(xi: f64, eta: f64, axes: &Axes) -> Vector3<f64> {
    let direction = axes.sight + axes.east * xi + axes.north * eta;
    direction / direction.norm()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_lies_behind_has_no_image() {
        let axes = Axes::at(&Vector3::new(0.2, -0.7, 0.4));
        assert_eq!(project(&-axes.sight, &axes), None);
        assert_eq!(project(&axes.east, &axes), None);
    }

    #[test]
    fn unproject_returns_what_was_projected() {
        let axes = Axes::at(&Vector3::new(0.2, -0.7, 0.4));
        for (xi, eta) in [(0.0, 0.0), (1e-6, -2e-6), (0.3, 0.1), (-5.0, 12.0)] {
            let [x, y] = project(&unproject(xi, eta, &axes), &axes).expect("in front");
            assert!((x - xi).abs() <= 1e-14 * (1.0 + xi.abs()) * 10.0 && (y - eta).abs() <= 1e-13 * (1.0 + eta.abs()));
        }
    }
}
