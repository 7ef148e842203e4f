//! How much light lies on which side, and which grains send it?

use super::lay::Recipe;
use super::sheet::Sheet;
use super::tally::{self, Coma, Polar, Tally};
use super::{Dust, GRADE_FLOORS, Grade, Part, SUBCELLS_AT_REST, SUBCELLS_EJECTED, Standing};
use crate::frame::turn;
use crate::tail::grain::Vista;
use crate::tail::law::Tails;
use std::f64::consts::PI;
use tailvane_lanes::strew::{self, BINS, ByCell, CLASSES, Falls, THROWS, Throw};

/// What counts as anti-tail.
pub struct Rule {
    /// Whether a sunward side exists.
    pub has_side: bool,
    /// Cosine of the half width of the anti-tail sector.
    pub sector_cos: f64,
}

impl Rule {
    pub fn of(has_side: bool, tails: &Tails) -> Self {
        let sector_cos = libm::cos(tails.anti_tail_half_width_deg.to_radians());
        Rule { has_side, sector_cos }
    }
}

/// The light of each cell, before it is shared out among its samples.
pub struct Light {
    /// Row by row.
    pub cells: Vec<f64>,
    pub whole: f64,
}

impl Light {
    pub fn of(vista: &Vista, sheet: &Sheet, recipe: &Recipe) -> Self {
        let now = vista.orbit.days_from_perihelion(vista.seen);
        let mut cells = Vec::with_capacity(sheet.rows() * sheet.columns());
        for (ages, distances) in sheet.ages_days.windows(2).zip(sheet.release_au.windows(2)) {
            // Simpson's rule; rows end where the activity breaks off.
            let rate = |part: f64| {
                let age = ages[0] + (ages[1] - ages[0]) * part;
                recipe.weights.release_rate(distances[0] + (distances[1] - distances[0]) * part, now - age)
            };
            // Just inside, since a row may end where the activity does.
            let mean = (rate(1e-9) + 4.0 * rate(0.5) + rate(1.0 - 1e-9)) / 6.0;
            cells.extend(recipe.lights.iter().map(|light| mean * light * (ages[1] - ages[0])));
        }
        let whole = cells.iter().sum();
        Light { cells, whole }
    }

    /// Light per step of log beta and per day, over the greatest such.
    pub fn densities(&self, sheet: &Sheet) -> Vec<f64> {
        let steps: Vec<f64> = sheet.betas.windows(2).map(|pair| libm::log(pair[1] / pair[0])).collect();
        let mut densities = Vec::with_capacity(self.cells.len());
        for (row, ages) in self.cells.chunks_exact(steps.len()).zip(sheet.ages_days.windows(2)) {
            densities.extend(row.iter().zip(&steps).map(|(light, step)| light / (ages[1] - ages[0]) / step));
        }
        let greatest = densities.iter().fold(0.0_f64, |most, density| most.max(*density));
        if greatest > 0.0 {
            densities.iter_mut().for_each(|density| *density /= greatest);
        }
        densities
    }
}

/// The light of a sheet on the sky, by side.
pub struct Sides {
    tail: Polar,
    sunward: Polar,
    anti_tail: Polar,
    /// Which part counts, bin by bin.
    seen: Vec<f64>,
    falls: Falls,
    /// Of one grain, by cell.
    weights: Vec<f64>,
    subcells: usize,
    grains: usize,
}

impl Sides {
    /// Without ejection, or with that of the recipe. `keeps`: so that [`Sides::sums`] can be asked for.
    pub fn of(sheet: &Sheet, light: &Light, rule: &Rule, coma: &Coma, thrown: Option<&Recipe>, keeps: bool) -> Self {
        let rule = strew::Rule {
            near_squared: coma.squared as f32,
            twice_apex: coma.twice_apex as f32,
            has_side: rule.has_side,
            sector_cos: rule.sector_cos as f32,
        };
        let (subcells, grains) = if thrown.is_some() { (SUBCELLS_EJECTED, THROWS) } else { (SUBCELLS_AT_REST, 1) };
        let part = 1.0 / (subcells * subcells * grains) as f64;
        let weights: Vec<f64> = light.cells.iter().map(|light| light * part).collect();
        let nodes = sheet.nodes();
        let falls = match thrown {
            None => Falls::of(&nodes, &weights, subcells, None, rule, keeps),
            Some(recipe) => {
                let by_column: Vec<f32> = recipe.speeds_km_s.iter().map(|speed| *speed as f32).collect();
                let by_row: Vec<f32> = sheet.release_au.iter().map(|r| recipe.weights.slowing(*r) as f32).collect();
                let throw = Throw { sets: &recipe.throws, by_column: &by_column, by_row: &by_row };
                Falls::of(&nodes, &weights, subcells, Some(&throw), rule, keeps)
            }
        };
        let seen = tally::seen(&falls.light[..CLASSES * BINS]);
        let class = |number: usize| Polar::of(&falls.light[number * BINS..][..BINS], &seen);
        let anti_tail = class(2);
        Sides { tail: class(0), sunward: class(1).with(&anti_tail), anti_tail, seen, falls, weights, subcells, grains }
    }

