//! The ion axis against SPICE and ERFA (tests/truth/make_ion.py) and closed forms; the wedge and its cautions.

use crate::cases::{Case, Fault as SkyFault, cases};
use crate::rows::{Row, table};
use crate::{apart_deg, c2004_f4, engine, instant, row_elements};
use std::collections::BTreeMap;
use tailvane::body::KM_S_PER_AU_D;
use tailvane::caution::Caution;
use tailvane::orbit::conic::{Orbit, SUN_GM_AU3_D2};
use tailvane::sky::Sky;
use tailvane::tail::grain::Vista;
use tailvane::tail::ion::{Axis, LEAST_REACH_RAD, Wedge};
use tailvane::tail::law::Tails;

/// What is done wrong on purpose.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Fault {
    None,
    /// w rhat + v: the tail runs ahead.
    Ahead,
    /// A wind 1 km/s faster.
    Wind,
    /// No aberration at all.
    Radial,
}

fn axis(vista: &Vista, wind_km_s: f64, fault: Fault) -> Axis {
    let mut vista = vista.clone();
    match fault {
        Fault::Ahead => vista.nucleus.velocity_au_d *= -1.0,
        Fault::Radial => vista.nucleus.velocity_au_d *= 0.0,
        Fault::Wind => return Axis::of(&vista, wind_km_s + 1.0),
        Fault::None => {}
    }
    Axis::of(&vista, wind_km_s)
}

/// The worst miss of one row, as a multiple of its bar.
fn miss(row: &Row, case: &Case, sky: &Sky, fault: Fault) -> f64 {
    let orbit = Orbit::new(&crate::cases::elements(&case.orbit)).expect("a sound orbit");
    let got = axis(&Vista::of(&orbit, sky), row.number("wind_km_s"), fault);
    let distance = case.truth.number("observer_distance_au");
    let place = 0.1 / 3600.0 * (0.1 / distance).max(1.0);
    let pole = place * case.truth.number("declination_deg").to_radians().tan().abs();
    let bar = |sine: f64| 0.001_f64.max(place / sine) + pole;
    let [sine_axis, sine_antisolar] = row.numbers(["sine_of_axis_to_sight", "sine_of_antisolar_to_sight"]);
    // What 4 ms do to the velocity of this comet, as an angle of the flow.
    let r = case.truth.number("sun_distance_au");
    let pull_km_s_d = SUN_GM_AU3_D2 / (r * r) * KM_S_PER_AU_D;
    let late_deg = (5e-8 * pull_km_s_d / row.number("wind_km_s")).to_degrees();
    let angle = got.position_angle_rad.map_or(f64::INFINITY, f64::to_degrees);
    let from = got.from_antisolar_rad.map_or(f64::INFINITY, f64::to_degrees);
    let misses = [
        apart_deg(angle, row.number("axis_position_angle_deg")) / (bar(sine_axis) + late_deg / sine_axis),
        apart_deg(from, row.number("angle_from_antisolar_deg"))
            / (bar(sine_axis) + bar(sine_antisolar) + late_deg / sine_axis),
        (got.aberration_rad.to_degrees() - row.number("aberration_deg")).abs() / (1e-5 + late_deg),
    ];
    misses.into_iter().fold(0.0, |worst: f64, miss| if miss.is_nan() { f64::INFINITY } else { worst.max(miss) })
}

/// Rows of ion.csv with the case and sky they belong to.
fn skies() -> Vec<(Row, Case, Sky)> {
    let mut cases: BTreeMap<String, (Case, Sky)> = BTreeMap::new();
    for case in crate::cases::cases() {
        let sky = case.sky(SkyFault::None);
        cases.insert(case.orbit.text("case").to_owned(), (case, sky));
    }
    table("ion.csv")
        .into_iter()
        .map(|row| {
            let (case, sky) = &cases[row.text("case")];
            let case = Case { orbit: case.orbit.clone(), truth: case.truth.clone() };
            (row, case, sky.clone())
        })
        .collect()
}

