//! How does the season of a plan come about, at the least cost, slice by slice?
//!
//! An [`Outlook`] holds the season's stretch, the part of it in view, and what was found so far. The events and
//! windows are found once for the whole season, geocentric ([`Search`]); the nights of a site after them; the curves for
//! the part in view only, whenever it changes, which takes a few milliseconds. Nothing here depends on the present
//! time: scrubbing costs nothing.

use super::Engine;
use crate::body::SPAN;
use crate::error::{Error, Kind, Place};
use crate::scene::ribbon::{self, DarkNight, Ribbon, Strip, flag, lane, scale};
use crate::season::search::{Search, Season};
use crate::season::series::{Column, Curve, Series, unwrap};
use crate::season::stretch::{LONGEST_DAYS, Stretch};
use crate::sky::avoidance::NEAR_SUN_DEG;
use crate::sky::magnitude;
use crate::time::Instant;

/// A season begins and ends where the comet is this far from the Sun, or twice its perihelion distance if that is more,
/// au: beyond, few comets show a tail.
const FAR_AU: f64 = 3.0;
/// But it reaches no less and no more to each side of perihelion, days.
const LEAST_HALF_DAYS: f64 = 90.0;
const MOST_HALF_DAYS: f64 = 365.0;
/// The closest view of the ribbon, days: six hours.
const LEAST_VIEW_DAYS: f64 = 0.25;
/// Dates of the curves: one for so many pixels, within limits.
const PX_PER_DATE: f64 = 2.0;
const FEWEST_DATES: usize = 200;
const MOST_DATES: usize = 1200;
/// Between dates at which a position angle turns by more than this, radians, another is put in, so often at most.
const LOOSE_TURN_RAD: f64 = 0.6;
const MOST_HALVINGS: usize = 7;
/// A long search shows what it found so far every so many days of its work.
const SHOWN_EVERY_DAYS: f64 = 1500.0;
/// A second, days: the present time is rounded to it.
const SECOND: f64 = 1.0 / 86_400.0;

/// A season, as far as it is computed.
pub struct Outlook {
    season: Stretch,
    view: Stretch,
    search: Search,
    found: Season,
    /// Work done since `found` was taken.
    unseen_days: f64,
    nights: Vec<DarkNight>,
    /// The night that is computed next, as a local day number; None for the geocentre.
    next_night: Option<i64>,
    /// Grows whenever something to draw changed.
    version: u32,
    drawn: Option<Drawn>,
}

/// What a ribbon was drawn from.
struct Drawn {
    version: u32,
    curves: Vec<Curve>,
    width_px: f64,
    /// As asked for, and at most.
    height_px: (Option<f64>, f64),
    series: Series,
    ribbon: Ribbon,
}

/// A window of the season, for people.
pub struct WindowWords {
    pub words: String,
    pub from: Instant,
    pub to: Instant,
    pub note: String,
}

impl Engine {
    /// The stretch that the plan names, wherever `time` lies; else one from the orbit, months to each side of perihelion,
    /// or, where that does not hold `time`, the same length about it.
    fn stretch(&self, time: Instant) -> Stretch {
        if let Some(chosen) = self.plan.season.as_ref().and_then(|season| season.stretch().ok()) {
            return chosen;
        }
        let usual = around(self.orbit().perihelion_time(), 2.0 * self.half_season_days());
        if holds(&usual, time) { usual } else { around(time, usual.days()) }
    }

    /// Days from perihelion to the end of the season.
    fn half_season_days(&self) -> f64 {
        let orbit = self.orbit();
        let perihelion = orbit.perihelion_time();
        let far_au = FAR_AU.max(2.0 * orbit.perihelion_distance_au());
        let (mut near, mut far) = (LEAST_HALF_DAYS, MOST_HALF_DAYS);
        while far - near > 1.0 {
            let middle = 0.5 * (near + far);
            let place = orbit.place_at(perihelion.plus_days(middle));
            if place.state.position_au.norm() < far_au { near = middle } else { far = middle }
        }
        far
    }

