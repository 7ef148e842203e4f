//! Are the Earth, the Moon, the turn of the Earth and an observer's place where outside sources put them?
//!
//! Rows: tests/truth/ephemeris/*.csv, each with its source and tolerance on top; make_rows.py there writes them.
//! Every comparison is also run with a planted fault and must then fail.

use nalgebra::{Matrix3, Vector3};
use proptest::prelude::*;
use tailvane::body::earth::{Track, earth, earth_moon_barycentre};
use tailvane::body::ellipsoid::{from_parallax_constants, geodetic, terrestrial_m};
use tailvane::body::observer::Site;
use tailvane::body::site_code::{SITE_CODES, find, search};
use tailvane::body::sun::heliographic_latitude_rad;
use tailvane::body::{AU_KM, SPAN, State, moon};
use tailvane::error::{Kind, Place};
use tailvane::frame::earth_rotation::{ARCSEC_RAD, Precession, apparent_sidereal_time_rad, celestial_to_terrestrial};
use tailvane::frame::{half_turn, separation_rad};
use tailvane::time::Instant;

/// A truth file: its rows as numbers; a field that is no number (a code) reads as NaN.
fn rows(text: &str, columns: usize) -> Vec<Vec<f64>> {
    let rows: Vec<Vec<f64>> = text
        .lines()
        .filter(|line| !line.starts_with('#'))
        .skip(1)
        .map(|line| line.split(',').map(|field| field.parse().unwrap_or(f64::NAN)).collect())
        .collect();
    assert!(rows.len() >= 40 && rows.iter().all(|row| row.len() == columns), "the truth file is cut short");
    rows
}

fn vector(row: &[f64], at: usize) -> Vector3<f64> {
    Vector3::new(row[at], row[at + 1], row[at + 2])
}

fn day(days: f64) -> Instant {
    Instant::from_tdb_days(days)
}

/// Days from J2000.0 of a Julian date.
fn julian(date: f64) -> Instant {
    day(date - 2_451_545.0)
}

/// The largest of `error` over `rows`; a NaN counts as infinite.
fn worst(rows: &[Vec<f64>], error: impl Fn(&[f64]) -> f64) -> f64 {
    rows.iter().map(|row| error(row)).fold(0.0, |most, e| {
        if e <= most {
            most
        } else if e.is_nan() {
            f64::INFINITY
        } else {
            e
        }
    })
}

fn de440() -> Vec<Vec<f64>> {
    rows(include_str!("truth/ephemeris/de440.csv"), 13)
}

fn earth_at(row: &[f64]) -> State {
    earth(day(row[0])).unwrap()
}

// Earth

#[test]
fn earth_lies_within_1e_8_au_of_de440() {
    let rows = de440();
    assert_eq!(rows.len(), 400);
    assert!(worst(&rows, |r| (earth_at(r).position_au - vector(r, 1)).norm()) < 1e-8);
    assert!(worst(&rows, |r| (earth_at(r).velocity_au_d - vector(r, 4)).norm()) < 1e-8);
    assert!(worst(&rows, |r| (earth_moon_barycentre(day(r[0])).unwrap().position_au - vector(r, 7)).norm()) < 4e-9);
}

#[test]
fn the_de440_rows_catch_planted_faults() {
    let rows = de440();
    let miss = |faulty: &dyn Fn(&[f64]) -> Vector3<f64>| rows.iter().all(|r| (faulty(r) - vector(r, 1)).norm() > 1e-8);
    assert!(miss(&|r| earth_moon_barycentre(day(r[0])).unwrap().position_au), "barycentre for Earth");
    assert!(miss(&|r| earth(day(r[0] + 10.0 / 86_400.0)).unwrap().position_au), "ten seconds late");
    assert!(miss(&|r| -earth_at(r).position_au), "the Sun from the Earth");
    let wobble = |r: &[f64]| earth_at(r).position_au - vector(r, 7);
    assert!(miss(&|r| vector(r, 7) - wobble(r)), "Earth on the Moon's side of the barycentre");
    let tilt = |v: Vector3<f64>, angle: f64| Vector3::new(v.x, v.y - angle * v.z, v.z + angle * v.y);
    let late = rows.iter().filter(|r| r[2].abs() > 0.3 && r[0] > 0.0).cloned().collect::<Vec<_>>();
    assert!(
        worst(&late, |r| (tilt(earth_at(r).position_au, 0.042 * ARCSEC_RAD) - vector(r, 1)).norm()) > 1e-8,
        "obliquity"
    );
}

