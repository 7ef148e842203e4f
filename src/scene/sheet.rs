//! Which part of the dust sheet lies toward the Sun on the sky?
//!
//! Dust that leaves without a speed of its own lies in a sheet in the orbit plane, one grain for each beta and age. Here
//! the sheet is a mesh of exact grains, straight in between: good for a drawing, not for numbers (those come from
//! [`crate::tail::perspective`]). Betas step evenly in a low power, between their logarithm, which would be coarse far
//! out, and beta itself, which would be coarse near the nucleus. Ages step evenly in the sum of their square root, since
//! near the nucleus the way grows as the square of the age, and of the angle through which the comet has turned about the
//! Sun, so that a fast perihelion is not stepped over.

use super::Point;
use super::clip::{figure_beside, figure_inside, twice_area};
use super::lettering::Rect;
use super::view::Facing;
use crate::frame::{norm, separation_rad};
use crate::tail::grain::Vista;
use crate::tail::law::Tails;
use nalgebra::Vector3;

/// Ages of the mesh.
const ROWS: usize = 40;
/// Steps among which the ages are chosen.
const FINE_STEPS: usize = 160;
/// Betas of the mesh, and the power that they step in.
const COLUMNS: usize = 12;
const POWER: f64 = 0.3;

/// The sheet as a mesh, row by row of equal age.
#[derive(Clone, Debug, PartialEq)]
pub struct Sheet {
    pub betas: Vec<f64>,
    pub ages_days: Vec<f64>,
    /// Heliocentric equatorial, au; None for a grain that has met the Sun.
    pub places_au: Vec<Option<Vector3<f64>>>,
    /// Tangent offsets from the nucleus, xi east, eta north; None 90 degrees or more away too.
    pub offsets: Vec<Option<[f64; 2]>>,
}

/// Dust toward the Sun on the page: as figures, or, where it is seen edge-on, as lines.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct TowardSun {
    /// Figures to be filled as one, all turning the same way.
    pub broad: Vec<Vec<Point>>,
    pub thin: Vec<Vec<Point>>,
}

impl TowardSun {
    pub fn is_empty(&self) -> bool {
        self.broad.is_empty() && self.thin.is_empty()
    }
}

impl Sheet {
    /// The sheet of a vista over the ranges of `laws`.
    pub fn of(vista: &Vista, laws: &Tails) -> Self {
        let columns = COLUMNS;
        let share = |i: usize, count: usize| i as f64 / (count - 1) as f64;
        let [least, greatest] = [laws.beta_least, laws.beta_greatest].map(|beta| libm::pow(beta, POWER));
        let betas: Vec<f64> =
            (0..columns).map(|i| libm::pow(least + (greatest - least) * share(i, columns), 1.0 / POWER)).collect();
        let ages_days = ages_days(vista, laws);
        let mut places_au = Vec::with_capacity(columns * ROWS);
        for &age_days in &ages_days {
            let start = vista.release(age_days);
            places_au.extend(betas.iter().map(|&beta| vista.survivor(beta, &start, age_days)));
        }
        let offsets = places_au.iter().map(|place| vista.offset(place.as_ref()?)).collect();
        Sheet { betas, ages_days, places_au, offsets }
    }

