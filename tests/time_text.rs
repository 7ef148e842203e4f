//! Dates as text and time scales, against ERFA and skyfield (tests/truth/days.csv) and as properties.

mod common;

use common::stamp_texts;
use proptest::prelude::*;
use tailvane::error::Place;
use tailvane::time::{Instant, Scale, Stamp};

fn stamp(text: &str) -> Stamp {
    text.parse().unwrap_or_else(|error| panic!("{text}: {error}"))
}

fn days(text: &str) -> f64 {
    stamp(text).instant().tdb_days()
}

fn refusal(text: &str) -> (usize, String) {
    match text.parse::<Stamp>() {
        Ok(stamp) => panic!("{text} was read as {stamp}"),
        Err(error) => match error.place {
            Place::Line { line: 1, column } => (column, format!("{} | {}", error.found, error.allowed)),
            ref place => panic!("{text}: {place:?}"),
        },
    }
}

struct Row {
    utc: bool,
    date: String,
    day: f64,
    offset_seconds: f64,
}

fn truth() -> Vec<Row> {
    let rows: Vec<Row> = include_str!("truth/days.csv")
        .lines()
        .filter(|line| !line.starts_with('#'))
        .skip(1)
        .map(|line| {
            let cells: Vec<&str> = line.split(',').collect();
            let number = |cell: &str| cell.parse().unwrap();
            Row {
                utc: cells[0] == "UTC",
                date: cells[1].into(),
                day: number(cells[2]),
                offset_seconds: number(cells[3]),
            }
        })
        .collect();
    assert_eq!(rows.len(), 720 + 112);
    rows
}

/// TT - UTC as our code has it, in seconds, from the two forms of one clock reading.
fn offset_seconds(date: &str) -> f64 {
    (days(&format!("{date}T00:00:00Z")) - days(&format!("{date}.0 TT"))) * 86400.0
}

#[test]
fn day_numbers_and_leap_seconds_are_erfas() {
    for row in truth().iter().filter(|row| row.utc) {
        assert_eq!(days(&format!("{}.0 TT", row.date)), row.day - 0.5, "{}", row.date);
        // 1e-6 s: a 64-bit day count near 11000 steps by 1.6e-7 s.
        assert!((offset_seconds(&row.date) - row.offset_seconds).abs() < 1e-6, "{}", row.date);
    }
}

#[test]
fn delta_t_before_1972_is_near_the_measured_tables() {
    let mut worst = [0.0_f64; 2];
    for row in truth().iter().filter(|row| !row.utc) {
        let difference = (offset_seconds(&row.date) - row.offset_seconds).abs();
        let century = usize::from(row.date.as_str() >= "1900");
        worst[century] = worst[century].max(difference);
    }
    println!("worst Delta T difference: {:.3} s in 1700-1899, {:.3} s in 1900-1971", worst[0], worst[1]);
    // The accuracy the module states; holding TT - UTC at its 1972 value would fail by 45 s.
    assert!(worst[0] < 5.3 && worst[1] < 1.2);
}

#[test]
fn published_conversions_hold() {
    // Made with ERFA (utctai, taitt); tolerance 1e-8 d, the digits given.
    for (utc, jd_tt) in [
        ("2024-10-14T18:00:00Z", "JD 2460598.25080074 TT"),
        ("2004-05-02T22:16:19Z", "JD 2453128.42874056 TT"),
        ("2000-01-01T12:00Z", "JD 2451545.00074287 TT"),
    ] {
        assert!((days(utc) - days(jd_tt)).abs() < 1e-8, "{utc}");
    }
}

#[test]
fn a_leap_second_has_its_own_name_and_lasts_a_second() {
    let before = days("2016-12-31T23:59:59Z");
    let within = days("2016-12-31T23:59:60Z");
    let after = days("2017-01-01T00:00:00Z");
    for step in [within - before, after - within] {
        assert!((step * 86400.0 - 1.0).abs() < 1e-6);
    }
    assert_eq!(stamp("2016-12-31T23:59:60.250Z").instant().utc_iso_ms(), "2016-12-31T23:59:60.250Z");
    assert_eq!(stamp("2016-12-31T23:59:60.9996Z").instant().utc_iso_ms(), "2017-01-01T00:00:00.000Z");
    assert_eq!(stamp("2016-12-31T23:59:59.9996Z").instant().utc_iso_ms(), "2016-12-31T23:59:60.000Z");
    assert_eq!(stamp("2031-03-20T23:59:59.9996Z").instant().utc_iso_ms(), "2031-03-21T00:00:00.000Z");
    for text in ["2031-12-31T23:59:60Z", "2016-12-31T22:59:60Z", "2016-12-30T23:59:60Z", "1971-12-31T23:59:60Z"] {
        assert_eq!(refusal(text).0, 18, "{text}");
    }
}

