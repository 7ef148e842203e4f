//! Is the dust picture right, and are fast grains where slow ones are?

#[path = "cloud/monte_carlo.rs"]
mod monte_carlo;
#[path = "cloud/scenes.rs"]
mod scenes;

use monte_carlo::{compare, in_cells, monte_carlo};
use scenes::{AFTER, Chance, EDGE_ON, SCENES, Scene, laws, raster};
use tailvane::orbit::conic::{SUN_GM_AU3_D2, propagate_bracketed};
use tailvane::tail::cloud::{Cloud, Quality, Raster, Stretch, Tone};
use tailvane::tail::grain::{Grain, Vista};
use tailvane::tail::kernel::{Flight, Kernel};
use tailvane::tail::law::{Outburst, Tails};
use tailvane::tail::weight::Weights;

#[test]
fn the_fast_kernel_agrees_with_the_slow_solver_to_1e_10_always() {
    for scene in &SCENES {
        let (engine, sky) = scene.set();
        let vista = Vista::of(engine.orbit(), &sky);
        let mut chance = Chance(0x1234_5678_9abc_def1);
        let flights: Vec<Flight> = (0..20_000)
            .map(|_| {
                let beta = libm::exp(libm::log(1e-4) + chance.next() * libm::log(2.5 / 1e-4));
                let ejection_km_s = [0, 1, 2].map(|_| chance.next() - 0.5);
                Flight::of(&vista, &Grain { beta, age_days: 1500.0 * chance.next() * chance.next(), ejection_km_s })
            })
            .collect();
        let mut kernel = Kernel::new();
        let mut worst = 0.0_f64;
        kernel.fly(&flights, |k, end| {
            let Flight { beta, start, days, .. } = flights[k];
            let slow = propagate_bracketed(SUN_GM_AU3_D2 * (1.0 - beta), &start, days).position_au;
            worst = worst.max((end - slow).norm() / slow.norm());
        });
        println!("{}: worst {worst:.1e}, {} of {} by the slow solver", scene.name, kernel.slow, flights.len());
        assert!(worst < 1e-10, "{}: {worst:e}", scene.name);
    }
}

#[test]
fn the_response_of_a_block_is_that_of_the_slow_solver() {
    use tailvane::orbit::conic::propagate_with_response;
    use tailvane_lanes::solve::{BLOCK, Block};
    for scene in &SCENES {
        let (engine, sky) = scene.set();
        let vista = Vista::of(engine.orbit(), &sky);
        let mut chance = Chance(0x7777_1234);
        let mut block = Block::default();
        let flights: Vec<Flight> = (0..BLOCK)
            .map(|_| {
                let ejection_km_s = [0, 1, 2].map(|_| chance.next() - 0.5);
                let (beta, age_days) = (2.0 * chance.next() * chance.next(), 200.0 * chance.next());
                Flight::of(&vista, &Grain { beta, age_days, ejection_km_s })
            })
            .collect();
        for (k, flight) in flights.iter().enumerate() {
            for axis in 0..3 {
                block.place[axis][k] = flight.start.position_au[axis];
                block.velocity[axis][k] = flight.start.velocity_au_d[axis];
            }
            block.mu[k] = SUN_GM_AU3_D2 * (1.0 - flight.beta);
            (block.time[k], block.guess[k]) = (flight.days, flight.guess);
        }
        block.solve();
        let mut response = [[[0.0; BLOCK]; 3]; 3];
        block.respond(&mut response);
        let mut checked = 0;
        for (k, flight) in flights.iter().enumerate() {
            if block.doubtful[k / 64] >> (k % 64) & 1 == 0 {
                let (_, exact) = propagate_with_response(block.mu[k], &flight.start, flight.days);
                let off = exact.position - nalgebra::Matrix3::from_fn(|row, column| response[row][column][k]);
                assert!(off.norm() < 1e-7 * exact.position.norm(), "{}: {off} {}", scene.name, exact.position);
                checked += 1;
            }
        }
        assert!(checked > 240);
    }
}

fn check(name: &str, scene: &Scene, field_deg: f64, laws: &Tails) {
    let (engine, sky) = scene.set();
    let vista = Vista::of(engine.orbit(), &sky);
    let raster = raster(field_deg);
    let weights = Weights::of(laws);
    let mut cloud = Cloud::new();
    let grains = monte_carlo(&vista, laws, &raster, 0x1234_5678_9abc_def1);
    for (quality, limit) in [(Quality::STILL, 0.99), (Quality::DRAGGING, 0.99)] {
        let picture = cloud.render(&vista, &weights, &raster, quality).expect("laws that release dust");
        let (cells, correlation, flux) = compare(&in_cells(picture, &raster), &grains);
        println!("{name}: {cells} cells, correlation {correlation:.5}, flux {flux:.4}, {:?}", picture.effort());
        assert!(cells > 100, "{name}: only {cells} cells");
        assert!(correlation > limit, "{name}: correlation {correlation}");
        assert!((flux - 1.0).abs() < 0.01, "{name}: flux {flux}");
    }
}

