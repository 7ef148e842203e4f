//! How do comet, Sun and Moon stand over the horizon at one time, and how do the tails stand on it?

use super::air;
use super::law::NightLaw;
use crate::error::{Error, Kind, Place};
use crate::frame::half_turn;
use crate::orbit::elements::Brightness;
use crate::sky::watch::Watch;
use crate::sky::{Sky, magnitude};
use crate::tail::grain::Vista;
use crate::tail::ion::Axis;
use crate::tail::law::Tails;
use crate::time::Instant;

/// The Sun's centre stands this high, airless, when its upper limb touches the horizon: 34 arcmin of refraction and 16 of radius.
pub const SUNSET_DEG: f64 = -0.833;
/// Ends of civil, nautical and astronomical twilight.
pub const TWILIGHTS_DEG: [f64; 3] = [-6.0, -12.0, -18.0];

/// How dark the sky is, by the Sun alone.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Part {
    Day,
    CivilTwilight,
    NauticalTwilight,
    AstronomicalTwilight,
    Night,
}

impl Part {
    pub fn of(sun_altitude_deg: f64) -> Part {
        match sun_altitude_deg {
            high if high >= SUNSET_DEG => Part::Day,
            high if high >= TWILIGHTS_DEG[0] => Part::CivilTwilight,
            high if high >= TWILIGHTS_DEG[1] => Part::NauticalTwilight,
            high if high >= TWILIGHTS_DEG[2] => Part::AstronomicalTwilight,
            _ => Part::Night,
        }
    }

    pub fn words(self) -> &'static str {
        match self {
            Part::Day => "day",
            Part::CivilTwilight => "civil twilight",
            Part::NauticalTwilight => "nautical twilight",
            Part::AstronomicalTwilight => "astronomical twilight",
            Part::Night => "night",
        }
    }
}

/// What a law of the plan adds to each moment.
#[derive(Clone, Copy, Debug)]
pub struct Laws<'a> {
    pub night: &'a NightLaw,
    pub tails: &'a Tails,
    pub brightness: &'a [Brightness],
}

/// One time of a night. Angles radians; altitudes airless.
#[derive(Clone, Debug, PartialEq)]
pub struct Moment {
    pub sky: Sky,
    pub altitude_rad: f64,
    pub azimuth_rad: Option<f64>,
    pub sun_altitude_rad: f64,
    pub sun_azimuth_rad: Option<f64>,
    pub moon_altitude_rad: f64,
    pub moon_azimuth_rad: Option<f64>,
    pub moon_separation_rad: f64,
    pub moon_lit_fraction: f64,
    pub zenith_position_angle_rad: Option<f64>,
    /// None where the comet is seen below the horizon.
    pub air_mass: Option<f64>,
    pub part: Part,
    /// Position angle of the ion axis for the wind that is drawn.
    pub ion_position_angle_rad: Option<f64>,
    pub total_magnitude: Option<f64>,
    pub longest_exposure_s: Option<f64>,
}

impl Moment {
    /// The moment at `time`.
    ///
    /// # Errors
    /// An observer without a site; a time outside the span of the ephemeris.
    pub fn at(watch: &mut Watch, time: Instant, laws: &Laws) -> Result<Moment, Error> {
        let (viewpoint, sky) = watch.seen_at(time)?;
        let (Some(ground), Some(site)) = (viewpoint.ground, sky.site.clone()) else { return Err(no_site()) };
        let horizon = &ground.horizon;
        let to_sun = -sky.observer.position_au;
        let vista = Vista::of(watch.orbit(), &sky);
        let altitude_deg = site.altitude_rad.to_degrees();
        Ok(Moment {
            altitude_rad: site.altitude_rad,
            azimuth_rad: site.azimuth_rad,
            sun_altitude_rad: site.sun_altitude_rad,
            sun_azimuth_rad: horizon.azimuth_rad(&to_sun),
            moon_altitude_rad: horizon.altitude_rad(&ground.moon_au),
            moon_azimuth_rad: horizon.azimuth_rad(&ground.moon_au),
            moon_separation_rad: site.moon_separation_rad,
            moon_lit_fraction: site.moon_lit_fraction,
            zenith_position_angle_rad: site.zenith_position_angle_rad,
            air_mass: air::air_mass(altitude_deg),
            part: Part::of(site.sun_altitude_rad.to_degrees()),
            ion_position_angle_rad: Axis::of(&vista, laws.tails.wind_axis_km_s).position_angle_rad,
            total_magnitude: magnitude::total(laws.brightness, &sky),
            longest_exposure_s: laws.night.longest_exposure_s(sky.motion_rad_d),
            sky,
        })
    }

    /// How a direction stands on the horizon: its angle from straight up, (-pi, pi].
    ///
    /// ```text
    ///           up 0
    ///   left     |     right
    ///   +90 -----+----- -90
    ///            |
    ///        down 180
    /// ```
    ///
    /// Positive to the left, as position angles grow on the sky; None in the zenith, or without a position angle.
    pub fn from_vertical_rad(&self, position_angle_rad: Option<f64>) -> Option<f64> {
        Some(half_turn(position_angle_rad? - self.zenith_position_angle_rad?))
    }
}

/// Why an observer at the centre of the Earth has no night.
pub fn no_site() -> Error {
    Error::new(
        Kind::Range,
        Place::Field("observer".to_owned()),
        "the centre of the Earth, which has no night",
        "a site: `observer` with longitude_deg and latitude_deg",
    )
}
