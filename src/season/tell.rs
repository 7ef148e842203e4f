//! What is there to say about a moment: which event is it, how large, how sure?
//!
//! Uncertainty: the time within which the quantity lies within its own error s of what it is at the event. With rate a
//! and bend b that is the t of s = |a| t + |b| t^2 / 2; at a turning point the square root of 2 s / |b|. The error is that of
//! the elements, and for a site the parallax that a geocentric event leaves out; never below a minute, which also
//! covers the tables of Earth and Moon.
//!
//! Elements: 3.5 arcsec of place after 100 days from their epoch, growing with the square, and 0.002 deg of direction of the
//! orbit plane, growing with time: typical of comets without a close passage of a planet (eight comets integrated
//! with DE440 lay within 0.02 to 6.4 arcsec after 100 days, 61 and 866 after 500; planes within 0.009 deg). Without an epoch
//! they are taken as 100 days old.

use super::event::{Event, EventKind};
use super::geometry::{Moment, Quantity};
use crate::body::{AU_KM, moon};
use crate::sky::avoidance::NEAR_SUN_DEG;
use crate::sky::column::whole_turn_deg;
use crate::sky::{Side, Sky};
use crate::time::Instant;
use std::f64::consts::{PI, TAU};

/// Days after which the typical errors are known; growth is counted in these.
const KNOWN_DAYS: f64 = 100.0;
const PLACE_RAD: f64 = 3.5 / 3600.0 * PI / 180.0;
const PLANE_RAD: f64 = 0.002 * PI / 180.0;
/// What fresh elements and the ephemeris leave: 0.1 arcsec.
const LEAST_RAD: f64 = 0.1 / 3600.0 * PI / 180.0;
/// The lunar series: 9 arcsec.
const MOON_RAD: f64 = 9.0 / 3600.0 * PI / 180.0;
/// Equatorial radius of the Earth (WGS84), au.
const EARTH_AU: f64 = 6378.137 / AU_KM;
/// A radian of motion in so many days of a year turns an error of place into one of motion, per day.
const YEARLY: f64 = TAU / 365.25;
/// No uncertainty is below a minute or above a year, days.
const BOUNDS_DAYS: [f64; 2] = [1.0 / 1440.0, 365.25];

/// How far geocentric numbers from old elements may be off.
#[derive(Clone, Copy, Debug)]
pub struct Doubt {
    pub epoch: Option<Instant>,
    pub has_site: bool,
}

/// Errors at one time.
struct Errors {
    /// Of the comet's place as seen, and of the direction of its orbit plane, radians.
    place: f64,
    plane: f64,
    /// Of the observer, au.
    site_au: f64,
}

impl Doubt {
    fn at(&self, time: Instant) -> Errors {
        let age = self.epoch.map_or(1.0, |epoch| (time.tdb_days() - epoch.tdb_days()).abs() / KNOWN_DAYS);
        Errors {
            place: LEAST_RAD + PLACE_RAD * age * age,
            plane: LEAST_RAD + PLANE_RAD * age,
            site_au: if self.has_site { EARTH_AU } else { 0.0 },
        }
    }
}

/// Days within which a quantity with this error, rate and bend does not differ from its value by more than the error.
fn spread_days(error: f64, rate: f64, bend: f64) -> f64 {
    let spread = 2.0 * error / (rate.abs() + (rate * rate + 2.0 * bend.abs() * error).sqrt());
    bounded(spread)
}

fn bounded(days: f64) -> f64 {
    if days.is_finite() { days.clamp(BOUNDS_DAYS[0], BOUNDS_DAYS[1]) } else { BOUNDS_DAYS[1] }
}

/// The event of a moment with the geocentric sky there; None where the turn is of the other sense than is told.
pub fn event(moment: &Moment, sky: &Sky, doubt: &Doubt) -> Option<Event> {
    let deg = |angle: f64| (Some(angle.to_degrees()), "deg");
    let lit = || moon_of(sky);
    let (kind, (value, unit), note) = match (moment.quantity, moment.turn, moment.rising) {
        (Quantity::Plane, ..) => crossing(moment, sky),
        (Quantity::SquaredDistance, true, true) => {
            (EventKind::LeastDistance, (Some(sky.observer_distance_au), "au"), String::new())
        }
        (Quantity::CosElongation, true, true) => (EventKind::GreatestElongation, deg(sky.elongation_rad), side(sky)),
        (Quantity::CosElongation, true, false) => (EventKind::LeastElongation, deg(sky.elongation_rad), side(sky)),
        (Quantity::CosElongation, false, rising) => {
            let kind = if rising { EventKind::NearSunBegins } else { EventKind::NearSunEnds };
            (kind, (Some(NEAR_SUN_DEG), "deg"), side(sky))
        }
        (Quantity::CosPhase, true, true) => (EventKind::GreatestPhaseAngle, deg(sky.phase_angle_rad), String::new()),
        (Quantity::CosPhase, true, false) => (EventKind::LeastPhaseAngle, deg(sky.phase_angle_rad), String::new()),
        (Quantity::Longitude, ..) => alignment(sky),
        (Quantity::SquaredMotion, true, false) => {
            let arcsec_per_minute = sky.motion_rad_d.to_degrees() * 3600.0 / 1440.0;
            let note = format!("{:.3} deg a day", sky.motion_rad_d.to_degrees());
            (EventKind::FastestMotion, (Some(arcsec_per_minute), "arcsec/min"), note)
        }
        (Quantity::CosMoon, true, false) => {
            let (separation, lit) = lit();
            let note = format!("Moon lit {:.0} percent", lit * 100.0);
            (EventKind::MoonNearest, deg(separation), note)
        }
        _ => return None,
    };
    let error = error(moment.quantity, sky, &doubt.at(sky.time));
    let uncertainty_days = spread_days(error, moment.rate, moment.bend);
    Some(Event { kind, time: sky.time, value, unit, note, uncertainty_days })
}

