//! How much light lies on which side, and which grains send it?

use super::lay::{Lay, for_each_sample};
use super::sheet::Sheet;
use super::tally::{Coma, Fallen, Glow, Tally};
use super::{Dust, GRADE_FLOORS, Grade, Part};
use crate::frame::turn;
use crate::tail::grain::Vista;
use crate::tail::law::Tails;
use crate::tail::weight::Weights;
use std::f64::consts::PI;

/// What counts as coma and as anti-tail.
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
    /// Light per step of log beta and per day, over the greatest such.
    pub densities: Vec<f64>,
}

impl Light {
    pub fn of(vista: &Vista, sheet: &Sheet, weights: &Weights) -> Self {
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
pub struct Sums {
    pub tail: Tally,
    pub sunward: Tally,
    pub anti_tail: Tally,
    /// Light on the sunward side, and light that counts, of each cell.
    pub sunward_cells: Vec<f64>,
    pub seen_cells: Vec<f64>,
}

impl Sums {
    /// Sums what `lay` puts on the sky: it is given every sample and a way to add a place with its light.
    pub fn of(sheet: &Sheet, light: &Light, rule: &Rule, coma: Coma, subcells: usize, lay: impl Lay) -> Self {
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

    pub fn dust(&self, sheet: &Sheet, antisolar: Option<f64>) -> Dust {
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
