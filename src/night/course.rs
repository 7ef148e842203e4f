//! How does a night run: twilights, risings and settings, dark time?
//!
//! Altitudes are sampled every five minutes and their crossings refined to a tenth of a second. The Sun falls to its
//! lowest place and rises from it, and each twilight is looked for on either side of that place: none is missed, however
//! short. A rising and setting of comet or Moon within the same five minutes may be.

use super::best::{self, Absence, Best};
use super::evening::Evening;
use super::moment::{Laws, SUNSET_DEG, TWILIGHTS_DEG};
use crate::error::Error;
use crate::sky::dark::{self, Window};
use crate::sky::watch::Watch;
use crate::time::Instant;

/// Samples of a night, both ends included: every five minutes.
const SAMPLES: usize = 289;
/// Crossings are refined to this, days: a tenth of a second.
const FINE: f64 = 1.0 / 864_000.0;

/// The Sun passes one of the altitudes that have a name.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Twilight {
    pub altitude_deg: f64,
    /// Downward in the evening and upward in the morning; None where that does not happen between the two noons.
    pub evening: Option<Instant>,
    pub morning: Option<Instant>,
}

/// What happens at one time of a night.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum EventKind {
    /// The Sun goes down through the altitude of this number: sunset, civil, nautical, astronomical twilight ends.
    SunDown(usize),
    SunUp(usize),
    CometRises,
    CometSets,
    /// The comet at its greatest altitude between the two noons.
    CometHighest,
    MoonRises,
    MoonSets,
    DarkTimeBegins,
    DarkTimeEnds,
    BestBegins,
    BestEnds,
}

impl EventKind {
    pub fn words(self) -> &'static str {
        match self {
            EventKind::SunDown(0) => "sunset",
            EventKind::SunDown(1) => "civil twilight ends",
            EventKind::SunDown(2) => "nautical twilight ends",
            EventKind::SunDown(_) => "astronomical twilight ends",
            EventKind::SunUp(0) => "sunrise",
            EventKind::SunUp(1) => "civil twilight begins",
            EventKind::SunUp(2) => "nautical twilight begins",
            EventKind::SunUp(_) => "astronomical twilight begins",
            EventKind::CometRises => "comet rises",
            EventKind::CometSets => "comet sets",
            EventKind::CometHighest => "comet highest",
            EventKind::MoonRises => "Moon rises",
            EventKind::MoonSets => "Moon sets",
            EventKind::DarkTimeBegins => "dark time begins",
            EventKind::DarkTimeEnds => "dark time ends",
            EventKind::BestBegins => "best window begins",
            EventKind::BestEnds => "best window ends",
        }
    }
}

/// Something that happens in a night.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Event {
    pub kind: EventKind,
    pub time: Instant,
}

/// Altitudes at one time, degrees, airless.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Sample {
    pub time: Instant,
    pub comet_deg: f64,
    pub sun_deg: f64,
    pub moon_deg: f64,
}

/// A night as it runs.
#[derive(Clone, Debug, PartialEq)]
pub struct Course {
    pub evening: Evening,
    /// Evenly from noon to noon.
    pub samples: Vec<Sample>,
    /// Sunset, civil, nautical, astronomical.
    pub twilights: [Twilight; 4],
    /// The Sun at its lowest between the two noons, degrees.
    pub sun_lowest_deg: f64,
    /// The comet at its highest between the two noons, degrees.
    pub comet_highest_deg: f64,
    /// Times with the comet up in a dark sky, by the law of the night.
    pub dark: Vec<Window>,
    pub best: Result<Best, Absence>,
    /// In order of time.
    pub events: Vec<Event>,
}

