//! How do directions turn into angles, and one frame into another?
//!
//! Convention: vectors are right-handed; equatorial means ICRF/J2000, ecliptic means ecliptic and equinox
//! J2000 with the obliquity that comet elements are published for. A position angle runs north through
//! east:
//!
//! ```text
//!            north (eta)
//!              |   / direction
//!              |  /
//!              |~/  position angle
//!    east -----+----- west
//!    (xi)      |
//! ```
//!
//! [`Bearing`] is the only maker of one in the crate.
//!
//! Left out: frame bias between J2000 and ICRF (0.042 arcsec in all), precession of the ecliptic.
//! Sources: IAU 1976 obliquity; spherical formulas as in any textbook, checked against ERFA's unit tests.

pub mod arc;
pub mod earth_rotation;
pub mod horizon;
pub mod tangent;

use arc::Legs;
use nalgebra::Vector3;
use std::f64::consts::TAU;

/// Cosine of 84381.448 arcsec, the J2000 obliquity of the IAU (1976) system, in which comet elements are published.
const COS_OBLIQUITY: f64 = 0.917_482_062_069_181_8;
/// Sine of the same angle.
const SIN_OBLIQUITY: f64 = 0.397_777_155_931_913_7;

/// A direction has no position angle when the sine of its angle to the line of sight is below this: the
/// tabulated Earth alone (4e-9 au) then turns the angle by a radian or so at 1 au.
const LEAST_SINE: f64 = 1e-8;

/// Unit vectors of the plane of the sky at one direction, equatorial.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Axes {
    /// From the observer to the place.
    pub sight: Vector3<f64>,
    pub east: Vector3<f64>,
    pub north: Vector3<f64>,
}

impl Axes {
    /// The axes at a direction (any non-zero length). At a celestial pole, where east and north are
    /// free, right ascension counts as zero.
    pub fn at(direction: &Vector3<f64>) -> Self {
        let sight = direction * (1.0 / direction.norm());
        let from_axis = (sight.x * sight.x + sight.y * sight.y).sqrt();
        let (cos_ra, sin_ra) = if from_axis > 0.0 {
            let scale = 1.0 / from_axis;
            (sight.x * scale, sight.y * scale)
        } else {
            (1.0, 0.0)
        };
        Axes {
            sight,
            east: Vector3::new(-sin_ra, cos_ra, 0.0),
            north: Vector3::new(-sight.z * cos_ra, -sight.z * sin_ra, from_axis),
        }
    }

    /// Legs of the right ascension of the place, whose arc [`unsigned`] finishes.
    pub fn right_ascension(&self) -> Legs {
        Legs { opposite: -self.east.x, adjacent: self.east.y }
    }

    /// Legs of its declination.
    pub fn declination(&self) -> Legs {
        Legs { opposite: self.sight.z, adjacent: self.north.z }
    }
}

/// Length of a vector in a plane. libm's hypot also holds out where squares overflow, and takes a hundred times as long in wasm.
pub fn norm([x, y]: [f64; 2]) -> f64 {
    (x * x + y * y).sqrt()
}

/// Ecliptic to equatorial components of the same vector.
pub fn ecliptic_to_equatorial(v: &Vector3<f64>) -> Vector3<f64> {
    Vector3::new(v.x, v.y * COS_OBLIQUITY - v.z * SIN_OBLIQUITY, v.y * SIN_OBLIQUITY + v.z * COS_OBLIQUITY)
}

/// Equatorial to ecliptic components of the same vector.
pub fn equatorial_to_ecliptic(v: &Vector3<f64>) -> Vector3<f64> {
    Vector3::new(v.x, v.y * COS_OBLIQUITY + v.z * SIN_OBLIQUITY, v.z * COS_OBLIQUITY - v.y * SIN_OBLIQUITY)
}

/// Right ascension of an equatorial vector, [0, 2 pi); zero on the axis.
pub fn right_ascension_rad(v: &Vector3<f64>) -> f64 {
    unsigned(Legs { opposite: v.y, adjacent: v.x }.arc_rad())
}

/// Declination of an equatorial vector, [-pi/2, pi/2]; zero for a zero vector.
pub fn declination_rad(v: &Vector3<f64>) -> f64 {
    Legs { opposite: v.z, adjacent: (v.x * v.x + v.y * v.y).sqrt() }.arc_rad()
}

/// Angle between two vectors, [0, pi], without loss near 0 and pi; zero if either has no length.
pub fn separation_rad(a: &Vector3<f64>, b: &Vector3<f64>) -> f64 {
    separation(a, b).arc_rad()
}

