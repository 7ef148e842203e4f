//! Which dust, by beta and age, lies toward the Sun, and how much light does it send?
//!
//! A map of the (beta, age) plane of [`crate::tail::perspective`]: beta to the right in even steps of its logarithm, with
//! the grain radius above; age upward, with the date of release at the right. A cell is the brighter the more
//! light it sends per step of log beta and per day, over two and a half decades. Hatched: on the sunward side. Hatched
//! both ways: in the anti-tail sector. Sides are those of dust that leaves without a speed of its own.

use super::lettering::{ABOVE, Anchor, BELOW, LINE, Rect, Text, wrapped};
use super::theme::TONES;
use super::{Point, Role, Scene, Shape, Slope, note, quantity};
use crate::tail::curve;
use crate::tail::law::Tails;
use crate::tail::perspective::{Map, Side};
use crate::tail::size::Material;
use crate::time::Instant;

const SIZE: f64 = 11.5;
/// Room beside the map for ages at its left and dates at its right, in drawing units.
const LEFT: f64 = 44.0;
const RIGHT: f64 = 58.0;
const RIGHT_WITH_YEARS: f64 = 78.0;
const TICK: f64 = 5.0;
const HATCH_GAP: f64 = 7.0;
/// Decades of brightness that the cells show.
const DECADES: f64 = 2.5;
/// Releases longer ago than this are dated by month and year.
const LONG_AGO_DAYS: f64 = 300.0;

/// The rectangle of the map and the ranges of its axes.
struct Plane {
    area: Rect,
    log_betas: [f64; 2],
    ages_days: [f64; 2],
}

/// The map of what `map` holds, for dust under `laws` seen at the moment `seen`.
pub fn compose(map: &Map, laws: &Tails, seen: Instant, width_px: f64, height_px: f64) -> Scene {
    let mut scene = Scene::new(width_px, height_px);
    let unit = scene.unit_px;
    let (margin, size_px) = (note::MARGIN * unit, SIZE * unit);
    let row = LINE * size_px;
    let legend = legend(map, width_px - 2.0 * margin, size_px);
    let foot = margin + row * legend.len() as f64;
    let right = if laws.age_greatest_days > LONG_AGO_DAYS { RIGHT_WITH_YEARS } else { RIGHT };
    let ends = |edges: &[f64]| [edges[0], edges[edges.len() - 1]];
    let plane = Plane {
        area: Rect {
            left: (margin + (LEFT - note::MARGIN) * unit).round(),
            top: (margin + 2.6 * row).round(),
            right: (width_px - right * unit).round(),
            bottom: (height_px - foot - 3.3 * row).round(),
        },
        log_betas: ends(&map.beta_edges).map(libm::log),
        ages_days: ends(&map.age_edges_days),
    };
    plane.draw_cells(&mut scene, map);
    let corner = plane.area;
    let frame = [
        [corner.left, corner.top],
        [corner.right, corner.top],
        [corner.right, corner.bottom],
        [corner.left, corner.bottom],
    ];
    let mut axis: Vec<Vec<Point>> = frame.iter().zip(frame.iter().cycle().skip(1)).map(|(a, b)| vec![*a, *b]).collect();
    let mut texts = plane.titles(width_px, margin, size_px);
    plane.beta_ticks(laws, unit, size_px, &mut axis, &mut texts);
    plane.age_ticks(laws, seen, unit, size_px, &mut axis, &mut texts);
    for (number, words) in legend.into_iter().enumerate() {
        let at = [margin, height_px - foot + ABOVE * size_px + row * number as f64];
        texts.push((Role::Note, Text { words, at, anchor: Anchor::Start, size_px, strong: false }));
    }
    scene.add(Role::Axis, Shape::Lines(axis));
    let mut taken: Vec<Rect> = Vec::new();
    let page = Rect { left: 0.0, top: 0.0, right: width_px, bottom: height_px };
    for (role, text) in texts {
        let area = text.area();
        // The first to come keeps its place: titles, then ticks in order, then the legend.
        if page.contains(&area) && !taken.iter().any(|other| other.overlaps(&area.grown(1.5 * unit))) {
            taken.push(area);
            scene.add(role, Shape::Text(text));
        }
    }
    scene
}

fn legend(map: &Map, limit_px: f64, size_px: f64) -> Vec<String> {
    let words = if map.cells.iter().all(|cell| cell.side.is_none()) {
        "No sunward side: comet, Sun and observer in line. Brighter: more light."
    } else {
        "Hatched: sunward side. Crossed: anti-tail sector. Brighter: more light."
    };
    wrapped(words, limit_px, size_px, false)
}

/// The step of brightness of a cell: 0 for no light, then from the faintest shown to the brightest.
fn tone(brightness: f64) -> u8 {
    if brightness.is_nan() || brightness <= 0.0 {
        return 0;
    }
    let share = (1.0 + libm::log10(brightness) / DECADES).clamp(0.0, 1.0);
    1 + (share * f64::from(TONES - 2)).round() as u8
}

impl Plane {
    fn x(&self, beta: f64) -> f64 {
        let [first, last] = self.log_betas;
        self.area.left + self.area.width() * (libm::log(beta) - first) / (last - first)
    }

    fn y(&self, age_days: f64) -> f64 {
        let [first, last] = self.ages_days;
        self.area.bottom - self.area.height() * (age_days - first) / (last - first)
    }

