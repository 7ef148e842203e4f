//! How is the light of many weighted grains spread over sides, distances, directions, sizes and ages?
//!
//! Grains come as places in the axes of [`super::sheet::Frame`]. Distances fall into rings, directions into sectors
//! counted from the antisolar direction. Light is relative throughout.

use std::f64::consts::TAU;

/// Sectors of the whole circle, 5 degrees each; the first is centred on the antisolar direction.
pub const SECTORS: usize = 72;
/// Fine rings: quarter octaves of the squared distance, from 2^-32 (3 arcsec) on. 46 octaves reach 2^14 (89.5 deg).
const FINE_RINGS: usize = 184;
const FIRST_OCTAVE: i64 = -32;
/// Fine rings in one coarse ring: a factor of two in distance.
const FINE_IN_COARSE: usize = 8;
const COARSE_RINGS: usize = FINE_RINGS / FINE_IN_COARSE;
/// Sky on which dust is this much fainter than the brightest outside the coma counts half, and yet fainter sky less:
/// 7.5 mag. Light spread so thin that no picture shows it must not decide.
const DEPTH: f64 = 1e-3;
/// A fan reaches as far as its light is at least this part of the brightest at the same distance.
const FAN_FLOOR: f64 = 0.05;
/// Rings with less than this part of all light do not widen the fan.
const RING_FLOOR: f64 = 0.02;

/// Where a grain falls.
#[derive(Clone, Copy, Debug)]
pub struct Fallen {
    pub column: usize,
    pub row: usize,
    /// Relative light.
    pub weight: f64,
    /// Position angle less the antisolar one, (-pi, pi], and its cosine and sine.
    pub offset_rad: f64,
    pub cos_offset: f64,
    pub sin_offset: f64,
    ring: usize,
    sector: usize,
}

/// The part of the sky about the nucleus where dust does not count. The outline of the fountain of ejected dust is a
/// parabola about the nucleus: distance (1 + cos(angle from the Sun's direction)) = 2 apex.
#[derive(Clone, Copy, Debug)]
pub struct Coma {
    /// Squared tangent of the radius.
    squared: f64,
    /// Twice the tangent of the distance of the fountain's apex; 0 without ejection.
    twice_apex: f64,
}

impl Coma {
    pub fn of(radius_rad: f64, apex_rad: f64) -> Self {
        let radius = libm::tan(radius_rad);
        Coma { squared: radius * radius, twice_apex: 2.0 * libm::tan(apex_rad) }
    }
}

impl Fallen {
    /// None inside the coma.
    pub fn of(place: &[f64; 3], coma: &Coma, column: usize, row: usize, weight: f64) -> Option<Self> {
        let [along, away, aside] = *place;
        let across = away * away + aside * aside;
        // Beyond 89.5 degrees, or behind the observer, everything counts as the last ring.
        let squared = if along > 0.0 { across / (along * along) } else { f64::INFINITY };
        if squared < coma.squared || (away < 0.0 && across.sqrt() - away < coma.twice_apex * along) {
            return None;
        }
        let length = across.sqrt();
        let offset_rad = f64::from(libm::atan2f(aside as f32, away as f32));
        let sector = (offset_rad * (SECTORS as f64 / TAU) + (SECTORS as f64 + 0.5)) as usize % SECTORS;
        Some(Fallen {
            column,
            row,
            weight,
            offset_rad,
            cos_offset: away / length,
            sin_offset: aside / length,
            ring: ring(squared),
            sector,
        })
    }
}

/// The fine ring of a squared tangent of a distance: exponent and the first two bits behind the point.
fn ring(squared: f64) -> usize {
    let quarter = (squared.to_bits() >> 50) as i64 - (1023 << 2);
    (quarter - FIRST_OCTAVE * 4).clamp(0, FINE_RINGS as i64 - 1) as usize
}

/// Distance at which a fine ring begins, radians.
fn ring_begin_rad(ring: usize) -> f64 {
    let quarter = ring as i64 + FIRST_OCTAVE * 4;
    let squared = f64::from_bits(((quarter + (1023 << 2)) as u64) << 50);
    libm::atan(squared.sqrt())
}

/// The light of all grains on the sky, in cells of one octave of distance and one sector.
#[derive(Clone, Debug)]
pub struct Glow {
    polar: Vec<[f64; SECTORS]>,
}

