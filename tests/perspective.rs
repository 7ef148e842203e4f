//! Which dust projects sunward: against what was seen of published comets, and against exact grains.
//!
//! The judge is a parameter, so that the rules of thumb it replaces (the orbit-plane angle, negative velocity) answer
//! the same questions and are seen to fail.

use nalgebra::Vector3;
use tailvane::engine::{Engine, TailView};
use tailvane::frame::half_turn;
use tailvane::plan::Plan;
use tailvane::sky::Sky;
use tailvane::tail::grain::{Grain, Vista};
use tailvane::tail::law::Tails;
use tailvane::tail::perspective::{Grade, Map, Perspective, Recipe, Side, Verdict};
use tailvane::tail::weight::Weights;
use tailvane::time::Stamp;

/// One night of a published comet.
struct Night {
    comet: String,
    time: String,
    engine: Engine,
    sky: Sky,
    anti_tail: bool,
    longer_than_deg: Option<f64>,
}

impl Night {
    fn name(&self) -> String {
        format!("{} {}", self.comet, self.time)
    }

    fn perspective(&self) -> Perspective {
        self.engine.tails_at(&self.sky).perspective
    }
}

/// A plan of a comet by its elements: q, e, i, argument of perihelion, node; and its tails section.
fn plan(elements: [f64; 5], perihelion_time: &str, tails: Tails) -> Plan {
    let [q, e, i, peri, node] = elements;
    let text = format!(
        r#"{{"tailvane_plan": 1, "comet": {{"name": "Invented comet", "elements": {{
            "perihelion_distance_au": {q}, "eccentricity": {e}, "inclination_deg": {i},
            "argument_of_perihelion_deg": {peri}, "ascending_node_deg": {node},
            "perihelion_time": "{perihelion_time}"}}}}}}"#
    );
    Plan { tails, ..Plan::parse(&text).expect("a plan") }
}

fn sky(plan: Plan, time: &str) -> (Engine, Sky) {
    let mut engine = Engine::new(plan).expect("a valid plan");
    let time: Stamp = time.parse().expect("a time");
    let sky = engine.sky_at(time.instant()).expect("a time within the span");
    (engine, sky)
}

fn nights() -> Vec<Night> {
    include_str!("truth/anti_tails.csv")
        .lines()
        .filter(|line| !line.starts_with('#') && !line.starts_with("comet,"))
        .map(|line| {
            let fields: Vec<&str> = line.split(',').collect();
            let number = |index: usize| fields[index].parse::<f64>().expect("a number");
            let tails = Tails { age_greatest_days: number(8), ..Tails::default() };
            let elements = [number(1), number(2), number(3), number(4), number(5)];
            let (engine, sky) = sky(plan(elements, fields[6], tails), fields[7]);
            Night {
                comet: fields[0].to_owned(),
                time: fields[7].to_owned(),
                engine,
                sky,
                anti_tail: match fields[9] {
                    "anti-tail" => true,
                    "none" => false,
                    other => panic!("{other}"),
                },
                longer_than_deg: fields[10].parse().ok(),
            }
        })
        .collect()
}

/// The nights on which a judge is wrong.
fn misjudged(judge: impl Fn(&Night) -> bool) -> Vec<String> {
    nights().iter().filter(|night| judge(night) != night.anti_tail).map(Night::name).collect()
}

/// How far negative velocity projects from the Sun's direction, degrees.
fn negative_velocity_from_sun_deg(sky: &Sky) -> f64 {
    let back = sky.negative_velocity_position_angle_rad.expect("a direction");
    180.0 - half_turn(back - sky.antisolar_position_angle_rad.expect("a direction")).abs().to_degrees()
}

#[test]
fn the_dust_knows_the_published_anti_tails_and_the_crossings_without_one() {
    let wrong = misjudged(|night| match night.perspective().verdict {
        Verdict::Perspective(grade) => grade >= Grade::Possible,
        _ => false,
    });
    assert_eq!(wrong, Vec::<String>::new());
}

#[test]
fn where_none_can_be_seen_the_verdict_is_none() {
    for night in nights().iter().filter(|night| !night.anti_tail) {
        let perspective = night.perspective();
        assert_eq!(perspective.verdict, Verdict::None, "{}: {:?}", night.name(), perspective.ejected);
    }
}

