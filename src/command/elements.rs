//! `tailvane elements`: published element notations to plans, one line per comet.

use super::{Stop, read};
use lexopt::ValueExt;
use std::io::{self, BufWriter, Write};
use tailvane::plan::{Plan, paste};

pub fn run(mut arguments: lexopt::Parser) -> Result<(), Stop> {
    let path = match arguments.next()? {
        Some(lexopt::Arg::Value(path)) => path.string()?,
        Some(other) => return Err(other.unexpected().into()),
        None => return Err(Stop::Usage("elements needs a file, or - for standard input".to_owned())),
    };
    if let Some(extra) = arguments.next()? {
        return Err(extra.unexpected().into());
    }
    let reading = paste::read(&read(&path)?);
    let mut out = BufWriter::new(io::stdout().lock());
    for entry in &reading.comets {
        writeln!(out, "{}", Plan::from(entry.comet.clone()).print_line())?;
    }
    out.flush()?;
    for error in &reading.errors {
        eprintln!("tailvane: {error}");
    }
    if reading.errors_left_out > 0 {
        eprintln!("tailvane: {} more refusals", reading.errors_left_out);
    }
    for notice in &reading.notices {
        eprintln!("tailvane: {notice}");
    }
    if reading.comets.is_empty() { Err(Stop::Said) } else { Ok(()) }
}
