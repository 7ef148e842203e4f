//! Does the camera's frame lie where its field is, can it be taken hold of, and can the drawing and the card be read?

use crate::labels::faults;
use crate::skies::{self, bare, tailed};
use proptest::prelude::*;
use tailvane::camera::field::Field;
use tailvane::camera::{Camera, Mount};
use tailvane::caution::Caution;
use tailvane::frame::{half_turn, tangent};
use tailvane::orbit::conic::Orbit;
use tailvane::plan::Plan;
use tailvane::scene::camera_field::{self, Grip};
use tailvane::scene::card::{self, Card, DRAWING_PX};
use tailvane::scene::view::{SkyView, Up};
use tailvane::scene::{Point, Role, Scene, Shape, camera_words};
use tailvane::tail::grain::Vista;
use tailvane::tail::ion::Wedge;

fn camera() -> Camera {
    Camera {
        name: "Invented camera".into(),
        pixels_wide: 6000,
        pixels_high: 4000,
        pixel_size_um: Some(4.0),
        focal_length_mm: Some(360.0),
        scale_arcsec_per_pixel: None,
        image_up_position_angle_deg: 25.0,
        mirrored: false,
        nucleus_right_px: -400.0,
        nucleus_up_px: 300.0,
        mount: Mount::Equatorial,
        rotator_offset_deg: 3.0,
    }
}

fn with(camera: Camera) -> Plan {
    Plan { camera: Some(camera), ..skies::plan() }
}

/// The middle of the handle.
fn handle(scene: &Scene) -> Option<Point> {
    scene.nodes.iter().find_map(|node| match &node.shape {
        Shape::Polygon(square) if node.role == Role::CameraHandle => {
            Some([0.5 * (square[0][0] + square[2][0]), 0.5 * (square[0][1] + square[2][1])])
        }
        _ => None,
    })
}

#[test]
fn the_frame_lies_where_the_chip_sees_the_page() {
    let (plan, sky) = (with(camera()), skies::sky());
    let view = SkyView::around(1024.0, 640.0, camera().reach_tan());
    let scene = bare(&plan, &sky, &view);
    let field = Field::of(&camera(), &sky.axes.sight).expect("a field");
    let outline = scene.nodes.iter().filter_map(|node| match &node.shape {
        Shape::Lines(lines) if node.role == Role::CameraFrame => Some(lines.iter().flatten()),
        _ => None,
    });
    let mut seen = 0;
    for point in outline.flatten() {
        let [xi, eta] = view.to_sky(&sky, point[0], point[1]);
        let pixel = field.pixel(&tangent::unproject(xi, eta, &sky.axes)).expect("in front");
        let over = (pixel[0].abs() / field.half_px[0]).max(pixel[1].abs() / field.half_px[1]);
        assert!((over - 1.0).abs() < 1e-6, "{pixel:?}");
        seen += 1;
    }
    assert!(seen >= 5);
    let at = handle(&scene).expect("a handle");
    let [xi, eta] = view.to_sky(&sky, at[0], at[1]);
    let pixel = field.pixel(&tangent::unproject(xi, eta, &sky.axes)).expect("in front");
    assert!(pixel[0].abs() < 1.0 && pixel[1] > field.half_px[1], "{pixel:?}");
    assert!(scene.texts().any(|(role, text)| role == Role::CameraLabel && text.words == "image up 25.0°"));
}

