//! Along which lines does dust of one beta, or of one age, lie?
//!
//! A syndyne holds beta and runs over the ages, a synchrone holds the age (one moment of release) and runs over the
//! betas; both for dust that leaves without a speed of its own, hence in the orbit plane (Bredichin 1884; Finson &
//! Probstein 1968, ApJ 154, 327). Every point is an exact grain. Points are set so that the line through them keeps
//! within a tolerance of the curve; a curve is broken where dust lies 90 degrees or more away, beyond the field, or
//! in the Sun.

use crate::body::State;
use crate::frame::norm;
use crate::tail::grain::Vista;
use crate::tail::law::Tails;
use crate::time::Instant;

/// A grain of a curve and where it is seen.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Point {
    /// xi east, eta north from the nucleus; tangent values.
    pub offset: [f64; 2],
    pub beta: f64,
    pub age_days: f64,
}

/// What is one along a curve.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Held {
    /// A syndyne.
    Beta(f64),
    /// A synchrone, and when its dust left.
    Age { days: f64, released: Instant },
}

/// A curve in unbroken pieces of two points or more, each in the order of rising age (syndyne) or beta (synchrone).
#[derive(Clone, Debug, PartialEq)]
pub struct Curve {
    pub held: Held,
    pub pieces: Vec<Vec<Point>>,
}

/// How fine and how far a curve is drawn.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Fineness {
    /// The line keeps within this of the curve; tangent units (radians near the nucleus).
    pub tolerance_rad: f64,
    /// Nothing is drawn that lies farther from the nucleus; tangent of the angle. A piece may end a little beyond.
    pub field_tan: f64,
}

/// Even steps a curve starts from; each is halved until it is straight enough, but no more often than this.
const FIRST_STEPS: u32 = 16;
const MOST_HALVINGS: u32 = 26;

/// The curve of dust of one beta, from the youngest to the oldest age.
pub fn syndyne(vista: &Vista, beta: f64, ages_days: [f64; 2], fineness: &Fineness) -> Curve {
    let [youngest, oldest] = ages_days.map(f64::sqrt);
    let pieces = trace(fineness, |part| {
        // Near the nucleus the way grows as the square of the age.
        let root = youngest + (oldest - youngest) * part;
        let age_days = if part == 1.0 { ages_days[1] } else { root * root };
        point(vista, &vista.release(age_days), beta, age_days)
    });
    Curve { held: Held::Beta(beta), pieces }
}

/// The curve of dust of one age, from the least to the greatest beta.
pub fn synchrone(vista: &Vista, age_days: f64, betas: [f64; 2], fineness: &Fineness) -> Curve {
    let start = vista.release(age_days);
    let [least, greatest] = betas.map(f64::sqrt);
    let pieces = trace(fineness, |part| {
        let root = least + (greatest - least) * part;
        let beta = if part == 1.0 { betas[1] } else { root * root };
        point(vista, &start, beta, age_days)
    });
    Curve { held: Held::Age { days: age_days, released: vista.released_at(age_days) }, pieces }
}

/// The curves that a plan shows when nothing else is chosen: syndynes at [`round_betas`], synchrones at [`round_ages`].
pub fn chosen(vista: &Vista, laws: &Tails, fineness: &Fineness) -> Vec<Curve> {
    let betas = [laws.beta_least, laws.beta_greatest];
    let ages = [laws.age_least_days, laws.age_greatest_days];
    let syndynes = round_betas(betas).into_iter().map(|beta| syndyne(vista, beta, ages, fineness));
    let synchrones = round_ages(ages).into_iter().map(|age| synchrone(vista, age, betas, fineness));
    syndynes.chain(synchrones).collect()
}

fn point(vista: &Vista, start: &State, beta: f64, age_days: f64) -> Option<Point> {
    let offset = vista.offset(&vista.survivor(beta, start, age_days)?)?;
    Some(Point { offset, beta, age_days })
}

/// Betas of round value within a range, some five to ten of them: 1 and 3 of each decade, or more where the range is
/// short; the two ends where it holds no round value.
pub fn round_betas([least, greatest]: [f64; 2]) -> Vec<f64> {
    const LADDERS: [&[f64]; 4] =
        [&[1.0], &[1.0, 3.0], &[1.0, 2.0, 3.0, 5.0], &[1.0, 1.5, 2.0, 2.5, 3.0, 4.0, 5.0, 6.0, 7.0, 8.0, 9.0]];
    let within = |ladder: &[f64]| -> Vec<f64> {
        (-8..2)
            .flat_map(|decade| ladder.iter().map(move |step| round(*step, decade)))
            .filter(|beta| (least * (1.0 - 1e-9)..=greatest * (1.0 + 1e-9)).contains(beta))
            .collect()
    };
    let found = LADDERS.iter().map(|ladder| within(ladder)).find(|betas| betas.len() >= 5);
    found.unwrap_or_else(|| {
        let betas = within(LADDERS[3]);
        if betas.is_empty() { vec![least, greatest] } else { betas }
    })
}

/// Ages of round value within a range, some five to ten of them, evenly spaced; never zero, where nothing has left yet.
pub fn round_ages([youngest, oldest]: [f64; 2]) -> Vec<f64> {
    let span = oldest - youngest;
    let steps = (-4..5).flat_map(|decade| [1.0, 2.0, 5.0].map(|step| round(step, decade)));
    let Some(step) = steps.into_iter().find(|step| span / step <= 10.0 + 1e-9) else { return vec![oldest] };
    let first = (youngest / step * (1.0 - 1e-12)).ceil().max(1.0) as u64;
    let last = (oldest / step * (1.0 + 1e-12)).floor() as u64;
    if last < first { vec![oldest] } else { (first..=last).map(|count| tidy(count as f64 * step)).collect() }
}

