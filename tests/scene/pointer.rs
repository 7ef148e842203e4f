//! Does the pointer read the sky right?
//!
//! Truth: places are put down in space, seen from the observer by projection alone, and must come back; and
//! the deprojection table of a real geometry, computed apart from this crate.

use crate::skies;
use nalgebra::Vector3;
use tailvane::frame::tangent::project;
use tailvane::scene::pointer::{Along, Hover, hover};
use tailvane::scene::view::{SkyView, Up};
use tailvane::sky::Sky;

const KM_PER_AU: f64 = 149_597_870.7;

fn view() -> SkyView {
    SkyView { offset_px: [40.0, -25.0], up: Up::North, ..SkyView::start(1024.0, 640.0) }
}

/// The pointer on a point at a heliocentric place.
fn over(sky: &Sky, place_au: &Vector3<f64>) -> Hover {
    let [xi, eta] = project(&(place_au - sky.observer.position_au), &sky.axes).expect("in front of the observer");
    let [x, y] = view().to_page(sky, xi, eta);
    hover(sky, &view(), x, y)
}

fn close(found: f64, expected: f64, relative: f64) -> bool {
    (found / expected - 1.0).abs() < relative
}

#[test]
fn a_point_on_the_antisolar_line_reads_its_own_length() {
    let sky = skies::sky();
    let away = sky.comet.position_au.normalize();
    for length_au in [1e-6, 1e-3, 0.05, 0.4] {
        let under = over(&sky, &(sky.comet.position_au + away * length_au));
        let Along::Km(km) = under.antisolar else { panic!("{under:?}") };
        assert!(close(km, length_au * KM_PER_AU, 1e-7), "{km} for {length_au} au");
    }
}

#[test]
fn a_point_along_negative_velocity_reads_its_own_length_and_lies_in_the_orbit_plane() {
    let sky = skies::sky();
    let back = -sky.comet.velocity_au_d.normalize();
    for length_au in [1e-5, 1e-3, 0.1] {
        let under = over(&sky, &(sky.comet.position_au + back * length_au));
        let Along::Km(km) = under.negative_velocity else { panic!("{under:?}") };
        assert!(close(km, length_au * KM_PER_AU, 1e-7), "{km} for {length_au} au");
        let plane_km = under.orbit_plane_km.expect("the observer stands well off the plane");
        assert!(close(plane_km, length_au * KM_PER_AU, 1e-7), "{plane_km} for {length_au} au");
    }
}

#[test]
fn any_point_of_the_orbit_plane_reads_its_distance_there() {
    let sky = skies::sky();
    let (r, v) = (sky.comet.position_au.normalize(), sky.comet.velocity_au_d.normalize());
    for (a, b) in [(0.01, 0.03), (-0.02, 0.01), (0.005, -0.04)] {
        let offset = r * a + v * b;
        let km = over(&sky, &(sky.comet.position_au + offset)).orbit_plane_km.expect("off the plane");
        assert!(close(km, offset.norm() * KM_PER_AU, 1e-7));
    }
}

/// Source: physics of C/2023 A3 on 2024-10-14.768 TT (phase angle 134.6531 degrees, distance 0.48404526 au), lengths
/// along the antisolar direction found by projecting points of that line back; six figures given, hence 1e-5.
#[test]
fn lengths_along_the_antisolar_direction_agree_with_a_table() {
    let base = skies::sky();
    let sky = Sky { phase_angle_rad: 134.6531_f64.to_radians(), observer_distance_au: 0.484_045_26, ..base };
    let angle = sky.antisolar_position_angle_rad.expect("a direction");
    for (theta_deg, length_au) in [(1.0_f64, 0.011676), (5.0, 0.054794), (10.0, 0.102179), (20.0, 0.182157)] {
        let radius = theta_deg.to_radians().tan();
        let [x, y] = view().to_page(&sky, radius * angle.sin(), radius * angle.cos());
        let Along::Km(km) = hover(&sky, &view(), x, y).antisolar else { panic!("no length at {theta_deg}") };
        assert!(close(km, length_au * KM_PER_AU, 5e-5), "{} au", km / KM_PER_AU);
    }
}

#[test]
fn a_tail_cannot_be_seen_longer_than_its_direction_allows() {
    let base = skies::sky();
    // Phase angle 10: an antisolar tail can never reach 10 degrees.
    let sky = Sky { phase_angle_rad: 10.0_f64.to_radians(), ..base };
    let angle = sky.antisolar_position_angle_rad.expect("a direction");
    let under = |theta_deg: f64| {
        let radius = theta_deg.to_radians().tan();
        let [x, y] = view().to_page(&sky, radius * angle.sin(), radius * angle.cos());
        hover(&sky, &view(), x, y)
    };
    assert!(matches!(under(9.9).antisolar, Along::Km(_)));
    assert_eq!(under(10.1).antisolar, Along::Impossible);
    assert!(under(10.1).words().contains("along the antisolar direction: impossible"));
}

#[test]
fn a_length_along_a_direction_is_given_only_near_it() {
    let sky = skies::sky();
    let angle = sky.antisolar_position_angle_rad.expect("a direction");
    let under = |aside_deg: f64| {
        let there = angle + aside_deg.to_radians();
        let [x, y] = view().to_page(&sky, 1e-3 * there.sin(), 1e-3 * there.cos());
        hover(&sky, &view(), x, y).antisolar
    };
    assert!(matches!(under(4.9), Along::Km(_)) && matches!(under(-4.9), Along::Km(_)));
    assert_eq!(under(5.1), Along::Elsewhere);
    assert_eq!(under(180.0), Along::Elsewhere);
}

#[test]
fn at_a_plane_crossing_there_is_no_length_in_the_plane() {
    let base = skies::sky();
    // The observer moved into the plane: the comet's position and velocity now hold the line of sight.
    let sight = (base.comet.position_au * 0.4 + base.comet.velocity_au_d * 20.0).normalize();
    let axes = tailvane::frame::Axes::at(&sight);
    let sky = Sky { axes, ..base };
    let [x, y] = view().to_page(&sky, 2e-3, 1e-3);
    assert_eq!(hover(&sky, &view(), x, y).orbit_plane_km, None);
}

#[test]
fn on_the_nucleus_the_place_is_the_comets_and_no_angle_is_given() {
    let sky = skies::sky();
    let [x, y] = view().nucleus();
    let under = hover(&sky, &view(), x, y);
    assert_eq!((under.position_angle_rad, under.distance_rad, under.across_km), (None, 0.0, 0.0));
    assert!((under.right_ascension_rad - sky.right_ascension_rad).abs() < 1e-14);
    assert!((under.declination_rad - sky.declination_rad).abs() < 1e-14);
    assert!(under.words().starts_with("on the nucleus\n"));
}

#[test]
fn left_of_the_nucleus_is_east() {
    let sky = skies::sky();
    let [x, y] = view().nucleus();
    let under = hover(&sky, &view(), x - 50.0, y);
    assert!((under.position_angle_rad.expect("an angle").to_degrees() - 90.0).abs() < 1e-9);
    let east = (under.right_ascension_rad - sky.right_ascension_rad).rem_euclid(std::f64::consts::TAU);
    assert!(east > 0.0 && east < 1.0);
    assert!(under.words().starts_with("position angle 90.0°, "));
}
