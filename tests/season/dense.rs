//! Events found by looking at every quantity in small even steps: slow, and without any idea of ours.

use super::comets::{Elements, geometric_events, stretch};
use tailvane::engine::Engine;
use tailvane::frame::{equatorial_to_ecliptic, separation_rad};
use tailvane::season::event::{Event, EventKind};
use tailvane::sky::Sky;
use tailvane::time::Instant;

/// Joints of the Earth's table lie on this grid, days; a place may step by a kilometre there, which is no event.
const JOINT_DAYS: f64 = 16.0;

/// What the scan watches: angles and distances of the sky itself.
const WATCHED: usize = 7;

fn watched(sky: &Sky) -> [f64; WATCHED] {
    let moon = tailvane::body::moon::geocentric_au(sky.time).expect("within the span");
    let (comet, sun) = (equatorial_to_ecliptic(&sky.axes.sight), equatorial_to_ecliptic(&-sky.observer.position_au));
    let ahead = libm::atan2(sun.x * comet.y - sun.y * comet.x, sun.x * comet.x + sun.y * comet.y);
    [
        sky.observer_from_orbit_plane_rad,
        sky.observer_distance_au,
        sky.elongation_rad,
        sky.phase_angle_rad,
        ahead,
        sky.motion_rad_d,
        separation_rad(&sky.axes.sight, &moon),
    ]
}

/// Name of a kind without its details.
fn name(kind: EventKind) -> &'static str {
    kind.words()
}

/// Every event of the stretch as (name, days), by steps of so many days.
pub fn scan(engine: &mut Engine, [from, to]: [f64; 2], step_days: f64) -> Vec<(&'static str, f64)> {
    let mut found = Vec::new();
    let steps = ((to - from) / step_days) as usize;
    let limit = 30.0_f64.to_radians();
    let mut before: Option<(f64, [f64; WATCHED])> = None;
    let mut slopes = [0.0; WATCHED];
    for k in 0..=steps {
        let days = from + k as f64 * step_days;
        let here = watched(&engine.sky_at(Instant::from_tdb_days(days)).expect("within the span"));
        if let Some((earlier, there)) = before {
            let middle = 0.5 * (earlier + days);
            let crosses = |index: usize, level: f64| (there[index] >= level) != (here[index] >= level);
            if crosses(0, 0.0) {
                found.push(("orbit-plane crossing", middle));
            }
            if crosses(2, limit) {
                let words = if here[2] < limit { "near the Sun begins" } else { "near the Sun ends" };
                found.push((words, middle));
            }
            // Ahead of the Sun jumps from +180 to -180 degrees at opposition.
            if crosses(4, 0.0) {
                let opposite = (here[4] - there[4]).abs() > std::f64::consts::PI;
                found.push((if opposite { "opposition" } else { "conjunction with the Sun" }, middle));
            }
            let at_joint = (earlier / JOINT_DAYS).floor() != (days / JOINT_DAYS).floor();
            for index in [1, 2, 3, 5, 6] {
                let slope = here[index] - there[index];
                if at_joint {
                    continue;
                }
                if slope * slopes[index] < 0.0 {
                    let words = match (index, slope > 0.0) {
                        (1, true) => "least distance",
                        (2, true) => "least elongation",
                        (2, false) => "greatest elongation",
                        (3, true) => "least phase angle",
                        (3, false) => "greatest phase angle",
                        (5, false) => "fastest motion",
                        (6, true) => "Moon nearest",
                        _ => "",
                    };
                    if !words.is_empty() {
                        found.push((words, earlier));
                    }
                }
                slopes[index] = slope;
            }
        }
        before = Some((days, here));
    }
    found
}

/// What the scan found and the search did not, or the other way round, in words. Pairs that lie within two steps of
/// each other are below what a scan sees.
pub fn differences(scanned: &[(&'static str, f64)], events: &[Event], within: [f64; 2], step_days: f64) -> Vec<String> {
    let near = 2.5 * step_days;
    let found: Vec<(&str, f64)> = events
        .iter()
        .filter(|event| event.kind != EventKind::Perihelion)
        .map(|event| (name(event.kind), event.time.tdb_days()))
        .filter(|(_, days)| within[0] + near < *days && *days < within[1] - near)
        .collect();
    let mut taken = vec![false; found.len()];
    let mut wrong = Vec::new();
    for (words, days) in scanned.iter().filter(|(_, days)| within[0] + near < *days && *days < within[1] - near) {
        let matching = (0..found.len())
            .find(|index| !taken[*index] && found[*index].0 == *words && (found[*index].1 - days).abs() < near);
        match matching {
            Some(index) => taken[index] = true,
            None => wrong.push(format!("missed: {words} at {days:.5}")),
        }
    }
    for (index, (words, days)) in found.iter().enumerate().filter(|(index, _)| !taken[*index]) {
        let doubles = |other: &(&str, f64)| (other.1 - days).abs() < 2.0 * near;
        let is_close_pair = found.iter().enumerate().any(|(at, other)| at != index && !taken[at] && doubles(other));
        if !is_close_pair {
            wrong.push(format!("doubled or false: {words} at {days:.5}"));
        }
    }
    wrong
}

/// Random orbits from a fixed seed: every inclination, q from 0.05 to 4 au, e from 0 to 1.2.
pub fn orbits(count: usize) -> Vec<Elements> {
    let mut state = 0x9e37_79b9_7f4a_7c15_u64;
    let mut chance = || {
        state = state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        (state >> 11) as f64 / (1_u64 << 53) as f64
    };
    (0..count)
        .map(|_| {
            let q = 0.05 * libm::pow(80.0, chance());
            let e = match chance() {
                c if c < 0.4 => 1.0,
                c if c < 0.6 => 1.0 + 0.2 * chance(),
                // Shorter periods than a month are refused.
                _ => chance().max(1.0 - 4.9 * q),
            };
            let inclination = libm::acos(2.0 * chance() - 1.0).to_degrees();
            let (peri, node) = (360.0 * chance(), 360.0 * chance());
            let day = 2_451_545.0 - 30_000.0 + 60_000.0 * chance();
            Elements { numbers: [q, e, inclination, peri, node], perihelion_time: format!("JD {day:.3} TDB") }
        })
        .collect()
}

/// Compares search and scan over `days` about the perihelion of each orbit; everything wrong, in words.
pub fn compare(orbits: &[Elements], days: f64, step_days: f64) -> (usize, Vec<String>) {
    let (mut seen, mut wrong) = (0, Vec::new());
    for elements in orbits {
        let mut engine = elements.engine();
        let middle = engine.orbit().perihelion_time().tdb_days();
        let within = [middle - 0.5 * days, middle + 0.5 * days];
        let events = geometric_events(&engine, stretch(within[0], within[1]));
        let scanned = scan(&mut engine, within, step_days);
        seen += scanned.len();
        wrong.extend(
            differences(&scanned, &events, within, step_days).iter().map(|words| format!("{elements:?}: {words}")),
        );
    }
    (seen, wrong)
}
