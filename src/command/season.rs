//! `tailvane season`: what happens when, between two dates?

use super::table::{self, Cell, Row};
use super::{Call, Stop, in_words, text};
use std::io::{self, Write};
use tailvane::engine::Engine;
use tailvane::error::{Error, Place};
use tailvane::say;
use tailvane::say::table::Form;
use tailvane::season::event::Told;
use tailvane::season::stretch::Stretch;

/// The forms for people.
const FORMS: [&str; 3] = ["plain", "markdown", "wiki"];

pub fn run(arguments: lexopt::Parser) -> Result<(), Stop> {
    let (mut calendar, mut form) = (false, None);
    let call = Call::read("season", arguments, |name, arguments| {
        match name {
            "calendar" => calendar = true,
            "table" => form = Some(form_named(&text(arguments)?)?),
            _ => return Ok(false),
        }
        Ok(true)
    })?;
    if usize::from(calendar) + usize::from(form.is_some()) + usize::from(call.json) > 1 {
        return Err(Stop::Usage("give one of --json, --calendar and --table".to_owned()));
    }
    if !call.at.is_empty() || call.step_days.is_some() {
        return Err(Stop::Usage("season takes --from and --to only; it finds its times itself".to_owned()));
    }
    let plan = call.read_plan()?;
    let stretch = match (&call.from, &call.to, &plan.season) {
        (Some(from), Some(to), _) => Stretch::new(from.instant(), to.instant()).map_err(as_option)?,
        (None, None, Some(season)) => season.stretch()?,
        _ => return Err(Stop::Usage("season takes --from and --to, or a plan with a season and neither".to_owned())),
    };
    let mut engine = Engine::new(plan)?;
    let mut search = engine.season_search(stretch);
    while search.advance(stretch.days()) < 1.0 {}
    let told = engine.season_told(&search.season())?;
    if call.json {
        let keys = &say::season::COLUMNS[..say::season::COLUMNS.len() - 1];
        return table::write(true, keys, told.iter().map(|told| Ok(row(told))));
    }
    let comet = &engine.plan().comet.name;
    let answer = match form {
        _ if calendar => say::season::calendar(comet, &told),
        Some(form) => say::season::table(comet, &told, form),
        None => say::season::csv(&told),
    };
    let mut out = io::stdout().lock();
    out.write_all(answer.as_bytes())?;
    Ok(out.flush()?)
}

fn row(told: &Told) -> Row {
    let event = &told.event;
    Row {
        cells: vec![
            Cell::Text(event.time.utc_iso_ms()),
            Cell::Text(event.kind.words().to_owned()),
            event.value.into(),
            Cell::Text(event.unit.to_owned()),
            Cell::Text(say::season::note(event)),
        ],
        cautions: told.cautions.iter().map(|caution| caution.sentence()).collect(),
    }
}

fn form_named(typed: &str) -> Result<Form, Stop> {
    let known = FORMS.contains(&typed).then(|| Form::named(typed)).flatten();
    known.ok_or_else(|| Stop::Usage(format!("--table: found '{typed}'; expected {}", in_words(&FORMS, "or"))))
}

/// A refused end of the season by the option that gave it.
fn as_option(error: Error) -> Error {
    let option = if error.place == Place::Field("season.from".to_owned()) { "--from" } else { "--to" };
    error.at(Place::Field(option.to_owned()))
}
