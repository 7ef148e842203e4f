//! How much room does a text take on the page?
//!
//! A core that knows no screen cannot measure a font, so it keeps the advance widths of DejaVu Sans, the
//! widest sans face among the common system defaults: a text set in any of the others fits into the box
//! computed here. Left out: kerning (it narrows), right-to-left and combining scripts (each code point is
//! taken as one wide letter, which is again too much rather than too little).
//!
//! Source of the widths: the hmtx tables of DejaVu Sans 2.37, Book and Bold, in thousandths of the size,
//! rounded up.

use super::Point;

/// One line of text, fully placed.
#[derive(Clone, Debug, PartialEq)]
pub struct Text {
    pub words: String,
    /// On the baseline, at the side that `anchor` names.
    pub at: Point,
    pub anchor: Anchor,
    pub size_px: f64,
    /// Bold: rank is shown by weight and size, so that a theme of one hue reads the same.
    pub strong: bool,
}

/// Which part of a line lies at its place.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Anchor {
    Start,
    Middle,
    End,
}

/// An upright rectangle on the page.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Rect {
    pub left: f64,
    pub top: f64,
    pub right: f64,
    pub bottom: f64,
}

/// Height above the baseline of capitals, figures and ascenders, as a share of the size.
pub const ABOVE: f64 = 0.77;
/// Depth below the baseline of descenders, as a share of the size.
pub const BELOW: f64 = 0.24;
/// From one baseline to the next, as a share of the size.
pub const LINE: f64 = 1.28;

/// Widths of the printable ASCII characters, space to tilde.
const REGULAR: [u16; 95] = [
    318, 401, 460, 838, 637, 951, 780, 275, 391, 391, 500, 838, 318, 361, 318, 337, 637, 637, 637, 637, 637, 637, 637,
    637, 637, 637, 337, 337, 838, 838, 838, 531, 1000, 685, 687, 699, 771, 632, 576, 775, 752, 295, 295, 656, 558, 863,
    749, 788, 604, 788, 695, 635, 611, 732, 685, 989, 686, 611, 686, 391, 337, 391, 838, 500, 500, 613, 635, 550, 635,
    616, 353, 635, 634, 278, 278, 580, 278, 975, 634, 612, 635, 635, 412, 521, 393, 634, 592, 818, 592, 592, 525, 637,
    337, 637, 838,
];
const STRONG: [u16; 95] = [
    349, 457, 521, 838, 696, 1002, 873, 307, 458, 458, 523, 838, 380, 416, 380, 366, 696, 696, 696, 696, 696, 696, 696,
    696, 696, 696, 400, 400, 838, 838, 838, 581, 1000, 774, 763, 734, 831, 684, 684, 821, 837, 373, 373, 775, 638, 996,
    837, 851, 733, 851, 771, 721, 683, 813, 774, 1104, 771, 725, 726, 458, 366, 458, 838, 500, 500, 675, 716, 593, 716,
    679, 436, 716, 712, 343, 343, 666, 343, 1042, 712, 688, 716, 716, 494, 596, 479, 712, 652, 924, 646, 652, 583, 712,
    366, 712, 838,
];

/// Advance width of one character in thousandths of the size, never too little for the faces named above.
fn thousandths(character: char, strong: bool) -> u16 {
    let table = if strong { &STRONG } else { &REGULAR };
    match character {
        ' '..='~' => table[character as usize - ' ' as usize],
        '\u{a0}' => table[0],
        '°' | '–' => 500,
        '′' => 264,
        '″' => 447,
        '×' | '−' | '±' => 838,
        '·' => 380,
        'µ' | 'μ' | 'β' => 736,
        // Latin letters with accents are as wide as their base; the widest base stands for all.
        '\u{c0}'..='\u{17f}' => 1104,
        _ => 1600,
    }
}

/// Width of a line at a size, pixels.
pub fn width_px(words: &str, size_px: f64, strong: bool) -> f64 {
    let sum: u32 = words.chars().map(|c| u32::from(thousandths(c, strong))).sum();
    f64::from(sum) * size_px / 1000.0
}