    /// Curves over a stretch, denser where a position angle turns fast, so that it never jumps.
    ///
    /// # Errors
    /// Those of [`Series::of`].
    pub fn season_curves(&mut self, stretch: &Stretch, count: usize, curves: &[Curve]) -> Result<Series, Error> {
        let branches = self.plan.comet.brightness.clone();
        let row = |watch: &mut crate::sky::watch::Watch, stretch: &Stretch, count: usize| {
            Series::of(watch, stretch, count, curves, |sky| magnitude::total(&branches, sky))
        };
        let mut series = row(&mut self.watch, stretch, count)?;
        for _ in 0..MOST_HALVINGS {
            let loose: Vec<usize> = (1..series.times.len()).filter(|&at| turns_fast(&series, at)).collect();
            if loose.is_empty() {
                break;
            }
            for at in loose.into_iter().rev() {
                let Ok(gap) = Stretch::new(series.times[at - 1], series.times[at]) else { continue };
                let between = row(&mut self.watch, &gap, 3)?;
                series.times.insert(at, between.times[1]);
                for (column, new) in series.columns.iter_mut().zip(&between.columns) {
                    column.values.insert(at, new.values[1]);
                }
            }
            for column in series.columns.iter_mut().filter(|column| column.curve.is_position_angle()) {
                unwrap(&mut column.values);
            }
        }
        Ok(series)
    }
}

/// Whether a position angle turns fast from the date before this one.
fn turns_fast(series: &Series, at: usize) -> bool {
    series.columns.iter().any(|Column { curve, values }| {
        curve.is_position_angle() && (values[at] - values[at - 1]).abs() > LOOSE_TURN_RAD
    })
}

impl Outlook {
    /// The season about a time, of which nothing is computed yet.
    pub fn new(engine: &Engine, time: Instant) -> Self {
        let season = engine.stretch(time);
        let mut outlook = Outlook {
            season,
            view: season,
            search: engine.season_search(season),
            found: Season::default(),
            unseen_days: 0.0,
            nights: Vec::new(),
            next_night: None,
            version: 0,
            drawn: None,
        };
        outlook.begin_nights(engine);
        outlook
    }

    /// The plan changed: keeps of the season what did not.
    pub fn renew(&mut self, engine: &Engine, time: Instant) {
        let season = engine.stretch(time);
        if season != self.season {
            (self.season, self.view) = (season, season);
        }
        self.search.renew(engine.season_subject(), season);
        self.found = self.search.season();
        self.begin_nights(engine);
        self.changed();
    }

    /// Makes sure that the season holds a time, unless a person chose the season: another begins about it where it does
    /// not. The part in view follows the time.
    pub fn follow(&mut self, engine: &Engine, time: Instant) {
        if !holds(&self.season, time) {
            if engine.plan.season.is_none() {
                self.renew(engine, time);
            }
        } else if !holds(&self.view, time) {
            self.view = self.within(time, self.view.days(), 0.5);
            self.changed();
        }
    }

    fn begin_nights(&mut self, engine: &Engine) {
        self.nights = Vec::new();
        self.next_night = engine.has_site().then(|| self.local_day(engine, self.season.from()));
    }

    fn changed(&mut self) {
        self.version += 1;
    }

    /// The local day, by mean solar time, of a time.
    fn local_day(&self, engine: &Engine, time: Instant) -> i64 {
        libm::floor(time.ut1_days() + longitude_days(engine)) as i64
    }

    /// Works on for about so many days of the season, and returns which part is done, [0, 1].
    pub fn advance(&mut self, engine: &mut Engine, days: f64) -> f64 {
        if self.search.done() < 1.0 {
            let done = self.search.advance(days);
            self.unseen_days += days;
            // What is found is shown from time to time, since sorting it out takes time too.
            if done >= 1.0 || self.unseen_days >= SHOWN_EVERY_DAYS {
                self.unseen_days = 0.0;
                self.found = self.search.season();
                self.changed();
            }
        } else if let Some(first) = self.next_night {
            let last = self.local_day(engine, self.season.to()) + 1;
            let next = first.saturating_add((libm::ceil(days) as i64).max(1)).min(last + 1);
            for day in first..next {
                // Local midnight: noon and half a day.
                let middle = Instant::from_ut1_days(day as f64 + 0.5 - longitude_days(engine));
                let windows = engine.dark_windows(middle).unwrap_or_default();
                let windows = windows.iter().map(|window| [window.begin, window.end]).collect();
                self.nights.push(DarkNight { middle, windows });
            }
            self.next_night = (next <= last).then_some(next);
            if self.next_night.is_none() {
                self.changed();
            }
        }
        self.done(engine)
    }

    /// Which part is done, [0, 1].
    pub fn done(&self, engine: &Engine) -> f64 {
        let nights = match self.next_night {
            None => 1.0,
            Some(next) => {
                let first = self.local_day(engine, self.season.from());
                let last = self.local_day(engine, self.season.to()) + 1;
                (next - first) as f64 / (last + 1 - first) as f64
            }
        };
        // Nights are the smaller part of the work.
        let search = self.search.done();
        if search < 1.0 { 0.75 * search } else { 0.75 + 0.25 * nights }
    }

    /// Whether all events and windows of sunward dust are found; nights may still be missing.
    pub fn is_searched(&self) -> bool {
        self.search.done() >= 1.0
    }

