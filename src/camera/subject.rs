//! Which part of the tails is to be held in the field?
//!
//! Each choice becomes points of the plane of the sky about the nucleus (xi east, eta north, tangent values); the field has
//! to hold their convex hull.

use super::Camera;
use crate::error::{Error, Kind, Place};
use crate::frame::tangent;
use crate::tail::cloud::{Cloud, Picture, Quality, Raster};
use crate::tail::curve::{self, Curve, Fineness};
use crate::tail::grain::Vista;
use crate::tail::ion::Wedge;
use crate::tail::law::Tails;
use crate::tail::weight::Weights;

/// A choice of tails.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Subject {
    /// The ion wedge to this distance from the nucleus.
    Ion { length_rad: f64 },
    /// Dust of the plan's sizes and ages, without ejection, to this distance.
    Dust { length_rad: f64 },
    /// The picture of the dust, down to this share of its peak.
    Picture { share: f64 },
}

/// Lengths of tails that may be asked for.
const LENGTHS_RAD: [f64; 2] = [1e-6, 1.2];
/// Shares of the peak that may be asked for.
const SHARES: [f64; 2] = [1e-6, 0.9];
/// Cells of the picture along a side, and cells of a block whose mean is judged.
const CELLS: usize = 256;
const BLOCK: usize = 2;
/// The picture is made wider by this, no more than so many times, until nothing bright lies at its edge.
const WIDER: f64 = 2.5;
const MOST_WIDER: usize = 5;

impl Subject {
    /// A surface brightness that the person wants to reach, given what the peak of the picture has: both magnitudes per
    /// square arcsecond.
    pub fn to_brightness(limit_mag: f64, peak_mag: f64) -> Subject {
        Subject::Picture { share: libm::pow(10.0, -0.4 * (limit_mag - peak_mag)) }
    }

    /// Points whose hull holds the choice.
    ///
    /// # Errors
    /// A length or share outside its range; laws that release nothing; an ion axis along the line of sight.
    pub fn points(&self, vista: &Vista, laws: &Tails, camera: &Camera) -> Result<Vec<[f64; 2]>, Error> {
        match *self {
            Subject::Ion { length_rad } => ion(vista, laws, within("ion_length_deg", length_rad, LENGTHS_RAD)?),
            Subject::Dust { length_rad } => Ok(dust(vista, laws, within("dust_length_deg", length_rad, LENGTHS_RAD)?)),
            Subject::Picture { share } => picture(vista, laws, camera, within("share_of_peak", share, SHARES)?),
        }
    }
}

fn within(key: &str, value: f64, [least, greatest]: [f64; 2]) -> Result<f64, Error> {
    if (least..=greatest).contains(&value) {
        return Ok(value);
    }
    let place = Place::Field(format!("fit.{key}"));
    let words = |value: f64| {
        if key.ends_with("_deg") { format!("{:.5} degrees", value.to_degrees()) } else { value.to_string() }
    };
    Err(Error::new(Kind::Range, place, words(value), format!("{} to {}", words(least), words(greatest))))
}

fn ion(vista: &Vista, laws: &Tails, length_rad: f64) -> Result<Vec<[f64; 2]>, Error> {
    let wedge = Wedge::of(vista, laws);
    let (Some(axis), Some([first, last])) = (wedge.axis.position_angle_rad, wedge.reach_rad) else {
        let place = Place::Field("fit.ion_length_deg".to_owned());
        return Err(Error::new(Kind::Range, place, "an ion axis along the line of sight", "an axis with a direction"));
    };
    let radius = libm::tan(length_rad);
    // The arc between the edges bulges beyond its chords by less than a thousandth of the length.
    const PARTS: usize = 24;
    Ok((0..=PARTS)
        .map(|part| {
            let (east, north) = libm::sincos(axis + first + (last - first) * part as f64 / PARTS as f64);
            [radius * east, radius * north]
        })
        .collect())
}

/// Points of the dust sheet within a distance, along syndynes and synchrones and at the ends of both ranges.
fn dust(vista: &Vista, laws: &Tails, length_rad: f64) -> Vec<[f64; 2]> {
    let field_tan = libm::tan(length_rad);
    let fineness = Fineness { tolerance_rad: 0.002 * field_tan, field_tan };
    let betas = [laws.beta_least, laws.beta_greatest];
    let ages = [laws.age_least_days, laws.age_greatest_days];
    let mut found = vec![[0.0, 0.0]];
    for beta in curve::round_betas(betas).into_iter().chain(betas) {
        collect(&curve::syndyne(vista, beta, ages, &fineness), field_tan, &mut found);
    }
    for age in curve::round_ages(ages).into_iter().chain(ages) {
        collect(&curve::synchrone(vista, age, betas, &fineness), field_tan, &mut found);
    }
    found
}

