//! Worked examples of a comet's place, the dates on which the Earth passed the orbit planes of published comets
//! (tests/truth/crossings.csv), and angles that do not exist.

// Shared with tests/sky.rs, which uses all of it.
#[allow(dead_code)]
#[path = "truth/cases.rs"]
mod cases;
#[path = "truth/rows.rs"]
mod rows;

use cases::{Fault, cases, elements, plan};
use nalgebra::Vector3;
use rows::{Row, table};
use tailvane::body::State;
use tailvane::body::observer::Observer;
use tailvane::caution::Caution;
use tailvane::engine::Engine;
use tailvane::frame::equatorial_to_ecliptic;
use tailvane::orbit::conic::{Orbit, SUN_GM_AU3_D2};
use tailvane::orbit::elements::Elements;
use tailvane::sky::column::{COLUMNS, Value};
use tailvane::sky::trail::Trail;
use tailvane::sky::viewpoint::Viewpoint;
use tailvane::sky::{LIGHT_AU_D, Sky};
use tailvane::time::Instant;

#[test]
fn the_worked_examples_of_a_comets_place_are_met() {
    let cases = cases();
    for row in table("worked_sky.csv") {
        let case = cases.iter().find(|case| case.orbit.text("case") == row.text("case")).expect("the case exists");
        let sky =
            case.sky(if row.text("example").contains("without light time") { Fault::NoLightTime } else { Fault::None });
        let [ra, dec] = row.numbers(["right_ascension_deg", "declination_deg"]);
        let off_deg = libm::hypot(
            (sky.right_ascension_rad.to_degrees() - ra) * libm::cos(dec.to_radians()),
            sky.declination_rad.to_degrees() - dec,
        );
        assert!(
            off_deg * 3600.0 <= row.number("tolerance_arcsec"),
            "{}: {} arcsec",
            row.text("example"),
            off_deg * 3600.0
        );
        assert!(
            (sky.elongation_rad.to_degrees() - row.number("elongation_deg")).abs() <= 0.006,
            "{}",
            row.text("example")
        );

        let orbit = Orbit::new(&elements(&case.orbit)).expect("a sound orbit");
        let place = orbit.place_at(case.instant());
        let ecliptic = equatorial_to_ecliptic(&place.state.position_au);
        for (got, key) in ecliptic.iter().zip(["x_au", "y_au", "z_au"]) {
            assert!(
                row.number_if_any(key).is_none_or(|wanted| (got - wanted).abs() <= 1e-7),
                "{}: {key} {got}",
                row.text("example")
            );
        }
        let anomaly_deg = orbit.true_anomaly_rad(&place.state.position_au).to_degrees();
        assert!(
            row.number_if_any("true_anomaly_deg").is_none_or(|wanted| (anomaly_deg - wanted).abs() <= 1e-6),
            "{anomaly_deg}"
        );
        assert!(
            row.number_if_any("sun_distance_au").is_none_or(|wanted| (ecliptic.norm() - wanted).abs() <= 1e-7),
            "{}",
            ecliptic.norm()
        );
    }
}

/// When the observer's angle from the orbit plane passes zero within two days of `near`, by bisection.
fn crossing(elements: Elements, near: Instant) -> Instant {
    let mut engine = Engine::new(plan(elements, Observer::Geocentre)).expect("a sound plan");
    let mut above = |time: Instant| engine.sky_at(time).expect("within the span").observer_from_orbit_plane_rad > 0.0;
    let (mut early, mut late) = (near.plus_days(-2.0), near.plus_days(2.0));
    let rising = above(late);
    assert_ne!(above(early), rising, "no crossing within two days of {near:?}");
    while late.tdb_days() - early.tdb_days() > 1e-6 {
        let middle = Instant::from_tdb_days(0.5 * (early.tdb_days() + late.tdb_days()));
        if above(middle) == rising {
            late = middle;
        } else {
            early = middle;
        }
    }
    early
}

