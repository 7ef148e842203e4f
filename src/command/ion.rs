//! `tailvane ion`: where does the ion tail point, for each wind?

use super::table::{self, Cell, Row};
use super::{Call, Limits, Stop, numbers};
use tailvane::caution::{Caution, Weight};
use tailvane::engine::{Engine, View};
use tailvane::sky::column::whole_turn_deg;
use tailvane::tail::grain::Vista;
use tailvane::tail::ion::{self, Axis};
use tailvane::time::Instant;

const KEYS: [&str; 5] = ["time", "wind_km_s", "axis_position_angle_deg", "angle_from_antisolar_deg", "aberration_deg"];

/// Slower than any wind that was measured; faster than any storm.
const WINDS: Limits = Limits { least: 10.0, greatest: 10_000.0 };

pub fn run(arguments: lexopt::Parser) -> Result<(), Stop> {
    let mut winds = Vec::new();
    let call = Call::read("ion", arguments, |name, arguments| {
        let known = name == "wind-km-s";
        if known {
            winds.extend(numbers(arguments, "--wind-km-s", &WINDS)?);
        }
        Ok(known)
    })?;
    let plan = call.read_plan()?;
    let times = call.times(&plan)?;
    if winds.is_empty() {
        winds = vec![plan.tails.wind_slowest_km_s, plan.tails.wind_axis_km_s, plan.tails.wind_fastest_km_s];
    }
    let mut engine = Engine::new(plan)?;
    for &time in &times {
        engine.check_span(time)?;
    }
    // One time needs no column of its own.
    let skipped = usize::from(times.len() == 1);
    let mut rows = Vec::new();
    for time in times {
        let view = engine.view_at(time)?;
        let vista = engine.vista(&view.sky);
        rows.extend(winds.iter().map(|&wind| Ok(row(time, &view, &vista, wind, skipped))));
    }
    table::write(call.json, &KEYS[skipped..], rows.into_iter())
}

fn row(time: Instant, view: &View, vista: &Vista, wind_km_s: f64, skipped: usize) -> Row {
    let axis = Axis::of(vista, wind_km_s);
    let cells = vec![
        Cell::Text(time.utc_iso_ms()),
        axis.wind_km_s.into(),
        axis.position_angle_rad.map(whole_turn_deg).into(),
        axis.from_antisolar_rad.map(f64::to_degrees).into(),
        axis.aberration_rad.to_degrees().into(),
    ];
    let doubts = view.cautions.iter().filter(|caution| concerns_tails(caution)).cloned();
    let cautions = doubts.chain(ion::cautions(vista, &axis)).map(|caution| caution.sentence()).collect();
    Row { cells: cells.into_iter().skip(skipped).collect(), cautions }
}

/// Whether a caution about the sky is one about numbers of a tail: elements and directions, not pointing.
pub fn concerns_tails(caution: &Caution) -> bool {
    let other = matches!(
        caution,
        Caution::AngleUndefined { quantity } | Caution::AngleLoose { quantity, .. } if *quantity == "negative velocity"
    );
    caution.weight() == Weight::Doubt && !other
}
