//! Where have many grains got to, each on its own conic, after its own time?
//!
//! Universal variables as in `orbit::universal` of the main crate, one form for attraction, no force and repulsion,
//! without a branch: the universal anomaly s solves t(s) = r0 G1 + eta G2 + mu G3 with G_n = s^n c_n(B s^2); c2 and c3
//! come from short series at s / 8 and three doublings. Start: from the first three terms of t(s), or the guess if that
//! is smaller; then Laguerre's steps, which come home from afar, and one step of fourth order whose size
//! tells whether all is well. A block with a lane that does not pass takes more steps; a lane that still does not is named
//! in [`Block::doubtful`] and is for the slow solver.
//!
//! The work goes stage by stage through a block that fits the first cache: independent grains hide each other's
//! waiting, natively and in wasm. 256 grains and four to a vector measured best (benches/grains.rs).

use wide::f64x4;

/// Grains of a block.
pub const BLOCK: usize = 256;
pub(crate) const LANES: usize = 4;

/// Laguerre's steps before the last one: two serve every grain of an ordinary comet. A block that holds a grain for which
/// they do not takes so many more, one at a time.
const STEPS: usize = 2;
const MORE_STEPS: usize = 6;
/// The last step over s must be below this: what it leaves is of its fourth power times at most some 1e5, where the
/// time span holds a grazing perihelion.
const LAST_STEP: f64 = 1e-4;
/// Series serve up to this |B (s / 8)^2|: 0.8 of a revolution about the centre of an ellipse.
const SERIES_REACH: f64 = 0.4;

/// A number for each grain.
pub type Numbers = [f64; BLOCK];

/// A block of grains: what is given, and after [`Block::solve`] what was found. Units agree with mu, for instance au,
/// days and au^3/d^2. Lanes that are not used may hold anything.
#[derive(Clone, Debug)]
pub struct Block {
    /// Place and velocity at the start.
    pub place: [Numbers; 3],
    pub velocity: [Numbers; 3],
    /// Strength of the force; negative pushes.
    pub mu: Numbers,
    /// Time that passes, >= 0.
    pub time: Numbers,
    /// Universal anomaly of a neighbouring orbit after that time, or infinity.
    pub guess: Numbers,
    /// Place at the end.
    pub end: [Numbers; 3],
    /// How many grains are in use; a multiple of four.
    pub count: usize,
    /// One bit a grain, 64 to a word, for each that is for the slow solver.
    pub doubtful: [u64; BLOCK / 64],
    pub(crate) distance: Numbers,
    inverse: Numbers,
    pub(crate) eta: Numbers,
    pub(crate) binding: Numbers,
    s: Numbers,
    pub(crate) s_end: Numbers,
}

impl Default for Block {
    fn default() -> Self {
        let zero = [0.0; BLOCK];
        Block {
            place: [zero; 3],
            velocity: [zero; 3],
            mu: zero,
            time: zero,
            guess: [f64::INFINITY; BLOCK],
            end: [zero; 3],
            count: BLOCK,
            doubtful: [0; BLOCK / 64],
            distance: zero,
            inverse: zero,
            eta: zero,
            binding: zero,
            s: zero,
            s_end: zero,
        }
    }
}

/// Where a block is looked at from: the observer's place, and the axes of the picture: two across, one along the sight.
#[derive(Clone, Copy, Debug)]
pub struct Sight {
    pub observer: [f64; 3],
    pub axes: [[f64; 3]; 3],
}

impl Block {
    /// Whether a grain is for the slow solver.
    pub fn is_doubtful(&self, grain: usize) -> bool {
        self.doubtful[grain / 64] >> (grain % 64) & 1 == 1
    }

    /// Finds the ends.
    pub fn solve(&mut self) {
        self.prepare();
        self.start();
        for _ in 0..STEPS {
            self.step();
        }
        self.finish();
        for _ in 0..MORE_STEPS {
            if self.doubtful == [0; BLOCK / 64] {
                return;
            }
            self.step();
            self.finish();
        }
    }

