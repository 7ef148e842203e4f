//! By how much do UTC and UT differ from TT?
//!
//! - From 1972: UTC by the table of leap seconds below, TT - UTC = (TAI - UTC) + 32.184 s, exact. After the
//!   last entry TAI - UTC stays what it is.
//! - Before 1972 a time marked UTC means UT, and TT - UT (Delta T) comes from the polynomials of Espenak &
//!   Meeus. UTC of 1960-1971, with its stretched seconds, is not modelled: it stayed within 0.2 s of UT.
//!   Against the tables that skyfield 1.55 carries (IERS; Morrison et al. 2021) they miss by at most 1.2 s in
//!   1900-1971 and 5.3 s in 1700-1899 (`tests/time_text.rs`): 0.01 arcsec for a comet 0.1 au from a site.
//! - UT1 is taken as UTC from 1972 (they differ by less than 0.9 s) and as UT before.
//! - At 1972-01-01 the polynomial ends 0.07 s above the table, so that much of UT is given twice.
//!
//! Why a table of our own: the general time libraries tried hold TT - UTC constant before 1972 (35 s wrong
//! in 1900), read 23:59:60 silently as :59, and do not read decimal days.
//!
//! Sources: IERS Bulletin C (leap seconds to 2017-01-01; none announced since). F. Espenak & J. Meeus, Five
//! Millennium Canon of Solar Eclipses, NASA/TP-2006-214141, and NASA's eclipse pages, "Polynomial
//! expressions for Delta T". Their year is the middle of a month; here it runs continuously.

use super::civil::Date;

/// TT - TAI, seconds (IAU 1991).
const TT_MINUS_TAI_SECONDS: f64 = 32.184;
pub(super) const SECONDS_PER_DAY: f64 = 86_400.0;

/// Year and month on whose first day TAI - UTC became the third number, seconds. IERS Bulletin C.
///
/// To update, do these: when Bulletin C announces a leap second at the end of June or December, add the first of
/// July or January with the new TAI - UTC; name the bulletin in the module text; run `tests/time_text.rs`,
/// which compares with a public table.
const LEAP_SECONDS: [(i32, u32, u32); 28] = [
    (1972, 1, 10), (1972, 7, 11), (1973, 1, 12), (1974, 1, 13), (1975, 1, 14), (1976, 1, 15), (1977, 1, 16),
    (1978, 1, 17), (1979, 1, 18), (1980, 1, 19), (1981, 7, 20), (1982, 7, 21), (1983, 7, 22), (1985, 7, 23),
    (1988, 1, 24), (1990, 1, 25), (1991, 1, 26), (1992, 7, 27), (1993, 7, 28), (1994, 7, 29), (1996, 1, 30),
    (1997, 7, 31), (1999, 1, 32), (2006, 1, 33), (2009, 1, 34), (2012, 7, 35), (2015, 7, 36), (2017, 1, 37),
];

/// The table with its dates as day numbers from 2000-01-01.
fn leap_days() -> impl DoubleEndedIterator<Item = (i64, f64)> {
    LEAP_SECONDS.iter().map(|&(year, month, tai_minus_utc)| {
        (Date { year, month, day: 1 }.day_number(), TT_MINUS_TAI_SECONDS + f64::from(tai_minus_utc))
    })
}

/// Whether the UTC day `day` (from 2000-01-01) ended in a leap second, so that it had a 23:59:60.
pub(super) fn has_leap_second(day: i64) -> bool {
    leap_days().skip(1).any(|(start, _)| start == day + 1)
}

/// TT - UTC, seconds, for the whole UTC day `day` from 1972; TT - UT at `day + fraction` before.
pub(super) fn tt_minus_utc_seconds(day: i64, fraction: f64) -> f64 {
    match leap_days().rev().find(|&(start, _)| start <= day) {
        Some((_, offset)) => offset,
        None => delta_t_seconds(year_of(day as f64 + fraction)),
    }
}

/// The UTC day (from 2000-01-01) and second of day of a TT given in days from J2000.0. The second reaches
/// 86401 within a leap second. UT before 1972.
pub(super) fn utc_of_tt(tt_days: f64) -> (i64, f64) {
    let mut next_start = i64::MAX;
    for (start, offset) in leap_days().rev() {
        if tt_days >= start as f64 - 0.5 + offset / SECONDS_PER_DAY {
            let utc = tt_days - offset / SECONDS_PER_DAY + 0.5;
            let day = (utc.floor() as i64).min(next_start - 1);
            return (day, (utc - day as f64) * SECONDS_PER_DAY);
        }
        next_start = start;
    }
    // Delta T is asked at UT; its slope is below 1e-5, so two rounds leave nothing visible.
    let mut utc = tt_days + 0.5;
    for _ in 0..3 {
        utc = tt_days + 0.5 - delta_t_seconds(year_of(utc)) / SECONDS_PER_DAY;
    }
    let day = utc.floor();
    (day as i64, (utc - day) * SECONDS_PER_DAY)
}

/// Decimal year of a day from 2000-01-01 00:00, in Julian years: enough for a slow polynomial.
fn year_of(days: f64) -> f64 {
    2000.0 + days / 365.25
}

/// TT - UT, seconds, in the decimal year `year`, by Espenak & Meeus (2006); meant for years before 1972.
///
/// Accuracy: see the module; before 1700 tens of seconds, growing to hours in antiquity, as their own table.
fn delta_t_seconds(year: f64) -> f64 {
    let (t, coefficients): (f64, &[f64]) = if year < -500.0 {
        ((year - 1820.0) / 100.0, &[-20.0, 0.0, 32.0])
    } else if year < 500.0 {
        (year / 100.0, &[10583.6, -1014.41, 33.78311, -5.952053, -0.1798452, 0.022174192, 0.0090316521])
    } else if year < 1600.0 {
        ((year - 1000.0) / 100.0, &[1574.2, -556.01, 71.23472, 0.319781, -0.8503463, -0.005050998, 0.0083572073])
    } else if year < 1700.0 {
        (year - 1600.0, &[120.0, -0.9808, -0.01532, 1.0 / 7129.0])
    } else if year < 1800.0 {
        (year - 1700.0, &[8.83, 0.1603, -0.0059285, 0.00013336, -1.0 / 1_174_000.0])
    } else if year < 1860.0 {
        let c = &[13.72, -0.332447, 0.0068612, 0.0041116, -0.00037436, 0.0000121272, -0.0000001699, 0.000000000875];
        (year - 1800.0, c)
    } else if year < 1900.0 {
        (year - 1860.0, &[7.62, 0.5737, -0.251754, 0.01680668, -0.0004473624, 1.0 / 233_174.0])
    } else if year < 1920.0 {
        (year - 1900.0, &[-2.79, 1.494119, -0.0598939, 0.0061966, -0.000197])
    } else if year < 1941.0 {
        (year - 1920.0, &[21.20, 0.84493, -0.076100, 0.0020936])
    } else if year < 1961.0 {
        (year - 1950.0, &[29.07, 0.407, -1.0 / 233.0, 1.0 / 2547.0])
    } else {
        (year - 1975.0, &[45.45, 1.067, -1.0 / 260.0, -1.0 / 718.0])
    };
    coefficients.iter().rev().fold(0.0, |sum, coefficient| sum * t + coefficient)
}
