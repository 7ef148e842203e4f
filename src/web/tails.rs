//! What does the page show of the tails: laws, ion axes, drawings, what lands where?

use super::{Desk, bench, from_js, named_theme, refusal, to_js, typed};
use crate::engine::easel::Wishes;
use crate::paint::canvas::CanvasPainter;
use crate::paint::paint;
use crate::plan::Plan;
use crate::say;
use crate::scene::{orbit_view, sheet_map};
use crate::sky::column::whole_turn_deg;
use crate::tail::cloud::Quality;
use crate::tail::inverse;
use crate::tail::law::Tails;
use wasm_bindgen::JsValue;
use wasm_bindgen::prelude::wasm_bindgen;
use web_sys::CanvasRenderingContext2d;

/// A still picture has at most about so many cells: more would block the page for longer than a frame.
const MOST_CELLS: f64 = 1_000_000.0;

/// Every control of the Tails bench, by group.
#[wasm_bindgen]
pub fn tails_form() -> JsValue {
    to_js(&bench::form())
}

/// Laws by name.
#[wasm_bindgen]
pub fn tails_presets() -> JsValue {
    to_js(&bench::presets())
}

/// The grain radius of a typed beta, in words.
#[wasm_bindgen]
pub fn grain_radius(beta: &str, density: &str, efficiency: &str) -> String {
    bench::radius(beta, density, efficiency)
}

#[wasm_bindgen]
impl Desk {
    /// Takes typed laws, by key.
    pub fn set_tails(&mut self, fields: JsValue) -> Result<JsValue, JsValue> {
        let fields: typed::Pairs = from_js(fields)?;
        let tails = bench::tails(&fields).map_err(refusal)?;
        self.take(Plan { tails, ..self.plan() })
    }

    /// Back to the laws that come with the page.
    pub fn reset_tails(&mut self) -> Result<JsValue, JsValue> {
        self.take(Plan { tails: Tails::default(), ..self.plan() })
    }

    /// The laws as texts by key; null for an optional one that is not set.
    pub fn tails_fields(&self) -> JsValue {
        to_js(&bench::texts(&self.engine.plan().tails))
    }

    /// Chooses what is drawn of the tails, and how.
    pub fn set_layers(&mut self, fields: JsValue) -> Result<(), JsValue> {
        let fields: typed::LayerFields = from_js(fields)?;
        let [depth_mag, isophote_step_mag] = fields.depth_and_step_mag();
        self.wishes = Wishes { layers: fields.layers(), depth_mag, isophote_step_mag, ..self.wishes };
        Ok(())
    }

    /// Whether the next drawing is a still one, finer than one made in motion; `ratio` is the device's pixel ratio.
    pub fn set_still(&mut self, still: bool, ratio: f64) {
        let mut quality = if still { Quality::STILL } else { Quality::DRAGGING };
        let cells = self.view.width_px * self.view.height_px;
        while cells / (quality.cell_px * quality.cell_px) as f64 > MOST_CELLS
            || (quality.cell_px as f64) * ratio < 0.999
        {
            quality.cell_px += 1;
        }
        self.wishes.quality = quality;
    }

    /// The ion axes for the slowest, the drawn and the fastest wind, in full precision: wind, position angle, angle from
    /// antisolar, aberration; degrees, null where there is none.
    pub fn ion_axes(&mut self) -> JsValue {
        let tails = self.tails();
        let wedge = &tails.ion;
        let rows = [&wedge.slowest, &wedge.axis, &wedge.fastest].map(|axis| {
            (
                axis.wind_km_s,
                axis.position_angle_rad.map(whole_turn_deg),
                axis.from_antisolar_rad.map(f64::to_degrees),
                axis.aberration_rad.to_degrees(),
            )
        });
        to_js(&rows)
    }

    /// Draws the orbit view.
    pub fn draw_orbit(&self, context: &CanvasRenderingContext2d, theme: &str, width_px: f64, height_px: f64) {
        let sky = &self.seen.sky;
        let scene = orbit_view::compose(self.engine.plan(), sky, &self.engine.vista(sky), width_px, height_px);
        paint(&scene, named_theme(theme), &mut CanvasPainter::new(context));
    }

    /// The orbit view in words.
    pub fn orbit_words(&self) -> String {
        say::stage::orbit(&self.seen.sky)
    }

    /// Draws the map of dust by beta and age.
    pub fn draw_map(&mut self, context: &CanvasRenderingContext2d, theme: &str, width_px: f64, height_px: f64) {
        let tails = self.tails();
        let laws = &self.engine.plan().tails;
        let seen = self.engine.vista(&self.seen.sky).seen;
        let scene = sheet_map::compose(&tails.perspective.map, laws, seen, width_px, height_px);
        paint(&scene, named_theme(theme), &mut CanvasPainter::new(context));
    }

    /// The map in words.
    pub fn map_words(&mut self) -> String {
        let tails = self.tails();
        say::stage::map(self.engine.plan(), &self.seen.sky, &tails.perspective)
    }
}

impl Desk {
    /// Which grains land under a point of the sky plane, in words, one to a line.
    pub fn landing_words(&self, x_px: f64, y_px: f64) -> String {
        let sky = &self.seen.sky;
        let vista = self.engine.vista(sky);
        let laws = &self.engine.plan().tails;
        let offset = self.facing_view().to_sky(sky, x_px, y_px);
        say::stage::landings(&inverse::landings(&vista, offset, laws), &vista, laws)
    }
}
