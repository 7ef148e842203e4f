//! Which quantities of a sky are shown, under which name, in words, with which unit and digits?
//!
//! One list serves the command line's columns and the page's table, so that the two cannot differ.

use super::{Side, SiteSky, Sky};
use crate::body::KM_S_PER_AU_D;
use std::f64::consts::TAU;

/// Minutes in a day.
const MINUTES_PER_DAY: f64 = 1440.0;

/// A quantity of the sky table.
pub struct Column {
    /// Fixed machine name with its unit suffix, such as `phase_angle_deg`.
    pub key: &'static str,
    /// The name in words.
    pub words: &'static str,
    /// One or two sentences for the reader who asks what it is.
    pub meaning: &'static str,
    /// Unit as printed for people; empty for none.
    pub unit: &'static str,
    /// Digits after the point for people.
    pub decimals: usize,
    /// Exists only for an observer on a site.
    pub site_only: bool,
    /// The value in the unit of the key.
    pub value: fn(&Sky) -> Value,
}

/// A value of the sky table.
#[derive(Clone, Debug, PartialEq)]
pub enum Value {
    Number(f64),
    Text(&'static str),
    /// The quantity does not exist for this sky.
    Absent,
}

impl Column {
    /// The value as a person reads it, without its unit; empty where it does not exist. An angle that
    /// runs over a whole turn and would round up to 360 is printed as 0.
    pub fn printed(&self, sky: &Sky) -> String {
        match (self.value)(sky) {
            Value::Number(number) => print(number, self.decimals, self.whole_turn()),
            Value::Text(text) => text.to_owned(),
            Value::Absent => String::new(),
        }
    }

    fn whole_turn(&self) -> bool {
        self.key == "right_ascension_deg" || self.key == "azimuth_deg" || self.key.ends_with("position_angle_deg")
    }
}

fn print(number: f64, decimals: usize, whole_turn: bool) -> String {
    let text = format!("{number:.decimals$}");
    if whole_turn && text.starts_with("360") {
        return format!("{:.decimals$}", 0.0);
    }
    // A value that rounds to zero has no sign.
    match text.strip_prefix('-') {
        Some(bare) if bare.bytes().all(|byte| matches!(byte, b'0' | b'.')) => bare.to_owned(),
        _ => text,
    }
}

/// Radians to degrees for an angle in [0, 2 pi): the product may round up to 360, which is 0.
pub fn whole_turn_deg(angle_rad: f64) -> f64 {
    let degrees = angle_rad.to_degrees();
    if degrees >= 360.0 { 0.0 } else { degrees }
}

pub(crate) fn position_angle(angle_rad: Option<f64>) -> Value {
    angle_rad.map_or(Value::Absent, |angle| Value::Number(whole_turn_deg(angle)))
}

pub(crate) fn degrees(angle_rad: f64) -> Value {
    Value::Number(angle_rad.to_degrees())
}

pub(crate) fn arcsec_per_minute(rate_rad_d: f64) -> Value {
    Value::Number(rate_rad_d * (360.0 * 3600.0 / TAU) / MINUTES_PER_DAY)
}

fn at_site(sky: &Sky, value: impl Fn(&SiteSky) -> Value) -> Value {
    sky.site.as_ref().map_or(Value::Absent, value)
}

/// The column of a key.
pub fn find(key: &str) -> Option<&'static Column> {
    COLUMNS.iter().find(|column| column.key == key)
}

