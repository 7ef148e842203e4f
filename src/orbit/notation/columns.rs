//! What does a line of the clearing house's one-line form for comets say?
//!
//! Columns from 1, angles in degrees, ecliptic and equinox J2000, dates TT:
//!
//! | columns | what | decimal point in column |
//! | --- | --- | --- |
//! | 1-4, 5, 6-12 | periodic number, orbit type, packed designation (a fragment in 11-12) | |
//! | 15-18, 20-21, 23-29 | year, month, day of perihelion | 25 |
//! | 31-39, 42-49 | perihelion distance (au), eccentricity | 33, 43 |
//! | 52-59, 62-69, 72-79 | argument of perihelion, node, inclination | 55, 65, 75 |
//! | 82-85, 86-87, 88-89 | year, month, day of the epoch (0h TT), or blank | |
//! | 92-95, 97-100 | absolute magnitude, slope n in 2.5 n log r, or blank | 94, 99 (or two decimals that fill the field) |
//! | 103-158, 160-168 | designation and name, reference | |
//!
//! Numbers may have fewer digits, with blanks in their place, but every decimal point stands in its column and every
//! column between fields is blank: so a line shifted anywhere before the name is refused, never read wrongly.
//! The reference is not kept.

use super::{designation, label, quote, refusal};
use crate::decimal;
use crate::error::Error;
use crate::orbit::elements::{Brightness, Comet, Elements};
use crate::time::{Scale, Stamp};

/// Perihelion dates before this are usually printed in the Julian calendar.
const FIRST_GREGORIAN_DAYS: f64 = -152_384.5;

/// Whether `line` is meant as this form: at least five numbers, three with a point, in the first 81 columns, and not the
/// labels of another notation. Rows that begin with a date (an ephemeris) are not.
pub(super) fn looks_like(line: &str) -> bool {
    if line.len() < 50 {
        return false;
    }
    let head = line.char_indices().nth(81).map_or(line, |(offset, _)| &line[..offset]);
    let (mut numbers, mut points, mut labels) = (0, 0, 0);
    for (index, word) in head.split_whitespace().enumerate() {
        let numeric = word.contains(|c: char| c.is_ascii_digit())
            && word.chars().all(|c| c.is_ascii_digit() || matches!(c, '.' | '+' | '-' | '\u{2212}' | '\u{2013}'));
        let starts_with_date = index == 0
            && numeric
            && (word.len() == 4 || word.matches('-').count() == 2)
            && line.len() - line.trim_start().len() < 10;
        let is_label = label::bare(word).is_some();
        if word.contains('=') || starts_with_date || is_label && index == 0 {
            return false;
        }
        labels += usize::from(is_label);
        numbers += usize::from(numeric);
        points += usize::from(numeric && word.contains('.'));
    }
    numbers >= 5 && points >= 3 && labels < 2
}

/// One line, as characters.
struct Record {
    number: usize,
    chars: Vec<char>,
}

/// A decimal number in fixed columns.
struct Field {
    name: &'static str,
    first: usize,
    point: usize,
    last: usize,
}

const DAY: Field = Field { name: "the day of perihelion", first: 23, point: 25, last: 29 };
const DISTANCE: Field = Field { name: "the perihelion distance q", first: 31, point: 33, last: 39 };
const ECCENTRICITY: Field = Field { name: "the eccentricity e", first: 42, point: 43, last: 49 };
const PERIHELION: Field = Field { name: "the argument of perihelion", first: 52, point: 55, last: 59 };
const NODE: Field = Field { name: "the longitude of the node", first: 62, point: 65, last: 69 };
const INCLINATION: Field = Field { name: "the inclination", first: 72, point: 75, last: 79 };
const MAGNITUDE: Field = Field { name: "the absolute magnitude", first: 92, point: 94, last: 95 };
const SLOPE: Field = Field { name: "the slope parameter", first: 97, point: 99, last: 100 };

