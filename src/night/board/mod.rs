//! Which of many comets are worth the night?
//!
//! Everything about the site is computed once: five places through the night at which each comet is solved exactly, and
//! between them the directions run as polynomials (as in [`crate::sky::dark::Day`]). Angles, distances and the magnitude
//! are those of local mean midnight; altitudes, and the dark time, of the whole night on a grid of five minutes, whose
//! ends are good to half of that. The next crossing of the orbit plane is the Earth's: the comet itself is always in its
//! plane, so only the Earth's path counts, which is the same for all comets.
//! Accuracy beside a night of its own: altitude 0.02 degrees beyond 0.05 au.
//!
//! How dust lies sunward takes longer than all the rest, so it is not part of an entry: [`sunward`] says it of one comet,
//! for callers that spread the work.

pub mod column;

use super::evening::Evening;
use super::law::NightLaw;
use super::moment::no_site;
use crate::body::State;
use crate::body::earth::Track;
use crate::body::observer::Observer;
use crate::error::Error;
use crate::frame::horizon::Horizon;
use crate::orbit::conic::Orbit;
use crate::orbit::elements::Comet;
use crate::sky::trail::Trail;
use crate::sky::viewpoint::Viewpoint;
use crate::sky::watch::Lookout;
use crate::sky::{Sky, magnitude};
use crate::tail::grain::Vista;
use crate::tail::law::Tails;
use crate::tail::perspective::{Recipe, Verdict};
use crate::time::Instant;
use nalgebra::Vector3;

/// Exact places through the night, noon to noon.
const NODES: usize = 5;
/// Times at which altitudes are looked at: every five minutes.
const LOOKS: usize = 289;
/// A crossing is looked for this many days ahead, in steps of so many. The Earth crosses every plane twice a year.
const AHEAD_DAYS: f64 = 370.0;
const AHEAD_STEP: f64 = 2.0;

/// One time of the night: the weights of the nodes, and the zenith; None in daylight, by the law.
struct Look {
    time: Instant,
    weights: [f64; NODES],
    dark_zenith: Option<Vector3<f64>>,
}

/// A night ready for many comets.
pub struct Board {
    evening: Evening,
    sine_above: f64,
    nodes: [Viewpoint; NODES],
    looks: Vec<Look>,
    /// The Earth at even steps from midnight on.
    earth: Vec<(Instant, State)>,
    track: Track,
}

/// Dark time with the comet up.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Up {
    /// From the first such time to the last; there may be a gap between.
    pub begin: Instant,
    pub end: Instant,
    /// All of it, days.
    pub days: f64,
    pub highest_rad: f64,
    pub highest_at: Instant,
}

/// When the Earth next passes through the orbit plane.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Crossing {
    pub time: Instant,
    /// Whether negative velocity then lies opposite to the antisolar direction, so that old dust points sunward; None where
    /// one of the two has no position angle.
    pub opposite: Option<bool>,
}

/// What the board says of one comet.
#[derive(Clone, Debug, PartialEq)]
pub struct Entry {
    /// At local mean midnight.
    pub sky: Sky,
    pub total_magnitude: Option<f64>,
    pub up: Option<Up>,
    pub next_crossing: Option<Crossing>,
}

/// How dust lies sunward of one comet.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Sunward {
    pub verdict: Verdict,
    /// Share of the light in the anti-tail sector, with the chosen ejection.
    pub share: f64,
}

impl Board {
    /// The board of a site's night.
    ///
    /// # Errors
    /// An observer without a site.
    pub fn new(observer: &Observer, evening: &Evening, law: &NightLaw) -> Result<Board, Error> {
        let Observer::Site(_) = observer else { return Err(no_site()) };
        let mut lookout = Lookout::new(observer.clone());
        let length = evening.to.tdb_days() - evening.from.tdb_days();
        let at = |share: f64| evening.from.plus_days(length * share);
        let mut nodes = Vec::new();
        for node in 0..NODES {
            nodes.push(lookout.viewpoint(at(node as f64 / (NODES - 1) as f64))?);
        }
        let nodes: [Viewpoint; NODES] = nodes.try_into().map_err(|_| no_site())?;
        let mut looks = Vec::with_capacity(LOOKS);
        for number in 0..LOOKS {
            let share = number as f64 / (LOOKS - 1) as f64;
            let time = at(share);
            let viewpoint = lookout.viewpoint(time)?;
            let to_sun = -viewpoint.observer.position_au;
            let dark = |horizon: &Horizon| horizon.altitude_rad(&to_sun).to_degrees() < law.sun_below_deg;
            let dark_zenith = viewpoint.ground.map(|ground| ground.horizon).filter(dark).map(|horizon| horizon.up);
            looks.push(Look { time, weights: weights(share * (NODES - 1) as f64), dark_zenith });
        }
        let mut track = Track::new();
        let mut earth = Vec::new();
        for step in 0..=(AHEAD_DAYS / AHEAD_STEP) as usize {
            let time = evening.middle().plus_days(step as f64 * AHEAD_STEP);
            // The ephemeris may end before; then no crossing is known beyond.
            let Ok(state) = track.state(time) else { break };
            earth.push((time, state));
        }
        let sine_above = libm::sin(law.comet_above_deg.to_radians());
        Ok(Board { evening: *evening, sine_above, nodes, looks, earth, track })
    }