#[test]
fn earth_agrees_with_a_second_ephemeris() {
    let rows = rows(include_str!("truth/ephemeris/de421.csv"), 13);
    assert!(worst(&rows, |r| (earth_at(r).position_au - vector(r, 1)).norm()) < 2e-8);
    assert!(worst(&rows, |r| (earth_at(r).velocity_au_d - vector(r, 4)).norm()) < 1e-8);
    assert!(worst(&rows, |r| (vector(r, 7) - vector(r, 1)).norm()) > 2e-8, "barycentre for Earth");
}

/// Source: ERFA's own test epoch of epv00 (t_erfa_c.c), run through pyerfa 2.0.1.5. Tolerance: the error of that
/// series against DE440, 7.7e-8 au, and ours.
#[test]
fn earth_matches_erfa_at_its_test_epoch() {
    let time = julian(2_400_000.5 + 53_411.525_011_61);
    let place = Vector3::new(-0.775_723_880_930, 0.559_805_224_136, 0.242_699_846_648);
    let velocity = Vector3::new(-0.010_918_918_241, -0.012_471_872_684, -0.005_407_569_418);
    let found = earth(time).unwrap();
    assert!((found.position_au - place).norm() < 1e-7);
    assert!((found.velocity_au_d - velocity).norm() < 1e-8);
    assert!((earth_moon_barycentre(time).unwrap().position_au - place).norm() > 1e-7, "barycentre for Earth");
}

/// Source: vsop87.chk of the VSOP87 distribution (Bretagnon & Francou 1988), rows VSOP87A, dynamical ecliptic and
/// equinox J2000, turned to the equator by the matrix given there. Tolerance 2.5e-7 au: 1.93e-7 au is the full
/// series' own distance from DE440 over 1900-2100.
#[test]
fn earth_matches_the_check_rows_of_vsop87() {
    let equatorial = |x: f64, y: f64, z: f64| {
        Vector3::new(
            x + 4.403_60e-7 * y - 1.909_19e-7 * z,
            -4.799_66e-7 * x + 0.917_482_137_087 * y - 0.397_776_982_902 * z,
            0.397_776_982_902 * y + 0.917_482_137_087 * z,
        )
    };
    let j2000 = equatorial(-0.177_135_458_6, 0.967_241_623_7, -0.000_003_900_0);
    let in_1899 = equatorial(-0.188_307_964_9, 0.965_068_884_4, 0.000_215_032_5);
    let barycentre = equatorial(-0.177_159_144_0, 0.967_219_289_1, -0.000_000_953_6);
    let place = |date| earth(julian(date)).unwrap().position_au;
    assert!((place(2_451_545.0) - j2000).norm() < 2.5e-7);
    assert!((place(2_415_020.0) - in_1899).norm() < 2.5e-7);
    assert!((earth_moon_barycentre(julian(2_451_545.0)).unwrap().position_au - barycentre).norm() < 2.5e-7);
    assert!((place(2_451_545.0) - barycentre).norm() > 1e-5, "barycentre for Earth");
    let swapped = equatorial(-0.177_135_458_6, -0.000_003_900_0, 0.967_241_623_7);
    assert!((place(2_451_545.0) - swapped).norm() > 0.1, "axes swapped");
}

/// Source: JPL DE440, Earth less Sun, read with jplephem 2.24, at J2000.0 and at three published
/// comets' plane crossings. Tolerance 2e-8 au: eight printed decimals, and our 1e-8 au.
#[test]
fn earth_matches_de440_at_dates_of_known_comets() {
    let spots = [
        (2_451_545.0, -0.177_135_10, 0.887_428_52, 0.384_742_90),
        (2_460_598.268, 0.927_466_14, 0.336_203_58, 0.145_735_01),
        (2_453_128.428_86, -0.739_922_83, -0.628_160_59, -0.272_334_27),
        (2_435_954.259, -0.815_623_35, -0.540_830_82, -0.234_551_93),
    ];
    for (date, x, y, z) in spots {
        let miss = |offset: f64| (earth(julian(date + offset)).unwrap().position_au - Vector3::new(x, y, z)).norm();
        assert!(miss(0.0) < 2e-8, "{date}: {}", miss(0.0));
        assert!(miss(69.184 / 86_400.0) > 2e-8, "UTC for TDB");
    }
}