#[test]
fn the_picture_is_that_of_a_million_grains_moved_one_by_one_plain_and_with_repulsion() {
    check("plain", &SCENES[0], 6.0, &laws(|_| ()));
    check(
        "beta above 1",
        &SCENES[1],
        3.0,
        &laws(|laws| {
            laws.beta_least = 0.2;
            laws.beta_greatest = 2.5;
            laws.age_greatest_days = 40.0;
        }),
    );
    check(
        "short period, a year, other sizes",
        &SCENES[2],
        2.0,
        &laws(|laws| {
            laws.age_greatest_days = 400.0;
            laws.size_exponent = 2.8;
            laws.activity_cutoff_au = 1.6;
        }),
    );
    check("grazing", &SCENES[3], 12.0, &laws(|_| ()));
}

#[test]
fn the_picture_is_that_of_a_million_grains_moved_one_by_one_edge_on_neck_line_and_outburst() {
    // Edge-on with old slow dust: the neck-line is the bright ray within the fan.
    check(
        "edge-on, neck-line",
        &EDGE_ON,
        6.0,
        &laws(|laws| {
            laws.beta_greatest = 0.05;
            laws.age_greatest_days = 200.0;
            laws.ejection_speed_km_s = 0.5;
        }),
    );
    check(
        "neck-line from the side",
        &AFTER,
        3.0,
        &laws(|laws| {
            laws.beta_least = 1e-4;
            laws.beta_greatest = 0.1;
            laws.age_greatest_days = 60.0;
        }),
    );
    check(
        "outburst, sunward cone",
        &SCENES[0],
        3.0,
        &laws(|laws| {
            laws.ejection_cone_deg = 30.0;
            laws.outburst = Some(Outburst { middle_days: 10.0, width_days: 1.0, strength: 50.0 });
        }),
    );
    check(
        "late start, no ejection",
        &SCENES[0],
        6.0,
        &laws(|laws| {
            laws.ejection_speed_km_s = 0.0;
            laws.activity_start_days = Some(-10.0);
            laws.age_least_days = 5.0;
        }),
    );
}

#[test]
fn few_exact_orbits_place_every_grain_to_a_tenth_of_a_pixel() {
    for (scene, field_deg) in SCENES[..3].iter().zip([6.0, 3.0, 2.0]) {
        let (engine, sky) = scene.set();
        let vista = Vista::of(engine.orbit(), &sky);
        let laws = laws(|laws| {
            laws.beta_least = 1e-4;
            laws.beta_greatest = 2.0;
        });
        let weights = Weights::of(&laws);
        let raster = raster(field_deg);
        let mut cloud = Cloud::new();
        let effort = cloud.render(&vista, &weights, &raster, Quality::STILL).expect("dust").effort();
        let mut chance = Chance(77);
        let (mut worst, mut seen) = (0.0_f64, 0);
        for _ in 0..20_000 {
            let age = 100.0 * chance.next();
            let root_beta = 0.01 + chance.next() * (2.0_f64.sqrt() - 0.01);
            let exact = vista.grain(&Grain::released(root_beta * root_beta, age));
            let Some([xi, eta]) = vista.offset(&exact.position_au) else { continue };
            let exact = [0, 1].map(|k| raster.turn_px[k][0] * xi + raster.turn_px[k][1] * eta);
            if exact[0].abs() > 600.0 || exact[1].abs() > 400.0 {
                continue;
            }
            let released = vista.orbit.place_at(vista.seen.plus_days(-age));
            let anomaly = vista.orbit.whole_anomaly(&released.anomaly);
            let place = cloud.patches().iter().find_map(|patch| patch.place_px(anomaly, root_beta));
            let place = place.expect("a place in the picture lies in a patch");
            worst = worst.max((place[0] - exact[0]).abs()).max((place[1] - exact[1]).abs());
            seen += 1;
        }
        println!("{}: {effort:?}, worst {worst:.4} px of {seen}", scene.name);
        assert!(seen > 2000 && worst < 0.1 && effort.solves <= 5000 && effort.rough == 0);
    }
}

#[test]
fn all_that_is_released_is_in_a_picture_that_holds_it() {
    let (engine, sky) = SCENES[1].set();
    let vista = Vista::of(engine.orbit(), &sky);
    let laws = laws(|laws| {
        laws.beta_greatest = 0.02;
        laws.age_greatest_days = 60.0;
    });
    let mut cloud = Cloud::new();
    let raster = raster(20.0);
    for quality in [Quality::STILL, Quality::DRAGGING] {
        let picture = cloud.render(&vista, &Weights::of(&laws), &raster, quality).expect("dust");
        let sum: f64 = (0..picture.height()).flat_map(|y| picture.line(y)).map(|weight| f64::from(*weight)).sum();
        assert!((sum / picture.whole() - 1.0).abs() < 2e-3, "{sum} {}", picture.whole());
    }
}

