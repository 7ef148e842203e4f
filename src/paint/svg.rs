//! How does a scene become an SVG file?
//!
//! Same scene, same bytes. Only shapes, texts and presentation attributes: no script, no style, no foreign
//! object, no link, so that a wiki or a browser accepts the file as it is. The face is the generic sans;
//! letters are outlined by a text of their own behind them, which every reader of SVG draws alike.

use super::{Ink, Painter, paint};
use crate::scene::lettering::{Anchor, Text};
use crate::scene::theme::{Color, Theme};
use crate::scene::{Point, Scene};
use std::fmt::Write;

/// The SVG file of a scene. `title` names it, `description` says in words what it shows.
pub fn write(scene: &Scene, theme: Theme, title: &str, description: &str) -> String {
    let (width, height) = (number(scene.width_px), number(scene.height_px));
    let mut painter = SvgPainter { out: String::new() };
    let head = format!(
        "<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"{width}\" height=\"{height}\" \
         viewBox=\"0 0 {width} {height}\" role=\"img\" font-family=\"sans-serif\" \
         stroke-linecap=\"round\" stroke-linejoin=\"round\">\n"
    );
    painter.out.push_str(&head);
    painter.put(format_args!("<title>{}</title>\n<desc>{}</desc>\n", escaped(title), escaped(description)));
    paint(scene, theme, &mut painter);
    painter.out.push_str("</svg>\n");
    painter.out
}

struct SvgPainter {
    out: String,
}

impl SvgPainter {
    fn put(&mut self, part: std::fmt::Arguments) {
        self.out.write_fmt(part).expect("a string takes every write");
    }
}

impl Painter for SvgPainter {
    fn surface(&mut self, width_px: f64, height_px: f64, fill: Color) {
        let (width, height) = (number(width_px), number(height_px));
        self.put(format_args!("<rect width=\"{width}\" height=\"{height}\" fill=\"{}\"/>\n", fill.css()));
    }

    fn lines(&mut self, lines: &[Vec<Point>], closed: bool, ink: &Ink) {
        let mut path = String::new();
        for line in lines {
            for (i, point) in line.iter().enumerate() {
                path.push(if i == 0 { 'M' } else { 'L' });
                path.push_str(&number(point[0]));
                path.push(' ');
                path.push_str(&number(point[1]));
            }
            if closed {
                path.push('Z');
            }
        }
        self.put(format_args!("<path d=\"{path}\"{}/>\n", attributes(ink)));
    }

    fn circle(&mut self, center: Point, radius_px: f64, ink: &Ink) {
        let (x, y, r) = (number(center[0]), number(center[1]), number(radius_px));
        self.put(format_args!("<circle cx=\"{x}\" cy=\"{y}\" r=\"{r}\"{}/>\n", attributes(ink)));
    }

    fn text(&mut self, text: &Text, ink: &Ink) {
        let (x, y, size) = (number(text.at[0]), number(text.at[1]), number(text.size_px));
        let anchor = match text.anchor {
            Anchor::Start => "",
            Anchor::Middle => " text-anchor=\"middle\"",
            Anchor::End => " text-anchor=\"end\"",
        };
        let weight = if text.strong { " font-weight=\"bold\"" } else { "" };
        let (ink, words) = (attributes(ink), escaped(&text.words));
        self.put(format_args!("<text x=\"{x}\" y=\"{y}\" font-size=\"{size}\"{anchor}{weight}{ink}>{words}</text>\n"));
    }
}

fn attributes(ink: &Ink) -> String {
    let mut out = match ink.fill {
        Some(color) => format!(" fill=\"{}\"", color.css()),
        None => " fill=\"none\"".to_string(),
    };
    if let Some(stroke) = &ink.stroke {
        let _ = write!(out, " stroke=\"{}\" stroke-width=\"{}\"", stroke.color.css(), number(stroke.width_px));
        if !stroke.dashes_px.is_empty() {
            let dashes: Vec<String> = stroke.dashes_px.iter().map(|&dash| number(dash)).collect();
            let _ = write!(out, " stroke-dasharray=\"{}\"", dashes.join(" "));
        }
    }
    out
}

/// Two decimals without trailing zeros; no minus sign before zero.
fn number(value: f64) -> String {
    let fixed = format!("{value:.2}");
    let short = fixed.trim_end_matches('0').trim_end_matches('.');
    if short == "-0" { "0".to_string() } else { short.to_string() }
}

/// Text safe between tags and in attributes; characters that XML forbids become the replacement character.
fn escaped(words: &str) -> String {
    let mut out = String::with_capacity(words.len());
    for character in words.chars() {
        match character {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            '\t' | '\n' | '\r' => out.push(' '),
            '\u{0}'..='\u{1f}' | '\u{fffe}' | '\u{ffff}' => out.push('\u{fffd}'),
            other => out.push(other),
        }
    }
    out
}