#[test]
fn times_outside_the_span_are_refused_with_the_span() {
    for days in [SPAN.first.tdb_days() - 1e-6, SPAN.last.tdb_days() + 1e-6, -1e9, 1e300, f64::NAN, f64::INFINITY] {
        let time = day(days);
        let refusals = [
            earth(time).unwrap_err(),
            earth_moon_barycentre(time).unwrap_err(),
            Track::new().state(time).unwrap_err(),
            moon::geocentric_au(time).unwrap_err(),
        ];
        for error in refusals {
            assert_eq!(error.kind, Kind::Span);
            assert!(error.allowed.contains("1900-01-01 to 2100-12-31"), "{error}");
        }
    }
    for edge in [SPAN.first, SPAN.last] {
        assert!(earth(edge).is_ok() && Track::new().state(edge).is_ok() && moon::geocentric_au(edge).is_ok());
    }
}

// Moon

const MOON_TOLERANCE_RAD: f64 = 10.8 * ARCSEC_RAD;

#[test]
fn moon_lies_within_0_003_degree_of_de440() {
    let rows = de440();
    let place = |r: &[f64]| moon::geocentric_au(day(r[0])).unwrap();
    assert!(worst(&rows, |r| separation_rad(&place(r), &vector(r, 10))) < MOON_TOLERANCE_RAD);
    assert!(
        worst(&rows, |r| (place(r).norm() - r[10..].iter().map(|x| x * x).sum::<f64>().sqrt()).abs() * AU_KM) < 12.0
    );

    let missed = |place: &dyn Fn(&[f64]) -> Vector3<f64>| {
        worst(&rows, |r| separation_rad(&place(r), &vector(r, 10))) > MOON_TOLERANCE_RAD
    };
    assert!(missed(&|r| moon::geocentric_au(day(r[0] + 60.0 / 86_400.0)).unwrap()), "UTC for TDB");
    // Place left in axes of date: turned twice by precession.
    assert!(missed(&|r| Precession::at(r[0]).ecliptic_of_date_to_celestial(&place(r))), "equinox of date");
    assert!(missed(&|r| vector(r, 10).component_mul(&Vector3::new(1.0, 1.0, -1.0))), "latitude's sign");
}

/// Source: worked example of Meeus, Astronomical Algorithms, chapter 47 (1992 April 12.0 TD), as PyMeeus 0.5.12 runs
/// it: mean equinox of date, without nutation. Tolerance: that series' own error, 18 arcsec and 32 km at worst (ERFA
/// moon98).
#[test]
fn moon_matches_the_worked_example_of_1992() {
    let time = julian(2_448_724.5);
    let place = moon::geocentric_au(time).unwrap();
    let precession = Precession::at(time.tdb_days());
    let axes = Matrix3::from_columns(
        &[Vector3::x(), Vector3::y(), Vector3::z()].map(|a| precession.ecliptic_of_date_to_celestial(&a)),
    );
    let of_date = axes.transpose() * place;
    let (longitude, latitude) = (133.162_655_f64.to_radians(), (-3.229_126_f64).to_radians());
    let published = Vector3::new(latitude.cos() * longitude.cos(), latitude.cos() * longitude.sin(), latitude.sin());
    assert!(separation_rad(&of_date, &published) < 18.0 * ARCSEC_RAD);
    assert!((of_date.norm() * AU_KM - 368_409.7).abs() < 32.0);
    assert!(separation_rad(&place, &published) > 0.1, "equatorial for ecliptic");
}

// Turn of the Earth