/// Adds the points of a curve within a radius, and where it crosses it.
fn collect(curve: &Curve, radius: f64, found: &mut Vec<[f64; 2]>) {
    let inside = |[x, y]: [f64; 2]| libm::hypot(x, y) <= radius;
    for piece in &curve.pieces {
        for (i, point) in piece.iter().enumerate() {
            if inside(point.offset) {
                found.push(point.offset);
            }
            let Some(next) = piece.get(i + 1) else { continue };
            if inside(point.offset) != inside(next.offset) {
                let (mut a, mut b) = (point.offset, next.offset);
                if inside(b) {
                    std::mem::swap(&mut a, &mut b);
                }
                for _ in 0..40 {
                    let middle = [0.5 * (a[0] + b[0]), 0.5 * (a[1] + b[1])];
                    if inside(middle) { a = middle } else { b = middle }
                }
                found.push(a);
            }
        }
    }
}

/// Blocks of the dust picture that are at least a share of the brightest, from a picture wide enough for all of them. The
/// peak is that of blocks as wide as 1/64 of the chip's shorter side, whatever the picture grows to.
fn picture(vista: &Vista, laws: &Tails, camera: &Camera, share: f64) -> Result<Vec<[f64; 2]>, Error> {
    let weights = Weights::of(laws);
    let mut cloud = Cloud::new();
    let mut side_tan = 2.0 * camera.shorter_side_px() * camera.scale_tan();
    let mut least_density = None;
    loop {
        let cell = side_tan / CELLS as f64;
        let middle = 0.5 * CELLS as f64;
        // xi to the left, eta up, as the sky is seen.
        let raster = Raster {
            width: CELLS,
            height: CELLS,
            turn_px: [[-1.0 / cell, 0.0], [0.0, -1.0 / cell]],
            nucleus_px: [middle, middle],
        };
        let drawn = cloud.render(vista, &weights, &raster, Quality { samples: 400_000, cell_px: 1 })?;
        let means = means(drawn, cell);
        let peak = means.iter().copied().fold(0.0, f64::max);
        let least = *least_density.get_or_insert(share * peak);
        let blocks = CELLS / BLOCK;
        let bright: Vec<[usize; 2]> = (0..means.len())
            .filter(|&i| means[i] >= least && means[i] > 0.0)
            .map(|i| [i % blocks, i / blocks])
            .collect();
        let at_edge = bright.iter().flatten().any(|&at| at == 0 || at == blocks - 1);
        let widest = side_tan * WIDER > 2.0 * libm::tan(LENGTHS_RAD[1]);
        if at_edge && !widest && side_tan < 4.0 * MOST_WIDER as f64 {
            side_tan *= WIDER;
            continue;
        }
        let width = cell * BLOCK as f64;
        let half = 0.5 * side_tan;
        let corners = |[x, y]: [usize; 2]| {
            [[x, y], [x + 1, y], [x + 1, y + 1], [x, y + 1]]
                .map(|[x, y]| [half - x as f64 * width, half - y as f64 * width])
        };
        return Ok(bright.into_iter().flat_map(corners).collect());
    }
}

/// Mean density of each block, per unit of the plane.
fn means(picture: &Picture, cell: f64) -> Vec<f64> {
    let blocks = CELLS / BLOCK;
    let mut sums = vec![0.0; blocks * blocks];
    for y in 0..blocks * BLOCK {
        for (x, value) in picture.line(y).iter().enumerate().take(blocks * BLOCK) {
            sums[y / BLOCK * blocks + x / BLOCK] += f64::from(*value);
        }
    }
    let area = (cell * BLOCK as f64) * (cell * BLOCK as f64);
    sums.into_iter().map(|sum| sum / area).collect()
}

/// Whether an offset of the nucleus's plane lies on the chip.
pub fn is_held(field: &super::field::Field, axes: &crate::frame::Axes, [xi, eta]: [f64; 2]) -> bool {
    field.pixel(&tangent::unproject(xi, eta, axes)).is_some_and(|pixel| field.holds(pixel))
}