impl Text {
    pub fn width_px(&self) -> f64 {
        width_px(&self.words, self.size_px, self.strong)
    }

    /// The box that the letters stay inside.
    pub fn area(&self) -> Rect {
        let width = self.width_px();
        let left = self.at[0]
            - match self.anchor {
                Anchor::Start => 0.0,
                Anchor::Middle => width / 2.0,
                Anchor::End => width,
            };
        Rect {
            left,
            top: self.at[1] - ABOVE * self.size_px,
            right: left + width,
            bottom: self.at[1] + BELOW * self.size_px,
        }
    }

    /// A line whose box is centred on `center`.
    pub fn centered(words: impl Into<String>, center: Point, size_px: f64, strong: bool) -> Self {
        let baseline = center[1] + (ABOVE - BELOW) / 2.0 * size_px;
        Text { words: words.into(), at: [center[0], baseline], anchor: Anchor::Middle, size_px, strong }
    }
}

/// Splits words into lines no wider than `limit_px`; a single longer word keeps a line of its own.
pub fn wrapped(words: &str, limit_px: f64, size_px: f64, strong: bool) -> Vec<String> {
    let mut lines: Vec<String> = Vec::new();
    for word in words.split(' ') {
        match lines.last_mut() {
            Some(line) if width_px(&format!("{line} {word}"), size_px, strong) <= limit_px => {
                line.push(' ');
                line.push_str(word);
            }
            _ => lines.push(word.to_string()),
        }
    }
    lines
}

impl Rect {
    pub fn around(center: Point, half_width: f64, half_height: f64) -> Self {
        Rect {
            left: center[0] - half_width,
            top: center[1] - half_height,
            right: center[0] + half_width,
            bottom: center[1] + half_height,
        }
    }

    pub fn width(&self) -> f64 {
        self.right - self.left
    }

    pub fn height(&self) -> f64 {
        self.bottom - self.top
    }

    pub fn center(&self) -> Point {
        [(self.left + self.right) / 2.0, (self.top + self.bottom) / 2.0]
    }

    pub fn grown(&self, by: f64) -> Self {
        Rect { left: self.left - by, top: self.top - by, right: self.right + by, bottom: self.bottom + by }
    }

    pub fn moved(&self, right: f64, down: f64) -> Self {
        Rect { left: self.left + right, top: self.top + down, right: self.right + right, bottom: self.bottom + down }
    }

    /// True when the two share more than an edge.
    pub fn overlaps(&self, other: &Rect) -> bool {
        self.left < other.right && other.left < self.right && self.top < other.bottom && other.top < self.bottom
    }

    pub fn holds(&self, point: Point) -> bool {
        (self.left..=self.right).contains(&point[0]) && (self.top..=self.bottom).contains(&point[1])
    }

    pub fn contains(&self, other: &Rect) -> bool {
        self.holds([other.left, other.top]) && self.holds([other.right, other.bottom])
    }

    /// The point of the rectangle nearest to `point`.
    pub fn nearest(&self, point: Point) -> Point {
        [point[0].clamp(self.left, self.right), point[1].clamp(self.top, self.bottom)]
    }

    /// Moved as little as possible to lie inside `area`; too large a rectangle keeps to the upper left.
    pub fn kept_in(&self, area: &Rect) -> Self {
        let right = (area.right - self.right).min(0.0);
        let down = (area.bottom - self.bottom).min(0.0);
        let moved = self.moved(right, down);
        moved.moved((area.left - moved.left).max(0.0), (area.top - moved.top).max(0.0))
    }

    /// True when the segment from `a` to `b` passes through the inside.
    pub fn cuts(&self, a: Point, b: Point) -> bool {
        let (mut first, mut last) = (0.0_f64, 1.0_f64);
        for (start, step, low, high) in
            [(a[0], b[0] - a[0], self.left, self.right), (a[1], b[1] - a[1], self.top, self.bottom)]
        {
            if step == 0.0 {
                if start <= low || start >= high {
                    return false;
                }
                continue;
            }
            let (one, two) = ((low - start) / step, (high - start) / step);
            first = first.max(one.min(two));
            last = last.min(one.max(two));
        }
        first < last
    }
}
