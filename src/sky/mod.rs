//! What does the observer see: place, angles, directions, motion?
//!
//! The direction is astrometric: the comet where it was when the light left it, seen from where the
//! observer is now, with neither aberration nor deflection, ICRF/J2000. The Sun's own motion during the
//! light time is left out (0.009 arcsec). Directions at the comet (antisolar, negative velocity) are
//! those of its heliocentric state at that earlier moment; a position angle is that of a small
//! displacement along the direction. Formulas: physics of the plane triangle Sun, observer, comet.
//!
//! Accuracy, two-body orbits over 1900-2100, against a computation with SPICE, a JPL ephemeris and astropy
//! (tests/sky.rs): place within 0.1 arcsec beyond 0.1 au; angles within 0.001 degree, or 0.1 arcsec over the
//! sine of the angle between direction and line of sight where that is larger.
//!
//! Left out: refraction, the observer's polar motion and UT1 - UTC (0.9 s at most), perturbed motion.

pub mod avoidance;
pub mod column;
pub mod dark;
pub mod magnitude;
pub mod trail;
pub mod viewpoint;
pub mod watch;

use crate::body::State;
use crate::body::sun::heliographic_latitude_rad;
use crate::caution::Caution;
use crate::frame::{Axes, Bearing, declination_rad, position_angle_rad, right_ascension_rad, separation_rad};
use crate::orbit::conic::Orbit;
use crate::time::Instant;
use nalgebra::Vector3;
use trail::Trail;
use viewpoint::{Ground, Viewpoint};

/// Speed of light, au per day: 299 792 458 m/s with the au of IAU 2012 (149 597 870 700 m).
pub const LIGHT_AU_D: f64 = 299_792_458.0 * 86_400.0 / 149_597_870_700.0;

/// A position angle is called loose when 0.1 arcsec of place turns it by more than this.
const LOOSE_DEG: f64 = 0.01;

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

impl Sky {
    /// What is seen of a comet on `orbit` from `viewpoint`. `trail` is the orbit's own: it finds the
    /// comet sooner near a date that was asked for before, and answers the same bits whatever that was.
    pub fn of(orbit: &Orbit, viewpoint: &Viewpoint, trail: &mut Trail) -> Sky {
        let (comet, light_time_days) = trail.retarded(orbit, viewpoint);
        let (r, v) = (comet.position_au, comet.velocity_au_d);
        let observer = viewpoint.observer;
        let sight_line = r - observer.position_au;
        let observer_distance_au = sight_line.norm();
        let sun_distance_au = r.norm();
        let axes = Axes::at(&sight_line);
        let to_sun = -observer.position_au;
        let back = -v;

        let motion = Motion::of(&comet, &observer, &axes, observer_distance_au);
        let mut cautions = Vec::new();
        let mut angle = |direction: &Vector3<f64>, quantity: &'static str| {
            let bearing = Bearing::of(direction, &axes);
            let found = bearing.position_angle_rad();
            doubt(found, bearing.sine_to_sight, quantity, &mut cautions);
            found
        };
        let antisolar_position_angle_rad = angle(&r, "antisolar direction");
        let negative_velocity_position_angle_rad = angle(&back, "negative velocity");
        if observer_distance_au < 0.1 {
            cautions.push(Caution::NearEarth { observer_distance_au });
        }

