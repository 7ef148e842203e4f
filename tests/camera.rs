//! Is the camera's field where it is said to be, does it hold what it is said to hold, and is a wrong camera refused?

#[path = "camera/fitting.rs"]
mod fitting;
#[path = "camera/mounts.rs"]
mod mounts;
#[path = "truth/rows.rs"]
mod rows;
#[path = "camera/sections.rs"]
mod sections;
#[path = "camera/subjects.rs"]
mod subjects;

use nalgebra::Vector3;
use proptest::prelude::*;
use rows::{Row, table};
use tailvane::camera::field::Field;
use tailvane::camera::{Camera, Mount};
use tailvane::frame::{half_turn, separation_rad};

/// A camera with square pixels of a scale, straight and centred.
pub fn camera(pixels_wide: u32, pixels_high: u32, scale_arcsec: f64) -> Camera {
    Camera {
        name: String::new(),
        pixels_wide,
        pixels_high,
        pixel_size_um: None,
        focal_length_mm: None,
        scale_arcsec_per_pixel: Some(scale_arcsec),
        image_up_position_angle_deg: 0.0,
        mirrored: false,
        nucleus_right_px: 0.0,
        nucleus_up_px: 0.0,
        mount: Mount::Equatorial,
        rotator_offset_deg: 0.0,
    }
}

pub fn toward(lon_deg: f64, lat_deg: f64) -> Vector3<f64> {
    let (sin_lon, cos_lon) = lon_deg.to_radians().sin_cos();
    let (sin_lat, cos_lat) = lat_deg.to_radians().sin_cos();
    Vector3::new(cos_lat * cos_lon, cos_lat * sin_lon, sin_lat)
}

fn described(row: &Row) -> (Camera, Vector3<f64>) {
    let pixels = |key| row.number(key) as u32;
    let camera = Camera {
        image_up_position_angle_deg: row.number("image_up_deg"),
        mirrored: row.number("mirrored") != 0.0,
        nucleus_right_px: row.number("nucleus_right_px"),
        nucleus_up_px: row.number("nucleus_up_px"),
        ..camera(pixels("pixels_wide"), pixels("pixels_high"), row.number("scale_arcsec"))
    };
    (camera, toward(row.number("nucleus_lon_deg"), row.number("nucleus_lat_deg")))
}

/// Rows of the table at which a field is off: its pixel, its sky, its middle, or its angle.
fn misses(field: impl Fn(&Camera, &Vector3<f64>) -> Field) -> usize {
    let miss = |row: &&Row| {
        let (camera, nucleus) = described(row);
        let field = field(&camera, &nucleus);
        let at = row.numbers(["right_px", "up_px"]);
        let there = toward(row.number("lon_deg"), row.number("lat_deg"));
        let far = at[0].hypot(at[1]) * camera.scale_tan();
        let tolerance_px = 1e-7 * (1.0 + far * far) * (2.0 / row.number("scale_arcsec")).max(1.0);
        let Some(got) = field.pixel(&there) else { return true };
        let off_px = (got[0] - at[0]).hypot(got[1] - at[1]);
        let off_rad = separation_rad(&field.direction(at), &there);
        let middle = toward(row.number("lon0_deg"), row.number("lat0_deg"));
        let angle = field.course(row.number("position_angle_deg").to_radians()).clockwise_from_up_rad;
        let off_angle = half_turn(angle - row.number("clockwise_from_up_deg").to_radians()).abs();
        off_px > tolerance_px
            || off_rad > tolerance_px * camera.scale_tan()
            || separation_rad(&field.sight, &middle) > tolerance_px * camera.scale_tan()
            || off_angle > 1e-6_f64.to_radians()
    };
    table("camera.csv").iter().filter(miss).count()
}

#[test]
fn pixels_and_sky_equal_wcslib() {
    assert_eq!(misses(|camera, nucleus| Field::of(camera, nucleus).expect("a field")), 0);
}

#[test]
fn a_wrong_parity_rotation_offset_or_scale_would_be_seen() {
    let rows = table("camera.csv").len();
    let with = |change: fn(&mut Camera)| {
        misses(|camera, nucleus| {
            let mut wrong = camera.clone();
            change(&mut wrong);
            Field::of(&wrong, nucleus).expect("a field")
        })
    };
    assert_eq!(with(|camera| camera.mirrored = !camera.mirrored), rows);
    assert_eq!(with(|camera| camera.image_up_position_angle_deg += 0.01), rows);
    assert_eq!(with(|camera| camera.nucleus_up_px += 0.01), rows);
    assert_eq!(with(|camera| camera.scale_arcsec_per_pixel = camera.scale_arcsec_per_pixel.map(|s| s * 1.00001)), rows);
}

#[test]
fn a_pointing_that_cannot_be_is_none() {
    // Nucleus 0.5 degrees from the pole: no pointing with image up north has it 1 degree to the right.
    let wide = Camera { nucleus_right_px: 1800.0, ..camera(4000, 4000, 2.0) };
    assert!(Field::of(&wide, &toward(10.0, 89.5)).is_none());
    assert!(Field::of(&wide, &toward(10.0, 80.0)).is_some());
    assert!(Field::of(&camera(4000, 4000, 2.0), &Vector3::z()).is_some());
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 400, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn a_random_camera_has_its_nucleus_on_its_pixel_and_keeps_its_angles(
        camera in sections::cameras(), lon in 0.0..360.0_f64, lat in -80.0..80.0_f64, angle in 0.0..std::f64::consts::TAU,
        part in (-0.5..0.5_f64, -0.5..0.5_f64),
    ) {
        let nucleus = toward(lon, lat);
        let Some(field) = Field::of(&camera, &nucleus) else { return Ok(()) };
        let at = field.pixel(&nucleus).expect("in front");
        let far = 1.0 + (at[0].powi(2) + at[1].powi(2)) * camera.scale_tan().powi(2);
        let off = (at[0] - camera.nucleus_right_px).hypot(at[1] - camera.nucleus_up_px) * camera.scale_tan();
        prop_assert!(off < 1e-13 * far, "{off}");
        let up = half_turn(field.image_up_position_angle_rad() - camera.image_up_position_angle_deg.to_radians());
        prop_assert!(up.abs() < 1e-9, "{up}");
        prop_assert_eq!(field.is_mirrored(), camera.mirrored);
        let long = field.long_side_position_angle_rad();
        prop_assert!((0.0..std::f64::consts::PI).contains(&long));
        let pixel = [part.0 * f64::from(camera.pixels_wide), part.1 * f64::from(camera.pixels_high)];
        let back = field.pixel(&field.direction(pixel)).expect("in front");
        prop_assert!((back[0] - pixel[0]).hypot(back[1] - pixel[1]) * camera.scale_tan() < 1e-13);
        // A direction leaves over the edge of the chip, at its own position angle.
        let course = field.course(angle);
        if let Some(exit) = course.exit {
            let over = [0, 1].map(|axis| exit.pixel[axis].abs() / field.half_px[axis]);
            prop_assert!((over[0].max(over[1]) - 1.0).abs() < 1e-9, "{over:?}");
            let axes = tailvane::frame::Axes::at(&nucleus);
            let there = tailvane::frame::position_angle_rad(&field.direction(exit.pixel), &axes).expect("an angle");
            prop_assert!(half_turn(there - angle).abs() < 1e-7, "{there} {angle}");
        } else {
            prop_assert!(!field.holds(field.nucleus_px), "a nucleus on the chip has a way off it");
        }
    }
}
