//! What does the page show of a night, and of many comets in it?

use super::typed::number;
use super::{Desk, from_js, named_theme, refusal, to_js};
use crate::body::observer::Observer;
use crate::error::Error;
use crate::night::board::column::{COLUMNS as BOARD_COLUMNS, Line};
use crate::night::board::{Board, sunward};
use crate::night::course::Course;
use crate::night::evening::read_date;
use crate::night::law::NightLaw;
use crate::night::moment::Moment;
use crate::night::table::{self, Row};
use crate::orbit::conic::Orbit;
use crate::orbit::elements::Comet;
use crate::paint::canvas::CanvasPainter;
use crate::paint::{paint, svg};
use crate::plan::Plan;
use crate::say;
use crate::say::table::{Cell, Form, Table};
use crate::scene::{Scene, horizon, night_strip};
use crate::sky::column::Value;
use crate::sky::magnitude;

use serde::{Deserialize, Serialize};
use std::collections::BTreeMap;
use wasm_bindgen::JsValue;
use wasm_bindgen::prelude::wasm_bindgen;
use web_sys::CanvasRenderingContext2d;

/// Ten minutes from one row of a saved night to the next, as the command has it, days.
const STEP_DAYS: f64 = 10.0 / 1440.0;
/// Columns of the page's table of instants, by key: the rest is in the saved file.
const SHOWN: [&str; 9] = [
    "event",
    "altitude_deg",
    "azimuth_deg",
    "air_mass",
    "sun_altitude_deg",
    "moon_altitude_deg",
    "moon_separation_deg",
    "antisolar_from_vertical_deg",
    "zenith_position_angle_deg",
];

/// What is kept of nights between two calls.
#[derive(Default)]
pub struct Kept {
    /// The night of the chosen time, and its rows of events.
    course: Option<(Course, Vec<Row>)>,
    /// Grows with each new night, so that the page need not draw its tables again.
    number: u32,
    roster: Option<Roster>,
}

impl Kept {
    pub fn plan_changed(&mut self) {
        self.course = None;
    }
}

/// The comets of the board.
struct Roster {
    comets: Vec<Comet>,
    orbits: Vec<Orbit>,
    lines: Vec<Line>,
    /// Numbers of the lines as last sorted.
    order: Vec<usize>,
    title: String,
}

/// The laws of the night as texts.
#[derive(Serialize, Deserialize)]
struct LawFields {
    sun_below_deg: String,
    comet_above_deg: String,
    pixel_scale_arcsec: String,
    longest_trail_px: String,
}

impl LawFields {
    fn of(law: &NightLaw) -> Self {
        LawFields {
            sun_below_deg: law.sun_below_deg.to_string(),
            comet_above_deg: law.comet_above_deg.to_string(),
            pixel_scale_arcsec: law.pixel_scale_arcsec.map_or(String::new(), |scale| scale.to_string()),
            longest_trail_px: law.longest_trail_px.to_string(),
        }
    }

    fn law(&self) -> Result<NightLaw, Error> {
        let scale = self.pixel_scale_arcsec.trim();
        Ok(NightLaw {
            sun_below_deg: number(&self.sun_below_deg, "night.sun_below_deg")?,
            comet_above_deg: number(&self.comet_above_deg, "night.comet_above_deg")?,
            pixel_scale_arcsec: if scale.is_empty() { None } else { Some(number(scale, "night.pixel_scale_arcsec")?) },
            longest_trail_px: number(&self.longest_trail_px, "night.longest_trail_px")?,
        })
    }
}

