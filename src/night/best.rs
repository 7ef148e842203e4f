//! When in the dark time is the comet observed best?
//!
//! The criterion, in this order: the Moon out of the way if any dark time has it so (below the horizon, less than a
//! quarter lit, or more than 90 degrees from the comet); then the comet as high as it comes; then as long as its air
//! mass stays within 0.5 of the least. The limits of the dark time itself are the person's ([`super::law`]). The choice is ours,
//! meant to be seen through; it weighs neither weather nor the brightness of the sky.

use super::air::air_mass;
use super::moment::{Laws, Moment};
use crate::sky::dark::{Limits, Window};
use crate::sky::watch::Watch;
use crate::time::Instant;

/// A Moon less lit than this does not count.
pub const THIN_MOON: f64 = 0.25;
/// A Moon farther from the comet than this does not count, degrees.
pub const FAR_MOON_DEG: f64 = 90.0;
/// The window lasts while the air mass is at most this much above its least.
pub const AIR_MASS_SPREAD: f64 = 0.5;

/// Steps of the search, days: two minutes at most, and at least this many to a window.
const STEP: f64 = 2.0 / 1440.0;
const LEAST_STEPS: usize = 8;
/// Ends are found to this, days: a second.
const SECOND: f64 = 1.0 / 86_400.0;

/// How the Moon stands in the best window.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Moonlight {
    Down,
    Thin,
    Far,
    InTheWay,
}

impl Moonlight {
    fn of(moment: &Moment) -> Moonlight {
        if moment.moon_altitude_rad < 0.0 {
            Moonlight::Down
        } else if moment.moon_lit_fraction < THIN_MOON {
            Moonlight::Thin
        } else if moment.moon_separation_rad.to_degrees() > FAR_MOON_DEG {
            Moonlight::Far
        } else {
            Moonlight::InTheWay
        }
    }
}

/// The best part of a night's dark time.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Best {
    pub begin: Instant,
    pub end: Instant,
    /// The comet at its highest within, degrees, and when.
    pub highest_deg: f64,
    pub highest_at: Instant,
    pub least_air_mass: f64,
    /// At `highest_at`.
    pub moonlight: Moonlight,
}

/// Why a night has no dark time with the comet up.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Absence {
    /// The Sun does not go below its limit.
    NoDarkness,
    /// The comet does not come above its limit between the two noons.
    CometTooLow,
    /// Both happen, but not together.
    NotTogether,
}

impl Absence {
    pub fn of(limits: &Limits, sun_lowest_deg: f64, comet_highest_deg: f64) -> Absence {
        if comet_highest_deg <= limits.comet_above_deg {
            Absence::CometTooLow
        } else if sun_lowest_deg >= limits.sun_below_deg {
            Absence::NoDarkness
        } else {
            Absence::NotTogether
        }
    }
}

/// One time that was looked at.
struct Look {
    window: usize,
    time: Instant,
    air_mass: f64,
    moonlight: Moonlight,
    altitude_deg: f64,
}

/// The best part of `windows`, of which there is at least one.
///
pub fn of(watch: &mut Watch, windows: &[Window], laws: &Laws) -> Result<Best, Absence> {
    let mut looks = Vec::new();
    for (number, window) in windows.iter().enumerate() {
        let length = window.end.tdb_days() - window.begin.tdb_days();
        let steps = ((length / STEP).ceil() as usize).max(LEAST_STEPS);
        for k in 0..=steps {
            let time = window.begin.plus_days(length * k as f64 / steps as f64);
            looks.extend(look(watch, laws, number, time));
        }
    }
    let quiet = looks.iter().any(|look| look.moonlight != Moonlight::InTheWay);
    let counts = |look: &Look| !quiet || look.moonlight != Moonlight::InTheWay;
    let Some(top) = (0..looks.len())
        .filter(|&at| counts(&looks[at]))
        .min_by(|&a, &b| looks[a].air_mass.total_cmp(&looks[b].air_mass))
    else {
        return Err(Absence::NotTogether);
    };
    let limit = looks[top].air_mass + AIR_MASS_SPREAD;
    let window = looks[top].window;
    let good = |look: &Look| look.window == window && counts(look) && look.air_mass <= limit;
    // From the top outward, step by step; the step on which it ends is halved to a second.
    let mut ends = [looks[top].time; 2];
    for (end, outward) in ends.iter_mut().zip([-1_isize, 1]) {
        let mut at = top;
        let beyond = loop {
            match at.checked_add_signed(outward).and_then(|next| Some((next, looks.get(next)?))) {
                Some((next, look)) if good(look) => at = next,
                Some((_, look)) if look.window == window => break Some(look.time),
                _ => break None,
            }
        };
        *end = looks[at].time;
        if let Some(mut without) = beyond {
            while (without.tdb_days() - end.tdb_days()).abs() > SECOND {
                let middle = Instant::from_tdb_days(0.5 * (end.tdb_days() + without.tdb_days()));
                if look(watch, laws, window, middle).is_some_and(|look| good(&look)) {
                    *end = middle;
                } else {
                    without = middle;
                }
            }
        }
    }
    let top = &looks[top];
    Ok(Best {
        begin: ends[0],
        end: ends[1],
        highest_deg: top.altitude_deg,
        highest_at: top.time,
        least_air_mass: top.air_mass,
        moonlight: top.moonlight,
    })
}

fn look(watch: &mut Watch, laws: &Laws, window: usize, time: Instant) -> Option<Look> {
    let moment = Moment::at(watch, time, laws).ok()?;
    let altitude_deg = moment.altitude_rad.to_degrees();
    let air_mass = air_mass(altitude_deg)?;
    Some(Look { window, time, air_mass, moonlight: Moonlight::of(&moment), altitude_deg })
}
