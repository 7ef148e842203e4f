//! Where does the observer stand?

/// A place on the Earth, WGS84, as typed: degrees and metres.
#[derive(Clone, Debug, PartialEq)]
pub struct Site {
    pub name: String,
    /// East positive, -180 to 360.
    pub longitude_deg: f64,
    /// Geodetic latitude, north positive, -90 to 90.
    pub latitude_deg: f64,
    /// Height above the ellipsoid, -500 to 9000 m for a site on the ground.
    pub height_m: f64,
}

/// Who looks: the centre of the Earth, or a site on it.
#[derive(Clone, Debug, PartialEq)]
pub enum Observer {
    Geocentre,
    Site(Site),
}
