//! The command-line shell: reads files and arguments, calls the engine, prints. The only file that prints.
//!
//! Exit codes: 0 done, 1 refused input (standard error says where and what is allowed), 2 wrong usage.

use lexopt::ValueExt;
use serde::ser::{SerializeMap, SerializeSeq, Serializer};
use std::io::{self, BufWriter, Read, Write};
use std::process::ExitCode;
use tailvane::engine::{Engine, View};
use tailvane::error::{Error, Kind, Place};
use tailvane::plan::{Plan, paste};
use tailvane::sky::column::{COLUMNS, Column, Value};
use tailvane::time::{Instant, Stamp};

const USAGE: &str = "\
tailvane: where a comet's tails lie on the sky

  tailvane sky PLAN [--at TIME ...] [--json]
  tailvane sky PLAN --from TIME --to TIME --step 6h [--json]
      one row per time: place, distances, angles, directions, motion;
      without a time, the plan's own
  tailvane elements FILE
      published element notations to plans, one JSON object per line and comet

PLAN and FILE may be - for standard input. A TIME is 2031-03-20T05:30:00Z, or
2031-03-20.25 or JD 2460000.5 followed by UTC, TT or TDB. A step is a number
with d, h, m or s. Output is CSV with a header line, or JSON with --json.
";

/// Rows of one call are bounded, so that a slip of the step does not fill a disk.
const MOST_ROWS: f64 = 10_000_000.0;

/// Why a call ended without its answer.
enum Stop {
    /// The call is not understood.
    Usage(String),
    /// The input was refused.
    Refused(Error),
    /// The input was refused, and that has been said.
    Said,
    /// Standard output went away or could not be written.
    Output(io::Error),
}

impl From<Error> for Stop {
    fn from(error: Error) -> Self {
        Stop::Refused(error)
    }
}

impl From<io::Error> for Stop {
    fn from(error: io::Error) -> Self {
        Stop::Output(error)
    }
}

impl From<csv::Error> for Stop {
    fn from(error: csv::Error) -> Self {
        Stop::Output(error.into())
    }
}

impl From<serde_json::Error> for Stop {
    fn from(error: serde_json::Error) -> Self {
        Stop::Output(error.into())
    }
}

impl From<lexopt::Error> for Stop {
    fn from(error: lexopt::Error) -> Self {
        Stop::Usage(error.to_string())
    }
}

fn main() -> ExitCode {
    match run() {
        Ok(()) => ExitCode::SUCCESS,
        Err(Stop::Usage(what)) => {
            eprint!("tailvane: {what}\n\n{USAGE}");
            ExitCode::from(2)
        }
        Err(Stop::Refused(error)) => {
            eprintln!("tailvane: {error}");
            ExitCode::FAILURE
        }
        Err(Stop::Said) => ExitCode::FAILURE,
        // A reader such as `head` that has seen enough is no failure.
        Err(Stop::Output(error)) if error.kind() == io::ErrorKind::BrokenPipe => ExitCode::SUCCESS,
        Err(Stop::Output(error)) => {
            eprintln!("tailvane: cannot write the answer: {error}");
            ExitCode::FAILURE
        }
    }
}

fn run() -> Result<(), Stop> {
    let mut arguments = lexopt::Parser::from_env();
    match arguments.next()? {
        Some(lexopt::Arg::Value(command)) if command == "sky" => sky(SkyCall::read(arguments)?),
        Some(lexopt::Arg::Value(command)) if command == "elements" => elements(arguments),
        Some(lexopt::Arg::Long("help") | lexopt::Arg::Short('h')) => Ok(io::stdout().write_all(USAGE.as_bytes())?),
        Some(lexopt::Arg::Long("version")) => Ok(writeln!(io::stdout(), "tailvane {}", env!("CARGO_PKG_VERSION"))?),
        Some(lexopt::Arg::Value(command)) => {
            Err(Stop::Usage(format!("no command is named '{}'; there are sky and elements", command.display())))
        }
        Some(other) => Err(other.unexpected().into()),
        None => Err(Stop::Usage("say what to do: sky or elements".to_owned())),
    }
}

