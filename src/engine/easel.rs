//! How does a drawing of the sky with its dust come about, at the least cost?
//!
//! An [`Easel`] keeps the dust picture with what it was made from, and makes it anew only when that changed: moving the
//! pointer, or the second pass of a still picture, costs no dust. Both shells draw with it, so a file shows what the
//! page shows.

use super::Engine;
use crate::plan::Plan;
use crate::scene::image::Image;
use crate::scene::isophote::Isophotes;
use crate::scene::layer::{Layers, TailLayers};
use crate::scene::lettering::Rect;
use crate::scene::theme::Theme;
use crate::scene::view::SkyView;
use crate::scene::{Scene, sky_plane};
use crate::sky::Sky;
use crate::tail::cloud::{Cloud, Quality, Raster, Stretch, Tone};
use crate::tail::weight::Weights;
use std::sync::Arc;

/// Magnitudes in a decade of brightness.
const MAG_PER_DECADE: f64 = 2.5;
/// Colours between which the tone map runs.
const STOPS: usize = 64;

/// How the tails are to be drawn.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Wishes {
    pub layers: Layers,
    /// How far below the brightest part dust is shown, magnitudes, > 0.
    pub depth_mag: f64,
    /// From one isophote to the next, magnitudes, > 0.
    pub isophote_step_mag: f64,
    pub theme: Theme,
    pub quality: Quality,
}

impl Default for Wishes {
    /// Everything but isophotes, 7.5 magnitudes deep, dark, quick.
    fn default() -> Self {
        Wishes {
            layers: Layers::default(),
            depth_mag: 7.5,
            isophote_step_mag: 1.0,
            theme: Theme::Dark,
            quality: Quality::DRAGGING,
        }
    }
}

/// What a picture was made from, the plan aside.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Made {
    tdb_days: f64,
    view: SkyView,
    wishes: Wishes,
}

/// Draws the sky plane with its tails.
#[derive(Default)]
pub struct Easel {
    cloud: Cloud,
    weights: Option<Weights>,
    /// The plan of what is kept.
    plan: Option<Plan>,
    made: Option<Made>,
    picture: Option<Image>,
    isophotes: Option<Isophotes>,
}

impl Easel {
    /// The drawing of a sky of the engine's comet.
    pub fn sky(&mut self, engine: &Engine, sky: &Sky, view: &SkyView, wishes: &Wishes) -> Scene {
        let mut tails = TailLayers::of(&engine.vista(sky), &engine.plan().tails, view, &wishes.layers);
        if wishes.layers.dust || wishes.layers.isophotes {
            self.look(engine, sky, view, wishes);
            tails.picture = self.picture.clone().filter(|_| wishes.layers.dust);
            tails.isophotes = self.isophotes.clone().filter(|_| wishes.layers.isophotes);
        }
        sky_plane::compose(engine.plan(), sky, &tails, view)
    }

    /// Makes picture and isophotes unless those at hand still serve.
    fn look(&mut self, engine: &Engine, sky: &Sky, view: &SkyView, wishes: &Wishes) {
        if !self.plan.as_ref().is_some_and(|plan| same_dust(plan, engine.plan())) {
            self.plan = Some(engine.plan().clone());
            self.weights = None;
            self.made = None;
        }
        let wanted = Made { tdb_days: sky.time.tdb_days(), view: *view, wishes: *wishes };
        if self.made.is_some_and(|made| serves(&made, &wanted)) {
            return;
        }
        self.made = Some(wanted);
        (self.picture, self.isophotes) = (None, None);
        let weights = self.weights.get_or_insert_with(|| Weights::of(&engine.plan().tails));
        let vista = engine.vista(sky);
        // Laws that release nothing leave the sky empty; the headline says so.
        let Ok(picture) = self.cloud.render(&vista, weights, &raster(view, sky), wishes.quality) else { return };
        let (cells, side) = ([picture.width(), picture.height()], picture.cell_px() as f64);
        let area = Rect { left: 0.0, top: 0.0, right: cells[0] as f64 * side, bottom: cells[1] as f64 * side };
        if wishes.layers.dust {
            let tone = Tone { stretch: Stretch::Asinh, depth_decades: wishes.depth_mag / MAG_PER_DECADE };
            let mut rgba = Vec::new();
            picture.tone(&stops(wishes.theme), tone, &mut rgba);
            self.picture = Some(Image { width: cells[0], height: cells[1], rgba: Arc::new(rgba), area });
        }
        if wishes.layers.isophotes {
            let steps = [wishes.depth_mag, wishes.isophote_step_mag];
            self.isophotes = Some(Isophotes::of(cells, |y| picture.line(y), &area, steps));
        }
    }
}

/// Whether two plans have the same dust at the same time; a camera moves none.
fn same_dust(one: &Plan, other: &Plan) -> bool {
    one.tails == other.tails && one.comet == other.comet && one.observer == other.observer
}

/// Whether what was made is what is wanted, or finer.
fn serves(made: &Made, wanted: &Made) -> bool {
    let finer = made.wishes.quality.samples >= wanted.wishes.quality.samples
        && made.wishes.quality.cell_px <= wanted.wishes.quality.cell_px;
    let alike = Made { wishes: Wishes { quality: wanted.wishes.quality, ..made.wishes }, ..*made };
    finer && alike == *wanted
}

/// The page of a view as a raster, a pixel of the page to a pixel.
fn raster(view: &SkyView, sky: &Sky) -> Raster {
    let facing = view.facing(sky);
    let origin = facing.to_page(0.0, 0.0);
    let step = |[x, y]: [f64; 2]| [x - origin[0], y - origin[1]];
    let (east, north) = (step(facing.to_page(1.0, 0.0)), step(facing.to_page(0.0, 1.0)));
    Raster {
        width: view.width_px.max(1.0).ceil() as usize,
        height: view.height_px.max(1.0).ceil() as usize,
        turn_px: [[east[0], north[0]], [east[1], north[1]]],
        nucleus_px: origin,
    }
}

/// The colours of dust in even steps.
fn stops(theme: Theme) -> Vec<[u8; 4]> {
    (0..STOPS)
        .map(|step| {
            let color = theme.dust_color(step as f64 / (STOPS - 1) as f64);
            [color.red, color.green, color.blue, 255]
        })
        .collect()
}
