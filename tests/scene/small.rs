//! Do the orbit view and the map of the dust say what the numbers say?

use crate::labels::faults;
use crate::skies;
use tailvane::orbit::conic::Orbit;
use tailvane::plan::Plan;
use tailvane::scene::{Direction, Point, Role, Scene, Shape, Slope, orbit_view, sheet_map};
use tailvane::sky::Sky;
use tailvane::tail::grain::Vista;
use tailvane::tail::perspective::{self, Cell, Map, Side};

fn orbit_scene(plan: &Plan, sky: &Sky, width: f64, height: f64) -> Scene {
    let orbit = Orbit::new(&plan.comet.elements).expect("elements in range");
    orbit_view::compose(plan, sky, &Vista::of(&orbit, sky), width, height)
}

fn circles(scene: &Scene, role: Role) -> Vec<Point> {
    let found = scene.nodes.iter().filter(|node| node.role == role);
    found
        .filter_map(|node| match node.shape {
            Shape::Circle { center, .. } => Some(center),
            _ => None,
        })
        .collect()
}

/// Pixels for an au in each of the two drawings, from their scale bars.
fn scales(scene: &Scene) -> Vec<f64> {
    let bars = scene.nodes.iter().filter_map(|node| match (&node.role, &node.shape) {
        (Role::ScaleBar, Shape::Lines(lines)) => Some(lines[0][1][0] - lines[0][0][0]),
        _ => None,
    });
    let words = scene.texts().filter_map(|(role, text)| {
        let words = text.words.replace('\u{a0}', " ");
        (role == Role::Note).then(|| words.strip_suffix(" au").and_then(|au| au.parse::<f64>().ok()))?
    });
    bars.zip(words).map(|(px, au)| px / au).collect()
}

fn distance(a: Point, b: Point) -> f64 {
    (a[0] - b[0]).hypot(a[1] - b[1])
}

#[test]
fn the_orbit_view_is_to_scale_and_shows_the_true_angle_to_the_plane() {
    let (plan, sky) = (skies::plan(), skies::sky());
    for (width, height) in [(320.0, 560.0), (700.0, 380.0), (1400.0, 800.0)] {
        let scene = orbit_scene(&plan, &sky, width, height);
        let scales = scales(&scene);
        let (suns, comets) = (circles(&scene, Role::MarkFill(Direction::Sunward)), circles(&scene, Role::Nucleus));
        let observers = circles(&scene, Role::Observer);
        assert_eq!((scales.len(), suns.len(), comets.len(), observers.len()), (2, 2, 2, 2));
        // From the pole: the comet's distance from the Sun, and the observer's distance along the plane.
        assert!((distance(suns[0], comets[0]) / scales[0] / sky.sun_distance_au - 1.0).abs() < 1e-9);
        let along = sky.observer_distance_au * sky.observer_from_orbit_plane_rad.cos();
        assert!((distance(observers[0], comets[0]) / scales[0] / along - 1.0).abs() < 1e-9);
        // Along the plane: the true distance to the observer, at the true angle.
        assert!((distance(observers[1], comets[1]) / scales[1] / sky.observer_distance_au - 1.0).abs() < 1e-9);
        let rise = (comets[1][1] - observers[1][1]).atan2((observers[1][0] - comets[1][0]).abs());
        assert!((rise - sky.observer_from_orbit_plane_rad).abs() < 1e-9);
        assert!((suns[1][1] - comets[1][1]).abs() < 1e-9, "the Sun lies in the plane");
        let degrees = sky.observer_from_orbit_plane_rad.to_degrees();
        let side = if degrees < 0.0 { "below" } else { "above" };
        let words = format!("{:.1}° {side} the\u{a0}plane", degrees.abs());
        assert!(scene.texts().any(|(_, text)| text.words == words), "{words}");
        assert!(faults(&scene).is_empty(), "{:?}", faults(&scene));
    }
}

#[test]
fn from_the_pole_the_comet_runs_counter_clockwise_and_the_arrow_shows_it() {
    let (plan, sky) = (skies::plan(), skies::sky());
    let scene = orbit_scene(&plan, &sky, 700.0, 380.0);
    let (sun, comet) = (circles(&scene, Role::MarkFill(Direction::Sunward))[0], circles(&scene, Role::Nucleus)[0]);
    let arrow = scene.nodes.iter().find_map(|node| match (&node.role, &node.shape) {
        (Role::OrbitArrow, Shape::Polygon(points)) => Some(points[0]),
        _ => None,
    });
    let tip = arrow.expect("an arrow");
    // Counter-clockwise with y down: the cross product is negative.
    let cross = (comet[0] - sun[0]) * (tip[1] - comet[1]) - (comet[1] - sun[1]) * (tip[0] - comet[0]);
    assert!(cross < 0.0, "{cross}");
}

