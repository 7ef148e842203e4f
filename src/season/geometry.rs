//! When does the geometry of Sun, Earth, Moon and comet reach a turning point or a limit?
//!
//! Days are cut into cells of [`CELL_DAYS`] on a fixed grid, on which the Earth's own polynomials lie, so that no fit runs
//! across a joint of theirs and a moment does not depend on the stretch asked for. In each cell the [`Quantity`]s are
//! fitted and their zeros, or those of their rates, isolated ([`super::fit`]). Within 0.1 s of the same quantities' own
//! turning points; the Earth's table adds less than a second.

use super::fit::{Coefficients, Fitter, NODES, derivative, value, zeros};
use crate::body::earth::earth;
use crate::body::{SPAN, moon};
use crate::frame::equatorial_to_ecliptic;
use crate::orbit::conic::Orbit;
use crate::sky::Sky;
use crate::sky::avoidance::NEAR_SUN_DEG;
use crate::sky::trail::Trail;
use crate::sky::viewpoint::Viewpoint;
use crate::time::Instant;

/// Length of a cell: that of the pieces of the Earth's track.
pub const CELL_DAYS: f64 = 16.0;

/// Two zeros of one quantity in opposite senses so near to each other are the noise of a joint: 10 s.
const ECHO_DAYS: f64 = 10.0 / 86_400.0;

/// Smooth numbers that tell everything, by their place among the values.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Quantity {
    /// Sine of the Earth's latitude over the orbit plane, seen from the Sun: zero where the Earth is in the plane.
    Plane,
    /// Square of the comet's distance from the Earth, au^2.
    SquaredDistance,
    CosElongation,
    CosPhase,
    /// How far the comet stands ahead of the Sun's longitude: ecliptic sine of the difference, shrunk with latitude.
    Longitude,
    /// Square of the motion on the sky, (rad/d)^2.
    SquaredMotion,
    CosMoon,
}

const QUANTITIES: usize = 7;

/// Which part of each quantity a fit may leave out, in their order. What is left out moves a zero of a rate by some
/// hundred times as much over the bend: under 3 s for a bend of 1e-4 per square day (motion) or 0.05 (Moon).
const NEGLIGIBLE: [f64; QUANTITIES] = [1e-11, 1e-11, 1e-11, 1e-11, 1e-11, 1e-10, 1e-8];

/// What is looked for: where a quantity reaches a level, or where its rate passes zero.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Aim {
    Level(f64),
    Turn,
}

/// Every search. A quantity may serve two.
const SEARCHES: usize = 8;

fn searches() -> [(Quantity, Aim); SEARCHES] {
    [
        (Quantity::Plane, Aim::Level(0.0)),
        (Quantity::SquaredDistance, Aim::Turn),
        (Quantity::CosElongation, Aim::Turn),
        (Quantity::CosElongation, Aim::Level(libm::cos(NEAR_SUN_DEG.to_radians()))),
        (Quantity::CosPhase, Aim::Turn),
        (Quantity::Longitude, Aim::Level(0.0)),
        (Quantity::SquaredMotion, Aim::Turn),
        (Quantity::CosMoon, Aim::Turn),
    ]
}

/// A moment at which a search succeeded.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Moment {
    pub quantity: Quantity,
    /// A greatest or least value, or else a level.
    pub turn: bool,
    pub days: f64,
    /// The quantity, or at a turn its rate, passes zero from below: a turn is then a least value.
    pub rising: bool,
    /// Rate of the quantity, and rate of that, per day.
    pub rate: f64,
    pub bend: f64,
}

/// One cell searched.
#[derive(Clone, Debug)]
pub struct Cell {
    /// By search.
    moments: [Vec<Moment>; SEARCHES],
    /// Whether each search begins above zero.
    begins_above: [bool; SEARCHES],
    ends_above: [bool; SEARCHES],
    /// The state at the very end, for a sign that changes at the joint.
    last: [Moment; SEARCHES],
}

/// Finds cells.
pub struct Survey {
    orbit: Orbit,
    trail: Trail,
    fitter: Fitter,
}

impl Survey {
    pub fn new(orbit: Orbit) -> Self {
        Survey { orbit, trail: Trail::default(), fitter: Fitter::new() }
    }

    pub fn orbit(&self) -> &Orbit {
        &self.orbit
    }

    /// The geocentric sky; beyond the span that of its end. The Earth is the exact one, not its track: a flat maximum of
    /// the motion would follow the last digits of the velocity.
    pub fn sky(&mut self, days: f64) -> Sky {
        let time = Instant::from_tdb_days(days.clamp(SPAN.first.tdb_days(), SPAN.last.tdb_days()));
        let observer = earth(time).expect("a time clamped to the span");
        Sky::of(&self.orbit, &Viewpoint { time, observer, ground: None }, &mut self.trail)
    }