#[test]
fn texts_for_people_round_and_carry() {
    let instant = stamp("2031-03-28T04:33:36Z").instant();
    assert_eq!(instant.ut_decimal_day(2), "2031 Mar. 28.19 UT");
    assert_eq!(instant.utc_minute(), "2031-03-28 04:34 UTC");
    let evening = stamp("2031-12-31T23:59:45Z").instant();
    assert_eq!(evening.utc_minute(), "2032-01-01 00:00 UTC");
    assert_eq!(evening.ut_decimal_day(3), "2032 Jan. 1.000 UT");
    assert_eq!(evening.ut_decimal_day(0), "2032 Jan. 1 UT");
    assert_eq!(stamp("2016-12-31T23:59:60.5Z").instant().utc_minute(), "2017-01-01 00:00 UTC");
    for odd in [f64::NAN, f64::INFINITY, -1e300, 3.9e6] {
        let instant = Instant::from_tdb_days(odd);
        assert_eq!(instant.utc_iso_ms(), "outside the calendar");
        assert_eq!(instant.utc_minute(), "outside the calendar");
        assert!(Stamp::utc_seconds(instant).is_err());
    }
}

#[test]
fn one_instant_in_every_form() {
    let instant = days("2031-03-20T06:00:00Z");
    for same in [
        "2031-03-20.25 UTC",
        "JD 2462945.75 UTC",
        "2031-03-20T06:00Z",
        " jd 2462945.75  utc ",
        "2031-03-20t06:00:00.000z",
    ] {
        assert!((days(same) - instant).abs() < 1e-11, "{same}");
    }
    assert_eq!(days("2031-03-20.75 TT"), days("JD 2462946.25 TDB"));
    assert_eq!(days("JD 2451545 TT"), 0.0);
}

#[test]
fn refusals_name_the_column_and_what_is_allowed() {
    for (text, column, part) in [
        ("", 1, "nothing"),
        ("   ", 1, "nothing"),
        ("tomorrow", 1, "a date such as"),
        ("2031-13-01.0 TT", 6, "a month from 1 to 12"),
        ("2031-02-30.0 TT", 9, "a day from 1 to 28"),
        ("2031-03-32T05:30:00Z", 9, "a day from 1 to 31"),
        ("2031-03-20T25:30:00Z", 12, "an hour from 00 to 23"),
        ("2031-03-20T24:00:00Z", 12, "an hour from 00 to 23"),
        ("2031-03-20T05:60:00Z", 15, "a minute"),
        ("2031-03-20T05:30:61Z", 18, "a second"),
        ("2031-03-20T05:30:00", 20, "`Z`"),
        ("2031-03-20T05:30:00+02:00", 20, "`Z`"),
        ("2031-03-20", 11, "the time scale"),
        ("2031-03-20.5", 13, "the time scale"),
        ("2031-03-20.5 GMT", 14, "the time scale"),
        ("2031-03-20.5 TTT", 14, "the time scale"),
        ("2031-03-20. TT", 12, "digits after the decimal point"),
        ("2031-3-20.5 TT", 7, "two digits"),
        ("20310-03-20.5 TT", 1, "four digits"),
        ("31-03-20.5 TT", 3, "four digits"),
        ("-4713-12-31.0 TT", 1, "-4712 to 9999"),
        ("2031-03-20.5 TT and more", 17, "nothing after the date"),
        ("2031-03-20.1234567890123456789 TT", 30, "at most 18 decimals"),
        ("JD", 3, "a Julian date"),
        ("JD NaN TT", 4, "a Julian date"),
        ("JD -5.0 TT", 4, "a Julian date"),
        ("JD 2451545e9 TT", 11, "the time scale"),
        ("JD 36.4 TT", 4, "a Julian date from"),
        ("JD 9999999.5 TT", 4, "a Julian date from"),
        ("JD 2460000.5", 13, "the time scale"),
        ("NaN", 1, "a date such as"),
        ("\u{0}\u{ffff}", 1, "a date such as"),
    ] {
        let (found_column, message) = refusal(text);
        assert_eq!(found_column, column, "{text}: {message}");
        assert!(message.contains(part), "{text}: {message}");
    }
}