/// The arguments of `tailvane sky`.
struct SkyCall {
    plan: String,
    at: Vec<Stamp>,
    from: Option<Stamp>,
    to: Option<Stamp>,
    step_days: Option<f64>,
    json: bool,
}

impl SkyCall {
    fn read(mut arguments: lexopt::Parser) -> Result<Self, Stop> {
        let mut call =
            SkyCall { plan: String::new(), at: Vec::new(), from: None, to: None, step_days: None, json: false };
        while let Some(argument) = arguments.next()? {
            match argument {
                lexopt::Arg::Long("at") => call.at.push(time(&mut arguments, "--at")?),
                lexopt::Arg::Long("from") => call.from = Some(time(&mut arguments, "--from")?),
                lexopt::Arg::Long("to") => call.to = Some(time(&mut arguments, "--to")?),
                lexopt::Arg::Long("step") => call.step_days = Some(step_days(&text(&mut arguments)?)?),
                lexopt::Arg::Long("json") => call.json = true,
                lexopt::Arg::Value(path) if call.plan.is_empty() => call.plan = path.string()?,
                other => return Err(other.unexpected().into()),
            }
        }
        if call.plan.is_empty() {
            return Err(Stop::Usage("sky needs a plan file, or - for standard input".to_owned()));
        }
        Ok(call)
    }

    /// The times of the rows.
    fn times(&self, plan: &Plan) -> Result<Vec<Instant>, Stop> {
        match (&self.from, &self.to, self.step_days) {
            (None, None, None) if !self.at.is_empty() => Ok(self.at.iter().map(Stamp::instant).collect()),
            (None, None, None) => match &plan.time {
                Some(stamp) => Ok(vec![stamp.instant()]),
                None => Err(Stop::Usage("the plan has no time: give --at, or --from, --to and --step".to_owned())),
            },
            (Some(from), Some(to), Some(step)) if self.at.is_empty() => steps(from.instant(), to.instant(), step),
            (Some(_), Some(_), Some(_)) => Err(Stop::Usage("give either --at or a range, not both".to_owned())),
            _ => Err(Stop::Usage("a range takes all of --from, --to and --step".to_owned())),
        }
    }
}

/// From `from` to `to`, both included, in steps of civil days, so that a row stays on its time of day
/// across a leap second.
fn steps(from: Instant, to: Instant, step: f64) -> Result<Vec<Instant>, Stop> {
    let (first, last) = (from.ut1_days(), to.ut1_days());
    if last < first {
        return Err(Stop::Usage(format!("--to {} lies before --from {}", to.utc_iso_ms(), from.utc_iso_ms())));
    }
    // A millionth of a step forgives the rounding of the quotient.
    let count = ((last - first) / step + 1e-6).floor();
    if count >= MOST_ROWS {
        return Err(Stop::Usage(format!("that range has {count} rows; at most {MOST_ROWS} are given in one call")));
    }
    Ok((0..=count as u64).map(|k| Instant::from_ut1_days(first + k as f64 * step)).collect())
}

fn text(arguments: &mut lexopt::Parser) -> Result<String, Stop> {
    Ok(arguments.value()?.string()?)
}

fn time(arguments: &mut lexopt::Parser, option: &str) -> Result<Stamp, Stop> {
    let typed = text(arguments)?;
    typed.parse::<Stamp>().map_err(|error| error.at(Place::Field(option.to_owned())).into())
}

/// A step such as 6h in days.
fn step_days(typed: &str) -> Result<f64, Stop> {
    let wrong =
        || Stop::Usage(format!("--step: found '{typed}'; expected a positive number with d, h, m or s, such as 6h"));
    let unit = typed.chars().last().ok_or_else(wrong)?;
    let per_day = match unit {
        'd' => 1.0,
        'h' => 24.0,
        'm' => 1440.0,
        's' => 86_400.0,
        _ => return Err(wrong()),
    };
    let number: f64 = typed[..typed.len() - 1].parse().map_err(|_| wrong())?;
    if number.is_finite() && number > 0.0 { Ok(number / per_day) } else { Err(wrong()) }
}

