//! The browser shell: the only file with wasm-bindgen exports.
//!
//! One [`Desk`] holds what a person set up and what is shown of it. Calls are few and coarse: the page says what was
//! done, asks once per frame for everything it shows, and lets the core draw. A refusal is thrown as an object
//! with `refused: true`, a message and the place; after a panic the page throws this core away and makes a new one.

mod answer;
mod bench;
mod camera;
mod examples;
mod night;
mod season;
mod share;
mod tails;
mod typed;

use crate::body::observer::Observer;
use crate::body::site_code;
use crate::camera::Camera;
use crate::camera::field::Field;
use crate::engine::easel::{Easel, Wishes};
use crate::engine::outlook::Outlook;
use crate::engine::{Engine, TailView, View};
use crate::error::{Error, Kind, Place};
use crate::orbit::elements::Comet;
use crate::orbit::notation::Entry;
use crate::paint::canvas::CanvasPainter;
use crate::paint::{paint, svg};
use crate::plan::{Plan, paste};
use crate::say;
use crate::scene::camera_field;
use crate::scene::pointer;
use crate::scene::theme::Theme;
use crate::scene::view::{SkyView, Up};
use crate::tail::cloud::Quality;
use crate::time::{Instant, Stamp};
use answer::Refusal;
use serde::{Deserialize, Serialize};
use std::rc::Rc;
use std::sync::Mutex;
use wasm_bindgen::JsValue;
use wasm_bindgen::prelude::wasm_bindgen;
use web_sys::CanvasRenderingContext2d;

/// What the last panic said, for the page to show.
static LAST_PANIC: Mutex<String> = Mutex::new(String::new());

/// A comet read without a time takes the desk's time when that lies this near its perihelion, days.
const NEAR_PERIHELION_DAYS: f64 = 400.0;
/// Otherwise it takes the present when that lies this near, days; else its perihelion.
const STILL_OF_USE_DAYS: f64 = 1100.0;

/// Makes panics readable; called once for each new core.
#[wasm_bindgen]
pub fn start() {
    std::panic::set_hook(Box::new(|panic| {
        if let Ok(mut last) = LAST_PANIC.lock() {
            *last = panic.to_string();
        }
    }));
}

/// What the last panic said, or nothing.
#[wasm_bindgen]
pub fn last_panic() -> String {
    LAST_PANIC.lock().map(|last| last.clone()).unwrap_or_default()
}

/// The custom properties of a theme, as pairs of name and value.
#[wasm_bindgen]
pub fn theme_variables(theme: &str) -> JsValue {
    to_js(&named_theme(theme).css_variables())
}

/// The invented comets that come with the page.
#[wasm_bindgen]
pub fn examples() -> JsValue {
    to_js(&examples::list())
}

/// The comet's name in a plan.
#[wasm_bindgen]
pub fn plan_name(plan: &str) -> Result<String, JsValue> {
    Ok(Plan::parse(plan).map_err(refusal)?.comet.name)
}

/// The observatories of the packed table with this code, or whose name holds these words.
#[wasm_bindgen]
pub fn find_sites(table: &str, words: &str) -> JsValue {
    to_js(&answer::sites(table, words))
}

/// A plain object of the page; the answers hold only text, numbers and lists of them, which always convert.
fn to_js(value: &impl Serialize) -> JsValue {
    serde_wasm_bindgen::to_value(value).unwrap_or(JsValue::UNDEFINED)
}

/// A refusal, ready to be thrown.
fn refusal(error: Error) -> JsValue {
    to_js(&Refusal::of(&error))
}

/// The fields of a form, as the page sends them.
fn from_js<T: for<'a> Deserialize<'a>>(fields: JsValue) -> Result<T, JsValue> {
    serde_wasm_bindgen::from_value(fields)
        .map_err(|e| refusal(Error::new(Kind::Usage, Place::Whole, e.to_string(), "the fields of the form")))
}

fn named_theme(name: &str) -> Theme {
    Theme::named(name).unwrap_or(Theme::Dark)
}

