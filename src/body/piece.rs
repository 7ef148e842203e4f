//! How does a smooth path become polynomials?
//!
//! A path over a short stretch of time is fixed by its places at twelve moments (Chebyshev's nodes) and kept as the
//! powers of x, which runs from -1 to 1 over the stretch: the Earth's way by [`super::earth::Track`], a comet's by
//! [`crate::sky`]. The stretch is the caller's choice, and so is the accuracy; [`Piece::last_terms`] tells it.

use nalgebra::Vector3;
use std::f64::consts::PI;

/// Places that fix one piece.
pub const NODES: usize = 12;

/// Coefficients of the powers of x, lowest first. A fourth, empty axis keeps the arithmetic in whole vectors.
#[derive(Clone, Debug)]
pub struct Piece([[f64; 4]; NODES]);

impl Piece {
    /// The place at `x`.
    pub fn place(&self, x: f64) -> Vector3<f64> {
        self.sum(NODES, x)
    }

    /// The same by the first four powers only: rough, for a first guess.
    pub fn rough_place(&self, x: f64) -> Vector3<f64> {
        self.sum(4, x)
    }

    /// Horner's rule for the first `terms` powers.
    #[inline(always)]
    fn sum(&self, terms: usize, x: f64) -> Vector3<f64> {
        let mut place = self.0[terms - 1];
        for c in self.0[..terms - 1].iter().rev() {
            for axis in 0..4 {
                place[axis] = place[axis] * x + c[axis];
            }
        }
        Vector3::new(place[0], place[1], place[2])
    }

    /// The place at `x` and its derivative by x: Horner's rule for both together.
    #[inline(always)]
    pub fn place_and_rate(&self, x: f64) -> (Vector3<f64>, Vector3<f64>) {
        let mut place = self.0[NODES - 1];
        let mut rate = [0.0; 4];
        for c in self.0[..NODES - 1].iter().rev() {
            for axis in 0..4 {
                rate[axis] = rate[axis] * x + place[axis];
                place[axis] = place[axis] * x + c[axis];
            }
        }
        (Vector3::new(place[0], place[1], place[2]), Vector3::new(rate[0], rate[1], rate[2]))
    }

    /// The lengths of the last two coefficients of the same path in Chebyshev polynomials; what is cut off is less
    /// by the rate at which they fall.
    pub fn last_terms(&self) -> [f64; 2] {
        // T(n) begins with 2^(n-1) x^n.
        [NODES - 2, NODES - 1].map(|n| {
            let [x, y, z, _] = self.0[n];
            (x * x + y * y + z * z).sqrt() / (1_u64 << (n - 1)) as f64
        })
    }
}

/// How a piece is made from the places at its nodes: through the coefficients of the Chebyshev polynomials, since those
/// of the powers straight from the places would carry their rounding a thousandfold.
#[derive(Clone, Debug)]
pub struct Fit {
    /// Chebyshev's nodes, as x.
    pub nodes: [f64; NODES],
    /// By polynomial, then node: what the value at the node adds to the coefficient (discrete orthogonality).
    weights: [[f64; NODES]; NODES],
    /// By polynomial, then power: its own coefficients, T(n+1) = 2 x T(n) - T(n-1).
    polynomials: [[f64; NODES]; NODES],
}

impl Default for Fit {
    fn default() -> Self {
        Fit::new()
    }
}

impl Fit {
    pub fn new() -> Fit {
        let angle = |node: usize| PI * (node as f64 + 0.5) / NODES as f64;
        let mut polynomials = [[0.0; NODES]; NODES];
        polynomials[0][0] = 1.0;
        polynomials[1][1] = 1.0;
        for n in 2..NODES {
            for power in 0..NODES {
                let raised = if power == 0 { 0.0 } else { polynomials[n - 1][power - 1] };
                polynomials[n][power] = 2.0 * raised - polynomials[n - 2][power];
            }
        }
        let weights = std::array::from_fn(|n| {
            let share = if n == 0 { 1.0 } else { 2.0 } / NODES as f64;
            std::array::from_fn(|node| share * libm::cos(n as f64 * angle(node)))
        });
        Fit { nodes: std::array::from_fn(|node| libm::cos(angle(node))), weights, polynomials }
    }

    /// The piece through `places`, in the order of the nodes.
    pub fn piece(&self, places: &[Vector3<f64>; NODES]) -> Piece {
        let mut powers = [[0.0; 4]; NODES];
        for (weights, polynomial) in self.weights.iter().zip(&self.polynomials) {
            let mut term = [0.0; 4];
            for (weight, place) in weights.iter().zip(places) {
                for axis in 0..3 {
                    term[axis] += place[axis] * weight;
                }
            }
            for (power, coefficient) in powers.iter_mut().zip(polynomial) {
                for axis in 0..4 {
                    power[axis] += term[axis] * coefficient;
                }
            }
        }
        Piece(powers)
    }
}
