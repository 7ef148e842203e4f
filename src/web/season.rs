//! What does the page show of the season: ribbon, handle, what lies under the pointer, events and windows?
//!
//! The page asks once per frame for [`Desk::season`], which is cheap unless something changed, draws the ribbon only when
//! its version grew, and the handle always. Events and windows are searched for in slices by
//! [`Desk::season_advance`] whenever the page has time.

use super::{Desk, named_theme, refusal, to_js};
use crate::engine::outlook::{self, Outlook};
use crate::error::{Error, Kind, Place};
use crate::paint::canvas::CanvasPainter;
use crate::paint::{paint, svg};
use crate::plan::Plan;
use crate::plan::season::Season;
use crate::say;
use crate::say::table::Form;
use crate::scene::ribbon::{flag, scale};
use crate::season::series::Curve;
use crate::time::{Instant, Stamp};
use serde::Serialize;
use wasm_bindgen::JsValue;
use wasm_bindgen::prelude::wasm_bindgen;
use web_sys::CanvasRenderingContext2d;

/// Mean length of a month, days.
const MONTH_DAYS: f64 = 365.25 / 12.0;
/// Longer views are scrubbed by the hour, shorter ones by the minute.
const BY_THE_HOUR_DAYS: f64 = 20.0;

/// The ribbon as the page needs it.
#[derive(Serialize)]
struct Answer {
    /// Differs whenever the ribbon is to be drawn anew.
    version: String,
    height_px: f64,
    /// Left, right, top and bottom of the track.
    track_px: [f64; 4],
    /// Steps of the slider from one end of the track to the other, and which of them is now.
    steps: f64,
    step: f64,
    /// Whether all of the season is in view.
    whole: bool,
    /// Whether the present time lies outside a chosen season.
    outside: bool,
    done: f64,
    sentence: String,
}

/// A curve that may be drawn.
#[derive(Serialize)]
struct CurveChoice {
    key: &'static str,
    words: &'static str,
    usual: bool,
}

/// Every curve that may be drawn.
#[wasm_bindgen]
pub fn season_curves() -> JsValue {
    let choice = |curve: Curve| CurveChoice {
        key: curve.key(),
        words: scale::words(curve),
        usual: scale::USUAL.contains(&curve),
    };
    to_js(&Curve::ALL.map(choice))
}

#[wasm_bindgen]
impl Desk {
    /// The ribbon over a width, at most of a height, with the curves of these keys; drawn anew only where something changed.
    pub fn season(&mut self, width_px: f64, most_px: f64, curves: &str) -> Result<JsValue, JsValue> {
        let time = self.seen.sky.time;
        let curves = outlook::curves(curves).unwrap_or_else(|_| scale::USUAL.to_vec());
        let Desk { season, engine, .. } = self;
        let season = season.get_or_insert_with(|| Outlook::new(engine, time));
        season.follow(engine, time);
        let ribbon = season.ribbon(engine, &curves, width_px, None, most_px).map_err(refusal)?;
        let (height_px, track_px) = (ribbon.scene.height_px, ribbon.track_px());
        let view = *season.view();
        let per_day = if view.days() > BY_THE_HOUR_DAYS { 24.0 } else { 1440.0 };
        let keys: Vec<&str> = curves.iter().map(|curve| curve.key()).collect();
        Ok(to_js(&Answer {
            version: format!("{} {width_px} {height_px} {}", season.version(), keys.join(",")),
            height_px,
            track_px,
            steps: (view.days() * per_day).round(),
            step: ((time.tdb_days() - view.from().tdb_days()) * per_day).round(),
            whole: view == *season.season(),
            outside: season.misses(time),
            done: season.done(engine),
            sentence: season.sentence(),
        }))
    }

    /// Paints the ribbon, all but its handle.
    pub fn draw_season(&self, context: &CanvasRenderingContext2d, theme: &str) {
        if let Some(ribbon) = self.season.as_ref().and_then(Outlook::drawn) {
            paint(&ribbon.scene, named_theme(theme), &mut CanvasPainter::new(context));
        }
    }

