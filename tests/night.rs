//! Nights against skyfield and JPL's DE440 (tests/truth/make_night.py); what a night lacks; the board against nights.

#[path = "truth/rows.rs"]
mod rows;

use rows::{Row, table};
use std::collections::BTreeMap;
use tailvane::body::observer::{Observer, Site};
use tailvane::engine::Engine;
use tailvane::error::Kind;
use tailvane::night::best::{Absence, Moonlight};
use tailvane::night::board::Board;
use tailvane::night::course::{Course, EventKind};
use tailvane::night::evening::read_date;
use tailvane::night::law::NightLaw;
use tailvane::night::moment::Moment;
use tailvane::night::table::COLUMNS;
use tailvane::orbit::conic::Orbit;
use tailvane::orbit::elements::{Brightness, Comet};
use tailvane::plan::Plan;
use tailvane::say;
use tailvane::sky::magnitude;
use tailvane::time::{Instant, Stamp};

const MINUTE: f64 = 1.0 / 1440.0;

/// The invented comet of the truth, with perihelion in a year.
fn comet(year: &str) -> Comet {
    let text = format!(
        r#"{{"tailvane_plan":1,"comet":{{"name":"Invented","elements":{{"perihelion_distance_au":0.52,"eccentricity":1.0003,
        "inclination_deg":61.2,"ascending_node_deg":201.9,"argument_of_perihelion_deg":33.4,"perihelion_time":"{year}-03-04.51732 TT"}}}}}}"#
    );
    Plan::parse(&text).expect("a plan").comet
}

fn site(longitude_deg: f64, latitude_deg: f64, height_m: f64) -> Site {
    Site { name: String::new(), longitude_deg, latitude_deg, height_m }
}

fn engine(comet: Comet, site: Site, night: NightLaw) -> Engine {
    Engine::new(Plan { observer: Observer::Site(site), night, ..Plan::from(comet) }).expect("a plan")
}

/// The course of the night that begins on the evening of a date.
fn course(engine: &mut Engine, date: &str) -> Course {
    let date = read_date(date).expect("a date");
    let evening = engine.evening(Some(date), Instant::from_tdb_days(0.0)).expect("a night");
    engine.course(&evening).expect("a course")
}

fn hill(date: &str, night: NightLaw) -> (Engine, Course) {
    let mut engine = engine(comet(&date[..4]), site(23.4, 37.1, 640.0), night);
    let course = course(&mut engine, date);
    (engine, course)
}

fn engine_of(row: &Row, fault: f64) -> Engine {
    let [longitude, latitude, height] = row.numbers(["longitude_deg", "latitude_deg", "height_m"]);
    engine(comet(row.text("perihelion_year")), site(longitude + fault, latitude, height), NightLaw::default())
}

fn instant(text: &str) -> Instant {
    text.parse::<Stamp>().expect("a time").instant()
}

/// Events of the truth that the crate has not within the tolerance, with the site moved by a fault, degrees east.
fn wrong_events(fault: f64) -> (usize, Vec<String>) {
    let (mut wrong, mut rows) = (Vec::new(), 0);
    let mut courses: BTreeMap<String, Course> = BTreeMap::new();
    for row in table("night.csv") {
        rows += 1;
        let case = row.text("case").to_string();
        let course =
            courses.entry(case.clone()).or_insert_with(|| course(&mut engine_of(&row, fault), row.text("date")));
        let event = row.text("event");
        let found: Vec<Instant> =
            course.events.iter().filter(|found| found.kind.words() == event).map(|found| found.time).collect();
        let truth = row.text("time_utc");
        if truth.is_empty() {
            if !found.is_empty() {
                wrong.push(format!("{case}, {event}: {} should not be", found[0].utc_iso_ms()));
            }
            continue;
        }
        // 20 s, or what 0.02 degrees of altitude take where the Sun runs nearly level.
        let seconds = 20.0_f64.max(0.02 / row.number("altitude_deg_per_min") * 60.0);
        let off = |time: &Instant| (time.tdb_days() - instant(truth).tdb_days()).abs() * 86_400.0;
        if found.len() != 1 || off(&found[0]) > seconds {
            let found: Vec<String> = found.iter().map(|time| time.utc_iso_ms()).collect();
            wrong.push(format!("{case}, {event}: {found:?}, truth {truth}, allowed {seconds:.0} s"));
        }
    }
    (rows, wrong)
}

