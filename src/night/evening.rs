//! Which night does a date name?
//!
//! The night that begins on the evening of a date, by the local mean solar time of the site: from mean noon of that
//! date to mean noon of the next. Local mean solar time is UT1 plus the east longitude, 15 degrees to the hour; the
//! longitude counts from -180 to 180, so that the date changes at the meridian of 180 degrees and not at the bent line
//! of civil use. Civil clocks, zones and summer time are not used.

use crate::body::SPAN;
use crate::body::observer::Site;
use crate::error::{Error, Kind, Place};
use crate::time::Instant;
use crate::time::civil::Date;

/// A night of a site: noon to noon, local mean solar time.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Evening {
    pub date: Date,
    pub from: Instant,
    pub to: Instant,
}

impl Evening {
    /// The night that begins on the evening of `date`.
    ///
    /// # Errors
    /// A night that is not whole within the span of the ephemeris; its place is `date`.
    pub fn of(date: Date, site: &Site) -> Result<Evening, Error> {
        let noon = date.day_number() as f64 - turned(site);
        let (from, to) = (Instant::from_ut1_days(noon), Instant::from_ut1_days(noon + 1.0));
        for end in [from, to] {
            SPAN.check(end).map_err(|error| error.at(Place::Field("date".to_owned())))?;
        }
        Ok(Evening { date, from, to })
    }

    /// The night to which a time belongs: in the afternoon the one to come.
    ///
    /// # Errors
    /// As for [`Evening::of`].
    pub fn holding(time: Instant, site: &Site) -> Result<Evening, Error> {
        let day = (time.ut1_days() + turned(site)).floor();
        let date = Date::from_day_number(day as i64).ok_or_else(|| {
            Error::new(Kind::Time, Place::Field("date".to_owned()), time.utc_iso_ms(), "a time within the calendar")
        })?;
        Evening::of(date, site)
    }

    /// Local mean midnight.
    pub fn middle(&self) -> Instant {
        Instant::from_tdb_days(0.5 * (self.from.tdb_days() + self.to.tdb_days()))
    }
}

/// East longitude in turns, (-0.5, 0.5].
fn turned(site: &Site) -> f64 {
    let turns = site.longitude_deg / 360.0;
    if turns > 0.5 {
        turns - 1.0
    } else if turns == -0.5 {
        0.5
    } else {
        turns
    }
}

/// The date of a text such as `2031-03-20`.
///
/// # Errors
/// [`Kind::Time`] at `date`.
pub fn read_date(text: &str) -> Result<Date, Error> {
    let refused = || {
        let found = if text.trim().is_empty() { "nothing".to_owned() } else { format!("'{}'", text.trim()) };
        Error::new(Kind::Time, Place::Field("date".to_owned()), found, "a date such as 2031-03-20")
    };
    let parts: Vec<&str> = text.trim().split('-').collect();
    let [year, month, day] = parts[..] else { return Err(refused()) };
    let plain = |part: &str, length: usize| part.len() == length && part.bytes().all(|byte| byte.is_ascii_digit());
    if !(plain(year, 4) && plain(month, 2) && plain(day, 2)) {
        return Err(refused());
    }
    match (year.parse(), month.parse(), day.parse()) {
        (Ok(year), Ok(month), Ok(day)) => {
            Date::new(year, month, day).map_err(|error| error.at(Place::Field("date".to_owned())))
        }
        _ => Err(refused()),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn site(longitude_deg: f64) -> Site {
        Site { name: String::new(), longitude_deg, latitude_deg: 10.0, height_m: 0.0 }
    }

    #[test]
    fn a_night_runs_from_local_noon_to_local_noon() {
        let date = read_date("2031-03-20").unwrap();
        for (longitude, from) in [
            (0.0, "2031-03-20T12:00:00.000Z"),
            (90.0, "2031-03-20T06:00:00.000Z"),
            (-90.0, "2031-03-20T18:00:00.000Z"),
            (179.0, "2031-03-20T00:04:00.000Z"),
            (-179.0, "2031-03-20T23:56:00.000Z"),
            // The same places written otherwise.
            (181.0, "2031-03-20T23:56:00.000Z"),
            (180.0, "2031-03-20T00:00:00.000Z"),
            (-180.0, "2031-03-20T00:00:00.000Z"),
        ] {
            let evening = Evening::of(date, &site(longitude)).unwrap();
            assert_eq!(evening.from.utc_iso_ms(), from, "{longitude}");
            assert!((evening.to.tdb_days() - evening.from.tdb_days() - 1.0).abs() < 1e-9);
            for days in [0.001, 0.5, 0.999] {
                assert_eq!(Evening::holding(evening.from.plus_days(days), &site(longitude)).unwrap(), evening);
            }
        }
    }

    #[test]
    fn what_is_no_date_is_refused_with_the_form_that_is_one() {
        for text in ["", "2031-3-20", "20.3.2031", "2031-03-20T05:00Z", "2031-03", "+031-03-20"] {
            assert!(read_date(text).unwrap_err().to_string().contains("2031-03-20"), "{text}");
        }
        assert!(read_date("2031-02-29").unwrap_err().to_string().contains("1 to 28"));
        let late = Evening::of(read_date("2150-01-01").unwrap(), &site(0.0)).unwrap_err();
        assert!(late.to_string().contains("2100-12-31") && late.kind == Kind::Span, "{late}");
    }
}
