//! Does the field turn as the mount makes it turn? The zenith's position angle, altitude and azimuth are those held to ERFA and
//! astropy in tests/sky.rs; here the field is held to them by another way than the one it is computed by.

use crate::camera;
use nalgebra::Vector3;
use tailvane::body::observer::{Observer, Site};
use tailvane::camera::field::Field;
use tailvane::camera::turn::{Hour, through};
use tailvane::camera::{Camera, Mount};
use tailvane::frame::{Axes, half_turn, tangent};
use tailvane::orbit::conic::Orbit;
use tailvane::orbit::elements::Elements;
use tailvane::sky::Sky;
use tailvane::sky::watch::Watch;
use tailvane::tail::law::Tails;
use tailvane::time::{Instant, Stamp};

fn watch(observer: Observer) -> Watch {
    let elements = Elements {
        perihelion_distance_au: 0.9,
        eccentricity: 1.0,
        inclination_deg: 80.0,
        ascending_node_deg: 100.0,
        argument_of_perihelion_deg: 60.0,
        perihelion_time: "2031-05-02.0 TT".parse().expect("a date"),
        epoch: None,
        nongravitational: None,
    };
    Watch::new(Orbit::new(&elements).expect("elements in range"), observer)
}

fn site() -> Observer {
    Observer::Site(Site { name: "Invented hill".into(), longitude_deg: 23.0, latitude_deg: 47.0, height_m: 300.0 })
}

fn night() -> (Instant, Vec<Instant>) {
    let start: Stamp = "2031-04-20T19:00:00Z".parse().expect("a date");
    let start = start.instant();
    (start, (0..10).map(|hour| start.plus_days(f64::from(hour) / 24.0)).collect())
}

/// The hours of a camera that is set up upright against the zenith, and the sky at each.
fn hours(mount: Mount, offset_px: [f64; 2]) -> Vec<(Hour, Sky)> {
    let mut watch = watch(site());
    let (start, times) = night();
    let sky = watch.sky_at(start).expect("a sky");
    let zenith = sky.site.as_ref().and_then(|site| site.zenith_position_angle_rad).expect("a zenith");
    let camera = Camera {
        mount,
        image_up_position_angle_deg: zenith.to_degrees(),
        nucleus_right_px: offset_px[0],
        nucleus_up_px: offset_px[1],
        ..camera(6000, 4000, 10.0)
    };
    let hours = through(&mut watch, &camera, &Tails::default(), start, &times).expect("hours");
    hours.into_iter().map(|hour| (hour.clone(), watch.sky_at(hour.time).expect("a sky"))).collect()
}

fn field(hour: &Hour) -> &Field {
    hour.field.as_ref().expect("a field")
}

/// Unit vector in the axes of the horizon: right along the azimuth, toward the horizon's north, up.
fn on_horizon(sky: &Sky) -> Vector3<f64> {
    let site = sky.site.as_ref().expect("a site");
    let (sin_az, cos_az) = site.azimuth_rad.expect("an azimuth").sin_cos();
    let (sin_alt, cos_alt) = site.altitude_rad.sin_cos();
    Vector3::new(cos_alt * sin_az, cos_alt * cos_az, sin_alt)
}

#[test]
fn an_equatorial_field_keeps_its_angle_and_its_pixel() {
    for (hour, _) in hours(Mount::Equatorial, [500.0, -300.0]) {
        assert!(hour.turned_rad.expect("a turn").abs() < 1e-9);
        assert_eq!(field(&hour).nucleus_px, [500.0, -300.0]);
    }
}

#[test]
fn a_centred_altazimuth_field_turns_as_the_zenith_does() {
    let hours = hours(Mount::Altazimuth, [0.0, 0.0]);
    let mut most = 0.0_f64;
    for (hour, sky) in &hours {
        let zenith = sky.site.as_ref().and_then(|site| site.zenith_position_angle_rad).expect("a zenith");
        assert!(half_turn(field(hour).image_up_position_angle_rad() - zenith).abs() < 1e-9);
        most = most.max(hour.turned_rad.expect("a turn").abs());
    }
    assert!(most > 0.3, "the night shows no turn: {most}");
}

#[test]
fn an_altazimuth_field_off_its_middle_keeps_the_angle_to_the_vertical_there() {
    let mut angles = Vec::new();
    for (hour, sky) in hours(Mount::Altazimuth, [1500.0, 900.0]) {
        let field = field(&hour);
        assert_eq!(field.nucleus_px, [1500.0, 900.0]);
        // The vertical at the middle, from the places of zenith and nucleus alone: the horizon's axes from two directions.
        let flat = on_horizon(&sky);
        let axes = Axes::at(&sky.axes.sight);
        let zenith_pa = sky.site.as_ref().and_then(|site| site.zenith_position_angle_rad).expect("a zenith");
        let distance = flat.z.acos();
        let to_zenith = axes.north * zenith_pa.cos() + axes.east * zenith_pa.sin();
        let zenith = axes.sight * distance.cos() + to_zenith * distance.sin();
        let vertical = zenith - field.sight * zenith.dot(&field.sight);
        angles.push(vertical.dot(&field.right).atan2(vertical.dot(&field.up)));
    }
    for angle in &angles {
        assert!(half_turn(angle - angles[0]).abs() < 1e-7, "{angles:?}");
    }
}

#[test]
fn on_a_fixed_tripod_the_nucleus_drifts_by_its_altitude_and_azimuth() {
    let hours = hours(Mount::FixedTripod, [0.0, 0.0]);
    let first = on_horizon(&hours[0].1);
    // Axes of the horizon's own sphere at the first place: azimuth to the right, altitude up.
    let level = Vector3::new(first.y, -first.x, 0.0).normalize();
    let axes = Axes { sight: first, east: level, north: level.cross(&first) };
    assert!(axes.north.z > 0.0, "up is up");
    for (hour, sky) in &hours {
        let Some([right, up]) = tangent::project(&on_horizon(sky), &axes) else {
            assert!(hour.field.is_none());
            continue;
        };
        let scale = field(hour).scale_tan;
        let got = field(hour).nucleus_px;
        // Altitude and azimuth of `Sky` and the carried axes are the same rotation of the Earth.
        let off = (got[0] * scale - right).hypot(got[1] * scale - up);
        assert!(off < 1e-9 * (1.0 + right * right + up * up), "{off}: {got:?}");
    }
    let drift = field(&hours[1].0).nucleus_px;
    assert!(drift[0] > 1000.0 && drift[1] < -1000.0, "a western sky goes down to the right: {drift:?}");
}

#[test]
fn from_the_geocentre_only_an_equatorial_field_is_followed() {
    let (start, times) = night();
    let mut watch = watch(Observer::Geocentre);
    let mut hours =
        |mount| through(&mut watch, &Camera { mount, ..camera(100, 100, 1.0) }, &Tails::default(), start, &times);
    assert_eq!(hours(Mount::Equatorial).map(|hours| hours.len()), Some(10));
    assert!(hours(Mount::Altazimuth).is_none() && hours(Mount::FixedTripod).is_none());
}
