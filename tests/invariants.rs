//! Do the laws that every two-body motion obeys hold for ours?
//!
//! Properties over random states, not numbers: they need no outside truth. Units au and days.

use nalgebra::Vector3;
use proptest::prelude::*;
use tailvane::body::State;
use tailvane::body::observer::{Observer, Site};
use tailvane::engine::Engine;
use tailvane::orbit::conic::{Orbit, SUN_GM_AU3_D2, propagate, propagate_bracketed, propagate_with_response};
use tailvane::orbit::elements::{Comet, Elements};
use tailvane::plan::Plan;
use tailvane::sky::LIGHT_AU_D;
use tailvane::sky::dark::{COMET_ABOVE_DEG, SUN_BELOW_DEG};
use tailvane::time::{Instant, Stamp};

/// Components of a place between 0.02 and 5 au.
fn position() -> impl Strategy<Value = Vector3<f64>> {
    (0.02..5.0_f64, -1.0..1.0_f64, 0.0..std::f64::consts::TAU).prop_map(|(r, z, angle)| {
        let level = (1.0 - z * z).sqrt();
        Vector3::new(level * libm::cos(angle), level * libm::sin(angle), z) * r
    })
}

/// Up to 1.5 times the escape speed, in any direction.
fn state() -> impl Strategy<Value = State> {
    (position(), position(), 0.05..1.5_f64).prop_map(|(position_au, direction, share)| State {
        position_au,
        velocity_au_d: direction.normalize() * (share * (2.0 * SUN_GM_AU3_D2 / position_au.norm()).sqrt()),
    })
}

fn mu() -> impl Strategy<Value = f64> {
    prop_oneof![
        8 => (0.0..2.5_f64).prop_map(|beta| SUN_GM_AU3_D2 * (1.0 - beta)),
        1 => Just(0.0),
        1 => Just(SUN_GM_AU3_D2),
    ]
}

fn energy(mu: f64, state: &State) -> f64 {
    0.5 * state.velocity_au_d.norm_squared() - mu / state.position_au.norm()
}

/// What rounding of the two parts of the energy can leave, at both ends.
fn energy_scale(mu: f64, a: &State, b: &State) -> f64 {
    [a, b].iter().map(|s| 0.5 * s.velocity_au_d.norm_squared() + mu.abs() / s.position_au.norm()).sum()
}

