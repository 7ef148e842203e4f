//! How long do exact grains and dust pictures take, how many orbits stand behind a picture, and how grainy is it?
//!
//! `cargo bench --bench grains` prints one line a figure: its name and value. With `--grains FILE` it also writes the
//! timed grains and their ends as doubles (mu, days, place, velocity, end: 11 a grain), which `grains_peers.py` hands to
//! other libraries. Trust the ratios that script prints more than the times.

#[path = "grains/jobs.rs"]
mod jobs;

use jobs::{GRAINS, Jobs, SCENES};
use std::hint::black_box;
use std::time::Instant as Clock;
use tailvane::orbit::conic::{SUN_GM_AU3_D2, propagate_bracketed};

const REPEATS: usize = 31;

fn main() {
    let mut jobs = Jobs::new(0, 0.95);
    let arguments: Vec<String> = std::env::args().collect();
    if let Some(at) = arguments.iter().position(|argument| argument == "--grains") {
        std::fs::write(&arguments[at + 1], grains(&jobs)).expect("a file that can be written");
    }
    report("solve_ns", 1e9 / GRAINS as f64, || {
        black_box(jobs.solve());
    });
    report("see_ns", 1e9 / GRAINS as f64, || {
        black_box(jobs.see());
    });
    for (scene, (name, _)) in SCENES.iter().enumerate() {
        let mut jobs = Jobs::new(scene, 2.0);
        let letter = &name[..1];
        println!("slow_share_{letter} {:.5}", jobs.see() as f64 / GRAINS as f64);
        println!("solves_dragging_{letter} {}", jobs.render(200_000, 2));
        println!("print_{letter} {}", jobs.print());
        report(&format!("dragging_ms_{letter}"), 1e3, || {
            black_box(jobs.render(200_000, 2));
        });
        println!("solves_still_{letter} {}", jobs.render(1_000_000, 1));
        report(&format!("still_ms_{letter}"), 1e3, || {
            black_box(jobs.render(1_000_000, 1));
        });
        report(&format!("tone_ms_{letter}"), 1e3, || {
            black_box(jobs.tone());
        });
        noise(letter, &mut jobs);
    }
}

/// Prints the third best of the repeats of `work`, in seconds times `scale`: other work on the machine only adds time.
fn report(name: &str, scale: f64, mut work: impl FnMut()) {
    work();
    let mut times: Vec<f64> = (0..REPEATS)
        .map(|_| {
            let begin = Clock::now();
            work();
            begin.elapsed().as_secs_f64()
        })
        .collect();
    times.sort_by(f64::total_cmp);
    println!("{name} {:.3}", times[2] * scale);
}

/// Relative noise of the picture with a million samples over that of a million random grains of the law with the same
/// bilinear splat: root mean square over the pixels that expect more than 4 such grains.
///
/// What is expected comes from sixty million samples of our own (tests/cloud.rs holds those against grains moved one by
/// one). The noise of random grains is Poisson's through the splat: its kernel's squares add up to (2/3)^2.
fn noise(letter: &str, jobs: &mut Jobs) {
    jobs.render(60_000_000, 1);
    let expected = jobs.cloud.picture().clone();
    jobs.render(1_000_000, 1);
    let picture = jobs.cloud.picture();
    let (mut ours, mut random, mut pixels) = (0.0, 0.0, 0.0);
    for y in 0..picture.height() {
        for (cell, expected_cell) in picture.line(y).iter().zip(expected.line(y)) {
            let grains = f64::from(*expected_cell) / expected.whole() * 1e6;
            if grains > 4.0 {
                let off = f64::from(*cell) / f64::from(*expected_cell) - 1.0;
                ours += off * off;
                random += 4.0 / 9.0 / grains;
                pixels += 1.0;
            }
        }
    }
    println!("noise_{letter} {:.4}", f64::sqrt(ours / pixels));
    println!("noise_random_{letter} {:.4}", f64::sqrt(random / pixels));
}

/// The grains and their ends by the slow solver, as little-endian doubles.
fn grains(jobs: &Jobs) -> Vec<u8> {
    let mut bytes = Vec::new();
    for flight in &jobs.flights {
        let mu = SUN_GM_AU3_D2 * (1.0 - flight.beta);
        let end = propagate_bracketed(mu, &flight.start, flight.days).position_au;
        let start = &flight.start;
        let numbers = [mu, flight.days].into_iter().chain(start.position_au.iter().copied());
        let numbers = numbers.chain(start.velocity_au_d.iter().copied()).chain(end.iter().copied());
        numbers.for_each(|number: f64| bytes.extend(number.to_le_bytes()));
    }
    bytes
}
