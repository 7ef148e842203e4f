//! Which colour shows a density?
//!
//! Brightness from 0 to 1 by a stretch, then a table of colours. Nothing is exact here but the order: a logarithm good
//! to 1e-6 is far below a step of the table.

use wide::f32x8;

/// How density turns into brightness.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Stretch {
    /// Linear in the faintest part, logarithmic above.
    Asinh,
    /// Logarithmic; what is fainter than the faintest density is dark.
    Log,
}

/// A stretch with its ends.
#[derive(Clone, Copy, Debug)]
pub struct Scale {
    pub stretch: Stretch,
    /// Where the logarithmic part begins, and how many times brighter full brightness is.
    pub faintest: f32,
    pub span: f32,
}

/// Entries of a table of colours.
pub const COLOURS: usize = 1024;

/// Colours, evenly from dark to bright.
pub type Table = Vec<[u8; 4]>;

/// A table from stops that stand evenly, at least one.
pub fn table(stops: &[[u8; 4]]) -> Table {
    (0..COLOURS)
        .map(|k| {
            let place = k as f32 / (COLOURS - 1) as f32 * (stops.len() - 1) as f32;
            let first = (place as usize).min(stops.len().saturating_sub(2));
            let (low, high) = (stops[first], stops[(first + 1).min(stops.len() - 1)]);
            let part = place - first as f32;
            std::array::from_fn(|c| (f32::from(low[c]) * (1.0 - part) + f32::from(high[c]) * part + 0.5) as u8)
        })
        .collect()
}

/// Colours a line of densities into `rgba`, four bytes each.
pub fn colour(line: &[f32], scale: &Scale, table: &[[u8; 4]], rgba: &mut [u8]) {
    let last = (COLOURS - 1) as f32;
    let full = stretched(f32x8::splat(scale.span), scale.stretch).to_array()[0];
    let (inverse, steps) = (f32x8::splat(1.0 / scale.faintest), f32x8::splat(last / full));
    for (cells, out) in line.chunks(8).zip(rgba.chunks_mut(32)) {
        let mut lanes = [0.0; 8];
        lanes[..cells.len()].copy_from_slice(cells);
        let density = f32x8::from(lanes);
        let index = if density.simd_gt(f32x8::ZERO).any() {
            let place = stretched(density * inverse, scale.stretch) * steps;
            place.fast_max(f32x8::ZERO).fast_min(f32x8::splat(last)).fast_round_int().to_array()
        } else {
            [0; 8]
        };
        for (pixel, index) in out.chunks_exact_mut(4).zip(index) {
            pixel.copy_from_slice(&table[(index as usize).min(COLOURS - 1)]);
        }
    }
}

#[inline(always)]
fn stretched(x: f32x8, stretch: Stretch) -> f32x8 {
    match stretch {
        Stretch::Asinh => (x + (x * x + f32x8::ONE).sqrt()).ln(),
        // A tiny number instead of zero: the logarithm of what is dark is merely low.
        Stretch::Log => x.fast_max(f32x8::splat(1e-30)).ln(),
    }
}

/// Adds the cells of a line up in blocks of `side`.
pub fn add_blocks(line: &[f32], side: usize, sums: &mut [f32]) {
    for (sum, block) in sums.iter_mut().zip(line.chunks(side)) {
        *sum += block.iter().sum::<f32>();
    }
}
