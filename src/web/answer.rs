//! What does the page show, as plain objects?

use crate::body::observer::Observer;
use crate::body::site_code;
use crate::caution::Weight;
use crate::engine::{Engine, TailView, View};
use crate::error::{Error, Place};
use crate::orbit::notation::Entry;
use crate::plan::Plan;
use crate::scene::quantity;
use crate::sky::Sky;
use crate::sky::column::{COLUMNS, Column, Value};
use crate::time::Stamp;
use crate::web::typed::{ElementFields, SiteFields};
use serde::Serialize;

/// A refused input as the page gets it.
#[derive(Serialize)]
pub struct Refusal {
    /// Tells a refusal from a failure of the page itself.
    refused: bool,
    message: String,
    line: Option<usize>,
    column: Option<usize>,
    field: Option<String>,
}

impl Refusal {
    pub fn of(error: &Error) -> Self {
        let (line, column) = match error.place {
            Place::Line { line, column } => (Some(line), Some(column)),
            _ => (None, None),
        };
        let field = match &error.place {
            Place::Field(path) => Some(path.clone()),
            _ => None,
        };
        Refusal { refused: true, message: error.to_string(), line, column, field }
    }
}

/// What a text held.
#[derive(Serialize)]
pub struct Read {
    pub count: usize,
    pub first: String,
    pub errors: Vec<Refusal>,
    /// Errors beyond those listed.
    pub left_out: usize,
    pub notices: Vec<String>,
}

#[derive(Serialize)]
struct Hit {
    number: usize,
    name: String,
}

/// Comets that were looked for by name.
#[derive(Serialize)]
pub struct Found {
    total: usize,
    list: Vec<Hit>,
}

/// The comets whose name holds the words, capitals aside, at most `most` of them.
pub fn found(entries: &[Entry], words: &str, most: usize) -> Found {
    let words = words.trim().to_ascii_lowercase();
    let hits =
        || entries.iter().enumerate().filter(|(_, entry)| entry.comet.name.to_ascii_lowercase().contains(&words));
    let list = hits().take(most).map(|(number, entry)| Hit { number, name: entry.comet.name.clone() }).collect();
    Found { total: hits().count(), list }
}

/// An observatory that was looked for.
#[derive(Serialize)]
pub struct SiteHit {
    code: String,
    words: String,
}

/// Observatories shown at most for one search.
const MOST_SITES: usize = 30;

/// The observatory of this very code first, then those whose name holds the words.
pub fn sites(table: &str, words: &str) -> Vec<SiteHit> {
    let code = words.trim().to_ascii_uppercase();
    let exact = site_code::find(table, &code).map(|site| (code, site.name));
    let named = site_code::search(table, words, MOST_SITES).into_iter().map(|coded| (coded.code, coded.site.name));
    exact.into_iter().chain(named).map(|(code, name)| SiteHit { words: format!("{code}  {name}"), code }).collect()
}

#[derive(Serialize)]
struct Row {
    key: &'static str,
    words: &'static str,
    meaning: &'static str,
    printed: String,
    value: String,
}

#[derive(Serialize)]
struct Mind {
    weight: &'static str,
    words: String,
}

/// Everything the page shows of one sky beside the drawings.
#[derive(Serialize)]
pub struct Reading {
    tdb_days: f64,
    time_iso: String,
    time_words: String,
    time_decimal: String,
    comet: String,
    observer: String,
    at_site: bool,
    site: Option<SiteFields>,
    elements: ElementFields,
    /// Right ascension and declination as observers write them.
    place: String,
    rows: Vec<Row>,
    headline: String,
    sentence: String,
    visibility: String,
    cautions: Vec<Mind>,
}

/// The reading of a view; `visibility` says when the comet is up.
pub fn reading(engine: &Engine, time: &Stamp, view: &View, tails: &TailView, visibility: String) -> Reading {
    let sky = &view.sky;
    let plan = engine.plan();
    let saying = engine.saying(sky, tails);
    let site = match &plan.observer {
        Observer::Geocentre => None,
        Observer::Site(site) => Some(SiteFields::of(site)),
    };
    Reading {
        tdb_days: sky.time.tdb_days(),
        time_iso: iso(time),
        time_words: sky.time.utc_minute(),
        time_decimal: sky.time.ut_decimal_day(2),
        comet: plan.comet.name.clone(),
        observer: observer(plan),
        at_site: site.is_some(),
        site,
        elements: ElementFields::of(&plan.comet),
        place: place(sky),
        rows: shown(sky).map(|column| row(column, sky)).collect(),
        headline: saying.headline,
        sentence: saying.sentence,
        visibility,
        cautions: view
            .cautions
            .iter()
            .map(|caution| Mind { weight: weight(caution.weight()), words: caution.sentence() })
            .collect(),
    }
}

/// From where the comet is seen, in a few words.
pub fn observer(plan: &Plan) -> String {
    match &plan.observer {
        Observer::Geocentre => "seen from the centre of the Earth".to_owned(),
        Observer::Site(site) => SiteFields::of(site).words(),
    }
}

pub fn place(sky: &Sky) -> String {
    quantity::place(sky.right_ascension_rad, sky.declination_rad) + " (J2000)"
}

/// ISO UTC without fractions where there are none.
fn iso(time: &Stamp) -> String {
    time.instant().utc_iso_ms().replace(".000Z", "Z")
}

fn weight(weight: Weight) -> &'static str {
    match weight {
        Weight::Notice => "notice",
        Weight::Doubt => "doubt",
        Weight::Danger => "danger",
    }
}

/// The columns that this sky has.
pub fn shown(sky: &Sky) -> impl Iterator<Item = &'static Column> {
    let at_site = sky.site.is_some();
    COLUMNS.iter().filter(move |column| at_site || !column.site_only)
}

fn row(column: &'static Column, sky: &Sky) -> Row {
    Row {
        key: column.key,
        words: column.words,
        meaning: column.meaning,
        printed: with_unit(column, sky),
        value: full(column, sky),
    }
}

/// The value with its unit, as people read it.
fn with_unit(column: &Column, sky: &Sky) -> String {
    let printed = column.printed(sky);
    match (printed.is_empty(), column.unit) {
        (true, _) => "does not exist".to_owned(),
        (false, "") => printed,
        (false, "deg") => minus(&printed) + "\u{b0}",
        (false, unit) => minus(&printed) + "\u{a0}" + unit,
    }
}

/// A typographic minus sign, as wide as the digits.
fn minus(number: &str) -> String {
    number.replace('-', "\u{2212}")
}

/// The value with every digit it takes to read the same number back; empty where it does not exist.
fn full(column: &Column, sky: &Sky) -> String {
    match (column.value)(sky) {
        Value::Number(number) => number.to_string(),
        Value::Text(text) => text.to_owned(),
        Value::Absent => String::new(),
    }
}

/// The read-out table as tabulated text: quantity, value, unit.
pub fn table_text(engine: &Engine, time: &Stamp, sky: &Sky) -> String {
    let mut text = format!("{}\t{}\t{}\n", engine.plan().comet.name, iso(time), place(sky));
    for column in shown(sky) {
        text.push_str(&format!("{}\t{}\t{}\n", column.words, column.printed(sky), column.unit));
    }
    text
}
