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

/// Unit vector toward the tangent point at which `direction` has the offset (xi east, eta north). Of the two that there may be
/// near a pole, the one from which the way to the direction does not lead over it; None where there is none, since
/// the direction stands nearer to a pole than xi asks for. Source: the relations of the spherical triangle, as in ERFA's tpors.
pub fn tangent_point(direction: &Vector3<f64>, xi: f64, eta: f64) -> Option<Vector3<f64>> {
    // The offset vector, sight + xi east + eta north, has this length, and lies along the direction.
    let to = direction * ((1.0 + xi * xi + eta * eta).sqrt() / direction.norm());
    let from_axis = (to.x * to.x + to.y * to.y).sqrt();
    let square = from_axis * from_axis - xi * xi;
    if square < 0.0 {
        return None;
    }
    let along = square.sqrt();
    let one = 1.0 + eta * eta;
    let (sine, cosine) = ((to.z - eta * along) / one, (along + to.z * eta) / one);
    // A negative cosine is a tangent point beyond the pole, where north would be south.
    if cosine < 0.0 {
        return None;
    }
    // The tangent point's meridian is turned from the direction's by the angle whose tangent is xi / along.
    let (cos_ra, sin_ra) = if from_axis > 0.0 { (to.x / from_axis, to.y / from_axis) } else { (1.0, 0.0) };
    let (cos_turn, sin_turn) = if from_axis > 0.0 { (along / from_axis, xi / from_axis) } else { (1.0, 0.0) };
    let (x, y) = (cos_ra * cos_turn + sin_ra * sin_turn, sin_ra * cos_turn - cos_ra * sin_turn);
    Some(Vector3::new(cosine * x, cosine * y, sine))
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
