//! How is the light of many weighted grains spread over sides, distances, directions, sizes and ages?
//!
//! Grains come sorted into bins ([`tailvane_lanes::strew`]) about the axes of [`super::sheet::Frame`]: distances in rings,
//! directions in sectors of 5 degrees counted from the antisolar direction. Light is relative throughout.

use std::f64::consts::TAU;
use tailvane_lanes::strew::{BINS, COARSE_RINGS, FINE_RINGS, FIRST_OCTAVE, SECTORS};

/// Sky on which dust is this much fainter than the brightest outside the coma counts half, and yet fainter sky less:
/// 7.5 mag. Light spread so thin that no picture shows it must not decide.
const DEPTH: f64 = 1e-3;
/// A fan reaches as far as its light is at least this part of the brightest at the same distance.
const FAN_FLOOR: f64 = 0.05;
/// Rings with less than this part of all light do not widen the fan.
const RING_FLOOR: f64 = 0.02;

/// The part of the sky about the nucleus where dust does not count. The outline of the fountain of ejected dust is a
/// parabola about the nucleus: distance (1 + cos(angle from the Sun's direction)) = 2 apex.
#[derive(Clone, Copy, Debug)]
pub struct Coma {
    /// Squared tangent of the radius.
    pub squared: f64,
    /// Twice the tangent of the distance of the fountain's apex; 0 without ejection.
    pub twice_apex: f64,
}

impl Coma {
    pub fn of(radius_rad: f64, apex_rad: f64) -> Self {
        let radius = libm::tan(radius_rad);
        Coma { squared: radius * radius, twice_apex: 2.0 * libm::tan(apex_rad) }
    }
    /// Cosine of the angle of a place (along the sight, away, aside) from the antisolar direction; None inside the coma.
    pub fn cos_outside(&self, [along, away, aside]: [f64; 3]) -> Option<f64> {
        let across = away * away + aside * aside;
        let squared = if along > 0.0 { across / (along * along) } else { f64::INFINITY };
        let inside = squared < self.squared || (away < 0.0 && across.sqrt() - away < self.twice_apex * along);
        (!inside).then(|| away / across.sqrt())
    }
}

/// Which part of the light in each bin counts, by the brightness of the sky there, [0, 1].
pub fn seen(classes: &[f64]) -> Vec<f64> {
    let mut sky = vec![0.0; BINS];
    for class in classes.chunks_exact(BINS) {
        add(&mut sky, class);
    }
    // The area of a bin grows fourfold with each octave.
    let mut area = 1.0;
    for ring in sky.chunks_exact_mut(SECTORS) {
        ring.iter_mut().for_each(|light| *light /= area);
        area *= 4.0;
    }
    let half = DEPTH * sky.iter().fold(0.0_f64, |most, surface| most.max(*surface));
    for surface in sky.iter_mut().filter(|surface| **surface > 0.0) {
        *surface /= *surface + half;
    }
    sky
}

/// Adds the second to the first.
pub fn add(sums: &mut [f64], parts: &[f64]) {
    sums.iter_mut().zip(parts).for_each(|(sum, part)| *sum += part);
}

/// The light of one class that is seen, by coarse ring and sector.
#[derive(Clone, Debug)]
pub struct Polar {
    pub light: f64,
    bins: Vec<f64>,
}

impl Polar {
    pub fn of(class: &[f64], seen: &[f64]) -> Self {
        Polar::from(class.iter().zip(seen).map(|(light, seen)| light * seen).collect())
    }

    fn from(bins: Vec<f64>) -> Self {
        Polar { light: bins.iter().sum(), bins }
    }

    pub fn with(&self, other: &Polar) -> Self {
        let mut bins = self.bins.clone();
        add(&mut bins, &other.bins);
        Polar::from(bins)
    }

    fn rings(&self) -> impl Iterator<Item = &[f64]> {
        debug_assert_eq!(self.bins.len(), COARSE_RINGS * SECTORS);
        self.bins.chunks_exact(SECTORS)
    }

    /// How bright the brightest 5-degree sector of this class is beside the brightest of `other` at the same distance:
    /// mean over the octaves of distance, by the light of this class in each; each octave counts at most 10.
    pub fn beside(&self, other: &Polar) -> f64 {
        let peak = |polar: &[f64]| polar.iter().fold(0.0_f64, |most, light| most.max(*light));
        let mut sum = 0.0;
        for (own, theirs) in self.rings().zip(other.rings()) {
            let light: f64 = own.iter().sum();
            if light > 0.0 {
                sum += light * (peak(own) / peak(theirs).max(1e-300)).min(10.0);
            }
        }
        if self.light > 0.0 { sum / self.light } else { 0.0 }
    }