#[test]
fn the_turn_of_the_earth_matches_erfa() {
    let rows = rows(include_str!("truth/ephemeris/rotation.csv"), 12);
    let truth = |r: &[f64]| Matrix3::from_row_slice(&r[3..12]);
    let angle = |a: &Matrix3<f64>, b: &Matrix3<f64>| (a - b).norm() / 2.0_f64.sqrt() / ARCSEC_RAD;
    let found = |r: &[f64], seconds: f64| celestial_to_terrestrial(r[0], r[1] + seconds / 86_400.0);
    let error_arcsec = worst(&rows, |r| angle(&found(r, 0.0), &truth(r)));
    assert!(error_arcsec < 0.3, "{error_arcsec}");
    assert!(worst(&rows, |r| angle(&found(r, 0.1), &truth(r))) > 0.3, "a tenth of a second late");
    assert!(worst(&rows, |r| angle(&found(r, 0.0).transpose(), &truth(r))) > 0.3, "the inverse");
    assert!(worst(&rows, |r| angle(&celestial_to_terrestrial(0.0, r[1]), &truth(r))) > 0.3, "precession left out");

    let sidereal_arcsec =
        |r: &[f64], days: f64| half_turn(apparent_sidereal_time_rad(days, r[1]) - r[2]).abs() / ARCSEC_RAD;
    assert!(worst(&rows, |r| sidereal_arcsec(r, r[0])) < 0.3);
    assert!(worst(&rows, |r| sidereal_arcsec(r, r[0] + 3400.0)) > 0.3, "nutation and precession of another year");
}

/// Source: ERFA's test of gst06a (t_erfa_c.c), 2006-01-01 0 h for both scales.
#[test]
fn sidereal_time_matches_erfas_test_value() {
    let days = 2_400_000.5 + 53_736.0 - 2_451_545.0;
    assert!((apparent_sidereal_time_rad(days, days) - 1.754_166_137_675_019_2).abs() < 0.3 * ARCSEC_RAD);
}

#[test]
fn the_turn_is_a_rotation() {
    for days in [-36_000.0, 0.0, 12_345.678, 36_000.0] {
        let m = celestial_to_terrestrial(days, days);
        assert!((m * m.transpose() - Matrix3::identity()).norm() < 1e-14 && (m.determinant() - 1.0).abs() < 1e-14);
    }
}

// Sites

fn site(longitude_deg: f64, latitude_deg: f64, height_m: f64) -> Site {
    Site { name: String::new(), longitude_deg, latitude_deg, height_m }
}

#[test]
fn a_site_stands_where_astropy_puts_it() {
    let rows = rows(include_str!("truth/ephemeris/site.csv"), 11);
    let state = |r: &[f64], sign: f64| site(sign * r[2], r[3], r[4]).geocentric(&celestial_to_terrestrial(r[0], r[1]));
    let miss_km = |r: &[f64], s: State| (s.position_au * AU_KM - vector(r, 5)).norm();
    let miss_km_s = |r: &[f64], s: State| (s.velocity_au_d * (AU_KM / 86_400.0) - vector(r, 8)).norm();
    assert!(worst(&rows, |r| miss_km(r, state(r, 1.0))) < 0.025);
    assert!(worst(&rows, |r| miss_km_s(r, state(r, 1.0))) < 1e-5);
    assert!(worst(&rows, |r| miss_km(r, state(r, -1.0))) > 0.025, "longitude's sign");
    let sphere = |r: &[f64]| {
        let s = state(r, 1.0);
        State { position_au: s.position_au.normalize() * (6371.0 / AU_KM), ..s }
    };
    assert!(worst(&rows, |r| miss_km(r, sphere(r))) > 0.025, "a sphere");
    let late = |r: &[f64]| site(r[2], r[3], r[4]).geocentric(&celestial_to_terrestrial(r[0], r[0]));
    assert!(worst(&rows, |r| miss_km(r, late(r))) > 0.025, "TT for UT1");
}

#[test]
fn parallax_constants_become_the_geodetic_place_of_erfa() {
    let rows = rows(include_str!("truth/ephemeris/geodetic.csv"), 6);
    let place = |r: &[f64]| from_parallax_constants(r[1].to_radians(), r[2], r[3]);
    assert!(worst(&rows, |r| (place(r).latitude_rad.to_degrees() - r[4]).abs()) < 1e-8);
    assert!(worst(&rows, |r| (place(r).height_m - r[5]).abs()) < 1e-3);
    let geocentric = |r: &[f64]| r[3].atan2(r[2]).to_degrees();
    assert!(worst(&rows, |r| (geocentric(r) - r[4]).abs()) > 0.1, "geocentric for geodetic latitude");
}

