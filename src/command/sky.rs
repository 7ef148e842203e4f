//! `tailvane sky`: what does the observer see, one row per time?

use super::table::{self, Cell, Row};
use super::{Call, Stop};
use tailvane::engine::{Engine, View};
use tailvane::sky::column::{COLUMNS, Column};

pub fn run(arguments: lexopt::Parser) -> Result<(), Stop> {
    let call = Call::read("sky", arguments, |_, _| Ok(false))?;
    let plan = call.read_plan()?;
    let times = call.times(&plan)?;
    let mut engine = Engine::new(plan)?;
    let columns: Vec<&Column> = COLUMNS.iter().filter(|column| !column.site_only || engine.has_site()).collect();
    // Every time is checked before the first row is written.
    for &time in &times {
        engine.check_span(time)?;
    }
    let keys: Vec<&str> = ["time"].into_iter().chain(columns.iter().map(|column| column.key)).collect();
    let rows = times.into_iter().map(|time| {
        let View { sky, cautions } = engine.view_at(time)?;
        let first = Cell::Text(time.utc_iso_ms());
        let cells = std::iter::once(first).chain(columns.iter().map(|column| (column.value)(&sky).into())).collect();
        Ok(Row { cells, cautions: cautions.iter().map(|caution| caution.sentence()).collect() })
    });
    table::write(call.json, &keys, rows)
}
