//! Which day does a calendar date name?
//!
//! Gregorian calendar throughout, also before 1582, with a year 0 (astronomical count: year 0 is 1 BC).
//! A day is counted from 2000-01-01 (day 0), from midnight to midnight. Dates are accepted for the years
//! -4712 to 9999. Exact integer arithmetic.
//!
//! Not here: the Julian calendar; a date printed in it must be converted before it is typed.
//!
//! Source of the method: the 400-year cycle of 146097 days, with years begun in March so that the leap day
//! comes last.

use crate::error::{Error, Kind, Place};

/// The first year accepted.
pub const FIRST_YEAR: i32 = -4712;
/// The last year accepted.
pub const LAST_YEAR: i32 = 9999;

const DAYS_PER_CYCLE: i64 = 146_097;
/// Day number of 0000-03-01, from which the cycles are counted.
const CYCLE_START: i64 = -730_425;

/// Month names as printed circulars shorten them.
pub const MONTHS_SHORT: [&str; 12] =
    ["Jan.", "Feb.", "Mar.", "Apr.", "May", "June", "July", "Aug.", "Sept.", "Oct.", "Nov.", "Dec."];

/// A calendar date, Gregorian.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct Date {
    pub year: i32,
    /// 1 to 12.
    pub month: u32,
    /// 1 to the length of the month.
    pub day: u32,
}

impl Date {
    /// The date with these numbers.
    ///
    /// # Errors
    /// A year outside -4712 to 9999, a month outside 1 to 12, a day the month does not have.
    pub fn new(year: i32, month: u32, day: u32) -> Result<Date, Error> {
        let refuse = |found: String, allowed: String| Err(Error::new(Kind::Time, Place::Whole, found, allowed));
        if !(FIRST_YEAR..=LAST_YEAR).contains(&year) {
            return refuse(format!("year {year}"), format!("a year from {FIRST_YEAR} to {LAST_YEAR}"));
        }
        if !(1..=12).contains(&month) {
            return refuse(format!("month {month}"), "a month from 1 to 12".into());
        }
        let length = month_length(year, month);
        if !(1..=length).contains(&day) {
            return refuse(format!("day {day}"), format!("a day from 1 to {length} in month {month} of {year}"));
        }
        Ok(Date { year, month, day })
    }

    /// Days from 2000-01-01 to this date.
    pub fn day_number(self) -> i64 {
        let (month, day) = (i64::from(self.month), i64::from(self.day));
        let from_march = (month + 9) % 12;
        let year = i64::from(self.year) - i64::from(self.month <= 2);
        let (cycle, year) = (year.div_euclid(400), year.rem_euclid(400));
        let day_of_year = (153 * from_march + 2) / 5 + day - 1;
        cycle * DAYS_PER_CYCLE + year * 365 + year / 4 - year / 100 + day_of_year + CYCLE_START
    }

    /// The date `day_number` days after 2000-01-01, or None outside the accepted years.
    pub fn from_day_number(day_number: i64) -> Option<Date> {
        if day_number.abs() > 4_000_000 {
            return None; // far outside the accepted years, and keeps the arithmetic small
        }
        let day = day_number - CYCLE_START;
        let (cycle, day) = (day.div_euclid(DAYS_PER_CYCLE), day.rem_euclid(DAYS_PER_CYCLE));
        let year = (day - day / 1460 + day / 36_524 - day / 146_096) / 365;
        let day_of_year = day - (365 * year + year / 4 - year / 100);
        let from_march = (5 * day_of_year + 2) / 153;
        let month = if from_march < 10 { from_march + 3 } else { from_march - 9 };
        let year = cycle * 400 + year + i64::from(month <= 2);
        let year = i32::try_from(year).ok().filter(|year| (FIRST_YEAR..=LAST_YEAR).contains(year))?;
        let day = day_of_year - (153 * from_march + 2) / 5 + 1;
        Some(Date { year, month: month as u32, day: day as u32 })
    }
}

/// Days in a month of 1 to 12; 0 for any other number.
pub fn month_length(year: i32, month: u32) -> u32 {
    match month {
        2 if year.rem_euclid(4) == 0 && (year.rem_euclid(100) != 0 || year.rem_euclid(400) == 0) => 29,
        2 => 28,
        4 | 6 | 9 | 11 => 30,
        1..=12 => 31,
        _ => 0,
    }
}

impl std::fmt::Display for Date {
    /// ISO 8601: four digits of year, with a minus sign before year 0.
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        let sign = if self.year < 0 { "-" } else { "" };
        write!(f, "{sign}{:04}-{:02}-{:02}", self.year.unsigned_abs(), self.month, self.day)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn known_days_have_their_numbers() {
        // Julian day numbers at noon, Meeus, Astronomical Algorithms, chapter 7 (Gregorian ones), less 2451545.
        for (year, month, day, noon_julian_day) in
            [(2000, 1, 1, 2_451_545), (1987, 1, 27, 2_446_823), (1600, 1, 1, 2_305_448), (1988, 6, 19, 2_447_332)]
        {
            assert_eq!(Date::new(year, month, day).unwrap().day_number(), noon_julian_day - 2_451_545);
        }
    }

    #[test]
    fn every_day_of_the_span_goes_there_and_back_in_order() {
        let first = Date::new(FIRST_YEAR, 1, 1).unwrap();
        let last = Date::new(LAST_YEAR, 12, 31).unwrap();
        let mut previous = None;
        for number in first.day_number()..=last.day_number() {
            let date = Date::from_day_number(number).unwrap();
            assert_eq!(date.day_number(), number);
            assert_eq!(Date::new(date.year, date.month, date.day).unwrap(), date);
            assert!(previous < Some(date));
            previous = Some(date);
        }
        assert_eq!(Date::from_day_number(first.day_number()), Some(first));
        assert_eq!(Date::from_day_number(first.day_number() - 1), None);
        assert_eq!(Date::from_day_number(last.day_number() + 1), None);
        assert_eq!(Date::from_day_number(i64::MIN + 1), None);
    }

    #[test]
    fn days_that_a_month_lacks_are_refused() {
        for (year, month, day) in [(2031, 2, 29), (1900, 2, 29), (2031, 4, 31), (2031, 13, 1), (2031, 0, 1), (2031, 1, 0), (10_000, 1, 1), (-4713, 12, 31)] {
            assert!(Date::new(year, month, day).is_err(), "{year} {month} {day}");
        }
        assert!(Date::new(2000, 2, 29).is_ok());
    }
}
