//! How does a scene become calls to a browser's canvas?
//!
//! Coordinates are CSS pixels: the caller sets the context's transform for the device's pixel ratio, and
//! clears what the ground does not cover (it covers everything). Texts are held to the width that the
//! scene reckoned with, whatever face the system has.
//!
//! A picture goes to the canvas straight from the memory of this module. As large as the canvas, it is put there pixel by
//! pixel; smaller, it is put into a corner and drawn from there over its rectangle, which spares a second canvas.

use super::{Ink, Painter, Stroke};
use crate::scene::Point;
use crate::scene::image::Image;
use crate::scene::lettering::{Anchor, Text};
use crate::scene::theme::Color;
use std::f64::consts::TAU;
use wasm_bindgen::{Clamped, JsValue};
use web_sys::{CanvasRenderingContext2d, ImageData};

/// Paints on a two-dimensional canvas context. Styles go there as text, which costs more than the strokes, so that
/// those of one kind that follow on each other are told once.
pub struct CanvasPainter<'a> {
    context: &'a CanvasRenderingContext2d,
    fill: Option<Color>,
    pen: Option<Stroke>,
    /// Size of the letters in pixels, and whether they are bold.
    font: Option<(f64, bool)>,
}

impl<'a> CanvasPainter<'a> {
    pub fn new(context: &'a CanvasRenderingContext2d) -> Self {
        context.set_line_cap("round");
        context.set_line_join("round");
        context.set_text_baseline("alphabetic");
        CanvasPainter { context, fill: None, pen: None, font: None }
    }

    fn fill(&mut self, color: Color) {
        if self.fill.replace(color) != Some(color) {
            self.context.set_fill_style_str(&color.css());
        }
    }

    fn pen(&mut self, stroke: &Stroke) {
        if self.pen.as_ref() == Some(stroke) {
            return;
        }
        self.pen = Some(stroke.clone());
        self.context.set_stroke_style_str(&stroke.color.css());
        self.context.set_line_width(stroke.width_px);
        let dashes: js_sys::Array = stroke.dashes_px.iter().map(|&dash| JsValue::from_f64(dash)).collect();
        // Refused only for values that are not finite or negative, which no pen holds; the line is solid then.
        let _ = self.context.set_line_dash(&dashes);
    }

    /// Fills and strokes the current path.
    fn finish(&mut self, ink: &Ink) {
        if let Some(color) = ink.fill {
            self.fill(color);
            self.context.set_global_alpha(ink.fill_opacity);
            self.context.fill();
            self.context.set_global_alpha(1.0);
        }
        if let Some(stroke) = &ink.stroke {
            self.pen(stroke);
            self.context.stroke();
        }
    }
}

impl Painter for CanvasPainter<'_> {
    fn surface(&mut self, width_px: f64, height_px: f64, fill: Color) {
        self.fill(fill);
        self.context.fill_rect(0.0, 0.0, width_px, height_px);
    }

    fn image(&mut self, image: &Image) {
        let Some(canvas) = self.context.canvas() else { return };
        let (width, height) = (image.width as u32, image.height as u32);
        let Ok(data) = ImageData::new_with_u8_clamped_array_and_sh(Clamped(&image.rgba[..]), width, height) else {
            return;
        };
        let area = &image.area;
        let at_origin = area.left == 0.0 && area.top == 0.0;
        // Both fail only on a lost context; the next frame draws again.
        let _ = self.context.put_image_data(&data, 0.0, 0.0);
        if (canvas.width(), canvas.height()) != (width, height) || !at_origin {
            let _ = self.context.draw_image_with_html_canvas_element_and_sw_and_sh_and_dx_and_dy_and_dw_and_dh(
                &canvas,
                0.0,
                0.0,
                f64::from(width),
                f64::from(height),
                area.left,
                area.top,
                area.width(),
                area.height(),
            );
        }
    }

    fn lines(&mut self, lines: &[Vec<Point>], closed: bool, ink: &Ink) {
        self.context.begin_path();
        for line in lines {
            for (i, &[x, y]) in line.iter().enumerate() {
                if i == 0 { self.context.move_to(x, y) } else { self.context.line_to(x, y) }
            }
            if closed {
                self.context.close_path();
            }
        }
        self.finish(ink);
    }

    fn circle(&mut self, center: Point, radius_px: f64, ink: &Ink) {
        self.context.begin_path();
        // Refused only for a negative radius; then there is nothing to draw.
        let _ = self.context.arc(center[0], center[1], radius_px, 0.0, TAU);
        self.finish(ink);
    }

    fn text(&mut self, text: &Text, ink: &Ink) {
        let font = (text.size_px, text.strong);
        if self.font.replace(font) != Some(font) {
            let weight = if text.strong { "bold " } else { "" };
            self.context.set_font(&format!("{weight}{}px system-ui, sans-serif", text.size_px));
        }
        self.context.set_text_align(match text.anchor {
            Anchor::Start => "left",
            Anchor::Middle => "center",
            Anchor::End => "right",
        });
        let ([x, y], width) = (text.at, text.width_px());
        // Text calls fail only on a lost context; the next frame draws again.
        if let Some(color) = ink.fill {
            self.fill(color);
            let _ = self.context.fill_text_with_max_width(&text.words, x, y, width);
        }
        if let Some(stroke) = &ink.stroke {
            self.pen(stroke);
            let _ = self.context.stroke_text_with_max_width(&text.words, x, y, width);
        }
    }
}