#[test]
fn the_earth_passes_the_orbit_planes_of_published_comets_when_it_was_seen_to() {
    for row in table("crossings.csv") {
        let published = Instant::from_tdb_days(row.number("jd_tt") - 2_451_545.0);
        let off_days = (crossing(elements(&row), published).tdb_days() - published.tdb_days()).abs();
        println!("{} ({}): {off_days:.4} d", row.text("comet"), row.text("source"));
        assert!(
            off_days <= row.number("tolerance_days"),
            "{} ({}): {off_days} d",
            row.text("comet"),
            row.text("source")
        );
    }
}

#[test]
fn a_node_a_tenth_of_a_degree_off_would_move_the_crossings() {
    let mut seen = 0;
    let rows = table("crossings.csv");
    let sharp: Vec<&Row> = rows.iter().filter(|row| row.text("source") != "report").collect();
    for row in &sharp {
        let published = Instant::from_tdb_days(row.number("jd_tt") - 2_451_545.0);
        let mut elements = elements(row);
        elements.ascending_node_deg += 0.1;
        seen += usize::from(
            (crossing(elements, published).tdb_days() - published.tdb_days()).abs() > row.number("tolerance_days"),
        );
    }
    assert_eq!(seen, sharp.len());
}

/// The sky of an invented comet from a made-up place: where it is `days` from perihelion plus `offset`.
fn sky_from(days: f64, offset_au: impl Fn(&State) -> Vector3<f64>) -> Sky {
    let orbit = Orbit::new(&elements(&table("sky_orbits.csv")[0])).expect("a sound orbit");
    let left = orbit.perihelion_time().plus_days(days);
    let comet = orbit.place_at(left).state;
    let offset = offset_au(&comet);
    let observer = State { position_au: comet.position_au + offset, velocity_au_d: Vector3::new(0.0, 0.017, 0.0) };
    Sky::of(
        &orbit,
        &Viewpoint { time: left.plus_days(offset.norm() / LIGHT_AU_D), observer, ground: None },
        &mut Trail::default(),
    )
}

#[test]
fn the_true_anomaly_belongs_to_the_place_shown() {
    // A sungrazer turns 3000 deg/d: here it shows if the anomaly is of a moment other than the place's.
    let cases = cases();
    let case = cases.iter().find(|case| case.orbit.text("case") == "s114").expect("the case exists");
    let orbit = Orbit::new(&elements(&case.orbit)).expect("a sound orbit");
    let perihelion = orbit.place_at(orbit.perihelion_time()).state.position_au.normalize();
    let along = orbit.normal().cross(&perihelion);
    let mut engine = Engine::new(plan(elements(&case.orbit), Observer::Geocentre)).expect("a sound plan");
    for step in -200..200 {
        let sky = engine.sky_at(case.instant().plus_days(f64::from(step) * 1e-3)).expect("within the span");
        let shown = libm::atan2(along.dot(&sky.comet.position_au), perihelion.dot(&sky.comet.position_au));
        assert!(
            (shown - sky.true_anomaly_rad).to_degrees().abs() <= 1e-8,
            "step {step}: {shown} {}",
            sky.true_anomaly_rad
        );
    }
}

#[test]
fn an_answer_does_not_depend_on_what_was_asked_before() {
    // A row of a series, a scrubbed date and a single question must print the same digits: to the last bit.
    let mut differing = Vec::new();
    for case in cases() {
        let ready = || Engine::new(plan(elements(&case.orbit), Observer::Geocentre)).expect("a sound plan");
        let mut engine = ready();
        // Steps of 1.37 days, wrapped, so that the dates come in no order.
        for time in (0..30).map(|step| case.instant().plus_days((f64::from(step) * 1.37) % 4.1 - 2.0)) {
            if let (Ok(asked_before), Ok(fresh)) = (engine.sky_at(time), ready().sky_at(time))
                && (asked_before.right_ascension_rad, asked_before.declination_rad)
                    != (fresh.right_ascension_rad, fresh.declination_rad)
            {
                differing.push(format!("{} at {}", case.name(), time.utc_iso_ms()));
            }
        }
    }
    assert!(differing.is_empty(), "{} differ, the first: {}", differing.len(), differing[0]);
}

