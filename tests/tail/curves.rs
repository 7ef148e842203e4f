//! Syndynes and synchrones: exact points, smooth lines, and no point that cannot be.

use crate::{elements, engine, instant};
use tailvane::engine::Engine;
use tailvane::sky::Sky;
use tailvane::tail::curve::{Curve, Fineness, Held, Point, chosen, synchrone, syndyne};
use tailvane::tail::grain::{Grain, Vista};
use tailvane::tail::law::Tails;

const FINE: Fineness = Fineness { tolerance_rad: 2e-5, field_tan: 0.3 };

fn skies() -> Vec<(Engine, Sky)> {
    let orbits = [(0.05, 0.9999, 60.0), (0.6, 1.0, 130.0), (1.2, 0.65, 20.0), (0.006, 1.0, 140.0), (1.0, 0.0, 10.0)];
    let mut skies = Vec::new();
    for (q, e, inclination) in orbits {
        for days in [-30.0, 4.0, 25.0, 90.0] {
            let mut engine = engine(elements(q, e, [inclination, 120.0, 30.0], "2031-03-04.5 TT"));
            let sky = engine.sky_at(instant("2031-03-04.5 TT").plus_days(days)).expect("within the span");
            skies.push((engine, sky));
        }
    }
    skies
}

/// Distance of a place from a line through points.
fn from_line(place: [f64; 2], line: &[Point]) -> f64 {
    let from = |a: &Point, b: &Point| {
        let [dx, dy] = [b.offset[0] - a.offset[0], b.offset[1] - a.offset[1]];
        let [px, py] = [place[0] - a.offset[0], place[1] - a.offset[1]];
        let part = ((px * dx + py * dy) / (dx * dx + dy * dy).max(1e-300)).clamp(0.0, 1.0);
        (px - part * dx).hypot(py - part * dy)
    };
    line.windows(2).map(|pair| from(&pair[0], &pair[1])).fold(f64::INFINITY, f64::min)
}

fn grain_of(vista: &Vista, beta: f64, age_days: f64) -> Option<[f64; 2]> {
    vista.offset(&vista.survivor(beta, &vista.release(age_days), age_days)?)
}

/// The greatest distance of the true curve, walked densely, from the drawn one, within the field.
fn worst_miss(vista: &Vista, curve: &Curve, grain_at: impl Fn(f64) -> (f64, f64)) -> f64 {
    let mut worst: f64 = 0.0;
    for step in 0..=3000 {
        let (beta, age) = grain_at(f64::from(step) / 3000.0);
        let Some(place) = grain_of(vista, beta, age) else { continue };
        if place[0].hypot(place[1]) < FINE.field_tan {
            let miss = curve.pieces.iter().map(|piece| from_line(place, piece)).fold(f64::INFINITY, f64::min);
            worst = worst.max(miss);
        }
    }
    worst
}

#[test]
fn the_drawn_curve_keeps_within_its_tolerance_of_a_dense_walk() {
    let (mut compared, mut most) = (0, 0.0_f64);
    for (engine, sky) in skies() {
        let vista = engine.vista(&sky);
        for beta in [0.003, 0.1, 0.8, 1.4] {
            let curve = syndyne(&vista, beta, [0.0, 150.0], &FINE);
            let worst = worst_miss(&vista, &curve, |part| (beta, 150.0 * part * part));
            assert!(worst < FINE.tolerance_rad, "syndyne {beta}: {worst:e}, {:?}", sky.days_from_perihelion);
            (compared, most) = (compared + 1, most.max(worst));
        }
        for age in [2.0, 40.0, 150.0] {
            let curve = synchrone(&vista, age, [0.001, 2.0], &FINE);
            let worst = worst_miss(&vista, &curve, |part| (0.001 + 1.999 * part * part, age));
            assert!(worst < FINE.tolerance_rad, "synchrone {age}: {worst:e}, {:?}", sky.days_from_perihelion);
            (compared, most) = (compared + 1, most.max(worst));
        }
    }
    println!("{compared} curves, worst {most:.2e} of a tolerance of {:.0e}", FINE.tolerance_rad);
    assert!(compared > 100);
}

#[test]
fn a_dropped_point_in_the_middle_of_a_curve_would_be_seen() {
    let (engine, sky) = &skies()[6];
    let vista = engine.vista(sky);
    let mut curve = syndyne(&vista, 0.8, [0.0, 150.0], &FINE);
    let piece = &mut curve.pieces[0];
    let middle = piece.len() / 2;
    piece.drain(middle - 1..=middle + 1);
    let worst = worst_miss(&vista, &curve, |part| (0.8, 150.0 * part * part));
    assert!(worst > FINE.tolerance_rad, "{worst:e}");
}

#[test]
fn every_point_is_the_exact_grain_it_names_and_pieces_run_on_in_order() {
    for (engine, sky) in skies() {
        let vista = engine.vista(&sky);
        for curve in chosen(&vista, &Tails::default(), &FINE) {
            for piece in &curve.pieces {
                assert!(piece.len() >= 2);
                for point in piece {
                    let place = vista.grain(&Grain::released(point.beta, point.age_days)).position_au;
                    assert_eq!(vista.offset(&place), Some(point.offset));
                    match curve.held {
                        Held::Beta(beta) => assert_eq!(point.beta, beta),
                        Held::Age { days, released } => {
                            assert_eq!(point.age_days, days);
                            assert_eq!(released, vista.seen.plus_days(-days));
                        }
                    }
                }
                for pair in piece.windows(2) {
                    let rises = match curve.held {
                        Held::Beta(_) => pair[1].age_days > pair[0].age_days,
                        Held::Age { .. } => pair[1].beta > pair[0].beta,
                    };
                    assert!(rises, "{pair:?}");
                }
            }
        }
    }
}

#[test]
fn no_curve_shows_dust_that_the_sun_has_taken() {
    let mut engine = engine(elements(0.003, 1.0, [50.0, 120.0, 30.0], "2031-03-04.5 TT"));
    let sky = engine.sky_at(instant("2031-03-14.5 TT")).expect("within the span");
    let vista = engine.vista(&sky);
    let curve = syndyne(&vista, 0.01, [0.0, 100.0], &FINE);
    let oldest = curve.pieces.iter().flatten().map(|point| point.age_days).fold(0.0, f64::max);
    assert!(oldest > 8.0 && oldest < 11.0, "{oldest}");
}
