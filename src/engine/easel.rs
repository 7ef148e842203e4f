//! How does a drawing of the sky with its dust come about at the least cost?
//!
//! An [`Easel`] keeps the dust picture with what it was made from, and makes it anew only when that changed: moving the
//! pointer over a still picture costs no dust.

use super::Engine;
use crate::plan::Plan;
use crate::scene::dust::{Depth, DustLayer};
use crate::scene::image::Image;
use crate::scene::isophote::Isophotes;
use crate::scene::layer::{Layers, TailLayers};
use crate::scene::theme::Theme;
use crate::scene::view::SkyView;
use crate::scene::{Scene, sky_plane};
use crate::sky::Sky;
use crate::tail::cloud::Quality;

/// How the tails are to be drawn.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Wishes {
    pub layers: Layers,
    pub depth: Depth,
    pub theme: Theme,
    pub quality: Quality,
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
    dust: DustLayer,
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
            tails.picture = self.picture.clone();
            tails.isophotes = self.isophotes.clone();
        }
        sky_plane::compose(engine.plan(), sky, &tails, view)
    }

    /// Makes picture and isophotes unless those at hand still serve.
    fn look(&mut self, engine: &Engine, sky: &Sky, view: &SkyView, wishes: &Wishes) {
        if self.plan.as_ref() != Some(engine.plan()) {
            self.plan = Some(engine.plan().clone());
            self.made = None;
        }
        let wanted = Made { tdb_days: sky.time.tdb_days(), view: *view, wishes: *wishes };
        if self.made.is_some_and(|made| serves(&made, &wanted)) {
            return;
        }
        self.made = Some(wanted);
        (self.picture, self.isophotes) = (None, None);
        let laws = &engine.plan().tails;
        // Laws that release nothing leave the sky without dust; the headline says so.
        if self.dust.render(&engine.vista(sky), laws, sky, view, wishes.quality).is_ok() {
            if wishes.layers.dust {
                self.picture = self.dust.image(wishes.theme, &wishes.depth);
            }
            if wishes.layers.isophotes {
                self.isophotes = Some(self.dust.isophotes(&wishes.depth));
            }
        }
    }
}

/// Whether what was made is what is wanted, or finer.
fn serves(made: &Made, wanted: &Made) -> bool {
    let finer = made.wishes.quality.samples >= wanted.wishes.quality.samples
        && made.wishes.quality.cell_px <= wanted.wishes.quality.cell_px;
    let alike = Made { wishes: Wishes { quality: wanted.wishes.quality, ..made.wishes }, ..*made };
    finer && alike == *wanted
}
