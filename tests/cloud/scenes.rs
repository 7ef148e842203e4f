//! The invented comets that the dust tests look at, the picture they fall on, and seeded chance.

use tailvane::engine::Engine;
use tailvane::plan::Plan;
use tailvane::sky::Sky;
use tailvane::tail::cloud::Raster;
use tailvane::tail::law::Tails;
use tailvane::time::Instant;

/// An invented comet and when it is looked at, days from perihelion.
#[derive(Clone, Copy)]
pub struct Scene {
    pub name: &'static str,
    pub perihelion_distance_au: f64,
    pub eccentricity: f64,
    pub angles_deg: [f64; 3],
    pub days: f64,
}

/// The four scenes of the speed benchmark: plain, before perihelion, short-period, grazing.
pub const SCENES: [Scene; 4] = [
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
    pub fn set(&self) -> (Engine, Sky) {
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
pub struct Chance(pub u64);

impl Chance {
    pub fn next(&mut self) -> f64 {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 >> 11) as f64 / (1_u64 << 53) as f64
    }
}

pub const EDGE_ON: Scene = Scene {
    name: "edge-on",
    perihelion_distance_au: 0.6,
    eccentricity: 1.0001,
    angles_deg: [2.0, 62.0, 118.0],
    days: 60.0,
};
pub const AFTER: Scene = Scene {
    name: "after",
    perihelion_distance_au: 0.17,
    eccentricity: 0.9993,
    angles_deg: [63.0, 222.0, 332.0],
    days: 13.0,
};

/// A picture 1200 x 800 that shows so many degrees, with the nucleus in the middle, north up and east to the left.
pub fn raster(field_deg: f64) -> Raster {
    let scale = 1200.0 / field_deg.to_radians();
    Raster { width: 1200, height: 800, turn_px: [[-scale, 0.0], [0.0, -scale]], nucleus_px: [600.0, 400.0] }
}

pub fn laws(change: impl Fn(&mut Tails)) -> Tails {
    let mut laws = Tails { age_greatest_days: 100.0, ..Tails::default() };
    change(&mut laws);
    laws.validate().expect("laws in range");
    laws
}