    /// Whether a time lies outside the season, which only a chosen one leaves so.
    pub fn misses(&self, time: Instant) -> bool {
        !holds(&self.season, time)
    }

    pub fn season(&self) -> &Stretch {
        &self.season
    }

    pub fn view(&self) -> &Stretch {
        &self.view
    }

    pub fn version(&self) -> u32 {
        self.version
    }

    /// What was found; complete once all is done.
    pub fn found(&self) -> &Season {
        &self.found
    }

    /// Shows `factor` times less of the season, so that what stands at `about` stays there.
    pub fn zoom(&mut self, factor: f64, about: Instant) {
        let days = (self.view.days() / factor).clamp(LEAST_VIEW_DAYS.min(self.season.days()), self.season.days());
        let share = (about.tdb_days() - self.view.from().tdb_days()) / self.view.days();
        self.view = self.within(about, days, share.clamp(0.0, 1.0));
        self.changed();
    }

    /// Moves the view by a share of its length.
    pub fn pan(&mut self, share: f64) {
        let from = self.view.from().plus_days(share * self.view.days());
        self.view = self.within(from, self.view.days(), 0.0);
        self.changed();
    }

    /// A view of a length in the season with `time` at a share of it.
    fn within(&self, time: Instant, days: f64, share: f64) -> Stretch {
        let room = self.season.days() - days;
        let wished = time.tdb_days() - share * days - self.season.from().tdb_days();
        if room <= SECOND {
            return self.season;
        }
        let from = self.season.from().plus_days(wished.clamp(0.0, room));
        Stretch::new(from, from.plus_days(days)).unwrap_or(self.season)
    }

    /// The ribbon of the view over a width; where no height is given, at that which shows everything, but at most `most_px`.
    /// Drawn anew only when something changed.
    ///
    /// # Errors
    /// None within the span of the ephemeris, where every season lies.
    pub fn ribbon(
        &mut self,
        engine: &mut Engine,
        curves: &[Curve],
        width_px: f64,
        height_px: Option<f64>,
        most_px: f64,
    ) -> Result<&Ribbon, Error> {
        let stale = self.drawn.as_ref().is_none_or(|drawn| {
            drawn.version != self.version
                || drawn.curves != curves
                || drawn.width_px != width_px
                || drawn.height_px != (height_px, most_px)
        });
        if stale {
            let count = ((width_px / PX_PER_DATE) as usize).clamp(FEWEST_DATES, MOST_DATES);
            let series = engine.season_curves(&self.view, count, curves)?;
            let strip = self.strip(&series);
            let height = height_px.unwrap_or_else(|| ribbon::natural_height_px(&strip, width_px).min(most_px));
            let ribbon = ribbon::compose(&strip, width_px, height);
            let curves = curves.to_vec();
            let version = self.version;
            self.drawn = Some(Drawn { version, curves, width_px, height_px: (height_px, most_px), series, ribbon });
        }
        Ok(&self.drawn.as_ref().expect("drawn just now").ribbon)
    }

    /// The ribbon as it was drawn last.
    pub fn drawn(&self) -> Option<&Ribbon> {
        self.drawn.as_ref().map(|drawn| &drawn.ribbon)
    }

    /// What lies at an x of the ribbon drawn last, one fact to an item; None beside the track.
    pub fn under(&self, engine: &mut Engine, x_px: f64) -> Option<Vec<String>> {
        let drawn = self.drawn.as_ref()?;
        let [left, right, ..] = drawn.ribbon.track_px();
        if !(left - 1.0..=right + 1.0).contains(&x_px) {
            return None;
        }
        let time = drawn.ribbon.time_at(x_px);
        let moment = Stretch::new(time, time.plus_days(1.0 / 720.0))
            .or_else(|_| Stretch::new(time.plus_days(-1.0 / 720.0), time))
            .ok()?;
        let branches = engine.plan.comet.brightness.clone();
        let row =
            Series::of(&mut engine.watch, &moment, 2, &drawn.curves, |sky| magnitude::total(&branches, sky)).ok()?;
        let values: Vec<(Curve, f64)> = row.columns.iter().map(|column| (column.curve, column.values[0])).collect();
        let reach_days = 4.0 * self.view.days() / (right - left).max(1.0);
        Some(ribbon::under::words(&self.strip(&drawn.series), time, &values, reach_days))
    }

