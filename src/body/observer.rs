//! Where does the observer stand?

use crate::error::{Error, Kind, Place};
use serde::{Deserialize, Serialize};

/// A place on the Earth, WGS84, as typed: degrees and metres.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields, expecting = "an object with a site's name, longitude, latitude and height")]
pub struct Site {
    pub name: String,
    /// East positive, -180 to 360.
    pub longitude_deg: f64,
    /// Geodetic latitude, north positive, -90 to 90.
    pub latitude_deg: f64,
    /// Height above the ellipsoid, -500 to 9000 m for a site on the ground.
    pub height_m: f64,
}

impl Site {
    /// # Errors
    /// The first value outside its range, at its key below `path`.
    pub fn validate(&self, path: &str) -> Result<(), Error> {
        for (key, value, span, allowed) in [
            ("longitude_deg", self.longitude_deg, -180.0..=360.0, "an east longitude from -180 to 360 degrees"),
            ("latitude_deg", self.latitude_deg, -90.0..=90.0, "a latitude from -90 to 90 degrees"),
            ("height_m", self.height_m, -500.0..=9000.0, "a height from -500 to 9000 m"),
        ] {
            if !span.contains(&value) {
                return Err(Error::new(Kind::Range, Place::Field(format!("{path}.{key}")), value.to_string(), allowed));
            }
        }
        Ok(())
    }
}

/// Who looks: the centre of the Earth, or a site on it.
#[derive(Clone, Debug, PartialEq)]
pub enum Observer {
    Geocentre,
    Site(Site),
}
