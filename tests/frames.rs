//! Frames and angles against ERFA, astropy, wcslib and SPICE and 40-digit arithmetic (tests/truth/make_frames.py).

#[path = "truth/rows.rs"]
mod rows;

use nalgebra::{Matrix3, Vector3};
use rows::{Row, table};
use std::f64::consts::{PI, TAU};
use tailvane::frame::arc::Legs;
use tailvane::frame::horizon::Horizon;
use tailvane::frame::{
    Axes, ecliptic_to_equatorial, equatorial_to_ecliptic, position_angle_rad, separation_rad, tangent,
};

/// Unit vector toward longitude and latitude; a latitude beyond the pole goes over it, as in ERFA.
fn toward(lon_rad: f64, lat_rad: f64) -> Vector3<f64> {
    let (sin_lon, cos_lon) = libm::sincos(lon_rad);
    let (sin_lat, cos_lat) = libm::sincos(lat_rad);
    Vector3::new(cos_lat * cos_lon, cos_lat * sin_lon, sin_lat)
}

/// The smallest distance between two angles.
fn between(a_rad: f64, b_rad: f64) -> f64 {
    let turns = (a_rad - b_rad) / TAU;
    (turns - turns.round()).abs() * TAU
}

fn ends(row: &Row) -> (Vector3<f64>, Vector3<f64>) {
    let [a_lon, a_lat, b_lon, b_lat] = row.numbers(["a_lon_rad", "a_lat_rad", "b_lon_rad", "b_lat_rad"]);
    (toward(a_lon, a_lat), toward(b_lon, b_lat))
}

/// Rows of position_angles.csv at which `angle` is off. Tolerance as the table says.
fn position_angle_misses(angle: impl Fn(&Vector3<f64>, &Axes) -> Option<f64>) -> usize {
    let miss = |row: &&Row| {
        let (a, b) = ends(row);
        let got = angle(&b, &Axes::at(&a)).expect("two different points");
        between(got, row.number("position_angle_rad"))
            > 1e-12_f64.max(1e-15 / libm::sin(row.number("separation_rad")).abs())
    };
    table("position_angles.csv").iter().filter(miss).count()
}

#[test]
fn position_angles_equal_erfa() {
    assert_eq!(position_angle_misses(position_angle_rad), 0);
}

#[test]
fn a_mirrored_or_reversed_position_angle_would_be_seen() {
    let rows = table("position_angles.csv").len();
    // Due north and due south look the same in a mirror.
    assert_eq!(position_angle_misses(|v, axes| position_angle_rad(v, axes).map(|angle| TAU - angle)), rows - 2);
    assert_eq!(position_angle_misses(|v, axes| position_angle_rad(&-v, axes)), rows);
}

/// Rows of arcs.csv at which `arc` is off by more than two units in the last place.
fn arc_misses(arc: impl Fn(Legs) -> f64) -> usize {
    let miss = |row: &&Row| {
        let [opposite, adjacent, arc_rad] = row.numbers(["opposite", "adjacent", "arc_rad"]);
        let unit = f64::from_bits(arc_rad.abs().to_bits() + 1) - arc_rad.abs();
        (arc(Legs { opposite, adjacent }) - arc_rad).abs() > 2.0 * unit
    };
    table("arcs.csv").iter().filter(miss).count()
}

#[test]
fn arcs_equal_40_digit_arithmetic() {
    assert_eq!(arc_misses(Legs::arc_rad), 0);
}

#[test]
fn an_arc_of_exchanged_legs_or_off_by_an_attoturn_would_be_seen() {
    let rows = table("arcs.csv").len();
    let exchanged = |legs: Legs| Legs { opposite: legs.adjacent, adjacent: legs.opposite }.arc_rad();
    // Equal legs of one sign look the same exchanged, and so does nearly the diagonal: seven units off it is seen.
    assert!(arc_misses(exchanged) > rows * 9 / 10);
    assert!(arc_misses(|legs| legs.arc_rad() * (1.0 + 8.0 * f64::EPSILON)) > rows * 9 / 10);
}

#[test]
fn arcs_side_by_side_have_the_bits_of_arcs_alone_and_agree_with_libm() {
    let rows = table("arcs.csv");
    for eleven in rows.windows(11) {
        let legs: [Legs; 11] = std::array::from_fn(|n| Legs {
            opposite: eleven[n].number("opposite"),
            adjacent: eleven[n].number("adjacent"),
        });
        let together = Legs::arcs_rad(legs);
        for (legs, arc) in legs.into_iter().zip(together) {
            assert_eq!(arc.to_bits(), legs.arc_rad().to_bits());
            assert!((arc - libm::atan2(legs.opposite, legs.adjacent)).abs() <= 4.0 * f64::EPSILON * arc.abs());
        }
    }
    assert_eq!(Legs { opposite: 0.0, adjacent: 0.0 }.arc_rad(), 0.0);
}

#[test]
fn separations_equal_erfa() {
    for row in table("position_angles.csv") {
        let (a, b) = ends(&row);
        let miss = (separation_rad(&a, &b) - row.number("separation_rad")).abs();
        assert!(miss <= 1e-12, "{}: {miss:e}", row.text("why"));
    }
}

