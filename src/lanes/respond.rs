//! How do the ends of a block answer to the velocities at the start?
//!
//! The derivative of the place with respect to the start velocity, as in `orbit::conic` of the main crate: t(s) = time
//! is differentiated at fixed time, with dG_n/ds = G_(n-1) and dG_n/dB = (n G_(n+2) - s G_(n+1)) / 2. It needs G up to 5:
//! c4 and c5 by series at s / 8 and doubling (Mikkola's form of the half-angle laws).

use crate::solve::{Block, LANES, Numbers, TERMS, load, series, store};
use wide::f64x4;

/// d(end place) / d(start velocity), time: first index the component of the end, second that of the velocity.
pub type Response = [[Numbers; 3]; 3];

const C4: [f64; TERMS] = series(4);
const C5: [f64; TERMS] = series(5);

impl Block {
    /// The response of what [`Block::solve`] found; means nothing for doubtful grains.
    pub fn respond(&self, response: &mut Response) {
        for at in (0..self.count).step_by(LANES) {
            let (s, binding, mu) = (load(&self.s_end, at), load(&self.binding, at), load(&self.mu, at));
            let (distance, eta) = (load(&self.distance, at), load(&self.eta, at));
            let g = universal(s, binding);
            let place = self.place.each_ref().map(|numbers| load(numbers, at));
            let velocity = self.velocity.each_ref().map(|numbers| load(numbers, at));

            let slope_1 = f64x4::HALF * (g[3] - s * g[2]);
            let slope_2 = f64x4::HALF * (g[4] + g[4] - s * g[3]);
            let slope_3 = f64x4::HALF * (g[5] * f64x4::splat(3.0) - s * g[4]);
            let time_by_binding = distance * slope_1 + eta * slope_2 + mu * slope_3;
            let r = distance * g[0] + eta * g[1] + mu * g[2];
            let inverse = f64x4::ONE / r;
            let shift = distance * g[1] + eta * g[2];
            let pull = mu / distance;
            for by in 0..3 {
                let binding_by = velocity[by] * f64x4::splat(-2.0);
                let s_by = -(place[by] * g[2] + binding_by * time_by_binding) * inverse;
                let g1_by = s_by * g[0] + binding_by * slope_1;
                let g2_by = s_by * g[1] + binding_by * slope_2;
                let f_by = -(g2_by * pull);
                let shift_by = g1_by * distance + place[by] * g[2] + g2_by * eta;
                for end in 0..3 {
                    let mut answer = place[end] * f_by + velocity[end] * shift_by;
                    if end == by {
                        answer += shift;
                    }
                    store(&mut response[end][by], at, answer);
                }
            }
        }
    }
}

/// G0 to G5.
#[inline(always)]
fn universal(s: f64x4, binding: f64x4) -> [f64x4; 6] {
    let small = s * f64x4::splat(0.125);
    let mut z = binding * small * small;
    let mut c4 = f64x4::splat(C4[TERMS - 1]);
    let mut c5 = f64x4::splat(C5[TERMS - 1]);
    for k in (0..TERMS - 1).rev() {
        c4 = c4 * z + f64x4::splat(C4[k]);
        c5 = c5 * z + f64x4::splat(C5[k]);
    }
    let lower = |z: f64x4, c4: f64x4, c5: f64x4| {
        let (c2, c3) = (f64x4::HALF - z * c4, f64x4::splat(1.0 / 6.0) - z * c5);
        [f64x4::ONE - z * c2, f64x4::ONE - z * c3, c2, c3]
    };
    for _ in 0..3 {
        let [_, c1, c2, c3] = lower(z, c4, c5);
        c5 = (c5 + c4 + c3 * c2) * f64x4::splat(1.0 / 16.0);
        c4 = c3 * (f64x4::ONE + c1) * f64x4::splat(0.125);
        z *= f64x4::splat(4.0);
    }
    let [c0, c1, c2, c3] = lower(z, c4, c5);
    let (s2, s3) = (s * s, s * s * s);
    [c0, s * c1, s2 * c2, s3 * c3, s2 * s2 * c4, s2 * s3 * c5]
}
