//! How does the dust of a view become pixels in the colours of a theme?
//!
//! [`DustLayer`] holds the cloud and its buffers between frames. What it shows is a model, relative: the brightest
//! part of a picture has the brightest colour, whatever the comet.

use super::Point;
use super::image::Image;
use super::isophote::Isophotes;
use super::lettering::Rect;
use super::theme::Theme;
use super::view::SkyView;
use crate::error::Error;
use crate::sky::Sky;
use crate::tail::cloud::{Cloud, Quality, Raster, Stretch, Tone};
use crate::tail::grain::Vista;
use crate::tail::law::Tails;
use crate::tail::weight::Weights;
use std::sync::Arc;

/// Colours between the stops of a theme that the tone map is given.
const COLOURS: usize = 33;

/// How deep the picture is shown.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Depth {
    /// From the brightest part down to the faintest shown, magnitudes.
    pub magnitudes: f64,
    /// Between isophotes, magnitudes.
    pub isophote_step_mag: f64,
}

impl Default for Depth {
    fn default() -> Self {
        Depth { magnitudes: 7.5, isophote_step_mag: 1.0 }
    }
}

/// The dust of one comet, ready to be drawn again and again.
#[derive(Default)]
pub struct DustLayer {
    cloud: Cloud,
    weights: Option<Weights>,
    rgba: Arc<Vec<u8>>,
    page_px: Point,
}

impl DustLayer {
    pub fn new() -> Self {
        DustLayer::default()
    }

    /// Computes the picture for a view.
    ///
    /// # Errors
    /// The laws release nothing in the chosen ages.
    pub fn render(
        &mut self,
        vista: &Vista,
        laws: &Tails,
        sky: &Sky,
        view: &SkyView,
        quality: Quality,
    ) -> Result<(), Error> {
        if self.weights.as_ref().is_none_or(|weights| weights.laws() != laws) {
            self.weights = Some(Weights::of(laws));
        }
        self.page_px = [view.width_px, view.height_px];
        let weights = self.weights.get_or_insert_with(|| Weights::of(laws));
        self.cloud.render(vista, weights, &raster(sky, view), quality)?;
        Ok(())
    }

    /// The picture made last in the colours of a theme. None where it has no pixels.
    pub fn image(&mut self, theme: Theme, depth: &Depth) -> Option<Image> {
        let stops: Vec<[u8; 4]> = (0..COLOURS)
            .map(|k| {
                let color = theme.dust_color(k as f64 / (COLOURS - 1) as f64);
                [color.red, color.green, color.blue, 255]
            })
            .collect();
        let picture = self.cloud.picture();
        let tone = Tone { stretch: Stretch::Log, depth_decades: depth.magnitudes / 2.5 };
        // The last frame's scene may still hold the pixels; otherwise their memory is used again.
        let rgba = Arc::make_mut(&mut self.rgba);
        picture.tone(&stops, tone, rgba);
        let size = [picture.width(), picture.height()];
        let cell_px = picture.cell_px() as f64;
        let image = Image::filling(self.rgba.clone(), size[0], size[1], self.page_px)?;
        // Cells at the right and lower edge may reach beyond the page.
        let area = Rect { left: 0.0, top: 0.0, right: size[0] as f64 * cell_px, bottom: size[1] as f64 * cell_px };
        Some(Image { area, ..image })
    }

    /// Isophotes of the picture made last.
    pub fn isophotes(&self, depth: &Depth) -> Isophotes {
        let picture = self.cloud.picture();
        let cell_px = picture.cell_px() as f64;
        let size = [picture.width(), picture.height()];
        let area = Rect { left: 0.0, top: 0.0, right: size[0] as f64 * cell_px, bottom: size[1] as f64 * cell_px };
        Isophotes::of(size, |y| picture.line(y), &area, [depth.magnitudes, depth.isophote_step_mag])
    }
}

/// The frame of a view: how an offset from the nucleus falls on its pixels.
fn raster(sky: &Sky, view: &SkyView) -> Raster {
    let facing = view.facing(sky);
    let nucleus = facing.nucleus();
    let step = |xi: f64, eta: f64| {
        let [x, y] = facing.to_page(xi, eta);
        [x - nucleus[0], y - nucleus[1]]
    };
    let (east, north) = (step(1.0, 0.0), step(0.0, 1.0));
    Raster {
        width: view.width_px.max(1.0).round() as usize,
        height: view.height_px.max(1.0).round() as usize,
        turn_px: [[east[0], north[0]], [east[1], north[1]]],
        nucleus_px: nucleus,
    }
}
