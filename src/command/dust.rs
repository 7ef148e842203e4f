//! `tailvane dust`: where is dust now that left so long ago, grain by grain?

use super::table::{self, Cell, Row};
use super::{Call, Limits, Stop, grains, ion, numbers, text};
use tailvane::engine::Engine;
use tailvane::frame::{equatorial_to_ecliptic, position_angle_rad, separation_rad};
use tailvane::sky::column::whole_turn_deg;
use tailvane::tail::curve::{round_ages, round_betas};
use tailvane::tail::grain::{Grain, Vista};
use tailvane::tail::law::Tails;
use tailvane::time::Instant;

const KEYS: [&str; 10] =
    ["time", "beta", "age_days", "x_au", "y_au", "z_au", "xi_deg", "eta_deg", "position_angle_deg", "separation_deg"];

/// No grain is known beyond 3 or so; the motion itself would hold for any.
pub const BETAS: Limits = Limits { least: 0.0, greatest: 100.0 };
/// A hundred years: far longer than dust is followed, and than the two-body motion is worth.
pub const AGES_DAYS: Limits = Limits { least: 0.0, greatest: 36_525.0 };

pub fn run(arguments: lexopt::Parser) -> Result<(), Stop> {
    let (mut file, mut betas, mut ages) = (None, Vec::new(), Vec::new());
    let call = Call::read("dust", arguments, |name, arguments| {
        match name {
            "grains" => file = Some(text(arguments)?),
            "beta" => betas.extend(numbers(arguments, "--beta", &BETAS)?),
            "ages" => ages.extend(numbers(arguments, "--ages", &AGES_DAYS)?),
            _ => return Ok(false),
        }
        Ok(true)
    })?;
    if file.is_some() && !(betas.is_empty() && ages.is_empty()) {
        return Err(Stop::Usage("give either --grains or --beta and --ages, not both".to_owned()));
    }
    if file.as_deref() == Some("-") && call.plan == "-" {
        return Err(Stop::Usage("standard input can be the plan or the grains, not both".to_owned()));
    }
    let plan = call.read_plan()?;
    let times = call.times(&plan)?;
    let grains = match file {
        Some(path) => grains::read(&path)?,
        None => product(&plan.tails, betas, ages),
    };
    answer(Engine::new(plan)?, &times, &grains, call.json)
}

/// Dust of each beta at each age, beta by beta; what is not given is chosen within the plan's ranges.
fn product(laws: &Tails, betas: Vec<f64>, ages: Vec<f64>) -> Vec<Grain> {
    let betas = if betas.is_empty() { round_betas([laws.beta_least, laws.beta_greatest]) } else { betas };
    let ages = if ages.is_empty() { round_ages([laws.age_least_days, laws.age_greatest_days]) } else { ages };
    betas.iter().flat_map(|&beta| ages.iter().map(move |&age| Grain::released(beta, age))).collect()
}

fn answer(mut engine: Engine, times: &[Instant], grains: &[Grain], json: bool) -> Result<(), Stop> {
    for &time in times {
        engine.check_span(time)?;
    }
    let mut skies = Vec::new();
    let mut said = Vec::new();
    for &time in times {
        let view = engine.view_at(time)?;
        // What is doubtful about all grains alike is said once, not in every row.
        for caution in view.cautions.iter().filter(|caution| ion::concerns_tails(caution)) {
            let sentence = caution.sentence();
            if !said.contains(&sentence) {
                eprintln!("tailvane: {sentence}");
                said.push(sentence);
            }
        }
        skies.push(view.sky);
    }
    let skipped = usize::from(times.len() == 1);
    let rows = skies.iter().flat_map(|sky| {
        let vista = engine.vista(sky);
        grains.iter().map(move |grain| Ok(row(sky.time, &vista, grain, skipped)))
    });
    table::write(json, &KEYS[skipped..], rows)
}

fn row(time: Instant, vista: &Vista, grain: &Grain, skipped: usize) -> Row {
    let (end, cautions) = vista.fate(grain);
    let place = equatorial_to_ecliptic(&end.position_au);
    let offset = vista.offset(&end.position_au);
    let sight = end.position_au - vista.observer_au;
    let part = |axis: usize| Cell::from(offset.map(|offset| offset[axis].to_degrees()));
    let cells = vec![
        Cell::Text(time.utc_iso_ms()),
        grain.beta.into(),
        grain.age_days.into(),
        place.x.into(),
        place.y.into(),
        place.z.into(),
        part(0),
        part(1),
        position_angle_rad(&sight, &vista.axes).map(whole_turn_deg).into(),
        separation_rad(&sight, &vista.axes.sight).to_degrees().into(),
    ];
    Row {
        cells: cells.into_iter().skip(skipped).collect(),
        cautions: cautions.iter().map(|caution| caution.sentence()).collect(),
    }
}
