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

use crate::body::AU_KM;
use crate::frame::turn;
use crate::sky::Sky;
use crate::tail::grain::Vista;
use crate::tail::law::Tails;
use sheet::{Frame, Sheet};
use std::f64::consts::{PI, TAU};
use tally::{Fallen, Tally};

/// Dust nearer than this to the nucleus on the sky, at its distance, is coma: km, and arcsec where that is more.
pub const COMA_KM: f64 = 50_000.0;
pub const COMA_ARCSEC: f64 = 60.0;

/// Samples along each side of a cell of the (beta, age) plane, without and with ejection.
const SUBCELLS_AT_REST: usize = 3;
const SUBCELLS_EJECTED: usize = 2;
/// Ejection velocities for each sample, and sets of them that take turns.
const THROWS: usize = 8;
const THROW_SETS: usize = 64;

/// How conspicuous the dust in the anti-tail sector is, by its surface brightness beside the tail's at the same distance
/// from the nucleus (brightest 5 degrees of either). The limits are our choice.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Grade {
    /// No dust, or fainter than 1/300 of the tail (6 mag).
    None,
    /// Up to 1/30 (3.7 mag): deep images only.
    Faint,
    /// Up to 1/6 (2 mag).
    Possible,
    /// Brighter.
    Strong,
}

/// Least brightness beside the tail for each grade above none.
pub const GRADE_FLOORS: [(Grade, f64); 3] =
    [(Grade::Strong, 1.0 / 6.0), (Grade::Possible, 1.0 / 30.0), (Grade::Faint, 1.0 / 300.0)];

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
    /// Part of all light that lies inside the coma.
    pub coma_share: f64,
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
    /// Radius within which dust is coma.
    pub coma_rad: f64,
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
    let coma_rad = (COMA_KM / AU_KM / sky.observer_distance_au).max(COMA_ARCSEC / 3600.0 * PI / 180.0);
    let rule = Rule::of(antisolar.is_some(), coma_rad, tails);
    let weights = Weights::of(vista, &sheet, tails);

    let at_rest = Sums::at_rest(&sheet, &weights, &rule);
    let ejected = if tails.ejection_speed_km_s > 0.0 {
        Sums::ejected(&sheet, &weights, &rule, tails)
    } else {
        at_rest.clone()
    };
    let map = map(&sheet, &weights, &rule, &at_rest, &ejected);
    let at_rest = at_rest.dust(&sheet, antisolar);
    let ejected = ejected.dust(&sheet, antisolar);
    Perspective {
        sunward_position_angle_rad: antisolar.map(|angle| turn(angle + PI)),
        anti_tail_half_width_rad: tails.anti_tail_half_width_deg.to_radians(),
        coma_rad,
        at_rest,
        ejected,
        verdict: verdict(antisolar.is_some(), weights.whole, &at_rest, &ejected),
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
    Frame {
        sight: axes.sight,
        away: axes.east * sin + axes.north * cos,
        aside: axes.east * cos - axes.north * sin,
    }
}

/// What counts as coma and as anti-tail.
struct Rule {
    /// Whether a sunward side exists.
    has_side: bool,
    /// Squared tangent of the coma's radius.
    coma_squared: f64,
    /// Cosine of the half width of the anti-tail sector.
    sector_cos: f64,
}

impl Rule {
    fn of(has_side: bool, coma_rad: f64, tails: &Tails) -> Self {
        let coma = libm::tan(coma_rad);
        let sector_cos = libm::cos(tails.anti_tail_half_width_deg.to_radians());
        Rule { has_side, coma_squared: coma * coma, sector_cos }
    }
}

/// The light of each cell, before it is shared out among its samples.
struct Weights {
    /// Row by row.
    cells: Vec<f64>,
    whole: f64,
    /// Light per step of log beta and per day, over the greatest such.
    densities: Vec<f64>,
}

impl Weights {
    fn of(vista: &Vista, sheet: &Sheet, tails: &Tails) -> Self {
        let perihelion_days = vista.orbit.days_from_perihelion(vista.seen);
        let rates: Vec<f64> = (0..sheet.ages_days.len())
            .map(|i| rate(tails, sheet.release_au[i], perihelion_days - sheet.ages_days[i]))
            .collect();
        let sizes: Vec<f64> = sheet.betas.iter().map(|beta| cross_section(tails, *beta)).collect();
        let mut cells = Vec::new();
        let mut densities = Vec::new();
        for row in 0..sheet.ages_days.len() - 1 {
            let days = sheet.ages_days[row + 1] - sheet.ages_days[row];
            for column in 0..sheet.betas.len() - 1 {
                let step = libm::log(sheet.betas[column + 1] / sheet.betas[column]);
                let density = 0.25 * (rates[row] + rates[row + 1]) * (sizes[column] + sizes[column + 1]);
                densities.push(density);
                cells.push(density * days * step);
            }
        }
        let greatest = densities.iter().fold(0.0_f64, |most, density| most.max(*density));
        if greatest > 0.0 {
            densities.iter_mut().for_each(|density| *density /= greatest);
        }
        let whole = cells.iter().sum();
        Weights { cells, whole, densities }
    }
}

