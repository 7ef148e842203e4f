//! Which grains does a CSV file name?
//!
//! A header line with `beta` and `age_days`, in any order, and if wanted `radial_km_s`, `transverse_km_s`, `normal_km_s`;
//! then one line per grain. Empty lines are passed over. Every refusal says line and column.

use super::dust::{AGES_DAYS, BETAS};
use super::{Limits, Stop, in_words};
use tailvane::error::{Error, Kind, Place};
use tailvane::tail::grain::Grain;

const COLUMNS: [&str; 5] = ["beta", "age_days", "radial_km_s", "transverse_km_s", "normal_km_s"];
/// The first of them, without which there is no grain.
const NEEDED: usize = 2;

/// Faster than anything leaves a comet.
const EJECTIONS_KM_S: Limits = Limits { least: -1000.0, greatest: 1000.0 };

/// The grains of a file, or of standard input for `-`.
pub fn read(path: &str) -> Result<Vec<Grain>, Stop> {
    let text = super::read(path)?;
    let name = if path == "-" { "standard input" } else { path };
    parse(&text).map_err(|error| Stop::RefusedIn(name.to_owned(), error))
}

/// A field of a line: its text and the column of its first character, from 1.
struct Field<'a> {
    text: &'a str,
    column: usize,
}

fn parse(text: &str) -> Result<Vec<Grain>, Error> {
    let text = text.strip_prefix('\u{feff}').unwrap_or(text);
    let mut lines = (1..).zip(text.lines()).filter(|(_, line)| !line.trim().is_empty());
    let Some((number, head)) = lines.next() else {
        let allowed = "a header line such as beta,age_days and one line per grain";
        return Err(Error::new(Kind::Range, Place::Line { line: 1, column: 1 }, "nothing", allowed));
    };
    let names = fields(head);
    let columns = columns(&names, number)?;
    lines.map(|(number, line)| grain(&fields(line), &columns, number)).collect()
}

/// Which of [`COLUMNS`] each field of the header names.
fn columns(names: &[Field], line: usize) -> Result<Vec<usize>, Error> {
    let refuse = |column: usize, found: String, allowed: String| {
        Err(Error::new(Kind::Range, Place::Line { line, column }, found, allowed))
    };
    let mut columns = Vec::new();
    for name in names {
        let Some(index) = COLUMNS.iter().position(|known| *known == name.text) else {
            let known = in_words(&COLUMNS, "and");
            return refuse(name.column, format!("a column named '{}'", name.text), format!("only {known}"));
        };
        if columns.contains(&index) {
            return refuse(name.column, format!("'{}' a second time", name.text), "each column once".to_owned());
        }
        columns.push(index);
    }
    match COLUMNS[..NEEDED].iter().enumerate().find(|(index, _)| !columns.contains(index)) {
        Some((_, missing)) => refuse(
            1,
            format!("no column {missing}"),
            format!("a header line with {}", in_words(&COLUMNS[..NEEDED], "and")),
        ),
        None => Ok(columns),
    }
}

fn grain(fields: &[Field], columns: &[usize], line: usize) -> Result<Grain, Error> {
    if fields.len() != columns.len() {
        let (found, wanted) = (fields.len(), columns.len());
        // The first field too many, or the last that is there.
        let column = fields.get(wanted).or(fields.last()).map_or(1, |field| field.column);
        let found = format!("{found} fields");
        let allowed = format!("{wanted} fields, as the header has");
        return Err(Error::new(Kind::Range, Place::Line { line, column }, found, allowed));
    }
    let mut grain = Grain::released(0.0, 0.0);
    for (field, &index) in fields.iter().zip(columns) {
        let (limits, value) = match index {
            0 => (&BETAS, &mut grain.beta),
            1 => (&AGES_DAYS, &mut grain.age_days),
            ejection => (&EJECTIONS_KM_S, &mut grain.ejection_km_s[ejection - NEEDED]),
        };
        *value = limits.read(field.text).map_err(|mut error| {
            error.found = format!("{} {}", COLUMNS[index], error.found);
            error.at(Place::Line { line, column: field.column })
        })?;
    }
    Ok(grain)
}

/// The fields of a line, blanks and quotes around them taken off.
fn fields(line: &str) -> Vec<Field<'_>> {
    let mut column = 1;
    line.split(',')
        .map(|part| {
            let start = column;
            column += part.chars().count() + 1;
            let text = part.trim().trim_matches('"').trim();
            let before = part.find(|c: char| !c.is_whitespace() && c != '"').map_or(0, |at| part[..at].chars().count());
            Field { text, column: start + before }
        })
        .collect()
}
