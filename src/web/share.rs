//! How does what is on the desk leave it: drawings of a chosen size, tables, the comets a plan keeps?

use super::{Desk, answer, named_theme, refusal, to_js};
use crate::engine::View;
use crate::engine::easel::Wishes;
use crate::error::{Error, Kind, Place};
use crate::paint::svg;
use crate::plan::Plan;
use crate::say::stage;
use crate::say::table::{Cell, Form, Table};
use crate::scene::{orbit_view, sheet_map};
use crate::sky::column::{COLUMNS, Column, Value};
use crate::tail::cloud::Quality;
use crate::time::{Instant, Stamp};
use wasm_bindgen::JsValue;
use wasm_bindgen::prelude::wasm_bindgen;

/// Rows of a CSV at most: more would block the page for seconds.
const MOST_ROWS: f64 = 5000.0;
/// Sides of a drawing, pixels.
const SIDES_PX: [f64; 2] = [100.0, 8000.0];

#[wasm_bindgen]
impl Desk {
    /// A drawing of the page (`sky`, `orbit` or `map`) as an SVG file of this size. The sky plane keeps its field.
    pub fn svg_of(&mut self, view: &str, theme: &str, width_px: f64, height_px: f64) -> Result<String, JsValue> {
        for (side, value) in [("width", width_px), ("height", height_px)] {
            if !(SIDES_PX[0]..=SIDES_PX[1]).contains(&value) {
                let place = Place::Field(format!("the picture's {side}"));
                let allowed = format!("{} to {} pixels", SIDES_PX[0], SIDES_PX[1]);
                return Err(refusal(Error::new(Kind::Range, place, value.to_string(), allowed)));
            }
        }
        let theme = named_theme(theme);
        let sky = &self.seen.sky;
        let (scene, words) = match view {
            "orbit" => {
                let vista = self.engine.vista(sky);
                (orbit_view::compose(self.engine.plan(), sky, &vista, width_px, height_px), stage::orbit(sky))
            }
            "map" => {
                let seen = self.engine.vista(sky).seen;
                let (plan, perspective) = (self.engine.plan(), &self.tails.perspective);
                let scene = sheet_map::compose(&perspective.map, &plan.tails, seen, width_px, height_px);
                (scene, stage::map(plan, sky, perspective))
            }
            _ => {
                let wishes = Wishes { theme, quality: Quality::STILL, ..self.wishes };
                let view = self.view.sized(width_px, height_px);
                let scene = self.easel.sky(&self.engine, sky, &view, &wishes);
                (scene, self.engine.saying(sky, &self.tails).sentence)
            }
        };
        let title = format!("{}, {}", self.engine.plan().comet.name, sky.time.utc_minute());
        Ok(svg::write(&scene, theme, &title, &words))
    }

    /// The numbers for a mail or a wiki, rounded for people: `plain`, `markdown`, `wiki` or `html`.
    pub fn table(&self, form: &str) -> String {
        let sky = &self.seen.sky;
        let row = |column: &Column| {
            let value = match (column.value)(sky) {
                Value::Text(text) => Cell::Text(text.to_owned()),
                _ => Cell::Number(column.printed(sky)),
            };
            vec![Cell::Text(column.words.to_owned()), value, Cell::Text(column.unit.to_owned())]
        };
        let table = Table {
            caption: format!(
                "{}, {}, {}, {}",
                self.engine.plan().comet.name,
                sky.time.utc_minute(),
                answer::observer(self.engine.plan()),
                answer::place(sky)
            ),
            columns: ["Quantity", "Value", "Unit"].map(str::to_owned).to_vec(),
            rows: answer::shown(sky).map(row).collect(),
        };
        table.write(Form::named(form).unwrap_or(Form::Plain))
    }

    /// Words as they read in a form of table, unable to be markup there.
    pub fn safe_words(&self, form: &str, words: &str) -> String {
        Form::named(form).unwrap_or(Form::Plain).safe(words)
    }

    /// CSV in full precision, with the columns of `tailvane sky`: the time shown where `step_days` is 0, else times
    /// from `from_days` to `to_days` of TDB from J2000.
    pub fn csv(&mut self, from_days: f64, to_days: f64, step_days: f64) -> Result<String, JsValue> {
        let times: Vec<Instant> = if step_days > 0.0 {
            let steps = ((to_days - from_days) / step_days + 1e-9).floor();
            if !(0.0..MOST_ROWS).contains(&steps) {
                let place = Place::Field("the table".to_owned());
                let found = format!("{} rows", steps + 1.0);
                return Err(refusal(Error::new(Kind::Range, place, found, format!("1 to {MOST_ROWS} rows"))));
            }
            let at = |row: i64| Stamp::utc_seconds(Instant::from_tdb_days(from_days + row as f64 * step_days));
            let stamps: Result<Vec<Stamp>, Error> = (0..=steps as i64).map(at).collect();
            stamps.map_err(refusal)?.iter().map(Stamp::instant).collect()
        } else {
            vec![self.seen.sky.time]
        };
        let columns: Vec<&Column> =
            COLUMNS.iter().filter(|column| !column.site_only || self.engine.has_site()).collect();
        let mut rows = Vec::new();
        for time in times {
            let View { sky, cautions } = self.engine.view_at(time).map_err(refusal)?;
            let mut row = vec![Cell::Text(time.utc_iso_ms())];
            row.extend(columns.iter().map(|column| match (column.value)(&sky) {
                Value::Number(number) if number.is_finite() => Cell::Number(number.to_string()),
                Value::Text(text) => Cell::Text(text.to_owned()),
                _ => Cell::Number(String::new()),
            }));
            let words: Vec<String> = cautions.iter().map(|caution| caution.sentence()).collect();
            row.push(Cell::Text(words.join(" ")));
            rows.push(row);
        }
        let keys = ["time"].into_iter().chain(columns.iter().map(|column| column.key)).chain(["caution"]);
        let table = Table { caption: String::new(), columns: keys.map(str::to_owned).collect(), rows };
        Ok(table.write(Form::Csv))
    }

    /// Names of the comets that the plan keeps beside the one shown.
    pub fn comets(&self) -> JsValue {
        let names: Vec<&str> = self.engine.plan().comets.iter().map(|comet| comet.name.as_str()).collect();
        to_js(&names)
    }

    /// Keeps the comet shown in the plan, unless the very same is kept already.
    pub fn keep_comet(&mut self) -> Result<JsValue, JsValue> {
        let mut plan = self.plan();
        if plan.comets.contains(&plan.comet) {
            return Ok(JsValue::FALSE);
        }
        plan.comets.push(plan.comet.clone());
        self.take(plan)
    }

    /// Shows a comet that the plan keeps; it stays kept.
    pub fn show_kept(&mut self, number: usize, now_ms: f64) -> Result<JsValue, JsValue> {
        match self.engine.plan().comets.get(number).cloned() {
            Some(comet) => self.take_comet(comet, now_ms),
            None => Ok(JsValue::FALSE),
        }
    }

    /// Drops a comet that the plan keeps.
    pub fn drop_kept(&mut self, number: usize) -> Result<JsValue, JsValue> {
        let mut comets = self.engine.plan().comets.clone();
        if number < comets.len() {
            comets.remove(number);
        }
        self.take(Plan { comets, ..self.plan() })
    }
}
