//! Which dust projects to the sunward side, how bright is it, and which grains is it made of?
//!
//! The whole (beta, age) plane of the plan is laid on the sky ([`sheet`]), once without ejection speed and once with
//! the chosen ejection law, and its light is summed by side ([`tally`]). Nothing is concluded from the orbit-plane angle,
//! from negative velocity or from the date: perspective anti-tails are seen well off the plane (C/1999 H1), and a
//! plane crossing need not show one.
//!
//! ```text
//!   sunward side: within 90 deg of the Sun's direction     \  90  |  90 /
//!   anti-tail: within `anti_tail_half_width_deg` of it        \    |   /
//!                                              antisolar <-----nucleus-----> Sun
//! ```
//!
//! Light is cross-section times activity ([`crate::tail::law`]): no phase function, no fading of grains. Dust within
//! [`COMA_KM`] or [`COMA_ARCSEC`] of the nucleus on the sky does not count: every comet has a round coma there, half of
//! it sunward, and the fountain of ejected dust turns back in it (7,600 km r at 0.3 km/s). Position angles J2000.
//!
//! Accuracy: shares to about 1 percent of the whole (tests/perspective.rs, against finer grids); the ejected dust is
//! of first order in the ejection velocity, good below some 0.2 km/s per grain.

pub mod sheet;
pub mod tally;

use crate::body::{AU_KM, KM_S_PER_AU_D};
use crate::frame::turn;
use crate::orbit::conic::SUN_GM_AU3_D2;
use crate::sky::Sky;
use crate::tail::grain::Vista;
use crate::tail::law::Tails;
use crate::tail::weight::Weights;
use sheet::{Frame, Sheet};
use std::f64::consts::PI;
use tally::{Coma, Fallen, Glow, Tally};

/// Dust nearer than this to the nucleus on the sky, at its distance, is coma: km, and arcsec where that is more.
pub const COMA_KM: f64 = 50_000.0;
pub const COMA_ARCSEC: f64 = 60.0;

/// Samples along each side of a cell of the (beta, age) plane, without and with ejection.
const SUBCELLS_AT_REST: usize = 3;
const SUBCELLS_EJECTED: usize = 2;
/// Ejection velocities for each sample, and sets of them that take turns.
const THROWS: usize = 8;
const THROW_SETS: usize = 64;

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

/// One part of the dust.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Part {
    /// Its light over all light outside the coma.
    pub share: f64,
    /// Its surface brightness over the tail's at the same distance; see [`Tally::beside`].
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

/// On which side of the nucleus a grain lies.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Side {
    /// Too near the nucleus to count.
    Coma,
    Tail,
    /// Within 90 degrees of the Sun's direction, outside the anti-tail sector.
    Sunward,
    AntiTail,
}

/// One cell of the (beta, age) plane.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Cell {
    /// Side of its middle without ejection; None where there is no sunward side.
    pub side: Option<Side>,
    /// Its light over the light of the brightest cell per step of log beta and day, [0, 1].
    pub brightness: f64,
    /// Part of its light on the sunward side outside the coma, without and with ejection.
    pub sunward_at_rest: f64,
    pub sunward_ejected: f64,
    /// Part of its light, with ejection, that lies outside the coma on sky bright enough to count.
    pub seen: f64,
}

/// The (beta, age) plane in cells, row by row, youngest and smallest beta first.
#[derive(Clone, Debug, PartialEq)]
pub struct Map {
    pub beta_edges: Vec<f64>,
    pub age_edges_days: Vec<f64>,
    pub cells: Vec<Cell>,
}

impl Map {
    pub fn columns(&self) -> usize {
        self.beta_edges.len() - 1
    }

    pub fn rows(&self) -> usize {
        self.age_edges_days.len() - 1
    }

    /// The cell that holds a grain; None outside the plane.
    pub fn cell(&self, beta: f64, age_days: f64) -> Option<&Cell> {
        let find = |edges: &[f64], value: f64| {
            let last = edges.len() - 1;
            let inside = edges[0] <= value && value <= edges[last];
            inside.then(|| edges.partition_point(|edge| *edge <= value).clamp(1, last) - 1)
        };
        let (column, row) = (find(&self.beta_edges, beta)?, find(&self.age_edges_days, age_days)?);
        self.cells.get(row * self.columns() + column)
    }
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
    let antisolar = sky.antisolar_position_angle_rad;
    let frame = frame(sky);
    let sheet = Sheet::of(vista, &frame, tails);
    let weights = Weights::of(tails);
    let coma_rad = (COMA_KM / AU_KM / sky.observer_distance_au).max(COMA_ARCSEC / 3600.0 * PI / 180.0);
    let rule = Rule::of(antisolar.is_some(), tails);
    let light = Light::of(vista, &sheet, &weights);

