//! Time scales against ERFA and skyfield's table of Delta T (tests/truth/make_times.py).

#[path = "truth/rows.rs"]
mod rows;

use rows::table;
use tailvane::time::{Instant, Stamp};

const SECONDS_PER_DAY: f64 = 86_400.0;

fn instant(text: &str) -> Instant {
    text.parse::<Stamp>().unwrap_or_else(|error| panic!("{text}: {error}")).instant()
}

/// Rows of utc.csv at which a reading of the date is off by more than 1e-10 day (9 microseconds).
fn utc_misses(tdb_days: impl Fn(&str) -> f64) -> Vec<String> {
    let rows = table("utc.csv");
    let miss = |row: &rows::Row| (tdb_days(row.text("utc")) - row.number("tt_days")).abs();
    let off = rows.iter().filter(|row| miss(row) > 1e-10 || miss(row).is_nan());
    off.map(|row| row.text("utc").to_owned()).collect()
}

#[test]
fn utc_means_the_terrestrial_time_that_erfa_gives_around_every_leap_second() {
    assert_eq!(utc_misses(|text| instant(text).tdb_days()), Vec::<String>::new());
}

#[test]
fn a_leap_second_missed_or_a_scale_mistaken_would_be_seen() {
    let rows = table("utc.csv").len();
    // UTC read as TT.
    assert_eq!(utc_misses(|text| instant(&format!("{} TT", decimal_day(text))).tdb_days()).len(), rows);
    // One leap second too few.
    assert_eq!(utc_misses(|text| instant(text).tdb_days() - 1.0 / SECONDS_PER_DAY).len(), rows);
    // The leap second read as the second before it, as some libraries do.
    let silent = utc_misses(|text| instant(&text.replace(":60", ":59")).tdb_days()).len();
    assert_eq!(silent, rows_with_leap_second());
}

fn rows_with_leap_second() -> usize {
    let rows = table("utc.csv").iter().filter(|row| row.text("utc").contains(":60")).count();
    assert_eq!(rows, 2 * 27, "27 leap seconds since 1972, two rows in each");
    rows
}

/// `1999-01-01T06:00:00Z` as `1999-01-01.25`: the same digits without their scale.
fn decimal_day(utc: &str) -> String {
    let (date, clock) = utc.trim_end_matches('Z').split_once('T').expect("a date and a clock time");
    let mut seconds = 0.0;
    for part in clock.split(':') {
        seconds = seconds * 60.0 + part.parse::<f64>().expect("a number");
    }
    let day = (seconds / SECONDS_PER_DAY).min(0.999_999_999);
    format!("{date}{}", format!("{day:.9}").trim_start_matches('0'))
}

#[test]
fn an_instant_prints_back_as_the_utc_it_was_read_from() {
    for row in table("utc.csv") {
        let text = row.text("utc");
        let with_milliseconds = if text.contains('.') { text.to_owned() } else { text.replace('Z', ".000Z") };
        assert_eq!(instant(text).utc_iso_ms(), with_milliseconds);
    }
}

#[test]
fn a_julian_date_and_a_decimal_day_mean_the_same_instant() {
    for row in table("utc.csv") {
        let [whole, part] = row.numbers(["jd_tt_1", "jd_tt_2"]);
        // Nine decimals of a day are 0.1 ms: 1e-9 day.
        let julian = instant(&format!("JD {:.9} TT", whole + part)).tdb_days();
        assert!((julian - row.number("tt_days")).abs() <= 2e-9, "{}", row.text("utc"));
    }
}

/// How far, in seconds, dates before 1972 lie from skyfield's TT - UT1.
fn delta_t_misses_seconds() -> Vec<(String, f64)> {
    let miss = |row: &rows::Row| {
        let seconds = (instant(row.text("ut")).tdb_days() - row.number("tt_days")) * SECONDS_PER_DAY;
        (row.text("ut").to_owned(), seconds)
    };
    table("delta_t.csv").iter().map(miss).collect()
}

#[test]
fn before_1972_utc_means_universal_time() {
    let misses = delta_t_misses_seconds();
    let worst = misses.iter().max_by(|a, b| a.1.abs().total_cmp(&b.1.abs())).expect("rows");
    let beyond = misses.iter().filter(|(_, seconds)| seconds.abs() > 0.5).count();
    println!("Delta T: worst {:+.3} s at {}; {beyond} of {} rows beyond 0.5 s", worst.1, worst.0, misses.len());
    assert!(worst.1.abs() <= 1.2, "{worst:?}");
}

#[test]
fn a_constant_delta_t_before_1972_would_be_seen() {
    // What general libraries do: 42.184 s before 1972 as after.
    let rows = table("delta_t.csv");
    let seen = rows.iter().filter(|row| (row.number("delta_t_s") - 42.184).abs() > 1.2).count();
    assert!(seen >= rows.len() - 4, "{seen} of {}", rows.len());
}
