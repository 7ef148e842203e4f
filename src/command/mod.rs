//! Which commands are there, and what do they share: files, times, lists of numbers, and why a call stops?

mod draw;
mod dust;
mod elements;
mod grains;
mod ion;
mod night;
mod season;
mod sky;
mod table;

use lexopt::ValueExt;
use std::io::{self, Read};
use tailvane::error::{Error, Kind, Place};
use tailvane::plan::Plan;
use tailvane::time::{Instant, Stamp};

/// A command by its name.
type Command = (&'static str, fn(lexopt::Parser) -> Result<(), Stop>);

pub const COMMANDS: &[Command] = &[
    ("sky", sky::run),
    ("ion", ion::run),
    ("dust", dust::run),
    ("season", season::run),
    ("night", night::run),
    ("draw", draw::run),
    ("elements", elements::run),
];

/// The names of the commands, as a list in words.
pub fn names() -> String {
    let names: Vec<&str> = COMMANDS.iter().map(|(name, _)| *name).collect();
    in_words(&names, "and")
}

/// `a, b and c`.
fn in_words(names: &[&str], joint: &str) -> String {
    match names {
        [] => String::new(),
        [one] => (*one).to_owned(),
        [most @ .., last] => format!("{} {joint} {last}", most.join(", ")),
    }
}

/// Rows of one call are bounded, so that a slip of the step does not fill a disk.
const MOST_ROWS: f64 = 10_000_000.0;

/// Why a call ended without its answer.
pub enum Stop {
    /// The call is not understood.
    Usage(String),
    /// The input was refused.
    Refused(Error),
    /// The input of a named file beside the plan was refused.
    RefusedIn(String, Error),
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

/// What every command that reads a plan takes: the plan, its times, the form of the answer.
#[derive(Default)]
struct Call {
    plan: String,
    at: Vec<Stamp>,
    from: Option<Stamp>,
    to: Option<Stamp>,
    step_days: Option<f64>,
    json: bool,
}

impl Call {
    /// Reads the arguments; `own` takes the options of the command itself by name, and says whether it knew one.
    fn read(
        command: &str,
        mut arguments: lexopt::Parser,
        mut own: impl FnMut(&str, &mut lexopt::Parser) -> Result<bool, Stop>,
    ) -> Result<Self, Stop> {
        let mut call = Call::default();
        while let Some(argument) = arguments.next()? {
            let name = match argument {
                lexopt::Arg::Long(name) => name.to_owned(),
                lexopt::Arg::Value(path) if call.plan.is_empty() => {
                    call.plan = path.string()?;
                    continue;
                }
                other => return Err(other.unexpected().into()),
            };
            match name.as_str() {
                "at" => call.at.push(time(&mut arguments, "--at")?),
                "from" => call.from = Some(time(&mut arguments, "--from")?),
                "to" => call.to = Some(time(&mut arguments, "--to")?),
                "step" => call.step_days = Some(step_days(&text(&mut arguments)?)?),
                "json" => call.json = true,
                _ if own(&name, &mut arguments)? => {}
                _ => return Err(lexopt::Arg::Long(&name).unexpected().into()),
            }
        }
        if call.plan.is_empty() {
            return Err(Stop::Usage(format!("{command} needs a plan file, or - for standard input")));
        }
        Ok(call)
    }

    fn read_plan(&self) -> Result<Plan, Stop> {
        Ok(Plan::parse(&read(&self.plan)?)?)
    }

    /// The times asked for, or the plan's own.
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

/// Numbers with commas between them, each within the limits.
fn numbers(arguments: &mut lexopt::Parser, option: &str, limits: &Limits) -> Result<Vec<f64>, Stop> {
    let typed = text(arguments)?;
    let read = |part: &str| limits.read(part).map_err(|error| error.at(Place::Field(option.to_owned())).into());
    typed.split(',').map(|part| read(part.trim())).collect()
}

/// The least and greatest value of a number that is read.
struct Limits {
    least: f64,
    greatest: f64,
}

impl Limits {
    /// # Errors
    /// No number, or one outside the limits; the place is the caller's to say.
    fn read(&self, typed: &str) -> Result<f64, Error> {
        let Limits { least, greatest } = self;
        match typed.parse::<f64>() {
            Ok(number) if (*least..=*greatest).contains(&number) => Ok(number),
            _ => {
                let found = if typed.is_empty() { "nothing".to_owned() } else { format!("'{typed}'") };
                let allowed = format!("a number from {least} to {greatest}");
                Err(Error::new(Kind::Range, Place::Whole, found, allowed))
            }
        }
    }
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
