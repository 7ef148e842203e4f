//! How long do the core's steps take, each the best of several repeats of half a second?
//!
//! Processor time where Linux tells it, so that waiting for a core does not count; the best repeat, so that a neighbour on
//! the same core counts least. `peers.py` takes the best of its repeats, of half a second and more, alike.
//!
//! `cargo bench` prints one line a step: its name and nanoseconds. `python benches/peers.py` runs this and
//! general-purpose libraries on the same work in one go and prints the ratios; trust those more than the times.

use std::hint::black_box;
use std::time::Instant as Clock;
use tailvane::body::State;
use tailvane::engine::Engine;
use tailvane::orbit::conic::{SUN_GM_AU3_D2, propagate, propagate_bracketed};
use tailvane::plan::Plan;
use tailvane::time::Instant;

/// An invented hyperbolic comet, seen from the geocentre. `peers.py` holds the same elements.
const PLAN: &str = r#"{ "tailvane_plan": 1, "comet": { "name": "Invented comet Alder", "elements": {
    "perihelion_distance_au": 0.62, "eccentricity": 1.0003, "inclination_deg": 63.0, "ascending_node_deg": 62.0,
    "argument_of_perihelion_deg": 118.0, "perihelion_time": "2031-02-22.18374 TT", "epoch": "2031-02-10.0 TT" } } }"#;

const ROWS: u32 = 10_000;
const STEP_DAYS: f64 = 0.2;
/// 2028-05-28 TT, so that the rows lie about perihelion.
const FIRST_TDB_DAYS: f64 = 10_375.0;
const REPEATS: usize = 9;
const REPEAT_SECONDS: f64 = 0.5;

fn main() {
    let grains = grains();
    report("sky_row_10000_rows", rows);
    report("conic_fast", || conics(&grains, propagate));
    report("conic_bracketed", || conics(&grains, propagate_bracketed));
}

/// Prints the nanoseconds that one unit of `work` takes in the best repeat; `work` returns how many it did. Steps whose
/// name does not hold the word given on the command line, if any, are passed over.
fn report(name: &str, mut work: impl FnMut() -> u32) {
    if std::env::args().skip(1).any(|word| !word.starts_with('-') && !name.contains(&word)) {
        return;
    }
    work();
    let mut best = f64::INFINITY;
    for _ in 0..REPEATS {
        let (clock, begin) = (Clock::now(), processor_seconds(None));
        let mut done = 0;
        while clock.elapsed().as_secs_f64() < REPEAT_SECONDS {
            done += work();
        }
        best = best.min((processor_seconds(Some(clock)) - begin) * 1e9 / f64::from(done));
    }
    println!("{name} {best:.1}");
}

/// Seconds this thread has run; where the system does not tell, those since `clock` began (none: zero).
fn processor_seconds(clock: Option<Clock>) -> f64 {
    let told = std::fs::read_to_string("/proc/thread-self/schedstat").ok();
    match told.and_then(|text| text.split(' ').next()?.parse::<f64>().ok()) {
        Some(nanoseconds) => nanoseconds * 1e-9,
        None => clock.map_or(0.0, |clock| clock.elapsed().as_secs_f64()),
    }
}

/// Ten thousand rows of one season, everything included: plan, orbit, Earth.
fn rows() -> u32 {
    let mut engine = Engine::new(Plan::parse(PLAN).expect("the plan above")).expect("its orbit");
    for k in 0..ROWS {
        let time = Instant::from_tdb_days(FIRST_TDB_DAYS + f64::from(k) * STEP_DAYS);
        black_box(engine.sky_at(time).expect("a date in the span"));
    }
    ROWS
}

/// Heliocentric states with every sign of force and times to 400 days, from a fixed seed.
fn grains() -> Vec<(f64, State, f64)> {
    let mut seed = 0x1234_5678_9abc_def1_u64;
    let mut uniform = move || {
        seed ^= seed << 13;
        seed ^= seed >> 7;
        seed ^= seed << 17;
        (seed >> 11) as f64 / (1_u64 << 53) as f64
    };
    let mut triple = |scale: f64| nalgebra::Vector3::from_fn(|_, _| (uniform() - 0.5) * scale);
    (0..20_000)
        .map(|_| {
            let state = State { position_au: triple(4.0), velocity_au_d: triple(0.04) };
            let free = triple(1.0);
            (SUN_GM_AU3_D2 * (1.0 - 2.0 * (free.x + 0.5)), state, free.y * 800.0)
        })
        .collect()
}

fn conics(grains: &[(f64, State, f64)], solver: impl Fn(f64, &State, f64) -> State) -> u32 {
    for (mu, state, days) in grains {
        black_box(solver(*mu, state, *days));
    }
    grains.len() as u32
}
