//! How do the events of a season read in a table, and in a calendar?
//!
//! One set of functions for the page and the command line, so that both give the same bytes. Times are UTC (before 1972: UT):
//! with milliseconds for machines, to the minute for people. The calendar is iCalendar (RFC 5545).

use super::table::{Cell, Form, Table};
use crate::season::event::{Event, Told};
use crate::time::Instant;

/// The fixed columns of the command line; `caution` is the last.
pub const COLUMNS: [&str; 6] = ["time", "event", "value", "unit", "note", "caution"];

/// Octets of a line of a calendar, its end not counted.
const FOLD_OCTETS: usize = 75;

/// Value in honest digits with its unit, as `124.1 deg`; empty where there is none.
pub fn value_words(event: &Event) -> String {
    let Some(value) = event.value else { return String::new() };
    let decimals = match event.unit {
        "au" => 4,
        "percent" | "arcsec/min" => 2,
        _ => 1,
    };
    format!("{value:.decimals$} {}", event.unit)
}

/// An uncertainty in whole minutes, hours or days, never too small: `9 min`.
pub fn spread_words(days: f64) -> String {
    let minutes = (days * 1440.0 - 1e-6).ceil().max(1.0);
    match minutes {
        m if m < 100.0 => format!("{m:.0} min"),
        m if m < 2880.0 => format!("{:.0} h", (m / 60.0).ceil()),
        m => format!("{:.0} d", (m / 1440.0).ceil()),
    }
}

/// The note of an event with its uncertainty, as the tables print it.
pub fn note(event: &Event) -> String {
    let spread = format!("uncertain by {}", spread_words(event.uncertainty_days));
    if event.note.is_empty() { spread } else { format!("{}; {spread}", event.note) }
}

fn cautions(told: &Told) -> String {
    let sentences: Vec<String> = told.cautions.iter().map(|caution| caution.sentence()).collect();
    sentences.join(" ")
}

/// The table for machines: CSV with the columns [`COLUMNS`], lines ended as those of the other commands.
pub fn csv(told: &[Told]) -> String {
    let text = |words: &str| Cell::Text(words.to_owned());
    let rows = told
        .iter()
        .map(|told| {
            let event = &told.event;
            vec![
                Cell::Text(event.time.utc_iso_ms()),
                text(event.kind.words()),
                Cell::Number(event.value.map_or(String::new(), |value| value.to_string())),
                text(event.unit),
                Cell::Text(note(event)),
                Cell::Text(cautions(told)),
            ]
        })
        .collect();
    let columns = COLUMNS.map(str::to_owned).to_vec();
    Table { caption: String::new(), columns, rows }.write(Form::Csv).replace("\r\n", "\n")
}

/// The table for people, in a form for a mail or a wiki; `comet` names it.
pub fn table(comet: &str, told: &[Told], form: Form) -> String {
    let rows = told
        .iter()
        .map(|told| {
            let event = &told.event;
            let cells = [
                event.time.utc_minute(),
                spread_words(event.uncertainty_days),
                event.kind.words().to_owned(),
                value_words(event),
                event.note.clone(),
            ];
            cells.map(Cell::Text).to_vec()
        })
        .collect();
    let columns = ["Time", "Uncertain by", "Event", "Value", "Note"].map(str::to_owned).to_vec();
    Table { caption: format!("Season of {comet}, seen from the Earth's centre"), columns, rows }.write(form)
}

/// The events as a calendar file. Each has its own minute, an identifier that stays the same for the same comet, event and
/// minute, and its own time as the stamp: the same plan gives the same bytes.
pub fn calendar(comet: &str, told: &[Told]) -> String {
    let mut out = String::new();
    let mut line = |name: &str, value: &str| fold(&format!("{name}:{value}"), &mut out);
    line("BEGIN", "VCALENDAR");
    line("VERSION", "2.0");
    line("PRODID", "-//Tailvane//Season//EN");
    line("CALSCALE", "GREGORIAN");
    for told in told {
        let event = &told.event;
        let Some(minute) = minute(event.time) else { continue };
        let words = event.kind.words();
        let mut sentences = vec![value_words(event), note(event), cautions(told)];
        sentences.retain(|sentence| !sentence.is_empty());
        line("BEGIN", "VEVENT");
        line("UID", &format!("{:016x}@tailvane.invalid", hash(&[comet, words, &minute])));
        line("DTSTAMP", &minute);
        line("DTSTART", &minute);
        line("SUMMARY", &escaped(&format!("{comet}: {words}")));
        line("DESCRIPTION", &escaped(&sentences.join("\n")));
        line("TRANSP", "TRANSPARENT");
        line("END", "VEVENT");
    }
    line("END", "VCALENDAR");
    out
}

/// `20310320T053000Z`, rounded to the minute; None outside the calendar.
fn minute(time: Instant) -> Option<String> {
    let text = time.utc_minute();
    let (date, clock) = text.strip_suffix(" UTC")?.split_once(' ')?;
    // RFC 5545 has four digits of year.
    (date.len() == 10).then(|| format!("{}T{}00Z", date.replace('-', ""), clock.replace(':', "")))
}

/// A text value: backslash, comma, semicolon and line end escaped, other control characters as blanks.
fn escaped(text: &str) -> String {
    let mut out = String::new();
    for letter in text.chars() {
        match letter {
            '\n' => out.push_str("\\n"),
            '\\' | ',' | ';' => out.extend(['\\', letter]),
            control if control.is_control() => out.push(' '),
            other => out.push(other),
        }
    }
    out
}

/// Adds a content line, folded at 75 octets between characters.
fn fold(line: &str, out: &mut String) {
    let mut room = FOLD_OCTETS;
    for letter in line.chars() {
        if letter.len_utf8() > room {
            out.push_str("\r\n ");
            room = FOLD_OCTETS - 1;
        }
        out.push(letter);
        room -= letter.len_utf8();
    }
    out.push_str("\r\n");
}

/// FNV-1a, 64 bits, of texts with a zero after each: an identifier, not a secret.
fn hash(texts: &[&str]) -> u64 {
    let bytes = texts.iter().flat_map(|text| text.bytes().chain([0]));
    bytes.fold(0xcbf2_9ce4_8422_2325, |hash, byte| (hash ^ u64::from(byte)).wrapping_mul(0x0100_0000_01b3))
}