#[test]
fn activity_that_releases_nothing_is_refused_and_spans_end_at_the_cut_off() {
    let (engine, sky) = SCENES[2].set();
    let vista = Vista::of(engine.orbit(), &sky);
    for change in [
        (|laws: &mut Tails| laws.activity_cutoff_au = 1.0) as fn(&mut Tails),
        |laws| laws.activity_start_days = Some(61.0),
        |laws| {
            laws.activity_cutoff_au = 1.25;
            laws.age_greatest_days = 20.0;
        },
    ] {
        let weights = Weights::of(&laws(change));
        let error = Cloud::new().render(&vista, &weights, &raster(3.0), Quality::DRAGGING).expect_err("nothing leaves");
        assert!(error.to_string().contains("no release"), "{error}");
    }
    // 1.2 / 0.35 au half axis: a period of 2,319 d, so 5,000 d hold three passages.
    let weights = Weights::of(&laws(|laws| {
        laws.activity_cutoff_au = 2.0;
        laws.age_greatest_days = 5000.0;
    }));
    let spans = weights.release_spans(&vista).expect("dust");
    assert_eq!(spans.len(), 3, "{spans:?}");
    for age in spans.iter().flatten().skip(1).filter(|age| **age < 5000.0) {
        assert!((vista.release(*age).position_au.norm() - 2.0).abs() < 1e-6, "{age}");
    }
}

#[test]
fn tone_rises_with_density() {
    let (engine, sky) = SCENES[0].set();
    let vista = Vista::of(engine.orbit(), &sky);
    let weights = Weights::of(&Tails::default());
    let mut cloud = Cloud::new();
    let picture = cloud.render(&vista, &weights, &raster(6.0), Quality::DRAGGING).expect("dust");
    let mut rgba = Vec::new();
    for stretch in [Stretch::Asinh, Stretch::Log] {
        picture.tone(
            &[[0, 0, 0, 255], [200, 100, 50, 255], [255, 250, 240, 255]],
            Tone { stretch, depth_decades: 3.0 },
            &mut rgba,
        );
        assert_eq!(rgba.len(), 4 * picture.width() * picture.height());
        let mut pairs: Vec<(f32, u8)> = (0..picture.height())
            .flat_map(|y| {
                picture.line(y).iter().zip(rgba[4 * y * picture.width()..].chunks(4)).map(|(d, c)| (*d, c[1]))
            })
            .collect();
        pairs.sort_by(|a, b| a.0.total_cmp(&b.0));
        assert!(pairs.windows(2).all(|pair| pair[0].1 <= pair[1].1));
        assert_eq!(pairs[0].1, 0);
        assert!(pairs[pairs.len() - 1].1 > 245);
    }
}

#[test]
fn hard_laws_and_pictures_stay_finite_and_bounded() {
    let near = Scene { days: 0.01, ..SCENES[3] };
    for scene in SCENES.iter().chain([&EDGE_ON, &AFTER, &near]) {
        let (engine, sky) = scene.set();
        let vista = Vista::of(engine.orbit(), &sky);
        let changes: [fn(&mut Tails); 6] = [
            |_| (),
            |laws| (laws.beta_least, laws.beta_greatest, laws.age_greatest_days) = (1e-7, 3.0, 5000.0),
            |laws| (laws.activity_exponent, laws.size_exponent) = (15.0, 6.0),
            |laws| (laws.activity_exponent, laws.size_exponent, laws.beta_greatest) = (0.0, 1.0, 3.0),
            |laws| (laws.ejection_cone_deg, laws.ejection_spread, laws.ejection_speed_km_s) = (1.0, 1.0, 2.0),
            |laws| {
                (laws.ejection_spread, laws.age_greatest_days) = (0.0, 0.1);
                laws.outburst = Some(Outburst { middle_days: -0.5, width_days: 0.01, strength: 1000.0 });
            },
        ];
        for change in changes {
            let laws = laws(change);
            for (field_deg, nucleus_px) in [(1e-4, [600.0, 400.0]), (3.0, [-9000.0, 400.0]), (150.0, [600.0, 400.0])] {
                for (width, height) in [(1200, 800), (1, 1)] {
                    let raster = Raster { width, height, nucleus_px, ..raster(field_deg) };
                    let quality = Quality { samples: 20_000, ..Quality::DRAGGING };
                    let mut cloud = Cloud::new();
                    let picture = cloud.render(&vista, &Weights::of(&laws), &raster, quality).expect("dust");
                    let mut sum = 0.0;
                    for y in 0..picture.height() {
                        for weight in picture.line(y) {
                            assert!(*weight >= 0.0 && weight.is_finite(), "{} {field_deg}: {weight}", scene.name);
                            sum += f64::from(*weight);
                        }
                    }
                    assert!(
                        picture.whole() > 0.0 && sum <= 1.01 * picture.whole(),
                        "{} {field_deg} {laws:?}: {sum} {}",
                        scene.name,
                        picture.whole()
                    );
                    assert!(picture.effort().solves < 60_000, "{:?}", picture.effort());
                    let mut rgba = Vec::new();
                    let tone = Tone { stretch: Stretch::Asinh, depth_decades: 4.0 };
                    picture.tone(&[[0, 0, 0, 255], [255; 4]], tone, &mut rgba);
                }
            }
        }
    }
}