#[test]
fn fields_of_a_site_are_refused_by_name() {
    let cases = [
        (site(-180.1, 0.0, 0.0), "longitude_deg"),
        (site(360.1, 0.0, 0.0), "longitude_deg"),
        (site(f64::NAN, 0.0, 0.0), "longitude_deg"),
        (site(0.0, 90.1, 0.0), "latitude_deg"),
        (site(0.0, f64::NAN, 0.0), "latitude_deg"),
        (site(0.0, 0.0, -10_001.0), "height_m"),
        (site(0.0, 0.0, f64::INFINITY), "height_m"),
    ];
    for (site, field) in cases {
        let error = site.validate("observer").unwrap_err();
        assert_eq!(error.place, Place::Field(format!("observer.{field}")));
        assert_eq!(error.kind, Kind::Range);
    }
    for good in [site(-180.0, -90.0, -430.0), site(360.0, 90.0, 8849.0)] {
        assert_eq!(good.validate("observer"), Ok(()));
    }
}

#[test]
fn a_site_reads_and_prints_as_the_plan_writes_it() {
    let text = r#"{"name":"Invented hill","longitude_deg":23.4,"latitude_deg":37.1,"height_m":640.0}"#;
    let read: Site = serde_json::from_str(text).unwrap();
    assert_eq!(serde_json::to_string(&read).unwrap(), text);
    let short: Site = serde_json::from_str(r#"{"longitude_deg":23.4,"latitude_deg":37.1}"#).unwrap();
    assert_eq!(short, site(23.4, 37.1, 0.0));
    let unknown = serde_json::from_str::<Site>(r#"{"longitude_deg":1,"latitude_deg":2,"altitude":3}"#).unwrap_err();
    assert!(unknown.to_string().contains("altitude"));
    assert!(serde_json::from_str::<Site>(r#"{"latitude_deg":2}"#).is_err());
}

#[test]
fn every_observatory_of_the_table_is_a_valid_site() {
    let codes: Vec<&str> = SITE_CODES.lines().filter(|l| !l.starts_with('#')).map(|l| &l[..3]).collect();
    assert!(codes.len() > 2600);
    for code in codes {
        let site = find(SITE_CODES, code).unwrap_or_else(|| panic!("{code}"));
        assert!(site.validate("observer").is_ok() && !site.name.is_empty(), "{code}: {site:?}");
    }
}

/// Source: constants 0.94171 and 0.33725 at 204.5278 deg, published for code 568; geodetic place by ERFA gc2gd.
#[test]
fn a_code_and_a_name_find_their_site() {
    let summit = find(SITE_CODES, " 568 ").unwrap();
    assert_eq!((summit.name.as_str(), summit.longitude_deg), ("Maunakea", 204.5278));
    let truth = include_str!("truth/ephemeris/geodetic.csv").lines().find(|l| l.starts_with("568,")).unwrap();
    let fields: Vec<f64> = truth.split(',').skip(4).map(|f| f.parse().unwrap()).collect();
    assert!((summit.latitude_deg - fields[0]).abs() < 1e-6 && (summit.height_m - fields[1]).abs() < 0.06);
    for none in ["500", "250", "", "5", "0", "#", "zzz", "000\t0"] {
        assert_eq!(find(SITE_CODES, none), None, "{none:?}");
    }
    let found = search(SITE_CODES, "PARIS", 10);
    assert!(
        found.iter().any(|c| c.code == "007") && found.iter().all(|c| c.site.name.to_lowercase().contains("paris"))
    );
    assert_eq!(search(SITE_CODES, "observatory", 3).len(), 3);
    assert_eq!(search(SITE_CODES, "barcelona fabra", 10).len(), 1);
    assert!(search(SITE_CODES, "  ", 10).is_empty() && search(SITE_CODES, "no such place", 10).is_empty());
    assert_eq!(find("000\tno number\t.6\t.7\tName\nA\n", "000"), None);
}

// Sun

/// Source: heliographic latitude of the Earth, 1992-10-13.0 in Meeus, Astronomical Algorithms (1998), p. 191;
/// 2013-04-01.0 and 2013-12-01.0 in the Astronomical Almanac for 2013. Tolerance 0.01 deg: printed to 0.01, for the
/// apparent Sun.
#[test]
fn the_earth_stands_at_the_almanac_s_heliographic_latitudes() {
    for (date, published_deg) in [(2_448_908.5, 5.99), (2_456_383.5, -6.54), (2_456_627.5, 0.88)] {
        let place = earth(julian(date)).unwrap().position_au;
        let miss = |place: Vector3<f64>| (heliographic_latitude_rad(&place).to_degrees() - published_deg).abs();
        assert!(miss(place) < 0.01, "{date}: {}", miss(place));
        assert!(miss(-place) > 0.01, "the Sun from the Earth");
        assert!(miss(tailvane::frame::equatorial_to_ecliptic(&place)) > 0.01, "ecliptic for equatorial");
    }
    let pole = Vector3::new(286.13_f64.to_radians(), 63.87_f64.to_radians(), 0.0);
    let along = Vector3::new(pole.y.cos() * pole.x.cos(), pole.y.cos() * pole.x.sin(), pole.y.sin());
    assert!((heliographic_latitude_rad(&(along * 2.0)).to_degrees() - 90.0).abs() < 1e-5);
}

// Properties

proptest! {
    #[test]
    fn a_track_gives_the_same_states_as_the_direct_way(days in SPAN.first.tdb_days()..SPAN.last.tdb_days(), step in -40.0..40.0_f64) {
        let mut track = Track::new();
        for days in [days, (days + step).clamp(SPAN.first.tdb_days(), SPAN.last.tdb_days()), days] {
            let (direct, short) = (earth(day(days)).unwrap(), track.state(day(days)).unwrap());
            prop_assert!((direct.position_au - short.position_au).norm() < 3e-10);
            prop_assert!((direct.velocity_au_d - short.velocity_au_d).norm() < 5e-9);
        }
        let alone = Track::new().state(day(days)).unwrap();
        prop_assert_eq!(alone, track.state(day(days)).unwrap());
    }

    // Half an hour either way: the difference itself errs by 1e-10 au/day for the Moon's share, the table's joints by
    // 3e-9 au / 0.04 d.
    #[test]
    fn the_velocity_of_the_earth_is_the_rate_of_its_place(days in -36_500.0..36_800.0_f64) {
        let half = 0.02;
        let place = |d: f64| earth(day(d)).unwrap().position_au;
        let rate = (place(days + half) - place(days - half)) / (2.0 * half);
        let crosses_joint = ((days + half) / 96.0).floor() != ((days - half) / 96.0).floor();
        let tolerance = if crosses_joint { 3e-7 } else { 2e-9 };
        prop_assert!((rate - earth(day(days)).unwrap().velocity_au_d).norm() < tolerance);
    }

    #[test]
    fn the_velocity_of_a_site_is_the_rate_of_its_place(days in -36_500.0..36_800.0_f64, lon in -180.0..360.0_f64, lat in -90.0..=90.0_f64) {
        let (half, here) = (1e-3, site(lon, lat, 500.0));
        let at = |d: f64| here.geocentric(&celestial_to_terrestrial(d, d));
        let rate = (at(days + half).position_au - at(days - half).position_au) / (2.0 * half);
        // 2.7e-4 au/day at most; the difference itself errs by 7e-6 of it, precession and nutation in 1e-7.
        prop_assert!((rate - at(days).velocity_au_d).norm() < 3e-9);
    }

    #[test]
    fn geodetic_undoes_terrestrial(lon in -180.0..180.0_f64, lat in -90.0..=90.0_f64, height in -10_000.0..10_000.0_f64) {
        let place = site(lon, lat, height).geodetic();
        let back = geodetic(&terrestrial_m(&place));
        prop_assert!((back.latitude_rad - place.latitude_rad).abs() < 1e-10);
        prop_assert!((back.height_m - place.height_m).abs() < 1e-3);
        prop_assert!(half_turn(back.longitude_rad - place.longitude_rad).abs() * place.latitude_rad.cos() < 1e-12);
    }

    #[test]
    fn no_text_breaks_the_table_of_codes(table in "[#0-9a-z.\t\n -]{0,200}", code in ".{0,6}") {
        let _ = find(&table, &code);
        let _ = search(&table, &code, 5);
    }
}