/// The text of a file, or of standard input for `-`.
fn read(path: &str) -> Result<String, Error> {
    let refused = |error: io::Error| {
        Error::new(
            Kind::File,
            Place::Field(path.to_owned()),
            error.to_string(),
            "a file that can be read as UTF-8 text",
        )
    };
    let mut bytes = Vec::new();
    if path == "-" {
        io::stdin().read_to_end(&mut bytes).map_err(refused)?;
    } else {
        bytes = std::fs::read(path).map_err(refused)?;
    }
    // Notations say better than a decoder what is wrong with binary input.
    Ok(String::from_utf8_lossy(&bytes).into_owned())
}

fn sky(call: SkyCall) -> Result<(), Stop> {
    let plan = Plan::parse(&read(&call.plan)?)?;
    let times = call.times(&plan)?;
    let mut engine = Engine::new(plan)?;
    let columns: Vec<&Column> = COLUMNS.iter().filter(|column| !column.site_only || engine.has_site()).collect();
    // Every time is checked before the first row is written.
    for &time in &times {
        engine.check_span(time)?;
    }
    let out = BufWriter::new(io::stdout().lock());
    if call.json { sky_json(&mut engine, &times, &columns, out) } else { sky_csv(&mut engine, &times, &columns, out) }
}

fn sky_csv(engine: &mut Engine, times: &[Instant], columns: &[&Column], out: impl Write) -> Result<(), Stop> {
    let mut rows = csv::Writer::from_writer(out);
    rows.write_record(["time"].into_iter().chain(columns.iter().map(|column| column.key)).chain(["caution"]))?;
    for &time in times {
        let View { sky, cautions } = engine.view_at(time)?;
        rows.write_field(time.utc_iso_ms())?;
        for column in columns {
            rows.write_field(match (column.value)(&sky) {
                Value::Number(number) => number.to_string(),
                Value::Text(text) => text.to_owned(),
                Value::Absent => String::new(),
            })?;
        }
        let sentences: Vec<String> = cautions.iter().map(|caution| caution.sentence()).collect();
        rows.write_field(sentences.join(" "))?;
        rows.write_record(None::<&[u8]>)?;
    }
    Ok(rows.flush()?)
}

fn sky_json(engine: &mut Engine, times: &[Instant], columns: &[&Column], mut out: impl Write) -> Result<(), Stop> {
    let mut json = serde_json::Serializer::pretty(&mut out);
    let mut rows = json.serialize_seq(Some(times.len()))?;
    for &time in times {
        rows.serialize_element(&JsonRow { time, view: engine.view_at(time)?, columns })?;
    }
    SerializeSeq::end(rows)?;
    writeln!(out)?;
    Ok(out.flush()?)
}

/// One row as a JSON object with the columns in their order.
struct JsonRow<'a> {
    time: Instant,
    view: View,
    columns: &'a [&'a Column],
}

impl serde::Serialize for JsonRow<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut row = serializer.serialize_map(Some(self.columns.len() + 2))?;
        row.serialize_entry("time", &self.time.utc_iso_ms())?;
        for column in self.columns {
            match (column.value)(&self.view.sky) {
                Value::Number(number) => row.serialize_entry(column.key, &number)?,
                Value::Text(text) => row.serialize_entry(column.key, text)?,
                Value::Absent => row.serialize_entry(column.key, &None::<f64>)?,
            }
        }
        let sentences: Vec<String> = self.view.cautions.iter().map(|caution| caution.sentence()).collect();
        row.serialize_entry("cautions", &sentences)?;
        row.end()
    }
}

fn elements(mut arguments: lexopt::Parser) -> Result<(), Stop> {
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
