//! Which columns has the board, in which words, and how do they sort?
//!
//! One list serves the page's table and the saved files.

use super::{Entry, Sunward};
use crate::sky::Side;
use crate::sky::column::whole_turn_deg;
use crate::tail::perspective::{Grade, Verdict};
use crate::time::Instant;
use std::cmp::Ordering;

/// A comet of the board with what is known of it.
#[derive(Clone, Debug, PartialEq)]
pub struct Line {
    pub name: String,
    pub entry: Entry,
    /// None until it has been looked at.
    pub sunward: Option<Sunward>,
}

/// What stands in a field.
#[derive(Clone, Debug, PartialEq)]
pub enum Datum {
    Number(f64),
    Time(Instant),
    Text(String),
    /// A text with a number by which it sorts.
    Ranked(&'static str, f64),
    Absent,
}

/// How a person reads a field.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Shown {
    Decimals(usize),
    /// Hour and minute.
    Clock,
    /// Day and hour.
    Date,
}

/// One column.
pub struct Column {
    /// Fixed machine name with its unit suffix.
    pub key: &'static str,
    /// The name in words, short, for the head of a narrow column.
    pub words: &'static str,
    /// Unit as printed for people; empty for none.
    pub unit: &'static str,
    pub shown: Shown,
    pub value: fn(&Line) -> Datum,
}

fn number(value: Option<f64>) -> Datum {
    value.map_or(Datum::Absent, Datum::Number)
}

fn position_angle(angle_rad: Option<f64>) -> Datum {
    number(angle_rad.map(whole_turn_deg))
}

const fn column(
    key: &'static str,
    words: &'static str,
    unit: &'static str,
    shown: Shown,
    value: fn(&Line) -> Datum,
) -> Column {
    Column { key, words, unit, shown, value }
}

/// The columns in their order; angles and distances are those of local mean midnight.
pub const COLUMNS: &[Column] = &[
    column("name", "Comet", "", Shown::Decimals(0), |line| Datum::Text(line.name.clone())),
    column("total_magnitude", "Predicted total magnitude", "mag", Shown::Decimals(1), |line| {
        number(line.entry.total_magnitude)
    }),
    column("dark_time_begins", "Up from", "", Shown::Clock, |line| {
        line.entry.up.map_or(Datum::Absent, |up| Datum::Time(up.begin))
    }),
    column("dark_time_ends", "Up until", "", Shown::Clock, |line| {
        line.entry.up.map_or(Datum::Absent, |up| Datum::Time(up.end))
    }),
    column("dark_time_hours", "Dark time", "h", Shown::Decimals(1), |line| {
        Datum::Number(line.entry.up.map_or(0.0, |up| up.days * 24.0))
    }),
    column("highest_altitude_deg", "Highest", "deg", Shown::Decimals(0), |line| {
        number(line.entry.up.map(|up| up.highest_rad.to_degrees()))
    }),
    column("elongation_deg", "Elongation", "deg", Shown::Decimals(0), |line| {
        Datum::Number(line.entry.sky.elongation_rad.to_degrees())
    }),
    column("elongation_side", "Side", "", Shown::Decimals(0), |line| match line.entry.sky.elongation_side {
        Some(Side::Evening) => Datum::Ranked("evening", 0.0),
        Some(Side::Morning) => Datum::Ranked("morning", 1.0),
        None => Datum::Absent,
    }),
    column("moon_separation_deg", "From the Moon", "deg", Shown::Decimals(0), |line| {
        number(line.entry.sky.site.as_ref().map(|site| site.moon_separation_rad.to_degrees()))
    }),
    column("sun_distance_au", "From the Sun", "au", Shown::Decimals(2), |line| {
        Datum::Number(line.entry.sky.sun_distance_au)
    }),
    column("observer_distance_au", "From the observer", "au", Shown::Decimals(2), |line| {
        Datum::Number(line.entry.sky.observer_distance_au)
    }),
    column("observer_from_orbit_plane_deg", "Observer from orbit plane", "deg", Shown::Decimals(1), |line| {
        Datum::Number(line.entry.sky.observer_from_orbit_plane_rad.to_degrees())
    }),
    column("next_crossing_time", "Next crossing", "", Shown::Date, |line| {
        line.entry.next_crossing.map_or(Datum::Absent, |crossing| Datum::Time(crossing.time))
    }),
    column("old_dust_at_crossing", "Old dust then", "", Shown::Decimals(0), |line| {
        match line.entry.next_crossing.and_then(|crossing| crossing.opposite) {
            Some(true) => Datum::Ranked("sunward", 1.0),
            Some(false) => Datum::Ranked("antisolar", 0.0),
            None => Datum::Absent,
        }
    }),
    column("antisolar_position_angle_deg", "Position angle, antisolar", "deg", Shown::Decimals(0), |line| {
        position_angle(line.entry.sky.antisolar_position_angle_rad)
    }),
    column(
        "negative_velocity_position_angle_deg",
        "Position angle, negative velocity",
        "deg",
        Shown::Decimals(0),
        |line| position_angle(line.entry.sky.negative_velocity_position_angle_rad),
    ),
    column("sunward_dust", "Sunward dust", "", Shown::Decimals(0), |line| {
        line.sunward.map_or(Datum::Absent, |sunward| {
            let (words, rank) = strength(sunward.verdict);
            Datum::Ranked(words, rank + sunward.share)
        })
    }),
    column("sunward_share_percent", "Share of the light", "%", Shown::Decimals(1), |line| {
        number(line.sunward.map(|sunward| sunward.share * 100.0))
    }),
];

