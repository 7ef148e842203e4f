//! What does one observer see of one comet, at any time?
//!
//! A [`Watch`] holds what is the same for every date, and recomputes only what changed: the Earth's path once per 16 days
//! ([`Track`]), the comet from the nearest of its anchors ([`Trail`]). None of that changes an answer by a single
//! bit, whatever was asked before. [`Lookout`] is the observer's half of it, whatever is looked at.

use super::Sky;
use super::trail::Trail;
use super::viewpoint::{Ground, Viewpoint};
use crate::body::earth::Track;
use crate::body::moon;
use crate::body::observer::Observer;
use crate::error::Error;
use crate::frame::earth_rotation::celestial_to_terrestrial;
use crate::frame::horizon::Horizon;
use crate::orbit::conic::Orbit;
use crate::time::Instant;

/// An observer who looks at a comet.
#[derive(Clone, Debug)]
pub struct Watch {
    orbit: Orbit,
    lookout: Lookout,
    trail: Trail,
}

impl Watch {
    /// `observer` as validated with its plan.
    pub fn new(orbit: Orbit, observer: Observer) -> Self {
        Watch { orbit, lookout: Lookout::new(observer), trail: Trail::default() }
    }

    pub fn orbit(&self) -> &Orbit {
        &self.orbit
    }

    pub fn observer(&self) -> &Observer {
        &self.lookout.observer
    }

    /// The sky at `time`.
    ///
    /// # Errors
    /// A time outside the span of the ephemeris.
    pub fn sky_at(&mut self, time: Instant) -> Result<Sky, Error> {
        Ok(self.seen_at(time)?.1)
    }

    /// The observer at `time`, and the sky.
    ///
    /// # Errors
    /// A time outside the span of the ephemeris.
    pub fn seen_at(&mut self, time: Instant) -> Result<(Viewpoint, Sky), Error> {
        let viewpoint = self.viewpoint(time)?;
        let sky = Sky::of(&self.orbit, &viewpoint, &mut self.trail);
        Ok((viewpoint, sky))
    }

    /// See [`Lookout::viewpoint`].
    ///
    /// # Errors
    /// A time outside the span of the ephemeris.
    pub fn viewpoint(&mut self, time: Instant) -> Result<Viewpoint, Error> {
        self.lookout.viewpoint(time)
    }

    /// See [`Lookout::sun_altitude_deg`].
    pub fn sun_altitude_deg(&mut self, time: Instant) -> Option<f64> {
        self.lookout.sun_altitude_deg(time)
    }
}

/// An observer at any time.
#[derive(Clone, Debug)]
pub struct Lookout {
    observer: Observer,
    track: Track,
}

impl Lookout {
    /// `observer` as validated with its plan.
    pub fn new(observer: Observer) -> Self {
        Lookout { observer, track: Track::new() }
    }

    /// The observer at a time: the Earth, and for a site its place on the turning globe, horizon and Moon.
    ///
    /// # Errors
    /// A time outside the span of the ephemeris.
    pub fn viewpoint(&mut self, time: Instant) -> Result<Viewpoint, Error> {
        let mut observer = self.track.state(time)?;
        let ground = match &self.observer {
            Observer::Geocentre => None,
            Observer::Site(site) => {
                let rotation = celestial_to_terrestrial(time.tdb_days(), time.ut1_days());
                let from_centre = site.geocentric(&rotation);
                observer.position_au += from_centre.position_au;
                observer.velocity_au_d += from_centre.velocity_au_d;
                let geodetic = site.geodetic();
                Some(Ground {
                    horizon: Horizon::at(geodetic.longitude_rad, geodetic.latitude_rad, &rotation),
                    moon_au: moon::geocentric_au(time)? - from_centre.position_au,
                })
            }
        };
        Ok(Viewpoint { time, observer, ground })
    }

    /// Altitude of the Sun's centre, degrees, airless; None for the geocentre and outside the span of the ephemeris.
    pub fn sun_altitude_deg(&mut self, time: Instant) -> Option<f64> {
        let Observer::Site(site) = &self.observer else { return None };
        let earth = self.track.state(time).ok()?;
        let rotation = celestial_to_terrestrial(time.tdb_days(), time.ut1_days());
        let geodetic = site.geodetic();
        let horizon = Horizon::at(geodetic.longitude_rad, geodetic.latitude_rad, &rotation);
        let to_sun = -(earth.position_au + site.geocentric(&rotation).position_au);
        Some(horizon.altitude_rad(&to_sun).to_degrees())
    }
}
