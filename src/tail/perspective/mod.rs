//! Which dust projects to the sunward side, how bright is it, and which grains is it made of?
//!
//! The whole (beta, age) plane of the plan is laid on the sky, once without ejection speed and once with
//! the chosen ejection law, and its light is summed by side. Nothing is concluded from the orbit-plane angle,
//! from negative velocity or from the date: perspective anti-tails are seen well off the plane (C/1999 H1), and a
//! plane crossing need not show one.
//!
//! ```text
//!   sunward side: within 90 deg of the Sun's direction     \  90  |  90 /
//!   anti-tail: within `anti_tail_half_width_deg` of it        \    |   /
//!                                              antisolar <-----nucleus-----> Sun
//! ```
//!
//! Light is cross-section times activity ([`crate::tail::weight`]): no phase function, no fading of grains. Two kinds of it
//! do not count. Coma: dust within [`COMA_KM`] or [`COMA_ARCSEC`] of the nucleus on the sky, where every comet is round and
//! pictures are burnt out; and ejected dust inside the outline of its own fountain, which turns back some 7,600 km r
//! sunward at 0.3 km/s and seems to reach further at small phase angles. And light spread so thin that no picture
//! shows it: sky 7.5 mag fainter than the brightest dust outside the coma counts half. Position angles J2000.
//!
//! Accuracy: the sunward part of all light to 0.01 against exact grains (tests/perspective.rs: to 0.3 km/s of ejection,
//! ages to 1500 d, beta to 2.5). The ejected dust is of first order in the ejection velocity. Takes 0.2 to 1.4 ms.
//! Left out: grains that fall into the Sun.

mod lay;
mod map;
mod sheet;
mod sums;
mod tally;

pub use lay::Recipe;
pub use map::{Cell, Map, Side};

use crate::body::AU_KM;
use crate::frame::turn;
use crate::sky::Sky;
use crate::tail::grain::Vista;
use crate::tail::law::Tails;
use lay::fountain_rad;
use sheet::{Frame, Sheet};
use std::f64::consts::PI;
use sums::{Light, Rule, Sides, grade};
use tally::Coma;

/// Dust nearer than this to the nucleus on the sky, at its distance, is coma: km, and arcsec where that is more.
pub const COMA_KM: f64 = 50_000.0;
pub const COMA_ARCSEC: f64 = 60.0;

/// Samples along each side of a cell of the (beta, age) plane, without and with ejection.
const SUBCELLS_AT_REST: usize = 3;
const SUBCELLS_EJECTED: usize = 2;

/// How conspicuous the dust in the anti-tail sector is: by its surface brightness beside the tail's at the same distance
/// from the nucleus (brightest 5 degrees of either), and by its share of the light. The limits are our choice.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Grade {
    /// No dust, or fainter than [`GRADE_FLOORS`] ask.
    None,
    /// Deep images only.
    Faint,
    /// 3.7 mag fainter than the tail, or better.
    Possible,
    /// 2 mag fainter than the tail, or better.
    Strong,
}

/// Least brightness beside the tail, and least share of the light, for each grade above none.
pub const GRADE_FLOORS: [(Grade, f64, f64); 3] =
    [(Grade::Strong, 1.0 / 6.0, 0.02), (Grade::Possible, 1.0 / 30.0, 0.005), (Grade::Faint, 1.0 / 300.0, 0.001)];

/// What the dust of the plan says about a sunward tail.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Verdict {
    /// Comet, Sun and observer are in line: no sunward side exists on the sky.
    NoSunwardSide,
    /// No dust left within the chosen ranges.
    NoDust,
    /// No dust in the anti-tail sector worth the name.
    None,
    /// Only dust that was thrown out gets there.
    NeedsEjection(Grade),
    /// Dust gets there by perspective alone; the grade is that with the chosen ejection.
    Perspective(Grade),
}

/// How a part of the dust stands beside the rest: [`Part::share`] and [`Part::beside_tail`].
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Standing {
    pub share: f64,
    pub beside_tail: f64,
}

/// What a search needs of a date: the verdict, and how the anti-tail stands at rest and ejected, None where there is none.
/// The same bits as in [`Perspective`], for less than half the work.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Glance {
    pub verdict: Verdict,
    pub at_rest: Option<Standing>,
    pub ejected: Option<Standing>,
}

/// One part of the dust.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Part {
    /// Its light over all light outside the coma.
    pub share: f64,
    /// Its surface brightness over the tail's at the same distance: brightest 5 degrees of either in each octave of
    /// distance, mean over the octaves by its own light; each octave counts at most 10.
    pub beside_tail: f64,
    /// Mean direction by light, [0, 2 pi).
    pub position_angle_rad: f64,
    /// Distances from the nucleus within which 10 and 90 percent of its light lie.
    pub distance_rad: [f64; 2],
    /// Betas below which 10 and 90 percent of its light lie.
    pub beta: [f64; 2],
    /// Ages below which 10 and 90 percent of its light lie.
    pub age_days: [f64; 2],
}

