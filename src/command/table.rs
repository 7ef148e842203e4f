//! How is an answer written: CSV with a header line, or JSON with the same keys?
//!
//! Numbers carry the digits that give the same double back; what does not exist is an empty field, or null. Cautions are
//! the last column in sentences, in JSON an array.

use super::Stop;
use serde::ser::{SerializeMap, SerializeSeq, Serializer};
use std::io::{self, BufWriter, Write};
use tailvane::sky::column::Value;

/// One field of a row.
pub enum Cell {
    Number(f64),
    Text(String),
    Absent,
}

impl From<f64> for Cell {
    /// A number; absent where the arithmetic gave none.
    fn from(number: f64) -> Self {
        if number.is_finite() { Cell::Number(number) } else { Cell::Absent }
    }
}

impl From<Option<f64>> for Cell {
    fn from(number: Option<f64>) -> Self {
        number.map_or(Cell::Absent, Cell::from)
    }
}

impl From<Value> for Cell {
    fn from(value: Value) -> Self {
        match value {
            Value::Number(number) => Cell::Number(number),
            Value::Text(text) => Cell::Text(text.to_owned()),
            Value::Absent => Cell::Absent,
        }
    }
}

/// One row, in the order of the keys.
pub struct Row {
    pub cells: Vec<Cell>,
    pub cautions: Vec<String>,
}

/// Writes the rows to standard output; each is made as it is written.
pub fn write(json: bool, keys: &[&str], rows: impl Iterator<Item = Result<Row, Stop>>) -> Result<(), Stop> {
    let out = BufWriter::new(io::stdout().lock());
    if json { write_json(keys, rows, out) } else { write_csv(keys, rows, out) }
}

fn write_csv(keys: &[&str], rows: impl Iterator<Item = Result<Row, Stop>>, out: impl Write) -> Result<(), Stop> {
    let mut lines = csv::Writer::from_writer(out);
    lines.write_record(keys.iter().copied().chain(["caution"]))?;
    for row in rows {
        let row = row?;
        for cell in row.cells {
            lines.write_field(match cell {
                Cell::Number(number) => number.to_string(),
                Cell::Text(text) => text,
                Cell::Absent => String::new(),
            })?;
        }
        lines.write_field(row.cautions.join(" "))?;
        lines.write_record(None::<&[u8]>)?;
    }
    Ok(lines.flush()?)
}

fn write_json(keys: &[&str], rows: impl Iterator<Item = Result<Row, Stop>>, mut out: impl Write) -> Result<(), Stop> {
    let mut json = serde_json::Serializer::pretty(&mut out);
    let mut list = json.serialize_seq(None)?;
    for row in rows {
        list.serialize_element(&Keyed { keys, row: row? })?;
    }
    SerializeSeq::end(list)?;
    writeln!(out)?;
    Ok(out.flush()?)
}

/// One row as a JSON object with the keys in their order.
struct Keyed<'a> {
    keys: &'a [&'a str],
    row: Row,
}

impl serde::Serialize for Keyed<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut object = serializer.serialize_map(Some(self.keys.len() + 1))?;
        for (key, cell) in self.keys.iter().zip(&self.row.cells) {
            match cell {
                Cell::Number(number) => object.serialize_entry(key, number)?,
                Cell::Text(text) => object.serialize_entry(key, text)?,
                Cell::Absent => object.serialize_entry(key, &None::<f64>)?,
            }
        }
        object.serialize_entry("cautions", &self.row.cautions)?;
        object.end()
    }
}
