//! Which primitives does a scene issue?
//!
//! A painter that only takes notes. Tests read them; any other painter gets the same calls.

use super::{Ink, Painter};
use crate::scene::Point;
use crate::scene::image::Image;
use crate::scene::lettering::Text;
use crate::scene::theme::Color;

/// One call of a painter.
#[derive(Clone, Debug, PartialEq)]
pub enum Call {
    Surface { width_px: f64, height_px: f64, fill: Color },
    Image { image: Image },
    Lines { lines: Vec<Vec<Point>>, closed: bool, ink: Ink },
    Circle { center: Point, radius_px: f64, ink: Ink },
    Text { text: Text, ink: Ink },
}

/// Keeps every call in order.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Recorder {
    pub calls: Vec<Call>,
}

impl Painter for Recorder {
    fn surface(&mut self, width_px: f64, height_px: f64, fill: Color) {
        self.calls.push(Call::Surface { width_px, height_px, fill });
    }

    fn image(&mut self, image: &Image) {
        self.calls.push(Call::Image { image: image.clone() });
    }

    fn lines(&mut self, lines: &[Vec<Point>], closed: bool, ink: &Ink) {
        self.calls.push(Call::Lines { lines: lines.to_vec(), closed, ink: ink.clone() });
    }

    fn circle(&mut self, center: Point, radius_px: f64, ink: &Ink) {
        self.calls.push(Call::Circle { center, radius_px, ink: ink.clone() });
    }

    fn text(&mut self, text: &Text, ink: &Ink) {
        self.calls.push(Call::Text { text: text.clone(), ink: ink.clone() });
    }
}
