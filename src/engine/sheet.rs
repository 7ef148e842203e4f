//! How does a field card come about?
//!
//! The sky as the camera sees it, drawn by an easel of its own, under the words of [`card`]. Both shells make it here.

use super::easel::{Easel, Wishes};
use super::{Engine, View};
use crate::camera::field::Field;
use crate::say;
use crate::scene::card::{self, Card, DRAWING_PX};
use crate::scene::theme::Theme;
use crate::scene::view::{COARSEST_SCALE_RAD, FINEST_SCALE_RAD, SkyView};
use crate::scene::{Scene, camera_field};
use crate::tail::cloud::Quality;

/// Share of the drawing that the chip takes up.
const FILLED: f64 = 0.74;

/// The field card of a view, image up where there is a camera.
pub fn field_card(engine: &mut Engine, view: &View, theme: Theme, wishes: &Wishes) -> Scene {
    let limits = engine.plan().night.limits();
    let when_up = engine.dark_windows(view.sky.time).map(|windows| say::when_up(&windows, &limits));
    let [width_px, height_px] = DRAWING_PX;
    let mut sky_view = opening(engine, width_px, height_px);
    let camera = engine.plan().camera.as_ref();
    if let Some(field) = camera.and_then(|camera| Field::of(camera, &view.sky.axes.sight)) {
        sky_view.up = camera_field::up(&field);
        if field.holds(field.nucleus_px) {
            // The chip in the middle of the drawing, and as large as leaves room for handle and labels.
            let [w, h] = field.half_px;
            let px = (2.0 * w / (FILLED * width_px)).max(2.0 * h / (FILLED * height_px));
            sky_view.pixel_scale_rad = (px * field.scale_tan).clamp(FINEST_SCALE_RAD, COARSEST_SCALE_RAD);
            let [right, up] = field.nucleus_px.map(|offset| offset * field.scale_tan / sky_view.pixel_scale_rad);
            sky_view.offset_px = [right, -up];
        }
    }
    let wishes = Wishes { theme, quality: Quality::STILL, ..*wishes };
    let drawing = Easel::default().sky(engine, &view.sky, &sky_view, &wishes);
    let tails = engine.tails_at(&view.sky);
    let saying = engine.saying(&view.sky, &tails);
    let parts = Card {
        plan: engine.plan(),
        sky: &view.sky,
        ion: &tails.ion,
        cautions: &view.cautions,
        headline: &saying.headline,
        when_up: when_up.as_deref(),
    };
    card::compose(&parts, drawing)
}

/// The view that a drawing of the engine's plan opens with: all of the camera's field, if there is one.
pub fn opening(engine: &Engine, width_px: f64, height_px: f64) -> SkyView {
    match &engine.plan().camera {
        Some(camera) => SkyView::around(width_px, height_px, camera.reach_tan()),
        None => SkyView::start(width_px, height_px),
    }
}