#[test]
fn twilights_and_risings_are_those_of_a_reference_library() {
    let (rows, wrong) = wrong_events(0.0);
    assert!(rows > 100 && wrong.is_empty(), "{wrong:#?}");
}

#[test]
fn a_site_half_a_degree_off_is_seen_in_the_twilights() {
    let (rows, wrong) = wrong_events(0.5);
    assert!(wrong.len() > rows / 2, "{} of {rows}", wrong.len());
}

#[test]
fn places_over_the_horizon_are_those_of_a_reference_library() {
    let mut engines: BTreeMap<String, Engine> = BTreeMap::new();
    for row in table("night_places.csv") {
        let engine = engines.entry(row.text("case").to_string()).or_insert_with(|| engine_of(&row, 0.0));
        let moment = engine.moment_at(instant(row.text("time_utc"))).expect("a moment");
        let place = |name: &str, altitude: f64, azimuth: Option<f64>| {
            let (true_altitude, true_azimuth) =
                (row.number(&format!("{name}_altitude_deg")), row.number(&format!("{name}_azimuth_deg")));
            let off = altitude.to_degrees() - true_altitude;
            let along = (azimuth.expect("an azimuth").to_degrees() - true_azimuth + 540.0).rem_euclid(360.0) - 180.0;
            let along = along * libm::cos(true_altitude.to_radians());
            let when = row.text("time_utc");
            assert!(off.abs() < 0.02 && along.abs() < 0.02, "{}, {name} {when}: {off}, {along}", row.text("case"));
        };
        place("comet", moment.altitude_rad, moment.azimuth_rad);
        place("sun", moment.sun_altitude_rad, moment.sun_azimuth_rad);
        place("moon", moment.moon_altitude_rad, moment.moon_azimuth_rad);
        let separation = moment.moon_separation_rad.to_degrees() - row.number("moon_separation_deg");
        let lit = moment.moon_lit_fraction - row.number("moon_lit_fraction");
        assert!(separation.abs() < 0.02 && lit.abs() < 0.001, "{separation}, {lit}");
    }
}

/// Source: physics of the almanac's definition at 0 E, 51.4779 N, 2024-10-14, run with DE440 and no refraction.
#[test]
fn the_worked_twilights_of_greenwich_come_out() {
    let mut engine = engine(comet("2024"), site(0.0, 51.4779, 0.0), NightLaw::default());
    let course = course(&mut engine, "2024-10-14");
    for (twilight, clock) in course.twilights.iter().zip(["17:07:58", "17:41:34", "18:20:07", "18:58:47"]) {
        let truth = instant(&format!("2024-10-14T{clock}Z"));
        let found = twilight.evening.expect("an evening");
        assert!((found.tdb_days() - truth.tdb_days()).abs() * 86_400.0 < 20.0, "{clock}: {}", found.utc_iso_ms());
    }
    let moment = engine.moment_at(instant("2024-10-14T18:00:00Z")).expect("a moment");
    let near = |found: f64, truth: f64| assert!((found.to_degrees() - truth).abs() < 0.02, "{found} {truth}");
    near(moment.sun_altitude_rad, -8.865);
    near(moment.sun_azimuth_rad.expect("an azimuth"), 267.419);
    near(moment.moon_altitude_rad, 14.479);
    near(moment.moon_azimuth_rad.expect("an azimuth"), 126.251);
    assert!((moment.moon_lit_fraction - 0.8919).abs() < 0.0005);
}

#[test]
fn polar_sites_say_what_they_lack() {
    let law = NightLaw::default();
    let absences = |date: &str, latitude: f64| {
        let mut engine = engine(comet("2031"), site(15.6, latitude, 20.0), law.clone());
        let course = course(&mut engine, date);
        assert!(!engine.night_rows(&course, 0.05).expect("rows").is_empty());
        let text = say::night::absences(&course, &law).join(" ");
        assert!(!say::night::best(&course, &law).is_empty());
        (course, text)
    };
    let (bright, text) = absences("2031-06-21", 78.2);
    assert!(bright.twilights.iter().all(|twilight| twilight.evening.is_none() && twilight.morning.is_none()));
    assert!(text.contains("does not set"), "{text}");
    assert_eq!(bright.sun_down(), [bright.evening.from, bright.evening.to]);
    let (dark, text) = absences("2031-12-21", 78.2);
    assert!(text.contains("does not rise") && dark.twilights[0].evening.is_none(), "{text}");
    let (_, text) = absences("2031-06-21", 59.0);
    assert!(text.contains("no full darkness"), "{text}");
    // At the pole itself the Sun runs level: its altitude changes by the season alone.
    for latitude in [90.0, -90.0] {
        for date in ["2031-03-20", "2031-09-23", "2031-06-21"] {
            let (course, _) = absences(date, latitude);
            assert!(course.samples.len() == 289 && course.sun_lowest_deg.abs() < 24.0);
        }
    }
}