impl Glow {
    pub fn of(grains: &[Fallen]) -> Self {
        let mut polar = vec![[0.0; SECTORS]; COARSE_RINGS];
        for grain in grains {
            polar[grain.ring / FINE_IN_COARSE][grain.sector] += grain.weight;
        }
        // The area of a cell grows fourfold with each octave.
        let mut area = 1.0;
        for ring in &mut polar {
            ring.iter_mut().for_each(|light| *light /= area);
            area *= 4.0;
        }
        let brightest = polar.iter().flatten().fold(0.0_f64, |most, surface| most.max(*surface));
        let half = DEPTH * brightest;
        for surface in polar.iter_mut().flatten().filter(|surface| **surface > 0.0) {
            *surface /= *surface + half;
        }
        Glow { polar }
    }

    /// Which part of a grain's light counts, by the brightness of the sky where it lies, [0, 1].
    pub fn seen(&self, grain: &Fallen) -> f64 {
        self.polar[grain.ring / FINE_IN_COARSE][grain.sector]
    }
}

/// Sums over one class of grains.
#[derive(Clone, Debug)]
pub struct Tally {
    pub light: f64,
    cos_sum: f64,
    sin_sum: f64,
    least_offset_rad: f64,
    greatest_offset_rad: f64,
    rings: [f64; FINE_RINGS],
    /// Coarse ring by sector.
    polar: Vec<[f64; SECTORS]>,
    columns: Vec<f64>,
    rows: Vec<f64>,
}

impl Tally {
    pub fn new(columns: usize, rows: usize) -> Self {
        Tally {
            light: 0.0,
            cos_sum: 0.0,
            sin_sum: 0.0,
            least_offset_rad: f64::INFINITY,
            greatest_offset_rad: f64::NEG_INFINITY,
            rings: [0.0; FINE_RINGS],
            polar: vec![[0.0; SECTORS]; COARSE_RINGS],
            columns: vec![0.0; columns],
            rows: vec![0.0; rows],
        }
    }

    /// Adds a grain of which this much light counts.
    pub fn add(&mut self, grain: &Fallen, light: f64) {
        self.light += light;
        self.cos_sum += light * grain.cos_offset;
        self.sin_sum += light * grain.sin_offset;
        self.least_offset_rad = self.least_offset_rad.min(grain.offset_rad);
        self.greatest_offset_rad = self.greatest_offset_rad.max(grain.offset_rad);
        self.rings[grain.ring] += light;
        self.polar[grain.ring / FINE_IN_COARSE][grain.sector] += light;
        self.columns[grain.column] += light;
        self.rows[grain.row] += light;
    }

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

    /// How bright the brightest 5-degree sector of this class is beside the brightest of `other` at the same distance:
    /// mean over the octaves of distance, by the light of this class in each; each octave counts at most 10.
    pub fn beside(&self, other: &Tally) -> f64 {
        let peak = |polar: &[f64; SECTORS]| polar.iter().fold(0.0_f64, |most, light| most.max(*light));
        let mut sum = 0.0;
        for (own, theirs) in self.polar.iter().zip(&other.polar) {
            let light: f64 = own.iter().sum();
            if light > 0.0 {
                sum += light * (peak(own) / peak(theirs).max(1e-300)).min(10.0);
            }
        }
        if self.light > 0.0 { sum / self.light } else { 0.0 }
    }

    /// First and last direction of a fan that does not go round the back, from the antisolar direction: where its light
    /// is at least 5 percent of the brightest at the same distance. None without light.
    pub fn fan_rad(&self) -> Option<[f64; 2]> {
        let mut fan: Option<[f64; 2]> = None;
        for polar in &self.polar {
            let light: f64 = polar.iter().sum();
            if light <= RING_FLOOR * self.light {
                continue;
            }
            let [first, last] = edges(polar);
            fan = Some(fan.map_or([first, last], |[f, l]| [f.min(first), l.max(last)]));
        }
        // Sectors are coarse; no grain lies beyond these.
        fan.map(|[f, l]| [f.max(self.least_offset_rad), l.min(self.greatest_offset_rad)])
    }
}

/// Where the light of one ring rises above and falls below the floor, from the antisolar direction.
fn edges(polar: &[f64; SECTORS]) -> [f64; 2] {
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