#[test]
fn the_orbit_plane_angle_would_misjudge_them() {
    for gate_deg in [1.0, 2.0, 5.0, 10.0] {
        let wrong = misjudged(|night| night.sky.observer_from_orbit_plane_rad.to_degrees().abs() < gate_deg);
        assert!(wrong.len() >= 6, "within {gate_deg} deg of the plane: {wrong:?}");
    }
    // Trap: well off the plane, and yet seen.
    let wrong = misjudged(|night| night.sky.observer_from_orbit_plane_rad.to_degrees().abs() < 2.0);
    for seen in ["C/1999 H1 1999-08-05.0 UTC", "C/1973 E1 1974-01-02.0 UTC", "C/2011 L4 2013-05-15.0 UTC"] {
        assert!(wrong.iter().any(|name| name == seen), "{seen}: {wrong:?}");
    }
}

#[test]
fn negative_velocity_would_misjudge_them() {
    for within_deg in [40.0, 90.0] {
        let wrong = misjudged(|night| negative_velocity_from_sun_deg(&night.sky) < within_deg);
        assert!(wrong.contains(&"C/1956 R1 1957-05-05.0 UTC".to_owned()), "within {within_deg} deg: {wrong:?}");
    }
}

#[test]
fn anti_tails_are_as_long_as_reported() {
    let long: Vec<Night> = nights().into_iter().filter(|night| night.longer_than_deg.is_some()).collect();
    assert_eq!(long.len(), 3);
    for night in long {
        let reach = night.perspective().ejected.anti_tail.expect("dust").distance_rad[1].to_degrees();
        assert!(Some(reach) > night.longer_than_deg, "{}: {reach}", night.name());
    }
}

/// C/2004 F4, before its crossing: measured at 122.5 deg (observation 1, 2004 Apr 30.045; Pansecchi & Scardia 2005, A&A
/// 430, 1129), and found to be a true, neck-line anti-tail. Perspective dust is there too, but elsewhere.
#[test]
fn a_neck_line_spike_near_a_crossing_does_not_lie_where_perspective_dust_does() {
    let elements = [0.16826638, 0.99929199, 63.16457, 332.78599, 222.77807];
    let (engine, sky) = sky(plan(elements, "2004-04-17.08998 TDB", Tails::default()), "2004-04-30.045 UTC");
    let tails = engine.tails_at(&sky);
    let dust = tails.perspective.at_rest.anti_tail.expect("some dust");
    let off_deg = half_turn(dust.position_angle_rad - 122.5_f64.to_radians()).abs().to_degrees();
    assert!(off_deg > 10.0, "{off_deg}");
    assert!(dust.share < 0.05, "{dust:?}");
    let sentence = engine.saying(&sky, &tails).sentence;
    assert!(sentence.contains("can be perspective"), "{sentence}");
}

/// An even point of the unit cube (additive recurrence with the roots of x^6 = x + 1).
fn point(index: u32) -> [f64; 5] {
    let root = 1.134_724_138_401_519_5_f64;
    let mut step = 1.0;
    std::array::from_fn(|_| {
        step /= root;
        let value = 0.5 + step * f64::from(index + 1);
        value - value.floor()
    })
}

/// Sunward light over all light, from grains propagated one by one, and the same from the cells of a map.
fn sunward_light(vista: &Vista, tails: &Tails, perspective: &Perspective, thrown: bool) -> f64 {
    let weights = Weights::of(tails);
    let sun = perspective.sunward_position_angle_rad.expect("a sunward side");
    let toward_sun = vista.axes.east * libm::sin(sun) + vista.axes.north * libm::cos(sun);
    let now = vista.orbit.days_from_perihelion(vista.seen);
    let (mut sunward, mut whole) = (0.0, 0.0);
    for index in 0..30_000 {
        let [size, age, speed, polar, turn] = point(index);
        let beta = tails.beta_least * libm::pow(tails.beta_greatest / tails.beta_least, size);
        let age_days = tails.age_least_days + (tails.age_greatest_days - tails.age_least_days) * age;
        let r = vista.release(age_days).position_au.norm();
        let light = weights.light(beta, r, now - age_days) * beta;
        let mean = if thrown { weights.mean_speed_km_s(beta, r) } else { 0.0 };
        let ejection_km_s = weights.ejection([speed, polar, turn]).map(|part| part * mean);
        let place = vista.grain(&Grain { beta, age_days, ejection_km_s }).position_au - vista.observer_au;
        whole += light;
        let across: Vector3<f64> = place - vista.axes.sight * place.dot(&vista.axes.sight);
        let toward = across.dot(&toward_sun);
        let along = place.dot(&vista.axes.sight);
        let tangent = |length: f64| if along > 0.0 { length / along } else { f64::INFINITY };
        let coma = tangent(across.norm()) < libm::tan(perspective.coma_rad);
        let apex = if thrown { libm::tan(perspective.fountain_rad) } else { 0.0 };
        let fountain = tangent(across.norm() + toward) < 2.0 * apex;
        if toward > 0.0 && !coma && !fountain {
            sunward += light;
        }
    }
    sunward / whole
}

