//! Can every text be read?

use crate::skies::bare as compose;
use crate::skies::{self, APART, Hands};
use proptest::prelude::*;
use tailvane::paint::record::{Call, Recorder};
use tailvane::scene::lettering::{Rect, Text};
use tailvane::scene::theme::Theme;
use tailvane::scene::view::{SkyView, Up};
use tailvane::scene::{Direction, Role, Scene, Shape};

/// Pairs of texts whose boxes overlap, in words.
pub fn overlaps(texts: &[&Text]) -> Vec<String> {
    let mut found = Vec::new();
    for (i, one) in texts.iter().enumerate() {
        for other in &texts[i + 1..] {
            if one.area().overlaps(&other.area()) {
                found.push(format!("{:?} and {:?}", one.words, other.words));
            }
        }
    }
    found
}

/// Labels and dial numbers that touch an end mark, in words.
pub fn on_marks(scene: &Scene) -> Vec<String> {
    let mut found = Vec::new();
    for node in &scene.nodes {
        let (Role::Mark(_) | Role::MarkFill(_)) = node.role else { continue };
        let mark = extent(&node.shape);
        for (role, text) in scene.texts() {
            if matches!(role, Role::Label(_) | Role::CurveLabel(_) | Role::DialNumber) && text.area().overlaps(&mark) {
                found.push(format!("{:?} on {:?}", text.words, node.role));
            }
        }
    }
    found
}

fn extent(shape: &Shape) -> Rect {
    match shape {
        Shape::Circle { center, radius_px } => Rect::around(*center, *radius_px, *radius_px),
        Shape::Polygon(points) | Shape::Polyline(points) => {
            let over =
                |axis: usize, pick: fn(f64, f64) -> f64| points.iter().map(|p| p[axis]).reduce(pick).expect("a point");
            Rect {
                left: over(0, f64::min),
                top: over(1, f64::min),
                right: over(0, f64::max),
                bottom: over(1, f64::max),
            }
        }
        other => panic!("a mark has no such shape: {other:?}"),
    }
}

/// Every fault of the texts of a scene, from its nodes and from what a painter is told.
pub fn faults(scene: &Scene) -> Vec<String> {
    let texts: Vec<&Text> = scene.texts().map(|(_, text)| text).collect();
    let mut found = overlaps(&texts);
    found.extend(on_marks(scene));
    let page = Rect { left: 0.0, top: 0.0, right: scene.width_px, bottom: scene.height_px };
    found.extend(
        texts.iter().filter(|text| !page.contains(&text.area())).map(|t| format!("{:?} leaves the page", t.words)),
    );
    let mut recorder = Recorder::default();
    tailvane::paint::paint(scene, Theme::Dark, &mut recorder);
    let filled: Vec<&Text> = recorder
        .calls
        .iter()
        .filter_map(|call| match call {
            Call::Text { text, ink } if ink.fill.is_some() => Some(text),
            _ => None,
        })
        .collect();
    if filled != texts {
        found.push("the painter is told other texts than the scene holds".into());
    }
    found
}

/// Directions that have a label.
fn labelled(scene: &Scene) -> Vec<Direction> {
    let mut found: Vec<Direction> = Vec::new();
    for (role, _) in scene.texts() {
        if let Role::Label(direction) = role
            && !found.contains(&direction)
        {
            found.push(direction);
        }
    }
    found
}

fn view(width_px: f64, height_px: f64) -> SkyView {
    SkyView::start(width_px, height_px)
}

