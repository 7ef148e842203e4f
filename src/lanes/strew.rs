//! Where do the grains of a sheet fall about the middle of the view, and in which cells of distance and direction?
//!
//! A sheet is a grid of nodes, each with a place (along the sight, and two axes across it) and how the place answers to a
//! velocity along three axes. Its cells are sampled evenly; a sample is one grain at rest, or eight that are thrown, one
//! to a lane. Grains are sorted by class, octave of distance and sector of direction; the light in all these bins
//! is what everything else is made of. Single precision for places, double for sums; an angle is good to 2e-7.

use wide::f32x8;

/// Numbers of a node: its place, then the changes of the place by each axis of velocity.
pub const NODE: usize = 12;
/// Grains of a sample that is thrown, and sets of velocities that take turns.
pub const THROWS: usize = 8;
pub const THROW_SETS: usize = 64;

/// Sectors of the whole circle; the first is centred on the first axis across the sight.
pub const SECTORS: usize = 72;
/// Fine rings: quarter octaves of the squared distance, from 2^-32 on.
pub const FINE_RINGS: usize = 184;
pub const FIRST_OCTAVE: i32 = -32;
/// Fine rings in one coarse ring: a factor of two in distance.
pub const FINE_IN_COARSE: usize = 8;
pub const COARSE_RINGS: usize = FINE_RINGS / FINE_IN_COARSE;
/// Coarse rings by sectors.
pub const BINS: usize = COARSE_RINGS * SECTORS;
/// Before the middle, behind it outside the marked sector, inside that sector.
pub const CLASSES: usize = 3;
/// Where grains go that do not count.
const LOST: usize = CLASSES * BINS;

/// The nodes, row by row: in each row function by function, each with `stride` numbers.
#[derive(Clone, Copy, Debug)]
pub struct Nodes<'a> {
    pub numbers: &'a [f32],
    pub stride: usize,
}

/// How samples are thrown: velocities over the mean speed, and the mean speed by column times that by row.
#[derive(Clone, Copy, Debug)]
pub struct Throw<'a> {
    pub sets: &'a [[[f32; THROWS]; 3]],
    pub by_column: &'a [f32],
    pub by_row: &'a [f32],
}

/// Which grains count, and where.
#[derive(Clone, Copy, Debug)]
pub struct Rule {
    /// Nearer than this, squared tangent, nothing counts.
    pub near_squared: f32,
    /// Nor within a parabola behind the middle: twice the tangent of its apex.
    pub twice_apex: f32,
    /// Whether there is a side behind the middle, and the cosine of the half width of the marked sector there.
    pub has_side: bool,
    pub sector_cos: f32,
}

/// Light by class, coarse ring and sector.
#[derive(Clone, Debug)]
pub struct Falls {
    pub light: Vec<f64>,
    /// If kept: light times cosine and sine of the direction.
    pub cosine: Vec<f64>,
    pub sine: Vec<f64>,
    /// If kept: least and greatest direction of grains before the middle, radians.
    pub reach: [f32; 2],
    keeps: bool,
    /// If kept: bin and fine ring of each grain, in order.
    bins: Vec<u16>,
    rings: Vec<u8>,
    rule: Rule,
}

impl Falls {
    /// Lays samples of each cell out: `weights` is the light of one grain of each cell, row by row; cells without are
    /// left out. `keeps`: each grain is remembered for [`Falls::by_cell`].
    pub fn of(nodes: &Nodes, weights: &[f64], subcells: usize, throw: Option<&Throw>, rule: Rule, keeps: bool) -> Self {
        let kept = |count: usize| if keeps { count } else { 0 };
        let grains = weights.len() * subcells * subcells * if throw.is_some() { THROWS } else { 1 };
        let mut falls = Falls {
            light: vec![0.0; LOST + 1],
            cosine: vec![0.0; kept(LOST + 1)],
            sine: vec![0.0; kept(LOST + 1)],
            reach: [f32::INFINITY, f32::NEG_INFINITY],
            keeps,
            bins: Vec::with_capacity(kept(grains + THROWS)),
            rings: Vec::with_capacity(kept(grains + THROWS)),
            rule,
        };
        let row_size = NODE * nodes.stride;
        let columns = weights.len() / (nodes.numbers.len() / row_size - 1);
        let mut line = vec![0.0; row_size];
        let mut number = 0;
        for (row, weights) in weights.chunks_exact(columns).enumerate() {
            if weights.iter().all(|weight| *weight <= 0.0) {
                continue;
            }
            let (young, old) = nodes.numbers[row * row_size..(row + 2) * row_size].split_at(row_size);
            for step in 0..subcells {
                let part = (step as f32 + 0.5) / subcells as f32;
                for ((mixed, young), old) in line.iter_mut().zip(young).zip(old) {
                    *mixed = young + (old - young) * part;
                }
                match throw {
                    None => falls.rest(&line, weights, subcells),
                    Some(throw) => {
                        let slowing = throw.by_row[row] + (throw.by_row[row + 1] - throw.by_row[row]) * part;
                        falls.thrown(&line, weights, subcells, throw, slowing, &mut number);
                    }
                }
            }
        }
        falls
    }

