//! The season: events against SPICE and DE440, against what was seen, and against scans in small steps; windows of sunward
//! dust against the dust itself; slices, changes and refusals.

#[path = "season/comets.rs"]
mod comets;
#[path = "season/dense.rs"]
mod dense;
#[path = "truth/rows.rs"]
mod rows;

use comets::{Elements, geometric_events, stretch, whole};
use rows::{Row, table};
use std::f64::consts::PI;
use tailvane::body::observer::{Observer, Site};
use tailvane::engine::Engine;
use tailvane::season::event::{Event, EventKind};
use tailvane::season::series::Curve;
use tailvane::season::stretch::{LONGEST_DAYS, Stretch};
use tailvane::season::sunward::Origin;
use tailvane::tail::perspective::Verdict;
use tailvane::time::{Instant, Stamp};

const MINUTE: f64 = 1.0 / 1440.0;
/// A minute of a step.
const STEP: f64 = MINUTE;

fn elements(row: &Row) -> Elements {
    let numbers = row.numbers([
        "perihelion_distance_au",
        "eccentricity",
        "inclination_deg",
        "argument_of_perihelion_deg",
        "ascending_node_deg",
    ]);
    Elements { numbers, perihelion_time: row.text("perihelion_time").to_owned() }
}

/// Everything in which the seasons of the truth differ from ours, after `fault` changed our elements and events.
fn against_truth(fault: impl Fn(&mut Elements), spoil: impl Fn(&mut Vec<Event>)) -> Vec<String> {
    let truth = table("season_events.csv");
    let mut wrong = Vec::new();
    let mut worst = (0.0, String::new());
    for row in table("season_orbits.csv") {
        let comet = row.text("comet");
        let mut ours = elements(&row);
        fault(&mut ours);
        let ends = row.numbers(["from_jd_tdb", "to_jd_tdb"]).map(|jd| jd - 2_451_545.0);
        let mut events = geometric_events(&ours.engine(), stretch(ends[0], ends[1]));
        spoil(&mut events);
        let mut kinds: Vec<&str> = truth.iter().map(|row| row.text("event")).collect();
        kinds.sort_unstable();
        kinds.dedup();
        for kind in kinds {
            let theirs: Vec<&Row> =
                truth.iter().filter(|row| row.text("comet") == comet && row.text("event") == kind).collect();
            let found: Vec<&Event> = events.iter().filter(|event| event.kind.words() == kind).collect();
            if theirs.len() != found.len() {
                wrong.push(format!("{comet}: {} of {kind}, not {}", found.len(), theirs.len()));
                continue;
            }
            for (row, event) in theirs.iter().zip(found) {
                let off = (event.time.tdb_days() - (row.number("jd_tdb") - 2_451_545.0)).abs();
                if off > worst.0 && kind != "fastest motion" {
                    worst = (off, format!("{comet} {kind}"));
                }
                // The fastest motion of a slow far comet can be so flat that the Earth's velocity table moves it: its rate
                // of change is good to 2e-9 au/d^2, 1e-7 of the motion a day, over a bend of 1e-4 of it.
                let bar = if kind == "fastest motion" { 2.0 * MINUTE } else { MINUTE };
                if off > bar {
                    wrong.push(format!("{comet}: {kind} {:.2} min off", off / MINUTE));
                }
                // Angles to the 0.001 deg of the sky table, the Moon's series to 0.003; distances and rates in proportion.
                let tolerance = |value: f64| match event.unit {
                    "deg" if kind == "Moon nearest" => 0.003,
                    "deg" => 0.001,
                    // The truth's rate is a mean over an hour.
                    "arcsec/min" => 3e-5 * value,
                    _ => 1e-6 * value,
                };
                // The truth of a crossing has no value; ours is a direction.
                if let (Some(value), Some(ours)) = (row.number_if_any("value"), event.value)
                    && (value - ours).abs() > tolerance(value)
                {
                    wrong.push(format!("{comet}: {kind} is {ours}, not {value}"));
                }
            }
        }
    }
    println!("worst: {:.1} s, {}", worst.0 * 86_400.0, worst.1);
    wrong
}

#[test]
fn event_times_agree_with_spice_and_de440_to_a_minute() {
    let wrong = against_truth(|_| {}, |_| {});
    assert!(wrong.is_empty(), "{wrong:#?}");
}