fn sunward_in_map(map: &Map, thrown: bool) -> f64 {
    let (mut sunward, mut whole) = (0.0, 0.0);
    for (index, cell) in map.cells.iter().enumerate() {
        let (row, column) = (index / map.columns(), index % map.columns());
        let days = map.age_edges_days[row + 1] - map.age_edges_days[row];
        let light = cell.brightness * days * libm::log(map.beta_edges[column + 1] / map.beta_edges[column]);
        whole += light;
        sunward += light * if thrown { cell.sunward_ejected } else { cell.sunward_at_rest };
    }
    sunward / whole
}

/// Sunward light from exact grains and from the map, without and with ejection.
fn compared(engine: &Engine, sky: &Sky) -> [[f64; 2]; 2] {
    let perspective = engine.tails_at(sky).perspective;
    [false, true].map(|thrown| {
        let exact = sunward_light(&engine.vista(sky), &engine.plan().tails, &perspective, thrown);
        [exact, sunward_in_map(&perspective.map, thrown)]
    })
}

#[test]
fn the_sums_agree_with_grains_propagated_one_by_one() {
    let mut shares = Vec::new();
    for night in nights() {
        for [exact, summed] in compared(&night.engine, &night.sky) {
            // Half a percent is the noise of 30,000 grains and the first order in the ejection velocity.
            assert!((exact - summed).abs() < 0.01, "{}: {exact} {summed}", night.name());
            shares.push(exact);
        }
    }
    // The bar means something: sunward shares spread over most of their range.
    assert!(shares.iter().any(|share| *share > 0.4) && shares.iter().any(|share| *share < 0.01), "{shares:?}");
}

#[test]
fn the_sums_hold_for_old_fast_and_repelled_dust() {
    let short_period = [1.083, 0.6472, 11.36, 110.0, 260.0];
    let fast = [1.214, 2.31, 41.7, 40.0, 140.0];
    let grazing = [0.02, 0.9999, 77.0, 20.0, 200.0];
    let plain = Tails::default();
    let cases = [
        ("old", short_period, Tails { age_greatest_days: 1500.0, ..plain.clone() }),
        ("jet", short_period, Tails { ejection_cone_deg: 20.0, ejection_speed_km_s: 0.2, ..plain.clone() }),
        ("hyperbola", fast, Tails { beta_least: 1e-4, beta_greatest: 2.5, ejection_spread: 1.0, ..plain.clone() }),
        ("grazing", grazing, Tails { age_greatest_days: 60.0, activity_start_days: Some(-20.0), ..plain }),
    ];
    for (name, elements, tails) in cases {
        for time in ["2032-08-20.0 UTC", "2032-09-27.0 UTC", "2032-12-01.0 UTC"] {
            let (engine, sky) = sky(plan(elements, "2032-09-07.3 TT", tails.clone()), time);
            for [exact, summed] in compared(&engine, &sky) {
                assert!((exact - summed).abs() < 0.02, "{name} {time}: {exact} {summed}");
            }
        }
    }
}

fn example() -> (Engine, Sky) {
    let elements = [0.30154422, 1.00003277, 84.20820, 333.65164, 65.66589];
    sky(plan(elements, "2013-03-10.16996 TDB", Tails::default()), "2013-05-15.0 UTC")
}

