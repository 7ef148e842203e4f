//! What do a circular's block and `name = value` lines say?
//!
//! Both are one notation: a label, perhaps `=` or `:`, a value, perhaps its uncertainty and unit, several to a line.
//! A label without `=` counts only at the start of a line or after another value, so that prose around the elements is
//! passed over; so are the columns of the vectors P and Q beside the angles. Names before a `=` that mean nothing here
//! are said. A comet begins at a line that starts with a designation or `name =`; where labels repeat without one, at
//! a blank line; where most labels repeat without that either, at the label that came first, and then either all
//! comets of that run are whole or all are refused.

use super::draft::{self, Draft};
use super::label::{self, Label};
use super::token::{Number, Sort, Token, number, starts_like_number, tokens};
use super::{Reading, date, designation, quote, refusal};
use crate::error::Error;
use crate::time::Stamp;

/// What a label was given.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum Value {
    Number(Number),
    Date(Stamp),
    Text(String),
}

/// Something met in the text.
pub(super) struct Event {
    pub line: usize,
    pub column: usize,
    pub what: What,
}

pub(super) enum What {
    Value(Label, Result<Value, Error>),
    /// A designation at the start of a line.
    Title(String),
    Blank,
    /// A line without labels.
    Other(String),
    /// A name before `=` that means nothing here.
    Unknown(String),
}

/// Reads the comets of `lines` into `reading`; gives the lines back if they hold no labels at all.
pub(super) fn read<'a>(lines: &[(usize, &'a str)], reading: &mut Reading) -> Vec<(usize, &'a str)> {
    let mut events = Vec::new();
    for &(number, line) in lines {
        scan(number, line, &mut events);
    }
    if !events.iter().any(|event| matches!(event.what, What::Value(..))) {
        return lines.iter().filter(|(_, line)| !line.trim().is_empty()).copied().collect();
    }
    for event in &events {
        if let What::Unknown(name) = &event.what {
            reading.notice(
                event.line,
                format!("{} is not an element that is used here; it was passed over.", quote(name)),
            );
        }
    }
    let starts_comet = |what: &What| matches!(what, What::Title(_) | What::Value(Label::Name, _));
    for comet in split(&events, starts_comet) {
        let name = draft::name(comet);
        if repeated(comet) == 0 {
            finish(&[comet], &name, reading);
            continue;
        }
        for run in split(comet, |what| matches!(what, What::Blank)) {
            let Some(first) = run.iter().position(|event| required(&event.what).is_some()) else { continue };
            // One or two labels that come twice are a slip within one comet.
            if repeated(run) > 2 {
                let label = required(&run[first].what);
                finish(&split(&run[first..], |what| required(what) == label), &name, reading);
            } else {
                finish(&[run], &name, reading);
            }
        }
    }
    Vec::new()
}

/// The required label of a value.
fn required(what: &What) -> Option<Label> {
    match what {
        What::Value(label, _) if label::REQUIRED.contains(label) => Some(*label),
        _ => None,
    }
}

/// How many of the required labels come twice.
fn repeated(events: &[Event]) -> usize {
    let twice = |&&label: &&Label| events.iter().filter(|event| required(&event.what) == Some(label)).nth(1).is_some();
    label::REQUIRED.iter().filter(twice).count()
}

/// `events` cut before each event that `starts` a piece.
fn split(events: &[Event], starts: impl Fn(&What) -> bool) -> Vec<&[Event]> {
    let mut cuts: Vec<usize> = (1..events.len()).filter(|&index| starts(&events[index].what)).collect();
    cuts.insert(0, 0);
    cuts.push(events.len());
    cuts.windows(2).map(|ends| &events[ends[0]..ends[1]]).collect()
}

/// Adds the comets of `pieces` that hold labels, all or none.
fn finish(pieces: &[&[Event]], name: &Option<String>, reading: &mut Reading) {
    let mut comets = Vec::new();
    let mut errors = Vec::new();
    let mut notices = Vec::new();
    for piece in pieces {
        match Draft::collect(piece).and_then(|draft| draft.map(|draft| draft.comet(name, &mut notices)).transpose()) {
            Ok(comet) => comets.extend(comet),
            Err(refused) => errors.extend(refused),
        }
    }
    if errors.is_empty() {
        reading.comets.extend(comets);
        notices.into_iter().for_each(|(line, text)| reading.notice(line, text));
    } else {
        if let Some(event) = pieces.first().and_then(|piece| piece.first()).filter(|_| pieces.len() > 1) {
            let found = format!("{} comets in one run of lines, of which not all can be read", pieces.len());
            errors.insert(0, refusal(event.line, 1, found, "a blank line or the name before each comet"));
        }
        errors.into_iter().for_each(|error| reading.refuse(error));
    }
}