/// The comet of a line, and what deserves a word.
///
/// # Errors
/// Whatever does not stand where the form has it, at its column.
pub(super) fn read(line: &str, number: usize) -> Result<(Comet, Vec<String>), Error> {
    let plain = |c: char| match c {
        '\u{a0}' => ' ',
        '\u{2212}' | '\u{2013}' => '-',
        c => c,
    };
    let record = Record { number, chars: line.trim_end().chars().map(plain).collect() };
    if let Some(tab) = record.chars.iter().take(102).position(|&c| c == '\t') {
        return Err(refusal(number, tab + 1, "a tab", "blanks only: the columns of the one-line form are fixed"));
    }
    record.refuse_other_forms()?;
    record.blank(13, 14)?;
    let perihelion_time = record.perihelion_time()?;
    let perihelion_distance_au = record.decimal(&DISTANCE)?;
    if perihelion_distance_au <= 0.0 {
        return Err(refusal(number, DISTANCE.first, "a perihelion distance of 0", "a perihelion distance above 0 au"));
    }
    record.blank(40, 41)?;
    let eccentricity = record.decimal(&ECCENTRICITY)?;
    record.blank(50, 51)?;
    let argument_of_perihelion_deg = record.angle(&PERIHELION, 360.0)?;
    record.blank(60, 61)?;
    let ascending_node_deg = record.angle(&NODE, 360.0)?;
    record.blank(70, 71)?;
    let inclination_deg = record.angle(&INCLINATION, 180.0)?;
    record.blank(80, 81)?;
    let epoch = record.epoch()?;
    record.blank(90, 91)?;
    let mut notices = Vec::new();
    let brightness = record.brightness(&mut notices)?;
    record.blank(101, 102)?;
    let name = record.name()?;
    if perihelion_time.instant().tdb_days() < FIRST_GREGORIAN_DAYS {
        notices.push(
            "Dates are read in the Gregorian calendar; before 1582 Oct. 15 they are usually printed in the Julian."
                .into(),
        );
    }
    let elements = Elements {
        perihelion_distance_au,
        eccentricity,
        inclination_deg,
        ascending_node_deg,
        argument_of_perihelion_deg,
        perihelion_time,
        epoch,
        nongravitational: None,
    };
    Ok((Comet { name, elements, brightness }, notices))
}

impl Record {
    /// The character in a column, blank after the end of the line.
    fn char(&self, column: usize) -> char {
        self.chars.get(column - 1).copied().unwrap_or(' ')
    }

    fn text(&self, first: usize, last: usize) -> String {
        (first..=last.min(self.chars.len())).map(|column| self.char(column)).collect()
    }

    fn refuse<T>(&self, column: usize, found: impl Into<String>, allowed: impl Into<String>) -> Result<T, Error> {
        Err(refusal(self.number, column, found, allowed))
    }

    /// # Errors
    /// Well-known records of other kinds that look alike.
    fn refuse_other_forms(&self) -> Result<(), Error> {
        let points = |columns: &[usize]| columns.iter().all(|&column| self.char(column) == '.');
        let digits = |first: usize, last: usize| (first..=last).all(|column| self.char(column).is_ascii_digit());
        let wanted = "the one-line form for comets, with T and q";
        if points(&[30, 41, 52, 63]) {
            return self.refuse(
                1,
                "a minor planet's line (mean anomaly and semimajor axis instead of T and q)",
                wanted,
            );
        }
        if digits(16, 19) && self.char(20) == ' ' && digits(21, 22) && self.char(23) == ' ' && self.char(26) == '.' {
            return self.refuse(15, "an observation (a place on the sky), not elements", wanted);
        }
        if matches!(self.char(1), '1' | '2') && self.char(2) == ' ' && digits(3, 7) && points(&[12]) {
            return self.refuse(1, "an Earth satellite's elements", wanted);
        }
        Ok(())
    }

    /// # Errors
    /// Anything in columns that are blank in this form.
    fn blank(&self, first: usize, last: usize) -> Result<(), Error> {
        match (first..=last).find(|&column| self.char(column) != ' ') {
            None => Ok(()),
            Some(column) => {
                let found = format!("`{}` in a column that is blank in the one-line form", self.char(column));
                let columns = if first == last {
                    format!("blank column {first}")
                } else {
                    format!("blank columns {first}-{last}")
                };
                self.refuse(column, found, format!("{columns}; the line seems shifted, there or before"))
            }
        }
    }

