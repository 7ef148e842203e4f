//! Do the night strip and the picture over the horizon say what the numbers say?

use crate::labels::faults;
use crate::skies;
use tailvane::engine::Engine;
use tailvane::plan::Plan;
use tailvane::scene::lettering::Rect;
use tailvane::scene::{Body, Direction, Point, Role, Scene, Shape, horizon, night_strip};
use tailvane::time::Instant;

const SIZES: [(f64, f64); 4] = [(280.0, 272.0), (360.0, 300.0), (700.0, 400.0), (1600.0, 600.0)];

fn engine() -> Engine {
    Engine::new(skies::plan()).expect("a plan")
}

fn evening_time(text: &str) -> Instant {
    text.parse::<tailvane::time::Stamp>().expect("a time").instant()
}

/// End marks that touch a text of any kind, in words.
fn on_any_text(scene: &Scene) -> Vec<String> {
    let mut found = Vec::new();
    for node in &scene.nodes {
        let (Role::Mark(_), Shape::Circle { center, radius_px }) = (node.role, &node.shape) else { continue };
        let mark = Rect::around(*center, *radius_px, *radius_px);
        let page = Rect { left: 0.0, top: 0.0, right: scene.width_px, bottom: scene.height_px };
        if !page.contains(&mark) {
            found.push(format!("{:?} leaves the page", node.role));
        }
        for (_, text) in scene.texts().filter(|(_, text)| text.area().overlaps(&mark)) {
            found.push(format!("{:?} on {:?}", text.words, node.role));
        }
    }
    found
}

/// The points of every line under a role.
fn points(scene: &Scene, role: Role) -> Vec<Point> {
    let lines = scene.nodes.iter().filter(|node| node.role == role).flat_map(|node| match &node.shape {
        Shape::Lines(lines) => lines.clone(),
        Shape::Polyline(line) => vec![line.clone()],
        _ => Vec::new(),
    });
    lines.flatten().collect()
}

#[test]
fn the_strip_shows_each_time_where_a_press_on_it_leads() {
    let mut engine = engine();
    for (month, day) in [(3, 28), (6, 21), (12, 1)] {
        let time = evening_time(&format!("2031-{month:02}-{day:02}T22:00:00Z"));
        let evening = engine.evening(None, time).expect("a night");
        let course = engine.course(&evening).expect("a course");
        for (width, height) in SIZES {
            let scene = night_strip::compose(&course, "Invented hill", time, width, height);
            assert_eq!(faults(&scene), Vec::<String>::new(), "{width} {month}");
            let now = points(&scene, Role::Now);
            let back = night_strip::time_at(&course, width, height, now[0][0]);
            assert!((back.tdb_days() - time.tdb_days()).abs() < 1e-6);
            // The comet's curve stands where its altitude says, by the scale of 0 and 90 degrees.
            let level = points(&scene, Role::Horizon)[0][1];
            let top = now[0][1];
            for point in points(&scene, Role::Course(Body::Comet)) {
                let at = night_strip::time_at(&course, width, height, point[0]);
                let altitude = engine.moment_at(at).expect("a moment").altitude_rad.to_degrees();
                let drawn = (level - point[1]) / (level - top) * 90.0;
                // Samples are five minutes apart, and a piece may end between two.
                assert!((drawn - altitude).abs() < 0.2, "{drawn} {altitude}");
            }
        }
    }
}

#[test]
fn a_strip_without_a_night_is_drawn_all_the_same() {
    let mut plan = skies::plan();
    if let tailvane::body::observer::Observer::Site(site) = &mut plan.observer {
        site.latitude_deg = 80.0;
    }
    let mut engine = Engine::new(plan).expect("a plan");
    for month in [6, 12] {
        let time = evening_time(&format!("2031-{month:02}-21T22:00:00Z"));
        let evening = engine.evening(None, time).expect("a night");
        let course = engine.course(&evening).expect("a course");
        for (width, height) in SIZES {
            let scene = night_strip::compose(&course, "", time, width, height);
            assert_eq!(faults(&scene), Vec::<String>::new());
            assert!(
                scene
                    .nodes
                    .iter()
                    .any(|node| matches!(node.role, Role::SkyLight(level) if (level == 4) == (month == 6)))
            );
        }
    }
    // No room: nothing but the ground.
    let course = engine.course(&engine.evening(None, evening_time("2031-06-21T22:00:00Z")).expect("a night"));
    assert_eq!(
        night_strip::compose(&course.expect("a course"), "", Instant::from_tdb_days(0.0), 30.0, 20.0).nodes.len(),
        1
    );
}

#[test]
fn hands_over_the_horizon_lean_as_the_angles_say() {
    let mut engine = engine();
    for hour in [2, 4, 6, 9, 13, 17, 19, 23] {
        let moment = engine.moment_at(evening_time(&format!("2031-03-28T{hour:02}:10:00Z"))).expect("a moment");
        for (width, height) in SIZES {
            let scene = horizon::compose(&moment, width, height);
            assert_eq!(faults(&scene), Vec::<String>::new(), "{width} {hour}");
            assert!(on_any_text(&scene).is_empty(), "{:?}", on_any_text(&scene));
            for (direction, angle) in [
                (Direction::Antisolar, moment.sky.antisolar_position_angle_rad),
                (Direction::IonAxis, moment.ion_position_angle_rad),
                (Direction::NegativeVelocity, moment.sky.negative_velocity_position_angle_rad),
            ] {
                let hand = points(&scene, Role::Hand(direction));
                let lean = (hand[0][0] - hand[1][0]).atan2(hand[0][1] - hand[1][1]);
                let wanted = moment.from_vertical_rad(angle).expect("an angle");
                assert!((lean - wanted).sin().abs() < 1e-9 && (lean - wanted).cos() > 0.0);
            }
            // Up and down by the same scale as the horizon.
            let nucleus = scene.nodes.iter().find_map(|node| match (&node.role, &node.shape) {
                (Role::Nucleus, Shape::Circle { center, .. }) => Some(*center),
                _ => None,
            });
            let level = points(&scene, Role::Horizon)[0][1];
            assert_eq!(nucleus.expect("a nucleus")[1] < level, moment.altitude_rad > 0.0);
        }
    }
}

/// A plan's own site and comet, drawn twice.
#[test]
fn the_same_night_is_the_same_drawing() {
    let draw = |plan: Plan| {
        let mut engine = Engine::new(plan).expect("a plan");
        let moment = engine.moment_at(evening_time("2031-03-28T04:40:00Z")).expect("a moment");
        horizon::compose(&moment, 500.0, 400.0)
    };
    assert_eq!(draw(skies::plan()), draw(skies::plan()));
}