    fn prepare(&mut self) {
        for at in (0..self.count.min(BLOCK)).step_by(LANES) {
            let [x, y, z] = self.place.each_ref().map(|numbers| load(numbers, at));
            let [u, v, w] = self.velocity.each_ref().map(|numbers| load(numbers, at));
            let distance = (x * x + y * y + z * z).sqrt();
            store(&mut self.distance, at, distance);
            store(&mut self.eta, at, x * u + y * v + z * w);
            let mu = load(&self.mu, at);
            let inverse = f64x4::ONE / distance;
            store(&mut self.inverse, at, inverse);
            store(&mut self.binding, at, (mu + mu) * inverse - (u * u + v * v + w * w));
        }
    }

    /// A start for s: one substitution into the linear term of t = r0 s + eta s^2 / 2 + (mu - B r0) s^3 / 6 + ..., or
    /// the guess if that is smaller. The root of the cubic itself would save steps only where perihelion is grazed.
    fn start(&mut self) {
        for at in (0..self.count.min(BLOCK)).step_by(LANES) {
            let (distance, eta) = (load(&self.distance, at), load(&self.eta, at));
            let (mu, inverse) = (load(&self.mu, at), load(&self.inverse, at));
            let linear = load(&self.time, at) * inverse;
            let third = (mu - load(&self.binding, at) * distance) * f64x4::splat(1.0 / 6.0);
            let bend = linear * (eta * f64x4::HALF + linear * third) * inverse;
            let start = linear / (bend + f64x4::ONE).fast_max(f64x4::HALF);
            store(&mut self.s, at, start.fast_min(load(&self.guess, at)));
        }
    }

    /// Laguerre's step.
    fn step(&mut self) {
        for at in (0..self.count.min(BLOCK)).step_by(LANES) {
            let lane = Lane::at(self, at);
            let s = load(&self.s, at);
            let g = lane.universal(s);
            let (miss, r, eta) = lane.rates(&g);
            let root = (r * r * f64x4::splat(16.0) - miss * eta * f64x4::splat(20.0)).abs().sqrt();
            store(&mut self.s, at, s - miss * f64x4::splat(5.0) / (r + root));
        }
    }

    /// The step of fourth order, the check, and the place.
    fn finish(&mut self) {
        self.doubtful = [0; BLOCK / 64];
        for at in (0..self.count.min(BLOCK)).step_by(LANES) {
            let lane = Lane::at(self, at);
            let s = load(&self.s, at);
            let g = lane.universal(s);
            let (miss, r, eta) = lane.rates(&g);
            let third = lane.mu - lane.binding * r;
            let square = r * r;
            let half = miss * eta * f64x4::HALF;
            let over = miss * (square - half);
            let under = r * (square - half - half) + miss * miss * third * f64x4::splat(1.0 / 6.0);
            let step = -over / under;

            store(&mut self.s_end, at, s + step);

            // The G functions that small step further, by the addition theorem.
            let step2 = step * step;
            let bend = lane.binding * step2;
            let h0 = f64x4::ONE - bend * f64x4::HALF;
            let h1 = step * (f64x4::ONE - bend * f64x4::splat(1.0 / 6.0));
            let h2 = step2 * f64x4::HALF;
            let h3 = step2 * step * f64x4::splat(1.0 / 6.0);
            let g1 = g[1] * h0 + g[0] * h1;
            let g2 = g[2] + g[1] * h1 + g[0] * h2;
            let g3 = g[3] + g[2] * h1 + g[1] * h2 + g[0] * h3;

            let f = f64x4::ONE - lane.mu * g2 * load(&self.inverse, at);
            // Two equal forms of g; each cancels where the other does not.
            let (near, turned, fallen) = (lane.distance * g1, lane.eta * g2, lane.mu * g3);
            let by_time = (lane.time + fallen.abs()).simd_lt(near + turned.abs());
            let shift = by_time.bitselect(lane.time - fallen, near + turned);
            for axis in 0..3 {
                let end = load(&self.place[axis], at) * f + load(&self.velocity[axis], at) * shift;
                store(&mut self.end[axis], at, end);
            }
            let eighth = s * f64x4::splat(0.125);
            let sound = step.abs().simd_le(s * f64x4::splat(LAST_STEP))
                & (lane.binding * eighth * eighth).abs().simd_le(f64x4::splat(SERIES_REACH));
            let bits = u64::from(!sound.to_bitmask() & 0b1111);
            self.doubtful[at / 64] |= bits << (at % 64);
        }
    }

