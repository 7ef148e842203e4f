//! explore
use tailvane::body::observer::Observer;
use tailvane::engine::Engine;
use tailvane::plan::Plan;
use tailvane::time::Stamp;

fn plan(el: &[&str], age: f64) -> Plan {
    let text = format!(
        r#"{{"tailvane_plan":1,"comet":{{"name":"x","elements":{{"perihelion_distance_au":{},"eccentricity":{},"inclination_deg":{},"argument_of_perihelion_deg":{},"ascending_node_deg":{},"perihelion_time":"{} TDB"}}}},"tails":{{"age_greatest_days":{age}}}}}"#,
        el[0], el[1], el[2], el[3], el[4], el[5]
    );
    Plan::parse(&text).unwrap()
}

#[test]
fn explore() {
    let file = std::fs::read_to_string("/tmp/setup/anti.txt").unwrap();
    for line in file.lines().filter(|l| !l.trim().is_empty()) {
        let f: Vec<&str> = line.split_whitespace().collect();
        // name year? q e i w node T | time | age
        let el = [f[1], f[2], f[3], f[4], f[5], f[6]];
        let plan = plan(&el, f[8].parse().unwrap());
        let _ = Observer::Geocentre;
        let mut engine = Engine::new(plan).unwrap();
        let stamp: Stamp = format!("{} TT", f[7]).parse().unwrap();
        let sky = engine.sky_at(stamp.instant()).unwrap();
        let mut times: Vec<f64> = (0..40)
            .map(|_| {
                let t0 = std::time::Instant::now();
                std::hint::black_box(engine.tails_at(&sky).perspective);
                t0.elapsed().as_secs_f64() * 1e3
            })
            .collect();
        times.sort_by(f64::total_cmp);
        print!("best {:.2} median {:.2} ms ", times[0], times[20]);
        let t0 = std::time::Instant::now();
        let p = engine.tails_at(&sky).perspective;
        let dt = t0.elapsed();
        let said = engine.saying(&sky, &engine.tails_at(&sky));
        println!("{}\n   {}", said.headline, said.sentence);
        let d = |x: f64| x.to_degrees();
        println!(
            "{} {} age{}  plane {:.1} r {:.2} D {:.2} phase {:.0} anti {:.1} -v {:.1} expect {} [{}] => {:?} grid {}x{} {:?}",
            f[0],
            f[7],
            f[8],
            d(sky.observer_from_orbit_plane_rad),
            sky.sun_distance_au,
            sky.observer_distance_au,
            d(sky.phase_angle_rad),
            d(sky.antisolar_position_angle_rad.unwrap()),
            d(sky.negative_velocity_position_angle_rad.unwrap()),
            f[9],
            f.get(10).unwrap_or(&""),
            p.verdict,
            p.map.columns(),
            p.map.rows(),
            dt
        );
        for (n, q) in [("rest", &p.at_rest), ("ejec", &p.ejected)] {
            print!("   {n} coma {:.3} fan {:?} ", d(p.fountain_rad), q.fan_rad.map(|f| f.map(|x| d(x).round())));
            for (m, part) in [("sun", &q.sunward), ("anti", &q.anti_tail)] {
                if let Some(a) = part {
                    print!(
                        " {m}: share {:.4} beside {:.4} pa {:.1} dist {:.3}-{:.3} beta {:.4}-{:.4} age {:.0}-{:.0};",
                        a.share,
                        a.beside_tail,
                        d(a.position_angle_rad),
                        d(a.distance_rad[0]),
                        d(a.distance_rad[1]),
                        a.beta[0],
                        a.beta[1],
                        a.age_days[0],
                        a.age_days[1]
                    );
                }
            }
            println!();
        }
    }
}