    /// The season in a sentence: what a screen reader hears for the drawing.
    pub fn sentence(&self) -> String {
        let day = |time: Instant| time.utc_minute()[..10].to_owned();
        let curves = self.drawn.as_ref().map_or(&[][..], |drawn| &drawn.curves[..]);
        let names: Vec<&str> = curves.iter().map(|&curve| scale::words(curve)).collect();
        let [from, to] = [self.view.from(), self.view.to()].map(day);
        let range = format!("From {from} to {to} UTC, with the curves of {}", names.join(", "));
        let events: Vec<String> = self
            .found
            .events
            .iter()
            .filter(|event| self.view.holds(event.time))
            .filter(|event| flag::rank(event.kind) <= flag::WEIGHTY)
            .map(|event| format!("{} on {}", event.kind.words(), day(event.time)))
            .collect();
        if events.is_empty() { format!("{range}.") } else { format!("{range}. Events: {}.", events.join(", ")) }
    }

    /// Every window of the season in words, kind by kind.
    pub fn windows(&self) -> Vec<WindowWords> {
        let mut found: Vec<WindowWords> = Vec::new();
        for window in &self.found.sunward {
            let best = &window.best;
            let note = format!("{}, best {}", lane::grade(best.grade), best.time.utc_minute());
            found.push(WindowWords { words: lane::words(window).to_owned(), from: window.begin, to: window.end, note });
        }
        for &[from, to] in &self.found.near_sun {
            let words = format!("within {NEAR_SUN_DEG}° of the Sun");
            found.push(WindowWords { words, from, to, note: String::new() });
        }
        // Nights that follow each other count as one window.
        let mut run: Option<(Instant, Instant, usize, f64)> = None;
        let mut close = |run: &mut Option<(Instant, Instant, usize, f64)>| {
            if let Some((from, to, nights, most)) = run.take() {
                let note = format!("{nights} nights, up to {most:.1} h");
                found.push(WindowWords { words: "dark with the comet up".to_owned(), from, to, note });
            }
        };
        for night in &self.nights {
            let hours = lane::hours(night);
            match (night.windows.first(), night.windows.last(), &mut run) {
                (Some(_), Some(last), Some((_, to, nights, most))) => {
                    (*to, *nights, *most) = (last[1], *nights + 1, most.max(hours));
                }
                (Some(first), Some(last), None) => run = Some((first[0], last[1], 1, hours)),
                _ => close(&mut run),
            }
        }
        close(&mut run);
        found
    }

    fn strip<'a>(&'a self, series: &'a Series) -> Strip<'a> {
        let nights = if self.next_night.is_none() && self.nights.is_empty() { None } else { Some(&self.nights[..]) };
        Strip { stretch: self.view, series, season: &self.found, nights }
    }
}

/// The curves of a list of keys with commas between them, in the order in which they are listed everywhere; those
/// that are drawn usually where the list is empty.
///
/// # Errors
/// A key that names no curve.
pub fn curves(keys: &str) -> Result<Vec<Curve>, Error> {
    if keys.trim().is_empty() {
        return Ok(scale::USUAL.to_vec());
    }
    let mut known = Vec::new();
    for key in keys.split(',').map(str::trim) {
        match scale::named(key) {
            Some(curve) => known.push(curve),
            None => {
                let names: Vec<&str> = Curve::ALL.iter().map(|curve| curve.key()).collect();
                let found = format!("curve '{key}'");
                return Err(Error::new(Kind::Usage, Place::Whole, found, names.join(", ")));
            }
        }
    }
    Ok(Curve::ALL.into_iter().filter(|curve| known.contains(curve)).collect())
}

fn longitude_days(engine: &Engine) -> f64 {
    match &engine.plan.observer {
        crate::body::observer::Observer::Site(site) => site.longitude_deg / 360.0,
        crate::body::observer::Observer::Geocentre => 0.0,
    }
}

/// Whether a time lies within, to a second: the ends themselves are reached in rounded seconds.
fn holds(stretch: &Stretch, time: Instant) -> bool {
    stretch.from().plus_days(-SECOND) <= time && time <= stretch.to().plus_days(SECOND)
}

/// A stretch of about this length about a time, moved into the ephemeris; it begins and ends on whole days of UTC, or
/// hours where it is short.
fn around(middle: Instant, days: f64) -> Stretch {
    let days = days.min(LONGEST_DAYS - 2.0);
    let (first, last) = (SPAN.first.plus_days(1.0).tdb_days(), SPAN.last.plus_days(-1.0).tdb_days());
    let from = (middle.tdb_days() - 0.5 * days).min(last - days).max(first);
    let per_day = if days > 30.0 { 1.0 } else { 24.0 };
    // A day begins half a day off the whole numbers of this count.
    let whole = |days: f64| {
        let count = Instant::from_tdb_days(days).ut1_days() + 0.5;
        Instant::from_ut1_days(libm::floor(count * per_day) / per_day - 0.5)
    };
    Stretch::new(whole(from), whole((from + days).min(last))).expect("a checked length within the span")
}