    let at_rest = Sums::of(&sheet, &light, &rule, Coma::of(coma_rad, 0.0), SUBCELLS_AT_REST, AtRest);
    let apex_rad = fountain_rad(&sheet, sky, &weights);
    let ejected =
        Sums::of(&sheet, &light, &rule, Coma::of(coma_rad, apex_rad), SUBCELLS_EJECTED, Thrown::of(&sheet, &weights));
    let map = map(&sheet, &light, &rule, &Coma::of(coma_rad, 0.0), [&at_rest, &ejected]);
    let at_rest = at_rest.dust(&sheet, antisolar);
    let ejected = ejected.dust(&sheet, antisolar);
    Perspective {
        sunward_position_angle_rad: antisolar.map(|angle| turn(angle + PI)),
        anti_tail_half_width_rad: tails.anti_tail_half_width_deg.to_radians(),
        coma_rad,
        fountain_rad: apex_rad,
        at_rest,
        ejected,
        verdict: verdict(antisolar.is_some(), light.whole, &at_rest, &ejected),
        map,
    }
}

fn verdict(has_side: bool, whole: f64, at_rest: &Dust, ejected: &Dust) -> Verdict {
    match (has_side, whole > 0.0) {
        (_, false) => Verdict::NoDust,
        (false, true) => Verdict::NoSunwardSide,
        _ => match (at_rest.grade, ejected.grade) {
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

/// What counts as coma and as anti-tail.
struct Rule {
    /// Whether a sunward side exists.
    has_side: bool,
    /// Cosine of the half width of the anti-tail sector.
    sector_cos: f64,
}

impl Rule {
    fn of(has_side: bool, tails: &Tails) -> Self {
        let sector_cos = libm::cos(tails.anti_tail_half_width_deg.to_radians());
        Rule { has_side, sector_cos }
    }
}

/// The light of each cell, before it is shared out among its samples.
struct Light {
    /// Row by row.
    cells: Vec<f64>,
    whole: f64,
    /// Light per step of log beta and per day, over the greatest such.
    densities: Vec<f64>,
}

impl Light {
    fn of(vista: &Vista, sheet: &Sheet, weights: &Weights) -> Self {
        let now = vista.orbit.days_from_perihelion(vista.seen);
        let (mut cells, mut densities) = (Vec::new(), Vec::new());
        for (ages, distances) in sheet.ages_days.windows(2).zip(sheet.release_au.windows(2)) {
            // Simpson's rule; rows end where the activity breaks off.
            let rate = |part: f64| {
                let age = ages[0] + (ages[1] - ages[0]) * part;
                weights.release_rate(distances[0] + (distances[1] - distances[0]) * part, now - age)
            };
            // Just inside, since a row may end where the activity does.
            let mean = (rate(1e-9) + 4.0 * rate(0.5) + rate(1.0 - 1e-9)) / 6.0;
            for betas in sheet.betas.windows(2) {
                let light = mean * weights.light_between(betas[0], betas[1]);
                densities.push(light / libm::log(betas[1] / betas[0]));
                cells.push(light * (ages[1] - ages[0]));
            }
        }
        let greatest = densities.iter().fold(0.0_f64, |most, density| most.max(*density));
        if greatest > 0.0 {
            densities.iter_mut().for_each(|density| *density /= greatest);
        }
        let whole = cells.iter().sum();
        Light { cells, whole, densities }
    }
}

/// Sums by side.
struct Sums {
    tail: Tally,
    sunward: Tally,
    anti_tail: Tally,
    /// Light on the sunward side, and light that counts, of each cell.
    sunward_cells: Vec<f64>,
    seen_cells: Vec<f64>,
}

impl Sums {
    /// Sums what `lay` puts on the sky: it is given every sample and a way to add a place with its light.
    fn of(sheet: &Sheet, light: &Light, rule: &Rule, coma: Coma, subcells: usize, lay: impl Lay) -> Self {
        let mut grains = Vec::with_capacity(light.cells.len() * subcells * subcells * lay.throws());
        for_each_sample(sheet, light, subcells, |sample| {
            lay.places(sample, |place, weight| {
                grains.extend(Fallen::of(place, &coma, sample.column, sample.row, weight));
            });
        });
        let (columns, rows) = (sheet.betas.len() - 1, sheet.ages_days.len() - 1);
        let tally = || Tally::new(columns, rows);
        let mut sums = Sums {
            tail: tally(),
            sunward: tally(),
            anti_tail: tally(),
            sunward_cells: vec![0.0; columns * rows],
            seen_cells: vec![0.0; columns * rows],
        };
        let glow = Glow::of(&grains);
        for grain in &grains {
            sums.add(grain, grain.weight * glow.seen(grain), columns, rule);
        }
        sums
    }

    fn add(&mut self, grain: &Fallen, light: f64, columns: usize, rule: &Rule) {
        let cell = grain.row * columns + grain.column;
        self.seen_cells[cell] += light;
        if grain.cos_offset >= 0.0 || !rule.has_side {
            self.tail.add(grain, light);
            return;
        }
        self.sunward_cells[cell] += grain.weight;
        self.sunward.add(grain, light);
        if -grain.cos_offset >= rule.sector_cos {
            self.anti_tail.add(grain, light);
        }
    }

    fn dust(&self, sheet: &Sheet, antisolar: Option<f64>) -> Dust {
        let outside = self.tail.light + self.sunward.light;
        let part = |tally: &Tally| self.part(tally, outside, sheet, antisolar?);
        let anti_tail = part(&self.anti_tail);
        let grade = anti_tail.as_ref().map_or(Grade::None, grade);
        Dust {
            fan_rad: antisolar.and_then(|angle| Some(self.tail.fan_rad()?.map(|offset| turn(angle + offset)))),
            sunward: part(&self.sunward),
            anti_tail,
            grade,
        }
    }

    fn part(&self, tally: &Tally, outside: f64, sheet: &Sheet, antisolar_rad: f64) -> Option<Part> {
        if tally.light <= 0.0 {
            return None;
        }
        let ends = [0.1, 0.9];
        let beta = |part: f64| {
            let (column, inside) = tally.column(part);
            sheet.betas[column] * libm::pow(sheet.betas[column + 1] / sheet.betas[column], inside)
        };
        let age = |part: f64| {
            let (row, inside) = tally.row(part);
            sheet.ages_days[row] + (sheet.ages_days[row + 1] - sheet.ages_days[row]) * inside
        };
        Some(Part {
            share: tally.light / outside,
            beside_tail: tally.beside(&self.tail),
            // Light evenly to both sides of the Sun's direction has its mean there.
            position_angle_rad: turn(antisolar_rad + tally.mean_offset_rad().unwrap_or(PI)),
            distance_rad: ends.map(|part| tally.distance_rad(part)),
            beta: ends.map(beta),
            age_days: ends.map(age),
        })
    }
}

/// The grade of a part of the dust.
fn grade(part: &Part) -> Grade {
    GRADE_FLOORS
        .iter()
        .find(|(_, beside_tail, share)| part.beside_tail >= *beside_tail && part.share >= *share)
        .map_or(Grade::None, |(grade, ..)| *grade)
}

/// A way to lay a sample on the sky, as one grain or several.
trait Lay {
    /// Grains for each sample.
    fn throws(&self) -> usize;
    fn places(&self, sample: &Sample, place: impl FnMut(&[f64; 3], f64));
}

/// Grains that leave with the nucleus velocity alone.
struct AtRest;

impl Lay for AtRest {
    fn throws(&self) -> usize {
        1
    }

    fn places(&self, sample: &Sample, mut place: impl FnMut(&[f64; 3], f64)) {
        place(&sample.node.place_au, sample.weight);
    }
}

/// Grains that leave by an ejection law.
struct Thrown {
    sets: Vec<[[f64; 3]; THROWS]>,
    /// Mean speed at 1 au by column, km/s, and the factor by row that the distance makes of it.
    by_beta: Vec<f64>,
    by_distance: Vec<f64>,
}

impl Thrown {
    fn of(sheet: &Sheet, weights: &Weights) -> Self {
        Thrown {
            sets: throws(weights),
            by_beta: sheet.betas.iter().map(|beta| weights.mean_speed_km_s(*beta, 1.0)).collect(),
            by_distance: sheet
                .release_au
                .iter()
                .map(|r| libm::pow(*r, -weights.laws().ejection_distance_exponent))
                .collect(),
        }
    }
}

impl Lay for Thrown {
    fn throws(&self) -> usize {
        THROWS
    }

    fn places(&self, sample: &Sample, mut place: impl FnMut(&[f64; 3], f64)) {
        let between =
            |values: &[f64], index: usize, part: f64| values[index] + (values[index + 1] - values[index]) * part;
        let speed = between(&self.by_beta, sample.column, sample.column_part)
            * between(&self.by_distance, sample.row, sample.row_part);
        for throw in &self.sets[sample.number % THROW_SETS] {
            place(&sample.node.thrown(&throw.map(|part| part * speed)), sample.weight / THROWS as f64);
        }
    }
}

/// One sample inside a cell.
struct Sample {
    /// Counted from 0.
    number: usize,
    column: usize,
    row: usize,
    /// How far into the cell, [0, 1].
    column_part: f64,
    row_part: f64,
    weight: f64,
    node: sheet::Node,
}

fn for_each_sample(sheet: &Sheet, light: &Light, subcells: usize, mut visit: impl FnMut(&Sample)) {
    let columns = sheet.betas.len() - 1;
    let mut number = 0;
    for row in 0..sheet.ages_days.len() - 1 {
        for row_step in 0..subcells {
            let row_part = (row_step as f64 + 0.5) / subcells as f64;
            let mut left = sheet.node(row, 0).toward(sheet.node(row + 1, 0), row_part);
            for column in 0..columns {
                let right = sheet.node(row, column + 1).toward(sheet.node(row + 1, column + 1), row_part);
                let weight = light.cells[row * columns + column] / (subcells * subcells) as f64;
                if weight > 0.0 {
                    for column_step in 0..subcells {
                        let column_part = (column_step as f64 + 0.5) / subcells as f64;
                        let node = left.toward(&right, column_part);
                        visit(&Sample { number, column, row, column_part, row_part, weight, node });
                        number += 1;
                    }
                }
                left = right;
            }
        }
    }
}

/// Sets of ejection velocities over the mean speed, spread over the law's speeds and directions.
fn throws(weights: &Weights) -> Vec<[[f64; 3]; THROWS]> {
    /// The golden section: azimuths that never repeat.
    const GOLDEN: f64 = 0.618_033_988_749_894_9;
    /// Prime to THROWS, so that speeds do not follow directions.
    const SHUFFLE: usize = 3;
    (0..THROW_SETS)
        .map(|set| {
            std::array::from_fn(|i| {
                let speed = ((i * SHUFFLE + set) % THROWS) as f64 + 0.5;
                let polar = i as f64 + (set as f64 + 0.5) / THROW_SETS as f64;
                let turn = GOLDEN * (set * THROWS + i) as f64;
                weights.ejection([speed / THROWS as f64, polar / THROWS as f64, turn - turn.floor()])
            })
        })
        .collect()
}

fn map(sheet: &Sheet, light: &Light, rule: &Rule, coma: &Coma, [at_rest, ejected]: [&Sums; 2]) -> Map {
    let columns = sheet.betas.len() - 1;
    let cells = light
        .cells
        .iter()
        .enumerate()
        .map(|(index, own)| {
            let (row, column) = (index / columns, index % columns);
            let part = |sums: &[f64]| if *own > 0.0 { sums[index] / own } else { 0.0 };
            Cell {
                side: rule.has_side.then(|| side(sheet, row, column, rule, coma)),
                brightness: light.densities[index],
                sunward_at_rest: part(&at_rest.sunward_cells),
                sunward_ejected: part(&ejected.sunward_cells),
                seen: part(&ejected.seen_cells),
            }
        })
        .collect();
    Map { beta_edges: sheet.betas.clone(), age_edges_days: sheet.ages_days.clone(), cells }
}

/// The side of the middle of a cell, without ejection.
fn side(sheet: &Sheet, row: usize, column: usize, rule: &Rule, coma: &Coma) -> Side {
    let across = |column: usize| sheet.node(row, column).toward(sheet.node(row + 1, column), 0.5);
    let place = across(column).toward(&across(column + 1), 0.5).place_au;
    match Fallen::of(&place, coma, column, row, 0.0).map(|fallen| fallen.cos_offset) {
        None => Side::Coma,
        Some(cos) if cos >= 0.0 => Side::Tail,
        Some(cos) if -cos >= rule.sector_cos => Side::AntiTail,
        Some(_) => Side::Sunward,
    }
}

/// How far the fountain of ejected dust seems to reach to every side of the nucleus, radians: the greatest of v t - a t^2
/// sin(phase) / 2 over time and beta, which is d / sin(phase) with d = v^2 / 2a where the dust is old enough for it.
fn fountain_rad(sheet: &Sheet, sky: &Sky, weights: &Weights) -> f64 {
    let r = sky.sun_distance_au;
    let sine = libm::sin(sky.phase_angle_rad);
    let oldest = weights.laws().age_greatest_days;
    let fastest = weights.ejection([1.0 - 0.5 / THROWS as f64, 0.0, 0.0])[0].abs() / KM_S_PER_AU_D;
    let reach_au = |beta: &f64| {
        let speed = fastest * weights.mean_speed_km_s(*beta, r);
        let push = SUN_GM_AU3_D2 * beta / (r * r) * sine;
        let days = (speed / push).min(oldest);
        speed * days - 0.5 * push * days * days
    };
    let farthest = sheet.betas.iter().map(reach_au).fold(0.0_f64, f64::max);
    libm::atan(farthest / sky.observer_distance_au)
}