/// Everything on the desk: the plan, its sky at the chosen time, the view of the sky plane, the season.
#[wasm_bindgen]
pub struct Desk {
    engine: Engine,
    time: Stamp,
    /// What is seen at `time`.
    seen: View,
    /// The tails summed last, and whether they are those of what is seen.
    tails: Option<Rc<TailView>>,
    tails_fresh: bool,
    /// Whether tails of a moment before will do.
    hasty: bool,
    easel: Easel,
    wishes: Wishes,
    view: SkyView,
    /// Whether a person zoomed or panned; until then the view follows the size of the drawing.
    view_chosen: bool,
    /// How the view opens for the plan's camera; a camera that is only moved or turned keeps it.
    opening_tan: Option<f64>,
    season: Option<Outlook>,
    read: Vec<Entry>,
    night: night::Kept,
}

#[wasm_bindgen]
impl Desk {
    /// A desk with a plan on it. A plan without a time opens at its comet's perihelion.
    #[wasm_bindgen(constructor)]
    pub fn new(plan: &str) -> Result<Desk, JsValue> {
        let (engine, time, seen) = prepared(Plan::parse(plan).map_err(refusal)?).map_err(refusal)?;
        Ok(Desk {
            tails: None,
            tails_fresh: false,
            hasty: false,
            opening_tan: engine.plan().camera.as_ref().map(Camera::reach_tan),
            easel: Easel::default(),
            wishes: Wishes::default(),
            engine,
            time,
            seen,
            view: SkyView::start(800.0, 600.0),
            view_chosen: false,
            season: None,
            read: Vec::new(),
            night: night::Kept::default(),
        })
    }

    /// Puts another plan on the desk.
    pub fn set_plan(&mut self, plan: &str) -> Result<JsValue, JsValue> {
        let plan = Plan::parse(plan).map_err(refusal)?;
        self.take(plan)
    }

    /// Puts the comet of a plan on the desk; observer and time stay where they serve it.
    pub fn set_comet(&mut self, plan: &str, now_ms: f64) -> Result<JsValue, JsValue> {
        let comet = Plan::parse(plan).map_err(refusal)?.comet;
        self.take_comet(comet, now_ms)
    }

    /// Reads pasted text: the first comet of it comes onto the desk, all of it is kept for [`Desk::pick_read`].
    /// Refused only when nothing could be read.
    pub fn read_text(&mut self, text: &str, now_ms: f64) -> Result<JsValue, JsValue> {
        if text.trim_start().starts_with('{')
            && let Ok(plan) = Plan::parse(text)
        {
            let first = plan.comet.name.clone();
            self.read = Vec::new();
            if plan.time.is_some() {
                self.take(plan)?;
            } else {
                self.take_comet(plan.comet, now_ms)?;
            }
            return Ok(to_js(&answer::Read { count: 1, first, errors: Vec::new(), left_out: 0, notices: Vec::new() }));
        }
        let found = paste::read(text);
        let errors: Vec<Refusal> = found.errors.iter().map(Refusal::of).collect();
        let left_out = found.errors_left_out;
        let Some(first) = found.comets.first().map(|entry| entry.comet.clone()) else {
            let nothing = Error::new(Kind::Notation, Place::Whole, "no elements", "the elements of a comet");
            return Err(refusal(found.errors.into_iter().next().unwrap_or(nothing)));
        };
        let name = first.name.clone();
        self.take_comet(first, now_ms)?;
        self.read = found.comets;
        let notices = found.notices.iter().map(ToString::to_string).collect();
        Ok(to_js(&answer::Read { count: self.read.len(), first: name, errors, left_out, notices }))
    }

    /// Those comets of the last text read whose name holds the words, at most `most` of them.
    pub fn find_read(&self, words: &str, most: usize) -> JsValue {
        to_js(&answer::found(&self.read, words, most))
    }

    /// Puts a comet of the last text read on the desk, by its number there.
    pub fn pick_read(&mut self, number: usize, now_ms: f64) -> Result<JsValue, JsValue> {
        match self.read.get(number) {
            Some(entry) => self.take_comet(entry.comet.clone(), now_ms),
            None => Ok(JsValue::NULL),
        }
    }

    /// Takes typed elements, field by field.
    pub fn set_elements(&mut self, fields: JsValue) -> Result<JsValue, JsValue> {
        let fields: typed::ElementFields = from_js(fields)?;
        let comet = fields.comet(&self.engine.plan().comet).map_err(refusal)?;
        self.take(Plan { comet, ..self.plan() })
    }

    /// Looks from the centre of the Earth.
    pub fn set_geocentre(&mut self) -> Result<JsValue, JsValue> {
        self.take(Plan { observer: Observer::Geocentre, ..self.plan() })
    }

