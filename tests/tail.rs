use tailvane::engine::Engine;
use tailvane::plan::Plan;
use tailvane::tail::curve::{self, Fineness};
use tailvane::tail::grain::{Grain, Vista};
use tailvane::tail::inverse;
use tailvane::tail::neck_line::knot_of;

fn engine(q: f64, e: f64, w: f64, node: f64, inc: f64, t: &str) -> Engine {
    let text = format!(
        r#"{{"tailvane_plan":1,"comet":{{"name":"x","elements":{{"perihelion_distance_au":{q},"eccentricity":{e},"inclination_deg":{inc},"ascending_node_deg":{node},"argument_of_perihelion_deg":{w},"perihelion_time":"{t} TT"}}}}}}"#
    );
    Engine::new(Plan::parse(&text).unwrap()).unwrap()
}

#[test]
fn try_out() {
    let mut engine = engine(0.16826638, 0.99929199, 332.78599, 222.77807, 63.16457, "2004-04-17.08998");
    let time = "2004-04-30.045 UTC".parse::<tailvane::time::Stamp>().unwrap().instant();
    let sky = engine.sky_at(time).unwrap();
    let vista = Vista::of(engine.orbit(), &sky);
    for beta in [0.01, 0.02, 0.03, 0.04, 0.05] {
        let k = knot_of(&vista, beta, 100.0).unwrap();
        let [x, y] = k.offset.unwrap();
        println!(
            "{beta} tau {:.3} d {:.4} pa {:.3}",
            k.age_days,
            x.hypot(y).atan().to_degrees(),
            x.atan2(y).to_degrees().rem_euclid(360.0)
        );
    }
    let laws = engine.plan().tails.clone();
    let time = "2004-05-20.045 UTC".parse::<tailvane::time::Stamp>().unwrap().instant();
    let sky = engine.sky_at(time).unwrap();
    let vista = Vista::of(engine.orbit(), &sky);
    for (beta, age) in [(0.01, 10.0), (0.5, 3.0), (0.1, 30.0), (0.002, 60.0), (1.0, 20.0), (0.9, 0.5)] {
        let place = vista.grain(&Grain::released(beta, age)).position_au;
        if let Some(o) = vista.offset(&place) {
            let start = std::time::Instant::now();
            let found = inverse::landings(&vista, o, &laws);
            println!("{beta} {age} {found:?} {:?}", start.elapsed());
        }
    }
    let start = std::time::Instant::now();
    let curves = curve::chosen(&vista, &laws, &Fineness { tolerance_rad: 1e-5, field_tan: 0.2 });
    println!(
        "{:?} {} {:?}",
        start.elapsed(),
        curves.len(),
        curves.iter().map(|c| c.pieces.iter().map(|p| p.len()).collect::<Vec<_>>()).collect::<Vec<_>>()
    );
}