    /// A number of 0 or more with its point in the field's column, at least one digit on each side.
    fn decimal(&self, field: &Field) -> Result<f64, Error> {
        self.unsigned(field)?;
        self.number(field)
    }

    fn angle(&self, field: &Field, most: f64) -> Result<f64, Error> {
        let angle = self.decimal(field)?;
        if angle <= most {
            return Ok(angle);
        }
        self.refuse(field.first, angle.to_string(), format!("{} from 0 to {most} degrees", field.name))
    }

    fn unsigned(&self, field: &Field) -> Result<(), Error> {
        match (field.first..=field.last).find(|&column| matches!(self.char(column), '-' | '+')) {
            None => Ok(()),
            Some(column) => {
                let found = quote(self.text(field.first, field.last).trim());
                self.refuse(column, found, format!("{} without a sign", field.name))
            }
        }
    }

    /// As [`Record::decimal`], also with a sign.
    fn number(&self, field: &Field) -> Result<f64, Error> {
        let &Field { name, first, point, last } = field;
        let text = self.text(first, last);
        let wanted = format!("{name} in columns {first}-{last}, its decimal point in column {point}");
        if text.trim().is_empty() {
            let found = if self.chars.len() < first {
                format!("the end of the line in column {}", self.chars.len() + 1)
            } else {
                "blanks".into()
            };
            return self.refuse(first.min(self.chars.len() + 1), found, wanted);
        }
        if self.char(point) != '.' {
            let reach = first.saturating_sub(2)..=last + 2;
            let Some(column) =
                reach.filter(|&column| self.char(column) == '.').min_by_key(|column| column.abs_diff(point))
            else {
                return self.refuse(first, quote(&text), wanted);
            };
            let found = format!("the decimal point of {name} in column {column}");
            let steps = column.abs_diff(point);
            let side = if column > point { "right" } else { "left" };
            let plural = if steps == 1 { "" } else { "s" };
            let allowed = format!(
                "it in column {point}; the line seems shifted by {steps} column{plural} to the {side}, there or before"
            );
            return self.refuse(column, found, allowed);
        }
        let (before, after) = (self.text(first, point - 1), self.text(point + 1, last));
        let (before, after) = (before.trim_start(), after.trim_end());
        let before = before.strip_prefix(['-', '+']).unwrap_or(before);
        let all_digits = |part: &str| !part.is_empty() && part.bytes().all(|byte| byte.is_ascii_digit());
        match decimal::read(text.trim()) {
            Some(value) if all_digits(before) && all_digits(after) => Ok(value),
            _ => {
                let is_digit = |column: &usize| {
                    let c = self.char(*column);
                    !(c.is_ascii_digit() || *column == point || c == ' ')
                };
                let column = (first..=last).find(is_digit).unwrap_or(first);
                self.refuse(column, quote(text.trim()), wanted)
            }
        }
    }

    /// A whole number, right-aligned in its columns.
    fn whole(&self, name: &str, first: usize, last: usize) -> Result<u32, Error> {
        let text = self.text(first, last);
        let digits = text.trim_start();
        let full = text.chars().count() == last + 1 - first;
        if !full || digits.is_empty() || !digits.bytes().all(|byte| byte.is_ascii_digit()) {
            let column = (first..=last).find(|&column| !self.char(column).is_ascii_digit()).unwrap_or(first);
            return self.refuse(column, quote(&text), format!("{name} in columns {first}-{last}"));
        }
        Ok(digits.parse().unwrap_or(0))
    }

    fn perihelion_time(&self) -> Result<Stamp, Error> {
        let year = self.whole("the year of perihelion", 15, 18)?;
        self.blank(19, 19)?;
        let month = self.whole("the month of perihelion", 20, 21)?;
        self.blank(22, 22)?;
        self.decimal(&DAY)?;
        self.blank(30, 30)?;
        let day = self.text(DAY.first, DAY.last);
        self.stamp(year, month, day.trim(), (15, 20, 23))
    }