/// Position angles near a common one or anywhere, each perhaps turned about (sunward instead of tailward), with or
/// without a zenith.
fn hands() -> impl Strategy<Value = Hands> {
    let spread = prop::sample::select(vec![0.0, 0.5, 6.0, 25.0, 360.0]);
    let angles = prop::array::uniform4((0.0..1.0_f64, any::<bool>()));
    (0.0..360.0_f64, spread, angles, any::<bool>()).prop_map(|(common, spread, angles, has_zenith)| {
        let [antisolar, negative_velocity, sky_motion, zenith] =
            angles.map(|(share, about)| Some((common + spread * share + if about { 180.0 } else { 0.0 }) % 360.0));
        Hands { antisolar, negative_velocity, sky_motion, zenith: zenith.filter(|_| has_zenith) }
    })
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 3000, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn labels_never_overlap_and_none_is_lost(
        hands in hands(),
        size in prop::sample::select(vec![(390.0, 390.0), (390.0, 560.0), (1024.0, 640.0), (1024.0, 1024.0), (2560.0, 1300.0)]),
        zenith_up in any::<bool>(),
        scale in -9.0..-2.0_f64,
    ) {
        let sky = skies::with(hands);
        let up = if zenith_up { Up::Zenith } else { Up::North };
        let view = SkyView { up, pixel_scale_rad: 10.0_f64.powf(scale), ..view(size.0, size.1) };
        let scene = compose(&skies::plan(), &sky, &view);
        prop_assert!(faults(&scene).is_empty(), "{:?}", faults(&scene));
        prop_assert_eq!(labelled(&scene).len(), 4 + usize::from(hands.zenith.is_some()));
    }

    #[test]
    fn labels_never_overlap_wherever_the_nucleus_is_put(
        hands in hands(),
        size in prop::sample::select(vec![(320.0, 320.0), (390.0, 560.0), (1024.0, 640.0), (2560.0, 1440.0)]),
        offset in (-0.7..0.7_f64, -0.7..0.7_f64),
    ) {
        let view = SkyView { offset_px: [offset.0 * size.0, offset.1 * size.1], ..view(size.0, size.1) };
        let scene = compose(&skies::plan(), &skies::with(hands), &view);
        prop_assert!(faults(&scene).is_empty(), "{:?}", faults(&scene));
    }
}

#[test]
fn the_check_sees_a_planted_overlap() {
    let mut scene = compose(&skies::plan(), &skies::with(APART), &view(1024.0, 640.0));
    assert!(faults(&scene).is_empty(), "{:?}", faults(&scene));
    let copy = scene.nodes.iter().find(|node| node.role == Role::Cardinal).expect("a letter").clone();
    scene.nodes.push(copy);
    assert_eq!(faults(&scene).len(), 1);
}

#[test]
fn each_label_says_the_direction_and_its_angle_to_a_tenth() {
    let scene = compose(&skies::plan(), &skies::with(APART), &view(1024.0, 640.0));
    let words: Vec<&str> = scene.texts().map(|(_, text)| text.words.as_str()).collect();
    for label in
        ["antisolar 238.4°", "negative velocity 12.5°", "sky motion 171.0°", "zenith 327.4°", "toward the Sun 58.4°"]
    {
        assert!(words.contains(&label), "{label} is not in {words:?}");
    }
}

#[test]
fn an_angle_just_below_a_whole_turn_reads_as_zero() {
    let scene = compose(&skies::plan(), &skies::with(Hands { antisolar: Some(359.96), ..APART }), &view(1024.0, 640.0));
    assert!(scene.texts().any(|(_, text)| text.words == "antisolar 0.0°"));
}

#[test]
fn an_absent_direction_has_no_hand_and_says_why() {
    let none = Hands { antisolar: None, negative_velocity: None, sky_motion: None, zenith: None };
    for size in [320.0, 390.0, 1024.0] {
        let scene = compose(&skies::plan(), &skies::with(none), &view(size, size));
        assert!(labelled(&scene).is_empty());
        assert!(!scene.nodes.iter().any(|node| matches!(node.role, Role::Hand(_) | Role::Mark(_) | Role::SunwardHalf)));
        let cautions: Vec<&str> =
            scene.texts().filter(|(role, _)| *role == Role::Caution).map(|(_, text)| text.words.as_str()).collect();
        let cautions = cautions.join(" ");
        for words in [
            "no antisolar direction: comet, Sun and observer in line",
            "no negative velocity",
            "no sky motion",
            "no zenith",
        ] {
            assert!(cautions.contains(words), "{words} is not in {cautions:?}");
        }
        assert!(faults(&scene).is_empty(), "{:?}", faults(&scene));
    }
}

#[test]
fn a_long_name_keeps_to_its_corner() {
    let mut plan = skies::plan();
    for name in ["W".repeat(300), "an invented comet with a name of very many words ".repeat(9), "彗星".repeat(60)] {
        plan.comet.name = name;
        for size in [320.0, 1024.0] {
            let scene = compose(&plan, &skies::with(APART), &view(size, size));
            assert!(faults(&scene).is_empty(), "{:?}", faults(&scene));
        }
    }
}
