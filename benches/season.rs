//! How long does a cold two-year season take, and is any event of 200 random orbits missed or doubled?
//!
//! `cargo bench --bench season` prints milliseconds, the median of several whole repeats: the geometry alone, and with the
//! windows of sunward dust. `cargo bench --bench season -- scan` compares the search with a scan of two years of each orbit in
//! one-minute steps; it takes ten minutes, prints every difference, and ends with 1 if there is one.

#[path = "../tests/season/comets.rs"]
mod comets;
#[path = "../tests/season/dense.rs"]
mod dense;

use comets::{Elements, geometric_events, stretch, whole};
use std::hint::black_box;
use std::process::ExitCode;
use std::time::Instant as Clock;

const YEARS_DAYS: f64 = 730.0;
const ORBITS: usize = 200;
const SCAN_STEP_DAYS: f64 = 1.0 / 1440.0;
const REPEATS: usize = 9;

/// Invented comets: q, e, i, argument of perihelion, node.
const COMETS: [[f64; 5]; 4] = [
    [0.62, 1.0003, 63.0, 118.0, 62.0],
    [0.52, 1.0003, 61.2, 33.4, 201.9],
    [1.2, 0.65, 12.0, 170.0, 30.0],
    [3.2, 1.0, 80.0, 10.0, 10.0],
];

fn main() -> ExitCode {
    if std::env::args().any(|word| word == "scan") { scan() } else { speed() }
}

fn speed() -> ExitCode {
    for numbers in COMETS {
        let elements = Elements { numbers, perihelion_time: "2031-02-22.18374 TT".to_owned() };
        let part = stretch(11_000.0, 11_000.0 + YEARS_DAYS);
        let geometry_ms = median(|| drop(black_box(geometric_events(&elements.engine(), part))));
        let mut looks = 0;
        let whole_ms = median(|| looks = whole(elements.engine().season_search(part)).strengths.len());
        println!(
            "q {} au: geometry {geometry_ms:.1} ms, with sunward dust {whole_ms:.1} ms ({looks} looks)",
            numbers[0]
        );
    }
    ExitCode::SUCCESS
}

fn median(mut work: impl FnMut()) -> f64 {
    let mut times: Vec<f64> = (0..REPEATS)
        .map(|_| {
            let begin = Clock::now();
            work();
            begin.elapsed().as_secs_f64() * 1000.0
        })
        .collect();
    times.sort_by(f64::total_cmp);
    times[REPEATS / 2]
}

fn scan() -> ExitCode {
    // Two numbers after the word scan only a part: from, and up to but without.
    let numbers: Vec<usize> = std::env::args().filter_map(|word| word.parse().ok()).collect();
    let [from, to] = numbers[..] else { return scan_part(0, ORBITS) };
    scan_part(from, to)
}

fn scan_part(from: usize, to: usize) -> ExitCode {
    let (mut seen, mut wrong) = (0, 0);
    for (number, elements) in dense::orbits(ORBITS).into_iter().enumerate().take(to).skip(from) {
        let (found, differing) = dense::compare(&[elements], YEARS_DAYS, SCAN_STEP_DAYS);
        println!("orbit {number}: {found} events, {} wrong", differing.len());
        differing.iter().for_each(|words| println!("  {words}"));
        seen += found;
        wrong += differing.len();
    }
    println!("{seen} events, {wrong} missed, doubled or false");
    if wrong == 0 { ExitCode::SUCCESS } else { ExitCode::FAILURE }
}
