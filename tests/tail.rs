//! Ions and dust against outside truth: 80-digit arithmetic, SPICE and ERFA, a published neck-line.
//!
//! Each comparison is a function of a fault, so that every test of a planted fault asks the same questions as the
//! honest one.

#[path = "truth/cases.rs"]
#[allow(dead_code, reason = "each test binary uses its part")]
mod cases;
#[path = "truth/rows.rs"]
mod rows;
#[path = "tail/curves.rs"]
mod curves;
#[path = "tail/grains.rs"]
mod grains;
#[path = "tail/inverse.rs"]
mod inverse;
#[path = "tail/ions.rs"]
mod ions;
#[path = "tail/neck_line.rs"]
mod neck_line;

use rows::Row;
use tailvane::body::observer::Observer;
use tailvane::engine::Engine;
use tailvane::orbit::elements::Elements;
use tailvane::time::{Instant, Stamp};

/// Elements with the perihelion typed in any form of date.
fn elements(q_au: f64, e: f64, angles_deg: [f64; 3], perihelion: &str) -> Elements {
    let [inclination_deg, ascending_node_deg, argument_of_perihelion_deg] = angles_deg;
    Elements {
        perihelion_distance_au: q_au,
        eccentricity: e,
        inclination_deg,
        ascending_node_deg,
        argument_of_perihelion_deg,
        perihelion_time: perihelion.parse().expect("a date"),
        epoch: None,
        nongravitational: None,
    }
}

/// The geocentric engine of a published or invented orbit.
fn engine(elements: Elements) -> Engine {
    Engine::new(cases::plan(elements, Observer::Geocentre)).expect("a sound orbit")
}

fn instant(typed: &str) -> Instant {
    typed.parse::<Stamp>().expect("a date").instant()
}

/// C/2004 F4, JPL small-body table, solution JPL 33.
fn c2004_f4() -> Engine {
    engine(elements(0.168_266_38, 0.999_291_99, [63.164_57, 222.778_07, 332.785_99], "2004-04-17.08998 TT"))
}

/// Elements of a row, in the columns that the tables share.
fn row_elements(row: &Row, perihelion: &str) -> Elements {
    let [q, e, inclination, node, argument] = row.numbers([
        "perihelion_distance_au",
        "eccentricity",
        "inclination_deg",
        "ascending_node_deg",
        "argument_of_perihelion_deg",
    ]);
    elements(q, e, [inclination, node, argument], perihelion)
}

/// Difference of two angles, degrees, at most 180.
fn apart_deg(a_deg: f64, b_deg: f64) -> f64 {
    let turns = (a_deg - b_deg) / 360.0;
    (turns - turns.round()).abs() * 360.0
}