#[test]
fn printed_notations_give_stamps_with_the_same_digits() {
    let perihelion = Stamp::from_parts(2031, 3, "4.51732", Scale::Tt).unwrap();
    assert_eq!(perihelion.to_string(), "2031-03-04.51732 TT");
    assert_eq!(Stamp::from_parts(2031, 3, "04.50", Scale::Tt).unwrap().to_string(), "2031-03-04.50 TT");
    assert_eq!(Stamp::from_modified_julian("59873", Scale::Tt).unwrap().to_string(), "2022-10-21 TT");
    for (month, day) in [(13, "1.0"), (2, "29.5"), (2, "0.5"), (2, ""), (2, "4.5x"), (2, "-4.5"), (2, "NaN")] {
        assert!(Stamp::from_parts(2031, month, day, Scale::Tt).is_err(), "{month} {day}");
    }
    for text in ["", "-5.0", "99999999", "NaN", "5e4"] {
        assert!(Stamp::from_modified_julian(text, Scale::Tt).is_err(), "{text}");
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 2000, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn every_form_prints_back_as_typed(text in stamp_texts()) {
        let stamp = stamp(&text);
        prop_assert_eq!(stamp.to_string(), text.clone());
        prop_assert!(stamp.instant().tdb_days().is_finite());
        prop_assert_eq!(serde_json::to_string(&stamp).unwrap(), format!("\"{text}\""));
        prop_assert_eq!(serde_json::from_str::<Stamp>(&format!("\"{text}\"")).unwrap(), stamp);
    }

    #[test]
    fn an_instant_prints_and_reads_back_to_half_a_millisecond(instant in -2.4e6..2.9e6_f64) {
        // Delta T repeats 0.07 s at 1972-01-01; elsewhere UTC and UT run on. 5e-5 s is the step of the day count.
        prop_assume!((instant + 10227.5).abs() > 1.0 / 86400.0);
        let read = days(&Instant::from_tdb_days(instant).utc_iso_ms());
        prop_assert!((read - instant).abs() * 86400.0 < 0.5e-3 + 5e-5, "{} {}", read, instant);
        let turned = Instant::from_ut1_days(Instant::from_tdb_days(instant).ut1_days()).tdb_days();
        prop_assert!((turned - instant).abs() * 86400.0 < 1e-3);
    }

    #[test]
    fn rounded_stamps_never_say_sixty_seconds_outside_leap_seconds(instant in -15000.0..30000.0_f64) {
        let text = Stamp::utc_seconds(Instant::from_tdb_days(instant)).unwrap().to_string();
        prop_assert_eq!(text.parse::<Stamp>().unwrap().to_string(), text);
    }

    #[test]
    fn no_text_panics(text in "\\PC{0,40}") {
        let _ = text.parse::<Stamp>();
        let _ = Stamp::from_parts(2031, 3, &text, Scale::Tt);
        let _ = Stamp::from_modified_julian(&text, Scale::Tt);
    }

    #[test]
    fn a_changed_character_is_refused_or_printed_back(text in stamp_texts(), place in 0..40_usize, new in "[ -~\u{2212}\u{e9}]") {
        let mut chars: Vec<char> = text.chars().collect();
        let place = place % chars.len();
        chars[place] = new.chars().next().unwrap();
        let changed: String = chars.iter().collect();
        if let Ok(stamp) = changed.parse::<Stamp>() {
            let plain = |text: &str| text.replace('\u{2212}', "-").replace("-0000", "0000").to_uppercase().split_whitespace().collect::<String>();
            prop_assert_eq!(plain(&stamp.to_string()), plain(&changed));
        }
    }
}
