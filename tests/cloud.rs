//! Is the dust picture right, and are fast grains where slow ones are?

use tailvane::engine::Engine;
use tailvane::orbit::conic::{SUN_GM_AU3_D2, propagate_bracketed};
use tailvane::plan::Plan;
use tailvane::sky::Sky;
use tailvane::tail::grain::{Grain, Vista};
use tailvane::tail::kernel::{Flight, Kernel};
use tailvane::time::Instant;

/// An invented comet and when it is looked at, days from perihelion.
struct Scene {
    name: &'static str,
    perihelion_distance_au: f64,
    eccentricity: f64,
    angles_deg: [f64; 3],
    days: f64,
}

/// The four scenes of the speed benchmark: plain, before perihelion, short-period, grazing.
const SCENES: [Scene; 4] = [
    Scene {
        name: "plain",
        perihelion_distance_au: 0.6,
        eccentricity: 1.0001,
        angles_deg: [63.0, 62.0, 118.0],
        days: 45.0,
    },
    Scene {
        name: "early",
        perihelion_distance_au: 0.9,
        eccentricity: 0.995,
        angles_deg: [40.0, 100.0, 20.0],
        days: -30.0,
    },
    Scene {
        name: "short",
        perihelion_distance_au: 1.2,
        eccentricity: 0.65,
        angles_deg: [12.0, 100.0, 20.0],
        days: 60.0,
    },
    Scene {
        name: "grazing",
        perihelion_distance_au: 0.05,
        eccentricity: 0.9999,
        angles_deg: [50.0, 200.0, 77.0],
        days: 12.0,
    },
];

impl Scene {
    fn set(&self) -> (Engine, Sky) {
        let [inclination, node, argument] = self.angles_deg;
        let plan = format!(
            r#"{{ "tailvane_plan": 1, "comet": {{ "name": "Invented comet", "elements": {{
            "perihelion_distance_au": {}, "eccentricity": {}, "inclination_deg": {inclination},
            "ascending_node_deg": {node}, "argument_of_perihelion_deg": {argument},
            "perihelion_time": "2031-02-22.18374 TT", "epoch": "2031-02-10.0 TT" }} }} }}"#,
            self.perihelion_distance_au, self.eccentricity
        );
        let mut engine = Engine::new(Plan::parse(&plan).expect("the plan above")).expect("its orbit");
        let time = engine.orbit().perihelion_time().tdb_days() + self.days;
        let sky = engine.sky_at(Instant::from_tdb_days(time)).expect("a date in the span");
        (engine, sky)
    }
}

/// Seeded even numbers from 0 to 1.
struct Chance(u64);

impl Chance {
    fn next(&mut self) -> f64 {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 >> 11) as f64 / (1_u64 << 53) as f64
    }
}

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
