//! Thirteen nasty skies of invented comets, from their plan files: is each what its name says, and readable?
//!
//! The plans were designed backwards: a place of the Earth from DE440, a place and a velocity for the comet that make
//! the trouble, and the elements of that state; the sky with old dust toward the Sun was found by trying. tests/snapshots holds one drawing of each: our own output, kept to
//! show changes, not truth. To write them anew after a wanted change, run this test with TAILVANE_WRITE_SNAPSHOTS=1.

use crate::labels::faults;
use crate::skies::{bare, tailed};
use std::path::{Path, PathBuf};
use tailvane::engine::Engine;
use tailvane::frame::half_turn;
use tailvane::orbit::conic::Orbit;
use tailvane::paint::svg;
use tailvane::plan::Plan;
use tailvane::scene::theme::Theme;
use tailvane::scene::view::{SkyView, Up};
use tailvane::scene::{Scene, orbit_view, sheet_map};
use tailvane::sky::Sky;
use tailvane::tail::grain::Vista;
use tailvane::tail::perspective;

const NAMES: [&str; 13] = [
    "aligned-with-the-sun",
    "all-hands-together",
    "at-the-pole",
    "circular-orbit",
    "eccentricity-three",
    "edge-on",
    "exactly-opposite",
    "far-away",
    "near-the-earth",
    "near-the-sun",
    "near-the-zenith",
    "old-dust-toward-the-sun",
    "right-ascension-wrap",
];

fn folder(name: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests").join(name)
}

fn plan(name: &str) -> Plan {
    let path = folder("gallery").join(format!("{name}.plan.json"));
    let text = std::fs::read_to_string(&path).unwrap_or_else(|error| panic!("{}: {error}", path.display()));
    Plan::parse(&text).unwrap_or_else(|error| panic!("{name}: {error}"))
}

fn sky(plan: &Plan) -> Sky {
    let time = plan.time.as_ref().expect("a gallery plan has a time").instant();
    let mut engine = Engine::new(plan.clone()).expect("a gallery plan is allowed");
    engine.sky_at(time).expect("a time within the span")
}

fn angle_deg(angle: Option<f64>) -> f64 {
    angle.expect("an angle").to_degrees()
}

/// Angle from the antisolar direction to another, degrees, (-180, 180].
fn from_antisolar_deg(sky: &Sky, other: Option<f64>) -> f64 {
    half_turn((angle_deg(other) - angle_deg(sky.antisolar_position_angle_rad)).to_radians()).to_degrees()
}

#[test]
fn each_sky_of_the_gallery_is_as_nasty_as_its_name() {
    let of = |name: &str| sky(&plan(name));

    let aligned = of("aligned-with-the-sun");
    assert!(aligned.phase_angle_rad < 1e-7, "{}", aligned.phase_angle_rad);
    let together = of("all-hands-together");
    let zenith = together.site.as_ref().and_then(|site| site.zenith_position_angle_rad);
    for hand in [together.negative_velocity_position_angle_rad, together.motion_position_angle_rad, zenith] {
        assert!(from_antisolar_deg(&together, hand).abs() < 8.0, "{}", from_antisolar_deg(&together, hand));
    }
    assert!(of("at-the-pole").declination_rad.to_degrees() > 89.9999);
    assert_eq!(plan("circular-orbit").comet.elements.eccentricity, 0.0);
    assert_eq!(plan("eccentricity-three").comet.elements.eccentricity, 3.0);
    let edge_on = of("edge-on");
    assert!(edge_on.observer_from_orbit_plane_rad.abs() < 1e-6);
    assert!(from_antisolar_deg(&edge_on, edge_on.negative_velocity_position_angle_rad).abs() < 1e-3);
    let opposite = of("exactly-opposite");
    assert!(from_antisolar_deg(&opposite, opposite.negative_velocity_position_angle_rad).abs() > 179.999);
    assert!(of("far-away").sun_distance_au > 30.0);
    assert!((of("near-the-earth").observer_distance_au - 0.05).abs() < 1e-4);
    assert!(of("near-the-sun").elongation_rad.to_degrees() < 2.1);
    let crossed = of("old-dust-toward-the-sun").observer_from_orbit_plane_rad.to_degrees();
    assert!((2.5..3.5).contains(&crossed.abs()), "{crossed}");
    let overhead = of("near-the-zenith").site.expect("a site").altitude_rad.to_degrees();
    assert!(overhead > 89.8, "{overhead}");
    let wrap = of("right-ascension-wrap").right_ascension_rad.to_degrees();
    assert!(!(0.01..=359.99).contains(&wrap), "{wrap}");
}