#[test]
fn a_planted_fault_of_orbit_or_list_is_seen() {
    assert!(!against_truth(|elements| elements.numbers[4] += 0.002, |_| {}).is_empty());
    let lost = against_truth(|_| {}, |events| events.retain(|event| event.kind != EventKind::LeastElongation));
    assert!(!lost.is_empty());
    let twice = against_truth(|_| {}, |events| events.extend(events.last().cloned()));
    assert!(!twice.is_empty());
}

#[test]
fn crossings_of_published_comets_fall_where_they_were_seen() {
    for row in table("crossings.csv") {
        let published = row.number("jd_tt") - 2_451_545.0;
        let events = geometric_events(&elements(&row).engine(), stretch(published - 30.0, published + 30.0));
        let off = events
            .iter()
            .filter(|event| matches!(event.kind, EventKind::OrbitPlaneCrossing { .. }))
            .map(|event| (event.time.tdb_days() - published).abs())
            .fold(f64::INFINITY, f64::min);
        assert!(off <= row.number("tolerance_days"), "{} ({}): {off}", row.text("comet"), row.text("source"));
    }
}

#[test]
fn position_angles_meet_at_a_crossing_and_the_event_says_how() {
    let mut kinds = [0, 0];
    for row in table("season_orbits.csv") {
        let ends = row.numbers(["from_jd_tdb", "to_jd_tdb"]).map(|jd| jd - 2_451_545.0);
        let mut engine = elements(&row).engine();
        for event in geometric_events(&engine, stretch(ends[0], ends[1])) {
            let EventKind::OrbitPlaneCrossing { opposite } = event.kind else { continue };
            let sky = engine.sky_at(event.time).expect("within the span");
            let (Some(antisolar), Some(back)) =
                (sky.antisolar_position_angle_rad, sky.negative_velocity_position_angle_rad)
            else {
                continue;
            };
            let apart = (antisolar - back + 2.0 * PI).rem_euclid(2.0 * PI);
            let from = if opposite { PI } else { 0.0 };
            let off = (apart - from + PI).rem_euclid(2.0 * PI) - PI;
            // A millidegree, over the sine of the angle to the line of sight.
            let sine = libm::sin(sky.phase_angle_rad).min(libm::sin(sky.negative_velocity_sight_angle_rad));
            assert!(off.abs() * sine < 1.8e-5, "{}: {off}", row.text("comet"));
            kinds[usize::from(opposite)] += 1;
        }
    }
    assert!(kinds[0] > 2 && kinds[1] > 2, "{kinds:?}");
}

#[test]
fn a_scan_in_ten_minute_steps_finds_the_same_events() {
    let (seen, wrong) = dense::compare(&dense::orbits(4), 200.0, 10.0 * STEP);
    assert!(seen > 60, "{seen}");
    assert!(wrong.is_empty(), "{wrong:#?}");
}

#[test]
fn the_scan_sees_an_event_left_out_and_one_made_up() {
    let elements = &dense::orbits(1)[0];
    let mut engine = elements.engine();
    let middle = engine.orbit().perihelion_time().tdb_days();
    let within = [middle - 50.0, middle + 50.0];
    let mut events = geometric_events(&engine, stretch(within[0], within[1]));
    events.retain(|event| event.kind != EventKind::Perihelion);
    let scanned = dense::scan(&mut engine, within, 10.0 * STEP);
    let lost = events.remove(1);
    assert_eq!(dense::differences(&scanned, &events, within, 10.0 * STEP).len(), 1);
    events.push(lost.clone());
    events.push(Event { time: lost.time.plus_days(5.0), ..lost });
    assert_eq!(dense::differences(&scanned, &events, within, 10.0 * STEP).len(), 1);
}

/// A comet whose dust gets sunward by perspective near a crossing, with ejection for longer, and not at all before.
fn dusty() -> Elements {
    Elements { numbers: [0.62, 1.0003, 63.0, 118.0, 62.0], perihelion_time: "2031-02-22.18374 TT".to_owned() }
}

const DUSTY_DAYS: [f64; 2] = [11_500.0, 11_790.0];

fn origin(engine: &mut Engine, time: Instant) -> Option<Origin> {
    let sky = engine.sky_at(time).expect("within the span");
    match engine.tails_at(&sky).perspective.verdict {
        Verdict::Perspective(_) => Some(Origin::Perspective),
        Verdict::NeedsEjection(_) => Some(Origin::Ejection),
        _ => None,
    }
}