/// The share of its tolerance by which the state of a sky differs most from the conic solution at the same moment, over
/// dates near and far from each perihelion; `change` may spoil the state first.
fn worst_of_pieces(change: impl Fn(&mut State)) -> f64 {
    let mut worst = 0.0_f64;
    for row in table("sky_orbits.csv") {
        let orbit = Orbit::new(&elements(&row)).expect("a sound orbit");
        let mut engine = Engine::new(plan(elements(&row), Observer::Geocentre)).expect("a sound plan");
        for step in -60..=60 {
            let days = f64::from(step * step * step) * 0.003 + f64::from(step) * 0.011;
            let Ok(mut sky) = engine.sky_at(orbit.perihelion_time().plus_days(days)) else { continue };
            change(&mut sky.comet);
            let left = sky.time.plus_days(-sky.light_time_days);
            let place = orbit.place_at(left).state;
            // Half a unit in the last place of the date, twice: in the conic, and in the light time that is taken off.
            let date = f64::EPSILON * left.tdb_days().abs();
            let (r, v) = (place.position_au.norm(), place.velocity_au_d.norm());
            let pull = SUN_GM_AU3_D2 / (r * r);
            worst = worst
                .max((sky.comet.position_au - place.position_au).norm() / (2e-14 * r + date * v))
                .max((sky.comet.velocity_au_d - place.velocity_au_d).norm() / (2e-14 * v + date * pull));
        }
    }
    worst
}

#[test]
fn the_pieces_of_a_path_are_the_conic_to_rounding() {
    let worst = worst_of_pieces(|_| ());
    assert!(worst <= 1.0, "{worst}");
}

#[test]
fn a_path_off_by_a_metre_or_so_would_be_seen() {
    assert!(worst_of_pieces(|state| state.position_au *= 1.0 + 1e-11) > 1.0);
    assert!(worst_of_pieces(|state| state.velocity_au_d *= 1.0 + 1e-11) > 1.0);
}

fn is_undefined(sky: &Sky, quantity: &str) -> bool {
    sky.cautions
        .iter()
        .any(|caution| matches!(caution, Caution::AngleUndefined { quantity: named } if *named == quantity))
}

#[test]
fn the_antisolar_angle_is_undefined_at_opposition_and_behind_the_sun() {
    // Between Sun and comet, and beyond the Sun.
    for (share, elongation_deg, phase_deg) in [(-0.4, 180.0, 0.0), (-1.7, 0.0, 0.0), (0.3, 0.0, 180.0)] {
        let sky = sky_from(20.0, |comet| comet.position_au * share);
        assert_eq!(sky.antisolar_position_angle_rad, None);
        assert!(is_undefined(&sky, "antisolar direction"));
        assert_eq!(sky.elongation_side, None);
        assert!(
            (sky.elongation_rad.to_degrees() - elongation_deg).abs() < 1e-6
                && (sky.phase_angle_rad.to_degrees() - phase_deg).abs() < 1e-6
        );
        assert!(sky.negative_velocity_position_angle_rad.is_some());
    }
}

#[test]
fn negative_velocity_is_undefined_along_the_line_of_sight() {
    for way in [30.0, -30.0] {
        let sky = sky_from(20.0, |comet| comet.velocity_au_d * way);
        assert_eq!(sky.negative_velocity_position_angle_rad, None);
        assert!(is_undefined(&sky, "negative velocity"));
        let sight_deg = sky.negative_velocity_sight_angle_rad.to_degrees();
        assert!((sight_deg - if way > 0.0 { 180.0 } else { 0.0 }).abs() < 1e-6);
        assert!(sky.antisolar_position_angle_rad.is_some());
    }
}

#[test]
fn at_a_celestial_pole_every_angle_is_a_number() {
    for way in [0.7, -0.7] {
        let sky = sky_from(-35.0, |_| Vector3::new(0.0, 0.0, way));
        assert!((sky.declination_rad.to_degrees().abs() - 90.0).abs() < 1e-6);
        assert!((0.0..360.0).contains(&sky.right_ascension_rad.to_degrees()));
        for column in COLUMNS.iter().filter(|column| !column.site_only) {
            assert!(!matches!((column.value)(&sky), Value::Number(number) if !number.is_finite()), "{}", column.key);
        }
        assert!(sky.antisolar_position_angle_rad.is_some() && sky.motion_position_angle_rad.is_some());
    }
}
