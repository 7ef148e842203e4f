//! What do a million grains of the law look like, drawn and moved one by one, and how near does a picture come?

use crate::scenes::Chance;
use tailvane::body::KM_S_PER_AU_D;
use tailvane::tail::cloud::{Picture, Raster};
use tailvane::tail::grain::Vista;
use tailvane::tail::kernel::{Flight, Kernel};
use tailvane::tail::law::Tails;

/// Side of the cells in which pictures are compared, pixels, and grains of the Monte Carlo.
pub const SIDE: usize = 8;
pub const GRAINS: usize = 1_000_000;

/// Grains of the law, drawn one by one, each moved by the exact kernel: how many fall into each cell.
///
/// The law is written down here a second time, from its words: rate ~ r^-p with cut-off, start and outburst by
/// rejection; beta from its power law; speed by the polar method, redrawn beyond the cut-offs; direction even over the
/// cone. Four grains share a time of release, which changes no mean.
pub fn monte_carlo(vista: &Vista, laws: &Tails, raster: &Raster, seed: u64) -> Vec<f64> {
    let mut chance = Chance(seed);
    let now = vista.orbit.days_from_perihelion(vista.seen);
    let rate = |age: f64, r: f64| {
        let days = now - age;
        if r > laws.activity_cutoff_au || laws.activity_start_days.is_some_and(|start| days < start) {
            return 0.0;
        }
        let burst = laws.outburst.map_or(0.0, |burst| {
            let x = (days - burst.middle_days) / burst.width_days;
            (burst.strength - 1.0) * libm::exp2(-4.0 * x * x)
        });
        libm::pow(r, -laws.activity_exponent) * (1.0 + burst)
    };
    let (youngest, oldest) = (laws.age_least_days, laws.age_greatest_days);
    let highest = (0..20_000)
        .map(|k| youngest + (oldest - youngest) * f64::from(k) / 20_000.0)
        .map(|age| rate(age, vista.release(age).position_au.norm()))
        .fold(0.0, f64::max)
        * 1.01;
    let exponent = laws.size_exponent - 3.0;
    let cone = 1.0 - libm::cos(laws.ejection_cone_deg.to_radians());
    let mut gaussian = {
        let mut chance = Chance(seed ^ 0x5555);
        move || loop {
            let (x, y) = (2.0 * chance.next() - 1.0, 2.0 * chance.next() - 1.0);
            let square = x * x + y * y;
            if square > 0.0 && square < 1.0 {
                return x * (-2.0 * libm::log(square) / square).sqrt();
            }
        }
    };

    let mut counts = vec![0.0; raster.width / SIDE * (raster.height / SIDE)];
    let mut kernel = Kernel::new();
    let here = vista.orbit.whole_anomaly(&vista.orbit.place_at(vista.seen).anomaly);
    let mut flights = Vec::with_capacity(4096);
    let mut done = 0;
    while done < GRAINS {
        flights.clear();
        while flights.len() < 4096 && done + flights.len() < GRAINS {
            let age = youngest + (oldest - youngest) * chance.next();
            let place = vista.orbit.place_at(vista.seen.plus_days(-age));
            let released = place.state;
            let r = released.position_au.norm();
            if chance.next() * highest > rate(age, r) {
                continue;
            }
            let out = released.position_au / r;
            let up = released.position_au.cross(&released.velocity_au_d).normalize();
            for _ in 0..4 {
                let share = chance.next();
                let power = |beta: f64| libm::pow(beta, exponent);
                let beta = if exponent == 0.0 {
                    laws.beta_least * libm::pow(laws.beta_greatest / laws.beta_least, share)
                } else {
                    let (low, high) = (power(laws.beta_least), power(laws.beta_greatest));
                    libm::pow(low + share * (high - low), 1.0 / exponent)
                };
                let factor = loop {
                    let z = gaussian();
                    if z.abs() <= 3.0 && 1.0 + laws.ejection_spread * z >= 0.0 {
                        break 1.0 + laws.ejection_spread * z;
                    }
                };
                let speed = factor
                    * laws.ejection_speed_km_s
                    * libm::pow(beta, laws.ejection_beta_exponent)
                    * libm::pow(r, -laws.ejection_distance_exponent)
                    / KM_S_PER_AU_D;
                let sunward = 1.0 - cone * chance.next();
                let across = (1.0 - sunward * sunward).max(0.0).sqrt();
                let (sine, cosine) = libm::sincos(std::f64::consts::TAU * chance.next());
                let direction = out * -sunward + up.cross(&out) * (across * cosine) + up * (across * sine);
                let mut start = released;
                start.velocity_au_d += direction * speed;
                let guess = here - vista.orbit.whole_anomaly(&place.anomaly);
                flights.push(Flight { beta, start, days: age, guess });
            }
        }
        done += flights.len();
        kernel.see(vista, &flights, |_, offset| {
            let Some([xi, eta]) = offset else { return };
            let [x, y] = [0, 1].map(|k| raster.nucleus_px[k] + raster.turn_px[k][0] * xi + raster.turn_px[k][1] * eta);
            if x >= 0.0 && y >= 0.0 && x < raster.width as f64 && y < raster.height as f64 {
                counts[y as usize / SIDE * (raster.width / SIDE) + x as usize / SIDE] += 1.0;
            }
        });
    }
    counts
}

/// The picture in the same cells, in grains.
pub fn in_cells(picture: &Picture, raster: &Raster) -> Vec<f64> {
    let columns = raster.width / SIDE;
    let mut sums = vec![0.0; columns * (raster.height / SIDE)];
    let side = SIDE / picture.cell_px();
    for y in 0..picture.height() {
        for (x, weight) in picture.line(y).iter().enumerate() {
            sums[y / side * columns + x / side] += f64::from(*weight) * GRAINS as f64 / picture.whole();
        }
    }
    sums
}

/// Correlation and ratio of fluxes of picture and grains, over the cells in which the picture expects more than 100
/// grains. Chosen by the picture: a choice by the counts would favour cells in which chance put too many.
pub fn compare(picture: &[f64], grains: &[f64]) -> (usize, f64, f64) {
    let pairs: Vec<[f64; 2]> =
        picture.iter().zip(grains).filter(|(expected, _)| **expected > 100.0).map(|(a, b)| [*a, *b]).collect();
    let n = pairs.len() as f64;
    let mean = |k: usize| pairs.iter().map(|pair| pair[k]).sum::<f64>() / n;
    let means = [mean(0), mean(1)];
    let product =
        |a: usize, b: usize| pairs.iter().map(|pair| (pair[a] - means[a]) * (pair[b] - means[b])).sum::<f64>();
    (pairs.len(), product(0, 1) / (product(0, 0) * product(1, 1)).sqrt(), means[0] / means[1])
}