    /// Paints the handle, and a thin line under the pointer; not a number for no pointer.
    pub fn draw_season_handle(&self, context: &CanvasRenderingContext2d, theme: &str, pointer_px: f64) {
        if let Some(ribbon) = self.season.as_ref().and_then(Outlook::drawn) {
            let handle = ribbon.handle(self.seen.sky.time, Some(pointer_px));
            paint(&handle, named_theme(theme), &mut CanvasPainter::new(context));
        }
    }

    /// The ribbon as an SVG file, as it stands.
    pub fn season_svg(&self, theme: &str) -> Option<String> {
        let season = self.season.as_ref()?;
        let scene = season.drawn()?.with_handle(self.seen.sky.time);
        let title = format!("Season of {}", self.engine.plan().comet.name);
        Some(svg::write(&scene, named_theme(theme), &title, &season.sentence()))
    }

    /// What lies at an x of the ribbon, with points between the facts; nothing beside the track.
    pub fn season_under(&mut self, x_px: f64) -> Option<String> {
        let words = self.season.as_ref()?.under(&mut self.engine, x_px)?;
        Some(words.join(" \u{b7} "))
    }

    /// Goes to a share of the track: to a whole hour of UTC, or a minute where the view is short.
    pub fn season_scrub(&mut self, share: f64) -> Result<f64, JsValue> {
        let Some(season) = &self.season else { return Ok(self.seen.sky.time.tdb_days()) };
        let view = season.view();
        let time = view.from().plus_days(share.clamp(0.0, 1.0) * view.days());
        let per_day = if view.days() > BY_THE_HOUR_DAYS { 24.0 } else { 1440.0 };
        let whole = Instant::from_ut1_days((time.ut1_days() * per_day).round() / per_day);
        let time = if season.season().holds(whole) { whole } else { time };
        self.scrub(time.tdb_days())
    }

    /// Goes some days on, but not beyond the season; `None` steps from the present time. Gives the time it went to.
    pub fn season_step(&mut self, days: f64) -> Result<f64, JsValue> {
        let Some(season) = &self.season else { return Ok(self.seen.sky.time.tdb_days()) };
        let [first, last] = [season.season().from(), season.season().to()].map(Instant::tdb_days);
        let days = (self.seen.sky.time.tdb_days() + days).clamp(first, last);
        self.scrub(days)
    }

    /// Goes to the next event in view or beyond (`sense` 1) or the one before (-1), else to the end of the season.
    pub fn season_to_event(&mut self, sense: f64) -> Result<f64, JsValue> {
        let Some(season) = &self.season else { return Ok(self.seen.sky.time.tdb_days()) };
        let now = self.seen.sky.time.tdb_days();
        // The present time is rounded to a second.
        let ahead = |days: f64| (days - now) * sense > 1.5 / 86_400.0;
        let events = season.found().events.iter().map(|event| event.time.tdb_days());
        let next = events.filter(|&days| ahead(days)).min_by(|a, b| (a * sense).total_cmp(&(b * sense)));
        match next {
            Some(days) => self.scrub(days),
            None => self.season_step(sense * 1e9),
        }
    }

    /// Works on the search for about so many days of the season; gives the part that is done.
    pub fn season_advance(&mut self, days: f64) -> f64 {
        let Desk { season, engine, .. } = self;
        season.as_mut().map_or(1.0, |season| season.advance(engine, days))
    }

    /// Shows `factor` times less time about an x of the ribbon.
    pub fn season_zoom(&mut self, factor: f64, x_px: f64) {
        if let Some(season) = &mut self.season
            && let Some(about) = season.drawn().map(|ribbon| ribbon.time_at(x_px))
        {
            season.zoom(factor, about);
        }
    }

    /// Shows `factor` times less time about the present.
    pub fn season_zoom_now(&mut self, factor: f64) {
        let now = self.seen.sky.time;
        if let Some(season) = &mut self.season {
            season.zoom(factor, now);
        }
    }