    /// The cell of a number; the grid begins at J2000.0. Cut at the ends of the span.
    pub fn cell(&mut self, number: i64) -> Cell {
        let [begin, end] = [number, number + 1]
            .map(|edge| (edge as f64 * CELL_DAYS).clamp(SPAN.first.tdb_days(), SPAN.last.tdb_days()));
        let fitter = std::mem::take(&mut self.fitter);
        // Hardly any cell is good as a whole: the motion and the Moon ask for halves.
        let middle = 0.5 * (begin + end);
        let mut sample = |days| {
            let sky = self.sky(days);
            values(&self.orbit, &sky)
        };
        let mut pieces = fitter.pieces([begin, middle], &NEGLIGIBLE, &mut sample);
        pieces.extend(fitter.pieces([middle, end], &NEGLIGIBLE, &mut sample));
        self.fitter = fitter;
        let mut moments: [Vec<Moment>; SEARCHES] = std::array::from_fn(|_| Vec::new());
        let mut begins_above = [true; SEARCHES];
        let mut last: [Option<(bool, Moment)>; SEARCHES] = [None; SEARCHES];
        for piece in &pieces {
            for (index, (quantity, aim)) in searches().into_iter().enumerate() {
                let mut whole = piece.quantities[quantity as usize];
                let turn = aim == Aim::Turn;
                if let Aim::Level(level) = aim {
                    whole[0] -= level;
                }
                let curve = Curve::of(&whole, piece.half_days);
                let sought = if turn { &curve.rate } else { &whole };
                let moment = |x: f64, rising: bool| Moment {
                    quantity,
                    turn,
                    days: piece.begin_days + piece.half_days * (x + 1.0),
                    rising,
                    rate: value(&curve.rate, x),
                    bend: value(&curve.bend, x),
                };
                let above = value(sought, -1.0) >= 0.0;
                match last[index] {
                    None => begins_above[index] = above,
                    Some((before, _)) if before != above => push(&mut moments[index], moment(-1.0, above)),
                    Some(_) => {}
                }
                for zero in zeros(sought) {
                    push(&mut moments[index], moment(zero.x, zero.rising));
                }
                let ends = value(sought, 1.0) >= 0.0;
                last[index] = Some((ends, moment(1.0, ends)));
            }
        }
        let last = last.map(|last| last.expect("a cell has a piece"));
        Cell { moments, begins_above, ends_above: last.map(|(above, _)| above), last: last.map(|(_, moment)| moment) }
    }
}

/// A quantity's polynomial with its rates per day.
struct Curve {
    rate: Coefficients,
    bend: Coefficients,
}

impl Curve {
    fn of(whole: &Coefficients, half_days: f64) -> Self {
        let per_day = |c: Coefficients| -> [f64; NODES] { c.map(|c| c / half_days) };
        let rate = per_day(derivative(whole));
        Curve { rate, bend: per_day(derivative(&rate)) }
    }
}

/// Adds a moment, unless it only undoes the one before it.
fn push(moments: &mut Vec<Moment>, moment: Moment) {
    match moments.last() {
        Some(last) if last.rising != moment.rising && moment.days - last.days < ECHO_DAYS => {
            moments.pop();
        }
        _ => moments.push(moment),
    }
}

/// The moments of neighbouring cells, in order of time. A sign that changes at a joint is a moment of the joint.
pub fn moments<'a>(cells: impl Iterator<Item = &'a Cell>) -> Vec<Moment> {
    let mut by_search: [Vec<Moment>; SEARCHES] = std::array::from_fn(|_| Vec::new());
    let mut before: Option<&Cell> = None;
    for cell in cells {
        for (index, found) in by_search.iter_mut().enumerate() {
            if let Some(before) = before
                && before.ends_above[index] != cell.begins_above[index]
            {
                push(found, Moment { rising: cell.begins_above[index], ..before.last[index] });
            }
            for moment in &cell.moments[index] {
                push(found, *moment);
            }
        }
        before = Some(cell);
    }
    let mut all: Vec<Moment> = by_search.into_iter().flatten().collect();
    crate::order::by_number(&mut all, |one| one.days);
    all
}

/// The quantities of a geocentric sky.
pub fn values(orbit: &Orbit, sky: &Sky) -> [f64; QUANTITIES] {
    let earth = sky.observer.position_au;
    let (sight, to_sun) = (sky.axes.sight, -earth.normalize());
    let (comet, sun) = (equatorial_to_ecliptic(&sight), equatorial_to_ecliptic(&to_sun));
    let moon = moon::geocentric_au(sky.time).map_or(sight, |moon| moon.normalize());
    let distance = sky.observer_distance_au;
    [
        orbit.normal().dot(&-to_sun),
        distance * distance,
        sight.dot(&to_sun),
        sight.dot(&sky.comet.position_au) / sky.sun_distance_au,
        sun.x * comet.y - sun.y * comet.x,
        sky.motion_rad_d * sky.motion_rad_d,
        sight.dot(&moon),
    ]
}
