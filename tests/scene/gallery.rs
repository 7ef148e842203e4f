//! Twelve nasty skies of invented comets, from their plan files: is each what its name says, and readable?
//!
//! The plans were designed backwards: a place of the Earth from DE440, a place and a velocity for the comet that make
//! the trouble, and the elements of that state. tests/snapshots holds one drawing of each: our own output, kept to
//! show changes, not truth. To write them anew after a wanted change, run this test with TAILVANE_WRITE_SNAPSHOTS=1.

use crate::labels::faults;
use std::path::{Path, PathBuf};
use tailvane::engine::Engine;
use tailvane::frame::half_turn;
use tailvane::paint::svg;
use tailvane::plan::Plan;
use tailvane::scene::sky_plane::compose;
use tailvane::scene::theme::Theme;
use tailvane::scene::view::{SkyView, Up};
use tailvane::sky::Sky;

const NAMES: [&str; 12] = [
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
                let scene = compose(&plan, &sky, &view);
                assert!(faults(&scene).is_empty(), "{name} {width} {up:?}: {:?}", faults(&scene));
                // A theme moves nothing (tested beside the painters), so one reading serves all three; each is written.
                for theme in Theme::ALL {
                    let file = svg::write(&scene, theme, name, "a sky of the gallery");
                    assert!(!file.contains("NaN") && roxmltree::Document::parse(&file).is_ok(), "{name} {width}");
                }
            }
        }
    }
}

#[test]
fn the_gallery_is_drawn_as_before() {
    let write = std::env::var_os("TAILVANE_WRITE_SNAPSHOTS").is_some();
    for name in NAMES {
        let plan = plan(name);
        let up = if name == "near-the-zenith" { Up::Zenith } else { Up::North };
        let scene = compose(&plan, &sky(&plan), &SkyView { up, ..SkyView::start(1024.0, 640.0) });
        let file = svg::write(&scene, Theme::Dark, &plan.comet.name, "a sky of the gallery");
        let path = folder("snapshots").join(format!("scene-{name}.svg"));
        if write {
            std::fs::write(&path, &file).expect("a writable snapshot");
        }
        let kept = std::fs::read_to_string(&path).unwrap_or_else(|error| panic!("{}: {error}", path.display()));
        assert!(kept == file, "{name} is drawn otherwise than in {}", path.display());
    }
}