fn elements(q: f64, e: f64) -> Elements {
    Elements {
        perihelion_distance_au: q,
        eccentricity: e,
        inclination_deg: 77.0,
        ascending_node_deg: 201.0,
        argument_of_perihelion_deg: 33.0,
        perihelion_time: "2031-03-04.5 TT".parse::<Stamp>().expect("a date"),
        epoch: None,
        nongravitational: None,
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 2000, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn energy_and_angular_momentum_are_kept(start in state(), mu in mu(), days in -2000.0..2000.0_f64) {
        let end = propagate(mu, &start, days);
        let drift = (energy(mu, &end) - energy(mu, &start)).abs();
        prop_assert!(drift <= 1e-11 * energy_scale(mu, &start, &end), "{drift:e}");
        let spin = |s: &State| s.position_au.cross(&s.velocity_au_d);
        let scale = start.position_au.norm() * start.velocity_au_d.norm() + end.position_au.norm() * end.velocity_au_d.norm();
        prop_assert!((spin(&end) - spin(&start)).norm() <= 1e-12 * scale);
    }

    #[test]
    fn reversed_velocity_retraces_the_path(start in state(), mu in mu(), days in 0.01..1000.0_f64) {
        let end = propagate(mu, &start, days);
        let turned = State { position_au: end.position_au, velocity_au_d: -end.velocity_au_d };
        let back = propagate(mu, &turned, days);
        // The way back amplifies the rounding of the middle state by the response of the motion.
        let (_, response) = propagate_with_response(mu, &turned, days);
        let allowed = 1e-13 * (1.0 + end.position_au.norm() + response.position.norm() * end.velocity_au_d.norm() * 10.0
            + response.velocity.norm() * end.position_au.norm() * 10.0);
        prop_assert!((back.position_au - start.position_au).norm() <= allowed,
            "{:e} {allowed:e}", (back.position_au - start.position_au).norm());
    }

    #[test]
    fn the_fast_and_the_bracketed_solver_agree(start in state(), mu in mu(), days in -5000.0..5000.0_f64) {
        let (fast, slow) = (propagate(mu, &start, days), propagate_bracketed(mu, &start, days));
        let miss = (fast.position_au - slow.position_au).norm();
        prop_assert!(miss <= 1e-10 * slow.position_au.norm(), "{miss:e}");
    }

    #[test]
    fn two_legs_are_one(start in state(), mu in mu(), first in -300.0..300.0_f64, second in -300.0..300.0_f64) {
        let middle = propagate(mu, &start, first);
        let two = propagate(mu, &middle, second);
        let one = propagate(mu, &start, first + second);
        let (_, response) = propagate_with_response(mu, &middle, second);
        let allowed = 1e-13 * (1.0 + one.position_au.norm() + response.position.norm() * middle.velocity_au_d.norm() * 10.0
            + response.velocity.norm() * middle.position_au.norm() * 10.0);
        prop_assert!((two.position_au - one.position_au).norm() <= allowed);
    }

    #[test]
    fn motion_runs_smoothly_through_the_parabola(q in 0.005..5.0_f64, days in -3000.0..3000.0_f64) {
        let time = Instant::from_tdb_days(elements(q, 1.0).perihelion_time.instant().tdb_days() + days);
        let at = |e: f64| Orbit::new(&elements(q, e)).expect("an orbit").place_at(time).state.position_au;
        // Central second difference in e: what a jump at e = 1 would leave.
        let step = 1e-9;
        let jump = (at(1.0 + step) - at(1.0) * 2.0 + at(1.0 - step)).norm();
        prop_assert!(jump <= 2e-13 * at(1.0).norm(), "{jump:e}");
        let slope = (at(1.0 + step) - at(1.0 - step)).norm();
        prop_assert!(slope <= 1e-4 * at(1.0).norm());
    }

    #[test]
    fn no_orbit_and_no_time_span_gives_a_number_that_is_not_one(
        q in 0.001..100.0_f64, e in 0.0..10.0_f64, exponent in -6.0..9.0_f64, sign in prop::bool::ANY
    ) {
        let days = libm::pow(10.0, exponent) * if sign { 1.0 } else { -1.0 };
        let orbit = Orbit::new(&elements(q, e)).expect("an orbit");
        let place = orbit.place_at(orbit.perihelion_time().plus_days(days));
        prop_assert!(place.state.position_au.iter().chain(place.state.velocity_au_d.iter()).all(|x| x.is_finite()));
        prop_assert!(place.state.position_au.norm() >= q * (1.0 - 1e-12));
        prop_assert!(orbit.true_anomaly_rad(&place.state.position_au).abs() <= std::f64::consts::PI);
    }
}

/// An invented comet near the Earth and the Sun, seen from the geocentre.
fn engine() -> Engine {
    let comet = Comet { name: "Invented".into(), elements: elements(0.3, 1.0002), brightness: Vec::new() };
    Engine::new(Plan::from(comet)).expect("a plan")
}

proptest! {
    #![proptest_config(ProptestConfig { failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn the_light_seen_left_the_comet_one_light_time_ago(days in 11_000.0..11_800.0_f64) {
        let mut engine = engine();
        let sky = engine.sky_at(Instant::from_tdb_days(days)).expect("a date in the span");
        let there = engine.orbit().place_at(sky.time.plus_days(-sky.light_time_days)).state;
        // A time held to 2e-12 d (TDB days from J2000) leaves a comet of 0.1 au/d that far off.
        prop_assert!((there.position_au - sky.comet.position_au).norm() < 1e-12);
        prop_assert!((there.velocity_au_d - sky.comet.velocity_au_d).norm() < 1e-13);
        let distance = (sky.comet.position_au - sky.observer.position_au).norm();
        prop_assert!((distance / LIGHT_AU_D - sky.light_time_days).abs() < 1e-15);
    }

    #[test]
    fn a_date_gives_the_same_sky_whatever_was_asked_before(days in 11_000.0..11_800.0_f64, step in -3.0..3.0_f64) {
        let time = Instant::from_tdb_days(days);
        let fresh = engine().sky_at(time).expect("a date in the span");
        let mut engine = engine();
        engine.sky_at(time.plus_days(step)).expect("a date in the span");
        let after = engine.sky_at(time).expect("a date in the span");
        prop_assert_eq!(fresh, after);
    }
}

#[test]
fn the_quick_altitudes_of_a_day_are_the_exact_ones() {
    // A site at every latitude; comets from 0.05 au outward. The bar is the 0.01 degrees of the altitudes themselves.
    for (latitude_deg, q) in [(37.1, 0.3), (-67.0, 1.2), (89.9, 0.7), (0.0, 0.98)] {
        let site = Site { name: String::new(), longitude_deg: 23.4, latitude_deg, height_m: 640.0 };
        let comet = Comet { name: "Invented".into(), elements: elements(q, 1.0002), brightness: Vec::new() };
        let mut engine = Engine::new(Plan { observer: Observer::Site(site), ..Plan::from(comet) }).expect("a plan");
        for step in 0..40 {
            let middle = Instant::from_tdb_days(11_300.0 + 13.7 * f64::from(step));
            let windows = engine.dark_windows(middle).expect("a site");
            for window in windows {
                for (time, above_deg) in [(window.begin, COMET_ABOVE_DEG), (window.end, COMET_ABOVE_DEG)] {
                    let site = engine.sky_at(time).expect("within the span").site.expect("a site");
                    let (comet, sun) = (site.altitude_rad.to_degrees(), site.sun_altitude_rad.to_degrees());
                    let cut = (time.tdb_days() - middle.tdb_days()).abs() > 0.4999;
                    let at_edge = (comet - above_deg).abs() < 0.01 || (sun - SUN_BELOW_DEG).abs() < 0.01;
                    assert!(cut || at_edge, "{latitude_deg}: comet {comet}, Sun {sun}");
                }
                let highest = engine.sky_at(window.highest_at).expect("within the span").site.expect("a site");
                assert!((highest.altitude_rad.to_degrees() - window.highest_deg).abs() < 0.01);
            }
        }
    }
}