    fn outside(&self) -> f64 {
        self.tail.light + self.sunward.light
    }

    fn standing_of(&self, part: &Polar) -> Option<Standing> {
        (part.light > 0.0)
            .then(|| Standing { share: part.light / self.outside(), beside_tail: part.beside(&self.tail) })
    }

    /// How the anti-tail stands beside the tail; None without dust there, or without a sunward side.
    pub fn standing(&self) -> Option<Standing> {
        self.standing_of(&self.anti_tail)
    }

    /// Everything else.
    pub fn sums(self, columns: usize) -> Sums {
        let by_cell = self.falls.by_cell(columns, &self.weights, self.subcells, self.grains, &self.seen);
        Sums { sides: self, by_cell, columns }
    }
}

/// Sums by side, and by the grains that are in them.
pub struct Sums {
    sides: Sides,
    by_cell: ByCell,
    columns: usize,
}

impl Sums {
    /// Light of a cell on the sunward side.
    pub fn sunward(&self, cell: usize) -> f64 {
        self.by_cell.behind[cell]
    }

    /// Light of a cell that counts.
    pub fn seen(&self, cell: usize) -> f64 {
        self.by_cell.seen.iter().map(|class| class[cell]).sum()
    }

    pub fn dust(&self, sheet: &Sheet, antisolar: Option<f64>) -> Dust {
        let sides = &self.sides;
        let part = |polar: &Polar, classes: &[usize]| self.part(polar, classes, sheet, antisolar?);
        let reach = sides.falls.reach.map(f64::from);
        Dust {
            fan_rad: antisolar.and_then(|angle| Some(sides.tail.fan_rad(reach)?.map(|offset| turn(angle + offset)))),
            sunward: part(&sides.sunward, &[1, 2]),
            anti_tail: part(&sides.anti_tail, &[2]),
            grade: antisolar.map_or(Grade::None, |_| grade(sides.standing())),
        }
    }

    fn part(&self, polar: &Polar, classes: &[usize], sheet: &Sheet, antisolar_rad: f64) -> Option<Part> {
        let Standing { share, beside_tail } = self.sides.standing_of(polar)?;
        let tally = self.tally(polar.light, classes);
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
            share,
            beside_tail,
            // Light evenly to both sides of the Sun's direction has its mean there.
            position_angle_rad: turn(antisolar_rad + tally.mean_offset_rad().unwrap_or(PI)),
            distance_rad: ends.map(|part| tally.distance_rad(part)),
            beta: ends.map(beta),
            age_days: ends.map(age),
        })
    }

    fn tally(&self, light: f64, classes: &[usize]) -> Tally {
        let (falls, columns) = (&self.sides.falls, self.columns);
        let rows = self.sides.weights.len() / columns;
        let mut tally = Tally {
            light,
            cos_sum: 0.0,
            sin_sum: 0.0,
            rings: [0.0; strew::FINE_RINGS],
            columns: vec![0.0; columns],
            rows: vec![0.0; rows],
        };
        for class in classes {
            let counted = |sums: &[f64]| -> f64 {
                sums[class * BINS..][..BINS].iter().zip(&self.sides.seen).map(|(sum, seen)| sum * seen).sum()
            };
            tally.cos_sum += counted(&falls.cosine);
            tally.sin_sum += counted(&falls.sine);
            tally::add(&mut tally.rings, &self.by_cell.rings[*class]);
            for (row, lights) in tally.rows.iter_mut().zip(self.by_cell.seen[*class].chunks_exact(columns)) {
                tally::add(&mut tally.columns, lights);
                *row += lights.iter().sum::<f64>();
            }
        }
        tally
    }
}

/// The grade of dust that stands so.
pub fn grade(standing: Option<Standing>) -> Grade {
    let Some(Standing { share, beside_tail }) = standing else { return Grade::None };
    GRADE_FLOORS
        .iter()
        .find(|(_, least_beside, least_share)| beside_tail >= *least_beside && share >= *least_share)
        .map_or(Grade::None, |(grade, ..)| *grade)
}