    /// The samples along one line, one grain each.
    fn rest(&mut self, line: &[f32], weights: &[f64], subcells: usize) {
        let stride = line.len() / NODE;
        let (mut place, mut light, mut count) = ([[0.0; 8]; 3], [0.0; 8], 0);
        let last = weights.iter().rposition(|weight| *weight > 0.0);
        for (column, weight) in weights.iter().enumerate().filter(|(_, weight)| **weight > 0.0) {
            for step in 0..subcells {
                let part = (step as f32 + 0.5) / subcells as f32;
                for (axis, place) in place.iter_mut().enumerate() {
                    place[count] = between(&line[axis * stride + column..], part);
                }
                light[count] = *weight;
                count += 1;
                if count == 8 || (Some(column) == last && step + 1 == subcells) {
                    light[count..].fill(0.0);
                    self.add(&place.map(f32x8::from), &light, count);
                    count = 0;
                }
            }
        }
    }

    /// The samples along one line, each thrown.
    fn thrown(
        &mut self,
        line: &[f32],
        weights: &[f64],
        subcells: usize,
        throw: &Throw,
        slowing: f32,
        number: &mut usize,
    ) {
        let stride = line.len() / NODE;
        for (column, weight) in weights.iter().enumerate().filter(|(_, weight)| **weight > 0.0) {
            for step in 0..subcells {
                let part = (step as f32 + 0.5) / subcells as f32;
                let mut node = [0.0; NODE];
                for (number, pair) in node.iter_mut().zip(line.chunks_exact(stride)) {
                    *number = between(&pair[column..], part);
                }
                let speed = f32x8::splat(between(&throw.by_column[column..], part) * slowing);
                let velocity = throw.sets[*number % THROW_SETS].map(|axis| f32x8::from(axis) * speed);
                let node = node.map(f32x8::splat);
                let place = [0, 1, 2].map(|axis| {
                    node[axis]
                        + node[3 + axis] * velocity[0]
                        + node[6 + axis] * velocity[1]
                        + node[9 + axis] * velocity[2]
                });
                self.add(&place, &[*weight; THROWS], THROWS);
                *number += 1;
            }
        }
    }

    /// Adds the first `count` of eight grains; the light of the others is 0. One copy of it: the page is small.
    #[inline(never)]
    fn add(&mut self, &[along, away, aside]: &[f32x8; 3], light: &[f64; 8], count: usize) {
        let rule = &self.rule;
        let across = away * away + aside * aside;
        let length = across.sqrt();
        let before_us = along.simd_gt(f32x8::ZERO);
        // Behind the observer everything counts as the last ring.
        let squared = before_us.bitselect(across / (along * along), f32x8::splat(f32::INFINITY));
        let behind = away.simd_lt(f32x8::ZERO);
        let lost = squared.simd_lt(f32x8::splat(rule.near_squared))
            | (behind & (length - away).simd_lt(along * f32x8::splat(rule.twice_apex)));
        if !self.keeps && lost.all() {
            return;
        }
        let behind = if rule.has_side { behind } else { f32x8::ZERO };
        let marked = behind & (-away).simd_ge(length * f32x8::splat(rule.sector_cos));
        let offset = direction(away, aside);
        let turns = offset * f32x8::splat(SECTORS as f32 / std::f32::consts::TAU) + f32x8::HALF;
        let turns = turns + (turns.simd_lt(f32x8::ZERO) & f32x8::splat(SECTORS as f32));
        let class = f32x8::splat(BINS as f32);
        let place = turns.fast_min(f32x8::splat(SECTORS as f32 - 0.5)).floor() + (behind & class) + (marked & class);
        // A lost grain is put where no class reaches, in the innermost ring.
        let place = lost.bitselect(f32x8::splat(LOST as f32), place).fast_trunc_int().to_array();
        let squared = lost.bitselect(f32x8::ZERO, squared).to_array();
        let mut bins = [0; 8];
        let mut rings = [0; 8];
        for k in 0..8 {
            let ring = fine_ring(squared[k]);
            rings[k] = ring as u8;
            bins[k] = (place[k].max(0) as usize + ring / FINE_IN_COARSE * SECTORS).min(LOST) as u16;
            self.light[bins[k] as usize] += light[k];
        }
        if self.keeps {
            self.bins.extend_from_slice(&bins[..count]);
            self.rings.extend_from_slice(&rings[..count]);
            let inverse = f32x8::ONE / length;
            let (cosine, sine) = ((away * inverse).to_array(), (aside * inverse).to_array());
            for k in 0..count {
                self.cosine[bins[k] as usize] += light[k] * f64::from(cosine[k]);
                self.sine[bins[k] as usize] += light[k] * f64::from(sine[k]);
            }
            let (offset, hidden) = (offset.to_array(), (lost | behind).to_bitmask());
            for (k, offset) in offset[..count].iter().enumerate() {
                if hidden >> k & 1 == 0 {
                    self.reach = [self.reach[0].min(*offset), self.reach[1].max(*offset)];
                }
            }
        }
    }