    fn epoch(&self) -> Result<Option<Stamp>, Error> {
        if self.text(82, 89).trim().is_empty() {
            return Ok(None);
        }
        let year = self.whole("the year of the epoch", 82, 85)?;
        let month = self.whole("the month of the epoch", 86, 87)?;
        let day = self.whole("the day of the epoch", 88, 89)?;
        self.stamp(year, month, &format!("{day}.0"), (82, 86, 88)).map(Some)
    }

    /// The date, its year, month and day standing at `columns`.
    fn stamp(&self, year: u32, month: u32, day: &str, columns: (usize, usize, usize)) -> Result<Stamp, Error> {
        Stamp::from_parts(year as i32, month, day, Scale::Tt).map_err(|error| {
            let column = if (1..=12).contains(&month) { columns.2 } else { columns.1 };
            refusal(self.number, column, error.found, error.allowed)
        })
    }

    fn brightness(&self, notices: &mut Vec<String>) -> Result<Vec<Brightness>, Error> {
        let magnitude = self.magnitude(&MAGNITUDE)?;
        self.blank(96, 96)?;
        match (magnitude, self.magnitude(&SLOPE)?) {
            (Some(absolute_magnitude), Some(photometric_index_n)) => {
                Ok(vec![Brightness::with_index(absolute_magnitude, photometric_index_n)])
            }
            (None, None) => Ok(Vec::new()),
            _ => {
                notices.push("Absolute magnitude and slope are used only together; one of them is blank.".into());
                Ok(Vec::new())
            }
        }
    }

    fn magnitude(&self, field: &Field) -> Result<Option<f64>, Error> {
        let text = self.text(field.first, field.last);
        if text.trim().is_empty() {
            return Ok(None);
        }
        // Two decimals that fill the field cannot be a shifted number of one decimal.
        let filled = !text.contains(' ') && self.char(field.point - 1) == '.';
        let field = Field { point: if filled { field.point - 1 } else { field.point }, ..*field };
        self.number(&field).map(Some)
    }

    /// The name in its columns, or else the number and designation.
    fn name(&self) -> Result<String, Error> {
        let kind = self.char(5);
        if !matches!(kind, 'C' | 'P' | 'D' | 'X' | 'I' | 'A') {
            return self.refuse(5, format!("`{kind}`"), "an orbit type in column 5: C, P, D, X, I or A");
        }
        let number = self.text(1, 4);
        let digits = number.trim().trim_start_matches('0');
        if !digits.bytes().all(|byte| byte.is_ascii_digit()) {
            return self.refuse(1, quote(&number), "a periodic comet's number in columns 1-4, or blanks");
        }
        let name = self.text(103, 158);
        // Trailing text may have moved close; names have no double blanks.
        let shown = name.trim_start();
        let shown = shown.split("  ").next().unwrap_or("").trim();
        if !shown.is_empty() {
            if name.starts_with(' ') {
                let column = 103 + name.chars().take_while(|&c| c == ' ').count();
                return self.refuse(
                    column,
                    quote(shown),
                    "the name from column 103 on; the line seems shifted, there or before",
                );
            }
            return Ok(shown.to_string());
        }
        let packed = self.text(6, 12);
        let packed = packed.trim();
        let is_fragment = packed.len() <= 2 && packed.bytes().all(|byte| byte.is_ascii_lowercase());
        match (digits, designation::unpack(packed)) {
            ("", Some(provisional)) => Ok(format!("{kind}/{provisional}")),
            ("", None) if packed.is_empty() => Ok("Comet without a name".into()),
            (digits, _) if !digits.is_empty() && packed.is_empty() => Ok(format!("{digits}{kind}")),
            (digits, _) if !digits.is_empty() && is_fragment => {
                Ok(format!("{digits}{kind}-{}", packed.to_ascii_uppercase()))
            }
            (digits, Some(provisional)) => Ok(format!("{digits}{kind} ({kind}/{provisional})")),
            (_, None) => self.refuse(
                6,
                quote(packed),
                "a packed provisional designation such as `K31A010` in columns 6-12, or a name from column 103 on",
            ),
        }
    }
}
