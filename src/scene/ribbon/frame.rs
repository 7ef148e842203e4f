//! Where on the ribbon do plot, lanes, labels and dates lie?

use super::super::Point;
use super::super::lettering::{ABOVE, Anchor, BELOW, Rect, Text, width_px};
use super::scale::{Scale, words};
use super::{Strip, lane};
use crate::season::series::Curve;

/// Size of letters, in drawing units.
const SIZE: f64 = 12.0;
/// Narrower than this, labels have rows of their own, in drawing units.
const BESIDE: f64 = 860.0;
/// Height of the plot, in drawing units: as it should be on an ordinary width, its part of a greater one, and below
/// which labels give way to it.
const PLOT: f64 = 92.0;
const PLOT_SHARE: f64 = 0.055;
const LEAST_PLOT: f64 = 40.0;
/// Between the edge of the drawing and the plot where no label stands, in drawing units.
const SIDE: f64 = 10.0;
/// From one line of letters to the next, in letter sizes.
pub const ROW: f64 = 1.3;

/// The parts of a ribbon.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Frame {
    /// Labels stand beside the plot, not in rows of their own.
    pub beside: bool,
    pub size_px: f64,
    /// Where the curves run.
    pub plot: Rect,
    /// Rows for the names of events, above the plot.
    pub flag_rows: usize,
    /// Top of the first lane, and from one lane to the next.
    pub lanes_top: f64,
    pub lane_step: f64,
    /// Height of a band; the rest of a step is a name on a narrow ribbon.
    pub band_px: f64,
    pub lanes: usize,
    /// Foot of the last lane: here stand the dates.
    pub foot: f64,
    /// Whether dates are written, and the height they take.
    pub dates: bool,
    pub dates_px: f64,
    /// Rows for the names of curves below the dates, on a narrow ribbon.
    pub legend_rows: usize,
}

/// Heights that add up to a ribbon, pixels.
struct Heights {
    flags: f64,
    marks: f64,
    lanes: f64,
    dates: f64,
    legend: f64,
}

impl Frame {
    pub fn natural_height_px(strip: &Strip, width_px: f64, unit: f64) -> f64 {
        let scales: Vec<(Curve, Scale)> = strip
            .series
            .columns
            .iter()
            .map(|column| (column.curve, Scale::of(column.curve, &strip.series.columns)))
            .collect();
        // A ribbon too high has everything; what it has, plus the plot as it should be, is the height.
        let tall = Frame::of(strip, &scales, width_px, 1e4, unit);
        1e4 - tall.plot.height() + (PLOT * unit).max(PLOT_SHARE * width_px)
    }

    pub fn of(strip: &Strip, scales: &[(Curve, Scale)], width: f64, height: f64, unit: f64) -> Frame {
        let beside = width >= BESIDE * unit;
        let size = SIZE * unit;
        let row = ROW * size;
        let side = SIDE * unit;
        let number_width = scales.first().map_or(0.0, |(curve, scale)| {
            let numbers = scale.numbers(*curve);
            numbers.iter().map(|words| width_px(words, 0.92 * size, false)).fold(0.0, f64::max)
        });
        let numbers_px = number_width + 14.0 * unit;
        let (left, right) = if beside {
            let names = lane::NAMES.iter().map(|(_, words)| width_px(words, size, false)).fold(0.0, f64::max);
            let ends = scales
                .iter()
                .map(|(curve, scale)| width_px(&label(*curve, scale, size, f64::MAX), size, false))
                .fold(0.0, f64::max);
            (numbers_px.max(names + 9.0 * unit) + 0.3 * side, ends + 43.0 * unit)
        } else {
            (numbers_px.max(side), side)
        };
        let (left, right) = (left.min(0.3 * width), right.min(0.35 * width));
        let legend_rows = if beside { 0 } else { legend_rows(scales, width - 2.0 * side, size, unit) };
        let band = 9.0 * unit;
        let lane_step = band + if beside { 5.0 * unit } else { row };
        let lanes = lane::NAMES.len();
        let mut heights = Heights {
            flags: row * if beside { 2.0 } else { 3.0 },
            marks: 9.0 * unit,
            lanes: lane_step * lanes as f64 + 4.0 * unit,
            dates: if beside { 1.35 } else { 1.65 } * size,
            legend: row * legend_rows as f64 + if legend_rows > 0 { 3.0 * unit } else { 0.0 },
        };
        let margin = 3.0 * unit;
        let plot = |h: &Heights| height - 2.0 * margin - h.flags - h.marks - h.lanes - h.dates - h.legend;
        let _ = strip;
        // What gives way first says least that the text twin does not say.
        let least = LEAST_PLOT * unit;
        while plot(&heights) < least && heights.flags > 0.5 * row {
            heights.flags = (heights.flags - row).max(0.0);
        }
        for give in [|h: &mut Heights| h.legend = 0.0, |h: &mut Heights| h.lanes = 0.0, |h: &mut Heights| h.dates = 0.0]
        {
            if plot(&heights) < least {
                give(&mut heights);
            }
        }
        let top = margin + heights.flags + heights.marks;
        let bottom = (top + plot(&heights)).max(top + 1.0);
        let plot = Rect { left, top, right: width - right, bottom };
        Frame {
            beside,
            size_px: size,
            plot,
            flag_rows: libm::round(heights.flags / row) as usize,
            lanes_top: bottom + 4.0 * unit,
            lane_step,
            band_px: band,
            lanes: if heights.lanes > 0.0 { lanes } else { 0 },
            foot: bottom + heights.lanes,
            dates: heights.dates > 0.0,
            dates_px: heights.dates,
            legend_rows: if heights.legend > 0.0 { legend_rows } else { 0 },
        }
    }
}

/// The name of a curve with the ends of its scale; without them where that is wider than the room.
pub fn label(curve: Curve, scale: &Scale, size: f64, room: f64) -> String {
    let whole = format!("{} {}", words(curve), scale.range(curve));
    if width_px(&whole, size, false) <= room { whole } else { words(curve).to_owned() }
}

/// Width of a legend's piece of line, in drawing units.
pub const SAMPLE: f64 = 30.0;
/// From there to the words: half an end mark and a little, in drawing units.
pub const SAMPLE_GAP: f64 = 11.0;

/// The width that a curve's entry takes in a legend of so much room.
pub fn entry_px(curve: Curve, scale: &Scale, size: f64, unit: f64, room: f64) -> f64 {
    (SAMPLE + SAMPLE_GAP + 12.0) * unit
        + width_px(&label(curve, scale, size, room - (SAMPLE + SAMPLE_GAP) * unit), size, false)
}

fn legend_rows(scales: &[(Curve, Scale)], room: f64, size: f64, unit: f64) -> usize {
    let (mut rows, mut used) = (0, f64::INFINITY);
    for (curve, scale) in scales {
        let width = entry_px(*curve, scale, size, unit, room);
        if used + width > room {
            rows += 1;
            used = 0.0;
        }
        used += width;
    }
    rows
}

/// A line of text that ends at a point, its height centred there.
pub fn from_right(words: impl Into<String>, [x, y]: Point, size_px: f64) -> Text {
    let at = [x, y + (ABOVE - BELOW) / 2.0 * size_px];
    Text { words: words.into(), at, anchor: Anchor::End, size_px, strong: false }
}

/// A line of text that begins at a point, its height centred there.
pub fn from_left(words: impl Into<String>, [x, y]: Point, size_px: f64) -> Text {
    Text { anchor: Anchor::Start, ..from_right(words, [x, y], size_px) }
}