#[test]
fn windows_of_sunward_dust_agree_with_the_dust_inside_outside_and_at_their_ends() {
    let mut engine = dusty().engine();
    let season = whole(engine.season_search(stretch(DUSTY_DAYS[0], DUSTY_DAYS[1])));
    assert!(season.sunward.iter().any(|window| window.origin == Origin::Perspective), "{:?}", season.sunward);
    let said = |time: Instant| {
        let holding = season.sunward.iter().find(|window| window.begin <= time && time <= window.end);
        holding.map(|window| window.origin)
    };
    let mut seen = [0, 0];
    for k in 0..58 {
        let time = Instant::from_tdb_days(DUSTY_DAYS[0] + 1.3 + 5.0 * f64::from(k));
        // Between the ends of two windows that touch, either is right.
        let at_edge = season
            .sunward
            .iter()
            .any(|window| [window.begin, window.end].iter().any(|end| (end.tdb_days() - time.tdb_days()).abs() < 0.3));
        if !at_edge {
            assert_eq!(said(time), origin(&mut engine, time), "{}", time.utc_iso_ms());
            seen[usize::from(said(time).is_some())] += 1;
        }
    }
    assert!(seen[0] > 10 && seen[1] > 10, "{seen:?}");
    for window in &season.sunward {
        for (end, outside, cut) in [(window.begin, -0.26, window.cut[0]), (window.end, 0.26, window.cut[1])] {
            if !cut {
                assert_eq!(origin(&mut engine, end), Some(window.origin));
                assert_ne!(origin(&mut engine, end.plus_days(outside)), Some(window.origin));
            }
        }
        assert!(window.begin <= window.best.time && window.best.time <= window.end);
        assert_eq!(window.best.origin, Some(window.origin));
    }
    let told = |kind| season.events.iter().any(|event| event.kind == kind);
    assert!(told(EventKind::SunwardDustBegins(Origin::Perspective)));
    assert!(told(EventKind::SunwardDustEnds(Origin::Perspective)));
}

#[test]
fn slices_and_changes_of_stretch_give_what_one_search_gives() {
    let engine = dusty().engine();
    let (early, late) = (stretch(11_620.0, 11_668.0), stretch(11_640.0, 11_688.0));
    let at_once = whole(engine.season_search(late));
    let mut sliced = engine.season_search(early);
    let mut before = 0.0;
    while sliced.done() < 1.0 {
        let done = sliced.advance(1.0);
        assert!(done > before, "no progress at {before}");
        before = done;
    }
    let first = sliced.season();
    sliced.renew(engine.season_subject(), late);
    assert!(sliced.done() > 0.3 && sliced.done() < 1.0, "{}", sliced.done());
    assert_eq!(whole(sliced), at_once);
    assert_eq!(first, whole(engine.season_search(early)));
}

#[test]
fn other_dust_redoes_the_windows_and_keeps_the_geometry_and_another_orbit_redoes_all() {
    let engine = dusty().engine();
    let part = stretch(11_640.0, 11_660.0);
    let mut search = engine.season_search(part);
    while search.advance(100.0) < 1.0 {}
    let mut subject = engine.season_subject();
    subject.tails.age_greatest_days *= 0.5;
    search.renew(subject, part);
    assert_eq!(search.done(), 0.125);
    let mut other = dusty();
    other.numbers[0] = 0.63;
    search.renew(other.engine().season_subject(), part);
    assert_eq!(search.done(), 0.0);
}

#[test]
fn a_stretch_reversed_empty_too_long_or_outside_the_ephemeris_is_refused_by_name() {
    let day = Instant::from_tdb_days;
    let refused = |from: f64, to: f64| Stretch::new(day(from), day(to)).expect_err("refused").to_string();
    assert!(refused(100.0, 90.0).contains("season.to"), "{}", refused(100.0, 90.0));
    assert!(refused(100.0, 100.0).contains("a minute after"));
    assert!(refused(0.0, LONGEST_DAYS + 1.0).contains("at most 40 years"));
    assert!(refused(-40_000.0, 0.0).contains("season.from"));
    assert!(refused(0.0, 40_000.0).contains("season.to"));
    assert!(refused(f64::NAN, 0.0).contains("season.from"));
    assert!(Stretch::new(day(0.0), day(LONGEST_DAYS)).is_ok());
}

