//! Do the tails lie where the dust is, and can their labels be read?

use crate::labels::faults;
use crate::skies::{self, tailed, tails};
use proptest::prelude::*;
use tailvane::engine::Engine;
use tailvane::orbit::conic::Orbit;
use tailvane::orbit::elements::{Comet, Elements};
use tailvane::plan::Plan;
use tailvane::scene::layer::{Layers, TailLayers};
use tailvane::scene::lettering::Rect;
use tailvane::scene::sky_plane::compose;
use tailvane::scene::view::{SkyView, Up};
use tailvane::scene::{Direction, Family, Point, Role, Scene, Shape};
use tailvane::sky::Sky;
use tailvane::tail::grain::{Grain, Vista};
use tailvane::time::Instant;

const EDGE_ON: &str = include_str!("../gallery/edge-on.plan.json");
const OLD_DUST: &str = include_str!("../gallery/old-dust-toward-the-sun.plan.json");

fn lines(scene: &Scene, role: Role) -> Vec<Vec<Point>> {
    let found = scene.nodes.iter().filter(|node| node.role == role);
    found
        .flat_map(|node| match &node.shape {
            Shape::Lines(lines) | Shape::Patches(lines) => lines.clone(),
            Shape::Polyline(line) | Shape::Polygon(line) => vec![line.clone()],
            Shape::Hatch { outlines, .. } => outlines.clone(),
            _ => Vec::new(),
        })
        .collect()
}

fn words(scene: &Scene, role: Role) -> Vec<String> {
    scene.texts().filter(|(found, _)| *found == role).map(|(_, text)| text.words.replace('\u{a0}', " ")).collect()
}

/// Distance of a point from a broken line.
fn distance(p: Point, line: &[Point]) -> f64 {
    let segment = |a: Point, b: Point| {
        let (dx, dy) = (b[0] - a[0], b[1] - a[1]);
        let square = dx * dx + dy * dy;
        let part =
            if square > 0.0 { (((p[0] - a[0]) * dx + (p[1] - a[1]) * dy) / square).clamp(0.0, 1.0) } else { 0.0 };
        (p[0] - a[0] - part * dx).hypot(p[1] - a[1] - part * dy)
    };
    line.windows(2).map(|pair| segment(pair[0], pair[1])).fold(f64::INFINITY, f64::min)
}

fn wide() -> SkyView {
    SkyView::start(1024.0, 640.0)
}

#[test]
fn a_grain_lies_on_its_syndyne_and_its_synchrone_with_east_to_the_left() {
    let (plan, sky) = (skies::plan(), skies::sky());
    let orbit = Orbit::new(&plan.comet.elements).expect("elements in range");
    let vista = Vista::of(&orbit, &sky);
    let view = wide();
    let scene = tailed(&plan, &sky, &view);
    let texts: Vec<Rect> = scene.texts().map(|(_, text)| text.area().grown(4.0)).collect();
    let (syndynes, synchrones) =
        (lines(&scene, Role::Curve(Family::Syndyne)), lines(&scene, Role::Curve(Family::Synchrone)));
    let mut checked = 0;
    for beta in [0.03, 0.1, 0.3, 1.0] {
        for age_days in [20.0, 30.0, 40.0, 60.0] {
            let place = vista.grain(&Grain::released(beta, age_days)).position_au;
            let [xi, eta] = vista.offset(&place).expect("before the observer");
            let at = view.to_page(&sky, xi, eta);
            let [x, y] = view.nucleus();
            assert_eq!(at[0] < x, xi > 0.0, "east is to the left");
            assert_eq!(at[1] < y, eta > 0.0, "north is up");
            let inside = Rect { left: 2.0, top: 2.0, right: 1022.0, bottom: 638.0 }.holds(at);
            let far = (at[0] - x).hypot(at[1] - y) > 120.0;
            if inside && far && !texts.iter().any(|area| area.holds(at)) {
                for curves in [&syndynes, &synchrones] {
                    let nearest = curves.iter().map(|line| distance(at, line)).fold(f64::INFINITY, f64::min);
                    assert!(nearest < 0.6, "beta {beta} age {age_days}: {nearest} px");
                }
                checked += 1;
            }
        }
    }
    assert!(checked >= 4, "{checked}");
}

#[test]
fn curves_are_labelled_with_beta_and_radius_or_age_and_date() {
    let scene = tailed(&skies::plan(), &skies::sky(), &SkyView::start(1440.0, 900.0));
    let (syndynes, synchrones) =
        (words(&scene, Role::CurveLabel(Family::Syndyne)), words(&scene, Role::CurveLabel(Family::Synchrone)));
    // 0.574 / beta micrometres at 1 g/cm3, to the figures that the density allows (tests of tail::size).
    for (beta, radius) in [("β 0.1", "6 µm"), ("β 0.3", "1.9 µm"), ("β 1", "submicron")] {
        assert!(syndynes.contains(&format!("{beta} · {radius}")), "{beta} {syndynes:?}");
    }
    // Seen on 2031 March 28, light time minutes.
    assert!(synchrones.iter().any(|words| words == "30 d · 26 Feb"), "{synchrones:?}");
}