/// Sums by side.
#[derive(Clone)]
struct Sums {
    coma: f64,
    tail: Tally,
    sunward: Tally,
    anti_tail: Tally,
    /// Sunward light of each cell.
    sunward_cells: Vec<f64>,
}

impl Sums {
    fn new(sheet: &Sheet) -> Self {
        let (columns, rows) = (sheet.betas.len() - 1, sheet.ages_days.len() - 1);
        let tally = || Tally::new(columns, rows);
        Sums {
            coma: 0.0,
            tail: tally(),
            sunward: tally(),
            anti_tail: tally(),
            sunward_cells: vec![0.0; columns * rows],
        }
    }

    fn at_rest(sheet: &Sheet, weights: &Weights, rule: &Rule) -> Self {
        let mut sums = Sums::new(sheet);
        for_each_sample(sheet, weights, SUBCELLS_AT_REST, |sample| {
            sums.add(&sample.node.place_au, sample, sample.weight, rule);
        });
        sums
    }

    fn ejected(sheet: &Sheet, weights: &Weights, rule: &Rule, tails: &Tails) -> Self {
        let mut sums = Sums::new(sheet);
        let throws = throws(tails);
        let by_beta: Vec<f64> = sheet.betas.iter().map(|b| libm::pow(*b, tails.ejection_beta_exponent)).collect();
        let by_distance: Vec<f64> = sheet
            .release_au
            .iter()
            .map(|r| tails.ejection_speed_km_s * libm::pow(*r, -tails.ejection_distance_exponent))
            .collect();
        let mut turn = 0;
        for_each_sample(sheet, weights, SUBCELLS_EJECTED, |sample| {
            let between = |values: &[f64], index: usize, part: f64| {
                values[index] + (values[index + 1] - values[index]) * part
            };
            let speed = between(&by_beta, sample.column, sample.column_part)
                * between(&by_distance, sample.row, sample.row_part);
            let set = &throws[turn % THROW_SETS];
            turn += 1;
            for throw in set {
                let place = sample.node.thrown(&throw.map(|part| part * speed));
                sums.add(&place, sample, sample.weight / THROWS as f64, rule);
            }
        });
        sums
    }

    fn add(&mut self, place: &[f64; 3], sample: &Sample, weight: f64, rule: &Rule) {
        let Some(fallen) = Fallen::of(place, rule.coma_squared, sample.column, sample.row, weight) else {
            self.coma += weight;
            return;
        };
        let across = (place[1] * place[1] + place[2] * place[2]).sqrt();
        let (cos, sin) = (place[1] / across, place[2] / across);
        if cos >= 0.0 || !rule.has_side {
            self.tail.add(&fallen, cos, sin);
            return;
        }
        self.sunward.add(&fallen, cos, sin);
        self.sunward_cells[sample.row * (self.sunward.columns()) + sample.column] += weight;
        if -cos >= rule.sector_cos {
            self.anti_tail.add(&fallen, cos, sin);
        }
    }

