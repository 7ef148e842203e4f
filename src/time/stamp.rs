//! How is a date typed, and how does it print back unchanged?
//!
//! Three forms, each kept as it was typed (every digit, also trailing zeros):
//!
//! | form | example | scale |
//! | --- | --- | --- |
//! | ISO 8601 | `2031-03-20T05:30:00.25Z`, seconds and their decimals optional | UTC |
//! | decimal day | `2031-03-04.51732 TT`, decimals optional | `UTC`, `TT` or `TDB` |
//! | Julian date | `JD 2460000.5 TDB` | `UTC`, `TT` or `TDB` |
//!
//! Whole days and decimals are kept apart, so that no digit is lost to one 64-bit Julian date. UTC before 1972
//! means UT. A decimal day or Julian date in UTC counts 86400 s to the day, so a leap second has a name only in the
//! ISO form. Gregorian calendar, years -4712 to 9999; see [`super::civil`].

use super::civil::{Date, FIRST_YEAR, LAST_YEAR};
use super::cursor::{Cursor, Decimals, at, quote};
use super::{Instant, scale};
use crate::error::{Error, Kind, Place};
use std::fmt;
use std::str::FromStr;

/// The time scale of a typed date.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Scale {
    /// Coordinated Universal Time; UT before 1972.
    Utc,
    /// Terrestrial Time.
    Tt,
    /// Barycentric Dynamical Time; taken as equal to TT.
    Tdb,
}

impl fmt::Display for Scale {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Scale::Utc => "UTC",
            Scale::Tt => "TT",
            Scale::Tdb => "TDB",
        })
    }
}

/// A date as a person typed it: its form and scale are kept, so that it prints back unchanged.
///
/// Accepted and printed forms: `2031-03-20T05:30:00Z`, `2031-03-04.51732 TT`, `JD 2460000.5 TDB`.
#[derive(Clone, Debug, PartialEq)]
pub struct Stamp {
    form: Form,
    instant: Instant,
}

#[derive(Clone, Copy, Debug, PartialEq)]
enum Form {
    Iso {
        date: Date,
        hour: u32,
        minute: u32,
        second: Option<(u32, Decimals)>,
    },
    Day {
        date: Date,
        decimals: Decimals,
        scale: Scale,
    },
    /// Whole days and decimals of the Julian date.
    Julian {
        whole: i64,
        decimals: Decimals,
        scale: Scale,
    },
}

/// Julian dates of the first and last midnight of the accepted years, less 2451544.5.
fn julian_span() -> (i64, i64) {
    let first = Date { year: FIRST_YEAR, month: 1, day: 1 };
    let last = Date { year: LAST_YEAR, month: 12, day: 31 };
    (first.day_number(), last.day_number())
}

impl Stamp {
    fn from_form(form: Form) -> Stamp {
        let instant = match form {
            Form::Iso { date, hour, minute, second } => {
                let (second, decimals) = second.unwrap_or((0, Decimals::NONE));
                let seconds = f64::from(hour * 3600 + minute * 60 + second) + decimals.fraction();
                Instant::from_utc(date.day_number(), seconds / scale::SECONDS_PER_DAY)
            }
            Form::Day { date, decimals, scale: Scale::Utc } => {
                Instant::from_utc(date.day_number(), decimals.fraction())
            }
            Form::Day { date, decimals, .. } => {
                Instant::from_tdb_days((date.day_number() as f64 - 0.5) + decimals.fraction())
            }
            Form::Julian { whole, decimals, scale: Scale::Utc } => {
                // From noon to midnight: half a day on, with the carry.
                let (day, fraction) = (whole - 2_451_545, decimals.fraction() + 0.5);
                if fraction >= 1.0 {
                    Instant::from_utc(day + 1, fraction - 1.0)
                } else {
                    Instant::from_utc(day, fraction)
                }
            }
            Form::Julian { whole, decimals, .. } => {
                Instant::from_tdb_days((whole - 2_451_545) as f64 + decimals.fraction())
            }
        };
        Stamp { form, instant }
    }

    /// The instant this date means.
    pub fn instant(&self) -> Instant {
        self.instant
    }

    /// The ISO date nearest to `instant`, to the millisecond.
    ///
    /// # Errors
    /// An instant outside the years -4712 to 9999.
    pub fn utc_milliseconds(instant: Instant) -> Result<Stamp, Error> {
        Stamp::utc_rounded(instant, 1000)
    }

    /// The ISO date nearest to `instant`, to the second.
    ///
    /// # Errors
    /// An instant outside the years -4712 to 9999.
    pub fn utc_seconds(instant: Instant) -> Result<Stamp, Error> {
        Stamp::utc_rounded(instant, 1)
    }