/// Greatest and least values of one quantity follow each other in turn, whatever the orbit.
fn assert_in_turn(events: &[Event], least: EventKind, greatest: EventKind) {
    let mut last = None;
    for event in events.iter().filter(|event| event.kind == least || event.kind == greatest) {
        assert_ne!(last, Some(event.kind), "{} twice, {}", event.kind.words(), event.time.utc_iso_ms());
        last = Some(event.kind);
    }
}

#[test]
fn polar_flat_and_circular_orbits_at_the_ends_of_the_ephemeris_are_searched_without_doubles() {
    let orbits = [
        ([0.9, 1.0, 90.0, 0.0, 0.0], 36_000.0),
        ([0.9, 1.0, 0.0, 90.0, 0.0], -36_400.0),
        ([1.1, 0.4, 180.0, 10.0, 0.0], 36_500.0),
        ([1.02, 0.0, 0.001, 0.0, 50.0], 3_000.0),
        ([0.005, 0.9999, 144.0, 80.0, 0.0], 9_000.0),
        ([30.0, 1.0, 60.0, 80.0, 10.0], 1_000.0),
    ];
    for (numbers, middle) in orbits {
        let elements = Elements { numbers, perihelion_time: format!("JD {} TDB", middle + 2_451_545.0) };
        let from = f64::max(middle - 300.0, -36_525.5);
        let events = geometric_events(&elements.engine(), stretch(from, f64::min(middle + 300.0, 36_890.5)));
        assert!(events.len() > 20, "{numbers:?}: {}", events.len());
        assert!(events.iter().all(|event| event.uncertainty_days >= MINUTE && event.uncertainty_days <= 366.0));
        assert_in_turn(&events, EventKind::LeastElongation, EventKind::GreatestElongation);
        assert_in_turn(&events, EventKind::LeastPhaseAngle, EventKind::GreatestPhaseAngle);
    }
}

#[test]
fn a_site_and_old_elements_make_events_less_certain() {
    let mut plan = dusty().plan();
    let spread = |plan: &tailvane::plan::Plan| {
        let engine = Engine::new(plan.clone()).expect("a sound plan");
        let events = geometric_events(&engine, stretch(11_600.0, 11_660.0));
        let crossing = events.iter().find(|event| matches!(event.kind, EventKind::OrbitPlaneCrossing { .. }));
        (crossing.expect("one in the stretch").time, crossing.expect("one in the stretch").uncertainty_days)
    };
    plan.comet.elements.epoch = Some("JD 2463170.5 TDB".parse::<Stamp>().expect("a date"));
    let fresh = spread(&plan);
    plan.comet.elements.epoch = Some("JD 2462170.5 TDB".parse::<Stamp>().expect("a date"));
    let old = spread(&plan);
    plan.observer =
        Observer::Site(Site { name: String::new(), longitude_deg: 20.0, latitude_deg: 37.0, height_m: 0.0 });
    let seen = spread(&plan);
    assert!(fresh.1 < old.1 && old.1 < seen.1, "{fresh:?} {old:?} {seen:?}");
    // The event itself is that of the Earth's centre for every observer.
    assert_eq!(fresh.0, seen.0);
}

#[test]
fn position_angles_run_on_across_north_in_a_series() {
    let mut engine = dusty().engine();
    let curves = [Curve::Antisolar, Curve::NegativeVelocity, Curve::Elongation];
    let series = engine.season_series(&stretch(11_000.0, 11_730.0), 731, &curves, |_| None).expect("within the span");
    assert_eq!(series.times.len(), 731);
    let sky = engine.sky_at(series.times[400]).expect("within the span");
    assert_eq!(series.columns[2].values[400], sky.elongation_rad);
    for column in &series.columns[..2] {
        let steps: Vec<f64> = column.values.windows(2).map(|pair| (pair[1] - pair[0]).abs()).collect();
        assert!(steps.iter().all(|step| *step < PI), "{:?}", column.curve);
    }
    // The antisolar direction of this comet passes north in these two years; wrapped, it would jump there.
    let turns = |value: f64| (value / (2.0 * PI)).floor();
    let antisolar = &series.columns[0].values;
    assert!(antisolar.windows(2).any(|pair| turns(pair[0]) != turns(pair[1])), "no passage of north to bridge");
}
