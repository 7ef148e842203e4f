//! Where do the ends of a block lie as seen from a place, and how do they answer to velocities along three axes?

use crate::respond::Response;
use crate::solve::{Block, Sight};
use crate::strew::NODE;

impl Block {
    /// The nodes ([`NODE`] functions of `line`, each with as many numbers as fit) of the grains from `first` on: place along
    /// the sight and along both axes across, and its changes for each of three unit velocities at the start.
    pub fn lay(&self, first: usize, response: &Response, sight: &Sight, throws: &[[f64; 3]; 3], line: &mut [f32]) {
        let stride = line.len() / NODE;
        let [across, aside, along] = sight.axes;
        for k in 0..stride {
            let node = first + k;
            let end: [f64; 3] = std::array::from_fn(|axis| self.end[axis][node] - sight.observer[axis]);
            let answers =
                throws.map(|throw| response.each_ref().map(|by| dot(&by.each_ref().map(|n| n[node]), &throw)));
            for (what, vector) in [end, answers[0], answers[1], answers[2]].iter().enumerate() {
                for (axis, unit) in [along, across, aside].iter().enumerate() {
                    line[(what * 3 + axis) * stride + k] = dot(vector, unit) as f32;
                }
            }
        }
    }
}

#[inline(always)]
fn dot(a: &[f64; 3], b: &[f64; 3]) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}
