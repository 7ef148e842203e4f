//! Where do the samples of one row of a patch fall on a grid?
//!
//! A patch is a smooth map from (s, t), both -1 to 1, to twelve numbers: three homogeneous coordinates X, Y, Z and
//! their nine slopes along three axes of ejection. In s it is a Chebyshev sum, in t a plain polynomial. Along a row s
//! is fixed, so that its twelve polynomials in t are found once, and each sample then costs twelve short Horner sums
//! and one division: x = (X + Xe . e) / (Z + Ze . e). Single precision: 1e-4 of a pixel a thousand pixels out.

use crate::grid::Grid;
use wide::f32x8;

/// Coefficients along s (Chebyshev) and along t (powers).
pub const S_TERMS: usize = 8;
pub const T_TERMS: usize = 6;
/// X, Y, Z, then the slopes of X, of Y and of Z along the three axes.
pub const FUNCTIONS: usize = 12;
/// Numbers of one row: function by function, powers of t rising.
pub const ROW: usize = FUNCTIONS * T_TERMS;

/// Samples that are computed together: a row has a multiple of them.
pub const LANES: usize = 8;

/// The polynomials of one row.
pub type Row = [f32; ROW];

/// The row of a patch at `s`.
pub fn row_at(patch: &[Row; S_TERMS], s: f32) -> Row {
    let terms = chebyshev(s);
    let mut row = patch[0];
    for k in 1..S_TERMS {
        for (sum, part) in row.iter_mut().zip(&patch[k]) {
            *sum += terms[k] * part;
        }
    }
    row
}

/// The Chebyshev polynomials at `s`.
pub fn chebyshev(s: f32) -> [f32; S_TERMS] {
    let mut terms = [1.0; S_TERMS];
    terms[1] = s;
    for k in 2..S_TERMS {
        terms[k] = 2.0 * s * terms[k - 1] - terms[k - 2];
    }
    terms
}

/// The twelve functions of a row at `t`.
pub fn functions_at(row: &Row, t: f32) -> [f32; FUNCTIONS] {
    let mut values = [0.0; FUNCTIONS];
    for (value, powers) in values.iter_mut().zip(row.chunks_exact(T_TERMS)) {
        *value = powers.iter().rev().fold(0.0, |sum, power| sum * t + power);
    }
    values
}

/// Ejection velocities, axis by axis, in the order in which samples use them.
#[derive(Clone, Debug, Default)]
pub struct Ejections {
    pub axes: [Vec<f32>; 3],
}

/// Samples along a row: `count` (a multiple of [`LANES`]) from `first` in steps of `step`, each of `weight` times the
/// polynomial `light`, ejected by the table from `ejection` on; seen on a grid as x `scale` + `offset`.
#[derive(Clone, Copy, Debug)]
pub struct Samples {
    pub first: f32,
    pub step: f32,
    pub count: usize,
    pub weight: f32,
    pub light: [f32; T_TERMS],
    pub ejection: usize,
    pub scale: f32,
    pub offset: [f32; 2],
    /// Nearer than this in Z nothing is seen.
    pub nearest: f32,
}

/// Adds the samples of a row to a grid.
pub fn add_row(row: &Row, samples: &Samples, ejections: &Ejections, grid: &mut Grid) {
    let steps = f32x8::from([0.0, 1.0, 2.0, 3.0, 4.0, 5.0, 6.0, 7.0]) * f32x8::splat(samples.step);
    let [radial, transverse, normal] = &ejections.axes;
    let (scale, nearest) = (f32x8::splat(samples.scale), f32x8::splat(samples.nearest));
    let offset = samples.offset.map(f32x8::splat);
    for block in 0..samples.count / LANES {
        let t = f32x8::splat(samples.first + samples.step * (block * LANES) as f32) + steps;
        let from = samples.ejection + block * LANES;
        let e = [lanes(radial, from), lanes(transverse, from), lanes(normal, from)];
        let x = at(row, 0, t) + at(row, 3, t) * e[0] + at(row, 4, t) * e[1] + at(row, 5, t) * e[2];
        let y = at(row, 1, t) + at(row, 6, t) * e[0] + at(row, 7, t) * e[1] + at(row, 8, t) * e[2];
        let z = at(row, 2, t) + at(row, 9, t) * e[0] + at(row, 10, t) * e[1] + at(row, 11, t) * e[2];
        let closer = scale / z;
        let light = horner(&samples.light, t) * f32x8::splat(samples.weight);
        let seen = z.simd_gt(nearest) & light;
        grid.add((x * closer + offset[0]).to_array(), (y * closer + offset[1]).to_array(), seen.to_array());
    }
}

#[inline(always)]
fn lanes(from: &[f32], start: usize) -> f32x8 {
    let mut lanes = [0.0; LANES];
    lanes.copy_from_slice(&from[start..start + LANES]);
    f32x8::from(lanes)
}

#[inline(always)]
fn at(row: &Row, function: usize, t: f32x8) -> f32x8 {
    let first = function * T_TERMS;
    let mut sum = f32x8::splat(row[first + T_TERMS - 1]);
    for power in (0..T_TERMS - 1).rev() {
        sum = sum * t + f32x8::splat(row[first + power]);
    }
    sum
}

#[inline(always)]
fn horner(powers: &[f32; T_TERMS], t: f32x8) -> f32x8 {
    let mut sum = f32x8::splat(powers[T_TERMS - 1]);
    for power in powers[..T_TERMS - 1].iter().rev() {
        sum = sum * t + f32x8::splat(*power);
    }
    sum
}
