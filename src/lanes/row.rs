//! Where do the samples of one row of a patch fall on a grid?
//!
//! A patch is a smooth map from (s, t), both -1 to 1, to twelve numbers: three homogeneous coordinates X, Y, Z and
//! their nine slopes along three axes of ejection. In s it is a Chebyshev sum, in t a plain polynomial. A cell is a part
//! of a patch in t with polynomials of its own, shortened where the last powers say nothing (economised: t^4 becomes
//! t^2 - 1/8, and so on). Along a row s is fixed, so that the polynomials in t are found once, and each sample costs
//! twelve short sums and one division: x = (X + Xe . e) / (Z + Ze . e). Single precision: 1e-4 of a pixel a thousand
//! pixels out.

use crate::grid::Grid;
use wide::f32x8;

/// Coefficients along s (Chebyshev) and along t (powers).
pub const S_TERMS: usize = 8;
pub const T_TERMS: usize = 6;
/// X, Y, Z, then the slopes of X, of Y and of Z along the three axes.
pub const FUNCTIONS: usize = 12;
/// Numbers of one row of a patch: function by function, powers of t rising.
pub const ROW: usize = FUNCTIONS * T_TERMS;

/// Samples that are computed together: a row has a multiple of them.
pub const LANES: usize = 8;

/// The polynomials of one row of a patch.
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
        *value = polynomial_at(powers, t);
    }
    values
}

/// A polynomial of rising powers at `t`.
pub fn polynomial_at(powers: &[f32], t: f32) -> f32 {
    powers.iter().rev().fold(0.0, |sum, power| sum * t + power)
}

/// A cell, with as few powers as serve. An enum and not a generic type, so that the loops are compiled in this crate.
#[derive(Clone, Debug)]
pub enum Part {
    /// Nothing is ejected.
    Still(Box<Cell<6, 0>>),
    Short(Box<Cell<4, 3>>),
    Full(Box<Cell<6, 6>>),
}

impl Part {
    /// The part of a patch from t = `middle` - `half` to `middle` + `half`; shortened powers may miss `tolerance`, in
    /// units of X and Y.
    pub fn of(patch: &[Row; S_TERMS], [middle, half]: [f32; 2], ejected: bool, tolerance: f32) -> Self {
        if !ejected {
            return Part::Still(Box::new(Cell::of(patch, [middle, half])));
        }
        let short = Cell::of(patch, [middle, half]);
        if short.cut <= tolerance {
            return Part::Short(Box::new(short));
        }
        Part::Full(Box::new(Cell::of(patch, [middle, half])))
    }

    /// Adds the samples of its row at `s` to a grid.
    pub fn add_row(&self, s: f32, samples: &Samples, ejections: &Ejections, grid: &mut Grid) {
        match self {
            Part::Still(cell) => add_strip(&cell.strip_at(s), samples, ejections, grid),
            Part::Short(cell) => add_strip(&cell.strip_at(s), samples, ejections, grid),
            Part::Full(cell) => add_strip(&cell.strip_at(s), samples, ejections, grid),
        }
    }
}

/// The polynomials of one row of a cell: P powers for each place, J for each slope (none: nothing is ejected).
#[derive(Clone, Copy, Debug)]
struct Strip<const P: usize, const J: usize> {
    place: [[f32; P]; 3],
    slope: [[f32; J]; 9],
}

/// A part of a patch in t, with the polynomials of its own variable.
#[derive(Clone, Copy, Debug)]
pub struct Cell<const P: usize, const J: usize> {
    strips: [Strip<P, J>; S_TERMS],
    /// At most so much was cut off, of places and of slopes together.
    cut: f32,
}

impl<const P: usize, const J: usize> Cell<P, J> {
    fn of(patch: &[Row; S_TERMS], [middle, half]: [f32; 2]) -> Self {
        let mut cut = 0.0;
        let strips = patch.map(|row| {
            let mut strip = Strip { place: [[0.0; P]; 3], slope: [[0.0; J]; 9] };
            for (function, powers) in row.chunks_exact(T_TERMS).enumerate() {
                let mut own = shifted(powers, middle, half);
                if function < 3 {
                    cut += economise(&mut own, P);
                    strip.place[function].copy_from_slice(&own[..P]);
                } else if J > 0 {
                    cut += economise(&mut own, J);
                    strip.slope[function - 3].copy_from_slice(&own[..J]);
                }
            }
            strip
        });
        Cell { strips, cut }
    }

