//! Which side does each cell of the (beta, age) plane lie on, and how bright is it?

use super::sheet::Sheet;
use super::sums::{Light, Rule, Sums};
use super::tally::Coma;

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

/// The map of a sheet whose dust was summed at rest and ejected.
pub fn map(sheet: &Sheet, light: &Light, rule: &Rule, coma: &Coma, [at_rest, ejected]: [&Sums; 2]) -> Map {
    let columns = sheet.columns();
    let cells = light
        .cells
        .iter()
        .zip(light.densities(sheet))
        .enumerate()
        .map(|(index, (own, brightness))| {
            let part = |sum: f64| if *own > 0.0 { sum / own } else { 0.0 };
            Cell {
                side: rule.has_side.then(|| side(&sheet.middle(index / columns, index % columns), rule, coma)),
                brightness,
                sunward_at_rest: part(at_rest.sunward(index)),
                sunward_ejected: part(ejected.sunward(index)),
                seen: part(ejected.seen(index)),
            }
        })
        .collect();
    Map { beta_edges: sheet.betas.to_vec(), age_edges_days: sheet.ages_days.clone(), cells }
}

/// The side of a place.
fn side(place: &[f64; 3], rule: &Rule, coma: &Coma) -> Side {
    match coma.cos_outside(*place) {
        None => Side::Coma,
        Some(cos) if cos >= 0.0 => Side::Tail,
        Some(cos) if -cos >= rule.sector_cos => Side::AntiTail,
        Some(_) => Side::Sunward,
    }
}