const OLD_EQUINOX: [&str; 6] = ["1950.0", "B1950", "B1950.0", "FK4", "b1950", "b1950.0"];
const EQUINOX: [&str; 6] = ["2000.0", "J2000", "J2000.0", "j2000", "j2000.0", "ICRF"];

fn refuse_old_equinox(line: usize, token: &Token) -> Error {
    let allowed = "elements for the equinox 2000.0; turn the angles to it first, since nothing is converted here";
    refusal(line, token.column, format!("the equinox {}", token.text), allowed)
}

/// A line on its way through the reader.
struct Line<'a> {
    number: usize,
    text: &'a str,
    tokens: Vec<Token<'a>>,
    next: usize,
}

/// Adds what `text` holds to `events`.
fn scan(number: usize, text: &str, events: &mut Vec<Event>) {
    let trimmed = text.trim_start();
    let indent = text.len() - trimmed.len();
    let mut add = |column: usize, what: What| events.push(Event { line: number, column, what });
    if trimmed.is_empty() {
        return add(1, What::Blank);
    }
    let mut from = indent;
    let mut labelled = false;
    if let Some((length, name)) = designation::title(trimmed) {
        add(text[..indent].chars().count() + 1, What::Title(name.to_string()));
        from += length;
        labelled = true;
    }
    let mut line = Line { number, text, tokens: tokens(text, from), next: 0 };
    // Whether a label without `=` may stand here, and the words passed over since the last value.
    let mut free = true;
    let mut passed = 0;
    while let Some(&token) = line.tokens.get(line.next) {
        if let Some((label, words)) = line.label(free) {
            line.next += words;
            let value = line.value(label);
            let label = if matches!(value, Ok((Label::MeanMotion, _))) { Label::MeanMotion } else { label };
            add(token.column, What::Value(label, value.map(|(_, value)| value)));
            (free, passed, labelled) = (true, 0, true);
            continue;
        }
        line.next += 1;
        match token.sort {
            Sort::Word if OLD_EQUINOX.contains(&token.text) => {
                add(token.column, What::Value(Label::Equinox, Err(refuse_old_equinox(number, &token))));
                labelled = true;
            }
            Sort::Word if EQUINOX.contains(&token.text) => {}
            Sort::Word => (free, passed) = (false, passed + 1),
            Sort::PlusMinus => line.next += usize::from(line.word(line.next).is_some_and(starts_like_number)),
            Sort::Equals if passed > 0 => {
                let first = line.next - 1 - passed.min(3);
                let name: Vec<&str> = line.tokens[first..line.next - 1].iter().map(|token| token.text).collect();
                add(token.column, What::Unknown(name.join(" ")));
                (passed, labelled) = (0, true);
            }
            Sort::Equals | Sort::Break => passed = 0,
        }
    }
    if !labelled {
        add(1, What::Other(trimmed.trim_end().to_string()));
    }
}