    fn dust(&self, sheet: &Sheet, antisolar: Option<f64>) -> Dust {
        let outside = self.tail.light + self.sunward.light;
        let part = |tally: &Tally| self.part(tally, outside, sheet, antisolar?);
        let anti_tail = part(&self.anti_tail);
        let grade = anti_tail.map_or(Grade::None, |part| grade(part.beside_tail));
        Dust {
            fan_rad: antisolar.and_then(|angle| Some(self.tail.fan_rad()?.map(|offset| turn(angle + offset)))),
            sunward: part(&self.sunward),
            anti_tail,
            grade,
            coma_share: if self.coma > 0.0 { self.coma / (self.coma + outside) } else { 0.0 },
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

/// The grade of a brightness beside the tail.
fn grade(beside_tail: f64) -> Grade {
    GRADE_FLOORS.iter().find(|(_, floor)| beside_tail >= *floor).map_or(Grade::None, |(grade, _)| *grade)
}

/// One sample inside a cell.
struct Sample {
    column: usize,
    row: usize,
    /// How far into the cell, [0, 1].
    column_part: f64,
    row_part: f64,
    weight: f64,
    node: sheet::Node,
}

fn for_each_sample(sheet: &Sheet, weights: &Weights, subcells: usize, mut visit: impl FnMut(&Sample)) {
    let columns = sheet.betas.len() - 1;
    for row in 0..sheet.ages_days.len() - 1 {
        for row_step in 0..subcells {
            let row_part = (row_step as f64 + 0.5) / subcells as f64;
            let mut left = sheet.node(row, 0).toward(sheet.node(row + 1, 0), row_part);
            for column in 0..columns {
                let right = sheet.node(row, column + 1).toward(sheet.node(row + 1, column + 1), row_part);
                let weight = weights.cells[row * columns + column] / (subcells * subcells) as f64;
                if weight > 0.0 {
                    for column_step in 0..subcells {
                        let column_part = (column_step as f64 + 0.5) / subcells as f64;
                        let node = left.toward(&right, column_part);
                        visit(&Sample { column, row, column_part, row_part, weight, node });
                    }
                }
                left = right;
            }
        }
    }
}

/// Sets of ejection velocities over the mean speed: directions spread over the cone about the sunward direction,
/// speeds at the middles of eight equal parts of a Gaussian.
fn throws(tails: &Tails) -> Vec<[[f64; 3]; THROWS]> {
    /// Standard normal quantiles at 1/16, 3/16, ... 15/16, mixed so that they do not follow the direction.
    const DEVIATES: [f64; THROWS] = [-0.157_311, 1.534_121, -0.887_147, 0.488_776, 0.157_311, -1.534_121, 0.887_147, -0.488_776];
    /// The golden section: azimuths that never repeat.
    const GOLDEN: f64 = 0.618_033_988_749_894_9;
    let cap = 1.0 - libm::cos(tails.ejection_cone_deg.to_radians());
    (0..THROW_SETS)
        .map(|set| {
            std::array::from_fn(|i| {
                let height = (i as f64 + (set as f64 + 0.5) / THROW_SETS as f64) / THROWS as f64;
                let cos = 1.0 - cap * height;
                let sin = (1.0 - cos * cos).max(0.0).sqrt();
                let (sin_turn, cos_turn) = libm::sincos(TAU * GOLDEN * (set * THROWS + i) as f64);
                let speed = (1.0 + tails.ejection_spread * DEVIATES[(i + set) % THROWS]).max(0.0);
                [-cos * speed, sin * cos_turn * speed, sin * sin_turn * speed]
            })
        })
        .collect()
}

fn map(sheet: &Sheet, weights: &Weights, rule: &Rule, at_rest: &Sums, ejected: &Sums) -> Map {
    let columns = sheet.betas.len() - 1;
    let cells = weights
        .cells
        .iter()
        .enumerate()
        .map(|(index, light)| {
            let (row, column) = (index / columns, index % columns);
            let part = |sums: &Sums| if *light > 0.0 { sums.sunward_cells[index] / light } else { 0.0 };
            Cell {
                side: rule.has_side.then(|| side(sheet, row, column, rule)),
                brightness: weights.densities[index],
                sunward_at_rest: part(at_rest),
                sunward_ejected: part(ejected),
            }
        })
        .collect();
    Map { beta_edges: sheet.betas.clone(), age_edges_days: sheet.ages_days.clone(), cells }
}

/// The side of the middle of a cell, without ejection.
fn side(sheet: &Sheet, row: usize, column: usize, rule: &Rule) -> Side {
    let across = |column: usize| sheet.node(row, column).toward(sheet.node(row + 1, column), 0.5);
    let place = across(column).toward(&across(column + 1), 0.5).place_au;
    if Fallen::of(&place, rule.coma_squared, column, row, 0.0).is_none() {
        return Side::Coma;
    }
    let cos = place[1] / (place[1] * place[1] + place[2] * place[2]).sqrt();
    match cos {
        cos if cos >= 0.0 => Side::Tail,
        cos if -cos >= rule.sector_cos => Side::AntiTail,
        _ => Side::Sunward,
    }
}

/// Relative dust production, by number of grains of each size, at a distance from the Sun and days from perihelion.
fn rate(tails: &Tails, sun_distance_au: f64, days_from_perihelion: f64) -> f64 {
    let off = sun_distance_au > tails.activity_cutoff_au
        || tails.activity_start_days.is_some_and(|start| days_from_perihelion < start);
    if off { 0.0 } else { libm::pow(sun_distance_au, -tails.activity_exponent) }
}

/// Relative cross-section per step of log beta.
fn cross_section(tails: &Tails, beta: f64) -> f64 {
    libm::pow(beta, tails.size_exponent - 3.0)
}