/// A table as the page shows it.
#[derive(Serialize)]
struct Sheet {
    /// Key, words, unit.
    columns: Vec<(&'static str, &'static str, &'static str)>,
    rows: Vec<SheetRow>,
}

#[derive(Serialize)]
struct SheetRow {
    /// What the row leads to: a time in days of TDB, or the number of a comet.
    goal: f64,
    /// As people read them.
    cells: Vec<String>,
    /// With every digit.
    values: Vec<String>,
}

/// Everything the Night bench shows beside its drawings.
#[derive(Serialize)]
struct Answer {
    number: u32,
    date: String,
    fields: LawFields,
    best: String,
    best_days: f64,
    criterion: String,
    absences: Vec<String>,
    words: String,
    horizon: String,
    exposure: String,
    magnitude: String,
}

fn digits(value: &Value, decimals: usize) -> String {
    match value {
        Value::Number(number) => {
            let text = format!("{number:.decimals$}");
            let zero = text.bytes().all(|byte| matches!(byte, b'-' | b'0' | b'.'));
            if zero { text.replace('-', "") } else { text }
        }
        Value::Text(text) => (*text).to_owned(),
        Value::Absent => String::new(),
    }
}

fn full(value: Value) -> String {
    match value {
        Value::Number(number) => number.to_string(),
        Value::Text(text) => text.to_owned(),
        Value::Absent => String::new(),
    }
}

fn minus(text: &str) -> String {
    text.replace('-', "\u{2212}")
}

#[wasm_bindgen]
impl Desk {
    /// The night of the chosen time; null without a site.
    pub fn night(&mut self) -> Result<JsValue, JsValue> {
        if !self.engine.has_site() {
            return Ok(JsValue::NULL);
        }
        self.hold_night().map_err(refusal)?;
        let moment = self.moment().map_err(refusal)?;
        let Some((course, _)) = &self.night.course else { return Ok(JsValue::NULL) };
        let plan = self.engine.plan();
        let law = &plan.night;
        let middle = course.evening.middle();
        let magnitude = match moment.total_magnitude {
            Some(total) => format!("Predicted total magnitude {total:.1}. {}", magnitude::DOUBT),
            None => String::new(),
        };
        Ok(to_js(&Answer {
            number: self.night.number,
            date: course.evening.date.to_string(),
            fields: LawFields::of(law),
            best: say::night::best(course, law),
            best_days: course.best.map_or(middle, |best| best.highest_at).tdb_days(),
            criterion: say::night::criterion(law),
            absences: say::night::absences(course, law),
            words: say::night::course(course, law),
            horizon: say::night::horizon(&moment),
            exposure: say::night::exposure(&moment, law),
            magnitude,
        }))
    }

    /// The table of the night's instants.
    pub fn night_table(&self) -> JsValue {
        let Some((_, rows)) = &self.night.course else { return JsValue::NULL };
        let columns: Vec<&table::Column> =
            SHOWN.iter().filter_map(|key| table::COLUMNS.iter().find(|column| column.key == *key)).collect();
        let sheet = Sheet {
            columns: columns.iter().map(|column| (column.key, column.words, column.unit)).collect(),
            rows: rows
                .iter()
                .map(|row| SheetRow {
                    goal: row.moment.sky.time.tdb_days(),
                    cells: columns.iter().map(|column| minus(&digits(&(column.value)(row), column.decimals))).collect(),
                    values: columns.iter().map(|column| full((column.value)(row))).collect(),
                })
                .collect(),
        };
        let times: Vec<String> = rows.iter().map(|row| row.moment.sky.time.utc_minute()).collect();
        to_js(&(sheet, times))
    }

    /// Goes to the night of a typed date: to its best time, or its middle.
    pub fn go_to_night(&mut self, date: &str) -> Result<f64, JsValue> {
        let date = read_date(date).map_err(refusal)?;
        let evening = self.engine.evening(Some(date), self.seen.sky.time).map_err(refusal)?;
        let course = self.engine.course(&evening).map_err(refusal)?;
        let time = course.best.map_or(evening.middle(), |best| best.highest_at);
        self.scrub(time.tdb_days())
    }

    /// Takes typed laws of the night.
    pub fn set_night(&mut self, fields: JsValue) -> Result<JsValue, JsValue> {
        let fields: LawFields = from_js(fields)?;
        let night = fields.law().map_err(refusal)?;
        self.take(Plan { night, ..self.plan() })
    }

    /// Draws the night strip.
    pub fn draw_night(&mut self, context: &CanvasRenderingContext2d, theme: &str, width_px: f64, height_px: f64) {
        let Some(scene) = self.night_scene(width_px, height_px) else { return };
        paint(&scene, named_theme(theme), &mut CanvasPainter::new(context));
    }

    /// The night strip as an SVG file.
    pub fn night_svg(&mut self, theme: &str, width_px: f64, height_px: f64) -> Result<String, JsValue> {
        self.hold_night().map_err(refusal)?;
        let (Some(scene), Some((course, _))) = (self.night_scene(width_px, height_px), &self.night.course) else {
            return Ok(String::new());
        };
        let plan = self.engine.plan();
        let title = format!("{}, night of {}", plan.comet.name, course.evening.date);
        Ok(svg::write(&scene, named_theme(theme), &title, &say::night::course(course, &plan.night)))
    }

    /// The time under a place of the night strip, days of TDB.
    pub fn night_time_at(&self, width_px: f64, height_px: f64, x_px: f64) -> f64 {
        match &self.night.course {
            Some((course, _)) => night_strip::time_at(course, width_px, height_px, x_px).tdb_days(),
            None => self.seen.sky.time.tdb_days(),
        }
    }

    /// Draws the comet over the horizon.
    pub fn draw_horizon(&mut self, context: &CanvasRenderingContext2d, theme: &str, width_px: f64, height_px: f64) {
        let Ok(moment) = self.moment() else { return };
        let scene = horizon::compose(&moment, width_px, height_px);
        paint(&scene, named_theme(theme), &mut CanvasPainter::new(context));
    }