impl Line<'_> {
    fn word(&self, index: usize) -> Option<&str> {
        self.tokens.get(index).filter(|token| token.sort == Sort::Word).map(|token| token.text)
    }

    fn is_equals(&self, index: usize) -> bool {
        self.tokens.get(index).is_some_and(|token| token.sort == Sort::Equals)
    }

    /// The label that begins here and the tokens it takes, with its `=`.
    fn label(&self, free: bool) -> Option<(Label, usize)> {
        let start = self.next;
        let words = (0..7).take_while(|&count| self.word(start + count).is_some()).count();
        if words == 0 {
            return None;
        }
        if self.is_equals(start + words) {
            let phrase: Vec<&str> = self.tokens[start..start + words].iter().map(|token| token.text).collect();
            if let Some(label) = label::named(&phrase.join(" ")) {
                return Some((label, words + 1));
            }
        }
        let label = label::bare(self.word(start)?).filter(|_| free)?;
        let follower = self.word(start + 1)?;
        let begins_value = starts_like_number(follower)
            || label.is_date()
                && matches!(follower.to_ascii_uppercase().as_str(), "JD" | "JDT" | "JDE" | "MJD" | "JD." | "MJD.");
        // Something with a figure in it was meant as a value; so is whatever follows a label that prose does not have.
        let meant = follower.contains(|c: char| c.is_ascii_digit())
            || matches!(label, Label::PerihelionDistance) && start == 0
            || label.is_angle() && self.word(start).is_some_and(|word| word.ends_with('.'));
        // The heads of the vector columns, `P  Q`.
        let heads = label == Label::Period && follower == "Q";
        ((begins_value || meant) && !heads).then_some((label, 1))
    }

    fn refuse<T>(&self, index: usize, found: Option<String>, allowed: &str) -> Result<T, Error> {
        let end = self.text.trim_end().chars().count() + 1;
        let token = self.tokens.get(index);
        let found =
            found.or_else(|| token.map(|token| quote(token.text))).unwrap_or_else(|| "the end of the line".into());
        Err(refusal(self.number, token.map_or(end, |token| token.column), found, allowed))
    }

    /// The value after `label`, and the label as its unit tells; moves on past unit and uncertainty.
    fn value(&mut self, label: Label) -> Result<(Label, Value), Error> {
        let start = self.next;
        match label {
            Label::Name | Label::Brightness => {
                let text = self
                    .tokens
                    .get(start.wrapping_sub(1))
                    .map_or("", |token| &self.text[token.offset + token.text.len()..])
                    .trim();
                self.next = self.tokens.len();
                Ok((label, Value::Text(text.to_string())))
            }
            label if label.is_date() => {
                // Past a fault the rest of the line is not guessed at.
                self.next = self.tokens.len();
                let (stamp, next) = date::read(self.number, &self.tokens, start)?;
                self.next = next;
                Ok((label, Value::Date(stamp)))
            }
            Label::Equinox => {
                self.next += 1;
                match self.word(start) {
                    Some(word) if EQUINOX.contains(&word) || word == "2000" => Ok((label, Value::Text(String::new()))),
                    Some(word) if OLD_EQUINOX.contains(&word) || word == "1950" => {
                        Err(refuse_old_equinox(self.number, &self.tokens[start]))
                    }
                    _ => self.refuse(start, None, "the equinox 2000.0"),
                }
            }
            _ => self.number_value(label),
        }
    }

    fn number_value(&mut self, label: Label) -> Result<(Label, Value), Error> {
        let start = self.next;
        let value = self.word(start).and_then(number);
        let Some(value) = value else {
            self.next += usize::from(self.word(start).is_some());
            let comma = self.word(start).is_some_and(|word| word.contains(',') && starts_like_number(word));
            let hint = if comma { ", with a decimal point" } else { "" };
            return self.refuse(start, None, &format!("a number for {}{hint}", label.words()));
        };
        self.next += 1;
        let label = self.after_number(label)?;
        Ok((label, Value::Number(value)))
    }

    /// Moves past uncertainty, unit, equinox mark and vector columns after a number.
    fn after_number(&mut self, label: Label) -> Result<Label, Error> {
        let mut label = label;
        let mut columns = 0;
        while let Some(&token) = self.tokens.get(self.next) {
            let small = token.text.to_ascii_lowercase();
            match token.sort {
                Sort::PlusMinus => {
                    self.next += 1;
                    if self.word(self.next).and_then(number).is_none() {
                        return self.refuse(self.next, None, "a number after the plus-minus sign");
                    }
                }
                Sort::Word if label.units().contains(&small.as_str()) && !self.is_equals(self.next + 1) => {
                    if label == Label::MeanMotionOrIndex {
                        label = Label::MeanMotion;
                    }
                }
                Sort::Word if OLD_EQUINOX.contains(&token.text) => return Err(refuse_old_equinox(self.number, &token)),
                Sort::Word if EQUINOX.contains(&token.text) => {}
                Sort::Word if label::OTHER_UNITS.contains(&small.as_str()) && !label.units().is_empty() => {
                    let units = label.units().first().copied().unwrap_or("");
                    self.next = self.tokens.len();
                    return Err(refusal(
                        self.number,
                        token.column,
                        format!("the unit {}", quote(token.text)),
                        format!("{} in {units}", label.words()),
                    ));
                }
                Sort::Word if starts_like_number(token.text) => {
                    let component = number(token.text).is_some_and(|number| number.value.abs() <= 1.0);
                    columns += 1;
                    if !(label.is_angle() && component && columns <= 2) {
                        let allowed = format!("one number for {}", label.words());
                        return self.refuse(
                            self.next,
                            Some(format!("a second number, {}", quote(token.text))),
                            &allowed,
                        );
                    }
                }
                _ => break,
            }
            self.next += 1;
        }
        Ok(label)
    }
}