#[test]
fn a_wider_sector_holds_more_and_half_the_circle_holds_all() {
    let mut last = 0.0;
    for half_width in [5.0, 20.0, 40.0, 70.0, 90.0] {
        let (engine, sky) = example();
        let tails = Tails { anti_tail_half_width_deg: half_width, ..Tails::default() };
        let engine = Engine::new(Plan { tails, ..engine.plan().clone() }).expect("a plan");
        let dust = engine.tails_at(&sky).perspective.ejected;
        let share = dust.anti_tail.map_or(0.0, |part| part.share);
        assert!(share > last, "{half_width}: {share}");
        last = share;
        if half_width == 90.0 {
            let sunward = dust.sunward.expect("dust").share;
            assert!((sunward - share).abs() < 1e-12, "{sunward} {share}");
        }
    }
}

#[test]
fn without_speed_the_ejected_dust_is_the_dust_at_rest() {
    let (engine, sky) = example();
    let tails = Tails { ejection_speed_km_s: 0.0, ..Tails::default() };
    let engine = Engine::new(Plan { tails, ..engine.plan().clone() }).expect("a plan");
    let perspective = engine.tails_at(&sky).perspective;
    let share = |dust: &tailvane::tail::perspective::Dust| dust.sunward.expect("dust").share;
    assert!((share(&perspective.at_rest) - share(&perspective.ejected)).abs() < 0.01);
    assert_eq!(perspective.fountain_rad, 0.0);
}

#[test]
fn the_map_names_the_side_of_each_grain() {
    let (engine, sky) = example();
    let map = engine.tails_at(&sky).perspective.map;
    assert_eq!(map.cells.len(), map.columns() * map.rows());
    // Young small dust streams away from the Sun; old large dust lies toward it.
    assert_eq!(map.cell(0.5, 8.0).and_then(|cell| cell.side), Some(Side::Tail));
    assert_eq!(map.cell(0.01, 75.0).and_then(|cell| cell.side), Some(Side::AntiTail));
    assert_eq!(map.cell(0.002, 0.5).and_then(|cell| cell.side), Some(Side::Coma));
    assert_eq!(map.cell(1.5, 10.0), None);
    assert!(map.cells.iter().all(|cell| (0.0..=1.0).contains(&cell.brightness)));
}

fn gallery() -> Vec<(String, Plan)> {
    let folder = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/gallery");
    let mut plans: Vec<(String, Plan)> = std::fs::read_dir(folder)
        .expect("the gallery")
        .map(|entry| {
            let path = entry.expect("an entry").path();
            let text = std::fs::read_to_string(&path).expect("a plan");
            (path.file_name().expect("a name").to_string_lossy().into_owned(), Plan::parse(&text).expect("a plan"))
        })
        .collect();
    plans.sort_by(|a, b| a.0.cmp(&b.0));
    plans
}

fn seen(plan: Plan) -> (Engine, Sky, TailView) {
    let time = plan.time.as_ref().expect("a time").instant();
    let mut engine = Engine::new(plan).expect("a valid plan");
    let sky = engine.sky_at(time).expect("a sky");
    let tails = engine.tails_at(&sky);
    (engine, sky, tails)
}

#[test]
fn every_nasty_sky_is_told_in_three_sentences_without_a_made_up_number() {
    let mut in_line = 0;
    for (name, plan) in gallery() {
        let (engine, sky, tails) = seen(plan);
        let said = engine.saying(&sky, &tails);
        let text = format!("{} {}", said.headline, said.sentence);
        for word in ["NaN", "inf", "-0", "360\u{b0}", "  ", "None", ".."] {
            assert!(!text.contains(word), "{name}: {word:?} in {text}");
        }
        let sentences = said.sentence.matches(". ").count() + 1;
        assert!(sentences <= 3, "{name}: {sentences} in {}", said.sentence);
        let parts = [tails.perspective.at_rest.sunward, tails.perspective.ejected.sunward];
        for part in parts.into_iter().flatten() {
            assert!((0.0..=1.0).contains(&part.share) && part.beside_tail.is_finite(), "{name}: {part:?}");
            assert!(part.beta[0] <= part.beta[1] && part.age_days[0] <= part.age_days[1], "{name}: {part:?}");
        }
        if sky.antisolar_position_angle_rad.is_none() {
            in_line += 1;
            assert_eq!(tails.perspective.verdict, Verdict::NoSunwardSide, "{name}");
            assert!(tails.perspective.ejected.anti_tail.is_none() && tails.perspective.at_rest.fan_rad.is_none());
            assert!(tails.perspective.map.cells.iter().all(|cell| cell.side.is_none()));
            assert!(said.sentence.contains("no sunward side"), "{name}: {}", said.sentence);
        }
    }
    assert!(in_line >= 1, "no sky of the gallery has comet, Sun and observer in line");
}

