//! How do values at a few nodes become a Chebyshev sum, and what does that sum tell?

use std::f64::consts::PI;
use tailvane_lanes::row::T_TERMS;

/// The nodes: roots of the polynomial of degree N.
pub fn nodes<const N: usize>() -> [f64; N] {
    std::array::from_fn(|k| libm::cos(PI * (k as f64 + 0.5) / N as f64))
}

/// From values at the nodes to terms. Rows: term; columns: node.
pub fn fit<const N: usize>() -> [[f64; N]; N] {
    std::array::from_fn(|n| {
        std::array::from_fn(|k| {
            let value = libm::cos(PI * n as f64 * (k as f64 + 0.5) / N as f64);
            value * if n == 0 { 1.0 } else { 2.0 } / N as f64
        })
    })
}

/// Applies that.
pub fn transform<const N: usize>(fit: &[[f64; N]; N], values: &[f64; N]) -> [f64; N] {
    std::array::from_fn(|n| (0..N).map(|k| fit[n][k] * values[k]).sum())
}

/// The last term, or a quarter of the last but one: one of them may vanish by symmetry.
pub fn last(terms: &[f64]) -> f64 {
    let n = terms.len();
    terms[n - 1].abs().max(0.25 * terms[n - 2].abs())
}

/// Integral of a Chebyshev sum from -1 to 1.
pub fn integral(terms: &[f64]) -> f64 {
    terms.iter().step_by(2).enumerate().map(|(half, term)| 2.0 * term / (1.0 - 4.0 * (half * half) as f64)).sum()
}

/// Powers from Chebyshev terms (six of them).
pub fn powers(c: &[f64; T_TERMS]) -> [f64; T_TERMS] {
    [
        c[0] - c[2] + c[4],
        c[1] - 3.0 * c[3] + 5.0 * c[5],
        2.0 * c[2] - 8.0 * c[4],
        4.0 * c[3] - 20.0 * c[5],
        8.0 * c[4],
        16.0 * c[5],
    ]
}