    /// The comet over the horizon as an SVG file.
    pub fn horizon_svg(&mut self, theme: &str, width_px: f64, height_px: f64) -> Result<String, JsValue> {
        let moment = self.moment().map_err(refusal)?;
        let scene = horizon::compose(&moment, width_px, height_px);
        let title = format!("{}, {}", self.engine.plan().comet.name, self.seen.sky.time.utc_minute());
        Ok(svg::write(&scene, named_theme(theme), &title, &say::night::horizon(&moment)))
    }

    /// The night as CSV: the bytes of `tailvane night`.
    pub fn night_csv(&mut self) -> Result<String, JsValue> {
        self.hold_night().map_err(refusal)?;
        let Some((course, _)) = &self.night.course else { return Ok(String::new()) };
        self.engine.night_csv(course, STEP_DAYS).map_err(refusal)
    }

    /// The night's instants for a mail or a wiki: `plain`, `markdown`, `wiki` or `html`.
    pub fn night_text(&mut self, form: &str) -> Result<String, JsValue> {
        self.hold_night().map_err(refusal)?;
        let Some((course, rows)) = &self.night.course else { return Ok(String::new()) };
        let columns: Vec<&table::Column> =
            SHOWN.iter().filter_map(|key| table::COLUMNS.iter().find(|column| column.key == *key)).collect();
        let head = |column: &&table::Column| headed(column.words, column.unit);
        let table = Table {
            caption: format!("{}, night of {}", self.engine.plan().comet.name, course.evening.date),
            columns: ["UTC".to_owned()].into_iter().chain(columns.iter().map(head)).collect(),
            rows: rows
                .iter()
                .map(|row| {
                    let time = Cell::Text(row.moment.sky.time.utc_minute());
                    let cells = columns.iter().map(|column| match (column.value)(row) {
                        Value::Text(words) => Cell::Text(words.to_owned()),
                        value => Cell::Number(digits(&value, column.decimals)),
                    });
                    [time].into_iter().chain(cells).collect()
                })
                .collect(),
        };
        Ok(table.write(Form::named(form).unwrap_or(Form::Plain)))
    }

    /// Makes the board of the chosen night: the comet shown, those read last, those the plan keeps, and those of the
    /// plans given. Gives their number; null without a site.
    pub fn make_board(&mut self, kept: Vec<String>) -> Result<JsValue, JsValue> {
        let plan = self.engine.plan();
        let observer = plan.observer.clone();
        if !self.engine.has_site() {
            self.night.roster = None;
            return Ok(JsValue::NULL);
        }
        let mut comets: Vec<Comet> = Vec::new();
        // A map like the notation's, which is in the page anyway.
        let mut names: BTreeMap<String, usize> = BTreeMap::new();
        let kept = kept.iter().filter_map(|plan| Plan::parse(plan).ok()).map(|plan| plan.comet);
        let read = self.read.iter().map(|entry| entry.comet.clone());
        for comet in [plan.comet.clone()].into_iter().chain(read).chain(plan.comets.iter().cloned()).chain(kept) {
            // Only a name that was seen before can be the same comet again.
            if names.insert(comet.name.clone(), 0).is_none() || !comets.contains(&comet) {
                comets.push(comet);
            }
        }
        let evening = self.engine.evening(None, self.seen.sky.time).map_err(refusal)?;
        let mut board = Board::new(&observer, &evening, &plan.night).map_err(refusal)?;
        let (mut orbits, mut lines) = (Vec::new(), Vec::new());
        for comet in &comets {
            let orbit = Orbit::new(&comet.elements).map_err(refusal)?;
            let entry = board.entry(comet, &orbit);
            lines.push(Line { name: comet.name.clone(), entry, sunward: None });
            orbits.push(orbit);
        }
        let order = (0..lines.len()).collect();
        let title = format!("Comets on the night of {}", evening.date);
        let count = lines.len();
        self.night.roster = Some(Roster { comets, orbits, lines, order, title });
        Ok(JsValue::from_f64(count as f64))
    }

    /// What the board depends on beside the plan: the night, and the comets read last.
    pub fn board_key(&mut self) -> Result<String, JsValue> {
        let evening = self.engine.evening(None, self.seen.sky.time).map_err(refusal)?;
        let ends = [self.read.first(), self.read.last()].map(|entry| entry.map_or("", |entry| &entry.comet.name));
        Ok(format!("{} {} {}", evening.date, self.read.len(), ends.join(" ")))
    }

    pub fn board_title(&self) -> String {
        self.night.roster.as_ref().map_or(String::new(), |roster| roster.title.clone())
    }

