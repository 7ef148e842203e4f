//! On which dates is the dust laid on the sky, so that no window of sunward dust is passed over?
//!
//! Each look lays all of the dust on the sky ([`Recipe::glance`]), so they are few: the ends of each cell of [`CELL_DAYS`] and the
//! moments at which the Earth crosses the orbit plane; then halves of every gap whose ends differ, or stand so near a limit
//! that something could lie between, down to [`GAP_DAYS`]; finer where the aspect turns fast; and where the verdict
//! changes, down to [`EDGE_DAYS`]. A window, or a gap in one, shorter than [`GAP_DAYS`] may be missed away from a
//! crossing: on 30 random comets over two years no longer one was, of 206 found by looking daily.

use super::geometry::{CELL_DAYS, Survey};
use super::sunward::{Origin, Strength};
use crate::frame::separation_rad;
use crate::order::Shelf;
use crate::tail::grain::Vista;
use crate::tail::law::Tails;
use crate::tail::perspective::{GRADE_FLOORS, Grade, Recipe, Standing, Verdict};
use crate::time::Instant;
use nalgebra::Vector3;

/// Gaps in which something might happen are halved until they are no longer than this.
pub const GAP_DAYS: f64 = 4.0;
/// Gaps across which the verdict changes likewise: six hours.
pub const EDGE_DAYS: f64 = 0.25;
/// Gaps across which the aspect turns by more than this are halved down to an edge: 20 degrees.
const TURN_RAD: f64 = 0.35;
/// Levels between which a gap without a change is looked into: from this part of the limit below it, to this
/// factor above it.
const NEAR_LIMIT: [f64; 2] = [0.1, 2.0];

/// Looks are kept by their date in steps of 2^-20 days: 0.08 s.
const STEPS_PER_DAY: f64 = 1_048_576.0;

/// The dust at one date.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Look {
    pub strength: Strength,
    /// How far the dust stands above the limit of the lowest grade, as a factor: with ejection, and at rest.
    level: f64,
    level_at_rest: f64,
    /// From Earth and from Sun to the comet.
    sight: Vector3<f64>,
    out: Vector3<f64>,
}

impl Look {
    pub fn days(&self) -> f64 {
        self.strength.time.tdb_days()
    }

    fn at(survey: &mut Survey, recipe: &Recipe, days: f64) -> Self {
        let sky = survey.sky(days);
        let found = recipe.glance(&Vista::of(survey.orbit(), &sky), &sky);
        let (origin, grade) = match found.verdict {
            Verdict::Perspective(grade) => (Some(Origin::Perspective), grade),
            Verdict::NeedsEjection(grade) => (Some(Origin::Ejection), grade),
            Verdict::None | Verdict::NoDust | Verdict::NoSunwardSide => (None, Grade::None),
        };
        Look {
            strength: Strength {
                time: Instant::from_tdb_days(days),
                origin,
                grade,
                share: share(found.ejected),
                share_at_rest: share(found.at_rest),
            },
            level: level(found.ejected),
            level_at_rest: level(found.at_rest),
            sight: sky.axes.sight,
            out: sky.comet.position_au,
        }
    }

    /// Whether something could lie between this look and a later one.
    fn hides(&self, later: &Look) -> bool {
        let gap = later.days() - self.days();
        let turned = separation_rad(&self.sight, &later.sight) + separation_rad(&self.out, &later.out);
        let finest = if self.strength.origin != later.strength.origin || turned > TURN_RAD {
            EDGE_DAYS
        } else if self.is_near_limit() || later.is_near_limit() {
            GAP_DAYS
        } else {
            return false;
        };
        gap > finest
    }

    fn is_near_limit(&self) -> bool {
        let [below, above] = NEAR_LIMIT;
        match self.strength.origin {
            None => self.level > below,
            Some(Origin::Ejection) => self.level < above || self.level_at_rest > below,
            Some(Origin::Perspective) => self.level < above || self.level_at_rest < above,
        }
    }

    /// Factor by which the level that decides between two looks of different origin changes from one to the other.
    pub fn contrast(&self, other: &Look) -> f64 {
        let ratio = |a: f64, b: f64| a.max(b) / a.min(b).max(1e-3);
        let both = self.strength.origin.is_some() && other.strength.origin.is_some();
        if both { ratio(self.level_at_rest, other.level_at_rest) } else { ratio(self.level, other.level) }
    }
}

fn share(anti_tail: Option<Standing>) -> f64 {
    anti_tail.map_or(0.0, |part| part.share)
}

fn level(anti_tail: Option<Standing>) -> f64 {
    let (_, beside_tail, share) = GRADE_FLOORS[GRADE_FLOORS.len() - 1];
    anti_tail.map_or(0.0, |part| (part.beside_tail / beside_tail).min(part.share / share))
}

/// Every look made for one comet and its tails.
#[derive(Default)]
pub struct Looks {
    /// The laws made ready, at the first look.
    recipe: Option<Recipe>,
    by_step: Shelf<Look>,
    /// Cells that are done, by number.
    done: Shelf<()>,
}

impl Looks {
    /// Looks into a cell, crossings of the orbit plane at these days.
    pub fn cell(&mut self, survey: &mut Survey, tails: &Tails, number: i64, crossings: &[f64]) {
        let step = |days: f64| (days * STEPS_PER_DAY).round() as i64;
        let (begin, end) = (number as f64 * CELL_DAYS, (number + 1) as f64 * CELL_DAYS);
        let recipe = self.recipe.get_or_insert_with(|| Recipe::of(tails));
        let mut look = |step: i64| *self.by_step.at_or(step, || Look::at(survey, recipe, step as f64 / STEPS_PER_DAY));
        let mut dates: Vec<i64> =
            crossings.iter().filter(|days| begin < **days && **days < end).map(|d| step(*d)).collect();
        dates.extend([step(begin), step(end)]);
        dates.sort_unstable();
        dates.dedup();
        let mut gaps: Vec<[i64; 2]> = dates.windows(2).map(|pair| [pair[0], pair[1]]).collect();
        while let Some([first, last]) = gaps.pop() {
            if look(first).hides(&look(last)) {
                let middle = first + (last - first) / 2;
                gaps.extend([[first, middle], [middle, last]]);
            }
        }
        self.done.at_or(number, || ());
    }

    pub fn is_done(&self, number: i64) -> bool {
        self.done.at(number).is_some()
    }

    /// The looks of some neighbouring cells, in order of time.
    pub fn between(&self, first: i64, last: i64) -> impl Iterator<Item = &Look> {
        let step = |number: i64| (number as f64 * CELL_DAYS * STEPS_PER_DAY) as i64;
        self.by_step.between(step(first)..=step(last + 1)).map(|(_, look)| look)
    }
}