    /// The corners of each cell of a mesh of the sheet's shape, in order around it; cells that lack one are left out.
    pub fn cells<'a, T: Copy>(&self, nodes: &'a [Option<T>]) -> impl Iterator<Item = [T; 4]> + 'a {
        let columns = self.betas.len();
        let rows = self.ages_days.len();
        (0..rows - 1).flat_map(move |row| {
            (0..columns - 1).filter_map(move |column| {
                let at = row * columns + column;
                Some([nodes[at]?, nodes[at + 1]?, nodes[at + columns + 1]?, nodes[at + columns]?])
            })
        })
    }

    /// The part of the sheet on the page within `half_width_rad` (at most a quarter turn) of the Sun's direction.
    pub fn toward_sun(
        &self,
        facing: &Facing,
        sunward_rad: f64,
        half_width_rad: f64,
        page: &Rect,
        unit_px: f64,
    ) -> TowardSun {
        let nucleus = facing.nucleus();
        let sun = facing.direction(sunward_rad);
        let edges = [-half_width_rad, half_width_rad].map(|aside| {
            let [x, y] = facing.direction(sunward_rad + aside);
            let across = [-y, x];
            let sign = if across[0] * sun[0] + across[1] * sun[1] < 0.0 { -1.0 } else { 1.0 };
            [sign * across[0], sign * across[1]]
        });
        let beside = |edge: [f64; 2]| move |p: Point| (p[0] - nucleus[0]) * edge[0] + (p[1] - nucleus[1]) * edge[1];
        let ahead = beside(sun);
        // The coma hides what is nearer than this, and rounding would scatter it over all directions.
        let near_px = 8.0 * unit_px;
        let mut figures = Vec::new();
        for corners in self.cells(&self.offsets) {
            let figure = corners.map(|[xi, eta]| facing.to_page(xi, eta));
            if figure.iter().all(|&p| ahead(p) < 0.0) {
                continue;
            }
            let kept = figure_beside(&figure, beside(edges[0]));
            let kept = figure_inside(&figure_beside(&kept, beside(edges[1])), page);
            let near = |p: &Point| norm([p[0] - nucleus[0], p[1] - nucleus[1]]) < near_px;
            if kept.is_empty() || kept.iter().all(near) {
                continue;
            }
            figures.push(kept);
        }
        TowardSun::of(figures, nucleus, unit_px)
    }
}

/// The ages of the rows, youngest first.
fn ages_days(vista: &Vista, laws: &Tails) -> Vec<f64> {
    let (youngest, oldest) = (laws.age_least_days.sqrt(), laws.age_greatest_days.sqrt());
    let age = |i: usize| {
        let root = youngest + (oldest - youngest) * i as f64 / FINE_STEPS as f64;
        root * root
    };
    let places: Vec<Vector3<f64>> = (0..=FINE_STEPS).map(|i| vista.release(age(i)).position_au).collect();
    let turns: Vec<f64> = places.windows(2).map(|pair| separation_rad(&pair[0], &pair[1])).collect();
    let whole_turn: f64 = turns.iter().sum::<f64>().max(1e-9);
    // The measure at each fine step, from 0 to about 2.
    let mut measure = vec![0.0];
    for turn in &turns {
        measure.push(measure[measure.len() - 1] + turn / whole_turn + 1.0 / FINE_STEPS as f64);
    }
    let whole = measure[FINE_STEPS];
    (0..ROWS)
        .map(|row| {
            let wanted = whole * row as f64 / (ROWS - 1) as f64;
            age(measure.partition_point(|&sum| sum < wanted - 1e-9).min(FINE_STEPS))
        })
        .collect()
}

/// Edge-on is what is on the average narrower than this, in drawing units.
const NARROW: f64 = 3.0;

impl TowardSun {
    fn of(mut figures: Vec<Vec<Point>>, nucleus: Point, unit_px: f64) -> Self {
        let away = |p: &Point| norm([p[0] - nucleus[0], p[1] - nucleus[1]]);
        let whole: f64 = figures.iter().map(|figure| 0.5 * twice_area(figure).abs()).sum();
        let reach = figures.iter().flatten().map(away).fold(0.0, f64::max);
        if whole < NARROW * unit_px * reach {
            return TowardSun {
                broad: Vec::new(),
                thin: figures.iter().map(|figure| longest(figure).to_vec()).collect(),
            };
        }
        for figure in &mut figures {
            if twice_area(figure) < 0.0 {
                figure.reverse();
            }
        }
        TowardSun { broad: figures, thin: Vec::new() }
    }
}

/// The two corners of a figure that lie farthest apart.
fn longest(figure: &[Point]) -> [Point; 2] {
    let length = |[a, b]: [Point; 2]| norm([b[0] - a[0], b[1] - a[1]]);
    let mut ends = [figure[0], figure[0]];
    for (i, &a) in figure.iter().enumerate() {
        for &b in &figure[i + 1..] {
            if length([a, b]) > length(ends) {
                ends = [a, b];
            }
        }
    }
    ends
}
