//! `tailvane night`: what does one night hold, a row to each step of the clock and to each event?

use super::table::{self, Cell, Row};
use super::{Call, Stop, text};
use tailvane::engine::Engine;
use tailvane::night::evening::read_date;
use tailvane::night::table::COLUMNS;
use tailvane::time::Instant;

/// Ten minutes from one row to the next, days.
const STEP_DAYS: f64 = 10.0 / 1440.0;
/// No finer than a second.
const LEAST_STEP_DAYS: f64 = 1.0 / 86_400.0;

pub fn run(arguments: lexopt::Parser) -> Result<(), Stop> {
    let mut date = None;
    let call = Call::read("night", arguments, |name, arguments| {
        if name == "date" {
            date = Some(text(arguments)?);
        }
        Ok(name == "date")
    })?;
    if !call.at.is_empty() || call.from.is_some() || call.to.is_some() {
        return Err(Stop::Usage("night takes --date, the day on whose evening the night begins".to_owned()));
    }
    let step_days = call.step_days.unwrap_or(STEP_DAYS);
    if step_days < 0.999 * LEAST_STEP_DAYS {
        return Err(Stop::Usage("--step: a night takes steps of a second or more".to_owned()));
    }
    let plan = call.read_plan()?;
    let date = date.map(|date| read_date(&date)).transpose()?;
    let time = match (&date, &plan.time) {
        (Some(_), _) => Instant::from_tdb_days(0.0),
        (None, Some(time)) => time.instant(),
        (None, None) => return Err(Stop::Usage("the plan has no time: give --date, such as 2031-03-20".to_owned())),
    };
    let mut engine = Engine::new(plan)?;
    let evening = engine.evening(date, time)?;
    let course = engine.course(&evening)?;
    let rows = engine.night_rows(&course, step_days)?;
    let keys: Vec<&str> = ["time"].into_iter().chain(COLUMNS.iter().map(|column| column.key)).collect();
    table::write(
        call.json,
        &keys,
        rows.into_iter().map(|row| {
            let first = Cell::Text(row.moment.sky.time.utc_iso_ms());
            let cells =
                std::iter::once(first).chain(COLUMNS.iter().map(|column| (column.value)(&row).into())).collect();
            Ok(Row { cells, cautions: row.cautions })
        }),
    )
}
