//! How does a field card come about?
//!
//! The sky as the camera sees it, drawn by an easel of its own, under the words of [`card`]. Both shells make it here.

use super::easel::{Easel, Wishes};
use super::{Engine, View};
use crate::scene::card::{self, Card, DRAWING_PX};
use crate::scene::theme::Theme;
use crate::scene::view::SkyView;
use crate::scene::{Scene, camera_field};
use crate::say;
use crate::tail::cloud::Quality;

/// The field card of a view, image up where there is a camera.
pub fn field_card(engine: &mut Engine, view: &View, theme: Theme, wishes: &Wishes) -> Scene {
    let when_up = engine.dark_windows(view.sky.time).map(|windows| say::when_up(&windows));
    let [width_px, height_px] = DRAWING_PX;
    let mut sky_view = opening(engine, width_px, height_px);
    if let Some((field, _)) =
        engine.plan().camera.as_ref().and_then(|camera| camera_field::on_page(camera, &view.sky, &sky_view))
    {
        sky_view.up = camera_field::up(&field);
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
