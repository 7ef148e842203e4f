//! Can the season ribbon be read, whatever the season, and do its curves run without a jump?

use crate::labels::overlaps;
use proptest::prelude::*;
use std::path::{Path, PathBuf};
use tailvane::engine::Engine;
use tailvane::engine::outlook::{self, Outlook};
use tailvane::paint::svg;
use tailvane::plan::Plan;
use tailvane::plan::season::Season as Chosen;
use tailvane::scene::lettering::{Rect, Text};
use tailvane::scene::ribbon::{DarkNight, Ribbon, Strip, compose, dates, flag, natural_height_px, scale, under};
use tailvane::scene::theme::Theme;
use tailvane::scene::{Lane, Point, Role, Scene, Shape};
use tailvane::season::event::{Event, EventKind};
use tailvane::season::search::Season;
use tailvane::season::series::{Column, Curve, Series};
use tailvane::season::stretch::Stretch;
use tailvane::season::sunward::{Origin, Strength, Window};
use tailvane::tail::perspective::Grade;
use tailvane::time::Instant;

const WIDTHS: [f64; 6] = [320.0, 390.0, 768.0, 1024.0, 1440.0, 2560.0];
const KINDS: [EventKind; 9] = [
    EventKind::OrbitPlaneCrossing { opposite: true },
    EventKind::Perihelion,
    EventKind::LeastDistance,
    EventKind::GreatestElongation,
    EventKind::SunwardDustBegins(Origin::Perspective),
    EventKind::SunwardDustEnds(Origin::Ejection),
    EventKind::Conjunction,
    EventKind::FastestMotion,
    EventKind::MoonNearest,
];

fn at(days: f64) -> Instant {
    Instant::from_tdb_days(11_000.0 + days)
}

fn stretch(days: f64) -> Stretch {
    Stretch::new(at(0.0), at(days)).expect("an allowed stretch")
}

fn event(kind: EventKind, days: f64) -> Event {
    Event { kind, time: at(days), value: None, unit: "", note: String::new(), uncertainty_days: 0.001 }
}

/// Waves of any size, one curve not running at the ends, one without any value.
fn series(stretch: &Stretch, curves: &[Curve], size: f64, turns: f64) -> Series {
    let times: Vec<Instant> = stretch.times(300).collect();
    let column = |(number, &curve): (usize, &Curve)| {
        let values = (0..times.len()).map(|k| {
            let share = k as f64 / 299.0;
            let wave = (turns * share * 6.3 + number as f64).sin();
            match curve {
                Curve::Antisolar => turns * 6.3 * share + 0.3 * wave,
                Curve::NegativeVelocity => turns * 6.3 * share + 3.0 * wave,
                Curve::SunDistance if !(0.1..0.8).contains(&share) => f64::NAN,
                Curve::Magnitude if size > 0.8 => f64::NAN,
                Curve::OrbitPlane => size * wave,
                _ => size * (1.0 + wave),
            }
        });
        Column { curve, values: values.collect() }
    };
    Series { columns: curves.iter().enumerate().map(column).collect(), times }
}

fn windows(days: f64) -> Season {
    let strength = |share: f64, grade: Grade| Strength {
        time: at(share * days),
        origin: Some(Origin::Perspective),
        grade,
        share: 0.1,
        share_at_rest: 0.1,
    };
    let strengths = vec![strength(0.3, Grade::Faint), strength(0.35, Grade::Strong), strength(0.4, Grade::Possible)];
    let window = |origin: Origin, from: f64, to: f64| Window {
        origin,
        begin: at(from * days),
        end: at(to * days),
        cut: [false, false],
        best: strengths[1],
        uncertainty_days: [0.1, 0.1],
    };
    Season {
        sunward: vec![window(Origin::Perspective, 0.28, 0.42), window(Origin::Ejection, 0.42, 0.6)],
        near_sun: vec![[at(0.7 * days), at(0.75 * days)]],
        strengths,
        events: Vec::new(),
    }
}

