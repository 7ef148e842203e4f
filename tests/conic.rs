//! Two-body motion against 50 and more digits (tests/truth/make_conic.py), and worked examples.

#[path = "truth/rows.rs"]
mod rows;

use nalgebra::{Matrix3, Vector3};
use rows::{Row, table};
use std::f64::consts::TAU;
use tailvane::body::State;
use tailvane::frame::equatorial_to_ecliptic;
use tailvane::orbit::conic::{Orbit, SUN_GM_AU3_D2, propagate, propagate_bracketed, propagate_with_response};
use tailvane::orbit::elements::Elements;
use tailvane::time::Instant;

/// An orbit whose perihelion lies on the ecliptic x axis, passed at J2000.0, moving to ecliptic y.
fn plain_orbit(q_au: f64, e: f64) -> Orbit {
    let elements = Elements {
        perihelion_distance_au: q_au,
        eccentricity: e,
        inclination_deg: 0.0,
        ascending_node_deg: 0.0,
        argument_of_perihelion_deg: 0.0,
        perihelion_time: "JD 2451545.0 TT".parse().expect("a date"),
        epoch: None,
        nongravitational: None,
    };
    Orbit::new(&elements).expect("a sound orbit")
}

/// Place and velocity in ecliptic axes, and the true anomaly, `dt_days` after perihelion.
fn perifocal(q_au: f64, e: f64, dt_days: f64) -> (Vector3<f64>, Vector3<f64>, f64) {
    let orbit = plain_orbit(q_au, e);
    let place = orbit.place_at(Instant::from_tdb_days(dt_days));
    (
        equatorial_to_ecliptic(&place.state.position_au),
        equatorial_to_ecliptic(&place.state.velocity_au_d),
        orbit.true_anomaly_rad(&place.state.position_au),
    )
}

fn relative(got: &Vector3<f64>, wanted: &Vector3<f64>) -> f64 {
    (got - wanted).norm() / wanted.norm()
}

/// The bar: 1e-12, or ten times the conditioning of the input where that is worse.
fn bar(conditioning: f64) -> f64 {
    1e-12_f64.max(10.0 * conditioning)
}

fn between(a_rad: f64, b_rad: f64) -> f64 {
    let turns = (a_rad - b_rad) / TAU;
    (turns - turns.round()).abs() * TAU
}

/// The misses of a comparison, as multiples of the bar.
#[derive(Default)]
struct Tally {
    rows: usize,
    worst: f64,
    beyond: Vec<String>,
}

impl Tally {
    fn add(&mut self, miss: f64, which: impl Fn() -> String) {
        self.rows += 1;
        self.worst = self.worst.max(miss);
        if miss > 1.0 || miss.is_nan() {
            self.beyond.push(format!("{miss:.3e} times the bar: {}", which()));
        }
    }

    /// Prints the worst and fails with every row beyond the bar.
    fn settle(self, name: &str) {
        println!("{name}: {} comparisons, worst {:.3} of the bar", self.rows, self.worst);
        assert!(self.beyond.is_empty(), "{name}: {} of {}\n{}", self.beyond.len(), self.rows, self.beyond.join("\n"));
    }
}

/// The worst of place, velocity and anomaly of a row of conic_perihelion.csv, as a multiple of the bar.
fn perihelion_miss(row: &Row, [q, e, dt]: [f64; 3]) -> f64 {
    let (place, velocity, anomaly) = perifocal(q, e, dt);
    let [x, y, vx, vy] = row.numbers(["x_au", "y_au", "vx_au_d", "vy_au_d"]);
    let misses = [
        relative(&place, &Vector3::new(x, y, 0.0)) / bar(row.number("place_conditioning")),
        relative(&velocity, &Vector3::new(vx, vy, 0.0)) / bar(row.number("velocity_conditioning")),
        between(anomaly, row.number("true_anomaly_rad")) / bar(row.number("anomaly_conditioning")),
    ];
    // A number that is not one is the worst miss of all; `max` would drop it.
    misses.into_iter().fold(0.0, |worst: f64, miss| if miss.is_nan() { f64::INFINITY } else { worst.max(miss) })
}