#[test]
fn a_comet_that_never_comes_up_is_said_so() {
    let law = NightLaw::default();
    let mut engine = engine(comet("2031"), site(0.0, -80.0, 0.0), law.clone());
    let course = course(&mut engine, "2031-05-20");
    assert_eq!(course.best, Err(Absence::CometTooLow));
    assert!(course.comet_highest_deg < 0.0 && course.dark.is_empty());
    assert!(course.events.iter().all(|event| event.kind != EventKind::CometHighest));
    assert!(say::night::absences(&course, &law).join(" ").contains("does not come up"));
    let rows = engine.night_rows(&course, 0.01).expect("rows");
    assert!(rows.iter().all(|row| row.moment.air_mass.is_none()));
    assert!(rows[0].cautions.join(" ").contains("does not come up"));
}

#[test]
fn the_two_ways_to_write_a_longitude_name_one_night() {
    let night = |longitude: f64| {
        let mut engine = engine(comet("2031"), site(longitude, -17.2, 0.0), NightLaw::default());
        course(&mut engine, "2031-03-20")
    };
    for (a, b) in [(-179.95, 180.05), (-1.0, 359.0), (180.0, -180.0)] {
        let (one, other) = (night(a), night(b));
        assert_eq!(one.evening.date, other.evening.date);
        assert!((one.evening.from.tdb_days() - other.evening.from.tdb_days()).abs() < 1e-8);
        assert_eq!(one.events.len(), other.events.len());
    }
    // On the two sides of the date line the same date is a day apart.
    let gap = night(-179.95).evening.from.tdb_days() - night(179.95).evening.from.tdb_days();
    assert!((gap - (1.0 - 0.1 / 360.0)).abs() < 1e-8, "{gap}");
}

#[test]
fn dates_outside_the_ephemeris_are_refused_at_the_date() {
    let engine = engine(comet("2031"), site(0.0, 0.0, 0.0), NightLaw::default());
    for date in ["1850-01-01", "2101-01-05"] {
        let error = engine.evening(Some(read_date(date).unwrap()), Instant::from_tdb_days(0.0)).unwrap_err();
        assert!(error.kind == Kind::Span && error.to_string().starts_with("date: "), "{error}");
    }
    let geocentre = Engine::new(Plan::from(comet("2031"))).expect("a plan");
    let error = geocentre.evening(None, Instant::from_tdb_days(9000.0)).unwrap_err();
    assert!(error.to_string().contains("a site"), "{error}");
}

#[test]
fn the_best_window_keeps_its_own_criterion() {
    let mut seen = BTreeMap::new();
    for (month, day) in [(3, 14), (3, 22), (3, 28), (4, 2), (4, 8), (4, 15), (4, 22), (5, 1)] {
        let (mut engine, course) = hill(&format!("2031-{month:02}-{day:02}"), NightLaw::default());
        let Ok(best) = &course.best else { continue };
        let window = course.dark.iter().find(|dark| dark.begin <= best.begin && best.end <= dark.end).expect("dark");
        assert!(best.begin < best.end || window.begin == window.end);
        let least = best.least_air_mass;
        let blocked = |moment: &Moment| {
            moment.moon_altitude_rad >= 0.0
                && moment.moon_lit_fraction >= 0.25
                && moment.moon_separation_rad.to_degrees() <= 90.0
        };
        let length = best.end.tdb_days() - best.begin.tdb_days();
        for share in 0..=20 {
            let moment = engine.moment_at(best.begin.plus_days(length * f64::from(share) / 20.0)).expect("a moment");
            assert!(moment.air_mass.expect("air") <= least + 0.5 + 1e-3);
            assert!(!blocked(&moment) || best.moonlight == Moonlight::InTheWay);
        }
        // No dark time of the same kind has the comet higher.
        for dark in &course.dark {
            let steps = ((dark.end.tdb_days() - dark.begin.tdb_days()) / (3.0 * MINUTE)) as usize;
            for step in 0..=steps {
                let moment = engine.moment_at(dark.begin.plus_days(step as f64 * 3.0 * MINUTE)).expect("a moment");
                if best.moonlight == Moonlight::InTheWay {
                    assert!(blocked(&moment));
                } else if !blocked(&moment) {
                    assert!(moment.air_mass.expect("air") > least - 0.02);
                }
            }
        }
        *seen.entry(format!("{:?}", best.moonlight)).or_insert(0) += 1;
    }
    assert!(seen.len() > 1, "{seen:?}");
}

