//! Which stretch of time does a season cover?

use crate::body::SPAN;
use crate::error::{Error, Kind, Place};
use crate::time::Instant;

/// One search covers at most this much: 40 years of 365.25 days. Work stays bounded; two-body motion is worth less
/// than that anyway.
pub const LONGEST_DAYS: f64 = 40.0 * 365.25;
/// And at least this much: a minute.
pub const SHORTEST_DAYS: f64 = 1.0 / 1440.0;

/// A stretch of time within the span of the ephemeris, from before to after, 1 minute to [`LONGEST_DAYS`] long.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Stretch {
    from: Instant,
    to: Instant,
}

impl Stretch {
    /// # Errors
    /// Ends outside the ephemeris ([`Kind::Span`]); reversed, shorter than a minute or too long ([`Kind::Range`]). Places
    /// are `season.from` and `season.to`.
    pub fn new(from: Instant, to: Instant) -> Result<Self, Error> {
        let at = |key: &str| Place::Field(format!("season.{key}"));
        SPAN.check(from).map_err(|error| error.at(at("from")))?;
        SPAN.check(to).map_err(|error| error.at(at("to")))?;
        let days = to.tdb_days() - from.tdb_days();
        let refuse = |found: String, allowed: String| Err(Error::new(Kind::Range, at("to"), found, allowed));
        if days < SHORTEST_DAYS {
            return refuse(to.utc_iso_ms(), format!("a time at least a minute after `from`, {}", from.utc_iso_ms()));
        }
        if days > LONGEST_DAYS {
            return refuse(
                format!("{}, {:.1} years after `from`", to.utc_iso_ms(), days / 365.25),
                "a season of at most 40 years; ask for longer times in parts".to_owned(),
            );
        }
        Ok(Stretch { from, to })
    }

    pub fn from(&self) -> Instant {
        self.from
    }

    pub fn to(&self) -> Instant {
        self.to
    }

    pub fn days(&self) -> f64 {
        self.to.tdb_days() - self.from.tdb_days()
    }

    /// Whether a time lies within, ends included.
    pub fn holds(&self, time: Instant) -> bool {
        self.from <= time && time <= self.to
    }

    /// `count` times evenly over the stretch, both ends included; at least two.
    pub fn times(&self, count: usize) -> impl Iterator<Item = Instant> + use<> {
        let (from, days, last) = (self.from, self.days(), count.max(2) - 1);
        (0..=last).map(move |k| from.plus_days(days * k as f64 / last as f64))
    }
}
