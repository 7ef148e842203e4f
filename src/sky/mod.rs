//! What does the observer see: place, angles, directions, motion?

pub mod column;

use crate::body::State;
use crate::caution::Caution;
use crate::frame::Axes;
use crate::time::Instant;

/// On which side of the Sun the comet stands.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Side {
    /// East of the Sun: seen in the evening.
    Evening,
    /// West of the Sun: seen in the morning.
    Morning,
}

/// Everything one observer sees of one comet at one time. Angles are radians, ICRF/J2000; position angles
/// run north through east in [0, 2 pi) and are `None` where the direction has none.
#[derive(Clone, Debug, PartialEq)]
pub struct Sky {
    pub time: Instant,
    /// Astrometric (light time corrected), [0, 2 pi).
    pub right_ascension_rad: f64,
    pub declination_rad: f64,
    pub sun_distance_au: f64,
    pub observer_distance_au: f64,
    pub phase_angle_rad: f64,
    pub elongation_rad: f64,
    /// None where Sun and comet are aligned.
    pub elongation_side: Option<Side>,
    /// Observer above (+, side of the orbital angular momentum) or below the orbit plane, seen from the comet.
    pub observer_from_orbit_plane_rad: f64,
    pub antisolar_position_angle_rad: Option<f64>,
    pub negative_velocity_position_angle_rad: Option<f64>,
    /// Angle at the comet between minus the heliocentric velocity and the direction to the observer, [0, pi].
    pub negative_velocity_sight_angle_rad: f64,
    /// Total motion on the sky, radians per day; east part times cos declination, and north part.
    pub motion_rad_d: f64,
    pub motion_position_angle_rad: Option<f64>,
    pub motion_east_rad_d: f64,
    pub motion_north_rad_d: f64,
    /// At the retarded time.
    pub days_from_perihelion: f64,
    pub true_anomaly_rad: f64,
    pub sun_distance_rate_au_d: f64,
    pub heliographic_latitude_rad: f64,
    /// What only an observer on a site has.
    pub site: Option<SiteSky>,
    pub light_time_days: f64,
    /// The comet at the retarded time, heliocentric equatorial.
    pub comet: State,
    /// The observer at `time`, heliocentric equatorial.
    pub observer: State,
    /// Unit vectors at the comet's place on the sky: toward it, east, north.
    pub axes: Axes,
    pub cautions: Vec<Caution>,
}

/// The parts of a sky that need a horizon. Airless.
#[derive(Clone, Debug, PartialEq)]
pub struct SiteSky {
    pub altitude_rad: f64,
    /// North through east, [0, 2 pi); None at the zenith and nadir.
    pub azimuth_rad: Option<f64>,
    pub sun_altitude_rad: f64,
    pub moon_separation_rad: f64,
    /// (1 + cos of the Sun-Moon-observer angle) / 2.
    pub moon_lit_fraction: f64,
    pub zenith_position_angle_rad: Option<f64>,
}