    /// Looks from a typed site.
    pub fn set_site(&mut self, fields: JsValue) -> Result<JsValue, JsValue> {
        let fields: typed::SiteFields = from_js(fields)?;
        let site = fields.site().map_err(refusal)?;
        self.take(Plan { observer: Observer::Site(site), ..self.plan() })
    }

    /// Looks from an observatory of the packed table, by its code.
    pub fn set_site_code(&mut self, table: &str, code: &str) -> Result<JsValue, JsValue> {
        match site_code::find(table, code) {
            Some(site) => self.take(Plan { observer: Observer::Site(site), ..self.plan() }),
            None => Ok(JsValue::NULL),
        }
    }

    /// The plan as it stands, time included.
    pub fn plan_json(&self) -> String {
        self.plan().print()
    }

    /// Goes to a time in days of TDB from J2000, rounded to a second of UTC; gives the time it went to.
    pub fn scrub(&mut self, tdb_days: f64) -> Result<f64, JsValue> {
        let time = Stamp::utc_seconds(Instant::from_tdb_days(tdb_days)).map_err(refusal)?;
        self.go(time)
    }

    /// Goes to a typed time, in any form a plan takes; gives the time it went to.
    pub fn scrub_to_text(&mut self, text: &str) -> Result<f64, JsValue> {
        let time: Stamp = text.trim().parse().map_err(refusal)?;
        self.go(time)
    }

    /// Whether tails summed for the time before serve until the next frame; the sums are the largest part of a reading.
    pub fn set_hasty(&mut self, hasty: bool) {
        self.hasty = hasty;
    }

    /// Everything the page shows beside the drawings.
    pub fn reading(&mut self) -> JsValue {
        let visibility = match self.engine.dark_windows(self.seen.sky.time) {
            Some(windows) => say::when_up(&windows, &self.engine.plan().night.limits()),
            None => "Give a site under Observer to see when the comet is up in a dark sky.".to_owned(),
        };
        let tails = self.tails();
        to_js(&answer::reading(&self.engine, &self.time, &self.seen, &tails, visibility))
    }

    /// The read-out table as tabulated text.
    pub fn table_text(&self) -> String {
        answer::table_text(&self.engine, &self.time, &self.seen.sky)
    }

    /// Gives the sky plane its size in CSS pixels. A chosen scale and place stay; others follow the size.
    pub fn resize(&mut self, width_px: f64, height_px: f64) {
        if self.view_chosen {
            self.view = SkyView { width_px, height_px, ..self.view };
        } else {
            let opening = match self.opening_tan {
                Some(reach_tan) => SkyView::around(width_px, height_px, reach_tan),
                None => SkyView::start(width_px, height_px),
            };
            self.view = SkyView { up: self.view.up, ..opening };
        }
    }

    /// Draws the sky plane; the context's transform carries the device's pixel ratio.
    pub fn draw(&mut self, context: &CanvasRenderingContext2d, theme: &str) {
        let theme = named_theme(theme);
        let wishes = Wishes { theme, ..self.wishes };
        let view = self.facing_view();
        let scene = self.easel.sky(&self.engine, &self.seen.sky, &view, &wishes);
        paint(&scene, theme, &mut CanvasPainter::new(context));
    }

    /// The sky plane as an SVG file, as it stands.
    pub fn svg(&mut self, theme: &str) -> String {
        let theme = named_theme(theme);
        let wishes = Wishes { theme, quality: Quality::STILL, ..self.wishes };
        let view = self.facing_view();
        let scene = self.easel.sky(&self.engine, &self.seen.sky, &view, &wishes);
        let tails = self.tails();
        let saying = self.engine.saying(&self.seen.sky, &tails);
        let title = format!("{}, {}", self.engine.plan().comet.name, self.seen.sky.time.utc_minute());
        svg::write(&scene, theme, &title, &saying.sentence)
    }

    /// What lies under the pointer, in words, one fact to a line.
    pub fn hover(&self, x_px: f64, y_px: f64) -> String {
        let place = pointer::hover(&self.seen.sky, &self.facing_view(), x_px, y_px).words();
        format!("{place}\n{}", self.landing_words(x_px, y_px))
    }

    pub fn zoom(&mut self, factor: f64, x_px: f64, y_px: f64) {
        self.view_chosen = true;
        self.view = self.view.zoomed(factor, [x_px, y_px]);
    }

