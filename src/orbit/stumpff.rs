//! What are the Stumpff functions c0 to c5 of any real argument?
//!
//! c_n(z) = sum over k of (-z)^k / (2k + n)!; they make one formula of ellipse, parabola and hyperbola.
//! Method: the series for |z| < 1 (closed forms lose digits there), argument quartering and doubling back
//! for |z| < 16, closed forms beyond. Accuracy: a few units in the last place over half a revolution
//! (z <= pi squared) and for any negative z; tests/conic.rs sees it through every orbit.
//! Source: Danby, Fundamentals of Celestial Mechanics, ch. 6.9; doubling formulas from the half-angle laws.

/// Reciprocal factorials 1/0! to 1/23!, for the series.
const INVERSE_FACTORIAL: [f64; 24] = inverse_factorials();

/// Terms of the series: the tenth is below 1e-17 of the first for |z| < 1.
const TERMS: usize = 10;

/// c0 to c3 of z.
pub fn c0_to_c3(z: f64) -> [f64; 4] {
    if z.abs() < 1.0 {
        let (c2, c3) = (series(z, 2), series(z, 3));
        [1.0 - z * c2, 1.0 - z * c3, c2, c3]
    } else if z.abs() < 16.0 {
        doubled(c0_to_c3(0.25 * z))
    } else {
        closed(z)
    }
}

/// c4 and c5 of z, given c2 and c3 of the same z.
pub fn c4_c5(z: f64, c2: f64, c3: f64) -> [f64; 2] {
    if z.abs() < 1.0 { [series(z, 4), series(z, 5)] } else { [(0.5 - c2) / z, (1.0 / 6.0 - c3) / z] }
}

/// The defining series, for |z| < 1.
fn series(z: f64, n: usize) -> f64 {
    let mut sum = 0.0;
    for k in (0..TERMS).rev() {
        sum = INVERSE_FACTORIAL[2 * k + n] - z * sum;
    }
    sum
}

/// c0 to c3 of 4 z from those of z.
fn doubled([c0, c1, c2, c3]: [f64; 4]) -> [f64; 4] {
    [2.0 * c0 * c0 - 1.0, c0 * c1, 0.5 * c1 * c1, 0.25 * (c2 + c0 * c3)]
}

/// Trigonometric and hyperbolic forms, for |z| well above zero.
fn closed(z: f64) -> [f64; 4] {
    let x = z.abs().sqrt();
    let (sine, sine_half) =
        if z > 0.0 { (libm::sin(x), libm::sin(0.5 * x)) } else { (libm::sinh(x), libm::sinh(0.5 * x)) };
    let c2 = 2.0 * sine_half * sine_half / z.abs();
    [1.0 - z * c2, sine / x, c2, (x - sine) / (x * z)]
}

const fn inverse_factorials() -> [f64; 24] {
    let mut table = [1.0; 24];
    let mut factorial = 1.0;
    let mut n = 1;
    while n < 24 {
        factorial *= n as f64;
        table[n] = 1.0 / factorial;
        n += 1;
    }
    table
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_methods_meet_where_they_change_over() {
        for z in [1.0, 4.0, 16.0, -1.0, -4.0, -16.0] {
            let below = c0_to_c3(z * (1.0 - 1e-15));
            let above = c0_to_c3(z * (1.0 + 1e-15));
            for (a, b) in below.iter().zip(above) {
                assert!((a - b).abs() < 1e-14 * a.abs().max(1.0), "{z}: {a} {b}");
            }
        }
    }

    #[test]
    fn the_identity_c0_squared_plus_z_c1_squared_is_one_holds() {
        for z in [-300.0, -30.0, -1.5, -0.3, 0.0, 1e-9, 0.9, 1.1, 9.8, 39.0] {
            let [c0, c1, ..] = c0_to_c3(z);
            // The two squares may be large and cancel: the tolerance is relative to them.
            assert!((c0 * c0 + z * c1 * c1 - 1.0).abs() < 1e-14 * (c0 * c0).max(1.0), "{z}");
        }
    }
}