#[test]
fn with_the_camera_up_the_frame_stands_upright_whatever_the_parity() {
    let sky = skies::sky();
    for mirrored in [false, true] {
        let camera = Camera { mirrored, nucleus_right_px: 0.0, nucleus_up_px: 0.0, ..camera() };
        let field = Field::of(&camera, &sky.axes.sight).expect("a field");
        let view = SkyView { up: camera_field::up(&field), ..SkyView::around(1024.0, 640.0, camera.reach_tan()) };
        let (_, frame) = camera_field::on_page(&camera, &sky, &view).expect("a frame");
        let scene = bare(&with(camera.clone()), &sky, &view);
        let at = handle(&scene).expect("a handle");
        assert!((at[0] - view.nucleus()[0]).abs() < 1e-6 && at[1] < view.nucleus()[1], "{at:?}");
        assert_eq!(frame.grip(at, 7.0), Some(Grip::Handle));
        // A place to the right of the page is to the right of the image.
        let [x, y] = view.nucleus();
        let [xi, eta] = view.to_sky(&sky, x + 100.0, y);
        let pixel = field.pixel(&tangent::unproject(xi, eta, &sky.axes)).expect("in front");
        assert!(pixel[0] > 0.0 && pixel[1].abs() < 1e-6 * pixel[0], "{mirrored}: {pixel:?}");
        let note = scene.texts().any(|(role, text)| role == Role::Note && text.words.contains("mirror-reversed"));
        assert_eq!(note, mirrored);
    }
}

#[test]
fn the_frame_is_dragged_by_its_outline_and_turned_by_its_handle() {
    let sky = skies::sky();
    let view = SkyView::around(1024.0, 640.0, camera().reach_tan());
    let (_, frame) = camera_field::on_page(&camera(), &sky, &view).expect("a frame");
    assert_eq!(frame.grip(view.nucleus(), 7.0), None, "the middle of the sky still pans");
    let moved = camera_field::moved(&camera(), &sky, &view, [500.0, 300.0], [540.0, 320.0]).expect("a camera");
    let scenes = [camera(), moved.clone()].map(|camera| bare(&with(camera), &sky, &view));
    let [before, after] = scenes.each_ref().map(|scene| handle(scene).expect("a handle"));
    // By what the pointer moved, but for the tenth of a pixel of the chip and the turn of north along the way.
    assert!(
        (after[0] - before[0] - 40.0).abs() < 1.5 && (after[1] - before[1] - 20.0).abs() < 1.5,
        "{before:?} {after:?}"
    );

    let target = [700.0, 500.0];
    let turned = camera_field::turned_toward(&camera(), &sky, &view, target).expect("a camera");
    let (was, is) = [camera(), turned.clone()].map(|c| Field::of(&c, &sky.axes.sight).expect("a field")).into();
    assert!((was.sight - is.sight).norm() < 0.2 * was.scale_tan, "a turn is about the middle");
    let at = handle(&bare(&with(turned), &sky, &view)).expect("a handle");
    let middle = {
        let [xi, eta] = tangent::project(&is.sight, &sky.axes).expect("in front");
        view.to_page(&sky, xi, eta)
    };
    let cross = (at[0] - middle[0]) * (target[1] - middle[1]) - (at[1] - middle[1]) * (target[0] - middle[0]);
    let lengths = (at[0] - middle[0]).hypot(at[1] - middle[1]) * (target[0] - middle[0]).hypot(target[1] - middle[1]);
    assert!((cross / lengths).abs() < 0.01, "the handle points at the pointer");
    // Nothing that a camera cannot do is done.
    let far = camera_field::moved(&camera(), &sky, &view, [0.0, 0.0], [1e9, 0.0]);
    assert!(far.is_none());
}

#[test]
fn a_camera_across_the_sky_is_said_and_not_drawn() {
    let far = Camera { nucleus_right_px: 400_000.0, focal_length_mm: Some(400.0), ..camera() };
    far.validate("camera").expect("valid, if odd");
    let scene = tailed(&with(far), &skies::sky(), &SkyView::start(1024.0, 640.0));
    assert!(faults(&scene).is_empty(), "{:?}", faults(&scene));
    assert!(handle(&scene).is_none());
}