    /// Gnomonic places of the ends on the picture, tangent values; infinite or not a number at 90 degrees, of the wrong
    /// sign beyond.
    pub fn project(&self, sight: &Sight, across: &mut [Numbers; 2]) {
        let [ox, oy, oz] = sight.observer.map(f64x4::splat);
        let axes = sight.axes.map(|axis| axis.map(f64x4::splat));
        for at in (0..self.count.min(BLOCK)).step_by(LANES) {
            let x = load(&self.end[0], at) - ox;
            let y = load(&self.end[1], at) - oy;
            let z = load(&self.end[2], at) - oz;
            let [east, north, along] = axes.map(|[a, b, c]| x * a + y * b + z * c);
            let closer = f64x4::ONE / along;
            store(&mut across[0], at, east * closer);
            store(&mut across[1], at, north * closer);
        }
    }
}

/// What the time equation of four grains needs.
struct Lane {
    mu: f64x4,
    time: f64x4,
    distance: f64x4,
    eta: f64x4,
    binding: f64x4,
}

impl Lane {
    #[inline(always)]
    fn at(block: &Block, at: usize) -> Self {
        Lane {
            mu: load(&block.mu, at),
            time: load(&block.time, at),
            distance: load(&block.distance, at),
            eta: load(&block.eta, at),
            binding: load(&block.binding, at),
        }
    }

    /// G0 to G3.
    #[inline(always)]
    fn universal(&self, s: f64x4) -> [f64x4; 4] {
        let small = s * f64x4::splat(0.125);
        let z = self.binding * small * small;
        let mut c2 = f64x4::splat(C2[TERMS - 1]);
        let mut c3 = f64x4::splat(C3[TERMS - 1]);
        for k in (0..TERMS - 1).rev() {
            c2 = c2 * z + f64x4::splat(C2[k]);
            c3 = c3 * z + f64x4::splat(C3[k]);
        }
        let mut c0 = f64x4::ONE - z * c2;
        let mut c1 = f64x4::ONE - z * c3;
        for _ in 0..3 {
            c3 = (c2 + c0 * c3) * f64x4::splat(0.25);
            c2 = c1 * c1 * f64x4::HALF;
            c1 *= c0;
            c0 = c0 * c0 * f64x4::splat(2.0) - f64x4::ONE;
        }
        let s2 = s * s;
        [c0, s * c1, s2 * c2, s2 * s * c3]
    }

    /// Time missed, distance, and its rate.
    #[inline(always)]
    fn rates(&self, g: &[f64x4; 4]) -> (f64x4, f64x4, f64x4) {
        let miss = self.distance * g[1] + self.eta * g[2] + self.mu * g[3] - self.time;
        let r = self.distance * g[0] + self.eta * g[1] + self.mu * g[2];
        let eta = self.eta * g[0] + (self.mu - self.binding * self.distance) * g[1];
        (miss, r, eta)
    }
}

/// Terms of the series: the next is below 2e-16 of the first within [`SERIES_REACH`].
pub(crate) const TERMS: usize = 7;
/// (-1)^k / (2k + 2)! and (-1)^k / (2k + 3)!.
const C2: [f64; TERMS] = series(2);
const C3: [f64; TERMS] = series(3);

pub(crate) const fn series(n: u64) -> [f64; TERMS] {
    let mut terms = [0.0; TERMS];
    let mut k = 0;
    while k < TERMS {
        let mut factorial = 1.0;
        let mut m = 2;
        while m <= 2 * k as u64 + n {
            factorial *= m as f64;
            m += 1;
        }
        terms[k] = if k % 2 == 0 { 1.0 } else { -1.0 } / factorial;
        k += 1;
    }
    terms
}

#[inline(always)]
pub(crate) fn load(numbers: &Numbers, at: usize) -> f64x4 {
    f64x4::from([numbers[at], numbers[at + 1], numbers[at + 2], numbers[at + 3]])
}

#[inline(always)]
pub(crate) fn store(numbers: &mut Numbers, at: usize, lanes: f64x4) {
    numbers[at..at + LANES].copy_from_slice(&lanes.to_array());
}
