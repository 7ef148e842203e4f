//! Which stretch of time does the slider cover, and where do its ticks stand?
//!
//! Months before to months after perihelion; where the chosen time lies outside, the same length about that time.
//! The stretch stays put while one scrubs within it. It begins on a whole hour of UTC.

use crate::body::SPAN;
use crate::time::Instant;
use crate::time::civil::{Date, MONTHS_SHORT};
use serde::Serialize;

/// Mean length of a month, days.
const MONTH_DAYS: f64 = 365.25 / 12.0;
/// A second, in days.
const SECOND: f64 = 1.0 / 86_400.0;
/// A label of a day or a year needs this room, pixels; one of a month less.
const LABEL_PX: f64 = 64.0;
const MONTH_LABEL_PX: f64 = 44.0;

/// The stretch of time of the slider.
pub struct Season {
    from: Instant,
    to: Instant,
    months: f64,
}

/// A place on the track.
#[derive(Serialize)]
struct Mark {
    days: f64,
    percent: f64,
    words: String,
}

/// The stretch as the page needs it.
#[derive(Serialize)]
pub struct Answer {
    from_days: f64,
    to_days: f64,
    ticks: Vec<Mark>,
    events: Vec<Mark>,
}

impl Season {
    /// The season for a time: the present one where it still serves.
    pub fn around(present: Option<Season>, perihelion: Instant, time: Instant, months: f64) -> Season {
        if let Some(season) = present
            && season.months == months
            && season.holds(time)
        {
            return season;
        }
        let half = months * MONTH_DAYS;
        let about = |middle: Instant| Season {
            from: whole_hour(later(middle.plus_days(-half), SPAN.first)),
            to: whole_hour(earlier(middle.plus_days(half), SPAN.last)),
            months,
        };
        let usual = about(perihelion);
        if usual.holds(time) { usual } else { about(time) }
    }

    /// Whether a time lies within, to a second: the ends themselves are reached in rounded seconds.
    fn holds(&self, time: Instant) -> bool {
        self.from.plus_days(-SECOND) <= time && time <= self.to.plus_days(SECOND)
    }

    pub fn answer(&self, width_px: f64, perihelion: Instant) -> Answer {
        let events =
            if self.holds(perihelion) { vec![self.mark(perihelion, "perihelion".to_owned())] } else { Vec::new() };
        Answer { from_days: self.from.tdb_days(), to_days: self.to.tdb_days(), ticks: self.ticks(width_px), events }
    }

    fn mark(&self, time: Instant, words: String) -> Mark {
        let length = self.to.tdb_days() - self.from.tdb_days();
        Mark { days: time.tdb_days(), percent: (time.tdb_days() - self.from.tdb_days()) / length * 100.0, words }
    }

    /// Ticks at days, thirds of months, or months, whichever the width has room for; labels never meet.
    fn ticks(&self, width_px: f64) -> Vec<Mark> {
        let first = day_of(self.from);
        let last = day_of(self.to);
        let day_px = width_px / (last - first).max(1) as f64;
        let mut marks = Vec::new();
        for day in first..=last {
            let Some(date) = Date::from_day_number(day) else { continue };
            let time = Instant::from_ut1_days(day as f64 - 0.5);
            if !self.holds(time) {
                continue;
            }
            if let Some(words) = tick_words(date, day_px) {
                let mut mark = self.mark(time, words);
                // A label needs room to its right.
                if (100.0 - mark.percent) / 100.0 * width_px < LABEL_PX {
                    mark.words.clear();
                }
                marks.push(mark);
            }
        }
        marks
    }
}

/// What stands at a date on the track: nothing, a bare tick (empty words), or a named one.
fn tick_words(date: Date, day_px: f64) -> Option<String> {
    let Date { year, month, day } = date;
    let name = MONTHS_SHORT[month as usize - 1].trim_end_matches('.');
    let month_px = day_px * MONTH_DAYS;
    if day_px * 5.0 >= LABEL_PX {
        return Some(if day % 5 == 1 && day < 30 { format!("{day} {name}") } else { String::new() });
    }
    if day != 1 {
        return ((day == 11 || day == 21) && month_px >= LABEL_PX).then(String::new);
    }
    let named = if month_px >= MONTH_LABEL_PX {
        true
    } else if month_px * 3.0 >= MONTH_LABEL_PX {
        month % 3 == 1
    } else {
        month == 1
    };
    Some(match (named, month) {
        (false, _) => String::new(),
        (true, 1) if month_px >= LABEL_PX => format!("{name} {year}"),
        (true, 1) => year.to_string(),
        (true, _) => name.to_owned(),
    })
}

/// The UTC day of an instant, counted from 2000-01-01.
fn day_of(time: Instant) -> i64 {
    (time.ut1_days() + 0.5).floor() as i64
}

/// The whole hour of UTC at or before a time, but not outside the span.
fn whole_hour(time: Instant) -> Instant {
    let hour = Instant::from_ut1_days((time.ut1_days() * 24.0).floor() / 24.0);
    if hour < SPAN.first { time } else { hour }
}

fn later(a: Instant, b: Instant) -> Instant {
    if a > b { a } else { b }
}

fn earlier(a: Instant, b: Instant) -> Instant {
    if a < b { a } else { b }
}