impl Course {
    /// The night of the watch's site.
    ///
    /// # Errors
    /// An observer without a site; a time outside the span of the ephemeris.
    pub fn of(watch: &mut Watch, evening: &Evening, laws: &Laws) -> Result<Course, Error> {
        let step = (evening.to.tdb_days() - evening.from.tdb_days()) / (SAMPLES - 1) as f64;
        let times = (0..SAMPLES).map(|number| evening.from.plus_days(number as f64 * step));
        let samples = times.map(|time| sample(watch, time)).collect::<Result<Vec<Sample>, Error>>()?;
        // Within a night that was sampled no time lies outside the ephemeris.
        let mut sun = |time: Instant| watch.sun_altitude_deg(time).unwrap_or(f64::NAN);
        let lowest = extreme(&samples, |sample| -sample.sun_deg, &mut |time| -sun(time));
        let twilights = [SUNSET_DEG, TWILIGHTS_DEG[0], TWILIGHTS_DEG[1], TWILIGHTS_DEG[2]].map(|altitude_deg| {
            let mut above = |time: Instant| sun(time) - altitude_deg;
            Twilight {
                altitude_deg,
                evening: root(evening.from, lowest, &mut above),
                morning: root(lowest, evening.to, &mut above),
            }
        });
        let sun_lowest_deg = sun(lowest);

        let limits = laws.night.limits();
        let dark = dark::windows(evening.middle(), &limits, |time| {
            sample(watch, time).ok().map(|sample| [sample.comet_deg, sample.sun_deg])
        });
        let mut comet = |time: Instant| sample(watch, time).map_or(f64::NAN, |sample| sample.comet_deg);
        let highest = extreme(&samples, |sample| sample.comet_deg, &mut comet);
        let comet_highest_deg = comet(highest);
        let best = if dark.is_empty() {
            Err(Absence::of(&limits, sun_lowest_deg, comet_highest_deg))
        } else {
            best::of(watch, &dark, laws)
        };

        let mut events: Vec<Event> = Vec::new();
        let mut add = |kind: EventKind, time: Option<Instant>| events.extend(time.map(|time| Event { kind, time }));
        for (number, twilight) in twilights.iter().enumerate() {
            add(EventKind::SunDown(number), twilight.evening);
            add(EventKind::SunUp(number), twilight.morning);
        }
        if comet_highest_deg > 0.0 {
            add(EventKind::CometHighest, Some(highest));
        }
        for pair in samples.windows(2) {
            let (a, b) = (&pair[0], &pair[1]);
            if (a.comet_deg < 0.0) != (b.comet_deg < 0.0) {
                let kind = if a.comet_deg < 0.0 { EventKind::CometRises } else { EventKind::CometSets };
                let mut altitude = |time: Instant| sample(watch, time).map_or(f64::NAN, |sample| sample.comet_deg);
                add(kind, root(a.time, b.time, &mut altitude));
            }
            if (a.moon_deg < SUNSET_DEG) != (b.moon_deg < SUNSET_DEG) {
                let kind = if a.moon_deg < SUNSET_DEG { EventKind::MoonRises } else { EventKind::MoonSets };
                let mut altitude =
                    |time: Instant| sample(watch, time).map_or(f64::NAN, |sample| sample.moon_deg - SUNSET_DEG);
                add(kind, root(a.time, b.time, &mut altitude));
            }
        }
        for window in &dark {
            add(EventKind::DarkTimeBegins, Some(window.begin));
            add(EventKind::DarkTimeEnds, Some(window.end));
        }
        if let Ok(best) = &best {
            add(EventKind::BestBegins, Some(best.begin));
            add(EventKind::BestEnds, Some(best.end));
        }
        crate::order::by_number(&mut events, |event| event.time.tdb_days());
        Ok(Course { evening: *evening, samples, twilights, sun_lowest_deg, comet_highest_deg, dark, best, events })
    }

    /// From sunset to sunrise; from and to noon where one of them is missing.
    pub fn sun_down(&self) -> [Instant; 2] {
        let set = &self.twilights[0];
        [set.evening.unwrap_or(self.evening.from), set.morning.unwrap_or(self.evening.to)]
    }
}

fn sample(watch: &mut Watch, time: Instant) -> Result<Sample, Error> {
    let (viewpoint, sky) = watch.seen_at(time)?;
    let (Some(ground), Some(site)) = (viewpoint.ground, sky.site) else { return Err(super::moment::no_site()) };
    Ok(Sample {
        time,
        comet_deg: site.altitude_rad.to_degrees(),
        sun_deg: site.sun_altitude_rad.to_degrees(),
        moon_deg: ground.horizon.altitude_rad(&ground.moon_au).to_degrees(),
    })
}

/// When the greatest value is reached: the greatest of the samples, refined between its neighbours.
fn extreme(samples: &[Sample], of: fn(&Sample) -> f64, at: &mut dyn FnMut(Instant) -> f64) -> Instant {
    let greatest = (0..samples.len()).max_by(|&a, &b| of(&samples[a]).total_cmp(&of(&samples[b]))).unwrap_or(0);
    let mut low = samples[greatest.saturating_sub(1)].time;
    let mut high = samples[(greatest + 1).min(samples.len() - 1)].time;
    // Thirds: between two neighbours of the greatest sample the altitude has one top.
    while high.tdb_days() - low.tdb_days() > FINE {
        let third = (high.tdb_days() - low.tdb_days()) / 3.0;
        let (a, b) = (low.plus_days(third), high.plus_days(-third));
        if at(a) < at(b) { low = a } else { high = b }
    }
    Instant::from_tdb_days(0.5 * (low.tdb_days() + high.tdb_days()))
}

/// When a value changes its sign between two times; None where both ends have the same.
fn root(from: Instant, to: Instant, value: &mut dyn FnMut(Instant) -> f64) -> Option<Instant> {
    let (mut low, mut high) = (from, to);
    let begins_below = value(low) < 0.0;
    if begins_below == (value(high) < 0.0) {
        return None;
    }
    while high.tdb_days() - low.tdb_days() > FINE {
        let middle = Instant::from_tdb_days(0.5 * (low.tdb_days() + high.tdb_days()));
        if (value(middle) < 0.0) == begins_below { low = middle } else { high = middle }
    }
    Some(Instant::from_tdb_days(0.5 * (low.tdb_days() + high.tdb_days())))
}