    pub fn pan(&mut self, right_px: f64, down_px: f64) {
        self.view_chosen = true;
        self.view.offset_px = [self.view.offset_px[0] + right_px, self.view.offset_px[1] + down_px];
    }

    pub fn reset_view(&mut self) {
        self.view_chosen = false;
        self.resize(self.view.width_px, self.view.height_px);
    }

    pub fn zenith_up(&self) -> bool {
        self.view.up == Up::Zenith
    }

    pub fn set_zenith_up(&mut self, zenith: bool) {
        self.view.up = if zenith { Up::Zenith } else { Up::North };
    }
}

impl Desk {
    /// The plan with the chosen time in it.
    fn plan(&self) -> Plan {
        Plan { time: Some(self.time.clone()), ..self.engine.plan().clone() }
    }

    /// The tails of what is seen: summed when first asked for, so not for a sky that is passed over before it is shown.
    fn tails(&mut self) -> Rc<TailView> {
        match &self.tails {
            Some(tails) if self.tails_fresh || self.hasty => tails.clone(),
            _ => {
                let tails = Rc::new(self.engine.tails_at(&self.seen.sky));
                self.tails = Some(tails.clone());
                self.tails_fresh = true;
                tails
            }
        }
    }

    /// The view with the camera's upright as it stands under this sky; north up where there is none.
    fn facing_view(&self) -> SkyView {
        if !matches!(self.view.up, Up::Camera { .. }) {
            return self.view;
        }
        let sky = &self.seen.sky;
        let camera = self.engine.plan().camera.as_ref();
        let field = camera.and_then(|camera| Field::of(camera, &sky.axes.sight));
        SkyView { up: field.map_or(Up::North, |field| camera_field::up(&field)), ..self.view }
    }

    /// Opens the view anew for the plan's camera.
    fn reopen(&mut self) {
        self.opening_tan = self.engine.plan().camera.as_ref().map(Camera::reach_tan);
        self.reset_view();
    }

    fn take(&mut self, plan: Plan) -> Result<JsValue, JsValue> {
        let (engine, time, seen) = prepared(plan).map_err(refusal)?;
        (self.tails, self.tails_fresh) = (None, false);
        if let Some(season) = &mut self.season {
            season.renew(&engine, seen.sky.time);
        }
        self.night.plan_changed();
        let size = |engine: &Engine| engine.plan().camera.as_ref().map(|camera| (camera.half_px(), camera.scale_tan()));
        let resized = size(&self.engine) != size(&engine);
        (self.engine, self.time, self.seen) = (engine, time, seen);
        if resized {
            self.reopen();
        }
        Ok(JsValue::TRUE)
    }

    /// Takes a comet that came without observer and time. An invented observer goes with the invented comets.
    fn take_comet(&mut self, comet: Comet, now_ms: f64) -> Result<JsValue, JsValue> {
        let perihelion = comet.elements.perihelion_time.instant();
        // 10957.5 days from the Unix epoch to 2000-01-01 12:00.
        let now = Instant::from_ut1_days((now_ms / 86_400_000.0).clamp(-3e6, 3e6) - 10_957.5);
        let away = |time: Instant| (time.tdb_days() - perihelion.tdb_days()).abs();
        let time = if away(self.seen.sky.time) <= NEAR_PERIHELION_DAYS {
            self.time.clone()
        } else if away(now) <= STILL_OF_USE_DAYS {
            Stamp::utc_seconds(now).map_err(refusal)?
        } else {
            Stamp::utc_seconds(perihelion).map_err(refusal)?
        };
        let observer = self.engine.plan().observer.clone();
        let observer = if examples::is_invented(&observer) { Observer::Geocentre } else { observer };
        self.take(Plan { comet, observer, time: Some(time), ..self.plan() })
    }

    fn go(&mut self, time: Stamp) -> Result<f64, JsValue> {
        self.seen = self.engine.view_at(time.instant()).map_err(refusal)?;
        self.tails_fresh = false;
        self.time = time;
        Ok(self.seen.sky.time.tdb_days())
    }
}

/// A plan made ready, with the time it opens at and its sky there.
fn prepared(plan: Plan) -> Result<(Engine, Stamp, View), Error> {
    let time = match &plan.time {
        Some(time) => time.clone(),
        None => Stamp::utc_seconds(plan.comet.elements.perihelion_time.instant())?,
    };
    let mut engine = Engine::new(plan)?;
    let seen = engine.view_at(time.instant())?;
    Ok((engine, time, seen))
}