fn nights(days: f64) -> Vec<DarkNight> {
    let night = |number: usize| {
        let middle = at(number as f64);
        let hours = (number as f64 / 40.0).sin() * 6.0;
        let windows = if hours > 0.0 { vec![[middle, middle.plus_days(hours / 24.0)]] } else { Vec::new() };
        DarkNight { middle, windows }
    };
    (0..days as usize).map(night).collect()
}

/// Segments of what is drawn in a role.
fn segments(scene: &Scene, wanted: impl Fn(Role) -> bool) -> Vec<[Point; 2]> {
    let mut found = Vec::new();
    for node in scene.nodes.iter().filter(|node| wanted(node.role)) {
        let lines: Vec<&Vec<Point>> = match &node.shape {
            Shape::Lines(lines) | Shape::Patches(lines) => lines.iter().collect(),
            Shape::Polyline(line) | Shape::Polygon(line) => vec![line],
            _ => Vec::new(),
        };
        found.extend(lines.iter().flat_map(|line| line.windows(2)).map(|pair| [pair[0], pair[1]]));
    }
    found
}

/// Every fault of the texts of a ribbon, in words.
fn faults(ribbon: &Ribbon) -> Vec<String> {
    let scene = &ribbon.scene;
    let texts: Vec<&Text> = scene.texts().map(|(_, text)| text).collect();
    let mut found = overlaps(&texts);
    let page = Rect { left: 0.0, top: 0.0, right: scene.width_px, bottom: scene.height_px };
    let lines = segments(scene, |role| {
        matches!(
            role,
            Role::SeasonCurve(_)
                | Role::Band(_)
                | Role::BandRim(_)
                | Role::EventGuide
                | Role::EventStroke
                | Role::EventMark
        )
    });
    for (role, text) in scene.texts() {
        let area = text.area();
        if !page.contains(&area) {
            found.push(format!("{:?} leaves the page", text.words));
        }
        // A leader ends at its name.
        let inner = area.grown(-0.5);
        if lines.iter().any(|[a, b]| inner.cuts(*a, *b)) {
            found.push(format!("{:?} ({role:?}) lies on a line", text.words));
        }
    }
    for node in &scene.nodes {
        let points: Vec<Point> = match &node.shape {
            Shape::Polyline(line) | Shape::Polygon(line) => line.clone(),
            Shape::Lines(lines) | Shape::Patches(lines) => lines.concat(),
            _ => Vec::new(),
        };
        if points.iter().flatten().any(|place| !place.is_finite()) {
            found.push(format!("{:?} is nowhere", node.role));
        }
    }
    found
}

fn words(ribbon: &Ribbon) -> Vec<&str> {
    ribbon.scene.texts().map(|(_, text)| text.words.as_str()).collect()
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 400, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn labels_never_overlap_nor_lie_on_curves_bands_or_leaders(
        width in prop::sample::select(WIDTHS.to_vec()),
        height in prop::sample::select(vec![None, Some(64.0), Some(110.0), Some(170.0), Some(500.0)]),
        days in prop::sample::select(vec![0.25, 3.0, 30.0, 200.0, 730.0, 14_000.0]),
        chosen in prop::sample::subsequence(Curve::ALL.to_vec(), 0..=8),
        size in prop::sample::select(vec![1e-4, 0.02, 0.7, 1.5, 40.0]),
        turns in prop::sample::select(vec![0.0, 0.4, 1.0, 9.0]),
        events in prop::collection::vec((prop::sample::select(KINDS.to_vec()), 0.0..1.0_f64), 0..40),
        crowd in prop::sample::select(vec![1.0, 0.04]),
        at_site in any::<bool>(),
    ) {
        let stretch = stretch(days);
        let mut season = windows(days);
        season.events = events.iter().map(|&(kind, share)| event(kind, (0.3 + (share - 0.3) * crowd) * days)).collect();
        let nights = nights(days.min(800.0));
        let series = series(&stretch, &chosen, size, turns);
        let strip = Strip { stretch, series: &series, season: &season, nights: at_site.then_some(&nights[..]) };
        let height = height.unwrap_or_else(|| natural_height_px(&strip, width));
        let ribbon = compose(&strip, width, height);
        prop_assert!(faults(&ribbon).is_empty(), "{:#?}", faults(&ribbon));
    }

    #[test]
    fn names_of_dates_never_meet(
        days in prop::sample::select(vec![0.25, 1.0, 4.0, 17.0, 60.0, 150.0, 365.0, 730.0, 3000.0, 14_000.0]),
        offset in 0.0..4000.0_f64,
        width in 120.0..2600.0_f64,
    ) {
        let from = at(offset);
        let ticks = dates::ticks(from, from.plus_days(days), width, 12.0);
        let mut free_from = 0.0;
        for tick in ticks.iter().filter(|tick| !tick.words.is_empty()) {
            let x = (tick.days - from.tdb_days()) / days * width;
            prop_assert!(x >= free_from, "{} at {x} in {days} d over {width}", tick.words);
            free_from = x + tailvane::scene::lettering::width_px(&tick.words, 12.0, false);
        }
        prop_assert!(free_from <= width);
        prop_assert!(ticks.len() < 400, "{} ticks", ticks.len());
    }
}