/// The card of a plan, with these cautions.
fn sheet(plan: &Plan, cautions: &[Caution]) -> Scene {
    let sky = skies::with(skies::APART);
    let orbit = Orbit::new(&plan.comet.elements).expect("elements in range");
    let ion = Wedge::of(&Vista::of(&orbit, &sky), &plan.tails);
    let [width, height] = DRAWING_PX;
    let drawing = tailed(plan, &sky, &SkyView::around(width, height, camera().reach_tan()));
    let headline = "Gas toward 241°. Dust from 243° to 330°.";
    card::compose(&Card { plan, sky: &sky, ion: &ion, cautions, headline, when_up: None }, drawing)
}

#[test]
fn the_card_says_when_who_where_and_what_to_mind_and_nothing_runs_off_it() {
    let danger = Caution::SunDanger { elongation_deg: 12.0 };
    let scene = sheet(&with(camera()), &[danger.clone(), Caution::Parabola, Caution::NoEpoch]);
    assert!(faults(&scene).is_empty(), "{:?}", faults(&scene));
    let words: Vec<&str> = scene.texts().map(|(_, text)| text.words.as_str()).collect();
    let all = words.join(" ");
    for part in [
        "2031 Mar. 28.19 UT",
        "2031-03-28T04:40:00Z",
        "Invented hill",
        "Invented camera, 6000 × 4000 pixels",
        "Antisolar",
        "from image up",
        "position angle 25.0° at the middle",
        "qualified person",
        "exact parabola",
        "not an observation",
    ] {
        assert!(all.contains(part), "{part}: {all}");
    }
    // More than a sheet holds is said, not lost over the edge.
    let full = sheet(&with(camera()), &vec![danger; 20]);
    assert!(faults(&full).is_empty(), "{:?}", faults(&full));
    assert!(full.texts().any(|(_, text)| text.words.starts_with("More did not fit")));
    let bare = sheet(&skies::plan(), &[]);
    assert!(bare.texts().any(|(_, text)| text.words.starts_with("No camera")));
}

#[test]
fn directions_in_camera_terms_agree_with_the_drawing() {
    let sky = skies::with(skies::APART);
    let field =
        Field::of(&Camera { image_up_position_angle_deg: 238.4, ..camera() }, &sky.axes.sight).expect("a field");
    // Image up is along the antisolar direction at the middle, and nearly so at the nucleus.
    let course = field.course(sky.antisolar_position_angle_rad.expect("an angle"));
    assert!(half_turn(course.clockwise_from_up_rad).abs() < 0.01);
    let upright = Field::of(&camera(), &sky.axes.sight).expect("a field");
    let words = camera_words::course(&upright.course((25.0 - 31.0_f64).to_radians()));
    assert!(words.starts_with("31° clockwise from image up, leaves at the"), "{words}");
    let words = camera_words::course(&upright.course((25.0 + 31.0_f64).to_radians()));
    assert!(words.starts_with("31° counter-clockwise"), "{words}");
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 30, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn texts_stay_apart_with_any_field(
        up in 0.0..360.0_f64, mirrored in any::<bool>(), focal in 60.0..2000.0_f64, at in (-0.6..0.6_f64, -0.6..0.6_f64),
        wide in 390.0..1600.0_f64, high in 320.0..900.0_f64, camera_up in any::<bool>(),
    ) {
        let camera = Camera {
            image_up_position_angle_deg: up,
            mirrored,
            focal_length_mm: Some(focal),
            nucleus_right_px: 6000.0 * at.0,
            nucleus_up_px: 4000.0 * at.1,
            ..camera()
        };
        let sky = skies::with(skies::APART);
        let mut view = SkyView::around(wide, high, camera.reach_tan());
        if let (true, Some(field)) = (camera_up, Field::of(&camera, &sky.axes.sight)) {
            view.up = camera_field::up(&field);
            let seen = matches!(view.up, Up::Camera { mirrored: true, .. });
            prop_assert_eq!(seen, mirrored);
        }
        let scene = tailed(&with(camera), &sky, &view);
        prop_assert!(faults(&scene).is_empty(), "{:?}", faults(&scene));
    }
}
