//! The command-line shell: reads files and arguments, calls the engine, prints. Only this file and those of
//! `command` print.
//!
//! Exit codes: 0 done, 1 refused input (standard error says where and what is allowed), 2 wrong usage.

mod command;

use command::Stop;
use std::io::{self, Write};
use std::process::ExitCode;

const USAGE: &str = "\
tailvane: where a comet's tails lie on the sky

  tailvane sky PLAN [--at TIME ...] [--json]
  tailvane sky PLAN --from TIME --to TIME --step 6h [--json]
      one row per time: place, distances, angles, directions, motion;
      without a time, the plan's own
  tailvane ion PLAN [--at TIME ...] [--wind-km-s W,...] [--json]
      the axis of the ion tail for each wind; without one, the plan's winds
  tailvane dust PLAN [--at TIME ...] --grains FILE [--json]
      where each grain of a CSV file is: beta,age_days and, for an ejection
      velocity, any of radial_km_s,transverse_km_s,normal_km_s
  tailvane dust PLAN [--at TIME ...] [--beta B,...] [--ages D,...] [--json]
      dust of each beta at each age (days), without ejection speed;
      what is left out is chosen within the plan's ranges
  tailvane camera PLAN [--at TIME ...] [--json]
      how the plan's camera stands, and where on its chip the tails lie;
      its mount carries it from the plan's time on
  tailvane night PLAN [--date DATE] [--step 10m] [--json]
      the night that begins on the evening of DATE (2031-03-20, local mean solar
      date of the site; without one, the night of the plan's time): comet, Sun and
      Moon over the horizon, twilights, dark time, the best window
  tailvane season PLAN [--from TIME --to TIME] [--json | --calendar | --table FORM]
      events seen from the Earth's centre between two times, or in the plan's own
      season: crossings of the orbit plane, greatest and least angles, windows of
      sunward dust and more; as CSV, JSON, an iCalendar file, or a table in the
      form plain, markdown or wiki
  tailvane draw PLAN --view VIEW --out FILE.svg [--at TIME]
      [--width PX] [--height PX] [--theme THEME]
      the picture of the page; the views and themes are named when one is wrong
  tailvane draw PLAN --view season --out FILE.svg [--from TIME --to TIME]
      [--at TIME] [--curves KEY,...] [--width PX] [--height PX] [--theme THEME]
      the season ribbon; without a range, the plan's season or one from the orbit
  tailvane elements FILE
      published element notations to plans, one JSON object per line and comet

PLAN and FILE may be - for standard input. A TIME is 2031-03-20T05:30:00Z, or
2031-03-20.25 or JD 2460000.5 followed by UTC, TT or TDB; --from, --to and --step
serve wherever --at may be repeated. A step is a number with d, h, m or s. Output
is CSV with a header line, or JSON with --json; with several times, ion and dust
put the time first.
";

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
        Err(Stop::RefusedIn(file, error)) => {
            eprintln!("tailvane: {file}: {error}");
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
        Some(lexopt::Arg::Value(name)) => {
            let wanted = name.to_string_lossy();
            match command::COMMANDS.iter().find(|(known, _)| *known == wanted) {
                Some((_, command)) => command(arguments),
                None => Err(Stop::Usage(format!("no command is named '{wanted}'; there are {}", command::names()))),
            }
        }
        Some(lexopt::Arg::Long("help") | lexopt::Arg::Short('h')) => Ok(io::stdout().write_all(USAGE.as_bytes())?),
        Some(lexopt::Arg::Long("version")) => Ok(writeln!(io::stdout(), "tailvane {}", env!("CARGO_PKG_VERSION"))?),
        Some(other) => Err(other.unexpected().into()),
        None => Err(Stop::Usage(format!("say what to do: {}", command::names()))),
    }
}
