//! Do the points that stand for a choice of tails hold that choice?

use crate::camera;
use tailvane::body::observer::Observer;
use tailvane::camera::hull::hull;
use tailvane::camera::subject::Subject;
use tailvane::orbit::conic::Orbit;
use tailvane::orbit::elements::Elements;
use tailvane::sky::watch::Watch;
use tailvane::tail::cloud::{Cloud, Quality, Raster};
use tailvane::tail::grain::{Grain, Vista};
use tailvane::tail::ion::Wedge;
use tailvane::tail::law::Tails;
use tailvane::tail::weight::Weights;
use tailvane::time::Stamp;

/// The sky of an invented comet, three weeks after its perihelion.
fn with_vista<T>(then: impl FnOnce(&Vista) -> T) -> T {
    let elements = Elements {
        perihelion_distance_au: 0.6,
        eccentricity: 1.0,
        inclination_deg: 63.0,
        ascending_node_deg: 62.0,
        argument_of_perihelion_deg: 118.0,
        perihelion_time: "2031-02-22.2 TT".parse().expect("a date"),
        epoch: None,
        nongravitational: None,
    };
    let mut watch = Watch::new(Orbit::new(&elements).expect("elements in range"), Observer::Geocentre);
    let time: Stamp = "2031-03-15T04:00:00Z".parse().expect("a date");
    let sky = watch.sky_at(time.instant()).expect("a sky");
    then(&Vista::of(watch.orbit(), &sky))
}

/// Least distance of a place from the edges of a convex figure, negative outside.
fn inside(figure: &[[f64; 2]], place: [f64; 2]) -> f64 {
    let edges = (0..figure.len()).map(|i| {
        let (a, b) = (figure[i], figure[(i + 1) % figure.len()]);
        let (dx, dy) = (b[0] - a[0], b[1] - a[1]);
        (dx * (place[1] - a[1]) - dy * (place[0] - a[0])) / dx.hypot(dy)
    });
    edges.fold(f64::INFINITY, f64::min)
}

fn length(place: [f64; 2]) -> f64 {
    place[0].hypot(place[1]).atan()
}

#[test]
fn the_ion_wedge_reaches_its_length_between_its_edges() {
    with_vista(|vista| {
        let wanted = 2.0_f64.to_radians();
        let laws = Tails::default();
        let points = Subject::Ion { length_rad: wanted }.points(vista, &laws, &camera(100, 100, 1.0)).expect("points");
        assert!(points.iter().all(|&point| (length(point) - wanted).abs() < 1e-12));
        let wedge = Wedge::of(vista, &laws);
        let (axis, [first, last]) = wedge.axis.position_angle_rad.zip(wedge.reach_rad).expect("a wedge");
        let far = wanted.tan();
        for angle in [axis, axis + first, axis + last] {
            let end = [far * angle.sin(), far * angle.cos()];
            assert!(points.iter().any(|p| (p[0] - end[0]).hypot(p[1] - end[1]) < 0.01 * far), "{angle}");
        }
    });
}

#[test]
fn every_grain_of_the_dust_within_the_length_lies_in_the_hull() {
    with_vista(|vista| {
        let laws = Tails { age_greatest_days: 60.0, ..Tails::default() };
        let wanted = 3.0_f64.to_radians();
        let points = Subject::Dust { length_rad: wanted }.points(vista, &laws, &camera(100, 100, 1.0)).expect("points");
        assert!(points.iter().all(|&point| length(point) <= wanted * (1.0 + 1e-9)));
        let figure = hull(&points);
        let mut held = 0;
        for i in 1..40 {
            for j in 1..40 {
                let beta = 0.001 * 1000.0_f64.powf(f64::from(i) / 40.0);
                let grain = Grain::released(beta, 60.0 * f64::from(j) / 40.0);
                let start = vista.start(&grain);
                let Some(offset) = vista.survivor(beta, &start, grain.age_days).and_then(|state| vista.offset(&state))
                else {
                    continue;
                };
                if length(offset) <= wanted {
                    // The rim between two round curves may bulge by a little.
                    assert!(inside(&figure, offset) > -0.01 * wanted, "{grain:?}");
                    held += 1;
                }
            }
        }
        assert!(held > 100, "{held}");
    });
}

#[test]
fn the_picture_down_to_a_share_lies_in_the_hull_and_a_smaller_share_reaches_farther() {
    with_vista(|vista| {
        let laws = Tails { age_greatest_days: 60.0, ..Tails::default() };
        let chip = camera(3000, 2000, 4.0);
        let figure = |share: f64| hull(&Subject::Picture { share }.points(vista, &laws, &chip).expect("points"));
        let reach = |figure: &[[f64; 2]]| figure.iter().map(|&point| length(point)).fold(0.0, f64::max);
        let (bright, faint) = (figure(0.05), figure(0.005));
        assert!(reach(&bright) < reach(&faint));
        assert!(reach(&bright) > 1e-4);
        // Another picture, on other cells: nothing well above the share lies outside.
        let cell = 2.2 * reach(&faint).tan() / 200.0;
        let raster = Raster {
            width: 200,
            height: 200,
            turn_px: [[-1.0 / cell, 0.0], [0.0, -1.0 / cell]],
            nucleus_px: [100.0, 100.0],
        };
        let mut cloud = Cloud::new();
        let quality = Quality { samples: 400_000, cell_px: 1 };
        let drawn = cloud.render(vista, &Weights::of(&laws), &raster, quality).expect("a picture");
        let peak = (0..200).flat_map(|y| drawn.line(y).to_vec()).fold(0.0_f32, f32::max);
        let mut outside = 0;
        for y in 0..200 {
            for (x, &value) in drawn.line(y).iter().enumerate() {
                let place = [(99.5 - x as f64) * cell, (99.5 - y as f64) * cell];
                // The peak of a finer or coarser picture differs; a factor of three covers that.
                if value > 3.0 * 0.005 * peak && inside(&faint, place) < -2.0 * cell {
                    outside += 1;
                }
            }
        }
        assert_eq!(outside, 0);
    });
}

#[test]
fn a_calibrated_brightness_is_a_share_of_the_peak() {
    let Subject::Picture { share } = Subject::to_brightness(23.0, 18.0) else { panic!("a picture") };
    assert!((share - 0.01).abs() < 1e-12);
    with_vista(|vista| {
        let refused = |subject: Subject| subject.points(vista, &Tails::default(), &camera(100, 100, 1.0)).is_err();
        // Brighter than the peak, fainter than anything, and lengths that are none.
        assert!(refused(Subject::to_brightness(17.0, 18.0)));
        assert!(refused(Subject::to_brightness(60.0, 18.0)));
        assert!(refused(Subject::Ion { length_rad: f64::NAN }) && refused(Subject::Dust { length_rad: 0.0 }));
        assert!(refused(Subject::Dust { length_rad: 2.0 }));
    });
}