    /// `per_second` is 1 or 1000.
    fn utc_rounded(instant: Instant, per_second: i64) -> Result<Stamp, Error> {
        let (date, units) = instant.utc_units(per_second).ok_or_else(|| {
            let found = format!("{} days from 2000-01-01 12:00", instant.tdb_days());
            Error::new(Kind::Time, Place::Whole, found, format!("a date in the years {FIRST_YEAR} to {LAST_YEAR}"))
        })?;
        let (seconds, rest) = (units / per_second, (units % per_second) as u64);
        // The last minute has 61 seconds in a leap second.
        let minutes = (seconds / 60).min(1439);
        let second = (seconds - minutes * 60) as u32;
        let decimals = if per_second == 1 { Decimals::NONE } else { Decimals { digits: rest, places: 3 } };
        let (hour, minute) = ((minutes / 60) as u32, (minutes % 60) as u32);
        Ok(Stamp::from_form(Form::Iso { date, hour, minute, second: Some((second, decimals)) }))
    }

    /// The decimal day of printed notations: `day` is text such as `4.51732`, whose digits are kept.
    ///
    /// # Errors
    /// Whatever is no such date; the column is counted inside `day` for faults of the day, and the place is
    /// [`Place::Whole`] for year and month.
    pub fn from_parts(year: i32, month: u32, day: &str, scale: Scale) -> Result<Stamp, Error> {
        Date::new(year, month, 1)?;
        let mut cursor = Cursor::new(day);
        let (number, decimals) = cursor.decimal(1, 2, "a day such as `4.51732`")?;
        cursor.end("a day such as `4.51732` and nothing after it")?;
        let date = Date::new(year, month, number as u32).map_err(|error| error.at(at(1)))?;
        Ok(Stamp::from_form(Form::Day { date, decimals, scale }))
    }

    /// The decimal day that a Modified Julian Date such as `59873.25` names, digits kept.
    ///
    /// # Errors
    /// Whatever is no such number, and dates outside the accepted years; the column is counted inside `text`.
    pub fn from_modified_julian(text: &str, scale: Scale) -> Result<Stamp, Error> {
        let mut cursor = Cursor::new(text);
        let negative = cursor.take(|c| c == '-').is_some();
        let (whole, decimals) = cursor.decimal(1, 7, "a Modified Julian Date such as `59873.25`")?;
        cursor.end("a Modified Julian Date such as `59873.25` and nothing after it")?;
        // MJD 51544 is 2000-01-01. Negative ones count backwards, which the kept decimals cannot.
        let date = Date::from_day_number(whole as i64 - 51_544).filter(|_| !negative).ok_or_else(|| {
            Error::new(Kind::Time, at(1), quote(text), "a Modified Julian Date from 0 (1858-11-17) to the year 9999")
        })?;
        Ok(Stamp::from_form(Form::Day { date, decimals, scale }))
    }
}

impl fmt::Display for Stamp {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self.form {
            Form::Iso { date, hour, minute, second: None } => write!(f, "{date}T{hour:02}:{minute:02}Z"),
            Form::Iso { date, hour, minute, second: Some((second, decimals)) } => {
                write!(f, "{date}T{hour:02}:{minute:02}:{second:02}{decimals}Z")
            }
            Form::Day { date, decimals, scale } => write!(f, "{date}{decimals} {scale}"),
            Form::Julian { whole, decimals, scale } => write!(f, "JD {whole}{decimals} {scale}"),
        }
    }
}

const FORMS: &str = "a date such as `2031-03-20T05:30:00Z`, `2031-03-04.51732 TT` or `JD 2460000.5 TDB`";

impl FromStr for Stamp {
    type Err = Error;

    /// Reads one of the three forms; blanks around it and before the scale are free.
    ///
    /// # Errors
    /// [`Kind::Time`] with the column inside `text`, what stood there and what is allowed.
    fn from_str(text: &str) -> Result<Stamp, Error> {
        let mut cursor = Cursor::new(text);
        cursor.blanks();
        if cursor.at_end() {
            return Err(Error::new(Kind::Time, at(1), "nothing", FORMS));
        }
        let form = if cursor.word("JD") { read_julian(&mut cursor)? } else { read_calendar(&mut cursor)? };
        cursor.blanks();
        cursor.end("nothing after the date")?;
        Ok(Stamp::from_form(form))
    }
}