/// `step` times ten to the `decade`, as the nearest double to that decimal.
fn round(step: f64, decade: i32) -> f64 {
    let power = libm::pow(10.0, f64::from(decade.abs()));
    if decade < 0 { step / power } else { step * power }
}

/// A product of short decimals without the last-place noise.
fn tidy(value: f64) -> f64 {
    (value * 1e6).round() / 1e6
}

/// The pieces of the curve that `at` gives over 0 to 1.
fn trace(fineness: &Fineness, at: impl Fn(f64) -> Option<Point>) -> Vec<Vec<Point>> {
    let mut tracer = Tracer { fineness, at, pieces: Vec::new() };
    let mut from = (0.0, (tracer.at)(0.0));
    for step in 1..=FIRST_STEPS {
        let part = f64::from(step) / f64::from(FIRST_STEPS);
        let to = (part, (tracer.at)(part));
        tracer.stretch(from, to, MOST_HALVINGS);
        from = to;
    }
    tracer.pieces
}

type Sample = (f64, Option<Point>);

struct Tracer<'a, F> {
    fineness: &'a Fineness,
    at: F,
    pieces: Vec<Vec<Point>>,
}

impl<F: Fn(f64) -> Option<Point>> Tracer<'_, F> {
    /// Adds what lies between two samples.
    fn stretch(&mut self, from: Sample, to: Sample, halvings: u32) {
        let field = self.fineness.field_tan;
        let (a, b) = match (from.1, to.1) {
            (None, None) => return,
            (Some(seen), None) | (None, Some(seen)) => {
                // The edge of what can be seen: nearer to it, unless that is out of the field already.
                if radius(&seen) <= field && halvings > 0 {
                    self.halves(from, to, halvings);
                }
                return;
            }
            (Some(a), Some(b)) => (a, b),
        };
        let outside = [a, b].map(|point| radius(&point) > field);
        if outside == [true, true] {
            if from_chord([0.0, 0.0], &a, &b) < field && halvings > 0 {
                self.halves(from, to, halvings);
            }
            return;
        }
        let far = outside != [false, false] && radius(&a).max(radius(&b)) > 2.0 * field;
        if halvings == 0 {
            self.join(a, b);
            return;
        }
        let middle = 0.5 * (from.0 + to.0);
        let between = (middle, (self.at)(middle));
        // With the middle as a point of its own each half strays a quarter as far, an even bend given; a point off the
        // middle tells of a curve that swings from one side of its chord to the other.
        let near =
            |place: Point, from: &Point, to: &Point| from_chord(place.offset, from, to) <= self.fineness.tolerance_rad;
        let off_middle = from.0 + 0.23 * (to.0 - from.0);
        let straight = |middle: &Point| {
            near(*middle, &a, &b) && (self.at)(off_middle).is_some_and(|point| near(point, &a, middle))
        };
        match between.1 {
            Some(middle) if !far && straight(&middle) => {
                self.join(a, middle);
                self.join(middle, b);
            }
            _ => {
                self.stretch(from, between, halvings - 1);
                self.stretch(between, to, halvings - 1);
            }
        }
    }

    fn halves(&mut self, from: Sample, to: Sample, halvings: u32) {
        let middle = 0.5 * (from.0 + to.0);
        let between = (middle, (self.at)(middle));
        self.stretch(from, between, halvings - 1);
        self.stretch(between, to, halvings - 1);
    }

    fn join(&mut self, a: Point, b: Point) {
        match self.pieces.last_mut() {
            Some(piece) if piece.last() == Some(&a) => piece.push(b),
            _ => self.pieces.push(vec![a, b]),
        }
    }
}

fn radius(point: &Point) -> f64 {
    norm(point.offset)
}

/// Distance of a place from the straight line between two points.
fn from_chord(place: [f64; 2], a: &Point, b: &Point) -> f64 {
    let [dx, dy] = [b.offset[0] - a.offset[0], b.offset[1] - a.offset[1]];
    let [px, py] = [place[0] - a.offset[0], place[1] - a.offset[1]];
    let length2 = dx * dx + dy * dy;
    let part = if length2 > 0.0 { ((px * dx + py * dy) / length2).clamp(0.0, 1.0) } else { 0.0 };
    norm([px - part * dx, py - part * dy])
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_values_chosen_are_round_and_neither_few_nor_many() {
        assert_eq!(round_betas([0.001, 1.0]), [0.001, 0.003, 0.01, 0.03, 0.1, 0.3, 1.0]);
        assert_eq!(round_betas([0.2, 0.9]), [0.2, 0.25, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9]);
        assert_eq!(round_betas([0.0111, 0.0112]), [0.0111, 0.0112]);
        assert_eq!(round_ages([0.0, 100.0]), [10.0, 20.0, 30.0, 40.0, 50.0, 60.0, 70.0, 80.0, 90.0, 100.0]);
        assert_eq!(round_ages([0.0, 0.5]), [0.05, 0.1, 0.15, 0.2, 0.25, 0.3, 0.35, 0.4, 0.45, 0.5]);
        assert_eq!(round_ages([300.0, 1500.0]), [400.0, 600.0, 800.0, 1000.0, 1200.0, 1400.0]);
        assert_eq!(
            round_ages([1.3, 1.301]),
            [1.3, 1.3001, 1.3002, 1.3003, 1.3004, 1.3005, 1.3006, 1.3007, 1.3008, 1.3009, 1.301]
        );
    }
}
