//! Is a camera of the plan read, printed, and refused where it is wrong?

use crate::camera;
use proptest::prelude::*;
use tailvane::camera::{Camera, Mount};
use tailvane::error::Place;
use tailvane::plan::Plan;

const PLAN: &str = r#"{ "tailvane_plan": 1, "comet": { "name": "Invented comet", "elements": {
    "perihelion_distance_au": 0.52, "eccentricity": 1.0003, "inclination_deg": 61.2, "ascending_node_deg": 201.9,
    "argument_of_perihelion_deg": 33.4, "perihelion_time": "2031-03-04.51732 TT" } },
    "camera": { "name": "Invented camera", "pixels_wide": 6000, "pixels_high": 4000, "pixel_size_um": 3.8, "focal_length_mm": 300 } }"#;

/// Cameras that are valid.
pub fn cameras() -> impl Strategy<Value = Camera> {
    let scale = prop_oneof![
        (0.5..15.0_f64, 20.0..3000.0_f64).prop_map(|(size, focal)| (Some(size), Some(focal), None)),
        (0.05..100.0_f64).prop_map(|scale| (None, None, Some(scale))),
    ];
    let mount = prop::sample::select(vec![Mount::Equatorial, Mount::Altazimuth, Mount::FixedTripod]);
    let turn = (-360.0..=360.0_f64, any::<bool>(), -360.0..=360.0_f64);
    ("[a-z ]{0,20}", 1..9000_u32, 1..9000_u32, scale, turn, (-0.8..0.8_f64, -0.8..0.8_f64), mount)
        .prop_map(|(name, pixels_wide, pixels_high, scale, turn, at, mount)| Camera {
            name,
            pixels_wide,
            pixels_high,
            pixel_size_um: scale.0,
            focal_length_mm: scale.1,
            scale_arcsec_per_pixel: scale.2,
            image_up_position_angle_deg: turn.0,
            mirrored: turn.1,
            nucleus_right_px: at.0 * f64::from(pixels_wide),
            nucleus_up_px: at.1 * f64::from(pixels_high),
            mount,
            rotator_offset_deg: turn.2,
        })
        .prop_filter("too wide for one picture", |camera| camera.validate("camera").is_ok())
}

/// Asserts that the camera with this change is refused at this key, in these words.
fn refuses(change: impl Fn(&mut Camera), key: &str, parts: &[&str]) {
    let mut wrong = camera(6000, 4000, 2.0);
    change(&mut wrong);
    let error = wrong.validate("cameras[1]").expect_err(key);
    assert_eq!(error.place, Place::Field(format!("cameras[1].{key}")), "{error}");
    for part in parts {
        assert!(error.to_string().contains(part), "{error}: wanted {part}");
    }
}

#[test]
fn a_wrong_camera_is_refused_at_its_field() {
    refuses(|c| c.pixels_wide = 0, "pixels_wide", &["0 pixels", "1 to 100000"]);
    refuses(|c| c.pixels_high = 100_001, "pixels_high", &["1 to 100000"]);
    refuses(|c| c.scale_arcsec_per_pixel = None, "scale_arcsec_per_pixel", &["no scale", "focal_length_mm"]);
    refuses(|c| c.pixel_size_um = Some(3.8), "scale_arcsec_per_pixel", &["given twice"]);
    refuses(|c| c.scale_arcsec_per_pixel = Some(0.0), "scale_arcsec_per_pixel", &["0.001 to 3600"]);
    refuses(|c| c.scale_arcsec_per_pixel = Some(f64::NAN), "scale_arcsec_per_pixel", &["NaN"]);
    refuses(|c| c.scale_arcsec_per_pixel = Some(300.0), "scale_arcsec_per_pixel", &["corner to corner", "120 degrees"]);
    refuses(|c| c.image_up_position_angle_deg = f64::NAN, "image_up_position_angle_deg", &["NaN", "-360 to 360"]);
    refuses(|c| c.rotator_offset_deg = f64::INFINITY, "rotator_offset_deg", &["inf"]);
    refuses(|c| c.nucleus_up_px = f64::NAN, "nucleus_up_px", &["NaN"]);
    refuses(|c| c.nucleus_right_px = 9e5, "nucleus_right_px", &["within 78 degrees"]);
    refuses(|c| c.name = "x".repeat(81), "name", &["81 characters"]);
    let half = |c: &mut Camera| (c.scale_arcsec_per_pixel, c.pixel_size_um) = (None, Some(4.0));
    refuses(half, "focal_length_mm", &["without a focal length"]);
    let absurd = |c: &mut Camera| {
        (c.scale_arcsec_per_pixel, c.pixel_size_um, c.focal_length_mm) = (None, Some(0.1), Some(100_000.0));
    };
    refuses(absurd, "focal_length_mm", &["arcsec per pixel", "0.001 to 3600"]);
}

#[test]
fn a_plan_names_the_place_of_a_wrong_camera() {
    let plan = Plan::parse(PLAN).expect("a plan");
    assert_eq!(plan.camera.as_ref().map(|c| (c.pixels_wide, c.mount)), Some((6000, Mount::Equatorial)));
    for (from, to, parts) in [
        ("\"pixels_wide\": 6000", "\"pixels_wide\": 0", ["camera.pixels_wide", "line 4, column 59"]),
        ("\"pixels_wide\": 6000", "\"pixels_wide\": 1.5", ["camera.pixels_wide", "a whole number"]),
        ("\"pixels_wide\": 6000", "\"pixels_wide\": -4", ["camera.pixels_wide", "a whole number"]),
        ("\"focal_length_mm\": 300", "\"focal_length_mm\": 300, \"mount\": \"dobson\"", ["camera.mount", "altazimuth"]),
        ("\"focal_length_mm\": 300", "\"focal_length_mm\": 300, \"gain\": 1", ["unknown key `gain`", "camera"]),
        ("\"focal_length_mm\": 300", "\"focal_length_mm\": NaN", ["line 4", "JSON"]),
    ] {
        let error = Plan::parse(&PLAN.replace(from, to)).expect_err(to).to_string();
        for part in parts {
            assert!(error.contains(part), "{to}: {error}");
        }
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 500, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn a_plan_with_cameras_printed_and_read_is_the_same_plan(used in cameras(), kept in prop::collection::vec(cameras(), 0..3)) {
        let plan = Plan { camera: Some(used), cameras: kept, ..Plan::parse(PLAN).unwrap() };
        let text = plan.print();
        prop_assert_eq!(&Plan::parse(&text).unwrap(), &plan);
        prop_assert_eq!(Plan::parse(&text).unwrap().print(), text);
    }

    #[test]
    fn the_rotator_reads_what_gives_the_position_angle(camera in cameras()) {
        let reading = camera.rotator_reading_deg();
        prop_assert!((0.0..360.0).contains(&reading));
        let turns = (reading + camera.rotator_offset_deg - camera.image_up_position_angle_deg) / 360.0;
        prop_assert!((turns - turns.round()).abs() < 1e-9);
    }
}
