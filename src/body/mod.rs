//! Where are the Earth, the Moon and the observer?
//!
//! Heliocentric, ICRF/J2000 equatorial axes, au and au/day. [`earth`] and [`moon`] hold within [`SPAN`] only
//! and refuse times outside it.

mod barycentre;
pub mod earth;
pub mod ellipsoid;
mod lunar_terms;
pub mod moon;
pub mod observer;
pub mod piece;
pub mod site_code;
pub mod sun;

use crate::error::{Error, Kind, Place};
use crate::time::Instant;
use nalgebra::Vector3;

/// Kilometres in the astronomical unit (IAU 2012 resolution B2, exact).
pub const AU_KM: f64 = 149_597_870.7;

/// Kilometres per second in one au per day.
pub const KM_S_PER_AU_D: f64 = AU_KM / 86_400.0;

/// Place and velocity, heliocentric (unless a function says otherwise), ICRF/J2000 equatorial, au and au/day.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct State {
    pub position_au: Vector3<f64>,
    pub velocity_au_d: Vector3<f64>,
}

/// The times for which the Earth and the Moon are known.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Span {
    pub first: Instant,
    pub last: Instant,
}

/// 1900-01-01 to 2100-12-31, and one day more at either end for time scales and light time.
pub const SPAN: Span =
    Span { first: Instant::from_tdb_days(-36_524.5 - 1.0), last: Instant::from_tdb_days(36_889.5 + 1.0) };

impl Span {
    pub fn contains(&self, time: Instant) -> bool {
        self.first <= time && time <= self.last
    }

    /// # Errors
    /// [`Kind::Span`], naming the time and the span, when `time` is outside it or not a number.
    pub fn check(&self, time: Instant) -> Result<(), Error> {
        if self.contains(time) {
            return Ok(());
        }
        Err(Error::new(
            Kind::Span,
            Place::Whole,
            time.utc_iso_ms(),
            "a time from 1900-01-01 to 2100-12-31, the span of the Earth's ephemeris",
        ))
    }
}