#[test]
fn the_orbit_view_names_everything_it_shows() {
    let scene = orbit_scene(&skies::plan(), &skies::sky(), 700.0, 380.0);
    let words: Vec<String> = scene.texts().map(|(_, text)| text.words.replace('\u{a0}', " ")).collect();
    for name in [
        "Sun",
        "comet",
        "antisolar",
        "ion axis",
        "dust sheet",
        "orbit plane",
        "from the pole of the orbit plane",
        "along the orbit plane",
    ] {
        assert!(words.iter().any(|words| words == name), "{name} is not in {words:?}");
    }
    assert_eq!(words.iter().filter(|words| words.contains("observer")).count(), 2);
}

fn map_scene(map: &Map, plan: &Plan, width: f64, height: f64) -> Scene {
    sheet_map::compose(map, &plan.tails, skies::sky().time, width, height)
}

/// Area of outlines on the page.
fn area(outlines: &[Vec<Point>]) -> f64 {
    let twice = |figure: &Vec<Point>| -> f64 {
        (0..figure.len())
            .map(|i| {
                figure[i][0] * figure[(i + 1) % figure.len()][1] - figure[(i + 1) % figure.len()][0] * figure[i][1]
            })
            .sum()
    };
    outlines.iter().map(|figure| twice(figure).abs() / 2.0).sum()
}

fn hatched(scene: &Scene, wanted: Slope) -> f64 {
    scene
        .nodes
        .iter()
        .filter_map(|node| match &node.shape {
            Shape::Hatch { outlines, slope, .. } if *slope == wanted => Some(area(outlines)),
            _ => None,
        })
        .sum()
}

#[test]
fn the_map_hatches_the_sunward_cells_and_crosses_the_anti_tail() {
    let plan = skies::plan();
    let cell = |side| Cell { side: Some(side), brightness: 0.5, sunward_at_rest: 0.0, sunward_ejected: 0.0, seen: 1.0 };
    // Four columns of equal width in log beta, two rows of 40 and 60 days.
    let map = Map {
        beta_edges: vec![0.001, 0.01, 0.1, 1.0, 10.0],
        age_edges_days: vec![0.0, 40.0, 100.0],
        cells: [
            [Side::Tail, Side::Sunward, Side::AntiTail, Side::Coma],
            [Side::AntiTail, Side::Tail, Side::Tail, Side::Tail],
        ]
        .concat()
        .into_iter()
        .map(cell)
        .collect(),
    };
    for (width, height) in [(320.0, 320.0), (640.0, 480.0)] {
        let scene = map_scene(&map, &plan, width, height);
        let cells: f64 = scene
            .nodes
            .iter()
            .filter_map(|node| match (&node.role, &node.shape) {
                (Role::Tone(_), Shape::Patches(figures)) => Some(area(figures)),
                _ => None,
            })
            .sum();
        // Sunward 0.25 * 0.4; anti-tail 0.25 * 0.4 + 0.25 * 0.6. Edges lie on whole pixels.
        assert!((hatched(&scene, Slope::Rising) / cells - 0.35).abs() < 0.01);
        assert!((hatched(&scene, Slope::Falling) / cells - 0.25).abs() < 0.01);
        assert!(faults(&scene).is_empty(), "{:?}", faults(&scene));
    }
}

#[test]
fn the_map_reads_at_320_pixels_in_beta_radius_age_and_date() {
    let (plan, sky) = (skies::plan(), skies::sky());
    let orbit = Orbit::new(&plan.comet.elements).expect("elements in range");
    let map = perspective::assess(&Vista::of(&orbit, &sky), &sky, &plan.tails).map;
    for (width, height) in [(320.0, 300.0), (900.0, 600.0)] {
        let scene = map_scene(&map, &plan, width, height);
        let words: Vec<String> = scene.texts().map(|(_, text)| text.words.replace('\u{a0}', " ")).collect();
        for name in ["beta", "grain radius", "age", "released", "0.01", "60 µm", "50 d", "6 Feb", "submicron"] {
            assert!(words.iter().any(|words| words == name), "{name} is not in {words:?}");
        }
        assert!(words.iter().any(|words| words.starts_with("Hatched")), "{words:?}");
        assert!(faults(&scene).is_empty(), "{:?}", faults(&scene));
    }
}
