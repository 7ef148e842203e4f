//! Does the sky fall where it should on the page, to scale?

use crate::skies::bare as compose;
use crate::skies::{self, APART, Hands};
use tailvane::scene::lettering::Text;
use tailvane::scene::view::{SkyView, Up};
use tailvane::scene::{Direction, Role, Scene, Shape};

fn scene(view: &SkyView, hands: Hands) -> Scene {
    compose(&skies::plan(), &skies::with(hands), view)
}

fn letter(scene: &Scene, words: &str) -> [f64; 2] {
    let found = scene.texts().find(|(role, text)| *role == Role::Cardinal && text.words == words);
    found.unwrap_or_else(|| panic!("no letter {words}")).1.area().center()
}

fn mark(scene: &Scene, direction: Direction) -> [f64; 2] {
    let found = scene.nodes.iter().find(|node| node.role == Role::Hand(direction)).expect("a hand");
    match &found.shape {
        Shape::Polyline(points) => *points.last().expect("an end"),
        other => panic!("a hand is a line, not {other:?}"),
    }
}

#[test]
fn with_north_up_east_is_to_the_left() {
    let view = SkyView::start(1024.0, 640.0);
    let scene = scene(&view, APART);
    let [x, y] = view.nucleus();
    assert!(letter(&scene, "E")[0] < x - 100.0 && letter(&scene, "W")[0] > x + 100.0);
    assert!(letter(&scene, "N")[1] < y - 100.0 && letter(&scene, "S")[1] > y + 100.0);
    // Position angle 90 is east: a hand there points left, and a place east of the nucleus falls left of it.
    let east = compose(&skies::plan(), &skies::with(Hands { antisolar: Some(90.0), ..APART }), &view);
    assert!(mark(&east, Direction::Antisolar)[0] < x - 100.0);
    assert!(view.to_page(&skies::sky(), 1e-3, 0.0)[0] < x && view.to_page(&skies::sky(), 0.0, 1e-3)[1] < y);
}

#[test]
fn with_the_zenith_up_its_hand_points_up_and_the_letters_turn() {
    let view = SkyView { up: Up::Zenith, ..SkyView::start(1024.0, 640.0) };
    let scene = scene(&view, Hands { zenith: Some(90.0), ..APART });
    let [x, y] = view.nucleus();
    let end = mark(&scene, Direction::Zenith);
    assert!((end[0] - x).abs() < 1e-9 && end[1] < y - 50.0);
    // East is up; then north is to the right, since the sky is not mirrored.
    assert!(letter(&scene, "N")[0] > x + 100.0);
    assert!(scene.texts().any(|(_, text)| text.words == "zenith up, at 90.0°"));
}

#[test]
fn without_a_zenith_north_stays_up_and_the_drawing_says_so() {
    let view = SkyView { up: Up::Zenith, ..SkyView::start(1024.0, 640.0) };
    let scene = scene(&view, Hands { zenith: None, ..APART });
    assert!(letter(&scene, "N")[1] < view.nucleus()[1]);
    assert!(scene.texts().any(|(_, text)| text.words == "no zenith here: north up, east left"));
}

#[test]
fn page_and_sky_are_inverse_for_every_turn_and_offset() {
    for zenith in [0.0, 33.0, 180.0, 301.5] {
        let sky = skies::with(Hands { zenith: Some(zenith), ..APART });
        let view = SkyView { up: Up::Zenith, offset_px: [-120.0, 77.0], ..SkyView::start(1024.0, 640.0) };
        for (xi, eta) in [(0.0, 0.0), (1e-3, 0.0), (-4e-4, 2e-2), (0.7, -3.0)] {
            let [x, y] = view.to_page(&sky, xi, eta);
            let back = view.to_sky(&sky, x, y);
            assert!((back[0] - xi).abs() < 1e-14 * (1.0 + xi.abs() * 10.0), "{back:?}");
            assert!((back[1] - eta).abs() < 1e-13 * (1.0 + eta.abs() * 10.0), "{back:?}");
        }
    }
}