/// Legs of the angle between two vectors.
pub fn separation(a: &Vector3<f64>, b: &Vector3<f64>) -> Legs {
    Legs { opposite: a.cross(b).norm(), adjacent: a.dot(b) }
}

/// Legs of the angle of `v` above (+) the plane whose normal is given, [-pi/2, pi/2].
pub fn latitude(v: &Vector3<f64>, normal: &Vector3<f64>) -> Legs {
    Legs { opposite: v.dot(normal), adjacent: v.cross(normal).norm() }
}

/// How a vector at the place of some axes lies on the sky.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Bearing {
    east: f64,
    north: f64,
    /// Squares of its length across the line of sight, and in all.
    across_square: f64,
    square: f64,
}

impl Bearing {
    pub fn of(v: &Vector3<f64>, axes: &Axes) -> Self {
        let (east, north) = (v.dot(&axes.east), v.dot(&axes.north));
        Bearing { east, north, across_square: east * east + north * north, square: v.norm_squared() }
    }

    /// Sine of the angle to the line of sight, [0, 1]; zero for a zero vector.
    pub fn sine_to_sight(&self) -> f64 {
        if self.square > 0.0 { (self.across_square / self.square).sqrt() } else { 0.0 }
    }

    /// Whether that sine reaches `sine`, without a root; never for a zero vector.
    pub fn reaches(&self, sine: f64) -> bool {
        self.square > 0.0 && self.across_square >= sine * sine * self.square
    }

    /// Position angle of a small displacement along the vector: north through east, [0, 2 pi). None when it has
    /// no length or lies along the line of sight to within 1e-8 rad.
    pub fn position_angle_rad(&self) -> Option<f64> {
        self.position_angle_of(self.legs().arc_rad())
    }

    /// The legs whose arc [`Bearing::position_angle_of`] wants, for several bearings at a time: the parts of the vector
    /// to the east (opposite) and to the north (adjacent).
    pub fn legs(&self) -> Legs {
        Legs { opposite: self.east, adjacent: self.north }
    }

    /// The position angle, given the arc of [`Bearing::legs`].
    pub fn position_angle_of(&self, arc_rad: f64) -> Option<f64> {
        self.reaches(LEAST_SINE).then(|| unsigned(arc_rad))
    }
}

/// Position angle of a small displacement along `v` at the place of `axes`; see [`Bearing`].
pub fn position_angle_rad(v: &Vector3<f64>, axes: &Axes) -> Option<f64> {
    Bearing::of(v, axes).position_angle_rad()
}

/// An angle brought into [0, 2 pi).
pub fn turn(angle_rad: f64) -> f64 {
    let turned = angle_rad - TAU * (angle_rad / TAU).floor();
    // The subtraction of a tiny negative angle rounds to exactly 2 pi.
    if turned >= TAU { 0.0 } else { turned }
}

/// An arc in [-pi, pi] brought into [0, 2 pi): [`turn`] without its division.
pub fn unsigned(arc_rad: f64) -> f64 {
    let turned = arc_rad + if arc_rad < 0.0 { TAU } else { 0.0 };
    if turned >= TAU { 0.0 } else { turned }
}

/// An angle brought into (-pi, pi].
pub fn half_turn(angle_rad: f64) -> f64 {
    let turned = turn(angle_rad);
    if turned > std::f64::consts::PI { turned - TAU } else { turned }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_tiny_negative_angle_turns_to_zero_not_to_a_whole_turn() {
        assert_eq!(turn(-1e-20), 0.0);
        assert_eq!(turn(TAU), 0.0);
        assert!((turn(-0.5) - (TAU - 0.5)).abs() < 1e-15);
        assert_eq!(half_turn(std::f64::consts::PI), std::f64::consts::PI);
    }

    #[test]
    fn axes_are_right_handed_at_both_poles_and_between() {
        for direction in [Vector3::z(), -Vector3::z(), Vector3::new(0.3, -0.4, 0.2), Vector3::new(1e-300, 0.0, -1.0)] {
            let axes = Axes::at(&direction);
            // East to the left of north as seen from inside: east x north points at the place.
            assert!((axes.east.cross(&axes.north) - axes.sight).norm() < 1e-15);
        }
    }

    #[test]
    fn a_vector_along_the_line_of_sight_has_no_position_angle() {
        let axes = Axes::at(&Vector3::new(1.0, 2.0, 3.0));
        assert_eq!(position_angle_rad(&(axes.sight * -2.0), &axes), None);
        assert_eq!(position_angle_rad(&Vector3::zeros(), &axes), None);
        let quarter = position_angle_rad(&axes.east, &axes).expect("east has a position angle");
        assert!((quarter - TAU / 4.0).abs() < 1e-15);
    }
}