fn read_julian(cursor: &mut Cursor) -> Result<Form, Error> {
    cursor.blanks();
    let start = cursor.column();
    if cursor.peek() == Some('0') {
        return Err(cursor.unexpected("a Julian date without zeros in front, such as `2460000.5`"));
    }
    let (whole, decimals) = cursor.decimal(1, 7, "a Julian date such as `2460000.5`")?;
    let whole = whole as i64;
    let midnight = whole - 2_451_545 + i64::from(decimals.fraction() >= 0.5);
    let (first, last) = julian_span();
    if !(first..=last).contains(&midnight) {
        let allowed = format!(
            "a Julian date from {}.5 to {}.5 (years {FIRST_YEAR} to {LAST_YEAR})",
            first + 2_451_544,
            last + 2_451_545
        );
        return Err(Error::new(Kind::Time, at(start), format!("Julian date {whole}{decimals}"), allowed));
    }
    Ok(Form::Julian { whole, decimals, scale: read_scale(cursor)? })
}

fn read_calendar(cursor: &mut Cursor) -> Result<Form, Error> {
    let start = cursor.column();
    let negative = cursor.take(|c| c == '-').is_some();
    if !negative && !cursor.peek().is_some_and(|c| c.is_ascii_digit()) {
        return Err(cursor.unexpected(FORMS));
    }
    let year = cursor.digits(4, "a year of four digits")? as i32;
    let year = if negative { -year } else { year };
    cursor.expect('-', "`-` between year and month")?;
    let month_column = cursor.column();
    let month = cursor.digits(2, "a month of two digits")? as u32;
    cursor.expect('-', "`-` between month and day")?;
    let day_column = cursor.column();
    let day = cursor.digits(2, "a day of two digits")? as u32;
    let date = Date::new(year, month, day).map_err(|error| {
        let column = if !(FIRST_YEAR..=LAST_YEAR).contains(&year) {
            start
        } else if !(1..=12).contains(&month) {
            month_column
        } else {
            day_column
        };
        error.at(at(column))
    })?;
    if cursor.take(|c| c == 'T' || c == 't').is_some() {
        return read_clock(cursor, date);
    }
    let decimals = cursor.decimals()?;
    Ok(Form::Day { date, decimals, scale: read_scale(cursor)? })
}

fn read_clock(cursor: &mut Cursor, date: Date) -> Result<Form, Error> {
    let hour = cursor.number_below(24, "an hour from 00 to 23")?;
    cursor.expect(':', "`:` between hours and minutes")?;
    let minute = cursor.number_below(60, "a minute from 00 to 59")?;
    let second = if cursor.take(|c| c == ':').is_some() {
        let column = cursor.column();
        let second = cursor.digits(2, "a second from 00 to 59")? as u32;
        let leap = hour == 23 && minute == 59 && scale::has_leap_second(date.day_number());
        if second > 60 || second == 60 && !leap {
            let allowed = "a second from 00 to 59 (60 only at 23:59 of a day that ended in a leap second)";
            return Err(Error::new(Kind::Time, at(column), format!("second {second:02}"), allowed));
        }
        Some((second, cursor.decimals()?))
    } else {
        None
    };
    if cursor.take(|c| c == 'Z' || c == 'z').is_none() {
        return Err(cursor.unexpected("`Z` at the end of a time, which is UTC"));
    }
    Ok(Form::Iso { date, hour, minute, second })
}

fn read_scale(cursor: &mut Cursor) -> Result<Scale, Error> {
    cursor.blanks();
    for scale in [Scale::Utc, Scale::Tdb, Scale::Tt] {
        if cursor.word(&scale.to_string()) {
            return Ok(scale);
        }
    }
    Err(cursor.unexpected("the time scale after the date: `UTC`, `TT` or `TDB`"))
}

impl serde::Serialize for Stamp {
    fn serialize<S: serde::Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_str(self)
    }
}

impl<'de> serde::Deserialize<'de> for Stamp {
    fn deserialize<D: serde::Deserializer<'de>>(deserializer: D) -> Result<Stamp, D::Error> {
        struct Visitor;
        impl serde::de::Visitor<'_> for Visitor {
            type Value = Stamp;

            fn expecting(&self, f: &mut fmt::Formatter) -> fmt::Result {
                f.write_str(FORMS)
            }

            fn visit_str<E: serde::de::Error>(self, text: &str) -> Result<Stamp, E> {
                text.parse().map_err(|error: Error| {
                    let whole = if quote(text) == error.found { String::new() } else { format!(" in {}", quote(text)) };
                    E::custom(format_args!("{}{whole}, expected {}", error.found, error.allowed))
                })
            }
        }
        deserializer.deserialize_str(Visitor)
    }
}