    /// Rectangles over runs of cells of a row for which `picked` says the same, with what it says.
    fn runs<T: PartialEq + Copy>(&self, map: &Map, picked: impl Fn(usize) -> T) -> Vec<(T, Vec<Point>)> {
        let columns = map.columns();
        let mut found = Vec::new();
        for row in 0..map.rows() {
            // On whole pixels, so that no seam shows between neighbours.
            let [below, above] = [row, row + 1].map(|edge| self.y(map.age_edges_days[edge]).round());
            let mut from = 0;
            for column in 1..=columns {
                let kind = picked(row * columns + from);
                if column < columns && picked(row * columns + column) == kind {
                    continue;
                }
                let [left, right] = [from, column].map(|edge| self.x(map.beta_edges[edge]).round());
                if above < below && left < right {
                    found.push((kind, vec![[left, above], [right, above], [right, below], [left, below]]));
                }
                from = column;
            }
        }
        found
    }

    fn draw_cells(&self, scene: &mut Scene, map: &Map) {
        let gap_px = HATCH_GAP * scene.unit_px;
        let tones = self.runs(map, |cell| tone(map.cells[cell].brightness));
        for level in 0..TONES {
            let cells: Vec<Vec<Point>> =
                tones.iter().filter(|(tone, _)| *tone == level).map(|(_, cell)| cell.clone()).collect();
            if !cells.is_empty() {
                scene.add(Role::Tone(level), Shape::Patches(cells));
            }
        }
        let hatched = |scene: &mut Scene, sides: &[Side], slope: Slope| {
            let runs = self.runs(map, |cell| map.cells[cell].side.is_some_and(|side| sides.contains(&side)));
            let outlines: Vec<Vec<Point>> =
                runs.into_iter().filter(|(inside, _)| *inside).map(|(_, cell)| cell).collect();
            if !outlines.is_empty() {
                scene.add(Role::MapHatch, Shape::Hatch { outlines, gap_px, slope });
            }
        };
        hatched(scene, &[Side::Sunward, Side::AntiTail], Slope::Rising);
        hatched(scene, &[Side::AntiTail], Slope::Falling);
    }

    fn titles(&self, width_px: f64, margin: f64, size_px: f64) -> Vec<(Role, Text)> {
        let top = margin + ABOVE * size_px;
        let foot = self.area.bottom + (2.2 * LINE + ABOVE - BELOW) * size_px;
        let middle = self.area.center()[0];
        [
            ("age", [margin, top], Anchor::Start),
            ("grain radius", [middle, top], Anchor::Middle),
            ("released", [width_px - margin, top], Anchor::End),
            ("beta", [middle, foot], Anchor::Middle),
        ]
        .map(|(words, at, anchor)| (Role::Title, Text { words: words.into(), at, anchor, size_px, strong: true }))
        .to_vec()
    }

    fn beta_ticks(
        &self,
        laws: &Tails,
        unit: f64,
        size_px: f64,
        axis: &mut Vec<Vec<Point>>,
        texts: &mut Vec<(Role, Text)>,
    ) {
        let material = Material::of(laws);
        let betas = curve::round_betas([laws.beta_least, laws.beta_greatest]);
        // Whole decades first, so that they keep their words where there is no room for all.
        let (decades, others): (Vec<f64>, Vec<f64>) = betas.into_iter().partition(|beta| {
            let decade = libm::log10(*beta);
            (decade - decade.round()).abs() < 1e-9
        });
        for beta in decades.into_iter().chain(others) {
            let x = self.x(beta);
            for (edge, out) in [(self.area.top, -1.0), (self.area.bottom, 1.0)] {
                axis.push(vec![[x, edge], [x, edge + out * TICK * unit]]);
            }
            let below = self.area.bottom + TICK * unit + 2.0 * unit + ABOVE * size_px;
            let above = self.area.top - TICK * unit - 5.0 * unit - BELOW * size_px;
            for (words, y) in [(quantity::figures(beta), below), (material.short(beta), above)] {
                texts.push((Role::Note, Text { words, at: [x, y], anchor: Anchor::Middle, size_px, strong: false }));
            }
        }
    }

    fn age_ticks(
        &self,
        laws: &Tails,
        seen: Instant,
        unit: f64,
        size_px: f64,
        axis: &mut Vec<Vec<Point>>,
        texts: &mut Vec<(Role, Text)>,
    ) {
        for age_days in curve::round_ages([laws.age_least_days, laws.age_greatest_days]) {
            let y = self.y(age_days);
            for (edge, out) in [(self.area.left, -1.0), (self.area.right, 1.0)] {
                axis.push(vec![[edge, y], [edge + out * TICK * unit, y]]);
            }
            let released = seen.plus_days(-age_days);
            let date = if laws.age_greatest_days > LONG_AGO_DAYS { month(released) } else { quantity::day(released) };
            let baseline = y + (ABOVE - BELOW) / 2.0 * size_px;
            let gap = (TICK + 3.0) * unit;
            for (words, x, anchor) in [
                (quantity::age(age_days), self.area.left - gap, Anchor::End),
                (date, self.area.right + gap, Anchor::Start),
            ] {
                texts.push((Role::Note, Text { words, at: [x, baseline], anchor, size_px, strong: false }));
            }
        }
    }
}

/// Month and year: `Feb 31` would read as a day, so the year is whole.
fn month(time: Instant) -> String {
    let whole = quantity::day_of_year(time);
    whole.split_once('\u{a0}').map_or(whole.clone(), |(_, rest)| rest.to_string())
}