#[test]
fn the_check_sees_a_planted_overlap_and_a_planted_cut() {
    let stretch = stretch(300.0);
    let series = series(&stretch, &Curve::ALL, 0.5, 0.4);
    let season = windows(300.0);
    let mut ribbon = compose(&Strip { stretch, series: &series, season: &season, nights: None }, 1024.0, 220.0);
    assert!(faults(&ribbon).is_empty(), "{:#?}", faults(&ribbon));
    let [left, right, top, bottom] = ribbon.track_px();
    let middle = [0.5 * (left + right), 0.5 * (top + bottom)];
    let text = Text::centered("over everything, twice as long", middle, 60.0, false);
    ribbon.scene.add(Role::Note, Shape::Text(text.clone()));
    assert!(faults(&ribbon).iter().any(|fault| fault.contains("lies on a line")));
    ribbon.scene.add(Role::Note, Shape::Text(text));
    assert!(faults(&ribbon).iter().any(|fault| fault.contains(" and ")));
}

#[test]
fn at_its_natural_height_every_curve_and_band_is_named() {
    let stretch = stretch(500.0);
    let series = series(&stretch, &Curve::ALL, 0.5, 0.4);
    let season = windows(500.0);
    let strip = Strip { stretch, series: &series, season: &season, nights: None };
    for width in WIDTHS {
        let ribbon = compose(&strip, width, natural_height_px(&strip, width));
        let written = words(&ribbon);
        for curve in Curve::ALL {
            assert!(
                written.iter().any(|words| words.starts_with(scale::words(curve))),
                "{width}: {curve:?} in {written:?}"
            );
        }
        for lane in ["dust toward the Sun", "dark, comet up", "near the Sun"] {
            assert!(written.iter().any(|words| words.starts_with(lane)), "{width}: {lane}");
        }
        assert!(written.iter().any(|words| words.contains("needs a site")), "{width}: the geocentre has no night");
        let bands = |lane: Lane| ribbon.scene.nodes.iter().any(|node| node.role == Role::BandRim(lane));
        assert!(bands(Lane::SunwardDust) && bands(Lane::NearSun));
    }
}

#[test]
fn in_a_crowd_the_weightiest_event_is_named() {
    let stretch = stretch(730.0);
    let series = series(&stretch, &scale::USUAL, 0.5, 0.4);
    let mut season = Season::default();
    for number in 0..40 {
        season.events.push(event(KINDS[3 + number % 6], 300.0 + 0.7 * number as f64));
    }
    season.events.push(event(EventKind::OrbitPlaneCrossing { opposite: true }, 314.0));
    for width in WIDTHS {
        let ribbon = compose(&Strip { stretch, series: &series, season: &season, nights: None }, width, 250.0);
        assert!(words(&ribbon).contains(&"orbit-plane crossing"), "{width}: {:?}", words(&ribbon));
        let marks = segments(&ribbon.scene, |role| role == Role::EventMark || role == Role::EventStroke);
        assert!(marks.len() >= 41, "each event keeps its mark");
    }
    assert_eq!(flag::rank(EventKind::OrbitPlaneCrossing { opposite: false }), 0);
}