    /// Sorts the board by a column and gives its first rows, all or only those up in dark time, and how many there are.
    pub fn board_rows(&mut self, key: &str, descending: bool, only_up: bool, most: usize) -> JsValue {
        let Some(roster) = &mut self.night.roster else { return JsValue::NULL };
        roster.order = (0..roster.lines.len()).filter(|&at| !only_up || roster.lines[at].entry.up.is_some()).collect();
        let lines = &roster.lines;
        if let Some(column) = BOARD_COLUMNS.iter().find(|column| column.key == key) {
            roster.order.sort_by(|&a, &b| column.order(&lines[a], &lines[b], descending).then(a.cmp(&b)));
        }
        let sheet = Sheet {
            columns: BOARD_COLUMNS.iter().map(|column| (column.key, column.words, column.unit)).collect(),
            rows: roster
                .order
                .iter()
                .take(most)
                .map(|&number| SheetRow {
                    goal: number as f64,
                    cells: BOARD_COLUMNS
                        .iter()
                        .enumerate()
                        .map(|(at, column)| {
                            let printed = column.printed(&lines[number]);
                            // Names stay as they are; dates keep their hyphens.
                            if at == 0 || matches!(column.shown, crate::night::board::column::Shown::Date) {
                                printed
                            } else {
                                minus(&printed)
                            }
                        })
                        .collect(),
                    values: BOARD_COLUMNS.iter().map(|column| column.full(&lines[number])).collect(),
                })
                .collect(),
        };
        to_js(&(sheet, roster.order.len()))
    }

    /// Looks at the sunward dust of the next comets in order that have not been looked at; gives how many are left.
    pub fn board_sunward(&mut self, most: usize) -> usize {
        let Some(roster) = &mut self.night.roster else { return 0 };
        let tails = &self.engine.plan().tails;
        let open: Vec<usize> =
            roster.order.iter().copied().filter(|&number| roster.lines[number].sunward.is_none()).collect();
        for &number in open.iter().take(most) {
            let found = sunward(&roster.orbits[number], &roster.lines[number].entry, tails);
            roster.lines[number].sunward = Some(found);
        }
        open.len().saturating_sub(most)
    }

    /// Puts a comet of the board on the desk; site and time stay.
    pub fn board_pick(&mut self, number: usize) -> Result<JsValue, JsValue> {
        let comet = self.night.roster.as_ref().and_then(|roster| roster.comets.get(number).cloned());
        match comet {
            Some(comet) => self.take(Plan { comet, ..self.plan() }),
            None => Ok(JsValue::NULL),
        }
    }

    /// The board as sorted: `csv` in full precision, or `plain`, `markdown`, `wiki`, `html` rounded for people.
    pub fn board_text(&self, form: &str) -> String {
        let Some(roster) = &self.night.roster else { return String::new() };
        let form = Form::named(form).unwrap_or(Form::Csv);
        let csv = form == Form::Csv;
        let rows = roster.order.iter().map(|&number| {
            let line = &roster.lines[number];
            let cell = |column: &crate::night::board::column::Column| {
                let words = if csv { column.full(line) } else { column.printed(line) };
                match crate::decimal::read(&words) {
                    Some(_) if column.key != "name" => Cell::Number(words),
                    _ => Cell::Text(words),
                }
            };
            BOARD_COLUMNS.iter().map(cell).collect()
        });
        let head = BOARD_COLUMNS
            .iter()
            .map(|column| if csv { column.key.to_owned() } else { headed(column.words, column.unit) });
        Table { caption: roster.title.clone(), columns: head.collect(), rows: rows.collect() }.write(form)
    }
}

fn headed(words: &str, unit: &str) -> String {
    if unit.is_empty() { words.to_owned() } else { format!("{words}, {unit}") }
}

impl Desk {
    /// Makes the night of the chosen time ready, unless it is.
    fn hold_night(&mut self) -> Result<(), Error> {
        let time = self.seen.sky.time;
        if let Some((course, _)) = &self.night.course
            && course.evening.from <= time
            && time < course.evening.to
        {
            return Ok(());
        }
        let evening = self.engine.evening(None, time)?;
        let course = self.engine.course(&evening)?;
        // Events only: a step longer than the night leaves no other rows.
        let mut rows = self.engine.night_rows(&course, 1e6)?;
        rows.retain(|row| row.event.is_some());
        self.night.course = Some((course, rows));
        self.night.number += 1;
        Ok(())
    }

    /// The night strip, where a night is at hand.
    fn night_scene(&self, width_px: f64, height_px: f64) -> Option<Scene> {
        let (course, _) = self.night.course.as_ref()?;
        let site = match &self.engine.plan().observer {
            Observer::Site(site) => site.name.as_str(),
            Observer::Geocentre => "",
        };
        Some(night_strip::compose(course, site, self.seen.sky.time, width_px, height_px))
    }

    fn moment(&mut self) -> Result<Moment, Error> {
        self.engine.moment_at(self.seen.sky.time)
    }
}