    /// Moves the view by a share of its length.
    pub fn season_pan(&mut self, share: f64) {
        if let Some(season) = &mut self.season {
            season.pan(share);
        }
    }

    /// Typed ends of the season; empty texts leave it to the orbit.
    pub fn set_season(&mut self, from: &str, to: &str) -> Result<JsValue, JsValue> {
        let season = if from.trim().is_empty() && to.trim().is_empty() {
            None
        } else {
            let read = |text: &str, key: &str| {
                let place = Place::Field(format!("season.{key}"));
                text.trim().parse::<Stamp>().map_err(|error| refusal(error.at(place)))
            };
            Some(Season { from: read(from, "from")?, to: read(to, "to")? })
        };
        self.take(Plan { season, ..self.plan() })
    }

    /// A season of so many months to each side of perihelion.
    pub fn set_season_months(&mut self, months: f64) -> Result<JsValue, JsValue> {
        let perihelion = self.engine.orbit().perihelion_time();
        let end = |sense: f64| {
            let time = perihelion.plus_days(sense * months * MONTH_DAYS);
            let hour = Instant::from_ut1_days((time.ut1_days() * 24.0).floor() / 24.0);
            Stamp::utc_seconds(hour).map_err(refusal)
        };
        let season = Some(Season { from: end(-1.0)?, to: end(1.0)? });
        self.take(Plan { season, ..self.plan() })
    }

    /// The events as a file or a table: `csv`, `calendar`, `plain`, `markdown` or `wiki`, byte for byte what the command
    /// line gives for the same plan and range.
    pub fn season_text(&mut self, form: &str) -> Result<String, JsValue> {
        let Desk { season, engine, .. } = self;
        let Some(season) = season.as_ref().filter(|season| season.is_searched()) else {
            let allowed = "a season whose search is done; let it run on";
            return Err(refusal(Error::new(Kind::Usage, Place::Whole, "events that are not complete", allowed)));
        };
        let told = engine.season_told(season.found()).map_err(refusal)?;
        let comet = &engine.plan().comet.name;
        Ok(match (form, Form::named(form)) {
            ("calendar", _) => say::season::calendar(comet, &told),
            (_, Some(form)) if form != Form::Csv => say::season::table(comet, &told, form),
            _ => say::season::csv(&told),
        })
    }

    /// Events and windows for people, and the ends of the season.
    pub fn season_table(&self) -> JsValue {
        self.season.as_ref().map_or(JsValue::NULL, |season| to_js(&table(season, &self.engine.plan().season)))
    }
}

/// The text twin of the ribbon.
#[derive(Serialize)]
struct Table {
    from: String,
    to: String,
    /// Whether a person chose the ends.
    chosen: bool,
    events: Vec<EventRow>,
    windows: Vec<WindowRow>,
}

#[derive(Serialize)]
struct EventRow {
    days: f64,
    time: String,
    words: &'static str,
    value: String,
    note: String,
    weighty: bool,
}

#[derive(Serialize)]
struct WindowRow {
    words: String,
    from: String,
    to: String,
    days: f64,
    note: String,
}

fn table(season: &Outlook, chosen: &Option<Season>) -> Table {
    let iso = |time: Instant| time.utc_iso_ms().replace(".000Z", "Z");
    let stretch = season.season();
    let (from, to) = match chosen {
        Some(chosen) => (chosen.from.to_string(), chosen.to.to_string()),
        None => (iso(stretch.from()), iso(stretch.to())),
    };
    let events = season.found().events.iter().map(|event| EventRow {
        days: event.time.tdb_days(),
        time: event.time.utc_minute(),
        words: event.kind.words(),
        value: say::season::value_words(event),
        note: say::season::note(event),
        weighty: flag::rank(event.kind) <= flag::WEIGHTY,
    });
    let windows = season.windows().into_iter().map(|window| WindowRow {
        words: window.words,
        from: window.from.utc_minute(),
        to: window.to.utc_minute(),
        days: window.from.tdb_days(),
        note: window.note,
    });
    Table { from, to, chosen: chosen.is_some(), events: events.collect(), windows: windows.collect() }
}