/// Every quantity of a sky, in the order of the command line.
pub const COLUMNS: &[Column] = &[
    Column {
        key: "right_ascension_deg",
        words: "Right ascension",
        meaning: "Astrometric place of the comet, J2000: where it stood when the light left it, seen from where you are now.",
        unit: "deg",
        decimals: 5,
        site_only: false,
        value: |sky| Value::Number(whole_turn_deg(sky.right_ascension_rad)),
    },
    Column {
        key: "declination_deg",
        words: "Declination",
        meaning: "Astrometric place of the comet, J2000, north positive.",
        unit: "deg",
        decimals: 5,
        site_only: false,
        value: |sky| degrees(sky.declination_rad),
    },
    Column {
        key: "sun_distance_au",
        words: "Distance from the Sun",
        meaning: "From the Sun to the comet when the light left it.",
        unit: "au",
        decimals: 6,
        site_only: false,
        value: |sky| Value::Number(sky.sun_distance_au),
    },
    Column {
        key: "observer_distance_au",
        words: "Distance from the observer",
        meaning: "From the observer to the comet; light takes 8.3 minutes for each au.",
        unit: "au",
        decimals: 6,
        site_only: false,
        value: |sky| Value::Number(sky.observer_distance_au),
    },
    Column {
        key: "phase_angle_deg",
        words: "Phase angle",
        meaning: "Angle at the comet between Sun and observer. Small: you look along the tails from the Sun's side and they are foreshortened. Large: they point past you and dust brightens by forward scattering.",
        unit: "deg",
        decimals: 3,
        site_only: false,
        value: |sky| degrees(sky.phase_angle_rad),
    },
    Column {
        key: "elongation_deg",
        words: "Elongation",
        meaning: "Angle on the sky between comet and Sun. Below 30 degrees, mind the Sun.",
        unit: "deg",
        decimals: 3,
        site_only: false,
        value: |sky| degrees(sky.elongation_rad),
    },
    Column {
        key: "elongation_side",
        words: "Side of the Sun",
        meaning: "Evening: east of the Sun in right ascension, so the comet follows it down. Morning: west of it.",
        unit: "",
        decimals: 0,
        site_only: false,
        value: |sky| match sky.elongation_side {
            Some(Side::Evening) => Value::Text("evening"),
            Some(Side::Morning) => Value::Text("morning"),
            None => Value::Absent,
        },
    },
    Column {
        key: "observer_from_orbit_plane_deg",
        words: "Observer from the orbit plane",
        meaning: "Angle of the observer above (+, on the side of the orbital angular momentum) or below the comet's orbit plane, seen from the comet. Near zero, dust that spreads in the plane is seen edge-on.",
        unit: "deg",
        decimals: 3,
        site_only: false,
        value: |sky| degrees(sky.observer_from_orbit_plane_rad),
    },
    Column {
        key: "antisolar_position_angle_deg",
        words: "Position angle, antisolar direction",
        meaning: "Direction on the sky, J2000 north through east, that points straight away from the Sun at the comet. Gas and fresh fine dust lie close to it.",
        unit: "deg",
        decimals: 3,
        site_only: false,
        value: |sky| position_angle(sky.antisolar_position_angle_rad),
    },
    Column {
        key: "negative_velocity_position_angle_deg",
        words: "Position angle, negative velocity",
        meaning: "Direction on the sky, J2000 north through east, opposite to the comet's motion about the Sun: where it came from. Old, large dust tends toward it without reaching it.",
        unit: "deg",
        decimals: 3,
        site_only: false,
        value: |sky| position_angle(sky.negative_velocity_position_angle_rad),
    },
    Column {
        key: "negative_velocity_sight_angle_deg",
        words: "Negative velocity to the line of sight",
        meaning: "Angle at the comet between negative velocity and the direction to you. Near 0 or 180 the direction is foreshortened to a point and its position angle says little.",
        unit: "deg",
        decimals: 3,
        site_only: false,
        value: |sky| degrees(sky.negative_velocity_sight_angle_rad),
    },
    Column {
        key: "motion_arcsec_per_minute",
        words: "Sky motion",
        meaning: "How fast the comet moves among the stars for this observer, right now.",
        unit: "arcsec/min",
        decimals: 3,
        site_only: false,
        value: |sky| arcsec_per_minute(sky.motion_rad_d),
    },
    Column {
        key: "motion_position_angle_deg",
        words: "Position angle, sky motion",
        meaning: "Direction of the motion among the stars, J2000 north through east. It has nothing to do with the tails.",
        unit: "deg",
        decimals: 3,
        site_only: false,
        value: |sky| position_angle(sky.motion_position_angle_rad),
    },
    Column {
        key: "motion_east_arcsec_per_minute",
        words: "Sky motion, east part",
        meaning: "Rate in right ascension times the cosine of declination: what a mount is told.",
        unit: "arcsec/min",
        decimals: 3,
        site_only: false,
        value: |sky| arcsec_per_minute(sky.motion_east_rad_d),
    },
    Column {
        key: "motion_north_arcsec_per_minute",
        words: "Sky motion, north part",
        meaning: "Rate in declination.",
        unit: "arcsec/min",
        decimals: 3,
        site_only: false,
        value: |sky| arcsec_per_minute(sky.motion_north_rad_d),
    },
    Column {
        key: "days_from_perihelion",
        words: "Time from perihelion",
        meaning: "Days since the elements' perihelion when the light left the comet; negative before it.",
        unit: "d",
        decimals: 4,
        site_only: false,
        value: |sky| Value::Number(sky.days_from_perihelion),
    },
    Column {
        key: "true_anomaly_deg",
        words: "True anomaly",
        meaning: "Angle from perihelion to the comet, seen from the Sun, from -180 to 180; negative before perihelion.",
        unit: "deg",
        decimals: 3,
        site_only: false,
        value: |sky| degrees(sky.true_anomaly_rad),
    },
    Column {
        key: "sun_distance_rate_km_s",
        words: "Speed away from the Sun",
        meaning: "Rate of the distance from the Sun; negative while the comet comes in.",
        unit: "km/s",
        decimals: 3,
        site_only: false,
        value: |sky| Value::Number(sky.sun_distance_rate_au_d * KM_S_PER_AU_D),
    },
    Column {
        key: "heliographic_latitude_deg",
        words: "Heliographic latitude",
        meaning: "Latitude of the comet over the Sun's equator. Far from it the solar wind is often faster.",
        unit: "deg",
        decimals: 3,
        site_only: false,
        value: |sky| degrees(sky.heliographic_latitude_rad),
    },
    Column {
        key: "altitude_deg",
        words: "Altitude",
        meaning: "Height of the comet above the site's horizon, without refraction.",
        unit: "deg",
        decimals: 2,
        site_only: true,
        value: |sky| at_site(sky, |site| degrees(site.altitude_rad)),
    },
    Column {
        key: "azimuth_deg",
        words: "Azimuth",
        meaning: "Direction along the horizon, north through east.",
        unit: "deg",
        decimals: 2,
        site_only: true,
        value: |sky| at_site(sky, |site| position_angle(site.azimuth_rad)),
    },
    Column {
        key: "sun_altitude_deg",
        words: "Altitude of the Sun",
        meaning: "Height of the Sun's centre above the horizon, without refraction. Below -18 the sky is fully dark.",
        unit: "deg",
        decimals: 2,
        site_only: true,
        value: |sky| at_site(sky, |site| degrees(site.sun_altitude_rad)),
    },
    Column {
        key: "moon_separation_deg",
        words: "Distance to the Moon",
        meaning: "Angle on the sky between comet and Moon, as seen from the site.",
        unit: "deg",
        decimals: 2,
        site_only: true,
        value: |sky| at_site(sky, |site| degrees(site.moon_separation_rad)),
    },
    Column {
        key: "moon_lit_fraction",
        words: "Lit part of the Moon",
        meaning: "Share of the Moon's disc that is lit: 0 at new Moon, 1 at full Moon.",
        unit: "",
        decimals: 3,
        site_only: true,
        value: |sky| at_site(sky, |site| Value::Number(site.moon_lit_fraction)),
    },
    Column {
        key: "zenith_position_angle_deg",
        words: "Position angle, zenith",
        meaning: "Direction on the sky from the comet to the zenith, J2000 north through east: how the picture stands against the horizon.",
        unit: "deg",
        decimals: 3,
        site_only: true,
        value: |sky| at_site(sky, |site| position_angle(site.zenith_position_angle_rad)),
    },
];

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_position_angle_never_prints_as_360_nor_zero_with_a_sign() {
        assert_eq!(print(359.9996, 3, true), "0.000");
        assert_eq!(print(359.9994, 3, true), "359.999");
        assert_eq!(print(-0.0004, 3, false), "0.000");
        assert_eq!(print(-0.0006, 3, false), "-0.001");
        assert_eq!(whole_turn_deg(TAU), 0.0);
    }
}