#[test]
fn no_line_of_dust_runs_through_a_text() {
    for view in [wide(), SkyView::start(390.0, 560.0)] {
        let scene = tailed(&skies::plan(), &skies::sky(), &view);
        for family in [Family::Syndyne, Family::Synchrone, Family::NeckLine] {
            for line in lines(&scene, Role::Curve(family)) {
                for (_, text) in scene.texts() {
                    let crossed = line.windows(2).any(|pair| text.area().cuts(pair[0], pair[1]));
                    assert!(!crossed, "{family:?} through {:?}", text.words);
                }
            }
        }
    }
}

#[test]
fn curves_end_at_the_edge_of_the_field() {
    for scale in [1e-6, 1e-4, 1e-3] {
        let view = SkyView { pixel_scale_rad: scale, offset_px: [150.0, -90.0], ..wide() };
        let scene = tailed(&skies::plan(), &skies::sky(), &view);
        let page = Rect { left: 0.0, top: 0.0, right: 1024.0, bottom: 640.0 };
        let mut seen = 0;
        for role in [Role::Curve(Family::Syndyne), Role::Curve(Family::Synchrone), Role::TowardSun, Role::TowardSunLine]
        {
            for point in lines(&scene, role).iter().flatten() {
                assert!(page.grown(1e-6).holds(*point), "{role:?} {point:?}");
                seen += 1;
            }
        }
        assert!(seen > 0, "{scale}");
    }
}

#[test]
fn the_wedge_spans_what_its_label_says() {
    let (plan, sky) = (skies::plan(), skies::sky());
    let view = wide();
    let layers = tails(&plan, &sky, &view, &Layers::default());
    let wedge = layers.wedge.clone().expect("the layer is on");
    let scene = compose(&plan, &sky, &layers, &view);
    let edges = lines(&scene, Role::WedgeEdge);
    let facing = view.facing(&sky);
    let mut angles: Vec<f64> = edges
        .iter()
        .map(|edge| {
            let [xi, eta] = facing.to_sky(edge[1][0], edge[1][1]);
            xi.atan2(eta).to_degrees().rem_euclid(360.0)
        })
        .collect();
    angles.sort_by(f64::total_cmp);
    let axis = wedge.axis.position_angle_rad.expect("an axis").to_degrees();
    assert!(angles[0] <= axis - 2.99 && angles[1] >= axis + 2.99, "{angles:?} about {axis}");
    let label = format!("ion axis {axis:.0}° ({:.0}–{:.0}°)", angles[0], angles[1]);
    let two = [format!("ion axis {axis:.0}°"), format!("{:.0}–{:.0}°", angles[0], angles[1])];
    let found = words(&scene, Role::Label(Direction::IonAxis));
    assert!(found == [label.clone()] || found == two, "{found:?} {label}");
}

/// A plan of the gallery and its sky.
fn of_gallery(text: &str) -> (Plan, Sky) {
    let plan = Plan::parse(text).expect("a plan of the gallery");
    let time = plan.time.clone().expect("a time").instant();
    let sky = Engine::new(plan.clone()).expect("allowed").sky_at(time).expect("within the span");
    (plan, sky)
}

#[test]
fn what_is_shaded_toward_the_sun_lies_in_the_sector_and_only_there() {
    let mut skies = vec![(skies::plan(), skies::sky()), of_gallery(OLD_DUST), of_gallery(EDGE_ON)];
    skies[0].0.tails.age_greatest_days = 600.0;
    let mut shaded = 0;
    for (plan, sky) in &skies {
        for field_deg in [1.0_f64, 5.0, 40.0] {
            let view = SkyView { pixel_scale_rad: field_deg.to_radians() / 640.0, ..wide() };
            let scene = tailed(plan, sky, &view);
            let sunward = sky.antisolar_position_angle_rad.expect("a direction").to_degrees() + 180.0;
            for point in [Role::TowardSun, Role::TowardSunLine].iter().flat_map(|&role| lines(&scene, role)).flatten() {
                let [xi, eta] = view.to_sky(sky, point[0], point[1]);
                let aside = (xi.atan2(eta).to_degrees() - sunward + 540.0).rem_euclid(360.0) - 180.0;
                let near = (point[0] - view.nucleus()[0]).hypot(point[1] - view.nucleus()[1]) < 1.0;
                assert!(near || aside.abs() <= plan.tails.anti_tail_half_width_deg + 0.1, "{aside}");
                shaded += 1;
            }
            let said = words(&scene, Role::Note).iter().any(|words| words == "crossed: dust there");
            let drawn = scene.nodes.iter().any(|node| matches!(node.role, Role::TowardSun | Role::TowardSunLine));
            assert_eq!(said, drawn);
        }
    }
    assert!(shaded > 100, "{shaded}");
    // Young dust of this sky lies tailward.
    let mut young = skies::plan();
    young.tails.age_greatest_days = 10.0;
    assert!(lines(&tailed(&young, &skies::sky(), &wide()), Role::TowardSun).is_empty());
}

