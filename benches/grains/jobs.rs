//! What is timed: exact grains by the block, and whole dust pictures, on four invented comets.
//!
//! Shared by the native bench and the wasm of the browser part. No clock here.

use tailvane::engine::Engine;
use tailvane::plan::Plan;
use tailvane::sky::Sky;
use tailvane::tail::cloud::{Cloud, Quality, Raster, Stretch, Tone};
use tailvane::tail::grain::{Grain, Vista};
use tailvane::tail::kernel::{self, Flight, Kernel};
use tailvane::tail::law::Tails;
use tailvane::tail::weight::Weights;
use tailvane::time::Instant;
use tailvane_lanes::solve;

/// Name, perihelion distance, eccentricity, inclination, node, argument, days from perihelion, field in degrees.
pub const SCENES: [(&str, [f64; 7]); 4] = [
    ("A plain", [0.6, 1.0001, 63.0, 62.0, 118.0, 45.0, 6.0]),
    ("B early", [0.9, 0.995, 40.0, 100.0, 20.0, -30.0, 3.0]),
    ("C short period", [1.2, 0.65, 12.0, 100.0, 20.0, 60.0, 2.0]),
    ("D grazing", [0.05, 0.9999, 50.0, 200.0, 77.0, 12.0, 12.0]),
];

/// Grains of the timed blocks: enough that no branch predictor learns them by heart.
pub const GRAINS: usize = 64 * solve::BLOCK;

pub struct Jobs {
    engine: Engine,
    sky: Sky,
    weights: Weights,
    raster: Raster,
    pub cloud: Cloud,
    pub rgba: Vec<u8>,
    pub flights: Vec<Flight>,
    blocks: Vec<solve::Block>,
    across: [[f64; solve::BLOCK]; 2],
    kernel: Kernel,
}

impl Jobs {
    /// `beta_greatest` bounds the grains of the blocks only; pictures show the default laws.
    pub fn new(scene: usize, beta_greatest: f64) -> Jobs {
        let [q, e, inclination, node, argument, days, field_deg] = SCENES[scene].1;
        let plan = format!(
            r#"{{ "tailvane_plan": 1, "comet": {{ "name": "Invented comet", "elements": {{
            "perihelion_distance_au": {q}, "eccentricity": {e}, "inclination_deg": {inclination},
            "ascending_node_deg": {node}, "argument_of_perihelion_deg": {argument},
            "perihelion_time": "2031-02-22.18374 TT", "epoch": "2031-02-10.0 TT" }} }} }}"#
        );
        let mut engine = Engine::new(Plan::parse(&plan).expect("the plan above")).expect("its orbit");
        let time = engine.orbit().perihelion_time().tdb_days() + days;
        let sky = engine.sky_at(Instant::from_tdb_days(time)).expect("a date in the span");
        let scale = 1200.0 / field_deg.to_radians();
        let raster =
            Raster { width: 1200, height: 800, turn_px: [[-scale, 0.0], [0.0, -scale]], nucleus_px: [600.0, 400.0] };
        let flights = flights(&Vista::of(engine.orbit(), &sky), beta_greatest);
        let blocks = flights.chunks(solve::BLOCK).map(block).collect();
        Jobs {
            engine,
            sky,
            weights: Weights::of(&Tails::default()),
            raster,
            cloud: Cloud::new(),
            rgba: Vec::new(),
            flights,
            blocks,
            across: [[0.0; solve::BLOCK]; 2],
            kernel: Kernel::new(),
        }
    }

    /// Every block once: solve and project; returns a sum that depends on all.
    pub fn solve(&mut self) -> f64 {
        let sight = kernel::sight(&Vista::of(self.engine.orbit(), &self.sky));
        let mut sum = 0.0;
        for block in &mut self.blocks {
            block.solve();
            block.project(&sight, &mut self.across);
            sum += self.across[0][0] + self.across[1][solve::BLOCK - 1];
        }
        sum
    }

    /// The same through the interface with its slow solver for doubtful grains; returns how many those were.
    pub fn see(&mut self) -> usize {
        let vista = Vista::of(self.engine.orbit(), &self.sky);
        let before = self.kernel.slow;
        let mut sum = 0.0;
        self.kernel.see(&vista, &self.flights, |_, offset| sum += offset.map_or(0.0, |[xi, _]| xi));
        assert!(sum.is_finite());
        self.kernel.slow - before
    }

    /// A dust picture; returns the orbits solved for it.
    pub fn render(&mut self, samples: usize, cell_px: usize) -> usize {
        let vista = Vista::of(self.engine.orbit(), &self.sky);
        let quality = Quality { samples, cell_px };
        self.cloud.render(&vista, &self.weights, &self.raster, quality).expect("dust").effort().solves
    }

    /// Its colours; returns how many bytes.
    pub fn tone(&mut self) -> usize {
        let stops = [[10, 12, 18, 255], [120, 90, 60, 255], [255, 241, 214, 255]];
        let tone = Tone { stretch: Stretch::Asinh, depth_decades: 3.0 };
        self.cloud.picture().tone(&stops, tone, &mut self.rgba);
        self.rgba.len()
    }

    /// A number that tells two pictures apart by any one bit.
    pub fn print(&self) -> u32 {
        let picture = self.cloud.picture();
        let cells = (0..picture.height()).flat_map(|y| picture.line(y));
        cells.fold(2_166_136_261, |sum: u32, cell| (sum ^ cell.to_bits()).wrapping_mul(16_777_619))
    }
}

/// Grains to 100 days of age, beta even in the logarithm from 1e-4, ejected at up to half a km/s along each axis.
fn flights(vista: &Vista, beta_greatest: f64) -> Vec<Flight> {
    let mut seed = 0x1234_5678_9abc_def1_u64;
    let mut chance = move || {
        seed ^= seed << 13;
        seed ^= seed >> 7;
        seed ^= seed << 17;
        (seed >> 11) as f64 / (1_u64 << 53) as f64
    };
    (0..GRAINS)
        .map(|_| {
            let beta = libm::exp(libm::log(1e-4) + chance() * libm::log(beta_greatest / 1e-4));
            let age_days = 100.0 * chance();
            Flight::of(vista, &Grain { beta, age_days, ejection_km_s: [0, 1, 2].map(|_| chance() - 0.5) })
        })
        .collect()
}

fn block(flights: &[Flight]) -> solve::Block {
    let mut block = solve::Block::default();
    for (k, flight) in flights.iter().enumerate() {
        for axis in 0..3 {
            block.place[axis][k] = flight.start.position_au[axis];
            block.velocity[axis][k] = flight.start.velocity_au_d[axis];
        }
        block.mu[k] = tailvane::orbit::conic::SUN_GM_AU3_D2 * (1.0 - flight.beta);
        block.time[k] = flight.days;
        block.guess[k] = flight.guess;
    }
    block
}
