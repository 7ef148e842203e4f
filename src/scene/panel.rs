//! How does a small drawing to scale lie in its part of the page?
//!
//! Lengths in au, x to the right, y up, one scale for both. The scale follows what is to be seen; a bar says it.

use super::clip::{figure_inside, line_inside, twice_area};
use super::lettering::{ABOVE, Anchor, BELOW, Rect, Text};
use super::note::{MARGIN, shortened};
use super::{Point, Role, Scene, Shape, quantity};
use crate::frame::norm;

const CAPTION_SIZE: f64 = 12.0;
/// Height of the caption's row.
const CAPTION_ROW: f64 = 21.0;
/// Longest share of the width that a scale bar takes.
const BAR_SHARE: f64 = 0.28;
/// Least and greatest scale, au per pixel.
const SCALES: [f64; 2] = [1e-9, 10.0];

/// A part of the page with a drawing to scale.
pub struct Panel {
    pub area: Rect,
    /// Where lines and figures end: below the caption.
    inner: Rect,
    caption: String,
    au_per_px: f64,
    /// The place in au that stands in the middle of the area.
    middle_au: Point,
    middle_px: Point,
}

impl Panel {
    /// The panel that shows all of `points`, no nearer to its edges than `inset_px`.
    pub fn fitted(area: Rect, caption: &str, points: &[Point], inset_px: f64, unit_px: f64) -> Self {
        let over = |axis: usize, pick: fn(f64, f64) -> f64, from: f64| points.iter().map(|p| p[axis]).fold(from, pick);
        let low = [0, 1].map(|axis| over(axis, f64::min, f64::INFINITY));
        let high = [0, 1].map(|axis| over(axis, f64::max, f64::NEG_INFINITY));
        // Caption above and scale bar below keep their own rows.
        let rows_px = 18.0 * unit_px;
        let free_px = [area.width() - 2.0 * inset_px, area.height() - 2.0 * (0.6 * inset_px + rows_px)];
        let scale = |axis: usize| (high[axis] - low[axis]) / free_px[axis].max(20.0);
        Panel {
            area,
            inner: Rect { top: (area.top + CAPTION_ROW * unit_px).min(area.bottom), ..area },
            caption: caption.to_string(),
            au_per_px: scale(0).max(scale(1)).clamp(SCALES[0], SCALES[1]),
            middle_au: [0, 1].map(|axis| 0.5 * (low[axis] + high[axis])),
            middle_px: area.center(),
        }
    }

    pub fn to_page(&self, [x_au, y_au]: Point) -> Point {
        let [x, y] = self.middle_px;
        [x + (x_au - self.middle_au[0]) / self.au_per_px, y - (y_au - self.middle_au[1]) / self.au_per_px]
    }

    /// Distance from the origin within which everything on the panel lies, au.
    pub fn farthest_au(&self) -> f64 {
        let half = norm([self.area.width(), self.area.height()]) / 2.0 * self.au_per_px;
        half + norm(self.middle_au)
    }

    /// Where a line from one point through another ends: a third of its length, or a little, beyond.
    pub fn beyond(&self, from: Point, through: Point) -> Point {
        let step = [through[0] - from[0], through[1] - from[1]];
        let long = norm(step).max(1e-9);
        let part = 1.0 + (0.35_f64).max(0.18 * self.area.width() / long);
        [from[0] + step[0] * part, from[1] + step[1] * part]
    }

    /// Draws a line as far as it lies on the panel.
    pub fn line(&self, scene: &mut Scene, role: Role, line: &[Point]) {
        let pieces = line_inside(line, &self.inner);
        if !pieces.is_empty() {
            scene.add(role, Shape::Lines(pieces));
        }
    }

    /// Fills figures as one, as far as they lie on the panel.
    pub fn fill(&self, scene: &mut Scene, role: Role, figures: impl Iterator<Item = [Point; 4]>) {
        let mut kept = Vec::new();
        for figure in figures {
            let mut inside = figure_inside(&figure, &self.inner);
            let area = twice_area(&inside);
            if area < 0.0 {
                inside.reverse();
            }
            if area != 0.0 {
                kept.push(inside);
            }
        }
        if !kept.is_empty() {
            scene.add(role, Shape::Patches(kept));
        }
    }

    /// Writes the caption at the upper and the scale bar at the lower edge; returns their boxes.
    pub fn write_edges(&self, scene: &mut Scene) -> Vec<Rect> {
        let unit = scene.unit_px;
        let (margin, size_px) = (MARGIN * unit, CAPTION_SIZE * unit);
        let words = shortened(self.caption.clone(), self.area.width() - 2.0 * margin, size_px);
        let at = [self.area.left + margin, self.area.top + 4.0 * unit + ABOVE * size_px];
        let caption = Text { words, at, anchor: Anchor::Start, size_px, strong: true };
        let mut taken = vec![caption.area()];
        scene.add(Role::Title, Shape::Text(caption));

        let (au, length_px) = self.bar();
        let (left, half) = (self.area.left + margin, 3.5 * unit);
        let level = self.area.bottom - margin + 2.0 * unit - half;
        let right = left + length_px;
        let bar = vec![
            vec![[left, level], [right, level]],
            vec![[left, level - half], [left, level + half]],
            vec![[right, level - half], [right, level + half]],
        ];
        taken.push(Rect { left, top: level - half, right, bottom: level + half });
        scene.add(Role::ScaleBar, Shape::Lines(bar));
        let words = format!("{}\u{a0}au", quantity::figures(au));
        let at = [right + 6.0 * unit, level + (ABOVE - BELOW) / 2.0 * size_px];
        let label = Text { words, at, anchor: Anchor::Start, size_px, strong: false };
        taken.push(label.area());
        scene.add(Role::Note, Shape::Text(label));
        taken
    }

    /// A round length that fits, au, and how long it is on the page.
    fn bar(&self) -> (f64, f64) {
        let longest_au = BAR_SHARE * self.area.width() * self.au_per_px;
        let decade = libm::floor(libm::log10(longest_au)) as i32;
        let power = libm::pow(10.0, f64::from(decade.abs()));
        let round = |figure: f64| if decade < 0 { figure / power } else { figure * power };
        let au = [5.0, 2.0, 1.0].map(round).into_iter().find(|&au| au <= longest_au).unwrap_or_else(|| round(1.0));
        (au, au / self.au_per_px)
    }
}