#[test]
fn ticks_stand_on_the_calendar() {
    let time = |text: &str| text.parse::<tailvane::time::Stamp>().expect("a date").instant();
    let ticks = dates::ticks(time("2030-11-03T05:00:00Z"), time("2031-08-01T00:00:00Z"), 1000.0, 12.0);
    let of =
        |words: &str| ticks.iter().find(|tick| tick.words == words).unwrap_or_else(|| panic!("{words} in {ticks:?}"));
    assert!((of("Jan 2031").days - time("2031-01-01T00:00:00Z").tdb_days()).abs() < 1e-8);
    assert!((of("July").days - time("2031-07-01T00:00:00Z").tdb_days()).abs() < 1e-8);
    let ticks = dates::ticks(time("2031-03-27T20:10:00Z"), time("2031-03-28T08:00:00Z"), 900.0, 12.0);
    assert!(
        ticks.iter().any(|tick| tick.words.starts_with("28 Mar")
            && (tick.days - time("2031-03-28T00:00:00Z").tdb_days()).abs() < 1e-8),
        "{ticks:?}"
    );
    assert!(ticks.iter().any(|tick| tick.words == "03:00"), "{ticks:?}");
}

#[test]
fn the_handle_stands_at_its_time_and_a_place_on_the_track_gives_its_time_back() {
    let stretch = stretch(400.0);
    let series = series(&stretch, &scale::USUAL, 0.5, 0.4);
    let season = Season::default();
    let ribbon = compose(&Strip { stretch, series: &series, season: &season, nights: None }, 1000.0, 200.0);
    let [left, right, top, bottom] = ribbon.track_px();
    for share in [0.0, 0.25, 1.0] {
        let time = at(400.0 * share);
        let x = ribbon.x_of(time);
        assert!((x - (left + share * (right - left))).abs() < 1e-9);
        assert!((ribbon.time_at(x).tdb_days() - time.tdb_days()).abs() < 1e-6);
        assert_eq!(segments(&ribbon.handle(time, None), |role| role == Role::Handle), vec![[[x, top], [x, bottom]]]);
    }
    assert!(ribbon.handle(at(500.0), None).nodes.is_empty(), "a time outside has no handle");
    assert_eq!(ribbon.handle(at(500.0), Some(0.5 * (left + right))).nodes.len(), 1);
    assert!(ribbon.with_handle(at(100.0)).nodes.len() > ribbon.scene.nodes.len());
}

#[test]
fn under_the_pointer_stand_values_bands_and_events() {
    let stretch = stretch(400.0);
    let series = series(&stretch, &scale::USUAL, 0.5, 0.4);
    let mut season = windows(400.0);
    season.events.push(event(EventKind::Perihelion, 140.2));
    let nights = nights(400.0);
    let strip = Strip { stretch, series: &series, season: &season, nights: Some(&nights) };
    let values = [(Curve::OrbitPlane, -0.5_f64), (Curve::Antisolar, -0.1), (Curve::Magnitude, f64::NAN)];
    let said = under::words(&strip, at(140.0), &values, 1.0).join("; ");
    for words in [
        "orbit-plane angle −28.6°",
        "antisolar 354.3°",
        "total magnitude not known",
        "dust toward the Sun by perspective: strong",
        "not up in a dark sky that night",
        "perihelion 20",
    ] {
        assert!(said.contains(words), "{words} is not in {said}");
    }
    let said = under::words(&strip, at(290.0), &values, 1.0).join("; ");
    assert!(said.contains("within 30° of the Sun") && said.contains("dark with the comet up for 4.9 h"), "{said}");
}

fn folder(name: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests").join(name)
}

