//! Which instant does a typed date mean?
//!
//! Inside the crate there is one time scale, TDB, held as days from J2000.0 (2000-01-01 12:00 TDB), which
//! keeps better than a microsecond over 1900-2100. TT and TDB differ by less than 2 ms and are taken as equal.
//! [`civil`] counts days, `scale` goes from UTC and UT to TT, `stamp` reads and prints typed dates.

pub mod civil;
mod cursor;
mod scale;
mod stamp;

pub use stamp::{Scale, Stamp};

use civil::{Date, MONTHS_SHORT};
use scale::SECONDS_PER_DAY;

/// An instant, as days of TDB from J2000.0.
#[derive(Clone, Copy, Debug, PartialEq, PartialOrd)]
pub struct Instant {
    tdb_days: f64,
}

/// What an instant outside the calendar (years -4712 to 9999, or not finite) prints as.
const OFF_CALENDAR: &str = "outside the calendar";

impl Instant {
    /// The instant `days` of TDB after J2000.0.
    pub const fn from_tdb_days(days: f64) -> Self {
        Instant { tdb_days: days }
    }

    /// The instant of a UTC (before 1972: UT) given in days from 2000-01-01 12:00, 86400 s to the day.
    /// Inverse of [`Instant::ut1_days`], except within a leap second.
    pub fn from_ut1_days(days: f64) -> Self {
        let from_midnight = days + 0.5;
        let day = from_midnight.floor();
        Instant::from_utc(day as i64, from_midnight - day)
    }

    /// The instant of a UTC day from 2000-01-01 and a fraction of 86400 s (from 1 to 1 + 1/86400 in a leap second).
    fn from_utc(day: i64, fraction: f64) -> Self {
        let offset = scale::tt_minus_utc_seconds(day, fraction) / SECONDS_PER_DAY;
        Instant { tdb_days: (day as f64 - 0.5) + (fraction + offset) }
    }

    /// Days of TDB since J2000.0.
    pub const fn tdb_days(self) -> f64 {
        self.tdb_days
    }

    /// Days of UT1 from 2000-01-01 12:00 UT1, for the turn of the Earth: UT1 is taken as UTC from 1972 (within
    /// 0.9 s, 14 arcsec of turn) and as UT before.
    pub fn ut1_days(self) -> f64 {
        let (day, second) = scale::utc_of_tt(self.tdb_days);
        (day as f64 - 0.5) + second / SECONDS_PER_DAY
    }

    /// The instant `days` later (earlier when negative).
    pub fn plus_days(self, days: f64) -> Self {
        Instant { tdb_days: self.tdb_days + days }
    }

    /// UTC (before 1972: UT) rounded to whole units of 1/`per_second` s: the date and the units since its midnight.
    /// None outside the calendar. The units reach the 86401st second only on a day with a leap second.
    fn utc_units(self, per_second: i64) -> Option<(Date, i64)> {
        if self.tdb_days.is_nan() || self.tdb_days.abs() > 4e6 {
            return None;
        }
        let (mut day, second) = scale::utc_of_tt(self.tdb_days);
        let mut units = (second * per_second as f64).round() as i64;
        let seconds_in_day = 86_400 + i64::from(scale::has_leap_second(day));
        if units >= seconds_in_day * per_second {
            units -= seconds_in_day * per_second;
            day += 1;
        }
        Some((Date::from_day_number(day)?, units))
    }

    /// UTC (before 1972: UT) rounded to a fraction 1/`parts` of a day, a leap second counting to the day after:
    /// the date and the parts since its midnight. None outside the calendar.
    fn utc_parts(self, parts: i64) -> Option<(Date, i64)> {
        if self.tdb_days.is_nan() || self.tdb_days.abs() > 4e6 {
            return None;
        }
        let (day, second) = scale::utc_of_tt(self.tdb_days);
        let rounded = (second / SECONDS_PER_DAY * parts as f64).round() as i64;
        Some((Date::from_day_number(day + rounded.div_euclid(parts))?, rounded.rem_euclid(parts)))
    }

    /// ISO 8601 UTC to the millisecond, such as `2031-03-20T05:30:00.000Z`, rounded; 60 s only in a leap second.
    pub fn utc_iso_ms(self) -> String {
        match Stamp::utc_milliseconds(self) {
            Ok(stamp) => stamp.to_string(),
            Err(_) => OFF_CALENDAR.into(),
        }
    }

    /// UTC to the minute for people, such as `2031-03-20 05:30 UTC`, rounded.
    pub fn utc_minute(self) -> String {
        match self.utc_parts(1440) {
            Some((date, minutes)) => format!("{date} {:02}:{:02} UTC", minutes / 60, minutes % 60),
            None => OFF_CALENDAR.into(),
        }
    }

    /// Decimal-day UT as observers write it, such as `2031 Mar. 28.19 UT`, rounded to `decimals` (at most 8).
    pub fn ut_decimal_day(self, decimals: usize) -> String {
        let decimals = decimals.min(8);
        let parts = 10_i64.pow(decimals as u32);
        match self.utc_parts(parts) {
            Some((Date { year, month, day }, 0)) if decimals == 0 => {
                format!("{year} {} {day} UT", MONTHS_SHORT[month as usize - 1])
            }
            Some((Date { year, month, day }, part)) => {
                format!("{year} {} {day}.{part:0decimals$} UT", MONTHS_SHORT[month as usize - 1])
            }
            None => OFF_CALENDAR.into(),
        }
    }
}
