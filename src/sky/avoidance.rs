//! Is it dangerous to point there now, and until when is the Sun down?
//!
//! Within 30 degrees of the Sun there is danger while the Sun is up, or rises or sets within half an hour;
//! otherwise a notice says when it rises. The 30 degrees and the half hour are this project's choice: no
//! published limit for amateur use was found, and local rules come first.

use super::Sky;
use crate::caution::Caution;
use crate::time::Instant;

/// Elongation below which the Sun is minded, degrees.
pub const NEAR_SUN_DEG: f64 = 30.0;

/// Geometric altitude of the Sun's centre at rising and setting: 34' of refraction and 16' of radius.
/// Common almanac practice.
const RISING_DEG: f64 = -0.833;

/// Half an hour, in days.
const HALF_HOUR: f64 = 0.5 / 24.0;

/// Step of the search for sunrise, days: ten minutes.
const STEP: f64 = 10.0 / 1440.0;

/// What the Sun makes doubtful or dangerous about `sky`. `sun_altitude_deg` gives the Sun's altitude at the
/// observer's site at a time, or None where it cannot be known.
pub fn cautions(sky: &Sky, mut sun_altitude_deg: impl FnMut(Instant) -> Option<f64>) -> Vec<Caution> {
    let elongation_deg = sky.elongation_rad.to_degrees();
    let near = elongation_deg < NEAR_SUN_DEG;
    let Some(site) = &sky.site else {
        return if near { vec![Caution::NearSunNoHorizon { elongation_deg }] } else { Vec::new() };
    };
    let mut up = |time: Instant| sun_altitude_deg(time).is_some_and(|altitude| altitude > RISING_DEG);
    let altitude_deg = site.altitude_rad.to_degrees();
    let mut found = Vec::new();
    if near {
        let soon = [-1.0, -0.5, 0.0, 0.5, 1.0].iter().any(|half_hours| up(sky.time.plus_days(half_hours * HALF_HOUR)));
        found.push(if soon {
            Caution::SunDanger { elongation_deg }
        } else {
            Caution::NearSun { elongation_deg, sunrise: next_rise(sky.time, up) }
        });
    }
    if altitude_deg < 0.0 {
        found.push(Caution::CometDown { altitude_deg });
    } else if site.sun_altitude_rad.to_degrees() > RISING_DEG {
        found.push(Caution::SunUp);
    }
    found
}

/// First time within a day after `from` at which the Sun comes up, to a second; None if it does not.
fn next_rise(from: Instant, mut up: impl FnMut(Instant) -> bool) -> Option<Instant> {
    let steps = (1.0 / STEP) as usize;
    let first = (1..=steps).find(|&step| up(from.plus_days(step as f64 * STEP)))?;
    let (mut down, mut risen) = ((first - 1) as f64 * STEP, first as f64 * STEP);
    while risen - down > 1.0 / 86_400.0 {
        let middle = 0.5 * (down + risen);
        if up(from.plus_days(middle)) {
            risen = middle;
        } else {
            down = middle;
        }
    }
    Some(from.plus_days(risen))
}