/// The dust of the plan, for one ejection law.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Dust {
    /// First and last position angle of the dust on the tail side, in the sense of growing position angle; None where
    /// there is none, or no antisolar direction.
    pub fan_rad: Option<[f64; 2]>,
    /// Everything within 90 degrees of the Sun's direction; None where nothing lies there.
    pub sunward: Option<Part>,
    /// Everything in the anti-tail sector.
    pub anti_tail: Option<Part>,
    pub grade: Grade,
}

/// What projects where, for dust at rest and for the chosen ejection.
#[derive(Clone, Debug, PartialEq)]
pub struct Perspective {
    /// Position angle of the Sun's direction; None where comet, Sun and observer are in line.
    pub sunward_position_angle_rad: Option<f64>,
    pub anti_tail_half_width_rad: f64,
    /// Radius within which dust is coma and does not count.
    pub coma_rad: f64,
    /// How far toward the Sun the fountain of ejected dust seems to reach; ejected dust inside it does not count.
    pub fountain_rad: f64,
    /// Released with the nucleus velocity alone.
    pub at_rest: Dust,
    /// Released by the plan's ejection law.
    pub ejected: Dust,
    pub verdict: Verdict,
    pub map: Map,
}

/// Lays the dust of `tails` on the sky and sums it by side.
pub fn assess(vista: &Vista, sky: &Sky, tails: &Tails) -> Perspective {
    Recipe::of(tails).assess(vista, sky)
}

impl Recipe {
    /// Lays the dust on the sky and sums it by side.
    pub fn assess(&self, vista: &Vista, sky: &Sky) -> Perspective {
        let antisolar = sky.antisolar_position_angle_rad;
        let laid = Laid::of(self, vista, sky);
        let Laid { sheet, light, rule, coma_rad, fountain_rad } = &laid;
        let [at_rest, ejected] = laid.sides(self, true).map(|sides| sides.sums(sheet.columns()));
        let map = map::map(sheet, light, rule, &Coma::of(*coma_rad, 0.0), [&at_rest, &ejected]);
        let [at_rest, ejected] = [at_rest, ejected].map(|sums| sums.dust(sheet, antisolar));
        Perspective {
            sunward_position_angle_rad: antisolar.map(|angle| turn(angle + PI)),
            anti_tail_half_width_rad: self.weights.laws().anti_tail_half_width_deg.to_radians(),
            coma_rad: *coma_rad,
            fountain_rad: *fountain_rad,
            at_rest,
            ejected,
            verdict: verdict(antisolar.is_some(), light.whole, [at_rest.grade, ejected.grade]),
            map,
        }
    }

    /// The verdict alone, and what decides it.
    pub fn glance(&self, vista: &Vista, sky: &Sky) -> Glance {
        let laid = Laid::of(self, vista, sky);
        let has_side = laid.rule.has_side;
        let [at_rest, ejected] = laid.sides(self, false).map(|sides| sides.standing().filter(|_| has_side));
        Glance { verdict: verdict(has_side, laid.light.whole, [grade(at_rest), grade(ejected)]), at_rest, ejected }
    }
}

/// A recipe on the sky of a date.
struct Laid<'a> {
    sheet: Sheet<'a>,
    light: Light,
    rule: Rule,
    coma_rad: f64,
    fountain_rad: f64,
}

impl<'a> Laid<'a> {
    fn of(recipe: &'a Recipe, vista: &Vista, sky: &Sky) -> Self {
        let tails = recipe.weights.laws();
        let sheet = Sheet::of(vista, &frame(sky), &recipe.betas, tails);
        Laid {
            light: Light::of(vista, &sheet, recipe),
            sheet,
            rule: Rule::of(sky.antisolar_position_angle_rad.is_some(), tails),
            coma_rad: (COMA_KM / AU_KM / sky.observer_distance_au).max(COMA_ARCSEC / 3600.0 * PI / 180.0),
            fountain_rad: fountain_rad(recipe, sky),
        }
    }

    /// The light by side, at rest and ejected.
    fn sides(&self, recipe: &Recipe, keeps: bool) -> [Sides; 2] {
        [None, Some(recipe)].map(|thrown| {
            let apex_rad = if thrown.is_some() { self.fountain_rad } else { 0.0 };
            let coma = Coma::of(self.coma_rad, apex_rad);
            Sides::of(&self.sheet, &self.light, &self.rule, &coma, thrown, keeps)
        })
    }
}

fn verdict(has_side: bool, whole: f64, [at_rest, ejected]: [Grade; 2]) -> Verdict {
    match (has_side, whole > 0.0) {
        (_, false) => Verdict::NoDust,
        (false, true) => Verdict::NoSunwardSide,
        _ => match (at_rest, ejected) {
            (_, Grade::None) => Verdict::None,
            (Grade::None, grade) => Verdict::NeedsEjection(grade),
            (_, grade) => Verdict::Perspective(grade),
        },
    }
}

/// Axes at the nucleus: antisolar on the sky, and a quarter turn on.
fn frame(sky: &Sky) -> Frame {
    let axes = &sky.axes;
    let (sin, cos) = libm::sincos(sky.antisolar_position_angle_rad.unwrap_or(0.0));
    Frame { sight: axes.sight, away: axes.east * sin + axes.north * cos, aside: axes.east * cos - axes.north * sin }
}