    /// The same light by cell and by fine ring, each grain of it times the part that is seen of its bin (coarse ring by
    /// sector). For what was kept; `grains` to each sample, weights and subcells as before.
    pub fn by_cell(&self, columns: usize, weights: &[f64], subcells: usize, grains: usize, seen: &[f64]) -> ByCell {
        let mut table = seen.repeat(CLASSES);
        table.push(0.0);
        let mut found = ByCell {
            seen: [(); CLASSES].map(|()| vec![0.0; weights.len()]),
            behind: vec![0.0; weights.len()],
            rings: [[0.0; FINE_RINGS]; CLASSES + 1],
        };
        let per_cell = subcells * grains;
        let mut at = 0;
        for row in (0..weights.len()).step_by(columns) {
            for _ in 0..subcells {
                for cell in (row..row + columns).filter(|cell| weights[*cell] > 0.0) {
                    let (mut seen, mut all) = ([0.0; CLASSES + 1], [0.0; CLASSES + 1]);
                    for (bin, ring) in self.bins[at..at + per_cell].iter().zip(&self.rings[at..]) {
                        let (bin, ring) = (*bin as usize, *ring as usize);
                        let (class, light) = (bin / BINS, weights[cell] * table[bin]);
                        seen[class] += light;
                        all[class] += weights[cell];
                        found.rings[class][ring] += light;
                    }
                    at += per_cell;
                    for (sums, seen) in found.seen.iter_mut().zip(seen) {
                        sums[cell] += seen;
                    }
                    found.behind[cell] += all[1] + all[2];
                }
            }
        }
        found
    }
}

/// Light by cell and by fine ring.
#[derive(Clone, Debug)]
pub struct ByCell {
    /// Light that is seen, by class and cell.
    pub seen: [Vec<f64>; CLASSES],
    /// All light behind the middle that counts, by cell.
    pub behind: Vec<f64>,
    /// Light that is seen, by class and fine ring; the last class is that of lost grains.
    pub rings: [[f64; FINE_RINGS]; CLASSES + 1],
}

/// The fine ring of a squared tangent of a distance: exponent and the first two bits behind the point.
#[inline(always)]
fn fine_ring(squared: f32) -> usize {
    let quarter = (squared.to_bits() >> 21) as i32 - (127 << 2);
    (quarter - FIRST_OCTAVE * 4).clamp(0, FINE_RINGS as i32 - 1) as usize
}

#[inline(always)]
fn between(pair: &[f32], part: f32) -> f32 {
    pair[0] + (pair[1] - pair[0]) * part
}

/// Terms of atan(t) / t in t^2 on [0, 1]: least greatest error, fitted for this file, 9e-8.
const ARC: [f32; 8] = [
    0.999_999_9,
    -0.333_320_93,
    0.199_713_72,
    -0.140_294_02,
    0.099_427_06,
    -0.059_903_927,
    0.024_556_544,
    -0.004_780_288,
];

/// The angle of a direction from the first axis, (-pi, pi].
#[inline(always)]
fn direction(away: f32x8, aside: f32x8) -> f32x8 {
    let (x, y) = (away.abs(), aside.abs());
    // No direction at all: 0.
    let ratio = x.fast_min(y) / x.fast_max(y).fast_max(f32x8::splat(f32::MIN_POSITIVE));
    let square = ratio * ratio;
    let mut sum = f32x8::splat(ARC[7]);
    for term in ARC[..7].iter().rev() {
        sum = sum * square + f32x8::splat(*term);
    }
    let arc = sum * ratio;
    let arc = y.simd_gt(x).bitselect(f32x8::splat(std::f32::consts::FRAC_PI_2) - arc, arc);
    let arc = away.simd_lt(f32x8::ZERO).bitselect(f32x8::splat(std::f32::consts::PI) - arc, arc);
    aside.simd_lt(f32x8::ZERO).bitselect(-arc, arc)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn directions_are_those_of_the_arc_tangent() {
        for step in 0..7200 {
            let angle = (step as f32 - 3600.0 + 0.5) / 3600.0 * std::f32::consts::PI;
            for size in [1e-12_f32, 0.3, 4e6] {
                let (away, aside) = (size * angle.cos(), size * angle.sin());
                let found = direction(f32x8::splat(away), f32x8::splat(aside)).to_array()[0];
                assert!((found - aside.atan2(away)).abs() < 5e-7, "{angle} {size}: {found}");
            }
        }
        assert_eq!(direction(f32x8::ZERO, f32x8::ZERO).to_array()[0], 0.0);
    }

    #[test]
    fn rings_are_quarter_octaves() {
        assert_eq!(
            [0.0, 2.0_f32.powi(-32), 1.0, 1.24, 1.26, 2.0, f32::INFINITY].map(fine_ring),
            [0, 0, 128, 128, 129, 132, 183]
        );
    }
}