#[test]
fn the_ion_axis_equals_spice_and_erfa() {
    let mut worst: f64 = 0.0;
    let skies = skies();
    for (row, case, sky) in &skies {
        let miss = miss(row, case, sky, Fault::None);
        worst = worst.max(miss);
        assert!(miss <= 1.0, "{miss} of the bar: {} {row:?}", case.name());
    }
    println!("ion.csv: {} axes, worst {worst:.3} of the bar", skies.len());
    assert_eq!(skies.len(), 3 * cases().len());
}

#[test]
fn every_planted_fault_of_the_axis_is_seen() {
    let skies = skies();
    for fault in [Fault::Ahead, Fault::Wind, Fault::Radial] {
        let seen = skies.iter().filter(|(row, case, sky)| miss(row, case, sky, fault) > 1.0).count();
        assert!(seen * 100 >= skies.len() * 99, "{fault:?} is seen in {seen} of {} rows only", skies.len());
    }
}

#[test]
fn worked_aberrations_come_out_in_every_printed_digit() {
    for row in table("worked_ion.csv") {
        let mut engine = engine(row_elements(&row, row.text("perihelion_time")));
        let sky = engine.sky_at(instant(row.text("time"))).expect("within the span");
        let axis = Axis::of(&engine.vista(&sky), row.number("wind_km_s"));
        let [outward, across, aberration] = row.numbers(["outward_km_s", "across_km_s", "aberration_deg"]);
        let closed = libm::atan2(across, row.number("wind_km_s") - outward).to_degrees();
        assert!((closed - aberration).abs() < 0.001, "the table disagrees with itself: {row:?}");
        assert!((axis.aberration_rad.to_degrees() - aberration).abs() < 0.001, "{axis:?} {row:?}");
        if let Some(angle) = row.number_if_any("position_angle_deg") {
            let got = axis.position_angle_rad.expect("an angle").to_degrees();
            let antisolar = sky.antisolar_position_angle_rad.expect("an angle").to_degrees();
            assert!(apart_deg(got, antisolar) < 0.02 && apart_deg(got, angle) < 0.015, "{got} {antisolar} {angle}");
        }
    }
}

#[test]
fn at_a_plane_crossing_the_wedge_keeps_its_width_and_says_that_the_wind_cannot_be_read() {
    let mut engine = c2004_f4();
    let crossing = engine.sky_at(instant("2004-05-02.9289 TT")).expect("within the span");
    let wedge = Wedge::of(&engine.vista(&crossing), &Tails::default());
    let from_antisolar = wedge.axis.from_antisolar_rad.expect("an angle").to_degrees();
    assert!(from_antisolar.abs() < 0.01, "{from_antisolar}");
    assert!(matches!(wedge.cautions[..], [Caution::WindUnreadable { .. }]), "{:?}", wedge.cautions);
    assert_eq!(wedge.reach_rad, Some([-LEAST_REACH_RAD, LEAST_REACH_RAD]));
    // Two weeks earlier the plane is open, the winds spread beyond three degrees, and nothing is in doubt.
    let before = engine.sky_at(instant("2004-04-18.9289 TT")).expect("within the span");
    let wedge = Wedge::of(&engine.vista(&before), &Tails::default());
    assert!(wedge.cautions.is_empty(), "{:?}", wedge.cautions);
    let [falling, rising] = wedge.reach_rad.expect("an axis");
    assert!(falling <= -LEAST_REACH_RAD && rising >= LEAST_REACH_RAD && rising - falling > 2.1 * LEAST_REACH_RAD);
}

#[test]
fn every_wind_of_the_range_lies_in_the_wedge() {
    let laws = Tails::default();
    for case in cases() {
        let sky = case.sky(SkyFault::None);
        let orbit = Orbit::new(&crate::cases::elements(&case.orbit)).expect("a sound orbit");
        let vista = Vista::of(&orbit, &sky);
        let wedge = Wedge::of(&vista, &laws);
        let ([falling, rising], middle) =
            (wedge.reach_rad.expect("an axis"), wedge.axis.position_angle_rad.expect("an axis"));
        for wind in [300.0, 350.0, 420.0, 500.0, 650.0, 800.0] {
            let angle = Axis::of(&vista, wind).position_angle_rad.expect("an axis");
            let from = tailvane::frame::half_turn(angle - middle);
            assert!(falling - 1e-12 <= from && from <= rising + 1e-12, "{}: {wind} {from} {wedge:?}", case.name());
        }
    }
}