#[test]
fn the_limits_of_the_law_move_the_dark_time() {
    let length = |night: NightLaw| {
        let (_, course) = hill("2031-04-05", night);
        course.dark.iter().map(|dark| dark.end.tdb_days() - dark.begin.tdb_days()).sum::<f64>()
    };
    let usual = length(NightLaw::default());
    assert!(usual > 0.0);
    assert!(length(NightLaw { sun_below_deg: -6.0, ..NightLaw::default() }) > usual);
    assert!(length(NightLaw { comet_above_deg: 10.0, ..NightLaw::default() }) < usual);
}

#[test]
fn an_exposure_is_the_trail_over_the_motion() {
    let law = NightLaw { pixel_scale_arcsec: Some(2.0), longest_trail_px: 1.5, ..NightLaw::default() };
    // 6 arcsec a minute: 3 arcsec take 30 s.
    let rate = f64::to_radians(6.0 / 3600.0) * 1440.0;
    assert!((law.longest_exposure_s(rate).unwrap() - 30.0).abs() < 1e-9);
    assert_eq!(law.longest_exposure_s(0.0), None);
    assert_eq!(NightLaw::default().longest_exposure_s(rate), None);
}

#[test]
fn directions_stand_on_the_horizon_as_the_zenith_turns() {
    let (mut engine, course) = hill("2031-03-20", NightLaw::default());
    for sample in course.samples.iter().step_by(40) {
        let moment = engine.moment_at(sample.time).expect("a moment");
        // Straight up is the zenith's own direction.
        assert_eq!(moment.from_vertical_rad(moment.zenith_position_angle_rad), Some(0.0));
        // A point 1 degree from the comet along the antisolar direction stands higher when that is up.
        let angle = moment.from_vertical_rad(moment.sky.antisolar_position_angle_rad).expect("an angle");
        let axes = &moment.sky.axes;
        let (east, north) = libm::sincos(moment.sky.antisolar_position_angle_rad.expect("an angle"));
        let place = axes.sight + (axes.east * east + axes.north * north) * 1e-4;
        let (viewpoint, _) = tailvane::sky::watch::Watch::new(engine.orbit().clone(), engine.plan().observer.clone())
            .seen_at(sample.time)
            .expect("a sky");
        let horizon = viewpoint.ground.expect("ground").horizon;
        let rise = (horizon.altitude_rad(&place) - horizon.altitude_rad(&axes.sight)) / 1e-4;
        assert!((rise - libm::cos(angle)).abs() < 2e-3, "{rise} {angle}");
        // Left is where the azimuth falls.
        let turn = (horizon.azimuth_rad(&place).unwrap() - horizon.azimuth_rad(&axes.sight).unwrap()
            + 3.0 * std::f64::consts::PI)
            .rem_euclid(std::f64::consts::TAU)
            - std::f64::consts::PI;
        assert!(turn * libm::sin(angle) <= 0.0, "{turn} {angle}");
    }
}