/// The event of a perihelion passage, by the comet's own clock.
pub fn perihelion(sky: &Sky, distance_au: f64, doubt: &Doubt) -> Event {
    let speed = sky.comet.velocity_au_d.norm();
    let note = format!("its light arrives {:.0} min later", sky.light_time_days * 1440.0);
    Event {
        kind: EventKind::Perihelion,
        time: sky.time,
        value: Some(distance_au),
        unit: "au",
        note,
        uncertainty_days: bounded(doubt.at(sky.time).place * sky.observer_distance_au / speed),
    }
}

type Told = (EventKind, (Option<f64>, &'static str), String);

fn crossing(moment: &Moment, sky: &Sky) -> Told {
    // sin(plane angle) = sin(latitude) * Earth-Sun / Earth-comet, and both angles are zero here.
    let rate_deg_d = (moment.rate * sky.observer.position_au.norm() / sky.observer_distance_au).to_degrees();
    let rate = format!("plane angle {rate_deg_d:+.2} deg a day");
    match (sky.antisolar_position_angle_rad, sky.negative_velocity_position_angle_rad) {
        (Some(antisolar), Some(back)) => {
            let opposite = libm::cos(antisolar - back) < 0.0;
            let note = if opposite {
                "antisolar direction there, negative velocity opposite: old dust can lie sunward"
            } else {
                "antisolar direction there, negative velocity along it: dust stays antisolar unless it is old"
            };
            let kind = EventKind::OrbitPlaneCrossing { opposite };
            (kind, (Some(whole_turn_deg(antisolar)), "deg"), format!("{note}; {rate}"))
        }
        _ => {
            let note = format!("no position angles, for a direction lies along the line of sight; {rate}");
            (EventKind::OrbitPlaneCrossing { opposite: false }, (None, "deg"), note)
        }
    }
}

fn alignment(sky: &Sky) -> Told {
    let value = (Some(sky.elongation_rad.to_degrees()), "deg");
    if sky.axes.sight.dot(&sky.observer.position_au) > 0.0 {
        return (EventKind::Opposition, value, String::new());
    }
    let beyond = sky.observer_distance_au > sky.observer.position_au.norm();
    let note = if beyond { "beyond the Sun" } else { "nearer than the Sun" };
    (EventKind::Conjunction, value, note.to_owned())
}

fn side(sky: &Sky) -> String {
    match sky.elongation_side {
        Some(Side::Evening) => "evening sky".to_owned(),
        Some(Side::Morning) => "morning sky".to_owned(),
        None => String::new(),
    }
}

/// Separation of the Moon from the comet, radians, and its lit part, geocentric.
fn moon_of(sky: &Sky) -> (f64, f64) {
    let Ok(moon) = moon::geocentric_au(sky.time) else { return (0.0, 0.0) };
    let separation = crate::frame::separation_rad(&sky.axes.sight, &moon);
    let moon_to_sun = -sky.observer.position_au - moon;
    let lit = 0.5 * (1.0 + moon_to_sun.dot(&-moon) / (moon_to_sun.norm() * moon.norm()));
    (separation, lit)
}

/// How far a quantity may be off, in its own unit.
fn error(quantity: Quantity, sky: &Sky, errors: &Errors) -> f64 {
    let (distance, sun_distance) = (sky.observer_distance_au, sky.sun_distance_au);
    let parallax = errors.site_au / distance;
    let of_cosine = |angle: f64, error: f64| libm::sin(angle) * error + 0.5 * error * error;
    match quantity {
        Quantity::Plane => errors.plane + errors.site_au / sky.observer.position_au.norm(),
        Quantity::SquaredDistance => 2.0 * distance * (errors.place * distance + errors.site_au),
        Quantity::CosElongation => of_cosine(sky.elongation_rad, errors.place + parallax),
        Quantity::CosPhase => {
            of_cosine(sky.phase_angle_rad, errors.place * (distance / sun_distance).max(1.0) + parallax)
        }
        Quantity::Longitude => errors.place + parallax,
        Quantity::SquaredMotion => 2.0 * sky.motion_rad_d * (errors.place * YEARLY + parallax * TAU),
        Quantity::CosMoon => {
            // The Moon's parallax is that of its mean distance, 384 400 km.
            let moon = errors.site_au * AU_KM / 384_400.0;
            of_cosine(moon_of(sky).0, errors.place + MOON_RAD + moon)
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn uncertainty_is_error_over_rate_and_at_a_turn_the_root() {
        assert!((spread_days(1e-3, 1e-2, 0.0) - 0.1).abs() < 1e-12);
        assert!((spread_days(1e-3, 0.0, 2e-3) - 1.0).abs() < 1e-12);
        assert_eq!(spread_days(1e-9, 1.0, 0.0), 1.0 / 1440.0);
        assert_eq!(spread_days(1e-3, 0.0, 0.0), 365.25);
    }
}