/// The invented comets whose skies are nasty: wraps, near passes, edge-on, opposition.
fn gallery() -> Vec<(String, Plan)> {
    let mut found: Vec<(String, Plan)> = std::fs::read_dir(folder("gallery"))
        .expect("a folder of the tests")
        .map(|entry| {
            let path = entry.expect("a readable entry").path();
            let plan = Plan::parse(&std::fs::read_to_string(&path).expect("text")).expect("a plan");
            (path.file_stem().expect("a name").to_string_lossy().replace(".plan", ""), plan)
        })
        .collect();
    found.sort_by(|a, b| a.0.cmp(&b.0));
    assert!(found.len() >= 13);
    found
}

fn chosen(plan: &Plan, half_days: f64) -> Plan {
    let middle = plan.time.as_ref().expect("a gallery plan has a time").instant();
    let end = |days: f64| tailvane::time::Stamp::utc_seconds(middle.plus_days(days)).expect("a date");
    Plan { season: Some(Chosen { from: end(-half_days), to: end(half_days) }), ..plan.clone() }
}

#[test]
fn seasons_of_nasty_orbits_can_be_read_and_their_curves_never_jump() {
    for (name, plan) in gallery() {
        for half_days in [4.0, 365.0] {
            let plan = chosen(&plan, half_days);
            let time = plan.time.as_ref().expect("a time").instant();
            let mut engine = Engine::new(plan).expect("a plan in range");
            let mut outlook = Outlook::new(&engine, time);
            for width in [390.0, 1024.0, 2560.0] {
                let ribbon = outlook.ribbon(&mut engine, &Curve::ALL, width, None, f64::MAX).expect("within the span");
                assert!(faults(ribbon).is_empty(), "{name} {width}: {:#?}", faults(ribbon));
            }
            let stretch = *outlook.season();
            let series = engine.season_curves(&stretch, 300, &Curve::ALL).expect("within the span");
            for Column { curve, values } in &series.columns {
                if !matches!(curve, Curve::Antisolar | Curve::NegativeVelocity) {
                    continue;
                }
                for (pair, times) in values.windows(2).zip(series.times.windows(2)) {
                    let gap = times[1].tdb_days() - times[0].tdb_days();
                    let turn = (pair[1] - pair[0]).abs();
                    if turn.is_nan() {
                        continue; // in line: no direction
                    }
                    // Where comet, Sun and observer fall in line, or at the pole, a direction flips within a minute.
                    let finest = (stretch.days() / 299.0 / 120.0).max(1.0 / 1440.0);
                    assert!(turn < 0.61 || gap < finest, "{name} {curve:?}: {turn} rad in {gap} d");
                    assert!(turn < std::f64::consts::PI * 1.001, "{name} {curve:?} jumps by {turn} rad");
                }
            }
        }
    }
}

/// Our own output, kept to show changes, not truth. To write it anew after a wanted change, run this test with
/// TAILVANE_WRITE_SNAPSHOTS=1.
#[test]
fn a_season_is_drawn_the_same_every_time() {
    let (_, plan) = gallery().into_iter().find(|(name, _)| name == "old-dust-toward-the-sun").expect("in the gallery");
    let plan = chosen(&plan, 60.0);
    let time = plan.time.as_ref().expect("a time").instant();
    let mut engine = Engine::new(plan).expect("a plan in range");
    for (what, width, theme) in [("wide", 1024.0, Theme::Dark), ("narrow", 390.0, Theme::Paper)] {
        let mut outlook = Outlook::new(&engine, time);
        while outlook.advance(&mut engine, 30.0) < 1.0 {}
        let curves = outlook::curves("").expect("the usual curves");
        let ribbon = outlook.ribbon(&mut engine, &curves, width, None, f64::MAX).expect("within the span");
        assert!(faults(ribbon).is_empty(), "{:#?}", faults(ribbon));
        let scene = ribbon.with_handle(time);
        let drawn = svg::write(&scene, theme, "Season", &outlook.sentence());
        let path = folder("snapshots").join(format!("scene-season-{what}.svg"));
        if std::env::var_os("TAILVANE_WRITE_SNAPSHOTS").is_some() {
            std::fs::write(&path, &drawn).expect("a folder that can be written");
        }
        let kept = std::fs::read_to_string(&path).unwrap_or_default();
        assert!(kept == drawn, "{} differs from what is drawn now", path.display());
    }
}