#[test]
fn the_board_says_of_each_comet_what_its_own_night_says() {
    let plan = Plan { observer: Observer::Site(site(23.4, 37.1, 640.0)), ..Plan::from(comet("2031")) };
    let date = read_date("2031-04-10").unwrap();
    let evening = Engine::new(plan.clone()).unwrap().evening(Some(date), Instant::from_tdb_days(0.0)).unwrap();
    let mut board = Board::new(&plan.observer, &evening, &NightLaw::default()).expect("a board");
    for (node, inclination, argument) in
        [(201.9, 61.2, 33.4), (10.0, 20.0, 100.0), (120.0, 150.0, 250.0), (300.0, 89.0, 5.0)]
    {
        let mut comet = comet("2031");
        comet.brightness = vec![Brightness::with_index(7.0, 4.0)];
        comet.elements.ascending_node_deg = node;
        comet.elements.inclination_deg = inclination;
        comet.elements.argument_of_perihelion_deg = argument;
        let orbit = Orbit::new(&comet.elements).expect("an orbit");
        let entry = board.entry(&comet, &orbit);
        let mut engine = Engine::new(Plan { comet: comet.clone(), ..plan.clone() }).expect("a plan");
        let course = engine.course(&evening).expect("a course");
        let sky = engine.sky_at(evening.middle()).expect("a sky");
        assert_eq!(entry.sky, sky);
        assert_eq!(entry.total_magnitude, magnitude::total(&comet.brightness, &sky));
        match (entry.up, course.dark.first(), course.dark.last()) {
            (Some(up), Some(first), Some(last)) => {
                // The board's grid is five minutes.
                assert!((up.begin.tdb_days() - first.begin.tdb_days()).abs() < 5.1 * MINUTE);
                assert!((up.end.tdb_days() - last.end.tdb_days()).abs() < 5.1 * MINUTE);
                let highest = course.dark.iter().map(|dark| dark.highest_deg).fold(0.0, f64::max);
                assert!((up.highest_rad.to_degrees() - highest).abs() < 0.05, "{up:?} {highest}");
            }
            (None, None, None) => {}
            other => panic!("{node}: {other:?}"),
        }
        // At the crossing the Earth stands in the plane, and it is the first.
        let crossing = entry.next_crossing.expect("a crossing within a year");
        let mut geocentre =
            Engine::new(Plan { observer: Observer::Geocentre, ..engine.plan().clone() }).expect("a plan");
        let mut angle = |time: Instant| geocentre.sky_at(time).expect("a sky").observer_from_orbit_plane_rad;
        assert!(angle(crossing.time).to_degrees().abs() < 0.01);
        let sign = angle(evening.middle().plus_days(0.01)) > 0.0;
        let days = crossing.time.tdb_days() - evening.middle().tdb_days();
        for day in 1..(days as i32) {
            assert_eq!(angle(evening.middle().plus_days(f64::from(day))) > 0.0, sign, "{node} {day}");
        }
    }
}

#[test]
fn rows_come_in_order_and_hold_every_event() {
    let (mut engine, course) = hill("2031-03-20", NightLaw::default());
    let rows = engine.night_rows(&course, 10.0 * MINUTE).expect("rows");
    assert!(rows.windows(2).all(|pair| pair[0].moment.sky.time <= pair[1].moment.sky.time));
    assert_eq!(rows.iter().filter(|row| row.event.is_some()).count(), course.events.len());
    let mut keys: Vec<&str> = COLUMNS.iter().map(|column| column.key).collect();
    keys.sort_unstable();
    keys.dedup();
    assert_eq!(keys.len(), COLUMNS.len());
}

#[test]
fn a_branch_of_the_magnitude_holds_between_its_dates() {
    let mut comet = comet("2031");
    let branch = |magnitude: f64, from: Option<&str>, to: Option<&str>| Brightness {
        from: from.map(|text| text.parse().unwrap()),
        to: to.map(|text| text.parse().unwrap()),
        ..Brightness::with_index(magnitude, 4.0)
    };
    comet.brightness =
        vec![branch(5.0, None, Some("2031-03-04.0 TT")), branch(7.0, Some("2031-03-04.0 TT"), Some("2031-04-01.0 TT"))];
    let mut engine = Engine::new(Plan::from(comet.clone())).expect("a plan");
    let mut total = |time: &str| {
        let sky = engine.sky_at(instant(time)).expect("a sky");
        let plain = 5.0 * sky.observer_distance_au.log10() + 10.0 * sky.sun_distance_au.log10();
        magnitude::total(&comet.brightness, &sky).map(|magnitude| ((magnitude - plain) * 1e6).round() / 1e6)
    };
    assert_eq!(total("2031-03-01.0 TT"), Some(5.0));
    // Both hold at their common end: the first serves.
    assert_eq!(total("2031-03-04.0 TT"), Some(5.0));
    assert_eq!(total("2031-03-04.1 TT"), Some(7.0));
    assert_eq!(total("2031-04-02.0 TT"), None);
}