/// A verdict in words, and its rank among the others.
fn strength(verdict: Verdict) -> (&'static str, f64) {
    match verdict {
        Verdict::NoSunwardSide => ("no sunward side", -2.0),
        Verdict::NoDust => ("no dust", -4.0),
        Verdict::None | Verdict::NeedsEjection(Grade::None) | Verdict::Perspective(Grade::None) => ("none", 0.0),
        Verdict::NeedsEjection(Grade::Faint) => ("faint, needs ejection", 2.0),
        Verdict::NeedsEjection(Grade::Possible) => ("possible, needs ejection", 4.0),
        Verdict::NeedsEjection(Grade::Strong) => ("strong, needs ejection", 6.0),
        Verdict::Perspective(Grade::Faint) => ("faint, by perspective", 8.0),
        Verdict::Perspective(Grade::Possible) => ("possible, by perspective", 10.0),
        Verdict::Perspective(Grade::Strong) => ("strong, by perspective", 12.0),
    }
}

impl Column {
    /// The field as a person reads it, without its unit; empty where there is nothing.
    pub fn printed(&self, line: &Line) -> String {
        match ((self.value)(line), self.shown) {
            (Datum::Number(number), Shown::Decimals(decimals)) => {
                let text = format!("{number:.decimals$}");
                // A direction never reads 360, and a value that rounds to zero has no sign.
                match text.as_str() {
                    "360" if self.key.ends_with("position_angle_deg") => "0".to_owned(),
                    "-0" | "-0.0" | "-0.00" => text[1..].to_owned(),
                    _ => text,
                }
            }
            (Datum::Number(number), _) => number.to_string(),
            (Datum::Time(time), Shown::Clock) => time.utc_minute().get(11..16).unwrap_or_default().to_owned(),
            (Datum::Time(time), _) => time.utc_minute().get(..13).map_or(String::new(), |hour| format!("{hour} h")),
            (Datum::Text(text), _) => text,
            (Datum::Ranked(text, _), _) => text.to_owned(),
            (Datum::Absent, _) => String::new(),
        }
    }

    /// The field with every digit; times as ISO UTC with milliseconds.
    pub fn full(&self, line: &Line) -> String {
        match (self.value)(line) {
            Datum::Number(number) if number.is_finite() => number.to_string(),
            Datum::Time(time) => time.utc_iso_ms(),
            Datum::Text(text) => text,
            Datum::Ranked(text, _) => text.to_owned(),
            Datum::Number(_) | Datum::Absent => String::new(),
        }
    }

    /// The order of two lines by this column; what is absent comes last either way.
    pub fn order(&self, a: &Line, b: &Line, descending: bool) -> Ordering {
        let turned = |order: Ordering| if descending { order.reverse() } else { order };
        let rank = |datum: &Datum| match datum {
            Datum::Number(number) | Datum::Ranked(_, number) => Some(*number),
            Datum::Time(time) => Some(time.tdb_days()),
            Datum::Text(_) | Datum::Absent => None,
        };
        match ((self.value)(a), (self.value)(b)) {
            (Datum::Absent, Datum::Absent) => Ordering::Equal,
            (Datum::Absent, _) => Ordering::Greater,
            (_, Datum::Absent) => Ordering::Less,
            (Datum::Text(a), Datum::Text(b)) => turned(a.chars().map(small).cmp(b.chars().map(small))),
            (a, b) => turned(rank(&a).unwrap_or(0.0).total_cmp(&rank(&b).unwrap_or(0.0))),
        }
    }
}

/// The small letter of a Latin, Greek or Cyrillic capital. The standard library knows every script by a table of 11 kB, which the
/// page would carry for the order of names alone.
fn small(letter: char) -> char {
    let away = match letter {
        '\u{d7}' | '\u{3a2}' => 0,
        'A'..='Z' | '\u{c0}'..='\u{de}' | '\u{391}'..='\u{3ab}' | '\u{410}'..='\u{42f}' => 32,
        '\u{400}'..='\u{40f}' => 80,
        '\u{100}'..='\u{12f}' | '\u{132}'..='\u{137}' | '\u{14a}'..='\u{177}' => 1 - u32::from(letter) % 2,
        '\u{139}'..='\u{148}' | '\u{179}'..='\u{17e}' => u32::from(letter) % 2,
        _ => 0,
    };
    char::from_u32(u32::from(letter) + away).unwrap_or(letter)
}

#[cfg(test)]
mod tests {
    #[test]
    fn letters_are_made_small_as_the_standard_library_does() {
        let letters = ('\0'..='\u{17e}').chain('\u{391}'..='\u{3ff}').chain('\u{400}'..='\u{45f}');
        // What has no small letter of its own in these scripts, and what grows to two characters.
        for letter in letters.filter(|letter| {
            !"\u{130}\u{178}\u{3cf}\u{3f4}\u{3f7}\u{3f9}\u{3fa}\u{3fd}\u{3fe}\u{3ff}".contains(*letter)
        }) {
            let theirs: Vec<char> = letter.to_lowercase().collect();
            if !('\u{3d8}'..='\u{3ef}').contains(&letter) {
                assert_eq!(vec![super::small(letter)], theirs, "{letter:?}");
            }
        }
    }
}