fn perihelion_inputs(row: &Row) -> [f64; 3] {
    row.numbers(["q_au", "e", "dt_days"])
}

#[test]
fn motion_from_perihelion_equals_fifty_digits_for_every_eccentricity() {
    let mut tally = Tally::default();
    for row in table("conic_perihelion.csv") {
        tally.add(perihelion_miss(&row, perihelion_inputs(&row)), || {
            format!("q, e, dt = {:?}", perihelion_inputs(&row))
        });
    }
    tally.settle("conic_perihelion.csv");
}

#[test]
fn a_wrong_eccentricity_or_time_in_the_eleventh_digit_would_be_seen() {
    let rows = table("conic_perihelion.csv");
    // Rows whose own conditioning is worse than the fault cannot show it, nor those just at perihelion.
    let sharp: Vec<&Row> = rows
        .iter()
        .filter(|row| row.number("place_conditioning") < 1e-13 && row.number("true_anomaly_rad").abs() > 0.1)
        .collect();
    assert!(sharp.len() > 200, "{}", sharp.len());
    for row in sharp {
        let [q, e, dt] = perihelion_inputs(row);
        assert!(perihelion_miss(row, [q, e, dt * (1.0 + 1e-10)]) > 1.0, "{q} {e} {dt}");
        assert!(perihelion_miss(row, [q * (1.0 + 1e-10), e, dt]) > 1.0, "{q} {e} {dt}");
        assert!(perihelion_miss(row, [q, e + 1e-9, dt]) > 1.0, "{q} {e} {dt}");
        assert!(perihelion_miss(row, [q, e, -dt]) > 1.0, "{q} {e} {dt}");
    }
}

fn start_state(row: &Row) -> (State, f64, f64) {
    let from = State {
        position_au: Vector3::from(row.numbers(["x0_au", "y0_au", "z0_au"])),
        velocity_au_d: Vector3::from(row.numbers(["vx0_au_d", "vy0_au_d", "vz0_au_d"])),
    };
    (from, SUN_GM_AU3_D2 * (1.0 - row.number("beta")), row.number("dt_days"))
}

/// The worst of place and velocity of a row of conic_state.csv, as a multiple of the bar.
fn state_miss(row: &Row, end: &State) -> f64 {
    let place = Vector3::from(row.numbers(["x_au", "y_au", "z_au"]));
    let velocity = Vector3::from(row.numbers(["vx_au_d", "vy_au_d", "vz_au_d"]));
    let place_miss = relative(&end.position_au, &place) / bar(row.number("place_conditioning"));
    let velocity_miss = relative(&end.velocity_au_d, &velocity) / bar(row.number("velocity_conditioning"));
    if place_miss.is_nan() || velocity_miss.is_nan() { f64::INFINITY } else { place_miss.max(velocity_miss) }
}

#[test]
fn motion_under_pull_push_and_neither_equals_fifty_digits() {
    let mut tally = Tally::default();
    for row in table("conic_state.csv") {
        let (from, mu, days) = start_state(&row);
        for (solver, end) in [("fast", propagate(mu, &from, days)), ("bracketed", propagate_bracketed(mu, &from, days))]
        {
            tally.add(state_miss(&row, &end), || format!("{solver}, {from:?}, beta {}, {days} d", row.text("beta")));
        }
    }
    tally.settle("conic_state.csv");
}

#[test]
fn a_pull_taken_for_a_push_would_be_seen() {
    for row in table("conic_state.csv") {
        let (from, mu, days) = start_state(&row);
        // Without any force, and at beta within a billionth of 1, both signs are the same motion.
        if (1.0 - row.number("beta")).abs() > 1e-8 {
            assert!(state_miss(&row, &propagate(-mu, &from, days)) > 1.0);
        }
        assert!(state_miss(&row, &propagate(mu, &from, -days)) > 1.0);
    }
}