/// Rows of tangent.csv at which the projection, or the way back, is off.
fn tangent_misses(
    project: impl Fn(&Vector3<f64>, &Axes) -> [f64; 2],
    unproject: impl Fn(f64, f64, &Axes) -> Vector3<f64>,
) -> usize {
    let miss = |row: &&Row| {
        let [lon, lat, lon0, lat0, xi, eta] = row.numbers(["lon_rad", "lat_rad", "lon0_rad", "lat0_rad", "xi", "eta"]);
        // At the pole itself the axes are those of right ascension zero; the row asks for that.
        let tangent_point = if lat0 == PI / 2.0 { Vector3::z() } else { toward(lon0, lat0) };
        let axes = Axes::at(&tangent_point);
        let [x, y] = project(&toward(lon, lat), &axes);
        let there = separation_rad(&unproject(xi, eta, &axes), &toward(lon, lat));
        // A tangent magnifies by one plus its square.
        let limit = 1e-12 * (1.0 + xi * xi + eta * eta);
        (x - xi).abs() > limit || (y - eta).abs() > limit || there > 1e-12
    };
    table("tangent.csv").iter().filter(miss).count()
}

#[test]
fn the_tangent_plane_and_its_inverse_equal_erfa_and_wcslib() {
    assert_eq!(tangent_misses(|v, axes| tangent::project(v, axes).expect("in front"), tangent::unproject), 0);
}

#[test]
fn a_mirrored_tangent_plane_would_be_seen() {
    let mirrored = |v: &Vector3<f64>, axes: &Axes| tangent::project(v, axes).map(|[x, y]| [-x, y]).expect("in front");
    // One point lies due south of its tangent point, where a mirror changes nothing.
    assert_eq!(tangent_misses(mirrored, tangent::unproject), table("tangent.csv").len() - 1);
    assert_eq!(
        tangent_misses(
            |v, axes| tangent::project(v, axes).expect("in front"),
            |xi, eta, axes| tangent::unproject(-xi, eta, axes)
        ),
        table("tangent.csv").len() - 1
    );
}

/// Rows of ecliptic.csv at which a rotation to equatorial axes is off by more than the rounding of two products.
fn rotation_misses(rotate: impl Fn(&Vector3<f64>) -> Vector3<f64>) -> usize {
    let miss = |row: &&Row| {
        let ecliptic = Vector3::from(row.numbers(["x_ecliptic", "y_ecliptic", "z_ecliptic"]));
        let equatorial = Vector3::from(row.numbers(["x", "y", "z"]));
        (rotate(&ecliptic) - equatorial).norm() > 1e-15 * ecliptic.norm()
    };
    table("ecliptic.csv").iter().filter(miss).count()
}

#[test]
fn ecliptic_to_equatorial_equals_spice_and_returns() {
    assert_eq!(rotation_misses(ecliptic_to_equatorial), 0);
    for row in table("ecliptic.csv") {
        let ecliptic = Vector3::from(row.numbers(["x_ecliptic", "y_ecliptic", "z_ecliptic"]));
        assert!(
            (equatorial_to_ecliptic(&ecliptic_to_equatorial(&ecliptic)) - ecliptic).norm() <= 1e-15 * ecliptic.norm()
        );
    }
}

#[test]
fn a_wrong_sign_or_another_obliquity_would_be_seen() {
    let moved = table("ecliptic.csv").len() - 1; // the equinox itself does not move
    assert_eq!(rotation_misses(equatorial_to_ecliptic), moved);
    // The obliquity of IAU 2006 is 0.042 arcsec less.
    let newer = (84381.406_f64 / 3600.0).to_radians();
    let (sin, cos) = libm::sincos(newer);
    let turn = Matrix3::new(1.0, 0.0, 0.0, 0.0, cos, -sin, 0.0, sin, cos);
    assert_eq!(rotation_misses(|v| turn * v), moved);
}

/// Rows of horizon.csv at which altitude, azimuth or the zenith's position angle is off, for a longitude
/// taken with the sign `longitude_sign`.
fn horizon_misses(longitude_sign: f64) -> usize {
    let longitude = 0.7;
    let miss = |row: &&Row| {
        let [hour_angle, declination, latitude] = row.numbers(["hour_angle_rad", "declination_rad", "latitude_rad"]);
        // No rotation of the Earth: the local meridian lies at right ascension = longitude.
        let horizon = Horizon::at(longitude_sign * longitude, latitude, &Matrix3::identity());
        let direction = toward(longitude - hour_angle, declination);
        let altitude = (horizon.altitude_rad(&direction) - row.number("altitude_rad")).abs();
        let azimuth = between(horizon.azimuth_rad(&direction).expect("not at the zenith"), row.number("azimuth_rad"));
        let zenith = between(
            position_angle_rad(&horizon.up, &Axes::at(&direction)).expect("not at the zenith"),
            row.number("zenith_position_angle_rad"),
        );
        altitude > 1e-12 || azimuth > 1e-12 || zenith > 1e-12
    };
    table("horizon.csv").iter().filter(miss).count()
}

#[test]
fn altitude_azimuth_and_the_zenith_equal_erfa() {
    assert_eq!(horizon_misses(1.0), 0);
}

#[test]
fn a_longitude_of_the_wrong_sign_would_be_seen() {
    assert_eq!(horizon_misses(-1.0), table("horizon.csv").len());
}