    pub fn evening(&self) -> &Evening {
        &self.evening
    }

    /// What the board says of a comet.
    pub fn entry(&mut self, comet: &Comet, orbit: &Orbit) -> Entry {
        let mut trail = Trail::default();
        let sight = |viewpoint: &Viewpoint, trail: &mut Trail| {
            (trail.retarded(orbit, viewpoint).0.position_au - viewpoint.observer.position_au).normalize()
        };
        let nodes: [Vector3<f64>; NODES] = std::array::from_fn(|node| sight(&self.nodes[node], &mut trail));
        let sky = Sky::of(orbit, &self.nodes[NODES / 2], &mut trail);
        Entry {
            total_magnitude: magnitude::total(&comet.brightness, &sky),
            up: self.up(&nodes),
            next_crossing: self.next_crossing(orbit, &mut trail),
            sky,
        }
    }

    fn up(&self, nodes: &[Vector3<f64>; NODES]) -> Option<Up> {
        let mut ends: Option<[Instant; 2]> = None;
        let (mut count, mut best, mut best_at) = (0_usize, -1.0, self.evening.from);
        for look in &self.looks {
            let Some(zenith) = look.dark_zenith else { continue };
            let mut direction = Vector3::zeros();
            for (node, weight) in nodes.iter().zip(&look.weights) {
                direction += node * *weight;
            }
            let sine = zenith.dot(&direction) / direction.norm();
            if sine <= self.sine_above {
                continue;
            }
            count += 1;
            ends = Some([ends.map_or(look.time, |[begin, _]| begin), look.time]);
            if sine > best {
                (best, best_at) = (sine, look.time);
            }
        }
        let [begin, end] = ends?;
        let step = (self.evening.to.tdb_days() - self.evening.from.tdb_days()) / (LOOKS - 1) as f64;
        let highest_rad = libm::asin(best.clamp(-1.0, 1.0));
        Some(Up { begin, end, days: count as f64 * step, highest_rad, highest_at: best_at })
    }

    fn next_crossing(&mut self, orbit: &Orbit, trail: &mut Trail) -> Option<Crossing> {
        let normal = orbit.normal();
        let height = |state: &State| state.position_au.dot(&normal);
        let pair = self.earth.windows(2).find(|pair| (height(&pair[0].1) < 0.0) != (height(&pair[1].1) < 0.0))?;
        let (mut low, mut high) = (pair[0].0, pair[1].0);
        let begins_below = height(&pair[0].1) < 0.0;
        // To half a minute: shown to a tenth of a day.
        while high.tdb_days() - low.tdb_days() > 0.5 / 1440.0 {
            let middle = Instant::from_tdb_days(0.5 * (low.tdb_days() + high.tdb_days()));
            let state = self.track.state(middle).ok()?;
            if (height(&state) < 0.0) == begins_below { low = middle } else { high = middle }
        }
        let viewpoint = Viewpoint { time: low, observer: self.track.state(low).ok()?, ground: None };
        let sky = Sky::of(orbit, &viewpoint, trail);
        let opposite = sky
            .antisolar_position_angle_rad
            .zip(sky.negative_velocity_position_angle_rad)
            .map(|(away, back)| libm::cos(away - back) < 0.0);
        Some(Crossing { time: low, opposite })
    }
}

/// How dust lies sunward of the comet of an entry, by the laws of the plan; takes half a millisecond.
pub fn sunward(orbit: &Orbit, entry: &Entry, tails: &Tails) -> Sunward {
    let found = Recipe::of(tails).glance(&Vista::of(orbit, &entry.sky), &entry.sky);
    Sunward { verdict: found.verdict, share: found.ejected.map_or(0.0, |part| part.share) }
}

/// Lagrange's weights of values at 0, 1, 2, 3, 4, at `x`.
fn weights(x: f64) -> [f64; NODES] {
    std::array::from_fn(|i| (0..NODES).filter(|&j| j != i).map(|j| (x - j as f64) / (i as f64 - j as f64)).product())
}