/// The season's search looks with a glance; what it finds must be what the sentence says.
#[test]
fn a_glance_sees_to_the_last_bit_what_the_sums_see() {
    let mut grades = Vec::new();
    let mut check = |name: &str, engine: &Engine, sky: &Sky| {
        let whole = engine.tails_at(sky).perspective;
        let glance = Recipe::of(&engine.plan().tails).glance(&engine.vista(sky), sky);
        assert_eq!(glance.verdict, whole.verdict, "{name}");
        for (seen, dust) in [(glance.at_rest, whole.at_rest), (glance.ejected, whole.ejected)] {
            let bits = |share: f64, beside_tail: f64| [share.to_bits(), beside_tail.to_bits()];
            assert_eq!(
                seen.map(|seen| bits(seen.share, seen.beside_tail)),
                dust.anti_tail.map(|part| bits(part.share, part.beside_tail)),
                "{name}"
            );
            grades.push(dust.grade);
        }
    };
    for night in nights() {
        check(&night.name(), &night.engine, &night.sky);
    }
    for (name, plan) in gallery() {
        let (engine, sky, _) = seen(plan);
        check(&name, &engine, &sky);
    }
    assert!(grades.contains(&Grade::None) && grades.contains(&Grade::Strong), "{grades:?}");
}

#[test]
fn where_nothing_left_nothing_is_said_to_lie_anywhere() {
    let (engine, sky) = example();
    let tails = Tails { activity_start_days: Some(5000.0), ..Tails::default() };
    let engine = Engine::new(Plan { tails, ..engine.plan().clone() }).expect("a plan");
    let tails = engine.tails_at(&sky);
    assert_eq!(tails.perspective.verdict, Verdict::NoDust);
    assert!(tails.perspective.at_rest.fan_rad.is_none() && tails.perspective.ejected.sunward.is_none());
    let said = engine.saying(&sky, &tails);
    assert!(said.headline.contains("No dust was released"), "{}", said.headline);
    assert!(said.sentence.contains("no dust was released in the chosen ages"), "{}", said.sentence);
}

#[test]
fn the_words_name_grains_dates_and_brightness() {
    let (engine, sky) = example();
    let said = engine.saying(&sky, &engine.tails_at(&sky));
    // Regression of the form, with the numbers of this night: gas, fan and sunward dust within a few degrees.
    assert!(said.headline.starts_with("Gas toward 297\u{b0}. Dust from 297\u{b0} to "), "{}", said.headline);
    assert!(said.headline.contains("Old dust also on the sunward side, toward "), "{}", said.headline);
    for words in
        ["can be perspective", "grains larger than about", "released before", "March", "percent of the dust's light"]
    {
        assert!(said.sentence.contains(words), "{words}: {}", said.sentence);
    }
}

#[test]
fn a_short_outburst_is_not_stepped_over() {
    let (engine, sky) = example();
    let share = |strength: f64| {
        let outburst = tailvane::tail::law::Outburst { middle_days: 0.0, width_days: 0.2, strength };
        let tails = Tails { outburst: Some(outburst), ..Tails::default() };
        let engine = Engine::new(Plan { tails, ..engine.plan().clone() }).expect("a plan");
        let map = engine.tails_at(&sky).perspective.map;
        let light = |row: usize| map.cells[row * map.columns()].brightness;
        let days = |row: usize| map.age_edges_days[row + 1] - map.age_edges_days[row];
        let age = engine.orbit().days_from_perihelion(sky.time);
        let near = |row: &usize| (map.age_edges_days[*row] - age).abs() < 0.5;
        let whole: f64 = (0..map.rows()).map(|row| light(row) * days(row)).sum();
        (0..map.rows()).filter(near).map(|row| light(row) * days(row)).sum::<f64>() / whole
    };
    assert!(share(1000.0) > 0.5, "{}", share(1000.0));
    assert!(share(1.0) < 0.2, "{}", share(1.0));
}