#[test]
fn each_sky_of_the_gallery_can_be_read_at_three_widths_either_way_up() {
    for name in NAMES {
        let plan = plan(name);
        assert!(plan.comet.name.contains("Invented"), "{name}");
        let sky = sky(&plan);
        for (width, height) in [(390.0, 390.0), (390.0, 560.0), (1024.0, 640.0), (2560.0, 1300.0)] {
            for up in [Up::North, Up::Zenith] {
                let view = SkyView { up, ..SkyView::start(width, height) };
                for scene in [bare(&plan, &sky, &view), tailed(&plan, &sky, &view)] {
                    check(&scene, &format!("{name} {width} {up:?}"));
                }
            }
        }
    }
}

/// A theme moves nothing (tested beside the painters), so one reading serves all three; each is written.
fn check(scene: &Scene, what: &str) {
    assert!(faults(scene).is_empty(), "{what}: {:?}", faults(scene));
    for theme in Theme::ALL {
        let file = svg::write(scene, theme, what, "a sky of the gallery");
        let clean = !file.contains("NaN") && !file.contains("inf") && roxmltree::Document::parse(&file).is_ok();
        assert!(clean, "{what}");
    }
}

/// The orbit view and the map of the dust of a gallery plan.
fn small_drawings(name: &str, orbit_px: [f64; 2], map_px: [f64; 2]) -> [Scene; 2] {
    let plan = plan(name);
    let sky = sky(&plan);
    let orbit = Orbit::new(&plan.comet.elements).expect("elements in range");
    let vista = Vista::of(&orbit, &sky);
    let map = perspective::assess(&vista, &sky, &plan.tails).map;
    [
        orbit_view::compose(&plan, &sky, &vista, orbit_px[0], orbit_px[1]),
        sheet_map::compose(&map, &plan.tails, vista.seen, map_px[0], map_px[1]),
    ]
}

#[test]
fn orbit_view_and_map_of_each_can_be_read_at_three_widths() {
    for name in NAMES {
        for (orbit_px, map_px) in
            [([320.0, 520.0], [320.0, 300.0]), ([700.0, 360.0], [400.0, 400.0]), ([1400.0, 700.0], [900.0, 600.0])]
        {
            for scene in small_drawings(name, orbit_px, map_px) {
                check(&scene, &format!("{name} {}", scene.width_px));
            }
        }
    }
}

fn compare(scene: &Scene, name: &str, file: &str) {
    let drawn = svg::write(scene, Theme::Dark, name, "a sky of the gallery");
    let path = folder("snapshots").join(format!("scene-{file}.svg"));
    if std::env::var_os("TAILVANE_WRITE_SNAPSHOTS").is_some() {
        std::fs::write(&path, &drawn).expect("a writable snapshot");
    }
    let kept = std::fs::read_to_string(&path).unwrap_or_else(|error| panic!("{}: {error}", path.display()));
    assert!(kept == drawn, "{name} is drawn otherwise than in {}", path.display());
}

#[test]
fn the_gallery_is_drawn_as_before() {
    for name in NAMES {
        let plan = plan(name);
        let up = if name == "near-the-zenith" { Up::Zenith } else { Up::North };
        let scene = tailed(&plan, &sky(&plan), &SkyView { up, ..SkyView::start(1024.0, 640.0) });
        compare(&scene, &plan.comet.name, name);
    }
    for name in ["edge-on", "eccentricity-three", "circular-orbit"] {
        let [orbit, map] = small_drawings(name, [700.0, 360.0], [320.0, 300.0]);
        compare(&orbit, name, &format!("orbit-{name}"));
        compare(&map, name, &format!("map-{name}"));
    }
}