        Sky {
            time: viewpoint.time,
            right_ascension_rad: right_ascension_rad(&sight_line),
            declination_rad: declination_rad(&sight_line),
            sun_distance_au,
            observer_distance_au,
            phase_angle_rad: separation_rad(&r, &sight_line),
            elongation_rad: separation_rad(&sight_line, &to_sun),
            elongation_side: side(&sight_line, &to_sun),
            observer_from_orbit_plane_rad: latitude_rad(&-sight_line, &orbit.normal()),
            antisolar_position_angle_rad,
            negative_velocity_position_angle_rad,
            negative_velocity_sight_angle_rad: separation_rad(&back, &-sight_line),
            motion_rad_d: (motion.east * motion.east + motion.north * motion.north).sqrt(),
            motion_position_angle_rad: motion.position_angle_rad,
            motion_east_rad_d: motion.east,
            motion_north_rad_d: motion.north,
            days_from_perihelion: orbit.days_from_perihelion(viewpoint.time) - light_time_days,
            true_anomaly_rad: orbit.true_anomaly_rad(&r),
            sun_distance_rate_au_d: r.dot(&v) / sun_distance_au,
            heliographic_latitude_rad: heliographic_latitude_rad(&r),
            site: viewpoint.ground.as_ref().map(|ground| SiteSky::of(ground, &sight_line, &to_sun, &axes)),
            light_time_days,
            comet,
            observer,
            axes,
            cautions,
        }
    }
}

/// Rates of the astrometric direction, radians per day.
struct Motion {
    east: f64,
    north: f64,
    position_angle_rad: Option<f64>,
}

impl Motion {
    /// The comet is seen at t - tau, so its share of the rate is v (1 - dtau/dt).
    fn of(comet: &State, observer: &State, axes: &Axes, distance_au: f64) -> Self {
        let (v, w) = (comet.velocity_au_d, observer.velocity_au_d);
        let lag_rate = axes.sight.dot(&(v - w)) / (LIGHT_AU_D + axes.sight.dot(&v));
        let rate = (v * (1.0 - lag_rate) - w) / distance_au;
        Motion {
            east: rate.dot(&axes.east),
            north: rate.dot(&axes.north),
            position_angle_rad: position_angle_rad(&rate, axes),
        }
    }
}

/// Angle of `v` above (+) the plane whose unit normal is given, [-pi/2, pi/2].
fn latitude_rad(v: &Vector3<f64>, normal: &Vector3<f64>) -> f64 {
    libm::atan2(v.dot(normal), v.cross(normal).norm())
}

/// Evening where the comet stands east of the Sun in right ascension, so that it follows the Sun down.
fn side(sight_line: &Vector3<f64>, to_sun: &Vector3<f64>) -> Option<Side> {
    let east = to_sun.x * sight_line.y - to_sun.y * sight_line.x;
    let aligned = sight_line.cross(to_sun).norm() < 1e-8 * sight_line.norm() * to_sun.norm();
    match (aligned || east == 0.0, east > 0.0) {
        (true, _) => None,
        (false, true) => Some(Side::Evening),
        (false, false) => Some(Side::Morning),
    }
}

/// Adds a caution where a position angle is missing or loose; `sine` is that of the angle to the line of sight.
fn doubt(found: Option<f64>, sine: f64, quantity: &'static str, cautions: &mut Vec<Caution>) {
    if found.is_none() {
        cautions.push(Caution::AngleUndefined { quantity });
        return;
    }
    let uncertainty_deg = 0.1 / 3600.0 / sine;
    if uncertainty_deg > LOOSE_DEG {
        cautions.push(Caution::AngleLoose { quantity, uncertainty_deg });
    }
}

impl SiteSky {
    fn of(ground: &Ground, sight_line: &Vector3<f64>, to_sun: &Vector3<f64>, axes: &Axes) -> Self {
        let horizon = &ground.horizon;
        let moon = ground.moon_au;
        let moon_to_sun = to_sun - moon;
        SiteSky {
            altitude_rad: horizon.altitude_rad(sight_line),
            azimuth_rad: horizon.azimuth_rad(sight_line),
            sun_altitude_rad: horizon.altitude_rad(to_sun),
            moon_separation_rad: separation_rad(sight_line, &moon),
            moon_lit_fraction: 0.5 * (1.0 + moon_to_sun.dot(&-moon) / (moon_to_sun.norm() * moon.norm())),
            zenith_position_angle_rad: position_angle_rad(&horizon.up, axes),
        }
    }
}