#[test]
fn a_layer_that_is_off_leaves_nothing_behind() {
    let (plan, sky) = (skies::plan(), skies::sky());
    let view = wide();
    let with = |layers: Layers| compose(&plan, &sky, &tails(&plan, &sky, &view, &layers), &view);
    let all = Layers::default();
    let nothing = with(Layers::NONE);
    assert_eq!(nothing, compose(&plan, &sky, &TailLayers::default(), &view));
    let counted = |scene: &Scene, role: Role| scene.nodes.iter().filter(|node| node.role == role).count();
    let cases = [
        (Layers { ion: false, ..all }, Role::Wedge),
        (Layers { syndynes: false, ..all }, Role::Curve(Family::Syndyne)),
        (Layers { synchrones: false, ..all }, Role::Curve(Family::Synchrone)),
    ];
    for (layers, role) in cases {
        assert!(counted(&with(all), role) > 0, "{role:?}");
        assert_eq!(counted(&with(layers), role), 0, "{role:?}");
    }
}

#[test]
fn synchrones_of_one_line_are_drawn_once_and_a_bundle_keeps_few_labels() {
    let (plan, sky) = of_gallery(EDGE_ON);
    let scene = tailed(&plan, &sky, &SkyView::start(390.0, 390.0));
    let drawn = scene.nodes.iter().filter(|node| node.role == Role::Curve(Family::Synchrone)).count();
    assert!(drawn <= 4, "{drawn} synchrones in a line");
    let labels = scene.texts().filter(|(role, _)| matches!(role, Role::CurveLabel(_))).count();
    assert!((1..=8).contains(&labels), "{labels}");
}

/// A comet, a time near its perihelion, and laws for its dust.
fn comets() -> impl Strategy<Value = (Plan, f64)> {
    let orbit = (0.05..3.0_f64, prop::sample::select(vec![0.5, 0.95, 0.9999, 1.0, 1.0004, 3.0]), 0.0..180.0_f64);
    let angles = (0.0..360.0_f64, 0.0..360.0_f64, -150.0..300.0_f64);
    let laws = (-5.0..-1.0_f64, 0.05..2.5_f64, 5.0..600.0_f64);
    // Shorter periods than a month are refused.
    let orbit = orbit.prop_filter("a period below a month", |(q, e, _)| *q >= 0.2 * (1.0 - e));
    (orbit, angles, laws).prop_map(|((q, e, inclination), (node, peri, days), (log_beta, beta_greatest, age))| {
        let elements = Elements {
            perihelion_distance_au: q.max(0.2 * (1.0 - e)),
            eccentricity: e,
            inclination_deg: inclination,
            ascending_node_deg: node,
            argument_of_perihelion_deg: peri,
            perihelion_time: "2031-02-22.18374 TT".parse().expect("a date"),
            epoch: None,
            nongravitational: None,
        };
        let comet = Comet { name: "Invented comet".into(), elements, brightness: Vec::new() };
        let mut plan = Plan::from(comet);
        plan.tails.beta_least = 10.0_f64.powf(log_beta).min(0.5 * beta_greatest);
        plan.tails.beta_greatest = beta_greatest;
        plan.tails.age_greatest_days = age;
        (plan, days)
    })
}

fn sky_of(plan: &Plan, days: f64) -> Sky {
    let perihelion: Instant = plan.comet.elements.perihelion_time.instant();
    let mut engine = Engine::new(plan.clone()).expect("allowed");
    engine.sky_at(perihelion.plus_days(days)).expect("within the span")
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 2000, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn labels_never_overlap_with_tails_on(
        (plan, days) in comets(),
        size in prop::sample::select(vec![(320.0, 320.0), (390.0, 560.0), (1024.0, 640.0), (2560.0, 1300.0)]),
        offset in (-0.4..0.4_f64, -0.4..0.4_f64),
        log_scale in -6.0..-2.5_f64,
    ) {
        let sky = sky_of(&plan, days);
        let view = SkyView {
            pixel_scale_rad: 10.0_f64.powf(log_scale),
            offset_px: [offset.0 * size.0, offset.1 * size.1],
            up: Up::North,
            ..SkyView::start(size.0, size.1)
        };
        let scene = tailed(&plan, &sky, &view);
        prop_assert!(faults(&scene).is_empty(), "{:?}", faults(&scene));
        let numbers = scene.nodes.iter().flat_map(|node| match &node.shape {
            Shape::Lines(lines) | Shape::Patches(lines) => lines.iter().flatten().copied().collect(),
            Shape::Polyline(line) | Shape::Polygon(line) => line.clone(),
            _ => Vec::new(),
        });
        for point in numbers {
            prop_assert!(point[0].is_finite() && point[1].is_finite());
        }
    }
}