    /// Its row at `s`.
    fn strip_at(&self, s: f32) -> Strip<P, J> {
        let terms = chebyshev(s);
        let mut sum = self.strips[0];
        for (term, strip) in terms.iter().zip(&self.strips).skip(1) {
            add_scaled(sum.place.as_flattened_mut(), strip.place.as_flattened(), *term);
            add_scaled(sum.slope.as_flattened_mut(), strip.slope.as_flattened(), *term);
        }
        sum
    }
}

fn add_scaled(sum: &mut [f32], part: &[f32], factor: f32) {
    for (sum, part) in sum.iter_mut().zip(part) {
        *sum += factor * part;
    }
}

/// Powers of a new variable, -1 to 1 from `middle` - `half` to `middle` + `half`.
pub fn shifted(powers: &[f32], middle: f32, half: f32) -> [f32; T_TERMS] {
    let mut own = [0.0; T_TERMS];
    own.copy_from_slice(powers);
    // Horner's scheme, once for each power: repeated division by (t - middle).
    for first in 0..T_TERMS {
        for k in (first..T_TERMS - 1).rev() {
            own[k] += own[k + 1] * middle;
        }
    }
    let mut scale = 1.0;
    for power in &mut own {
        *power *= scale;
        scale *= half;
    }
    own
}

/// Folds all but the first `keep` powers into lower ones (Chebyshev); returns the most that this changes.
fn economise(own: &mut [f32; T_TERMS], keep: usize) -> f32 {
    let mut cut = 0.0;
    if keep <= 5 {
        own[3] += 1.25 * own[5];
        own[1] -= 0.3125 * own[5];
        cut += own[5].abs() / 16.0;
    }
    if keep <= 4 {
        own[2] += own[4];
        own[0] -= own[4] / 8.0;
        cut += own[4].abs() / 8.0;
    }
    if keep <= 3 {
        own[1] += 0.75 * own[3];
        cut += own[3].abs() / 4.0;
    }
    cut
}

/// Ejection velocities, axis by axis, in the order in which samples use them.
#[derive(Clone, Debug, Default)]
pub struct Ejections {
    pub axes: [Vec<f32>; 3],
}

/// Samples along a row of a cell: `count` (a multiple of [`LANES`]) from `first` in steps of `step`, each of `weight`
/// times the polynomial `light`, ejected by the table from `ejection` on; seen on a grid as x `scale` + `offset`.
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

fn add_strip<const P: usize, const J: usize>(
    strip: &Strip<P, J>,
    samples: &Samples,
    ejections: &Ejections,
    grid: &mut Grid,
) {
    let steps = f32x8::from([0.0, 1.0, 2.0, 3.0, 4.0, 5.0, 6.0, 7.0]) * f32x8::splat(samples.step);
    let [radial, transverse, normal] =
        ejections.axes.each_ref().map(|axis| &axis[samples.ejection..samples.ejection + samples.count]);
    let (scale, nearest) = (f32x8::splat(samples.scale), f32x8::splat(samples.nearest));
    let offset = samples.offset.map(f32x8::splat);
    for block in 0..samples.count / LANES {
        let t = f32x8::splat(samples.first + samples.step * (block * LANES) as f32) + steps;
        let [mut x, mut y, mut z] = strip.place.each_ref().map(|powers| horner(powers, t));
        if J > 0 {
            let slope = |function: usize| horner(&strip.slope[function], t);
            for (axis, velocities) in [radial, transverse, normal].into_iter().enumerate() {
                let e = lanes(velocities, block);
                x += slope(axis) * e;
                y += slope(3 + axis) * e;
                z += slope(6 + axis) * e;
            }
        }
        let closer = scale / z;
        let light = horner(&samples.light, t) * f32x8::splat(samples.weight);
        grid.add(x * closer + offset[0], y * closer + offset[1], z.simd_gt(nearest) & light);
    }
}

#[inline(always)]
fn lanes(from: &[f32], block: usize) -> f32x8 {
    let mut lanes = [0.0; LANES];
    lanes.copy_from_slice(&from[block * LANES..block * LANES + LANES]);
    f32x8::from(lanes)
}

#[inline(always)]
fn horner<const N: usize>(powers: &[f32; N], t: f32x8) -> f32x8 {
    let mut sum = f32x8::splat(powers[N - 1]);
    for power in powers[..N - 1].iter().rev() {
        sum = sum * t + f32x8::splat(*power);
    }
    sum
}