#[test]
fn zooming_keeps_the_point_under_the_pointer() {
    let sky = skies::with(APART);
    let view = SkyView { offset_px: [31.0, -8.0], ..SkyView::start(800.0, 600.0) };
    let at = [612.0, 77.0];
    let before = view.to_sky(&sky, at[0], at[1]);
    let zoomed = view.zoomed(1.7, at);
    let after = zoomed.to_sky(&sky, at[0], at[1]);
    assert!((before[0] - after[0]).abs() < 1e-14 && (before[1] - after[1]).abs() < 1e-14);
    assert!((zoomed.pixel_scale_rad * 1.7 - view.pixel_scale_rad).abs() < 1e-18);
    // The limits hold, and the point still stays.
    let far = view.zoomed(1e-9, at);
    let after = far.to_sky(&sky, at[0], at[1]);
    assert!((before[0] - after[0]).abs() < 1e-12 && far.pixel_scale_rad <= 0.02);
}

/// The angle that the words of the scale bar name, radians.
fn bar_angle(text: &Text) -> f64 {
    let arc = text.words.split(" = ").next().expect("an arc");
    let sign = arc.chars().last().expect("a unit");
    let value: f64 = arc.trim_end_matches(sign).parse().expect("a number");
    (value
        / match sign {
            '°' => 1.0,
            '′' => 60.0,
            _ => 3600.0,
        })
    .to_radians()
}

#[test]
fn the_scale_bar_is_as_long_as_it_says_in_arc_and_in_km() {
    let sky = skies::with(APART);
    for scale in [4.85e-9, 1e-7, 4.85e-6, 8e-5, 1e-3, 0.01, 0.02] {
        let view = SkyView { pixel_scale_rad: scale, ..SkyView::start(1024.0, 640.0) };
        let scene = compose(&skies::plan(), &sky, &view);
        let bar = scene.nodes.iter().find_map(|node| match (&node.role, &node.shape) {
            (Role::ScaleBar, Shape::Polyline(points)) => Some(points[1][0] - points[0][0]),
            _ => None,
        });
        let bar_px = bar.expect("a bar");
        assert!((20.0..=220.0).contains(&bar_px), "{bar_px} px at {scale}");
        let (_, text) = scene.texts().find(|(_, text)| text.words.ends_with("at the comet")).expect("words of the bar");
        let angle = bar_angle(text);
        assert!((bar_px * scale - angle.tan()).abs() < 1e-9 * angle, "{}", text.words);
        let km = sky.observer_distance_au * 149_597_870.7 * angle.tan();
        let written = text.words.split(" = ").nth(1).expect("a length").replace('\u{a0}', " ");
        let (figures, unit) = match written.split_once(" million km") {
            Some((figures, _)) => (figures.to_string(), 1e6),
            None => (written.split(" km").next().expect("km").replace(' ', ""), 1.0),
        };
        let read: f64 = figures.replace(' ', "").parse::<f64>().expect("a number") * unit;
        assert!((read / km - 1.0).abs() < 0.0051, "{} against {km} km", text.words);
    }
}

#[test]
fn the_field_is_the_true_angle_on_the_sky() {
    let view = SkyView { pixel_scale_rad: 1e-3, ..SkyView::start(2000.0, 1000.0) };
    let [across, down] = view.field_rad();
    assert!((across - 2.0 * 1.0_f64.atan()).abs() < 1e-14 && (down - 2.0 * 0.5_f64.atan()).abs() < 1e-14);
    // Off the nucleus the same pixels show less of the sky.
    let aside = SkyView { offset_px: [1000.0, 0.0], ..view };
    assert!((aside.field_rad()[0] - 2.0_f64.atan()).abs() < 1e-14);
}

#[test]
fn a_nucleus_off_the_page_is_said() {
    let view = SkyView { offset_px: [-900.0, 0.0], ..SkyView::start(1024.0, 640.0) };
    let scene = scene(&view, APART);
    assert!(scene.texts().any(|(_, text)| text.words == "the nucleus lies outside the drawing, to the left"));
}
