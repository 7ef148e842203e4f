//! How does a scene become an SVG file?
//!
//! Same scene, same bytes. Only shapes, texts, pictures and presentation attributes: no script, no style, no foreign
//! object, no link to anywhere, so that a wiki or a browser accepts the file as it is. The face is the generic sans;
//! letters are outlined by a text of their own behind them, which every reader of SVG draws alike. A picture is
//! carried inside the file as PNG.

use super::{Ink, Painter, paint, png};
use crate::scene::image::Image;
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

    fn image(&mut self, image: &Image) {
        let area = &image.area;
        let (x, y) = (number(area.left), number(area.top));
        let (width, height) = (number(area.width()), number(area.height()));
        let file = base64(&png::write(image.width, image.height, &image.rgba));
        self.put(format_args!(
            "<image x=\"{x}\" y=\"{y}\" width=\"{width}\" height=\"{height}\" preserveAspectRatio=\"none\" \
             href=\"data:image/png;base64,{file}\"/>\n"
        ));
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
    if ink.fill.is_some() && ink.fill_opacity < 1.0 {
        let _ = write!(out, " fill-opacity=\"{}\"", number(ink.fill_opacity));
    }
    if let Some(stroke) = &ink.stroke {
        let _ = write!(out, " stroke=\"{}\" stroke-width=\"{}\"", stroke.color.css(), number(stroke.width_px));
        if !stroke.dashes_px.is_empty() {
            let dashes: Vec<String> = stroke.dashes_px.iter().map(|&dash| number(dash)).collect();
            let _ = write!(out, " stroke-dasharray=\"{}\"", dashes.join(" "));
        }
    }
    out
}

/// Bytes as base64 (RFC 4648, padded).
fn base64(bytes: &[u8]) -> String {
    const DIGITS: &[u8; 64] = b"ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/";
    let mut out = String::with_capacity(bytes.len().div_ceil(3) * 4);
    for three in bytes.chunks(3) {
        let at = |i: usize| u32::from(three.get(i).copied().unwrap_or(0));
        let bits = at(0) << 16 | at(1) << 8 | at(2);
        for digit in 0..4 {
            let sixth = (bits >> (18 - 6 * digit)) as usize & 63;
            out.push(if digit <= three.len() { char::from(DIGITS[sixth]) } else { '=' });
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

#[cfg(test)]
mod tests {
    use super::base64;

    #[test]
    fn base64_gives_the_published_examples() {
        // RFC 4648, section 10.
        let pairs =
            [("", ""), ("f", "Zg=="), ("fo", "Zm8="), ("foo", "Zm9v"), ("foob", "Zm9vYg=="), ("foobar", "Zm9vYmFy")];
        for (plain, coded) in pairs {
            assert_eq!(base64(plain.as_bytes()), coded);
        }
    }
}
