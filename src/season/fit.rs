//! Where between two dates does a smooth quantity, or its rate, pass zero?
//!
//! Quantities are fitted together by Chebyshev polynomials, on pieces halved until the last coefficients of each are
//! negligible for that quantity. The zeros of a polynomial are then isolated with bounds on its second derivative, so
//! that a pair inside one piece is found as surely as a single one, and none is missed between samples. Zeros
//! that touch without crossing, or pairs closer than about 1e-9 of a piece, are none.

use std::f64::consts::PI;

/// Nodes of a piece, and coefficients of its polynomials.
pub const NODES: usize = 16;

/// A piece is good where so many last coefficients of each quantity are below a given part of its greatest.
const TAIL: usize = 2;

/// Pieces are halved at most so often: 16 days become 84 s.
const MOST_HALVINGS: u32 = 14;

/// A zero closer than this to being double is none, in half-lengths of the piece.
const NARROW: f64 = 1e-9;

/// Steps of a bisection that leave 1e-14 of the interval.
const BISECTIONS: u32 = 46;

/// Coefficients of the Chebyshev polynomials, x from -1 to 1.
pub type Coefficients = [f64; NODES];

/// `COUNT` quantities between two dates, as polynomials.
pub struct Piece<const COUNT: usize> {
    pub begin_days: f64,
    pub half_days: f64,
    pub quantities: [Coefficients; COUNT],
}

/// The nodes, and what turns values there into coefficients.
pub struct Fitter {
    nodes: [f64; NODES],
    weights: [[f64; NODES]; NODES],
}

impl Default for Fitter {
    fn default() -> Self {
        Fitter::new()
    }
}

impl Fitter {
    pub fn new() -> Self {
        let angle = |node: usize| PI * (node as f64 + 0.5) / NODES as f64;
        let mut weights = [[0.0; NODES]; NODES];
        for (order, row) in weights.iter_mut().enumerate() {
            for (node, weight) in row.iter_mut().enumerate() {
                let share = if order == 0 { 1.0 } else { 2.0 } / NODES as f64;
                *weight = share * libm::cos(order as f64 * angle(node));
            }
        }
        Fitter { nodes: std::array::from_fn(|node| libm::cos(angle(node))), weights }
    }

    /// Pieces that cover a stretch of days, in order; `negligible` is the part of each quantity that may be left out.
    pub fn pieces<const COUNT: usize>(
        &self,
        [begin, end]: [f64; 2],
        negligible: &[f64; COUNT],
        sample: &mut impl FnMut(f64) -> [f64; COUNT],
    ) -> Vec<Piece<COUNT>> {
        let mut done = Vec::new();
        // To do, the earliest last.
        let mut todo = vec![(begin, end, 0)];
        while let Some((begin, end, halvings)) = todo.pop() {
            let piece = self.piece(begin, end, sample);
            if halvings >= MOST_HALVINGS || piece.quantities.iter().zip(negligible).all(is_smooth) {
                done.push(piece);
            } else {
                let middle = 0.5 * (begin + end);
                todo.push((middle, end, halvings + 1));
                todo.push((begin, middle, halvings + 1));
            }
        }
        done
    }

    fn piece<const COUNT: usize>(
        &self,
        begin: f64,
        end: f64,
        sample: &mut impl FnMut(f64) -> [f64; COUNT],
    ) -> Piece<COUNT> {
        let half_days = 0.5 * (end - begin);
        let mut quantities = [[0.0; NODES]; COUNT];
        for (node, x) in self.nodes.iter().enumerate() {
            let values = sample(begin + half_days * (x + 1.0));
            for (coefficients, value) in quantities.iter_mut().zip(values) {
                for (coefficient, weights) in coefficients.iter_mut().zip(&self.weights) {
                    *coefficient += value * weights[node];
                }
            }
        }
        Piece { begin_days: begin, half_days, quantities }
    }
}

fn is_smooth((coefficients, negligible): (&Coefficients, &f64)) -> bool {
    let greatest = |part: &[f64]| part.iter().fold(0.0_f64, |most, c| most.max(c.abs()));
    greatest(&coefficients[NODES - TAIL..]) <= negligible * greatest(coefficients)
}

/// The value of a polynomial (Clenshaw's recurrence).
pub fn value(coefficients: &Coefficients, x: f64) -> f64 {
    let (mut one, mut two) = (0.0, 0.0);
    for c in coefficients[1..].iter().rev() {
        (one, two) = (2.0 * x * one - two + c, one);
    }
    x * one - two + coefficients[0]
}