    /// First and last direction of a fan that does not go round the back, from the antisolar direction: where its light
    /// is at least 5 percent of the brightest at the same distance, and between the outermost grains. None without light.
    pub fn fan_rad(&self, [least, greatest]: [f64; 2]) -> Option<[f64; 2]> {
        let mut fan: Option<[f64; 2]> = None;
        for polar in self.rings() {
            let light: f64 = polar.iter().sum();
            if light <= RING_FLOOR * self.light {
                continue;
            }
            let [first, last] = edges(polar);
            fan = Some(fan.map_or([first, last], |[f, l]| [f.min(first), l.max(last)]));
        }
        // Sectors are coarse; no grain lies beyond these.
        fan.map(|[f, l]| [f.max(least), l.min(greatest)])
    }
}

/// Where and of which grains the light of one class is.
#[derive(Clone, Debug)]
pub struct Tally {
    pub light: f64,
    /// Light times cosine and sine of the direction.
    pub cos_sum: f64,
    pub sin_sum: f64,
    pub rings: [f64; FINE_RINGS],
    pub columns: Vec<f64>,
    pub rows: Vec<f64>,
}

impl Tally {
    /// Mean direction by light, from the antisolar one, (-pi, pi]; None without light or without a mean.
    pub fn mean_offset_rad(&self) -> Option<f64> {
        let length = (self.cos_sum * self.cos_sum + self.sin_sum * self.sin_sum).sqrt();
        (length > 1e-9 * self.light && self.light > 0.0).then(|| libm::atan2(self.sin_sum, self.cos_sum))
    }

    /// Distance within which this part of the light lies, radians.
    pub fn distance_rad(&self, part: f64) -> f64 {
        let (ring, inside) = quantile(&self.rings, part);
        let (begin, end) = (ring_begin_rad(ring), ring_begin_rad(ring + 1));
        begin + (end - begin) * inside
    }

    /// Column and the part of it below which this part of the light lies.
    pub fn column(&self, part: f64) -> (usize, f64) {
        quantile(&self.columns, part)
    }

    /// Row likewise.
    pub fn row(&self, part: f64) -> (usize, f64) {
        quantile(&self.rows, part)
    }
}

/// Distance at which a fine ring begins, radians.
fn ring_begin_rad(ring: usize) -> f64 {
    let quarter = ring as i64 + i64::from(FIRST_OCTAVE) * 4;
    let squared = f64::from_bits(((quarter + (1023 << 2)) as u64) << 50);
    libm::atan(squared.sqrt())
}

/// Where the light of one ring rises above and falls below the floor, from the antisolar direction.
fn edges(polar: &[f64]) -> [f64; 2] {
    let floor = FAN_FLOOR * polar.iter().fold(0.0_f64, |most, light| most.max(*light));
    let half = SECTORS as i64 / 2;
    let at = |sector: i64| polar[sector.rem_euclid(SECTORS as i64) as usize];
    let width = TAU / SECTORS as f64;
    // The sector before the first bright one, and where between their middles the floor is met.
    let meet = |dim: i64, bright: i64| {
        let (low, high) = (at(dim), at(bright));
        let part = if high > low { (floor - low) / (high - low) } else { 1.0 };
        (dim as f64 + (bright - dim) as f64 * part) * width
    };
    let bright = |sector: &i64| at(*sector) >= floor;
    let first = (-half + 1..=half).find(bright).unwrap_or(0);
    let last = (-half + 1..=half).rev().find(bright).unwrap_or(0);
    [meet(first - 1, first), meet(last + 1, last)]
}

/// The bin in which the running sum passes this part of the whole, and how far inside it.
fn quantile(bins: &[f64], part: f64) -> (usize, f64) {
    let wanted = part * bins.iter().sum::<f64>();
    let mut sum = 0.0;
    for (index, light) in bins.iter().enumerate() {
        if *light > 0.0 && sum + light >= wanted {
            return (index, ((wanted - sum) / light).clamp(0.0, 1.0));
        }
        sum += light;
    }
    (bins.len() - 1, 1.0)
}