/// The worst of the two derivatives of a row, as a multiple of the bar for derivatives (1e-11, or ten times the conditioning).
fn response_miss(row: &Row, position: &Matrix3<f64>, velocity: &Matrix3<f64>) -> f64 {
    let matrix = |outputs: [&str; 3]| {
        let entries = outputs.map(|output| ["x", "y", "z"].map(|axis| row.number(&format!("d{output}_dv{axis}0"))));
        Matrix3::from_fn(|i, j| entries[i][j])
    };
    let miss = |got: &Matrix3<f64>, wanted: Matrix3<f64>, conditioning: &str| {
        (got - wanted).norm() / wanted.norm() / 1e-11_f64.max(10.0 * row.number(conditioning))
    };
    let place = miss(position, matrix(["x", "y", "z"]), "place_derivative_conditioning");
    let speed = miss(velocity, matrix(["vx", "vy", "vz"]), "velocity_derivative_conditioning");
    if place.is_nan() || speed.is_nan() { f64::INFINITY } else { place.max(speed) }
}

#[test]
fn the_answer_to_the_start_velocity_equals_fifty_digits() {
    let mut tally = Tally::default();
    for row in table("conic_state.csv") {
        let (from, mu, days) = start_state(&row);
        let (end, response) = propagate_with_response(mu, &from, days);
        let which = || format!("{from:?}, beta {}, {days} d", row.text("beta"));
        tally.add(state_miss(&row, &end), which);
        tally.add(response_miss(&row, &response.position, &response.velocity), which);
        // A derivative with rows and columns swapped would be seen, unless it is symmetric.
        let swapped = response_miss(&row, &response.position.transpose(), &response.velocity);
        assert!(swapped > 1.0 || is_symmetric(&response.position), "{}", which());
    }
    tally.settle("derivatives of conic_state.csv");
}

fn is_symmetric(matrix: &Matrix3<f64>) -> bool {
    (matrix - matrix.transpose()).norm() < 1e-10 * matrix.norm()
}

#[test]
fn published_true_anomalies_near_the_parabola_are_met() {
    for row in table("worked_anomaly.csv") {
        let [q, e, dt] = perihelion_inputs(&row);
        let (place, _, anomaly) = perifocal(q, e, dt);
        assert!(between(anomaly, row.number("published_deg").to_radians()).to_degrees() <= 6e-6, "{q} {e} {dt}");
        assert!(between(anomaly, row.number("deg").to_radians()).to_degrees() <= 1e-8, "{q} {e} {dt}");
        assert!((place.norm() - row.number("radius_au")).abs() <= 1e-9, "{q} {e} {dt}");
    }
}

#[test]
fn published_solutions_of_keplers_equation_are_met() {
    for row in table("worked_kepler.csv") {
        let e = row.number("e");
        // Semi-major axis 1: q = 1 - e, and a mean anomaly of M takes M / k days.
        let days = row.number("mean_anomaly_deg").to_radians() / SUN_GM_AU3_D2.sqrt();
        let (place, _, _) = perifocal(1.0 - e, e, days);
        let eccentric_anomaly = libm::atan2(place.y / (1.0 - e * e).sqrt(), place.x + e);
        assert!((eccentric_anomaly.to_degrees() - row.number("eccentric_anomaly_deg")).abs() <= 1e-6, "e {e}");
    }
}

#[test]
fn an_independent_integration_of_pull_and_push_is_met() {
    for row in table("worked_state.csv") {
        let (from, mu, days) = start_state(&row);
        let end = propagate(mu, &from, days);
        let velocity = ["vx_au_d", "vy_au_d", "vz_au_d"].map(|key| row.number_if_any(key));
        let limit_au = if velocity[0].is_some() { 1e-9 } else { 1e-8 };
        for (got, key) in end.position_au.iter().zip(["x_au", "y_au", "z_au"]) {
            assert!((got - row.number(key)).abs() <= limit_au, "beta {}, {key}: {got}", row.text("beta"));
        }
        for (got, wanted) in end.velocity_au_d.iter().zip(velocity) {
            assert!(wanted.is_none_or(|wanted| (got - wanted).abs() <= 1e-11), "beta {}: {got}", row.text("beta"));
        }
    }
}