/// The derivative with x.
pub fn derivative(coefficients: &Coefficients) -> Coefficients {
    let mut rate = [0.0; NODES];
    for order in (1..NODES).rev() {
        let above = if order + 1 < NODES { rate[order + 1] } else { 0.0 };
        rate[order - 1] = above + 2.0 * order as f64 * coefficients[order];
    }
    rate[0] *= 0.5;
    rate
}

/// A place where a polynomial passes zero.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Zero {
    pub x: f64,
    /// From below to above.
    pub rising: bool,
}

/// The zeros of a polynomial on [-1, 1], in order. Zero itself counts as above.
pub fn zeros(coefficients: &Coefficients) -> Vec<Zero> {
    let mut found = Vec::new();
    let slope = derivative(coefficients);
    let bend = derivative(&slope).iter().map(|c| c.abs()).sum();
    let ends = [value(coefficients, -1.0), value(coefficients, 1.0)];
    Isolation { coefficients, slope, bend, found: &mut found }.search([-1.0, 1.0], ends);
    found
}

struct Isolation<'a> {
    coefficients: &'a Coefficients,
    slope: Coefficients,
    /// Bound of the second derivative.
    bend: f64,
    found: &'a mut Vec<Zero>,
}

impl Isolation<'_> {
    /// Zeros between two places with these values.
    fn search(&mut self, [from, to]: [f64; 2], ends: [f64; 2]) {
        let (middle, half) = (0.5 * (from + to), 0.5 * (to - from));
        let (here, slope) = (value(self.coefficients, middle), value(&self.slope, middle));
        let passes = (ends[0] >= 0.0) != (ends[1] >= 0.0);
        if here.abs() > (slope.abs() + 0.5 * self.bend * half) * half && !passes {
            return;
        }
        if slope.abs() > self.bend * half || half < NARROW {
            if passes {
                let x = self.bisect([from, to], ends[1] >= 0.0);
                self.found.push(Zero { x, rising: ends[1] >= 0.0 });
            }
            return;
        }
        self.search([from, middle], [ends[0], here]);
        self.search([middle, to], [here, ends[1]]);
    }

    fn bisect(&self, [mut from, mut to]: [f64; 2], rising: bool) -> f64 {
        for _ in 0..BISECTIONS {
            let middle = 0.5 * (from + to);
            if (value(self.coefficients, middle) >= 0.0) == rising {
                to = middle;
            } else {
                from = middle;
            }
        }
        0.5 * (from + to)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn found(function: impl Fn(f64) -> f64) -> Vec<(f64, bool)> {
        let pieces = Fitter::new().pieces([0.0, 16.0], &[1e-11], &mut |t| [function(t)]);
        pieces
            .iter()
            .flat_map(|piece| {
                zeros(&piece.quantities[0])
                    .into_iter()
                    .map(|zero| (piece.begin_days + piece.half_days * (zero.x + 1.0), zero.rising))
            })
            .collect()
    }

    #[test]
    fn a_close_pair_inside_one_piece_is_two_zeros_and_a_near_miss_none() {
        let bowl = |depth: f64| move |t: f64| (t - 7.3) * (t - 7.3) - depth;
        let pair = found(bowl(1e-8));
        assert_eq!(pair.iter().map(|(_, rising)| *rising).collect::<Vec<_>>(), [false, true]);
        assert!((pair[0].0 - 7.2999).abs() < 1e-7 && (pair[1].0 - 7.3001).abs() < 1e-7, "{pair:?}");
        assert!(found(bowl(-1e-8)).is_empty());
        // Seen to fail: evenly spaced samples of a quarter day do not see the pair.
        assert!((0..=64).all(|k| bowl(1e-8)(f64::from(k) * 0.25) > 0.0));
    }

    #[test]
    fn a_sharp_turn_is_followed_by_halving() {
        // As a fly-by within a thousandth of the piece.
        let sharp = |t: f64| (t - 9.1) / ((t - 9.1) * (t - 9.1) + 1e-4).sqrt() - 0.5;
        let zeros = found(sharp);
        assert_eq!(zeros.len(), 1);
        assert!((zeros[0].0 - (9.1 + 0.01 / 3.0_f64.sqrt())).abs() < 1e-9, "{zeros:?}");
    }

    #[test]
    fn the_derivative_of_a_polynomial_is_that_of_its_function() {
        let pieces = Fitter::new().pieces([-1.0, 1.0], &[1e-11], &mut |t| [libm::sin(2.0 * t)]);
        let rate = derivative(&pieces[0].quantities[0]);
        for x in [-1.0, -0.3, 0.0, 0.77, 1.0] {
            assert!((value(&rate, x) - 2.0 * libm::cos(2.0 * x)).abs() < 1e-9, "{x}");
        }
    }
}
